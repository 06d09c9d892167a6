//! A *guard* lets an engine loose on a file that may be damaged on purpose: on a thread of its own
//! with a large stack, with panics caught and their messages kept off the screen.

use std::cell::Cell;
use std::sync::Once;

/// Nested forms go fifty levels deep, and each level takes some kilobytes in a debug build.
const STACK: usize = 256 << 20;

/// How a guarded job ended without a result.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Mishap {
    Panicked,
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

/// Runs the job and waits for it.
pub fn run<T: Send + 'static>(job: impl FnOnce() -> T + Send + 'static) -> Result<T, Mishap> {
    hush();
    let thread = std::thread::Builder::new()
        .name("pdf".into())
        .stack_size(STACK)
        .spawn(move || {
            QUIET.with(|q| q.set(true));
            job()
        })
        .map_err(|_| Mishap::NoThread)?;
    thread.join().map_err(|_| Mishap::Panicked)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn results_and_panics_come_back() {
        assert_eq!(run(|| 7), Ok(7));
        assert_eq!(run(|| -> u8 { panic!("kept quiet") }), Err(Mishap::Panicked));
    }
}
