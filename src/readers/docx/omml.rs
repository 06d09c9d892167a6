//! Office Math as text on a line: `χ²(1) = 4.10`, `(a + b)/n`, `√(n)`. What a person would type
//! if there were no formula editor.

use crate::manuscript::{Builder, Format};
use crate::readers::office::line::{Line, Look};
use crate::readers::office::symbols::{self, Font};
use crate::readers::office::tree::Element;

/// Formulas nested deeper than this were not written by people; their text is read as it stands.
const DEEPEST: usize = 150;

/// Appends a formula.
pub fn push(math: Element<'_>, line: &mut Line) {
    if math.is_deeper_than(DEEPEST) {
        line.level(&math.text());
    } else {
        content(math, line);
    }
}

fn content(math: Element<'_>, line: &mut Line) {
    for child in math.children() {
        element(child, line);
    }
}

fn element(e: Element<'_>, line: &mut Line) {
    match e.name() {
        "r" => run(e, line),
        "sSup" => {
            named(e, "e", line);
            raised(e, line);
        }
        "sSub" => {
            named(e, "e", line);
            lowered(e, line);
        }
        "sSubSup" => {
            named(e, "e", line);
            lowered(e, line);
            raised(e, line);
        }
        "sPre" => {
            lowered(e, line);
            raised(e, line);
            named(e, "e", line);
        }
        "f" => fraction(e, line),
        "rad" => {
            let degree = e.child("deg").map(linear).unwrap_or_default();
            match degree.as_str() {
                "" | "2" => line.level("√"),
                "3" => line.level("∛"),
                other => {
                    line.raised(other);
                    line.level("√");
                }
            }
            grouped(e.child("e"), line);
        }
        "d" => delimited(e, line),
        "nary" => {
            let chr = e
                .path(&["naryPr", "chr"])
                .and_then(|c| c.val())
                .unwrap_or("∫".into());
            line.level(&chr);
            let (sub, sup) = (
                e.child("sub").map(linear).unwrap_or_default(),
                e.child("sup").map(linear).unwrap_or_default(),
            );
            if !sub.is_empty() {
                line.level(&format!("_{}", bracketed(&sub)));
            }
            if !sup.is_empty() {
                line.level(&format!("^{}", bracketed(&sup)));
            }
            line.level(" ");
            named(e, "e", line);
        }
        "func" => {
            named(e, "fName", line);
            line.level(" ");
            named(e, "e", line);
        }
        "limLow" => {
            named(e, "e", line);
            let limit = e.child("lim").map(linear).unwrap_or_default();
            if !limit.is_empty() {
                line.level(&format!("_{}", bracketed(&limit)));
            }
        }
        "limUpp" => {
            let limit = e.child("lim").map(linear).unwrap_or_default();
            accented(e, combining(&limit), line);
            if combining(&limit).is_some() {
                return;
            }
            if !limit.is_empty() {
                line.level(&format!("^{}", bracketed(&limit)));
            }
        }
        "eqArr" | "m" => {
            // Rows of an array or matrix: `&` marks the places where they are lined up.
            let mut first = true;
            for row in e.children().filter(|c| matches!(c.name(), "e" | "mr")) {
                if !first {
                    line.level("; ");
                }
                first = false;
                if row.name() == "mr" {
                    for cell in row.children() {
                        content(cell, line);
                        line.level(" ");
                    }
                } else {
                    let mut aligned = Line::default();
                    content(row, &mut aligned);
                    aligned.remove('&');
                    line.append(aligned);
                }
            }
        }
        "acc" => {
            let chr = e.path(&["accPr", "chr"]).and_then(|c| c.val());
            accented(e, combining(&chr.unwrap_or("\u{302}".into())), line);
        }
        "bar" => {
            let position = e.path(&["barPr", "pos"]).and_then(|p| p.val());
            accented(e, (position.as_deref() == Some("top")).then_some('\u{304}'), line);
        }
        "phant" => {
            let shown = e.path(&["phantPr", "show"]).is_none_or(super::styles::is_on);
            if shown {
                named(e, "e", line);
            }
        }
        // Tracked changes inside a formula.
        "del" | "moveFrom" => {}
        name if name.ends_with("Pr") => {}
        // Boxes, groups, insertions and whatever else only surrounds its content.
        _ => content(e, line),
    }
}

fn run(e: Element<'_>, line: &mut Line) {
    let deleted = e
        .children()
        .any(|c| c.name() == "rPr" && (c.child("del").is_some() || c.child("moveFrom").is_some()));
    if deleted {
        return;
    }
    for child in e.children() {
        match child.name() {
            "t" => {
                let mut text = String::new();
                symbols::push(&child.text(), Font::Ordinary, &mut text);
                spaced(&text, line);
            }
            "sym" => line.push(&super::symbol_element(child), Look::default()),
            "tab" | "br" | "cr" => line.level(" "),
            _ => {}
        }
    }
}

/// Text of a formula, where the editor makes the room around `=` and behind a comma.
fn spaced(text: &str, line: &mut Line) {
    let mut out = String::with_capacity(text.len() + 8);
    let mut before = line.last();
    let relation = |c: char| {
        matches!(
            c,
            '=' | '<' | '>' | '≤' | '≥' | '≈' | '≠' | '≅' | '≡' | '∼' | '≪' | '≫'
        )
    };
    let mut chars = text.chars().peekable();
    while let Some(c) = chars.next() {
        if relation(c) {
            if !before.is_some_and(relation) {
                out.push(' ');
            }
            out.push(c);
            if !chars.peek().is_some_and(|n| relation(*n)) {
                out.push(' ');
            }
        } else {
            if before == Some(',') && c.is_alphabetic() {
                out.push(' ');
            }
            out.push(c);
        }
        before = Some(c);
    }
    line.level(&out);
}

/// The combining form of an accent or bar above a letter.
fn combining(mark: &str) -> Option<char> {
    match mark.trim() {
        "¯" | "‾" | "ˉ" | "―" | "\u{305}" | "\u{304}" => Some('\u{304}'),
        "^" | "ˆ" | "\u{302}" => Some('\u{302}'),
        "~" | "˜" | "\u{303}" => Some('\u{303}'),
        "˙" | "\u{307}" => Some('\u{307}'),
        "¨" | "\u{308}" => Some('\u{308}'),
        _ => None,
    }
}

/// A letter with its accent; above anything longer the accent is left out.
fn accented(e: Element<'_>, mark: Option<char>, line: &mut Line) {
    let mut base = Line::default();
    named(e, "e", &mut base);
    let start = base.start(8);
    let mut letters = start.chars();
    let single = letters.next().is_some_and(char::is_alphabetic) && letters.next().is_none();
    line.append(base);
    if let Some(mark) = mark.filter(|_| single) {
        line.level(mark.encode_utf8(&mut [0; 4]));
    }
}

fn named(e: Element<'_>, name: &str, line: &mut Line) {
    if let Some(child) = e.child(name) {
        content(child, line);
    }
}

/// A part of a formula as plain text.
fn linear(e: Element<'_>) -> String {
    let mut line = Line::default();
    content(e, &mut line);
    // As it is read in the end, so that what is raised twice stays raised once: `e^(-x²)`.
    let mut b = Builder::new(Format::Docx);
    line.write(&mut b, &mut None);
    b.finish().text.trim_end().to_string()
}

fn raised(e: Element<'_>, line: &mut Line) {
    let text = e.child("sup").map(linear).unwrap_or_default();
    let number = |c: char| c.is_ascii_digit() || matches!(c, '-' | '+' | '(' | ')' | ',');
    // Stars, primes, daggers.
    let mark = |c: char| !c.is_alphanumeric() && !c.is_whitespace() && c != '/';
    if text.chars().all(number) || text.chars().all(mark) {
        line.raised(&text);
    } else {
        line.level(&format!("^{}", bracketed(&text)));
    }
}

fn lowered(e: Element<'_>, line: &mut Line) {
    line.lowered(&e.child("sub").map(linear).unwrap_or_default());
}

/// `x` as it is, `i = 1` in round brackets.
fn bracketed(text: &str) -> String {
    let simple = text.chars().all(|c| c.is_alphanumeric() || c == '.');
    if simple {
        text.to_string()
    } else {
        format!("({text})")
    }
}

/// A term that stays one when the formula is written on a line.
fn grouped(e: Option<Element<'_>>, line: &mut Line) {
    let Some(e) = e else { return };
    let mut inner = Line::default();
    content(e, &mut inner);
    let text = inner.start(usize::MAX);
    let joined = text.contains(['+', '-', '−', '–', '/', '±', '×', '·', '=', ' ']);
    let already = text.starts_with('(') && text.ends_with(')') && text.matches('(').count() == 1;
    // A sign in front does not make two terms of one number.
    let number = text
        .trim_start_matches(['-', '−', '–'])
        .chars()
        .all(|c| c.is_ascii_digit() || matches!(c, '.' | ','));
    if joined && !already && !number {
        line.level("(");
        line.append(inner);
        line.level(")");
    } else {
        line.append(inner);
    }
}

fn fraction(e: Element<'_>, line: &mut Line) {
    let bar = e.path(&["fPr", "type"]).and_then(|t| t.val());
    grouped(e.child("num"), line);
    // Without a bar it is a binomial coefficient or two lines in one.
    line.level(if bar.as_deref() == Some("noBar") {
        ", "
    } else {
        "/"
    });
    grouped(e.child("den"), line);
}

fn delimited(e: Element<'_>, line: &mut Line) {
    let chr = |name, usual: &'static str| {
        e.child("dPr")
            .and_then(|p| p.child(name))
            .map_or(usual.into(), |c| c.val().unwrap_or_default())
    };
    line.level(&chr("begChr", "("));
    let separator = chr("sepChr", "|");
    let mut first = true;
    for inner in e.children().filter(|c| c.name() == "e") {
        if !first {
            line.level(&separator);
        }
        first = false;
        content(inner, line);
    }
    line.level(&chr("endChr", ")"));
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::readers::office::tree::Tree;

    fn read(inner: &str) -> String {
        let xml = format!("<m:oMath>{inner}</m:oMath>");
        let tree = Tree::parse(&xml).unwrap();
        let mut line = Line::default();
        push(tree.root(), &mut line);
        let mut b = Builder::new(Format::Docx);
        line.write(&mut b, &mut None);
        b.finish().text.trim_end().to_string()
    }

    /// A run.
    fn r(text: &str) -> String {
        format!("<m:r><m:rPr><m:sty m:val=\"p\"/></m:rPr><w:rPr><w:i/></w:rPr><m:t>{text}</m:t></m:r>")
    }

    #[test]
    fn scripts() {
        let chi = format!(
            "<m:sSup><m:e>{}</m:e><m:sup>{}</m:sup></m:sSup>{}",
            r("χ"),
            r("2"),
            r("(1)=4.10")
        );
        assert_eq!(read(&chi), "χ²(1) = 4.10");
        let eta = format!(
            "<m:sSubSup><m:e>{}</m:e><m:sub>{}</m:sub><m:sup>{}</m:sup></m:sSubSup>",
            r("η"),
            r("p"),
            r("2")
        );
        assert_eq!(read(&eta), "ηp²");
        let f = format!(
            "<m:sSub><m:e>{}</m:e><m:sub>{}</m:sub></m:sSub>",
            r("F"),
            r("1,63")
        );
        assert_eq!(read(&f), "F₁,₆₃");
        let power = format!(
            "<m:sSup><m:e>{}</m:e><m:sup>{}</m:sup></m:sSup>",
            r("10"),
            r("−5")
        );
        assert_eq!(read(&power), "10⁻⁵");
        let xn = format!(
            "<m:sSup><m:e>{}</m:e><m:sup>{}</m:sup></m:sSup>",
            r("x"),
            r("n+1")
        );
        assert_eq!(read(&xn), "x^(n+1)");
    }

    #[test]
    fn fractions_roots_and_brackets() {
        let f = format!("<m:f><m:num>{}</m:num><m:den>{}</m:den></m:f>", r("M+1"), r("n"));
        assert_eq!(read(&f), "(M+1)/n");
        let rad = format!(
            "<m:rad><m:radPr><m:degHide m:val=\"1\"/></m:radPr><m:deg/><m:e>{}</m:e></m:rad>",
            r("n")
        );
        assert_eq!(read(&rad), "√n");
        let d = format!(
            "<m:d><m:dPr><m:begChr m:val=\"[\"/><m:sepChr m:val=\",\"/><m:endChr m:val=\"]\"/></m:dPr>\
             <m:e>{}</m:e><m:e>{}</m:e></m:d>",
            r(".01"),
            r(".15")
        );
        assert_eq!(read(&d), "[.01,.15]");
        assert_eq!(read(&format!("<m:d><m:e>{}</m:e></m:d>", r("28"))), "(28)");
    }

    #[test]
    fn sums_functions_arrays_and_accents() {
        let sum = format!(
            "<m:nary><m:naryPr><m:chr m:val=\"∑\"/></m:naryPr><m:sub>{}</m:sub><m:sup>{}</m:sup><m:e>{}</m:e></m:nary>",
            r("i=1"),
            r("n"),
            r("x")
        );
        assert_eq!(read(&sum), "∑_(i = 1)^n x");
        let log = format!(
            "<m:func><m:fName>{}</m:fName><m:e>{}</m:e></m:func>",
            r("log"),
            r("x")
        );
        assert_eq!(read(&log), "log x");
        let bar = format!(
            "<m:acc><m:accPr><m:chr m:val=\"̅\"/></m:accPr><m:e>{}</m:e></m:acc>",
            r("x")
        );
        assert_eq!(read(&bar), "x\u{304}");
        let rows = format!(
            "<m:eqArr><m:e>{}</m:e><m:e>{}</m:e></m:eqArr>",
            r("t&amp;=2.20"),
            r("p&amp;=.036")
        );
        assert_eq!(read(&rows), "t = 2.20; p = .036");
    }

    #[test]
    fn runs_are_spaced_as_the_editor_shows_them() {
        let inner = [
            r("t"),
            r("(28)"),
            r("="),
            r("2.20"),
            r(","),
            r("p"),
            r("&lt;="),
            r(".05"),
        ]
        .concat();
        assert_eq!(read(&inner), "t(28) = 2.20, p <= .05");
        let sup = |base: &str, sup: &str| format!("<m:sSup><m:e>{base}</m:e><m:sup>{sup}</m:sup></m:sSup>");
        assert_eq!(read(&sup(&r("e"), &(r("-") + &sup(&r("x"), &r("2"))))), "e^(-x²)");
        assert_eq!(read(&sup(&r("x"), &r("1/2"))), "x^(1/2)");
    }

    #[test]
    fn deleted_parts_are_left_out() {
        let inner = format!("{}<w:del>{}</w:del><w:ins>{}</w:ins>", r("p="), r(".5"), r(".05"));
        assert_eq!(read(&inner), "p = .05");
    }
}
