//! Closed intervals of real numbers, and sets made of them.

/// All values from `low` to `high`, both included; either end may be infinite.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Interval {
    pub low: f64,
    pub high: f64,
}

/// A set of values: disjoint intervals in rising order. Empty means that no value will do.
pub type Set = Vec<Interval>;

/// Relative slack for our own arithmetic: far above the rounding error of a few dozen operations,
/// far below half a unit of any digit that is ever printed.
const ARITHMETIC: f64 = 1e-12;

impl Interval {
    pub const ALL: Interval = Interval {
        low: f64::NEG_INFINITY,
        high: f64::INFINITY,
    };

    /// The interval between two ends, in whichever order they come.
    pub fn new(a: f64, b: f64) -> Interval {
        Interval {
            low: a.min(b),
            high: a.max(b),
        }
    }

    pub fn point(value: f64) -> Interval {
        Interval {
            low: value,
            high: value,
        }
    }

    pub fn at_least(low: f64) -> Interval {
        Interval {
            low,
            high: f64::INFINITY,
        }
    }

    pub fn at_most(high: f64) -> Interval {
        Interval {
            low: f64::NEG_INFINITY,
            high,
        }
    }

    pub fn contains(self, value: f64) -> bool {
        self.low <= value && value <= self.high
    }

    /// What both have in common.
    pub fn meet(self, other: Interval) -> Option<Interval> {
        let (low, high) = (self.low.max(other.low), self.high.min(other.high));
        (low <= high).then_some(Interval { low, high })
    }

    /// Whether the two have a value in common.
    pub fn meets(self, other: Interval) -> bool {
        self.meet(other).is_some()
    }

    /// The smallest interval around both.
    pub fn hull(self, other: Interval) -> Interval {
        Interval {
            low: self.low.min(other.low),
            high: self.high.max(other.high),
        }
    }

    /// Widened by a relative error on each side, away from the middle.
    pub fn widen(self, relative: f64) -> Interval {
        Interval {
            low: self.low - self.low.abs() * relative,
            high: self.high + self.high.abs() * relative,
        }
    }

    /// The image under a function that never falls, widened by the error of our own arithmetic.
    pub fn rising(self, f: impl Fn(f64) -> f64) -> Interval {
        Interval {
            low: f(self.low),
            high: f(self.high),
        }
        .widen(ARITHMETIC)
    }

    /// The image under a function that never rises, widened by the error of our own arithmetic.
    pub fn falling(self, f: impl Fn(f64) -> f64) -> Interval {
        Interval {
            low: f(self.high),
            high: f(self.low),
        }
        .widen(ARITHMETIC)
    }

    /// The absolute values.
    pub fn abs(self) -> Interval {
        if self.low >= 0.0 {
            self
        } else if self.high <= 0.0 {
            Interval {
                low: -self.high,
                high: -self.low,
            }
        } else {
            Interval {
                low: 0.0,
                high: self.high.max(-self.low),
            }
        }
    }

    pub fn negate(self) -> Interval {
        Interval {
            low: -self.high,
            high: -self.low,
        }
    }

    /// All sums.
    pub fn plus(self, other: Interval) -> Interval {
        Interval {
            low: self.low + other.low,
            high: self.high + other.high,
        }
        .widen(ARITHMETIC)
    }

    /// All differences.
    pub fn minus(self, other: Interval) -> Interval {
        self.plus(other.negate())
    }

    /// All products; infinite ends times zero count as zero.
    pub fn times(self, other: Interval) -> Interval {
        let product = |a: f64, b: f64| if a == 0.0 || b == 0.0 { 0.0 } else { a * b };
        let ends = [
            product(self.low, other.low),
            product(self.low, other.high),
            product(self.high, other.low),
            product(self.high, other.high),
        ];
        Interval {
            low: ends.iter().copied().fold(f64::INFINITY, f64::min),
            high: ends.iter().copied().fold(f64::NEG_INFINITY, f64::max),
        }
        .widen(ARITHMETIC)
    }

    /// All quotients; everything when the divisor can be zero.
    pub fn over(self, other: Interval) -> Interval {
        if other.contains(0.0) {
            if self.low >= 0.0 && other.low >= 0.0 {
                let low = if other.high > 0.0 && other.high.is_finite() {
                    self.low / other.high
                } else {
                    0.0
                };
                return Interval::at_least(low).widen(ARITHMETIC);
            }
            return Interval::ALL;
        }
        self.times(Interval::new(1.0 / other.low, 1.0 / other.high))
    }

    /// The part of `self` and of its mirror image that is allowed when only the absolute value is known.
    pub fn both_signs(self) -> Set {
        let size = self.abs();
        if size.low <= 0.0 {
            vec![Interval {
                low: -size.high,
                high: size.high,
            }]
        } else {
            vec![size.negate(), size]
        }
    }

    /// Whether any whole number lies inside.
    pub fn has_whole(self) -> bool {
        self.low.ceil() <= self.high.floor()
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    #[test]
    fn division_by_an_interval_around_zero_can_give_anything() {
        assert_eq!(
            Interval::new(1.0, 2.0).over(Interval::new(-1.0, 1.0)),
            Interval::ALL
        );
        assert!(
            Interval::new(1.0, 2.0)
                .over(Interval::new(0.0, 0.5))
                .contains(1e9)
        );
        assert!(
            !Interval::new(1.0, 2.0)
                .over(Interval::new(0.0, 0.5))
                .contains(1.0)
        );
    }

    proptest! {
        #[test]
        fn operations_enclose_every_pair_of_values(
            a in -1e6..1e6f64, wa in 0.0..10.0f64, b in -1e6..1e6f64, wb in 0.0..10.0f64,
            x in 0.0..=1.0f64, y in 0.0..=1.0f64,
        ) {
            let (ia, ib) = (Interval::new(a, a + wa), Interval::new(b, b + wb));
            let (va, vb) = ((a + x * wa).min(ia.high), (b + y * wb).min(ib.high));
            prop_assert!(ia.plus(ib).contains(va + vb));
            prop_assert!(ia.minus(ib).contains(va - vb));
            prop_assert!(ia.times(ib).contains(va * vb));
            if vb != 0.0 { prop_assert!(ia.over(ib).contains(va / vb)); }
            prop_assert!(ia.abs().contains(va.abs()));
            prop_assert!(ia.both_signs().iter().any(|i| i.contains(va)));
        }
    }
}
