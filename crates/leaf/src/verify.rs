//! Verification: everything that can be said about a file from the file alone, and whether it is the one whose digest
//! stands on a signed record.

use crate::digest::from_person;
use crate::open::{Opened, Outcome, open};
use crate::page::Page;
use crate::seal::Seal;
use bandleaf_core::problem::Problem;
use serde::Serialize;

/// The sections in the order in which they are told.
const SECTIONS: [&str; 8] = ["shell", "style", "program", "wasm", "seal", "visit", "report", "file"];

/// What a digest inside a file can and cannot prove.
const AUTHORSHIP: &str = "The digests show that this file agrees with itself. They do not show who made it: for that, \
                          compare the digest with the one on the signed record.";

/// One section of a leaf.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
pub struct Section {
    /// `shell`, `style`, `program`, `wasm`, `seal`, `visit`, `report` or `file`.
    pub name: &'static str,
    /// Whether it is as it was sealed.
    pub consistent: bool,
}

/// The result of verifying a leaf.
#[derive(Clone, Debug, PartialEq)]
pub struct Verification {
    /// Each section; empty where the file has not even the frame of a leaf.
    pub sections: Vec<Section>,
    /// The digest of the file with that value blanked, as its seal has it.
    pub digest: Option<String>,
    /// The digest of the visit.
    pub visit_digest: Option<String>,
    /// Whether the digest is the expected one; `None` where none was given.
    pub expected: Option<bool>,
    /// What came out on opening; the reason where the file cannot be opened.
    pub opened: Result<Opened, Problem>,
    /// What the digests prove and what they do not.
    pub caution: &'static str,
}

impl Verification {
    /// Whether nothing speaks against the file: every section is consistent, the numbers come out as they were
    /// pressed (or were computed by another method, as stated), and the digest is the expected one.
    pub fn holds(&self) -> bool {
        let opened = self.opened.as_ref().is_ok_and(|opened| opened.outcome == Outcome::Blank || opened.may_be_read());
        opened && self.expected != Some(false)
    }

    /// The result in one sentence.
    pub fn sentence(&self) -> String {
        match &self.opened {
            Err(problem) => problem.sentence.clone(),
            Ok(opened) if self.expected == Some(false) && opened.outcome != Outcome::Altered => {
                "The digest of this leaf is not the expected one: it is another leaf than the one on the record."
                    .to_owned()
            }
            Ok(opened) => opened.sentence.clone(),
        }
    }
}

/// Verifies a file. `expect` is the digest on a record, with or without its `sha256:`.
pub fn verify(bytes: &[u8], expect: Option<&str>) -> Verification {
    let page = match Page::take_apart(bytes) {
        Ok(page) => page,
        Err(problem) => return unreadable(problem, expect),
    };
    let opened = open(&page);
    let seal = Seal::read(&page.texts().seal);
    let digest = seal.as_ref().and_then(Seal::file).map(str::to_owned);
    let section = |name: &&'static str| Section { name, consistent: !opened.changed_sections.contains(name) };
    Verification {
        // Without a seal that can be read nothing is known of the other sections.
        sections: SECTIONS.iter().map(section).filter(|section| seal.is_some() || section.name == "seal").collect(),
        expected: expect.map(|expect| digest.is_some() && from_person(expect) == digest),
        digest,
        visit_digest: opened.document.as_ref().map(|document| document.digest()),
        opened: Ok(opened),
        caution: AUTHORSHIP,
    }
}

fn unreadable(problem: Problem, expect: Option<&str>) -> Verification {
    Verification {
        sections: Vec::new(),
        digest: None,
        visit_digest: None,
        expected: expect.map(|_| false),
        opened: Err(problem),
        caution: AUTHORSHIP,
    }
}
