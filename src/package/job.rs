//! What every writer needs besides the bundle: the copper as drawn, the package's identity, the files written so far.

use std::borrow::Cow;
use std::path::Path;
use std::path::PathBuf;

use sha2::Digest;
use sha2::Sha256;
use uuid::Builder;
use uuid::Uuid;

use crate::artwork::Board;
use crate::artwork::Layer;
use crate::artwork::Shape;
use crate::artwork::compensated;
use crate::base::Nm;
use crate::base::Point;
use crate::order::Compensation;
use crate::order::Order;
use crate::package::Bundle;
use crate::package::contents::Listed;

/// One package in the making.
pub struct Job<'a> {
    /// What is packed.
    pub bundle: &'a Bundle<'a>,
    /// What is drawn: the finished board, or its compensated copy when the order says that the artwork carries the compensation.
    pub artwork: Cow<'a, Board>,
    /// Identifies the project over all its revisions.
    pub project: Uuid,
    /// Identifies this very geometry: files with the same one are aligned.
    pub coordinates: Uuid,
    /// Where the files are written.
    pub folder: PathBuf,
    /// The files written so far, in order.
    pub written: Vec<Listed>,
}

impl<'a> Job<'a> {
    /// Prepares the copper and the identity; the files will go into `folder`.
    pub fn new(bundle: &'a Bundle<'a>, folder: &Path) -> Job<'a> {
        let order = &bundle.dimensions.order;
        let artwork = match order.shop.compensation {
            Compensation::ByTheShop => Cow::Borrowed(bundle.board),
            Compensation::InTheArtwork { per_edge_m } => Cow::Owned(compensated(bundle.board, Nm::from_m(per_edge_m))),
        };
        let project = guid(|hash| {
            hash.update(b"project\0");
            hash.update(order.name.as_bytes());
            hash.update(b"\0");
            hash.update(order.part_number.as_bytes());
        });
        let coordinates = guid(|hash| {
            hash.update(b"coordinates\0");
            hash.update(order.revision.as_bytes());
            hash_board(&artwork, hash);
        });
        Job { bundle, artwork, project, coordinates, folder: folder.to_path_buf(), written: Vec::new() }
    }

    /// The order.
    pub fn order(&self) -> &'a Order {
        &self.bundle.dimensions.order
    }

    /// Whether the layer has anything on it.
    pub fn has(&self, layer: Layer) -> bool {
        self.artwork.layers.contains_key(&layer)
    }

    /// How many copper layers there are.
    pub fn copper_layers(&self) -> u8 {
        self.order().copper_layers()
    }

    /// Amount per edge by which the drawn strips are larger than the finished ones, metres.
    pub fn compensation_m(&self) -> f64 {
        match self.order().shop.compensation {
            Compensation::ByTheShop => 0.0,
            Compensation::InTheArtwork { per_edge_m } => per_edge_m,
        }
    }

    /// Whether a design rule is broken; the files then say so.
    pub fn breaks_a_rule(&self) -> bool {
        self.bundle.findings.iter().any(|finding| finding.is_error())
    }
}

/// A GUID with the version and variant bits of RFC 4122 version 4, its other bits from a SHA-256: the same content, the same GUID.
fn guid(fill: impl FnOnce(&mut Sha256)) -> Uuid {
    let mut hash = Sha256::new();
    fill(&mut hash);
    let digest: [u8; 32] = hash.finalize().into();
    let mut bytes = [0; 16];
    bytes.copy_from_slice(&digest[..16]);
    Builder::from_random_bytes(bytes).into_uuid()
}

fn hash_board(board: &Board, hash: &mut Sha256) {
    hash_shape(&board.outline, hash);
    hash.update([u8::from(board.outline_drawn)]);
    for (layer, shapes) in &board.layers {
        hash.update(format!("{layer:?}\0").as_bytes());
        for shape in shapes {
            hash_shape(shape, hash);
        }
    }
    for hole in &board.holes {
        hash_points(&[hole.at, Point { x: hole.diameter, y: hole.pad }], hash);
        hash.update(format!("{:?}\0{}\0", hole.purpose, hole.net).as_bytes());
    }
    for slot in &board.slots {
        hash_points(&[slot.from, slot.to, Point { x: slot.width, y: Nm(i64::from(slot.plated)) }], hash);
    }
    for edge in &board.plated_edges {
        hash_points(edge, hash);
    }
    for land in &board.lands {
        hash_points(&[land.at, Point { x: land.size[0], y: land.size[1] }], hash);
        hash.update(format!("{}\0{}\0{}\0", land.net, land.pin.0, land.pin.1).as_bytes());
    }
}

fn hash_shape(shape: &Shape, hash: &mut Sha256) {
    hash.update(format!("{:?}\0{}\0", shape.role, shape.net).as_bytes());
    hash_points(&shape.outer, hash);
    for void in &shape.voids {
        hash_points(void, hash);
    }
}

fn hash_points(points: &[Point], hash: &mut Sha256) {
    hash.update((points.len() as u64).to_le_bytes());
    for point in points {
        hash.update(point.x.0.to_le_bytes());
        hash.update(point.y.0.to_le_bytes());
    }
}
