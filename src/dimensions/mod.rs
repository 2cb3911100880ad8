//! The synthesized dimension set: named physical numbers, each with its first guess, its target and its corrections.

mod file;

pub use file::{is_dimension_file, read, write};

use crate::base::Nm;
use crate::base::Place;
use crate::base::Problem;
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

impl Dimension {
    /// A first guess with the electrical targets it serves.
    pub fn guess(name: String, value_m: f64, serves: &[(&str, f64)]) -> Dimension {
        let serves = serves.iter().map(|(what, value)| ((*what).to_string(), *value)).collect();
        Dimension { name, value_m, first_guess_m: value_m, serves, corrections_m: Vec::new() }
    }

    /// Moves the value by a named, signed amount and keeps the record.
    pub fn correct(&mut self, name: &str, amount_m: f64) {
        self.value_m += amount_m;
        self.corrections_m.push((name.into(), amount_m));
    }
}

impl Dimensions {
    /// The value of a named dimension.
    ///
    /// # Errors
    /// `dimension-missing`.
    pub fn value(&self, name: &str) -> Result<f64, Problem> {
        self.list.iter().find(|d| d.name == name).map(|d| d.value_m).ok_or_else(|| {
            Problem::error(
                "dimension-missing",
                Place::Dimension(name.into()),
                format!("the set has no dimension \"{name}\""),
                "add it, or make the set anew with `stripwright dimension`",
            )
        })
    }

    /// Every value moved to the nearest point of the shop's grid; what that took stands as the correction "grid".
    pub fn on_grid(&self) -> Dimensions {
        let mut snapped = self.clone();
        let grid = Nm::from_m(self.order.shop.grid_m);
        for dimension in &mut snapped.list {
            let on_grid_m = Nm::from_m(dimension.value_m).snapped(grid).m();
            dimension.correct("grid", on_grid_m - dimension.value_m);
            dimension.value_m = on_grid_m;
        }
        snapped
    }
}
