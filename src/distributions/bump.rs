//! The integral over a *bump*: a smooth positive function with one peak, given by its logarithm.
//!
//! By the trapezoid rule, which for such functions converges faster than any power of the step (Trefethen & Weideman
//! 2014, SIAM Review 56:385): the step is halved until that changes nothing any more.

/// How far below the peak the logarithm has to be for the rest not to count.
const DEPTH: f64 = 40.0;

/// Relative change by which a halved step is taken not to change anything. The next halving would square it.
const SETTLED: f64 = 1e-9;

/// ln ∫ exp(`ln_f`(x)) dx over all x. `guess` is somewhere near the peak, `width` the size of the steps in which
/// its neighbourhood is looked at.
pub(super) fn ln_integral(guess: f64, width: f64, ln_f: impl Fn(f64) -> f64) -> f64 {
    let (peak, top) = climb(guess, width, &ln_f);
    if top == f64::NEG_INFINITY {
        return top;
    }
    let left = peak - foot(peak, -width, top, &ln_f);
    let right = peak + foot(peak, width, top, &ln_f);
    let f = |x: f64| (ln_f(x) - top).exp();
    // A logarithm that large has no digits left to settle any closer.
    let settled_at = SETTLED.max(1e-14 * top.abs());
    let mut intervals = 24;
    let mut step = (right - left) / f64::from(intervals);
    let mut sum: f64 = (0..=intervals).map(|k| f(left + step * f64::from(k))).sum();
    while intervals < 20_000 {
        let between: f64 = (0..intervals)
            .map(|k| f(left + step * (f64::from(k) + 0.5)))
            .sum();
        let settled = (between - sum).abs() <= settled_at * sum;
        sum += between;
        step *= 0.5;
        intervals *= 2;
        if settled {
            break;
        }
    }
    top + (sum * step).ln()
}

/// A point near the peak and the value there.
fn climb(guess: f64, width: f64, ln_f: impl Fn(f64) -> f64) -> (f64, f64) {
    let (mut middle, mut top) = (guess, ln_f(guess));
    // Uphill in growing steps, until the peak is between two neighbours.
    let (mut low, mut high) = (guess - width, guess + width);
    let (mut at_low, mut at_high) = (ln_f(low), ln_f(high));
    let mut step = width;
    for _ in 0..200 {
        if at_high > top {
            step *= 2.0;
            (low, at_low) = (middle, top);
            (middle, top) = (high, at_high);
            high += step;
            at_high = ln_f(high);
        } else if at_low > top {
            step *= 2.0;
            (high, at_high) = (middle, top);
            (middle, top) = (low, at_low);
            low -= step;
            at_low = ln_f(low);
        } else {
            break;
        }
    }
    // Parabolas through the three points; near enough once the neighbours are hardly lower.
    for _ in 0..60 {
        if top - at_low.min(at_high) < 2.0 {
            break;
        }
        let (l, r) = (low - middle, high - middle);
        let (dl, dr) = (at_low - top, at_high - top);
        let mut x = middle + 0.5 * (l * l * dr - r * r * dl) / (l * dr - r * dl);
        // Never closer to a neighbour than a tenth of the way, nor a point that is known.
        let (near, far) = (middle + 0.9 * l, middle + 0.9 * r);
        if !x.is_finite() || !(near..=far).contains(&x) || (x - middle).abs() < 0.05 * (r - l) {
            x = if r > -l {
                middle + 0.4 * r
            } else {
                middle + 0.4 * l
            };
        }
        let at_x = ln_f(x);
        if at_x > top {
            if x > middle {
                (low, at_low) = (middle, top);
            } else {
                (high, at_high) = (middle, top);
            }
            (middle, top) = (x, at_x);
        } else if x > middle {
            (high, at_high) = (x, at_x);
        } else {
            (low, at_low) = (x, at_x);
        }
    }
    (middle, top)
}

/// How far from the peak, in the direction of `step`, the function is negligible; not much farther than needed.
fn foot(peak: f64, step: f64, top: f64, ln_f: impl Fn(f64) -> f64) -> f64 {
    let low_enough = |d: f64| ln_f(peak + d * step.signum()) < top - DEPTH;
    let mut far = step.abs();
    let mut near = 0.0;
    for _ in 0..1100 {
        if low_enough(far) {
            break;
        }
        near = far;
        far *= 2.0;
    }
    for _ in 0..if near == 0.0 { 30 } else { 3 } {
        let middle = 0.5 * (near + far);
        if low_enough(middle) {
            far = middle;
        } else {
            near = middle;
        }
        if near > 0.85 * far {
            break;
        }
    }
    far
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn integrals_with_closed_forms() {
        // A normal density far from the guess, and Γ(a) as ∫ e^(a·v − e^v) dv.
        let normal = ln_integral(0.0, 1.0, |x| -0.5 * (x - 300.0) * (x - 300.0));
        assert!(
            (normal - 0.5 * (2.0 * std::f64::consts::PI).ln()).abs() < 1e-14,
            "{normal}"
        );
        for a in [0.1, 1.0, 7.5, 400.0] {
            let got = ln_integral(0.0, 1.0, |v| a * v - v.exp());
            assert!(
                (got - libm::lgamma(a)).abs() < 2e-13 * got.abs().max(1.0),
                "{a}: {got}"
            );
        }
    }
}
