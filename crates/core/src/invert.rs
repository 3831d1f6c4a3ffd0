//! Inversion: the posterior of a value x* from its density on an extent, and every value at which the curve shows an
//! indication.
//!
//! The density p(x* | ȳ*, data) ∝ p(x*)·p(ȳ* | x*, data) is given as a logarithm up to a constant; it is carried over
//! to Chebyshev panels (see `chebyshev`) that are placed around the solutions of f(x) = ȳ*, and everything reported is
//! read from those. Nothing is assumed about its form: it may be skewed, cut at an end, or have several modes.
//! Accuracy: quantiles to better than 1e-6 of the standard uncertainty.
//!
//! Sources: B. Hoadley, JASA 65 (1970) 356 (the flat density for x* and why its extent matters); A. Gelman et al.,
//! Bayesian Data Analysis, 2.3 (highest-density region).

use crate::chebyshev::Piecewise;
use crate::float;

/// Places scanned for solutions and maxima.
const SCAN: usize = 256;

/// Steps of each half of the points of a density that is handed on for drawing.
const EVEN: usize = 40;

/// A solution of f(x) = target, with the slope there.
#[derive(Clone, Copy, Debug)]
pub struct Solution {
    /// Where.
    pub x: f64,
    /// f′ there.
    pub slope: f64,
}

/// A place around which the density changes, and on what scale.
#[derive(Clone, Copy, Debug)]
pub struct Seed {
    /// Where.
    pub x: f64,
    /// The scale.
    pub width: f64,
}

/// What a density on an extent says about the value.
#[derive(Clone, Debug)]
pub struct Described {
    /// Median.
    pub median: f64,
    /// Mean.
    pub mean: f64,
    /// Standard deviation.
    pub standard_deviation: f64,
    /// Equal-tailed interval.
    pub interval: [f64; 2],
    /// Shortest connected interval.
    pub shortest: [f64; 2],
    /// Region of highest density.
    pub highest_density: Vec<[f64; 2]>,
    /// Local maxima inside the extent, ascending.
    pub modes: Vec<f64>,
    /// Mass below, between and above the minima that separate the modes, one entry a mode (and an end).
    pub masses: Vec<f64>,
    /// Density at both ends over its maximum.
    pub at_ends: [f64; 2],
    /// ln of the mean of the unnormalised density over the extent.
    pub log_mean: f64,
    /// The density for drawing.
    pub drawn: (Vec<f64>, Vec<f64>),
}

/// Every x in [low, high] with f(x) = target, ascending, for `mean` = f − target and `mean_and_slope` = (f − target,
/// f′); and the places where the curve turns without reaching the target.
pub fn solutions(
    low: f64,
    high: f64,
    mean: &dyn Fn(f64) -> f64,
    mean_and_slope: &dyn Fn(f64) -> (f64, f64),
) -> (Vec<Solution>, Vec<Seed>) {
    let places: Vec<f64> = (0..=SCAN).map(|k| place(low, high, k)).collect();
    let gaps: Vec<f64> = places.iter().map(|&x| mean(x)).collect();
    let mut found: Vec<Solution> = Vec::new();
    let mut near = Vec::new();
    for k in 0..SCAN {
        let (a, b) = (gaps[k], gaps[k + 1]);
        if a == 0.0 {
            found.push(Solution { x: places[k], slope: mean_and_slope(places[k]).1 });
        } else if a * b < 0.0 {
            found.push(bracketed(places[k], places[k + 1], a, mean_and_slope));
        } else if k > 0 && gaps[k - 1] * a > 0.0 && a.abs() <= (gaps[k - 1]).abs().min(b.abs()) {
            turning(places[k - 1], places[k + 1], mean_and_slope, &mut found, &mut near);
        }
    }
    if gaps[SCAN] == 0.0 {
        found.push(Solution { x: places[SCAN], slope: mean_and_slope(places[SCAN]).1 });
    }
    found.sort_by(|a, b| a.x.total_cmp(&b.x));
    found.dedup_by(|a, b| a.x == b.x);
    (found, near)
}

/// Where |f − target| is smallest between two places without a change of sign: two solutions, one, or a near miss.
fn turning(
    low: f64,
    high: f64,
    mean_and_slope: &dyn Fn(f64) -> (f64, f64),
    found: &mut Vec<Solution>,
    near: &mut Vec<Seed>,
) {
    let (first, _) = mean_and_slope(low);
    let distance = |x: f64| (mean_and_slope(x).0).abs();
    let golden = 0.381_966_011_250_105_2;
    let (mut a, mut b) = (low, high);
    for _ in 0..80 {
        let (l, r) = (a + golden * (b - a), b - golden * (b - a));
        if distance(l) < distance(r) {
            b = r;
        } else {
            a = l;
        }
    }
    let least = 0.5 * (a + b);
    let gap = mean_and_slope(least).0;
    if gap * first < 0.0 {
        found.push(bracketed(low, least, first, mean_and_slope));
        found.push(bracketed(least, high, gap, mean_and_slope));
    } else if distance(least) < distance(low).min(distance(high)) {
        near.push(Seed { x: least, width: (high - low) / 4096.0 });
    }
}

/// The solution between two places of different sign: Newton, kept inside the bracket.
fn bracketed(low: f64, high: f64, at_low: f64, mean_and_slope: &dyn Fn(f64) -> (f64, f64)) -> Solution {
    let (mut a, mut b) = (low, high);
    let mut x = 0.5 * (a + b);
    for _ in 0..200 {
        let (gap, slope) = mean_and_slope(x);
        if gap == 0.0 {
            break;
        }
        if (gap < 0.0) == (at_low < 0.0) {
            a = x;
        } else {
            b = x;
        }
        let mut next = x - gap / slope;
        if !(next > a && next < b) {
            next = 0.5 * (a + b);
        }
        if next == x || !(b > a) {
            break;
        }
        x = next;
    }
    Solution { x, slope: mean_and_slope(x).1 }
}

/// The k-th of SCAN + 1 equally spaced places, both ends exact.
fn place(low: f64, high: f64, k: usize) -> f64 {
    if k == SCAN { high } else { low + (high - low) * (k as f64 / SCAN as f64) }
}

/// A density on an extent as panels, with the logarithm of its scale.
pub struct ValueDensity {
    density: Piecewise,
    log_scale: f64,
    extent: [f64; 2],
}

impl ValueDensity {
    /// From the logarithm of an unnormalised density; −∞ or NaN counts as zero. `None` where it is zero everywhere.
    pub fn new(extent: [f64; 2], log_density: &dyn Fn(f64) -> f64, seeds: &[Seed]) -> Option<ValueDensity> {
        let [low, high] = extent;
        // The seeds stand where the density is greatest; the scan is for extents without any.
        let scanned = (0..=SCAN).step_by(SCAN / 64).map(|k| place(low, high, k)).chain(seeds.iter().map(|s| s.x));
        let mut best = Seed { x: low, width: (high - low) / 64.0 };
        let mut log_scale = f64::NEG_INFINITY;
        for x in scanned.filter(|x| *x >= low && *x <= high) {
            let value = log_density(x);
            if value > log_scale && value < f64::INFINITY {
                (log_scale, best.x) = (value, x);
            }
        }
        if !log_scale.is_finite() {
            return None;
        }
        let edges = edges(low, high, seeds.iter().copied().chain([best]));
        let density = Piecewise::new(&edges, &scaled(log_density, log_scale));
        (density.mass() > 0.0 && density.mass().is_finite()).then_some(ValueDensity { density, log_scale, extent })
    }

    /// The equal-tailed interval after the extent is widened to `outer`.
    pub fn interval_when_widened(&self, outer: [f64; 2], log_density: &dyn Fn(f64) -> f64, coverage: f64) -> [f64; 2] {
        let function = scaled(log_density, self.log_scale);
        let side = |a: f64, b: f64| Piecewise::new(&edges(a, b, std::iter::empty()), &function);
        let wide = Piecewise::concatenate(vec![
            side(outer[0], self.extent[0]),
            self.density.clone(),
            side(self.extent[1], outer[1]),
        ]);
        [wide.quantile((1.0 - coverage) / 2.0), wide.quantile((1.0 + coverage) / 2.0)]
    }

    /// Everything that is reported of the value.
    pub fn describe(&self, coverage: f64, log_density: &dyn Fn(f64) -> f64) -> Described {
        let d = &self.density;
        let tail = (1.0 - coverage) / 2.0;
        let samples = d.samples();
        let top = samples.iter().map(|s| s.1).fold(0.0, f64::max);
        let (modes, valleys) = modes(d, &samples, top);
        let greatest = modes.iter().map(|&m| log_density(m)).fold(f64::NEG_INFINITY, f64::max);
        let median = d.quantile(0.5);
        let mean_shift = d.moment(median, 1);
        let second = d.moment(median, 2);
        let mut cuts = vec![self.extent[0]];
        cuts.extend(&valleys);
        cuts.push(self.extent[1]);
        Described {
            median,
            mean: median + mean_shift,
            standard_deviation: float::sqrt((second - mean_shift * mean_shift).max(0.0)),
            interval: [d.quantile(tail), d.quantile(1.0 - tail)],
            shortest: shortest(d, coverage),
            highest_density: highest_density(d, &samples, &modes, &valleys, self.extent, top, coverage),
            masses: cuts.windows(2).map(|w| d.cdf(w[1]) - d.cdf(w[0])).collect(),
            modes: modes.iter().copied().filter(|m| *m > self.extent[0] && *m < self.extent[1]).collect(),
            at_ends: self.extent.map(|end| {
                let share = float::exp(log_density(end) - greatest);
                if share.is_finite() { share } else { 0.0 }
            }),
            log_mean: self.log_scale + float::ln(d.mass() / (self.extent[1] - self.extent[0])),
            drawn: drawn(d),
        }
    }

    /// The normalised density at a place.
    pub fn at(&self, x: f64) -> f64 {
        self.density.value(x) / self.density.mass()
    }
}

fn scaled<'a>(log_density: &'a dyn Fn(f64) -> f64, log_scale: f64) -> impl Fn(f64) -> f64 + 'a {
    move |x| {
        let value = float::exp(log_density(x) - log_scale);
        if value.is_finite() { value } else { 0.0 }
    }
}

/// Edges of the first panels: evenly spaced, and around each seed at distances that grow by a constant factor.
fn edges(low: f64, high: f64, seeds: impl Iterator<Item = Seed>) -> Vec<f64> {
    let mut edges: Vec<f64> = (0..=SCAN).step_by(SCAN / 16).map(|k| place(low, high, k)).collect();
    for seed in seeds {
        edges.push(seed.x);
        let mut distance = 2.0 * seed.width;
        while distance < high - low && distance > 0.0 {
            edges.extend([seed.x - distance, seed.x + distance]);
            distance *= 3.0;
        }
    }
    edges.retain(|x| *x >= low && *x <= high);
    edges.sort_by(f64::total_cmp);
    edges.dedup();
    edges
}

/// Local maxima (ends included) and the minima between them, of those that stand out of the rounding.
fn modes(d: &Piecewise, samples: &[(f64, f64)], top: f64) -> (Vec<f64>, Vec<f64>) {
    let mut modes: Vec<(f64, f64)> = Vec::new();
    let mut valleys: Vec<f64> = Vec::new();
    let mut lowest = (f64::NAN, 0.0);
    for (k, &(_, value)) in samples.iter().enumerate() {
        let before = if k == 0 { -1.0 } else { samples[k - 1].1 };
        let after = samples.get(k + 1).map_or(-1.0, |s| s.1);
        if value < lowest.1 || modes.is_empty() {
            lowest = samples[k];
        }
        if !(value >= before && value > after && value > 1e-9 * top) {
            continue;
        }
        let peak = refined(d, samples, k, 1.0);
        match modes.last_mut() {
            Some(last) if lowest.1 > last.1.min(value) * (1.0 - 1e-6) => {
                // No valley worth the name between the two: keep the higher.
                if value > last.1 {
                    *last = (peak, value);
                }
            }
            Some(_) => {
                let at = samples.iter().position(|s| s.0 == lowest.0).unwrap_or(k);
                valleys.push(refined(d, samples, at, -1.0));
                modes.push((peak, value));
            }
            None => modes.push((peak, value)),
        }
        lowest = (samples[k].0, value);
    }
    (modes.into_iter().map(|m| m.0).collect(), valleys)
}

/// The extremum next to a sample, by golden section on the interpolant; sign 1 for a maximum, −1 for a minimum.
fn refined(d: &Piecewise, samples: &[(f64, f64)], k: usize, sign: f64) -> f64 {
    let mut a = samples[k.saturating_sub(1)].0;
    let mut b = samples[(k + 1).min(samples.len() - 1)].0;
    let golden = 0.381_966_011_250_105_2;
    for _ in 0..60 {
        let (l, r) = (a + golden * (b - a), b - golden * (b - a));
        if sign * d.value(l) > sign * d.value(r) {
            b = r;
        } else {
            a = l;
        }
    }
    let inside = 0.5 * (a + b);
    if sign * d.value(inside) >= sign * samples[k].1 { inside } else { samples[k].0 }
}

/// The shortest connected interval: a scan over the lower tail, then equal density at both ends.
fn shortest(d: &Piecewise, coverage: f64) -> [f64; 2] {
    const STEPS: usize = 128;
    let spare = 1.0 - coverage;
    let ends = |a: f64| [d.quantile(a), d.quantile((a + coverage).min(1.0))];
    let step = |k: usize| spare * k as f64 / STEPS as f64;
    let length = |k: usize| {
        let [l, h] = ends(step(k));
        h - l
    };
    let lengths: Vec<f64> = (0..=STEPS).map(length).collect();
    let best = (0..=STEPS).fold(0, |best, k| if lengths[k] < lengths[best] { k } else { best });
    // Density at the lower end less density at the upper: negative where moving up shortens.
    let slant = |a: f64| {
        let [l, h] = ends(a);
        d.value(l) - d.value(h)
    };
    let (mut low, mut high) = (step(best.saturating_sub(1)), step((best + 1).min(STEPS)));
    if slant(low) >= 0.0 {
        return ends(low);
    }
    if slant(high) <= 0.0 {
        return ends(high);
    }
    for _ in 0..60 {
        let middle = 0.5 * (low + high);
        if slant(middle) < 0.0 {
            low = middle;
        } else {
            high = middle;
        }
    }
    ends(0.5 * (low + high))
}

/// The union of intervals of highest density with the given mass.
fn highest_density(
    d: &Piecewise,
    samples: &[(f64, f64)],
    modes: &[f64],
    valleys: &[f64],
    extent: [f64; 2],
    top: f64,
    coverage: f64,
) -> Vec<[f64; 2]> {
    let mut turns: Vec<f64> = vec![extent[0], extent[1]];
    turns.extend(modes);
    turns.extend(valleys);
    turns.sort_by(f64::total_cmp);
    turns.dedup();
    let above = |level: f64| regions(d, samples, &turns, level);
    let mass = |regions: &[[f64; 2]]| regions.iter().map(|r| d.cdf(r[1]) - d.cdf(r[0])).sum::<f64>();
    let (mut low, mut high) = (0.0, top);
    for _ in 0..60 {
        let level = 0.5 * (low + high);
        if mass(&above(level)) > coverage {
            low = level;
        } else {
            high = level;
        }
    }
    above(low)
}

/// Where the density is at least `level`; between two turns it is monotonic.
fn regions(d: &Piecewise, samples: &[(f64, f64)], turns: &[f64], level: f64) -> Vec<[f64; 2]> {
    let mut regions: Vec<[f64; 2]> = Vec::new();
    let mut add = |a: f64, b: f64| match regions.last_mut() {
        Some(last) if last[1] >= a => last[1] = b,
        _ => regions.push([a, b]),
    };
    for w in turns.windows(2) {
        let (a, b) = (w[0], w[1]);
        let (first, second) = (d.value(a) >= level, d.value(b) >= level);
        match (first, second) {
            (true, true) => add(a, b),
            (false, false) => {}
            (rising_out, _) => {
                let x = crossing(d, samples, a, b, level);
                if rising_out { add(a, x) } else { add(x, b) }
            }
        }
    }
    regions
}

/// The place between two of different side at which the density is `level`.
fn crossing(d: &Piecewise, samples: &[(f64, f64)], a: f64, b: f64, level: f64) -> f64 {
    let first = d.value(a) >= level;
    // The samples narrow the bracket, so that few halvings are left.
    let from = samples.partition_point(|s| s.0 <= a);
    let to = samples.partition_point(|s| s.0 < b);
    let k = from + samples[from..to].partition_point(|s| (s.1 >= level) == first);
    let mut low = if k > from { samples[k - 1].0 } else { a };
    let mut high = if k < to { samples[k].0 } else { b };
    for _ in 0..52 {
        let middle = 0.5 * (low + high);
        if !(middle > low && middle < high) {
            break;
        }
        if (d.value(middle) >= level) == first {
            low = middle;
        } else {
            high = middle;
        }
    }
    0.5 * (low + high)
}

/// Points of the normalised density over the part that matters: one half evenly spaced, so that long tails are seen,
/// one half with equal mass between them, so that a narrow peak is.
fn drawn(d: &Piecewise) -> (Vec<f64>, Vec<f64>) {
    let (low, high) = (d.quantile(5e-4), d.quantile(1.0 - 5e-4));
    let even = (0..=EVEN).map(|k| low + (high - low) * k as f64 / EVEN as f64);
    let by_mass = (1..EVEN).map(|k| d.quantile(k as f64 / EVEN as f64));
    let mut x: Vec<f64> = even.chain(by_mass).collect();
    x.sort_by(f64::total_cmp);
    x.dedup();
    let y = x.iter().map(|&x| d.value(x) / d.mass()).collect();
    (x, y)
}
