//! A *rule* is a straight line drawn across or down the page: the stroke of a pen or a thin filled
//! bar. A *shade* is a filled rectangle behind text, such as every other row of a table; it is no
//! rule, whatever its edges. A *drawing* is everything with curves or slants: where there are many,
//! there is a figure.

use super::super::glyphs::{Area, Turn, union};

/// What is drawn on a page besides text, as far as tables are concerned.
#[derive(Clone, Debug, Default)]
pub struct Rules {
    /// From left to right.
    pub across: Vec<Area>,
    /// From top to bottom.
    pub down: Vec<Area>,
    pub shades: Vec<Area>,
    pub drawings: Vec<Area>,
    taken: usize,
}

/// Strokes taken down on one page. A large table with a frame around each cell has some thousands;
/// beyond that it is a map.
const MOST: usize = 12_000;
/// Bars up to this many points thick are rules.
const THICKEST: f32 = 3.0;
/// Strokes shorter than this are parts of drawings, or corners between the borders of cells.
const SHORTEST: f32 = 3.0;

impl Rules {
    /// Whether there is room for more; false ends the taking down for this page.
    pub fn takes_more(&self) -> bool {
        self.taken < MOST
    }

    /// A straight stroke of this thickness.
    pub fn stroke(&mut self, from: [f32; 2], to: [f32; 2], thickness: f32) {
        self.taken += 1;
        let area = [
            from[0].min(to[0]),
            from[1].min(to[1]),
            from[0].max(to[0]),
            from[1].max(to[1]),
        ];
        let (width, height) = (area[2] - area[0], area[3] - area[1]);
        if thickness > 2.0 * THICKEST {
            // Drawn with a broad pen, it is a filled rectangle.
            let half = thickness / 2.0;
            if height < 1.0 {
                self.shades
                    .push([area[0], area[1] - half, area[2], area[3] + half]);
            }
        } else if height < 0.7 && width >= SHORTEST {
            self.across.push(area);
        } else if width < 0.7 && height >= SHORTEST {
            self.down.push(area);
        } else if width.max(height) >= SHORTEST {
            self.drawings.push(area);
        }
    }

    /// A filled rectangle, or a filled shape as thin as a rule.
    pub fn bar(&mut self, area: Area) {
        self.taken += 1;
        let (width, height) = (area[2] - area[0], area[3] - area[1]);
        if height <= THICKEST && width >= SHORTEST.max(2.0 * height) {
            let middle = (area[1] + area[3]) / 2.0;
            self.across.push([area[0], middle, area[2], middle]);
        } else if width <= THICKEST && height >= SHORTEST.max(2.0 * width) {
            let middle = (area[0] + area[2]) / 2.0;
            self.down.push([middle, area[1], middle, area[3]]);
        } else if width > THICKEST && height > THICKEST {
            self.shades.push(area);
        }
    }

    /// Something that is neither straight nor a rectangle.
    pub fn drawing(&mut self, area: Area) {
        self.taken += 1;
        self.drawings.push(area);
    }

    /// The rules as they lie when the page is turned for reading; `page` is its width and height.
    /// Strokes that go on where others end become one.
    pub fn turned(&self, turn: Turn, page: (f32, f32)) -> Rules {
        let to = |a: &Area| {
            let (x0, y0) = turn.to_reading((a[0], a[1]), page);
            let (x1, y1) = turn.to_reading((a[2], a[3]), page);
            [x0.min(x1), y0.min(y1), x0.max(x1), y0.max(y1)]
        };
        let all = |areas: &[Area]| areas.iter().map(to).collect::<Vec<Area>>();
        let (mut across, mut down) = (all(&self.across), all(&self.down));
        if matches!(turn, Turn::Quarter | Turn::ThreeQuarters) {
            std::mem::swap(&mut across, &mut down);
        }
        Rules {
            across: joined(across, 0, 1),
            down: joined(down, 1, 0),
            shades: all(&self.shades),
            drawings: all(&self.drawings),
            taken: self.taken,
        }
    }
}

/// Strokes at the same height drawn piece by piece, as most word processors do for each cell, put
/// together. `along` is the coordinate they run in, `at` the one they share.
fn joined(mut rules: Vec<Area>, along: usize, at: usize) -> Vec<Area> {
    /// Strokes this close in height are one.
    const SAME: f32 = 1.0;
    /// A rule under several headings has larger gaps between its parts.
    const GAP: f32 = 1.6;
    rules.sort_by(|a, b| a[at].total_cmp(&b[at]));
    let mut out: Vec<Area> = Vec::new();
    let mut i = 0;
    while i < rules.len() {
        let level = rules[i][at];
        let n = rules[i..].iter().take_while(|r| r[at] - level <= SAME).count();
        let row = &mut rules[i..i + n];
        row.sort_by(|a, b| a[along].total_cmp(&b[along]));
        let from = out.len();
        for rule in row.iter() {
            match out[from..].last_mut() {
                Some(last) if rule[along] - last[along + 2] <= GAP => *last = union(*last, *rule),
                _ => out.push(*rule),
            }
        }
        i += n;
    }
    out
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn strokes_bars_and_shades_are_told_apart_and_joined() {
        let mut rules = Rules::default();
        rules.stroke([50.0, 100.0], [150.0, 100.0], 0.5);
        rules.bar([151.0, 99.6, 250.0, 100.4]);
        rules.stroke([300.0, 100.0], [350.0, 100.0], 0.5);
        rules.bar([50.0, 110.0, 250.0, 124.0]);
        rules.stroke([50.0, 100.0], [50.0, 140.0], 0.5);
        rules.stroke([50.0, 100.0], [90.0, 140.0], 0.5);
        let seen = rules.turned(Turn::None, (600.0, 800.0));
        assert_eq!(seen.across.len(), 2, "{:?}", seen.across);
        assert_eq!((seen.across[0][0], seen.across[0][2]), (50.0, 250.0));
        assert_eq!(
            (seen.down.len(), seen.shades.len(), seen.drawings.len()),
            (1, 1, 1)
        );
        // Turned for reading, what ran down the page runs across it.
        let turned = rules.turned(Turn::Quarter, (600.0, 800.0));
        assert_eq!((turned.across.len(), turned.down.len()), (1, 2));
    }
}
