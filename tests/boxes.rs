//! Where on the page: boxes in JSON, and the hidden command that draws them over images.

mod helper;

use helper::Scratch;
use serde_json::Value;

const DEMO: &[u8] = include_bytes!("../fixtures/demo/watering.pdf");
/// A white image of one pixel.
const IMAGE: &[u8] =
    b"\x89PNG\r\n\x1a\n\0\0\0\rIHDR\0\0\0\x01\0\0\0\x01\x08\0\0\0\0:~\x9bU\0\0\0\nIDATx\x9cc\xf8\
    \x0f\0\x01\x01\x01\0\x1b\xb6\xeeV\0\0\0\0IEND\xaeB`\x82";

fn area(value: &Value) -> [f64; 4] {
    let list = value.as_array().unwrap_or_else(|| panic!("no box but {value}"));
    [0, 1, 2, 3].map(|i| list[i].as_f64().expect("a number"))
}

fn holds(outer: [f64; 4], inner: [f64; 4]) -> bool {
    outer[0] <= inner[0] && outer[1] <= inner[1] && outer[2] >= inner[2] && outer[3] >= inner[3]
}

#[test]
fn every_quantity_of_a_pdf_has_a_box_within_its_statement() {
    let s = Scratch::new();
    s.file("watering.pdf", DEMO);
    let run = s.run(&["check", "--format", "json", "watering.pdf"]);
    let json: Value = serde_json::from_str(&run.out).expect("valid JSON");
    let text = s.run(&["check", "--format", "text-only", "watering.pdf"]).out;
    let text: Vec<char> = text.chars().collect();
    let statements = json["documents"][0]["statements"].as_array().expect("a list");
    assert!(statements.len() > 10);
    for statement in statements {
        let place = &statement["place"];
        // One box for each line, the first of them as `box`.
        let lines: Vec<(Value, [f64; 4])> = match place["boxes"].as_array() {
            Some(boxes) => boxes
                .iter()
                .map(|b| (b["page"].clone(), area(&b["box"])))
                .collect(),
            None => vec![(place["page"].clone(), area(&place["box"]))],
        };
        assert_eq!(lines[0], (place["page"].clone(), area(&place["box"])));
        for quantity in statement["quantities"].as_array().expect("a list") {
            let (page, own) = (&quantity["page"], area(&quantity["box"]));
            let [width, height] = [own[2] - own[0], own[3] - own[1]];
            assert!(
                (1.0..80.0).contains(&width) && (0.5..20.0).contains(&height),
                "{quantity}"
            );
            assert!(
                lines.iter().any(|(p, line)| p == page && holds(*line, own)),
                "{quantity} is outside {place}"
            );
            let [start, end] = ["start", "end"].map(|k| quantity[k].as_u64().expect("a number") as usize);
            let shown: String = text[start..end].iter().collect();
            assert_eq!(on_the_line(&shown), quantity["printed"], "{quantity}");
        }
    }
}

/// Lowered digits as a person would type them.
fn on_the_line(text: &str) -> String {
    let digit = |c: char| char::from_digit(c as u32 - '₀' as u32, 10).unwrap_or(c);
    text.chars()
        .map(|c| if ('₀'..='₉').contains(&c) { digit(c) } else { c })
        .collect()
}

#[test]
fn pictures_show_the_boxes_over_the_page() {
    let s = Scratch::new();
    s.file("watering.pdf", DEMO).file("images/p-01.png", IMAGE);
    let run = s.run(&[
        "boxes",
        "watering.pdf",
        "--images",
        "images/p-{}.png",
        "--out",
        "seen",
    ]);
    run.is("", "", 0);
    let svg = std::fs::read_to_string(s.path().join("seen/page-1.svg")).expect("the picture");
    assert!(svg.contains("href=\"data:image/png;base64,iVBORw0KGgo"));
    assert!(svg.matches("<rect ").count() > 20, "{}", svg.len());
    assert!(svg.contains("<title>p = .053</title>"), "{svg}");
    // Only pages that have an image are drawn.
    let drawn = std::fs::read_dir(s.path().join("seen")).expect("the folder");
    assert_eq!(drawn.count(), 1);
}

#[test]
fn without_images_every_word_is_listed() {
    let s = Scratch::new();
    s.file("watering.pdf", DEMO);
    let run = s.run(&["boxes", "watering.pdf"]);
    assert_eq!((run.err.as_str(), run.status), ("", 0));
    let line = run
        .out
        .lines()
        .find(|l| l.ends_with("\t2.16,"))
        .expect("the word is there");
    let fields: Vec<f64> = line.split('\t').take(6).filter_map(|f| f.parse().ok()).collect();
    assert!(fields.len() == 6 && fields[4] - fields[2] > 10.0, "{line}");
}

#[test]
fn what_cannot_be_drawn_is_one_line() {
    let s = Scratch::new();
    s.file("watering.pdf", DEMO)
        .file("draft.txt", "t(28) = 2.20, p = .036\n")
        .file("p-1.png", "not an image");
    let run = |arguments: &[&str]| {
        let run = s.run(&[&["boxes"], arguments].concat());
        assert_eq!((run.out.as_str(), run.status), ("", 2));
        run.err
    };
    assert_eq!(
        run(&["draft.txt"]),
        "tieout: draft.txt: nothing in it has a place on a page; boxes are known for PDF only\n"
    );
    assert_eq!(
        run(&["watering.pdf", "--images", "q-{}.png", "--out", "seen"]),
        "tieout: there is no file like q-{}.png\n"
    );
    assert_eq!(
        run(&["watering.pdf", "--images", "p-{}.png", "--out", "seen"]),
        "tieout: ./p-1.png: is neither PNG nor JPEG; convert it\n"
    );
    assert_eq!(
        run(&["missing.pdf"]),
        "tieout: missing.pdf: no such file; check the path\n"
    );
}
