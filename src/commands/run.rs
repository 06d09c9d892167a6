//! Works on many inputs at once and writes what comes out in the order of the inputs, each as
//! soon as everything before it has been written.

use super::inputs::Input;
use super::{Refused, Status, complain, grammar};
use crate::judge::{self, Counts};
use crate::readers::Unreadable;
use crate::readers::contained::{Limits, Pool};
use crate::readers::guard::guarded;
use crate::reports::{Entry, Report, Tally};
use crate::statements::Grammar;
use std::collections::BTreeMap;
use std::io::Write;
use std::path::{Path, PathBuf};
use std::sync::{Arc, OnceLock, mpsc};

/// Deeply nested documents need more than the usual two megabytes.
const STACK: usize = 16 << 20;

/// Everything that a run needs.
pub struct Work {
    pub inputs: Vec<Input>,
    pub options: judge::Options,
    /// Files of further ways to write results.
    pub grammars: Vec<PathBuf>,
    pub report: Box<dyn Report>,
    /// Only the text as read is wanted; nothing is looked for in it.
    pub read_only: bool,
    /// Threads; 0 is one per processor core.
    pub jobs: usize,
}

/// One input, done: what is left of it once its text has been made.
struct Done {
    text: String,
    counts: Option<Counts>,
    /// Why it could not be read.
    trouble: Option<Unreadable>,
}

/// What the threads share.
struct Shop {
    work: Work,
    readers: Pool,
    /// Reading begins before the grammar is there; nothing, if it never will be.
    grammar: OnceLock<Option<&'static Grammar>>,
}

/// Works on all inputs.
pub fn all(work: Work) -> Result<Status, Refused> {
    let threads = rayon::ThreadPoolBuilder::new()
        .num_threads(work.jobs)
        .stack_size(STACK)
        .build()
        .map_err(|e| Refused(format!("threads cannot be started ({e}); try --jobs 1")))?;
    let shop = Arc::new(Shop {
        readers: readers(threads.current_num_threads()),
        grammar: OnceLock::new(),
        work,
    });
    let (sender, receiver) = mpsc::channel();
    for at in 0..shop.work.inputs.len() {
        let (shop, sender) = (Arc::clone(&shop), sender.clone());
        threads.spawn_fifo(move || {
            let done = shop.on(&shop.work.inputs[at]);
            // Nobody listens any more once the output has been closed.
            let _ = sender.send((at, done));
        });
    }
    drop(sender);
    let grammar = grammar(&shop.work.grammars);
    let _ = shop.grammar.set(grammar.as_ref().ok().copied());
    let ended = grammar.and_then(|_| match put_in_order(&shop.work, receiver) {
        Ok(tally) => Ok(tally.into()),
        // `tieout … | head` closes the pipe when it has seen enough.
        Err((tally, e)) => cannot_write(&e).map(|()| tally.into()),
    });
    // Work that is still under way is not waited for: it ends with the process.
    std::mem::forget(threads);
    shop.readers.close();
    ended
}

/// A pool of at most so many workers, for the usual limits.
pub fn readers(most: usize) -> Pool {
    Pool::new(executable(), Limits::default(), most)
}

/// The running program, which is its own worker. If it can't be found, no worker will start, and
/// each file that needs one says so.
pub(super) fn executable() -> PathBuf {
    // On Linux this is the program itself even if its file has been replaced or removed meanwhile.
    const ITSELF: &str = "/proc/self/exe";
    if cfg!(target_os = "linux") && Path::new(ITSELF).exists() {
        return ITSELF.into();
    }
    std::env::current_exe().unwrap_or_default()
}

impl Shop {
    fn on(&self, input: &Input) -> Done {
        let name = input.name();
        let done = guarded(|| {
            let manuscript = input.read(&self.readers)?;
            let grammar = match self.grammar.wait() {
                Some(grammar) if !self.work.read_only => Some(*grammar),
                _ => None,
            };
            let document = match grammar {
                Some(grammar) => crate::examine(manuscript, grammar, &self.work.options),
                None => judge::Document {
                    manuscript,
                    statements: Vec::new(),
                    findings: Vec::new(),
                },
            };
            let counts = document.counts();
            let entry = Entry {
                name: name.clone(),
                outcome: Ok(document),
            };
            Ok((self.work.report.entry(&entry), counts))
        });
        match done {
            Ok((text, counts)) => Done {
                text,
                counts: Some(counts),
                trouble: None,
            },
            Err(reason) => {
                let entry = Entry {
                    name,
                    outcome: Err(reason.clone()),
                };
                Done {
                    text: self.work.report.entry(&entry),
                    counts: None,
                    trouble: Some(reason),
                }
            }
        }
    }
}

/// Writes everything as it comes, in order. An error says how far it got.
fn put_in_order(
    work: &Work,
    receiver: mpsc::Receiver<(usize, Done)>,
) -> Result<Tally, (Tally, std::io::Error)> {
    let mut out = std::io::stdout().lock();
    let mut tally = Tally::default();
    let mut early = BTreeMap::new();
    let mut next = 0;
    let mut between = "";
    out.write_all(work.report.opening().as_bytes())
        .map_err(|e| (tally, e))?;
    for (at, done) in receiver {
        early.insert(at, done);
        while let Some(done) = early.remove(&next) {
            tally.add(done.counts);
            if let Some(reason) = done.trouble {
                complain(&format!("{}: {reason}", spoken(&work.inputs[next])));
            }
            if !done.text.is_empty() {
                let text = [between, &done.text].concat();
                between = work.report.between();
                out.write_all(text.as_bytes())
                    .and_then(|()| out.flush())
                    .map_err(|e| (tally, e))?;
            }
            next += 1;
        }
    }
    let closing = work.report.closing(&tally);
    out.write_all(closing.as_bytes())
        .and_then(|()| out.flush())
        .map_err(|e| (tally, e))?;
    Ok(tally)
}

/// The name of an input in a message to a person.
fn spoken(input: &Input) -> String {
    match input {
        Input::Piped | Input::PipedText => "standard input".into(),
        Input::Typed(_) => "the typed text".into(),
        _ => input.name(),
    }
}

/// Writes to standard output. A reader that has seen enough is no trouble.
pub fn write(bytes: &[u8]) -> Result<(), Refused> {
    let mut out = std::io::stdout().lock();
    match out.write_all(bytes).and_then(|()| out.flush()) {
        Ok(()) => Ok(()),
        Err(e) => cannot_write(&e),
    }
}

/// An error while writing is refused, unless it only means that the reader has seen enough.
fn cannot_write(error: &std::io::Error) -> Result<(), Refused> {
    if error.kind() == std::io::ErrorKind::BrokenPipe {
        return Ok(());
    }
    Err(Refused(format!(
        "the output cannot be written ({error}); check the disk and the permissions"
    )))
}
