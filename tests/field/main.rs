//! The field solver against exact line constants, cavity resonances, energy, and the slow obvious sum.
#![allow(clippy::unwrap_used, clippy::expect_used, clippy::panic, missing_docs)]

mod board;
mod command;
mod faults;
mod line_constants;
mod networks;
mod plain_sum;
mod sample;
