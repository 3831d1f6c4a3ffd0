//! From text to the whole answer: delimiter, rows, heading, columns, points.

use crate::assign::{assign, find_by_name};
use crate::cells::{Row, rows, with_line_feeds};
use crate::columns::{Column, Mark, Reader, Tally, headings};
use crate::delimiter::{self, Delimiter};
use crate::encoding::Encoding;
use crate::header::{Heading, Layout, layout};
use crate::number::Decimal;
use crate::options::{Choice, ColumnDecimal, ColumnKey, Options, Question};
use crate::points::{self, OneOrMany, Point};
use crate::wording::{capital, listed};
use crate::{Intake, MOST_BYTES, MOST_PREVIEW_ROWS};
use bandleaf_core::problem::Problem;
use bandleaf_core::visit::MOST_ROWS;

/// Rows beyond the cap that are read all the same, so that a heading and what stands above it do not count.
const ROOM_FOR_HEADINGS: usize = 64;

/// An answer that holds nothing but the reason.
pub(crate) fn refused(encoding: Encoding, problem: Problem) -> Intake {
    Intake { problems: vec![problem], ..Intake::empty(encoding) }
}

/// The refusal of a text or file that is too large.
pub(crate) fn too_large(bytes: usize) -> Problem {
    let sentence = format!(
        "This is {} MB of data; at most {} MB are read. Keep only the check points, not the whole log.",
        bytes / (1024 * 1024),
        MOST_BYTES / (1024 * 1024)
    );
    Problem::error("too_large", "", sentence).with("bytes", bytes).with("most", MOST_BYTES)
}

/// Reads a text of bearable size.
pub(crate) fn read(text: &str, encoding: Encoding, options: &Options) -> Intake {
    let text = with_line_feeds(text);
    if text.trim().is_empty() {
        return refused(encoding, Problem::error("nothing", "", "There is nothing to read: the text is empty."));
    }
    let (text, declared) = match delimiter::declared(&text) {
        Some((declared, length)) => (text.get(length..).unwrap_or(""), Some(declared)),
        None => (&*text, None),
    };
    let (delimiter, rival) = match options.delimiter.or(declared) {
        Some(known) => (known, None),
        None => {
            let choice = delimiter::choose(text);
            // Who names both columns says that there are two.
            let two = options.columns.reference.is_some() && options.columns.indication.is_some();
            (choice.delimiter, choice.rival.filter(|rival| !(two && *rival == Delimiter::None)))
        }
    };
    let found = match rows(text, delimiter, MOST_ROWS + ROOM_FOR_HEADINGS) {
        Ok(found) => found,
        Err(problem) => return refused(encoding, problem),
    };
    let mut problems = Vec::new();
    if found.quotes_ignored {
        problems.push(Problem::warning(
            "quote_not_closed",
            "",
            "A quotation mark is opened and never closed; quotation marks were read as ordinary characters.",
        ));
    }
    let table = layout(found.rows, options.header);
    explain_layout(&table, &mut problems);
    let mut intake = Intake { delimiter: Some(delimiter), header: table.headings.is_some(), ..Intake::empty(encoding) };
    intake.rows =
        table.data.iter().take(MOST_PREVIEW_ROWS).map(|row| row.iter().map(str::to_owned).collect()).collect();
    intake.row_count = table.data.len();
    intake.problems = problems;
    if found.cut || table.data.len() > MOST_ROWS {
        intake.problems.push(too_many_rows(found.cut, table.data.len()));
        return intake;
    }
    if table.data.is_empty() {
        intake.problems.push(Problem::error("no_rows", "", "There is a heading but no row of data under it."));
    }
    if let Some(rival) = rival {
        intake.questions.push(ask_delimiter(delimiter, rival, options, table.data.first()));
    }
    fill(&mut intake, &table, delimiter, options);
    intake
}

/// Columns, points, and the questions and problems that come with them.
fn fill(intake: &mut Intake, table: &Layout, delimiter: Delimiter, options: &Options) {
    let headings = headings(table);
    let tallies: Vec<Tally> = headings
        .iter()
        .enumerate()
        .map(|(index, heading)| Tally::of(&table.data, index, heading.unit.as_deref()))
        .collect();
    let mut readers: Vec<Reader> = headings
        .iter()
        .zip(&tallies)
        .enumerate()
        .map(|(index, (heading, tally))| {
            let mark = tally.mark(told_decimal(index, &headings, options), delimiter);
            Reader::new(index, heading, tally, mark)
        })
        .collect();
    if intake.questions.is_empty() && !table.data.is_empty() {
        let (questions, problems) = assign(&mut readers, &tallies, table.headings.is_some(), options);
        intake.questions.extend(questions);
        intake.problems.extend(problems);
        ask_decimals(intake, &readers, &tallies, options);
        let (points, problems) = points::read(&table.data, &readers, table.width, delimiter);
        intake.problems.extend(problems);
        if points.iter().map(indications).sum::<usize>() > MOST_ROWS {
            intake.problems.push(too_many_rows(false, points.iter().map(indications).sum()));
        } else if intake.questions.is_empty() {
            intake.points = points;
        }
    }
    intake.columns = readers.into_iter().map(|reader| reader.column).collect();
}

/// Rows that a point stands for in a visit.
fn indications(point: &Point) -> usize {
    match &point.indication {
        Some(OneOrMany::Many(values)) => values.len(),
        _ => 1,
    }
}

fn told_decimal(index: usize, headings: &[Heading], options: &Options) -> Option<Decimal> {
    let names: Vec<&str> = headings.iter().map(|heading| heading.name.as_str()).collect();
    let is_meant = |told: &&ColumnDecimal| match &told.column {
        ColumnKey::Index(meant) => *meant == index,
        ColumnKey::Name(name) => find_by_name(name, &names).contains(&index),
    };
    // The last answer counts.
    options.decimals.iter().rev().find(is_meant).map(|told| told.decimal).or(options.decimal)
}

fn ask_decimals(intake: &mut Intake, readers: &[Reader], tallies: &[Tally], options: &Options) {
    for (reader, tally) in readers.iter().zip(tallies).filter(|(reader, _)| reader.column.is_numeric_role()) {
        match (&reader.mark, &tally.example) {
            (Mark::Open, example) => {
                let example = example.as_ref().map(|example| (example.text.as_str(), example.point, example.comma));
                intake.questions.push(ask_decimal(&reader.column, example, options));
            }
            (Mark::PointByDelimiter, Some(example)) => {
                let sentence = format!(
                    "{}: the point was read as the decimal mark (\"{}\" is {}), since commas separate the cells.",
                    capital(&reader.column.label()),
                    example.text,
                    example.point
                );
                intake.problems.push(
                    Problem::note("decimal_point_by_delimiter", reader.column.label(), sentence)
                        .with("column", reader.column.index + 1),
                );
            }
            _ => {}
        }
    }
}

fn ask_decimal(column: &Column, example: Option<(&str, f64, f64)>, options: &Options) -> Question {
    let choice = |decimal: Decimal, label: String| {
        let mut option = options.clone();
        option.decimals.push(ColumnDecimal { column: ColumnKey::Index(column.index), decimal });
        Choice { label, option }
    };
    let (sentence, point, comma) = match example {
        Some((text, point, comma)) => (
            format!("{}: is \"{text}\" {point} or {comma}?", capital(&column.label())),
            format!("\"{text}\" is {point}: decimal point"),
            format!("\"{text}\" is {comma}: decimal comma"),
        ),
        None => (
            format!(
                "{} has decimal points in some cells and decimal commas in others: which is right?",
                capital(&column.label())
            ),
            "Decimal point".to_owned(),
            "Decimal comma".to_owned(),
        ),
    };
    Question {
        code: "decimal".to_owned(),
        column: Some(column.index),
        sentence,
        choices: vec![choice(Decimal::Point, point), choice(Decimal::Comma, comma)],
    }
}

fn ask_delimiter(best: Delimiter, rival: Delimiter, options: &Options, first: Option<&Row>) -> Question {
    let choice = |delimiter: Delimiter| Choice {
        label: capital(delimiter.words()),
        option: Options { delimiter: Some(delimiter), ..options.clone() },
    };
    let example = first.map_or_else(String::new, |row| format!(" (row {})", row.number));
    Question {
        code: "delimiter".to_owned(),
        column: None,
        sentence: format!("What separates the cells{example}: {}, or {}?", best.words(), rival.words()),
        choices: vec![choice(best), choice(rival)],
    }
}

fn explain_layout(table: &Layout, problems: &mut Vec<Problem>) {
    if let (Some(first), Some(last)) = (table.above.first(), table.above.last()) {
        let which = if first.number == last.number {
            format!("Row {} stands", first.number)
        } else {
            format!("Rows {} to {} stand", first.number, last.number)
        };
        let sentence = format!("{which} above the heading and took no part.");
        problems.push(Problem::note("rows_above_heading", format!("row {}", first.number), sentence));
    }
    if !table.repeated.is_empty() {
        let numbers: Vec<String> = table.repeated.iter().map(|number| format!("row {number}")).collect();
        let sentence = format!("The heading stands again in {} and was passed over.", listed(&numbers));
        problems.push(Problem::note("heading_repeated", "", sentence));
    }
}

fn too_many_rows(cut: bool, count: usize) -> Problem {
    let found = if cut { format!("more than {MOST_ROWS}") } else { count.to_string() };
    let sentence = format!(
        "The table has {found} rows of data; a visit holds at most {MOST_ROWS} indications. Keep only the check points, or the mean of each."
    );
    Problem::error("too_many_rows", "", sentence).with("most", MOST_ROWS)
}
