//! Section of the stack, drill table, table of the controlled features, smallest features.

use super::COPPER;
use super::FAINT;
use super::INK;
use super::LAMINATE;
use super::PAPER;
use super::fitted;
use super::flow::Flow;
use super::sheet::Align;
use super::sheet::Font;
use crate::base::Nm;
use crate::order::StackLayer;
use crate::package::facts;
use crate::package::facts::mm;
use crate::package::facts::um;
use crate::package::job::Job;

/// Copper in the section, which is not to scale.
const COPPER_HEIGHT: f64 = 2.4;
/// Dielectric: so much and no more, by its thickness.
const DIELECTRIC_HEIGHT: [f64; 2] = [7.5, 14.0];

pub(super) fn write(job: &Job, flow: &mut Flow) {
    stack(job, flow);
    holes(job, flow);
    features(job, flow);
    smallest(job, flow);
}

fn stack(job: &Job, flow: &mut Flow) {
    let (order, board) = (job.order(), job.bundle.board);
    flow.heading("SECTION OF THE STACK (NOT TO SCALE)");
    let layers = order.stack();
    let thickest = layers.iter().map(StackLayer::thickness_m).fold(0.0, f64::max);
    let height_of = |layer: &StackLayer| match layer {
        StackLayer::Copper { .. } => COPPER_HEIGHT,
        StackLayer::Dielectric { thickness_m, .. } => {
            let [least, most] = DIELECTRIC_HEIGHT;
            least + (most - least) * thickness_m / thickest
        }
    };
    let total: f64 = layers.iter().map(height_of).sum();
    let last = order.copper_layers();
    let plated = board.holes.iter().any(|hole| hole.is_plated());
    let column = flow.width();
    let Some((at, sheet)) = flow.take(total + 6.0) else { return };
    let width = 44.0;
    let mut y = at[1] + 3.0 + total;
    for layer in &layers {
        let height = height_of(layer);
        y -= height;
        match layer {
            StackLayer::Dielectric { .. } => sheet.rectangle([at[0], y], [width, height], Some(LAMINATE), Some((0.15, INK))),
            // The top shows a strip on either side of a gap, and ground at a plated hole.
            StackLayer::Copper { number: 1, .. } => {
                for (x, w) in [(0.16, 0.20), (0.42, 0.20), (0.80, 0.20)] {
                    sheet.rectangle([at[0] + x * width, y], [w * width, height], Some(COPPER), Some((0.15, INK)));
                }
            }
            StackLayer::Copper { .. } => sheet.rectangle([at[0], y], [width, height], Some(COPPER), Some((0.15, INK))),
        }
    }
    if plated {
        let (x, low, high) = (at[0] + 0.90 * width, at[1] + 3.0, at[1] + 3.0 + total);
        sheet.rectangle([x - 1.6, low], [3.2, high - low], Some(COPPER), None);
        sheet.rectangle([x - 0.9, low - 0.05], [1.8, high - low + 0.1], Some(PAPER), None);
    }
    let mut y = at[1] + 3.0 + total;
    for layer in &layers {
        let height = height_of(layer);
        y -= height;
        let (name, value) = match layer {
            StackLayer::Copper { number, base_m, plating_m } => {
                let place = match *number {
                    1 => "top, filter",
                    n if n == last => "bottom, ground",
                    _ => "inner, ground",
                };
                let built = if *plating_m > 0.0 {
                    format!("{} \u{b5}m foil + {} \u{b5}m plating", um(*base_m), um(*plating_m))
                } else {
                    format!("{} \u{b5}m foil, not plated", um(*base_m))
                };
                (format!("Copper {number} ({place})"), format!("{} \u{b5}m finished: {built}", um(layer.thickness_m())))
            }
            StackLayer::Dielectric { material, permittivity, thickness_m, thickness_tolerance_m, .. } => {
                let er = if *material == order.laminate.class {
                    format!("er {permittivity} \u{b1}{}", order.laminate.permittivity_tolerance)
                } else {
                    format!("er {permittivity}")
                };
                (material.clone(), format!("{} \u{b1}{} mm, {er}", mm(*thickness_m), mm(*thickness_tolerance_m)))
            }
        };
        let middle = y + 0.5 * height;
        let x = at[0] + width + 2.0;
        fitted(sheet, [x, middle - 0.8], 2.4, Font::Bold, 34.0, INK, &name);
        fitted(sheet, [x + 35.0, middle - 0.8], 2.4, Font::Plain, column - width - 37.0, INK, &value);
    }
    let overall = format!(
        "Overall {} \u{b1}{} mm over foil and plating, without finish, mask and legend.",
        mm(order.board.thickness_m),
        mm(order.board.thickness_tolerance_m)
    );
    if let Some((at, sheet)) = flow.take(4.5) {
        sheet.text([at[0], at[1] + 1.5], 2.4, Font::Plain, Align::Left, FAINT, &overall);
    }
    flow.gap(2.0);
}

fn row(cells: &[&str]) -> Vec<String> {
    cells.iter().map(|cell| (*cell).to_string()).collect()
}

fn holes(job: &Job, flow: &mut Flow) {
    let (order, board) = (job.order(), job.bundle.board);
    flow.heading("DRILL TABLE (FINISHED SIZES)");
    let kinds = facts::hole_kinds(board);
    if kinds.is_empty() {
        flow.paragraph("", "No holes and no slots.");
        return;
    }
    let mut rows = vec![row(&["SYMBOL", "SIZE", "TOLERANCE", "PLATED", "QUANTITY", "LAYERS", "PAD", "FOR"])];
    for kind in &kinds {
        rows.push(vec![
            kind.symbol.clone(),
            kind.length.map_or(mm(kind.diameter.m()), |length| format!("{} \u{d7} {}", mm(kind.diameter.m()), mm(length.m()))),
            format!("\u{b1}{}", mm(order.shop.hole_tolerance_m)),
            if kind.plated { "yes" } else { "no" }.to_string(),
            kind.at.len().to_string(),
            format!("1-{}", order.copper_layers()),
            if kind.pad > Nm::ZERO { mm(kind.pad.m()) } else { "none".to_string() },
            kind.purpose.to_string(),
        ]);
    }
    flow.table(&rows, &[1, 4, 6]);
    for kind in kinds.iter().filter(|kind| !kind.plated || kind.length.is_some()) {
        let places: Vec<String> = kind.at.iter().map(|at| format!("({:.3}, {:.3})", at.x.mm(), at.y.mm())).collect();
        flow.paragraph(&kind.symbol, &format!("at {}", places.join(", ")));
    }
    flow.gap(1.0);
}

fn features(job: &Job, flow: &mut Flow) {
    let (order, board) = (job.order(), job.bundle.board);
    flow.heading("CONTROLLED FEATURES OF COPPER 1 (FINISHED, AT THE FOOT)");
    let features = facts::features(board);
    if features.is_empty() {
        flow.paragraph("", "None beyond the smallest features below.");
        return;
    }
    let tolerance = format!("\u{b1}{}", mm(order.shop.line_tolerance_m));
    let mut rows = vec![row(&["NO.", "FEATURE", "NOMINAL", "TOLERANCE", "X", "Y"])];
    for feature in &features {
        rows.push(vec![
            feature.number.to_string(),
            feature.callout.dimension.clone(),
            format!("{:.4}", feature.nominal_m * 1e3),
            tolerance.clone(),
            format!("{:.3}", feature.at.x.mm()),
            format!("{:.3}", feature.at.y.mm()),
        ]);
    }
    flow.table(&rows, &[0, 2, 4, 5]);
}

fn smallest(job: &Job, flow: &mut Flow) {
    flow.heading("SMALLEST FEATURES USED");
    let mut rows = vec![row(&["FEATURE", "USED", "YOUR LIMIT AS WE KNOW IT"])];
    for (what, used, limit) in facts::smallest(job.order(), job.bundle.board) {
        rows.push(vec![what.to_string(), used.map_or("none".to_string(), |used| format!("{:.4}", used * 1e3)), mm(limit)]);
    }
    flow.table(&rows, &[1, 2]);
}
