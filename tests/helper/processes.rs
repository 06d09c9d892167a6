//! Looks at running processes the way Linux shows them in `/proc`.

use std::fs;
use std::time::{Duration, Instant};

/// The processes that this one has started and not yet reaped.
pub fn children(of: u32) -> Vec<u32> {
    let all = fs::read_dir("/proc").expect("Linux has /proc");
    let mut found: Vec<u32> = all
        .filter_map(|entry| entry.ok()?.file_name().to_str()?.parse().ok())
        .filter(|pid| field(*pid, "PPid:") == Some(u64::from(of)))
        .collect();
    found.sort_unstable();
    found
}

/// The most memory that was resident at one moment, in bytes; nothing once the process has ended.
pub fn peak(pid: u32) -> Option<u64> {
    field(pid, "VmHWM:").map(|kilobytes| kilobytes * 1024)
}

/// Whether the process is still there and no zombie.
pub fn is_running(pid: u32) -> bool {
    let status = fs::read_to_string(format!("/proc/{pid}/status")).unwrap_or_default();
    status
        .lines()
        .any(|l| l.starts_with("State:") && !l.contains('Z') && !l.contains('X'))
}

/// Waits until something is so, as long as a slow machine may take.
pub fn wait_for<T>(what: &str, mut look: impl FnMut() -> Option<T>) -> T {
    let end = Instant::now() + Duration::from_secs(60);
    loop {
        if let Some(found) = look() {
            return found;
        }
        assert!(Instant::now() < end, "waited in vain for {what}");
        std::thread::sleep(Duration::from_millis(5));
    }
}

/// Kills a process that the test has started itself, as `kill -9` does.
pub fn kill(pid: u32) {
    let done = std::process::Command::new("kill")
        .args(["-9", &pid.to_string()])
        .status();
    assert!(done.expect("kill is there").success(), "{pid} can be killed");
}

fn field(pid: u32, name: &str) -> Option<u64> {
    let status = fs::read_to_string(format!("/proc/{pid}/status")).ok()?;
    let line = status.lines().find(|l| l.starts_with(name))?;
    line.split_whitespace().nth(1)?.parse().ok()
}
