//! Does the laminate carry a surface wave that takes power from the strips?

use crate::artwork::highest_hz;
use crate::base::Place;
use crate::base::Problem;
use crate::checks::Rule;
use crate::checks::Subject;
use crate::checks::microwave::SPEED_OF_LIGHT;
use crate::checks::microwave::band_top_hz;

pub(super) const RULE: Rule = Rule {
    code: "surface-mode",
    about: "the band (error) or the highest requirement (warning) above the strong coupling to the TM0 surface wave or the cutoff of TE1",
    source: "G. D. Vendelin, Limitations on stripline Q, Microwave Journal 13 (5), 1970 (TM0); R. E. Collin, Field Theory of Guided Waves, 2nd ed. 1991, chapter 11 (TE1 cutoff) (from memory)",
    run,
};

/// Where the quasi-TEM wave and the TM0 surface wave run at one speed, hertz.
pub(super) fn tm0_hz(height_m: f64, permittivity: f64) -> f64 {
    SPEED_OF_LIGHT * permittivity.atan() / (std::f64::consts::SQRT_2 * std::f64::consts::PI * height_m * (permittivity - 1.0).sqrt())
}

/// Cutoff of the first TE surface wave of a grounded slab, hertz.
pub(super) fn te1_hz(height_m: f64, permittivity: f64) -> f64 {
    SPEED_OF_LIGHT / (4.0 * height_m * (permittivity - 1.0).sqrt())
}

fn run(subject: &Subject) -> Vec<Problem> {
    let order = &subject.dimensions.order;
    let (height_m, permittivity) = (order.laminate.thickness_m, order.laminate.permittivity);
    if permittivity <= 1.0 {
        return Vec::new();
    }
    let (tm0, te1) = (tm0_hz(height_m, permittivity), te1_hz(height_m, permittivity));
    let (limit_hz, mode) = if tm0 < te1 { (tm0, "TM0 couples strongly") } else { (te1, "TE1 propagates") };
    let place = Place::Board(crate::layout::Node { left: subject.board.circuit[0], right: subject.board.circuit[1] }.middle());
    let message = |what: &str, f_hz: f64| {
        format!(
            "{what} is {:.2} GHz; on {:.3} mm of permittivity {permittivity} {mode} from {:.2} GHz",
            f_hz * 1e-9,
            height_m * 1e3,
            limit_hz * 1e-9
        )
    };
    let (band_hz, highest_hz) = (band_top_hz(order), highest_hz(order));
    let help = || {
        // The limit goes as 1 / h.
        let thin_m = height_m * limit_hz / band_hz.max(highest_hz);
        format!("a laminate of {:.2} mm or thinner", thin_m * 1e3)
    };
    if band_hz >= limit_hz {
        vec![Problem::error(RULE.code, place, message("the top of the filter's band", band_hz), help())]
    } else if highest_hz >= limit_hz {
        vec![Problem::warning(RULE.code, place, message("the highest requirement", highest_hz), help())]
    } else {
        Vec::new()
    }
}
