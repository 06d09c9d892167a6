//! *Two groups* and their test: what means, SDs and sizes leave for a statistic that compares them.

use super::laws::{ByRange, COUNTS, POSITIVE};
use super::reading::Test;
use super::samples::Sample;
use super::{Case, Law};
use crate::numbers::{Interval, Set};

/// Means, however large.
const ANY: Interval = Interval {
    low: -1e12,
    high: 1e12,
};

/// How far the printed degrees of freedom may be from a whole formula and still be that.
const DF_SLACK: f64 = 1e-9;

/// Two described groups and the one test that compares them.
pub(super) struct Pair {
    pub a: Sample,
    pub b: Sample,
    pub sds: (usize, usize),
    /// Both sizes, if both are printed with their groups.
    pub sizes: Option<(usize, usize)>,
    /// The only t of the sentence, if it stands in the statement that is judged.
    pub test: Option<Test>,
}

/// How the two groups can belong together, by their sizes and the degrees of freedom.
#[derive(Clone, Copy, Debug, Default)]
pub(super) struct Design {
    /// Two groups and Student's test.
    pub student: bool,
    /// Two groups and Welch's test.
    pub welch: bool,
    /// The same persons twice.
    pub paired: bool,
}

impl Case<'_> {
    /// The only two groups of the sentence, both with a mean and an SD, where no more than one test stands
    /// in it.
    pub(super) fn two_groups(&self) -> Option<Pair> {
        let samples = self.samples();
        let [a, b] = <[Sample; 2]>::try_from(samples).ok()?;
        let sds = (a.sd?, b.sd?);
        let tests = |symbol: &str| matches!(symbol, "t" | "F" | "z" | "U" | "W" | "H" | "chi2");
        let elsewhere = self.linked.iter().any(|l| tests(l.quantity.symbol));
        if elsewhere {
            return None;
        }
        let mut own = self.tests().into_iter().filter(|t| !t.secondary());
        let test = match (own.next(), own.next()) {
            (Some(test), None) if test.symbol == "t" => Some(test),
            (None, _) => None,
            _ => return None,
        };
        Some(Pair {
            sizes: a.n.zip(b.n),
            a,
            b,
            sds,
            test,
        })
    }
}

impl Pair {
    pub fn design(&self, case: &Case) -> Design {
        let at = |i: usize| case.quantity(i).interval;
        let df = self.test.as_ref().and_then(|t| t.df).map(at);
        let Some((n1, n2)) = self.sizes.map(|(a, b)| (at(a), at(b))) else {
            // With the degrees of freedom alone nothing can be excluded.
            return Design {
                student: true,
                welch: true,
                paired: true,
            };
        };
        let sum = n1.low + n2.low - 2.0;
        match df {
            None => Design {
                student: true,
                welch: true,
                paired: n1 == n2,
            },
            Some(df) => Design {
                student: (df.low - sum).abs() < DF_SLACK && df.low == df.high,
                // Welch's degrees of freedom lie between the smaller n − 1 and N − 2, and are printed whole
                // by some.
                welch: df.low <= sum + 0.5 && df.high >= n1.low.min(n2.low) - 1.5,
                paired: n1 == n2 && df.meets(Interval::point(n1.low - 1.0)),
            },
        }
    }
}

/// The size of the difference between two means.
pub(super) fn difference(a: Interval, b: Interval) -> Interval {
    a.minus(b).abs()
}

/// |difference| / scale, for the smallest and the largest scale.
pub(super) fn over(difference: Interval, scale: Interval) -> Interval {
    Interval {
        low: if scale.high > 0.0 {
            difference.low / scale.high
        } else {
            0.0
        },
        high: if scale.low > 0.0 {
            difference.high / scale.low
        } else {
            f64::INFINITY
        },
    }
    .widen(1e-12)
}

/// The law that the size of the first part lies in a range which the others give: parts are the
/// statistic, M and SD of either group, and what else `range` wants.
pub(super) fn sized(
    more: usize,
    range: impl Fn(&[Interval]) -> Option<Interval> + Send + Sync + 'static,
) -> Box<dyn Law> {
    let mut domains = vec![POSITIVE, ANY, POSITIVE, ANY, POSITIVE];
    domains.resize(5 + more, COUNTS);
    Box::new(Size {
        law: ByRange { range, domains },
    })
}

/// Only the size of the first part counts; its sign says which group was taken first.
struct Size<R> {
    law: ByRange<R>,
}

impl<R> Law for Size<R>
where
    R: Fn(&[Interval]) -> Option<Interval> + Send + Sync,
{
    fn solve(&self, target: usize, values: &[Interval]) -> Set {
        let mut values = values.to_vec();
        values[0] = values[0].abs();
        let found = self.law.solve(target, &values);
        if target > 0 {
            return found;
        }
        found.into_iter().flat_map(Interval::both_signs).collect()
    }
}
