//! The two promises, from raw data to verdict.
//!
//! No false alarm: raw data are simulated, statistics computed by formulas of this test's own and
//! p by numerical integration, everything is printed with some usual rounding in some usual form,
//! and the program must never call it a conflict.
//!
//! No miss: a p that no reading of the printed statistic allows is always a conflict.

mod print;
mod reports;
mod studies;
mod tails;
mod texts;

use print::{Rounding, fixed};
use studies::{Random, Result, STUDIES};
use texts::TEXTS;
use tieout::judge::{Document, Options, Verdict};
use tieout::manuscript::{BlockKind, Builder, Format};
use tieout::statements::Grammar;

fn examine(text: &str) -> Document {
    let mut builder = Builder::new(Format::Text);
    builder.open(BlockKind::Paragraph);
    builder.text(text);
    tieout::examine(builder.finish(), Grammar::built_in(), &Options::default())
}

/// The choices of one author.
pub struct Style {
    pub decimals: usize,
    p_decimals: usize,
    pub rounding: Rounding,
    leading_zero: bool,
    bounds: bool,
    pub comma: bool,
    brackets: (&'static str, &'static str),
    pub equals: &'static str,
    p_symbol: &'static str,
    minus: &'static str,
    pub separator: &'static str,
}

impl Style {
    fn random(r: &mut Random) -> Style {
        Style {
            decimals: r.whole(1, 3),
            p_decimals: r.whole(2, 4),
            rounding: r.pick(&[Rounding::Up, Rounding::Even, Rounding::Down]),
            leading_zero: r.unit() < 0.5,
            bounds: r.unit() < 0.3,
            comma: r.unit() < 0.15,
            brackets: r.pick(&[("(", ")"), ("[", "]"), (" (", ")")]),
            equals: r.pick(&[" = ", "=", " \u{2009}=\u{2009}", "\u{a0}= "]),
            p_symbol: r.pick(&["p", "P", "𝑝", "p-value"]),
            minus: r.pick(&["-", "−", "–", "− "]),
            separator: r.pick(&[", ", "; ", ", "]),
        }
    }

    pub fn number(&self, value: f64, decimals: usize) -> String {
        let mut text = fixed(value, decimals, self.rounding);
        if self.comma {
            text = text.replace('.', ",");
        }
        text.replace('-', self.minus)
    }

    pub fn bounded(&self, value: f64, decimals: usize) -> String {
        let text = self.number(value, decimals);
        if self.leading_zero || self.comma {
            text
        } else {
            text.replacen("0.", ".", 1)
        }
    }

    pub fn p(&self, p: f64) -> String {
        let space = if self.equals.len() > 1 { " " } else { "" };
        if self.bounds {
            for level in [0.001, 0.01, 0.05] {
                if p < level {
                    return format!("{}{space}<{space}{}", self.p_symbol, self.bounded(level, 3));
                }
            }
            return format!("{}{space}>{space}{}", self.p_symbol, self.bounded(0.05, 2));
        }
        let shown = self.bounded(p, self.p_decimals);
        if shown.bytes().all(|b| matches!(b, b'0' | b'.' | b',')) {
            let smallest = 10f64.powi(-(self.p_decimals as i32));
            return format!(
                "{}{space}<{space}{}",
                self.p_symbol,
                self.bounded(smallest, self.p_decimals)
            );
        }
        format!("{}{}{shown}", self.p_symbol, self.equals)
    }

    /// The statistic with its degrees of freedom, in one of the usual forms.
    fn statistic(&self, r: &mut Random, result: &Result) -> String {
        let value = match result.symbol {
            "r" => self.bounded(result.value, self.decimals.max(2)),
            _ => self.number(result.value, self.decimals),
        };
        let df: Vec<String> = result
            .df
            .iter()
            .map(|d| {
                if d.fract() == 0.0 {
                    format!("{d:.0}")
                } else {
                    self.number(*d, 2)
                }
            })
            .collect();
        let list = if self.comma { "; " } else { r.pick(&[", ", ","]) };
        let (open, close) = self.brackets;
        let symbol = match result.symbol {
            "χ2" => r.pick(&["χ2", "χ²", "X2", "chi-square"]),
            other => other,
        };
        if df.is_empty() {
            return format!("{symbol}{}{value}", self.equals);
        }
        if let Some(total) = result.total {
            return format!(
                "{symbol}{open}{}{list}N = {total}{close}{}{value}",
                df[0], self.equals
            );
        }
        match r.whole(0, 5) {
            0 if df.len() == 1 => format!(
                "{symbol}{}{value}{}df{}{}",
                self.equals, self.separator, self.equals, df[0]
            ),
            1 if df.iter().all(|d| d.bytes().all(|b| b.is_ascii_digit())) && symbol != "r" => {
                let lowered: Vec<String> = df.iter().map(|d| lowered(d)).collect();
                format!("{symbol}{}{}{value}", lowered.join(","), self.equals)
            }
            _ => format!("{symbol}{open}{}{close}{}{value}", df.join(list), self.equals),
        }
    }
}

fn lowered(digits: &str) -> String {
    digits
        .bytes()
        .map(|b| char::from_u32('₀' as u32 + u32::from(b - b'0')).expect("a digit"))
        .collect()
}

fn sentence(r: &mut Random, statement: &str) -> String {
    match r.whole(0, 3) {
        0 => format!("Watering differed between plots, {statement}."),
        1 => format!("The diaries of the gardeners showed this ({statement}), as expected."),
        2 => format!("As Fig. 2 shows ({statement}; see the appendix)."),
        _ => statement.to_string(),
    }
}

/// How many cases each promise is tried on.
const CASES: usize = 12_000;

#[test]
fn results_of_real_data_are_never_a_conflict() {
    let mut r = Random(20_261_201);
    let mut agreed = 0;
    for case in 0..CASES {
        let result = r.pick(&STUDIES)(&mut r);
        let style = Style::random(&mut r);
        let mut statement = style.statistic(&mut r, &result);
        statement.push_str(style.separator);
        statement.push_str(&style.p(result.p));
        for (name, value) in &result.effects {
            let decimals = style.decimals.max(2);
            let shown = if *name == "d" || *name == "dz" {
                style.number(*value, decimals)
            } else {
                style.bounded(*value, decimals)
            };
            statement.push_str(&format!("{}{name}{}{shown}", style.separator, style.equals));
        }
        let text = sentence(&mut r, &statement);
        let document = examine(&text);
        for finding in &document.findings {
            assert!(
                finding.verdict < Verdict::Conflicts,
                "case {case}: {text}\n{result:?}\n{}: {}",
                finding.relation,
                finding.says
            );
        }
        let judged = document
            .findings
            .iter()
            .any(|f| f.relation.starts_with("p-from") && f.verdict == Verdict::Agrees);
        assert!(
            judged,
            "case {case} was not judged: {text}\nread: {:?}",
            document.statements
        );
        agreed += usize::from(judged);
    }
    println!("{agreed} of {CASES} statements from simulated data were judged; none is a conflict");
}

#[test]
fn a_p_that_no_reading_allows_is_always_a_conflict() {
    let mut r = Random(7);
    let mut planted = 0;
    while planted < CASES {
        let result = r.pick(&STUDIES)(&mut r);
        let mut style = Style::random(&mut r);
        style.bounds = false;
        // p at both ends of what the printed statistic and df may stand for, by integration.
        let decimals = if result.symbol == "r" {
            style.decimals.max(2)
        } else {
            style.decimals
        };
        let half = 0.5 * 10f64.powi(-(decimals as i32));
        let shown: f64 = fixed(result.value, decimals, style.rounding)
            .parse()
            .expect("a number");
        let (near, far) = ((shown.abs() - half).max(1e-9), shown.abs() + half);
        let df_half = |d: f64| if d.fract() == 0.0 { 0.0 } else { 0.005 };
        let p_at = |value: f64, up: bool| {
            let df = |i: usize| {
                let d: f64 = result.df[i];
                let shown = (d * 100.0).round() / 100.0;
                if up {
                    shown + df_half(d)
                } else {
                    shown - df_half(d)
                }
            };
            match result.symbol {
                "t" => tails::p_t(value, df(0)),
                "F" => tails::p_f(value, df(0), df(1)),
                "χ2" | "H" => tails::p_chi2(value, df(0)),
                "z" => tails::p_z(value),
                _ => {
                    let value = value.min(1.0 - 1e-12);
                    tails::p_t(value * (df(0) / (1.0 - value * value)).sqrt(), df(0))
                }
            }
        };
        let (low, high) = (
            p_at(far, true).min(p_at(far, false)),
            p_at(near, true).max(p_at(near, false)),
        );
        let wrong = r.unit();
        let digits = style.p_decimals;
        let margin = 0.5 * 10f64.powi(-(digits as i32)) * 1.01 + 1e-6;
        let printed: f64 = fixed(wrong, digits, style.rounding).parse().expect("a number");
        if printed + margin >= low && printed - margin <= high || printed - margin <= 0.0 {
            continue;
        }
        planted += 1;
        let text = {
            let statement = format!(
                "{}{}{}",
                style.statistic(&mut r, &result),
                style.separator,
                style.p(wrong)
            );
            sentence(&mut r, &statement)
        };
        let document = examine(&text);
        let caught = document
            .findings
            .iter()
            .any(|f| f.relation.starts_with("p-from") && f.verdict >= Verdict::Conflicts);
        assert!(
            caught,
            "missed: {text}\np lies between {low} and {high}\n{:?}\n{:?}",
            document.statements, document.findings
        );
    }
    println!("{planted} planted p-values, all found");
}

#[test]
fn intervals_ratios_ratings_and_shares_of_real_data_are_never_a_conflict() {
    let mut r = Random(3);
    let mut agreed = 0;
    for case in 0..CASES {
        let style = Style::random(&mut r);
        let statement = r.pick(&TEXTS)(&mut r, &style);
        let text = sentence(&mut r, &statement);
        let document = examine(&text);
        for finding in &document.findings {
            assert!(
                finding.verdict < Verdict::Conflicts,
                "case {case}: {text}\n{}: {}",
                finding.relation,
                finding.says
            );
        }
        assert!(
            !document.statements.is_empty(),
            "case {case} was not read: {text}"
        );
        agreed += usize::from(document.findings.iter().any(|f| f.verdict == Verdict::Agrees));
    }
    println!(
        "{agreed} of {CASES} statements with intervals, ratios, ratings and shares agree; none is a conflict"
    );
    assert!(agreed > CASES * 7 / 10, "{agreed}");
}

#[test]
fn whole_results_of_real_data_are_never_a_conflict() {
    let mut r = Random(11);
    let mut judged = 0;
    let mut case = 0;
    while case < CASES {
        let Some(report) = r.pick(&reports::KINDS)(&mut r) else {
            continue;
        };
        case += 1;
        let (text, _) = report.text();
        let document = examine(&text);
        for finding in &document.findings {
            assert!(
                finding.verdict < Verdict::Conflicts,
                "case {case}: {text}\n{}: {}",
                finding.relation,
                finding.says
            );
        }
        judged += usize::from(
            document
                .findings
                .iter()
                .filter(|f| f.verdict == Verdict::Agrees)
                .count()
                > 0,
        );
    }
    println!("{judged} of {CASES} whole results were judged; none is a conflict");
    assert!(judged > CASES * 9 / 10, "{judged}");
}

/// A slip is planted only where the printed numbers then exclude each other by the formulas of this test.
#[test]
fn one_planted_slip_is_found_and_named() {
    const PLANTED: usize = 2_000;
    let mut r = Random(12);
    let (mut planted, mut found, mut named, mut mended) = (0, 0, 0, 0);
    let mut missed: Vec<String> = Vec::new();
    while planted < PLANTED {
        let Some(report) = r.pick(&reports::KINDS)(&mut r) else {
            continue;
        };
        let at = r.whole(0, report.numbers.len() - 1);
        let Some((changed, slip)) = reports::slipped(&mut r, &report.numbers[at].text) else {
            continue;
        };
        let truth = report.numbers[at].clone();
        let mut wrong = report.clone();
        wrong.numbers[at].text = changed;
        if !wrong.is_impossible(at) {
            continue;
        }
        planted += 1;
        let (text, places) = wrong.text();
        let document = examine(&text);
        let conflicts: Vec<_> = document
            .findings
            .iter()
            .filter(|f| f.verdict >= Verdict::Conflicts)
            .collect();
        if conflicts.is_empty() {
            missed.push(format!(
                "missed ({slip} in {}, was {}): {text}",
                truth.symbol, truth.text
            ));
            continue;
        }
        found += 1;
        let place = places[at];
        let with: Vec<_> = conflicts
            .iter()
            .filter(|f| f.marks.iter().any(|m| m.start <= place && place < m.end))
            .collect();
        if with.is_empty() {
            missed.push(format!(
                "not named ({slip} in {}, was {}): {text}",
                truth.symbol, truth.text
            ));
            continue;
        }
        named += 1;
        let mends = with.iter().any(|f| {
            f.repairs
                .iter()
                .take(3)
                .any(|repair| offers(&repair.to, &truth.text))
        });
        mended += usize::from(mends);
        if !mends {
            missed.push(format!(
                "not mended ({slip} in {}, was {}): {text}\n    {:?}",
                truth.symbol, truth.text, with[0].repairs
            ));
        }
    }
    for line in missed.iter().take(40) {
        println!("{line}");
    }
    let percent = |n: usize| 100.0 * n as f64 / planted as f64;
    println!(
        "{planted} slips planted: {:.2} % found, {:.2} % with the changed number in the set, {:.2} % with the true value among the first three repairs",
        percent(found),
        percent(named),
        percent(mended)
    );
    assert!(percent(found) >= 99.9 && percent(named) >= 99.0 && percent(mended) >= 90.0);
}

/// Whether a repair shows the true number, at its own precision: alone, among several, or inside a range.
fn offers(repair: &str, truth: &str) -> bool {
    let wanted: f64 = truth.parse().expect("a number");
    let shows = |text: &str| -> Option<(f64, f64)> {
        let bare = text.trim_start_matches(['<', '>', ' ']);
        let behind = bare.split_once('.').map_or(0, |(_, b)| b.len() as i32);
        Some((bare.parse().ok()?, 0.5 * 10f64.powi(-behind) + 1e-9))
    };
    if let Some((low, high)) = repair.split_once(" to ") {
        let ends = shows(low).zip(shows(high));
        return ends.is_some_and(|((a, half), (b, _))| a - half <= wanted && wanted <= b + half);
    }
    let mut all = repair.split(" or ").filter_map(shows);
    all.any(|(value, half)| (value - wanted).abs() <= half)
}
