//! Does the closed housing resonate where the filter must work or reject?

use crate::artwork::highest_hz;
use crate::base::Place;
use crate::base::Problem;
use crate::checks::Rule;
use crate::checks::Subject;
use crate::checks::microwave::SPEED_OF_LIGHT;
use crate::checks::microwave::band_top_hz;

pub(super) const RULE: Rule = Rule {
    code: "box-resonance",
    about: "first resonance of the closed housing below the top of the band (error) or below the highest requirement (warning)",
    source: "D. M. Pozar, Microwave Engineering, 4th ed. 2012, equation (6.40), mode with the field normal to the board; air and laminate as capacitors in series",
    run,
};

/// First resonance of a box of inside length and width, lid above a laminate, hertz.
///
/// The field is normal to the board and constant along it (low boxes): laminate and air then act as capacitors in series.
pub(super) fn first_hz(inside_m: [f64; 2], lid_m: f64, height_m: f64, permittivity: f64) -> f64 {
    let filled = (height_m + lid_m) / (height_m / permittivity + lid_m);
    SPEED_OF_LIGHT / (2.0 * filled.sqrt()) * (inside_m[0].powi(-2) + inside_m[1].powi(-2)).sqrt()
}

fn run(subject: &Subject) -> Vec<Problem> {
    let order = &subject.dimensions.order;
    let Some((inside_m, lid_m)) = order.housing.and_then(|housing| Some((housing.inside_m?, housing.lid_m?))) else { return Vec::new() };
    let first_hz = first_hz(inside_m, lid_m, order.laminate.thickness_m, order.laminate.permittivity);
    let (band_hz, highest_hz) = (band_top_hz(order), highest_hz(order));
    let message = |what: &str, f_hz: f64| {
        format!(
            "a closed box of {:.1} mm x {:.1} mm first resonates at {:.2} GHz; {what} is {:.2} GHz",
            inside_m[0] * 1e3,
            inside_m[1] * 1e3,
            first_hz * 1e-9,
            f_hz * 1e-9
        )
    };
    let place = || Place::Key("housing.inside".to_string());
    let help = "a narrower housing.inside, or absorber on the lid";
    if first_hz <= band_hz {
        vec![Problem::error(RULE.code, place(), message("the top of the filter's band", band_hz), help)]
    } else if first_hz <= highest_hz {
        vec![Problem::warning(RULE.code, place(), message("the highest requirement", highest_hz), help)]
    } else {
        Vec::new()
    }
}
