//! Which holes are drilled where? XNC, the exchange form of NC drill data: explicit decimal points, finished sizes, one function a tool.

use std::collections::BTreeMap;
use std::io;
use std::io::BufWriter;
use std::io::Write;

use crate::artwork::Board;
use crate::artwork::Hole;
use crate::artwork::HoleUse;
use crate::artwork::Slot;
use crate::base::Nm;
use crate::package::gerber::field;
use crate::package::job::Job;

/// Two digits hold tool numbers; a third would read as a compensation index.
const MAX_TOOLS: usize = 99;

/// One tool: its function, its size, where it drills and where it routs.
struct Tool<'a> {
    function: &'static str,
    diameter: Nm,
    holes: Vec<&'a Hole>,
    slots: Vec<&'a Slot>,
}

/// The tools of the plated or the unplated file: holes by purpose and size, then slots by width.
fn tools(board: &Board, plated: bool) -> Vec<Tool<'_>> {
    let mut drills: BTreeMap<(HoleUse, Nm), Vec<&Hole>> = BTreeMap::new();
    for hole in board.holes.iter().filter(|hole| hole.is_plated() == plated) {
        drills.entry((hole.purpose, hole.diameter)).or_default().push(hole);
    }
    let mut mills: BTreeMap<Nm, Vec<&Slot>> = BTreeMap::new();
    for slot in board.slots.iter().filter(|slot| slot.plated == plated) {
        mills.entry(slot.width).or_default().push(slot);
    }
    let drills = drills.into_iter().map(|((purpose, diameter), holes)| Tool {
        function: match purpose {
            HoleUse::Via => "ViaDrill,None",
            HoleUse::Mounting => "MechanicalDrill",
        },
        diameter,
        holes,
        slots: Vec::new(),
    });
    let mills = mills.into_iter().map(|(diameter, slots)| Tool {
        function: if plated { "OtherDrill,Ground slot" } else { "MechanicalDrill,Other" },
        diameter,
        holes: Vec::new(),
        slots,
    });
    drills.chain(mills).collect()
}

/// Writes the plated or the unplated holes and slots.
pub fn write(job: &Job, plated: bool, out: &mut dyn Write) -> io::Result<()> {
    let tools = tools(&job.artwork, plated);
    if tools.len() > MAX_TOOLS {
        let message = format!("{} different holes; a drill file holds at most {MAX_TOOLS} tools", tools.len());
        return Err(io::Error::new(io::ErrorKind::InvalidData, message));
    }
    let order = job.order();
    let mut out = BufWriter::new(out);
    let (name, version) = (env!("CARGO_PKG_NAME"), env!("CARGO_PKG_VERSION"));
    let label = match (tools.iter().any(|tool| !tool.holes.is_empty()), tools.iter().any(|tool| !tool.slots.is_empty())) {
        (true, true) => ",Mixed",
        (false, true) => ",Rout",
        _ => ",Drill",
    };
    let (kind, through) = if plated { ("Plated", "PTH") } else { ("NonPlated", "NPTH") };
    writeln!(out, "M48")?;
    writeln!(out, "; #@! TF.GenerationSoftware,{name},{name},{version}")?;
    if let Some(date) = &order.date {
        writeln!(out, "; #@! TF.CreationDate,{date}T00:00:00+00:00")?;
    }
    writeln!(out, "; #@! TF.ProjectId,{},{},{}", field(&order.name), job.project, field(&order.revision))?;
    writeln!(out, "; #@! TF.SameCoordinates,{}", job.coordinates)?;
    writeln!(out, "; #@! TF.Part,Single")?;
    writeln!(out, "; #@! TF.FileFunction,{kind},1,{},{through}{label}", job.copper_layers())?;
    writeln!(out, "; #@! TF.FilePolarity,Positive")?;
    if job.breaks_a_rule() {
        writeln!(out, "; A DESIGN RULE IS BROKEN: quote and build only on written consent")?;
    }
    writeln!(out, "METRIC")?;
    let tolerance = size(Nm::from_m(order.shop.hole_tolerance_m));
    for (number, tool) in (1..).zip(&tools) {
        writeln!(out, "; #@! TA.AperFunction,{}", tool.function)?;
        writeln!(out, "; #@! TA.DrillTolerance,{tolerance},{tolerance}")?;
        writeln!(out, "T{number:02}C{}", size(tool.diameter))?;
        writeln!(out, "; #@! TD")?;
    }
    writeln!(out, "%")?;
    writeln!(out, "G05")?;
    for (number, tool) in (1..).zip(&tools) {
        writeln!(out, "T{number:02}")?;
        for hole in &tool.holes {
            writeln!(out, "X{}Y{}", decimal(hole.at.x), decimal(hole.at.y))?;
        }
        for slot in &tool.slots {
            writeln!(out, "G00X{}Y{}", decimal(slot.from.x), decimal(slot.from.y))?;
            writeln!(out, "M15")?;
            writeln!(out, "G01X{}Y{}", decimal(slot.to.x), decimal(slot.to.y))?;
            writeln!(out, "M16")?;
            writeln!(out, "G05")?;
        }
    }
    writeln!(out, "M30")?;
    out.flush()
}

/// Millimetres with all six decimals.
fn decimal(value: Nm) -> String {
    let (sign, nm) = (if value < Nm::ZERO { "-" } else { "" }, value.0.unsigned_abs());
    format!("{sign}{}.{:06}", nm / 1_000_000, nm % 1_000_000)
}

/// Millimetres with three decimals, more where the size has them.
fn size(value: Nm) -> String {
    let text = decimal(value);
    let kept = text.trim_end_matches('0').len().max(text.len() - 3);
    text[..kept].to_string()
}
