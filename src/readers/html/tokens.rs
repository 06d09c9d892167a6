//! Cuts HTML, as it is found, into tags and text. Nothing is refused: a `<` that begins no tag is
//! text, quotes may be missing, and a comment that never ends runs to the end of the file.

use crate::readers::entities;
use std::borrow::Cow;

/// A piece of the file.
#[derive(Debug, PartialEq)]
pub(super) enum Token<'a> {
    /// Text with its character references.
    Text(&'a str),
    /// Text that is to be taken as it stands.
    Literal(&'a str),
    Start(Start<'a>),
    End(&'a str),
}

/// A start tag.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Start<'a> {
    /// As written; compare without regard to case.
    pub name: &'a str,
    attributes: &'a str,
    /// Written `<name/>`, which only means something in MathML and SVG.
    pub self_closed: bool,
}

pub(super) struct Tokens<'a> {
    source: &'a str,
    at: usize,
    /// No further quote of this kind follows, so that nothing need be looked for again.
    no_more: [bool; 2],
}

impl<'a> Tokens<'a> {
    pub(super) fn new(source: &'a str) -> Tokens<'a> {
        Tokens {
            source,
            at: 0,
            no_more: [false; 2],
        }
    }

    /// Where the next token begins.
    pub(super) fn position(&self) -> usize {
        self.at
    }

    /// What has not been read yet.
    pub(super) fn rest(&self) -> &'a str {
        &self.source[self.at..]
    }

    /// The text up to the end tag of a script, style or title, and past that tag.
    pub(super) fn raw_until_end_of(&mut self, name: &str) -> &'a str {
        let rest = self.rest();
        let mut from = 0;
        while let Some(at) = rest[from..].find("</") {
            let at = from + at;
            let tag = &rest.as_bytes()[at + 2..];
            let named = tag.len() >= name.len() && tag[..name.len()].eq_ignore_ascii_case(name.as_bytes());
            if named && !tag.get(name.len()).is_some_and(u8::is_ascii_alphanumeric) {
                let close = memchr::memchr(b'>', tag).map_or(rest.len(), |c| at + 2 + c + 1);
                self.at += close;
                return &rest[..at];
            }
            from = at + 2;
        }
        self.at = self.source.len();
        rest
    }

    /// The end of the tag whose attributes begin at `from`: the position of its `>`.
    fn tag_end(&mut self, from: usize) -> Option<usize> {
        let bytes = self.source.as_bytes();
        let mut at = from;
        loop {
            at += memchr::memchr3(b'>', b'"', b'\'', &bytes[at..])?;
            let kind = match bytes[at] {
                b'>' => return Some(at),
                b'"' => 0,
                _ => 1,
            };
            // A quote opens a value only behind an equals sign.
            let opens = bytes[from..at]
                .iter()
                .rev()
                .find(|b| !b.is_ascii_whitespace())
                .is_some_and(|b| *b == b'=');
            if opens && !self.no_more[kind] {
                match memchr::memchr(bytes[at], &bytes[at + 1..]) {
                    Some(length) => at += length + 2,
                    None => {
                        self.no_more[kind] = true;
                        at += 1;
                    }
                }
            } else {
                at += 1;
            }
        }
    }

    /// Passes over markup that holds nothing to read; returns text if that is what it was.
    fn declaration(&mut self) -> Option<Token<'a>> {
        let rest = self.rest();
        if let Some(comment) = rest.strip_prefix("<!--") {
            let length = if comment.starts_with('>') {
                1
            } else if comment.starts_with("->") {
                2
            } else {
                comment.find("-->").map_or(comment.len(), |e| e + 3)
            };
            self.at += 4 + length;
            return None;
        }
        if let Some(data) = rest.strip_prefix("<![CDATA[") {
            let length = data.find("]]>").unwrap_or(data.len());
            self.at = (self.at + 9 + length + 3).min(self.source.len());
            return Some(Token::Literal(&data[..length]));
        }
        self.at += rest.find('>').map_or(rest.len(), |e| e + 1);
        None
    }
}

impl<'a> Iterator for Tokens<'a> {
    type Item = Token<'a>;

    fn next(&mut self) -> Option<Token<'a>> {
        loop {
            let rest = self.rest();
            let bytes = rest.as_bytes();
            match bytes {
                [] => return None,
                [b'<', b'!' | b'?', ..] => {
                    if let Some(token) = self.declaration() {
                        return Some(token);
                    }
                }
                [b'<', b'/', c, ..] if c.is_ascii_alphabetic() => {
                    let length = memchr::memchr(b'>', bytes).unwrap_or(bytes.len());
                    let inside = &rest[2..length];
                    self.at = (self.at + length + 1).min(self.source.len());
                    let end = inside
                        .find(|c: char| c.is_ascii_whitespace() || c == '/')
                        .unwrap_or(inside.len());
                    return Some(Token::End(&inside[..end]));
                }
                [b'<', b'/', b'>', ..] => self.at += 3,
                [b'<', c, ..] if c.is_ascii_alphabetic() => {
                    let name = rest[1..]
                        .find(|c: char| c.is_ascii_whitespace() || matches!(c, '/' | '>'))
                        .map_or(rest.len(), |e| e + 1);
                    let Some(end) = self.tag_end(self.at + name) else {
                        // The file ends inside the tag.
                        self.at = self.source.len();
                        return None;
                    };
                    let attributes = &self.source[self.at + name..end];
                    self.at = end + 1;
                    return Some(Token::Start(Start {
                        name: &rest[1..name],
                        attributes,
                        self_closed: attributes.ends_with('/'),
                    }));
                }
                _ => {
                    // Text up to the next `<` that begins markup.
                    let mut length = 1;
                    loop {
                        match memchr::memchr(b'<', &bytes[length.min(bytes.len())..]) {
                            None => {
                                length = bytes.len();
                                break;
                            }
                            Some(more) => {
                                length += more;
                                let markup = match bytes.get(length + 1) {
                                    Some(b'!' | b'?') => true,
                                    Some(b'/') => bytes
                                        .get(length + 2)
                                        .is_some_and(|c| c.is_ascii_alphabetic() || *c == b'>'),
                                    Some(c) => c.is_ascii_alphabetic(),
                                    None => false,
                                };
                                if markup {
                                    break;
                                }
                                length += 1;
                            }
                        }
                    }
                    // Every cut lies before a `<` or at the end, hence between characters; a first
                    // character of several bytes contains no `<`.
                    self.at += length;
                    return Some(Token::Text(&rest[..length]));
                }
            }
        }
    }
}

impl<'a> Start<'a> {
    /// The value of an attribute, still with its character references; empty if it has none.
    pub(super) fn raw(&self, name: &str) -> Option<&'a str> {
        let mut rest = self.attributes;
        loop {
            rest = rest.trim_start_matches(|c: char| c.is_ascii_whitespace() || c == '/');
            if rest.is_empty() {
                return None;
            }
            let end = rest
                .find(|c: char| c.is_ascii_whitespace() || c == '=')
                .unwrap_or(rest.len())
                // A stray `=` in front is part of the name.
                .max(rest.chars().next().map_or(0, char::len_utf8));
            let key = &rest[..end];
            rest = rest[end..].trim_start();
            let mut value = "";
            if let Some(after) = rest.strip_prefix('=') {
                let after = after.trim_start();
                (value, rest) = match after.chars().next() {
                    Some(quote @ ('"' | '\'')) => match after[1..].split_once(quote) {
                        Some((value, rest)) => (value, rest),
                        None => (&after[1..], ""),
                    },
                    _ => {
                        let end = after
                            .find(|c: char| c.is_ascii_whitespace())
                            .unwrap_or(after.len());
                        after.split_at(end)
                    }
                };
            }
            if key.eq_ignore_ascii_case(name) {
                return Some(value);
            }
        }
    }

    /// The value of an attribute.
    pub(super) fn value(&self, name: &str) -> Option<Cow<'a, str>> {
        self.raw(name).map(decode)
    }

    /// The number in an attribute.
    pub(super) fn number(&self, name: &str) -> Option<u32> {
        let value = self.raw(name)?.trim();
        let digits = value.bytes().take_while(u8::is_ascii_digit).count();
        value[..digits].parse().ok()
    }

    /// It has no attributes at all.
    pub(super) fn is_bare(&self) -> bool {
        self.attributes.is_empty()
    }
}

/// Text with its character references resolved.
pub(super) fn decode(raw: &str) -> Cow<'_, str> {
    if memchr::memchr(b'&', raw.as_bytes()).is_none() {
        return Cow::Borrowed(raw);
    }
    let mut out = String::with_capacity(raw.len());
    let mut rest = raw;
    while let Some(at) = rest.find('&') {
        out.push_str(&rest[..at]);
        rest = &rest[at + 1..];
        match reference(rest) {
            Some((length, text)) => {
                out.push_str(&text);
                rest = &rest[length..];
            }
            None => out.push('&'),
        }
    }
    out.push_str(rest);
    Cow::Owned(out)
}

/// The character reference at the start of `text`, its `&` already taken: its length and text.
fn reference(text: &str) -> Option<(usize, Cow<'static, str>)> {
    if let Some(number) = text.strip_prefix('#') {
        let (digits, radix, skipped) = match number.strip_prefix(['x', 'X']) {
            Some(hex) => (hex, 16, 2),
            None => (number, 10, 1),
        };
        let length = digits
            .bytes()
            .take_while(|b| (*b as char).is_digit(radix))
            .count();
        let code = u32::from_str_radix(&digits[..length], radix).ok()?;
        let stop = digits[length..].starts_with(';') as usize;
        let c = char::from_u32(windows_1252(code))
            .filter(|c| *c != '\0')
            .unwrap_or('\u{fffd}');
        return Some((skipped + length + stop, c.to_string().into()));
    }
    let letters = text.bytes().take_while(u8::is_ascii_alphanumeric).count();
    if text[letters..].starts_with(';')
        && let Some(known) = entities::named(&text[..letters])
    {
        return Some((letters + 1, known.into()));
    }
    entities::unterminated(text).map(|(length, known)| (length, known.into()))
}

/// Numbers from 128 to 159 mean the characters of Windows-1252 (HTML Living Standard, 13.2.5.80).
fn windows_1252(code: u32) -> u32 {
    #[rustfmt::skip]
    const HIGH: [u32; 32] = [
        0x20ac, 0x81, 0x201a, 0x192, 0x201e, 0x2026, 0x2020, 0x2021, 0x2c6, 0x2030, 0x160, 0x2039, 0x152, 0x8d, 0x17d,
        0x8f, 0x90, 0x2018, 0x2019, 0x201c, 0x201d, 0x2022, 0x2013, 0x2014, 0x2dc, 0x2122, 0x161, 0x203a, 0x153,
        0x9d, 0x17e, 0x178,
    ];
    match code {
        0x80..=0x9f => HIGH[(code - 0x80) as usize],
        code => code,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn show(source: &str) -> Vec<String> {
        Tokens::new(source)
            .map(|t| match t {
                Token::Text(t) => format!("text {}", decode(t)),
                Token::Literal(t) => format!("literal {t}"),
                Token::Start(s) => format!("<{}{}", s.name, if s.self_closed { "/" } else { "" }),
                Token::End(e) => format!("</{e}"),
            })
            .collect()
    }

    #[test]
    fn a_less_than_sign_is_text_unless_it_begins_a_tag() {
        assert_eq!(
            show("<p>p < .05, d<.2, p <= 1, a </ b<"),
            ["<p", "text p < .05, d<.2, p <= 1, a </ b<"]
        );
        assert_eq!(show("é<b>x</b >"), ["text é", "<b", "text x", "</b"]);
    }

    #[test]
    fn comments_declarations_and_cdata() {
        assert_eq!(
            show("<!DOCTYPE html><!-- <p> --><?xml x?>a<!---->b<!-->c<![CDATA[p < .05]]>d</>e<!-- no end"),
            [
                "text a",
                "text b",
                "text c",
                "literal p < .05",
                "text d",
                "text e"
            ]
        );
    }

    #[test]
    fn attributes_in_all_their_forms() {
        let mut tokens = Tokens::new("<td rowspan=2 COLSPAN='3' title=\"a > b &chi; \" hidden data-x = y/>");
        let Some(Token::Start(start)) = tokens.next() else {
            panic!("a start tag")
        };
        assert_eq!(start.number("rowspan"), Some(2));
        assert_eq!(start.number("colspan"), Some(3));
        assert_eq!(start.value("title").as_deref(), Some("a > b χ "));
        assert_eq!((start.raw("hidden"), start.raw("x")), (Some(""), None));
        assert_eq!(start.raw("data-x"), Some("y/"));
    }

    #[test]
    fn bad_tags_end_somewhere() {
        assert_eq!(show("<a href=\"x>y</a>z"), ["<a", "text y", "</a", "text z"]);
        assert_eq!(show("a<p class='x"), ["text a"]);
        assert_eq!(show("<p it's>x"), ["<p", "text x"]);
        let many = "<a b=\"".repeat(50_000);
        assert!(Tokens::new(&many).count() < 50_000);
    }

    #[test]
    fn character_references() {
        assert_eq!(
            decode("&chi;&#178;&#xB2; &lt.05 &amp &nosuch; AT&T &#150; &#0; &eacute;&minus;1 &"),
            "χ²² <.05 & &nosuch; AT&T – \u{fffd} é−1 &"
        );
    }

    #[test]
    fn raw_text_ends_at_its_own_end_tag() {
        let mut tokens = Tokens::new("<script>if (a</b) '</scripty>'</SCRIPT >after");
        tokens.next();
        assert_eq!(tokens.raw_until_end_of("script"), "if (a</b) '</scripty>'");
        assert_eq!(tokens.next(), Some(Token::Text("after")));
        let mut open = Tokens::new("<style>p {");
        open.next();
        assert_eq!(open.raw_until_end_of("style"), "p {");
        assert_eq!(open.next(), None);
    }
}
