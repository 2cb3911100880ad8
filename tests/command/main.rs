//! Runs the program: what it prints, how it ends, what it refuses.
#![allow(clippy::unwrap_used, clippy::expect_used, clippy::panic, missing_docs)]

mod line;
