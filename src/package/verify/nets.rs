//! Do the nets of the copper, of the netlist and of the drill files agree? Nets are what copper and plated holes join, whatever the files say.

use std::collections::BTreeMap;
use std::collections::BTreeSet;

use crate::base::Nm;
use crate::base::Point;
use crate::package::netlist::Netlist;
use crate::package::verify::Findings;
use crate::package::verify::Pack;

/// The netlist counts whole micrometres, so places and sizes agree to half of one, and a rounding.
const NETLIST: i64 = 501;

pub(super) fn check(pack: &Pack, found: &mut Findings) {
    let groups = joined(pack, found);
    if pack.contents.withheld {
        return;
    }
    if let Some((file, netlist)) = &pack.netlist {
        points(pack, file, netlist, &groups, found);
        drills(pack, file, netlist, found);
    }
}

/// A piece of copper: which layer file, which island.
type Piece = (usize, usize);

/// Nets of each piece, once holes have joined the layers: the names in its group.
fn joined(pack: &Pack, found: &mut Findings) -> BTreeMap<Piece, BTreeSet<String>> {
    let pieces: Vec<Piece> =
        pack.coppers.iter().enumerate().flat_map(|(layer, copper)| (0..copper.islands.len()).map(move |island| (layer, island))).collect();
    let index: BTreeMap<Piece, usize> = pieces.iter().enumerate().map(|(i, piece)| (*piece, i)).collect();
    let mut parent: Vec<usize> = (0..pieces.len()).collect();
    fn root(parent: &mut [usize], mut i: usize) -> usize {
        while parent[i] != i {
            parent[i] = parent[parent[i]];
            i = parent[i];
        }
        i
    }
    let plated = || pack.drills.iter().filter(|(_, drilled)| drilled.plated == Some(true));
    let holes = plated().flat_map(|(_, drilled)| drilled.holes.iter().map(|hole| hole.0));
    // A plated slot reaches copper around its wall: half its width beside its ends.
    let slots = plated().flat_map(|(_, drilled)| drilled.slots.iter().map(|slot| slot.0));
    for at in holes.chain(slots) {
        let under: Vec<usize> = pack
            .coppers
            .iter()
            .enumerate()
            .filter_map(|(layer, copper)| copper.islands.iter().position(|island| island.contains(at)).map(|island| (layer, island)))
            .filter_map(|piece| index.get(&piece).copied())
            .collect();
        for pair in under.windows(2) {
            let (a, b) = (root(&mut parent, pair[0]), root(&mut parent, pair[1]));
            parent[a] = b;
        }
    }
    // A plated edge joins what reaches it.
    let is_plated = pack.gerbers.iter().any(|(_, image)| image.attributes.get("FileFunction").is_some_and(|stated| stated == "Profile,P"));
    if let (true, Some([low, high])) = (is_plated, pack.edge()) {
        let mut at_edge: BTreeMap<String, usize> = BTreeMap::new();
        for (i, (layer, island)) in pieces.iter().enumerate() {
            let Some(island) = pack.coppers.get(*layer).and_then(|copper| copper.islands.get(*island)) else { continue };
            let [a, b] = island.bounds;
            if a.x <= low.x || a.y <= low.y || b.x >= high.x || b.y >= high.y {
                let first = *at_edge.entry(island.name()).or_insert(i);
                let (one, other) = (root(&mut parent, first), root(&mut parent, i));
                parent[one] = other;
            }
        }
    }
    let mut names: BTreeMap<usize, BTreeSet<String>> = BTreeMap::new();
    let mut of: BTreeMap<Piece, usize> = BTreeMap::new();
    let mut groups_of: BTreeMap<String, BTreeSet<usize>> = BTreeMap::new();
    for (i, &(layer, number)) in pieces.iter().enumerate() {
        let group = root(&mut parent, i);
        of.insert((layer, number), group);
        let Some((copper, island)) = pack.coppers.get(layer).and_then(|c| c.islands.get(number).map(|island| (c, island))) else {
            continue;
        };
        names.entry(group).or_default().extend(island.nets.iter().cloned());
        for net in &island.nets {
            groups_of.entry(net.clone()).or_default().insert(group);
        }
        let at = island.piece.outer.first().copied();
        if island.nets.len() > 1 {
            let what = format!("one piece of copper joins the nets {}", island.nets.iter().cloned().collect::<Vec<_>>().join(" and "));
            found.at("nets-joined", &copper.file, at, what);
        } else if island.nets.is_empty() && !island.is_text {
            found.at("net-missing", &copper.file, at, "a piece of copper names no net (.N)");
        }
    }
    for (group, nets) in names.iter().filter(|(_, nets)| nets.len() > 1) {
        let islands_alone = of.iter().filter(|(_, g)| *g == group).all(|((layer, number), _)| {
            pack.coppers.get(*layer).and_then(|copper| copper.islands.get(*number)).is_none_or(|island| island.nets.len() < 2)
        });
        if islands_alone {
            let what = format!("plated holes join the nets {}", nets.iter().cloned().collect::<Vec<_>>().join(" and "));
            found.add("nets-joined", "drill files", what);
        }
    }
    for (net, groups) in groups_of.iter().filter(|(_, groups)| groups.len() > 1) {
        found.add("net-in-pieces", "copper files", format!("net {net} is in {} pieces that nothing joins", groups.len()));
    }
    of.into_iter().map(|(piece, group)| (piece, names.get(&group).cloned().unwrap_or_default())).collect()
}

/// Every test point touches copper of its net, and every net is tested: a piece without hole and land at two places.
fn points(pack: &Pack, file: &str, netlist: &Netlist, groups: &BTreeMap<Piece, BTreeSet<String>>, found: &mut Findings) {
    let mut tested: BTreeMap<Piece, usize> = BTreeMap::new();
    let mut nets: BTreeSet<&str> = BTreeSet::new();
    for point in &netlist.points {
        if matches!(point.hole, Some((_, false))) {
            continue;
        }
        nets.insert(point.net.as_str());
        for (layer, copper) in pack.coppers.iter().enumerate() {
            if point.access != 0 && i32::from(point.access) != copper.layer {
                continue;
            }
            let Some(island) = copper.islands.iter().position(|island| island.contains(point.at)) else {
                found.at(
                    "netlist-off-copper",
                    file,
                    Some(point.at),
                    format!("{} is tested where copper {} has nothing", point.net, copper.layer),
                );
                continue;
            };
            *tested.entry((layer, island)).or_default() += 1;
            if !groups.get(&(layer, island)).is_some_and(|names| names.contains(&point.net)) {
                let is = copper.islands.get(island).map(|island| island.name()).unwrap_or_default();
                found.at("netlist-differs", file, Some(point.at), format!("{} is tested on copper of {is}", point.net));
            }
        }
    }
    for (layer, copper) in pack.coppers.iter().enumerate() {
        let is_outer = copper.layer == 1 || copper.layer == pack.last_layer();
        for (number, island) in copper.islands.iter().enumerate().filter(|(_, island)| !island.is_text && is_outer) {
            let touched = tested.get(&(layer, number)).copied().unwrap_or(0);
            let soldered = copper.pads.iter().any(|pad| island.contains(pad.at));
            let due = if soldered { 1 } else { 2 };
            if touched < due || island.nets.iter().any(|net| !nets.contains(net.as_str())) {
                let what = format!("copper of {} on layer {} is tested at {touched} places, {due} are due", island.name(), copper.layer);
                found.at("net-untested", file, island.piece.outer.first().copied(), what);
            }
        }
    }
}

/// Every hole is in the netlist as drilled, and the other way round.
fn drills(pack: &Pack, file: &str, netlist: &Netlist, found: &mut Findings) {
    let near = |a: Point, b: Point| (a.x - b.x).0.abs() <= NETLIST && (a.y - b.y).0.abs() <= NETLIST;
    let mut listed: Vec<(Point, Nm, bool)> =
        netlist.points.iter().filter_map(|p| p.hole.map(|(diameter, plated)| (p.at, diameter, plated))).collect();
    for (name, drilled) in &pack.drills {
        for &(at, diameter) in &drilled.holes {
            let plated = drilled.plated == Some(true);
            let known = listed
                .iter()
                .position(|(there, wide, through)| near(*there, at) && (wide.0 - diameter.0).abs() <= NETLIST && *through == plated);
            match known {
                Some(index) => {
                    listed.swap_remove(index);
                }
                None => {
                    let what = format!("the hole of {:.3} mm in {name} is not in the netlist like that", diameter.mm());
                    found.at("netlist-drill-differs", file, Some(at), what);
                }
            }
        }
    }
    listed.sort();
    for (at, diameter, _) in listed {
        found.at("netlist-drill-differs", file, Some(at), format!("no drill file has the hole of {:.3} mm", diameter.mm()));
    }
}
