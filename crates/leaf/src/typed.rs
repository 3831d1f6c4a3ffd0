//! From a document to typed data, with the place of whatever does not fit.
//!
//! Not one of the crates that wrap another reader to follow its path: they write out every type twice over, some
//! 100 KB of the page. This reads a JSON value only, each kind of field by its own rule, so that a structure is never
//! also read from a list, and a field that is `null` (not known) is as good as absent. A `null` in a list keeps its
//! place.

use crate::misfit;
use bandleaf_core::problem::Problem;
use serde::de::value::StrDeserializer;
use serde::de::{
    DeserializeOwned, DeserializeSeed, Deserializer, Error, Expected, IntoDeserializer, MapAccess, SeqAccess,
    Unexpected, Visitor,
};
use serde::forward_to_deserialize_any;
use serde_json::{Value, map};
use std::fmt;

/// Reads typed data. The error names the field and says what stands there and what belongs there.
pub fn typed<T: DeserializeOwned>(value: &Value) -> Result<T, Problem> {
    let at = At { value, place: None };
    T::deserialize(at).map_err(|misfit| misfit.placed(at)).map_err(|misfit| misfit::wrong_kind(&misfit))
}

/// Why something does not fit, and where.
#[derive(Debug)]
pub(crate) struct Misfit {
    /// In the words of the reader.
    pub(crate) reason: String,
    /// Path, and what stands there.
    pub(crate) at: Option<(String, Value)>,
}

impl Misfit {
    /// Fills in the place where the innermost reader had none.
    fn placed(mut self, at: At<'_, '_>) -> Misfit {
        self.at.get_or_insert_with(|| (Place::path(at.place), at.value.clone()));
        self
    }
}

impl fmt::Display for Misfit {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(&self.reason)
    }
}

impl std::error::Error for Misfit {}

impl Error for Misfit {
    fn custom<T: fmt::Display>(reason: T) -> Misfit {
        Misfit { reason: reason.to_string(), at: None }
    }
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

impl Place<'_> {
    /// `points[6].indication`.
    fn path(place: Option<&Place<'_>>) -> String {
        let Some(place) = place else { return String::new() };
        let mut path = Place::path(place.within);
        match place.step {
            Step::Field(name) => {
                if !path.is_empty() {
                    path.push('.');
                }
                path.push_str(name);
            }
            Step::Entry(index) => path.push_str(&format!("[{index}]")),
        }
        path
    }
}

/// A value at its place.
#[derive(Clone, Copy)]
struct At<'de, 'p> {
    value: &'de Value,
    place: Option<&'p Place<'p>>,
}

impl<'de> At<'de, '_> {
    fn misfit(self, expected: &dyn Expected) -> Misfit {
        let unexpected = match self.value {
            Value::Null => Unexpected::Unit,
            Value::Bool(value) => Unexpected::Bool(*value),
            Value::Number(number) => Unexpected::Float(number.as_f64().unwrap_or_default()),
            Value::String(text) => Unexpected::Str(text),
            Value::Array(_) => Unexpected::Seq,
            Value::Object(_) => Unexpected::Map,
        };
        Misfit::invalid_type(unexpected, expected).placed(self)
    }

    fn number<V: Visitor<'de>>(self, visitor: V) -> Result<V::Value, Misfit> {
        let Value::Number(number) = self.value else { return Err(self.misfit(&visitor)) };
        match (number.as_u64(), number.as_i64()) {
            (Some(whole), _) => visitor.visit_u64(whole),
            (None, Some(whole)) => visitor.visit_i64(whole),
            (None, None) => visitor.visit_f64(number.as_f64().unwrap_or_default()),
        }
    }

    fn list<V: Visitor<'de>>(self, visitor: V) -> Result<V::Value, Misfit> {
        let Value::Array(list) = self.value else { return Err(self.misfit(&visitor)) };
        let mut entries = Entries { list, next: 0, place: self.place };
        let read = visitor.visit_seq(&mut entries)?;
        if entries.next < list.len() { Err(Misfit::invalid_length(list.len(), &"a shorter list")) } else { Ok(read) }
    }

    fn fields<V: Visitor<'de>>(self, visitor: V) -> Result<V::Value, Misfit> {
        let Value::Object(fields) = self.value else { return Err(self.misfit(&visitor)) };
        visitor.visit_map(Fields { entries: fields.iter(), current: None, place: self.place })
    }

    fn text<V: Visitor<'de>>(self, visitor: V) -> Result<V::Value, Misfit> {
        let Value::String(text) = self.value else { return Err(self.misfit(&visitor)) };
        visitor.visit_borrowed_str(text)
    }
}

/// Sends the methods of a deserializer to one of the rules above.
macro_rules! read_as {
    ($rule:ident: $($method:ident)*) => {
        $(fn $method<V: Visitor<'de>>(self, visitor: V) -> Result<V::Value, Misfit> { self.$rule(visitor) })*
    };
}

impl<'de> Deserializer<'de> for At<'de, '_> {
    type Error = Misfit;

    fn deserialize_any<V: Visitor<'de>>(self, visitor: V) -> Result<V::Value, Misfit> {
        match self.value {
            Value::Null => visitor.visit_unit(),
            Value::Bool(value) => visitor.visit_bool(*value),
            Value::Number(_) => self.number(visitor),
            Value::String(_) => self.text(visitor),
            Value::Array(_) => self.list(visitor),
            Value::Object(_) => self.fields(visitor),
        }
    }

    fn deserialize_bool<V: Visitor<'de>>(self, visitor: V) -> Result<V::Value, Misfit> {
        let Value::Bool(value) = self.value else { return Err(self.misfit(&visitor)) };
        visitor.visit_bool(*value)
    }

    fn deserialize_option<V: Visitor<'de>>(self, visitor: V) -> Result<V::Value, Misfit> {
        if self.value.is_null() { visitor.visit_none() } else { visitor.visit_some(self) }
    }

    fn deserialize_ignored_any<V: Visitor<'de>>(self, visitor: V) -> Result<V::Value, Misfit> {
        visitor.visit_unit()
    }

    fn deserialize_newtype_struct<V: Visitor<'de>>(self, _: &'static str, visitor: V) -> Result<V::Value, Misfit> {
        visitor.visit_newtype_struct(self)
    }

    fn deserialize_struct<V: Visitor<'de>>(
        self,
        _: &'static str,
        _: &'static [&'static str],
        visitor: V,
    ) -> Result<V::Value, Misfit> {
        self.fields(visitor)
    }

    fn deserialize_tuple<V: Visitor<'de>>(self, _: usize, visitor: V) -> Result<V::Value, Misfit> {
        self.list(visitor)
    }

    /// Names only: no type of a visit is an enumeration that carries data and names its variant by a field.
    fn deserialize_enum<V: Visitor<'de>>(
        self,
        _: &'static str,
        _: &'static [&'static str],
        visitor: V,
    ) -> Result<V::Value, Misfit> {
        let Value::String(text) = self.value else { return Err(self.misfit(&"one of its names")) };
        let name: StrDeserializer<'_, Misfit> = text.as_str().into_deserializer();
        visitor.visit_enum(name)
    }

    read_as!(number: deserialize_i8 deserialize_i16 deserialize_i32 deserialize_i64 deserialize_u8 deserialize_u16
        deserialize_u32 deserialize_u64 deserialize_f32 deserialize_f64);
    read_as!(text: deserialize_char deserialize_str deserialize_string deserialize_identifier);
    read_as!(list: deserialize_seq);
    read_as!(fields: deserialize_map);
    forward_to_deserialize_any! { i128 u128 bytes byte_buf unit unit_struct tuple_struct }
}

struct Entries<'de, 'p> {
    list: &'de [Value],
    next: usize,
    place: Option<&'p Place<'p>>,
}

impl<'de> SeqAccess<'de> for Entries<'de, '_> {
    type Error = Misfit;

    fn next_element_seed<T: DeserializeSeed<'de>>(&mut self, seed: T) -> Result<Option<T::Value>, Misfit> {
        let Some(value) = self.list.get(self.next) else { return Ok(None) };
        let place = Place { within: self.place, step: Step::Entry(self.next) };
        self.next += 1;
        let at = At { value, place: Some(&place) };
        seed.deserialize(at).map(Some).map_err(|misfit| misfit.placed(at))
    }
}

struct Fields<'de, 'p> {
    entries: map::Iter<'de>,
    current: Option<(&'de str, &'de Value)>,
    place: Option<&'p Place<'p>>,
}

impl<'de> MapAccess<'de> for Fields<'de, '_> {
    type Error = Misfit;

    fn next_key_seed<K: DeserializeSeed<'de>>(&mut self, seed: K) -> Result<Option<K::Value>, Misfit> {
        self.current = self.entries.find(|(_, value)| !value.is_null()).map(|(name, value)| (name.as_str(), value));
        let Some((name, _)) = self.current else { return Ok(None) };
        let name: StrDeserializer<'_, Misfit> = name.into_deserializer();
        seed.deserialize(name).map(Some)
    }

    fn next_value_seed<T: DeserializeSeed<'de>>(&mut self, seed: T) -> Result<T::Value, Misfit> {
        let Some((name, value)) = self.current.take() else { return Err(Misfit::custom("a value without its name")) };
        let place = Place { within: self.place, step: Step::Field(name) };
        let at = At { value, place: Some(&place) };
        seed.deserialize(at).map_err(|misfit| misfit.placed(at))
    }
}
