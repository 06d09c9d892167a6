//! *Decoding* turns the bytes of a file into text. Unicode is recognised by its byte order mark or
//! by being valid; a declaration inside the file comes next; what is left is taken for Windows-1252,
//! which contains Latin-1, as long as it looks like writing at all.

use super::Unreadable;
use encoding_rs::{Encoding, UTF_8, UTF_16BE, UTF_16LE, WINDOWS_1252};
use std::borrow::Cow;

/// Bytes looked at, at either end, to tell writing from other data.
const SAMPLE: usize = 8 * 1024;

/// Text of a file: UTF-8, UTF-16, UTF-32, the encoding that a web page or LaTeX source declares,
/// or Windows-1252.
///
/// # Errors
/// [`Unreadable`] if the bytes are not writing in any of these.
pub fn text(bytes: &[u8]) -> Result<Cow<'_, str>, Unreadable> {
    if let Some(text) = marked(bytes) {
        return sound(text);
    }
    if let Some(encoding) = unmarked_utf16(bytes) {
        return sound(encoding.decode_without_bom_handling(bytes).0);
    }
    match std::str::from_utf8(bytes) {
        Ok(text) => sound(Cow::Borrowed(text)),
        Err(error) => {
            if is_binary(bytes) {
                return Err(not_text());
            }
            if let Some(encoding) = declared_inside(bytes) {
                return sound(encoding.decode_without_bom_handling(bytes).0);
            }
            // UTF-8 with a few damaged places has far more good long characters than bad ones.
            let lossy = String::from_utf8_lossy(bytes);
            let bad = lossy.matches('\u{fffd}').count();
            let good = lossy.chars().filter(|c| !c.is_ascii()).count() - bad;
            if good > 4 * bad || (error.error_len().is_none() && bad == 1) {
                return sound(lossy);
            }
            drop(lossy);
            let high = bytes.iter().filter(|b| **b >= 0x80).count();
            let unused = bytes
                .iter()
                .filter(|b| matches!(b, 0x81 | 0x8d | 0x8f | 0x90 | 0x9d))
                .count();
            // Even French has fewer accented letters than one in five; other scripts in one-byte
            // encodings would come out as nonsense, and so do compressed data.
            if high * 5 > bytes.len() || unused * 20 > high {
                return Err(Unreadable::new(
                    "is in a character encoding that could not be told; save it as UTF-8",
                ));
            }
            sound(WINDOWS_1252.decode_without_bom_handling(bytes).0)
        }
    }
}

/// Text of an XML file, whose declaration may name the encoding.
///
/// # Errors
/// [`Unreadable`] as for [`text`], or if the declaration names an encoding that is not known.
pub fn xml(bytes: &[u8]) -> Result<Cow<'_, str>, Unreadable> {
    if marked(&bytes[..bytes.len().min(4)]).is_some() {
        return text(bytes);
    }
    let head = &bytes[..bytes.len().min(300)];
    let start = head.iter().position(|b| !b.is_ascii_whitespace()).unwrap_or(0);
    let label = head[start..]
        .strip_prefix(b"<?xml")
        .and_then(|rest| Some(&rest[..memchr::memmem::find(rest, b"?>")?]))
        .and_then(|rest| label_after(rest, b"encoding"));
    match label {
        None => text(bytes),
        Some(label) => match Encoding::for_label(label) {
            // A declaration that could be read byte by byte is not in UTF-16.
            Some(e) if e == UTF_8 || e == UTF_16LE || e == UTF_16BE => text(bytes),
            Some(encoding) => sound(encoding.decode_without_bom_handling(bytes).0),
            None => match std::str::from_utf8(bytes) {
                Ok(text) => sound(Cow::Borrowed(text)),
                Err(_) => Err(Unreadable::new(format!(
                    "declares the encoding \"{}\", which is not known; save it as UTF-8",
                    String::from_utf8_lossy(label)
                ))),
            },
        },
    }
}

/// The beginning of the file as text, damaged characters and all, for recognising its format.
pub(super) fn head(bytes: &[u8], length: usize) -> Result<Cow<'_, str>, Unreadable> {
    let cut = &bytes[..bytes.len().min(length & !3)];
    let text = match marked(cut) {
        Some(text) => text,
        None => match unmarked_utf16(cut) {
            Some(encoding) => encoding.decode_without_bom_handling(cut).0,
            None if is_binary(bytes) => return Err(not_text()),
            None => match std::str::from_utf8(cut) {
                Ok(text) => Cow::Borrowed(text),
                // Cut off inside a character.
                Err(error) if error.error_len().is_none() => {
                    String::from_utf8_lossy(&cut[..error.valid_up_to()])
                }
                Err(_) => String::from_utf8_lossy(cut),
            },
        },
    };
    sound(text)
}

fn not_text() -> Unreadable {
    Unreadable::new("is not text but data of an unknown kind; save the manuscript as DOCX, PDF or text")
}

/// Text by its byte order mark.
fn marked(bytes: &[u8]) -> Option<Cow<'_, str>> {
    if bytes.starts_with(&[0xff, 0xfe, 0, 0]) {
        return Some(Cow::Owned(utf32(&bytes[4..], u32::from_le_bytes)));
    }
    if bytes.starts_with(&[0, 0, 0xfe, 0xff]) {
        return Some(Cow::Owned(utf32(&bytes[4..], u32::from_be_bytes)));
    }
    let (encoding, length) = Encoding::for_bom(bytes)?;
    Some(encoding.decode_without_bom_handling(&bytes[length..]).0)
}

fn utf32(bytes: &[u8], value: fn([u8; 4]) -> u32) -> String {
    bytes
        .chunks_exact(4)
        .map(|c| char::from_u32(value([c[0], c[1], c[2], c[3]])).unwrap_or('\u{fffd}'))
        .collect()
}

/// UTF-16 without a mark: in European text every other byte is zero.
fn unmarked_utf16(bytes: &[u8]) -> Option<&'static Encoding> {
    let sample = &bytes[..bytes.len().min(4096)];
    if sample.len() < 4 || memchr::memchr(0, sample).is_none() {
        return None;
    }
    let zeros = |odd: usize| sample.iter().skip(odd).step_by(2).filter(|b| **b == 0).count();
    let (even, odd, half) = (zeros(0), zeros(1), sample.len() / 2);
    if odd * 10 > half * 8 && even * 20 < half {
        Some(UTF_16LE)
    } else if even * 10 > half * 8 && odd * 20 < half {
        Some(UTF_16BE)
    } else {
        None
    }
}

/// Control characters that no text has, more than a stray one here and there.
fn is_binary(bytes: &[u8]) -> bool {
    let ends = [
        &bytes[..bytes.len().min(SAMPLE)],
        &bytes[bytes.len().saturating_sub(SAMPLE)..],
    ];
    let control = |b: u8| matches!(b, 0..=7 | 0x0e..=0x19 | 0x1b..=0x1f | 0x7f);
    ends.iter().any(|sample| {
        // Without a way out of the loop it is fast, and most files have none at all.
        sample.iter().fold(false, |any, b| any | control(*b)) && {
            let controls = sample.iter().filter(|b| control(**b)).count();
            controls > 2 && controls * 200 > sample.len()
        }
    })
}

/// Decoded text, unless it is mostly something else than text.
fn sound(text: Cow<'_, str>) -> Result<Cow<'_, str>, Unreadable> {
    let sample = &text[..text.floor_char_boundary(4 * SAMPLE)];
    // Most files have nothing that begins like an odd character.
    let suspect = |b: u8| (b < 0x20 && !matches!(b, b'\t'..=b'\r')) || matches!(b, 0x7f | 0xc2 | 0xef);
    if !sample.bytes().fold(false, |any, b| any | suspect(b)) {
        return Ok(text);
    }
    let mut odd = 0usize;
    let mut all = 0usize;
    for c in sample.chars().take(SAMPLE) {
        all += 1;
        odd += usize::from(
            c == '\u{fffd}' || (c.is_control() && !matches!(c, '\t'..='\r' | '\u{1a}' | '\u{85}')),
        );
    }
    if odd > 2 && odd * 20 > all {
        Err(not_text())
    } else {
        Ok(text)
    }
}

/// The encoding a web page (`charset=…`) or LaTeX source (`\usepackage[latin2]{inputenc}`) names.
fn declared_inside(bytes: &[u8]) -> Option<&'static Encoding> {
    let head = &bytes[..bytes.len().min(8192)];
    if let Some(at) = memchr::memmem::find(head, b"{inputenc}") {
        let before = &head[..at];
        let open = memchr::memrchr(b'[', before)?;
        let name = std::str::from_utf8(before[open + 1..].strip_suffix(b"]")?).ok()?;
        let label = match name.trim() {
            "latin1" | "ansinew" | "cp1252" => "windows-1252",
            "latin2" => "iso-8859-2",
            "latin3" => "iso-8859-3",
            "latin4" => "iso-8859-4",
            "latin5" => "iso-8859-9",
            "latin9" => "iso-8859-15",
            "latin10" => "iso-8859-16",
            "cp1250" => "windows-1250",
            "cp1251" => "windows-1251",
            "cp1257" => "windows-1257",
            "koi8-r" => "koi8-r",
            "applemac" => "macintosh",
            _ => return None,
        };
        return Encoding::for_label(label.as_bytes());
    }
    if head.iter().find(|b| !b.is_ascii_whitespace()) != Some(&b'<') {
        return None;
    }
    Encoding::for_label(label_after(head, b"charset")?)
        .filter(|e| *e != UTF_8 && *e != UTF_16LE && *e != UTF_16BE)
}

/// The value of `name=value` or `name="value"`.
fn label_after<'a>(text: &'a [u8], name: &[u8]) -> Option<&'a [u8]> {
    let rest = text[memchr::memmem::find(text, name)? + name.len()..].trim_ascii_start();
    let rest = rest.strip_prefix(b"=")?.trim_ascii_start();
    let rest = match rest.first()? {
        b'"' | b'\'' => &rest[1..],
        _ => rest,
    };
    let end = rest
        .iter()
        .position(|b| !(b.is_ascii_alphanumeric() || matches!(b, b'-' | b'_' | b':' | b'.')))
        .unwrap_or(rest.len());
    Some(&rest[..end]).filter(|l| !l.is_empty())
}

#[cfg(test)]
mod tests {
    use super::*;

    const WANT: &str = "χ²(1) = 4.10, p = .043 – naïve";

    fn utf16(text: &str, bytes_of: fn(u16) -> [u8; 2]) -> Vec<u8> {
        text.encode_utf16().flat_map(bytes_of).collect()
    }

    #[test]
    fn unicode_in_every_shape() {
        assert_eq!(text(WANT.as_bytes()).as_deref(), Ok(WANT));
        let with_mark = [b"\xef\xbb\xbf", WANT.as_bytes()].concat();
        assert_eq!(text(&with_mark).as_deref(), Ok(WANT));
        assert_eq!(xml(&with_mark).as_deref(), Ok(WANT));
        let marked = format!("\u{feff}{WANT}");
        assert_eq!(text(&utf16(&marked, u16::to_le_bytes)).as_deref(), Ok(WANT));
        assert_eq!(text(&utf16(&marked, u16::to_be_bytes)).as_deref(), Ok(WANT));
        assert_eq!(text(&utf16(WANT, u16::to_le_bytes)).as_deref(), Ok(WANT));
        assert_eq!(text(&utf16(WANT, u16::to_be_bytes)).as_deref(), Ok(WANT));
        let wide: Vec<u8> = marked.chars().flat_map(|c| (c as u32).to_le_bytes()).collect();
        assert_eq!(text(&wide).as_deref(), Ok(WANT));
    }

    #[test]
    fn one_byte_encodings() {
        let windows = b"The \x93dry\x94 plots \x96 na\xefve, 21 \xb0C, M = 3.4 \xb1 1.1";
        assert_eq!(
            text(windows).as_deref(),
            Ok("The “dry” plots – naïve, 21 °C, M = 3.4 ± 1.1")
        );
        let polish = b"\\usepackage[latin2]{inputenc}\nr\xf3\xbfnica, p = 0,04";
        assert_eq!(
            text(polish).as_deref(),
            Ok("\\usepackage[latin2]{inputenc}\nróżnica, p = 0,04")
        );
        let page = b"<html><meta charset=\"windows-1250\"><p>r\xf3\xbfnica</p>";
        assert_eq!(
            text(page).as_deref(),
            Ok("<html><meta charset=\"windows-1250\"><p>różnica</p>")
        );
        let declared = b"<?xml version='1.0' encoding='ISO-8859-1'?><a>\xb1</a>";
        assert_eq!(
            xml(declared).as_deref(),
            Ok("<?xml version='1.0' encoding='ISO-8859-1'?><a>±</a>")
        );
    }

    #[test]
    fn damaged_unicode_stays_unicode() {
        let mut bytes = "größer, χ² = 4, β = .2, – naïve".repeat(5).into_bytes();
        bytes.push(0xff);
        let read = text(&bytes).expect("it is text");
        assert!(read.starts_with("größer, χ² = 4") && read.ends_with('\u{fffd}'));
        let cut = "p = .03, χ".as_bytes();
        assert_eq!(text(&cut[..cut.len() - 1]).as_deref(), Ok("p = .03, \u{fffd}"));
    }

    #[test]
    fn other_data_is_refused() {
        let noise: Vec<u8> = (0..5000u32)
            .map(|i| (i.wrapping_mul(2_654_435_761) >> 13) as u8)
            .collect();
        let reason = "is not text but data of an unknown kind; save the manuscript as DOCX, PDF or text";
        assert_eq!(text(&noise), Err(Unreadable::new(reason)));
        assert_eq!(text(&[0; 100]), Err(Unreadable::new(reason)));
        let cyrillic = [0xcf, 0xf0, 0xe8, 0xe2, 0xe5, 0xf2].repeat(20);
        assert_eq!(
            text(&cyrillic),
            Err(Unreadable::new(
                "is in a character encoding that could not be told; save it as UTF-8"
            ))
        );
        assert_eq!(
            xml(b"<?xml version='1.0' encoding='klingon'?><a>\xb1</a>"),
            Err(Unreadable::new(
                "declares the encoding \"klingon\", which is not known; save it as UTF-8"
            ))
        );
    }

    #[test]
    fn the_head_of_a_long_file() {
        let long = "watering ".repeat(10_000);
        assert_eq!(head(long.as_bytes(), 16).as_deref(), Ok("watering waterin"));
        assert!(head(&[1, 2, 3, 4].repeat(50), 1000).is_err());
    }
}
