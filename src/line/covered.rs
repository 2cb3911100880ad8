//! Is a size inside what the source of a discontinuity's model covers?

use std::ops::RangeInclusive;

use crate::base::Place;
use crate::base::Problem;

/// The warning `discontinuity-out-of-range` for a size outside `range`, or none. Not-a-number is outside.
pub(super) fn outside(source: &'static str, what: &str, value: f64, range: RangeInclusive<f64>) -> Option<Problem> {
    if range.contains(&value) {
        return None;
    }
    let (low, high) = (range.start(), range.end());
    let allowed = if high.is_finite() { format!("{low} to {high}") } else { format!("{low} or more") };
    let message = format!("{what} is {value:.4}; the model covers {allowed}");
    let help = "trust it less: solve the drawn copper, or choose another size or laminate";
    Some(Problem::warning("discontinuity-out-of-range", Place::Whole, message, help).with_source(source))
}
