//! Any legal arguments at all: 100,000 random points over all functions, of every size that a double has, and tails
//! that have to move in one direction.

use super::super::*;
use proptest::prelude::*;

/// Random numbers that are the same in every run (SplitMix64; Steele, Lea & Flood 2014).
struct Random(u64);

impl Random {
    fn bits(&mut self) -> u64 {
        self.0 = self.0.wrapping_add(0x9E37_79B9_7F4A_7C15);
        let z = (self.0 ^ (self.0 >> 30)).wrapping_mul(0xBF58_476D_1CE4_E5B9);
        let z = (z ^ (z >> 27)).wrapping_mul(0x94D0_49BB_1331_11EB);
        z ^ (z >> 31)
    }

    /// Between 0 and 1.
    fn unit(&mut self) -> f64 {
        (self.bits() >> 11) as f64 / (1u64 << 53) as f64
    }

    /// Between two positive numbers, every order of magnitude alike.
    fn between(&mut self, low: f64, high: f64) -> f64 {
        (low.ln() + self.unit() * (high.ln() - low.ln()))
            .exp()
            .clamp(low, high)
    }

    /// A positive number: mostly one that is met in papers, sometimes any double, sometimes an end.
    fn positive(&mut self) -> f64 {
        match self.bits() % 8 {
            0 => self.between(LEAST, f64::MAX),
            1 => self.between(1e-9, 1e12),
            2 => [1.0, 0.5, 2.0, LEAST, f64::MAX, 1e-9][self.bits() as usize % 6],
            3 => (self.bits() % 400 + 1) as f64,
            _ => self.between(0.01, 1e4),
        }
    }

    fn df(&mut self) -> f64 {
        if self.bits().is_multiple_of(50) {
            f64::INFINITY
        } else {
            self.positive()
        }
    }

    fn statistic(&mut self) -> f64 {
        match self.bits() % 40 {
            0 => 0.0,
            1 => f64::INFINITY,
            2 => f64::NEG_INFINITY,
            n => self.positive() * if n % 3 == 0 { -1.0 } else { 1.0 },
        }
    }

    fn probability(&mut self) -> f64 {
        match self.bits() % 6 {
            0 => self.between(f64::MIN_POSITIVE, 0.5),
            1 => 1.0 - self.between(2e-16, 0.5),
            _ => self.between(1e-12, 0.999_999),
        }
    }

    fn count(&mut self, most: f64) -> u64 {
        (self.between(1.0, most) as u64).saturating_sub(self.bits() % 2)
    }
}

#[track_caller]
fn probability(name: &str, arguments: &[f64], answer: Option<f64>) {
    let p = answer.unwrap_or_else(|| panic!("{name}{arguments:?} has no answer"));
    assert!((0.0..=1.0).contains(&p), "{name}{arguments:?} is {p}");
}

#[track_caller]
fn tails(name: &str, arguments: &[f64], answer: Option<Tails>) {
    let tails = answer.unwrap_or_else(|| panic!("{name}{arguments:?} has no answer"));
    let (lower, upper) = (tails.lower(), tails.upper());
    probability(name, arguments, Some(lower));
    probability(name, arguments, Some(upper));
    assert!(
        (lower + upper - 1.0).abs() < 1e-14,
        "{name}{arguments:?}: {tails:?}"
    );
    for ln in [tails.ln_lower(), tails.ln_upper()] {
        assert!(ln <= 0.0, "{name}{arguments:?}: {tails:?}");
    }
}

/// A value of a quantile, and whether the tail there is what was asked for, where doubles are fine enough to tell.
#[track_caller]
fn quantile(
    name: &str,
    arguments: &[f64],
    answer: Option<f64>,
    least: f64,
    tail: impl Fn(f64) -> Option<f64>,
) {
    let p = arguments[0];
    let x = answer.unwrap_or_else(|| panic!("{name}{arguments:?} has no answer"));
    assert!(x >= least, "{name}{arguments:?} is {x}");
    // From a little below to a little above, the tail passes p.
    let (below, above) = if x < 0.0 {
        (1.0 + 1e-12, 1.0 - 1e-12)
    } else {
        (1.0 - 1e-12, 1.0 + 1e-12)
    };
    if (1e-290..1e290).contains(&x.abs()) {
        let (high, low) = (tail(x * below).expect("legal"), tail(x * above).expect("legal"));
        let slack = 1e-11 * p.min(1.0 - p).max(1e-290);
        assert!(
            low - slack <= p && p <= high + slack,
            "{name}{arguments:?} is {x}: {low:e} {high:e}"
        );
    }
}

/// One point of each cheap function.
fn cheap(random: &mut Random) {
    let (x, df, df2, p) = (random.statistic(), random.df(), random.df(), random.probability());
    let r = 2.0 * random.unit() - 1.0;
    tails("normal", &[x], normal_tails(x));
    probability("normal two-sided", &[x], normal_two_sided(x));
    tails("t", &[x, df], t_tails(x, df));
    probability("t two-sided", &[x, df], t_two_sided(x, df));
    tails("F", &[x, df, df2], f_tails(x, df, df2));
    tails("χ²", &[x, df], chi2_tails(x, df));
    tails("r", &[r, df], r_tails(r, df));
    let share = random.between(1e-300, 1.0);
    tails("beta", &[df, df2, share], beta_tails(df, df2, share));
    tails("gamma", &[df, x.abs()], gamma_tails(df, x.abs()));
    probability(
        "ratio",
        &[x.abs(), df, df2],
        Some(ratio_upper(x.abs(), df.min(1e150), df2.min(1e150))),
    );
    let (n, share) = (random.count(9e15), random.unit());
    let k = (n as f64 * random.unit()) as u64;
    let arguments = [k as f64, n as f64, share];
    probability("binomial", &arguments, binomial_probability(k, n, share));
    probability("at least", &arguments, binomial_at_least(k, n, share));
    probability("at most", &arguments, binomial_at_most(k, n, share));
    let z = normal_quantile_upper(p).expect("legal");
    assert!(z.is_finite());
}

fn quantiles(random: &mut Random) {
    let (df, df2, p) = (random.df(), random.df(), random.probability());
    quantile(
        "t upper",
        &[p, df],
        t_quantile_upper(p, df),
        f64::NEG_INFINITY,
        |t| t_upper(t, df),
    );
    quantile("t two-sided", &[p, df], t_quantile_two_sided(p, df), 0.0, |t| {
        t_two_sided(t, df)
    });
    quantile("r", &[p, df], r_quantile_two_sided(p, df), 0.0, |r| {
        r_two_sided(r.min(1.0), df)
    });
    quantile("F", &[p, df, df2], f_quantile_upper(p, df, df2), 0.0, |f| {
        f_upper(f, df, df2)
    });
    quantile("χ²", &[p, df], chi2_quantile_upper(p, df), 0.0, |x| {
        chi2_upper(x, df)
    });
    let lower = chi2_quantile_lower(p, df).expect("legal");
    assert!(lower >= 0.0, "χ² lower {p} {df}: {lower}");
    let x = beta_quantile_lower(p, df, df2).expect("legal");
    assert!((0.0..=1.0).contains(&x), "beta {p} {df} {df2}: {x}");
}

fn counts(random: &mut Random) {
    let (n, share) = (random.count(1e15), random.unit());
    let k = (n as f64 * random.unit()) as u64;
    probability(
        "binomial two-sided",
        &[k as f64, n as f64, share],
        binomial_two_sided(k, n, share),
    );
    let most = random.between(2.0, 1e7);
    let table = [0; 4].map(|_| random.count(most));
    let cells = table.map(|n| n as f64);
    if table != [0; 4] {
        probability("Fisher two-sided", &cells, fisher_two_sided(table));
        probability("Fisher at least", &cells, fisher_at_least(table));
        probability("Fisher at most", &cells, fisher_at_most(table));
    }
    let (n1, n2) = (1 + random.bits() % 20, 1 + random.bits() % 20);
    let u = random.bits() % (n1 * n2 + 1);
    probability(
        "rank sum",
        &[u as f64, n1 as f64, n2 as f64],
        rank_sum_two_sided(u, n1, n2),
    );
    let w = random.bits() % (n1 * (n1 + 1) / 2 + 1);
    probability(
        "signed rank",
        &[w as f64, n1 as f64],
        signed_rank_two_sided(w, n1),
    );
}

fn noncentral(random: &mut Random) {
    let (x, df, df2) = (random.statistic(), random.df(), random.df());
    let lambda = random.positive().min(1e100);
    let delta = if random.bits().is_multiple_of(2) {
        lambda.min(1e10)
    } else {
        -random.between(1e-3, 300.0)
    };
    tails(
        "noncentral t",
        &[x, df.max(0.1), delta],
        noncentral_t_tails(x, df.max(0.1), delta),
    );
    tails(
        "noncentral F",
        &[x, df, df2, lambda],
        noncentral_f_tails(x, df, df2, lambda),
    );
    tails(
        "noncentral χ²",
        &[x, df, lambda],
        noncentral_chi2_tails(x, df, lambda),
    );
    // Where the noncentrality is in the tail or in the middle of it.
    let near = (df.min(1e9) + lambda.min(1e9)) * random.between(0.2, 5.0);
    tails(
        "noncentral χ²",
        &[near, df, lambda],
        noncentral_chi2_tails(near, df, lambda),
    );
}

fn noncentralities(random: &mut Random) {
    let (x, df, df2) = (
        random.between(1e-6, 1e4),
        random.between(0.1, 1e6),
        random.between(0.1, 1e6),
    );
    let p = random.probability();
    for lambda in [
        f_noncentrality_upper(p, x, df, df2),
        f_noncentrality_lower(p, x, df, df2),
        chi2_noncentrality_upper(p, x, df),
        chi2_noncentrality_lower(p, x, df),
    ] {
        let lambda = lambda.unwrap_or_else(|| panic!("λ for {p} {x} {df} {df2} has no answer"));
        assert!(
            (0.0..=MOST_NONCENTRAL).contains(&lambda),
            "{p} {x} {df} {df2}: {lambda}"
        );
    }
    let delta = t_noncentrality_upper(p, x, df);
    assert!(delta.is_none_or(f64::is_finite), "{p} {x} {df}: {delta:?}");
}

fn ranges(random: &mut Random) {
    let k = 2 + (random.bits() % 30) as u32;
    let (q, df) = (random.statistic(), random.df().max(1.0));
    tails(
        "studentized range",
        &[q, f64::from(k), df],
        studentized_range_tails(q, k, df),
    );
    let q = random.between(0.1, 20.0);
    tails(
        "studentized range",
        &[q, f64::from(k), df],
        studentized_range_tails(q, k, df),
    );
}

#[test]
fn a_hundred_thousand_points() {
    // Points per call of each, and how often; together 100,000.
    type Part = (fn(&mut Random), usize, usize);
    let parts: [Part; 6] = [
        (cheap, 14, 5_600),
        (quantiles, 7, 1_500),
        (counts, 6, 1_200),
        (noncentral, 4, 650),
        (noncentralities, 5, 240),
        (ranges, 2, 50),
    ];
    let points: usize = parts.iter().map(|(_, points, times)| points * times).sum();
    assert!(points >= 100_000, "{points}");
    let mut random = Random(20_261_201);
    for (part, _, times) in parts {
        for _ in 0..times {
            part(&mut random);
        }
    }
}

/// Up to this the own rounding may move a tail the wrong way.
const NOISE: f64 = 2e-12;

/// Between two values of a statistic, none of the tails moves the wrong way.
fn one_way(low: Option<Tails>, high: Option<Tails>) -> Result<(), TestCaseError> {
    let (low, high) = (low.expect("legal"), high.expect("legal"));
    prop_assert!(
        high.upper() <= low.upper() * (1.0 + NOISE),
        "{:e} {:e}",
        low.upper(),
        high.upper()
    );
    prop_assert!(
        low.lower() <= high.lower() * (1.0 + NOISE),
        "{:e} {:e}",
        low.lower(),
        high.lower()
    );
    Ok(())
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(400))]

    #[test]
    fn tails_are_monotone_in_the_statistic(
        x in -3f64..3.0, step in -16f64..0.5, df in -1f64..6.0, df2 in -1f64..6.0, lambda in -2f64..3.0,
    ) {
        let (x, df, df2, lambda) = (10f64.powf(x), 10f64.powf(df), 10f64.powf(df2), 10f64.powf(lambda));
        let y = x * (1.0 + 10f64.powf(step));
        one_way(normal_tails(x), normal_tails(y))?;
        one_way(t_tails(x, df), t_tails(y, df))?;
        one_way(t_tails(-y, df), t_tails(-x, df))?;
        one_way(f_tails(x, df, df2), f_tails(y, df, df2))?;
        one_way(chi2_tails(x * df, df), chi2_tails(y * df, df))?;
        one_way(r_tails(x / (1.0 + y), df), r_tails(y / (1.0 + y), df))?;
        let delta = lambda.sqrt();
        one_way(noncentral_t_tails(x, df, delta), noncentral_t_tails(y, df, delta))?;
        one_way(noncentral_f_tails(x, df, df2, lambda), noncentral_f_tails(y, df, df2, lambda))?;
        one_way(noncentral_chi2_tails(x * df, df, lambda), noncentral_chi2_tails(y * df, df, lambda))?;
        // With the noncentrality the tails move the other way.
        let more = y / x * lambda;
        one_way(noncentral_chi2_tails(x * df, df, more), noncentral_chi2_tails(x * df, df, lambda))?;
        one_way(noncentral_f_tails(x, df, df2, more), noncentral_f_tails(x, df, df2, lambda))?;
    }

    #[test]
    fn discrete_tails_are_monotone(n in 1u64..5000, k in 0f64..1.0, p in 0f64..1.0, table in any::<[u8; 4]>()) {
        let k = (n as f64 * k) as u64;
        if k < n {
            let least = |k| binomial_at_least(k, n, p).expect("legal");
            prop_assert!(least(k + 1) <= least(k) * (1.0 + NOISE));
        }
        let [a, b, c, d] = table.map(u64::from);
        // One more in a with the same margins.
        if b > 0 && c > 0 {
            let (less, more) = ([a, b, c, d], [a + 1, b - 1, c - 1, d + 1]);
            prop_assert!(fisher_at_least(more).expect("legal") <= fisher_at_least(less).expect("legal"));
            prop_assert!(fisher_at_most(less).expect("legal") <= fisher_at_most(more).expect("legal"));
        }
    }
}

#[test]
fn the_studentized_range_is_monotone() {
    for (k, df) in [(3, 10.0), (6, 2.5), (12, 1e5)] {
        let at = |q: f64| studentized_range_tails(q, k, df).expect("legal");
        for q in [0.3, 2.0, 5.0, 30.0] {
            for step in [1e-15, 1e-9, 1e-3] {
                let (low, high) = (at(q), at(q * (1.0 + step)));
                assert!(high.upper() <= low.upper() * (1.0 + NOISE));
                assert!(low.lower() <= high.lower() * (1.0 + NOISE));
            }
        }
    }
}
