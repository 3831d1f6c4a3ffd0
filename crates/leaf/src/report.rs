//! From a document to its report, and the part of the report that a leaf carries.

use crate::canonical::value_of;
use crate::document::Document;
use bandleaf_core::Appraisal;
use bandleaf_core::problem::Problem;
use bandleaf_core::report::Report;
use serde_json::Value;

/// A document with everything that follows from it, computed as it is asked for.
pub struct Appraised {
    appraisal: Appraisal,
    visit_digest: String,
}

impl Appraised {
    /// Appraises a document. Fails only where the document is no visit; what cannot be computed is said in the report.
    pub fn new(document: &Document) -> Result<Appraised, Problem> {
        let visit = document.visit()?;
        Ok(Appraised { appraisal: bandleaf_core::appraise(&visit), visit_digest: document.digest() })
    }

    /// The appraisal itself: curves and readings.
    pub fn appraisal(&self) -> &Appraisal {
        &self.appraisal
    }

    /// The whole report.
    pub fn report(&self) -> Report {
        self.stamped(self.appraisal.report())
    }

    /// The report without the curve.
    pub fn outline(&self) -> Report {
        self.stamped(self.appraisal.outline())
    }

    /// The numbers that a leaf carries: the report without drawn curves, program version and sentences for people, all
    /// of which follow from the rest and may be worded or spaced anew without any number changing.
    pub fn numbers(&self) -> Result<Value, Problem> {
        let mut value = value_of(&self.outline())?;
        trim(&mut value);
        Ok(value)
    }

    fn stamped(&self, mut report: Report) -> Report {
        if let Some(as_found) = report.as_found.as_mut() {
            as_found.visit_digest = Some(self.visit_digest.clone());
        }
        report.visit_digest = Some(self.visit_digest.clone());
        report
    }
}

/// The whole report of a document.
pub fn report(document: &Document) -> Result<Report, Problem> {
    Ok(Appraised::new(document)?.report())
}

/// Takes out of a report what a leaf does not carry.
fn trim(report: &mut Value) {
    if let Some(fields) = report.as_object_mut() {
        fields.remove("curve");
        if let Some(Value::Object(program)) = fields.get_mut("program") {
            program.remove("version");
        }
        if let Some(as_found) = fields.get_mut("as_found") {
            trim(as_found);
        }
    }
    without_words(report);
}

/// Takes out, at every depth, what is only drawn or read.
fn without_words(value: &mut Value) {
    match value {
        Value::Object(fields) => {
            fields.retain(|name, _| {
                let words = name == "sentence" || name.starts_with("display") || name.ends_with("_display");
                !words && name != "density"
            });
            fields.values_mut().for_each(without_words);
        }
        Value::Array(entries) => entries.iter_mut().for_each(without_words),
        _ => {}
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use serde_json::json;

    #[test]
    fn a_leaf_carries_numbers_and_no_drawings() {
        let mut report = json!({
            "program": { "name": "bandleaf", "version": "1", "method": 1 },
            "curve": { "x": [1] },
            "at": [{ "curve": { "estimate": 1, "display": "1 ± 2" } }],
            "readings": [{ "value": { "median": 1, "density": { "x": [1] }, "display_interval": "" } }],
            "points": [{ "error": 1, "error_display": "1" }],
            "messages": [{ "code": "a", "sentence": "A." }],
            "as_found": { "curve": null, "program": { "version": "1", "method": 1 } },
        });
        trim(&mut report);
        let expected = json!({
            "program": { "name": "bandleaf", "method": 1 },
            "at": [{ "curve": { "estimate": 1 } }],
            "readings": [{ "value": { "median": 1 } }],
            "points": [{ "error": 1 }],
            "messages": [{ "code": "a" }],
            "as_found": { "program": { "method": 1 } },
        });
        assert_eq!(report, expected);
    }
}
