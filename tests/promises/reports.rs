//! Whole results with everything that authors print about them, first as they are, then with one slip
//! planted. Every number is computed from simulated data by formulas of this test's own (common practice),
//! printed, and put into a sentence; what the printed numbers allow is found by the same formulas at the
//! ends of their rounding intervals.

use crate::print::{Rounding, fixed};
use crate::studies::{Random, mean, variance};
use crate::tails;

/// One printed number.
#[derive(Clone, Debug)]
pub struct Number {
    pub symbol: &'static str,
    pub text: String,
}

impl Number {
    /// The values that print this way; whole numbers stand for themselves.
    fn ends(&self) -> (f64, f64) {
        let value: f64 = self.text.parse().expect("a number");
        match self.text.split_once('.') {
            None => (value, value),
            Some((_, behind)) => {
                let half = 0.5 * 10f64.powi(-(behind.len() as i32));
                (value - half, value + half)
            }
        }
    }
}

/// A formula for one number from others; the number may follow by any of the forms.
#[derive(Clone)]
pub struct Check {
    target: usize,
    inputs: Vec<usize>,
    /// What the check takes for granted.
    fixed: Vec<usize>,
    /// Anything between the forms is possible too.
    between: bool,
    forms: Vec<fn(&[f64]) -> f64>,
}

/// A result: words with a place for each number.
#[derive(Clone)]
pub struct Report {
    pub words: &'static str,
    pub numbers: Vec<Number>,
    checks: Vec<Check>,
}

impl Report {
    /// The sentence, and where each number stands in it.
    pub fn text(&self) -> (String, Vec<usize>) {
        let mut text = String::new();
        let mut at = Vec::new();
        let mut numbers = self.numbers.iter();
        for (i, piece) in self.words.split('#').enumerate() {
            if i > 0 {
                at.push(text.len());
                text.push_str(&numbers.next().expect("a number for every place").text);
            }
            text.push_str(piece);
        }
        (text, at)
    }

    /// Whether some formula, with what is printed now, excludes the number that it is for.
    pub fn is_impossible(&self, changed: usize) -> bool {
        self.checks
            .iter()
            .filter(|c| c.target == changed || c.inputs.contains(&changed))
            // Other sizes or degrees of freedom may be those of another design.
            .filter(|c| !c.fixed.contains(&changed))
            .any(|c| {
                let (low, high) = self.numbers[c.target].ends();
                let mut ranges: Vec<(f64, f64)> = c.forms.iter().map(|f| self.range(&c.inputs, *f)).collect();
                if c.between {
                    let least = ranges.iter().map(|r| r.0).fold(f64::INFINITY, f64::min);
                    let most = ranges.iter().map(|r| r.1).fold(f64::NEG_INFINITY, f64::max);
                    ranges = vec![(least, most)];
                }
                ranges.into_iter().all(|(least, most)| {
                    let slack = 1e-6 * most.abs().max(least.abs()) + 1e-9;
                    least.is_finite() && most.is_finite() && (high < least - slack || low > most + slack)
                })
            })
    }

    /// Smallest and largest value of a formula that is monotone in each input.
    fn range(&self, inputs: &[usize], form: fn(&[f64]) -> f64) -> (f64, f64) {
        let (mut least, mut most) = (f64::INFINITY, f64::NEG_INFINITY);
        let ends: Vec<(f64, f64)> = inputs.iter().map(|i| self.numbers[*i].ends()).collect();
        for corner in 0..1u32 << inputs.len() {
            // A whole number has only one end.
            if ends
                .iter()
                .enumerate()
                .any(|(bit, (a, b))| a == b && corner >> bit & 1 == 1)
            {
                continue;
            }
            let point: Vec<f64> = ends
                .iter()
                .enumerate()
                .map(|(bit, (a, b))| if corner >> bit & 1 == 0 { *a } else { *b })
                .collect();
            let value = form(&point);
            if !value.is_finite() {
                return (f64::NAN, f64::NAN);
            }
            least = least.min(value);
            most = most.max(value);
        }
        (least, most)
    }
}

/// Prints the numbers and gives them their names.
struct Printer<'a> {
    rounding: Rounding,
    r: &'a mut Random,
}

impl Printer<'_> {
    fn number(&mut self, symbol: &'static str, value: f64, decimals: usize) -> Number {
        Number {
            symbol,
            text: fixed(value, decimals, self.rounding),
        }
    }

    fn p(&mut self, p: f64) -> Number {
        let decimals = if p < 0.002 { 5 } else { self.r.whole(3, 4) };
        self.number("p", p, decimals)
    }
}

fn whole(symbol: &'static str, value: usize) -> Number {
    Number {
        symbol,
        text: value.to_string(),
    }
}

type Kind = fn(&mut Random) -> Option<Report>;

pub const KINDS: [Kind; 8] = [
    two_groups,
    one_mean,
    coefficient,
    logistic,
    heterogeneity,
    analysis_of_variance,
    contingency,
    regression,
];

fn printer(r: &mut Random) -> Printer<'_> {
    let rounding = r.pick(&[Rounding::Up, Rounding::Even, Rounding::Down]);
    Printer { rounding, r }
}

fn printable(p: f64) -> bool {
    p >= 0.00002
}

fn two_groups(r: &mut Random) -> Option<Report> {
    let (n1, n2) = (r.whole(8, 70), r.whole(8, 70));
    let shift = 1.2 * r.normal();
    let (a, b) = (r.sample(n1, 12.0 + shift, 2.0), r.sample(n2, 12.0, 2.0));
    let (v1, v2, f1, f2) = (variance(&a), variance(&b), n1 as f64, n2 as f64);
    let difference = mean(&a) - mean(&b);
    let pooled = (((f1 - 1.0) * v1 + (f2 - 1.0) * v2) / (f1 + f2 - 2.0)).sqrt();
    let t = difference / (pooled * (1.0 / f1 + 1.0 / f2).sqrt());
    let p = tails::p_t(t, f1 + f2 - 2.0);
    if !printable(p) {
        return None;
    }
    let mut w = printer(r);
    let numbers = vec![
        w.number("M", mean(&a), 2),
        w.number("SD", v1.sqrt(), 2),
        whole("n", n1),
        w.number("M", mean(&b), 2),
        w.number("SD", v2.sqrt(), 2),
        whole("n", n2),
        whole("df", n1 + n2 - 2),
        w.number("t", t.abs(), 2),
        w.p(p),
        w.number("d", (difference / pooled).abs(), 2),
    ];
    let student = |v: &[f64]| {
        let pooled = ((v[2] - 1.0) * v[1] * v[1] + (v[5] - 1.0) * v[4] * v[4]) / (v[2] + v[5] - 2.0);
        (v[0] - v[3]).abs() / (pooled * (1.0 / v[2] + 1.0 / v[5])).sqrt()
    };
    let welch = |v: &[f64]| (v[0] - v[3]).abs() / (v[1] * v[1] / v[2] + v[4] * v[4] / v[5]).sqrt();
    let by_pooled = |v: &[f64]| {
        let pooled = ((v[2] - 1.0) * v[1] * v[1] + (v[5] - 1.0) * v[4] * v[4]) / (v[2] + v[5] - 2.0);
        (v[0] - v[3]).abs() / pooled.sqrt()
    };
    let by_average = |v: &[f64]| (v[0] - v[3]).abs() / (0.5 * (v[1] * v[1] + v[4] * v[4])).sqrt();
    let by_first = |v: &[f64]| (v[0] - v[3]).abs() / v[1];
    let by_second = |v: &[f64]| (v[0] - v[3]).abs() / v[4];
    // Where the two means come near each other the size of the difference is not monotone.
    let apart = difference.abs() > 0.05;
    let groups = vec![0, 1, 2, 3, 4, 5];
    let mut checks = vec![Check {
        target: 8,
        inputs: vec![7, 6],
        fixed: vec![],
        between: false,
        forms: vec![|v| tails::p_t(v[0], v[1])],
    }];
    if apart && n1 != n2 {
        checks.push(Check {
            target: 7,
            inputs: groups.clone(),
            fixed: vec![2, 5, 6],
            between: false,
            forms: vec![student, welch],
        });
        checks.push(Check {
            target: 9,
            inputs: groups,
            fixed: vec![2, 5, 6],
            between: false,
            forms: vec![by_pooled, by_average, by_first, by_second],
        });
    }
    Some(Report {
        words: "Gardeners with a diary (M = #, SD = #, n = #) carried more cans than those without (M = #, SD = #, n = #), t(#) = #, p = #, d = #.",
        numbers,
        checks,
    })
}

fn one_mean(r: &mut Random) -> Option<Report> {
    let n = r.whole(8, 300);
    let x = r.sample(n, 8.0, 2.5);
    let (m, sd) = (mean(&x), variance(&x).sqrt());
    let se = sd / (n as f64).sqrt();
    let mut w = printer(r);
    Some(Report {
        words: "The mean was M = #, SD = #, SE = #, n = #.",
        numbers: vec![
            w.number("M", m, 2),
            w.number("SD", sd, 2),
            w.number("SE", se, 3),
            whole("n", n),
        ],
        checks: vec![Check {
            target: 2,
            inputs: vec![1, 3],
            fixed: vec![],
            between: false,
            forms: vec![|v| v[0] / v[1].sqrt()],
        }],
    })
}

fn coefficient(r: &mut Random) -> Option<Report> {
    let df = r.whole(10, 300);
    let se = 0.05 + 0.4 * r.unit();
    let t = 2.0 * r.normal().abs() + 0.3;
    let p = tails::p_t(t, df as f64);
    if !printable(p) {
        return None;
    }
    let mut w = printer(r);
    Some(Report {
        words: "Rain lowered the number of cans, b = #, SE = #, t(#) = #, p = #.",
        numbers: vec![
            w.number("b", t * se, 3),
            w.number("SE", se, 3),
            whole("df", df),
            w.number("t", t, 2),
            w.p(p),
        ],
        checks: vec![
            Check {
                target: 3,
                inputs: vec![0, 1],
                fixed: vec![],
                between: false,
                forms: vec![|v| v[0] / v[1]],
            },
            Check {
                target: 4,
                inputs: vec![3, 2],
                fixed: vec![],
                between: false,
                forms: vec![|v| tails::p_t(v[0], v[1])],
            },
        ],
    })
}

fn logistic(r: &mut Random) -> Option<Report> {
    let (b, se) = (0.7 * r.normal(), 0.1 + 0.3 * r.unit());
    if b.abs() < 0.2 {
        return None;
    }
    let mut w = printer(r);
    Some(Report {
        words: "A barrel made a diary likelier, B = #, SE = #, OR = #.",
        numbers: vec![
            w.number("B", b, 2),
            w.number("SE", se, 2),
            w.number("OR", b.exp(), 2),
        ],
        checks: vec![Check {
            target: 2,
            inputs: vec![0],
            fixed: vec![],
            between: false,
            forms: vec![|v| v[0].exp(), |v| (-v[0]).exp()],
        }],
    })
}

fn heterogeneity(r: &mut Random) -> Option<Report> {
    let df = r.whole(3, 40);
    let q = df as f64 * (0.7 + 1.5 * r.unit());
    let p = tails::p_chi2(q, df as f64);
    if !printable(p) {
        return None;
    }
    let mut w = printer(r);
    let i2 = (100.0 * (q - df as f64) / q).max(0.0);
    Some(Report {
        words: "The allotments differed, Q(#) = #, p = #, I2 = #%.",
        numbers: vec![
            whole("df", df),
            w.number("Q", q, 2),
            w.p(p),
            w.number("I2", i2, 1),
        ],
        checks: vec![
            Check {
                target: 2,
                inputs: vec![1, 0],
                fixed: vec![],
                between: false,
                forms: vec![|v| tails::p_chi2(v[0], v[1])],
            },
            Check {
                target: 3,
                inputs: vec![1, 0],
                fixed: vec![],
                between: false,
                forms: vec![|v| (100.0 * (v[0] - v[1]) / v[0]).max(0.0)],
            },
        ],
    })
}

fn analysis_of_variance(r: &mut Random) -> Option<Report> {
    let (df1, df2) = (r.whole(1, 4), r.whole(12, 200));
    let f = 0.5 + 5.0 * r.unit();
    let p = tails::p_f(f, df1 as f64, df2 as f64);
    if !printable(p) {
        return None;
    }
    let eta = f * df1 as f64 / (f * df1 as f64 + df2 as f64);
    let mut w = printer(r);
    Some(Report {
        words: "The plots differed, F(#, #) = #, p = #, ηp2 = #.",
        numbers: vec![
            whole("df1", df1),
            whole("df2", df2),
            w.number("F", f, 2),
            w.p(p),
            w.number("eta2p", eta, 3),
        ],
        checks: vec![
            Check {
                target: 3,
                inputs: vec![2, 0, 1],
                fixed: vec![],
                between: false,
                forms: vec![|v| tails::p_f(v[0], v[1], v[2])],
            },
            Check {
                target: 4,
                inputs: vec![2, 0, 1],
                fixed: vec![],
                between: false,
                forms: vec![|v| v[0] * v[1] / (v[0] * v[1] + v[2])],
            },
        ],
    })
}

fn contingency(r: &mut Random) -> Option<Report> {
    let n = r.whole(40, 600);
    let chi2 = 0.5 + 12.0 * r.unit();
    let p = tails::p_chi2(chi2, 1.0);
    if !printable(p) {
        return None;
    }
    let mut w = printer(r);
    Some(Report {
        words: "Barrels and diaries went together, χ2(#, N = #) = #, p = #, φ = #.",
        numbers: vec![
            whole("df", 1),
            whole("N", n),
            w.number("chi2", chi2, 2),
            w.p(p),
            w.number("phi", (chi2 / n as f64).sqrt(), 3),
        ],
        checks: vec![
            Check {
                target: 3,
                inputs: vec![2, 0],
                fixed: vec![],
                between: false,
                forms: vec![|v| tails::p_chi2(v[0], v[1])],
            },
            Check {
                target: 4,
                inputs: vec![2, 1],
                fixed: vec![],
                // χ² may have Yates' correction where φ has not, which takes N/2 from |ad − bc|.
                between: true,
                forms: vec![|v| (v[0] / v[1]).sqrt(), |v| (v[0] / v[1]).sqrt() + 10.0 / v[1]],
            },
        ],
    })
}

fn regression(r: &mut Random) -> Option<Report> {
    let (k, df2) = (r.whole(2, 6), r.whole(20, 200));
    let r2 = 0.05 + 0.5 * r.unit();
    let f = r2 / k as f64 / ((1.0 - r2) / df2 as f64);
    let p = tails::p_f(f, k as f64, df2 as f64);
    if !printable(p) {
        return None;
    }
    let adjusted = 1.0 - (1.0 - r2) * (k + df2) as f64 / df2 as f64;
    let mut w = printer(r);
    Some(Report {
        words: "The model explained the cans, R2 = #, F(#, #) = #, p = #, adjusted R2 = #.",
        numbers: vec![
            w.number("R2", r2, 3),
            whole("df1", k),
            whole("df2", df2),
            w.number("F", f, 2),
            w.p(p),
            w.number("R2adj", adjusted, 3),
        ],
        checks: vec![
            Check {
                target: 4,
                inputs: vec![3, 1, 2],
                fixed: vec![],
                between: false,
                forms: vec![|v| tails::p_f(v[0], v[1], v[2])],
            },
            Check {
                target: 0,
                inputs: vec![3, 1, 2],
                fixed: vec![],
                between: false,
                // The adjusted R² may stand here too, which is left open.
                forms: vec![|v| v[0] * v[1] / (v[0] * v[1] + v[2]), |v| {
                    1.0 - (v[1] + v[2]) / (v[0] * v[1] + v[2])
                }],
            },
            Check {
                target: 5,
                inputs: vec![0, 1, 2],
                fixed: vec![],
                between: false,
                forms: vec![|v| 1.0 - (1.0 - v[0]) * (v[1] + v[2]) / v[2]],
            },
        ],
    })
}

/// One slip of the keyboard in a number; None where it changes nothing or makes no number.
pub fn slipped(r: &mut Random, text: &str) -> Option<(String, &'static str)> {
    let mut digits: Vec<char> = text.chars().collect();
    let places: Vec<usize> = (0..digits.len())
        .filter(|i| digits[*i].is_ascii_digit())
        .collect();
    let at = places[r.whole(0, places.len() - 1)];
    let slip = match r.whole(0, 4) {
        0 => {
            digits[at] = char::from(b'0' + r.whole(0, 9) as u8);
            "one digit wrong"
        }
        1 => {
            let next = places.iter().copied().find(|i| *i > at)?;
            digits.swap(at, next);
            "digits swapped"
        }
        2 => {
            let point = digits.iter().position(|c| *c == '.')?;
            digits.remove(point);
            let to = if r.unit() < 0.5 {
                point + 1
            } else {
                point.checked_sub(1)?
            };
            if to > digits.len() || to == 0 || digits[to - 1] == '-' {
                return None;
            }
            digits.insert(to, '.');
            "decimal point shifted"
        }
        3 => {
            digits.remove(at);
            "digit dropped"
        }
        _ => {
            digits.insert(at, digits[at]);
            "digit doubled"
        }
    };
    let changed: String = digits.into_iter().collect();
    // As an author would still print it: no zeros in front, no point at either end.
    let bare = changed.trim_start_matches('-');
    let odd = bare.starts_with('.') || bare.ends_with('.') || bare.is_empty();
    let padded = bare.len() > 1 && bare.starts_with('0') && !bare.starts_with("0.");
    let value: f64 = changed.parse().ok()?;
    let same = text.parse::<f64>() == Ok(value);
    // With no degrees of freedom there is no law that could be broken.
    (!odd && !padded && !same && value != 0.0).then_some((changed, slip))
}
