//! What stands in the margins and is no part of the text: running headers and footers, page
//! numbers, and the line numbers of manuscripts under review.

use super::glyphs::PageGlyphs;
use super::pieces::Piece;
use std::collections::HashMap;

/// Headers and footers stand in this share of the page's height at its upper and lower end.
const ZONE: f32 = 0.14;
/// The very first and last line of a page are looked at even this far from its ends, as some
/// papers have wide margins.
const WIDE_ZONE: f32 = 0.3;
/// Pieces looked at from each end of a page.
const DEPTH: usize = 8;
/// Sides of a text may wander by this many points from page to page.
const WANDER: f32 = 6.0;

/// Sets aside the pieces that are repeated at the same height of several pages, and page numbers.
pub fn drop_running_lines(pages: &[&PageGlyphs], pieces: &mut [Vec<Piece>]) {
    struct Candidate {
        page: usize,
        piece: usize,
        text: String,
        y: f32,
        number: Option<u32>,
        outermost: bool,
    }
    let mut candidates: Vec<Candidate> = Vec::new();
    for (p, (page, pieces)) in pages.iter().zip(pieces.iter()).enumerate() {
        let mut order: Vec<usize> = (0..pieces.len()).collect();
        order.sort_by(|a, b| pieces[*a].baseline.total_cmp(&pieces[*b].baseline));
        let first = order.first().map_or(0.0, |i| pieces[*i].baseline);
        let last = order.last().map_or(0.0, |i| pieces[*i].baseline);
        let at_edge = |y: f32, share: f32| y < page.height * share || y > page.height * (1.0 - share);
        let upper = order.iter().take(DEPTH);
        let lower = order.iter().rev().take(DEPTH);
        for &i in upper.chain(lower) {
            let piece = &pieces[i];
            let y = piece.baseline;
            let outermost = (y - first).abs() < 3.0 || (y - last).abs() < 3.0;
            if !(at_edge(y, ZONE) || outermost && at_edge(y, WIDE_ZONE)) {
                continue;
            }
            let text = piece.plain_text(page);
            candidates.push(Candidate {
                page: p,
                piece: i,
                number: page_number(&text),
                text: masked(&text),
                y,
                outermost,
            });
        }
    }
    let mut by_text: HashMap<&str, Vec<usize>> = HashMap::new();
    for (i, c) in candidates.iter().enumerate() {
        by_text.entry(&c.text).or_default().push(i);
    }
    // Page numbers go up with the pages.
    let mut by_offset: HashMap<i64, Vec<usize>> = HashMap::new();
    for (i, c) in candidates.iter().enumerate() {
        if let Some(n) = c.number {
            by_offset.entry(n as i64 - c.page as i64).or_default().push(i);
        }
    }
    let enough = if pages.len() <= 4 { 2 } else { 3 };
    let mut drop: Vec<(usize, usize)> = Vec::new();
    for c in &candidates {
        let same = by_text[c.text.as_str()]
            .iter()
            .map(|i| &candidates[*i])
            .filter(|o| (o.y - c.y).abs() < WANDER);
        let mut on: Vec<usize> = same.map(|o| o.page).collect();
        on.dedup();
        // Twice is enough at the very edge of the page.
        let edge = on.len() >= 2 && c.outermost && c.text.chars().count() >= 8;
        let repeated = (on.len() >= enough || edge) && c.text.chars().any(|t| t.is_alphabetic());
        let counts_up = c.number.is_some_and(|n| {
            by_offset[&(n as i64 - c.page as i64)]
                .iter()
                .map(|i| &candidates[*i])
                .any(|o| o.page != c.page && (o.y - c.y).abs() < WANDER)
        });
        // A bare number at the very edge of the page is its number even when there is only one page.
        let lone = pages.len() <= 2 && c.number == Some(c.page as u32 + 1) && c.outermost;
        if repeated || counts_up || lone {
            drop.push((c.page, c.piece));
        }
    }
    drop.sort_unstable();
    drop.dedup();
    // Lines that are all there is are the text itself.
    if drop.len() == pieces.iter().map(Vec::len).sum::<usize>() {
        return;
    }
    for (page, piece) in drop.into_iter().rev() {
        pieces[page].remove(piece);
    }
}

/// The text with its numbers made alike, as page numbers and dates differ from page to page.
fn masked(text: &str) -> String {
    let mut out = String::new();
    for c in text.chars() {
        match c {
            '0'..='9' if out.ends_with('#') => {}
            '0'..='9' => out.push('#'),
            c => out.push(c),
        }
    }
    out
}

/// `7`, `– 7 –`, `Page 7`, `7 of 12`, `S7`.
fn page_number(text: &str) -> Option<u32> {
    let lower = text.to_lowercase();
    let bare = lower
        .trim_start_matches("page")
        .trim_start_matches("p.")
        .trim_matches(|c: char| !c.is_alphanumeric());
    let digits = bare.strip_prefix(['s', 'e']).unwrap_or(bare);
    let head = digits.split([' ', '/']).next()?;
    let rest = &digits[head.len()..];
    let rest_fits = rest.is_empty()
        || rest.trim_start_matches([' ', '/']).starts_with("of ")
        || rest
            .trim_start_matches([' ', '/'])
            .bytes()
            .all(|b| b.is_ascii_digit());
    if head.len() <= 5 && rest_fits {
        head.parse().ok()
    } else {
        None
    }
}

/// Sets aside line numbers: a column of bare numbers left (or right) of all text that counts up
/// in even steps.
pub fn drop_line_numbers(page: &PageGlyphs, pieces: &mut Vec<Piece>) {
    let numbers: Vec<(usize, u32)> = pieces
        .iter()
        .enumerate()
        .filter(|(_, p)| p.glyphs.len() <= 8)
        .filter_map(|(i, p)| {
            let text = p.plain_text(page);
            (text.len() <= 4)
                .then(|| text.parse().ok().map(|n| (i, n)))
                .flatten()
        })
        .collect();
    // No page has that many lines; it is a table of numbers then.
    if !(4..=400).contains(&numbers.len()) {
        return;
    }
    let mut drop: Vec<usize> = Vec::new();
    for side in [0, 2] {
        // Numbers are flush right (or left): take the edge that most of them share.
        for edge in [2, 0] {
            let Some(column) = largest_column(pieces, &numbers, edge) else {
                continue;
            };
            let left = column
                .iter()
                .map(|c| pieces[c.0].area[0])
                .fold(f32::MAX, f32::min);
            let right = column
                .iter()
                .map(|c| pieces[c.0].area[2])
                .fold(f32::MIN, f32::max);
            let mine = |i: usize| column.iter().any(|c| c.0 == i);
            let others = pieces
                .iter()
                .enumerate()
                .filter(|(i, _)| !mine(*i))
                .map(|(_, p)| p);
            let beyond = others.clone().count();
            let clear = others
                .filter(|p| {
                    if side == 0 {
                        p.area[0] > right
                    } else {
                        p.area[2] < left
                    }
                })
                .count();
            if beyond > 0 && clear * 20 >= beyond * 19 && counts_evenly(pieces, &column) {
                drop.extend(column.iter().map(|c| c.0));
                break;
            }
        }
    }
    drop.sort_unstable();
    drop.dedup();
    for i in drop.into_iter().rev() {
        pieces.remove(i);
    }
}

fn largest_column(pieces: &[Piece], numbers: &[(usize, u32)], edge: usize) -> Option<Vec<(usize, u32)>> {
    numbers
        .iter()
        .map(|(i, _)| {
            let x = pieces[*i].area[edge];
            numbers
                .iter()
                .filter(|(j, _)| (pieces[*j].area[edge] - x).abs() < 1.5)
                .copied()
                .collect::<Vec<_>>()
        })
        .max_by_key(Vec::len)
        .filter(|c| c.len() >= 4)
}

fn counts_evenly(pieces: &[Piece], column: &[(usize, u32)]) -> bool {
    let mut down: Vec<(f32, u32)> = column.iter().map(|(i, n)| (pieces[*i].baseline, *n)).collect();
    down.sort_by(|a, b| a.0.total_cmp(&b.0));
    let steps: Vec<i64> = down.windows(2).map(|w| w[1].1 as i64 - w[0].1 as i64).collect();
    let Some(step) = steps.first().copied().filter(|s| (1..=10).contains(s)) else {
        return false;
    };
    steps.iter().filter(|s| **s == step).count() * 10 >= steps.len() * 9
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn page_numbers_in_their_usual_dress() {
        for (text, number) in [
            ("7", Some(7)),
            ("– 12 –", Some(12)),
            ("Page 3 of 9", Some(3)),
            ("3/9", Some(3)),
            ("S14", Some(14)),
            ("2014 was dry", None),
            ("t(28) = 2.20", None),
        ] {
            assert_eq!(page_number(text), number, "{text}");
        }
    }
}
