//! A mean lies between the smallest and the largest value, a median also between the quartiles.
//!
//! Formula: minimum ≤ M ≤ maximum; first quartile ≤ Mdn ≤ third quartile.
//!
//! Assumes: the range or interquartile range belongs to the only mean or median before it.
//!
//! Caution: the range may be that of the scale or of another group; a mean can lie outside the
//! interquartile range.
//!
//! Source: the definitions.
//!
//! Example: M = 4.2 (range 1–7) agrees; M = 8.2 (range 1–7) conflicts.

use super::ci_order::between;
use super::{Case, Tie, Variant};

/// See the module documentation.
pub fn ties(case: &Case) -> Vec<Tie> {
    let symbol = |i: usize| case.quantities[i].symbol;
    let mut ties = Vec::new();
    let mut from = 0;
    for low in 0..case.quantities.len().saturating_sub(1) {
        let middles: &[&str] = match (symbol(low), symbol(low + 1)) {
            ("range_low", "range_high") => &["M", "Mdn"],
            ("IQR_low", "IQR_high") => &["Mdn"],
            _ => continue,
        };
        let mut found = (from..low).filter(|i| case.own(*i) && matches!(symbol(*i), "M" | "Mdn"));
        if let (Some(middle), None) = (found.next(), found.next())
            && middles.contains(&symbol(middle))
        {
            ties.push(case.tie(vec![middle, low, low + 1], vec![Variant::new(&[], between)]));
        }
        from = low + 2;
    }
    ties
}
