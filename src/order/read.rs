//! From a file's text to a checked order, with every mistake of the file found in one run.

use std::collections::BTreeMap;

use super::classes::Classes;
use super::context::{Context, parse};
use super::requirement::{self, FREQUENCY};
use super::source::Source;
use super::table::{Size, Table, nearest};
use super::types::{
    Band, FamilyKeys, Filter, GroundOn, Housing, Key, Laminate, Launch, Order, OwnKind, OwnValue, Paper, Passes, ResponseShape, Shop,
};
use super::{board, laminate, launch, shop};
use crate::base::Dimensionality;
use crate::base::Outcome;
use crate::base::parse_quantity;

/// A class that stands for "every value is given here".
pub const OWN_CLASS: &str = "own";

/// Who answers the board house's questions, when the order names nobody.
const BUYER: &str = "the buyer named on the purchase order";
/// The words of `paper`.
pub(super) const PAPERS: &[(&str, Paper)] = &[("a4", Paper::A4), ("letter", Paper::Letter)];
/// Longest name: it becomes the stem of file names with up to 30 more characters.
const LONGEST_NAME: usize = 60;
const PORT: Size = Size { kind: Dimensionality::Impedance, unit: "ohm", least: 1.0, greatest: 1000.0, usual: "50 ohm" };
// Between them ripple and return loss cover the same shapes, so that what is written as ripple is read again.
const RIPPLE: Size = Size { kind: Dimensionality::Level, unit: "dB", least: 1e-6, greatest: 6.0, usual: "0.1 dB" };
const RETURN_LOSS: Size = Size { kind: Dimensionality::Level, unit: "dB", least: 1.3, greatest: 60.0, usual: "20 dB" };

/// Reads an order.
///
/// Missing optional values are resolved from the classes and from defaults, and their key paths kept in [`Order::defaults`]; what an
/// order lists under `[resolved] defaults` counts as resolved again.
///
/// # Errors
/// Every mistake of the file, in file order, warnings included. Codes: `key-unknown`, `key-missing`, `key-doubled`, `not-toml`,
/// `unit-missing`, `unit-wrong`, `not-a-quantity`, `not-finite`, `size-not-positive`, `out-of-range`, `wrong-type`, `word-unknown`,
/// `class-unknown`, `class-file`, `edges-reversed`, `band-without-width`, `keys-exclude-each-other`, `name-wrong`, `date-wrong`,
/// `list-length`, `tolerance-too-large`, `requirement-contradicts-band`, `requirement-without-limit` and a few more.
pub fn read(source: &Source, families: &[FamilyKeys]) -> Outcome<Order> {
    let context = Context::default();
    let document = parse(source, &context);
    let root = Table::root(document.get_ref(), &context);
    if root.has("dimension") {
        root.error(
            "not-an-order",
            "dimension",
            "this file holds a dimension set, an order is due",
            "use `stripwright draw` or `stripwright predict` for a dimension set, or take the [[dimension]] tables out",
        );
    }
    let resolved = root.table("resolved");
    let order = read_into(&root, &resolved, source, families);
    resolved.finish();
    root.finish();
    finish(order, context, source)
}

/// The value with its warnings, or all problems.
pub(crate) fn finish<T>(value: Option<T>, context: Context, source: &Source) -> Outcome<T> {
    let failed = context.has_errors();
    let problems = context.into_problems(source);
    match value {
        Some(value) if !failed => Ok((value, problems)),
        _ => Err(problems),
    }
}

/// Reads the tables of an order out of a file that may hold more; `resolved` is its `[resolved]` table.
pub(crate) fn read_into(root: &Table<'_>, resolved: &Table<'_>, source: &Source, families: &[FamilyKeys]) -> Option<Order> {
    let complete = root.has("resolved");
    if complete {
        root.context().set_complete();
    }
    if let Some(listed) = resolved.strings("defaults") {
        root.context().set_listed(listed.into_iter().map(str::to_string).collect());
    }
    let head = head(&root.table("order"));
    let filter_table = root.table("filter");
    let filter = if root.has("filter") {
        filter(&filter_table, families)
    } else {
        root.missing("filter", "a table [filter] with family, passband, ripple, port");
        None
    };
    let requirements: Vec<_> = root.tables("requirement").iter().map(|t| requirement::read(t, filter.as_ref())).collect();

    let own_classes = root.table("order").string("classes");
    // A complete order carries every value; the user's class file need not be at hand, and must not change it.
    let classes = match own_classes {
        Some(_) if complete => Some(Classes::default()),
        Some(name) => match Classes::open_beside(&source.path, name) {
            Ok(classes) => Some(classes.with_embedded()),
            Err(faults) => {
                for fault in faults {
                    let help = "mend the class file named by order.classes (it is looked for beside the order)";
                    root.table("order").error("class-file", "classes", fault, help);
                }
                None
            }
        },
        None => None,
    };
    let opened = own_classes.is_none() || classes.is_some();
    let classes = classes.as_ref().unwrap_or(Classes::embedded());
    let lookup = Lookup { classes, complete, opened };

    let laminate = read_laminate(root, &lookup, own_classes.is_none());
    let shop = read_shop(root, &lookup);
    let board_table = root.table("board");
    let launch = read_launch(root, &board_table, &lookup);
    let board = board::read(&board_table, laminate.as_ref(), shop.as_ref(), launch);
    let housing = if root.has("housing") { board::read_housing(&root.table("housing")).map(Some) } else { Some(None) };
    if let (Some(GroundOn::Carrier), Some(Some(Housing { inside_m: Some(_), .. }))) = (board.as_ref().map(|board| board.ground), &housing) {
        root.table("housing").error(
            "keys-exclude-each-other",
            "inside",
            "housing.inside draws the wall's footprint on the board and fences it to copper 2, but with board.ground = \"carrier\" there is none",
            "leave housing.inside out (the walls stand on the carrier), or write board.ground = \"layer-2\"",
        );
    }
    for path in root.context().listed_but_never_met() {
        resolved.warning(
            "default-unknown",
            "defaults",
            format!("defaults lists \"{path}\", which is no key that can be resolved here"),
            "take it out of the list",
        );
    }
    let head = head?;
    Some(Order {
        name: head.name,
        title: head.title,
        part_number: head.part_number,
        contact: head.contact,
        acceptance_class: head.acceptance_class,
        paper: head.paper,
        revision: head.revision,
        date: head.date,
        classes: head.classes,
        filter: filter?,
        requirements: requirements.into_iter().collect::<Option<_>>()?,
        laminate: laminate?,
        shop: shop?,
        board: board?,
        housing: housing?,
        defaults: root.context().resolved(),
    })
}

/// What `[order]` says.
struct Head {
    name: String,
    title: String,
    part_number: String,
    contact: String,
    acceptance_class: u8,
    paper: Paper,
    revision: String,
    date: Option<String>,
    classes: Option<String>,
}

/// Reads `[order]`.
fn head(t: &Table<'_>) -> Option<Head> {
    const LONGEST: usize = 100;
    let name = t.resolve("name", "\"my-filter\"", None, name);
    let title = t.resolve("title", "\"...\"", Some(name.clone().unwrap_or_default()), |t, k| t.line(k, LONGEST));
    let part_number = t.resolve("part-number", "\"AB-1042\"", Some(name.clone().unwrap_or_default()), |t, k| t.line(k, LONGEST));
    let contact = t.resolve("contact", "\"RF desk, extension 12\"", Some(BUYER.to_string()), |t, k| t.line(k, LONGEST));
    let paper = t.resolve("paper", "\"a4\"", Some(Paper::A4), |t, k| {
        let words: Vec<&str> = PAPERS.iter().map(|p| p.0).collect();
        t.word(k, &words).and_then(|i| PAPERS.get(i)).map(|p| p.1)
    });
    let acceptance_class = t.resolve("acceptance-class", "2", Some(2), |t, k| t.integer(k, 1, 3));
    let revision = t.resolve("revision", "\"A\"", Some("A".to_string()), |t, k| t.line(k, 20));
    let date = t.date("date");
    let classes = t.line("classes", 400);
    t.finish();
    Some(Head {
        name: name?,
        title: title?,
        part_number: part_number?,
        contact: contact?,
        paper: paper?,
        acceptance_class: u8::try_from(acceptance_class?).ok()?,
        revision: revision?,
        date,
        classes,
    })
}

/// A name that is safe as folder and file stem everywhere.
fn name(t: &Table<'_>, key: &'static str) -> Option<String> {
    let text = t.string(key)?;
    let safe: String = text
        .to_lowercase()
        .chars()
        .map(|c| if c.is_ascii_lowercase() || c.is_ascii_digit() { c } else { '-' })
        .take(LONGEST_NAME)
        .collect();
    let safe = safe.trim_matches('-');
    if text == safe {
        return Some(text.to_string()).filter(|t| !t.is_empty()).or_else(|| {
            t.error("name-wrong", key, "name is empty; it becomes folder and file names", format!("write {key} = \"my-filter\""));
            None
        });
    }
    let shown: String = text.chars().take(LONGEST_NAME).flat_map(char::escape_debug).collect();
    t.error(
        "name-wrong",
        key,
        format!(
            "name is \"{shown}\" ({} characters); allowed: a-z, 0-9 and '-' between them, at most {LONGEST_NAME}, for it becomes folder and file names",
            text.chars().count()
        ),
        format!("write {key} = \"{}\"", if safe.is_empty() { "my-filter" } else { safe }),
    );
    None
}

/// Reads `[filter]`.
fn filter(t: &Table<'_>, families: &[FamilyKeys]) -> Option<Filter> {
    let names: Vec<&str> = families.iter().map(|f| f.name).collect();
    let family =
        t.resolve("family", &format!("\"{}\"", names.first().unwrap_or(&"")), None, |t, k| t.word(k, &names)).and_then(|i| families.get(i));
    let response = response(t);
    let ports_ohm = ports(t);
    let Some(family) = family else {
        // Without its family nobody can tell which keys are due; all of them are let pass.
        for key in ["passband", "stopband", "cutoff", "degree"] {
            t.has(key);
        }
        for key in families.iter().flat_map(|f| f.keys) {
            t.has(key.name);
        }
        t.finish();
        return None;
    };
    let band = filter_band(t, family);
    let degree = degree(t, family);
    let mut own = BTreeMap::new();
    let mut whole = true;
    for key in family.keys {
        match own_value(t, key) {
            Some(value) => {
                own.insert(key.name.to_string(), value);
            }
            None => whole = false,
        }
    }
    t.finish();
    let filter = Filter { family: family.name.to_string(), response: response?, band: band?, degree: degree?, ports_ohm: ports_ohm?, own };
    whole.then_some(filter)
}

/// The band key that fits the family, and a report for each that does not.
fn filter_band(t: &Table<'_>, family: &FamilyKeys) -> Option<Band> {
    let (due, kind) = match family.passes {
        Passes::Low => ("cutoff", "low-pass"),
        Passes::High => ("passband", "high-pass"),
        Passes::Band => ("passband", "band-pass"),
        Passes::Stop => ("stopband", "band-stop"),
    };
    for key in ["passband", "stopband", "cutoff"] {
        if key != due && t.has(key) {
            t.error(
                "key-unfit",
                key,
                format!("{key} does not fit the {kind} family \"{}\"; due is {due}", family.name),
                format!("rename {key} to {due}, or choose another family"),
            );
        }
    }
    let pair = |due| t.resolve(due, "[\"2.35 GHz\", \"2.55 GHz\"]", None, requirement::band);
    Some(match family.passes {
        Passes::Low => Band::LowPass { cutoff_hz: t.size("cutoff", &FREQUENCY, None)? },
        Passes::High => pair(due).map(|[from_hz, to_hz]| Band::HighPass { from_hz, to_hz })?,
        Passes::Band => pair(due).map(|[from_hz, to_hz]| Band::BandPass { from_hz, to_hz })?,
        Passes::Stop => pair(due).map(|[from_hz, to_hz]| Band::BandStop { from_hz, to_hz })?,
    })
}

/// The shape of the passband.
fn response(t: &Table<'_>) -> Option<ResponseShape> {
    let word = t.resolve("response", "\"equal-ripple\"", Some(0), |t, k| t.word(k, &["equal-ripple", "maximally-flat"]));
    let (ripple, return_loss) = (t.has("ripple"), t.has("return-loss"));
    if word? == 1 {
        for (there, key) in [(ripple, "ripple"), (return_loss, "return-loss")] {
            if there {
                t.error(
                    "keys-exclude-each-other",
                    key,
                    format!("{key} is given, but a maximally-flat response has no ripple; its band edges are the 3 dB points"),
                    format!("leave {key} out, or write response = \"equal-ripple\""),
                );
            }
        }
        return Some(ResponseShape::MaximallyFlat);
    }
    if ripple && return_loss {
        t.error(
            "keys-exclude-each-other",
            "return-loss",
            "ripple and return-loss are both given; each follows from the other",
            "leave one of the two out",
        );
        return None;
    }
    let ripple_db = if return_loss {
        t.quantity("return-loss", &RETURN_LOSS).map(|loss| -10.0 * (1.0 - 10f64.powf(-loss / 10.0)).log10())
    } else if ripple {
        t.quantity("ripple", &RIPPLE)
    } else {
        t.missing("ripple", "\"0.1 dB\" (or return-loss = \"20 dB\")");
        None
    };
    ripple_db.map(|ripple_db| ResponseShape::EqualRipple { ripple_db })
}

/// The degree: the outer `None` is a fault, the inner one asks for the least that does.
fn degree(t: &Table<'_>, family: &FamilyKeys) -> Option<Option<usize>> {
    let (least, greatest) = family.degrees;
    let path = t.path_of("degree");
    t.context().meet(&path);
    if !t.has("degree") || t.context().is_listed(&path) {
        t.context().record(&path);
        return Some(None);
    }
    t.integer("degree", least, greatest).map(Some)
}

/// Port impedances.
fn ports(t: &Table<'_>) -> Option<[f64; 2]> {
    if t.has("port") {
        if t.has("ports") {
            t.error("keys-exclude-each-other", "ports", "port and ports are both given", "leave one of the two out");
            return None;
        }
        return t.quantity("port", &PORT).map(|ohm| [ohm, ohm]);
    }
    t.resolve("ports", "[\"50 ohm\", \"50 ohm\"]", Some([50.0, 50.0]), |t, k| t.quantities(k, &PORT))
}

/// A value of a family's own key.
fn own_value(t: &Table<'_>, key: &Key) -> Option<OwnValue> {
    let example = match (key.kind, key.default) {
        (_, Some(default)) => default.to_string(),
        (OwnKind::Quantity(kind), None) => format!("\"1 {}\"", kind.units().first().map_or("", |u| u.0)),
        (OwnKind::Flag, None) => "true".to_string(),
        (OwnKind::OneOf(words), None) => format!("\"{}\"", words.first().unwrap_or(&"")),
    };
    let default = key.default.map(|d| d.trim_matches('"'));
    match key.kind {
        OwnKind::Quantity(kind) => {
            let default = default.and_then(|d| parse_quantity(d, kind).ok());
            let size = own_size(kind);
            t.resolve(key.name, &example, default, |t, k| t.quantity(k, &size)).map(|v| OwnValue::Number(v, kind))
        }
        OwnKind::Flag => t.resolve(key.name, &example, default.map(|d| d == "true"), |t, k| t.flag(k)).map(OwnValue::Flag),
        OwnKind::OneOf(words) => t
            .resolve(key.name, &example, default.map(str::to_string), |t, k| {
                t.word(k, words).and_then(|i| words.get(i)).map(|w| w.to_string())
            })
            .map(OwnValue::Word),
    }
}

/// Sane limits of a family's own quantity.
fn own_size(kind: Dimensionality) -> Size {
    let (least, greatest, usual) = match kind {
        Dimensionality::Length => (1e-6, 1.0, "1 mm"),
        Dimensionality::CopperThickness => (1e-7, 1e-3, "35 um"),
        Dimensionality::Frequency => (1e6, 1e12, "2.45 GHz"),
        Dimensionality::Level => (1e-6, 200.0, "0.1 dB"),
        Dimensionality::Impedance => (1.0, 1000.0, "50 ohm"),
        Dimensionality::Time => (1e-15, 1e-3, "1 ns"),
        Dimensionality::Angle => (1e-3, 360.0, "30 deg"),
        Dimensionality::Conductivity => (1e6, 65e6, "58 MS/m"),
    };
    Size { kind, unit: kind.units().first().map_or("", |u| u.0), least, greatest, usual }
}

/// Where classes are looked up.
struct Lookup<'c> {
    classes: &'c Classes,
    /// The order carries every value itself.
    complete: bool,
    /// The user's class file, if any, was read; otherwise a class may be one of its.
    opened: bool,
}

impl Lookup<'_> {
    /// The class named by `key`; where it is unknown (which is reported) another one stands in, so that the rest of the file is
    /// checked without a flood of missing keys. `Some(None)` when every value is due in the order itself.
    fn find<'c, T>(
        &'c self,
        t: &Table<'_>,
        key: &str,
        name: Option<&str>,
        all: impl Fn(&'c Classes) -> Vec<(&'c str, &'c T)>,
    ) -> Option<&'c T> {
        let known = all(self.classes);
        let found = name.and_then(|name| known.iter().find(|c| c.0 == name)).map(|c| c.1);
        if found.is_some() || name == Some(OWN_CLASS) || self.complete {
            return found;
        }
        if let (Some(name), true) = (name, self.opened) {
            let names: Vec<&str> = known.iter().map(|c| c.0).collect();
            let help = match nearest(name, names.iter().copied()) {
                Some(near) => format!("did you mean \"{near}\"?"),
                None => {
                    format!("choose one of these, name your own file by order.classes, or write {key} = \"{OWN_CLASS}\" and every value")
                }
            };
            t.error("class-unknown", key, format!("there is no class \"{name}\"; known: {}", names.join(", ")), help);
        }
        known.first().map(|c| c.1)
    }
}

/// Reads `[laminate]`.
fn read_laminate(root: &Table<'_>, lookup: &Lookup<'_>, embedded_only: bool) -> Option<Laminate> {
    let t = root.table("laminate");
    if !root.has("laminate") {
        root.missing("laminate", "a table [laminate] with class = \"ceramic-ptfe-3.0\"");
    }
    let class = if root.has("laminate") { t.resolve("class", "\"ceramic-ptfe-3.0\"", None, |t, k| t.line(k, 60)) } else { None };
    let found = lookup.find(&t, "class", class.as_deref(), |c| c.laminates.iter().map(|l| (l.laminate.class.as_str(), l)).collect());
    let laminate = laminate::read(&t, class.as_deref().unwrap_or(""), found.map(|c| &c.laminate));
    t.finish();
    let laminate = laminate?;
    // Only for our own classes: a complete order must give the same warnings without the user's class file.
    if let (true, Some(found)) = (embedded_only && t.has("thickness"), found.filter(|f| f.laminate.class == laminate.class)) {
        // A micrometre: thicknesses in mil and in mm of the same sheet differ by less.
        const SAME_M: f64 = 1e-6;
        if !found.thicknesses_m.iter().any(|usual| (usual - laminate.thickness_m).abs() < SAME_M) {
            let usual: Vec<_> = found.thicknesses_m.iter().map(|&v| laminate::THICKNESS.show(v)).collect();
            t.warning(
                "thickness-not-usual",
                "thickness",
                format!("thickness is {}; usually on the shelf: {}", laminate::THICKNESS.show(laminate.thickness_m), usual.join(", ")),
                "ask the supplier, or take a usual thickness",
            );
        }
    }
    class.map(|_| laminate)
}

/// Reads `[shop]`.
fn read_shop(root: &Table<'_>, lookup: &Lookup<'_>) -> Option<Shop> {
    let t = root.table("shop");
    let class = t.resolve("class", "\"ordinary\"", Some("ordinary".to_string()), |t, k| t.line(k, 60));
    let found = lookup.find(&t, "class", class.as_deref(), |c| c.shops.iter().map(|s| (s.class.as_str(), s)).collect());
    let shop = shop::read(&t, class.as_deref().unwrap_or(""), found);
    t.finish();
    class.and(shop)
}

/// Reads the launch class named by `board.launch`, and `[launch]`, whose keys override it.
fn read_launch(root: &Table<'_>, board: &Table<'_>, lookup: &Lookup<'_>) -> Option<Launch> {
    // A filter inside a larger board has no connector of its own.
    let inside = board.has("outline") && board.string("outline") == Some("none");
    let class = if root.has("board") {
        board.resolve("launch", "\"edge-coax-pin-1.27mm\"", inside.then(|| "open".to_string()), |t, k| t.line(k, 60))
    } else {
        root.missing("board", "a table [board] with launch = \"edge-coax-pin-1.27mm\"");
        None
    };
    let found = lookup.find(board, "launch", class.as_deref(), |c| c.launches.iter().map(|l| (l.class.as_str(), l)).collect());
    let t = root.table("launch");
    let launch = launch::read(&t, class.as_deref().unwrap_or(""), found);
    t.finish();
    class.and(launch)
}
