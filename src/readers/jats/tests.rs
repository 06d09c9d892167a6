use super::read;
use crate::manuscript::{BlockKind, Manuscript, Part};

/// The text of a body, as read.
fn body(xml: &str) -> String {
    article(&format!("<body>{xml}</body>")).text
}

fn article(content: &str) -> Manuscript {
    let source = format!(
        "<?xml version='1.0'?>\n<!DOCTYPE article PUBLIC '-//NLM//DTD JATS//EN' 'JATS.dtd'>\n\
         <article xmlns:mml='http://www.w3.org/1998/Math/MathML' xmlns:xlink='x'>{content}</article>"
    );
    read(&source).expect("the test writes good XML")
}

fn reason(source: &str) -> String {
    read(source).expect_err("the file is bad").0
}

#[test]
fn front_matter_gives_title_and_abstract_only() {
    let m = article(
        "<front><journal-meta><journal-title>Plot Notes</journal-title></journal-meta><article-meta>\
         <article-id>10.1/x</article-id><title-group><article-title>Watering <italic>diaries</italic>\
         <fn><p>A note.</p></fn></article-title></title-group>\
         <contrib-group><contrib><name>Gardener</name></contrib></contrib-group>\
         <permissions><license><license-p>p = .99</license-p></license></permissions>\
         <abstract><p>Plots differed, <italic>p</italic> = .03.</p></abstract>\
         <abstract abstract-type='summary'><title>In short</title><sec><title>Aim</title><p>Less.</p></sec></abstract>\
         <custom-meta-group><custom-meta><meta-value>3</meta-value></custom-meta></custom-meta-group>\
         </article-meta></front><body><p>Body.</p></body>",
    );
    assert_eq!(
        m.text,
        "Watering diaries\n\nA note.\n\nAbstract\n\nPlots differed, p = .03.\n\nIn short\n\nAim\n\nLess.\n\nBody.\n"
    );
    let parts: Vec<Part> = m.blocks.iter().map(|b| b.part).collect();
    let mut expected = vec![Part::Front; 2];
    expected.extend([Part::Abstract; 5]);
    expected.push(Part::Body);
    assert_eq!(parts, expected);
    assert_eq!(m.blocks[4].kind, BlockKind::Heading(1));
    assert_eq!(m.section_path(&m.blocks[6]), ["In short", "Aim"]);
    // The body stands neither in a section of the abstract nor in one named after the article.
    assert_eq!(m.blocks[7].section, None);
}

#[test]
fn sections_keep_their_depth_and_end() {
    let m = article(
        "<body><sec><label>2</label><title>Results</title><p>A.</p><sec><title>Plots</title><p>B.</p></sec>\
         <p>C.</p></sec><sec><p>D.</p></sec></body>",
    );
    assert_eq!(m.text, "2 Results\n\nA.\n\nPlots\n\nB.\n\nC.\n\nD.\n");
    let path = |at: usize| m.section_path(&m.blocks[at]).join("/");
    assert_eq!(
        [path(1), path(3), path(4), path(5)],
        ["2 Results", "2 Results/Plots", "2 Results", ""]
    );
}

#[test]
fn back_matter_is_told_apart_and_references_are_left_out() {
    let m = article(
        "<body><sec><title>Results</title><p>A.</p></sec></body><back><ack><title>Thanks</title><p>To all.</p></ack>\
         <fn-group><fn fn-type='conflict'><p>None, p = .5.</p></fn>\
         <fn id='n1'><label>1</label><p>Without one plot, p = .04.</p></fn></fn-group>\
         <app-group><app><title>Appendix A</title><p>More, p = .2.</p></app></app-group>\
         <sec><title>Data</title><p>On the shelf.</p></sec>\
         <glossary><def-list><def-item><term>CI</term><def><p>confidence interval</p></def></def-item></def-list></glossary>\
         <ref-list><title>References</title><ref><mixed-citation>p = .01</mixed-citation></ref></ref-list></back>\
         <floats-group><fig><label>Figure 1</label><caption><p>Litres.</p></caption></fig></floats-group>\
         <sub-article><body><p>p = .77</p></body></sub-article><response><body><p>p = .78</p></body></response>",
    );
    assert_eq!(
        m.text,
        "Results\n\nA.\n\nThanks\n\nTo all.\n\nNone, p = .5.\n\n¹ Without one plot, p = .04.\n\nAppendix A\n\n\
         More, p = .2.\n\nData\n\nOn the shelf.\n\nCI: confidence interval\n\nFigure 1. Litres.\n"
    );
    let of = |text: &str| {
        let block = m.blocks.iter().find(|b| m.block_text(b).contains(text));
        block.map(|b| (b.kind, b.part))
    };
    assert_eq!(of("To all"), Some((BlockKind::Paragraph, Part::Back)));
    assert_eq!(of("None,"), Some((BlockKind::Footnote, Part::Back)));
    assert_eq!(of("Without"), Some((BlockKind::Footnote, Part::Body)));
    assert_eq!(of("More"), Some((BlockKind::Paragraph, Part::Body)));
    assert_eq!(of("shelf"), Some((BlockKind::Paragraph, Part::Back)));
    assert_eq!(of("CI"), Some((BlockKind::ListItem, Part::Back)));
    assert_eq!(of("Litres"), Some((BlockKind::Caption, Part::Body)));
    assert_eq!(
        m.remarks,
        ["letters about the article that stand in the same file were not read"]
    );
}

#[test]
fn inline_markup_is_transparent() {
    assert_eq!(
        body(
            "<p><italic>F</italic><sub>[2,14]</sub> = 4.11, <bold><italic>P</italic></bold> = 0.31, \
             <sc>d</sc> <monospace>=</monospace> <named-content content-type='x'>0.4</named-content>, \
             <ext-link xlink:href='u'>here</ext-link>; <styled-content>x</styled-content><x>, </x>y<break/>z</p>"
        ),
        "F[₂,₁₄] = 4.11, P = 0.31, d = 0.4, here; x, y z\n"
    );
}

#[test]
fn raised_and_lowered_text_may_be_nested() {
    assert_eq!(
        body(
            "<p>η<sup>2</sup><sub>p</sub> = .1, η<sub><italic>p</italic></sub><sup><bold>2</bold></sup> = .2, \
             χ<sup>2</sup>(1, <italic>N</italic> = 90), 10<sup>&#x2212;5</sup>, 10<sup>a<sub>2</sub>b</sup> \
             t<sub>28</sub>, <sup>***</sup>p</p>"
        ),
        "η²p = .1, ηp² = .2, χ²(1, N = 90), 10⁻⁵, 10ᵃ₂ᵇ t₂₈, ***p\n"
    );
}

#[test]
fn citations_never_become_digits_of_a_number() {
    assert_eq!(
        body(
            "<p>p = .03<sup><xref ref-type='bibr' rid='r1'>12</xref>,<xref ref-type='bibr' rid='r2'>13</xref></sup> and \
             p = .04<xref ref-type='bibr' rid='r1'>7</xref> but [<xref ref-type='bibr' rid='r1'>8</xref>,<xref ref-type='bibr' rid='r2'>9</xref>] and \
             Reed (<xref ref-type='bibr' rid='r3'>2014</xref>); note<xref ref-type='fn' rid='f'>3</xref></p>"
        ),
        "p = .03¹²,¹³ and p = .04⁷ but [8,9] and Reed (2014); note³\n"
    );
}

#[test]
fn a_sentence_is_not_torn_by_what_stands_in_it() {
    assert_eq!(
        body(
            "<p>Watering<fn><label>a</label><p>In litres.</p></fn> differed, <italic>t</italic>(28) \
             <disp-formula><label>(1)</label><mml:math><mml:mo>=</mml:mo><mml:mn>2.20</mml:mn></mml:math></disp-formula>, \
             <table-wrap><label>Table 1</label><caption><p>Plots</p></caption><table><tr><td>1</td></tr></table></table-wrap>\
             <italic>p</italic> = .036.<disp-formula><mml:math><mml:mi>d</mml:mi></mml:math></disp-formula>so</p><p>Next.</p>"
        ),
        "Watering differed, t(28) = 2.20, p = .036. d so\n\nᵃ In litres.\n\nTable 1. Plots\n\n1\n\nNext.\n"
    );
}

#[test]
fn a_list_in_a_paragraph_stands_where_it_stands() {
    let m = article(
        "<body><p>Before: <list><list-item><label>1.</label><p>one</p></list-item><list-item><p>two</p>\
         <p>and more</p></list-item></list> after, p = .03.</p>\
         <disp-quote><p>Rain!</p><attrib>A gardener</attrib></disp-quote></body>",
    );
    assert_eq!(
        m.text,
        "Before:\n\n1. one\n\ntwo\n\nand more\n\nafter, p = .03.\n\nRain!\n\nA gardener\n"
    );
    let kinds: Vec<BlockKind> = m.blocks.iter().map(|b| b.kind).collect();
    use BlockKind::{ListItem, Paragraph, Quote};
    assert_eq!(
        kinds,
        [Paragraph, ListItem, ListItem, ListItem, Paragraph, Quote, Quote]
    );
}

#[test]
fn a_formula_in_three_forms_is_read_once() {
    let math = "<mml:math><mml:msup><mml:mi>χ</mml:mi><mml:mn>2</mml:mn></mml:msup><mml:mo>=</mml:mo><mml:mn>4.1</mml:mn></mml:math>";
    let tex = "<tex-math>\\documentclass{minimal}\\begin{document}$$\\chi^2=4.1$$\\end{document}</tex-math>";
    for order in [
        format!("<alternatives><graphic/>{tex}{math}</alternatives>"),
        format!("<alternatives>{math}{tex}<textual-form>chi2 = 4.1</textual-form></alternatives>"),
        format!("{tex}{math}"),
        format!("{math}<inline-graphic/>"),
    ] {
        assert_eq!(
            body(&format!("<p>a <inline-formula>{order}</inline-formula>, b</p>")),
            "a χ² = 4.1, b\n",
            "{order}"
        );
    }
    assert_eq!(
        body(&format!(
            "<p>a <inline-formula><alternatives><graphic/>{tex}</alternatives></inline-formula>, b</p>"
        )),
        "a χ²=4.1, b\n"
    );
    assert_eq!(
        body(
            "<p>a <inline-formula><alternatives><graphic/><textual-form>p = .1</textual-form></alternatives></inline-formula></p>"
        ),
        "a p = .1\n"
    );
    assert_eq!(
        body(
            "<p>a <inline-formula><italic>p</italic> = .03</inline-formula> <tex-math>$d = 2$</tex-math></p>"
        ),
        "a p = .03 d = 2\n"
    );
}

#[test]
fn pictures_of_formulas_and_tables_are_remarked_on() {
    let m = article(
        "<body><p>a <inline-formula><inline-graphic/></inline-formula> b <disp-formula><graphic/></disp-formula></p>\
         <table-wrap><label>Table 3</label><caption><p>C</p></caption><graphic/></table-wrap></body>",
    );
    assert_eq!(m.text, "a b\n\nTable 3. C\n");
    assert_eq!(
        m.remarks,
        [
            "Table 3 is stored as a picture and was not read",
            "2 formulas are stored only as pictures and were not read"
        ]
    );
}

#[test]
fn tables_know_their_label_caption_and_notes() {
    let m = article(
        "<body><table-wrap><label>Table 2.</label><caption><title>Litres</title><p>Per plot.</p></caption>\
         <alternatives><graphic/><table><colgroup><col/></colgroup><thead><tr><td rowspan='2'>Plot</td><td colspan='2'>Litres</td></tr>\
         <tr><th><italic>M</italic></th><th>SD</th></tr></thead>\
         <tbody><tr><td>North</td><td><p>3.1<sup>a</sup></p></td><td>0.45<xref ref-type='table-fn' rid='x'>***</xref></td></tr>\
         <tr><td>South<break/>side</td><td/><td><list><list-item><p>−1</p></list-item><list-item><p>2</p></list-item></list></td></tr>\
         </tbody></table></alternatives>\
         <table-wrap-foot><fn id='x'><label>***</label><p>p &lt; .001</p></fn><p>Note.</p></table-wrap-foot></table-wrap>\
         <p>After.</p></body>",
    );
    assert_eq!(
        m.text,
        "Table 2. Litres\n\nPer plot.\n\nPlot\tLitres\nM\tSD\nNorth\t3.1ᵃ\t0.45***\nSouth side\t\t-1 2\n\n\
         *** p < .001\n\nNote.\n\nAfter.\n"
    );
    let table = &m.tables[0];
    assert_eq!(table.label.as_deref(), Some("Table 2"));
    assert_eq!(table.captions, [0, 1]);
    let notes: Vec<&str> = table.notes.iter().map(|n| m.block_text(&m.blocks[*n])).collect();
    assert_eq!(notes, ["*** p < .001", "Note."]);
    assert_eq!((table.rows, table.columns), (4, 3));
    assert_eq!(table.cells.iter().filter(|c| c.header).count(), 4);
    assert!(
        table
            .cells
            .iter()
            .all(|c| m.blocks[c.block].kind == BlockKind::Cell)
    );
}

#[test]
fn several_tables_may_share_a_label_but_not_a_content() {
    let table = "<table><tr><td>1</td></tr></table>";
    let m = article(&format!(
        "<body><table-wrap><label>Table 1</label>{table}{table}</table-wrap>\
         <table-wrap><label>Table 2</label><alternatives>{table}{table}</alternatives></table-wrap>\
         <table-wrap><label>Table 3</label><table><tr><td>a{table}b</td></tr></table></table-wrap></body>"
    ));
    assert_eq!(
        m.text,
        "Table 1.\n\n1\n\n1\n\nTable 2.\n\n1\n\nTable 3.\n\na 1 b\n"
    );
    let labels: Vec<_> = m.tables.iter().filter_map(|t| t.label.as_deref()).collect();
    assert_eq!(labels, ["Table 1", "Table 1", "Table 2", "Table 3"]);
}

#[test]
fn characters_by_number_and_by_name() {
    assert_eq!(
        body(
            "<p>&chi;&#178;&nbsp;&lt; &#x3b7; &minus;1 <![CDATA[p < .05 & q]]><?page 3?><!-- p = .9 -->.</p>"
        ),
        "χ² < η -1 p < .05 & q.\n"
    );
    let m = read(
        "<!DOCTYPE article [<!ENTITY plot \"north &#38; south\"><!ENTITY % pe \"x\"><!ENTITY far SYSTEM \"f\">\
         <!ENTITY lol \"&plot;&plot;\">]><article><body><p>&plot; &lol; &weed;!</p></body></article>",
    )
    .expect("good XML");
    assert_eq!(m.text, "north & south !\n");
    assert_eq!(
        m.remarks,
        ["characters named lol, weed in the file are not known and were left out"]
    );
}

#[test]
fn bad_files_are_refused_with_the_line() {
    assert_eq!(
        reason("<article>\n<body>\n<p>a</body></article>"),
        "is not well-formed XML near line 3: expected `</p>`, but `</body>` was found; download or export it again"
    );
    assert_eq!(
        reason("<article>\n<body>\n<p>a</p>\n"),
        "is not well-formed XML near line 3: the file ends before `</body>`; download or export it again"
    );
    assert!(reason("<article><body><ref-list><ref>\n</ref-list></body></article>").contains("near line 2"));
    assert!(reason("<article><body><p>a <fn><p>b</fn></p></body></article>").contains("near line 1"));
    assert!(reason("<article><body/></article><article/>").contains("second root"));
    assert!(reason("<svg><text>p = .03</text></svg>").contains("not an article"));
    assert!(reason("").contains("not an article"));
    let deep = format!("<article><body>{}", "<sec>".repeat(5000));
    assert_eq!(
        reason(&deep),
        "has elements nested more than 1000 deep; export it again"
    );
}

#[test]
fn notes_in_notes_do_not_take_forever() {
    let deep = format!(
        "<article><body><p>a{}b{}c</p></body></article>",
        "<fn><p>x".repeat(300),
        "</p></fn>".repeat(300)
    );
    let m = read(&deep).expect("good XML");
    assert!(m.text.starts_with("ac\n\nx\n\nx"), "{}", &m.text[..20]);
    assert_eq!(m.text.matches('x').count(), 300);
}

#[test]
fn collections_of_articles_are_read_through() {
    let m = read(
        "<pmc-articleset><article><body><p>A.</p></body></article><article><front><article-meta><title-group>\
         <article-title>Second</article-title></title-group></article-meta></front><body><p>B.</p></body></article></pmc-articleset>",
    )
    .expect("good XML");
    assert_eq!(m.text, "A.\n\nSecond\n\nB.\n");
}
