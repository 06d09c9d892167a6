//! What a *printed* number says, exactly: which whole totals, and which whole spreads, print that way; and how
//! a total or spread would be printed. Nothing here is rounded.

use super::attain::{Int, ceil_div};
use crate::numbers::Decimal;

/// How numbers were shortened for print.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Default)]
pub enum Printing {
    /// Rounded to the nearest; a tie may have gone either way (half-up, half-even, half-down).
    #[default]
    Rounded,
    /// Cut off behind the last printed digit.
    CutOff,
}

/// All whole numbers from `low` to `high`; none if they are the wrong way round.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Window {
    pub low: Int,
    pub high: Int,
}

impl Window {
    pub fn point(value: Int) -> Window {
        Window {
            low: value,
            high: value,
        }
    }

    pub fn is_empty(self) -> bool {
        self.low > self.high
    }

    pub fn meet(self, other: Window) -> Window {
        Window {
            low: self.low.max(other.low),
            high: self.high.min(other.high),
        }
    }

    /// Every number, those in the middle first.
    pub fn outwards(self) -> impl Iterator<Item = Int> {
        let middle = self.low + (self.high - self.low).max(0) / 2;
        let length = (self.high - self.low + 1).max(0);
        (0..length).map(move |i| {
            if i % 2 == 0 {
                middle - i / 2
            } else {
                middle + i / 2 + 1
            }
        })
    }
}

/// The values behind a printed number: numerators over one denominator, and whether the ends belong to it.
struct Ends {
    low: Int,
    high: Int,
    over: Int,
    low_open: bool,
    high_open: bool,
}

fn ends(printed: &Decimal, printing: Printing) -> Option<Ends> {
    let ten = |power: i32| 10i128.checked_pow(power.unsigned_abs());
    // In half units of the last digit.
    let twice = 2 * Int::from(printed.digits);
    let (unit, over) = match printed.place {
        place if place > 0 => (ten(place)?, 2),
        place => (1, 2 * ten(place)?),
    };
    let (low, high, low_open, high_open) = match (printing, printed.digits) {
        (Printing::Rounded, _) => (twice - 1, twice + 1, false, false),
        // Zero is cut off from both sides.
        (Printing::CutOff, 0) => (twice - 2, twice + 2, true, true),
        (Printing::CutOff, 1..) => (twice, twice + 2, false, true),
        (Printing::CutOff, _) => (twice - 2, twice, true, false),
    };
    Some(Ends {
        low: low.checked_mul(unit)?,
        high: high.checked_mul(unit)?,
        over,
        low_open,
        high_open,
    })
}

/// The whole numbers x for which x/`share` prints as given. None if the numbers are too large.
pub fn totals(printed: &Decimal, share: Int, printing: Printing) -> Option<Window> {
    let ends = ends(printed, printing)?;
    let (low, high) = (ends.low.checked_mul(share)?, ends.high.checked_mul(share)?);
    let on_grid = |x: Int| x % ends.over == 0;
    Some(Window {
        low: ceil_div(low, ends.over) + Int::from(ends.low_open && on_grid(low)),
        high: high.div_euclid(ends.over) - Int::from(ends.high_open && on_grid(high)),
    })
}

/// The whole numbers x for which √(x/`share`) prints as given. None if the numbers are too large.
pub fn spreads(printed: &Decimal, share: Int, printing: Printing) -> Option<Window> {
    let ends = ends(printed, printing)?;
    let over = ends.over.checked_mul(ends.over)?;
    let square = |end: Int| -> Option<(Int, bool)> {
        let squared = end.checked_mul(end)?;
        // squared·share/over without the size of the product.
        let (whole, part) = (squared.div_euclid(over), squared.rem_euclid(over));
        let rest = part.checked_mul(share)?;
        let floor = whole.checked_mul(share)?.checked_add(rest.div_euclid(over))?;
        Some((floor, rest % over == 0))
    };
    let (low, low_on_grid) = if ends.low <= 0 {
        (0, true)
    } else {
        square(ends.low)?
    };
    let (high, high_on_grid) = square(ends.high)?;
    // Below zero there are no spreads, so that an open end there excludes nothing.
    let low_open = ends.low_open && ends.low > 0;
    Some(Window {
        low: low + Int::from(!low_on_grid || low_open),
        high: high - Int::from(high_on_grid && ends.high_open),
    })
}

/// x/`share` as it would be printed with that many decimals, ties away from zero.
pub fn print_total(total: Int, share: Int, decimals: u32, printing: Printing) -> Option<Decimal> {
    let scaled = total.abs().checked_mul(10i128.checked_pow(decimals)?)?;
    let digits = match printing {
        Printing::Rounded => (2 * scaled + share).div_euclid(2 * share),
        Printing::CutOff => scaled.div_euclid(share),
    };
    decimal(digits * total.signum(), decimals)
}

/// √(x/`share`) as it would be printed with that many decimals.
pub fn print_spread(spread: Int, share: Int, decimals: u32, printing: Printing) -> Option<Decimal> {
    let squared = 100i128.checked_pow(decimals)?;
    // The whole part of twice the root tells which half unit it lies in.
    let twice = spread
        .checked_mul(squared.checked_mul(4)?)?
        .div_euclid(share)
        .isqrt();
    let digits = match printing {
        Printing::Rounded => (twice + 1) / 2,
        Printing::CutOff => twice / 2,
    };
    decimal(digits, decimals)
}

fn decimal(digits: Int, decimals: u32) -> Option<Decimal> {
    Some(Decimal::at(
        i64::try_from(digits).ok()?,
        -i32::try_from(decimals).ok()?,
    ))
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    fn read(text: &str) -> Decimal {
        let bare = text.trim_start_matches('-');
        Decimal::read(bare, bare != text, 0).expect("the tests give numbers")
    }

    #[test]
    fn ends_belong_to_a_rounded_number_but_not_to_one_that_is_cut_off() {
        let totals = |text, share, printing| {
            let window = totals(&read(text), share, printing).expect("small numbers");
            (window.low, window.high)
        };
        // 3.45·28 = 96.6 lies between the halves 96.46 and 96.74: no whole number.
        assert_eq!(totals("3.45", 28, Printing::Rounded), (97, 96));
        // 0.125 and 0.135 both print as 0.13.
        assert_eq!(totals("0.13", 1000, Printing::Rounded), (125, 135));
        assert_eq!(totals("0.13", 1000, Printing::CutOff), (130, 139));
        assert_eq!(totals("-0.13", 1000, Printing::CutOff), (-139, -130));
        assert_eq!(totals("0.00", 1000, Printing::CutOff), (-9, 9));
        assert_eq!(totals("12", 4, Printing::Rounded), (46, 50));
        assert_eq!(Window::point(3).outwards().collect::<Vec<_>>(), [3]);
        let mut all: Vec<Int> = Window { low: -2, high: 3 }.outwards().collect();
        assert_eq!(all.first(), Some(&0));
        all.sort_unstable();
        assert_eq!(all, [-2, -1, 0, 1, 2, 3]);
    }

    #[test]
    fn spreads_are_squares_of_the_ends() {
        let spreads = |text, share, printing| {
            let window = spreads(&read(text), share, printing).expect("small numbers");
            (window.low, window.high)
        };
        // 1.215²·756 = 1116.03 and 1.225²·756 = 1134.47
        assert_eq!(spreads("1.22", 756, Printing::Rounded), (1117, 1134));
        // 0.5² = 0.25 and 1.5² = 2.25, exactly
        assert_eq!(spreads("1", 100, Printing::Rounded), (25, 225));
        assert_eq!(spreads("1", 100, Printing::CutOff), (100, 399));
        assert_eq!(spreads("0.00", 10_000, Printing::Rounded), (0, 0));
        assert_eq!(spreads("0.0", 10_000, Printing::CutOff), (0, 99));
    }

    proptest! {
        #[test]
        fn what_is_printed_lies_in_its_own_window(
            total in -5000i128..5000, spread in 0i128..100_000, share in 1i128..400, decimals in 0u32..6, cut: bool,
        ) {
            let printing = if cut { Printing::CutOff } else { Printing::Rounded };
            let mean = print_total(total, share, decimals, printing).expect("small numbers");
            let window = totals(&mean, share, printing).expect("small numbers");
            prop_assert!((window.low..=window.high).contains(&total), "{mean} {window:?}");
            let sd = print_spread(spread, share, decimals, printing).expect("small numbers");
            let window = spreads(&sd, share, printing).expect("small numbers");
            prop_assert!((window.low..=window.high).contains(&spread), "{sd} {window:?}");
            // The formatter of the standard library rounds the nearest double; away from ties that is the same.
            let value = total as f64 / share as f64;
            let tie = (2 * total * 10i128.pow(decimals)) % share == 0;
            if !cut && !tie && total >= 0 {
                prop_assert_eq!(mean.to_string(), format!("{value:.*}", decimals as usize));
            }
        }
    }
}
