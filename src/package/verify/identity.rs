//! Do all files belong to one issue of one project?

use std::collections::BTreeMap;
use std::fs;

use crate::base::spelt_out;
use crate::package::gerber::field;
use crate::package::verify::Findings;
use crate::package::verify::Pack;

pub(super) fn check(pack: &Pack, found: &mut Findings) {
    let contents = pack.contents;
    let drills = pack.drills.iter().map(|(file, drilled)| (file, drilled.coordinates.clone(), drilled.project.clone()));
    let gerbers = pack.gerbers.iter().map(|(file, image)| (file, image.coordinates.clone(), image.attributes.get("ProjectId").cloned()));
    let mut guids: BTreeMap<String, &String> = BTreeMap::new();
    for (file, coordinates, project) in gerbers.chain(drills) {
        if coordinates.as_deref() != Some(contents.same_coordinates.as_str()) {
            let stated = coordinates.as_deref().unwrap_or("none");
            found.add("coordinates-differ", file, format!(".SameCoordinates is {stated}, the package's is {}", contents.same_coordinates));
        }
        let project = project.unwrap_or_default();
        let mut parts = project.splitn(3, ',');
        let (name, guid, revision) = (parts.next().unwrap_or_default(), parts.next().unwrap_or_default(), parts.next().unwrap_or_default());
        if name != field(&contents.name) || guid.is_empty() {
            found.add("project-differs", file, format!(".ProjectId is \"{project}\", the package is {}", contents.name));
        }
        guids.entry(guid.to_string()).or_insert(file);
        if revision != field(&contents.revision) {
            revision_differs(file, revision, &contents.revision, found);
        }
    }
    if guids.len() > 1 {
        for (guid, file) in guids.iter().skip(1) {
            found.add("project-differs", file, format!("its project GUID {guid} is not that of the other files"));
        }
    }
    if let Some((file, netlist)) = &pack.netlist {
        let stated = netlist.revision.as_deref().unwrap_or_default();
        if stated != spelt_out(&contents.revision).0 {
            revision_differs(file, stated, &contents.revision, found);
        }
        if netlist.coordinates.as_deref() != Some(contents.same_coordinates.as_str()) {
            found.add("coordinates-differ", file, "states another identity of its coordinates");
        }
    }
    if let Some((file, job)) = &pack.job_file {
        let project = &job["GeneralSpecs"]["ProjectId"];
        if project["Revision"] != contents.revision.as_str() {
            revision_differs(file, project["Revision"].as_str().unwrap_or_default(), &contents.revision, found);
        }
        let guid = project["GUID"].as_str().unwrap_or_default();
        if project["Name"] != contents.name.as_str() || guids.keys().next().is_some_and(|known| known != guid) {
            found.add("project-differs", file, format!("its project is {} {guid}", project["Name"]));
        }
    }
    if let Some(stated) = pack.limits.revision.as_ref().filter(|stated| **stated != contents.revision) {
        revision_differs("order.toml", stated, &contents.revision, found);
    }
    // The note and the drawing say it in words.
    for listed in &contents.files {
        let wanted = match listed.file.rsplit('.').next() {
            Some("txt") => format!("revision {}\n", spelt_out(&contents.revision).0),
            Some("pdf") if contents.revision.is_ascii() => format!("revision {}: fabrication drawing", contents.revision),
            _ => continue,
        };
        let Ok(bytes) = fs::read(pack.folder.join(&listed.file)) else { continue };
        // Brackets and backslashes are escaped in a PDF's strings.
        let plain = !contents.revision.contains(['(', ')', '\\']);
        if plain && !bytes.windows(wanted.len()).any(|window| window == wanted.as_bytes()) {
            revision_differs(&listed.file, "another", &contents.revision, found);
        }
    }
}

fn revision_differs(file: &str, stated: &str, due: &str, found: &mut Findings) {
    found.add("revision-differs", file, format!("its revision is \"{stated}\", the package's is \"{due}\""));
}
