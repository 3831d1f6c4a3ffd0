//! The numbers of Bandleaf: from a visit to its report.
//!
//! `appraise` is a pure function of a visit. No input or output, no clock, no randomness, no panic on data; the same
//! bits on every target.

pub mod dd;
pub mod problem;
pub mod report;
pub mod visit;
