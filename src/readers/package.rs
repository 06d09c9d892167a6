//! A *package* is a zip file whose entries, the *parts*, make up one document: Word and
//! OpenDocument files are packages. Nothing a package says about itself is believed: sizes are
//! counted while unpacking, and every limit below is there so that no file can use up the memory
//! or the day of the person who opens it.

use super::Unreadable;
use super::decode;
use std::collections::HashMap;
use std::io::{Cursor, Read};
use zip::ZipArchive;
use zip::result::ZipError;

/// The largest part that is unpacked, in bytes.
pub const LARGEST_PART: u64 = 256 << 20;
/// The most that is unpacked from one package, in bytes.
pub const LARGEST_TOTAL: u64 = 512 << 20;
/// The most parts a package may have.
pub const MOST_PARTS: usize = 20_000;
/// A part beyond [`RATIO_FROM`] bytes that unpacks to more than this many times its packed size
/// is refused. Ordinary document text packs 10 to 40 times; the format allows up to 1032 times.
pub const LARGEST_RATIO: u64 = 200;
/// Parts up to this size are not held to [`LARGEST_RATIO`], in bytes.
pub const RATIO_FROM: u64 = 1 << 20;

/// An opened package.
pub struct Package<'a> {
    zip: ZipArchive<Cursor<&'a [u8]>>,
    /// Entry number by lower-case name: both standards compare part names without case.
    names: HashMap<String, usize>,
    packed: u64,
    unpacked: u64,
    /// What the person calls this kind of file, e.g. `Word file`.
    noun: &'static str,
}

impl<'a> Package<'a> {
    /// Opens a package; `noun` is what the person calls such a file, e.g. `Word file`.
    ///
    /// # Errors
    /// Damaged, encrypted or suspicious packages, each with one line for the person.
    pub fn open(bytes: &'a [u8], noun: &'static str) -> Result<Package<'a>, Unreadable> {
        // Compound files: what Word makes of a document with a password, and its old .doc format.
        if bytes.starts_with(&[0xd0, 0xcf, 0x11, 0xe0]) {
            return Err(Unreadable::new(format!(
                "is not a plain {noun} (it is protected with a password or in the old .doc format); \
                 open it in a word processor and save it without a password as .docx"
            )));
        }
        if bytes.is_empty() {
            return Err(Unreadable::new("is empty; is it the right file?"));
        }
        // Counted before the zip reader builds its own list of them.
        if memchr::memmem::find_iter(bytes, b"PK\x01\x02")
            .nth(MOST_PARTS)
            .is_some()
        {
            return Err(Unreadable::new(format!(
                "is not an ordinary {noun} (it has more than {MOST_PARTS} parts); {SAVE_AGAIN}"
            )));
        }
        let zip = ZipArchive::new(Cursor::new(bytes)).map_err(|e| damaged(noun, &zip_reason(&e)))?;
        let mut names = HashMap::with_capacity(zip.len());
        for index in 0..zip.len() {
            if let Some(Ok(name)) = zip.name_for_index(index) {
                names.entry(part_name(&name)).or_insert(index);
            }
        }
        Ok(Package {
            zip,
            names,
            packed: bytes.len() as u64,
            unpacked: 0,
            noun,
        })
    }

    /// Whether the package has a part of this name.
    pub fn has(&self, name: &str) -> bool {
        self.names.contains_key(&part_name(name))
    }

    /// The text of an XML part, or nothing if there is no such part.
    ///
    /// # Errors
    /// A part that cannot be unpacked, is encrypted or larger than the limits above.
    pub fn part(&mut self, name: &str) -> Result<Option<String>, Unreadable> {
        let Some(&index) = self.names.get(&part_name(name)) else {
            return Ok(None);
        };
        let noun = self.noun;
        let mut entry = match self.zip.by_index(index) {
            Ok(entry) => entry,
            Err(ZipError::UnsupportedArchive(ZipError::PASSWORD_REQUIRED) | ZipError::InvalidPassword) => {
                return Err(locked());
            }
            Err(e) => return Err(damaged(noun, &zip_reason(&e))),
        };
        if entry.encrypted() {
            return Err(locked());
        }
        // The packed size is a claim as well, but it cannot exceed the file itself.
        let packed = entry.compressed_size().min(self.packed).max(1);
        let limit = LARGEST_PART.min(LARGEST_TOTAL - self.unpacked);
        let mut bytes = Vec::with_capacity(entry.size().min(RATIO_FROM) as usize);
        let mut chunk = vec![0; 128 << 10];
        loop {
            let count = entry.read(&mut chunk).map_err(|e| {
                damaged(
                    noun,
                    &format!("its part {} is cut off or changed: {e}", short(name)),
                )
            })?;
            if count == 0 {
                break;
            }
            bytes.extend_from_slice(&chunk[..count]);
            let size = bytes.len() as u64;
            if size > limit {
                return Err(Unreadable::new(format!(
                    "is too large (unpacked it has more than {} MB of text); split it",
                    limit >> 20
                )));
            }
            if size > RATIO_FROM && size / packed >= LARGEST_RATIO {
                return Err(Unreadable::new(format!(
                    "is not an ordinary {noun} (its part {} unpacks to more than {LARGEST_RATIO} times its \
                     size); {SAVE_AGAIN}",
                    short(name)
                )));
            }
        }
        self.unpacked += bytes.len() as u64;
        drop(entry);
        text(bytes).map(Some)
    }
}

/// What to do with a file that cannot be read as it is.
pub const SAVE_AGAIN: &str = "open it in a word processor and save it again";

/// The refusal of a damaged package: what is wrong, and what to do.
pub fn damaged(noun: &str, reason: &str) -> Unreadable {
    Unreadable::new(format!("is a damaged {noun} ({reason}); {SAVE_AGAIN}"))
}

/// The refusal of an encrypted package.
pub fn locked() -> Unreadable {
    Unreadable::new("is protected with a password; open it in a word processor and save it without one")
}

fn zip_reason(error: &ZipError) -> String {
    match error {
        ZipError::InvalidArchive(_) => "its end is missing or it is no zip file".to_string(),
        ZipError::CompressionMethodNotSupported(_) => "it is packed in an unusual way".to_string(),
        ZipError::Io(e) if e.kind() == std::io::ErrorKind::UnexpectedEof => "its end is missing".to_string(),
        other => other.to_string(),
    }
}

/// Names as they are compared: without case, leading slash, or the backslashes of careless tools.
fn part_name(name: &str) -> String {
    name.trim_start_matches(['/', '\\'])
        .replace('\\', "/")
        .to_lowercase()
}

/// A part name cut to a length that fits into one line, without control characters.
fn short(name: &str) -> String {
    name.chars().filter(|c| !c.is_control()).take(60).collect()
}

/// Parts are UTF-8 nearly always; whatever else XML allows is left to the decoder.
fn text(bytes: Vec<u8>) -> Result<String, Unreadable> {
    let wide = bytes.starts_with(&[0xff, 0xfe])
        || bytes.starts_with(&[0xfe, 0xff])
        || bytes.iter().take(4).any(|b| *b == 0);
    if wide {
        return Ok(decode::xml(&bytes)?.into_owned());
    }
    match String::from_utf8(bytes) {
        Ok(text) => Ok(text),
        Err(e) => Ok(decode::xml(e.as_bytes())?.into_owned()),
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::readers::trial::package;

    fn refusal(bytes: &[u8], part: &str) -> String {
        match Package::open(bytes, "Word file").and_then(|mut p| p.part(part)) {
            Ok(text) => panic!("read {:?}", text.map(|t| t.len())),
            Err(e) => e.0,
        }
    }

    #[test]
    fn parts_are_found_without_case_and_leading_slash() {
        let bytes = package(&[("word/Document.xml", "<a/>")]);
        let mut p = Package::open(&bytes, "Word file").unwrap();
        assert!(p.has("/word/document.xml"));
        assert_eq!(p.part("/Word/document.xml").unwrap().as_deref(), Some("<a/>"));
        assert_eq!(p.part("word/styles.xml").unwrap(), None);
    }

    #[test]
    fn each_kind_of_damage_has_its_line() {
        let text = "watering diary of plot 12 and plot 41, ".repeat(200);
        let whole = package(&[("word/document.xml", &text)]);
        assert_eq!(
            refusal(&whole[..whole.len() - 40], "word/document.xml"),
            "is a damaged Word file (its end is missing or it is no zip file); open it in a word processor and \
             save it again"
        );
        assert_eq!(
            refusal(b"not a zip at all", "x"),
            "is a damaged Word file (its end is missing or it is no zip file); open it in a word processor and \
             save it again"
        );
        assert_eq!(refusal(b"", "x"), "is empty; is it the right file?");
        assert_eq!(
            refusal(&[0xd0, 0xcf, 0x11, 0xe0, 0xa1], "x"),
            "is not a plain Word file (it is protected with a password or in the old .doc format); open it in \
             a word processor and save it without a password as .docx"
        );
        let mut changed = whole.clone();
        changed[60] ^= 0x55;
        let said = refusal(&changed, "word/document.xml");
        assert!(
            said.starts_with("is a damaged Word file (its part word/document.xml is cut off or changed: "),
            "{said}"
        );
        // Bit 0 of the general purpose flags, in the local and in the central header.
        let mut encrypted = whole.clone();
        encrypted[6] |= 1;
        let central = memchr::memmem::find(&whole, b"PK\x01\x02").unwrap();
        encrypted[central + 8] |= 1;
        assert_eq!(
            refusal(&encrypted, "word/document.xml"),
            "is protected with a password; open it in a word processor and save it without one"
        );
    }

    #[test]
    fn a_part_that_unpacks_to_a_thousand_times_its_size_is_refused() {
        let bytes = package(&[("word/document.xml", &" ".repeat(8 << 20))]);
        assert!(bytes.len() < 10_000);
        assert_eq!(
            refusal(&bytes, "word/document.xml"),
            "is not an ordinary Word file (its part word/document.xml unpacks to more than 200 times its \
             size); open it in a word processor and save it again"
        );
    }

    #[test]
    fn a_declared_size_is_not_believed() {
        let bytes = package(&[("a.xml", &" ".repeat(8 << 20))]);
        let mut lying = bytes.clone();
        let central = memchr::memmem::find(&bytes, b"PK\x01\x02").unwrap();
        // The unpacked size stands at 22 of the local and 24 of the central header: claim 16 bytes.
        for at in [22, central + 24] {
            lying[at..at + 4].copy_from_slice(&16u32.to_le_bytes());
        }
        // The zip reader itself stops at the size claimed.
        let said = refusal(&lying, "a.xml");
        assert!(
            said.starts_with("is a damaged Word file (its part a.xml is cut off or changed: "),
            "{said}"
        );
    }

    #[test]
    fn thousands_of_parts_are_refused_before_they_are_listed() {
        let bytes = b"PK\x01\x02".repeat(MOST_PARTS + 1);
        assert!(refusal(&bytes, "x").contains("more than 20000 parts"));
    }

    #[test]
    fn utf16_parts_are_not_taken_for_utf8() {
        // Which characters come out is the decoder's business; this part is handed to it.
        assert!(text(vec![0x3c, 0x00, 0x61, 0x00]).is_ok());
        assert_eq!(text("<p>χ²</p>".as_bytes().to_vec()).unwrap(), "<p>χ²</p>");
    }
}
