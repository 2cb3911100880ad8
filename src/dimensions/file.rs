//! The dimension set as a file: the complete order, the degree, and one `[[dimension]]` each.

use std::fmt::Write;

use super::{Dimension, Dimensions};
use crate::base::Dimensionality;
use crate::base::Nm;
use crate::base::Outcome;
use crate::base::Place;
use crate::base::Problem;
use crate::base::format_quantity;
use crate::order::Context;
use crate::order::FamilyKeys;
use crate::order::Order;
use crate::order::Size;
use crate::order::Source;
use crate::order::Table;
use crate::order::finish;
use crate::order::nearest;
use crate::order::parse;
use crate::order::plain_number;
use crate::order::quoted;
use crate::order::read_into;
use crate::order::write_with_degree;

/// What may be drawn: from the finest grid of a shop to the longest board.
const DRAWN: Size = Size::length(0.001, 1000.0, "1.25 mm");
/// What is only carried along: a first guess may lie off every grid, a correction is signed.
const CARRIED: Size = Size::length(-1e6, 1e6, "-0.031 mm");
/// Largest degree a file may state, so that a slip of the finger asks for no million of dimensions; families have their own limit.
const LARGEST_DEGREE: usize = 99;

/// Writes a dimension set. [`read`] gives the same set again, as long as its values lie on the shop's grid.
pub fn write(dimensions: &Dimensions) -> String {
    let mut out = write_with_degree(&dimensions.order, Some(dimensions.degree));
    out.push_str(
        "\n# The dimension set, finished size. Change a value and draw again; only \"value\" is read back, on the shop's drawing grid.\n\
         # first-guess: what the closed form gave; corrections: every step from there to the value; serves: the electrical targets.\n",
    );
    let mm = |value_m| quoted(&format_quantity(value_m, Dimensionality::Length, "mm"));
    for dimension in &dimensions.list {
        let serves: Vec<_> = dimension.serves.iter().map(|(name, v)| format!("{} = {}", quoted(name), plain_number(*v))).collect();
        let corrections: Vec<_> =
            dimension.corrections_m.iter().map(|(name, v)| format!("    {{ name = {}, by = {} }},\n", quoted(name), mm(*v))).collect();
        // Writing to a string cannot fail.
        let _ = write!(
            out,
            "\n[[dimension]]\nname = {}\nvalue = {}\nfirst-guess = {}\n",
            quoted(&dimension.name),
            mm(dimension.value_m),
            mm(dimension.first_guess_m)
        );
        if !serves.is_empty() {
            let _ = writeln!(out, "serves = {{ {} }}", serves.join(", "));
        }
        if !corrections.is_empty() {
            let _ = writeln!(out, "corrections = [\n{}]", corrections.concat());
        }
    }
    out
}

/// Whether a file is meant as a dimension set rather than an order: it has `[[dimension]]` tables.
pub fn is_dimension_file(source: &Source) -> bool {
    let context = Context::default();
    Table::root(parse(source, &context).get_ref(), &context).has("dimension")
}

/// Reads a dimension set; `expected` names the dimensions that the order's family draws from at a degree.
///
/// Values off the shop's grid are snapped, with the warning `dimension-off-grid`.
///
/// # Errors
/// Those of [`crate::order::read`], and `dimension-missing`, `dimension-doubled`, `dimension-unknown`, `size-not-positive`,
/// `out-of-range`, each with its line.
pub fn read(source: &Source, families: &[FamilyKeys], expected: &dyn Fn(&Order, usize) -> Vec<String>) -> Outcome<Dimensions> {
    let context = Context::default();
    let document = parse(source, &context);
    let root = Table::root(document.get_ref(), &context);
    let resolved = root.table("resolved");
    let degree = if root.has("resolved") {
        resolved.resolve("degree", "5", None, |t, k| t.integer(k, 1, LARGEST_DEGREE))
    } else {
        root.missing("resolved", "a table [resolved] with the degree, as `stripwright dimension` writes it");
        None
    };
    let order = read_into(&root, &resolved, source, families);
    resolved.finish();
    let there = root.has("dimension");
    let read: Vec<_> =
        root.tables("dimension").iter().filter_map(|t| one(t).map(|d| (d, t.place_of("name"), t.place_of("value")))).collect();
    root.finish();
    if !there {
        root.missing("dimension", "[[dimension]] tables, as `stripwright dimension` writes them");
    }
    // What is expected depends on a sound order; a faulty one is reported first.
    let degree = match (&order, degree) {
        (Some(order), Some(degree)) => degree_fits(order, degree, families, &resolved).then_some(degree),
        (_, degree) => degree,
    };
    let dimensions = match (order, degree) {
        (Some(order), Some(degree)) if there => {
            let names = expected(&order, degree);
            // Where one could not be read, that is reported; it is not missing as well.
            let all_read = read.len() == root.tables("dimension").len();
            let list = sort(&context, &names, read, degree, order.shop.grid_m, all_read);
            Some(Dimensions { order, degree, list })
        }
        _ => None,
    };
    finish(dimensions, context, source)
}

/// Whether the family can draw the degree, and the order asks for no other; reports where not.
fn degree_fits(order: &Order, degree: usize, families: &[FamilyKeys], resolved: &Table<'_>) -> bool {
    let (least, greatest) = families.iter().find(|f| f.name == order.filter.family).map_or((1, LARGEST_DEGREE), |f| f.degrees);
    let allowed = match order.filter.degree {
        Some(ordered) => (ordered, ordered),
        None => (least, greatest),
    };
    let fits = (allowed.0..=allowed.1).contains(&degree);
    if !fits {
        resolved.error(
            "out-of-range",
            "degree",
            format!("degree is {degree}; allowed by [filter]: {} to {}", allowed.0, allowed.1),
            "the dimensions belong to one degree; order another degree with `stripwright dimension`",
        );
    }
    fits
}

/// Reads one `[[dimension]]`.
fn one(t: &Table<'_>) -> Option<Dimension> {
    /// Longer than any name a family gives.
    const LONGEST: usize = 100;
    let name = t.resolve("name", "\"section 1 gap\"", None, |t, k| t.line(k, LONGEST));
    let value_m = t.size("value", &DRAWN, None);
    let first_guess_m = if t.has("first-guess") { t.quantity("first-guess", &CARRIED) } else { value_m };
    let mut serves = Vec::new();
    for (key, value) in t.table("serves").entries() {
        let number = value.get_ref().as_float().map(|f| f.as_str()).or(value.get_ref().as_integer().map(|i| i.as_str()));
        match number.and_then(|text| text.parse::<f64>().ok()) {
            Some(number) => serves.push((key.to_string(), number)),
            None => t.context().report(Problem::error(
                "wrong-type",
                Place::Span { key: format!("{}.serves.{key}", t.path()), span: value.span() },
                format!("\"{key}\" is no plain number"),
                "this is carried along only: put the number back, or take the line \"serves\" out",
            )),
        }
    }
    let mut corrections_m = Vec::new();
    for correction in t.tables("corrections") {
        let name = correction.resolve("name", "\"open end\"", None, |t, k| t.line(k, LONGEST));
        let by = correction.size("by", &CARRIED, None);
        correction.finish();
        corrections_m.extend(name.zip(by));
    }
    t.finish();
    Some(Dimension { name: name?, value_m: value_m?, first_guess_m: first_guess_m?, serves, corrections_m })
}

/// Puts the dimensions in drawing order and on the grid; reports what is missing, doubled or unknown.
fn sort(
    context: &Context,
    names: &[String],
    read: Vec<(Dimension, Place, Place)>,
    degree: usize,
    grid_m: f64,
    all_read: bool,
) -> Vec<Dimension> {
    let mut slots: Vec<Option<Dimension>> = names.iter().map(|_| None).collect();
    for (mut dimension, at_name, at_value) in read {
        let Some(slot) = names.iter().position(|n| *n == dimension.name).and_then(|i| slots.get_mut(i)) else {
            let help = match nearest(&dimension.name, names.iter().map(String::as_str)) {
                Some(near) => format!("did you mean \"{near}\"?"),
                None => format!("names here: {}", names.join(", ")),
            };
            let message = format!("\"{}\" is not a dimension of this family at degree {degree}", dimension.name);
            context.report(Problem::error("dimension-unknown", at_name, message, help));
            continue;
        };
        if slot.is_some() {
            let message = format!("the dimension \"{}\" stands here a second time", dimension.name);
            context.report(Problem::error("dimension-doubled", at_name, message, "keep one of the two"));
            continue;
        }
        let snapped = Nm::from_m(dimension.value_m).snapped(Nm::from_m(grid_m));
        if snapped.m() != dimension.value_m {
            let shown = |v| DRAWN.show(v);
            let message = format!(
                "{} is {}, off the drawing grid of {}; {} is drawn",
                dimension.name,
                shown(dimension.value_m),
                shown(grid_m),
                shown(snapped.m())
            );
            let help = format!("write value = \"{}\", or change shop.grid", shown(snapped.m()));
            context.report(if snapped.0 > 0 {
                Problem::warning("dimension-off-grid", at_value, message, help)
            } else {
                Problem::error("size-not-positive", at_value, message, format!("write value = \"{}\" or more", shown(grid_m)))
            });
            dimension.value_m = snapped.m();
        }
        *slot = Some(dimension);
    }
    for (name, slot) in names.iter().zip(&slots) {
        if slot.is_none() && all_read {
            context.report(Problem::error(
                "dimension-missing",
                Place::Key("dimension".to_string()),
                format!("the dimension \"{name}\" is missing; a set of degree {degree} has {} dimensions", names.len()),
                format!("add [[dimension]] with name = \"{name}\" and its value"),
            ));
        }
    }
    slots.into_iter().flatten().collect()
}
