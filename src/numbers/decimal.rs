//! A number exactly as it is printed: its digits and where the last of them stands.

use super::Interval;
use std::fmt;

/// `digits · 10^place`; `place` is the power of ten of the last printed digit, so `2.20` is
/// 220 · 10⁻² and differs from `2.2`.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub struct Decimal {
    pub digits: i64,
    pub place: i32,
    /// A minus is printed, also before a zero.
    pub negative: bool,
}

/// More digits than this are not a result that somebody printed.
const MOST_DIGITS: usize = 17;

impl Decimal {
    /// Reads plain digits with at most one decimal point, e.g. `.036`, `12`, `3.`; the caller has
    /// taken away grouping and turned the decimal mark into a point. `sign` and `exponent` come
    /// from the text around. None if there are no digits, or more than a number can sensibly have.
    pub fn read(text: &str, negative: bool, exponent: i32) -> Option<Decimal> {
        let mut digits: i64 = 0;
        let mut count = 0;
        let mut place = 0;
        let mut point = false;
        for c in text.bytes() {
            match c {
                b'0'..=b'9' => {
                    digits = digits.checked_mul(10)?.checked_add(i64::from(c - b'0'))?;
                    count += 1;
                    if point {
                        place -= 1;
                    }
                }
                b'.' if !point => point = true,
                _ => return None,
            }
        }
        if count == 0 || count > MOST_DIGITS || !(-400..=300).contains(&exponent) {
            return None;
        }
        Some(Decimal {
            digits: if negative { -digits } else { digits },
            place: place + exponent,
            negative,
        })
    }

    /// Digits behind the decimal point.
    pub fn decimals(&self) -> u32 {
        (-self.place).max(0) as u32
    }

    /// Printed without decimals.
    pub fn is_whole(&self) -> bool {
        self.place >= 0
    }

    /// The printed value itself, correctly rounded.
    pub fn value(&self) -> f64 {
        scaled(self.digits as i128, self.place)
    }

    /// Every value that prints this way under some usual rounding: half a unit of the last digit to
    /// either side, ends included, so that half-up, half-even and half-down all fit.
    pub fn rounding(&self) -> Interval {
        let ten = self.digits as i128 * 10;
        Interval {
            low: scaled(ten - 5, self.place - 1),
            high: scaled(ten + 5, self.place - 1),
        }
    }

    /// The value rounded to a place (half away from zero) as it would be printed.
    pub fn round(value: f64, place: i32) -> Option<Decimal> {
        let shown = if place <= 0 {
            format!("{:.*}", (-place) as usize, value.abs())
        } else {
            let unit = 10f64.powi(place);
            format!("{:.0}", (value.abs() / unit).round())
        };
        Decimal::read(&shown, value < 0.0, 0).map(|d| Decimal { place, ..d })
    }

    /// The printed numbers at this place whose rounding interval meets the given one: the lowest
    /// and the highest, and whether there are any in between.
    pub fn printings(range: Interval, place: i32) -> Option<(Decimal, Decimal)> {
        let unit = 10f64.powi(place);
        let (low, high) = (range.low / unit, range.high / unit);
        if !low.is_finite() || !high.is_finite() || low.abs() > 1e15 || high.abs() > 1e15 {
            return None;
        }
        let first = (low - 0.5 - 1e-9).ceil();
        let last = (high + 0.5 + 1e-9).floor();
        // Prefer values inside the range to those that only round into it.
        let (inner_first, inner_last) = ((low - 1e-9).ceil(), (high + 1e-9).floor());
        let (a, b) = if inner_first <= inner_last {
            (inner_first, inner_last)
        } else {
            (first, last)
        };
        (a <= b).then(|| (Decimal::at(a as i64, place), Decimal::at(b as i64, place)))
    }

    /// `digits · 10^place`.
    pub fn at(digits: i64, place: i32) -> Decimal {
        Decimal {
            digits,
            place,
            negative: digits < 0,
        }
    }

    /// Printed in the manner of `like`: with or without a zero before the point.
    pub fn print_like(&self, like: &str) -> String {
        let text = self.to_string();
        let bare = like.trim_start_matches(['-', '+', ' ']);
        if bare.starts_with(['.', '·'])
            && let Some(at) = text.find("0.")
            && (at == 0 || text[..at] == *"-")
        {
            return format!("{}{}", &text[..at], &text[at + 1..]);
        }
        text
    }
}

/// digits·10^place as the nearest double, through the correctly rounding parser of the standard library.
fn scaled(digits: i128, place: i32) -> f64 {
    const POWERS: [f64; 16] = [
        1e0, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9, 1e10, 1e11, 1e12, 1e13, 1e14, 1e15,
    ];
    // Both operands exact in double precision: one division or product is correctly rounded.
    if digits.unsigned_abs() < 1 << 53 && place.unsigned_abs() < 16 {
        let power = POWERS[place.unsigned_abs() as usize];
        return if place < 0 {
            digits as f64 / power
        } else {
            digits as f64 * power
        };
    }
    format!("{digits}e{place}").parse().unwrap_or(f64::NAN)
}

impl fmt::Display for Decimal {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let sign = if self.negative { "-" } else { "" };
        let digits = self.digits.unsigned_abs();
        if self.place >= 0 {
            write!(f, "{sign}{digits}{}", "0".repeat(self.place as usize))
        } else if self.place < -12 {
            write!(f, "{sign}{digits}e{}", self.place)
        } else {
            let behind = (-self.place) as usize;
            let padded = format!("{digits:0>width$}", width = behind + 1);
            let (whole, part) = padded.split_at(padded.len() - behind);
            write!(f, "{sign}{whole}.{part}")
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    fn read(text: &str) -> Decimal {
        Decimal::read(text, false, 0).expect("the tests give numbers")
    }

    #[test]
    fn a_printed_number_is_all_values_that_print_that_way() {
        assert_eq!(
            read("2.20").rounding(),
            Interval {
                low: 2.195,
                high: 2.205
            }
        );
        assert_eq!(
            read(".036").rounding(),
            Interval {
                low: 0.0355,
                high: 0.0365
            }
        );
        assert_eq!(
            read("28").rounding(),
            Interval {
                low: 27.5,
                high: 28.5
            }
        );
        let tiny = Decimal::read("4.1", false, -6).expect("a number");
        assert_eq!(
            tiny.rounding(),
            Interval {
                low: 4.05e-6,
                high: 4.15e-6
            }
        );
        assert_eq!(
            Decimal::read("0.00", true, 0).map(|d| d.to_string()),
            Some("-0.00".into())
        );
    }

    #[test]
    fn refuses_what_is_no_number() {
        assert_eq!(Decimal::read("", false, 0), None);
        assert_eq!(Decimal::read(".", false, 0), None);
        assert_eq!(Decimal::read("1.2.3", false, 0), None);
        assert_eq!(Decimal::read("123456789012345678901", false, 0), None);
        assert_eq!(Decimal::read("1", false, -9999), None);
    }

    #[test]
    fn prints_in_the_manner_of_the_text() {
        assert_eq!(read("0.036").print_like(".04"), ".036");
        assert_eq!(read("0.036").print_like("0.04"), "0.036");
        assert_eq!(Decimal::at(-36, -3).print_like("-.04"), "-.036");
        assert_eq!(Decimal::at(105, -1).print_like(".4"), "10.5");
        assert_eq!(Decimal::at(12, 3).to_string(), "12000");
    }

    #[test]
    fn candidates_for_a_repair_lie_inside_the_range() {
        let (a, b) = Decimal::printings(Interval::new(0.0241, 0.0262), -3).expect("there are some");
        assert_eq!((a.to_string(), b.to_string()), ("0.025".into(), "0.026".into()));
        let (a, b) = Decimal::printings(Interval::new(0.02441, 0.02449), -3).expect("there are some");
        assert_eq!((a.to_string(), b.to_string()), ("0.024".into(), "0.024".into()));
        assert_eq!(Decimal::printings(Interval::ALL, -3), None);
    }

    proptest! {
        #[test]
        fn whatever_rounding_was_used_the_value_lies_inside(value in -1e4..1e4f64, decimals in 0usize..6) {
            let shown = format!("{value:.decimals$}");
            let d = Decimal::read(shown.trim_start_matches('-'), shown.starts_with('-'), 0).expect("a number");
            prop_assert!(d.rounding().contains(value));
            prop_assert_eq!(d.to_string(), shown);
        }
    }
}
