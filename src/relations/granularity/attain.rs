//! The *core* of granularity: which pairs of a sum and a sum of squares do n whole numbers within limits
//! have? Both answers are proven: yes by the numbers themselves, no by a complete search.
//!
//! The search takes the largest number with its count, then the next, and so on. What keeps it short:
//! squares have the parity of their roots; n numbers with a given sum have their least squares when they are
//! equal or neighbours, their most when all but one lie at the ends; and taking numbers at the far end away
//! leaves the rest nearly equal, where next to nothing is impossible. Only close to the largest possible
//! spread, and for fewer than five numbers, are there gaps; there few branches are left.

use std::collections::HashSet;

/// Whole numbers with room for sums of squares.
pub type Int = i128;

/// Values, each with its count.
pub type Counts = Vec<(Int, Int)>;

/// The search was given up because it had become too long.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct TooDear;

/// `n` whole numbers from 0 to `most` with this sum and sum of squares.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub struct Wanted {
    pub n: Int,
    pub sum: Int,
    pub squares: Int,
    pub most: Int,
}

/// The smallest sum of squares of `n` whole numbers with this sum: all are equal or neighbours.
pub fn least_squares(n: Int, sum: Int) -> Int {
    if n == 0 {
        return 0;
    }
    let (each, over) = (sum.div_euclid(n), sum.rem_euclid(n));
    n * each * each + over * (2 * each + 1)
}

/// The largest sum of squares of whole numbers from 0 to `most` with this sum: all but one lie at the ends,
/// because moving two numbers apart adds to their squares.
pub fn most_squares(sum: Int, most: Int) -> Int {
    if most == 0 {
        return 0;
    }
    let (full, rest) = (sum / most, sum % most);
    full * most * most + rest * rest
}

/// a/b rounded up, for b > 0.
pub fn ceil_div(a: Int, b: Int) -> Int {
    -(-a).div_euclid(b)
}

impl Wanted {
    /// What any n numbers satisfy; squares have the parity of their roots.
    fn within_bounds(&self) -> bool {
        self.n >= 0
            && self.sum >= 0
            && self.most >= 0
            && self.sum <= self.n * self.most
            && (self.squares - self.sum) % 2 == 0
            && self.squares >= least_squares(self.n, self.sum)
            && self.squares <= most_squares(self.sum, self.most)
    }

    /// n times the sum of squared deviations from the mean.
    fn spread(&self) -> Int {
        self.n * self.squares - self.sum * self.sum
    }

    /// All numbers less `by`.
    fn shifted(&self, by: Int) -> Wanted {
        Wanted {
            n: self.n,
            sum: self.sum - self.n * by,
            squares: self.squares - 2 * by * self.sum + self.n * by * by,
            most: self.most - by,
        }
    }

    /// Seen from the other end: every x becomes `most` − x.
    fn mirrored(&self) -> Wanted {
        let (n, most) = (self.n, self.most);
        Wanted {
            sum: n * most - self.sum,
            squares: n * most * most - 2 * most * self.sum + self.squares,
            ..*self
        }
    }

    /// Without `count` numbers that are `value`; all others are smaller.
    fn without(&self, value: Int, count: Int) -> Wanted {
        Wanted {
            n: self.n - count,
            sum: self.sum - count * value,
            squares: self.squares - count * value * value,
            most: value - 1,
        }
    }

    /// No number lies further from the mean than this, over n: n·x − sum, squared, is at most the spread
    /// times n − 1.
    fn reach(&self) -> Int {
        let (spread, others) = (self.spread(), self.n - 1);
        match spread.checked_mul(others) {
            Some(product) => product.isqrt(),
            None => (spread.isqrt() + 1) * (others.isqrt() + 1),
        }
    }

    /// What number theory says about the spread of three or four whole numbers, whatever their limits.
    fn representable(&self) -> bool {
        let mut spread = self.spread();
        match self.n {
            // The spread is 2(a² + ab + b²); a prime that leaves 2 modulo 3 divides a² + ab + b² an even number
            // of times (the common ones are tried).
            3 if spread > 0 => {
                spread /= 2;
                [2, 5, 11].into_iter().all(|prime| {
                    let mut times = 0;
                    while spread % prime == 0 {
                        spread /= prime;
                        times += 1;
                    }
                    times % 2 == 0
                })
            }
            // The spread is a² + b² + c² (with a = x₁ + x₂ − x₃ − x₄ and so on), which Legendre's theorem of
            // three squares excludes for 4ʲ(8k + 7).
            4 if spread > 0 => {
                while spread % 4 == 0 {
                    spread /= 4;
                }
                spread % 8 != 7
            }
            _ => true,
        }
    }

    /// How many numbers can at most be `value`, the largest, so that the rest can still have as few squares.
    /// For exact halves the rest's room above its least squares falls linearly with the count; for whole
    /// numbers it is a concave function of it, so that bisection finds its last zero.
    fn most_copies(&self, value: Int) -> Int {
        let each = self.n * value * value - 2 * self.sum * value + self.squares;
        let mut count = (self.sum / value).min(self.n);
        if each > 0 {
            count = count.min(self.spread() / each);
        }
        let roomy = |count: Int| {
            let rest = self.without(value, count);
            rest.squares >= least_squares(rest.n, rest.sum)
        };
        if roomy(count) {
            return count;
        }
        let mut fits = 0;
        while count - fits > 1 {
            let middle = (fits + count) / 2;
            if roomy(middle) {
                fits = middle;
            } else {
                count = middle;
            }
        }
        fits
    }
}

/// Where a number of the current problem stands in the original one.
#[derive(Clone, Copy)]
struct View {
    origin: Int,
    mirrored: bool,
}

impl View {
    fn original(self, value: Int) -> Int {
        if self.mirrored {
            self.origin - value
        } else {
            self.origin + value
        }
    }

    fn shifted(self, by: Int) -> View {
        View {
            origin: self.original(by),
            ..self
        }
    }

    fn seen_from_the_other_end(self, most: Int) -> View {
        View {
            origin: self.original(most),
            mirrored: !self.mirrored,
        }
    }
}

/// A search with a limit on its length, which remembers what it has found impossible.
pub struct Search {
    left: u64,
    failed: HashSet<Wanted>,
}

impl Search {
    /// At most this many steps, each of well under a microsecond when optimised.
    pub fn new(steps: u64) -> Search {
        Search {
            left: steps,
            failed: HashSet::new(),
        }
    }

    /// Counts one step.
    pub fn step(&mut self) -> Result<(), TooDear> {
        self.steps(1)
    }

    /// Counts work that takes as long as that many steps.
    pub fn steps(&mut self, many: u64) -> Result<(), TooDear> {
        self.left = self.left.checked_sub(many).ok_or(TooDear)?;
        Ok(())
    }

    /// The numbers that are wanted, if there are any.
    pub fn find(&mut self, wanted: Wanted) -> Result<Option<Counts>, TooDear> {
        let mut found = Counts::new();
        let view = View {
            origin: 0,
            mirrored: false,
        };
        Ok(self.fill(wanted, view, &mut found)?.then_some(found))
    }

    fn fill(&mut self, wanted: Wanted, view: View, found: &mut Counts) -> Result<bool, TooDear> {
        if !wanted.within_bounds() {
            return Ok(false);
        }
        self.step()?;
        if wanted.n == 0 {
            return Ok(true);
        }
        // Draw the limits in to what the spread allows.
        let reach = wanted.reach();
        let low = ceil_div(wanted.sum - reach, wanted.n).max(0);
        let most = (wanted.sum + reach).div_euclid(wanted.n).min(wanted.most);
        let (mut wanted, mut view) = (Wanted { most, ..wanted }.shifted(low), view.shifted(low));
        if !wanted.within_bounds() || !wanted.representable() {
            return Ok(false);
        }
        if wanted.most == 0 {
            found.push((view.original(0), wanted.n));
            return Ok(true);
        }
        let other = wanted.mirrored();
        if other.sum < wanted.sum {
            (wanted, view) = (other, view.seen_from_the_other_end(wanted.most));
        }
        if wanted.n == 2 {
            return Ok(pair(&wanted, view, found));
        }
        if self.failed.contains(&wanted) {
            return Ok(false);
        }
        let kept = found.len();
        // The largest number is at least the mean, and at least the mean weighted by the numbers themselves.
        let least = ceil_div(wanted.sum, wanted.n).max(ceil_div(wanted.squares, wanted.sum));
        for value in (least..=wanted.most).rev() {
            self.step()?;
            for count in (1..=wanted.most_copies(value)).rev() {
                let rest = wanted.without(value, count);
                // All others lie between 0 and value − 1. With fewer copies this only gets worse.
                if rest.most * rest.sum < rest.squares {
                    break;
                }
                found.push((view.original(value), count));
                if self.fill(rest, view, found)? {
                    return Ok(true);
                }
                found.truncate(kept);
            }
        }
        self.failed.insert(wanted);
        Ok(false)
    }
}

/// Two numbers follow from their sum and sum of squares.
fn pair(wanted: &Wanted, view: View, found: &mut Counts) -> bool {
    let apart = wanted.spread().isqrt();
    // Sum and distance have the same parity, because the squares have that of the sum.
    let (small, large) = ((wanted.sum - apart) / 2, (wanted.sum + apart) / 2);
    if apart * apart != wanted.spread() || small < 0 || large > wanted.most {
        return false;
    }
    found.extend([(view.original(small), 1), (view.original(large), 1)]);
    true
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Every sum and sum of squares that n numbers from 0 to `most` have, by adding one number after another.
    fn all_pairs(n: Int, most: Int) -> HashSet<(Int, Int)> {
        let mut pairs = HashSet::from([(0, 0)]);
        for _ in 0..n {
            let longer = |(sum, squares): &(Int, Int)| {
                let (sum, squares) = (*sum, *squares);
                (0..=most).map(move |x| (sum + x, squares + x * x))
            };
            pairs = pairs.iter().flat_map(longer).collect();
        }
        pairs
    }

    /// Enumeration is the outside judge here.
    #[test]
    fn agrees_with_full_enumeration() {
        for most in 0..=7 {
            for n in 0..=9 {
                let pairs = all_pairs(n, most);
                for sum in 0..=n * most {
                    for squares in 0..=sum * most {
                        let wanted = Wanted {
                            n,
                            sum,
                            squares,
                            most,
                        };
                        let found = Search::new(10_000).find(wanted).expect("it is short");
                        assert_eq!(found.is_some(), pairs.contains(&(sum, squares)), "{wanted:?}");
                        let Some(counts) = found else { continue };
                        let total = |f: fn(Int) -> Int| counts.iter().map(|(x, c)| f(*x) * c).sum::<Int>();
                        assert_eq!(
                            [total(|_| 1), total(|x| x), total(|x| x * x)],
                            [n, sum, squares],
                            "{wanted:?}"
                        );
                        assert!(counts.iter().all(|(x, c)| (0..=most).contains(x) && *c > 0));
                    }
                }
            }
        }
    }

    /// 7 and 15 are no sums of three squares (Legendre 1798), so no four whole numbers have that spread;
    /// from five numbers on there are no such gaps: of all spreads of the right parity none is missing.
    #[test]
    fn four_numbers_have_gaps_and_five_have_none_while_the_limits_are_far() {
        let far = 60;
        for n in 4..=7 {
            for over in 0..n {
                for step in 0..200 {
                    let sum = n * far / 2 + over;
                    let squares = least_squares(n, sum) + 2 * step;
                    let wanted = Wanted {
                        n,
                        sum,
                        squares,
                        most: far,
                    };
                    let found = Search::new(100_000).find(wanted).expect("it is short").is_some();
                    let mut spread = wanted.spread();
                    while spread > 0 && spread % 4 == 0 {
                        spread /= 4;
                    }
                    assert_eq!(found, n > 4 || spread % 8 != 7, "{wanted:?}");
                }
            }
        }
    }
}
