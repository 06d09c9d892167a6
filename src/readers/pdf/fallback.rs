//! The second engine, for files that the first one can't open. It reads some of them, but it may
//! panic, overflow its stack, loop or fill the memory, so it only ever runs in a process of its
//! own: the same executable, called with a hidden argument, fed through a pipe, and killed when its
//! time is up.

use std::io::{Read, Write};
use std::path::PathBuf;
use std::process::{Child, Command, Stdio};
use std::time::{Duration, Instant};

/// The hidden argument by which the executable becomes the worker.
pub const WORKER: &str = "worker-pdf";
/// Names the executable to call instead of the running one; for tests and for programs that use
/// the library.
pub const EXECUTABLE: &str = "TIEOUT_WORKER";
/// Separates the pages in the worker's answer.
const PAGE_END: char = '\u{c}';
const PATIENCE: Duration = Duration::from_secs(30);
/// The longest answer, in bytes.
const LONGEST: u64 = 64 << 20;

/// The text of each page as the second engine sees it, or `None` when it fails too.
pub fn pages(bytes: &[u8]) -> Option<Vec<String>> {
    pages_with(executable()?, bytes)
}

/// The executable that can be the worker. The running one is only trusted to be if it is called
/// what the program is called: the library may run inside anything.
fn executable() -> Option<PathBuf> {
    if let Some(path) = std::env::var_os(EXECUTABLE) {
        return Some(PathBuf::from(path));
    }
    let own = std::env::current_exe().ok()?;
    (own.file_stem()? == "tieout").then_some(own)
}

fn pages_with(executable: PathBuf, bytes: &[u8]) -> Option<Vec<String>> {
    let mut child = Command::new(executable)
        .arg(WORKER)
        .stdin(Stdio::piped())
        .stdout(Stdio::piped())
        .stderr(Stdio::null())
        .spawn()
        .ok()?;
    let (mut to, from) = (child.stdin.take()?, child.stdout.take()?);
    let bytes = bytes.to_vec();
    // Both ends of the pipe are served by threads, so that waiting can end whatever the child does;
    // they end with the child, as that closes the pipes.
    let writer = std::thread::spawn(move || {
        // A worker that fails early stops reading: its answer tells.
        let _ = to.write_all(&bytes);
    });
    let reader = std::thread::spawn(move || {
        let mut answer = Vec::new();
        // What was read before an error is judged below.
        let _ = from.take(LONGEST).read_to_end(&mut answer);
        answer
    });
    let good = wait(&mut child, PATIENCE);
    let _ = writer.join();
    let answer = String::from_utf8(reader.join().ok()?).ok()?;
    if !good || answer.trim().is_empty() {
        return None;
    }
    Some(answer.split_terminator(PAGE_END).map(str::to_string).collect())
}

/// Waits for the child; kills it when it takes too long.
fn wait(child: &mut Child, patience: Duration) -> bool {
    let end = Instant::now() + patience;
    loop {
        match child.try_wait() {
            Ok(Some(status)) => return status.success(),
            Ok(None) if Instant::now() < end => std::thread::sleep(Duration::from_millis(5)),
            _ => {
                // It may have ended in the meantime; then there is nothing to kill.
                let _ = child.kill();
                let _ = child.wait();
                return false;
            }
        }
    }
}

/// The inside of the worker process.
pub mod worker {
    use super::{LONGEST, PAGE_END};
    use std::io::{Read, Write};
    use std::process::ExitCode;

    /// Memory the worker may take, in bytes.
    #[cfg(unix)]
    const MEMORY: u64 = 2 << 30;
    /// Seconds of computing the worker may take.
    #[cfg(unix)]
    const SECONDS: u64 = 30;

    /// Reads a PDF from standard input and writes the text of its pages, each ended by a form feed,
    /// to standard output. The executable calls this, and nothing else, when its only argument is
    /// [`WORKER`](super::WORKER).
    pub fn run() -> ExitCode {
        limit();
        std::panic::set_hook(Box::new(|_| {}));
        let mut bytes = Vec::new();
        if std::io::stdin()
            .lock()
            .take(crate::readers::LARGEST_FILE)
            .read_to_end(&mut bytes)
            .is_err()
        {
            return ExitCode::from(2);
        }
        let Ok(Ok(pages)) = std::panic::catch_unwind(|| pdf_extract::extract_text_from_mem_by_pages(&bytes))
        else {
            return ExitCode::FAILURE;
        };
        let mut out = std::io::stdout().lock();
        let mut left = LONGEST as usize;
        for page in pages {
            if page.len() >= left {
                break;
            }
            left -= page.len() + 1;
            let page = page.replace(PAGE_END, " ");
            if write!(out, "{page}{PAGE_END}").is_err() {
                return ExitCode::FAILURE;
            }
        }
        if out.flush().is_err() {
            ExitCode::FAILURE
        } else {
            ExitCode::SUCCESS
        }
    }

    #[cfg(unix)]
    fn limit() {
        use rustix::process::{Resource, Rlimit, setrlimit};
        let at = |n| Rlimit {
            current: Some(n),
            maximum: Some(n),
        };
        // Where the system refuses, the time limit of the caller still holds.
        let _ = setrlimit(Resource::As, at(MEMORY));
        let _ = setrlimit(Resource::Cpu, at(SECONDS));
        let _ = setrlimit(Resource::Core, at(0));
    }

    #[cfg(not(unix))]
    fn limit() {}
}

#[cfg(test)]
mod tests {
    use super::super::sample::{at, content, pdf};
    use super::*;

    /// The worker is an executable that unit tests can't build; they use the one they are told of.
    #[test]
    fn the_second_engine_answers_from_a_process_of_its_own() {
        let Some(worker) = std::env::var_os(EXECUTABLE) else {
            eprintln!("skipped: {EXECUTABLE} names no executable");
            return;
        };
        let pages = [
            content(&[at(50.0, 700.0, "Watered more often, p = .023.")]),
            content(&[at(50.0, 700.0, "And on the next page.")]),
        ];
        let good = pages_with(worker.clone().into(), &pdf(&pages, "")).expect("a whole file is read");
        assert_eq!(good.len(), 2, "{good:?}");
        assert!(good[0].contains("p = .023") && good[1].contains("next page"));
        assert_eq!(pages_with(worker.into(), b"%PDF-1.4 nothing behind it"), None);
    }

    #[test]
    fn a_worker_that_does_not_end_is_killed() {
        let Ok(mut child) = Command::new("sleep").arg("60").spawn() else {
            eprintln!("skipped: no program to wait for");
            return;
        };
        let start = Instant::now();
        assert!(!wait(&mut child, Duration::from_millis(50)));
        assert!(start.elapsed() < Duration::from_secs(20));
    }

    #[test]
    fn a_missing_executable_is_no_panic() {
        assert_eq!(pages_with("no/such/executable".into(), b"%PDF-1.4"), None);
    }
}
