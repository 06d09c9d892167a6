//! Runs the real program in a scratch folder and compares what it writes, in full.

#![allow(dead_code)] // Each test file uses its own part of this.

#[cfg(target_os = "linux")]
pub mod processes;

use std::fs;
use std::io::Write;
use std::path::{Path, PathBuf};
use std::process::{Command, Stdio};
use std::sync::atomic::{AtomicU32, Ordering};

/// A folder of its own for one test, gone when the test is over.
pub struct Scratch {
    path: PathBuf,
}

/// What one run of the program wrote and how it ended.
#[derive(Debug, PartialEq, Eq)]
pub struct Run {
    pub out: String,
    pub err: String,
    pub status: i32,
}

impl Scratch {
    pub fn new() -> Scratch {
        static NEXT: AtomicU32 = AtomicU32::new(0);
        let name = format!("{}-{}", std::process::id(), NEXT.fetch_add(1, Ordering::Relaxed));
        let path = Path::new(env!("CARGO_TARGET_TMPDIR")).join(name);
        fs::create_dir_all(&path).expect("the scratch folder can be made");
        Scratch { path }
    }

    pub fn path(&self) -> &Path {
        &self.path
    }

    /// Writes a file, with the folders it stands in.
    pub fn file(&self, name: &str, content: impl AsRef<[u8]>) -> &Scratch {
        let path = self.path.join(name);
        if let Some(folder) = path.parent() {
            fs::create_dir_all(folder).expect("a folder can be made in the scratch folder");
        }
        fs::write(path, content).expect("a file can be written in the scratch folder");
        self
    }

    /// The program, about to run here, untouched by the settings of whoever runs the tests.
    pub fn command(&self, arguments: &[&str]) -> Command {
        let mut command = Command::new(env!("CARGO_BIN_EXE_tieout"));
        command
            .args(arguments)
            .current_dir(&self.path)
            .env_remove("NO_COLOR")
            .env_remove("CLICOLOR_FORCE")
            .env("COLUMNS", "80");
        command
    }

    /// Runs the program with nothing on standard input.
    pub fn run(&self, arguments: &[&str]) -> Run {
        self.run_with(arguments, b"")
    }

    /// Runs the program with this on standard input.
    pub fn run_with(&self, arguments: &[&str], input: &[u8]) -> Run {
        let mut child = self
            .command(arguments)
            .stdin(Stdio::piped())
            .stdout(Stdio::piped())
            .stderr(Stdio::piped())
            .spawn()
            .expect("the program starts");
        let mut stdin = child.stdin.take().expect("standard input is piped");
        // A program that does not read its input has closed it; that is for the test to judge.
        let _ = stdin.write_all(input);
        drop(stdin);
        let done = child.wait_with_output().expect("the program ends");
        Run {
            out: String::from_utf8(done.stdout).expect("output is UTF-8"),
            err: String::from_utf8(done.stderr).expect("messages are UTF-8"),
            status: done.status.code().expect("the program ends by itself"),
        }
    }
}

impl Drop for Scratch {
    fn drop(&mut self) {
        // What is left behind lies in the build folder and harms nobody.
        let _ = fs::remove_dir_all(&self.path);
    }
}

impl Run {
    /// Compares all three at once.
    #[track_caller]
    pub fn is(&self, out: &str, err: &str, status: i32) {
        let wanted = Run {
            out: out.into(),
            err: err.into(),
            status,
        };
        assert!(*self == wanted, "wanted {wanted:#?}\nbut got {self:#?}");
    }
}

/// Splits a command line at its spaces; `'…'` and `"…"` keep words together.
pub fn words(line: &str) -> Vec<String> {
    let mut words = Vec::new();
    let mut word: Option<String> = None;
    let mut quote: Option<char> = None;
    for c in line.chars() {
        match (quote, c) {
            (Some(q), c) if c == q => quote = None,
            (None, '\'' | '"') => {
                quote = Some(c);
                word.get_or_insert_default();
            }
            (None, c) if c.is_whitespace() => words.extend(word.take()),
            (_, c) => word.get_or_insert_default().push(c),
        }
    }
    words.extend(word);
    words
}
