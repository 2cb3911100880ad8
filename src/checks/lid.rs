//! Is the lid so near that it takes part in the filter?

use crate::base::Place;
use crate::base::Problem;
use crate::checks::Rule;
use crate::checks::Subject;

pub(super) const RULE: Rule = Rule {
    code: "lid-too-near",
    about: "lid nearer to the strips than one laminate thickness (error) or five (warning)",
    source: "common practice",
    run,
};

/// Below this many thicknesses the field between strip and lid is as strong as that to the ground below.
const ERROR_HEIGHTS: f64 = 1.0;
/// Below this many thicknesses the couplings follow the lid's height and its tolerance.
const WARN_HEIGHTS: f64 = 5.0;

fn run(subject: &Subject) -> Vec<Problem> {
    let order = &subject.dimensions.order;
    let height_m = order.laminate.thickness_m;
    let Some(lid_m) = order.housing.and_then(|housing| housing.lid_m) else { return Vec::new() };
    let heights = lid_m / height_m;
    let message = |limit: f64| format!("the lid is {:.3} mm above the laminate, {heights:.1} h; {limit:.0} h are due", lid_m * 1e3);
    let place = || Place::Key("housing.lid".to_string());
    let help = format!("lid = \"{:.1} mm\" or more", WARN_HEIGHTS * height_m * 1e3);
    if heights < ERROR_HEIGHTS {
        vec![Problem::error(RULE.code, place(), message(ERROR_HEIGHTS), help)]
    } else if heights < WARN_HEIGHTS {
        vec![Problem::warning(RULE.code, place(), message(WARN_HEIGHTS), help)]
    } else {
        Vec::new()
    }
}
