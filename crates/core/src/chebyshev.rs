//! A non-negative function on an interval as Chebyshev interpolants on panels, and what follows from it exactly:
//! mass, distribution function, quantiles, moments, modes.
//!
//! Each panel carries the interpolant through 17 Chebyshev points; a panel is halved until the last coefficients are
//! negligible against the whole, so that everything read from it afterwards costs no further evaluation. A panel that
//! holds a jump (the edge of the domain of a term) is halved down to a width without weight.
//!
//! Sources: L. N. Trefethen, Approximation Theory and Approximation Practice (2013), ch. 3, 8 and 19 (Clenshaw–Curtis
//! quadrature); C. W. Clenshaw & A. R. Curtis, Numer. Math. 2 (1960) 197.

use crate::float;

/// Degree of each interpolant.
const DEGREE: usize = 16;

/// Coefficients that small against the largest value on the whole interval end the halving.
const TAIL: f64 = 1e-12;

/// The most halvings of a panel.
const DEEPEST: u32 = 60;

/// The most panels, a bound on work for a function that never becomes smooth.
const MOST_PANELS: usize = 4000;

/// One panel: its ends, Chebyshev coefficients, and the mass before it and in it.
#[derive(Clone, Debug)]
struct Panel {
    low: f64,
    high: f64,
    values: [f64; DEGREE + 1],
    coefficients: [f64; DEGREE + 1],
    integral: [f64; DEGREE + 2],
    before: f64,
    mass: f64,
}

/// A function as panels of Chebyshev interpolants, ascending and without gaps.
#[derive(Clone, Debug)]
pub struct Piecewise {
    panels: Vec<Panel>,
    mass: f64,
}

/// Cosines of kπ/16 on [−1, 1], ascending, and the table cos(jkπ/16).
struct Nodes {
    places: [f64; DEGREE + 1],
    cosines: [f64; 2 * DEGREE],
}

impl Nodes {
    fn new() -> Nodes {
        let step = std::f64::consts::PI / DEGREE as f64;
        let cosines = std::array::from_fn(|k| float::cos(step * k as f64));
        let places = std::array::from_fn(|k| match 2 * k {
            DEGREE => 0.0,
            _ => -float::cos(step * k as f64),
        });
        Nodes { places, cosines }
    }

    /// Coefficients of the interpolant through values at the ascending places.
    fn coefficients(&self, values: &[f64; DEGREE + 1]) -> [f64; DEGREE + 1] {
        std::array::from_fn(|j| {
            let half = |k: usize| if k == 0 || k == DEGREE { 0.5 } else { 1.0 };
            // values[k] stands at −cos(kπ/16) = cos((16 − k)π/16)
            let sum: f64 =
                (0..=DEGREE).map(|k| half(k) * values[k] * self.cosines[(j * (DEGREE - k)) % (2 * DEGREE)]).sum();
            sum * half(j) * 2.0 / DEGREE as f64
        })
    }
}

/// Σ c_j T_j(t) by Clenshaw's recurrence.
fn clenshaw(coefficients: &[f64], t: f64) -> f64 {
    let (mut b1, mut b2) = (0.0, 0.0);
    for &c in coefficients.iter().skip(1).rev() {
        (b1, b2) = (2.0 * t * b1 - b2 + c, b1);
    }
    t * b1 - b2 + coefficients.first().copied().unwrap_or(0.0)
}

impl Panel {
    fn new(nodes: &Nodes, low: f64, high: f64, function: &dyn Fn(f64) -> f64) -> Panel {
        let (middle, half) = (0.5 * (low + high), 0.5 * (high - low));
        let values = std::array::from_fn(|k| match k {
            0 => function(low),
            DEGREE => function(high),
            _ => function(middle + half * nodes.places[k]),
        });
        let coefficients = nodes.coefficients(&values);
        // ∫T_j = T_{j+1}/(2(j+1)) − T_{j−1}/(2(j−1)); the constant makes the integral zero at the lower end.
        let mut integral = [0.0; DEGREE + 2];
        let c = |j: usize| coefficients.get(j).copied().unwrap_or(0.0);
        integral[1] = half * (c(0) - 0.5 * c(2));
        for (j, slot) in integral.iter_mut().enumerate().skip(2) {
            *slot = half * (c(j - 1) - c(j + 1)) / (2.0 * j as f64);
        }
        integral[0] = -clenshaw(&integral, -1.0);
        let mass = clenshaw(&integral, 1.0);
        Panel { low, high, values, coefficients, integral, before: 0.0, mass }
    }

    fn local(&self, x: f64) -> f64 {
        ((x - self.low) - (self.high - x)) / (self.high - self.low)
    }

    fn value(&self, x: f64) -> f64 {
        clenshaw(&self.coefficients, self.local(x)).max(0.0)
    }

    fn mass_below(&self, x: f64) -> f64 {
        clenshaw(&self.integral, self.local(x))
    }

    /// Size of the last coefficients: what the interpolant still misses.
    fn tail(&self) -> f64 {
        self.coefficients[DEGREE - 2..].iter().fold(0.0, |t, c| f64::max(t, c.abs()))
    }

    fn top(&self) -> f64 {
        self.values.iter().copied().fold(0.0, f64::max)
    }

    fn place(&self, nodes: &Nodes, k: usize) -> f64 {
        match k {
            0 => self.low,
            DEGREE => self.high,
            _ => 0.5 * (self.low + self.high) + 0.5 * (self.high - self.low) * nodes.places[k],
        }
    }
}

impl Piecewise {
    /// Interpolates `function` between the first and the last of `edges` (ascending); the edges tell where it changes.
    pub fn new(edges: &[f64], function: &dyn Fn(f64) -> f64) -> Piecewise {
        let nodes = Nodes::new();
        let first: Vec<Panel> =
            edges.windows(2).filter(|w| w[1] > w[0]).map(|w| Panel::new(&nodes, w[0], w[1], function)).collect();
        let whole = first.iter().map(|p| p.high - p.low).sum::<f64>();
        let mut top = first.iter().map(Panel::top).fold(0.0, f64::max);
        let mut mass: f64 = first.iter().map(|p| p.mass).sum();
        let mut panels = Vec::new();
        let mut waiting: Vec<(Panel, u32)> = first.into_iter().rev().map(|p| (p, 0)).collect();
        while let Some((panel, depth)) = waiting.pop() {
            top = top.max(panel.top());
            let width = panel.high - panel.low;
            let fine = panel.tail() <= TAIL * top || panel.tail() * width <= 1e-3 * TAIL * mass;
            let middle = 0.5 * (panel.low + panel.high);
            let narrow = width <= 1e-15 * whole || !(middle > panel.low && middle < panel.high);
            if fine || narrow || depth >= DEEPEST || panels.len() + waiting.len() >= MOST_PANELS {
                panels.push(panel);
                continue;
            }
            let left = Panel::new(&nodes, panel.low, middle, function);
            let right = Panel::new(&nodes, middle, panel.high, function);
            mass += left.mass + right.mass - panel.mass;
            waiting.push((right, depth + 1));
            waiting.push((left, depth + 1));
        }
        Piecewise::joined(panels)
    }

    /// The panels of several pieces that lie one after the other.
    pub fn concatenate(pieces: Vec<Piecewise>) -> Piecewise {
        Piecewise::joined(pieces.into_iter().flat_map(|p| p.panels).collect())
    }

    fn joined(mut panels: Vec<Panel>) -> Piecewise {
        let mut mass = 0.0;
        for panel in &mut panels {
            panel.before = mass;
            panel.mass = panel.mass.max(0.0);
            mass += panel.mass;
        }
        Piecewise { panels, mass }
    }

    /// The integral over the whole interval.
    pub fn mass(&self) -> f64 {
        self.mass
    }

    /// The value at a place, 0 outside.
    pub fn value(&self, x: f64) -> f64 {
        self.panel_at(x).map_or(0.0, |p| p.value(x))
    }

    /// The share of the mass below a place.
    pub fn cdf(&self, x: f64) -> f64 {
        match (self.panels.first(), self.panels.last()) {
            (Some(first), _) if x <= first.low => 0.0,
            (_, Some(last)) if x >= last.high => 1.0,
            _ => self.panel_at(x).map_or(0.0, |p| (p.before + p.mass_below(x)) / self.mass),
        }
    }

    /// The place below which a share of the mass lies: Newton inside the panel, kept inside a bracket.
    pub fn quantile(&self, share: f64) -> f64 {
        let target = share * self.mass;
        let index =
            self.panels.partition_point(|p| p.before + p.mass < target).min(self.panels.len().saturating_sub(1));
        let Some(panel) = self.panels.get(index) else {
            return f64::NAN;
        };
        let wanted = target - panel.before;
        let (mut low, mut high) = (panel.low, panel.high);
        let mut x = 0.5 * (low + high);
        for _ in 0..100 {
            let gap = panel.mass_below(x) - wanted;
            if gap < 0.0 {
                low = x;
            } else {
                high = x;
            }
            let mut next = x - gap / panel.value(x);
            if !(next > low && next < high) {
                next = 0.5 * (low + high);
            }
            if next == x || (next - x).abs() <= 1e-16 * x.abs() {
                return next;
            }
            x = next;
        }
        x
    }

    /// Mean of (x − centre)^power under the normalised function, for powers 1 and 2.
    pub fn moment(&self, centre: f64, power: u32) -> f64 {
        let nodes = Nodes::new();
        let total: f64 = self
            .panels
            .iter()
            .map(|p| {
                let values: [f64; DEGREE + 1] = std::array::from_fn(|k| {
                    let d = p.place(&nodes, k) - centre;
                    p.values[k] * if power == 1 { d } else { d * d }
                });
                let c = nodes.coefficients(&values);
                // ∫T_j over [−1, 1] is 2/(1 − j²) for even j, 0 for odd.
                let sum: f64 = (0..=DEGREE).step_by(2).map(|j| c[j] * 2.0 / (1.0 - (j * j) as f64)).sum();
                0.5 * (p.high - p.low) * sum
            })
            .sum();
        total / self.mass
    }

    /// All interpolation points in ascending order with their values.
    pub fn samples(&self) -> Vec<(f64, f64)> {
        let nodes = Nodes::new();
        let mut samples = Vec::with_capacity(self.panels.len() * DEGREE + 1);
        for (index, panel) in self.panels.iter().enumerate() {
            let from = usize::from(index > 0);
            samples.extend((from..=DEGREE).map(|k| (panel.place(&nodes, k), panel.values[k])));
        }
        samples
    }

    fn panel_at(&self, x: f64) -> Option<&Panel> {
        let index = self.panels.partition_point(|p| p.high < x);
        self.panels.get(index).filter(|p| x >= p.low)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::distribution::Law;

    #[test]
    fn a_normal_density_keeps_its_quantiles_and_moments() {
        let (m, s) = (3.0, 1e-4);
        let density = |x: f64| float::exp(Law::Normal.log_density((x - m) / s)) / s;
        let edges: Vec<f64> = vec![0.0, m - 8.0 * s, m, m + 8.0 * s, 10.0];
        let p = Piecewise::new(&edges, &density);
        assert!((p.mass() - 1.0).abs() < 1e-11, "{}", p.mass());
        let q = p.quantile(0.975);
        assert!(((q - m) / s - 1.959_963_984_540_054).abs() < 1e-9, "{}", (q - m) / s);
        assert!((p.moment(m, 2) / (s * s) - 1.0).abs() < 1e-9);
        assert!((p.cdf(m) - 0.5).abs() < 1e-11);
    }

    #[test]
    fn a_jump_is_bracketed() {
        let p = Piecewise::new(&[0.0, 1.0], &|x| if x < 0.3 { 0.0 } else { 2.0 });
        assert!((p.mass() - 1.4).abs() < 1e-10, "{}", p.mass());
        assert!((p.quantile(0.5) - 0.65).abs() < 1e-9);
    }

    #[test]
    fn a_heavy_tail_far_out() {
        // Cauchy over ±10⁶: mass (2/π)·atan(10⁶).
        let p = Piecewise::new(&[-1e6, -10.0, 0.0, 10.0, 1e6], &|x| 1.0 / (std::f64::consts::PI * (1.0 + x * x)));
        let expected = 2.0 / std::f64::consts::PI * libm::atan(1e6);
        assert!((p.mass() - expected).abs() < 1e-10, "{} {}", p.mass(), expected);
    }
}
