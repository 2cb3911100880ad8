//! `dimension`: the dimension set of an order.

use std::path::PathBuf;

use super::Ending;
use super::Voice;
use super::fresh_file;
use super::read::Ordered;
use super::results;
use super::table;
use crate::base::Problem;
use crate::dimensions;
use crate::line::Models;
use crate::network;
use crate::refine::Chosen;

/// Synthesizes the dimension set of an order: each value with its first guess, the electrical target it serves and every correction
#[derive(clap::Args, Debug)]
pub struct Arguments {
    /// The order
    order: PathBuf,
    /// Where to write it; to stdout without (refuses to overwrite)
    file: Option<PathBuf>,
}

/// Runs the command.
pub fn run(arguments: &Arguments, voice: Voice) -> Ending {
    let ordered = match Ordered::open(&arguments.order, voice) {
        Ok(ordered) => ordered,
        Err(ending) => return ending,
    };
    let chosen = match crate::dimension(&ordered.order) {
        Ok(chosen) => chosen,
        Err(problems) => return ordered.refuse(&problems, voice),
    };
    let models = match line_models(&chosen) {
        Ok(models) => models,
        Err(problems) => return ordered.refuse(&problems, voice),
    };
    let text = dimensions::write(&chosen.refined.dimensions);
    let written = match &arguments.file {
        Some(path) => {
            if let Err(problem) = fresh_file::write(path, text.as_bytes()) {
                return ordered.refuse(&[problem], voice);
            }
            voice.say(&format!("wrote {}", path.display()));
            Ending::Done
        }
        None if voice.json => table::print_json(&json(&chosen, &models)),
        None => results(&text),
    };
    say_reached(&chosen, voice);
    voice.say(table::models_text(&models).trim());
    written
}

/// What gave the line constants of the chosen dimensions.
fn line_models(chosen: &Chosen) -> Result<Models, Vec<Problem>> {
    let set = &chosen.refined.dimensions;
    let family = crate::family::of(&set.order).map_err(|problem| vec![problem])?;
    network::models(&set.order, &family.layout(set)?)
}

/// One line each on the degree, on what refinement reached and on what the grid left.
pub fn say_reached(chosen: &Chosen, voice: Voice) {
    if let Some(reason) = &chosen.reason {
        voice.say(reason);
    }
    for curve in &chosen.refined.curves {
        voice.say(&curve.describe());
    }
    voice.say(&format!("refined: lossless {}", chosen.refined.before_snapping.describe()));
    voice.say(&format!("on the shop grid: lossless {}", chosen.refined.after_snapping.describe()));
}

fn json(chosen: &Chosen, models: &Models) -> serde_json::Value {
    let miss = |m: &crate::refine::Miss| serde_json::json!({ "edges_hz": m.edges_hz, "return_loss_db": m.return_loss_db });
    let set = &chosen.refined.dimensions;
    let list: Vec<_> = set
        .list
        .iter()
        .map(|d| {
            let serves: serde_json::Map<_, _> = d.serves.iter().map(|(name, value)| (name.clone(), (*value).into())).collect();
            let corrections: Vec<_> = d.corrections_m.iter().map(|(name, amount)| serde_json::json!({ "correction": name, "amount_m": amount })).collect();
            serde_json::json!({ "name": d.name, "value_m": d.value_m, "first_guess_m": d.first_guess_m, "serves": serves, "corrections": corrections })
        })
        .collect();
    serde_json::json!({
        "name": set.order.name, "degree": set.degree, "reason": chosen.reason,
        "measured": chosen.refined.curves.iter().map(curve_json).collect::<Vec<_>>(),
        "before_snapping": miss(&chosen.refined.before_snapping), "after_snapping": miss(&chosen.refined.after_snapping), "dimensions": list,
        "line_models": table::models_json(models),
    })
}

/// What was measured on a part of the circuit over one dimension.
fn curve_json(curve: &crate::refine::ProbeCurve) -> serde_json::Value {
    let points: Vec<_> = curve.points.iter().map(|(value_m, measured)| [*value_m, *measured]).collect();
    serde_json::json!({
        "about": curve.about, "dimension": curve.dimension, "aim": curve.aim, "found_m": curve.found_m, "value_m_and_measured": points,
    })
}
