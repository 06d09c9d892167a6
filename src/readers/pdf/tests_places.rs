//! Boxes sit on what is printed, and results keep their text wherever lines, columns and pages end.

use super::sample::{At, at, content, pdf, sized};
use super::*;
use crate::manuscript::{Area, LineArea};

const RESULT: &str = "t(28) = 2.20, p = .036";

/// `2.20` in [`RESULT`] at (50, 700) in Times-Roman of 10 points, with y upwards. Widths and bounds are
/// those of the font's Adobe Font Metrics: t 278, ( 333, 2 500, 8 500, ) 333, space 250, = 564,
/// period 250; two from 30 to 475, zero from 24 to 476 and from -14 to 676.
const PRINTED: Area = [80.38, 699.86, 97.34, 706.76];

/// Readers stand in for fonts that are not embedded; theirs differ by this much.
const STAND_IN: f32 = 0.3;

fn areas(m: &Manuscript, part: &str) -> Vec<LineArea> {
    let from = m.text.find(part).expect("it is in the text");
    m.areas(from..from + part.len())
}

fn area(m: &Manuscript, part: &str) -> Area {
    let areas = areas(m, part);
    assert_eq!(areas.len(), 1, "{areas:?}");
    areas[0].area
}

fn assert_near(found: Area, expected: Area) {
    let near = found.iter().zip(expected).all(|(f, e)| (f - e).abs() < STAND_IN);
    assert!(near, "{found:?} is not {expected:?}");
}

#[test]
fn boxes_are_where_the_glyphs_are_however_the_page_is_shown() {
    let [left, low, right, high] = PRINTED;
    let page = content(&[at(50.0, 700.0, RESULT)]);
    for (extra, expected) in [
        ("", [left, 800.0 - high, right, 800.0 - low]),
        (
            "/CropBox [20 30 580 790]",
            [left - 20.0, 790.0 - high, right - 20.0, 790.0 - low],
        ),
        // A quarter turn clockwise: up becomes right, and right becomes down.
        (
            "/CropBox [20 30 580 790] /Rotate 90",
            [low - 30.0, left - 20.0, high - 30.0, right - 20.0],
        ),
        (
            "/CropBox [20 30 580 790] /Rotate 180",
            [580.0 - right, low - 30.0, 580.0 - left, high - 30.0],
        ),
        (
            "/CropBox [20 30 580 790] /Rotate -90",
            [790.0 - high, 580.0 - right, 790.0 - low, 580.0 - left],
        ),
    ] {
        let m = read(&pdf(std::slice::from_ref(&page), extra)).expect("the sample is a PDF");
        assert_near(area(&m, "2.20"), expected);
    }
    let m = read(&pdf(&[page], "/UserUnit 2")).expect("the sample is a PDF");
    assert_near(
        area(&m, "2.20").map(|v| v / 2.0),
        [left, 800.0 - high, right, 800.0 - low],
    );
    assert_eq!(m.page_size(1), Some([1200.0, 1600.0]));
}

#[test]
fn a_box_holds_exactly_the_glyphs_of_its_range() {
    let m = read(&pdf(
        &[content(&[
            at(50.0, 700.0, "F"),
            sized(55.8, 697.5, 7.0, "1,45"),
            at(72.0, 700.0, "= 7.25"),
        ])],
        "",
    ))
    .expect("the sample is a PDF");
    assert!(m.text.contains("F₁,₄₅ = 7.25"), "{}", m.text);
    // one from 111 to 394, four from 12 to 472, five from 32 to 438, comma 250.
    let (one, pair) = (area(&m, "₁"), area(&m, "₄₅"));
    assert_near(one, [56.58, 97.77, 58.56, 102.5]);
    assert_near(pair, [55.8 + 5.25 + 0.08, 97.77, 55.8 + 8.75 + 3.07, 102.5 + 0.1]);
    let whole = area(&m, "F₁,₄₅ = 7.25");
    assert!(whole[0] < one[0] && whole[2] > pair[2] + 20.0);
    // Spaces are not drawn.
    assert_eq!(areas(&m, " "), []);
    assert_eq!(area(&m, " ₁,".trim()), area(&m, "₁,"));
}

#[test]
fn a_range_over_lines_and_pages_has_a_box_for_each() {
    let page = |n: usize| {
        let mut lines = vec![
            "Gardeners kept a diary of every can of water that they",
            "carried to their beds, and the diaries were collected at",
        ];
        if n == 0 {
            lines.push("the end of each month by the secretary, who found t(28) =");
        } else {
            lines.splice(0..0, ["2.20, p = .036, for those who kept one in each of the"]);
        }
        let texts: Vec<At> = lines
            .into_iter()
            .enumerate()
            .map(|(i, text)| at(50.0, 700.0 - 12.0 * i as f32, text))
            .collect();
        content(&texts)
    };
    let m = read(&pdf(&[page(0), page(1)], "")).expect("the sample is a PDF");
    let parts = areas(&m, RESULT);
    let at: Vec<_> = parts.iter().map(|p| (p.page, p.line)).collect();
    assert_eq!(at, [(1, Some(3)), (2, Some(1))], "{}", m.text);
    let from = m.text.find(RESULT).expect("joined over the page");
    let place = m.place(&m.blocks[0], from..from + RESULT.len());
    assert_eq!(place.area, Some(parts[0].area));
    assert_eq!(place.areas, parts);
    let json = serde_json::to_value(&place).expect("plain values");
    assert_eq!(json["boxes"][1]["page"], 2);
    assert_eq!(json["boxes"][1]["box"], serde_json::json!(parts[1].area));
    // Within one line there is nothing to add to the box.
    let json = serde_json::to_value(m.place(&m.blocks[0], from..from + 5)).expect("plain values");
    assert!(json["box"].is_array() && json.get("boxes").is_none());
}

#[test]
fn marks_above_one_another_have_one_order() {
    for (base, width, raised, lowered, text) in [
        ("c", 4.4, "2", "17", "c²₁₇ = 28.9"),
        ("n", 5.0, "2", "p", "np² = .14"),
        ("t", 2.8, "*", "28", "t₂₈* = 2.20"),
        ("R", 6.7, "2", "adj", "Radj² = .23"),
    ] {
        let behind = 100.0 + width;
        let value = text.split_once(" = ").expect("an equation").1;
        let equal = format!("= {value}, and so on.");
        let up = sized(behind, 704.0, 7.0, raised);
        let down = sized(behind, 697.5, 7.0, lowered);
        for (first, second) in [(up, down), (down, up)] {
            let m = read(&pdf(
                &[content(&[
                    at(50.0, 700.0, "It was here"),
                    at(100.0, 700.0, base),
                    first,
                    second,
                    at(behind + 2.5 + 3.5 * lowered.len() as f32, 700.0, &equal),
                ])],
                "",
            ))
            .expect("the sample is a PDF");
            assert!(m.text.contains(text), "{} is not {text}", m.text);
        }
    }
}

#[test]
fn text_that_the_file_gives_for_glyphs_is_taken() {
    let line = "BT /R 10 Tf 50 700 Td (The e) Tj /Span << /ActualText (ffi) >> BDC (#) Tj EMC (ciency was ) Tj \
        /Span << /ActualText <FEFF03B7> >> BDC (n) Tj EMC ( = .14, p = .036.) Tj ET\n";
    let m = read(&pdf(&[line.to_string()], "")).expect("the sample is a PDF");
    assert_eq!(m.text, "The efficiency was η = .14, p = .036.\n");
    // The ligature is drawn as one glyph.
    assert_eq!(area(&m, "ff"), area(&m, "ffi"));
}

#[test]
fn a_soft_hyphen_that_is_drawn_divides_a_word() {
    let line = "BT /R 10 Tf 50 700 Td (The gardeners kept a diary, and the differ\\255) Tj \
        0 -12 Td (ence was small in all of the beds, p = .036.) Tj ET\n";
    let m = read(&pdf(&[line.to_string()], "")).expect("the sample is a PDF");
    assert!(m.text.contains("the difference was"), "{}", m.text);
    let word = areas(&m, "difference");
    assert_eq!(word.len(), 2);
}

/// A PDF in a font whose letters are all equally wide, so that lines with as many letters are as long.
fn typed(pages: &[String]) -> Vec<u8> {
    let mut bytes = pdf(pages, "");
    let (old, new) = (b"/Times-Roman", b"/Courier    ");
    let font = memchr::memmem::find(&bytes, old).expect("the sample has the font");
    bytes[font..font + new.len()].copy_from_slice(new);
    bytes
}

/// The words in lines of about this many characters.
fn lines(words: &str, width: usize) -> Vec<String> {
    let mut lines = vec![String::new()];
    for word in words.split(' ') {
        let last = lines.len() - 1;
        if lines[last].len() + word.len() > width {
            lines.push(word.to_string());
        } else {
            if !lines[last].is_empty() {
                lines[last].push(' ');
            }
            lines[last].push_str(word);
        }
    }
    lines
}

/// Results for every place where a line can end, as the words before them grow.
#[test]
fn results_are_whole_wherever_a_line_a_column_or_a_page_ends() {
    let result = "t(28) = 2.20, p = .036, d = 0.80, 95% CI [0.05, 1.54], r(118) = -.31, p < .001, \
        M = 31.4 (SD = 9.9), OR = 1.52 (95% CI 1.10 to 2.10)";
    let filler = "gardeners who kept a diary of the water that they carried to the beds in summer";
    let before: Vec<&str> = filler.split(' ').collect();
    for grow in 0..before.len() {
        let text = format!(
            "There were {} {} and {result} and then {filler} again and {filler} once more.",
            filler,
            before[..grow].join(" ")
        );
        let lines = lines(text.trim(), 48);
        for cut in 1..lines.len().min(7) {
            let show = |from: usize, to: usize, x: f32| -> Vec<(f32, f32, String)> {
                lines[from..to]
                    .iter()
                    .enumerate()
                    .map(|(i, l)| (x, 700.0 - 12.0 * i as f32, l.clone()))
                    .collect()
            };
            let page = |texts: &[(f32, f32, String)]| {
                let texts: Vec<At> = texts.iter().map(|(x, y, t)| sized(*x, *y, 8.0, t)).collect();
                content(&texts)
            };
            let end = lines.len();
            // One page, and two of them.
            let one = vec![page(&show(0, end, 50.0))];
            let two = vec![page(&show(0, cut, 50.0)), page(&show(cut, end, 50.0))];
            let mut all = vec![one, two];
            if cut >= 4 {
                // Two columns, whose lines the file draws in turn.
                let (left, right) = (show(0, cut, 50.0), show(cut, end, 320.0));
                let mut both = Vec::new();
                for i in 0..left.len().max(right.len()) {
                    both.extend(left.get(i).cloned());
                    both.extend(right.get(i).cloned());
                }
                all.push(vec![page(&both)]);
            }
            for pages in all {
                let m = read(&typed(&pages)).expect("the sample is a PDF");
                assert!(m.text.contains(result), "cut at {cut}: {}", m.text);
            }
        }
    }
}
