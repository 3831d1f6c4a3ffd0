//! The visit as a document: every field that was written, known to this program or not, and its canonical bytes.
//!
//! On entry strings are made well-formed (half a surrogate pair becomes U+FFFD) and every number becomes the nearest
//! f64 (−0 becomes 0), so that the same visit has the same bytes wherever it was written.

use crate::canonical::canonical_text;
use crate::digest::sha256;

use crate::misfit;
use crate::readable::typed;
use bandleaf_core::problem::Problem;
use bandleaf_core::visit::{SCHEMA, Visit};
use serde::de::{Deserialize, Deserializer, Error, MapAccess, SeqAccess, Visitor};
use serde_json::{Map, Number, Value};
use std::borrow::Cow;
use std::fmt;

/// The largest document that is read: about ten times a visit with 100 000 rows.
pub const MOST_BYTES: u64 = 100_000_000;

/// 2^53: below it every whole f64 is written as a whole number.
const EXACT_WHOLE: f64 = 9_007_199_254_740_992.0;

/// A visit as it was written.
#[derive(Clone, Debug, PartialEq)]
pub struct Document {
    value: Value,
    canonical: String,
}

impl Document {
    /// Reads a JSON text in UTF-8, with or without byte-order mark. Errors say line and column.
    pub fn parse(bytes: &[u8]) -> Result<Document, Problem> {
        if bytes.len() as u64 > MOST_BYTES {
            return Err(misfit::too_large(bytes.len() as u64));
        }
        let text = std::str::from_utf8(bytes).map_err(|error| misfit::not_utf8(bytes, error.valid_up_to()))?;
        let text = text.strip_prefix('\u{feff}').unwrap_or(text);
        let text = without_lone_surrogates(text);
        let value = json(&text).map_err(|error| misfit::not_json(&text, &error))?;
        Document::new(value)
    }

    /// Takes a document that is a value already.
    pub fn from_value(mut value: Value) -> Result<Document, Problem> {
        make_plain(&mut value);
        Document::new(value)
    }

    fn new(value: Value) -> Result<Document, Problem> {
        if !value.is_object() {
            return Err(misfit::not_a_visit(&value));
        }
        let canonical = canonical_text(&value);
        Ok(Document { value, canonical })
    }

    /// Everything that was written.
    pub fn value(&self) -> &Value {
        &self.value
    }

    /// The visit that the program computes with. Errors name the field in which something else is expected.
    pub fn visit(&self) -> Result<Visit, Problem> {
        if let Some(problem) = misfit::other_schema(&self.value, SCHEMA) {
            return Err(problem);
        }
        typed(&self.value)
    }

    /// The canonical text (RFC 8785).
    pub fn canonical(&self) -> &str {
        &self.canonical
    }

    /// The digest of the canonical text: `sha256:…`.
    pub fn digest(&self) -> String {
        sha256(self.canonical.as_bytes())
    }
}

/// Reads a JSON text.
pub(crate) fn json(text: &str) -> Result<Value, serde_json::Error> {
    let mut reader = serde_json::Deserializer::from_str(text);
    let Plain(value) = Plain::deserialize(&mut reader)?;
    reader.end()?;
    Ok(value)
}

/// A JSON value with numbers of one kind only and no field twice.
struct Plain(Value);

impl<'de> Deserialize<'de> for Plain {
    fn deserialize<D: Deserializer<'de>>(deserializer: D) -> Result<Plain, D::Error> {
        deserializer.deserialize_any(PlainVisitor)
    }
}

struct PlainVisitor;

impl<'de> Visitor<'de> for PlainVisitor {
    type Value = Plain;

    fn expecting(&self, f: &mut fmt::Formatter) -> fmt::Result {
        f.write_str("a JSON value")
    }

    fn visit_unit<E: Error>(self) -> Result<Plain, E> {
        Ok(Plain(Value::Null))
    }

    fn visit_bool<E: Error>(self, value: bool) -> Result<Plain, E> {
        Ok(Plain(Value::Bool(value)))
    }

    fn visit_i64<E: Error>(self, value: i64) -> Result<Plain, E> {
        self.visit_f64(value as f64)
    }

    fn visit_u64<E: Error>(self, value: u64) -> Result<Plain, E> {
        self.visit_f64(value as f64)
    }

    fn visit_f64<E: Error>(self, value: f64) -> Result<Plain, E> {
        number(value).map(|number| Plain(Value::Number(number))).ok_or_else(|| E::custom("number out of range"))
    }

    fn visit_str<E: Error>(self, value: &str) -> Result<Plain, E> {
        self.visit_string(value.to_owned())
    }

    fn visit_string<E: Error>(self, value: String) -> Result<Plain, E> {
        Ok(Plain(Value::String(value)))
    }

    fn visit_seq<A: SeqAccess<'de>>(self, mut entries: A) -> Result<Plain, A::Error> {
        let mut list = Vec::new();
        while let Some(Plain(value)) = entries.next_element()? {
            list.push(value);
        }
        Ok(Plain(Value::Array(list)))
    }

    fn visit_map<A: MapAccess<'de>>(self, mut entries: A) -> Result<Plain, A::Error> {
        let mut map = Map::new();
        while let Some((name, Plain(value))) = entries.next_entry::<String, Plain>()? {
            if map.contains_key(&name) {
                return Err(A::Error::custom(format!("the field “{name}” stands here twice")));
            }
            map.insert(name, value);
        }
        Ok(Plain(Value::Object(map)))
    }
}

/// The one form of a number in a document: whole numbers as such (so that `3` and `3.0` are one, and −0 is 0),
/// everything else as f64; `None` where JSON cannot say it.
pub fn number(value: f64) -> Option<Number> {
    if value == value.trunc() && value.abs() < EXACT_WHOLE {
        return Some(Number::from(value as i64));
    }
    Number::from_f64(value)
}

/// Gives every number its one form.
fn make_plain(value: &mut Value) {
    match value {
        Value::Number(written) => *written = written.as_f64().and_then(number).unwrap_or_else(|| written.clone()),
        Value::Array(entries) => entries.iter_mut().for_each(make_plain),
        Value::Object(fields) => fields.values_mut().for_each(make_plain),
        Value::Null | Value::Bool(_) | Value::String(_) => {}
    }
}

/// Replaces escapes of half a surrogate pair by U+FFFD, of the same length, so that places in the text stay.
fn without_lone_surrogates(text: &str) -> Cow<'_, str> {
    let mut mended: Option<String> = None;
    let mut rest = 0;
    let mut at = 0;
    while let Some(found) = text.get(at..).and_then(|tail| tail.find('\\')) {
        at += found;
        let (length, lone) = match (escaped_unit(text, at), escaped_unit(text, at + 6)) {
            (Some(0xD800..=0xDBFF), Some(0xDC00..=0xDFFF)) => (12, false),
            (Some(0xD800..=0xDFFF), _) => (6, true),
            _ => (2, false),
        };
        if lone {
            let mended = mended.get_or_insert_with(String::new);
            mended.push_str(text.get(rest..at).unwrap_or_default());
            mended.push_str("\\uFFFD");
            rest = at + length;
        }
        at += length;
        // A backslash before a character of several bytes is no escape at all; the reader will say so.
        while at < text.len() && !text.is_char_boundary(at) {
            at += 1;
        }
    }
    match mended {
        None => Cow::Borrowed(text),
        Some(mended) => Cow::Owned(mended + text.get(rest..).unwrap_or_default()),
    }
}

/// The code unit of the escape `\uXXXX` at this byte, if one stands there.
fn escaped_unit(text: &str, at: usize) -> Option<u16> {
    let hex = text.get(at..at + 6)?.strip_prefix("\\u")?;
    if hex.bytes().all(|byte| byte.is_ascii_hexdigit()) { u16::from_str_radix(hex, 16).ok() } else { None }
}
