//! The life of the workers, as Linux shows it: killed or orphaned in the midst of a file, and how
//! much memory they and the program take.

use super::craft::{self, FOUND, one_page, pdf, stream};
use super::helper::Scratch;
use super::helper::processes::{children, is_running, kill, peak, wait_for};
use super::{pool, text};
use std::process::{Child, Stdio};
use tieout::readers::contained::Limits;

/// Keeps the first engine busy until its time is up.
fn slow() -> Vec<u8> {
    format!("%PDF-1.4\n1 0 obj {}", "<</A ".repeat(2_000_000)).into_bytes()
}

/// The program, checking a slow file and a good one, one after the other.
fn checking(scratch: &Scratch) -> Child {
    scratch
        .file("slow.pdf", slow())
        .file("good.pdf", pdf(&one_page()));
    scratch
        .command(&[
            "check",
            "slow.pdf",
            "good.pdf",
            "--jobs",
            "1",
            "--format",
            "text-only",
        ])
        .stdout(Stdio::piped())
        .stderr(Stdio::piped())
        .spawn()
        .expect("the program starts")
}

fn is_worker(process: u32) -> bool {
    let command = std::fs::read(format!("/proc/{process}/cmdline")).unwrap_or_default();
    command.split(|b| *b == 0).nth(1) == Some(b"worker")
}

/// Its worker, once that has read the whole file: it has unpacked nothing, but holds the bytes.
fn worker_of(program: u32) -> u32 {
    wait_for("a worker that reads", || {
        let worker = *children(program).first()?;
        // Until it runs its own program it shows the memory of the one that has started it.
        (is_worker(worker) && peak(worker)? > 20 << 20).then_some(worker)
    })
}

#[test]
fn a_worker_killed_from_outside_costs_its_file_one_line() {
    let scratch = Scratch::new();
    let program = checking(&scratch);
    kill(worker_of(program.id()));
    let done = program.wait_with_output().expect("the program ends");
    assert_eq!(
        String::from_utf8_lossy(&done.stderr),
        "tieout: slow.pdf: was not read: the process that read it was killed from outside, perhaps for want of \
         memory; close other programs and try again\n"
    );
    assert!(String::from_utf8_lossy(&done.stdout).contains(FOUND));
    assert_eq!(done.status.code(), Some(2));
}

#[test]
fn workers_end_with_the_program_even_in_the_midst_of_a_file() {
    let scratch = Scratch::new();
    let mut program = checking(&scratch);
    let worker = worker_of(program.id());
    // What libraries print must not stand in the midst of the answers.
    let printed = std::fs::read_link(format!("/proc/{worker}/fd/1")).expect("its standard output");
    assert_eq!(printed.to_str(), Some("/dev/null"));
    kill(program.id());
    program.wait().expect("it was killed");
    wait_for("the end of the worker", || (!is_running(worker)).then_some(()));
}

#[test]
fn workers_end_with_their_pool_and_leave_no_zombie() {
    let scratch = Scratch::new();
    scratch.file("good.pdf", pdf(&one_page()));
    let before = children(std::process::id());
    let pool = pool(Limits::default());
    assert_eq!(text(&pool, pdf(&one_page()), "a.pdf").as_deref(), Ok(FOUND));
    drop(pool);
    // Workers of other tests come and go meanwhile; ours is the one that is new and stays.
    let zombies = || {
        let mut left = children(std::process::id());
        left.retain(|pid| !before.contains(pid) && !is_running(*pid));
        left
    };
    wait_for("the zombies of other tests", || {
        zombies().is_empty().then_some(())
    });
}

#[test]
fn a_worker_is_used_again_until_it_has_grown() {
    let limits = Limits {
        retire_above: 32 << 20,
        ..Limits::default()
    };
    let pool = pool(limits);
    for _ in 0..20 {
        assert_eq!(text(&pool, pdf(&one_page()), "a.pdf").as_deref(), Ok(FOUND));
    }
    assert_eq!(pool.started(), 1);
    // A page with forty megabytes of nothing behind its text.
    let mut large = one_page();
    large.insert(
        5,
        stream(
            "/Filter /FlateDecode",
            craft::zlib(&[craft::TEXT.as_bytes(), &vec![b' '; 40 << 20]].concat()),
        ),
    );
    assert_eq!(text(&pool, pdf(&large), "a.pdf").as_deref(), Ok(FOUND));
    assert_eq!(pool.started(), 1, "it is asked to go after the file, not before");
    for _ in 0..5 {
        assert_eq!(text(&pool, pdf(&one_page()), "a.pdf").as_deref(), Ok(FOUND));
    }
    assert_eq!(pool.started(), 2);
}

#[test]
fn the_memory_limit_holds_for_the_process() {
    let limits = Limits::default();
    let scratch = Scratch::new();
    let mut bomb = one_page();
    let twice = craft::zlib(&craft::zeros(1500));
    bomb.insert(5, stream("/Filter [/FlateDecode /FlateDecode]", twice));
    scratch.file("bomb.pdf", pdf(&bomb));
    let mut program = scratch
        .command(&["check", "bomb.pdf"])
        .stdout(Stdio::null())
        .stderr(Stdio::piped())
        .spawn()
        .expect("the program starts");
    let (mut of_program, mut of_worker) = (0, 0);
    let status = loop {
        of_program = of_program.max(peak(program.id()).unwrap_or(0));
        for worker in children(program.id()).into_iter().filter(|p| is_worker(*p)) {
            of_worker = of_worker.max(peak(worker).unwrap_or(0));
        }
        if let Some(status) = program.try_wait().expect("the program is ours") {
            break status;
        }
        std::thread::sleep(std::time::Duration::from_millis(2));
    };
    let said = program.wait_with_output().expect("the program has ended").stderr;
    let said = String::from_utf8_lossy(&said);
    // On a machine that is busy with other things the time may be up before the memory is.
    assert!(
        said.starts_with("tieout: bomb.pdf: needs more than 1024 MB of memory to be read; ")
            || said.starts_with("tieout: bomb.pdf: takes more than 60 seconds to be read; "),
        "{said}"
    );
    assert_eq!(status.code(), Some(2));
    println!(
        "at most {} MB in the program, {} MB in the worker",
        of_program >> 20,
        of_worker >> 20
    );
    assert!(
        of_worker > 256 << 20,
        "the bomb was not seen at work: {of_worker}"
    );
    assert!(of_worker < limits.memory, "{of_worker}");
    assert!(of_program < 100 << 20, "{of_program}");
}
