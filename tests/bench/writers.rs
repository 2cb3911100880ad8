//! How fast are the writers, and how much memory do they take? `cargo bench --bench writers` prints figure, limit, ratio.

#![allow(clippy::unwrap_used, clippy::expect_used, clippy::panic, missing_docs)]

use std::collections::BTreeMap;
use std::fs;
use std::io::{self, Write};
use std::time::Instant;

use stripwright::artwork::{Board, Layer, Role, Shape};
use stripwright::base::Point;
use stripwright::order::Source;
use stripwright::package::{Bundle, Job, WRITERS};

const VERTICES: usize = 1_000_000;
const LIMIT_MB_PER_S: f64 = 100.0;
/// On top of the board itself.
const LIMIT_MB: f64 = 20.0;
const RUNS: usize = 5;

/// Counts and forgets.
struct Counted(u64);

impl Write for Counted {
    fn write(&mut self, bytes: &[u8]) -> io::Result<usize> {
        self.0 += bytes.len() as u64;
        Ok(bytes.len())
    }

    fn flush(&mut self) -> io::Result<()> {
        Ok(())
    }
}

/// Greatest memory of the process so far, megabytes; `None` where the system does not tell.
fn peak_mb() -> Option<f64> {
    let status = fs::read_to_string("/proc/self/status").ok()?;
    let line = status.lines().find(|line| line.starts_with("VmHWM:"))?;
    Some(line.split_whitespace().nth(1)?.parse::<f64>().ok()? / 1024.0)
}

fn main() {
    let text = include_str!("../../templates/orders/edge-coupled.toml");
    let (order, _) = stripwright::order::read(&Source::from_text("starter", text), &stripwright::family::keys()).unwrap();
    let (mut made, _) = stripwright::make(&order).unwrap();
    // Discs of 10 000 vertices each, a metre apart at most: the coordinates have their usual eight or nine digits.
    let shapes: Vec<Shape> = (0..VERTICES / 10_000)
        .map(|i| {
            let (x0, y0) = ((20 + 50 * (i % 10)) as f64 * 1e-3, (20 + 50 * (i / 10)) as f64 * 1e-3);
            let vertex = |k: usize| {
                let angle = k as f64 * std::f64::consts::TAU / 10_000.0;
                Point::from_m(x0 + 0.02 * angle.cos(), y0 + 0.02 * angle.sin())
            };
            Shape { outer: (0..10_000).map(vertex).collect(), voids: vec![], role: Role::Circuit, net: format!("RES{i}") }
        })
        .collect();
    let count: usize = shapes.iter().map(|shape| shape.outer.len()).sum();
    made.board = Board { layers: BTreeMap::from([(Layer::Copper(1), shapes)]), ..made.board };
    let bundle = Bundle {
        dimensions: &made.dimensions,
        layout: &made.layout,
        board: &made.board,
        response: &made.response,
        figures: &made.figures,
        findings: &[],
    };
    let job = Job::new(&bundle, std::path::Path::new("."));
    let before_mb = peak_mb();
    let gerber = WRITERS.iter().find(|writer| writer.file_name("x") == "x-copper-l1-top.gbr").unwrap();
    let mut best_mb_per_s: f64 = 0.0;
    let mut bytes = 0;
    for _ in 0..RUNS {
        let mut out = Counted(0);
        let begun = Instant::now();
        (gerber.write)(&job, &mut out).unwrap();
        bytes = out.0;
        best_mb_per_s = best_mb_per_s.max(bytes as f64 / 1e6 / begun.elapsed().as_secs_f64());
    }
    println!(
        "Gerber, {count} vertices, {:.1} MB:  {best_mb_per_s:.0} MB/s, limit {LIMIT_MB_PER_S:.0}, ratio {:.2}",
        bytes as f64 / 1e6,
        best_mb_per_s / LIMIT_MB_PER_S
    );
    let mut met = best_mb_per_s >= LIMIT_MB_PER_S;
    if let (Some(before_mb), Some(after_mb)) = (before_mb, peak_mb()) {
        let more_mb = after_mb - before_mb;
        println!("memory beyond the board:  {more_mb:.1} MB, limit {LIMIT_MB:.0}, ratio {:.2}", more_mb / LIMIT_MB);
        met &= more_mb <= LIMIT_MB;
    }
    std::process::exit(i32::from(!met));
}
