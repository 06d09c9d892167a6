//! Tables of a Word file. Cells merged downwards are stored as one cell per row there, and become
//! one cell with a height here.

use super::choice;
use super::styles::is_on;
use crate::manuscript::CellShape;
use crate::readers::office::flow::{Cell, Item, deepen_header, lines};
use crate::readers::office::line::{Line, joined};
use crate::readers::office::tree::Element;

/// Spans beyond this are mistakes.
const LARGEST_SPAN: i64 = 1000;

#[derive(Clone, Copy, PartialEq)]
enum Merge {
    None,
    Begins,
    Continues,
}

struct Raw {
    column: u32,
    width: u32,
    merge: Merge,
    header: bool,
    line: Line,
}

/// Appends a table and the notes its cells refer to; `read` reads what a cell holds.
pub fn push<'t>(tbl: Element<'t>, out: &mut Vec<Item>, read: &mut dyn FnMut(Element<'t>) -> Vec<Item>) {
    let mut trs = Vec::new();
    collect(tbl, "tr", &mut trs);
    let only_row = trs.len() == 1;
    let first_row_is_header = tbl.path(&["tblPr", "tblLook"]).is_some_and(|look| {
        match look.attribute("firstRow") {
            Some(on) => !matches!(&*on, "0" | "false" | "off"),
            // The older notation: a bit field.
            None => look
                .val()
                .and_then(|v| u32::from_str_radix(&v, 16).ok())
                .is_some_and(|v| v & 0x20 != 0),
        }
    });
    let mut rows: Vec<Vec<Raw>> = Vec::new();
    let mut notes = Vec::new();
    let mut marked = false;
    let mut alone = None;
    for tr in trs {
        let properties = tr.child("trPr");
        if properties.is_some_and(|p| p.child("del").is_some()) {
            continue;
        }
        let header = properties.and_then(|p| p.child("tblHeader")).is_some_and(is_on);
        marked |= header;
        let mut tcs = Vec::new();
        collect(tr, "tc", &mut tcs);
        let mut row: Vec<Raw> = Vec::with_capacity(tcs.len());
        let mut column = span(properties.and_then(|p| p.child("gridBefore")), 0);
        if column > 0 {
            row.push(Raw {
                column: 0,
                width: column,
                merge: Merge::None,
                header,
                line: Line::default(),
            });
        }
        let count = tcs.len();
        for tc in tcs {
            let properties = tc.child("tcPr");
            let of = |name| properties.and_then(|p| p.child(name));
            if of("cellDel").is_some() {
                continue;
            }
            let width = span(of("gridSpan"), 1);
            let merge = match of("vMerge").map(|m| m.val()) {
                None => Merge::None,
                Some(Some(v)) if v == "restart" => Merge::Begins,
                Some(_) => Merge::Continues,
            };
            let (items, aside): (Vec<Item>, Vec<Item>) =
                read(tc).into_iter().partition(|i| !matches!(i, Item::Note(_)));
            notes.extend(aside);
            if only_row && count == 1 {
                alone = Some(items.clone());
            }
            let line = joined(lines(items).into_iter());
            let across = of("hMerge").is_some_and(|m| m.val().as_deref() != Some("restart"));
            match row.last_mut() {
                Some(last) if across => {
                    last.width = (last.width + width).min(LARGEST_SPAN as u32);
                    last.line.append(line);
                }
                _ => row.push(Raw {
                    column,
                    width,
                    merge,
                    header,
                    line,
                }),
            }
            column = column.saturating_add(width);
        }
        rows.push(row);
    }
    if !marked && first_row_is_header && rows.len() > 1 {
        for cell in &mut rows[0] {
            cell.header = true;
        }
    }
    match alone {
        // A frame around text, not a table.
        Some(items) => out.extend(items),
        _ => {
            let mut rows = merged(rows);
            deepen_header(&mut rows);
            out.push(Item::Table(rows));
        }
    }
    out.extend(notes);
}

/// The number in a span element.
fn span(e: Option<Element<'_>>, usual: u32) -> u32 {
    e.and_then(|e| e.number("val"))
        .map_or(usual, |n| n.clamp(i64::from(usual), LARGEST_SPAN) as u32)
}

/// Rows or cells, through everything that may stand around them.
fn collect<'t>(holder: Element<'t>, wanted: &str, found: &mut Vec<Element<'t>>) {
    for child in holder.children() {
        match child.name() {
            name if name == wanted => found.push(child),
            "sdt" => {
                if let Some(content) = child.child("sdtContent") {
                    collect(content, wanted, found);
                }
            }
            "AlternateContent" => {
                if let Some(choice) = choice(child) {
                    collect(choice, wanted, found);
                }
            }
            "ins" | "moveTo" | "customXml" | "smartTag" => collect(child, wanted, found),
            _ => {}
        }
    }
}

/// Joins each cell with its continuations below.
fn merged(mut rows: Vec<Vec<Raw>>) -> Vec<Vec<Cell>> {
    // From below, so that each continuation hands its height and text to the cell above it.
    let mut heights: Vec<Vec<u32>> = rows.iter().map(|r| vec![1; r.len()]).collect();
    for r in (1..rows.len()).rev() {
        let (above, below) = rows.split_at_mut(r);
        let (Some(above), Some(below)) = (above.last_mut(), below.first_mut()) else {
            continue;
        };
        let mut up = 0;
        for (c, cell) in below.iter_mut().enumerate() {
            if cell.merge != Merge::Continues {
                continue;
            }
            while above.get(up).is_some_and(|a| a.column < cell.column) {
                up += 1;
            }
            match above.get_mut(up) {
                Some(a) if a.column == cell.column && a.merge != Merge::None => {
                    heights[r - 1][up] += heights[r][c];
                    let line = std::mem::take(&mut cell.line);
                    if !line.is_blank() {
                        a.line = joined([std::mem::take(&mut a.line), line].into_iter());
                    }
                }
                // Nothing above it to continue: a cell like any other.
                _ => cell.merge = Merge::Begins,
            }
        }
    }
    if let Some(first) = rows.first_mut() {
        for cell in first.iter_mut().filter(|c| c.merge == Merge::Continues) {
            cell.merge = Merge::Begins;
        }
    }
    rows.into_iter()
        .zip(heights)
        .map(|(row, heights)| {
            row.into_iter()
                .zip(heights)
                .filter(|(cell, _)| cell.merge != Merge::Continues)
                .map(|(cell, height)| Cell {
                    line: cell.line,
                    shape: CellShape {
                        rowspan: height,
                        colspan: cell.width,
                        header: cell.header,
                    },
                })
                .collect()
        })
        .collect()
}
