//! The one seam between the core and the portable library of elementary functions (`libm`).
//!
//! The standard library's own functions differ in the last bit between targets; these give the same bits natively and
//! in every browser. Accuracy: below one unit in the last place for those used here.

/// The power of two with the exponent of `x`; 1 for zero and what is not finite. Ratios to it carry no rounding.
pub fn power_of_two_of(x: f64) -> f64 {
    if !x.is_normal() {
        return 1.0;
    }
    f64::from_bits(x.to_bits() & 0x7ff0_0000_0000_0000)
}

/// The square root, correctly rounded; NaN below zero.
pub fn sqrt(x: f64) -> f64 {
    libm::sqrt(x)
}

/// e to the power `x`.
pub fn exp(x: f64) -> f64 {
    libm::exp(x)
}

/// e to the power `x`, less one, without cancellation near zero.
pub fn exp_m1(x: f64) -> f64 {
    libm::expm1(x)
}

/// The natural logarithm; −∞ at zero, NaN below.
pub fn ln(x: f64) -> f64 {
    libm::log(x)
}

/// The natural logarithm of `1 + x`, without cancellation near zero.
pub fn ln_1p(x: f64) -> f64 {
    libm::log1p(x)
}

/// The common logarithm.
pub fn log10(x: f64) -> f64 {
    libm::log10(x)
}

/// `base` to a real power.
pub fn pow(base: f64, exponent: f64) -> f64 {
    libm::pow(base, exponent)
}

/// The hypotenuse of a right triangle with these legs, without overflow on the way.
pub fn hypot(a: f64, b: f64) -> f64 {
    libm::hypot(a, b)
}

/// The sine of an angle in radians.
pub fn sin(x: f64) -> f64 {
    libm::sin(x)
}

/// The cosine of an angle in radians.
pub fn cos(x: f64) -> f64 {
    libm::cos(x)
}

/// The angle in radians between −π/2 and π/2 whose tangent is `x`.
pub fn atan(x: f64) -> f64 {
    libm::atan(x)
}

/// The magnitude.
pub fn abs(x: f64) -> f64 {
    libm::fabs(x)
}

/// The complementary error function.
pub fn erfc(x: f64) -> f64 {
    libm::erfc(x)
}

/// The natural logarithm of the absolute value of Γ(x).
pub fn ln_gamma(x: f64) -> f64 {
    libm::lgamma(x)
}

/// The nearest integer, halves to the even one.
pub fn round_half_to_even(x: f64) -> f64 {
    libm::rint(x)
}

/// Mantissa in [½, 1) and exponent with `x = mantissa · 2^exponent`; zero and what is not finite come back with 0.
pub fn mantissa_and_exponent(x: f64) -> (f64, i32) {
    if x == 0.0 || !x.is_finite() {
        return (x, 0);
    }
    libm::frexp(x)
}

/// `x · 2^exponent`, exact unless it leaves the range of doubles.
pub fn times_power_of_two(x: f64, exponent: i32) -> f64 {
    libm::ldexp(x, exponent)
}
