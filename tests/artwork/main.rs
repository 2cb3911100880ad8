//! Does the board hold exactly the copper the layout asks for, and do the design rules see what they should?
//!
//! Areas and distances are judged by the `geo` crate, not by the code that made the polygons.

#![allow(clippy::unwrap_used, clippy::expect_used, clippy::panic, missing_docs)]

mod copper;
mod families;
mod placing;
mod rules;
mod sample;
