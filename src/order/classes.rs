//! Laminate, shop and launch classes: those embedded in the program and those of the user's own file.

use std::path::Path;
use std::sync::LazyLock;

use super::context::{Context, parse};
use super::source::Source;
use super::table::{Size, Table};
use super::types::{Laminate, Launch, Shop};
use super::{laminate, launch, shop};
use crate::base::Dimensionality;
use crate::base::Problem;

const AT: Size = Size { kind: Dimensionality::Frequency, unit: "GHz", least: 1e3, greatest: 1e12, usual: "10 GHz" };

/// A laminate class: a laminate and what only its class tells.
#[derive(Clone, Debug, PartialEq)]
pub struct LaminateClass {
    /// The laminate with its usual thickness and copper.
    pub laminate: Laminate,
    /// Where the loss tangent holds, hertz.
    pub loss_tangent_at_hz: f64,
    /// Thicknesses that are usually on the shelf, metres.
    pub thicknesses_m: Vec<f64>,
}

/// Classes by kind, in file order.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Classes {
    /// Laminates.
    pub laminates: Vec<LaminateClass>,
    /// Board houses.
    pub shops: Vec<Shop>,
    /// Launches.
    pub launches: Vec<Launch>,
}

static EMBEDDED: LazyLock<(Classes, Vec<String>)> = LazyLock::new(|| {
    let mut all = Classes::default();
    let mut faults = Vec::new();
    for (name, text) in [
        ("templates/laminates.toml", include_str!("../../templates/laminates.toml")),
        ("templates/shops.toml", include_str!("../../templates/shops.toml")),
        ("templates/launches.toml", include_str!("../../templates/launches.toml")),
    ] {
        let source = Source::from_text(name, text);
        let (classes, problems) = Classes::read(&source);
        faults.extend(problems.iter().map(|p| format!("{} {p}", source.locate(p))));
        all.laminates.extend(classes.laminates);
        all.shops.extend(classes.shops);
        all.launches.extend(classes.launches);
    }
    (all, faults)
});

impl Classes {
    /// The classes in the program.
    pub fn embedded() -> &'static Classes {
        &EMBEDDED.0
    }

    /// Mistakes in the embedded class files: always none, which a test holds.
    pub fn embedded_faults() -> &'static [String] {
        &EMBEDDED.1
    }

    /// Reads a class file. What is faulty is left out of the classes and reported.
    pub fn read(source: &Source) -> (Classes, Vec<Problem>) {
        let context = Context::default();
        let document = parse(source, &context);
        let root = Table::root(document.get_ref(), &context);
        let mut classes = Classes::default();
        let (laminates, shops, launches) = (root.tables("laminate"), root.tables("shop"), root.tables("launch"));
        if laminates.is_empty() && shops.is_empty() && launches.is_empty() {
            root.missing("laminate", "[[laminate]] (or [[shop]], [[launch]]) with a name and its values");
        }
        for t in laminates {
            let name = name(&t, classes.laminates.iter().map(|c| c.laminate.class.as_str()));
            let at = t.size("loss-tangent-at", &AT, None);
            let thicknesses =
                t.resolve("thicknesses", "[\"0.508 mm\", \"0.762 mm\"]", None, |t, k| t.quantity_list(k, &laminate::THICKNESS));
            let laminate = laminate::read(&t, name.as_deref().unwrap_or(""), None);
            t.finish();
            if let (Some(_), Some(laminate), Some(at), Some(thicknesses_m)) = (name, laminate, at, thicknesses) {
                classes.laminates.push(LaminateClass { laminate, loss_tangent_at_hz: at, thicknesses_m });
            }
        }
        for t in shops {
            let name = name(&t, classes.shops.iter().map(|c| c.class.as_str()));
            let shop = shop::read(&t, name.as_deref().unwrap_or(""), None);
            t.finish();
            classes.shops.extend(name.and(shop));
        }
        for t in launches {
            let name = name(&t, classes.launches.iter().map(|c| c.class.as_str()));
            let launch = launch::read(&t, name.as_deref().unwrap_or(""), None);
            t.finish();
            classes.launches.extend(name.and(launch));
        }
        root.finish();
        (classes, context.into_problems(source))
    }

    /// The user's own classes first, then the embedded ones.
    pub fn with_embedded(mut self) -> Classes {
        let embedded = Classes::embedded();
        self.laminates.extend(embedded.laminates.iter().cloned());
        self.shops.extend(embedded.shops.iter().cloned());
        self.launches.extend(embedded.launches.iter().cloned());
        self
    }

    /// The user's own classes beside the order file `order`, as named in it.
    ///
    /// # Errors
    /// The mistakes of the class file as lines with that file's own line numbers.
    pub fn open_beside(order: &Path, name: &str) -> Result<Classes, Vec<String>> {
        let path = order.parent().unwrap_or(Path::new("")).join(name);
        let source = Source::open(&path).map_err(|list| list.iter().map(|p| format!("{} ({})", p.message, p.help)).collect::<Vec<_>>())?;
        let (classes, problems) = Classes::read(&source);
        if problems.iter().any(Problem::is_error) {
            return Err(problems.iter().map(|p| format!("{}: {} ({})", source.locate(p), p.message, p.help)).collect());
        }
        Ok(classes)
    }

    /// The laminate class of that name.
    pub fn laminate(&self, name: &str) -> Option<&LaminateClass> {
        self.laminates.iter().find(|c| c.laminate.class == name)
    }

    /// The shop class of that name.
    pub fn shop(&self, name: &str) -> Option<&Shop> {
        self.shops.iter().find(|c| c.class == name)
    }

    /// The launch class of that name.
    pub fn launch(&self, name: &str) -> Option<&Launch> {
        self.launches.iter().find(|c| c.class == name)
    }
}

/// Name of a class: one line, met once in its kind.
fn name<'n>(t: &Table<'_>, mut before: impl Iterator<Item = &'n str>) -> Option<String> {
    let name = t.resolve("name", "\"my-class\"", None, |t, k| t.line(k, 60))?;
    if name == super::OWN_CLASS || before.any(|n| n == name) {
        t.error(
            "class-name-taken",
            "name",
            format!("\"{name}\" is taken; a class name stands once in its kind and is not \"{}\"", super::OWN_CLASS),
            "give the class another name",
        );
        return None;
    }
    Some(name)
}
