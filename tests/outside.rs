//! Statistics that R computed from its own open data sets (`fixtures/outside/statistics.R`, run with
//! R 4.2.2 from Debian; each row of the table names its call): read, judged, and found to agree.

use tieout::judge::{Document, Options, Verdict};
use tieout::manuscript::{BlockKind, Builder, Format};
use tieout::statements::Grammar;

fn examine(text: &str) -> Document {
    let mut builder = Builder::new(Format::Text);
    builder.open(BlockKind::Paragraph);
    builder.text(text);
    tieout::examine(builder.finish(), Grammar::built_in(), &Options::default())
}

fn rows() -> Vec<(String, String, String)> {
    let table = std::fs::read_to_string("fixtures/outside/statistics.tsv").expect("part of the repository");
    let rows: Vec<_> = table
        .lines()
        .map(|line| {
            let cells: Vec<&str> = line.split('\t').collect();
            (cells[0].to_string(), cells[1].to_string(), cells[2].to_string())
        })
        .collect();
    assert!(rows.len() >= 28, "the table is whole");
    rows
}

#[test]
fn what_r_computes_agrees() {
    for (source, relation, text) in rows() {
        let document = examine(&text);
        let verdicts: Vec<_> = document
            .findings
            .iter()
            .map(|f| (f.relation, f.verdict, f.says.as_str()))
            .collect();
        assert!(
            verdicts
                .iter()
                .any(|(r, v, _)| *r == relation && *v == Verdict::Agrees),
            "{source}: {text}: {relation} should agree, but {verdicts:?}"
        );
        assert!(
            verdicts.iter().all(|(_, v, _)| *v < Verdict::Conflicts),
            "{source}: {text}: {verdicts:?}"
        );
    }
}

#[test]
fn the_same_with_another_p_conflicts() {
    let mut tried = 0;
    for (source, relation, text) in rows() {
        // p on the other side of .05, far from what was computed.
        let Some(at) = text.find("p = .") else { continue };
        if !relation.starts_with("p-from") || relation == "p-from-ci" {
            continue;
        }
        let p: f64 = format!("0{}", &text[at + 4..].chars().take(4).collect::<String>())
            .parse()
            .expect("three digits");
        let end = at
            + 4
            + text[at + 4..]
                .find(|c: char| !c.is_ascii_digit() && c != '.')
                .unwrap_or(text.len() - at - 4);
        let other = if p < 0.05 { ".412" } else { ".003" };
        let wrong = format!("{}p = {other}{}", &text[..at], &text[end..]);
        let document = examine(&wrong);
        let found = document
            .findings
            .iter()
            .find(|f| f.relation == relation)
            .map(|f| f.verdict);
        assert!(
            matches!(found, Some(Verdict::Reverses))
                || found == Some(Verdict::Open) && text.starts_with("rs"),
            "{source}: {wrong}: {found:?}"
        );
        tried += 1;
    }
    assert!(tried >= 10, "{tried}");
}
