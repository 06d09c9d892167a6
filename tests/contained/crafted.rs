//! Files that were made to do harm. Each is made here, small or large, and read by a worker; a good
//! file after it must be read as if nothing had happened.

use super::craft::{self, FOUND, TEXT, form, one_page, page, page_of, pdf, stream};
use super::{pool, small, text};
use std::time::{Duration, Instant};
use tieout::readers::contained::{Limits, Pool};

/// What is read of a file by a pool of its own; another file is unharmed.
fn read_within(limits: Limits, bytes: Vec<u8>, name: &str) -> Result<String, String> {
    let pool = pool(limits);
    let result = text(&pool, bytes, name);
    unharmed(&pool);
    result
}

fn read(bytes: Vec<u8>, name: &str) -> Result<String, String> {
    read_within(small(), bytes, name)
}

fn unharmed(pool: &Pool) {
    assert_eq!(text(pool, pdf(&one_page()), "good.pdf").as_deref(), Ok(FOUND));
}

const CRASH: &str = "is damaged in such a way that reading it crashes; print it to a new PDF and read that";

#[test]
fn a_form_that_draws_itself() {
    let mut o = one_page();
    o.insert(4, page("/XObject << /A 6 0 R >>", ""));
    o.insert(5, stream("", format!("{TEXT}/A Do\n")));
    o.insert(6, form(6, "/A Do\n"));
    assert_eq!(read(pdf(&o), "a.pdf").as_deref(), Ok(FOUND));
}

#[test]
fn forms_that_draw_each_other_a_million_million_times() {
    let mut o = one_page();
    o.insert(4, page("/XObject << /A 10 0 R >>", ""));
    o.insert(5, stream("", format!("{TEXT}/A Do\n")));
    for level in 0..40 {
        let inner = if level < 39 {
            "/A Do\n".repeat(2)
        } else {
            TEXT.to_string()
        };
        let resources = format!(
            "/Type /XObject /Subtype /Form /BBox [0 0 600 800] \
             /Resources << /XObject << /A {} 0 R >> /Font << /R 3 0 R >> >>",
            11 + level
        );
        o.insert(10 + level, stream(&resources, inner));
    }
    // The page is given up before it begins.
    assert_eq!(
        read(pdf(&o), "a.pdf").expect_err("nothing can be read"),
        "asks for endless drawing and shows no text before that; print it to a new PDF and read that"
    );
}

#[test]
fn a_page_tree_that_holds_itself() {
    let mut o = one_page();
    o.insert(
        2,
        b"<< /Type /Pages /Count 3 /Kids [4 0 R 2 0 R 7 0 R] >>".to_vec(),
    );
    o.insert(7, b"<< /Type /Pages /Count 1 /Kids [2 0 R] >>".to_vec());
    assert_eq!(read(pdf(&o), "a.pdf").as_deref(), Ok(FOUND));
}

/// The parents of its only page go round in a circle, and none says how large the page is.
fn parents_in_a_circle() -> std::collections::BTreeMap<u32, Vec<u8>> {
    let mut o = one_page();
    o.insert(
        2,
        b"<< /Type /Pages /Count 1 /Kids [4 0 R] /Parent 7 0 R >>".to_vec(),
    );
    o.insert(
        7,
        b"<< /Type /Pages /Count 1 /Kids [2 0 R] /Parent 2 0 R >>".to_vec(),
    );
    o.insert(4, b"<< /Type /Page /Parent 2 0 R /Contents 5 0 R >>".to_vec());
    o
}

#[test]
fn a_page_whose_parents_go_round_in_a_circle() {
    let read = read(pdf(&parents_in_a_circle()), "a.pdf");
    assert_eq!(read.as_deref(), Ok(FOUND));
}

#[test]
fn a_stream_that_unpacks_to_gigabytes() {
    let bomb = |filter: &str, content: Vec<u8>| {
        let mut o = one_page();
        o.insert(5, stream(filter, content));
        pdf(&o)
    };
    let once = craft::zeros(1500);
    let twice = craft::zlib(&once);
    assert!(twice.len() < 100_000, "{} bytes", twice.len());
    for bytes in [
        bomb("/Filter /FlateDecode", once),
        bomb("/Filter [/FlateDecode /FlateDecode]", twice),
    ] {
        assert_eq!(
            read(bytes, "a.pdf").expect_err("too much"),
            "needs more than 128 MB of memory to be read; print it to a new PDF and read that"
        );
    }
}

#[test]
fn twenty_thousand_pages() {
    const PAGES: u32 = 20_000;
    let mut o = one_page();
    let kids: Vec<String> = (0..PAGES).map(|i| format!("{} 0 R", 10 + 2 * i)).collect();
    let tree = format!("<< /Type /Pages /Count {PAGES} /Kids [{}] >>", kids.join(" "));
    o.insert(2, tree.into_bytes());
    for i in 0..PAGES {
        o.insert(10 + 2 * i, page_of(11 + 2 * i, "", ""));
        // Lines that are the same on many pages would be taken for running heads.
        let word =
            |n: u32| ["beds", "cans", "sheds", "brooks", "diaries", "gardeners", "plots"][(n % 7) as usize];
        let said = format!(
            "BT /R 10 Tf 50 700 Td ({} near {} of {}) Tj 0 -200 Td (Page {i} is read.) Tj ET\n",
            word(i),
            word(i / 7),
            word(i / 49)
        );
        o.insert(11 + 2 * i, stream("", said));
    }
    let pool = pool(Limits::default());
    let manuscript = pool
        .read_bytes(pdf(&o), std::path::Path::new("a.pdf"))
        .expect("its first pages are read");
    assert!(manuscript.text.contains("Page 0 is") && manuscript.text.contains("Page 1999 is"));
    assert!(!manuscript.text.contains("Page 2000 is"));
    assert_eq!(
        manuscript.remarks,
        ["the last 18000 pages were not read: the file is too long"]
    );
    unharmed(&pool);
}

#[test]
fn arrays_and_dictionaries_nested_a_million_deep() {
    const DEEP: usize = 1_000_000;
    let arrays = ["[".repeat(DEEP), "]".repeat(DEEP)].concat();
    let mut o = one_page();
    o.insert(5, stream("", format!("{TEXT}{arrays} TJ\n")));
    assert_eq!(read(pdf(&o), "content.pdf").as_deref(), Ok(FOUND));

    let hopeless = "is damaged and no page can be found; get another copy or print it to a new PDF";
    o = one_page();
    o.insert(4, page("", &format!("/X {arrays}")));
    assert_eq!(read(pdf(&o), "page.pdf").expect_err("no page"), hopeless);

    // Each level is looked through again from the one around it: the time goes with the square.
    let dictionaries = ["<</A ".repeat(10_000), "1".into(), ">>".repeat(10_000)].concat();
    o.insert(4, page("", &format!("/X {dictionaries}")));
    assert_eq!(read(pdf(&o), "page.pdf").expect_err("no page"), hopeless);

    let unclosed = format!("%PDF-1.4\n1 0 obj {}", "[".repeat(DEEP));
    assert_eq!(
        read(unclosed.into_bytes(), "unclosed.pdf").expect_err("no page"),
        "is cut off before its end and no page can be found; get the complete file"
    );
}

#[test]
fn a_stack_overflow_in_the_first_engine_leaves_the_second() {
    let pool = pool(small());
    let bytes = pdf(&craft::with_deep_braces(one_page()));
    let manuscript = pool
        .read_bytes(bytes, std::path::Path::new("a.pdf"))
        .expect("the second engine knows no such functions");
    assert_eq!(manuscript.text.trim(), FOUND);
    assert_eq!(
        manuscript.remarks,
        [
            "the file is damaged; its text was recovered without columns and headings, so check what is found \
          against the pages"
        ]
    );
    assert_eq!(pool.started(), 2, "the first worker is lost");
    unharmed(&pool);
}

#[test]
fn a_stack_overflow_in_both_engines() {
    let mut o = one_page();
    o.insert(4, page("/XObject << /A 6 0 R >>", ""));
    o.insert(5, stream("", "/A Do\n"));
    o.insert(6, form(6, "/A Do\n"));
    let bytes = pdf(&craft::with_deep_braces(o));
    assert_eq!(read(bytes, "a.pdf").expect_err("both crash"), CRASH);
}

#[test]
fn an_endless_loop_ends_with_the_time() {
    // The first engine crashes, the second follows the parents round and round.
    let seconds = Duration::from_secs(15);
    let limits = Limits {
        time: seconds,
        ..small()
    };
    let start = Instant::now();
    let bytes = pdf(&craft::with_deep_braces(parents_in_a_circle()));
    assert_eq!(read_within(limits, bytes, "a.pdf").expect_err("endless"), CRASH);
    assert!(start.elapsed() >= seconds, "it did not loop");
}

#[test]
fn work_without_end_ends_with_the_time() {
    // The first engine looks through these dictionaries again and again, for hours.
    let bytes = format!("%PDF-1.4\n1 0 obj {}", "<</A ".repeat(2_000_000));
    let limits = Limits {
        time: Duration::from_secs(3),
        ..small()
    };
    let start = Instant::now();
    let pool = pool(limits);
    assert_eq!(
        text(&pool, bytes.into_bytes(), "a.pdf").expect_err("too long"),
        "takes more than 3 seconds to be read; print it to a new PDF and read that"
    );
    let elapsed = start.elapsed();
    assert!((3..60).contains(&elapsed.as_secs()), "{elapsed:?}");
    assert_eq!(pool.started(), 1);
}

#[test]
fn elements_nested_deeper_than_any_document() {
    let deep = "<w:p>".repeat(100_000);
    let said = read(craft::word(&deep), "a.docx").expect_err("too deep");
    assert!(
        said.contains("its elements are nested more than 1000 deep"),
        "{said}"
    );
    let said = read(craft::open_document(&"<o:p>".repeat(100_000)), "a.odt").expect_err("too deep");
    assert!(
        said.contains("its elements are nested more than 1000 deep"),
        "{said}"
    );
    // As deep as allowed is no trouble for any stack.
    let within = [
        &"<w:ins>".repeat(990),
        "<w:p><w:r><w:t>Dry beds.</w:t></w:r></w:p>",
        &"</w:ins>".repeat(990),
    ];
    assert_eq!(
        read(craft::word(&within.concat()), "a.docx").as_deref(),
        Ok("Dry beds.")
    );
}

#[test]
fn packages_that_unpack_to_too_much() {
    let spaces = " ".repeat(80 << 20);
    let said = read(craft::word(&spaces), "a.docx").expect_err("a bomb");
    assert!(said.contains("unpacks to more than 200 times its size"), "{said}");
    // Not suspicious by its ratio, but every empty element takes a place in the tree.
    let body: String = (0..2_500_000u32)
        .map(|i| format!("<b{}/>", i.wrapping_mul(2_654_435_761) >> 8))
        .collect();
    assert_eq!(
        read(craft::word(&body), "a.docx").expect_err("too much"),
        "needs more than 128 MB of memory to be read; open it in a word processor and save it again"
    );
}

#[test]
fn more_text_than_is_handed_over() {
    let limits = Limits {
        output: 10_000,
        ..small()
    };
    let long = format!("<w:p><w:r><w:t>{}</w:t></w:r></w:p>", "Dry beds. ".repeat(1000));
    assert_eq!(
        read_within(limits, craft::word(&long), "a.docx").expect_err("too long"),
        "makes more than 0 MB of text; split it"
    );
}
