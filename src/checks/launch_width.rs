//! Do pad, ground pads and feed of the launch fit each other?

use crate::artwork::HoleUse;
use crate::base::Place;
use crate::base::Problem;
use crate::checks::Rule;
use crate::checks::Subject;
use crate::line::AsBuilt;
use crate::line::Coplanar;
use crate::order::LaunchShape;

pub(super) const RULE: Rule = Rule {
    code: "launch-misfit",
    about: "launch pad off the port's impedance or narrower than the feed (warning), or no room for its via fence (error)",
    source: "common practice",
    run,
};

/// A pad this far off the port's impedance reflects at most 21 dB below the wave that comes (0.2 / 2.2).
const MAX_MISMATCH: f64 = 0.2;

fn run(subject: &Subject) -> Vec<Problem> {
    let order = &subject.dimensions.order;
    let launch = &order.board.launch;
    let built = AsBuilt::nominal(order);
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
            // Over its own ground gap a pad may be narrower than the feed and still have the port's impedance.
            Some(gap_m) => {
                let reached_ohm = Coplanar::new(&built, pad_width_m, gap_m).z0_ohm;
                let port_ohm = port.number.checked_sub(1).and_then(|i| order.filter.ports_ohm.get(i)).copied().unwrap_or(reached_ohm);
                if (reached_ohm / port_ohm - 1.0).abs() > MAX_MISMATCH {
                    found.push(Problem::warning(
                        RULE.code,
                        at,
                        format!(
                            "the pad of launch \"{}\" ({pad:.3} mm, {:.3} mm to ground) has {reached_ohm:.1} ohm, the port {port_ohm:.1} ohm; {:.0} % off is the most",
                            launch.class,
                            gap_m * 1e3,
                            MAX_MISMATCH * 100.0
                        ),
                        "a launch class with another pad width or ground gap, or another laminate thickness",
                    ));
                }
            }
            None if feed_m > pad_width_m * (1.0 + 1e-6) => found.push(Problem::warning(
                RULE.code,
                at,
                format!("the feed is {feed:.3} mm wide, the pad of launch \"{}\" only {pad:.3} mm: a step up in impedance", launch.class),
                "a launch class with a wider pad, or a thinner laminate",
            )),
            None => {}
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
