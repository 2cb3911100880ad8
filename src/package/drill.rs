//! Which holes are drilled where? XNC, the exchange form of NC drill data: explicit decimal points, finished sizes, one function a tool.

use std::collections::BTreeMap;
use std::io;
use std::io::BufWriter;
use std::io::Write;

use crate::artwork::Hole;
use crate::artwork::HoleUse;
use crate::base::Nm;
use crate::package::gerber::field;
use crate::package::job::Job;

/// Two digits hold tool numbers; a third would read as a compensation index.
const MAX_TOOLS: usize = 99;

/// Writes the plated or the unplated holes.
pub fn write(job: &Job, plated: bool, out: &mut dyn Write) -> io::Result<()> {
    let mut tools: BTreeMap<(HoleUse, Nm), Vec<&Hole>> = BTreeMap::new();
    for hole in job.artwork.holes.iter().filter(|hole| hole.is_plated() == plated) {
        tools.entry((hole.purpose, hole.diameter)).or_default().push(hole);
    }
    if tools.len() > MAX_TOOLS {
        let message = format!("{} different holes; a drill file holds at most {MAX_TOOLS} tools", tools.len());
        return Err(io::Error::new(io::ErrorKind::InvalidData, message));
    }
    let order = job.order();
    let mut out = BufWriter::new(out);
    let (tool, version) = (env!("CARGO_PKG_NAME"), env!("CARGO_PKG_VERSION"));
    let function = if plated { "Plated,1,{n},PTH" } else { "NonPlated,1,{n},NPTH" };
    writeln!(out, "M48")?;
    writeln!(out, "; #@! TF.GenerationSoftware,{tool},{tool},{version}")?;
    if let Some(date) = &order.date {
        writeln!(out, "; #@! TF.CreationDate,{date}T00:00:00+00:00")?;
    }
    writeln!(out, "; #@! TF.ProjectId,{},{},{}", field(&order.name), job.project, field(&order.revision))?;
    writeln!(out, "; #@! TF.SameCoordinates,{}", job.coordinates)?;
    writeln!(out, "; #@! TF.Part,Single")?;
    writeln!(out, "; #@! TF.FileFunction,{}", function.replace("{n}", &job.copper_layers().to_string()))?;
    writeln!(out, "; #@! TF.FilePolarity,Positive")?;
    writeln!(out, "METRIC")?;
    for (number, (purpose, diameter)) in (1..).zip(tools.keys()) {
        let function = match purpose {
            HoleUse::Via => "ViaDrill",
            HoleUse::Mounting => "MechanicalDrill",
        };
        writeln!(out, "; #@! TA.AperFunction,{function}")?;
        writeln!(out, "T{number:02}C{}", size(*diameter))?;
        writeln!(out, "; #@! TD")?;
    }
    writeln!(out, "%")?;
    writeln!(out, "G05")?;
    for (number, holes) in (1..).zip(tools.values()) {
        writeln!(out, "T{number:02}")?;
        for hole in holes {
            writeln!(out, "X{}Y{}", decimal(hole.at.x), decimal(hole.at.y))?;
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
