use super::*;

fn influences() -> Vec<String> {
    ["temperature", "supply pressure", "T", "T-air"].map(String::from).to_vec()
}

fn read(text: &str) -> Expression {
    Expression::parse(text, "x", &influences()).unwrap_or_else(|error| panic!("{text}: {error:?}"))
}

fn refused(text: &str) -> TermError {
    match Expression::parse(text, "x", &influences()) {
        Ok(expression) => panic!("{text} was read as {expression:?}"),
        Err(error) => error,
    }
}

fn value(text: &str, x: f64) -> f64 {
    read(text).evaluate(x, &[20.0, 1.5, 300.0, 0.0]).to_f64()
}

#[test]
fn operations_bind_as_in_mathematics() {
    let cases = [
        ("1 + 2*3", 7.0),
        ("2 - 3 - 4", -5.0),
        ("12/3/2", 2.0),
        ("-x^2", -9.0),
        ("(-x)^2", 9.0),
        ("2^3^2", 512.0),
        ("x^-1", 1.0 / 3.0),
        ("x^-2", 1.0 / 9.0),
        ("2*-x", -6.0),
        ("--x", 3.0),
        ("x²", 9.0),
        ("x³·2", 54.0),
        ("x⁻¹", 1.0 / 3.0),
        ("−x × 2", -6.0),
        ("-x²", -9.0),
        ("abs(-x)", 3.0),
        ("x^(1+1)", 9.0),
        ("2^2²", 16.0),
        ("16^0.25", 2.0),
        ("1.5e+2", 150.0),
        (".5", 0.5),
        ("5.", 5.0),
        ("x*temperature", 60.0),
        ("x*supply pressure", 4.5),
        ("T/temperature", 15.0),
        ("log10(1000)", 3.0),
        ("exp(ln(x))", 3.0),
        ("sin(2*pi*x/12)", 1.0),
        ("tan(pi/4)", 1.0),
        ("sqrt(x*12)", 6.0),
        ("4^1.5", 8.0),
        ("4^-1.5", 0.125),
    ];
    for (text, expected) in cases {
        assert_eq!(value(text, 3.0), expected, "{text}");
    }
}

#[test]
fn errors_name_the_place_and_the_remedy() {
    let cases = [
        ("x^^2", 2, "operand_expected", "a number or a name is expected at character 3."),
        ("2x", 1, "operator_expected", "an operation sign is missing at character 2: write 2*x."),
        ("x (1+x)", 2, "operator_expected", "an operation sign is missing at character 3: write x*(1+x)."),
        (
            "ln x",
            0,
            "argument_expected",
            "the function ln without an argument in parentheses stands at character 1: write for example ln(x).",
        ),
        (
            "(x+1",
            0,
            "unmatched_parenthesis",
            "a parenthesis that is never closed stands at character 1: write ) where it ends.",
        ),
        ("x+1)", 3, "unmatched_parenthesis", "a closing parenthesis without an opening one stands at character 4."),
        ("x+", 2, "operand_expected", "a number or a name is expected at its end."),
        ("0,5*x", 1, "comma", "a comma stands at character 2: decimals are written with a point."),
        ("x : 2", 2, "unexpected_character", "the character \":\" has no meaning at character 3."),
    ];
    for (text, position, code, sentence) in cases {
        let error = refused(text);
        let sentence = format!("In the term \"{text}\" {sentence}");
        assert_eq!((error.position, error.code, error.sentence), (position, code, sentence));
    }
}

#[test]
fn what_is_no_term_is_refused_with_its_code() {
    let cases = [
        ("", "empty_term", 0),
        ("  ", "empty_term", 0),
        ("X", "unknown_name", 0),
        ("1 + q", "unknown_name", 4),
        ("x y", "operator_expected", 2),
        ("x²³^2", "ambiguous_power", 3),
        ("x ? 2", "unexpected_character", 2),
        ("x^(1/0)", "exponent_undefined", 2),
        ("x^5000", "exponent_too_large", 2),
        ("2^x²", "exponent_not_constant", 2),
        ("x^temperature", "exponent_not_constant", 2),
        ("1e400", "number_out_of_range", 0),
        ("1e-400", "number_out_of_range", 0),
        ("()", "operand_expected", 1),
        ("x⁻", "operand_expected", 1),
        ("+x", "operand_expected", 0),
        ("x**2", "operand_expected", 2),
    ];
    for (text, code, position) in cases {
        let error = refused(text);
        assert_eq!((error.code, error.position), (code, position), "{text}: {}", error.sentence);
    }
    let unknown = refused("1 + q").sentence;
    assert!(
        unknown.contains(
            "the unknown name \"q\" stands at character 5: known are x, temperature, supply pressure, T, pi, ln,"
        ),
        "{unknown}"
    );
    assert!(unknown.contains("\"T-air\""), "{unknown}");
    assert!(refused("log(x)").sentence.contains("write ln (natural) or log10 (common)"));
    assert!(refused("X").sentence.contains("write x"));
    let both = Expression::parse("x", "x", &["x".to_owned()]).unwrap_err();
    assert_eq!(both.code, "ambiguous_name");
}

#[test]
fn long_and_deep_terms_are_refused_without_exhausting_the_stack() {
    assert_eq!(refused(&"(".repeat(400)).code, "nested_too_deeply");
    assert_eq!(refused(&"-".repeat(400)).code, "nested_too_deeply");
    assert_eq!(refused(&"x^".repeat(200)).code, "nested_too_deeply");
    assert_eq!(refused(&"(".repeat(1_000_000)).code, "term_too_long");
    assert_eq!(value(&format!("{}x", "x+".repeat(249)), 1.0), 250.0);
    assert_eq!(value(&format!("{}x{}", "(".repeat(49), ")".repeat(49)), 1.0), 1.0);
}

#[test]
fn values_and_slopes_are_known_to_double_double_digits() {
    let dd = |text: &str, x: f64| read(text).evaluate(x, &[20.0, 1.5, 300.0, 0.0]);
    // 0.1 is not a tenth: the cube of the double is taken, exactly. Its digits follow from the double's own fraction
    // 3602879701896397 / 2^55.
    let tenth = Dd::from_parts(0.1, 0.0);
    assert_eq!(dd("x^3", 0.1), tenth * tenth * tenth);
    assert!((dd("1/x", 3.0) * Dd::from(3.0) - Dd::ONE).abs().to_f64() < 1e-31);
    assert!((dd("sqrt(x)", 3.0) * dd("sqrt(x)", 3.0) - Dd::from(3.0)).abs().to_f64() < 1e-30);
    let cases = [
        ("x^3", "3*x^2"),
        ("x^-2", "-2*x^-3"),
        ("x^0.25", "0.25*x^-0.75"),
        ("x^1.5", "1.5*sqrt(x)"),
        ("ln(x)", "1/x"),
        ("log10(x)", "1/(x*ln(10))"),
        ("exp(-x/2)", "-exp(-x/2)/2"),
        ("sqrt(1+x^2)", "x/sqrt(1+x²)"),
        ("sin(2*pi*x)", "2*pi*cos(2*pi*x)"),
        ("cos(x)", "-sin(x)"),
        ("tan(x)", "1/cos(x)^2"),
        ("abs(x)", "x/abs(x)"),
        ("x/(1+x)", "1/(1+x)²"),
        ("1 - x*temperature/T", "-temperature/T"),
        ("x*exp(x)", "exp(x)*(1+x)"),
        ("temperature^2", "0"),
        ("pi", "0"),
    ];
    for (text, slope) in cases {
        for x in [0.3, 1.7, 12.5] {
            let expected = dd(slope, x);
            let (_, found) = read(text).evaluate_with_slope(x, &[20.0, 1.5, 300.0, 0.0]);
            let gap = (found - expected).abs().to_f64();
            assert!(gap <= 1e-29 * expected.abs().to_f64(), "d/dx {text} at {x}: {found:?} against {expected:?}");
        }
    }
}

#[test]
fn undefined_is_not_finite_and_nothing_else_is() {
    for (text, x) in [
        ("ln(x)", 0.0),
        ("ln(x)", -1.0),
        ("1/x", 0.0),
        ("x^-1", 0.0),
        ("x^0.3", -1.0),
        ("x^0.5", -1.0),
        ("sqrt(x)", -1.0),
        ("exp(-1/x)", 0.0),
        ("exp(x)", 1e4),
        ("sin(x)", 1e12),
        ("x^300", 1e3),
        ("x", f64::NAN),
        ("x - x", f64::INFINITY),
    ] {
        let (with_slope, _) = read(text).evaluate_with_slope(x, &[]);
        assert!(!with_slope.to_f64().is_finite(), "{text} at {x}: {with_slope:?}");
    }
    assert!(!read("x*T").evaluate(1.0, &[]).to_f64().is_finite(), "a missing influence value");
    assert_eq!(value("x^0", 0.0), 1.0);
    assert_eq!(value("x^0.5", 0.0), 0.0);
    let slope = |text: &str, x: f64| read(text).evaluate_with_slope(x, &[0.0]).1.to_f64();
    assert_eq!(slope("x^0", 0.0), 0.0);
    assert_eq!(slope("x^2", 0.0), 0.0);
    assert_eq!(slope("x^1", 0.0), 1.0);
    assert_eq!(slope("abs(x)", 0.0), 0.0);
    assert_eq!(slope("x + sqrt(temperature)", 0.0), 1.0);
    assert!(!slope("sqrt(x)", 0.0).is_finite());
}

#[test]
fn polynomial_terms_scale_exactly_by_powers_of_two() {
    for x in [0.1, 1234.567, -9.87e-3] {
        for (degree, scale) in [(1, 1024.0), (2, 1.0 / 64.0), (5, 8.0), (12, 2.0)] {
            let term = read(&format!("x^{degree}"));
            let (value, slope) = term.evaluate_with_slope(x, &[]);
            let (scaled, scaled_slope) = term.evaluate_with_slope(x * scale, &[]);
            let factor = Dd::from(scale).powi(degree);
            assert_eq!(scaled, value.scale(factor.hi()));
            assert_eq!(scaled_slope, slope.scale(factor.hi() / scale));
        }
    }
}

#[test]
fn a_term_is_shown_in_notation_that_reads_back() {
    let cases = [
        ("x^2", "x²"),
        ("x^12", "x¹²"),
        ("1/x", "1/x"),
        ("x^-1", "x⁻¹"),
        ("ln(x)", "ln(x)"),
        ("x*temperature", "x·temperature"),
        ("x*supply pressure", "x·supply pressure"),
        ("sin(2*pi*x)", "sin(2·pi·x)"),
        ("-x^2", "−x²"),
        ("(-x)^2", "(−x)²"),
        ("x^0.5", "x^0.5"),
        ("x^-0.5", "x^−0.5"),
        ("x^(1/3)", "x^(1/3)"),
        ("2^3^2", "2^(3²)"),
        ("x - (1 - x)", "x − (1 − x)"),
        ("(1+x)*(1-x)", "(1 + x)·(1 − x)"),
        ("2*-x", "2·(−x)"),
        ("-x*2", "−x·2"),
        ("--x", "−(−x)"),
        ("x/(2*T)", "x/(2·T)"),
        ("1e-7*x", "1e-7·x"),
        ("1e300*x", "1e300·x"),
    ];
    for (text, shown) in cases {
        let expression = read(text);
        assert_eq!(expression.display(), shown);
        assert_eq!(read(shown), expression, "{shown}");
    }
}

#[test]
fn terms_know_their_kind() {
    let degrees = [
        ("1", Some(0)),
        ("x", Some(1)),
        ("x^3", Some(3)),
        ("x²", Some(2)),
        ("x*x", Some(2)),
        ("x^0", Some(0)),
        ("(x^2)^3", Some(6)),
        ("2", None),
        ("2*x", None),
        ("-x", None),
        ("x^0.5", None),
        ("x^-1", None),
        ("x+0", None),
        ("x*T", None),
    ];
    for (text, degree) in degrees {
        assert_eq!(read(text).monomial_degree(), degree, "{text}");
    }
    assert!(read("2*pi").is_constant() && !read("T").is_constant() && !read("x").is_constant());
    assert!(read("T*x").depends_on_variable() && !read("T").depends_on_variable());
    assert_eq!(read("T*x + temperature/T").influence_indices(), [0, 2]);
    assert!(read("ln(x)").takes_numerical_value() && !read("sqrt(x)*abs(x)").takes_numerical_value());
    assert!(!read("x*ln(2)").takes_numerical_value());
    assert_eq!(Expression::parse("y^2", "y", &[]).unwrap().display(), "y²");
}

#[test]
fn the_unit_of_a_coefficient_is_the_response_over_the_term() {
    let units = ["°C", "bar", "K", ""].map(String::from);
    let cases = [
        ("1", "mA"),
        ("x", "mA/bar"),
        ("x^2", "mA/bar²"),
        ("1/x", "mA·bar"),
        ("sqrt(x)", "mA/bar^0.5"),
        ("x^0.5", "mA/bar^0.5"),
        ("x*temperature", "mA/(bar·°C)"),
        ("x*supply pressure", "mA/bar²"),
        ("x/supply pressure", "mA"),
        ("2*x - x", "mA/bar"),
        ("x + x^2", ""),
        ("ln(x)", "mA"),
        ("x*exp(x)", "mA/bar"),
    ];
    for (text, unit) in cases {
        assert_eq!(read(text).unit("mA", "bar", &units), unit, "{text}");
    }
    assert_eq!(read("x").unit("mm", "mm", &units), "mm/mm");
    assert_eq!(read("x^2").unit("mm", "mm", &units), "1/mm");
    assert_eq!(read("x").unit("", "bar", &units), "1/bar");
    assert_eq!(read("x").unit("V", "", &units), "V");
    assert_eq!(read("x^2").unit("V", "m/s", &units), "V/(m/s)²");
    assert_eq!(read("x").unit("V", "m/s", &units), "V/(m/s)");
}

/// A multiplicative congruential generator (P. L'Ecuyer, Math. Comp. 68 (1999) 249: modulus 2^64, multiplier
/// 2862933555777941757 with an odd increment), so that the same texts are tried everywhere.
struct Draws(u64);

impl Draws {
    fn below(&mut self, n: usize) -> usize {
        self.0 = self.0.wrapping_mul(2_862_933_555_777_941_757).wrapping_add(3_037_000_493);
        ((self.0 >> 33) as usize) % n
    }
}

#[test]
fn no_text_makes_the_parser_panic() {
    let pieces: Vec<&str> =
        "x x x x y 1 2.5 2 e 1e9 . , + - * * / ^ ^ ( ) pi ln log10( exp( sqrt( sin( cos( tan( abs( temperature \
        supply T ² ³ ⁻¹ ⁻ · − × \u{0} \u{2028} 😀 é e\u{301} \u{feff} _ \" < </script> ٣ Ⅷ ½ ∞ NaN inf"
            .split(' ')
            .collect();
    let mut draws = Draws(1);
    let (mut accepted, mut refusals) = (0, 0);
    for _ in 0..40_000 {
        let text: String = (0..draws.below(7)).filter_map(|_| pieces.get(draws.below(pieces.len())).copied()).collect();
        match Expression::parse(&text, "x", &influences()) {
            Ok(term) => {
                accepted += 1;
                assert_eq!(read(&term.display()).display(), term.display(), "{text}");
                for x in [0.0, -1.0, 0.37, 1e300, f64::NAN] {
                    let (value, slope) = term.evaluate_with_slope(x, &[20.0, 1.5]);
                    assert_eq!(value.is_finite(), value.to_f64().is_finite(), "{text}");
                    assert_eq!(slope.is_finite(), slope.to_f64().is_finite(), "{text}");
                }
                term.unit("mA", "bar", &[]);
            }
            Err(error) => {
                refusals += 1;
                assert!(error.position <= text.chars().count(), "{text}: {error:?}");
                assert!(error.sentence.ends_with('.'), "{text}: {error:?}");
            }
        }
    }
    assert!(accepted > 1000 && refusals > 1000, "{accepted} read, {refusals} refused");
}
