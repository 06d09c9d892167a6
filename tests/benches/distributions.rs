//! How long one p takes, beside the crate statrs where that has the function and is right; then quantiles, noncentral
//! distributions and the studentized range.

use criterion::{BenchmarkId, Criterion, criterion_group, criterion_main};
use statrs::distribution::{ChiSquared, ContinuousCDF, FisherSnedecor, StudentsT};
use std::hint::black_box;
use tieout::distributions as ours;

/// Statistics as they are met in papers, from nothing to very much.
const STATISTICS: [f64; 7] = [0.3, 1.1, 1.7, 2.2, 2.8, 3.9, 6.5];

/// Times a function over all statistics; what is shown is for all seven of them.
fn time(c: &mut Criterion, group: &str, name: &str, parameter: &str, f: impl Fn(f64) -> f64) {
    let mut group = c.benchmark_group(format!("{group}, seven values"));
    group.bench_function(BenchmarkId::new(name, parameter), |b| {
        b.iter(|| STATISTICS.iter().map(|x| f(black_box(*x))).sum::<f64>());
    });
    group.finish();
}

/// Legal arguments have a value.
fn value(answer: Option<f64>) -> f64 {
    answer.expect("legal")
}

fn two_sided_p(c: &mut Criterion) {
    for df in [5.0, 28.0, 118.27, 5000.0, 1e6] {
        let (name, shown) = ("t, two-sided", df.to_string());
        time(c, name, "tieout", &shown, |t| value(ours::t_two_sided(t, df)));
        let theirs = StudentsT::new(0.0, 1.0, df).expect("legal");
        time(c, name, "statrs", &shown, |t| 2.0 * theirs.sf(t));
    }
    for (df1, df2) in [(1.0, 28.0), (2.0, 57.0), (12.0, 400.0), (2.3, 41.7)] {
        let (name, shown) = ("F", format!("{df1}, {df2}"));
        time(c, name, "tieout", &shown, |f| value(ours::f_upper(f, df1, df2)));
        let theirs = FisherSnedecor::new(df1, df2).expect("legal");
        time(c, name, "statrs", &shown, |f| theirs.sf(f));
    }
    for df in [1.0, 12.0, 400.0] {
        let (name, shown) = ("χ²", df.to_string());
        time(c, name, "tieout", &shown, |x| value(ours::chi2_upper(x * df, df)));
        let theirs = ChiSquared::new(df).expect("legal");
        time(c, name, "statrs", &shown, |x| theirs.sf(x * df));
    }
    time(c, "z, two-sided", "tieout", "", |z| {
        value(ours::normal_two_sided(z))
    });
    time(c, "r, two-sided", "tieout", "58", |r| {
        value(ours::r_two_sided(r / 10.0, 58.0))
    });
}

fn quantiles(c: &mut Criterion) {
    // p = .0001 … .04
    let p = |x: f64| (-x).exp() / 20.0;
    time(c, "quantile", "t", "28", |x| {
        value(ours::t_quantile_two_sided(p(x), 28.0))
    });
    time(c, "quantile", "F", "3, 57", |x| {
        value(ours::f_quantile_upper(p(x), 3.0, 57.0))
    });
    time(c, "quantile", "χ²", "7", |x| {
        value(ours::chi2_quantile_upper(p(x), 7.0))
    });
}

fn noncentral(c: &mut Criterion) {
    let upper = |tails: Option<ours::Tails>| tails.expect("legal").upper();
    time(c, "noncentral", "t", "28, δ 1.5", |t| {
        upper(ours::noncentral_t_tails(t, 28.0, 1.5))
    });
    time(c, "noncentral", "F", "3, 57, λ 8", |f| {
        upper(ours::noncentral_f_tails(f, 3.0, 57.0, 8.0))
    });
    time(c, "noncentral", "χ²", "3, λ 8", |x| {
        upper(ours::noncentral_chi2_tails(3.0 * x, 3.0, 8.0))
    });
    time(c, "noncentrality", "t", "28", |t| {
        value(ours::t_noncentrality_upper(0.025, t, 28.0))
    });
    time(c, "noncentrality", "F", "3, 57", |f| {
        value(ours::f_noncentrality_upper(0.8, f, 3.0, 57.0))
    });
}

fn studentized_range(c: &mut Criterion) {
    time(c, "studentized range", "p", "4, 36", |q| {
        value(ours::studentized_range_upper(q, 4, 36.0))
    });
    time(c, "studentized range", "quantile", "4, 36", |x| {
        value(ours::studentized_range_quantile_upper((-x).exp() / 20.0, 4, 36.0))
    });
}

fn exact(c: &mut Criterion) {
    time(c, "exact", "Fisher, two-sided", "", |x| {
        value(ours::fisher_two_sided([(4.0 * x) as u64, 5, 7, 16]))
    });
    time(c, "exact", "rank sum, two-sided", "20, 20", |x| {
        value(ours::rank_sum_two_sided((20.0 * x) as u64, 20, 20))
    });
}

criterion_group!(
    benches,
    two_sided_p,
    quantiles,
    noncentral,
    studentized_range,
    exact
);
criterion_main!(benches);
