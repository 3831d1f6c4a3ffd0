//! One cell as a number: sign, decimal mark, thousands separators, exponent, unit.
//!
//! A cell is read both ways, with the point and with the comma as decimal mark. Where only one reading exists it says
//! something about the column; where both exist ("1,234") the column decides. Digits go to the standard library's
//! parser after the separators are taken out, so the result is the nearest f64 to the decimal text.
//!
//! Grouping follows ISO 80000-1, 7.3: groups of three digits, counted from the decimal mark. Spaces of every width and
//! apostrophes group on both sides of the mark, point and comma only before it.

use crate::refusal::{self, Refusal};
use crate::unit::{is_unit, same_unit};
use serde::{Deserialize, Serialize};

/// Longest text that is read as a number, in bytes: every f64 written out in full is shorter.
const LONGEST_NUMBER: usize = 1_200;

/// The decimal mark.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum Decimal {
    /// 1.5
    Point,
    /// 1,5
    Comma,
}

impl Decimal {
    /// "point" or "comma".
    pub(crate) fn word(self) -> &'static str {
        match self {
            Decimal::Point => "point",
            Decimal::Comma => "comma",
        }
    }

    fn mark(self) -> char {
        match self {
            Decimal::Point => '.',
            Decimal::Comma => ',',
        }
    }
}

/// A value with the thousands separator found in it.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(crate) struct Reading {
    pub value: f64,
    pub thousands: Option<char>,
}

/// What a decimal mark in a cell tells about its column.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(crate) enum Tells {
    /// There is no point and no comma.
    Nothing,
    /// It can only be read with this decimal mark.
    Only(Decimal),
    /// It can be read both ways.
    Either,
}

/// A number as written.
#[derive(Clone, Debug, PartialEq)]
pub(crate) struct Written<'a> {
    point: Option<Reading>,
    comma: Option<Reading>,
    /// There is a point or a comma in it.
    marked: bool,
    pub unit: Option<&'a str>,
}

impl Written<'_> {
    pub(crate) fn reading(&self, decimal: Decimal) -> Option<Reading> {
        match decimal {
            Decimal::Point => self.point,
            Decimal::Comma => self.comma,
        }
    }

    pub(crate) fn tells(&self) -> Tells {
        match (self.marked, self.point, self.comma) {
            (true, Some(_), Some(_)) => Tells::Either,
            (true, Some(_), None) => Tells::Only(Decimal::Point),
            (true, None, Some(_)) => Tells::Only(Decimal::Comma),
            _ => Tells::Nothing,
        }
    }

    /// Both readings where they differ: first with its mark as the decimal mark, then as thousands separator.
    pub(crate) fn both(&self) -> Option<(f64, f64)> {
        let (point, comma) = (self.point?, self.comma?);
        if !self.marked {
            None
        } else if point.thousands.is_some() {
            Some((comma.value, point.value))
        } else {
            Some((point.value, comma.value))
        }
    }
}

/// A cell after the first look.
#[derive(Clone, Debug, PartialEq)]
pub(crate) enum Scan<'a> {
    Empty,
    Number(Written<'a>),
    Refused(Refusal),
}

impl Scan<'_> {
    pub(crate) fn is_number(&self) -> bool {
        matches!(self, Scan::Number(_))
    }
}

/// Looks at a cell; `unit` is the column's, which is accepted even where it is no known symbol.
pub(crate) fn scan<'a>(text: &'a str, unit: Option<&str>) -> Scan<'a> {
    let text = trimmed(text);
    if text.is_empty() {
        return Scan::Empty;
    }
    if text.len() > LONGEST_NUMBER {
        return Scan::Refused(Refusal::TooLong);
    }
    if let Some(refusal) = refusal::of_marker(text) {
        return Scan::Refused(refusal);
    }
    match parts(text, unit) {
        Ok(parts) => parts.read(text),
        Err(refusal) => Scan::Refused(refusal),
    }
}

/// Without the spaces and invisible marks around it.
pub(crate) fn trimmed(text: &str) -> &str {
    text.trim_matches(|character: char| {
        character.is_whitespace()
            || matches!(character, '\u{FEFF}' | '\u{200B}'..='\u{200F}' | '\u{202A}'..='\u{202E}' | '\u{2060}'..='\u{2069}')
    })
}

/// The pieces of a written number.
struct Parts<'a> {
    negative: bool,
    /// Digits, marks and separators.
    body: &'a str,
    /// The exponent's sign and digits.
    exponent: Option<(bool, &'a str)>,
    unit: Option<&'a str>,
}

fn parts<'a>(text: &'a str, unit: Option<&str>) -> Result<Parts<'a>, Refusal> {
    let accepted = |symbol: &str| is_unit(symbol) || unit.is_some_and(|column| same_unit(column, symbol));
    // A spreadsheet marks numbers kept as text with an apostrophe.
    let text = text.strip_prefix('\'').unwrap_or(text);
    let (before, rest) = text.split_at(text.find(starts_number).unwrap_or(text.len()));
    // A unit before the number stands apart from it: "C-5" is rather a name.
    let apart = before.ends_with(char::is_whitespace);
    let before = trimmed(before);
    let leads = apart && !rest.is_empty() && accepted(before);
    if !before.is_empty() && !leads {
        return Err(match refusal::of_text(text) {
            Refusal::Malformed => Refusal::Extra(before.to_owned()),
            other => other,
        });
    }
    let (negative, rest) = sign(rest);
    let rest = rest.trim_start();
    let (body, rest) = rest.split_at(rest.find(|character| !in_body(character)).unwrap_or(rest.len()));
    let body_trimmed = body.trim_end_matches(|character| is_grouping(character) && !matches!(character, '.' | ','));
    if body_trimmed.is_empty() {
        return Err(refusal::of_text(text));
    }
    let (exponent, rest) = if body.len() == body_trimmed.len() { exponent(rest) } else { (None, rest) };
    let after = trimmed(rest);
    if after.is_empty() {
        let unit = Some(before).filter(|unit| !unit.is_empty());
        Ok(Parts { negative, body: body_trimmed, exponent, unit })
    } else if before.is_empty() && accepted(after) {
        Ok(Parts { negative, body: body_trimmed, exponent, unit: Some(after) })
    } else {
        Err(match refusal::of_text(text) {
            Refusal::Malformed => Refusal::Extra(after.to_owned()),
            other => other,
        })
    }
}

impl<'a> Parts<'a> {
    fn read(&self, text: &str) -> Scan<'a> {
        let point = self.with(Decimal::Point);
        let marked = self.body.contains(['.', ',']);
        let comma = if marked { self.with(Decimal::Comma) } else { point.clone() };
        let unwrap = |reading: Option<Result<Reading, Refusal>>| reading.transpose();
        match (unwrap(point), unwrap(comma)) {
            (Ok(None), Ok(None)) => Scan::Refused(refusal::of_text(text)),
            (Ok(point), Ok(comma)) => Scan::Number(Written { point, comma, marked, unit: self.unit }),
            (Err(refusal), _) | (_, Err(refusal)) => Scan::Refused(refusal),
        }
    }

    /// The value with this decimal mark; `None` where the text has no such reading.
    fn with(&self, decimal: Decimal) -> Option<Result<Reading, Refusal>> {
        let (digits, thousands) = plain_digits(self.body, decimal)?;
        // A number with an exponent is never written with groups of thousands by point or comma.
        if self.exponent.is_some() && matches!(thousands, Some('.' | ',')) {
            return None;
        }
        let mut decimal_text = String::with_capacity(digits.len() + 8);
        if self.negative {
            decimal_text.push('-');
        }
        decimal_text.push_str(&digits);
        if let Some((negative, exponent)) = self.exponent {
            decimal_text.push_str(if negative { "e-" } else { "e" });
            decimal_text.push_str(exponent);
        }
        let value: f64 = decimal_text.parse().ok()?;
        let is_zero = digits.bytes().all(|byte| matches!(byte, b'0' | b'.'));
        Some(if !value.is_finite() {
            Err(Refusal::TooLarge)
        } else if value == 0.0 && !is_zero {
            Err(Refusal::TooSmall)
        } else {
            Ok(Reading { value, thousands })
        })
    }
}

fn starts_number(character: char) -> bool {
    character.is_ascii_digit() || matches!(character, '.' | ',' | '+') || is_minus(character)
}

fn is_minus(character: char) -> bool {
    matches!(character, '-' | '\u{2212}' | '\u{2010}' | '\u{2011}' | '\u{2013}' | '\u{FE63}' | '\u{FF0D}')
}

fn is_grouping(character: char) -> bool {
    matches!(character, ' ' | '\u{A0}' | '\u{2007}' | '\u{2009}' | '\u{202F}' | '\'' | '\u{2019}' | '.' | ',')
}

fn in_body(character: char) -> bool {
    character.is_ascii_digit() || is_grouping(character)
}

/// Whether the text starts with a minus, and the rest.
fn sign(text: &str) -> (bool, &str) {
    match text.chars().next() {
        Some('+') => (false, text.strip_prefix('+').unwrap_or(text)),
        Some(minus) if is_minus(minus) => (true, text.strip_prefix(minus).unwrap_or(text)),
        _ => (false, text),
    }
}

/// The exponent at the start of the text (sign, digits), and the rest.
fn exponent(text: &str) -> (Option<(bool, &str)>, &str) {
    let Some(after) = text.strip_prefix(['e', 'E']) else {
        return (None, text);
    };
    let (negative, digits) = sign(after);
    let end = digits.find(|character: char| !character.is_ascii_digit()).unwrap_or(digits.len());
    match digits.split_at(end) {
        ("", _) => (None, text),
        (exponent, rest) => (Some((negative, exponent)), rest),
    }
}

/// Digits with a point as decimal mark and nothing else, and the thousands separator that was taken out.
fn plain_digits(body: &str, decimal: Decimal) -> Option<(String, Option<char>)> {
    let (whole, fraction) = match body.split_once(decimal.mark()) {
        Some((whole, fraction)) => (whole, Some(fraction)),
        None => (body, None),
    };
    let (mut digits, separator) = whole_part(whole)?;
    if let Some(fraction) = fraction {
        // "5." is common in printed tables, "5," is rather a left-over separator.
        if fraction.is_empty() && (whole.is_empty() || decimal == Decimal::Comma) {
            return None;
        }
        digits.push('.');
        digits.push_str(&fraction_part(fraction, separator)?);
    } else if whole.is_empty() {
        return None;
    }
    Some((digits, separator))
}

/// The digits before the decimal mark and what separates their groups; no digits where there are none.
fn whole_part(text: &str) -> Option<(String, Option<char>)> {
    let Some(separator) = text.chars().find(|character| !character.is_ascii_digit()) else {
        return Some((text.to_owned(), None));
    };
    let mut groups = text.split(separator);
    let first = groups.next()?;
    if !(1..=3).contains(&first.len()) || first.starts_with('0') || !all_digits(first) {
        return None;
    }
    let mut digits = first.to_owned();
    for group in groups {
        if group.len() != 3 || !all_digits(group) {
            return None;
        }
        digits.push_str(group);
    }
    Some((digits, Some(separator)))
}

/// The digits after the decimal mark, groups taken out: the same separator as before the mark, where that had one.
fn fraction_part(text: &str, separator: Option<char>) -> Option<String> {
    let Some(found) = text.chars().find(|character| !character.is_ascii_digit()) else {
        return Some(text.to_owned());
    };
    if matches!(found, '.' | ',') || separator.is_some_and(|before| before != found) {
        return None;
    }
    let groups: Vec<&str> = text.split(found).collect();
    let (last, full) = groups.split_last()?;
    let fits = full.iter().all(|group| group.len() == 3 && all_digits(group))
        && (1..=3).contains(&last.len())
        && all_digits(last);
    fits.then(|| groups.concat())
}

fn all_digits(text: &str) -> bool {
    text.bytes().all(|byte| byte.is_ascii_digit())
}
