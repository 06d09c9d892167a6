//! PDF stores glyphs at positions, not text. Reading it means finding out again what was on the
//! author's screen: [`engine_hayro`] hands over the [`glyphs`]; they make [`pieces`] of lines; what
//! stands in the [`margins`] is set aside; [`columns`] finds the reading order; [`lines`] and
//! [`paragraphs`] put the text together; [`roles`] tells headings, captions and notes; [`compose`]
//! fills the manuscript.
//!
//! Files are not trusted: both engines run behind a [`guard`], and the whole reader in a process of
//! its own ([`contained`](super::contained)). What defeats the first engine is left to the second,
//! [`fallback`].

mod afterwards;
mod columns;
mod compose;
mod engine_hayro;
mod engine_paths;
mod engine_type3;
mod fallback;
mod fractions;
pub mod glyphs;
mod guard;
mod lines;
mod margins;
mod nesting;
mod paragraphs;
mod pieces;
mod replaced;
mod roles;
#[cfg(test)]
mod sample;
mod shapes;
mod tables;
#[cfg(test)]
mod tests;
#[cfg(test)]
mod tests_places;

use super::{Failure, Unreadable};
use crate::manuscript::{BlockKind, Builder, Format, Manuscript, nothing_or};
use compose::Sheet;
use engine_hayro::{Limits, Refusal};
use glyphs::{Glyphs, PageGlyphs, Turn};
use paragraphs::{Body, Column, Standing};

/// Reads the document.
///
/// # Errors
/// [`Failure::TryRescue`] if the engine can't open it or fails on it.
pub fn read(bytes: &[u8]) -> Result<Manuscript, Failure> {
    read_within(bytes, Limits::default())
}

fn read_within(bytes: &[u8], limits: Limits) -> Result<Manuscript, Failure> {
    let owned = bytes.to_vec();
    let cut_off = is_cut_off(bytes);
    let done = guard::run(move || {
        let glyphs = engine_hayro::glyphs(owned, limits)?;
        Ok((!glyphs.pages.is_empty()).then(|| manuscript(&glyphs, cut_off)))
    });
    let reason = match done {
        Ok(Ok(Some(result))) => return Ok(result?),
        Ok(Err(Refusal::Locked)) => "is encrypted; save a copy without a password and read that",
        Ok(Err(Refusal::UnknownCipher)) => {
            "is encrypted in a way that is not known here; save an unprotected copy and read that"
        }
        Err(guard::Mishap::NoThread) => "cannot be read now: the system gives no thread; try again",
        Ok(Ok(None)) | Ok(Err(Refusal::Damaged)) | Err(guard::Mishap::Panicked) => {
            return Err(Failure::TryRescue);
        }
    };
    Err(Unreadable::new(reason).into())
}

fn is_cut_off(bytes: &[u8]) -> bool {
    let tail = &bytes[bytes.len().saturating_sub(2048)..];
    memchr::memmem::find(tail, b"%%EOF").is_none() && memchr::memmem::find(tail, b"startxref").is_none()
}

/// Why a file can't be read in which no engine finds a page.
pub fn hopeless(bytes: &[u8]) -> Unreadable {
    let head = &bytes[..bytes.len().min(1024)];
    Unreadable::new(if memchr::memmem::find(head, b"%PDF-").is_none() {
        "is not a PDF although it is called one; check the file"
    } else if is_cut_off(bytes) {
        "is cut off before its end and no page can be found; get the complete file"
    } else {
        "is damaged and no page can be found; get another copy or print it to a new PDF"
    })
}

/// Reads a document that [`read`] has failed on, as well as the second engine can: it finds text
/// where the first finds none, but knows no columns or headings.
pub fn rescue(bytes: &[u8]) -> Result<Manuscript, Unreadable> {
    let pages = fallback::pages(bytes).ok_or_else(|| hopeless(bytes))?;
    let mut b = Builder::new(Format::Pdf);
    b.remark("the file is damaged; its text was recovered without columns and headings, so check what is found against the pages");
    for (index, page) in pages.iter().enumerate() {
        b.page(index as u32 + 1);
        for (number, line) in page.lines().enumerate() {
            if line.trim().is_empty() {
                b.close();
                continue;
            }
            if b.is_open() {
                b.line_break();
            } else {
                b.open(BlockKind::Paragraph);
            }
            b.line(number as u32 + 1);
            b.text(line);
        }
        b.close();
    }
    if b.is_blank() {
        return Err(no_text(&[]));
    }
    Ok(b.finish())
}

fn no_text(pages: &[u32]) -> Unreadable {
    let pages = listed(pages).unwrap_or_else(|| "any page".to_string());
    Unreadable::new(format!(
        "has no text layer on {pages} (page images only): run text recognition on it first"
    ))
}

fn manuscript(glyphs: &Glyphs, cut_off: bool) -> Result<Manuscript, Unreadable> {
    let with_text = |p: &PageGlyphs| p.glyphs.iter().any(|g| !g.meaning.is_space());
    if !glyphs.pages.iter().any(with_text) {
        if glyphs.pages.iter().any(|p| p.cut_short) {
            return Err(Unreadable::new(
                "asks for endless drawing and shows no text before that; print it to a new PDF and read that",
            ));
        }
        if cut_off {
            return Err(Unreadable::new(
                "is cut off before its end and no text can be found; get the complete file",
            ));
        }
        return Err(if glyphs.pages.iter().any(|p| p.image) {
            no_text(&glyphs.pages.iter().map(|p| p.number).collect::<Vec<u32>>())
        } else {
            Unreadable::new("has no text on its pages; if they show any, run text recognition on it first")
        });
    }
    let (columns, tables) = read_columns(glyphs);
    let body = Body::of(&columns);
    let blocks = paragraphs::blocks(&columns, body);
    let blocks = paragraphs::join(blocks, body, |block| {
        if block.first().table.is_some() {
            return Standing::Float;
        }
        if roles::heading(block, body).is_some() {
            return Standing::Heading;
        }
        match roles::kind(block, body, 0.0) {
            BlockKind::Caption | BlockKind::TableNote | BlockKind::Footnote => Standing::Float,
            _ => Standing::Text,
        }
    });
    let sheets: Vec<Sheet> = glyphs
        .pages
        .iter()
        .map(|p| Sheet {
            number: p.number,
            width: p.width,
            height: p.height,
        })
        .collect();
    let mut b = Builder::new(Format::Pdf);
    remarks(&mut b, glyphs, cut_off);
    compose::compose(&mut b, &blocks, &tables, body, &sheets);
    if let Some(remark) = corrected(&b) {
        b.remark(remark);
    }
    Ok(b.finish())
}

/// What the person should know about the reading.
fn remarks(b: &mut Builder, glyphs: &Glyphs, cut_off: bool) {
    let numbers = |which: &dyn Fn(&PageGlyphs) -> bool| {
        let hits: Vec<u32> = glyphs
            .pages
            .iter()
            .filter(|p| which(p))
            .map(|p| p.number)
            .collect();
        hits
    };
    let bare = numbers(&|p| p.image && !p.glyphs.iter().any(|g| !g.meaning.is_space()));
    if let Some(pages) = listed(&bare) {
        b.remark(format!(
            "{pages} without text (images only): not read; run text recognition on the file"
        ));
    }
    if let Some(pages) = listed(&numbers(&|p| p.cut_short)) {
        b.remark(format!("{pages} only read in part: damaged, or too much drawing"));
    }
    if glyphs.left_out > 0 {
        b.remark(format!(
            "the last {} pages were not read: the file is too long",
            glyphs.left_out
        ));
    }
    if cut_off {
        b.remark("the file is cut off before its end; pages may be missing");
    }
    let mut unknown = Vec::new();
    for page in &glyphs.pages {
        let strange = page
            .glyphs
            .iter()
            .filter(|g| g.meaning == glyphs::Meaning::Unknown)
            .count();
        if strange * 20 > page.glyphs.len() {
            unknown.push(page.number);
        }
    }
    if let Some(pages) = listed(&unknown) {
        b.remark(format!(
            "{pages} with characters whose meaning the file does not say; they are shown as \u{fffd}"
        ));
    }
}

/// How often the page shows something else than its text layer says.
fn corrected(b: &Builder) -> Option<String> {
    const MOST: usize = 6;
    let kinds = b.corrections();
    let all: usize = kinds.iter().map(|k| k.2).sum();
    let named: Vec<String> = kinds
        .iter()
        .take(MOST)
        .map(|(shown, layer, n)| format!("`{shown}` where the layer says {} ({n}×)", nothing_or(layer)))
        .collect();
    let more = match kinds.len().saturating_sub(MOST) {
        0 => String::new(),
        n => format!(" and {n} more"),
    };
    let places = if all == 1 {
        "1 place"
    } else {
        &format!("{all} places")
    };
    (all > 0).then(|| {
        format!(
            "in {places} the page shows something else than the file's text layer says; what the page shows was read: {}{more}",
            named.join(", ")
        )
    })
}

/// `page 3`, `pages 3, 5–7`.
fn listed(pages: &[u32]) -> Option<String> {
    let mut ranges: Vec<(u32, u32)> = Vec::new();
    for page in pages {
        match ranges.last_mut() {
            Some((_, end)) if *end + 1 == *page => *end = *page,
            _ => ranges.push((*page, *page)),
        }
    }
    let text: Vec<String> = ranges
        .iter()
        .map(|(a, b)| {
            if a == b {
                a.to_string()
            } else {
                format!("{a}–{b}")
            }
        })
        .collect();
    match pages.len() {
        0 => None,
        1 => Some(format!("page {}", text[0])),
        _ => Some(format!("pages {}", text.join(", "))),
    }
}

/// The columns of all pages in reading order, and the tables that stand in them.
fn read_columns(glyphs: &Glyphs) -> (Vec<Column>, Vec<tables::Table>) {
    let pages: Vec<&PageGlyphs> = glyphs.pages.iter().collect();
    let mut main: Vec<Vec<pieces::Piece>> = Vec::with_capacity(pages.len());
    let mut aside: Vec<Vec<Vec<pieces::Piece>>> = Vec::with_capacity(pages.len());
    let mut all_turns: Vec<Vec<Turn>> = Vec::with_capacity(pages.len());
    for page in &pages {
        let turns = turns(page);
        let mut all = turns.iter().map(|t| pieces::pieces(page, *t));
        let mut first = all.next().unwrap_or_default();
        margins::drop_line_numbers(page, &mut first);
        main.push(first);
        aside.push(all.collect());
        all_turns.push(turns);
    }
    margins::drop_running_lines(&pages, &mut main);
    let size = pieces::usual_size(main.iter().flatten());
    let mut tables = Vec::new();
    for (p, page) in pages.iter().enumerate() {
        let sides = std::iter::once(&mut main[p]).chain(&mut aside[p]);
        for (pieces, turn) in sides.zip(&all_turns[p]) {
            tables::take(page, glyphs, pieces, *turn, size, &mut tables);
        }
    }
    let mut out = Vec::new();
    for ((page, main), aside) in pages.iter().zip(main).zip(aside) {
        let mut number = 1;
        let mut add = |pieces, aside| {
            for region in columns::regions(pieces) {
                let lines: Vec<lines::Line> = lines::rows(region.pieces)
                    .iter()
                    .filter_map(|row| lines::line(row, page, glyphs))
                    .collect();
                if lines.is_empty() {
                    continue;
                }
                let first_number = number;
                number += lines.len() as u32;
                out.push(Column {
                    lines,
                    left: region.left,
                    right: region.right,
                    first_number,
                    aside,
                });
            }
        };
        add(main, false);
        for pieces in aside {
            add(pieces, true);
        }
    }
    (out, tables)
}

/// The directions of text on a page, the one of most glyphs first.
fn turns(page: &PageGlyphs) -> Vec<Turn> {
    let mut counts = [Turn::None, Turn::Quarter, Turn::Half, Turn::ThreeQuarters]
        .map(|t| (page.glyphs.iter().filter(|g| g.turn == t).count(), t));
    counts.sort_by_key(|c| std::cmp::Reverse(c.0));
    counts.into_iter().filter(|c| c.0 > 0).map(|c| c.1).collect()
}
