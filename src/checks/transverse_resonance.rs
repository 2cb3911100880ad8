//! Is a strip so wide that it resonates across?

use crate::artwork::highest_hz;
use crate::base::Problem;
use crate::checks::Rule;
use crate::checks::Subject;
use crate::checks::microwave::SPEED_OF_LIGHT;
use crate::checks::microwave::band_top_hz;
use crate::checks::microwave::place_of;
use crate::layout::Part;

pub(super) const RULE: Rule = Rule {
    code: "transverse-resonance",
    about: "a strip a quarter wave wide in the filter's band (error), or half a wave at the highest requirement (warning)",
    source: "R. Garg, I. Bahl, M. Bozzi, Microstrip Lines and Slotlines, 3rd ed. 2013, section 2.6: cutoff c / (sqrt(er) (2 w + 0.8 h)) (from memory)",
    run,
};

/// The frequency at which a strip of this width is half a wave wide, fringing of 0.2 h at each side counted.
pub(super) fn cutoff_hz(width_m: f64, height_m: f64, permittivity: f64) -> f64 {
    SPEED_OF_LIGHT / (permittivity.sqrt() * (2.0 * width_m + 0.8 * height_m))
}

fn run(subject: &Subject) -> Vec<Problem> {
    let order = &subject.dimensions.order;
    let (height_m, permittivity) = (order.laminate.thickness_m, order.laminate.permittivity);
    let (band_hz, highest_hz) = (band_top_hz(order), highest_hz(order));
    let mut found = Vec::new();
    let mut widest: Option<(f64, String)> = None;
    for placed in &subject.layout.parts {
        let Part::Lines { widths, .. } = &placed.part else { continue };
        let names: Vec<&String> = placed.serves.iter().filter(|name| name.contains("width")).collect();
        for (i, width) in widths.iter().enumerate() {
            let name = names.get(i).or(names.first()).map_or(String::new(), |name| (*name).clone());
            if widest.as_ref().is_none_or(|(w, _)| width.m() > *w) {
                widest = Some((width.m(), name));
            }
        }
    }
    if let Some((width_m, name)) = widest {
        let cutoff_hz = cutoff_hz(width_m, height_m, permittivity);
        let message = |share: &str, what: &str, f_hz: f64, limit_hz: f64| {
            format!(
                "{name} is {:.3} mm, {share} wave across at {:.2} GHz; {what} is {:.2} GHz",
                width_m * 1e3,
                limit_hz * 1e-9,
                f_hz * 1e-9
            )
        };
        let help = "a thinner laminate: strips become narrower in proportion";
        // A quarter wave across is half of the cutoff: from there on the strip is no line any more.
        if band_hz >= 0.5 * cutoff_hz {
            let text = message("a quarter", "the top of the filter's band", band_hz, 0.5 * cutoff_hz);
            found.push(Problem::error(RULE.code, place_of(subject, &name), text, help));
        } else if highest_hz >= cutoff_hz {
            let text = message("half a", "the highest requirement", highest_hz, cutoff_hz);
            found.push(Problem::warning(RULE.code, place_of(subject, &name), text, help));
        }
    }
    found
}
