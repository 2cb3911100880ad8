//! What is wanted: the order, valid by construction, every default resolved and recorded.

mod types;

pub use types::*;
