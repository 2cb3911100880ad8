//! The checked order: plain data in SI units. Only [`super::read`] makes one from a file.

use std::collections::BTreeMap;

/// A whole order: what is wanted, on which laminate, from which board house, in which board and housing.
#[derive(Clone, Debug, PartialEq)]
pub struct Order {
    /// Folder and file stem: a-z, 0-9, '-'.
    pub name: String,
    /// One line for people.
    pub title: String,
    /// Printed in note, drawing and job file; the name when the order gives none.
    pub part_number: String,
    /// Who answers questions of the board house.
    pub contact: String,
    /// Acceptance class of the bare board, 1 to 3 (IPC-6012 / IPC-6018).
    pub acceptance_class: u8,
    /// Sheets of the fabrication drawing.
    pub paper: Paper,
    /// Revision letter or number.
    pub revision: String,
    /// `YYYY-MM-DD`, when the order has one.
    pub date: Option<String>,
    /// The user's own file of laminate, shop and launch classes, as written in the order (relative to the order file).
    pub classes: Option<String>,
    /// What to synthesize.
    pub filter: Filter,
    /// What the finished board must meet.
    pub requirements: Vec<Requirement>,
    /// The laminate.
    pub laminate: Laminate,
    /// The board house's limits.
    pub shop: Shop,
    /// The board around the circuit.
    pub board: BoardRequest,
    /// Lid and walls, when there is a housing.
    pub housing: Option<Housing>,
    /// Key paths whose values were not written by the user but resolved from a class or a default.
    pub defaults: Vec<String>,
}

/// Sheet size of the fabrication drawing, landscape.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Paper {
    /// 297 mm x 210 mm.
    A4,
    /// 279.4 mm x 215.9 mm.
    Letter,
}

/// The filter wanted.
#[derive(Clone, Debug, PartialEq)]
pub struct Filter {
    /// Name of the family.
    pub family: String,
    /// Shape of the passband.
    pub response: ResponseShape,
    /// The band.
    pub band: Band,
    /// Degree; `None` asks for the least that meets the requirements.
    pub degree: Option<usize>,
    /// Reference impedance of port 1 and port 2, ohm.
    pub ports_ohm: [f64; 2],
    /// Keys of the family's own, as declared by it: SI numbers, flags or words.
    pub own: BTreeMap<String, OwnValue>,
}

/// A value of a family's own key.
#[derive(Clone, Debug, PartialEq)]
pub enum OwnValue {
    /// A quantity in SI, and what it measures.
    Number(f64, crate::base::Dimensionality),
    /// true or false.
    Flag(bool),
    /// One of the words the family allows.
    Word(String),
}

/// What a family's own key takes.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum OwnKind {
    /// A quantity with a unit, greater than zero.
    Quantity(crate::base::Dimensionality),
    /// true or false.
    Flag,
    /// One of these words.
    OneOf(&'static [&'static str]),
}

/// A key of a family's (or structure's) own under `[filter]`.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Key {
    /// As written in the order.
    pub name: &'static str,
    /// One line: what it decides.
    pub about: &'static str,
    /// What it takes.
    pub kind: OwnKind,
    /// The value as it would be written, when the key may be left out.
    pub default: Option<&'static str>,
}

/// Which band a family passes or stops.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Passes {
    /// Below a cutoff.
    Low,
    /// Above a cutoff.
    High,
    /// Between two edges.
    Band,
    /// Outside two edges.
    Stop,
}

/// What the order room must know of a family; handed in from above, since `order` does not know the families.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct FamilyKeys {
    /// Name as written in the order.
    pub name: &'static str,
    /// Its kind of band.
    pub passes: Passes,
    /// Least and greatest degree it can draw.
    pub degrees: (usize, usize),
    /// Its own keys.
    pub keys: &'static [Key],
}

/// Shape of the passband.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum ResponseShape {
    /// Butterworth; the band edges are its 3.0103 dB points.
    MaximallyFlat,
    /// Chebyshev; the band edges are the ends of the ripple.
    EqualRipple {
        /// Passband ripple, dB.
        ripple_db: f64,
    },
}

impl ResponseShape {
    /// Worst return loss in the passband of the lossless prototype, dB (at the band edge for maximally flat).
    pub fn return_loss_db(self) -> f64 {
        let ripple_db = match self {
            ResponseShape::MaximallyFlat => 10.0 * 2f64.log10(),
            ResponseShape::EqualRipple { ripple_db } => ripple_db,
        };
        -10.0 * (1.0 - 10f64.powf(-ripple_db / 10.0)).log10()
    }
}

/// The band of the filter, hertz.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Band {
    /// Passes up to the cutoff.
    LowPass {
        /// Cutoff.
        cutoff_hz: f64,
    },
    /// Passes from `from_hz` up to at least `to_hz`.
    HighPass {
        /// Cutoff.
        from_hz: f64,
        /// Upper end of the wanted passband.
        to_hz: f64,
    },
    /// Passes between the edges.
    BandPass {
        /// Lower edge.
        from_hz: f64,
        /// Upper edge.
        to_hz: f64,
    },
    /// Stops between the edges.
    BandStop {
        /// Lower edge.
        from_hz: f64,
        /// Upper edge.
        to_hz: f64,
    },
}

/// One requirement over a band; a verdict is given for each limit.
#[derive(Clone, Debug, PartialEq)]
pub struct Requirement {
    /// Lower end, hertz.
    pub from_hz: f64,
    /// Upper end, hertz.
    pub to_hz: f64,
    /// At least one.
    pub limits: Vec<Limit>,
}

/// One limit over a requirement's band.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Limit {
    /// Greatest -|S21| in dB over the band.
    InsertionLossAtMost(f64),
    /// Least -|S11| (and -|S22|) in dB over the band.
    ReturnLossAtLeast(f64),
    /// Least -|S21| in dB over the band.
    RejectionAtLeast {
        /// dB.
        db: f64,
        /// Counted from the loss at the passband's centre.
        below_center: bool,
    },
    /// Greatest difference between best and worst -|S21| in dB.
    RippleAtMost(f64),
    /// Greatest difference in group delay over the band, seconds.
    GroupDelayVariationAtMost(f64),
}

/// What kind of material it is: decides process notes and cautions.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum LaminateKind {
    /// PTFE with glass or ceramic.
    Ptfe,
    /// Ceramic-filled hydrocarbon thermoset.
    Hydrocarbon,
    /// Woven glass and epoxy.
    GlassEpoxy,
    /// Fired ceramic.
    Ceramic,
    /// Another.
    Other,
}

/// The laminate as ordered.
#[derive(Clone, Debug, PartialEq)]
pub struct Laminate {
    /// Class name.
    pub class: String,
    /// One line for people, from the class.
    pub about: String,
    /// Kind of material.
    pub kind: LaminateKind,
    /// Relative permittivity normal to the board, the "design" value.
    pub permittivity: f64,
    /// Plus or minus.
    pub permittivity_tolerance: f64,
    /// In-plane relative permittivity, when known.
    pub in_plane_permittivity: Option<f64>,
    /// tan d.
    pub loss_tangent: f64,
    /// Dielectric only.
    pub thickness_m: f64,
    /// Plus or minus.
    pub thickness_tolerance_m: f64,
    /// Copper.
    pub copper: Copper,
    /// Surface finish: one of [`FINISHES`].
    pub finish: String,
}

/// Surface finishes an order may name.
pub const FINISHES: &[&str] = &["bare", "osp", "immersion-silver", "immersion-tin", "enig", "enepig", "hot-air-solder"];

/// How the roughness of the foil raises the loss; the laws are in `line::section`.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum RoughnessLaw {
    /// Of Hammerstad and Jensen, from Rq.
    HammerstadJensen,
    /// Stacked spheres, from the foil's own ten-point height.
    StackedSpheres {
        /// Rz of the laminate side.
        ten_point_height_m: f64,
    },
}

/// The copper as ordered.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Copper {
    /// Base foil.
    pub base_m: f64,
    /// Plated on top of the foil; zero only when the filter is kept unplated.
    pub plating_m: f64,
    /// Rq of the foil's laminate side.
    pub roughness_m: f64,
    /// By which law it costs.
    pub roughness_law: RoughnessLaw,
    /// Conductivity, S/m.
    pub conductivity_s_per_m: f64,
}

impl Copper {
    /// Rz of the foil's laminate side, where the law asks for it.
    pub fn ten_point_height_m(&self) -> Option<f64> {
        match self.roughness_law {
            RoughnessLaw::HammerstadJensen => None,
            RoughnessLaw::StackedSpheres { ten_point_height_m } => Some(ten_point_height_m),
        }
    }

    /// Finished thickness: base and plating.
    pub fn finished_m(&self) -> f64 {
        self.base_m + self.plating_m
    }
}

/// Who widens the artwork against the etch.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Compensation {
    /// The artwork is the finished geometry; the shop compensates.
    ByTheShop,
    /// The artwork carries it: finished size plus this much on each side of each strip.
    InTheArtwork {
        /// Per edge, metres.
        per_edge_m: f64,
    },
}

/// The board house's limits.
#[derive(Clone, Debug, PartialEq)]
pub struct Shop {
    /// Class name.
    pub class: String,
    /// One line for people, from the class.
    pub about: String,
    /// Narrowest line.
    pub line_m: f64,
    /// Narrowest gap.
    pub gap_m: f64,
    /// Least finished hole.
    pub hole_m: f64,
    /// Least copper ring around a plated hole.
    pub annular_ring_m: f64,
    /// Least wall between two holes.
    pub hole_to_hole_m: f64,
    /// Copper to routed edge, where no launch runs to the edge.
    pub edge_clearance_m: f64,
    /// Greatest board thickness over hole diameter.
    pub aspect_ratio: f64,
    /// Drawing grid.
    pub grid_m: f64,
    /// Layer to layer and drill to copper misregistration.
    pub registration_m: f64,
    /// Plus or minus on the width of a line.
    pub line_tolerance_m: f64,
    /// Plus or minus on a finished hole.
    pub hole_tolerance_m: f64,
    /// Plus or minus on the routed outline.
    pub outline_tolerance_m: f64,
    /// Thinnest stroke of legend or etched text.
    pub text_stroke_m: f64,
    /// Least height of text.
    pub text_height_m: f64,
    /// Narrowest mask between two openings.
    pub mask_dam_m: f64,
    /// Mask opening beyond the pad, per side.
    pub mask_clearance_m: f64,
    /// Per side: the strip's top is narrower than its foot.
    pub undercut_m: f64,
    /// Who compensates the etch.
    pub compensation: Compensation,
    /// Largest panel the shop takes.
    pub panel_m: [f64; 2],
}

/// The board around the circuit.
#[derive(Clone, Debug, PartialEq)]
pub struct BoardRequest {
    /// How ports are reached.
    pub launch: Launch,
    /// Solder mask.
    pub mask: Mask,
    /// Size of the board.
    pub size: BoardSize,
    /// Finished board over copper and plating, without finish, mask and legend.
    pub thickness_m: f64,
    /// Plus or minus.
    pub thickness_tolerance_m: f64,
    /// Plus or minus on length and width of the board.
    pub outline_tolerance_m: f64,
    /// How the board lies on the laminate's sheet.
    pub grain: Grain,
    /// What the filter's ground is.
    pub ground: GroundOn,
    /// What lies under copper 2, top to bottom: dielectrics, each with the ground copper under it.
    pub below: Vec<Below>,
    /// Whether the board outline is drawn ("none": a filter inside a larger board, feed ends pinned).
    pub outline: bool,
    /// Edges port 1 and port 2 leave by; opposite edges.
    pub port_side: [Side; 2],
    /// The circuit moved along the port edges, out of the board's middle.
    pub port_offset_m: f64,
    /// The staircase turned so that the feeds are level.
    pub level: bool,
    /// Where the text goes.
    pub text: TextOn,
    /// Unplated mounting holes.
    pub mounting_holes: Vec<MountingHole>,
    /// Rectangles where nothing may be drawn on the top.
    pub keep_outs: Vec<KeepOut>,
    /// Slots routed through the board.
    pub slots: Vec<SlotRequest>,
    /// Stretches of the board's edge that are plated and join the grounds of top and bottom.
    pub plated_edges: Vec<PlatedEdgeRequest>,
}

/// Direction of the laminate's grain (machine direction, warp) on the board.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Grain {
    /// From port edge to port edge.
    AlongPorts,
    /// Across that.
    AcrossPorts,
    /// One direction for all boards of a panel, which one is free.
    Any,
}

/// What the filter's ground is.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum GroundOn {
    /// Copper 2, under the laminate.
    Layer2,
    /// A metal carrier the board lies on; the board has copper on the top alone.
    Carrier,
}

/// A dielectric below the filter's ground, and the copper under it.
#[derive(Clone, Debug, PartialEq)]
pub struct Below {
    /// What it is made of, for people.
    pub material: String,
    /// Relative permittivity.
    pub permittivity: f64,
    /// Of the dielectric.
    pub thickness_m: f64,
    /// Plus or minus.
    pub thickness_tolerance_m: f64,
    /// Foil of the copper under it; the last one is plated like copper 1.
    pub copper_m: f64,
}

/// A slot through the board, round ends; coordinates from the board's lower left corner.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct SlotRequest {
    /// Centre of one end.
    pub from_m: [f64; 2],
    /// Centre of the other end.
    pub to_m: [f64; 2],
    /// Finished width.
    pub width_m: f64,
    /// Whether its wall is plated and grounded.
    pub plated: bool,
}

/// A plated stretch of a board edge.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct PlatedEdgeRequest {
    /// Which edge.
    pub side: Side,
    /// Begins here, along the edge from the board's left or lower corner.
    pub from_m: f64,
    /// Ends here.
    pub to_m: f64,
}

/// An edge of the board seen from the top.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Side {
    /// x = 0.
    Left,
    /// x = length.
    Right,
    /// y = 0.
    Bottom,
    /// y = width.
    Top,
}

/// Solder mask.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Mask {
    /// No mask on the board.
    None,
    /// Mask, open over the filter and the pads.
    ClearOfFilter,
}

/// How large the board is.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum BoardSize {
    /// Circuit plus this much above and below it.
    Margin(f64),
    /// Length (x) and width (y).
    Fixed([f64; 2]),
}

/// Where the identifying text goes.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum TextOn {
    /// Printed on the legend layer.
    Legend,
    /// Etched in copper, clear of the filter.
    Copper,
    /// No text at all.
    None,
}

/// An unplated round hole; coordinates from the board's lower left corner.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct MountingHole {
    /// Centre.
    pub at_m: [f64; 2],
    /// Finished diameter.
    pub diameter_m: f64,
}

/// A rectangle of the top side left free; coordinates from the board's lower left corner.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct KeepOut {
    /// Lower left corner.
    pub from_m: [f64; 2],
    /// Upper right corner.
    pub to_m: [f64; 2],
}

/// A launch class: the copper of a port at the board's edge.
#[derive(Clone, Debug, PartialEq)]
pub struct Launch {
    /// Class name.
    pub class: String,
    /// One line for people.
    pub about: String,
    /// Its copper.
    pub shape: LaunchShape,
}

/// The copper of a launch.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum LaunchShape {
    /// The feed simply ends (at the board's edge, or pinned inside a larger board).
    Open,
    /// A rectangular signal pad at the edge for a soldered wire or probe; no ground on the top.
    Pads {
        /// Along the feed.
        pad_length_m: f64,
        /// Across the feed.
        pad_width_m: f64,
    },
    /// An edge-mounted coaxial connector: signal pad, ground pads either side, via fence.
    EdgeCoax {
        /// Signal pad along the feed.
        pad_length_m: f64,
        /// Signal pad across the feed.
        pad_width_m: f64,
        /// Copper held back from the routed edge.
        pull_back_m: f64,
        /// Gap between signal pad and ground pads.
        ground_gap_m: f64,
        /// Ground pad along the feed.
        ground_length_m: f64,
        /// Ground pad across the feed.
        ground_width_m: f64,
        /// Taper from pad to feed.
        taper_length_m: f64,
        /// Finished hole of the fence.
        via_hole_m: f64,
        /// Pad of the fence's vias.
        via_pad_m: f64,
        /// Greatest pitch of the fence.
        via_pitch_m: f64,
        /// Least and greatest thickness of board the connector clamps.
        board_thickness_m: [f64; 2],
        /// Trusted up to this frequency.
        up_to_hz: f64,
    },
}

/// Lid and walls.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Housing {
    /// Lid above the laminate surface.
    pub lid_m: Option<f64>,
    /// Inside length (x) and width (y); the wall's footprint on the board is grounded and fenced.
    pub inside_m: Option<[f64; 2]>,
}
