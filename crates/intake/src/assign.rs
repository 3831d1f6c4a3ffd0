//! Which column is what: as told, else by name, else by asking.
//!
//! Without a heading, exactly two columns of numbers are reference value and indication in this order, the order of the
//! points table, and a note says so.

use crate::columns::{Reader, Tally};
use crate::header::split_unit;
use crate::options::{Choice, ColumnKey, ColumnKeys, InfluenceColumns, Options, Question};
use crate::role::{Meaning, Role, Strength, Understood, understand, words};
use crate::wording::{capital, listed, quoted};
use bandleaf_core::problem::Problem;
use std::collections::BTreeMap;

/// Gives each column its role; what is missing becomes a question, what cannot be followed a problem.
pub(crate) fn assign(
    readers: &mut [Reader],
    tallies: &[Tally],
    has_heading: bool,
    options: &Options,
) -> (Vec<Question>, Vec<Problem>) {
    let understood = readers.iter().map(|reader| understand(&reader.column.name)).collect();
    let mut assignment =
        Assignment { readers, tallies, understood, options, has_heading, questions: Vec::new(), problems: Vec::new() };
    assignment.as_told();
    assignment.influences_by_name();
    assignment.helpers_by_name();
    let references = assignment.references_by_name();
    let indications = assignment.indications_by_name();
    assignment.ask_or_take(references, indications);
    assignment.mark_indications();
    assignment.explain_unused();
    (assignment.questions, assignment.problems)
}

struct Assignment<'a> {
    readers: &'a mut [Reader],
    tallies: &'a [Tally],
    understood: Vec<Understood>,
    options: &'a Options,
    has_heading: bool,
    questions: Vec<Question>,
    problems: Vec<Problem>,
}

/// Columns whose names speak for one role.
enum Named {
    /// None, or exactly what is needed; already given.
    Settled,
    /// Several that contradict each other.
    Rivals(Vec<usize>),
}

impl Assignment<'_> {
    fn role(&self, index: usize) -> Option<&Role> {
        self.readers.get(index).and_then(|reader| reader.column.role.as_ref())
    }

    fn has(&self, role: &Role) -> bool {
        self.readers.iter().any(|reader| reader.column.role.as_ref() == Some(role))
    }

    fn give(&mut self, index: usize, role: Role) {
        if let Some(reader) = self.readers.get_mut(index) {
            reader.column.role = Some(role);
        }
    }

    fn free(&self) -> Vec<usize> {
        (0..self.readers.len()).filter(|index| self.role(*index).is_none()).collect()
    }

    fn label(&self, index: usize) -> String {
        self.readers.get(index).map_or_else(String::new, |reader| reader.column.label())
    }

    fn as_told(&mut self) {
        let columns = self.options.columns.clone();
        let single = [
            (columns.reference, Role::Reference),
            (columns.reference_uncertainty, Role::ReferenceUncertainty),
            (columns.indication_uncertainty, Role::IndicationUncertainty),
            (columns.setting_uncertainty, Role::SettingUncertainty),
            (columns.repeats, Role::Repeats),
            (columns.approach, Role::Approach),
            (columns.state, Role::State),
            (columns.time, Role::Time),
            (columns.note, Role::Note),
        ];
        for (key, role) in single {
            if let Some(key) = key {
                self.give_told(&key, role, false);
            }
        }
        for key in columns.indication.as_ref().map_or(&[][..], ColumnKeys::keys) {
            self.give_told(key, Role::Indication, true);
        }
        match columns.influences {
            Some(InfluenceColumns::Map(map)) => {
                for (name, key) in map {
                    self.give_told(&key, Role::Influence(name), false);
                }
            }
            Some(InfluenceColumns::Named(keys)) => {
                for key in keys {
                    let name = match &key {
                        ColumnKey::Name(name) => name.clone(),
                        ColumnKey::Index(index) => self.label(*index),
                    };
                    let found = self.find(&key);
                    let called = found
                        .first()
                        .and_then(|index| self.readers.get(*index))
                        .map(|reader| reader.column.name.clone());
                    self.give_told(
                        &key,
                        Role::Influence(called.filter(|name| !name.is_empty()).unwrap_or(name)),
                        false,
                    );
                }
            }
            None => {}
        }
    }

    fn give_told(&mut self, key: &ColumnKey, role: Role, several: bool) {
        let found = self.find(key);
        let called = match key {
            ColumnKey::Index(index) => format!("column {}", index.saturating_add(1)),
            ColumnKey::Name(name) => format!("column {}", quoted(name)),
        };
        if found.is_empty() {
            let known: Vec<String> = (0..self.readers.len()).map(|index| self.label(index)).collect();
            let sentence = format!("There is no {called}; there are {}.", listed(&known));
            self.problems.push(Problem::error("column_not_found", "", sentence).with("column", called));
        } else if found.len() > 1 && !several {
            let sentence = format!("{} columns are called {called}; say which by its number.", found.len());
            self.problems.push(Problem::error("column_name_twice", "", sentence).with("column", called));
        } else {
            for index in found {
                if self.role(index).is_some_and(|taken| *taken != role) {
                    let sentence =
                        format!("{} is named for two purposes; name another one.", capital(&self.label(index)));
                    self.problems.push(
                        Problem::error("column_two_roles", self.label(index), sentence).with("column", index + 1),
                    );
                } else {
                    self.give(index, role.clone());
                }
            }
        }
    }

    /// The columns that a key means.
    fn find(&self, key: &ColumnKey) -> Vec<usize> {
        match key {
            ColumnKey::Index(index) => (*index < self.readers.len()).then_some(*index).into_iter().collect(),
            ColumnKey::Name(name) => {
                let names: Vec<&str> = self.readers.iter().map(|reader| reader.column.name.as_str()).collect();
                find_by_name(name, &names)
            }
        }
    }

    fn influences_by_name(&mut self) {
        for name in &self.options.influence_names {
            let wanted = words(name);
            let role = Role::Influence(name.clone());
            if wanted.is_empty() || self.has(&role) {
                continue;
            }
            let free = self.free();
            let matching = |exact: bool| -> Vec<usize> {
                let fits = |index: &usize| {
                    let found = self.readers.get(*index).map(|reader| words(&reader.column.name)).unwrap_or_default();
                    if exact {
                        found == wanted
                    } else {
                        wanted.iter().all(|word| found.contains(word)) && !self.speaks_for_a_side(*index)
                    }
                };
                free.iter().copied().filter(fits).collect()
            };
            let exact = matching(true);
            let found = if exact.is_empty() { matching(false) } else { exact };
            if let [one] = found.as_slice() {
                self.give(*one, role);
            }
        }
    }

    /// "reference temperature" of a thermometer is a reference value, not an influence.
    fn speaks_for_a_side(&self, index: usize) -> bool {
        matches!(
            self.understood.get(index).map(|understood| &understood.meaning),
            Some(Meaning::Is(Role::Reference | Role::Indication, Strength::Strong))
        )
    }

    /// Roles beside reference and indication; of two columns of one such role the first is taken.
    fn helpers_by_name(&mut self) {
        for index in self.free() {
            let Some(Meaning::Is(role, _)) = self.understood.get(index).map(|understood| understood.meaning.clone())
            else {
                continue;
            };
            if !matches!(role, Role::Reference | Role::Indication) && !self.has(&role) {
                self.give(index, role);
            }
        }
    }

    /// Free columns whose names speak most plainly for a role, means left out where there is something else.
    fn speaking_for(&self, role: &Role) -> Vec<usize> {
        let strength = |index: &usize| match self.understood.get(*index).map(|understood| &understood.meaning) {
            Some(Meaning::Is(found, strength)) if found == role => Some(*strength),
            _ => None,
        };
        let free = self.free();
        let strongest = free.iter().filter_map(strength).max();
        let found: Vec<usize> =
            free.iter().copied().filter(|index| strongest.is_some() && strength(index) == strongest).collect();
        let averaged = |index: &usize| self.understood.get(*index).is_some_and(|understood| understood.averaged);
        if found.iter().all(averaged) { found } else { found.into_iter().filter(|index| !averaged(index)).collect() }
    }

    fn is_pure(&self, index: usize) -> bool {
        self.understood.get(index).is_some_and(|understood| understood.pure)
    }

    fn references_by_name(&mut self) -> Named {
        if self.has(&Role::Reference) {
            return Named::Settled;
        }
        let found = self.speaking_for(&Role::Reference);
        let pure: Vec<usize> = found.iter().copied().filter(|index| self.is_pure(*index)).collect();
        match (found.as_slice(), pure.as_slice()) {
            ([], _) => Named::Settled,
            ([one], _) | (_, [one]) => {
                self.give(*one, Role::Reference);
                Named::Settled
            }
            _ => Named::Rivals(found),
        }
    }

    /// Columns with the same words are repeats of each other.
    fn indications_by_name(&mut self) -> Named {
        if self.has(&Role::Indication) {
            return Named::Settled;
        }
        let found = self.speaking_for(&Role::Indication);
        let mut by_words: BTreeMap<&str, Vec<usize>> = BTreeMap::new();
        for index in &found {
            let base = self.understood.get(*index).map_or("", |understood| understood.base.as_str());
            by_words.entry(base).or_default().push(*index);
        }
        let groups: Vec<Vec<usize>> = by_words.into_values().collect();
        let pure: Vec<&Vec<usize>> =
            groups.iter().filter(|group| group.iter().all(|index| self.is_pure(*index))).collect();
        let taken = match (groups.as_slice(), pure.as_slice()) {
            ([], _) => return Named::Settled,
            ([one], _) => one.clone(),
            (_, [one]) => (*one).clone(),
            _ => return Named::Rivals(found),
        };
        for index in taken {
            self.give(index, Role::Indication);
        }
        Named::Settled
    }

    /// Free columns of numbers that could be a reference value or an indication.
    fn candidates(&self) -> Vec<usize> {
        let fits = |index: &usize| {
            self.tallies.get(*index).is_some_and(|tally| tally.numbers > 0 && tally.numbers * 2 >= tally.filled)
                && self
                    .understood
                    .get(*index)
                    .is_some_and(|understood| matches!(understood.meaning, Meaning::Unknown | Meaning::Is(..)))
        };
        self.free().into_iter().filter(fits).collect()
    }

    fn ask_or_take(&mut self, references: Named, indications: Named) {
        let candidates = self.candidates();
        if let Named::Rivals(found) = &references {
            self.ask_reference(found);
        }
        if let Named::Rivals(found) = &indications {
            self.ask_indication(found);
        }
        let settled = matches!(references, Named::Settled) && matches!(indications, Named::Settled);
        match (settled, self.has(&Role::Reference), self.has(&Role::Indication), candidates.as_slice()) {
            (false, ..) | (_, true, true, _) => {}
            (_, false, false, [reference, indication]) if !self.has_heading => {
                self.take_in_order(*reference, *indication)
            }
            (_, false, false, [first, second]) => self.ask_which_is_which(*first, *second),
            (_, false, false, [one]) => self.ask_what(*one),
            (_, false, false, []) => self.problems.push(Problem::error(
                "no_numbers",
                "",
                "There is no column of numbers in this table; it needs reference values and indications.",
            )),
            (_, false, _, []) => self.warn_missing("reference"),
            (_, _, false, []) => self.warn_missing("indication"),
            (_, false, _, found) => self.ask_reference(found),
            (_, _, false, found) => self.ask_indication(found),
        }
    }

    fn take_in_order(&mut self, reference: usize, indication: usize) {
        self.give(reference, Role::Reference);
        self.give(indication, Role::Indication);
        let sentence = format!(
            "The columns have no names: {} was taken as the reference value and {} as the indication, in the order of the points table.",
            self.label(reference),
            self.label(indication)
        );
        self.problems.push(Problem::note("columns_in_order", "", sentence));
    }

    fn warn_missing(&mut self, what: &str) {
        let whole = if what == "reference" { "reference values" } else { "indications" };
        let sentence = format!("No column of numbers is left for the {whole}; that column of the points stays empty.");
        self.problems.push(Problem::warning("column_missing", "", sentence).with("role", what));
    }

    fn choice(&self, label: String, change: impl FnOnce(&mut Options)) -> Choice {
        let mut option = self.options.clone();
        change(&mut option);
        Choice { label, option }
    }

    fn ask(&mut self, code: &str, column: Option<usize>, sentence: String, choices: Vec<Choice>) {
        self.questions.push(Question { code: code.to_owned(), column, sentence, choices });
    }

    fn ask_which_is_which(&mut self, first: usize, second: usize) {
        let choice = |reference: usize, indication: usize| {
            let label = format!(
                "{} is the reference value, {} the indication",
                capital(&self.label(reference)),
                self.label(indication)
            );
            self.choice(label, |option| {
                option.columns.reference = Some(ColumnKey::Index(reference));
                option.columns.indication = Some(ColumnKeys::One(ColumnKey::Index(indication)));
            })
        };
        let choices = vec![choice(first, second), choice(second, first)];
        let sentence = format!(
            "Which of {} and {} is the reference value, and which the indication?",
            self.label(first),
            self.label(second)
        );
        self.ask("roles", None, sentence, choices);
    }

    fn ask_what(&mut self, index: usize) {
        let choices = vec![
            self.choice("Reference values".to_owned(), |option| {
                option.columns.reference = Some(ColumnKey::Index(index))
            }),
            self.choice("Indications".to_owned(), |option| {
                option.columns.indication = Some(ColumnKeys::One(ColumnKey::Index(index)));
            }),
        ];
        let sentence =
            format!("There is one column of numbers, {}: are they reference values or indications?", self.label(index));
        self.ask("roles", Some(index), sentence, choices);
    }

    fn ask_reference(&mut self, found: &[usize]) {
        let choices = found
            .iter()
            .map(|index| {
                self.choice(capital(&self.label(*index)), |option| {
                    option.columns.reference = Some(ColumnKey::Index(*index))
                })
            })
            .collect();
        self.ask("reference", None, "Which column holds the reference values?".to_owned(), choices);
    }

    fn ask_indication(&mut self, found: &[usize]) {
        let keys = |indices: &[usize]| ColumnKeys::Many(indices.iter().map(|index| ColumnKey::Index(*index)).collect());
        let mut choices: Vec<Choice> = found
            .iter()
            .map(|index| {
                self.choice(capital(&self.label(*index)), |option| option.columns.indication = Some(keys(&[*index])))
            })
            .collect();
        if found.len() > 1 {
            let all: Vec<String> = found.iter().map(|index| self.label(*index)).collect();
            let label = format!("{} are repeats of one indication", capital(&listed(&all)));
            choices.push(self.choice(label, |option| option.columns.indication = Some(keys(found))));
        }
        self.ask("indication", None, "Which column holds the indications?".to_owned(), choices);
    }

    /// State and direction from the headings of the indications.
    fn mark_indications(&mut self) {
        for (reader, understood) in self.readers.iter_mut().zip(&self.understood) {
            if reader.column.role == Some(Role::Indication) {
                reader.column.state = understood.state;
                reader.column.approach = understood.approach;
            }
        }
    }

    fn explain_unused(&mut self) {
        let mut unused = Vec::new();
        for index in self.free() {
            let label = self.label(index);
            let meaning = self.understood.get(index).map(|understood| &understood.meaning);
            match meaning {
                Some(Meaning::ExpandedUncertainty) => {
                    let sentence = format!(
                        "{} holds expanded uncertainties and was not taken; divide them by their coverage factor and name the column \"standard uncertainty of the reference\" or \"of the indication\".",
                        capital(&label)
                    );
                    self.problems
                        .push(Problem::warning("expanded_uncertainty", label, sentence).with("column", index + 1));
                }
                Some(Meaning::SomeUncertainty) => {
                    let sentence = format!(
                        "{} does not say of what it is the uncertainty and was not taken; name it \"standard uncertainty of the reference\" or \"of the indication\".",
                        capital(&label)
                    );
                    self.problems
                        .push(Problem::warning("unclear_uncertainty", label, sentence).with("column", index + 1));
                }
                _ if self.tallies.get(index).is_some_and(|tally| tally.filled > 0) => unused.push(label),
                _ => {}
            }
        }
        if !unused.is_empty() && self.questions.is_empty() {
            let sentence = format!("Not taken: {}.", listed(&unused));
            self.problems.push(Problem::note("columns_unused", "", sentence));
        }
    }
}

/// Columns of that name, capitals, spaces and unit aside; else the column of that number, from 1.
pub(crate) fn find_by_name(wanted: &str, names: &[&str]) -> Vec<usize> {
    let plain = |text: &str| text.split_whitespace().collect::<Vec<_>>().join(" ").to_lowercase();
    for called in [plain(wanted), plain(&split_unit(wanted).name)] {
        let fits = |(index, name): (usize, &&str)| (!called.is_empty() && plain(name) == called).then_some(index);
        let found: Vec<usize> = names.iter().enumerate().filter_map(fits).collect();
        if !found.is_empty() {
            return found;
        }
    }
    let number = wanted.trim().parse::<usize>().ok().and_then(|number| number.checked_sub(1));
    number.filter(|index| *index < names.len()).into_iter().collect()
}
