//! Cross-section solver against exact results and published values.
// Matrices are walked by row and column, as they are written on paper.
#![allow(clippy::unwrap_used, clippy::expect_used, clippy::panic, clippy::needless_range_loop, missing_docs)]

mod exact;
mod findings;
mod judged;
mod properties;
mod published;
mod reference;
