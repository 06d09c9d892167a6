//! What the report for reading looks like, in full.

use super::super::samples;
use super::*;
use crate::judge::Repair;
use crate::manuscript::{BlockKind, Builder, CellShape, Format};
use crate::readers::Unreadable;

const PLAIN: Text = Text {
    show: Show::Conflicts,
    width: 72,
    bold: false,
    typed: false,
    several: false,
};

/// A page with a reversal, a conflict, an open and an agreeing finding, the least serious first.
fn one_of_each() -> Entry {
    let m = samples::page(
        "Soil moisture did not differ, F(1, 52) = 1.31, p = .258, ηp² = .02. Harvests grew with \
         watering, r(46) = .29, p = .45. Keepers of a diary watered less often than the other \
         gardeners of the same allotment, t(28) = 2.20, p = .063, and used shorter hoses, p = .04.",
    );
    let f = samples::statement(
        &m,
        1,
        "F(1, 52) = 1.31, p = .258, ηp² = .02",
        &[
            ("df1", "=", "1"),
            ("df2", "=", "52"),
            ("F", "=", "1.31"),
            ("p", "=", ".258"),
            ("eta2p", "=", ".02"),
        ],
    );
    let r = samples::statement(
        &m,
        2,
        "r(46) = .29, p = .45",
        &[("df", "=", "46"), ("r", "=", ".29"), ("p", "=", ".45")],
    );
    let t = samples::statement(
        &m,
        3,
        "t(28) = 2.20, p = .063",
        &[("df", "=", "28"), ("t", "=", "2.20"), ("p", "=", ".063")],
    );
    let alone = samples::statement(&m, 4, "p = .04.", &[("p", "=", ".04")]);
    let findings = vec![
        Finding {
            relation: "p-from-f",
            reported: vec![("p", "= .258".into())],
            expected: vec![("p", [0.255_8, 0.259_5])],
            says: "p agrees with F and its degrees of freedom.".into(),
            ..samples::finding_on(&m, &f, Verdict::Agrees)
        },
        Finding {
            relation: "p-from-r",
            reported: vec![("p", "= .45".into())],
            expected: vec![("p", [0.041_6, 0.049_5])],
            assumes: vec!["two-sided".into(), "no control variables".into()],
            says: "The correlation is significant, but the printed p is not.".into(),
            repairs: vec![Repair {
                symbol: "p",
                to: ".045".into(),
                slip: Some("decimal point shifted"),
            }],
            ..samples::finding_on(&m, &r, Verdict::Reverses)
        },
        Finding {
            reported: vec![("p", "= .063".into())],
            expected: vec![("p", [0.035_871, 0.036_692])],
            assumes: vec!["two-sided".into()],
            says: "With t = 2.20 and 28 degrees of freedom, p lies between .0358 and .0367.".into(),
            repairs: (1..=8)
                .map(|i| Repair {
                    symbol: "t",
                    to: format!("1.9{i}"),
                    slip: None,
                })
                .collect(),
            ..samples::finding_on(&m, &t, Verdict::Conflicts)
        },
        Finding {
            relation: "stars",
            says: "p = .04 could not be decided: the test statistic is missing.".into(),
            ..samples::finding_on(&m, &alone, Verdict::Open)
        },
    ];
    samples::document("drafts/diary.md", m, vec![f, r, t, alone], findings)
}

#[test]
fn conflicts_come_with_sentence_range_and_repairs_most_serious_first() {
    insta::assert_snapshot!(PLAIN.entry(&one_of_each()));
}

#[test]
fn everything_is_shown_when_asked_for() {
    let all = Text {
        show: Show::All,
        ..PLAIN
    };
    insta::assert_snapshot!(all.entry(&one_of_each()));
}

#[test]
fn a_narrow_terminal_loses_nothing() {
    let narrow = Text { width: 60, ..PLAIN };
    let shown = narrow.entry(&one_of_each());
    let widest = shown.lines().map(columns).max();
    assert!(widest <= Some(60), "{shown}");
    insta::assert_snapshot!(shown);
}

#[test]
fn bold_marks_names_and_verdicts_and_moves_nothing() {
    let bold = Text { bold: true, ..PLAIN }.entry(&one_of_each());
    assert!(bold.contains("\u{1b}[1mreverses\u{1b}[0m   p-from-r"));
    assert!(bold.contains("\u{1b}[1mdrafts/diary.md\u{1b}[0m"));
    let stripped = bold.replace("\u{1b}[1m", "").replace("\u{1b}[0m", "");
    assert_eq!(stripped, PLAIN.entry(&one_of_each()));
}

#[test]
fn a_typed_statement_has_neither_name_nor_place() {
    let typed = Text { typed: true, ..PLAIN };
    let shown = typed.entry(&samples::conflict());
    assert_eq!(
        shown,
        "\
conflicts  p-from-t
    Diary keepers watered less often than gardeners without a diary,
    t(28) = 2.20, p = .063.
      ^^    ^^^^      ^^^^
    printed:         p = .063
    follows:         p = .0358 to .0367
    assumes:         two-sided
    would agree if:  p = .036 (two digits swapped)
                     t = 1.93 to 1.94
    With t = 2.20 and 28 degrees of freedom, p lies between .0358 and
    .0367.

1 statement with 3 numbers read, 1 check made: 1 conflicts.
"
    );
}

#[test]
fn a_row_of_a_table_is_shown_with_all_its_cells() {
    let mut b = Builder::new(Format::Html);
    b.open_table();
    for cells in [["Plot", "t(28)", "p"], ["Raised beds", "2.20", ".063"]] {
        b.row();
        for text in cells {
            b.cell(CellShape::default());
            b.text(text);
            b.close();
        }
    }
    b.close_table();
    b.describe_table(0, Some("Table 2."), &[], &[]);
    let m = b.finish();
    let s = samples::statement(&m, 1, "2.20", &[("t", "=", "2.20")]);
    let p = samples::find(&m.text, ".063");
    let mut finding = samples::finding_on(&m, &s, Verdict::Conflicts);
    finding.marks.push(p);
    finding.says = "They do not go together.".into();
    let entry = samples::document("tables.html", m, vec![s], vec![finding]);
    let shown = PLAIN.entry(&entry);
    assert_eq!(
        shown,
        "\
── tables.html ────────────────────────────────────────── 1 conflicts ──

conflicts  p-from-t  Table 2, row 2, column 2
    Raised beds | 2.20 | .063
                  ^^^^   ^^^^
    They do not go together.

1 statement with 1 number read, 1 check made: 1 conflicts.
"
    );
}

#[test]
fn a_number_from_elsewhere_is_shown_where_it_stands() {
    let mut b = Builder::new(Format::Text);
    for (line, text) in [
        (1, "We asked n = 30 gardeners."),
        (5, "They watered daily, t(28) = 2.20."),
    ] {
        b.open(BlockKind::Paragraph);
        b.line(line);
        b.text(text);
        b.close();
    }
    let m = b.finish();
    let s = samples::statement(&m, 1, "t(28) = 2.20", &[("df", "=", "28"), ("t", "=", "2.20")]);
    let mut finding = samples::finding_on(&m, &s, Verdict::Conflicts);
    finding.relation = "df-vs-n";
    finding.marks = vec![samples::find(&m.text, "28"), samples::find(&m.text, "30")];
    finding.says = "The degrees of freedom do not follow from n.".into();
    let entry = samples::document("draft.txt", m, vec![s], vec![finding]);
    assert_eq!(
        PLAIN.entry(&entry),
        "\
── draft.txt ──────────────────────────────────────────── 1 conflicts ──

conflicts  df-vs-n  line 5, paragraph 2
    They watered daily, t(28) = 2.20.
                          ^^
  with line 1, paragraph 1
    We asked n = 30 gardeners.
                 ^^
    The degrees of freedom do not follow from n.

1 statement with 2 numbers read, 1 check made: 1 conflicts.
"
    );
}

#[test]
fn nothing_found_is_said_plainly() {
    assert_eq!(
        PLAIN.entry(&samples::entry("my draft.txt", "Beds were dug.", Vec::new())),
        "\
── my draft.txt ─────────────────────────────────────── no statements ──

No statements were found: nothing here looks like a reported result.
This shows the text as it was read:
    tieout check --format text-only 'my draft.txt'
"
    );
}

#[test]
fn agreement_says_what_was_checked() {
    let mut entry = one_of_each();
    if let Ok(document) = &mut entry.outcome {
        document.findings.retain(|f| f.verdict < Verdict::Conflicts);
        document
            .manuscript
            .remarks
            .push("page 3 has no text; it may be a picture".into());
    }
    assert_eq!(
        PLAIN.entry(&entry),
        "\
── drafts/diary.md ───────────────────────────────────── no conflicts ──

note: page 3 has no text; it may be a picture

4 statements with 12 numbers read, 2 checks made: 1 open and 1 agrees;
nothing conflicts.
Checked: p-from-f 1×, stars 1×.
With --show open you also see what could not be decided, and why.
"
    );
}

#[test]
fn the_cautions_come_once_at_the_end() {
    let mut tally = Tally::default();
    tally.add(one_of_each().outcome.ok().map(|d| d.counts()));
    let one = PLAIN.closing(&tally);
    assert!(one.starts_with("\nEvery finding is a question"), "{one}");
    tally.add(None);
    tally.add(Some(Counts::default()));
    let several = Text {
        several: true,
        ..PLAIN
    };
    insta::assert_snapshot!(several.closing(&tally));
    assert_eq!(
        PLAIN.closing(&Tally {
            unreadable: 1,
            ..Tally::default()
        }),
        ""
    );
}

#[test]
fn hints_are_given_once_for_several_inputs() {
    let several = Text {
        several: true,
        ..PLAIN
    };
    let shown = several.entry(&one_of_each()) + &several.entry(&samples::entry("a.txt", "Beds.", Vec::new()));
    assert!(
        !shown.contains("--show open") && !shown.contains("text-only"),
        "{shown}"
    );
}

#[test]
fn statements_without_any_check_are_not_called_free_of_conflicts() {
    let mut entry = one_of_each();
    if let Ok(document) = &mut entry.outcome {
        document.findings.clear();
    }
    assert_eq!(
        PLAIN.entry(&entry),
        "\
── drafts/diary.md ────────────────────────────────── nothing checked ──

4 statements with 12 numbers read, but no relation ties these numbers
together, so nothing was checked.
"
    );
}

#[test]
fn a_repair_may_turn_the_comparator_round() {
    let mut entry = samples::conflict();
    if let Ok(document) = &mut entry.outcome {
        document.findings[0].repairs[0].to = "> .001".into();
    }
    let shown = PLAIN.entry(&entry);
    assert!(
        shown.contains("would agree if:  p > .001 (two digits swapped)\n"),
        "{shown}"
    );
}

#[test]
fn an_unreadable_input_is_left_to_standard_error() {
    let entry = Entry {
        name: "torn.pdf".into(),
        outcome: Err(Unreadable::new("is damaged; export it again")),
    };
    assert_eq!(PLAIN.entry(&entry), "");
}

#[test]
fn a_manuscript_cannot_drive_the_terminal() {
    let mut entry = one_of_each();
    entry.name = "draft\u{1b}[31m.md".into();
    if let Ok(document) = &mut entry.outcome {
        document.findings[1].says = "red\u{9b}31m text".into();
        document.manuscript.remarks.push("odd\u{7} page".into());
    }
    let shown = PLAIN.entry(&entry);
    assert!(!shown.contains(['\u{1b}', '\u{9b}', '\u{7}']), "{shown}");
}

#[test]
fn names_with_spaces_can_be_copied_to_a_command_line() {
    assert_eq!(shell_word("a/b-1.md"), "a/b-1.md");
    assert_eq!(shell_word("it's my draft.md"), r"'it'\''s my draft.md'");
}
