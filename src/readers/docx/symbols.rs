//! Characters typed in a symbol font. Before fonts had Greek, people typed `c` in the font Symbol
//! to print χ; Word stores such a character as `c`, as U+F063 or as a symbol element.

/// The font of a run, as far as it matters here.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Font {
    #[default]
    Ordinary,
    /// Symbol, with the Adobe Symbol encoding.
    Symbol,
    /// Pictures such as Wingdings: none of its characters is what its code says.
    Pictures,
}

/// The kind of a font, by its name.
pub fn font(name: &str) -> Font {
    let name = name.trim().to_ascii_lowercase();
    if name == "symbol" || name == "symbolps" || name == "symbol mt" || name == "standardsymbolsps" {
        Font::Symbol
    } else if name.starts_with("wingdings") || name.starts_with("webdings") || name.contains("dingbats") {
        Font::Pictures
    } else {
        Font::Ordinary
    }
}

/// Adobe Symbol encoding from 0x20 to 0x7e and from 0xa0 to 0xfe. `\0` is no character.
#[rustfmt::skip]
const LOW: [char; 95] = [
    ' ', '!', '∀', '#', '∃', '%', '&', '∋', '(', ')', '*', '+', ',', '−', '.', '/',
    '0', '1', '2', '3', '4', '5', '6', '7', '8', '9', ':', ';', '<', '=', '>', '?',
    '≅', 'Α', 'Β', 'Χ', 'Δ', 'Ε', 'Φ', 'Γ', 'Η', 'Ι', 'ϑ', 'Κ', 'Λ', 'Μ', 'Ν', 'Ο',
    'Π', 'Θ', 'Ρ', 'Σ', 'Τ', 'Υ', 'ς', 'Ω', 'Ξ', 'Ψ', 'Ζ', '[', '∴', ']', '⊥', '_',
    '‾', 'α', 'β', 'χ', 'δ', 'ε', 'φ', 'γ', 'η', 'ι', 'ϕ', 'κ', 'λ', 'μ', 'ν', 'ο',
    'π', 'θ', 'ρ', 'σ', 'τ', 'υ', 'ϖ', 'ω', 'ξ', 'ψ', 'ζ', '{', '|', '}', '~',
];
#[rustfmt::skip]
const HIGH: [char; 95] = [
    '€', 'ϒ', '′', '≤', '⁄', '∞', 'ƒ', '♣', '♦', '♥', '♠', '↔', '←', '↑', '→', '↓',
    '°', '±', '″', '≥', '×', '∝', '∂', '•', '÷', '≠', '≡', '≈', '…', '|', '—', '↵',
    'ℵ', 'ℑ', 'ℜ', '℘', '⊗', '⊕', '∅', '∩', '∪', '⊃', '⊇', '⊄', '⊂', '⊆', '∈', '∉',
    '∠', '∇', '®', '©', '™', '∏', '√', '⋅', '¬', '∧', '∨', '⇔', '⇐', '⇑', '⇒', '⇓',
    '◊', '〈', '®', '©', '™', '∑', '(', '\0', '(', '[', '\0', '[', '{', '{', '{', '|',
    '\0', '〉', '∫', '∫', '\0', '∫', ')', '\0', ')', ']', '\0', ']', '}', '}', '}',
];

/// The character with this code in the font Symbol.
fn symbol(code: u32) -> Option<char> {
    let found = match code {
        0x20..=0x7e => LOW[(code - 0x20) as usize],
        0xa0..=0xfe => HIGH[(code - 0xa0) as usize],
        _ => return None,
    };
    (found != '\0').then_some(found)
}

/// The character that a symbol element shows; `code` may carry the private-use offset U+F000.
pub fn element(font: Font, code: u32) -> Option<char> {
    let private = (0xf020..=0xf0ff).contains(&code);
    let low = if private { code - 0xf000 } else { code };
    match font {
        Font::Symbol => symbol(low).or_else(|| char::from_u32(code).filter(|_| !private && code > 0xff)),
        Font::Ordinary if private => char::from_u32(low),
        Font::Ordinary => char::from_u32(code).filter(|c| *c != '\0'),
        Font::Pictures => None,
    }
}

/// Appends text of a run in this font.
pub fn push(text: &str, font: Font, out: &mut String) {
    for c in text.chars() {
        let code = c as u32;
        let private = (0xf020..=0xf0ff).contains(&code);
        match font {
            Font::Symbol if private || (0x20..=0xff).contains(&code) => {
                out.extend(symbol(if private { code - 0xf000 } else { code }));
            }
            // Private-use characters come from Symbol nearly always, whatever the run says.
            Font::Ordinary if private => out.extend(symbol(code - 0xf000)),
            Font::Pictures if private || (0x21..=0xff).contains(&code) => {}
            _ => out.push(c),
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn read(text: &str, font: Font) -> String {
        let mut out = String::new();
        push(text, font, &mut out);
        out
    }

    #[test]
    fn letters_in_the_symbol_font_are_greek() {
        assert_eq!(read("c h b a m s r D", font("Symbol")), "χ η β α μ σ ρ Δ");
        assert_eq!(read("£³±´-»", Font::Symbol), "≤≥±×−≈");
        assert_eq!(read("\u{f063}\u{f0a3}\u{f02d}1", Font::Ordinary), "χ≤−1");
        assert_eq!(read("χ = 1", Font::Symbol), "χ = 1");
        assert_eq!(read("plot", Font::Ordinary), "plot");
        assert_eq!(read("\u{f0fc} J", font("Wingdings 2")), " ");
    }

    #[test]
    fn symbol_elements() {
        assert_eq!(element(Font::Symbol, 0xf063), Some('χ'));
        assert_eq!(element(Font::Symbol, 0x68), Some('η'));
        assert_eq!(element(Font::Ordinary, 0x2212), Some('\u{2212}'));
        assert_eq!(element(Font::Pictures, 0xf0fc), None);
    }
}
