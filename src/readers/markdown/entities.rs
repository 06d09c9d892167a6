//! Character *entities* (`&lt;`, `&minus;`, `&#967;`) in Markdown.

use crate::readers::tex_symbols::symbol;

/// The text of the entity at the beginning of `text`, and its length.
pub(super) fn entity(text: &str) -> Option<(String, usize)> {
    let inner = text.strip_prefix('&')?;
    let end = inner.bytes().take(32).position(|b| b == b';')?;
    let name = &inner[..end];
    if let Some(number) = name.strip_prefix('#') {
        let code = match number.strip_prefix(['x', 'X']) {
            Some(hex) => u32::from_str_radix(hex, 16).ok()?,
            None => number.parse().ok()?,
        };
        return Some((char::from_u32(code)?.to_string(), end + 2));
    }
    let read = match name {
        "lt" => "<",
        "gt" => ">",
        "amp" => "&",
        "quot" | "ldquo" | "rdquo" | "bdquo" => "\"",
        "apos" | "lsquo" | "rsquo" | "prime" => "'",
        "nbsp" | "thinsp" | "ensp" | "emsp" | "hairsp" | "numsp" => " ",
        "shy" | "zwj" | "zwnj" => "",
        "minus" => "-",
        "plusmn" => "±",
        "middot" => "·",
        "le" => "≤",
        "ge" => "≥",
        "asymp" => "≈",
        "hellip" => "…",
        "ndash" => "–",
        "mdash" => "—",
        "sup1" => "¹",
        "sup2" => "²",
        "sup3" => "³",
        "frac12" => "½",
        "deg" => "°",
        "szlig" => "ß",
        "auml" => "ä",
        "ouml" => "ö",
        "uuml" => "ü",
        "eacute" => "é",
        "egrave" => "è",
        "agrave" => "à",
        "ccedil" => "ç",
        "iuml" => "ï",
        "infin" => "∞",
        "copy" => "©",
        // Greek letters and many signs have the names that TeX gives them.
        other => symbol(other)?,
    };
    Some((read.to_string(), end + 2))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn by_name_and_number() {
        assert_eq!(entity("&lt; .05"), Some(("<".into(), 4)));
        assert_eq!(entity("&chi;"), Some(("χ".into(), 5)));
        assert_eq!(entity("&#8722;&#x3B2;"), Some(("−".into(), 7)));
        assert_eq!(entity("&#x3B2;"), Some(("β".into(), 7)));
        assert_eq!(entity("& more;"), None);
        assert_eq!(entity("&#xFFFFFFFF;"), None);
    }
}
