//! Is every layer there, once, and is each file the layer its name says?

use crate::artwork::shape::ring_faults;
use crate::base::Nm;
use crate::base::Point;
use crate::package::read_gerber::Content;
use crate::package::read_gerber::Form;
use crate::package::read_gerber::Image;
use crate::package::verify::Findings;
use crate::package::verify::Pack;

/// A chain longer than this is no board edge of ours, and is not looked at corner by corner.
const MAX_EDGE_CORNERS: usize = 20_000;

/// What a file of this ending must say it is, and its polarity.
const FUNCTIONS: &[(&str, &str, &str)] = &[
    ("-copper-l1-top.gbr", "Copper,L1,Top", "Positive"),
    ("-copper-l2-bottom.gbr", "Copper,L2,Bot", "Positive"),
    ("-copper-l2-inner.gbr", "Copper,L2,Inr", "Positive"),
    ("-copper-l3-bottom.gbr", "Copper,L3,Bot", "Positive"),
    ("-copper-l3-inner.gbr", "Copper,L3,Inr", "Positive"),
    ("-copper-l4-bottom.gbr", "Copper,L4,Bot", "Positive"),
    ("-mask-top.gbr", "Soldermask,Top", "Negative"),
    ("-mask-bottom.gbr", "Soldermask,Bot", "Negative"),
    ("-paste-top.gbr", "Paste,Top", "Positive"),
    ("-legend-top.gbr", "Legend,Top", "Positive"),
    ("-legend-bottom.gbr", "Legend,Bot", "Positive"),
    ("-profile.gbr", "Profile,", "Positive"),
    ("-drillmap.gbr", "Drillmap", "Positive"),
];

pub(super) fn check(pack: &Pack, found: &mut Findings) {
    for (file, image) in &pack.gerbers {
        let stated = image.attributes.get("FileFunction").map(String::as_str);
        let polarity = image.attributes.get("FilePolarity").map(String::as_str).unwrap_or("none");
        match (stated, FUNCTIONS.iter().find(|(ending, ..)| file.ends_with(ending))) {
            (None, _) => found.add("gerber-function-missing", file, "does not say which layer it is (.FileFunction)"),
            (Some(stated), Some((_, due, _))) if !stated.starts_with(due) => {
                found.add("layer-function-differs", file, format!("says that it is {stated}, its name says {due}"));
            }
            (Some(_), Some((_, _, due))) if polarity != *due => {
                found.add("polarity-wrong", file, format!("its polarity is {polarity}, due is {due}"));
            }
            (Some(stated), None) => found.add("layer-function-differs", file, format!("{stated} is no layer of a package")),
            _ => {}
        }
        if image.bounds().is_none() {
            found.add("gerber-empty", file, "holds nothing");
        }
    }
    for (file, drilled) in &pack.drills {
        if drilled.holes.is_empty() && drilled.slots.is_empty() {
            found.add("drill-empty", file, "holds no holes");
        }
        if drilled.plated.is_some_and(|plated| plated != file.ends_with("-plated.drl")) {
            found.add("drill-function-differs", file, "its name and its .FileFunction disagree on plating");
        }
        for tool in &drilled.nameless {
            found.add("drill-function-missing", file, format!("tool {tool} does not say what it drills (.AperFunction)"));
        }
    }
    if pack.contents.withheld {
        return;
    }
    stack(pack, found);
    edge(pack, found);
    openings(pack, found);
}

/// Copper 1 to n, each once, n as the job file says; DXF, netlist, note and drawing beside them.
fn stack(pack: &Pack, found: &mut Findings) {
    let stated = pack.job_file.as_ref().and_then(|(_, job)| job["GeneralSpecs"]["LayerNumber"].as_i64());
    let last = stated.and_then(|n| i32::try_from(n).ok()).unwrap_or(0).max(pack.last_layer()).min(64);
    for number in 1..=last {
        let files: Vec<&str> = pack.coppers.iter().filter(|copper| copper.layer == number).map(|copper| copper.file.as_str()).collect();
        match files[..] {
            [] => found.add("layer-missing", "package", format!("there is no file for copper {number} of {last}")),
            [_] => {}
            _ => found.add("layer-doubled", files[1], format!("copper {number} is in {} files", files.len())),
        }
    }
    for (ending, what) in [(".dxf", "drawing for mechanics"), (".ipc", "netlist"), (".gbrjob", "job file"), ("-fabrication.txt", "note")] {
        if !pack.contents.files.iter().any(|file| file.file.ends_with(ending)) {
            found.add("layer-missing", "package", format!("there is no {what} (*{ending})"));
        }
    }
}

/// The profile: there, closed, simple.
fn edge(pack: &Pack, found: &mut Findings) {
    let profiles: Vec<&(String, Image)> = pack.gerbers.iter().filter(|(_, image)| image.content == Some(Content::Profile)).collect();
    if profiles.is_empty() && pack.limits.outline {
        found.add("profile-missing", "package", "no board profile file: the board house cannot cut the board");
    }
    for (file, image) in profiles {
        if image.bounds().is_none() {
            found.add("profile-missing", file, "the board's edge cannot be read, so nothing is held against it");
        }
        for chain in image.chains.iter().filter(|chain| chain.len() > 3 && chain.len() < MAX_EDGE_CORNERS) {
            let ring: Vec<Point> = if chain.first() == chain.last() { chain[1..].to_vec() } else { chain.clone() };
            if let Some((what, at)) = ring_faults(&ring).into_iter().find(|(what, _)| what.contains("cross")) {
                found.at("outline-crosses-itself", file, Some(at), format!("the board's edge has {what}"));
            }
        }
    }
}

/// Lands are open in the mask, and paste lies on lands.
fn openings(pack: &Pack, found: &mut Findings) {
    let Some(top) = pack.coppers.iter().find(|copper| copper.layer == 1) else { return };
    let lands: Vec<_> = top.pads.iter().filter(|pad| pad.function == "SMDPad").collect();
    let file_of = |function: &str| {
        pack.gerbers.iter().find(|(_, image)| image.attributes.get("FileFunction").is_some_and(|stated| stated.starts_with(function)))
    };
    if let Some((file, image)) = file_of("Soldermask,Top") {
        let open = super::copper::dark(image);
        for land in &lands {
            if !open.contains(land.at) {
                found.at("land-under-mask", file, Some(land.at), format!("the mask covers the land of net {}", land.net));
            }
        }
    }
    if let Some((file, image)) = file_of("Paste,Top") {
        for object in &image.objects {
            let Form::Pad(at, half, _) = object.form else { continue };
            // The same land, to the nanometre; a smaller opening is the stencil maker's choice.
            if !lands.iter().any(|land| land.at == at && half[0] <= land.half[0] + Nm(1) && half[1] <= land.half[1] + Nm(1)) {
                found.at("paste-off-land", file, Some(at), "paste is printed where there is no land");
            }
        }
    }
}
