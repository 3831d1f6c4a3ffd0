//! The unit of a term's coefficient, from the exponents of the variable and of the influence quantities in the term.

use super::{Function, Node, Operation};
use crate::display::raised;
use std::collections::BTreeMap;

/// Exponents by quantity: `None` is the variable, `Some(i)` an influence quantity.
type Dimension = BTreeMap<Option<usize>, f64>;

pub(super) fn of_coefficient(root: &Node, response: &str, variable: &str, influences: &[String]) -> String {
    let Some(dimension) = dimension(root) else {
        return String::new();
    };
    let unit_of = |quantity: &Option<usize>| match quantity {
        None => variable.trim(),
        Some(i) => influences.get(*i).map_or("", |unit| unit.trim()),
    };
    let mut powers: Vec<(&str, f64)> = vec![(response.trim(), 1.0)];
    for (quantity, exponent) in &dimension {
        let unit = unit_of(quantity);
        // A slope keeps both its units, mm/mm: it is read as a ratio of two kinds of length.
        let is_ratio = *exponent == 1.0 && dimension.len() == 1;
        match powers.iter_mut().find(|(known, _)| *known == unit) {
            Some((_, total)) if !is_ratio => *total -= exponent,
            _ => powers.push((unit, -exponent)),
        }
    }
    powers.retain(|(unit, exponent)| !unit.is_empty() && *exponent != 0.0);
    quotient(&powers)
}

/// The exponents of a term, `None` where its parts have different units.
fn dimension(node: &Node) -> Option<Dimension> {
    match node {
        Node::Number(_) | Node::Pi => Some(Dimension::new()),
        Node::Variable => Some(Dimension::from([(None, 1.0)])),
        Node::Influence(i) => Some(Dimension::from([(Some(*i), 1.0)])),
        Node::Negative(inner) | Node::Call(Function::Abs, inner) => dimension(inner),
        Node::Call(Function::Sqrt, inner) => dimension(inner).map(|inner| times(inner, 0.5)),
        Node::Call(..) => Some(Dimension::new()),
        Node::Power(base, _, exponent) => dimension(base).map(|base| times(base, exponent.to_f64())),
        Node::Binary(Operation::Add | Operation::Subtract, left, right) => {
            let (left, right) = (dimension(left)?, dimension(right)?);
            (left == right).then_some(left)
        }
        Node::Binary(Operation::Multiply, left, right) => Some(product(dimension(left)?, dimension(right)?)),
        Node::Binary(Operation::Divide, left, right) => Some(product(dimension(left)?, times(dimension(right)?, -1.0))),
    }
}

fn times(mut dimension: Dimension, factor: f64) -> Dimension {
    dimension.values_mut().for_each(|exponent| *exponent *= factor);
    dimension.retain(|_, exponent| *exponent != 0.0);
    dimension
}

fn product(mut left: Dimension, right: Dimension) -> Dimension {
    for (quantity, exponent) in right {
        *left.entry(quantity).or_default() += exponent;
    }
    left.retain(|_, exponent| *exponent != 0.0);
    left
}

/// Units with their exponents as one text: `mA/(bar²·°C)`, `1/mm`.
fn quotient(powers: &[(&str, f64)]) -> String {
    let side = |wanted: f64| -> Vec<String> {
        let of_side = powers.iter().filter(|(_, exponent)| exponent * wanted > 0.0);
        of_side.map(|(unit, exponent)| raised_unit(unit, exponent.abs())).collect()
    };
    let (above, below) = (side(1.0), side(-1.0));
    let numerator = if above.is_empty() && !below.is_empty() { "1".to_owned() } else { above.join("·") };
    match below.as_slice() {
        [] => numerator,
        [one] if !one.contains(['/', '·', ' ']) || one.starts_with('(') => {
            format!("{numerator}/{one}")
        }
        _ => format!("{numerator}/({})", below.join("·")),
    }
}

fn raised_unit(unit: &str, exponent: f64) -> String {
    let unit = if exponent != 1.0 && unit.contains(['/', '·', ' ', '²', '³', '^']) {
        format!("({unit})")
    } else {
        unit.to_owned()
    };
    if exponent == 1.0 {
        unit
    } else if exponent == exponent.trunc() {
        format!("{unit}{}", raised(&format!("{exponent}")))
    } else {
        format!("{unit}^{exponent}")
    }
}
