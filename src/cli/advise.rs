//! `advise`: the same requirement in every family that passes such a band, in one comparison.

use std::fmt::Write as _;
use std::path::PathBuf;

use serde_json::Value;
use serde_json::json;

use super::Ending;
use super::Voice;
use super::read::Ordered;
use super::results;
use super::table;
use crate::Made;
use crate::base::Nm;
use crate::base::Problem;
use crate::family::FAMILIES;
use crate::family::Family;
use crate::layout::Part;
use crate::order::Band;
use crate::order::Order;
use crate::order::Passes;
use crate::refine::Sensitivities;
use crate::refine::Shift;
use crate::refine::sensitivities;

/// Lays an order out in every family that passes such a band, and compares: size, limits, loss, spurious passbands, sensitivities, vias
#[derive(clap::Args, Debug)]
pub struct Arguments {
    /// The order; keys of its family's own count for that family only
    order: PathBuf,
}

/// What became of the order in one family.
struct Advice {
    family: &'static str,
    ordered: bool,
    outcome: Result<Laid, Problem>,
}

/// A filter laid out.
struct Laid {
    made: Made,
    narrowest_line: Option<Nm>,
    narrowest_gap: Option<Nm>,
    vias: usize,
    shifts: Option<Sensitivities>,
}

impl Laid {
    fn size_mm(&self) -> [f64; 2] {
        let corner = self.made.board.outline.outer.iter().max().copied().unwrap_or_default();
        [corner.x.mm(), corner.y.mm()]
    }

    fn broken(&self) -> Option<&Problem> {
        self.made.findings.iter().find(|problem| problem.is_error())
    }

    fn is_met(&self) -> bool {
        self.made.figures.all_met() && self.broken().is_none()
    }

    /// What stands against it, worst first.
    fn against(&self) -> Option<String> {
        if let Some(broken) = self.broken() {
            return Some(format!("breaks a rule: {}", broken.message));
        }
        let missed = self.made.figures.verdicts.iter().filter(|verdict| !verdict.is_met());
        missed.min_by(|a, b| a.margin.total_cmp(&b.margin)).map(|verdict| format!("misses: {}", verdict.describe()))
    }
}

/// Runs the command.
pub fn run(arguments: &Arguments, voice: Voice) -> Ending {
    let ordered = match Ordered::open(&arguments.order, voice) {
        Ok(ordered) => ordered,
        Err(ending) => return ending,
    };
    let progress = voice.progress("laying out in every family");
    let wanted = passes(&ordered.order);
    let all: Vec<Advice> =
        FAMILIES.iter().filter(|family| family.passes() == wanted).map(|family| advice(*family, &ordered.order)).collect();
    progress.finish_and_clear();
    let written = if voice.json { table::print_json(&json(&ordered.order, &all)) } else { results(&text(&ordered.order, &all)) };
    let laid: Vec<&Laid> = all.iter().filter_map(|advice| advice.outcome.as_ref().ok()).collect();
    match written {
        Ending::Done if laid.is_empty() => Ending::NothingMade,
        Ending::Done if !laid.iter().any(|laid| laid.is_met()) => Ending::Unmet,
        written => written,
    }
}

fn passes(order: &Order) -> Passes {
    match order.filter.band {
        Band::LowPass { .. } => Passes::Low,
        Band::HighPass { .. } => Passes::High,
        Band::BandPass { .. } => Passes::Band,
        Band::BandStop { .. } => Passes::Stop,
    }
}

fn advice(family: &'static dyn Family, order: &Order) -> Advice {
    let ordered = order.filter.family == family.name();
    let mut asked = order.clone();
    if !ordered {
        asked.filter.family = family.name().into();
        asked.filter.own.clear();
    }
    Advice { family: family.name(), ordered, outcome: laid(family, &asked) }
}

fn laid(family: &dyn Family, order: &Order) -> Result<Laid, Problem> {
    let (least, most) = family.degrees();
    if let Some(degree) = order.filter.degree.filter(|degree| !(least..=most).contains(degree)) {
        return Err(Problem::error(
            "degree-not-of-the-family",
            crate::base::Place::Key("filter.degree".into()),
            format!("degree {degree} is ordered, it draws {least} to {most}"),
            "leave the degree out, or choose another family",
        ));
    }
    // Refusals carry at least one problem; the first one is the reason, the rest follow from it.
    let first = |problems: Vec<Problem>| {
        problems.into_iter().next().unwrap_or_else(|| {
            Problem::error(
                "not-made",
                crate::base::Place::Whole,
                "no reason was given",
                "this is a fault of the program: please report the order",
            )
        })
    };
    let chosen = crate::dimension(order).map_err(first)?;
    let made = crate::draw(&chosen.refined.dimensions).map_err(first)?;
    let (mut lines, mut gaps, mut vias) = (Vec::new(), Vec::new(), 0);
    for placed in &made.layout.parts {
        match &placed.part {
            Part::Lines { widths, gaps: between, .. } => {
                lines.extend(widths.iter().copied());
                gaps.extend(between.iter().copied());
            }
            Part::Gap { width } => gaps.push(*width),
            Part::Via { count, .. } => vias += count,
            _ => {}
        }
    }
    // A band that the tolerances move out of sight has no first-order shift; the table shows a dash.
    let shifts = sensitivities(family, &made.dimensions).ok();
    Ok(Laid { narrowest_line: lines.into_iter().min(), narrowest_gap: gaps.into_iter().min(), vias, shifts, made })
}

fn text(order: &Order, all: &[Advice]) -> String {
    let mut text = String::new();
    let shop = &order.shop;
    let _ = writeln!(text, "{}, revision {}: {}", order.name, order.revision, order.title);
    let _ = writeln!(
        text,
        "the shop's narrowest line is {:.3} mm, its narrowest gap {:.3} mm; tolerances: permittivity {:.3}, thickness {:.3} mm, line width {:.3} mm\n",
        shop.line_m * 1e3,
        shop.gap_m * 1e3,
        order.laminate.permittivity_tolerance,
        order.laminate.thickness_tolerance_m * 1e3,
        shop.line_tolerance_m * 1e3
    );
    let columns = [
        "",
        "degree",
        "size mm",
        "line mm",
        "gap mm",
        "loss dB",
        "spurious GHz",
        "vias",
        "er: centre, width MHz",
        "thickness",
        "line width",
    ];
    let mut rows: Vec<Vec<String>> = vec![columns.map(String::from).to_vec()];
    for advice in all {
        let Ok(laid) = &advice.outcome else { continue };
        let mm = |value: Option<Nm>| value.map_or_else(|| "-".into(), |value| format!("{:.3}", value.mm()));
        let moved = |of: fn(&Sensitivities) -> Shift| {
            laid.shifts
                .as_ref()
                .map(of)
                .map_or_else(|| "-".into(), |shift| format!("{:+.1}, {:+.1}", shift.center_hz / 1e6, shift.width_hz / 1e6))
        };
        let [length_mm, width_mm] = laid.size_mm();
        rows.push(vec![
            advice.family.into(),
            laid.made.dimensions.degree.to_string(),
            format!("{length_mm:.1} x {width_mm:.1}"),
            mm(laid.narrowest_line),
            mm(laid.narrowest_gap),
            format!("{:.2}", laid.made.figures.worst_loss_db),
            laid.made.figures.spurious_hz.map_or_else(|| "-".into(), |f_hz| format!("{:.3}", f_hz / 1e9)),
            laid.vias.to_string(),
            moved(|shifts| shifts.permittivity),
            moved(|shifts| shifts.thickness),
            moved(|shifts| shifts.line_width),
        ]);
    }
    if rows.len() > 1 {
        let widest: Vec<usize> = (0..columns.len())
            .map(|i| rows.iter().filter_map(|row| row.get(i)).map(|cell| cell.chars().count()).max().unwrap_or(0))
            .collect();
        for row in &rows {
            let cells: Vec<String> = row.iter().zip(&widest).map(|(cell, width)| format!("{cell:<width$}")).collect();
            let _ = writeln!(text, "  {}", cells.join("  ").trim_end());
        }
        text.push('\n');
    }
    for advice in all {
        let mark = if advice.ordered { " (as ordered)" } else { "" };
        let verdict = match &advice.outcome {
            Ok(laid) => laid.against().unwrap_or_else(|| "meets every requirement and rule".into()),
            Err(problem) => format!("cannot: {}\n      {}", problem.message, problem.help),
        };
        let _ = writeln!(text, "  {}{mark}: {verdict}", advice.family);
    }
    text
}

fn json(order: &Order, all: &[Advice]) -> Value {
    let families: Vec<Value> = all
        .iter()
        .map(|advice| match &advice.outcome {
            Err(problem) => json!({
                "name": advice.family, "as_ordered": advice.ordered, "possible": false, "met": false,
                "code": problem.code, "reason": problem.message, "help": problem.help,
            }),
            Ok(laid) => {
                let moved = |shift: Shift| json!({ "center_hz": shift.center_hz, "width_hz": shift.width_hz });
                let [length_mm, width_mm] = laid.size_mm();
                json!({
                    "name": advice.family, "as_ordered": advice.ordered, "possible": true, "met": laid.is_met(), "against": laid.against(),
                    "degree": laid.made.dimensions.degree, "length_m": length_mm * 1e-3, "width_m": width_mm * 1e-3,
                    "narrowest_line_m": laid.narrowest_line.map(Nm::m), "narrowest_gap_m": laid.narrowest_gap.map(Nm::m), "vias": laid.vias,
                    "worst_loss_db": laid.made.figures.worst_loss_db, "spurious_hz": laid.made.figures.spurious_hz,
                    "shift_by_permittivity": laid.shifts.map(|shifts| moved(shifts.permittivity)),
                    "shift_by_thickness": laid.shifts.map(|shifts| moved(shifts.thickness)),
                    "shift_by_line_width": laid.shifts.map(|shifts| moved(shifts.line_width)),
                    "code": laid.broken().map(|problem| problem.code),
                })
            }
        })
        .collect();
    json!({ "name": order.name, "shop_line_m": order.shop.line_m, "shop_gap_m": order.shop.gap_m, "families": families })
}
