//! How problems are shown: for people on stderr, and as JSON objects.

use std::fmt;
use std::io::{IsTerminal, Write};

use miette::{Diagnostic, GraphicalReportHandler, GraphicalTheme, LabeledSpan, NamedSource, Severity as Level, SourceCode};
use serde_json::{Value, json};

use super::Voice;
use crate::base::Place;
use crate::base::Problem;
use crate::base::Severity;
use crate::order::Source;

/// Width of the report on a terminal; elsewhere lines are not broken, so that they can be searched.
const TERMINAL_WIDTH: usize = 120;
/// More problems than this on a screen help nobody; the rest is counted.
const MOST_SHOWN: usize = 60;

/// Prints problems to stderr: errors always, warnings unless quiet; as one JSON object a line when the voice says so.
pub fn print(problems: &[Problem], source: Option<&Source>, voice: Voice) {
    let mut out = std::io::stderr().lock();
    let terminal = out.is_terminal();
    let shown: Vec<&Problem> = problems.iter().filter(|p| p.is_error() || !voice.quiet).collect();
    for problem in shown.iter().take(MOST_SHOWN) {
        let text = if voice.json { to_json(problem, source).to_string() + "\n" } else { render(problem, source, terminal) };
        // When stderr is gone there is nobody left to tell.
        let _ = out.write_all(text.as_bytes());
    }
    if let Some(more) = shown.len().checked_sub(MOST_SHOWN).filter(|&more| more > 0) {
        let _ = writeln!(out, "and {more} more problems");
    }
}

/// One problem as text: file, line and column, key, what was found and what is allowed, help, source of the limit.
pub fn render(problem: &Problem, source: Option<&Source>, terminal: bool) -> String {
    let colour = terminal && std::env::var_os("NO_COLOR").is_none_or(|v| v.is_empty());
    let theme = if colour { GraphicalTheme::unicode() } else { GraphicalTheme::unicode_nocolor() };
    let handler = GraphicalReportHandler::new_themed(theme)
        .with_links(false)
        .with_width(TERMINAL_WIDTH)
        .with_wrap_lines(terminal)
        .with_context_lines(1);
    let mut text = String::new();
    match handler.render_report(&mut text, &Shown::new(problem, source)) {
        Ok(()) => text + "\n",
        Err(fmt::Error) => format!("{problem}\n"),
    }
}

/// One problem as a JSON object.
pub fn to_json(problem: &Problem, source: Option<&Source>) -> Value {
    let mut object = json!({
        "code": problem.code,
        "severity": if problem.is_error() { "error" } else { "warning" },
    });
    let mut put = |key: &str, value: Value| {
        if let Some(map) = object.as_object_mut() {
            map.insert(key.to_string(), value);
        }
    };
    if let Some(source) = source {
        put("file", json!(source.path.display().to_string()));
        if let Some(span) = source.span_of(&problem.place) {
            let (line, column) = source.line_and_column(span.start);
            put("line", json!(line));
            put("column", json!(column));
        }
    }
    match &problem.place {
        Place::Key(key) | Place::Span { key, .. } if !key.is_empty() => put("key", json!(key)),
        Place::Dimension(name) => put("dimension", json!(name)),
        Place::Board(at) => put("at-mm", json!([at.x.mm(), at.y.mm()])),
        Place::Key(_) | Place::Span { .. } | Place::Whole => {}
    }
    put("message", json!(problem.message));
    if !problem.help.is_empty() {
        put("help", json!(problem.help));
    }
    if !problem.source.is_empty() {
        put("source", json!(problem.source));
    }
    object
}

/// A problem as the report printer wants it.
#[derive(Debug)]
struct Shown<'a> {
    problem: &'a Problem,
    message: String,
    source: Option<NamedSource<String>>,
    label: Option<LabeledSpan>,
}

impl<'a> Shown<'a> {
    fn new(problem: &'a Problem, source: Option<&Source>) -> Shown<'a> {
        let span = source.and_then(|s| s.span_of(&problem.place));
        let (key, message) = match &problem.place {
            Place::Key(key) | Place::Span { key, .. } | Place::Dimension(key) if !key.is_empty() => {
                (key.clone(), format!("{key}: {}", problem.message))
            }
            Place::Board(at) => (String::new(), format!("at ({:.3}, {:.3}) mm: {}", at.x.mm(), at.y.mm(), problem.message)),
            _ => ("here".to_string(), problem.message.clone()),
        };
        let label = span.map(|span| {
            // A value over several lines (a table, a long list) is pointed at by its first line.
            let text = source.map_or("", |s| s.text.as_str()).get(span.clone()).unwrap_or("");
            let length = text.find('\n').unwrap_or(text.len());
            LabeledSpan::new_primary_with_span(Some(key), (span.start, length))
        });
        let source = label.is_some().then(|| source.map(|s| NamedSource::new(s.path.display().to_string(), s.text.clone()))).flatten();
        Shown { problem, message, source, label }
    }
}

impl fmt::Display for Shown<'_> {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(&self.message)
    }
}

impl std::error::Error for Shown<'_> {}

impl Diagnostic for Shown<'_> {
    fn code<'a>(&'a self) -> Option<Box<dyn fmt::Display + 'a>> {
        let kind = if self.problem.is_error() { "error" } else { "warning" };
        Some(Box::new(format!("{kind}: {}", self.problem.code)))
    }

    fn severity(&self) -> Option<Level> {
        Some(match self.problem.severity {
            Severity::Error => Level::Error,
            Severity::Warning => Level::Warning,
        })
    }

    fn help<'a>(&'a self) -> Option<Box<dyn fmt::Display + 'a>> {
        let source = if self.problem.source.is_empty() { String::new() } else { format!("\nsource: {}", self.problem.source) };
        let text = format!("{}{source}", self.problem.help);
        (!text.is_empty()).then(|| Box::new(text) as Box<dyn fmt::Display>)
    }

    fn source_code(&self) -> Option<&dyn SourceCode> {
        self.source.as_ref().map(|s| s as &dyn SourceCode)
    }

    fn labels(&self) -> Option<Box<dyn Iterator<Item = LabeledSpan> + '_>> {
        self.label.clone().map(|l| Box::new(std::iter::once(l)) as Box<dyn Iterator<Item = LabeledSpan>>)
    }
}
