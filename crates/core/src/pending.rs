//! What a visit says that this version keeps but does not yet compute with.
//!
//! Nothing is ignored silently: the report names it. Statements that would change a number are a warning, the others
//! a note.

use crate::problem::{Level, Problem};
use crate::visit::{NoiseKind, Visit};

/// Messages that name what is not yet taken into account. `prior` holds the places of statements known before that
/// have no closed form with the noise at hand; `growth_integrated` tells of a noise growth that was to be integrated.
pub fn messages(visit: &Visit, prior: &[String], growth_integrated: bool) -> Vec<Problem> {
    let mut numbers: Vec<(String, &str)> = Vec::new();
    let used = || visit.points.iter().enumerate().filter(|(_, p)| crate::observation::is_used(p));
    let mut first = |place: Option<usize>, field: &str, words: &'static str| {
        if let Some(index) = place {
            numbers.push((format!("points[{index}].{field}"), words));
        }
    };
    let positive = |u: Option<f64>| u.is_some_and(|u| u > 0.0);
    first(
        used().find(|(_, p)| positive(p.setting_uncertainty)).map(|p| p.0),
        "setting_uncertainty",
        "the uncertainty of the settings",
    );
    first(
        used().find(|(_, p)| positive(p.reference_uncertainty)).map(|p| p.0),
        "reference_uncertainty",
        "the uncertainty of the reference values",
    );
    if visit.model.noise.kind != NoiseKind::Known {
        first(
            used().find(|(_, p)| positive(p.indication_uncertainty)).map(|p| p.0),
            "indication_uncertainty",
            "the points' own uncertainties while the noise is unknown",
        );
    }
    if let Some(index) = visit.standards.iter().position(|s| s.errors.iter().any(|e| e.standard_uncertainty > 0.0)) {
        numbers.push((format!("standards[{index}].errors"), "the standard's own errors"));
    }
    if positive(visit.instrument.output.resolution) {
        numbers.push((
            "instrument.output.resolution".into(),
            "the resolution as a part of its own (the scatter of the points contains it)",
        ));
    }
    if visit.model.suspects.as_ref().is_some_and(|s| s.enabled) {
        numbers.push(("model.suspects".into(), "the watch for suspect points"));
    }
    if growth_integrated {
        numbers.push(("model.noise.profile".into(), "a noise that grows by an unknown amount"));
    }
    for place in prior {
        numbers.push((place.clone(), "what was known before of a kind that needs known noise"));
    }
    let mut later: Vec<(String, &str)> = Vec::new();
    let mut when = |there: bool, place: &str, words: &'static str| {
        if there {
            later.push((place.to_owned(), words));
        }
    };
    when(!visit.model.candidates.is_empty(), "model.candidates", "the comparison of shapes");
    when(visit.tolerance.is_some(), "tolerance", "the tolerance and the verdict");
    when(visit.target_expanded_uncertainty.is_some(), "target_expanded_uncertainty", "the uncertainty aimed at");
    when(visit.plan.is_some(), "plan", "the plan of further points");
    when(
        visit.in_use.as_ref().is_some_and(|u| !u.contributions.is_empty() || u.valid_until.is_some()),
        "in_use",
        "contributions in use",
    );
    when(!visit.earlier.is_empty(), "earlier", "the earlier visits");
    [(Level::Warning, "not_yet_in_the_numbers", numbers), (Level::Note, "not_yet_computed", later)]
        .into_iter()
        .filter(|(_, _, list)| !list.is_empty())
        .map(|(level, code, list)| {
            let words: Vec<&str> = list.iter().map(|item| item.1).collect();
            let places: Vec<&str> = list.iter().map(|item| item.0.as_str()).collect();
            let sentence = format!("Not yet taken into account: {}.", words.join("; "));
            Problem::new(level, code, list[0].0.clone(), sentence).with("places", places.join(" "))
        })
        .collect()
}
