//! The engine against full enumeration, against real data, and against published examples.

use super::*;
use proptest::prelude::*;
use std::collections::BTreeSet;

fn read(text: &str) -> Decimal {
    let bare = text.trim_start_matches('-');
    Decimal::read(bare, bare != text, 0).expect("the tests give numbers")
}

/// n answers from 1 to `high`, with a printed mean and SD.
fn asked(n: u64, high: i64, mean: &str, sd: &str) -> Question {
    Question {
        low: Some(1),
        high: Some(high),
        mean: (!mean.is_empty()).then(|| read(mean)),
        sd: (!sd.is_empty()).then(|| read(sd)),
        divisor: Some(Divisor::Sample),
        ..Question::about(n)
    }
}

fn part(question: &Question) -> Option<Part> {
    match answer(question) {
        Answer::Possible(_) => None,
        Answer::Impossible { part, .. } => Some(part),
        Answer::Open(reason) => panic!("{reason}"),
    }
}

fn nearest_to(question: &Question) -> (Vec<String>, Vec<String>) {
    let Answer::Impossible { nearest, .. } = answer(question) else {
        panic!("{question:?} is possible");
    };
    let print = |numbers: &[Decimal]| numbers.iter().map(Decimal::to_string).collect();
    (print(&nearest.mean), print(&nearest.sd))
}

/// Every multiset of n answers from 1 to `high`, by sum and n·Q − S².
fn every_data_set(n: u64, high: Int) -> BTreeSet<(Int, Int)> {
    fn more(left: u64, from: Int, high: Int, so_far: (Int, Int), found: &mut BTreeSet<(Int, Int)>) {
        if left == 0 {
            found.insert(so_far);
            return;
        }
        for x in from..=high {
            more(left - 1, x, high, (so_far.0 + x, so_far.1 + x * x), found);
        }
    }
    let mut found = BTreeSet::new();
    more(n, 1, high, (0, 0), &mut found);
    let n = Int::from(n);
    found
        .into_iter()
        .map(|(sum, squares)| (sum, n * squares - sum * sum))
        .collect()
}

/// The digits with which a/b may be printed, at a tie both ways. Written without the engine's own rounding.
fn ways_to_print(a: Int, b: Int, unit: Int) -> Vec<Int> {
    let guess = unit * a / b;
    (guess - 1..=guess + 1)
        .filter(|d| (2 * d * b - 2 * unit * a).abs() <= b)
        .collect()
}

/// The same for √(a/b).
fn ways_to_print_root(a: Int, b: Int, unit: Int) -> Vec<Int> {
    let guess = ((a as f64 / b as f64).sqrt() * unit as f64) as Int;
    let fits = |d: &Int| {
        let (low, high) = (2 * d - 1, 2 * d + 1);
        *d >= 0
            && (low <= 0 || low * low * b <= 4 * unit * unit * a)
            && 4 * unit * unit * a <= high * high * b
    };
    (guess - 1..=guess + 1).filter(fits).collect()
}

/// Enumeration is the outside judge: for every n up to 8, every scale up to 7 points, and every mean and SD that
/// can be printed at one or two decimals.
#[test]
fn agrees_with_the_enumeration_of_all_data_sets() {
    for high in 2..=7 {
        for n in 1..=8 {
            let data = every_data_set(n, high);
            for divisor in [Divisor::Sample, Divisor::Population] {
                let persons = Int::from(n) * Int::from(if divisor == Divisor::Sample { n - 1 } else { n });
                // All by the usual divisor; the other differs by a factor only.
                if persons == 0 || (divisor == Divisor::Population && n > 4) {
                    continue;
                }
                for decimals in 1..=2 {
                    against(&data, n, high, divisor, persons, decimals);
                }
            }
        }
    }
}

fn against(data: &BTreeSet<(Int, Int)>, n: u64, high: Int, divisor: Divisor, persons: Int, decimals: u32) {
    let unit = 10i128.pow(decimals);
    let mut means = BTreeSet::new();
    let mut pairs = BTreeSet::new();
    for (sum, spread) in data {
        for mean in ways_to_print(*sum, Int::from(n), unit) {
            means.insert(mean);
            pairs.extend(
                ways_to_print_root(*spread, persons, unit)
                    .into_iter()
                    .map(|sd| (mean, sd)),
            );
        }
    }
    let print = |digits: Int| Decimal::at(i64::try_from(digits).expect("small"), -(decimals as i32));
    for mean in unit..=high * unit {
        let question = |sd| Question {
            low: Some(1),
            high: Some(high as i64),
            mean: Some(print(mean)),
            sd,
            divisor: Some(divisor),
            ..Question::about(n)
        };
        let alone = witness(&question(None)).expect("it is short");
        assert_eq!(alone.is_some(), means.contains(&mean), "{:?}", question(None));
        // The largest SD is half the range, times √2 for two answers.
        for sd in 0..=(high - 1) * unit * 3 / 4 {
            // Where no sum gives the mean the SD does not matter: a few are enough.
            if alone.is_none() && sd % 40 != 0 {
                continue;
            }
            let question = question(Some(print(sd)));
            let found = witness(&question).expect("it is short");
            assert_eq!(found.is_some(), pairs.contains(&(mean, sd)), "{question:?}");
            if let Some(witness) = found {
                let total = |f: fn(Int) -> Int| witness.counts.iter().map(|(x, c)| f(*x) * c).sum::<Int>();
                let (count, sum, squares) = (total(|_| 1), total(|x| x), total(|x| x * x));
                assert_eq!(count, Int::from(n));
                assert!(data.contains(&(sum, count * squares - sum * sum)), "{question:?}");
                assert!(ways_to_print(sum, count, unit).contains(&mean), "{question:?}");
            }
        }
    }
}

/// What is named as nearest is nearest, again by enumeration.
#[test]
fn the_nearest_values_are_those_of_the_enumeration() {
    let (n, high, unit) = (6u64, 5, 100);
    let persons = 30;
    let data = every_data_set(n, high);
    let mut pairs = BTreeSet::new();
    for (sum, spread) in &data {
        for mean in ways_to_print(*sum, 6, unit) {
            pairs.extend(
                ways_to_print_root(*spread, persons, unit)
                    .into_iter()
                    .map(|sd| (mean, sd)),
            );
        }
    }
    let text = |digits: Int| Decimal::at(digits as i64, -2).to_string();
    for mean in pairs.iter().map(|p| p.0).collect::<BTreeSet<_>>() {
        for sd in (0..=300).step_by(7).filter(|sd| !pairs.contains(&(mean, *sd))) {
            let below = pairs.range((mean, 0)..(mean, sd)).next_back();
            let above = pairs.range((mean, sd)..(mean + 1, 0)).next();
            let wanted: Vec<String> = [below, above].into_iter().flatten().map(|p| text(p.1)).collect();
            let question = asked(n, high as i64, &text(mean), &text(sd));
            assert_eq!(nearest_to(&question).1, wanted, "{question:?}");
        }
    }
}

#[test]
fn published_means_that_cannot_be() {
    // Brown & Heathers (2017): 28 whole answers have no mean of 5.19; 145/28 = 5.18 and 146/28 = 5.21. The
    // numbers are quoted from memory, the arithmetic is here.
    let question = asked(28, 7, "5.19", "");
    assert_eq!(part(&question), Some(Part::Mean));
    assert_eq!(nearest_to(&question).0, ["5.18", "5.21"]);
    assert_eq!(part(&asked(28, 7, "5.18", "")), None);
    assert_eq!(part(&asked(28, 7, "5.21", "")), None);
}

#[test]
fn published_sds_that_cannot_be() {
    // Allard (2018), after Anaya (2016), with M = 3.44, SD = 2.47, n = 18 (numbers quoted from memory): the sum is
    // 62, so that n·Q − S² is 80 + 36t, but 2.465² and 2.475² times 306 are 1859.3 and 1874.4, between t = 49.4
    // and 49.8.
    let question = asked(18, 9, "3.44", "2.47");
    assert_eq!(part(&question), Some(Part::Together));
    assert_eq!(nearest_to(&question).1, ["2.45", "2.48"]);
    // Heathers & Brown (2019): of two-valued answers the SD follows from mean and n. 7 of 20: √(7·13/(20·19)) =
    // .489 (NumPy: std([1]*7 + [0]*13, ddof=1) = 0.48936), so that .18 cannot be.
    let binary = |sd| Question {
        low: Some(0),
        high: Some(1),
        ..asked(20, 1, "0.35", sd)
    };
    assert_eq!(part(&binary("0.49")), None);
    assert_eq!(part(&binary("0.18")), Some(Part::SdFloor));
    assert_eq!(nearest_to(&binary("0.18")).1, ["0.49"]);
}

#[test]
fn each_part_that_can_be_at_fault() {
    assert_eq!(part(&asked(28, 7, "3.45", "1.22")), Some(Part::Mean));
    assert_eq!(part(&asked(28, 7, "3.43", "1.22")), Some(Part::Together));
    assert_eq!(part(&asked(28, 7, "3.43", "1.20")), None);
    assert_eq!(part(&asked(28, 7, "3.43", "3.20")), Some(Part::SdCeiling));
    assert_eq!(part(&asked(28, 7, "3.43", "0.20")), Some(Part::SdFloor));
    assert_eq!(part(&asked(3, 7, "", "0.57")), Some(Part::Sd));
    let percent = |percent: &str, of: Option<&str>, mean: &str| Question {
        share: Some(Share {
            percent: read(percent),
            of: of.map(read),
        }),
        ..asked(50, 5, mean, "")
    };
    assert_eq!(part(&percent("38.5", None, "")), Some(Part::Percent));
    assert_eq!(part(&percent("38", Some("5"), "4.00")), None);
    // If 90 % give 5, the mean is at least 4.6.
    assert_eq!(part(&percent("90", Some("5"), "4.00")), Some(Part::Rest));
    let ends = Question {
        minimum: Some(read("2")),
        maximum: Some(read("4")),
        ..asked(10, 5, "3.10", "1.20")
    };
    // Between 2 and 4 the SD is 1.05 at most.
    assert_eq!(part(&ends), Some(Part::Rest));
    assert_eq!(nearest_to(&ends).1, ["0.99"]);
}

#[test]
fn items_make_the_grain_finer() {
    let question = |items| Question {
        items,
        ..asked(28, 7, "3.45", "")
    };
    assert_eq!(part(&question(1)), Some(Part::Mean));
    // 4·28 = 112 steps of a mean: 386/112 = 3.446
    assert_eq!(part(&question(4)), None);
}

#[test]
fn scales_may_be_open() {
    // Ages, at least 18: the SD has no ceiling, but a floor.
    let ages = |sd: &str| Question {
        low: Some(18),
        high: None,
        ..asked(20, 1, "30.25", sd)
    };
    assert_eq!(part(&ages("8.91")), None);
    assert_eq!(part(&ages("0.30")), Some(Part::SdFloor));
    // Two counts with this SD are √2·25.46 = 36 apart.
    let counts = Question {
        low: Some(0),
        high: None,
        ..asked(2, 1, "", "25.46")
    };
    assert_eq!(part(&counts), None);
    assert_eq!(
        part(&Question {
            mean: Some(read("17.5")),
            ..counts.clone()
        }),
        Some(Part::Together)
    );
    // √(7²/2) = 4.9497
    let any = Question {
        low: None,
        high: None,
        ..asked(2, 1, "-3.5", "4.95")
    };
    assert_eq!(part(&any), None);
}

#[test]
fn one_person_has_no_sample_sd() {
    let question = Question {
        divisor: None,
        ..asked(1, 7, "3", "0.00")
    };
    let Answer::Possible(witness) = answer(&question) else {
        panic!("a single answer has a population SD of 0");
    };
    assert_eq!(witness.divisor, Some(Divisor::Population));
    assert!(matches!(
        answer(&asked(1, 7, "3", "0.00")),
        Answer::Impossible { part: Part::Sd, .. }
    ));
}

#[test]
fn the_other_divisor_is_tried_and_named() {
    // 1, 2, 3, 4: SD 1.29 with n − 1, 1.12 with n (R: sd(1:4); sqrt(mean((1:4 - 2.5)^2))).
    let question = |divisor| Question {
        divisor,
        ..asked(4, 4, "2.50", "1.12")
    };
    let Answer::Possible(witness) = answer(&question(None)) else {
        panic!("it is a population SD");
    };
    assert_eq!(witness.divisor, Some(Divisor::Population));
    // 1.12²·12 = 15.05, but n·Q − S² is 4 + 8t with the sum 10, 3 + 8t or 8t with others: 12 or 20, 11 or 19, 16.
    assert_eq!(part(&question(Some(Divisor::Sample))), Some(Part::Sd));
}

#[test]
fn numbers_beyond_exact_arithmetic_are_left_open() {
    let question = Question {
        items: 1000,
        low: None,
        high: None,
        ..asked(1_000_000, 1, "999999999.5", "1234567.0000000001")
    };
    assert!(matches!(answer(&question), Answer::Open(_)));
}

/// How a program prints a value that is given exactly: at a tie up, to even, or down; or cut off.
fn printed(numerator: Int, denominator: Int, decimals: u32, way: u8) -> Decimal {
    let scaled = numerator * 10i128.pow(decimals);
    let (floor, rest) = (scaled / denominator, scaled % denominator);
    let digits = match (2 * rest).cmp(&denominator) {
        _ if way == 3 => floor,
        std::cmp::Ordering::Less => floor,
        std::cmp::Ordering::Greater => floor + 1,
        std::cmp::Ordering::Equal => match way {
            0 => floor + 1,
            1 => floor + floor % 2,
            _ => floor,
        },
    };
    Decimal::at(digits as i64, -(decimals as i32))
}

fn printed_root(numerator: Int, denominator: Int, decimals: u32, way: u8) -> Decimal {
    let squared = numerator * 100i128.pow(decimals);
    let floor = (squared / denominator).isqrt();
    // Above or below floor + ½: 4·squared against (2·floor + 1)²·denominator.
    let digits = match (4 * squared).cmp(&((2 * floor + 1).pow(2) * denominator)) {
        _ if way == 3 => floor,
        std::cmp::Ordering::Less => floor,
        std::cmp::Ordering::Greater => floor + 1,
        std::cmp::Ordering::Equal => match way {
            0 => floor + 1,
            1 => floor + floor % 2,
            _ => floor,
        },
    };
    Decimal::at(digits as i64, -(decimals as i32))
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(100))]

    /// The first promise: real answers are never called impossible, whatever is known of them.
    #[test]
    fn real_answers_are_possible(
        answers in proptest::collection::vec(0u32..1_000_000, 1..60),
        low in 0i64..2, width in 1i64..100, items in 1u64..5, decimals in 0u32..4, way in 0u8..4, known in 0u8..128,
    ) {
        // Totals over the items, from items·low to items·(low + width).
        let (k, n) = (Int::from(items), answers.len() as Int);
        let span = k * Int::from(width) + 1;
        let mut totals: Vec<Int> = answers.iter().map(|x| k * Int::from(low) + Int::from(*x) % span).collect();
        totals.sort_unstable();
        let sum: Int = totals.iter().sum();
        let spread = n * totals.iter().map(|x| x * x).sum::<Int>() - sum * sum;
        let show = |a, b| printed(a, b, decimals, way);
        let is = |bit: u8| known >> bit & 1 == 1;
        let divisor = if is(0) { Divisor::Sample } else { Divisor::Population };
        let persons = if is(0) { n * (n - 1) } else { n * n };
        let middle = totals[(totals.len() - 1) / 2] + totals[totals.len() / 2];
        let of = totals[totals.len() / 3];
        let as_many = totals.iter().filter(|x| **x == of).count() as Int;
        // An answer that the percentage is of must be printed exactly.
        let share = (is(6) && matches!(items, 1 | 2 | 4)).then(|| Share {
            percent: show(100 * as_many, n),
            of: Some(Decimal::at((of * 100 / k) as i64, -2)),
        });
        let question = Question {
            n: answers.len() as u64,
            items,
            low: Some(low),
            high: (!is(5)).then_some(low + width),
            mean: is(1).then(|| show(sum, n * k)),
            sd: (persons > 0 && !is(2)).then(|| printed_root(spread, persons * k * k, decimals, way)),
            minimum: is(3).then(|| show(totals[0], k)),
            maximum: is(3).then(|| show(totals[totals.len() - 1], k)),
            median: is(4).then(|| show(middle, 2 * k)),
            share,
            divisor: Some(divisor),
            printing: if way == 3 { Printing::CutOff } else { Printing::Rounded },
        };
        prop_assert_eq!(question.check(), Ok(()));
        match answer(&question) {
            Answer::Impossible { part, .. } => prop_assert!(false, "{part:?}: {question:?} from {totals:?}"),
            Answer::Open(_) => {}
            Answer::Possible(witness) => {
                // The witness has the same printed numbers.
                let counts = &witness.counts;
                let total = |f: fn(Int) -> Int| counts.iter().map(|(x, c)| f(*x) * c).sum::<Int>();
                let (count, sum, squares) = (total(|_| 1), total(|x| x), total(|x| x * x));
                prop_assert_eq!(count, n);
                let all: Vec<Int> = counts.iter().flat_map(|(x, c)| (0..*c).map(|_| *x)).collect();
                let ways = if way == 3 { 3..4 } else { 0..3 };
                let prints = |number: Option<Decimal>, a: Int, b: Int| {
                    number.is_none_or(|d| ways.clone().any(|way| printed(a, b, decimals, way) == d))
                };
                let root = |d: Decimal, a: Int, b: Int| ways.clone().any(|way| printed_root(a, b, decimals, way) == d);
                prop_assert!(prints(question.mean, sum, n * k));
                prop_assert!(question.sd.is_none_or(|sd| root(sd, n * squares - sum * sum, persons * k * k)));
                prop_assert!(prints(question.minimum, all[0], k));
                prop_assert!(prints(question.maximum, all[all.len() - 1], k));
                prop_assert!(prints(question.median, all[(all.len() - 1) / 2] + all[all.len() / 2], 2 * k));
                let as_many = all.iter().filter(|x| **x == of).count() as Int;
                prop_assert!(prints(question.share.map(|s| s.percent), 100 * as_many, n));
                prop_assert!(all[0] >= k * Int::from(low));
                prop_assert!(is(5) || all[all.len() - 1] <= k * Int::from(low + width));
            }
        }
    }

    /// The same for large samples, where only mean and SD are known.
    #[test]
    fn large_samples_are_possible(
        counts in proptest::collection::vec(0u64..3000, 2..10), items in 1u64..11, decimals in 1u32..6, way in 0u8..3,
    ) {
        let n: u64 = counts.iter().sum();
        prop_assume!(n > 1);
        let (k, total) = (Int::from(items), |f: fn(Int) -> Int| -> Int {
            counts.iter().enumerate().map(|(x, c)| f(x as Int) * Int::from(*c)).sum()
        });
        let (sum, squares) = (total(|x| x), total(|x| x * x));
        let persons = Int::from(n) * Int::from(n - 1);
        let question = Question {
            items,
            low: Some(0),
            high: Some(counts.len() as i64),
            mean: Some(printed(sum, Int::from(n) * k, decimals, way)),
            sd: Some(printed_root(Int::from(n) * squares - sum * sum, persons * k * k, decimals, way)),
            divisor: Some(Divisor::Sample),
            ..Question::about(n)
        };
        prop_assert!(matches!(witness(&question), Ok(Some(_))), "{question:?}");
    }
}
