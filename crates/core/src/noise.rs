//! The noise of one indication: what is known about σ, and how it depends on the value.
//!
//! Row i has variance σ²·vᵢ + uᵢ², vᵢ = profile/m, σ and uᵢ in the unit of the response. σ unknown: p(σ) ∝ 1/σ.
//! Stated: σ² ~ scaled-inverse-χ²(ν₀, s₀²). Known: the given value; with 0 the rows' own uncertainties are the whole
//! noise. Profile (1 + ρ·|x|/x_span)², or 1.

use crate::problem::Problem;
use crate::visit::{Noise, NoiseKind, NumberOr, Profile, Visit, is_usable};

/// Fewer degrees of freedom than this say nothing.
const LEAST_DEGREES: f64 = 0.1;

/// With more degrees of freedom than this the noise is known.
const MOST_DEGREES: f64 = 1e6;

/// What is known about σ.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Sigma {
    /// p(σ) ∝ 1/σ.
    Unknown,
    /// Known; 0 where the rows' own uncertainties are the whole noise.
    Known(f64),
    /// σ² ~ scaled-inverse-χ²(ν₀, s₀²).
    Stated {
        /// ν₀.
        degrees_of_freedom: f64,
        /// s₀.
        standard_deviation: f64,
    },
}

impl Sigma {
    /// From the visit's `model.noise`.
    ///
    /// # Errors
    /// A standard deviation or degrees of freedom that are missing or not positive.
    pub fn of(noise: &Noise) -> Result<Sigma, Problem> {
        let deviation = |least_open: bool| match noise.standard_deviation {
            Some(s) if is_usable(s) && (s > 0.0 || (s == 0.0 && !least_open)) => Ok(s),
            Some(s) => Err(Problem::error(
                "noise_not_positive",
                "model.noise.standard_deviation",
                format!("The standard deviation of the noise is {s}; it must be positive."),
            )),
            None => Err(Problem::error(
                "noise_missing",
                "model.noise.standard_deviation",
                "The noise is said to be known, but its standard deviation is missing: state it, or choose unknown.",
            )),
        };
        match noise.kind {
            NoiseKind::Unknown => Ok(Sigma::Unknown),
            NoiseKind::Known => deviation(false).map(Sigma::Known),
            NoiseKind::Stated => match noise.degrees_of_freedom {
                Some(nu) if (LEAST_DEGREES..=MOST_DEGREES).contains(&nu) => {
                    Ok(Sigma::Stated { degrees_of_freedom: nu, standard_deviation: deviation(true)? })
                }
                _ => Err(Problem::error(
                    "noise_degrees_of_freedom",
                    "model.noise.degrees_of_freedom",
                    "The stated noise needs its degrees of freedom, a number from 0.1 to 1000000: with more, state it as known.",
                )),
            },
        }
    }
}

/// ρ and x_span of a noise that grows with the value; ρ = 0 for a constant one.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Growth {
    rho: f64,
    span: f64,
}

impl Growth {
    /// From the visit; `points_span` is used where the instrument has no range. The second part tells whether ρ was
    /// asked to be integrated, which is not computed: constant noise is used then.
    ///
    /// # Errors
    /// ρ negative or not finite; no span.
    pub fn of(visit: &Visit, points_span: f64) -> Result<(Growth, bool), Problem> {
        let constant = Growth { rho: 0.0, span: 1.0 };
        let rho = match &visit.model.noise.profile {
            None | Some(Profile::Constant) => return Ok((constant, false)),
            Some(Profile::Proportional { rho: NumberOr::Word(_) }) => return Ok((constant, true)),
            Some(Profile::Proportional { rho: NumberOr::Number(rho) }) => *rho,
        };
        let span = visit.instrument.range.map_or(points_span, |(a, b)| (b - a).abs());
        if rho >= 0.0 && is_usable(rho) && span > 0.0 && span.is_finite() {
            Ok((Growth { rho, span }, false))
        } else {
            Err(Problem::error(
                "noise_profile",
                "model.noise.profile.rho",
                "The growth of the noise needs a number of zero or more and a range that is not empty.",
            ))
        }
    }

    /// The variance profile at an argument.
    pub fn at(self, argument: f64) -> f64 {
        let factor = 1.0 + self.rho * argument.abs() / self.span;
        factor * factor
    }
}
