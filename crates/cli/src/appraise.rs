//! `appraise`: a visit, or a table of points, as its report.

use crate::Outcome;
use crate::arguments::Appraise;
use crate::files;
use crate::refusal::Refusal;
use crate::table;
use crate::words;
use bandleaf_core::problem::Level;
use bandleaf_core::report::Report;
use bandleaf_leaf::{Document, MOST_BYTES, canonical_json};

/// Prints the report; refuses where nothing can be fitted.
pub fn run(arguments: &Appraise) -> Result<Outcome, Refusal> {
    let name = arguments.file.display().to_string();
    let document = document(arguments, &name)?;
    let report = bandleaf_leaf::report(&document).map_err(|problem| Refusal::of_file(&name, &problem))?;
    let refusal = report.fit.is_none().then(|| no_fit(&name, &report));
    let printed = if arguments.json {
        canonical_json(&report).map_err(|problem| Refusal::of_file(&name, &problem))? + "\n"
    } else if refusal.is_some() {
        String::new()
    } else {
        words::report(&document, &report)
    };
    Ok(Outcome { printed, refusal })
}

fn document(arguments: &Appraise, name: &str) -> Result<Document, Refusal> {
    let bytes = files::read(&arguments.file, MOST_BYTES)?;
    if arguments.speaks_of_table() {
        return table::document(arguments, &bytes, name);
    }
    let start = String::from_utf8_lossy(bytes.get(..512).unwrap_or(&bytes)).trim_start_matches('\u{feff}').to_owned();
    let start = start.trim_start();
    if start.starts_with('<') {
        let sentence =
            "this is a web page; read a value from a leaf with bandleaf read, check it with bandleaf verify.";
        return Err(Refusal::new(format!("{name}: {sentence}")));
    }
    if !start.starts_with(['{', '[']) && !start.is_empty() {
        let sentence =
            "this is no visit in JSON; for a table add --reference COLUMN --indication COLUMN --terms \"1, x\".";
        return Err(Refusal::new(format!("{name}: {sentence}")));
    }
    Document::parse(&bytes).map_err(|problem| Refusal::of_file(name, &problem))
}

/// The first reason why there is no fit.
fn no_fit(name: &str, report: &Report) -> Refusal {
    match report.messages.iter().find(|message| message.level == Level::Error) {
        Some(problem) => Refusal::of_file(name, problem),
        None => Refusal::new(format!("{name}: nothing can be fitted to this visit: check its points and terms.")),
    }
}
