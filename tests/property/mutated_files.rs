//! Spoilt order, class and dimension files: always an answer, never a panic, always within a bounded time.

use std::time::{Duration, Instant};

use stripwright::cli::problems::render;
use stripwright::dimensions::{self, Dimension, Dimensions};
use stripwright::family;
use stripwright::order::{self, Classes, Source};

/// Rounds per file; with the fixed seed the same ones every time.
const ROUNDS: usize = 1_000;
/// Pieces that stand for typical slips and for what parsers stumble over.
const PIECES: &[&str] = &[
    "\"",
    "'",
    "\"\"\"",
    "[",
    "]",
    "[[",
    "]]",
    "{",
    "}",
    "=",
    ".",
    ",",
    "#",
    "\n",
    "\r",
    "-",
    "nan",
    "inf",
    "-inf",
    "1e999",
    "0",
    "-1",
    "0x",
    "9999999999999999999",
    "1979-05-27",
    "07:32:00",
    "true",
    "mm",
    "GHz",
    "oz",
    "é",
    "\u{feff}",
    "\u{202e}",
    "\\",
    "\\u0000",
    "\\UFFFFFFFF",
    "[order]",
    "[filter]",
    "degree = 40",
    "name = \"../..\"",
    "[[dimension]]",
    "value = \"0 mm\"",
    "\t",
    "\u{7f}",
    "µ",
    "[a.b.c]",
    "a.b.c = 1",
];

/// A small generator of our own choice of seed: the run is the same on every machine.
struct Random(u64);

impl Random {
    /// The next number below `limit` (splitmix64: Steele, Lea and Flood, "Fast splittable pseudorandom number generators", 2014).
    fn below(&mut self, limit: usize) -> usize {
        self.0 = self.0.wrapping_add(0x9e37_79b9_7f4a_7c15);
        let mut z = self.0;
        z = (z ^ (z >> 30)).wrapping_mul(0xbf58_476d_1ce4_e5b9);
        z = (z ^ (z >> 27)).wrapping_mul(0x94d0_49bb_1331_11eb);
        ((z ^ (z >> 31)) % limit.max(1) as u64) as usize
    }
}

/// Spoils a text in one to four places.
fn spoil(text: &str, random: &mut Random) -> String {
    let mut chars: Vec<char> = text.chars().collect();
    for _ in 0..=random.below(4) {
        let at = random.below(chars.len());
        let length = random.below(30).min(chars.len() - at);
        match random.below(5) {
            0 => drop(chars.drain(at..at + length)),
            1 => {
                let piece = PIECES[random.below(PIECES.len())];
                chars.splice(at..at, piece.chars());
            }
            2 => {
                let piece = PIECES[random.below(PIECES.len())];
                chars.splice(at..at + length, piece.chars());
            }
            3 => {
                let copy = chars[at..at + length].to_vec();
                let to = random.below(chars.len());
                chars.splice(to..to, copy);
            }
            _ => chars.truncate(at.max(1)),
        }
        if chars.is_empty() {
            chars.push(' ');
        }
    }
    chars.into_iter().collect()
}

fn starter() -> &'static str {
    include_str!("../../templates/orders/edge-coupled.toml")
}

/// The dimension names that the test expects.
fn names() -> Vec<String> {
    ["section 1 gap", "section 1 width", "section 2 gap"].map(str::to_string).to_vec()
}

fn dimension_file() -> String {
    let (order, _) = order::read(&Source::from_text("order.toml", starter()), &family::keys()).unwrap();
    let list = names()
        .into_iter()
        .map(|name| Dimension {
            name,
            value_m: 0.25e-3,
            first_guess_m: 0.2512e-3,
            serves: vec![("Z0e ohm".to_string(), 70.6)],
            corrections_m: vec![("open end".to_string(), -0.1e-3)],
        })
        .collect();
    dimensions::write(&Dimensions { order, degree: 5, list })
}

/// Reads a text in every way and prints what was found; returns how many problems there were.
fn read_all(text: &str) -> usize {
    let source = Source::from_text("spoilt.toml", text);
    let mut problems = match order::read(&source, &family::keys()) {
        Ok((order, warnings)) => {
            // What passes must survive a round.
            let again = order::read(&Source::from_text("again.toml", order::write(&order)), &family::keys());
            assert_eq!(again.map(|a| a.0), Ok(order), "{text}");
            warnings
        }
        Err(problems) => {
            assert!(problems.iter().any(|p| p.is_error()), "refused without an error: {text}");
            problems
        }
    };
    problems.extend(dimensions::read(&source, &family::keys(), &|_, _| names()).map_or_else(|p| p, |d| d.1));
    problems.extend(Classes::read(&source).1);
    for problem in problems.iter().take(5) {
        assert!(!render(problem, Some(&source), false).is_empty());
    }
    for problem in &problems {
        assert!(!problem.message.is_empty() && !problem.help.is_empty(), "{problem:?}");
        assert!(source.span_of(&problem.place).is_none_or(|s| s.end <= text.len()), "{problem:?}");
    }
    problems.len()
}

#[test]
fn spoilt_files_get_an_answer() {
    let dimensions = dimension_file();
    let classes = include_str!("../../templates/launches.toml");
    for (seed, text) in [(1, starter()), (2, dimensions.as_str()), (3, classes)] {
        let mut random = Random(seed);
        let spoilt = (0..ROUNDS).filter(|_| read_all(&spoil(text, &mut random)) > 0).count();
        // Most of the changes hit something: otherwise this test spoils nothing.
        assert!(spoilt > ROUNDS / 2, "only {spoilt} of {ROUNDS} had a problem");
    }
}

#[test]
fn large_and_deep_files_get_an_answer_soon() {
    let many_keys: String = (0..60_000).map(|i| format!("key{i} = \"{i} mm\"\n")).collect();
    let many_tables: String = (0..40_000).map(|_| "[[dimension]]\nname = \"section 1 gap\"\nvalue = \"1 mm\"\n").collect();
    for (what, text) in [
        ("brackets", "[".repeat(100_000)),
        ("a deep list", format!("x = {}{}", "[".repeat(50_000), "]".repeat(50_000))),
        ("deep tables", format!("x = {}1{}", "{a = ".repeat(20_000), "}".repeat(20_000))),
        ("dotted keys", format!("{}a = 1", "a.".repeat(50_000))),
        ("a long name", format!("[order]\nname = \"{}\"\n", "x".repeat(1_000_000))),
        ("a long word", format!("[filter]\nfamily = \"{}\"\n", "x".repeat(1_000_000))),
        ("a long quantity", format!("[laminate]\nthickness = \"{} mm\"\n", "9".repeat(1_000_000))),
        ("many keys", many_keys),
        ("many tables", many_tables),
        ("many faults", "= = =\n".repeat(100_000)),
        ("many doubles", "a = 1\n".repeat(100_000)),
    ] {
        let start = Instant::now();
        assert!(read_all(&text) > 0, "{what}");
        // Each is read three times; on a busy two-core machine they take well under a second, an endless loop does not.
        assert!(start.elapsed() < Duration::from_secs(20), "{what} took {:?}", start.elapsed());
        eprintln!("{what}: {:?}", start.elapsed());
    }
}
