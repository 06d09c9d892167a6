//! A *process* is a worker seen from outside: it is started, asked, and ended.

use super::Limits;
use super::messages::{self, Answer, Said, Task};
use super::worker::COMMAND;
use std::io::ErrorKind;
use std::path::Path;
use std::process::{Child, ChildStdin, ChildStdout, Command, ExitStatus, Stdio};
use std::sync::mpsc::{Receiver, RecvTimeoutError, Sender, channel};
use std::sync::{Arc, Mutex, PoisonError};
use std::time::{Duration, Instant};

/// How a worker was lost.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Loss {
    /// It ended by itself, or spoke nonsense.
    Crash,
    /// It ended after memory had been refused to it.
    Memory,
    /// It was killed because its time was up.
    Time,
    /// Its answer was larger than allowed.
    Output,
    /// Somebody else killed it: the system, when it is short of memory, or a person.
    Killed,
}

/// A running worker. It is killed when this is dropped.
pub struct Process {
    child: Child,
    tasks: Sender<(Task, Arc<Vec<u8>>)>,
    answers: Receiver<Heard>,
}

/// What came through the pipe for one task.
enum Heard {
    Answer(Answer),
    Nothing { memory_refused: bool, too_large: bool },
}

impl Process {
    /// Starts a worker.
    pub fn start(executable: &Path, limits: Limits) -> std::io::Result<Process> {
        let mut command = Command::new(executable);
        // A worker reads one file at a time; threads of libraries would only cost memory.
        command.arg(COMMAND).env("RAYON_NUM_THREADS", "1");
        #[cfg(unix)]
        std::os::unix::process::CommandExt::arg0(&mut command, "tieout");
        command
            .stdin(Stdio::piped())
            .stdout(Stdio::piped())
            .stderr(Stdio::null());
        let (mut child, to, from) = {
            // One start at a time: on some systems a process could else inherit the pipes of another
            // that is just being started, and then would not notice that the pool is gone.
            static STARTING: Mutex<()> = Mutex::new(());
            let _one = STARTING.lock().unwrap_or_else(PoisonError::into_inner);
            let mut child = command.spawn()?;
            let pipes = (child.stdin.take(), child.stdout.take());
            (child, pipes.0, pipes.1)
        };
        let (Some(to), Some(from)) = (to, from) else {
            kill(&mut child);
            return Err(ErrorKind::BrokenPipe.into());
        };
        let (tasks, to_do) = channel();
        let (say, answers) = channel();
        // The thread may hang in a pipe as long as the worker lives; whoever asks does not.
        let talking = std::thread::Builder::new()
            .name("worker's pipes".into())
            .spawn(move || talk(to, from, limits, &to_do, &say));
        if let Err(e) = talking {
            kill(&mut child);
            return Err(e);
        }
        Ok(Process {
            child,
            tasks,
            answers,
        })
    }

    /// Whether it is still there.
    pub fn is_alive(&mut self) -> bool {
        matches!(self.child.try_wait(), Ok(None))
    }

    /// Lets the worker read a file; after a [`Loss`] it can't be used any more.
    pub fn ask(&mut self, task: Task, bytes: Arc<Vec<u8>>, end_of_time: Instant) -> Result<Answer, Loss> {
        if self.tasks.send((task, bytes)).is_err() {
            return Err(Loss::Crash);
        }
        let patience = end_of_time.saturating_duration_since(Instant::now());
        match self.answers.recv_timeout(patience) {
            Ok(Heard::Answer(answer)) => Ok(answer),
            Ok(Heard::Nothing { too_large: true, .. }) => Err(Loss::Output),
            Ok(Heard::Nothing { memory_refused, .. }) => Err(match ended(&mut self.child) {
                _ if memory_refused => Loss::Memory,
                Some(status) if killed_by_others(status) => Loss::Killed,
                _ => Loss::Crash,
            }),
            Err(RecvTimeoutError::Timeout) => Err(Loss::Time),
            Err(RecvTimeoutError::Disconnected) => Err(Loss::Crash),
        }
    }
}

impl Drop for Process {
    fn drop(&mut self) {
        kill(&mut self.child);
    }
}

/// A worker that has closed its pipe is about to end by itself: how, is worth waiting for.
const LAST_MOMENTS: Duration = Duration::from_secs(1);

/// How a worker ended that has closed its pipe.
fn ended(child: &mut Child) -> Option<ExitStatus> {
    let end = Instant::now() + LAST_MOMENTS;
    while Instant::now() < end {
        match child.try_wait() {
            Ok(None) => std::thread::sleep(Duration::from_micros(200)),
            Ok(status) => return status,
            Err(_) => break,
        }
    }
    kill(child);
    None
}

/// Leaves no zombie. If the process has ended already, nothing is killed.
fn kill(child: &mut Child) {
    let _ = child.kill();
    let _ = child.wait();
}

#[cfg(unix)]
fn killed_by_others(status: ExitStatus) -> bool {
    use std::os::unix::process::ExitStatusExt;
    // SIGKILL and SIGTERM: no program does that to itself, and we have not done it yet.
    matches!(status.signal(), Some(9 | 15))
}

#[cfg(not(unix))]
fn killed_by_others(_: ExitStatus) -> bool {
    false
}

/// Carries tasks to the worker and answers back, until either side is gone.
fn talk(
    mut to: ChildStdin,
    mut from: ChildStdout,
    limits: Limits,
    to_do: &Receiver<(Task, Arc<Vec<u8>>)>,
    say: &Sender<Heard>,
) {
    // If it can't be written, the first task won't either.
    let _ = messages::encoded(&limits).and_then(|m| std::io::Write::write_all(&mut to, &m));
    for (task, bytes) in to_do {
        // A worker may end before it has taken everything, and have said why: that is read below.
        let _ = messages::write_task(&mut to, &task, &bytes);
        drop(bytes);
        let mut memory_refused = false;
        let heard = loop {
            match messages::read::<Answer>(&mut from, limits.output) {
                Ok(answer) if answer.said == Said::MemoryRefused => memory_refused = true,
                Ok(answer) => break Heard::Answer(answer),
                Err(e) => {
                    break Heard::Nothing {
                        memory_refused,
                        too_large: e.kind() == ErrorKind::FileTooLarge,
                    };
                }
            }
        };
        let go_on = matches!(heard, Heard::Answer(_));
        if say.send(heard).is_err() || !go_on {
            return;
        }
    }
}
