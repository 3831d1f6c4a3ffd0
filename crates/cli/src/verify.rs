//! `verify`: is a leaf as it was pressed?

use crate::Outcome;
use crate::arguments::Verify;
use crate::files;
use crate::refusal::Refusal;
use crate::words::one_line;
use bandleaf_leaf::{Verification, page, verify};

/// Prints what was found; refuses where something speaks against the leaf.
pub fn run(arguments: &Verify) -> Result<Outcome, Refusal> {
    let name = arguments.file.display().to_string();
    let bytes = files::read(&arguments.file, page::MOST_BYTES)?;
    let verification = verify(&bytes, arguments.expect.as_deref());
    let sentence = one_line(&verification.sentence());
    if verification.holds() {
        return Ok((printed(&verification) + &sentence + "\n" + verification.caution + "\n").into());
    }
    let refusal = Some(Refusal::new(format!("{name}: {sentence}")));
    Ok(Outcome { printed: printed(&verification), refusal })
}

fn printed(verification: &Verification) -> String {
    let mut text = String::new();
    for section in &verification.sections {
        let state = if section.consistent { "consistent" } else { "CHANGED" };
        text.push_str(&format!("{:<8} {state}\n", section.name));
    }
    if let Some(digest) = &verification.digest {
        text.push_str(&format!("digest of the leaf  {}\n", one_line(digest)));
    }
    if let Some(digest) = &verification.visit_digest {
        text.push_str(&format!("digest of the visit {digest}\n"));
    }
    if let Some(expected) = verification.expected {
        text.push_str(if expected {
            "the digest is the expected one\n"
        } else {
            "the digest is NOT the expected one\n"
        });
    }
    text
}
