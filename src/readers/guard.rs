//! The guard catches a panic in the work on one input, so that a mistake in this program, or in a
//! library that it uses, costs one line of output and not the run.

use super::Unreadable;
use std::cell::{Cell, RefCell};
use std::panic::{self, AssertUnwindSafe};
use std::sync::Once;

/// Characters of a message that are kept.
const LONGEST: usize = 60;

thread_local! {
    static GUARDED: Cell<bool> = const { Cell::new(false) };
    static SAID: RefCell<String> = const { RefCell::new(String::new()) };
}

/// Does the work; a panic in it becomes a reason why the input could not be read.
pub fn guarded<T>(work: impl FnOnce() -> Result<T, Unreadable>) -> Result<T, Unreadable> {
    static HOOK: Once = Once::new();
    HOOK.call_once(keep_guarded_panics_quiet);
    GUARDED.set(true);
    // What the work leaves half done is dropped with it; nothing else can see it.
    let done = panic::catch_unwind(AssertUnwindSafe(work));
    GUARDED.set(false);
    done.unwrap_or_else(|_| {
        let said = SAID.take();
        Err(Unreadable::new(format!(
            "could not be processed (internal error: {said}); please report it"
        )))
    })
}

/// Under guard, what a panic says is kept for the reason and not printed.
fn keep_guarded_panics_quiet() {
    let usual = panic::take_hook();
    panic::set_hook(Box::new(move |info| {
        if !GUARDED.get() {
            return usual(info);
        }
        let message = info.payload_as_str().unwrap_or("unknown");
        // A message may quote the manuscript, which is nobody's business: only its beginning is kept.
        let first_line: String = message
            .lines()
            .next()
            .unwrap_or_default()
            .chars()
            .take(LONGEST)
            .collect();
        let place = info.location().map(|l| {
            // The file alone: the folders belong to whoever built the program.
            let file = l.file().rsplit(['/', '\\']).next().unwrap_or_default();
            format!(" at {file}:{}", l.line())
        });
        let said = format!("{first_line}{}", place.unwrap_or_default());
        SAID.set(said);
    }));
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_panic_becomes_a_reason() {
        let done: Result<(), _> = guarded(|| panic!("bed {} is missing\nmore", 7));
        let reason = done.expect_err("it panicked").0;
        assert!(
            reason.starts_with("could not be processed (internal error: bed 7 is missing at guard.rs:"),
            "{reason}"
        );
        assert!(reason.ends_with("); please report it"), "{reason}");
        assert_eq!(guarded(|| Ok(3)), Ok(3));
    }
}
