//! Reading a visit: what comes in, and what is said about what cannot.

use bandleaf_core::visit::Indication;
use bandleaf_leaf::Document;
use serde_json::{Value, json};

fn refused(bytes: &[u8]) -> bandleaf_core::problem::Problem {
    Document::parse(bytes).expect_err("it cannot be read")
}

fn wrong(value: Value) -> bandleaf_core::problem::Problem {
    Document::from_value(value).expect("a document").visit().expect_err("it is no visit")
}

#[test]
fn a_byte_order_mark_is_passed_over() {
    let plain = Document::parse(b"{\"points\":[]}");
    assert_eq!(Document::parse(b"\xef\xbb\xbf{\"points\":[]}"), plain);
    assert!(plain.is_ok());
}

#[test]
fn numbers_have_one_form() {
    let one = Document::parse(br#"{"a":[3.0,-0.0,1e2,12345678901234567890,0.1]}"#).expect("a document");
    assert_eq!(one.canonical(), r#"{"a":[3,0,100,12345678901234567000,0.1]}"#);
    let other = Document::from_value(json!({"a": [3, 0, 100.0, 12_345_678_901_234_567_890_u64, 0.1]}));
    assert_eq!(other, Ok(one));
}

#[test]
fn whole_numbers_may_be_written_with_a_point() {
    let value = json!({"model": {"terms": {"kind": "polynomial", "degree": 3.0}}});
    assert!(Document::from_value(value).expect("a document").visit().is_ok());
}

#[test]
fn half_surrogates_become_replacement_characters() {
    for (text, expected) in [
        (r#""\ud800""#, "\u{fffd}"),
        (r#""\udc00x""#, "\u{fffd}x"),
        (r#""\ud83d\ude00""#, "😀"),
        (r#""\ud83d\ud83d\ude00""#, "\u{fffd}😀"),
        (r#""\\ud800""#, "\\ud800"),
        (r#""\\\ud800\\""#, "\\\u{fffd}\\"),
        (r#""a\uDBFFé\uDFFF""#, "a\u{fffd}é\u{fffd}"),
    ] {
        let document = Document::parse(format!("{{\"note\":{text}}}").as_bytes()).expect("a document");
        assert_eq!(document.value()["note"], json!(expected), "{text}");
    }
}

#[test]
fn a_digest_does_not_depend_on_how_it_was_written() {
    let one = Document::parse("{ \"b\": 1.50, \"a\": \"\\u00e9\" }".as_bytes()).expect("a document");
    let other = Document::parse("{\"a\":\"é\",\n\"b\":15e-1}".as_bytes()).expect("a document");
    assert_eq!(one.digest(), other.digest());
    // SHA-256 of {"a":"é","b":1.5} in UTF-8, by the coreutils command sha256sum.
    assert_eq!(one.digest(), "sha256:2c49ddb7484aa328e8548d51dd66aa8b939f14a89fd1057a857fd4275edbb500");
}

#[test]
fn broken_json_is_located() {
    let problem = refused("{\n  \"é\": [1,\n  \"ü\": 2}".as_bytes());
    assert_eq!(problem.code, "not_json");
    assert!(problem.sentence.contains("line 3, column 6"), "{}", problem.sentence);
    let problem = refused(b"{\"points\": [1, 2");
    assert_eq!(problem.code, "cut_short");
    assert!(problem.sentence.contains("cut short"), "{}", problem.sentence);
    assert_eq!(refused(b"{} x").code, "not_json");
    assert_eq!(refused(b"").code, "cut_short");
    assert_eq!(refused("[".repeat(100_000).as_bytes()).code, "not_json");
}

#[test]
fn numbers_too_large_are_located() {
    let problem = refused(b"{\"points\":[{\"reference\":1},\n{\"reference\":1e400}]}");
    assert_eq!(problem.code, "number_out_of_range");
    assert!(problem.sentence.contains("line 2"), "{}", problem.sentence);
}

#[test]
fn a_field_given_twice_is_refused() {
    let problem = refused(br#"{"points":[{"reference":1,"reference":2}]}"#);
    assert!(problem.sentence.contains("“reference” stands here twice"), "{}", problem.sentence);
}

#[test]
fn other_encodings_are_said() {
    let problem = refused(b"{\"a\":1,\n\"b\":\"\xe9\"}");
    assert_eq!(problem.code, "not_utf8");
    assert!(problem.sentence.contains("line 2, column 6"), "{}", problem.sentence);
    assert_eq!(refused(b"\xff\xfe{\0}\0").code, "not_utf8");
}

#[test]
fn what_is_no_visit_is_said() {
    assert!(refused(b"[1,2]").sentence.contains("a list of 2"));
    assert!(refused(b"null").sentence.contains("not a visit"));
    let problem = wrong(json!({"schema": "bandleaf.visit.2"}));
    assert_eq!(problem.code, "newer_schema");
    assert_eq!(wrong(json!({"schema": "bandleaf.report.1"})).code, "other_schema");
}

#[test]
fn a_wrong_kind_is_located_as_a_technician_counts() {
    let problem = wrong(json!({"points": [{}, {"indication": "12,5"}]}));
    assert_eq!(problem.place, "points[1].indication");
    assert_eq!(
        problem.sentence,
        "Point 2, indication: there is the text “12,5” where a number or a list of numbers belongs; correct it."
    );
    let problem = wrong(json!({"points": [{"indication": [1, "a"]}]}));
    assert_eq!(problem.sentence, "Point 1, indication[1]: there is the text “a” where a number belongs; correct it.");
    let problem = wrong(json!({"model": {"noise": {"kind": "loud"}}}));
    assert_eq!(problem.place, "model.noise.kind");
    assert!(problem.sentence.contains("\"unknown\", \"known\" or \"stated\""), "{}", problem.sentence);
    let problem = wrong(json!({"instrument": {"range": [1]}}));
    assert!(problem.sentence.contains("a list of 1 where a list of two"), "{}", problem.sentence);
    let problem = wrong(json!({"coverage": true}));
    assert!(problem.sentence.contains("true where a number"), "{}", problem.sentence);
    let problem = wrong(json!({"points": 3}));
    assert!(problem.sentence.contains("the number 3 where a list"), "{}", problem.sentence);
}

#[test]
fn what_is_missing_or_too_much_is_said() {
    let problem = wrong(json!({"instrument": {"output": {"nominal": {"kind": "linear"}}}}));
    assert_eq!(problem.place, "instrument.output.nominal");
    assert!(problem.sentence.contains("the field \"range\" is missing"), "{}", problem.sentence);
    let problem = wrong(json!({"instrument": {"range": [1, 2, 3]}}));
    assert!(problem.sentence.contains("a list of 3 where a list of two"), "{}", problem.sentence);
    let problem = wrong(json!({"points": [[1, 2]]}));
    assert!(problem.sentence.contains("Point 1: there is a list of 2 where an object"), "{}", problem.sentence);
    let problem = wrong(json!({"ask": {"readings": ["812"]}}));
    assert_eq!(problem.place, "ask.readings[0]");
}

#[test]
fn null_is_not_known() {
    let document = Document::from_value(json!({"points": [{"reference": null, "indication": [1, 2.5]}]}));
    let visit = document.expect("a document").visit().expect("a visit");
    assert_eq!(visit.points[0].reference, None);
    let value = json!({"instrument": null, "coverage": null, "conditions": {"temperature": null},
        "occasion": {"notes": null}, "instrument ": null,
        "model": {"known_before": [{"kind": "coefficients", "mean": [null, 1], "terms": null}]}});
    let visit = Document::from_value(value).expect("a document").visit().expect("a visit");
    assert!(visit.conditions.is_empty() && visit.coverage.is_none() && visit.model.known_before.len() == 1);
    let document = Document::from_value(json!({"points": [{"reference": null, "indication": [1, 2.5]}]}));
    let visit = document.expect("a document").visit().expect("a visit");
    assert_eq!(visit.points[0].indication, Some(Indication::Many(vec![1.0, 2.5])));
}

/// Documents that name every field and every variant.
fn complete() -> Vec<Value> {
    let visit = |model: Value| {
        json!({
            "schema": "bandleaf.visit.1",
            "instrument": {
                "name": "n", "serial": "s", "place": "p", "quantity": "q", "unit": "mm", "range": [0, 2500.5],
                "hard_limits": [0, null], "influences": { "temperature": { "unit": "°C" }, "empty": {} },
                "output": { "unit": "mA", "resolution": 0.01, "nominal": { "kind": "linear", "range": [4, 20] } }
            },
            "standards": [{
                "id": "S1", "name": "n", "serial": "s", "certificate": "c", "due": "2027-01-31",
                "errors": [{ "kind": "gain", "standard_uncertainty": 1e-5, "source": "temperature" }]
            }],
            "occasion": { "date": "2026-05-04", "by": "b", "notes": "n" },
            "points": [
                {
                    "reference": 150, "indication": [151, 150.5], "state": "as_left", "standard": "S1", "setting": "150",
                    "setting_uncertainty": 0.2, "reference_uncertainty": 0, "repeats": 3, "indication_uncertainty": 0.1,
                    "influences": { "temperature": 14.2 }, "approach": "down", "time": "t", "note": "n", "set_aside": "why"
                },
                { "reference": 1, "indication": 2, "approach": "up", "state": "as_found" },
                {}
            ],
            "model": model,
            "tolerance": { "combine": "sum", "constant": 4, "of_value": 0.002, "of_span": 0, "digits": 1 },
            "coverage": 0.9, "target_expanded_uncertainty": 2, "plan": { "admissible": [1, 2] },
            "in_use": { "contributions": [{ "source": "x" }], "valid_until": "2027-01-31" },
            "record": { "laboratory": "l", "nested": [1] }, "conditions": { "temperature": 20 },
            "ask": {
                "at": [200, { "x": 1000, "influences": { "temperature": 15 } }, { "x": 1 }],
                "readings": [[812, 813], 5, { "indications": [1] }, {
                    "indications": [812], "influences": { "temperature": 15 }, "resolution": 1,
                    "known": { "mean": 810, "standard_uncertainty": 5 }, "indication_uncertainty": 0.5
                }]
            },
            "earlier": [{ "schema": "bandleaf.visit.1" }], "history": [{ "at": "t" }], "nobody knows": [1, { "x": true }]
        })
    };
    let models = [
        json!({}),
        json!({
            "orientation": "correction_from_indication", "terms": ["1", { "kind": "polynomial", "degree": 3 }, "x"],
            "noise": { "kind": "stated", "standard_deviation": 1, "degrees_of_freedom": 5,
                "profile": { "kind": "proportional", "rho": "integrated" } },
            "known_before": [
                { "kind": "flat" }, { "kind": "carried" },
                { "kind": "shrinkage", "precision": "integrated", "basis": "as_given", "intercept": "shrunk" },
                { "kind": "shrinkage", "precision": 2.5 },
                { "kind": "coefficients", "terms": ["1"], "mean": [null, 1], "covariance": [[1, 0], [0, 1]] },
                { "kind": "coefficients", "mean": [0], "standard_uncertainty": [null] },
                { "kind": "values", "values": [{ "x": 1 }] }, { "kind": "values" },
                { "kind": "conjugate", "mean": [0, 1], "covariance_over_variance": [[1, 0], [0, 1]] }
            ],
            "suspects": { "enabled": true, "prior_probability": 0.02, "inflation": 10, "at_most": 2 },
            "candidates": [["1", "x"], { "kind": "spline", "knots": [1, 2] }]
        }),
        json!({
            "orientation": "reference_from_indication", "terms": { "kind": "broken_line", "knots": [1, 2, 3] },
            "noise": { "kind": "known", "profile": { "kind": "constant" } }
        }),
        json!({ "orientation": "indication_from_reference", "noise": { "kind": "unknown",
            "profile": { "kind": "proportional", "rho": 0.5 } } }),
    ];
    models.into_iter().map(visit).collect()
}

#[test]
fn a_visit_is_read_as_serde_reads_it() {
    for value in complete() {
        let read = Document::from_value(value.clone()).and_then(|document| document.visit()).expect("a visit");
        let by_serde: bandleaf_core::visit::Visit = serde_json::from_value(value).expect("a visit");
        assert_eq!(read, by_serde);
    }
    for nominal in [json!({ "kind": "identity" }), json!({ "kind": "square_root", "range": [0, 1] })] {
        let value = json!({ "instrument": { "output": { "nominal": nominal } } });
        let read = Document::from_value(value.clone()).and_then(|document| document.visit());
        assert_eq!(read.ok(), serde_json::from_value(value).ok());
    }
}

#[test]
fn every_field_of_another_kind_is_refused_as_serde_refuses_it() {
    for value in complete() {
        let mut places = Vec::new();
        paths(&value, String::new(), &mut places);
        // Which versions are read is judged before anything else.
        places.retain(|place| place != "/schema");
        for place in places {
            for other in [json!(-1.5), json!("text"), json!(true), json!([[true]]), json!({ "kind": 1 })] {
                let mut changed = value.clone();
                *changed.pointer_mut(&place).expect("a place of this document") = other.clone();
                let by_serde = serde_json::from_value::<bandleaf_core::visit::Visit>(changed.clone());
                let read = Document::from_value(changed).and_then(|document| document.visit());
                // serde takes a list for an object, field by field; here it is refused.
                if other.is_array() && by_serde.is_ok() && read.is_err() {
                    continue;
                }
                assert_eq!(read.is_ok(), by_serde.is_ok(), "{place} = {other}: {by_serde:?}");
                assert_eq!(read.ok(), by_serde.ok());
            }
        }
    }
}

/// The place of everything inside a value, as JSON pointers (RFC 6901).
fn paths(value: &Value, place: String, places: &mut Vec<String>) {
    match value {
        Value::Array(entries) => {
            for (index, entry) in entries.iter().enumerate() {
                paths(entry, format!("{place}/{index}"), places);
            }
        }
        Value::Object(fields) => {
            for (name, field) in fields {
                paths(field, format!("{place}/{name}"), places);
            }
        }
        _ => {}
    }
    if !place.is_empty() {
        places.push(place);
    }
}
