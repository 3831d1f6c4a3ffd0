//! The seal: digests of every part, the numbers of the report, and the digest of the file with that value blanked.

use crate::canonical::{canonical_text, element_text};
use crate::digest::{blank, sha256, sha256_of};
use crate::document::json;
use crate::page::{Page, Texts};
use serde_json::Value;

/// The name and version of the file format.
pub(crate) const SCHEMA: &str = "bandleaf.leaf.1";

/// The parts whose text is hashed as it stands, and how to find it.
type TextOf = fn(&Texts) -> &str;
pub(crate) const PROGRAM_PARTS: [(&str, TextOf); 4] = [
    ("shell", |texts| &texts.shell),
    ("style", |texts| &texts.style),
    ("wasm", |texts| &texts.wasm),
    ("program", |texts| &texts.program),
];

/// A seal that was read, unknown fields included.
#[derive(Clone, Debug, PartialEq)]
pub(crate) struct Seal {
    value: Value,
}

impl Seal {
    /// Reads a seal; `None` where the text is not exactly what this program would write for the same content.
    pub(crate) fn read(text: &str) -> Option<Seal> {
        let seal = Seal { value: json(text).ok()? };
        (seal.value.is_object() && seal.text() == text).then_some(seal)
    }

    /// A new seal, its file digest still blank.
    pub(crate) fn new(page: &Page, program: Value, visit_digest: &str, report: Value) -> Seal {
        let mut digests: serde_json::Map<String, Value> = PROGRAM_PARTS
            .iter()
            .map(|(part, text)| ((*part).to_owned(), Value::from(sha256(text(page.texts()).as_bytes()))))
            .collect();
        digests.insert("visit".to_owned(), Value::from(visit_digest));
        digests.insert("report".to_owned(), Value::from(sha256(canonical_text(&report).as_bytes())));
        let value = serde_json::json!({
            "schema": SCHEMA, "program": program, "digests": digests, "file": blank(), "report": report
        });
        Seal { value }
    }

    /// The text of its element.
    pub(crate) fn text(&self) -> String {
        element_text(&canonical_text(&self.value))
    }

    /// The same seal with this digest of the file.
    pub(crate) fn with_file(&self, digest: &str) -> Seal {
        let mut value = self.value.clone();
        if let Some(fields) = value.as_object_mut() {
            fields.insert("file".to_owned(), Value::from(digest));
        }
        Seal { value }
    }

    /// `bandleaf.leaf.1`, or what else stands there.
    pub(crate) fn schema(&self) -> &str {
        self.value.get("schema").and_then(Value::as_str).unwrap_or_default()
    }

    /// Name, version and method of the program that pressed the leaf.
    pub(crate) fn program(&self) -> Value {
        self.value.get("program").cloned().unwrap_or(Value::Null)
    }

    /// The version of the method that the report was computed with.
    pub(crate) fn method(&self) -> Option<u64> {
        self.value.pointer("/program/method").and_then(Value::as_u64)
    }

    /// The version of the program.
    pub(crate) fn version(&self) -> &str {
        self.value.pointer("/program/version").and_then(Value::as_str).unwrap_or_default()
    }

    /// The digest of a part as the seal has it.
    pub(crate) fn digest(&self, part: &str) -> Option<&str> {
        self.value.get("digests").and_then(|digests| digests.get(part)).and_then(Value::as_str)
    }

    /// The digest of the file as the seal has it.
    pub(crate) fn file(&self) -> Option<&str> {
        self.value.get("file").and_then(Value::as_str)
    }

    /// The numbers of the report; `null` in a blank page.
    pub(crate) fn report(&self) -> &Value {
        self.value.get("report").unwrap_or(&Value::Null)
    }
}

/// The digest of the file in which this seal stands, with the digits of that digest blanked.
pub(crate) fn file_digest(page: &Page, seal: &Seal) -> String {
    sha256_of(page.parts(&seal.with_file(&blank()).text()))
}

/// The program parts that are not as the seal says.
pub(crate) fn changed_program_parts(texts: &Texts, seal: &Seal) -> Vec<&'static str> {
    let changed = |(part, text): &&(&'static str, TextOf)| seal.digest(part) != Some(&sha256(text(texts).as_bytes()));
    PROGRAM_PARTS.iter().filter(changed).map(|(part, _)| *part).collect()
}
