//! From a filter requirement, a laminate and a board house's limits to a printed microwave filter.
//!
//! The rooms, in flow order:
//!
//! order -> prototype -> dimensions -> layout -> network -> refine -> artwork -> checks -> package
//!
//! | room | answers |
//! |---|---|
//! | [`base`] | problems, quantities with units, whole nanometres, root finding, small dense elimination |
//! | [`order`] | what is wanted; laminate, shop and launch classes |
//! | [`prototype`] | g-values and degree |
//! | [`mod@line`] | one strip, coupled strips, discontinuities as built |
//! | [`dimensions`] | the dimension set and its file |
//! | [`layout`] | parts, nodes, placing and joining |
//! | [`family`] | requirement -> prototype -> dimensions -> layout, one file each |
//! | [`network`] | layout + as-built -> S-parameters, figures, Touchstone |
//! | [`artwork`] | layout -> board |
//! | [`refine`] | from response back to dimensions |
//! | [`checks`] | design rules and microwave sense |
//! | [`package`] | every output file |
//! | [`cli`] | arguments, printing, progress; one file per command |

pub mod artwork;
pub mod base;
pub mod checks;
pub mod cli;
pub mod dimensions;
pub mod family;
pub mod layout;
pub mod line;
pub mod network;
pub mod order;
pub mod package;
pub mod prototype;
pub mod refine;
