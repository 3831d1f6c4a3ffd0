//! Prediction: the curve and a new indication at a place, as mixtures of located and scaled standard laws.
//!
//! Curve: f(x) = φ(x, z)ᵀw. New indication: mean of m with noise σ²v(x)/m plus a known variance (rounding). Both in the
//! unit of the response; the argument in the unit of the argument of the fit. Location and squared scale are computed
//! in double-double, so that a plain monomial basis loses no digits.

use crate::dd::Dd;
use crate::distribution::Law;
use crate::float;
use crate::noise::Growth;
use crate::posterior::Posterior;
use crate::shape::Shape;

/// One part of a mixture on the real line.
#[derive(Clone, Copy, Debug)]
pub struct Part {
    /// Its weight.
    pub weight: f64,
    /// Its location.
    pub location: Dd,
    /// Its scale, ≥ 0.
    pub scale: f64,
    /// Its law.
    pub law: Law,
}

/// A finite mixture on the real line.
#[derive(Clone, Debug)]
pub struct Mixture {
    /// Its parts; their weights add up to 1.
    pub parts: Vec<Part>,
}

impl Mixture {
    /// The mixture of Σ w_j φ_j over the posterior's components.
    pub fn of_components(posterior: &Posterior, row: &[Dd]) -> Mixture {
        let parts = posterior
            .components
            .iter()
            .map(|c| Part {
                weight: c.weight,
                location: c.location_at(row),
                scale: c.squared_scale_at(row).sqrt().to_f64(),
                law: c.law,
            })
            .collect();
        Mixture { parts }
    }

    /// The mean of the locations (the mean of the mixture, where it exists).
    pub fn location(&self) -> f64 {
        self.parts.iter().map(|p| p.location * p.weight).sum::<Dd>().to_f64()
    }

    /// The scale, where there is a single part.
    pub fn scale(&self) -> Option<f64> {
        match self.parts.as_slice() {
            [part] => Some(part.scale),
            _ => None,
        }
    }

    /// Standard deviation; `None` where a part has none.
    pub fn standard_deviation(&self) -> Option<f64> {
        let mean = self.location();
        let mut variance = 0.0;
        for part in &self.parts {
            let deviation = part.scale * part.law.deviation_over_scale()?;
            let shift = (part.location - Dd::from(mean)).to_f64();
            variance += part.weight * (deviation * deviation + shift * shift);
        }
        match self.parts.as_slice() {
            [part] => Some(part.scale * part.law.deviation_over_scale()?),
            _ => Some(float::sqrt(variance)),
        }
    }

    /// The equal-tailed interval at a coverage probability in (0, 1).
    pub fn interval(&self, coverage: f64) -> [f64; 2] {
        match self.parts.as_slice() {
            [part] => {
                let half = Dd::from_product(part.scale, part.law.coverage_factor(coverage));
                [(part.location - half).to_f64(), (part.location + half).to_f64()]
            }
            _ => [self.quantile((1.0 - coverage) / 2.0), self.quantile((1.0 + coverage) / 2.0)],
        }
    }

    /// The median.
    pub fn median(&self) -> f64 {
        match self.parts.as_slice() {
            [part] => part.location.to_f64(),
            _ => self.quantile(0.5),
        }
    }

    /// P(Y ≤ y).
    pub fn cdf(&self, y: f64) -> f64 {
        self.parts.iter().map(|p| p.weight * p.law.cdf((Dd::from(y) - p.location).to_f64() / p.scale)).sum()
    }

    /// Twice the smaller tail at y.
    pub fn two_sided_tail(&self, y: Dd) -> f64 {
        self.parts.iter().map(|p| 2.0 * p.weight * p.law.cdf(-((y - p.location).to_f64() / p.scale).abs())).sum()
    }

    /// y with P(Y ≤ y) = `probability`, by bisection between the extreme quantiles of the parts.
    pub fn quantile(&self, probability: f64) -> f64 {
        let of_part = |p: &Part| (p.location + Dd::from_product(p.scale, p.law.quantile(probability))).to_f64();
        let (mut low, mut high) =
            self.parts.iter().map(of_part).fold((f64::INFINITY, f64::NEG_INFINITY), |(l, h), q| (l.min(q), h.max(q)));
        for _ in 0..200 {
            let middle = 0.5 * (low + high);
            if !(middle > low && middle < high) {
                break;
            }
            if self.cdf(middle) < probability {
                low = middle;
            } else {
                high = middle;
            }
        }
        0.5 * (low + high)
    }

    /// ln of the density at y.
    pub fn log_density(&self, y: Dd) -> f64 {
        self.log_density_over(y, 1.0)
    }

    /// ln of the density at y times `unit`. With a unit near the scales only ratios enter a logarithm, so that other
    /// units of measurement by a power of two change no bit.
    pub fn log_density_over(&self, y: Dd, unit: f64) -> f64 {
        if let [part] = self.parts.as_slice() {
            let z = (y - part.location).to_f64() / part.scale;
            return part.law.log_density(z) - float::ln(part.scale / unit);
        }
        let logs: Vec<f64> = self
            .parts
            .iter()
            .map(|p| {
                float::ln(p.weight) + p.law.log_density((y - p.location).to_f64() / p.scale) - float::ln(p.scale / unit)
            })
            .collect();
        let top = logs.iter().copied().fold(f64::NEG_INFINITY, f64::max);
        if !top.is_finite() {
            return top;
        }
        top + float::ln(logs.iter().map(|l| float::exp(l - top)).sum())
    }
}

/// What a new indication adds to the curve.
#[derive(Clone, Copy, Debug, Default)]
pub struct NewIndication {
    /// Share of σ²v(x) that stays: 1/m; 0 where the noise is given as a variance.
    pub noise_share: f64,
    /// Known variance to add, in the squared unit of the response.
    pub known_variance: f64,
}

/// A posterior with its shape and noise profile, ready to predict.
pub struct Predictor<'a> {
    /// The posterior.
    pub posterior: &'a Posterior,
    /// Its shape.
    pub shape: &'a dyn Shape,
    /// Its noise profile.
    pub growth: Growth,
}

impl Predictor<'_> {
    /// The curve at a place.
    pub fn curve(&self, argument: f64, influences: &[f64]) -> Mixture {
        self.indication(argument, influences, NewIndication::default())
    }

    /// A new indication at a place.
    pub fn indication(&self, argument: f64, influences: &[f64], new: NewIndication) -> Mixture {
        self.at_row(&self.shape.row(argument, influences), argument, new)
    }

    /// Curve and new indication at a place, from one evaluation of the basis.
    pub fn both(&self, argument: f64, influences: &[f64]) -> (Mixture, Mixture) {
        let row = self.shape.row(argument, influences);
        let new = NewIndication { noise_share: 1.0, known_variance: 0.0 };
        (self.at_row(&row, argument, NewIndication::default()), self.at_row(&row, argument, new))
    }

    /// The mean curve at a place.
    pub fn mean(&self, argument: f64, influences: &[f64]) -> Dd {
        let row = self.shape.row(argument, influences);
        self.posterior.components.iter().map(|c| c.location_at(&row) * c.weight).sum()
    }

    /// The mean curve and its slope at a place.
    pub fn mean_and_slope(&self, argument: f64, influences: &[f64]) -> (Dd, Dd) {
        let (row, slope) = self.shape.row_with_slope(argument, influences);
        let mean = |row: &[Dd]| self.posterior.components.iter().map(|c| c.location_at(row) * c.weight).sum();
        (mean(&row), mean(&slope))
    }

    fn at_row(&self, row: &[Dd], argument: f64, new: NewIndication) -> Mixture {
        let profile = Dd::from(self.growth.at(argument) * new.noise_share);
        let parts = self
            .posterior
            .components
            .iter()
            .map(|c| {
                let noise = c.noise * c.noise * profile + Dd::from(new.known_variance);
                Part {
                    weight: c.weight,
                    location: c.location_at(row),
                    scale: (c.squared_scale_at(row) + noise).sqrt().to_f64(),
                    law: c.law,
                }
            })
            .collect();
        Mixture { parts }
    }
}
