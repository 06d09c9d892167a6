//! Tables of an OpenDocument file. Cells covered by a merged neighbour are marked there and are
//! left out here; repeated rows and cells are repeated within reason.

use crate::manuscript::CellShape;
use crate::readers::office::flow::{Cell, Item, deepen_header, lines};
use crate::readers::office::line::joined;
use crate::readers::office::tree::Element;

/// Spans beyond this are mistakes.
const LARGEST_SPAN: i64 = 1000;
/// A row or cell stored once is repeated at most so often; spreadsheets fill their edges this way.
const MOST_REPEATS: i64 = 64;

/// Who reads the cells of a table.
pub trait Cells<'t> {
    /// What a cell holds.
    fn read(&mut self, cell: Element<'t>) -> Vec<Item>;

    /// Whether the document may grow by so many bytes more through repetitions.
    fn affords(&mut self, bytes: usize) -> bool;
}

/// Appends a table and the notes its cells refer to.
pub fn push<'t>(cells: &mut dyn Cells<'t>, table: Element<'t>, out: &mut Vec<Item>) {
    let mut trs = Vec::new();
    collect(table, false, &mut trs);
    let only_row = trs.len() == 1;
    let mut rows: Vec<Vec<Cell>> = Vec::with_capacity(trs.len());
    let mut notes = Vec::new();
    let mut alone = None;
    for (tr, header) in trs {
        let mut row: Vec<Cell> = Vec::new();
        let tcs: Vec<Element<'t>> = tr.children().filter(|c| c.name() == "table-cell").collect();
        let only_cell = tcs.len() == 1;
        for tc in tcs {
            let (items, aside): (Vec<Item>, Vec<Item>) = cells
                .read(tc)
                .into_iter()
                .partition(|i| !matches!(i, Item::Note(_)));
            notes.extend(aside);
            if only_row && only_cell {
                alone = Some(items.clone());
            }
            let span = |name| tc.number(name).unwrap_or(1).clamp(1, LARGEST_SPAN) as u32;
            let cell = Cell {
                line: joined(lines(items).into_iter()),
                shape: CellShape {
                    rowspan: span("number-rows-spanned"),
                    colspan: span("number-columns-spanned"),
                    header,
                },
            };
            for _ in 1..repeats(cells, tc, "number-columns-repeated", size(&cell)) {
                row.push(cell.clone());
            }
            row.push(cell);
        }
        for _ in 1..repeats(cells, tr, "number-rows-repeated", row.iter().map(size).sum()) {
            rows.push(row.clone());
        }
        rows.push(row);
    }
    match alone {
        // A frame around text, not a table.
        Some(items) => out.extend(items),
        None => {
            deepen_header(&mut rows);
            out.push(Item::Table(rows));
        }
    }
    out.extend(notes);
}

/// What a repetition of a cell costs, in bytes.
fn size(cell: &Cell) -> usize {
    64 + cell.line.size()
}

/// How often a row or cell of this size stands there.
fn repeats<'t>(cells: &mut dyn Cells<'t>, e: Element<'t>, name: &str, size: usize) -> usize {
    let wanted = e.number(name).unwrap_or(1).clamp(1, MOST_REPEATS) as usize;
    if cells.affords((wanted - 1) * size) {
        wanted
    } else {
        1
    }
}

/// The rows, with whether they are header rows.
fn collect<'t>(holder: Element<'t>, header: bool, found: &mut Vec<(Element<'t>, bool)>) {
    for child in holder.children() {
        match child.name() {
            "table-row" => found.push((child, header)),
            "table-header-rows" => collect(child, true, found),
            "table-rows" | "table-row-group" => collect(child, header, found),
            _ => {}
        }
    }
}
