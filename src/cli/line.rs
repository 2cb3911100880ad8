//! `stripwright line`: what is a strip or a pair on a laminate, or which strip or pair has an impedance? And what is any cross-section?

use std::fmt::Write as _;
use std::path::Path;
use std::path::PathBuf;

use clap::ArgGroup;
use clap::Args;
use serde_json::{Map, Value, json};

use super::Ending;
use super::Voice;
use super::problems;
use super::results;
use super::section;
use super::section_file;
use crate::base::Dimensionality;
use crate::base::Place;
use crate::base::Problem;
use crate::base::parse_quantity;
use crate::line::AsBuilt;
use crate::line::C_M_PER_S;
use crate::line::Mode;
use crate::line::Pair;
use crate::line::StaticsModel;
use crate::line::Strip;
use crate::line::Unreachable;
use crate::line::open_end;
use crate::line::pair_for_impedances;
use crate::line::plating_of;
use crate::line::width_for_impedance;
use crate::order::Classes;
use crate::order::Laminate;
use crate::order::Source;
use crate::order::nearest;

/// Where losses are given when no frequency is asked for; said in the output.
const LOSS_FREQUENCY_HZ: f64 = 1e9;
/// Couplings below this are nothing to compare with.
const LEAST_COUPLING: f64 = 1e-6;
/// Decibel per neper.
pub(super) const DB_PER_NP: f64 = 20.0 * std::f64::consts::LOG10_E;

/// Impedance, effective permittivity and loss of a strip or a pair on a laminate; and the strip or pair of given impedances.
///
/// Give one of: a file with a cross-section of up to twelve strips; --width (a strip); --width and --gap (a pair); --impedance (finds the strip); --even and --odd
/// (finds the pair); all but the file with --laminate. Static values come from the numerical cross-section, in both forms.
#[derive(Args, Debug)]
#[command(group = ArgGroup::new("what").required(true).args(["section", "width", "impedance", "even"]))]
pub struct Arguments {
    /// A cross-section: [[layer]] from the ground up (permittivity, in-plane-permittivity, loss-tangent, thickness), [copper] (thickness, undercut, roughness or
    /// ten-point-height, conductivity, finish), [[strip]] left to right (width, gap-before), [coat] (permittivity, loss-tangent, on-laminate, on-copper),
    /// [housing] (lid, wall).
    #[arg(
        value_name = "SECTION.toml",
        conflicts_with_all = [
            "laminate", "classes", "gap", "odd", "permittivity", "in_plane_permittivity", "loss_tangent", "thickness", "copper", "roughness", "undercut", "lid"
        ]
    )]
    section: Option<PathBuf>,
    /// Relative error of capacitances allowed in a section file's answer, from 1e-5: "1e-4".
    #[arg(long, requires = "section", value_parser = accuracy, default_value = "1e-4")]
    accuracy: f64,
    /// Class of the laminate; `stripwright list laminates` names them.
    #[arg(long, value_name = "CLASS", required_unless_present = "section")]
    laminate: Option<String>,
    /// A file of classes of your own, beside the embedded ones.
    #[arg(long, value_name = "FILE")]
    classes: Option<String>,
    /// Width of the strip, or of each strip of a pair, at its foot: "1.9 mm".
    #[arg(long, value_parser = length, allow_hyphen_values = true)]
    width: Option<f64>,
    /// Gap between the strips of a pair.
    #[arg(long, requires = "width", value_parser = length, allow_hyphen_values = true)]
    gap: Option<f64>,
    /// Impedance of the strip to find: "50 ohm".
    #[arg(long, value_parser = impedance, allow_hyphen_values = true)]
    impedance: Option<f64>,
    /// Even impedance of the pair to find.
    #[arg(long, requires = "odd", value_parser = impedance, allow_hyphen_values = true)]
    even: Option<f64>,
    /// Odd impedance of the pair to find.
    #[arg(long, requires = "even", value_parser = impedance, allow_hyphen_values = true)]
    odd: Option<f64>,
    /// Frequency; without it impedances are static, and losses are given at 1 GHz.
    #[arg(long, value_name = "FREQUENCY", value_parser = frequency, allow_hyphen_values = true)]
    at: Option<f64>,
    /// Permittivity instead of the class's.
    #[arg(long, value_parser = permittivity, allow_hyphen_values = true)]
    permittivity: Option<f64>,
    /// In-plane permittivity instead of the class's (or of --permittivity).
    #[arg(long, value_parser = permittivity, allow_hyphen_values = true)]
    in_plane_permittivity: Option<f64>,
    /// Loss tangent instead of the class's.
    #[arg(long, value_parser = loss_tangent, allow_hyphen_values = true)]
    loss_tangent: Option<f64>,
    /// Thickness of the dielectric instead of the class's.
    #[arg(long, value_parser = length, allow_hyphen_values = true)]
    thickness: Option<f64>,
    /// Finished copper thickness (foil and plating) instead of the class's: "35 um" or "1 oz".
    #[arg(long, value_parser = copper_thickness, allow_hyphen_values = true)]
    copper: Option<f64>,
    /// Rq of the foil's laminate side instead of the class's.
    #[arg(long, value_parser = length_or_zero, allow_hyphen_values = true)]
    roughness: Option<f64>,
    /// How much narrower the strip's top is than its foot, per side.
    #[arg(long, value_parser = length_or_zero, default_value = "0 um", allow_hyphen_values = true)]
    undercut: f64,
    /// Grounded lid above the laminate's surface.
    #[arg(long, value_parser = length, allow_hyphen_values = true)]
    lid: Option<f64>,
}

fn positive(text: &str, kind: Dimensionality) -> Result<f64, String> {
    let value = parse_quantity(text, kind)?;
    if value > 0.0 { Ok(value) } else { Err(format!("\"{text}\" is not greater than zero")) }
}

fn length(text: &str) -> Result<f64, String> {
    positive(text, Dimensionality::Length)
}

fn length_or_zero(text: &str) -> Result<f64, String> {
    let value = parse_quantity(text, Dimensionality::Length)?;
    if value >= 0.0 { Ok(value) } else { Err(format!("\"{text}\" is less than zero")) }
}

fn copper_thickness(text: &str) -> Result<f64, String> {
    let value = parse_quantity(text, Dimensionality::CopperThickness)?;
    if value >= 0.0 { Ok(value) } else { Err(format!("\"{text}\" is less than zero")) }
}

fn impedance(text: &str) -> Result<f64, String> {
    positive(text, Dimensionality::Impedance)
}

fn frequency(text: &str) -> Result<f64, String> {
    positive(text, Dimensionality::Frequency)
}

fn permittivity(text: &str) -> Result<f64, String> {
    match text.trim().parse::<f64>() {
        Ok(value) if value.is_finite() && value >= 1.0 => Ok(value),
        _ => Err(format!("\"{text}\" is not a permittivity: a bare number of 1 or more")),
    }
}

fn accuracy(text: &str) -> Result<f64, String> {
    match text.trim().parse::<f64>() {
        Ok(value) if (1e-5..=1e-2).contains(&value) => Ok(value),
        _ => Err(format!("\"{text}\" is not an accuracy: a bare number from 1e-5 to 0.01")),
    }
}

fn loss_tangent(text: &str) -> Result<f64, String> {
    match text.trim().parse::<f64>() {
        Ok(value) if (0.0..1.0).contains(&value) => Ok(value),
        _ => Err(format!("\"{text}\" is not a loss tangent: a bare number from 0 to below 1")),
    }
}

/// Runs the command.
pub fn run(arguments: &Arguments, voice: Voice) -> Ending {
    if let Some(path) = &arguments.section {
        return run_section(path, arguments, voice);
    }
    match answer(arguments) {
        Ok(answer) => {
            if !voice.quiet {
                for warning in &answer.warnings {
                    eprintln!("{warning}");
                }
            }
            written(answer.text, answer.json, voice)
        }
        Err(problems) => {
            for problem in &problems {
                eprintln!("{problem}");
            }
            Ending::NothingMade
        }
    }
}

fn written(text: String, json: Map<String, Value>, voice: Voice) -> Ending {
    results(&if voice.json { format!("{}\n", Value::Object(json)) } else { text })
}

fn run_section(path: &Path, arguments: &Arguments, voice: Voice) -> Ending {
    let source = match Source::open(path) {
        Ok(source) => source,
        Err(found) => {
            problems::print(&found, None, voice);
            return Ending::NothingMade;
        }
    };
    match section_file::read(&source).and_then(|file| section::answer(&file, arguments.accuracy, At::of(arguments))) {
        Ok(answer) => {
            problems::print(&answer.warnings, Some(&source), voice);
            written(answer.text, answer.json, voice)
        }
        Err(found) => {
            problems::print(&found, Some(&source), voice);
            Ending::NothingMade
        }
    }
}

struct Answer {
    text: String,
    json: Map<String, Value>,
    warnings: Vec<Problem>,
}

/// The frequencies of an answer: of the impedances (zero: static) and of the losses.
#[derive(Clone, Copy)]
pub(super) struct At {
    /// Of impedances and permittivities; zero: static.
    pub(super) f_hz: f64,
    /// Of losses.
    pub(super) loss_hz: f64,
}

impl At {
    fn of(arguments: &Arguments) -> At {
        At { f_hz: arguments.at.unwrap_or(0.0), loss_hz: arguments.at.unwrap_or(LOSS_FREQUENCY_HZ) }
    }
}

fn answer(arguments: &Arguments) -> Result<Answer, Vec<Problem>> {
    let board = board(arguments)?;
    let at = At::of(arguments);
    let name = arguments.laminate.as_deref().unwrap_or_default();
    let unreachable = |unreachable: Unreachable| vec![unreachable.problem(Place::Whole)];
    let mut text = format!(
        "on {}: permittivity {}, tan d {}, {} thick, copper {} thick\n",
        name,
        shown_permittivity(&board),
        board.loss_tangent,
        millimetres(board.thickness_m),
        millimetres(board.copper_thickness_m),
    );
    let mut json = Map::new();
    let mut put = |key: &str, value: Value| json.insert(key.to_owned(), value);
    put("laminate", json!(name));
    put("permittivity", json!(board.permittivity));
    put("thickness_m", json!(board.thickness_m));
    put("copper_thickness_m", json!(board.copper_thickness_m));
    put("frequency_hz", json!(at.f_hz));
    put("loss_frequency_hz", json!(at.loss_hz));
    let warnings = match (arguments.width, arguments.gap, arguments.impedance, arguments.even.zip(arguments.odd)) {
        (Some(width_m), None, _, _) => strip_answer(&Strip::new(&board, width_m), at, &mut text, &mut json),
        (Some(width_m), Some(gap_m), _, _) => pair_answer(&Pair::new(&board, width_m, gap_m), at, &mut text, &mut json),
        (None, _, Some(z0_ohm), _) => {
            let width_m = width_for_impedance(&board, z0_ohm, at.f_hz).map_err(unreachable)?;
            strip_answer(&Strip::new(&board, width_m), at, &mut text, &mut json)
        }
        (None, _, None, Some((z0e_ohm, z0o_ohm))) => {
            let (width_m, gap_m) = pair_for_impedances(&board, z0e_ohm, z0o_ohm, at.f_hz).map_err(unreachable)?;
            pair_answer(&Pair::new(&board, width_m, gap_m), at, &mut text, &mut json)
        }
        // The argument group asks for one of them; said again rather than assumed.
        (None, _, None, None) => {
            let help = "give --width, --impedance, or --even and --odd";
            return Err(vec![Problem::error("line-not-named", Place::Whole, "no strip or pair is asked for", help)]);
        }
    };
    let listed: Vec<Value> = warnings.iter().map(|w| json!({ "code": w.code, "message": w.message, "help": w.help })).collect();
    json.insert("warnings".to_owned(), Value::Array(listed));
    Ok(Answer { text, json, warnings })
}

/// The class named, from the user's own file before the embedded ones.
fn laminate(arguments: &Arguments) -> Result<Laminate, Vec<Problem>> {
    let own = match &arguments.classes {
        Some(name) => Classes::open_beside(Path::new(""), name).map_err(|faults| {
            let problem = |fault| Problem::error("class-file-faulty", Place::Whole, fault, "");
            faults.into_iter().map(problem).collect::<Vec<_>>()
        })?,
        None => Classes::default(),
    };
    let classes = own.with_embedded();
    let name = arguments.laminate.as_deref().unwrap_or_default();
    if let Some(class) = classes.laminate(name) {
        return Ok(class.laminate.clone());
    }
    let help = nearest(name, classes.laminates.iter().map(|class| class.laminate.class.as_str()))
        .map_or_else(String::new, |name| format!("did you mean {name}? "));
    Err(vec![Problem::error(
        "laminate-class-unknown",
        Place::Whole,
        format!("no laminate class is named \"{name}\""),
        format!("{help}`stripwright list laminates` names all; --classes FILE adds your own"),
    )])
}

/// The board the line is on: the class, with what the arguments say instead.
fn board(arguments: &Arguments) -> Result<AsBuilt, Vec<Problem>> {
    let laminate = laminate(arguments)?;
    let permittivity = arguments.permittivity.unwrap_or(laminate.permittivity);
    Ok(AsBuilt {
        permittivity,
        in_plane_permittivity: arguments
            .in_plane_permittivity
            .or(if arguments.permittivity.is_some() { None } else { laminate.in_plane_permittivity })
            .unwrap_or(permittivity),
        loss_tangent: arguments.loss_tangent.unwrap_or(laminate.loss_tangent),
        thickness_m: arguments.thickness.unwrap_or(laminate.thickness_m),
        copper_thickness_m: arguments.copper.unwrap_or(laminate.copper.finished_m()),
        undercut_m: arguments.undercut,
        roughness_m: arguments.roughness.unwrap_or(laminate.copper.roughness_m),
        // A roughness given as Rq asks for the law that takes it.
        ten_point_height_m: if arguments.roughness.is_some() { None } else { laminate.copper.ten_point_height_m() },
        conductivity_s_per_m: laminate.copper.conductivity_s_per_m,
        plating: plating_of(&laminate.finish),
        hole_plating_m: 25e-6,
        lid_m: arguments.lid,
        walls_m: None,
        coat: None,
        widening_m: 0.0,
        lossless: false,
        statics: StaticsModel::Numerical,
    })
}

fn strip_answer(strip: &Strip, at: At, text: &mut String, json: &mut Map<String, Value>) -> Vec<Problem> {
    let extension_m = open_end::extension_m(strip);
    let mode = strip.at(at.f_hz);
    let (z0_ohm, eps_eff) = (strip.static_z0_ohm(), strip.static_eps_eff());
    let _ = writeln!(text, "one strip, width {}", millimetres(strip.width_m()));
    let lines = mode_lines(&mode, [z0_ohm, eps_eff], &strip.at(at.loss_hz), at, "");
    let model = model_of(strip.error_estimate(), "Hammerstad & Jensen 1980", "Kirschning & Jansen 1982, Jansen & Kirschning 1983");
    let closed = check_closed_form(strip.board(), strip.width_m(), None);
    let _ = write!(
        text,
        "{lines}  open-end extension      {}\n{}{}",
        millimetres(extension_m),
        closed_form_lines(&[("", [z0_ohm, eps_eff])], &closed, json),
        model_lines(&model, strip.trusted_up_to_hz())
    );
    matrices_json(&[[z0_ohm, eps_eff]], strip.error_estimate(), json);
    json.insert("width_m".into(), json!(strip.width_m()));
    json.extend(mode_json(&mode, [z0_ohm, eps_eff], &strip.at(at.loss_hz), at));
    json.insert("open_end_extension_m".into(), json!(extension_m));
    json.insert("model".into(), json!(model));
    json.insert("trusted_up_to_hz".into(), json!(strip.trusted_up_to_hz()));
    strip.problems(at.f_hz.max(at.loss_hz))
}

fn pair_answer(pair: &Pair, at: At, text: &mut String, json: &mut Map<String, Value>) -> Vec<Problem> {
    let (modes, lossy) = (pair.at(at.f_hz), pair.at(at.loss_hz));
    let (z, eps) = (pair.static_z0_ohm(), pair.static_eps_eff());
    let coupling = (modes.even.z0_ohm - modes.odd.z0_ohm) / (modes.even.z0_ohm + modes.odd.z0_ohm);
    let extensions = open_end::pair_extensions_m(pair);
    let model =
        model_of(pair.error_estimate(), "Kirschning & Jansen 1984", "Kirschning & Jansen 1984, for impedances that of the single strip");
    let closed = check_closed_form(pair.board(), pair.width_m(), Some(pair.gap_m()));
    let solved = [("even", [z.even, eps.even]), ("odd", [z.odd, eps.odd])];
    let _ = write!(
        text,
        "pair, width {}, gap {}\n{}{}  coupling                {coupling:.5} ({})\n  open-end extension      even {}, odd {}\n{}{}",
        millimetres(pair.width_m()),
        millimetres(pair.gap_m()),
        mode_lines(&modes.even, [z.even, eps.even], &lossy.even, at, "even "),
        mode_lines(&modes.odd, [z.odd, eps.odd], &lossy.odd, at, "odd "),
        coupling_level(coupling),
        millimetres(extensions.even),
        millimetres(extensions.odd),
        closed_form_lines(&solved, &closed, json),
        model_lines(&model, pair.trusted_up_to_hz()),
    );
    matrices_json(&[[z.even, eps.even], [z.odd, eps.odd]], pair.error_estimate(), json);
    json.insert("width_m".into(), json!(pair.width_m()));
    json.insert("gap_m".into(), json!(pair.gap_m()));
    for (name, mode, statics, lossy, extension_m) in [
        ("even", &modes.even, [z.even, eps.even], &lossy.even, extensions.even),
        ("odd", &modes.odd, [z.odd, eps.odd], &lossy.odd, extensions.odd),
    ] {
        let mut of_mode = mode_json(mode, statics, lossy, at);
        of_mode.insert("open_end_extension_m".into(), json!(extension_m));
        json.insert(name.into(), Value::Object(of_mode));
    }
    json.insert("coupling".into(), json!(coupling));
    json.insert("model".into(), json!(model));
    json.insert("trusted_up_to_hz".into(), json!(pair.trusted_up_to_hz()));
    pair.problems(at.f_hz.max(at.loss_hz))
}

/// A coupling in dB; below the solver's rounding there is none to speak of.
pub(super) fn coupling_level(coupling: f64) -> String {
    /// Even and odd impedance agree to this by rounding alone.
    const ROUNDING: f64 = 1e-8;
    if coupling > ROUNDING { format!("{:.2} dB", 20.0 * coupling.log10()) } else { "none".into() }
}

/// Which model gave the numbers.
fn model_of(error_estimate: Option<f64>, closed_form: &str, dispersion: &str) -> String {
    match error_estimate {
        Some(estimate) => format!("numerical cross-section, error estimate {estimate:.1e}; dispersion {dispersion}"),
        None => format!("{closed_form}, thickness by effective widths (the cross-section is not solved); dispersion {dispersion}"),
    }
}

/// Static impedance and effective permittivity of each mode by the closed forms.
pub(super) fn check_closed_form(board: &AsBuilt, width_m: f64, gap_m: Option<f64>) -> Vec<[f64; 2]> {
    let board = board.with_statics(StaticsModel::ClosedForm);
    match gap_m {
        None => {
            let strip = Strip::new(&board, width_m);
            vec![[strip.static_z0_ohm(), strip.static_eps_eff()]]
        }
        Some(gap_m) => {
            let pair = Pair::new(&board, width_m, gap_m);
            let (z, eps) = (pair.static_z0_ohm(), pair.static_eps_eff());
            vec![[z.even, eps.even], [z.odd, eps.odd]]
        }
    }
}

/// How far the closed forms are from the static values of each mode, as text and under `closed_form`.
pub(super) fn closed_form_lines(solved: &[(&str, [f64; 2])], closed: &[[f64; 2]], json: &mut Map<String, Value>) -> String {
    let mut parts = Vec::new();
    let mut of_modes = Map::new();
    let coupling = |[even, odd]: [f64; 2]| (even - odd) / (even + odd);
    for ((name, [z0_ohm, eps_eff]), [closed_ohm, closed_eps]) in solved.iter().zip(closed) {
        let [by_z, by_eps] = [closed_ohm / z0_ohm - 1.0, closed_eps / eps_eff - 1.0];
        let name = if name.is_empty() { "single" } else { *name };
        parts.push(format!("{name} impedance {:+.2} %, eff. permittivity {:+.2} %", 100.0 * by_z, 100.0 * by_eps));
        let of_mode = json!({
            "z0_ohm": closed_ohm, "eps_eff": closed_eps, "z0_relative_difference": by_z, "eps_eff_relative_difference": by_eps
        });
        of_modes.insert(name.to_owned(), of_mode);
    }
    // A coupling below the solver's rounding says nothing.
    if let ([(_, [even, _]), (_, [odd, _])], [[closed_even, _], [closed_odd, _]]) = (solved, closed)
        && coupling([*even, *odd]) > LEAST_COUPLING
    {
        let by = coupling([*closed_even, *closed_odd]) / coupling([*even, *odd]) - 1.0;
        parts.push(format!("coupling {:+.2} %", 100.0 * by));
        of_modes.insert("coupling_relative_difference".to_owned(), json!(by));
    }
    json.insert("closed_form".to_owned(), Value::Object(of_modes));
    format!("  closed form differs by  {}\n", parts.join(", "))
}

/// Capacitance and inductance per length of one strip or two, from static impedance and effective permittivity of each mode.
fn matrices_json(modes: &[[f64; 2]], error_estimate: Option<f64>, json: &mut Map<String, Value>) {
    let matrix = |of: fn(f64, f64) -> f64| match modes {
        [[even_ohm, even_eps], [odd_ohm, odd_eps]] => {
            let (even, odd) = (of(*even_ohm, *even_eps), of(*odd_ohm, *odd_eps));
            let (own, mutual) = (0.5 * (even + odd), 0.5 * (even - odd));
            json!([[own, mutual], [mutual, own]])
        }
        _ => json!(modes.iter().map(|[z0_ohm, eps_eff]| [of(*z0_ohm, *eps_eff)]).collect::<Vec<_>>()),
    };
    json.insert("capacitance_f_per_m".into(), matrix(|z0_ohm, eps_eff| eps_eff.sqrt() / (C_M_PER_S * z0_ohm)));
    json.insert("inductance_h_per_m".into(), matrix(|z0_ohm, eps_eff| z0_ohm * eps_eff.sqrt() / C_M_PER_S));
    if let Some(estimate) = error_estimate {
        json.insert("error_estimate".into(), json!(estimate));
    }
}

/// The lines of one mode; `name` ends in a space or is empty.
fn mode_lines(mode: &Mode, [static_z0_ohm, static_eps_eff]: [f64; 2], lossy: &Mode, at: At, name: &str) -> String {
    let mut lines = String::new();
    let mut line = |label: &str, value: String| {
        let _ = writeln!(lines, "  {:<23} {value}", format!("{name}{label}"));
    };
    let dispersive = at.f_hz > 0.0;
    let static_note = |shown: String| if dispersive { format!("   (static {shown})") } else { "   (static)".to_owned() };
    line("impedance", format!("{:.3} ohm{}", mode.z0_ohm, static_note(format!("{static_z0_ohm:.3} ohm"))));
    line("eff. permittivity", format!("{:.5}{}", mode.eps_eff, static_note(format!("{static_eps_eff:.5}"))));
    if dispersive {
        line("guided wavelength", format!("{} at {}", millimetres(mode.wavelength_m(at.f_hz)), gigahertz(at.f_hz)));
    }
    let [copper, laminate] = [lossy.conductor_np_per_m, lossy.dielectric_np_per_m].map(|alpha| alpha * DB_PER_NP);
    line("loss", format!("copper {copper:.3} dB/m, laminate {laminate:.3} dB/m at {}", gigahertz(at.loss_hz)));
    lines
}

fn model_lines(model: &str, trusted_up_to_hz: f64) -> String {
    format!("  model                   {model}\n  dispersion trusted to   {}\n", gigahertz(trusted_up_to_hz))
}

fn mode_json(mode: &Mode, [static_z0_ohm, static_eps_eff]: [f64; 2], lossy: &Mode, at: At) -> Map<String, Value> {
    let mut json = Map::new();
    let mut put = |key: &str, value: f64| json.insert(key.to_owned(), json!(value));
    put("z0_ohm", mode.z0_ohm);
    put("eps_eff", mode.eps_eff);
    put("static_z0_ohm", static_z0_ohm);
    put("static_eps_eff", static_eps_eff);
    if at.f_hz > 0.0 {
        put("wavelength_m", mode.wavelength_m(at.f_hz));
    }
    put("conductor_loss_db_per_m", lossy.conductor_np_per_m * DB_PER_NP);
    put("dielectric_loss_db_per_m", lossy.dielectric_np_per_m * DB_PER_NP);
    json
}

fn shown_permittivity(board: &AsBuilt) -> String {
    // The same number twice says nothing; a different in-plane value must be seen.
    if board.in_plane_permittivity.to_bits() == board.permittivity.to_bits() {
        format!("{}", board.permittivity)
    } else {
        format!("{} (in-plane {})", board.permittivity, board.in_plane_permittivity)
    }
}

pub(super) fn millimetres(length_m: f64) -> String {
    format!("{:.4} mm", length_m * 1e3)
}

pub(super) fn gigahertz(f_hz: f64) -> String {
    format!("{:.4} GHz", f_hz * 1e-9)
}
