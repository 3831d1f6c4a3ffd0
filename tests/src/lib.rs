//! Reference, property and cross-target tests, and the programs that belong to them.
//!
//! A crate of its own, so that what only tests need cannot switch features of the shipped core on.

pub mod fixture;
pub mod generate;
pub mod golden;
pub mod random;
pub mod report_path;
pub mod simulate;

use bandleaf_core::problem::Problem;
use bandleaf_core::visit::Visit;
use bandleaf_leaf::Document;
use serde_json::Value;

/// A visit from JSON, by the reader that is shipped.
///
/// # Errors
/// Where the JSON is no visit.
pub fn read(json: Value) -> Result<Visit, Problem> {
    Document::from_value(json)?.visit()
}

/// A visit from JSON written in a test.
///
/// # Panics
/// Where the JSON is no visit: an error of the test, not of the program.
pub fn visit(json: Value) -> Visit {
    read(json).unwrap_or_else(|problem| panic!("the test's visit cannot be read: {} at {}", problem, problem.place))
}

/// The report of a visit without the drawn curve, as JSON.
///
/// # Panics
/// Where the report cannot be written as JSON.
pub fn outline(visit: &Visit) -> Value {
    serde_json::to_value(bandleaf_core::appraise(visit).outline()).unwrap_or_else(|error| panic!("no JSON: {error}"))
}
