//! *Groups* of persons, each with limits of its own, which together must have a sum and a sum of squares. The
//! core decides each group; what is left to find is how the sums are divided among them.

use super::attain::{Counts, Int, Search, TooDear, Wanted, ceil_div, least_squares, most_squares};
use super::printed::Window;

/// How many steps of the search it takes to bound the sums of a group.
const BOUNDING: u64 = 20;

/// Some persons whose totals go from `low` to `high` and are not `never`.
#[derive(Clone, Copy, Debug)]
pub(super) struct Group {
    pub n: Int,
    pub low: Int,
    pub high: Int,
    pub never: Option<Int>,
}

impl Group {
    pub fn sums(&self) -> Window {
        Window {
            low: self.n * self.low,
            high: self.n * self.high,
        }
    }

    /// The sums of squares that totals with this sum can have at the least and at the most.
    pub fn squares(&self, sum: Int) -> Window {
        let above = most_squares(sum - self.n * self.low, self.high - self.low);
        Window {
            low: least_squares(self.n, sum),
            high: above + 2 * self.low * sum - self.n * self.low * self.low,
        }
    }

    fn wanted(&self, sum: Int, squares: Int) -> Wanted {
        Wanted {
            n: self.n,
            sum: sum - self.n * self.low,
            squares: squares - 2 * self.low * sum + self.n * self.low * self.low,
            most: self.high - self.low,
        }
    }

    /// Those below and those above the answer that nobody gives.
    fn split(&self, at: Int, below: Int) -> [Group; 2] {
        let part = |n, low, high| Group {
            n,
            low,
            high,
            never: None,
        };
        [
            part(below, self.low, at - 1),
            part(self.n - below, at + 1, self.high),
        ]
    }
}

pub(super) fn less(window: Window, by: Int) -> Window {
    Window {
        low: window.low - by,
        high: window.high - by,
    }
}

/// Whole numbers of one parity in a window, those in the middle first.
fn of_parity(window: Window, like: Int) -> impl Iterator<Item = Int> {
    let low = window.low + (window.low - like).rem_euclid(2);
    let steps = Window {
        low: 0,
        high: (window.high - low).div_euclid(2),
    };
    steps.outwards().map(move |i| low + 2 * i)
}

/// Whether the bounds on the sum and the squares of all groups leave room, gaps left aside.
pub(super) fn roomy(groups: &[Group], sum: Int, squares: Window) -> bool {
    let together = sums(groups);
    groups.iter().all(|g| g.low <= g.high)
        && together.low <= sum
        && sum <= together.high
        && least_together(groups, sum) <= squares.high
        && most_together(groups, sum) >= squares.low
}

fn sums(groups: &[Group]) -> Window {
    Window {
        low: groups.iter().map(|g| g.sums().low).sum(),
        high: groups.iter().map(|g| g.sums().high).sum(),
    }
}

/// The least sum of squares that the groups can have with this sum: all at one level, or the next, as far as
/// their limits allow.
fn least_together(groups: &[Group], sum: Int) -> Int {
    let at = |level: Int| -> Int { groups.iter().map(|g| g.n * level.clamp(g.low, g.high)).sum() };
    let (mut level, mut above) = (
        groups.iter().map(|g| g.low).min().unwrap_or(0),
        groups.iter().map(|g| g.high).max().unwrap_or(0) + 1,
    );
    while above - level > 1 {
        let middle = (level + above).div_euclid(2);
        if at(middle) <= sum {
            level = middle;
        } else {
            above = middle;
        }
    }
    let squares: Int = groups
        .iter()
        .map(|g| g.n * level.clamp(g.low, g.high).pow(2))
        .sum();
    // Each step from the level to the next adds 2·level + 1.
    squares + (sum - at(level)) * (2 * level + 1)
}

/// No sum of squares of the groups with this sum is larger: (x − low)(high − x) ≥ 0 gives for each group
/// squares ≤ (low + high)·sum − n·low·high, and the groups whose low + high is largest take as much of the sum
/// as they can.
fn most_together(groups: &[Group], sum: Int) -> Int {
    let mut left = sum - sums(groups).low;
    let mut squares: Int = groups.iter().map(|g| g.n * g.low * g.low).sum();
    let mut order: Vec<&Group> = groups.iter().collect();
    order.sort_by_key(|g| -(g.low + g.high));
    for group in order {
        let taken = left.min(group.n * (group.high - group.low));
        squares += taken * (group.low + group.high);
        left -= taken;
    }
    squares
}

/// The part of a window in which a convex function is at most `bound`.
fn where_at_most(window: Window, bound: Int, f: impl Fn(Int) -> Int) -> Window {
    // The lowest point: the first at which the function does not fall any more.
    let (mut low, mut high) = (window.low, window.high);
    while low < high {
        let middle = low + (high - low) / 2;
        if f(middle + 1) < f(middle) {
            low = middle + 1;
        } else {
            high = middle;
        }
    }
    let lowest = low;
    if f(lowest) > bound {
        return Window { low: 1, high: 0 };
    }
    let edge = |mut inside: Int, mut outside: Int| {
        if f(outside) <= bound {
            return outside;
        }
        while (inside - outside).abs() > 1 {
            let middle = inside + (outside - inside) / 2;
            if f(middle) <= bound {
                inside = middle;
            } else {
                outside = middle;
            }
        }
        inside
    };
    Window {
        low: edge(lowest, window.low),
        high: edge(lowest, window.high),
    }
}

/// Fills the groups one after the other, with this sum and a sum of squares in this window.
pub(super) fn place(
    search: &mut Search,
    groups: &[Group],
    sum: Int,
    squares: Window,
    found: &mut Counts,
) -> Result<bool, TooDear> {
    let Some((first, rest)) = groups.split_first() else {
        return Ok(sum == 0 && squares.low <= 0 && squares.high >= 0);
    };
    if first.n == 0 {
        return place(search, rest, sum, squares, found);
    }
    let mut first = *first;
    match first.never.take() {
        Some(value) if value == first.low => first.low += 1,
        Some(value) if value == first.high => first.high -= 1,
        Some(value) if first.low < value && value < first.high => {
            return place_around(search, first, value, rest, sum, squares, found);
        }
        _ => {}
    }
    let rest: Vec<Group> = rest.iter().copied().filter(|g| g.n > 0).collect();
    if first.low > first.high || rest.iter().any(|g| g.low > g.high) {
        return Ok(false);
    }
    if rest.is_empty() {
        if sum < first.sums().low || sum > first.sums().high {
            return Ok(false);
        }
        for wanted in of_parity(squares.meet(first.squares(sum)), sum) {
            search.step()?;
            if let Some(counts) = search.find(first.wanted(sum, wanted))? {
                found.extend(counts.iter().map(|(x, c)| (x + first.low, *c)));
                return Ok(true);
            }
        }
        return Ok(false);
    }
    search.steps(BOUNDING)?;
    let kept = found.len();
    for own in own_sums(&first, &rest, sum, squares).outwards() {
        search.step()?;
        let left = sum - own;
        let window = first.squares(own).meet(Window {
            low: squares.low - most_together(&rest, left),
            high: squares.high - least_together(&rest, left),
        });
        for wanted in of_parity(window, own) {
            search.step()?;
            let Some(counts) = search.find(first.wanted(own, wanted))? else {
                continue;
            };
            found.extend(counts.iter().map(|(x, c)| (x + first.low, *c)));
            if place(search, &rest, left, less(squares, wanted), found)? {
                return Ok(true);
            }
            found.truncate(kept);
        }
    }
    Ok(false)
}

/// The sums that the first group can have so that the bounds on the squares of all are kept.
fn own_sums(first: &Group, rest: &[Group], sum: Int, squares: Window) -> Window {
    let others = sums(rest);
    let window = first.sums().meet(Window {
        low: sum - others.high,
        high: sum - others.low,
    });
    if window.is_empty() {
        return window;
    }
    let one = [*first];
    let least = |own: Int| least_together(&one, own) + least_together(rest, sum - own);
    let most = |own: Int| most_together(&one, own) + most_together(rest, sum - own);
    let small = where_at_most(window, squares.high, least);
    if small.is_empty() {
        return small;
    }
    // The upper bound is concave.
    where_at_most(small, -squares.low, |own| -most(own))
}

/// Fills a group that has a gap in it, in every way to divide its persons among the two sides.
fn place_around(
    search: &mut Search,
    first: Group,
    gap: Int,
    rest: &[Group],
    sum: Int,
    squares: Window,
    found: &mut Counts,
) -> Result<bool, TooDear> {
    let others = sums(rest);
    let all = |below: Int| -> Vec<Group> {
        first
            .split(gap, below)
            .into_iter()
            .chain(rest.iter().copied())
            .collect()
    };
    // Enough persons below, and enough above, for the sum.
    let (n, own_low, own_high) = (first.n, sum - others.high, sum - others.low);
    let counts = Window {
        low: ceil_div(n * (gap + 1) - own_high, gap + 1 - first.low).max(0),
        high: (n * first.high - own_low).div_euclid(first.high - gap + 1).min(n),
    };
    if counts.is_empty() {
        return Ok(false);
    }
    search.steps(BOUNDING)?;
    // Both bounds are those of linear programs, so that they are convex and concave in the count.
    let counts = where_at_most(counts, squares.high, |below| least_together(&all(below), sum));
    if counts.is_empty() {
        return Ok(false);
    }
    let counts = where_at_most(counts, -squares.low, |below| -most_together(&all(below), sum));
    for below in counts.outwards() {
        search.step()?;
        if place(search, &all(below), sum, squares, found)? {
            return Ok(true);
        }
    }
    Ok(false)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn bounds_of_groups_enclose_all_their_data_sets() {
        let group = |n, low, high| Group {
            n,
            low,
            high,
            never: None,
        };
        let groups = [group(2, 0, 3), group(2, 2, 5)];
        let mut tightest: std::collections::BTreeMap<Int, Window> = Default::default();
        for (a, b) in (0..=3).flat_map(|a| (0..=3).map(move |b| (a, b))) {
            for (c, d) in (2..=5).flat_map(|c| (2..=5).map(move |d| (c, d))) {
                let (sum, squares) = (a + b + c + d, a * a + b * b + c * c + d * d);
                let window = tightest.entry(sum).or_insert(Window::point(squares));
                window.low = window.low.min(squares);
                window.high = window.high.max(squares);
            }
        }
        for (sum, window) in tightest {
            assert_eq!(least_together(&groups, sum), window.low, "{sum}");
            assert!(most_together(&groups, sum) >= window.high, "{sum}");
        }
    }

    #[test]
    fn a_convex_function_is_small_between_two_edges() {
        let all = Window { low: -10, high: 10 };
        let edges = |bound| {
            let window = where_at_most(all, bound, |x| (x - 3) * (x - 3));
            (window.low, window.high)
        };
        assert_eq!(edges(4), (1, 5));
        assert_eq!(edges(0), (3, 3));
        assert_eq!(edges(60), (-4, 10));
        assert_eq!(edges(1000), (-10, 10));
        assert!(where_at_most(all, -1, |x| x * x).is_empty());
    }
}
