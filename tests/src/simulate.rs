//! Coverage by simulation: how often an interval holds the true value, over many visits drawn from a known curve.
//!
//! Under a flat prior the intervals of the curve and of a new indication are classical t intervals and cover exactly;
//! the interval of a value read back covers nearly so where the slope is well determined. Elsewhere the posterior of a
//! value is no confidence interval, and the share is published as it is.

use crate::random::SplitMix64;
use bandleaf_core::appraise;
use bandleaf_core::visit::{Indication, Instrument, Model, Point, Reading, Term, Terms, Visit};

/// Coverage probability that the intervals state.
pub const STATED: f64 = 0.95;

/// u(slope)/slope below which a value read back has to cover.
pub const WELL_DETERMINED: f64 = 0.05;

/// Where on the range the intervals are tested.
pub const PLACES: [f64; 3] = [0.1, 0.5, 0.9];

/// Range of use.
const RANGE: (f64, f64) = (0.0, 100.0);

/// A true curve with its points and noise.
#[derive(Clone, Copy, Debug)]
pub struct Scenario {
    /// Name of the shape.
    pub shape: &'static str,
    /// True coefficients of 1, x, x², …
    pub coefficients: &'static [f64],
    /// Number of points, equally spaced over the range.
    pub points: usize,
    /// True standard deviation of an indication.
    pub noise: f64,
    /// Number of simulated visits.
    pub visits: usize,
    /// Every how many visits a value is read back, at each place in turn.
    pub read_every: usize,
    /// Seed of the generator.
    pub seed: u64,
}

/// How often each interval held the true value, by place.
#[derive(Clone, Debug, Default)]
pub struct Counts {
    /// Interval of the curve.
    pub curve: [usize; 3],
    /// Interval of a new indication.
    pub indication: [usize; 3],
    /// Interval of a value read back from one new indication.
    pub value: [usize; 3],
    /// Number of values read back.
    pub read: [usize; 3],
}

impl Scenario {
    /// Place on the range for a share of it.
    pub fn place(&self, share: f64) -> f64 {
        RANGE.0 + share * (RANGE.1 - RANGE.0)
    }

    fn truth(&self, x: f64) -> f64 {
        self.coefficients.iter().rev().fold(0.0, |sum, c| sum * x + c)
    }

    fn abscissae(&self) -> Vec<f64> {
        (0..self.points).map(|i| self.place(i as f64 / (self.points - 1) as f64)).collect()
    }

    fn visit(&self, random: &mut SplitMix64) -> Visit {
        let points = self.abscissae().into_iter().map(|x| Point {
            reference: Some(x),
            indication: Some(Indication::One(self.truth(x) + self.noise * random.normal())),
            ..Point::default()
        });
        let terms = ["1", "x", "x^2"].iter().take(self.coefficients.len()).map(|t| Term::Expression((*t).to_owned()));
        Visit {
            instrument: Instrument { range: Some(RANGE), ..Instrument::default() },
            points: points.collect(),
            model: Model { terms: Terms::List(terms.collect()), ..Model::default() },
            coverage: Some(STATED),
            ..Visit::default()
        }
    }

    /// Simulates all visits. Every visit brings its own new indications.
    ///
    /// # Panics
    /// Where a visit has no result: the simulation would be of something else.
    pub fn run(&self) -> Counts {
        let mut random = SplitMix64::new(self.seed);
        let mut counts = Counts::default();
        let places = PLACES.map(|share| self.place(share));
        for number in 0..self.visits {
            let appraisal = appraise(&self.visit(&mut random));
            let curve = appraisal.curve(&places).expect("a curve");
            for (k, &x) in places.iter().enumerate() {
                let shown = self.truth(x) + self.noise * random.normal();
                counts.curve[k] += usize::from(holds(curve.curve_interval[k], self.truth(x)));
                counts.indication[k] += usize::from(holds(curve.indication_interval[k], shown));
                if number % (self.read_every * places.len()) == k * self.read_every {
                    let reading = Reading { indications: vec![shown], ..Reading::default() };
                    // A reading out of reach of the fitted curve gets no value: it counts as not covered.
                    let value = appraisal.read(&reading).value;
                    counts.value[k] += usize::from(value.is_some_and(|value| holds(value.interval, x)));
                    counts.read[k] += 1;
                }
            }
        }
        counts
    }

    /// Whether a value read back has to cover everywhere.
    pub fn is_well_determined(&self) -> bool {
        PLACES.iter().all(|share| self.slope_uncertainty(self.place(*share)) < WELL_DETERMINED)
    }

    /// u(slope)/slope at a place, from the true noise and the design.
    pub fn slope_uncertainty(&self, x: f64) -> f64 {
        let slope: f64 =
            (1..self.coefficients.len()).map(|j| j as f64 * self.coefficients[j] * libm::pow(x, j as f64 - 1.0)).sum();
        libm::fabs(self.noise * libm::sqrt(self.slope_variance(x)) / slope)
    }

    /// Variance of the slope at a place over σ²: gᵀ(AᵀA)⁻¹g, in orthogonal polynomials of the points' centre.
    fn slope_variance(&self, x: f64) -> f64 {
        let (places, centre) = (self.abscissae(), self.place(0.5));
        let second: f64 = places.iter().map(|p| (p - centre) * (p - centre)).sum();
        let line = 1.0 / second;
        if self.coefficients.len() == 2 {
            return line;
        }
        let mean = second / places.len() as f64;
        let bend: f64 = places.iter().map(|p| libm::pow((p - centre) * (p - centre) - mean, 2.0)).sum();
        line + 4.0 * (x - centre) * (x - centre) / bend
    }
}

fn holds(interval: [f64; 2], truth: f64) -> bool {
    interval[0] <= truth && truth <= interval[1]
}

/// Distance of a share from the stated probability in standard errors of the simulation.
pub fn standard_errors(held: usize, visits: usize) -> f64 {
    let share = held as f64 / visits as f64;
    (share - STATED) / libm::sqrt(STATED * (1.0 - STATED) / visits as f64)
}

/// The scenarios: line and bent line, 5 and 12 points, noise from small to such that the slope is badly known. A value is
/// read back at every `read_every`th visit where the slope is well determined, at every fifth of those elsewhere.
pub fn scenarios(visits: usize, read_every: usize) -> Vec<Scenario> {
    let shapes: [(&'static str, &'static [f64]); 2] = [("line", &[0.5, 1.01]), ("quadratic", &[0.5, 0.8, 0.002])];
    let mut all = Vec::new();
    for (shape, coefficients) in shapes {
        for points in [5, 12] {
            for noise in [1.0, 10.0, 40.0] {
                let seed = 1000 + all.len() as u64;
                let mut scenario = Scenario { shape, coefficients, points, noise, visits, read_every, seed };
                if !scenario.is_well_determined() {
                    scenario.read_every *= 5;
                }
                all.push(scenario);
            }
        }
    }
    all
}
