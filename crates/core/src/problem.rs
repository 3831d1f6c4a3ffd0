//! What is wrong with an input, said so that a technician can act on it: a code for programs, a place, a sentence.
//!
//! Every message carries `code` and `args` beside its English sentence, so that another language or a test need not
//! read English.

use serde::{Deserialize, Serialize};
use std::collections::BTreeMap;
use std::fmt;

/// How much a message matters.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum Level {
    /// Worth knowing.
    Note,
    /// The result stands, with a reservation.
    Warning,
    /// This part could not be computed.
    Error,
}

/// An argument of a message: a number or a text.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(untagged)]
pub enum Argument {
    /// A finite number.
    Number(f64),
    /// Anything else.
    Text(String),
}

impl From<f64> for Argument {
    fn from(value: f64) -> Argument {
        if value.is_finite() { Argument::Number(value) } else { Argument::Text(value.to_string()) }
    }
}

impl From<usize> for Argument {
    fn from(value: usize) -> Argument {
        Argument::Number(value as f64)
    }
}

impl From<&str> for Argument {
    fn from(value: &str) -> Argument {
        Argument::Text(value.to_owned())
    }
}

impl From<String> for Argument {
    fn from(value: String) -> Argument {
        Argument::Text(value)
    }
}

/// One message about a visit: what, where, and what to do.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct Problem {
    /// How much it matters.
    pub level: Level,
    /// A stable name for programs, in snake_case.
    pub code: String,
    /// The quantities in the sentence, by name.
    pub args: BTreeMap<String, Argument>,
    /// The place in the visit, as a path with indices from 0: `points[6].indication`. Empty: the visit as a whole.
    pub place: String,
    /// One plain English sentence with place and remedy.
    pub sentence: String,
}

impl Problem {
    /// A message of any level.
    pub fn new(level: Level, code: &str, place: impl Into<String>, sentence: impl Into<String>) -> Problem {
        Problem { level, code: code.to_owned(), args: BTreeMap::new(), place: place.into(), sentence: sentence.into() }
    }

    /// Something that could not be computed or used.
    pub fn error(code: &str, place: impl Into<String>, sentence: impl Into<String>) -> Problem {
        Problem::new(Level::Error, code, place, sentence)
    }

    /// A reservation.
    pub fn warning(code: &str, place: impl Into<String>, sentence: impl Into<String>) -> Problem {
        Problem::new(Level::Warning, code, place, sentence)
    }

    /// Something worth knowing.
    pub fn note(code: &str, place: impl Into<String>, sentence: impl Into<String>) -> Problem {
        Problem::new(Level::Note, code, place, sentence)
    }

    /// The same message with one more argument.
    pub fn with(mut self, name: &str, value: impl Into<Argument>) -> Problem {
        self.args.insert(name.to_owned(), value.into());
        self
    }
}

impl fmt::Display for Problem {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(&self.sentence)
    }
}

impl std::error::Error for Problem {}
