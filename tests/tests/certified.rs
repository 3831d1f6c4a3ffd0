//! Certified least-squares results. Source: NIST Statistical Reference Datasets, linear regression.
//!
//! One algorithm for all sets: every set is an ordinary visit with a flat prior. A program that reads doubles cannot have
//! more digits than the exact solution of the rounded data, so that solution's digits (frozen beside each figure by
//! scripts/exact_limits.py) are the measure.

use bandleaf_tests::fixture::Fixture;

fn check(set: &str) {
    Fixture::load("certified.json").only(set).check();
}

#[test]
fn norris() {
    check("norris");
}

#[test]
fn pontius() {
    check("pontius");
}

#[test]
fn noint1() {
    check("noint1");
}

#[test]
fn filip() {
    check("filip");
}

#[test]
fn wampler1() {
    check("wampler1");
}

#[test]
fn wampler2() {
    check("wampler2");
}

#[test]
fn wampler4() {
    check("wampler4");
}
