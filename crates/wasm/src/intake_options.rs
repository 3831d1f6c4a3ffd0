//! The options of the intake from the page's object. By hand, as the visit is read, since serde's code for these types
//! takes 20 KB of the page.

use bandleaf_core::problem::Problem;
use bandleaf_intake::{
    ColumnDecimal, ColumnKey, ColumnKeys, ColumnOptions, Decimal, Delimiter, InfluenceColumns, Options,
};
use bandleaf_leaf::readable::{At, Misfit, Readable};
use bandleaf_leaf::typed;
use serde_json::Value;
use std::collections::BTreeMap;

/// The names of the options; anything else is a slip of whoever calls.
const NAMES: [&str; 6] = ["columns", "influence_names", "decimal", "decimals", "delimiter", "header"];

/// Reads the options; none where there is no object.
pub(crate) fn options(value: &Value) -> Result<Options, Problem> {
    if value.is_null() {
        return Ok(Options::default());
    }
    if let Some(name) = value.as_object().and_then(|fields| fields.keys().find(|name| !NAMES.contains(&name.as_str())))
    {
        let sentence = format!("The intake has no option “{name}”: its options are {}.", NAMES.join(", "));
        return Err(Problem::error("unknown_option", name.as_str(), sentence));
    }
    typed::<Of<Options>>(value).map(|read| read.0)
}

/// A type of the intake, so that it can be read here.
#[derive(Default)]
struct Of<T>(T);

impl Readable for Of<Options> {
    fn read(at: At<'_, '_>) -> Result<Of<Options>, Misfit> {
        let mut columns: Of<ColumnOptions> = Of::default();
        let mut decimal: Option<Of<Decimal>> = None;
        let mut decimals: Vec<Of<ColumnDecimal>> = Vec::new();
        let mut delimiter: Option<Of<Delimiter>> = None;
        let mut options = Options::default();
        at.object(&mut [
            ("columns", &mut columns),
            ("influence_names", &mut options.influence_names),
            ("decimal", &mut decimal),
            ("decimals", &mut decimals),
            ("delimiter", &mut delimiter),
            ("header", &mut options.header),
        ])?;
        options.columns = columns.0;
        options.decimal = decimal.map(|read| read.0);
        options.decimals = decimals.into_iter().map(|read| read.0).collect();
        options.delimiter = delimiter.map(|read| read.0);
        Ok(Of(options))
    }
}

impl Readable for Of<ColumnOptions> {
    fn read(at: At<'_, '_>) -> Result<Of<ColumnOptions>, Misfit> {
        let mut keys: [Option<Of<ColumnKey>>; 9] = Default::default();
        let mut indication: Option<Of<ColumnKeys>> = None;
        let mut influences: Option<Of<InfluenceColumns>> = None;
        let [reference, of_reference, of_indication, of_setting, repeats, approach, state, time, note] = &mut keys;
        at.object(&mut [
            ("reference", reference),
            ("indication", &mut indication),
            ("influences", &mut influences),
            ("reference_uncertainty", of_reference),
            ("indication_uncertainty", of_indication),
            ("setting_uncertainty", of_setting),
            ("repeats", repeats),
            ("approach", approach),
            ("state", state),
            ("time", time),
            ("note", note),
        ])?;
        let keys = keys.map(|key| key.map(|read| read.0));
        let [
            reference,
            reference_uncertainty,
            indication_uncertainty,
            setting_uncertainty,
            repeats,
            approach,
            state,
            time,
            note,
        ] = keys;
        Ok(Of(ColumnOptions {
            reference,
            indication: indication.map(|read| read.0),
            influences: influences.map(|read| read.0),
            reference_uncertainty,
            indication_uncertainty,
            setting_uncertainty,
            repeats,
            approach,
            state,
            time,
            note,
        }))
    }
}

impl Readable for Of<ColumnKey> {
    fn read(at: At<'_, '_>) -> Result<Of<ColumnKey>, Misfit> {
        match at.value() {
            Value::String(name) => Ok(Of(ColumnKey::Name(name.clone()))),
            _ => u32::read(at).map(|index| Of(ColumnKey::Index(index as usize))),
        }
    }
}

impl Readable for Of<ColumnKeys> {
    fn read(at: At<'_, '_>) -> Result<Of<ColumnKeys>, Misfit> {
        match at.value() {
            Value::Array(_) => keys(at).map(|keys| Of(ColumnKeys::Many(keys))),
            _ => Of::<ColumnKey>::read(at).map(|key| Of(ColumnKeys::One(key.0))),
        }
    }
}

impl Readable for Of<InfluenceColumns> {
    fn read(at: At<'_, '_>) -> Result<Of<InfluenceColumns>, Misfit> {
        match at.value() {
            Value::Array(_) => keys(at).map(|keys| Of(InfluenceColumns::Named(keys))),
            _ => {
                let map = BTreeMap::<String, Of<ColumnKey>>::read(at)?;
                Ok(Of(InfluenceColumns::Map(map.into_iter().map(|(name, key)| (name, key.0)).collect())))
            }
        }
    }
}

fn keys(at: At<'_, '_>) -> Result<Vec<ColumnKey>, Misfit> {
    Ok(Vec::<Of<ColumnKey>>::read(at)?.into_iter().map(|key| key.0).collect())
}

impl Readable for Of<ColumnDecimal> {
    fn read(at: At<'_, '_>) -> Result<Of<ColumnDecimal>, Misfit> {
        let column: Of<ColumnKey> = at.required("column")?;
        let decimal: Of<Decimal> = at.required("decimal")?;
        Ok(Of(ColumnDecimal { column: column.0, decimal: decimal.0 }))
    }
}

impl Readable for Of<Decimal> {
    fn read(at: At<'_, '_>) -> Result<Of<Decimal>, Misfit> {
        at.name(&[("point", Decimal::Point), ("comma", Decimal::Comma)]).map(Of)
    }
}

impl Readable for Of<Delimiter> {
    fn read(at: At<'_, '_>) -> Result<Of<Delimiter>, Misfit> {
        let names = [
            ("tab", Delimiter::Tab),
            ("semicolon", Delimiter::Semicolon),
            ("comma", Delimiter::Comma),
            ("bar", Delimiter::Bar),
            ("wide_space", Delimiter::WideSpace),
            ("space", Delimiter::Space),
            ("none", Delimiter::None),
        ];
        at.name(&names).map(Of)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use serde_json::json;

    /// Every answer that the intake offers comes back as it was meant.
    #[test]
    fn options_are_read_as_serde_reads_them() {
        for value in [
            json!({}),
            json!({ "columns": { "reference": 0, "indication": [1, "shown"], "influences": ["t", 3], "note": "n" } }),
            json!({
                "columns": {
                    "reference": "level", "indication": 1, "influences": { "temperature": 2 }, "approach": 4, "state": 5,
                    "time": "when", "repeats": 6, "reference_uncertainty": 7, "indication_uncertainty": 8,
                    "setting_uncertainty": "u"
                },
                "influence_names": ["temperature"], "decimal": "comma", "header": false,
                "decimals": [{ "column": 1, "decimal": "point" }, { "column": "x", "decimal": "comma" }]
            }),
            json!({ "delimiter": "tab" }),
            json!({ "delimiter": "semicolon" }),
            json!({ "delimiter": "comma" }),
            json!({ "delimiter": "bar" }),
            json!({ "delimiter": "wide_space" }),
            json!({ "delimiter": "space" }),
            json!({ "delimiter": "none" }),
        ] {
            let by_serde: Options = serde_json::from_value(value.clone()).expect("options");
            assert_eq!(options(&value), Ok(by_serde));
        }
        assert_eq!(options(&Value::Null), Ok(Options::default()));
    }

    #[test]
    fn what_is_no_option_is_refused() {
        for value in [
            json!({ "colums": {} }),
            json!({ "decimal": "dot" }),
            json!({ "columns": { "reference": 1.5 } }),
            json!({ "decimals": [{ "column": 1 }] }),
            json!([1]),
        ] {
            assert!(options(&value).is_err(), "{value}");
            assert!(serde_json::from_value::<Options>(value).is_err());
        }
    }
}
