//! The *question* that granularity answers, and which questions make sense.

use super::attain::Int;
use super::printed::Printing;
use crate::numbers::Decimal;

/// Whether an SD divides by n − 1 or by n.
#[derive(Clone, Copy, Debug, PartialEq, Eq, serde::Serialize)]
#[serde(rename_all = "lowercase")]
pub enum Divisor {
    /// n − 1, the usual one.
    Sample,
    /// n.
    Population,
}

/// A percentage of the n persons.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Share {
    pub percent: Decimal,
    /// The answer that they gave; without it, any.
    pub of: Option<Decimal>,
}

/// What is printed about one set of answers. Everything but n may be missing.
#[derive(Clone, Debug, PartialEq)]
pub struct Question {
    /// Persons.
    pub n: u64,
    /// Items that are averaged for each person; 1 for single answers and counts.
    pub items: u64,
    /// Ends of the scale, of each item and so of each mean over items.
    pub low: Option<i64>,
    pub high: Option<i64>,
    pub mean: Option<Decimal>,
    pub sd: Option<Decimal>,
    pub minimum: Option<Decimal>,
    pub maximum: Option<Decimal>,
    pub median: Option<Decimal>,
    pub share: Option<Share>,
    /// The divisor of the SD; if none is given, the usual one and then the other.
    pub divisor: Option<Divisor>,
    pub printing: Printing,
}

/// Larger samples have no granularity that is ever printed.
pub const MOST_PERSONS: u64 = 1_000_000;

/// More items than any questionnaire averages.
pub const MOST_ITEMS: u64 = 1000;

/// Larger numbers are no answers.
pub const LARGEST: i64 = 1_000_000_000;

/// More decimals than anybody prints.
pub const MOST_DECIMALS: u32 = 10;

impl Question {
    /// About n single answers on no particular scale, of which nothing else is known.
    pub fn about(n: u64) -> Question {
        Question {
            n,
            items: 1,
            low: None,
            high: None,
            mean: None,
            sd: None,
            minimum: None,
            maximum: None,
            median: None,
            share: None,
            divisor: None,
            printing: Printing::Rounded,
        }
    }

    /// Says what is wrong with a question that nobody can have meant.
    pub fn check(&self) -> Result<(), String> {
        if self.n == 0 || self.n > MOST_PERSONS {
            return Err(format!(
                "n is {}, but must lie between 1 and {MOST_PERSONS}",
                self.n
            ));
        }
        if self.items == 0 || self.items > MOST_ITEMS {
            return Err(format!(
                "the number of items is {}, but must lie between 1 and {MOST_ITEMS}",
                self.items
            ));
        }
        for end in [self.low, self.high].into_iter().flatten() {
            if end.abs() > LARGEST {
                return Err(format!(
                    "the scale ends at {end}, but answers beyond {LARGEST} are not handled"
                ));
            }
        }
        if let (Some(low), Some(high)) = (self.low, self.high)
            && low >= high
        {
            return Err(format!(
                "the scale {low}..{high} must go from a smaller to a larger number"
            ));
        }
        let of = self.share.and_then(|s| s.of);
        let values = [
            ("mean", self.mean),
            ("minimum", self.minimum),
            ("maximum", self.maximum),
            ("median", self.median),
            ("answer that the percentage is of", of),
        ];
        let others = [("SD", self.sd), ("percentage", self.share.map(|s| s.percent))];
        for (name, number) in values.into_iter().chain(others) {
            let Some(number) = number else { continue };
            if number.decimals() > MOST_DECIMALS {
                return Err(format!(
                    "the {name} has {} decimals, but at most {MOST_DECIMALS} are handled",
                    number.decimals()
                ));
            }
            if number.value().abs() > LARGEST as f64 {
                return Err(format!(
                    "the {name} is {number}, but numbers beyond {LARGEST} are not handled"
                ));
            }
        }
        if let Some(sd) = self.sd
            && sd.digits < 0
        {
            return Err(format!("the SD is {sd}, but no SD is below zero"));
        }
        if let Some(share) = self.share
            && !(0.0..=100.0).contains(&share.percent.value())
        {
            return Err(format!(
                "the percentage is {}, but must lie between 0 and 100",
                share.percent
            ));
        }
        for (name, number) in values {
            let Some(number) = number else { continue };
            let inside = number.rounding();
            let below = self.low.is_some_and(|low| inside.high < low as f64);
            let above = self.high.is_some_and(|high| inside.low > high as f64);
            if below || above {
                return Err(format!(
                    "the {name} {number} lies outside the scale {}",
                    self.scale()
                ));
            }
        }
        let of_order = [
            ("minimum", self.minimum, "maximum", self.maximum),
            ("minimum", self.minimum, "mean", self.mean),
            ("minimum", self.minimum, "median", self.median),
            ("mean", self.mean, "maximum", self.maximum),
            ("median", self.median, "maximum", self.maximum),
        ];
        for (smaller, low, larger, high) in of_order {
            if let (Some(low), Some(high)) = (low, high)
                && low.rounding().low > high.rounding().high
            {
                return Err(format!("the {smaller} {low} is larger than the {larger} {high}"));
            }
        }
        if let Some(of) = of
            && self.total(&of).is_none()
        {
            return Err(format!(
                "the answer that the percentage is of is {of}, but {}",
                match self.items {
                    1 => "answers are whole numbers".to_string(),
                    items => format!("means of {items} items are multiples of 1/{items}"),
                }
            ));
        }
        Ok(())
    }

    /// The scale as it is typed: `1..7`, `0..`, or nothing for none.
    pub fn scale(&self) -> String {
        let end = |x: Option<i64>| x.map(|x| x.to_string()).unwrap_or_default();
        match (self.low, self.high) {
            (None, None) => String::new(),
            (low, high) => format!("{}..{}", end(low), end(high)),
        }
    }

    /// The total over the items that a person's mean stands for, if it is whole.
    pub(super) fn total(&self, mean: &Decimal) -> Option<Int> {
        let scaled = Int::from(mean.digits) * Int::from(self.items);
        let unit = 10i128.checked_pow(mean.place.unsigned_abs())?;
        if mean.place >= 0 {
            return scaled.checked_mul(unit);
        }
        (scaled % unit == 0).then(|| scaled / unit)
    }

    /// The divisors to be tried, in this order.
    pub(super) fn divisors(&self) -> Vec<Divisor> {
        match (self.divisor, self.sd) {
            (Some(one), _) => vec![one],
            (None, Some(_)) => vec![Divisor::Sample, Divisor::Population],
            (None, None) => vec![Divisor::Sample],
        }
    }

    /// The SD is the root of n·Q − S² over this. None if it is too large.
    pub(super) fn per_sd(&self, divisor: Divisor) -> Option<Int> {
        let (n, items) = (Int::from(self.n), Int::from(self.items));
        let persons = match divisor {
            Divisor::Sample => n * (n - 1),
            Divisor::Population => n * n,
        };
        persons.checked_mul(items * items)
    }
}
