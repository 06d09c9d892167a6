//! p follows from a correlation and its degrees of freedom.
//!
//! Formula: t = r · √(df / (1 − r²)), df = N − 2, and p = 2 · P(T > |t|).
//!
//! The degrees of freedom are the number in brackets, r(46), or come from the sample size. For
//! Spearman's ρ the same formula is an approximation.
//!
//! Assumes: two-sided, unless the sentence says one-sided. For a partial correlation whose number
//! of controlled variables is not known, fewer degrees of freedom are tried too and leave the
//! result open. A ρ that misses by a little is left open, since an exact test, Edgeworth's
//! series or ties may be behind it.
//!
//! Caution: some authors write r(N) for r(N − 2).
//!
//! Source: Fisher (1915), Biometrika 10:507–521; Best & Roberts (1975), Applied Statistics 24:377–379
//! on how far ρ is from the formula.
//!
//! Example: r(46) = .29 gives p from .0418 to .0496, so p = .046 agrees and p = .46 conflicts.

use super::laws::{Loosened, Side, TailLaw};
use super::{Case, Reach, Tie, p_value};
use crate::distributions::r_two_sided;
use crate::numbers::Interval;

/// Most variables that a partial correlation of unknown depth is taken to control for.
const MOST_CONTROLS: f64 = 10.0;

/// See the module documentation.
pub fn ties(case: &Case) -> Vec<Tie> {
    let mut ties = Vec::new();
    for (test, p) in case.tests_with_p() {
        if !matches!(test.symbol, "r" | "rho") {
            continue;
        }
        let name = if test.symbol == "r" { "r" } else { "ρ" };
        let (argument, less) = match (test.df, test.sizes.first()) {
            (Some(df), _) => (df, 0.0),
            (None, Some(n)) => (*n, 2.0),
            (None, None) => {
                let missing = format!("the sample size or degrees of freedom of {name} are missing");
                ties.push(Tie::open(vec![p, test.at], missing));
                continue;
            }
        };
        if case.quantities[argument].interval.high <= less {
            let missing = format!("{name} has no degrees of freedom with so small a sample");
            ties.push(Tie::open(vec![p, test.at, argument], missing));
            continue;
        }
        let less = Interval::point(less);
        let mut variants = p_value::variants(case, &test, p, true, |side| Box::new(law(side, less)));
        if less.high > 0.0
            && let Some(mention) = case.mention("partial", Reach::Paragraph)
        {
            let controls = Interval {
                low: less.low,
                high: less.high + MOST_CONTROLS,
            };
            let reason = format!(
                "the degrees of freedom of a partial correlation depend on the number of variables held constant; the text says {}",
                p_value::quoted(mention)
            );
            let variant = p_value::make(Vec::new(), Box::new(law(Side::Both, controls)));
            variants.push(variant.left_open(reason));
        }
        // In a manuscript that speaks of Spearman, r may be his.
        if test.symbol == "rho" || case.mention("spearman", Reach::Document).is_some() {
            let small = case.quantities[argument].interval.low < 10.0;
            let loosened = Loosened {
                law: Box::new(law(Side::Both, less)),
                shrink: 0.4,
                grow: 2.5,
                more: if small { 0.05 } else { 0.002 },
            };
            let reason = "for a rank correlation the formula is an approximation, and p misses it by no more than exact tests and ties can explain";
            variants.push(p_value::make(Vec::new(), Box::new(loosened)).left_open(reason));
        }
        let mut tie = case.tie(vec![p, test.at, argument], variants);
        tie.remarks = p_value::remarks(case, p);
        ties.push(tie);
    }
    ties
}

/// Parts: p, r, and df or n, from which `less` is taken to get the degrees of freedom.
fn law(side: Side, less: Interval) -> TailLaw {
    TailLaw {
        tail: r_two_sided,
        rises_with_df: false,
        signed: true,
        largest: 1.0,
        less,
        side,
    }
}
