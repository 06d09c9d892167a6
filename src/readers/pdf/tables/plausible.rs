//! Whether a suspected table is one. Wrong tables are worse than none: without a caption that says so,
//! only rules with values between them in columns are believed.

use super::content::{is_prose, is_value};
use super::grid::Grid;

/// What speaks for and against, besides the grid itself.
#[derive(Clone, Copy, Debug, Default)]
pub struct Evidence {
    /// A caption begins with `Table`.
    pub captioned: bool,
    /// A caption of a figure stands above or below.
    pub figure: bool,
    /// Rules as long as the table is wide, two close ones counted once.
    pub rules: usize,
    /// Rules down the table.
    pub walls: usize,
    /// Curves and slanted strokes.
    pub drawings: usize,
    /// Heads stand above the first rule, so that it is the one below the heads.
    pub open_top: bool,
}

pub fn is_table(grid: &Grid, e: Evidence) -> bool {
    let rows = grid.rows - grid.header_rows;
    if grid.columns < 2 || grid.columns > 60 || rows == 0 || grid.rows < 2 {
        return false;
    }
    let (mut cells, mut values, mut prose, mut room) = (0usize, 0usize, 0usize, 0usize);
    let mut in_row = vec![0usize; grid.rows];
    for cell in &grid.cells {
        room += cell.colspan * cell.rowspan;
        in_row[cell.row] += 1;
        let sentence = cell.text.iter().map(|(_, w)| w.len()).sum::<usize>() >= 7
            && is_prose(
                &cell
                    .text
                    .iter()
                    .flat_map(|(_, w)| w.iter().cloned())
                    .collect::<Vec<_>>(),
            );
        prose += usize::from(sentence);
        if cell.row >= grid.header_rows && cell.column > 0 {
            cells += 1;
            values += usize::from(is_value(&cell.plain()));
        }
    }
    let values = values as f32 / cells.max(1) as f32;
    let prose = prose as f32 / grid.cells.len().max(1) as f32;
    let wide = grid
        .cells
        .iter()
        .filter(|c| c.row >= grid.header_rows && c.colspan > 1 && c.colspan < grid.columns)
        .count();
    let head = grid.cells.iter().filter(|c| c.header).count();
    let head_texts = || grid.cells.iter().filter(|c| c.header).map(|c| c.plain());
    let head_values = head_texts().filter(|t| is_value(t)).count();
    let numbers: Vec<i64> = head_texts().filter_map(|t| t.parse().ok()).collect();
    let counted = numbers.len() == head_values
        && matches!(numbers.first(), Some(0 | 1))
        && numbers.windows(2).all(|w| w[1] == w[0] + 1);
    let code = grid.cells.iter().any(|c| {
        let text = c.plain();
        text.starts_with("> ") || text.starts_with("R> ") || text.contains("<-") || text.contains("():")
    });
    let filled = room as f32 / (grid.rows * grid.columns) as f32;
    let several = in_row[grid.header_rows..].iter().filter(|n| **n >= 2).count();
    if several == 0 || several * 5 < rows * 2 {
        return false;
    }
    if e.captioned {
        if e.drawings > 40 + grid.cells.len() {
            return false;
        }
        return if e.rules >= 2 || e.walls > 0 && e.rules >= 1 {
            filled > 0.25 && (prose < 0.6 || e.rules >= 3)
        } else {
            several >= 2 && values >= 0.4 && prose < 0.2 && filled > 0.4
        };
    }
    // The ticks of axes are values without heads and at no columns; code and what it prints is no
    // table of the author's.
    let ticks =
        head > 0 && head_values * 3 > head * 2 && !(counted && e.rules >= 3) || wide * 4 > grid.cells.len();
    if e.figure || e.drawings > 6 || code || ticks {
        return false;
    }
    // A frame around every cell.
    if e.walls > 0 && e.walls + 1 >= grid.columns && e.rules >= 3 && several >= 2 && prose < 0.4 {
        return filled > 0.5
            && (values >= 0.35 || e.rules >= grid.rows && grid.rows >= 3 && grid.header_rows > 0);
    }
    let enough = if grid.columns == 2 {
        several >= 3 && values >= 0.8
    } else {
        several >= 2 && values >= 0.5
    };
    let heads = grid.header_rows > 0;
    match e.rules {
        0 => false,
        1 => {
            e.open_top
                && heads
                && grid.columns >= 3
                && several >= 3
                && values >= 0.6
                && filled > 0.7
                && prose == 0.0
        }
        2 => e.open_top && heads && enough && grid.columns >= 3 && prose < 0.1,
        _ => heads && enough && prose < 0.2 && filled > 0.4,
    }
}
