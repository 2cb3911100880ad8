//! The keys of the requirements, and whether they agree with the filter's own band.

use super::table::{Size, Table};
use super::types::{Band, Filter, Limit, Requirement, ResponseShape};
use crate::base::Dimensionality;

/// Any frequency of an order.
pub const FREQUENCY: Size = Size { kind: Dimensionality::Frequency, unit: "GHz", least: 1e6, greatest: 1e12, usual: "2.45 GHz" };
const LEVEL: Size = Size { kind: Dimensionality::Level, unit: "dB", least: 0.001, greatest: 200.0, usual: "20 dB" };
const DELAY: Size = Size { kind: Dimensionality::Time, unit: "ns", least: 1e-15, greatest: 1e-3, usual: "1 ns" };

/// Reads an ordered pair of frequencies.
pub fn band(t: &Table<'_>, key: &'static str) -> Option<[f64; 2]> {
    let [from, to] = t.quantities::<2>(key, &FREQUENCY)?;
    if from < to {
        return Some([from, to]);
    }
    let (from_text, to_text) = (FREQUENCY.show(from), FREQUENCY.show(to));
    if from > to {
        t.error(
            "edges-reversed",
            key,
            format!("{key} runs from {from_text} down to {to_text}; the lower edge comes first"),
            format!("write {key} = [\"{to_text}\", \"{from_text}\"]"),
        );
    } else {
        t.error(
            "band-without-width",
            key,
            format!("both edges of {key} are {from_text}; a band needs a width"),
            format!("write, for example, {key} = [\"{from_text}\", \"{}\"]", FREQUENCY.show(to * 1.05)),
        );
    }
    None
}

/// Reads one `[[requirement]]`.
pub fn read(t: &Table<'_>, filter: Option<&Filter>) -> Option<Requirement> {
    let band = t.resolve("band", "[\"2.35 GHz\", \"2.55 GHz\"]", None, band);
    let mut limits = Vec::new();
    let mut there = false;
    let mut limit = |key: &'static str, side: &'static str, size: &Size, make: &dyn Fn(f64, &Table<'_>) -> Option<Limit>| {
        if t.has(key) {
            there = true;
            let inner = t.table_like(key, &format!("{{ {side} = \"{}\" }}", size.usual));
            let value = inner.size(side, size, None);
            let made = value.and_then(|v| make(v, &inner));
            inner.finish();
            limits.extend(made.map(|m| (key, m)));
        }
    };
    limit("insertion-loss", "at-most", &LEVEL, &|v, _| Some(Limit::InsertionLossAtMost(v)));
    limit("return-loss", "at-least", &LEVEL, &|v, _| Some(Limit::ReturnLossAtLeast(v)));
    limit("rejection", "at-least", &LEVEL, &|db, t| {
        let below_center = if t.has("below-center") { t.flag("below-center")? } else { false };
        Some(Limit::RejectionAtLeast { db, below_center })
    });
    limit("ripple", "at-most", &LEVEL, &|v, _| Some(Limit::RippleAtMost(v)));
    limit("group-delay-variation", "at-most", &DELAY, &|v, _| Some(Limit::GroupDelayVariationAtMost(v)));
    t.finish();
    if !there {
        t.error(
            "requirement-without-limit",
            "band",
            "this requirement sets no limit",
            "add one of insertion-loss, return-loss, rejection, ripple, group-delay-variation, \
             for example rejection = { at-least = \"30 dB\" }",
        );
    }
    let [from_hz, to_hz] = band?;
    if let Some(filter) = filter {
        for (key, limit) in &limits {
            agree(t, key, limit, [from_hz, to_hz], filter);
        }
    }
    Some(Requirement { from_hz, to_hz, limits: limits.into_iter().map(|l| l.1).collect() })
}

/// How a requirement's band lies to the frequencies that the filter passes.
#[derive(Clone, Copy, PartialEq, Eq)]
enum Lies {
    Inside,
    Outside,
    Across,
}

/// Where a band lies; touching an edge is not crossing it.
fn lies(band: Band, [from, to]: [f64; 2]) -> Lies {
    let pass = |low: f64, high: f64| {
        if from >= low && to <= high {
            Lies::Inside
        } else if to <= low || from >= high {
            Lies::Outside
        } else {
            Lies::Across
        }
    };
    match band {
        Band::LowPass { cutoff_hz } => pass(0.0, cutoff_hz),
        Band::HighPass { from_hz, .. } => pass(from_hz, f64::INFINITY),
        Band::BandPass { from_hz, to_hz } => pass(from_hz, to_hz),
        Band::BandStop { from_hz, to_hz } => match pass(from_hz, to_hz) {
            Lies::Inside => Lies::Outside,
            Lies::Outside => Lies::Inside,
            Lies::Across => Lies::Across,
        },
    }
}

/// Reports a limit that the ordered band or shape cannot meet by its nature.
fn agree(t: &Table<'_>, key: &str, limit: &Limit, band: [f64; 2], filter: &Filter) {
    let lies = lies(filter.band, band);
    let shown = format!("{} to {}", FREQUENCY.show(band[0]), FREQUENCY.show(band[1]));
    let passes = describe(filter.band);
    match limit {
        Limit::RejectionAtLeast { .. } if lies != Lies::Outside => t.error(
            "requirement-contradicts-band",
            key,
            format!("rejection is asked for from {shown}, but the filter {passes}"),
            "move the requirement's band out of what the filter passes, or change the filter's band",
        ),
        Limit::RejectionAtLeast { .. } => {}
        _ if lies == Lies::Outside => t.error(
            "requirement-contradicts-band",
            key,
            format!("{key} is asked for from {shown}, but the filter {passes}"),
            "move the requirement's band into what the filter passes, or ask for rejection there",
        ),
        _ if lies == Lies::Across => t.warning(
            "requirement-across-edge",
            key,
            format!("{key} is asked for from {shown}, across a band edge: the filter {passes}"),
            "narrow the requirement's band, or widen the filter's",
        ),
        _ => {}
    }
    if lies != Lies::Inside {
        return;
    }
    let ideal = filter.response.return_loss_db();
    match *limit {
        // Half a thousandth of a dB: an order that states the same figure twice, rounded to 0.001 dB, is no contradiction.
        Limit::ReturnLossAtLeast(db) if db > ideal + 5e-4 => {
            let ripple = -10.0 * (1.0 - 10f64.powf(-db / 10.0)).log10();
            t.warning(
                "requirement-beyond-shape",
                key,
                format!("return-loss of at least {db:?} dB is asked for, but the ordered shape has {ideal:.2} dB at its band edges"),
                format!("order a smaller ripple, filter.ripple = \"{:.4} dB\" or less, or a narrower requirement band", ripple * 0.9),
            );
        }
        Limit::RippleAtMost(db) => {
            let own = match filter.response {
                ResponseShape::EqualRipple { ripple_db } => ripple_db,
                ResponseShape::MaximallyFlat => 10.0 * 2f64.log10(),
            };
            if db < own - 5e-4 {
                t.warning(
                    "requirement-beyond-shape",
                    key,
                    format!("ripple of at most {db:?} dB is asked for, but the ordered shape has {own:.3} dB within its band edges"),
                    format!("order a smaller ripple, filter.ripple = \"{:.4} dB\" or less, or a narrower requirement band", db * 0.5),
                );
            }
        }
        _ => {}
    }
}

/// What a filter passes, for messages.
fn describe(band: Band) -> String {
    match band {
        Band::LowPass { cutoff_hz } => format!("passes up to {}", FREQUENCY.show(cutoff_hz)),
        Band::HighPass { from_hz, .. } => format!("passes from {} upwards", FREQUENCY.show(from_hz)),
        Band::BandPass { from_hz, to_hz } => format!("passes {} to {}", FREQUENCY.show(from_hz), FREQUENCY.show(to_hz)),
        Band::BandStop { from_hz, to_hz } => format!("stops {} to {}", FREQUENCY.show(from_hz), FREQUENCY.show(to_hz)),
    }
}
