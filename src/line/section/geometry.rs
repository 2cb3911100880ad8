//! What is the cross-section, and is it one that can be solved at all?

use crate::base::{Place, Problem};

/// Strips that one cross-section may have: an interdigital array of degree ten with its two feed lines.
pub const STRIPS_AT_MOST: usize = 12;
/// A strip or gap this many top-layer thicknesses across needs a table and panels that no printed board needs.
pub(super) const SPAN_RATIO_AT_MOST: f64 = 2000.0;
/// Deepest layer or highest lid in the same units: the spectrum's samples grow with it.
const DEPTH_RATIO_AT_MOST: f64 = 1000.0;
/// Thickest copper in units of the nearest distance to an interface: beyond, the remainder's table would need more than 16 heights.
const HEIGHT_RATIO_AT_MOST: f64 = 8.0;
/// Width over thickness beyond which the cubically graded panels of one strip differ by more than twelve decades.
const WIDTH_RATIO_AT_MOST: f64 = 1e6;
/// The widest strip against the narrowest sizes: beyond, charges of very different densities are lost in rounding.
const SMALLEST_SIZE_M: f64 = 1e-9;

/// One dielectric layer.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct LayerOf {
    /// Relative permittivity normal to the board.
    pub permittivity: f64,
    /// In-plane relative permittivity; equal to `permittivity` when isotropic.
    pub in_plane_permittivity: f64,
    /// tan d.
    pub loss_tangent: f64,
    /// Thickness.
    pub thickness_m: f64,
}

impl LayerOf {
    /// An isotropic layer.
    pub fn isotropic(permittivity: f64, loss_tangent: f64, thickness_m: f64) -> LayerOf {
        LayerOf { permittivity, in_plane_permittivity: permittivity, loss_tangent, thickness_m }
    }

    /// Permittivity of the isotropic layer that the field cannot tell from this one, sqrt(in-plane times normal).
    pub(super) fn mean_permittivity(&self) -> f64 {
        (self.permittivity * self.in_plane_permittivity).sqrt()
    }

    /// Thickness of that isotropic layer.
    pub(super) fn reduced_thickness_m(&self) -> f64 {
        self.thickness_m * (self.in_plane_permittivity / self.permittivity).sqrt()
    }
}

/// The strips' copper: the same for all strips.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct CopperOf {
    /// Thickness; 0 is a sheet without thickness, solved as such.
    pub thickness_m: f64,
    /// Per side: how much narrower the strip's top is than its foot.
    pub undercut_m: f64,
}

/// One strip.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct StripOf {
    /// Width at the foot.
    pub width_m: f64,
    /// From the strip before, foot to foot; of no meaning for the first strip.
    pub gap_before_m: f64,
}

/// A solder-mask coat that follows the surface.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct CoatOf {
    /// Relative permittivity.
    pub permittivity: f64,
    /// tan d.
    pub loss_tangent: f64,
    /// Thickness on the laminate.
    pub on_laminate_m: f64,
    /// Thickness on top and sides of the copper, measured along the normal of each face.
    pub on_copper_m: f64,
}

/// Grounded metal around the strips.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct HousingOf {
    /// Lid above the laminate surface.
    pub lid_m: Option<f64>,
    /// Side walls, each this far from the outermost strip edge at the foot.
    pub wall_m: Option<f64>,
}

/// Strips on top of a grounded substrate.
#[derive(Clone, Debug, PartialEq)]
pub struct CrossSection {
    /// From the ground up.
    pub layers: Vec<LayerOf>,
    /// Thickness and profile of every strip.
    pub copper: CopperOf,
    /// Left to right.
    pub strips: Vec<StripOf>,
    /// Coat, if any.
    pub coat: Option<CoatOf>,
    /// Lid and walls, if any.
    pub housing: HousingOf,
}

impl CrossSection {
    /// One strip.
    pub fn single(layers: Vec<LayerOf>, copper: CopperOf, width_m: f64, housing: HousingOf) -> CrossSection {
        CrossSection { layers, copper, strips: vec![StripOf { width_m, gap_before_m: 0.0 }], coat: None, housing }
    }

    /// Two equal strips.
    pub fn pair(layers: Vec<LayerOf>, copper: CopperOf, width_m: f64, gap_m: f64, housing: HousingOf) -> CrossSection {
        let strip = StripOf { width_m, gap_before_m: gap_m };
        CrossSection { layers, copper, strips: vec![strip, strip], coat: None, housing }
    }

    /// Left foot corner of each strip, with x = 0 in the middle of the whole.
    pub(super) fn left_edges_m(&self) -> Vec<f64> {
        let span = self.span_m();
        let mut x = -0.5 * span;
        let mut edges = Vec::with_capacity(self.strips.len());
        for (index, strip) in self.strips.iter().enumerate() {
            if index > 0 {
                x += strip.gap_before_m;
            }
            edges.push(x);
            x += strip.width_m;
        }
        edges
    }

    /// Outermost foot to outermost foot.
    pub(super) fn span_m(&self) -> f64 {
        let widths: f64 = self.strips.iter().map(|strip| strip.width_m).sum();
        let gaps: f64 = self.strips.iter().skip(1).map(|strip| strip.gap_before_m).sum();
        widths + gaps
    }

    /// Whether the strips read the same from the right.
    pub fn is_symmetric(&self) -> bool {
        let strips = &self.strips;
        let count = strips.len();
        let close = |a: f64, b: f64| (a - b).abs() <= 1e-12 * a.abs().max(b.abs());
        (0..count / 2).all(|i| close(strips[i].width_m, strips[count - 1 - i].width_m))
            && (1..count).all(|i| close(strips[i].gap_before_m, strips[count - i].gap_before_m))
    }

    /// Everything that stands against solving it; empty when it can be solved.
    ///
    /// # Errors
    /// Codes: `layer-missing`, `layer-thickness`, `layer-permittivity`, `layer-loss-tangent`, `strip-missing`, `strip-count`, `strip-width`, `strip-overlap`,
    /// `copper-thickness`, `undercut-exceeds-strip`, `lid-below-strip`, `strip-outside-wall`, `coat-size`, `coat-fills-gap`, `coat-reaches-housing`, `section-aspect`.
    pub fn check(&self) -> Vec<Problem> {
        let mut problems = check_layers(&self.layers);
        self.check_copper(&mut problems);
        self.check_strips(&mut problems);
        self.check_housing(&mut problems);
        self.check_coat(&mut problems);
        if problems.is_empty() {
            self.check_aspect(&mut problems);
        }
        problems
    }

    fn check_copper(&self, problems: &mut Vec<Problem>) {
        let copper = &self.copper;
        if !(copper.thickness_m.is_finite() && copper.thickness_m >= 0.0) {
            problems.push(fault(
                "copper-thickness",
                "copper.thickness",
                format!("the copper is {} thick; zero or more is due", mm(copper.thickness_m)),
                "give the finished thickness, such as \"35 um\"",
            ));
        }
        if !(copper.undercut_m.is_finite() && copper.undercut_m >= 0.0) {
            problems.push(fault(
                "undercut-exceeds-strip",
                "copper.undercut",
                format!("the undercut is {}; zero or more is due", mm(copper.undercut_m)),
                "give how much narrower the top is than the foot, per side",
            ));
        }
        for (index, strip) in self.strips.iter().enumerate() {
            if copper.thickness_m > 0.0 && strip.width_m > 0.0 && 2.0 * copper.undercut_m >= strip.width_m {
                problems.push(fault(
                    "undercut-exceeds-strip",
                    &format!("strip[{}].width", index + 1),
                    format!("an undercut of {} per side leaves no top on a strip of {}", mm(copper.undercut_m), mm(strip.width_m)),
                    "make the strip wider than twice the undercut, or the undercut smaller",
                ));
            }
        }
    }

    fn check_strips(&self, problems: &mut Vec<Problem>) {
        if self.strips.is_empty() {
            problems.push(fault("strip-missing", "strip", "there is no strip".into(), "add a [[strip]] with its width"));
        }
        if self.strips.len() > STRIPS_AT_MOST {
            problems.push(fault(
                "strip-count",
                "strip",
                format!("{} strips; at most {STRIPS_AT_MOST} are solved at once", self.strips.len()),
                "leave out the strips that are farthest away: their coupling is the weakest",
            ));
        }
        for (index, strip) in self.strips.iter().enumerate() {
            if !(strip.width_m.is_finite() && strip.width_m >= SMALLEST_SIZE_M) {
                problems.push(fault(
                    "strip-width",
                    &format!("strip[{}].width", index + 1),
                    format!("the strip is {} wide; more than zero is due", mm(strip.width_m)),
                    "give the width at the foot, such as \"1.2 mm\"",
                ));
            }
            if index > 0 && !(strip.gap_before_m.is_finite() && strip.gap_before_m >= SMALLEST_SIZE_M) {
                problems.push(fault(
                    "strip-overlap",
                    &format!("strip[{}].gap-before", index + 1),
                    format!("the gap before the strip is {}: it overlaps or touches the strip before it", mm(strip.gap_before_m)),
                    "give a gap of more than zero, or join the two into one strip",
                ));
            }
        }
    }

    fn check_housing(&self, problems: &mut Vec<Problem>) {
        if let Some(lid) = self.housing.lid_m
            && !(lid.is_finite() && lid > self.copper.thickness_m && lid > 0.0)
        {
            problems.push(fault(
                "lid-below-strip",
                "housing.lid",
                format!("the lid is {} above the laminate, the strips reach up to {}", mm(lid), mm(self.copper.thickness_m)),
                "raise the lid above the top of the copper",
            ));
        }
        if let Some(wall) = self.housing.wall_m
            && !(wall.is_finite() && wall >= SMALLEST_SIZE_M)
        {
            problems.push(fault(
                "strip-outside-wall",
                "housing.wall",
                format!("the walls are {} from the outermost strip edges: the strips touch them or stand outside", mm(wall)),
                "give a distance of more than zero",
            ));
        }
    }

    fn check_coat(&self, problems: &mut Vec<Problem>) {
        let Some(coat) = self.coat else { return };
        if !(coat.permittivity.is_finite() && coat.permittivity >= 1.0 && coat.loss_tangent.is_finite() && coat.loss_tangent >= 0.0) {
            problems.push(fault(
                "coat-size",
                "coat.permittivity",
                format!("the coat has permittivity {} and loss tangent {}; at least 1 and 0 are due", coat.permittivity, coat.loss_tangent),
                "give the cured mask's figures",
            ));
        }
        let sizes_good = |size: f64| size.is_finite() && size >= SMALLEST_SIZE_M;
        if !sizes_good(coat.on_laminate_m) || !sizes_good(coat.on_copper_m) {
            problems.push(fault(
                "coat-size",
                "coat",
                format!(
                    "the coat is {} on the laminate and {} on the copper; more than zero is due",
                    mm(coat.on_laminate_m),
                    mm(coat.on_copper_m)
                ),
                "give both thicknesses, or leave the coat out",
            ));
            return;
        }
        for (index, strip) in self.strips.iter().enumerate().skip(1) {
            if strip.gap_before_m > 0.0 && strip.gap_before_m <= 2.0 * coat.on_copper_m {
                problems.push(fault(
                    "coat-fills-gap",
                    &format!("strip[{}].gap-before", index + 1),
                    format!(
                        "the gap of {} is filled by a coat of {} from both sides; only a coat that leaves the gap open is solved",
                        mm(strip.gap_before_m),
                        mm(coat.on_copper_m)
                    ),
                    "make the coat on the copper thinner than half the gap",
                ));
            }
        }
        let top = coat.on_laminate_m.max(self.copper.thickness_m + coat.on_copper_m);
        if self.housing.lid_m.is_some_and(|lid| lid <= top) {
            problems.push(fault(
                "coat-reaches-housing",
                "housing.lid",
                format!("the coat reaches up to {}, where the lid is", mm(top)),
                "raise the lid above the coat",
            ));
        }
        if self.housing.wall_m.is_some_and(|wall| wall <= coat.on_copper_m) {
            problems.push(fault(
                "coat-reaches-housing",
                "housing.wall",
                format!("the coat on the outermost strips' sides, {}, reaches the walls", mm(coat.on_copper_m)),
                "move the walls out",
            ));
        }
    }

    fn check_aspect(&self, problems: &mut Vec<Problem>) {
        let scale = self.smoothness_m();
        let mut span = self.span_m();
        if let Some(wall) = self.housing.wall_m {
            span += 2.0 * wall;
        }
        let finding = |message: String, help: &str| fault("section-aspect", "", message, help);
        if span > SPAN_RATIO_AT_MOST * scale {
            problems.push(finding(
                format!("the whole is {} wide, more than {SPAN_RATIO_AT_MOST} times the thinnest of layers, room under the lid and half the room between walls, {}: its table would need more memory than allowed", mm(span), mm(scale)),
                "leave out far strips or walls, or merge the thin layer with its neighbour",
            ));
        }
        if self.copper.thickness_m > HEIGHT_RATIO_AT_MOST * scale {
            problems.push(finding(
                format!(
                    "copper of {} is more than {HEIGHT_RATIO_AT_MOST} times as thick as the thinnest of top layer and room above it, {}",
                    mm(self.copper.thickness_m),
                    mm(scale)
                ),
                "merge the thin layer with its neighbour, or raise the lid",
            ));
        }
        let substrate: f64 = self.layers.iter().map(LayerOf::reduced_thickness_m).sum();
        let highest = substrate.max(self.housing.lid_m.unwrap_or(0.0));
        // Between walls the spectrum is a sum of few terms.
        if self.housing.wall_m.is_none() && highest > DEPTH_RATIO_AT_MOST * scale {
            problems.push(finding(
                format!("heights from {} to {} differ by more than a factor of {DEPTH_RATIO_AT_MOST}", mm(scale), mm(highest)),
                "leave out the far lid, or merge the thin layer with its neighbour",
            ));
        }
        for (index, strip) in self.strips.iter().enumerate() {
            let least = if index > 0 { strip.gap_before_m } else { f64::INFINITY };
            let thickness = if self.copper.thickness_m > 0.0 { self.copper.thickness_m } else { f64::INFINITY };
            let ratio = self.strips.iter().map(|other| other.width_m).fold(0.0, f64::max) / least.min(thickness).min(strip.width_m);
            if ratio > WIDTH_RATIO_AT_MOST {
                problems.push(finding(
                    format!("the widest strip is {ratio:.1e} times as wide as the smallest of gap, thickness and width of strip {}; up to {WIDTH_RATIO_AT_MOST:.0e} is solved", index + 1),
                    "round the very small size to zero (copper) or widen the gap",
                ));
            }
        }
    }

    /// The length over which the Green function's remainder is smooth: the nearest image below or above.
    pub(super) fn smoothness_m(&self) -> f64 {
        let top = self.layers.last().map_or(f64::INFINITY, LayerOf::reduced_thickness_m);
        let substrate: f64 = self.layers.iter().map(|layer| layer.thickness_m).sum();
        let room = self.housing.lid_m.map_or(f64::INFINITY, |lid| lid - self.copper.thickness_m);
        let walls = self.housing.wall_m.map_or(f64::INFINITY, |wall| 0.5 * self.span_m() + wall);
        top.min(substrate).min(room).min(walls)
    }
}

fn check_layers(layers: &[LayerOf]) -> Vec<Problem> {
    let mut problems = Vec::new();
    if layers.is_empty() {
        problems.push(fault(
            "layer-missing",
            "layer",
            "there is no dielectric layer".into(),
            "add a [[layer]] with permittivity and thickness",
        ));
    }
    for (index, layer) in layers.iter().enumerate() {
        let key = |name: &str| format!("layer[{}].{name}", index + 1);
        if !(layer.thickness_m.is_finite() && layer.thickness_m >= SMALLEST_SIZE_M) {
            problems.push(fault(
                "layer-thickness",
                &key("thickness"),
                format!("the layer is {} thick; more than zero is due", mm(layer.thickness_m)),
                "give its thickness, or leave the layer out",
            ));
        }
        let permittivity_good = |value: f64| value.is_finite() && (1.0..=1000.0).contains(&value);
        if !permittivity_good(layer.permittivity) || !permittivity_good(layer.in_plane_permittivity) {
            problems.push(fault(
                "layer-permittivity",
                &key("permittivity"),
                format!("relative permittivity {} (in-plane {}); 1 to 1000 is allowed", layer.permittivity, layer.in_plane_permittivity),
                "give the laminate's figure for circuit design",
            ));
        }
        if !(layer.loss_tangent.is_finite() && (0.0..1.0).contains(&layer.loss_tangent)) {
            problems.push(fault(
                "layer-loss-tangent",
                &key("loss-tangent"),
                format!("loss tangent {}; 0 to less than 1 is allowed", layer.loss_tangent),
                "give tan d, such as 0.0013",
            ));
        }
    }
    problems
}

pub(super) fn fault(code: &'static str, key: &str, message: String, help: &str) -> Problem {
    let place = if key.is_empty() { Place::Whole } else { Place::Key(key.into()) };
    Problem::error(code, place, message, help)
}

pub(super) fn mm(metres: f64) -> String {
    format!("{:.6} mm", metres * 1e3)
}
