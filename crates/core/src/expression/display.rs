//! A term written for people, in notation that reads back as the same term.

use super::{Node, Operation};
use crate::display::raised;

/// How tightly the outermost operation binds.
#[derive(Clone, Copy, PartialEq, PartialOrd)]
enum Binding {
    Sum,
    Negative,
    Product,
    Power,
    Atom,
}

pub(super) fn display(root: &Node, variable: &str, influences: &[String]) -> String {
    Writer { variable, influences }.write(root)
}

/// A number in the shortest decimals that read back as the same double.
fn number(value: f64) -> String {
    let plain = (1e-6..1e21).contains(&value) || value == 0.0;
    if plain { format!("{value}") } else { format!("{value:e}") }
}

fn binding(node: &Node) -> Binding {
    match node {
        Node::Number(_) | Node::Pi | Node::Variable | Node::Influence(_) | Node::Call(..) => Binding::Atom,
        Node::Negative(_) => Binding::Negative,
        Node::Binary(Operation::Add | Operation::Subtract, ..) => Binding::Sum,
        Node::Binary(..) => Binding::Product,
        Node::Power(..) => Binding::Power,
    }
}

struct Writer<'a> {
    variable: &'a str,
    influences: &'a [String],
}

impl Writer<'_> {
    fn write(&self, node: &Node) -> String {
        match node {
            Node::Number(value) => number(*value),
            Node::Pi => "pi".to_owned(),
            Node::Variable => self.variable.to_owned(),
            Node::Influence(i) => self.influences.get(*i).cloned().unwrap_or_default(),
            Node::Negative(inner) => format!("−{}", self.at_least(Binding::Power, inner)),
            Node::Binary(operation, left, right) => self.binary(*operation, left, right),
            Node::Power(base, exponent, _) => {
                format!("{}{}", self.at_least(Binding::Atom, base), self.exponent(exponent))
            }
            Node::Call(function, argument) => {
                format!("{}({})", function.name(), self.write(argument))
            }
        }
    }

    fn binary(&self, operation: Operation, left: &Node, right: &Node) -> String {
        let (sign, of_left, of_right) = match operation {
            Operation::Add => (" + ", Binding::Sum, Binding::Product),
            Operation::Subtract => (" − ", Binding::Sum, Binding::Product),
            Operation::Multiply => ("·", Binding::Negative, Binding::Power),
            Operation::Divide => ("/", Binding::Negative, Binding::Power),
        };
        format!("{}{sign}{}", self.at_least(of_left, left), self.at_least(of_right, right))
    }

    /// The node, in parentheses where it binds less tightly than its place asks for.
    fn at_least(&self, wanted: Binding, node: &Node) -> String {
        let text = self.write(node);
        if binding(node) < wanted { format!("({text})") } else { text }
    }

    fn exponent(&self, exponent: &Node) -> String {
        let (sign, magnitude) = match exponent {
            Node::Negative(inner) => ("−", inner.as_ref()),
            other => ("", other),
        };
        match magnitude {
            Node::Number(value) if *value == value.trunc() => raised(&format!("{sign}{value}")),
            Node::Number(_) | Node::Pi => format!("^{sign}{}", self.write(magnitude)),
            _ => format!("^({})", self.write(exponent)),
        }
    }
}
