//! The inside of a worker. One thread listens to the pool, another reads; so a worker knows at once
//! when the pool is gone, even while it reads a file that never ends.

use super::messages::{self, Answer, LARGEST_TASK, Said, Task};
use super::{Limits, memory};
use crate::readers::guard::guarded;
use crate::readers::{self, Failure};
use std::fs::File;
use std::io::{self, Write};
use std::path::Path;
use std::process::ExitCode;
use std::sync::mpsc::{Receiver, sync_channel};

/// The argument by which the executable becomes a worker.
pub const COMMAND: &str = "worker";

/// Documents may be nested a thousand levels deep, and each level takes some kilobytes of stack.
const STACK: usize = 256 << 20;

/// Reads files for the pool at the other end of standard input and output, until it is gone.
pub fn run() -> ExitCode {
    match serve() {
        Ok(()) => ExitCode::SUCCESS,
        Err(_) => ExitCode::FAILURE,
    }
}

/// Ends when the pool is gone, and the process with it, whatever the other thread is doing.
fn serve() -> io::Result<()> {
    let to_pool = answers()?;
    let mut from_pool = io::stdin().lock();
    let limits: Limits = messages::read(&mut from_pool, LARGEST_TASK)?;
    limit_addresses(&limits);
    let notice = messages::encoded(&Answer {
        said: Said::MemoryRefused,
        peak: limits.memory,
    })?;
    memory::watch(limits.memory, to_pool.try_clone()?, notice);
    let (send, tasks) = sync_channel(1);
    std::thread::Builder::new()
        .name("reading".into())
        .stack_size(STACK)
        .spawn(move || {
            // Without a way to answer there is nothing left to do.
            if read_all(&tasks, to_pool, limits).is_err() {
                std::process::exit(1);
            }
        })?;
    while let Ok(task) = messages::read::<Task>(&mut from_pool, LARGEST_TASK) {
        let bytes = messages::read_bytes(&mut from_pool, task.size)?;
        send.send((task, bytes)).map_err(io::Error::other)?;
    }
    Ok(())
}

fn read_all(tasks: &Receiver<(Task, Vec<u8>)>, mut to_pool: File, limits: Limits) -> io::Result<()> {
    for (task, bytes) in tasks {
        memory::begin_file();
        let said = read(&task, bytes);
        let answer = |said| {
            messages::encoded(&Answer {
                said,
                peak: memory::peak(),
            })
        };
        let mut message = answer(said)?;
        if message.len() as u64 > limits.output {
            message = answer(Said::TooLarge)?;
        }
        to_pool.write_all(&message)?;
    }
    Ok(())
}

fn read(task: &Task, bytes: Vec<u8>) -> Said {
    let result = guarded(
        || match readers::read_this_way(&bytes, Path::new(&task.name), task.way) {
            Ok(manuscript) => Ok(Some(manuscript)),
            Err(Failure::TryRescue) => Ok(None),
            Err(Failure::Unreadable(reason)) => Err(reason),
        },
    );
    match result {
        Ok(Some(manuscript)) => Said::Manuscript(Box::new(manuscript)),
        Ok(None) => Said::TryRescue,
        Err(reason) => Said::Unreadable(reason.0),
    }
}

/// The way to the pool. What libraries print on standard output goes nowhere from here on: it would
/// stand in the midst of the answers.
#[cfg(unix)]
fn answers() -> io::Result<File> {
    use std::os::fd::AsFd;
    let to_pool = io::stdout().as_fd().try_clone_to_owned()?;
    rustix::stdio::dup2_stdout(File::options().write(true).open("/dev/null")?)?;
    Ok(File::from(to_pool))
}

/// The way to the pool. Here a library that prints on standard output spoils the answer on the file
/// that makes it print.
#[cfg(windows)]
fn answers() -> io::Result<File> {
    use std::os::windows::io::AsHandle;
    Ok(File::from(io::stdout().as_handle().try_clone_to_owned()?))
}

/// Where the system refuses a limit, the others still hold.
#[cfg(unix)]
fn limit_addresses(limits: &Limits) {
    use rustix::process::{Resource, Rlimit, setrlimit};
    let at = |n| Rlimit {
        current: Some(n),
        maximum: Some(n),
    };
    let addresses = limits.memory.saturating_add(Limits::STACKS_AND_PROGRAM);
    let _ = setrlimit(Resource::As, at(addresses));
    // A crash leaves no copy of a confidential manuscript behind.
    let _ = setrlimit(Resource::Core, at(0));
}

#[cfg(not(unix))]
fn limit_addresses(_: &Limits) {}
