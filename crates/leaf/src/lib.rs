//! leaf
