//! From lines to *blocks*: paragraphs, table rows and whatever else stands apart on the page, and
//! the joining of paragraphs that go on in the next column or on the next page.

use super::lines::Line;

/// The lines of one column within one band, and the column's edges.
#[derive(Clone, Debug)]
pub struct Column {
    pub lines: Vec<Line>,
    pub left: f32,
    pub right: f32,
    /// Number of each line on its page, from 1, in reading order.
    pub first_number: u32,
    /// Text that runs in another direction than the rest of its page.
    pub aside: bool,
}

/// Lines that belong together.
#[derive(Clone, Debug)]
pub struct Block {
    pub lines: Vec<(u32, Line)>,
    /// Cells side by side rather than running text.
    pub row: bool,
    /// Index of the column it begins in.
    pub column: usize,
    /// Edges of that column.
    pub left: f32,
    pub right: f32,
    /// Stands clear of what is above it: by a gap, another size or weight, or at a column's top.
    pub apart: bool,
    pub aside: bool,
}

impl Block {
    pub fn first(&self) -> &Line {
        &self.lines[0].1
    }

    pub fn last(&self) -> &Line {
        &self.lines[self.lines.len() - 1].1
    }

    /// Size of most of its lines.
    pub fn size(&self) -> f32 {
        let mut sizes: Vec<f32> = self.lines.iter().map(|l| l.1.size).collect();
        sizes.sort_by(f32::total_cmp);
        sizes[sizes.len() / 2]
    }

    pub fn bold(&self) -> bool {
        self.lines.iter().all(|l| l.1.bold)
    }

    pub fn text(&self) -> String {
        let lines: Vec<String> = self.lines.iter().map(|l| l.1.text()).collect();
        lines.join(" ")
    }

    /// At least one line takes most of the column's width: running text rather than a label.
    fn fills_column(&self) -> bool {
        self.lines
            .iter()
            .any(|l| l.1.width() > 0.55 * (self.right - self.left))
    }
}

/// Size that most characters of the document are set in, and the usual distance of its baselines
/// in sizes.
#[derive(Clone, Copy, Debug)]
pub struct Body {
    pub size: f32,
    pub leading: f32,
}

impl Body {
    pub fn of(columns: &[Column]) -> Body {
        let mut sizes: Vec<(f32, usize)> = Vec::new();
        let mut leadings: Vec<f32> = Vec::new();
        for column in columns.iter().filter(|c| !c.aside) {
            for line in &column.lines {
                let n = line
                    .words
                    .iter()
                    .map(|w| w.parts.iter().map(|p| p.1.len()).sum::<usize>())
                    .sum();
                match sizes
                    .iter_mut()
                    .find(|(s, _)| (*s - line.size).abs() < 0.03 * line.size)
                {
                    Some((_, sum)) => *sum += n,
                    None => sizes.push((line.size, n)),
                }
            }
            for pair in column.lines.windows(2) {
                let leading = (pair[1].baseline - pair[0].baseline) / pair[1].size;
                let text = pair.iter().all(|l| l.words.len() >= 4);
                if text
                    && (pair[1].size - pair[0].size).abs() < 0.05 * pair[0].size
                    && (0.8..3.0).contains(&leading)
                {
                    leadings.push(leading);
                }
            }
        }
        leadings.sort_by(f32::total_cmp);
        Body {
            size: sizes.iter().max_by_key(|s| s.1).map_or(10.0, |s| s.0),
            leading: leadings.get(leadings.len() / 2).copied().unwrap_or(1.2),
        }
    }

    /// Set in the size of the running text.
    pub fn is_size(&self, size: f32) -> bool {
        (size - self.size).abs() < 0.06 * self.size
    }
}

/// Cuts all columns into blocks.
pub fn blocks(columns: &[Column], body: Body) -> Vec<Block> {
    let mut out = Vec::new();
    for (index, column) in columns.iter().enumerate() {
        column_blocks(index, column, body, &mut out);
    }
    out
}

fn column_blocks(index: usize, column: &Column, body: Body, out: &mut Vec<Block>) {
    let lines = &column.lines;
    let measure = Measure::of(column, body);
    let from = out.len();
    for (i, line) in lines.iter().enumerate() {
        let row = is_row(lines, i);
        let seam = match out[from..].last() {
            None => Seam::Apart,
            Some(block) if line.table.is_some() && block.first().table == line.table => Seam::None,
            Some(block) if line.table.is_some() || block.first().table.is_some() => Seam::Apart,
            Some(block) if block.row || row => Seam::Apart,
            Some(block) => measure.seam(block, line, lines.get(i + 1)),
        };
        let number = column.first_number + i as u32;
        match out[from..].last_mut() {
            Some(block) if seam == Seam::None => block.lines.push((number, line.clone())),
            _ => out.push(Block {
                lines: vec![(number, line.clone())],
                row,
                column: index,
                left: column.left,
                right: column.right,
                apart: seam == Seam::Apart,
                aside: column.aside,
            }),
        }
    }
}

/// A line of cells: wide gaps, and not just one badly justified line among good ones.
fn is_row(lines: &[Line], i: usize) -> bool {
    let line = &lines[i];
    if line.pieces < 2 {
        return false;
    }
    let mut widest: f32 = 0.0;
    for pair in line.words.windows(2) {
        if pair[1].after_gap {
            widest = widest.max((pair[1].area[0] - pair[0].area[2]) / line.size);
        }
    }
    let near = |j: Option<usize>| {
        j.and_then(|j| lines.get(j))
            .is_some_and(|l| l.pieces > 1 && (l.baseline - line.baseline).abs() < 3.0 * line.size)
    };
    // A list's number or bullet before its text is no cell.
    let marker = line.pieces == 2
        && line.words.get(1).is_some_and(|w| w.after_gap)
        && is_marker(&line.words[0].text());
    !marker && (line.pieces > 2 || widest > 3.0 || near(i.checked_sub(1)) || near(Some(i + 1)))
}

/// `•`, `–`, `3.`, `(b)`, `[12]`.
pub fn is_marker(word: &str) -> bool {
    if matches!(
        word,
        "•" | "–" | "-" | "—" | "◦" | "▪" | "■" | "·" | "*" | "∙" | "○" | "●" | "➢"
    ) {
        return true;
    }
    let bare = word
        .trim_start_matches(['(', '['])
        .trim_end_matches(['.', ')', ']']);
    bare.len() < word.len()
        && !bare.is_empty()
        && (bare.len() <= 3 && bare.bytes().all(|b| b.is_ascii_digit())
            || bare.len() == 1 && bare.bytes().all(|b| b.is_ascii_lowercase())
            || bare.len() <= 4 && bare.bytes().all(|b| matches!(b, b'i' | b'v' | b'x')))
}

#[derive(Clone, Copy, PartialEq, Eq, Debug)]
enum Seam {
    /// The line goes on with the block.
    None,
    /// A new paragraph of the same text.
    Paragraph,
    /// Something else begins.
    Apart,
}

/// What is usual in a column.
struct Measure {
    left: f32,
    right: f32,
    /// Usual distance of baselines, in points.
    leading: f32,
    body: Body,
}

impl Measure {
    fn of(column: &Column, body: Body) -> Measure {
        let lines = &column.lines;
        let mut lefts: Vec<f32> = lines.iter().map(|l| l.area[0]).collect();
        lefts.sort_by(f32::total_cmp);
        // The leftmost edge that is no exception.
        let enough = (lines.len() / 6).max(1);
        let left = lefts
            .iter()
            .find(|x| lefts.iter().filter(|y| (*y - *x).abs() < 2.0).count() >= enough)
            .copied()
            .unwrap_or(column.left);
        let mut rights: Vec<f32> = lines.iter().map(|l| l.area[2]).collect();
        rights.sort_by(f32::total_cmp);
        let right = rights[rights.len() * 9 / 10];
        let mut steps: Vec<f32> = lines
            .windows(2)
            .filter(|w| (w[1].size - w[0].size).abs() < 0.05 * w[0].size)
            // Formulas and labels have distances of their own.
            .filter(|w| w.iter().all(|l| l.words.len() >= 4))
            .map(|w| w[1].baseline - w[0].baseline)
            .filter(|s| *s > 2.0)
            .collect();
        steps.sort_by(f32::total_cmp);
        let leading = if steps.len() >= 4 {
            // Below the middle, as gaps between paragraphs only ever widen it.
            steps[steps.len() * 2 / 5]
        } else {
            body.leading * lines.first().map_or(body.size, |l| l.size)
        };
        Measure {
            left,
            right,
            leading,
            body,
        }
    }

    fn seam(&self, block: &Block, line: &Line, next: Option<&Line>) -> Seam {
        let last = block.last();
        let size = last.size.max(line.size);
        let text = last.text();
        let ended = ends_sentence(&text);
        let first = line.words.first().map(|w| w.text()).unwrap_or_default();
        let lower = first.chars().next().is_some_and(char::is_lowercase);
        let step = line.baseline - last.baseline;
        if (line.size - last.size).abs() > 0.07 * size && !(lower && !ended && step < 1.2 * self.leading) {
            return Seam::Apart;
        }
        if line.bold != last.bold
            && (!lower || ended)
            && line
                .words
                .iter()
                .any(|w| w.text().chars().any(char::is_alphabetic))
        {
            return Seam::Apart;
        }
        // Titles are larger than what is usual in the column, and so are their line distances.
        let usual = if size > 1.07 * self.body.size {
            self.leading.max(self.body.leading.max(1.3) * size)
        } else {
            self.leading
        };
        // Nothing begins behind a comma or an open bracket, whatever the next line looks like; it may
        // stand lower for what is raised in it.
        if ends_open(&text) && !line.bold && (0.0..1.8 * usual).contains(&step) {
            return Seam::None;
        }
        if step > (1.25 * usual).max(usual + 0.22 * size) || step < 0.0 {
            return Seam::Apart;
        }
        let is_indented = |l: &Line| (0.7 * size..5.0 * size).contains(&(l.area[0] - self.left));
        let indent = line.area[0] - last.area[0];
        let room = self.right - last.area[2];
        let first_width = line.words.first().map_or(0.0, |w| w.area[2] - w.area[0]);
        // The first word would have fitted on the line before.
        let short = room > first_width + 0.6 * size;
        let very_short = room > 0.35 * (self.right - self.left);
        let centre = |l: &Line| (l.area[0] + l.area[2]) / 2.0;
        let centred = (centre(line) - centre(last)).abs() < 2.0 && indent.abs() > 1.0;
        if centred && !ended {
            return Seam::None;
        }
        if is_marker(&first) && (ended || short) && !(block.lines.len() == 1 && indent > 0.7 * size && !short)
        {
            return Seam::Paragraph;
        }
        if line.font != last.font && short && !lower {
            return Seam::Paragraph;
        }
        if indent.abs() < 0.7 * size {
            return if short && (ended || very_short && !lower) {
                Seam::Paragraph
            } else {
                Seam::None
            };
        }
        if indent > 0.0 && is_indented(line) {
            let marked = block.lines.len() == 1 && last.words.first().is_some_and(|w| is_marker(&w.text()));
            let hangs = next.is_some_and(|n| {
                (n.area[0] - line.area[0]).abs() < 1.5 && n.baseline - line.baseline < 1.3 * self.leading
            });
            let single = block.lines.len() == 1 && !short;
            if marked || (hangs && single) || (!ended && !short) || lower {
                return Seam::None;
            }
            return Seam::Paragraph;
        }
        if indent < 0.0 {
            // Back from an indented first line, or the end of a hanging or quoted paragraph.
            let goes_on = if block.lines.len() == 1 {
                !short || !ended
            } else {
                !short && !ended
            };
            return if goes_on || lower {
                Seam::None
            } else {
                Seam::Paragraph
            };
        }
        if lower && !ended {
            Seam::None
        } else {
            Seam::Paragraph
        }
    }
}

/// Ends as sentences do, brackets and quotation marks aside.
pub fn ends_sentence(text: &str) -> bool {
    let bare = text
        .trim_end()
        .trim_end_matches(|c: char| matches!(c, ')' | ']' | '"' | '\'' | '”' | '’' | '»') || is_raised(c));
    bare.ends_with(['.', '!', '?', ':'])
}

fn is_raised(c: char) -> bool {
    matches!(c, '¹' | '²' | '³' | '⁰' | '⁴'..='⁹')
}

/// How a block stands to the running text around it.
#[derive(Clone, Copy, PartialEq, Eq, Debug)]
pub enum Standing {
    Text,
    /// Interrupts it without ending it: caption, note.
    Float,
    Heading,
}

/// Joins paragraphs that were cut by the end of a column or page: the last running text of one
/// column and the first of a later one, if the former stops in the middle of a sentence. What
/// stands between them (footnotes, figures, tables) then comes after.
pub fn join(blocks: Vec<Block>, body: Body, standing: impl Fn(&Block) -> Standing) -> Vec<Block> {
    let running = |b: &Block| {
        !b.row && !b.aside && !b.bold() && body.is_size(b.size()) && standing(b) == Standing::Text
    };
    let is_heading = |b: &Block| standing(b) == Standing::Heading;
    let mut slots: Vec<Option<Block>> = blocks.into_iter().map(Some).collect();
    let mut at = 0;
    while at < slots.len() {
        let Some(from) = slots[at].as_ref().filter(|b| running(b)) else {
            at += 1;
            continue;
        };
        match continuation(&slots, at, from, &running, &is_heading) {
            Some(to) => {
                if let (Some(next), Some(from)) = (slots[to].take(), slots[at].as_mut()) {
                    from.column = next.column;
                    from.left = next.left;
                    from.right = next.right;
                    from.lines.extend(next.lines);
                }
                // It may go on once more.
            }
            None => at += 1,
        }
    }
    slots.into_iter().flatten().collect()
}

fn continuation(
    slots: &[Option<Block>],
    at: usize,
    from: &Block,
    running: &impl Fn(&Block) -> bool,
    is_heading: &impl Fn(&Block) -> bool,
) -> Option<usize> {
    let last = from.last();
    let end = last.text();
    let open = !ends_sentence(&end) || ends_open(&end);
    if !open || !(from.fills_column() || from.lines.len() > 1) {
        return None;
    }
    for (to, next) in slots.iter().enumerate().skip(at + 1) {
        let Some(next) = next else { continue };
        if next.first().page > last.page + 2 {
            return None;
        }
        if !running(next) {
            // Headings end the search; floats are passed over.
            if is_heading(next) {
                return None;
            }
            continue;
        }
        if next.column == from.column {
            return None;
        }
        if !next.fills_column()
            && next.lines.len() == 1
            && next.first().width() < 0.3 * (next.right - next.left)
            && !starts_low(next)
        {
            continue;
        }
        if (next.size() - from.size()).abs() > 0.05 * from.size() {
            continue;
        }
        let full = last.area[2] > from.right - 0.12 * (from.right - from.left);
        let goes_on = starts_low(next) || ends_open(&end) || full;
        let indented =
            next.lines.len() > 1 && next.first().area[0] - next.lines[1].1.area[0] > 0.7 * next.size();
        return (goes_on && (!indented || starts_low(next) || ends_open(&end))).then_some(to);
    }
    None
}

/// Begins as no sentence begins: lower case, a number, an operator or bracket.
fn starts_low(block: &Block) -> bool {
    block
        .first()
        .text()
        .chars()
        .next()
        .is_some_and(|c| c.is_lowercase() || c.is_ascii_digit() || "=<>≤≥±(,;[−-–%.".contains(c))
}

/// Ends as no sentence ends.
fn ends_open(text: &str) -> bool {
    text.ends_with([
        '-', '\u{ad}', '\u{2010}', ',', ';', '=', '<', '>', '≤', '≥', '±', '(', '[', '−',
    ]) || text.ends_with("et al.")
        || text.ends_with(" vs.")
        || text.ends_with("Fig.")
        || text.ends_with("e.g.")
        || text.ends_with("i.e.")
}
