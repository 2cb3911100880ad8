//! The least degree that meets the requirements, loss included; or which two limits leave none.

use super::Refined;
use super::refine;
use crate::base::Place;
use crate::base::Problem;
use crate::family::Family;
use crate::family::Target;
use crate::network::Figures;
use crate::network::predict;
use crate::order::Limit;
use crate::order::Order;

/// A degree whose lossless prototype falls short of a rejection by more than this is not tried: the distributed circuit and its losses
/// add less than this at the frequencies of a requirement below the second passband.
const HOPELESS_DB: f64 = 6.0;

/// Degrees in a row that find no geometry before the search ends: a greater one asks for weaker couplings and is as out of reach.
const MOST_WITHOUT_GEOMETRY: usize = 2;

/// A refined set with the reason for its degree.
#[derive(Clone, Debug, PartialEq)]
pub struct Chosen {
    /// The set.
    pub refined: Refined,
    /// One sentence on the choice; `None` when the order names the degree.
    pub reason: Option<String>,
}

/// Synthesizes and refines an order, at its degree or at the least one that meets every requirement.
///
/// # Errors
/// Those of the family and of refinement; `degree-out-of-reach` names the limit that fails with each degree;
/// `degree-undetermined` when the order gives neither a degree nor a rejection.
pub fn synthesize(family: &dyn Family, order: &Order) -> Result<Chosen, Vec<Problem>> {
    if let Some(degree) = order.filter.degree {
        let (guess, _) = family.first_guess(order, degree)?;
        return Ok(Chosen { refined: refine(family, &guess)?, reason: None });
    }
    let rejects = |l: &Limit| matches!(l, Limit::RejectionAtLeast { .. });
    if !order.requirements.iter().flat_map(|r| &r.limits).any(rejects) {
        return Err(vec![Problem::error(
            "degree-undetermined",
            Place::Key("filter".into()),
            "without a degree the requirements choose it, and none of them asks for rejection",
            "add degree = 3 under [filter], or a [[requirement]] with rejection = { at-least = \"30 dB\" }",
        )]);
    }
    let (least, most) = family.degrees();
    let mut misses: Vec<Miss> = Vec::new();
    let mut without_geometry = 0;
    for degree in least..=most {
        if let Some(miss) = hopeless(order, &family.target(order, degree)) {
            without_geometry = 0;
            misses.push(Miss { degree, falls_short: true, why: miss, mend: None });
            continue;
        }
        let tried = family.first_guess(order, degree).and_then(|(guess, _)| refine(family, &guess));
        let refined = match tried {
            Ok(refined) => refined,
            Err(problems) => {
                // A port or a laminate no degree can mend is reported as what it is.
                if problems.iter().any(|p| p.code == "impedance-out-of-reach" || p.code == "band-not-of-the-family") {
                    return Err(problems);
                }
                let first = problems.into_iter().next();
                let (why, mend) = first.map_or_else(Default::default, |p| (p.message, Some(p.help)));
                misses.push(Miss { degree, falls_short: false, why, mend });
                without_geometry += 1;
                if without_geometry == MOST_WITHOUT_GEOMETRY {
                    break;
                }
                continue;
            }
        };
        without_geometry = 0;
        let figures = figures(family, &refined)?;
        if figures.all_met() {
            return Ok(Chosen { reason: Some(reason(degree, &figures)), refined });
        }
        let worst = |falls_short: bool| {
            let of_kind = figures.verdicts.iter().filter(|v| !v.is_met() && rejects(&v.limit) == falls_short);
            of_kind.min_by(|a, b| a.margin.total_cmp(&b.margin)).map(|v| Miss { degree, falls_short, why: v.describe(), mend: None })
        };
        misses.extend(worst(true));
        // Loss grows with the degree: once it fails, no greater degree can do better.
        if let Some(lossy) = worst(false) {
            misses.push(lossy);
            break;
        }
    }
    Err(vec![out_of_reach(&misses)])
}

/// The predicted figures of a refined set, loss and launches included.
fn figures(family: &dyn Family, refined: &Refined) -> Result<Figures, Vec<Problem>> {
    let layout = family.layout(&refined.dimensions)?;
    let order = &refined.dimensions.order;
    let (board, _) = crate::artwork::board(order, &layout)?;
    let (response, _) = predict(order, &board.run_on(&layout))?;
    Ok(Figures::of(order, &response))
}

/// Which rejection the lossless prototype of a degree already misses beyond hope.
fn hopeless(order: &Order, target: &Target) -> Option<String> {
    order.requirements.iter().find_map(|requirement| {
        requirement.limits.iter().find_map(|limit| {
            let Limit::RejectionAtLeast { db, .. } = limit else { return None };
            let found_db = target.attenuation_db(requirement.from_hz).min(target.attenuation_db(requirement.to_hz));
            (found_db < db - HOPELESS_DB).then(|| {
                format!(
                    "rejection about {found_db:.1} dB without loss where at least {db} dB is asked, {}",
                    band_text(requirement.from_hz, requirement.to_hz)
                )
            })
        })
    })
}

fn band_text(from_hz: f64, to_hz: f64) -> String {
    format!("{:.4} to {:.4} GHz", from_hz / 1e9, to_hz / 1e9)
}

fn reason(degree: usize, figures: &Figures) -> String {
    let tightest = figures.verdicts.iter().min_by(|a, b| a.margin.total_cmp(&b.margin));
    match tightest {
        Some(verdict) => format!("degree {degree} is the least that meets every requirement; the tightest: {}", verdict.describe()),
        None => format!("degree {degree} is the least that meets every requirement"),
    }
}

/// Why a degree does not do.
struct Miss {
    degree: usize,
    /// It rejects too little; otherwise it loses or reflects too much, or has no geometry.
    falls_short: bool,
    why: String,
    /// What would make a geometry possible.
    mend: Option<String>,
}

/// Names the greatest degree that rejects too little, and the first that fails otherwise.
fn out_of_reach(misses: &[Miss]) -> Problem {
    let short = misses.iter().rev().find(|m| m.falls_short);
    let otherwise = misses.iter().find(|m| !m.falls_short);
    let shown: Vec<String> = short.into_iter().chain(otherwise).map(|m| format!("degree {}: {}", m.degree, m.why)).collect();
    let mend = otherwise.and_then(|miss| miss.mend.as_ref()).map_or_else(String::new, |mend| format!("; or {mend}"));
    Problem::error(
        "degree-out-of-reach",
        Place::Key("filter.degree".into()),
        format!("no degree meets the requirements (loss grows with the degree, rejection shrinks without). {}", shown.join("; ")),
        format!(
            "allow more insertion loss or less rejection, move the stopband away from the passband and from the spurious passbands near two and three times it, or choose a laminate with less loss{mend}"
        ),
    )
}
