//! What a person sees on a page is what is read, page by page and file by file.

use super::sample::{At, at, bold, content, pdf, sized};
use super::*;
use crate::manuscript::Part;
use std::time::Duration;

/// Both ways, one after the other.
fn read(bytes: &[u8]) -> Result<Manuscript, Unreadable> {
    super::read(bytes).or_else(|failure| match failure {
        Failure::TryRescue => rescue(bytes),
        Failure::Unreadable(reason) => Err(reason),
    })
}

fn read_pages(pages: &[Vec<At>]) -> Manuscript {
    let contents: Vec<String> = pages.iter().map(|p| content(p)).collect();
    read(&pdf(&contents, "")).expect("the sample is a PDF")
}

fn texts(m: &Manuscript) -> Vec<&str> {
    m.blocks.iter().map(|b| m.block_text(b)).collect()
}

/// Lines of text about as wide as a column of 240 points, from `y` downwards.
fn column(x: f32, y: f32, lines: &'static [&'static str]) -> Vec<At<'static>> {
    lines
        .iter()
        .enumerate()
        .map(|(i, text)| at(x, y - 12.0 * i as f32, text))
        .collect()
}

const LEFT: &[&str] = &[
    "Gardeners kept a diary of every can of water that they",
    "carried to their beds, and the diaries were collected at",
    "the end of each month by the secretary of the society,",
    "who entered them into a spreadsheet without looking at",
    "the yield. Those who kept a diary watered more often, t",
];
const RIGHT: &[&str] = &[
    "(118) = 2.31, p = .023, than those who did not keep one,",
    "and the difference was there in each of the four months.",
    "Rain was measured with a gauge on the roof of the shed,",
    "and the differences between the plots were small when",
    "compared with the differences between the weeks.",
];

#[test]
fn two_columns_under_a_title_are_read_one_after_the_other() {
    let mut page = vec![bold(
        120.0,
        740.0,
        18.0,
        "Watering diaries and the yield of gardens",
    )];
    // The file draws the lines of both columns in turn.
    for (l, r) in column(50.0, 700.0, LEFT)
        .into_iter()
        .zip(column(320.0, 700.0, RIGHT))
    {
        page.push(l);
        page.push(r);
    }
    let m = read_pages(&[page]);
    let all = texts(&m);
    assert_eq!(all.len(), 2, "{all:#?}");
    assert!(all[1].starts_with("Gardeners kept") && all[1].ends_with("between the weeks."));
    let found = all[1]
        .find("t (118) = 2.31, p = .023")
        .expect("the result is joined across columns");
    let block = &m.blocks[1];
    let place = m.place(block, block.range.start + found..block.range.start + found + 7);
    assert_eq!((place.page, place.line), (Some(1), Some(6)));
    let after = m.text.find("p = .023").expect("in the text");
    assert_eq!(m.place(block, after..after + 8).line, Some(7));
}

#[test]
fn short_lines_beside_text_are_a_column_when_their_heights_do_not_go_with_it() {
    let beside = [
        "Cans of water",
        "First plot 31",
        "Second plot 27",
        "Third plot 40",
        "In all 98",
        "Spades: 12",
    ];
    let mut page = column(50.0, 700.0, LEFT);
    let right = beside
        .iter()
        .enumerate()
        .map(|(i, text)| at(320.0, 695.0 - 17.0 * i as f32, text));
    page.extend(right);
    let m = read_pages(&[page]);
    let left = m
        .text
        .find("they carried to their beds")
        .expect("lines of one column are joined");
    let first = m.text.find("Cans of water").expect("the other column is read");
    assert!(
        left < first && m.text.find("First plot 31").is_some_and(|p| p > first),
        "{}",
        m.text
    );
}

#[test]
fn no_line_begins_anew_behind_a_comma() {
    // `52)` looks like the number of a list entry.
    let m = read_pages(&[column(
        50.0,
        700.0,
        &[
            "The age of the gardener made no difference to them, F(1,",
            "52) = 0.31, p = .580, and neither did the distance to tap",
            "and butt, nor the size of the plot that was watered.",
        ],
    )]);
    assert!(m.text.contains("F(1, 52) = 0.31, p = .580"), "{}", m.text);
    assert_eq!(m.blocks.len(), 1);
}

#[test]
fn raised_and_lowered_characters_keep_their_level() {
    let m = read_pages(&[vec![
        at(50.0, 700.0, "The groups differed, F"),
        sized(140.2, 697.5, 7.0, "1,45"),
        at(153.0, 700.0, " = 7.25, p = 3.4 x 10"),
        sized(234.5, 704.0, 7.0, "-5"),
        at(240.6, 700.0, " and this was known."),
        sized(325.0, 704.0, 7.0, "12,13"),
    ]]);
    assert_eq!(
        texts(&m),
        ["The groups differed, F₁,₄₅ = 7.25, p = 3.4 x 10⁻⁵ and this was known.¹²,¹³"]
    );
}

#[test]
fn a_paragraph_goes_on_across_pages_headers_and_footnotes() {
    let header = |n: &'static str| {
        vec![
            sized(50.0, 770.0, 9.0, "Allotment Studies 12 (2014)"),
            sized(520.0, 770.0, 9.0, n),
        ]
    };
    let mut pages = Vec::new();
    for (i, n) in ["101", "102", "103"].into_iter().enumerate() {
        let mut page = header(n);
        if i == 0 {
            page.extend(column(50.0, 700.0, LEFT));
            page.push(sized(50.0, 90.0, 8.0, "1 The society has 240 plots."));
        } else if i == 1 {
            page.extend(column(50.0, 700.0, RIGHT));
        } else {
            page.extend(column(
                50.0,
                700.0,
                &["Nothing else happened in the gardens in that year."],
            ));
        }
        pages.push(page);
    }
    let m = read_pages(&pages);
    let all = texts(&m);
    assert!(
        !m.text.contains("Allotment Studies") && !m.text.contains("102"),
        "{all:#?}"
    );
    assert_eq!(all.len(), 3, "{all:#?}");
    let result = "t (118) = 2.31, p = .023";
    let start = m.text.find(result).expect("joined across the page");
    assert_eq!(m.place(&m.blocks[0], start..start + 1).page, Some(1));
    let p = m.text.find("p = .023").expect("joined across the page");
    assert_eq!(m.place(&m.blocks[0], p..p + 8).page, Some(2));
    assert_eq!(m.blocks[1].kind, BlockKind::Footnote);
}

#[test]
fn sections_captions_and_references_are_told_apart() {
    let m = read_pages(&[vec![
        bold(50.0, 740.0, 12.0, "Abstract"),
        at(50.0, 720.0, "We asked 120 gardeners, t(118) = 2.31, p = .023."),
        bold(50.0, 690.0, 12.0, "1. Introduction"),
        at(
            50.0,
            670.0,
            "Gardeners keep diaries of the water that they carry to their beds in summer.",
        ),
        at(
            50.0,
            658.0,
            "They were collected at the end of each month by the secretary of the society.",
        ),
        sized(50.0, 620.0, 9.0, "Table 1. Litres per week by group"),
        at(50.0, 600.0, "Group"),
        at(150.0, 600.0, "M"),
        at(250.0, 600.0, "p"),
        at(50.0, 588.0, "Diary"),
        at(150.0, 588.0, "31.4"),
        at(250.0, 588.0, ".023"),
        bold(50.0, 550.0, 12.0, "References"),
        at(
            50.0,
            530.0,
            "Plotholder, B. (2011). Cans and cabbages. Allotment Studies, 3, 12-18. p = .900.",
        ),
    ]]);
    let seen: Vec<(BlockKind, Part, &str)> = m
        .blocks
        .iter()
        .map(|b| {
            (
                b.kind,
                b.part,
                m.block_text(b).split(' ').next().unwrap_or_default(),
            )
        })
        .collect();
    use BlockKind::{Caption, Heading, Paragraph};
    assert_eq!(
        seen,
        [
            (Heading(1), Part::Abstract, "Abstract"),
            (Paragraph, Part::Abstract, "We"),
            (Heading(1), Part::Body, "1."),
            (Paragraph, Part::Body, "Gardeners"),
            (Caption, Part::Body, "Table"),
            (Paragraph, Part::Body, "Group"),
            (Paragraph, Part::Body, "Diary"),
            (Heading(1), Part::References, "References"),
            (Paragraph, Part::References, "Plotholder,"),
        ]
    );
}

#[test]
fn pages_with_nothing_but_the_same_line_keep_it() {
    let page = vec![at(50.0, 720.0, "Watered more often, p = .023.")];
    let m = read_pages(&[page.clone(), page.clone(), page]);
    assert_eq!(m.text.matches("p = .023").count(), 3, "{}", m.text);
}

#[test]
fn line_numbers_of_manuscripts_are_set_aside() {
    let mut page = Vec::new();
    let numbers = ["21", "22", "23", "24", "25"];
    for (i, (text, n)) in LEFT.iter().zip(numbers).enumerate() {
        let y = 700.0 - 24.0 * i as f32;
        page.push(sized(40.0, y, 8.0, n));
        page.push(at(72.0, y, text));
    }
    let m = read_pages(&[page]);
    assert_eq!(texts(&m), [LEFT.join(" ")]);
}

#[test]
fn words_hyphenated_at_the_line_end_are_joined() {
    let m = read_pages(&[column(
        50.0,
        700.0,
        &[
            "Gardeners kept a diary of every can of water, and the differ-",
            "ence between the groups was not small at all (p = .03).",
        ],
    )]);
    assert!(m.text.contains("and the difference between"), "{}", m.text);
}

#[test]
fn turned_pages_are_read_upright() {
    // The page is shown a quarter turn clockwise, and its text is written to be upright then.
    let line = "BT /R 10 Tf 0 1 -1 0 100 50 Tm (Watered more often, p = .023.) Tj ET\n";
    let m = read(&pdf(&[line.to_string()], "/Rotate 90")).expect("the sample is a PDF");
    assert_eq!(texts(&m), ["Watered more often, p = .023."]);
    // A landscape table on an upright page.
    let m = read(&pdf(&[line.to_string()], "")).expect("the sample is a PDF");
    assert_eq!(texts(&m), ["Watered more often, p = .023."]);
}

#[test]
fn what_is_cropped_away_is_not_read() {
    let page = content(&[
        at(50.0, 700.0, "Seen on the page."),
        at(50.0, 20.0, "Printer's mark."),
    ]);
    let m = read(&pdf(&[page], "/CropBox [0 100 600 800]")).expect("the sample is a PDF");
    assert_eq!(texts(&m), ["Seen on the page."]);
}

#[test]
fn pages_without_text_are_named() {
    let error = read(&pdf(&[String::new()], "")).expect_err("nothing to read");
    assert!(error.0.starts_with("has no text on its pages; "), "{}", error.0);
    let image = "q 500 0 0 700 50 50 cm BI /W 1 /H 1 /CS /G /BPC 8 ID \u{1} EI Q\n".to_string();
    let error = read(&pdf(std::slice::from_ref(&image), "")).expect_err("nothing to read");
    assert_eq!(
        error.0,
        "has no text layer on page 1 (page images only): run text recognition on it first"
    );
    let m = read(&pdf(&[content(&[at(50.0, 700.0, "Seen.")]), image], "")).expect("the sample is a PDF");
    assert_eq!(
        m.remarks,
        ["page 2 without text (images only): not read; run text recognition on the file"]
    );
}

#[test]
fn damaged_files_have_one_reason() {
    let whole = pdf(&[content(&column(50.0, 700.0, LEFT))], "");
    for (bytes, reason) in [
        (&b"Dear editor, this is a letter."[..], "is not a PDF although"),
        (&b"%PDF-1.4\nnothing behind it"[..], "is cut off before its end"),
        (&whole[..40], "is cut off before its end"),
    ] {
        let error = read(bytes).expect_err("nothing to read");
        assert!(error.0.starts_with(reason), "{}", error.0);
        assert!(!error.0.contains('\n'));
    }
    // What is there is read, and the person is told.
    let table = memchr::memmem::rfind(&whole, b"xref\n0 ").expect("the sample has a table of objects");
    let cut = table + 30;
    let m = read(&whole[..cut]).expect("the page is still there");
    assert!(m.text.contains("Gardeners kept"));
    assert_eq!(
        m.remarks,
        ["the file is cut off before its end; pages may be missing"]
    );
}

#[test]
fn forms_that_draw_each_other_without_end_are_given_up() {
    let bytes = include_bytes!("../../../fixtures/broken/nested-forms.pdf");
    let start = std::time::Instant::now();
    let limits = Limits {
        time: Duration::from_secs(3),
        ..Limits::default()
    };
    let result = read_within(bytes, limits);
    assert!(start.elapsed() < Duration::from_secs(20));
    if let Ok(m) = result {
        assert!(
            m.remarks.iter().any(|r| r.contains("only read in part")),
            "{:?}",
            m.remarks
        );
    }
}

#[test]
fn files_locked_without_a_password_open_and_others_say_so() {
    let open = include_bytes!("../../../fixtures/broken/owner-password.pdf");
    let m = read(open).expect("opens without a password");
    assert_eq!(texts(&m), ["Watered more often, p = .023."]);
    let locked = include_bytes!("../../../fixtures/broken/user-password.pdf");
    let error = read(locked).expect_err("needs a password");
    assert!(error.0.starts_with("is encrypted; "), "{}", error.0);
}
