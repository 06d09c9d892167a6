//! What a block is (heading, caption, note, paragraph …) and which part of the manuscript it
//! belongs to.

use super::paragraphs::{Block, Body, is_marker};
use crate::manuscript::BlockKind;
use regex::Regex;
use std::sync::LazyLock;

/// A section that starts under a name everybody uses.
#[derive(Clone, Copy, PartialEq, Eq, Debug)]
pub enum Named {
    Abstract,
    Keywords,
    /// Introduction, Methods, Results, Discussion …
    Main,
    /// Acknowledgements, funding, interests, contributions, data.
    Back,
    References,
    /// Appendix, supplement.
    Appendix,
}

fn pattern(text: &str) -> Regex {
    // The patterns are constants, and a test compiles them all.
    Regex::new(text).expect("constant pattern")
}

static NUMBERING: LazyLock<Regex> = LazyLock::new(|| {
    pattern(r"^(?:(?:section|chapter)\s+)?(?:\d{1,2}(?:\.\d{1,2}){0,4}\.?|[IVX]{1,5}\.|[A-Z]\.)\s+")
});
static CAPTION: LazyLock<Regex> = LazyLock::new(|| {
    pattern(
        r"(?i)^(?:supplementa(?:ry|l)\s+|extended\s+data\s+|online\s+)?(figure|fig\.|fig|table|tab\.|abbildung|abb\.|tabelle|tableau|tabla|figura|tabela|scheme|box)\s*(?:[A-Z]{0,2}[.-]?\d{1,3}[a-z]?|[IVX]{1,5})\b",
    )
});
static NOTE: LazyLock<Regex> = LazyLock::new(|| pattern(r"^(?:Notes?\s*[.:]|NOTES?\s*[.:]|Anmerkung)"));

/// The well-known section that a heading's text names.
pub fn named(text: &str) -> Option<Named> {
    let text = text.trim();
    if text.len() > 80 {
        return None;
    }
    let text = NUMBERING.replace(text, "");
    let mut name = text
        .trim_matches(|c: char| matches!(c, '.' | ':' | '*' | '—' | '–' | '-') || c.is_whitespace())
        .to_lowercase();
    if name.split(' ').count() > 3 && name.split(' ').all(|w| w.chars().count() == 1) {
        // Letter-spaced, as in `A B S T R A C T`.
        name.retain(|c| c != ' ');
    }
    Some(match name.as_str() {
        "abstract" | "summary" | "zusammenfassung" | "résumé" | "resumen" | "resumo" | "abstrakt" => {
            Named::Abstract
        }
        "keywords" | "key words" | "index terms" | "schlüsselwörter" => Named::Keywords,
        "introduction"
        | "background"
        | "method"
        | "methods"
        | "materials and methods"
        | "material and methods"
        | "methods and materials"
        | "patients and methods"
        | "participants"
        | "procedure"
        | "measures"
        | "materials"
        | "design"
        | "data analysis"
        | "statistical analysis"
        | "statistical analyses"
        | "results"
        | "findings"
        | "discussion"
        | "general discussion"
        | "results and discussion"
        | "conclusion"
        | "conclusions"
        | "limitations"
        | "einleitung"
        | "methode"
        | "methoden"
        | "ergebnisse"
        | "diskussion"
        | "résultats"
        | "resultados"
        | "métodos"
        | "discusión"
        | "discussão"
        | "experiment"
        | "study 1"
        | "study 2"
        | "study 3"
        | "study 4"
        | "experiment 1"
        | "experiment 2"
        | "experiment 3" => Named::Main,
        "acknowledgements"
        | "acknowledgments"
        | "acknowledgement"
        | "acknowledgment"
        | "funding"
        | "author contributions"
        | "authors' contributions"
        | "authors’ contributions"
        | "credit author statement"
        | "conflict of interest"
        | "conflicts of interest"
        | "competing interests"
        | "declaration of interest"
        | "declaration of interests"
        | "declaration of competing interest"
        | "disclosure"
        | "disclosures"
        | "disclosure statement"
        | "conflict of interest statement"
        | "declaration of conflicting interests"
        | "data availability"
        | "data availability statement"
        | "availability of data and materials"
        | "ethics statement"
        | "ethical approval"
        | "funding information"
        | "financial support"
        | "author note"
        | "danksagung"
        | "abbreviations"
        | "orcid" => Named::Back,
        "references"
        | "reference"
        | "bibliography"
        | "literature cited"
        | "literature"
        | "works cited"
        | "reference list"
        | "references cited"
        | "cited literature"
        | "references and notes"
        | "literatur"
        | "literaturverzeichnis"
        | "références"
        | "bibliographie"
        | "referencias"
        | "referências"
        | "bibliografía"
        | "bibliografia"
        | "piśmiennictwo"
        | "computational details and references" => Named::References,
        n if n.starts_with("appendix")
            || n.starts_with("supplement")
            || n.starts_with("supporting information")
            || n == "appendices"
            || n.starts_with("online resource")
            || n == "tables"
            || n == "figures"
            || n == "figure captions"
            || n == "figure legends"
            || n.starts_with("anhang") =>
        {
            Named::Appendix
        }
        _ => return None,
    })
}

/// A run-in start such as `Abstract—We` or `Keywords: soil`: the name and where the rest begins.
pub fn run_in(text: &str) -> Option<Named> {
    let head: String = text.chars().take(24).collect();
    let lower = head.to_lowercase();
    let after = |name: &str| {
        lower.strip_prefix(name).is_some_and(|rest| {
            let rest = rest.trim_start();
            rest.starts_with(['.', ':', '—', '–', '-']) || head.starts_with(&name.to_uppercase())
        })
    };
    if after("abstract") || after("summary") {
        return Some(Named::Abstract);
    }
    (after("keywords") || after("key words") || after("index terms")).then_some(Named::Keywords)
}

/// Begins like the caption of a figure or table.
pub fn is_caption(block: &Block, body: Body) -> bool {
    if block.row || !block.apart && !block.first().bold {
        return false;
    }
    let text = block.text();
    let Some(found) = CAPTION.find(&text) else {
        return false;
    };
    let rest = &text[found.end()..];
    let label_alone = rest.trim().is_empty();
    let punctuated =
        rest.starts_with(['.', ':', '|', '—', '–']) || rest.trim_start().starts_with(['|', '—', '–']);
    let first_word_bold = block.first().words.first().is_some_and(|w| w.bold);
    // `Table 2 shows that …` at the top of a column is a sentence.
    let sentence = rest
        .trim_start()
        .chars()
        .next()
        .is_some_and(|c| c.is_lowercase() || c == ',' || c == ')');
    label_alone
        || punctuated
        || (first_word_bold && !sentence)
        || (!body.is_size(block.size()) && !sentence)
        || { !sentence && text.chars().count() < 160 && !text.trim_end().ends_with(',') }
}

/// Begins with raised digits or a raised mark, as footnotes and some lists of references do.
pub fn begins_raised(block: &Block) -> bool {
    let first = block.first().words.first();
    first.is_some_and(|w| matches!(w.parts.first(), Some((super::lines::Shift::Raised, _))))
}

/// The kind of a block that is no heading.
pub fn kind(block: &Block, body: Body, page_height: f32) -> BlockKind {
    if is_caption(block, body) {
        return BlockKind::Caption;
    }
    let text = block.text();
    if NOTE.is_match(&text) {
        return BlockKind::TableNote;
    }
    let first = block.first();
    let raised = begins_raised(block);
    let marked = first.words.first().is_some_and(|w| {
        raised
            || w.text().starts_with(['*', '†', '‡', '§', '¹', '²', '³'])
            || w.text().chars().next().is_some_and(|c| c.is_ascii_digit())
    });
    let smaller = block.size() < 0.93 * body.size && marked;
    if !block.row && (smaller || raised) && first.baseline > 0.5 * page_height {
        return BlockKind::Footnote;
    }
    if !block.row
        && first.words.len() > 1
        && is_marker(&first.words[0].text())
        && !first.words[0].text().starts_with('[')
    {
        return BlockKind::ListItem;
    }
    BlockKind::Paragraph
}

/// The depth of a heading, if the block is one.
pub fn heading(block: &Block, body: Body) -> Option<u8> {
    if block.row || block.aside || block.lines.len() > 4 {
        return None;
    }
    let text = block.text();
    let count = text.chars().count();
    if !(3..=160).contains(&count) || is_caption(block, body) {
        return None;
    }
    let letters = text.chars().filter(|c| c.is_alphabetic()).count();
    if letters * 2 < count {
        return None;
    }
    let known = named(&text);
    let depth = NUMBERING.find(&text).map(|m| {
        let number = m.as_str().trim().trim_end_matches('.');
        number.split('.').count().min(6) as u8
    });
    let size = block.size() / body.size;
    let bold = block.bold();
    let shouting = letters >= 4 && !text.chars().any(char::is_lowercase);
    let ends_open = text.ends_with([',', ';', '=', '-'])
        || (text.ends_with('.') && known.is_none() && depth.is_none() && !bold);
    let stands_out = size > 1.07 || (bold && size > 0.9);
    let sentence = text.ends_with('.') && count > 90;
    let running = !bold && size < 1.2 && known.is_none() && text.split(' ').count() > 12;
    if ends_open
        || sentence
        || running
        || !text
            .chars()
            .next()
            .is_some_and(|c| c.is_alphanumeric() && !c.is_lowercase())
    {
        return None;
    }
    let is_heading = known.is_some()
        || (block.apart && (stands_out || (shouting && block.lines.len() <= 2 && size > 0.9 && count < 80)));
    if !is_heading {
        return None;
    }
    Some(match (depth, known) {
        (Some(depth), _) => depth,
        (None, Some(Named::Main)) if size < 1.03 && !bold && !shouting => 2,
        (None, Some(_)) => 1,
        (None, None) if size > 1.25 || shouting && bold => 1,
        (None, None) => 2,
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn known_sections_under_all_their_names() {
        for (text, name) in [
            ("3. Results", Some(Named::Main)),
            ("REFERENCES", Some(Named::References)),
            ("A B S T R A C T", Some(Named::Abstract)),
            ("Literatur", Some(Named::References)),
            ("Appendix A: Diary form", Some(Named::Appendix)),
            ("IV. DISCUSSION", Some(Named::Main)),
            ("Gardeners and their diaries", None),
        ] {
            assert_eq!(named(text), name, "{text}");
        }
        assert_eq!(run_in("Abstract—We asked"), Some(Named::Abstract));
        assert_eq!(run_in("Abstract thinking helps"), None);
        assert!(CAPTION.is_match("Fig. 3. Water") && NOTE.is_match("Note. SD in brackets"));
    }
}
