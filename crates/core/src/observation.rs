//! Observations: the rows of the fit, one for each single indication that is used.
//!
//! From the points of one state (as found or as left) that are complete and not set aside: the argument and the
//! response according to the orientation, the influence quantities in the order of their names, and the noise of the
//! row as σ²·v + u² with v = profile/m.

use crate::dd::Dd;
use crate::problem::Problem;
use crate::visit::{Orientation, Point, State, Visit, is_usable};

/// One row of the fit.
#[derive(Clone, Debug)]
pub struct Observation {
    /// Index of the point in the visit.
    pub point: usize,
    /// Index of the repeat within the point.
    pub repeat: usize,
    /// Argument of the fit.
    pub argument: f64,
    /// Response of the fit, exact.
    pub response: Dd,
    /// Influence quantities, in the order of their names.
    pub influences: Vec<f64>,
    /// v: noise variance over σ².
    pub variance_ratio: f64,
    /// Known standard uncertainty of the indication itself, 0 where none is given.
    pub own_uncertainty: f64,
}

/// The argument of the fit for a pair, by orientation.
pub fn argument(orientation: Orientation, reference: f64, indication: f64) -> f64 {
    match orientation {
        Orientation::IndicationFromReference => reference,
        Orientation::ReferenceFromIndication | Orientation::CorrectionFromIndication => indication,
    }
}

/// The response of the fit for a pair, by orientation, without rounding.
pub fn response(orientation: Orientation, reference: f64, indication: f64) -> Dd {
    match orientation {
        Orientation::IndicationFromReference => Dd::from(indication),
        Orientation::ReferenceFromIndication => Dd::from(reference),
        Orientation::CorrectionFromIndication => Dd::from_sum(reference, -indication),
    }
}

/// Whether a point has both numbers, within what can be computed with, and is not set aside.
pub fn is_used(point: &Point) -> bool {
    point.set_aside.is_none() && pair(point).is_some()
}

/// Reference and indications of a point that is complete.
pub fn pair(point: &Point) -> Option<(f64, &[f64])> {
    let reference = point.reference.filter(|r| is_usable(*r))?;
    let values = point.indication.as_ref()?.values();
    (!values.is_empty() && values.iter().all(|v| is_usable(*v))).then_some((reference, values))
}

/// The rows of the points in one state, in the order given.
///
/// `needed` holds the indices of the influence quantities that the shape uses; `names` all their names. `profile` is
/// the noise profile at an argument.
///
/// # Errors
/// A used point without a value for an influence quantity that the shape needs; repeats or uncertainties that are not
/// positive.
pub fn observations(
    visit: &Visit,
    state: State,
    names: &[String],
    needed: &[usize],
    profile: &dyn Fn(f64) -> f64,
) -> Result<Vec<Observation>, Problem> {
    let mut rows = Vec::new();
    for (index, point) in visit.points.iter().enumerate() {
        let Some((reference, values)) = pair(point).filter(|_| is_used(point) && point.state == state) else {
            continue;
        };
        let influences = influences_of(visit, index, point, names, needed)?;
        let m = repeats(index, point, values.len())?;
        let own_uncertainty = own_uncertainty(index, point)?;
        for (repeat, &indication) in values.iter().enumerate() {
            let argument = argument(visit.model.orientation, reference, indication);
            rows.push(Observation {
                point: index,
                repeat,
                argument,
                response: response(visit.model.orientation, reference, indication),
                influences: influences.clone(),
                variance_ratio: profile(argument) / m,
                own_uncertainty,
            });
        }
    }
    Ok(rows)
}

fn influences_of(
    visit: &Visit,
    index: usize,
    point: &Point,
    names: &[String],
    needed: &[usize],
) -> Result<Vec<f64>, Problem> {
    let value = |name: &String| point.influences.get(name).or_else(|| visit.conditions.get(name)).copied();
    for &k in needed {
        let name = &names[k];
        if !value(name).is_some_and(is_usable) {
            let sentence = format!(
                "Point {} has no {name}, which the shape uses: fill it in, state it in the conditions, or set the point aside.",
                index + 1
            );
            let place = format!("points[{index}].influences.{name}");
            return Err(Problem::error("influence_missing", place, sentence)
                .with("point", index + 1)
                .with("name", name.as_str()));
        }
    }
    Ok(names.iter().map(|name| value(name).unwrap_or(f64::NAN)).collect())
}

fn repeats(index: usize, point: &Point, given: usize) -> Result<f64, Problem> {
    match point.repeats {
        None => Ok(1.0),
        Some(m) if m >= 1.0 && m.is_finite() && given == 1 => Ok(m),
        Some(m) if given == 1 => {
            let sentence = format!("Point {}: the number of repeats is {m}; it must be 1 or more.", index + 1);
            Err(Problem::error("repeats_not_positive", format!("points[{index}].repeats"), sentence)
                .with("point", index + 1))
        }
        Some(_) => {
            let sentence = format!(
                "Point {} has both raw repeats and a number of repeats: give the raw indications, or their mean with the number.",
                index + 1
            );
            Err(Problem::error("repeats_twice", format!("points[{index}].repeats"), sentence).with("point", index + 1))
        }
    }
}

fn own_uncertainty(index: usize, point: &Point) -> Result<f64, Problem> {
    match point.indication_uncertainty {
        None => Ok(0.0),
        Some(u) if u >= 0.0 && is_usable(u) => Ok(u),
        Some(u) => {
            let place = format!("points[{index}].indication_uncertainty");
            let sentence =
                format!("Point {}: the uncertainty of the indication is {u}; it must be zero or positive.", index + 1);
            Err(Problem::error("uncertainty_negative", place, sentence).with("point", index + 1))
        }
    }
}
