//! The heading: which row it is, and the names and units in it.

use crate::cells::Row;
use crate::delimiter::usual_width;
use crate::number::{scan, trimmed};
use crate::role::{Meaning, Role, understand};
use crate::unit::is_unit;

/// How far down a heading is looked for.
const DEEPEST: usize = 60;

/// A column's heading.
#[derive(Clone, Debug, Default, PartialEq)]
pub(crate) struct Heading {
    pub name: String,
    pub unit: Option<String>,
}

/// The table's parts.
#[derive(Clone, Debug, Default)]
pub(crate) struct Layout {
    /// Rows above the heading.
    pub above: Vec<Row>,
    /// One for each column; `None` without a heading.
    pub headings: Option<Vec<Heading>>,
    /// The heading again, further down.
    pub repeated: Vec<usize>,
    pub data: Vec<Row>,
    /// Number of columns.
    pub width: usize,
}

/// Finds the heading, unless it is told whether there is one (then it is the first row).
pub(crate) fn layout(mut rows: Vec<Row>, header: Option<bool>) -> Layout {
    let width = usual_width(&rows);
    let at = match header {
        Some(true) => Some(0),
        Some(false) => None,
        None => find(&rows, width),
    };
    let Some(at) = at.filter(|at| *at < rows.len()) else {
        return Layout { data: rows, width, ..Layout::default() };
    };
    let mut data = rows.split_off(at);
    let mut heading = data.remove(0);
    // Printed tables may begin their heading with a label: "Data:  y  x".
    if heading.len() == width + 1 && heading.cell(0).ends_with(':') {
        heading.drop_first();
    }
    let mut headings: Vec<Heading> = heading.iter().map(split_unit).collect();
    if data.first().is_some_and(is_row_of_units) {
        let units = data.remove(0);
        for (heading, unit) in headings.iter_mut().zip(units.iter()) {
            if !unit.is_empty() {
                heading.unit = Some(without_brackets(unit).to_owned());
            }
        }
    }
    let repeated = data.iter().filter(|row| row.has_same_cells(&heading)).map(|row| row.number).collect();
    data.retain(|row| !row.has_same_cells(&heading));
    let width = headings.len();
    Layout { above: rows, headings: Some(headings), repeated, data, width }
}

/// The row whose names say what the columns are, or the row of words right above the first row of numbers.
fn find(rows: &[Row], width: usize) -> Option<usize> {
    let beginning = rows.get(..rows.len().min(DEEPEST))?;
    if beginning.first().is_some_and(is_row_with_counted_repeats) {
        return Some(0);
    }
    let candidate = |row: &Row| is_row_of_words(row) && row.len() >= width.min(2);
    let says = |row: &Row| {
        let known =
            row.iter().filter(|cell| !matches!(understand(&split_unit(cell).name).meaning, Meaning::Unknown)).count();
        known >= width.min(2) && row.iter().filter(|cell| !cell.is_empty()).count() >= width.min(2)
    };
    let first_with = |least: usize| beginning.iter().position(|row| row.len() <= width && numbers(row) >= least);
    let first_numbers = first_with(width.min(2));
    let above_numbers = beginning.get(..first_numbers.unwrap_or(beginning.len()))?;
    if let Some(named) = above_numbers.iter().position(|row| candidate(row) && says(row)) {
        return Some(named);
    }
    [first_numbers, first_with(1)].into_iter().flatten().find_map(|first| {
        let above = beginning.get(..first)?;
        let units = above.last().is_some_and(is_row_of_units) && above.len() > 1;
        let at = first.checked_sub(if units { 2 } else { 1 })?;
        above.get(at).is_some_and(candidate).then_some(at)
    })
}

fn numbers(row: &Row) -> usize {
    row.iter().filter(|cell| scan(cell, None).is_number()).count()
}

/// Names, none of them a number or a sign for "no value".
fn is_row_of_words(row: &Row) -> bool {
    let is_word = |cell: &str| {
        !scan(cell, None).is_number()
            && crate::refusal::of_marker(cell).is_none_or(|_| cell == "#")
            && !crate::refusal::is_date_or_time(cell)
    };
    row.iter().all(|cell| cell.is_empty() || is_word(cell))
        && row.iter().any(|cell| cell.chars().any(char::is_alphabetic))
}

/// "reference; 1; 2; 3": names, and the repeats counted.
fn is_row_with_counted_repeats(row: &Row) -> bool {
    let (counted, named): (Vec<&str>, Vec<&str>) =
        row.iter().filter(|cell| !cell.is_empty()).partition(|cell| cell.bytes().all(|byte| byte.is_ascii_digit()));
    let says_reference =
        |name: &&str| matches!(understand(&split_unit(name).name).meaning, Meaning::Is(Role::Reference, _));
    counted.len() > 1
        && counted.iter().enumerate().all(|(index, cell)| **cell == (index + 1).to_string())
        && named.iter().any(says_reference)
}

fn is_row_of_units(row: &Row) -> bool {
    row.iter().all(|cell| cell.is_empty() || is_unit(without_brackets(cell)) || cell == "-" || is_bracketed(cell))
        && row.iter().any(|cell| is_unit(without_brackets(cell)))
}

fn is_bracketed(text: &str) -> bool {
    text.starts_with('[') && text.ends_with(']')
}

fn without_brackets(text: &str) -> &str {
    let inside = |open: char, close: char| text.strip_prefix(open).and_then(|rest| rest.strip_suffix(close));
    trimmed(inside('[', ']').or_else(|| inside('(', ')')).unwrap_or(text))
}

/// Name and unit of a heading: `level / mm`, `level [mm]`, `level (mm)`, `level in mm`, `level, mm`.
///
/// In square brackets everything is a unit; elsewhere only what is known as one, so that "reference (dip tape)" and
/// "up/down" stay whole.
pub(crate) fn split_unit(heading: &str) -> Heading {
    let heading = trimmed(heading);
    let whole = || Heading { name: heading.split_whitespace().collect::<Vec<_>>().join(" "), unit: None };
    let parted = |name: &str, unit: &str| Heading {
        name: trimmed(name).trim_end_matches('/').split_whitespace().collect::<Vec<_>>().join(" "),
        unit: Some(without_brackets(trimmed(unit))).filter(|unit| !unit.is_empty() && *unit != "-").map(str::to_owned),
    };
    let bracketed = |open: char, close: char| heading.strip_suffix(close).and_then(|rest| rest.rsplit_once(open));
    if let Some((name, unit)) = bracketed('[', ']') {
        return parted(name, unit);
    }
    if let Some((name, unit)) = bracketed('(', ')').filter(|(_, unit)| is_unit(unit)) {
        return parted(name, unit);
    }
    if let Some((name, unit)) =
        heading.split_once('/').filter(|(name, unit)| !trimmed(name).is_empty() && is_slash_unit(name, unit))
    {
        return parted(name, unit);
    }
    for mark in [" in ", ", "] {
        if let Some((name, unit)) = heading.rsplit_once(mark).filter(|(_, unit)| is_unit(unit)) {
            return parted(name, unit);
        }
    }
    whole()
}

/// What stands after `name /`: a known unit, or between spaces one word that is no role.
fn is_slash_unit(name: &str, unit: &str) -> bool {
    let spaced = name.ends_with(char::is_whitespace) && unit.starts_with(char::is_whitespace);
    let word = trimmed(unit);
    let unit_in_brackets = without_brackets(word);
    (is_unit(unit_in_brackets) && !is_unit(trimmed(name)))
        || (spaced
            && !word.is_empty()
            && !word.contains(' ')
            && word.chars().count() <= 12
            && understand(word).meaning == Meaning::Unknown)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::cells::rows;
    use crate::delimiter::Delimiter;

    #[test]
    fn units_in_headings() {
        let cases = [
            ("level / mm", "level", Some("mm")),
            ("level/mm", "level", Some("mm")),
            ("level [mm]", "level", Some("mm")),
            ("level (mm)", "level", Some("mm")),
            ("level in mm", "level", Some("mm")),
            ("output, mA", "output", Some("mA")),
            ("flow / (m³/h)", "flow", Some("m³/h")),
            ("flow [m³/h]", "flow", Some("m³/h")),
            ("flow / m³/h", "flow", Some("m³/h")),
            ("length / furlong", "length", Some("furlong")),
            ("reference (dip tape)", "reference (dip tape)", None),
            ("up/down", "up/down", None),
            ("reading / standard", "reading / standard", None),
            ("ratio [-]", "ratio", None),
            ("  spaced   out ", "spaced out", None),
        ];
        for (heading, name, unit) in cases {
            let expected = Heading { name: name.to_owned(), unit: unit.map(str::to_owned) };
            assert_eq!(split_unit(heading), expected, "{heading}");
        }
    }

    fn laid_out(text: &str) -> Layout {
        layout(rows(text, Delimiter::Semicolon, 1000).expect("rows").rows, None)
    }

    #[test]
    fn the_heading_is_found() {
        // rows above, names, data rows
        let cases: [(&str, usize, Option<&[&str]>, usize); 9] = [
            ("reference;1;2\n10;10,1;10,2\n", 0, Some(&["reference", "1", "2"]), 1),
            ("reference;indication\n1;2\n3;4\n", 0, Some(&["reference", "indication"]), 2),
            ("1;2\n3;4\n", 0, None, 2),
            ("A;B\n1;2\n", 0, Some(&["A", "B"]), 1),
            (
                "Logger 7;;\nSerial;12345\nreference;reading;note\n1;2;\n3;4;wet\n",
                2,
                Some(&["reference", "reading", "note"]),
                2,
            ),
            ("reference;reading\nmm;mA\n0;4\n100;20\n", 0, Some(&["reference", "reading"]), 2),
            ("n/a;n/a\n1;2\n3;4\n", 0, None, 3),
            ("x;y\n1;2\nx;y\n3;4\n", 0, Some(&["x", "y"]), 2),
            ("reference;reading\n", 0, Some(&["reference", "reading"]), 0),
        ];
        for (text, above, names, data) in cases {
            let found = laid_out(text);
            let found_names: Option<Vec<&str>> =
                found.headings.as_ref().map(|headings| headings.iter().map(|heading| heading.name.as_str()).collect());
            assert_eq!(
                (found.above.len(), found_names, found.data.len()),
                (above, names.map(<[&str]>::to_vec), data),
                "{text:?}"
            );
        }
        let units = laid_out("reference;reading\nmm;mA\n0;4\n").headings.expect("headings");
        assert_eq!(units.iter().map(|heading| heading.unit.as_deref()).collect::<Vec<_>>(), [Some("mm"), Some("mA")]);
    }
}
