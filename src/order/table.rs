//! Typed reading of TOML tables that goes on after a mistake, so that one run finds them all.

use std::cell::RefCell;
use std::ops::Range;
use std::sync::LazyLock;

use toml::Spanned;
use toml::de::{DeTable, DeValue};

use super::context::Context;
use super::source::join;
use crate::base::Dimensionality;
use crate::base::Place;
use crate::base::Problem;
use crate::base::format_quantity;
use crate::base::parse_quantity;

/// Stands in for a table that was left out.
static EMPTY: LazyLock<DeTable<'static>> = LazyLock::new(DeTable::new);

/// What a quantity may be.
#[derive(Clone, Copy, Debug)]
pub struct Size {
    /// What it measures.
    pub kind: Dimensionality,
    /// Unit of messages and written files.
    pub unit: &'static str,
    /// Least value allowed, SI.
    pub least: f64,
    /// Greatest value allowed, SI.
    pub greatest: f64,
    /// A value that works, with its unit.
    pub usual: &'static str,
}

impl Size {
    /// A length from `least_mm` to `greatest_mm`.
    pub const fn length(least_mm: f64, greatest_mm: f64, usual: &'static str) -> Size {
        Size { kind: Dimensionality::Length, unit: "mm", least: least_mm / 1e3, greatest: greatest_mm / 1e3, usual }
    }

    /// A value as text with unit.
    pub fn show(&self, value: f64) -> String {
        format_quantity(value, self.kind, self.unit)
    }
}

/// A table being read.
pub struct Table<'a> {
    entries: &'a DeTable<'a>,
    path: String,
    span: Range<usize>,
    context: &'a Context,
    known: RefCell<Vec<&'static str>>,
    /// Stands in for a value of another type, which was reported: its keys are not missing.
    stands_in: bool,
}

impl<'a> Table<'a> {
    /// The whole file.
    pub fn root(entries: &'a DeTable<'a>, context: &'a Context) -> Table<'a> {
        Table::at(entries, String::new(), 0..0, context)
    }

    /// A table at a path.
    fn at(entries: &'a DeTable<'a>, path: String, span: Range<usize>, context: &'a Context) -> Table<'a> {
        Table { entries, path, span, context, known: RefCell::default(), stands_in: false }
    }

    /// Path of the table.
    pub fn path(&self) -> &str {
        &self.path
    }

    /// Where the table's heading stands.
    pub fn place(&self) -> Place {
        Place::Span { key: self.path.clone(), span: self.span.clone() }
    }

    /// Path of one of its keys.
    pub fn path_of(&self, key: &str) -> String {
        join(&self.path, key)
    }

    /// Where a key's value stands, or the table's heading when the key is missing.
    pub fn place_of(&self, key: &str) -> Place {
        let span = self.entries.get(key).map_or(self.span.clone(), Spanned::span);
        Place::Span { key: self.path_of(key), span }
    }

    /// The mistakes and defaults of the file.
    pub fn context(&self) -> &'a Context {
        self.context
    }

    /// Whether the key is there; either way it is a known one from now on.
    pub fn has(&self, key: &'static str) -> bool {
        self.get(key).is_some()
    }

    /// The value, if the key is there; either way it is a known one from now on.
    fn get(&self, key: &'static str) -> Option<&'a Spanned<DeValue<'a>>> {
        if !self.known.borrow().contains(&key) {
            self.known.borrow_mut().push(key);
        }
        self.entries.get(key)
    }

    /// All entries as they stand, for tables whose keys are free.
    pub fn entries(&self) -> impl Iterator<Item = (&'a str, &'a Spanned<DeValue<'a>>)> + use<'a> {
        self.entries.iter().map(|(key, value)| (key.get_ref().as_ref(), value))
    }

    /// Reports an error at a key.
    pub fn error(&self, code: &'static str, key: &str, message: impl Into<String>, help: impl Into<String>) {
        self.context.report(Problem::error(code, self.place_of(key), message, help));
    }

    /// Reports a warning at a key.
    pub fn warning(&self, code: &'static str, key: &str, message: impl Into<String>, help: impl Into<String>) {
        self.context.report(Problem::warning(code, self.place_of(key), message, help));
    }

    /// Reports that a key is missing; `example` is the value as it would be written.
    pub fn missing(&self, key: &str, example: &str) {
        if self.stands_in {
            return;
        }
        let table = if self.path.is_empty() { "the file".to_string() } else { format!("[{}]", self.path) };
        let place = Place::Span { key: self.path_of(key), span: self.span.clone() };
        self.context.report(Problem::error(
            "key-missing",
            place,
            format!("{table} has no key \"{key}\", which has no default"),
            format!("add, for example, {key} = {example}"),
        ));
    }

    /// The value of a key by `read`, or `default` (recorded as such), or a report that it is missing.
    pub fn resolve<T: PartialEq>(
        &self,
        key: &'static str,
        example: &str,
        default: Option<T>,
        read: impl FnOnce(&Table<'a>, &'static str) -> Option<T>,
    ) -> Option<T> {
        let path = self.path_of(key);
        self.context.meet(&path);
        if self.has(key) {
            let value = read(self, key);
            if self.context.is_listed(&path) {
                match (&value, &default) {
                    // Somebody changed the value, or the class beside it: then it is the order's own value from now on.
                    (Some(value), Some(default)) if value != default => self.warning(
                        "resolved-differs",
                        key,
                        format!(
                            "{key} is listed in resolved.defaults, but is not what class or default say now; the value in the file counts"
                        ),
                        format!("take \"{path}\" out of resolved.defaults to keep the value, or take out the key {key} to resolve it anew"),
                    ),
                    _ => self.context.record(&path),
                }
            }
            return value;
        }
        match default {
            Some(value) => {
                self.context.record(&path);
                Some(value)
            }
            None => {
                self.missing(key, example);
                None
            }
        }
    }

    /// A quantity with unit that may be left out.
    pub fn quantity(&self, key: &'static str, size: &Size) -> Option<f64> {
        self.get(key).and_then(|value| self.quantity_of(&self.path_of(key), key, value, size))
    }

    /// A quantity with unit, its default, or a report.
    pub fn size(&self, key: &'static str, size: &Size, default: Option<f64>) -> Option<f64> {
        self.resolve(key, &format!("\"{}\"", size.usual), default, |t, k| t.quantity(k, size))
    }

    /// A fixed number of quantities, `["35 mm", "25 mm"]`.
    pub fn quantities<const N: usize>(&self, key: &'static str, size: &Size) -> Option<[f64; N]> {
        let value = self.get(key)?;
        let list = self.array(key, value, &format!("{N} quantities like \"{}\"", size.usual))?;
        if list.len() != N {
            let example = vec![format!("\"{}\"", size.usual); N].join(", ");
            self.error(
                "list-length",
                key,
                format!("{key} has {} entries; allowed: exactly {N}", list.len()),
                format!("write {key} = [{example}]"),
            );
            return None;
        }
        let mut numbers = [0.0; N];
        let mut whole = true;
        for (i, (item, number)) in list.iter().zip(&mut numbers).enumerate() {
            match self.quantity_of(&format!("{}[{}]", self.path_of(key), i + 1), key, item, size) {
                Some(value) => *number = value,
                None => whole = false,
            }
        }
        whole.then_some(numbers)
    }

    /// Any number of quantities.
    pub fn quantity_list(&self, key: &'static str, size: &Size) -> Option<Vec<f64>> {
        let value = self.get(key)?;
        let list = self.array(key, value, &format!("quantities like \"{}\"", size.usual))?;
        let path = self.path_of(key);
        let read: Vec<_> =
            list.iter().enumerate().map(|(i, item)| self.quantity_of(&format!("{path}[{}]", i + 1), key, item, size)).collect();
        read.into_iter().collect()
    }

    /// A quantity out of one value.
    pub fn quantity_of(&self, path: &str, key: &str, value: &Spanned<DeValue<'_>>, size: &Size) -> Option<f64> {
        let place = || Place::Span { key: path.to_string(), span: value.span() };
        let noun = size.kind.noun();
        let refuse = |code, message: String, help: String| {
            self.context.report(Problem::error(code, place(), message, help));
            None
        };
        let text = match value.get_ref() {
            DeValue::String(text) => text,
            DeValue::Integer(_) | DeValue::Float(_) => {
                let found = plain(value.get_ref());
                let finite = found.parse::<f64>().is_ok_and(f64::is_finite);
                let example = if finite { format!("{found} {}", size.unit) } else { size.usual.to_string() };
                let code = if finite { "unit-missing" } else { "not-finite" };
                return refuse(code, format!("{key} is {found}, a number without a unit; due is {noun}"), format!("write \"{example}\""));
            }
            other => {
                return refuse(
                    "wrong-type",
                    format!("{key} is {}; due is {noun} in quotes", kind_of(other)),
                    format!("write {key} = \"{}\"", size.usual),
                );
            }
        };
        let number = match parse_quantity(text, size.kind) {
            Ok(number) => number,
            Err(why) => {
                let code = if why.contains("has no unit") {
                    "unit-missing"
                } else if why.starts_with("unit ") {
                    "unit-wrong"
                } else if why.contains("not finite") {
                    "not-finite"
                } else {
                    "not-a-quantity"
                };
                return refuse(code, format!("{key}: {why}"), format!("for example \"{}\"", size.usual));
            }
        };
        if number >= size.least && number <= size.greatest {
            return Some(number);
        }
        let code = if number <= 0.0 && size.least > 0.0 { "size-not-positive" } else { "out-of-range" };
        refuse(
            code,
            format!("{key} is \"{text}\"; allowed: {} to {}", size.show(size.least), size.show(size.greatest)),
            format!("for example \"{}\"", size.usual),
        )
    }

    /// A plain number from `least` to `greatest` that may be left out.
    pub fn number(&self, key: &'static str, least: f64, greatest: f64) -> Option<f64> {
        let value = self.get(key)?;
        let found = match value.get_ref() {
            number @ (DeValue::Integer(_) | DeValue::Float(_)) => plain(number),
            other => {
                let help = format!("write {key} = {least:?} or more, without quotes and unit");
                self.error("wrong-type", key, format!("{key} is {}; due is a plain number", kind_of(other)), help);
                return None;
            }
        };
        match found.parse::<f64>() {
            Ok(number) if number.is_finite() && number >= least && number <= greatest => Some(number),
            Ok(number) if number.is_finite() => {
                let code = if number <= 0.0 && least > 0.0 { "size-not-positive" } else { "out-of-range" };
                let help = format!("write a number from {least:?} to {greatest:?}");
                self.error(code, key, format!("{key} is {found}; allowed: {least:?} to {greatest:?}"), help);
                None
            }
            _ => {
                let help = format!("write a number from {least:?} to {greatest:?}");
                self.error("not-finite", key, format!("{key} is {found}; allowed: {least:?} to {greatest:?}"), help);
                None
            }
        }
    }

    /// A whole number from `least` to `greatest` that may be left out.
    pub fn integer(&self, key: &'static str, least: usize, greatest: usize) -> Option<usize> {
        let value = self.get(key)?;
        let help = format!("write {key} = {least} to {greatest}");
        match value.get_ref() {
            number @ DeValue::Integer(_) => {
                let found = plain(number);
                match found.parse::<usize>() {
                    Ok(number) if (least..=greatest).contains(&number) => Some(number),
                    _ => {
                        self.error("out-of-range", key, format!("{key} is {found}; allowed: {least} to {greatest}"), help);
                        None
                    }
                }
            }
            other => {
                self.error("wrong-type", key, format!("{key} is {}; due is a whole number", kind_of(other)), help);
                None
            }
        }
    }

    /// true or false, if there.
    pub fn flag(&self, key: &'static str) -> Option<bool> {
        let value = self.get(key)?;
        let flag = value.get_ref().as_bool();
        if flag.is_none() {
            let found = kind_of(value.get_ref());
            self.error("wrong-type", key, format!("{key} is {found}; due is true or false, without quotes"), format!("write {key} = true"));
        }
        flag
    }

    /// A text, if there.
    pub fn string(&self, key: &'static str) -> Option<&'a str> {
        let value = self.get(key)?;
        let text = value.get_ref().as_str();
        if text.is_none() {
            let found = kind_of(value.get_ref());
            self.error("wrong-type", key, format!("{key} is {found}; due is a text in quotes"), format!("write {key} = \"...\""));
        }
        text
    }

    /// One line of text for people, if there: no control characters, at most `longest` characters, not blank.
    pub fn line(&self, key: &'static str, longest: usize) -> Option<String> {
        let text = self.string(key)?;
        let length = text.chars().count();
        if let Some(c) = text.chars().find(|c| c.is_control()) {
            self.error(
                "text-not-one-line",
                key,
                format!("{key} holds the control character {c:?}; due is one line"),
                "write it in one line",
            );
            return None;
        }
        if text.trim().is_empty() || length > longest {
            self.error(
                "text-length",
                key,
                format!("{key} has {length} characters; allowed: 1 to {longest}, not only blanks"),
                format!("shorten it to {longest} characters, or leave the key out where it is optional"),
            );
            return None;
        }
        Some(text.to_string())
    }

    /// One of the allowed words, if there: its index.
    pub fn word(&self, key: &'static str, allowed: &[&str]) -> Option<usize> {
        let value = self.get(key)?;
        let Some(text) = value.get_ref().as_str() else {
            let help = format!("write {key} = \"{}\"", allowed.first().unwrap_or(&""));
            let message = format!("{key} is {}; due is one of {}, in quotes", kind_of(value.get_ref()), allowed.join(", "));
            self.error("wrong-type", key, message, help);
            return None;
        };
        self.word_of(key, text, allowed)
    }

    /// The index of `text` among the allowed words, or a report.
    pub fn word_of(&self, key: &str, text: &str, allowed: &[&str]) -> Option<usize> {
        let found = allowed.iter().position(|w| *w == text);
        if found.is_none() {
            let help = format!("write {key} = \"{}\"", nearest(text, allowed.iter().copied()).or(allowed.first().copied()).unwrap_or(""));
            self.error("word-unknown", key, format!("{key} is \"{text}\"; allowed: {}", allowed.join(", ")), help);
        }
        found
    }

    /// A list of texts, if there.
    pub fn strings(&self, key: &'static str) -> Option<Vec<&'a str>> {
        let value = self.get(key)?;
        let list = self.array(key, value, "texts in quotes")?;
        let texts: Option<Vec<_>> = list.iter().map(|item| item.get_ref().as_str()).collect();
        if texts.is_none() {
            self.error("wrong-type", key, format!("{key} holds something else than texts"), format!("write {key} = [\"...\", \"...\"]"));
        }
        texts
    }

    /// A date without time, if there: `YYYY-MM-DD`.
    pub fn date(&self, key: &'static str) -> Option<String> {
        let value = self.get(key)?;
        let found = match value.get_ref() {
            DeValue::Datetime(found) => match (found.date, found.time, found.offset) {
                // Archives and drawings hold years of this range only.
                (Some(date), None, None) if (1980..=2099).contains(&date.year) => return Some(date.to_string()),
                _ => format!("{found}"),
            },
            other => kind_of(other),
        };
        self.error(
            "date-wrong",
            key,
            format!("{key} is {found}; due is a date without time, 1980-01-01 to 2099-12-31, without quotes"),
            format!("write {key} = 2026-05-04"),
        );
        None
    }

    /// A table inside; an empty one stands in when it was left out or is something else (which is reported).
    pub fn table(&self, key: &'static str) -> Table<'a> {
        self.table_like(key, "{ ... }")
    }

    /// The same with an example of what the table would look like.
    pub fn table_like(&self, key: &'static str, example: &str) -> Table<'a> {
        let path = self.path_of(key);
        match self.get(key).map(|value| (value.span(), value.get_ref())) {
            Some((span, DeValue::Table(inner))) => Table::at(inner, path, span, self.context),
            Some((span, other)) => {
                let help = format!("write {key} = {example}, or its keys under a heading of their own");
                self.error("wrong-type", key, format!("{key} is {}; due is a table", kind_of(other)), help);
                Table { stands_in: true, ..Table::at(&EMPTY, path, span, self.context) }
            }
            None => Table::at(&EMPTY, path, self.span.clone(), self.context),
        }
    }

    /// The tables of a list of tables, `[[key]]`; none when it was left out.
    pub fn tables(&self, key: &'static str) -> Vec<Table<'a>> {
        let Some(value) = self.get(key) else { return Vec::new() };
        let path = self.path_of(key);
        let help = format!("write [[{path}]]");
        let DeValue::Array(list) = value.get_ref() else {
            self.error("wrong-type", key, format!("{key} is {}; due is a list of tables", kind_of(value.get_ref())), help);
            return Vec::new();
        };
        let mut tables = Vec::new();
        for (i, item) in list.iter().enumerate() {
            let path = format!("{path}[{}]", i + 1);
            match item.get_ref() {
                DeValue::Table(inner) => tables.push(Table::at(inner, path, item.span(), self.context)),
                other => self.context.report(Problem::error(
                    "wrong-type",
                    Place::Span { key: path, span: item.span() },
                    format!("an entry of {key} is {}; due is a table", kind_of(other)),
                    help.clone(),
                )),
            }
        }
        tables
    }

    /// Reports every key that nobody asked for.
    pub fn finish(&self) {
        let known = self.known.borrow();
        for (key, _) in self.entries {
            let name = key.get_ref().as_ref();
            if known.contains(&name) {
                continue;
            }
            let all = || known.iter().copied().collect::<Vec<_>>().join(", ");
            let help = match nearest(name, known.iter().copied()) {
                Some(near) => {
                    // A misspelt key is one mistake, not an unknown and a missing one.
                    self.context.retract("key-missing", &self.path_of(near));
                    format!("did you mean \"{near}\"? known here: {}", all())
                }
                None => format!("known here: {}", all()),
            };
            let table = if self.path.is_empty() { "the file".to_string() } else { format!("[{}]", self.path) };
            self.context.report(Problem::error(
                "key-unknown",
                Place::Span { key: self.path_of(name), span: key.span() },
                format!("\"{name}\" is not a key of {table}"),
                help,
            ));
        }
    }

    /// The entries of a list, or a report.
    fn array(&self, key: &str, value: &'a Spanned<DeValue<'a>>, due: &str) -> Option<&'a [Spanned<DeValue<'a>>]> {
        match value.get_ref() {
            DeValue::Array(list) => Some(list),
            other => {
                let help = format!("write {key} = [ ... ]");
                self.error("wrong-type", key, format!("{key} is {}; due is a list of {due}", kind_of(other)), help);
                None
            }
        }
    }
}

/// The nearest of the known words, when it is near enough to be a slip of the fingers.
pub fn nearest<'w>(word: &str, known: impl Iterator<Item = &'w str>) -> Option<&'w str> {
    /// Below this likeness (Jaro-Winkler, 0 to 1) a suggestion misleads more often than it helps.
    const ALIKE: f64 = 0.75;
    // A word of a megabyte is no slip; comparing it would take seconds.
    const LONGEST: usize = 100;
    if word.len() > LONGEST {
        return None;
    }
    known
        .map(|k| (strsim::jaro_winkler(word, k), k))
        .filter(|(alike, _)| *alike >= ALIKE)
        .max_by(|a, b| a.0.total_cmp(&b.0))
        .map(|(_, k)| k)
}

/// A number as it would be parsed by Rust: underscores are gone, other bases are turned to decimal.
fn plain(value: &DeValue<'_>) -> String {
    match value {
        DeValue::Integer(number) if number.radix() == 10 => number.as_str().to_string(),
        DeValue::Integer(number) => {
            i128::from_str_radix(number.as_str(), number.radix()).map_or_else(|_| number.to_string(), |n| n.to_string())
        }
        DeValue::Float(number) => number.as_str().to_string(),
        _ => String::new(),
    }
}

/// What a value is, for messages, with a short one shown.
pub fn kind_of(value: &DeValue<'_>) -> String {
    /// Characters of a text that a message shows.
    const SHOWN: usize = 40;
    match value {
        DeValue::String(text) if text.chars().count() <= SHOWN => format!("the text \"{text}\""),
        DeValue::String(_) => "a long text".to_string(),
        DeValue::Integer(_) | DeValue::Float(_) => format!("the number {}", plain(value)),
        DeValue::Boolean(flag) => flag.to_string(),
        DeValue::Datetime(date) => format!("the date {date}"),
        DeValue::Array(list) => format!("a list of {}", list.len()),
        DeValue::Table(_) => "a table".to_string(),
    }
}
