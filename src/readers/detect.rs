//! *Detecting* a format: what the file contains decides, its name only where the content leaves
//! the question open. What cannot be read gets a reason and something to do about it.

use super::{Unreadable, decode};
use crate::manuscript::Format;
use memchr::memmem;
use std::io::{Cursor, Read};
use std::path::Path;

/// How much of a text file is looked at.
const HEAD: usize = 32 * 1024;

/// The format of a document.
///
/// # Errors
/// [`Unreadable`] if the file is empty or of a kind that is not read.
pub fn format(bytes: &[u8], path: &Path) -> Result<Format, Unreadable> {
    if bytes.iter().all(u8::is_ascii_whitespace) {
        return Err(Unreadable::new(
            "is empty; check that it was saved or copied completely",
        ));
    }
    match opaque(bytes) {
        Some(Opaque::Pdf) => return Ok(Format::Pdf),
        Some(Opaque::Zip) => return zipped(bytes),
        None => {}
    }
    if let Some(reason) = known_binary(bytes) {
        return Err(Unreadable::new(reason));
    }
    let head = decode::head(bytes, HEAD)?;
    let head = head.trim_start_matches(['\u{feff}', ' ', '\t', '\r', '\n']);
    if head.is_empty() {
        return Err(Unreadable::new(
            "is empty; check that it was saved or copied completely",
        ));
    }
    written(head, &extension(path))
}

/// Kinds of files that are not text: taking one apart is work for a
/// [`contained`](super::contained) reader.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Opaque {
    Pdf,
    /// Word and OpenDocument files among others.
    Zip,
}

/// The kind of a file that is not text, by its first bytes.
pub fn opaque(bytes: &[u8]) -> Option<Opaque> {
    if let Some(at) = memmem::find(&bytes[..bytes.len().min(1024)], b"%PDF-")
        // Anywhere but at the very start it may be a text that mentions it.
        && (at == 0 || memmem::find(bytes, b" obj").is_some())
    {
        return Some(Opaque::Pdf);
    }
    (bytes.starts_with(b"PK\x03\x04") || bytes.starts_with(b"PK\x05\x06")).then_some(Opaque::Zip)
}

/// What to tell the person when the file's name says another format than its content.
pub fn misnamed(format: Format, path: &Path) -> Option<String> {
    let extension = extension(path);
    let says = match extension.as_str() {
        "pdf" => Format::Pdf,
        "docx" | "docm" | "doc" | "rtf" => Format::Docx,
        "odt" => Format::Odt,
        "html" | "htm" | "xhtml" => Format::Html,
        "xml" | "nxml" => Format::Jats,
        "tex" | "ltx" | "latex" => Format::Latex,
        "md" | "markdown" | "qmd" | "rmd" => Format::Markdown,
        "txt" => Format::Text,
        _ => return None,
    };
    // XHTML is XML too, and plain text may hold marks of any kind.
    let fine = says == format
        || (says == Format::Jats && format == Format::Html)
        || (says == Format::Text && matches!(format, Format::Markdown | Format::Latex));
    (!fine).then(|| {
        format!(
            "the name ends in .{extension}, but the content is {}; it was read as that",
            format.name().to_uppercase()
        )
    })
}

fn extension(path: &Path) -> String {
    let extension = path.extension().unwrap_or_default();
    extension.to_string_lossy().to_lowercase()
}

/// Containers made with zip: Word, OpenDocument and others.
fn zipped(bytes: &[u8]) -> Result<Format, Unreadable> {
    let Ok(mut archive) = zip::ZipArchive::new(Cursor::new(bytes)) else {
        return Err(Unreadable::new(
            "is a damaged or incomplete DOCX, ODT or zip file; open it in a word processor and save it again",
        ));
    };
    let mut mimetype = String::new();
    if let Ok(file) = archive.by_name("mimetype") {
        // A longer one is not a mimetype; a damaged one is as good as none.
        let mut raw = Vec::new();
        let _ = file.take(200).read_to_end(&mut raw);
        mimetype = String::from_utf8_lossy(&raw).trim().to_string();
    }
    let has = |test: &dyn Fn(&str) -> bool| {
        archive
            .file_names()
            .any(|name| name.is_ok_and(|name| test(&name)))
    };
    if has(&|n| n.starts_with("word/document") && n.ends_with(".xml")) {
        return Ok(Format::Docx);
    }
    if mimetype.starts_with("application/vnd.oasis.opendocument.text") {
        return Ok(Format::Odt);
    }
    let reason = if mimetype == "application/epub+zip" || has(&|n| n == "META-INF/container.xml") {
        "is an e-book (EPUB); convert it to DOCX or HTML"
    } else if mimetype.contains("spreadsheet") || has(&|n| n.starts_with("xl/")) {
        "is a spreadsheet; give the manuscript itself, or save the table as HTML or text"
    } else if mimetype.contains("presentation") || has(&|n| n.starts_with("ppt/")) {
        "is a presentation; give the manuscript itself, or export the slides as PDF"
    } else if mimetype.starts_with("application/vnd.oasis") {
        "is an OpenDocument file without running text; save the manuscript as ODT or DOCX"
    } else if has(&|n| n == "content.xml") {
        return Ok(Format::Odt);
    } else if has(&|n| n.ends_with(".iwa") || n == "index.xml") {
        "is an Apple Pages document; export it as Word or PDF"
    } else {
        "is a zip archive; unpack it and name the manuscripts in it"
    };
    Err(Unreadable::new(reason))
}

/// Kinds of data known by their first bytes.
fn known_binary(bytes: &[u8]) -> Option<&'static str> {
    const PICTURE: &str = "is a picture; recognise its text (OCR) and save that as PDF or text";
    const PACKED: &str = "is a compressed archive; unpack it and name the manuscripts in it";
    let starts = |magic: &[u8]| bytes.starts_with(magic);
    let at = |from: usize, magic: &[u8]| bytes.get(from..).is_some_and(|rest| rest.starts_with(magic));
    Some(match bytes {
        _ if starts(b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1") => compound(bytes),
        _ if starts(b"{\\rtf") => "is rich text (RTF); save it as DOCX",
        _ if starts(b"\x89PNG\r\n") || starts(b"\xff\xd8\xff") || starts(b"GIF87a") || starts(b"GIF89a") => {
            PICTURE
        }
        _ if starts(b"II*\0") || starts(b"MM\0*") || (starts(b"RIFF") && at(8, b"WEBP")) => PICTURE,
        _ if at(4, b"ftyphei") || at(4, b"ftypmif1") || at(4, b"ftypavif") => PICTURE,
        _ if starts(b"BM") && at(6, b"\0\0\0\0") => PICTURE,
        _ if starts(b"AT&TFORM") => "is a DjVu file; convert it to PDF with text",
        _ if starts(b"%!PS") => "is PostScript; convert it to PDF",
        _ if starts(b"\x1f\x8b") || starts(b"BZh") && at(4, b"1AY&SY") || starts(b"\xfd7zXZ\0") => PACKED,
        _ if starts(b"7z\xbc\xaf\x27\x1c") || starts(b"Rar!\x1a\x07") || starts(b"\x28\xb5\x2f\xfd") => {
            PACKED
        }
        _ if at(257, b"ustar") => PACKED,
        _ if at(60, b"BOOKMOBI") => "is an e-book (Mobipocket); convert it to DOCX or HTML",
        _ if starts(b"SQLite format 3\0") => "is a database; give the manuscript itself",
        _ if starts(b"\x7fELF") || (starts(b"MZ") && at(3, b"\0")) => {
            "is a program; give the manuscript itself"
        }
        _ => return None,
    })
}

/// Files of the old Office programs, and new ones with a password, are compound files.
fn compound(bytes: &[u8]) -> &'static str {
    // Names of their parts are kept in UTF-16.
    let holds = |name: &str| {
        let wide: Vec<u8> = name.encode_utf16().flat_map(u16::to_le_bytes).collect();
        memmem::find(bytes, &wide).is_some()
    };
    if holds("EncryptedPackage") {
        "is protected by a password; save a copy without it"
    } else if holds("WordDocument") {
        "is in the old Word format (.doc); save it as DOCX"
    } else if holds("Workbook") {
        "is an old Excel workbook; give the manuscript itself, or save the table as HTML or text"
    } else if holds("PowerPoint Document") {
        "is an old PowerPoint presentation; export it as PDF"
    } else {
        "is in an old Office format; save it as DOCX or PDF"
    }
}

/// Formats that are text with marks in it.
fn written(head: &str, extension: &str) -> Result<Format, Unreadable> {
    if head.starts_with("{\\rtf") {
        return Err(Unreadable::new("is rich text (RTF); save it as DOCX"));
    }
    let markdown_name = matches!(extension, "md" | "markdown" | "mdown" | "mkd" | "qmd" | "rmd");
    if head.starts_with('<')
        && let Some(answer) = tagged(head, extension, markdown_name)
    {
        return answer;
    }
    if head.starts_with('{') && (extension == "ipynb" || head.contains("\"nbformat\"")) {
        return Err(Unreadable::new("is a notebook; export it as HTML or Markdown"));
    }
    if extension == "json" && head.starts_with(['{', '[']) {
        return Err(Unreadable::new(
            "is data (JSON), not a manuscript; give the manuscript itself",
        ));
    }
    if head.starts_with("MIME-Version:") || (head.starts_with("From:") && head.contains("multipart/related"))
    {
        return Err(Unreadable::new("is a web archive (MHTML); save the page as HTML"));
    }
    let latex_name = matches!(extension, "tex" | "ltx" | "latex" | "rnw" | "ctx");
    let first = head
        .lines()
        .map(str::trim_start)
        .find(|line| !line.is_empty() && !line.starts_with('%'))
        .unwrap_or_default();
    if opens_latex(first) || (!markdown_name && head.lines().any(|line| opens_latex(line.trim_start()))) {
        return Ok(Format::Latex);
    }
    if markdown_name || front_matter(head) {
        return Ok(Format::Markdown);
    }
    if latex_name || looks_like_latex(head) {
        return Ok(Format::Latex);
    }
    if matches!(extension, "html" | "htm" | "xhtml") && looks_like_html(head) {
        return Ok(Format::Html);
    }
    let code_name = matches!(
        extension,
        "r" | "py" | "sh" | "jl" | "csv" | "tsv" | "yaml" | "yml" | "toml"
    );
    if !code_name && looks_like_markdown(head) {
        return Ok(Format::Markdown);
    }
    Ok(Format::Text)
}

fn opens_latex(line: &str) -> bool {
    ["\\documentclass", "\\documentstyle", "\\begin{document}"]
        .iter()
        .any(|mark| line.starts_with(mark))
}

/// XML and web pages, or none if the angle bracket was just a character.
fn tagged(head: &str, extension: &str, markdown_name: bool) -> Option<Result<Format, Unreadable>> {
    let prolog = Prolog::of(head);
    let doctype = prolog.doctype.to_lowercase();
    let root = prolog.root.to_lowercase();
    let local = root.rsplit(':').next().unwrap_or_default();
    let is_xml = prolog.declared || matches!(extension, "xml" | "nxml" | "jats");
    if doctype.starts_with("html") || local == "html" {
        return Some(Ok(Format::Html));
    }
    let article = doctype.contains("jats")
        || doctype.contains("journal publishing")
        || doctype.contains("journal archiving")
        || [
            "article-type=",
            "<article-meta",
            "<journal-meta",
            "<front>",
            "<front-stub",
        ]
        .iter()
        .any(|mark| head.contains(mark))
        || (is_xml && local == "article");
    let docbook = doctype.contains("docbook") || head.contains("http://docbook.org/ns");
    if article
        && !docbook
        && matches!(
            local,
            "article" | "pmc-articleset" | "oai-pmh" | "record" | "records" | "response"
        )
    {
        return Some(Ok(Format::Jats));
    }
    let reason = match local {
        "svg" => Some("is a drawing (SVG); give the manuscript itself".to_string()),
        "worddocument" | "package" if is_xml => Some("is a Word XML file; save it as DOCX".to_string()),
        "document" if root.starts_with("office:") => {
            Some("is a flat OpenDocument file; save it as ODT".to_string())
        }
        name if is_xml => Some(format!(
            "is XML of another kind (its outermost element is <{name}>) than JATS or HTML; save it as HTML or DOCX"
        )),
        _ => None,
    };
    if let Some(reason) = reason {
        return Some(Err(Unreadable::new(reason)));
    }
    (!markdown_name && looks_like_html(head)).then_some(Ok(Format::Html))
}

/// What stands before and at the outermost element of an XML file.
struct Prolog<'a> {
    declared: bool,
    doctype: &'a str,
    root: &'a str,
}

impl<'a> Prolog<'a> {
    fn of(head: &'a str) -> Prolog<'a> {
        let mut prolog = Prolog {
            declared: head.starts_with("<?xml"),
            doctype: "",
            root: "",
        };
        let mut rest = head;
        loop {
            rest = rest.trim_start();
            if let Some(inner) = rest.strip_prefix("<?") {
                match inner.find("?>") {
                    Some(end) => rest = &inner[end + 2..],
                    None => return prolog,
                }
            } else if let Some(inner) = rest.strip_prefix("<!--") {
                match inner.find("-->") {
                    Some(end) => rest = &inner[end + 3..],
                    None => return prolog,
                }
            } else if rest.len() > 9
                && rest.is_char_boundary(9)
                && rest[..9].eq_ignore_ascii_case("<!doctype")
            {
                let inner = rest[9..].trim_start();
                // The declarations in brackets may contain the closing character.
                let end = match (inner.find('['), inner.find('>')) {
                    (Some(open), Some(close)) if open < close => {
                        inner.find("]>").map(|e| e + 2).unwrap_or(inner.len())
                    }
                    (_, Some(close)) => close + 1,
                    _ => return prolog,
                };
                prolog.doctype = &inner[..end];
                rest = &inner[end..];
            } else {
                if let Some(inner) = rest.strip_prefix('<') {
                    let end = inner.find(|c: char| !(c.is_alphanumeric() || "-_:.".contains(c)));
                    prolog.root = &inner[..end.unwrap_or(inner.len())];
                }
                return prolog;
            }
        }
    }
}

/// Closing tags of common elements.
fn looks_like_html(head: &str) -> bool {
    let lower = head[..head.floor_char_boundary(32 * 1024)].to_lowercase();
    [
        "</p>",
        "</div>",
        "</h1>",
        "</h2>",
        "</td>",
        "</body>",
        "</html>",
        "</section>",
        "</span>",
        "</li>",
    ]
    .iter()
    .any(|tag| lower.contains(tag))
}

/// YAML between lines of dashes at the very start.
fn front_matter(head: &str) -> bool {
    let mut lines = head.lines();
    lines.next().is_some_and(|line| line.trim_end() == "---") && {
        let mut keys = 0;
        for line in lines.take(400) {
            if matches!(line.trim_end(), "---" | "...") {
                return keys > 0;
            }
            let key = line.split(':').next().unwrap_or_default();
            keys += usize::from(
                key.len() < line.len()
                    && !key.is_empty()
                    && key
                        .bytes()
                        .all(|b| b.is_ascii_alphanumeric() || b"-_".contains(&b)),
            );
        }
        false
    }
}

/// A handful of macros with arguments.
fn looks_like_latex(head: &str) -> bool {
    let mut macros = 0;
    let bytes = head.as_bytes();
    for at in memchr::memchr_iter(b'\\', bytes) {
        let letters = bytes[at + 1..]
            .iter()
            .take(30)
            .take_while(|b| b.is_ascii_alphabetic())
            .count();
        if letters > 1 && bytes.get(at + 1 + letters) == Some(&b'{') {
            macros += 1;
        }
    }
    macros >= 5 && macros * 5000 > head.len()
}

/// Headings with `#` together with emphasis, links or pipe tables.
fn looks_like_markdown(head: &str) -> bool {
    let heading = |line: &str| {
        let marks = line.bytes().take_while(|b| *b == b'#').count();
        (1..=6).contains(&marks) && line[marks..].starts_with(' ')
    };
    let headings = head.lines().filter(|line| heading(line)).count();
    let emphasis = |line: &str| {
        [
            "*p*", "_p_", "*t*", "*F*", "*M*", "**", "](http", "|--", "| --", "|:-", "```",
        ]
        .iter()
        .any(|mark| line.contains(mark))
    };
    headings > 0 && head.lines().any(emphasis)
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::io::Write;

    fn of(content: &str, name: &str) -> Result<Format, Unreadable> {
        format(content.as_bytes(), Path::new(name))
    }

    fn zip_of(files: &[(&str, &str)]) -> Vec<u8> {
        let mut writer = zip::ZipWriter::new(Cursor::new(Vec::new()));
        for (name, content) in files {
            let options = zip::write::SimpleFileOptions::default();
            writer.start_file(*name, options).expect("writing to memory");
            writer.write_all(content.as_bytes()).expect("writing to memory");
        }
        writer.finish().expect("writing to memory").into_inner()
    }

    fn refusal(bytes: &[u8]) -> String {
        format(bytes, Path::new("draft.docx"))
            .expect_err("it is no manuscript")
            .0
    }

    #[test]
    fn content_decides_before_the_name() {
        for (content, name, want) in [
            ("%PDF-1.7\n1 0 obj", "draft.txt", Format::Pdf),
            ("\n\nHTTP junk\n%PDF-1.4\n1 0 obj", "draft", Format::Pdf),
            (
                "A text that mentions %PDF-1.7 as such.",
                "draft.txt",
                Format::Text,
            ),
            ("<!DOCTYPE html>\n<html><p>p = .03</p>", "draft.txt", Format::Html),
            (
                "<html xmlns=\"http://www.w3.org/1999/xhtml\">",
                "draft.xml",
                Format::Html,
            ),
            ("<p>Plots differed, p &lt; .05</p>", "draft", Format::Html),
            (
                "<?xml version=\"1.0\"?>\n<!-- x --><article><body/></article>",
                "a.txt",
                Format::Jats,
            ),
            (
                "<!DOCTYPE article PUBLIC \"-//NLM//DTD Journal Publishing DTD v2.3//EN\" \"j.dtd\" [<!ENTITY a \">\">]><article>",
                "a.xml",
                Format::Jats,
            ),
            ("<article><p>A web page.</p></article>", "a.html", Format::Html),
            (
                "<pmc-articleset><article article-type=\"x\">",
                "a.xml",
                Format::Jats,
            ),
            (
                "% a comment\n\\documentclass{article}",
                "draft.txt",
                Format::Latex,
            ),
            ("\\section{Results}\nPlain.", "results.tex", Format::Latex),
            ("---\ntitle: Plots\n---\nText.", "draft.txt", Format::Markdown),
            (
                "# Results\n\nWatering helped, *p* = .03.",
                "draft.txt",
                Format::Markdown,
            ),
            ("Plots differed, p = .03.", "draft.Rmd", Format::Markdown),
            (
                "```\n\\documentclass{article}\n```\n",
                "draft.md",
                Format::Markdown,
            ),
            ("Plots differed, p = .03.", "draft.txt", Format::Text),
            ("p < .05 in all plots", "draft", Format::Text),
            ("<.05 was the threshold", "draft", Format::Text),
        ] {
            assert_eq!(of(content, name), Ok(want), "{content:?} as {name}");
        }
    }

    #[test]
    fn containers() {
        let docx = zip_of(&[("[Content_Types].xml", ""), ("word/document.xml", "<w/>")]);
        assert_eq!(format(&docx, Path::new("a.txt")), Ok(Format::Docx));
        let odt = zip_of(&[
            ("mimetype", "application/vnd.oasis.opendocument.text"),
            ("content.xml", ""),
        ]);
        assert_eq!(format(&odt, Path::new("a")), Ok(Format::Odt));
        assert_eq!(
            format(&zip_of(&[("content.xml", "")]), Path::new("a")),
            Ok(Format::Odt)
        );
        for (files, want) in [
            (
                ("xl/workbook.xml", ""),
                "is a spreadsheet; give the manuscript itself, or save the table as HTML or text",
            ),
            (
                ("ppt/presentation.xml", ""),
                "is a presentation; give the manuscript itself, or export the slides as PDF",
            ),
            (
                ("mimetype", "application/epub+zip"),
                "is an e-book (EPUB); convert it to DOCX or HTML",
            ),
            (
                ("Index/Document.iwa", ""),
                "is an Apple Pages document; export it as Word or PDF",
            ),
            (
                ("main.tex", ""),
                "is a zip archive; unpack it and name the manuscripts in it",
            ),
        ] {
            assert_eq!(refusal(&zip_of(&[files])), want);
        }
        assert_eq!(
            refusal(&docx[..docx.len() / 2]),
            "is a damaged or incomplete DOCX, ODT or zip file; open it in a word processor and save it again"
        );
    }

    #[test]
    fn what_is_not_read_says_what_it_is() {
        let mut old = b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1".to_vec();
        old.extend("WordDocument".encode_utf16().flat_map(u16::to_le_bytes));
        assert_eq!(refusal(&old), "is in the old Word format (.doc); save it as DOCX");
        assert_eq!(
            refusal(b"{\\rtf1 p = .03}"),
            "is rich text (RTF); save it as DOCX"
        );
        assert_eq!(
            refusal(b"\x89PNG\r\n\x1a\n\0\0"),
            "is a picture; recognise its text (OCR) and save that as PDF or text"
        );
        assert_eq!(
            refusal(b"\x1f\x8b\x08\0\0"),
            "is a compressed archive; unpack it and name the manuscripts in it"
        );
        for empty in ["", " \n\t\n", "\u{feff}\n"] {
            assert_eq!(
                refusal(empty.as_bytes()),
                "is empty; check that it was saved or copied completely"
            );
        }
        assert_eq!(
            refusal(b"<?xml version='1.0'?><TEI><text/></TEI>"),
            "is XML of another kind (its outermost element is <tei>) than JATS or HTML; save it as HTML or DOCX"
        );
        assert_eq!(
            refusal(b"{\"nbformat\": 4}"),
            "is a notebook; export it as HTML or Markdown"
        );
        assert_eq!(
            refusal(&[7, 0, 3, 200, 1, 0, 9].repeat(40)),
            "is not text but data of an unknown kind; save the manuscript as DOCX, PDF or text"
        );
    }

    #[test]
    fn a_misleading_name_is_told() {
        assert_eq!(
            misnamed(Format::Pdf, Path::new("draft.docx")).as_deref(),
            Some("the name ends in .docx, but the content is PDF; it was read as that")
        );
        assert_eq!(misnamed(Format::Markdown, Path::new("draft.Rmd")), None);
        assert_eq!(misnamed(Format::Latex, Path::new("draft.txt")), None);
        assert_eq!(misnamed(Format::Text, Path::new("draft")), None);
    }
}
