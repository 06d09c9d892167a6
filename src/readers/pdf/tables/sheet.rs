//! A page as the search for tables sees it: its pieces from top to bottom, its rules, the captions of
//! tables that begin on it, and the columns that its text is set in.

use super::super::glyphs::{Area, Glyphs, PageGlyphs, Turn};
use super::super::lines::{self, Line};
use super::super::pieces::Piece;
use super::super::roles;
use super::rules::Rules;

/// The caption of a table, as far as its first line says.
#[derive(Clone, Debug)]
pub struct Start {
    /// Of the page's pieces.
    pub piece: usize,
    /// `Table 2`, as printed.
    pub label: String,
    pub area: Area,
    /// Baseline of the last line that surely belongs to it.
    pub last_baseline: f32,
    pub continued: bool,
}

pub struct Sheet<'a> {
    pub page: &'a PageGlyphs,
    pub glyphs: &'a Glyphs,
    /// By their baselines.
    pub pieces: Vec<Piece>,
    pub rules: Rules,
    /// Size that most of the document is set in.
    pub size: f32,
    pub captions: Vec<Start>,
    /// Baselines of the first lines of captions of figures.
    pub figures: Vec<Area>,
    columns: Vec<[f32; 2]>,
}

impl<'a> Sheet<'a> {
    pub fn new(
        page: &'a PageGlyphs,
        glyphs: &'a Glyphs,
        mut pieces: Vec<Piece>,
        turn: Turn,
        size: f32,
    ) -> Sheet<'a> {
        pieces.sort_by(|a, b| a.baseline.total_cmp(&b.baseline));
        let mut sheet = Sheet {
            page,
            glyphs,
            rules: page.rules.turned(turn, (page.width, page.height)),
            size,
            captions: Vec::new(),
            figures: Vec::new(),
            columns: columns(&pieces),
            pieces,
        };
        sheet.find_captions();
        sheet
    }

    fn find_captions(&mut self) {
        for (index, piece) in self.pieces.iter().enumerate() {
            let Some(first) = piece
                .glyphs
                .iter()
                .map(|g| &self.page.glyphs[*g as usize].meaning)
                .find(|m| !m.is_space())
            else {
                continue;
            };
            let mut head = String::new();
            first.add_to(&mut head);
            // Labels begin with few letters; most lines need no closer look.
            if !head.starts_with(['T', 't', 'S', 's', 'E', 'O', 'F', 'f', 'A', 'a', 'W', 'e']) {
                continue;
            }
            let text = piece.plain_text(self.page);
            let Some(found) = roles::label(&text) else {
                continue;
            };
            if !found.table {
                self.figures.push(piece.area);
                continue;
            }
            let rest = text[found.range.end..].trim_start();
            let low = rest.starts_with(|c: char| c.is_lowercase()) || rest.starts_with([',', ')', ';']);
            let continued = rest
                .to_lowercase()
                .trim_start_matches(['(', '.', ' ', '-', '—', '–', ',', ':'])
                .starts_with("cont");
            if low && !continued || self.in_running_text(index, rest) {
                continue;
            }
            self.captions.push(Start {
                piece: index,
                label: text[found.range.clone()].trim().to_string(),
                area: piece.area,
                last_baseline: piece.baseline,
                continued,
            });
        }
    }

    /// A line above at the usual distance that goes on in this one.
    fn in_running_text(&self, index: usize, rest: &str) -> bool {
        if rest.is_empty() || rest.starts_with(['.', ':', '|', '—', '–']) {
            return false;
        }
        let piece = &self.pieces[index];
        self.pieces[..index].iter().rev().take(60).any(|p| {
            let step = piece.baseline - p.baseline;
            let aligned = (p.area[0] - piece.area[0]).abs() < 1.5 * piece.size;
            (0.5 * piece.size..1.45 * piece.size).contains(&step)
                && aligned
                && (p.size - piece.size).abs() < 0.04 * piece.size
                && p.width() > 0.8 * piece.width()
                && p.glyphs.len() > 30
                && !super::super::paragraphs::ends_sentence(&p.plain_text(self.page))
        })
    }

    /// The pieces whose middle lies between top and bottom and that reach into the area.
    pub fn inside(&self, area: &Area) -> impl Iterator<Item = &Piece> + use<'_, 'a> {
        self.inside_at(area).map(|i| &self.pieces[i])
    }

    fn inside_at(&self, area: &Area) -> impl Iterator<Item = usize> + use<'_, 'a> {
        let [left, top, right, bottom] = *area;
        let from = self.pieces.partition_point(|p| p.baseline < top - self.size);
        (from..self.pieces.len())
            .take_while(move |i| self.pieces[*i].baseline <= bottom + 3.0 * self.size)
            .filter(move |i| {
                let p = &self.pieces[*i];
                let middle = (p.area[1] + p.area[3]) / 2.0;
                middle > top && middle < bottom && p.area[2] > left && p.area[0] < right
            })
    }

    pub fn is_caption_start(&self, piece: &Piece) -> bool {
        let same = |a: &Area| a == &piece.area;
        self.captions.iter().any(|c| same(&c.area)) || self.figures.iter().any(same)
    }

    /// How many cells a piece may hold: tight columns have gaps hardly wider than words.
    pub fn cells_of(&self, piece: &Piece) -> usize {
        let mut cells = 1;
        let mut right = f32::MAX;
        for g in piece.glyphs.iter().map(|g| &self.page.glyphs[*g as usize]) {
            if g.meaning.is_space() {
                continue;
            }
            cells += usize::from(g.x0 - right > 0.8 * piece.size);
            right = g.x1;
        }
        cells
    }

    pub fn within(&self, piece: &Piece, left: f32, right: f32) -> bool {
        piece.area[0] >= left - 1.2 * self.size && piece.area[2] <= right + 1.2 * self.size
    }

    /// The pieces of an area, without those that reach far beyond it.
    pub fn pieces_in(&self, area: &Area) -> Vec<usize> {
        self.inside_at(area)
            .filter(|i| self.within(&self.pieces[*i], area[0], area[2]))
            .collect()
    }

    /// The lines that pieces make.
    pub fn lines(&self, pieces: &[usize]) -> Vec<Line> {
        let pieces: Vec<Piece> = pieces.iter().map(|i| self.pieces[*i].clone()).collect();
        lines::rows(pieces)
            .iter()
            .filter_map(|row| lines::line(row, self.page, self.glyphs))
            .collect()
    }

    /// Pieces in rows of nearly the same baseline.
    pub fn in_rows(&self, mut pieces: Vec<usize>) -> Vec<Vec<usize>> {
        pieces.sort_unstable();
        let mut rows: Vec<Vec<usize>> = Vec::new();
        for i in pieces {
            let piece = &self.pieces[i];
            match rows.last_mut() {
                Some(row) if piece.baseline - self.pieces[row[0]].baseline < 0.45 * piece.size => row.push(i),
                _ => rows.push(vec![i]),
            }
        }
        rows
    }

    /// The number of baselines in an area.
    pub fn lines_between(&self, left: f32, right: f32, top: f32, bottom: f32) -> usize {
        self.row_pieces(left, right, top, bottom).len()
    }

    /// The pieces of an area in rows of nearly the same baseline.
    pub fn row_pieces(&self, left: f32, right: f32, top: f32, bottom: f32) -> Vec<Vec<&Piece>> {
        let mut rows: Vec<Vec<&Piece>> = Vec::new();
        for piece in self.inside(&[left, top, right, bottom]) {
            match rows.last_mut() {
                Some(row) if piece.baseline - row[0].baseline < 0.45 * piece.size => row.push(piece),
                _ => rows.push(vec![piece]),
            }
        }
        rows
    }

    /// The column of text that something stands in.
    pub fn own_column(&self, area: &Area) -> Option<[f32; 2]> {
        self.columns
            .iter()
            .find(|c| area[0] >= c[0] - self.size && area[2] <= c[1] + self.size)
            .copied()
    }

    /// The column of text that something stands in: one of the page's, or what the text beside and
    /// above it leaves, or the whole width of the text.
    pub fn column_of(&self, area: &Area) -> [f32; 2] {
        self.own_column(area).unwrap_or_else(|| self.room_of(area))
    }

    fn room_of(&self, area: &Area) -> [f32; 2] {
        let mut room = self.pieces.iter().fold([f32::MAX, f32::MIN], |w, p| {
            [w[0].min(p.area[0]), w[1].max(p.area[2])]
        });
        let gap = 0.6 * self.size;
        let (mut left, mut right, mut across) = ((0, f32::MIN), (0, f32::MAX), 0);
        let window = [f32::MIN, area[1] - 8.0 * self.size, f32::MAX, area[3]];
        for p in self.inside(&window) {
            if p.area[2] < area[0] - gap {
                left = (left.0 + 1, f32::max(left.1, p.area[2]));
            } else if p.area[0] > area[2] + gap {
                right = (right.0 + 1, f32::min(right.1, p.area[0]));
            } else if p.area[0] < area[0] - 2.0 * gap || p.area[2] > area[2] + 2.0 * gap {
                across += 1;
            }
        }
        // One line may be the end of a paragraph, several are a column.
        if left.0 >= 3 && left.0 > across {
            room[0] = left.1 + gap;
        }
        if right.0 >= 3 && right.0 > across {
            room[1] = right.1 - gap;
        }
        room
    }

    /// The lower end of the rows of cells that begin right below a height, if there are at least so
    /// many.
    pub fn rows_down(&self, left: f32, right: f32, from: f32, least: usize) -> Option<f32> {
        let rows = self.row_pieces(left, right, from, from + 1000.0);
        let (mut end, mut last, mut count) = (None, from, 0);
        let lowest = self.pieces.last().map_or(0.0, |p| p.baseline);
        let last_of_page = |row: &[&Piece]| row[0].baseline > lowest - 2.0;
        for row in &rows {
            if row[0].baseline - last > 2.6 * self.size {
                break;
            }
            match self.row_look(row, left, right) {
                RowLook::Cells => {
                    count += 1;
                    end = Some(row.iter().map(|p| p.area[3]).fold(f32::MIN, f32::max));
                }
                // The label of rows that follow on the next page.
                RowLook::Label if last_of_page(row) && count > 0 => end = Some(row[0].area[3]),
                RowLook::Label => {}
                RowLook::Other => break,
            }
            last = row[0].baseline;
        }
        end.filter(|_| count >= least)
    }

    /// Top and bottom of rows of cells below a caption: behind the rest of the caption's lines.
    pub fn rows_after(&self, left: f32, right: f32, from: f32) -> Option<(f32, f32)> {
        let rows = self.row_pieces(left, right, from + 0.3 * self.size, from + 1000.0);
        let mut last = from;
        for (i, row) in rows.iter().enumerate().take(12) {
            if row[0].baseline - last > 3.2 * self.size {
                return None;
            }
            // Heads of two narrow columns may stand so close that they look like one label.
            let heads = row.len() == 1
                && row[0].glyphs.len() <= 60
                && self.cells_of(row[0]) >= 2
                && rows
                    .get(i + 1)
                    .is_some_and(|next| self.row_look(next, left, right) == RowLook::Cells);
            if heads || self.row_look(row, left, right) == RowLook::Cells {
                let top = row.iter().map(|p| p.area[1]).fold(f32::MAX, f32::min);
                let bottom = self.rows_down(left, right, top, 3)?;
                return Some((top, bottom));
            }
            if row.iter().any(|p| self.is_caption_start(p)) || row.len() > 1 && i > 0 {
                return None;
            }
            last = row[0].baseline;
        }
        None
    }

    fn row_look(&self, row: &[&Piece], left: f32, right: f32) -> RowLook {
        let width = right - left;
        let bad = row
            .iter()
            .any(|p| !self.within(p, left, right) || self.is_caption_start(p));
        if bad {
            return RowLook::Other;
        }
        let wide = row
            .iter()
            .filter(|p| p.width() > 0.55 * width && p.glyphs.len() > 40)
            .count();
        if wide > 0 {
            return RowLook::Other;
        }
        if row.len() >= 2 || self.cells_of(row[0]) >= 3 {
            return RowLook::Cells;
        }
        if row[0].width() < 0.45 * width {
            RowLook::Label
        } else {
            RowLook::Other
        }
    }

    /// How many curves and slanted strokes are drawn in an area.
    pub fn drawings(&self, area: &Area) -> usize {
        self.rules.drawings.iter().filter(|d| overlap(d, area)).count()
    }
}

#[derive(Clone, Copy, PartialEq, Eq)]
enum RowLook {
    Cells,
    Label,
    Other,
}

pub fn overlap(a: &Area, b: &Area) -> bool {
    a[0] < b[2] && b[0] < a[2] && a[1] < b[3] && b[1] < a[3]
}

/// The columns that running text is set in: the edges that long lines share.
fn columns(pieces: &[Piece]) -> Vec<[f32; 2]> {
    let long: Vec<&Piece> = pieces.iter().filter(|p| p.glyphs.len() >= 25).collect();
    // No page of text has that many lines.
    if long.len() > 2000 {
        return Vec::new();
    }
    let mut edges: Vec<(f32, Vec<f32>)> = Vec::new();
    for piece in &long {
        let [left, _, right, _] = piece.area;
        match edges
            .iter_mut()
            .find(|(l, _)| (*l - left).abs() < 0.6 * piece.size)
        {
            Some((_, rights)) => rights.push(right),
            None => edges.push((left, vec![right])),
        }
    }
    let mut all: Vec<[f32; 2]> = Vec::new();
    for (left, mut rights) in edges {
        if rights.len() >= 4 && rights.len() * 12 >= long.len() {
            // A few lines may go across all columns.
            rights.sort_by(f32::total_cmp);
            all.push([left, rights[rights.len() * 7 / 10]]);
        }
    }
    // Indented lines stand in the column that they are indented in.
    let mut columns: Vec<[f32; 2]> = all
        .iter()
        .filter(|c| !all.iter().any(|o| o[0] < c[0] - 1.0 && o[1] > c[1] - 20.0))
        .copied()
        .collect();
    columns.sort_by(|a, b| a[0].total_cmp(&b[0]));
    if columns.windows(2).any(|w| w[0][1] > w[1][0]) {
        return Vec::new();
    }
    columns
}
