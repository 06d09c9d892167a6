//! Tables in the manuscript: caption, cells and notes, one after the other. What goes on from an
//! earlier page is added to the rows of the table it began in.

use super::super::compose::write_words;
use super::super::lines::Line;
use super::super::paragraphs::Block;
use super::Table;
use super::content::begins_note;
use super::grid::{Grid, GridCell};
use crate::manuscript::{BlockKind, Builder, CellShape, Description};
use std::collections::HashMap;

/// The tables of a document on their way into the manuscript.
pub struct Tables<'a> {
    tables: &'a [Table],
    /// The number of each one's first line on its page.
    numbers: Vec<u32>,
    /// The one that each continues.
    begun_in: Vec<Option<usize>>,
    written: Vec<bool>,
}

impl<'a> Tables<'a> {
    pub fn new(tables: &'a [Table], blocks: &[Block]) -> Tables<'a> {
        let mut numbers = vec![0; tables.len()];
        for (number, line) in blocks.iter().rev().flat_map(|b| b.lines.iter().rev()) {
            if let Some(n) = line.table.and_then(|t| numbers.get_mut(t)) {
                *n = *number;
            }
        }
        Tables {
            tables,
            numbers,
            begun_in: continued(tables),
            written: vec![false; tables.len()],
        }
    }

    /// Writes a table where it stands, once, with what continues it.
    pub fn write(&mut self, b: &mut Builder, table: usize) {
        let first = self.begun_in[table].unwrap_or(table);
        if std::mem::replace(&mut self.written[first], true) {
            return;
        }
        let parts: Vec<(&Table, u32)> = (0..self.tables.len())
            .filter(|i| *i == first || self.begun_in[*i] == Some(first))
            .map(|i| (&self.tables[i], self.numbers[i]))
            .collect();
        write(b, &parts);
    }
}

/// For each table the one that it continues.
fn continued(tables: &[Table]) -> Vec<Option<usize>> {
    let mut out: Vec<Option<usize>> = Vec::with_capacity(tables.len());
    for (index, table) in tables.iter().enumerate() {
        let same_label = |t: &Table| {
            let goes_on = table.continued || table.at_top && t.at_bottom;
            goes_on && table.label.is_some() && t.label == table.label
        };
        let earlier = tables[..index].iter().rposition(|t| {
            let same_heads = table.grid.header_rows > 0 && heads(&t.grid) == heads(&table.grid);
            let repeated = table.label.is_none()
                && table.at_top
                && (same_heads && t.page + 1 == table.page || t.could_go_on(table.page, table.sides));
            let near = table.page - t.page <= 3;
            t.grid.columns == table.grid.columns && near && (same_label(t) || repeated)
        });
        // Only the last table of a page goes on without saying so.
        let earlier = earlier.filter(|e| table.label.is_some() || *e + 1 == index);
        out.push(earlier.map(|e| out[e].unwrap_or(e)));
    }
    out
}

/// Texts and columns of the heads.
fn heads(grid: &Grid) -> Vec<(usize, String)> {
    grid.cells
        .iter()
        .filter(|c| c.header)
        .map(|c| (c.column, c.plain()))
        .collect()
}

/// Writes a table and what continues it; each part comes with the number of its first line on its page.
fn write(b: &mut Builder, parts: &[(&Table, u32)]) {
    let Some((first, _)) = parts.first() else { return };
    let mut about = Description {
        label: first.label.clone(),
        ..Description::default()
    };
    let captions = |b: &mut Builder, part: &(&Table, u32), about: &mut Description| {
        let (table, number) = part;
        let from = if table.below {
            number + table.lines as u32
        } else {
            *number
        };
        text(b, BlockKind::Caption, &table.caption, from, table, about);
    };
    if !first.below {
        captions(b, &parts[0], &mut about);
    }
    let index = b.table_count();
    b.open_table();
    for (k, (table, number)) in parts.iter().enumerate() {
        let grid = &table.grid;
        let repeated = k > 0 && grid.header_rows > 0 && heads(&first.grid) == heads(grid);
        let skip = if repeated { grid.header_rows } else { 0 };
        let from = if table.below {
            *number
        } else {
            number + table.caption.len() as u32
        };
        rows(b, table, skip, from, k == 0);
    }
    b.close_table();
    for (k, part) in parts.iter().enumerate() {
        if first.below && k == 0 || k > 0 {
            captions(b, part, &mut about);
        }
        let (table, number) = part;
        let from = number + (table.lines + table.caption.len()) as u32;
        let mut at = 0;
        while at < table.notes.len() {
            let n = 1 + table.notes[at + 1..]
                .iter()
                .take_while(|l| !begins_note(l))
                .count();
            let lines = &table.notes[at..at + n];
            text(
                b,
                BlockKind::TableNote,
                lines,
                from + at as u32,
                table,
                &mut about,
            );
            at += n;
        }
    }
    b.describe(index, &about);
}

fn text(b: &mut Builder, kind: BlockKind, lines: &[Line], from: u32, table: &Table, about: &mut Description) {
    if lines.is_empty() {
        return;
    }
    let block = b.next_block();
    b.open(kind);
    for (i, line) in lines.iter().enumerate() {
        if i > 0 {
            b.line_break();
        }
        b.page(table.page);
        b.line(from + i as u32);
        write_words(b, &line.words);
    }
    b.close();
    if b.next_block() > block {
        about.add(kind, block);
    }
}

/// Writes the rows; a part that goes on has no heads of its own.
fn rows(b: &mut Builder, table: &Table, skip: usize, from: u32, first: bool) {
    let grid = &table.grid;
    let mut cells: HashMap<(usize, usize), &GridCell> = HashMap::new();
    for cell in &grid.cells {
        cells.entry((cell.row, cell.column)).or_insert(cell);
    }
    // For each column, the first row below the cells that reach down into it.
    let mut free = vec![0usize; grid.columns];
    for row in skip..grid.rows {
        b.row();
        let mut column = 0;
        while column < grid.columns {
            if free[column] > row {
                column += 1;
                continue;
            }
            let cell = cells.get(&(row, column));
            b.page(table.page);
            let Some(cell) = cell else {
                b.cell(CellShape {
                    header: first && row < grid.header_rows,
                    ..CellShape::default()
                });
                b.close();
                column += 1;
                continue;
            };
            b.cell(CellShape {
                rowspan: cell.rowspan as u32,
                colspan: cell.colspan as u32,
                header: first && cell.header,
            });
            for (i, (line, words)) in cell.text.iter().enumerate() {
                if i > 0 {
                    b.line_break();
                }
                b.line(from + *line as u32);
                write_words(b, words);
            }
            b.close();
            let end = (column + cell.colspan).min(grid.columns);
            for f in &mut free[column..end] {
                *f = row + cell.rowspan;
            }
            column = end;
        }
    }
}
