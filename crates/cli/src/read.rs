//! `read`: a reading becomes a value, by the visit in a leaf.

use crate::arguments::Read;
use crate::files;
use crate::refusal::Refusal;
use crate::words;
use bandleaf_core::visit::{Reading, Visit};
use bandleaf_leaf::{Appraised, Outcome, Page, open, page};

/// Prints the value. Refuses a leaf that is not as it was pressed.
pub fn run(arguments: &Read) -> Result<String, Refusal> {
    let name = arguments.file.display().to_string();
    let bytes = files::read(&arguments.file, page::MOST_BYTES)?;
    let page = Page::take_apart(&bytes).map_err(|problem| Refusal::of_file(&name, &problem))?;
    let opened = open(&page);
    if opened.outcome == Outcome::Blank {
        return Err(Refusal::new(format!("{name}: this is a page without a visit: name a leaf.")));
    }
    let document = match opened.document.as_ref().filter(|_| opened.may_be_read()) {
        Some(document) => document,
        None => return Err(Refusal::new(format!("{name}: {}", opened.sentence))),
    };
    let visit = document.visit().map_err(|problem| Refusal::of_file(&name, &problem))?;
    let reading = reading(arguments, &visit)?;
    let appraised = Appraised::new(document).map_err(|problem| Refusal::of_file(&name, &problem))?;
    let value = appraised.appraisal().read(&reading);
    if value.value.is_none() {
        let reason =
            value.messages.first().map_or("There is no value for this reading.", |problem| problem.sentence.as_str());
        return Err(Refusal::new(format!("{name}: {reason}")));
    }
    let report = appraised.outline();
    let mut printed = words::reading(&value, &report.units.output, &words::percent(report.coverage));
    if opened.outcome != Outcome::Identical {
        printed.push_str(&format!("note: {}\n", words::one_line(&opened.sentence)));
    }
    Ok(printed)
}

fn reading(arguments: &Read, visit: &Visit) -> Result<Reading, Refusal> {
    let known = &visit.instrument.influences;
    if let Some((name, _)) = arguments.influences.iter().find(|(name, _)| !known.contains_key(name)) {
        let names: Vec<&str> = known.keys().map(String::as_str).collect();
        let names = if names.is_empty() { "it has none".to_owned() } else { format!("it has {}", names.join(", ")) };
        return Err(Refusal::new(format!(
            "This leaf has no influence quantity “{name}” ({names}): leave it out or correct it."
        )));
    }
    Ok(Reading {
        indications: arguments.indications.clone(),
        influences: arguments.influences.iter().cloned().collect(),
        ..Reading::default()
    })
}
