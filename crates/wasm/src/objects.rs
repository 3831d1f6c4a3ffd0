//! Between the page's objects and Rust's data.

use crate::intake_options;
use bandleaf_core::problem::Problem;
use bandleaf_intake::Options;
use bandleaf_leaf::Document;
use bandleaf_leaf::readable::Readable;
use js_sys::{Array, Object};
use serde::Serialize;
use serde_json::ser::Formatter;
use serde_json::{Map, Value};
use std::io;
use std::sync::Once;
use wasm_bindgen::{JsCast, JsValue};

/// How deep an object may be nested; the reader of JSON text stops at the same depth.
const DEEPEST: usize = 128;

/// A problem as the object that is thrown.
pub(crate) fn thrown(problem: Problem) -> JsValue {
    to_small_object(&problem).unwrap_or_else(|_| JsValue::from_str(&problem.sentence))
}

/// A small flat thing as a plain object, `null` for what is not known, built field by field.
pub(crate) fn to_small_object<T: Serialize>(value: &T) -> Result<JsValue, JsValue> {
    Ok(value.serialize(&serde_wasm_bindgen::Serializer::json_compatible())?)
}

/// The same for a report or a part of one. By way of JSON text, which for types of this size costs the page a tenth of
/// the code; the text is the canonical one, so that each type is written out in one way.
pub(crate) fn to_object<T: Serialize>(value: &T) -> Result<JsValue, JsValue> {
    let text = bandleaf_leaf::canonical_json(value).map_err(|problem| JsValue::from_str(&problem.sentence))?;
    js_sys::JSON::parse(&text)
}

/// The same for something that may have a hundred thousand rows: written straight out, without a tree of values.
pub(crate) fn to_large_object<T: Serialize>(value: &T) -> Result<JsValue, JsValue> {
    let mut text = Vec::new();
    let written = value.serialize(&mut serde_json::Serializer::with_formatter(&mut text, Numbers));
    written.map_err(|error| JsValue::from_str(&error.to_string()))?;
    js_sys::JSON::parse(&String::from_utf8_lossy(&text))
}

/// Numbers as the canonical text has them, so that the page carries the tables of one way of writing them only.
struct Numbers;

impl Formatter for Numbers {
    fn write_f64<W: io::Write + ?Sized>(&mut self, writer: &mut W, value: f64) -> io::Result<()> {
        writer.write_all(bandleaf_leaf::number_text(value).as_bytes())
    }
}

/// The visit in an object.
pub(crate) fn document(visit: &JsValue) -> Result<Document, JsValue> {
    plain(visit, "", 0).and_then(|value| Document::from_value(value.unwrap_or_default())).map_err(thrown)
}

/// A reading or the texts of a page in an object.
pub(crate) fn from_object<T: Readable>(object: &JsValue) -> Result<T, JsValue> {
    let value = plain(object, "", 0).map_err(thrown)?.unwrap_or_default();
    bandleaf_leaf::typed(&value).map_err(thrown)
}

/// The options of the intake in an object; none where there is no object.
pub(crate) fn options(object: &JsValue) -> Result<Options, JsValue> {
    plain(object, "", 0).and_then(|value| intake_options::options(&value.unwrap_or_default())).map_err(thrown)
}

/// The same as writing the object as JSON and reading it again: `None` for what JSON leaves out. Numbers that JSON
/// cannot say are refused by place, where `JSON.stringify` would silently write `null`. Strings become well-formed on
/// their way into Rust.
fn plain(value: &JsValue, place: &str, depth: usize) -> Result<Option<Value>, Problem> {
    if depth > DEEPEST {
        let sentence = format!("The object at {place} is nested more than {DEEPEST} levels deep: make it flatter.");
        return Err(Problem::error("too_deep", place, sentence));
    }
    if value.is_null() {
        return Ok(Some(Value::Null));
    }
    if let Some(truth) = value.as_bool() {
        return Ok(Some(Value::Bool(truth)));
    }
    if let Some(number) = value.as_f64() {
        return finite(number, place).map(Some);
    }
    if let Some(text) = value.as_string() {
        return Ok(Some(Value::String(text)));
    }
    if let Some(list) = value.dyn_ref::<Array>() {
        let entries = list.iter().enumerate();
        let entries =
            entries.map(|(at, entry)| Ok(plain(&entry, &format!("{place}[{at}]"), depth + 1)?.unwrap_or_default()));
        return entries.collect::<Result<Vec<Value>, Problem>>().map(|list| Some(Value::Array(list)));
    }
    if value.is_bigint() {
        let sentence = format!("There is a whole number of any size at {place}: give an ordinary number.");
        return Err(Problem::error("wrong_kind", place, sentence));
    }
    if value.is_object() && !value.is_function() {
        return fields(value.unchecked_ref(), place, depth).map(Some);
    }
    Ok(None)
}

fn finite(number: f64, place: &str) -> Result<Value, Problem> {
    bandleaf_leaf::number(number).map(Value::Number).ok_or_else(|| {
        let sentence = format!(
            "The number at {place} is {number}, which is no number to compute with: correct it or leave it empty."
        );
        Problem::error("number_out_of_range", place, sentence)
    })
}

fn fields(object: &Object, place: &str, depth: usize) -> Result<Value, Problem> {
    let mut map = Map::new();
    for entry in Object::entries(object).iter() {
        let entry: Array = entry.unchecked_into();
        let name = entry.get(0).as_string().unwrap_or_default();
        let place = if place.is_empty() { name.clone() } else { format!("{place}.{name}") };
        if let Some(value) = plain(&entry.get(1), &place, depth + 1)? {
            map.insert(name, value);
        }
    }
    Ok(Value::Object(map))
}

/// Has the words of a panic written to the console, in builds that keep them: what is thrown says nothing but
/// "unreachable".
pub(crate) fn say_panics() {
    static ONCE: Once = Once::new();
    ONCE.call_once(|| {
        std::panic::set_hook(Box::new(|panic| web_sys::console::error_1(&panic.to_string().into())));
    });
}
