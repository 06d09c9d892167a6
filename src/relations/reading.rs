//! *Reading a case*: which of the quantities of a statement belong to each other. The arguments of
//! a statistic follow directly after it (`t(28) = 2.20` is t, df); a p belongs to a test near it.

use super::{Case, Tie, Variant};

/// Symbols of test statistics.
const TESTS: [&str; 12] = ["t", "F", "chi2", "H", "Q", "G2", "z", "r", "rho", "tau", "U", "W"];

/// Symbols that are arguments when they follow a statistic.
const ARGUMENTS: [&str; 5] = ["df", "df1", "df2", "N", "n"];

/// Estimates that an interval can be about.
const ESTIMATES: [&str; 24] = [
    "M", "Mdn", "Mdiff", "b", "B", "beta", "d", "g", "r", "rho", "tau", "OR", "RR", "HR", "IRR", "eta2",
    "eta2p", "eta2G", "omega2", "R2", "V", "kappa", "alpha", "S",
];

/// A confidence or credible interval; all numbers are indexes into the quantities.
#[derive(Clone, Debug)]
pub(super) struct Bounds {
    pub level: Option<usize>,
    pub low: usize,
    pub high: usize,
    pub credible: bool,
    /// What it can be about, the nearest first.
    pub estimates: Vec<usize>,
}

/// A test statistic with its arguments; all numbers are indexes into the quantities.
#[derive(Clone, Debug)]
pub(super) struct Test {
    pub at: usize,
    pub symbol: &'static str,
    pub df: Option<usize>,
    pub df1: Option<usize>,
    pub df2: Option<usize>,
    /// Sample sizes, at most two, in the order of the text.
    pub sizes: Vec<usize>,
}

impl Test {
    /// Whether the statistic brings what its distribution needs; U and W never do.
    fn complete(&self) -> bool {
        match self.symbol {
            "z" => true,
            "F" => self.df1.is_some() && self.df2.is_some(),
            "r" | "rho" | "tau" => self.df.is_some() || !self.sizes.is_empty(),
            "U" => false,
            _ => self.df.is_some(),
        }
    }

    /// Statistics that often stand beside a test as its effect size, or are turned into a z.
    pub(super) fn secondary(&self) -> bool {
        matches!(self.symbol, "r" | "rho" | "tau" | "U" | "W") && !self.complete()
    }
}

impl Case<'_> {
    /// Whether the quantity stands in the statement itself.
    pub(super) fn own(&self, at: usize) -> bool {
        self.quantity(at).borrowed.is_none()
    }

    /// Whether the numbers of two quantities are printed alike.
    fn same_number(&self, a: usize, b: usize) -> bool {
        self.quantities[a].number == self.quantities[b].number
    }

    /// The only quantity with one of these symbols among `from`, or several that are all equal.
    pub(super) fn only(&self, from: &[usize], symbols: &[&str]) -> Option<usize> {
        let mut found = from
            .iter()
            .copied()
            .filter(|i| symbols.contains(&self.quantities[*i].symbol));
        let first = found.next()?;
        found.all(|i| self.same_number(first, i)).then_some(first)
    }

    /// Every test statistic with its arguments: those that follow it, else the only ones that are
    /// left over in the statement, else those borrowed from elsewhere.
    pub(super) fn tests(&self) -> Vec<Test> {
        let mut claimed = vec![false; self.quantities.len()];
        let mut tests = Vec::new();
        for at in 0..self.quantities.len() {
            let symbol = self.quantities[at].symbol;
            if !TESTS.contains(&symbol) || !self.own(at) {
                continue;
            }
            let mut test = Test {
                at,
                symbol,
                df: None,
                df1: None,
                df2: None,
                sizes: Vec::new(),
            };
            for (i, quantity) in self.quantities.iter().enumerate().skip(at + 1) {
                if !ARGUMENTS.contains(&quantity.symbol) || !self.own(i) {
                    break;
                }
                claimed[i] = true;
                match quantity.symbol {
                    "df" => test.df = test.df.or(Some(i)),
                    "df1" => test.df1 = test.df1.or(Some(i)),
                    "df2" => test.df2 = test.df2.or(Some(i)),
                    _ => test.sizes.push(i),
                }
            }
            tests.push(test);
        }
        let left = |own: bool| -> Vec<usize> {
            (0..claimed.len())
                .filter(|i| !claimed[*i] && self.own(*i) == own)
                .collect()
        };
        for from in [left(true), left(false)] {
            for test in &mut tests {
                match test.symbol {
                    "F" if test.df1.is_none() && test.df2.is_none() => {
                        test.df1 = self.only(&from, &["df1"]);
                        test.df2 = self.only(&from, &["df2"]);
                    }
                    "t" | "chi2" | "H" | "Q" | "G2" if test.df.is_none() => {
                        test.df = self.only(&from, &["df"]);
                    }
                    _ => {}
                }
            }
        }
        // A correlation beside another complete test is that test's effect size and has nothing of
        // its own; otherwise it takes the only n there is.
        let another = tests.iter().any(|t| !t.secondary());
        if !another {
            for from in [left(true), left(false)] {
                for test in &mut tests {
                    if matches!(test.symbol, "r" | "rho" | "tau") && !test.complete() {
                        test.df = (test.symbol != "tau")
                            .then(|| self.only(&from, &["df"]))
                            .flatten();
                        if test.df.is_none() {
                            test.sizes.extend(self.only(&from, &["n", "N"]));
                        }
                    }
                }
            }
        }
        tests
    }

    /// Each p with the test that it belongs to; see [`Case::tests_with`].
    pub(super) fn tests_with_p(&self) -> Vec<(Test, usize)> {
        self.tests_with(&["p"])
    }

    /// Each quantity that has one of these symbols with the test that it belongs to: tests and
    /// quantities in the same order where there are as many of one as of the other, else the nearest
    /// test before the first of them; where the statement begins with the quantity and ends with a
    /// test, the test after it. A correlation without df or n beside another test is no test here.
    pub(super) fn tests_with(&self, symbols: &[&str]) -> Vec<(Test, usize)> {
        let mut tests = self.tests();
        if tests.iter().any(|t| !t.secondary()) {
            tests.retain(|t| !t.secondary());
        }
        // Runs of tests and of p, in the order of the text.
        let mut runs: Vec<(bool, Vec<usize>)> = Vec::new();
        for i in (0..self.quantities.len()).filter(|i| self.own(*i)) {
            let is_test = tests.iter().position(|t| t.at == i);
            let item = match is_test {
                Some(test) => (true, test),
                None if symbols.contains(&self.quantities[i].symbol) => (false, i),
                None => continue,
            };
            match runs.last_mut() {
                Some((kind, run)) if *kind == item.0 => run.push(item.1),
                _ => runs.push((item.0, vec![item.1])),
            }
        }
        let leading = runs.first().is_some_and(|r| !r.0) && runs.last().is_some_and(|r| r.0);
        let mut pairs = Vec::new();
        for two in runs.windows(2) {
            let (before, after) = (&two[0], &two[1]);
            if before.0 == leading {
                continue;
            }
            let (found, others) = if leading {
                (&after.1, &before.1)
            } else {
                (&before.1, &after.1)
            };
            if found.len() == others.len() {
                pairs.extend(found.iter().zip(others).map(|(t, p)| (tests[*t].clone(), *p)));
            } else if others.len() == 1 || found.len() == 1 {
                let nearest = if leading { found[0] } else { found[found.len() - 1] };
                pairs.push((tests[nearest].clone(), others[0]));
            }
        }
        pairs
    }

    /// The sample sizes that go with a test: its own, else the only one in the statement, else the
    /// only borrowed one.
    pub(super) fn sizes(&self, test: &Test) -> Vec<usize> {
        if !test.sizes.is_empty() {
            return test.sizes.clone();
        }
        let all: Vec<usize> = (0..self.quantities.len()).collect();
        let (own, borrowed): (Vec<usize>, Vec<usize>) = all.into_iter().partition(|i| self.own(*i));
        let here = |i: &usize| matches!(self.quantities[*i].symbol, "n" | "N");
        if own.iter().any(here) {
            return self.only(&own, &["n", "N"]).into_iter().collect();
        }
        self.only(&borrowed, &["n", "N"]).into_iter().collect()
    }

    /// The confidence and credible intervals of the statement, each with the estimates that it can
    /// belong to, the nearest first: those between the interval before it and itself.
    pub(super) fn intervals(&self) -> Vec<Bounds> {
        let mut found = Vec::new();
        let mut from = 0;
        for low in 0..self.quantities.len().saturating_sub(1) {
            let credible = match (self.quantities[low].symbol, self.quantities[low + 1].symbol) {
                ("CI_low", "CI_high") => false,
                ("CrI_low", "CrI_high") => true,
                _ => continue,
            };
            let level = low
                .checked_sub(1)
                .filter(|i| matches!(self.quantities[*i].symbol, "CI_level" | "CrI_level"));
            let mut estimates: Vec<usize> = (from..low)
                .rev()
                .filter(|i| ESTIMATES.contains(&self.quantities[*i].symbol))
                .collect();
            // Two means before an interval, or a mean before a test: the interval is that of their
            // difference.
            let means = (from..low).filter(|i| self.quantities[*i].symbol == "M").count();
            estimates.retain(|i| {
                self.quantities[*i].symbol != "M" || (means == 1 && !self.between(*i, low, &TESTS))
            });
            found.push(Bounds {
                level,
                low,
                high: low + 1,
                credible,
                estimates,
            });
            from = low + 2;
        }
        found
    }

    /// Whether one of these symbols stands between two quantities.
    pub(super) fn between(&self, a: usize, b: usize, symbols: &[&str]) -> bool {
        let (a, b) = (a.min(b), a.max(b));
        self.quantities[a + 1..b]
            .iter()
            .any(|q| symbols.contains(&q.symbol))
    }

    /// A tie whose variants say which of its numbers were taken from elsewhere.
    pub(super) fn tie(&self, parts: Vec<usize>, mut variants: Vec<Variant>) -> Tie {
        for part in &parts {
            if let Some(source) = &self.quantity(*part).borrowed {
                for variant in &mut variants {
                    variant.assumes.push(source.clone());
                }
            }
        }
        Tie::new(parts, variants)
    }
}
