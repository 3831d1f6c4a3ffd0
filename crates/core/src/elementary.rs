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

/// 1/n! for n from 0, each as the nearest double-double.
const INVERSE_FACTORIALS: [Dd; 31] = [
    Dd::from_parts(1.0, 0.0),
    Dd::from_parts(1.0, 0.0),
    Dd::from_parts(0.5, 0.0),
    Dd::from_parts(0.166_666_666_666_666_66, 9.251_858_538_542_97e-18),
    Dd::from_parts(0.041_666_666_666_666_664, 2.312_964_634_635_742_7e-18),
    Dd::from_parts(0.008_333_333_333_333_333, 1.156_482_317_317_871_4e-19),
    Dd::from_parts(0.001_388_888_888_888_889, -5.300_543_954_373_577e-20),
    Dd::from_parts(0.000_198_412_698_412_698_4, 1.720_955_829_342_070_5e-22),
    Dd::from_parts(2.480_158_730_158_73e-5, 2.151_194_786_677_588_2e-23),
    Dd::from_parts(2.755_731_922_398_589_3e-6, -1.858_393_274_046_472e-22),
    Dd::from_parts(2.755_731_922_398_589e-7, 2.376_771_462_225_029_7e-23),
    Dd::from_parts(2.505_210_838_544_172e-8, -1.448_814_070_935_912e-24),
    Dd::from_parts(2.087_675_698_786_81e-9, -1.207_345_059_113_26e-25),
    Dd::from_parts(1.605_904_383_682_161_3e-10, 1.258_529_458_875_209_8e-26),
    Dd::from_parts(1.147_074_559_772_972_5e-11, 2.065_551_275_283_074_5e-28),
    Dd::from_parts(7.647_163_731_819_816e-13, 7.038_728_777_334_53e-30),
    Dd::from_parts(4.779_477_332_387_385e-14, 4.399_205_485_834_081e-31),
    Dd::from_parts(2.811_457_254_345_520_6e-15, 1.650_884_273_086_143_3e-31),
    Dd::from_parts(1.561_920_696_858_622_5e-16, 1.191_067_966_027_375_4e-32),
    Dd::from_parts(8.220_635_246_624_33e-18, 2.214_189_411_960_426_5e-34),
    Dd::from_parts(4.110_317_623_312_165e-19, 1.441_297_337_865_952_7e-36),
    Dd::from_parts(1.957_294_106_339_126_3e-20, -1.364_350_383_008_790_8e-36),
    Dd::from_parts(8.896_791_392_450_574e-22, -7.911_402_614_872_376e-38),
    Dd::from_parts(3.868_170_170_630_684e-23, -8.843_177_655_482_344e-40),
    Dd::from_parts(1.611_737_571_096_118_4e-24, -3.684_657_356_450_976_6e-41),
    Dd::from_parts(6.446_950_284_384_474e-26, -1.933_040_423_370_346_5e-42),
    Dd::from_parts(2.479_596_263_224_797_6e-27, -1.295_373_096_476_522_9e-43),
    Dd::from_parts(9.183_689_863_795_546e-29, 1.430_315_039_678_732_2e-45),
    Dd::from_parts(3.279_889_237_069_838e-30, 1.511_754_274_402_987_9e-46),
    Dd::from_parts(1.130_996_288_644_771_6e-31, 1.049_801_541_295_950_6e-47),
    Dd::from_parts(3.769_987_628_815_905_4e-33, 2.587_034_783_275_032_4e-49),
];

/// `x − k · constant` with the constant held to three doubles, so that the difference keeps its digits.
fn reduce(x: Dd, k: f64, constant: &[f64; 3]) -> Dd {
    x - Dd::from_product(k, constant[0]) - Dd::from_product(k, constant[1]) - Dd::from(k * constant[2])
}

/// Σ tᵏ/n! over n = `first`, `first` + `step`, … `last` (at most 30), with k = 0, 1, 2, …, in nested form.
fn factorial_series(t: Dd, first: usize, step: usize, last: usize) -> Dd {
    let coefficients = INVERSE_FACTORIALS.iter().take(last + 1).skip(first).step_by(step);
    coefficients.rev().fold(Dd::ZERO, |sum, &coefficient| sum * t + coefficient)
}

/// e to the power `x`, relative error below 1e-31 for results from 1e-290; ∞ above 709.78, 0 below −745.
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
    let mut less_one = r * factorial_series(r, 1, 1, 14);
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

/// `base` to a real power by exp(exponent · ln base), relative error below 1e-31·(1 + |exponent · ln base|).
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
    let sine = r * factorial_series(minus_square, 1, 2, 29);
    let cosine = factorial_series(minus_square, 0, 2, 30);
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

#[cfg(test)]
mod tests {
    use super::*;

    /// A decimal number of any length as a double-double; exponents as in `1.5e-3`.
    fn decimal(text: &str) -> Dd {
        let (mantissa, exponent) = text.split_once('e').unwrap_or((text, "0"));
        let decimals = mantissa.split_once('.').map_or(0, |(_, fraction)| fraction.len() as i32);
        let digits = mantissa.chars().filter_map(|c| c.to_digit(10));
        let whole = digits.fold(Dd::ZERO, |sum, digit| sum * 10.0 + Dd::from(f64::from(digit)));
        let shift = exponent.parse::<i32>().unwrap() - decimals;
        let power = Dd::from(10.0).powi(shift.unsigned_abs());
        let magnitude = if shift < 0 { whole / power } else { whole * power };
        if mantissa.starts_with('-') { -magnitude } else { magnitude }
    }

    fn assert_close(name: &str, found: Dd, expected: Dd, relative: f64) {
        let gap = (found - expected).abs().to_f64();
        assert!(gap <= relative * expected.abs().to_f64(), "{name}: {found:?} against {expected:?}");
    }

    #[test]
    fn each_inverse_factorial_is_its_predecessor_divided() {
        assert_eq!(INVERSE_FACTORIALS[0], Dd::ONE);
        for n in 1..INVERSE_FACTORIALS.len() {
            let back = INVERSE_FACTORIALS[n] * n as f64;
            assert_close(&format!("{n}/{n}!"), back, INVERSE_FACTORIALS[n - 1], 1e-31);
        }
    }

    #[test]
    fn published_constants() {
        let e = "2.71828182845904523536028747135266249775"; // OEIS A001113
        let ln_2 = "0.693147180559945309417232121458176568075"; // OEIS A002162
        let ln_10 = "2.30258509299404568401799145468436420760"; // OEIS A002392
        let log10_2 = "0.301029995663981195213738894724493026768"; // OEIS A007524
        let pi = "3.14159265358979323846264338327950288419"; // OEIS A000796
        let sin_1 = "0.841470984807896506652502321630298999622"; // OEIS A049469
        let cos_1 = "0.540302305868139717400936607442976603732"; // OEIS A049470
        let tan_1 = "1.55740772465490223050697480745836017308"; // OEIS A049471
        let sqrt_2 = "1.41421356237309504880168872420969807856"; // OEIS A002193
        let cases = [
            ("e", exp(Dd::ONE), e),
            ("ln 2", ln(Dd::from(2.0)), ln_2),
            ("ln 10", ln(Dd::from(10.0)), ln_10),
            ("ln 10 as held", LN_10, ln_10),
            ("log10 2", log10(Dd::from(2.0)), log10_2),
            ("pi as held", PI, pi),
            ("sin 1", sin(Dd::ONE), sin_1),
            ("cos 1", cos(Dd::ONE), cos_1),
            ("tan 1", tan(Dd::ONE), tan_1),
            ("square root of 2", pow(Dd::from(2.0), Dd::from(0.5)), sqrt_2),
        ];
        for (name, found, expected) in cases {
            assert_close(name, found, decimal(expected), 3e-31);
        }
    }

    #[test]
    fn multi_precision_values_at_awkward_arguments() {
        // Of the doubles named, computed with 60 digits by the multi-precision library mpmath 1.3.
        type Of = fn(Dd) -> Dd;
        let cases: [(&str, Of, f64, &str); 16] = [
            ("exp", exp, 0.5, "1.6487212707001281468486507878141635717"),
            ("exp", exp, 1e-20, "1.0000000000000000000099999999999999995"),
            ("exp", exp, 88.7, "3.3259869802505790385953245233612742801e+38"),
            ("ln", ln, 1.0 + 9.094_947_017_729_282e-13, "9.094947017725146476087627994346924709e-13"),
            ("ln", ln, 0.9, "-0.10536051565782627655587821139138998213"),
            ("ln", ln, 1.125, "0.11778303565638345453879410947052170507"),
            ("ln", ln, 1e-120, "-276.31021115928548210355206121000029889"),
            ("ln", ln, 1e120, "276.31021115928548206216244290951790589"),
            ("log10", log10, 3.0, "0.4771212547196624372950279032551153092"),
            ("log10", log10, 1e-7, "-7.0000000000000000196526453297206160617"),
            ("sin", sin, std::f64::consts::PI, "1.2246467991473531772260659322749979971e-16"),
            ("sin", sin, 1e6, "-0.34999350217129295211765248678077146906"),
            ("sin", sin, -LARGEST_ANGLE, "0.61732641504604217075421635716960693694"),
            ("cos", cos, std::f64::consts::FRAC_PI_2, "6.1232339957367658861303296613750014646e-17"),
            ("cos", cos, 1e6, "0.93675212753314478693853253507491877571"),
            ("tan", tan, std::f64::consts::FRAC_PI_2, "16331239353195369.755967737041528916531"),
        ];
        for (name, function, argument, expected) in cases {
            assert_close(&format!("{name} {argument}"), function(Dd::from(argument)), decimal(expected), 3e-31);
        }
        let powers = [
            (10.0, -0.3, "0.50118723362727229781381935734459561473"),
            (0.001, 2.7, "0.0000000079432823472428057201972024636748702203"),
            (12345.678, 0.1, "2.565378759205919554957028013011741245"),
        ];
        for (base, exponent, expected) in powers {
            let found = pow(Dd::from(base), Dd::from(exponent));
            assert_close(&format!("{base}^{exponent}"), found, decimal(expected), 2e-30);
        }
    }

    #[test]
    fn identities_hold_over_the_range() {
        for step in -600..=600 {
            let x = Dd::from_product(f64::from(step), 0.5) + Dd::from(0.1);
            assert_close("exp(x)·exp(−x)", exp(x) * exp(-x), Dd::ONE, 1e-30);
            assert_close("exp(x)²", exp(x.scale(0.5)).powi(2), exp(x), 1e-30);
            assert_close("ln(exp(x))", ln(exp(x)), x, 1e-30);
            let (sine, cosine) = sin_cos(x);
            assert_close("sin² + cos²", sine * sine + cosine * cosine, Dd::ONE, 1e-30);
            let twice = sin(x.scale(2.0));
            assert!((twice - (sine * cosine).scale(2.0)).abs().to_f64() < 1e-30, "sin 2x at {x:?}");
        }
        for k in -120..=120 {
            let x = Dd::from(1.7) * pow(Dd::from(10.0), Dd::from(f64::from(k)));
            assert_close("exp(ln(x))", exp(ln(x)), x, 3e-29);
            assert_close("ln x + ln 3", ln(x) + ln(Dd::from(3.0)), ln(x * 3.0), 1e-30);
            assert_close("(x^0.25)^8", pow(x, Dd::from(0.25)).powi(8), x * x, 1e-28);
        }
    }

    #[test]
    fn ends_of_the_domain() {
        let of = Dd::from;
        assert_eq!(exp(of(709.0)).hi(), 8.218407461554972e307);
        assert_eq!(exp(of(710.0)).hi(), f64::INFINITY);
        assert_eq!(exp(of(-746.0)), Dd::ZERO);
        assert_eq!(exp(Dd::ZERO), Dd::ONE);
        assert_eq!(ln(Dd::ONE), Dd::ZERO);
        assert_eq!(ln(Dd::ZERO).hi(), f64::NEG_INFINITY);
        // ln of the least subnormal double, −1074 ln 2.
        assert_close("ln 2^-1074", ln(of(5e-324)), decimal("-744.44007192138126231410729844608163411"), 3e-31);
        assert!(ln(of(-1.0)).hi().is_nan() && log10(of(-1.0)).hi().is_nan());
        assert_eq!(log10(Dd::ZERO).hi(), f64::NEG_INFINITY);
        assert_eq!(pow(Dd::ZERO, of(0.3)), Dd::ZERO);
        assert_eq!(pow(Dd::ZERO, of(-0.3)).hi(), f64::INFINITY);
        assert_eq!(pow(of(-2.0), Dd::ZERO), Dd::ONE);
        assert!(pow(of(-2.0), of(0.3)).hi().is_nan());
        assert!(sin(of(2.0 * LARGEST_ANGLE)).hi().is_nan());
        for function in [exp, ln, log10, sin, cos, tan] {
            assert!(function(of(f64::NAN)).hi().is_nan());
            assert!(function(of(f64::INFINITY)).hi().is_nan());
            assert!(function(of(f64::NEG_INFINITY)).hi().is_nan());
        }
    }
}
