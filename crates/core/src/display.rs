//! Rounding for display: the one place where a number becomes text for people.
//!
//! An expanded uncertainty is shown to two significant digits and its value to the same decimal place (JCGM 100:2008,
//! 7.2.6), both rounded to nearest, a half to the even digit, on the exact decimal expansion of the double. (That
//! clause allows rounding an uncertainty up where it is little less than the next digit, 10.47 to 11; a fixed rule is
//! taken here, since report, page and print must agree.) Signs are U+2212 and, where asked for, `+`; decimals have a
//! point; digits are not grouped. From 10⁷ upward and below 10⁻⁴ a common power of ten stands outside. A unit of `""` is
//! the unit one. What is no number is said in words; nothing here panics.

/// Digits of an uncertainty.
const DIGITS_OF_UNCERTAINTY: i32 = 2;
/// Digits of a value of which no uncertainty is known.
const DIGITS_WITHOUT_UNCERTAINTY: i32 = 6;
/// Digits of a value without uncertainty: what a double is sure to hold, so that 0.1 + 0.2 is 0.3.
const DIGITS_OF_EXACT: i32 = 15;
/// Exponents of the leading digit that need no power of ten.
const PLAIN: std::ops::RangeInclusive<i32> = -4..=6;
/// What stands where a number is not known.
const NOT_KNOWN: &str = "not known";

/// A rounded number: digits · 10^place.
#[derive(Clone, Debug, PartialEq)]
struct Rounded {
    negative: bool,
    digits: String,
    place: i32,
}

/// The exponent of a text like `1.25e-3`.
fn exponent_of(text: &str) -> i32 {
    text.split_once('e').and_then(|(_, exponent)| exponent.parse().ok()).unwrap_or_default()
}

/// The digits of the mantissa of such a text.
fn digits_of(text: &str) -> String {
    text.chars().take_while(|c| *c != 'e').filter(char::is_ascii_digit).collect()
}

/// Whether the mantissa of such a text is more than 5: the half itself goes to the even digit, zero.
fn more_than_five(text: &str) -> bool {
    let digits = digits_of(text);
    digits.as_str() > "5" && (!digits.starts_with('5') || digits.bytes().skip(1).any(|digit| digit != b'0'))
}

/// The decimal place of the last digit when `value` is shown to so many significant digits; 0.0996 to two is 0.10.
fn last_place(value: f64, significant: i32) -> i32 {
    let after_point = significant.clamp(1, 17) - 1;
    exponent_of(&format!("{value:.*e}", after_point as usize)) - after_point
}

impl Rounded {
    /// A finite number rounded to a multiple of 10^place.
    fn new(value: f64, place: i32) -> Rounded {
        let magnitude = value.abs();
        // More digits than tell a double from a power of ten, so that the leading place is the true one (1e23 is a
        // little less than its shortest decimals).
        let long = format!("{magnitude:.30e}");
        let after_point = exponent_of(&long) - place;
        let digits = if magnitude == 0.0 || after_point < -1 {
            "0".to_owned()
        } else if after_point == -1 {
            String::from(if more_than_five(&long) { "1" } else { "0" })
        } else {
            let text = format!("{magnitude:.*e}", after_point as usize);
            let mut digits = digits_of(&text);
            // A carry (9.96 to 10.0) moved the last digit one place up.
            digits.extend((0..exponent_of(&text) - after_point - place).map(|_| '0'));
            digits
        };
        Rounded { negative: value < 0.0 && digits != "0", digits, place }
    }

    /// A finite number to its shortest decimals within so many significant digits.
    fn shortest(value: f64, significant: i32) -> Rounded {
        let mut rounded = Rounded::new(value, last_place(value, significant));
        while rounded.place < 0 && rounded.digits.len() > 1 && rounded.digits.ends_with('0') {
            rounded.digits.pop();
            rounded.place += 1;
        }
        if rounded.digits == "0" {
            rounded.place = 0;
        }
        rounded
    }

    fn is_zero(&self) -> bool {
        self.digits.bytes().all(|digit| digit == b'0')
    }

    fn exponent(&self) -> i32 {
        self.place + self.digits.len() as i32 - 1
    }

    /// The digits with their decimal point after division by 10^factor, without sign.
    fn magnitude(&self, factor: i32) -> String {
        let place = self.place - factor;
        if self.is_zero() && place >= 0 {
            return "0".to_owned();
        }
        if place >= 0 {
            return format!("{}{}", self.digits, "0".repeat(place as usize));
        }
        let decimals = place.unsigned_abs() as usize;
        let padded = format!("{:0>width$}", self.digits, width = decimals + 1);
        let (whole, fraction) = padded.split_at(padded.len() - decimals);
        format!("{whole}.{fraction}")
    }

    fn text(&self, factor: i32) -> String {
        let sign = if self.negative { "−" } else { "" };
        format!("{sign}{}", self.magnitude(factor))
    }
}

/// The power of ten to write outside for numbers that are shown together; 0 for none.
fn common_factor(numbers: &[&Rounded]) -> i32 {
    let leading = numbers.iter().filter(|number| !number.is_zero()).map(|number| number.exponent()).max();
    leading.filter(|exponent| !PLAIN.contains(exponent)).unwrap_or_default()
}

/// An integer in raised digits: `²`, `⁻¹`.
pub(crate) fn raised(integer: &str) -> String {
    const DIGITS: [char; 10] = ['⁰', '¹', '²', '³', '⁴', '⁵', '⁶', '⁷', '⁸', '⁹'];
    let raise = |c: char| match c.to_digit(10).and_then(|digit| DIGITS.get(digit as usize)) {
        Some(&digit) => digit,
        None => '⁻',
    };
    integer.chars().map(raise).collect()
}

/// Numbers shown together, with their common power of ten and unit.
fn assembled(text: &str, factor: i32, unit: &str) -> String {
    let unit = unit.trim();
    let gap = if unit.is_empty() || matches!(unit, "°" | "′" | "″") { "" } else { " " };
    if factor == 0 {
        return format!("{text}{gap}{unit}");
    }
    let power = raised(&factor.to_string());
    if text.contains(' ') { format!("({text})×10{power}{gap}{unit}") } else { format!("{text}×10{power}{gap}{unit}") }
}

/// What stands for a number that is not finite.
fn not_finite(value: f64) -> &'static str {
    if value.is_nan() {
        NOT_KNOWN
    } else if value > 0.0 {
        "∞"
    } else {
        "−∞"
    }
}

/// One number on its own.
fn alone(rounded: &Rounded, unit: &str) -> String {
    let factor = common_factor(&[rounded]);
    assembled(&rounded.text(factor), factor, unit)
}

/// A value rounded to match an uncertainty (or whatever gives the scale): to two digits of that, in full where it is
/// zero, to six digits where it is not finite.
fn rounded_like(value: f64, like: f64) -> Rounded {
    if like == 0.0 {
        Rounded::shortest(value, DIGITS_OF_EXACT)
    } else if like.is_finite() {
        Rounded::new(value, last_place(like, DIGITS_OF_UNCERTAINTY))
    } else {
        Rounded::shortest(value, DIGITS_WITHOUT_UNCERTAINTY)
    }
}

/// `1711.2 ± 2.1 mm`: the value with its expanded uncertainty (JCGM 100:2008, 7.2.4 and 7.2.6), both in `unit`.
///
/// An uncertainty that is zero leaves the value's own decimals; one that is not finite or negative is said not to be
/// known.
pub fn value_with_uncertainty(value: f64, expanded: f64, unit: &str) -> String {
    if !value.is_finite() {
        return not_finite(value).to_owned();
    }
    if !expanded.is_finite() || expanded < 0.0 {
        let value = alone(&rounded_like(value, f64::NAN), unit);
        return format!("{value}, uncertainty not known");
    }
    let (value, uncertainty) = (rounded_like(value, expanded), rounded_like(expanded, expanded));
    let factor = common_factor(&[&value, &uncertainty]);
    assembled(&format!("{} ± {}", value.text(factor), uncertainty.text(factor)), factor, unit)
}

/// `1709.1 to 1713.3 mm`: an interval, its ends rounded to two significant digits of half its width. An end that is not
/// finite is said in words.
pub fn interval(low: f64, high: f64, unit: &str) -> String {
    let end = |value: f64| alone(&rounded_like(value, f64::NAN), unit);
    match (low.is_finite(), high.is_finite()) {
        (true, true) => {
            let half = 0.5 * high - 0.5 * low;
            let (low, high) = (rounded_like(low, half), rounded_like(high, half));
            let factor = common_factor(&[&low, &high]);
            assembled(&format!("{} to {}", low.text(factor), high.text(factor)), factor, unit)
        }
        (true, false) if high == f64::INFINITY => format!("{} and above", end(low)),
        (false, true) if low == f64::NEG_INFINITY => format!("{} and below", end(high)),
        (false, false) if low == f64::NEG_INFINITY && high == f64::INFINITY => "any value".to_owned(),
        _ => NOT_KNOWN.to_owned(),
    }
}

/// A number to so many significant digits (1 to 17), trailing zeros kept.
pub fn number(value: f64, significant: usize) -> String {
    if !value.is_finite() {
        return not_finite(value).to_owned();
    }
    let significant = i32::try_from(significant).unwrap_or(i32::MAX);
    alone(&Rounded::new(value, last_place(value, significant)), "")
}

/// A number as shortly as it can be written, with an exponent where it is very large or very small; for sentences that
/// repeat what was given.
pub fn as_given(value: f64) -> String {
    let size = value.abs();
    if value.is_finite() && size != 0.0 && !(1e-6..1e15).contains(&size) {
        format!("{value:e}")
    } else {
        format!("{value}")
    }
}

/// A number to the decimal place of an uncertainty that is shown to two significant digits.
pub fn to_match(value: f64, like: f64) -> String {
    if value.is_finite() { alone(&rounded_like(value, like), "") } else { not_finite(value).to_owned() }
}

/// The same with an explicit sign, for errors of indication and corrections; zero has none.
pub fn signed(value: f64, like: f64) -> String {
    if value.is_finite() { with_sign(&rounded_like(value, like)) } else { not_finite(value).to_owned() }
}

fn with_sign(rounded: &Rounded) -> String {
    let text = alone(rounded, "");
    if rounded.negative || rounded.is_zero() { text } else { format!("+{text}") }
}

/// The error of one indication with its sign, to the decimals with which indication and reference value were written,
/// nine significant digits of these at most, and to those of the least digit where it is known.
pub fn error_of_indication(error: f64, indication: f64, reference: f64, resolution: Option<f64>) -> String {
    if !(error.is_finite() && indication.is_finite() && reference.is_finite()) {
        return not_finite(if error.is_finite() { f64::NAN } else { error }).to_owned();
    }
    let written = |value: f64| Rounded::shortest(value, 9).place.min(0);
    let least = resolution.filter(|r| r.is_finite() && *r > 0.0).map_or(0, written);
    with_sign(&Rounded::new(error, written(indication).min(written(reference)).min(least)))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn published_results_are_shown_as_published() {
        // The figures of the guide are quoted from memory.
        // JCGM 100:2008, 7.2.6: y = 10.057 62 Ω with u = 27 mΩ is rounded to 10.058 Ω.
        assert_eq!(value_with_uncertainty(10.05762, 0.027, "Ω"), "10.058 ± 0.027 Ω");
        // JCGM 100:2008, 7.2.6: 28.05 kHz is rounded down to 28 kHz.
        assert_eq!(number(28.05, 2), "28");
        // JCGM 100:2008, 7.2.4: m = (100.021 47 ± 0.000 79) g.
        assert_eq!(value_with_uncertainty(100.02147, 0.00079, "g"), "100.02147 ± 0.00079 g");
        // JCGM 100:2008, H.1.7: l = (50.000 838 ± 0.000 093) mm.
        assert_eq!(value_with_uncertainty(50.000838, 0.000093, "mm"), "50.000838 ± 0.000093 mm");
        // JCGM 100:2008, H.3.4: b(30 °C) = −0.1494 °C with u = 0.0041 °C.
        assert_eq!(value_with_uncertainty(-0.1494, 0.0041, "°C"), "−0.1494 ± 0.0041 °C");
    }

    #[test]
    fn uncertainty_has_two_digits_and_the_value_matches() {
        let cases = [
            (1711.2345, 2.0789, "1711.2 ± 2.1 mm"),
            (1.0, 0.0996, "1.00 ± 0.10 mm"),
            (1.0, 0.00996, "1.000 ± 0.010 mm"),
            (1711.2345, 9.96, "1711 ± 10 mm"),
            (17114.9, 206.0, "17110 ± 210 mm"),
            (17114.9, 996.0, "17100 ± 1000 mm"),
            (0.04, 2.1, "0.0 ± 2.1 mm"),
            (-0.04, 2.1, "0.0 ± 2.1 mm"),
            (-1711.26, 2.1, "−1711.3 ± 2.1 mm"),
            (3.0, 210.0, "0 ± 210 mm"),
            (5.0, 210.0, "0 ± 210 mm"),
            (6.0, 210.0, "10 ± 210 mm"),
            (15.0, 210.0, "20 ± 210 mm"),
            (25.0, 210.0, "20 ± 210 mm"),
            (5.000_000_000_000_001, 210.0, "10 ± 210 mm"),
            (1e23, 1e7, "(9.9999999999999992 ± 0.0000000000000010)×10²² mm"),
            (9_999_999.0, 1.5, "9999999.0 ± 1.5 mm"),
            (123_456_789.0, 2100.0, "(1.234568 ± 0.000021)×10⁸ mm"),
            (1.234e-7, 2.1e-9, "(1.234 ± 0.021)×10⁻⁷ mm"),
            (1.5, 2.0e-9, "1.5000000000 ± 0.0000000020 mm"),
            (0.0, 3.0e9, "(0.0 ± 3.0)×10⁹ mm"),
            (12.5, 0.0, "12.5 ± 0 mm"),
            (0.1 + 0.2, 0.0, "0.3 ± 0 mm"),
            (0.0, 0.0, "0 ± 0 mm"),
            (12.3456789, f64::INFINITY, "12.3457 mm, uncertainty not known"),
            (12.5, -1.0, "12.5 mm, uncertainty not known"),
            (f64::NAN, 1.0, "not known"),
            (f64::NEG_INFINITY, 1.0, "−∞"),
        ];
        for (value, expanded, text) in cases {
            assert_eq!(value_with_uncertainty(value, expanded, "mm"), text);
        }
        assert_eq!(value_with_uncertainty(2.0, 0.1, ""), "2.00 ± 0.10");
        assert_eq!(value_with_uncertainty(30.0, 0.1, "°"), "30.00 ± 0.10°");
    }

    #[test]
    fn halves_go_to_the_even_digit_of_the_exact_expansion() {
        // 0.125 and 0.375 are doubles; 0.35 is a little less than its decimals, 0.45 a little more.
        let cases =
            [(0.125, 2, "0.12"), (0.375, 2, "0.38"), (0.35, 1, "0.3"), (0.45, 1, "0.5"), (2.5, 1, "2"), (3.5, 1, "4")];
        for (value, digits, text) in cases {
            assert_eq!(number(value, digits), text);
        }
    }

    #[test]
    fn intervals_are_rounded_to_half_their_width() {
        let cases = [
            (1709.123, 1713.312, "1709.1 to 1713.3 mm"),
            (-0.0512, 0.0496, "−0.051 to 0.050 mm"),
            (-5.0, -3.0, "−5.0 to −3.0 mm"),
            (1.0e8, 1.2e8, "(1.00 to 1.20)×10⁸ mm"),
            (3.5, 3.5, "3.5 to 3.5 mm"),
            (f64::NEG_INFINITY, 3.5, "3.5 mm and below"),
            (3.5, f64::INFINITY, "3.5 mm and above"),
            (f64::NEG_INFINITY, f64::INFINITY, "any value"),
            (f64::NAN, 1.0, "not known"),
            (f64::INFINITY, 1.0, "not known"),
        ];
        for (low, high, text) in cases {
            assert_eq!(interval(low, high, "mm"), text);
        }
        assert_eq!(interval(-f64::MAX, f64::MAX, ""), "(−1.8 to 1.8)×10³⁰⁸");
    }

    #[test]
    fn numbers_alone_and_beside_an_uncertainty() {
        assert_eq!(number(0.0996, 2), "0.10");
        assert_eq!(number(1234.5, 3), "1230");
        assert_eq!(number(-1.0e-9, 3), "−1.00×10⁻⁹");
        assert_eq!(number(2.5e10, 2), "2.5×10¹⁰");
        assert_eq!(number(0.0, 3), "0.00");
        assert_eq!(number(1.5, 0), "2");
        assert_eq!(number(1.5, usize::MAX), "1.5000000000000000");
        assert_eq!(number(f64::NAN, 3), "not known");
        assert_eq!(to_match(1.23456, 0.021), "1.235");
        assert_eq!(to_match(1.23456, -0.021), "1.235");
        assert_eq!(to_match(1.25, 0.0), "1.25");
        assert_eq!(signed(1.23456, 0.021), "+1.235");
        assert_eq!(signed(-1.23456, 0.021), "−1.235");
        assert_eq!(signed(-0.0001, 0.021), "0.000");
    }

    #[test]
    fn an_error_keeps_the_decimals_of_what_was_read() {
        assert_eq!(error_of_indication(1.0, 151.0, 150.0, None), "+1");
        assert_eq!(error_of_indication(151.0 - 150.3, 151.0, 150.3, None), "+0.7");
        assert_eq!(error_of_indication(7.267 - 7.0 - 4.0 / 15.0, 7.267, 2.5, None), "0.000");
        assert_eq!(error_of_indication(8.01 - 8.0, 8.01, 2.5, Some(0.001)), "+0.010");
        assert_eq!(error_of_indication(-0.04, 4.0, 4.04, None), "−0.04");
        assert_eq!(error_of_indication(1.0 / 3.0, 1.0 / 3.0, 0.0, None), "+0.333333333");
        assert_eq!(error_of_indication(f64::NAN, 1.0, 1.0, None), "not known");
        assert_eq!(error_of_indication(1.0, f64::NAN, 1.0, None), "not known");
    }

    #[test]
    fn no_number_makes_it_panic() {
        let awkward = [
            0.0,
            -0.0,
            5e-324,
            -5e-324,
            1e-308,
            1.0,
            -1.0,
            9.5,
            0.95,
            99.5,
            1e7,
            9_999_999.5,
            1e22,
            1e23,
            f64::MAX,
            f64::MIN,
            f64::EPSILON,
            f64::INFINITY,
            f64::NEG_INFINITY,
            f64::NAN,
        ];
        for a in awkward {
            assert!(!number(a, 2).is_empty());
            for b in awkward {
                for text in [
                    value_with_uncertainty(a, b, "mm"),
                    interval(a, b, "mm"),
                    to_match(a, b),
                    signed(a, b),
                    error_of_indication(a, b, a, Some(b)),
                ] {
                    assert!(!text.is_empty() && !text.contains('-') && !text.contains("NaN"), "{a} {b}: {text}");
                }
            }
        }
    }
}
