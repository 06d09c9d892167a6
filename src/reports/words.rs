//! Numbers, symbols and counts as people read them.

use crate::judge::{Finding, Verdict};
use crate::numbers::Interval;
use crate::statements::{Quantity, in_print};

/// `1 statement`, `2 statements`.
pub fn count(n: usize, one: &str, many: &str) -> String {
    format!("{n} {}", if n == 1 { one } else { many })
}

/// What follows for one quantity from the rest, e.g. `p = .0358 to .0367`. `quantity` is the one
/// that was printed, if it is known.
pub fn follows(finding: &Finding, name: &str, range: [f64; 2], quantity: Option<&Quantity>) -> String {
    let range = Interval::new(range[0], range[1]);
    let name = in_print(name);
    let printed = quantity.map_or("", |q| q.printed.as_str());
    let decimals = quantity.map_or(2, |q| q.number.decimals()) as usize;
    let in_conflict = finding.verdict >= Verdict::Conflicts;
    // A conflict whose range holds what is printed names the nearest values that are possible.
    let discrete = quantity.filter(|q| in_conflict && range.contains(q.number.value()));
    if let Some(q) = discrete
        && range.low.is_finite()
        && range.high.is_finite()
    {
        let (low, high) = (single(range.low, q), single(range.high, q));
        return format!("{name} = {low} or {high} are the nearest that are possible");
    }
    let apart = |shown: Interval| !in_conflict || quantity.is_none_or(|q| !shown.meets(q.interval));
    let (low, high) = ends(range, decimals + 1, printed, apart);
    match (range.low.is_finite(), range.high.is_finite()) {
        (false, false) => format!("{name} can be anything"),
        (true, false) => format!("{name} at least {low}"),
        (false, true) => format!("{name} at most {high}"),
        (true, true) if low == high => format!("{name} = {low}"),
        (true, true) => format!("{name} = {low} to {high}"),
    }
}

/// Both ends with `decimals`, unless that is far too many, or as many more as are needed to show two
/// significant digits and to satisfy `apart`, moved outward.
fn ends(range: Interval, decimals: usize, like: &str, apart: impl Fn(Interval) -> bool) -> (String, String) {
    const MOST_DECIMALS: usize = 6;
    const PLENTY: usize = 4;
    let size = [range.low, range.high]
        .into_iter()
        .filter(|v| v.is_finite() && *v != 0.0)
        .fold(0.0f64, |most, v| most.max(v.abs()));
    if size == 0.0 {
        return ("0".into(), "0".into());
    }
    let needed = 1 - size.log10().floor() as i64;
    if needed > MOST_DECIMALS as i64 || size >= 1e9 {
        return (powers(range.low, false), powers(range.high, true));
    }
    let needed = needed.max(0) as usize;
    let mut decimals = decimals.min(PLENTY.max(needed + 2)).max(needed);
    loop {
        let shown = Interval {
            low: toward(range.low, decimals, false),
            high: toward(range.high, decimals, true),
        };
        if apart(shown) || decimals >= MOST_DECIMALS {
            let print = |v: f64| manner(format!("{v:.decimals$}"), like);
            return (print(shown.low), print(shown.high));
        }
        decimals += 1;
    }
}

/// The value at so many decimals, moved up or down; a difference that our own arithmetic makes
/// does not count.
fn toward(value: f64, decimals: usize, up: bool) -> f64 {
    let unit = 10f64.powi(decimals as i32);
    let scaled = value * unit;
    let nearest = scaled.round();
    let moved = if (scaled - nearest).abs() <= scaled.abs() * 1e-9 {
        nearest
    } else if up {
        scaled.ceil()
    } else {
        scaled.floor()
    };
    moved / unit
}

/// A value that stands for itself, at as many decimals as are printed, or more where it would look
/// like what is printed.
fn single(value: f64, printed: &Quantity) -> String {
    const MORE: usize = 4;
    let decimals = printed.number.decimals() as usize;
    let shown = |d: usize| format!("{value:.d$}");
    let differs = |d: &usize| shown(*d).parse() != Ok(printed.number.value());
    let decimals = (decimals..decimals + MORE).find(differs).unwrap_or(decimals);
    manner(shown(decimals), &printed.printed)
}

/// Very small and very large values, at three significant digits moved outward.
fn powers(value: f64, up: bool) -> String {
    let shown = format!("{value:.2e}");
    let read: f64 = shown.parse().unwrap_or(value);
    if value == 0.0 || !value.is_finite() {
        return "0".into();
    }
    if (read >= value) == up || (read - value).abs() <= value.abs() * 1e-9 {
        return shown;
    }
    let (digits, exponent) = shown.split_once('e').unwrap_or((&shown, "0"));
    let hundredths = digits.parse::<f64>().unwrap_or_default() * 100.0 + if up { 1.0 } else { -1.0 };
    let exponent: i32 = exponent.parse().unwrap_or_default();
    let moved: f64 = format!("{}e{}", hundredths.round(), exponent - 2)
        .parse()
        .unwrap_or(value);
    format!("{moved:.2e}")
}

/// In the manner of the text: `.036` where it leaves out the zero. No minus before a zero.
fn manner(shown: String, like: &str) -> String {
    let negative = shown.starts_with('-') && shown.contains(|c: char| ('1'..='9').contains(&c));
    let bare = shown.trim_start_matches('-');
    let bare = match bare.strip_prefix("0.") {
        Some(_) if like.trim_start_matches('-').starts_with(['.', '·', ',']) => &bare[1..],
        _ => bare,
    };
    format!("{}{bare}", if negative { "-" } else { "" })
}

#[cfg(test)]
mod tests {
    use super::super::samples;
    use super::*;
    use crate::statements::list;

    fn shown(verdict: Verdict, comparator: &str, printed: &str, range: [f64; 2]) -> String {
        let mut finding = samples::finding(verdict);
        finding.reported = vec![("p", format!("{comparator} {printed}"))];
        let quantity = samples::quantity("p", comparator, printed, 0);
        follows(&finding, "p", range, Some(&quantity))
    }

    #[test]
    fn ranges_are_shown_one_digit_finer_than_print_and_outward() {
        let conflict = |printed, range| shown(Verdict::Conflicts, "=", printed, range);
        assert_eq!(conflict(".063", [0.035_871, 0.036_692]), "p = .0358 to .0367");
        assert_eq!(conflict("0.063", [0.035_871, 0.036_692]), "p = 0.0358 to 0.0367");
        assert_eq!(conflict("28", [36.2, 38.41]), "p = 36.2 to 38.5");
        assert_eq!(conflict("2.20", [-1.3, -1.2]), "p = -1.300 to -1.200");
        assert_eq!(conflict(".03", [0.000_012, 0.000_34]), "p = .00001 to .00034");
    }

    #[test]
    fn a_range_never_looks_as_if_it_held_what_is_printed() {
        assert_eq!(
            shown(Verdict::Conflicts, "=", ".036", [0.036_512, 0.0367]),
            "p = .03651 to .03670"
        );
        assert_eq!(
            shown(Verdict::Agrees, "=", ".036", [0.036_412, 0.0367]),
            "p = .0364 to .0367"
        );
    }

    #[test]
    fn very_small_ranges_are_powers_of_ten() {
        assert_eq!(
            shown(Verdict::Conflicts, "=", ".03", [3.1102e-9, 3.3949e-9]),
            "p = 3.11e-9 to 3.40e-9"
        );
        // However finely a number is printed, what follows from the others is not known that well.
        assert_eq!(
            shown(Verdict::Conflicts, "=", "0.0000034", [0.009_899_4, 0.009_946_9]),
            "p = 0.009899 to 0.009947"
        );
        assert_eq!(
            shown(Verdict::Conflicts, "=", ".03", [0.0, 9.996e-12]),
            "p = 0 to 1.00e-11"
        );
    }

    #[test]
    fn open_ends_and_single_values_are_said_in_words() {
        let conflict = |range| shown(Verdict::Conflicts, "<", ".03", range);
        assert_eq!(conflict([0.25, f64::INFINITY]), "p at least .250");
        assert_eq!(conflict([0.25, 0.25]), "p = .250");
        assert_eq!(conflict([0.0, 0.0]), "p = 0");
        assert_eq!(
            shown(Verdict::Agrees, "<", ".03", [f64::NEG_INFINITY, f64::INFINITY]),
            "p can be anything"
        );
    }

    #[test]
    fn where_single_values_are_possible_the_nearest_are_named() {
        assert_eq!(
            shown(Verdict::Conflicts, "=", "3.45", [3.428_571_43, 3.464_285_71]),
            "p = 3.43 or 3.46 are the nearest that are possible"
        );
        assert_eq!(
            shown(Verdict::Conflicts, "=", "3.45", [3.4, 3.5]),
            "p = 3.40 or 3.50 are the nearest that are possible"
        );
    }

    #[test]
    fn lists_and_counts_read_like_sentences() {
        let items = |n: usize| (1..=n).map(|i| i.to_string()).collect::<Vec<_>>();
        assert_eq!(list(&items(1)), "1");
        assert_eq!(list(&items(2)), "1 and 2");
        assert_eq!(list(&items(3)), "1, 2 and 3");
        assert_eq!(count(1, "check", "checks"), "1 check");
        assert_eq!(count(0, "check", "checks"), "0 checks");
    }
}
