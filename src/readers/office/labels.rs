//! A *label* is what a caption begins with: `Table 2.`, `Figure S1:`, `Tabelle 3`. Whether a
//! paragraph is a caption or running text that mentions a table is decided here.

use regex::Regex;
use std::sync::LazyLock;

/// The label at the beginning of a paragraph.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Label {
    /// As printed, without its final punctuation.
    pub label: String,
    /// It labels a table, not a figure.
    pub table: bool,
    /// Nothing or punctuation follows it, so the paragraph is a caption wherever it stands.
    pub sure: bool,
    /// Nothing follows it: the title stands in the next paragraph.
    pub alone: bool,
}

static LABEL: LazyLock<Regex> = LazyLock::new(|| {
    Regex::new(
        r"(?x)^(?:(?i:supplementary|supplemental|supporting|online|appendix|extended\ data|web|additional)\s+)?
        (?:(?P<table>(?i:table|tabelle|tabla|tabela|tableau|tabella|tabel)|(?i:tab\.))
          |(?i:figures?|abbildung|figura|rysunek|rycina|figuur|scheme|box)|(?i:fig|abb|ryc|rys)\.)
        \s*
        (?:(?:[A-Z]{1,3}[.\-–]?)?[0-9]{1,3}(?:[.\-–][0-9]{1,3})?[A-Za-z]?|[IVXLC]{1,6}|[A-Z])\b",
    )
    // The pattern is fixed and is compiled in the tests.
    .expect("a fixed pattern")
});

/// The label that a paragraph begins with, unless it is running text such as `Table 2 shows …`.
pub fn label(text: &str) -> Option<Label> {
    let text = text.trim();
    let found = LABEL.captures(text)?;
    let whole = found.get(0)?;
    let rest = &text[whole.end()..];
    let mut after = rest.chars();
    let (first, second) = (after.next(), after.find(|c| !c.is_whitespace()));
    let sure = match first {
        None => true,
        // `Table 2.1.` was taken whole; `Table 2, row 3` is running text.
        Some('.' | ':' | '|' | '—' | '–') => true,
        _ => false,
    };
    // `Table 2 Mean litres per plot` and `Table 2 (continued)`, but not `Table 2 shows`.
    let likely = first.is_some_and(char::is_whitespace)
        && second.is_some_and(|c| !c.is_lowercase() && !matches!(c, ',' | ';' | ')'));
    (sure || likely).then(|| Label {
        label: whole.as_str().to_string(),
        table: found.name("table").is_some(),
        sure,
        alone: rest.chars().all(|c| !c.is_alphanumeric()),
    })
}

/// Whether a paragraph below a table begins the way notes do.
pub fn is_note(text: &str) -> bool {
    #[rustfmt::skip]
    const WORDS: &[&str] = &[
        "note", "notes", "abbreviations", "abbreviation", "legend", "source", "anmerkung", "anmerkungen",
        "nota", "notas", "remarque", "uwaga", "values are", "data are", "values represent",
        "values in parentheses", "standard errors in parentheses", "standard deviations in parentheses",
    ];
    let start: String = text.trim().chars().take(40).collect::<String>().to_lowercase();
    if start.starts_with(['*', '†', '‡', '§', '¶', '⁎', '∗']) {
        return true;
    }
    // `p < .05` and `a p < .05` below a table are the legend of its stars and letters.
    let legend = start
        .strip_prefix(|c: char| c.is_ascii_lowercase())
        .unwrap_or(&start);
    let legend = legend.trim_start();
    if legend.starts_with("p <") || legend.starts_with("p<") {
        return true;
    }
    WORDS.iter().any(|w| {
        start.strip_prefix(w).is_some_and(|rest| {
            rest.starts_with(['.', ':', '—', '–']) || (w.contains(' ') && rest.starts_with(' '))
        })
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn captions_are_told_from_running_text() {
        let said = |t| label(t).map(|l| (l.label, l.table, l.sure, l.alone));
        let yes = |l: &str, table, sure, alone| Some((l.to_string(), table, sure, alone));
        assert_eq!(said("Table 2"), yes("Table 2", true, true, true));
        assert_eq!(said("TABLE 2."), yes("TABLE 2", true, true, true));
        assert_eq!(said("Table S1. Litres"), yes("Table S1", true, true, false));
        assert_eq!(said("Tabelle 3: Liter"), yes("Tabelle 3", true, true, false));
        assert_eq!(
            said("Table A.2 Mean litres"),
            yes("Table A.2", true, false, false)
        );
        assert_eq!(said("Figure 1. Plots"), yes("Figure 1", false, true, false));
        assert_eq!(said("Fig. 1b: Plots"), yes("Fig. 1b", false, true, false));
        assert_eq!(
            said("Supplementary Table 4"),
            yes("Supplementary Table 4", true, true, true)
        );
        assert_eq!(said("Table IV"), yes("Table IV", true, true, true));
        for text in [
            "Table 2 shows that",
            "Table 2, row 3",
            "Tables were laid",
            "Figure 1 and",
            "Table legs",
            "",
        ] {
            assert_eq!(said(text), None, "{text}");
        }
    }

    #[test]
    fn notes_below_a_table() {
        for text in [
            "Note. N = 40.",
            "Notes: values",
            "*p < .05. **p < .01.",
            "a p < .05",
            "† one plot",
            "Values are means.",
            "Anmerkung. N = 40",
        ] {
            assert!(is_note(text), "{text}");
        }
        for text in ["Noteworthy is plot 3.", "The p < .05 was", "As notes show"] {
            assert!(!is_note(text), "{text}");
        }
    }
}
