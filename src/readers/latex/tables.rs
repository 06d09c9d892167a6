//! *Tables* in LaTeX are written cell after cell with `&` and `\\`. Cells open only when something
//! is written in them, because their spans are told by macros inside them.

use crate::manuscript::{Builder, CellShape};

/// A tabular being read.
pub(super) struct Tabular {
    /// Cells before this position of the source are headers.
    head_end: usize,
    row_open: bool,
    cell_open: bool,
    /// Something may still be written in the current column.
    pending: bool,
    column: u32,
    shape: CellShape,
    row: u32,
    /// For each column, the first row below the cells that reach down into it.
    free_from: Vec<u32>,
    /// Tabulars inside the current cell.
    pub nested: u32,
}

impl Tabular {
    /// Opens a table; `head_end` is where its header rows end in the source.
    pub(super) fn open(b: &mut Builder, head_end: usize) -> Tabular {
        b.open_table();
        Tabular {
            head_end,
            row_open: false,
            cell_open: false,
            pending: false,
            column: 0,
            shape: CellShape::default(),
            row: 0,
            free_from: Vec::new(),
            nested: 0,
        }
    }

    pub(super) fn in_cell(&self) -> bool {
        self.cell_open
    }

    /// The next cell spans columns (`\multicolumn`) or rows (`\multirow`).
    pub(super) fn span(&mut self, columns: u32, rows: u32) {
        self.shape.colspan = self.shape.colspan.max(columns.clamp(1, 200));
        self.shape.rowspan = self.shape.rowspan.max(rows.clamp(1, 1000));
    }

    /// Makes sure that text written at `at` goes into a cell.
    pub(super) fn ensure_cell(&mut self, b: &mut Builder, at: usize) {
        if self.cell_open {
            return;
        }
        if !self.row_open {
            b.row();
            self.row_open = true;
        }
        self.shape.header = at < self.head_end;
        b.cell(self.shape);
        let end = (self.column + self.shape.colspan) as usize;
        if self.free_from.len() < end {
            self.free_from.resize(end, 0);
        }
        for free in &mut self.free_from[self.column as usize..end] {
            *free = (*free).max(self.row + self.shape.rowspan);
        }
        self.cell_open = true;
        self.pending = true;
    }

    /// At `&`.
    pub(super) fn next_cell(&mut self, b: &mut Builder, at: usize) {
        self.end_cell(b, at);
        self.pending = true;
    }

    fn end_cell(&mut self, b: &mut Builder, at: usize) {
        // Under a cell that reaches down, LaTeX wants an empty cell; the grid has none there.
        let covered = self
            .free_from
            .get(self.column as usize)
            .is_some_and(|free| *free > self.row);
        if !self.cell_open && !covered {
            self.ensure_cell(b, at);
        }
        if self.cell_open {
            b.close();
        }
        self.column += self.shape.colspan;
        self.cell_open = false;
        self.shape = CellShape::default();
    }

    /// At `\\` or the end of the table.
    pub(super) fn end_row(&mut self, b: &mut Builder, at: usize) {
        if self.row_open || self.pending {
            if self.pending {
                self.end_cell(b, at);
            }
            if self.row_open {
                self.row += 1;
            }
        }
        self.row_open = false;
        self.pending = false;
        self.column = 0;
        self.shape = CellShape::default();
    }
}

/// Where the header rows of a tabular end: at the first rule below a row that has rows below it.
/// `body` is its source, the result an offset into it; 0 without such a rule.
pub(super) fn head_end(body: &str) -> usize {
    let mut rows = 0;
    let mut rule = None;
    let mut in_caption = false;
    let bytes = body.as_bytes();
    let mut at = 0;
    while let Some(n) = memchr::memchr(b'\\', &bytes[at..]) {
        let start = at + n;
        let name = super::arguments::name_at(body, start);
        at = start + 1 + name.len().max(1);
        match name {
            "\\" | "tabularnewline" => {
                if let Some(rule) = rule {
                    return rule;
                }
                rows += u32::from(!in_caption);
                in_caption = false;
            }
            "caption" => in_caption = true,
            // Long tables say themselves where their heads end.
            "endfirsthead" | "endhead" => return start,
            "midrule" | "hline" | "specialrule" | "Xhline" | "Midrule" if rows > 0 => {
                rule.get_or_insert(start);
            }
            _ => {}
        }
        at = at.min(bytes.len());
        while !body.is_char_boundary(at) {
            at += 1;
        }
    }
    0
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn headers_end_at_the_first_rule_with_rows_on_both_sides() {
        assert_eq!(head_end(r"\toprule a & b \\ \midrule c & d \\ \bottomrule"), 18);
        assert_eq!(head_end(r"\hline a \\ \hline"), 0);
        assert_eq!(head_end(r"a \\ b \\"), 0);
        assert_eq!(head_end(r"a\é\\"), 0);
    }
}
