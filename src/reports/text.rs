//! The report for reading: what conflicts, the most serious first, each with the sentence it stands
//! in, what follows from the rest of the numbers and what would make them agree.

use super::excerpt::{self, columns, paragraph};
use super::words::{count, follows};
use super::{Entry, Report, Show, Tally, harmless};
use crate::judge::{Counts, Document, Finding, Verdict};
use crate::statements::{in_print, list};
use std::ops::Range;

/// Room to the left of everything that belongs to a finding.
const INDENT: usize = 4;
/// Columns of the labels (`printed:` …) with the space behind them.
const LABEL: usize = 17;
/// Repairs beyond these are only counted.
const MOST_REPAIRS: usize = 6;

const CAUTIONS: &str = "Every finding is a question, not an accusation. Look at the original first: the \
    document may have been misread here, a number may have been rounded twice, the test may be an unusual \
    one, or the data may not be the whole numbers they seem to be. A conflict is most often a typing slip. \
    If a question remains, follow the procedure of your journal or institution. Nothing here diagnoses \
    misconduct.";

/// A repair that begins with one of these changes the comparator.
const COMPARATORS: [char; 6] = ['=', '<', '≤', '>', '≥', '≈'];

const OPEN_HINT: &str = "With --show open you also see what could not be decided, and why.";

/// Results as text, for a terminal or a file.
pub struct Text {
    pub show: Show,
    /// Columns of a line.
    pub width: usize,
    /// Bold type, by the usual escape sequence of terminals.
    pub bold: bool,
    /// The text was typed by hand: it has no name, and a place in it would say nothing.
    pub typed: bool,
    /// More than one input is shown: what can be said once for all is said at the end.
    pub several: bool,
}

impl Report for Text {
    fn entry(&self, entry: &Entry) -> String {
        match &entry.outcome {
            Ok(document) => self.document(&entry.name, document),
            // Said on standard error already, and counted at the end.
            Err(_) => String::new(),
        }
    }

    fn between(&self) -> &'static str {
        "\n"
    }

    fn closing(&self, tally: &Tally) -> String {
        if tally.read == 0 {
            return String::new();
        }
        let mut page = Page::default();
        page.line("");
        if self.several {
            page.lines(paragraph(&self.all_together(tally), self.width));
            if tally.with_open > 0 && !self.show.includes(Verdict::Open) {
                page.lines(paragraph(OPEN_HINT, self.width));
            }
            if tally.without_statements > 0 {
                page.line("tieout check --format text-only FILE shows a text as it was read.");
            }
            page.line("");
        }
        page.lines(paragraph(CAUTIONS, self.width));
        page.text
    }
}

/// A text under construction.
#[derive(Default)]
struct Page {
    text: String,
}

impl Page {
    fn line(&mut self, line: &str) {
        self.text.push_str(line);
        self.text.push('\n');
    }

    fn lines(&mut self, lines: impl IntoIterator<Item = String>) {
        for line in lines {
            self.line(&line);
        }
    }

    /// Lines behind a lead that stands on the first of them only.
    fn hanging(&mut self, lead: &str, lines: Vec<String>) {
        let room = columns(lead);
        for (i, line) in lines.iter().enumerate() {
            let line = match i {
                0 => format!("{lead}{line}"),
                _ => format!("{}{line}", " ".repeat(room)),
            };
            self.line(line.trim_end());
        }
    }
}

impl Text {
    fn document(&self, name: &str, document: &Document) -> String {
        let mut page = Page::default();
        let counts = document.counts();
        if !self.typed {
            page.line(&self.header(name, document, &counts));
            page.line("");
        }
        for remark in &document.manuscript.remarks {
            page.hanging("note: ", paragraph(remark, self.width.saturating_sub(6)));
        }
        if !document.manuscript.remarks.is_empty() {
            page.line("");
        }
        let mut findings: Vec<&Finding> = self.show.pick(&document.findings).collect();
        findings.sort_by_key(|f| (std::cmp::Reverse(f.verdict), f.place.start));
        for finding in findings {
            self.finding(&mut page, document, finding);
            page.line("");
        }
        for sentence in self.summary(document, &counts) {
            page.lines(paragraph(&sentence, self.width));
        }
        if !self.several {
            self.hints(&mut page, name, &counts);
        }
        page.text
    }

    /// The name and, at the right, what matters most.
    fn header(&self, name: &str, document: &Document, counts: &Counts) -> String {
        let name = match name {
            "-" => "standard input".to_string(),
            name => harmless(name),
        };
        let verdicts = match (counts.reverses, counts.conflicts) {
            (0, 0) if counts.statements == 0 => "no statements".to_string(),
            (0, 0) if document.findings.is_empty() => "nothing checked".to_string(),
            (0, 0) => "no conflicts".to_string(),
            (0, conflicts) => verb(conflicts, Verdict::Conflicts),
            (reverses, 0) => verb(reverses, Verdict::Reverses),
            (reverses, conflicts) => format!(
                "{}, {}",
                verb(reverses, Verdict::Reverses),
                verb(conflicts, Verdict::Conflicts)
            ),
        };
        let used = columns(&name) + columns(&verdicts) + 8;
        let rule = "─".repeat(self.width.saturating_sub(used).max(2));
        format!("── {} {rule} {verdicts} ──", self.emphasis(&name))
    }

    fn emphasis(&self, text: &str) -> String {
        if self.bold {
            format!("\u{1b}[1m{text}\u{1b}[0m")
        } else {
            text.to_string()
        }
    }

    fn finding(&self, page: &mut Page, document: &Document, finding: &Finding) {
        self.heading(page, finding);
        self.quotes(page, document, finding);
        let printed: Vec<String> = finding
            .reported
            .iter()
            .map(|(name, printed)| format!("{} {printed}", in_print(name)))
            .collect();
        let follows: Vec<String> = finding
            .expected
            .iter()
            .map(|(name, range)| follows(finding, name, *range, quantity(document, finding, name)))
            .collect();
        self.row(page, "printed:", &printed.join(", "));
        self.row(page, "follows:", &follows.join(", "));
        self.row(page, "assumes:", &finding.assumes.join("; "));
        for (i, repair) in finding.repairs.iter().take(MOST_REPAIRS).enumerate() {
            let slip = repair.slip.map(|s| format!(" ({s})")).unwrap_or_default();
            let is = if repair.to.starts_with(COMPARATORS) {
                ""
            } else {
                "= "
            };
            let label = if i == 0 { "would agree if:" } else { "" };
            self.row(
                page,
                label,
                &format!("{} {is}{}{slip}", in_print(repair.symbol), repair.to),
            );
        }
        if finding.repairs.len() > MOST_REPAIRS {
            let more = finding.repairs.len() - MOST_REPAIRS;
            self.row(
                page,
                "",
                &format!("… and {more} more; --format json lists them all"),
            );
        }
        let says = paragraph(&finding.says, self.width - INDENT);
        page.hanging(&" ".repeat(INDENT), says);
    }

    /// Verdict, relation and place, the last in lines of its own where it is long.
    fn heading(&self, page: &mut Page, finding: &Finding) {
        let place = if self.typed {
            String::new()
        } else {
            finding.place.to_string()
        };
        let word = finding.verdict.word();
        let mut relations = finding.relation.to_string();
        for other in &finding.with {
            relations.push_str(&format!(", {other}"));
        }
        let lead = format!("{word:<9}  {relations}  ");
        let mut lines = paragraph(&place, self.width.saturating_sub(columns(&lead)).max(20));
        if lines.is_empty() {
            lines.push(String::new());
        }
        let before = page.text.len();
        page.hanging(&lead, lines);
        page.text
            .replace_range(before..before + word.len(), &self.emphasis(word));
    }

    fn row(&self, page: &mut Page, label: &str, text: &str) {
        let lead = format!("{:INDENT$}{label:<LABEL$}", "");
        page.hanging(&lead, paragraph(text, self.width - INDENT - LABEL));
    }

    /// The sentence with its numbers marked; then, one by one, the other places that the finding
    /// takes numbers from.
    fn quotes(&self, page: &mut Page, document: &Document, finding: &Finding) {
        let core = statement_range(document, finding);
        let mut shown = match finding.verdict {
            Verdict::Agrees => core.clone(),
            _ => finding.sentence.start.min(core.start)..finding.sentence.end.max(core.end),
        };
        shown = with_row(document, shown);
        self.excerpt(page, document, shown.clone(), core, &finding.marks);
        let mut elsewhere = finding.marks.clone();
        elsewhere.retain(|m| m.start < shown.start || m.end > shown.end);
        while let Some(mark) = elsewhere.first().cloned() {
            let Some(around) = surroundings(document, &mark) else {
                elsewhere.remove(0);
                continue;
            };
            let manuscript = &document.manuscript;
            let block = manuscript.blocks.iter().find(|b| b.range.contains(&mark.start));
            if let Some(block) = block
                && !self.typed
            {
                let place = manuscript.place(block, mark.clone()).to_string();
                page.hanging("  with ", paragraph(&place, self.width - INDENT - 3));
            }
            self.excerpt(page, document, around.clone(), mark.clone(), &finding.marks);
            elsewhere.retain(|m| m != &mark && (m.start < around.start || m.end > around.end));
        }
    }

    fn excerpt(
        &self,
        page: &mut Page,
        document: &Document,
        shown: Range<usize>,
        core: Range<usize>,
        marks: &[Range<usize>],
    ) {
        let text = &document.manuscript.text;
        let lines = excerpt::lines(text, shown, core, marks, self.width - INDENT);
        page.hanging(&" ".repeat(INDENT), lines);
    }

    /// What can be done next, in lines that can be copied.
    fn hints(&self, page: &mut Page, name: &str, counts: &Counts) {
        if counts.open > 0 && !self.show.includes(Verdict::Open) {
            page.lines(paragraph(OPEN_HINT, self.width));
        }
        match (counts.statements, name) {
            (1.., _) => {}
            (0, _) if self.typed => {
                page.line("Write it as a paper would, e.g. t(28) = 2.20, p = .036.");
            }
            (0, "-") => page.line("With --format text-only you see the text as it was read."),
            (0, name) => {
                page.line("This shows the text as it was read:");
                page.line(&format!(
                    "    tieout check --format text-only {}",
                    shell_word(&harmless(name))
                ));
            }
        }
    }

    /// The counts in a sentence, and what was checked if nothing conflicts.
    fn summary(&self, document: &Document, counts: &Counts) -> Vec<String> {
        if counts.statements == 0 {
            return vec!["No statements were found: nothing here looks like a reported result.".into()];
        }
        let statements = count(counts.statements, "statement", "statements");
        let numbers = count(counts.quantities, "number", "numbers");
        let checks = document.findings.len();
        if checks == 0 {
            return vec![format!(
                "{statements} with {numbers} read, but no relation ties these numbers together, so \
                 nothing was checked."
            )];
        }
        let verdicts: Vec<String> = [
            (counts.reverses, Verdict::Reverses),
            (counts.conflicts, Verdict::Conflicts),
            (counts.open, Verdict::Open),
            (counts.agrees, Verdict::Agrees),
        ]
        .into_iter()
        .filter(|(n, _)| *n > 0)
        .map(|(n, verdict)| verb(n, verdict))
        .collect();
        let checks = count(checks, "check", "checks");
        let mut sentence = format!(
            "{statements} with {numbers} read, {checks} made: {}",
            list(&verdicts)
        );
        let clean = counts.reverses + counts.conflicts == 0;
        sentence += if clean { "; nothing conflicts." } else { "." };
        let mut sentences = vec![sentence];
        if clean {
            sentences.push(format!("Checked: {}.", relations(&document.findings).join(", ")));
        }
        sentences
    }

    fn all_together(&self, tally: &Tally) -> String {
        let mut parts = Vec::new();
        if tally.with_conflicts > 0 {
            let reversing = match tally.with_reversals {
                0 => String::new(),
                n => format!(" ({n} with reversals)"),
            };
            parts.push(format!(
                "{} conflicts{reversing}",
                count(tally.with_conflicts, "has", "have")
            ));
        }
        let none = tally.read - tally.with_conflicts;
        if none > 0 {
            let empty = match tally.without_statements {
                0 => String::new(),
                n => format!(" ({n} without any statement)"),
            };
            parts.push(format!("{} none{empty}", count(none, "has", "have")));
        }
        if tally.unreadable > 0 {
            parts.push(format!("{} could not be read", tally.unreadable));
        }
        format!(
            "Of {} manuscripts {}.",
            tally.read + tally.unreadable,
            list(&parts)
        )
    }
}

/// `1 conflicts`, `3 conflict`.
fn verb(n: usize, verdict: Verdict) -> String {
    let many = match verdict {
        Verdict::Agrees => "agree",
        Verdict::Conflicts => "conflict",
        Verdict::Reverses => "reverse",
        Verdict::Open => "open",
    };
    count(n, verdict.word(), many)
}

/// The relations that were tried and how often, in the order of their first finding.
fn relations(findings: &[Finding]) -> Vec<String> {
    let mut tried: Vec<(&str, usize)> = Vec::new();
    for finding in findings {
        match tried.iter_mut().find(|(name, _)| *name == finding.relation) {
            Some((_, times)) => *times += 1,
            None => tried.push((finding.relation, 1)),
        }
    }
    tried
        .iter()
        .map(|(name, times)| format!("{name} {times}×"))
        .collect()
}

/// The printed quantity that a finding is about.
fn quantity<'a>(
    document: &'a Document,
    finding: &Finding,
    name: &str,
) -> Option<&'a crate::statements::Quantity> {
    let printed = &finding.reported.iter().find(|(symbol, _)| *symbol == name)?.1;
    document
        .statements
        .iter()
        .filter(|s| finding.statements.contains(&s.id))
        .flat_map(|s| &s.quantities)
        .filter(|q| q.symbol == name && printed.ends_with(&q.printed))
        .max_by_key(|q| finding.marks.contains(&q.span))
}

/// Where the statement stands that the finding is about, as bytes of the text.
fn statement_range(document: &Document, finding: &Finding) -> Range<usize> {
    let ids = &finding.statements;
    match document.statements.iter().find(|s| ids.first() == Some(&s.id)) {
        Some(statement) => statement.range.clone(),
        None => finding.sentence.clone(),
    }
}

/// What to show around a number that stands elsewhere: the sentence of its statement, else its block.
fn surroundings(document: &Document, mark: &Range<usize>) -> Option<Range<usize>> {
    let inside = |range: &Range<usize>| range.start <= mark.start && mark.end <= range.end;
    let sentence = document
        .statements
        .iter()
        .map(|s| &s.sentence)
        .find(|s| inside(s));
    let block = document
        .manuscript
        .blocks
        .iter()
        .map(|b| &b.range)
        .find(|r| inside(r));
    sentence.or(block).map(|range| with_row(document, range.clone()))
}

/// A range inside a table cell widened to all cells of its row, for a number in a table says
/// nothing without its neighbours.
fn with_row(document: &Document, range: Range<usize>) -> Range<usize> {
    let manuscript = &document.manuscript;
    let at = manuscript
        .blocks
        .iter()
        .filter(|b| b.range.contains(&range.start))
        .find_map(|b| b.cell);
    let Some(at) = at else { return range };
    let cells = &manuscript.tables[at.table].cells;
    let row = cells[at.cell].row;
    let blocks = cells
        .iter()
        .filter(|c| c.row == row)
        .map(|c| &manuscript.blocks[c.block].range);
    blocks.fold(range, |all, block| {
        all.start.min(block.start)..all.end.max(block.end)
    })
}

/// A name as it can be typed on a command line.
fn shell_word(name: &str) -> String {
    let plain = |c: char| c.is_alphanumeric() || "-_./+,:@%".contains(c);
    if name.chars().all(plain) {
        name.to_string()
    } else {
        format!("'{}'", name.replace('\'', r"'\''"))
    }
}

#[cfg(test)]
#[path = "text_tests.rs"]
mod tests;
