//! What the attributes of an HTML element say about it: that it is hidden, a formula, a caption,
//! a part of the manuscript.

use super::tokens::Start;
use crate::manuscript::Part;

#[derive(Default)]
pub(super) struct Marks {
    /// Not seen on the page.
    pub hidden: bool,
    /// Kept from screen readers, but seen.
    pub aria_hidden: bool,
    /// A form of a formula that is hidden, but meant for reading.
    pub math_in_silence: bool,
    /// Text in here is a formula.
    pub formula: bool,
    /// A formula as a script has drawn it.
    pub rendered_formula: bool,
    pub part: Option<Part>,
    /// Footnotes.
    pub notes: bool,
    pub caption: bool,
    pub table_note: bool,
    /// The title of the document.
    pub title: bool,
    /// A table that only arranges the page.
    pub layout: bool,
}

impl Marks {
    pub(super) fn of(start: &Start<'_>) -> Marks {
        let mut marks = Marks::default();
        if start.is_bare() {
            return marks;
        }
        marks.aria_hidden = start
            .raw("aria-hidden")
            .is_some_and(|v| v.trim().eq_ignore_ascii_case("true"));
        marks.hidden = start
            .raw("hidden")
            .is_some_and(|v| !v.eq_ignore_ascii_case("until-found"))
            || start.raw("style").is_some_and(hides);
        if let Some(role) = start.raw("role") {
            marks.role(role.trim());
        }
        for name in [start.raw("class"), start.raw("id")].into_iter().flatten() {
            for word in name.split_ascii_whitespace() {
                marks.word(&word.to_ascii_lowercase());
            }
        }
        marks
    }

    fn role(&mut self, role: &str) {
        match role {
            "doc-abstract" => self.part = Some(Part::Abstract),
            "doc-bibliography" => self.part = Some(Part::References),
            "doc-acknowledgments" => self.part = Some(Part::Back),
            "doc-endnotes" | "doc-footnote" | "doc-endnote" => self.notes = true,
            "doc-backlink" | "navigation" | "search" | "doc-toc" => self.hidden = true,
            "presentation" | "none" => self.layout = true,
            _ => {}
        }
    }

    fn word(&mut self, word: &str) {
        match word {
            "abstract" => self.part = Some(Part::Abstract),
            "references"
            | "ref-list"
            | "reference-list"
            | "bibliography"
            | "refs"
            | "csl-bib-body"
            | "reflist"
            | "bibliography-section" => self.part = Some(Part::References),
            "acknowledgements" | "acknowledgments" | "ack" => self.part = Some(Part::Back),
            "footnotes" | "endnotes" | "footnote" | "endnote" | "fn-group" => self.notes = true,
            "footnote-back" | "footnote-backref" | "visually-hidden" | "sr-only" | "mathjax_preview"
            | "toc" | "line-numbers" => self.hidden = true,
            "mjx_assistive_mathml" => self.math_in_silence = true,
            "math" | "tex" | "latex" => self.formula = true,
            "mathjax" | "mathjax_svg" | "mathjax_chtml" | "mathjax_mathml" | "mjx-chtml" | "katex" => {
                self.rendered_formula = true;
            }
            "caption" | "table-caption" | "figure-caption" | "tablecaption" | "figcaption" => {
                self.caption = true
            }
            "table-note" | "table-notes" | "tablenote" | "tablenotes" | "table-footnote" | "table-foot"
            | "table-wrap-foot" | "tfoot" => self.table_note = true,
            "title" | "article-title" => self.title = true,
            _ if word.starts_with("mwe-math-mathml") => {
                // Shown as a picture beside it, which cannot be read.
                self.math_in_silence = true;
            }
            _ => {}
        }
    }
}

/// Whether a style attribute takes the element off the page.
fn hides(style: &str) -> bool {
    style.split(';').any(|rule| {
        let Some((property, value)) = rule.split_once(':') else {
            return false;
        };
        let value = value.trim().trim_end_matches("!important").trim();
        match property.trim().to_ascii_lowercase().as_str() {
            "display" => value.eq_ignore_ascii_case("none"),
            "visibility" => value.eq_ignore_ascii_case("hidden"),
            _ => false,
        }
    })
}
