//! What separates the cells of a text.
//!
//! Each candidate takes the first rows apart; the one under which the largest share of the cells are numbers is taken.
//! Where two ways are equally good ("1,5" in every row: one column with a decimal comma, or two columns?) it asks.

use crate::cells::{Row, rows};
use crate::number::{Scan, scan};
use crate::refusal::Refusal;
use serde::{Deserialize, Serialize};
use std::collections::BTreeMap;

/// What separates the cells.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum Delimiter {
    /// Tabulator: cells copied from a spreadsheet.
    Tab,
    /// `;`
    Semicolon,
    /// `,`
    Comma,
    /// `|`
    Bar,
    /// Two spaces or more; single spaces belong to the cell.
    WideSpace,
    /// Any spaces.
    Space,
    /// Nothing: one cell a row.
    None,
}

/// In order of preference where two are equally good.
const CANDIDATES: [Delimiter; 6] =
    [Delimiter::Tab, Delimiter::Semicolon, Delimiter::Bar, Delimiter::Comma, Delimiter::WideSpace, Delimiter::Space];

/// Length of the beginning of the text by which the delimiter is chosen.
const SAMPLE_BYTES: usize = 32 * 1024;

/// Most rows of that.
const SAMPLE_ROWS: usize = 200;

impl Delimiter {
    /// The single byte that separates; `None` for spaces and nothing.
    pub(crate) fn byte(self) -> Option<u8> {
        match self {
            Delimiter::Tab => Some(b'\t'),
            Delimiter::Semicolon => Some(b';'),
            Delimiter::Comma => Some(b','),
            Delimiter::Bar => Some(b'|'),
            Delimiter::WideSpace | Delimiter::Space | Delimiter::None => None,
        }
    }

    /// For sentences.
    pub(crate) fn words(self) -> &'static str {
        match self {
            Delimiter::Tab => "tabs",
            Delimiter::Semicolon => "semicolons",
            Delimiter::Comma => "commas",
            Delimiter::Bar => "vertical bars",
            Delimiter::WideSpace => "two or more spaces",
            Delimiter::Space => "spaces",
            Delimiter::None => "nothing: one cell a row",
        }
    }
}

/// The delimiter of a text, and another one that would do as well.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(crate) struct Choice {
    pub delimiter: Delimiter,
    pub rival: Option<Delimiter>,
}

/// A first line `sep=;` that names the delimiter, and the length of that line.
pub(crate) fn declared(text: &str) -> Option<(Delimiter, usize)> {
    let line = text.split('\n').next()?;
    let mark = line.trim_matches('"').strip_prefix("sep=")?;
    let delimiter =
        CANDIDATES.into_iter().find(|candidate| candidate.byte().is_some_and(|byte| mark.as_bytes() == [byte]))?;
    Some((delimiter, line.len()))
}

/// Chooses by the beginning of a text whose line ends are LF.
pub(crate) fn choose(text: &str) -> Choice {
    let sample = beginning(text);
    let lines: Vec<&str> = sample.split('\n').filter(|line| !line.trim().is_empty()).take(SAMPLE_ROWS).collect();
    if !lines.is_empty() && lines.iter().filter(|line| line.contains('\t')).count() * 5 >= lines.len() * 4 {
        return Choice { delimiter: Delimiter::Tab, rival: None };
    }
    let trials: Vec<Trial> = CANDIDATES.into_iter().filter_map(|candidate| Trial::of(sample, candidate)).collect();
    let first_best = trials.iter().reduce(|best, trial| if trial.score > best.score { trial } else { best });
    let Some(best) = first_best else {
        // What is too wide for every trial is told apart by the one that says so.
        let too_wide = CANDIDATES.into_iter().find(|candidate| rows(sample, *candidate, SAMPLE_ROWS).is_err());
        return Choice { delimiter: too_wide.unwrap_or(Delimiter::None), rival: None };
    };
    // "150,5 151,5": divided at commas there would be a "5 151" in every row.
    let best = trials.iter().find(|trial| trial.score == best.score && trial.has_decimal_commas()).unwrap_or(best);
    Choice { delimiter: best.delimiter, rival: rival(best, &trials, &lines) }
}

/// Whole lines of the beginning of the text, empty ones in front left out.
fn beginning(text: &str) -> &str {
    let text = text.trim_start_matches('\n');
    if text.len() <= SAMPLE_BYTES {
        return text;
    }
    // A character has at most four bytes, so that one of these four places is between two.
    let start = (0..4).find_map(|back| text.get(..SAMPLE_BYTES - back)).unwrap_or(text);
    start.rfind('\n').and_then(|last| start.get(..last)).unwrap_or(start)
}

/// A text taken apart by one candidate.
struct Trial {
    delimiter: Delimiter,
    rows: Vec<Row>,
    /// Cells in most rows.
    width: usize,
    /// Share of the cells that are numbers in rows of that width.
    score: f64,
}

impl Trial {
    /// `None` where this does not separate anything.
    fn of(sample: &str, delimiter: Delimiter) -> Option<Trial> {
        let rows = rows(sample, delimiter, SAMPLE_ROWS).ok()?.rows;
        let width = usual_width(&rows);
        let even = rows.iter().all(|row| row.len() == width);
        if width < 2 || (delimiter == Delimiter::WideSpace && !even) {
            return None;
        }
        let cells = rows.iter().map(Row::len).sum::<usize>();
        let numbers: usize = rows
            .iter()
            .filter(|row| row.len() <= width)
            .map(|row| row.iter().filter(|cell| cell.is_empty() || is_nearly_number(cell)).count())
            .sum();
        let score = numbers as f64 / cells as f64;
        Some(Trial { delimiter, rows, width, score })
    }

    /// Two columns divided by spaces, a comma in every number.
    fn has_decimal_commas(&self) -> bool {
        let mut numbers = self.rows.iter().flat_map(Row::iter).filter(|cell| scan(cell, None).is_number()).peekable();
        matches!(self.delimiter, Delimiter::Space | Delimiter::WideSpace)
            && self.width == 2
            && numbers.peek().is_some()
            && numbers.all(|cell| cell.contains(','))
    }

    /// A row of words in front that is divided as the others are.
    fn has_heading(&self) -> bool {
        self.rows
            .first()
            .is_some_and(|row| row.len() == self.width && !row.iter().any(|cell| scan(cell, None).is_number()))
    }
}

/// The most frequent number of cells in a row; the larger of two that are equally frequent.
pub(crate) fn usual_width(rows: &[Row]) -> usize {
    let mut counts: BTreeMap<usize, usize> = BTreeMap::new();
    for row in rows {
        *counts.entry(row.len()).or_default() += 1;
    }
    counts.into_iter().max_by_key(|(width, count)| (*count, *width)).map_or(0, |(width, _)| width)
}

/// A number, or one followed by a word, perhaps a unit that is not known here.
fn is_nearly_number(cell: &str) -> bool {
    match scan(cell, None) {
        Scan::Number(_) => true,
        Scan::Refused(Refusal::Extra(extra)) => {
            extra.chars().all(|character| character.is_alphabetic() || character == ' ') && cell.ends_with(&extra)
        }
        _ => false,
    }
}

/// Another way to divide the text that is as good as the best one.
fn rival(best: &Trial, trials: &[Trial], lines: &[&str]) -> Option<Delimiter> {
    if best.delimiter == Delimiter::Comma {
        let spaces = |trial: &&Trial| matches!(trial.delimiter, Delimiter::Space | Delimiter::WideSpace);
        if let Some(other) = trials.iter().filter(spaces).find(|trial| trial.score == best.score && best.score > 0.0) {
            return Some(other.delimiter);
        }
    }
    let divides_numbers = matches!(best.delimiter, Delimiter::Comma | Delimiter::Space);
    let whole = |line: &&&str| scan(line, None).is_number();
    let data = lines.iter().skip_while(|line| !whole(line));
    let mut data = data.peekable();
    let one_column = data.peek().is_some() && data.all(|line| whole(&line));
    (divides_numbers && one_column && !best.has_heading()).then_some(Delimiter::None)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_delimiter_under_which_cells_are_numbers_is_taken() {
        let cases = [
            ("a\tb\n1,5\t2,5\n", Delimiter::Tab),
            ("1 234,5;2,5\n3,5;4,5\n", Delimiter::Semicolon),
            ("x,y\n0.2,0.1\n337.4,338.8\n", Delimiter::Comma),
            ("1.5, 2.5\n3.5, 4.5\n", Delimiter::Comma),
            ("   0.1     0.2\n 338.8   337.4\n", Delimiter::WideSpace),
            ("0.1 0.2\n338.8 337.4\n", Delimiter::Space),
            ("150,5 151,5\n400,5 402,0\n", Delimiter::Space),
            ("1 234,5   1 300,2\n2 000,0   2 100,1\n", Delimiter::WideSpace),
            ("P1;151 furlongs;152 furlongs\nP2;153 furlongs;154 furlongs\n", Delimiter::Semicolon),
            ("no,reference,reading,who\n1,150.0,151.0,J. Bloggs\n2,400.0,402.0,J. Bloggs\n", Delimiter::Comma),
            ("1|2\n3|4\n", Delimiter::Bar),
            ("level\n1.5\n2.5\n", Delimiter::None),
        ];
        for (text, expected) in cases {
            assert_eq!(choose(text), Choice { delimiter: expected, rival: None }, "{text:?}");
        }
    }

    #[test]
    fn equally_good_ways_are_both_told() {
        let cases = [
            ("1,5\n2,5\n", Delimiter::Comma, Delimiter::None),
            ("1 234\n1 300\n", Delimiter::Space, Delimiter::None),
            ("1 234,1 300\n2 000,2 100\n", Delimiter::Comma, Delimiter::Space),
        ];
        for (text, delimiter, rival) in cases {
            assert_eq!(choose(text), Choice { delimiter, rival: Some(rival) }, "{text:?}");
        }
        assert_eq!(choose("x,y\n1,5\n2,5\n").rival, None);
        assert_eq!(declared("sep=;\n1;2"), Some((Delimiter::Semicolon, 5)));
    }
}
