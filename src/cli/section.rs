//! `stripwright line SECTION.toml`: what are capacitance, inductance and loss of any cross-section of printed strips?

use std::fmt::Write as _;

use serde_json::{Map, Value, json};

use super::line::{At, DB_PER_NP, check_closed_form, closed_form_lines, coupling_level, gigahertz, millimetres};
use super::section_file::SectionFile;
use crate::base::Place;
use crate::base::Problem;
use crate::line::Array;
use crate::line::AsBuilt;
use crate::line::Mode;
use crate::line::Models;
use crate::line::Pair;
use crate::line::StaticsModel;
use crate::line::Strip;
use crate::line::section;
use crate::line::section::{CrossSection, ModeLoss, Solved};

/// Copper taken for the loss of a sheet without thickness, whose edge currents have no limit; said in the output.
const THINNEST_LOSSY_COPPER_M: f64 = 1e-6;
/// What the numbers come from.
const MODEL: &str = "numerical cross-section (quasi-static)";

/// Text, JSON and warnings of one section.
pub struct Answer {
    /// For people.
    pub text: String,
    /// For programs.
    pub json: Map<String, Value>,
    /// What the reader must know.
    pub warnings: Vec<Problem>,
}

/// Solves the section to a relative accuracy.
///
/// # Errors
/// What stands against solving it, or that it did not converge.
pub fn answer(file: &SectionFile, accuracy: f64, at: At) -> Result<Answer, Vec<Problem>> {
    let section = &file.section;
    let solved = section::solve(section, accuracy).map_err(|problem| vec![problem])?;
    let mut answer = Answer { text: head(file), json: Map::new(), warnings: Vec::new() };
    let losses = losses(section, &mut answer);
    let dispersive = Dispersive::of(section);
    if at.f_hz > 0.0 && dispersive.is_none() {
        answer.warnings.push(Problem::warning(
            "dispersion-not-modelled",
            Place::Whole,
            "the published dispersion laws hold for bare strips on one layer without side walls; impedance and permittivity are the static ones",
            "take them as they are up to about 1 GHz per millimetre of substrate, or leave out what the law does not know",
        ));
    }
    if !file.assumed.is_empty() {
        let _ = writeln!(answer.text, "  assumed                 {}", file.assumed.join(", "));
    }
    answer.json.insert("capacitance_f_per_m".into(), json!(solved.capacitance_f_per_m));
    answer.json.insert("inductance_h_per_m".into(), json!(solved.inductance_h_per_m));
    answer.json.insert("error_estimate".into(), json!(solved.error_estimate));
    answer.json.insert("accuracy".into(), json!(accuracy));
    answer.json.insert("frequency_hz".into(), json!(at.f_hz));
    answer.json.insert("loss_frequency_hz".into(), json!(at.loss_hz));
    matrices(&solved, &mut answer.text);
    let named = modes(&solved, section);
    if named.is_empty() {
        many_modes(&solved, file, at, dispersive.as_ref(), &mut answer)?;
    }
    let modes = named;
    for (index, (name, mode)) in modes.iter().enumerate() {
        let loss = losses.as_ref().and_then(|losses| losses.get(index));
        let scale = |f_hz: f64| dispersive.as_ref().map_or([1.0, 1.0], |dispersive| dispersive.growth(index, f_hz));
        let of_mode = mode_json(&Constants::of(mode), loss, file, at, scale);
        mode_lines(name, &of_mode, at, &mut answer.text);
        if name.is_empty() {
            answer.json.extend(of_mode);
        } else {
            answer.json.insert((*name).to_owned(), Value::Object(of_mode));
        }
    }
    if let [(_, even), (_, odd)] = modes.as_slice() {
        let coupling = (even.z0_ohm() - odd.z0_ohm()) / (even.z0_ohm() + odd.z0_ohm());
        let _ = writeln!(answer.text, "  coupling                {coupling:.5} ({})", coupling_level(coupling));
        answer.json.insert("coupling".into(), json!(coupling));
    }
    let _ = writeln!(answer.text, "  model                   {MODEL}, error estimate {:.1e}", solved.error_estimate);
    answer.json.insert("model".into(), json!(MODEL));
    if let Some(dispersive) = dispersive {
        dispersive.say(&modes, at, &mut answer);
    }
    let listed: Vec<Value> = answer.warnings.iter().map(|w| json!({ "code": w.code, "message": w.message, "help": w.help })).collect();
    answer.json.insert("warnings".to_owned(), Value::Array(listed));
    Ok(answer)
}

fn head(file: &SectionFile) -> String {
    let section = &file.section;
    let layers: Vec<String> =
        section.layers.iter().map(|layer| format!("{} of permittivity {}", millimetres(layer.thickness_m), layer.permittivity)).collect();
    let strips = section.strips.len();
    format!(
        "{strips} strip{} on {}, copper {} thick\n",
        if strips == 1 { "" } else { "s" },
        layers.join(", "),
        millimetres(section.copper.thickness_m)
    )
}

/// The modes with names of their own: of one strip (no name), of two equal strips.
fn modes(solved: &Solved, section: &CrossSection) -> Vec<(&'static str, section::Mode)> {
    match (solved.single(), solved.pair()) {
        (Some(mode), _) => vec![("", mode)],
        (None, Some(pair)) if section.is_symmetric() => vec![("even", pair.even), ("odd", pair.odd)],
        _ => Vec::new(),
    }
}

/// Modes of more than two strips or of unequal ones: permittivity, losses, and the strips' shares in them.
fn many_modes(
    solved: &Solved,
    file: &SectionFile,
    at: At,
    dispersive: Option<&Dispersive>,
    answer: &mut Answer,
) -> Result<(), Vec<Problem>> {
    let section = &file.section;
    let Some(modes) = solved.modes(section.is_symmetric()) else {
        let help = "ask for more accuracy";
        return Err(vec![Problem::error(
            "section-not-converged",
            Place::Whole,
            "the capacitance matrices are not those of any lines",
            help,
        )]);
    };
    let lossy = lossy(section, answer);
    let losses = section::matrix_loss(&lossy).and_then(|loss| (0..modes.eps_eff.len()).map(|mode| loss.of_mode(&modes, mode)).collect());
    let losses: Option<Vec<ModeLoss>> = losses.map_err(|reason| answer.warnings.push(not_given(reason))).ok();
    let mut listed = Vec::new();
    for (index, eps_eff) in modes.eps_eff.iter().enumerate() {
        let (voltages, currents) = (modes.voltages_of(index), modes.currents_of(index));
        let scale = |f_hz: f64| dispersive.map_or([1.0, 1.0], |dispersive| dispersive.growth(index, f_hz));
        let largest = voltages.iter().fold(0.0f64, |largest, value| largest.max(value.abs()));
        // A mode of unequal strips has no one impedance; its currents are of a line of 1 ohm.
        let constants = Constants { z0_ohm: 1.0, eps_eff: *eps_eff, loss_z0_ohm: 1.0 };
        let mut of_mode = mode_json(&constants, losses.as_ref().and_then(|losses| losses.get(index)), file, at, scale);
        of_mode.shift_remove("z0_ohm");
        of_mode.shift_remove("static_z0_ohm");
        mode_lines(&format!("mode {}", index + 1), &of_mode, at, &mut answer.text);
        let shares: Vec<f64> = voltages.iter().map(|v| v / largest).collect();
        let shown: Vec<String> = shares.iter().map(|share| format!("{share:>8.4}")).collect();
        let _ = writeln!(answer.text, "  {:<23} {}", format!("mode {} voltages", index + 1), shown.join(" "));
        of_mode.insert("voltages".into(), json!(shares));
        of_mode.insert("voltages_per_root_watt".into(), json!(voltages));
        of_mode.insert("currents_per_root_watt".into(), json!(currents));
        listed.push(Value::Object(of_mode));
    }
    answer.json.insert("modes".into(), Value::Array(listed));
    Ok(())
}

/// The section with copper thick enough for a loss.
fn lossy(section: &CrossSection, answer: &mut Answer) -> CrossSection {
    let mut lossy = section.clone();
    if lossy.copper.thickness_m < THINNEST_LOSSY_COPPER_M {
        lossy.copper.thickness_m = THINNEST_LOSSY_COPPER_M;
        let _ = writeln!(answer.text, "  loss                    as of copper 1 um thick: a sheet without thickness has no finite loss");
    }
    lossy
}

fn not_given(reason: Problem) -> Problem {
    let message = format!("no loss is given: {} ({})", reason.message, reason.code);
    Problem::warning("loss-not-solved", reason.place, message, reason.help)
}

/// Loss of each mode with a name; `None`, with a warning, where the solver fails.
fn losses(section: &CrossSection, answer: &mut Answer) -> Option<Vec<ModeLoss>> {
    let alone = section.strips.len() == 1 || (section.strips.len() == 2 && section.is_symmetric());
    if !alone {
        return None;
    }
    let lossy = lossy(section, answer);
    section::loss(&lossy).map_err(|reason| answer.warnings.push(not_given(reason))).ok()
}

fn matrices(solved: &Solved, text: &mut String) {
    for (name, matrix, unit, scale) in
        [("capacitance", &solved.capacitance_f_per_m, "pF/m", 1e12), ("inductance", &solved.inductance_h_per_m, "nH/m", 1e9)]
    {
        for (index, row) in matrix.iter().enumerate() {
            let label = if index == 0 { format!("{name} {unit}") } else { String::new() };
            let values: Vec<String> = row.iter().map(|value| format!("{:>11.4}", value * scale)).collect();
            let _ = writeln!(text, "  {label:<23} {}", values.join(" "));
        }
    }
}

/// Static constants of a mode.
struct Constants {
    z0_ohm: f64,
    eps_eff: f64,
    /// The impedance that its loss is counted for.
    loss_z0_ohm: f64,
}

impl Constants {
    fn of(mode: &section::Mode) -> Constants {
        Constants { z0_ohm: mode.z0_ohm(), eps_eff: mode.eps_eff(), loss_z0_ohm: mode.z0_ohm() }
    }
}

fn mode_json(mode: &Constants, loss: Option<&ModeLoss>, file: &SectionFile, at: At, scale: impl Fn(f64) -> [f64; 2]) -> Map<String, Value> {
    let mut json = Map::new();
    let mut put = |key: &str, value: f64| json.insert(key.to_owned(), json!(value));
    let [z_growth, eps_growth] = scale(at.f_hz);
    put("z0_ohm", mode.z0_ohm * z_growth);
    put("eps_eff", mode.eps_eff * eps_growth);
    put("static_z0_ohm", mode.z0_ohm);
    put("static_eps_eff", mode.eps_eff);
    if let Some(loss) = loss {
        let [z_growth, eps_growth] = scale(at.loss_hz);
        let eps_eff = mode.eps_eff * eps_growth;
        put("conductor_loss_db_per_m", DB_PER_NP * loss.conductor_np_per_m(at.loss_hz, mode.loss_z0_ohm * z_growth, &file.surfaces));
        // The filling grows with the frequency as the closed form of one layer does (see `line::Mode`).
        let share = |eps_eff: f64| (eps_eff - 1.0) / eps_eff;
        let growth = if mode.eps_eff > 1.0 { share(eps_eff) / share(mode.eps_eff) } else { 1.0 };
        put("dielectric_loss_db_per_m", DB_PER_NP * growth * loss.dielectric_np_per_m(at.loss_hz, eps_eff));
    }
    json
}

fn mode_lines(name: &str, mode: &Map<String, Value>, at: At, text: &mut String) {
    let of = |key: &str| mode.get(key).and_then(Value::as_f64);
    let mut line = |label: &str, value: String| {
        let _ = writeln!(text, "  {:<23} {value}", format!("{name} {label}").trim_start());
    };
    let shown = |key: &str, unit: &str| match (of(key), of(&format!("static_{key}"))) {
        (Some(value), Some(fixed)) if at.f_hz > 0.0 => format!("{value:.4}{unit}   (static {fixed:.4}{unit})"),
        (Some(value), _) => format!("{value:.4}{unit}   (static)"),
        _ => String::new(),
    };
    if of("z0_ohm").is_some() {
        line("impedance", shown("z0_ohm", " ohm"));
    }
    line("eff. permittivity", shown("eps_eff", ""));
    if let (Some(copper), Some(laminate)) = (of("conductor_loss_db_per_m"), of("dielectric_loss_db_per_m")) {
        line("loss", format!("copper {copper:.3} dB/m, dielectric {laminate:.3} dB/m at {}", gigahertz(at.loss_hz)));
    }
}

/// A section that the dispersion laws and the closed forms know: bare strips on one layer, no side walls.
enum Dispersive {
    One(Box<Strip>),
    Two(Box<Pair>),
    Many(Box<Array>),
}

impl Dispersive {
    fn of(section: &CrossSection) -> Option<Dispersive> {
        let ([layer], None, None) = (section.layers.as_slice(), section.coat, section.housing.wall_m) else { return None };
        let board = AsBuilt {
            permittivity: layer.permittivity,
            in_plane_permittivity: layer.in_plane_permittivity,
            loss_tangent: layer.loss_tangent,
            thickness_m: layer.thickness_m,
            copper_thickness_m: section.copper.thickness_m,
            undercut_m: section.copper.undercut_m,
            roughness_m: 0.0,
            ten_point_height_m: None,
            conductivity_s_per_m: 5.8e7,
            plating: None,
            hole_plating_m: 25e-6,
            lid_m: section.housing.lid_m,
            walls_m: None,
            coat: None,
            widening_m: 0.0,
            lossless: true,
            statics: StaticsModel::Numerical,
        };
        match section.strips.as_slice() {
            [strip] => Some(Dispersive::One(Box::new(Strip::new(&board, strip.width_m)))),
            [strip, other] if section.is_symmetric() => {
                Some(Dispersive::Two(Box::new(Pair::new(&board, strip.width_m, other.gap_before_m))))
            }
            strips => {
                let (widths_m, gaps_m): (Vec<f64>, Vec<f64>) = strips.iter().map(|strip| (strip.width_m, strip.gap_before_m)).unzip();
                Some(Dispersive::Many(Box::new(Array::new(&board, &widths_m, gaps_m.get(1..)?))))
            }
        }
    }

    /// Impedance and effective permittivity at a frequency over the static ones.
    fn growth(&self, index: usize, f_hz: f64) -> [f64; 2] {
        let over = |mode: Mode, z0_ohm: f64, eps_eff: f64| [mode.z0_ohm / z0_ohm, mode.eps_eff / eps_eff];
        match self {
            Dispersive::One(strip) => over(strip.at(f_hz), strip.static_z0_ohm(), strip.static_eps_eff()),
            Dispersive::Two(pair) => {
                let (modes, z, eps) = (pair.at(f_hz), pair.static_z0_ohm(), pair.static_eps_eff());
                if index == 0 { over(modes.even, z.even, eps.even) } else { over(modes.odd, z.odd, eps.odd) }
            }
            Dispersive::Many(array) => array.growth(f_hz).get(index).copied().unwrap_or([1.0, 1.0]),
        }
    }

    /// Range of the dispersion, and how far the closed forms are off.
    fn say(&self, modes: &[(&'static str, section::Mode)], at: At, answer: &mut Answer) {
        let (trusted_hz, warnings, closed) = match self {
            Dispersive::One(strip) => {
                (strip.trusted_up_to_hz(), strip.problems(at.f_hz), check_closed_form(strip.board(), strip.width_m(), None))
            }
            Dispersive::Two(pair) => {
                (pair.trusted_up_to_hz(), pair.problems(at.f_hz), check_closed_form(pair.board(), pair.width_m(), Some(pair.gap_m())))
            }
            Dispersive::Many(array) => (array.trusted_up_to_hz(), array.problems(at.f_hz), Vec::new()),
        };
        if let Dispersive::Many(array) = self {
            let models = Models::default().with_arrays(std::iter::once(&**array));
            let by = [models.impedance_difference, models.permittivity_difference, models.coupling_difference];
            let [z, eps, k] = by.map(|by| 100.0 * by);
            let _ = writeln!(
                answer.text,
                "  closed form differs by  up to {z:+.2} % in a strip's impedance, {eps:+.2} % in its eff. permittivity, {k:+.2} % in a coupling"
            );
            let [z, eps, k] = by;
            let differences = json!({ "z0_relative_difference": z, "eps_eff_relative_difference": eps, "coupling_relative_difference": k });
            answer.json.insert("closed_form".into(), differences);
        } else {
            let solved: Vec<_> = modes.iter().map(|(name, mode)| (*name, [mode.z0_ohm(), mode.eps_eff()])).collect();
            answer.text += &closed_form_lines(&solved, &closed, &mut answer.json);
        }
        let _ = writeln!(answer.text, "  dispersion trusted to   {}", gigahertz(trusted_hz));
        answer.json.insert("trusted_up_to_hz".into(), json!(trusted_hz));
        answer.warnings.extend(warnings);
    }
}
