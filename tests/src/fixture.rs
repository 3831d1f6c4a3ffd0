//! Fixtures: a case is a visit and what its report has to say, with the source beside it. One loader, many cases.

use crate::report_path;
use bandleaf_core::visit::Visit;
use serde::Deserialize;
use serde_json::{Value, json};
use std::path::{Path, PathBuf};

/// The most digits that are asked of a certified figure.
pub const MOST_DIGITS: f64 = 13.0;

/// How far below the limit of exact arithmetic on the same data a result may stay, in digits.
pub const DIGITS_GIVEN: f64 = 0.2;

/// A file of cases.
#[derive(Debug, Deserialize)]
pub struct Fixture {
    /// What the cases are about.
    pub what: String,
    /// The cases.
    pub cases: Vec<Case>,
}

/// A visit and the expectations on its report.
#[derive(Debug, Deserialize)]
pub struct Case {
    /// Its name.
    pub name: String,
    /// Where the figures come from.
    pub source: String,
    /// A file from which the points are read.
    pub data: Option<Data>,
    /// The visit as JSON, without points where `data` names a file.
    pub visit: Value,
    /// What the report has to say.
    pub expect: Vec<Expectation>,
}

/// Points in a file of comma-separated columns.
#[derive(Debug, Deserialize)]
pub struct Data {
    /// The file, relative to the fixtures.
    pub csv: String,
    /// Column of the reference values.
    pub reference: String,
    /// Column of the indications.
    pub indication: String,
    /// Columns of influence quantities.
    #[serde(default)]
    pub influences: Vec<String>,
}

/// A field of the report, its figure and how close it has to come.
#[derive(Debug, Deserialize)]
pub struct Expectation {
    /// Where in the report.
    pub path: String,
    /// The figure and its closeness.
    #[serde(flatten)]
    pub figure: Figure,
}

/// How a field is compared.
#[derive(Debug, Deserialize)]
#[serde(tag = "kind", rename_all = "snake_case")]
pub enum Figure {
    /// Correct digits, as many as exact arithmetic on the same doubles gives, and no more than `MOST_DIGITS`.
    Digits {
        /// Certified value.
        value: String,
        /// Digits that exact arithmetic on the same doubles gives.
        limit: f64,
    },
    /// Relative to the largest magnitude in the same list of figures.
    Relative {
        /// The figure.
        value: String,
        /// Relative tolerance.
        tolerance: f64,
        /// That largest magnitude.
        magnitude: String,
    },
    /// Absolute.
    Absolute {
        /// The figure.
        value: String,
        /// Absolute tolerance.
        tolerance: f64,
    },
    /// The density at a place, interpolated between the places of the report; relative.
    Density {
        /// The place.
        x: String,
        /// The density there.
        value: String,
        /// Relative tolerance.
        tolerance: f64,
    },
    /// Equal as JSON.
    Is {
        /// What it is.
        value: Value,
    },
}

/// The folder of the fixtures.
pub fn folder() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("fixtures")
}

impl Fixture {
    /// Reads a fixture by its file name.
    ///
    /// # Panics
    /// Where the file cannot be read: a test without its figures must not pass.
    pub fn load(name: &str) -> Fixture {
        let path = folder().join(name);
        let text = std::fs::read_to_string(&path).unwrap_or_else(|error| panic!("{}: {error}", path.display()));
        let fixture: Fixture =
            serde_json::from_str(&text).unwrap_or_else(|error| panic!("{}: {error}", path.display()));
        assert!(!fixture.cases.is_empty(), "{name} has no cases");
        fixture
    }

    /// Compares every case with its report and panics with the list of all that differ.
    ///
    /// # Panics
    /// Where a figure is missed.
    pub fn check(&self) {
        let missed: Vec<String> = self.cases.iter().flat_map(Case::missed).collect();
        let asked: usize = self.cases.iter().map(|case| case.expect.len()).sum();
        assert!(missed.is_empty(), "{}: {} of {asked} figures missed\n{}", self.what, missed.len(), missed.join("\n"));
    }

    /// The cases whose name begins so.
    ///
    /// # Panics
    /// Where there is none.
    pub fn only(mut self, prefix: &str) -> Fixture {
        self.cases.retain(|case| case.name.starts_with(prefix));
        assert!(!self.cases.is_empty(), "no case is named {prefix}…");
        self
    }
}

impl Case {
    /// The visit with its points as JSON.
    ///
    /// # Panics
    /// Where the points cannot be read.
    pub fn document(&self) -> Value {
        let mut document = self.visit.clone();
        if let Some(data) = &self.data {
            document["points"] = Value::from(data.points());
        }
        document
    }

    /// The visit.
    ///
    /// # Panics
    /// Where it cannot be read.
    pub fn visit(&self) -> Visit {
        crate::visit(self.document())
    }

    /// One line for each expectation that the report does not meet.
    pub fn missed(&self) -> Vec<String> {
        let report = crate::outline(&self.visit());
        let told = if report["fit"].is_null() { format!(" (no fit: {})", report["messages"]) } else { String::new() };
        self.expect
            .iter()
            .filter_map(|expectation| expectation.miss(&report))
            .map(|miss| format!("  {}: {miss}{told}", self.name))
            .collect()
    }
}

impl Data {
    fn points(&self) -> Vec<Value> {
        let path = folder().join(&self.csv);
        let text = std::fs::read_to_string(&path).unwrap_or_else(|error| panic!("{}: {error}", path.display()));
        let mut lines = text.lines().map(|line| line.split(',').collect::<Vec<_>>());
        let header = lines.next().unwrap_or_default();
        let column = |name: &str| {
            header.iter().position(|entry| *entry == name).unwrap_or_else(|| panic!("{} has no {name}", self.csv))
        };
        let (x, y) = (column(&self.reference), column(&self.indication));
        let others: Vec<(&String, usize)> = self.influences.iter().map(|name| (name, column(name))).collect();
        lines
            .map(|cells| {
                let influences: serde_json::Map<String, Value> =
                    others.iter().map(|(name, at)| ((*name).clone(), json!(double(cells[*at])))).collect();
                json!({"reference": double(cells[x]), "indication": double(cells[y]), "influences": influences})
            })
            .collect()
    }
}

/// The double nearest to a decimal text.
fn double(text: &str) -> f64 {
    text.trim().parse().unwrap_or_else(|error| panic!("{text:?} in a fixture is no number: {error}"))
}

/// Correct digits of a value against a certified one (log relative error), at most 15.
pub fn digits(value: f64, certified: &str) -> f64 {
    let certified = double(certified);
    let error = libm::fabs(value - certified) / libm::fabs(certified);
    if error == 0.0 { 15.0 } else { (-libm::log10(error)).min(15.0) }
}

impl Expectation {
    /// What is wrong with the report at this place; `None` where it is as expected.
    pub fn miss(&self, report: &Value) -> Option<String> {
        let path = &self.path;
        let found = report_path::find(report, path);
        if let Figure::Is { value } = &self.figure {
            let same = found.as_ref().is_some_and(|found| same(found, value));
            return (!same).then(|| format!("{path} is {found:?} instead of {value}"));
        }
        let got = match &self.figure {
            Figure::Density { x, .. } => found.as_ref().and_then(|density| interpolate(density, double(x))),
            _ => found.as_ref().and_then(Value::as_f64),
        };
        let Some(got) = got else {
            return Some(format!("{path} is {found:?} instead of a number"));
        };
        self.figure.miss(got).map(|how| format!("{path} = {got}: {how}"))
    }
}

impl Figure {
    fn miss(&self, got: f64) -> Option<String> {
        match self {
            Figure::Digits { value, limit } => {
                let (reached, wanted) = (digits(got, value), (limit - DIGITS_GIVEN).min(MOST_DIGITS));
                (reached.is_nan() || reached < wanted)
                    .then(|| format!("{reached:.2} digits of {value}, wanted {wanted:.2}"))
            }
            Figure::Relative { value, tolerance, magnitude } => {
                outside(got, value, tolerance * libm::fabs(double(magnitude)))
            }
            Figure::Absolute { value, tolerance } => outside(got, value, *tolerance),
            Figure::Density { value, tolerance, .. } => outside(got, value, tolerance * double(value)),
            Figure::Is { .. } => None,
        }
    }
}

fn outside(got: f64, value: &str, allowed: f64) -> Option<String> {
    let difference = libm::fabs(got - double(value));
    (difference.is_nan() || difference > allowed)
        .then(|| format!("differs from {value} by {difference:.2e}, allowed {allowed:.1e}"))
}

/// Equality of JSON in which 8 and 8.0 are the same number.
fn same(found: &Value, expected: &Value) -> bool {
    match (found.as_f64(), expected.as_f64()) {
        (Some(a), Some(b)) => a == b,
        _ => found == expected,
    }
}

/// Density at a place by interpolating its logarithm through the four nearest places (Lagrange).
fn interpolate(density: &Value, x: f64) -> Option<f64> {
    let list = |name: &str| -> Option<Vec<f64>> { density.get(name)?.as_array()?.iter().map(Value::as_f64).collect() };
    let (places, heights) = (list("x")?, list("density")?);
    let after = places.iter().position(|place| *place >= x)?;
    let first = after.saturating_sub(2).min(places.len().checked_sub(4)?);
    let near = first..first + 4;
    let mut logarithm = 0.0;
    for i in near.clone() {
        let weight: f64 = near.clone().filter(|j| *j != i).map(|j| (x - places[j]) / (places[i] - places[j])).product();
        logarithm += weight * libm::log(heights[i]);
    }
    Some(libm::exp(logarithm))
}
