//! `make` on the starter order, cold process: wall time and peak memory. Run: `cargo bench --bench make`.
#![allow(clippy::unwrap_used, missing_docs)]

use std::process::{Command, Stdio};
use std::time::{Duration, Instant};

const RUNS: usize = 9;
const LIMIT_S: f64 = 0.5;
const LIMIT_MB: f64 = 100.0;

fn main() {
    let out = std::env::temp_dir().join(format!("stripwright-bench-{}", std::process::id()));
    let order = concat!(env!("CARGO_MANIFEST_DIR"), "/templates/orders/edge-coupled.toml");
    let (mut times, mut peak_kb) = (Vec::new(), 0u64);
    for _ in 0..RUNS {
        let start = Instant::now();
        let mut child = Command::new(env!("CARGO_BIN_EXE_stripwright"))
            .args(["--quiet", "make", order, "--replace", "--out"])
            .arg(&out)
            .stdout(Stdio::null())
            .spawn()
            .unwrap();
        let status = loop {
            // Peak resident size as the kernel keeps it; the last reading before the end stands.
            let read = std::fs::read_to_string(format!("/proc/{}/status", child.id())).unwrap_or_default();
            let high_water = read.lines().find_map(|l| l.strip_prefix("VmHWM:")?.trim().strip_suffix(" kB")?.parse::<u64>().ok());
            peak_kb = peak_kb.max(high_water.unwrap_or(0));
            if let Some(status) = child.try_wait().unwrap() {
                break status;
            }
            std::thread::sleep(Duration::from_millis(1));
        };
        assert!(status.success(), "make ended with {status}");
        times.push(start.elapsed().as_secs_f64());
    }
    let _ = std::fs::remove_dir_all(&out);
    times.sort_by(f64::total_cmp);
    let (median, peak_mb) = (times[RUNS / 2], peak_kb as f64 / 1024.0);
    println!("make, starter, cold process: {median:.3} s (median of {RUNS}), limit {LIMIT_S} s, ratio {:.2}", median / LIMIT_S);
    println!("make, starter, peak memory: {peak_mb:.1} MB, limit {LIMIT_MB} MB, ratio {:.2}", peak_mb / LIMIT_MB);
}
