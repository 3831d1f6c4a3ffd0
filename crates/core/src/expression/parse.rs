//! Reading a term: a scanner and a recursive descent over the grammar of `TERMS.md`, one function a rule.

use super::dual::Dual;
use super::{Function, LARGEST_EXPONENT, MOST_CHARACTERS, MOST_NESTING, Node, Operation, TermError};
use crate::elementary;

const SUPERSCRIPTS: [char; 10] = ['⁰', '¹', '²', '³', '⁴', '⁵', '⁶', '⁷', '⁸', '⁹'];

/// Characters that end a name, so that a name holding one cannot be written in a term.
const NEVER_IN_A_NAME: &str = "+-*/^()·×−,;⁻⁰¹²³⁴⁵⁶⁷⁸⁹";

/// How much of a long term an error repeats.
const MOST_REPEATED: usize = 60;

pub(super) fn parse(text: &str, variable: &str, influences: &[String]) -> Result<Node, TermError> {
    let mut parser = Parser {
        characters: text.chars().collect(),
        variable,
        influences,
        position: 0,
        token: Token::End,
        start: 0,
        nesting: 0,
    };
    if parser.characters.iter().all(|c| c.is_whitespace()) {
        let sentence = format!("The term is empty: write for example {variable} or {variable}^2.");
        return Err(TermError { code: "empty_term", position: 0, sentence });
    }
    if parser.characters.len() > MOST_CHARACTERS {
        let what = format!("more than {MOST_CHARACTERS} characters stand");
        return Err(parser.error_at("term_too_long", MOST_CHARACTERS, &what, "split it into several terms"));
    }
    parser.advance()?;
    let root = parser.sum()?;
    match parser.token {
        Token::End => Ok(root),
        Token::Close => {
            Err(parser.error("unmatched_parenthesis", "a closing parenthesis without an opening one stands", ""))
        }
        _ => Err(parser.missing_operator()),
    }
}

#[derive(Clone, Debug, PartialEq)]
enum Token {
    Number(f64),
    Name(String),
    Plus,
    Minus,
    Times,
    Over,
    Caret,
    /// Raised digits, `²` or `⁻¹`.
    Raised(f64),
    Open,
    Close,
    End,
}

struct Parser<'a> {
    characters: Vec<char>,
    variable: &'a str,
    influences: &'a [String],
    /// The next character to scan.
    position: usize,
    /// The token in hand, and where it starts.
    token: Token,
    start: usize,
    nesting: usize,
}

fn starts_name(c: char) -> bool {
    c.is_alphabetic() || c == '_'
}

fn continues_name(c: char) -> bool {
    (c.is_alphanumeric() || c == '_') && !SUPERSCRIPTS.contains(&c)
}

/// Whether a name of an influence quantity can stand in a term.
fn can_be_written(name: &str) -> bool {
    name.chars().next().is_some_and(starts_name) && !name.chars().any(|c| NEVER_IN_A_NAME.contains(c))
}

/// The grammar, from the loosest binding to the tightest.
impl Parser<'_> {
    /// `sum = product { ("+" | "-") product }`
    fn sum(&mut self) -> Result<Node, TermError> {
        let mut left = self.product()?;
        loop {
            let operation = match self.token {
                Token::Plus => Operation::Add,
                Token::Minus => Operation::Subtract,
                _ => return Ok(left),
            };
            self.advance()?;
            left = Node::Binary(operation, Box::new(left), Box::new(self.product()?));
        }
    }

    /// `product = signed { ("*" | "/") signed }`
    fn product(&mut self) -> Result<Node, TermError> {
        let mut left = self.signed()?;
        loop {
            let operation = match self.token {
                Token::Times => Operation::Multiply,
                Token::Over => Operation::Divide,
                _ => return Ok(left),
            };
            self.advance()?;
            left = Node::Binary(operation, Box::new(left), Box::new(self.signed()?));
        }
    }

    /// `signed = "-" signed | power`
    fn signed(&mut self) -> Result<Node, TermError> {
        self.nested(|parser| {
            if parser.token != Token::Minus {
                return parser.power();
            }
            parser.advance()?;
            Ok(Node::Negative(Box::new(parser.signed()?)))
        })
    }

    /// `power = atom [ raised | "^" exponent ]`
    fn power(&mut self) -> Result<Node, TermError> {
        let base = self.atom()?;
        match self.token {
            Token::Raised(value) => {
                let start = self.start;
                let magnitude = Node::Number(value.abs());
                let exponent = if value < 0.0 { Node::Negative(Box::new(magnitude)) } else { magnitude };
                self.advance()?;
                if matches!(self.token, Token::Raised(_) | Token::Caret) {
                    let remedy = "say with parentheses which comes first";
                    return Err(self.error("ambiguous_power", "a second exponent stands", remedy));
                }
                self.raise(base, exponent, start)
            }
            Token::Caret => {
                self.advance()?;
                let start = self.start;
                let exponent = self.exponent()?;
                self.raise(base, exponent, start)
            }
            _ => Ok(base),
        }
    }

    /// `exponent = "-" exponent | power`
    fn exponent(&mut self) -> Result<Node, TermError> {
        self.nested(|parser| {
            if parser.token != Token::Minus {
                return parser.power();
            }
            parser.advance()?;
            Ok(Node::Negative(Box::new(parser.exponent()?)))
        })
    }

    /// `atom = number | "pi" | name | function "(" sum ")" | "(" sum ")"`
    fn atom(&mut self) -> Result<Node, TermError> {
        match self.token.clone() {
            Token::Number(value) => {
                self.advance()?;
                Ok(Node::Number(value))
            }
            Token::Name(name) => self.named(&name),
            Token::Open => self.parenthesis(),
            _ => Err(self.error("operand_expected", "a number or a name is expected", "")),
        }
    }

    /// `"(" sum ")"`
    fn parenthesis(&mut self) -> Result<Node, TermError> {
        let opened = self.start;
        self.advance()?;
        let inner = self.sum()?;
        match self.token {
            Token::Close => {
                self.advance()?;
                Ok(inner)
            }
            Token::End => {
                let what = "a parenthesis that is never closed stands";
                Err(self.error_at("unmatched_parenthesis", opened, what, "write ) where it ends"))
            }
            _ => Err(self.missing_operator()),
        }
    }

    /// A variable, an influence quantity, a constant or a function call.
    fn named(&mut self, name: &str) -> Result<Node, TermError> {
        let start = self.start;
        let influence = self.influences.iter().position(|known| known == name);
        if influence.is_some() && (name == self.variable || name == "pi") {
            let what = format!("a name with two meanings, \"{name}\", stands");
            return Err(self.error("ambiguous_name", &what, "rename the influence quantity of that name"));
        }
        self.advance()?;
        if let Some(function) = Function::ALL.into_iter().find(|function| function.name() == name) {
            if self.token == Token::Open {
                return Ok(Node::Call(function, Box::new(self.parenthesis()?)));
            }
            if influence.is_none() {
                let what = format!("the function {name} without an argument in parentheses stands");
                let remedy = format!("write for example {name}({})", self.variable);
                return Err(self.error_at("argument_expected", start, &what, &remedy));
            }
        }
        match influence {
            Some(i) => Ok(Node::Influence(i)),
            None if name == self.variable => Ok(Node::Variable),
            None if name == "pi" => Ok(Node::Pi),
            None => Err(self.unknown_name(name, start)),
        }
    }

    /// A power with its exponent's value, which must be a constant.
    fn raise(&self, base: Node, exponent: Node, start: usize) -> Result<Node, TermError> {
        if exponent.any(&|node| matches!(node, Node::Variable | Node::Influence(_))) {
            let what = "an exponent that is no constant stands";
            return Err(self.error_at(
                "exponent_not_constant",
                start,
                what,
                "write a power that varies as exp(… * ln(…))",
            ));
        }
        let value = exponent.evaluate(Dual::constant(elementary::PI), &[]).value();
        if !value.is_finite() {
            return Err(self.error_at("exponent_undefined", start, "an exponent that has no value stands", ""));
        }
        if value.hi().abs() > LARGEST_EXPONENT {
            let what = format!("an exponent larger than {LARGEST_EXPONENT} stands");
            return Err(self.error_at("exponent_too_large", start, &what, ""));
        }
        Ok(Node::Power(Box::new(base), Box::new(exponent), value))
    }

    /// Runs a rule one level further in, so that no text can exhaust the stack.
    fn nested(&mut self, rule: impl FnOnce(&mut Self) -> Result<Node, TermError>) -> Result<Node, TermError> {
        if self.nesting >= MOST_NESTING {
            let what = format!("more than {MOST_NESTING} parentheses or signs stand inside one another");
            return Err(self.error("nested_too_deeply", &what, "write it with fewer"));
        }
        self.nesting += 1;
        let result = rule(self);
        self.nesting -= 1;
        result
    }
}

/// The scanner.
impl Parser<'_> {
    fn peek(&self, ahead: usize) -> Option<char> {
        self.characters.get(self.position + ahead).copied()
    }

    /// Takes the next token in hand.
    fn advance(&mut self) -> Result<(), TermError> {
        while self.peek(0).is_some_and(char::is_whitespace) {
            self.position += 1;
        }
        self.start = self.position;
        let Some(c) = self.peek(0) else {
            self.token = Token::End;
            return Ok(());
        };
        let is_decimal = c.is_ascii_digit() || (c == '.' && self.peek(1).is_some_and(|d| d.is_ascii_digit()));
        self.token = if is_decimal {
            self.number()?
        } else if starts_name(c) {
            self.name()
        } else if c == '⁻' || SUPERSCRIPTS.contains(&c) {
            self.raised()?
        } else {
            self.symbol(c)?
        };
        Ok(())
    }

    fn symbol(&mut self, c: char) -> Result<Token, TermError> {
        let token = match c {
            '+' => Token::Plus,
            '-' | '−' => Token::Minus,
            '*' | '·' | '×' => Token::Times,
            '/' => Token::Over,
            '^' => Token::Caret,
            '(' => Token::Open,
            ')' => Token::Close,
            ',' => {
                return Err(self.error("comma", "a comma stands", "decimals are written with a point"));
            }
            _ => {
                let what = format!("the character \"{}\" has no meaning", c.escape_debug());
                return Err(self.error("unexpected_character", &what, ""));
            }
        };
        self.position += 1;
        Ok(token)
    }

    /// `number = ( digits [ "." [ digits ] ] | "." digits ) [ ("e" | "E") [ "+" | "-" ] digits ]`
    fn number(&mut self) -> Result<Token, TermError> {
        self.skip_digits();
        if self.peek(0) == Some('.') {
            self.position += 1;
            self.skip_digits();
        }
        if matches!(self.peek(0), Some('e' | 'E')) {
            let sign = usize::from(matches!(self.peek(1), Some('+' | '-')));
            if self.peek(1 + sign).is_some_and(|c| c.is_ascii_digit()) {
                self.position += 1 + sign;
                self.skip_digits();
            }
        }
        let digits: String = self.characters.iter().take(self.position).skip(self.start).collect();
        let mantissa = digits.split(['e', 'E']).next().unwrap_or_default();
        let is_zero = mantissa.chars().all(|c| matches!(c, '0' | '.'));
        match digits.parse::<f64>() {
            Ok(value) if value.is_finite() && (value.is_normal() || is_zero) => Ok(Token::Number(value)),
            _ => {
                let what = "a number that is too large or too small to be calculated with stands";
                Err(self.error("number_out_of_range", what, ""))
            }
        }
    }

    fn skip_digits(&mut self) {
        while self.peek(0).is_some_and(|c| c.is_ascii_digit()) {
            self.position += 1;
        }
    }

    /// `raised = [ "⁻" ] raised-digit { raised-digit }`
    fn raised(&mut self) -> Result<Token, TermError> {
        let negative = self.peek(0) == Some('⁻');
        if negative {
            self.position += 1;
        }
        let (first, mut value) = (self.position, 0.0);
        while let Some(digit) = self.peek(0).and_then(|c| SUPERSCRIPTS.iter().position(|&s| s == c)) {
            value = value * 10.0 + digit as f64;
            self.position += 1;
        }
        if self.position == first {
            return Err(self.error("operand_expected", "a raised minus sign without raised digits stands", ""));
        }
        Ok(Token::Raised(if negative { -value } else { value }))
    }

    /// The longest known name here, or else letters, digits and underscores. Known names may contain spaces.
    fn name(&mut self) -> Token {
        let plain = self.characters.iter().skip(self.position).take_while(|&&c| continues_name(c)).count();
        let known = self.influences.iter().filter_map(|name| self.length_of(name)).max();
        let length = known.unwrap_or_default().max(plain).max(1);
        let name = self.characters.iter().skip(self.position).take(length).collect();
        self.position += length;
        Token::Name(name)
    }

    /// The number of characters of a known name where it stands here as a whole.
    fn length_of(&self, name: &str) -> Option<usize> {
        let length = name.chars().count();
        let here = self.characters.iter().skip(self.position).take(length).copied();
        let stands_here = can_be_written(name) && here.eq(name.chars());
        (stands_here && !self.peek(length).is_some_and(continues_name)).then_some(length)
    }
}

/// The sentences.
impl Parser<'_> {
    /// The term as repeated in a sentence.
    fn repeated(&self) -> String {
        let mut text: String = self.characters.iter().take(MOST_REPEATED).flat_map(|c| c.escape_debug()).collect();
        if self.characters.len() > MOST_REPEATED {
            text.push('…');
        }
        text
    }

    /// `what` ends in its verb, since the place follows; the remedy may be empty.
    fn error_at(&self, code: &'static str, position: usize, what: &str, remedy: &str) -> TermError {
        let place = if position < self.characters.len() {
            format!("at character {}", position + 1)
        } else {
            "at its end".to_owned()
        };
        let colon = if remedy.is_empty() { "" } else { ": " };
        let sentence = format!("In the term \"{}\" {what} {place}{colon}{remedy}.", self.repeated());
        TermError { code, position, sentence }
    }

    fn error(&self, code: &'static str, what: &str, remedy: &str) -> TermError {
        self.error_at(code, self.start, what, remedy)
    }

    /// Two operands side by side: the remedy repeats the term with the sign in place.
    fn missing_operator(&self) -> TermError {
        let before: String = self.characters.iter().take(self.start).collect();
        let after: String = self.characters.iter().skip(self.start).collect();
        let mended = format!("{}*{after}", before.trim_end());
        let remedy =
            if mended.chars().count() <= MOST_REPEATED { format!("write {mended}") } else { "write *".to_owned() };
        self.error("operator_expected", "an operation sign is missing", &remedy)
    }

    fn unknown_name(&self, name: &str, start: usize) -> TermError {
        let mut known = vec![self.variable];
        known.extend(self.influences.iter().map(String::as_str).filter(|name| can_be_written(name)));
        known.push("pi");
        known.extend(Function::ALL.map(Function::name));
        let lower = name.to_lowercase();
        let mut remedy = match known.iter().find(|candidate| candidate.to_lowercase() == lower) {
            Some(candidate) => format!("write {candidate}"),
            None if lower == "log" => "write ln (natural) or log10 (common)".to_owned(),
            None => format!("known are {}", known.join(", ")),
        };
        if let Some(other) = self.influences.iter().find(|name| !can_be_written(name)) {
            remedy += &format!(
                "; the influence quantity \"{}\" can be used once its name has letters and digits only",
                other.escape_debug()
            );
        }
        self.error_at("unknown_name", start, &format!("the unknown name \"{name}\" stands"), &remedy)
    }
}
