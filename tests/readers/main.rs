//! Do independent readers see in every file exactly what the board holds?

#![allow(clippy::unwrap_used, clippy::expect_used, clippy::panic, missing_docs)]

mod broken;
mod drawing;
mod drills;
mod gerbers;
mod hand_off;
mod placing;
mod sample;
mod touchstone;
mod verified;
