//! p follows from F and its two degrees of freedom.
//!
//! Formula: p = P(X > F), X with the F distribution with df1 and df2 degrees of freedom.
//!
//! Where the manuscript speaks of a correction for sphericity, the degrees of freedom may be printed
//! uncorrected beside a corrected p: then both are multiplied by one ε between 1/df1 and 1.
//!
//! Assumes: the upper tail, also for F(1, df2). A p that is adjusted for multiple tests may be
//! larger, never smaller. Fractional degrees of freedom are legitimate.
//!
//! Caution: the formula has no place for permutation tests or for tests of several contrasts at once.
//!
//! Source: Snedecor (1934); Greenhouse & Geisser (1959), Psychometrika 24:95–112; NIST/SEMATECH
//! e-Handbook 1.3.6.7.3.
//!
//! Example: F(1, 52) = 8.31 gives p of .0057, so p = .006 agrees and p = .06 conflicts.

use super::laws::Side;
use super::laws::{ByRange, UNIT, probability};
use super::search::MOST;
use super::{Case, Law, Reach, Tie, p_value};
use crate::distributions::ratio_upper;
use crate::numbers::{Interval, Set};

/// See the module documentation.
pub fn ties(case: &Case) -> Vec<Tie> {
    let mut ties = Vec::new();
    for (test, p) in case.tests_with_p() {
        if test.symbol != "F" {
            continue;
        }
        let positive = |i: &usize| case.quantities[*i].interval.high > 0.0;
        let (Some(df1), Some(df2)) = (test.df1.filter(positive), test.df2.filter(positive)) else {
            let reason = match (test.df1, test.df2) {
                (Some(_), None) => "the second degrees of freedom of F are missing",
                (None, Some(_)) => "the first degrees of freedom of F are missing",
                _ => "the degrees of freedom of F are missing",
            };
            ties.push(Tie::open(vec![p, test.at], reason));
            continue;
        };
        // With one degree of freedom F is t², and its p is halved in a one-sided test.
        let one = case.quantities[df1].interval == Interval::point(1.0);
        let mut variants = p_value::variants(case, &test, p, one, |side| {
            let law: Box<dyn Law> = Box::new(FLaw { corrected: false });
            match side {
                Side::Both => law,
                Side::Upper => Box::new(Half { law, far: false }),
                Side::Lower => Box::new(Half { law, far: true }),
            }
        });
        for variant in &mut variants {
            variant.assumes.retain(|a| a != "two-sided");
        }
        if let Some(mention) = case.mention("sphericity", Reach::Document)
            && case.quantities[df1].interval.high > 1.0
        {
            let said = format!(
                "uncorrected degrees of freedom beside a p corrected for sphericity ({})",
                p_value::quoted(mention)
            );
            // Before anything that leaves the result open.
            let at = variants
                .iter()
                .position(|v| v.only_open.is_some())
                .unwrap_or(variants.len());
            variants.insert(at, p_value::make(vec![said], Box::new(FLaw { corrected: true })));
        }
        let mut tie = case.tie(vec![p, test.at, df1, df2], variants);
        tie.remarks = p_value::remarks(case, p);
        ties.push(tie);
    }
    ties
}

/// One-sided p of a law whose p is two-sided; `far` if the difference is against what was expected.
struct Half {
    law: Box<dyn Law>,
    far: bool,
}

impl Law for Half {
    fn solve(&self, target: usize, values: &[Interval]) -> Set {
        let far = |p: Interval| Interval {
            low: 1.0 - p.high,
            high: 1.0 - p.low,
        };
        let turn = |p: Interval| if self.far { far(p) } else { p };
        if target == 0 {
            let half = |p: &Interval| {
                turn(Interval {
                    low: 0.5 * p.low,
                    high: 0.5 * p.high,
                })
            };
            return self.law.solve(0, values).iter().map(half).collect();
        }
        let mut values = values.to_vec();
        let p = turn(values[0]);
        values[0] = Interval {
            low: 2.0 * p.low,
            high: 2.0 * p.high,
        };
        self.law.solve(target, &values)
    }
}

/// Parts: p, F, df1, df2. If `corrected`, both degrees of freedom are multiplied by some ε.
struct FLaw {
    corrected: bool,
}

/// How near the bounds of p come to the true ones, where p has to be bounded over a range of
/// degrees of freedom: relative.
const TIGHT: f64 = 2e-4;

/// Boxes looked at before the bounds reached so far are used.
const MOST_BOXES: usize = 400;

/// Ranges of df1, df2 and ε.
type Box3 = [Interval; 3];

impl FLaw {
    fn epsilon(&self, df1: Interval) -> Interval {
        let least = if self.corrected {
            (1.0 / df1.high).min(1.0)
        } else {
            1.0
        };
        Interval {
            low: least,
            high: 1.0,
        }
    }

    /// Largest (or smallest) p for one F over all degrees of freedom. p is not monotone in them, but
    /// P(χ²(a)/χ²(b) > w) rises in a and falls in b and w, which bounds p over a box; boxes are
    /// halved where the bound is not yet tight.
    fn extreme(&self, f: f64, df1: Interval, df2: Interval, largest: bool) -> f64 {
        // Where a range is open-ended, 1e8 stands for no end: p has settled there.
        let natural = |df: Interval| {
            let most = if df.low == df.high { 1e15 } else { 1e8 };
            Interval {
                low: df.low.clamp(1e-3, most),
                high: df.high.clamp(1e-3, most),
            }
        };
        let (df1, df2) = (natural(df1), natural(df2));
        let start: Box3 = [df1, df2, self.epsilon(df1)];
        let at = |d: [f64; 3]| ratio_upper(d[0] * f / d[1], d[2] * d[0], d[2] * d[1]);
        if start.iter().all(|i| i.low == i.high) {
            return at(start.map(|i| i.low));
        }
        let bound = |b: &Box3| {
            if largest {
                ratio_upper(
                    b[0].low * f / b[1].high,
                    b[2].high * b[0].high,
                    b[2].low * b[1].low,
                )
            } else {
                ratio_upper(
                    b[0].high * f / b[1].low,
                    b[2].low * b[0].low,
                    b[2].high * b[1].high,
                )
            }
        };
        let beyond = |a: f64, b: f64| if largest { a > b } else { a < b };
        // A value that is reached: at a corner of the box.
        let mut reached = if largest { 0.0 } else { 1.0 };
        for corner in 0..8u32 {
            let end = |i: usize| {
                if corner >> i & 1 == 0 {
                    start[i].low
                } else {
                    start[i].high
                }
            };
            let value = at([end(0), end(1), end(2)]);
            if beyond(value, reached) {
                reached = value;
            }
        }
        let mut boxes = vec![(bound(&start), start)];
        // `df > 20` and the like: not worth more than a first bound.
        let wide = start[..2].iter().any(|df| df.high > 2.0 * df.low);
        for _ in 0..if wide { 0 } else { MOST_BOXES } {
            let worst = (0..boxes.len()).reduce(|a, b| if beyond(boxes[b].0, boxes[a].0) { b } else { a });
            let Some(worst) = worst else { break };
            let limit = if largest {
                reached * (1.0 + TIGHT)
            } else {
                reached * (1.0 - TIGHT)
            };
            if !beyond(boxes[worst].0, limit) {
                break;
            }
            let (_, box3) = boxes.swap_remove(worst);
            let width = |i: &usize| box3[*i].high / box3[*i].low;
            let widest = (0..3).max_by(|a, b| width(a).total_cmp(&width(b))).unwrap_or(0);
            let middle = (box3[widest].low * box3[widest].high).sqrt();
            for half in 0..2 {
                let mut part = box3;
                if half == 0 {
                    part[widest].high = middle;
                } else {
                    part[widest].low = middle;
                }
                let value = at(part.map(|i| (i.low * i.high).sqrt().clamp(i.low, i.high)));
                if beyond(value, reached) {
                    reached = value;
                }
                boxes.push((bound(&part), part));
            }
        }
        let start = if largest { 0.0f64 } else { 1.0 };
        boxes
            .iter()
            .fold(start, |a, b| if beyond(b.0, a) { b.0 } else { a })
    }

    fn low(&self, f: f64, df1: Interval, df2: Interval) -> f64 {
        let p = self.extreme(f, df1, df2, false);
        probability(p, p).low
    }

    fn high(&self, f: f64, df1: Interval, df2: Interval) -> f64 {
        let p = self.extreme(f, df1, df2, true);
        probability(p, p).high
    }
}

impl Law for FLaw {
    fn solve(&self, target: usize, values: &[Interval]) -> Set {
        let natural = Interval::at_least(0.0);
        if target == 1 {
            let Some(p) = values[0].meet(UNIT) else {
                return Set::new();
            };
            let low = |f: f64| self.low(f, values[2], values[3]);
            let high = |f: f64| self.high(f, values[2], values[3]);
            return super::search::falling(natural, false, p, low, high);
        }
        let range = |v: &[Interval]| {
            let f = v[1].meet(natural)?;
            Some(Interval {
                low: self.low(f.high, v[2], v[3]),
                high: self.high(f.low, v[2], v[3]),
            })
        };
        let degrees = Interval {
            low: if target == 0 || values[target].low.fract() == 0.0 {
                1.0
            } else {
                0.1
            },
            high: MOST,
        };
        ByRange {
            range,
            domains: vec![UNIT, natural, degrees, degrees],
        }
        .solve(target, values)
    }
}
