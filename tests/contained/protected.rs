//! Encrypted files and scans. The encrypted ones were made by qpdf, see their README.

use super::craft::{FOUND, TEXT, one_page, page_of, pdf, stream};
use super::helper::Scratch;
use super::{pool, text};
use tieout::readers::contained::Limits;

#[test]
fn an_empty_password_opens_and_any_other_is_said() {
    let pool = pool(Limits::default());
    let read = |name: &str| {
        let path = format!("fixtures/encrypted/{name}.pdf");
        text(
            &pool,
            std::fs::read(path).expect("part of the repository"),
            "a.pdf",
        )
    };
    for name in ["empty-rc4-40", "empty-rc4-128", "empty-aes-128", "empty-aes-256"] {
        assert_eq!(read(name).as_deref(), Ok(FOUND), "{name}");
    }
    for name in ["password-rc4-128", "password-aes-128", "password-aes-256"] {
        assert_eq!(
            read(name).expect_err("needs a password"),
            "is encrypted; save a copy without a password and read that",
            "{name}"
        );
    }
}

#[test]
fn scanned_pages_are_named() {
    let image = "q 500 0 0 700 50 50 cm BI /W 1 /H 1 /CS /G /BPC 8 ID \u{1} EI Q\n";
    let scan = |contents: &[&str]| {
        let mut objects = one_page();
        let kids: Vec<String> = (0..contents.len())
            .map(|i| format!("{} 0 R", 10 + 2 * i))
            .collect();
        let tree = format!(
            "<< /Type /Pages /Count {} /Kids [{}] >>",
            kids.len(),
            kids.join(" ")
        );
        objects.insert(2, tree.into_bytes());
        for (i, content) in contents.iter().enumerate() {
            let number = 10 + 2 * i as u32;
            objects.insert(number, page_of(number + 1, "", ""));
            objects.insert(number + 1, stream("", content));
        }
        pdf(&objects)
    };
    let scratch = Scratch::new();
    let other = TEXT.replace("Watered", "Harvested");
    scratch.file("partly.pdf", scan(&[image, TEXT, image, image, &other, image]));
    scratch.file("wholly.pdf", scan(&[image, image, image]));
    let run = scratch.run(&["check", "partly.pdf", "wholly.pdf"]);
    assert_eq!(
        run.err,
        "tieout: wholly.pdf: has no text layer on pages 1–3 (page images only): run text recognition on it first\n"
    );
    let said = run.out.split_whitespace().collect::<Vec<_>>().join(" ");
    assert!(
        said.contains(
            "note: pages 1, 3–4, 6 without text (images only): not read; run text recognition on the file"
        ),
        "{}",
        run.out
    );
    assert_eq!(run.status, 2);
}
