//! The posterior of the coefficients: a finite mixture of multivariate normal or Student-t components.
//!
//! Everything downstream (prediction, inversion, checks) reads this type only. Here the closed cases, with one
//! component: σ known (normal), and σ unknown or stated with a flat or a conjugate prior (normal-inverse-gamma, so w is
//! multivariate Student-t with ν = ν₀ + n − p + rank of the prior).
//!
//! Each row is divided by its standard deviation (by √vᵢ where σ is unknown), the prior's rows are stacked below, and
//! the whole is factored; see `factor`. Units: coefficients in the unit of the response over that of their term.
//!
//! Sources: C. M. Bishop, Pattern Recognition and Machine Learning, 3.3; A. Gelman et al., Bayesian Data Analysis,
//! 14.2 and 14.8; C. Klauenberg et al., Metrologia 52 (2015) 878.

use crate::dd::Dd;
use crate::distribution::{Law, log_gamma};
use crate::factor::{Dependent, Factor};
use crate::float;
use crate::noise::Sigma;
use crate::observation::Observation;
use crate::prior::Prior;
use crate::problem::Problem;
use crate::shape::Shape;
use nalgebra::{DMatrix, DVector};

/// Coefficients and their scales up to this size still have squares.
const LARGEST_COEFFICIENT: f64 = 1e150;

const LN_TWO_PI: f64 = 1.837_877_066_409_345_3;

/// One component of the posterior.
#[derive(Clone, Debug)]
pub struct Component {
    /// Its weight; the weights of a posterior add up to 1.
    pub weight: f64,
    /// Location of the coefficients.
    pub location: DVector<Dd>,
    /// Root L of the squared scale matrix, S = L Lᵀ.
    pub root: DMatrix<Dd>,
    /// The law of a linear combination, standardised.
    pub law: Law,
    /// Noise scale σ of one indication with profile 1 that goes with it, in the unit of the response.
    pub noise: Dd,
}

impl Component {
    /// Location of Σ w_j φ_j.
    pub fn location_at(&self, row: &[Dd]) -> Dd {
        row.iter().zip(self.location.iter()).map(|(&f, &w)| f * w).sum()
    }

    /// Squared scale of Σ w_j φ_j.
    pub fn squared_scale_at(&self, row: &[Dd]) -> Dd {
        let p = row.len();
        // The root is upper triangular (s R⁻¹): column k has entries 0..=k.
        (0..p)
            .map(|k| {
                let part: Dd = (0..=k).map(|j| row[j] * self.root[(j, k)]).sum();
                part * part
            })
            .sum()
    }
}

/// The posterior and what the fit left.
#[derive(Clone, Debug)]
pub struct Posterior {
    /// The mixture.
    pub components: Vec<Component>,
    /// Σ eᵢ²/vᵢ over the rows of the data (over the row variances where they are known).
    pub residual_sum_of_squares: Dd,
    /// ln p(y); flat directions at density 1 and p(ln σ) = 1.
    pub log_evidence: Option<f64>,
    /// Whether no flat direction and no 1/σ entered.
    pub evidence_is_proper: bool,
    /// Condition number of the factored system with columns of unit length.
    pub condition_number: f64,
    /// R⁻¹ of the factored system: the leverage of a row a (divided by its standard deviation) is ‖R⁻ᵀa‖².
    pub inverse_triangle: DMatrix<Dd>,
    /// Standard deviation of each row: known, or √vᵢ where σ is unknown.
    pub deviations: Vec<Dd>,
}

/// Fits a shape to rows.
///
/// # Errors
/// Too few rows for what is unknown; terms that cannot be told apart; rows without noise; numbers beyond the range of
/// double precision.
pub fn fit(
    rows: &[Observation],
    design: &[Vec<Dd>],
    shape: &dyn Shape,
    sigma: Sigma,
    prior: &Prior,
) -> Result<Posterior, Problem> {
    let p = shape.columns();
    enough_rows(rows, p, sigma, prior)?;
    let deviations = row_deviations(rows, sigma)?;
    let prior_scale = match sigma {
        Sigma::Known(s) if prior.over_sigma => Dd::ONE / Dd::from(s),
        _ => Dd::ONE,
    };
    let n = rows.len();
    let height = (n + prior.rows.len()).max(p);
    let stacked = DMatrix::from_fn(height, p + 1, |i, j| {
        if i < n {
            (if j < p { design[i][j] } else { rows[i].response }) / deviations[i]
        } else {
            prior.rows.get(i - n).map_or(Dd::ZERO, |row| row[j] * prior_scale)
        }
    });
    if stacked.iter().any(|e| !e.is_finite()) {
        return Err(Problem::error(
            "out_of_range",
            "points",
            "The numbers are too large or too small to compute with: choose another unit.",
        ));
    }
    let factor = Factor::new(stacked).map_err(|d| dependent(&d, shape, rows))?;
    let location = factor.solution();
    let inverse_triangle = factor.inverse_triangle();
    let (law, scale, stated_sum) = scale_of_noise(n, p, sigma, prior, factor.rest);
    let root = inverse_triangle.map(|e| e * scale);
    let all = location.iter().chain(inverse_triangle.iter()).chain(root.iter());
    if !all.into_iter().all(|e| e.to_f64().abs() <= LARGEST_COEFFICIENT) {
        return Err(Problem::error(
            "out_of_range",
            "points",
            "The coefficients are too large or too small to compute with: choose another unit.",
        ));
    }
    let residual_sum_of_squares = residual_sum(rows, design, &location, &deviations);
    let component = Component {
        weight: 1.0,
        root,
        location,
        law,
        noise: match sigma {
            Sigma::Known(s) => Dd::from(s),
            _ => scale,
        },
    };
    Ok(Posterior {
        log_evidence: log_evidence(&factor, &deviations, sigma, prior, p, stated_sum),
        evidence_is_proper: prior.rank == p && !matches!(sigma, Sigma::Unknown),
        components: vec![component],
        residual_sum_of_squares,
        condition_number: factor.condition_number(),
        inverse_triangle,
        deviations,
    })
}

/// Law and scale: s² = (ν₀s₀² + rest)/ν with ν = ν₀ + n − p + rank, or the rows' own known variances.
fn scale_of_noise(n: usize, p: usize, sigma: Sigma, prior: &Prior, rest: Dd) -> (Law, Dd, f64) {
    let (nu0, stated_sum) = match sigma {
        Sigma::Known(_) => return (Law::Normal, Dd::ONE, 0.0),
        Sigma::Unknown => (0.0, Dd::ZERO),
        Sigma::Stated { degrees_of_freedom: nu, standard_deviation: s } => (nu, Dd::from_product(s, s) * nu),
    };
    let nu = nu0 + (n + prior.rank) as f64 - p as f64;
    (Law::StudentT(nu), ((stated_sum + rest) / Dd::from(nu)).sqrt(), stated_sum.to_f64())
}

fn residual_sum(rows: &[Observation], design: &[Vec<Dd>], location: &DVector<Dd>, deviations: &[Dd]) -> Dd {
    rows.iter()
        .zip(design)
        .zip(deviations)
        .map(|((row, basis), &deviation)| {
            let fitted: Dd = basis.iter().zip(location.iter()).map(|(&f, &w)| f * w).sum();
            let e = (row.response - fitted) / deviation;
            e * e
        })
        .sum()
}

fn enough_rows(rows: &[Observation], p: usize, sigma: Sigma, prior: &Prior) -> Result<(), Problem> {
    let (n, informed) = (rows.len(), prior.rank);
    let degrees = matches!(sigma, Sigma::Unknown) && !prior.over_sigma;
    let needed = p.saturating_sub(informed) + usize::from(degrees);
    let needed = if prior.over_sigma && matches!(sigma, Sigma::Unknown) { needed.max(1) } else { needed };
    if n >= needed {
        return Ok(());
    }
    let coefficients = if p == 1 { "1 coefficient".to_owned() } else { format!("{p} coefficients") };
    let given = match n {
        0 => "no complete point is".to_owned(),
        1 => "only 1 indication is".to_owned(),
        _ => format!("only {n} indications are"),
    };
    let remedy = if degrees {
        "measure more points, choose a simpler shape, or state the noise"
    } else {
        "measure more points or choose a simpler shape"
    };
    let sentence =
        format!("This shape has {coefficients} and needs at least {needed} indications, but {given} there: {remedy}.");
    Err(Problem::error("too_few_points", "points", sentence)
        .with("needed", needed)
        .with("given", n)
        .with("coefficients", p))
}

/// Standard deviation of each row, in the unit of the response where σ is known, else √vᵢ.
fn row_deviations(rows: &[Observation], sigma: Sigma) -> Result<Vec<Dd>, Problem> {
    rows.iter()
        .map(|row| {
            let ratio = Dd::from(row.variance_ratio);
            let variance = match sigma {
                Sigma::Known(s) => {
                    Dd::from_product(s, s) * ratio + Dd::from_product(row.own_uncertainty, row.own_uncertainty)
                }
                _ => ratio,
            };
            if variance > Dd::ZERO {
                return Ok(variance.sqrt());
            }
            let sentence = format!(
                "Point {} has no uncertainty, but the noise is said to be known as 0: give every point its uncertainty, or state the noise.",
                row.point + 1
            );
            let place = format!("points[{}].indication_uncertainty", row.point);
            Err(Problem::error("row_without_noise", place, sentence).with("point", row.point + 1))
        })
        .collect()
}

/// The sentence for terms that cannot be told apart.
fn dependent(found: &Dependent, shape: &dyn Shape, rows: &[Observation]) -> Problem {
    let first = rows.first().map(|row| row.argument);
    if rows.len() > 1 && rows.iter().all(|row| Some(row.argument) == first) && shape.influences_used().is_empty() {
        let value = first.unwrap_or(f64::NAN);
        let sentence =
            format!("All points are at {value}, so nothing is known of the slope: measure at another value.");
        return Problem::error("one_place_only", "points", sentence).with("at", value);
    }
    let terms = shape.terms();
    let column = terms[found.column].as_str();
    let mut distinct: Vec<f64> = rows.iter().map(|row| row.argument).collect();
    distinct.sort_by(f64::total_cmp);
    distinct.dedup();
    if distinct.len() < shape.columns() && shape.influences_used().is_empty() {
        let sentence = format!(
            "The points stand at only {} different values, too few for a shape with {} terms: measure at another value or choose a simpler shape.",
            distinct.len(),
            shape.columns()
        );
        return Problem::error("too_few_places", "points", sentence)
            .with("places", distinct.len())
            .with("coefficients", shape.columns());
    }
    let sentence = if found.on.is_empty() {
        format!("The term {column} is zero at every point: leave it out, or measure where it is not.")
    } else {
        let others: Vec<&str> = found.on.iter().map(|&k| terms[k].as_str()).collect();
        format!(
            "At these points the term {column} cannot be told apart from {}: leave one of them out, or measure at further values.",
            others.join(", ")
        )
    };
    Problem::error("terms_dependent", "model.terms", sentence).with("term", column).with("column", found.column)
}

/// ln p(y) with all normalising constants.
fn log_evidence(
    factor: &Factor,
    deviations: &[Dd],
    sigma: Sigma,
    prior: &Prior,
    p: usize,
    stated_sum: f64,
) -> Option<f64> {
    let n = deviations.len();
    let rank = prior.rank as f64;
    let log_rows: f64 = deviations.iter().map(|d| float::ln(d.to_f64())).sum();
    let scale_of_prior = match sigma {
        Sigma::Known(s) if prior.over_sigma => -2.0 * rank * float::ln(s),
        _ => 0.0,
    };
    let log_prior = prior.log_determinant? + scale_of_prior;
    let free = n as f64 - p as f64 + rank;
    let rest = (factor.rest - prior.rest).to_f64();
    let common = -0.5 * free * LN_TWO_PI - log_rows + 0.5 * (log_prior - factor.log_determinant());
    match sigma {
        Sigma::Known(_) => Some(common - 0.5 * rest),
        Sigma::Unknown => {
            // ∫ σ^−k exp(−rest/2σ²) d ln σ = ½ Γ(k/2) (rest/2)^(−k/2)
            (rest > 0.0 && free > 0.0)
                .then(|| common + log_gamma(0.5 * free) - 0.5 * free * float::ln(0.5 * rest) - std::f64::consts::LN_2)
        }
        Sigma::Stated { degrees_of_freedom: nu, .. } => {
            let total = stated_sum + rest;
            Some(
                common + 0.5 * nu * float::ln(0.5 * stated_sum) - log_gamma(0.5 * nu) + log_gamma(0.5 * (nu + free))
                    - 0.5 * (nu + free) * float::ln(0.5 * total),
            )
        }
    }
}
