//! Office Math as text on a line: `χ²(1) = 4.10`, `(a + b)/n`, `√(n)`. What a person would type
//! if there were no formula editor.

use super::symbols::{self, Font};
use crate::readers::office::line::{Line, Look};
use crate::readers::office::tree::Element;

/// Appends a formula.
pub fn push(math: Element<'_>, line: &mut Line) {
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
            named(e, "e", line);
            let limit = e.child("lim").map(linear).unwrap_or_default();
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
                        push(cell, line);
                        line.level(" ");
                    }
                } else {
                    let mut aligned = Line::default();
                    push(row, &mut aligned);
                    aligned.remove('&');
                    line.append(aligned);
                }
            }
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
        // Accents, bars, boxes, groups, insertions and whatever else only surrounds its content.
        _ => push(e, line),
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
                line.level(&text);
            }
            "sym" => line.push(&super::symbol_element(child), Look::default()),
            "tab" | "br" | "cr" => line.level(" "),
            _ => {}
        }
    }
}

fn named(e: Element<'_>, name: &str, line: &mut Line) {
    if let Some(child) = e.child(name) {
        push(child, line);
    }
}

/// A part of a formula as plain text.
fn linear(e: Element<'_>) -> String {
    let mut line = Line::default();
    push(e, &mut line);
    line.start(usize::MAX)
}

fn raised(e: Element<'_>, line: &mut Line) {
    let text = e.child("sup").map(linear).unwrap_or_default();
    let mark = |c: char| !c.is_alphanumeric() && !c.is_whitespace();
    let number =
        text.chars().all(|c| c.is_ascii_digit() || mark(c)) && text.chars().any(|c| c.is_ascii_digit());
    if number || text.chars().all(mark) {
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
    push(e, &mut inner);
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
        push(inner, line);
    }
    line.level(&chr("endChr", ")"));
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::manuscript::{Builder, Format};
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
        assert_eq!(read(&chi), "χ²(1)=4.10");
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
        assert_eq!(read(&sum), "∑_(i=1)^n x");
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
        assert_eq!(read(&bar), "x");
        let rows = format!(
            "<m:eqArr><m:e>{}</m:e><m:e>{}</m:e></m:eqArr>",
            r("t&amp;=2.20"),
            r("p&amp;=.036")
        );
        assert_eq!(read(&rows), "t=2.20; p=.036");
    }

    #[test]
    fn deleted_parts_are_left_out() {
        let inner = format!("{}<w:del>{}</w:del><w:ins>{}</w:ins>", r("p="), r(".5"), r(".05"));
        assert_eq!(read(&inner), "p=.05");
    }
}
