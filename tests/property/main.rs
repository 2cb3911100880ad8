//! What must hold for any order: reading never panics, and what was written is read back the same.
#![allow(clippy::unwrap_used, clippy::expect_used, clippy::panic, missing_docs)]

mod mutated_files;
mod order_round_trip;
