//! Does the job file say what the layer files say?

use serde_json::Value;

use crate::base::Nm;
use crate::package::verify::Findings;
use crate::package::verify::Pack;

/// The keys the published schema allows at the root.
const ROOTS: [&str; 5] = ["Header", "GeneralSpecs", "DesignRules", "FilesAttributes", "MaterialStackup"];

pub(super) fn check(pack: &Pack, found: &mut Findings) {
    let Some((file, job)) = &pack.job_file else { return };
    for key in job.as_object().into_iter().flat_map(|root| root.keys()).filter(|key| !ROOTS.contains(&key.as_str())) {
        found.add("job-file-unreadable", file, format!("the format has no key {key}"));
    }
    files(pack, file, job, found);
    sizes(pack, file, job, found);
}

fn files(pack: &Pack, file: &str, job: &Value, found: &mut Findings) {
    let listed: Vec<&Value> = job["FilesAttributes"].as_array().into_iter().flatten().collect();
    let of = |name: &str| listed.iter().find(|entry| entry["Path"] == name);
    for (name, image) in &pack.gerbers {
        match of(name) {
            None => found.add("job-files-differ", file, format!("{name} is not listed")),
            Some(entry) => {
                for key in ["FileFunction", "FilePolarity"] {
                    if entry[key].as_str() != image.attributes.get(key).map(String::as_str) {
                        found.add("job-files-differ", file, format!("{key} of {name} is {}, the file says otherwise", entry[key]));
                    }
                }
            }
        }
    }
    for (name, _) in &pack.drills {
        if of(name).is_none() {
            found.add("job-files-differ", file, format!("{name} is not listed"));
        }
    }
    for entry in &listed {
        let path = entry["Path"].as_str().unwrap_or_default();
        if !pack.contents.files.iter().any(|known| known.file == path) {
            found.add("job-files-differ", file, format!("{path} is listed and not in the package"));
        }
    }
}

fn sizes(pack: &Pack, file: &str, job: &Value, found: &mut Findings) {
    let general = &job["GeneralSpecs"];
    let number = |value: &Value| value.as_f64().map(|mm| Nm::from_m(mm * 1e-3));
    if let (Some([low, high]), Some(x), Some(y)) = (pack.edge(), number(&general["Size"]["X"]), number(&general["Size"]["Y"]))
        && (x, y) != (high.x - low.x, high.y - low.y)
    {
        let (dx, dy) = ((high.x - low.x).mm(), (high.y - low.y).mm());
        found.add("size-differs", file, format!("the board is {} mm x {} mm here, {dx} mm x {dy} mm in the profile", x.mm(), y.mm()));
    }
    let stack: Vec<&Value> = job["MaterialStackup"].as_array().into_iter().flatten().collect();
    let coppers = stack.iter().filter(|layer| layer["Type"] == "Copper").count();
    let files = pack.coppers.len();
    if general["LayerNumber"].as_u64() != Some(files as u64) || coppers != files {
        let stated = &general["LayerNumber"];
        found.add("job-layers-differ", file, format!("{stated} layers, {coppers} in the stack, {files} copper files"));
    }
    let built_m: f64 = stack
        .iter()
        .filter(|layer| layer["Type"] == "Copper" || layer["Type"] == "Dielectric")
        .filter_map(|layer| layer["Thickness"].as_f64())
        .sum::<f64>()
        * 1e-3;
    // An order may state another thickness than the sum, within its tolerance.
    let allowed_m = pack.limits.thickness_tolerance_m.unwrap_or(0.0) + 1e-9;
    if let Some(stated_m) = general["BoardThickness"].as_f64().map(|mm| mm * 1e-3).filter(|stated| (stated - built_m).abs() > allowed_m) {
        found.add("thickness-differs", file, format!("the board is {} mm thick, its stack {} mm", stated_m * 1e3, built_m * 1e3));
    }
}
