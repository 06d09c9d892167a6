//! The limit on *memory*: an allocator that counts, and refuses what goes beyond. Unlike a limit of
//! the system it is the same everywhere, and it knows that memory was the reason when the process
//! ends for want of it. Outside workers it counts nothing and costs one look at a flag.

use std::alloc::{GlobalAlloc, Layout, System};
use std::fs::File;
use std::io::Write;
use std::sync::OnceLock;
use std::sync::atomic::{AtomicBool, AtomicUsize, Ordering::Relaxed};

/// The allocator of the executable: the system's, counted once [`watch`] has been called.
pub struct Counted;

static WATCHING: AtomicBool = AtomicBool::new(false);
static LIMIT: AtomicUsize = AtomicUsize::new(0);
/// Bytes in use. What was allocated before the watch began and is freed later would make it less
/// than nothing, so it begins at [`BEFORE`].
static NOW: AtomicUsize = AtomicUsize::new(BEFORE);
static PEAK: AtomicUsize = AtomicUsize::new(BEFORE);
static REFUSED: AtomicBool = AtomicBool::new(false);
static NOTICE: OnceLock<(File, Vec<u8>)> = OnceLock::new();

/// More than a worker has allocated before it begins to watch.
const BEFORE: usize = 16 << 20;

/// Begins to count. When for the first time since [`begin_file`] more than `limit` bytes are asked
/// for, `notice` is written to `to`; every such request gets no memory.
pub fn watch(limit: u64, to: File, notice: Vec<u8>) {
    LIMIT.store(usize::try_from(limit).unwrap_or(usize::MAX - BEFORE), Relaxed);
    if NOTICE.set((to, notice)).is_ok() {
        WATCHING.store(true, Relaxed);
    }
}

/// The count of the peak begins anew, from what is in use now.
pub fn begin_file() {
    PEAK.store(NOW.load(Relaxed), Relaxed);
    REFUSED.store(false, Relaxed);
}

/// The most bytes that were in use at one moment since [`begin_file`]; 0 where nothing is counted.
pub fn peak() -> u64 {
    PEAK.load(Relaxed).saturating_sub(BEFORE) as u64
}

/// Counts `more` bytes, unless they go beyond the limit.
fn take(more: usize) -> bool {
    if !WATCHING.load(Relaxed) {
        return true;
    }
    let now = NOW.fetch_add(more, Relaxed).saturating_add(more);
    if now > LIMIT.load(Relaxed).saturating_add(BEFORE) {
        NOW.fetch_sub(more, Relaxed);
        refuse();
        return false;
    }
    if now > PEAK.load(Relaxed) {
        PEAK.fetch_max(now, Relaxed);
    }
    true
}

fn give_back(less: usize) {
    if WATCHING.load(Relaxed) {
        NOW.fetch_sub(less, Relaxed);
    }
}

/// Says that memory was refused. Nothing here may allocate.
fn refuse() {
    if WATCHING.load(Relaxed)
        && !REFUSED.swap(true, Relaxed)
        && let Some((to, notice)) = NOTICE.get()
    {
        let mut to: &File = to;
        // When nobody listens any more, nobody needs to know.
        let _ = to.write_all(notice);
    }
}

/// What the system gave for `size` bytes that were counted: nothing gives them back.
fn given(pointer: *mut u8, size: usize) -> *mut u8 {
    if pointer.is_null() {
        give_back(size);
        refuse();
    }
    pointer
}

// SAFETY: every call goes to the system's allocator unchanged, or returns null, which tells the
// caller that there is no memory. Counting neither allocates nor unwinds.
unsafe impl GlobalAlloc for Counted {
    unsafe fn alloc(&self, layout: Layout) -> *mut u8 {
        if !take(layout.size()) {
            return std::ptr::null_mut();
        }
        // SAFETY: the caller keeps the rules of `GlobalAlloc`, which are those of the system's.
        given(unsafe { System.alloc(layout) }, layout.size())
    }

    unsafe fn alloc_zeroed(&self, layout: Layout) -> *mut u8 {
        if !take(layout.size()) {
            return std::ptr::null_mut();
        }
        // SAFETY: as above.
        given(unsafe { System.alloc_zeroed(layout) }, layout.size())
    }

    unsafe fn dealloc(&self, pointer: *mut u8, layout: Layout) {
        // SAFETY: as above.
        unsafe { System.dealloc(pointer, layout) };
        give_back(layout.size());
    }

    unsafe fn realloc(&self, pointer: *mut u8, layout: Layout, size: usize) -> *mut u8 {
        let more = size.saturating_sub(layout.size());
        if !take(more) {
            return std::ptr::null_mut();
        }
        // SAFETY: as above.
        let new = given(unsafe { System.realloc(pointer, layout, size) }, more);
        if !new.is_null() {
            give_back(layout.size().saturating_sub(size));
        }
        new
    }
}
