//! stub
use super::geometry::{CoatOf, CrossSection, fault};
use crate::base::Problem;
pub(super) struct Coated {
    pub(super) added_f_per_m: Vec<Vec<f64>>,
    pub(super) error_estimate: f64,
}
pub(super) fn coat_ratio(_section: &CrossSection, _coat: CoatOf) -> Result<Coated, Problem> {
    Err(fault("coat-unsolved", "coat", "no".into(), "no"))
}
