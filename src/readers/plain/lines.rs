//! The *lines* of a text file: each with its number in the file and its page, without the line
//! numbers that manuscripts carry in the margin, and without running heads and page numbers.

use std::collections::HashMap;

/// One line of the file.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Line<'a> {
    /// The line without white space around it.
    pub text: &'a str,
    /// From 1, as an editor counts.
    pub number: u32,
    /// From 1, in files that have page ends.
    pub page: Option<u32>,
    /// White space before the text; a tab counts as four.
    pub indent: usize,
    /// The page ends here.
    pub page_end: bool,
}

/// The lines of a file one after the other.
pub(super) struct Lines<'a> {
    rest: &'a str,
    done: bool,
    number: u32,
    page: Option<u32>,
    margin: Option<Margin>,
    /// Running heads, digits taken out.
    heads: Vec<String>,
    /// A page ended at the line before; its end is still to be told.
    turn: bool,
    fresh_page: bool,
    /// Within a run of empty lines: whether it stands at a page end.
    run: Option<bool>,
}

/// Line numbers printed in the margin.
#[derive(Clone, Copy, Debug, PartialEq)]
struct Margin {
    step: u32,
    next: u32,
    /// The numbers stand between the lines rather than before them.
    alone: bool,
}

impl<'a> Lines<'a> {
    pub(super) fn of(source: &'a str) -> Lines<'a> {
        let paged = source.contains('\u{c}');
        Lines {
            rest: source,
            done: source.is_empty(),
            number: 0,
            page: paged.then_some(1),
            margin: margin(source),
            heads: if paged { running_heads(source) } else { Vec::new() },
            turn: false,
            fresh_page: true,
            run: None,
        }
    }

    /// The next line; a page end comes as an empty line of its own.
    pub(super) fn next_line(&mut self) -> Option<Line<'a>> {
        if self.turn {
            self.turn = false;
            self.page = self.page.map(|p| p + 1);
            self.fresh_page = true;
            self.run = None;
            return Some(Line {
                text: "",
                number: self.number,
                page: self.page,
                indent: 0,
                page_end: true,
            });
        }
        let mut raw = match self.done {
            true => return None,
            false => self.raw(),
        };
        while self.is_lone_number(raw) {
            if self.done || self.turn {
                raw = "";
                break;
            }
            raw = self.raw();
        }
        let bare = raw.trim_start();
        let mut text = bare.trim_end();
        let space = &raw[..raw.len() - bare.len()];
        let mut indent: usize = space.chars().map(|c| if c == '\t' { 4 } else { 1 }).sum();
        if let Some(margin) = &mut self.margin
            && !margin.alone
            && let Some((number, rest)) = leading_number(text)
            && (number % margin.step == 0 || margin.step == 1)
            && (number == margin.next
                || (number > margin.next && number < margin.next + 4 * margin.step)
                || number == margin.step)
        {
            margin.next = number + margin.step;
            let bare = rest.trim_start();
            indent = rest.len() - bare.len();
            text = bare;
        }
        if self.page.is_some() && self.is_margin(text) && (self.fresh_page || self.page_ends()) {
            text = "";
        }
        // An empty line where a page ends or begins separates nothing by itself. All empty lines of
        // a run stand before the same text, so that looking ahead once is enough.
        let mut page_end = false;
        if !text.is_empty() {
            self.fresh_page = false;
            self.run = None;
        } else if self.page.is_some() {
            page_end = match self.run {
                Some(known) => known,
                None => (self.fresh_page && self.page > Some(1)) || self.page_ends(),
            };
            self.run = Some(page_end);
        }
        Some(Line {
            text,
            number: self.number,
            page: self.page,
            indent,
            page_end,
        })
    }

    /// Whether the line is a margin number that stands on a line of its own, as copying out of
    /// a viewer leaves them.
    fn is_lone_number(&mut self, raw: &str) -> bool {
        let Some(margin) = self.margin.as_mut().filter(|m| m.alone) else {
            return false;
        };
        match leading_number(raw.trim()) {
            Some((number, ""))
                if number == margin.step || (margin.next..margin.next + 4).contains(&number) =>
            {
                margin.next = number + 1;
                true
            }
            _ => false,
        }
    }

    /// Takes the next line from the source, up to a line feed, carriage return or form feed.
    fn raw(&mut self) -> &'a str {
        let bytes = self.rest.as_bytes();
        let end = memchr::memchr3(b'\n', b'\r', 0x0c, bytes).unwrap_or(bytes.len());
        let line = &self.rest[..end];
        let mut next = end;
        match bytes.get(end) {
            Some(b'\r') => next += if bytes.get(end + 1) == Some(&b'\n') { 2 } else { 1 },
            Some(_) => next += 1,
            None => self.done = true,
        }
        // A form feed before a line end belongs to it.
        self.turn = bytes.get(end) == Some(&0x0c);
        if !line.is_empty() || !self.turn || end == 0 && self.number == 0 {
            self.number += 1;
        }
        self.rest = &self.rest[next.min(bytes.len())..];
        line
    }

    /// Whether nothing but page numbers and running heads follows up to the end of the page.
    fn page_ends(&self) -> bool {
        let mut rest = self.rest;
        for _ in 0..3 {
            rest = rest.trim_start_matches([' ', '\n', '\r', '\t']);
            if rest.is_empty() || rest.starts_with('\u{c}') {
                return true;
            }
            let end = rest.find(['\n', '\r', '\u{c}']).unwrap_or(rest.len());
            if !self.is_margin(rest[..end].trim()) {
                return false;
            }
            rest = &rest[end..];
        }
        false
    }

    fn is_margin(&self, text: &str) -> bool {
        is_page_number(text) || (!self.heads.is_empty() && self.heads.contains(&without_digits(text)))
    }
}

fn is_page_number(text: &str) -> bool {
    let bare = text.trim_matches(|c: char| matches!(c, '-' | '–' | '—' | ' ' | '|'));
    let bare = bare
        .strip_prefix("Page ")
        .or_else(|| bare.strip_prefix("page "))
        .unwrap_or(bare);
    bare.len() <= 4 && !bare.is_empty() && bare.bytes().all(|b| b.is_ascii_digit())
}

fn without_digits(text: &str) -> String {
    text.chars()
        .filter(|c| !c.is_ascii_digit())
        .collect::<String>()
        .trim()
        .to_string()
}

/// First and last lines that at least three pages share.
fn running_heads(source: &str) -> Vec<String> {
    let mut count: HashMap<String, usize> = HashMap::new();
    for page in source.split('\u{c}').take(2000) {
        let mut lines = page.lines().map(str::trim).filter(|l| !l.is_empty());
        let first = lines.next().map(without_digits);
        let last = lines.next_back().map(without_digits);
        for line in [first, last].into_iter().flatten() {
            if !line.is_empty() && line.len() < 200 {
                *count.entry(line).or_default() += 1;
            }
        }
    }
    count
        .into_iter()
        .filter(|(_, n)| *n >= 3)
        .map(|(line, _)| line)
        .collect()
}

/// A number at the beginning of a line, and what follows it.
fn leading_number(text: &str) -> Option<(u32, &str)> {
    let digits = text.bytes().take_while(u8::is_ascii_digit).count();
    if digits == 0 || digits > 5 {
        return None;
    }
    let rest = &text[digits..];
    (rest.is_empty() || rest.starts_with([' ', '\t']))
        .then(|| text[..digits].parse().ok())
        .flatten()
        .map(|number| (number, rest))
}

/// Finds out whether lines are numbered in the margin, each of them or every fifth.
fn margin(source: &str) -> Option<Margin> {
    let mut lines = 0u32;
    let mut first = None;
    let (mut singles, mut fives, mut lone) = (0u32, 0u32, 0u32);
    let mut before: Option<u32> = None;
    let mut before_five: Option<(u32, u32)> = None;
    for line in source.lines().map(str::trim).filter(|l| !l.is_empty()).take(600) {
        lines += 1;
        let Some((number, rest)) = leading_number(line) else {
            continue;
        };
        if rest.is_empty() && before.is_none_or(|b| number == b + 1) {
            lone += 1;
        }
        if before.is_some_and(|b| number == b + 1 || number == 1) || before.is_none() {
            singles += 1;
            first.get_or_insert(number);
        }
        before = Some(number);
        if number % 5 == 0 {
            if before_five.is_none_or(|(n, at)| number == n + 5 && lines - at <= 5 || number == 5) {
                fives += 1;
            }
            before_five = Some((number, lines));
        }
    }
    if lines >= 6 && singles * 10 >= lines * 8 {
        return Some(Margin {
            step: 1,
            next: first.unwrap_or(1),
            alone: false,
        });
    }
    if lone >= 5 && lone * 10 >= lines * 4 {
        return Some(Margin {
            step: 1,
            next: first.unwrap_or(1),
            alone: true,
        });
    }
    (fives >= 4 && fives * 10 >= lines).then_some(Margin {
        step: 5,
        next: 5,
        alone: false,
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    fn texts(source: &str) -> Vec<(u32, Option<u32>, String)> {
        let mut lines = Lines::of(source);
        let mut out = Vec::new();
        while let Some(line) = lines.next_line() {
            if !line.text.is_empty() {
                out.push((line.number, line.page, line.text.to_string()));
            }
        }
        out
    }

    #[test]
    fn all_line_ends_count() {
        assert_eq!(
            texts("one\r\ntwo\rthree\nfour"),
            [(1, "one"), (2, "two"), (3, "three"), (4, "four")].map(|(n, t)| (n, None, t.to_string()))
        );
    }

    #[test]
    fn pages_lose_their_numbers_and_running_heads() {
        let source = "Title\nfirst\n1\n\u{c}PLOTS 2\nsecond\n12\nmore\n2\n\u{c}PLOTS 3\nthird\n3\n\u{c}PLOTS 4\nfourth\n4\n";
        let read: Vec<(u32, String)> = texts(source)
            .into_iter()
            .map(|(_, p, t)| (p.unwrap_or(0), t))
            .collect();
        assert_eq!(
            read,
            [
                (1, "Title"),
                (1, "first"),
                (2, "second"),
                (2, "12"),
                (2, "more"),
                (3, "third"),
                (4, "fourth")
            ]
            .map(|(p, t)| (p, t.to_string()))
        );
    }

    #[test]
    fn margin_numbers_go_and_other_numbers_stay() {
        let mut source = String::new();
        for n in 1..=20 {
            source.push_str(&format!("{n:>3}  line of the text {n}\n"));
        }
        let read = texts(&source);
        assert_eq!(read[11], (12, None, "line of the text 12".to_string()));
        let list = "12 plots\n40 litres\n3 hoses\n7 cans\n9 spades\n11 rakes\n";
        assert_eq!(texts(list)[1].2, "40 litres");
    }

    #[test]
    fn numbers_on_lines_of_their_own_go_too() {
        let source: String = (1..=9).map(|n| format!("{n}\nwords here\n")).collect();
        let mut lines = Lines::of(&source);
        let mut read = Vec::new();
        while let Some(line) = lines.next_line() {
            read.push((line.number, line.text));
        }
        read.retain(|(_, text)| !text.is_empty());
        assert_eq!(read.len(), 9);
        assert_eq!((read[0], read[8]), ((2, "words here"), (18, "words here")));
    }

    #[test]
    fn every_fifth_line_numbered() {
        let mut source = String::new();
        for n in 1..=30 {
            if n % 5 == 0 {
                source.push_str(&format!("{n} words here\n"));
            } else {
                source.push_str("   words here\n");
            }
        }
        assert!(texts(&source).iter().all(|(_, _, t)| t == "words here"));
    }
}
