//! *Mutants*: documents with something changed at random, in the ways in which files are damaged by
//! accident or on purpose. The same seed gives the same mutants.

use flate2::Compression;
use flate2::read::ZlibDecoder;
use flate2::write::ZlibEncoder;
use std::io::{Cursor, Read, Write};

/// Numbers that look random and are the same every time (Marsaglia's xorshift).
pub struct Random(u64);

impl Random {
    pub fn new(seed: u64) -> Random {
        // Neighbouring seeds must not give neighbouring numbers, and zero gives none.
        let mut random = Random(seed.wrapping_mul(0x9e37_79b9_7f4a_7c15) | 1);
        for _ in 0..4 {
            random.below(2);
        }
        random
    }

    pub fn below(&mut self, limit: usize) -> usize {
        self.0 ^= self.0 << 13;
        self.0 ^= self.0 >> 7;
        self.0 ^= self.0 << 17;
        (self.0 % limit.max(1) as u64) as usize
    }

    fn byte(&mut self) -> u8 {
        self.below(256) as u8
    }

    /// A range within `length` bytes, at most `longest` of them.
    fn range(&mut self, length: usize, longest: usize) -> std::ops::Range<usize> {
        let from = self.below(length);
        from..(from + 1 + self.below(longest)).min(length)
    }
}

/// The document with one to three things changed.
pub fn mutant(document: &[u8], random: &mut Random) -> Vec<u8> {
    let mut bytes = document.to_vec();
    let package = document.starts_with(b"PK");
    for _ in 0..=random.below(3) {
        // Most of a document is packed, and a changed byte in there only breaks the packing. So often
        // the change is made inside and packed again.
        let inside = random.below(2) == 0;
        let changed = match (inside, package) {
            (true, true) => part_changed(&bytes, random),
            (true, false) => stream_changed(&bytes, random),
            _ => None,
        };
        bytes = changed.unwrap_or_else(|| {
            let mut bytes = bytes;
            change(&mut bytes, random);
            bytes
        });
    }
    bytes
}

/// Changes one thing.
fn change(bytes: &mut Vec<u8>, random: &mut Random) {
    if bytes.is_empty() {
        return;
    }
    let length = bytes.len();
    match random.below(10) {
        0 => {
            for _ in 0..=random.below(8) {
                bytes[random.below(length)] ^= 1 << random.below(8);
            }
        }
        1 => {
            for _ in 0..=random.below(8) {
                bytes[random.below(length)] = random.byte();
            }
        }
        2 => bytes.truncate(random.below(length)),
        3 => drop(bytes.drain(random.range(length, 400))),
        4 => {
            let (a, b) = (random.range(length, 400), random.below(length));
            let block: Vec<u8> = bytes.drain(a).collect();
            let at = b.min(bytes.len());
            bytes.splice(at..at, block);
        }
        5 => {
            let block = bytes[random.range(length, 400)].to_vec();
            let at = random.below(length);
            bytes.splice(at..at, block);
        }
        6 => number_changed(bytes, random),
        7 => name_changed(bytes, random),
        8 => {
            let from = random.range(length, 64);
            let noise: Vec<u8> = from.clone().map(|_| random.byte()).collect();
            bytes.splice(from, noise);
        }
        _ => {
            // A stream damaged at its beginning, where the codes are laid down.
            let starts: Vec<usize> = memchr::memmem::find_iter(bytes, b"stream").collect();
            let at = starts.get(random.below(starts.len())).map_or(0, |s| s + 6);
            for _ in 0..=random.below(4) {
                let at = (at + random.below(60)).min(length - 1);
                bytes[at] = random.byte();
            }
        }
    }
}

/// Another number, often a far one: sizes, offsets and references are numbers.
fn number_changed(bytes: &mut Vec<u8>, random: &mut Random) {
    let from = random.below(bytes.len());
    let Some(start) = bytes[from..]
        .iter()
        .position(u8::is_ascii_digit)
        .map(|i| from + i)
    else {
        return;
    };
    let digits = bytes[start..].iter().take_while(|b| b.is_ascii_digit()).count();
    let old: u64 = String::from_utf8_lossy(&bytes[start..start + digits])
        .parse()
        .unwrap_or(0);
    let new = match random.below(8) {
        0 => "0".to_string(),
        1 => "-1".to_string(),
        2 => "2147483648".to_string(),
        3 => "99999999999999999999".to_string(),
        4 => old.wrapping_add(1).to_string(),
        5 => old.saturating_sub(1).to_string(),
        _ => random.below(60).to_string(),
    };
    bytes.splice(start..start + digits, new.bytes());
}

/// A name of PDF or a tag of XML replaced by another of the same document.
fn name_changed(bytes: &mut Vec<u8>, random: &mut Random) {
    let is_name = |b: &u8| b.is_ascii_alphanumeric() || *b == b':';
    let mut name = || {
        let from = random.below(bytes.len());
        let start = from + 1 + bytes[from..].iter().position(|b| matches!(b, b'/' | b'<'))?;
        let length = bytes[start..].iter().take_while(|b| is_name(b)).count();
        Some(start..start + length)
    };
    if let (Some(a), Some(b)) = (name(), name()) {
        let other = bytes[b].to_vec();
        bytes.splice(a, other);
    }
}

/// A PDF with a change inside one of its packed streams.
fn stream_changed(bytes: &[u8], random: &mut Random) -> Option<Vec<u8>> {
    let starts: Vec<usize> = memchr::memmem::find_iter(bytes, b"stream\n")
        .chain(memchr::memmem::find_iter(bytes, b"stream\r\n"))
        .filter(|at| !bytes[..*at].ends_with(b"end"))
        .collect();
    let keyword = *starts.get(random.below(starts.len()))?;
    let start = keyword + bytes[keyword..].iter().position(|b| *b == b'\n')? + 1;
    let end = start + memchr::memmem::find(&bytes[start..], b"endstream")?;
    let mut content = Vec::new();
    ZlibDecoder::new(&bytes[start..end])
        .take(4 << 20)
        .read_to_end(&mut content)
        .ok()?;
    for _ in 0..=random.below(3) {
        change(&mut content, random);
    }
    let mut packer = ZlibEncoder::new(Vec::new(), Compression::best());
    packer.write_all(&content).ok()?;
    let mut packed = packer.finish().ok()?;
    // Of the same length, where that can be, so that everything behind stays in its place.
    packed.resize(packed.len().max(end - start), b'\n');
    Some([&bytes[..start], &packed, &bytes[end..]].concat())
}

/// A package with a change inside one of its parts.
fn part_changed(bytes: &[u8], random: &mut Random) -> Option<Vec<u8>> {
    let mut old = zip::ZipArchive::new(Cursor::new(bytes)).ok()?;
    let mut new = zip::ZipWriter::new(Cursor::new(Vec::new()));
    let mut parts = Vec::new();
    for i in 0..old.len() {
        let mut part = old.by_index(i).ok()?;
        let mut content = Vec::new();
        part.by_ref().take(4 << 20).read_to_end(&mut content).ok()?;
        parts.push((part.name().ok()?.to_string(), content));
    }
    // The larger part of a document is in its larger parts.
    let chosen = (0..3)
        .map(|_| random.below(parts.len()))
        .max_by_key(|i| parts[*i].1.len())?;
    for _ in 0..=random.below(3) {
        change(&mut parts[chosen].1, random);
    }
    for (name, content) in parts {
        new.start_file(name, zip::write::SimpleFileOptions::default())
            .ok()?;
        new.write_all(&content).ok()?;
    }
    Some(new.finish().ok()?.into_inner())
}
