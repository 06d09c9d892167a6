use super::*;
use crate::manuscript::Part;
use crate::readers::trial::into_blocks;

fn blocks(source: &str) -> Vec<(BlockKind, Part, String)> {
    into_blocks(read(source).expect("plain text is always read"))
}

fn kinds(source: &str) -> Vec<(BlockKind, String)> {
    blocks(source).into_iter().map(|(k, _, t)| (k, t)).collect()
}

use BlockKind::{Caption, Heading, ListItem, Paragraph, TableNote};

#[test]
fn paragraphs_are_joined_over_their_lines() {
    let source = "Results\n\nPlots with mulch were watered less,\nt(28) =\n2.20, p = .036, than plots with-\nout it.\n\nThe rest did not differ.\n";
    let m = read(source).expect("plain text is always read");
    assert_eq!(
        m.text,
        "Results\n\nPlots with mulch were watered less, t(28) = 2.20, p = .036, than plots without it.\n\n\
         The rest did not differ.\n"
    );
    let at = m.text.find("2.20").expect("the text holds it");
    let place = m.place(&m.blocks[1], at..at + 4);
    assert_eq!((place.line, place.section.as_deref()), (Some(5), Some("Results")));
}

#[test]
fn headings_by_name_number_capitals_and_underlining() {
    let source = "Water and yield on forty plots\n\nAbstract\nWe asked 40 gardeners. It helped, p = .03.\n\n\
        1. INTRODUCTION\n\nWater is scarce.\n\n2 Method\n\n2.1 Participants\n\nForty gardeners.\n\nThe Diary\n---------\nKept daily.\n\n\
        STUDY 2\n\nF(1, 38) = 4.4, p = .04\n\nOverall, mulch saved water in all plots.\n";
    let got = blocks(source);
    let want = [
        (Heading(2), Part::Body, "Water and yield on forty plots"),
        (Heading(1), Part::Abstract, "Abstract"),
        (
            Paragraph,
            Part::Abstract,
            "We asked 40 gardeners. It helped, p = .03.",
        ),
        (Heading(1), Part::Body, "1. INTRODUCTION"),
        (Paragraph, Part::Body, "Water is scarce."),
        (Heading(1), Part::Body, "2 Method"),
        (Heading(2), Part::Body, "2.1 Participants"),
        (Paragraph, Part::Body, "Forty gardeners."),
        (Heading(2), Part::Body, "The Diary"),
        (Paragraph, Part::Body, "Kept daily."),
        (Heading(1), Part::Body, "STUDY 2"),
        (Paragraph, Part::Body, "F(1, 38) = 4.4, p = .04"),
        (Paragraph, Part::Body, "Overall, mulch saved water in all plots."),
    ];
    assert_eq!(got, want.map(|(k, p, t)| (k, p, t.to_string())));
}

#[test]
fn references_end_at_an_appendix_or_a_table() {
    let source = "References\n\nSpade, A. (2014). Water, p = .04. Plots, 3, 12-18.\n\n1. Rake, B. (2015)\n\nTable 1\nLitres by plot\n\n\
        Appendix A\n\nMore, p = .2.\n";
    let got = blocks(source);
    let want = [
        (Heading(1), Part::References, "References"),
        (
            Paragraph,
            Part::References,
            "Spade, A. (2014). Water, p = .04. Plots, 3, 12-18.",
        ),
        (ListItem, Part::References, "1. Rake, B. (2015)"),
        (Caption, Part::Body, "Table 1 Litres by plot"),
        (Heading(1), Part::Body, "Appendix A"),
        (Paragraph, Part::Body, "More, p = .2."),
    ];
    assert_eq!(got, want.map(|(k, p, t)| (k, p, t.to_string())));
}

#[test]
fn indented_and_unbroken_paragraphs() {
    let long = "Word ".repeat(60);
    let source = format!(
        "    First paragraph goes\nover two lines here.\n    Second one.\n\n{long}\n{long}.\nResults\n{long}.\n"
    );
    let got = kinds(&source);
    let long = long.trim_end();
    assert_eq!(
        got,
        [
            (Paragraph, "First paragraph goes over two lines here.".to_string()),
            (Paragraph, "Second one.".to_string()),
            (Paragraph, long.to_string()),
            (Paragraph, format!("{long} .")),
            (Heading(1), "Results".to_string()),
            (Paragraph, format!("{long} .")),
        ]
    );
}

#[test]
fn lists() {
    let source = "We expected that:\n- mulch saves water\n- shade saves\nmore;\n\n1. Soil first\n2. Seeds then, p = .04\nas shown\n\nb = .2,\n- .31 and so on\n";
    assert_eq!(
        kinds(source),
        [
            (Paragraph, "We expected that:"),
            (ListItem, "mulch saves water"),
            (ListItem, "shade saves more;"),
            (ListItem, "1. Soil first"),
            (ListItem, "2. Seeds then, p = .04 as shown"),
            (Paragraph, "b = .2, - .31 and so on"),
        ]
        .map(|(k, t)| (k, t.to_string()))
    );
}

#[test]
fn rows_of_tables_stay_apart() {
    let source = "Table 2. Litres by plot\n\nPlot\tM\tSD\tp\nMulch\t3.4\t1.1\t<.001\nBare\t5.2\t1.3\t.04\n\nNote. SD = standard deviation.\n\n\
        Plot      M     SD\n------------------\nMulch     3.4   1.1\nBare      5.2   1.3\n";
    assert_eq!(
        kinds(source),
        [
            (Caption, "Table 2. Litres by plot"),
            (Paragraph, "Plot M SD p"),
            (Paragraph, "Mulch 3.4 1.1 <.001"),
            (Paragraph, "Bare 5.2 1.3 .04"),
            (TableNote, "Note. SD = standard deviation."),
            (Paragraph, "Plot M SD"),
            (Paragraph, "Mulch 3.4 1.1"),
            (Paragraph, "Bare 5.2 1.3"),
        ]
        .map(|(k, t)| (k, t.to_string()))
    );
}

#[test]
fn numbered_lines_and_pages() {
    let text = [
        "Results",
        "",
        "Plots with mulch were watered less,",
        "t(28) = 2.20,",
        "p = .036, and this",
        "held for all",
        "of them.",
    ];
    let numbered: String = text
        .iter()
        .enumerate()
        .map(|(i, l)| format!("{:>4} {l}\n", i + 1))
        .collect();
    assert_eq!(
        kinds(&numbered),
        [
            (Heading(1), "Results".to_string()),
            (
                Paragraph,
                "Plots with mulch were watered less, t(28) = 2.20, p = .036, and this held for all of them."
                    .to_string()
            ),
        ]
    );
    let paged = "Plots differed in the\namount of water, t(28) =\n\n7\n\n\u{c}2.20, p = .036.\n\nNext.\n";
    let m = read(paged).expect("plain text is always read");
    assert_eq!(
        m.text,
        "Plots differed in the amount of water, t(28) = 2.20, p = .036.\n\nNext.\n"
    );
    let at = m.text.find("2.20").expect("the text holds it");
    let place = m.place(&m.blocks[0], at..at + 4);
    assert_eq!((place.page, place.line), (Some(2), Some(6)));
}

#[test]
fn one_endless_line_is_read() {
    let source = "Watered daily – p = .03. ".repeat(120_000);
    let m = read(&source).expect("plain text is always read");
    assert_eq!(m.text.matches("p = .03").count(), 120_000);
    assert!(m.blocks.len() > 1);
}
