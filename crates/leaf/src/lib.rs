//! The leaf: one HTML file that holds the program, one visit, and the digests by which a later reader can tell that
//! nothing in it was changed.
//!
//! The page (a leaf without a visit) and every leaf have one format, see [`page`]. A digest inside a file proves that
//! the file agrees with itself, not who wrote it: whoever needs that compares the digest with a signed record.

#![forbid(unsafe_code)]

mod canonical;
mod compare;
mod digest;
mod document;
mod misfit;
mod open;
pub mod page;
mod press;
pub mod readable;
mod report;
mod seal;
mod verify;
mod visit;

pub use canonical::{canonical_json, canonical_text, number_text};
pub use compare::{Agreement, compare};
pub use digest::sha256;
pub use document::{Document, MOST_BYTES, number};
pub use open::{Opened, Outcome, open};
pub use page::{Page, Texts};
pub use press::press;
pub use readable::typed;
pub use report::{Appraised, report};
pub use verify::{Section, Verification, verify};

/// The version of the program, as it stands in every seal.
pub const VERSION: &str = env!("CARGO_PKG_VERSION");
