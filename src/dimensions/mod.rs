//! The synthesized dimension set: named physical numbers, each with its first guess, its target and its corrections.

mod file;

pub use file::{read, write};

use crate::order::Order;

/// One named physical number.
#[derive(Clone, Debug, PartialEq)]
pub struct Dimension {
    /// Unique within the set: `section 2 gap`.
    pub name: String,
    /// What is drawn.
    pub value_m: f64,
    /// The closed-form first guess.
    pub first_guess_m: f64,
    /// The electrical targets it serves: name and value (`Z0e ohm`, 70.6).
    pub serves: Vec<(String, f64)>,
    /// Every correction between first guess and value, in order: name and signed amount.
    pub corrections_m: Vec<(String, f64)>,
}

/// A complete dimension set: the order and its numbers.
#[derive(Clone, Debug, PartialEq)]
pub struct Dimensions {
    /// The complete order.
    pub order: Order,
    /// Degree that was chosen.
    pub degree: usize,
    /// The numbers, in drawing order.
    pub list: Vec<Dimension>,
}
