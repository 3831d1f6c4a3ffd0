//! Shapes: families of curves that are linear in their coefficients, f(x) = Σ w_j φ_j(x, z).
//!
//! A shape turns an argument x (in the unit of the argument of the fit) and the influence quantities z into a row of p
//! basis functions, in double-double, and the same for the slope ∂φ/∂x. Where a basis function is undefined the entry
//! is not finite; the caller says at which point.

use crate::dd::Dd;
use crate::expression::Expression;
use crate::problem::Problem;
use crate::visit::{Family, MOST_TERMS, Term, Terms};

/// A family of curves that is linear in its coefficients.
pub trait Shape {
    /// Number p of coefficients.
    fn columns(&self) -> usize;

    /// The p basis functions at an argument; influence quantities in the order of their names.
    fn row(&self, argument: f64, influences: &[f64]) -> Vec<Dd>;

    /// The p basis functions and their derivatives with respect to the argument.
    fn row_with_slope(&self, argument: f64, influences: &[f64]) -> (Vec<Dd>, Vec<Dd>);

    /// The p terms as they are written.
    fn terms(&self) -> &[String];

    /// The p terms for people: `x²`.
    fn display_terms(&self) -> Vec<String>;

    /// Units of the p coefficients.
    fn units(&self, response: &str, argument: &str, influences: &[String]) -> Vec<String>;

    /// Index of the constant term, if there is one.
    fn constant(&self) -> Option<usize>;

    /// Indices of the influence quantities that the shape uses.
    fn influences_used(&self) -> Vec<usize>;
}

/// A list of terms in mathematical notation.
#[derive(Clone, Debug)]
pub struct TermList {
    written: Vec<String>,
    expressions: Vec<Expression>,
}

impl TermList {
    /// Reads the terms of a visit, written in `variable` (`x` or `y`) and the names of the influence quantities.
    ///
    /// # Errors
    /// A term that cannot be read, with its place and position; no term; too many; the same term twice; a family that
    /// is not computed.
    pub fn new(terms: &Terms, variable: &str, influences: &[String]) -> Result<TermList, Problem> {
        let mut written = Vec::new();
        let mut places = Vec::new();
        match terms {
            Terms::One(family) => expand(family, variable, "model.terms", &mut written)?,
            Terms::List(list) => {
                for (index, term) in list.iter().enumerate() {
                    let place = format!("model.terms[{index}]");
                    match term {
                        Term::Expression(text) => written.push(text.clone()),
                        Term::Family(family) => expand(family, variable, &place, &mut written)?,
                    }
                    places.resize(written.len(), place);
                }
            }
        }
        places.resize(written.len(), "model.terms".to_owned());
        if written.is_empty() {
            return Err(Problem::error(
                "no_terms",
                "model.terms",
                "The shape has no terms: write at least one, for instance 1 and x.",
            ));
        }
        if written.len() > MOST_TERMS {
            let sentence = format!("The shape has {} terms; at most {MOST_TERMS} can be used.", written.len());
            return Err(Problem::error("too_many_terms", "model.terms", sentence).with("terms", written.len()));
        }
        let mut expressions: Vec<Expression> = Vec::with_capacity(written.len());
        for (text, place) in written.iter().zip(&places) {
            let expression = Expression::parse(text, variable, influences).map_err(|e| {
                Problem::error(e.code, place.clone(), e.sentence)
                    .with("position", e.position)
                    .with("term", text.as_str())
            })?;
            if expressions.contains(&expression) {
                let sentence = format!("The term {text} stands in the shape twice: leave one of them out.");
                return Err(Problem::error("term_twice", place.clone(), sentence).with("term", text.as_str()));
            }
            expressions.push(expression);
        }
        Ok(TermList { written, expressions })
    }
}

/// Writes the terms of a family.
fn expand(family: &Family, variable: &str, place: &str, written: &mut Vec<String>) -> Result<(), Problem> {
    match family {
        Family::Polynomial { degree } if *degree < MOST_TERMS as u32 => {
            written.extend((0..=*degree).map(|k| match k {
                0 => "1".to_owned(),
                1 => variable.to_owned(),
                _ => format!("{variable}^{k}"),
            }));
            Ok(())
        }
        Family::Polynomial { degree } => {
            let sentence =
                format!("A polynomial of degree {degree} is asked for; the highest degree is {}.", MOST_TERMS - 1);
            Err(Problem::error("degree_too_high", place, sentence).with("degree", f64::from(*degree)))
        }
        Family::Spline { .. } | Family::BrokenLine { .. } => Err(Problem::error(
            "shape_not_computed",
            place,
            "Splines and broken lines are kept in the visit but not computed by this version: choose terms or a polynomial.",
        )),
    }
}

impl Shape for TermList {
    fn columns(&self) -> usize {
        self.expressions.len()
    }

    fn row(&self, argument: f64, influences: &[f64]) -> Vec<Dd> {
        self.expressions.iter().map(|e| e.evaluate(argument, influences)).collect()
    }

    fn row_with_slope(&self, argument: f64, influences: &[f64]) -> (Vec<Dd>, Vec<Dd>) {
        self.expressions.iter().map(|e| e.evaluate_with_slope(argument, influences)).unzip()
    }

    fn terms(&self) -> &[String] {
        &self.written
    }

    fn display_terms(&self) -> Vec<String> {
        self.expressions.iter().map(Expression::display).collect()
    }

    fn units(&self, response: &str, argument: &str, influences: &[String]) -> Vec<String> {
        self.expressions.iter().map(|e| e.unit(response, argument, influences)).collect()
    }

    fn constant(&self) -> Option<usize> {
        self.expressions.iter().position(Expression::is_constant)
    }

    fn influences_used(&self) -> Vec<usize> {
        let mut used: Vec<usize> = self.expressions.iter().flat_map(Expression::influence_indices).collect();
        used.sort_unstable();
        used.dedup();
        used
    }
}

/// `a + b·x + c·x²`: the curve as people write it.
pub fn formula(response: &str, shape: &dyn Shape) -> String {
    let letters = "abcdefghijklmn";
    let parts: Vec<String> = letters
        .chars()
        .zip(shape.display_terms())
        .map(|(letter, term)| if term == "1" { letter.to_string() } else { format!("{letter}·{}", bracketed(&term)) })
        .collect();
    format!("{response} = {}", parts.join(" + "))
}

/// A term that is itself a sum, in brackets.
fn bracketed(term: &str) -> String {
    let sum = {
        let mut depth = 0_i32;
        term.chars().enumerate().any(|(i, c)| {
            depth += i32::from(c == '(') - i32::from(c == ')');
            depth == 0 && i > 0 && matches!(c, '+' | '-' | '\u{2212}')
        })
    };
    if sum || term.starts_with(['-', '\u{2212}']) { format!("({term})") } else { term.to_owned() }
}
