//! The report: everything that follows from a visit by calculation. Plain data, versioned as `bandleaf.report.1`.
//!
//! Never edited and never trusted: whoever opens a leaf computes it again and compares. Units: `x` and every value in
//! the instrument's unit, `estimate`, `interval`, residual and error in the unit of the output, unless a field says
//! otherwise. What is not known is `null`, never NaN.

use crate::problem::{Argument, Problem};
use serde::Serialize;
use std::collections::BTreeMap;

/// The name and version of the document.
pub const SCHEMA: &str = "bandleaf.report.1";

/// The version of the method: raised whenever any number of an unchanged visit would change.
pub const METHOD: u32 = 1;

/// Lower and upper end.
pub type Interval = [f64; 2];

/// The whole report.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Report {
    /// `bandleaf.report.1`.
    pub schema: &'static str,
    /// Which program computed it.
    pub program: Program,
    /// Digest of the visit's canonical bytes; filled in by the leaf crate.
    pub visit_digest: Option<String>,
    /// `as_found` or `as_left`: of which points this report speaks.
    pub state: &'static str,
    /// Coverage probability of the intervals.
    pub coverage: f64,
    /// Units and axis names for whoever shows the report.
    pub units: Units,
    /// The fit; `null` where none can be computed, with the reason in `messages`.
    pub fit: Option<Fit>,
    /// The curve with both bands over the range.
    pub curve: Option<Curve>,
    /// The curve at the places asked for.
    pub at: Vec<At>,
    /// The readings asked for, as values.
    pub readings: Vec<Value>,
    /// One entry for each indication, in the order given.
    pub points: Vec<PointReport>,
    /// Checks of the fit.
    pub checks: Vec<Check>,
    /// Compared shapes.
    pub shapes: Vec<()>,
    /// The verdict.
    pub conformity: Option<()>,
    /// The next points.
    pub plan: Vec<()>,
    /// Everything that has to be said, most important first.
    pub messages: Vec<Problem>,
    /// The same for the points as found, where there are points of both states.
    pub as_found: Option<Box<Report>>,
}

/// Which program computed a report.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Program {
    /// `bandleaf`.
    pub name: &'static str,
    /// Its version.
    pub version: &'static str,
    /// The version of the method.
    pub method: u32,
}

/// Units, and what stands on each axis.
#[derive(Clone, Debug, Default, PartialEq, Serialize)]
pub struct Units {
    /// Unit of the measured quantity.
    pub input: String,
    /// Unit of the indication.
    pub output: String,
    /// Unit of the response of the fit.
    pub response: String,
    /// Unit of the argument of the fit.
    pub argument: String,
    /// The letter in which the terms are written: `x` or `y`.
    pub variable: String,
}

/// One coefficient.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct TermReport {
    /// As written.
    pub term: String,
    /// For people: `x²`.
    pub display: String,
    /// Location of the posterior.
    pub estimate: f64,
    /// Scale of the marginal Student t (the classical standard error under the flat prior).
    pub scale: Option<f64>,
    /// Posterior standard deviation; `null` where ν ≤ 2.
    pub standard_uncertainty: Option<f64>,
    /// Equal-tailed interval.
    pub interval: Interval,
    /// Unit of the coefficient.
    pub unit: String,
}

/// The noise.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct NoiseReport {
    /// `unknown`, `known`, `stated` or `per_point` (the points' own uncertainties are the whole noise).
    pub kind: &'static str,
    /// s, or σ where it is known; in the unit of the response; `null` where the points' own uncertainties are used.
    pub estimate: Option<f64>,
    /// Equal-tailed interval of σ; `null` where it is known.
    pub interval: Option<Interval>,
}

/// The fit.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Fit {
    /// Which variable is a function of which.
    pub orientation: &'static str,
    /// `y = a + b·x + c·x²`, for people.
    pub formula: String,
    /// The coefficients in the order of the terms.
    pub terms: Vec<TermReport>,
    /// Posterior covariance; `null` where ν ≤ 2.
    pub covariance: Option<Vec<Vec<f64>>>,
    /// Scale matrix of the multivariate t (the covariance where the posterior is normal).
    pub scale_matrix: Vec<Vec<f64>>,
    /// The noise.
    pub noise: NoiseReport,
    /// Degrees of freedom ν; `null` where infinite (normal).
    pub degrees_of_freedom: Option<f64>,
    /// Sum of squared residuals over v_i (over the known variances where those are the noise).
    pub residual_sum_of_squares: f64,
    /// Degrees of freedom of that sum: rows minus coefficients; `null` where not positive.
    pub residual_degrees_of_freedom: Option<f64>,
    /// ln p(y), flat directions at density 1 and p(ln σ) = 1; `null` where there is no natural measure.
    pub log_evidence: Option<f64>,
    /// Whether that is a proper evidence; otherwise only differences between shapes with the same flat part mean anything.
    pub evidence_is_proper: bool,
    /// Ratio of the largest to the smallest singular value of the design with columns of unit length;
    /// `null` beyond double precision.
    pub condition_number: Option<f64>,
    /// Sum of the leverages.
    pub effective_parameters: f64,
    /// Σ ln p(yᵢ | the others); `null` where one of them does not exist.
    pub left_out_log_density: Option<f64>,
    /// Rows used.
    pub points_used: usize,
    /// Least and greatest argument of the rows used; `null` without any.
    pub spanned: Option<Interval>,
}

/// The curve and both bands, and the same as errors of indication.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Curve {
    /// Places (the argument of the fit).
    pub x: Vec<f64>,
    /// Location of the curve.
    pub estimate: Vec<f64>,
    /// Posterior standard deviation of the curve; `null` where ν ≤ 2.
    pub standard_uncertainty: Option<Vec<f64>>,
    /// Equal-tailed interval of the curve.
    pub curve_interval: Vec<Interval>,
    /// Equal-tailed interval of a new indication.
    pub indication_interval: Vec<Interval>,
    /// Nominal characteristic at the places: subtract it from the above to have errors of indication; `null` where
    /// none is given or the orientation has no error of indication of its own.
    pub nominal: Option<Vec<f64>>,
}

/// Location, scale, standard deviation, interval.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Estimate {
    /// Location.
    pub estimate: f64,
    /// Scale of the t.
    pub scale: Option<f64>,
    /// Standard deviation; `null` where ν ≤ 2.
    pub standard_uncertainty: Option<f64>,
    /// Equal-tailed interval at `coverage`.
    pub interval: Interval,
    /// Ready for display: estimate ± half the interval.
    pub display: String,
}

/// The curve at one place.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct At {
    /// The place.
    pub x: f64,
    /// The curve there.
    pub curve: Estimate,
    /// A new indication there.
    pub indication: Estimate,
    /// The error of indication there, in the unit of the output; `null` without a nominal characteristic.
    pub error: Option<Estimate>,
    /// Outside the span of the points.
    pub extrapolated: bool,
}

/// A reading as a value, in the unit of the measured quantity.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Value {
    /// The indications, as given.
    pub indications: Vec<f64>,
    /// Their mean; `null` where there is none.
    pub mean_indication: Option<f64>,
    /// The value; `null` where none exists, with the reason in `messages`.
    pub value: Option<ValueReport>,
    /// The law-of-propagation value for comparison: the solution nearest to the median; `null` where there is none.
    pub linearised: Option<Linearised>,
    /// Every value at which the curve shows this indication, within the extent of the inversion, ascending.
    pub solutions: Vec<Linearised>,
    /// Where the uncertainty comes from.
    pub budget: Vec<BudgetLine>,
    /// Reservations by name: `more_than_one_mode`, `mass_at_end`, `outside_range`, `unattainable`,
    /// `slope_too_uncertain`, `extrapolated`.
    pub flags: Vec<&'static str>,
    /// What has to be said about this reading.
    pub messages: Vec<Problem>,
}

/// The posterior of a value.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct ValueReport {
    /// Median.
    pub median: f64,
    /// Mean; `null` where it does not exist.
    pub mean: Option<f64>,
    /// Posterior standard deviation; `null` where it does not exist.
    pub standard_uncertainty: Option<f64>,
    /// k = U/u.
    pub coverage_factor: Option<f64>,
    /// U: half of the equal-tailed interval.
    pub expanded_uncertainty: f64,
    /// Equal-tailed interval.
    pub interval: Interval,
    /// Shortest connected interval.
    pub shortest_interval: Interval,
    /// Union of highest density.
    pub highest_density: Vec<Interval>,
    /// Local maxima of the density, ascending.
    pub modes: Vec<f64>,
    /// The density over the part that matters.
    pub density: Density,
    /// Where the inversion was cut: the range extended by its width on both sides, cut at hard limits.
    pub extent: Interval,
    /// Density at both ends of the extent over the greatest density.
    pub relative_density_at_ends: Interval,
    /// ln of the mean over the extent of the density of the indication; `null` where the curve is not inverted.
    pub log_predictive_mean: Option<f64>,
    /// Ready for display, with unit.
    pub display: String,
    /// The interval in words, with unit.
    pub display_interval: String,
}

/// A density as points.
#[derive(Clone, Debug, Default, PartialEq, Serialize)]
pub struct Density {
    /// Places.
    pub x: Vec<f64>,
    /// Density there, per unit of the measured quantity.
    pub density: Vec<f64>,
}

/// The law-of-propagation value.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Linearised {
    /// Where the curve shows the indication.
    pub estimate: f64,
    /// u: scale of the curve and of the reading over the slope.
    pub scale: f64,
    /// The same from standard deviations; `null` where ν ≤ 2.
    pub standard_uncertainty: Option<f64>,
    /// ν; `null` where infinite.
    pub degrees_of_freedom: Option<f64>,
    /// Slope of the curve there.
    pub slope: f64,
}

/// One line of a budget.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct BudgetLine {
    /// Where it comes from.
    pub source: String,
    /// `A` or `B`.
    #[serde(rename = "type")]
    pub kind: &'static str,
    /// Distribution.
    pub distribution: &'static str,
    /// Standard uncertainty of the source, in `unit`.
    pub standard_uncertainty: f64,
    /// Unit of that.
    pub unit: String,
    /// Degrees of freedom; `null` where infinite.
    pub degrees_of_freedom: Option<f64>,
    /// Sensitivity of the value to it.
    pub sensitivity: f64,
    /// Contribution to u, in the unit of the measured quantity.
    pub contribution: f64,
    /// Share of u².
    pub share_of_variance: f64,
}

/// One indication against the fit.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct PointReport {
    /// Index of the point in the visit.
    pub point: usize,
    /// Index of the repeat within the point.
    pub repeat: usize,
    /// Whether the row is in the fit.
    pub used: bool,
    /// Reference value.
    pub reference: f64,
    /// Indication.
    pub indication: f64,
    /// Response minus curve.
    pub residual: Option<f64>,
    /// Share of the curve at this point that the point itself determines, 0 to 1.
    pub leverage: Option<f64>,
    /// Cook's distance.
    pub cook_distance: Option<f64>,
    /// ln p(yᵢ | the others).
    pub left_out_log_density: Option<f64>,
    /// P(Y ≤ yᵢ | the others).
    pub left_out_tail: Option<f64>,
    /// Probability of being bad; `null` until it is computed.
    pub suspect_probability: Option<f64>,
    /// Standard uncertainty of this indication: its own where known, otherwise the fit's; in the unit of the response.
    pub standard_uncertainty: Option<f64>,
    /// Half-width of the error bar: that uncertainty times the coverage factor of its distribution.
    pub expanded_uncertainty: Option<f64>,
    /// Error of indication y − n(x), in the unit of the output; `null` without a nominal characteristic.
    pub error: Option<f64>,
    /// The same for display.
    pub error_display: String,
    /// Error in per cent of the output span; `null` without one.
    pub error_percent_of_span: Option<f64>,
}

/// A check of the fit.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Check {
    /// Its name.
    pub check: &'static str,
    /// A stable name of the outcome.
    pub code: &'static str,
    /// The quantities in the sentence.
    pub args: BTreeMap<String, Argument>,
    /// Test statistic.
    pub statistic: Option<f64>,
    /// Tail probability.
    pub p: Option<f64>,
    /// One plain sentence.
    pub sentence: String,
}
