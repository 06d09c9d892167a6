//! Files made to do harm, each from a few lines: PDFs are written object by object, packages part by
//! part.

use flate2::{Compress, Compression, FlushCompress, write::ZlibEncoder};
use std::collections::BTreeMap;
use std::io::{Cursor, Write};

/// The sentence on the pages, and what of it must be found again.
pub const TEXT: &str = "BT /R 10 Tf 50 700 Td (Watered more often, t\\(28\\) = 2.20, p = .036.) Tj ET\n";
pub const FOUND: &str = "Watered more often, t(28) = 2.20, p = .036.";

/// A PDF of these objects, of which number 1 is the catalog.
pub fn pdf(objects: &BTreeMap<u32, Vec<u8>>) -> Vec<u8> {
    let mut out = b"%PDF-1.5\n".to_vec();
    let mut places = BTreeMap::new();
    for (number, object) in objects {
        places.insert(*number, out.len());
        out.extend(format!("{number} 0 obj\n").bytes());
        out.extend(object);
        out.extend(b"\nendobj\n");
    }
    let start = out.len();
    let size = objects.keys().max().map_or(1, |n| n + 1);
    out.extend(format!("xref\n0 {size}\n").bytes());
    for number in 0..size {
        let line = match places.get(&number) {
            Some(place) => format!("{place:010} 00000 n \n"),
            None => "0000000000 65535 f \n".to_string(),
        };
        out.extend(line.bytes());
    }
    out.extend(format!("trailer\n<< /Size {size} /Root 1 0 R >>\nstartxref\n{start}\n%%EOF\n").bytes());
    out
}

/// One page with the sentence: catalog 1, pages 2, font 3, page 4, content 5.
pub fn one_page() -> BTreeMap<u32, Vec<u8>> {
    BTreeMap::from([
        (1, b"<< /Type /Catalog /Pages 2 0 R >>".to_vec()),
        (2, b"<< /Type /Pages /Count 1 /Kids [4 0 R] >>".to_vec()),
        (
            3,
            b"<< /Type /Font /Subtype /Type1 /BaseFont /Times-Roman /Encoding /WinAnsiEncoding >>".to_vec(),
        ),
        (4, page("", "")),
        (5, stream("", TEXT)),
    ])
}

/// A page with something added to its resources and to its dictionary.
pub fn page(resources: &str, extra: &str) -> Vec<u8> {
    page_of(5, resources, extra)
}

/// A page that shows the content of this number.
pub fn page_of(content: u32, resources: &str, extra: &str) -> Vec<u8> {
    format!(
        "<< /Type /Page /Parent 2 0 R /MediaBox [0 0 600 800] /Contents {content} 0 R \
         /Resources << /Font << /R 3 0 R >> {resources} >> {extra} >>"
    )
    .into_bytes()
}

/// A stream with something added to its dictionary.
pub fn stream(dictionary: &str, content: impl AsRef<[u8]>) -> Vec<u8> {
    let content = content.as_ref();
    let mut out = format!("<< /Length {} {dictionary} >>\nstream\n", content.len()).into_bytes();
    out.extend(content);
    out.extend(b"\nendstream");
    out
}

/// A form that draws what the content draws, with itself and the font among its resources.
pub fn form(number: u32, content: &str) -> Vec<u8> {
    stream(
        &format!(
            "/Type /XObject /Subtype /Form /BBox [0 0 600 800] \
             /Resources << /XObject << /A {number} 0 R >> /Font << /R 3 0 R >> >>"
        ),
        content,
    )
}

/// Adds what overflows the stack of the first engine: a function of braces in braces.
pub fn with_deep_braces(mut objects: BTreeMap<u32, Vec<u8>>) -> BTreeMap<u32, Vec<u8>> {
    const DEEP: usize = 10_000_000;
    let braces = ["{".repeat(DEEP), "}".repeat(DEEP)].concat();
    let function = "/Filter /FlateDecode /FunctionType 4 /Domain [0 1] /Range [0 1 0 1 0 1]";
    objects.insert(20, stream(function, zlib(braces.as_bytes())));
    let with_draw = |content: &[u8]| {
        let drawn = memchr::memmem::find(content, b"/A Do").map_or("", |_| "/A Do\n");
        stream("", format!("{TEXT}/C cs 1 scn\n{drawn}"))
    };
    let (old_page, old_content) = (&objects[&4], &objects[&5]);
    let mut new_page = String::from_utf8(old_page.clone()).expect("pages here are ASCII");
    let colours = "/ColorSpace << /C [/Separation /X /DeviceRGB 20 0 R] >>";
    new_page = match new_page.contains("/Resources <<") {
        true => new_page.replacen("/Resources <<", &format!("/Resources << {colours}"), 1),
        false => new_page.replacen("<<", &format!("<< /Resources << {colours} >>"), 1),
    };
    let content = with_draw(old_content);
    objects.insert(4, new_page.into_bytes());
    objects.insert(5, content);
    objects
}

pub fn zlib(bytes: &[u8]) -> Vec<u8> {
    let mut encoder = ZlibEncoder::new(Vec::new(), Compression::best());
    encoder.write_all(bytes).expect("memory can be written");
    encoder.finish().expect("memory can be written")
}

/// So many megabytes of zeros as a zlib stream. One megabyte is packed, the rest are copies: a block
/// that was flushed stands for itself.
pub fn zeros(megabytes: u32) -> Vec<u8> {
    let mut packer = Compress::new(Compression::best(), false);
    let mut block = Vec::with_capacity(1 << 20);
    packer
        .compress_vec(&vec![0; 1 << 20], &mut block, FlushCompress::Full)
        .expect("memory can be packed");
    let mut out = vec![0x78, 0x9c];
    for _ in 0..megabytes {
        out.extend(&block);
    }
    // An empty last block, and the Adler-32 of zeros.
    out.extend([0x03, 0x00]);
    let second = (u64::from(megabytes) << 20) % 65_521;
    out.extend((((second as u32) << 16) | 1).to_be_bytes());
    out
}

/// A package with these parts.
pub fn package(parts: &[(&str, &str)]) -> Vec<u8> {
    let mut zip = zip::ZipWriter::new(Cursor::new(Vec::new()));
    for (name, text) in parts {
        let options = zip::write::SimpleFileOptions::default();
        zip.start_file(*name, options).expect("memory can be written");
        zip.write_all(text.as_bytes()).expect("memory can be written");
    }
    zip.finish().expect("memory can be written").into_inner()
}

/// A Word file with this body.
pub fn word(body: &str) -> Vec<u8> {
    let document = format!("<w:document xmlns:w='w'><w:body>{body}</w:body></w:document>");
    package(&[("word/document.xml", &document)])
}

/// An OpenDocument file with this text.
pub fn open_document(text: &str) -> Vec<u8> {
    let content = format!(
        "<o:document-content xmlns:o='o'><o:body><o:text>{text}</o:text></o:body></o:document-content>"
    );
    package(&[
        ("mimetype", "application/vnd.oasis.opendocument.text"),
        ("content.xml", &content),
    ])
}
