//! *Inline* Markdown: what may stand within a paragraph, heading or cell. Marks that are only
//! marks go; a `*`, `_`, `<`, `^`, `~` or `$` that is none of Markdown's business stays.

use super::links::brackets;
use super::tags::{Tag, tag};
use crate::manuscript::Builder;
use crate::readers::entities::entity;
use crate::readers::tex_math::{flat as flat_math, push_math};
use crate::readers::tex_symbols::symbol;
use std::collections::{HashMap, HashSet};

/// Stands for what only a computation could fill in.
const UNKNOWN: &str = "…";

/// Text of a block with the lines it comes from.
#[derive(Clone, Debug, Default)]
pub(super) struct Source {
    pub text: String,
    /// Line in the file of each line of `text`.
    pub lines: Vec<u32>,
}

impl Source {
    pub(super) fn one(text: &str, line: u32) -> Source {
        Source {
            text: text.to_string(),
            lines: vec![line],
        }
    }

    pub(super) fn push(&mut self, text: &str, line: u32) {
        if !self.lines.is_empty() {
            self.text.push('\n');
        }
        self.text.push_str(text);
        self.lines.push(line);
    }

    pub(super) fn is_empty(&self) -> bool {
        self.lines.is_empty()
    }

    pub(super) fn first_line(&self) -> u32 {
        self.lines.first().copied().unwrap_or(1)
    }
}

pub(super) enum Node<'a> {
    Text(usize, &'a str),
    Char(usize, char),
    Owned(usize, String),
    /// Emphasis marks of which `count` are left over.
    Marks {
        at: usize,
        mark: char,
        count: usize,
    },
    Raised(usize, String),
    Lowered(usize, String),
    Math(usize, &'a str),
    /// What follows is another block.
    Break(usize),
}

/// A note that the text calls for.
pub(super) enum Note {
    /// Written in place: `^[note]`.
    Here(Source),
    /// Defined elsewhere under this name: `[^name]`.
    Named(String),
}

/// Reads inline Markdown into the open block. Returns the notes, which belong behind the block.
pub(super) fn push(b: &mut Builder, source: &Source, references: &HashSet<String>) -> Vec<Note> {
    let mut scanner = Scanner::of(&source.text, references);
    scanner.scan();
    let newlines: Vec<usize> = memchr::memchr_iter(b'\n', source.text.as_bytes()).collect();
    let mut line = 0;
    for node in &scanner.nodes {
        let at = match node {
            Node::Text(at, _) | Node::Char(at, _) | Node::Owned(at, _) | Node::Raised(at, _) => *at,
            Node::Lowered(at, _) | Node::Math(at, _) | Node::Break(at) | Node::Marks { at, .. } => *at,
        };
        let before = line;
        while newlines.get(line).is_some_and(|n| *n < at) {
            line += 1;
        }
        if line > before
            && let Some(number) = source.lines.get(line)
        {
            b.line(*number);
        }
        match node {
            Node::Text(_, text) => b.text(text),
            Node::Char(_, c) => b.text(c.encode_utf8(&mut [0; 4])),
            Node::Owned(_, text) => b.text(text),
            Node::Marks { mark, count, .. } => {
                for _ in 0..*count {
                    b.text(mark.encode_utf8(&mut [0; 4]));
                }
            }
            Node::Raised(_, text) => b.superscript(text),
            Node::Lowered(_, text) => b.subscript(text),
            Node::Math(_, tex) => push_math(b, tex),
            Node::Break(_) => b.close(),
        }
    }
    let line_at = |at: usize| {
        let k = newlines.partition_point(|n| *n < at);
        source.lines.get(k).copied().unwrap_or(1)
    };
    let notes = scanner.notes.iter();
    notes
        .map(|(at, text)| match text.strip_prefix('^') {
            Some(name) => Note::Named(name.to_string()),
            None => Note::Here(Source::one(&text.replace('\n', " "), line_at(*at))),
        })
        .collect()
}

/// Inline Markdown as plain text, for what is raised or lowered.
fn flat(text: &str) -> String {
    let none = HashSet::new();
    let mut scanner = Scanner::of(text, &none);
    scanner.nested = true;
    scanner.scan();
    let mut out = String::new();
    for node in &scanner.nodes {
        match node {
            Node::Text(_, t) => out.push_str(t),
            Node::Char(_, c) => out.push(*c),
            Node::Owned(_, t) | Node::Raised(_, t) | Node::Lowered(_, t) => out.push_str(t),
            Node::Marks { mark, count, .. } => out.extend(std::iter::repeat_n(*mark, *count)),
            Node::Math(_, tex) => out.push_str(&flat_math(tex)),
            Node::Break(_) => {}
        }
    }
    out
}

struct Opener {
    node: usize,
    mark: char,
}

pub(super) struct Scanner<'a> {
    pub(super) text: &'a str,
    pub(super) nodes: Vec<Node<'a>>,
    openers: Vec<Opener>,
    /// Where to go on behind a bracket that closes a link.
    pub(super) behind: HashMap<usize, usize>,
    /// Partners of brackets.
    pub(super) brackets: HashMap<usize, usize>,
    pub(super) references: &'a HashSet<String>,
    /// Notes in place, and names of others with their `^`.
    pub(super) notes: Vec<(usize, &'a str)>,
    /// Things that do not come any more in this text.
    missing: HashSet<(u8, usize)>,
    /// The text is itself part of a raised or lowered piece, where none of these begins.
    nested: bool,
}

impl<'a> Scanner<'a> {
    fn of(text: &'a str, references: &'a HashSet<String>) -> Scanner<'a> {
        Scanner {
            text,
            nodes: Vec::new(),
            openers: Vec::new(),
            behind: HashMap::new(),
            brackets: brackets(text),
            references,
            notes: Vec::new(),
            missing: HashSet::new(),
            nested: false,
        }
    }

    fn scan(&mut self) {
        let bytes = self.text.as_bytes();
        let mut at = 0;
        while at < bytes.len() {
            let taken = match bytes[at] {
                b'\\' => self.escape(at),
                b'`' => self.code(at),
                b'$' => self.dollar(at),
                b'*' | b'_' => self.marks(at),
                b'^' => self.raised(at),
                b'~' => self.lowered(at),
                b'<' => self.angle(at),
                b'&' => self.entity(at),
                b'[' | b'!' => self.bracket(at),
                b']' => self.behind.get(&at).copied(),
                b'@' => self.citation(at),
                b'-' => self.dashes(at),
                b'{' => self.braces(at),
                b'\n' => {
                    // By itself, so that what follows is told to stand on the next line.
                    self.nodes.push(Node::Char(at, ' '));
                    Some(at + 1)
                }
                _ => {
                    let end = bytes[at..]
                        .iter()
                        .position(|b| b"\\`$*_^~<&[]!@-{\n".contains(b))
                        .map_or(bytes.len(), |n| at + n);
                    self.nodes.push(Node::Text(at, &self.text[at..end]));
                    Some(end)
                }
            };
            at = match taken {
                Some(end) => end,
                None => {
                    self.nodes.push(Node::Text(at, &self.text[at..at + 1]));
                    at + 1
                }
            };
        }
    }

    /// Looks for `needle`; what does not come any more is not looked for again.
    fn find(&mut self, needle: &str, at: usize) -> Option<usize> {
        let key = (needle.as_bytes().first().copied().unwrap_or(0), needle.len());
        if self.missing.contains(&key) {
            return None;
        }
        let found = memchr::memmem::find(&self.text.as_bytes()[at..], needle.as_bytes()).map(|n| at + n);
        if found.is_none() {
            self.missing.insert(key);
        }
        found
    }

    fn escape(&mut self, at: usize) -> Option<usize> {
        let rest = &self.text[at + 1..];
        let c = rest.chars().next()?;
        if c == '('
            && !self.nested
            && let Some(end) = self.find("\\)", at + 2)
        {
            self.nodes.push(Node::Math(at, &self.text[at + 2..end]));
            return Some(end + 2);
        }
        if let Some(inner) = rest.strip_prefix("@ref(") {
            let end = inner.find(')')?;
            self.nodes.push(Node::Char(at, '…'));
            return Some(at + 6 + end + 1);
        }
        if c.is_ascii_punctuation() {
            self.nodes.push(Node::Char(at, c));
            return Some(at + 2);
        }
        if c.is_whitespace() {
            self.nodes.push(Node::Char(at, ' '));
            return Some(at + 1 + c.len_utf8());
        }
        // A macro of LaTeX among the words.
        let letters = rest.bytes().take_while(u8::is_ascii_alphabetic).count();
        if letters < 2 {
            return None;
        }
        let name = &rest[..letters];
        let after = at + 1 + letters;
        if let Some(text) = symbol(name) {
            self.nodes.push(Node::Owned(at, text.to_string()));
            return Some(
                after
                    + if self.text[after..].starts_with("{}") {
                        2
                    } else {
                        0
                    },
            );
        }
        let inner = self.text[after..].strip_prefix('{');
        let close = inner.and_then(|i| i.find('}').filter(|n| *n < 2000));
        match name {
            "textit" | "emph" | "textbf" | "textsuperscript" | "textsubscript" | "mathrm" | "text" => {
                let inner = &inner?[..close?];
                let text = flat(inner);
                self.nodes.push(match name {
                    "textsuperscript" => Node::Raised(at, text),
                    "textsubscript" => Node::Lowered(at, text),
                    _ => Node::Owned(at, text),
                });
                Some(after + 1 + close? + 1)
            }
            "ref" | "autoref" | "cref" | "Cref" | "eqref" => {
                self.nodes.push(Node::Char(at, '…'));
                Some(after + close.map_or(0, |n| n + 2))
            }
            "cite" | "citep" | "citet" | "label" | "vspace" | "hspace" | "begin" | "end" | "setlength"
            | "pagestyle" => Some(after + close.map_or(0, |n| n + 2)),
            "newpage" | "pagebreak" | "clearpage" | "noindent" | "linebreak" | "newline" | "hfill"
            | "quad" | "centering" | "raggedright" | "small" | "footnotesize" | "normalsize"
            | "doublespacing" | "singlespacing" | "par" => {
                self.nodes.push(Node::Char(at, ' '));
                Some(after)
            }
            _ => None,
        }
    }

    /// Code, of R or any other language, is not part of the text.
    fn code(&mut self, at: usize) -> Option<usize> {
        let bytes = self.text.as_bytes();
        let run = bytes[at..].iter().take_while(|b| **b == b'`').count();
        if self.missing.contains(&(b'`', run)) {
            self.nodes.push(Node::Text(at, &self.text[at..at + run]));
            return Some(at + run);
        }
        let mut from = at + run;
        while let Some(n) = memchr::memchr(b'`', &bytes[from..]) {
            let start = from + n;
            let length = bytes[start..].iter().take_while(|b| **b == b'`').count();
            from = start + length;
            if length == run {
                self.nodes.push(Node::Char(at, '…'));
                return Some(self.skip_attributes(from));
            }
        }
        self.missing.insert((b'`', run));
        self.nodes.push(Node::Text(at, &self.text[at..at + run]));
        Some(at + run)
    }

    /// A formula: `$` with no space inside either mark and no digit behind the second.
    fn dollar(&mut self, at: usize) -> Option<usize> {
        let bytes = self.text.as_bytes();
        if bytes.get(at + 1) == Some(&b'$') {
            let end = self.find("$$", at + 2)?;
            self.nodes.push(Node::Char(at, ' '));
            self.nodes.push(Node::Math(at, &self.text[at + 2..end]));
            self.nodes.push(Node::Char(end, ' '));
            let rest = self.text[end + 2..].trim_start_matches(' ');
            let open = self.text.len() - rest.len();
            return Some(self.skip_attributes(open));
        }
        if bytes.get(at + 1).is_none_or(u8::is_ascii_whitespace) || self.missing.contains(&(b'$', 1)) {
            return None;
        }
        let mut i = at + 1;
        while let Some(n) = memchr::memchr2(b'$', b'\\', &bytes[i..]) {
            i += n;
            if bytes[i] == b'\\' {
                i += 2;
                if i >= bytes.len() {
                    break;
                }
                continue;
            }
            let closes =
                !bytes[i - 1].is_ascii_whitespace() && !bytes.get(i + 1).is_some_and(u8::is_ascii_digit);
            if closes {
                self.nodes.push(Node::Math(at, &self.text[at + 1..i]));
                return Some(i + 1);
            }
            i += 1;
        }
        self.missing.insert((b'$', 1));
        None
    }

    /// Emphasis marks, paired as CommonMark pairs them.
    fn marks(&mut self, at: usize) -> Option<usize> {
        let mark = char::from(self.text.as_bytes()[at]);
        let count = self.text.as_bytes()[at..]
            .iter()
            .take_while(|b| **b == mark as u8)
            .count();
        let before = self.text[..at].chars().next_back();
        let after = self.text[at + count..].chars().next();
        let space = |c: Option<char>| c.is_none_or(char::is_whitespace);
        let punctuation = |c: Option<char>| c.is_some_and(|c| !c.is_alphanumeric() && !c.is_whitespace());
        let left = !space(after) && (!punctuation(after) || space(before) || punctuation(before));
        let right = !space(before) && (!punctuation(before) || space(after) || punctuation(after));
        let (opens, closes) = match mark {
            '_' => (
                left && (!right || punctuation(before)),
                right && (!left || punctuation(after)),
            ),
            _ => (left, right),
        };
        let mut left_over = count;
        if closes {
            while left_over > 0 {
                let Some(k) = self.openers.iter().rposition(|o| o.mark == mark) else {
                    break;
                };
                let node = self.openers[k].node;
                let Node::Marks { count: open, .. } = &mut self.nodes[node] else {
                    break;
                };
                let used = left_over
                    .min(*open)
                    .min(if left_over >= 2 && *open >= 2 { 2 } else { 1 });
                *open -= used;
                left_over -= used;
                let exhausted = *open == 0;
                // Marks between the pair cannot pair any more.
                self.openers.truncate(if exhausted { k } else { k + 1 });
            }
        }
        if left_over > 0 {
            if opens {
                self.openers.push(Opener {
                    node: self.nodes.len(),
                    mark,
                });
            }
            self.nodes.push(Node::Marks {
                at,
                mark,
                count: left_over,
            });
        }
        Some(at + count)
    }

    /// `^2^`, or a note in place: `^[note]`.
    fn raised(&mut self, at: usize) -> Option<usize> {
        if self.text[at + 1..].starts_with('[') && !self.nested {
            let close = *self.brackets.get(&(at + 1))?;
            // A name begins with the mark that a note in place has outside its bracket.
            self.notes
                .push((at, self.text[at + 2..close].trim_start_matches('^')));
            return Some(close + 1);
        }
        let end = self.script_end(at, b'^')?;
        let text = flat(&self.text[at + 1..end]);
        self.nodes.push(Node::Raised(at, text));
        Some(end + 1)
    }

    /// `~p~`; `~~struck~~` keeps its text.
    fn lowered(&mut self, at: usize) -> Option<usize> {
        let run = self.text.as_bytes()[at..]
            .iter()
            .take_while(|b| **b == b'~')
            .count();
        if run == 2 {
            return Some(at + 2);
        }
        if run > 1 {
            self.nodes.push(Node::Text(at, &self.text[at..at + run]));
            return Some(at + run);
        }
        let end = self.script_end(at, b'~')?;
        let text = flat(&self.text[at + 1..end]);
        self.nodes.push(Node::Lowered(at, text));
        Some(end + 1)
    }

    /// The mark that closes a raised or lowered piece, which holds no bare space.
    fn script_end(&self, at: usize, mark: u8) -> Option<usize> {
        if self.nested {
            return None;
        }
        let bytes = self.text.as_bytes();
        let mut i = at + 1;
        while i < bytes.len() && i < at + 200 {
            match bytes[i] {
                b'\\' => i += 1,
                b if b == mark => return (i > at + 1).then_some(i),
                b if b.is_ascii_whitespace() => return None,
                _ => {}
            }
            i += 1;
        }
        None
    }

    fn angle(&mut self, at: usize) -> Option<usize> {
        let rest = &self.text[at..];
        if rest.starts_with("<!--") {
            return self.find("-->", at + 4).map(|end| end + 3);
        }
        let address = rest.starts_with("<http") || rest.starts_with("<mailto:") || rest.starts_with("<doi:");
        if address {
            let end = rest.find(|c: char| c == '>' || c.is_whitespace())?;
            return rest[end..].starts_with('>').then(|| {
                self.nodes.push(Node::Text(at, &rest[1..end]));
                at + end + 1
            });
        }
        let Tag { name, end, closing } = tag(rest)?;
        match name.as_str() {
            "sup" | "sub" if !closing => {
                let close = if name == "sup" { "</sup>" } else { "</sub>" };
                // Both needles begin and end alike; their own keys keep them apart.
                let from = at + end;
                let stop = memchr::memmem::find(
                    &self.text.as_bytes()[from..self.text.len().min(from + 400)],
                    close.as_bytes(),
                )
                .map(|n| from + n);
                let Some(stop) = stop else { return Some(from) };
                let text = flat(&self.text[from..stop]);
                self.nodes.push(if name == "sup" {
                    Node::Raised(at, text)
                } else {
                    Node::Lowered(at, text)
                });
                return Some(stop + close.len());
            }
            "style" | "script" if !closing => {
                let close = format!("</{name}");
                let stop = self.find(&close, at + end)?;
                return Some(
                    self.text[stop..]
                        .find('>')
                        .map_or(self.text.len(), |n| stop + n + 1),
                );
            }
            "br" | "hr" => self.nodes.push(Node::Char(at, ' ')),
            "p" | "div" | "tr" | "td" | "th" | "li" | "table" | "ul" | "ol" | "h1" | "h2" | "h3" | "h4"
            | "caption" | "figcaption" | "figure" | "blockquote" | "details" | "summary" | "section"
            | "center" | "dl" | "dt" | "dd" => {
                self.nodes.push(Node::Break(at));
            }
            _ => {}
        }
        Some(at + end)
    }

    fn entity(&mut self, at: usize) -> Option<usize> {
        let (text, length) = entity(&self.text[at..])?;
        self.nodes.push(Node::Owned(at, text));
        Some(at + length)
    }

    fn dashes(&mut self, at: usize) -> Option<usize> {
        let run = self.text.as_bytes()[at..]
            .iter()
            .take_while(|b| **b == b'-')
            .count();
        match run {
            2 => self.nodes.push(Node::Char(at, '–')),
            3 => self.nodes.push(Node::Char(at, '—')),
            _ => self.nodes.push(Node::Text(at, &self.text[at..at + run])),
        }
        Some(at + run)
    }

    /// `{{< shortcode >}}`
    fn braces(&mut self, at: usize) -> Option<usize> {
        if self.text[at..].starts_with("{{<") {
            return self.find(">}}", at + 3).map(|end| {
                self.nodes.push(Node::Owned(at, UNKNOWN.to_string()));
                end + 3
            });
        }
        None
    }
}
