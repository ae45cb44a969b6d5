//! Look-ups carry a strong tag and are not sent twice.

use axum::{Router, body::Body};
use dribble_risk::service::openapi_json;
use http::StatusCode;
use serde_json::Value;

use crate::ask::{Answer, call, get_it, get_with, service, state};

#[tokio::test]
async fn look_ups_carry_a_strong_tag_and_answer_304() {
    let service = service(&state(|_| {}));
    for path in ["/version", "/openapi.json", "/problems", "/docs/"] {
        let first = get_it(&service, path).await;
        let tag = first.header("etag");
        assert!(tag.starts_with('"') && tag.len() > 10, "{path}: {tag}");
        assert!(!first.header("cache-control").is_empty());
        for known in [tag, "*", &format!("\"other\", {tag}"), &format!("W/{tag}")] {
            let again = get_with(&service, path, &[("if-none-match", known)]).await;
            assert_eq!(again.status, StatusCode::NOT_MODIFIED, "{path} {known}");
            assert!(again.body.is_empty());
            assert_eq!(again.header("etag"), tag);
        }
        assert_eq!(get_with(&service, path, &[("if-none-match", "\"x\"")]).await.body, first.body);
    }
}

#[tokio::test]
async fn version_names_what_is_running() {
    let version = get_it(&service(&state(|_| {})), "/version").await.json();
    assert_eq!(version["version"], env!("CARGO_PKG_VERSION"));
    assert!(version["coefficients"].is_array() && version["catalogue_digest"].is_string());
}

/// Every liquid with its typical composition, as a query.
async fn typical_queries(service: &Router) -> Vec<(String, String)> {
    let list = get_it(service, "/v1/liquids").await.json();
    let liquids = list["liquids"].as_array().unwrap();
    assert!(liquids.len() >= 20);
    let query = |liquid: &Value| {
        let parameters = liquid["parameters"].as_array().unwrap().iter();
        parameters.map(|p| format!("&{}={}", p["name"].as_str().unwrap(), p["typical"])).collect::<String>()
    };
    liquids.iter().map(|liquid| (liquid["id"].as_str().unwrap().to_owned(), query(liquid))).collect()
}

#[tokio::test]
async fn liquids_agree_with_the_outside() {
    let service = service(&state(|_| {}));
    // IAPWS (density, viscosity, surface tension of water), UNESCO EOS-80 check value S = 35, t = 25 °C (from memory).
    for (path, member, value, tolerance) in [
        ("/v1/liquids/water", "density_kg_m3", 998.2, 0.05),
        ("/v1/liquids/water?temperature_c=20", "viscosity_mpa_s", 1.0016, 0.001),
        ("/v1/liquids/water?temperature_c=20.0", "surface_tension_mn_m", 72.74, 0.01),
        ("/v1/liquids/sea-water?temperature_c=25&salinity_g_kg=35", "density_kg_m3", 1023.343, 0.001),
    ] {
        let answer = get_it(&service, path).await;
        assert_eq!(answer.status, StatusCode::OK, "{path}");
        let property = &answer.json()[member];
        assert!((property["value"].as_f64().unwrap() - value).abs() < tolerance, "{path}: {property}");
        assert!(property["standard_uncertainty"].as_f64().unwrap() > 0.0);
        assert_eq!(property["basis"], "published");
        assert_eq!(property["within_range"], true);
        assert!(!property["source"].as_str().unwrap().is_empty());
        assert!(!property["range"].as_str().unwrap().is_empty());
    }
}

#[tokio::test]
async fn every_liquid_is_had_at_its_typical_composition_and_at_no_other_than_the_one_given() {
    let service = service(&state(|_| {}));
    let list = get_it(&service, "/v1/liquids").await.json();
    let known = ["mass_fraction", "salinity_g_kg", "fat_percent", "viscosity_40c_mm2_s", "density_15c_kg_m3"];
    for liquid in list["liquids"].as_array().unwrap() {
        let id = liquid["id"].as_str().unwrap();
        let parameters: Vec<&Value> = liquid["parameters"].as_array().unwrap().iter().collect();
        let names: Vec<&str> = parameters.iter().map(|p| p["name"].as_str().unwrap()).collect();
        let query = |without: Option<&str>| {
            let given = parameters.iter().filter(|p| Some(p["name"].as_str().unwrap()) != without);
            given
                .map(|p| format!("{}={}&", p["name"].as_str().unwrap(), p["typical"]))
                .chain(["temperature_c=20".to_owned()])
                .collect::<String>()
        };
        let found = get_it(&service, &format!("/v1/liquids/{id}?{}", query(None))).await;
        assert_eq!(found.status, StatusCode::OK, "{id}: {:?}", found.body);
        let found = found.json();
        assert_eq!(found["id"], id);
        assert!(found["cautions"].as_array().unwrap().iter().any(|c| c["code"] == "slip"), "{id}");
        for property in ["density_kg_m3", "viscosity_mpa_s", "surface_tension_mn_m"] {
            assert!(found[property]["value"].as_f64().unwrap() > 0.0);
            assert!(found[property]["standard_uncertainty"].as_f64().unwrap() > 0.0);
        }
        for parameter in &parameters {
            let name = parameter["name"].as_str().unwrap();
            assert_eq!(found["conditions"][name], parameter["typical"]);
            let path = format!("/v1/liquids/{id}?{}", query(Some(name)));
            let missing = errors(&get_it(&service, &path).await);
            assert_eq!(missing[0]["pointer"], format!("/{name}"));
            assert_eq!(missing[0]["code"], "missing");
            for bound in ["minimum", "maximum"] {
                assert_eq!(missing[0][bound], parameter[bound], "the range is named: {missing}");
            }
            let largest = parameter["maximum"].as_f64().unwrap();
            let above = format!("{path}&{name}={}", largest * 1.01 + 0.01);
            let above = errors(&get_it(&service, &above).await);
            assert_eq!(
                (&above[0]["code"], &above[0]["maximum"]),
                (&"out_of_range".into(), &parameter["maximum"])
            );
        }
        for foreign in known.into_iter().filter(|name| !names.contains(name)) {
            let path = format!("/v1/liquids/{id}?{}&{foreign}=0.1", query(None));
            let refused = errors(&get_it(&service, &path).await);
            assert_eq!(refused.as_array().unwrap().len(), 1, "{path}: {refused}");
            assert_eq!(refused[0]["pointer"], format!("/{foreign}"));
            assert_eq!(refused[0]["code"], "not_applicable");
        }
    }
}

#[tokio::test]
async fn temperatures_in_the_list_are_those_accepted() {
    let service = service(&state(|_| {}));
    let mut seen = 0;
    for liquid in get_it(&service, "/v1/liquids").await.json()["liquids"].as_array().unwrap() {
        let Some(low) = liquid["temperature_c"]["minimum"].as_f64() else { continue };
        let high = liquid["temperature_c"]["maximum"].as_f64().unwrap();
        let id = liquid["id"].as_str().unwrap();
        let parameters = liquid["parameters"].as_array().unwrap().iter();
        let query: String =
            parameters.map(|p| format!("{}={}&", p["name"].as_str().unwrap(), p["typical"])).collect();
        for (temperature, accepted) in [(low, true), (high, true), (low - 0.1, false), (high + 0.1, false)] {
            let path = format!("/v1/liquids/{id}?{query}temperature_c={temperature}");
            let answer = get_it(&service, &path).await;
            assert_eq!(answer.status == StatusCode::OK, accepted, "{path}: {:?}", answer.body);
            if !accepted {
                assert_eq!(errors(&answer)[0]["pointer"], "/temperature_c");
            }
        }
        seen += 1;
    }
    assert!(seen >= 10);
}

#[tokio::test]
async fn cautions_hold_at_the_conditions_and_point_into_the_query() {
    let service = service(&state(|_| {}));
    let cautions = async |path: &str| {
        let answer = get_it(&service, path).await.json();
        let cautions = answer["cautions"].as_array().unwrap().clone();
        cautions.iter().map(|c| (c["code"].clone(), c["pointer"].clone())).collect::<Vec<_>>()
    };
    let hot = cautions("/v1/liquids/water?temperature_c=60").await;
    assert!(hot.contains(&("scald".into(), "/temperature_c".into())), "{hot:?}");
    let cold = cautions("/v1/liquids/water?temperature_c=10").await;
    assert!(cold.iter().all(|(code, _)| code != "scald"));
    let spirit = cautions("/v1/liquids/ethanol-solution?mass_fraction=0.4").await;
    assert!(spirit.contains(&("flammable".into(), "/id".into())), "{spirit:?}");
}

#[tokio::test]
async fn numbers_outside_a_correlations_range_are_flagged() {
    let service = service(&state(|_| {}));
    let hot = get_it(&service, "/v1/liquids/sea-water?temperature_c=60&salinity_g_kg=35").await.json();
    assert_eq!(hot["density_kg_m3"]["within_range"], false);
    let warning = &hot["warnings"][0];
    assert_eq!(
        (&warning["code"], &warning["pointer"]),
        (&"outside_correlation_range".into(), &"/density_kg_m3".into())
    );
}

#[tokio::test]
async fn a_query_is_refused_with_all_its_faults() {
    let service = service(&state(|_| {}));
    for (path, expected) in [
        ("/v1/liquids?x=1", &[("/x", "unknown_parameter")][..]),
        ("/v1/surfaces?liquid=water", &[("/liquid", "unknown_parameter")]),
        ("/v1/liquids/water?temperature_c=", &[("/temperature_c", "wrong_type")]),
        ("/v1/liquids/water?temperature_c", &[("/temperature_c", "wrong_type")]),
        ("/v1/liquids/water?temperature_c=warm", &[("/temperature_c", "wrong_type")]),
        ("/v1/liquids/water?temperature_c=null", &[("/temperature_c", "wrong_type")]),
        ("/v1/liquids/water?temperature_c=%2020", &[("/temperature_c", "wrong_type")]),
        ("/v1/liquids/water?temperature_c=%FF", &[("/temperature_c", "wrong_type")]),
        ("/v1/liquids/water?temperature_c=1e999", &[("/temperature_c", "not_finite")]),
        ("/v1/liquids/water?temperature_c=-inf", &[("/temperature_c", "not_finite")]),
        ("/v1/liquids/water?temperature_c=NaN", &[("/temperature_c", "not_finite")]),
        ("/v1/liquids/water?temperature_c=-1", &[("/temperature_c", "freezes")]),
        ("/v1/liquids/water?temperature_c=101", &[("/temperature_c", "boils")]),
        ("/v1/liquids/water?temperature_c=1e9", &[("/temperature_c", "out_of_range")]),
        ("/v1/liquids/water?temperature_c=20&temperature_c=20", &[("/temperature_c", "repeated_parameter")]),
        ("/v1/liquids/water?liquid=water", &[("/liquid", "unknown_parameter")]),
        ("/v1/liquids/water?a%2Fb~=1", &[("/a~1b~0", "unknown_parameter")]),
        (
            "/v1/liquids/sucrose-solution?temperature_c=hot&mass_fraction=2&fat_percent=1&flow=3&mass_fraction=0.1",
            &[
                ("/temperature_c", "wrong_type"),
                ("/flow", "unknown_parameter"),
                ("/mass_fraction", "repeated_parameter"),
                ("/fat_percent", "not_applicable"),
            ],
        ),
        (
            "/v1/liquids/sucrose-solution?mass_fraction=0.75&temperature_c=0",
            &[("/mass_fraction", "insoluble")],
        ),
        ("/v1/liquids/sucrose-solution?mass_fraction=-0.1", &[("/mass_fraction", "out_of_range")]),
        (
            "/v1/liquids/mineral-oil?viscosity_40c_mm2_s=10&viscosity_100c_mm2_s=20&density_15c_kg_m3=870",
            &[("/viscosity_100c_mm2_s", "contradiction")],
        ),
        (
            "/v1/liquids/mineral-oil?temperature_c=NaN",
            &[
                ("/temperature_c", "not_finite"),
                ("/viscosity_40c_mm2_s", "missing"),
                ("/viscosity_100c_mm2_s", "missing"),
                ("/density_15c_kg_m3", "missing"),
            ],
        ),
        ("/v1/surfaces/pp?liquid=milk", &[("/fat_percent", "missing")]),
        ("/v1/surfaces/pp?mass_fraction=0.1", &[("/mass_fraction", "not_applicable")]),
        (
            "/v1/surfaces/pp?liquid=wine&temperature_c=300&mass_fraction=x&salt=1",
            &[
                ("/mass_fraction", "wrong_type"),
                ("/salt", "unknown_parameter"),
                ("/liquid", "unknown_id"),
                ("/temperature_c", "out_of_range"),
            ],
        ),
    ] {
        let found = errors(&get_it(&service, path).await);
        let found: Vec<(&str, &str)> = found
            .as_array()
            .unwrap()
            .iter()
            .map(|e| (e["pointer"].as_str().unwrap(), e["code"].as_str().unwrap()))
            .collect();
        let mut sorted = (found.clone(), expected.to_vec());
        sorted.0.sort_unstable();
        sorted.1.sort_unstable();
        assert_eq!(sorted.0, sorted.1, "{path}: {found:?}");
    }
    let many: String = (0..3000).map(|i| format!("p{i}=1&")).collect();
    assert_eq!(
        errors(&get_it(&service, &format!("/v1/liquids/water?{many}")).await).as_array().unwrap().len(),
        200
    );
}

#[tokio::test]
async fn an_unknown_identifier_is_404_with_the_nearest_ones() {
    let service = service(&state(|_| {}));
    for (path, nearest) in [
        ("/v1/liquids/watr", "water"),
        ("/v1/liquids/Olive_Oil?temperature_c=x", "olive-oil"),
        ("/v1/surfaces/porcelain", "porcelain-glazed"),
    ] {
        let missing = get_it(&service, path).await;
        assert_eq!(missing.status, StatusCode::NOT_FOUND, "{path}");
        let document = missing.problem();
        assert_eq!(document["type"], "/problems/not-found");
        assert!(document["detail"].as_str().unwrap().contains(nearest), "{document}");
        assert_eq!(document["errors"][0]["choices"][0], nearest);
        assert_eq!(document["errors"][0]["pointer"], "/id");
    }
    let odd = get_it(&service, "/v1/liquids/%FF").await;
    assert!(odd.status.is_client_error());
    odd.problem();
}

#[tokio::test]
async fn catalogue_look_ups_negotiate_and_take_no_other_method() {
    let service = service(&state(|_| {}));
    for path in ["/v1/liquids", "/v1/liquids/water", "/v1/surfaces", "/v1/surfaces/pp?liquid=olive-oil"] {
        let first = get_it(&service, path).await;
        assert_eq!(first.header("content-type"), "application/json");
        let again = get_with(&service, path, &[("if-none-match", first.header("etag"))]).await;
        assert_eq!((again.status, again.body.len()), (StatusCode::NOT_MODIFIED, 0), "{path}");
        assert!(again.header("cache-control").contains("max-age"));
        assert_eq!(get_it(&service, path).await.body, first.body, "same request, same bytes");
        let picture = get_with(&service, path, &[("accept", "image/png")]).await;
        assert_eq!(picture.status, StatusCode::NOT_ACCEPTABLE);
        picture.problem();
        let post = call(&service, "POST", path, &[], Body::empty()).await;
        assert_eq!(post.status, StatusCode::METHOD_NOT_ALLOWED);
        post.problem();
    }
}

#[tokio::test]
async fn every_surface_has_its_angles_with_every_liquid() {
    let service = service(&state(|_| {}));
    let list = get_it(&service, "/v1/surfaces").await.json();
    let surfaces = list["surfaces"].as_array().unwrap();
    assert!(surfaces.len() >= 15);
    for (liquid, query) in typical_queries(&service).await {
        for surface in surfaces {
            let id = surface["id"].as_str().unwrap();
            let path = format!("/v1/surfaces/{id}?liquid={liquid}{query}");
            let answer = get_it(&service, &path).await;
            assert_eq!(answer.status, StatusCode::OK, "{path}: {:?}", answer.body);
            let answer = answer.json();
            assert_eq!(answer["with_liquid"], liquid.as_str());
            let known = surface["states"].as_array().unwrap();
            for name in ["clean", "in_use", "worn"] {
                let state = &answer["states"][name];
                assert_eq!(state.is_null(), !known.contains(&name.into()), "{path} {name}");
                if state.is_null() {
                    continue;
                }
                let angle = |member: &str| state[member]["value"].as_f64().unwrap();
                let angles =
                    [0.0, angle("receding_deg"), angle("contact_angle_deg"), angle("advancing_deg"), 180.0];
                assert!(angles.is_sorted(), "{path} {name}: {angles:?}");
                assert!(state["advancing_deg"]["standard_uncertainty"].as_f64().unwrap() > 0.0);
                assert!(!state["finish"].as_str().unwrap().is_empty());
            }
        }
    }
}

#[tokio::test]
async fn another_liquid_widens_the_band() {
    let service = service(&state(|_| {}));
    let state_of = async |path: &str| get_it(&service, path).await.json()["states"]["clean"].clone();
    let water = state_of("/v1/surfaces/pp").await;
    assert_eq!(water, state_of("/v1/surfaces/pp?liquid=water").await, "water is the default");
    // Moulded polypropylene: 104/82° advancing and receding, the catalogue's own values.
    assert!((water["advancing_deg"]["value"].as_f64().unwrap() - 104.0).abs() < 1e-9);
    let oil = state_of("/v1/surfaces/pp?liquid=olive-oil").await;
    let doubt = |state: &Value| state["contact_angle_deg"]["standard_uncertainty"].as_f64().unwrap();
    assert!(doubt(&oil) > doubt(&water));
    assert_eq!(oil["contact_angle_deg"]["basis"], "estimate");
    let answer = get_it(&service, "/v1/surfaces/pp?liquid=olive-oil").await.json();
    let codes: Vec<&Value> = answer["warnings"].as_array().unwrap().iter().map(|w| &w["code"]).collect();
    assert_eq!(codes, ["angles_re_estimated", "leaves_film"]);
}

#[tokio::test]
async fn the_documented_parameters_are_those_taken() {
    let service = service(&state(|_| {}));
    let document: Value = serde_json::from_str(&openapi_json().unwrap()).unwrap();
    for path in ["/v1/liquids/{id}", "/v1/surfaces/{id}"] {
        let parameters = document["paths"][path]["get"]["parameters"].as_array().unwrap();
        let at = path.replace("{id}", parameters[0]["example"].as_str().unwrap());
        assert_eq!(get_it(&service, &at).await.status, StatusCode::OK, "{at}");
        let refused = errors(&get_it(&service, &format!("{at}?unknown=1")).await)[0]["choices"].clone();
        let mut count = 0;
        for parameter in parameters.iter().filter(|p| p["in"] == "query") {
            let name = parameter["name"].as_str().unwrap();
            assert_eq!(parameter["required"], false, "{name}");
            assert!(parameter["description"].as_str().is_some_and(|text| !text.is_empty()), "{name}");
            assert!(name == "liquid" || parameter["schema"]["maximum"].is_number(), "{parameter}");
            let answer = get_it(&service, &format!("{at}?{name}=x")).await;
            assert_ne!(errors(&answer)[0]["code"], "unknown_parameter", "{name}");
            count += 1;
        }
        assert!(count >= 7 && refused.as_array().unwrap().len() == 5);
    }
}

/// The faults of a refused query.
#[track_caller]
fn errors(answer: &Answer) -> Value {
    assert_eq!(answer.status, StatusCode::UNPROCESSABLE_ENTITY, "{:?}", answer.body);
    answer.problem()["errors"].clone()
}
