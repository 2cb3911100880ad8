//! Do pad, ground pads and feed of the launch fit each other?

use crate::artwork::HoleUse;
use crate::base::Place;
use crate::base::Problem;
use crate::checks::Rule;
use crate::checks::Subject;
use crate::order::LaunchShape;

pub(super) const RULE: Rule = Rule {
    code: "launch-misfit",
    about: "feed wider than the launch's pad (warning) or than the space between its ground pads, or no room for its via fence (error)",
    source: "common practice",
    run,
};

fn run(subject: &Subject) -> Vec<Problem> {
    let launch = &subject.dimensions.order.board.launch;
    let mut found = Vec::new();
    let mut is_edge_coax = false;
    for port in &subject.board.ports {
        let (pad_width_m, gap_m) = match subject.layout.launch(port.number) {
            None | Some(LaunchShape::Open) => continue,
            Some(&LaunchShape::Pads { pad_width_m, .. }) => (pad_width_m, None),
            Some(&LaunchShape::EdgeCoax { pad_width_m, ground_gap_m, .. }) => (pad_width_m, Some(ground_gap_m)),
        };
        is_edge_coax |= gap_m.is_some();
        let (feed_m, at) = (port.plane.width().m(), Place::Board(port.plane.middle()));
        let (feed, pad) = (feed_m * 1e3, pad_width_m * 1e3);
        match gap_m {
            Some(gap_m) if feed_m > pad_width_m + 2.0 * gap_m => found.push(Problem::error(
                RULE.code,
                at,
                format!("the feed is {feed:.3} mm wide, the ground pads of launch \"{}\" leave {:.3} mm", launch.class, pad + 2e3 * gap_m),
                "a launch class for a wider feed, or a thinner laminate",
            )),
            _ if feed_m > pad_width_m * (1.0 + 1e-6) => found.push(Problem::warning(
                RULE.code,
                at,
                format!(
                    "the feed is {feed:.3} mm wide, the pad of launch \"{}\" only {pad:.3} mm: the launch is a step up in impedance",
                    launch.class
                ),
                "a launch class with a wider pad, or a thinner laminate",
            )),
            _ => {}
        }
    }
    if is_edge_coax && !subject.board.holes.iter().any(|hole| hole.purpose == HoleUse::Via) {
        found.push(Problem::error(
            RULE.code,
            subject.board.ports.first().map_or(Place::Whole, |port| Place::Board(port.edge.middle())),
            format!("the ground pads of launch \"{}\" have no room for a via", launch.class),
            "wider or longer ground pads, or a smaller via-pad in the launch class",
        ));
    }
    found
}
