//! Golden values: numbers of a few reports to the last bit, by their path, so that later work can show that it moved
//! nothing. A path list, not a whole document: a new field breaks nothing.
//!
//! The bits are the truth; the decimals beside them are for people. `freeze_golden` writes the file, on purpose only:
//! a number that moves means a new version of the method.

use crate::fixture::Fixture;
use crate::{generate, outline, report_path};
use serde::{Deserialize, Serialize};
use serde_json::Value;
use std::path::{Path, PathBuf};

/// Points of a report beyond this many are not stored.
const MOST_POINTS: usize = 12;

/// One visit and the numbers of its report.
#[derive(Debug, Serialize, Deserialize)]
pub struct Golden {
    /// Its name.
    pub name: String,
    /// The visit.
    pub visit: Value,
    /// The numbers.
    pub numbers: Vec<Number>,
}

/// One number.
#[derive(Debug, Serialize, Deserialize)]
pub struct Number {
    /// Where in the report.
    pub path: String,
    /// Its shortest decimal.
    pub decimal: String,
    /// The 64 bits in hexadecimal.
    pub bits: String,
}

/// The file of the golden values.
pub fn path() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("golden/golden.json")
}

/// Fixture cases of which golden values are kept, by file.
const CASES: [(&str, &[&str]); 4] = [
    ("certified.json", &["norris", "pontius", "filip", "wampler4"]),
    ("published.json", &["gum_h3_as_published", "iso28037_unequal_one_sigma", "hoff_gprior_conjugate"]),
    (
        "oracle.json",
        &[
            "A-counter-ill-scaled at 95 %",
            "B-shrinkage-a-b at 95 %",
            "C-two-points at 95 %",
            "F-weak-slope",
            "F-two-modes",
        ],
    ),
    ("classical.json", &["bird extinction times on nesting pairs, size and status"]),
];

/// Numbers of the generated visits of which golden values are kept.
const GENERATED: [u64; 7] = [0, 3, 5, 16, 29, 61, 90];

/// The twenty visits by name.
pub fn visits() -> Vec<(String, Value)> {
    let named = CASES.iter().flat_map(|(file, names)| {
        let cases = Fixture::load(file).cases;
        names.iter().map(move |name| {
            let case = cases.iter().find(|case| case.name == *name);
            (name.to_string(), case.unwrap_or_else(|| panic!("{file} has no case {name}")).document())
        })
    });
    let generated = GENERATED.iter().map(|index| (format!("generated {index}"), generate::visit(*index)));
    named.collect::<Vec<_>>().into_iter().chain(generated).collect()
}

/// The numbers of a visit's report that are kept.
pub fn numbers(visit: &Value) -> Vec<Number> {
    report_path::numbers(&outline(&crate::visit(visit.clone())))
        .into_iter()
        .filter(|(path, _)| is_kept(path))
        .map(|(path, value)| Number { path, decimal: format!("{value:?}"), bits: bits(value) })
        .collect()
}

/// The 64 bits of a double in hexadecimal.
pub fn bits(value: f64) -> String {
    format!("{:016x}", value.to_bits())
}

/// Results, not words; not the drawn density; not the hundredth point.
fn is_kept(path: &str) -> bool {
    let point = path.split_once("points[").and_then(|(_, rest)| rest.split(']').next()?.parse::<usize>().ok());
    !path.contains(".density.")
        && !path.contains("messages[")
        && !path.contains(".args.")
        && !path.starts_with("program.")
        && point.is_none_or(|index| index < MOST_POINTS)
}
