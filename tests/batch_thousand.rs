//! A thousand generated files on two threads: flat memory, killed half-way, resumed, the same bytes; times printed.
//!
//! Minutes without optimisation, so only on demand:
//! `cargo test --release --features parquet --test batch_thousand -- --ignored --nocapture`
#![allow(clippy::unwrap_used, reason = "a test may stop at once")]
#![allow(clippy::print_stdout, reason = "it measures")]

#[path = "support/runs.rs"]
mod runs;

use runs::{Runs, killed_after, orbsieve};
use std::process::{Command, Stdio};
use std::time::{Duration, Instant};

/// Runs to the end; peak of resident memory in KiB as the kernel last told it, and the seconds taken.
fn watched(mut command: Command) -> (u64, f64) {
    let began = Instant::now();
    let mut child = command.stdout(Stdio::null()).stderr(Stdio::null()).spawn().unwrap();
    let status = format!("/proc/{}/status", child.id());
    let mut peak = 0;
    while child.try_wait().unwrap().is_none() {
        let text = std::fs::read_to_string(&status).unwrap_or_default();
        let line = text.lines().find_map(|line| line.strip_prefix("VmHWM:"));
        peak = line.and_then(|line| line.trim().strip_suffix(" kB")?.parse().ok()).unwrap_or(peak);
        std::thread::sleep(Duration::from_millis(2));
    }
    (peak, began.elapsed().as_secs_f64())
}

#[test]
#[ignore = "a thousand files"]
fn a_thousand_files_in_flat_memory_killed_and_resumed() {
    let runs = Runs::new(1000);
    let run = |arguments: &[&str]| orbsieve(runs.path(), &[&["batch"], arguments].concat());
    let (few, _) = watched(run(&["runs/run-00*", "--threads", "2", "--output", "few"]));
    let (peak, two) = watched(run(&["runs", "--threads", "2", "--output", "unbroken"]));
    let (_, one) = watched(run(&["runs", "--threads", "1", "--output", "single"]));
    println!("1000 files: {one:.2} s on one thread, {two:.2} s on two, {:.2} times as fast", one / two);
    println!("peak memory: {few} KiB for 100 files, {peak} KiB for 1000");
    assert!(few > 0 && peak < few + few / 4 + 2048, "memory grows: {few} KiB for 100 files, {peak} KiB for 1000");
    let unbroken = std::fs::read(runs.path().join("unbroken")).unwrap();
    assert!(unbroken == std::fs::read(runs.path().join("single")).unwrap(), "threads show in the bytes");

    let resumed = ["runs", "--threads", "2", "--resume", "--output", "killed"];
    let part = runs.path().join("killed.part");
    for records in [100, 500, 900] {
        let left = killed_after(run(&resumed), &part, records).unwrap();
        println!("killed with {left} of 1002 records");
        assert!((records..1002).contains(&left));
    }
    let output = run(&resumed).output().unwrap();
    assert_eq!(output.status.code(), Some(4));
    let told = String::from_utf8(output.stderr).unwrap();
    println!("{told}");
    assert!(told.starts_with("1002 files: 1000 labelled, 2 failed; "), "{told}");
    assert!(std::fs::read(runs.path().join("killed")).unwrap() == unbroken, "resumed bytes differ");
}
