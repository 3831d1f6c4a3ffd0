//! Elementary functions of double-double numbers, to about 31 significant digits.
//!
//! Used where a term of the shape contains them; so a column `ln(x)` is known as exactly as a column `x^2`. Arguments
//! and results are pure numbers, angles in radians. Nothing comes from the platform's mathematics library but a first
//! guess of the logarithm, which libm gives with the same bits everywhere. What is not finite gives NaN: a term that
//! passes through 1/0 is undefined, even where a limit would exist.
//!
//! Method: argument reduction by a multiple of ln 2 or π/2 that is held to three doubles (W. J. Cody, W. Waite,
//! "Software Manual for the Elementary Functions" (1980)), then the Taylor series in nested form; exp in the form
//! eˣ − 1 with repeated doubling (Y. Hida, X. S. Li, D. H. Bailey, "Library for double-double and quad-double
//! arithmetic" (2007), section 4); ln by one Newton step on exp, near 1 by the series of the inverse hyperbolic tangent
//! (J.-M. Muller, "Elementary Functions", ch. 3 and 6).

use crate::dd::Dd;
use crate::float;

/// π.
pub const PI: Dd = Dd::from_parts(std::f64::consts::PI, 1.224_646_799_147_353_2e-16);
/// The natural logarithm of 10.
pub const LN_10: Dd = Dd::from_parts(std::f64::consts::LN_10, -2.170_756_223_382_249_4e-16);

/// ln 2 as an unevaluated sum of three doubles (OEIS A002162).
const LN_2: [f64; 3] = [std::f64::consts::LN_2, 2.319_046_813_846_299_6e-17, 5.707_708_438_416_212e-34];
/// π/2 as an unevaluated sum of three doubles (OEIS A019669).
const HALF_PI: [f64; 3] = [std::f64::consts::FRAC_PI_2, 6.123_233_995_736_766e-17, -1.497_384_904_859_169_8e-33];

/// Beyond this many radians a sine says nothing about a measurement; `sin`, `cos` and `tan` give NaN there.
pub const LARGEST_ANGLE: f64 = 1_073_741_824.0;

/// `x − k · constant` with the constant held to three doubles, so that the difference keeps its digits.
fn reduce(x: Dd, k: f64, constant: &[f64; 3]) -> Dd {
    x - Dd::from_product(k, constant[0]) - Dd::from_product(k, constant[1]) - Dd::from(k * constant[2])
}

/// `1 + t/(n·m)·(1 + …)`, the nested sum whose step from one term to the next multiplies by `t / divisor`.
fn nested_series(t: Dd, divisors: impl DoubleEndedIterator<Item = f64>) -> Dd {
    divisors.rev().fold(Dd::ONE, |inner, divisor| Dd::ONE + t * inner / Dd::from(divisor))
}

/// e to the power `x`, relative error below 1e-30·(1 + |x|/100); ∞ above 709.78, 0 below −745.
pub fn exp(x: Dd) -> Dd {
    if !x.is_finite() {
        return Dd::from(f64::NAN);
    }
    if x.hi() > 709.78 {
        return Dd::from(f64::INFINITY);
    }
    if x.hi() < -745.0 {
        return Dd::ZERO;
    }
    const DOUBLINGS: u32 = 5;
    let k = float::round_half_to_even(x.hi() / LN_2[0]);
    let r = reduce(x, k, &LN_2).scale(1.0 / f64::from(1u32 << DOUBLINGS));
    // |r| ≤ 0.0109: after 14 terms the remainder is below 1e-37 of the sum.
    let mut less_one = r * nested_series(r, (2..=14).map(f64::from));
    for _ in 0..DOUBLINGS {
        less_one = less_one.scale(2.0) + less_one * less_one;
    }
    // In two steps, since 2^1024 is no double although the product may be one.
    let half = (k / 2.0) as i32;
    let first = float::times_power_of_two(1.0, half);
    let second = float::times_power_of_two(1.0, k as i32 - half);
    (less_one + Dd::ONE).scale(first).scale(second)
}

/// The natural logarithm, relative error below 1e-30, near 1 too; −∞ at zero, NaN below.
pub fn ln(x: Dd) -> Dd {
    if !x.is_finite() || x.hi() < 0.0 {
        return Dd::from(f64::NAN);
    }
    if x.is_zero() {
        return Dd::from(f64::NEG_INFINITY);
    }
    let (fraction, mut k) = float::mantissa_and_exponent(x.hi());
    if fraction < std::f64::consts::FRAC_1_SQRT_2 {
        k -= 1;
    }
    // Two factors again: 2^1074 is no double, although a subnormal argument asks for it.
    let first = float::times_power_of_two(1.0, -(k / 2));
    let second = float::times_power_of_two(1.0, k / 2 - k);
    let mantissa = x.scale(first).scale(second);
    let k = f64::from(k);
    let of_two = Dd::from_product(k, LN_2[0]) + Dd::from_product(k, LN_2[1]);
    of_two + ln_of_mantissa(mantissa)
}

/// The natural logarithm of a number between √½ and √2.
fn ln_of_mantissa(m: Dd) -> Dd {
    let above_one = m - Dd::ONE;
    if above_one.hi().abs() < 0.125 {
        // ln m = 2 artanh z = 2 (z + z³/3 + z⁵/5 + …) with |z| ≤ 1/15: 14 terms leave less than 1e-34 of the sum.
        let z = above_one / (m + Dd::ONE);
        let square = z * z;
        let series = (0..14).rev().fold(Dd::ZERO, |sum, n| sum * square + Dd::ONE / Dd::from(f64::from(2 * n + 1)));
        return (z * series).scale(2.0);
    }
    let guess = Dd::from(float::ln(m.hi()));
    // m·exp(−guess) = 1 + d with |d| near 1e-16, so that ln(1 + d) = d − d²/2 to all digits.
    let d = m * exp(-guess) - Dd::ONE;
    guess + d - (d * d).scale(0.5)
}

/// The common logarithm, relative error below 1e-30; −∞ at zero, NaN below.
pub fn log10(x: Dd) -> Dd {
    let natural = ln(x);
    if natural.is_finite() { natural / LN_10 } else { natural }
}

/// `base` to a real power by exp(exponent · ln base), relative error below 1e-30·(1 + |exponent · ln base|).
///
/// Zero to a positive power is 0, to a negative one ∞, to the power 0 it is 1; a negative base gives NaN (integer powers
/// of it are `Dd::powi`).
pub fn pow(base: Dd, exponent: Dd) -> Dd {
    if !base.is_finite() || !exponent.is_finite() {
        return Dd::from(f64::NAN);
    }
    if exponent.is_zero() {
        return Dd::ONE;
    }
    if base.is_zero() {
        return Dd::from(if exponent.hi() > 0.0 { 0.0 } else { f64::INFINITY });
    }
    exp(exponent * ln(base))
}

/// The sine and the cosine of `x` radians, absolute error below 1e-31, relative too near the zeros as far as `x` itself
/// is known; NaN beyond `LARGEST_ANGLE`.
pub fn sin_cos(x: Dd) -> (Dd, Dd) {
    if !x.is_finite() || x.hi().abs() > LARGEST_ANGLE {
        return (Dd::from(f64::NAN), Dd::from(f64::NAN));
    }
    let k = float::round_half_to_even(x.hi() / HALF_PI[0]);
    let r = reduce(x, k, &HALF_PI);
    let minus_square = -(r * r);
    // |r| ≤ 0.786: the terms r²⁹/29! and r³⁰/30! are below 1e-33.
    let sine = r * nested_series(minus_square, (1..=14).map(|n| f64::from(2 * n * (2 * n + 1))));
    let cosine = nested_series(minus_square, (1..=15).map(|n| f64::from(2 * n * (2 * n - 1))));
    match (k as i64).rem_euclid(4) {
        0 => (sine, cosine),
        1 => (cosine, -sine),
        2 => (-sine, -cosine),
        _ => (-cosine, sine),
    }
}

/// The sine of `x` radians; see `sin_cos`.
pub fn sin(x: Dd) -> Dd {
    sin_cos(x).0
}

/// The cosine of `x` radians; see `sin_cos`.
pub fn cos(x: Dd) -> Dd {
    sin_cos(x).1
}

/// The tangent of `x` radians; see `sin_cos`.
pub fn tan(x: Dd) -> Dd {
    let (sine, cosine) = sin_cos(x);
    sine / cosine
}
