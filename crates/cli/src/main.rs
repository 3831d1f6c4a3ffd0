//! The command `bandleaf`.
fn main() {}
