//! *Repairs*: each quantity in turn is left out and solved for; what would agree is printed at the
//! printed precision, and named slips that lead from it to what is printed come first.

use super::finding::Repair;
use crate::numbers::{Comparator, Decimal, Interval, Set};
use crate::statements::Quantity;

/// Levels that a small p is commonly said to lie below.
const BOUNDS: [f64; 5] = [0.05, 0.01, 0.001, 0.0001, 0.00001];

/// More candidates than this are shown as a range.
const MOST_SINGLE: i64 = 3;

/// Slips that are shown for one number.
const MOST_SLIPS: usize = 2;

/// What would make everything agree, the likeliest first: for each number that could be at fault,
/// the values that it could have.
pub fn of_culprits<'a>(culprits: impl Iterator<Item = (&'a Quantity, &'a Set)>) -> Vec<Repair> {
    let mut named = Vec::new();
    let mut second = Vec::new();
    let mut plain = Vec::new();
    for (part, possible) in culprits {
        let mut slips: Vec<Repair> = match turned(part, possible) {
            Some(repair) => vec![repair],
            None => slips(part, possible),
        };
        if slips.is_empty()
            && let Some(to) = printed(part, possible)
        {
            plain.push(Repair {
                symbol: part.symbol,
                to,
                slip: None,
            });
        } else if !slips.is_empty() {
            named.push(slips.remove(0));
            second.extend(slips);
        }
    }
    named.extend(plain);
    named.extend(second);
    named
}

/// The comparator the other way round.
fn turned(part: &Quantity, possible: &Set) -> Option<Repair> {
    let value = part.number.value();
    let other = match part.comparator {
        Comparator::Below | Comparator::AtMost => Interval::at_least(value),
        Comparator::Above | Comparator::AtLeast => Interval::at_most(value),
        _ => return None,
    };
    let sign = if matches!(part.comparator, Comparator::Below | Comparator::AtMost) {
        ">"
    } else {
        "<"
    };
    // All that is possible must lie there, or the turned sign would be just another conflict.
    let all = !possible.is_empty()
        && possible
            .iter()
            .all(|i| other.contains(i.low) && other.contains(i.high));
    // `n.s.` has no comparator to turn, but is turned all the same.
    let words = !part.printed.contains(|c: char| c.is_ascii_digit());
    all.then(|| Repair {
        symbol: part.symbol,
        to: if words {
            format!("{sign} {}", part.number.print_like(".05"))
        } else {
            format!("{sign} {}", part.printed)
        },
        slip: (!words).then_some("comparator turned round"),
    })
}

/// Values that one named slip turns into what is printed, each slip once.
fn slips(part: &Quantity, possible: &Set) -> Vec<Repair> {
    let exact = part.interval.low == part.interval.high;
    let fits = |d: &Decimal| {
        let range = if exact {
            Interval::point(d.value())
        } else {
            d.rounding()
        };
        // Nobody prints a p of nothing; where it is so small, a bound is named instead.
        let bare = part.symbol == "p" && d.digits == 0;
        !bare && possible.iter().any(|i| i.meets(range))
    };
    let repair = |d: Decimal, slip| Repair {
        symbol: part.symbol,
        to: d.print_like(&part.printed),
        slip: Some(slip),
    };
    let mut found = Vec::new();
    if part.comparator != Comparator::Equal || possible.is_empty() {
        return found;
    }
    // Cut off: some possible value begins with the printed digits.
    let unit = 10f64.powi(part.number.place);
    let cut = Interval::new(
        part.number.value(),
        part.number.value() + if part.number.negative { -unit } else { unit },
    );
    if !exact && part.number.place < 0 && possible.iter().any(|i| i.meets(cut)) {
        let up = Decimal::at(
            part.number.digits + if part.number.negative { -1 } else { 1 },
            part.number.place,
        );
        if fits(&up) {
            found.push(repair(up, "cut off instead of rounded"));
        }
    }
    // `p = .001` for `p < .001`: all that is possible lies below a level that bounds are printed with.
    let printed = part.number.value();
    let bound = BOUNDS.contains(&printed) && part.number.digits % 10 != 0;
    if part.symbol == "p" && bound && possible.iter().all(|i| i.high < printed) {
        let to = format!("< {}", part.printed);
        return vec![Repair {
            symbol: part.symbol,
            to,
            slip: Some("= printed for <"),
        }];
    }
    if part.symbol == "p" {
        let doubled = Interval::new(part.interval.low * 2.0, part.interval.high * 2.0);
        if let Some(both) = possible.iter().find_map(|i| i.meet(doubled))
            && let Some((low, _)) = Decimal::printings(both, part.number.place)
            && fits(&low)
        {
            found.push(repair(low, "one-sided p printed as two-sided"));
        }
    }
    if part.number.digits != 0 {
        let turned = Decimal {
            digits: -part.number.digits,
            negative: !part.number.negative,
            ..part.number
        };
        if fits(&turned) && !possible.iter().any(|i| i.low < 0.0 && i.high > 0.0) {
            found.push(repair(turned, "sign lost or added"));
        }
    }
    // Whole numbers stay whole, whatever happened to them.
    let whole = is_count(part);
    let fitting: Vec<(Decimal, &'static str)> = candidates(&part.number)
        .into_iter()
        .filter(|(d, _)| (!whole || d.is_whole()) && fits(d))
        .collect();
    for (first, slip) in &fitting {
        if found.iter().any(|r| r.slip == Some(slip)) {
            continue;
        }
        // Points that are shifted by one place or two are not alike.
        let alike = *slip != "decimal point shifted";
        let mut same = vec![*first];
        for (d, _) in fitting.iter().filter(|(_, s)| alike && s == slip) {
            if !same.contains(d) {
                same.push(*d);
            }
        }
        found.push(Repair {
            symbol: part.symbol,
            to: listed(part, same),
            slip: Some(slip),
        });
    }
    found.truncate(MOST_SLIPS);
    found
}

/// Whether the number counts something and is printed as a whole number.
fn is_count(part: &Quantity) -> bool {
    matches!(part.symbol, "df" | "df1" | "df2" | "n" | "N" | "count") && part.number.is_whole()
}

/// Several numbers that one slip could have been made from: all of a few, the ends of a run, or the first few.
fn listed(part: &Quantity, mut numbers: Vec<Decimal>) -> String {
    let show = |d: &Decimal| d.print_like(&part.printed);
    let place = numbers[0].place;
    if numbers.iter().all(|d| d.place == place) {
        let mut sorted = numbers.clone();
        sorted.sort_by_key(|d| d.digits);
        let run = sorted.windows(2).all(|pair| pair[1].digits - pair[0].digits == 1);
        if let [low, .., high] = sorted.as_slice()
            && run
            && sorted.len() as i64 > MOST_SINGLE
        {
            return format!("{} to {}", show(low), show(high));
        }
        if run {
            numbers = sorted;
        }
    }
    let few = numbers.iter().take(MOST_SINGLE as usize).map(show);
    few.collect::<Vec<_>>().join(" or ")
}

/// Numbers that a slip of the keyboard turns into the printed one, the commonest slips first.
fn candidates(printed: &Decimal) -> Vec<(Decimal, &'static str)> {
    let mut found: Vec<(Decimal, &'static str)> = Vec::new();
    let width = (printed.decimals() as usize + 1).max(printed.digits.unsigned_abs().to_string().len());
    let digits: Vec<u8> = format!("{:0>width$}", printed.digits.unsigned_abs()).into_bytes();
    let sign = if printed.negative { -1 } else { 1 };
    let mut add = |d: &[u8], place: i32, slip: &'static str| {
        let Ok(text) = std::str::from_utf8(d) else { return };
        let Ok(value) = text.parse::<i64>() else { return };
        let decimal = Decimal {
            digits: value * sign,
            place,
            negative: printed.negative,
        };
        if decimal != *printed {
            found.push((decimal, slip));
        }
    };
    for i in 1..digits.len() {
        let mut d = digits.clone();
        d.swap(i - 1, i);
        add(&d, printed.place, "digits swapped");
    }
    // A trailing zero that went to the other end: .230 for .023.
    if printed.place < 0 && digits.len() > 1 && printed.digits % 10 == 0 && printed.digits != 0 {
        add(
            &digits[..digits.len() - 1],
            printed.place,
            "decimal point shifted",
        );
    }
    let shifted = |add: &mut dyn FnMut(&[u8], i32, &'static str)| {
        for shift in [1, -1, 2, -2] {
            add(&digits, printed.place + shift, "decimal point shifted");
        }
    };
    let replaced = |add: &mut dyn FnMut(&[u8], i32, &'static str)| {
        for i in 0..digits.len() {
            for digit in b'0'..=b'9' {
                let mut d = digits.clone();
                d[i] = digit;
                add(&d, printed.place, "one digit wrong");
            }
        }
    };
    // With three decimals behind a zero a shifted point would leave four or two, which such numbers seldom
    // have; in zero there is nothing to shift.
    let fraction = printed.value().abs() < 1.0 && printed.decimals() >= 3;
    if printed.digits == 0 {
        replaced(&mut add);
    } else if fraction {
        replaced(&mut add);
        shifted(&mut add);
    } else {
        shifted(&mut add);
        replaced(&mut add);
    }
    // A digit too many or too few behind the point changes how many decimals there are; before it, or in a
    // number of fixed decimals that the author cut to size, it does not.
    let behind = printed.decimals() as usize;
    for i in 1..digits.len() {
        if digits[i] == digits[i - 1] {
            let mut d = digits.clone();
            d.remove(i);
            if i + behind >= digits.len() && behind > 0 {
                add(&d, printed.place + 1, "digit doubled");
            }
            add(&d, printed.place.min(0), "digit doubled");
        }
    }
    if digits.len() < 12 {
        for i in 0..=digits.len() {
            for digit in b'0'..=b'9' {
                let mut d = digits.clone();
                d.insert(i, digit);
                if i + behind >= digits.len() && behind > 0 {
                    add(&d, printed.place - 1, "digit dropped");
                } else {
                    add(&d, printed.place, "digit dropped");
                }
            }
        }
    }
    found
}

/// The possible values as they would be printed: one, a few, or a range.
fn printed(part: &Quantity, possible: &Set) -> Option<String> {
    let middle = part.number.value();
    // Of several ranges the one nearest to what is printed, on its side of zero.
    let near = possible.iter().min_by(|a, b| {
        let far = |i: &Interval| (i.low - middle).max(middle - i.high).max(0.0);
        far(a).total_cmp(&far(b))
    })?;
    if near.high == f64::INFINITY && near.low.is_finite() {
        return Some(format!(
            "{} or more",
            Decimal::round(near.low, part.number.place)?.print_like(&part.printed)
        ));
    }
    if near.low == f64::NEG_INFINITY && near.high.is_finite() {
        return Some(format!(
            "{} or less",
            Decimal::round(near.high, part.number.place)?.print_like(&part.printed)
        ));
    }
    let whole = is_count(part);
    let place = part.number.place;
    if whole && !near.has_whole() {
        return None;
    }
    let (low, high) = Decimal::printings(*near, place)?;
    let show = |d: Decimal| d.print_like(&part.printed);
    if part.symbol == "p" && high.digits == 0 {
        return Some(format!(
            "< {}",
            Decimal::at(1, place.min(-3)).print_like(&part.printed)
        ));
    }
    Some(match high.digits - low.digits {
        0 => show(low),
        1..=MOST_SINGLE => (low.digits..=high.digits)
            .map(|d| show(Decimal::at(d, place)))
            .collect::<Vec<_>>()
            .join(" or "),
        _ => format!("{} to {}", show(low), show(high)),
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    fn quantity(symbol: &'static str, printed: &str) -> Quantity {
        let bare = printed.trim_start_matches('-');
        let number = Decimal::read(bare, bare != printed, 0).expect("a number");
        Quantity {
            symbol,
            printed: printed.into(),
            comparator: Comparator::Equal,
            number,
            interval: Comparator::Equal.interval(&number, symbol == "df"),
            span: 0..1,
            borrowed: None,
            doubt: Default::default(),
        }
    }

    fn named(symbol: &'static str, printed: &str, low: f64, high: f64) -> Option<(String, &'static str)> {
        let first = slips(&quantity(symbol, printed), &vec![Interval::new(low, high)]);
        let repair = first.into_iter().next()?;
        Some((repair.to, repair.slip.unwrap_or_default()))
    }

    #[test]
    fn slips_are_named() {
        assert_eq!(
            named("p", ".063", 0.0358, 0.0366),
            Some((".036".into(), "digits swapped"))
        );
        assert_eq!(
            named("p", ".36", 0.0358, 0.0366),
            Some((".036".into(), "decimal point shifted"))
        );
        assert_eq!(
            named("p", ".018", 0.0358, 0.0366),
            Some((".036".into(), "one-sided p printed as two-sided"))
        );
        assert_eq!(
            named("p", ".035", 0.0357, 0.0359),
            Some((".036".into(), "cut off instead of rounded"))
        );
        assert_eq!(
            named("t", "2.90", 2.19, 2.21),
            Some(("2.20".into(), "one digit wrong"))
        );
        assert_eq!(
            named("t", "-2.20", 2.19, 2.21),
            Some(("2.20".into(), "sign lost or added"))
        );
        assert_eq!(
            named("df", "28", 128.0, 128.0),
            Some(("128".into(), "digit dropped"))
        );
        assert_eq!(
            named("p", ".001", 1e-6, 2e-6),
            Some(("< .001".into(), "= printed for <"))
        );
        assert_eq!(named("t", "9.13", 2.19, 2.21), None);
        // Nobody prints the level with a zero more, so this one is a p of its own.
        assert_ne!(
            named("p", ".010", 1e-6, 2e-6),
            Some(("< .010".into(), "= printed for <"))
        );
    }

    #[test]
    fn all_numbers_that_one_slip_could_have_been_made_from_are_shown() {
        assert_eq!(
            named("p", ".46", 0.476, 0.512),
            Some((".48 or .49".into(), "one digit wrong"))
        );
        assert_eq!(
            named("t", "2.90", 2.936, 2.978),
            Some(("2.94 to 2.98".into(), "one digit wrong"))
        );
    }

    #[test]
    fn repairs_keep_the_printed_precision_where_they_can() {
        assert_eq!(
            named("p", ".008", 0.0007, 0.0009),
            Some((".001".into(), "one digit wrong"))
        );
        assert_eq!(
            named("p", ".230", 0.0226, 0.0228),
            Some((".023".into(), "decimal point shifted"))
        );
        assert_eq!(
            named("t", "4.11", 41.09, 41.12),
            Some(("41.1".into(), "decimal point shifted"))
        );
    }

    #[test]
    fn a_point_is_not_shifted_in_zero() {
        assert_eq!(named("p", ".00", 0.110, 0.118), None);
        assert_eq!(
            named("p", ".9", 0.043, 0.054),
            Some((".1".into(), "one digit wrong"))
        );
        assert_eq!(
            named("p", ".00", 0.0, 0.012),
            Some((".01".into(), "cut off instead of rounded"))
        );
    }

    #[test]
    fn what_no_slip_explains_is_printed_as_it_would_stand() {
        let set = vec![Interval::new(0.0358, 0.0366)];
        assert_eq!(printed(&quantity("p", ".21"), &set), Some(".04".into()));
        assert_eq!(printed(&quantity("p", ".210"), &set), Some(".036".into()));
        assert_eq!(
            printed(&quantity("t", "3.1"), &vec![Interval::new(5.0, 9.0)]),
            Some("5.0 to 9.0".into())
        );
        assert_eq!(
            printed(&quantity("p", ".210"), &vec![Interval::new(1e-9, 2e-9)]),
            Some("< .001".into())
        );
        assert_eq!(
            printed(&quantity("df", "28"), &vec![Interval::new(30.2, 30.9)]),
            None
        );
    }
}
