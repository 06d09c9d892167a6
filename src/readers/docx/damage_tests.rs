//! Damaged and hostile Word files: refused or read, never a panic, never without end.

use super::read;
use super::tests::{RAISED, file, p, r, set, styled, tc, text};
use crate::readers::trial::{Random, nested, package};

/// A file with something of everything, for the tests below.
fn rich() -> String {
    let table = format!(
        "<w:tbl><w:tr>{}{}</w:tr><w:tr>{}{}</w:tr></w:tbl>",
        tc("<w:vMerge w:val=\"restart\"/>", "a"),
        tc("<w:gridSpan w:val=\"2\"/>", "b"),
        tc("<w:vMerge/>", ""),
        tc("", "c")
    );
    [
        styled("H1", "Results"),
        format!("<w:p>{}{}<w:r><w:footnoteReference w:id=\"2\"/></w:r></w:p>", set(RAISED, "2"), r("&amp; t(28)")),
        "<w:p><w:r><w:fldChar w:fldCharType=\"begin\"/><w:instrText>TOC</w:instrText><w:fldChar w:fldCharType=\"separate\"/>\
         <w:t>x</w:t><w:fldChar w:fldCharType=\"end\"/></w:r></w:p>"
            .to_string(),
        p("Table 1"),
        table,
        p("Note. n = 3"),
        "<w:p><m:oMath><m:f><m:num><m:r><m:t>a</m:t></m:r></m:num><m:den><m:r><m:t>b</m:t></m:r></m:den></m:f></m:oMath></w:p>"
            .to_string(),
    ]
    .concat()
}

#[test]
fn damaged_packages_are_refused_or_read_never_a_panic() {
    let notes = format!(
        "<w:footnotes><w:footnote w:id=\"2\">{}</w:footnote></w:footnotes>",
        p("Note.")
    );
    let whole = file(&rich(), &[("word/footnotes.xml", &notes)]);
    let mut random = Random(7);
    for _ in 0..4000 {
        let mut bytes = whole.clone();
        for _ in 0..=random.below(6) {
            if bytes.len() < 2 {
                break;
            }
            let at = random.below(bytes.len());
            match random.below(4) {
                0 => bytes[at] = random.below(256) as u8,
                1 => bytes[at] ^= 1 << random.below(8),
                2 => bytes.truncate(at.max(1)),
                _ => {
                    bytes.remove(at);
                }
            }
        }
        let _ = read(&bytes);
    }
}

#[test]
fn damaged_parts_are_refused_or_read_never_a_panic() {
    let document = format!("<w:document><w:body>{}</w:body></w:document>", rich());
    let pieces: Vec<&str> = document.split_inclusive('>').collect();
    let mut random = Random(11);
    let mut read_through = 0;
    for round in 0..3000 {
        let changed = if round % 2 == 0 {
            // Tags taken out, doubled and swapped: mostly broken.
            let mut pieces = pieces.clone();
            let (a, b) = (random.below(pieces.len()), random.below(pieces.len()));
            match random.below(3) {
                0 => drop(pieces.remove(a)),
                1 => pieces.insert(a, pieces[b]),
                _ => pieces.swap(a, b),
            }
            pieces.concat()
        } else {
            // Names and values changed in pairs: well formed, but nonsense.
            const NAMES: [&str; 12] = [
                "w:p",
                "w:r",
                "w:tc",
                "w:tr",
                "w:tbl",
                "w:t",
                "w:vMerge",
                "w:gridSpan",
                "m:f",
                "m:num",
                "w:fldChar",
                "w:sdtContent",
            ];
            let (a, b) = (NAMES[random.below(12)], NAMES[random.below(12)]);
            document
                .replace(&format!("<{a}>"), &format!("<{b}>"))
                .replace(&format!("</{a}>"), &format!("</{b}>"))
                .replace(
                    "w:val=\"2\"",
                    &format!("w:val=\"{}\"", ["-1", "99999999999", "x", ""][random.below(4)]),
                )
        };
        read_through += usize::from(read(&package(&[("word/document.xml", &changed)])).is_ok());
    }
    // Both ways out are taken.
    assert!((500..2900).contains(&read_through), "{read_through}");
}

#[test]
fn deep_nesting_is_no_danger() {
    for name in [
        "w:sdt><w:sdtContent",
        "w:ins",
        "w:tbl><w:tr><w:tc",
        "w:p><w:r><w:pict><w:txbxContent",
        "mc:AlternateContent><mc:Choice",
    ] {
        let depth = 990 / name.split("><").count();
        assert_eq!(text(&nested(name, depth, &p("deep"))), "deep\n", "{name}");
    }
    for name in [
        "m:f><m:num",
        "m:sSup><m:sup",
        "m:acc><m:e",
        "m:rad><m:deg",
        "m:limUpp><m:lim",
        "m:m><m:mr",
    ] {
        let formula = nested(name, 480, "<m:r><m:t>x</m:t></m:r>");
        assert!(
            text(&format!("<w:p><m:oMath>{formula}</m:oMath></w:p>")).contains('x'),
            "{name}"
        );
    }
    let refused = read(&file(&"<w:ins>".repeat(2000), &[])).expect_err("too deep");
    assert!(refused.0.contains("nested more than 1000 deep"), "{refused}");
}
