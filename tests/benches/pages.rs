//! How well and how fast PDFs are read: `cargo bench --bench pages`.
//!
//! Over the real PDFs that `tests/corpus/fetch.sh` puts into `fixtures/corpus/real`: per file the
//! share of the words that `pdftotext` finds (as a multiset) which are in our text, the share of
//! word triples of `pdftotext -raw` that stand in ours in the same order, and the time of the whole
//! check as a process of its own on one thread, beside `pdftotext`'s, both the best of three in turn.
//!
//! Neither of these says whose order is right. That do the articles which `tests/corpus/print.sh`
//! prints in two columns, as their source is known: of each, the share of the source's word triples
//! that our text has, and `pdftotext -raw`'s.
//!
//! Words are runs of letters or of digits, in lower case and compatibility form, hyphens at line
//! ends taken out where a reading keeps them. Running heads and page numbers are no part of the text
//! for us, so that they count as lost words; the second figure for words leaves out the lines that
//! `pdftotext` finds repeated at the ends of pages.
//!
//! `PAGES=SHARE` looks only at every SHAREth file. Without a corpus or `pdftotext` nothing is done.

use std::collections::{HashMap, HashSet};
use std::fs;
use std::path::{Path, PathBuf};
use std::process::{Command, Stdio};
use std::time::{Duration, Instant};
use unicode_normalization::UnicodeNormalization;

fn main() {
    if Command::new("pdftotext").arg("-v").output().is_err() {
        println!("pdftotext is not installed: nothing to compare with");
        return;
    }
    let share = std::env::var("PAGES")
        .ok()
        .and_then(|s| s.parse().ok())
        .unwrap_or(1);
    real(share);
    printed(share);
}

/// The PDFs of a folder of the corpus, each with its name.
fn pdfs(folder: &str, share: usize) -> Vec<(String, PathBuf)> {
    let folder = Path::new("fixtures/corpus").join(folder);
    let Ok(entries) = fs::read_dir(&folder) else {
        println!("{} is not there: see DEVELOPERS.md", folder.display());
        return Vec::new();
    };
    let mut all: Vec<(String, PathBuf)> = entries
        .filter_map(|e| Some(e.ok()?.path()))
        .filter(|p| p.extension().is_some_and(|e| e == "pdf"))
        .filter_map(|p| Some((p.file_name()?.to_str()?.to_string(), p)))
        .collect();
    all.sort();
    all.into_iter().step_by(share).collect()
}

fn ours(path: &Path) -> Command {
    let mut command = Command::new(env!("CARGO_BIN_EXE_tieout"));
    command.arg("check").arg(path).env("RAYON_NUM_THREADS", "1");
    command
}

fn theirs(path: &Path, options: &[&str]) -> Command {
    let mut command = Command::new("pdftotext");
    command.args(options).arg(path).arg("-");
    command
}

fn output(mut command: Command) -> String {
    let output = command.stderr(Stdio::null()).output().expect("it ran before");
    String::from_utf8_lossy(&output.stdout).into_owned()
}

fn our_text(path: &Path) -> String {
    let mut command = ours(path);
    command.args(["--format", "text-only"]);
    output(command)
}

/// What is measured of one real file.
struct Measured {
    name: String,
    words: f64,
    running: f64,
    order: f64,
    ours: Duration,
    theirs: Duration,
    two_columns: bool,
    paper: bool,
}

impl Measured {
    fn ratio(&self) -> f64 {
        self.ours.as_secs_f64() / self.theirs.as_secs_f64()
    }
}

fn real(share: usize) {
    let kinds = kinds();
    let mut all = Vec::new();
    println!("words\tbody\torder\tms\tratio\tfile");
    for (name, path) in pdfs("real", share) {
        let text = our_text(&path);
        let reference = output(theirs(&path, &[]));
        let raw = words(&without_breaks(&output(theirs(&path, &["-raw"]))));
        let mine = words(&text);
        if words(&reference).len() < 50 {
            continue;
        }
        let found = |reference: &str| {
            let kept = recall(&words(reference), &mine);
            kept.max(recall(&words(&without_breaks(reference)), &mine))
        };
        let (mut own, mut other) = (Duration::MAX, Duration::MAX);
        for _ in 0..3 {
            own = own.min(time(ours(&path)));
            other = other.min(time(theirs(&path, &[])));
        }
        let (two_columns, paper) = kinds.get(&name).copied().unwrap_or_default();
        let one = Measured {
            words: found(&reference),
            running: found(&without_running_lines(&reference)),
            order: recall(&triples(&raw), &triples(&mine)),
            ours: own,
            theirs: other,
            two_columns,
            paper,
            name,
        };
        println!(
            "{:.3}\t{:.3}\t{:.3}\t{:.1}\t{:.2}\t{}",
            one.words,
            one.running,
            one.order,
            one.ours.as_secs_f64() * 1e3,
            one.ratio(),
            one.name
        );
        all.push(one);
    }
    let summary = |name: &str, which: &dyn Fn(&&Measured) -> bool| {
        let chosen: Vec<&Measured> = all.iter().filter(which).collect();
        let of = |f: &dyn Fn(&Measured) -> f64| chosen.iter().map(|m| f(m)).collect::<Vec<f64>>();
        println!(
            "{name}: {} files; words {}; words of the body {}; order {}; ratio of times {}",
            chosen.len(),
            spread(of(&|m| m.words)),
            spread(of(&|m| m.running)),
            spread(of(&|m| m.order)),
            spread(of(&|m| m.ratio()))
        );
    };
    if all.is_empty() {
        return;
    }
    println!("median (tenth percentile, worst or largest):");
    summary("all", &|_| true);
    summary("papers", &|m| m.paper);
    summary("two columns", &|m| m.two_columns);
    if let Some(slowest) = all.iter().max_by(|a, b| a.ratio().total_cmp(&b.ratio())) {
        println!(
            "slowest against pdftotext: {} ({:.2})",
            slowest.name,
            slowest.ratio()
        );
    }
}

fn printed(share: usize) {
    let (mut mine, mut theirs_, mut ahead) = (Vec::new(), Vec::new(), Vec::new());
    for (name, path) in pdfs("printed", share) {
        let Ok(source) = fs::read_to_string(path.with_extension("txt")) else {
            continue;
        };
        let source = words(&source);
        let source = triples(&source);
        let own = recall(&source, &triples(&words(&our_text(&path))));
        let raw = words(&without_breaks(&output(theirs(&path, &["-raw"]))));
        let raw = recall(&source, &triples(&raw));
        println!("order of the source\tours {own:.4}\traw {raw:.4}\t{name}");
        mine.push(own);
        theirs_.push(raw);
        ahead.push(own - raw);
    }
    if mine.is_empty() {
        return;
    }
    println!(
        "printed articles: {} files; order of the source: ours {}, pdftotext -raw {}, difference {}; behind in {}",
        mine.len(),
        spread(mine),
        spread(theirs_),
        spread(ahead.clone()),
        ahead.iter().filter(|d| **d < -0.001).count()
    );
}

/// Which files of the list are in two columns, and which are papers, by their name in the corpus.
fn kinds() -> HashMap<String, (bool, bool)> {
    let list = fs::read_to_string("tests/corpus/list.tsv").expect("the list is part of the repository");
    let plain = |s: &str| -> String {
        let keeps = |c: char| c.is_ascii_alphanumeric() || matches!(c, '.' | '+' | '-');
        s.chars().map(|c| if keeps(c) { c } else { '_' }).collect()
    };
    let lines = list.lines().filter(|l| !l.starts_with('#'));
    lines
        .filter_map(|line| {
            let fields: Vec<&str> = line.split('\t').collect();
            let [_, package, path, columns, kind] = fields.as_slice() else {
                return None;
            };
            let package = package.split(['@', '=']).next()?;
            let path = Path::new(path.trim_end_matches(".gz"));
            let folder = path.parent()?.file_name()?.to_str()?;
            let file = format!("{folder}-{}", path.file_name()?.to_str()?);
            let name = format!("{}__{}", plain(package), plain(&file));
            Some((name, (*columns == "2", *kind == "paper")))
        })
        .collect()
}

fn words(text: &str) -> Vec<String> {
    let text: String = text.nfkc().filter(|c| *c != '\u{ad}').collect();
    let text = text.to_lowercase();
    let mut out: Vec<String> = Vec::new();
    let mut before = None;
    for c in text.chars() {
        let kind = (c.is_alphabetic(), c.is_numeric());
        if kind == (false, false) {
            before = None;
            continue;
        }
        match out.last_mut() {
            Some(word) if before == Some(kind) => word.push(c),
            _ => out.push(c.to_string()),
        }
        before = Some(kind);
    }
    out
}

/// Joins words that are broken at line ends.
fn without_breaks(text: &str) -> String {
    let characters: Vec<char> = text.chars().collect();
    let mut out = String::with_capacity(text.len());
    let mut i = 0;
    while i < characters.len() {
        let letter = |at: Option<usize>| {
            at.and_then(|a| characters.get(a))
                .is_some_and(|c| c.is_alphabetic())
        };
        let broken = matches!(characters[i], '-' | '\u{2010}' | '\u{ad}')
            && characters.get(i + 1) == Some(&'\n')
            && letter(i.checked_sub(1))
            && letter(Some(i + 2));
        if broken {
            i += 2;
            continue;
        }
        out.push(characters[i]);
        i += 1;
    }
    out
}

/// Leaves out what stands in the first or last four lines of a page and, numbers aside, of others.
fn without_running_lines(text: &str) -> String {
    const DEPTH: usize = 4;
    let pages: Vec<Vec<&str>> = text
        .split('\u{c}')
        .map(|p| p.lines().filter(|l| !l.trim().is_empty()).collect())
        .filter(|p: &Vec<&str>| !p.is_empty())
        .collect();
    let key = |line: &str| -> String {
        let mut out = String::new();
        for c in line.trim().chars() {
            match c.is_ascii_digit() {
                true if out.ends_with('#') => {}
                true => out.push('#'),
                false => out.push(c),
            }
        }
        out
    };
    let mut on: HashMap<String, usize> = HashMap::new();
    for page in &pages {
        let keys: HashSet<String> = page.iter().map(|l| key(l)).collect();
        for key in keys {
            *on.entry(key).or_default() += 1;
        }
    }
    let enough = pages.len().clamp(2, 3);
    let mut out = String::new();
    for page in &pages {
        for (i, line) in page.iter().enumerate() {
            let at_end = i < DEPTH || i + DEPTH >= page.len();
            if !(at_end && on[&key(line)] >= enough) {
                out.push_str(line);
                out.push('\n');
            }
        }
    }
    out
}

fn triples(words: &[String]) -> Vec<[&str; 3]> {
    words.windows(3).map(|w| [w[0].as_str(), &w[1], &w[2]]).collect()
}

/// Share of the first multiset that is in the second.
fn recall<T: std::hash::Hash + Eq>(of: &[T], among: &[T]) -> f64 {
    let mut left: HashMap<&T, i64> = HashMap::new();
    for one in among {
        *left.entry(one).or_default() += 1;
    }
    let mut hits = 0;
    for one in of {
        if let Some(n) = left.get_mut(one)
            && *n > 0
        {
            *n -= 1;
            hits += 1;
        }
    }
    if of.is_empty() {
        1.0
    } else {
        f64::from(hits) / of.len() as f64
    }
}

fn time(mut command: Command) -> Duration {
    let start = Instant::now();
    command
        .stdout(Stdio::null())
        .stderr(Stdio::null())
        .status()
        .expect("it ran before");
    start.elapsed()
}

/// `median (tenth percentile … largest)`.
fn spread(mut values: Vec<f64>) -> String {
    values.sort_by(f64::total_cmp);
    if values.is_empty() {
        return "none".to_string();
    }
    let at = |share: f64| values[((values.len() - 1) as f64 * share).round() as usize];
    format!(
        "{:.4} (least {:.3}, tenth {:.3}, largest {:.3})",
        at(0.5),
        at(0.0),
        at(0.1),
        at(1.0)
    )
}
