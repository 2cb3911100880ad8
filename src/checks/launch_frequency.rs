//! Is the launch trusted up to the frequencies the order speaks of?

use crate::artwork::highest_hz;
use crate::base::Place;
use crate::base::Problem;
use crate::checks::Rule;
use crate::checks::Subject;
use crate::checks::microwave::band_top_hz;
use crate::order::LaunchShape;

pub(super) const RULE: Rule = Rule {
    code: "launch-frequency-exceeded",
    about: "the passband (error) or the highest requirement (warning) above what the launch is trusted for",
    source: "limit of the launch class, order key board.launch",
    run,
};

fn run(subject: &Subject) -> Vec<Problem> {
    let order = &subject.dimensions.order;
    let LaunchShape::EdgeCoax { up_to_hz, .. } = order.board.launch.shape else { return Vec::new() };
    let place = subject.board.ports.first().map_or(Place::Whole, |port| Place::Board(port.edge.middle()));
    let message = |what: &str, f_hz: f64| {
        format!("{what} is {:.3} GHz, launch \"{}\" is trusted up to {:.3} GHz", f_hz * 1e-9, order.board.launch.class, up_to_hz * 1e-9)
    };
    let help = "a launch class for higher frequencies";
    let (band_hz, highest_hz) = (band_top_hz(order), highest_hz(order));
    if band_hz > up_to_hz {
        vec![Problem::error(RULE.code, place, message("the upper edge of the filter's band", band_hz), help)]
    } else if highest_hz > up_to_hz {
        vec![Problem::warning(RULE.code, place, message("the highest requirement", highest_hz), help)]
    } else {
        Vec::new()
    }
}
