//! Text to points: pasted cells and CSV, TSV or semicolon files, as they come.
//!
//! [`read_bytes`] and [`read_text`] never fail and never panic: what could be read is in [`Intake::points`], what could
//! not is in [`Intake::problems`] by row, column and reason, and what only the user can know is in
//! [`Intake::questions`]. While a question is open there are no points; each answer carries the [`Options`] to read the
//! same text again with.
//!
//! Nothing is guessed silently: a column whose every cell is "1,234" is asked about, and what was taken from its
//! position or by context is said in a note.

mod assign;
mod cells;
mod columns;
mod delimiter;
mod encoding;
mod header;
mod number;
mod options;
mod points;
mod refusal;
mod role;
mod table;
mod typed_cell;
mod unit;
mod wording;

pub use columns::Column;
pub use delimiter::Delimiter;
pub use encoding::Encoding;
pub use number::Decimal;
pub use options::{Choice, ColumnDecimal, ColumnKey, ColumnKeys, ColumnOptions, InfluenceColumns, Options, Question};
pub use points::{OneOrMany, Point, Typed};
pub use role::{Approach, Role, State};
pub use typed_cell::{Cell, parse_cell, parse_cell_with};

use bandleaf_core::problem::Problem;
use serde::Serialize;

/// Largest file or text that is read, in bytes.
pub const MOST_BYTES: usize = 64 * 1024 * 1024;

/// Most rows in [`Intake::rows`].
pub const MOST_PREVIEW_ROWS: usize = 200;

/// What was read, what was not, and what has to be asked.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Intake {
    /// How the text was stored.
    pub encoding: Encoding,
    /// What separates its cells; null where nothing was read.
    pub delimiter: Option<Delimiter>,
    /// Whether it has a heading.
    pub header: bool,
    /// Its columns.
    pub columns: Vec<Column>,
    /// The cells of the first rows of data, as typed.
    pub rows: Vec<Vec<String>>,
    /// Number of rows of data.
    pub row_count: usize,
    /// The points; none while a question is open.
    pub points: Vec<Point>,
    /// What could not be read, and what is worth knowing.
    pub problems: Vec<Problem>,
    /// What only the user can know.
    pub questions: Vec<Question>,
}

impl Intake {
    fn empty(encoding: Encoding) -> Intake {
        Intake {
            encoding,
            delimiter: None,
            header: false,
            columns: Vec::new(),
            rows: Vec::new(),
            row_count: 0,
            points: Vec::new(),
            problems: Vec::new(),
            questions: Vec::new(),
        }
    }
}

/// Reads a file: UTF-8, UTF-16 or Windows-1252 (Latin-1), with or without a byte-order mark; at most [`MOST_BYTES`].
pub fn read_bytes(bytes: &[u8], options: &Options) -> Intake {
    if bytes.len() > MOST_BYTES {
        return table::refused(Encoding::Utf8, table::too_large(bytes.len()));
    }
    let decoded = match encoding::decode(bytes) {
        Ok(decoded) => decoded,
        Err(problem) => return table::refused(Encoding::Utf8, problem),
    };
    let mut intake = table::read(&decoded.text, decoded.encoding, options);
    if decoded.damaged {
        intake.problems.insert(
            0,
            Problem::warning(
                "text_damaged",
                "",
                "Some characters of this file are damaged and are shown as \u{FFFD}; check the cells, or save it again as UTF-8.",
            ),
        );
    }
    intake
}

/// Reads a pasted text; at most [`MOST_BYTES`].
pub fn read_text(text: &str, options: &Options) -> Intake {
    if text.len() > MOST_BYTES {
        return table::refused(Encoding::Text, table::too_large(text.len()));
    }
    table::read(text.trim_start_matches('\u{FEFF}'), Encoding::Text, options)
}
