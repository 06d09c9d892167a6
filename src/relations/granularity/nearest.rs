//! The *nearest* possible printed values: what could stand there instead.

use super::attain::{Int, Search, TooDear, ceil_div};
use super::printed::{Window, print_spread, print_total};
use super::{Frame, Part, Question};
use crate::numbers::Decimal;
use std::collections::BTreeSet;

/// Steps that are spent on each side.
const PATIENCE: u64 = 60_000;

/// The nearest possible values below and above what is printed, as they would be printed; one, or none, where
/// there is nothing on that side, or it would take too long to find.
#[derive(Clone, Debug, Default, PartialEq, serde::Serialize)]
pub struct Nearest {
    /// Where no whole sum gives the mean: those that one gives. Otherwise those that go with all else.
    #[serde(serialize_with = "as_printed")]
    pub mean: Vec<Decimal>,
    /// Those that go with all else as printed; where the mean is impossible, with the nearest possible ones.
    #[serde(serialize_with = "as_printed")]
    pub sd: Vec<Decimal>,
    #[serde(serialize_with = "as_printed")]
    pub percent: Vec<Decimal>,
}

fn as_printed<S: serde::Serializer>(numbers: &[Decimal], serializer: S) -> Result<S::Ok, S::Error> {
    serializer.collect_seq(numbers.iter().map(Decimal::to_string))
}

/// The smallest and the largest SD that whole answers with this mean can have on this scale, as they would be
/// printed with `decimals`, dividing by n − 1 unless the question says otherwise. None without a possible mean,
/// or where there is no largest.
pub fn sd_limits(question: &Question, decimals: u32) -> Option<(Decimal, Decimal)> {
    let frame = Frame::new(question, question.divisors()[0]).ok()?;
    if frame.low.is_none() || frame.high.is_none() {
        return None;
    }
    let limits = frame.spread_limits(frame.sums_to_try())?;
    let print = |spread| frame.print_sd(spread, decimals);
    print(limits.low).zip(print(limits.high))
}

/// Which way from what is printed.
#[derive(Clone, Copy, PartialEq, Eq)]
enum Side {
    Below,
    Above,
}

const SIDES: [Side; 2] = [Side::Below, Side::Above];

pub(super) fn nearest(frame: &Frame, part: Part) -> Nearest {
    let mut nearest = Nearest::default();
    if part == Part::Percent {
        nearest.percent = frame.percents();
        return nearest;
    }
    let mut sums = frame.sums_to_try();
    if let Some(printed) = frame.sums {
        let found: Vec<Int> = match part {
            Part::Mean => frame.whole_sums(printed),
            // With any other mean the SD is impossible, too.
            Part::Sd => Vec::new(),
            _ => SIDES
                .into_iter()
                .filter_map(|side| frame.other_sum(printed, side))
                .collect(),
        };
        nearest.mean = found.iter().filter_map(|sum| frame.print_mean(*sum)).collect();
        if part == Part::Mean {
            sums = Window {
                low: *found.iter().min().unwrap_or(&1),
                high: *found.iter().max().unwrap_or(&0),
            };
        }
    }
    if let Some(spread) = frame.spread {
        let spreads = SIDES
            .into_iter()
            .filter_map(|side| frame.other_spread(sums, spread, side));
        nearest.sd = spreads
            .filter_map(|s| frame.print_sd(s, frame.question.sd?.decimals()))
            .collect();
        nearest.sd.dedup();
    }
    nearest
}

impl Frame<'_> {
    fn print_mean(&self, sum: Int) -> Option<Decimal> {
        let answers = self.n * Int::from(self.question.items);
        print_total(
            sum,
            answers,
            self.question.mean?.decimals(),
            self.question.printing,
        )
    }

    fn print_sd(&self, spread: Int, decimals: u32) -> Option<Decimal> {
        let per_sd = self.question.per_sd(self.divisor).filter(|x| *x > 0)?;
        print_spread(spread, per_sd, decimals, self.question.printing)
    }

    /// The whole sums next to a window that holds none, or that lies beyond the scale.
    fn whole_sums(&self, printed: Window) -> Vec<Int> {
        let scale = self.scale_sums();
        // An empty window lies between two neighbours.
        let (below, above) = (
            printed.low.max(printed.high + 1) - 1,
            printed.high.min(printed.low - 1) + 1,
        );
        let mut sums: Vec<Int> = [below, above]
            .into_iter()
            .map(|s| s.clamp(scale.low, scale.high))
            .collect();
        sums.dedup();
        sums
    }

    /// The nearest sum beyond those of the printed mean with which all else is possible.
    fn other_sum(&self, printed: Window, side: Side) -> Option<Int> {
        let mut search = Search::new(PATIENCE);
        let scale = self.sums_below_ceiling();
        let mut sum = match side {
            Side::Below => scale.high.min(printed.low - 1),
            Side::Above => scale.low.max(printed.high + 1),
        };
        while scale.low <= sum && sum <= scale.high {
            match self.tried(&mut search, sum, self.spread) {
                Ok(true) => return Some(sum),
                Ok(false) => {}
                Err(TooDear) => return None,
            }
            sum += if side == Side::Below { -1 } else { 1 };
        }
        None
    }

    /// The sums on the scale for which the spread is not too large: as Σ(x − low)(high − x) is never negative,
    /// it is at most (S − n·low)(n·high − S).
    fn sums_below_ceiling(&self) -> Window {
        let scale = self.scale_sums();
        let (Some(low), Some(high), Some(spread)) = (self.low, self.high, self.spread) else {
            return scale;
        };
        // Twice the distance from the middle, squared, is at most this.
        let room = (self.n * (high - low)).pow(2) - 4 * spread.low;
        if room < 0 {
            return Window { low: 1, high: 0 };
        }
        let (middle, far) = (self.n * (low + high), room.isqrt());
        scale.meet(Window {
            low: ceil_div(middle - far, 2),
            high: (middle + far).div_euclid(2),
        })
    }

    fn tried(&self, search: &mut Search, sum: Int, spread: Option<Window>) -> Result<bool, TooDear> {
        search.step()?;
        let fits = |limits: Window| spread.is_none_or(|spread| !limits.meet(spread).is_empty());
        Ok(
            spread.is_none_or(|spread| self.remainder_fits(sum.rem_euclid(self.n), spread))
                && self.spread_limits(Window::point(sum)).is_some_and(fits)
                && self.with_sum(search, sum, spread)?.is_some(),
        )
    }

    /// The nearest spread beyond those of the printed SD that a data set with one of these sums has.
    fn other_spread(&self, sums: Window, printed: Window, side: Side) -> Option<Int> {
        const MOST_SUMS: Int = 200_000;
        let n = self.n;
        self.question.per_sd(self.divisor).filter(|x| *x > 0)?;
        // An SD that no whole spread gives has an empty window between two neighbours.
        let (below, above) = (
            printed.low.min(printed.high + 1) - 1,
            printed.high.max(printed.low - 1) + 1,
        );
        // Beyond the ceiling the ceiling itself is the nearest.
        let limits = self.spread_limits(sums)?;
        if side == Side::Below && below >= limits.high && self.known.is_empty() {
            return Some(limits.high);
        }
        if sums.high - sums.low > MOST_SUMS {
            return None;
        }
        // The spreads of a sum S are r(n − r) + 2n·t, with r the remainder of S.
        let least = |sum: Int| {
            let over = sum.rem_euclid(n);
            over * (n - over)
        };
        let first = |sum: Int| -> Option<Int> {
            match side {
                Side::Above => Some(least(sum) + 2 * n * ceil_div(above - least(sum), 2 * n).max(0)),
                Side::Below => {
                    (below >= least(sum)).then(|| least(sum) + 2 * n * (below - least(sum)).div_euclid(2 * n))
                }
            }
        };
        let mut search = Search::new(PATIENCE);
        let mut waiting: BTreeSet<(Int, Int)> = (sums.low..=sums.high)
            .filter_map(|sum| Some((first(sum)?, sum)))
            .collect();
        loop {
            let (spread, sum) = match side {
                Side::Above => waiting.pop_first()?,
                Side::Below => waiting.pop_last()?,
            };
            match self.tried(&mut search, sum, Some(Window::point(spread))) {
                Ok(true) => return Some(spread),
                Ok(false) => {}
                Err(TooDear) => return None,
            }
            let limits = self.spread_limits(Window::point(sum))?;
            let next = if side == Side::Above {
                spread + 2 * n
            } else {
                spread - 2 * n
            };
            if limits.low <= next && next <= limits.high {
                waiting.insert((next, sum));
            }
        }
    }

    /// The percentages of whole numbers of persons next to the printed one.
    fn percents(&self) -> Vec<Decimal> {
        let (Some(share), Some(window)) = (self.question.share, self.share) else {
            return Vec::new();
        };
        let (below, above) = (
            window.low.max(window.high + 1) - 1,
            window.high.min(window.low - 1) + 1,
        );
        let inside = |x: &Int| (0..=self.n).contains(x);
        [below, above]
            .into_iter()
            .filter(inside)
            .filter_map(|x| print_total(100 * x, self.n, share.percent.decimals(), self.question.printing))
            .collect()
    }
}

#[cfg(test)]
mod tests {
    use super::super::Divisor;
    use super::*;

    fn read(text: &str) -> Decimal {
        Decimal::read(text, false, 0).expect("the tests give numbers")
    }

    #[test]
    fn limits_of_the_sd_are_those_of_extreme_and_of_equal_answers() {
        let question = Question {
            low: Some(1),
            high: Some(7),
            mean: Some(read("3.50")),
            ..Question::about(28)
        };
        // 14 threes and 14 fours: √(14·14/(28·27)) = 0.509. Sum 98 = 70 above 28 = 11 sevens, one 5, 16 ones:
        // √((11·36 + 16 − 70²/28)/27) = 2.962.
        let limits = sd_limits(&question, 2).expect("a bounded scale");
        assert_eq!(
            (limits.0.to_string(), limits.1.to_string()),
            ("0.51".into(), "2.96".into())
        );
        let population = Question {
            divisor: Some(Divisor::Population),
            ..question
        };
        let limits = sd_limits(&population, 2).expect("a bounded scale");
        assert_eq!(limits.0.to_string(), "0.50");
    }
}
