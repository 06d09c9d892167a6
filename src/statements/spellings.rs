//! *Spellings*: the ways of writing a symbol, a comparator or the name of an interval, as runs of
//! tokens, and the table that finds the longest one at a place in the text.

use super::tokens::{self, Kind, Token};
use std::collections::HashMap;
use std::hash::{BuildHasherDefault, Hasher};

/// A piece of a spelling.
#[derive(Debug)]
struct Piece {
    text: String,
    spaced: bool,
    digits: bool,
}

/// One way of writing something, as a run of tokens.
#[derive(Debug)]
pub struct Spelling {
    pieces: Vec<Piece>,
    exact: bool,
    /// What is meant: index into the table that the spelling belongs to.
    pub meaning: usize,
    pub plural: bool,
    /// Written out in words, so that words may follow as comparators.
    pub words: bool,
}

/// Spellings by their first piece, the longest first.
#[derive(Debug, Default)]
pub struct Spellings {
    by_head: HashMap<u64, Vec<Spelling>, BuildHasherDefault<AlreadyHashed>>,
    beginnings: Beginnings,
}

/// Which words something may begin with: a test that is false for nearly all other words, and costs
/// next to nothing for most of them.
#[derive(Debug)]
pub struct Beginnings {
    /// For each first byte in lower case, the lengths that words beginning with it have, as bits.
    lengths: [u32; 256],
    /// For each first byte, the last bytes of such words, as bits; all where other than ASCII is about.
    lasts: [u64; 256],
    /// One bit for each hash of a word, by its lowest bits.
    hashes: [u64; 256],
}

impl Default for Beginnings {
    fn default() -> Beginnings {
        Beginnings {
            lengths: [0; 256],
            lasts: [0; 256],
            hashes: [0; 256],
        }
    }
}

impl Beginnings {
    /// Lets a word through, in any capitals.
    pub fn add(&mut self, word: &str) {
        // Few letters have another length in other capitals; all lengths nearby are let through.
        let length = word.len().min(30);
        let near = if word.is_ascii() {
            length..=length
        } else {
            length.saturating_sub(1)..=length + 1
        };
        for byte in first_bytes(word) {
            for length in near.clone() {
                self.lengths[byte as usize] |= 1 << length;
            }
            self.lasts[byte as usize] |= match word.is_ascii() {
                true => last_bit(word),
                false => u64::MAX,
            };
        }
        let hash = head(word);
        self.hashes[(hash >> 6) as usize % 256] |= 1 << (hash % 64);
    }

    /// Lets through what another lets through.
    pub fn join(&mut self, other: &Beginnings) {
        for i in 0..256 {
            self.lengths[i] |= other.lengths[i];
            self.lasts[i] |= other.lasts[i];
            self.hashes[i] |= other.hashes[i];
        }
    }

    /// Whether a word may be one of those that were added.
    pub fn may_be(&self, word: &str) -> bool {
        self.head(word).is_some()
    }

    /// The key of a word that may be one of those that were added.
    fn head(&self, word: &str) -> Option<u64> {
        let byte = word.as_bytes().first().map_or(0, u8::to_ascii_lowercase) as usize;
        if self.lengths[byte] & (1 << word.len().min(31)) == 0 || self.lasts[byte] & last_bit(word) == 0 {
            return None;
        }
        let hash = head(word);
        (self.hashes[(hash >> 6) as usize % 256] & (1 << (hash % 64)) != 0).then_some(hash)
    }
}

/// The keys are hashes; hashing them again would be most of the work of a look-up.
#[derive(Default)]
pub struct AlreadyHashed(u64);

impl Hasher for AlreadyHashed {
    fn finish(&self) -> u64 {
        self.0
    }

    fn write(&mut self, bytes: &[u8]) {
        for b in bytes {
            self.0 = self.0.rotate_left(8) ^ u64::from(*b);
        }
    }

    fn write_u64(&mut self, key: u64) {
        self.0 = key;
    }
}

impl Spelling {
    pub fn new(exact: bool, meaning: usize, plural: bool, words: bool) -> Spelling {
        Spelling {
            pieces: Vec::new(),
            exact,
            meaning,
            plural,
            words,
        }
    }
}

/// A spelling found in the text.
pub struct Found<'a> {
    pub spelling: &'a Spelling,
    /// The token behind it.
    pub next: usize,
    /// Digits run together with the last digit of the spelling: `χ217` leaves `17`.
    pub rest: Option<(u32, u32)>,
}

impl Spellings {
    pub fn add(&mut self, text: &str, mut spelling: Spelling) -> Result<(), String> {
        let mut pieces = Vec::new();
        tokens::tokenize(text, 0, text.len(), &mut pieces);
        spelling.pieces = pieces
            .iter()
            .enumerate()
            .map(|(i, t)| Piece {
                text: fold(t.text(text), spelling.exact),
                spaced: t.spaced && i > 0,
                digits: matches!(t.kind, Kind::Number | Kind::Raised | Kind::Lowered),
            })
            .filter(|p| !matches!(p.text.as_str(), "^" | "_"))
            .collect();
        let Some(first) = spelling.pieces.first() else {
            return Err(format!("a spelling is empty: {text:?}"));
        };
        self.beginnings.add(&first.text);
        self.by_head.entry(head(&first.text)).or_default().push(spelling);
        Ok(())
    }

    pub fn sorted(mut self) -> Spellings {
        for list in self.by_head.values_mut() {
            list.sort_by_key(|s| {
                std::cmp::Reverse((
                    s.pieces.len(),
                    s.pieces.iter().map(|p| p.text.len()).sum::<usize>(),
                    s.exact,
                ))
            });
        }
        self
    }

    /// The spelling, capitals included, that consists of these pieces and nothing else.
    pub fn only(&self, pieces: &[&str]) -> Option<&Spelling> {
        let same = |s: &&Spelling| {
            s.exact
                && s.pieces
                    .iter()
                    .map(|p| p.text.as_str())
                    .eq(pieces.iter().copied())
        };
        self.by_head.get(&head(pieces.first()?))?.iter().find(same)
    }

    /// Which words a spelling may begin with.
    pub fn beginnings(&self) -> &Beginnings {
        &self.beginnings
    }

    /// The longest spelling that stands at token `at` and that `allow` accepts.
    pub fn at(
        &self,
        text: &str,
        tokens: &[Token],
        at: usize,
        allow: impl Fn(&Spelling) -> bool,
    ) -> Option<Found<'_>> {
        let first = tokens.get(at)?.text(text);
        let list = self.by_head.get(&self.beginnings.head(first)?)?;
        list.iter()
            .filter(|s| allow(s))
            .find_map(|s| s.matches(text, tokens, at))
    }
}

impl Spelling {
    fn matches(&self, text: &str, tokens: &[Token], at: usize) -> Option<Found<'_>> {
        let mut next = at;
        let mut rest = None;
        for (i, piece) in self.pieces.iter().enumerate() {
            // Typed-out raising and lowering: χ^2, η_p^2, R^{2}.
            while i > 0
                && tokens
                    .get(next)
                    .is_some_and(|t| !t.spaced && matches!(t.text(text), "^" | "_" | "{" | "}"))
            {
                next += 1;
            }
            let token = tokens.get(next)?;
            if i > 0 && token.spaced && !piece.spaced {
                return None;
            }
            let shown = token.text(text);
            let same = if piece.digits {
                match token.kind {
                    Kind::Number => {
                        let last = i + 1 == self.pieces.len();
                        if shown == piece.text {
                            true
                        } else if last && i > 0 && !token.spaced && shown.starts_with(&piece.text) {
                            rest = Some((token.start + piece.text.len() as u32, token.end));
                            true
                        } else {
                            false
                        }
                    }
                    Kind::Raised | Kind::Lowered => tokens::on_the_line(shown) == piece.text,
                    _ => false,
                }
            } else if self.exact || shown.len() == 1 && !shown.as_bytes()[0].is_ascii_alphabetic() {
                shown == piece.text
            } else {
                same_letters(shown, &piece.text)
            };
            if !same {
                return None;
            }
            next += 1;
        }
        if tokens.get(next).is_some_and(|t| !t.spaced && t.text(text) == "}") {
            next += 1;
        }
        Some(Found {
            spelling: self,
            next,
            rest,
        })
    }
}

fn fold(text: &str, exact: bool) -> String {
    if exact {
        tokens::on_the_line(text)
    } else {
        tokens::on_the_line(text).to_lowercase()
    }
}

/// Equal but for capitals; the second is in lower case.
fn same_letters(shown: &str, lower: &str) -> bool {
    if shown.is_ascii() {
        shown.eq_ignore_ascii_case(lower)
    } else {
        shown.chars().flat_map(char::to_lowercase).eq(lower.chars())
    }
}

/// The bytes that a text may begin with in any capitals, in lower case if ASCII.
fn first_bytes(text: &str) -> Vec<u8> {
    let Some(first) = text.chars().next() else {
        return Vec::new();
    };
    let mut bytes = Vec::new();
    let mut buffer = [0; 4];
    for c in first.to_lowercase().chain(first.to_uppercase()).chain([first]) {
        bytes.push(c.encode_utf8(&mut buffer).as_bytes()[0].to_ascii_lowercase());
    }
    bytes
}

/// The bit of a word's last byte, the same for all capitals.
fn last_bit(word: &str) -> u64 {
    match word.as_bytes().last() {
        Some(byte) if byte.is_ascii() => 1 << (byte.to_ascii_lowercase() % 64),
        _ => u64::MAX,
    }
}

/// A key that is the same for all capitalisations of a text.
fn head(text: &str) -> u64 {
    let mut hash: u64 = 0xcbf2_9ce4_8422_2325;
    let mut eat = |b: u8| {
        hash ^= u64::from(b);
        hash = hash.wrapping_mul(0x100_0000_01b3);
    };
    if text.is_ascii() {
        text.bytes().for_each(|b| eat(b.to_ascii_lowercase()));
    } else {
        let mut buffer = [0; 4];
        for c in text.chars().flat_map(char::to_lowercase) {
            c.encode_utf8(&mut buffer).bytes().for_each(&mut eat);
        }
    }
    hash
}

#[cfg(test)]
mod tests {
    use super::super::Grammar;
    use super::*;

    #[test]
    fn the_built_in_files_compile_and_no_spelling_has_two_meanings() {
        let grammar = Grammar::built_in();
        for list in grammar.spellings.by_head.values() {
            for (i, a) in list.iter().enumerate() {
                for b in &list[..i] {
                    let pieces = |s: &Spelling| {
                        s.pieces
                            .iter()
                            .map(|p| (p.text.clone(), p.spaced))
                            .collect::<Vec<_>>()
                    };
                    let same = pieces(a) == pieces(b) && a.exact == b.exact;
                    assert!(
                        !same || grammar.symbols[a.meaning].name == grammar.symbols[b.meaning].name,
                        "{:?} means {} and {}",
                        pieces(a),
                        grammar.symbols[a.meaning].name,
                        grammar.symbols[b.meaning].name
                    );
                }
            }
        }
    }

    #[test]
    fn spellings_match_whatever_way_digits_are_raised() {
        let grammar = Grammar::built_in();
        for text in ["χ2", "χ²", "χ^2", "χ^{2}", "chi-square", "Chi-Square", "X²"] {
            let mut t = Vec::new();
            tokens::tokenize(text, 0, text.len(), &mut t);
            let found = grammar
                .spellings
                .at(text, &t, 0, |_| true)
                .unwrap_or_else(|| panic!("{text}"));
            assert_eq!(grammar.symbols[found.spelling.meaning].name, "chi2", "{text}");
            assert_eq!(found.next, t.len(), "{text}");
        }
    }
}
