//! `stripwright list`: what is known, one line each.

use clap::{Args, ValueEnum};
use serde_json::{Map, Value, json};

use super::{Ending, Voice, results};
use crate::base::Dimensionality;
use crate::base::format_quantity;
use crate::checks::RULES;
use crate::family;
use crate::order::Classes;
use crate::order::LaunchShape;
use crate::order::Passes;

/// What can be listed.
#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
pub enum Kind {
    /// Filter families.
    Families,
    /// Laminate classes.
    Laminates,
    /// Board-house classes.
    Shops,
    /// Launch classes.
    Launches,
    /// Design rules.
    Rules,
}

/// Lists what is known, one line each; as JSON an array of objects with `name`.
#[derive(Args, Debug)]
pub struct List {
    /// What to list.
    kind: Kind,
}

/// Runs the command.
pub fn run(arguments: &List, voice: Voice) -> Ending {
    let lines = lines(arguments.kind);
    if voice.json {
        let objects: Vec<_> = lines.into_iter().map(|l| Value::Object(l.json())).collect();
        return results(&format!("{:#}\n", Value::Array(objects)));
    }
    let widest = lines.iter().map(|l| l.name.chars().count()).max().unwrap_or(0);
    let text: String = lines.iter().map(|l| format!("{:widest$}  {}\n", l.name, l.text)).collect();
    results(&text)
}

/// One line: the name, the text for people, and figures for programs.
struct Line {
    name: String,
    text: String,
    figures: Vec<(&'static str, Value)>,
}

impl Line {
    fn json(self) -> Map<String, Value> {
        let mut object = Map::new();
        object.insert("name".to_string(), json!(self.name));
        for (key, value) in self.figures {
            object.insert(key.to_string(), value);
        }
        object
    }
}

/// The lines of a kind.
fn lines(kind: Kind) -> Vec<Line> {
    let classes = Classes::embedded();
    let mm = |value_m| format_quantity(value_m, Dimensionality::Length, "mm");
    let ghz = |value_hz| format_quantity(value_hz, Dimensionality::Frequency, "GHz");
    match kind {
        Kind::Families => family::keys()
            .iter()
            .map(|family| {
                let passes = match family.passes {
                    Passes::Low => "low-pass",
                    Passes::High => "high-pass",
                    Passes::Band => "band-pass",
                    Passes::Stop => "band-stop",
                };
                Line {
                    name: family.name.to_string(),
                    text: format!("{passes}, degree {} to {}", family.degrees.0, family.degrees.1),
                    figures: vec![("passes", json!(passes)), ("degrees", json!([family.degrees.0, family.degrees.1]))],
                }
            })
            .collect(),
        Kind::Laminates => classes
            .laminates
            .iter()
            .map(|class| {
                let laminate = &class.laminate;
                let usual: Vec<_> = class.thicknesses_m.iter().map(|&t| mm(t)).collect();
                Line {
                    name: laminate.class.clone(),
                    text: format!(
                        "permittivity {} +- {}, tan d {} at {}; {}; {}",
                        laminate.permittivity,
                        laminate.permittivity_tolerance,
                        laminate.loss_tangent,
                        ghz(class.loss_tangent_at_hz),
                        usual.join(", "),
                        laminate.about
                    ),
                    figures: vec![
                        ("about", json!(laminate.about)),
                        ("permittivity", json!(laminate.permittivity)),
                        ("permittivity-tolerance", json!(laminate.permittivity_tolerance)),
                        ("loss-tangent", json!(laminate.loss_tangent)),
                        ("loss-tangent-at", json!(ghz(class.loss_tangent_at_hz))),
                        ("thicknesses", json!(usual)),
                    ],
                }
            })
            .collect(),
        Kind::Shops => classes
            .shops
            .iter()
            .map(|shop| Line {
                name: shop.class.clone(),
                text: format!("line {}, gap {}, hole {}; {}", mm(shop.line_m), mm(shop.gap_m), mm(shop.hole_m), shop.about),
                figures: vec![
                    ("about", json!(shop.about)),
                    ("line", json!(mm(shop.line_m))),
                    ("gap", json!(mm(shop.gap_m))),
                    ("hole", json!(mm(shop.hole_m))),
                    ("grid", json!(mm(shop.grid_m))),
                    ("line-tolerance", json!(mm(shop.line_tolerance_m))),
                ],
            })
            .collect(),
        Kind::Launches => classes
            .launches
            .iter()
            .map(|launch| {
                let mut figures = vec![("about", json!(launch.about))];
                if let LaunchShape::EdgeCoax { board_thickness_m: [least, greatest], up_to_hz, .. } = launch.shape {
                    figures.push(("board-thickness", json!([mm(least), mm(greatest)])));
                    figures.push(("up-to", json!(ghz(up_to_hz))));
                }
                Line { name: launch.class.clone(), text: launch.about.clone(), figures }
            })
            .collect(),
        Kind::Rules => RULES
            .iter()
            .map(|rule| Line {
                name: rule.code.to_string(),
                text: format!("{} ({})", rule.about, rule.source),
                figures: vec![("about", json!(rule.about)), ("source", json!(rule.source))],
            })
            .collect(),
    }
}
