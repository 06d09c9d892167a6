//! A *style* of a Word or OpenDocument file: what it says of a paragraph, and what it inherits.

use super::flow::Role;
use super::setting::{Setting, by_name};
use crate::manuscript::Part;
use std::collections::HashMap;
use std::hash::Hash;

/// What a style says; unsaid properties come from the style below.
#[derive(Clone, Copy, Debug, Default)]
pub struct Style {
    pub role: Option<Role>,
    pub part: Option<Part>,
    pub listed: Option<bool>,
    pub centred: Option<bool>,
    pub page_before: Option<bool>,
    pub page_after: Option<bool>,
    pub setting: Setting,
}

impl Style {
    /// What the name alone says.
    pub fn named(name: &str) -> Style {
        let (role, part) = by_name(name);
        Style {
            role,
            part,
            ..Style::default()
        }
    }

    /// This style on top of another.
    pub fn over(self, below: Style) -> Style {
        Style {
            role: self.role.or(below.role),
            part: self.part.or(below.part),
            listed: self.listed.or(below.listed),
            centred: self.centred.or(below.centred),
            page_before: self.page_before.or(below.page_before),
            page_after: self.page_after.or(below.page_after),
            setting: self.setting.over(below.setting),
        }
    }
}

/// Longer chains of styles based on styles are taken for a circle.
const LONGEST_CHAIN: usize = 30;

/// Every style with all that it inherits, from what each says itself and which it is based on.
pub fn inherited<K: Clone + Eq + Hash>(said: &HashMap<K, (Style, Option<K>)>) -> HashMap<K, Style> {
    let mut whole = HashMap::with_capacity(said.len());
    for (key, (style, based)) in said {
        let mut sum = *style;
        let mut next = based.as_ref();
        for _ in 0..LONGEST_CHAIN {
            let Some((below, based)) = next.and_then(|key| said.get(key)) else {
                break;
            };
            sum = sum.over(*below);
            next = based.as_ref();
        }
        whole.insert(key.clone(), sum);
    }
    whole
}
