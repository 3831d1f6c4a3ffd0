//! How each part of a visit is read; the shapes themselves are the core's.

use crate::page::Texts;
use crate::readable::{At, Misfit, Readable};
use bandleaf_core::visit::{
    Approach, Ask, Asked, CommonError, Family, InUse, Indication, Influence, Instrument, KnownBefore, KnownValue,
    Model, Noise, NoiseKind, Nominal, NumberOr, Occasion, Orientation, Output, Place, Plan, Point, Profile, Reading,
    ShrinkageBasis, ShrinkageIntercept, Standard, State, Suspects, Term, Terms, Tolerance, Visit,
};
use serde::de::IgnoredAny;
use serde_json::Value;
use std::collections::BTreeMap;

/// Objects whose fields may all be absent. Taking the object apart makes the compiler notice a field that is not listed.
macro_rules! objects {
    ($($kind:ident { $($field:ident)* })*) => {$(
        impl Readable for $kind {
            fn read(at: At<'_, '_>) -> Result<$kind, Misfit> {
                let mut object = $kind::default();
                let $kind { $($field),* } = &mut object;
                at.object(&mut [$((stringify!($field), $field)),*])?;
                Ok(object)
            }
        }
    )*};
}

objects! {
    Visit {
        schema instrument standards occasion points model tolerance coverage target_expanded_uncertainty plan in_use
        record conditions ask earlier history
    }
    Instrument { name serial place quantity unit range hard_limits output influences }
    Output { unit resolution nominal }
    Influence { unit }
    Standard { id name serial certificate due errors }
    CommonError { kind standard_uncertainty source }
    Occasion { date by notes }
    Point {
        reference indication state standard setting setting_uncertainty reference_uncertainty repeats
        indication_uncertainty influences approach time note set_aside
    }
    Model { orientation terms noise known_before suspects candidates }
    Noise { kind standard_deviation degrees_of_freedom profile }
    Suspects { enabled prior_probability inflation at_most }
    Tolerance { combine constant of_value of_span digits }
    Plan { admissible }
    InUse { contributions valid_until }
    Ask { at readings }
    Texts { style shell seal visit wasm program }
}

/// Texts that stand for one of several things.
macro_rules! names {
    ($($kind:ident { $($name:literal = $variant:ident)* })*) => {$(
        impl Readable for $kind {
            fn read(at: At<'_, '_>) -> Result<$kind, Misfit> {
                at.name(&[$(($name, $kind::$variant)),*])
            }
        }
    )*};
}

names! {
    State { "as_found" = AsFound "as_left" = AsLeft }
    Approach { "up" = Up "down" = Down }
    Orientation {
        "indication_from_reference" = IndicationFromReference
        "reference_from_indication" = ReferenceFromIndication
        "correction_from_indication" = CorrectionFromIndication
    }
    NoiseKind { "unknown" = Unknown "known" = Known "stated" = Stated }
    ShrinkageBasis { "standardised" = Standardised "as_given" = AsGiven }
    ShrinkageIntercept { "flat" = Flat "shrunk" = Shrunk }
}

impl Readable for Nominal {
    fn read(at: At<'_, '_>) -> Result<Nominal, Misfit> {
        match at.kind()?.as_str() {
            "identity" => Ok(Nominal::Identity),
            "linear" => Ok(Nominal::Linear { range: at.required("range")? }),
            "square_root" => Ok(Nominal::SquareRoot { range: at.required("range")? }),
            _ => Err(at.unknown_kind(&["identity", "linear", "square_root"])),
        }
    }
}

impl Readable for Indication {
    fn read(at: At<'_, '_>) -> Result<Indication, Misfit> {
        match at.value() {
            Value::Number(_) => f64::read(at).map(Indication::One),
            Value::Array(_) => Vec::read(at).map(Indication::Many),
            _ => Err(at.misfit("a number or a list of numbers")),
        }
    }
}

impl Readable for Term {
    fn read(at: At<'_, '_>) -> Result<Term, Misfit> {
        match at.value() {
            Value::String(text) => Ok(Term::Expression(text.clone())),
            Value::Object(_) => Family::read(at).map(Term::Family),
            _ => Err(at.misfit("a term such as \"x^2\"")),
        }
    }
}

impl Readable for Terms {
    fn read(at: At<'_, '_>) -> Result<Terms, Misfit> {
        match at.value() {
            Value::Array(_) => Vec::read(at).map(Terms::List),
            Value::Object(_) => Family::read(at).map(Terms::One),
            _ => Err(at.misfit("a list of terms or a shape object")),
        }
    }
}

impl Readable for Family {
    fn read(at: At<'_, '_>) -> Result<Family, Misfit> {
        match at.kind()?.as_str() {
            "polynomial" => Ok(Family::Polynomial { degree: at.required("degree")? }),
            "spline" => Ok(Family::Spline { knots: at.required("knots")? }),
            "broken_line" => Ok(Family::BrokenLine { knots: at.required("knots")? }),
            _ => Err(at.unknown_kind(&["polynomial", "spline", "broken_line"])),
        }
    }
}

impl Readable for Profile {
    fn read(at: At<'_, '_>) -> Result<Profile, Misfit> {
        match at.kind()?.as_str() {
            "constant" => Ok(Profile::Constant),
            "proportional" => Ok(Profile::Proportional { rho: at.required("rho")? }),
            _ => Err(at.unknown_kind(&["constant", "proportional"])),
        }
    }
}

impl Readable for NumberOr {
    fn read(at: At<'_, '_>) -> Result<NumberOr, Misfit> {
        match at.value() {
            Value::Number(_) => f64::read(at).map(NumberOr::Number),
            Value::String(word) => Ok(NumberOr::Word(word.clone())),
            _ => Err(at.misfit("a number or the word \"integrated\"")),
        }
    }
}

impl Readable for KnownBefore {
    fn read(at: At<'_, '_>) -> Result<KnownBefore, Misfit> {
        match at.kind()?.as_str() {
            "flat" => Ok(KnownBefore::Flat),
            "shrinkage" => {
                let (mut basis, mut intercept) = (ShrinkageBasis::default(), ShrinkageIntercept::default());
                at.object(&mut [("basis", &mut basis), ("intercept", &mut intercept)])?;
                Ok(KnownBefore::Shrinkage { precision: at.required("precision")?, basis, intercept })
            }
            "coefficients" => {
                let mut terms: Option<Vec<String>> = None;
                let mut covariance: Option<Vec<Vec<f64>>> = None;
                let mut standard_uncertainty: Option<Vec<Option<f64>>> = None;
                at.object(&mut [
                    ("terms", &mut terms),
                    ("covariance", &mut covariance),
                    ("standard_uncertainty", &mut standard_uncertainty),
                ])?;
                Ok(KnownBefore::Coefficients { terms, mean: at.required("mean")?, covariance, standard_uncertainty })
            }
            "values" => {
                let mut values: Vec<IgnoredAny> = Vec::new();
                at.field("values", &mut values)?;
                Ok(KnownBefore::Values { values })
            }
            "conjugate" => Ok(KnownBefore::Conjugate {
                mean: at.required("mean")?,
                covariance_over_variance: at.required("covariance_over_variance")?,
            }),
            "carried" => Ok(KnownBefore::Carried),
            _ => Err(at.unknown_kind(&["flat", "shrinkage", "coefficients", "values", "conjugate", "carried"])),
        }
    }
}

impl Readable for Place {
    fn read(at: At<'_, '_>) -> Result<Place, Misfit> {
        match at.value() {
            Value::Number(_) => f64::read(at).map(Place::Value),
            Value::Object(_) => {
                let mut influences: BTreeMap<String, f64> = BTreeMap::new();
                at.field("influences", &mut influences)?;
                Ok(Place::Under { x: at.required("x")?, influences })
            }
            _ => Err(at.misfit("a number, or an object with x and influences")),
        }
    }
}

impl Readable for Asked {
    fn read(at: At<'_, '_>) -> Result<Asked, Misfit> {
        match at.value() {
            Value::Array(_) => Vec::read(at).map(Asked::Indications),
            Value::Object(_) => Reading::read(at).map(Asked::Reading),
            Value::Number(_) => f64::read(at).map(Asked::One),
            _ => Err(at.misfit("a list of indications, or an object with indications")),
        }
    }
}

impl Readable for Reading {
    fn read(at: At<'_, '_>) -> Result<Reading, Misfit> {
        at.fields()?;
        let mut reading = Reading { indications: at.required("indications")?, ..Reading::default() };
        let Reading { indications: _, influences, resolution, known, indication_uncertainty } = &mut reading;
        at.object(&mut [
            ("influences", influences),
            ("resolution", resolution),
            ("known", known),
            ("indication_uncertainty", indication_uncertainty),
        ])?;
        Ok(reading)
    }
}

impl Readable for KnownValue {
    fn read(at: At<'_, '_>) -> Result<KnownValue, Misfit> {
        at.fields()?;
        Ok(KnownValue { mean: at.required("mean")?, standard_uncertainty: at.required("standard_uncertainty")? })
    }
}
