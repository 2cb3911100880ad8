//! Every output file, written into a folder beside the target, then put in place whole.

mod contents;
mod drawing;
mod drill;
mod drill_map;
mod dxf;
mod facts;
mod gerber;
mod job;
mod job_file;
mod netlist;
mod note;
mod preview;
mod probe;
mod put;
mod read_drill;
mod read_gerber;
mod verify;
mod zipped;

use std::io;
use std::io::Write;

pub use contents::CONTENTS;
pub use contents::Contents;
pub use contents::Listed;
pub use job::Job;
pub use put::How;
pub use put::may_go;
pub use put::put;
pub use put::write_all;
pub use verify::Checked;
pub use verify::verify;

use crate::artwork::Board;
use crate::artwork::Face;
use crate::artwork::Fits;
use crate::artwork::HoleUse;
use crate::artwork::Layer;
use crate::base::Problem;
use crate::dimensions;
use crate::dimensions::Dimensions;
use crate::layout::Layout;
use crate::network::Figures;
use crate::network::Response;
use crate::network::touchstone;
use crate::order;

/// What the writers read.
pub struct Bundle<'a> {
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
    /// Findings of the checks and warnings of every stage.
    pub findings: &'a [Problem],
}

/// How a file of the package is called.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum FileName {
    /// The order's name and this ending.
    Ending(&'static str),
    /// The same in every package.
    Fixed(&'static str),
}

/// One file of the package.
pub struct Writer {
    /// Its name.
    pub file: FileName,
    /// One line: what it is.
    pub about: &'static str,
    /// Whether the board house gets it.
    pub for_board_house: bool,
    /// Whether this package has it.
    pub applies: fn(&Job) -> bool,
    /// Writes it.
    pub write: fn(&Job, &mut dyn Write) -> io::Result<()>,
}

impl Writer {
    /// The file's name in the package called `name`.
    pub fn file_name(&self, name: &str) -> String {
        match self.file {
            FileName::Ending(ending) => format!("{name}{ending}"),
            FileName::Fixed(fixed) => fixed.to_string(),
        }
    }
}

/// Every file but `contents.json`, in the order of writing: the note lists the checksums of what stands above it.
pub static WRITERS: &[Writer] = &[
    Writer {
        file: FileName::Ending("-copper-l1-top.gbr"),
        about: "copper 1, top side",
        for_board_house: true,
        applies: |job| job.has(Layer::Copper(1)),
        write: |job, out| gerber::copper(job, 1, out),
    },
    Writer {
        file: FileName::Ending("-copper-l2-bottom.gbr"),
        about: "copper 2, bottom side, seen from the top",
        for_board_house: true,
        applies: |job| job.has(Layer::Copper(2)) && job.copper_layers() == 2,
        write: |job, out| gerber::copper(job, 2, out),
    },
    Writer {
        file: FileName::Ending("-copper-l2-inner.gbr"),
        about: "copper 2, inner layer, the filter's ground, seen from the top",
        for_board_house: true,
        applies: |job| job.has(Layer::Copper(2)) && job.copper_layers() > 2,
        write: |job, out| gerber::copper(job, 2, out),
    },
    Writer {
        file: FileName::Ending("-copper-l3-bottom.gbr"),
        about: "copper 3, bottom side, seen from the top",
        for_board_house: true,
        applies: |job| job.has(Layer::Copper(3)) && job.copper_layers() == 3,
        write: |job, out| gerber::copper(job, 3, out),
    },
    Writer {
        file: FileName::Ending("-copper-l3-inner.gbr"),
        about: "copper 3, inner layer, seen from the top",
        for_board_house: true,
        applies: |job| job.has(Layer::Copper(3)) && job.copper_layers() > 3,
        write: |job, out| gerber::copper(job, 3, out),
    },
    Writer {
        file: FileName::Ending("-copper-l4-bottom.gbr"),
        about: "copper 4, bottom side, seen from the top",
        for_board_house: true,
        applies: |job| job.has(Layer::Copper(4)) && job.copper_layers() == 4,
        write: |job, out| gerber::copper(job, 4, out),
    },
    Writer {
        file: FileName::Ending("-mask-top.gbr"),
        about: "solder mask, top side, openings",
        for_board_house: true,
        applies: |job| job.has(Layer::Mask(Face::Top)),
        write: |job, out| gerber::mask(job, Face::Top, out),
    },
    Writer {
        file: FileName::Ending("-mask-bottom.gbr"),
        about: "solder mask, bottom side, openings, seen from the top",
        for_board_house: true,
        applies: |job| job.has(Layer::Mask(Face::Bottom)),
        write: |job, out| gerber::mask(job, Face::Bottom, out),
    },
    Writer {
        file: FileName::Ending("-paste-top.gbr"),
        about: "solder paste, top side, lands of chip parts",
        for_board_house: true,
        applies: |job| job.artwork.lands.iter().any(|land| land.fits == Fits::Chip),
        write: gerber::paste,
    },
    Writer {
        file: FileName::Ending("-legend-top.gbr"),
        about: "legend, top side",
        for_board_house: true,
        applies: |job| job.has(Layer::Legend(Face::Top)),
        write: |job, out| gerber::legend(job, Face::Top, out),
    },
    Writer {
        file: FileName::Ending("-legend-bottom.gbr"),
        about: "legend, bottom side, seen from the top",
        for_board_house: true,
        applies: |job| job.has(Layer::Legend(Face::Bottom)),
        write: |job, out| gerber::legend(job, Face::Bottom, out),
    },
    Writer {
        file: FileName::Ending("-profile.gbr"),
        about: "board edge, centre line of the 0.1 mm stroke",
        for_board_house: true,
        applies: |job| job.artwork.outline_drawn,
        write: gerber::profile,
    },
    Writer {
        file: FileName::Ending("-plated.drl"),
        about: "plated holes, finished size",
        for_board_house: true,
        applies: |job| job.artwork.holes.iter().any(|hole| hole.is_plated()) || job.artwork.slots.iter().any(|slot| slot.plated),
        write: |job, out| drill::write(job, true, out),
    },
    Writer {
        file: FileName::Ending("-unplated.drl"),
        about: "unplated holes, finished size",
        for_board_house: true,
        applies: |job| job.artwork.holes.iter().any(|hole| !hole.is_plated()) || job.artwork.slots.iter().any(|slot| !slot.plated),
        write: |job, out| drill::write(job, false, out),
    },
    Writer {
        file: FileName::Ending("-drillmap.gbr"),
        about: "drill map for people: edge, a letter at every hole, drill table; no drill data",
        for_board_house: true,
        applies: |job| !job.artwork.holes.is_empty() || !job.artwork.slots.is_empty(),
        write: drill_map::write,
    },
    Writer {
        file: FileName::Ending(".gbrjob"),
        about: "Gerber job file: size, stack, material, finish, and which file is which layer",
        for_board_house: true,
        applies: |_| true,
        write: job_file::write,
    },
    Writer {
        file: FileName::Ending(".ipc"),
        about: "bare-board netlist, IPC-D-356A: every net with its test points, resonators one by one",
        for_board_house: true,
        applies: |_| true,
        write: netlist::write,
    },
    Writer {
        file: FileName::Ending(".dxf"),
        about: "copper, edge and holes for mechanics; for reference only",
        for_board_house: true,
        applies: |_| true,
        write: dxf::write,
    },
    Writer {
        file: FileName::Ending("-fabrication.pdf"),
        about: "fabrication drawing: dimensions, controlled features, section of the stack, drill table, notes",
        for_board_house: true,
        applies: |_| true,
        write: drawing::write,
    },
    Writer {
        file: FileName::Ending("-fabrication.txt"),
        about: "fabrication note: stack, material, controlled features, drill table, what is not allowed, cautions",
        for_board_house: true,
        applies: |_| true,
        write: note::write,
    },
    Writer {
        file: FileName::Ending("-to-board-house.zip"),
        about: "the files for the board house in one",
        for_board_house: true,
        applies: |_| true,
        write: zipped::write,
    },
    Writer {
        file: FileName::Fixed("dimensions.toml"),
        about: "the dimension set with its order; change a value and draw again",
        for_board_house: false,
        applies: |_| true,
        write: |job, out| out.write_all(dimensions::write(job.bundle.dimensions).as_bytes()),
    },
    Writer {
        file: FileName::Fixed("order.toml"),
        about: "the order as understood, every default resolved",
        for_board_house: false,
        applies: |_| true,
        write: |job, out| out.write_all(order::write(job.order()).as_bytes()),
    },
    Writer {
        file: FileName::Fixed("response.s2p"),
        about: "the predicted S-parameters, Touchstone 1.1",
        for_board_house: false,
        applies: |_| true,
        write: |job, out| touchstone::write(job.bundle.response, &touchstone::comments(job.order()), out),
    },
    Writer {
        file: FileName::Fixed("preview.svg"),
        about: "the artwork at a stated scale and the predicted response",
        for_board_house: false,
        applies: |_| true,
        write: preview::write,
    },
];

/// What a hole is for, in the words of the note and of the drill files.
pub(crate) fn purpose(hole: HoleUse) -> &'static str {
    match hole {
        HoleUse::Via => "ground via",
        HoleUse::Mounting => "mounting",
    }
}
