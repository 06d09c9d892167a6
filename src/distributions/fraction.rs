//! A *continued fraction* on its way, by Lentz's method as modified by Thompson and Barnett (1986).

/// A step that changes the result by less ends the iteration.
const SETTLED: f64 = 1e-15;

/// Stands for zero in the steps.
const TINY: f64 = 1e-290;

pub(super) struct Fraction {
    pub value: f64,
    c: f64,
    d: f64,
}

impl Fraction {
    /// The fraction that is only its first term.
    pub(super) fn new(first: f64) -> Fraction {
        let value = not_zero(first);
        Fraction {
            value,
            c: value,
            d: 0.0,
        }
    }

    /// Takes in the next pair of terms; true once that changes nothing any more.
    pub(super) fn step(&mut self, above: f64, below: f64) -> bool {
        self.d = 1.0 / not_zero(below + above * self.d);
        self.c = not_zero(below + above / self.c);
        let change = self.c * self.d;
        self.value *= change;
        (change - 1.0).abs() < SETTLED
    }
}

fn not_zero(x: f64) -> f64 {
    if x == 0.0 { TINY } else { x }
}
