//! Documents made by hand, so that reports can be tested without anything being found.

use super::Entry;
use crate::judge::{Document, Finding, Repair, Verdict};
use crate::manuscript::{Builder, Format, Manuscript, Place};
use crate::numbers::{Comparator, Decimal};
use crate::statements::{Quantity, Statement};
use std::ops::Range;

/// The byte range of the first occurrence of `part`.
pub fn find(text: &str, part: &str) -> Range<usize> {
    let at = text.find(part).expect("the sample holds it");
    at..at + part.len()
}

/// A printed quantity at a byte offset of the text.
pub fn quantity(symbol: &'static str, comparator: &str, printed: &str, at: usize) -> Quantity {
    let comparator = match comparator {
        "=" => Comparator::Equal,
        "<" => Comparator::Below,
        _ => Comparator::Above,
    };
    let negative = printed.starts_with('-');
    let number = Decimal::read(printed.trim_start_matches('-'), negative, 0).expect("a number");
    let whole = matches!(symbol, "df" | "n" | "N");
    Quantity {
        symbol,
        printed: printed.to_string(),
        comparator,
        number,
        interval: comparator.interval(&number, whole),
        span: at..at + printed.len(),
        borrowed: None,
        doubt: Default::default(),
    }
}

/// A statement with the quantities that stand in its quote, in order.
pub fn statement(
    m: &Manuscript,
    id: usize,
    quote: &str,
    quantities: &[(&'static str, &str, &str)],
) -> Statement {
    let range = find(&m.text, quote);
    let block = m.blocks.iter().position(|b| b.range.contains(&range.start));
    let mut from = range.start;
    let quantities = quantities.iter().map(|(symbol, comparator, printed)| {
        let span = find(&m.text[from..], printed);
        let at = from + span.start;
        from += span.end;
        quantity(symbol, comparator, printed, at)
    });
    let quantities = quantities.collect();
    let block = block.expect("the quote stands in a block");
    Statement {
        id,
        block,
        sentence: m.blocks[block].range.clone(),
        range,
        quantities,
    }
}

/// A bare finding with nothing but its verdict.
pub fn finding(verdict: Verdict) -> Finding {
    Finding {
        relation: "p-from-t",
        with: Vec::new(),
        verdict,
        statements: vec![1],
        place: Place::default(),
        quote: String::new(),
        marks: Vec::new(),
        sentence: 0..0,
        reported: Vec::new(),
        expected: Vec::new(),
        assumes: Vec::new(),
        says: String::new(),
        repairs: Vec::new(),
    }
}

/// A finding about a statement, with every one of its numbers in question.
pub fn finding_on(m: &Manuscript, statement: &Statement, verdict: Verdict) -> Finding {
    Finding {
        statements: vec![statement.id],
        place: m.place(&m.blocks[statement.block], statement.range.clone()),
        quote: m.text[statement.range.clone()].to_string(),
        marks: statement.quantities.iter().map(|q| q.span.clone()).collect(),
        sentence: statement.sentence.clone(),
        ..finding(verdict)
    }
}

/// An input that was read and in which these were found.
pub fn entry(name: &str, text: &str, findings: Vec<Finding>) -> Entry {
    let mut b = Builder::new(Format::Text);
    b.text(text);
    document(name, b.finish(), Vec::new(), findings)
}

pub fn document(
    name: &str,
    manuscript: Manuscript,
    statements: Vec<Statement>,
    findings: Vec<Finding>,
) -> Entry {
    Entry {
        name: name.into(),
        outcome: Ok(Document {
            manuscript,
            statements,
            findings,
        }),
    }
}

/// A page of a manuscript with one paragraph of results.
pub fn page(paragraph: &str) -> Manuscript {
    let mut b = Builder::new(Format::Markdown);
    b.page(4);
    b.line(86);
    b.heading(1, "Results");
    b.open(crate::manuscript::BlockKind::Paragraph);
    b.line(88);
    b.text(paragraph);
    b.close();
    b.finish()
}

/// One statement that conflicts.
pub fn conflict() -> Entry {
    let m = page("Diary keepers watered less often than gardeners without a diary, t(28) = 2.20, p = .063.");
    let s = statement(
        &m,
        1,
        "t(28) = 2.20, p = .063",
        &[("df", "=", "28"), ("t", "=", "2.20"), ("p", "=", ".063")],
    );
    let f = Finding {
        reported: vec![("p", "= .063".into())],
        expected: vec![("p", [0.035_871_23, 0.036_692_34])],
        assumes: vec!["two-sided".into()],
        says: "With t = 2.20 and 28 degrees of freedom, p lies between .0358 and .0367.".into(),
        repairs: vec![
            Repair {
                symbol: "p",
                to: ".036".into(),
                slip: Some("two digits swapped"),
            },
            Repair {
                symbol: "t",
                to: "1.93 to 1.94".into(),
                slip: None,
            },
        ],
        ..finding_on(&m, &s, Verdict::Conflicts)
    };
    document("draft.md", m, vec![s], vec![f])
}

/// The same as JSON, broken into lines for reading.
pub const CONFLICT_JSON: &str = r#"{"path":"draft.md","format":"markdown","unreadable":null,
"counts":{"statements":1,"quantities":3,"agrees":0,"conflicts":1,"reverses":0,"open":0},
"statements":[{"id":1,"quote":"t(28) = 2.20, p = .063",
"place":{"page":4,"section":"Results","paragraph":1,"line":88,"table":null,"row":null,"column":null,
"start":74,"end":96,"box":null},
"quantities":[{"symbol":"df","printed":"28","comparator":"=","low":28,"high":28,"start":76,"end":78},
{"symbol":"t","printed":"2.20","comparator":"=","low":2.195,"high":2.205,"start":82,"end":86},
{"symbol":"p","printed":".063","comparator":"=","low":0.0625,"high":0.0635,"start":92,"end":96}]}],
"findings":[{"relation":"p-from-t","verdict":"conflicts","statements":[1],
"place":{"page":4,"section":"Results","paragraph":1,"line":88,"table":null,"row":null,"column":null,
"start":74,"end":96,"box":null},
"quote":"t(28) = 2.20, p = .063",
"reported":{"p":"= .063"},"expected":{"p":[0.0358712,0.0366924]},
"assumes":["two-sided"],
"says":"With t = 2.20 and 28 degrees of freedom, p lies between .0358 and .0367.",
"repairs":[{"symbol":"p","to":".036","slip":"two digits swapped"},
{"symbol":"t","to":"1.93 to 1.94","slip":null}]}],
"remarks":[]}"#;
