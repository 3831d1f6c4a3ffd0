//! Prints, for each certified set, the correct digits of its worst estimate, worst standard error and residual standard
//! deviation, beside what exact arithmetic on the same doubles gives.

use bandleaf_tests::fixture::{Case, Figure, Fixture, digits};
use bandleaf_tests::{outline, report_path};
use serde_json::Value;

fn main() {
    println!("| set | estimates | limit | standard errors | limit | s | limit |");
    println!("|---|---|---|---|---|---|---|");
    for case in &Fixture::load("certified.json").cases {
        let report = outline(&case.visit());
        let columns: Vec<String> =
            ["estimate", "scale", "noise.estimate"].iter().map(|field| worst(case, &report, field)).collect();
        println!("| {} | {} |", case.name, columns.join(" | "));
    }
}

/// Fewest digits, and the limit of the figure that has them, among the fields of one kind; figures certified as zero are
/// printed as they are.
fn worst(case: &Case, report: &Value, field: &str) -> String {
    let mut least: Option<(f64, f64)> = None;
    let mut largest_zero = None;
    let noise = field.starts_with("noise");
    for expectation in &case.expect {
        if !expectation.path.ends_with(field) || expectation.path.contains("noise") != noise {
            continue;
        }
        let got = report_path::number(report, &expectation.path).unwrap_or(f64::NAN);
        match &expectation.figure {
            Figure::Digits { value, limit } => {
                let reached = digits(got, value);
                if least.is_none_or(|(digits, _)| reached.is_nan() || reached < digits) {
                    least = Some((reached, *limit));
                }
            }
            _ => largest_zero = Some(largest_zero.unwrap_or(0.0_f64).max(libm::fabs(got))),
        }
    }
    match (least, largest_zero) {
        (Some((digits, limit)), _) => format!("{digits:.1} | {limit:.1}"),
        (None, Some(zero)) => format!("{zero:.1e} for 0 | –"),
        (None, None) => "– | –".to_owned(),
    }
}
