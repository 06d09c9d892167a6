//! What is read from small Word files, in full.

use super::read;
use crate::manuscript::{BlockKind, Manuscript, Part};
use crate::readers::trial::{blocks, package};

const STYLES: &str = r#"<w:styles>
<w:style w:type="paragraph" w:styleId="Normal" w:default="1"><w:name w:val="Normal"/></w:style>
<w:style w:type="paragraph" w:styleId="Titel"><w:name w:val="Title"/></w:style>
<w:style w:type="paragraph" w:styleId="H1"><w:name w:val="heading 1"/></w:style>
<w:style w:type="paragraph" w:styleId="H2"><w:name w:val="heading 2"/></w:style>
<w:style w:type="paragraph" w:styleId="Cap"><w:name w:val="caption"/></w:style>
<w:style w:type="character" w:styleId="Up"><w:name w:val="Raised"/><w:rPr><w:vertAlign w:val="superscript"/></w:rPr></w:style>
<w:style w:type="character" w:styleId="Hid"><w:name w:val="Hidden"/><w:rPr><w:vanish/></w:rPr></w:style>
</w:styles>"#;

/// A Word file with this body and these further parts.
pub(super) fn file(body: &str, more: &[(&str, &str)]) -> Vec<u8> {
    let document = format!("<?xml version=\"1.0\"?><w:document><w:body>{body}</w:body></w:document>");
    let mut parts = vec![
        ("word/document.xml", document.as_str()),
        ("word/styles.xml", STYLES),
    ];
    parts.extend(more);
    package(&parts)
}

fn manuscript(body: &str, more: &[(&str, &str)]) -> Manuscript {
    read(&file(body, more)).expect("a whole file")
}

pub(super) fn text(body: &str) -> String {
    manuscript(body, &[]).text
}

/// A paragraph with one run.
pub(super) fn p(text: &str) -> String {
    format!("<w:p>{}</w:p>", r(text))
}

pub(super) fn styled(style: &str, text: &str) -> String {
    format!(
        "<w:p><w:pPr><w:pStyle w:val=\"{style}\"/></w:pPr>{}</w:p>",
        r(text)
    )
}

pub(super) fn r(text: &str) -> String {
    format!("<w:r><w:t xml:space=\"preserve\">{text}</w:t></w:r>")
}

pub(super) fn set(properties: &str, text: &str) -> String {
    format!("<w:r><w:rPr>{properties}</w:rPr><w:t xml:space=\"preserve\">{text}</w:t></w:r>")
}

pub(super) const RAISED: &str = "<w:vertAlign w:val=\"superscript\"/>";
const LOWERED: &str = "<w:vertAlign w:val=\"subscript\"/>";

#[test]
fn runs_split_anywhere_are_one_text() {
    let body = format!(
        "<w:p>{}{}{}<w:r><w:tab/><w:t>p</w:t><w:br/><w:t>= .0</w:t></w:r><w:proofErr/>{}</w:p>",
        set("<w:i/>", "t"),
        r("(2"),
        r("8) = 2.20,"),
        r("36, post<w:noBreakHyphen/>"
            .replace(
                "<w:noBreakHyphen/>",
                "</w:t><w:noBreakHyphen/><w:softHyphen/><w:t>hoc"
            )
            .as_str())
    );
    assert_eq!(text(&body), "t(28) = 2.20, p = .036, post-hoc\n");
}

#[test]
fn raised_and_lowered_runs() {
    let body = format!(
        "<w:p>{}{}{}{}{}{}{}{}{}{}{}{}</w:p>",
        r("χ"),
        set("<w:rStyle w:val=\"Up\"/>", "2"),
        r("(1) = 4.10, p = 3.4 × 10"),
        set(RAISED, "-"),
        set(RAISED, ""),
        set(RAISED, "5"),
        r(", F"),
        set(LOWERED, "1,"),
        set(LOWERED, "63"),
        r(" = 7.25, η"),
        set(LOWERED, "p"),
        set(RAISED, "2"),
    );
    assert_eq!(text(&body), "χ²(1) = 4.10, p = 3.4 × 10⁻⁵, F₁,₆₃ = 7.25, ηp²\n");
}

#[test]
fn symbol_fonts() {
    let body = format!(
        "<w:p>{}{}{}<w:r><w:sym w:font=\"Symbol\" w:char=\"F0B1\"/></w:r>{}</w:p>",
        set("<w:rFonts w:ascii=\"Symbol\" w:hAnsi=\"Symbol\"/>", "c"),
        set(RAISED, "2"),
        r("(1) = 4.1, 3.2 "),
        r(" 0.4, \u{f062} = .2")
    );
    assert_eq!(text(&body), "χ²(1) = 4.1, 3.2 ± 0.4, β = .2\n");
}

#[test]
fn tracked_changes_are_read_as_accepted() {
    let body = format!(
        "<w:p>{}<w:del><w:r><w:delText>.04</w:delText></w:r></w:del><w:ins>{}</w:ins>\
         <w:moveFrom>{}</w:moveFrom><w:moveTo>{}</w:moveTo></w:p>\
         <w:p><w:pPr><w:rPr><w:del/></w:rPr></w:pPr>{}</w:p>{}\
         <w:p><w:pPr><w:rPr><w:del/></w:rPr></w:pPr><w:del><w:r><w:delText>gone</w:delText></w:r></w:del></w:p>{}",
        r("p = "),
        r(".03"),
        r(" (moved away)"),
        r(" (moved here)"),
        r("First half, "),
        p("second half."),
        p("End."),
    );
    assert_eq!(
        text(&body),
        "p = .03 (moved here)\n\nFirst half, second half.\n\nEnd.\n"
    );
}

#[test]
fn fields_keep_their_result() {
    let field = |instruction: &str, result: &str| {
        format!(
            "<w:r><w:fldChar w:fldCharType=\"begin\"/></w:r><w:r><w:instrText>{instruction}</w:instrText></w:r>\
             <w:r><w:fldChar w:fldCharType=\"separate\"/></w:r>{}<w:r><w:fldChar w:fldCharType=\"end\"/></w:r>",
            r(result)
        )
    };
    let body = format!(
        "<w:p>{}{}{}<w:fldSimple w:instr=\"SEQ Table\">{}</w:fldSimple>{}</w:p>",
        r("As "),
        field(
            "ADDIN ZOTERO_ITEM CSL_CITATION {\"p\": \"= .9\"}",
            "(Spade, 2014)"
        ),
        r(" says in Table "),
        r("2"),
        r("."),
    );
    assert_eq!(text(&body), "As (Spade, 2014) says in Table 2.\n");
}

#[test]
fn a_reference_list_is_known_by_its_field() {
    let body = format!(
        "{}<w:p><w:r><w:fldChar w:fldCharType=\"begin\"/><w:instrText>ADDIN EN.REFLIST</w:instrText>\
         <w:fldChar w:fldCharType=\"separate\"/></w:r>{}</w:p><w:p>{}<w:r><w:fldChar w:fldCharType=\"end\"/></w:r></w:p>{}\
         <w:sdt><w:sdtPr><w:tag w:val=\"MENDELEY_BIBLIOGRAPHY\"/></w:sdtPr><w:sdtContent>{}</w:sdtContent></w:sdt>",
        p("Text."),
        r("Spade, A. (2014)."),
        r("Trowel, B. (2016)."),
        p("More text."),
        p("Hoe, C. (2018)."),
    );
    let m = manuscript(&body, &[]);
    let parts: Vec<_> = m.blocks.iter().map(|b| b.part).collect();
    use Part::{Body, References};
    assert_eq!(parts, [Body, References, References, Body, References]);
}

#[test]
fn hidden_text_and_comments_are_not_read() {
    let body = format!(
        "<w:p>{}{}{}{}<w:commentRangeStart/><w:r><w:commentReference w:id=\"0\"/></w:r></w:p>",
        r("shown"),
        set("<w:vanish/>", " hidden"),
        set("<w:rStyle w:val=\"Hid\"/>", " hidden"),
        set("<w:rStyle w:val=\"Hid\"/><w:vanish w:val=\"0\"/>", " again"),
    );
    let comments = (
        "word/comments.xml",
        "<w:comments><w:comment><w:p/></w:comment></w:comments>",
    );
    assert_eq!(manuscript(&body, &[comments]).text, "shown again\n");
}

#[test]
fn notes_follow_the_paragraph_that_refers_to_them() {
    let body = format!(
        "<w:p>{}<w:r><w:footnoteReference w:id=\"2\"/></w:r>{}<w:r><w:endnoteReference w:id=\"2\"/></w:r></w:p>{}",
        r("p = .03"),
        r(" and more."),
        p("Next."),
    );
    let notes = |name: &str, inner: &str| {
        format!(
            "<w:{name}s><w:{name} w:type=\"separator\" w:id=\"-1\">{}</w:{name}><w:{name} w:id=\"2\">{}</w:{name}></w:{name}s>",
            p("line"),
            inner
        )
    };
    let foot = notes(
        "footnote",
        &format!(
            "<w:p><w:r><w:footnoteRef/></w:r>{}</w:p>{}",
            r(" One plot, t(3) = 1.2."),
            p("Two.")
        ),
    );
    let end = notes("endnote", &p("An endnote."));
    let m = manuscript(
        &body,
        &[("word/footnotes.xml", &foot), ("word/endnotes.xml", &end)],
    );
    use BlockKind::{Footnote, Paragraph};
    assert_eq!(
        blocks(&m),
        [
            (Paragraph, Part::Body, "p = .03 and more."),
            (Footnote, Part::Body, "One plot, t(3) = 1.2."),
            (Footnote, Part::Body, "Two."),
            (Footnote, Part::Body, "An endnote."),
            (Paragraph, Part::Body, "Next."),
        ]
    );
}

#[test]
fn text_boxes_are_read_once_after_their_paragraph() {
    let body = format!(
        "<w:p>{}<w:r><mc:AlternateContent><mc:Choice><w:drawing><wps:txbx><w:txbxContent>{}</w:txbxContent></wps:txbx>\
         </w:drawing></mc:Choice><mc:Fallback><w:pict><v:textbox><w:txbxContent>{}</w:txbxContent></v:textbox></w:pict>\
         </mc:Fallback></mc:AlternateContent></w:r>{}</w:p>",
        r("Before "),
        p("In the box."),
        p("In the box."),
        r("after."),
    );
    assert_eq!(text(&body), "Before after.\n\nIn the box.\n");
}

#[test]
fn wrappers_are_looked_through() {
    let body = format!(
        "<w:sdt><w:sdtContent><w:p><w:hyperlink>{}</w:hyperlink><w:smartTag><w:smartTagPr/>{}</w:smartTag>\
         <w:sdt><w:sdtPr/><w:sdtContent>{}</w:sdtContent></w:sdt></w:p></w:sdtContent></w:sdt>",
        r("one "),
        r("two "),
        r("three"),
    );
    assert_eq!(text(&body), "one two three\n");
}

#[test]
fn headings_and_parts() {
    let body = [
        styled("Titel", "Watering diaries"),
        p("A. Spade, Institute of Mulch"),
        "<w:p><w:pPr><w:jc w:val=\"center\"/></w:pPr><w:r><w:t>Abstract</w:t></w:r></w:p>".to_string(),
        p("Forty gardeners, p = .02."),
        p("Keywords: water"),
        styled("H1", "Study 1"),
        format!("<w:p>{}</w:p>", set("<w:b/>", "Method")),
        format!("<w:p>{}</w:p>", set("<w:b/>", "Participants")),
        p("Participants"),
        "<w:p><w:pPr><w:numPr><w:numId w:val=\"3\"/></w:numPr></w:pPr><w:r><w:t>a plot</w:t></w:r></w:p>"
            .to_string(),
        styled("H2", "Results"),
        p("t(28) = 2.20"),
        p("Acknowledgements"),
        p("Thanks to the slugs."),
        p("References"),
        p("Spade, A. (2014). p = .01."),
        styled("H1", "Appendix A"),
        p("More."),
    ]
    .concat();
    use BlockKind::{Heading, ListItem, Paragraph};
    use Part::{Abstract, Back, Body, Front, References};
    let m = manuscript(&body, &[]);
    assert_eq!(
        blocks(&m),
        [
            (Heading(1), Front, "Watering diaries"),
            (Paragraph, Front, "A. Spade, Institute of Mulch"),
            (Heading(1), Abstract, "Abstract"),
            (Paragraph, Abstract, "Forty gardeners, p = .02."),
            (Paragraph, Front, "Keywords: water"),
            (Heading(1), Body, "Study 1"),
            (Heading(2), Body, "Method"),
            (Heading(3), Body, "Participants"),
            (Paragraph, Body, "Participants"),
            (ListItem, Body, "a plot"),
            (Heading(2), Body, "Results"),
            (Paragraph, Body, "t(28) = 2.20"),
            (Heading(1), Back, "Acknowledgements"),
            (Paragraph, Back, "Thanks to the slugs."),
            (Heading(1), References, "References"),
            (Paragraph, References, "Spade, A. (2014). p = .01."),
            (Heading(1), Body, "Appendix A"),
            (Paragraph, Body, "More."),
        ]
    );
    assert_eq!(
        m.section_path(&m.blocks[8]),
        ["Study 1", "Method", "Participants"]
    );
}

pub(super) fn tc(properties: &str, text: &str) -> String {
    format!("<w:tc><w:tcPr>{properties}</w:tcPr>{}</w:tc>", p(text))
}

#[test]
fn tables_with_merged_cells_captions_and_notes() {
    let body = [
        p("Table 2"),
        format!("<w:p>{}</w:p>", set("<w:i/>", "Litres per week")),
        "<w:tbl><w:tblPr><w:tblLook w:val=\"04A0\"/></w:tblPr>".to_string(),
        format!(
            "<w:tr>{}{}</w:tr>",
            tc("<w:vMerge w:val=\"restart\"/>", "Plot"),
            tc("<w:gridSpan w:val=\"2\"/>", "Litres")
        ),
        format!(
            "<w:tr>{}{}{}</w:tr>",
            tc("<w:vMerge/>", ""),
            tc("", "M"),
            tc("", "SD")
        ),
        format!(
            "<w:tr>{}<w:tc>{}{}</w:tc>{}</w:tr>",
            tc("", "Beans"),
            p("3.45"),
            p("(0.91)"),
            tc("", "1.22")
        ),
        "</w:tbl>".to_string(),
        "<w:p/>".to_string(),
        p("Note. N = 40."),
        format!("<w:p>{}{}</w:p>", set(RAISED, "a"), r(" One gardener left.")),
        p("Running text."),
    ]
    .concat();
    let m = manuscript(&body, &[]);
    assert_eq!(
        m.text,
        "Table 2\n\nLitres per week\n\nPlot\tLitres\nM\tSD\nBeans\t3.45 (0.91)\t1.22\n\nNote. N = 40.\n\n\
         ᵃ One gardener left.\n\nRunning text.\n"
    );
    let table = &m.tables[0];
    assert_eq!(table.label.as_deref(), Some("Table 2"));
    assert_eq!(table.captions, [0, 1]);
    let notes: Vec<_> = table.notes.iter().map(|n| m.block_text(&m.blocks[*n])).collect();
    assert_eq!(notes, ["Note. N = 40.", "ᵃ One gardener left."]);
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
fn tables_behind_the_references_are_results() {
    let table = format!("<w:tbl><w:tr>{}{}</w:tr></w:tbl>", tc("", "p"), tc("", ".03"));
    let body = [
        p("References"),
        p("Spade (2014)."),
        styled("Cap", "Table 1. Litres"),
        table,
        p("Figure 1. Plots."),
    ]
    .concat();
    let m = manuscript(&body, &[]);
    use Part::{Body, References};
    let parts: Vec<_> = m.blocks.iter().map(|b| b.part).collect();
    assert_eq!(parts, [References, References, Body, Body, Body, Body]);
    assert_eq!(m.blocks[5].kind, BlockKind::Caption);
    assert_eq!(m.tables[0].label.as_deref(), Some("Table 1"));
}

#[test]
fn caption_and_note_inside_the_table() {
    let row = |text: &str| format!("<w:tr>{}</w:tr>", tc("<w:gridSpan w:val=\"2\"/>", text));
    let body = format!(
        "<w:tbl>{}<w:tr>{}{}</w:tr>{}</w:tbl>",
        row("Table 3. Yield"),
        tc("", "kg"),
        tc("", "2.1**"),
        row("**p &lt; .01"),
    );
    let m = manuscript(&body, &[]);
    let table = &m.tables[0];
    assert_eq!(table.label.as_deref(), Some("Table 3"));
    assert_eq!(
        (table.captions.as_slice(), table.notes.as_slice()),
        (&[0][..], &[3][..])
    );
}

#[test]
fn a_caption_below_belongs_to_the_table_above() {
    let table = format!("<w:tbl><w:tr>{}{}</w:tr></w:tbl>", tc("", "p"), tc("", ".03"));
    let body = [p("Text."), table.clone(), p("Table 1: Under."), p("Text."), table].concat();
    let m = manuscript(&body, &[]);
    assert_eq!(m.tables[0].label.as_deref(), Some("Table 1"));
    assert_eq!(m.tables[1].label, None);
}

#[test]
fn nested_tables_and_frames() {
    let inner = format!("<w:tbl><w:tr>{}{}</w:tr></w:tbl>", tc("", "a"), tc("", "b"));
    let outer = format!(
        "<w:tbl><w:tr><w:tc>{}{inner}{}</w:tc>{}</w:tr></w:tbl>",
        p("x"),
        p("y"),
        tc("", "z")
    );
    assert_eq!(text(&outer), "x a b y\tz\n");
    let frame = format!(
        "<w:tbl><w:tr><w:tc>{}{}</w:tc></w:tr></w:tbl>",
        p("One."),
        p("Two.")
    );
    assert_eq!(text(&frame), "One.\n\nTwo.\n");
}

#[test]
fn deleted_rows_are_gone() {
    let body = format!(
        "<w:tbl><w:tr>{0}{0}</w:tr><w:tr><w:trPr><w:del/></w:trPr>{1}{1}</w:tr></w:tbl>",
        tc("", "kept"),
        tc("", "gone")
    );
    assert_eq!(text(&body), "kept\tkept\n");
}

#[test]
fn formulas_stand_in_the_text() {
    let body = format!(
        "<w:p>{}<m:oMath><m:sSup><m:e><m:r><m:t>χ</m:t></m:r></m:e><m:sup><m:r><m:t>2</m:t></m:r></m:sup></m:sSup>\
         <m:d><m:e><m:r><m:t>1</m:t></m:r></m:e></m:d><m:r><m:t> = 4.10</m:t></m:r></m:oMath>{}</w:p>",
        r("differed, "),
        r(", p = .043"),
    );
    assert_eq!(text(&body), "differed, χ²(1) = 4.10, p = .043\n");
}

#[test]
fn pages_are_counted_where_word_recorded_them() {
    let page_of = |m: &Manuscript, words: &str| {
        let at = m.text.find(words).expect("it is in the text");
        let block = m
            .blocks
            .iter()
            .find(|b| b.range.contains(&at))
            .expect("in a block");
        m.place(block, at..at + words.len()).page
    };
    let body = [
        p("one"),
        "<w:p><w:r><w:t>one</w:t><w:br w:type=\"page\"/></w:r></w:p>".to_string(),
        "<w:p><w:r><w:lastRenderedPageBreak/><w:t>two ends </w:t><w:lastRenderedPageBreak/><w:t>three</w:t></w:r></w:p>"
            .to_string(),
        "<w:p><w:pPr><w:pageBreakBefore/></w:pPr><w:r><w:lastRenderedPageBreak/><w:t>four</w:t></w:r></w:p>".to_string(),
    ]
    .concat();
    let m = manuscript(&body, &[]);
    let pages = ["one", "two", "three", "four"].map(|w| page_of(&m, w));
    assert_eq!(pages, [Some(1), Some(2), Some(3), Some(4)]);
    let m = manuscript(
        "<w:p><w:r><w:t>a</w:t><w:br w:type=\"page\"/><w:t>b</w:t></w:r></w:p>",
        &[],
    );
    assert_eq!(page_of(&m, "b"), None);
}

#[test]
fn the_main_part_is_found_through_the_relations() {
    let document = format!(
        "<w:document><w:body>{}</w:body></w:document>",
        styled("Big", "Results")
    );
    let bytes = package(&[
        (
            "_rels/.rels",
            "<Relationships><Relationship Type=\"http://purl.oclc.org/ooxml/officeDocument/relationships/officeDocument\" \
             Target=\"/text/main.xml\"/></Relationships>",
        ),
        (
            "text/_rels/main.xml.rels",
            "<Relationships><Relationship Type=\"http://purl.oclc.org/ooxml/officeDocument/relationships/styles\" \
             Target=\"../looks.xml\"/></Relationships>",
        ),
        (
            "looks.xml",
            "<w:styles><w:style w:styleId=\"Big\"><w:name w:val=\"heading 4\"/></w:style></w:styles>",
        ),
        ("text/main.xml", &document),
    ]);
    let m = read(&bytes).expect("a whole file");
    assert_eq!(blocks(&m), [(BlockKind::Heading(4), Part::Body, "Results")]);
}

#[test]
fn each_refusal_says_what_to_do() {
    let said = |parts: &[(&str, &str)]| read(&package(parts)).expect_err("a refusal").0;
    assert_eq!(
        said(&[("a.txt", "")]),
        "is a zip file but not a Word document (it has no main part); open it in a word processor and save it \
         again as .docx"
    );
    assert_eq!(
        said(&[("word/document.xml", "<w:document><w:body><w:p>")]),
        "is a damaged Word file (in its main part its end is missing); open it in a word processor and save it again"
    );
    assert_eq!(
        said(&[("word/document.xml", "<w:workbook/>")]),
        "is not a Word document (its main part has no text body); open it in a word processor and save it again \
         as .docx"
    );
    let m = manuscript(&p("Text."), &[("word/footnotes.xml", "<w:footnotes><")]);
    assert_eq!(
        m.remarks,
        ["the footnotes of the file are damaged and were not read"]
    );
}
