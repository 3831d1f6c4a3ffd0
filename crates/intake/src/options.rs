//! What the caller already knows or has answered: which column is what, the decimal mark, the delimiter, the heading.

use crate::delimiter::Delimiter;
use crate::number::Decimal;
use serde::{Deserialize, Serialize};
use std::collections::BTreeMap;

/// Answers and prior knowledge. Everything may be absent; then it is recognised, or asked for.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize)]
#[serde(default, deny_unknown_fields)]
pub struct Options {
    /// Which column is what. A column that is named here is not matched by its name.
    #[serde(skip_serializing_if = "ColumnOptions::is_empty")]
    pub columns: ColumnOptions,
    /// Names of the instrument's influence quantities: columns of these names are taken.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub influence_names: Vec<String>,
    /// The decimal mark of every column that `decimals` does not name.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub decimal: Option<Decimal>,
    /// The decimal mark of single columns.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub decimals: Vec<ColumnDecimal>,
    /// What separates the cells.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub delimiter: Option<Delimiter>,
    /// Whether the first row is a heading.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub header: Option<bool>,
}

/// A column: a number is its index from 0 as in [`crate::Column::index`]; a text is its name or, where no column has
/// that name, its number as people count, from 1.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(untagged)]
pub enum ColumnKey {
    /// From 0.
    Index(usize),
    /// Name, with or without its unit, capitals or not; or number from 1.
    Name(String),
}

/// One column or several.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(untagged)]
pub enum ColumnKeys {
    /// One column.
    One(ColumnKey),
    /// Several columns.
    Many(Vec<ColumnKey>),
}

impl ColumnKeys {
    /// The columns in order.
    pub fn keys(&self) -> &[ColumnKey] {
        match self {
            ColumnKeys::One(key) => std::slice::from_ref(key),
            ColumnKeys::Many(keys) => keys,
        }
    }
}

/// Columns of influence quantities.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(untagged)]
pub enum InfluenceColumns {
    /// Each influence is called as its column is.
    Named(Vec<ColumnKey>),
    /// Column by name of the influence.
    Map(BTreeMap<String, ColumnKey>),
}

/// Which column is what.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize)]
#[serde(default, deny_unknown_fields)]
pub struct ColumnOptions {
    /// Value of the measurement standard.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub reference: Option<ColumnKey>,
    /// What the instrument showed; several columns are raw repeats of one point.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub indication: Option<ColumnKeys>,
    /// Influence quantities.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub influences: Option<InfluenceColumns>,
    /// Standard uncertainty of the reference value, independent from point to point.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub reference_uncertainty: Option<ColumnKey>,
    /// Known standard uncertainty of the indication.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub indication_uncertainty: Option<ColumnKey>,
    /// Standard uncertainty of the error that the points of one setting share.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub setting_uncertainty: Option<ColumnKey>,
    /// Number of indications of which only the mean is known.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub repeats: Option<ColumnKey>,
    /// Direction of approach.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub approach: Option<ColumnKey>,
    /// As found or as left.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub state: Option<ColumnKey>,
    /// When the point was taken.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub time: Option<ColumnKey>,
    /// Free text.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub note: Option<ColumnKey>,
}

impl ColumnOptions {
    fn is_empty(&self) -> bool {
        *self == ColumnOptions::default()
    }
}

/// The decimal mark of one column.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct ColumnDecimal {
    /// Which column.
    pub column: ColumnKey,
    /// Its decimal mark.
    pub decimal: Decimal,
}

/// Something that only the user can know.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Question {
    /// A stable name for programs: `delimiter`, `decimal`, `roles`, `reference`, `indication`.
    pub code: String,
    /// Index of the column in question, from 0; null where it is about several or none.
    pub column: Option<usize>,
    /// The question in one sentence.
    pub sentence: String,
    /// The answers to choose from.
    pub choices: Vec<Choice>,
}

/// One possible answer.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Choice {
    /// What to show.
    pub label: String,
    /// The whole options to read the same text again with.
    pub option: Options,
}
