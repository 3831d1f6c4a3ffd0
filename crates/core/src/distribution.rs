//! The two laws of a posterior component: the standard normal and Student's t with ν degrees of freedom.
//!
//! Densities, distribution functions and quantiles, without location and scale. Domain: any ν > 0, any z; tails are
//! computed as tails, so a probability near 0 keeps its digits. Relative error of the t distribution function about
//! 1e-14 (ν up to 10⁶); quantiles solve the distribution function to the last few bits.
//!
//! Sources: M. Abramowitz & I. A. Stegun, Handbook of Mathematical Functions, 26.5 and 26.7; NIST Digital Library of
//! Mathematical Functions, 8.17 (continued fraction 8.17.22, evaluated by the modified Lentz method) and 5.11.13
//! (ratio of gamma functions). χ² and F: the
//! statrs crate (whose erfc is good to 5e-11 only, so the normal rests on libm's).

use crate::float;
use statrs::function::{beta, erf, gamma};

const LN_TWO_PI: f64 = 1.837_877_066_409_345_3;

/// A Newton step this small against the quantile ends the iteration; convergence is quadratic, so the step itself is
/// far more accurate than that.
const SETTLED: f64 = 1e-11;

/// From this many degrees of freedom on the t law is reached from the normal; the continued fraction loses digits there.
const MANY: f64 = 1000.0;

/// A standard law: location 0, scale 1.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Law {
    /// Standard normal.
    Normal,
    /// Student's t with the given degrees of freedom.
    StudentT(f64),
}

impl Law {
    /// Degrees of freedom; `None` for the normal.
    pub fn degrees_of_freedom(self) -> Option<f64> {
        match self {
            Law::Normal => None,
            Law::StudentT(nu) => Some(nu),
        }
    }

    /// Standard deviation over scale: √(ν/(ν−2)); `None` where ν ≤ 2.
    pub fn deviation_over_scale(self) -> Option<f64> {
        match self {
            Law::Normal => Some(1.0),
            Law::StudentT(nu) if nu > 2.0 => Some(float::sqrt(nu / (nu - 2.0))),
            Law::StudentT(_) => None,
        }
    }

    /// ln of the density at z.
    pub fn log_density(self, z: f64) -> f64 {
        match self {
            Law::Normal => -0.5 * (LN_TWO_PI + z * z),
            Law::StudentT(nu) => log_height(nu) - 0.5 * (nu + 1.0) * float::ln_1p(z * z / nu),
        }
    }

    /// P(Z ≤ z).
    pub fn cdf(self, z: f64) -> f64 {
        match self {
            Law::Normal => 0.5 * float::erfc(-z * std::f64::consts::FRAC_1_SQRT_2),
            Law::StudentT(nu) if z <= 0.0 => t_tail(nu, -z),
            Law::StudentT(nu) => 1.0 - t_tail(nu, z),
        }
    }

    /// z with P(Z ≤ z) = p, for 0 < p < 1.
    pub fn quantile(self, p: f64) -> f64 {
        if p > 0.5 {
            return -self.lower_quantile(1.0 - p);
        }
        self.lower_quantile(p)
    }

    /// z > 0 with P(−z ≤ Z ≤ z) = coverage, for 0 < coverage < 1.
    pub fn coverage_factor(self, coverage: f64) -> f64 {
        -self.lower_quantile((1.0 - coverage) / 2.0)
    }

    /// The quantile for p ≤ 1/2: Newton on the logarithm of the tail, in which it converges from any start.
    fn lower_quantile(self, p: f64) -> f64 {
        if p == 0.5 {
            return 0.0;
        }
        let normal = -std::f64::consts::SQRT_2 * erf::erfc_inv(2.0 * p);
        let mut z = match self {
            Law::Normal => normal,
            Law::StudentT(nu) => first_t_quantile(nu, p, normal),
        };
        let (mut low, mut high) = (f64::NEG_INFINITY, 0.0);
        for _ in 0..200 {
            let tail = self.cdf(z);
            if tail < p {
                low = z;
            } else {
                high = z;
            }
            let step = tail * float::ln(tail / p) / float::exp(self.log_density(z));
            let mut next = z - step;
            // Within the rounding of the distribution function the bracket means nothing any more.
            if (next - z).abs() <= SETTLED * z.abs() {
                return next;
            }
            if !(next > low && next < high) {
                next = if low.is_finite() { 0.5 * (low + high) } else { 2.0 * z };
            }
            z = next;
        }
        z
    }
}

/// A starting value for the lower t quantile: the normal one stretched, or the power-law tail, whichever is further in.
fn first_t_quantile(nu: f64, p: f64, normal: f64) -> f64 {
    let stretched = normal + (normal * normal * normal + normal) / (4.0 * nu);
    // P(T < −z) ≈ c z^−ν with c from the density's tail.
    let log_c = log_height(nu) + 0.5 * (nu - 1.0) * float::ln(nu);
    let power = -float::exp((log_c - float::ln(p)) / nu);
    if nu < 3.0 && p < 0.05 && power.is_finite() && power < -1e-300 { power } else { stretched }
}

/// ln of the t density at 0: ln Γ((ν+1)/2) − ln Γ(ν/2) − ln(νπ)/2, without cancellation at large ν.
fn log_height(nu: f64) -> f64 {
    log_gamma_half_step(0.5 * nu) - 0.5 * float::ln(nu * std::f64::consts::PI)
}

/// ln Γ(a + 1/2) − ln Γ(a) for a > 0: the asymptotic series, shifted upwards to where it has converged.
pub fn log_gamma_half_step(a: f64) -> f64 {
    let (mut a, mut ratio) = (a, 1.0);
    while a < 16.0 {
        // Γ(a + 1/2)/Γ(a) = [a/(a + 1/2)] · Γ(a + 3/2)/Γ(a + 1)
        ratio *= a / (a + 0.5);
        a += 1.0;
    }
    let (i, i2) = (1.0 / a, 1.0 / (a * a));
    let series = -i
        * (1.0 / 8.0
            - i2 * (1.0 / 192.0
                - i2 * (1.0 / 640.0 - i2 * (17.0 / 14336.0 - i2 * (31.0 / 18432.0 - i2 * (691.0 / 180_224.0))))));
    0.5 * float::ln(a) + series + float::ln(ratio)
}

/// P(T > t) for t ≥ 0: half of the regularised incomplete beta function at ν/(ν + t²) with a = ν/2, b = 1/2.
fn t_tail(nu: f64, t: f64) -> f64 {
    if t == 0.0 {
        return 0.5;
    }
    if !t.is_finite() {
        return if t.is_nan() { f64::NAN } else { 0.0 };
    }
    if nu >= MANY {
        return 0.5 * float::erfc(normal_deviate(nu, t) * std::f64::consts::FRAC_1_SQRT_2);
    }
    let ratio = t * t / nu;
    let (a, b) = (0.5 * nu, 0.5);
    // x = ν/(ν + t²) and y = 1 − x, each without cancellation.
    let (x, y) = if ratio < 1.0 {
        (1.0 / (1.0 + ratio), ratio / (1.0 + ratio))
    } else {
        let inverse = nu / t / t;
        (inverse / (1.0 + inverse), 1.0 / (1.0 + inverse))
    };
    let log_beta = 0.5 * float::ln(std::f64::consts::PI) - log_gamma_half_step(a);
    let log_x = if ratio.is_finite() { -float::ln_1p(ratio) } else { float::ln(nu) - 2.0 * float::ln(t) };
    let front = float::exp(a * log_x + b * float::ln(y) - log_beta);
    if x < (a + 1.0) / (a + b + 2.0) {
        0.5 * front * beta_fraction(a, b, x) / a
    } else {
        0.5 - 0.5 * front * beta_fraction(b, a, y) / b
    }
}

/// The normal deviate with the same tail as t with many degrees of freedom; the neglected terms are of order ν⁻⁶.
/// Source: G. W. Hill, Comm. ACM 13 (1970) 617 (Algorithm 395).
fn normal_deviate(nu: f64, t: f64) -> f64 {
    let a = nu - 0.5;
    let b = 48.0 * a * a;
    let w = a * float::ln_1p(t * t / nu);
    let high = (((-0.4 * w - 3.3) * w - 24.0) * w - 85.5) / (0.8 * w * w + 100.0 + b);
    ((high + w + 3.0) / b + 1.0) * float::sqrt(w)
}

/// The continued fraction of the incomplete beta function, DLMF 8.17.22, for x < (a + 1)/(a + b + 2).
fn beta_fraction(a: f64, b: f64, x: f64) -> f64 {
    const TINY: f64 = 1e-300;
    let guard = |v: f64| if v.abs() < TINY { TINY } else { v };
    let mut c = 1.0;
    let mut d = 1.0 / guard(1.0 - (a + b) * x / (a + 1.0));
    let mut h = d;
    for k in 1..100_000 {
        let m = f64::from(k);
        let even = m * (b - m) * x / ((a + 2.0 * m - 1.0) * (a + 2.0 * m));
        d = 1.0 / guard(1.0 + even * d);
        c = guard(1.0 + even / c);
        h *= d * c;
        let odd = -(a + m) * (a + b + m) * x / ((a + 2.0 * m) * (a + 2.0 * m + 1.0));
        d = 1.0 / guard(1.0 + odd * d);
        c = guard(1.0 + odd / c);
        let factor = d * c;
        h *= factor;
        if (factor - 1.0).abs() <= f64::EPSILON {
            break;
        }
    }
    h
}

/// ln Γ(a) for a > 0.
pub fn log_gamma(a: f64) -> f64 {
    gamma::ln_gamma(a)
}

/// The χ² quantile with ν degrees of freedom at probability p, 0 < p < 1: Newton from the cube-root approximation
/// (E. B. Wilson & M. M. Hilferty, PNAS 17 (1931) 684), kept inside a bracket.
pub fn chi_squared_quantile(nu: f64, p: f64) -> f64 {
    let z = Law::Normal.quantile(p);
    let h = 2.0 / (9.0 * nu);
    let base = 1.0 - h + z * float::sqrt(h);
    let mut q = if base > 0.05 {
        nu * base * base * base
    } else {
        // P(χ² < q) ≈ (q/2)^(ν/2)/Γ(ν/2 + 1) near zero
        2.0 * float::exp((float::ln(p) + log_gamma(0.5 * nu + 1.0)) * 2.0 / nu)
    };
    let (mut low, mut high) = (0.0, f64::INFINITY);
    for _ in 0..200 {
        // The smaller tail is compared, so that neither end loses digits.
        let below = p <= 0.5;
        let (tail, target) =
            if below { (gamma::gamma_lr(0.5 * nu, 0.5 * q), p) } else { (gamma::gamma_ur(0.5 * nu, 0.5 * q), 1.0 - p) };
        if (tail < target) == below {
            low = q;
        } else {
            high = q;
        }
        let log_density =
            (0.5 * nu - 1.0) * float::ln(q) - 0.5 * q - 0.5 * nu * std::f64::consts::LN_2 - log_gamma(0.5 * nu);
        let step = (tail - target) / float::exp(log_density);
        let mut next = if below { q - step } else { q + step };
        if (next - q).abs() <= SETTLED * q {
            return next;
        }
        if !(next > low && next < high) {
            next = if high.is_finite() { 0.5 * (low + high) } else { 2.0 * q };
        }
        q = next;
    }
    q
}

/// P(F > f) for the F distribution with d₁ and d₂ degrees of freedom.
pub fn f_upper_tail(f: f64, d1: f64, d2: f64) -> f64 {
    if !(f > 0.0) {
        return 1.0;
    }
    beta::checked_beta_reg(0.5 * d2, 0.5 * d1, d2 / (d2 + d1 * f)).unwrap_or(f64::NAN)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn close(a: f64, b: f64, relative: f64) {
        assert!((a - b).abs() <= relative * b.abs(), "{a} against {b}");
    }

    #[test]
    fn quantiles_of_student_t() {
        // NIST/SEMATECH e-Handbook of Statistical Methods, table 1.3.6.7.2 (printed to three decimals).
        for (nu, p, printed) in
            [(1.0, 0.95, 6.314), (1.0, 0.975, 12.706), (4.0, 0.975, 2.776), (10.0, 0.995, 3.169), (100.0, 0.975, 1.984)]
        {
            assert!((Law::StudentT(nu).quantile(p) - printed).abs() < 5e-4);
        }
        // Closed forms: ν = 1 is tan(π(p − 1/2)); ν = 2 is (2p − 1)√(2/(1 − (2p−1)²)).
        close(Law::StudentT(1.0).quantile(0.975), 12.706_204_736_174_707, 1e-14);
        close(Law::StudentT(2.0).quantile(0.975), 4.302_652_729_749_464, 1e-14);
        close(Law::StudentT(1.0).quantile(1e-12), -318_309_886_183.790_7, 1e-13);
    }

    #[test]
    fn distribution_function_of_student_t() {
        for t in [1e-9, 0.1, 0.7, 1.0, 3.0, 40.0, 1e8] {
            // ν = 1: P(T > t) = atan(1/t)/π; ν = 2: (1 − t/√(2 + t²))/2 = 1/(2 + t² + t√(2 + t²)).
            close(Law::StudentT(1.0).cdf(-t), libm::atan2(1.0, t) / std::f64::consts::PI, 1e-14);
            let root = libm::sqrt(2.0 + t * t);
            close(Law::StudentT(2.0).cdf(-t), 1.0 / (root * (root + t)), 1e-14);
        }
        // Below and above the change of method the same function: P as a smooth function of 1/ν.
        for t in [0.3, 1.0, 2.0, 4.0, 8.0] {
            let p = |nu: f64| float::ln(t_tail(nu, t));
            let (h, step) = (1.0 / MANY, 1e-7);
            let below = |k: f64| p(1.0 / (h + k * step)); // fewer degrees of freedom: continued fraction
            let extrapolated = 3.0 * below(1.0) - 3.0 * below(2.0) + below(3.0);
            assert!((p(MANY) - extrapolated).abs() < 1e-12, "t = {t}: {:e}", p(MANY) - extrapolated);
        }
        // Many degrees of freedom: the normal with its first correction, P ≈ Φ(z) + φ(z)(z³ + z)/(4ν).
        let z: f64 = -1.5;
        let phi = float::exp(Law::Normal.log_density(z));
        close(Law::StudentT(1e6).cdf(z), Law::Normal.cdf(z) - phi * (z * z * z + z) / 4e6, 1e-11);
    }

    #[test]
    fn quantile_and_distribution_function_agree() {
        for nu in [0.5, 1.0, 2.5, 3.0, 8.0, 37.0, 250.0, 4000.0, 99_998.0] {
            for p in [1e-10, 1e-4, 0.005, 0.025, 0.2, 0.4999, 0.7, 0.975, 0.9995] {
                let law = Law::StudentT(nu);
                let back = law.cdf(law.quantile(p));
                assert!((back / p - 1.0).abs() < 1e-12, "ν = {nu}, p = {p}: {back}");
            }
        }
        for p in [1e-10, 0.025, 0.4] {
            close(Law::Normal.cdf(Law::Normal.quantile(p)), p, 1e-14);
        }
        close(Law::Normal.coverage_factor(0.95), 1.959_963_984_540_054, 1e-15);
    }

    #[test]
    fn quantiles_of_chi_squared() {
        // NIST/SEMATECH e-Handbook of Statistical Methods, table 1.3.6.7.4 (printed to three decimals).
        for (nu, p, printed) in [(8.0, 0.025, 2.180), (8.0, 0.975, 17.535), (1.0, 0.975, 5.024), (100.0, 0.95, 124.342)]
        {
            assert!((chi_squared_quantile(nu, p) - printed).abs() < 5e-4);
        }
        // Many degrees of freedom: the cube-root approximation, whose relative error is of order 1/ν².
        let h: f64 = 2.0 / 9e6;
        let cube = 1.0 - h - 1.959_963_984_540_054 * float::sqrt(h);
        close(chi_squared_quantile(1e6, 0.025), 1e6 * cube * cube * cube, 1e-8);
        // ν = 2: −2 ln(1 − p).
        close(chi_squared_quantile(2.0, 0.975), -2.0 * float::ln(0.025), 1e-13);
        close(chi_squared_quantile(2.0, 1e-6), -2.0 * float::ln_1p(-1e-6), 1e-13);
    }

    #[test]
    fn upper_tail_of_f() {
        // F(1, ν) is the square of t(ν).
        let t: f64 = 2.3;
        close(f_upper_tail(t * t, 1.0, 7.0), 2.0 * Law::StudentT(7.0).cdf(-t), 1e-12);
    }
}
