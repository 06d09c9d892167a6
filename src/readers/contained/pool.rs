//! The *pool* lends workers to files.

use super::Limits;
use super::messages::{Answer, LARGEST_TASK, Said, Task};
use super::process::{Loss, Process};
use crate::manuscript::Manuscript;
use crate::readers::detect::{self, Opaque};
use crate::readers::package::SAVE_AGAIN;
use crate::readers::{self, Unreadable, Way, pdf};
use std::path::{Path, PathBuf};
use std::sync::{Arc, Condvar, Mutex, MutexGuard, PoisonError};
use std::time::Instant;

/// Workers, started when they are first needed.
pub struct Pool {
    executable: PathBuf,
    limits: Limits,
    most: usize,
    workers: Mutex<Workers>,
    returned: Condvar,
}

#[derive(Default)]
struct Workers {
    idle: Vec<Process>,
    busy: usize,
    started: u64,
}

impl Pool {
    /// A pool of at most `most` workers, each a process of `executable`, which must be tieout: called
    /// with the argument [`COMMAND`](super::worker::COMMAND) it does [`run`](super::worker::run).
    pub fn new(executable: impl Into<PathBuf>, limits: Limits, most: usize) -> Pool {
        Pool {
            executable: executable.into(),
            limits,
            most: most.max(1),
            workers: Mutex::default(),
            returned: Condvar::new(),
        }
    }

    /// Reads the file at `path`, contained if its format is binary.
    ///
    /// # Errors
    /// One line for the person, without the name of the file.
    pub fn read_file(&self, path: &Path) -> Result<Manuscript, Unreadable> {
        self.read_bytes(readers::load(path)?, path)
    }

    /// Reads a document already in memory, contained if its format is binary; `path` is what
    /// [`readers::read_bytes`] needs it for.
    ///
    /// # Errors
    /// As [`Pool::read_file`].
    pub fn read_bytes(&self, bytes: Vec<u8>, path: &Path) -> Result<Manuscript, Unreadable> {
        let Some(kind) = detect::opaque(&bytes) else {
            return readers::read_bytes(&bytes, path);
        };
        let (bytes, name) = (Arc::new(bytes), task_name(path));
        let mut place = self.place();
        let end = Instant::now() + self.limits.time;
        let mut ask = |way| self.ask(&mut place, way, &name, &bytes, end);
        match (ask(Way::Usual), kind) {
            (Ok(Said::Manuscript(manuscript)), _) => Ok(*manuscript),
            (Ok(Said::Unreadable(reason)), _) => Err(Unreadable(reason)),
            // Whatever the second engine trips over, the file is damaged: the first has said so.
            (Ok(Said::TryRescue), _) => {
                rescued(ask(Way::Rescue)).unwrap_or_else(|| Err(pdf::hopeless(&bytes)))
            }
            (Err(Lost::How(Loss::Crash)), Opaque::Pdf) => {
                rescued(ask(Way::Rescue)).unwrap_or_else(|| Err(self.says(Loss::Crash, kind)))
            }
            (Ok(Said::TooLarge), _) => Err(self.says(Loss::Output, kind)),
            // The hint alone is no answer.
            (Ok(Said::MemoryRefused), _) => Err(self.says(Loss::Memory, kind)),
            (Err(Lost::How(loss)), _) => Err(self.says(loss, kind)),
            (Err(Lost::NotStarted(e)), _) => Err(Unreadable::new(format!(
                "cannot be read now: the process that reads it cannot be started ({e}); try again"
            ))),
        }
    }

    /// Ends all workers that are idle. They would end with the program, but a moment later.
    pub fn close(&self) {
        let idle = std::mem::take(&mut self.workers().idle);
        drop(idle);
    }

    /// How many workers have been started so far: those still there, those lost, those retired.
    pub fn started(&self) -> u64 {
        self.workers().started
    }

    /// Waits until one more worker may be busy.
    fn place(&self) -> Place<'_> {
        let full = |w: &mut Workers| w.busy >= self.most;
        let mut workers = self
            .returned
            .wait_while(self.workers(), full)
            .unwrap_or_else(PoisonError::into_inner);
        workers.busy += 1;
        Place {
            pool: self,
            worker: None,
        }
    }

    fn ask(
        &self,
        place: &mut Place<'_>,
        way: Way,
        name: &str,
        bytes: &Arc<Vec<u8>>,
        end: Instant,
    ) -> Result<Said, Lost> {
        let worker = match &mut place.worker {
            Some(worker) => worker,
            None => place.worker.insert(self.worker().map_err(Lost::NotStarted)?),
        };
        let task = Task {
            way,
            name: name.to_string(),
            size: bytes.len() as u64,
        };
        match worker.ask(task, Arc::clone(bytes), end) {
            Ok(Answer { said, peak }) => {
                if peak > self.limits.retire_above {
                    place.worker = None;
                }
                Ok(said)
            }
            Err(loss) => {
                place.worker = None;
                Err(Lost::How(loss))
            }
        }
    }

    /// A worker that is alive: an idle one, or a new one.
    fn worker(&self) -> std::io::Result<Process> {
        loop {
            let idle = self.workers().idle.pop();
            let Some(mut worker) = idle else {
                let new = Process::start(&self.executable, self.limits)?;
                self.workers().started += 1;
                return Ok(new);
            };
            if worker.is_alive() {
                return Ok(worker);
            }
        }
    }

    fn workers(&self) -> MutexGuard<'_, Workers> {
        // Nobody panics between two changes that belong together.
        self.workers.lock().unwrap_or_else(PoisonError::into_inner)
    }

    /// What the person is told when a worker was lost.
    fn says(&self, loss: Loss, kind: Opaque) -> Unreadable {
        let again = match kind {
            Opaque::Pdf => "print it to a new PDF and read that",
            Opaque::Zip => SAVE_AGAIN,
        };
        let limits = &self.limits;
        Unreadable::new(match loss {
            Loss::Crash => format!("is damaged in such a way that reading it crashes; {again}"),
            Loss::Memory => format!(
                "needs more than {} MB of memory to be read; {again}",
                limits.memory >> 20
            ),
            Loss::Time => format!(
                "takes more than {} seconds to be read; {again}",
                limits.time.as_secs()
            ),
            Loss::Output => format!("makes more than {} MB of text; split it", limits.output >> 20),
            Loss::Killed => {
                "was not read: the process that read it was killed from outside, perhaps for want \
                             of memory; close other programs and try again"
                    .to_string()
            }
        })
    }
}

impl Drop for Pool {
    fn drop(&mut self) {
        self.close();
    }
}

/// Why there is no answer.
enum Lost {
    How(Loss),
    NotStarted(std::io::Error),
}

/// One of the places for busy workers; given back when dropped, with the worker if it is still good.
struct Place<'p> {
    pool: &'p Pool,
    worker: Option<Process>,
}

impl Drop for Place<'_> {
    fn drop(&mut self) {
        let mut workers = self.pool.workers();
        workers.busy -= 1;
        workers.idle.extend(self.worker.take());
        drop(workers);
        self.pool.returned.notify_one();
    }
}

/// What the second way brought, unless it failed too.
fn rescued(answer: Result<Said, Lost>) -> Option<Result<Manuscript, Unreadable>> {
    match answer {
        Ok(Said::Manuscript(manuscript)) => Some(Ok(*manuscript)),
        Ok(Said::Unreadable(reason)) => Some(Err(Unreadable(reason))),
        _ => None,
    }
}

/// The end of a file's name: its extension is all that matters, and a task has a largest size.
fn task_name(path: &Path) -> String {
    let name = path.file_name().unwrap_or_default().to_string_lossy();
    let mut from = name.len().saturating_sub(LARGEST_TASK as usize / 2);
    while !name.is_char_boundary(from) {
        from += 1;
    }
    name[from..].to_string()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_worker_that_cannot_be_started_is_one_line() {
        let pool = Pool::new("no/such/executable", Limits::default(), 1);
        for _ in 0..2 {
            let reason = pool
                .read_bytes(b"%PDF-1.4".to_vec(), Path::new("a.pdf"))
                .expect_err("no worker");
            assert!(
                reason
                    .0
                    .starts_with("cannot be read now: the process that reads it cannot be started ("),
                "{reason}"
            );
        }
    }

    #[test]
    fn text_needs_no_worker() {
        let pool = Pool::new("no/such/executable", Limits::default(), 1);
        let text = b"Beds differed, t(28) = 2.20, p = .036.".to_vec();
        assert!(pool.read_bytes(text, Path::new("a.txt")).is_ok());
    }

    /// A program that is no worker: it repeats what it is told, or ends at once.
    #[cfg(unix)]
    #[test]
    fn nonsense_and_silence_are_crashes() {
        for program in ["cat", "true"] {
            let pool = Pool::new(program, Limits::default(), 1);
            let reason = pool
                .read_bytes(b"PK\x03\x04".to_vec(), Path::new("a.docx"))
                .expect_err("no worker");
            assert_eq!(
                reason.0,
                format!("is damaged in such a way that reading it crashes; {SAVE_AGAIN}"),
                "{program}"
            );
        }
    }

    #[test]
    fn long_names_keep_their_extension() {
        let name = task_name(Path::new(&format!("plots/{}.pdf", "ß".repeat(50_000))));
        assert!(name.len() <= LARGEST_TASK as usize / 2 && name.ends_with(".pdf"));
        assert_eq!(task_name(Path::new("")), "");
    }
}
