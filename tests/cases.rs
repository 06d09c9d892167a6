//! Every folder in `tests/cases` is one test: manuscripts, the `command` that is run on a copy of
//! the folder, and what it must write. Nothing but files is needed for another one.
//!
//! - `command`: one line, e.g. `tieout check draft.md --show all`; it may end in `< FILE`
//! - `expected.txt`: standard output, and, if there is any, below a line `--- messages ---` standard
//!   error
//! - `expected.status`: the exit status; without the file it is 0
//!
//! `UPDATE=1 cargo test --test cases` writes what the program does now; read it before you keep it.

mod helper;

use helper::{Run, Scratch, words};
use std::fs;
use std::path::{Path, PathBuf};

#[test]
fn every_case_folder_gives_what_it_promises() {
    let mut folders: Vec<PathBuf> = fs::read_dir("tests/cases")
        .expect("the cases are part of the repository")
        .map(|f| f.expect("a readable folder").path())
        .filter(|f| f.is_dir())
        .collect();
    folders.sort();
    assert!(!folders.is_empty(), "there are no cases");
    let wrong: Vec<String> = folders.iter().filter_map(|f| check(f)).collect();
    assert!(wrong.is_empty(), "{}", wrong.join("\n\n"));
}

/// What is wrong with a case, if anything.
fn check(folder: &Path) -> Option<String> {
    let run = run(folder);
    let shown = match run.err.as_str() {
        "" => run.out,
        err => format!("{}--- messages ---\n{err}", run.out),
    };
    let (text, status) = (folder.join("expected.txt"), folder.join("expected.status"));
    if std::env::var_os("UPDATE").is_some_and(|v| v == "1") {
        fs::write(&text, &shown).expect("the case folder can be written");
        match run.status {
            0 => drop(fs::remove_file(&status)),
            other => fs::write(&status, format!("{other}\n")).expect("the case folder can be written"),
        }
        return None;
    }
    let wanted = fs::read_to_string(&text).unwrap_or_default();
    let wanted_status = fs::read_to_string(&status).map_or(0, |s| s.trim().parse().unwrap_or(-1));
    let mut wrong = Vec::new();
    if shown != wanted {
        wrong.push(format!("wanted:\n{wanted}\nbut got:\n{shown}"));
    }
    if run.status != wanted_status {
        wrong.push(format!("wanted status {wanted_status} but got {}", run.status));
    }
    (!wrong.is_empty()).then(|| format!("{}: {}", folder.display(), wrong.join("\n")))
}

fn run(folder: &Path) -> Run {
    let scratch = Scratch::new();
    copy(folder, folder, &scratch);
    let line = fs::read_to_string(folder.join("command"))
        .unwrap_or_else(|e| panic!("{} needs a file `command`: {e}", folder.display()));
    let mut words = words(&line);
    let input = words.iter().position(|w| w == "<").map(|at| {
        let name = words.get(at + 1).expect("a file stands behind <").clone();
        words.truncate(at);
        fs::read(folder.join(name)).expect("the file behind < is in the case")
    });
    assert_eq!(
        words.first().map(String::as_str),
        Some("tieout"),
        "{}",
        folder.display()
    );
    let arguments: Vec<&str> = words[1..].iter().map(String::as_str).collect();
    scratch.run_with(&arguments, &input.unwrap_or_default())
}

/// Copies everything but the description of the case itself.
fn copy(root: &Path, folder: &Path, scratch: &Scratch) {
    const OWN: [&str; 3] = ["command", "expected.txt", "expected.status"];
    for entry in fs::read_dir(folder).expect("a readable folder") {
        let path = entry.expect("a readable entry").path();
        let name = path.strip_prefix(root).expect("it lies below the root");
        let name = name.to_str().expect("names of cases are UTF-8");
        if path.is_dir() {
            copy(root, &path, scratch);
        } else if !OWN.contains(&name) {
            scratch.file(name, fs::read(&path).expect("a readable file"));
        }
    }
}

#[test]
fn a_command_line_is_split_like_a_shell_does() {
    assert_eq!(words("a  'b c' d\"e f\"\n"), ["a", "b c", "de f"]);
    assert_eq!(words("x ''"), ["x", ""]);
}
