//! *Arranging* a data set: persons in the order of their totals, some of whom are known (the least, the
//! greatest, those in the middle, those who gave one answer), and the core's numbers for the rest.

use super::attain::{Counts, Int, Search, TooDear, ceil_div};
use super::groups::{Group, less, place, roomy};
use super::printed::Window;
use std::collections::BTreeMap;

/// What is known beside the sums: windows of whole totals, one per person.
#[derive(Clone, Debug, Default)]
pub(super) struct Known {
    pub minimum: Option<Window>,
    pub maximum: Option<Window>,
    /// Of the middle total for an odd number of persons, of the sum of the two middle ones for an even number.
    pub median: Option<Window>,
    /// A total, and how many persons have it.
    pub share: Option<(Int, Window)>,
}

impl Known {
    pub fn is_empty(&self) -> bool {
        self.minimum.is_none() && self.maximum.is_none() && self.median.is_none() && self.share.is_none()
    }
}

/// `n` totals within `range` with this sum, a sum of squares in this window, and all that is known.
pub(super) fn arrange(
    search: &mut Search,
    n: Int,
    range: Window,
    known: &Known,
    sum: Int,
    squares: Window,
) -> Result<Option<BTreeMap<Int, Int>>, TooDear> {
    let all = Group {
        n,
        low: range.low,
        high: range.high,
        never: None,
    };
    if range.is_empty() || sum < all.sums().low || sum > all.sums().high {
        return Ok(None);
    }
    // What holds for any totals holds for those that are partly known.
    let possible = squares.meet(all.squares(sum));
    if possible.is_empty() {
        return Ok(None);
    }
    let mut found = Counts::new();
    let done = if known.is_empty() {
        place(search, &[all], sum, possible, &mut found)?
    } else {
        with_known(search, all, known, sum, possible, &mut found)?
    };
    Ok(done.then(|| {
        let mut counts = BTreeMap::new();
        for (value, count) in found {
            *counts.entry(value).or_insert(0) += count;
        }
        counts.retain(|_, count| *count > 0);
        counts
    }))
}

/// Tries all totals that the known persons can have.
fn with_known(
    search: &mut Search,
    all: Group,
    known: &Known,
    sum: Int,
    squares: Window,
    found: &mut Counts,
) -> Result<bool, TooDear> {
    let range = Window {
        low: all.low,
        high: all.high,
    };
    let choices = |window: Option<Window>| -> Vec<Option<Int>> {
        match window {
            None => vec![None],
            Some(window) => window.meet(range).outwards().map(Some).collect(),
        }
    };
    for least in choices(known.minimum) {
        for greatest in choices(known.maximum) {
            let inside = Window {
                low: least.unwrap_or(range.low),
                high: greatest.unwrap_or(range.high),
            };
            let ends = [(1, least), (all.n, greatest)];
            let ends = ends.into_iter().filter_map(|(at, value)| Some((at, value?)));
            let ends: Vec<(Int, Int)> = ends.collect();
            for middle in 0.. {
                let Some(pair) = middles(known.median, all.n, inside, middle) else {
                    break;
                };
                search.step()?;
                let persons: Vec<(Int, Int)> = ends.iter().copied().chain(pair).collect();
                let Some((persons, groups)) = between(&persons, all) else {
                    continue;
                };
                if share_out(search, &persons, &groups, known, sum, squares, found)? {
                    return Ok(true);
                }
            }
        }
    }
    Ok(false)
}

/// The `index`-th choice for the persons in the middle, those closest to each other first: their places in
/// the order and their totals. One choice, of nobody, if the median is not known.
fn middles(median: Option<Window>, n: Int, inside: Window, index: Int) -> Option<Vec<(Int, Int)>> {
    let Some(median) = median else {
        return (index == 0).then(Vec::new);
    };
    let half = n / 2;
    if n % 2 == 1 {
        let value = median.meet(inside).low + index;
        return (value <= median.meet(inside).high).then(|| vec![(half + 1, value)]);
    }
    let mut left = index;
    for sum in median.low.max(2 * inside.low)..=median.high.min(2 * inside.high) {
        let first = sum.div_euclid(2);
        let pairs = (first - inside.low.max(sum - inside.high) + 1).max(0);
        if left < pairs {
            let lower = first - left;
            return Some(vec![(half, lower), (half + 1, sum - lower)]);
        }
        left -= pairs;
    }
    None
}

/// The known persons, each once, and the groups between them; None if two of them contradict each other.
fn between(persons: &[(Int, Int)], all: Group) -> Option<(Vec<Int>, Vec<Group>)> {
    let mut places = BTreeMap::new();
    for (at, value) in persons {
        if *places.entry(*at).or_insert(*value) != *value {
            return None;
        }
    }
    let mut groups = Vec::new();
    let (mut at, mut low) = (0, all.low);
    for (place, value) in places
        .iter()
        .map(|(p, v)| (*p, *v))
        .chain([(all.n + 1, all.high)])
    {
        if value < low {
            return None;
        }
        groups.push(Group {
            n: place - at - 1,
            low,
            high: value,
            never: None,
        });
        (at, low) = (place, value);
    }
    groups.retain(|g| g.n > 0);
    Some((places.into_values().collect(), groups))
}

/// Gives the answer whose share is known to the right number of persons, in every way, and fills the rest.
fn share_out(
    search: &mut Search,
    persons: &[Int],
    groups: &[Group],
    known: &Known,
    sum: Int,
    squares: Window,
    found: &mut Counts,
) -> Result<bool, TooDear> {
    let taken = |values: &[Int]| {
        (
            values.iter().sum::<Int>(),
            values.iter().map(|x| x * x).sum::<Int>(),
        )
    };
    let (total, total_squares) = taken(persons);
    let (sum, squares) = (sum - total, less(squares, total_squares));
    let kept = found.len();
    found.extend(persons.iter().map(|x| (*x, 1)));
    let Some((value, counts)) = known.share else {
        let done = place(search, groups, sum, squares, found)?;
        if !done {
            found.truncate(kept);
        }
        return Ok(done);
    };
    let already = persons.iter().filter(|x| **x == value).count() as Int;
    let holding: Vec<usize> = (0..groups.len())
        .filter(|i| groups[*i].low <= value && value <= groups[*i].high)
        .collect();
    for count in counts.outwards() {
        let missing = count - already;
        let room: Int = holding.iter().map(|i| groups[*i].n).sum();
        if missing < 0 || missing > room {
            continue;
        }
        let (sum, squares) = (sum - missing * value, less(squares, missing * value * value));
        // Everybody else is at least one away from that answer.
        let others: Int = groups.iter().map(|g| g.n).sum::<Int>() - missing;
        if squares.high - 2 * value * sum + others * value * value < others {
            continue;
        }
        for given in portions(missing, &holding.iter().map(|i| groups[*i].n).collect::<Vec<_>>()) {
            search.steps(2)?;
            let mut groups = groups.to_vec();
            for (i, portion) in holding.iter().zip(&given) {
                groups[*i].n -= portion;
                groups[*i].never = Some(value);
            }
            groups.retain(|g| g.n > 0);
            if !roomy(&groups, sum, squares) {
                continue;
            }
            found.push((value, missing));
            if place(search, &groups, sum, squares, found)? {
                return Ok(true);
            }
            found.pop();
        }
    }
    found.truncate(kept);
    Ok(false)
}

/// All ways to split `amount` into portions of at most these sizes.
fn portions(amount: Int, sizes: &[Int]) -> Vec<Vec<Int>> {
    let Some((size, rest)) = sizes.split_first() else {
        return if amount == 0 { vec![Vec::new()] } else { Vec::new() };
    };
    let others: Int = rest.iter().sum();
    let first = Window {
        low: (amount - others).max(0),
        high: amount.min(*size),
    };
    let with = |portion: Int| {
        portions(amount - portion, rest).into_iter().map(move |mut more| {
            more.insert(0, portion);
            more
        })
    };
    first.outwards().flat_map(with).collect()
}

/// No total of `n` with this sum and spread lies outside: (n·x − sum)² is at most the spread times n − 1.
pub(super) fn within_reach(n: Int, sum: Int, spread: Int) -> Window {
    let far = match spread.checked_mul(n - 1) {
        Some(product) => product.isqrt(),
        None => (spread.isqrt() + 1) * ((n - 1).isqrt() + 1),
    };
    Window {
        low: ceil_div(sum - far, n),
        high: (sum + far).div_euclid(n),
    }
}
