//! What is a table and what is not, on pages written by hand.

use super::super::read;
use super::super::sample::{At, at, content, pdf, sized};
use crate::manuscript::{BlockKind, Manuscript};

/// A page of texts and of rules from left to right (x, y, length).
fn page(texts: &[At], rules: &[(f32, f32, f32)]) -> String {
    let mut out = content(texts);
    for (x, y, length) in rules {
        out.push_str(&format!("{x} {y} m {} {y} l S\n", x + length));
    }
    out
}

fn read_page(texts: &[At], rules: &[(f32, f32, f32)]) -> Manuscript {
    read(&pdf(&[page(texts, rules)], "")).expect("the sample is a PDF")
}

/// Cells at these columns, row by row downwards.
fn rows(y: f32, step: f32, columns: &[f32], rows: &[&'static [&'static str]]) -> Vec<At<'static>> {
    let mut out = Vec::new();
    for (i, row) in rows.iter().enumerate() {
        for (x, text) in columns.iter().zip(*row) {
            if !text.is_empty() {
                out.push(at(*x, y - step * i as f32, text));
            }
        }
    }
    out
}

fn grid(m: &Manuscript, table: usize) -> Vec<Vec<&str>> {
    let t = &m.tables[table];
    (0..t.rows)
        .map(|row| {
            t.cells
                .iter()
                .filter(|c| c.row == row)
                .map(|c| m.block_text(&m.blocks[c.block]))
                .collect()
        })
        .collect()
}

const LITRES: &[&[&str]] = &[
    &["Group", "M", "SD", "p"],
    &["Diary", "31.4", "9.8", ""],
    &["No diary", "28.1", "8.7", ".023"],
];

#[test]
fn a_caption_rules_and_cells_make_a_table_with_notes() {
    let mut texts = vec![at(50.0, 700.0, "Table 3. Litres of water a week")];
    texts.extend(rows(680.0, 12.0, &[50.0, 150.0, 200.0, 250.0], LITRES));
    texts.push(sized(
        50.0,
        640.0,
        8.0,
        "Note. From the diaries, t(118) = 2.31, p = .023.",
    ));
    texts.push(at(
        50.0,
        600.0,
        "The gardeners went on with their diaries in the next summer, as they had",
    ));
    let m = read_page(
        &texts,
        &[(50.0, 692.0, 220.0), (50.0, 676.0, 220.0), (50.0, 651.0, 220.0)],
    );
    assert_eq!(m.tables.len(), 1, "{}", m.text);
    assert_eq!(
        grid(&m, 0),
        [
            ["Group", "M", "SD", "p"],
            ["Diary", "31.4", "9.8", ""],
            ["No diary", "28.1", "8.7", ".023"]
        ]
    );
    assert!(
        m.text.contains("Diary\t31.4\t9.8\t\nNo diary\t28.1\t8.7\t.023"),
        "{:?}",
        m.text
    );
    let t = &m.tables[0];
    assert_eq!(t.label.as_deref(), Some("Table 3"));
    assert!(t.cells.iter().all(|c| c.header == (c.row == 0)));
    let kinds: Vec<BlockKind> = t
        .captions
        .iter()
        .chain(&t.notes)
        .map(|b| m.blocks[*b].kind)
        .collect();
    assert_eq!(kinds, [BlockKind::Caption, BlockKind::TableNote]);
    let p = m.text.find(".023").expect("in the table");
    let cell = m.blocks.iter().find(|b| b.range.contains(&p)).expect("in a cell");
    let place = m.place(cell, p..p + 4);
    assert_eq!(
        (
            place.table.as_deref(),
            place.row,
            place.column,
            place.line,
            place.page
        ),
        (Some("Table 3"), Some(3), Some(4), Some(4), Some(1))
    );
    assert!(m.text.ends_with("as they had\n"));
}

#[test]
fn one_rule_below_the_heads_of_several_rows_is_enough_without_a_caption() {
    let cells: &[&[&str]] = &[
        &["Site", "n", "Litres, M (SD)", "Evening"],
        &["North", "30", "41.2 (9.8)", "12 (40.0%)"],
        &["Middle", "30", "38.7 (8.1)", "15 (50.0%)"],
        &["South", "30", "45.1 (10.4)", "18 (60.0%)"],
    ];
    let texts = rows(680.0, 14.0, &[50.0, 150.0, 220.0, 320.0], cells);
    let m = read_page(&texts, &[(48.0, 676.0, 340.0)]);
    assert_eq!(m.tables.len(), 1, "{}", m.text);
    assert_eq!(grid(&m, 0)[3], ["South", "30", "45.1 (10.4)", "18 (60.0%)"]);
    assert_eq!(m.tables[0].label, None);
    // Without the rule nothing says so.
    assert!(read_page(&texts, &[]).tables.is_empty());
}

#[test]
fn two_columns_of_text_between_rules_are_no_table() {
    let left = [
        "Keywords: diaries; water; cans; 12 plots of",
        "the society; evening; mood of the gardeners",
        "in 2014; seedlings lost in May 3, June 4 and",
        "July 7; slugs; rain measured with a gauge on",
        "the roof of the shed in 12 of 30 weeks, and",
        "sun that was not measured by anybody at all",
    ];
    let right = [
        "Gardeners kept a diary of every can of water",
        "that they carried, and 118 of these were read",
        "by the secretary, who found 2.31 cans a day in",
        "the first month and 1.98 in the second, while",
        "31.4 litres a week were usual in the third one",
        "and 28.1 in the fourth, when it rained at last.",
    ];
    let mut texts = Vec::new();
    for i in 0..6 {
        texts.push(at(50.0, 700.0 - 12.0 * i as f32, left[i]));
        texts.push(at(320.0, 700.0 - 12.0 * i as f32, right[i]));
    }
    let m = read_page(&texts, &[(50.0, 715.0, 500.0), (50.0, 630.0, 500.0)]);
    assert!(m.tables.is_empty(), "{}", m.text);
    assert!(
        m.text.contains("2.31 cans a day in the first month"),
        "{}",
        m.text
    );
}

#[test]
fn ticks_of_a_figure_are_no_table() {
    let mut texts = Vec::new();
    let mut rules = Vec::new();
    for (i, y) in ["0", "10", "20", "30"].into_iter().enumerate() {
        let height = 500.0 + 40.0 * i as f32;
        texts.push(at(80.0, height, y));
        rules.push((100.0, height, 300.0));
    }
    for (i, x) in ["1", "2", "3", "4", "5"].into_iter().enumerate() {
        texts.push(at(120.0 + 60.0 * i as f32, 485.0, x));
    }
    texts.push(at(80.0, 460.0, "Figure 2. Litres by week"));
    assert!(read_page(&texts, &rules).tables.is_empty());
}

#[test]
fn labels_wrapped_and_intervals_on_two_lines_stay_in_their_row() {
    let cells: &[&[&str]] = &[
        &["Predictor", "b", "95% CI", "p"],
        &["Number of cans carried", "", "", ""],
        &["from the tap", "4.62", "[1.08,", ".011"],
        &["", "", "8.16]", ""],
        &["Age", "0.05", "[0.01, 0.09]", ".479"],
    ];
    let mut texts = vec![at(50.0, 700.0, "Table 1. Litres regressed on habits")];
    texts.extend(rows(680.0, 12.0, &[50.0, 170.0, 220.0, 300.0], cells));
    let m = read_page(
        &texts,
        &[(50.0, 692.0, 280.0), (50.0, 676.0, 280.0), (50.0, 627.0, 280.0)],
    );
    assert_eq!(m.tables.len(), 1, "{}", m.text);
    assert_eq!(
        grid(&m, 0)[1..],
        [
            [
                "Number of cans carried from the tap",
                "4.62",
                "[1.08, 8.16]",
                ".011"
            ],
            ["Age", "0.05", "[0.01, 0.09]", ".479"]
        ]
    );
}

#[test]
fn heads_over_several_columns_span_them() {
    let cells: &[&[&str]] = &[
        &["", "", "Morning", "", "Evening", ""],
        &["Measure", "M", "", "SD", "M", "SD"],
        &["Mood", "3.96", "", "1.21", "4.41", "1.32"],
        &["Cans", "14.1", "", "3.3", "13.7", "3.4"],
    ];
    let mut texts = vec![at(50.0, 700.0, "Table 2. Mood and cans")];
    texts.extend(rows(
        680.0,
        14.0,
        &[50.0, 150.0, 160.0, 200.0, 260.0, 310.0],
        cells,
    ));
    // `Evening` stands over its two columns.
    for t in &mut texts {
        if t.text == "Evening" {
            t.x = 270.0;
        }
    }
    let rules = [
        (50.0, 692.0, 300.0),
        (145.0, 676.0, 80.0),
        (255.0, 676.0, 80.0),
        (50.0, 662.0, 300.0),
        (50.0, 634.0, 300.0),
    ];
    let m = read_page(&texts, &rules);
    assert_eq!(m.tables.len(), 1, "{}", m.text);
    let spans: Vec<(&str, u32, u32)> = m.tables[0]
        .cells
        .iter()
        .filter(|c| c.row == 0 && c.colspan > 1)
        .map(|c| (m.block_text(&m.blocks[c.block]), c.column, c.colspan))
        .collect();
    assert_eq!(spans, [("Morning", 1, 2), ("Evening", 3, 2)]);
    assert_eq!(grid(&m, 0)[1], ["Measure", "M", "SD", "M", "SD"]);
}

#[test]
fn pages_full_of_strokes_cost_no_time() {
    let mut content = page(&[at(50.0, 700.0, "Table 1. Every bed of the allotments")], &[]);
    for i in 0..40_000 {
        let (x, y) = ((i % 200) as f32 * 2.5 + 20.0, (i / 200) as f32 * 3.0 + 20.0);
        content.push_str(&format!("{x} {y} m {} {y} l S\n", x + 60.0));
    }
    let start = std::time::Instant::now();
    let m = read(&pdf(&[content], "")).expect("the sample is a PDF");
    assert!(m.tables.is_empty() && start.elapsed() < std::time::Duration::from_secs(20));
}
