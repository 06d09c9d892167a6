//! Every way of writing results that the grammars know, from `fixtures/forms/*.txt`.

use std::fmt::Write;
use tieout::manuscript::{BlockKind, Builder, Format};
use tieout::statements::{self, Grammar};

/// The statements read from a text, one line each.
fn read(text: &str) -> Vec<String> {
    let mut builder = Builder::new(Format::Text);
    builder.open(BlockKind::Paragraph);
    builder.text(text);
    let manuscript = builder.finish();
    let found = statements::find(&manuscript, Grammar::built_in(), 0.05);
    for s in &found {
        for q in &s.quantities {
            let shown = &manuscript.text[q.span.clone()];
            // Lowered digits are printed on the line.
            assert!(
                shown == q.printed || !shown.is_ascii(),
                "span and digits agree: {shown} {}",
                q.printed
            );
            assert!(q.interval.low <= q.interval.high);
        }
    }
    let show = |s: &tieout::statements::Statement| {
        let parts = s
            .quantities
            .iter()
            .map(|q| format!("{} {} {}", q.symbol, q.comparator.sign(), q.printed));
        parts.collect::<Vec<_>>().join("; ")
    };
    found.iter().map(show).collect()
}

#[test]
fn every_form_in_the_fixtures_is_read() {
    let mut wrong = String::new();
    let mut entries = 0;
    let mut files: Vec<_> = std::fs::read_dir("fixtures/forms")
        .expect("the fixtures are part of the repository")
        .map(|f| f.expect("a readable folder").path())
        .filter(|f| f.extension().is_some_and(|e| e == "txt"))
        .collect();
    files.sort();
    for file in files {
        let content = std::fs::read_to_string(&file).expect("a readable fixture");
        let mut lines = content
            .lines()
            .filter(|l| !l.starts_with("# ") && !l.trim().is_empty())
            .peekable();
        while let Some(text) = lines.next() {
            let mut expected = Vec::new();
            while let Some(line) = lines.next_if(|l| l.starts_with("  ")) {
                expected.push(line.trim().to_string());
            }
            entries += 1;
            let got = read(text);
            if got != expected {
                let _ = writeln!(wrong, "{text}\n  wanted: {expected:?}\n  read:   {got:?}");
            }
        }
    }
    assert!(entries > 100, "the fixtures were found");
    assert!(wrong.is_empty(), "\n{wrong}");
}
