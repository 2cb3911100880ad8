//! What went wrong, where, and what would mend it: the one type every room reports with.

use std::fmt;
use std::ops::Range;

use super::nm::Point;

/// How bad a problem is.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Severity {
    /// The result stands, but its reader must know this.
    Warning,
    /// There is no result, or it must not be used.
    Error,
}

/// Where a problem sits.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Place {
    /// A key of the file that was read, as a path: `laminate.copper.base`, `requirement[1].band`.
    Key(String),
    /// A stretch of the file's text in bytes, with the key it belongs to (empty when none).
    Span {
        /// The key path, or empty.
        key: String,
        /// Byte range in the file's text.
        span: Range<usize>,
    },
    /// A named dimension of the set.
    Dimension(String),
    /// A point of the board.
    Board(Point),
    /// The whole order, layout, board or package.
    Whole,
}

/// One problem: what is, what is allowed, and how to mend it.
#[derive(Clone, Debug, PartialEq)]
pub struct Problem {
    /// Names the thing found, never the advice: `unit-missing`, `gap-below-minimum`.
    pub code: &'static str,
    /// How bad it is.
    pub severity: Severity,
    /// Where it sits.
    pub place: Place,
    /// What was found and what is allowed, both with units.
    pub message: String,
    /// The key to change and a value that would work.
    pub help: String,
    /// The source of the limit, or "common practice"; empty for plain input faults.
    pub source: &'static str,
}

impl Problem {
    /// An error at a place.
    pub fn error(code: &'static str, place: Place, message: impl Into<String>, help: impl Into<String>) -> Problem {
        Problem { code, severity: Severity::Error, place, message: message.into(), help: help.into(), source: "" }
    }

    /// A warning at a place.
    pub fn warning(code: &'static str, place: Place, message: impl Into<String>, help: impl Into<String>) -> Problem {
        Problem { severity: Severity::Warning, ..Problem::error(code, place, message, help) }
    }

    /// The same problem with the source of its limit.
    pub fn with_source(mut self, source: &'static str) -> Problem {
        self.source = source;
        self
    }

    /// Whether this problem is an error.
    pub fn is_error(&self) -> bool {
        self.severity == Severity::Error
    }
}

impl fmt::Display for Problem {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let kind = match self.severity {
            Severity::Error => "error",
            Severity::Warning => "warning",
        };
        write!(f, "{kind}[{}]", self.code)?;
        match &self.place {
            Place::Key(key) => write!(f, " {key}")?,
            Place::Span { key, .. } if !key.is_empty() => write!(f, " {key}")?,
            Place::Dimension(name) => write!(f, " {name}")?,
            Place::Board(p) => write!(f, " at ({:.3}, {:.3}) mm", p.x.mm(), p.y.mm())?,
            Place::Span { .. } | Place::Whole => {}
        }
        write!(f, ": {}", self.message)?;
        if !self.help.is_empty() {
            write!(f, "; {}", self.help)?;
        }
        if !self.source.is_empty() {
            write!(f, " ({})", self.source)?;
        }
        Ok(())
    }
}

/// A value with its warnings, or all errors (and warnings) of the stage.
pub type Outcome<T> = Result<(T, Vec<Problem>), Vec<Problem>>;
