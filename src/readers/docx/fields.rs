//! *Fields* are instructions whose result Word keeps in the text: citations, numbers of tables,
//! tables of contents, reference lists. The result is read, the instruction is not.

use crate::readers::office::symbols::{self, Font};

/// Instructions beyond this many bytes hold the data of a citation manager.
const START: usize = 300;
/// Fields within more fields than this are not counted.
const DEEPEST: usize = 100;

#[derive(Default)]
struct Field {
    instruction: String,
    /// The result has begun.
    result: bool,
    /// The result has text.
    filled: bool,
}

/// The fields that are open at a place in the text, outermost first.
#[derive(Default)]
pub struct Fields {
    open: Vec<Field>,
}

/// What the instruction of a field says about its result.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Holds {
    Text,
    ReferenceList,
    Contents,
}

/// What a field with this instruction holds.
pub fn holds(instruction: &str) -> Holds {
    let start: String = instruction.trim_start().chars().take(START).collect();
    let word = start.split_whitespace().next().unwrap_or("").to_uppercase();
    let list = match word.as_str() {
        "BIBLIOGRAPHY" => true,
        "TOC" => return Holds::Contents,
        "ADDIN" => {
            start.contains("ZOTERO_BIBL")
                || start.contains("EN.REFLIST")
                || start.contains("CSL_BIBLIOGRAPHY")
                || start.contains("Bibliography") && start.to_uppercase().contains("CITAVI")
        }
        _ => false,
    };
    if list { Holds::ReferenceList } else { Holds::Text }
}

impl Fields {
    /// A field character: `begin`, `separate` or `end`. Returns what to show for a field without
    /// result, which is a character if it is a symbol field.
    pub fn mark(&mut self, kind: &str) -> Option<char> {
        match kind {
            "begin" if self.open.len() < DEEPEST => self.open.push(Field::default()),
            "separate" => {
                if let Some(field) = self.open.last_mut() {
                    field.result = true;
                }
            }
            "end" => {
                let field = self.open.pop()?;
                if !field.filled {
                    return symbol_field(&field.instruction).filter(|_| self.shown());
                }
            }
            _ => {}
        }
        None
    }

    /// A piece of an instruction.
    pub fn instruct(&mut self, text: &str) {
        if let Some(field) = self.open.last_mut()
            && field.instruction.len() < START
        {
            field.instruction.push_str(text);
        }
    }

    /// Whether text at this place is shown.
    pub fn shown(&self) -> bool {
        self.open.iter().all(|f| f.result)
    }

    /// Text at this place has been read.
    pub fn fill(&mut self) {
        for field in &mut self.open {
            field.filled = true;
        }
    }

    /// The paragraph ends. No instruction goes on in the next one: a field whose result never
    /// begins is damaged, and must not swallow the rest of the document.
    pub fn end_paragraph(&mut self) {
        for field in &mut self.open {
            field.result = true;
        }
    }

    /// What the text at this place is part of.
    pub fn holds(&self) -> Holds {
        self.open
            .iter()
            .map(|f| holds(&f.instruction))
            .find(|h| *h != Holds::Text)
            .unwrap_or(Holds::Text)
    }
}

/// `SYMBOL 99 \f "Symbol"` shows a character although it has no result.
fn symbol_field(instruction: &str) -> Option<char> {
    let mut words = instruction.split_whitespace();
    if !words.next()?.eq_ignore_ascii_case("SYMBOL") {
        return None;
    }
    let code = words.next()?;
    let code = match code.strip_prefix("0x") {
        Some(hex) => u32::from_str_radix(hex, 16).ok()?,
        None => code.parse().ok()?,
    };
    let named = words.skip_while(|w| *w != "\\f").nth(1);
    let font = named.map_or(Font::Symbol, |n| symbols::font(n.trim_matches('"')));
    symbols::element(font, code)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn instructions_of_citation_managers() {
        assert_eq!(
            holds(r#" ADDIN ZOTERO_BIBL {"uncited":[]} CSL_BIBLIOGRAPHY "#),
            Holds::ReferenceList
        );
        assert_eq!(holds(" ADDIN EN.REFLIST "), Holds::ReferenceList);
        assert_eq!(
            holds("ADDIN Mendeley Bibliography CSL_BIBLIOGRAPHY"),
            Holds::ReferenceList
        );
        assert_eq!(
            holds(r#"ADDIN ZOTERO_ITEM CSL_CITATION {"x":"bibliography"}"#),
            Holds::Text
        );
        assert_eq!(holds(r#" TOC \o "1-3""#), Holds::Contents);
        assert_eq!(holds("SEQ Table"), Holds::Text);
    }

    #[test]
    fn nested_fields_and_symbols() {
        let mut f = Fields::default();
        f.mark("begin");
        f.instruct("IF ");
        f.mark("begin");
        f.mark("separate");
        assert!(!f.shown());
        f.mark("end");
        f.mark("separate");
        assert!(f.shown());
        f.mark("end");
        f.mark("begin");
        f.instruct(r#" SYMBOL 99 \f "Symbol" \s 12"#);
        assert_eq!(f.mark("end"), Some('χ'));
        assert_eq!(f.mark("end"), None);
    }
}
