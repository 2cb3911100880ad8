//! The keys of a family's own, as numbers, flags and words.

use crate::order::Key;
use crate::order::Order;
use crate::order::OwnKind;
use crate::order::OwnValue;

/// A quantity in SI; the order room has already put in the default.
pub fn number(order: &Order, keys: &[Key], name: &str) -> f64 {
    match order.filter.own.get(name) {
        Some(OwnValue::Number(value, _)) => *value,
        _ => keys
            .iter()
            .find(|key| key.name == name)
            .and_then(|key| match (key.kind, key.default) {
                (OwnKind::Quantity(kind), Some(text)) => crate::base::parse_quantity(text, kind).ok(),
                _ => None,
            })
            .unwrap_or(f64::NAN),
    }
}

/// A word; the default where the order has none.
pub fn word<'a>(order: &'a Order, keys: &[Key], name: &str) -> &'a str {
    match order.filter.own.get(name) {
        Some(OwnValue::Word(word)) => word,
        _ => keys.iter().find(|key| key.name == name).and_then(|key| key.default).unwrap_or_default(),
    }
}
