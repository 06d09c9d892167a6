//! The text as read, and nothing else: what every place in the other reports counts in.

use super::{Entry, Report, harmless};

/// Shows the text of each manuscript.
pub struct TextOnly {
    /// Several inputs are named by a line of their own; a single one is not.
    pub several: bool,
    /// Takes out what could drive a terminal. Elsewhere the text is shown to the byte.
    pub to_terminal: bool,
}

impl Report for TextOnly {
    fn entry(&self, entry: &Entry) -> String {
        let Ok(document) = &entry.outcome else {
            return String::new();
        };
        let mut shown = String::new();
        if self.several {
            shown = format!("==> {} <==\n", harmless(&entry.name));
        }
        if self.to_terminal {
            shown += &harmless(&document.manuscript.text);
        } else {
            shown += &document.manuscript.text;
        }
        shown
    }
}

#[cfg(test)]
mod tests {
    use super::super::samples;
    use super::*;

    #[test]
    fn a_single_text_stands_alone_and_several_are_named() {
        let entry = samples::entry("diary.txt", "Plots were watered\u{9b}daily.", Vec::new());
        let show = |several, to_terminal| TextOnly { several, to_terminal }.entry(&entry);
        let text = entry
            .outcome
            .as_ref()
            .map(|d| d.manuscript.text.clone())
            .unwrap_or_default();
        assert_eq!(show(false, false), text);
        assert_eq!(show(true, false), format!("==> diary.txt <==\n{text}"));
        assert!(!show(false, true).contains('\u{9b}'));
        assert_eq!(show(false, true).chars().count(), text.chars().count());
    }
}
