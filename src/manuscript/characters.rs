//! Which character of a document becomes which character of the text as read.
//!
//! The rule: two spellings that a person sees as the same mark become the same character, and
//! nothing that carries meaning is lost. Superscript and subscript digits therefore stay
//! superscript and subscript (`χ²`, `F₁,₄₅`, `10⁻⁵`), so that a citation number raised behind a
//! p-value never becomes one of its digits.

/// What to do with a character.
pub(super) enum Read {
    /// Take this character.
    As(char),
    /// Take these characters (ligatures).
    Many(&'static str),
    /// A space of any width.
    Space,
    /// Leave it out: it has no width and no meaning here.
    Nothing,
}

/// The reading of one character outside ASCII.
pub(super) fn read(c: char) -> Read {
    use Read::{As, Many, Nothing, Space};
    match c {
        // No-break, en … hair, narrow, medium mathematical and ideographic spaces, line and
        // paragraph separators, next line.
        '\u{a0}'
        | '\u{1680}'
        | '\u{2000}'..='\u{200a}'
        | '\u{2028}'
        | '\u{2029}'
        | '\u{202f}'
        | '\u{205f}'
        | '\u{3000}'
        | '\u{85}' => Space,
        // Soft hyphen, zero-width marks, direction marks, invisible operators, variation
        // selectors, byte order mark.
        '\u{ad}'
        | '\u{200b}'..='\u{200f}'
        | '\u{202a}'..='\u{202e}'
        | '\u{2060}'..='\u{2064}'
        | '\u{2066}'..='\u{2069}'
        | '\u{fe00}'..='\u{fe0f}'
        | '\u{feff}'
        | '\u{34f}' => Nothing,
        // Minus, hyphens and their small and full-width forms. The en dash depends on its neighbours;
        // the superscript minus stays.
        '\u{2212}' | '\u{2010}' | '\u{2011}' | '\u{fe63}' | '\u{2796}' => As('-'),
        'ﬀ' => Many("ff"),
        'ﬁ' => Many("fi"),
        'ﬂ' => Many("fl"),
        'ﬃ' => Many("ffi"),
        'ﬄ' => Many("ffl"),
        'ﬅ' | 'ﬆ' => Many("st"),
        // Full-width forms of ASCII.
        '\u{ff01}'..='\u{ff5e}' => ascii_at(c as u32 - 0xff01 + 0x21),
        '\u{2a7d}' | '\u{2266}' => As('≤'),
        '\u{2a7e}' | '\u{2267}' => As('≥'),
        '\u{fe64}' => As('<'),
        '\u{fe65}' => As('>'),
        '\u{fe66}' => As('='),
        '\u{2245}' | '\u{2243}' => As('≈'),
        '\u{223c}' => As('~'),
        // Greek letters under other code points.
        '\u{b5}' => As('μ'),
        '\u{3d5}' => As('φ'),
        '\u{3f5}' => As('ε'),
        '\u{3d1}' => As('θ'),
        '\u{3f1}' => As('ρ'),
        '\u{2206}' => As('Δ'),
        '\u{2126}' => As('Ω'),
        '\u{ab53}' | '\u{ab54}' | '\u{1d61}' => As('χ'),
        '\u{1d60}' => As('φ'),
        // Mid-line dots used as decimal points or multiplication signs.
        '\u{2219}' | '\u{22c5}' | '\u{2027}' | '\u{30fb}' | '\u{2e31}' => As('·'),
        '\u{2a2f}' | '\u{2715}' | '\u{2716}' => As('×'),
        '\u{2018}' | '\u{2019}' | '\u{2032}' | '\u{2bc}' | '\u{b4}' => As('\''),
        '\u{201c}' | '\u{201d}' | '\u{201e}' => As('"'),
        '\u{2217}' | '\u{204e}' | '\u{22c6}' | '\u{2605}' => As('*'),
        '\u{2215}' | '\u{2044}' => As('/'),
        '\u{2236}' => As(':'),
        '\u{1d400}'..='\u{1d7ff}' => mathematical(c),
        '\u{2100}'..='\u{214f}' => letterlike(c),
        c => As(c),
    }
}

fn ascii_at(code: u32) -> Read {
    char::from_u32(code).map_or(Read::Nothing, Read::As)
}

/// Bold, italic, script … letters and digits lose their style, by their Unicode compatibility form.
fn mathematical(c: char) -> Read {
    let mut plain = None;
    unicode_normalization::char::decompose_compatible(c, |d| {
        plain.get_or_insert(d);
    });
    match plain {
        // Some styled Greek letters decompose to the variant forms handled above.
        Some('\u{3d5}') => Read::As('φ'),
        Some('\u{3f5}') => Read::As('ε'),
        Some('\u{3d1}') => Read::As('θ'),
        Some('\u{3f1}') => Read::As('ρ'),
        Some(d) => Read::As(d),
        None => Read::As(c),
    }
}

/// Letterlike symbols that are letters (ℎ, ℓ, ℝ …) become them; marks such as № and ™ stay.
fn letterlike(c: char) -> Read {
    let mut plain = None;
    let mut count = 0;
    unicode_normalization::char::decompose_compatible(c, |d| {
        plain.get_or_insert(d);
        count += 1;
    });
    match plain {
        Some(d) if count == 1 && d.is_alphabetic() => Read::As(d),
        _ => Read::As(c),
    }
}

/// A character without its style, if it is still one (`𝟐` is `2`).
pub(super) fn bare(c: char) -> char {
    if c.is_ascii() {
        return c;
    }
    match read(c) {
        Read::As(bare) => bare,
        _ => c,
    }
}

/// The superscript form of a character, if it has one that stays readable.
pub(super) fn superscript(c: char) -> Option<char> {
    Some(match c {
        '0' => '⁰',
        '1' => '¹',
        '2' => '²',
        '3' => '³',
        '4'..='9' => char::from_u32('⁴' as u32 + (c as u32 - '4' as u32))?,
        '+' => '⁺',
        '-' | '\u{2212}' | '–' => '⁻',
        '(' => '⁽',
        ')' => '⁾',
        'a' => 'ᵃ',
        'b' => 'ᵇ',
        'c' => 'ᶜ',
        'd' => 'ᵈ',
        'e' => 'ᵉ',
        'f' => 'ᶠ',
        'g' => 'ᵍ',
        'h' => 'ʰ',
        _ => return None,
    })
}

/// The subscript form of a digit; letters stay on the line (`ηp²`), as people type them.
pub(super) fn subscript(c: char) -> Option<char> {
    match c {
        '0'..='9' => char::from_u32('₀' as u32 + (c as u32 - '0' as u32)),
        _ => None,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn as_read(text: &str) -> String {
        let mut out = String::new();
        for c in text.chars() {
            match read(c) {
                Read::As(c) => out.push(c),
                Read::Many(s) => out.push_str(s),
                Read::Space => out.push(' '),
                Read::Nothing => {}
            }
        }
        out
    }

    #[test]
    fn marks_that_look_alike_become_one() {
        assert_eq!(as_read("𝑝\u{2009}=\u{202f}\u{2212}.03"), "p = -.03");
        assert_eq!(as_read("𝛽 𝜒 𝜙 𝟐"), "β χ φ 2");
        assert_eq!(as_read("signi\u{ad}ﬁcant ⩽ ⩾ ＜ ＝ ∼"), "significant ≤ ≥ < = ~");
        assert_eq!(as_read("ℎ № ™"), "h № ™");
        assert_eq!(as_read("10⁻⁵ χ²"), "10⁻⁵ χ²");
    }

    #[test]
    fn raised_and_lowered_digits() {
        assert_eq!("-12".chars().filter_map(superscript).collect::<String>(), "⁻¹²");
        assert_eq!("163".chars().filter_map(subscript).collect::<String>(), "₁₆₃");
        assert_eq!(superscript('9'), Some('⁹'));
        assert_eq!(superscript('*'), None);
    }
}
