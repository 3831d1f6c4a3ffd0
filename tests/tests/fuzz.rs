//! The core never panics and never reports a number that is none, whatever stands in a visit: generated visits with
//! random parts replaced by nasty ones. Seeded; a failure names its seed.

use bandleaf_core::appraise;
use bandleaf_core::visit::{Reading, Visit};
use bandleaf_tests::generate;
use bandleaf_tests::random::SplitMix64;
use serde_json::{Value, json};
use std::panic::{AssertUnwindSafe, catch_unwind};

const ROUNDS: u64 = 3_000;

/// JSON pointers of all leaves.
fn leaves(value: &Value, path: String, found: &mut Vec<String>) {
    match value {
        Value::Array(list) if !list.is_empty() => {
            list.iter()
                .enumerate()
                .for_each(|(i, entry)| leaves(entry, format!("{path}/{i}"), found));
        }
        Value::Object(fields) if !fields.is_empty() => {
            fields
                .iter()
                .for_each(|(name, entry)| leaves(entry, format!("{path}/{name}"), found));
        }
        _ => found.push(path),
    }
}

fn nasty(random: &mut SplitMix64) -> Value {
    let choices = [
        json!(0),
        json!(-0.0),
        json!(-1),
        json!(1),
        json!(1e308),
        json!(-1e308),
        json!(5e-324),
        json!(1e-300),
        json!(1e17),
        json!(1e150),
        json!(null),
        json!([]),
        json!(""),
        json!("x^12"),
        json!("1/(x-x)"),
        json!("exp(exp(x))"),
        json!("ln(-x)"),
        json!([1e9, -1e9]),
    ];
    random.one_of(&choices).clone()
}

fn mutated(seed: u64) -> Value {
    let mut random = SplitMix64::new(seed);
    let mut body = generate::visit(random.below(10_000));
    for _ in 0..1 + random.below(4) {
        let mut paths = Vec::new();
        leaves(&body, String::new(), &mut paths);
        let path = random.one_of(&paths).clone();
        if let Some(place) = body.pointer_mut(&path) {
            *place = nasty(&mut random);
        }
    }
    body
}

/// Whether a number in a debug text is none; texts in quotes are passed over.
fn has_no_number(debug: &str) -> bool {
    debug.split('"').step_by(2).any(|outside| {
        outside
            .split(|c: char| !c.is_ascii_alphanumeric())
            .any(|word| word == "NaN" || word == "inf")
    })
}

fn examine(visit: &Visit) {
    let appraisal = appraise(visit);
    let report = appraisal.report();
    let told = format!("{report:?}").replace("\\\"", "");
    assert!(!has_no_number(&told), "a number that is none in {told}");
    assert!(
        report.fit.is_some() || report.messages.iter().any(|m| !m.sentence.is_empty()),
        "nothing is said"
    );
    for places in [vec![], vec![f64::NAN, 1e308, -1.0], vec![0.0, 5e-324]] {
        let curve = format!(
            "{:?}",
            appraisal.curve(&places).map(|curve| curve.estimate.len())
        );
        assert!(!curve.is_empty());
    }
    for bad in [f64::NAN, f64::INFINITY, 1e308, -1e308, 0.0, 5e-324] {
        let value = appraisal.read(&Reading {
            indications: vec![bad],
            ..Reading::default()
        });
        assert!(!value.indications.is_empty());
    }
}

#[test]
fn nothing_in_a_visit_makes_the_core_panic() {
    let mut failures = Vec::new();
    let mut computed = 0;
    for seed in 0..ROUNDS {
        let Ok(visit) = serde_json::from_value::<Visit>(mutated(seed)) else {
            continue;
        };
        let fine = catch_unwind(AssertUnwindSafe(|| examine(&visit)));
        computed += 1;
        if let Err(panic) = fine {
            let said = panic
                .downcast_ref::<String>()
                .map(String::as_str)
                .or(panic.downcast_ref::<&str>().copied());
            failures.push(format!("seed {seed}: {:.300}", said.unwrap_or("panic")));
        }
    }
    assert!(
        computed > ROUNDS / 2,
        "only {computed} visits could be read"
    );
    assert!(
        failures.is_empty(),
        "{} of {computed}\n{}",
        failures.len(),
        failures.join("\n")
    );
}

#[test]
fn generated_visits_cover_both_outcomes() {
    let all = generate::visits(generate::COUNT);
    let (mut with, mut without) = (0, 0);
    for body in all {
        let visit: Visit = serde_json::from_value(body).expect("a visit");
        examine(&visit);
        let report = appraise(&visit).outline();
        if report.fit.is_some() {
            with += 1
        } else {
            without += 1
        }
    }
    assert!(
        with > 350 && without >= 20,
        "{with} with a fit, {without} without"
    );
}
