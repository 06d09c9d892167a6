//! The *incomplete beta* function, from which the tails of t, F, r and the binomial distribution follow.
//!
//! The power in front is computed in the deviance form of Loader (2000), which loses no digits when the parameters
//! are large. The rest is one of three, all in logarithms and all adding up the smaller tail:
//! the power series (Didonato & Morris 1992, ACM TOMS 18:360, BPSER) near the ends; their continued fraction (BFRAC)
//! with Lentz's steps as modified by Thompson and Barnett (1986); and, where large parameters would cost it too many
//! steps, the integral itself by Gauss–Legendre, in the logarithm of the odds, where the density is log-concave.

use super::fraction::Fraction;
use super::special::{
    deviance, exp_rest, fading_integral, ln_gamma_step, ln_root_2pi, log_rest, stirling_rest,
};
use super::tails::Tails;
use super::{LEAST, solve};

/// The fraction needs more steps the larger the smaller parameter is; from here on the integral takes less time.
const LARGE: f64 = 20_000.0;

/// Below this the other of x and 1 − x is 1, and the tail is a power.
const TINY: f64 = 1e-290;

/// The tails of the beta distribution with parameters a, b > 0 at x in [0, 1]: `lower` is I_x(a, b), the
/// regularised incomplete beta function, and `upper` I_{1−x}(b, a). None for other arguments.
/// Parameters above 1e150 are not told apart.
pub fn beta_tails(a: f64, b: f64, x: f64) -> Option<Tails> {
    let (a, b) = (legal_shape(a)?, legal_shape(b)?);
    (0.0..=1.0).contains(&x).then(|| Cut::at(a, b, x).tails())
}

/// The x with I_x(a, b) = p; None unless 0 < p < 1 and a, b > 0.
pub fn beta_quantile_lower(p: f64, a: f64, b: f64) -> Option<f64> {
    let (a, b) = (legal_shape(a)?, legal_shape(b)?);
    (p > 0.0 && p < 1.0).then(|| share(ln_odds_with_lower(p, a, b)))
}

/// The x with P(X > x) = p, 1 − I_x(a, b) = p.
pub fn beta_quantile_upper(p: f64, a: f64, b: f64) -> Option<f64> {
    let (a, b) = (legal_shape(a)?, legal_shape(b)?);
    (p > 0.0 && p < 1.0).then(|| share(-ln_odds_with_lower(p, b, a)))
}

fn legal_shape(a: f64) -> Option<f64> {
    (a >= LEAST).then_some(a.min(1e150))
}

/// The x whose odds x/(1 − x) have this logarithm.
fn share(ln_odds: f64) -> f64 {
    1.0 / (1.0 + (-ln_odds).exp())
}

/// Where a beta distribution is cut.
#[derive(Clone, Copy)]
pub(super) struct Cut {
    pub a: f64,
    pub b: f64,
    pub x: f64,
    /// 1 − x, known without loss.
    pub y: f64,
    /// a − (a + b)·x: how far the cut is below the mean, known without loss.
    pub excess: f64,
    /// ln(x/y); only looked at where x or y is below [`TINY`].
    pub ln_odds: f64,
}

impl Cut {
    /// At x as it is.
    pub(super) fn at(a: f64, b: f64, x: f64) -> Cut {
        let y = 1.0 - x;
        // What was lost in rounding y.
        let rest = (1.0 - y) - x;
        Cut {
            a,
            b,
            x,
            y,
            excess: excess(a, b, x, y) + a * rest,
            ln_odds: x.ln(),
        }
    }

    /// Where x/(1 − x) has this logarithm.
    fn at_ln_odds(a: f64, b: f64, ln_odds: f64) -> Cut {
        let (x, y) = (share(ln_odds), share(-ln_odds));
        Cut {
            a,
            b,
            x,
            y,
            excess: excess(a, b, x, y),
            ln_odds,
        }
    }

    fn mirrored(self) -> Cut {
        Cut {
            a: self.b,
            b: self.a,
            x: self.y,
            y: self.x,
            excess: -self.excess,
            ln_odds: -self.ln_odds,
        }
    }

    pub(super) fn tails(self) -> Tails {
        if self.excess >= 0.0 {
            Tails::from_ln_lower(self.ln_lower())
        } else {
            Tails::from_ln_lower(self.mirrored().ln_lower()).mirrored()
        }
    }

    /// ln of x^a·y^b/B(a, b), the density of the logarithm of the odds.
    pub(super) fn ln_density(self) -> f64 {
        let Cut { a, b, x, y, .. } = self;
        if x < TINY {
            return self.ln_power() + a.ln();
        }
        if y < TINY {
            return self.mirrored().ln_power() + b.ln();
        }
        let n = a + b;
        let (short, long) = if a < b { (a, b) } else { (b, a) };
        stirling_rest(n)
            - stirling_rest(a)
            - stirling_rest(b)
            - deviance(a, n * x, -self.excess)
            - deviance(b, n * y, self.excess)
            - ln_root_2pi(n / long / short)
    }

    /// ln of x^a/(a·B(a, b)), the first term of the power series; exact in relative terms also where a is so small
    /// that this is close to 0.
    fn ln_power(self) -> f64 {
        let ln_x = if self.x < TINY { self.ln_odds } else { self.x.ln() };
        self.a * ln_x + ln_gamma_step(self.b, self.a) - ln_gamma_step(1.0, self.a)
    }

    /// ln I_x(a, b) for x not above the mean.
    fn ln_lower(self) -> f64 {
        let Cut { a, b, x, .. } = self;
        if x < TINY {
            return if self.ln_odds == f64::NEG_INFINITY {
                f64::NEG_INFINITY
            } else {
                self.ln_power()
            };
        }
        if b * x <= 0.7 && x <= 0.5 {
            let power = if a < 0.1 {
                self.ln_power()
            } else {
                self.ln_density() - b * (-x).ln_1p() - a.ln()
            };
            return power + self.series();
        }
        let rest = if a.min(b) > LARGE {
            self.integral()
        } else {
            1.0 / self.fraction()
        };
        self.ln_density() + rest.ln()
    }

    /// ln of the power series over its first term.
    fn series(self) -> f64 {
        let Cut { a, b, x, .. } = self;
        let (mut sum, mut term) = (0.0, 1.0);
        for step in 1..2000 {
            let j = f64::from(step);
            term *= (j - b) / j * x;
            let next = sum + term / (a + j);
            if (next - sum).abs() <= 1e-17 * next.abs() {
                break;
            }
            sum = next;
        }
        (a * sum).ln_1p()
    }

    /// The continued fraction, whose reciprocal is the ratio of I_x to the density.
    fn fraction(self) -> f64 {
        let Cut { a, b, x, y, .. } = self;
        let n = a + b;
        let middle = self.excess + 1.0;
        let mut fraction = Fraction::new(a * middle / (a + 1.0));
        for step in 1..100_000 {
            let m = f64::from(step);
            let odd = a + 2.0 * m - 1.0;
            let above = (a + m - 1.0) / odd * (n + m - 1.0) / odd * m * (b - m) * x * x;
            let below = m + m * (b - m) * x / odd + (a + m) / (odd + 2.0) * (middle + m * (1.0 + y));
            if fraction.step(above, below) {
                break;
            }
        }
        fraction.value
    }

    /// The ratio of I_x to the density as the integral over all smaller odds.
    fn integral(self) -> f64 {
        let Cut {
            a, b, x, y, excess, ..
        } = self;
        let n = a + b;
        let curvature = n * x * y;
        if x < y {
            fading_integral(excess, curvature, |s| {
                excess * s + n * (x * exp_rest(-s) - log_rest(x * (-s).exp_m1()))
            })
        } else {
            fading_integral(excess, curvature, |s| {
                let v = y * s.exp_m1();
                // The rests are for where the terms that they leave out would cancel.
                let rest = if v > 0.5 {
                    v.ln_1p() - y * s
                } else {
                    y * exp_rest(s) - log_rest(v)
                };
                excess * s + n * rest
            })
        }
    }
}

/// a·y − b·x with one rounding only (Kahan's difference of products).
pub(super) fn excess(a: f64, b: f64, x: f64, y: f64) -> f64 {
    let right = b * x;
    let lost = b.mul_add(x, -right);
    a.mul_add(y, -right) - lost
}

/// The logarithm of the odds x/(1 − x) for which I_x(a, b) = p, for 0 < p < 1 and a, b > 0.
pub(super) fn ln_odds_with_lower(p: f64, a: f64, b: f64) -> f64 {
    if p <= 0.5 {
        solved(p, a, b)
    } else {
        // Exact: doubles between ½ and 1 have an exact complement.
        -solved(1.0 - p, b, a)
    }
}

fn solved(p: f64, a: f64, b: f64) -> f64 {
    let ln_p = p.ln();
    solve::newton(first_guess(ln_p, a, b), |w| {
        let cut = Cut::at_ln_odds(a, b, w);
        let ln_lower = cut.tails().ln_lower();
        let slope = if cut.x < TINY {
            a
        } else {
            (cut.ln_density() - ln_lower).exp()
        };
        (ln_lower - ln_p, slope)
    })
}

/// −ln x or −ln(1 − x), whichever belongs to the smaller parameter, is nearly gamma distributed.
fn first_guess(ln_p: f64, a: f64, b: f64) -> f64 {
    if a >= b {
        let far = b + (-2.0 * b * ln_p).sqrt() - ln_p;
        let ln_x = -far / (a + 0.5 * (b - 1.0).max(0.0));
        return ln_x - (-ln_x.exp_m1()).ln();
    }
    let scale = b + 0.5 * (a - 1.0).max(0.0);
    let power = (ln_p + ln_gamma_step(1.0, a)) / a;
    let near = a - (-2.0 * a * ln_p).sqrt();
    if near > 0.0 && near.ln() > power {
        return (near / scale).exp_m1().ln();
    }
    power - scale.ln()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn cases_that_have_closed_forms() {
        // I_x(1, b) = 1 − (1 − x)^b, I_x(a, 1) = x^a, I_½(a, a) = ½.
        let lower = |a, b, x| beta_tails(a, b, x).expect("legal").lower();
        assert!((lower(1.0, 3.0, 0.2) / 0.488 - 1.0).abs() < 1e-14);
        assert!((lower(7.5, 1.0, 0.3) / 0.3f64.powf(7.5) - 1.0).abs() < 1e-14);
        for a in [1e-9, 0.3, 1.0, 40.0, 1e4, 1e8, 1e15, 1e40] {
            assert!(
                (lower(a, a, 0.5) - 0.5).abs() < 1e-14,
                "{a}: {}",
                lower(a, a, 0.5)
            );
        }
        // A tail of nearly nothing at a parameter of nearly nothing: 1 − I_x(a, 1) = 1 − x^a.
        let upper = beta_tails(1e-12, 1.0, 0.5).expect("legal").upper();
        assert!(
            (upper / (1e-12 * std::f64::consts::LN_2) - 1.0).abs() < 1e-11,
            "{upper:e}"
        );
    }

    #[test]
    fn quantiles_lead_back() {
        for (a, b) in [(0.5, 14.0), (3.0, 0.2), (25.0, 30.0), (1e6, 0.5), (2e5, 3e7)] {
            for p in [1e-250, 1e-9, 0.025, 0.5, 0.8, 0.999] {
                let x = beta_quantile_lower(p, a, b).expect("legal");
                if x > 1e-300 && x < 0.99 {
                    let back = beta_tails(a, b, x).expect("legal").lower();
                    // An x that is off by some units of the last place changes p by its slope.
                    let slack = 1e-12 + 2e-14 * (Cut::at(a, b, x).ln_density().exp() / back);
                    assert!((back / p - 1.0).abs() < slack, "{a} {b} {p}: {x} leads to {back}");
                }
            }
        }
    }
}
