//! The tables of `fixtures/tables/source.tsv`, printed by several programs, are read from the PDFs cell
//! by cell as they stand in the source.

use std::collections::HashMap;
use std::path::Path;
use tieout::manuscript::{Manuscript, Table};

struct Source {
    name: String,
    caption: String,
    /// Row, column, text, columns it spans, whether it is a head.
    cells: Vec<(u32, u32, String, u32, bool)>,
    notes: Vec<String>,
}

fn sources() -> Vec<Source> {
    let text = std::fs::read_to_string("fixtures/tables/source.tsv").expect("the source of the tables");
    let mut out: Vec<Source> = Vec::new();
    let mut row = 0;
    for line in text.lines().filter(|l| !l.is_empty()) {
        if let Some(title) = line.strip_prefix("= ") {
            let parts: Vec<&str> = title.split('\t').collect();
            out.push(Source {
                name: parts[0].into(),
                caption: parts[2].into(),
                cells: Vec::new(),
                notes: Vec::new(),
            });
            row = 0;
            continue;
        }
        let table = out.last_mut().expect("a title stands first");
        if let Some(note) = line.strip_prefix("note: ") {
            table.notes.push(note.into());
            continue;
        }
        let head = line.starts_with('#');
        let mut column = 0;
        for cell in line.trim_start_matches('#').split('\t') {
            let (text, span) = match cell.strip_suffix('>').and_then(|c| c.rsplit_once('<')) {
                Some((text, span)) => (text, span.parse().expect("a number of columns")),
                None => (cell, 1),
            };
            if !text.trim().is_empty() {
                table.cells.push((row, column, bare(text), span, head));
            }
            column += span;
        }
        row += 1;
    }
    out
}

/// Without spaces, which programs set differently, with one kind of dash, and with raised and lowered
/// letters in one order.
fn bare(text: &str) -> String {
    let plain: String = text
        .chars()
        .filter(|c| !c.is_whitespace())
        .map(|c| match c {
            '−' | '–' | '—' => '-',
            '∗' => '*',
            c => c,
        })
        .collect();
    plain.replace("η²p", "ηp²")
}

/// The texts of the table's cells by row and column, with their spans.
fn cells<'m>(m: &'m Manuscript, table: &Table) -> HashMap<(u32, u32), (String, u32, bool, &'m str)> {
    let read = |c: &tieout::manuscript::Cell| {
        let text = m.block_text(&m.blocks[c.block]);
        ((c.row, c.column), (bare(text), c.colspan, c.header, text))
    };
    table.cells.iter().map(read).collect()
}

/// Compares all tables of a file; `notes` says whether it shows the notes.
fn compare(file: &str, notes: bool) {
    let path = Path::new("fixtures/tables").join(file).with_extension("pdf");
    let m = tieout::readers::read_file(&path).expect("the file is readable");
    let sources = sources();
    assert_eq!(m.tables.len(), sources.len(), "number of tables in {file}");
    for (number, (source, table)) in sources.iter().zip(&m.tables).enumerate() {
        let at = format!("{} of {file}", source.name);
        let label = format!("Table {}", number + 1);
        assert_eq!(table.label.as_deref(), Some(label.as_str()), "label of {at}");
        let read = cells(&m, table);
        for (row, column, text, span, head) in &source.cells {
            let (found, colspan, header, _) = read
                .get(&(*row, *column))
                .unwrap_or_else(|| panic!("{text} at {row}, {column} is missing in {at}"));
            assert_eq!(found, text, "row {row}, column {column} of {at}");
            assert_eq!(header, head, "head or not: {text} in {at}");
            if *head {
                assert_eq!(colspan, span, "columns of {text} in {at}");
            }
        }
        let filled = read.values().filter(|c| !c.0.is_empty()).count();
        assert_eq!(filled, source.cells.len(), "cells with text in {at}");
        let texts = |blocks: &[usize]| {
            let all: Vec<&str> = blocks.iter().map(|b| m.block_text(&m.blocks[*b])).collect();
            bare(&all.concat())
        };
        assert!(
            texts(&table.captions).contains(&bare(&source.caption)),
            "caption of {at}"
        );
        if notes {
            for note in &source.notes {
                assert!(texts(&table.notes).contains(&bare(note)), "{note} below {at}");
            }
        }
        // A place names table, row and column, and the page of the cell itself.
        let cell = table.cells.last().expect("the table has cells");
        let block = &m.blocks[cell.block];
        let place = m.place(block, block.range.clone());
        assert_eq!(place.table.as_deref(), Some(label.as_str()));
        assert_eq!(
            (place.row, place.column),
            (Some(cell.row + 1), Some(cell.column + 1))
        );
        assert!(place.page.is_some() && place.line.is_some(), "{place:?} in {at}");
    }
    // The running text around the tables is still in one piece.
    let result = "t(118) = 2.31, p = .023, than those who did not keep one.";
    let whole = m.text.replace('\n', " ").matches(result).count();
    assert!(whole >= sources.len(), "{whole} times in {file}");
}

#[test]
fn tables_in_one_of_two_columns() {
    compare("latex-columns", true);
}

#[test]
fn tables_on_their_side() {
    compare("latex-sideways", true);
}

#[test]
fn tables_that_go_on_on_the_next_page_are_one() {
    compare("latex-long", false);
}

#[test]
fn tables_of_typst() {
    // Where a table ends with its page, its notes stand on the next one.
    compare("typst", false);
}

#[test]
fn tables_of_a_word_processor() {
    compare("office", true);
}

#[test]
fn tables_of_a_browser() {
    compare("chromium", true);
}
