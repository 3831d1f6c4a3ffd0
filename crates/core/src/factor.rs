//! Orthogonal factorisation of a stacked linear system: the triangle R, the rotated right-hand side, the rest.
//!
//! Input: rows [aᵢ | bᵢ] with p columns and one right-hand side, already divided by the standard deviations of bᵢ, so
//! without units. Output: R (p × p, upper, positive diagonal), z = Qᵀb and ‖b − A w‖² at the minimum, so that the
//! minimiser solves R w = z and (AᵀA)⁻¹ = R⁻¹R⁻ᵀ. AᵀA is never formed.
//!
//! While n·p² ≤ 2·10⁵ everything is double-double Householder. Above that, the rows are first carried over to a basis
//! that is nearly orthonormal (from the double-double triangle of an evenly spaced part of the rows), factored there
//! in blocks in double precision, and the two triangles are multiplied in double-double: the second system is so well
//! conditioned that double precision keeps its digits.
//!
//! Sources: G. H. Golub & C. F. Van Loan, Matrix Computations, 5.2 (Householder), 5.3 (least squares);
//! N. J. Higham, Accuracy and Stability of Numerical Algorithms, ch. 19 and 20.

use crate::dd::Dd;
use nalgebra::{DMatrix, DVector};

/// Above this many n·p² the blocked double-precision route is taken.
const MOST_DOUBLE_DOUBLE: usize = 200_000;

/// Rows in the part that fixes the nearly orthonormal basis.
const SAMPLE_ROWS: usize = 512;

/// Rows in a block of the double-precision route.
const BLOCK_ROWS: usize = 256;

/// A column whose part outside the span of those before it is below this share of its length counts as dependent.
/// The columns are double-double functions of the very same arguments, so true dependence shows near 1e-30.
const DEPENDENT: f64 = 1e-24;

/// The triangle, the rotated right-hand side and what is left over.
#[derive(Clone, Debug)]
pub struct Factor {
    /// R: p × p, upper triangular, positive diagonal.
    pub triangle: DMatrix<Dd>,
    /// z = Qᵀb, p entries.
    pub rotated: DVector<Dd>,
    /// ‖b − A w‖² at the minimum.
    pub rest: Dd,
}

/// Columns that cannot be told apart at the given rows.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Dependent {
    /// The column found to depend on earlier ones.
    pub column: usize,
    /// The earlier columns that it depends on (empty: the column is zero).
    pub on: Vec<usize>,
}

impl Factor {
    /// Factors the rows of `system`, n × (p + 1) with the right-hand side in the last column, n ≥ p.
    ///
    /// # Errors
    /// The first column that depends linearly on those before it.
    pub fn new(system: DMatrix<Dd>) -> Result<Factor, Dependent> {
        let p = system.ncols() - 1;
        let lengths: Vec<f64> = (0..p).map(|j| length(system.column(j).iter()).to_f64()).collect();
        let factor = if system.nrows() * p * p <= MOST_DOUBLE_DOUBLE || system.nrows() <= 2 * SAMPLE_ROWS {
            householder(system)
        } else {
            blocked(&system)
        };
        factor.check_rank(&lengths)?;
        Ok(factor)
    }

    /// Number of columns p.
    pub fn columns(&self) -> usize {
        self.triangle.ncols()
    }

    /// The minimiser w of R w = z.
    pub fn solution(&self) -> DVector<Dd> {
        back_substitute(&self.triangle, &self.rotated)
    }

    /// R⁻¹, upper triangular, so that (AᵀA)⁻¹ = R⁻¹R⁻ᵀ.
    pub fn inverse_triangle(&self) -> DMatrix<Dd> {
        let p = self.columns();
        let mut inverse = DMatrix::from_element(p, p, Dd::ZERO);
        for j in 0..p {
            let unit = DVector::from_fn(p, |i, _| if i == j { Dd::ONE } else { Dd::ZERO });
            inverse.set_column(j, &back_substitute(&self.triangle, &unit));
        }
        inverse
    }

    /// ln det(AᵀA) = 2 Σ ln r_jj.
    pub fn log_determinant(&self) -> f64 {
        (0..self.columns()).map(|j| 2.0 * crate::float::ln(self.triangle[(j, j)].to_f64())).sum()
    }

    /// Largest over smallest singular value of the matrix with its columns brought to unit length.
    pub fn condition_number(&self) -> f64 {
        let p = self.columns();
        let lengths: Vec<Dd> = (0..p).map(|j| length(self.triangle.column(j).iter())).collect();
        let scaled = DMatrix::from_fn(p, p, |i, j| (self.triangle[(i, j)] / lengths[j]).to_f64());
        let values = scaled.singular_values();
        values.max() / values.min()
    }

    fn check_rank(&self, lengths: &[f64]) -> Result<(), Dependent> {
        for (column, &whole) in lengths.iter().enumerate() {
            let own = self.triangle[(column, column)].to_f64();
            if !(own > DEPENDENT * whole) {
                return Err(Dependent { column, on: self.involved(column, lengths) });
            }
        }
        Ok(())
    }

    /// The earlier columns that make up `column`.
    fn involved(&self, column: usize, lengths: &[f64]) -> Vec<usize> {
        let leading = self.triangle.view((0, 0), (column, column)).into_owned();
        let right = DVector::from_fn(column, |i, _| self.triangle[(i, column)]);
        let shares = back_substitute(&leading, &right);
        (0..column).filter(|&k| shares[k].abs().to_f64() * lengths[k] > 1e-9 * lengths[column]).collect()
    }
}

/// Euclidean length of a list of numbers.
fn length<'a>(entries: impl Iterator<Item = &'a Dd>) -> Dd {
    entries.map(|&e| e * e).sum::<Dd>().sqrt()
}

/// Solves R w = z for upper triangular R with a non-zero diagonal.
fn back_substitute(triangle: &DMatrix<Dd>, right: &DVector<Dd>) -> DVector<Dd> {
    let p = triangle.ncols();
    let mut w = right.clone();
    for i in (0..p).rev() {
        for j in i + 1..p {
            let known = triangle[(i, j)] * w[j];
            w[i] -= known;
        }
        w[i] = w[i] / triangle[(i, i)];
    }
    w
}

/// Householder factorisation in double-double of the whole system.
fn householder(mut system: DMatrix<Dd>) -> Factor {
    let (n, p) = (system.nrows(), system.ncols() - 1);
    for k in 0..p.min(n) {
        reflect(&mut system, k);
    }
    let rest = (p..n).map(|i| system[(i, p)] * system[(i, p)]).sum();
    with_positive_diagonal(system, p, rest)
}

/// Brings column `k` below the diagonal to zero by one reflection of the rows from `k` on.
fn reflect(system: &mut DMatrix<Dd>, k: usize) {
    let (n, columns) = system.shape();
    let norm = length(system.column(k).rows(k, n - k).iter());
    if norm.is_zero() || !norm.is_finite() {
        return;
    }
    let pivot = system[(k, k)];
    let alpha = if pivot > Dd::ZERO { -norm } else { norm };
    let mut mirror: Vec<Dd> = (k..n).map(|i| system[(i, k)]).collect();
    mirror[0] = pivot - alpha;
    let half = (norm * norm - alpha * pivot).abs(); // ‖v‖²/2, without cancellation
    for j in k..columns {
        let mut column = system.column_mut(j);
        let dot: Dd = mirror.iter().zip(column.iter().skip(k)).map(|(&m, &c)| m * c).sum();
        let factor = dot / half;
        for (i, &m) in mirror.iter().enumerate() {
            column[k + i] -= factor * m;
        }
    }
}

/// The triangle with its signs turned so that the diagonal is positive.
fn with_positive_diagonal(system: DMatrix<Dd>, p: usize, rest: Dd) -> Factor {
    let entry = |i: usize, j: usize| {
        if i < system.nrows() { system[(i, j)] } else { Dd::ZERO }
    };
    let sign = |i: usize| entry(i, i) < Dd::ZERO;
    let turned = |i: usize, j: usize| if sign(i) { -entry(i, j) } else { entry(i, j) };
    Factor {
        triangle: DMatrix::from_fn(p, p, |i, j| if i <= j { turned(i, j) } else { Dd::ZERO }),
        rotated: DVector::from_fn(p, |i, _| turned(i, p)),
        rest,
    }
}

/// The route for many rows: a nearly orthonormal basis from a part of the rows, then blocks in double precision.
fn blocked(system: &DMatrix<Dd>) -> Factor {
    let (n, p) = (system.nrows(), system.ncols() - 1);
    let sample = DMatrix::from_fn(SAMPLE_ROWS, p + 1, |i, j| system[(i * (n - 1) / (SAMPLE_ROWS - 1), j)]);
    let first = householder(sample);
    if (0..p).any(|j| first.triangle[(j, j)].is_zero()) {
        return householder(system.clone());
    }
    let inverse = first.inverse_triangle();
    // Only what the first solution leaves is factored in double precision, so that a good fit keeps its digits.
    let start = first.solution();
    let mut carried = DMatrix::<f64>::zeros(0, p + 1);
    let mut top = 0;
    while top < n {
        let rows = BLOCK_ROWS.min(n - top);
        let block = DMatrix::from_fn(rows, p + 1, |i, j| {
            let row = system.row(top + i);
            if j < p {
                (0..=j).map(|l| row[l] * inverse[(l, j)]).sum::<Dd>().to_f64()
            } else {
                (row[p] - (0..p).map(|l| row[l] * start[l]).sum::<Dd>()).to_f64()
            }
        });
        carried = stacked_triangle(&carried, &block);
        top += rows;
    }
    let second = DMatrix::from_fn(p, p, |i, j| Dd::from(carried[(i, j)]));
    let shift = DVector::from_fn(p, |i, _| Dd::from(carried[(i, p)]));
    let triangle = &multiply(&second, &first.triangle);
    let moved = &multiply(&second, &DMatrix::from_column_slice(p, 1, first.rotated.as_slice()));
    let left = if carried.nrows() > p { Dd::from(carried[(p, p)]) } else { Dd::ZERO };
    let system = DMatrix::from_fn(p, p + 1, |i, j| if j < p { triangle[(i, j)] } else { shift[i] + moved[(i, 0)] });
    with_positive_diagonal(system, p, left * left)
}

/// R of the two stacked, by Householder in double precision.
fn stacked_triangle(above: &DMatrix<f64>, below: &DMatrix<f64>) -> DMatrix<f64> {
    let (n, columns) = (above.nrows() + below.nrows(), below.ncols());
    let stacked =
        DMatrix::from_fn(
            n,
            columns,
            |i, j| {
                if i < above.nrows() { above[(i, j)] } else { below[(i - above.nrows(), j)] }
            },
        );
    stacked.qr().r()
}

/// The product of two matrices in double-double, in a fixed order of summation.
pub fn multiply(a: &DMatrix<Dd>, b: &DMatrix<Dd>) -> DMatrix<Dd> {
    DMatrix::from_fn(a.nrows(), b.ncols(), |i, j| (0..a.ncols()).map(|k| a[(i, k)] * b[(k, j)]).sum())
}

/// Lower triangular G with G Gᵀ = `matrix` (symmetric positive definite); `None` where it is not.
pub fn cholesky(matrix: &DMatrix<Dd>) -> Option<DMatrix<Dd>> {
    let p = matrix.nrows();
    let mut g = DMatrix::from_element(p, p, Dd::ZERO);
    for j in 0..p {
        let rest = matrix[(j, j)] - (0..j).map(|k| g[(j, k)] * g[(j, k)]).sum::<Dd>();
        // A diagonal that has lost every digit is no positive definite matrix any more.
        if !(rest.to_f64() > 1e-28 * matrix[(j, j)].to_f64().abs()) {
            return None;
        }
        g[(j, j)] = rest.sqrt();
        for i in j + 1..p {
            let dot: Dd = (0..j).map(|k| g[(i, k)] * g[(j, k)]).sum();
            g[(i, j)] = (matrix[(i, j)] - dot) / g[(j, j)];
        }
    }
    Some(g)
}

/// Solves G b = `right` for lower triangular G, column by column.
pub fn forward_substitute(g: &DMatrix<Dd>, right: &DMatrix<Dd>) -> DMatrix<Dd> {
    let mut b = right.clone();
    for c in 0..b.ncols() {
        for i in 0..g.nrows() {
            let known: Dd = (0..i).map(|k| g[(i, k)] * b[(k, c)]).sum();
            b[(i, c)] = (b[(i, c)] - known) / g[(i, i)];
        }
    }
    b
}

#[cfg(test)]
mod tests {
    use super::*;

    fn system(rows: &[&[f64]]) -> DMatrix<Dd> {
        DMatrix::from_fn(rows.len(), rows[0].len(), |i, j| Dd::from(rows[i][j]))
    }

    #[test]
    fn a_line_through_four_points_by_hand() {
        // y = 1.5 + 0.8 x least squares of (0,1) (1,3) (2,3) (3,4): normal equations solved by hand, rest 0.7.
        let f = Factor::new(system(&[&[1., 0., 1.], &[1., 1., 3.], &[1., 2., 3.], &[1., 3., 4.]])).unwrap();
        let w = f.solution();
        assert!((w[0].to_f64() - 1.4).abs() < 1e-15 && (w[1].to_f64() - 0.9).abs() < 1e-15, "{w:?}");
        assert!((f.rest.to_f64() - 0.7).abs() < 1e-15);
        // det(AᵀA) = n Σx² − (Σx)² = 56 − 36
        assert!((f.log_determinant() - crate::float::ln(20.0)).abs() < 1e-14);
    }

    #[test]
    fn dependent_columns_are_named() {
        let rows: Vec<Vec<f64>> = (0..6).map(|i| vec![1.0, i as f64, 2.0 + 3.0 * i as f64, 1.0]).collect();
        let rows: Vec<&[f64]> = rows.iter().map(Vec::as_slice).collect();
        assert_eq!(Factor::new(system(&rows)).unwrap_err(), Dependent { column: 2, on: vec![0, 1] });
    }

    #[test]
    fn many_rows_agree_with_double_double() {
        let n = 6000;
        let rows = DMatrix::from_fn(n, 7, |i, j| {
            let x = Dd::from(i as f64) / Dd::from(n as f64 / 4.0) + Dd::from(1.0);
            if j < 6 { x.powi(j as u32) } else { Dd::from(((i * 7919) % 1013) as f64 / 1013.0) + x * x }
        });
        let reference = householder(rows.clone());
        let fast = Factor::new(rows).unwrap();
        let (a, b) = (reference.solution(), fast.solution());
        for j in 0..6 {
            assert!(((a[j] - b[j]) / a[j]).abs().to_f64() < 1e-12, "{j}: {:?} {:?}", a[j], b[j]);
        }
        assert!(((reference.rest - fast.rest) / reference.rest).abs().to_f64() < 1e-12);
    }

    #[test]
    fn cholesky_refuses_what_is_not_positive_definite() {
        let m = system(&[&[1.0, 2.0], &[2.0, 1.0]]);
        assert!(cholesky(&m).is_none());
        let m = system(&[&[4.0, 2.0], &[2.0, 5.0]]);
        let g = cholesky(&m).unwrap();
        assert_eq!(multiply(&g, &g.transpose()), m);
    }
}
