//! *Agreement*: which names the text layer may have for a glyph of a given look. The same bar is a
//! hyphen in one font, a dash in the next and a minus in the third, and a cross of two strokes may
//! be an `x`: there the layer knows better. Only a name that no glyph of this look has is wrong.

use super::marks::Mark;
use crate::readers::pdf::glyphs::Meaning;

/// The character that a meaning comes to; `None` if the layer says nothing or more than one.
pub fn single(meaning: &Meaning) -> Option<char> {
    match meaning {
        Meaning::Char(c) => Some(*c),
        Meaning::Many(s) => {
            let mut inked = s.chars().filter(|c| !c.is_whitespace() && !is_nothing(*c));
            match (inked.next(), inked.next()) {
                (Some(c), None) => Some(c),
                // Several characters in one glyph are a ligature, which no outline here is.
                (Some(_), Some(_)) => Some(LIGATURE),
                _ => None,
            }
        }
        Meaning::Unknown => None,
    }
}

/// Stands for several characters in one glyph.
const LIGATURE: char = 'ﬁ';

/// A character that says nothing of how its glyph looks.
pub fn is_nothing(c: char) -> bool {
    c.is_control()
        || matches!(c,
            '\u{ad}' | '\u{200b}'..='\u{200f}' | '\u{202a}'..='\u{202e}' | '\u{2060}'..='\u{2064}'
            | '\u{e000}'..='\u{f8ff}' | '\u{feff}' | '\u{fff0}'..='\u{ffff}' | '\u{f0000}'..='\u{10ffff}')
}

/// What kind of thing the layer says.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Said {
    /// Nothing at all, or a code without a meaning.
    Nothing,
    /// A letter or digit of ASCII.
    Plain,
    /// The upper half of Latin-1, where home-made encodings land.
    Upper,
    Other,
}

impl Said {
    pub fn of(said: Option<char>) -> Said {
        match said {
            None => Said::Nothing,
            Some(c) if is_nothing(c) => Said::Nothing,
            Some(c) if c.is_ascii_alphanumeric() => Said::Plain,
            Some('\u{a1}'..='\u{ff}') => Said::Upper,
            Some(_) => Said::Other,
        }
    }
}

/// Whether a glyph that is said to be this may be a Greek letter: nothing in the layer's word speaks
/// for it, or it lies where home-made encodings put their letters.
pub fn may_hide_letter(said: Option<char>) -> bool {
    match Said::of(said) {
        Said::Nothing => true,
        Said::Plain => said.is_some_and(|c| c.is_ascii_alphabetic()),
        Said::Upper => !said.is_some_and(|c| "µçþßøØ×æœ¤".contains(c)),
        Said::Other => false,
    }
}

/// The plain form of old-style digits and small capitals, which have names of their own in the
/// private use area (Adobe's corporate use subarea).
pub fn plain(c: char) -> Option<char> {
    let low = (c as u32).checked_sub(0xf700).and_then(char::from_u32)?;
    matches!(low, '0'..='9' | 'a'..='z' | '!' | '$' | '&' | '?').then_some(low)
}

/// Scripts whose characters may look like any mark, and ligatures: nothing is compared.
pub fn beyond_doubt(c: char) -> bool {
    c == LIGATURE || c >= '\u{370}' && c.is_alphabetic() && !is_nothing(c) && !is_greek(c)
}

fn is_greek(c: char) -> bool {
    ('\u{370}'..='\u{3ff}').contains(&c)
}

pub fn is_dash(mark: Mark) -> bool {
    matches!(mark, Mark::Hyphen | Mark::Minus | Mark::EnDash | Mark::EmDash)
}

/// Whether an outline that is this mark shows that the layer is wrong.
pub fn contradicts(mark: Mark, said: Option<char>) -> bool {
    let kind = Said::of(said);
    let Some(c) = said.filter(|_| kind != Said::Nothing) else {
        return true;
    };
    if names(mark).contains(c) || c == mark.char() {
        return false;
    }
    match mark {
        // Box drawing, arrows, geometry and scripts that are beyond doubt may be drawn like these.
        Mark::Hyphen
        | Mark::Minus
        | Mark::EnDash
        | Mark::EmDash
        | Mark::Equal
        | Mark::Less
        | Mark::Greater
        | Mark::AtMost
        | Mark::AtLeast
        | Mark::Plus
        | Mark::PlusMinus
        | Mark::Times
        | Mark::Almost => {
            !matches!(c, '\u{2190}'..='\u{21ff}' | '\u{2300}'..='\u{27bf}' | '\u{27f0}'..='\u{28ff}')
                && !is_greek(c)
        }
        // What else has one dot on the line?
        Mark::Point => kind == Said::Plain || kind == Said::Upper || matches!(c, ':' | ';' | '='),
        // These outlines are less telling, and letters come near to some of them.
        Mark::Tilde
        | Mark::MiddleDot
        | Mark::Bullet
        | Mark::Colon
        | Mark::Slash
        | Mark::Percent
        | Mark::Open
        | Mark::Close
        | Mark::OpenSquare
        | Mark::CloseSquare
        | Mark::Star
        | Mark::Dagger
        | Mark::DoubleDagger => kind == Said::Upper,
    }
}

/// What glyphs that look like the mark may be called.
fn names(mark: Mark) -> &'static str {
    match mark {
        Mark::Hyphen | Mark::Minus | Mark::EnDash | Mark::EmDash => {
            "-‐‑‒–—―−_¯ˉˍ‾⁃⁻₋﹘﹣－─━╌╴╶ㅡー一¬~\u{304}\u{305}\u{331}\u{332}⎯⏤'|·⋅"
        }
        Mark::Equal => "=═゠＝⹀˭꞊≡≑≐≒≓≔≕≖≗≘≙≚≛≜≝≞≟‗〓二ニ∥\u{333}\"",
        Mark::Less => "<‹〈⟨〈＜﹤⪡≺≪⋖⊰∠ᐸくㄑ˂⁌≮",
        Mark::Greater => ">›〉⟩〉＞﹥⪢≻≫⋗⊱ᐳ˃⁍Σ∑≯",
        Mark::AtMost => "≤⩽≦⪕⪙≲⋜⊴⪯≼≨⪇⊑<",
        Mark::AtLeast => "≥⩾≧⪖⪚≳⋝⊵⪰≽≩⪈⊒>",
        Mark::Plus => "+＋﹢➕✚┼⁺₊†✝十᛭⵿⊹∔˖⨁⊕♱✙",
        Mark::PlusMinus => "±∓⩲⩱⨦",
        Mark::Times => "×xXχΧхХ✕✖✗✘☓⨯⨉╳*∗⤫⤬ˣₓ·⋅⊗Ҳ",
        Mark::Almost => "≈≋≃≅∽~〰≊",
        Mark::Tilde => "~∼˜∽∿∾～〜﹏\u{303}¬",
        Mark::Point | Mark::MiddleDot | Mark::Bullet => {
            ".·•∙⋅˙․‧▪■●∎◾◼⚫⬤⏺,'`´’‘‚¨°*…¸\u{307}\u{323}・｡。．◦○□◻◽⦁⋆\u{b7}\u{2024}!?-"
        }
        Mark::Colon => ":∶˸ː：꞉¨‥÷;",
        Mark::Slash => "/⁄∕╱⧸／|ı¹´'′,¸¦",
        Mark::Percent => "%٪％﹪‰",
        Mark::Open => "(⟮❨（﹙⁽₍⎛⎜⎝⦅¸",
        Mark::Close => ")⟯❩）﹚⁾₎⎞⎟⎠⦆",
        Mark::OpenSquare => "[⟦［⎡⎢⎣⌈⌊「『¬",
        Mark::CloseSquare => "]⟧］⎤⎥⎦⌉⌋」』¬",
        Mark::Star => "*∗⁎★☆✱✶⋆✻✲✳＊﹡٭°º¤×",
        Mark::Dagger => "†✝+⸸ϯ",
        Mark::DoubleDagger => "‡⹋#",
    }
}
