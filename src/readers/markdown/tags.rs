//! HTML *tags* within Markdown. `p <b and c> d` holds none: a tag has a known name, and every
//! attribute has a value.

/// A tag at the beginning of a text.
pub(super) struct Tag {
    /// In lower case.
    pub name: String,
    /// Length in bytes.
    pub end: usize,
    pub closing: bool,
}

#[rustfmt::skip]
const NAMES: &[&str] = &[
    "a", "abbr", "b", "big", "blockquote", "body", "br", "caption", "center", "cite", "code", "col", "colgroup", "dd",
    "del", "details", "div", "dl", "dt", "em", "figcaption", "figure", "font", "footer", "h1", "h2", "h3", "h4", "h5",
    "h6", "header", "hr", "i", "iframe", "img", "ins", "kbd", "li", "link", "main", "mark", "nav", "ol", "p", "pre", "q",
    "s", "samp", "script", "section", "small", "span", "strike", "strong", "style", "sub", "summary", "sup", "table",
    "tbody", "td", "tfoot", "th", "thead", "tr", "tt", "u", "ul", "var",
];

/// The tag at the beginning of `text`, if there is one.
pub(super) fn tag(text: &str) -> Option<Tag> {
    let inner = text.strip_prefix('<')?;
    let closing = inner.starts_with('/');
    let inner = inner.strip_prefix('/').unwrap_or(inner);
    let length = inner.bytes().take_while(u8::is_ascii_alphanumeric).count();
    let name = inner[..length].to_lowercase();
    if !NAMES.contains(&name.as_str()) {
        return None;
    }
    let mut rest = &inner[length..];
    loop {
        let bare = rest.trim_start();
        if let Some(after) = bare.strip_prefix("/>").or_else(|| bare.strip_prefix('>')) {
            return Some(Tag {
                name,
                end: text.len() - after.len(),
                closing,
            });
        }
        if bare.len() == rest.len() {
            return None;
        }
        let key = bare
            .bytes()
            .take_while(|b| b.is_ascii_alphanumeric() || b"-_:".contains(b))
            .count();
        let value = bare[key..].trim_start().strip_prefix('=')?.trim_start();
        if key == 0 {
            return None;
        }
        // Attributes are short; a quotation mark without its partner ends the search.
        let limit = value.floor_char_boundary(2000.min(value.len()));
        rest = match value.chars().next()? {
            quote @ ('"' | '\'') => {
                let end = value[1..limit.max(1)].find(quote)?;
                &value[end + 2..]
            }
            _ => {
                let end = value[..limit].find(|c: char| c.is_whitespace() || c == '>')?;
                if end == 0 {
                    return None;
                }
                &value[end..]
            }
        };
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn length(text: &str) -> Option<usize> {
        tag(text).map(|t| t.end)
    }

    #[test]
    fn tags_and_what_is_none() {
        assert_eq!(length("<sup>2"), Some(5));
        assert_eq!(length("</Sup> x"), Some(6));
        assert_eq!(length("<span class=\"a > b\" id=x>t"), Some(25));
        assert_eq!(length("<br />"), Some(6));
        for none in [
            "<.05",
            "< b>",
            "<b and c>",
            "<i",
            "<x>",
            "<5>",
            "<span class=\"",
            "<a href=>",
            "<",
        ] {
            assert_eq!(length(none), None, "{none}");
        }
    }
}
