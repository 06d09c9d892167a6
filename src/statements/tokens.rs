//! *Tokens* are the pieces that the grammars speak of: words, numbers, raised and lowered digits,
//! and single marks. They remember where they stand and whether a space stands before them.

/// What a token is.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Kind {
    /// Letters, with apostrophes inside.
    Word,
    /// Digits with at most one decimal point and an exponent such as `e-05`.
    Number,
    /// Raised digits and signs.
    Raised,
    /// Lowered digits.
    Lowered,
    /// One character of any other sort.
    Mark,
    /// Digits with several points: a version, a date, a section number.
    Dotted,
}

/// One piece of text. Offsets are bytes in the text as read.
#[derive(Clone, Copy, Debug)]
pub struct Token {
    pub kind: Kind,
    /// White space stands before it.
    pub spaced: bool,
    pub start: u32,
    pub end: u32,
}

impl Token {
    pub fn text(self, text: &str) -> &str {
        &text[self.start as usize..self.end as usize]
    }
}

const RAISED: &str = "⁰¹²³⁴⁵⁶⁷⁸⁹⁺⁻";

fn is_raised(c: char) -> bool {
    matches!(c, '⁰' | '¹' | '²' | '³' | '⁴'..='⁹' | '⁺' | '⁻' | 'ᵃ'..='ᶻ' | 'ʰ' | '⁽' | '⁾')
}

fn is_lowered(c: char) -> bool {
    matches!(c, '₀'..='₉')
}

/// A number or symbol with its lowered digits on the line, and raised ones too where there is
/// nothing else (`²`, but not `10⁻⁵`).
pub fn on_the_line(text: &str) -> String {
    if text.is_ascii() || text.contains("10") && text.contains(is_raised) {
        return text.to_string();
    }
    text.chars()
        .map(|c| match c {
            '₀'..='₉' => char::from(b'0' + (c as u32 - '₀' as u32) as u8),
            '⁻' => '-',
            '⁺' => '+',
            c => match RAISED.chars().position(|r| r == c) {
                Some(digit) if digit < 10 => char::from(b'0' + digit as u8),
                _ => c,
            },
        })
        .collect()
}

/// Cuts `text[from..to]` into tokens, appended to `tokens`.
pub fn tokenize(text: &str, from: usize, to: usize, tokens: &mut Vec<Token>) {
    let bytes = &text.as_bytes()[..to];
    let mut at = from;
    let mut spaced = true;
    while at < to {
        let start = at;
        let b = bytes[at];
        let kind = match b {
            b' ' | b'\n' | b'\t' | b'\r' => {
                at += 1;
                spaced = true;
                continue;
            }
            b'0'..=b'9' => number(bytes, &mut at, text),
            b'.' if bytes.get(at + 1).is_some_and(u8::is_ascii_digit) && !after_letter_or_digit(text, at) => {
                number(bytes, &mut at, text)
            }
            b'a'..=b'z' | b'A'..=b'Z' => {
                word(text, bytes, &mut at);
                Kind::Word
            }
            0..=0x7f => {
                at += 1;
                Kind::Mark
            }
            _ => {
                let c = char_at(text, at);
                if is_raised(c) {
                    while at < to && is_raised(char_at(text, at)) {
                        at += char_at(text, at).len_utf8();
                    }
                    Kind::Raised
                } else if is_lowered(c) {
                    while at < to && is_lowered(char_at(text, at)) {
                        at += char_at(text, at).len_utf8();
                    }
                    Kind::Lowered
                } else if c.is_alphabetic() {
                    word(text, bytes, &mut at);
                    Kind::Word
                } else if c == '·' && bytes.get(at + 2).is_some_and(u8::is_ascii_digit) && spaced {
                    // A leading middle dot: ·05.
                    number(bytes, &mut at, text)
                } else {
                    at += c.len_utf8();
                    Kind::Mark
                }
            }
        };
        tokens.push(Token {
            kind,
            spaced,
            start: start as u32,
            end: at as u32,
        });
        spaced = false;
    }
}

fn char_at(text: &str, at: usize) -> char {
    text[at..].chars().next().unwrap_or(' ')
}

fn after_letter_or_digit(text: &str, at: usize) -> bool {
    text[..at]
        .chars()
        .next_back()
        .is_some_and(|c| c.is_ascii_alphanumeric() || c == '.')
}

fn digits(bytes: &[u8], at: &mut usize) -> usize {
    let start = *at;
    while *at < bytes.len() && bytes[*at].is_ascii_digit() {
        *at += 1;
    }
    *at - start
}

/// The byte length of a decimal mark at `at` that has a digit behind it, or 0.
fn decimal_mark(bytes: &[u8], at: usize) -> usize {
    let width = match bytes.get(at) {
        Some(b'.') => 1,
        Some(0xc2) if bytes.get(at + 1) == Some(&0xb7) => 2,
        _ => return 0,
    };
    if bytes.get(at + width).is_some_and(u8::is_ascii_digit) {
        width
    } else {
        0
    }
}

fn number(bytes: &[u8], at: &mut usize, text: &str) -> Kind {
    let whole = digits(bytes, at);
    let mark = decimal_mark(bytes, *at);
    if mark > 0 {
        let before = *at;
        *at += mark;
        digits(bytes, at);
        // `3·10⁻⁵` multiplies.
        if mark == 2 && &text[before + 2..*at] == "10" && whole > 0 && starts_power(text, *at) {
            *at = before;
            return Kind::Number;
        }
        if decimal_mark(bytes, *at) == 1 {
            while decimal_mark(bytes, *at) == 1 {
                *at += 1;
                digits(bytes, at);
            }
            return Kind::Dotted;
        }
    }
    // 4.1e-06
    if matches!(bytes.get(*at), Some(b'e' | b'E')) {
        let mut end = *at + 1;
        if matches!(bytes.get(end), Some(b'-' | b'+')) {
            end += 1;
        }
        let from = end;
        if (1..=3).contains(&digits(bytes, &mut end))
            && end > from
            && !bytes
                .get(end)
                .is_some_and(|b| b.is_ascii_alphabetic() || *b == b'.' && decimal_mark(bytes, end) > 0)
        {
            *at = end;
        }
    }
    Kind::Number
}

fn starts_power(text: &str, at: usize) -> bool {
    matches!(text[at..].chars().next(), Some('⁻' | '⁺' | '^' | '-')) || text[at..].starts_with(is_raised)
}

fn word(text: &str, bytes: &[u8], at: &mut usize) {
    loop {
        let letters = bytes[*at..]
            .iter()
            .take_while(|b| b.is_ascii_alphabetic())
            .count();
        *at += letters;
        let Some(byte) = bytes.get(*at) else { return };
        match byte {
            b'\'' if bytes.get(*at + 1).is_some_and(u8::is_ascii_alphabetic) => *at += 1,
            0..=0x7f => break,
            _ => {
                let c = char_at(text, *at);
                if !c.is_alphabetic() && !is_combining(c) || is_raised(c) || is_lowered(c) {
                    break;
                }
                *at += c.len_utf8();
            }
        }
    }
}

/// Accents that follow their letter.
fn is_combining(c: char) -> bool {
    matches!(c, '\u{300}'..='\u{36f}')
}

#[cfg(test)]
mod tests {
    use super::*;

    fn cut(text: &str) -> Vec<(Kind, &str)> {
        let mut tokens = Vec::new();
        tokenize(text, 0, text.len(), &mut tokens);
        tokens.iter().map(|t| (t.kind, t.text(text))).collect()
    }

    #[test]
    fn results_fall_into_their_pieces() {
        use Kind::*;
        assert_eq!(
            cut("χ²(1) = .04, t96"),
            [
                (Word, "χ"),
                (Raised, "²"),
                (Mark, "("),
                (Number, "1"),
                (Mark, ")"),
                (Mark, "="),
                (Number, ".04"),
                (Mark, ","),
                (Word, "t"),
                (Number, "96")
            ]
        );
        assert_eq!(
            cut("F₁,₆₃ Cohen's"),
            [
                (Word, "F"),
                (Lowered, "₁"),
                (Mark, ","),
                (Lowered, "₆₃"),
                (Word, "Cohen's")
            ]
        );
        assert_eq!(
            cut("4.1e-06 1.2.3 0·03 ·05 3·10⁻⁵ p.45"),
            [
                (Number, "4.1e-06"),
                (Dotted, "1.2.3"),
                (Number, "0·03"),
                (Number, "·05"),
                (Number, "3"),
                (Mark, "·"),
                (Number, "10"),
                (Raised, "⁻⁵"),
                (Word, "p"),
                (Mark, "."),
                (Number, "45")
            ]
        );
        assert_eq!(
            cut("5e 2e3x"),
            [
                (Number, "5"),
                (Word, "e"),
                (Number, "2"),
                (Word, "e"),
                (Number, "3"),
                (Word, "x")
            ]
        );
    }
}
