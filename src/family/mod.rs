//! Requirement to prototype to dimensions to layout, one family a file.

use crate::order::FamilyKeys;
use crate::order::Passes;

/// What the order room must know of each family.
pub static FAMILY_KEYS: &[FamilyKeys] = &[FamilyKeys { name: "edge-coupled", passes: Passes::Band, degrees: (1, 12), keys: &[] }];
