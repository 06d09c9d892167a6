//! Works on many inputs at once and writes what comes out in the order of the inputs, each as
//! soon as everything before it has been written.

use super::guard::guarded;
use super::inputs::Input;
use super::{Refused, Status, complain};
use crate::judge::{self, Counts};
use crate::readers::Unreadable;
use crate::reports::{Entry, Report, Tally};
use crate::statements::Grammar;
use std::collections::BTreeMap;
use std::io::Write;
use std::sync::{Arc, mpsc};

/// Deeply nested documents need more than the usual two megabytes.
const STACK: usize = 16 << 20;

/// Everything that a run needs.
pub struct Work {
    pub inputs: Vec<Input>,
    pub options: judge::Options,
    pub grammar: &'static Grammar,
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

/// Works on all inputs.
pub fn all(work: Work) -> Result<Status, Refused> {
    let pool = rayon::ThreadPoolBuilder::new()
        .num_threads(work.jobs)
        .stack_size(STACK)
        .build()
        .map_err(|e| Refused(format!("threads cannot be started ({e}); try --jobs 1")))?;
    let work = Arc::new(work);
    let (sender, receiver) = mpsc::channel();
    for at in 0..work.inputs.len() {
        let (work, sender) = (Arc::clone(&work), sender.clone());
        pool.spawn_fifo(move || {
            let done = work.on(&work.inputs[at]);
            // Nobody listens any more once the output has been closed.
            let _ = sender.send((at, done));
        });
    }
    drop(sender);
    match put_in_order(&work, receiver) {
        Ok(tally) => Ok(tally.into()),
        Err((tally, e)) => {
            // `tieout … | head` closes the pipe when it has seen enough. Work that is under way is
            // not waited for: it ends with the process.
            std::mem::forget(pool);
            cannot_write(&e)?;
            Ok(tally.into())
        }
    }
}

impl Work {
    fn on(&self, input: &Input) -> Done {
        let name = input.name();
        let done = guarded(|| {
            let manuscript = input.read()?;
            let document = if self.read_only {
                judge::Document {
                    manuscript,
                    statements: Vec::new(),
                    findings: Vec::new(),
                }
            } else {
                crate::examine(manuscript, self.grammar, &self.options)
            };
            let counts = document.counts();
            let entry = Entry {
                name: name.clone(),
                outcome: Ok(document),
            };
            Ok((self.report.entry(&entry), counts))
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
                    text: self.report.entry(&entry),
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
