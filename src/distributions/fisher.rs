//! *Fisher's exact test* of a 2×2 table with the counts a, b in its first row and c, d in its second: given all four
//! margins, a is hypergeometric.
//!
//! The probability of one table is in Loader's (2000) form, from three binomial ones; its neighbours follow by their
//! ratio, and a tail is added up outward from its largest term.

use super::binomial::{TIE, first, ln_probability};

/// Tables with a larger total are not legal.
const MOST: u64 = 1_000_000_000_000;

/// P(A = a): the probability of this table among all with the same margins. None if the total is 0 or above 1e12.
pub fn fisher_probability(table: [u64; 4]) -> Option<f64> {
    let (margins, a) = Margins::of(table)?;
    Some(margins.ln_probability(a).exp())
}

/// One-sided p of Fisher's exact test: P(A ≥ a). None if the total is 0 or above 1e12.
pub fn fisher_at_least(table: [u64; 4]) -> Option<f64> {
    let (margins, a) = Margins::of(table)?;
    Some(margins.at_least(a))
}

/// One-sided p of Fisher's exact test: P(A ≤ a). None if the total is 0 or above 1e12.
pub fn fisher_at_most(table: [u64; 4]) -> Option<f64> {
    let (margins, a) = Margins::of(table)?;
    Some(margins.at_most(a))
}

/// Two-sided p of Fisher's exact test: the probabilities of all tables that are not more probable than this one,
/// together. None if the total is 0 or above 1e12.
pub fn fisher_two_sided(table: [u64; 4]) -> Option<f64> {
    let (margins, a) = Margins::of(table)?;
    let rare = |j: u64| margins.ln_probability(j) <= margins.ln_probability(a) + TIE;
    let mode = margins.mode();
    if rare(mode) {
        return Some(1.0);
    }
    Some(if a < mode {
        let other = first(mode, margins.most, rare).map_or(0.0, |j| margins.at_least(j));
        (margins.at_most(a) + other).min(1.0)
    } else {
        let below = first(0, mode - margins.least, |j| rare(mode - j));
        let other = below.map_or(0.0, |j| margins.at_most(mode - j));
        (margins.at_least(a) + other).min(1.0)
    })
}

struct Margins {
    row: u64,
    column: u64,
    total: u64,
    /// The smallest and the largest a that the margins allow.
    least: u64,
    most: u64,
}

impl Margins {
    fn of([a, b, c, d]: [u64; 4]) -> Option<(Margins, u64)> {
        let total = a.checked_add(b)?.checked_add(c)?.checked_add(d)?;
        if total == 0 || total > MOST {
            return None;
        }
        let (row, column) = (a + b, a + c);
        let margins = Margins {
            row,
            column,
            total,
            least: (row + column).saturating_sub(total),
            most: row.min(column),
        };
        Some((margins, a))
    }

    fn mode(&self) -> u64 {
        // In whole numbers of 128 bits, because the product is too large for others.
        let product = u128::from(self.row + 1) * u128::from(self.column + 1);
        let mode = (product / u128::from(self.total + 2)) as u64;
        mode.clamp(self.least, self.most)
    }

    fn ln_probability(&self, a: u64) -> f64 {
        let [row, column, total, a] = [self.row, self.column, self.total, a].map(|n| n as f64);
        let p = column / total;
        // Any p gives the same; this one keeps all three of moderate size.
        ln_probability(a, row, p) + ln_probability(column - a, total - row, p)
            - ln_probability(column, total, p)
    }

    fn at_least(&self, a: u64) -> f64 {
        if a <= self.least {
            return 1.0;
        }
        if a > self.mode() {
            self.outward(a, true)
        } else {
            1.0 - self.outward(a - 1, false)
        }
    }

    fn at_most(&self, a: u64) -> f64 {
        if a >= self.most {
            return 1.0;
        }
        if a < self.mode() {
            self.outward(a, false)
        } else {
            1.0 - self.outward(a + 1, true)
        }
    }

    /// The sum of the probabilities from `a` to the end of the distribution, upward or downward.
    fn outward(&self, a: u64, up: bool) -> f64 {
        let [row, column, total] = [self.row, self.column, self.total].map(|n| n as f64);
        let mut j = a as f64;
        let end = if up { self.most as f64 } else { self.least as f64 };
        let (mut sum, mut term) = (1.0, 1.0);
        while j != end {
            let corner = total - row - column + j;
            let ratio = if up {
                (row - j) / (j + 1.0) * ((column - j) / (corner + 1.0))
            } else {
                j / (row - j + 1.0) * (corner / (column - j + 1.0))
            };
            term *= ratio;
            sum += term;
            // The ratios fall, so that what is left is less than a geometric series.
            if ratio < 1.0 && term <= 1e-17 * sum * (1.0 - ratio) {
                break;
            }
            j += if up { 1.0 } else { -1.0 };
        }
        (self.ln_probability(a) + f64::ln(sum)).exp().min(1.0)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_lady_tasting_tea() {
        // Eight cups, four of each kind, by hand: 1, 16, 36, 16, 1 out of 70.
        let close = |got: Option<f64>, expected: f64| {
            let got = got.expect("legal");
            assert!((got / expected - 1.0).abs() < 1e-14, "{got} is not {expected}");
        };
        close(fisher_at_least([3, 1, 1, 3]), 17.0 / 70.0);
        close(fisher_at_most([3, 1, 1, 3]), 69.0 / 70.0);
        close(fisher_two_sided([3, 1, 1, 3]), 34.0 / 70.0);
        close(fisher_two_sided([4, 0, 0, 4]), 2.0 / 70.0);
        close(fisher_probability([2, 2, 2, 2]), 36.0 / 70.0);
        close(fisher_two_sided([2, 2, 2, 2]), 1.0);
        // One table only fits these margins.
        close(fisher_two_sided([5, 0, 7, 0]), 1.0);
        assert_eq!(fisher_two_sided([0; 4]), None);
        assert_eq!(fisher_two_sided([u64::MAX, 1, 1, 1]), None);
    }
}
