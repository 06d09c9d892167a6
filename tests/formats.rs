//! The demo manuscript in every format gives the same statements and the same findings; only the
//! places differ. Notes stand where each format puts them, so order is not compared.

use std::path::Path;
use tieout::judge::{Document, Options, Verdict};
use tieout::statements::Grammar;

const FORMATS: [&str; 8] = ["md", "txt", "html", "xml", "docx", "odt", "tex", "pdf"];

fn examine(extension: &str) -> Document {
    examine_file(&Path::new("fixtures/demo/watering").with_extension(extension))
}

fn examine_file(path: &Path) -> Document {
    let manuscript = tieout::readers::read_file(path).unwrap_or_else(|e| panic!("{}: {e}", path.display()));
    tieout::examine(manuscript, Grammar::built_in(), &Options::default())
}

fn statements(document: &Document) -> Vec<String> {
    let mut all: Vec<String> = document
        .statements
        .iter()
        .map(|s| {
            let parts = s
                .quantities
                .iter()
                .map(|q| format!("{}{}{}", q.symbol, q.comparator.sign(), q.printed));
            parts.collect::<Vec<_>>().join(" ")
        })
        .collect();
    all.sort();
    all
}

fn findings(document: &Document) -> Vec<String> {
    let mut all: Vec<String> = document
        .findings
        .iter()
        .map(|f| {
            let repairs: Vec<String> = f
                .repairs
                .iter()
                .map(|r| format!("{}→{} {:?}", r.symbol, r.to, r.slip))
                .collect();
            format!(
                "{} {} {:?} {:?} {}",
                f.verdict.word(),
                f.relation,
                f.reported,
                f.expected,
                repairs.join(", ")
            )
        })
        .collect();
    all.sort();
    all
}

#[test]
fn every_format_gives_the_same_statements_and_findings() {
    let source = examine(FORMATS[0]);
    for format in &FORMATS[1..] {
        let other = examine(format);
        assert_eq!(
            statements(&source),
            statements(&other),
            "statements of watering.{format}"
        );
        assert_eq!(
            findings(&source),
            findings(&other),
            "findings of watering.{format}"
        );
    }
}

/// The manuscripts in `fixtures/demo/printed` came out of LaTeX, Typst, LibreOffice and Chromium in
/// one and in two columns (`print.sh` beside them).
#[test]
fn printed_by_any_program_it_gives_the_same_statements_and_findings() {
    let mut wrong = Vec::new();
    for (name, source) in [
        ("watering", "fixtures/demo/watering.md"),
        ("diary", "fixtures/diary/diary.md"),
    ] {
        let source = examine_file(Path::new(source));
        for program in ["latex", "typst", "libreoffice", "chromium"] {
            for columns in [1, 2] {
                let path = format!("fixtures/demo/printed/{name}-{program}-{columns}.pdf");
                let mut printed = examine_file(Path::new(&path));
                // The source marks its quotation; on paper it is an indented line like any other.
                printed.statements.retain(|s| {
                    let sentence = &printed.manuscript.text[s.sentence.clone()];
                    !sentence.contains("A gardener said p = .5")
                });
                for (what, in_source, in_print) in [
                    ("statements", statements(&source), statements(&printed)),
                    ("findings", findings(&source), findings(&printed)),
                ] {
                    wrong.extend(differences(&path, what, &in_source, &in_print));
                }
            }
        }
    }
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}

fn differences(path: &str, what: &str, source: &[String], print: &[String]) -> Vec<String> {
    let without = |all: &[String], others: &[String]| -> Vec<String> {
        let mut left = others.to_vec();
        let mut only = Vec::new();
        for one in all {
            match left.iter().position(|o| o == one) {
                Some(at) => drop(left.swap_remove(at)),
                None => only.push(one.clone()),
            }
        }
        only
    };
    let missing = without(source, print)
        .into_iter()
        .map(|s| format!("{path}: {what} without {s}"));
    let added = without(print, source)
        .into_iter()
        .map(|s| format!("{path}: {what} with {s}"));
    missing.chain(added).collect()
}

#[test]
fn the_planted_slips_are_found_and_nothing_else() {
    let document = examine("md");
    let mut serious: Vec<(&str, &str, String)> = document
        .findings
        .iter()
        .filter(|f| f.verdict >= Verdict::Conflicts)
        .map(|f| (f.verdict.word(), f.relation, f.reported[0].1.clone()))
        .collect();
    serious.sort();
    let expected = [
        ("conflicts", "ci-centre", "= 0.42"),
        ("conflicts", "eta2-from-f", "= .18"),
        ("conflicts", "mean-granularity", "= 3.47"),
        ("conflicts", "percent-of-count", "= 37"),
        ("reverses", "p-from-chi2", "= .09"),
        ("reverses", "p-from-t", "= .053"),
    ];
    let expected: Vec<(&str, &str, String)> =
        expected.iter().map(|(a, b, c)| (*a, *b, c.to_string())).collect();
    assert_eq!(serious, expected);
}

#[test]
fn places_lead_back_to_the_text() {
    for format in FORMATS {
        let document = examine(format);
        let characters: Vec<char> = document.manuscript.text.chars().collect();
        for finding in &document.findings {
            let quote: String = characters[finding.place.start..finding.place.end]
                .iter()
                .collect();
            assert_eq!(quote, finding.quote, "watering.{format}");
            assert!(finding.place.paragraph.is_some());
        }
        let has_line = matches!(format, "md" | "txt" | "html" | "tex" | "pdf");
        assert!(
            document
                .findings
                .iter()
                .all(|f| f.place.line.is_some() == has_line),
            "lines in watering.{format}"
        );
        assert_eq!(
            document.findings[0].place.page.is_some(),
            format == "pdf",
            "pages in watering.{format}"
        );
    }
}

#[test]
fn a_file_is_known_by_its_content_whatever_its_name_is() {
    let folder = std::env::temp_dir().join(format!("tieout-formats-{}", std::process::id()));
    std::fs::create_dir_all(&folder).expect("a folder for the copies");
    for format in ["docx", "odt", "pdf", "xml", "html"] {
        let copy = folder.join(format!("{format}.txt"));
        std::fs::copy(Path::new("fixtures/demo/watering").with_extension(format), &copy).expect("a copy");
        let manuscript = tieout::readers::read_file(&copy).expect("it is readable under any name");
        let known = if format == "xml" { "jats" } else { format };
        assert_eq!(manuscript.format.name(), known);
    }
    std::fs::remove_dir_all(&folder).expect("the copies are ours");
}
