//! A *guard* lets an engine loose on a file that may be damaged on purpose: on a thread of its own
//! with a large stack, with panics caught and their messages kept off the screen, and with a
//! patience that ends.

use std::cell::Cell;
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::sync::Once;
use std::sync::mpsc::{RecvTimeoutError, sync_channel};
use std::time::Duration;

/// Nested forms go fifty levels deep, and each level takes some kilobytes in a debug build.
const STACK: usize = 256 << 20;

/// How a guarded job ended without a result.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Mishap {
    Panicked,
    /// Still at work when patience ended. The thread is left behind: it can't be stopped from outside.
    TooLong,
    /// The system gave no thread.
    NoThread,
}

thread_local! {
    static QUIET: Cell<bool> = const { Cell::new(false) };
}

/// Panics of guarded threads print nothing; all others go to the hook that was there before.
fn hush() {
    static ONCE: Once = Once::new();
    ONCE.call_once(|| {
        let before = std::panic::take_hook();
        std::panic::set_hook(Box::new(move |info| {
            if !QUIET.with(Cell::get) {
                before(info);
            }
        }));
    });
}

/// Runs the job and waits for it at most this long.
pub fn run<T: Send + 'static>(
    patience: Duration,
    job: impl FnOnce() -> T + Send + 'static,
) -> Result<T, Mishap> {
    hush();
    let (send, receive) = sync_channel(1);
    std::thread::Builder::new()
        .name("pdf".into())
        .stack_size(STACK)
        .spawn(move || {
            QUIET.with(|q| q.set(true));
            let result = catch_unwind(AssertUnwindSafe(job));
            // Nobody listens any more when patience has ended.
            let _ = send.send(result.map_err(|_| Mishap::Panicked));
        })
        .map_err(|_| Mishap::NoThread)?;
    match receive.recv_timeout(patience) {
        Ok(result) => result,
        Err(RecvTimeoutError::Timeout) => Err(Mishap::TooLong),
        Err(RecvTimeoutError::Disconnected) => Err(Mishap::Panicked),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn results_panics_and_endless_work_come_back() {
        let long = Duration::from_secs(20);
        assert_eq!(run(long, || 7), Ok(7));
        assert_eq!(
            run(long, || -> u8 { panic!("kept quiet") }),
            Err(Mishap::Panicked)
        );
        let short = Duration::from_millis(20);
        assert_eq!(
            run(short, || std::thread::sleep(Duration::from_millis(400))),
            Err(Mishap::TooLong)
        );
    }
}
