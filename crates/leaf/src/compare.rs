//! Whether two reports of one visit agree, field by field.
//!
//! Numbers agree when they differ by no more than 1e-9 of what they are measured against:
//! - locations, intervals and widths: the standard uncertainty in the same object (`standard_uncertainty`, else
//!   `scale`, else `expanded_uncertainty`);
//! - entries of a covariance or scale matrix: √(c_ii·c_jj);
//! - pure numbers of order one (leverages, probabilities, logarithms of densities): the larger of 1 and the number;
//! - everything else: the number itself.
//!
//! Texts, truth values, `null` and lengths of lists must be the same. A field that only the computed report has is no
//! difference: later versions add fields.

use serde_json::{Map, Value};

/// The share of the uncertainty by which numbers may differ.
const SHARE: f64 = 1e-9;

/// Fields in the unit of the standard uncertainty beside them.
const IN_ITS_UNIT: [&str; 14] = [
    "estimate",
    "scale",
    "standard_uncertainty",
    "expanded_uncertainty",
    "interval",
    "median",
    "mean",
    "shortest_interval",
    "highest_density",
    "modes",
    "extent",
    "residual",
    "limit",
    "acceptance_limit",
];

/// Pure numbers for which an absolute difference is what matters.
const OF_ORDER_ONE: [&str; 14] = [
    "leverage",
    "cook_distance",
    "left_out_log_density",
    "left_out_tail",
    "suspect_probability",
    "share_of_variance",
    "statistic",
    "p",
    "log_evidence",
    "log_predictive_mean",
    "relative_density_at_ends",
    "error_percent_of_span",
    "probability",
    "log_bayes_factor",
];

/// How two reports agree.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Agreement {
    /// Every field to the bit.
    Identical,
    /// Within 1e-9 of the uncertainty; the first field that is not the same to the bit.
    Same(String),
    /// The first field that differs by more.
    Differs(String),
}

/// Compares the report in a leaf with the one computed now.
pub fn compare(sealed: &Value, computed: &Value) -> Agreement {
    let mut walk = Walk { nearly: None, differs: None };
    walk.value("", sealed, computed, Measure::Itself);
    match (walk.differs, walk.nearly) {
        (Some(place), _) => Agreement::Differs(place),
        (None, Some(place)) => Agreement::Same(place),
        (None, None) => Agreement::Identical,
    }
}

/// What a difference is measured against.
#[derive(Clone, Copy)]
enum Measure {
    Uncertainty(f64),
    OrderOne,
    Itself,
}

struct Walk {
    nearly: Option<String>,
    differs: Option<String>,
}

impl Walk {
    fn value(&mut self, place: &str, sealed: &Value, computed: &Value, measure: Measure) {
        if self.differs.is_some() {
            return;
        }
        match (sealed, computed) {
            (Value::Number(a), Value::Number(b)) => match (a.as_f64(), b.as_f64()) {
                (Some(a), Some(b)) => self.number(place, a, b, measure),
                _ => self.differs = Some(place.to_owned()),
            },
            (Value::Array(a), Value::Array(b)) if a.len() == b.len() => {
                for (index, (a, b)) in a.iter().zip(b).enumerate() {
                    self.value(&format!("{place}[{index}]"), a, b, measure);
                }
            }
            (Value::Object(a), Value::Object(b)) => self.object(place, a, b),
            (a, b) if a == b => {}
            _ => self.differs = Some(place.to_owned()),
        }
    }

    fn object(&mut self, place: &str, sealed: &Map<String, Value>, computed: &Map<String, Value>) {
        let uncertainty = uncertainty(computed);
        for (name, sealed) in sealed {
            let place = if place.is_empty() { name.clone() } else { format!("{place}.{name}") };
            let computed = computed.get(name).unwrap_or(&Value::Null);
            match name.as_str() {
                "covariance" | "scale_matrix" => self.matrix(&place, sealed, computed),
                name if OF_ORDER_ONE.contains(&name) => self.value(&place, sealed, computed, Measure::OrderOne),
                name if IN_ITS_UNIT.contains(&name) => self.value(&place, sealed, computed, uncertainty),
                _ => self.value(&place, sealed, computed, Measure::Itself),
            }
        }
    }

    fn matrix(&mut self, place: &str, sealed: &Value, computed: &Value) {
        let entry = |row: usize, column: usize| computed.get(row)?.get(column)?.as_f64();
        let (Value::Array(sealed), Value::Array(rows)) = (sealed, computed) else {
            return self.value(place, sealed, computed, Measure::Itself);
        };
        if sealed.len() != rows.len() {
            self.differs = Some(place.to_owned());
        }
        for (row, (sealed, computed)) in sealed.iter().zip(rows).enumerate() {
            let place = format!("{place}[{row}]");
            let (Value::Array(sealed), Value::Array(entries)) = (sealed, computed) else {
                self.value(&place, sealed, computed, Measure::Itself);
                continue;
            };
            if sealed.len() != entries.len() {
                self.differs = Some(place.clone());
            }
            for (column, (sealed, computed)) in sealed.iter().zip(entries).enumerate() {
                let measure = match (entry(row, row), entry(column, column)) {
                    (Some(a), Some(b)) => Measure::Uncertainty(a.abs().sqrt() * b.abs().sqrt()),
                    _ => Measure::Itself,
                };
                self.value(&format!("{place}[{column}]"), sealed, computed, measure);
            }
        }
    }

    fn number(&mut self, place: &str, a: f64, b: f64, measure: Measure) {
        if a == b {
            return;
        }
        let itself = a.abs().max(b.abs());
        let against = match measure {
            Measure::Uncertainty(uncertainty) => uncertainty,
            Measure::OrderOne => itself.max(1.0),
            Measure::Itself => itself,
        };
        if (a - b).abs() <= SHARE * against {
            self.nearly.get_or_insert_with(|| place.to_owned());
        } else {
            self.differs = Some(place.to_owned());
        }
    }
}

/// The standard uncertainty that belongs to the fields of an object.
fn uncertainty(fields: &Map<String, Value>) -> Measure {
    ["standard_uncertainty", "scale", "expanded_uncertainty"]
        .iter()
        .filter_map(|name| fields.get(*name)?.as_f64())
        .find(|width| *width > 0.0)
        .map_or(Measure::Itself, Measure::Uncertainty)
}

#[cfg(test)]
mod tests {
    use super::*;
    use serde_json::json;

    fn report(median: f64, leverage: f64, off_diagonal: f64) -> Value {
        json!({
            "fit": { "covariance": [[4.0, off_diagonal], [off_diagonal, 9.0]], "terms": [{ "term": "1" }] },
            "readings": [{ "value": { "median": median, "standard_uncertainty": 0.5, "coverage_factor": 2.0 } }],
            "points": [{ "leverage": leverage }],
        })
    }

    #[test]
    fn a_difference_is_measured_by_the_uncertainty() {
        let sealed = report(1000.0, 0.0, 0.0);
        assert_eq!(compare(&sealed, &sealed), Agreement::Identical);
        let median = "readings[0].value.median".to_owned();
        assert_eq!(compare(&sealed, &report(1000.0 + 4e-10, 0.0, 0.0)), Agreement::Same(median.clone()));
        assert_eq!(compare(&sealed, &report(1000.0 + 6e-10, 0.0, 0.0)), Agreement::Differs(median));
    }

    #[test]
    fn numbers_near_zero_have_a_measure_too() {
        let sealed = report(1000.0, 0.0, 0.0);
        assert_eq!(compare(&sealed, &report(1000.0, 9e-10, 0.0)), Agreement::Same("points[0].leverage".to_owned()));
        assert_eq!(compare(&sealed, &report(1000.0, 2e-9, 0.0)), Agreement::Differs("points[0].leverage".to_owned()));
        assert_eq!(compare(&sealed, &report(1000.0, 0.0, 5e-9)), Agreement::Same("fit.covariance[0][1]".to_owned()));
        assert_eq!(compare(&sealed, &report(1000.0, 0.0, 7e-9)), Agreement::Differs("fit.covariance[0][1]".to_owned()));
    }

    #[test]
    fn texts_lengths_and_missing_fields_differ() {
        let sealed = report(1000.0, 0.5, 0.0);
        let mut other = sealed.clone();
        other["fit"]["terms"][0]["term"] = json!("x");
        assert_eq!(compare(&sealed, &other), Agreement::Differs("fit.terms[0].term".to_owned()));
        let mut longer = sealed.clone();
        longer["points"] = json!([{ "leverage": 0.5 }, { "leverage": 0.5 }]);
        assert_eq!(compare(&sealed, &longer), Agreement::Differs("points".to_owned()));
        let mut wider = sealed.clone();
        wider["fit"]["covariance"] = json!([[4.0, 0.0]]);
        assert_eq!(compare(&sealed, &wider), Agreement::Differs("fit.covariance".to_owned()));
        let mut without = sealed.clone();
        without["readings"][0]["value"] = json!(null);
        assert_eq!(compare(&sealed, &without), Agreement::Differs("readings[0].value".to_owned()));
    }

    #[test]
    fn a_later_program_may_add_fields() {
        let sealed = report(1000.0, 0.5, 0.0);
        let mut later = sealed.clone();
        later["points"][0]["new"] = json!(1);
        assert_eq!(compare(&sealed, &later), Agreement::Identical);
        assert_eq!(compare(&later, &sealed), Agreement::Differs("points[0].new".to_owned()));
    }
}
