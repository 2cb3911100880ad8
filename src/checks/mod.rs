//! Findings on board, layout and response: design rules and microwave sense, one rule a file.

mod acute_angle;
mod annular_ring;
mod aspect_ratio;
mod box_resonance;
mod copper_near_hole;
mod edge_clearance;
mod gap;
mod hole_size;
mod hole_to_hole;
mod keep_out;
mod launch_frequency;
mod launch_thickness;
mod launch_width;
mod lid;
mod line_width;
pub(crate) mod measure;
mod microwave;
mod nets;
mod panel;
mod section_length;
mod sliver;
mod soundness;
mod surface_wave;
mod text;
mod transverse_resonance;
mod wall;

use crate::artwork::Board;
use crate::base::Problem;
use crate::dimensions::Dimensions;
use crate::layout::Layout;
use crate::network::Figures;
use crate::network::Response;

/// What the rules look at.
pub struct Subject<'a> {
    /// Order and numbers.
    pub dimensions: &'a Dimensions,
    /// Parts and nodes.
    pub layout: &'a Layout,
    /// What is made.
    pub board: &'a Board,
    /// The predicted response.
    pub response: &'a Response,
    /// Its figures.
    pub figures: &'a Figures,
}

/// A design rule.
pub struct Rule {
    /// Names the thing found: `gap-below-minimum`.
    pub code: &'static str,
    /// One line for `list rules`.
    pub about: &'static str,
    /// Publication, or "common practice".
    pub source: &'static str,
    /// Looks.
    pub run: fn(&Subject) -> Vec<Problem>,
}

/// Every rule: first what the board house can make, then what the copper does at microwaves.
pub static RULES: &[Rule] = &[
    soundness::RULE,
    nets::RULE,
    line_width::RULE,
    gap::RULE,
    sliver::RULE,
    acute_angle::RULE,
    edge_clearance::RULE,
    copper_near_hole::RULE,
    hole_size::RULE,
    aspect_ratio::RULE,
    annular_ring::RULE,
    hole_to_hole::RULE,
    text::RULE,
    keep_out::RULE,
    panel::RULE,
    launch_thickness::RULE,
    launch_frequency::RULE,
    launch_width::RULE,
    section_length::RULE,
    transverse_resonance::RULE,
    surface_wave::RULE,
    lid::RULE,
    wall::RULE,
    box_resonance::RULE,
];

/// What every rule finds, in the order of [`RULES`]; each finding carries its rule's source. An error withholds the package.
pub fn run(subject: &Subject) -> Vec<Problem> {
    RULES
        .iter()
        .flat_map(|rule| {
            (rule.run)(subject).into_iter().map(|found| if found.source.is_empty() { found.with_source(rule.source) } else { found })
        })
        .collect()
}
