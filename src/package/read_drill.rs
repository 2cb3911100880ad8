//! What does a drill file say? Tools and hits of an XNC file, and what is wrong with them.

use std::collections::BTreeMap;

use crate::base::Nm;
use crate::base::Point;
use crate::package::read_gerber::Fault;

/// What a drill file holds.
#[derive(Debug, Default)]
pub struct Drilled {
    /// Whether it says that its holes are plated; `None` when it does not say.
    pub plated: Option<bool>,
    /// The identifier of its coordinates.
    pub coordinates: Option<String>,
    /// The layers its holes go through.
    pub span: Option<(u8, u8)>,
    /// Project, GUID and revision as stated.
    pub project: Option<String>,
    /// Centre and finished diameter of each hole, in the file's order.
    pub holes: Vec<(Point, Nm)>,
    /// Ends and width of each slot.
    pub slots: Vec<(Point, Point, Nm)>,
    /// Tools that do not say what they are for.
    pub nameless: Vec<String>,
}

/// Reads a file; what is wrong with it comes beside what could be read.
pub fn read(text: &str) -> (Drilled, Vec<Fault>) {
    let mut drilled = Drilled::default();
    let mut faults: Vec<Fault> = Vec::new();
    let mut tools: BTreeMap<String, Nm> = BTreeMap::new();
    let mut tool: Option<Nm> = None;
    let (mut in_header, mut metric, mut ended) = (true, false, false);
    let (mut function, mut at, mut milling) = (false, None::<Point>, false);
    let mut lines = (1..).zip(text.lines());
    if lines.next().map(|(_, line)| line) != Some("M48") {
        faults.push(("drill-unreadable", "the file does not begin with M48".into()));
    }
    for (number, line) in lines {
        let mut bad = |what: &str| faults.push(("drill-unreadable", format!("line {number}: {what}: \"{}\"", line.escape_default())));
        if ended {
            bad("text after M30");
            break;
        }
        if let Some(attribute) = line.strip_prefix("; #@! TF.") {
            if let Some(function) = attribute.strip_prefix("FileFunction,") {
                drilled.plated =
                    if function.starts_with("Plated,") { Some(true) } else { function.starts_with("NonPlated,").then_some(false) };
                let layer = |n: usize| function.split(',').nth(n).and_then(|text| text.parse::<u8>().ok());
                drilled.span = layer(1).zip(layer(2));
            } else if let Some(project) = attribute.strip_prefix("ProjectId,") {
                drilled.project = Some(project.to_string());
            } else if let Some(ident) = attribute.strip_prefix("SameCoordinates,") {
                drilled.coordinates = Some(ident.to_string());
            }
        } else if line.starts_with("; #@! TA.AperFunction,") {
            function = true;
        } else if line == "; #@! TD" {
            function = false;
        } else if line.starts_with(';') || line == "G05" {
        } else if line == "M15" || line == "M16" {
            milling = line == "M15";
        } else if let Some(to) = line.strip_prefix("G00").or_else(|| line.strip_prefix("G01")) {
            let place = to.strip_prefix('X').and_then(|rest| rest.split_once('Y')).and_then(|(x, y)| decimal(x).zip(decimal(y)));
            match (place, tool, at) {
                (Some((x, y)), Some(width), Some(from)) if milling && line.starts_with("G01") => {
                    drilled.slots.push((from, Point { x, y }, width));
                    at = Some(Point { x, y });
                }
                (Some((x, y)), Some(_), _) if line.starts_with("G00") => at = Some(Point { x, y }),
                _ => bad("not a move of the router"),
            }
        } else if line == "METRIC" {
            metric = true;
        } else if line == "%" {
            in_header = false;
        } else if line == "M30" {
            ended = true;
        } else if let Some(rest) = line.strip_prefix('T') {
            match (in_header, rest.split_once('C')) {
                (true, Some((code, size))) => match decimal(size) {
                    Some(size) if size > Nm::ZERO => {
                        if !function {
                            drilled.nameless.push(format!("T{code}"));
                        }
                        if tools.insert(code.to_string(), size).is_some() {
                            bad("a tool defined twice");
                        }
                    }
                    _ => bad("no size with a decimal point"),
                },
                (false, None) => {
                    tool = tools.get(rest).copied();
                    if tool.is_none() {
                        bad("a tool that is not defined");
                    }
                }
                _ => bad("not a tool line"),
            }
        } else if let Some((x, y)) = line.strip_prefix('X').and_then(|rest| rest.split_once('Y')) {
            match (decimal(x), decimal(y), tool, in_header) {
                (Some(x), Some(y), Some(size), false) => drilled.holes.push((Point { x, y }, size)),
                (_, _, None, _) => bad("a hole before any tool"),
                _ => bad("not a coordinate with a decimal point"),
            }
        } else {
            bad("not understood");
        }
    }
    if !metric {
        faults.push(("drill-units", "the unit is not METRIC".into()));
    }
    if !ended {
        faults.push(("drill-end-missing", "no M30 at the end: the file is cut off".into()));
    }
    if drilled.plated.is_none() {
        faults.push(("drill-unreadable", "the file does not say whether its holes are plated".into()));
    }
    (drilled, faults)
}

/// Millimetres with an explicit point, at most six decimals.
fn decimal(text: &str) -> Option<Nm> {
    let (sign, digits) = text.strip_prefix('-').map_or((1, text), |digits| (-1, digits));
    let (whole, part) = digits.split_once('.')?;
    let all_digits = |s: &str| !s.is_empty() && s.bytes().all(|b| b.is_ascii_digit());
    if !all_digits(whole) || !all_digits(part) || part.len() > 6 || whole.len() > 6 {
        return None;
    }
    let scale = 10i64.pow(6 - part.len() as u32);
    Some(Nm(sign * (whole.parse::<i64>().ok()? * 1_000_000 + part.parse::<i64>().ok()? * scale)))
}
