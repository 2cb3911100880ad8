//! Is a coupled section still a line, longer than it is wide?

use crate::base::Nm;
use crate::base::Problem;
use crate::checks::Rule;
use crate::checks::Subject;
use crate::checks::microwave::place_of;
use crate::layout::Part;

pub(super) const RULE: Rule = Rule {
    code: "section-shorter-than-wide",
    about: "coupled section shorter than its strip is wide (error) or than twice that (warning): the line model says nothing about it",
    source: "common practice",
    run,
};

/// Below this length over width the ends are the better part of the section.
const WARN_RATIO: f64 = 2.0;

fn run(subject: &Subject) -> Vec<Problem> {
    let mut found = Vec::new();
    for placed in &subject.layout.parts {
        let Part::Lines { widths, length, .. } = &placed.part else { continue };
        let widest = widths.iter().copied().max().unwrap_or(Nm::ZERO);
        let ratio = length.m() / widest.m().max(1e-12);
        // A feed is as long as the board wants it.
        if widths.len() < 2 || ratio >= WARN_RATIO {
            continue;
        }
        // A piece that a tap or a neighbour's end cuts from longer strips is drawn from no length of its own.
        let Some(name) = placed.serves.iter().find(|name| name.contains("length")).cloned() else { continue };
        let place = place_of(subject, &name);
        let message = format!("{name} is {:.3} mm, its strips are {:.3} mm wide: a ratio of {ratio:.2}", length.mm(), widest.mm());
        let help = "a thinner laminate or a higher permittivity makes strips narrower";
        if ratio < 1.0 {
            found.push(Problem::error(RULE.code, place, format!("{message}, 1 is the least"), help));
        } else {
            found.push(Problem::warning(RULE.code, place, format!("{message}, {WARN_RATIO} is due"), help));
        }
    }
    found
}
