//! Of what is the board built, top to bottom, and how thick is it?

use super::types::{Below, GroundOn, Laminate, Order};
use crate::base::Nm;

/// Foil and plating vary by a fifth of their thickness (common practice, no source).
const COPPER_VARIES_BY: f64 = 0.2;

/// One layer of the stack.
#[derive(Clone, Debug, PartialEq)]
pub enum StackLayer {
    /// Copper.
    Copper {
        /// 1 is the top.
        number: u8,
        /// Foil.
        base_m: f64,
        /// Plated on the foil; zero for inner layers.
        plating_m: f64,
    },
    /// Dielectric.
    Dielectric {
        /// Class of the laminate, or what the order calls it.
        material: String,
        /// Relative permittivity.
        permittivity: f64,
        /// Loss tangent, where the order knows it.
        loss_tangent: Option<f64>,
        /// Thickness.
        thickness_m: f64,
        /// Plus or minus.
        thickness_tolerance_m: f64,
    },
}

impl StackLayer {
    /// Finished thickness, metres.
    pub fn thickness_m(&self) -> f64 {
        match self {
            StackLayer::Copper { base_m, plating_m, .. } => base_m + plating_m,
            StackLayer::Dielectric { thickness_m, .. } => *thickness_m,
        }
    }
}

impl Order {
    /// Copper layers of the board: 1 on a carrier, 2 usually, more with what lies below.
    pub fn copper_layers(&self) -> u8 {
        match self.board.ground {
            GroundOn::Carrier => 1,
            GroundOn::Layer2 => 2 + u8::try_from(self.board.below.len()).unwrap_or(u8::MAX - 2),
        }
    }

    /// The stack, top to bottom. Outer copper is plated, inner copper is foil.
    pub fn stack(&self) -> Vec<StackLayer> {
        stack(&self.laminate, self.board.ground, &self.board.below)
    }

    /// Thickness over copper and plating as the layers give it, metres.
    pub fn stack_thickness_m(&self) -> f64 {
        overall_m(&self.stack())[0]
    }
}

/// The stack of a laminate and what lies below it, top to bottom.
pub(super) fn stack(laminate: &Laminate, ground: GroundOn, below: &[Below]) -> Vec<StackLayer> {
    let copper = |number: u8, base_m: f64, is_outer: bool| StackLayer::Copper {
        number,
        base_m,
        plating_m: if is_outer { laminate.copper.plating_m } else { 0.0 },
    };
    let mut layers = vec![
        copper(1, laminate.copper.base_m, true),
        StackLayer::Dielectric {
            material: laminate.class.clone(),
            permittivity: laminate.permittivity,
            loss_tangent: Some(laminate.loss_tangent),
            thickness_m: laminate.thickness_m,
            thickness_tolerance_m: laminate.thickness_tolerance_m,
        },
    ];
    if ground == GroundOn::Carrier {
        return layers;
    }
    layers.push(copper(2, laminate.copper.base_m, below.is_empty()));
    for (number, part) in (3..).zip(below) {
        layers.push(StackLayer::Dielectric {
            material: part.material.clone(),
            permittivity: part.permittivity,
            loss_tangent: None,
            thickness_m: part.thickness_m,
            thickness_tolerance_m: part.thickness_tolerance_m,
        });
        layers.push(copper(number, part.copper_m, usize::from(number) == below.len() + 2));
    }
    layers
}

/// Thickness of a stack over copper and plating, and what it may vary by when all its layers vary the same way, metres; whole nanometres.
pub(super) fn overall_m(stack: &[StackLayer]) -> [f64; 2] {
    let varies = |layer: &StackLayer| match layer {
        StackLayer::Copper { .. } => COPPER_VARIES_BY * layer.thickness_m(),
        StackLayer::Dielectric { thickness_tolerance_m, .. } => *thickness_tolerance_m,
    };
    let whole = |metres: f64| Nm::from_m(metres).m();
    [whole(stack.iter().map(StackLayer::thickness_m).sum()), whole(stack.iter().map(varies).sum())]
}
