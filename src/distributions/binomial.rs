//! The *binomial* distribution: how many of n cases have a property that each has with probability p. Its tails are
//! incomplete beta functions; the probability of one number is in Loader's (2000) deviance form.

use super::beta::Cut;
use super::special::{deviance, ln_root_2pi, stirling_rest};

/// More cases are not legal: their number would not be exact as a double.
const MOST: u64 = 1 << 53;

/// Two probabilities this close are taken for equal where those not above the observed one are added up, as is common
/// practice, so that rounding does not drop the mirror image of what was observed.
pub(super) const TIE: f64 = 1e-7;

/// P(X = k) for n cases; None unless k ≤ n ≤ 2⁵³ and 0 ≤ p ≤ 1.
pub fn binomial_probability(k: u64, n: u64, p: f64) -> Option<f64> {
    legal(k, n, p).then(|| ln_probability(k as f64, n as f64, p).exp())
}

/// P(X ≥ k); None unless k ≤ n ≤ 2⁵³ and 0 ≤ p ≤ 1.
pub fn binomial_at_least(k: u64, n: u64, p: f64) -> Option<f64> {
    legal(k, n, p).then(|| at_least(k, n, p))
}

/// P(X ≤ k); None unless k ≤ n ≤ 2⁵³ and 0 ≤ p ≤ 1.
pub fn binomial_at_most(k: u64, n: u64, p: f64) -> Option<f64> {
    legal(k, n, p).then(|| at_most(k, n, p))
}

/// The two-sided p of the exact binomial test: the probabilities of all numbers that are not more probable than k,
/// together. None unless k ≤ n ≤ 2⁵³ and 0 ≤ p ≤ 1.
pub fn binomial_two_sided(k: u64, n: u64, p: f64) -> Option<f64> {
    if !legal(k, n, p) {
        return None;
    }
    let rare = |j: u64| ln_probability(j as f64, n as f64, p) <= ln_probability(k as f64, n as f64, p) + TIE;
    let mode = (((n + 1) as f64 * p) as u64).min(n);
    if rare(mode) {
        return Some(1.0);
    }
    Some(if k < mode {
        let other = first(mode, n, rare).map_or(0.0, |j| at_least(j, n, p));
        (at_most(k, n, p) + other).min(1.0)
    } else {
        let other = first(0, mode, |j| rare(mode - j)).map_or(0.0, |j| at_most(mode - j, n, p));
        (at_least(k, n, p) + other).min(1.0)
    })
}

/// The first number in low..=high that has a property which all after it have too; None if none has.
pub(super) fn first(low: u64, high: u64, has: impl Fn(u64) -> bool) -> Option<u64> {
    let (mut low, mut beyond) = (low, high + 1);
    while low < beyond {
        let middle = low + (beyond - low) / 2;
        if has(middle) {
            beyond = middle;
        } else {
            low = middle + 1;
        }
    }
    (low <= high).then_some(low)
}

fn legal(k: u64, n: u64, p: f64) -> bool {
    k <= n && n <= MOST && (0.0..=1.0).contains(&p)
}

fn at_least(k: u64, n: u64, p: f64) -> f64 {
    if k == 0 {
        return 1.0;
    }
    Cut::at(k as f64, (n - k) as f64 + 1.0, p).tails().lower()
}

fn at_most(k: u64, n: u64, p: f64) -> f64 {
    if k == n {
        return 1.0;
    }
    Cut::at(k as f64 + 1.0, (n - k) as f64, p).tails().upper()
}

/// ln P(X = k), for legal arguments.
pub(super) fn ln_probability(k: f64, n: f64, p: f64) -> f64 {
    let rest = n - k;
    // 0·ln 0 is 0 here.
    if k == 0.0 {
        return if n == 0.0 { 0.0 } else { n * (-p).ln_1p() };
    }
    if rest == 0.0 {
        return n * p.ln();
    }
    if p == 0.0 || p == 1.0 {
        return f64::NEG_INFINITY;
    }
    let excess = n.mul_add(p, -k);
    stirling_rest(n)
        - stirling_rest(k)
        - stirling_rest(rest)
        - deviance(k, n * p, excess)
        - deviance(rest, n * (1.0 - p), -excess)
        - ln_root_2pi(k / n * rest)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn small_cases_by_hand() {
        let close = |got: Option<f64>, expected: f64| {
            let got = got.expect("legal");
            assert!((got - expected).abs() < 1e-14, "{got} is not {expected}");
        };
        close(binomial_probability(2, 4, 0.5), 6.0 / 16.0);
        close(binomial_at_least(3, 4, 0.5), 5.0 / 16.0);
        close(binomial_at_most(0, 3, 0.25), 27.0 / 64.0);
        close(binomial_two_sided(1, 4, 0.5), 10.0 / 16.0);
        close(binomial_two_sided(2, 4, 0.5), 1.0);
        // P(0) = 27/64, P(1) = 27/64, P(2) = 9/64, P(3) = 1/64.
        close(binomial_two_sided(2, 3, 0.25), 10.0 / 64.0);
        close(binomial_two_sided(3, 3, 1.0), 1.0);
        close(binomial_two_sided(0, 0, 0.3), 1.0);
        close(binomial_at_least(1, 3, 0.0), 0.0);
        assert_eq!(binomial_at_least(4, 3, 0.5), None);
        assert_eq!(binomial_at_most(1, 3, 1.5), None);
        assert_eq!(binomial_probability(1, 3, f64::NAN), None);
    }
}
