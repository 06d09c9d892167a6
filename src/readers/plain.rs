//! *Plain text* has no marks: what is a heading, a paragraph, a list or a table is told by blank
//! lines, indentation and the look of the lines, as a person would tell it.

mod lines;

use super::Unreadable;
use super::headings::{self, Parts};
use crate::manuscript::{BlockKind, Builder, Format, Manuscript};
use lines::{Line, Lines};

/// A paragraph longer than this is closed at the next line end: no writing has such paragraphs,
/// and memory stays bounded.
const LONGEST_PARAGRAPH: usize = 1 << 20;

/// Reads a text file.
///
/// # Errors
/// None at present; the signature is that of all readers.
pub fn read(source: &str) -> Result<Manuscript, Unreadable> {
    let mut reader = Reader {
        b: Builder::new(Format::Text),
        parts: Parts::new(),
        last_item: None,
        bullet: None,
        in_table: false,
    };
    let mut chunk: Vec<Line> = Vec::new();
    let mut lines = Lines::of(source);
    // Whether the chunk was ended by the end of a page rather than by a blank line alone.
    let mut turned = false;
    while let Some(line) = lines.next_line() {
        if line.text.is_empty() {
            if !chunk.is_empty() && !line.page_end {
                if !turned {
                    reader.chunk(&chunk);
                    chunk.clear();
                }
            } else if line.page_end && !chunk.is_empty() {
                turned = true;
            }
            continue;
        }
        if turned {
            turned = false;
            if !goes_on(&chunk, &line) {
                reader.chunk(&chunk);
                chunk.clear();
            }
        }
        chunk.push(line);
    }
    reader.chunk(&chunk);
    Ok(reader.b.finish())
}

/// Whether a sentence goes on over the end of a page.
fn goes_on(chunk: &[Line], next: &Line) -> bool {
    chunk.last().is_some_and(|last| !ends_sentence(last.text))
        && chunk.len() > 1
        && next
            .text
            .starts_with(|c: char| !c.is_uppercase() && !c.is_whitespace() && c != '•')
}

struct Reader {
    b: Builder,
    parts: Parts,
    /// The number of the list item before, for lists that go on in the next chunk.
    last_item: Option<u32>,
    /// Bullet and indentation of the list item before, within a chunk.
    bullet: Option<(char, usize)>,
    /// The block before was a row of a table or its caption.
    in_table: bool,
}

impl Reader {
    /// Lines without a blank line between them.
    fn chunk(&mut self, lines: &[Line]) {
        let mut rest = lines;
        while let Some(first) = rest.first() {
            if is_rule(first.text) {
                rest = &rest[1..];
                continue;
            }
            if let Some(level) = rest.get(1).and_then(|second| underline(first.text, second.text)) {
                self.heading(level, first);
                rest = &rest[2..];
                continue;
            }
            let alone = lines.len() == 1;
            if let Some(level) = heading_level(first.text, alone, self.parts.current()) {
                self.heading(level, first);
                rest = &rest[1..];
                continue;
            }
            break;
        }
        if rest.is_empty() {
            return;
        }
        if is_table(rest) {
            for line in rest {
                if !is_rule(line.text) {
                    self.start(BlockKind::Paragraph, line);
                    self.long(line.text, line);
                    self.b.close();
                }
            }
            self.in_table = true;
            return;
        }
        self.running(rest);
    }

    fn heading(&mut self, level: u8, line: &Line) {
        let title = line.text.trim_matches(|c: char| c == '*' || c.is_whitespace());
        self.b.close();
        self.at(line);
        self.b.part(self.parts.heading(level, title));
        self.b.heading(level, title);
        self.last_item = None;
        self.in_table = false;
    }

    fn at(&mut self, line: &Line) {
        if let Some(page) = line.page {
            self.b.page(page);
        }
        self.b.line(line.number);
    }

    /// Opens a block that begins with this line.
    fn start(&mut self, kind: BlockKind, line: &Line) {
        self.b.close();
        self.at(line);
        if kind == BlockKind::Caption && self.parts.current() == crate::manuscript::Part::References {
            // Manuscripts carry their tables and figures behind the references.
            self.parts.enter(crate::manuscript::Part::Body);
        }
        let part = self.parts.paragraph(line.text);
        self.b.part(part);
        self.b.open(kind);
    }

    /// Paragraphs and list items.
    fn running(&mut self, lines: &[Line]) {
        let widest = lines.iter().map(|l| l.text.len()).max().unwrap_or(0);
        let mut length = 0;
        self.bullet = None;
        for (i, line) in lines.iter().enumerate() {
            let before = i.checked_sub(1).map(|k| &lines[k]);
            let item = self.item(line, before);
            let begins = match before {
                None => true,
                Some(before) => item.is_some() || ends_paragraph(before, line, widest),
            };
            if let Some(before) = before
                && ends_sentence(before.text)
                && let Some(level) = heading_level(line.text, false, self.parts.current())
            {
                self.heading(level, line);
                length = usize::MAX;
                continue;
            }
            if begins || length > LONGEST_PARAGRAPH {
                let kind = match item {
                    Some(_) => BlockKind::ListItem,
                    None => self.kind(line.text),
                };
                self.start(kind, line);
                self.in_table = kind == BlockKind::Caption || (self.in_table && kind == BlockKind::TableNote);
                length = 0;
            } else {
                self.b.line_break();
                self.at(line);
            }
            let text = match item {
                Some(skip) if begins => &line.text[skip..],
                _ => line.text,
            };
            length += text.len();
            self.long(text, line);
        }
        self.b.close();
    }

    /// Text of a line, cut where a line is longer than any paragraph.
    fn long(&mut self, text: &str, line: &Line) {
        let mut rest = text;
        while rest.len() > LONGEST_PARAGRAPH {
            let end = rest.floor_char_boundary(LONGEST_PARAGRAPH);
            let cut = rest[..end].rfind(". ").map_or(end, |at| at + 1);
            self.b.text(&rest[..cut]);
            self.start(BlockKind::Paragraph, line);
            rest = &rest[cut..];
        }
        self.b.text(rest);
    }

    fn kind(&self, text: &str) -> BlockKind {
        if is_caption(text) {
            BlockKind::Caption
        } else if text.starts_with("Note.")
            || text.starts_with("Notes.")
            || (self.in_table && text.starts_with("Note"))
        {
            BlockKind::TableNote
        } else {
            BlockKind::Paragraph
        }
    }

    /// Whether the line begins a list item, and how many bytes of it are the bullet. Numbers stay.
    fn item(&mut self, line: &Line, before: Option<&Line>) -> Option<usize> {
        let text = line.text;
        let first = text.chars().next()?;
        let after_sentence =
            before.is_none_or(|b| ends_sentence(b.text) || b.text.ends_with([':', ';', ',']));
        if matches!(first, '-' | '*' | '•' | '‣' | '◦' | '▪' | '–' | '·') {
            let rest = &text[first.len_utf8()..];
            let words = rest.trim_start();
            let bullet = rest.len() > words.len() && words.starts_with(char::is_alphabetic);
            let follows = after_sentence || first == '•' || self.bullet == Some((first, line.indent));
            return (bullet && follows).then(|| {
                self.bullet = Some((first, line.indent));
                text.len() - words.len()
            });
        }
        let digits = text
            .bytes()
            .skip_while(|b| *b == b'(')
            .take_while(u8::is_ascii_digit)
            .count();
        let open = usize::from(first == '(');
        if digits == 0 || digits > 2 {
            return None;
        }
        let rest = &text[open + digits..];
        let words = rest.strip_prefix([')', '.'])?.strip_prefix([' ', '\t'])?;
        let number: u32 = text[open..open + digits].parse().ok()?;
        let follows = match (before, self.last_item) {
            (None, _) => true,
            (Some(_), Some(last)) => number == last + 1,
            (Some(_), None) => number == 1 && after_sentence,
        };
        (follows
            && words
                .trim_start()
                .starts_with(|c: char| c.is_alphabetic() || matches!(c, '"' | '“')))
        .then(|| {
            self.last_item = Some(number);
            0
        })
    }
}

/// Whether a paragraph ends between two lines that no blank line separates.
fn ends_paragraph(line: &Line, next: &Line, widest: usize) -> bool {
    if line.text.len() > 200 {
        // Not broken into lines at all: every line is a paragraph.
        return true;
    }
    if line.text.contains('\t') || next.text.contains('\t') {
        return true;
    }
    ends_sentence(line.text) && (next.indent >= line.indent + 2 || line.text.len() * 10 < widest * 6)
}

/// Whether the line ends with a sentence.
fn ends_sentence(text: &str) -> bool {
    text.trim_end_matches([')', ']', '"', '\'', '”', '’', '*'])
        .ends_with(['.', '!', '?', ':'])
}

/// A line of nothing but rules.
fn is_rule(text: &str) -> bool {
    let mut chars = text.chars().filter(|c| !c.is_whitespace());
    let Some(first) = chars.next() else { return false };
    matches!(first, '-' | '=' | '_' | '*' | '~' | '─' | '═' | '—' | '+' | '#')
        && text.len() >= 3
        && chars.all(|c| c == first || (matches!(c, '-' | '+' | '=') && matches!(first, '-' | '+' | '=')))
}

/// The level of a title that the next line underlines.
fn underline(title: &str, below: &str) -> Option<u8> {
    let level = match below.as_bytes().first()? {
        b'=' => 1,
        b'-' | b'~' => 2,
        _ => return None,
    };
    let first = below.as_bytes()[0];
    let full = below.len() >= 3 && below.bytes().all(|b| b == first);
    let fits = below.len() * 2 >= title.chars().count() && title.chars().count() <= 150;
    (full && fits && !is_columns(title)).then_some(level)
}

/// The level of a line that is a heading by its look; `alone` says that blank lines surround it.
fn heading_level(text: &str, alone: bool, part: crate::manuscript::Part) -> Option<u8> {
    let length = text.chars().count();
    if length > 110 || text.contains(['=', '<', '>', '≤', '≥', '±', '\t']) || is_columns(text) {
        return None;
    }
    let mut letters = text.chars().filter(|c| c.is_alphabetic());
    let first = letters.next()?;
    if !first.is_uppercase() || (text.ends_with(['.', ',', ';', '?', '!']) && headings::known(text).is_none())
    {
        return None;
    }
    if let Some(known) = headings::known(text)
        && (alone || (known.level == 1 && !text.ends_with('.')))
    {
        return Some(known.level);
    }
    if !alone || part == crate::manuscript::Part::References || is_caption(text) {
        return None;
    }
    if let Some(depth) = section_number(text) {
        return Some(depth);
    }
    if !text.starts_with(char::is_alphabetic) || text.ends_with(':') {
        return None;
    }
    let capitals = letters.clone().count() >= 2 && letters.all(char::is_uppercase);
    let words: Vec<&str> = text.split_whitespace().collect();
    let long_words: Vec<&&str> = words.iter().filter(|w| w.chars().count() > 3).collect();
    let capitalised = long_words
        .iter()
        .filter(|w| w.starts_with(char::is_uppercase))
        .count();
    let titled = length <= 80 && (capitalised * 3 >= long_words.len() * 2 || words.len() <= 6);
    // A line with many digits is a date, an address or data.
    let digits = text.bytes().filter(u8::is_ascii_digit).count();
    ((capitals || titled) && digits <= 4 && !text.contains('@')).then_some(2)
}

/// The depth of a numbered heading: `2. Method` is 1, `2.1 Participants` is 2.
fn section_number(text: &str) -> Option<u8> {
    let (number, title) = text.split_once([' ', '\t'])?;
    let bare = number.trim_end_matches('.');
    let parts: Vec<&str> = bare.split('.').collect();
    let numbered = parts.len() <= 5
        && parts
            .iter()
            .all(|p| !p.is_empty() && p.len() <= 2 && p.bytes().all(|b| b.is_ascii_digit()));
    let title = title.trim_start();
    (numbered && title.starts_with(char::is_uppercase) && !title.ends_with(':')).then_some(parts.len() as u8)
}

/// `Table 2`, `Figure 3. Yield by plot`.
fn is_caption(text: &str) -> bool {
    const WORDS: &[&str] = &[
        "Table",
        "TABLE",
        "Figure",
        "FIGURE",
        "Fig.",
        "Tabelle",
        "Abbildung",
        "Abb.",
        "Tabla",
        "Figura",
        "Tableau",
        "Tabela",
        "Tabella",
        "Tabel",
        "Supplementary Table",
        "Supplementary Figure",
    ];
    WORDS.iter().any(|word| {
        text.strip_prefix(word).is_some_and(|rest| {
            let number = rest.trim_start();
            let end = number
                .find(|c: char| !(c.is_ascii_alphanumeric() || matches!(c, '-' | '.')))
                .unwrap_or(number.len());
            let label = number[..end].trim_end_matches('.');
            rest.len() > number.len()
                && label.len() <= 5
                && label.contains(|c: char| c.is_ascii_digit())
                && (number[label.len()..].trim_start().is_empty()
                    || number[label.len()..].starts_with(['.', ':', '|']))
        })
    })
}

/// Whether the line is cut into columns by tabs or wide gaps.
fn is_columns(text: &str) -> bool {
    text.contains('\t') || text.contains("   ")
}

/// Lines in columns, of which some hold numbers.
fn is_table(lines: &[Line]) -> bool {
    let mut wide = 0;
    let mut numbers = 0;
    for line in lines {
        let columns = || {
            line.text
                .split('\t')
                .flat_map(|s| s.split("  "))
                .map(str::trim)
                .filter(|s| !s.is_empty())
        };
        if is_columns(line.text) || line.text.contains("  ") {
            wide += usize::from(columns().count() > 1);
            numbers += usize::from(columns().skip(1).any(|cell| {
                cell.trim_start_matches(['-', '−', '–', '<', '(', '[', '.', ' '])
                    .starts_with(|c: char| c.is_ascii_digit())
            }));
        }
    }
    lines.len() >= 2 && wide * 2 >= lines.len() && numbers * 5 >= lines.len() * 2
        || lines.len() == 1 && wide == 1 && numbers == 1
}

#[cfg(test)]
mod tests;
