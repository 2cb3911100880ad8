//! What reading one file gathers: its mistakes, and which values were resolved rather than written.

use std::cell::{Cell, RefCell};

use toml::Spanned;
use toml::de::DeTable;

use super::source::Source;
use crate::base::Place;
use crate::base::Problem;

/// A file with more problems than this is no order; reporting goes on no further.
pub const MOST_PROBLEMS: usize = 500;

/// Collects the mistakes and the resolved defaults of one file.
#[derive(Debug, Default)]
pub struct Context {
    problems: RefCell<Vec<Problem>>,
    /// The file carries every value itself.
    complete: Cell<bool>,
    /// Key paths that the file itself lists as resolved.
    listed: RefCell<Vec<String>>,
    /// Key paths resolved by this run or listed and met.
    resolved: RefCell<Vec<String>>,
    /// Listed key paths that belong to a key that can be resolved.
    met: RefCell<Vec<String>>,
}

impl Context {
    /// Reports a problem; after [`MOST_PROBLEMS`] the rest of the file is no longer worth reading out.
    pub fn report(&self, problem: Problem) {
        let mut problems = self.problems.borrow_mut();
        if problems.len() < MOST_PROBLEMS {
            problems.push(problem);
        }
    }

    /// Takes a problem back that turned out to follow from another one.
    pub(super) fn retract(&self, code: &str, path: &str) {
        self.problems.borrow_mut().retain(|p| p.code != code || !matches!(&p.place, Place::Span { key, .. } if key == path));
    }

    /// Notes that a key can be resolved.
    pub fn meet(&self, path: &str) {
        if self.is_listed(path) {
            self.met.borrow_mut().push(path.to_string());
        }
    }

    /// What the file lists as resolved although nobody could resolve it.
    pub fn listed_but_never_met(&self) -> Vec<String> {
        let met = self.met.borrow();
        self.listed.borrow().iter().filter(|p| !met.contains(p)).cloned().collect()
    }

    /// The file has a table `[resolved]`, so it carries every value itself.
    pub fn set_complete(&self) {
        self.complete.set(true);
    }

    /// Whether the file carries every value itself.
    pub fn is_complete(&self) -> bool {
        self.complete.get()
    }

    /// Takes the list `[resolved] defaults` of the file.
    pub fn set_listed(&self, listed: Vec<String>) {
        *self.listed.borrow_mut() = listed;
    }

    /// Whether the file lists this key as resolved.
    pub fn is_listed(&self, path: &str) -> bool {
        self.listed.borrow().iter().any(|p| p == path)
    }

    /// Records that a key was resolved.
    pub fn record(&self, path: &str) {
        let mut resolved = self.resolved.borrow_mut();
        if !resolved.iter().any(|p| p == path) {
            resolved.push(path.to_string());
        }
    }

    /// The resolved key paths, in reading order.
    pub fn resolved(&self) -> Vec<String> {
        self.resolved.borrow().clone()
    }

    /// Whether an error was reported.
    pub fn has_errors(&self) -> bool {
        self.problems.borrow().iter().any(Problem::is_error)
    }

    /// The problems, in file order, without those that only follow from broken notation.
    pub fn into_problems(self, source: &Source) -> Vec<Problem> {
        let mut problems = self.problems.into_inner();
        let line = |p: &Problem| source.span_of(&p.place).map_or(0, |s| source.line_and_column(s.start).0);
        let broken: Vec<usize> = problems.iter().filter(|p| p.code == "not-toml").map(line).collect();
        if !broken.is_empty() {
            problems.retain(|p| p.code == "not-toml" || (p.code != "key-missing" && !broken.contains(&line(p))));
        }
        problems.sort_by_key(|p| source.span_of(&p.place).map_or(0, |s| s.start));
        problems.dedup();
        problems
    }
}

/// Parses a file; mistakes of the notation go to `context`, what could be read is returned.
pub fn parse<'a>(source: &'a Source, context: &Context) -> Spanned<DeTable<'a>> {
    let (table, errors) = DeTable::parse_recoverable(&source.text);
    for error in errors {
        let span = error.span().unwrap_or(0..0);
        let found = source.text.get(span.clone()).unwrap_or("").trim();
        let place = Place::Span { key: String::new(), span };
        context.report(if error.message() == "duplicate key" {
            let key = found.trim_matches(['[', ']']);
            Problem::error(
                "key-doubled",
                place,
                format!("\"{key}\" stands twice in the same table; each key is allowed once"),
                "keep one of the two",
            )
        } else {
            Problem::error(
                "not-toml",
                place,
                format!("not TOML here: {}", error.message()),
                "write `key = \"value unit\"`, one key a line, under a [table] heading",
            )
        });
    }
    table
}
