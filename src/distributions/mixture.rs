//! A *mixture* over Poisson weights, which is what the noncentral χ² and F distributions are: Σ P(J = j)·T_j, where
//! J is Poisson distributed and T_j is a tail of the central distribution with 2j more degrees of freedom.
//!
//! Only positive terms are ever added, as in Benton & Krishnamoorthy (2003, Computational Statistics & Data Analysis
//! 43:249) but going through j in the direction in which the tail grows: upward for the upper tail, downward for the
//! lower one. Where that would take long, the sum over j equals the integral over j as nearly as a double can tell,
//! and [`bump`] does it.

use super::bump;
use super::special::{deviance, ln_root_2pi, stirling_rest};

/// Beyond this many terms the integral is quicker.
const MOST_TERMS: f64 = 10_000.0;

/// More steps than any sum needs whose peak is within [`MOST_TERMS`].
const MOST_STEPS: usize = 200_000;

/// The central distributions that are mixed.
pub(super) trait Central {
    /// ln of the upper or lower tail with j more pairs of degrees of freedom. `j` need not be whole; it is `mean` + `d`,
    /// where the sum of the two may have lost digits of d.
    fn ln_tail(&self, mean: f64, d: f64, upper: bool) -> f64;

    /// ln of T_{j+1} − T_j for the upper tail (of T_j − T_{j+1} for the lower one).
    fn ln_gain(&self, j: f64) -> f64;

    /// The gain at j + 1 over that at j.
    fn gain_ratio(&self, j: f64) -> f64;

    /// About where the terms of the upper tail far out are largest.
    fn far_peak(&self, mean: f64) -> f64;
}

/// ln P(J = mean + d) for a Poisson distributed J; also between whole numbers.
fn ln_weight(mean: f64, d: f64) -> f64 {
    let j = mean + d;
    if j < 0.0 {
        return f64::NEG_INFINITY;
    }
    if j == 0.0 {
        return -mean;
    }
    -stirling_rest(j) - deviance(j, mean, -d) - ln_root_2pi(j)
}

/// ln of the mixture, for mean > 0.
pub(super) fn ln_mixture(mean: f64, upper: bool, central: &impl Central) -> f64 {
    let peak = if upper {
        mean.max(central.far_peak(mean))
    } else {
        mean
    };
    if peak > MOST_TERMS {
        let ln_f = |d: f64| ln_weight(mean, d) + central.ln_tail(mean, d, upper);
        return bump::ln_integral(0.0, peak.sqrt(), |d| {
            if mean + d < 0.0 {
                f64::NEG_INFINITY
            } else {
                ln_f(d)
            }
        });
    }
    // Weights beyond these ends add up to less than 1e-20 of all, and the tails there are smaller than elsewhere.
    let reach = 9.5 * mean.sqrt();
    if upper {
        upward((mean - reach).floor().max(0.0), mean, central)
    } else {
        downward((mean + reach + 25.0).ceil(), mean, central)
    }
}

fn upward(first: f64, mean: f64, central: &impl Central) -> f64 {
    let mut j = first;
    let mut sum = Sum::new(j, mean, central, true);
    for _ in 0..MOST_STEPS {
        let last = sum.take();
        sum.tail += sum.gain;
        sum.gain *= central.gain_ratio(j);
        j += 1.0;
        sum.weight *= mean / j;
        // The terms rise to one peak and fall from there; beyond this they are a geometric series or less.
        let next = sum.weight * sum.tail;
        if next < last && next <= 1e-17 * sum.total * (1.0 - next / last) {
            break;
        }
    }
    sum.ln()
}

fn downward(last: f64, mean: f64, central: &impl Central) -> f64 {
    let mut j = last;
    let mut sum = Sum::new(j, mean, central, false);
    for _ in 0..MOST_STEPS {
        let before = sum.take();
        if j == 0.0 {
            break;
        }
        sum.weight *= j / mean;
        j -= 1.0;
        sum.gain /= central.gain_ratio(j);
        sum.tail += sum.gain;
        let next = sum.weight * sum.tail;
        if next < before && next <= 1e-17 * sum.total * (1.0 - next / before) {
            break;
        }
    }
    sum.ln()
}

/// The sum on its way, relative to its first term, whose logarithm is kept apart.
struct Sum {
    ln_scale: f64,
    weight: f64,
    tail: f64,
    gain: f64,
    total: f64,
}

impl Sum {
    fn new(j: f64, mean: f64, central: &impl Central, upper: bool) -> Sum {
        let ln_tail = central.ln_tail(0.0, j, upper);
        Sum {
            ln_scale: ln_weight(mean, j - mean) + ln_tail,
            weight: 1.0,
            tail: 1.0,
            gain: (central.ln_gain(j) - ln_tail).exp(),
            total: 0.0,
        }
    }

    /// Adds the present term and returns it.
    fn take(&mut self) -> f64 {
        if self.tail > 1e200 {
            self.tail *= 1e-200;
            self.gain *= 1e-200;
            self.total *= 1e-200;
            self.ln_scale += 200.0 * std::f64::consts::LN_10;
        }
        let term = self.weight * self.tail;
        self.total += term;
        term
    }

    fn ln(&self) -> f64 {
        self.ln_scale + self.total.ln()
    }
}
