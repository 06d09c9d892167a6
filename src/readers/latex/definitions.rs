//! The *definitions* of the author's own macros: `\newcommand`, `\def` and their relatives.

use super::arguments::{Braces, braced, bracket_end, macro_name, name_at, skip_space};
use super::expand::Expander;

/// Longer bodies define layout, not words.
const LONGEST_BODY: usize = 4000;

/// Macros that are read by their usual meaning whatever the author makes of them.
const KEPT: &[&str] = &[
    "section",
    "subsection",
    "subsubsection",
    "paragraph",
    "chapter",
    "part",
    "title",
    "abstract",
    "caption",
    "footnote",
    "item",
    "textit",
    "textbf",
    "emph",
    "textsuperscript",
    "textsubscript",
    "begin",
    "end",
    "label",
    "ref",
    "cite",
    "citep",
    "citet",
    "author",
    "and",
    "input",
    "include",
    "num",
    "SI",
    "multicolumn",
    "multirow",
    "frac",
    "sqrt",
    "text",
    "mathrm",
    "hline",
    "toprule",
    "midrule",
    "bottomrule",
    "maketitle",
    "appendix",
    "par",
    "bibitem",
];

/// What a macro takes.
#[derive(Clone)]
pub(super) enum Parameter {
    Needed,
    Optional(String),
    Star,
}

#[derive(Clone)]
pub(super) struct Macro {
    pub parameters: Vec<Parameter>,
    pub body: String,
}

impl Expander {
    pub(super) fn define(&mut self, name: &str, parameters: Vec<Parameter>, body: &str) {
        if !KEPT.contains(&name) && body.len() <= LONGEST_BODY && !name.is_empty() {
            let body = body.to_string();
            self.macros.insert(name.to_string(), Macro { parameters, body });
        }
    }

    /// `\newcommand{\name}[2][default]{body}`
    pub(super) fn define_command(&mut self, source: &str, after: usize, braces: &Braces) -> usize {
        let after = after + usize::from(source[after..].starts_with('*'));
        let Some((name, mut at)) = macro_name(source, braces, after) else {
            return after;
        };
        let mut parameters = Vec::new();
        let open = skip_space(source, at);
        if source[open..].starts_with('[')
            && let Some(end) = bracket_end(source, braces, open)
        {
            let count: usize = source[open + 1..end].trim().parse().unwrap_or(0);
            parameters = vec![Parameter::Needed; count.min(9)];
            at = end + 1;
            let open = skip_space(source, at);
            if source[open..].starts_with('[')
                && let Some(end) = bracket_end(source, braces, open)
            {
                if let Some(first) = parameters.first_mut() {
                    *first = Parameter::Optional(source[open + 1..end].to_string());
                }
                at = end + 1;
            }
        }
        let Some((body, end)) = braced(source, braces, at) else {
            return at;
        };
        self.define(name, parameters, body);
        end
    }

    /// `\NewDocumentCommand{\name}{s O{default} m}{body}`
    pub(super) fn define_document_command(&mut self, source: &str, after: usize, braces: &Braces) -> usize {
        let Some((name, at)) = macro_name(source, braces, after) else {
            return after;
        };
        let Some((spec, at)) = braced(source, braces, at) else {
            return at;
        };
        let Some((body, end)) = braced(source, braces, at) else {
            return at;
        };
        let mut parameters = Vec::new();
        let mut rest = spec;
        while let Some(c) = rest.chars().next() {
            rest = &rest[c.len_utf8()..];
            match c {
                'm' => parameters.push(Parameter::Needed),
                's' => parameters.push(Parameter::Star),
                'o' => parameters.push(Parameter::Optional(String::new())),
                'O' => {
                    let inner = rest.strip_prefix('{').unwrap_or(rest);
                    let end = inner.find('}').unwrap_or(inner.len());
                    parameters.push(Parameter::Optional(inner[..end].to_string()));
                    rest = inner[end..].strip_prefix('}').unwrap_or("");
                }
                _ => {}
            }
        }
        parameters.truncate(9);
        self.define(name, parameters, body);
        end
    }

    /// `\def\name#1#2{body}`; other patterns of arguments are not followed.
    pub(super) fn define_primitively(&mut self, source: &str, after: usize, braces: &Braces) -> usize {
        let at = skip_space(source, after);
        if !source[at..].starts_with('\\') {
            return after;
        }
        let name = name_at(source, at);
        let at = at + 1 + name.len();
        let Some(open) = memchr::memchr(b'{', &source.as_bytes()[at..]).map(|n| at + n) else {
            return at;
        };
        let pattern = source[at..open].trim();
        let Some((body, end)) = braced(source, braces, open) else {
            return at;
        };
        let simple = pattern.len() <= 18
            && pattern.bytes().enumerate().all(|(i, b)| {
                if i % 2 == 0 {
                    b == b'#'
                } else {
                    b == b'1' + (i / 2) as u8
                }
            });
        if simple {
            self.define(name, vec![Parameter::Needed; pattern.len() / 2], body);
        } else if pattern.len() > 100 {
            return at;
        }
        end
    }
}

/// The body with its arguments in place.
pub(super) fn fill(body: &str, arguments: &[&str]) -> String {
    let mut out = String::with_capacity(body.len());
    let mut rest = body;
    while let Some(at) = rest.find('#') {
        out.push_str(&rest[..at]);
        rest = &rest[at + 1..];
        if let Some(digit @ b'1'..=b'9') = rest.as_bytes().first() {
            if let Some(argument) = arguments.get(usize::from(digit - b'1')) {
                out.push_str(argument);
            }
            rest = &rest[1..];
        } else if rest.starts_with('#') {
            out.push('#');
            rest = &rest[1..];
        }
    }
    out.push_str(rest);
    out
}
