//! Simulated studies of watering diaries: raw data first, then the statistics by textbook formulas
//! (common practice), and only then text.

use crate::tails;

/// A small generator of its own (SplitMix64, public domain), so that runs can be repeated.
pub struct Random(pub u64);

impl Random {
    pub fn next(&mut self) -> u64 {
        self.0 = self.0.wrapping_add(0x9e37_79b9_7f4a_7c15);
        let mut z = self.0;
        z = (z ^ (z >> 30)).wrapping_mul(0xbf58_476d_1ce4_e5b9);
        z = (z ^ (z >> 27)).wrapping_mul(0x94d0_49bb_1331_11eb);
        z ^ (z >> 31)
    }

    pub fn unit(&mut self) -> f64 {
        (self.next() >> 11) as f64 / (1u64 << 53) as f64
    }

    /// A whole number from `low` to `high`.
    pub fn whole(&mut self, low: usize, high: usize) -> usize {
        low + (self.next() % (high - low + 1) as u64) as usize
    }

    /// Standard normal, by Box and Muller.
    pub fn normal(&mut self) -> f64 {
        let (u, v) = (self.unit().max(1e-300), self.unit());
        (-2.0 * u.ln()).sqrt() * (std::f64::consts::TAU * v).cos()
    }

    pub fn sample(&mut self, n: usize, mean: f64, sd: f64) -> Vec<f64> {
        (0..n).map(|_| mean + sd * self.normal()).collect()
    }

    pub fn pick<T: Copy>(&mut self, of: &[T]) -> T {
        of[self.whole(0, of.len() - 1)]
    }
}

pub fn mean(x: &[f64]) -> f64 {
    x.iter().sum::<f64>() / x.len() as f64
}

pub fn variance(x: &[f64]) -> f64 {
    let m = mean(x);
    x.iter().map(|v| (v - m) * (v - m)).sum::<f64>() / (x.len() - 1) as f64
}

/// A test statistic with its degrees of freedom, p, and effect sizes that belong to it.
#[derive(Clone, Debug)]
pub struct Result {
    /// `t`, `F`, `χ2`, `z`, `r`, `H`.
    pub symbol: &'static str,
    pub value: f64,
    pub df: Vec<f64>,
    /// Total sample size, for χ².
    pub total: Option<usize>,
    pub p: f64,
    /// Spelling and value.
    pub effects: Vec<(&'static str, f64)>,
}

/// Two groups, Student or Welch.
pub fn two_groups(r: &mut Random) -> Result {
    let (n1, n2) = (r.whole(3, 70), r.whole(3, 70));
    let shift = r.normal();
    let a = r.sample(n1, 10.0 + shift, 2.0);
    let b = r.sample(n2, 10.0, 2.0);
    let (v1, v2, f1, f2) = (variance(&a), variance(&b), n1 as f64, n2 as f64);
    let difference = mean(&a) - mean(&b);
    let pooled = (((f1 - 1.0) * v1 + (f2 - 1.0) * v2) / (f1 + f2 - 2.0)).sqrt();
    if r.unit() < 0.5 {
        let t = difference / (pooled * (1.0 / f1 + 1.0 / f2).sqrt());
        let df = f1 + f2 - 2.0;
        let p = tails::p_t(t, df);
        Result {
            symbol: "t",
            value: t,
            df: vec![df],
            total: None,
            p,
            effects: vec![("d", difference / pooled)],
        }
    } else {
        let (s1, s2) = (v1 / f1, v2 / f2);
        let t = difference / (s1 + s2).sqrt();
        let df = (s1 + s2).powi(2) / (s1 * s1 / (f1 - 1.0) + s2 * s2 / (f2 - 1.0));
        Result {
            symbol: "t",
            value: t,
            df: vec![df],
            total: None,
            p: tails::p_t(t, df),
            effects: vec![],
        }
    }
}

/// The same gardeners twice.
pub fn paired(r: &mut Random) -> Result {
    let n = r.whole(3, 90);
    let shift = 0.7 * r.normal();
    let d = r.sample(n, shift, 1.5);
    let t = mean(&d) / (variance(&d) / n as f64).sqrt();
    let df = n as f64 - 1.0;
    let dz = mean(&d) / variance(&d).sqrt();
    Result {
        symbol: "t",
        value: t,
        df: vec![df],
        total: None,
        p: tails::p_t(t, df),
        effects: vec![("dz", dz)],
    }
}

/// One-way analysis of variance.
pub fn anova(r: &mut Random) -> Result {
    let groups: Vec<Vec<f64>> = (0..r.whole(2, 5))
        .map(|_| {
            let n = r.whole(3, 40);
            let m = 0.6 * r.normal();
            r.sample(n, m, 1.3)
        })
        .collect();
    let all: Vec<f64> = groups.iter().flatten().copied().collect();
    let grand = mean(&all);
    let between: f64 = groups
        .iter()
        .map(|g| g.len() as f64 * (mean(g) - grand).powi(2))
        .sum();
    let within: f64 = groups.iter().map(|g| variance(g) * (g.len() - 1) as f64).sum();
    let (df1, df2) = ((groups.len() - 1) as f64, (all.len() - groups.len()) as f64);
    let f = (between / df1) / (within / df2);
    let eta = between / (between + within);
    let p = tails::p_f(f, df1, df2);
    Result {
        symbol: "F",
        value: f,
        df: vec![df1, df2],
        total: None,
        p,
        effects: vec![("ηp2", eta)],
    }
}

/// Pearson's correlation.
pub fn correlation(r: &mut Random) -> Result {
    let n = r.whole(4, 150);
    let slope = r.normal() * 0.5;
    let x = r.sample(n, 0.0, 1.0);
    let y: Vec<f64> = x.iter().map(|x| slope * x + r.normal()).collect();
    let (mx, my) = (mean(&x), mean(&y));
    let sxy: f64 = x.iter().zip(&y).map(|(a, b)| (a - mx) * (b - my)).sum();
    let rr = sxy / ((variance(&x) * variance(&y)).sqrt() * (n - 1) as f64);
    let df = n as f64 - 2.0;
    let t = rr * (df / (1.0 - rr * rr)).sqrt();
    Result {
        symbol: "r",
        value: rr,
        df: vec![df],
        total: None,
        p: tails::p_t(t, df),
        effects: vec![],
    }
}

/// A table of counts, without continuity correction.
pub fn contingency(r: &mut Random) -> Result {
    let (rows, columns) = (r.whole(2, 4), r.whole(2, 4));
    let counts: Vec<Vec<f64>> = (0..rows)
        .map(|_| (0..columns).map(|_| r.whole(2, 40) as f64).collect())
        .collect();
    let total: f64 = counts.iter().flatten().sum();
    let by_row: Vec<f64> = counts.iter().map(|row| row.iter().sum()).collect();
    let by_column: Vec<f64> = (0..columns)
        .map(|c| counts.iter().map(|row| row[c]).sum())
        .collect();
    let mut chi2 = 0.0;
    for (i, row) in counts.iter().enumerate() {
        for (j, count) in row.iter().enumerate() {
            let expected = by_row[i] * by_column[j] / total;
            chi2 += (count - expected).powi(2) / expected;
        }
    }
    let df = ((rows - 1) * (columns - 1)) as f64;
    let v = (chi2 / (total * (rows.min(columns) - 1) as f64)).sqrt();
    Result {
        symbol: "χ2",
        value: chi2,
        df: vec![df],
        total: Some(total as usize),
        p: tails::p_chi2(chi2, df),
        effects: vec![("V", v)],
    }
}

/// A standard normal statistic.
pub fn standard_normal(r: &mut Random) -> Result {
    let z = 1.8 * r.normal();
    Result {
        symbol: "z",
        value: z,
        df: vec![],
        total: None,
        p: tails::p_z(z),
        effects: vec![],
    }
}

/// Kruskal and Wallis's H, with ranks of data without ties.
pub fn ranks(r: &mut Random) -> Result {
    let groups = r.whole(2, 5);
    let mut all: Vec<(f64, usize)> = Vec::new();
    for g in 0..groups {
        let shift = 0.5 * r.normal();
        for _ in 0..r.whole(5, 30) {
            all.push((r.normal() + shift, g));
        }
    }
    all.sort_by(|a, b| a.0.total_cmp(&b.0));
    let n = all.len() as f64;
    let sums: f64 = (0..groups)
        .map(|g| {
            let ranks: Vec<f64> = all
                .iter()
                .enumerate()
                .filter(|(_, v)| v.1 == g)
                .map(|(i, _)| i as f64 + 1.0)
                .collect();
            ranks.iter().sum::<f64>().powi(2) / ranks.len() as f64
        })
        .sum();
    let h = 12.0 / (n * (n + 1.0)) * sums - 3.0 * (n + 1.0);
    let df = groups as f64 - 1.0;
    Result {
        symbol: "H",
        value: h,
        df: vec![df],
        total: None,
        p: tails::p_chi2(h, df),
        effects: vec![],
    }
}

pub const STUDIES: [fn(&mut Random) -> Result; 7] = [
    two_groups,
    paired,
    anova,
    correlation,
    contingency,
    standard_normal,
    ranks,
];
