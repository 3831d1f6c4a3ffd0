//! The nominal characteristic n(x): what the instrument should show at a value, in the unit of the output.
//!
//! Identity where the units agree; linear or square root from `instrument.range` to the output range. The error of
//! indication is e(x) = y − n(x).

use crate::dd::Dd;
use crate::problem::Problem;
use crate::visit::{Instrument, Nominal, is_usable};

/// A checked nominal characteristic.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Characteristic {
    /// n(x) = x.
    Identity,
    /// n(x) = y₀ + (y₁ − y₀)·g((x − x₀)/(x₁ − x₀)), g the identity or the square root.
    Scaled {
        /// Ends of the range of the measured quantity.
        input: (f64, f64),
        /// Output at those ends.
        output: (f64, f64),
        /// Whether g is the square root.
        root: bool,
    },
}

impl Characteristic {
    /// The characteristic of an instrument; `None` where none is stated and the units differ.
    ///
    /// # Errors
    /// A range that is missing or empty where one is needed; identity between different units.
    pub fn of(instrument: &Instrument) -> Result<Option<Characteristic>, Problem> {
        let same_unit = instrument.output.unit.as_ref().is_none_or(|unit| *unit == instrument.unit);
        let place = "instrument.output.nominal";
        match &instrument.output.nominal {
            None if same_unit => Ok(Some(Characteristic::Identity)),
            None => Ok(None),
            Some(Nominal::Identity) if same_unit => Ok(Some(Characteristic::Identity)),
            Some(Nominal::Identity) => Err(Problem::warning(
                "nominal_units_differ",
                place,
                "The nominal characteristic is the identity, but input and output have different units: state it as linear or square root. No error of indication is computed.",
            )),
            Some(Nominal::Linear { range }) => Characteristic::scaled(instrument, *range, false).map(Some),
            Some(Nominal::SquareRoot { range }) => Characteristic::scaled(instrument, *range, true).map(Some),
        }
    }

    fn scaled(instrument: &Instrument, output: (f64, f64), root: bool) -> Result<Characteristic, Problem> {
        let wide = |(a, b): (f64, f64)| is_usable(a) && is_usable(b) && a != b;
        match instrument.range {
            Some(input) if wide(input) && wide(output) => Ok(Characteristic::Scaled { input, output, root }),
            _ => Err(Problem::warning(
                "nominal_needs_range",
                "instrument.output.nominal",
                "The nominal characteristic needs the instrument's range and the output at both of its ends, each with two different values. No error of indication is computed.",
            )),
        }
    }

    /// n(x); not finite below the range where it is a square root.
    pub fn at(self, x: f64) -> Dd {
        match self {
            Characteristic::Identity => Dd::from(x),
            Characteristic::Scaled { input, output, root } => {
                let share = Dd::from_sum(x, -input.0) / Dd::from_sum(input.1, -input.0);
                let share = if root { share.sqrt() } else { share };
                Dd::from(output.0) + Dd::from_sum(output.1, -output.0) * share
            }
        }
    }

    /// Width of the output range; `None` for the identity without a range.
    pub fn output_span(self, range: Option<(f64, f64)>) -> Option<f64> {
        let (a, b) = match self {
            Characteristic::Identity => range?,
            Characteristic::Scaled { output, .. } => output,
        };
        let span = (b - a).abs();
        (span.is_finite() && span > 0.0).then_some(span)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::visit::Output;

    fn transmitter(nominal: Nominal) -> Instrument {
        Instrument {
            unit: "bar".into(),
            range: Some((0.0, 10.0)),
            output: Output { unit: Some("mA".into()), resolution: None, nominal: Some(nominal) },
            ..Instrument::default()
        }
    }

    #[test]
    fn four_to_twenty_milliampere() {
        // 4 mA at the lower and 20 mA at the upper end: common practice, no source.
        let linear = Characteristic::of(&transmitter(Nominal::Linear { range: (4.0, 20.0) })).unwrap().unwrap();
        assert_eq!(linear.at(0.0).to_f64(), 4.0);
        assert_eq!(linear.at(2.5).to_f64(), 8.0);
        assert_eq!(linear.at(10.0).to_f64(), 20.0);
        assert_eq!(linear.output_span(None), Some(16.0));
        let root = Characteristic::of(&transmitter(Nominal::SquareRoot { range: (4.0, 20.0) })).unwrap().unwrap();
        assert_eq!(root.at(2.5).to_f64(), 12.0);
        assert!(!root.at(-1.0).is_finite());
    }

    #[test]
    fn identity_between_different_units_is_refused() {
        assert_eq!(Characteristic::of(&transmitter(Nominal::Identity)).unwrap_err().code, "nominal_units_differ");
    }
}
