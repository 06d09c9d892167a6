//! What is printed differently from how it is written: dashes and quotation marks made of several
//! characters, numbers of the siunitx package, raised and lowered text.

use super::walk::Walker;
use crate::readers::tex_math::{flat as flat_math, push_number};

impl Walker<'_> {
    /// Dashes and quotation marks made of several characters.
    pub(super) fn ligature(&mut self, at: usize, to: usize) -> usize {
        let rest = &self.text[at..to];
        let (text, length) = if rest.starts_with("---") {
            ("—", 3)
        } else if rest.starts_with("--") {
            ("–", 2)
        } else if rest.starts_with("``") || rest.starts_with("''") {
            ("\"", 2)
        } else if rest.starts_with('`') {
            ("'", 1)
        } else if self.german && rest.starts_with('"') {
            match rest.as_bytes().get(1) {
                Some(b'a') => ("ä", 2),
                Some(b'o') => ("ö", 2),
                Some(b'u') => ("ü", 2),
                Some(b'A') => ("Ä", 2),
                Some(b'O') => ("Ö", 2),
                Some(b'U') => ("Ü", 2),
                Some(b's') => ("ß", 2),
                Some(b'`' | b'\'') => ("\"", 2),
                Some(b'=' | b'~') => ("-", 2),
                Some(b'-' | b'"' | b'|') => ("", 2),
                _ => ("\"", 1),
            }
        } else {
            (&rest[..1], 1)
        };
        self.push(at, text);
        at + length
    }

    /// `\num`, `\SI` and the like.
    pub(super) fn numbers(&mut self, at: usize, name: &str, after: usize) -> usize {
        let after = self.skip_option(after);
        let text = self.text;
        let Some((from, to, mut end)) = self.group(after) else {
            return after;
        };
        let first = &text[from..to];
        let mut second = "";
        let (range, unit) = match name {
            "numrange" => (true, false),
            "SIrange" | "qtyrange" => (true, true),
            "num" | "ang" | "numlist" | "tablenum" => (false, false),
            _ => (false, true),
        };
        if range && let Some((from, to, behind)) = self.group(end) {
            second = &text[from..to];
            end = behind;
        }
        let mut unit_text = "";
        if unit {
            let option = self.skip_option(end);
            if let Some((from, to, behind)) = self.group(option) {
                unit_text = &text[from..to];
                end = behind;
            }
        }
        self.ensure(at);
        match name {
            "ang" => push_number(&mut self.b, first, "\\degree"),
            "numlist" => {
                for (i, number) in first.split(';').enumerate() {
                    if i > 0 {
                        self.b.text(", ");
                    }
                    push_number(&mut self.b, number, "");
                }
            }
            _ => push_number(&mut self.b, first, unit_text),
        }
        if range {
            self.b.text(" to ");
            push_number(&mut self.b, second, unit_text);
        }
        end
    }

    /// Raised or lowered text, which may contain formulas.
    pub(super) fn shifted(&mut self, at: usize, raised: bool, after: usize) -> usize {
        let Some((from, to, end)) = self.group(after) else {
            return after;
        };
        let text = flat_math(&self.text[from..to]);
        self.ensure(at);
        if raised {
            self.b.superscript(&text);
        } else {
            self.b.subscript(&text);
        }
        end
    }
}
