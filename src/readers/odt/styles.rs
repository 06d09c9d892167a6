//! The styles of an OpenDocument file: those a person chose, in `styles.xml`, and those the word
//! processor made for what was set by hand, in the document itself.

use crate::readers::office::flow::Role;
use crate::readers::office::line::Shift;
use crate::readers::office::setting::Setting;
use crate::readers::office::style::{Style, inherited};
use crate::readers::office::symbols;
use crate::readers::office::tree::Element;
use std::collections::HashMap;

/// Whether a style is one of paragraphs (or else of text), and its name.
type Key = (bool, String);

/// All styles of a file, by family and name.
#[derive(Default)]
pub struct Styles {
    styles: HashMap<Key, Style>,
}

impl Styles {
    /// Reads the roots of `styles.xml` and `content.xml`.
    pub fn read(common: Element<'_>, document: Element<'_>) -> Styles {
        let mut fonts = HashMap::new();
        let mut raw: HashMap<Key, (Style, Option<Key>)> = HashMap::new();
        for root in [common, document] {
            for face in root.child("font-face-decls").iter().flat_map(Element::children) {
                if let (Some(name), Some(family)) = (face.attribute("name"), face.attribute("font-family")) {
                    fonts.insert(name.into_owned(), family.trim_matches('\'').to_string());
                }
            }
        }
        let groups = [
            common.child("styles"),
            common.child("automatic-styles"),
            document.child("automatic-styles"),
        ];
        for s in groups.iter().flatten().flat_map(Element::children) {
            let paragraph = match s.attribute("family").as_deref() {
                Some("paragraph") => true,
                Some("text") => false,
                _ => continue,
            };
            let Some(name) = s.attribute("name") else { continue };
            let shown = s
                .attribute("display-name")
                .map_or_else(|| decoded(&name), |n| n.into_owned());
            let style = one(s, &shown, &fonts);
            let parent = s
                .attribute("parent-style-name")
                .map(|p| (paragraph, p.into_owned()));
            raw.insert((paragraph, name.into_owned()), (style, parent));
        }
        Styles {
            styles: inherited(&raw),
        }
    }

    /// The paragraph style of this name.
    pub fn paragraph(&self, name: &str) -> Style {
        self.get(true, name)
    }

    /// The text style of this name.
    pub fn text(&self, name: &str) -> Setting {
        self.get(false, name).setting
    }

    fn get(&self, paragraph: bool, name: &str) -> Style {
        self.styles
            .get(&(paragraph, name.to_string()))
            .copied()
            .unwrap_or_else(|| Style::named(&decoded(name)))
    }
}

/// `Heading_20_1` is `Heading 1`.
fn decoded(name: &str) -> String {
    let mut out = String::with_capacity(name.len());
    let mut rest = name;
    while let Some(at) = rest.find('_') {
        out.push_str(&rest[..at]);
        rest = &rest[at + 1..];
        let code = rest.split_once('_').and_then(|(hex, after)| {
            let c = u32::from_str_radix(hex, 16).ok().filter(|_| hex.len() <= 4)?;
            Some((char::from_u32(c)?, after))
        });
        match code {
            Some((c, after)) => {
                out.push(c);
                rest = after;
            }
            None => out.push('_'),
        }
    }
    out + rest
}

fn one(s: Element<'_>, name: &str, fonts: &HashMap<String, String>) -> Style {
    let mut style = Style::named(name);
    if let Some(level @ 1..=9) = s.number("default-outline-level") {
        style.role = style.role.or(Some(Role::Heading(level as u8)));
    }
    // A paragraph that begins with another kind of page begins on a new one.
    if s.attribute("master-page-name").is_some_and(|m| !m.is_empty()) {
        style.page_before = Some(true);
    }
    for p in s.children() {
        match p.name() {
            "paragraph-properties" => {
                style.centred = p.attribute("text-align").map(|a| a == "center");
                let breaks = |side| p.attribute(side).map(|b| b == "page");
                style.page_before = breaks("break-before").or(style.page_before);
                style.page_after = breaks("break-after");
            }
            "text-properties" => style.setting = setting(p, fonts),
            _ => {}
        }
    }
    style
}

fn setting(p: Element<'_>, fonts: &HashMap<String, String>) -> Setting {
    let is = |name: &str, value: &str| p.attribute(name).map(|v| v == value);
    let not = |name: &str, value: &str| p.attribute(name).map(|v| v != value);
    let heavy = |w: &str| w == "bold" || w.parse::<u32>().is_ok_and(|n| n >= 600);
    let font = p
        .attribute("font-name")
        .map(|name| fonts.get(&*name).cloned().unwrap_or_else(|| name.into_owned()))
        .or_else(|| {
            p.attribute("font-family")
                .map(|f| f.trim_matches('\'').to_string())
        });
    Setting {
        shift: p.attribute("text-position").map(|position| shift(&position)),
        bold: p.attribute("font-weight").map(|w| heavy(&w)),
        italic: not("font-style", "normal"),
        underlined: not("text-underline-style", "none"),
        capitals: is("text-transform", "uppercase").or(is("font-variant", "small-caps")),
        hidden: is("display", "none"),
        font: font.map(|f| symbols::font(&f)),
    }
}

/// `super 58%`, `sub 58%`, `33% 58%`, `-33% 58%`, `0% 100%`.
fn shift(position: &str) -> Shift {
    let first = position.split_whitespace().next().unwrap_or("");
    match first {
        "super" => Shift::Raised,
        "sub" => Shift::Lowered,
        _ => match first.trim_end_matches('%').parse::<f32>() {
            Ok(height) if height > 0.0 => Shift::Raised,
            Ok(height) if height < 0.0 => Shift::Lowered,
            _ => Shift::Level,
        },
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn coded_names_and_positions() {
        assert_eq!(decoded("Heading_20_1"), "Heading 1");
        assert_eq!(decoded("my_style"), "my_style");
        assert_eq!(decoded("a_"), "a_");
        assert_eq!(shift("super 58%"), Shift::Raised);
        assert_eq!(shift("-33% 58%"), Shift::Lowered);
        assert_eq!(shift("0% 100%"), Shift::Level);
    }
}
