//! What the tests of several readers share: small packages, blocks in short, damage that is the
//! same every time.

use crate::manuscript::{BlockKind, Manuscript, Part};
use std::io::{Cursor, Write};
use zip::ZipWriter;
use zip::write::SimpleFileOptions;

/// A package with these parts.
pub fn package(parts: &[(&str, &str)]) -> Vec<u8> {
    let mut zip = ZipWriter::new(Cursor::new(Vec::new()));
    for (name, text) in parts {
        // Writing into memory cannot fail.
        zip.start_file(*name, SimpleFileOptions::default()).unwrap();
        zip.write_all(text.as_bytes()).unwrap();
    }
    zip.finish().unwrap().into_inner()
}

/// Kind, part and text of every block.
pub fn blocks(m: &Manuscript) -> Vec<(BlockKind, Part, &str)> {
    m.blocks
        .iter()
        .map(|b| (b.kind, b.part, m.block_text(b)))
        .collect()
}

/// The same, of a manuscript that is not needed any more.
pub fn into_blocks(m: Manuscript) -> Vec<(BlockKind, Part, String)> {
    blocks(&m)
        .into_iter()
        .map(|(kind, part, text)| (kind, part, text.to_string()))
        .collect()
}

/// `inside` within `depth` elements of a name, which may be several: `w:tr><w:tc`.
pub fn nested(name: &str, depth: usize, inside: &str) -> String {
    let close: String = name.rsplit("><").map(|n| format!("</{n}>")).collect();
    [&format!("<{name}>").repeat(depth), inside, &close.repeat(depth)].concat()
}

/// Numbers that look random and are the same every time (Marsaglia's xorshift).
pub struct Random(pub u64);

impl Random {
    pub fn below(&mut self, limit: usize) -> usize {
        self.0 ^= self.0 << 13;
        self.0 ^= self.0 >> 7;
        self.0 ^= self.0 << 17;
        (self.0 % limit.max(1) as u64) as usize
    }
}
