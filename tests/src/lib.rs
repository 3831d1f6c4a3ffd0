//! Reference, property and cross-target tests.
