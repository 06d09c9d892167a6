//! *Context* repairs what no outline can: characters that a text has instead of others (`v2(1) ¼ 60`).
//! The rules are in `grammars/glyphs.toml`. A rule applies only where a text shows it in several
//! places and nowhere has the right character itself; then it applies to all of them. The manuscript
//! keeps its text: statements are found in a repaired copy, and their places carried back.

use super::expressions::Expression;
use super::{Doubt, Grammar, Statement};
use crate::numbers::Comparator;
use std::borrow::Cow;
use std::ops::Range;

/// One character that texts may have others for.
#[derive(Debug)]
pub(super) struct Glyph {
    pub read: String,
    pub impostors: Vec<Impostor>,
    pub unless: Expression,
    pub least: usize,
    /// Another comparator that may be meant behind p.
    pub or: Option<Comparator>,
}

/// What may be written for it.
#[derive(Debug)]
pub(super) struct Impostor {
    pub written: String,
    pub places: Expression,
    /// `None` where any place will do.
    pub proof: Option<Expression>,
}

/// A place that is read anew.
#[derive(Clone, Debug)]
struct Reading {
    /// Where it stands in the text and in the repaired copy.
    old: Range<usize>,
    new: Range<usize>,
    /// Index of the [`Glyph`].
    rule: usize,
}

/// The text in which statements are found.
pub(super) struct Context<'t> {
    pub text: Cow<'t, str>,
    /// In the order of the text.
    readings: Vec<Reading>,
}

impl<'t> Context<'t> {
    /// Applies the rules that the text gives reason for.
    pub fn of(text: &'t str, grammar: &Grammar) -> Context<'t> {
        let mut context = Context {
            text: Cow::Borrowed(text),
            readings: Vec::new(),
        };
        for (rule, glyph) in grammar.glyphs.iter().enumerate() {
            // One impostor for each character.
            let known = |r: &Reading| grammar.glyphs[r.rule].read == glyph.read;
            if context.readings.iter().any(known) {
                continue;
            }
            let places = context.places(glyph);
            if !places.is_empty() {
                context.read_anew(&places, rule, &glyph.read);
            }
        }
        context
    }

    /// Where the rule applies; nowhere without enough evidence.
    fn places(&self, glyph: &Glyph) -> Vec<Range<usize>> {
        let text = self.text.as_ref();
        let stands = |i: &&Impostor| memchr::memmem::find(text.as_bytes(), i.written.as_bytes()).is_some();
        let mut written = glyph.impostors.iter().filter(stands).peekable();
        if written.peek().is_none() || glyph.unless.is_match(text) {
            return Vec::new();
        }
        let least = if self.readings.is_empty() { glyph.least } else { 1 };
        // Alternatives have the group under names of their own.
        let group = |c: regex::Captures| c.iter().skip(1).flatten().next().map(|g| g.range());
        written
            .filter(|i| i.proof.as_ref().is_none_or(|p| p.is_match(text)))
            .map(|i| i.places.captures_all(text).filter_map(group).collect())
            .find(|places: &Vec<Range<usize>>| places.len() >= least)
            .unwrap_or_default()
    }

    /// Puts `read` in place of what stands at these places.
    fn read_anew(&mut self, places: &[Range<usize>], rule: usize, read: &str) {
        let mut text = String::with_capacity(self.text.len());
        let mut readings = Vec::with_capacity(self.readings.len() + places.len());
        let mut before = std::mem::take(&mut self.readings).into_iter().peekable();
        let mut done = 0;
        // What a place of the present text was in the manuscript, and how far the copy has moved.
        let (mut to_old, mut moved) = (0isize, 0isize);
        let shift = |at: usize, by: isize| at.wrapping_add_signed(by);
        for place in places {
            while let Some(mut r) = before.next_if(|r| r.new.end <= place.start) {
                to_old = r.old.end as isize - r.new.end as isize;
                r.new = shift(r.new.start, moved)..shift(r.new.end, moved);
                readings.push(r);
            }
            text.push_str(&self.text[done..place.start]);
            let start = text.len();
            text.push_str(read);
            readings.push(Reading {
                old: shift(place.start, to_old)..shift(place.end, to_old),
                new: start..text.len(),
                rule,
            });
            moved = text.len() as isize - place.end as isize;
            done = place.end;
        }
        for mut r in before {
            r.new = shift(r.new.start, moved)..shift(r.new.end, moved);
            readings.push(r);
        }
        text.push_str(&self.text[done..]);
        self.text = Cow::Owned(text);
        self.readings = readings;
    }

    /// A range of the manuscript's text in the repaired copy.
    pub fn range(&self, old: &Range<usize>) -> Range<usize> {
        let carry = |at: usize| {
            let passed = self.readings.partition_point(|r| r.old.end <= at);
            match passed.checked_sub(1).map(|i| &self.readings[i]) {
                Some(r) => r.new.end + (at - r.old.end),
                None => at,
            }
        };
        carry(old.start)..carry(old.end)
    }

    /// A range of the repaired copy in the manuscript's text.
    fn back(&self, new: &Range<usize>) -> Range<usize> {
        let carry = |at: usize| {
            let passed = self.readings.partition_point(|r| r.new.end <= at);
            match passed.checked_sub(1).map(|i| &self.readings[i]) {
                Some(r) => r.old.end + (at - r.new.end),
                None => at,
            }
        };
        carry(new.start)..carry(new.end)
    }

    /// Carries statements back to the manuscript's text and marks what rests on a reading.
    pub fn carry_back(&self, statements: &mut [Statement], grammar: &Grammar, original: &str) {
        if self.readings.is_empty() {
            return;
        }
        for s in statements {
            // A reading belongs to the first number that ends behind it.
            let mut order: Vec<usize> = (0..s.quantities.len()).collect();
            order.sort_by_key(|i| s.quantities[*i].span.end);
            let mut from = s.range.start;
            for i in order {
                let q = &mut s.quantities[i];
                let own = |r: &&Reading| r.new.start >= from && r.new.end <= q.span.end;
                let mut notes: Vec<String> = Vec::new();
                for reading in self.readings.iter().filter(own) {
                    let rule = &grammar.glyphs[reading.rule];
                    let note = format!(
                        "`{}` read as `{}` by context",
                        &original[reading.old.clone()],
                        rule.read
                    );
                    if !notes.contains(&note) {
                        notes.push(note);
                    }
                    if let (Some(or), "p", Comparator::Equal) = (rule.or, q.symbol, q.comparator) {
                        q.interval = q.interval.hull(or.interval(&q.number, false));
                    }
                }
                from = q.span.end;
                if !notes.is_empty() {
                    q.doubt = Doubt {
                        by_context: Some(notes.join(", ")),
                        ..q.doubt.clone()
                    };
                }
                q.span = self.back(&q.span);
            }
            s.range = self.back(&s.range);
            s.sentence = self.back(&s.sentence);
        }
    }
}

/// What was read by context in a manuscript, for the person.
pub fn by_context(statements: &[Statement]) -> Option<String> {
    let mut notes: Vec<(&str, usize)> = Vec::new();
    let all = statements.iter().flat_map(|s| &s.quantities);
    for note in all.filter_map(|q| q.doubt.by_context.as_deref()) {
        match notes.iter_mut().find(|n| n.0 == note) {
            Some(known) => known.1 += 1,
            None => notes.push((note, 1)),
        }
    }
    let shown: Vec<String> = notes.iter().map(|(note, n)| format!("{note} ({n}×)")).collect();
    (!shown.is_empty()).then(|| {
        format!(
            "the text has some characters instead of others, so check what is found against the original: {}",
            shown.join("; ")
        )
    })
}

#[cfg(test)]
mod tests {
    use super::super::find;
    use super::*;
    use crate::manuscript::{BlockKind, Builder, Format, Manuscript};

    fn manuscript(paragraphs: &[&str]) -> Manuscript {
        let mut b = Builder::new(Format::Text);
        for text in paragraphs {
            b.open(BlockKind::Paragraph);
            b.text(text);
        }
        b.finish()
    }

    fn read(paragraphs: &[&str]) -> Vec<String> {
        let m = manuscript(paragraphs);
        let found = find(&m, Grammar::built_in(), 0.05);
        let show = |s: &Statement| {
            let parts = s.quantities.iter();
            let parts = parts.map(|q| format!("{} {} {}", q.symbol, q.comparator.sign(), q.printed));
            parts.collect::<Vec<_>>().join("; ")
        };
        found.iter().map(show).collect()
    }

    #[test]
    fn a_quarter_is_an_equals_sign_where_several_places_show_it() {
        let text = [
            "Crops differed, v2(1) ¼ 6.83, p b :01.",
            "Beds did, F(8, 42) ¼ 3.12, p ¼ :007, Zp 2 ¼ :37.",
        ];
        assert_eq!(
            read(&text),
            [
                "chi2 = 6.83; df = 1; p < .01",
                "F = 3.12; df1 = 8; df2 = 42; p = .007; eta2p = .37"
            ]
        );
    }

    #[test]
    fn a_digit_is_a_sign_only_where_no_text_has_the_sign_itself() {
        let lies = ["Beds differed, F(8, 42) 5 33.12, p 5 .03, and t(52) 5 2.88, P50.001."];
        assert_eq!(
            read(&lies),
            [
                "F = 33.12; df1 = 8; df2 = 42; p = .03",
                "t = 2.88; df = 52; p = 0.001"
            ]
        );
        let once = ["Beds differed, t(52) = 2.88, p = .006. Bed p 5 .03, p 5 .04, p 5 .05 was dry."];
        assert_eq!(read(&once), ["t = 2.88; df = 52; p = .006"]);
        assert!(read(&["Of cans p 5 .03 is one place only."]).is_empty());
        assert!(read(&["Take 1¼ cans (2 ¼ 3) and 5 spades, bed b .01, N .05."]).is_empty());
    }

    #[test]
    fn places_and_doubts_are_those_of_the_manuscript() {
        let m = manuscript(&["Ünlike, v2(1) ¼ 6.83, p ¼ .009; and t(52) ¼ 2.88, p ¼ .006."]);
        let found = find(&m, Grammar::built_in(), 0.05);
        assert_eq!(&m.text[found[0].range.clone()], "v2(1) ¼ 6.83, p ¼ .009");
        for q in found.iter().flat_map(|s| &s.quantities) {
            assert_eq!(&m.text[q.span.clone()], q.printed);
        }
        let p = found[1].quantities.last().expect("a p");
        assert_eq!(p.doubt.by_context.as_deref(), Some("`¼` read as `=` by context"));
        assert!(by_context(&found).is_some());
    }

    #[test]
    fn a_sign_that_may_be_another_covers_both() {
        let m = manuscript(&["Beds differed, F(8, 42) 5 33.12, P 5 .03, and t(52) 5 2.88, P50.001, P50.01."]);
        let found = find(&m, Grammar::built_in(), 0.05);
        let p = found
            .iter()
            .flat_map(|s| &s.quantities)
            .filter(|q| q.symbol == "p");
        assert!(p.clone().count() >= 2);
        for p in p {
            assert!(p.interval.low <= 0.0 && p.interval.high < 0.05, "{p:?}");
        }
    }
}
