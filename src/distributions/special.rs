//! *Special functions* that every distribution here is made of: ln Γ, erf and erfc come from the crate
//! `libm`; what is left over by Stirling's formula and by the first terms of exp and ln is our own, because
//! the deviance form of Loader (2000, "Fast and accurate computation of binomial probabilities") is made of it.

use std::f64::consts::{FRAC_1_SQRT_2, LN_2, PI};

/// ½·ln 2π
pub(super) const HALF_LN_2PI: f64 = 0.918_938_533_204_672_8;

/// ln Γ(x) for x > 0, to a few units of the last place; None for other x.
pub fn ln_gamma(x: f64) -> Option<f64> {
    (x > 0.0).then(|| libm::lgamma(x))
}

/// The error function; None for what is not a number.
pub fn erf(x: f64) -> Option<f64> {
    (!x.is_nan()).then(|| libm::erf(x))
}

/// The complementary error function 1 − erf(x), without the loss of digits that subtraction would bring.
pub fn erfc(x: f64) -> Option<f64> {
    (!x.is_nan()).then(|| libm::erfc(x))
}

/// ln P(Z > z) of the standard normal distribution; far out by the continued fraction of erfc
/// (Abramowitz & Stegun 1964, 26.2.14).
pub(super) fn ln_normal_upper(z: f64) -> f64 {
    if z < 12.0 {
        return if z < -1.0 {
            (-0.5 * libm::erfc(-z * FRAC_1_SQRT_2)).ln_1p()
        } else {
            libm::erfc(z * FRAC_1_SQRT_2).ln() - LN_2
        };
    }
    if z > 1e150 {
        return f64::NEG_INFINITY;
    }
    let mut fraction = z;
    for k in (1..=24).rev() {
        fraction = z + f64::from(k) / fraction;
    }
    -0.5 * z * z - HALF_LN_2PI - fraction.ln()
}

/// ln Γ(n + 1) − (n + ½)·ln n + n − ½·ln 2π for n > 0: what Stirling's formula leaves over.
pub(super) fn stirling_rest(n: f64) -> f64 {
    if n >= 16.0 {
        let m = 1.0 / (n * n);
        return (1.0 / 12.0 - m * (1.0 / 360.0 - m * (1.0 / 1260.0 - m * (1.0 / 1680.0 - m / 1188.0)))) / n;
    }
    let twice = 2.0 * n;
    if twice == twice.trunc() && twice >= 1.0 {
        return STIRLING_OF_HALVES[twice as usize - 1];
    }
    libm::lgamma(n + 1.0) - (n + 0.5) * n.ln() + n - HALF_LN_2PI
}

/// ln Γ(b + a) − ln Γ(b) for a ≥ 0, b > 0, which keeps its relative accuracy however small a is.
pub(super) fn ln_gamma_step(b: f64, a: f64) -> f64 {
    let mut sum = 0.0;
    let mut from = b;
    while from < 12.0 {
        sum -= if from < a {
            (from + a).ln() - from.ln()
        } else {
            (a / from).ln_1p()
        };
        from += 1.0;
    }
    let growth = (a / from).ln_1p();
    // Stirling's series at from + a less that at from, term by term.
    let mut power = 1.0 / from;
    for (k, coefficient) in STIRLING_SERIES.iter().enumerate() {
        sum += coefficient * power * (-((2 * k + 1) as f64) * growth).exp_m1();
        power /= from * from;
    }
    sum + (from - 0.5) * growth + a * (from + a).ln() - a
}

/// v − ln(1 + v) for v > −1 without cancellation for v near 0.
pub(super) fn log_rest(v: f64) -> f64 {
    if v.abs() > 0.4 {
        return v - v.ln_1p();
    }
    let r = v / (2.0 + v);
    let square = r * r;
    let mut sum = 0.0;
    for k in (1..=terms(square)).rev() {
        sum = square * (sum + 1.0 / f64::from(2 * k + 1));
    }
    r * (v - 2.0 * sum)
}

/// How many terms of a series in `square` ≤ 1/16 are needed for full accuracy.
fn terms(square: f64) -> u32 {
    if square < 1e-4 { 4 } else { 14 }
}

/// e^s − 1 − s without cancellation for s near 0.
pub(super) fn exp_rest(s: f64) -> f64 {
    if s.abs() > 0.5 {
        return s.exp_m1() - s;
    }
    let mut sum = 1.0;
    for k in (3..=if s.abs() < 0.02 { 8u32 } else { 15 }).rev() {
        sum = 1.0 + s / f64::from(k) * sum;
    }
    0.5 * s * s * sum
}

/// x·ln(x/m) + m − x, Loader's deviance `bd0`, for x > 0 and m = x + `excess` > 0. The excess is asked for because
/// for large x it is known more exactly than the difference of the two.
pub(super) fn deviance(x: f64, m: f64, excess: f64) -> f64 {
    if excess.abs() < 0.4 * x {
        x * log_rest(excess / x)
    } else {
        x * (x / m).ln() + excess
    }
}

/// ∫₀^∞ exp(−h(s)) ds for a convex h with h(0) = 0 that rises from there, given slope and curvature of h at 0:
/// Gauss–Legendre with 48 nodes up to where the integrand has become negligible.
pub(super) fn fading_integral(slope: f64, curvature: f64, h: impl Fn(f64) -> f64) -> f64 {
    let slope = slope.max(0.0);
    let mut end = 80.0 / (slope + (slope * slope + 80.0 * curvature).sqrt());
    // Where h is 41, between an end that is too near and one that is too far; each with ln h there.
    type Point = Option<(f64, f64)>;
    let (mut near, mut far): (Point, Point) = (None, None);
    for _ in 0..60 {
        let depth = h(end);
        if (38.0..=46.0).contains(&depth) {
            break;
        }
        // So far out that it is infinity less infinity, it is too far, too.
        if depth < 41.0 {
            near = Some((end, depth.ln()));
        } else {
            far = Some((end, if depth.is_nan() { f64::INFINITY } else { depth.ln() }));
        }
        end = match (near, far) {
            // h rises like something between a power and an exponential.
            (Some((near, at_near)), Some((far, at_far))) => {
                let share = (LN_41 - at_near) / (at_far - at_near);
                near + (far - near) * share.clamp(0.1, 0.9)
            }
            _ => end * (41.0 / depth).sqrt().clamp(0.3, 3.0),
        };
    }
    let half = 0.5 * end;
    let sum: f64 = LEGENDRE_48
        .iter()
        .map(|(node, weight)| weight * ((-h(half - half * node)).exp() + (-h(half + half * node)).exp()))
        .sum();
    half * sum
}

const LN_41: f64 = 3.713_572_066_704_308;

/// ln √(2π·x)
pub(super) fn ln_root_2pi(x: f64) -> f64 {
    0.5 * (2.0 * PI * x).ln()
}

const STIRLING_SERIES: [f64; 7] = [
    1.0 / 12.0,
    -1.0 / 360.0,
    1.0 / 1260.0,
    -1.0 / 1680.0,
    1.0 / 1188.0,
    -691.0 / 360_360.0,
    1.0 / 156.0,
];

/// [`stirling_rest`] of ½, 1, 1½ … 15½, computed with mpmath at 60 digits.
const STIRLING_OF_HALVES: [f64; 31] = [
    0.15342640972002736,
    0.08106146679532726,
    0.05481412105191765,
    0.0413406959554093,
    0.03316287351993629,
    0.02767792568499834,
    0.023746163656297496,
    0.020790672103765093,
    0.018488450532673187,
    0.016644691189821193,
    0.015134973221917378,
    0.013876128823070748,
    0.012810465242920227,
    0.01189670994589177,
    0.011104559758206917,
    0.010411265261972096,
    0.009799416126158804,
    0.009255462182712733,
    0.008768700134139386,
    0.00833056343336287,
    0.00793411456431402,
    0.007573675487951841,
    0.007244554301320383,
    0.00694284010720953,
    0.006665247032707682,
    0.006408994188004207,
    0.006171712263039458,
    0.0059513701127588475,
    0.0057462165130101155,
    0.005554733551962801,
    0.005375599032926835,
];

/// The positive nodes of the Gauss–Legendre rule with 48 nodes and their weights, computed with mpmath at 60 digits.
const LEGENDRE_48: [(f64, f64); 24] = [
    (0.03238017096286936, 0.06473769681268392),
    (0.0970046992094627, 0.06446616443595009),
    (0.1612223560688917, 0.06392423858464819),
    (0.22476379039468905, 0.06311419228625402),
    (0.28736248735545555, 0.062039423159892665),
    (0.34875588629216075, 0.06070443916589388),
    (0.4086864819907167, 0.059114839698395635),
    (0.4669029047509584, 0.057277292100403214),
    (0.523160974722233, 0.055199503699984165),
    (0.5772247260839727, 0.05289018948519367),
    (0.6288673967765136, 0.05035903555385447),
    (0.6778723796326639, 0.04761665849249048),
    (0.7240341309238146, 0.04467456085669428),
    (0.7671590325157404, 0.04154508294346475),
    (0.8070662040294426, 0.03824135106583071),
    (0.8435882616243935, 0.03477722256477044),
    (0.8765720202742479, 0.03116722783279809),
    (0.9058791367155696, 0.027426509708356948),
    (0.9313866907065543, 0.02357076083932438),
    (0.9529877031604309, 0.01961616045735553),
    (0.9705915925462473, 0.015579315722943849),
    (0.9841245837228269, 0.01147723457923454),
    (0.9935301722663508, 0.0073275539012762625),
    (0.9987710072524261, 0.0031533460523058385),
];

#[cfg(test)]
mod tests {
    use super::*;

    fn close(got: f64, expected: f64) {
        assert!(
            (got / expected - 1.0).abs() < 2e-14,
            "{got:e} is not {expected:e}"
        );
    }

    #[test]
    fn rests_keep_their_digits() {
        close(log_rest(1e-9), 4.999999996666667e-19);
    }
}
