//! `predict`: the response of an order or a dimension set.

use std::path::PathBuf;

use super::Ending;
use super::Voice;
use super::fresh_file;
use super::problems;
use super::read::Drawing;
use super::results;
use super::table;
use crate::base::Dimensionality;
use crate::base::Place;
use crate::base::Problem;
use crate::base::parse_quantity;
use crate::network;

/// Predicts the response: a table of figures with the verdict of each requirement, and a Touchstone file if asked
#[derive(clap::Args, Debug)]
pub struct Arguments {
    /// An order, or a dimension set as written by `dimension`
    file: PathBuf,
    /// First frequency, as "1.2 GHz"
    #[arg(long)]
    from: Option<String>,
    /// Last frequency
    #[arg(long)]
    to: Option<String>,
    /// Number of frequencies, evenly spaced from --from to --to; 1001 without
    #[arg(long)]
    points: Option<usize>,
    /// Writes the S-parameters as Touchstone 1.1 (refuses to overwrite)
    #[arg(long, value_name = "FILE")]
    touchstone: Option<PathBuf>,
}

/// Runs the command.
pub fn run(arguments: &Arguments, voice: Voice) -> Ending {
    let drawing = match Drawing::open(&arguments.file, voice) {
        Ok(drawing) => drawing,
        Err(ending) => return ending,
    };
    let order = &drawing.dimensions.order;
    let predicted = frequencies(arguments).and_then(|f_hz| {
        let made = crate::draw(&drawing.dimensions)?;
        let models = network::models(order, &made.layout)?;
        let shown = match f_hz {
            Some(f_hz) => network::predict_at(order, &made.layout, &f_hz)?,
            None => (made.response, made.findings),
        };
        Ok((made.figures, models, shown))
    });
    let (figures, models, (shown, findings)) = match predicted {
        Ok(predicted) => predicted,
        Err(problems) => return drawing.refuse(&problems, voice),
    };
    let warnings: Vec<Problem> = findings.into_iter().filter(|p| !p.is_error()).collect();
    problems::print(&warnings, Some(&drawing.source), voice);
    if let Some(path) = &arguments.touchstone {
        let mut bytes = Vec::new();
        let written = network::touchstone::write(&shown, &network::touchstone::comments(order), &mut bytes);
        if let Err(problem) = written.map_err(|error| unwritten(&error)).and_then(|()| fresh_file::write(path, &bytes)) {
            return drawing.refuse(&[problem], voice);
        }
    }
    let written = if voice.json {
        let mut json = table::figures_json(order, &figures, Some(&shown));
        if let Some(map) = json.as_object_mut() {
            map.insert("line_models".into(), table::models_json(&models));
        }
        table::print_json(&json)
    } else if arguments.from.is_some() {
        results(&(table::figures_text(order, &figures) + &table::models_text(&models) + &table::response_text(&shown)))
    } else {
        results(&(table::figures_text(order, &figures) + &table::models_text(&models)))
    };
    if written == Ending::Done && !figures.all_met() { Ending::Unmet } else { written }
}

fn unwritten(error: &std::io::Error) -> Problem {
    Problem::error("touchstone-unwritten", Place::Whole, format!("the response cannot be written: {error}"), "ask for fewer points")
}

/// The frequencies asked for; `None` when neither end is given.
fn frequencies(arguments: &Arguments) -> Result<Option<Vec<f64>>, Vec<Problem>> {
    const MOST: usize = 1_000_000;
    let problem = |message: String, help: &str| vec![Problem::error("frequencies-not-a-sweep", Place::Whole, message, help)];
    let end = |text: &Option<String>, name: &str| match text {
        Some(text) => parse_quantity(text, Dimensionality::Frequency)
            .map_err(|message| problem(format!("--{name}: {message}"), "write it as --from \"1.2 GHz\"")),
        None => Err(problem(format!("--{name} is missing"), "give both --from and --to")),
    };
    if arguments.from.is_none() && arguments.to.is_none() {
        return match arguments.points {
            Some(_) => Err(problem("--points without a sweep".into(), "give --from and --to as well")),
            None => Ok(None),
        };
    }
    let points = arguments.points.unwrap_or(1001);
    let (from_hz, to_hz) = (end(&arguments.from, "from")?, end(&arguments.to, "to")?);
    if from_hz <= 0.0 || to_hz <= from_hz {
        return Err(problem(
            format!("the sweep runs from {} GHz to {} GHz", from_hz / 1e9, to_hz / 1e9),
            "give --from above zero and below --to",
        ));
    }
    if !(2..=MOST).contains(&points) {
        return Err(problem(format!("--points is {points}"), "give 2 to 1000000 points"));
    }
    let step = (to_hz - from_hz) / (points - 1) as f64;
    Ok(Some((0..points).map(|i| from_hz + step * i as f64).collect()))
}
