//! *Solving*: the argument at which a tail has a given probability.
//!
//! Where the slope is known, Newton's method on the logarithm of the smaller tail: these logarithms are concave,
//! so that from beyond the solution every step comes closer without passing it. Elsewhere the bracketing method of
//! Chandrupatla (1997, Advances in Engineering Software 28:145), inverse quadratic interpolation that falls back
//! on halving. Both end after a bounded number of steps, whatever the function does.

/// The root of a rising function by Newton's method within the bracket that its own signs make. `value_and_slope`
/// answers both for one argument.
pub(super) fn newton(start: f64, mut value_and_slope: impl FnMut(f64) -> (f64, f64)) -> f64 {
    let (mut low, mut high) = (f64::NEG_INFINITY, f64::INFINITY);
    let mut x = start;
    // Usually five to ten; hundreds where the solution is farther out than doubles can tell.
    for _ in 0..1000 {
        let (value, slope) = value_and_slope(x);
        if value > 0.0 {
            high = high.min(x);
        } else {
            low = low.max(x);
        }
        let step = -value / slope;
        let mut next = x + step;
        if !(next > low && next < high) {
            if step.abs() <= 4e-16 * x.abs().max(1.0) {
                return x;
            }
            next = if low.is_finite() && high.is_finite() {
                0.5 * (low + high)
            } else if value > 0.0 {
                x - x.abs().max(1.0)
            } else {
                x + x.abs().max(1.0)
            };
        }
        if (next - x).abs() <= 1e-15 * x.abs().max(1.0) {
            return next;
        }
        x = next;
    }
    x
}

/// The root of a rising function between `low` and `high`, where its signs differ, to about the last place of the
/// argument. Values of ±∞ are allowed.
pub(super) fn between(low: f64, high: f64, mut value: impl FnMut(f64) -> f64) -> f64 {
    let (mut a, mut b) = (low, high);
    let (mut at_a, mut at_b) = (value(a), value(b));
    if at_a >= 0.0 {
        return a;
    }
    if at_b <= 0.0 {
        return b;
    }
    let mut share = 0.5;
    for _ in 0..200 {
        let x = a + share * (b - a);
        let at_x = value(x);
        let (c, at_c);
        if (at_x > 0.0) == (at_a > 0.0) {
            (c, at_c) = (a, at_a);
        } else {
            (c, at_c) = (b, at_b);
            (b, at_b) = (a, at_a);
        }
        (a, at_a) = (x, at_x);
        let best = if at_a.abs() < at_b.abs() { a } else { b };
        let least = 2e-16 * best.abs() + f64::MIN_POSITIVE;
        let smallest_share = least / (b - a).abs();
        if smallest_share > 0.5 || at_x == 0.0 {
            return best;
        }
        let xi = (a - b) / (c - b);
        let phi = (at_a - at_b) / (at_c - at_b);
        share = if phi * phi < xi && (1.0 - phi) * (1.0 - phi) < 1.0 - xi {
            at_a / (at_b - at_a) * (at_c / (at_b - at_c))
                + (c - a) / (b - a) * (at_a / (at_c - at_a)) * (at_b / (at_c - at_b))
        } else {
            0.5
        };
        if share.is_nan() {
            share = 0.5;
        }
        share = share.clamp(smallest_share, 1.0 - smallest_share);
    }
    0.5 * (a + b)
}

/// The root of a rising function somewhere in [`least`, `most`], looked for from `start` in steps that double;
/// the end of the range where the function does not change its sign in it.
pub(super) fn around(start: f64, step: f64, least: f64, most: f64, mut value: impl FnMut(f64) -> f64) -> f64 {
    let start = start.clamp(least, most);
    let mut step = step.abs().max(f64::MIN_POSITIVE);
    let (mut low, mut high) = (start, start);
    if value(start) < 0.0 {
        while high < most {
            low = high;
            high = (high + step).min(most);
            step *= 2.0;
            if value(high) >= 0.0 {
                return between(low, high, value);
            }
        }
        return most;
    }
    while low > least {
        high = low;
        low = (low - step).max(least);
        step *= 2.0;
        if value(low) <= 0.0 {
            return between(low, high, value);
        }
    }
    least
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn roots_of_functions_with_known_roots() {
        let cube = between(0.0, 10.0, |x| x * x * x - 2.0);
        assert!((cube - 2f64.cbrt()).abs() < 1e-15);
        let jump = between(-1.0, 1.0, |x| if x < 0.3 { f64::NEG_INFINITY } else { 1.0 });
        assert!((jump - 0.3).abs() < 1e-15);
        let far = around(0.0, 1.0, -1e10, 1e10, |x| x - 12_345.678);
        assert!((far - 12_345.678).abs() < 1e-11);
        assert_eq!(around(0.0, 1.0, -5.0, 5.0, |x| x - 7.0), 5.0);
        let root = newton(5.0, |x| (x * x - 2.0, 2.0 * x));
        assert!((root - 2f64.sqrt()).abs() < 1e-15);
        // Newton's own steps would leave for infinity here.
        let flat = newton(3.0, |x| (x.atan(), 1.0 / (1.0 + x * x)));
        assert!(flat.abs() < 1e-12, "{flat}");
    }
}
