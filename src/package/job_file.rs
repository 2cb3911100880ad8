//! Of what is the board made, and which file is which layer? `<name>.gbrjob`, the Gerber job file: JSON for quoting and tooling software.
//!
//! Keys and values follow the published JSON schema of the Gerber job file (revision 2023.06): no key beyond it, lengths in millimetres.

use std::fs;
use std::io;
use std::io::BufRead;
use std::io::Write;

use serde_json::Map;
use serde_json::Value;
use serde_json::json;

use crate::artwork::Face;
use crate::artwork::Layer;
use crate::base::Nm;
use crate::base::spelt_out;
use crate::order::Compensation;
use crate::order::LaminateKind;
use crate::order::StackLayer;
use crate::package::facts;
use crate::package::job::Job;

/// Writes the job file; the layer files must have been written before.
pub fn write(job: &Job, out: &mut dyn Write) -> io::Result<()> {
    let job_file = json!({
        "Header": header(job),
        "GeneralSpecs": general(job),
        "DesignRules": rules(job),
        "FilesAttributes": files(job)?,
        "MaterialStackup": stackup(job),
    });
    serde_json::to_writer_pretty(&mut *out, &job_file)?;
    writeln!(out)
}

fn header(job: &Job) -> Value {
    let tool = env!("CARGO_PKG_NAME");
    let mut header = Map::new();
    header.insert("GenerationSoftware".into(), json!({ "Vendor": tool, "Application": tool, "Version": env!("CARGO_PKG_VERSION") }));
    if let Some(date) = &job.order().date {
        header.insert("CreationDate".into(), json!(format!("{date}T00:00:00+00:00")));
    }
    if job.breaks_a_rule() {
        header.insert("Comment".into(), json!(facts::DESPITE));
    }
    header.into()
}

/// Whole nanometres as millimetres: the same decimal as in every other file.
fn mm(metres: f64) -> f64 {
    Nm::from_m(metres).mm()
}

fn general(job: &Job) -> Value {
    let (order, board) = (job.order(), job.bundle.board);
    let [x, y] = facts::size(board);
    let mut general = json!({
        "ProjectId": { "Name": order.name, "GUID": job.project.to_string(), "Revision": order.revision },
        "Owner": order.contact,
        "Size": { "X": x.mm(), "Y": y.mm(), "Tol+": mm(order.board.outline_tolerance_m), "Tol-": mm(order.board.outline_tolerance_m) },
        "LayerNumber": order.copper_layers(),
        "BoardThickness": mm(order.board.thickness_m),
        "IPC-600-Class": order.acceptance_class,
        "Standard": facts::acceptance(order),
        "ImpedanceControlled": true,
        "EdgePlating": !board.plated_edges.is_empty(),
        "Castellated": false,
        "EdgeConnector": false,
        "Finish": facts::finish(order),
        "Foil": format!("{} um base, {} um rms or less on the laminate side",
            facts::um(order.laminate.copper.base_m), facts::um(order.laminate.copper.roughness_m)),
        "Substrates": substrates(job),
        "ElectricalTest": "100 % of the nets, against the IPC-D-356A file of this package",
        "Notes": notes(job),
    });
    if board.holes.iter().any(|hole| hole.is_plated()) || board.slots.iter().any(|slot| slot.plated) {
        general["HolePlatingThickness"] = json!(mm(facts::wall_m(order)));
        general["ViaProtection"] = json!("None");
    }
    general
}

fn substrates(job: &Job) -> Vec<String> {
    let order = job.order();
    let kind = match order.laminate.kind {
        LaminateKind::Ptfe => "PTFE",
        LaminateKind::Hydrocarbon => "hydrocarbon thermoset",
        LaminateKind::GlassEpoxy => "glass-epoxy",
        LaminateKind::Ceramic => "fired ceramic",
        LaminateKind::Other => "customer-specified",
    };
    let mut names = vec![format!("{}: {kind}, {}", order.laminate.class, facts::sheet(order))];
    names.extend(order.board.below.iter().map(|below| below.material.clone()));
    names
}

/// What the schema has no key for.
fn notes(job: &Job) -> String {
    let order = job.order();
    let mut notes = Vec::new();
    if job.breaks_a_rule() {
        notes.push(facts::DESPITE.to_string());
    }
    notes.push(format!("Part number {}.", order.part_number));
    notes.push(format!(
        "Overall thickness {} mm +/-{} mm over foil and plating, without finish, mask and legend.",
        facts::mm(order.board.thickness_m),
        facts::mm(order.board.thickness_tolerance_m)
    ));
    notes.push(match order.shop.compensation {
        Compensation::ByTheShop => "Artwork is the finished size at the foot; the board house compensates the etch, once.".to_string(),
        Compensation::InTheArtwork { per_edge_m } => {
            format!("Copper 1 carries an etch compensation of {} um on each edge; do not compensate again.", facts::um(per_edge_m))
        }
    });
    notes.push(format!("Direction: {}.", facts::grain(order)));
    notes.push(facts::nickel(order).to_string());
    notes.push(format!("The note {}-fabrication.txt and the drawing {}-fabrication.pdf belong to this job.", order.name, order.name));
    notes.join(" ")
}

/// What the board uses, for the copper layers the numbers are known of: the filter's own.
fn rules(job: &Job) -> Value {
    let (order, board) = (job.order(), job.bundle.board);
    let [line, gap, ring, _] = facts::smallest(order, board).map(|(_, used, limit)| mm(used.unwrap_or(limit)));
    let outer = json!({
        "Layers": "Outer",
        "RegionToRegion": gap,
        "MinLineWidth": line,
        "MinRing": ring,
        "MinClearanceToProfile": mm(order.shop.edge_clearance_m),
        "Notes": "Smallest features used; clearance to the profile where no launch runs to the edge. All copper is drawn as regions.",
    });
    if order.copper_layers() < 3 {
        return json!([outer]);
    }
    let inner = json!({
        "Layers": "Inner",
        "MinRing": ring,
        "MinClearanceToProfile": mm(order.shop.edge_clearance_m),
        "Notes": "Ground planes.",
    });
    json!([outer, inner])
}

/// Layer and drill files with the function and polarity they state themselves.
fn files(job: &Job) -> io::Result<Value> {
    let mut files = Vec::new();
    for listed in job.written.iter().filter(|file| file.file.ends_with(".gbr") || file.file.ends_with(".drl")) {
        let (mut function, mut polarity) = (String::new(), String::new());
        for line in io::BufReader::new(fs::File::open(job.folder.join(&listed.file))?).lines() {
            let line = line?;
            let attribute = line.strip_prefix("%TF.").and_then(|rest| rest.strip_suffix("*%")).or_else(|| line.strip_prefix("; #@! TF."));
            match attribute.and_then(|attribute| attribute.split_once(',')) {
                Some(("FileFunction", value)) => function = value.to_string(),
                Some(("FilePolarity", value)) => polarity = value.to_string(),
                // The attributes stand at the head of a file.
                _ if line.starts_with("%MO") || line == "METRIC" => break,
                _ => {}
            }
        }
        let mut file = json!({ "Path": listed.file, "FileFunction": function });
        if !polarity.is_empty() {
            file["FilePolarity"] = json!(polarity);
        }
        if listed.file.ends_with(".drl") {
            file["FileFormat"] = json!("XNC");
        }
        files.push(file);
    }
    Ok(files.into())
}

fn stackup(job: &Job) -> Value {
    let order = job.order();
    let mut stack = Vec::new();
    let side = |face: Face| if face == Face::Top { "Top" } else { "Bottom" };
    let print = |face: Face, stack: &mut Vec<Value>, outwards: bool| {
        let mut layers = Vec::new();
        if job.has(Layer::Legend(face)) {
            layers.push(json!({ "Type": "Legend", "Name": format!("{} legend", side(face)) }));
        }
        if job.has(Layer::Mask(face)) {
            layers.push(json!({ "Type": "SolderMask", "Name": format!("{} solder mask", side(face)) }));
        }
        if outwards {
            layers.reverse();
        }
        stack.extend(layers);
    };
    print(Face::Top, &mut stack, false);
    for layer in order.stack() {
        stack.push(match layer {
            StackLayer::Copper { number, base_m, plating_m } => json!({
                "Type": "Copper",
                "Name": format!("L{number}"),
                "Thickness": mm(base_m + plating_m),
                "Conductivity": order.laminate.copper.conductivity_s_per_m,
                "Note": if plating_m > 0.0 {
                    format!("{} um foil + {} um plating", facts::um(base_m), facts::um(plating_m))
                } else {
                    format!("{} um foil, not plated", facts::um(base_m))
                },
            }),
            StackLayer::Dielectric { material, permittivity, loss_tangent, thickness_m, thickness_tolerance_m } => {
                let mut dielectric = json!({
                    "Type": "Dielectric",
                    "Name": spelt_out(&material).0,
                    "Material": spelt_out(&material).0,
                    "Thickness": mm(thickness_m),
                    "DielectricConstant": permittivity,
                    "Note": format!("thickness +/-{} mm", facts::mm(thickness_tolerance_m)),
                });
                if let Some(loss_tangent) = loss_tangent {
                    dielectric["LossTangent"] = json!(loss_tangent);
                }
                dielectric
            }
        });
    }
    print(Face::Bottom, &mut stack, true);
    stack.into()
}
