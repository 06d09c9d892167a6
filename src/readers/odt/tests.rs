//! What is read from small OpenDocument files, in full.

use super::read;
use crate::manuscript::{BlockKind, Manuscript, Part};
use crate::readers::trial::{blocks, nested, package};

const COMMON: &str = r#"<office:document-styles><office:styles>
<style:style style:name="Standard" style:family="paragraph"/>
<style:style style:name="Title" style:family="paragraph" style:parent-style-name="Standard"/>
<style:style style:name="Caption" style:family="paragraph"/>
<style:style style:name="Tabelle" style:family="paragraph" style:parent-style-name="Caption"/>
<style:style style:name="Up" style:family="text"><style:text-properties style:text-position="super 58%"/></style:style>
</office:styles></office:document-styles>"#;

const AUTOMATIC: &str = r#"<office:automatic-styles>
<style:style style:name="T1" style:family="text" style:parent-style-name="Up"><style:text-properties fo:font-weight="bold"/></style:style>
<style:style style:name="T2" style:family="text"><style:text-properties style:text-position="sub 58%"/></style:style>
<style:style style:name="T3" style:family="text"><style:text-properties fo:font-style="italic"/></style:style>
<style:style style:name="T4" style:family="text"><style:text-properties text:display="none"/></style:style>
<style:style style:name="T5" style:family="text"><style:text-properties style:font-name="Sym"/></style:style>
<style:style style:name="P1" style:family="paragraph"><style:paragraph-properties fo:break-before="page"/></style:style>
<style:style style:name="P2" style:family="paragraph" style:parent-style-name="Standard"><style:text-properties fo:font-weight="bold"/></style:style>
</office:automatic-styles>"#;

fn manuscript(body: &str, more: &[(&str, &str)]) -> Manuscript {
    let content = format!(
        "<?xml version=\"1.0\"?><office:document-content><office:font-face-decls>\
         <style:font-face style:name=\"Sym\" svg:font-family=\"Symbol\"/></office:font-face-decls>{AUTOMATIC}\
         <office:body><office:text>{body}</office:text></office:body></office:document-content>"
    );
    let mut parts = vec![("content.xml", content.as_str()), ("styles.xml", COMMON)];
    parts.extend(more);
    read(&package(&parts)).expect("a whole file")
}

fn text(body: &str) -> String {
    manuscript(body, &[]).text
}

fn p(text: &str) -> String {
    format!("<text:p text:style-name=\"Standard\">{text}</text:p>")
}

fn span(style: &str, text: &str) -> String {
    format!("<text:span text:style-name=\"{style}\">{text}</text:span>")
}

#[test]
fn spans_and_white_space() {
    let body = p(&format!(
        "{}(28)<text:s text:c=\"2\"/>= 2.20,<text:tab/>p<text:line-break/>= .036, χ{}(1), 10{}{}, F{} {}hidden{}",
        span("T3", "t"),
        span("Up", "2"),
        span("T1", "-"),
        span("Up", "5"),
        span("T2", "1,63"),
        span("T4", "not "),
        span("T5", " c"),
    ));
    assert_eq!(
        text(&body),
        "t(28) = 2.20, p = .036, χ²(1), 10⁻⁵, F₁,₆₃ hidden χ\n"
    );
}

#[test]
fn tracked_changes_and_comments() {
    let body = format!(
        "<text:tracked-changes><text:changed-region><text:deletion>{}</text:deletion></text:changed-region>\
         </text:tracked-changes>{}",
        p("p = .04"),
        p(
            "p = <text:change text:change-id=\"1\"/><text:change-start text:change-id=\"2\"/>.03<text:change-end \
           text:change-id=\"2\"/><office:annotation><dc:creator>A</dc:creator><text:p>why?</text:p></office:annotation>."
        )
    );
    assert_eq!(text(&body), "p = .03.\n");
}

#[test]
fn notes_and_text_boxes_follow_their_paragraph() {
    let body = p(
        "p = .03<text:note><text:note-citation>1</text:note-citation><text:note-body><text:p>One plot.</text:p>\
         </text:note-body></text:note> and<draw:frame><draw:text-box><text:p>In the box.</text:p></draw:text-box>\
         <svg:desc>a box</svg:desc></draw:frame> more.",
    );
    let m = manuscript(&body, &[]);
    use BlockKind::{Footnote, Paragraph};
    assert_eq!(
        blocks(&m),
        [
            (Paragraph, Part::Body, "p = .03 and more."),
            (Footnote, Part::Body, "One plot."),
            (Paragraph, Part::Body, "In the box."),
        ]
    );
}

#[test]
fn headings_lists_and_parts() {
    let body = [
        "<text:p text:style-name=\"Title\">Diaries</text:p>".to_string(),
        "<text:table-of-content><text:table-of-content-source/><text:index-body><text:p>Results 3</text:p>\
         </text:index-body></text:table-of-content>"
            .to_string(),
        "<text:list><text:list-item><text:h text:outline-level=\"2\">Method</text:h></text:list-item></text:list>"
            .to_string(),
        format!("<text:list><text:list-item>{}</text:list-item></text:list>", p("a plot")),
        "<text:p text:style-name=\"P2\">Results</text:p>".to_string(),
        p("t(28) = 2.20"),
        format!(
            "<text:bibliography><text:bibliography-source/><text:index-body><text:index-title><text:p>References</text:p>\
             </text:index-title>{}</text:index-body></text:bibliography>",
            p("Spade (2014).")
        ),
    ]
    .concat();
    use BlockKind::{Heading, ListItem, Paragraph};
    use Part::{Body, Front, References};
    assert_eq!(
        blocks(&manuscript(&body, &[])),
        [
            (Heading(1), Front, "Diaries"),
            (Paragraph, Front, "Results 3"),
            (Heading(2), Body, "Method"),
            (ListItem, Body, "a plot"),
            (Heading(1), Body, "Results"),
            (Paragraph, Body, "t(28) = 2.20"),
            (Heading(1), References, "References"),
            (Paragraph, References, "Spade (2014)."),
        ]
    );
}

#[test]
fn tables_with_merged_and_repeated_cells() {
    let cell = |attributes: &str, text: &str| {
        format!("<table:table-cell {attributes}>{}</table:table-cell>", p(text))
    };
    let body = [
        "<text:p text:style-name=\"Tabelle\">Table <text:sequence>1</text:sequence>: Litres</text:p>"
            .to_string(),
        "<table:table><table:table-column table:number-columns-repeated=\"3\"/><table:table-header-rows>"
            .to_string(),
        format!(
            "<table:table-row>{}{}<table:covered-table-cell/></table:table-row></table:table-header-rows>",
            cell("table:number-rows-spanned=\"2\"", "Plot"),
            cell("table:number-columns-spanned=\"2\"", "Litres"),
        ),
        format!(
            "<table:table-row><table:covered-table-cell/>{}{}</table:table-row>",
            cell("", "M"),
            cell("", "SD")
        ),
        format!(
            "<table:table-row>{}{}</table:table-row></table:table>",
            cell("", "Beans"),
            cell("table:number-columns-repeated=\"2\"", "–")
        ),
        p("Note. N = 40."),
    ]
    .concat();
    let m = manuscript(&body, &[]);
    assert_eq!(
        m.text,
        "Table 1: Litres\n\nPlot\tLitres\nM\tSD\nBeans\t–\t–\n\nNote. N = 40.\n"
    );
    let table = &m.tables[0];
    assert_eq!(table.label.as_deref(), Some("Table 1"));
    assert_eq!(
        (table.captions.as_slice(), table.notes.as_slice()),
        (&[0][..], &[8][..])
    );
    let cells: Vec<_> = table
        .cells
        .iter()
        .map(|c| (c.row, c.column, c.rowspan, c.colspan, c.header))
        .collect();
    assert_eq!(
        cells,
        [
            (0, 0, 2, 1, true),
            (0, 1, 1, 2, true),
            (1, 1, 1, 1, true),
            (1, 2, 1, 1, true),
            (2, 0, 1, 1, false),
            (2, 1, 1, 1, false),
            (2, 2, 1, 1, false)
        ]
    );
}

#[test]
fn a_table_that_claims_to_be_endless_is_cut_off() {
    let cell =
        "<table:table-cell table:number-columns-repeated=\"1000000\"><text:p>x</text:p></table:table-cell>";
    let body = format!(
        "<table:table>{}</table:table>",
        format!("<table:table-row table:number-rows-repeated=\"1000000\">{cell}{cell}</table:table-row>")
            .repeat(500)
    );
    let m = manuscript(&body, &[]);
    assert!(m.tables[0].cells.len() < 400_000);
}

#[test]
fn formulas_are_read_from_their_objects() {
    let math = "<math xmlns=\"m\"><semantics><mrow><msup><mi>χ</mi><mn>2</mn></msup><mo>=</mo><mn>4.10</mn></mrow>\
                <annotation encoding=\"StarMath 5.0\">%chi^2</annotation></semantics></math>";
    let body = p(
        "It differed, <draw:frame><draw:object xlink:href=\"./Object 1\"/><draw:image/></draw:frame>, p = .043",
    );
    let m = manuscript(&body, &[("Object 1/content.xml", math)]);
    assert_eq!(m.text, "It differed, χ² = 4.10, p = .043\n");
    let inside = p(&format!(
        "so <draw:frame><draw:object>{math}</draw:object></draw:frame>."
    ));
    assert_eq!(text(&inside), "so χ² = 4.10.\n");
}

#[test]
fn pages_are_counted_where_they_are_recorded() {
    let body = [
        p("one"),
        p("one <text:soft-page-break/>two"),
        "<text:p text:style-name=\"P1\">three</text:p>".to_string(),
        "<text:soft-page-break/>".to_string(),
        p("four"),
    ]
    .concat();
    let m = manuscript(&body, &[]);
    let pages: Vec<_> = ["two", "three", "four"]
        .iter()
        .map(|w| {
            let at = m.text.find(w).expect("it is in the text");
            let block = m
                .blocks
                .iter()
                .find(|b| b.range.contains(&at))
                .expect("in a block");
            m.place(block, at..at + w.len()).page
        })
        .collect();
    assert_eq!(pages, [Some(2), Some(3), Some(4)]);
}

#[test]
fn each_refusal_says_what_to_do() {
    let said = |parts: &[(&str, &str)]| read(&package(parts)).expect_err("a refusal").0;
    assert_eq!(
        said(&[("a.txt", "")]),
        "is a zip file but not an OpenDocument text (it has no content part); open it in a word processor and \
         save it again as .odt"
    );
    assert_eq!(
        said(&[("content.xml", "<a><b></a>")]),
        "is a damaged OpenDocument file (in its content its text stops making sense at byte 7); open it in a \
         word processor and save it again"
    );
    assert_eq!(
        said(&[
            ("content.xml", "x"),
            ("META-INF/manifest.xml", "<m:encryption-data/>")
        ]),
        "is protected with a password; open it in a word processor and save it without one"
    );
    assert_eq!(
        said(&[(
            "content.xml",
            "<a><office:body><office:spreadsheet/></office:body></a>"
        )]),
        "is not an OpenDocument text (it has no text body, as a table sheet or slides have none); open it in a \
         word processor and save it again as .odt"
    );
}

#[test]
fn damaged_parts_are_refused_or_read_never_a_panic() {
    let body = format!(
        "{}<text:list><text:list-item>{}</text:list-item></text:list><table:table><table:table-row><table:table-cell \
         table:number-columns-spanned=\"2\">{}</table:table-cell><table:covered-table-cell/></table:table-row>\
         </table:table><text:h text:outline-level=\"1\">Results</text:h>{}",
        p(&format!("t{}", span("Up", "2"))),
        p("x"),
        p("y"),
        p("z<text:note><text:note-body><text:p>n</text:p></text:note-body></text:note>")
    );
    let content = format!(
        "<office:document-content>{AUTOMATIC}<office:body><office:text>{body}</office:text></office:body>\
         </office:document-content>"
    );
    let whole = package(&[("content.xml", &content), ("styles.xml", COMMON)]);
    // Every place changed in turn, in several ways.
    for at in 0..whole.len() {
        for change in [0x01, 0x80, 0xff] {
            let mut bytes = whole.clone();
            bytes[at] ^= change;
            let _ = read(&bytes);
        }
    }
    for at in 0..whole.len() {
        let _ = read(&whole[..at]);
    }
    let mut read_through = 0;
    let mut tried = 0;
    for (at, _) in content.char_indices() {
        for put in ["", "<", "9", "</text:p>"] {
            let changed = format!(
                "{}{put}{}",
                &content[..at],
                content[at..].chars().skip(1).collect::<String>()
            );
            tried += 1;
            read_through += usize::from(read(&package(&[("content.xml", &changed)])).is_ok());
        }
    }
    assert!(read_through > 0 && read_through < tried);
}

#[test]
fn deep_nesting_is_no_danger() {
    for name in [
        "text:list><text:list-item",
        "text:section",
        "table:table><table:table-row><table:table-cell",
    ] {
        let depth = 990 / name.split("><").count();
        assert_eq!(text(&nested(name, depth, &p("deep"))), "deep\n", "{name}");
    }
    assert_eq!(text(&p(&nested("text:span", 980, "deep"))), "deep\n");
    for (depth, name) in [
        (480, "math:mrow"),
        (970, "math:mrow"),
        (970, "math:msup"),
        (970, "math:mfrac"),
    ] {
        let inside = nested(name, depth, "<math:mi>x</math:mi>");
        let formula = nested("draw:frame><draw:object><math:math", 1, &inside);
        // Beyond 500 the formula reader gives up what is inside.
        assert_eq!(text(&p(&formula)).contains('x'), depth < 500, "{name}");
    }
}
