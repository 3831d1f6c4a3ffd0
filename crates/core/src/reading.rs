//! From an indication to a value: what is reported of one reading.
//!
//! Where the indication is a function of the value, the posterior of the value is found by inversion over the range of
//! use, extended by its own width on both sides and cut at values that are physically impossible. Where the value (or
//! the correction) is a function of the indication, it is predicted directly. Units: indications in the unit of the
//! output, values in that of the measured quantity.
//!
//! u is the scale of curve and reading over the slope, as an uncertainty budget has it; U half of the equal-tailed
//! interval; k = U/u.

use crate::dd::Dd;
use crate::display;
use crate::distribution::Law;
use crate::float;
use crate::invert::{Described, Seed, Solution, ValueDensity, solutions};
use crate::noise::Sigma;
use crate::predict::{Mixture, NewIndication, Predictor};
use crate::problem::Problem;
use crate::report::{BudgetLine, Density, Linearised, Value, ValueReport};
use crate::visit::{KnownValue, Orientation, Reading, is_usable};

/// A further mode counts where this much of the probability belongs to it.
const MODE_MASS: f64 = 0.005;

/// A reading that is less likely than this at every value is out of reach of the curve.
const OUT_OF_REACH: f64 = 1e-3;

/// The density at an end of the extent counts where it is this share of the greatest.
const END_SHARE: f64 = 1e-3;

/// The range of use in which values are sought, and how far the points reach.
#[derive(Clone, Copy, Debug)]
pub struct Scope {
    /// Range of use, or the span of the points where none is given.
    pub range: (f64, f64),
    /// Values that cannot occur.
    pub hard_limits: (f64, f64),
    /// Least and greatest argument of the points.
    pub spanned: [f64; 2],
    /// Coverage probability of the intervals.
    pub coverage: f64,
}

impl Scope {
    /// The range extended by `widths` of its width on both sides and cut at the hard limits.
    fn extent(&self, widths: f64) -> [f64; 2] {
        let (low, high) = self.range;
        let more = widths * (high - low);
        [(low - more).max(self.hard_limits.0), (high + more).min(self.hard_limits.1)]
    }
}

/// A reading with all that its value depends on.
pub struct Reader<'a> {
    /// The fit.
    pub predictor: Predictor<'a>,
    /// What is known of the noise.
    pub sigma: Sigma,
    /// Which variable is a function of which.
    pub orientation: Orientation,
    /// Where values are sought.
    pub scope: Scope,
    /// Units of the measured quantity and of the output.
    pub units: (&'a str, &'a str),
}

impl Reader<'_> {
    /// Turns a reading into a value. `influences` are the influence quantities that hold for it.
    pub fn read(&self, reading: &Reading, influences: &[f64]) -> Value {
        let mean = reading.indications.iter().map(|&y| Dd::from(y)).sum::<Dd>()
            / Dd::from(reading.indications.len().max(1) as f64);
        let mut value = Value {
            indications: reading.indications.clone(),
            mean_indication: Some(mean.to_f64()).filter(|m| m.is_finite()),
            value: None,
            linearised: None,
            solutions: Vec::new(),
            budget: Vec::new(),
            flags: Vec::new(),
            messages: Vec::new(),
        };
        let new = match self.new_indication(reading, &mut value.messages) {
            Ok(new) => new,
            Err(problem) => {
                value.messages.push(problem);
                return value;
            }
        };
        match self.orientation {
            Orientation::IndicationFromReference => self.invert(mean, influences, new, reading, &mut value),
            _ => self.predict(mean, influences, new, reading, &mut value),
        }
        value
    }

    /// Checks a reading and says what it adds to the curve.
    fn new_indication(&self, reading: &Reading, messages: &mut Vec<Problem>) -> Result<NewIndication, Problem> {
        if reading.indications.is_empty() {
            return Err(Problem::error("reading_empty", "indications", "Type what the instrument shows."));
        }
        if reading.indications.iter().any(|y| !is_usable(*y)) {
            return Err(Problem::error(
                "reading_not_a_number",
                "indications",
                "What the instrument shows must be a number of usual size.",
            ));
        }
        let checked = |u: Option<f64>, place: &str, words: &str| match u {
            None => Ok(0.0),
            Some(u) if u >= 0.0 && is_usable(u) => Ok(u),
            Some(u) => Err(Problem::error(
                "reading_uncertainty",
                place,
                format!("{words} is {u}; it must be zero or positive."),
            )),
        };
        let resolution = checked(reading.resolution, "resolution", "The resolution of the reading")?;
        let own = checked(reading.indication_uncertainty, "indication_uncertainty", "The uncertainty of the reading")?;
        if let Some(known) = reading.known
            && !(known.standard_uncertainty > 0.0 && is_usable(known.standard_uncertainty) && is_usable(known.mean))
        {
            return Err(Problem::error(
                "reading_known",
                "known",
                "What is known of the value needs a mean and a positive standard uncertainty.",
            ));
        }
        let rounding = resolution * resolution / 12.0;
        if reading.indication_uncertainty.is_some() {
            return Ok(NewIndication { noise_share: 0.0, known_variance: own * own + rounding });
        }
        if self.sigma == Sigma::Known(0.0) {
            messages.push(Problem::warning(
                "reading_noise_unknown",
                "indications",
                "Every point has its own uncertainty, but nothing is known of the new reading's: state it, or only the curve's uncertainty is included.",
            ));
        }
        Ok(NewIndication { noise_share: 1.0 / reading.indications.len() as f64, known_variance: rounding })
    }

    /// The value by inversion.
    fn invert(&self, mean: Dd, influences: &[f64], new: NewIndication, reading: &Reading, value: &mut Value) {
        let extent = self.scope.extent(1.0);
        if !(extent[1] > extent[0]) {
            value.messages.push(Problem::error(
                "no_extent",
                "instrument.range",
                "The range of use and the physical limits leave no place for a value: check both.",
            ));
            return;
        }
        let gap = |x: f64| {
            let (f, slope) = self.predictor.mean_and_slope(x, influences);
            ((f - mean).to_f64(), slope.to_f64())
        };
        let curve = |x: f64| (self.predictor.mean(x, influences) - mean).to_f64();
        let (found, near) = solutions(extent[0], extent[1], &curve, &gap);
        value.solutions = found.iter().map(|s| self.linearised(*s, influences, new)).collect();
        value.solutions.retain(|s| s.slope != 0.0 && is_usable(s.slope) && is_usable(s.scale));
        let unit = scale_of(&self.predictor.indication(0.5 * (extent[0] + extent[1]), influences, new));
        let unit = float::power_of_two_of(unit);
        let log_density = |x: f64| {
            let indication = self.predictor.indication(x, influences, new);
            indication.log_density_over(mean, unit) + known_log_density(reading.known, x)
        };
        if found.iter().any(|s| !(self.predictor.indication(s.x, influences, new).parts.iter().all(|p| p.scale > 0.0)))
        {
            value.messages.push(collapsed());
            value.linearised = value.solutions.first().cloned();
            return;
        }
        let mut seeds: Vec<Seed> = value.solutions.iter().map(|s| Seed { x: s.estimate, width: s.scale }).collect();
        seeds.retain(|s| s.width.is_finite() && s.width > 0.0);
        seeds.extend(near);
        seeds.extend(reading.known.map(|k| Seed { x: k.mean, width: k.standard_uncertainty }));
        let Some(density) = ValueDensity::new(extent, &log_density, &seeds) else {
            value.messages.push(Problem::error(
                "reading_impossible",
                "indications",
                "No value in the range can show this reading: check the reading and its unit.",
            ));
            value.flags.push("unattainable");
            return;
        };
        let mut described = density.describe(self.scope.coverage, &log_density);
        described.log_mean -= float::ln(unit);
        if found.is_empty() {
            value.flags.push("unattainable");
            let places = described.modes.iter().chain(&extent).chain([&described.median]);
            let likeliest = places.map(|&x| self.predictor.indication(x, influences, new).two_sided_tail(mean));
            if !likeliest.into_iter().any(|tail| tail >= OUT_OF_REACH) {
                value.messages.push(Problem::error(
                    "unattainable",
                    "indications",
                    "The curve does not come near this reading anywhere in its extended range, so no value goes with it: check the reading and its unit.",
                ));
                return;
            }
            value.messages.push(Problem::warning(
                "unattainable",
                "indications",
                "The curve does not quite reach this reading anywhere in its extended range; the values at which it comes nearest are given: check the reading and its unit.",
            ));
        }
        self.finish(described, extent, value);
        self.check_extent(&density, extent, &log_density, value);
        self.settle(influences, new, value);
    }

    /// The law-of-propagation value at a solution.
    fn linearised(&self, at: Solution, influences: &[f64], new: NewIndication) -> Linearised {
        let indication = self.predictor.indication(at.x, influences, new);
        let slope = at.slope.abs();
        Linearised {
            estimate: at.x,
            scale: scale_of(&indication) / slope,
            standard_uncertainty: indication.standard_deviation().map(|s| s / slope).filter(|s| s.is_finite()),
            degrees_of_freedom: law_of(&indication).degrees_of_freedom(),
            slope: at.slope,
        }
    }

    /// Whether a wider extent would move a limit: then the slope is too uncertain to read values.
    fn check_extent(
        &self,
        density: &ValueDensity,
        extent: [f64; 2],
        log_density: &dyn Fn(f64) -> f64,
        value: &mut Value,
    ) {
        let Some(report) = &value.value else { return };
        let outer = self.scope.extent(2.0);
        if outer == extent || report.relative_density_at_ends.iter().all(|e| *e < 1e-13) {
            return;
        }
        let widened = density.interval_when_widened(outer, log_density, self.scope.coverage);
        let moved = (widened[0] - report.interval[0]).abs().max((widened[1] - report.interval[1]).abs());
        let unit = nearest(&value.solutions, report.median).map(|s| s.scale).filter(|s| s.is_finite());
        let unit = unit.or(report.standard_uncertainty).unwrap_or(f64::INFINITY);
        if moved > 0.01 * unit {
            value.flags.push("slope_too_uncertain");
            value.messages.push(Problem::warning(
                "slope_too_uncertain",
                "indications",
                "The slope of the curve is too uncertain to read values: the limits depend on how far values are thought possible. Measure more points, further apart.",
            ));
        }
    }

    /// The value by prediction, where it is a function of the indication.
    fn predict(&self, mean: Dd, influences: &[f64], new: NewIndication, reading: &Reading, value: &mut Value) {
        let argument = mean.to_f64();
        let correction = self.orientation == Orientation::CorrectionFromIndication;
        // The resolution enters through the slope of the value with respect to the indication.
        let (_, slope) = self.predictor.mean_and_slope(argument, influences);
        let slope = slope + if correction { Dd::ONE } else { Dd::ZERO };
        let through = (slope * slope).to_f64();
        let scaled = NewIndication { noise_share: new.noise_share, known_variance: new.known_variance * through };
        let mut mixture = self.predictor.indication(argument, influences, scaled);
        if correction {
            mixture.parts.iter_mut().for_each(|part| part.location += mean);
        }
        if mixture.parts.iter().any(|p| !p.location.is_finite() || !p.scale.is_finite()) {
            value.messages.push(Problem::error(
                "reading_outside_domain",
                "indications",
                "The curve is not defined at this reading: check the reading and its unit.",
            ));
            return;
        }
        if mixture.parts.iter().any(|p| !(p.scale > 0.0)) {
            value.messages.push(collapsed());
            return;
        }
        let linearised = Linearised {
            estimate: mixture.location(),
            scale: scale_of(&mixture),
            standard_uncertainty: mixture.standard_deviation(),
            degrees_of_freedom: law_of(&mixture).degrees_of_freedom(),
            slope: slope.to_f64(),
        };
        value.solutions = vec![linearised];
        let (centre, reach) =
            (mixture.location(), 40.0 * mixture.interval(self.scope.coverage)[1] - 40.0 * mixture.location());
        let known = reading.known.unwrap_or(KnownValue { mean: centre, standard_uncertainty: 0.0 });
        let low = (centre - reach).min(known.mean - 10.0 * known.standard_uncertainty).max(self.scope.hard_limits.0);
        let high = (centre + reach).max(known.mean + 10.0 * known.standard_uncertainty).min(self.scope.hard_limits.1);
        let unit = float::power_of_two_of(scale_of(&mixture));
        let log_density = |x: f64| mixture.log_density_over(Dd::from(x), unit) + known_log_density(reading.known, x);
        let seeds =
            [Seed { x: centre, width: scale_of(&mixture) }, Seed { x: known.mean, width: known.standard_uncertainty }];
        let Some(density) = (high > low).then(|| ValueDensity::new([low, high], &log_density, &seeds)).flatten() else {
            value.messages.push(Problem::error(
                "reading_impossible",
                "indications",
                "No possible value goes with this reading: check the reading and its unit.",
            ));
            return;
        };
        let cut = reading.known.is_some() || low == self.scope.hard_limits.0 || high == self.scope.hard_limits.1;
        let mut described = density.describe(self.scope.coverage, &log_density);
        if !cut {
            // Uncut and with nothing else known the closed form holds.
            described.median = mixture.median();
            described.interval = mixture.interval(self.scope.coverage);
            if let [_] = mixture.parts.as_slice() {
                described.shortest = described.interval;
                described.highest_density = vec![described.interval];
            }
        }
        self.finish(described, [low, high], value);
        if let (Some(report), false) = (&mut value.value, cut) {
            let deviation = mixture.standard_deviation();
            report.mean = deviation.map(|_| mixture.location());
            report.standard_uncertainty = deviation;
            report.log_predictive_mean = None;
        }
        let outside = argument < self.scope.spanned[0] || argument > self.scope.spanned[1];
        self.settle(influences, new, value);
        mark_extrapolated(outside, value);
    }

    /// Fills in the value from its description.
    fn finish(&self, described: Described, extent: [f64; 2], value: &mut Value) {
        let [low, high] = described.interval;
        let sound = [described.mean, described.standard_deviation, described.median, low, high];
        if !sound.into_iter().all(is_usable) {
            value.messages.push(Problem::error(
                "value_out_of_range",
                "indications",
                "The value comes out too large or too uncertain to compute with: check the reading, its unit and the points.",
            ));
            return;
        }
        value.value = Some(ValueReport {
            median: described.median,
            mean: Some(described.mean),
            standard_uncertainty: Some(described.standard_deviation),
            coverage_factor: None,
            expanded_uncertainty: 0.5 * (high - low),
            interval: described.interval,
            shortest_interval: described.shortest,
            highest_density: described.highest_density,
            density: Density { x: described.drawn.0, density: described.drawn.1 },
            extent,
            relative_density_at_ends: described.at_ends,
            log_predictive_mean: Some(described.log_mean),
            display: String::new(),
            display_interval: String::new(),
            modes: described.modes,
        });
        if described.masses.iter().filter(|m| **m > MODE_MASS).count() > 1 {
            value.flags.push("more_than_one_mode");
            value.messages.push(Problem::warning(
                "more_than_one_mode",
                "indications",
                "More than one value fits this reading, because the curve turns within its range.",
            ));
        }
        if described.at_ends.iter().any(|e| *e > END_SHARE) {
            value.flags.push("mass_at_end");
            value.messages.push(Problem::warning(
                "mass_at_end",
                "indications",
                "The value may lie at the very end of what is possible, so its interval is cut there.",
            ));
        }
    }

    /// The linearised value, k, flags of place, budget and display.
    fn settle(&self, influences: &[f64], new: NewIndication, value: &mut Value) {
        let Some(report) = &mut value.value else {
            return;
        };
        value.linearised = nearest(&value.solutions, report.median).cloned();
        report.coverage_factor = value
            .linearised
            .as_ref()
            .map(|l| report.expanded_uncertainty / l.scale)
            .filter(|k| k.is_finite() && *k > 0.0);
        let (unit, median, half) = (self.units.0, report.median, report.expanded_uncertainty);
        let [low, high] = report.interval;
        report.display_interval = display::interval(low, high, unit);
        let arms = [display::to_match(high - median, half), display::to_match(median - low, half)];
        let plain = !value.flags.contains(&"more_than_one_mode") && !value.flags.contains(&"unattainable");
        report.display = if plain && arms[0] == arms[1] {
            display::value_with_uncertainty(median, half, unit)
        } else if plain {
            format!("{} {unit} [{}]", display::to_match(median, half), display::interval(low, high, "").trim_end())
        } else {
            // Several values fit, or none does and these are the nearest: never a ±.
            let parts: Vec<String> =
                report.highest_density.iter().map(|r| display::interval(r[0], r[1], unit)).collect();
            parts.join(" or ")
        };
        let range = self.scope.range;
        if median < range.0 || median > range.1 {
            value.flags.push("outside_range");
            value.messages.push(Problem::warning(
                "outside_range",
                "indications",
                "The value lies outside the range of use: it is computed, but not assessed.",
            ));
        }
        if self.orientation == Orientation::IndicationFromReference {
            let outside = median < self.scope.spanned[0] || median > self.scope.spanned[1];
            mark_extrapolated(outside, value);
        }
        value.budget = self.budget(influences, new, value);
    }

    /// Where u comes from: the new reading, its resolution, the curve.
    fn budget(&self, influences: &[f64], new: NewIndication, value: &Value) -> Vec<BudgetLine> {
        let Some(linearised) = value.linearised.as_ref().filter(|l| l.scale.is_finite() && l.scale > 0.0) else {
            return Vec::new();
        };
        let inverted = self.orientation == Orientation::IndicationFromReference;
        let place = if inverted { linearised.estimate } else { value.mean_indication.unwrap_or(f64::NAN) };
        let curve = scale_of(&self.predictor.curve(place, influences));
        let repeat = scale_of(&self.predictor.indication(
            place,
            influences,
            NewIndication { noise_share: new.noise_share, known_variance: 0.0 },
        ));
        let repeatability = float::sqrt((repeat * repeat - curve * curve).max(0.0));
        let sensitivity = if inverted { 1.0 / linearised.slope.abs() } else { 1.0 };
        let through = if inverted { sensitivity } else { linearised.slope.abs() };
        let known = float::sqrt(new.known_variance);
        let (kind, law) = match self.sigma {
            Sigma::Known(_) => ("B", "normal"),
            _ => ("A", "Student t"),
        };
        let degrees = linearised.degrees_of_freedom;
        let response = if inverted { self.units.1 } else { self.units.0 };
        let rows = [
            ("new reading: repeatability", kind, law, repeatability, degrees, sensitivity, response),
            (
                "new reading: resolution and stated uncertainty",
                "B",
                "rectangular or normal",
                known,
                None,
                through,
                self.units.1,
            ),
            ("calibration curve", kind, law, curve, degrees, sensitivity, response),
        ];
        let total = linearised.scale * linearised.scale;
        rows.into_iter()
            .filter(|row| row.3 > 0.0)
            .map(|(source, kind, distribution, u, nu, sensitivity, unit)| BudgetLine {
                source: source.to_owned(),
                kind,
                distribution,
                standard_uncertainty: u,
                unit: unit.to_owned(),
                degrees_of_freedom: nu,
                sensitivity,
                contribution: u * sensitivity,
                share_of_variance: u * sensitivity * u * sensitivity / total,
            })
            .collect()
    }
}

fn mark_extrapolated(outside: bool, value: &mut Value) {
    if outside {
        value.flags.push("extrapolated");
        value.messages.push(Problem::warning(
            "extrapolated",
            "indications",
            "The value lies beyond the points: it is extrapolated and rests on the shape alone.",
        ));
    }
}

fn collapsed() -> Problem {
    Problem::error(
        "noise_collapsed",
        "model.noise",
        "All points lie exactly on the curve, so nothing is known of the repeatability: state the noise before a reading is turned into a value.",
    )
}

/// The solution nearest to a place.
fn nearest(solutions: &[Linearised], place: f64) -> Option<&Linearised> {
    solutions.iter().min_by(|a, b| (a.estimate - place).abs().total_cmp(&(b.estimate - place).abs()))
}

/// ln of what was known of the value itself, up to a constant.
fn known_log_density(known: Option<KnownValue>, x: f64) -> f64 {
    known.map_or(0.0, |k| Law::Normal.log_density((x - k.mean) / k.standard_uncertainty))
}

/// The scale of a mixture, its standard deviation where it has several parts.
fn scale_of(mixture: &Mixture) -> f64 {
    mixture.scale().or_else(|| mixture.standard_deviation()).unwrap_or(f64::NAN)
}

/// The law of a mixture of one part; normal otherwise.
fn law_of(mixture: &Mixture) -> Law {
    match mixture.parts.as_slice() {
        [part] => part.law,
        _ => Law::Normal,
    }
}
