//! A picture of a page with the boxes of what was found on it, as SVG: for looking whether boxes
//! sit on their numbers. Statements are outlined, quantities are shaded and bear their symbol.

use crate::judge::Document;
use crate::manuscript::{Area, LineArea};
use quick_xml::escape::escape;
use std::fmt::Write;

/// The picture of a page, `size` points wide and high, over its `image` (PNG or JPEG); `None` when the
/// image is neither.
pub fn page_svg(document: &Document, page: u32, size: [f32; 2], image: &[u8]) -> Option<String> {
    let kind = match image {
        [0x89, b'P', b'N', b'G', ..] => "png",
        [0xff, 0xd8, 0xff, ..] => "jpeg",
        _ => return None,
    };
    let [width, height] = size;
    let mut svg = format!(
        "<svg xmlns=\"http://www.w3.org/2000/svg\" viewBox=\"0 0 {width} {height}\" \
         width=\"{width}pt\" height=\"{height}pt\">\n\
         <image width=\"{width}\" height=\"{height}\" preserveAspectRatio=\"none\" \
         href=\"data:image/{kind};base64,{}\"/>\n",
        base64(image)
    );
    let manuscript = &document.manuscript;
    let here = |areas: Vec<LineArea>| areas.into_iter().filter(move |a| a.page == page);
    let mut statements = String::new();
    let mut quantities = String::new();
    for statement in &document.statements {
        for area in here(manuscript.areas(statement.range.clone())) {
            rect(&mut statements, area.area, "");
        }
        for quantity in &statement.quantities {
            for (i, area) in here(manuscript.areas(quantity.span.clone())).enumerate() {
                let area = area.area;
                let title = escape(format!(
                    "{} {} {}",
                    quantity.symbol,
                    quantity.comparator.sign(),
                    quantity.printed
                ));
                rect(&mut quantities, area, &format!("<title>{title}</title>"));
                if i == 0 {
                    let symbol = escape(quantity.symbol);
                    let (x, y) = (area[0], area[1] - 0.8);
                    // A string takes whatever is written.
                    let _ = writeln!(
                        quantities,
                        "<text x=\"{x:.2}\" y=\"{y:.2}\" stroke=\"none\" fill-opacity=\"1\">{symbol}</text>"
                    );
                }
            }
        }
    }
    let _ = write!(
        svg,
        "<g fill=\"none\" stroke=\"#1f5fbf\" stroke-width=\"0.4\">\n{statements}</g>\n\
         <g fill=\"#7a1fbf\" fill-opacity=\"0.15\" stroke=\"#7a1fbf\" stroke-width=\"0.2\" \
         font-size=\"3\" font-family=\"sans-serif\">\n{quantities}</g>\n</svg>\n"
    );
    Some(svg)
}

fn rect(out: &mut String, [left, top, right, bottom]: Area, inside: &str) {
    let (width, height) = (right - left, bottom - top);
    let _ = writeln!(
        out,
        "<rect x=\"{left:.2}\" y=\"{top:.2}\" width=\"{width:.2}\" height=\"{height:.2}\">{inside}</rect>"
    );
}

/// RFC 4648, section 4.
fn base64(bytes: &[u8]) -> String {
    const DIGITS: &[u8; 64] = b"ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789+/";
    let mut out = String::with_capacity(bytes.len().div_ceil(3) * 4);
    for three in bytes.chunks(3) {
        let byte = |i: usize| u32::from(three.get(i).copied().unwrap_or(0));
        let bits = byte(0) << 16 | byte(1) << 8 | byte(2);
        for i in 0..4 {
            out.push(match i <= three.len() {
                true => char::from(DIGITS[(bits >> (18 - 6 * i) & 63) as usize]),
                false => '=',
            });
        }
    }
    out
}

#[cfg(test)]
mod tests {
    use super::*;

    /// The test vectors of RFC 4648, section 10.
    #[test]
    fn base64_as_in_the_standard() {
        for (plain, coded) in [
            ("", ""),
            ("f", "Zg=="),
            ("fo", "Zm8="),
            ("foo", "Zm9v"),
            ("foobar", "Zm9vYmFy"),
        ] {
            assert_eq!(base64(plain.as_bytes()), coded);
        }
    }
}
