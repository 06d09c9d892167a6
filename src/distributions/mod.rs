//! Tail probabilities and quantiles of the distributions that test statistics follow, each with a
//! stated accuracy. Statistics and p are plain numbers; no text is known here.
//!
//! The normal distribution comes from `statrs`, which was measured to be accurate there; t, F, χ² and
//! r come from our own incomplete beta and gamma functions, because the crate loses digits or the
//! way at large degrees of freedom. Relations widen their intervals by [`ACCURACY`].
//!
//! Functions answer None for arguments that no distribution has (df ≤ 0, |r| > 1, not a number) and
//! a finite number for all others.

mod incomplete;
mod quantiles;
mod tails;

pub use quantiles::{normal_quantile_upper, t_quantile_two_sided};
pub(crate) use tails::ratio_upper;
pub use tails::{chi2_upper, f_upper, normal_two_sided, normal_upper, r_two_sided, t_two_sided, t_upper};

/// Promised relative error of every probability in this room, for p of [`SMALLEST`] and more.
/// Measured against `fixtures/reference/`: see the tests of this room.
pub const ACCURACY: f64 = 1e-9;

/// Below this a probability is only promised to be below it too.
pub const SMALLEST: f64 = 1e-290;

#[cfg(test)]
mod tests;
