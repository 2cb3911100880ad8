//! The keys of a laminate, in the order and in a class file.

use super::table::{Size, Table};
use super::types::{Copper, FINISHES, Laminate, LaminateKind, RoughnessLaw};
use crate::base::Dimensionality;

/// Thickness of the dielectric.
pub const THICKNESS: Size = Size::length(0.001, 25.0, "0.762 mm");
const THICKNESS_TOLERANCE: Size = Size::length(0.0, 25.0, "0.038 mm");
const FOIL: Size = Size { kind: Dimensionality::CopperThickness, unit: "um", least: 0.1e-6, greatest: 500e-6, usual: "18 um" };
const PLATING: Size = Size { least: 0.0, usual: "25 um", ..FOIL };
const ROUGHNESS: Size = Size { least: 0.0, greatest: 20e-6, usual: "1.5 um", ..FOIL };
const CONDUCTIVITY: Size = Size { kind: Dimensionality::Conductivity, unit: "MS/m", least: 1e6, greatest: 65e6, usual: "58 MS/m" };

const TEN_POINT_HEIGHT: Size = Size { greatest: 100e-6, usual: "6 um", ..ROUGHNESS };

/// The words of `roughness-law`.
pub const ROUGHNESS_LAWS: &[&str] = &["hammerstad-jensen", "stacked-spheres"];

/// Kinds of laminate with their words.
pub const KINDS: &[(&str, LaminateKind)] = &[
    ("ptfe", LaminateKind::Ptfe),
    ("hydrocarbon", LaminateKind::Hydrocarbon),
    ("glass-epoxy", LaminateKind::GlassEpoxy),
    ("ceramic", LaminateKind::Ceramic),
    ("other", LaminateKind::Other),
];

/// Reads the laminate's keys; what is not there comes from `class`, and is missing without one.
pub fn read(t: &Table<'_>, name: &str, class: Option<&Laminate>) -> Option<Laminate> {
    let words: Vec<&str> = KINDS.iter().map(|k| k.0).collect();
    let about = t.resolve("about", "\"one line\"", class.map(|c| c.about.clone()), |t, k| t.line(k, 200));
    let kind = t.resolve("kind", "\"ptfe\"", class.map(|c| c.kind), |t, k| t.word(k, &words).and_then(|i| KINDS.get(i)).map(|k| k.1));
    let permittivity = t.resolve("permittivity", "3.0", class.map(|c| c.permittivity), |t, k| t.number(k, 1.0, 100.0));
    let permittivity_tolerance =
        t.resolve("permittivity-tolerance", "0.04", class.map(|c| c.permittivity_tolerance), |t, k| t.number(k, 0.0, 50.0));
    let in_plane = in_plane(t, class);
    let loss_tangent = t.resolve("loss-tangent", "0.0015", class.map(|c| c.loss_tangent), |t, k| t.number(k, 0.0, 0.5));
    let thickness_m = t.size("thickness", &THICKNESS, class.map(|c| c.thickness_m));
    let thickness_tolerance_m = t.size("thickness-tolerance", &THICKNESS_TOLERANCE, class.map(|c| c.thickness_tolerance_m));
    let copper = copper(t, class.map(|c| &c.copper));
    let finish = t.resolve("finish", "\"immersion-silver\"", class.map(|c| c.finish.clone()), |t, k| {
        t.word(k, FINISHES).and_then(|i| FINISHES.get(i)).map(|f| f.to_string())
    });

    if let (Some(value), Some(tolerance)) = (permittivity, permittivity_tolerance)
        && value - tolerance < 1.0
    {
        t.error(
            "tolerance-too-large",
            "permittivity-tolerance",
            format!("permittivity-tolerance is {tolerance:?} on a permittivity of {value:?}; the permittivity cannot be below 1"),
            "write the supplier's tolerance, for example permittivity-tolerance = 0.04",
        );
    }
    if let (Some(value), Some(tolerance)) = (thickness_m, thickness_tolerance_m)
        && tolerance >= value
    {
        t.error(
            "tolerance-too-large",
            "thickness-tolerance",
            format!(
                "thickness-tolerance is {} on a thickness of {}; it must be smaller than the thickness",
                THICKNESS.show(tolerance),
                THICKNESS.show(value)
            ),
            format!("write the supplier's tolerance, for example thickness-tolerance = \"{}\"", THICKNESS.show(value / 20.0)),
        );
    }
    Some(Laminate {
        class: name.to_string(),
        about: about?,
        kind: kind?,
        permittivity: permittivity?,
        permittivity_tolerance: permittivity_tolerance?,
        in_plane_permittivity: in_plane?,
        loss_tangent: loss_tangent?,
        thickness_m: thickness_m?,
        thickness_tolerance_m: thickness_tolerance_m?,
        copper: copper?,
        finish: finish?,
    })
}

/// The in-plane permittivity: the only value that a class may lack. The inner `None` is "not known".
fn in_plane(t: &Table<'_>, class: Option<&Laminate>) -> Option<Option<f64>> {
    const KEY: &str = "in-plane-permittivity";
    t.context().meet(&t.path_of(KEY));
    if t.has(KEY) {
        return t.resolve(KEY, "3.1", None, |t, k| t.number(k, 1.0, 100.0)).map(Some);
    }
    // A complete order that lacks the key says that the value is not known, whatever its class knows by now.
    let value = class.filter(|_| !t.context().is_complete()).and_then(|c| c.in_plane_permittivity);
    if value.is_some() {
        t.context().record(&t.path_of(KEY));
    }
    Some(value)
}

/// The copper's keys.
fn copper(t: &Table<'_>, class: Option<&Copper>) -> Option<Copper> {
    let c = t.table("copper");
    let base_m = c.size("base", &FOIL, class.map(|c| c.base_m));
    let plating_m = c.size("plating", &PLATING, class.map(|c| c.plating_m));
    let roughness_m = c.size("roughness", &ROUGHNESS, class.map(|c| c.roughness_m));
    let conductivity = c.size("conductivity", &CONDUCTIVITY, class.map(|c| c.conductivity_s_per_m));
    let roughness_law = roughness_law(&c, class.map(|c| c.roughness_law));
    c.finish();
    Some(Copper {
        base_m: base_m?,
        plating_m: plating_m?,
        roughness_m: roughness_m?,
        roughness_law: roughness_law?,
        conductivity_s_per_m: conductivity?,
    })
}

/// The law, and the height that the second one needs. Without the key it is the class's, else the first.
fn roughness_law(c: &Table<'_>, class: Option<RoughnessLaw>) -> Option<RoughnessLaw> {
    const HEIGHT: &str = "ten-point-height";
    let class = class.unwrap_or(RoughnessLaw::HammerstadJensen);
    let word = usize::from(class != RoughnessLaw::HammerstadJensen);
    let chosen = c.resolve("roughness-law", "\"hammerstad-jensen\"", Some(word), |t, k| t.word(k, ROUGHNESS_LAWS))?;
    if chosen == 0 {
        if c.has(HEIGHT) {
            c.error(
                "key-unused",
                HEIGHT,
                "ten-point-height is given, and the roughness law that is to be used does not know it",
                "add roughness-law = \"stacked-spheres\", or take ten-point-height out",
            );
        }
        return Some(RoughnessLaw::HammerstadJensen);
    }
    let of_class = match class {
        RoughnessLaw::StackedSpheres { ten_point_height_m } => Some(ten_point_height_m),
        RoughnessLaw::HammerstadJensen => None,
    };
    c.size(HEIGHT, &TEN_POINT_HEIGHT, of_class).map(|ten_point_height_m| RoughnessLaw::StackedSpheres { ten_point_height_m })
}
