//! The report in a few lines for people. Every number shown is a field of the report.

use bandleaf_core::display;
use bandleaf_core::problem::{Level, Problem};
use bandleaf_core::report::{Fit, Report, TermReport, Value};
use bandleaf_leaf::Document;
use std::fmt::Write;

/// How many significant digits a standard deviation is shown with.
const DIGITS: usize = 2;

/// The whole report.
pub fn report(document: &Document, report: &Report) -> String {
    let mut text = heading(document, report);
    let coverage = percent(report.coverage);
    if let Some(fit) = &report.fit {
        text.push_str(&fitted(report, fit, &coverage));
    }
    for check in &report.checks {
        line(&mut text, &check.sentence);
    }
    for value in &report.readings {
        text.push_str(&reading(value, &report.units.output, &coverage));
    }
    if let Some(as_found) = report.as_found.as_ref().filter(|as_found| as_found.fit.is_some()) {
        line(&mut text, "\nas found:");
        if let Some(fit) = &as_found.fit {
            text.push_str(&fitted(as_found, fit, &coverage));
        }
    }
    text.push_str(&messages(&report.messages));
    text
}

/// What was calibrated, where, when, in which state.
fn heading(document: &Document, report: &Report) -> String {
    let said = |pointer: &str| document.value().pointer(pointer).and_then(|value| value.as_str()).unwrap_or_default();
    let state = report.state.replace('_', " ");
    let serial = match said("/instrument/serial") {
        "" => String::new(),
        serial => format!("serial {serial}"),
    };
    let parts = [said("/instrument/name"), &serial, said("/instrument/place"), said("/occasion/date"), state.as_str()]
        .map(one_line);
    let said: Vec<String> = parts.into_iter().filter(|part| !part.is_empty()).collect();
    said.join(", ") + "\n"
}

fn fitted(report: &Report, fit: &Fit, coverage: &str) -> String {
    let mut text = format!("{}, {} indications\n", fit.formula, fit.points_used);
    for (index, term) in fit.terms.iter().enumerate() {
        line(&mut text, &coefficient(index, term));
    }
    let unit = &report.units.response;
    let noise = match (fit.noise.estimate, fit.noise.interval) {
        (Some(estimate), Some([low, high])) => {
            let estimate = with_unit(&display::number(estimate, DIGITS), unit);
            let interval = display::interval(low, high, unit);
            format!("repeatability of one indication {estimate} ({coverage}: {interval})")
        }
        (Some(estimate), None) => {
            format!("repeatability of one indication {}, known", with_unit(&display::number(estimate, DIGITS), unit))
        }
        (None, _) => "repeatability as known for each point".to_owned(),
    };
    let freedom = match fit.degrees_of_freedom {
        Some(freedom) => format!("{} degrees of freedom", display::number(freedom, freedom_digits(freedom))),
        None => "infinitely many degrees of freedom".to_owned(),
    };
    line(&mut text, &format!("{noise}, {freedom}"));
    text
}

/// Whole degrees of freedom in full, others to a tenth.
fn freedom_digits(freedom: f64) -> usize {
    let whole = format!("{freedom:.0}").len();
    if freedom == freedom.trunc() { whole.min(17) } else { (whole + 1).min(17) }
}

/// `  b = 1.0023 ± 0.0012`, with half the interval.
fn coefficient(index: usize, term: &TermReport) -> String {
    let letter = u8::try_from(index).ok().map(|index| char::from(b'a'.saturating_add(index))).unwrap_or('?');
    let [low, high] = term.interval;
    format!("  {letter} = {}", display::value_with_uncertainty(term.estimate, (high - low) / 2.0, &term.unit))
}

/// One reading as a value with its interval, and what has to be said about it.
pub fn reading(value: &Value, unit: &str, coverage: &str) -> String {
    let indications: Vec<String> = value.indications.iter().map(f64::to_string).collect();
    let given = with_unit(&indications.join(", "), unit);
    let mut text = String::new();
    match &value.value {
        Some(found) => {
            let factor = found.coverage_factor.map(|k| format!(", k = {}", display::number(k, 3))).unwrap_or_default();
            line(&mut text, &format!("{given}: {} ({coverage}: {}{factor})", found.display, found.display_interval));
        }
        None => line(&mut text, &format!("{given}: no value")),
    }
    text + &messages(&value.messages)
}

/// Messages, one a line.
pub fn messages(messages: &[Problem]) -> String {
    let mut text = String::new();
    for message in messages {
        let level = match message.level {
            Level::Note => "note",
            Level::Warning => "warning",
            Level::Error => "error",
        };
        line(&mut text, &format!("{level}: {}", one_line(&message.sentence)));
    }
    text
}

/// `95 %`.
pub fn percent(share: f64) -> String {
    let hundredths = (share * 100.0 * 1e6).round() / 1e6;
    format!("{hundredths} %")
}

fn with_unit(number: &str, unit: &str) -> String {
    if unit.is_empty() { number.to_owned() } else { format!("{number} {unit}") }
}

/// Text from a document, without line ends or other control characters of its own.
pub fn one_line(text: &str) -> String {
    text.chars().map(|character| if character.is_control() { ' ' } else { character }).collect()
}

/// Adds a line. Writing into a string cannot fail.
fn line(text: &mut String, words: &str) {
    let _ = writeln!(text, "{words}");
}
