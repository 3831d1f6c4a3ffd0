//! Sentences about a document that cannot be read: what stands where, and what belongs there.

use crate::canonical::canonical_text;
use crate::document::MOST_BYTES;
use crate::readable::Misfit;
use bandleaf_core::problem::Problem;
use serde_json::Value;

/// More bytes than are read.
pub(crate) fn too_large(bytes: u64) -> Problem {
    let sentence = format!(
        "The visit has {} megabytes, more than the {} that are read: split it into several visits.",
        bytes / 1_000_000,
        MOST_BYTES / 1_000_000
    );
    Problem::error("too_large", "", sentence).with("bytes", bytes as f64).with("most", MOST_BYTES as f64)
}

/// Bytes that are no UTF-8.
pub(crate) fn not_utf8(bytes: &[u8], at: usize) -> Problem {
    let before = bytes.get(..at).unwrap_or_default();
    let (line, column) = line_and_column(&String::from_utf8_lossy(before));
    let sentence =
        format!("The visit is not UTF-8 text at line {line}, column {column}: save it again with the encoding UTF-8.");
    Problem::error("not_utf8", "", sentence).with("line", line).with("column", column)
}

/// A text that is no JSON, or holds something that a visit cannot hold.
pub(crate) fn not_json(text: &str, error: &serde_json::Error) -> Problem {
    let before: String = text.lines().take(error.line()).enumerate().fold(String::new(), |mut kept, (index, line)| {
        if index + 1 == error.line() {
            let mut end = error.column().min(line.len());
            while !line.is_char_boundary(end) {
                end -= 1;
            }
            kept.push_str(line.get(..end).unwrap_or_default());
        }
        kept
    });
    let (line, column) = (error.line(), before.chars().count());
    let reason = reason(error);
    let (code, sentence) = if reason.contains("out of range") {
        let sentence = format!(
            "The number at line {line}, column {column} is too large to be held (the limit is about 1.8e308): correct it."
        );
        ("number_out_of_range", sentence)
    } else if error.is_eof() {
        let sentence = format!(
            "The visit ends too early, at line {line}, column {column} ({reason}): it was cut short, get the whole of it."
        );
        ("cut_short", sentence)
    } else {
        let sentence =
            format!("The visit is not readable JSON at line {line}, column {column} ({reason}): correct it there.");
        ("not_json", sentence)
    };
    Problem::error(code, "", sentence).with("line", line).with("column", column).with("reason", reason)
}

/// The reader's own words, without the place that it appends.
fn reason(error: &serde_json::Error) -> String {
    let text = error.to_string();
    match text.rfind(" at line ") {
        Some(end) => text.get(..end).unwrap_or(&text).to_owned(),
        None => text,
    }
}

/// Line and column of the end of a text, both from 1.
fn line_and_column(before: &str) -> (usize, usize) {
    let line = before.matches('\n').count() + 1;
    let column = before.rsplit('\n').next().unwrap_or_default().chars().count() + 1;
    (line, column)
}

/// JSON, but no object.
pub(crate) fn not_a_visit(value: &Value) -> Problem {
    let sentence = format!("This is {}, not a visit: a visit is an object with points and a model.", described(value));
    Problem::error("not_a_visit", "", sentence)
}

/// A document of another kind or of a later version.
pub(crate) fn other_schema(value: &Value, known: &str) -> Option<Problem> {
    let schema = value.get("schema").and_then(Value::as_str)?;
    if schema == known || schema.is_empty() {
        return None;
    }
    let problem = if is_later(schema, known) {
        let sentence = format!(
            "The visit is written as {schema}, and this program knows {known} only: open it with a newer program."
        );
        Problem::error("newer_schema", "schema", sentence)
    } else {
        let sentence = format!("The document calls itself “{}”, not {known}: choose a visit.", shortened(schema));
        Problem::error("other_schema", "schema", sentence)
    };
    Some(problem.with("schema", schema))
}

/// Whether a schema name is a later version of the known one.
pub(crate) fn is_later(schema: &str, known: &str) -> bool {
    let parts =
        |name: &str| name.rsplit_once('.').map(|(stem, version)| (stem.to_owned(), version.parse::<u64>().ok()));
    match (parts(schema), parts(known)) {
        (Some((stem, Some(version))), Some((known_stem, Some(known_version)))) => {
            stem == known_stem && version > known_version
        }
        _ => false,
    }
}

/// A field that holds something of another kind than the program computes with, or is missing.
pub(crate) fn wrong_kind(misfit: &Misfit) -> Problem {
    let Misfit { place, found, expected, missing } = misfit;
    let words = place_in_words(place);
    let sentence = if *missing {
        format!("{words}: the field \"{expected}\" is missing; add it.")
    } else {
        format!("{words}: there is {found} where {expected} belongs; correct it.")
    };
    Problem::error("wrong_kind", place.as_str(), sentence)
        .with("found", found.as_str())
        .with("expected", expected.as_str())
}

/// `points[6].indication` as a technician counts: `Point 7, indication`.
fn place_in_words(place: &str) -> String {
    let point = place.strip_prefix("points[").and_then(|rest| rest.split_once(']'));
    match point.and_then(|(index, rest)| Some((index.parse::<u64>().ok()?, rest.trim_start_matches('.')))) {
        Some((index, "")) => format!("Point {}", index + 1),
        Some((index, rest)) => format!("Point {}, {rest}", index + 1),
        None if place.is_empty() => "The visit".to_owned(),
        None => format!("The field {place} of the visit"),
    }
}

/// What stands there, in words.
pub(crate) fn described(value: &Value) -> String {
    match value {
        Value::Null => "nothing (null)".to_owned(),
        Value::Bool(value) => format!("{value}"),
        Value::Number(_) => format!("the number {}", canonical_text(value)),
        Value::String(text) => format!("the text “{}”", shortened(text)),
        Value::Array(entries) => match entries.iter().enumerate().find(|(_, entry)| !entry.is_number()) {
            Some((index, entry)) if !entry.is_array() => {
                format!("a list whose entry {} is {}", index + 1, described(entry))
            }
            _ => format!("a list of {}", entries.len()),
        },
        Value::Object(_) => "an object".to_owned(),
    }
}

fn shortened(text: &str) -> String {
    const MOST: usize = 40;
    let line: String =
        text.chars().take(MOST).map(|character| if character.is_control() { ' ' } else { character }).collect();
    if text.chars().count() > MOST { line + "…" } else { line }
}
