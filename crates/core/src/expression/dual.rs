//! A value together with its derivative by the variable, carried through every operation (dual numbers).

use super::{Function, halves, power};
use crate::dd::Dd;
use crate::elementary;
use std::ops::{Add, Div, Mul, Neg, Sub};

/// A value and its slope; no slope means that the value does not depend on the variable, which is not the same as a
/// slope that happens to be zero: `sqrt(temperature)` at 0 has slope 0, `sqrt(x)` has none.
#[derive(Clone, Copy, Debug)]
pub(super) struct Dual {
    value: Dd,
    slope: Option<Dd>,
}

impl Dual {
    pub(super) fn constant(value: Dd) -> Dual {
        Dual { value, slope: None }
    }

    pub(super) fn variable(value: Dd) -> Dual {
        Dual { value, slope: Some(Dd::ONE) }
    }

    pub(super) fn value(self) -> Dd {
        self.value
    }

    pub(super) fn slope(self) -> Dd {
        self.slope.unwrap_or(Dd::ZERO)
    }

    /// The chain rule: `value` of the outer function, and its derivative times the inner slope where there is one.
    fn chain(self, value: Dd, derivative: impl FnOnce() -> Dd) -> Dual {
        Dual { value, slope: self.slope.map(|slope| derivative() * slope) }
    }

    /// The quotient rule in the form (u′ − (u/v)·v′)/v.
    fn divided_by(self, other: Dual) -> Dual {
        let value = self.value / other.value;
        let right = other.slope.map(|slope| -(value * slope));
        Dual { value, slope: sum_of_slopes(self.slope, right).map(|slope| slope / other.value) }
    }

    pub(super) fn power(self, exponent: Dd) -> Dual {
        let value = power(self.value, exponent);
        self.chain(value, || {
            if exponent.is_zero() {
                Dd::ZERO
            } else if halves(exponent).is_some() || self.value.is_zero() {
                exponent * power(self.value, exponent - Dd::ONE)
            } else {
                // Saves a second exp and ln where those were needed for the value.
                exponent * value / self.value
            }
        })
    }

    pub(super) fn call(self, function: Function) -> Dual {
        let x = self.value;
        match function {
            Function::Ln => self.chain(elementary::ln(x), || Dd::ONE / x),
            Function::Log10 => self.chain(elementary::log10(x), || Dd::ONE / (x * elementary::LN_10)),
            Function::Exp => {
                let value = elementary::exp(x);
                self.chain(value, || value)
            }
            Function::Sqrt => {
                let value = x.sqrt();
                self.chain(value, || Dd::from(0.5) / value)
            }
            Function::Sin => {
                let (sine, cosine) = elementary::sin_cos(x);
                self.chain(sine, || cosine)
            }
            Function::Cos => {
                let (sine, cosine) = elementary::sin_cos(x);
                self.chain(cosine, || -sine)
            }
            Function::Tan => {
                let value = elementary::tan(x);
                self.chain(value, || Dd::ONE + value * value)
            }
            Function::Abs => self.chain(x.abs(), || sign(x)),
        }
    }
}

/// −1, 0 or 1; NaN of what is no number.
fn sign(x: Dd) -> Dd {
    if x.is_zero() {
        Dd::ZERO
    } else if x.is_finite() {
        Dd::from(1.0f64.copysign(x.hi()))
    } else {
        Dd::from(f64::NAN)
    }
}

/// The sum of two slopes of which either may be absent.
fn sum_of_slopes(a: Option<Dd>, b: Option<Dd>) -> Option<Dd> {
    match (a, b) {
        (Some(a), Some(b)) => Some(a + b),
        (one, other) => one.or(other),
    }
}

impl Neg for Dual {
    type Output = Dual;
    fn neg(self) -> Dual {
        Dual { value: -self.value, slope: self.slope.map(|slope| -slope) }
    }
}

impl Add for Dual {
    type Output = Dual;
    fn add(self, other: Dual) -> Dual {
        Dual { value: self.value + other.value, slope: sum_of_slopes(self.slope, other.slope) }
    }
}

impl Sub for Dual {
    type Output = Dual;
    fn sub(self, other: Dual) -> Dual {
        self + -other
    }
}

impl Mul for Dual {
    type Output = Dual;
    fn mul(self, other: Dual) -> Dual {
        let left = self.slope.map(|slope| slope * other.value);
        let right = other.slope.map(|slope| self.value * slope);
        Dual { value: self.value * other.value, slope: sum_of_slopes(left, right) }
    }
}

impl Div for Dual {
    type Output = Dual;
    fn div(self, other: Dual) -> Dual {
        self.divided_by(other)
    }
}
