//! Opening: is a leaf as it was pressed, and does this program compute the same from its visit?

use crate::canonical::{canonical_text, element_text};
use crate::compare::{Agreement, compare};
use crate::digest::sha256;
use crate::document::Document;
use crate::misfit;
use crate::page::Page;
use crate::report::Appraised;
use crate::seal::{SCHEMA, Seal, changed_program_parts, file_digest};
use bandleaf_core::report::METHOD;
use serde::Serialize;
use serde_json::Value;

/// What was found on opening.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum Outcome {
    /// A page without a visit, as it was built.
    Blank,
    /// Every number of the report comes out the same to the bit.
    Identical,
    /// Every number comes out the same within 1e-9 of its uncertainty.
    Same,
    /// The leaf was computed by an earlier method, by which some numbers were different.
    EarlierMethod,
    /// The leaf was pressed by a newer program; `differing_field` says whether the numbers known here agree.
    NewerProgram,
    /// The same program computes something else, or nothing.
    Differs,
    /// Part of the file was changed after pressing.
    Altered,
}

impl Outcome {
    /// Its name in documents and bindings.
    pub fn name(self) -> &'static str {
        match self {
            Outcome::Blank => "blank",
            Outcome::Identical => "identical",
            Outcome::Same => "same",
            Outcome::EarlierMethod => "earlier_method",
            Outcome::NewerProgram => "newer_program",
            Outcome::Differs => "differs",
            Outcome::Altered => "altered",
        }
    }
}

/// A leaf that was opened.
#[derive(Clone, Debug, PartialEq)]
pub struct Opened {
    /// The visit, where one can be read; after `Altered` and `Differs` not to be trusted.
    pub document: Option<Document>,
    /// What was found.
    pub outcome: Outcome,
    /// The sections whose digest fails: `shell`, `style`, `wasm`, `program`, `seal`, `visit`, `report`, `file`.
    pub changed_sections: Vec<&'static str>,
    /// The first field of the report that comes out otherwise.
    pub differing_field: Option<String>,
    /// The outcome in one sentence.
    pub sentence: String,
}

impl Opened {
    /// Whether values may be read from this leaf: nothing was changed and the numbers are as they were pressed, or
    /// changed for a stated reason.
    pub fn may_be_read(&self) -> bool {
        match self.outcome {
            Outcome::Identical | Outcome::Same | Outcome::EarlierMethod => self.document.is_some(),
            Outcome::NewerProgram => self.document.is_some() && self.differing_field.is_none(),
            Outcome::Blank | Outcome::Differs | Outcome::Altered => false,
        }
    }

    fn new(document: Option<Document>, outcome: Outcome, field: Option<String>, sentence: String) -> Opened {
        Opened { document, outcome, changed_sections: Vec::new(), differing_field: field, sentence }
    }
}

/// Opens a page or leaf: checks every digest, computes the report again and compares.
pub fn open(page: &Page) -> Opened {
    let text = &page.texts().visit;
    let document = (text != "null").then(|| Document::parse(text.as_bytes()).ok()).flatten();
    let Some(seal) = Seal::read(&page.texts().seal) else {
        return altered(document, vec!["seal"]);
    };
    if misfit::is_later(seal.schema(), SCHEMA) {
        let sentence = format!(
            "This leaf was written in a newer form ({}) than this program knows ({SCHEMA}), so its digests cannot be \
             checked: open it with the newer program.",
            seal.schema()
        );
        return Opened::new(document, Outcome::NewerProgram, Some("schema".to_owned()), sentence);
    }
    let changed = changed_sections(page, &seal, document.as_ref());
    if !changed.is_empty() {
        return altered(document, changed);
    }
    match document {
        None => {
            let sentence = "This page is as it was built, and there is no visit in it.".to_owned();
            Opened::new(None, Outcome::Blank, None, sentence)
        }
        Some(document) => recomputed(document, &seal),
    }
}

/// The sections that are not as they were sealed.
fn changed_sections(page: &Page, seal: &Seal, document: Option<&Document>) -> Vec<&'static str> {
    let mut changed = changed_program_parts(page.texts(), seal);
    if seal.schema() != SCHEMA {
        changed.push("seal");
    }
    let visit_stands = match document {
        Some(document) => {
            seal.digest("visit") == Some(&document.digest()) && element_text(document.canonical()) == page.texts().visit
        }
        None => seal.digest("visit").is_none() && page.texts().visit == "null",
    };
    if !visit_stands {
        changed.push("visit");
    }
    let report_stands = match (document, seal.report()) {
        (None, report) => seal.digest("report").is_none() && report.is_null(),
        (Some(_), report) => seal.digest("report") == Some(&sha256(canonical_text(report).as_bytes())),
    };
    if !report_stands {
        changed.push("report");
    }
    if Some(file_digest(page, seal).as_str()) != seal.file() {
        changed.push("file");
    }
    changed
}

fn altered(document: Option<Document>, changed: Vec<&'static str>) -> Opened {
    let named = if changed == ["file"] { "the seal or its own digest".to_owned() } else { listed(&changed) };
    let sentence =
        format!("This leaf was changed after it was pressed ({named}): do not use its values, ask for the original.");
    Opened { changed_sections: changed, ..Opened::new(document, Outcome::Altered, None, sentence) }
}

/// The changed sections as words; `file` follows from any other and is left out beside them.
fn listed(changed: &[&'static str]) -> String {
    let named: Vec<&str> = changed.iter().copied().filter(|section| *section != "file").collect();
    named.join(", ")
}

/// Compares the numbers in the seal with what this program computes.
fn recomputed(document: Document, seal: &Seal) -> Opened {
    let newer = is_newer(seal);
    let computed = match Appraised::new(&document).and_then(|appraised| appraised.numbers()) {
        Ok(computed) => computed,
        Err(problem) if newer || problem.code == "newer_schema" => {
            let sentence = format!("This leaf was pressed by a newer program. {}", problem.sentence);
            return Opened::new(Some(document), Outcome::NewerProgram, Some(problem.place), sentence);
        }
        Err(problem) => {
            let sentence = format!("The visit in this leaf cannot be computed again. {}", problem.sentence);
            return Opened::new(Some(document), Outcome::Differs, Some(problem.place), sentence);
        }
    };
    let earlier = seal.method().is_some_and(|method| method < u64::from(METHOD));
    let agreement = compare(&without_program(seal.report()), &without_program(&computed));
    let (outcome, field, sentence) = judged(agreement, newer, earlier, seal);
    Opened::new(Some(document), outcome, field, sentence)
}

fn judged(agreement: Agreement, newer: bool, earlier: bool, seal: &Seal) -> (Outcome, Option<String>, String) {
    let version = seal.version();
    let method = seal.method().unwrap_or_default();
    match agreement {
        Agreement::Identical if newer => {
            let sentence = format!(
                "This leaf was pressed by the newer program {version}; every number that this program knows comes out \
                 identical, what is new in it is not shown."
            );
            (Outcome::NewerProgram, None, sentence)
        }
        Agreement::Same(_) if newer => {
            let sentence = format!(
                "This leaf was pressed by the newer program {version}; every number that this program knows comes out \
                 the same within 1e-9 of its uncertainty, what is new in it is not shown."
            );
            (Outcome::NewerProgram, None, sentence)
        }
        Agreement::Differs(field) if newer => {
            let sentence = format!(
                "This leaf was pressed by the newer program {version} and this one computes {field} otherwise or not \
                 at all: open it with the newer program."
            );
            (Outcome::NewerProgram, Some(field), sentence)
        }
        Agreement::Identical => {
            let sentence = "Identical: every number comes out as it was pressed, to the last bit.".to_owned();
            (Outcome::Identical, None, sentence)
        }
        Agreement::Same(field) => {
            let sentence = "The same: every number comes out as it was pressed, within 1e-9 of its uncertainty.";
            (Outcome::Same, Some(field), sentence.to_owned())
        }
        Agreement::Differs(field) if earlier => {
            let sentence = format!(
                "This leaf was computed by the earlier method {method}; this program computes by method {METHOD}, by \
                 which {field} is different."
            );
            (Outcome::EarlierMethod, Some(field), sentence)
        }
        Agreement::Differs(field) => {
            let sentence = format!(
                "This program computes {field} otherwise than it stands in the leaf: do not use its values, ask whoever \
                 pressed it."
            );
            (Outcome::Differs, Some(field), sentence)
        }
    }
}

/// Whether a newer program, a newer method or a newer form of the visit stands behind the seal.
fn is_newer(seal: &Seal) -> bool {
    let version = |text: &str| -> Option<Vec<u64>> { text.split('.').map(|part| part.parse().ok()).collect() };
    let newer_version = match (version(seal.version()), version(crate::VERSION)) {
        (Some(theirs), Some(ours)) => theirs > ours,
        _ => false,
    };
    newer_version || seal.method().is_some_and(|method| method > u64::from(METHOD))
}

/// A report without the name, version and method of the program, which are judged by themselves.
fn without_program(report: &Value) -> Value {
    let mut report = report.clone();
    if let Some(fields) = report.as_object_mut() {
        fields.remove("program");
        fields.get_mut("as_found").and_then(Value::as_object_mut).map(|fields| fields.remove("program"));
    }
    report
}
