//! Reading what a command is pointed at: an order, or a dimension set.

use std::path::Path;

use super::Ending;
use super::Voice;
use super::problems;
use crate::base::Place;
use crate::base::Problem;
use crate::dimensions;
use crate::dimensions::Dimensions;
use crate::family;
use crate::order;
use crate::order::Order;
use crate::order::Source;

/// An order with the text it came from.
pub struct Ordered {
    /// The text, for showing where a problem sits.
    pub source: Source,
    /// The order.
    pub order: Order,
}

impl Ordered {
    /// Opens and reads an order; problems are printed.
    pub fn open(path: &Path, voice: Voice) -> Result<Ordered, Ending> {
        let source = open_source(path, voice)?;
        if dimensions::is_dimension_file(&source) {
            let message = format!("{} is a dimension set, an order is wanted here", path.display());
            return Err(refuse(
                &[Problem::error("file-of-another-kind", Place::Whole, message, "`stripwright draw` makes the package of a dimension set")],
                None,
                voice,
            ));
        }
        let (order, warnings) = order::read(&source, &family::keys()).map_err(|found| refuse(&found, Some(&source), voice))?;
        problems::print(&warnings, Some(&source), voice);
        Ok(Ordered { source, order })
    }

    /// Prints problems against the order's text; nothing was made.
    pub fn refuse(&self, found: &[Problem], voice: Voice) -> Ending {
        refuse(found, Some(&self.source), voice)
    }
}

/// A dimension set with the text it came from: read from a file, or synthesized from an order.
pub struct Drawing {
    /// The text.
    pub source: Source,
    /// The set.
    pub dimensions: Dimensions,
}

impl Drawing {
    /// Opens an order (and synthesizes it) or a dimension set, whichever the file is; problems are printed.
    pub fn open(path: &Path, voice: Voice) -> Result<Drawing, Ending> {
        let source = open_source(path, voice)?;
        if dimensions::is_dimension_file(&source) {
            return Drawing::read(source, voice);
        }
        let ordered = Ordered::open(path, voice)?;
        let chosen = crate::dimension(&ordered.order).map_err(|found| ordered.refuse(&found, voice))?;
        Ok(Drawing { source: ordered.source, dimensions: chosen.refined.dimensions })
    }

    /// Opens a dimension set; problems are printed.
    pub fn open_set(path: &Path, voice: Voice) -> Result<Drawing, Ending> {
        let source = open_source(path, voice)?;
        if !dimensions::is_dimension_file(&source) {
            let message = format!("{} is no dimension set: it has no [[dimension]]", path.display());
            return Err(refuse(
                &[Problem::error("file-of-another-kind", Place::Whole, message, "`stripwright make` makes the package of an order")],
                None,
                voice,
            ));
        }
        Drawing::read(source, voice)
    }

    fn read(source: Source, voice: Voice) -> Result<Drawing, Ending> {
        let names = |order: &Order, degree: usize| family::of(order).map_or_else(|_| Vec::new(), |family| family.names(order, degree));
        let (dimensions, warnings) =
            dimensions::read(&source, &family::keys(), &names).map_err(|found| refuse(&found, Some(&source), voice))?;
        problems::print(&warnings, Some(&source), voice);
        Ok(Drawing { source, dimensions })
    }

    /// Prints problems against the text; nothing was made.
    pub fn refuse(&self, found: &[Problem], voice: Voice) -> Ending {
        refuse(found, Some(&self.source), voice)
    }
}

fn open_source(path: &Path, voice: Voice) -> Result<Source, Ending> {
    Source::open(path).map_err(|found| refuse(&found, None, voice))
}

/// Prints problems; nothing was made.
pub fn refuse(found: &[Problem], source: Option<&Source>, voice: Voice) -> Ending {
    problems::print(found, source, voice);
    Ending::NothingMade
}
