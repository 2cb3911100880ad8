//! A cross-section as a TOML file: layers, copper, strips, coat, housing; every mistake of the file found in one run.

use crate::base::Dimensionality;
use crate::base::Problem;
use crate::line::plating_of;
use crate::line::section::{CoatOf, CopperOf, CrossSection, HousingOf, LayerOf, Roughness, StripOf, Surface, Surfaces};
use crate::order::Context;
use crate::order::FINISHES;
use crate::order::Size;
use crate::order::Source;
use crate::order::Table;
use crate::order::parse;

/// Copper of ordinary foil where the file names no conductivity; said in the output.
const COPPER_S_PER_M: f64 = 5.8e7;
/// Any length, negative ones too: [`CrossSection::check`] says what is wrong with it in words of its own.
const LENGTH: Size = Size::length(-10_000.0, 10_000.0, "0.2 mm");
const THICKNESS: Size = Size { kind: Dimensionality::CopperThickness, unit: "um", usual: "35 um", ..LENGTH };
const ROUGHNESS: Size = Size { least: 0.0, greatest: 1e-3, usual: "1.5 um", ..THICKNESS };
const CONDUCTIVITY: Size = Size { kind: Dimensionality::Conductivity, unit: "MS/m", least: 1e3, greatest: 1e9, usual: "58 MS/m" };
/// Plain numbers that [`CrossSection::check`] bounds.
const ANY: f64 = 1e12;

/// What a section file says.
#[derive(Clone, Debug)]
pub struct SectionFile {
    /// The geometry.
    pub section: CrossSection,
    /// Metal surfaces for the loss.
    pub surfaces: Surfaces,
    /// Values that stand in for what the file leaves out, for people.
    pub assumed: Vec<String>,
}

/// Reads a section file; the geometry is checked too.
///
/// # Errors
/// Every mistake of notation, keys and units; when there is none, everything that stands against solving the geometry.
pub fn read(source: &Source) -> Result<SectionFile, Vec<Problem>> {
    let context = Context::default();
    let document = parse(source, &context);
    let root = Table::root(document.get_ref(), &context);
    let mut assumed = Vec::new();
    let layers: Vec<Option<LayerOf>> = root.tables("layer").iter().enumerate().map(|(i, t)| layer(t, i + 1, &mut assumed)).collect();
    let copper = copper(&root, &mut assumed);
    let strips: Vec<Option<StripOf>> = root.tables("strip").iter().enumerate().map(|(i, t)| strip(t, i == 0)).collect();
    let coat = if root.has("coat") { coat(&root.table("coat")).map(Some) } else { Some(None) };
    let housing = if root.has("housing") { housing(&root.table("housing")) } else { HousingOf::default() };
    root.finish();
    let failed = context.has_errors();
    let mut problems = context.into_problems(source);
    let whole = (layers.into_iter().collect::<Option<Vec<_>>>(), copper, strips.into_iter().collect::<Option<Vec<_>>>(), coat);
    if let (false, (Some(layers), Some((copper, surfaces)), Some(strips), Some(coat))) = (failed, whole) {
        let section = CrossSection { layers, copper, strips, coat, housing };
        problems = section.check();
        if problems.is_empty() {
            return Ok(SectionFile { section, surfaces, assumed });
        }
    }
    Err(problems)
}

fn layer(t: &Table<'_>, number: usize, assumed: &mut Vec<String>) -> Option<LayerOf> {
    let permittivity = number_of(t, "permittivity", "3.0");
    let in_plane = t.number("in-plane-permittivity", -ANY, ANY);
    let has_in_plane = t.has("in-plane-permittivity");
    let loss_tangent = if t.has("loss-tangent") {
        t.number("loss-tangent", -ANY, ANY)
    } else {
        assumed.push(format!("layer {number} without loss"));
        Some(0.0)
    };
    let thickness_m = t.size("thickness", &LENGTH, None);
    t.finish();
    Some(LayerOf {
        permittivity: permittivity?,
        in_plane_permittivity: if has_in_plane { in_plane? } else { permittivity? },
        loss_tangent: loss_tangent?,
        thickness_m: thickness_m?,
    })
}

/// A plain number that must be there.
fn number_of(t: &Table<'_>, key: &'static str, example: &str) -> Option<f64> {
    if !t.has(key) {
        t.missing(key, example);
        return None;
    }
    t.number(key, -ANY, ANY)
}

fn copper(root: &Table<'_>, assumed: &mut Vec<String>) -> Option<(CopperOf, Surfaces)> {
    if !root.has("copper") {
        root.missing("copper", "{ thickness = \"35 um\" }");
        return None;
    }
    let t = root.table("copper");
    let thickness_m = t.size("thickness", &THICKNESS, None);
    let mut optional = |key: &'static str, size: &Size, stands_in: f64, note: &str| {
        if t.has(key) {
            return t.quantity(key, size);
        }
        assumed.push(note.to_string());
        Some(stands_in)
    };
    let undercut_m = optional("undercut", &LENGTH, 0.0, "copper with upright sides");
    let conductivity = optional("conductivity", &CONDUCTIVITY, COPPER_S_PER_M, "copper of 58 MS/m");
    let roughness = if t.has("ten-point-height") {
        if t.has("roughness") {
            t.error(
                "keys-exclude-each-other",
                "ten-point-height",
                "both roughness (Rq) and ten-point-height (Rz) are given",
                "keep one of them",
            );
        }
        t.quantity("ten-point-height", &ROUGHNESS).map(|rz_m| Roughness::Cannonball { rz_m })
    } else {
        optional("roughness", &ROUGHNESS, 0.0, "smooth foil").map(|rq_m| Roughness::HammerstadJensen { rq_m })
    };
    let plating =
        if t.has("finish") { t.word("finish", FINISHES).and_then(|i| FINISHES.get(i)).and_then(|finish| plating_of(finish)) } else { None };
    t.finish();
    let smooth = Surface::smooth(conductivity?);
    let laminate_side = Surface { roughness: roughness?, ..smooth };
    let outside = Surface { plating, ..smooth };
    let surfaces = Surfaces { foot: laminate_side, top: outside, sides: outside, ground: laminate_side, housing: smooth };
    Some((CopperOf { thickness_m: thickness_m?, undercut_m: undercut_m? }, surfaces))
}

fn strip(t: &Table<'_>, is_first: bool) -> Option<StripOf> {
    let width_m = t.size("width", &LENGTH, None);
    let gap_before_m = match (is_first, t.has("gap-before")) {
        (true, true) => {
            t.error(
                "key-unknown",
                "gap-before",
                "the first strip has no strip before it",
                "take gap-before out; [housing] wall sets the distance to a wall",
            );
            None
        }
        (true, false) => Some(0.0),
        (false, _) => t.size("gap-before", &LENGTH, None),
    };
    t.finish();
    Some(StripOf { width_m: width_m?, gap_before_m: gap_before_m? })
}

fn coat(t: &Table<'_>) -> Option<CoatOf> {
    let (permittivity, loss_tangent) = (number_of(t, "permittivity", "3.5"), number_of(t, "loss-tangent", "0.02"));
    let (on_laminate_m, on_copper_m) = (t.size("on-laminate", &LENGTH, None), t.size("on-copper", &LENGTH, None));
    t.finish();
    Some(CoatOf { permittivity: permittivity?, loss_tangent: loss_tangent?, on_laminate_m: on_laminate_m?, on_copper_m: on_copper_m? })
}

fn housing(t: &Table<'_>) -> HousingOf {
    let housing = HousingOf { lid_m: t.quantity("lid", &LENGTH), wall_m: t.quantity("wall", &LENGTH) };
    t.finish();
    housing
}
