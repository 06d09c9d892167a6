//! The styles of a Word file, as far as they say what a paragraph is and how its text is set.

use crate::readers::office::flow::Role;
use crate::readers::office::line::Shift;
use crate::readers::office::setting::{Setting, by_name};
use crate::readers::office::style::{Style, inherited};
use crate::readers::office::symbols;
use crate::readers::office::tree::Element;
use std::collections::HashMap;

/// The direct properties in a run-properties element.
pub fn setting(properties: Element<'_>) -> Setting {
    let mut s = Setting::default();
    for p in properties.children() {
        match p.name() {
            "vertAlign" => {
                s.shift = Some(match p.val().as_deref() {
                    Some("superscript") => Shift::Raised,
                    Some("subscript") => Shift::Lowered,
                    _ => Shift::Level,
                });
            }
            "b" => s.bold = Some(is_on(p)),
            "i" => s.italic = Some(is_on(p)),
            "u" => s.underlined = Some(p.val().as_deref() != Some("none")),
            "caps" | "smallCaps" => s.capitals = Some(is_on(p)),
            "vanish" => s.hidden = Some(is_on(p)),
            "rFonts" => {
                let named = p.attribute("ascii").or_else(|| p.attribute("hAnsi"));
                s.font = named.map(|name| symbols::font(&name)).or(s.font);
            }
            _ => {}
        }
    }
    s
}

/// A switch is on unless its value says otherwise.
pub fn is_on(switch: Element<'_>) -> bool {
    !matches!(switch.val().as_deref(), Some("0" | "false" | "off" | "none"))
}

/// The direct properties in a paragraph-properties element.
pub fn paragraph(properties: Element<'_>) -> Style {
    let mut style = Style::default();
    for p in properties.children() {
        match p.name() {
            // Level 9 is the standard's word for body text.
            "outlineLvl" => {
                style.role = match p.number("val") {
                    Some(level @ 0..=8) => Some(Role::Heading(level as u8 + 1)),
                    _ => None,
                };
            }
            "numPr" => {
                style.listed = p.child("numId").map(|id| id.number("val") != Some(0));
            }
            "jc" => style.centred = Some(p.val().as_deref() == Some("center")),
            "pageBreakBefore" => style.page_before = Some(is_on(p)),
            _ => {}
        }
    }
    style
}

/// All styles of a file by their id.
#[derive(Default)]
pub struct Styles {
    styles: HashMap<String, Style>,
    /// The style of paragraphs that name none.
    ordinary: Style,
}

impl Styles {
    /// Reads the root of the styles part.
    pub fn read(root: Element<'_>) -> Styles {
        let mut raw: HashMap<String, (Style, Option<String>)> = HashMap::new();
        let mut ordinary = None;
        for s in root.children().filter(|c| c.name() == "style") {
            let Some(id) = s.attribute("styleId") else {
                continue;
            };
            let mut style = s.child("pPr").map(paragraph).unwrap_or_default();
            if let Some(properties) = s.child("rPr") {
                style.setting = setting(properties);
            }
            let name = s
                .child("name")
                .and_then(|n| n.val())
                .unwrap_or_else(|| id.clone());
            let (role, part) = by_name(&name);
            // A name such as `heading 2` says more than the outline level, which it may contradict.
            style.role = role.or(style.role);
            style.part = part;
            if s.attribute("type").as_deref() == Some("paragraph")
                && matches!(s.attribute("default").as_deref(), Some("1" | "true" | "on"))
            {
                ordinary = Some(id.to_string());
            }
            let based = s.child("basedOn").and_then(|b| b.val()).map(|b| b.into_owned());
            raw.insert(id.into_owned(), (style, based));
        }
        let styles = inherited(&raw);
        let ordinary = ordinary
            .and_then(|id| styles.get(&id).copied())
            .unwrap_or_default();
        Styles { styles, ordinary }
    }

    /// The style with this id; a file without that style still says something by the id itself.
    pub fn get(&self, id: Option<&str>) -> Style {
        let Some(id) = id else { return self.ordinary };
        self.styles.get(id).copied().unwrap_or_else(|| Style::named(id))
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::readers::office::tree::Tree;

    #[test]
    fn styles_inherit_and_circles_end() {
        let tree = Tree::parse(
            r#"<w:styles><w:style w:type="paragraph" w:styleId="berschrift1"><w:name w:val="heading 1"/>
            <w:rPr><w:b/></w:rPr></w:style>
            <w:style w:type="paragraph" w:styleId="Mine"><w:name w:val="Section"/><w:basedOn w:val="berschrift1"/>
            <w:rPr><w:b w:val="0"/></w:rPr></w:style>
            <w:style w:type="character" w:styleId="A"><w:basedOn w:val="B"/><w:rPr><w:vertAlign w:val="superscript"/></w:rPr></w:style>
            <w:style w:type="character" w:styleId="B"><w:basedOn w:val="A"/></w:style>
            <w:style w:type="paragraph" w:styleId="Out"><w:pPr><w:outlineLvl w:val="2"/></w:pPr></w:style></w:styles>"#,
        )
        .unwrap();
        let styles = Styles::read(tree.root());
        let mine = styles.get(Some("Mine"));
        assert_eq!(mine.role, Some(Role::Heading(1)));
        assert!(!mine.setting.look().strong);
        assert!(styles.get(Some("berschrift1")).setting.look().strong);
        assert_eq!(styles.get(Some("B")).setting.look().shift, Shift::Raised);
        assert_eq!(styles.get(Some("Out")).role, Some(Role::Heading(3)));
        assert_eq!(styles.get(Some("Heading2")).role, Some(Role::Heading(2)));
        assert_eq!(styles.get(Some("TOC1")).role, None);
        assert_eq!(by_name("MDPI_2.1_heading1").0, Some(Role::Heading(1)));
    }
}
