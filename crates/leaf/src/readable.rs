//! From a JSON value to typed data, with the place of whatever does not fit.
//!
//! The core's types can be read with serde as well, and the tests hold both ways against each other. Here it is done by
//! hand because serde's code for the same types takes about 100 KB of the page's WebAssembly, and because a person who
//! has to correct a file is told what belongs there.
//!
//! A field that is `null` (not known) is as good as absent, and fields that nobody knows are passed over. A `null` in a
//! list keeps its place.

use crate::misfit;
use bandleaf_core::problem::Problem;
use serde::de::IgnoredAny;
use serde_json::{Map, Value};
use std::collections::BTreeMap;

/// Data that can be read from a document.
pub trait Readable: Sized {
    /// Reads the value at a place.
    fn read(at: At<'_, '_>) -> Result<Self, Misfit>;
}

/// A field to be filled in. Behind a pointer, so that an object is a table of its fields and not a piece of code for each.
pub trait Slot {
    /// Puts what stands at a place into the field.
    fn fill(&mut self, at: At<'_, '_>) -> Result<(), Misfit>;
}

impl<T: Readable> Slot for T {
    fn fill(&mut self, at: At<'_, '_>) -> Result<(), Misfit> {
        *self = T::read(at)?;
        Ok(())
    }
}

/// Reads typed data. The error names the field and says what stands there and what belongs there.
pub fn typed<T: Readable>(value: &Value) -> Result<T, Problem> {
    T::read(At { value, place: None }).map_err(|misfit| misfit::wrong_kind(&misfit))
}

/// What does not fit, and where.
#[derive(Debug)]
pub struct Misfit {
    /// Path of the field, with indices from 0.
    pub(crate) place: String,
    /// What stands there, in words.
    pub(crate) found: String,
    /// What belongs there, in words; for a field that is missing, its name.
    pub(crate) expected: String,
    /// Whether a field is missing.
    pub(crate) missing: bool,
}

/// A value at its place.
#[derive(Clone, Copy)]
pub struct At<'v, 'p> {
    value: &'v Value,
    place: Option<&'p Place<'p>>,
}

/// One step into a document and the steps before it.
struct Place<'p> {
    within: Option<&'p Place<'p>>,
    step: Step<'p>,
}

#[derive(Clone, Copy)]
enum Step<'p> {
    Field(&'p str),
    Entry(usize),
}

/// `points[6].indication`.
fn path(place: Option<&Place<'_>>) -> String {
    let Some(place) = place else { return String::new() };
    let mut path = path(place.within);
    match place.step {
        Step::Field(name) => {
            if !path.is_empty() {
                path.push('.');
            }
            path.push_str(name);
        }
        Step::Entry(index) => {
            path.push('[');
            path.push_str(&index.to_string());
            path.push(']');
        }
    }
    path
}

impl<'v> At<'v, '_> {
    /// The value itself.
    pub fn value(self) -> &'v Value {
        self.value
    }

    /// Something else belongs here.
    pub fn misfit(self, expected: &str) -> Misfit {
        Misfit {
            place: path(self.place),
            found: misfit::described(self.value),
            expected: expected.to_owned(),
            missing: false,
        }
    }

    /// The fields of an object.
    pub fn fields(self) -> Result<&'v Map<String, Value>, Misfit> {
        self.value.as_object().ok_or_else(|| self.misfit("an object"))
    }

    /// The entries of a list.
    pub fn entries(self) -> Result<&'v [Value], Misfit> {
        self.value.as_array().map(Vec::as_slice).ok_or_else(|| self.misfit("a list"))
    }

    /// Text.
    pub fn text(self) -> Result<&'v str, Misfit> {
        self.value.as_str().ok_or_else(|| self.misfit("a text"))
    }

    /// Fills in the fields of an object that are there.
    pub fn object(self, fields: &mut [(&str, &mut dyn Slot)]) -> Result<(), Misfit> {
        self.fields()?;
        fields.iter_mut().try_for_each(|(name, slot)| self.field(name, *slot))
    }

    /// Fills in a field where it is there.
    pub fn field(self, name: &str, slot: &mut dyn Slot) -> Result<(), Misfit> {
        match known(self.value.get(name)) {
            Some(value) => slot.fill(At { value, place: Some(&Place { within: self.place, step: Step::Field(name) }) }),
            None => Ok(()),
        }
    }

    /// A field that may not be left out.
    pub fn required<T: Readable>(self, name: &str) -> Result<T, Misfit> {
        let mut slot: Option<T> = None;
        self.field(name, &mut slot)?;
        slot.ok_or_else(|| Misfit { missing: true, ..self.misfit(name) })
    }

    /// The field `kind` of an object, by which its other fields are read.
    pub fn kind(self) -> Result<String, Misfit> {
        self.fields()?;
        self.required("kind")
    }

    /// The field `kind` holds something else.
    pub fn unknown_kind(self, names: &[&str]) -> Misfit {
        let place = Place { within: self.place, step: Step::Field("kind") };
        let value = self.value.get("kind").unwrap_or(&Value::Null);
        At { value, place: Some(&place) }.misfit(&one_of(names))
    }

    /// One of several names.
    pub fn name<T: Copy>(self, names: &[(&str, T)]) -> Result<T, Misfit> {
        let found = self.value.as_str().and_then(|text| names.iter().find(|(name, _)| *name == text));
        found.map(|(_, named)| *named).ok_or_else(|| {
            let names: Vec<&str> = names.iter().map(|(name, _)| *name).collect();
            self.misfit(&one_of(&names))
        })
    }
}

/// A value that is known.
fn known(value: Option<&Value>) -> Option<&Value> {
    value.filter(|value| !value.is_null())
}

/// `"a", "b" or "c"`.
fn one_of(names: &[&str]) -> String {
    let mut words = String::new();
    for (index, name) in names.iter().enumerate() {
        words.push_str(match index {
            0 => "",
            _ if index + 1 == names.len() => " or ",
            _ => ", ",
        });
        words.push('"');
        words.push_str(name);
        words.push('"');
    }
    words
}

impl Readable for f64 {
    fn read(at: At<'_, '_>) -> Result<f64, Misfit> {
        at.value.as_f64().ok_or_else(|| at.misfit("a number"))
    }
}

impl Readable for u32 {
    fn read(at: At<'_, '_>) -> Result<u32, Misfit> {
        let whole = at.value.as_u64().and_then(|whole| u32::try_from(whole).ok());
        whole.ok_or_else(|| at.misfit("a whole number, not negative"))
    }
}

impl Readable for bool {
    fn read(at: At<'_, '_>) -> Result<bool, Misfit> {
        at.value.as_bool().ok_or_else(|| at.misfit("true or false"))
    }
}

impl Readable for String {
    fn read(at: At<'_, '_>) -> Result<String, Misfit> {
        at.text().map(str::to_owned)
    }
}

impl Readable for IgnoredAny {
    fn read(_: At<'_, '_>) -> Result<IgnoredAny, Misfit> {
        Ok(IgnoredAny)
    }
}

impl<T: Readable> Readable for Option<T> {
    fn read(at: At<'_, '_>) -> Result<Option<T>, Misfit> {
        if at.value.is_null() { Ok(None) } else { T::read(at).map(Some) }
    }
}

impl<T: Readable> Readable for Vec<T> {
    fn read(at: At<'_, '_>) -> Result<Vec<T>, Misfit> {
        let entries = at.entries()?;
        let mut read = Vec::with_capacity(entries.len());
        for (index, value) in entries.iter().enumerate() {
            let place = Place { within: at.place, step: Step::Entry(index) };
            read.push(T::read(At { value, place: Some(&place) })?);
        }
        Ok(read)
    }
}

impl<T: Readable> Readable for (T, T) {
    fn read(at: At<'_, '_>) -> Result<(T, T), Misfit> {
        let mut entries = Vec::<T>::read(at)?.into_iter();
        match (entries.next(), entries.next(), entries.next()) {
            (Some(first), Some(second), None) => Ok((first, second)),
            _ => Err(at.misfit("a list of two")),
        }
    }
}

impl<T: Readable> Readable for BTreeMap<String, T> {
    fn read(at: At<'_, '_>) -> Result<BTreeMap<String, T>, Misfit> {
        let mut read = BTreeMap::new();
        for (name, value) in at.fields()?.iter().filter(|(_, value)| !value.is_null()) {
            let place = Place { within: at.place, step: Step::Field(name) };
            read.insert(name.clone(), T::read(At { value, place: Some(&place) })?);
        }
        Ok(read)
    }
}
