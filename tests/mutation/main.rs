//! Damaged documents, many of them: each is read or refused with one line, by workers that may fall
//! but never take long, and whatever is read of it can be examined.
//!
//! `TIEOUT_MUTANTS=20000 cargo test --release --test mutation -- --nocapture` makes more of them and
//! says what became of them; `TIEOUT_ORIGINALS=FOLDER` adds documents of your own to mutate.

#[path = "../helper/mod.rs"]
mod helper;
mod mutate;

use mutate::{Random, mutant};
use std::collections::BTreeMap;
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::path::{Path, PathBuf};
use std::sync::Mutex;
use std::sync::atomic::{AtomicBool, AtomicUsize, Ordering::Relaxed};
use std::time::{Duration, Instant};
use tieout::judge::Options;
use tieout::readers::contained::{Limits, Pool};
use tieout::statements::Grammar;

const MUTANTS: usize = 300;
const WORKERS: usize = 2;

/// The documents that are mutated, in an order that is the same everywhere.
fn originals() -> Vec<(PathBuf, Vec<u8>)> {
    // The demo counts more: of a document with one sentence nearly every change leaves nothing.
    let mut folders: Vec<PathBuf> = ["demo", "demo", "demo", "encrypted"]
        .map(|f| Path::new("fixtures").join(f))
        .into();
    folders.extend(std::env::var_os("TIEOUT_ORIGINALS").map(PathBuf::from));
    let mut files: Vec<PathBuf> = folders
        .iter()
        .flat_map(|folder| std::fs::read_dir(folder).expect("a readable folder"))
        .map(|entry| entry.expect("a readable entry").path())
        .filter(|path| {
            path.extension()
                .is_some_and(|e| e == "pdf" || e == "docx" || e == "odt")
        })
        .collect();
    files.sort();
    files
        .into_iter()
        .map(|path| {
            let bytes = std::fs::read(&path).expect("a readable document");
            (path, bytes)
        })
        .collect()
}

/// What became of all mutants.
#[derive(Default)]
struct Outcome {
    read: usize,
    refused: BTreeMap<String, usize>,
    slowest: Duration,
    /// What must not happen, with the mutant that made it happen.
    wrong: Vec<String>,
}

#[test]
fn mutants_are_read_or_refused() {
    let wanted = std::env::var("TIEOUT_MUTANTS").ok();
    let wanted = wanted.map_or(MUTANTS, |n| n.parse().expect("TIEOUT_MUTANTS is a number"));
    let originals = originals();
    let limits = Limits::default();
    let pool = Pool::new(env!("CARGO_BIN_EXE_tieout"), limits, WORKERS);
    let outcome = Mutex::new(Outcome::default());
    let next = AtomicUsize::new(0);
    let start = Instant::now();
    let peak = watched(|| {
        std::thread::scope(|scope| {
            for _ in 0..WORKERS {
                scope.spawn(|| {
                    loop {
                        let number = next.fetch_add(1, Relaxed);
                        if number >= wanted {
                            return;
                        }
                        let (path, original) = &originals[number % originals.len()];
                        let bytes = mutant(original, &mut Random::new(number as u64));
                        one(&pool, limits, path, bytes, number, &outcome);
                    }
                });
            }
        });
    });
    let outcome = outcome.into_inner().expect("no thread panicked");
    println!(
        "{wanted} mutants of {} documents in {:.0?}: {} read; slowest {:.1?}; {} workers started; at most {} MB \
         in a worker, {} MB here",
        originals.len(),
        start.elapsed(),
        outcome.read,
        outcome.slowest,
        pool.started(),
        peak.0 >> 20,
        peak.1 >> 20
    );
    for (reason, count) in &outcome.refused {
        println!("{count:6} {reason}");
    }
    assert!(outcome.wrong.is_empty(), "{:#?}", outcome.wrong);
    // Both ways out are taken.
    assert!(outcome.read > wanted / 4 && !outcome.refused.is_empty());
}

/// Reads and examines one mutant.
fn one(pool: &Pool, limits: Limits, path: &Path, bytes: Vec<u8>, number: usize, outcome: &Mutex<Outcome>) {
    let start = Instant::now();
    let result = pool.read_bytes(bytes.clone(), path);
    let took = start.elapsed();
    let mut wrong = Vec::new();
    if took > limits.time + Duration::from_secs(15) {
        wrong.push(format!("took {took:?}"));
    }
    let refused = match result {
        Ok(manuscript) => {
            let examined = catch_unwind(AssertUnwindSafe(|| {
                tieout::examine(manuscript, Grammar::built_in(), &Options::default()).counts()
            }));
            if examined.is_err() {
                wrong.push("examining it panicked".into());
            }
            None
        }
        Err(reason) => {
            if reason.0.contains("internal error") || reason.0.contains('\n') || reason.0.is_empty() {
                wrong.push(reason.0.clone());
            }
            Some(reason.0)
        }
    };
    let mut outcome = outcome.lock().expect("no thread panics here");
    outcome.slowest = outcome.slowest.max(took);
    match refused {
        None => outcome.read += 1,
        // The place of the damage differs, its kind matters.
        Some(reason) => {
            let kind: String = reason
                .chars()
                .map(|c| if c.is_ascii_digit() { '#' } else { c })
                .collect();
            *outcome.refused.entry(kind).or_default() += 1;
        }
    }
    for what in wrong {
        let copy = Path::new(env!("CARGO_TARGET_TMPDIR")).join(format!("mutant-{number}"));
        let copy = copy.with_extension(path.extension().unwrap_or_default());
        std::fs::write(&copy, &bytes).expect("the scratch folder can be written");
        outcome.wrong.push(format!("{}: {what}", copy.display()));
    }
}

/// Does the work; on Linux, says the most memory that was resident in a worker and here.
fn watched(work: impl FnOnce()) -> (u64, u64) {
    let over = AtomicBool::new(false);
    std::thread::scope(|scope| {
        let watch = scope.spawn(|| {
            let mut peak = (0, 0);
            while !over.load(Relaxed) {
                peak = now(peak);
                std::thread::sleep(Duration::from_millis(20));
            }
            peak
        });
        work();
        over.store(true, Relaxed);
        watch.join().expect("watching does not panic")
    })
}

#[cfg(target_os = "linux")]
fn now(peak: (u64, u64)) -> (u64, u64) {
    use helper::processes::{children, peak as most};
    let own = std::process::id();
    let of_workers = children(own).into_iter().filter_map(most).max();
    (peak.0.max(of_workers.unwrap_or(0)), most(own).unwrap_or(peak.1))
}

#[cfg(not(target_os = "linux"))]
fn now(peak: (u64, u64)) -> (u64, u64) {
    peak
}
