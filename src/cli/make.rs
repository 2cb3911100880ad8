//! `make` and `draw`: the whole package, from an order or from a dimension set.

use std::path::PathBuf;

use super::Ending;
use super::Voice;
use super::dimension::say_reached;
use super::problems;
use super::read::Drawing;
use super::read::Ordered;
use super::results;
use super::table;
use crate::Made;
use crate::order::Source;
use crate::package;
use crate::package::Bundle;
use crate::package::How;

/// Makes the whole package of an order: synthesis, refinement, artwork, checks, prediction, files for the board house
#[derive(clap::Args, Debug)]
pub struct MakeArguments {
    /// The order
    order: PathBuf,
    #[command(flatten)]
    target: Target,
}

/// Makes the package of a dimension set, as it stands (edited by hand or not)
#[derive(clap::Args, Debug)]
pub struct DrawArguments {
    /// The dimension set, as written by `dimension`
    dimensions: PathBuf,
    #[command(flatten)]
    target: Target,
}

#[derive(clap::Args, Debug)]
struct Target {
    /// The folder in which the package's own folder <name> is made
    #[arg(long, value_name = "DIR", default_value = "out")]
    out: PathBuf,
    /// Replaces an existing package of that name, whole
    #[arg(long)]
    replace: bool,
    /// Writes the files for the board house although a design rule is broken, marked as such
    #[arg(long)]
    despite_rules: bool,
}

/// Runs `make`.
pub fn run_make(arguments: &MakeArguments, voice: Voice) -> Ending {
    let ordered = match Ordered::open(&arguments.order, voice) {
        Ok(ordered) => ordered,
        Err(ending) => return ending,
    };
    let progress = voice.progress("synthesizing");
    let chosen = match crate::dimension(&ordered.order) {
        Ok(chosen) => chosen,
        Err(found) => return ordered.refuse(&found, voice),
    };
    progress.set_message("drawing and predicting");
    let drawn = crate::draw(&chosen.refined.dimensions);
    progress.finish_and_clear();
    match drawn {
        Ok(made) => {
            say_reached(&chosen, voice);
            finish(&made, &arguments.target, &ordered.source, voice)
        }
        Err(found) => ordered.refuse(&found, voice),
    }
}

/// Runs `draw`.
pub fn run_draw(arguments: &DrawArguments, voice: Voice) -> Ending {
    let drawing = match Drawing::open_set(&arguments.dimensions, voice) {
        Ok(drawing) => drawing,
        Err(ending) => return ending,
    };
    match crate::draw(&drawing.dimensions) {
        Ok(made) => finish(&made, &arguments.target, &drawing.source, voice),
        Err(found) => drawing.refuse(&found, voice),
    }
}

fn finish(made: &Made, target: &Target, source: &Source, voice: Voice) -> Ending {
    problems::print(&made.findings, Some(source), voice);
    let rules_broken = made.findings.iter().any(crate::base::Problem::is_error);
    let bundle = Bundle {
        dimensions: &made.dimensions,
        layout: &made.layout,
        board: &made.board,
        response: &made.response,
        figures: &made.figures,
        findings: &made.findings,
    };
    let withhold = rules_broken && !target.despite_rules;
    let how = How { replace: target.replace, withhold, source: Some(&source.path) };
    let folder = match package::put(&bundle, &target.out, how) {
        Ok(folder) => folder,
        Err(problem) => return super::read::refuse(&[problem], None, voice),
    };
    let order = &made.dimensions.order;
    let models = match crate::network::models(order, &made.layout) {
        Ok(models) => models,
        Err(found) => return super::read::refuse(&found, Some(source), voice),
    };
    let written = if voice.json {
        let mut value = table::figures_json(order, &made.figures, None);
        value["package"] = folder.display().to_string().into();
        value["line_models"] = table::models_json(&models);
        value["degree"] = made.dimensions.degree.into();
        value["board_house_files_withheld"] = withhold.into();
        value["findings"] = made.findings.iter().map(|p| problems::to_json(p, Some(source))).collect();
        table::print_json(&value)
    } else {
        let note = if withhold { "  (files for the board house withheld: a design rule is broken)" } else { "" };
        results(&format!(
            "{}{}\n  package: {}{note}\n",
            table::figures_text(order, &made.figures),
            table::models_text(&models),
            folder.display()
        ))
    };
    let met = made.figures.all_met() && !rules_broken;
    if written == Ending::Done && !met { Ending::Unmet } else { written }
}
