//! *Names* that are run together with something else: a label (`bIndirect`, `zNBR`) or arguments before
//! a square (`χ₂₁²`).

use super::Scan;
use super::grammar::Class;
use super::spellings::Found;
use super::tokens::Kind;

/// Whether a word may be a letter with a label; false for nearly all.
pub(super) fn has_label(word: &str) -> bool {
    let b = word.as_bytes();
    let letter = if b[0].is_ascii() { 1 } else { 2 };
    b.len() >= letter + 3 && b[letter].is_ascii_uppercase()
}

impl Scan<'_> {
    /// A one-letter symbol with a label run together with it, as lowered labels come out of many
    /// formats: `bIndirect = .04`, `zNBR = -1.60`, `pHet = 0.02`.
    pub(super) fn labelled(&self, at: usize) -> Option<Found<'_>> {
        let word = self.word(at).filter(|w| has_label(w))?;
        // `MSbetween/MSwithin`
        if at > 0 && self.mark(at - 1) == Some("/") && self.tight(at) {
            return None;
        }
        let letter = word.chars().next()?;
        let label = &word[letter.len_utf8()..];
        if label.len() < 3 || !label.bytes().all(|b| b.is_ascii_alphabetic()) {
            return None;
        }
        let b = label.as_bytes();
        let named = b[0].is_ascii_uppercase() && b[1].is_ascii_lowercase();
        let initials = b.iter().all(u8::is_ascii_uppercase);
        if !named && !initials {
            return None;
        }
        let index = self
            .grammar
            .symbols
            .iter()
            .position(|s| s.labelled.contains(&letter))?;
        // `pCREB`, `MRNA`: proteins and the like.
        let class = self.grammar.symbols[index].class;
        let initials_fit = class == Class::Statistic && letter.is_lowercase();
        if !(named || initials && initials_fit) {
            return None;
        }
        let spelling = self.grammar.spellings.only(&[&word[..letter.len_utf8()]])?;
        self.comparator(at + 1, false)?;
        Some(Found {
            spelling,
            next: at + 1,
            rest: None,
        })
    }

    /// `χ₂₁²`: the df lowered before the square.
    pub(super) fn squared_behind(&self, at: usize) -> Option<Found<'_>> {
        let (lowered, raised) = (self.tokens.get(at + 1)?, self.tokens.get(at + 2)?);
        let fits = lowered.kind == Kind::Lowered
            && raised.kind == Kind::Raised
            && raised.text(self.text) == "²"
            && !lowered.spaced
            && !raised.spaced;
        if !fits {
            return None;
        }
        let spelling = self.grammar.spellings.only(&[self.shown(at)?, "2"])?;
        let takes_one = !self.grammar.symbols[spelling.meaning].arguments.is_empty();
        takes_one.then_some(Found {
            spelling,
            next: at + 3,
            rest: Some((lowered.start, lowered.end)),
        })
    }
}
