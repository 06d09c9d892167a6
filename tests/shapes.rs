//! Pages whose text layer says something else than they show, from `fixtures/shapes`: what is printed
//! is read, and the report says what the layer has instead. Pages whose layer is right stay as they are.

mod helper;

use std::path::Path;
use tieout::judge::{Document, Options, Verdict};
use tieout::manuscript::nothing_or;
use tieout::statements::Grammar;

/// What is expected of one file.
#[derive(Default)]
struct Expected {
    file: String,
    /// What the page shows and what its layer says.
    shows: Vec<(String, String)>,
    statements: Vec<String>,
}

/// The entries of `expected.txt`, which the script that draws the pages writes from what it prints.
fn expected() -> Vec<Expected> {
    let text = std::fs::read_to_string("fixtures/shapes/expected.txt").expect("a readable fixture");
    let mut all: Vec<Expected> = Vec::new();
    for line in text.lines().filter(|l| !l.starts_with('#')) {
        let Some(inside) = line.strip_prefix("  ") else {
            all.push(Expected {
                file: line.into(),
                ..Expected::default()
            });
            continue;
        };
        let entry = all.last_mut().expect("a file's name stands first");
        match inside.strip_prefix("shows ").and_then(|i| i.split_once(" says ")) {
            Some((shown, layer)) => entry.shows.push((shown.into(), layer.into())),
            None => entry.statements.push(inside.into()),
        }
    }
    assert!(all.len() > 20, "the fixtures were found");
    all
}

fn examine(file: &str) -> Document {
    let path = Path::new("fixtures/shapes").join(file);
    let manuscript = tieout::readers::read_file(&path).unwrap_or_else(|e| panic!("{file}: {e}"));
    tieout::examine(manuscript, Grammar::built_in(), &Options::default())
}

#[test]
fn what_is_printed_is_read_whatever_the_layer_says() {
    let mut wrong = String::new();
    for entry in expected() {
        let document = examine(&entry.file);
        let read: Vec<String> = document
            .statements
            .iter()
            .map(|s| {
                let parts = s.quantities.iter();
                let parts = parts.map(|q| format!("{} {} {}", q.symbol, q.comparator.sign(), q.printed));
                parts.collect::<Vec<_>>().join("; ")
            })
            .collect();
        if read != entry.statements {
            wrong += &format!(
                "{}\n  wanted {:#?}\n  read {:#?}\n{}\n",
                entry.file, entry.statements, read, document.manuscript.text
            );
        }
    }
    assert!(wrong.is_empty(), "\n{wrong}");
}

#[test]
fn both_readings_are_kept() {
    let mut kinds = 0;
    for entry in expected() {
        let m = examine(&entry.file).manuscript;
        let mut kept: Vec<(String, String)> = m
            .corrections
            .iter()
            .map(|c| {
                // The text as read has one character for all minus signs.
                let shown = m.text[c.range.clone()].replace(['-', '–', '⁻'], "−");
                (shown, nothing_or(&c.layer).trim_matches('`').to_string())
            })
            .collect();
        kept.sort();
        kept.dedup();
        let mut wanted = entry.shows;
        wanted.sort();
        kinds += usize::from(!wanted.is_empty());
        assert_eq!(kept, wanted, "{}", entry.file);
        let remarks: Vec<&String> = m
            .remarks
            .iter()
            .filter(|r| r.contains("the page shows something else"))
            .collect();
        assert_eq!(
            remarks.len(),
            usize::from(!wanted.is_empty()),
            "{}: {remarks:?}",
            entry.file
        );
    }
    assert!(kinds >= 12, "only {kinds} files have a wrong layer");
}

#[test]
fn findings_say_what_the_page_shows_and_what_its_layer_says() {
    let document = examine("quarter-sign.pdf");
    let says: Vec<&str> = document.findings.iter().map(|f| f.says.as_str()).collect();
    let first = says.first().expect("something was checked");
    assert!(
        first.ends_with("The page shows `=`; its text layer says `¼`."),
        "{says:#?}"
    );
    let chi = document.findings.iter().find(|f| f.relation == "p-from-chi2");
    let chi = &chi.expect("χ² and p are there").says;
    assert!(
        chi.ends_with("The page shows `χ`, `=` and `<`; its text layer says `v`, `¼` and `b`."),
        "{chi}"
    );
    let m = &document.manuscript;
    let statement = &document.statements[0];
    assert_eq!(
        m.layer_text(&statement.range).as_deref(),
        Some("t(52) ¼ 2.88, p ¼ .006, d ¼ 0.78")
    );
}

#[test]
fn an_unknown_glyph_before_a_number_makes_its_sign_uncertain() {
    let document = examine("sign-uncertain.pdf");
    let statement = &document.statements[0];
    let t = &statement.quantities[0];
    assert_eq!((t.interval.low, t.interval.high), (-2.885, 2.885));
    // With either sign p follows, and b follows from neither its SE nor anything else here.
    let finding = document
        .findings
        .iter()
        .find(|f| f.relation == "p-from-t")
        .expect("t, df and p are there");
    assert_eq!(finding.verdict, Verdict::Agrees);
    assert_eq!(
        finding.assumes,
        [
            "sign of t 2.88 uncertain: the character before it could not be read",
            "two-sided"
        ]
    );
    let run = helper::Scratch::new();
    let bytes = std::fs::read("fixtures/shapes/sign-uncertain.pdf").expect("a readable fixture");
    let out = run
        .file("a.pdf", bytes)
        .run(&["check", "--format", "json", "a.pdf"])
        .out;
    assert!(out.contains(r#""sign":"uncertain""#), "{out}");
}

#[test]
fn the_report_says_what_was_read_by_context() {
    let text = "Crops differed, v2(1) ¼ 6.83, p ¼ .09. Beds did not, t(52) ¼ 0.31, p ¼ .76.\n";
    let run = helper::Scratch::new();
    let run = run.file("a.txt", text).run(&["check", "a.txt"]);
    let out = run.out.split_whitespace().collect::<Vec<_>>().join(" ");
    assert_eq!(run.status, 1, "{out}");
    assert!(out.contains("`¼` read as `=` by context"), "{out}");
    assert!(out.contains("If the characters were read rightly: "), "{out}");
    // .09 and .009 lie on two sides of .05, but what rests on a guess does not reverse.
    assert!(out.contains("1 conflicts") && !out.contains("reverses"), "{out}");
}
