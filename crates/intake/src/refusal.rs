//! Why a cell is no number, in words for the person who typed it.

use crate::wording::quoted;

/// The reasons for which a cell is not taken.
#[derive(Clone, Debug, PartialEq, Eq)]
pub(crate) enum Refusal {
    /// "n/a", "—": says that there is no value.
    NoValue,
    /// "NaN".
    NotANumber,
    /// "inf", "∞".
    Infinite,
    /// "#REF!", "#####": the failure of a spreadsheet's formula.
    SpreadsheetError,
    /// "<5", "~5": a limit or an estimate.
    Limit,
    /// "12 ± 1".
    WithUncertainty,
    /// A date or a time of day.
    DateOrTime,
    /// "12,3,4": digits and separators that make no number.
    Malformed,
    /// A number with something after or before it that is no known unit.
    Extra(String),
    /// Beyond the range of numbers that can be computed with.
    TooLarge,
    /// Nearer to zero than any number that can be computed with, but not zero.
    TooSmall,
    /// More digits than any number needs.
    TooLong,
    /// Words.
    Text,
    /// The cell's unit is not the column's.
    OtherUnit {
        /// In the cell.
        cell: String,
        /// Of the column.
        column: String,
    },
    /// "1,234" where nothing tells which mark is the decimal one.
    Ambiguous {
        /// With the mark as decimal mark, as text.
        decimal: String,
        /// With the mark as thousands separator, as text.
        grouped: String,
    },
    /// "1.5" in a column with decimal commas, or the reverse.
    OtherDecimal {
        /// "comma" or "point": the column's.
        column: &'static str,
    },
}

impl Refusal {
    /// A stable name for programs.
    pub(crate) fn code(&self) -> &'static str {
        match self {
            Refusal::NoValue => "cell_no_value",
            Refusal::NotANumber => "cell_not_a_number",
            Refusal::Infinite => "cell_infinite",
            Refusal::SpreadsheetError => "cell_spreadsheet_error",
            Refusal::Limit => "cell_limit",
            Refusal::WithUncertainty => "cell_with_uncertainty",
            Refusal::DateOrTime => "cell_date_or_time",
            Refusal::Malformed => "cell_malformed",
            Refusal::Extra(_) => "cell_extra_text",
            Refusal::TooLarge => "cell_too_large",
            Refusal::TooSmall => "cell_too_small",
            Refusal::TooLong => "cell_too_long",
            Refusal::Text => "cell_text",
            Refusal::OtherUnit { .. } => "cell_other_unit",
            Refusal::Ambiguous { .. } => "cell_ambiguous",
            Refusal::OtherDecimal { .. } => "cell_other_decimal",
        }
    }

    /// What is wrong with the cell and what to do, as a clause that starts with the cell's text.
    pub(crate) fn reason(&self, text: &str) -> String {
        let cell = quoted(text);
        match self {
            Refusal::NoValue => {
                format!("{cell} says that there is no value; type the number, or leave the cell empty.")
            }
            Refusal::NotANumber => {
                format!("{cell} means that no number came out; type the number, or leave the cell empty.")
            }
            Refusal::Infinite => {
                format!("{cell} is not a finite number; type the number, or leave the cell empty.")
            }
            Refusal::SpreadsheetError => {
                format!("{cell} is an error message of a spreadsheet; mend the formula there, or type the number.")
            }
            Refusal::Limit => {
                format!("{cell} is a limit or an estimate, not an indication; type the number that was shown.")
            }
            Refusal::WithUncertainty => {
                format!("{cell} holds a value and its uncertainty; put the uncertainty into a column of its own.")
            }
            Refusal::DateOrTime => {
                format!("{cell} looks like a date or a time of day, not a number.")
            }
            Refusal::Malformed => {
                format!(
                    "{cell} is no number: its points, commas or spaces do not divide it into thousands or decimals; type it plainly."
                )
            }
            Refusal::Extra(extra) => {
                format!(
                    "{cell} holds {} beside the number, which is no known unit; type the number alone.",
                    quoted(extra)
                )
            }
            Refusal::TooLarge => {
                format!(
                    "{cell} is larger than any number that can be computed with (1.8e308); correct it, or choose another unit."
                )
            }
            Refusal::TooSmall => {
                format!(
                    "{cell} is nearer to zero than any number that can be computed with (5e-324); type 0 if it is zero."
                )
            }
            Refusal::TooLong => format!("{cell} is too long to be a number; type the number alone."),
            Refusal::Text => format!("{cell} is text, not a number; type the number, or clear the cell."),
            Refusal::OtherUnit { cell: unit, column } => {
                format!(
                    "{cell} is in {}, but the column is in {}; convert the value.",
                    crate::wording::shortened(unit),
                    crate::wording::shortened(column)
                )
            }
            Refusal::Ambiguous { decimal, grouped } => {
                format!("{cell} can be read as {decimal} or as {grouped}; type it without the thousands separator.")
            }
            Refusal::OtherDecimal { column } => {
                format!(
                    "{cell} does not fit the other cells of the column, which have a decimal {column}; type it like them."
                )
            }
        }
    }
}

/// The reason for a text that stands for no number from its looks, if it is one of the known ones.
pub(crate) fn of_marker(text: &str) -> Option<Refusal> {
    let first = text.chars().next()?;
    if first.is_ascii_digit() {
        return None;
    }
    if first == '#' {
        return Some(Refusal::SpreadsheetError);
    }
    if matches!(first, '<' | '>' | '≤' | '≥' | '~' | '≈') {
        return Some(Refusal::Limit);
    }
    if text.len() > 16 {
        return None;
    }
    let lower = text.to_lowercase();
    let unsigned = lower.trim_start_matches(['+', '-', '\u{2212}']);
    match unsigned {
        "nan" | "1.#qnan" | "1.#ind" | "nan(ind)" => Some(Refusal::NotANumber),
        "inf" | "infinity" | "∞" | "1.#inf" => Some(Refusal::Infinite),
        "n/a" | "na" | "n.a." | "n.a" | "none" | "null" | "nil" | "void" | "missing" | "?" | "??" | "???" => {
            Some(Refusal::NoValue)
        }
        _ if lower
            .chars()
            .all(|character| matches!(character, '-' | '–' | '—' | '\u{2212}' | '_' | '.' | '/' | '*')) =>
        {
            Some(Refusal::NoValue)
        }
        _ => None,
    }
}

/// The reason for a text that has no reading as a number.
pub(crate) fn of_text(text: &str) -> Refusal {
    if text.contains('±') || text.contains("+/-") || text.contains("+-") {
        Refusal::WithUncertainty
    } else if is_date_or_time(text) {
        Refusal::DateOrTime
    } else if text.chars().any(|character| character.is_ascii_digit()) {
        Refusal::Malformed
    } else {
        Refusal::Text
    }
}

/// Two or three groups of at most four digits around `-`, `/`, `:`, or three around `.`, the last of two or four digits.
pub(crate) fn is_date_or_time(text: &str) -> bool {
    let start = text.split([' ', 'T']).next().unwrap_or(text);
    ['-', '/', ':', '.'].iter().any(|mark| {
        let groups: Vec<&str> = start.split(*mark).take(5).collect();
        let digits = |group: &&str| {
            (1..=4).contains(&group.len()) && group.bytes().all(|byte| byte.is_ascii_digit())
                || (*mark == ':' && group.split_once(['.', ',']).is_some_and(|(whole, _)| whole.len() == 2))
        };
        let counts = match mark {
            ':' => groups.len() == 2 || groups.len() == 3,
            '.' => groups.len() == 3 && groups.last().is_some_and(|year| year.len() == 4 || year.len() == 2),
            _ => groups.len() == 3,
        };
        counts && groups.iter().all(digits)
    })
}
