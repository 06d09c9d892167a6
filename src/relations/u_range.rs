//! U of Mann and Whitney lies between 0 and n1·n2, and its z follows from it.
//!
//! Formula: 0 ≤ U ≤ n1·n2; without ties |z| = |U − n1·n2/2| / √(n1·n2·(n1 + n2 + 1)/12), and half a
//! unit less in the numerator with the correction for continuity; with ties |z| is larger, but at most
//! √(n1 + n2 − 1), since it is √(N − 1) times a rank correlation.
//!
//! Assumes: the two n of the statement are those of the groups. U may be that of either group.
//!
//! Caution: W of some programs is the sum of ranks, not U, and is not checked here.
//!
//! Source: Mann & Whitney (1947), Annals of Mathematical Statistics 18:50–60.
//!
//! Example: with n1 = 20 and n2 = 25, U = 143 gives |z| = 2.44, so z = −2.44 agrees; U = 1143 conflicts,
//! because n1·n2 = 500.

use super::laws::{ByRange, COUNTS, POSITIVE, Sizes, corners, within};
use super::{Case, Law, Tie, Variant};
use crate::numbers::{Interval, Set};

/// See the module documentation.
pub fn ties(case: &Case) -> Vec<Tie> {
    let mut ties = Vec::new();
    let tests = case.tests();
    let here: Vec<usize> = (0..case.quantities.len())
        .filter(|i| case.own(*i) && case.quantities[*i].symbol == "n")
        .collect();
    let only = tests.iter().filter(|t| t.symbol == "U").count() == 1;
    for test in tests.iter().filter(|t| t.symbol == "U") {
        let sizes = match test.sizes.len() {
            2 => test.sizes.clone(),
            _ if only && here.len() == 2 => here.clone(),
            _ => continue,
        };
        if sizes.iter().any(|i| case.quantities[*i].interval.high < 1.0) {
            continue;
        }
        ties.push(case.tie(vec![test.at, sizes[0], sizes[1]], vec![Variant::new(&[], inside)]));
        let mut others = tests.iter().filter(|t| t.symbol == "z");
        if let (Some(z), None, true) = (others.next(), others.next(), only) {
            ties.push(case.tie(vec![z.at, test.at, sizes[0], sizes[1]], variants()));
        }
    }
    ties
}

/// Parts: U, n1, n2.
fn inside(target: usize, values: &[Interval]) -> Set {
    let natural = Interval::at_least(1.0);
    let size = |i: usize| values[i].meet(natural);
    let set = match target {
        0 => size(1).zip(size(2)).map(|(a, b)| Interval {
            low: 0.0,
            high: a.high * b.high,
        }),
        _ => size(3 - target).filter(|_| values[0].high >= 0.0).map(|n| {
            let least = (values[0].low / n.high * (1.0 - 1e-12)).max(1.0);
            Interval {
                low: if least.is_finite() { least.ceil() } else { 1.0 },
                high: f64::INFINITY,
            }
        }),
    };
    set.into_iter().collect()
}

fn spread(n1: f64, n2: f64) -> f64 {
    (n1 * n2 * (n1 + n2 + 1.0) / 12.0).sqrt()
}

/// What |z| is at least and at most for one U, n1 and n2.
type End = fn(&[f64]) -> f64;

/// Parts: z, U, n1, n2.
fn law(low: End, high: End) -> impl Law {
    let domains = vec![POSITIVE, POSITIVE, COUNTS, COUNTS];
    let natural = domains.clone();
    let range = move |values: &[Interval]| {
        let inside = within(values, &natural)?;
        let (mut low, high) = (corners(&inside, low)?.low, corners(&inside, high)?.high);
        // The distance from the middle falls and rises; if the middle can be met, z can be 0.
        let middle = inside[1].times(inside[2]).times(Interval::point(0.5));
        if middle.meets(inside[0]) {
            low = 0.0;
        }
        // A U that n1 and n2 do not allow has no z.
        (low <= high).then_some(Interval { low, high })
    };
    Sizes {
        law: Box::new(ByRange { range, domains }),
        signed: vec![true, false, false, false],
    }
}

fn off(v: &[f64]) -> f64 {
    (v[0] - 0.5 * v[1] * v[2]).abs()
}

fn plain(v: &[f64]) -> f64 {
    off(v) / spread(v[1], v[2])
}

fn continuous(v: &[f64]) -> f64 {
    (off(v) - 0.5).max(0.0) / spread(v[1], v[2])
}

fn most(v: &[f64]) -> f64 {
    (v[1] + v[2] - 1.0).sqrt()
}

fn variants() -> Vec<Variant> {
    vec![
        Variant::new(&["no ties"], law(plain, plain)),
        Variant::new(
            &["no ties", "corrected for continuity"],
            law(continuous, continuous),
        ),
        Variant::new(&["some ties"], law(continuous, |v| (1.1 * plain(v)).min(most(v)))),
        Variant::new(&[], law(continuous, most))
            .left_open("z is larger than U gives without ties; many ties can explain it"),
    ]
}
