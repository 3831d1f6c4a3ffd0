//! Bad input: each gets a message with a code, a place and one sentence that says what to do, and nothing panics.

use bandleaf_core::appraise;
use bandleaf_core::problem::{Level, Problem};
use bandleaf_core::report::Report;
use bandleaf_core::visit::{Indication, MOST_ROWS, Point, Reading, Visit};
use bandleaf_tests::visit;
use serde_json::{Value, json};

fn line() -> Value {
    json!({
        "instrument": {"range": [0, 10]},
        "points": [
            {"reference": 1, "indication": 1.1}, {"reference": 3, "indication": 2.9},
            {"reference": 5, "indication": 5.2}, {"reference": 7, "indication": 7.1},
            {"reference": 9, "indication": 8.8},
        ],
        "model": {"terms": ["1", "x"]},
        "ask": {"at": [4], "readings": [[5.5]]},
    })
}

/// The line with one part replaced; `path` as a JSON pointer.
fn with(path: &str, value: Value) -> Value {
    let mut body = line();
    let mut parent = &mut body;
    let parts: Vec<&str> = path.split('/').skip(1).collect();
    for part in &parts[..parts.len() - 1] {
        parent = match part.parse::<usize>() {
            Ok(index) => &mut parent[index],
            Err(_) => &mut parent[*part],
        };
    }
    parent[parts[parts.len() - 1]] = value;
    body
}

fn told(report: &Report) -> impl Iterator<Item = &Problem> {
    report.messages.iter().chain(report.readings.iter().flat_map(|reading| &reading.messages))
}

/// Every message is fit to be shown.
#[track_caller]
fn messages_are_sound(report: &Report) {
    for problem in told(report) {
        assert!(
            !problem.code.is_empty()
                && problem.code.chars().all(|c| c.is_ascii_lowercase() || c == '_' || c.is_ascii_digit()),
            "{problem:?}"
        );
        assert!(problem.sentence.len() > 15 && problem.sentence.ends_with('.'), "{problem:?}");
    }
}

/// The visit has no fit, and an error at this place whose sentence contains these words.
#[track_caller]
fn refused(body: Value, place: &str, words: &[&str]) {
    let report = appraise(&visit(body)).report();
    messages_are_sound(&report);
    assert!(report.fit.is_none(), "a fit in spite of {place}: {:?}", report.messages);
    let found = report.messages.iter().find(|p| p.level == Level::Error && p.place == place);
    let problem = found.unwrap_or_else(|| panic!("no error at {place:?}: {:?}", report.messages));
    for word in words {
        assert!(problem.sentence.contains(word), "{word:?} is not in {:?}", problem.sentence);
    }
}

/// The visit is computed, with a warning or an error at this place whose sentence contains these words.
#[track_caller]
fn reserved(body: Value, place: &str, words: &[&str]) {
    let report = appraise(&visit(body)).report();
    messages_are_sound(&report);
    let found = told(&report).find(|p| p.level >= Level::Warning && p.place == place);
    let problem = found.unwrap_or_else(|| panic!("nothing said at {place:?}: {:?}", told(&report).collect::<Vec<_>>()));
    for word in words {
        assert!(problem.sentence.contains(word), "{word:?} is not in {:?}", problem.sentence);
    }
}

#[test]
fn an_empty_visit() {
    let report = appraise(&Visit::default()).report();
    messages_are_sound(&report);
    assert!(report.fit.is_none() && report.messages.iter().any(|p| p.level == Level::Error), "{:?}", report.messages);
}

#[test]
fn fewer_points_than_the_shape_needs() {
    refused(with("/points", json!([])), "points", &["point"]);
    refused(with("/model/terms", json!(["1", "x", "x^2", "x^3", "x^4"])), "points", &["6", "5"]);
}

#[test]
fn rows_that_are_still_being_filled_in_do_not_count() {
    refused(
        with("/points", json!([{"reference": 1}, {"indication": 2}, {"reference": 3, "indication": null}, {}])),
        "points",
        &["point"],
    );
    let mut body = line();
    body["points"].as_array_mut().expect("points").push(json!({"reference": 10, "indication": null}));
    let report = appraise(&visit(body)).report();
    assert_eq!(report.fit.expect("a fit").points_used, 5);
}

#[test]
fn all_points_at_one_value() {
    let same: Vec<Value> = (0..5).map(|i| json!({"reference": 4, "indication": 4.0 + 0.1 * f64::from(i)})).collect();
    refused(with("/points", json!(same)), "points", &["4"]);
}

#[test]
fn a_term_that_is_infinite_at_a_point() {
    for (terms, name) in [(json!(["1", "ln(x)"]), "ln(x)"), (json!(["1", "x", "1/x"]), "1/x")] {
        let mut body = with("/points/2/reference", json!(0));
        body["model"]["terms"] = terms;
        refused(body, "points[2].reference", &["3", name]);
    }
    let mut negative = with("/points/0/reference", json!(-1));
    negative["model"]["terms"] = json!(["1", "sqrt(x)"]);
    refused(negative, "points[0].reference", &["1", "sqrt(x)"]);
}

#[test]
fn terms_that_depend_on_each_other() {
    refused(with("/model/terms", json!(["1", "x", "2*x"])), "model.terms", &["2*x"]);
    refused(with("/model/terms", json!(["1", "x", "x-3"])), "model.terms", &["x-3"]);
    let mut body = line();
    body["instrument"]["influences"] = json!({"temperature": {"unit": "°C"}});
    body["model"]["terms"] = json!(["1", "x", "temperature"]);
    for at in 0..5 {
        body["points"][at]["influences"] = json!({"temperature": 20});
    }
    refused(body, "model.terms", &["temperature"]);
}

#[test]
fn terms_that_cannot_be_read() {
    refused(with("/model/terms", json!([])), "model.terms", &["term"]);
    for term in ["x +", "2 x^", "foo(x)", "pressure", "((x)", "x;x", ""] {
        refused(with("/model/terms", json!(["1", term])), "model.terms[1]", &[]);
    }
    refused(with("/model/terms", json!(["1", "x", "x"])), "model.terms[2]", &["twice"]);
    refused(with("/model/terms", json!({"kind": "polynomial", "degree": 13})), "model.terms", &["13", "12"]);
}

#[test]
fn points_exactly_on_a_curve() {
    let exact: Vec<Value> = (0..6).map(|i| json!({"reference": i, "indication": 2 * i + 1})).collect();
    let body = with("/points", json!(exact));
    let report = appraise(&visit(body)).report();
    messages_are_sound(&report);
    let fit = report.fit.as_ref().expect("the coefficients are known");
    assert!(libm::fabs(fit.terms[1].estimate - 2.0) < 1e-15);
    let asked = report.messages.iter().any(|p| p.level == Level::Warning && p.sentence.contains("resolution"));
    assert!(asked, "{:?}", report.messages);
}

#[test]
fn more_rows_than_a_visit_may_hold() {
    let many = json!(vec![1.5; MOST_ROWS + 1]);
    refused(with("/points/0/indication", many), "points", &["100"]);
}

#[test]
fn as_many_rows_as_a_visit_may_hold() {
    let mut body = visit(line());
    let rows = (0..MOST_ROWS).map(|i| Point {
        reference: Some((i % 1000) as f64),
        indication: Some(Indication::One((i % 1000) as f64 + 0.1 * ((i * 7919) % 13) as f64)),
        ..Point::default()
    });
    body.points = rows.collect();
    let fit = appraise(&body).outline().fit.expect("a fit");
    assert_eq!(fit.points_used, MOST_ROWS);
    assert!(libm::fabs(fit.terms[1].estimate - 1.0) < 1e-3);
}

#[test]
fn limits_that_contradict_each_other() {
    reserved(with("/instrument/hard_limits", json!([10, 2])), "instrument.hard_limits", &["limit"]);
    reserved(with("/instrument/range", json!([5, 5])), "instrument.range", &["range"]);
}

#[test]
fn a_range_given_the_other_way_round_is_the_same_range() {
    let median = |range: Value| {
        let report = appraise(&visit(with("/instrument/range", range))).report();
        report.readings[0].value.as_ref().expect("a value").median
    };
    assert_eq!(median(json!([10, 0])).to_bits(), median(json!([0, 10])).to_bits());
}

#[test]
fn a_coverage_probability_outside_its_bounds() {
    for coverage in [1.5, 1.0, 0.0, -0.95, 95.0] {
        reserved(with("/coverage", json!(coverage)), "coverage", &["coverage"]);
    }
}

#[test]
fn noise_that_is_no_noise() {
    let noise = |kind: &str, s: Value, nu: Value| {
        with("/model/noise", json!({"kind": kind, "standard_deviation": s, "degrees_of_freedom": nu}))
    };
    let (s, nu) = ("model.noise.standard_deviation", "model.noise.degrees_of_freedom");
    refused(noise("known", json!(-1), json!(null)), s, &["-1"]);
    refused(noise("known", json!(null), json!(null)), s, &["missing"]);
    refused(noise("stated", json!(0), json!(5)), s, &["0"]);
    refused(noise("stated", json!(1), json!(0)), nu, &["degrees of freedom"]);
    refused(noise("stated", json!(1), json!(null)), nu, &["degrees of freedom"]);
    refused(noise("stated", json!(1), json!(1e150)), nu, &["1000000"]);
}

#[test]
fn known_noise_of_zero_needs_an_uncertainty_at_every_point() {
    let mut body = with("/model/noise", json!({"kind": "known", "standard_deviation": 0}));
    for at in [0, 1, 3, 4] {
        body["points"][at]["indication_uncertainty"] = json!(0.1);
    }
    let report = appraise(&visit(body)).report();
    messages_are_sound(&report);
    assert!(report.fit.is_none());
    assert!(
        report.messages.iter().any(|p| p.level == Level::Error && p.place.starts_with("points[2]")),
        "{:?}",
        report.messages
    );
}

#[test]
fn numbers_of_a_point_that_make_no_sense() {
    refused(with("/points/1/indication_uncertainty", json!(-0.1)), "points[1].indication_uncertainty", &["2", "-0.1"]);
    refused(with("/points/1/repeats", json!(0)), "points[1].repeats", &["2"]);
    refused(with("/points/1/repeats", json!(-3)), "points[1].repeats", &["2", "-3"]);
}

#[test]
fn an_influence_quantity_that_was_not_taken() {
    let mut body = with("/model/terms", json!(["1", "x", "temperature"]));
    body["instrument"]["influences"] = json!({"temperature": {"unit": "°C"}});
    for at in [0, 1, 2, 4] {
        body["points"][at]["influences"] = json!({"temperature": 18 + at * at});
    }
    refused(body, "points[3].influences.temperature", &["4", "temperature"]);
}

#[test]
fn knowledge_from_before_that_does_not_fit_the_shape() {
    let known = |prior: Value| {
        let mut body = with("/model/noise", json!({"kind": "known", "standard_deviation": 0.1}));
        body["model"]["known_before"] = json!([prior]);
        body
    };
    let place = "model.known_before[0]";
    let refused_near = |body: Value| {
        let report = appraise(&visit(body.clone())).report();
        messages_are_sound(&report);
        let found = report.messages.iter().any(|p| p.level == Level::Error && p.place.starts_with(place));
        assert!(report.fit.is_none() && found, "{:?} of {body}", report.messages);
    };
    refused_near(known(json!({"kind": "coefficients", "mean": [1], "standard_uncertainty": [1]})));
    refused_near(known(json!({"kind": "coefficients", "mean": [0, 1], "standard_uncertainty": [1, -1]})));
    refused_near(known(json!({"kind": "coefficients", "mean": [0, 1], "covariance": [[1, 2], [2, 1]]})));
    refused_near(known(json!({"kind": "coefficients", "mean": [0, 1], "covariance": [[1, 0.5], [0.2, 1]]})));
    refused_near(known(json!({"kind": "coefficients", "mean": [0, 1]})));
    refused_near(known(json!({"kind": "coefficients", "terms": ["x^7"], "mean": [1], "standard_uncertainty": [1]})));
    refused_near(known(json!({"kind": "shrinkage", "precision": -1})));
}

#[test]
fn numbers_that_are_none() {
    for bad in [f64::NAN, f64::INFINITY, f64::NEG_INFINITY, 1e308, -1e308, 5e-324] {
        let mut body = visit(line());
        body.points[2].reference = Some(bad);
        messages_are_sound(&appraise(&body).report());
        let mut body = visit(line());
        body.points[2].indication = Some(Indication::Many(vec![5.0, bad]));
        messages_are_sound(&appraise(&body).report());
        let mut body = visit(line());
        body.instrument.range = Some((bad, 10.0));
        messages_are_sound(&appraise(&body).report());
    }
}

#[test]
fn readings_that_are_none() {
    let appraisal = appraise(&visit(line()));
    for indications in [vec![], vec![f64::NAN], vec![5.0, f64::INFINITY]] {
        let value = appraisal.read(&Reading { indications: indications.clone(), ..Reading::default() });
        assert!(value.value.is_none() && !value.messages.is_empty(), "{indications:?}: {value:?}");
    }
    let far = appraisal.read(&Reading { indications: vec![1e9], ..Reading::default() });
    assert!(far.flags.contains(&"outside_range") || far.flags.contains(&"unattainable"), "{:?}", far.flags);
    let bad = appraisal.read(&Reading { indications: vec![5.0], resolution: Some(-1.0), ..Reading::default() });
    assert!(!bad.messages.is_empty());
}
