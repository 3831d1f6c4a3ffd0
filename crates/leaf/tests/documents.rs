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
    assert!(problem.sentence.contains("entry 2 is the text “a”"), "{}", problem.sentence);
    let problem = wrong(json!({"model": {"noise": {"kind": "loud"}}}));
    assert_eq!(problem.place, "model.noise.kind");
    assert!(problem.sentence.contains("\"unknown\", \"known\", \"stated\""), "{}", problem.sentence);
    let problem = wrong(json!({"instrument": {"range": [1]}}));
    assert!(problem.sentence.contains("a list of 1 where a list of two numbers"), "{}", problem.sentence);
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
    assert!(problem.sentence.contains("a list of 3 where a shorter list"), "{}", problem.sentence);
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
