//! What several tests share.
#![allow(dead_code, reason = "each test program uses some of it")]

pub mod diagrams;
pub mod files;
pub mod xml;
