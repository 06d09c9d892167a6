//! MathML (presentation markup) as a line of text: `χ²(1) = 4.10`, `(a+b)/2`, `√n`.
//!
//! The readers of JATS and HTML hand over the elements and texts of a formula as they meet them;
//! [`Math`] keeps what is needed to write the formula on one line and gives it to the
//! [`Builder`] at the end. Annotations, such as the TeX source of a formula, are left out: the
//! formula is read once.

use crate::manuscript::Builder;

/// Elements nested deeper than this are read as if they were not nested.
const DEEPEST: usize = 500;

/// Stands where a bracket will be needed if what follows turns out to be compound.
const PERHAPS_BRACKET: char = '\u{1}';

#[derive(Clone, Copy, PartialEq, Eq)]
enum Shift {
    Line,
    Raised,
    Lowered,
}

#[derive(Clone, Copy, PartialEq, Eq)]
enum Kind {
    /// Children follow one another.
    Row,
    Identifier,
    Number,
    Operator,
    Words,
    Sup,
    Sub,
    SubSup,
    /// Scripts in turn lowered and raised.
    Multi,
    Fraction,
    SquareRoot,
    Root,
    Over,
    Under,
    UnderOver,
    Fenced,
    Table,
    TableRow,
    /// Only the first child is read.
    FirstOnly,
    Hidden,
}

struct Frame {
    kind: Kind,
    /// The shift outside this element.
    outside: Shift,
    children: usize,
    /// Where in the text the element and its last child begin.
    start: usize,
    child: usize,
    /// Closing bracket and separators of `mfenced`.
    close: String,
    separators: String,
}

/// A formula being read.
pub struct Math {
    text: String,
    /// From each offset on, the text has this shift.
    runs: Vec<(usize, Shift)>,
    shift: Shift,
    frames: Vec<Frame>,
    /// Where the text ended after a word of several letters.
    word_end: Option<usize>,
    /// Number of open elements that are left out or lie too deep.
    ignored: usize,
}

impl Default for Math {
    fn default() -> Self {
        Math::new()
    }
}

impl Math {
    pub fn new() -> Math {
        Math {
            text: String::new(),
            runs: Vec::new(),
            shift: Shift::Line,
            frames: Vec::new(),
            word_end: None,
            ignored: 0,
        }
    }

    /// An element inside `math` begins. `name` is its local name, `attribute` finds its attributes.
    pub fn start(&mut self, name: &str, attribute: impl Fn(&str) -> Option<String>) {
        if self.ignored > 0 || self.frames.len() >= DEEPEST {
            self.ignored += 1;
            return;
        }
        let kind = kind_of(name);
        let outside = self.shift;
        self.next_child();
        let second_reading =
            (self.frames.last()).is_some_and(|f| f.kind == Kind::FirstOnly && self.text.len() > f.start);
        if kind == Kind::Hidden || second_reading {
            self.ignored = 1;
            self.shift(outside);
            return;
        }
        if name == "mprescripts"
            && let Some(parent) = self.frames.last_mut()
        {
            // Scripts in front of the base: lowered and raised again in turn.
            parent.children = 1;
        }
        let mut frame = Frame {
            kind,
            outside,
            children: 0,
            start: self.text.len(),
            child: self.text.len(),
            close: String::new(),
            separators: String::new(),
        };
        match name {
            "mfenced" => {
                self.text
                    .push_str(&attribute("open").unwrap_or_else(|| "(".into()));
                frame.close = attribute("close").unwrap_or_else(|| ")".into());
                frame.separators = attribute("separators").unwrap_or_else(|| ",".into());
                frame.separators.retain(|c| !c.is_whitespace());
            }
            "mspace" => {
                let wide = attribute("width").is_some_and(|w| !w.starts_with(['0', '-']))
                    || attribute("linebreak").is_some_and(|l| l.contains("newline"));
                if wide {
                    self.text.push(' ');
                }
            }
            "msqrt" => {
                self.text.push('√');
                frame.child = self.text.len();
                self.text.push(PERHAPS_BRACKET);
            }
            _ => {}
        }
        self.frames.push(frame);
    }

    /// The innermost element ends.
    pub fn end(&mut self) {
        if self.ignored > 0 {
            self.ignored -= 1;
            // An element that was left out has no frame, one inside it neither.
            return;
        }
        let Some(frame) = self.frames.pop() else { return };
        match frame.kind {
            Kind::Fraction | Kind::SquareRoot => self.bracket(frame.child),
            Kind::Root if frame.children > 1 => self.text.push(')'),
            Kind::Fenced => self.text.push_str(&frame.close),
            Kind::Under if frame.children > 1 => self.end_limit(frame.start, frame.child, '_'),
            Kind::Over | Kind::UnderOver if frame.children > 1 => {
                self.end_limit(frame.start, frame.child, '^')
            }
            _ => {}
        }
        self.shift(frame.outside);
    }

    /// Text inside the innermost element.
    pub fn text(&mut self, raw: &str) {
        if self.ignored > 0 {
            return;
        }
        let kind = self.frames.last().map_or(Kind::Row, |f| f.kind);
        match kind {
            Kind::Operator => {
                let sign = raw.trim();
                if is_relation(sign) {
                    self.text.push(' ');
                    self.text.push_str(sign);
                    self.text.push(' ');
                } else {
                    self.text.push_str(sign);
                }
            }
            Kind::Number => self.text.push_str(raw.trim()),
            Kind::Identifier => self.word(raw.trim()),
            Kind::Words => self.word(raw),
            _ if raw.trim().is_empty() => {}
            _ => self.word(raw),
        }
    }

    /// Nothing readable has been found so far.
    pub fn is_blank(&self) -> bool {
        self.text
            .chars()
            .all(|c| c.is_whitespace() || c == PERHAPS_BRACKET)
    }

    /// Writes the formula.
    pub fn finish(mut self, b: &mut Builder) {
        while !self.frames.is_empty() || self.ignored > 0 {
            self.end();
        }
        self.runs.push((self.text.len(), Shift::Line));
        let mut from = 0;
        let mut shift = Shift::Line;
        for &(to, next) in &self.runs {
            if to > from {
                write(b, &self.text[from..to], shift);
            }
            from = to;
            shift = next;
        }
    }

    fn shift(&mut self, shift: Shift) {
        if shift == self.shift {
            return;
        }
        self.shift = shift;
        match self.runs.last_mut() {
            Some(last) if last.0 == self.text.len() => last.1 = shift,
            _ => self.runs.push((self.text.len(), shift)),
        }
    }

    /// What stands between the children of the innermost element.
    fn next_child(&mut self) {
        let Some(frame) = self.frames.last_mut() else {
            return;
        };
        let index = frame.children;
        frame.children += 1;
        let kind = frame.kind;
        let previous = frame.child;
        let start = frame.start;
        // Within a power, scripts are part of the power: it must not fall into pieces.
        let power = self.shift == Shift::Raised && index > 0;
        match kind {
            Kind::Sup | Kind::Sub | Kind::SubSup | Kind::Multi if power => {}
            Kind::Sup if index == 1 => self.shift(Shift::Raised),
            Kind::Sub if index == 1 => self.shift(Shift::Lowered),
            Kind::SubSup if index == 1 => self.shift(Shift::Lowered),
            Kind::SubSup if index == 2 => self.shift(Shift::Raised),
            Kind::Multi if index > 0 => self.shift(if index % 2 == 1 {
                Shift::Lowered
            } else {
                Shift::Raised
            }),
            Kind::Fraction | Kind::Root => {
                if index == 1 {
                    self.bracket(previous);
                    self.text.push_str(if kind == Kind::Root { "^(1/" } else { "/" });
                }
                if index == 0 || (index == 1 && kind == Kind::Fraction) {
                    self.child_begins();
                    self.text.push(PERHAPS_BRACKET);
                }
                return;
            }
            Kind::UnderOver if index == 2 => self.end_limit(start, previous, '_'),
            // The mark for a bracket under the root was set when the root began.
            Kind::SquareRoot => return,
            Kind::Fenced if index > 0 => {
                let separators = &self.frames[self.frames.len() - 1].separators;
                // The last separator serves for all further children.
                let sign = separators.chars().nth(index - 1).or(separators.chars().last());
                if let Some(sign) = sign {
                    self.text.push(sign);
                    self.text.push(' ');
                }
            }
            Kind::Table if index > 0 => self.text.push_str("; "),
            Kind::TableRow if index > 0 => self.text.push(' '),
            _ => {}
        }
        self.child_begins();
    }

    fn child_begins(&mut self) {
        let at = self.text.len();
        if let Some(frame) = self.frames.last_mut() {
            frame.child = at;
        }
    }

    /// Puts what was written since `at`, where a mark stands, in brackets if it is compound.
    fn bracket(&mut self, at: usize) {
        let Some(inside) = self.text.get(at + 1..) else {
            return;
        };
        // Anything this long is compound, and need not be gone through at every level around it.
        let short = inside.len() < 200;
        let simple = short
            && inside.chars().all(|c| {
                c.is_alphanumeric() || matches!(c, '.' | PERHAPS_BRACKET | '\u{300}'..='\u{36f}' | '|')
            });
        let wrapped =
            short && inside.starts_with('(') && inside.ends_with(')') && inside.matches('(').count() == 1;
        if !simple && !wrapped && self.text[at..].starts_with(PERHAPS_BRACKET) {
            self.text.replace_range(at..at + 1, "(");
            self.text.push(')');
        }
    }

    /// What stands above or below a letter or sign: an accent joins the letter, a limit is put in
    /// brackets behind it.
    fn end_limit(&mut self, start: usize, at: usize, mark: char) {
        let limit = self.text[at..].trim().to_string();
        let accent = match limit.as_str() {
            "¯" | "‾" | "ˉ" | "-" | "−" | "―" | "–" | "\u{305}" | "\u{304}" => Some('\u{304}'),
            "^" | "ˆ" | "\u{302}" => Some('\u{302}'),
            "~" | "˜" | "∼" | "\u{303}" => Some('\u{303}'),
            "˙" | "." | "\u{307}" => Some('\u{307}'),
            "¨" | "\u{308}" => Some('\u{308}'),
            _ => None,
        };
        let drawn = matches!(
            limit.as_str(),
            "" | "_" | "⏞" | "⏟" | "︷" | "︸" | "→" | "⃗" | "⇀" | "⏜" | "\u{332}"
        );
        self.cut(at);
        match accent {
            Some(accent) if at > start && self.text.ends_with(char::is_alphabetic) => {
                let letter = self.text.pop().unwrap_or_default();
                match unicode_normalization::char::compose(letter, accent) {
                    Some(one) => self.text.push(one),
                    None => self.text.extend([letter, accent]),
                }
                // The text before the limit may have become longer.
                for run in self.runs.iter_mut().rev().take_while(|r| r.0 >= at) {
                    run.0 = self.text.len();
                }
            }
            None if !drawn => {
                self.text.push(mark);
                self.text.push('(');
                self.text.push_str(&limit);
                self.text.push(')');
            }
            _ => {}
        }
    }

    /// Takes back everything from `at` on.
    fn cut(&mut self, at: usize) {
        self.text.truncate(at);
        let shift = self.shift;
        self.runs.retain(|r| r.0 < at);
        self.shift = self.runs.last().map_or(Shift::Line, |r| r.1);
        self.shift(shift);
    }

    /// Writes a name or words, kept apart from a word or comma before it: `log x`, `, p`.
    fn word(&mut self, next: &str) {
        let letters = next.chars().filter(|c| c.is_alphabetic()).take(2).count();
        let new_run = self.runs.last().is_some_and(|r| r.0 == self.text.len());
        let apart = match self.text.chars().next_back() {
            Some(',' | ';') => true,
            Some(c) if c.is_alphabetic() && next.starts_with(char::is_alphabetic) => {
                letters > 1 || self.word_end == Some(self.text.len())
            }
            _ => false,
        };
        if apart && !new_run {
            self.text.push(' ');
        }
        self.text.push_str(next);
        if letters > 1 {
            self.word_end = Some(self.text.len());
        }
    }
}

fn kind_of(name: &str) -> Kind {
    match name {
        "mi" => Kind::Identifier,
        "mn" => Kind::Number,
        "mo" => Kind::Operator,
        "mtext" | "ms" => Kind::Words,
        "msup" => Kind::Sup,
        "msub" => Kind::Sub,
        "msubsup" => Kind::SubSup,
        "mmultiscripts" => Kind::Multi,
        "mfrac" => Kind::Fraction,
        "msqrt" => Kind::SquareRoot,
        "mroot" => Kind::Root,
        "mover" => Kind::Over,
        "munder" => Kind::Under,
        "munderover" => Kind::UnderOver,
        "mfenced" => Kind::Fenced,
        "mtable" => Kind::Table,
        "mtr" | "mlabeledtr" => Kind::TableRow,
        "semantics" | "maction" => Kind::FirstOnly,
        "annotation" | "annotation-xml" | "mphantom" => Kind::Hidden,
        _ => Kind::Row,
    }
}

fn is_relation(sign: &str) -> bool {
    matches!(
        sign,
        "=" | "<"
            | ">"
            | "≤"
            | "≥"
            | "⩽"
            | "⩾"
            | "≦"
            | "≧"
            | "≈"
            | "≅"
            | "≃"
            | "≠"
            | "∼"
            | "~"
            | "≪"
            | "≫"
            | "∈"
            | "→"
            | "⇒"
            | "≡"
            | "∝"
            | "<="
            | ">="
            | "<<"
    )
}

/// Writes one run. A power or index that has no raised or lowered form of its own, and would
/// otherwise run into the number or letter before it, is marked with `^` or `_`.
fn write(b: &mut Builder, run: &str, shift: Shift) {
    let marked;
    let run = if run.contains(PERHAPS_BRACKET) {
        marked = run.replace(PERHAPS_BRACKET, "");
        marked.as_str()
    } else {
        run
    };
    match shift {
        Shift::Line => b.text(run),
        Shift::Raised => {
            let bare = run.trim();
            let letters = bare.chars().filter(|c| c.is_alphanumeric()).count();
            let raisable = bare
                .chars()
                .all(|c| c.is_ascii_digit() || matches!(c, '+' | '-' | '−' | '–' | '(' | ')' | ',' | ' '))
                || (bare.len() == 1 && bare.bytes().all(|c| (b'a'..=b'h').contains(&c)));
            if letters == 0 || raisable {
                b.superscript(bare);
            } else if bare.chars().count() == 1
                || (bare.starts_with('(') && bare.find(')') == Some(bare.len() - 1))
            {
                b.text("^");
                b.text(bare);
            } else {
                b.text("^(");
                b.text(bare);
                b.text(")");
            }
        }
        Shift::Lowered => {
            let bare = run.trim();
            if bare.contains(['=', '<', '>', '≤', '≥', '≠', '∈', '→']) {
                b.text("_(");
                b.text(bare);
                b.text(")");
            } else {
                b.subscript(bare);
            }
        }
    }
}

#[cfg(test)]
mod tests;
