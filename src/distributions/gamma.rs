//! The *incomplete gamma* function, from which the tails of χ² and of the Poisson distribution follow.
//!
//! As for the incomplete beta function: the power in front in Loader's deviance form; the rest by the series for the
//! lower tail and the continued fraction for the upper one (Didonato & Morris 1986, ACM TOMS 12:377), and for large
//! parameters by the integral itself. All in logarithms.

use super::fraction::Fraction;
use super::special::{deviance, exp_rest, fading_integral, ln_gamma_step, ln_root_2pi, stirling_rest};
use super::tails::Tails;
use super::{LEAST, solve};

/// From here on series and fraction take more time than the integral.
const LARGE: f64 = 10_000.0;

/// Below this e^(−x) is 1, and the lower tail is a power.
const TINY: f64 = 1e-290;

/// The tails of the gamma distribution with shape a > 0 and scale 1 at x ≥ 0: `lower` is P(a, x) and `upper`
/// Q(a, x), the regularised incomplete gamma functions. None for other arguments.
/// Shapes above 1e150 are not told apart.
pub fn gamma_tails(a: f64, x: f64) -> Option<Tails> {
    let a = legal_shape(a)?;
    (x >= 0.0).then(|| tails(a, x, x - a))
}

/// The x with P(a, x) = p; None unless 0 < p < 1 and a > 0.
pub fn gamma_quantile_lower(p: f64, a: f64) -> Option<f64> {
    let a = legal_shape(a)?;
    (p > 0.0 && p < 1.0).then(|| ln_quantile_lower(p, a).exp())
}

/// The x with Q(a, x) = p; None unless 0 < p < 1 and a > 0.
pub fn gamma_quantile_upper(p: f64, a: f64) -> Option<f64> {
    let a = legal_shape(a)?;
    (p > 0.0 && p < 1.0).then(|| ln_quantile_upper(p, a).exp())
}

fn legal_shape(a: f64) -> Option<f64> {
    (a >= LEAST).then_some(a.min(1e150))
}

/// The tails at x ≥ 0, where `excess` is x − a without loss.
pub(super) fn tails(a: f64, x: f64, excess: f64) -> Tails {
    if x <= 0.0 {
        return Tails::AT_BEGINNING;
    }
    if x == f64::INFINITY {
        return Tails::AT_END;
    }
    if x < TINY {
        return Tails::from_ln_lower(ln_power(a, x.ln()));
    }
    if a > LARGE {
        let rest = integral(a, x, excess).ln() + ln_density(a, x, excess);
        return if excess < 0.0 {
            Tails::from_ln_lower(rest)
        } else {
            Tails::from_ln_upper(rest)
        };
    }
    if a < 0.1 && x < 1.0 {
        return Tails::from_ln_lower(ln_power(a, x.ln()) + alternating_series(a, x));
    }
    if excess < 1.0 {
        Tails::from_ln_lower(ln_density(a, x, excess) - a.ln() + series(a, x))
    } else {
        Tails::from_ln_upper(ln_density(a, x, excess) - fraction(a, x).ln())
    }
}

/// ln of x^a·e^(−x)/Γ(a), the density of ln x.
pub(super) fn ln_density(a: f64, x: f64, excess: f64) -> f64 {
    a.ln() - stirling_rest(a) - deviance(a, x, excess) - ln_root_2pi(a)
}

/// ln of x^a/Γ(a + 1), exact in relative terms also where a is so small that this is close to 0.
fn ln_power(a: f64, ln_x: f64) -> f64 {
    a * ln_x - ln_gamma_step(1.0, a)
}

/// ln of what x^a·e^(−x)/Γ(a + 1) has to be multiplied by to give P(a, x): 1 + x/(a + 1) + x²/((a + 1)(a + 2)) …
fn series(a: f64, x: f64) -> f64 {
    let (mut sum, mut term, mut below) = (1.0, 1.0, a);
    for _ in 0..100_000 {
        below += 1.0;
        term *= x / below;
        sum += term;
        if term < sum * 1e-17 {
            break;
        }
    }
    sum.ln()
}

/// ln of what x^a/Γ(a + 1) has to be multiplied by to give P(a, x), for small a and x < 1.
fn alternating_series(a: f64, x: f64) -> f64 {
    let (mut sum, mut term) = (0.0, 1.0);
    for step in 1..60 {
        let j = f64::from(step);
        term *= -x / j;
        let next = sum + term / (a + j);
        if next == sum {
            break;
        }
        sum = next;
    }
    (a * sum).ln_1p()
}

/// The continued fraction whose reciprocal is the ratio of Q(a, x) to the density of ln x.
fn fraction(a: f64, x: f64) -> f64 {
    if x > 1e20 * (1.0 + a) {
        return x;
    }
    let mut below = x + 1.0 - a;
    let mut fraction = Fraction::new(below);
    for step in 1..100_000 {
        let m = f64::from(step);
        below += 2.0;
        if fraction.step(-m * (m - a), below) {
            break;
        }
    }
    fraction.value
}

/// The ratio of the smaller tail to the density of ln x, as an integral over ln x.
fn integral(a: f64, x: f64, excess: f64) -> f64 {
    debug_assert!(a > 0.0);
    let sign = if excess < 0.0 { -1.0 } else { 1.0 };
    fading_integral(excess.abs(), x, |s| excess.abs() * s + x * exp_rest(sign * s))
}

/// The logarithm of the x with P(a, x) = p, for 0 < p < 1 and a legal shape.
pub(super) fn ln_quantile_lower(p: f64, a: f64) -> f64 {
    // Exact: doubles between ½ and 1 have an exact complement.
    if p <= 0.5 {
        from_below(p, a)
    } else {
        from_above(1.0 - p, a)
    }
}

/// The logarithm of the x with Q(a, x) = p, for 0 < p < 1 and a legal shape.
pub(super) fn ln_quantile_upper(p: f64, a: f64) -> f64 {
    if p <= 0.5 {
        from_above(p, a)
    } else {
        from_below(1.0 - p, a)
    }
}

/// ln x where the lower tail is p ≤ ½.
fn from_below(p: f64, a: f64) -> f64 {
    let ln_p = p.ln();
    let near = a - (-2.0 * a * ln_p).sqrt();
    let power = (ln_p + ln_gamma_step(1.0, a)) / a;
    let start = if near > 0.0 { power.max(near.ln()) } else { power };
    solve::newton(start, |ln_x| {
        let (tails, ln_density) = at_ln(a, ln_x);
        (tails.ln_lower() - ln_p, (ln_density - tails.ln_lower()).exp())
    })
}

/// ln x where the upper tail is p ≤ ½. The start is beyond it (Boucheron, Lugosi & Massart 2013, section 2.4).
fn from_above(p: f64, a: f64) -> f64 {
    let ln_p = p.ln();
    let start = -(a + (-2.0 * a * ln_p).sqrt() - ln_p).ln();
    -solve::newton(start, |w| {
        let (tails, ln_density) = at_ln(a, -w);
        (tails.ln_upper() - ln_p, (ln_density - tails.ln_upper()).exp())
    })
}

/// The tails at the x with this logarithm, and ln of the density of ln x there.
fn at_ln(a: f64, ln_x: f64) -> (Tails, f64) {
    let x = ln_x.exp();
    if x < TINY {
        let ln_lower = ln_power(a, ln_x);
        return (Tails::from_ln_lower(ln_lower), ln_lower + a.ln());
    }
    let excess = if a > LARGE {
        a * (ln_x - a.ln()).exp_m1()
    } else {
        x - a
    };
    (tails(a, x, excess), ln_density(a, x, excess))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn cases_that_have_closed_forms() {
        // Q(1, x) = e^(−x), Q(½, x) = erfc(√x).
        for x in [1e-300, 1e-5, 0.5, 2.5, 30.0, 650.0] {
            let upper = |a| gamma_tails(a, x).expect("legal").upper();
            assert!((upper(1.0) / (-x).exp() - 1.0).abs() < 2e-13, "{x}");
            assert!((upper(0.5) / libm::erfc(x.sqrt()) - 1.0).abs() < 2e-13, "{x}");
        }
        // For a shape of nearly nothing Q(a, x) is a·E₁(x); E₁(½) = 0.5597735947761608 (Abramowitz & Stegun, table 5.1).
        let upper = gamma_tails(1e-12, 0.5).expect("legal").upper();
        assert!(
            (upper / 0.559_773_594_776_160_8e-12 - 1.0).abs() < 1e-11,
            "{upper:e}"
        );
    }

    #[test]
    fn quantiles_lead_back() {
        for a in [0.05, 0.5, 3.0, 80.0, 2e4, 3e9] {
            for p in [1e-250, 1e-9, 0.025, 0.5, 0.8, 0.999] {
                let x = gamma_quantile_upper(p, a).expect("legal");
                let back = gamma_tails(a, x).expect("legal").upper();
                let slack = 1e-12 + 2e-14 * (ln_density(a, x, x - a).exp() / back);
                assert!((back / p - 1.0).abs() < slack, "{a} {p}: {x} leads to {back:e}");
                let x = gamma_quantile_lower(p, a).expect("legal");
                if x > 1e-300 {
                    let back = gamma_tails(a, x).expect("legal").lower();
                    let slack = 1e-12 + 2e-14 * (ln_density(a, x, x - a).exp() / back);
                    assert!((back / p - 1.0).abs() < slack, "{a} {p}: {x} leads to {back:e}");
                }
            }
        }
    }
}
