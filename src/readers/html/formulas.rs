//! Formulas of a web page: MathML, TeX between its marks, and what scripts have made of them.

use super::*;
use crate::readers::mathml::Math;
use crate::readers::tex_math::push_math;

/// How far the form of a formula that is meant for reading is looked for behind the drawn one.
const LOOK_AHEAD: usize = 100_000;

impl<'a> Reading<'a> {
    /// Reads a `math` element to its end.
    pub(super) fn math(&mut self) {
        let mut tokens = std::mem::replace(&mut self.tokens, Tokens::new(""));
        let (math, left_over) = mathml(&mut tokens);
        self.tokens = tokens;
        self.push_mathml(math);
        if let Some(token) = left_over {
            self.token(token);
        }
    }

    fn push_mathml(&mut self, math: Math) {
        if math.is_blank() || (self.context.silent && !self.context.math_in_silence) {
            return;
        }
        let line = self.line_at(self.tokens.position());
        self.flush_shift();
        if self.ready(false) {
            self.b.line(line);
            math.finish(&mut self.b);
            self.formula_read = true;
        }
    }

    fn push_tex(&mut self, tex: &str) {
        let bare = tex.trim();
        let bare = bare
            .strip_prefix("{\\displaystyle")
            .or(bare.strip_prefix("{\\textstyle"))
            .and_then(|t| t.strip_suffix('}'))
            .unwrap_or(bare);
        self.flush_shift();
        if !bare.is_empty() && !self.context.silent && self.ready(false) {
            push_math(&mut self.b, bare);
            self.formula_read = true;
        }
    }

    /// Whether text has marks of TeX in it.
    pub(super) fn holds_tex(&self, raw: &str) -> bool {
        if self.context.formula {
            return raw.contains(['\\', '$']);
        }
        raw.contains("\\(") || raw.contains("\\[") || raw.contains("$$")
    }

    /// Text with formulas between the marks of TeX.
    pub(super) fn text_with_tex(&mut self, text: &str) {
        const MARKS: [(&str, &str); 4] = [("\\(", "\\)"), ("\\[", "\\]"), ("$$", "$$"), ("$", "$")];
        let marks = if self.context.formula {
            &MARKS[..]
        } else {
            &MARKS[..3]
        };
        let mut found = false;
        let mut from = 0;
        // Where each mark stands next; a mark without its other half is not looked for again.
        let mut next: Vec<Option<usize>> = marks.iter().map(|m| text.find(m.0)).collect();
        loop {
            for (at, mark) in next.iter_mut().zip(marks) {
                if at.is_some_and(|at| at < from) {
                    *at = text[from..].find(mark.0).map(|at| from + at);
                }
            }
            let first = (0..marks.len()).filter_map(|i| Some((next[i]?, i))).min();
            let Some((at, i)) = first else { break };
            let (open, close) = marks[i];
            let inside = &text[at + open.len()..];
            match inside.find(close) {
                Some(length) => {
                    self.text(&text[from..at]);
                    self.push_tex(&inside[..length]);
                    from = at + open.len() + length + close.len();
                    found = true;
                }
                None => next[i] = None,
            }
        }
        let rest = &text[from..];
        if self.context.formula && !found && rest.contains('\\') {
            self.push_tex(rest);
        } else {
            self.text(rest);
        }
    }

    /// A script may be the source of a formula.
    pub(super) fn script(&mut self, start: &Start<'a>) {
        let content = self.tokens.raw_until_end_of("script");
        let kind = start.raw("type").unwrap_or_default().trim().to_ascii_lowercase();
        let read = std::mem::replace(&mut self.formula_read, false);
        if read || self.context.silent {
            return;
        }
        if kind.starts_with("math/tex") {
            self.push_tex(content);
        } else if kind.starts_with("math/mml") {
            let mut tokens = Tokens::new(content);
            let (math, _) = mathml(&mut tokens);
            self.push_mathml(math);
        }
    }

    /// A picture of a formula is read from its description.
    pub(super) fn image(&mut self, start: &Start<'a>) {
        if self.context.silent {
            return;
        }
        let formula = Marks::of(start).formula
            || start
                .raw("class")
                .is_some_and(|c| c.contains("math-fallback-image") || c.contains("mwe-math"));
        if !formula && !self.context.formula {
            return;
        }
        match start.value("alt").filter(|alt| !alt.trim().is_empty()) {
            _ if self.formula_read => {}
            Some(alt) => self.push_tex(&alt),
            None => self.formula_pictures += 1,
        }
    }

    /// A formula as a script has drawn it: signs put together from boxes, which do not read well,
    /// and usually a form for reading beside them.
    pub(super) fn rendered_formula(&mut self, start: &Start<'a>) {
        let class = start.raw("class").unwrap_or_default().to_ascii_lowercase();
        let rest = self.tokens.rest();
        if class.split_ascii_whitespace().any(|c| c == "katex") {
            let for_reading = rest
                .get(..100.min(rest.len()))
                .unwrap_or(rest)
                .contains("katex-mathml");
            self.context.twofold = for_reading;
            return;
        }
        self.formula_read = false;
        if let Some(source) = start.value("data-mathml") {
            let mut tokens = Tokens::new(&source);
            let (math, _) = mathml(&mut tokens);
            self.push_mathml(math);
            self.context.silent = true;
            return;
        }
        let here = self.tokens.position();
        let script = self.next_script.from(self.source, here);
        let math = self.next_math.from(self.source, here);
        let follows = &self.source.as_bytes()[script..];
        let follows = &follows[..follows.len().min(80)];
        let source_follows = script - here < LOOK_AHEAD && memchr::memmem::find(follows, b"math/").is_some();
        if source_follows || (math < script && math - here < LOOK_AHEAD) {
            self.context.silent = true;
            self.context.math_in_silence = true;
        }
    }
}

/// Where something comes next in the file, remembered until it has been passed.
pub(super) struct Ahead {
    what: &'static [u8],
    at: Option<usize>,
}

impl Ahead {
    pub(super) fn of(what: &'static [u8]) -> Ahead {
        Ahead { what, at: None }
    }

    /// Its position from `here` on; the end of the file if it does not come again. `here` must
    /// not go back.
    fn from(&mut self, source: &str, here: usize) -> usize {
        match self.at {
            Some(at) if at >= here => at,
            _ => {
                let found = memchr::memmem::find(&source.as_bytes()[here..], self.what);
                let at = found.map_or(source.len(), |at| here + at);
                self.at = Some(at);
                at
            }
        }
    }
}

/// Reads MathML up to the end of its `math` element, or to a tag that no formula contains, which
/// is given back.
fn mathml<'t>(tokens: &mut Tokens<'t>) -> (Math, Option<Token<'t>>) {
    let mut math = Math::new();
    let mut open: Vec<&str> = Vec::new();
    for token in tokens.by_ref() {
        match token {
            Token::Text(raw) => math.text(&decode(raw)),
            Token::Literal(text) => math.text(text),
            Token::Start(start) => {
                let mut lower = [0; 16];
                let name = lower_case(local(start.name), &mut lower);
                if name == "math" {
                    continue;
                }
                if element(name).is_block() || matches!(element(name), Element::Row | Element::Cell) {
                    return (math, Some(Token::Start(start)));
                }
                math.start(name, |attribute| start.value(attribute).map(|v| v.into_owned()));
                if start.self_closed {
                    math.end();
                } else {
                    open.push(local(start.name));
                }
            }
            Token::End(name) => {
                let name = local(name);
                if name.eq_ignore_ascii_case("math") {
                    return (math, None);
                }
                let found = open
                    .iter()
                    .rev()
                    .take(LOOK_BACK)
                    .position(|o| o.eq_ignore_ascii_case(name));
                match found {
                    Some(back) => {
                        for _ in 0..=back {
                            open.pop();
                            math.end();
                        }
                    }
                    None => {
                        let mut lower = [0; 16];
                        if element(lower_case(name, &mut lower)).is_block() {
                            return (math, Some(Token::End(name)));
                        }
                    }
                }
            }
        }
    }
    (math, None)
}

/// The name without its namespace prefix.
fn local(name: &str) -> &str {
    name.rsplit(':').next().unwrap_or(name)
}
