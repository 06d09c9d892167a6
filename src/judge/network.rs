//! The *network*: the ties of one sentence and the quantities that they share, held against each
//! other at once. One slip makes several relations fail: those that one changed number would mend
//! become one finding. And numbers that agree two by two need not agree all together: that is found
//! by cutting the shared intervals into pieces until no piece is left, which proves it.

use super::finding::{Finding, Verdict};
use super::{repairs, wording};
use crate::numbers::{Comparator, Interval, Set, sets};
use crate::relations::Tie;
use crate::statements::{Quantity, in_print, list};

/// One tie with what came out of it alone.
pub struct Tried<'a> {
    pub tie: Tie,
    pub parts: Vec<&'a Quantity>,
    pub finding: Finding,
}

impl Tried<'_> {
    fn conflicts(&self) -> bool {
        self.finding.verdict >= Verdict::Conflicts
    }

    /// All values of one part that the variants allow; those that only leave a result open count
    /// where nothing better fits.
    fn solve(&self, part: usize, values: &[Interval]) -> Set {
        let firm = self.finding.verdict == Verdict::Agrees;
        let counted = self
            .tie
            .variants
            .iter()
            .filter(|v| !firm || v.only_open.is_none());
        sets::union(counted.flat_map(|v| v.law.solve(part, values)).collect())
    }

    fn holds(&self, values: &[Interval]) -> bool {
        self.tie.variants.iter().any(|v| v.law.holds(values))
    }
}

/// Pieces looked at before numbers are taken to go together.
const MOST_PIECES: usize = 400;

/// An interval is cut until its pieces are this part of it.
const SMALLEST_PIECE: f64 = 1.0 / 64.0;

/// So many shared numbers of one tie are tried both exact and as printed.
const MOST_MIXED: usize = 4;

/// Turns what was tried into findings: one for each set of conflicts that one slip explains.
pub fn settle(tried: Vec<Tried>) -> Vec<Finding> {
    let any = tried.iter().any(Tried::conflicts);
    if !any && tried.len() < 2 {
        return tried.into_iter().map(|t| t.finding).collect();
    }
    let network = Network::new(&tried);
    let mut gone = vec![false; tried.len()];
    let mut changed: Vec<Option<Finding>> = (0..tried.len()).map(|_| None).collect();
    let mut more: Vec<(usize, Finding)> = Vec::new();
    for part in network.components() {
        let (conflicting, fitting): (Vec<usize>, Vec<usize>) =
            part.iter().copied().partition(|t| tried[*t].conflicts());
        let mut bad: Vec<Vec<usize>> = conflicting.into_iter().map(|t| vec![t]).collect();
        if !network.go_together(&fitting) {
            bad.push(network.smallest(fitting));
        }
        while !bad.is_empty() {
            let (together, culprits) = network.culprits(&bad, &part);
            let sets: Vec<Vec<usize>> = bad
                .iter()
                .enumerate()
                .filter(|(i, _)| together.contains(i))
                .map(|(_, set)| set.clone())
                .collect();
            for i in together.iter().rev() {
                bad.remove(*i);
            }
            let (home, finding) = network.finding(&sets, &culprits);
            for set in &sets {
                if let [alone] = set[..] {
                    gone[alone] = true;
                }
            }
            match sets.iter().any(|s| s[..] == [home]) {
                true => {
                    gone[home] = false;
                    changed[home] = Some(finding);
                }
                false => more.push((home, finding)),
            }
        }
    }
    let mut findings = Vec::with_capacity(tried.len());
    for (i, tried) in tried.into_iter().enumerate() {
        findings.extend(changed[i].take().or((!gone[i]).then_some(tried.finding)));
        while let Some(at) = more.iter().position(|(home, _)| *home == i) {
            findings.push(more.remove(at).1);
        }
    }
    findings
}

struct Network<'a> {
    tried: &'a [Tried<'a>],
    /// Every quantity once, as it stands in its own statement where that is in view.
    quantities: Vec<&'a Quantity>,
    /// For each tie, the index of each of its parts in `quantities`.
    parts: Vec<Vec<usize>>,
    /// In how many ties each quantity takes part.
    uses: Vec<usize>,
}

impl<'a> Network<'a> {
    fn new(tried: &'a [Tried<'a>]) -> Network<'a> {
        let mut quantities: Vec<&Quantity> = Vec::new();
        let mut uses = Vec::new();
        let mut parts = Vec::with_capacity(tried.len());
        for t in tried {
            let mut indexes = Vec::with_capacity(t.parts.len());
            for q in &t.parts {
                let same = |k: &&Quantity| k.span == q.span && k.symbol == q.symbol;
                let at = quantities.iter().position(|k| same(&k)).unwrap_or_else(|| {
                    quantities.push(q);
                    uses.push(0);
                    quantities.len() - 1
                });
                if q.borrowed.is_none() {
                    quantities[at] = q;
                }
                if !indexes.contains(&at) {
                    uses[at] += 1;
                }
                indexes.push(at);
            }
            parts.push(indexes);
        }
        Network {
            tried,
            quantities,
            parts,
            uses,
        }
    }

    /// Ties that are connected by quantities they share; those without a law are left out.
    fn components(&self) -> Vec<Vec<usize>> {
        let mut group: Vec<usize> = (0..self.tried.len()).collect();
        let mut first_use: Vec<Option<usize>> = vec![None; self.quantities.len()];
        for tie in self.decided() {
            for q in &self.parts[tie] {
                match first_use[*q] {
                    None => first_use[*q] = Some(tie),
                    Some(other) => {
                        let (a, b) = (group[other], group[tie]);
                        group.iter_mut().filter(|g| **g == b).for_each(|g| *g = a);
                    }
                }
            }
        }
        let mut components: Vec<Vec<usize>> = Vec::new();
        for tie in self.decided() {
            match components.iter_mut().find(|c| group[c[0]] == group[tie]) {
                Some(component) => component.push(tie),
                None => components.push(vec![tie]),
            }
        }
        components
    }

    fn decided(&self) -> impl Iterator<Item = usize> {
        (0..self.tried.len()).filter(|t| !self.tried[*t].tie.variants.is_empty())
    }

    fn printed(&self) -> Vec<Interval> {
        self.quantities.iter().map(|q| q.interval).collect()
    }

    fn values(&self, tie: usize, all: &[Interval]) -> Vec<Interval> {
        self.parts[tie].iter().map(|q| all[*q]).collect()
    }

    /// Whether a number can be somewhere else than where it is printed, and is used more than once.
    fn wide(&self, q: usize) -> bool {
        let i = self.quantities[q].interval;
        self.uses[q] > 1 && i.low < i.high && i.low.is_finite() && i.high.is_finite()
    }

    /// Whether a tie is satisfied somewhere in a piece. People also go on computing with numbers that
    /// they have rounded already, so each shared number may be any in the piece or the printed one.
    fn satisfied(&self, tie: usize, piece: &[Interval]) -> bool {
        let exact = self.values(tie, piece);
        if self.tried[tie].holds(&exact) {
            return true;
        }
        let mixed: Vec<(usize, f64)> = self.parts[tie]
            .iter()
            .enumerate()
            .filter(|(_, q)| self.wide(**q) && self.quantities[**q].comparator == Comparator::Equal)
            .map(|(at, q)| (at, self.quantities[*q].number.value()))
            .collect();
        if mixed.len() > MOST_MIXED {
            return true;
        }
        (1..1u32 << mixed.len()).any(|choice| {
            let mut values = exact.clone();
            for (bit, (at, printed)) in mixed.iter().enumerate() {
                if choice >> bit & 1 == 1 {
                    values[*at] = Interval::point(*printed);
                }
            }
            self.tried[tie].holds(&values)
        })
    }

    /// Whether some values inside all intervals satisfy the ties at once, as far as can be told.
    fn go_together(&self, ties: &[usize]) -> bool {
        let printed = self.printed();
        // A tie that holds for the very numbers that are printed holds whatever the others need.
        let rounded: Vec<Interval> = (0..printed.len())
            .map(
                |q| match self.wide(q) && self.quantities[q].comparator == Comparator::Equal {
                    true => Interval::point(self.quantities[q].number.value()),
                    false => printed[q],
                },
            )
            .collect();
        let strict: Vec<usize> = ties
            .iter()
            .copied()
            .filter(|t| !self.tried[*t].holds(&self.values(*t, &rounded)))
            .collect();
        if strict.len() < 2 {
            return true;
        }
        let shared: Vec<usize> = (0..printed.len())
            .filter(|q| self.wide(*q) && strict.iter().filter(|t| self.parts[**t].contains(q)).count() > 1)
            .collect();
        let size = |i: Interval| i.high - i.low;
        let mut pieces = vec![printed.clone()];
        for _ in 0..MOST_PIECES {
            let Some(piece) = pieces.pop() else { return false };
            if !strict.iter().all(|t| self.satisfied(*t, &piece)) {
                continue;
            }
            let left = |q: &usize| size(piece[*q]) / size(printed[*q]);
            let widest = shared.iter().copied().max_by(|a, b| left(a).total_cmp(&left(b)));
            let Some(q) = widest.filter(|q| left(q) > SMALLEST_PIECE) else {
                return true;
            };
            let middle = 0.5 * (piece[q].low + piece[q].high);
            for half in [
                Interval::new(piece[q].low, middle),
                Interval::new(middle, piece[q].high),
            ] {
                let mut next = piece.clone();
                next[q] = half;
                pieces.push(next);
            }
        }
        !pieces.is_empty()
    }

    /// As few of the ties as already can't be satisfied at once.
    fn smallest(&self, mut ties: Vec<usize>) -> Vec<usize> {
        let mut at = 0;
        while at < ties.len() {
            let mut fewer = ties.clone();
            fewer.remove(at);
            if self.go_together(&fewer) {
                at += 1;
            } else {
                ties = fewer;
            }
        }
        ties
    }

    /// Of the conflicts, those that one changed number would mend, as many as possible; and every
    /// number that would, with the values it could have.
    fn culprits(&self, bad: &[Vec<usize>], part: &[usize]) -> (Vec<usize>, Vec<(usize, Set)>) {
        let mut found: Vec<(usize, Vec<usize>, Set)> = Vec::new();
        for q in 0..self.quantities.len() {
            if self.quantities[q].borrowed.is_some() {
                continue;
            }
            let touches = |tie: &usize| self.parts[*tie].contains(&q);
            let covered: Vec<usize> = (0..bad.len()).filter(|i| bad[*i].iter().any(touches)).collect();
            if covered.is_empty() {
                continue;
            }
            let others: Vec<usize> = part
                .iter()
                .copied()
                .filter(|t| {
                    !bad.iter()
                        .enumerate()
                        .any(|(i, set)| !covered.contains(&i) && set.contains(t))
                })
                .collect();
            let solution = self.solution(q, &others);
            if !solution.is_empty() {
                found.push((q, covered, solution));
            }
        }
        let Some(most) = found.iter().map(|f| f.1.len()).max() else {
            // Nothing mends any of them without spoiling what agrees: each by itself.
            let alone = &bad[0];
            let own = alone.iter().flat_map(|t| self.parts[*t].iter().copied());
            let mut culprits: Vec<(usize, Set)> = Vec::new();
            for q in own.filter(|q| self.quantities[*q].borrowed.is_none()) {
                let solution = self.solution(q, alone);
                if !solution.is_empty() && culprits.iter().all(|(known, _)| *known != q) {
                    culprits.push((q, solution));
                }
            }
            return (vec![0], culprits);
        };
        let together = found
            .iter()
            .find(|f| f.1.len() == most)
            .map_or(Vec::new(), |f| f.1.clone());
        let culprits = found
            .into_iter()
            .filter(|f| together.iter().all(|i| f.1.contains(i)))
            .map(|(q, _, solution)| (q, solution))
            .collect();
        (together, culprits)
    }

    /// The values with which one number would satisfy all these ties, the others being as printed.
    fn solution(&self, q: usize, ties: &[usize]) -> Set {
        let mut values = self.printed();
        // What the ties without it leave for the numbers that it is tied to.
        for tie in ties.iter().filter(|t| !self.parts[**t].contains(&q)) {
            if self.tried[*tie].conflicts() {
                return Set::new();
            }
            for (at, other) in self.parts[*tie].iter().enumerate() {
                if !self.wide(*other) {
                    continue;
                }
                let allowed = self.tried[*tie].solve(at, &self.values(*tie, &values));
                if let Some(narrow) = sets::hull(&sets::common(&allowed, &[values[*other]])) {
                    values[*other] = narrow;
                }
            }
        }
        let mut solution = vec![Interval::ALL];
        for tie in ties {
            let Some(at) = self.parts[*tie].iter().position(|p| *p == q) else {
                continue;
            };
            let here = self.values(*tie, &values);
            let allowed = match self.tried[*tie].conflicts() {
                true => self.tried[*tie].tie.variants[0].law.solve(at, &here),
                false => self.tried[*tie].solve(at, &here),
            };
            solution = sets::common(&solution, &allowed);
        }
        solution
    }

    /// The finding for conflicts that belong together, and the tie at whose place it is listed.
    fn finding(&self, bad: &[Vec<usize>], culprits: &[(usize, Set)]) -> (usize, Finding) {
        let ties: Vec<usize> = bad.iter().flatten().copied().collect();
        let single = bad.iter().filter(|s| s.len() == 1).map(|s| s[0]);
        // The most serious, the first of several; for numbers that only fail together, the last tie.
        let home = single
            .reduce(|a, b| if self.verdict(b) > self.verdict(a) { b } else { a })
            .unwrap_or(ties[ties.len() - 1]);
        let mut finding = self.tried[home].finding.clone();
        let alone = bad.iter().any(|s| s[..] == [home]);
        if !alone {
            self.tell_together(&mut finding, home, &ties);
        }
        for tie in ties.iter().filter(|t| **t != home) {
            let other = &self.tried[*tie].finding;
            if !finding.with.contains(&other.relation) && other.relation != finding.relation {
                finding.with.push(other.relation);
            }
            let (ids, marks, assumes) = (&other.statements, &other.marks, &other.assumes);
            finding.statements.extend(
                ids.iter()
                    .filter(|s| !finding.statements.contains(s))
                    .collect::<Vec<_>>(),
            );
            finding.marks.extend(
                marks
                    .iter()
                    .filter(|m| !finding.marks.contains(m))
                    .cloned()
                    .collect::<Vec<_>>(),
            );
            finding.assumes.extend(
                assumes
                    .iter()
                    .filter(|a| !finding.assumes.contains(a))
                    .cloned()
                    .collect::<Vec<_>>(),
            );
        }
        finding.marks.sort_by_key(|m| m.start);
        if alone && ties.len() > 1 {
            let others: Vec<String> = ties
                .iter()
                .filter(|t| **t != home)
                .map(|t| in_words(self.tried[*t].parts[0]))
                .collect();
            let verb = if others.len() == 1 { "does" } else { "do" };
            let also = format!(" For the same reason {} {verb} not follow.", list(&others));
            finding.says.push_str(&also);
        }
        let culprits = culprits.iter().map(|(q, set)| (self.quantities[*q], set));
        finding.repairs = repairs::of_culprits(culprits);
        (home, finding)
    }

    fn verdict(&self, tie: usize) -> Verdict {
        self.tried[tie].finding.verdict
    }

    /// Words a finding about ties that hold one by one but not together.
    fn tell_together(&self, finding: &mut Finding, home: usize, ties: &[usize]) {
        let printed = self.printed();
        finding.verdict = Verdict::Conflicts;
        let mut needs = Vec::new();
        for &tie in ties {
            let values = self.values(tie, &printed);
            let shared = self.parts[tie]
                .iter()
                .enumerate()
                .find(|(_, q)| self.wide(**q) && ties.iter().all(|t| self.parts[*t].contains(q)));
            if let Some((at, q)) = shared
                && let Some(range) =
                    sets::hull(&sets::common(&self.tried[tie].solve(at, &values), &[printed[*q]]))
            {
                let like = &self.quantities[*q].printed;
                needs.push(format!(
                    "{} needs {} between {} and {}",
                    in_words(self.tried[tie].parts[0]),
                    in_print(self.quantities[*q].symbol),
                    wording::short(range.low, like),
                    wording::short(range.high, like)
                ));
            }
        }
        let mut all: Vec<usize> = ties.iter().flat_map(|t| self.parts[*t].iter().copied()).collect();
        all.sort_by_key(|q| self.quantities[*q].span.start);
        all.dedup();
        let names: Vec<String> = all.iter().map(|q| in_words(self.quantities[*q])).collect();
        let why = match needs.is_empty() {
            true => "each goes with some of the others, but no values go with all of them".to_string(),
            false => list(&needs),
        };
        finding.says = format!("{} cannot all be right: {why}.", list(&names));
        finding.reported = vec![(
            self.tried[home].parts[0].symbol,
            wording::claim(self.tried[home].parts[0]),
        )];
        finding.expected = Vec::new();
    }
}

fn in_words(q: &Quantity) -> String {
    format!("{} {}", in_print(q.symbol), wording::claim(q))
}

#[cfg(test)]
mod tests {
    use crate::judge::{Document, Options, Verdict};
    use crate::manuscript::{BlockKind, Builder, Format};
    use crate::statements::Grammar;

    fn examine(text: &str) -> Document {
        let mut b = Builder::new(Format::Text);
        b.open(BlockKind::Paragraph);
        b.text(text);
        crate::examine(b.finish(), Grammar::built_in(), &Options::default())
    }

    fn conflicts(text: &str) -> Vec<(String, Vec<String>)> {
        let document = examine(text);
        let bad = document
            .findings
            .iter()
            .filter(|f| f.verdict >= Verdict::Conflicts);
        bad.map(|f| {
            let relations = std::iter::once(&f.relation).chain(&f.with).copied();
            let repairs = f.repairs.iter().map(|r| format!("{} {}", r.symbol, r.to));
            (relations.collect::<Vec<_>>().join(" "), repairs.collect())
        })
        .collect()
    }

    #[test]
    fn one_slip_that_fails_two_relations_is_one_finding_that_names_it() {
        // df2 was 58. SciPy: f.sf(4.67, 1, 58) = .03483; 4.67/(4.67 + 58) = .0745.
        let found = conflicts("They watered less, F(1, 85) = 4.67, p = .0348, ηp² = .0745.");
        assert_eq!(found.len(), 1, "{found:?}");
        assert_eq!(found[0].0, "p-from-f eta2-from-f");
        assert!(found[0].1[0].starts_with("df2 58"), "{found:?}");
    }

    #[test]
    fn a_number_that_agrees_with_the_rest_is_not_blamed() {
        // F, df and ηp² go together, so only p can be mended by one change.
        let found = conflicts("They watered less, F(1, 58) = 4.67, p = .135, ηp² = .0745.");
        assert_eq!(found.len(), 1, "{found:?}");
        assert!(found[0].1.iter().all(|r| r.starts_with("p ")), "{found:?}");
    }

    #[test]
    fn numbers_that_agree_two_by_two_but_not_together_are_found() {
        // p needs F near 4.745, ηp² needs F near 4.655; both print as 4.7, neither follows from 4.7 itself.
        // SciPy: f.sf(4.745, 1, 58) = .033471; 4.655/62.655 = .07430.
        let found = conflicts("They watered less, F(1, 58) = 4.7, p = .03347, ηp² = .0743.");
        assert_eq!(found.len(), 1, "{found:?}");
        assert_eq!(found[0].0, "eta2-from-f p-from-f");
        // With F = 4.745 throughout ηp² is .0756: nothing to find.
        assert!(conflicts("They watered less, F(1, 58) = 4.7, p = .03347, ηp² = .0756.").is_empty());
        // Nor if it was computed from the printed 4.7: .0750.
        assert!(conflicts("They watered less, F(1, 58) = 4.7, p = .03347, ηp² = .0750.").is_empty());
    }
}
