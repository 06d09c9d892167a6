//! The exact distributions of *rank* statistics without ties: U of Mann & Whitney (1947) for two samples, and W of
//! Wilcoxon (1945), the sum of the ranks of the positive differences of one.
//!
//! Arrangements are counted in whole numbers of 128 bits, so that the probabilities are exact up to one rounding.

/// Exact counts are kept up to this product of the sample sizes.
const MOST_PAIRS: u64 = 20_000;

/// More differences would have more sign patterns than fit into 128 bits.
const MOST_DIFFERENCES: u64 = 127;

/// P(U ≤ u) for samples of n1 and n2 without ties. None if a sample is empty, u > n1·n2, n1·n2 > 20,000, or there
/// are more arrangements than 128 bits can count (from about n1 = n2 = 66).
pub fn rank_sum_at_most(u: u64, n1: u64, n2: u64) -> Option<f64> {
    let (counts, all) = rank_sum_counts(n1, n2)?;
    at_most(u, &counts, all)
}

/// P(U ≥ u); None as for [`rank_sum_at_most`].
pub fn rank_sum_at_least(u: u64, n1: u64, n2: u64) -> Option<f64> {
    // U is distributed as n1·n2 − U.
    let mirrored = n1.checked_mul(n2)?.checked_sub(u)?;
    rank_sum_at_most(mirrored, n1, n2)
}

/// Two-sided exact p of a rank-sum test: twice the smaller tail, at most 1. None as for [`rank_sum_at_most`].
pub fn rank_sum_two_sided(u: u64, n1: u64, n2: u64) -> Option<f64> {
    let other = n1.checked_mul(n2)?.checked_sub(u)?;
    Some((2.0 * rank_sum_at_most(u.min(other), n1, n2)?).min(1.0))
}

/// P(W ≤ w) for n differences without ties or zeros. None unless 1 ≤ n ≤ 127 and w ≤ n(n + 1)/2.
pub fn signed_rank_at_most(w: u64, n: u64) -> Option<f64> {
    at_most(w, &signed_rank_counts(n)?, 1u128 << n)
}

/// P(W ≥ w); None as for [`signed_rank_at_most`].
pub fn signed_rank_at_least(w: u64, n: u64) -> Option<f64> {
    let mirrored = n.checked_mul(n.checked_add(1)?)?.checked_div(2)?.checked_sub(w)?;
    signed_rank_at_most(mirrored, n)
}

/// Two-sided exact p of a signed-rank test: twice the smaller tail, at most 1. None as for [`signed_rank_at_most`].
pub fn signed_rank_two_sided(w: u64, n: u64) -> Option<f64> {
    Some((2.0 * signed_rank_at_most(w, n)?.min(signed_rank_at_least(w, n)?)).min(1.0))
}

fn at_most(statistic: u64, counts: &[u128], all: u128) -> Option<f64> {
    let statistic = usize::try_from(statistic).ok()?;
    // None beyond the largest value.
    let up_to: u128 = counts.get(..=statistic)?.iter().sum();
    Some(up_to as f64 / all as f64)
}

/// How many of the arrangements of the two samples have each U from 0 to n1·n2, and how many there are.
fn rank_sum_counts(n1: u64, n2: u64) -> Option<(Vec<u128>, u128)> {
    let pairs = n1.checked_mul(n2)?;
    if pairs == 0 || pairs > MOST_PAIRS {
        return None;
    }
    let (few, many) = (n1.min(n2), n1.max(n2));
    let mut all = 1u128;
    for i in 1..=few {
        // all·(many + i)/i, whole in every step because it is a binomial coefficient; divided first, so that nothing
        // overflows that would fit in the end.
        let (factor, i) = (u128::from(many + i), u128::from(i));
        all = (all / i).checked_mul(factor)?.checked_add(all % i * factor / i)?;
    }
    // The coefficients of Π (1 − x^(many + i))/(1 − x^i). Steps may wrap around; the result fits, so it is right.
    let mut counts = vec![0u128; pairs as usize + 1];
    counts[0] = 1;
    for i in 1..=few as usize {
        for u in i..counts.len() {
            counts[u] = counts[u].wrapping_add(counts[u - i]);
        }
        let gap = many as usize + i;
        for u in (gap..counts.len()).rev() {
            counts[u] = counts[u].wrapping_sub(counts[u - gap]);
        }
    }
    Some((counts, all))
}

/// How many of the 2^n sign patterns have each W from 0 to n(n + 1)/2.
fn signed_rank_counts(n: u64) -> Option<Vec<u128>> {
    if n == 0 || n > MOST_DIFFERENCES {
        return None;
    }
    let mut counts = vec![0u128; (n * (n + 1) / 2) as usize + 1];
    counts[0] = 1;
    for rank in 1..=n as usize {
        for w in (rank..counts.len()).rev() {
            counts[w] += counts[w - rank];
        }
    }
    Some(counts)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn counts_add_up_and_are_symmetric() {
        for (n1, n2) in [(1, 1), (3, 2), (8, 8), (5, 40), (66, 64), (1, 20_000)] {
            let (counts, all) = rank_sum_counts(n1, n2).expect("legal");
            assert_eq!(counts.iter().sum::<u128>(), all, "{n1} {n2}");
            assert!(counts.iter().eq(counts.iter().rev()));
        }
        let counts = signed_rank_counts(127).expect("legal");
        assert_eq!(counts.iter().sum::<u128>(), 1 << 127);
    }

    #[test]
    fn every_arrangement_of_small_samples() {
        // By listing all subsets of the ranks 1 to 7 that a sample of 3 can have, and all signs of 5 differences.
        let mut of_u = [0u32; 13];
        for subset in 0u32..128 {
            if subset.count_ones() == 3 {
                let ranks: u32 = (0..7).filter(|i| subset >> i & 1 == 1).map(|i| i + 1).sum();
                of_u[(ranks - 6) as usize] += 1;
            }
        }
        let mut of_w = [0u32; 16];
        for signs in 0u32..32 {
            of_w[(0..5)
                .filter(|i| signs >> i & 1 == 1)
                .map(|i| i + 1)
                .sum::<usize>()] += 1;
        }
        for u in 0..=12 {
            let below: u32 = of_u[..=u as usize].iter().sum();
            assert_eq!(rank_sum_at_most(u, 3, 4), Some(f64::from(below) / 35.0));
        }
        for w in 0..=15 {
            let below: u32 = of_w[..=w as usize].iter().sum();
            assert_eq!(signed_rank_at_most(w, 5), Some(f64::from(below) / 32.0));
        }
    }

    #[test]
    fn illegal_arguments() {
        assert_eq!(rank_sum_two_sided(0, 0, 5), None);
        assert_eq!(rank_sum_two_sided(13, 3, 4), None);
        assert_eq!(rank_sum_at_most(0, 200, 200), None);
        assert_eq!(rank_sum_at_most(0, u64::MAX, 2), None);
        assert_eq!(signed_rank_two_sided(16, 5), None);
        assert_eq!(signed_rank_at_most(0, 128), None);
        assert_eq!(signed_rank_at_least(0, u64::MAX), None);
    }
}
