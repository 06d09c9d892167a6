//! Text, Markdown and LaTeX files that are broken or hostile are read or refused, never more.

use proptest::prelude::*;
use std::path::Path;
use tieout::readers::read_bytes;

const TEXT: &str = include_str!("../fixtures/diary/diary.txt");
const MARKDOWN: &str = include_str!("../fixtures/diary/diary.md");
const LATEX: &str = include_str!("../fixtures/diary/diary.tex");
const NAMES: [&str; 4] = ["diary.txt", "diary.md", "diary.tex", "diary"];

/// Every block must lie inside the text, on character borders, and have a place.
fn read(bytes: &[u8], name: &str) {
    if let Ok(m) = read_bytes(bytes, Path::new(name)) {
        for block in &m.blocks {
            let text = m.block_text(block);
            let place = m.place(block, block.range.clone());
            assert_eq!(place.end - place.start, text.chars().count());
        }
        for table in &m.tables {
            assert!(
                table
                    .captions
                    .iter()
                    .chain(&table.notes)
                    .all(|b| *b < m.blocks.len())
            );
        }
    }
}

#[derive(Clone, Debug)]
enum Change {
    Remove(usize, usize),
    Insert(usize, String),
    Copy(usize, usize, usize),
}

fn changed(source: &str, changes: &[Change]) -> Vec<u8> {
    let mut bytes = source.as_bytes().to_vec();
    for change in changes {
        let n = bytes.len().max(1);
        match change {
            Change::Remove(at, count) => {
                let at = at % n;
                bytes.drain(at.min(bytes.len())..(at + count).min(bytes.len()));
            }
            Change::Insert(at, text) => {
                let at = (at % n).min(bytes.len());
                bytes.splice(at..at, text.bytes());
            }
            Change::Copy(from, count, to) => {
                let from = (from % n).min(bytes.len());
                let piece = bytes[from..(from + count).min(bytes.len())].to_vec();
                let to = (to % n).min(bytes.len());
                bytes.splice(to..to, piece);
            }
        }
    }
    bytes
}

fn change() -> impl Strategy<Value = Change> {
    prop_oneof![
        (any::<usize>(), 1usize..60).prop_map(|(at, n)| Change::Remove(at, n)),
        (any::<usize>(), r"[\\{}$&%\[\]|*_^~`<>#:+=\n \t\-0-9a-zé–]{1,8}")
            .prop_map(|(at, t)| Change::Insert(at, t)),
        (any::<usize>(), 1usize..200, any::<usize>()).prop_map(|(f, n, t)| Change::Copy(f, n, t)),
    ]
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 400, failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn any_bytes(bytes in proptest::collection::vec(any::<u8>(), 0..600), name in 0usize..4) {
        read(&bytes, NAMES[name]);
    }

    #[test]
    fn any_marks(text in r"[\\{}$&%\[\]|*_^~`<>#:+=\n \t\-().,0-9a-zé–]{0,400}", name in 0usize..4) {
        read(text.as_bytes(), NAMES[name]);
    }

    #[test]
    fn damaged_files(changes in proptest::collection::vec(change(), 1..25), which in 0usize..3, name in 0usize..4) {
        read(&changed([TEXT, MARKDOWN, LATEX][which], &changes), NAMES[name]);
    }
}

#[test]
fn the_three_files_say_the_same() {
    let results = [
        "t(38) = 2.20, p = .034",
        "χ²(1) = 9.33, p = .002",
        "F(2, 310) = 1.44, p = .24, ηp² = .14, 95% CI [-0.14, 0.05]",
        "<.001***",
        "p = .5",
    ];
    for (source, name) in [(TEXT, "diary.txt"), (MARKDOWN, "diary.md"), (LATEX, "diary.tex")] {
        let m = read_bytes(source.as_bytes(), Path::new(name)).expect("it is a manuscript");
        for result in results {
            assert_eq!(
                m.text.matches(result).count(),
                1,
                "{result} in {name}:\n{}",
                m.text
            );
        }
        assert_eq!(m.remarks, Vec::<String>::new());
    }
}
