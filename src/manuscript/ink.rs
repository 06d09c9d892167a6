//! *Ink* is what a page shows of the text: for every drawn character of the text as read, the area
//! that it covers on its page. Only formats that store pages as pictures of text have any.
//!
//! Areas are kept in steps of a 65,535th of the page's longer side (0.013 pt on A4), twelve bytes
//! for each drawn character.

use serde::{Deserialize, Serialize};
use std::ops::Range;

/// Left, top, right, bottom, in points (72 to the inch) from the upper left corner of the page as
/// it is shown: cropped, turned and enlarged as the document says.
pub type Area = [f32; 4];

/// The smallest area that holds both.
pub fn union(a: Area, b: Area) -> Area {
    [a[0].min(b[0]), a[1].min(b[1]), a[2].max(b[2]), a[3].max(b[3])]
}

/// What a range of text covers on one line of one page.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize)]
pub struct LineArea {
    /// From 1.
    pub page: u32,
    /// From 1, as in [`Place`](super::Place).
    pub line: Option<u32>,
    #[serde(rename = "box")]
    pub area: Area,
}

/// From this byte of the text on, characters are drawn in this area.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize)]
struct Spot(u32, [u16; 4]);

/// The spots from this one on stand on this page.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize)]
struct Sheet {
    from: usize,
    page: u32,
    /// Width and height in points.
    size: [f32; 2],
}

impl Sheet {
    /// Points per step.
    fn step(&self) -> f32 {
        self.size[0].max(self.size[1]).max(1.0) / u16::MAX as f32
    }
}

/// The ink of a document. Empty for most formats, and then free.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize)]
pub(super) struct Ink {
    /// In the order of the text.
    spots: Vec<Spot>,
    /// In the order of the text, which goes back and forth between pages.
    sheets: Vec<Sheet>,
}

impl Ink {
    pub fn is_empty(&self) -> bool {
        self.spots.is_empty()
    }

    /// The following spots stand on this page.
    pub fn sheet(&mut self, page: u32, size: [f32; 2]) {
        let sheet = Sheet {
            from: self.spots.len(),
            page,
            size,
        };
        match self.sheets.last_mut() {
            Some(last) if last.page == page && last.size == size => {}
            Some(last) if last.from == sheet.from => *last = sheet,
            _ => self.sheets.push(sheet),
        }
    }

    /// Characters from byte `at` on are drawn here. Without a sheet there is no place to draw on.
    pub fn add(&mut self, at: usize, area: Area) {
        if let (Some(sheet), Ok(at)) = (self.sheets.last(), u32::try_from(at)) {
            let step = sheet.step();
            // Converting stops at the ends of u16, as drawing does at the edge of the page.
            self.spots.push(Spot(at, area.map(|v| (v / step).round() as u16)));
        }
    }

    /// Lets `carry` say where the characters of the text from `start` on have moved.
    pub fn carry(&mut self, start: usize, carry: impl Fn(usize) -> usize) {
        let moved = self.spots.iter_mut().rev().take_while(|s| s.0 as usize >= start);
        for spot in moved {
            spot.0 = u32::try_from(carry(spot.0 as usize)).unwrap_or(u32::MAX);
        }
    }

    /// Forgets what was drawn of text from `end` on.
    pub fn truncate(&mut self, end: usize) {
        while self.spots.last().is_some_and(|s| s.0 as usize >= end) {
            self.spots.pop();
        }
    }

    /// What the bytes of the range cover, one area for each page and line; `line` knows the line of a byte.
    /// The range must begin and end inside the text with a character that is drawn.
    pub fn areas(&self, bytes: Range<usize>, line: impl Fn(usize) -> Option<u32>) -> Vec<LineArea> {
        let mut out: Vec<LineArea> = Vec::new();
        if bytes.is_empty() {
            return out;
        }
        let first = self.spots.partition_point(|s| s.0 as usize <= bytes.start);
        let mut sheet = self.sheets.partition_point(|s| s.from < first);
        for at in first.saturating_sub(1)..self.spots.len() {
            let Spot(from, steps) = self.spots[at];
            if from as usize >= bytes.end {
                break;
            }
            // What was drawn of a hyphen that is gone takes no room in the text.
            if self.spots.get(at + 1).is_some_and(|next| next.0 == from) {
                continue;
            }
            while self.sheets.get(sheet).is_some_and(|s| s.from <= at) {
                sheet += 1;
            }
            let Some(page) = sheet.checked_sub(1).map(|s| &self.sheets[s]) else {
                continue;
            };
            let area = steps.map(|v| (v as f32 * page.step() * 100.0).round() / 100.0);
            let line = line(bytes.start.max(from as usize));
            match out.last_mut() {
                Some(last) if (last.page, last.line) == (page.page, line) => {
                    last.area = union(last.area, area);
                }
                _ => out.push(LineArea {
                    page: page.page,
                    line,
                    area,
                }),
            }
        }
        out
    }

    /// Width and height of a page on which something of the text is drawn.
    pub fn page_size(&self, page: u32) -> Option<[f32; 2]> {
        self.sheets.iter().find(|s| s.page == page).map(|s| s.size)
    }

    /// The pages on which something of the text is drawn, in order.
    pub fn pages(&self) -> Vec<u32> {
        let mut pages: Vec<u32> = self.sheets.iter().map(|s| s.page).collect();
        pages.sort_unstable();
        pages.dedup();
        pages
    }
}
