//! Figures and verdicts as a table for people and as JSON for programs.

use std::fmt::Write as _;

use serde_json::Value;
use serde_json::json;

use super::Ending;
use super::results;
use crate::line::Models;
use crate::network::Figures;
use crate::network::Response;
use crate::network::Verdict;
use crate::order::Limit;
use crate::order::Order;

/// Writes a JSON value to stdout, indented.
pub fn print_json(value: &Value) -> Ending {
    results(&format!("{value:#}\n"))
}

fn ghz(f_hz: f64) -> String {
    format!("{:.4} GHz", f_hz / 1e9)
}

fn edges(edges_hz: &[f64]) -> String {
    match edges_hz {
        [low, high] => format!("{} to {}  ({:.1} MHz)", ghz(*low), ghz(*high), (high - low) / 1e6),
        [edge] => ghz(*edge),
        _ => "-".into(),
    }
}

/// The figures and a verdict for each requirement, as text.
pub fn figures_text(order: &Order, figures: &Figures) -> String {
    let mut text = String::new();
    let _ = writeln!(text, "{}, revision {}: {}", order.name, order.revision, order.title);
    let _ = writeln!(text, "predicted by the network model, launches included, planes at the board's edge\n");
    for verdict in &figures.verdicts {
        let word = if verdict.is_met() { "met   " } else { "MISSED" };
        let [low, high] = verdict.band_hz;
        let _ = writeln!(text, "  {word}  {:.4} to {:.4} GHz  {}  (margin {})", low / 1e9, high / 1e9, verdict.describe(), margin(verdict));
    }
    if !figures.verdicts.is_empty() {
        text.push('\n');
    }
    let rows = [
        ("centre", ghz(figures.center_hz)),
        ("loss at the centre", format!("{:.2} dB", figures.center_loss_db)),
        ("worst loss in the band", format!("{:.2} dB", figures.worst_loss_db)),
        ("least return loss in the band", format!("{:.2} dB", figures.return_loss_db)),
        ("3 dB edges", edges(&figures.edges_3db_hz)),
        ("return loss of the prototype", edges(&figures.ripple_edges_hz)),
        ("group delay at the centre", format!("{:.3} ns", figures.group_delay_s * 1e9)),
        ("nearest spurious passband", figures.spurious_hz.map_or_else(|| "none within the sweep".into(), ghz)),
    ];
    for (name, value) in rows {
        let _ = writeln!(text, "  {name:<30}{value}");
    }
    text
}

/// Where the line constants come from, as text.
pub fn models_text(models: &Models) -> String {
    format!("  line constants                {}\n", models.describe())
}

/// The same as JSON.
pub fn models_json(models: &Models) -> Value {
    json!({
        "solved": models.solved,
        "closed_form": models.closed_form,
        "error_estimate": models.error_estimate,
        "closed_form_impedance_difference": models.impedance_difference,
        "closed_form_permittivity_difference": models.permittivity_difference,
        "closed_form_coupling_difference": models.coupling_difference,
    })
}

fn margin(verdict: &Verdict) -> String {
    match verdict.limit {
        Limit::GroupDelayVariationAtMost(_) => format!("{:+.3} ns", verdict.margin * 1e9),
        _ => format!("{:+.2} dB", verdict.margin),
    }
}

/// A response as text, one line a frequency.
pub fn response_text(response: &Response) -> String {
    let mut text = String::new();
    let _ = writeln!(text, "\n  {:>12}  {:>9}  {:>9}  {:>9}", "GHz", "|S21| dB", "|S11| dB", "|S22| dB");
    for (i, f) in response.f_hz.iter().enumerate() {
        let level = |s: usize| -crate::network::level_db(response.s[i][s]);
        let _ = writeln!(text, "  {:>12.6}  {:>9.3}  {:>9.3}  {:>9.3}", f / 1e9, level(1), level(0), level(3));
    }
    text
}

/// The figures as JSON, with the response when given.
pub fn figures_json(order: &Order, figures: &Figures, response: Option<&Response>) -> Value {
    let verdicts: Vec<Value> = figures.verdicts.iter().map(verdict_json).collect();
    let mut value = json!({
        "name": order.name,
        "revision": order.revision,
        "method": "network",
        "requirements_met": figures.all_met(),
        "verdicts": verdicts,
        "center_hz": figures.center_hz,
        "center_loss_db": figures.center_loss_db,
        "worst_loss_db": figures.worst_loss_db,
        "return_loss_db": figures.return_loss_db,
        "edges_3db_hz": figures.edges_3db_hz,
        "ripple_edges_hz": figures.ripple_edges_hz,
        "group_delay_s": figures.group_delay_s,
        "spurious_hz": figures.spurious_hz,
    });
    if let Some(response) = response {
        let pairs = |s: usize| response.s.iter().map(|m| [m[s].re, m[s].im]).collect::<Vec<_>>();
        value["response"] =
            json!({ "z0_ohm": response.z0_ohm, "f_hz": response.f_hz, "s11": pairs(0), "s21": pairs(1), "s12": pairs(2), "s22": pairs(3) });
    }
    value
}

/// A verdict for programs: what was asked, what was found, where.
fn verdict_json(verdict: &Verdict) -> Value {
    let (quantity, bound, limit, unit) = match verdict.limit {
        Limit::InsertionLossAtMost(db) => ("insertion-loss", "at-most", db, "dB"),
        Limit::ReturnLossAtLeast(db) => ("return-loss", "at-least", db, "dB"),
        Limit::RejectionAtLeast { db, below_center: false } => ("rejection", "at-least", db, "dB"),
        Limit::RejectionAtLeast { db, below_center: true } => ("rejection-below-center", "at-least", db, "dB"),
        Limit::RippleAtMost(db) => ("ripple", "at-most", db, "dB"),
        Limit::GroupDelayVariationAtMost(seconds) => ("group-delay-variation", "at-most", seconds, "s"),
    };
    json!({
        "requirement": verdict.requirement + 1, "band_hz": verdict.band_hz, "quantity": quantity, "bound": bound, "limit": limit, "unit": unit,
        "found": verdict.found, "at_hz": verdict.at_hz, "margin": verdict.margin, "met": verdict.is_met(),
    })
}
