//! A *line* is the text of one paragraph or cell as a word processor stores it: pieces that stand
//! on the line, raised or lowered, with the page breaks between them.

use crate::manuscript::Builder;

/// Where text stands in relation to the line.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Shift {
    #[default]
    Level,
    Raised,
    Lowered,
}

/// How a piece of text is set.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Look {
    pub shift: Shift,
    /// Bold, italic, underlined or in capitals: the way people set headings by hand.
    pub strong: bool,
    pub hidden: bool,
}

#[derive(Clone, Debug, PartialEq)]
enum Piece {
    Text(Shift, String),
    /// A new page; `true` where somebody asked for it, `false` where it happened.
    Page(bool),
}

/// The text of one paragraph, cell or note.
#[derive(Clone, Debug, Default)]
pub struct Line {
    pieces: Vec<Piece>,
    /// Some text of it is set like running text.
    ordinary: bool,
}

impl Line {
    /// Appends text; neighbours with the same shift become one piece, so that `10`, `-`, `5` in
    /// three raised runs are read as one exponent.
    pub fn push(&mut self, text: &str, look: Look) {
        if text.is_empty() || look.hidden {
            return;
        }
        self.ordinary |= !look.strong && !text.trim().is_empty();
        match self.pieces.last_mut() {
            Some(Piece::Text(shift, last)) if *shift == look.shift => last.push_str(text),
            _ => self.pieces.push(Piece::Text(look.shift, text.to_string())),
        }
    }

    /// Appends text on the line.
    pub fn level(&mut self, text: &str) {
        self.push(text, Look::default());
    }

    /// Appends raised text.
    pub fn raised(&mut self, text: &str) {
        self.push(
            text,
            Look {
                shift: Shift::Raised,
                ..Look::default()
            },
        );
    }

    /// Appends lowered text.
    pub fn lowered(&mut self, text: &str) {
        self.push(
            text,
            Look {
                shift: Shift::Lowered,
                ..Look::default()
            },
        );
    }

    /// From here on the text stands on a new page; `asked` if by a page break of the author's.
    pub fn page(&mut self, asked: bool) {
        self.pieces.push(Piece::Page(asked));
    }

    /// A space between what was and what follows, which says nothing about how it is set.
    pub fn gap(&mut self) {
        match self.pieces.last_mut() {
            Some(Piece::Text(Shift::Level, last)) => last.push(' '),
            _ => self.pieces.push(Piece::Text(Shift::Level, " ".to_string())),
        }
    }

    /// Appends all of another line.
    pub fn append(&mut self, other: Line) {
        self.ordinary |= other.ordinary;
        for piece in other.pieces {
            match (self.pieces.last_mut(), piece) {
                (Some(Piece::Text(shift, last)), Piece::Text(other, text)) if *shift == other => {
                    last.push_str(&text);
                }
                (_, piece) => self.pieces.push(piece),
            }
        }
    }

    /// Takes a character out of the text.
    pub fn remove(&mut self, unwanted: char) {
        for piece in &mut self.pieces {
            if let Piece::Text(_, text) = piece {
                text.retain(|c| c != unwanted);
            }
        }
    }

    /// Its last character so far.
    pub fn last(&self) -> Option<char> {
        self.pieces.iter().rev().find_map(|p| match p {
            Piece::Text(_, text) => text.chars().next_back(),
            Piece::Page(_) => None,
        })
    }

    /// Whether it has no visible text.
    pub fn is_blank(&self) -> bool {
        self.texts().all(|(_, t)| t.trim().is_empty())
    }

    /// Whether all of its text is bold, italic, underlined or in capitals.
    pub fn is_strong(&self) -> bool {
        if !self.ordinary {
            return true;
        }
        let mut letters = self
            .texts()
            .flat_map(|(_, t)| t.chars())
            .filter(|c| c.is_alphabetic());
        letters.all(|c| !c.is_lowercase())
    }

    fn texts(&self) -> impl Iterator<Item = (Shift, &str)> {
        self.pieces.iter().filter_map(|p| match p {
            Piece::Text(shift, text) => Some((*shift, text.as_str())),
            Piece::Page(_) => None,
        })
    }

    /// Whether its first visible text is raised and a single letter or mark: `ᵃ Litres per week`.
    pub fn starts_with_raised_mark(&self) -> bool {
        self.texts()
            .find(|(_, t)| !t.trim().is_empty())
            .is_some_and(|(shift, t)| shift == Shift::Raised && t.trim().chars().count() <= 2)
    }

    /// How many bytes of text it has.
    pub fn size(&self) -> usize {
        self.texts().map(|(_, t)| t.len()).sum()
    }

    /// Its text without shifts and with single spaces, up to about `limit` bytes.
    pub fn start(&self, limit: usize) -> String {
        let mut out = String::new();
        for (_, text) in self.texts() {
            for c in text.chars() {
                if out.len() >= limit {
                    return out;
                }
                if !c.is_whitespace() {
                    out.push(c);
                } else if !out.is_empty() && !out.ends_with(' ') {
                    out.push(' ');
                }
            }
        }
        out.truncate(out.trim_end().len());
        out
    }

    /// Writes it into the open block. `page` is the page it starts on and is carried on; nothing
    /// if pages are not known.
    pub fn write(&self, b: &mut Builder, page: &mut Option<Page>) {
        for piece in &self.pieces {
            match piece {
                Piece::Page(asked) => {
                    if let Some(page) = page {
                        page.turn(*asked);
                        b.page(page.number);
                    }
                }
                Piece::Text(shift, text) => {
                    if let Some(page) = page
                        && !text.trim().is_empty()
                    {
                        page.fresh = false;
                    }
                    match shift {
                        Shift::Level => b.text(text),
                        // The builder raises what it is given as a whole; space around it is not raised.
                        shift => {
                            let bare = text.trim();
                            if text.starts_with(char::is_whitespace) {
                                b.text(" ");
                            }
                            if *shift == Shift::Raised {
                                b.superscript(bare);
                            } else {
                                b.subscript(bare);
                            }
                            if !bare.is_empty() && text.ends_with(char::is_whitespace) {
                                b.text(" ");
                            }
                        }
                    }
                }
            }
        }
    }
}

/// Lines one after another, with a space between.
pub fn joined(lines: impl Iterator<Item = Line>) -> Line {
    let mut all = Line::default();
    for line in lines {
        if !all.is_blank() && !line.is_blank() {
            all.gap();
        }
        all.append(line);
    }
    all
}

/// The page that is being read.
#[derive(Clone, Copy, Debug)]
pub struct Page {
    /// From 1.
    pub number: u32,
    /// Nothing has been read on it yet.
    fresh: bool,
}

impl Default for Page {
    fn default() -> Self {
        Page {
            number: 1,
            fresh: false,
        }
    }
}

impl Page {
    /// Goes on to the next page. Word records a page break that an author asked for a second time
    /// where it happened, before any text; that one is not counted again.
    pub fn turn(&mut self, asked: bool) {
        if asked || !self.fresh {
            self.number = self.number.saturating_add(1);
            self.fresh = true;
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::manuscript::Format;

    fn written(line: &Line) -> String {
        let mut b = Builder::new(Format::Docx);
        line.write(&mut b, &mut None);
        b.finish().text
    }

    #[test]
    fn raised_pieces_become_one_exponent() {
        let mut line = Line::default();
        line.level("p = 3.4 × 10");
        for piece in ["", "-", "5 "] {
            line.raised(piece);
        }
        line.level("and χ");
        line.raised("2");
        line.level("(1)");
        assert_eq!(written(&line), "p = 3.4 × 10⁻⁵ and χ²(1)\n");
        assert_eq!(line.start(100), "p = 3.4 × 10-5 and χ2(1)");
    }

    #[test]
    fn a_page_break_asked_for_is_counted_once() {
        let mut page = Page::default();
        page.turn(true);
        page.turn(false);
        assert_eq!(page.number, 2);
        page.fresh = false;
        page.turn(false);
        assert_eq!(page.number, 3);
    }

    #[test]
    fn capitals_count_as_strong() {
        let mut line = Line::default();
        line.level("METHODS 2");
        assert!(line.is_strong());
        line.level(" and more");
        assert!(!line.is_strong());
    }
}
