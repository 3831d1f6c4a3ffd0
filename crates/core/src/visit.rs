//! The visit: everything a person did and said on one occasion. The only truth; a report is a pure function of it.
//!
//! Plain data, versioned as `bandleaf.visit.1`. Every field but `points` and `model.terms` may be absent. These types
//! hold the fields that the program knows; the document itself, unknown fields included, is kept by the leaf crate,
//! which alone writes its bytes. Units: `reference` and every `x` in `instrument.unit`; `indication` and every `y` in
//! `instrument.output.unit` (the same where that is absent).

use serde::Deserialize;
use serde::de::IgnoredAny;
use std::collections::BTreeMap;

/// The name and version of the document.
pub const SCHEMA: &str = "bandleaf.visit.1";

/// The largest number of rows (single indications) that a visit may hold.
pub const MOST_ROWS: usize = 100_000;

/// The largest magnitude that is computed with; squares and products of it still fit a double.
pub const LARGEST: f64 = 1e100;

/// Whether a number can be computed with: finite, and of a magnitude up to [`LARGEST`].
pub fn is_usable(value: f64) -> bool {
    value.abs() <= LARGEST
}

/// The largest number of terms in a shape.
pub const MOST_TERMS: usize = 13;

/// The whole visit.
#[derive(Clone, Debug, Default, PartialEq, Deserialize)]
#[serde(default)]
pub struct Visit {
    /// `bandleaf.visit.1`.
    pub schema: Option<String>,
    /// What is calibrated.
    pub instrument: Instrument,
    /// What it is compared with.
    pub standards: Vec<Standard>,
    /// When and by whom.
    pub occasion: Occasion,
    /// The pairs of reference value and indication.
    pub points: Vec<Point>,
    /// Shape, noise and what was known before.
    pub model: Model,
    /// The maximum permissible error, kept as written until the verdict is computed.
    pub tolerance: Option<Tolerance>,
    /// Coverage probability of every interval; 0.95 where absent.
    pub coverage: Option<f64>,
    /// The expanded uncertainty that is aimed at.
    pub target_expanded_uncertainty: Option<f64>,
    /// Where further points may be taken.
    pub plan: Option<Plan>,
    /// What adds to the uncertainty of a value in use.
    pub in_use: Option<InUse>,
    /// Fields of the calibration record.
    pub record: BTreeMap<String, IgnoredAny>,
    /// Reference values of the influence quantities.
    pub conditions: BTreeMap<String, f64>,
    /// What the report is asked for besides the fit.
    pub ask: Ask,
    /// Earlier visits, oldest first, never nested.
    pub earlier: Vec<IgnoredAny>,
    /// Who changed what, when.
    pub history: Vec<IgnoredAny>,
}

/// The instrument under calibration.
#[derive(Clone, Debug, Default, PartialEq, Deserialize)]
#[serde(default)]
pub struct Instrument {
    /// Its name, as people call it.
    pub name: String,
    /// Its serial number.
    pub serial: String,
    /// Where it stands.
    pub place: String,
    /// What it measures.
    pub quantity: String,
    /// Unit of the measured quantity: of `reference` and of every `x`.
    pub unit: String,
    /// Range of use, in that unit.
    pub range: Option<(f64, f64)>,
    /// Values that cannot occur physically, below the first and above the second.
    pub hard_limits: Option<(Option<f64>, Option<f64>)>,
    /// What it shows or sends.
    pub output: Output,
    /// Influence quantities by name.
    pub influences: BTreeMap<String, Influence>,
}

/// The output side of the instrument.
#[derive(Clone, Debug, Default, PartialEq, Deserialize)]
#[serde(default)]
pub struct Output {
    /// Unit of the indication; the instrument's own where absent.
    pub unit: Option<String>,
    /// Least digit of the indication, in that unit.
    pub resolution: Option<f64>,
    /// What the instrument should show.
    pub nominal: Option<Nominal>,
}

/// The nominal characteristic: what the instrument should show at a value.
#[derive(Clone, Debug, PartialEq, Deserialize)]
#[serde(tag = "kind", rename_all = "snake_case")]
pub enum Nominal {
    /// The value itself.
    Identity,
    /// A straight line from `instrument.range` to `range`.
    Linear {
        /// Output at both ends of `instrument.range`.
        range: (f64, f64),
    },
    /// The square root of the share of `instrument.range`, from and to `range`.
    SquareRoot {
        /// Output at both ends of `instrument.range`.
        range: (f64, f64),
    },
}

/// An influence quantity.
#[derive(Clone, Debug, Default, PartialEq, Deserialize)]
#[serde(default)]
pub struct Influence {
    /// Its unit.
    pub unit: String,
}

/// A measurement standard.
#[derive(Clone, Debug, Default, PartialEq, Deserialize)]
#[serde(default)]
pub struct Standard {
    /// The name by which points refer to it.
    pub id: String,
    /// Its name, as people call it.
    pub name: String,
    /// Its serial number.
    pub serial: String,
    /// Number of its certificate.
    pub certificate: String,
    /// When its next calibration is due (ISO 8601 date).
    pub due: Option<String>,
    /// Errors common to everything measured under this certificate.
    pub errors: Vec<CommonError>,
}

/// An error of the standard that all its points share.
#[derive(Clone, Debug, Default, PartialEq, Deserialize)]
#[serde(default)]
pub struct CommonError {
    /// `offset` (in the unit of the reference) or `gain` (a share of the value).
    pub kind: String,
    /// Its standard uncertainty.
    pub standard_uncertainty: f64,
    /// Where it comes from.
    pub source: String,
}

/// When, by whom.
#[derive(Clone, Debug, Default, PartialEq, Deserialize)]
#[serde(default)]
pub struct Occasion {
    /// ISO 8601 date.
    pub date: Option<String>,
    /// Who did it.
    pub by: String,
    /// Free text.
    pub notes: String,
}

/// One number, or the list of raw repeats.
#[derive(Clone, Debug, PartialEq, Deserialize)]
#[serde(untagged)]
pub enum Indication {
    /// A single indication, or a mean whose `repeats` are given.
    One(f64),
    /// Raw repeats, each a row of its own.
    Many(Vec<f64>),
}

impl Indication {
    /// The raw indications in order.
    pub fn values(&self) -> &[f64] {
        match self {
            Indication::One(value) => std::slice::from_ref(value),
            Indication::Many(values) => values,
        }
    }
}

/// As found or as left.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum State {
    /// Before any adjustment.
    #[default]
    AsFound,
    /// After the adjustment, or the same where there was none.
    AsLeft,
}

/// From which side a point was approached.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum Approach {
    /// Rising.
    Up,
    /// Falling.
    Down,
}

/// One check point: a reference value and what the instrument showed.
#[derive(Clone, Debug, Default, PartialEq, Deserialize)]
#[serde(default)]
pub struct Point {
    /// Value of the measurement standard; `null` in a row that is still being filled in.
    pub reference: Option<f64>,
    /// What the instrument showed.
    pub indication: Option<Indication>,
    /// As found or as left.
    pub state: State,
    /// `id` of the standard.
    pub standard: Option<String>,
    /// Points of the same setting share one error of the standard.
    pub setting: Option<String>,
    /// Standard uncertainty of that shared error.
    pub setting_uncertainty: Option<f64>,
    /// Standard uncertainty of the reference value that is independent from point to point.
    pub reference_uncertainty: Option<f64>,
    /// m, where only the mean of m indications is known.
    pub repeats: Option<f64>,
    /// Known standard uncertainty of this indication.
    pub indication_uncertainty: Option<f64>,
    /// Values of the influence quantities at this point.
    pub influences: BTreeMap<String, f64>,
    /// Direction of approach.
    pub approach: Option<Approach>,
    /// When it was taken.
    pub time: Option<String>,
    /// Free text.
    pub note: String,
    /// The reason why the point is set aside; `null` where it is used.
    pub set_aside: Option<String>,
}

/// Which variable is written as a function of which.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum Orientation {
    /// indication = f(reference): inverted to read. Terms in `x`.
    #[default]
    IndicationFromReference,
    /// reference = G(indication). Terms in `y`.
    ReferenceFromIndication,
    /// reference − indication = g(indication). Terms in `y`.
    CorrectionFromIndication,
}

/// A term in mathematical notation, or a whole family of them.
#[derive(Clone, Debug, PartialEq, Deserialize)]
#[serde(untagged)]
pub enum Term {
    /// Mathematical notation.
    Expression(String),
    /// A shape object.
    Family(Family),
}

/// A family of terms.
#[derive(Clone, Debug, PartialEq, Deserialize)]
#[serde(tag = "kind", rename_all = "snake_case")]
pub enum Family {
    /// 1, x, … x^degree.
    Polynomial {
        /// 0 to 12.
        degree: u32,
    },
    /// Natural cubic spline.
    Spline {
        /// Knots in the unit of x.
        knots: Vec<f64>,
    },
    /// Straight pieces joined at the knots.
    BrokenLine {
        /// Knots in the unit of x.
        knots: Vec<f64>,
    },
}

/// `terms` as a list, or one shape object.
#[derive(Clone, Debug, PartialEq, Deserialize)]
#[serde(untagged)]
pub enum Terms {
    /// A list of terms.
    List(Vec<Term>),
    /// One shape object.
    One(Family),
}

impl Default for Terms {
    fn default() -> Terms {
        Terms::List(Vec::new())
    }
}

/// Shape, noise, what was known before.
#[derive(Clone, Debug, Default, PartialEq, Deserialize)]
#[serde(default)]
pub struct Model {
    /// Which variable is a function of which.
    pub orientation: Orientation,
    /// The shape.
    pub terms: Terms,
    /// The repeatability of one indication.
    pub noise: Noise,
    /// What was known before; flat where empty.
    pub known_before: Vec<KnownBefore>,
    /// The watch for bad points.
    pub suspects: Option<Suspects>,
    /// Shapes to compare.
    pub candidates: Vec<Terms>,
}

/// What is known about the repeatability σ of one indication.
#[derive(Clone, Debug, Default, PartialEq, Deserialize)]
#[serde(default)]
pub struct Noise {
    /// Unknown, known or stated.
    pub kind: NoiseKind,
    /// σ (known) or s₀ (stated), in the unit of the response.
    pub standard_deviation: Option<f64>,
    /// ν₀ (stated).
    pub degrees_of_freedom: Option<f64>,
    /// How σ depends on the value.
    pub profile: Option<Profile>,
}

/// The kinds of knowledge about σ.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum NoiseKind {
    /// p(σ) ∝ 1/σ.
    #[default]
    Unknown,
    /// σ is the given standard deviation.
    Known,
    /// σ² ~ scaled-inverse-χ²(ν₀, s₀²).
    Stated,
}

/// How the noise depends on the value.
#[derive(Clone, Debug, PartialEq, Deserialize)]
#[serde(tag = "kind", rename_all = "snake_case")]
pub enum Profile {
    /// The same everywhere.
    Constant,
    /// σ(x) = σ·(1 + ρ·abs(x)/x_span).
    Proportional {
        /// ρ, or `"integrated"`.
        rho: NumberOr,
    },
}

/// A number, or the word for letting the data say.
#[derive(Clone, Debug, PartialEq, Deserialize)]
#[serde(untagged)]
pub enum NumberOr {
    /// The number.
    Number(f64),
    /// `integrated`.
    Word(String),
}

/// One piece of knowledge from before the visit.
#[derive(Clone, Debug, PartialEq, Deserialize)]
#[serde(tag = "kind", rename_all = "snake_case")]
pub enum KnownBefore {
    /// Nothing.
    Flat,
    /// Coefficients on the basis are likely small.
    Shrinkage {
        /// b of w_j ~ N(0, 1/b), or `"integrated"`.
        precision: NumberOr,
        /// `standardised` (default) or `as_given`.
        #[serde(default)]
        basis: ShrinkageBasis,
        /// `flat` (default) or `shrunk`.
        #[serde(default)]
        intercept: ShrinkageIntercept,
    },
    /// Coefficients with stated uncertainty.
    Coefficients {
        /// Which terms; all of the shape in order where absent.
        #[serde(default)]
        terms: Option<Vec<String>>,
        /// Their values; `null`: nothing known.
        mean: Vec<Option<f64>>,
        /// Their covariance.
        #[serde(default)]
        covariance: Option<Vec<Vec<f64>>>,
        /// Their standard uncertainties; `null`: nothing known.
        #[serde(default)]
        standard_uncertainty: Option<Vec<Option<f64>>>,
    },
    /// Stated values of the curve.
    Values {
        /// One entry a value, kept as written.
        #[serde(default)]
        values: Vec<IgnoredAny>,
    },
    /// Normal-inverse-gamma, with `noise` `stated`.
    Conjugate {
        /// m₀.
        mean: Vec<f64>,
        /// V₀: cov(w | σ) = σ² V₀.
        covariance_over_variance: Vec<Vec<f64>>,
    },
    /// The posterior of an earlier visit.
    Carried,
}

/// On which basis the shrinkage acts.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum ShrinkageBasis {
    /// Each non-constant column centred and divided by its standard deviation (divisor n).
    #[default]
    Standardised,
    /// The terms as they are written.
    AsGiven,
}

/// Whether the intercept is shrunk too.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum ShrinkageIntercept {
    /// No.
    #[default]
    Flat,
    /// Yes.
    Shrunk,
}

/// The watch for bad points.
#[derive(Clone, Debug, Default, PartialEq, Deserialize)]
#[serde(default)]
pub struct Suspects {
    /// On or off.
    pub enabled: bool,
    /// ε.
    pub prior_probability: Option<f64>,
    /// κ: factor on the standard deviation of a bad point.
    pub inflation: Option<f64>,
    /// K: the most bad points considered at once.
    pub at_most: Option<f64>,
}

/// The maximum permissible error and the decision rule, kept as written.
#[derive(Clone, Debug, Default, PartialEq, Deserialize)]
#[serde(default)]
pub struct Tolerance {
    /// `sum` or `greatest`.
    pub combine: Option<String>,
    /// Constant part.
    pub constant: Option<f64>,
    /// Share of the value.
    pub of_value: Option<f64>,
    /// Share of the span.
    pub of_span: Option<f64>,
    /// Counts of the last digit.
    pub digits: Option<f64>,
}

/// Where further points may be taken, kept as written.
#[derive(Clone, Debug, Default, PartialEq, Deserialize)]
#[serde(default)]
pub struct Plan {
    /// Settings that the standard can produce.
    pub admissible: Vec<f64>,
}

/// What adds to the uncertainty of a value in use, kept as written.
#[derive(Clone, Debug, Default, PartialEq, Deserialize)]
#[serde(default)]
pub struct InUse {
    /// One entry a contribution.
    pub contributions: Vec<IgnoredAny>,
    /// Until when the calibration is said to hold.
    pub valid_until: Option<String>,
}

/// What the report is asked for besides the fit.
#[derive(Clone, Debug, Default, PartialEq, Deserialize)]
#[serde(default)]
pub struct Ask {
    /// Places where the curve is asked.
    pub at: Vec<Place>,
    /// Readings to turn into values.
    pub readings: Vec<Asked>,
}

/// A place on the curve.
#[derive(Clone, Debug, PartialEq, Deserialize)]
#[serde(untagged)]
pub enum Place {
    /// A value under the visit's `conditions`.
    Value(f64),
    /// A value with its own conditions.
    Under {
        /// The value.
        x: f64,
        /// Influence quantities by name.
        #[serde(default)]
        influences: BTreeMap<String, f64>,
    },
}

/// A reading asked for.
#[derive(Clone, Debug, PartialEq, Deserialize)]
#[serde(untagged)]
pub enum Asked {
    /// Repeats of one value under the visit's `conditions`.
    Indications(Vec<f64>),
    /// A reading with its own particulars.
    Reading(Reading),
    /// A single indication.
    One(f64),
}

impl Asked {
    /// The same as a reading with its particulars.
    pub fn to_reading(&self) -> Reading {
        match self {
            Asked::Indications(values) => Reading { indications: values.clone(), ..Reading::default() },
            Asked::One(value) => Reading { indications: vec![*value], ..Reading::default() },
            Asked::Reading(reading) => reading.clone(),
        }
    }
}

/// Indications of one unknown value, and what is known about it otherwise.
#[derive(Clone, Debug, Default, PartialEq, Deserialize)]
pub struct Reading {
    /// The repeats, in the unit of the output.
    pub indications: Vec<f64>,
    /// Influence quantities by name; the visit's `conditions` where absent.
    #[serde(default)]
    pub influences: BTreeMap<String, f64>,
    /// Least digit of this reading, r: adds r²/12, undivided by the number of repeats.
    #[serde(default)]
    pub resolution: Option<f64>,
    /// What was known about the value itself.
    #[serde(default)]
    pub known: Option<KnownValue>,
    /// Known standard uncertainty of the mean of these indications, in the unit of the output; takes the place of σ²v/m.
    #[serde(default)]
    pub indication_uncertainty: Option<f64>,
}

/// A value known as a normal.
#[derive(Clone, Copy, Debug, PartialEq, Deserialize)]
pub struct KnownValue {
    /// Its mean, in the unit of the measured quantity.
    pub mean: f64,
    /// Its standard uncertainty.
    pub standard_uncertainty: f64,
}
