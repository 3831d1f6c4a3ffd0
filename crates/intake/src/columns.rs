//! Each column: its heading, its numbers, its decimal mark and thousands separator.

use crate::cells::Row;
use crate::delimiter::Delimiter;
use crate::header::{Heading, Layout};
use crate::number::{Decimal, Scan, Tells, Written, scan};
use crate::refusal::Refusal;
use crate::role::{Approach, Role, State};
use crate::unit::same_unit;
use crate::wording::column_label;
use serde::Serialize;

/// A column as it was understood.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Column {
    /// From 0.
    pub index: usize,
    /// From the heading; empty where there is none.
    pub name: String,
    /// From the heading, or else from the cells.
    pub unit: Option<String>,
    /// The decimal mark; null where the column has none or is waiting for an answer.
    pub decimal: Option<Decimal>,
    /// The thousands separator found in the cells.
    pub thousands: Option<char>,
    /// What the column is taken for; null where it is not used.
    pub role: Option<Role>,
    /// As found or as left, where the heading of an indication says so.
    pub state: Option<State>,
    /// The direction of approach, where the heading of an indication says so.
    pub approach: Option<Approach>,
    /// How many cells are numbers.
    pub numbers: usize,
}

impl Column {
    /// `column "indication"` or `column 2`.
    pub(crate) fn label(&self) -> String {
        column_label(self.index, &self.name)
    }

    /// Whether the column's cells have to be numbers.
    pub(crate) fn is_numeric_role(&self) -> bool {
        !matches!(self.role, None | Some(Role::Approach | Role::State | Role::Time | Role::Note))
    }
}

/// What the cells of a column tell.
#[derive(Clone, Debug, Default, PartialEq)]
pub(crate) struct Tally {
    pub filled: usize,
    pub numbers: usize,
    only_point: usize,
    only_comma: usize,
    either: usize,
    /// Of `either`, those with a comma in them.
    either_with_comma: usize,
    /// A cell that can be read both ways, with both readings.
    pub example: Option<Example>,
    unit: Option<String>,
    /// The thousands separator with a decimal point, and with a decimal comma.
    thousands: (Option<char>, Option<char>),
}

/// A cell that can be read both ways.
#[derive(Clone, Debug, PartialEq)]
pub(crate) struct Example {
    pub text: String,
    pub point: f64,
    pub comma: f64,
}

/// The decimal mark of a column.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(crate) enum Mark {
    /// No cell has a point or a comma.
    None,
    /// Known.
    Known {
        decimal: Decimal,
        /// Some cells have the other mark, so that those that can be read both ways say nothing.
        mixed: bool,
    },
    /// A point that could separate thousands, but cells divided by commas speak for the decimal point.
    PointByDelimiter,
    /// It has to be asked for.
    Open,
}

impl Tally {
    pub(crate) fn of(rows: &[Row], index: usize, heading_unit: Option<&str>) -> Tally {
        let mut tally = Tally::default();
        for row in rows {
            let text = row.cell(index);
            tally.filled += usize::from(!text.is_empty());
            if let Scan::Number(written) = scan(text, heading_unit) {
                tally.add(text, &written);
            }
        }
        tally
    }

    fn add(&mut self, text: &str, written: &Written<'_>) {
        self.numbers += 1;
        match written.tells() {
            Tells::Nothing => {}
            Tells::Only(Decimal::Point) => self.only_point += 1,
            Tells::Only(Decimal::Comma) => self.only_comma += 1,
            Tells::Either => {
                self.either += 1;
                self.either_with_comma += usize::from(text.contains(','));
                if let (None, Some(point), Some(comma)) =
                    (&self.example, written.reading(Decimal::Point), written.reading(Decimal::Comma))
                {
                    self.example = Some(Example { text: text.to_owned(), point: point.value, comma: comma.value });
                }
            }
        }
        let separator = |decimal| written.reading(decimal).and_then(|reading| reading.thousands);
        self.thousands.0 = self.thousands.0.or_else(|| separator(Decimal::Point));
        self.thousands.1 = self.thousands.1.or_else(|| separator(Decimal::Comma));
        if self.unit.is_none() {
            self.unit = written.unit.map(str::to_owned);
        }
    }

    /// The column's decimal mark, as far as its cells tell it. Never a guess: a majority that contradicts is asked for
    /// where it is none, and what does not fit it is refused.
    pub(crate) fn mark(&self, told: Option<Decimal>, delimiter: Delimiter) -> Mark {
        let known = |decimal, mixed| Mark::Known { decimal, mixed };
        match (told, self.only_point.cmp(&self.only_comma)) {
            (Some(decimal), _) => known(decimal, false),
            (None, std::cmp::Ordering::Greater) => known(Decimal::Point, self.only_comma > 0),
            (None, std::cmp::Ordering::Less) => known(Decimal::Comma, self.only_point > 0),
            (None, std::cmp::Ordering::Equal) if self.only_point > 0 => Mark::Open,
            _ if self.either == 0 => Mark::None,
            _ if delimiter == Delimiter::Comma && self.either_with_comma == 0 => Mark::PointByDelimiter,
            _ => Mark::Open,
        }
    }
}

/// A column with what is needed to read its cells.
#[derive(Clone, Debug, PartialEq)]
pub(crate) struct Reader {
    pub column: Column,
    pub mark: Mark,
    heading_unit: Option<String>,
}

impl Reader {
    pub(crate) fn new(index: usize, heading: &Heading, tally: &Tally, mark: Mark) -> Reader {
        let decimal = match mark {
            Mark::Known { decimal, .. } => Some(decimal),
            Mark::PointByDelimiter => Some(Decimal::Point),
            Mark::None | Mark::Open => None,
        };
        let thousands = match (mark, decimal) {
            (Mark::Open, _) => None,
            (_, Some(Decimal::Comma)) => tally.thousands.1,
            _ => tally.thousands.0,
        };
        let column = Column {
            index,
            name: heading.name.clone(),
            unit: heading.unit.clone().or_else(|| tally.unit.clone()),
            decimal,
            thousands,
            role: None,
            state: None,
            approach: None,
            numbers: tally.numbers,
        };
        Reader { column, mark, heading_unit: heading.unit.clone() }
    }

    /// The number in a cell; `None` where it is empty, or waits for the answer to a question.
    pub(crate) fn number(&self, text: &str) -> Result<Option<f64>, Refusal> {
        let written = match scan(text, self.heading_unit.as_deref()) {
            Scan::Empty => return Ok(None),
            Scan::Refused(refusal) => return Err(refusal),
            Scan::Number(written) => written,
        };
        if let (Some(cell), Some(column)) = (written.unit, &self.column.unit)
            && !same_unit(cell, column)
        {
            return Err(Refusal::OtherUnit { cell: cell.to_owned(), column: column.clone() });
        }
        let decimal = match self.mark {
            Mark::Open => return Ok(None),
            Mark::None | Mark::PointByDelimiter => Decimal::Point,
            Mark::Known { mixed: true, .. } if written.tells() == Tells::Either => {
                return Err(ambiguous(&written));
            }
            Mark::Known { decimal, .. } => decimal,
        };
        match written.reading(decimal) {
            Some(reading) => Ok(Some(reading.value)),
            None => Err(Refusal::OtherDecimal { column: decimal.word() }),
        }
    }
}

/// The refusal of a cell that can be read both ways.
pub(crate) fn ambiguous(written: &Written<'_>) -> Refusal {
    let (decimal, grouped) = written.both().unwrap_or((f64::NAN, f64::NAN));
    Refusal::Ambiguous { decimal: decimal.to_string(), grouped: grouped.to_string() }
}

/// Headings of all columns, empty ones where the table has none.
pub(crate) fn headings(layout: &Layout) -> Vec<Heading> {
    let mut headings = layout.headings.clone().unwrap_or_default();
    headings.resize(layout.width, Heading::default());
    headings
}
