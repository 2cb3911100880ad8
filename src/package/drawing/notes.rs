//! The numbered notes of the drawing; the fabrication note says the same at more length.

use super::flow::Flow;
use crate::artwork::Fits;
use crate::artwork::Hole;
use crate::order::Compensation;
use crate::order::Mask;
use crate::order::TextOn;
use crate::package::facts;
use crate::package::facts::mm;
use crate::package::facts::um;
use crate::package::job::Job;

pub(super) fn write(job: &Job, flow: &mut Flow) {
    let (order, board) = (job.order(), job.bundle.board);
    flow.heading("NOTES");
    let mut notes: Vec<String> = Vec::new();
    if job.breaks_a_rule() {
        notes.push("A design rule is broken, and these files were written in spite of it. Quote and build only on written consent.".into());
        notes.extend(job.bundle.findings.iter().filter(|finding| finding.is_error()).map(|finding| finding.to_string()));
    }
    notes.push(format!(
        "The Gerber X2 and XNC drill files govern, then {}-fabrication.txt, then this drawing. Identity of the coordinates: {}.",
        order.name, job.coordinates
    ));
    notes.push(format!(
        "Fabricate to {} class {}; seen by eye per IPC-A-600 of the same class.",
        facts::acceptance(order),
        order.acceptance_class
    ));
    notes.push(format!(
        "Laminate: {}, {}; er {} \u{b1}{} (design value), loss tangent {} or less. No substitution of laminate, thickness or foil without written consent.",
        order.laminate.class,
        facts::sheet(order),
        order.laminate.permittivity,
        order.laminate.permittivity_tolerance,
        order.laminate.loss_tangent
    ));
    notes.push(format!("Copper layers: {}.", facts::layer_order(order)));
    notes.push(format!("Finish: {}. {}", facts::finish(order), facts::nickel(order)));
    notes.push(format!(
        "Controlled features: \u{b1}{} mm, at the foot of the conductor, after etching and plating; walls may lean by {} \u{b5}m a side. Report them with the first article.",
        mm(order.shop.line_tolerance_m),
        um(order.shop.undercut_m)
    ));
    notes.push(match order.shop.compensation {
        Compensation::ByTheShop => "Etch compensation by the board house, once: the artwork is the finished size at the foot.".to_string(),
        Compensation::InTheArtwork { per_edge_m } => {
            format!(
                "The artwork of copper 1 is larger than this drawing by {} \u{b5}m on each edge; do not compensate again.",
                um(per_edge_m)
            )
        }
    });
    let [low, high] = board.circuit;
    notes.push(format!(
        "Filter area ({:.3}, {:.3}) to ({:.3}, {:.3}) mm and 2 mm around it: no thieving, teardrops, rounded or trimmed corners, added copper, \
         marks, mask, legend, added or moved holes; open ends and isolated strips are resonators and stay as drawn.",
        low.x.mm(),
        low.y.mm(),
        high.x.mm(),
        high.y.mm()
    ));
    if board.holes.iter().any(Hole::is_plated) || board.slots.iter().any(|slot| slot.plated) {
        notes.push(format!(
            "Plated walls: {} \u{b5}m of copper or more; vias neither filled nor capped. Holes within {} mm of the copper.",
            um(facts::wall_m(order)),
            mm(order.shop.registration_m)
        ));
    }
    if !board.plated_edges.is_empty() {
        notes.push("Plate the edge where it is drawn thick; the plating joins the ground of all copper layers.".into());
    }
    let mask = match order.board.mask {
        Mask::None => "No solder mask.".to_string(),
        Mask::ClearOfFilter => format!("Solder mask as drawn, open over the filter; thinnest dam {} mm.", mm(order.shop.mask_dam_m)),
    };
    let text = match order.board.text {
        TextOn::Legend => "Legend on the top as drawn.",
        TextOn::Copper => "No legend; text etched in copper 1 belongs to no net.",
        TextOn::None => "No legend.",
    };
    let paste = if board.lands.iter().any(|land| land.fits == Fits::Chip) { "Paste as drawn." } else { "No solder paste." };
    notes.push(format!("{mask} {text} {paste}"));
    if board.outline_drawn {
        notes.push(format!(
            "Edges {}; connector edges flat, square and free of burrs, no break-away tab within 5 mm of a connector, copper not clipped there.",
            facts::cut(order)
        ));
    } else {
        notes.push("The dashed edge is no board edge: the filter lies in a larger board.".into());
    }
    notes.push(format!("Direction: {}.", facts::grain(order)));
    if let Some([x, y]) = order.housing.and_then(|housing| housing.inside_m) {
        notes.push(format!(
            "A housing of {} \u{d7} {} mm inside stands on the ground frame of copper 1; the frame is flat and bare.",
            mm(x),
            mm(y)
        ));
    }
    let nets = facts::nets(board);
    notes.push(format!(
        "Electrical test of all {} nets against {}.ipc: {}. A bridged gap is a reject. Probe resonators near their ends only.",
        nets.len(),
        order.name,
        nets.keys().copied().collect::<Vec<_>>().join(", ")
    ));
    notes.push("Marks of the maker, date code and lot on the panel frame or the packing, not on the board.".into());
    notes.push("Clean and dry, packed one by one in paper that does not harm the finish, sealed with desiccant.".into());
    for (i, note) in notes.iter().enumerate() {
        flow.paragraph(&format!("{}.", i + 1), note);
    }
}
