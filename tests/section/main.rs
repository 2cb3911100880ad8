//! Cross-section solver against exact results and published values.
#![allow(clippy::unwrap_used, clippy::expect_used, clippy::panic, missing_docs)]

mod exact;
mod findings;
mod judged;
mod properties;
mod published;
mod reference;
