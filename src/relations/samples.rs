//! *Samples*: the groups that a test compares, each with its mean, SD and size, read from the
//! statement itself and from those in the same sentence.

use super::Case;
use std::ops::Range;

/// One group as it is described; all numbers are indexes as [`Case::quantity`] takes them.
#[derive(Clone, Debug)]
pub(super) struct Sample {
    pub mean: usize,
    pub sd: Option<usize>,
    pub se: Option<usize>,
    pub n: Option<usize>,
    /// Stands in the statement that is judged, not in one beside it.
    pub own: bool,
}

impl Case<'_> {
    /// Every mean with what is reported with it, in the order of the text.
    pub(super) fn samples(&self) -> Vec<Sample> {
        let mut samples = Vec::new();
        for (range, own) in self.units() {
            let means: Vec<usize> = range
                .clone()
                .filter(|i| self.quantity(*i).symbol == "M" && self.own(*i))
                .collect();
            for (k, &mean) in means.iter().enumerate() {
                let until = means.get(k + 1).copied().unwrap_or(range.end);
                let behind = |symbol: &str| {
                    (mean + 1..until).find(|i| self.own(*i) && self.quantity(*i).symbol == symbol)
                };
                // `n = 30, M = 3.12`: the size may also stand before the only mean.
                let before = || {
                    (means.len() == 1)
                        .then(|| (range.start..mean).find(|i| self.quantity(*i).symbol == "n"))
                        .flatten()
                };
                samples.push(Sample {
                    mean,
                    sd: behind("SD"),
                    se: behind("SE"),
                    n: behind("n").or_else(before),
                    own,
                });
            }
        }
        samples.sort_by_key(|s| self.quantity(s.mean).span.start);
        samples
    }

    /// The index ranges of the statements in view, the judged one first; `true` for it.
    pub(super) fn units(&self) -> Vec<(Range<usize>, bool)> {
        let own = self
            .quantities
            .iter()
            .take_while(|q| q.borrowed.is_none())
            .count();
        let first = self.quantities.len();
        let mut units = vec![(0..own, true)];
        let mut start = 0;
        for end in 1..=self.linked.len() {
            let breaks =
                end == self.linked.len() || self.linked[end].statement != self.linked[start].statement;
            if breaks {
                units.push((first + start..first + end, false));
                start = end;
            }
        }
        units
    }
}
