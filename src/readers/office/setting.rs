//! A *setting* is how a style or a run sets its text; the names of styles say what a paragraph is.

use super::flow::Role;
use super::line::{Look, Shift};
use super::symbols::Font;
use crate::manuscript::Part;
use crate::readers::headings::known;

/// How text is set, where that is said; unsaid properties come from the style below.
#[derive(Clone, Copy, Debug, Default)]
pub struct Setting {
    pub shift: Option<Shift>,
    pub bold: Option<bool>,
    pub italic: Option<bool>,
    pub underlined: Option<bool>,
    pub capitals: Option<bool>,
    pub hidden: Option<bool>,
    pub font: Option<Font>,
}

impl Setting {
    /// This setting on top of another.
    pub fn over(self, below: Setting) -> Setting {
        Setting {
            shift: self.shift.or(below.shift),
            bold: self.bold.or(below.bold),
            italic: self.italic.or(below.italic),
            underlined: self.underlined.or(below.underlined),
            capitals: self.capitals.or(below.capitals),
            hidden: self.hidden.or(below.hidden),
            font: self.font.or(below.font),
        }
    }

    /// What the line needs to know.
    pub fn look(self) -> Look {
        let strong = [self.bold, self.italic, self.underlined, self.capitals].contains(&Some(true));
        Look {
            shift: self.shift.unwrap_or_default(),
            strong,
            hidden: self.hidden == Some(true),
        }
    }

    /// The font of the text.
    pub fn font(self) -> Font {
        self.font.unwrap_or_default()
    }
}

/// What the name of a style says. Word keeps the English names of its own styles in every language.
pub fn by_name(name: &str) -> (Option<Role>, Option<Part>) {
    let name = name.to_lowercase().replace(['_', '-'], " ");
    let name = name.trim();
    if let Some(at) = name.find("heading") {
        let level = name[at + 7..]
            .trim_start()
            .chars()
            .next()
            .and_then(|c| c.to_digit(10));
        if let Some(level @ 1..=9) = level {
            return (Some(Role::Heading(level as u8)), None);
        }
    }
    let role = match name {
        "title" => Some(Role::Title),
        "list paragraph" | "normal" | "body text" => None,
        "quote" | "intense quote" | "block text" | "quotations" => Some(Role::Quote),
        "toc heading" | "table of figures" | "table of authorities" | "contents heading" => {
            Some(Role::Contents)
        }
        _ if name.starts_with("toc ") || name.starts_with("contents ") => Some(Role::Contents),
        _ if name.contains("caption") || name == "table legend" || name == "figure legend" => {
            Some(Role::Caption)
        }
        "table note" | "table notes" | "tablenote" | "table footnote" | "tablefootnote" => {
            Some(Role::TableNote)
        }
        _ => None,
    };
    let part = match name {
        "subtitle" | "author" | "authors" | "affiliation" | "affiliations" | "date" | "keywords" => {
            Some(Part::Front)
        }
        "title" => Some(Part::Front),
        "endnote bibliography" | "bibliography 1" => Some(Part::References),
        // Many styles are named after the section that they are for.
        name => known(name)
            .map(|k| k.part)
            .filter(|p| matches!(p, Part::Abstract | Part::Back | Part::References)),
    };
    (role, part)
}
