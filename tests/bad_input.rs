//! Input that cannot be read: one clear line that names the file and what to do, status 2, and no
//! harm to the other files.

mod helper;

use helper::Scratch;
use std::io::Write;

const GOOD: &str = "Beds differed, t(28) = 2.20, p = .036.\n";

/// A zip archive with these parts, deflated.
fn archive(parts: &[(&str, &[u8])]) -> Vec<u8> {
    let mut zip = zip::ZipWriter::new(std::io::Cursor::new(Vec::new()));
    let options =
        zip::write::SimpleFileOptions::default().compression_method(zip::CompressionMethod::Deflated);
    for (name, content) in parts {
        zip.start_file(*name, options).expect("a part can be started");
        zip.write_all(content).expect("a part can be written");
    }
    zip.finish().expect("the archive can be finished").into_inner()
}

fn fixture(name: &str) -> Vec<u8> {
    std::fs::read(format!("fixtures/{name}")).expect("part of the repository")
}

/// Each bad file with words that its message must hold.
fn bad_files() -> Vec<(&'static str, Vec<u8>, &'static str)> {
    let docx = fixture("demo/watering.docx");
    let odt = fixture("demo/watering.odt");
    let pdf = fixture("demo/watering.pdf");
    let jats = fixture("demo/watering.xml");
    let deep = format!(
        "<article><body>{}{}</body></article>",
        "<p>".repeat(50_000),
        "</p>".repeat(50_000)
    );
    let deep_word = format!("<w:document xmlns:w='w'><w:body>{}", "<w:p>".repeat(100_000));
    let zeros = vec![b' '; 300 * 1024 * 1024];
    let bomb = {
        let mut part = b"<w:document xmlns:w='w'><w:body><w:p><w:r><w:t>".to_vec();
        part.extend(&zeros[..80 * 1024 * 1024]);
        archive(&[("word/document.xml", &part)])
    };
    let random: Vec<u8> = (0..20_000u32)
        .map(|i| (i.wrapping_mul(2_654_435_761) >> 13) as u8)
        .collect();
    let mut png = b"\x89PNG\r\n\x1a\n".to_vec();
    png.extend(&random[..500]);
    vec![
        ("empty.txt", Vec::new(), "empty"),
        ("blank.txt", b" \n\n\t\n".to_vec(), "empty"),
        ("rubbish.txt", random, "not text"),
        ("picture.docx", png, "picture"),
        ("cut.docx", docx[..docx.len() / 2].to_vec(), "damaged"),
        ("cut.odt", odt[..odt.len() / 2].to_vec(), "damaged"),
        ("cut.pdf", pdf[..pdf.len() / 10].to_vec(), "cut off"),
        ("cut.xml", jats[..jats.len() / 2].to_vec(), "well-formed"),
        ("locked.pdf", fixture("broken/user-password.pdf"), "encrypted"),
        (
            "sheet.docx",
            archive(&[("xl/workbook.xml", b"<workbook/>")]),
            "spreadsheet",
        ),
        ("plain.zip", archive(&[("notes.txt", b"p = .03")]), "zip"),
        ("deep.xml", deep.into_bytes(), "nested"),
        (
            "deep.docx",
            archive(&[("word/document.xml", deep_word.as_bytes())]),
            "nested",
        ),
        ("bomb.docx", bomb, "unpack"),
        (
            "old.doc",
            b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1rest of an old file".to_vec(),
            "DOCX",
        ),
        ("rich.rtf", b"{\\rtf1\\ansi p = .03}".to_vec(), "RTF"),
    ]
}

#[test]
fn each_is_one_clear_line_and_the_others_are_still_checked() {
    let scratch = Scratch::new();
    scratch.file("good.txt", GOOD);
    for (name, content, words) in bad_files() {
        scratch.file(name, content);
        let run = scratch.run(&["check", name, "good.txt", "--format", "ndjson"]);
        assert_eq!(run.status, 2, "{name}: {run:?}");
        assert_eq!(run.err.lines().count(), 1, "{name}: {}", run.err);
        assert!(
            run.err.starts_with(&format!("tieout: {name}: ")),
            "{name}: {}",
            run.err
        );
        assert!(
            run.err.to_lowercase().contains(&words.to_lowercase()),
            "{name} should speak of {words:?}: {}",
            run.err
        );
        let lines: Vec<serde_json::Value> = run
            .out
            .lines()
            .map(|l| serde_json::from_str(l).expect("a JSON document a line"))
            .collect();
        assert_eq!(lines.len(), 2, "{name}");
        let document = |i: usize| lines[i].get("documents").map_or(&lines[i], |d| &d[0]);
        assert!(document(0)["unreadable"].is_string(), "{name}: {}", lines[0]);
        assert_eq!(document(1)["unreadable"], serde_json::Value::Null, "{name}");
        assert_eq!(document(1)["counts"]["agrees"], 1, "{name}");
        std::fs::remove_file(scratch.path().join(name)).expect("the scratch file is ours");
    }
}

#[test]
fn entities_that_grow_without_end_do_no_harm() {
    let scratch = Scratch::new();
    let mut dtd = String::from("<!ENTITY a0 \"watering \">");
    for i in 1..40 {
        dtd.push_str(&format!("<!ENTITY a{i} \"&a{};&a{};\">", i - 1, i - 1));
    }
    let article = format!(
        "<?xml version=\"1.0\"?><!DOCTYPE article [{dtd}]><article><body><p>Then &a39; t(28) = 2.20, p = .036.</p></body></article>"
    );
    scratch.file("bomb.xml", article);
    let run = scratch.run(&["check", "bomb.xml", "--format", "text-only"]);
    assert!(run.out.len() < 100_000, "{} bytes", run.out.len());
    assert!(
        run.out.contains("t(28) = 2.20, p = .036") || run.status == 2,
        "{run:?}"
    );
}

#[test]
fn other_encodings_are_decoded() {
    let scratch = Scratch::new();
    let text = "Gießkannen im März: t(28) = 2.20, p = .036.\n";
    let latin1: Vec<u8> = text.chars().map(|c| c as u8).collect();
    let utf16 = |mark: [u8; 2], bytes: fn(u16) -> [u8; 2]| -> Vec<u8> {
        mark.into_iter()
            .chain(text.encode_utf16().flat_map(bytes))
            .collect()
    };
    scratch.file("latin1.txt", latin1);
    scratch.file("little.txt", utf16([0xff, 0xfe], u16::to_le_bytes));
    scratch.file("big.txt", utf16([0xfe, 0xff], u16::to_be_bytes));
    scratch.file("marked.txt", format!("\u{feff}{text}"));
    for name in ["latin1.txt", "little.txt", "big.txt", "marked.txt"] {
        let run = scratch.run(&["check", name, "--format", "text-only"]);
        assert_eq!((run.out.as_str(), run.status), (text, 0), "{name}: {}", run.err);
    }
}

#[test]
fn no_cut_or_changed_byte_of_a_manuscript_harms_the_program() {
    let scratch = Scratch::new();
    let mut state = 11u64;
    let mut next = move || {
        state = state
            .wrapping_mul(6_364_136_223_846_793_005)
            .wrapping_add(1_442_695_040_888_963_407);
        (state >> 33) as usize
    };
    let mut names = Vec::new();
    for extension in ["docx", "odt", "pdf", "xml", "html", "tex", "md", "txt"] {
        let content = fixture(&format!("demo/watering.{extension}"));
        for i in 0..12 {
            let mut bad = content.clone();
            for _ in 0..1 + next() % 8 {
                let at = next() % bad.len();
                bad[at] = next() as u8;
            }
            if i % 3 == 0 {
                bad.truncate(next() % content.len());
            }
            let name = format!("{i}.{extension}");
            scratch.file(&name, bad);
            names.push(name);
        }
    }
    let mut arguments = vec!["check", "--format", "ndjson"];
    arguments.extend(names.iter().map(String::as_str));
    let run = scratch.run(&arguments);
    assert_eq!(run.out.lines().count(), names.len(), "{}", run.err);
    assert!(
        !run.err.contains("internal error") && !run.err.contains("panicked"),
        "{}",
        run.err
    );
    assert!(matches!(run.status, 1 | 2), "{run:?}");
}
