//! The core never panics and never reports a number that is none, whatever stands in a visit: generated visits with
//! random parts replaced by nasty ones. Seeded; a failure names its seed.

use bandleaf_core::appraise;
use bandleaf_core::visit::{Reading, Visit};
use bandleaf_tests::generate;
use bandleaf_tests::random::SplitMix64;
use bandleaf_tests::read;
use serde_json::{Value, json};
use std::panic::{AssertUnwindSafe, catch_unwind};

const ROUNDS: u64 = 2_000;

/// JSON pointers of all leaves.
fn leaves(value: &Value, path: String, found: &mut Vec<String>) {
    match value {
        Value::Array(list) if !list.is_empty() => {
            list.iter().enumerate().for_each(|(i, entry)| leaves(entry, format!("{path}/{i}"), found));
        }
        Value::Object(fields) if !fields.is_empty() => {
            fields.iter().for_each(|(name, entry)| leaves(entry, format!("{path}/{name}"), found));
        }
        _ => found.push(path),
    }
}

/// Something unpleasant, mostly of the same kind as what it replaces, so that the visit can still be read.
fn nasty(old: &Value, random: &mut SplitMix64) -> Value {
    let numbers = [0.0, -0.0, -1.0, 1.0, 0.5, 1e308, -1e308, 5e-324, 1e-300, 1e17, 1e150, 1e-9];
    let texts = ["", "x", "x^12", "1/(x-x)", "exp(exp(x))", "ln(-x)", "0*x", "y", "</script>", "as_left"];
    let others = [json!(null), json!([]), json!([1e9, -1e9]), json!({}), json!(true)];
    match old {
        Value::Number(_) if random.chance(0.9) => json!(random.one_of(&numbers)),
        Value::String(_) if random.chance(0.9) => json!(random.one_of(&texts)),
        _ => random.one_of(&others).clone(),
    }
}

fn mutated(seed: u64) -> Value {
    let mut random = SplitMix64::new(seed);
    let mut body = generate::visit(random.below(10_000));
    for _ in 0..1 + random.below(4) {
        let mut paths = Vec::new();
        leaves(&body, String::new(), &mut paths);
        let path = random.one_of(&paths).clone();
        if let Some(place) = body.pointer_mut(&path) {
            *place = nasty(place, &mut random);
        }
    }
    body
}

/// The field of a debug text in which a number is none; texts in quotes are passed over.
fn without_number(debug: &str) -> Option<String> {
    let outside: String = debug.split('"').step_by(2).collect();
    let at =
        [" NaN", " inf", "-inf", "(NaN", "(inf", "[NaN", "[inf"].iter().filter_map(|none| outside.find(none)).min()?;
    let before: String = outside.chars().take(at + 4).collect();
    Some(before.chars().rev().take(160).collect::<String>().chars().rev().collect())
}

/// What is wrong with the answers to a visit.
fn examine(visit: &Visit) -> Result<(), String> {
    let appraisal = appraise(visit);
    let report = appraisal.report();
    if let Some(before) = without_number(&format!("{report:?}").replace("\\\"", "")) {
        return Err(format!("a number of the report is none: …{before}"));
    }
    if report.fit.is_none() && report.messages.is_empty() {
        return Err("no fit, and nothing is said".into());
    }
    for places in [vec![], vec![f64::NAN, 1e308, -1.0], vec![0.0, 5e-324]] {
        let Some(curve) = appraisal.curve(&places) else { continue };
        let count = curve.x.len();
        if curve.estimate.len() != count
            || curve.curve_interval.len() != count
            || curve.indication_interval.len() != count
        {
            return Err(format!("the lists of the curve at {places:?} differ in length"));
        }
    }
    for shown in [f64::NAN, -1e308, 5e-324] {
        let reading = Reading { indications: vec![shown], ..Reading::default() };
        let value = appraisal.read(&reading);
        if value.value.is_none() && value.messages.is_empty() {
            return Err(format!("no value of {shown}, and nothing is said"));
        }
        let told = format!("{:?} {:?}", value.value, value.linearised).replace("\\\"", "");
        if let Some(before) = without_number(&told) {
            return Err(format!("a number of the value of {shown} is none: …{before}"));
        }
    }
    Ok(())
}

/// The same, a panic included.
fn examined(visit: &Visit) -> Result<(), String> {
    catch_unwind(AssertUnwindSafe(|| examine(visit))).unwrap_or_else(|panic| {
        let said = panic.downcast_ref::<String>().map(String::as_str);
        Err(format!("panic: {}", said.or(panic.downcast_ref::<&str>().copied()).unwrap_or("")))
    })
}

#[test]
fn nothing_in_a_visit_makes_the_core_panic() {
    let mut failures = Vec::new();
    let mut computed = 0;
    for seed in 0..ROUNDS {
        let Ok(visit) = read(mutated(seed)) else { continue };
        computed += 1;
        failures.extend(examined(&visit).err().map(|what| format!("seed {seed}: {what}")));
    }
    assert!(computed > ROUNDS / 2, "only {computed} visits could be read");
    assert!(failures.is_empty(), "{} of {computed}\n{}", failures.len(), failures.join("\n"));
}

#[test]
fn generated_visits_have_both_outcomes() {
    let (mut with, mut without, mut failures) = (0, 0, Vec::new());
    for (index, body) in generate::visits(generate::COUNT).into_iter().enumerate() {
        let visit = read(body).expect("a visit");
        failures.extend(examined(&visit).err().map(|what| format!("visit {index}: {what}")));
        if appraise(&visit).outline().fit.is_some() {
            with += 1;
        } else {
            without += 1;
        }
    }
    assert!(failures.is_empty(), "{}\n{}", failures.len(), failures.join("\n"));
    assert!(with > 350 && without >= 20, "{with} with a fit, {without} without");
}
