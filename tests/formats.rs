//! The demo manuscript in every format gives the same statements and the same findings; only the
//! places differ. Notes stand where each format puts them, so order is not compared.

use std::path::{Path, PathBuf};
use tieout::judge::{Document, Options, Verdict};
use tieout::statements::Grammar;

const FORMATS: [&str; 8] = ["md", "txt", "html", "xml", "docx", "odt", "tex", "pdf"];

fn examine(extension: &str) -> Document {
    let path = PathBuf::from("fixtures/demo/watering").with_extension(extension);
    let manuscript = tieout::readers::read_file(&path).unwrap_or_else(|e| panic!("{}: {e}", path.display()));
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
