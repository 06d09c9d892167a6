//! *Granularity*: answers are whole numbers, or means of a few of them, so that only some means, SDs and
//! percentages are possible. This engine decides exactly whether any data set has all the printed numbers.
//! "Possible" is always proven by a data set, the witness; "impossible" by a complete search.
//!
//! Everything is done with whole totals, one per person: with k items from L to U they go from kL to kU. The
//! mean then says which sums S = Σx are possible, the SD which spreads nQ − S² with Q = Σx², the printed
//! numbers standing for all values that print that way. Which pairs (S, Q) really exist is decided in
//! [`attain`]; what else is known (extremes, median, a percentage) in [`arrange`].

mod arrange;
mod attain;
mod groups;
mod nearest;
mod printed;
mod question;

pub use attain::Int;
pub use nearest::{Nearest, sd_limits};
pub use printed::Printing;
pub use question::{Divisor, Question, Share};

use crate::numbers::Decimal;
use arrange::{Known, arrange, within_reach};
use attain::{Search, TooDear, ceil_div, least_squares, most_squares};
use printed::{Window, spreads, totals};
use std::collections::BTreeMap;
use std::fmt;

/// Steps after which an answer is given up: a few seconds, where most need less than a hundred.
const PATIENCE: u64 = 5_000_000;

/// What came out.
#[derive(Clone, Debug, PartialEq)]
pub enum Answer {
    Possible(Witness),
    Impossible {
        part: Part,
        nearest: Nearest,
    },
    /// It could not be decided, for this reason.
    Open(String),
}

/// An example data set: the proof that the numbers are possible.
#[derive(Clone, Debug, PartialEq)]
pub struct Witness {
    /// How many persons have which total over their items.
    pub counts: BTreeMap<Int, Int>,
    /// Items behind each total.
    pub items: u64,
    /// By which divisor its SD is the printed one, if one is printed.
    pub divisor: Option<Divisor>,
}

/// Which of the printed numbers no data set has.
#[derive(Clone, Copy, Debug, PartialEq, Eq, serde::Serialize)]
#[serde(rename_all = "kebab-case")]
pub enum Part {
    /// No whole sum gives the mean.
    Mean,
    /// No data set whatever has the SD.
    Sd,
    /// The SD is larger than any on this scale with this mean.
    SdCeiling,
    /// The SD is smaller than any of whole numbers with this mean.
    SdFloor,
    /// Mean and SD are possible, but not together.
    Together,
    /// No whole number of persons gives the percentage.
    Percent,
    /// Mean and SD are possible together, but not with the minimum, maximum, median or percentage.
    Rest,
}

/// Whether a data set exists.
pub fn answer(question: &Question) -> Answer {
    let decided = || {
        let mut search = Search::new(PATIENCE);
        if let Some(witness) = example(question, &mut search)? {
            return Ok(Answer::Possible(witness));
        }
        // Which part is at fault is said for the usual divisor.
        let frame = Frame::new(question, question.divisors()[0])?;
        let part = frame.part_at_fault(&mut search)?;
        Ok(Answer::Impossible {
            part,
            nearest: nearest::nearest(&frame, part),
        })
    };
    decided().unwrap_or_else(|undecided: Undecided| Answer::Open(undecided.to_string()))
}

/// A data set that has everything printed, or nothing if there is none: the answer without its reasons.
///
/// # Errors
/// [`Undecided`] if the search would be too long or the numbers too large.
pub fn witness(question: &Question) -> Result<Option<Witness>, Undecided> {
    example(question, &mut Search::new(PATIENCE))
}

fn example(question: &Question, search: &mut Search) -> Result<Option<Witness>, Undecided> {
    for divisor in question.divisors() {
        let frame = Frame::new(question, divisor)?;
        if let Some(counts) = frame.example(search)? {
            return Ok(Some(Witness {
                counts,
                items: question.items,
                divisor: question.sd.map(|_| divisor),
            }));
        }
    }
    Ok(None)
}

/// Why there is no answer.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Undecided {
    TooDear,
    TooLarge,
}

impl fmt::Display for Undecided {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(match self {
            Undecided::TooDear => "the search would take too long",
            Undecided::TooLarge => "the numbers are too large to be decided exactly",
        })
    }
}

impl From<TooDear> for Undecided {
    fn from(_: TooDear) -> Undecided {
        Undecided::TooDear
    }
}

/// A question in whole totals, for one divisor.
#[derive(Clone, Debug)]
struct Frame<'a> {
    question: &'a Question,
    divisor: Divisor,
    n: Int,
    /// Totals at the ends of the scale.
    low: Option<Int>,
    high: Option<Int>,
    /// Sums that print as the mean.
    sums: Option<Window>,
    /// n·Q − S² for which the SD prints as given; empty where there is no such SD.
    spread: Option<Window>,
    known: Known,
    /// Numbers of persons that print as the percentage.
    share: Option<Window>,
}

impl<'a> Frame<'a> {
    fn new(question: &'a Question, divisor: Divisor) -> Result<Frame<'a>, Undecided> {
        let (n, items) = (Int::from(question.n), Int::from(question.items));
        let window = |printed: Option<Decimal>, share: Int| match printed {
            None => Ok(None),
            Some(printed) => match totals(&printed, share, question.printing) {
                None => Err(Undecided::TooLarge),
                window => Ok(window),
            },
        };
        let per_sd = question.per_sd(divisor).ok_or(Undecided::TooLarge)?;
        let spread = match question.sd {
            None => None,
            Some(_) if per_sd == 0 => Some(Window { low: 1, high: 0 }),
            Some(sd) => Some(spreads(&sd, per_sd, question.printing).ok_or(Undecided::TooLarge)?),
        };
        let share = match question.share {
            None => None,
            Some(share) => {
                // 100·x/n prints as given when x·100 prints so over n; of those the multiples of 100 are meant.
                let hundredfold = totals(&share.percent, n, question.printing).ok_or(Undecided::TooLarge)?;
                let persons = Window {
                    low: ceil_div(hundredfold.low, 100),
                    high: hundredfold.high.div_euclid(100),
                };
                Some(persons.meet(Window { low: 0, high: n }))
            }
        };
        let of = question.share.and_then(|s| s.of);
        let frame = Frame {
            question,
            divisor,
            n,
            low: question.low.map(|x| Int::from(x) * items),
            high: question.high.map(|x| Int::from(x) * items),
            sums: window(question.mean, n * items)?,
            spread,
            known: Known {
                minimum: window(question.minimum, items)?,
                maximum: window(question.maximum, items)?,
                median: window(question.median, if n % 2 == 0 { 2 * items } else { items })?,
                share: of.and_then(|of| question.total(&of)).zip(share),
            },
            share,
        };
        frame.is_handy().ok_or(Undecided::TooLarge)?;
        Ok(frame)
    }

    /// Some if sums of squares stay far from the largest number there is.
    fn is_handy(&self) -> Option<()> {
        const LARGEST: Int = Int::MAX / 16;
        let ends = [self.low, self.high].into_iter().flatten();
        let sums = self
            .sums
            .into_iter()
            .flat_map(|w| [w.low / self.n, w.high / self.n]);
        let totals = ends
            .chain(sums)
            .chain(self.anchors())
            .map(Int::abs)
            .max()
            .unwrap_or(0);
        let sd = self.spread.map_or(0, |w| w.high.max(0).isqrt() / self.n);
        let far = totals
            .checked_add(sd)?
            .checked_add(2)?
            .checked_mul(self.n)?
            .checked_mul(4)?;
        let squares = far.checked_mul(far)?.checked_mul(self.n)?;
        (squares < LARGEST).then_some(())
    }

    /// The sums that the scale allows.
    fn scale_sums(&self) -> Window {
        Window {
            low: self.low.map_or(Int::MIN / 4, |x| x * self.n),
            high: self.high.map_or(Int::MAX / 4, |x| x * self.n),
        }
    }

    /// A data set with all that is printed.
    fn example(&self, search: &mut Search) -> Result<Option<BTreeMap<Int, Int>>, Undecided> {
        if self.share.is_some_and(Window::is_empty) || self.spread.is_some_and(Window::is_empty) {
            return Ok(None);
        }
        let sums = self.sums_to_try();
        if self
            .spread_limits(sums)
            .is_none_or(|limits| self.spread.is_some_and(|spread| limits.meet(spread).is_empty()))
        {
            return Ok(None);
        }
        if let (None, Some(spread)) = (self.sums, self.spread)
            && !(0..=self.n / 2).any(|r| self.remainder_fits(r, spread))
        {
            return Ok(None);
        }
        for sum in sums.outwards() {
            search.step()?;
            // Σ(x − low)(high − x) is never negative, which limits the spread; less and less from the middle on.
            if let (Some(low), Some(high), Some(spread)) = (self.low, self.high, self.spread)
                && self.sums.is_none()
                && (sum - self.n * low) * (self.n * high - sum) < spread.low
            {
                break;
            }
            if let Some(counts) = self.with_sum(search, sum, self.spread)? {
                return Ok(Some(counts));
            }
        }
        Ok(None)
    }

    /// A data set with this sum, this spread, and all else that is known.
    fn with_sum(
        &self,
        search: &mut Search,
        sum: Int,
        spread: Option<Window>,
    ) -> Result<Option<BTreeMap<Int, Int>>, TooDear> {
        let range = self.range(sum, spread);
        let squares = match spread {
            Some(spread) => Window {
                low: ceil_div(spread.low + sum * sum, self.n),
                high: (spread.high + sum * sum).div_euclid(self.n),
            },
            None => {
                let far = range.low.abs().max(range.high.abs());
                Window {
                    low: 0,
                    high: self.n * far * far,
                }
            }
        };
        if squares.is_empty() {
            return Ok(None);
        }
        arrange(search, self.n, range, &self.known, sum, squares)
    }

    /// Totals beyond which nobody can lie, or nobody needs to.
    fn range(&self, sum: Int, spread: Option<Window>) -> Window {
        let scale = Window {
            low: self.low.unwrap_or(Int::MIN / 4),
            high: self.high.unwrap_or(Int::MAX / 4),
        };
        if let Some(spread) = spread {
            return scale.meet(within_reach(self.n, sum, spread.high.max(0)));
        }
        if self.low.is_some() && self.high.is_some() {
            return scale;
        }
        // One person further out than this makes up for all the others.
        let anchors = self.anchors();
        let largest = |x: Int| x.abs();
        let ends = [self.low, self.high].into_iter().flatten();
        let most = anchors.into_iter().chain(ends).map(largest).max().unwrap_or(0);
        let far = sum.abs() + self.n * (most + 1) + 1;
        scale.meet(Window { low: -far, high: far })
    }

    /// Totals that some person is known to have, or nearly so.
    fn anchors(&self) -> Vec<Int> {
        let known = &self.known;
        let ends = |w: Window| [w.low, w.high];
        let median = known.median.map(|w| match self.n % 2 {
            0 => [w.low.div_euclid(2) - 1, ceil_div(w.high, 2) + 1],
            _ => ends(w),
        });
        let all = [known.minimum.map(ends), known.maximum.map(ends), median];
        let mut all: Vec<Int> = all.into_iter().flatten().flatten().collect();
        all.extend(known.share.map(|(value, _)| value));
        all
    }

    /// The sums that have to be tried; if the mean is not known, as many as are needed for a proof.
    fn sums_to_try(&self) -> Window {
        if let Some(sums) = self.sums {
            return sums.meet(self.scale_sums());
        }
        if self.low.is_some() && self.high.is_some() {
            return self.scale_sums();
        }
        // No two totals are further apart than this.
        let apart = match self.spread {
            Some(spread) => (2 * spread.high / self.n).isqrt() + 1,
            None => 1,
        };
        let anchors = self.anchors();
        let range = match (anchors.iter().min(), anchors.iter().max()) {
            (Some(least), Some(greatest)) => Window {
                low: least - apart,
                high: greatest + apart,
            }
            .meet(Window {
                low: self.low.unwrap_or(Int::MIN / 4),
                high: self.high.unwrap_or(Int::MAX / 4),
            }),
            // Nothing but the spread: shifting all totals by one changes no spread, so that n sums in a row
            // are enough, far from the end of the scale if it has one.
            _ => {
                let base = match (self.low, self.high) {
                    (Some(low), _) => low + apart,
                    (_, Some(high)) => high - apart - 1,
                    _ => 0,
                };
                return Window {
                    low: base * self.n,
                    high: base * self.n + self.n - 1,
                };
            }
        };
        Window {
            low: range.low * self.n,
            high: range.high * self.n,
        }
    }

    /// Whether sums that leave this remainder modulo n go with a spread at all: the spreads of whole numbers
    /// with remainder r are r(n − r) + 2n·t with t = 0, 1, 2 …
    fn remainder_fits(&self, remainder: Int, spread: Window) -> bool {
        let least = remainder * (self.n - remainder);
        let steps = ceil_div(spread.low - least, 2 * self.n).max(0);
        least + 2 * self.n * steps <= spread.high
    }

    /// The smallest and the largest spread of whole totals on the scale with one of these sums. None if there
    /// are no such sums.
    fn spread_limits(&self, sums: Window) -> Option<Window> {
        if sums.is_empty() {
            return None;
        }
        let n = self.n;
        // r(n − r) is smallest at an end, or 0 at a multiple of n.
        let floor = |sum: Int| n * least_squares(n, sum) - sum * sum;
        let multiple = sums.low.div_euclid(n) != sums.high.div_euclid(n) || sums.low.rem_euclid(n) == 0;
        let least = if multiple {
            0
        } else {
            floor(sums.low).min(floor(sums.high))
        };
        let (Some(low), Some(high)) = (self.low, self.high) else {
            return Some(Window {
                low: least,
                high: Int::MAX / 4,
            });
        };
        let width = high - low;
        let ceiling = |sum: Int| {
            let above = sum - n * low;
            n * most_squares(above, width) - above * above
        };
        let mut tried = vec![sums.low, sums.high];
        if width > 0 {
            // Between multiples of the width the ceiling is convex in the sum, along them concave.
            let first = ceil_div(sums.low - n * low, width);
            let last = (sums.high - n * low).div_euclid(width);
            let middles = [n / 2, n / 2 + 1];
            tried.extend(
                middles
                    .into_iter()
                    .filter(|_| first <= last)
                    .map(|f| f.clamp(first, last) * width + n * low),
            );
        }
        Some(Window {
            low: least,
            high: tried.into_iter().map(ceiling).max().unwrap_or(0),
        })
    }

    /// What is at fault where there is no data set.
    fn part_at_fault(&self, search: &mut Search) -> Result<Part, Undecided> {
        if self.share.is_some_and(Window::is_empty) {
            return Ok(Part::Percent);
        }
        if self.sums.is_some() && self.sums_to_try().is_empty() {
            return Ok(Part::Mean);
        }
        let plain = Frame {
            known: Known::default(),
            share: None,
            ..self.clone()
        };
        if !self.known.is_empty() && plain.example(search)?.is_some() {
            return Ok(Part::Rest);
        }
        let Some(spread) = self.spread else {
            return Ok(Part::Rest);
        };
        if self.question.per_sd(self.divisor) == Some(0) {
            return Ok(Part::Sd);
        }
        let sums = plain.sums_to_try();
        if let Some(limits) = plain.spread_limits(sums) {
            if spread.low > limits.high {
                return Ok(Part::SdCeiling);
            }
            if spread.high < limits.low {
                return Ok(Part::SdFloor);
            }
        }
        let alone = Frame {
            sums: None,
            ..plain.clone()
        };
        Ok(match self.sums.is_some() && alone.example(search)?.is_some() {
            true => Part::Together,
            false => Part::Sd,
        })
    }
}

#[cfg(test)]
mod tests;
