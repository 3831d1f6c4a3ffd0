//! The numbers of Bandleaf: from a visit to its report.
//!
//! [`appraise`] is a pure function of a visit. No input or output, no clock, no randomness, no panic on data; the same
//! bits on every target.

// `!(a > b)` is written on purpose: a NaN must fall on the safe side.
#![allow(clippy::neg_cmp_op_on_partial_ord)]

pub mod appraise;
pub mod chebyshev;
pub mod checks;
pub mod dd;
pub mod diagnostics;
pub mod display;
pub mod distribution;
pub mod elementary;
pub mod expression;
pub mod factor;
pub mod float;
pub mod invert;
pub mod noise;
pub mod nominal;
pub mod observation;
pub mod pending;
pub mod posterior;
pub mod predict;
pub mod prior;
pub mod problem;
pub mod reading;
pub mod report;
pub mod shape;
pub mod visit;

pub use appraise::{Appraisal, appraise};
