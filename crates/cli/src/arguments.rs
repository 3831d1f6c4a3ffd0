//! The command line.

use crate::refusal::Refusal;
use bandleaf_intake::{Decimal, parse_cell};
use lexopt::prelude::*;
use std::ffi::OsString;
use std::path::PathBuf;

/// What `--help` prints.
pub const HELP: &str = "\
bandleaf: calibration of an instrument from a few points, with honest uncertainty

  bandleaf appraise VISIT.json [--json]
      fits the visit and prints what follows from it; --json: the whole report
  bandleaf appraise DATA.csv --reference COLUMN --indication COLUMN [--influence COLUMN]...
                    --terms \"1, x, x^2\" [--reading 812]... [--decimal comma|point] [--json]
      the same for a table; columns by name or number, --indication again for columns of repeats
  bandleaf press VISIT.json --out LEAF.html [--page PAGE.html]
      puts the visit into a page: one file with which anybody can turn readings into values
  bandleaf read LEAF.html 812 813 [--influence temperature=15]...
      turns the repeats of one reading into a value with its uncertainty
  bandleaf verify LEAF.html [--expect DIGEST]
      says whether a leaf is as it was pressed, and whether it is the one with this digest

Status 0: done. Status 2: what was given cannot be used; standard error says why.
";

/// One of the commands with its arguments.
#[derive(Debug)]
pub enum Command {
    Help,
    Version,
    Appraise(Appraise),
    Press(Press),
    Read(Read),
    Verify(Verify),
}

/// `appraise`.
#[derive(Debug, Default)]
pub struct Appraise {
    pub file: PathBuf,
    pub json: bool,
    pub reference: Option<String>,
    pub indications: Vec<String>,
    pub influences: Vec<String>,
    pub terms: Option<String>,
    pub readings: Vec<f64>,
    pub decimal: Option<Decimal>,
}

impl Appraise {
    /// Whether an option was given that only a table needs.
    pub fn speaks_of_table(&self) -> bool {
        let columns = self.reference.is_some() || !self.indications.is_empty() || !self.influences.is_empty();
        columns || self.terms.is_some() || !self.readings.is_empty() || self.decimal.is_some()
    }
}

/// `press`.
#[derive(Debug)]
pub struct Press {
    pub file: PathBuf,
    pub out: PathBuf,
    pub page: Option<PathBuf>,
}

/// `read`.
#[derive(Debug)]
pub struct Read {
    pub file: PathBuf,
    pub indications: Vec<f64>,
    pub influences: Vec<(String, f64)>,
}

/// `verify`.
#[derive(Debug)]
pub struct Verify {
    pub file: PathBuf,
    pub expect: Option<String>,
}

/// What was typed.
pub fn from_command_line() -> Result<Command, Refusal> {
    let mut parser = lexopt::Parser::from_env();
    let command = match parser.next().map_err(misused)? {
        None => {
            return Err(Refusal::new("Say what to do: appraise, press, read or verify; bandleaf --help tells more."));
        }
        Some(Short('h') | Long("help")) => return Ok(Command::Help),
        Some(Short('V') | Long("version")) => return Ok(Command::Version),
        Some(Value(name)) => name,
        Some(other) => return Err(misused(other.unexpected())),
    };
    match command.to_string_lossy().as_ref() {
        "appraise" => appraise(parser),
        "press" => press(parser),
        "read" => read(parser),
        "verify" => verify(parser),
        "help" => Ok(Command::Help),
        other => Err(Refusal::new(format!(
            "There is no command “{other}”: the commands are appraise, press, read and verify."
        ))),
    }
}

fn appraise(mut parser: lexopt::Parser) -> Result<Command, Refusal> {
    let mut file = None;
    let mut arguments = Appraise::default();
    while let Some(argument) = parser.next().map_err(misused)? {
        match argument {
            Long("json") => arguments.json = true,
            Long("reference") => arguments.reference = Some(text(&mut parser)?),
            Long("indication") => arguments.indications.push(text(&mut parser)?),
            Long("influence") => arguments.influences.push(text(&mut parser)?),
            Long("terms") => arguments.terms = Some(text(&mut parser)?),
            Long("reading") => arguments.readings.push(number(&text(&mut parser)?, "--reading")?),
            Long("decimal") => arguments.decimal = Some(decimal(&text(&mut parser)?)?),
            Long("help") | Short('h') => return Ok(Command::Help),
            Value(value) => one_file(&mut file, value)?,
            other => return Err(misused(other.unexpected())),
        }
    }
    arguments.file = required(file, "bandleaf appraise VISIT.json")?;
    Ok(Command::Appraise(arguments))
}

fn press(mut parser: lexopt::Parser) -> Result<Command, Refusal> {
    let (mut file, mut out, mut page) = (None, None, None);
    while let Some(argument) = parser.next().map_err(misused)? {
        match argument {
            Long("out") => out = Some(PathBuf::from(parser.value().map_err(misused)?)),
            Long("page") => page = Some(PathBuf::from(parser.value().map_err(misused)?)),
            Long("help") | Short('h') => return Ok(Command::Help),
            Value(value) => one_file(&mut file, value)?,
            other => return Err(misused(other.unexpected())),
        }
    }
    let file = required(file, "bandleaf press VISIT.json --out LEAF.html")?;
    let out = out.ok_or_else(|| Refusal::new("Name the file to write the leaf to: --out LEAF.html."))?;
    Ok(Command::Press(Press { file, out, page }))
}

fn read(mut parser: lexopt::Parser) -> Result<Command, Refusal> {
    let (mut file, mut indications, mut influences) = (None, Vec::new(), Vec::new());
    loop {
        if let Some(negative) = next_negative(&mut parser) {
            indications.push(number(&negative, "an indication")?);
            continue;
        }
        let Some(argument) = parser.next().map_err(misused)? else { break };
        match argument {
            Long("influence") => influences.push(assignment(&text(&mut parser)?)?),
            Long("help") | Short('h') => return Ok(Command::Help),
            Value(value) if file.is_none() => file = Some(PathBuf::from(value)),
            Value(value) => indications.push(number(&value.to_string_lossy(), "an indication")?),
            other => return Err(misused(other.unexpected())),
        }
    }
    let file = required(file, "bandleaf read LEAF.html 812")?;
    if indications.is_empty() {
        return Err(Refusal::new(
            "Give the reading to be turned into a value, for instance bandleaf read LEAF.html 812.",
        ));
    }
    Ok(Command::Read(Read { file, indications, influences }))
}

fn verify(mut parser: lexopt::Parser) -> Result<Command, Refusal> {
    let (mut file, mut expect) = (None, None);
    while let Some(argument) = parser.next().map_err(misused)? {
        match argument {
            Long("expect") => expect = Some(text(&mut parser)?),
            Long("help") | Short('h') => return Ok(Command::Help),
            Value(value) => one_file(&mut file, value)?,
            other => return Err(misused(other.unexpected())),
        }
    }
    let file = required(file, "bandleaf verify LEAF.html")?;
    Ok(Command::Verify(Verify { file, expect }))
}

/// The next argument where it is a negative number, which would otherwise be taken for an option.
fn next_negative(parser: &mut lexopt::Parser) -> Option<String> {
    let mut raw = parser.try_raw_args()?;
    let text = raw.peek()?.to_str()?.to_owned();
    let digits = text.strip_prefix('-')?;
    if !digits.starts_with(|first: char| first.is_ascii_digit() || first == '.' || first == ',') {
        return None;
    }
    raw.next();
    Some(text)
}

fn one_file(file: &mut Option<PathBuf>, value: OsString) -> Result<(), Refusal> {
    match file {
        None => *file = Some(PathBuf::from(value)),
        Some(_) => {
            let given = value.to_string_lossy().into_owned();
            return Err(Refusal::new(format!(
                "Only one file can be given, and “{given}” is a second one: leave it out."
            )));
        }
    }
    Ok(())
}

fn required(file: Option<PathBuf>, example: &str) -> Result<PathBuf, Refusal> {
    file.ok_or_else(|| Refusal::new(format!("Name the file, for instance {example}.")))
}

fn text(parser: &mut lexopt::Parser) -> Result<String, Refusal> {
    Ok(parser.value().map_err(misused)?.to_string_lossy().into_owned())
}

/// A number as people write it, with decimal point or comma.
fn number(text: &str, what: &str) -> Result<f64, Refusal> {
    let cell = parse_cell(text);
    cell.value.ok_or_else(|| {
        let reason = cell.problem.map_or_else(|| "there is nothing".to_owned(), |problem| problem.sentence);
        Refusal::new(format!("“{text}” was given for {what}, and cannot be read as a number: {reason}"))
    })
}

/// `temperature=15`.
fn assignment(text: &str) -> Result<(String, f64), Refusal> {
    let (name, value) = text.split_once('=').ok_or_else(|| {
        Refusal::new(format!("“{text}” was given for --influence: write name and value, for instance temperature=15."))
    })?;
    Ok((name.trim().to_owned(), number(value, "--influence")?))
}

fn decimal(text: &str) -> Result<Decimal, Refusal> {
    match text {
        "comma" => Ok(Decimal::Comma),
        "point" => Ok(Decimal::Point),
        other => Err(Refusal::new(format!("“{other}” was given for --decimal: write comma or point."))),
    }
}

fn misused(error: lexopt::Error) -> Refusal {
    Refusal::new(format!("The command line cannot be used ({error}): bandleaf --help shows how it is written."))
}
