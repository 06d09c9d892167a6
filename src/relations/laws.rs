//! Shapes of *laws* that several relations share.

use super::Law;
use super::search::{MOST, falling, open_ended, rising, scan};
use crate::distributions::{ACCURACY, SMALLEST};
use crate::numbers::{Interval, Set};

/// Values that a probability can have.
pub(super) const UNIT: Interval = Interval { low: 0.0, high: 1.0 };

/// Widens a range of p by the promised error and keeps it inside 0 … 1.
pub(super) fn probability(low: f64, high: f64) -> Interval {
    Interval {
        low: if low < SMALLEST {
            0.0
        } else {
            low * (1.0 - ACCURACY)
        },
        high: (high * (1.0 + ACCURACY)).clamp(SMALLEST, 1.0),
    }
}

/// Which tail a p is about.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Side {
    Both,
    Upper,
    Lower,
}

/// p of a statistic with at most one argument. Parts: p, the statistic, and its degrees of freedom
/// (or sample size) if it has any.
#[derive(Clone, Copy)]
pub(super) struct TailLaw {
    /// Two-sided p (χ²: upper tail) for a statistic ≥ 0 and degrees of freedom > 0; it never rises
    /// with the statistic and is monotone in the degrees of freedom.
    pub tail: fn(f64, f64) -> Option<f64>,
    pub rises_with_df: bool,
    /// Whether the statistic has a sign.
    pub signed: bool,
    /// Largest size of the statistic.
    pub largest: f64,
    /// The third part less this is the argument of `tail`.
    pub less: Interval,
    pub side: Side,
}

impl TailLaw {
    /// p at one point, for a statistic turned so that p falls with it. Unknown becomes `otherwise`,
    /// the end that makes the range widest.
    fn at(&self, turned: f64, df: f64, otherwise: f64) -> f64 {
        let known = (self.tail)(turned.abs().min(self.largest), df);
        // On the far side of 0 the one-sided p falls where the two-sided one rises.
        let far = self.side != Side::Both && turned < 0.0;
        let p = known.unwrap_or(if far { 1.0 - otherwise } else { otherwise });
        match self.side {
            Side::Both => p,
            _ if turned >= 0.0 => 0.5 * p,
            _ => 1.0 - 0.5 * p,
        }
    }

    fn turned(&self, statistic: Interval) -> Interval {
        let size = Interval {
            low: -self.largest,
            high: self.largest,
        };
        let inside = statistic.meet(size).unwrap_or(size);
        match self.side {
            Side::Both => inside.abs(),
            Side::Upper => inside,
            Side::Lower => inside.negate(),
        }
    }

    fn df(&self, values: &[Interval]) -> Interval {
        let df = values.get(2).map_or(Interval::point(1.0), |v| v.minus(self.less));
        // Rounding of the subtraction must not turn a whole number into a range.
        let df = match (values.get(2), self.less.low == self.less.high) {
            (Some(v), true) => Interval {
                low: v.low - self.less.low,
                high: v.high - self.less.low,
            },
            _ => df,
        };
        Interval {
            low: df.low.max(1e-3),
            high: df.high.max(1e-3),
        }
    }

    /// Smallest (or largest) p over all degrees of freedom, for one turned statistic.
    fn extreme(&self, turned: f64, df: Interval, largest: bool) -> f64 {
        let rises = self.rises_with_df == (turned >= 0.0);
        let end = if rises == largest { df.high } else { df.low };
        let p = self.at(turned, end, if largest { 1.0 } else { 0.0 });
        let widened = probability(p, p);
        if largest { widened.high } else { widened.low }
    }
}

impl Law for TailLaw {
    fn solve(&self, target: usize, values: &[Interval]) -> Set {
        let df = self.df(values);
        let statistic = self.turned(values[1]);
        if target == 0 {
            return vec![Interval {
                low: self.extreme(statistic.high, df, false),
                high: self.extreme(statistic.low, df, true),
            }];
        }
        let Some(p) = values[0].meet(UNIT) else {
            return Set::new();
        };
        if target == 1 {
            let lowest = if self.side == Side::Both {
                0.0
            } else {
                -self.largest
            };
            let domain = Interval {
                low: lowest,
                high: self.largest,
            };
            let set = falling(
                domain,
                false,
                p,
                |s| self.extreme(s, df, false),
                |s| self.extreme(s, df, true),
            );
            return match self.side {
                Side::Both if self.signed => set.into_iter().flat_map(Interval::both_signs).collect(),
                Side::Lower => set.into_iter().map(Interval::negate).collect(),
                _ => set,
            };
        }
        let whole = values[2].low == values[2].high && values[2].low.fract() == 0.0;
        let least = if whole { 1.0 } else { 0.1 };
        let domain = Interval {
            low: self.less.low + least,
            high: MOST,
        };
        let of = |n: f64| self.df(&[p, statistic, Interval::point(n)]);
        let low = |n: f64| self.extreme(statistic.high, of(n), false);
        let high = |n: f64| self.extreme(statistic.low, of(n), true);
        let set = if statistic.low < 0.0 && statistic.high >= 0.0 {
            scan(domain, whole, p, |n| {
                Some(Interval {
                    low: low(n),
                    high: high(n),
                })
            })
        } else if self.rises_with_df == (statistic.low >= 0.0) {
            rising(domain, whole, p, low, high)
        } else {
            falling(domain, whole, p, low, high)
        };
        open_ended(set, MOST)
    }
}

/// p that is adjusted for multiple tests: anything from the raw p up to 1.
pub(super) struct Adjusted(pub Box<dyn Law>);

impl Law for Adjusted {
    fn solve(&self, target: usize, values: &[Interval]) -> Set {
        if target == 0 {
            let raw = self.0.solve(0, values);
            return raw
                .first()
                .map(|r| Interval {
                    low: r.low,
                    high: 1.0,
                })
                .into_iter()
                .collect();
        }
        with_smaller_p(&*self.0, target, values)
    }
}

/// All values of a part other than p for which the law gives the printed p or a smaller one, which a
/// correction can have raised.
fn with_smaller_p(law: &dyn Law, target: usize, values: &[Interval]) -> Set {
    let mut values = values.to_vec();
    values[0].low = 0.0;
    if values[0].high < 0.0 {
        return Set::new();
    }
    law.solve(target, &values)
}

/// For more tests than this a correction is taken to give any larger p.
const MOST_TESTS: f64 = 200.0;

/// p as the Bonferroni or Šidák correction for some number k of tests makes it of the one that a law
/// gives: min(1, k·p) or 1 − (1 − p)^k.
pub(super) struct Multiplied(pub Box<dyn Law>);

impl Law for Multiplied {
    fn solve(&self, target: usize, values: &[Interval]) -> Set {
        if target > 0 {
            // An enclosure is enough here: it only serves repairs.
            return with_smaller_p(&*self.0, target, values);
        }
        let Some(raw) = self.0.solve(0, values).first().copied() else {
            return Set::new();
        };
        let sidak = |k: f64| -(k * (-raw.low.min(1.0)).ln_1p()).exp_m1();
        let mut set = Set::new();
        let mut k = 1.0;
        loop {
            let (low, high) = (sidak(k), (k * raw.high).min(1.0));
            // From here on the multiples run into each other, or p is 1.
            if high >= 1.0 || sidak(k + 1.0) <= high || k > MOST_TESTS {
                set.push(Interval { low, high: 1.0 }.widen(ACCURACY));
                return set;
            }
            set.push(Interval { low, high }.widen(ACCURACY));
            k += 1.0;
        }
    }
}

/// p near the one that a law gives: from `shrink` times it to `grow` times it and `more`.
pub(super) struct Loosened {
    pub law: Box<dyn Law>,
    pub shrink: f64,
    pub grow: f64,
    pub more: f64,
}

impl Law for Loosened {
    fn solve(&self, target: usize, values: &[Interval]) -> Set {
        if target == 0 {
            let loosen = |r: &Interval| Interval {
                low: r.low * self.shrink,
                high: (r.high * self.grow + self.more).min(1.0),
            };
            return self.law.solve(0, values).iter().map(loosen).collect();
        }
        let Some(p) = values[0].meet(UNIT) else {
            return Set::new();
        };
        let mut values = values.to_vec();
        values[0] = Interval {
            low: ((p.low - self.more) / self.grow).max(0.0),
            high: (p.high / self.shrink).min(1.0),
        };
        self.law.solve(target, &values)
    }
}

/// No restriction at all: something may be meant that cannot be checked.
pub(super) struct Anything;

impl Law for Anything {
    fn solve(&self, _target: usize, _values: &[Interval]) -> Set {
        vec![Interval::ALL]
    }
}

/// A law about the sizes of some of its parts, whose signs are printed now this way, now that.
pub(super) struct Sizes {
    pub law: Box<dyn Law>,
    /// For each part, whether only its size counts.
    pub signed: Vec<bool>,
}

impl Law for Sizes {
    fn solve(&self, target: usize, values: &[Interval]) -> Set {
        let sizes: Vec<Interval> = values
            .iter()
            .zip(&self.signed)
            .map(|(v, signed)| if *signed { v.abs() } else { *v })
            .collect();
        let found = self.law.solve(target, &sizes);
        if !self.signed[target] {
            return found;
        }
        let mut mirrored: Set = found.into_iter().flat_map(Interval::both_signs).collect();
        mirrored.sort_by(|a, b| a.low.total_cmp(&b.low));
        mirrored
    }
}

/// A law that gives the range of its first part from all others; the others are found by search in
/// their natural domains.
pub(super) struct ByRange<R> {
    /// Range of the first part; None where the others are impossible. Must be continuous.
    pub range: R,
    /// Where each part is searched.
    pub domains: Vec<Interval>,
}

impl<R> Law for ByRange<R>
where
    R: Fn(&[Interval]) -> Option<Interval> + Send + Sync,
{
    fn solve(&self, target: usize, values: &[Interval]) -> Set {
        if target == 0 {
            return (self.range)(values).into_iter().collect();
        }
        let whole = values[target].low == values[target].high && values[target].low.fract() == 0.0;
        let found = scan(self.domains[target], whole, values[0], |x| {
            let mut values = values.to_vec();
            values[target] = Interval::point(x);
            (self.range)(&values)
        });
        open_ended(found, self.domains[target].high.min(MOST))
    }
}

/// Smallest and largest value of a function that is monotone in each of its arguments: those at
/// the corners. Infinite ends are taken as very large.
pub(super) fn corners(values: &[Interval], f: impl Fn(&[f64]) -> f64) -> Option<Interval> {
    let mut range: Option<Interval> = None;
    for corner in 0..1u32 << values.len() {
        let point: Vec<f64> = values
            .iter()
            .enumerate()
            .map(|(i, v)| if corner >> i & 1 == 0 { v.low } else { v.high }.clamp(-1e15, 1e15))
            .collect();
        let value = f(&point);
        if value.is_nan() {
            return None;
        }
        let value = Interval::point(value);
        range = Some(range.map_or(value, |r| r.hull(value)));
    }
    range.map(|r| r.widen(1e-12))
}

/// All parts but the first, each within its domain; none if one lies outside.
pub(super) fn within(values: &[Interval], domains: &[Interval]) -> Option<Vec<Interval>> {
    values
        .iter()
        .zip(domains)
        .skip(1)
        .map(|(v, d)| v.meet(*d))
        .collect()
}

/// The law that the first part is a function of the others which is monotone in each of them.
pub(super) fn formula(
    domains: Vec<Interval>,
    f: impl Fn(&[f64]) -> f64 + Send + Sync + 'static,
) -> ByRange<impl Fn(&[Interval]) -> Option<Interval> + Send + Sync> {
    let natural = domains.clone();
    let range = move |values: &[Interval]| corners(&within(values, &natural)?, &f);
    ByRange { range, domains }
}

/// The law that the first part lies between two functions of the others, each monotone in each.
pub(super) fn between(
    domains: Vec<Interval>,
    low: impl Fn(&[f64]) -> f64 + Send + Sync + 'static,
    high: impl Fn(&[f64]) -> f64 + Send + Sync + 'static,
) -> ByRange<impl Fn(&[Interval]) -> Option<Interval> + Send + Sync> {
    let natural = domains.clone();
    let range = move |values: &[Interval]| {
        let inside = within(values, &natural)?;
        let (low, high) = (corners(&inside, &low)?.low, corners(&inside, &high)?.high);
        (low <= high).then_some(Interval { low, high })
    };
    ByRange { range, domains }
}

/// Values of a statistic that has no sign, or of which only the size counts.
pub(super) const POSITIVE: Interval = Interval { low: 0.0, high: 1e9 };

/// Degrees of freedom and sample sizes.
pub(super) const COUNTS: Interval = Interval { low: 1.0, high: MOST };
