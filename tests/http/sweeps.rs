//! `POST /v1/sweeps`: tables in every form, and what it does with bad input.

use std::io::{Cursor, Read, Write};
use std::time::{Duration, Instant};

use arrow_array::{Array, Float64Array, StringArray};
use axum::Router;
use axum::body::Body;
use dribble_risk::service::run::serve_on;
use http::StatusCode;
use serde_json::{Value, json};
use tokio::sync::oneshot;

use crate::ask::{self, Answer, call, post_json, service, state};
use crate::evaluations;
use crate::server::{Server, connect};

const PATH: &str = "/v1/sweeps";
const ARROW: &str = "application/vnd.apache.arrow.stream";

/// Radius by flow over the base of the evaluations' tests.
fn request() -> Value {
    let mut base = evaluations::request();
    base.as_object_mut().unwrap().remove("limits");
    json!({
        "base": base,
        "axes": [
            {"pointer": "/lip/edge/rounded/radius_mm", "from": 0.1, "to": 3, "count": 5, "spacing": "log"},
            {"pointer": "/pour/flow_ml_s", "values": [5, 20, 80]}
        ],
        "outputs": ["safety_factor", "dribble_probability", "verdict"]
    })
}

/// Water near its freezing point: the coldest rows are impossible.
fn partly_impossible() -> Value {
    let mut request = request();
    request["axes"] =
        json!([{"pointer": "/liquid/catalogue/temperature_c", "from": -10, "to": 40, "count": 6}]);
    request
}

async fn ask_for(service: &Router, accept: &str, request: &Value) -> Answer {
    let headers = [("content-type", "application/json"), ("accept", accept)];
    call(service, "POST", PATH, &headers, Body::from(request.to_string())).await
}

#[tokio::test]
async fn columns_stand_in_order_and_equal_single_evaluations() {
    let service = service(&state(|_| {}));
    let answer = post_json(&service, PATH, request().to_string()).await;
    assert_eq!(answer.status, StatusCode::OK, "{:?}", answer.body);
    assert_eq!(answer.header("content-type"), "application/json");
    let table = answer.json();
    assert_eq!(table["count"], 15);
    assert_eq!(table["axes"][0]["pointer"], "/lip/edge/rounded/radius_mm");
    assert_eq!(table["axes"][0]["name"], "radius_mm");
    assert_eq!(table["axes"][0]["unit"], "mm");
    assert_eq!(table["axes"][1]["values"], json!([5.0, 20.0, 80.0]));
    let text = std::str::from_utf8(&answer.body).unwrap();
    let order = ["radius_mm", "flow_ml_s", "safety_factor", "dribble_probability", "verdict", "fault"];
    let columns = &text[text.find("\"columns\"").unwrap()..];
    let places: Vec<usize> =
        order.iter().map(|name| columns.find(&format!("\"{name}\":[")).unwrap()).collect();
    assert!(places.is_sorted(), "{places:?}");
    for row in 0..15 {
        let cell = |name: &str| table["columns"][name][row].clone();
        assert_eq!(cell("flow_ml_s"), [5.0, 20.0, 80.0][row % 3], "the last axis is the fastest");
        let mut single = evaluations::request();
        single["lip"]["edge"]["rounded"]["radius_mm"] = cell("radius_mm");
        single["pour"]["flow_ml_s"] = cell("flow_ml_s");
        single["include"] = json!([]);
        let single = post_json(&service, "/v1/evaluations", single.to_string()).await.json();
        assert_eq!(cell("verdict"), single["verdict"]);
        assert_eq!(cell("dribble_probability"), single["dribble_probability"]);
        assert_eq!(cell("safety_factor"), single["safety_factor"]["value"]);
        assert_eq!(cell("fault"), Value::Null);
    }
    let model = &table["model"];
    assert_eq!(model["coefficients"], "set-1");
    assert!(answer.header("result-model").contains(model["fingerprint"].as_str().unwrap()));
}

#[tokio::test]
async fn impossible_points_carry_nulls_and_a_fault_and_the_rest_stand() {
    let service = service(&state(|_| {}));
    let table = post_json(&service, PATH, partly_impossible().to_string()).await.json();
    assert_eq!(table["columns"]["temperature_c"], json!([-10.0, 0.0, 10.0, 20.0, 30.0, 40.0]));
    assert_eq!(table["columns"]["fault"][0], "freezes");
    assert_eq!(table["columns"]["safety_factor"][0], Value::Null);
    assert_eq!(table["columns"]["verdict"][0], Value::Null);
    for row in 2..6 {
        assert_eq!(table["columns"]["fault"][row], Value::Null);
        assert!(table["columns"]["safety_factor"][row].as_f64().unwrap() > 0.0);
    }
    // The wall must fall away from the edge: a matter of two fields together.
    let mut request = request();
    request["axes"] = json!([
        {"pointer": "/lip/run/slope_deg", "values": [-30, 0]},
        {"pointer": "/lip/edge/rounded/turn_deg", "values": [20, 30, 90]}
    ]);
    let table = post_json(&service, PATH, request.to_string()).await.json();
    let expected = json!(["contradiction", "contradiction", null, null, null, null]);
    assert_eq!(table["columns"]["fault"], expected);
}

#[tokio::test]
async fn csv_and_arrow_hold_the_same_table() {
    let service = service(&state(|_| {}));
    for request in [request(), partly_impossible()] {
        let table = post_json(&service, PATH, request.to_string()).await.json();
        let columns = table["columns"].as_object().unwrap();
        let count = table["count"].as_u64().unwrap() as usize;

        let csv = ask_for(&service, "text/csv", &request).await;
        assert_eq!(csv.header("content-type"), "text/csv; charset=utf-8; header=present");
        let text = std::str::from_utf8(&csv.body).unwrap();
        assert!(text.ends_with("\r\n") && text.matches('\n').count() == count + 1);
        let mut lines = text.lines();
        let names: Vec<&str> = lines.next().unwrap().split(',').collect();
        assert_eq!(names.len(), columns.len());
        assert_eq!(names.last(), Some(&"fault"));
        for (row, line) in lines.enumerate() {
            for (name, cell) in names.iter().zip(line.split(',')) {
                match &columns[*name][row] {
                    Value::Null => assert_eq!(cell, ""),
                    Value::String(word) => assert_eq!(cell, word),
                    number => assert_eq!(cell.parse::<f64>().unwrap(), number.as_f64().unwrap()),
                }
            }
        }

        let arrow = ask_for(&service, ARROW, &request).await;
        assert_eq!(arrow.header("content-type"), ARROW);
        let reader =
            arrow_ipc::reader::StreamReader::try_new(Cursor::new(arrow.body.to_vec()), None).unwrap();
        let schema = reader.schema();
        assert_eq!(schema.metadata()["fingerprint"], table["model"]["fingerprint"].as_str().unwrap());
        let found: Vec<&str> = schema.fields().iter().map(|field| field.name().as_str()).collect();
        assert_eq!(found, names);
        assert!(!schema.field(0).is_nullable());
        assert!(schema.field(0).metadata().contains_key("unit"));
        let mut rows = 0;
        for batch in reader {
            let batch = batch.unwrap();
            for row in 0..batch.num_rows() {
                for (name, column) in names.iter().zip(batch.columns()) {
                    let expected = &columns[*name][rows + row];
                    if column.is_null(row) {
                        assert_eq!(*expected, Value::Null);
                    } else if let Some(numbers) = column.as_any().downcast_ref::<Float64Array>() {
                        assert_eq!(*expected, numbers.value(row));
                    } else {
                        let words = column.as_any().downcast_ref::<StringArray>().unwrap();
                        assert_eq!(*expected, words.value(row));
                    }
                }
            }
            rows += batch.num_rows();
        }
        assert_eq!(rows, count);
    }
}

#[tokio::test]
async fn slices_make_up_the_whole() {
    let service = service(&state(|_| {}));
    let whole = ask_for(&service, "text/csv", &request()).await;
    let mut joined = String::new();
    let mut prints = std::collections::BTreeSet::new();
    for index in 0..4 {
        let mut slice = request();
        slice["part"] = json!({"index": index, "of": 4.0});
        let answer = ask_for(&service, "text/csv", &slice).await;
        prints.insert(answer.header("result-model").to_owned());
        let text = std::str::from_utf8(&answer.body).unwrap();
        let lines = text.split_once("\r\n").unwrap().1;
        joined.push_str(if index == 0 { text } else { lines });
    }
    assert_eq!(joined.as_bytes(), &whole.body[..]);
    assert_eq!(prints.len(), 4, "each slice is a request of its own");
}

#[tokio::test]
async fn larger_tables_are_the_same_bytes_however_they_are_asked_for() {
    let service = service(&state(|_| {}));
    let mut request = request();
    request["axes"] = json!([
        {"pointer": "/lip/edge/rounded/radius_mm", "from": 0, "to": 3, "count": 170},
        {"pointer": "/surface/measured/advancing_deg", "from": 65, "to": 120, "count": 30},
        {"pointer": "/pour/flow_ml_s", "from": 1, "to": 80, "count": 40, "spacing": "log"}
    ]);
    request["outputs"] = json!(["margin", "verdict"]);
    let json_answer = post_json(&service, PATH, request.to_string()).await;
    assert_eq!(json_answer.body, post_json(&service, PATH, request.to_string()).await.body);
    let table = json_answer.json();
    assert_eq!(table["count"], 204_000);
    for name in ["radius_mm", "advancing_deg", "flow_ml_s", "margin", "verdict", "fault"] {
        assert_eq!(table["columns"][name].as_array().unwrap().len(), 204_000, "{name}");
    }
    // The event stream ends with the same text.
    let events = ask_for(&service, "text/event-stream", &request).await;
    let text = std::str::from_utf8(&events.body).unwrap();
    let mut last = text.trim_end().rsplit("\n\n");
    let result = last.next().unwrap().strip_prefix("event: result\ndata: ").unwrap();
    assert_eq!(result.as_bytes(), &json_answer.body[..]);
    let progress = last.next().unwrap().strip_prefix("event: progress\ndata: ").unwrap();
    let progress: Value = serde_json::from_str(progress).unwrap();
    assert_eq!((&progress["done"], &progress["total"]), (&json!(204_000), &json!(204_000)));
    assert!(progress["elapsed_s"].as_f64().unwrap() >= 0.0);
}

#[tokio::test]
async fn a_table_too_large_to_keep_is_the_same_as_its_slices() {
    let service = service(&state(|_| {}));
    let mut request = request();
    // 1.4 million rows of two outputs are more cells than are kept.
    request["axes"] = json!([
        {"pointer": "/lip/edge/rounded/radius_mm", "from": 0, "to": 3, "count": 1400},
        {"pointer": "/pour/flow_ml_s", "from": 1, "to": 80, "count": 1000}
    ]);
    request["outputs"] = json!(["safety_factor", "dribble_probability"]);
    let whole = post_json(&service, PATH, request.to_string()).await;
    let whole: Value = serde_json::from_slice(&whole.body).unwrap();
    request["part"] = json!({"index": 999, "of": 1000});
    let slice = post_json(&service, PATH, request.to_string()).await.json();
    assert_eq!(slice["count"], 1400);
    for name in ["radius_mm", "flow_ml_s", "safety_factor", "dribble_probability", "fault"] {
        let all = whole["columns"][name].as_array().unwrap();
        assert_eq!(all.len(), 1_400_000);
        assert_eq!(&all[1_400_000 - 1400..], &slice["columns"][name].as_array().unwrap()[..], "{name}");
    }
}

#[tokio::test]
async fn every_kind_of_bad_input_is_named_all_at_once() {
    let service =
        service(&state(|settings| settings.max_points = std::num::NonZeroUsize::new(1000).unwrap()));
    let radius = "/lip/edge/rounded/radius_mm";
    let axis = |more: Value| {
        let mut axis = json!({"pointer": radius, "from": 0.1, "to": 3, "count": 5});
        axis.as_object_mut().unwrap().extend(more.as_object().unwrap().clone());
        json!([axis])
    };
    for (axes, expected) in [
        (axis(json!({"pointer": "/lip/edge/rounded/radius"})), vec![("/axes/0/pointer", "unknown_pointer")]),
        (axis(json!({"pointer": "/liquid/catalogue/id"})), vec![("/axes/0/pointer", "not_a_field")]),
        (axis(json!({"pointer": "/lip/edge"})), vec![("/axes/0/pointer", "not_a_field")]),
        (axis(json!({"pointer": "/confidence"})), vec![("/axes/0/pointer", "not_a_field")]),
        (axis(json!({"pointer": "/lip/section/tube/bore_mm"})), vec![("/axes/0/pointer", "not_applicable")]),
        (
            axis(json!({"pointer": "/liquid/catalogue/mass_fraction"})),
            vec![("/axes/0/pointer", "not_applicable")],
        ),
        (axis(json!({"count": 0})), vec![("/axes/0/count", "out_of_range")]),
        (axis(json!({"count": 1})), vec![("/axes/0/count", "out_of_range")]),
        (axis(json!({"count": 1001})), vec![("/axes", "too_many_points")]),
        (axis(json!({"count": 1e15})), vec![("/axes", "too_many_points")]),
        (axis(json!({"count": 2.5})), vec![("/axes/0/count", "wrong_type")]),
        (axis(json!({"count": -3})), vec![("/axes/0/count", "out_of_range")]),
        (axis(json!({"to": 0.1})), vec![("/axes/0/to", "empty_range")]),
        (axis(json!({"from": 0, "spacing": "log"})), vec![("/axes/0/from", "log_through_zero")]),
        (
            axis(json!({"pointer": "/lip/run/slope_deg", "from": -5, "to": 5, "spacing": "log"})),
            vec![("/axes/0/from", "log_through_zero")],
        ),
        (
            axis(json!({"from": -1, "to": 99})),
            vec![("/axes/0/from", "out_of_range"), ("/axes/0/to", "out_of_range")],
        ),
        (axis(json!({"spacing": "cubic"})), vec![("/axes/0/spacing", "unknown_choice")]),
        (
            axis(json!({"values": [1, 2]})),
            vec![("/axes/0/from", "contradiction"), ("/axes/0/count", "contradiction")],
        ),
        (json!([{"pointer": radius}]), vec![("/axes/0/from", "missing"), ("/axes/0/count", "missing")]),
        (json!([{"pointer": radius, "values": []}]), vec![("/axes/0/values", "wrong_count")]),
        (json!([{"pointer": radius, "values": [1, 77]}]), vec![("/axes/0/values/1", "out_of_range")]),
        (json!([]), vec![("/axes", "wrong_count")]),
        (
            json!([{"pointer": radius, "values": [1]}, {"pointer": radius, "values": [2]}]),
            vec![("/axes/1/pointer", "repeated")],
        ),
        (
            json!([{"pointer": "/pour/flow_ml_s", "values": [1]}, {"pointer": radius, "from": 1, "to": 1, "count": 1}]),
            vec![("/axes/1/count", "out_of_range"), ("/axes/1/to", "empty_range")],
        ),
    ] {
        let mut request = request();
        request["axes"] = axes.clone();
        let answer = post_json(&service, PATH, request.to_string()).await;
        assert_eq!(answer.status, StatusCode::UNPROCESSABLE_ENTITY, "{axes}: {:?}", answer.body);
        let errors = answer.problem()["errors"].as_array().unwrap().clone();
        for (pointer, code) in expected {
            let found = errors.iter().any(|e| e["pointer"] == pointer && e["code"] == code);
            assert!(found, "{axes}: {pointer} {code} not in {errors:?}");
        }
    }
    // All together: the base's faults, an axis', the outputs', the part's.
    let mut request = request();
    request["base"]["lip"]["edge"]["rounded"]["radius_mm"] = json!(-1);
    request["base"]["liquid"]["catalogue"]["id"] = json!("watr");
    request["axes"][0]["count"] = json!(1);
    request["outputs"] = json!(["safety_factor", "safety", "safety_factor"]);
    let problem = post_json(&service, PATH, request.to_string()).await.problem();
    let pointers: Vec<&str> =
        problem["errors"].as_array().unwrap().iter().map(|e| e["pointer"].as_str().unwrap()).collect();
    for pointer in
        ["/base/lip/edge/rounded/radius_mm", "/base/liquid/catalogue/id", "/axes/0/count", "/outputs/1"]
    {
        assert!(pointers.contains(&pointer), "{pointer} not in {pointers:?}");
    }
    let limit = json!([{"pointer": radius, "from": 0.1, "to": 3, "count": 1001}]);
    let mut request = self::request();
    request["axes"] = limit;
    let errors = post_json(&service, PATH, request.to_string()).await.problem()["errors"].clone();
    assert_eq!(errors[0]["maximum"], 1000.0, "the limit is named: {errors}");
    for (part, pointer) in [
        (json!({"index": 4, "of": 4}), "/part/index"),
        (json!({"index": 0, "of": 0}), "/part/of"),
        (json!({"index": 0}), "/part/of"),
    ] {
        let mut request = self::request();
        request["part"] = part;
        let errors = post_json(&service, PATH, request.to_string()).await.problem()["errors"].clone();
        assert_eq!(errors[0]["pointer"], pointer);
    }
    let refused = ask_for(&service, "image/png", &self::request()).await;
    assert_eq!(refused.status, StatusCode::NOT_ACCEPTABLE);
}

#[tokio::test]
async fn a_slice_of_a_sweep_beyond_the_limit_is_taken() {
    let service = service(&state(|settings| settings.max_points = std::num::NonZeroUsize::new(10).unwrap()));
    let mut request = request();
    assert_eq!(post_json(&service, PATH, request.to_string()).await.status, 422);
    request["part"] = json!({"index": 1, "of": 2});
    assert_eq!(post_json(&service, PATH, request.to_string()).await.json()["count"], 8);
}

#[tokio::test]
async fn a_base_that_no_value_mends_is_refused_before_the_work() {
    let service = service(&state(|_| {}));
    let mut request = request();
    request["base"]["liquid"]["catalogue"]["temperature_c"] = json!(-20);
    let errors = post_json(&service, PATH, request.to_string()).await.problem()["errors"].clone();
    assert_eq!(errors[0]["pointer"], "/base/liquid/catalogue/temperature_c");
    assert_eq!(errors[0]["code"], "freezes");
    // But a fault of the base that the axes mend is none.
    request["axes"] = json!([{"pointer": "/liquid/catalogue/temperature_c", "values": [5, 15]}]);
    assert_eq!(post_json(&service, PATH, request.to_string()).await.status, StatusCode::OK);
}

/// Ten million points that cannot be tabulated: minutes of work.
fn long() -> Value {
    let mut request = request();
    request["base"]["lip"]["section"] = json!({"vee": {"included_angle_deg": 70}});
    request["axes"] = json!([
        {"pointer": "/pour/flow_ml_s", "from": 5, "to": 100, "count": 10_000},
        {"pointer": "/lip/run/slope_deg", "from": 5, "to": 40, "count": 1000}
    ]);
    request
}

#[tokio::test(flavor = "multi_thread")]
async fn a_caller_that_hangs_up_stops_the_work() {
    let state = ask::state(|settings| settings.max_heavy = std::num::NonZeroUsize::new(1));
    let listener = tokio::net::TcpListener::bind("127.0.0.1:0").await.unwrap();
    let address = listener.local_addr().unwrap();
    let (_stop, stopped) = oneshot::channel::<()>();
    let serving = state.clone();
    tokio::spawn(async move {
        let until = async { stopped.await.unwrap_or_default() };
        serve_on(listener, ask::service(&serving), &serving, until).await;
    });
    for accept in ["text/csv", "application/json", "text/event-stream", ARROW] {
        let body = long().to_string();
        let head = format!(
            "POST {PATH} HTTP/1.1\r\nHost: lip\r\nAccept: {accept}\r\nContent-Type: application/json\r\nContent-Length: {}\r\n\r\n",
            body.len()
        );
        let stream = tokio::task::spawn_blocking(move || {
            let mut stream = connect(address);
            stream.write_all(head.as_bytes()).unwrap();
            stream.write_all(body.as_bytes()).unwrap();
            let mut start = [0; 12];
            stream.read_exact(&mut start).unwrap();
            assert_eq!(&start, b"HTTP/1.1 200");
            std::thread::sleep(Duration::from_millis(150));
            stream
        })
        .await
        .unwrap();
        assert_eq!(state.heavy.available_permits(), 0, "{accept}: still at work");
        drop(stream);
        let hung_up = Instant::now();
        while state.heavy.available_permits() == 0 {
            assert!(hung_up.elapsed() < Duration::from_secs(10), "{accept}: it goes on");
            tokio::time::sleep(Duration::from_millis(1)).await;
        }
        // 100 ms on an idle machine; tests share theirs.
        assert!(hung_up.elapsed() < Duration::from_millis(500), "{accept}: {:?}", hung_up.elapsed());
    }
}

#[test]
fn memory_does_not_grow_with_the_number_of_points() {
    let server = Server::start("sweep-memory", &[]);
    let fetch = |count: usize, accept: &str| {
        let mut request = request();
        request["axes"] = json!([
            {"pointer": "/lip/edge/rounded/radius_mm", "from": 0, "to": 3, "count": count},
            {"pointer": "/pour/flow_ml_s", "from": 1, "to": 80, "count": 1000}
        ]);
        request["outputs"] = json!(["safety_factor", "dribble_probability"]);
        let body = request.to_string();
        let mut stream = connect(server.address);
        write!(
            stream,
            "POST {PATH} HTTP/1.1\r\nHost: lip\r\nConnection: close\r\nAccept: {accept}\r\nContent-Type: application/json\r\nContent-Length: {}\r\n\r\n{body}",
            body.len()
        )
        .unwrap();
        let mut buffer = vec![0; 1 << 16];
        let mut total = 0_usize;
        loop {
            match stream.read(&mut buffer).unwrap() {
                0 => return total,
                read => total += read,
            }
        }
    };
    fetch(10, "text/csv");
    let idle = server.memory_mb("VmRSS");
    for accept in ["text/csv", "application/json", ARROW] {
        assert!(fetch(2000, accept) > 40_000_000, "{accept}");
        let peak = server.memory_mb("VmHWM");
        assert!(peak - idle < 60.0, "{accept}: {idle} MB idle, {peak} MB at most");
    }
}
