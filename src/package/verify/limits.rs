//! What does the package's own order say of the board house and of the board?

use crate::base::Dimensionality;
use crate::base::parse_quantity;

/// What the checks need of `order.toml`, SI.
#[derive(Clone, Debug, Default)]
pub(super) struct Limits {
    /// Narrowest line.
    pub line_m: Option<f64>,
    /// Narrowest gap.
    pub gap_m: Option<f64>,
    /// Least ring around a plated hole.
    pub ring_m: Option<f64>,
    /// Least hole.
    pub hole_m: Option<f64>,
    /// Least wall between holes.
    pub hole_to_hole_m: Option<f64>,
    /// Plus or minus on the board's thickness.
    pub thickness_tolerance_m: Option<f64>,
    /// Whether the board has an edge of its own.
    pub outline: bool,
    /// Revision.
    pub revision: Option<String>,
}

impl Limits {
    /// From the order as a table; the error says what is missing or wrong.
    pub fn of(table: &toml::Table) -> Result<Limits, String> {
        let text = |room: &str, key: &str| {
            let value = table.get(room).and_then(|room| room.get(key)).and_then(|value| value.as_str());
            value.ok_or_else(|| format!("{room}.{key} is missing"))
        };
        let length = |room: &str, key: &str| {
            parse_quantity(text(room, key)?, Dimensionality::Length).map(Some).map_err(|what| format!("{room}.{key}: {what}"))
        };
        Ok(Limits {
            line_m: length("shop", "line")?,
            gap_m: length("shop", "gap")?,
            ring_m: length("shop", "annular-ring")?,
            hole_m: length("shop", "hole")?,
            hole_to_hole_m: length("shop", "hole-to-hole")?,
            thickness_tolerance_m: length("board", "thickness-tolerance")?,
            outline: text("board", "outline")? != "none",
            revision: Some(text("order", "revision")?.to_string()),
        })
    }
}
