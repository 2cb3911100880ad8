//! `predict`: the response of an order or a dimension set.

use std::io::Write as _;
use std::path::PathBuf;

use super::Ending;
use super::Voice;
use super::problems;
use super::read::Drawing;
use super::results;
use super::table;
use crate::base::Dimensionality;
use crate::base::Place;
use crate::base::Problem;
use crate::base::parse_quantity;
use crate::network;
use crate::network::Figures;

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
    /// Number of frequencies, evenly spaced
    #[arg(long, default_value_t = 1001)]
    points: usize,
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
    let predicted = drawing.layout().and_then(|layout| {
        let (full, warnings) = network::predict(order, &layout)?;
        problems::print(&warnings, Some(&drawing.source), voice);
        let figures = Figures::of(order, &full);
        let shown = match frequencies(arguments)? {
            Some(f_hz) => network::predict_at(order, &layout, &f_hz)?.0,
            None => full,
        };
        Ok((figures, shown))
    });
    let (figures, shown) = match predicted {
        Ok(predicted) => predicted,
        Err(problems) => return drawing.refuse(&problems, voice),
    };
    if let Some(path) = &arguments.touchstone {
        let written = std::fs::OpenOptions::new().write(true).create_new(true).open(path).and_then(|mut file| {
            network::touchstone::write(&shown, &network::touchstone::comments(order), &mut file)?;
            file.flush()
        });
        if let Err(error) = written {
            let help = "choose another file name or folder; nothing is overwritten";
            return drawing
                .refuse(&[Problem::error("file-not-written", Place::Whole, format!("{}: {error}", path.display()), help)], voice);
        }
    }
    let written = if voice.json {
        table::print_json(&table::figures_json(order, &figures, Some(&shown)))
    } else if arguments.from.is_some() {
        results(&(table::figures_text(order, &figures) + &table::response_text(&shown)))
    } else {
        results(&table::figures_text(order, &figures))
    };
    if written == Ending::Done && !figures.all_met() { Ending::Unmet } else { written }
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
        return Ok(None);
    }
    let (from_hz, to_hz) = (end(&arguments.from, "from")?, end(&arguments.to, "to")?);
    if from_hz <= 0.0 || to_hz <= from_hz {
        return Err(problem(format!("the sweep runs from {from_hz} Hz to {to_hz} Hz"), "give --from above zero and below --to"));
    }
    if !(2..=MOST).contains(&arguments.points) {
        return Err(problem(format!("--points is {}", arguments.points), "give 2 to 1000000 points"));
    }
    let step = (to_hz - from_hz) / (arguments.points - 1) as f64;
    Ok(Some((0..arguments.points).map(|i| from_hz + step * i as f64).collect()))
}
