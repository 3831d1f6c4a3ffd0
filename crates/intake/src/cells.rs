//! From text to rows of cells.
//!
//! Rows are numbered as an editor or a spreadsheet numbers them: from 1, empty rows included, a cell with line breaks
//! inside quotation marks counting as one row.

use crate::delimiter::Delimiter;
use crate::number::trimmed;
use bandleaf_core::problem::Problem;
use csv::{ReaderBuilder, StringRecord};
use std::borrow::Cow;

/// Most cells that are taken apart: far more than any table of check points, few enough for a browser's memory.
const MOST_CELLS: usize = 4_000_000;

/// Most cells in one row.
const MOST_CELLS_A_ROW: usize = 1_000;

/// A row that is not empty.
#[derive(Clone, Debug, PartialEq)]
pub(crate) struct Row {
    /// From 1.
    pub number: usize,
    cells: StringRecord,
    first: usize,
    len: usize,
}

impl Row {
    fn new(number: usize, cells: StringRecord) -> Row {
        let filled = |(index, cell): (usize, &str)| (!trimmed(cell).is_empty()).then_some(index + 1);
        let len = cells.iter().enumerate().filter_map(filled).last().unwrap_or(0);
        Row { number, cells, first: 0, len }
    }

    /// The text of a cell without the spaces around it; empty where the row is shorter.
    pub(crate) fn cell(&self, index: usize) -> &str {
        let text = trimmed(self.cells.get(self.first + index).unwrap_or(""));
        match text.strip_prefix('"').and_then(|rest| rest.strip_suffix('"')) {
            Some(inside) => trimmed(inside),
            None => text,
        }
    }

    /// Number of cells up to the last that is not empty.
    pub(crate) fn len(&self) -> usize {
        self.len
    }

    /// All cells up to the last that is not empty.
    pub(crate) fn iter(&self) -> impl Iterator<Item = &str> {
        (0..self.len).map(|index| self.cell(index))
    }

    /// The row without its first cell.
    pub(crate) fn drop_first(&mut self) {
        self.first += 1;
        self.len = self.len.saturating_sub(1);
    }

    pub(crate) fn has_same_cells(&self, other: &Row) -> bool {
        self.len == other.len && self.iter().eq(other.iter())
    }
}

/// The rows of a text that are not empty.
#[derive(Clone, Debug, Default)]
pub(crate) struct Rows {
    pub rows: Vec<Row>,
    /// There were more rows than were asked for.
    pub cut: bool,
    /// A quotation mark was never closed, so that they were taken as ordinary characters.
    pub quotes_ignored: bool,
}

/// The same text with LF at every line end.
pub(crate) fn with_line_feeds(text: &str) -> Cow<'_, str> {
    if text.contains('\r') { Cow::Owned(text.replace("\r\n", "\n").replace('\r', "\n")) } else { Cow::Borrowed(text) }
}

/// At most `most` rows of a text whose line ends are LF.
pub(crate) fn rows(text: &str, delimiter: Delimiter, most: usize) -> Result<Rows, Problem> {
    let Some(separator) = delimiter.byte() else {
        return lines(text, delimiter, most);
    };
    if let Some(line) = text.split('\n').position(|line| is_too_wide(line, separator)) {
        return Err(too_wide(line + 1));
    }
    let rows = records(text, separator, most, true)?;
    let swallowed = text.bytes().filter(|byte| *byte == b'"').count() % 2 == 1
        && rows.rows.last().is_some_and(|row| row.iter().any(|cell| cell.contains('\n')));
    if swallowed {
        let unquoted = records(text, separator, most, false)?;
        return Ok(Rows { quotes_ignored: true, ..unquoted });
    }
    Ok(rows)
}

fn records(text: &str, separator: u8, most: usize, quoting: bool) -> Result<Rows, Problem> {
    let mut reader = ReaderBuilder::new()
        .has_headers(false)
        .flexible(true)
        .delimiter(separator)
        .quoting(quoting)
        .from_reader(text.as_bytes());
    let mut found = Collector::new(most);
    let mut record = StringRecord::new();
    let mut number = 0;
    loop {
        // The reader passes over empty lines without counting them.
        let start = usize::try_from(reader.position().byte()).unwrap_or(text.len());
        let rest = text.as_bytes().get(start..).unwrap_or(&[]);
        number += 1 + rest.iter().take_while(|byte| **byte == b'\n').count();
        match reader.read_record(&mut record) {
            Ok(true) => {}
            Ok(false) => return Ok(found.rows),
            Err(error) => {
                return Err(Problem::error(
                    "row_unreadable",
                    format!("row {number}"),
                    format!("Row {number}: {error}."),
                ));
            }
        }
        if !found.add(number, record.clone())? {
            return Ok(found.rows);
        }
    }
}

/// Rows of texts whose cells are separated by spaces, or that have one cell a row.
fn lines(text: &str, delimiter: Delimiter, most: usize) -> Result<Rows, Problem> {
    let mut found = Collector::new(most);
    let enough = MOST_CELLS_A_ROW + 1;
    for (index, line) in text.split('\n').enumerate() {
        let cells: StringRecord = match delimiter {
            Delimiter::Space => line.split([' ', '\t']).filter(|cell| !cell.is_empty()).take(enough).collect(),
            Delimiter::WideSpace => line
                .split("  ")
                .flat_map(|part| part.split('\t'))
                .map(trimmed)
                .filter(|cell| !cell.is_empty())
                .take(enough)
                .collect(),
            _ => std::iter::once(line).collect(),
        };
        if cells.len() > MOST_CELLS_A_ROW {
            return Err(too_wide(index + 1));
        }
        if !found.add(index + 1, cells)? {
            break;
        }
    }
    Ok(found.rows)
}

struct Collector {
    rows: Rows,
    most: usize,
    cells: usize,
}

impl Collector {
    fn new(most: usize) -> Collector {
        Collector { rows: Rows::default(), most, cells: 0 }
    }

    /// Keeps a row that is not empty; false where there is no room for it.
    fn add(&mut self, number: usize, cells: StringRecord) -> Result<bool, Problem> {
        let count = cells.len();
        let row = Row::new(number, cells);
        if row.len() == 0 {
            return Ok(true);
        }
        self.cells += count;
        if self.cells > MOST_CELLS {
            return Err(Problem::error(
                "too_many_cells",
                format!("row {number}"),
                format!(
                    "At row {number} the table has more than {MOST_CELLS} cells; keep only the columns that are needed."
                ),
            )
            .with("row", number)
            .with("most", MOST_CELLS));
        }
        if self.rows.rows.len() == self.most {
            self.rows.cut = true;
            return Ok(false);
        }
        self.rows.rows.push(row);
        Ok(true)
    }
}

/// Counts separators outside of quotation marks, so that a long note in a cell does no harm.
fn is_too_wide(line: &str, separator: u8) -> bool {
    let mut quoted = false;
    let separates = |byte: &u8| {
        quoted ^= *byte == b'"';
        !quoted && *byte == separator
    };
    line.len() > MOST_CELLS_A_ROW && line.as_bytes().iter().copied().filter(separates).count() > MOST_CELLS_A_ROW
}

fn too_wide(row: usize) -> Problem {
    Problem::error(
        "too_many_columns",
        format!("row {row}"),
        format!("Row {row} has more than {MOST_CELLS_A_ROW} cells; keep only the columns that are needed."),
    )
    .with("row", row)
    .with("most", MOST_CELLS_A_ROW)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn read(text: &str, delimiter: Delimiter) -> Vec<(usize, Vec<String>)> {
        let rows = rows(&with_line_feeds(text), delimiter, 1000).expect("rows");
        rows.rows.iter().map(|row| (row.number, row.iter().map(str::to_owned).collect())).collect()
    }

    fn row(number: usize, cells: &[&str]) -> (usize, Vec<String>) {
        (number, cells.iter().map(|cell| (*cell).to_owned()).collect())
    }

    #[test]
    fn rows_are_numbered_as_an_editor_does_at_every_line_end() {
        for end in ["\n", "\r\n", "\r"] {
            let text = ["a;b", "", "", "1;2", ";", "3;\"4\"", "5;6;;", ""].join(end);
            let expected = [row(1, &["a", "b"]), row(4, &["1", "2"]), row(6, &["3", "4"]), row(7, &["5", "6"])];
            assert_eq!(read(&text, Delimiter::Semicolon), expected, "{end:?}");
        }
    }

    #[test]
    fn quoted_cells_hold_separators_quotes_and_line_breaks() {
        let expected = [row(1, &["1,5", "say \"hm\"\nand on"]), row(2, &["2", "x"])];
        assert_eq!(read("\"1,5\",\"say \"\"hm\"\"\nand on\"\n2,x\n", Delimiter::Comma), expected);
    }

    #[test]
    fn a_quotation_mark_that_is_never_closed_swallows_nothing() {
        let found = rows("1;2;\"dip\n3;4;\n5;6;\n", Delimiter::Semicolon, 1000).expect("rows");
        assert!(found.quotes_ignored);
        assert_eq!(found.rows.len(), 3);
    }

    #[test]
    fn spaces_separate() {
        assert_eq!(
            read("   0.1     0.2\n\n 338.8   337.4 \n", Delimiter::Space),
            [row(1, &["0.1", "0.2"]), row(3, &["338.8", "337.4"])]
        );
        assert_eq!(read("1 234,5   1 300,2\n", Delimiter::WideSpace), [row(1, &["1 234,5", "1 300,2"])]);
    }

    #[test]
    fn too_many_cells_are_refused_before_they_fill_the_memory() {
        let wide = ",".repeat(5000);
        assert_eq!(rows(&wide, Delimiter::Comma, 10).expect_err("wide").code, "too_many_columns");
        let note = format!("1,2,\"{}\"\n", wide);
        assert_eq!(rows(&note, Delimiter::Comma, 10).expect("a long note").rows.len(), 1);
        let spaced = "1 ".repeat(5000);
        assert_eq!(rows(&spaced, Delimiter::Space, 10).expect_err("wide").code, "too_many_columns");
    }
}
