//! What was known before, as rows of the stacked system: [G | G m₀] with GᵀG = Λ₀.
//!
//! Two scales. *Absolute*: G is one over the unit of the coefficients; used where the noise is known. *Over σ*: the
//! prior covariance is σ²V₀ (normal-inverse-gamma), G the inverse Cholesky factor of V₀; stays closed with σ unknown.
//! The flat prior has no rows.
//!
//! Sources: C. M. Bishop, Pattern Recognition and Machine Learning, 3.3; A. Gelman et al., Bayesian Data Analysis, 14.8.

use crate::dd::Dd;
use crate::factor::{Factor, cholesky, forward_substitute};
use crate::float;
use crate::noise::Sigma;
use crate::problem::Problem;
use crate::shape::Shape;
use crate::visit::{KnownBefore, NumberOr, ShrinkageBasis, ShrinkageIntercept};
use nalgebra::DMatrix;

/// The rows of the prior, and what the evidence needs to know of them.
#[derive(Clone, Debug)]
pub struct Prior {
    /// Rows [G | G m₀], each p + 1 long.
    pub rows: Vec<Vec<Dd>>,
    /// Whether the rows are over σ.
    pub over_sigma: bool,
    /// ln det Λ₀ over the informed directions; `None` where they have no natural measure.
    pub log_determinant: Option<f64>,
    /// ‖G w − G m₀‖² at its minimum: what contradictory statements leave among themselves.
    pub rest: Dd,
    /// Number of informed directions.
    pub rank: usize,
}

impl Prior {
    /// The flat prior.
    pub fn flat() -> Prior {
        Prior { rows: Vec::new(), over_sigma: false, log_determinant: Some(0.0), rest: Dd::ZERO, rank: 0 }
    }

    /// From the visit's `known_before`. `design` holds the basis functions at the rows of the fit (for the scales of a
    /// standardised shrinkage). The second part names what cannot be taken into account with this noise.
    ///
    /// # Errors
    /// Statements of the wrong length, not positive, or not positive definite.
    pub fn of(
        known: &[KnownBefore],
        shape: &dyn Shape,
        sigma: Sigma,
        design: &[Vec<Dd>],
    ) -> Result<(Prior, Vec<String>), Problem> {
        let mut prior = Prior::flat();
        let mut left = Vec::new();
        let mut single = None;
        for (index, kind) in known.iter().enumerate() {
            let place = format!("model.known_before[{index}]");
            let block = match kind {
                KnownBefore::Flat => continue,
                KnownBefore::Conjugate { mean, covariance_over_variance } if known_informed(known) == 1 => {
                    prior.over_sigma = true;
                    covariance_block(mean, covariance_over_variance, shape, None, &place)?
                }
                KnownBefore::Shrinkage { precision: NumberOr::Number(b), basis, intercept } if is_known(sigma) => {
                    shrinkage_block(*b, *basis, *intercept, shape, design, &place)?
                }
                KnownBefore::Coefficients { terms, mean, covariance: Some(covariance), .. } if is_known(sigma) => {
                    let mean = complete(mean, &place)?;
                    covariance_block(&mean, covariance, shape, terms.as_deref(), &place)?
                }
                KnownBefore::Coefficients { terms, mean, standard_uncertainty, .. } if is_known(sigma) => {
                    coefficient_block(terms.as_deref(), mean, standard_uncertainty.as_deref(), shape, &place)?
                }
                _ => {
                    left.push(place);
                    continue;
                }
            };
            single = if prior.rows.is_empty() { Some(block.log_determinant) } else { None };
            prior.rows.extend(block.rows);
        }
        prior.measure(shape.columns(), single)?;
        Ok((prior, left))
    }

    /// Number of informed directions and the measure on them.
    fn measure(&mut self, p: usize, single: Option<f64>) -> Result<(), Problem> {
        if let Some(log_determinant) = single {
            self.rank = self.rows.len();
            self.log_determinant = Some(log_determinant);
            return Ok(());
        }
        if self.rows.is_empty() {
            return Ok(());
        }
        // Several statements together: a proper normal where they determine every coefficient, else no natural measure.
        let stacked =
            DMatrix::from_fn(self.rows.len().max(p), p + 1, |i, j| self.rows.get(i).map_or(Dd::ZERO, |r| r[j]));
        match Factor::new(stacked) {
            Ok(factor) => {
                self.rank = p;
                self.log_determinant = Some(factor.log_determinant());
                self.rest = factor.rest;
            }
            Err(_) => {
                self.rank = self.rows.len().min(p);
                self.log_determinant = None;
            }
        }
        Ok(())
    }
}

/// Rows of one statement.
struct Block {
    rows: Vec<Vec<Dd>>,
    log_determinant: f64,
}

fn is_known(sigma: Sigma) -> bool {
    matches!(sigma, Sigma::Known(_))
}

fn known_informed(known: &[KnownBefore]) -> usize {
    known.iter().filter(|k| !matches!(k, KnownBefore::Flat)).count()
}

/// A row of p + 1 zeros.
fn zeros(p: usize) -> Vec<Dd> {
    vec![Dd::ZERO; p + 1]
}

/// N(0, 1/b) on each coefficient, of the basis as given or standardised.
fn shrinkage_block(
    b: f64,
    basis: ShrinkageBasis,
    intercept: ShrinkageIntercept,
    shape: &dyn Shape,
    design: &[Vec<Dd>],
    place: &str,
) -> Result<Block, Problem> {
    if !(b > 0.0 && b.is_finite()) {
        let sentence = format!("The precision of the shrinkage is {b}; it must be positive.");
        return Err(Problem::error("precision_not_positive", format!("{place}.precision"), sentence));
    }
    let (p, root, constant) = (shape.columns(), Dd::from(b).sqrt(), shape.constant());
    let mut rows = Vec::new();
    let mut log_determinant = 0.0;
    let mut push = |row: Vec<Dd>, diagonal: Dd| {
        log_determinant += 2.0 * float::ln(diagonal.to_f64());
        rows.push(row);
    };
    let moments: Vec<(Dd, Dd)> = (0..p).map(|j| mean_and_deviation(design, j)).collect();
    if let (Some(c), ShrinkageIntercept::Shrunk) = (constant, intercept) {
        let mut row = zeros(p);
        row[c] = root;
        if basis == ShrinkageBasis::Standardised {
            // On the centred basis the intercept is the curve at the mean of every column.
            for j in (0..p).filter(|&j| j != c) {
                row[j] = root * moments[j].0;
            }
        }
        push(row, root);
    }
    for j in (0..p).filter(|&j| Some(j) != constant) {
        let scale = match basis {
            ShrinkageBasis::AsGiven => Dd::ONE,
            ShrinkageBasis::Standardised => moments[j].1,
        };
        if !(scale > Dd::ZERO) {
            let sentence = format!(
                "The term {} does not vary over the points, so shrinkage on the standardised basis has no scale for it.",
                shape.terms()[j]
            );
            return Err(
                Problem::error("term_without_variation", place, sentence).with("term", shape.terms()[j].as_str())
            );
        }
        let mut row = zeros(p);
        row[j] = root * scale;
        push(row, root * scale);
    }
    Ok(Block { rows, log_determinant })
}

/// Mean and standard deviation (divisor n) of a column of the design.
fn mean_and_deviation(design: &[Vec<Dd>], column: usize) -> (Dd, Dd) {
    let n = Dd::from(design.len() as f64);
    let mean = design.iter().map(|row| row[column]).sum::<Dd>() / n;
    let variance = design.iter().map(|row| (row[column] - mean) * (row[column] - mean)).sum::<Dd>() / n;
    (mean, variance.sqrt())
}

/// Columns of the coefficients named, all of the shape where none are.
fn columns_of(terms: Option<&[String]>, shape: &dyn Shape, place: &str) -> Result<Vec<usize>, Problem> {
    let Some(terms) = terms else {
        return Ok((0..shape.columns()).collect());
    };
    let mut columns = Vec::with_capacity(terms.len());
    for term in terms {
        let squeezed: String = term.split_whitespace().collect();
        let found = shape.terms().iter().position(|t| t.split_whitespace().collect::<String>() == squeezed);
        match found {
            Some(column) if !columns.contains(&column) => columns.push(column),
            _ => {
                let sentence = format!(
                    "What was known before names the term {term}, which is not in the shape, or stands there twice: the shape has {}.",
                    shape.terms().join(", ")
                );
                return Err(Problem::error("prior_term_unknown", format!("{place}.terms"), sentence)
                    .with("term", term.as_str()));
            }
        }
    }
    Ok(columns)
}

fn wrong_length(place: &str, expected: usize) -> Problem {
    let sentence = format!("What was known before needs {expected} entries here, one for each of its terms.");
    Problem::error("prior_length", place, sentence).with("expected", expected)
}

fn complete(mean: &[Option<f64>], place: &str) -> Result<Vec<f64>, Problem> {
    mean.iter().copied().collect::<Option<Vec<f64>>>().ok_or_else(|| {
        Problem::error(
            "prior_mean_missing",
            format!("{place}.mean"),
            "With a covariance every mean must be given: fill in the missing ones.",
        )
    })
}

/// Independent coefficients with their standard uncertainties.
fn coefficient_block(
    terms: Option<&[String]>,
    mean: &[Option<f64>],
    uncertainty: Option<&[Option<f64>]>,
    shape: &dyn Shape,
    place: &str,
) -> Result<Block, Problem> {
    let columns = columns_of(terms, shape, place)?;
    let uncertainty = uncertainty.ok_or_else(|| {
        Problem::error(
            "prior_uncertainty_missing",
            format!("{place}.standard_uncertainty"),
            "The stated coefficients need their standard uncertainties or a covariance.",
        )
    })?;
    if mean.len() != columns.len() || uncertainty.len() != columns.len() {
        return Err(wrong_length(place, columns.len()));
    }
    let (mut rows, mut log_determinant) = (Vec::new(), 0.0);
    for ((&column, &m), &u) in columns.iter().zip(mean).zip(uncertainty) {
        let (Some(m), Some(u)) = (m, u) else { continue };
        if !(u > 0.0 && u.is_finite() && m.is_finite()) {
            let sentence = format!(
                "The stated uncertainty of the coefficient of {} is {u}; it must be positive.",
                shape.terms()[column]
            );
            return Err(Problem::error("prior_uncertainty", format!("{place}.standard_uncertainty"), sentence));
        }
        let mut row = zeros(shape.columns());
        row[column] = Dd::ONE / Dd::from(u);
        row[shape.columns()] = Dd::from(m) / Dd::from(u);
        log_determinant -= 2.0 * float::ln(u);
        rows.push(row);
    }
    Ok(Block { rows, log_determinant })
}

/// Coefficients with a covariance C: rows [G⁻¹ | G⁻¹m] with C = G Gᵀ.
fn covariance_block(
    mean: &[f64],
    covariance: &[Vec<f64>],
    shape: &dyn Shape,
    terms: Option<&[String]>,
    place: &str,
) -> Result<Block, Problem> {
    let columns = columns_of(terms, shape, place)?;
    let (k, p) = (columns.len(), shape.columns());
    if mean.len() != k || covariance.len() != k || covariance.iter().any(|row| row.len() != k) {
        return Err(wrong_length(place, k));
    }
    let symmetric = (0..k).all(|i| (0..i).all(|j| covariance[i][j] == covariance[j][i]));
    let matrix = DMatrix::from_fn(k, k, |i, j| Dd::from(covariance[i][j]));
    let root = cholesky(&matrix).filter(|_| symmetric && mean.iter().all(|m| m.is_finite())).ok_or_else(|| {
        Problem::error(
            "prior_covariance",
            place,
            "The covariance of what was known before is not symmetric and positive definite: check its entries.",
        )
    })?;
    let right = DMatrix::from_fn(k, k + 1, |i, j| match j {
        j if j == k => Dd::from(mean[i]),
        j if j == i => Dd::ONE,
        _ => Dd::ZERO,
    });
    let solved = forward_substitute(&root, &right);
    let rows = (0..k)
        .map(|i| {
            let mut row = zeros(p);
            for (j, &column) in columns.iter().enumerate() {
                row[column] = solved[(i, j)];
            }
            row[p] = solved[(i, k)];
            row
        })
        .collect();
    let log_determinant = (0..k).map(|i| -2.0 * float::ln(root[(i, i)].to_f64())).sum();
    Ok(Block { rows, log_determinant })
}
