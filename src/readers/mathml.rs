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
            Kind::Under if frame.children > 1 => self.end_limit(frame.child, '_'),
            Kind::Over | Kind::UnderOver if frame.children > 1 => self.end_limit(frame.child, '^'),
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
            Kind::UnderOver if index == 2 => self.end_limit(previous, '_'),
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
        let simple = inside
            .chars()
            .all(|c| c.is_alphanumeric() || matches!(c, '.' | PERHAPS_BRACKET | '\u{300}'..='\u{36f}' | '|'));
        let wrapped = inside.starts_with('(') && inside.ends_with(')') && inside.matches('(').count() == 1;
        if !simple && !wrapped && self.text[at..].starts_with(PERHAPS_BRACKET) {
            self.text.replace_range(at..at + 1, "(");
            self.text.push(')');
        }
    }

    /// What stands above or below a letter or sign: an accent joins the letter, a limit is put in
    /// brackets behind it.
    fn end_limit(&mut self, at: usize, mark: char) {
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
            Some(accent) if self.text.ends_with(char::is_alphabetic) => self.text.push(accent),
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
            } else if bare.chars().count() == 1 {
                b.text("^");
                b.text(bare);
            } else if bare.starts_with('(') && bare.find(')') == Some(bare.len() - 1) {
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
mod tests {
    use super::*;
    use crate::manuscript::Format;
    use quick_xml::events::Event;

    fn line(source: &str) -> String {
        let mut b = Builder::new(Format::Html);
        let mut math = Math::new();
        let mut reader = quick_xml::Reader::from_str(source);
        let attribute = |e: &quick_xml::events::BytesStart, name: &str| {
            let found = e.try_get_attribute(name).expect("the test writes good XML")?;
            Some(found.value.to_string())
        };
        loop {
            match reader.read_event().expect("the test writes good XML") {
                Event::Start(e) => math.start(e.local_name().as_ref(), |n| attribute(&e, n)),
                Event::Empty(e) => {
                    math.start(e.local_name().as_ref(), |n| attribute(&e, n));
                    math.end();
                }
                Event::End(_) => math.end(),
                Event::Text(t) => math.text(&t),
                Event::Eof => break,
                _ => {}
            }
        }
        math.finish(&mut b);
        b.finish().text.trim_end().to_string()
    }

    #[test]
    fn statistics_come_out_as_people_type_them() {
        assert_eq!(
            line(
                "<mrow><msup><mi>χ</mi><mn>2</mn></msup><mo>(</mo><mn>1</mn><mo>)</mo><mo>=</mo><mn>4.10</mn>\
                 <mo>,</mo><mi>p</mi><mo>=</mo><mo>−</mo><mn>.03</mn></mrow>"
            ),
            "χ²(1) = 4.10, p = -.03"
        );
        assert_eq!(
            line(
                "<msub><mi>F</mi><mrow><mn>1</mn><mo>,</mo><mn>63</mn></mrow></msub><mo>=</mo><mn>7.25</mn>"
            ),
            "F₁,₆₃ = 7.25"
        );
        assert_eq!(
            line("<msubsup><mi>η</mi><mi>p</mi><mn>2</mn></msubsup><mo>=</mo><mn>.07</mn>"),
            "ηp² = .07"
        );
        assert_eq!(
            line(
                "<mi>P</mi><mo>=</mo><mn>3.4</mn><mo>×</mo><msup><mn>10</mn><mrow><mo>−</mo><mn>6</mn></mrow></msup>"
            ),
            "P = 3.4×10⁻⁶"
        );
        assert_eq!(line("<mn>0.45</mn><msup><mi/><mo>***</mo></msup>"), "0.45***");
    }

    #[test]
    fn fractions_and_roots_get_brackets_where_they_need_them() {
        assert_eq!(line("<mfrac><mn>12</mn><mn>34</mn></mfrac>"), "12/34");
        assert_eq!(
            line("<mfrac><mrow><mi>a</mi><mo>+</mo><mi>b</mi></mrow><msqrt><mi>n</mi></msqrt></mfrac>"),
            "(a+b)/(√n)"
        );
        assert_eq!(line("<msqrt><mi>n</mi><mo>−</mo><mn>1</mn></msqrt>"), "√(n-1)");
        assert_eq!(line("<mroot><mi>x</mi><mn>3</mn></mroot>"), "x^(1/3)");
        assert_eq!(
            line("<msup><mi>x</mi><mfrac><mn>1</mn><mn>2</mn></mfrac></msup>"),
            "x^(1/2)"
        );
        assert_eq!(
            line("<mfrac><mfrac><mi>a</mi><mi>b</mi></mfrac><mi>c</mi></mfrac>"),
            "(a/b)/c"
        );
        assert_eq!(line("<mfrac><mi>a</mi></mfrac><mfrac/>"), "a");
    }

    #[test]
    fn powers_and_indexes_never_run_into_numbers() {
        assert_eq!(
            line("<msup><mi>e</mi><mrow><mo>−</mo><mi>x</mi></mrow></msup>"),
            "e^(−x)".replace('−', "-")
        );
        assert_eq!(line("<msup><mi>X</mi><mi>T</mi></msup>"), "X^T");
        assert_eq!(
            line(
                "<munderover><mo>∑</mo><mrow><mi>i</mi><mo>=</mo><mn>1</mn></mrow><mi>n</mi></munderover>\
                 <msub><mi>x</mi><mi>i</mi></msub>"
            ),
            "∑_(i = 1)^(n)xi"
        );
        assert_eq!(
            line("<msub><mi>x</mi><mrow><mi>t</mi><mo>=</mo><mn>1</mn></mrow></msub>"),
            "x_(t = 1)"
        );
        assert_eq!(
            line(
                "<mmultiscripts><mi>X</mi><mn>1</mn><mn>2</mn><mprescripts/><none/><mn>3</mn></mmultiscripts>"
            ),
            "X₁²³"
        );
        assert_eq!(
            line(
                "<msup><mi>e</mi><mrow><mo>−</mo><msub><mi>a</mi><mn>2</mn></msub></mrow></msup><msup><mi>y</mi><mrow><mo>(</mo><mi>j</mi><mo>)</mo></mrow></msup>"
            ),
            "e^(-a2)y^(j)"
        );
    }

    #[test]
    fn accents_join_their_letter() {
        assert_eq!(line("<mover><mi>x</mi><mo>¯</mo></mover>"), "x\u{304}");
        assert_eq!(
            line("<mover><mi>β</mi><mo>^</mo></mover><mo>=</mo><mn>.2</mn>"),
            "β\u{302} = .2"
        );
        assert_eq!(
            line("<mover><mrow><mi>a</mi><mi>b</mi></mrow><mo>⏞</mo></mover>"),
            "ab"
        );
        assert_eq!(
            line("<munder><mi>max</mi><mi>x</mi></munder><mi>f</mi>"),
            "max_(x)f"
        );
        assert_eq!(line("<mover><mi>x</mi></mover>"), "x");
    }

    #[test]
    fn a_formula_is_read_once() {
        assert_eq!(
            line(
                "<semantics><mrow><mi>p</mi><mo>=</mo><mn>.048</mn></mrow>\
                 <annotation encoding='application/x-tex'>p = .048</annotation></semantics><mtext>&#x20;ok</mtext>"
                    .replace("&#x20;", " ")
                    .as_str()
            ),
            "p = .048 ok"
        );
        assert_eq!(line("<mphantom><mi>p</mi></mphantom><mi>q</mi>"), "q");
    }

    #[test]
    fn fences_tables_and_words_are_kept_apart() {
        assert_eq!(
            line("<mfenced open='[' close=']' separators=';'><mn>−.5</mn><mn>.1</mn></mfenced>"),
            "[-.5; .1]"
        );
        assert_eq!(
            line(
                "<mtable><mtr><mtd><mi>a</mi></mtd><mtd><mi>b</mi></mtd></mtr><mtr><mtd><mi>c</mi></mtd></mtr></mtable>"
            ),
            "a b; c"
        );
        assert_eq!(
            line("<mi>log</mi><mi>x</mi><mspace width='1em'/><mtext>if</mtext><mi>y</mi>"),
            "log x if y"
        );
    }

    #[test]
    fn any_nesting_ends() {
        let deep = format!("{}<mi>x</mi>{}", "<msup>".repeat(2000), "</msup>".repeat(2000));
        assert_eq!(line(&deep), "");
        assert_eq!(line("<mrow><msup><mi>x"), "x");
    }
}
