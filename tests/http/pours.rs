//! `POST /v1/pours` as its callers meet it.

use std::io::Cursor;

use crate::ask::{Answer, call, post_json, service, state};
use arrow_array::{Array, Float64Array, StringArray};
use axum::body::Body;
use http::StatusCode;
use serde_json::{Value, json};

const PATH: &str = "/v1/pours";
const ARROW: &str = "application/vnd.apache.arrow.stream";

/// A 1.2 L jug of cold milk.
fn jug() -> Value {
    serde_json::from_str(dribble_risk::service::api::pours::EXAMPLE).unwrap()
}

fn number(value: &Value) -> f64 {
    value.as_f64().unwrap_or_else(|| panic!("{value} is no number"))
}

async fn ask(request: &Value) -> Value {
    let answer = post_json(&service(&state(|_| {})), PATH, request.to_string()).await;
    assert_eq!(answer.status, StatusCode::OK, "{:?}", answer.body);
    answer.json()
}

async fn called(request: &Value, accept: &str) -> Answer {
    let headers = [("content-type", "application/json"), ("accept", accept)];
    call(&service(&state(|_| {})), "POST", PATH, &headers, Body::from(request.to_string())).await
}

/// The faults of a refused request, as pointer and code.
async fn refused(request: &Value) -> Vec<(String, String)> {
    let answer = post_json(&service(&state(|_| {})), PATH, request.to_string()).await;
    assert_eq!(answer.status, StatusCode::UNPROCESSABLE_ENTITY, "{:?}", answer.body);
    let problem = answer.problem();
    let text = |fault: &Value, name: &str| fault[name].as_str().unwrap().to_owned();
    let faults = problem["errors"].as_array().unwrap();
    faults.iter().map(|fault| (text(fault, "pointer"), text(fault, "code"))).collect()
}

fn codes(answer: &Value) -> Vec<&str> {
    answer["warnings"].as_array().unwrap().iter().map(|w| w["code"].as_str().unwrap()).collect()
}

#[tokio::test]
async fn a_jug_of_milk() {
    let answer = ask(&jug()).await;
    let (served, dribbled) = (number(&answer["served_ml"]), &answer["dribbled_ml"]);
    let (value, low, high) =
        (number(&dribbled["value"]), number(&dribbled["low"]), number(&dribbled["high"]));
    let remaining = number(&answer["remaining_ml"]);
    assert!((served + value + remaining - 1000.0).abs() < 1e-3, "{answer}");
    assert!(low <= value && value <= high && high < 1000.0 - remaining + 1e-3);
    assert!(served + value >= 199.999, "the target");
    let (starts, ends) = (number(&answer["starts_s"]), number(&answer["ends_s"]));
    assert!((ends - starts - number(&answer["duration_s"])).abs() < 1e-12 && starts > 1.0);
    let windows = &answer["dribbling_s"];
    let in_spans: f64 = answer["dribbling_spans"]
        .as_array()
        .unwrap()
        .iter()
        .map(|span| number(&span["to_s"]) - number(&span["from_s"]))
        .sum();
    assert!((number(&windows["start"]) + number(&windows["end"]) - in_spans).abs() < 1e-9);
    assert!(number(&windows["end"]) > 0.0, "every pour ends at no flow");
    for name in ["hanging_ul", "left_on_lip_ul", "held_on_wall_ul"] {
        let drop = &answer["last_drop"][name];
        assert!(
            number(&drop["low"]) <= number(&drop["value"]) && number(&drop["value"]) <= number(&drop["high"])
        );
    }
    assert!(answer["model"]["fingerprint"].as_str().unwrap().len() == 64);
    let codes = codes(&answer);
    assert!(codes.contains(&"leaves_film") && codes.contains(&"small_head"), "{codes:?}");
}

#[tokio::test]
async fn the_series_has_one_row_per_instant_in_both_forms() {
    let request = jug();
    let answer = ask(&request).await;
    let series = answer["series"].as_object().unwrap();
    let rows = series["t_s"].as_array().unwrap().len();
    assert!(rows > 30 && series.values().all(|column| column.as_array().unwrap().len() == rows));
    let times: Vec<f64> = series["t_s"].as_array().unwrap().iter().map(number).collect();
    assert!(times.windows(2).all(|pair| pair[1] >= pair[0]));
    // The stream is what the spans say, and its safety factor is on that side of 1 when it is decided.
    for i in 0..rows {
        let (stream, factor) = (&series["stream"][i], &series["safety_factor"][i]);
        assert_eq!(stream.is_null(), number(&series["flow_ml_s"][i]) == 0.0);
        assert!(series["landing_mm"][i].is_null() || stream == "free");
        assert_eq!(factor.is_null(), series["verdict"][i].is_null());
    }
    let csv = called(&request, "text/csv").await;
    let kind = "text/csv; charset=utf-8; header=present";
    assert_eq!((csv.status, csv.header("content-type")), (StatusCode::OK, kind));
    let text = String::from_utf8(csv.body.to_vec()).unwrap();
    let lines: Vec<&str> = text.split_terminator("\r\n").collect();
    assert_eq!(lines.len(), rows + 1);
    let names: Vec<&str> = lines[0].split(',').collect();
    assert_eq!(names.len(), series.len());
    for (row, line) in lines[1..].iter().enumerate() {
        for (name, cell) in names.iter().zip(line.split(',')) {
            let value = &series[*name][row];
            match value {
                Value::Null => assert_eq!(cell, "", "{name}"),
                Value::String(word) => assert_eq!(cell, word, "{name}"),
                other => assert_eq!(cell.parse::<f64>().unwrap(), number(other), "{name}"),
            }
        }
    }
    let arrow = called(&request, ARROW).await;
    assert_eq!((arrow.status, arrow.header("content-type")), (StatusCode::OK, ARROW));
    let reader = arrow_ipc::reader::StreamReader::try_new(Cursor::new(arrow.body.to_vec()), None).unwrap();
    let schema = reader.schema();
    assert_eq!(schema.metadata()["fingerprint"], answer["model"]["fingerprint"].as_str().unwrap());
    assert!(arrow.header("result-model").contains(answer["model"]["fingerprint"].as_str().unwrap()));
    let found: Vec<&str> = schema.fields().iter().map(|field| field.name().as_str()).collect();
    assert_eq!(found, names);
    let mut row = 0;
    for batch in reader {
        let batch = batch.unwrap();
        for at in 0..batch.num_rows() {
            for (name, column) in names.iter().zip(batch.columns()) {
                let expected = &series[*name][row];
                if let Some(words) = column.as_any().downcast_ref::<StringArray>() {
                    let word = words.is_valid(at).then(|| words.value(at));
                    assert_eq!(word, expected.as_str(), "{name}");
                } else {
                    let numbers = column.as_any().downcast_ref::<Float64Array>().unwrap();
                    let value = numbers.is_valid(at).then(|| numbers.value(at));
                    assert_eq!(value, expected.as_f64(), "{name}");
                }
            }
            row += 1;
        }
    }
    assert_eq!(row, rows);
    let neither =
        call(&service(&state(|_| {})), "POST", PATH, &[("accept", "image/png")], Body::from("{}")).await;
    assert_eq!(neither.status, StatusCode::NOT_ACCEPTABLE);
}

#[tokio::test]
async fn the_picture_says_what_the_answer_says() {
    let mut idle = jug();
    idle["fill_ml"] = json!(100);
    idle["tilt"]["steady"]["hold_deg"] = json!(1);
    idle["target_ml"] = json!(50);
    for (request, moments) in [(jug(), 4), (idle, 2)] {
        let answer = ask(&request).await;
        let drawn = called(&request, "image/svg+xml").await;
        assert_eq!((drawn.status, drawn.header("content-type")), (StatusCode::OK, "image/svg+xml"));
        let svg = String::from_utf8(drawn.body.to_vec()).unwrap();
        let document = roxmltree::Document::parse(&svg).unwrap();
        let text = |name: &str| {
            let found = document.root_element().children().find(|n| n.tag_name().name() == name);
            found.and_then(|n| n.text()).unwrap().to_owned()
        };
        let (title, says) = (text("title"), text("desc"));
        assert!(says.contains(&format!("vessel at {moments} moments")), "{says}");
        let spans = answer["dribbling_spans"].as_array().unwrap().len();
        assert_eq!(
            says.matches("runs down the outside (best estimate) from").count(),
            spans.min(20),
            "{says}"
        );
        assert!(svg.contains(answer["model"]["fingerprint"].as_str().unwrap()));
        if moments == 4 {
            let served: f64 = title.split(' ').next().unwrap().parse().unwrap();
            assert!((served / number(&answer["served_ml"]) - 1.0).abs() < 5e-3, "{title}");
        } else {
            assert_eq!(title, "Nothing leaves the vessel");
            assert!(answer["starts_s"].is_null());
        }
    }
}

#[tokio::test]
async fn the_same_request_gives_the_same_bytes() {
    let service = service(&state(|_| {}));
    let first = post_json(&service, PATH, jug().to_string()).await.body;
    let mut spelled = jug();
    spelled["confidence"] = json!(0.95);
    spelled["drop_mm"] = json!(100);
    spelled["outer_face"] = json!("dry");
    assert_eq!(first, post_json(&service, PATH, spelled.to_string()).await.body);
    spelled["fill_ml"] = json!(1001);
    assert_ne!(first, post_json(&service, PATH, spelled.to_string()).await.body);
}

/// The scenario of the demonstration: a 1.2 L jug, its pinched lip new (edge 0.4 mm) or worn (1.5 mm), three liquids.
#[tokio::test]
async fn a_jug_new_and_worn() {
    let demo: Value = serde_json::from_str(dribble_risk::service::api::pours::DEMO).unwrap();
    let mut dribbled = std::collections::BTreeMap::new();
    for case in demo.as_array().unwrap() {
        let answer = ask(&case["request"]).await;
        let name = case["name"].as_str().unwrap();
        assert!(
            number(&answer["served_ml"]) > 100.0 && !codes(&answer).contains(&"spills_over_brim"),
            "{name}"
        );
        dribbled.insert(name.to_owned(), number(&answer["dribbled_ml"]["value"]));
    }
    for liquid in ["cold milk", "hot tea", "sunflower oil"] {
        assert!(dribbled[&format!("{liquid}, worn")] > dribbled[&format!("{liquid}, new")], "{dribbled:?}");
    }
    assert!(dribbled["hot tea, new"] < dribbled["cold milk, new"], "{dribbled:?}");
    assert!(dribbled["cold milk, new"] < dribbled["sunflower oil, new"], "{dribbled:?}");
}

/// Of the levers, how the pour ends is a strong one; oil clings longer than milk; a worn lip is no better than a clean one.
#[tokio::test]
async fn what_makes_a_pour_dribble() {
    let dribbled = |answer: &Value| number(&answer["dribbled_ml"]["value"]);
    let mut slow = jug();
    slow["tilt"]["steady"]["return_rate_deg_s"] = json!(5);
    let (quick, slow) = (ask(&jug()).await, ask(&slow).await);
    assert!(dribbled(&slow) > dribbled(&quick), "{} {}", dribbled(&slow), dribbled(&quick));
    let mut oil = jug();
    oil["liquid"] = json!({"catalogue": {"id": "sunflower-oil", "temperature_c": 20}});
    let oil = ask(&oil).await;
    assert!(dribbled(&oil) > dribbled(&quick));
    assert!(number(&oil["residue_ml"]["value"]) > number(&quick["residue_ml"]["value"]));
}

#[tokio::test]
async fn a_pour_that_never_starts_is_an_answer() {
    let mut request = jug();
    request["tilt"] = json!({"program": {"points": [[0, 0], [2, 10], [3, 0]]}});
    request.as_object_mut().unwrap().remove("target_ml");
    let answer = ask(&request).await;
    assert_eq!(number(&answer["served_ml"]), 0.0);
    assert!((number(&answer["remaining_ml"]) - 1000.0).abs() < 1e-9);
    assert!(answer["starts_s"].is_null() && answer["last_drop"].is_null() && answer["residue_ml"].is_null());
    assert!(number(&answer["start_tilt_deg"]) > 10.0);
    assert_eq!(codes(&answer), ["never_pours"]);
}

#[tokio::test]
async fn every_kind_of_bad_input_is_told() {
    let cases = [
        ("/fill_ml", json!(5000), "/fill_ml", "over_full"),
        ("/fill_ml", json!(0), "/fill_ml", "out_of_range"),
        (
            "/lip_position",
            json!({"radius_mm": 72, "height_mm": 80}),
            "/lip_position/height_mm",
            "lip_below_level",
        ),
        (
            "/lip_position",
            json!({"radius_mm": 20, "height_mm": 140}),
            "/lip_position/radius_mm",
            "lip_inside_vessel",
        ),
        ("/target_ml", json!(1500), "/target_ml", "beyond_fill"),
        (
            "/vessel/revolved/profile_mm",
            json!([[0, 50], [80, 60], [70, 55], [150, 50]]),
            "/vessel/revolved/profile_mm/2/0",
            "profile_backwards",
        ),
        (
            "/vessel/revolved/profile_mm",
            json!([[0, 50], [80, 60], [80, 40], [80, 50], [150, 50]]),
            "/vessel/revolved/profile_mm/3/0",
            "profile_crosses_itself",
        ),
        (
            "/vessel/revolved/profile_mm",
            json!([[0, 50], [150, 0]]),
            "/vessel/revolved/profile_mm/1/1",
            "profile_closed",
        ),
        ("/vessel/revolved/profile_mm", json!([[0, 50]]), "/vessel/revolved/profile_mm", "wrong_count"),
        (
            "/vessel/revolved/profile_mm",
            json!([[0, 50], [150, 50, 3]]),
            "/vessel/revolved/profile_mm/1",
            "wrong_count",
        ),
        (
            "/tilt",
            json!({"program": {"points": [[0, 0], [3, 40], [2, 50], [6, 0]]}}),
            "/tilt/program/points/2/0",
            "time_not_increasing",
        ),
        ("/tilt", json!({"program": {"points": [[0, 0]]}}), "/tilt/program/points", "wrong_count"),
        (
            "/tilt",
            json!({"program": {"points": [[0, 0], [3, 200], [6, 0]]}}),
            "/tilt/program/points/1/1",
            "out_of_range",
        ),
        ("/tilt", json!({"program": {"points": [[0, 0], [3, 60]]}}), "/tilt/program/points", "no_return"),
        ("/tilt/steady/hold_deg", json!(181), "/tilt/steady/hold_deg", "out_of_range"),
        ("/tilt/steady/rate_deg_s", json!(0), "/tilt/steady/rate_deg_s", "out_of_range"),
        ("/tilt", json!({"steady": {}, "program": {"points": []}}), "/tilt", "one_choice"),
        ("/surface/catalogue/id", json!("glass-slipper"), "/surface/catalogue/id", "unknown_id"),
        ("/liquid/catalogue/temperature_c", json!(150), "/liquid/catalogue/temperature_c", "boils"),
    ];
    for (place, value, pointer, code) in cases {
        let mut request = jug();
        *request.pointer_mut(place).unwrap() = value.clone();
        let faults = refused(&request).await;
        assert!(faults.contains(&(pointer.to_owned(), code.to_owned())), "{place} = {value}: {faults:?}");
    }
    let mut request = jug();
    request["uncertainty"] = json!({"/pour/flow_ml_s": 1});
    let faults = refused(&request).await;
    assert_eq!(faults, [("/uncertainty/~1pour~1flow_ml_s".to_owned(), "unknown_pointer".to_owned())]);
}

#[tokio::test]
async fn faults_are_told_together_and_none_of_a_stand_in() {
    let mut request = jug();
    request["fill_ml"] = json!(5000);
    request["vessel"] = json!({"cylinder": {"diameter_mm": -3, "height_mm": 200}});
    request["liquid"] = json!({"catalogue": {"id": "mlik", "temperature_c": 6}});
    request["colour"] = json!("blue");
    let faults = refused(&request).await;
    let pointers: Vec<&str> = faults.iter().map(|(pointer, _)| pointer.as_str()).collect();
    for pointer in ["/vessel/cylinder/diameter_mm", "/liquid/catalogue/id", "/colour"] {
        assert!(pointers.contains(&pointer), "{faults:?}");
    }
    // Whether 5 L is too much cannot be told of a vessel that is none.
    assert!(!pointers.contains(&"/fill_ml"), "{faults:?}");
}

/// Every leaf of the request replaced by every kind of wrong value: an answer, or faults that say where.
#[tokio::test]
async fn whatever_stands_in_a_leaf_is_answered_or_explained() {
    fn leaves(at: &Value, pointer: &str, found: &mut Vec<String>) {
        match at {
            Value::Object(members) => members.iter().for_each(|(name, value)| {
                leaves(value, &format!("{pointer}/{}", name.replace('/', "~1")), found)
            }),
            Value::Array(items) => {
                items.iter().enumerate().for_each(|(i, item)| leaves(item, &format!("{pointer}/{i}"), found))
            }
            _ => found.push(pointer.to_owned()),
        }
        if !pointer.is_empty() && at.as_object().is_some_and(|members| !members.is_empty()) {
            found.push(pointer.to_owned());
        }
    }
    let service = service(&state(|_| {}));
    let mut course = jug();
    course["tilt"] = json!({"program": {"points": [[0, 0], [4, 48], [8, 0]]}});
    course["uncertainty"] = json!({"/lip/edge/rounded/radius_mm": 0.03});
    course["vessel"] = json!({"cone": {"top_diameter_mm": 100, "bottom_diameter_mm": 0, "height_mm": 400}});
    course.as_object_mut().unwrap().remove("lip_position");
    for base in [jug(), course] {
        let mut places = Vec::new();
        leaves(&base, "", &mut places);
        for place in places {
            for value in [
                json!(null),
                json!("x"),
                json!(-1),
                json!(1e300),
                json!([]),
                json!({}),
                json!(true),
                json!(0),
            ] {
                let mut request = base.clone();
                *request.pointer_mut(&place).unwrap() = value.clone();
                let answer = post_json(&service, PATH, request.to_string()).await;
                if answer.status == StatusCode::OK {
                    continue;
                }
                assert_eq!(answer.status, StatusCode::UNPROCESSABLE_ENTITY, "{place} = {value}");
                let problem = answer.problem();
                let faults = problem["errors"].as_array().unwrap();
                assert!(!faults.is_empty(), "{place} = {value}");
                for fault in faults {
                    assert!(
                        fault["code"] != "invalid" && fault["code"] != "not_computable",
                        "{place} = {value}: {fault}"
                    );
                }
            }
        }
    }
}
