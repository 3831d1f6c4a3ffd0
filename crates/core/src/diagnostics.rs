//! What each row does to the fit and how well the others foretell it: residual, leverage, Cook's distance, left-out
//! density and tail.
//!
//! From the leverages h and residuals e of the whole fit, exactly, where the hyperparameters are fixed or in the
//! closed conjugate case. σ known: yᵢ given the others is normal with residual e/(1−h) and variance σᵢ²/(1−h).
//! σ unknown: Student-t with one degree of freedom less and s² = (S − e²/(v(1−h)))/(ν−1), S the sum of squares of the
//! whole; it does not exist where ν − 1 < 1 or h = 1.
//!
//! Sources: R. D. Cook, Technometrics 19 (1977) 15; A. Gelman et al., Bayesian Data Analysis, 7.2 and 14.6.

use crate::dd::Dd;
use crate::distribution::Law;
use crate::float;
use crate::posterior::Posterior;

/// A leverage this close to 1 leaves nothing for the others to foretell the row from.
const WHOLE: f64 = 1e-13;

/// The diagnostics of one row.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct RowDiagnostics {
    /// Response minus curve, in the unit of the response.
    pub residual: f64,
    /// h, 0 to 1.
    pub leverage: f64,
    /// Cook's distance; `None` where h = 1 or the noise is zero.
    pub cook_distance: Option<f64>,
    /// ln p(yᵢ | the others).
    pub left_out_log_density: Option<f64>,
    /// P(Y ≤ yᵢ | the others).
    pub left_out_tail: Option<f64>,
}

/// The diagnostics of one row: its basis functions, its response and its index among the rows of the fit.
pub fn of_row(posterior: &Posterior, basis: &[Dd], response: Dd, index: usize) -> Option<RowDiagnostics> {
    let [component] = posterior.components.as_slice() else {
        return None;
    };
    let deviation = *posterior.deviations.get(index)?;
    let residual = response - component.location_at(basis);
    let p = basis.len();
    let leverage: Dd = (0..p)
        .map(|k| {
            let part: Dd = (0..=k).map(|j| basis[j] * posterior.inverse_triangle[(j, k)]).sum();
            let part = part / deviation;
            part * part
        })
        .sum();
    let left = Dd::ONE - leverage;
    let mut row = RowDiagnostics {
        residual: residual.to_f64(),
        leverage: leverage.to_f64(),
        cook_distance: None,
        left_out_log_density: None,
        left_out_tail: None,
    };
    if !(left.to_f64() > WHOLE) {
        return Some(row);
    }
    let scaled = residual / deviation;
    let noise = match component.law {
        Law::Normal => Dd::ONE,
        Law::StudentT(_) => component.noise * component.noise,
    };
    if noise > Dd::ZERO {
        let cook = scaled * scaled * leverage / (noise * (left * left) * p as f64);
        row.cook_distance = Some(cook.to_f64()).filter(|c| c.is_finite());
    }
    let (law, variance) = match component.law {
        Law::Normal => (Law::Normal, Dd::ONE),
        Law::StudentT(nu) if nu - 1.0 >= 1.0 => {
            let whole = component.noise * component.noise * nu;
            (Law::StudentT(nu - 1.0), (whole - scaled * scaled / left) / Dd::from(nu - 1.0))
        }
        Law::StudentT(_) => return Some(row),
    };
    if !(variance > Dd::ZERO) {
        return Some(row);
    }
    let scale = (variance / left).sqrt() * deviation;
    let z = (residual / left / scale).to_f64();
    row.left_out_log_density = Some(law.log_density(z) - float::ln(scale.to_f64())).filter(|d| d.is_finite());
    row.left_out_tail = Some(law.cdf(z)).filter(|p| p.is_finite());
    Some(row)
}
