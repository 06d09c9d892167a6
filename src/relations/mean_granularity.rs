//! The mean of whole-number answers is a whole number divided by n (GRIM).
//!
//! Formula: some whole total S has S / (n·k) printing as the mean; k is the number of items averaged, 1 if
//! none is mentioned.
//!
//! Assumes: every answer is a whole number, which the text must give reason to think (a rating scale, a
//! count, a number of items) in the same paragraph or nearer.
//!
//! Caution: a scale whose items are averaged has finer steps; missing answers change n. Where n·k reaches
//! 10^decimals every printed mean is possible, and the result is open.
//!
//! Source: Brown & Heathers (2017), Social Psychological and Personality Science 8:363–369.
//!
//! Example: 28 answers on a scale from 1 to 7 can have the mean 3.43 or 3.46, but not 3.45.

use super::{Case, Law, Mention, Reach, Tie, Variant, p_value};
use crate::numbers::{Comparator, Interval, Set};

/// Totals (or sample sizes) listed one by one at most.
const MOST_LISTED: f64 = 2000.0;

/// See the module documentation.
pub fn ties(case: &Case) -> Vec<Tie> {
    let mention = |meaning| case.mention(meaning, Reach::Paragraph);
    let items = mention("items");
    let Some(reason) = mention("whole-answers").or(mention("scale")).or(items) else {
        return Vec::new();
    };
    // Reliability is reported for scales of several items.
    if items.is_none() && case.first("alpha").is_some() {
        return Vec::new();
    }
    let count = items
        .and_then(|m| m.numbers.first())
        .copied()
        .filter(|k| k.fract() == 0.0 && *k >= 1.0);
    let items_known = items.is_none() || count.is_some();
    let k = count.unwrap_or(1.0);
    let mut said = vec![format!(
        "every answer is a whole number ({})",
        p_value::quoted(reason)
    )];
    if let Some(mention) = items {
        said.push(format!("means of {k} items ({})", p_value::quoted(mention)));
    }
    let mut ties = Vec::new();
    for (mean, n) in means_with_n(case) {
        let (printed, size) = (&case.quantities[mean], &case.quantities[n]);
        let whole =
            size.comparator == Comparator::Equal && size.number.is_whole() && size.number.value() >= 1.0;
        if printed.comparator != Comparator::Equal || !whole || printed.number.decimals() > 8 {
            continue;
        }
        // A mean beyond the scale is of something else, such as an age or a time.
        if mention("whole-answers").is_none() && off_scale(reason, printed.interval) {
            continue;
        }
        if !items_known {
            ties.push(Tie::open(
                vec![mean, n],
                "the number of items that are averaged is not known",
            ));
            continue;
        }
        let grains = size.number.value() * k;
        let decimals = printed.number.decimals();
        if grains >= 10f64.powi(decimals as i32) {
            let why = format!(
                "with {grains} answers every mean with {decimals} decimals is possible, so it cannot be checked"
            );
            ties.push(Tie::open(vec![mean, n], why));
            continue;
        }
        let variant = Variant {
            assumes: said.clone(),
            ..Variant::new(&[], Grain { items: k, decimals })
        };
        ties.push(case.tie(vec![mean, n], vec![variant]));
    }
    ties
}

/// Whether a mean lies outside the points of the scale that is mentioned.
fn off_scale(scale: &Mention, mean: Interval) -> bool {
    let most = scale.numbers.iter().copied().reduce(f64::max);
    scale.meaning == "scale"
        && most.is_some_and(|most| {
            !mean.meets(Interval {
                low: -most,
                high: most,
            })
        })
}

/// Every mean with the n that belongs to it: the first n between it and the next mean; else, where there
/// are as many n as means, in order; else the only n; else the one borrowed from elsewhere.
fn means_with_n(case: &Case) -> Vec<(usize, usize)> {
    let means: Vec<usize> = case.all("M").into_iter().filter(|i| case.own(*i)).collect();
    // The N of a χ² or a correlation is not that of a mean.
    let of_tests: Vec<usize> = case.tests().into_iter().flat_map(|t| t.sizes).collect();
    let is_size = |i: &usize| matches!(case.quantities[*i].symbol, "n" | "N") && !of_tests.contains(i);
    let here: Vec<usize> = (0..case.quantities.len())
        .filter(|i| is_size(i) && case.own(*i))
        .collect();
    let borrowed: Vec<usize> = (0..case.quantities.len())
        .filter(|i| is_size(i) && !case.own(*i))
        .collect();
    if here.len() == means.len() {
        return means.into_iter().zip(here).collect();
    }
    if here.is_empty() {
        let only = case.only(&borrowed, &["n", "N"]);
        return means.into_iter().filter_map(|m| Some((m, only?))).collect();
    }
    // One n beside several means is that of all of them only if they are of the same persons,
    // which is not known.
    Vec::new()
}

/// Parts: mean, n. `items` answers of each person are averaged.
struct Grain {
    items: f64,
    decimals: u32,
}

impl Grain {
    /// Whole totals that give a mean inside, for n·k answers. The ends of a mean are decimals, so that
    /// a total is either hit or missed by far more than the slack, which is there for our own rounding.
    fn totals(mean: Interval, answers: f64) -> Option<(f64, f64)> {
        let slack = |x: f64| (x * answers).abs() * 1e-14 + 1e-10;
        let first = (mean.low * answers - slack(mean.low)).ceil();
        let last = (mean.high * answers + slack(mean.high)).floor();
        (first <= last).then_some((first, last))
    }
}

impl Law for Grain {
    fn solve(&self, target: usize, values: &[Interval]) -> Set {
        let (mean, n) = (values[0], values[1]);
        if target == 0 {
            let answers = n.low * self.items;
            let (first, last) = Grain::totals(mean, answers).unwrap_or_else(|| {
                let middle = 0.5 * (mean.low + mean.high) * answers;
                (middle.floor(), middle.ceil())
            });
            if last - first > MOST_LISTED {
                return vec![Interval {
                    low: first / answers,
                    high: last / answers,
                }];
            }
            let listed = (last - first) as u64;
            return (0..=listed)
                .map(|i| Interval::point((first + i as f64) / answers))
                .collect();
        }
        // Beyond this every mean is possible.
        let enough = (10f64.powi(self.decimals as i32) / self.items)
            .ceil()
            .clamp(1.0, MOST_LISTED);
        let mut found = Set::new();
        let mut size = 1.0;
        while size < enough {
            if Grain::totals(mean, size * self.items).is_some() {
                match found.last_mut() {
                    Some(last) if last.high == size - 1.0 => last.high = size,
                    _ => found.push(Interval::point(size)),
                }
            }
            size += 1.0;
        }
        match found.last_mut() {
            Some(last) if last.high == size - 1.0 => last.high = f64::INFINITY,
            _ => found.push(Interval::at_least(size)),
        }
        found
    }

    fn holds(&self, values: &[Interval]) -> bool {
        Grain::totals(values[0], values[1].low * self.items).is_some()
    }
}
