//! What copper does a layer's file hold? Its objects put together in order, the islands they form, and the nets they name.

use std::collections::BTreeSet;

use crate::artwork::Role;
use crate::artwork::Shape;
use crate::artwork::shape::Piece;
use crate::artwork::shape::Region;
use crate::artwork::shape::Ring;
use crate::artwork::shape::bounds;
use crate::artwork::shape::disc;
use crate::artwork::shape::rectangle;
use crate::base::Nm;
use crate::base::Point;
use crate::package::read_gerber::Content;
use crate::package::read_gerber::Form;
use crate::package::read_gerber::Image;
use crate::package::read_gerber::Object;

/// A round pad as a polygon lies up to this much outside the true circle: a pad that reaches no further out of the copper adds nothing.
const CHORD: Nm = Nm(2_000);

/// One copper layer.
pub(super) struct Copper {
    pub file: String,
    pub layer: i32,
    pub islands: Vec<Island>,
    pub pads: Vec<Pad>,
}

/// One piece of copper.
pub(super) struct Island {
    pub piece: Piece,
    /// Its corners.
    pub bounds: [Point; 2],
    /// Nets that its objects name; none for text.
    pub nets: BTreeSet<String>,
    /// Whether all of it is text.
    pub is_text: bool,
}

/// A flash.
pub(super) struct Pad {
    pub at: Point,
    pub half: [Nm; 2],
    pub function: String,
    pub net: String,
}

impl Island {
    pub fn contains(&self, at: Point) -> bool {
        let [low, high] = self.bounds;
        at.x >= low.x && at.x <= high.x && at.y >= low.y && at.y <= high.y && self.piece.contains(at)
    }

    /// As a shape for the rules that measure shapes.
    pub fn shape(&self) -> Shape {
        Shape {
            outer: self.piece.outer.clone(),
            voids: self.piece.voids.clone(),
            role: if self.is_text { Role::Text } else { Role::Circuit },
            net: self.name(),
        }
    }

    /// Its nets in words.
    pub fn name(&self) -> String {
        if self.nets.is_empty() { "no net".to_string() } else { self.nets.iter().cloned().collect::<Vec<_>>().join("+") }
    }
}

impl Copper {
    /// The layer of a file, when it is a copper layer.
    pub fn of(file: &str, image: &Image) -> Option<Copper> {
        let Some(Content::Copper(layer)) = image.content else { return None };
        let mut islands: Vec<Island> = dark(image)
            .pieces
            .into_iter()
            .filter_map(|piece| {
                let bounds = bounds(piece.outer.iter().copied())?;
                Some(Island { piece, bounds, nets: BTreeSet::new(), is_text: true })
            })
            .collect();
        for object in image.objects.iter().filter(|object| object.dark) {
            let on = on(object);
            // The first of its points that lies in copper says which piece it belongs to; what was cleared whole belongs to none.
            let island = on.iter().find_map(|&at| islands.iter().position(|island| island.contains(at)));
            let Some(island) = island.and_then(|index| islands.get_mut(index)) else { continue };
            if object.function != "NonConductor" {
                island.is_text = false;
            }
            island.nets.extend(object.net.clone().filter(|net| !net.is_empty()));
        }
        let pads = image
            .objects
            .iter()
            .filter_map(|object| match object.form {
                Form::Pad(at, half, _) if object.dark => {
                    Some(Pad { at, half, function: object.function.clone(), net: object.net.clone().unwrap_or_default() })
                }
                _ => None,
            })
            .collect();
        Some(Copper { file: file.to_string(), layer, islands, pads })
    }

    /// All copper.
    pub fn region(&self) -> Region {
        Region { pieces: self.islands.iter().map(|island| island.piece.clone()).collect() }
    }

    /// The island under a point.
    pub fn island(&self, at: Point) -> Option<&Island> {
        self.islands.iter().find(|island| island.contains(at))
    }
}

/// Points of an object: corners, or the middle of a pad.
fn on(object: &Object) -> Vec<Point> {
    match &object.form {
        Form::Contour(ring) => ring.clone(),
        Form::Pad(at, ..) => vec![*at],
    }
}

/// The dark area of an image: objects in order, clear ones cut out of what came before.
pub(super) fn dark(image: &Image) -> Region {
    let mut all = Region::default();
    let mut run: Vec<Ring> = Vec::new();
    let mut run_is_dark = true;
    let mut flush = |run: &mut Vec<Ring>, is_dark: bool| {
        if !run.is_empty() {
            let area = Region::union_of(run);
            all = if is_dark { all.union(&area) } else { all.difference(&area) };
            run.clear();
        }
    };
    let mut pads = Vec::new();
    for object in &image.objects {
        match &object.form {
            Form::Contour(ring) => {
                if object.dark != run_is_dark {
                    flush(&mut run, run_is_dark);
                    run_is_dark = object.dark;
                }
                run.push(ring.clone());
            }
            Form::Pad(at, half, round) if object.dark => pads.push((*at, *half, *round)),
            Form::Pad(at, half, _) => {
                flush(&mut run, run_is_dark);
                run_is_dark = false;
                run.push(rectangle(at.shifted(-half[0], -half[1]), at.shifted(half[0], half[1])));
            }
        }
    }
    flush(&mut run, run_is_dark);
    // Pads come last in our files; one that lies in the copper anyway is left out, so that the chords of its circle cut no splinters.
    let mut beyond: Vec<Ring> = Vec::new();
    for (at, half, round) in pads {
        let [x, y] = half;
        let within = if round { disc(at, Nm((x - CHORD).0.max(1))) } else { rectangle(at.shifted(-x, -y), at.shifted(x, y)) };
        if !covered(&all, &within) {
            beyond.push(if round { disc(at, x) } else { within });
        }
    }
    if beyond.is_empty() { all } else { all.union(&Region::union_of(&beyond)) }
}

/// Whether the copper covers the ring; looks only at the pieces around it.
fn covered(all: &Region, ring: &Ring) -> bool {
    let Some(&first) = ring.first() else { return true };
    let around: Vec<Piece> = all.pieces.iter().filter(|piece| piece.contains(first)).cloned().collect();
    !around.is_empty() && Region { pieces: around }.covers(&Region::union_of(std::slice::from_ref(ring)))
}
