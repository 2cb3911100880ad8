//! Which text was read, and where in it does each key stand?

use std::collections::BTreeMap;
use std::fs::File;
use std::io::Read;
use std::ops::Range;
use std::path::{Path, PathBuf};

use toml::de::{DeTable, DeValue};

use crate::base::Place;
use crate::base::Problem;

/// Largest file that is read, bytes: a hundred times the longest order, and small enough to refuse a wrong file at once.
pub const LARGEST_FILE: u64 = 4 << 20;

/// A file that was read, with the place of every key in it.
#[derive(Clone, Debug, PartialEq)]
pub struct Source {
    /// As named by the user; relative files named inside are looked for beside it.
    pub path: PathBuf,
    /// Its text.
    pub text: String,
    /// Key path (`laminate.copper.base`, `requirement[1].band`, counted from 1) to the bytes of key and value.
    spans: BTreeMap<String, Range<usize>>,
}

impl Source {
    /// Reads a TOML file.
    ///
    /// # Errors
    /// One problem: `file-missing`, `file-unreadable`, `file-is-a-folder`, `file-too-large`, `file-empty`, `file-binary`, `file-not-utf8`.
    pub fn open(path: &Path) -> Result<Source, Vec<Problem>> {
        let shown = path.display();
        let refuse = |code, message: String, help: &str| vec![Problem::error(code, Place::Whole, message, help)];
        let unreadable = |error: std::io::Error| match error.kind() {
            std::io::ErrorKind::NotFound => refuse(
                "file-missing",
                format!("{shown}: there is no such file"),
                "check the path; `stripwright new edge-coupled FILE` writes a starter order",
            ),
            kind => refuse("file-unreadable", format!("{shown}: cannot be read: {kind}"), "check the permissions of file and folder"),
        };
        let too_large = || {
            refuse(
                "file-too-large",
                format!("{shown}: larger than {} MiB; an order is a few kilobytes of text", LARGEST_FILE >> 20),
                "name the order file itself (TOML text)",
            )
        };
        let about = std::fs::metadata(path).map_err(unreadable)?;
        if about.is_dir() {
            return Err(refuse(
                "file-is-a-folder",
                format!("{shown}: is a folder, a file is due"),
                "name the file in it, for example its order.toml",
            ));
        }
        if about.len() > LARGEST_FILE {
            return Err(too_large());
        }
        let mut bytes = Vec::new();
        // Pipes and devices have no length beforehand: one byte more than allowed tells that they are too long.
        File::open(path).and_then(|f| f.take(LARGEST_FILE + 1).read_to_end(&mut bytes)).map_err(unreadable)?;
        if bytes.len() as u64 > LARGEST_FILE {
            return Err(too_large());
        }
        if let Some(at) = bytes.iter().position(|&b| b == 0) {
            return Err(refuse(
                "file-binary",
                format!("{shown}:{}: holds a zero byte, so it is no text", line_of(&bytes, at)),
                "name a TOML text file",
            ));
        }
        let text = String::from_utf8(bytes).map_err(|error| {
            let at = error.utf8_error().valid_up_to();
            let byte = error.as_bytes().get(at).copied().unwrap_or(0);
            refuse(
                "file-not-utf8",
                format!("{shown}:{}: byte 0x{byte:02x} is not UTF-8 text", line_of(error.as_bytes(), at)),
                "save the file in the encoding UTF-8",
            )
        })?;
        if text.trim_start_matches('\u{feff}').trim().is_empty() {
            return Err(refuse("file-empty", format!("{shown}: is empty"), "`stripwright new edge-coupled FILE` writes a starter order"));
        }
        Ok(Source::from_text(path, text))
    }

    /// A source from text that is already at hand; `path` is what messages name.
    pub fn from_text(path: impl Into<PathBuf>, text: impl Into<String>) -> Source {
        let text = text.into();
        let mut spans = BTreeMap::new();
        // Mistakes are reported by whoever reads the values; here only the places count.
        collect(DeTable::parse_recoverable(&text).0.get_ref(), "", &mut spans);
        Source { path: path.into(), text, spans }
    }

    /// The bytes a place stands for: the key's own, else those of the nearest enclosing key; `None` for what is in no file.
    pub fn span_of(&self, place: &Place) -> Option<Range<usize>> {
        let mut key = match place {
            Place::Key(key) => key.as_str(),
            Place::Span { span, .. } => {
                let end = span.end.min(self.text.len());
                return Some(span.start.min(end)..end);
            }
            Place::Dimension(name) => return self.spans.get(&format!("dimension \"{name}\"")).cloned(),
            Place::Board(_) | Place::Whole => return None,
        };
        loop {
            if let Some(span) = self.spans.get(key) {
                return Some(span.clone());
            }
            key = &key[..key.rfind(['.', '['])?];
        }
    }

    /// Line and column of a byte, both counted from 1, the column in characters.
    pub fn line_and_column(&self, at: usize) -> (usize, usize) {
        let mut at = at.min(self.text.len());
        while !self.text.is_char_boundary(at) {
            at -= 1;
        }
        let before = &self.text[..at];
        let start = before.rfind('\n').map_or(0, |i| i + 1);
        (before.matches('\n').count() + 1, before[start..].chars().count() + 1)
    }

    /// The file's name, line and column of a problem, and its key: `order.toml:12:7 laminate.thickness`.
    pub fn locate(&self, problem: &Problem) -> String {
        let key = match &problem.place {
            Place::Key(key) | Place::Span { key, .. } | Place::Dimension(key) => key.as_str(),
            Place::Board(_) | Place::Whole => "",
        };
        let mut text = self.path.display().to_string();
        if let Some(span) = self.span_of(&problem.place) {
            let (line, column) = self.line_and_column(span.start);
            text += &format!(":{line}:{column}");
        }
        if !key.is_empty() {
            text += &format!(" {key}");
        }
        text
    }
}

/// Line of a byte, counted from 1.
fn line_of(bytes: &[u8], at: usize) -> usize {
    bytes.iter().take(at).filter(|&&b| b == b'\n').count() + 1
}

/// Remembers where each key of a table stands.
fn collect(table: &DeTable<'_>, path: &str, spans: &mut BTreeMap<String, Range<usize>>) {
    for (key, value) in table {
        let path = join(path, key.get_ref());
        spans.insert(path.clone(), value.span());
        match value.get_ref() {
            DeValue::Table(inner) => collect(inner, &path, spans),
            DeValue::Array(list) => {
                for (i, item) in list.iter().enumerate() {
                    let path = format!("{path}[{}]", i + 1);
                    spans.insert(path.clone(), item.span());
                    if let DeValue::Table(inner) = item.get_ref() {
                        collect(inner, &path, spans);
                        // A dimension is known by its name everywhere else.
                        if let (true, Some(name)) = (path.starts_with("dimension["), inner.get("name").and_then(|n| n.get_ref().as_str())) {
                            spans.insert(format!("dimension \"{name}\""), inner.get("value").map_or(item.span(), |v| v.span()));
                        }
                    }
                }
            }
            _ => {}
        }
    }
}

/// The path of a key inside a table.
pub(super) fn join(path: &str, key: &str) -> String {
    if path.is_empty() { key.to_string() } else { format!("{path}.{key}") }
}
