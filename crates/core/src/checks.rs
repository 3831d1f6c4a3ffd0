//! Checks of the fit, each with a field for the statistician and a sentence for the technician.
//!
//! Lack of fit: where settings were repeated, the scatter within them against what the curve leaves between them; the
//! classical F statistic with its upper tail. Source: N. R. Draper & H. Smith, Applied Regression Analysis, 2.1.

use crate::dd::Dd;
use crate::distribution::f_upper_tail;
use crate::observation::Observation;
use crate::problem::Argument;
use crate::report::Check;
use std::collections::BTreeMap;

/// The classical lack-of-fit test of rows with the same argument and influence quantities; `None` without repeats, with
/// too few places for the p coefficients, or where the rows have unequal variances.
pub fn lack_of_fit(rows: &[Observation], coefficients: usize, residual_sum: Dd) -> Option<Check> {
    if rows.iter().any(|row| row.variance_ratio != 1.0 || row.own_uncertainty != 0.0) {
        return None;
    }
    let mut groups: BTreeMap<Vec<u64>, Vec<Dd>> = BTreeMap::new();
    for row in rows {
        let key = std::iter::once(row.argument).chain(row.influences.iter().copied()).map(f64::to_bits).collect();
        groups.entry(key).or_default().push(row.response);
    }
    let (n, places) = (rows.len(), groups.len());
    if places == n || places <= coefficients {
        return None;
    }
    let within: Dd = groups.values().map(|group| sum_of_squares(group)).sum();
    let between = residual_sum - within;
    let (d1, d2) = ((places - coefficients) as f64, (n - places) as f64);
    let statistic = ((between / Dd::from(d1)) / (within / Dd::from(d2))).to_f64();
    if !statistic.is_finite() {
        return None;
    }
    let p = f_upper_tail(statistic, d1, d2);
    let (code, sentence) = if p < 0.01 {
        (
            "shape_disagrees",
            "The repeats agree with each other much better than with the curve: choose a richer shape, or look for a point that disagrees.",
        )
    } else if p < 0.05 {
        ("shape_doubtful", "The repeats agree with each other better than with the curve: the shape may be too simple.")
    } else {
        ("shape_agrees", "The curve passes the points as closely as repeats of one setting agree with each other.")
    };
    let args = [
        ("sum_of_squares_within", within.to_f64()),
        ("degrees_of_freedom_within", d2),
        ("sum_of_squares_lack_of_fit", between.to_f64()),
        ("degrees_of_freedom_lack_of_fit", d1),
    ];
    Some(Check {
        check: "lack_of_fit",
        code,
        args: args.into_iter().map(|(name, value)| (name.to_owned(), Argument::from(value))).collect(),
        statistic: Some(statistic),
        p: Some(p),
        sentence: sentence.to_owned(),
    })
}

fn sum_of_squares(group: &[Dd]) -> Dd {
    let mean = group.iter().copied().sum::<Dd>() / Dd::from(group.len() as f64);
    group.iter().map(|&y| (y - mean) * (y - mean)).sum()
}
