//! Properties that hold for every visit: order, units, additive constants, updating in steps, means. No outside figures
//! are needed; the mathematics is that of Gaussian linear regression.

use bandleaf_tests::random::SplitMix64;
use bandleaf_tests::report_path::{find, number};
use bandleaf_tests::{outline, visit};
use serde_json::{Value, json};

/// Closeness asked where rounding of the inputs is the only difference.
const CLOSE: f64 = 1e-12;

const SHAPES: [&[&str]; 4] = [&["1", "x"], &["1", "x", "x^2"], &["1", "x", "x^2", "x^3"], &["x"]];

/// A multiple of 2⁻¹⁰ between two numbers, so that sums and products with small integers are exact.
fn grid(random: &mut SplitMix64, low: f64, high: f64) -> f64 {
    libm::round(random.between(low, high) * 1024.0) / 1024.0
}

/// Pairs scattered about a gently bent line.
fn pairs(random: &mut SplitMix64, count: usize) -> Vec<(f64, f64)> {
    (0..count)
        .map(|i| {
            let x = 1.0 + i as f64 + grid(random, -0.25, 0.25);
            (x, libm::round((3.0 + 1.5 * x + 0.05 * x * x + 0.5 * random.normal()) * 1024.0) / 1024.0)
        })
        .collect()
}

fn points(pairs: &[(f64, f64)]) -> Vec<Value> {
    pairs.iter().map(|(x, y)| json!({"reference": x, "indication": y})).collect()
}

fn body(pairs: &[(f64, f64)], terms: &[&str]) -> Value {
    json!({
        "instrument": {"range": [0, 16]},
        "points": points(pairs),
        "model": {"terms": terms},
        "ask": {"at": [2.5, 7, 15.25], "readings": [[12.5], [17, 17.5]]},
    })
}

fn report(body: &Value) -> Value {
    let report = outline(&visit(body.clone()));
    assert!(!report["fit"].is_null(), "no fit of {body}: {}", report["messages"]);
    report
}

fn at(report: &Value, path: &str) -> f64 {
    number(report, path).unwrap_or_else(|| panic!("{path} is {:?}", find(report, path)))
}

#[track_caller]
fn close(a: f64, b: f64, scale: f64, what: &str) {
    assert!(libm::fabs(a - b) <= CLOSE * libm::fabs(scale), "{what}: {a} and {b} differ by {:e}", a - b);
}

/// Paths of the fit and its predictions, with the power of the unit of x and of y in each.
fn fit_paths(terms: &[&str]) -> Vec<(String, i32, i32)> {
    let mut paths = Vec::new();
    for (j, term) in terms.iter().enumerate() {
        let power = match *term {
            "1" => 0,
            "x" => 1,
            higher => higher[2..].parse::<i32>().expect("a power"),
        };
        for field in ["estimate", "scale", "interval[0]", "interval[1]"] {
            paths.push((format!("fit.terms[{j}].{field}"), -power, 1));
        }
    }
    paths.push(("fit.noise.estimate".into(), 0, 1));
    paths.push(("fit.residual_sum_of_squares".into(), 0, 2));
    paths.push(("fit.effective_parameters".into(), 0, 0));
    for k in 0..3 {
        for part in ["curve", "indication"] {
            for field in ["estimate", "scale", "interval[0]", "interval[1]"] {
                paths.push((format!("at[{k}].{part}.{field}"), 0, 1));
            }
        }
    }
    paths
}

fn row_paths(index: usize) -> Vec<(String, i32, i32)> {
    let field = |name: &str, power| (format!("points[{index}].{name}"), 0, power);
    vec![field("residual", 1), field("leverage", 0), field("cook_distance", 0), field("left_out_tail", 0)]
}

fn value_paths() -> Vec<(String, i32, i32)> {
    let mut paths = Vec::new();
    for k in 0..2 {
        for field in [
            "linearised.estimate",
            "linearised.scale",
            "value.median",
            "value.mean",
            "value.standard_uncertainty",
            "value.expanded_uncertainty",
            "value.interval[0]",
            "value.interval[1]",
            "value.shortest_interval[0]",
            "value.shortest_interval[1]",
        ] {
            paths.push((format!("readings[{k}].{field}"), 1, 0));
        }
    }
    paths
}

#[test]
fn the_order_of_the_points_does_not_matter() {
    let mut random = SplitMix64::new(1);
    for round in 0..60 {
        let terms = SHAPES[round % SHAPES.len()];
        let given = pairs(&mut random, 7 + round % 8);
        let mut order: Vec<usize> = (0..given.len()).collect();
        random.shuffle(&mut order);
        let shuffled: Vec<(f64, f64)> = order.iter().map(|i| given[*i]).collect();
        let (before, after) = (report(&body(&given, terms)), report(&body(&shuffled, terms)));
        let s = at(&before, "fit.noise.estimate");
        for (path, _, _) in fit_paths(terms) {
            close(at(&before, &path), at(&after, &path), at(&before, &path).abs().max(s), &path);
        }
        for (new, old) in order.iter().enumerate() {
            for field in ["residual", "leverage", "cook_distance", "left_out_tail"] {
                let (a, b) = (format!("points[{old}].{field}"), format!("points[{new}].{field}"));
                close(at(&before, &a), at(&after, &b), s.max(1.0), &a);
            }
        }
        for (path, _, _) in value_paths() {
            close(at(&before, &path), at(&after, &path), 16.0, &path);
        }
    }
}

/// The same visit with x multiplied by one factor and y by another.
fn rescaled(pairs: &[(f64, f64)], terms: &[&str], x: f64, y: f64) -> Value {
    let scaled: Vec<(f64, f64)> = pairs.iter().map(|(a, b)| (a * x, b * y)).collect();
    let mut result = body(&scaled, terms);
    result["instrument"]["range"] = json!([0.0, 16.0 * x]);
    result["ask"] = json!({
        "at": [2.5 * x, 7.0 * x, 15.25 * x],
        "readings": [[12.5 * y], [17.0 * y, 17.5 * y]],
    });
    result
}

/// Numbers that are not, to the bit, those of the visit in other units by powers of two.
fn moved_by_powers_of_two(paths: impl Fn(&[&str], usize) -> Vec<(String, i32, i32)>) -> Vec<String> {
    let mut random = SplitMix64::new(2);
    let mut moved = Vec::new();
    for round in 0..60 {
        let terms = SHAPES[round % SHAPES.len()];
        let given = pairs(&mut random, 7 + round % 8);
        let (p, q) = (random.below(40) as i32 - 20, random.below(40) as i32 - 20);
        let plain = report(&body(&given, terms));
        let scaled = report(&rescaled(&given, terms, libm::ldexp(1.0, p), libm::ldexp(1.0, q)));
        for (path, of_x, of_y) in paths(terms, given.len()) {
            let expected = libm::ldexp(at(&plain, &path), of_x * p + of_y * q);
            let got = at(&scaled, &path);
            if got.to_bits() != expected.to_bits() {
                moved.push(format!("{path}: {got:?} instead of {expected:?} (2^{p}, 2^{q}, {terms:?})"));
            }
        }
    }
    moved
}

#[test]
fn other_units_by_powers_of_two_change_no_bit_of_the_fit() {
    let moved = moved_by_powers_of_two(|terms, count| {
        let linearised = value_paths().into_iter().filter(|(path, _, _)| path.contains("linearised"));
        fit_paths(terms).into_iter().chain((0..count).flat_map(row_paths)).chain(linearised).collect()
    });
    assert!(moved.is_empty(), "{} numbers moved\n{}", moved.len(), moved.join("\n"));
}

#[test]
fn other_units_by_powers_of_two_change_no_bit_of_a_value() {
    let moved = moved_by_powers_of_two(|_, _| value_paths());
    assert!(moved.is_empty(), "{} numbers moved\n{}", moved.len(), moved.join("\n"));
}

#[test]
fn other_units_change_nothing_but_the_unit() {
    let mut random = SplitMix64::new(3);
    for round in 0..60 {
        let terms = SHAPES[round % SHAPES.len()];
        let given = pairs(&mut random, 7 + round % 8);
        let (x, y) = (random.between(0.01, 100.0), random.between(0.01, 100.0));
        let (plain, scaled) = (report(&body(&given, terms)), report(&rescaled(&given, terms, x, y)));
        let mut paths = fit_paths(terms);
        paths.extend(value_paths());
        for (path, of_x, of_y) in paths {
            let factor = libm::pow(x, f64::from(of_x)) * libm::pow(y, f64::from(of_y));
            let scale =
                if path.contains(".interval") { path.replace("interval[0]", "interval[1]") } else { path.clone() };
            let size = at(&plain, &path).abs().max(at(&plain, &scale).abs());
            close(at(&scaled, &path), at(&plain, &path) * factor, size * factor, &path);
        }
    }
}

#[test]
fn a_constant_added_to_the_indications_is_added_to_the_intercept() {
    let mut random = SplitMix64::new(4);
    for round in 0..60 {
        let terms = SHAPES[round % 3];
        let given = pairs(&mut random, 7 + round % 8);
        let constant = random.below(200) as f64 - 100.0;
        let moved: Vec<(f64, f64)> = given.iter().map(|(x, y)| (*x, y + constant)).collect();
        let (plain, shifted) = (report(&body(&given, terms)), report(&body(&moved, terms)));
        let size = 100.0;
        for (path, _, power) in fit_paths(terms) {
            let intercept = path.starts_with("fit.terms[0]") || path.starts_with("at[");
            let added = if intercept && power == 1 && !path.ends_with("scale") { constant } else { 0.0 };
            close(at(&shifted, &path), at(&plain, &path) + added, size, &path);
        }
        for i in 0..given.len() {
            for (path, _, _) in row_paths(i) {
                close(at(&shifted, &path), at(&plain, &path), 1.0, &path);
            }
        }
    }
}

/// Known noise, and the posterior of the first half as what was known before the second.
#[test]
fn updating_in_two_steps_is_the_same_as_at_once() {
    let mut random = SplitMix64::new(5);
    for round in 0..40 {
        let terms = SHAPES[round % SHAPES.len()];
        let given = pairs(&mut random, 12);
        let mut at_once = body(&given, terms);
        at_once["model"]["noise"] = json!({"kind": "known", "standard_deviation": 0.5});
        let (mut first, mut second) = (at_once.clone(), at_once.clone());
        first["points"] = json!(points(&given[..6]));
        second["points"] = json!(points(&given[6..]));
        let half = report(&first);
        let mean: Vec<f64> = (0..terms.len()).map(|j| at(&half, &format!("fit.terms[{j}].estimate"))).collect();
        let covariance = half["fit"]["covariance"].clone();
        second["model"]["known_before"] = json!([{"kind": "coefficients", "mean": mean, "covariance": covariance}]);
        let (whole, stepped) = (report(&at_once), report(&second));
        for j in 0..terms.len() {
            let (estimate, scale) = (format!("fit.terms[{j}].estimate"), format!("fit.terms[{j}].scale"));
            // The covariance in between is rounded to doubles, which its condition number enlarges.
            let allowed = 1e-9 * at(&whole, &scale);
            assert!(libm::fabs(at(&whole, &estimate) - at(&stepped, &estimate)) < allowed, "{estimate}, {terms:?}");
            assert!(libm::fabs(at(&whole, &scale) - at(&stepped, &scale)) < allowed, "{scale}, {terms:?}");
        }
    }
}

/// The same with σ unknown: a conjugate prior carries scale matrix over s², s and ν of the first half.
#[test]
fn conjugate_updating_in_two_steps_is_the_same_as_at_once() {
    let mut random = SplitMix64::new(6);
    for round in 0..40 {
        let terms = SHAPES[round % SHAPES.len()];
        let given = pairs(&mut random, 14);
        let at_once = body(&given, terms);
        let (mut first, mut second) = (at_once.clone(), at_once.clone());
        first["points"] = json!(points(&given[..7]));
        second["points"] = json!(points(&given[7..]));
        let half = report(&first);
        let s = at(&half, "fit.noise.estimate");
        let p = terms.len();
        let mean: Vec<f64> = (0..p).map(|j| at(&half, &format!("fit.terms[{j}].estimate"))).collect();
        let spread: Vec<Vec<f64>> = (0..p)
            .map(|i| (0..p).map(|j| at(&half, &format!("fit.scale_matrix[{i}][{j}]")) / (s * s)).collect())
            .collect();
        second["model"]["noise"] = json!({
            "kind": "stated", "standard_deviation": s, "degrees_of_freedom": at(&half, "fit.degrees_of_freedom"),
        });
        second["model"]["known_before"] =
            json!([{"kind": "conjugate", "mean": mean, "covariance_over_variance": spread}]);
        let (whole, stepped) = (report(&at_once), report(&second));
        for path in ["fit.noise.estimate", "fit.degrees_of_freedom", "fit.terms[0].scale"] {
            let (a, b) = (at(&whole, path), at(&stepped, path));
            assert!(libm::fabs(a - b) < 1e-9 * a, "{path}: {a} and {b}, {terms:?}");
        }
        let (a, b) = (at(&whole, "fit.terms[0].estimate"), at(&stepped, "fit.terms[0].estimate"));
        assert!(libm::fabs(a - b) < 1e-9 * at(&whole, "fit.terms[0].scale"), "{a} and {b}, {terms:?}");
    }
}

#[test]
fn equal_points_count_as_their_mean_where_the_noise_is_known() {
    let mut random = SplitMix64::new(7);
    for round in 0..40 {
        let terms = SHAPES[round % SHAPES.len()];
        let given = pairs(&mut random, 8);
        let m = 2 + random.below(6) as usize;
        let mut singly = body(&given, terms);
        singly["model"]["noise"] = json!({"kind": "known", "standard_deviation": 0.5});
        let (mut raw, mut mean) = (singly.clone(), singly.clone());
        raw["points"][3]["indication"] = json!(vec![given[3].1; m]);
        mean["points"][3]["repeats"] = json!(m);
        let again = singly["points"][3].clone();
        for _ in 1..m {
            singly["points"].as_array_mut().expect("points").push(again.clone());
        }
        let (singly, raw, mean) = (report(&singly), report(&raw), report(&mean));
        let mut paths = fit_paths(terms);
        paths.retain(|(path, _, _)| !path.contains("residual_sum") && !path.contains("noise"));
        paths.extend(value_paths());
        for (path, _, _) in paths {
            let size = at(&mean, &path).abs().max(1.0);
            close(at(&mean, &path), at(&singly, &path), size, &path);
            close(at(&mean, &path), at(&raw, &path), size, &path);
        }
    }
}

#[test]
fn a_point_set_aside_counts_as_absent() {
    let mut random = SplitMix64::new(8);
    for round in 0..20 {
        let terms = SHAPES[round % SHAPES.len()];
        let given = pairs(&mut random, 9);
        let mut aside = body(&given, terms);
        aside["points"][8]["set_aside"] = json!("knocked while reading");
        let (aside, absent) = (report(&aside), report(&body(&given[..8], terms)));
        for (path, _, _) in fit_paths(terms).into_iter().chain(value_paths()) {
            assert!(at(&aside, &path).to_bits() == at(&absent, &path).to_bits(), "{path}");
        }
        assert_eq!(find(&aside, "points.length"), Some(json!(9)));
        assert_eq!(find(&aside, "points[8].used"), Some(json!(false)));
    }
}

#[test]
fn a_greater_coverage_probability_gives_a_wider_interval() {
    let mut random = SplitMix64::new(9);
    for round in 0..10 {
        let terms = SHAPES[round % SHAPES.len()];
        let given = pairs(&mut random, 9);
        let mut last = [0.0; 3];
        for coverage in [0.5, 0.6827, 0.9, 0.95, 0.99, 0.999] {
            let mut asked = body(&given, terms);
            asked["coverage"] = json!(coverage);
            let told = report(&asked);
            let width = |path: &str| at(&told, &format!("{path}[1]")) - at(&told, &format!("{path}[0]"));
            let now = [
                width("at[1].curve.interval"),
                width("at[1].indication.interval"),
                width("readings[0].value.interval"),
            ];
            assert!(now.iter().zip(&last).all(|(now, last)| now > last), "{now:?} after {last:?} at {coverage}");
            last = now;
        }
    }
}

/// Mean height between two places of a density whose logarithm is a line between them; flanks are far from straight.
fn between(left: f64, right: f64) -> f64 {
    let ratio = libm::log(right / left);
    if libm::fabs(ratio) < 1e-3 || !ratio.is_finite() { (left + right) / 2.0 } else { (right - left) / ratio }
}

#[test]
fn the_density_of_a_value_integrates_to_one_and_holds_the_interval() {
    let mut random = SplitMix64::new(10);
    for round in 0..20 {
        let told = report(&body(&pairs(&mut random, 9), SHAPES[round % SHAPES.len()]));
        let list = |name: &str| -> Vec<f64> {
            let found = find(&told, &format!("readings[0].value.density.{name}")).expect("a density");
            found.as_array().expect("a list").iter().map(|v| v.as_f64().expect("a number")).collect()
        };
        let (x, density) = (list("x"), list("density"));
        assert!(x.is_sorted() && density.iter().all(|d| *d >= 0.0));
        let area: f64 = x.windows(2).zip(density.windows(2)).map(|(x, d)| (x[1] - x[0]) * between(d[0], d[1])).sum();
        assert!(libm::fabs(area - 1.0) < 0.02, "{area}, round {round}");
        assert!(x[0] <= at(&told, "readings[0].value.interval[0]"));
        assert!(x[x.len() - 1] >= at(&told, "readings[0].value.interval[1]"));
    }
}
