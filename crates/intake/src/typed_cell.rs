//! One cell that somebody types.

use crate::columns::ambiguous;
use crate::number::{Decimal, Scan, Tells, scan};
use crate::refusal::Refusal;
use crate::wording::{capital, shortened};
use bandleaf_core::problem::Problem;
use serde::Serialize;

/// A typed cell, read.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Cell {
    /// The number; null where the cell is empty, is no number, or can be read in two ways.
    pub value: Option<f64>,
    /// Both numbers where it can be read in two ways: first with its mark as decimal mark, then as thousands separator.
    pub alternatives: Vec<f64>,
    /// The decimal mark, where the cell tells it.
    pub decimal: Option<Decimal>,
    /// The unit written beside the number.
    pub unit: Option<String>,
    /// Why there is no number.
    pub problem: Option<Problem>,
}

/// Reads one typed cell, with decimal comma or point.
pub fn parse_cell(text: &str) -> Cell {
    parse_cell_with(text, None)
}

/// Reads one typed cell whose decimal mark may be known, for instance from the other cells of its column.
pub fn parse_cell_with(text: &str, decimal: Option<Decimal>) -> Cell {
    let mut cell = Cell { value: None, alternatives: Vec::new(), decimal: None, unit: None, problem: None };
    let written = match scan(text, None) {
        Scan::Empty => return cell,
        Scan::Refused(refusal) => {
            return Cell { problem: Some(problem(&refusal, text)), ..cell };
        }
        Scan::Number(written) => written,
    };
    cell.unit = written.unit.map(str::to_owned);
    let read = match (written.tells(), decimal) {
        (Tells::Nothing, _) => Decimal::Point,
        // A typed cell with the other mark is plain enough to be read by itself.
        (Tells::Only(only), _) => only,
        (Tells::Either, Some(known)) => known,
        (Tells::Either, None) => {
            cell.alternatives = written.both().map_or_else(Vec::new, |(decimal, grouped)| vec![decimal, grouped]);
            cell.problem = Some(problem(&ambiguous(&written), text));
            return cell;
        }
    };
    cell.decimal = (written.tells() != Tells::Nothing).then_some(read);
    cell.value = written.reading(read).map(|reading| reading.value);
    cell
}

fn problem(refusal: &Refusal, text: &str) -> Problem {
    Problem::error(refusal.code(), "", capital(&refusal.reason(text))).with("text", shortened(text))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn typed_numbers() {
        let cases = [
            ("151", 151.0),
            (" 151.50 ", 151.5),
            ("151,5", 151.5),
            ("\u{2212}0,25", -0.25),
            ("- 5", -5.0),
            ("–3.5", -3.5),
            ("+7", 7.0),
            (".5", 0.5),
            (",5", 0.5),
            ("5.", 5.0),
            ("1 234,5", 1234.5),
            ("1\u{2009}234\u{2009}567", 1_234_567.0),
            ("1\u{202F}234,5", 1234.5),
            ("1\u{A0}234.5", 1234.5),
            ("1'234.5", 1234.5),
            ("1’234’567", 1_234_567.0),
            ("1,234.5", 1234.5),
            ("1.234,5", 1234.5),
            ("1.234.567", 1_234_567.0),
            ("1,234,567", 1_234_567.0),
            ("0,123", 0.123),
            ("0.123", 0.123),
            ("1234.567", 1234.567),
            ("1 234.567", 1234.567),
            ("2.236 067 97", 2.236_067_97),
            ("1.234e3", 1234.0),
            ("1,5E\u{2212}3", 0.0015),
            ("151 mm", 151.0),
            ("4,02mA", 4.02),
            ("mm 151", 151.0),
            ("12 %", 12.0),
            ("'151", 151.0),
            ("007", 7.0),
            ("-0", -0.0),
        ];
        for (text, value) in cases {
            let cell = parse_cell(text);
            assert_eq!(cell.value.map(f64::to_bits), Some(f64::to_bits(value)), "{text:?} {cell:?}");
            assert_eq!(cell.problem, None, "{text:?}");
        }
        assert_eq!(parse_cell("151 mm").unit.as_deref(), Some("mm"));
        assert_eq!(parse_cell("  ").problem, None);
    }

    #[test]
    fn what_can_be_read_in_two_ways_is_not_decided() {
        for (text, decimal, grouped) in
            [("1,234", 1.234, 1234.0), ("-12.500", -12.5, -12500.0), ("1.234 mm", 1.234, 1234.0)]
        {
            let cell = parse_cell(text);
            assert_eq!((cell.value, cell.alternatives), (None, vec![decimal, grouped]), "{text}");
            assert_eq!(cell.problem.expect("a problem").code, "cell_ambiguous");
        }
        assert_eq!(parse_cell_with("1,234", Some(Decimal::Comma)).value, Some(1.234));
        assert_eq!(parse_cell_with("1,234", Some(Decimal::Point)).value, Some(1234.0));
        assert_eq!(parse_cell_with("1.5", Some(Decimal::Comma)).value, Some(1.5));
    }

    #[test]
    fn what_is_no_number_says_why() {
        let cases = [
            ("NaN", "cell_not_a_number"),
            ("nan", "cell_not_a_number"),
            ("inf", "cell_infinite"),
            ("-Infinity", "cell_infinite"),
            ("∞", "cell_infinite"),
            ("1e400", "cell_too_large"),
            ("-1e400", "cell_too_large"),
            ("1e-400", "cell_too_small"),
            ("12,3,4", "cell_malformed"),
            ("1.2.3.4", "cell_malformed"),
            ("12,34,567", "cell_malformed"),
            ("1 23", "cell_malformed"),
            ("--5", "cell_malformed"),
            ("—", "cell_no_value"),
            ("-", "cell_no_value"),
            ("n/a", "cell_no_value"),
            ("N.A.", "cell_no_value"),
            ("#REF!", "cell_spreadsheet_error"),
            ("#####", "cell_spreadsheet_error"),
            ("<5", "cell_limit"),
            ("~5", "cell_limit"),
            ("12 ± 1", "cell_with_uncertainty"),
            ("2026-05-04", "cell_date_or_time"),
            ("04.05.2026", "cell_date_or_time"),
            ("12:30", "cell_date_or_time"),
            ("151 furlongs", "cell_extra_text"),
            ("P151", "cell_extra_text"),
            ("1.5×10^3", "cell_extra_text"),
            ("(12)", "cell_extra_text"),
            ("0x1F", "cell_extra_text"),
            ("dry", "cell_text"),
            ("TRUE", "cell_text"),
            ("e5", "cell_extra_text"),
        ];
        for (text, code) in cases {
            let cell = parse_cell(text);
            assert_eq!(cell.value, None, "{text}");
            let problem = cell.problem.unwrap_or_else(|| panic!("{text} has no problem"));
            assert_eq!(problem.code, code, "{text}: {}", problem.sentence);
            assert!(
                problem.sentence.starts_with(&format!("\"{text}\" ")) && problem.sentence.ends_with('.'),
                "{}",
                problem.sentence
            );
        }
    }
}
