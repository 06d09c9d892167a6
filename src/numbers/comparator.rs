//! What stands between a symbol and its number.

use super::{Decimal, Interval};

/// How a quantity is tied to its printed number.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, serde::Serialize, serde::Deserialize)]
pub enum Comparator {
    #[serde(rename = "=")]
    Equal,
    #[serde(rename = "<")]
    Below,
    #[serde(rename = "≤")]
    AtMost,
    #[serde(rename = ">")]
    Above,
    #[serde(rename = "≥")]
    AtLeast,
    #[serde(rename = "≈")]
    About,
}

impl Comparator {
    /// The sign as it is shown.
    pub fn sign(self) -> &'static str {
        match self {
            Comparator::Equal => "=",
            Comparator::Below => "<",
            Comparator::AtMost => "≤",
            Comparator::Above => ">",
            Comparator::AtLeast => "≥",
            Comparator::About => "≈",
        }
    }

    /// The true values that are described by the comparator and the printed number. Bounds count
    /// as included: `p < .001` allows .001, because what was compared may itself have been rounded.
    /// `≈` allows three half units of the last printed digit, or a twentieth, whichever is more.
    pub fn interval(self, printed: &Decimal, whole: bool) -> Interval {
        let value = printed.value();
        match self {
            Comparator::Equal if whole && printed.is_whole() => Interval::point(value),
            Comparator::Equal => printed.rounding(),
            Comparator::Below | Comparator::AtMost => Interval::at_most(value),
            Comparator::Above | Comparator::AtLeast => Interval::at_least(value),
            Comparator::About => {
                let unit = printed.rounding();
                let half = ((unit.high - unit.low) * 1.5).max(value.abs() / 20.0);
                Interval {
                    low: value - half,
                    high: value + half,
                }
            }
        }
    }
}
