//! From a visit to its report.
//!
//! `appraise` fits once and keeps the fit; the parts of the report are read from the handle as they are needed, so that
//! a typed reading costs no new fit and the answers come before the bands. It never fails: where something cannot be
//! computed the report says what, where and what to do.

use crate::checks;
use crate::dd::Dd;
use crate::diagnostics::{self, RowDiagnostics};
use crate::display;
use crate::distribution::{Law, chi_squared_quantile};
use crate::float;
use crate::noise::{Growth, Sigma};
use crate::nominal::Characteristic;
use crate::observation::{self, Observation};
use crate::pending;
use crate::posterior::{self, Posterior};
use crate::predict::{Mixture, Predictor};
use crate::prior::Prior;
use crate::problem::{Level, Problem};
use crate::reading::{Reader, Scope};
use crate::report::{
    At, Curve, Estimate, Fit, Interval, METHOD, NoiseReport, PointReport, Program, Report, SCHEMA, TermReport, Units,
    Value,
};
use crate::shape::{Shape, TermList, formula};
use crate::visit::{self, MOST_ROWS, Orientation, Place, Reading, State, Visit};

/// Places at which the curve of a report is drawn.
const CURVE_PLACES: usize = 201;

/// The coverage probability where none is given.
const COVERAGE: f64 = 0.95;

/// A scale of the noise below this share of the largest response is rounding of double precision, not scatter.
const ROUNDING: f64 = 4e-16;

/// A visit with its fit: the handle from which the parts of the report are read.
pub struct Appraisal {
    visit: Visit,
    state: State,
    coverage: f64,
    names: Vec<String>,
    conditions: Vec<f64>,
    nominal: Option<Characteristic>,
    messages: Vec<Problem>,
    fitted: Option<Fitted>,
    as_found: Option<Box<Appraisal>>,
}

/// Everything that the fit of one state needs and yields.
struct Fitted {
    shape: TermList,
    rows: Vec<Observation>,
    design: Vec<Vec<Dd>>,
    growth: Growth,
    sigma: Sigma,
    posterior: Posterior,
    spanned: Interval,
}

/// Appraises a visit.
pub fn appraise(visit: &Visit) -> Appraisal {
    let used = |state| visit.points.iter().any(|p| observation::is_used(p) && p.state == state);
    match (used(State::AsFound), used(State::AsLeft)) {
        (true, true) => {
            let mut left = of_state(visit, State::AsLeft);
            left.as_found = Some(Box::new(of_state(visit, State::AsFound)));
            left
        }
        (_, true) => of_state(visit, State::AsLeft),
        _ => of_state(visit, State::AsFound),
    }
}

fn of_state(visit: &Visit, state: State) -> Appraisal {
    let names: Vec<String> = visit.instrument.influences.keys().cloned().collect();
    let conditions = names.iter().map(|n| visit.conditions.get(n).copied().unwrap_or(f64::NAN)).collect();
    let mut messages = Vec::new();
    let nominal = Characteristic::of(&visit.instrument).unwrap_or_else(|problem| {
        messages.push(problem);
        None
    });
    let coverage = coverage_of(visit, &mut messages);
    let mut pending = (Vec::new(), false);
    let fitted = fit(visit, state, &names, &mut pending);
    let fitted = fitted.map_err(|problem| messages.push(problem)).ok();
    let mut appraisal = Appraisal {
        visit: visit.clone(),
        state,
        coverage,
        names,
        conditions,
        nominal,
        messages,
        fitted,
        as_found: None,
    };
    appraisal.say_of_points();
    appraisal.say_of_instrument();
    appraisal.say_of_noise();
    appraisal.messages.extend(pending::messages(visit, &pending.0, pending.1));
    appraisal.messages.sort_by_key(|m| std::cmp::Reverse(m.level));
    appraisal
}

fn coverage_of(visit: &Visit, messages: &mut Vec<Problem>) -> f64 {
    match visit.coverage {
        None => COVERAGE,
        Some(p) if (0.01..=0.999_999).contains(&p) => p,
        Some(p) => {
            let sentence =
                format!("The coverage probability is {p}; it must lie between 0.01 and 0.999999. 0.95 is used.");
            messages.push(Problem::warning("coverage_out_of_range", "coverage", sentence));
            COVERAGE
        }
    }
}

/// Reads the shape, the noise and what was known before, and fits them to the rows of one state.
fn fit(visit: &Visit, state: State, names: &[String], pending: &mut (Vec<String>, bool)) -> Result<Fitted, Problem> {
    if let Some(schema) = visit.schema.as_deref().filter(|s| *s != visit::SCHEMA) {
        let sentence = format!(
            "The visit says it is of the kind {schema}; this version reads {}: open it with a newer version.",
            visit::SCHEMA
        );
        return Err(Problem::error("schema_unknown", "schema", sentence).with("schema", schema));
    }
    let total: usize = visit.points.iter().map(|p| p.indication.as_ref().map_or(0, |i| i.values().len())).sum();
    if total > MOST_ROWS {
        let sentence = format!(
            "The visit holds {total} indications; at most {MOST_ROWS} can be used: leave some out or split the visit."
        );
        return Err(Problem::error("too_many_rows", "points", sentence).with("rows", total).with("most", MOST_ROWS));
    }
    let orientation = visit.model.orientation;
    if orientation == Orientation::CorrectionFromIndication
        && visit.instrument.output.unit.as_ref().is_some_and(|u| *u != visit.instrument.unit)
    {
        return Err(Problem::error(
            "correction_units",
            "model.orientation",
            "A correction needs input and output in the same unit: choose another orientation, or state the indications in the unit of the reference.",
        ));
    }
    let shape = TermList::new(&visit.model.terms, variable(orientation), names)?;
    let sigma = Sigma::of(&visit.model.noise)?;
    let arguments: Vec<f64> = visit
        .points
        .iter()
        .filter(|p| observation::is_used(p) && p.state == state)
        .filter_map(observation::pair)
        .flat_map(|(x, ys)| ys.iter().map(move |&y| observation::argument(orientation, x, y)))
        .collect();
    let spanned = arguments.iter().fold([f64::INFINITY, f64::NEG_INFINITY], |s, &a| [s[0].min(a), s[1].max(a)]);
    let (growth, integrated) = Growth::of(visit, spanned[1] - spanned[0])?;
    pending.1 = integrated;
    let rows = observation::observations(visit, state, names, &shape.influences_used(), &|x| growth.at(x))?;
    let design = rows.iter().map(|row| design_row(&shape, row, names, orientation)).collect::<Result<Vec<_>, _>>()?;
    let (prior, left) = Prior::of(&visit.model.known_before, &shape, sigma, &design)?;
    pending.0 = left;
    let posterior = posterior::fit(&rows, &design, &shape, sigma, &prior)?;
    Ok(Fitted { shape, rows, design, growth, sigma, posterior, spanned })
}

/// The letter in which the terms are written.
fn variable(orientation: Orientation) -> &'static str {
    match orientation {
        Orientation::IndicationFromReference => "x",
        _ => "y",
    }
}

/// The basis functions at a row, all finite.
fn design_row(
    shape: &TermList,
    row: &Observation,
    names: &[String],
    orientation: Orientation,
) -> Result<Vec<Dd>, Problem> {
    let basis = shape.row(row.argument, &row.influences);
    match basis.iter().position(|f| !f.is_finite()) {
        None => Ok(basis),
        Some(column) => {
            let term = shape.terms()[column].as_str();
            let influences: String = shape
                .influences_used()
                .iter()
                .map(|&k| format!(", {} = {}", names[k], display::as_given(row.influences[k])))
                .collect();
            let sentence = format!(
                "The term {term} has no finite value at point {} ({} = {}{influences}): choose another term, or set the point aside.",
                row.point + 1,
                variable(orientation),
                display::as_given(row.argument)
            );
            let side = if orientation == Orientation::IndicationFromReference { "reference" } else { "indication" };
            let place = format!("points[{}].{side}", row.point);
            Err(Problem::error("term_not_finite", place, sentence).with("term", term).with("point", row.point + 1))
        }
    }
}

impl Appraisal {
    /// The whole report.
    pub fn report(&self) -> Report {
        let mut report = self.outline();
        let (first, last) = self.drawn_range();
        report.curve = self.curve(&spread(first, last, CURVE_PLACES));
        report.as_found = self.as_found.as_ref().map(|a| Box::new(a.report()));
        report
    }

    /// The report without the curve.
    pub fn outline(&self) -> Report {
        let diagnostics = self.fitted.as_ref().map(|f| self.all_diagnostics(f)).unwrap_or_default();
        Report {
            schema: SCHEMA,
            program: Program { name: "bandleaf", version: env!("CARGO_PKG_VERSION"), method: METHOD },
            visit_digest: None,
            state: match self.state {
                State::AsFound => "as_found",
                State::AsLeft => "as_left",
            },
            coverage: self.coverage,
            units: self.units(),
            fit: self.fitted.as_ref().map(|f| self.fit_report(f, &diagnostics)),
            curve: None,
            at: self.visit.ask.at.iter().filter_map(|place| self.at(place)).collect(),
            readings: self.visit.ask.readings.iter().map(|asked| self.read(&asked.to_reading())).collect(),
            points: self.points(&diagnostics),
            checks: self
                .fitted
                .iter()
                .filter_map(|f| checks::lack_of_fit(&f.rows, f.shape.columns(), f.posterior.residual_sum_of_squares))
                .collect(),
            shapes: Vec::new(),
            conformity: None,
            plan: Vec::new(),
            messages: self.messages.clone(),
            as_found: self.as_found.as_ref().map(|a| Box::new(a.outline())),
        }
    }

    /// The curve and both bands at places, in the unit of the argument; `None` without a fit. Places at which the shape
    /// is undefined are left out.
    pub fn curve(&self, places: &[f64]) -> Option<Curve> {
        let fitted = self.fitted.as_ref()?;
        let predictor = fitted.predictor();
        let inverted = self.visit.model.orientation == Orientation::IndicationFromReference;
        let nominal = self.nominal.filter(|n| {
            inverted
                || (*n == Characteristic::Identity
                    && self.visit.model.orientation == Orientation::ReferenceFromIndication)
        });
        let mut curve = Curve {
            x: Vec::with_capacity(places.len()),
            estimate: Vec::with_capacity(places.len()),
            standard_uncertainty: Some(Vec::with_capacity(places.len())),
            curve_interval: Vec::with_capacity(places.len()),
            indication_interval: Vec::with_capacity(places.len()),
            nominal: nominal.map(|_| Vec::with_capacity(places.len())),
        };
        for &x in places {
            let (mean, new) = predictor.both(x, &self.conditions);
            let (interval, wide) = (mean.interval(self.coverage), new.interval(self.coverage));
            let should = nominal.map(|n| n.at(x));
            if !interval.iter().chain(&wide).all(|e| e.is_finite()) || should.is_some_and(|n| !n.is_finite()) {
                continue;
            }
            curve.x.push(x);
            curve.estimate.push(mean.location());
            curve.curve_interval.push(interval);
            curve.indication_interval.push(wide);
            curve.standard_uncertainty =
                curve.standard_uncertainty.zip(mean.standard_deviation()).map(|(mut all, one)| {
                    all.push(one);
                    all
                });
            curve.nominal = curve.nominal.zip(should).map(|(mut all, one)| {
                all.push(one.to_f64());
                all
            });
        }
        Some(curve)
    }

    /// First and last place at which the curve is worth drawing, in the unit of the argument.
    pub fn drawn_range(&self) -> (f64, f64) {
        let spanned = self.fitted.as_ref().map(|f| f.spanned).filter(|s| s[0] <= s[1]);
        let spanned = spanned.or(self.range().map(|(a, b)| [a, b])).unwrap_or([0.0, 1.0]);
        let (low, high) = match (self.visit.model.orientation, self.range()) {
            (Orientation::IndicationFromReference, Some(range)) => range,
            (_, Some(range)) => match self.nominal {
                Some(n) => {
                    let ends = (n.at(range.0).to_f64(), n.at(range.1).to_f64());
                    (ends.0.min(ends.1), ends.0.max(ends.1))
                }
                None => (spanned[0], spanned[1]),
            },
            (_, None) => (spanned[0], spanned[1]),
        };
        (low.min(spanned[0]), high.max(spanned[1]))
    }

    /// Turns a reading into a value; changes nothing.
    pub fn read(&self, reading: &Reading) -> Value {
        let refused = |problem: Problem| Value {
            indications: reading.indications.clone(),
            mean_indication: None,
            value: None,
            linearised: None,
            solutions: Vec::new(),
            budget: Vec::new(),
            flags: Vec::new(),
            messages: vec![problem],
        };
        let Some(fitted) = &self.fitted else {
            let reason = self.messages.iter().find(|m| m.level == Level::Error).map_or("", |m| m.sentence.as_str());
            let sentence = format!("There is no curve yet, so a reading cannot be turned into a value. {reason}");
            return refused(Problem::error("no_curve", "points", sentence.trim_end().to_owned()));
        };
        let mut influences = self.conditions.clone();
        for (k, name) in self.names.iter().enumerate() {
            if let Some(&value) = reading.influences.get(name) {
                influences[k] = value;
            }
        }
        if let Some(&k) = fitted.shape.influences_used().iter().find(|&&k| !influences[k].is_finite()) {
            let name = self.names[k].as_str();
            let sentence = format!("The curve depends on {name}: say what it is for this reading.");
            return refused(
                Problem::error("influence_missing", format!("influences.{name}"), sentence).with("name", name),
            );
        }
        let units = self.units();
        Reader {
            predictor: fitted.predictor(),
            sigma: fitted.sigma,
            orientation: self.visit.model.orientation,
            scope: self.scope(fitted),
            units: (&units.input, &units.output),
        }
        .read(reading, &influences)
    }

    fn scope(&self, fitted: &Fitted) -> Scope {
        let references = fitted.rows.iter().filter_map(|r| self.visit.points.get(r.point)?.reference);
        let (low, high) = references.fold((f64::INFINITY, f64::NEG_INFINITY), |s, x| (s.0.min(x), s.1.max(x)));
        let (below, above) = self.hard_limits();
        Scope {
            range: self.range().unwrap_or((low, high)),
            hard_limits: (below, above),
            spanned: fitted.spanned,
            coverage: self.coverage,
        }
    }

    /// The instrument's range, ascending; `None` where none or an empty one is given.
    fn range(&self) -> Option<(f64, f64)> {
        let (a, b) = self.visit.instrument.range?;
        (visit::is_usable(a) && visit::is_usable(b) && a != b).then_some((a.min(b), a.max(b)))
    }

    /// What cannot occur; no limit where the two contradict each other.
    fn hard_limits(&self) -> (f64, f64) {
        let (below, above) = self.visit.instrument.hard_limits.unwrap_or((None, None));
        let limits = (below.unwrap_or(f64::NEG_INFINITY), above.unwrap_or(f64::INFINITY));
        if limits.0 < limits.1 { limits } else { (f64::NEG_INFINITY, f64::INFINITY) }
    }

    fn units(&self) -> Units {
        let input = self.visit.instrument.unit.clone();
        let output = self.visit.instrument.output.unit.clone().unwrap_or_else(|| input.clone());
        let (response, argument) = match self.visit.model.orientation {
            Orientation::IndicationFromReference => (output.clone(), input.clone()),
            _ => (input.clone(), output.clone()),
        };
        Units { input, output, response, argument, variable: variable(self.visit.model.orientation).to_owned() }
    }

    fn fit_report(&self, fitted: &Fitted, diagnostics: &[RowDiagnostics]) -> Fit {
        let (posterior, shape) = (&fitted.posterior, &fitted.shape);
        let p = shape.columns();
        let units = self.units();
        let influence_units: Vec<String> =
            self.names.iter().map(|n| self.visit.instrument.influences[n].unit.clone()).collect();
        let coefficient_units = shape.units(&units.response, &units.argument, &influence_units);
        let displayed = shape.display_terms();
        let unit_row = |j: usize| -> Vec<Dd> { (0..p).map(|k| if k == j { Dd::ONE } else { Dd::ZERO }).collect() };
        let terms = (0..p)
            .map(|j| {
                let mixture = Mixture::of_components(posterior, &unit_row(j));
                TermReport {
                    term: shape.terms()[j].clone(),
                    display: displayed[j].clone(),
                    estimate: mixture.location(),
                    scale: mixture.scale(),
                    standard_uncertainty: mixture.standard_deviation(),
                    interval: mixture.interval(self.coverage),
                    unit: coefficient_units[j].clone(),
                }
            })
            .collect();
        let (law, scale_matrix) = match posterior.components.as_slice() {
            [c] => (c.law, crate::factor::multiply(&c.root, &c.root.transpose())),
            _ => (Law::Normal, nalgebra::DMatrix::from_element(p, p, Dd::ZERO)),
        };
        let matrix = |factor: f64| -> Vec<Vec<f64>> {
            (0..p).map(|i| (0..p).map(|j| (scale_matrix[(i, j)] * factor).to_f64()).collect()).collect()
        };
        let left_out: Option<Vec<f64>> = diagnostics.iter().map(|d| d.left_out_log_density).collect();
        let (n, nu) = (fitted.rows.len(), law.degrees_of_freedom());
        Fit {
            orientation: match self.visit.model.orientation {
                Orientation::IndicationFromReference => "indication_from_reference",
                Orientation::ReferenceFromIndication => "reference_from_indication",
                Orientation::CorrectionFromIndication => "correction_from_indication",
            },
            formula: formula(
                match self.visit.model.orientation {
                    Orientation::IndicationFromReference => "y",
                    Orientation::ReferenceFromIndication => "x",
                    Orientation::CorrectionFromIndication => "x \u{2212} y",
                },
                shape,
            ),
            terms,
            covariance: match nu {
                None => Some(matrix(1.0)),
                Some(nu) if nu > 2.0 => Some(matrix(nu / (nu - 2.0))),
                Some(_) => None,
            },
            scale_matrix: matrix(1.0),
            noise: self.noise_report(fitted),
            degrees_of_freedom: nu,
            residual_sum_of_squares: posterior.residual_sum_of_squares.to_f64(),
            residual_degrees_of_freedom: (n > p).then(|| (n - p) as f64),
            log_evidence: posterior.log_evidence.filter(|e| e.is_finite()),
            evidence_is_proper: posterior.evidence_is_proper,
            condition_number: Some(posterior.condition_number).filter(|c| c.is_finite()),
            effective_parameters: diagnostics.iter().fold(0.0, |sum, d| sum + d.leverage),
            left_out_log_density: left_out.filter(|all| !all.is_empty()).map(|all| all.iter().sum()),
            points_used: n,
            spanned: (n > 0).then_some(fitted.spanned),
        }
    }

    fn noise_report(&self, fitted: &Fitted) -> NoiseReport {
        let tail = (1.0 - self.coverage) / 2.0;
        let noise = fitted.posterior.components.first().map(|c| c.noise.to_f64());
        let degrees = fitted.posterior.components.first().and_then(|c| c.law.degrees_of_freedom());
        let interval = noise.zip(degrees).map(|(s, nu)| {
            let limit = |p: f64| s * float::sqrt(nu / chi_squared_quantile(nu, p));
            [limit(1.0 - tail), limit(tail)]
        });
        let kind = match fitted.sigma {
            Sigma::Unknown => "unknown",
            Sigma::Known(0.0) => "per_point",
            Sigma::Known(_) => "known",
            Sigma::Stated { .. } => "stated",
        };
        NoiseReport {
            kind,
            estimate: noise.filter(|_| kind != "per_point"),
            interval: interval.filter(|i| i.iter().all(|e| e.is_finite())),
        }
    }

    /// The curve, a new indication and the error of indication at a place asked for; `None` without a fit or outside
    /// the domain of the shape.
    fn at(&self, place: &Place) -> Option<At> {
        let fitted = self.fitted.as_ref()?;
        let mut influences = self.conditions.clone();
        let x = match place {
            Place::Value(x) => *x,
            Place::Under { x, influences: own } => {
                for (k, name) in self.names.iter().enumerate() {
                    influences[k] = own.get(name).copied().unwrap_or(influences[k]);
                }
                *x
            }
        };
        let (mean, new) = fitted.predictor().both(x, &influences);
        let finite = |m: &Mixture| m.parts.iter().all(|p| p.location.is_finite() && p.scale.is_finite());
        if !finite(&mean) || !finite(&new) {
            return None;
        }
        let unit = self.units().response;
        let inverted = self.visit.model.orientation == Orientation::IndicationFromReference;
        let error = self.nominal.filter(|_| inverted).map(|n| n.at(x)).filter(|n| n.is_finite()).map(|n| {
            let mut shifted = mean.clone();
            shifted.parts.iter_mut().for_each(|part| part.location -= n);
            self.estimate(&shifted, &unit)
        });
        let error = error.filter(|e| e.estimate.is_finite());
        Some(At {
            x,
            curve: self.estimate(&mean, &unit),
            indication: self.estimate(&new, &unit),
            error,
            extrapolated: x < fitted.spanned[0] || x > fitted.spanned[1],
        })
    }

    fn estimate(&self, mixture: &Mixture, unit: &str) -> Estimate {
        let interval = mixture.interval(self.coverage);
        let estimate = mixture.location();
        Estimate {
            estimate,
            scale: mixture.scale(),
            standard_uncertainty: mixture.standard_deviation(),
            interval,
            display: display::value_with_uncertainty(estimate, 0.5 * (interval[1] - interval[0]), unit),
        }
    }

    fn all_diagnostics(&self, fitted: &Fitted) -> Vec<RowDiagnostics> {
        fitted
            .rows
            .iter()
            .zip(&fitted.design)
            .enumerate()
            .filter_map(|(i, (row, basis))| diagnostics::of_row(&fitted.posterior, basis, row.response, i))
            .collect()
    }

    /// One entry for each indication of a complete point, in the order given.
    fn points(&self, diagnostics: &[RowDiagnostics]) -> Vec<PointReport> {
        let mut used = self.fitted.iter().flat_map(|f| f.rows.iter().enumerate()).peekable();
        let mut reports = Vec::new();
        for (index, point) in self.visit.points.iter().enumerate() {
            let Some((reference, values)) = observation::pair(point) else {
                continue;
            };
            for (repeat, &indication) in values.iter().enumerate() {
                let row = used.next_if(|(_, row)| row.point == index && row.repeat == repeat).map(|(i, _)| i);
                let mut report = self.point(index, repeat, reference, indication);
                match (row, &self.fitted) {
                    (Some(i), Some(fitted)) => describe_used(&mut report, fitted, i, diagnostics.get(i), self.coverage),
                    (None, Some(fitted)) => self.describe_unused(&mut report, fitted, point),
                    _ => {}
                }
                reports.push(report);
            }
        }
        reports
    }

    fn point(&self, point: usize, repeat: usize, reference: f64, indication: f64) -> PointReport {
        let error = self.nominal.map(|n| (Dd::from(indication) - n.at(reference)).to_f64()).filter(|e| e.is_finite());
        let span = self.nominal.and_then(|n| n.output_span(self.range()));
        PointReport {
            point,
            repeat,
            used: false,
            reference,
            indication,
            residual: None,
            leverage: None,
            cook_distance: None,
            left_out_log_density: None,
            left_out_tail: None,
            suspect_probability: None,
            standard_uncertainty: None,
            expanded_uncertainty: None,
            error,
            error_display: error.map_or_else(String::new, |e| {
                display::error_of_indication(e, indication, reference, self.visit.instrument.output.resolution)
            }),
            error_percent_of_span: error.zip(span).map(|(e, s)| 100.0 * e / s).filter(|e| e.is_finite()),
        }
    }

    /// A row that is not in the fit: how the fit foretells it.
    fn describe_unused(&self, report: &mut PointReport, fitted: &Fitted, point: &visit::Point) {
        let orientation = self.visit.model.orientation;
        let argument = observation::argument(orientation, report.reference, report.indication);
        let influences: Vec<f64> = self
            .names
            .iter()
            .map(|n| point.influences.get(n).or_else(|| self.visit.conditions.get(n)).copied().unwrap_or(f64::NAN))
            .collect();
        let response = observation::response(orientation, report.reference, report.indication);
        let (mean, new) = fitted.predictor().both(argument, &influences);
        let residual = response - mean.parts.iter().map(|p| p.location * p.weight).sum();
        if !residual.is_finite() {
            return;
        }
        report.residual = Some(residual.to_f64());
        if new.parts.iter().all(|p| p.scale > 0.0 && p.scale.is_finite()) {
            report.left_out_log_density = Some(new.log_density(response)).filter(|d| d.is_finite());
            report.left_out_tail = Some(new.cdf(response.to_f64())).filter(|p| p.is_finite());
        }
    }

    /// Points that are incomplete, and coverage of the range.
    fn say_of_points(&mut self) {
        for (index, point) in self.visit.points.iter().enumerate() {
            let number = index + 1;
            let missing = match (point.reference, &point.indication) {
                (None, None) => continue,
                (None, Some(_)) => "reference value",
                (Some(_), None) => "indication",
                (Some(_), Some(i)) if i.values().is_empty() => "indication",
                (Some(x), _) if !visit::is_usable(x) => "usable reference value",
                (_, Some(i)) if i.values().iter().any(|y| !visit::is_usable(*y)) => "usable indication",
                _ => continue,
            };
            let field = if missing.ends_with("indication") { "indication" } else { "reference" };
            let place = format!("points[{index}].{field}");
            let sentence = format!("Point {number} has no {missing} and is left out: fill it in.");
            self.messages.push(Problem::warning("point_incomplete", place, sentence).with("point", number));
        }
    }

    fn say_of_instrument(&mut self) {
        if let (Some(given), None) = (self.visit.instrument.range, self.range()) {
            let sentence = format!(
                "The range from {} to {} is empty or beyond what can be computed with: the span of the points is used.",
                given.0, given.1
            );
            self.messages.push(Problem::warning("range_empty", "instrument.range", sentence));
        }
        if let Some((first, last)) = self.visit.instrument.range.filter(|(first, last)| first > last) {
            let (first, last) = (display::as_given(first), display::as_given(last));
            let sentence = format!("The range is stated from {first} to {last}: it is read from {last} to {first}.");
            self.messages.push(Problem::note("range_turned", "instrument.range", sentence));
        }
        if let Some((Some(below), Some(above))) = self.visit.instrument.hard_limits
            && below >= above
        {
            let sentence = format!("The physical limits {below} and {above} contradict each other and are not used.");
            self.messages.push(Problem::warning("hard_limits_cross", "instrument.hard_limits", sentence));
        }
    }

    /// What has to be said of the noise and of degrees of freedom.
    fn say_of_noise(&mut self) {
        let Some(fitted) = &self.fitted else { return };
        let Some(component) = fitted.posterior.components.first() else {
            return;
        };
        let mut said = Vec::new();
        let greatest = fitted.rows.iter().map(|r| r.response.abs().to_f64()).fold(0.0, f64::max);
        if matches!(component.law, Law::StudentT(_)) && component.noise.to_f64() <= ROUNDING * greatest {
            said.push(Problem::warning(
                "points_on_curve",
                "points",
                "All points lie exactly on the curve, so nothing is known of the repeatability: state the resolution or the noise before any interval is believed.",
            ));
        }
        if let Some(nu) = component.law.degrees_of_freedom().filter(|nu| *nu <= 2.0) {
            let sentence = format!(
                "With {nu} degree(s) of freedom the standard deviation does not exist; intervals and scales are given instead: measure more points.",
            );
            said.push(Problem::note("no_standard_deviation", "points", sentence).with("degrees_of_freedom", nu));
        }
        self.messages.extend(said);
    }
}

/// A row of the fit: its diagnostics and its error bar.
fn describe_used(report: &mut PointReport, fitted: &Fitted, index: usize, row: Option<&RowDiagnostics>, coverage: f64) {
    report.used = true;
    let Some(component) = fitted.posterior.components.first() else {
        return;
    };
    if let Some(row) = row {
        report.residual = Some(row.residual);
        report.leverage = Some(row.leverage);
        report.cook_distance = row.cook_distance;
        report.left_out_log_density = row.left_out_log_density;
        report.left_out_tail = row.left_out_tail;
    }
    let deviation = fitted.posterior.deviations[index].to_f64();
    let u = match component.law {
        Law::Normal => deviation,
        Law::StudentT(_) => deviation * component.noise.to_f64(),
    };
    report.standard_uncertainty = Some(u);
    report.expanded_uncertainty = Some(u * component.law.coverage_factor(coverage));
}

impl Fitted {
    fn predictor(&self) -> Predictor<'_> {
        Predictor { posterior: &self.posterior, shape: &self.shape, growth: self.growth }
    }
}

/// `count` evenly spaced places with both ends exact.
pub fn spread(first: f64, last: f64, count: usize) -> Vec<f64> {
    match count {
        0 => Vec::new(),
        1 => vec![first],
        _ => (0..count)
            .map(|k| if k + 1 == count { last } else { first + (last - first) * (k as f64 / (count - 1) as f64) })
            .collect(),
    }
}
