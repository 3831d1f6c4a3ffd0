//! Why a command ends with status 2: one line for the person who typed it.

use bandleaf_core::problem::Problem;
use std::fmt;

/// One line that says what, where and what to do.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Refusal(String);

impl Refusal {
    /// A refusal in these words.
    pub fn new(sentence: impl Into<String>) -> Refusal {
        Refusal(sentence.into())
    }

    /// What is wrong with a file.
    pub fn of_file(name: &str, problem: &Problem) -> Refusal {
        Refusal(format!("{name}: {}", problem.sentence))
    }
}

impl fmt::Display for Refusal {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        // A name or text from outside may hold line ends; the refusal stays one line.
        for character in self.0.chars() {
            let shown = if character.is_control() { ' ' } else { character };
            write!(f, "{shown}")?;
        }
        Ok(())
    }
}
