//! `solve`: the full-wave response of drawn copper.

use std::fmt::Write as _;
use std::io::Write as _;
use std::path::PathBuf;

use serde_json::json;

use super::Ending;
use super::Voice;
use super::problems;
use super::read::refuse;
use super::results;
use super::table;
use crate::base::Place;
use crate::base::Problem;
use crate::field;
use crate::field::GeometryFile;
use crate::field::Options;
use crate::field::Plan;
use crate::field::Solution;
use crate::field::Step;
use crate::network;
use crate::network::level_db;
use crate::order::Source;

/// Solves drawn copper by the method of moments: S-parameters with an error bar from two meshes
#[derive(clap::Args, Debug)]
pub struct Arguments {
    /// A geometry file: layers, box or open board, polygons in mm, ports, sweep
    file: PathBuf,
    /// Writes the S-parameters as Touchstone 1.1 (refuses to overwrite)
    #[arg(long, value_name = "FILE")]
    touchstone: Option<PathBuf>,
    /// Density of the finer mesh: 1 is the plain grid, 2 halves every cell
    #[arg(long, default_value_t = 1.0, value_parser = density)]
    density: f64,
    /// Greatest number of unknowns
    #[arg(long, default_value_t = field::LIMIT)]
    limit: usize,
}

fn density(text: &str) -> Result<f64, String> {
    match text.parse::<f64>() {
        Ok(value) if (0.5..=16.0).contains(&value) => Ok(value),
        _ => Err("write a number from 0.5 to 16".into()),
    }
}

/// Runs the command.
pub fn run(arguments: &Arguments, voice: Voice) -> Ending {
    let source = match Source::open(&arguments.file) {
        Ok(source) => source,
        Err(found) => return refuse(&found, None, voice),
    };
    let (file, warnings) = match field::read_geometry(&source) {
        Ok(read) => read,
        Err(found) => return refuse(&found, Some(&source), voice),
    };
    problems::print(&warnings, Some(&source), voice);
    let options = Options { refine: arguments.density, limit: arguments.limit, ..Options::default() };
    let plan = match Plan::new(&file.geometry, &file.f_hz, options) {
        Ok(plan) => plan,
        Err(found) => return refuse(&found, Some(&source), voice),
    };
    let forecast = plan.forecast;
    voice.say(&format!(
        "{} unknowns and {} on the coarser mesh; some {:.0} MB, {:.1} s a frequency, {:.0} s in all",
        forecast.unknowns[0],
        forecast.unknowns[1],
        (forecast.memory_bytes / 1e6).max(1.0),
        forecast.seconds[0],
        forecast.seconds[1].max(1.0)
    ));
    let bar = voice.progress("solving");
    let solved = plan.run(&file.f_hz, |step| {
        bar.set_message(match step {
            Step::Preparing(mesh) => format!("mesh {mesh}: matrices"),
            Step::Solving(mesh, done, change) if change.is_finite() => {
                format!("mesh {mesh}: {done} frequencies solved, the fit last moved by {change:.1e}")
            }
            Step::Solving(mesh, done, _) => format!("mesh {mesh}: {done} frequencies solved"),
        });
        true
    });
    bar.finish_and_clear();
    let solution = match solved {
        Ok(solution) => solution,
        Err(found) => return refuse(&found, Some(&source), voice),
    };
    if let Some(path) = &arguments.touchstone {
        let written = std::fs::OpenOptions::new().write(true).create_new(true).open(path).and_then(|mut out| {
            network::touchstone::write(&solution.response, &comments(&file, &solution), &mut out)?;
            out.flush()
        });
        if let Err(error) = written {
            let help = "choose another file name or folder; nothing is overwritten";
            let problem = Problem::error("file-not-written", Place::Whole, format!("{}: {error}", path.display()), help);
            return refuse(&[problem], None, voice);
        }
    }
    if voice.json { table::print_json(&as_json(&file, &solution)) } else { results(&as_text(&file, &solution)) }
}

fn surroundings(file: &GeometryFile) -> String {
    let [a, b] = file.geometry.size_m().map(|m| m * 1e3);
    let lid = file.geometry.stack.above_m() * 1e3;
    let top = if lid.is_finite() { format!("lid {lid:.2} mm above the copper") } else { "open above".into() };
    if file.open_board {
        format!("open board, stood in for by a box of {a:.2} x {b:.2} mm, {top}: moves eps_eff by less than 0.1 %")
    } else {
        format!("box {a:.2} x {b:.2} mm, {top}")
    }
}

fn comments(file: &GeometryFile, solution: &Solution) -> Vec<String> {
    let bar = solution.error_bar;
    vec![
        file.title.clone(),
        format!("solved by the method of moments: {} and {} unknowns, not measured", solution.unknowns[0], solution.unknowns[1]),
        surroundings(file),
        format!("greatest difference between the two meshes: S11 {:.4}, S21 {:.4}, S22 {:.4}", bar[0], bar[1], bar[3]),
        "reference planes: where the geometry file has them".into(),
    ]
}

fn as_text(file: &GeometryFile, solution: &Solution) -> String {
    let mut text = String::new();
    let _ = writeln!(text, "{}", file.title);
    let _ = writeln!(text, "full-wave, {}\n", surroundings(file));
    for (number, line) in (1..).zip(&solution.lines) {
        if let Some((eps_eff, impedance)) = line {
            let _ = writeln!(
                text,
                "  port {number}: line of {:.2} ohm, effective permittivity {eps_eff:.4} at the middle of the sweep",
                impedance.re
            );
        }
    }
    let _ = writeln!(
        text,
        "  meshes: {} and {} unknowns; {} and {} frequencies solved, {} fitted",
        solution.unknowns[0],
        solution.unknowns[1],
        solution.solves[0],
        solution.solves[1],
        solution.response.f_hz.len()
    );
    let bar = solution.error_bar;
    let _ = writeln!(
        text,
        "  error bar (greatest difference between the meshes): S11 {:.4}, S21 {:.4}, S22 {:.4}; fit {:.1e}",
        bar[0], bar[1], bar[3], solution.fit_change
    );
    if solution.stair_error_m > 0.0 {
        let _ = writeln!(text, "  slants drawn as stairs within {:.4} mm", solution.stair_error_m * 1e3);
    }
    let best = (0..solution.response.s.len())
        .min_by(|&a, &b| solution.response.insertion_loss_db(a).total_cmp(&solution.response.insertion_loss_db(b)));
    if let Some(i) = best {
        let _ =
            writeln!(text, "  least loss {:.3} dB at {:.4} GHz", solution.response.insertion_loss_db(i), solution.response.f_hz[i] / 1e9);
    }
    // At most so many lines on a screen; the file has them all.
    const MOST_LINES: usize = 41;
    let step = solution.response.f_hz.len().div_ceil(MOST_LINES);
    let _ = writeln!(text, "\n  {:>12}  {:>9}  {:>9}  {:>9}  {:>9}", "GHz", "|S21| dB", "|S11| dB", "|S22| dB", "+- |S21|");
    for i in (0..solution.response.f_hz.len()).step_by(step) {
        let (fine, coarse) = (&solution.response.s[i], &solution.coarser.s[i]);
        let _ = writeln!(
            text,
            "  {:>12.6}  {:>9.3}  {:>9.3}  {:>9.3}  {:>9.5}",
            solution.response.f_hz[i] / 1e9,
            -level_db(fine[1]),
            -level_db(fine[0]),
            -level_db(fine[3]),
            (fine[1] - coarse[1]).norm()
        );
    }
    text
}

fn as_json(file: &GeometryFile, solution: &Solution) -> serde_json::Value {
    let response = &solution.response;
    let pairs = |s: usize| response.s.iter().map(|m| [m[s].re, m[s].im]).collect::<Vec<_>>();
    let lines: Vec<_> =
        solution.lines.iter().map(|l| l.map(|(eps_eff, z)| json!({ "eps_eff": eps_eff, "z0_ohm": [z.re, z.im] }))).collect();
    json!({
        "title": file.title,
        "method": "full-wave",
        "surroundings": surroundings(file),
        "unknowns": solution.unknowns,
        "solves": solution.solves,
        "error_bar": { "s11": solution.error_bar[0], "s21": solution.error_bar[1], "s12": solution.error_bar[2], "s22": solution.error_bar[3] },
        "fit_change": solution.fit_change,
        "stair_error_m": solution.stair_error_m,
        "lines": lines,
        "response": { "z0_ohm": response.z0_ohm, "f_hz": response.f_hz, "s11": pairs(0), "s21": pairs(1), "s12": pairs(2), "s22": pairs(3) },
    })
}
