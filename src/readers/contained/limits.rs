//! What one file may cost.

use serde::{Deserialize, Serialize};
use std::time::Duration;

/// What one file may cost. The pool tells each worker at its start.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
pub struct Limits {
    /// Bytes that a worker may have allocated at any moment, the file itself included. Counted by
    /// the program's allocator ([`Counted`](super::memory::Counted)), so it holds on every system.
    /// On Linux and most other Unix systems the kernel limits the addresses of the worker as well,
    /// to this and [`Limits::STACKS_AND_PROGRAM`] together, whoever asks for them.
    pub memory: u64,
    /// From the moment a worker is there for the file until its manuscript has arrived. Whoever
    /// takes longer is killed. All tries on one file share it.
    pub time: Duration,
    /// Bytes of a manuscript in the form in which it is handed over: its text, blocks and places.
    pub output: u64,
    /// A worker that had more bytes than this allocated while it read a file is not used again: the
    /// memory of a process seldom shrinks.
    pub retire_above: u64,
}

impl Limits {
    /// Addresses that a worker needs besides what it allocates: two large stacks, of which only
    /// what is used becomes memory, the program itself, and what the allocator holds in reserve.
    pub const STACKS_AND_PROGRAM: u64 = 1 << 30;
}

impl Default for Limits {
    fn default() -> Limits {
        Limits {
            memory: 1 << 30,
            time: Duration::from_secs(60),
            output: 128 << 20,
            retire_above: 128 << 20,
        }
    }
}
