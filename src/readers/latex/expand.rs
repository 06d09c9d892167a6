//! Making the source *flat*: comments, code and chunks of R go, included files come in, and the
//! author's macros are replaced by their bodies. Expansion has a budget, because macros can be
//! written that never end or double with every step.

use super::arguments::{Braces, braced, bracket_end, file_name, macro_name, name_at, needed, skip_space};
use super::code::{chunk_end, conditional_end, verbatim_end};
use super::definitions::{Macro, Parameter, fill};
use super::include::Includes;
use memchr::memmem;
use std::collections::HashMap;
use std::path::Path;

/// Source without comments, code and macros of the author's own.
pub(super) struct Flat {
    pub text: String,
    /// Where in `text` the lines of the main file begin, with their numbers.
    pub lines: Vec<(usize, u32)>,
    /// Where the document begins, after the preamble.
    pub start: usize,
    pub remarks: Vec<String>,
}

/// Stands for what only a computation or a second run of TeX could fill in.
pub(super) const UNKNOWN: &str = "…";

const DEEPEST: usize = 40;
const MOST_EXPANSIONS: usize = 400_000;

/// Environments whose content is code or drawing.
const CODE: &[&str] = &[
    "verbatim",
    "verbatim*",
    "Verbatim",
    "BVerbatim",
    "lstlisting",
    "minted",
    "Schunk",
    "Sinput",
    "Soutput",
    "Highlighting",
    "Shaded",
    "comment",
    "alltt",
    "knitrout",
    "filecontents",
    "filecontents*",
    "tikzpicture",
    "pspicture",
    "pgfpicture",
    "forest",
    "dot2tex",
    "CodeInput",
    "CodeOutput",
    "CodeChunk",
    "rawfile",
];

#[derive(Clone, Copy, PartialEq)]
enum Kind {
    /// The manuscript's own file: lines are counted.
    Main,
    /// An included file.
    File,
    /// The body of a macro or an argument.
    Body,
}

/// Makes the source flat.
pub(super) fn flatten(source: &str, folder: Option<&Path>) -> Flat {
    let mut expander = Expander {
        out: String::with_capacity(source.len()),
        lines: vec![(0, 1)],
        start: 0,
        remarks: Vec::new(),
        macros: HashMap::new(),
        includes: Includes::in_folder(folder),
        expansions: 0,
        bytes_left: 16 * 1024 * 1024 + 4 * source.len(),
        line: 1,
    };
    expander.run(source, Kind::Main, 0);
    if expander.expansions >= MOST_EXPANSIONS || expander.bytes_left == 0 {
        expander.remarks.push(
            "the macros defined in the file expand without end; they were read only in part".to_string(),
        );
    }
    Flat {
        text: expander.out,
        lines: expander.lines,
        start: expander.start,
        remarks: expander.remarks,
    }
}

pub(super) struct Expander {
    out: String,
    lines: Vec<(usize, u32)>,
    start: usize,
    remarks: Vec<String>,
    pub(super) macros: HashMap<String, Macro>,
    includes: Includes,
    expansions: usize,
    /// How much text expansions and included files may still add.
    bytes_left: usize,
    line: u32,
}

impl Expander {
    fn run(&mut self, source: &str, kind: Kind, depth: usize) {
        let bytes = source.as_bytes();
        let braces = Braces::of(source);
        let chunks = memmem::find(bytes, b">>=").is_some();
        let begun = self.out.len();
        let mut at = 0;
        while at < bytes.len() {
            let next = memchr::memchr3(b'\\', b'%', b'\n', &bytes[at..]).map_or(bytes.len(), |n| at + n);
            self.out.push_str(&source[at..next]);
            at = next;
            let from = at;
            match bytes.get(at) {
                None => break,
                Some(b'\n') => {
                    self.out.push('\n');
                    at += 1;
                    if chunks && source[at..].starts_with("<<") {
                        at = chunk_end(source, at);
                    }
                }
                Some(b'%') => {
                    at = memchr::memchr(b'\n', &bytes[at..]).map_or(bytes.len(), |n| at + n + 1);
                    let text = source[at..].trim_start_matches([' ', '\t', '\r']);
                    if text.starts_with('\n') {
                        // The empty line after a comment still ends the paragraph.
                        self.out.push('\n');
                    } else {
                        at = source.len() - text.len();
                    }
                }
                Some(_) => {
                    at = self.control(source, at, &braces, kind, depth, begun);
                }
            }
            if kind == Kind::Main && at > from {
                let newlines = memchr::memchr_iter(b'\n', &bytes[from..at.min(bytes.len())]).count() as u32;
                if newlines > 0 {
                    self.line += newlines;
                    self.lines.push((self.out.len(), self.line));
                }
            }
        }
    }

    /// Handles the macro at `at` and returns where to go on.
    fn control(
        &mut self,
        source: &str,
        at: usize,
        braces: &Braces,
        kind: Kind,
        depth: usize,
        begun: usize,
    ) -> usize {
        let name = name_at(source, at);
        let after = at + 1 + name.len();
        match name {
            "begin" => {
                let Some((environment, end)) = braced(source, braces, after) else {
                    return self.copy(source, at, after);
                };
                if environment == "document" {
                    if kind == Kind::File {
                        // The preamble of a part that can also be typeset alone.
                        self.out.truncate(begun);
                    } else if self.start == 0 {
                        self.start = self.out.len();
                    }
                    return end;
                }
                if CODE.contains(&environment) {
                    let close = format!("\\end{{{environment}}}");
                    self.out.push_str("\n\n");
                    return memmem::find(&source.as_bytes()[end..], close.as_bytes())
                        .map_or(source.len(), |n| end + n + close.len());
                }
                self.copy(source, at, end)
            }
            "end" if kind != Kind::Body && source[after..].trim_start().starts_with("{document}") => {
                source.len()
            }
            "verb" | "lstinline" | "mintinline" | "Verb" => {
                let end = verbatim_end(source, after, braces);
                self.out.push_str(UNKNOWN);
                end
            }
            "Sexpr" => match braced(source, braces, after) {
                Some((_, end)) => {
                    self.out.push_str(UNKNOWN);
                    end
                }
                None => after,
            },
            "iffalse" => conditional_end(source, after),
            "input" | "include" | "subfile" | "subfileinclude" => match file_name(source, braces, after) {
                Some((file, end)) => {
                    self.include(file.trim(), depth);
                    end
                }
                None => after,
            },
            "import" | "subimport" => {
                let Some((folder, end)) = braced(source, braces, after) else {
                    return after;
                };
                let Some((file, end)) = braced(source, braces, end) else {
                    return end;
                };
                let folder = folder.trim().trim_end_matches('/');
                self.include(&format!("{folder}/{}", file.trim()), depth);
                end
            }
            "newcommand" | "renewcommand" | "providecommand" | "DeclareRobustCommand" | "newrobustcmd" => {
                self.define_command(source, after, braces)
            }
            "NewDocumentCommand"
            | "RenewDocumentCommand"
            | "ProvideDocumentCommand"
            | "DeclareDocumentCommand" => self.define_document_command(source, after, braces),
            "DeclareMathOperator" => {
                let after = after + usize::from(source[after..].starts_with('*'));
                let Some((name, end)) = macro_name(source, braces, after) else {
                    return after;
                };
                let Some((text, end)) = braced(source, braces, end) else {
                    return end;
                };
                self.define(name, Vec::new(), &format!("\\operatorname{{{text}}}"));
                end
            }
            "def" | "gdef" | "edef" | "xdef" => self.define_primitively(source, after, braces),
            "let" => {
                let Some((name, end)) = macro_name(source, braces, after) else {
                    return after;
                };
                let end = end + usize::from(source[end..].starts_with('='));
                if !source[end..].starts_with('\\') {
                    return end;
                }
                let to = name_at(source, end);
                let body = match self.macros.get(to) {
                    Some(m) => m.clone(),
                    None => Macro {
                        parameters: Vec::new(),
                        body: format!("\\{to} "),
                    },
                };
                self.define(name, body.parameters, &body.body);
                end + 1 + to.len()
            }
            _ => match self.macros.get(name) {
                Some(_) if depth < DEEPEST && self.expansions < MOST_EXPANSIONS => {
                    self.expand(source, name, after, braces, depth)
                }
                _ => self.copy(source, at, after),
            },
        }
    }

    fn copy(&mut self, source: &str, from: usize, to: usize) -> usize {
        // A backslash before a line end is a space; the newline is left to the main loop's count.
        self.out.push_str(&source[from..to]);
        to
    }

    fn include(&mut self, file: &str, depth: usize) {
        match self.includes.enter(file) {
            Ok(text) => {
                if text.len() <= self.bytes_left {
                    self.bytes_left -= text.len();
                    self.run(&text, Kind::File, depth);
                }
                self.includes.leave();
            }
            Err(remark) => {
                if !self.remarks.contains(&remark) {
                    self.remarks.push(remark);
                }
            }
        }
    }

    fn expand(&mut self, source: &str, name: &str, after: usize, braces: &Braces, depth: usize) -> usize {
        let Some(found) = self.macros.get(name).cloned() else {
            return after;
        };
        let mut at = after;
        let mut arguments: Vec<&str> = Vec::new();
        for parameter in &found.parameters {
            match parameter {
                Parameter::Star => {
                    let star = source[at..].starts_with('*');
                    at += usize::from(star);
                    arguments.push(if star { "*" } else { "" });
                }
                Parameter::Optional(default) => {
                    let open = skip_space(source, at);
                    if source[open..].starts_with('[')
                        && let Some(end) = bracket_end(source, braces, open)
                    {
                        arguments.push(&source[open + 1..end]);
                        at = end + 1;
                    } else {
                        arguments.push(default);
                    }
                }
                Parameter::Needed => {
                    let (argument, end) = needed(source, braces, at);
                    arguments.push(argument);
                    at = end;
                }
            }
        }
        let text = fill(&found.body, &arguments);
        self.expansions += 1;
        if text.len() > self.bytes_left {
            self.bytes_left = 0;
            return at;
        }
        self.bytes_left -= text.len();
        self.run(&text, Kind::Body, depth + 1);
        at
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn flat(source: &str) -> String {
        flatten(source, None).text
    }

    #[test]
    fn comments_and_code_go() {
        assert_eq!(flat("a % b\nc 5\\% d"), "a c 5\\% d");
        assert_eq!(flat("a % b\n\nc"), "a \n\nc");
        assert_eq!(flat("a\n% b {\nc"), "a\nc");
        assert_eq!(flat("a\\begin{verbatim}p = .03\\end{verbatim}b"), "a\n\nb");
        assert_eq!(flat("p = \\Sexpr{round(p, {3})}, \\verb|x%y| z"), "p = …, … z");
        assert_eq!(flat("a\n<<plot, echo=FALSE>>=\nx <- 3 % {\n@\nb"), "a\n\nb");
        assert_eq!(flat("a\\iffalse b \\ifx c \\fi d\\fi e"), "a e");
    }

    #[test]
    fn macros_are_replaced() {
        assert_eq!(
            flat(r"\newcommand{\pval}{\textit{p}}\pval = .03"),
            r"\textit{p} = .03"
        );
        assert_eq!(
            flat(r"\newcommand{\ttest}[3]{$t(#1) = #2$, $p = #3$}\ttest{28}{2.20}{.036}."),
            r"$t(28) = 2.20$, $p = .036$."
        );
        assert_eq!(
            flat(r"\newcommand\ci[2][95]{#1\% CI #2}\ci{a} \ci[90]{b}"),
            r"95\% CI a 90\% CI b"
        );
        assert_eq!(flat(r"\def\eff#1#2{#1=#2}\eff{d}3"), "d=3");
        assert_eq!(flat(r"\let\a\alpha\a=.05"), r"\alpha =.05");
        assert_eq!(
            flat(r"\DeclareMathOperator{\SE}{SE}$\SE = 1$"),
            r"$\operatorname{SE} = 1$"
        );
        assert_eq!(
            flat(r"\NewDocumentCommand{\e}{s O{x} m}{#2-#3}\e*[y]{z} \e{w}"),
            "y-z x-w"
        );
    }

    #[test]
    fn endless_macros_end() {
        let text = flat(r"\newcommand{\a}{\a\a}a\a b");
        assert!(text.starts_with('a') && text.ends_with('b'));
        let doubling = format!(
            "{}\\a",
            r"\newcommand{\a}[1]{\a{#1#1}}".to_owned() + &r"\a{xy}".repeat(3)
        );
        let flat = flatten(&doubling, None);
        assert_eq!(flat.remarks.len(), 1);
    }

    #[test]
    fn lines_are_those_of_the_file() {
        let flat = flatten("\\newcommand{\\x}{a\n\nb}\n% c\n\\x\nd\n", None);
        let line_of = |needle: &str| {
            let at = flat.text.find(needle).expect("it is there");
            let k = flat.lines.partition_point(|(start, _)| *start <= at);
            flat.lines[k - 1].1
        };
        assert_eq!((line_of("a"), line_of("b"), line_of("d")), (5, 5, 6));
    }

    #[test]
    fn files_are_included_from_the_folder_only() {
        let folder = std::env::temp_dir().join(format!("tieout-include-{}", std::process::id()));
        std::fs::create_dir_all(folder.join("parts")).expect("a folder for the test");
        std::fs::write(
            folder.join("parts/one.tex"),
            "one \\input{parts/two} \\input{main}",
        )
        .expect("a file");
        std::fs::write(
            folder.join("parts/two.tex"),
            "\\documentclass{x}\\begin{document}two\\end{document}not",
        )
        .expect("a file");
        std::fs::write(folder.join("main.tex"), "loop \\input{main}").expect("a file");
        let flat = flatten(
            "\\include{parts/one}|\\input ../secret |\\input{gone}",
            Some(&folder),
        );
        std::fs::remove_dir_all(&folder).expect("the test made it");
        assert_eq!(flat.text, "one two loop | |");
        assert_eq!(
            flat.remarks,
            [
                "\\input{main} includes itself; its text is missing",
                "\\input{../secret} leads out of the manuscript's folder; its text is missing",
                "\\input{gone} was not found; its text is missing",
            ]
        );
    }
}
