//! A table of points as a visit. A cell that cannot be read is refused, not left out: a script would not notice that a
//! point is missing.

use crate::arguments::Appraise;
use crate::refusal::Refusal;
use bandleaf_core::problem::{Level, Problem};
use bandleaf_intake::{ColumnKey, ColumnKeys, ColumnOptions, InfluenceColumns, Intake, Options, Question, Role};
use bandleaf_leaf::Document;
use serde_json::{Map, Value, json};

/// The visit with the points of a table.
pub fn document(arguments: &Appraise, bytes: &[u8], name: &str) -> Result<Document, Refusal> {
    let terms = terms(arguments.terms.as_deref().unwrap_or_default());
    if terms.is_empty() {
        return Err(Refusal::new("Name the terms of the shape for a table, for instance --terms \"1, x, x^2\"."));
    }
    let intake = bandleaf_intake::read_bytes(bytes, &options(arguments));
    if let Some(question) = intake.questions.first() {
        return Err(unanswered(name, question));
    }
    let unread: Vec<&Problem> = intake.problems.iter().filter(|problem| problem.level == Level::Error).collect();
    if let Some((first, others)) = unread.split_first() {
        let more = if others.is_empty() { String::new() } else { format!(" ({} more in this table.)", others.len()) };
        return Err(Refusal::new(format!(
            "{name}: {}{more} Correct the table or the command line and try again.",
            first.sentence
        )));
    }
    let visit = visit(&intake, terms, &arguments.readings);
    visit.and_then(Document::from_value).map_err(|problem| Refusal::of_file(name, &problem))
}

fn options(arguments: &Appraise) -> Options {
    let key = |name: &String| ColumnKey::Name(name.clone());
    let indication = match arguments.indications.as_slice() {
        [] => None,
        [one] => Some(ColumnKeys::One(key(one))),
        many => Some(ColumnKeys::Many(many.iter().map(key).collect())),
    };
    let influences = arguments.influences.iter().map(key).collect::<Vec<ColumnKey>>();
    let columns = ColumnOptions {
        reference: arguments.reference.as_ref().map(key),
        indication,
        influences: (!influences.is_empty()).then_some(InfluenceColumns::Named(influences)),
        ..ColumnOptions::default()
    };
    Options { columns, decimal: arguments.decimal, ..Options::default() }
}

fn unanswered(name: &str, question: &Question) -> Refusal {
    let answer = match question.code.as_str() {
        "decimal" => "Answer with --decimal comma or --decimal point.",
        "delimiter" => "Save the table with semicolons or tabs between its cells.",
        _ => "Answer with --reference COLUMN and --indication COLUMN.",
    };
    Refusal::new(format!("{name}: {} {answer}", question.sentence))
}

fn visit(intake: &Intake, terms: Vec<String>, readings: &[f64]) -> Result<Value, Problem> {
    let points = serde_json::to_value(&intake.points)
        .map_err(|error| Problem::error("not_json", "points", format!("The points cannot be kept ({error}).")))?;
    let unit = |role: &Role| {
        let column = intake.columns.iter().find(|column| column.role.as_ref() == Some(role));
        column.and_then(|column| column.unit.clone()).unwrap_or_default()
    };
    let influences: Map<String, Value> = intake
        .columns
        .iter()
        .filter_map(|column| match &column.role {
            Some(Role::Influence(name)) => Some((name.clone(), json!({ "unit": column.unit }))),
            _ => None,
        })
        .collect();
    let input = unit(&Role::Reference);
    let output = Some(unit(&Role::Indication)).filter(|unit| !unit.is_empty());
    let readings: Vec<[f64; 1]> = readings.iter().map(|reading| [*reading]).collect();
    Ok(json!({
        "schema": bandleaf_core::visit::SCHEMA,
        "instrument": { "unit": input, "output": { "unit": output }, "influences": influences },
        "points": points,
        "model": { "terms": terms },
        "ask": { "readings": readings },
    }))
}

/// The terms between commas that stand in no parentheses.
fn terms(text: &str) -> Vec<String> {
    let mut depth = 0_usize;
    let split = text.split(|character: char| {
        match character {
            '(' => depth += 1,
            ')' => depth = depth.saturating_sub(1),
            _ => {}
        }
        character == ',' && depth == 0
    });
    split.map(|term| term.trim().to_owned()).filter(|term| !term.is_empty()).collect()
}

#[cfg(test)]
mod tests {
    use super::terms;

    #[test]
    fn terms_end_at_commas_outside_parentheses() {
        assert_eq!(terms("1, x ,x^2"), ["1", "x", "x^2"]);
        assert_eq!(terms("f(x, 2), x*(1, 2), )x"), ["f(x, 2)", "x*(1, 2)", ")x"]);
        assert!(terms(" , ").is_empty());
    }
}
