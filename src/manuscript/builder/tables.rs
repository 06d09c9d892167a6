//! The tables of a builder: rows and cells, merged ones included, and what describes a table.

use super::Builder;
use crate::manuscript::{BlockKind, Cell, CellAt, Table};

/// Position and extent of a cell, as the reader knows it.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct CellShape {
    pub rowspan: u32,
    pub colspan: u32,
    pub header: bool,
}

impl Default for CellShape {
    fn default() -> Self {
        CellShape {
            rowspan: 1,
            colspan: 1,
            header: false,
        }
    }
}

/// What stands around a table and describes it: its label, and its captions and notes by the indexes
/// of their blocks (see [`Builder::next_block`]).
#[derive(Clone, Debug, Default)]
pub struct Description {
    pub label: Option<String>,
    pub captions: Vec<usize>,
    pub notes: Vec<usize>,
}

impl Description {
    /// Takes in a block if its kind describes tables.
    pub fn add(&mut self, kind: BlockKind, block: usize) {
        match kind {
            BlockKind::Caption => self.captions.push(block),
            BlockKind::TableNote => self.notes.push(block),
            _ => {}
        }
    }
}

/// Spans beyond this are taken for a mistake in the file, not for a table this large.
const LARGEST_SPAN: u32 = 1000;

/// Cells beyond this column share it: no page is that wide, and a damaged file may claim it.
const LAST_COLUMN: u32 = 4095;

/// The table that is being filled.
pub(super) struct OpenTable {
    index: usize,
    row: u32,
    column: u32,
    /// For each column, the first row below the cells that reach down into it.
    free_from: Vec<u32>,
    pub(super) row_has_text: bool,
}

impl Builder {
    /// Opens a table; nested tables are read as text of the outer cell.
    pub fn open_table(&mut self) {
        self.close();
        self.tables.push(Table {
            label: None,
            captions: Vec::new(),
            notes: Vec::new(),
            cells: Vec::new(),
            rows: 0,
            columns: 0,
        });
        self.table = Some(OpenTable {
            index: self.tables.len() - 1,
            row: 0,
            column: 0,
            free_from: Vec::new(),
            row_has_text: false,
        });
    }

    pub fn in_table(&self) -> bool {
        self.table.is_some()
    }

    /// Starts the next row. The first call starts the first row.
    pub fn row(&mut self) {
        self.close();
        if let Some(table) = &mut self.table {
            let first = self.tables[table.index].rows == 0;
            if !first {
                table.row += 1;
            }
            table.column = 0;
            self.tables[table.index].rows = table.row + 1;
            if table.row_has_text && self.text.ends_with('\t') {
                self.text.pop();
                self.text.push('\n');
            }
            table.row_has_text = false;
        }
    }

    /// Opens the next free cell of the row; the text that follows is its text until [`Builder::close`].
    pub fn cell(&mut self, shape: CellShape) {
        self.close();
        let Some(table) = &mut self.table else {
            self.open(BlockKind::Paragraph);
            return;
        };
        while table
            .free_from
            .get(table.column as usize)
            .is_some_and(|free| *free > table.row)
        {
            table.column += 1;
        }
        table.column = table.column.min(LAST_COLUMN);
        let (rowspan, colspan) = (
            shape.rowspan.clamp(1, LARGEST_SPAN),
            shape.colspan.clamp(1, LARGEST_SPAN),
        );
        let end = (table.column + colspan) as usize;
        if table.free_from.len() < end {
            table.free_from.resize(end, 0);
        }
        for free in &mut table.free_from[table.column as usize..end] {
            *free = table.row + rowspan;
        }
        let grid = &mut self.tables[table.index];
        grid.columns = grid.columns.max(end as u32);
        grid.cells.push(Cell {
            row: table.row,
            column: table.column,
            rowspan,
            colspan,
            header: shape.header,
            block: self.blocks.len(),
        });
        table.column += colspan;
        self.open(BlockKind::Cell);
    }

    pub(super) fn cell_at(&self) -> Option<CellAt> {
        let table = self.table.as_ref()?;
        let cell = self.tables[table.index].cells.len().checked_sub(1)?;
        Some(CellAt {
            table: table.index,
            cell,
        })
    }

    /// Closes the table and gives it its label, e.g. `Table 2`, and the blocks of its captions
    /// and notes (see [`Builder::next_block`]).
    pub fn close_table(&mut self) {
        self.close();
        if self.table.take().is_some() {
            while self.text.ends_with('\t') {
                self.text.pop();
            }
            // Empty cells at the end of the table stood in what was just cut off; left where they
            // were, they would come to lie inside the characters of the next block.
            let end = self.text.len();
            for block in self.blocks.iter_mut().rev().take_while(|b| b.range.end > end) {
                block.range = end..end;
            }
            if !self.text.is_empty() && !self.text.ends_with("\n\n") {
                self.text
                    .push_str(if self.text.ends_with('\n') { "\n" } else { "\n\n" });
            }
            self.trim_marks();
        }
    }

    /// The number of tables opened so far.
    pub fn table_count(&self) -> usize {
        self.tables.len()
    }

    /// Describes a table already opened by what was found around it.
    pub fn describe(&mut self, table: usize, about: &Description) {
        self.describe_table(table, about.label.as_deref(), &about.captions, &about.notes);
    }

    /// Describes a table already opened: its label and the indexes of its caption and note blocks.
    pub fn describe_table(&mut self, table: usize, label: Option<&str>, captions: &[usize], notes: &[usize]) {
        let count = self.blocks.len();
        if let Some(table) = self.tables.get_mut(table) {
            if let Some(label) = label.map(str::trim).filter(|l| !l.is_empty()) {
                table.label = Some(label.trim_end_matches(['.', ':']).to_string());
            }
            table.captions.extend(captions.iter().filter(|b| **b < count));
            table.notes.extend(notes.iter().filter(|b| **b < count));
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::manuscript::Format;

    #[test]
    fn merged_cells_push_their_neighbours_aside() {
        let mut b = Builder::new(Format::Html);
        b.open_table();
        b.row();
        for (text, rowspan, colspan) in [("Plot", 2, 1), ("Litres", 1, 2)] {
            b.cell(CellShape {
                rowspan,
                colspan,
                header: true,
            });
            b.text(text);
        }
        b.row();
        for text in ["M", "SD"] {
            b.cell(CellShape::default());
            b.text(text);
        }
        b.close_table();
        b.describe_table(0, Some("Table 1."), &[], &[]);
        let m = b.finish();
        assert_eq!(m.text, "Plot\tLitres\nM\tSD\n");
        let at: Vec<_> = m.tables[0].cells.iter().map(|c| (c.row, c.column)).collect();
        assert_eq!(at, [(0, 0), (0, 1), (1, 1), (1, 2)]);
        assert_eq!((m.tables[0].rows, m.tables[0].columns), (2, 3));
        let sd = &m.blocks[3];
        let place = m.place(sd, sd.range.clone());
        assert_eq!(
            (place.table.as_deref(), place.row, place.column),
            (Some("Table 1"), Some(2), Some(3))
        );
    }

    #[test]
    fn empty_cells_at_the_end_of_a_table_do_not_reach_into_the_next_block() {
        let mut b = Builder::new(Format::Html);
        b.open_table();
        for row in [["a", "", "", "", ""], ["", "", "", "", ""]] {
            b.row();
            for text in row {
                b.cell(CellShape::default());
                b.text(text);
            }
        }
        b.close_table();
        b.text("ηηηη");
        let m = b.finish();
        assert_eq!(m.text, "a\t\t\t\t\n\nηηηη\n");
        let cells: Vec<&str> = m.tables[0]
            .cells
            .iter()
            .map(|c| m.block_text(&m.blocks[c.block]))
            .collect();
        assert_eq!(cells.concat(), "a");
        let after = m.text.find('η').expect("the text holds it");
        assert!(
            m.tables[0]
                .cells
                .iter()
                .all(|c| m.blocks[c.block].range.end < after)
        );
    }
}
