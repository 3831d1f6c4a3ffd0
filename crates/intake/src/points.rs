//! From rows to points of a visit, with every cell that could not be read.

use crate::cells::Row;
use crate::columns::Reader;
use crate::delimiter::Delimiter;
use crate::number::scan;
use crate::role::{Approach, Role, State, approach_of, state_of};
use crate::wording::{capital, quoted, shortened};
use bandleaf_core::problem::Problem;
use serde::Serialize;
use std::collections::BTreeMap;

/// Most problems that are listed one by one.
const MOST_PROBLEMS: usize = 1_000;

/// One, or the list of raw repeats.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[serde(untagged)]
pub enum OneOrMany<T> {
    /// A single one.
    One(T),
    /// Raw repeats in the order of the columns.
    Many(Vec<T>),
}

/// A point as a visit holds it, with the text of its numbers. What the table does not hold is left out, but reference
/// and indication are `null` where they could not be read.
#[derive(Clone, Debug, Default, PartialEq, Serialize)]
pub struct Point {
    /// Value of the measurement standard.
    pub reference: Option<f64>,
    /// What the instrument showed.
    pub indication: Option<OneOrMany<f64>>,
    /// As found or as left.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub state: Option<State>,
    /// Standard uncertainty of the reference value, independent from point to point.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub reference_uncertainty: Option<f64>,
    /// Known standard uncertainty of the indication.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub indication_uncertainty: Option<f64>,
    /// Standard uncertainty of the error that the points of one setting share.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub setting_uncertainty: Option<f64>,
    /// Number of indications of which only the mean is known.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub repeats: Option<f64>,
    /// Influence quantities by name.
    #[serde(skip_serializing_if = "BTreeMap::is_empty")]
    pub influences: BTreeMap<String, f64>,
    /// Direction of approach.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub approach: Option<Approach>,
    /// When it was taken, as written.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub time: Option<String>,
    /// Free text.
    #[serde(skip_serializing_if = "String::is_empty")]
    pub note: String,
    /// The numbers as they were typed, whether they could be read or not: trailing zeros carry the resolution.
    pub typed: Typed,
}

/// The texts of a point's numbers.
#[derive(Clone, Debug, Default, PartialEq, Serialize)]
pub struct Typed {
    /// Of the reference value.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub reference: Option<String>,
    /// Of the indications; a list where there are several columns, with an empty text for an empty cell.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub indication: Option<OneOrMany<String>>,
    /// Of the uncertainties and the number of repeats, by field.
    #[serde(skip_serializing_if = "BTreeMap::is_empty")]
    pub others: BTreeMap<String, String>,
    /// Of the influence quantities, by name.
    #[serde(skip_serializing_if = "BTreeMap::is_empty")]
    pub influences: BTreeMap<String, String>,
}

/// Columns of indications that belong to one point: repeats of the same state and direction.
struct Series<'a> {
    state: Option<State>,
    approach: Option<Approach>,
    readers: Vec<&'a Reader>,
}

/// Reads all rows.
pub(crate) fn read(rows: &[Row], readers: &[Reader], width: usize, delimiter: Delimiter) -> (Vec<Point>, Vec<Problem>) {
    let mut work = Work { readers, width, delimiter, problems: Vec::new(), unlisted: 0 };
    let series = work.series();
    let mut points = Vec::with_capacity(rows.len());
    for row in rows {
        work.row(row, &series, &mut points);
    }
    if work.unlisted > 0 {
        let sentence = format!("{} more cells or rows have problems that are not listed here.", work.unlisted);
        work.problems.push(Problem::warning("more_problems", "", sentence).with("count", work.unlisted));
    }
    (points, work.problems)
}

struct Work<'a> {
    readers: &'a [Reader],
    width: usize,
    delimiter: Delimiter,
    problems: Vec<Problem>,
    unlisted: usize,
}

impl<'a> Work<'a> {
    fn series(&self) -> Vec<Series<'a>> {
        let mut series: Vec<Series<'a>> = Vec::new();
        for reader in self.readers.iter().filter(|reader| reader.column.role == Some(Role::Indication)) {
            let (state, approach) = (reader.column.state, reader.column.approach);
            match series.iter_mut().find(|series| (series.state, series.approach) == (state, approach)) {
                Some(series) => series.readers.push(reader),
                None => series.push(Series { state, approach, readers: vec![reader] }),
            }
        }
        if series.is_empty() {
            series.push(Series { state: None, approach: None, readers: Vec::new() });
        }
        series
    }

    fn report(&mut self, problem: impl FnOnce() -> Problem) {
        if self.problems.len() < MOST_PROBLEMS {
            self.problems.push(problem());
        } else {
            self.unlisted += 1;
        }
    }

    fn row(&mut self, row: &Row, series: &[Series<'a>], points: &mut Vec<Point>) {
        if row.len() > self.width && !self.fits_in_spite_of_length(row) {
            return;
        }
        let common = self.common(row);
        let mut found: Vec<Point> = Vec::with_capacity(series.len());
        for one in series {
            let point = self.with_indication(common.clone(), row, one);
            if point.typed.indication.is_some() {
                found.push(point);
            }
        }
        if !found.is_empty() {
            points.extend(found);
        } else if common.typed.reference.is_some() {
            self.note_empty(row, series);
            points.push(common);
        } else if self
            .readers
            .iter()
            .any(|reader| matches!(reader.column.role, Some(Role::Reference | Role::Indication)))
        {
            let number = row.number;
            let start = quoted(row.iter().find(|cell| !cell.is_empty()).unwrap_or(""));
            self.report(|| {
                let sentence = format!(
                    "Row {number} ({start}) holds neither a reference value nor an indication and was passed over."
                );
                Problem::note("row_without_point", format!("row {number}"), sentence).with("row", number)
            });
        }
    }

    /// Whether the cells beyond the last column are no numbers: a row that was cut at decimal commas must not be read.
    fn fits_in_spite_of_length(&mut self, row: &Row) -> bool {
        let shifted = row.iter().skip(self.width).any(|cell| scan(cell, None).is_number());
        let (number, cells, width) = (row.number, row.len(), self.width);
        let remedy = if self.delimiter == Delimiter::Comma {
            " If the numbers have decimal commas, save the table with semicolons or copy its cells."
        } else {
            ""
        };
        self.report(|| {
            let (level, what) = if shifted {
                (
                    bandleaf_core::problem::Level::Error,
                    format!("so it is not clear which is which; it was not read.{remedy}"),
                )
            } else {
                (bandleaf_core::problem::Level::Note, "the text beyond was not read.".to_owned())
            };
            let sentence = format!("Row {number} has {cells} cells where the table has {width} columns: {what}");
            Problem::new(level, "row_too_long", format!("row {number}"), sentence)
                .with("row", number)
                .with("cells", cells)
                .with("columns", width)
        });
        !shifted
    }

    /// The point without its indication.
    fn common(&mut self, row: &Row) -> Point {
        let mut point = Point::default();
        let readers = self.readers;
        for reader in readers {
            let text = row.cell(reader.column.index);
            let Some(role) = &reader.column.role else {
                continue;
            };
            if text.is_empty() || *role == Role::Indication {
                continue;
            }
            if reader.column.is_numeric_role() {
                let value = self.number(row, reader);
                put_number(&mut point, role, value, text);
            } else {
                self.put_text(&mut point, role, text, row, reader);
            }
        }
        point
    }

    fn put_text(&mut self, point: &mut Point, role: &Role, text: &str, row: &Row, reader: &Reader) {
        let expected = match role {
            Role::Note => {
                point.note = text.to_owned();
                return;
            }
            Role::Time => {
                point.time = Some(text.to_owned());
                return;
            }
            Role::Approach => {
                point.approach = approach_of(text);
                if point.approach.is_some() {
                    return;
                }
                "\"up\" or \"down\""
            }
            _ => {
                point.state = state_of(text);
                if point.state.is_some() {
                    return;
                }
                "\"as found\" or \"as left\""
            }
        };
        self.cell_problem("cell_unknown_word", &format!("{} is not {expected}.", quoted(text)), text, row, reader);
    }

    fn with_indication(&mut self, mut point: Point, row: &Row, series: &Series<'a>) -> Point {
        point.state = point.state.or(series.state);
        point.approach = point.approach.or(series.approach);
        let texts: Vec<&str> = series.readers.iter().map(|reader| row.cell(reader.column.index)).collect();
        if texts.iter().all(|text| text.is_empty()) {
            return point;
        }
        let values: Vec<f64> = series.readers.iter().filter_map(|reader| self.number(row, reader)).collect();
        point.typed.indication = Some(match texts.as_slice() {
            [one] => OneOrMany::One((*one).to_owned()),
            _ => OneOrMany::Many(texts.iter().map(|text| (*text).to_owned()).collect()),
        });
        point.indication = match (values.as_slice(), texts.len()) {
            ([], _) => None,
            ([one], 1) => Some(OneOrMany::One(*one)),
            _ => Some(OneOrMany::Many(values)),
        };
        point
    }

    /// The number in a cell; the reason why there is none goes to the problems.
    fn number(&mut self, row: &Row, reader: &Reader) -> Option<f64> {
        let text = row.cell(reader.column.index);
        match reader.number(text) {
            Ok(value) => value,
            Err(refusal) => {
                self.cell_problem(refusal.code(), &refusal.reason(text), text, row, reader);
                None
            }
        }
    }

    fn cell_problem(&mut self, code: &str, reason: &str, text: &str, row: &Row, reader: &Reader) {
        let (number, column) = (row.number, &reader.column);
        self.report(|| {
            let place = format!("row {number}, {}", column.label());
            let sentence = format!("{}: {reason}", capital(&place));
            Problem::error(code, place, sentence)
                .with("row", number)
                .with("column", column.index + 1)
                .with("text", shortened(text))
        });
    }

    /// A reference value that waits for its indication, or whose row ended too early.
    fn note_empty(&mut self, row: &Row, series: &[Series<'a>]) {
        let Some(reader) = series.first().and_then(|series| series.readers.first()) else {
            return;
        };
        let (number, label, index) = (row.number, reader.column.label(), reader.column.index);
        self.report(|| {
            let place = format!("row {number}, {label}");
            let sentence = format!("{} is empty; the reference value was kept.", capital(&place));
            Problem::note("cell_empty", place, sentence).with("row", number).with("column", index + 1)
        });
    }
}

fn put_number(point: &mut Point, role: &Role, value: Option<f64>, text: &str) {
    let field = match role {
        Role::Reference => {
            point.reference = value;
            point.typed.reference = Some(text.to_owned());
            return;
        }
        Role::Influence(name) => {
            point.influences.extend(value.map(|value| (name.clone(), value)));
            point.typed.influences.insert(name.clone(), text.to_owned());
            return;
        }
        Role::ReferenceUncertainty => {
            point.reference_uncertainty = value;
            "reference_uncertainty"
        }
        Role::IndicationUncertainty => {
            point.indication_uncertainty = value;
            "indication_uncertainty"
        }
        Role::SettingUncertainty => {
            point.setting_uncertainty = value;
            "setting_uncertainty"
        }
        Role::Repeats => {
            point.repeats = value;
            "repeats"
        }
        Role::Indication | Role::Approach | Role::State | Role::Time | Role::Note => return,
    };
    point.typed.others.insert(field.to_owned(), text.to_owned());
}
