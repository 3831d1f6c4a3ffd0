//! The functions of Bandleaf for the page. Nothing is computed here.
//!
//! Objects that come out are plain, with `null` for what is not known. What cannot be used is thrown as a plain object
//! `{level, code, args, place, sentence}`.

mod intake_options;
mod objects;

use bandleaf_core::appraise::spread;
use bandleaf_core::display;
use bandleaf_core::problem::Problem;
use bandleaf_core::report::Curve;
use bandleaf_intake::{Intake, Options};
use bandleaf_leaf::{Appraised, Opened, Page, canonical_json};
use js_sys::Float64Array;
use objects::{document, from_object, options, say_panics, thrown, to_large_object, to_object, to_small_object};
use wasm_bindgen::prelude::*;

/// Numbers in each row of a curve.
const ROW: usize = 8;

/// The most places of a curve that are computed at once.
const MOST_PLACES: usize = 100_000;

/// A visit with its fit; give it back with `free()`.
#[wasm_bindgen]
pub struct Appraisal(Appraised);

/// Appraises a visit. Throws only where the object is no visit.
#[wasm_bindgen]
pub fn appraise(visit: JsValue) -> Result<Appraisal, JsValue> {
    say_panics();
    Appraised::new(&document(&visit)?).map(Appraisal).map_err(thrown)
}

#[wasm_bindgen]
impl Appraisal {
    /// The report without the curve.
    pub fn outline(&self) -> Result<JsValue, JsValue> {
        to_object(&self.0.outline())
    }

    /// The whole report.
    pub fn report(&self) -> Result<JsValue, JsValue> {
        to_object(&self.0.report())
    }

    /// Rows of 8: place, estimate, its standard uncertainty, both ends of the curve's interval, both ends of a new
    /// indication's, nominal; NaN for what is not known. Empty without a fit; places where the shape is undefined are
    /// left out.
    pub fn curve(&self, first: f64, last: f64, count: usize) -> Float64Array {
        let places = spread(first, last, count.min(MOST_PLACES));
        let rows = self.0.appraisal().curve(&places).map(|curve| rows(&curve)).unwrap_or_default();
        Float64Array::from(rows.as_slice())
    }

    /// A reading `{indications, influences?, resolution?, known?}` as a value.
    pub fn read(&self, reading: JsValue) -> Result<JsValue, JsValue> {
        to_object(&self.0.appraisal().read(&from_object(&reading)?))
    }
}

fn rows(curve: &Curve) -> Vec<f64> {
    let mut rows = Vec::with_capacity(curve.x.len() * ROW);
    let at =
        |list: &Option<Vec<f64>>, row: usize| list.as_ref().and_then(|list| list.get(row)).copied().unwrap_or(f64::NAN);
    let ends = curve.curve_interval.iter().zip(&curve.indication_interval);
    for (row, ((x, estimate), (inner, outer))) in curve.x.iter().zip(&curve.estimate).zip(ends).enumerate() {
        rows.extend([*x, *estimate, at(&curve.standard_uncertainty, row)]);
        rows.extend(inner.iter().chain(outer));
        rows.push(at(&curve.nominal, row));
    }
    rows
}

/// The canonical text of a visit (RFC 8785).
#[wasm_bindgen]
pub fn canonical(visit: JsValue) -> Result<String, JsValue> {
    Ok(document(&visit)?.canonical().to_owned())
}

/// The digest of that text: `sha256:…`.
#[wasm_bindgen]
pub fn digest(visit: JsValue) -> Result<String, JsValue> {
    Ok(document(&visit)?.digest())
}

/// The canonical text of the whole report of a visit.
#[wasm_bindgen]
pub fn report_json(visit: JsValue) -> Result<String, JsValue> {
    say_panics();
    bandleaf_leaf::report(&document(&visit)?).and_then(|report| canonical_json(&report)).map_err(thrown)
}

/// Reads pasted text.
#[wasm_bindgen]
pub fn intake_text(text: &str, options: JsValue) -> Result<JsValue, JsValue> {
    taken_in(&options, |options| bandleaf_intake::read_text(text, options))
}

/// Reads the bytes of a file.
#[wasm_bindgen]
pub fn intake_bytes(bytes: &[u8], options: JsValue) -> Result<JsValue, JsValue> {
    taken_in(&options, |options| bandleaf_intake::read_bytes(bytes, options))
}

fn taken_in(object: &JsValue, read: impl FnOnce(&Options) -> Intake) -> Result<JsValue, JsValue> {
    say_panics();
    to_large_object(&read(&options(object)?))
}

/// Reads one typed cell.
#[wasm_bindgen]
pub fn parse_cell(text: &str) -> Result<JsValue, JsValue> {
    to_small_object(&bandleaf_intake::parse_cell(text))
}

/// `1711.2 ± 2.1 mm`.
#[wasm_bindgen]
pub fn format_value(value: f64, expanded: f64, unit: &str) -> String {
    display::value_with_uncertainty(value, expanded, unit)
}

/// `1709.1 to 1713.3 mm`.
#[wasm_bindgen]
pub fn format_interval(low: f64, high: f64, unit: &str) -> String {
    display::interval(low, high, unit)
}

/// A number to so many significant digits.
#[wasm_bindgen]
pub fn format_number(value: f64, significant: usize) -> String {
    display::number(value, significant)
}

/// A number to the decimals of an uncertainty.
#[wasm_bindgen]
pub fn format_to(value: f64, like: f64) -> String {
    display::to_match(value, like)
}

/// The bytes of the leaf that this page makes of a visit; `texts` are those of the page's elements.
#[wasm_bindgen]
pub fn press(texts: JsValue, visit: JsValue) -> Result<Vec<u8>, JsValue> {
    say_panics();
    let page = Page::from_texts(from_object(&texts)?).map_err(thrown)?;
    bandleaf_leaf::press(&page, &document(&visit)?).map_err(thrown)
}

/// What this page is, from the texts of its elements: `{visit, outcome, sentence, changed, field}`.
#[wasm_bindgen]
pub fn open_texts(texts: JsValue) -> Result<JsValue, JsValue> {
    opened(Page::from_texts(from_object(&texts)?))
}

/// The same for the bytes of a file. Throws where it is no leaf.
#[wasm_bindgen]
pub fn open_bytes(bytes: &[u8]) -> Result<JsValue, JsValue> {
    opened(Page::take_apart(bytes))
}

fn opened(page: Result<Page, Problem>) -> Result<JsValue, JsValue> {
    say_panics();
    let Opened { document, outcome, changed_sections, differing_field, sentence } =
        bandleaf_leaf::open(&page.map_err(thrown)?);
    let object = to_object(&serde_json::json!({
        "outcome": outcome, "sentence": sentence, "changed": changed_sections, "field": differing_field
    }))?;
    let visit = document.map_or(Ok(JsValue::NULL), |document| js_sys::JSON::parse(document.canonical()))?;
    js_sys::Reflect::set(&object, &"visit".into(), &visit)?;
    Ok(object)
}

/// The version of the program.
#[wasm_bindgen]
pub fn version() -> String {
    bandleaf_leaf::VERSION.to_owned()
}
