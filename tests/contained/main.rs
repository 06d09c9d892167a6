//! Files that nobody should trust: whatever they do, it costs one line, and never the program, the
//! memory of the machine, or another file.

mod craft;
mod crafted;
#[path = "../helper/mod.rs"]
mod helper;
mod protected;
mod same;
#[cfg(target_os = "linux")]
mod workers;

use std::path::Path;
use std::time::Duration;
use tieout::readers::contained::{Limits, Pool};

/// A pool with one worker of the real program.
fn pool(limits: Limits) -> Pool {
    Pool::new(env!("CARGO_BIN_EXE_tieout"), limits, 1)
}

/// Little enough to be reached soon, even where everything is slow.
fn small() -> Limits {
    Limits {
        memory: 128 << 20,
        time: Duration::from_secs(120),
        ..Limits::default()
    }
}

/// What is read of a file: its text, or the reason why there is none.
fn text(pool: &Pool, bytes: Vec<u8>, name: &str) -> Result<String, String> {
    match pool.read_bytes(bytes, Path::new(name)) {
        Ok(manuscript) => Ok(manuscript.text.trim().to_string()),
        Err(reason) => Err(reason.0),
    }
}
