//! Tables. A page knows none, only words at places and strokes of a pen: where rules, a caption and
//! words in columns say together that there is one, its cells are taken out of the text and put into a
//! grid. In the order of the page a table is a paragraph of as many lines ([`Piece::in_place_of`]), so
//! that columns and running text around it are found as if it were text.
//!
//! [`rules`] are what is drawn; a [`sheet`] is a page as this search sees it; [`regions`] are where a
//! table may be; [`columns`], [`heads`] and [`rows`] make the [`grid`]; [`plausible`] says whether to
//! believe it; [`captions`] finds what describes it; [`compose`] fills the manuscript.

mod captions;
mod columns;
pub mod compose;
mod content;
mod grid;
mod heads;
mod plausible;
mod regions;
mod rows;
mod rules;
mod sheet;
#[cfg(test)]
mod tests;

pub use rules::Rules;

use super::glyphs::{Area, Glyphs, PageGlyphs, Turn, union};
use super::lines::Line;
use super::pieces::Piece;
use grid::{Draft, Grid};
use plausible::Evidence;
use regions::Region;
use sheet::Sheet;

/// A table as it stands on one page.
#[derive(Clone, Debug)]
pub struct Table {
    pub page: u32,
    pub label: Option<String>,
    pub caption: Vec<Line>,
    /// The caption stands below the cells.
    pub below: bool,
    pub notes: Vec<Line>,
    pub grid: Grid,
    /// The caption says that it goes on from an earlier page.
    pub continued: bool,
    /// The printed lines of the cells.
    pub lines: usize,
    /// Nothing but other tables stands between it and the upper end of the page, or the lower one.
    pub at_top: bool,
    pub at_bottom: bool,
    /// Left and right end of the cells.
    pub sides: [f32; 2],
}

impl Table {
    /// Whether cells at the top of the next page, between these ends, could be its further rows.
    fn could_go_on(&self, page: u32, sides: [f32; 2]) -> bool {
        let same = |a: f32, b: f32| (a - b).abs() < 4.0;
        self.at_bottom
            && self.page + 1 == page
            && same(self.sides[0], sides[0])
            && same(self.sides[1], sides[1])
    }
}

/// Takes the tables of a page out of its pieces, adds them to those of earlier pages, and leaves pieces
/// that keep their place. `size` is the one that most of the document is set in.
pub fn take(
    page: &PageGlyphs,
    glyphs: &Glyphs,
    pieces: &mut Vec<Piece>,
    turn: Turn,
    size: f32,
    all: &mut Vec<Table>,
) {
    if pieces.len() < 5 {
        return;
    }
    let first = all.len();
    let sheet = Sheet::new(page, glyphs, std::mem::take(pieces), turn, size);
    let mut found = Search::new(&sheet, all.last());
    found.run();
    let Search {
        tables, taken, areas, ..
    } = found;
    let mut rest: Vec<Piece> = Vec::with_capacity(sheet.pieces.len());
    let mut stand_ins = Vec::new();
    for (i, (table, area)) in tables.iter().zip(&areas).enumerate() {
        let lines = (table.lines + table.caption.len() + table.notes.len()).max(1);
        let [left, top, right, bottom] = *area;
        let [left, right] = sheet.own_column(area).unwrap_or([left, right]);
        let step = (bottom - top) / lines as f32;
        for k in 0..lines {
            let y = top + step * k as f32;
            stand_ins.push(Piece::in_place_of(first + i, [left, y, right, y + 0.85 * step]));
        }
    }
    for (piece, taken) in sheet.pieces.into_iter().zip(taken) {
        if !taken {
            rest.push(piece);
        }
    }
    rest.extend(stand_ins);
    *pieces = rest;
    all.extend(tables);
}

struct Search<'s, 'a> {
    sheet: &'s Sheet<'a>,
    /// The last table of the pages before.
    before: Option<&'s Table>,
    tables: Vec<Table>,
    /// The whole area of each table.
    areas: Vec<Area>,
    taken: Vec<bool>,
    captions_used: Vec<usize>,
}

impl<'s, 'a> Search<'s, 'a> {
    fn new(sheet: &'s Sheet<'a>, before: Option<&'s Table>) -> Self {
        Search {
            sheet,
            before,
            tables: Vec::new(),
            areas: Vec::new(),
            taken: vec![false; sheet.pieces.len()],
            captions_used: Vec::new(),
        }
    }

    fn run(&mut self) {
        let mut ruled = regions::ruled(self.sheet);
        ruled.sort_by(|a, b| a.area[1].total_cmp(&b.area[1]));
        let areas: Vec<Area> = ruled.iter().map(|r| r.area).collect();
        for region in &ruled {
            self.look_at(region, &areas);
        }
        let taken = self.areas.clone();
        for region in regions::captioned(self.sheet, &taken) {
            self.look_at(&region, &taken);
        }
    }

    fn look_at(&mut self, region: &Region, others: &[Area]) {
        let sheet = self.sheet;
        if self.areas.iter().any(|a| sheet::overlap(a, &region.area)) {
            return;
        }
        let free = |i: &usize| !self.taken[*i];
        let reach = [
            region.area[0] - 1.0,
            region.area[1],
            region.area[2] + 1.0,
            region.area[3],
        ];
        let mut cells: Vec<usize> = sheet.pieces_in(&reach).into_iter().filter(free).collect();
        // A caption between the first two rules.
        let mut caption = self.caption_inside(region, &mut cells);
        let mut area = region.area;
        if let Some(c) = &caption {
            let bottom = c
                .pieces
                .iter()
                .map(|i| sheet.pieces[*i].area[3])
                .fold(f32::MIN, f32::max);
            area[1] = area[1].max(bottom);
        }
        let mut lines = sheet.lines(&cells);
        let notes_inside = trailing_notes(&lines);
        let inner = lines.split_off(lines.len() - notes_inside);
        if lines.len() < 2 {
            return;
        }
        let across: Vec<Area> = self.rules_in(&sheet.rules.across, &area);
        let down: Vec<Area> = self.rules_in(&sheet.rules.down, &area);
        let Some(draft) = Draft::new(&lines, &area, &across, &down) else {
            return;
        };
        let grid = draft.grid();
        let own = |i: &usize| !self.taken[*i] && !cells.contains(i);
        let mut below: Vec<usize> = captions::notes(sheet, &area, draft.measure.size)
            .into_iter()
            .filter(own)
            .collect();
        let bottom = below
            .iter()
            .map(|i| sheet.pieces[*i].area[3])
            .fold(area[3], f32::max);
        caption = caption.or_else(|| captions::find(sheet, &area, bottom, &self.captions_used, others));
        if let Some(c) = &mut caption {
            c.pieces.retain(|i| !self.taken[*i] && !cells.contains(i));
        }
        let figure = sheet.figures.iter().any(|f| {
            let near = (f[1] - area[3]).abs() < 4.0 * sheet.size || (area[1] - f[3]).abs() < 2.5 * sheet.size;
            near && f[0] < area[2] && f[2] > area[0]
        });
        let mut rules = draft.full.clone();
        rules.dedup_by(|a, b| (*a - *b).abs() < 0.6 * sheet.size);
        let sides = [area[0], area[2]];
        let hull = cells.iter().map(|i| sheet.pieces[*i].area).fold(area, union);
        let above = |i: &usize| sheet.pieces[*i].area[3] < hull[1] && !self.taken[*i];
        let below_all = |i: &usize| sheet.pieces[*i].area[1] > hull[3] && !below.contains(i);
        let at_top = !(0..sheet.pieces.len())
            .any(|i| above(&i) && caption.as_ref().is_none_or(|c| !c.pieces.contains(&i)));
        let at_bottom = !(0..sheet.pieces.len()).any(|i| below_all(&i));
        let goes_on = at_top
            && caption.is_none()
            && self
                .before
                .is_some_and(|t| t.could_go_on(sheet.page.number, sides) && t.grid.columns == grid.columns);
        let evidence = Evidence {
            captioned: caption.is_some() || goes_on,
            figure,
            rules: rules.len(),
            walls: draft.seams.walls.len(),
            drawings: sheet.drawings(&area),
            open_top: region
                .rules
                .first()
                .is_some_and(|r| lines[0].baseline < r[1] + 0.5),
        };
        if !plausible::is_table(&grid, evidence) {
            return;
        }
        let mut pieces: Vec<usize> = cells;
        let mut whole = area;
        let caption_lines = caption.as_ref().map_or_else(Vec::new, |c| sheet.lines(&c.pieces));
        if let Some(c) = &caption {
            pieces.extend(&c.pieces);
            self.captions_used.extend(c.start);
            if c.below {
                whole[3] = caption_lines.iter().map(|l| l.area[3]).fold(whole[3], f32::max);
            }
        }
        if caption.as_ref().is_some_and(|c| c.below) && below.is_empty() {
            below = captions::notes(sheet, &whole, draft.measure.size);
        }
        below.retain(|i| !self.taken[*i] && !pieces.contains(i));
        let mut notes = inner;
        notes.extend(sheet.lines(&below));
        pieces.extend(below);
        whole = pieces.iter().map(|i| sheet.pieces[*i].area).fold(whole, union);
        let start = caption.as_ref().and_then(|c| c.start).map(|s| &sheet.captions[s]);
        for i in &pieces {
            self.taken[*i] = true;
        }
        self.tables.push(Table {
            page: sheet.page.number,
            label: start.map(|s| s.label.clone()),
            continued: start.is_some_and(|s| s.continued),
            below: caption.as_ref().is_some_and(|c| c.below),
            caption: caption_lines,
            notes,
            lines: lines.len(),
            grid,
            at_top,
            at_bottom,
            sides,
        });
        self.areas.push(whole);
    }

    /// Takes a caption that stands inside the region, in its first lines, out of the cells.
    fn caption_inside(&self, region: &Region, cells: &mut Vec<usize>) -> Option<captions::Found> {
        let sheet = self.sheet;
        let rows = sheet.in_rows(cells.clone());
        let start = sheet
            .captions
            .iter()
            .position(|c| rows.first().is_some_and(|r| r.contains(&c.piece)))?;
        let next_rule = region
            .rules
            .iter()
            .map(|r| r[1])
            .find(|y| *y > sheet.captions[start].last_baseline)?;
        let pieces: Vec<usize> = rows
            .into_iter()
            .take_while(|r| sheet.pieces[r[0]].baseline < next_rule && r.len() == 1)
            .flatten()
            .collect();
        cells.retain(|i| !pieces.contains(i));
        Some(captions::Found {
            start: Some(start),
            pieces,
            below: false,
        })
    }

    fn rules_in(&self, rules: &[Area], area: &Area) -> Vec<Area> {
        let slack = self.sheet.size;
        rules
            .iter()
            .filter(|r| {
                r[0] < area[2] + 2.0
                    && r[2] > area[0] - 2.0
                    && r[1] < area[3] + 0.5 * slack
                    && r[3] > area[1] - 0.5 * slack
                    && r[0] > area[0] - 2.0 * slack
                    && r[2] < area[2] + 2.0 * slack
            })
            .copied()
            .collect()
    }
}

/// How many lines at the end of the cells are notes: from one that begins like a note on, each in one
/// piece.
fn trailing_notes(lines: &[Line]) -> usize {
    let whole = |l: &Line| l.words.iter().all(|w| !w.after_gap);
    let tail = lines.iter().rev().take_while(|l| whole(l)).count();
    let from = lines.len() - tail;
    lines[from..]
        .iter()
        .position(content::begins_note)
        .map_or(0, |at| tail - at)
}
