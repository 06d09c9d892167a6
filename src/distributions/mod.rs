//! Tail probabilities and quantiles of the *distributions* that test statistics follow, each with a stated accuracy.
//! Statistics and p are plain numbers; no text is known here. One file per family.
//!
//! **Promise**: every probability of [`SMALLEST`] and more, every quantile and every noncentrality has a relative
//! error below [`ACCURACY`]; below `SMALLEST` a probability is only promised to be below it, too. Relations widen
//! their intervals by that. A probability never moves the wrong way with its statistic by more than its error.
//! Largest relative errors that the tests of this room found, against values with 25 to 45 digits:
//!
//! | file | functions | method | largest error |
//! |---|---|---|---|
//! | `normal` | tails; quantile | `libm`, `statrs` | 9e-14 |
//! | `t`, `r`, `f` | tails, with any df; quantiles | `beta` | 3e-13 |
//! | `chi2` | tails; quantile | `gamma` | 2e-13 |
//! | `beta`, `gamma` | both tails and their logarithms; quantiles | see there | 3e-13 |
//! | `noncentral_t` | tails; δ for given p | integral over ln s | 1e-12 |
//! | `noncentral_chi2`, `noncentral_f` | tails; λ for given p | Poisson mixture of positive terms | 1e-12 |
//! | `studentized_range` | tails; quantile | AS 190's integral | 1e-12 |
//! | `binomial` | probability, tails, two-sided | `beta`, Loader (2000) | 1e-13 |
//! | `fisher` | probability, tails, two-sided | Loader (2000), ratios | 3e-14 |
//! | `ranks` | rank sum and signed ranks without ties | counting in whole numbers | 3e-16 |
//! | `special` | ln Γ, erf, erfc | `libm` | 3e-16 |
//!
//! Tails are added up as such, the smaller one of the two ([`Tails`]), never as one minus the other. Nearly all of it
//! is our own because `statrs`, whose normal quantile is used, was measured to lose digits, hang or panic elsewhere: in
//! t at large df, in quantiles of t, F and beta and in Fisher's test; it has no noncentral distributions and no
//! studentized range. For χ², t and F at ordinary df it is good and as fast; there it is the second opinion in the tests.
//!
//! Functions answer None for arguments that no distribution has (df < 1e-300, |r| > 1, p outside 0 … 1, not a number) and
//! for the few that their documentation excludes. For all others they answer with a number, after a bounded
//! number of steps.

mod beta;
mod binomial;
mod bump;
mod chi2;
mod f;
mod fisher;
mod fraction;
mod gamma;
mod mixture;
mod noncentral_chi2;
mod noncentral_f;
mod noncentral_t;
mod normal;
mod r;
mod ranks;
mod solve;
mod special;
mod studentized_range;
mod t;
mod tails;

pub use beta::{beta_quantile_lower, beta_quantile_upper, beta_tails};
pub use binomial::{binomial_at_least, binomial_at_most, binomial_probability, binomial_two_sided};
pub use chi2::{chi2_quantile_lower, chi2_quantile_upper, chi2_tails, chi2_upper};
pub(crate) use f::ratio_upper;
pub use f::{f_quantile_lower, f_quantile_upper, f_tails, f_upper};
pub use fisher::{fisher_at_least, fisher_at_most, fisher_probability, fisher_two_sided};
pub use gamma::{gamma_quantile_lower, gamma_quantile_upper, gamma_tails};
pub use noncentral_chi2::{chi2_noncentrality_lower, chi2_noncentrality_upper, noncentral_chi2_tails};
pub use noncentral_f::{f_noncentrality_lower, f_noncentrality_upper, noncentral_f_tails};
pub use noncentral_t::{noncentral_t_tails, t_noncentrality_lower, t_noncentrality_upper};
pub use normal::{
    normal_quantile_two_sided, normal_quantile_upper, normal_tails, normal_two_sided, normal_upper,
};
pub use r::{r_quantile_two_sided, r_tails, r_two_sided};
pub use ranks::{
    rank_sum_at_least, rank_sum_at_most, rank_sum_two_sided, signed_rank_at_least, signed_rank_at_most,
    signed_rank_two_sided,
};
pub use special::{erf, erfc, ln_gamma};
pub use studentized_range::{
    studentized_range_quantile_upper, studentized_range_tails, studentized_range_upper,
};
pub use t::{t_quantile_two_sided, t_quantile_upper, t_tails, t_two_sided, t_upper};
pub use tails::Tails;

/// Promised relative error of every probability in this room, for p of [`SMALLEST`] and more, of every quantile and
/// of every noncentrality.
pub const ACCURACY: f64 = 1e-9;

/// Below this a probability is only promised to be below it too.
pub const SMALLEST: f64 = 1e-300;

/// Degrees of freedom from here on are taken as infinite.
const ENDLESS_DF: f64 = 1e150;

/// Noncentralities above this are not legal for χ² and F.
const MOST_NONCENTRAL: f64 = 1e100;

/// Degrees of freedom and shapes below this are not told from 0.
const LEAST: f64 = 1e-300;

/// Degrees of freedom as computed with; None unless they are > 0.
fn legal_df(df: f64) -> Option<f64> {
    (df >= LEAST).then(|| df.min(ENDLESS_DF))
}

fn legal_noncentrality(lambda: f64) -> Option<f64> {
    (0.0..=MOST_NONCENTRAL).contains(&lambda).then_some(lambda)
}

/// The tails of a distribution of which each tail's logarithm can be computed as such: by the smaller one, which is
/// guessed first.
fn smaller_tail(guess_upper: bool, ln_tail: impl Fn(bool) -> f64) -> Tails {
    let ln = ln_tail(guess_upper);
    // A tail of .74 or less leaves the other one its digits.
    let (upper, ln) = if ln < -0.3 {
        (guess_upper, ln)
    } else {
        (!guess_upper, ln_tail(!guess_upper))
    };
    if upper {
        Tails::from_ln_upper(ln)
    } else {
        Tails::from_ln_lower(ln)
    }
}

#[cfg(test)]
mod tests;
