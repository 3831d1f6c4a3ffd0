//! Double-double numbers: an unevaluated sum `hi + lo` of two doubles, |lo| ≤ ulp(hi)/2, about 32 significant digits.
//!
//! The basis, the factorisation and the change of basis are computed in them, so that a curve in the plain monomial
//! basis keeps its digits. Domain: magnitudes between 1e-140 and 1e140 (the error-free product splits its factors,
//! which would overflow beyond about 1e300); callers scale their columns by powers of two first, which is exact.
//! Relative error of +, −, ×: at most 2⁻¹⁰⁴; of ÷ and the square root: at most 2⁻¹⁰²; no fused multiply-add is used,
//! so the bits are the same on every target. A NaN or an infinity stays one.
//!
//! Source: T. J. Dekker, Numer. Math. 18 (1971) 224; Y. Hida, X. S. Li, D. H. Bailey, "Library for double-double and
//! quad-double arithmetic" (2007), algorithms with accurate addition.

use std::cmp::Ordering;
use std::iter::Sum;
use std::ops::{Add, AddAssign, Div, Mul, MulAssign, Neg, Sub, SubAssign};

/// A double-double number `hi + lo`.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Dd {
    hi: f64,
    lo: f64,
}

/// `a + b` as the rounded sum and its exact rounding error, for any order of magnitudes.
fn two_sum(a: f64, b: f64) -> (f64, f64) {
    let s = a + b;
    let bb = s - a;
    (s, (a - (s - bb)) + (b - bb))
}

/// `a + b` as the rounded sum and its exact rounding error, where |a| ≥ |b|.
fn quick_two_sum(a: f64, b: f64) -> (f64, f64) {
    let s = a + b;
    (s, b - (s - a))
}

/// A double as the sum of two with at most 26 significant bits each.
fn split(a: f64) -> (f64, f64) {
    let t = 134_217_729.0 * a; // 2²⁷ + 1
    let hi = t - (t - a);
    (hi, a - hi)
}

/// `a · b` as the rounded product and its exact rounding error.
fn two_product(a: f64, b: f64) -> (f64, f64) {
    let p = a * b;
    let (ah, al) = split(a);
    let (bh, bl) = split(b);
    (p, ((ah * bh - p) + ah * bl + al * bh) + al * bl)
}

impl Dd {
    /// Zero.
    pub const ZERO: Dd = Dd { hi: 0.0, lo: 0.0 };
    /// One.
    pub const ONE: Dd = Dd { hi: 1.0, lo: 0.0 };

    /// The number `hi + lo` from parts that are already normalised (|lo| ≤ ulp(hi)/2), for constants.
    pub const fn from_parts(hi: f64, lo: f64) -> Dd {
        Dd { hi, lo }
    }

    /// The exact sum of two doubles.
    pub fn from_sum(a: f64, b: f64) -> Dd {
        let (hi, lo) = two_sum(a, b);
        Dd { hi, lo }
    }

    /// The exact product of two doubles.
    pub fn from_product(a: f64, b: f64) -> Dd {
        let (hi, lo) = two_product(a, b);
        Dd { hi, lo }
    }

    /// The nearest double.
    pub fn to_f64(self) -> f64 {
        self.hi
    }

    /// The leading part.
    pub fn hi(self) -> f64 {
        self.hi
    }

    /// The trailing part.
    pub fn lo(self) -> f64 {
        self.lo
    }

    /// Neither infinite nor NaN in either part.
    pub fn is_finite(self) -> bool {
        self.hi.is_finite() && self.lo.is_finite()
    }

    /// Exactly zero.
    pub fn is_zero(self) -> bool {
        self.hi == 0.0
    }

    /// Absolute value.
    pub fn abs(self) -> Dd {
        if self.hi < 0.0 || (self.hi == 0.0 && self.lo < 0.0) { -self } else { self }
    }

    /// The square root; zero of zero, NaN of a negative number.
    pub fn sqrt(self) -> Dd {
        if self.hi == 0.0 {
            return Dd::ZERO;
        }
        let x = crate::float::sqrt(self.hi);
        if !x.is_finite() {
            return Dd { hi: x, lo: 0.0 };
        }
        // One Newton step for the square root, with the residual computed exactly.
        let residual = self - Dd::from_product(x, x);
        let step = residual.hi / (2.0 * x);
        let (hi, lo) = quick_two_sum(x, step);
        let y = Dd { hi, lo };
        // A second step in double-double brings the last bits.
        let rest = self - y * y;
        y + Dd::from(rest.hi / (2.0 * x))
    }

    /// The product with a power of two (exact unless it leaves the range of doubles).
    pub fn scale(self, power_of_two: f64) -> Dd {
        Dd { hi: self.hi * power_of_two, lo: self.lo * power_of_two }
    }

    /// An integer power by repeated squaring; `x⁰ = 1`.
    pub fn powi(self, exponent: u32) -> Dd {
        let (mut base, mut result, mut e) = (self, Dd::ONE, exponent);
        while e > 0 {
            if e & 1 == 1 {
                result *= base;
            }
            e >>= 1;
            if e > 0 {
                base *= base;
            }
        }
        result
    }
}

impl From<f64> for Dd {
    fn from(value: f64) -> Dd {
        Dd { hi: value, lo: 0.0 }
    }
}

impl PartialOrd for Dd {
    fn partial_cmp(&self, other: &Dd) -> Option<Ordering> {
        match self.hi.partial_cmp(&other.hi) {
            Some(Ordering::Equal) => self.lo.partial_cmp(&other.lo),
            order => order,
        }
    }
}

impl Neg for Dd {
    type Output = Dd;
    fn neg(self) -> Dd {
        Dd { hi: -self.hi, lo: -self.lo }
    }
}

impl Add for Dd {
    type Output = Dd;
    fn add(self, other: Dd) -> Dd {
        let (s, e) = two_sum(self.hi, other.hi);
        let (t, f) = two_sum(self.lo, other.lo);
        let (s, e) = quick_two_sum(s, e + t);
        let (hi, lo) = quick_two_sum(s, e + f);
        Dd { hi, lo }
    }
}

impl Sub for Dd {
    type Output = Dd;
    fn sub(self, other: Dd) -> Dd {
        self + -other
    }
}

impl Mul for Dd {
    type Output = Dd;
    fn mul(self, other: Dd) -> Dd {
        let (p, e) = two_product(self.hi, other.hi);
        let (hi, lo) = quick_two_sum(p, e + (self.hi * other.lo + self.lo * other.hi));
        Dd { hi, lo }
    }
}

impl Mul<f64> for Dd {
    type Output = Dd;
    fn mul(self, other: f64) -> Dd {
        let (p, e) = two_product(self.hi, other);
        let (hi, lo) = quick_two_sum(p, e + self.lo * other);
        Dd { hi, lo }
    }
}

impl Div for Dd {
    type Output = Dd;
    fn div(self, other: Dd) -> Dd {
        let q1 = self.hi / other.hi;
        if !q1.is_finite() || other.hi == 0.0 {
            return Dd { hi: q1, lo: 0.0 };
        }
        let r = self - other * q1;
        let q2 = r.hi / other.hi;
        let r = r - other * q2;
        let q3 = r.hi / other.hi;
        let (s, e) = quick_two_sum(q1, q2);
        let (hi, lo) = quick_two_sum(s, e + q3);
        Dd { hi, lo }
    }
}

impl AddAssign for Dd {
    fn add_assign(&mut self, other: Dd) {
        *self = *self + other;
    }
}

impl SubAssign for Dd {
    fn sub_assign(&mut self, other: Dd) {
        *self = *self - other;
    }
}

impl MulAssign for Dd {
    fn mul_assign(&mut self, other: Dd) {
        *self = *self * other;
    }
}

impl Sum for Dd {
    fn sum<I: Iterator<Item = Dd>>(terms: I) -> Dd {
        terms.fold(Dd::ZERO, |total, term| total + term)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn one_third_three_times_is_one() {
        let third = Dd::ONE / Dd::from(3.0);
        let gap = third * Dd::from(3.0) - Dd::ONE;
        assert!(gap.abs().to_f64() < 1e-31, "{gap:?}");
    }

    #[test]
    fn square_root_of_two_squares_back() {
        let root = Dd::from(2.0).sqrt();
        assert!((root * root - Dd::from(2.0)).abs().to_f64() < 1e-31);
        // √2 to 32 digits: 1.4142135623730950488016887242097 (OEIS A002193)
        assert_eq!(root.hi(), std::f64::consts::SQRT_2);
        assert!((root.lo() - -9.667_293_313_452_913e-17).abs() < 5e-32);
    }

    #[test]
    fn cancellation_keeps_what_a_double_loses() {
        let a = Dd::from_sum(1e16, 1.0);
        assert_eq!((a - Dd::from(1e16)).to_f64(), 1.0);
        assert_eq!(Dd::from(1.0 + f64::EPSILON).powi(12).hi(), 1.0 + 12.0 * f64::EPSILON);
    }

    #[test]
    fn what_is_not_finite_stays_so() {
        assert!(!(Dd::ONE / Dd::ZERO).is_finite());
        assert!(!(Dd::from(f64::NAN) + Dd::ONE).is_finite());
        assert!(Dd::from(-1.0).sqrt().to_f64().is_nan());
    }
}
