//! The *scale* on which an interval is symmetric around its estimate: the plain one, the logarithm for
//! ratios, Fisher's z for correlations.

use crate::numbers::Interval;

#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Scale {
    Plain,
    Log,
    Fisher,
}

impl Scale {
    /// The scale on which intervals of this estimate are usually made; None for estimates whose
    /// intervals are not symmetric on any.
    pub fn of(symbol: &str) -> Option<Scale> {
        match symbol {
            "M" | "Mdiff" | "b" | "B" | "beta" | "d" | "g" => Some(Scale::Plain),
            "OR" | "RR" | "HR" | "IRR" => Some(Scale::Log),
            "r" | "rho" => Some(Scale::Fisher),
            _ => None,
        }
    }

    pub fn to(self, x: f64) -> f64 {
        match self {
            Scale::Plain => x,
            Scale::Log => x.max(0.0).ln(),
            Scale::Fisher => x.clamp(-1.0, 1.0).atanh(),
        }
    }

    pub fn back(self, y: f64) -> f64 {
        match self {
            Scale::Plain => y,
            Scale::Log => y.exp(),
            Scale::Fisher => y.tanh(),
        }
    }

    /// An interval on this scale, with room for our own rounding.
    pub fn interval(self, x: Interval) -> Interval {
        pad(Interval {
            low: self.to(x.low),
            high: self.to(x.high),
        })
    }

    /// The way back, with the same room.
    pub fn interval_back(self, y: Interval) -> Interval {
        pad(Interval {
            low: self.back(y.low),
            high: self.back(y.high),
        })
    }
}

fn pad(x: Interval) -> Interval {
    let wide = x.widen(1e-12);
    Interval {
        low: wide.low - 1e-14,
        high: wide.high + 1e-14,
    }
}
