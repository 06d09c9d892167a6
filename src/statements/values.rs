//! *Values*: the printed number at a token, with its sign, grouping, decimal mark and power of ten.

use super::Scan;
use super::lists::List;
use super::tokens::{Kind, on_the_line};
use crate::numbers::Decimal;
use std::borrow::Cow;
use std::ops::Range;

/// A number as read.
#[derive(Clone, Debug)]
pub struct Value {
    pub number: Decimal,
    /// Byte range of sign and digits.
    pub span: Range<usize>,
    /// The token behind it.
    pub next: usize,
}

/// In which company a number stands; decides what a comma inside it means.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Company {
    /// Alone behind a comparator: a comma before exactly three digits groups thousands.
    Single,
    /// A whole number alone behind a comparator: a space or point may group thousands too.
    Whole,
    /// One of a list: commas separate, unless the manuscript writes decimal commas.
    List,
    /// The only number in a bracket that takes one: `t(1,150)`.
    Sole,
}

/// A number while it is read.
struct Digits<'t> {
    /// With a decimal point, and without what groups.
    shown: Cow<'t, str>,
    /// The byte behind it.
    end: usize,
    /// The token behind it.
    next: usize,
}

impl Scan<'_> {
    /// Reads the number at token `at`, signs included.
    pub fn value(&self, at: usize, company: Company) -> Option<Value> {
        // Whatever stands there, it is no digit; the quantity takes it for a doubtful sign.
        let at = at + usize::from(self.mark(at) == Some("\u{fffd}"));
        let first = self.tokens.get(at)?;
        if first.kind == Kind::Word && company == Company::Whole {
            return self.spelled_out(at);
        }
        // At most one sign; a typesetter's space may stand behind it.
        let sign = self.mark(at).filter(|m| matches!(*m, "-" | "+" | "–" | "−"));
        let mut digits = self.digits(at + usize::from(sign.is_some()))?;
        let exponent;
        if let Some(e) = digits.shown.find(['e', 'E']) {
            exponent = digits.shown[e + 1..].parse().ok()?;
            digits.shown.to_mut().truncate(e);
        } else {
            self.take_groups(&mut digits, company);
            if company == Company::Whole {
                self.take_spaced_groups(&mut digits);
            }
            exponent = self.take_power(&mut digits).unwrap_or(0);
        }
        // `1,2-dimethyl`, `3rd`, `2x2` and the like are parts of words.
        if self.tight(digits.next) && !self.may_follow_number(digits.next) {
            return None;
        }
        let negative = sign.is_some_and(|sign| sign != "+");
        Some(Value {
            number: Decimal::read(&digits.shown, negative, exponent)?,
            span: first.start as usize..digits.end,
            next: digits.next,
        })
    }

    /// The digits of the token at `at`, with a point where a middle dot stands.
    fn digits(&self, at: usize) -> Option<Digits<'_>> {
        let token = self.tokens.get(at).filter(|t| t.kind == Kind::Number)?;
        let shown = token.text(self.text);
        Some(Digits {
            shown: match shown.is_ascii() {
                true => Cow::Borrowed(shown),
                false => Cow::Owned(shown.replace('·', ".")),
            },
            end: token.end as usize,
            next: at + 1,
        })
    }

    /// Groups of thousands and decimal commas: `12,406`, `0,04`.
    fn take_groups(&self, digits: &mut Digits, company: Company) {
        while self.mark(digits.next) == Some(",")
            && self.tight(digits.next)
            && self.tight(digits.next + 1)
            && let Some(token) = self.tokens.get(digits.next + 1)
            && token.kind == Kind::Number
        {
            let part = token.text(self.text);
            let whole = |part: &str| part.bytes().all(|b| b.is_ascii_digit());
            if !part.starts_with(|c: char| c.is_ascii_digit()) {
                return;
            } else if self.groups(&digits.shown, part, company) {
                digits.shown.to_mut().push_str(part);
            } else if !digits.shown.contains('.')
                && whole(part)
                && self.comma_is_decimal(&digits.shown, part, company, digits.next + 2)
            {
                digits.shown.to_mut().push('.');
                digits.shown.to_mut().push_str(part);
            } else {
                return;
            }
            digits.end = token.end as usize;
            digits.next += 2;
        }
    }

    /// `12 406` with a thin space; `12.406` in a manuscript with decimal commas.
    fn take_spaced_groups(&self, digits: &mut Digits) {
        while let Some(token) = self.tokens.get(digits.next)
            && token.kind == Kind::Number
            && token.spaced
            && token.end - token.start == 3
            && token.text(self.text).bytes().all(|b| b.is_ascii_digit())
            && (1..=3).contains(&(digits.shown.len() % 4))
            && !digits.shown.contains('.')
            && !digits.shown.starts_with('0')
            && self
                .text
                .as_bytes()
                .get(token.end as usize)
                .is_none_or(|b| !b.is_ascii_alphanumeric())
        {
            digits.shown.to_mut().push_str(token.text(self.text));
            digits.end = token.end as usize;
            digits.next += 1;
        }
        if self.commas
            && let Some((whole, part)) = digits.shown.split_once('.')
            && part.len() == 3
            && (1..=3).contains(&whole.len())
        {
            digits.shown = Cow::Owned(format!("{whole}{part}"));
        }
    }

    /// The power of ten behind the digits, as in `3.4 × 10⁻⁶`, or with the 10 itself, as in `10⁻⁷`.
    fn take_power(&self, digits: &mut Digits) -> Option<i32> {
        let alone = (digits.shown == "10" && self.tight(digits.next))
            .then(|| self.exponent(digits.next, false))
            .flatten()
            .filter(|(power, _)| *power < 0);
        if alone.is_some() {
            digits.shown.to_mut().pop();
        }
        let (power, behind) = alone.or_else(|| self.power_of_ten(digits.next))?;
        digits.end = self.tokens[behind - 1].end as usize;
        digits.next = behind;
        Some(power)
    }

    /// A comma behind `shown` and before `part` groups thousands.
    fn groups(&self, shown: &str, part: &str, company: Company) -> bool {
        let whole_part = &part[..part.find('.').unwrap_or(part.len())];
        let sizes = whole_part.len() == 3 && !shown.contains('.') && !shown.starts_with('0');
        match company {
            Company::Single | Company::Whole => sizes && !self.commas,
            Company::Sole => sizes && !(self.commas && shown.len() <= 3 && part.len() != 3),
            Company::List => false,
        }
    }

    /// A comma between `shown` and `part` is a decimal mark. Token `behind` is behind the part.
    fn comma_is_decimal(&self, shown: &str, part: &str, company: Company, behind: usize) -> bool {
        // `0,04` can be nothing else; a longer run `0,1,2` is a list.
        let another = self.mark(behind) == Some(",")
            && self.tight(behind)
            && self.tight(behind + 1)
            && self.is_number(behind + 1);
        match company {
            Company::List => self.commas || shown == "0" && part.len() > 1 && !another,
            Company::Sole => self.commas && !another,
            Company::Single | Company::Whole => (self.commas || shown == "0" || part.len() != 3) && !another,
        }
    }

    /// Letters that may stand right behind a number: groups (`3.1a`), units, the name of an interval (`95CI`);
    /// but `2x2` and `3D` are names. Exponents were taken before.
    fn may_follow_number(&self, at: usize) -> bool {
        let Some(word) = self.word(at) else { return true };
        let letters = word.chars().count();
        !self.is(at, List::Dimensions)
            && (letters == 1
                || word.len() <= 3 && word.chars().all(char::is_lowercase)
                || self.is(at, List::Units)
                || self.interval_name(at).is_some())
    }

    /// `× 10⁻⁵`, `x 10^-6`, `× 10-6`, `·10^{-6}` at token `at`: the power and the token behind.
    fn power_of_ten(&self, at: usize) -> Option<(i32, usize)> {
        if !matches!(self.shown(at)?, "×" | "x" | "X" | "*" | "·" | "∙") || self.shown(at + 1)? != "10" {
            return None;
        }
        self.exponent(at + 2, true)
    }

    /// The exponent of a 10 at token `at`, and the token behind. `loose`: `-6` on the line will do.
    fn exponent(&self, at: usize, loose: bool) -> Option<(i32, usize)> {
        let mut i = at;
        let raised = self.tokens.get(i)?;
        if raised.kind == Kind::Raised {
            return Some((on_the_line(raised.text(self.text)).parse().ok()?, i + 1));
        }
        let caret = self.mark(i) == Some("^");
        if caret {
            i += 1;
        }
        let brace = self.mark(i) == Some("{");
        if brace {
            i += 1;
        }
        let negative = matches!(self.mark(i), Some("-" | "–"));
        if negative {
            i += 1;
        } else if !caret {
            return None;
        }
        if !caret && !loose {
            return None;
        }
        let digits: i32 = self.shown(i)?.parse().ok()?;
        i += 1;
        if brace && self.mark(i) == Some("}") {
            i += 1;
        }
        Some((if negative { -digits } else { digits }, i))
    }

    /// A token stands at `at`, and no space before it.
    pub(super) fn tight(&self, at: usize) -> bool {
        self.tokens.get(at).is_some_and(|t| !t.spaced)
    }

    /// A number stands at token `at`, without its sign.
    pub(super) fn is_number(&self, at: usize) -> bool {
        self.tokens.get(at).is_some_and(|t| t.kind == Kind::Number)
    }

    /// The token at `at` has a decimal point.
    pub(super) fn has_decimals(&self, at: usize) -> bool {
        self.shown(at).is_some_and(|shown| shown.contains(['.', '·']))
    }

    /// The text of a token.
    pub fn shown(&self, at: usize) -> Option<&str> {
        self.tokens.get(at).map(|t| t.text(self.text))
    }

    /// The text of a token that is a mark.
    pub fn mark(&self, at: usize) -> Option<&str> {
        self.tokens
            .get(at)
            .filter(|t| t.kind == Kind::Mark)
            .map(|t| t.text(self.text))
    }

    /// The text of a token that is a word.
    pub fn word(&self, at: usize) -> Option<&str> {
        self.tokens
            .get(at)
            .filter(|t| t.kind == Kind::Word)
            .map(|t| t.text(self.text))
    }
}

/// Whether a manuscript writes its decimals with commas: more numbers behind comparators do than don't.
pub fn writes_decimal_commas(text: &str) -> bool {
    let bytes = text.as_bytes();
    let (mut commas, mut points) = (0usize, 0usize);
    for at in memchr::memchr3_iter(b'=', b'<', b'>', bytes) {
        let mut i = at + 1;
        while i < bytes.len() && matches!(bytes[i], b' ' | b'-') {
            i += 1;
        }
        let digits = bytes[i.min(bytes.len())..]
            .iter()
            .take_while(|b| b.is_ascii_digit())
            .count();
        i += digits;
        let behind = bytes
            .get(i + 1..)
            .unwrap_or(&[])
            .iter()
            .take_while(|b| b.is_ascii_digit())
            .count();
        match bytes.get(i) {
            Some(b'.') if behind > 0 => points += 1,
            // Three digits behind a number other than 0 may be thousands.
            Some(b',') if digits > 0 && behind > 0 && (behind != 3 || bytes[i - digits] == b'0') => {
                commas += 1
            }
            _ => {}
        }
    }
    commas > points
}

#[cfg(test)]
mod tests {
    use super::super::{Grammar, tokens};
    use super::*;

    fn read(text: &str, company: Company, commas: bool) -> Option<(String, String)> {
        let mut t = Vec::new();
        tokens::tokenize(text, 0, text.len(), &mut t);
        let scan = Scan {
            text,
            tokens: &t,
            grammar: Grammar::built_in(),
            commas,
            alpha: 0.05,
            medians: false,
            cell: false,
            words: Default::default(),
        };
        scan.value(0, company)
            .map(|v| (v.number.to_string(), text[v.span].to_string()))
    }

    #[test]
    fn numbers_as_people_print_them() {
        use Company::*;
        for (text, company, commas, number, printed) in [
            (".036", Single, false, "0.036", ".036"),
            ("-0.31", Single, false, "-0.31", "-0.31"),
            ("- 0.31)", Single, false, "-0.31", "- 0.31"),
            ("12,406 people", Single, false, "12406", "12,406"),
            ("1,294,221", Single, false, "1294221", "1,294,221"),
            ("12 406 people", Whole, false, "12406", "12 406"),
            ("0,04", Single, false, "0.04", "0,04"),
            ("3,21", Single, true, "3.21", "3,21"),
            ("1,85; 3", List, true, "1.85", "1,85"),
            ("1,52", List, false, "1", "1"),
            ("1,150)", Sole, false, "1150", "1,150"),
            ("0·021", Single, false, "0.021", "0·021"),
            ("3.4 × 10⁻⁶", Single, false, "0.0000034", "3.4 × 10⁻⁶"),
            ("3.4 × 10-6", Single, false, "0.0000034", "3.4 × 10-6"),
            ("3.4 x 10^-6", Single, false, "0.0000034", "3.4 x 10^-6"),
            ("3·10^{-2}", Single, false, "0.03", "3·10^{-2}"),
            ("4.1e-06", Single, false, "0.0000041", "4.1e-06"),
            ("3.1a", Single, false, "3.1", "3.1"),
        ] {
            let (n, p) = read(text, company, commas).unwrap_or_else(|| panic!("{text} is a number"));
            assert_eq!((n.as_str(), p.as_str()), (number, printed), "{text}");
        }
        assert!(read("2x2", Single, false).is_none());
        assert!(read("3D", Single, false).is_none());
    }

    #[test]
    fn the_manuscript_decides_what_a_comma_is() {
        assert!(writes_decimal_commas("rho = 0,182; p = 0,04"));
        assert!(!writes_decimal_commas("N = 12,406, p = .04"));
        assert!(!writes_decimal_commas("F(1,24) = 3.2"));
    }
}
