//! Files of binary formats (PDF, Word, OpenDocument) are not trusted: they come from strangers, and
//! a few bytes of them can overflow a stack, fill the memory or loop without end. They are read
//! *contained*: in a worker, a process of our own executable that may be lost.
//!
//! The [`Pool`] keeps the workers and lends each to one file at a time; a worker reads many files,
//! so that no file pays for the start of a process. What may go wrong with a worker becomes one
//! [`Unreadable`](super::Unreadable) line of that file:
//!
//! | the file | is noticed by | the line speaks of |
//! |---|---|---|
//! | overflows the stack, aborts | the end of the worker | a crash |
//! | takes too much memory | [`memory`], by counting; the system, by a limit on addresses | memory |
//! | loops | the pool, which kills the worker | seconds |
//! | makes too much text | the worker, and again the pool | text |
//!
//! [`Limits`] holds the figures. [`messages`] is what the two sides say to each other through pipes,
//! [`worker`] the inside of the process, [`process`] its outside. When the program ends, however it
//! ends, the pipes close, and a worker whose pipe is closed ends too, even in the midst of a file.
//!
//! A PDF that defeats the first engine, even by a crash, is given to a worker once more, for the
//! second one ([`Way::Rescue`](super::Way)).

mod limits;
pub mod memory;
mod messages;
mod pool;
mod process;
pub mod worker;

pub use limits::Limits;
pub use pool::Pool;
