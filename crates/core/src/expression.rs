//! A term of a shape in mathematical notation: read, evaluated with its slope, shown.
//!
//! The grammar and the domain of each function stand in `TERMS.md`. Numbers are the doubles nearest to their decimals;
//! everything computed from them is double-double. A polynomial term scales exactly when its variable is scaled by a
//! power of two. Where a term is undefined (ln 0, 1/0) its value is not finite; nothing here panics. Slopes are exact
//! derivatives by forward differentiation (A. Griewank, A. Walther, "Evaluating Derivatives", ch. 3), not differences.

mod display;
mod dual;
mod parse;
#[cfg(test)]
mod tests;
mod unit;

use crate::dd::Dd;
use crate::elementary;
use dual::Dual;

/// The most characters a term may have.
pub const MOST_CHARACTERS: usize = 500;

/// The most parentheses, signs and exponents that may stand inside one another.
pub const MOST_NESTING: usize = 50;

/// The largest magnitude of an exponent.
pub const LARGEST_EXPONENT: f64 = 1000.0;

/// A term that has been read, over one variable and named influence quantities.
#[derive(Clone, Debug, PartialEq)]
pub struct Expression {
    root: Node,
    variable: String,
    influences: Vec<String>,
}

/// Why a text is no term.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct TermError {
    /// A stable name for programs.
    pub code: &'static str,
    /// Where, in characters from 0.
    pub position: usize,
    /// What is wrong and what to do; counts characters from 1.
    pub sentence: String,
}

impl std::fmt::Display for TermError {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        f.write_str(&self.sentence)
    }
}

impl std::error::Error for TermError {}

/// One operation and what it is applied to.
#[derive(Clone, Debug, PartialEq)]
enum Node {
    Number(f64),
    Pi,
    Variable,
    /// By its place in the list of influence quantities.
    Influence(usize),
    Negative(Box<Node>),
    Binary(Operation, Box<Node>, Box<Node>),
    /// A base, the exponent as written, and that exponent's value.
    Power(Box<Node>, Box<Node>, Dd),
    Call(Function, Box<Node>),
}

/// An operation between two terms.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Operation {
    Add,
    Subtract,
    Multiply,
    Divide,
}

/// A function that a term may call.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Function {
    Ln,
    Log10,
    Exp,
    Sqrt,
    Sin,
    Cos,
    Tan,
    Abs,
}

impl Function {
    const ALL: [Function; 8] = [
        Function::Ln,
        Function::Log10,
        Function::Exp,
        Function::Sqrt,
        Function::Sin,
        Function::Cos,
        Function::Tan,
        Function::Abs,
    ];

    fn name(self) -> &'static str {
        match self {
            Function::Ln => "ln",
            Function::Log10 => "log10",
            Function::Exp => "exp",
            Function::Sqrt => "sqrt",
            Function::Sin => "sin",
            Function::Cos => "cos",
            Function::Tan => "tan",
            Function::Abs => "abs",
        }
    }
}

impl Expression {
    /// Reads a term over `variable` (`x`, or `y` where the curve is a function of the indication) and the names of
    /// influence quantities.
    ///
    /// # Errors
    /// A typed error with the place of the first thing that is no part of the notation of `TERMS.md`.
    pub fn parse(text: &str, variable: &str, influences: &[String]) -> Result<Expression, TermError> {
        let root = parse::parse(text, variable, influences)?;
        Ok(Expression { root, variable: variable.to_owned(), influences: influences.to_vec() })
    }

    /// The value of the term, not finite where it is undefined. `influences` in the order given to `parse`; one that is
    /// missing counts as NaN.
    pub fn evaluate(&self, variable: f64, influences: &[f64]) -> Dd {
        finite_or_not(self.root.evaluate(Dual::constant(Dd::from(variable)), influences).value())
    }

    /// The value of the term and its derivative by the variable; either is not finite where it is undefined. At the
    /// kink of `abs` the slope is the mean of both sides, zero.
    pub fn evaluate_with_slope(&self, variable: f64, influences: &[f64]) -> (Dd, Dd) {
        let result = self.root.evaluate(Dual::variable(Dd::from(variable)), influences);
        (finite_or_not(result.value()), finite_or_not(result.slope()))
    }

    /// The degree k where the term is x^k written as a power or a product (`1` has degree 0).
    pub fn monomial_degree(&self) -> Option<u32> {
        self.root.monomial_degree()
    }

    /// Neither the variable nor an influence quantity occurs.
    pub fn is_constant(&self) -> bool {
        !self.depends_on_variable() && self.influence_indices().is_empty()
    }

    /// The variable occurs.
    pub fn depends_on_variable(&self) -> bool {
        self.root.any(&|node| *node == Node::Variable)
    }

    /// The influence quantities that occur, by their place in the list given to `parse`, rising.
    pub fn influence_indices(&self) -> Vec<usize> {
        (0..self.influences.len()).filter(|&i| self.root.any(&|node| *node == Node::Influence(i))).collect()
    }

    /// The term for people to read, with raised exponents and `·`: `x²`, `ln(x)`, `x·temperature`. Reads back as the
    /// same term.
    pub fn display(&self) -> String {
        display::display(&self.root, &self.variable, &self.influences)
    }

    /// The unit of this term's coefficient: that of the response divided by that of the term, `mA/bar²`. Inside
    /// functions other than `sqrt` and `abs` the numerical value in the stated unit stands, which has no unit. Empty
    /// where it is one, or where it cannot be said, as in `x + x^2`.
    pub fn unit(&self, response_unit: &str, variable_unit: &str, influence_units: &[String]) -> String {
        unit::of_coefficient(&self.root, response_unit, variable_unit, influence_units)
    }

    /// Whether the term takes a numerical value out of its unit (`ln(x)` of a level in mm), so that its coefficient
    /// holds for that unit only.
    pub fn takes_numerical_value(&self) -> bool {
        self.root.any(&|node| match node {
            Node::Call(Function::Sqrt | Function::Abs, _) => false,
            Node::Call(_, argument) => argument.any(&|inner| matches!(inner, Node::Variable | Node::Influence(_))),
            _ => false,
        })
    }
}

/// A value whose leading part tells alone whether it is finite, so that the nearest double does not hide an overflow.
fn finite_or_not(value: Dd) -> Dd {
    if value.is_finite() {
        value
    } else if value.hi().is_infinite() {
        Dd::from(value.hi())
    } else {
        Dd::from(f64::NAN)
    }
}

/// Twice the exponent where that is a whole number, for the powers that need neither exp nor ln.
fn halves(exponent: Dd) -> Option<f64> {
    let twice = exponent.scale(2.0);
    let is_whole = twice.lo() == 0.0 && twice.hi() == twice.hi().trunc();
    (is_whole && twice.hi().abs() <= 2.0 * (LARGEST_EXPONENT + 1.0)).then_some(twice.hi())
}

/// `base` to a constant power: repeated products for whole exponents and halves, exp and ln otherwise.
fn power(base: Dd, exponent: Dd) -> Dd {
    let Some(twice) = halves(exponent) else {
        return elementary::pow(base, exponent);
    };
    let magnitude = twice.abs() as u32;
    let raised = if magnitude.is_multiple_of(2) { base.powi(magnitude / 2) } else { base.sqrt().powi(magnitude) };
    if twice < 0.0 { Dd::ONE / raised } else { raised }
}

impl Node {
    /// Whether this holds for the node or for anything below it; exponents are constants and are not visited.
    fn any(&self, condition: &dyn Fn(&Node) -> bool) -> bool {
        condition(self)
            || match self {
                Node::Number(_) | Node::Pi | Node::Variable | Node::Influence(_) => false,
                Node::Negative(inner) | Node::Power(inner, _, _) | Node::Call(_, inner) => inner.any(condition),
                Node::Binary(_, left, right) => left.any(condition) || right.any(condition),
            }
    }

    fn evaluate(&self, variable: Dual, influences: &[f64]) -> Dual {
        match self {
            Node::Number(value) => Dual::constant(Dd::from(*value)),
            Node::Pi => Dual::constant(elementary::PI),
            Node::Variable => variable,
            Node::Influence(i) => Dual::constant(Dd::from(influences.get(*i).copied().unwrap_or(f64::NAN))),
            Node::Negative(inner) => -inner.evaluate(variable, influences),
            Node::Binary(operation, left, right) => {
                let (left, right) = (left.evaluate(variable, influences), right.evaluate(variable, influences));
                match operation {
                    Operation::Add => left + right,
                    Operation::Subtract => left - right,
                    Operation::Multiply => left * right,
                    Operation::Divide => left / right,
                }
            }
            Node::Power(base, _, exponent) => base.evaluate(variable, influences).power(*exponent),
            Node::Call(function, argument) => argument.evaluate(variable, influences).call(*function),
        }
    }

    fn monomial_degree(&self) -> Option<u32> {
        match self {
            Node::Number(1.0) => Some(0),
            Node::Variable => Some(1),
            Node::Binary(Operation::Multiply, left, right) => {
                left.monomial_degree()?.checked_add(right.monomial_degree()?)
            }
            Node::Power(base, _, exponent) => {
                let (k, rest) = (exponent.hi(), exponent.lo());
                let is_natural = rest == 0.0 && k == k.trunc() && (0.0..=LARGEST_EXPONENT).contains(&k);
                if is_natural { base.monomial_degree()?.checked_mul(k as u32) } else { None }
            }
            _ => None,
        }
    }
}
