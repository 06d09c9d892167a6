use super::read;
use crate::manuscript::{BlockKind, Manuscript, Part};

fn page(html: &str) -> Manuscript {
    read(html).expect("any page can be read")
}

fn text(html: &str) -> String {
    page(html).text
}

fn kinds(m: &Manuscript) -> Vec<BlockKind> {
    m.blocks.iter().map(|b| b.kind).collect()
}

#[test]
fn a_plain_page() {
    let m = page(
        "<!DOCTYPE html><html><head><title>Plots</title><style>p {}</style><script>var p = .9;</script></head>\n\
         <body><nav><a href=x>Home</a></nav><h1>Watering diaries</h1>\n<h2>Abstract</h2>\n\
         <p>Plots differed, <em>t</em>(54) = 2.88,\n<i>p</i> < .01.\n<p>Unclosed &amp; unquoted\n\
         <h2 class=x>Results</h2><ul><li>one<li>two <b>bold<ul><li>inner</ul></ul>\
         <blockquote>Rain!</blockquote><hr>tail<br>end <!-- p = .8 --></body></html>",
    );
    assert_eq!(
        m.text,
        "Watering diaries\n\nAbstract\n\nPlots differed, t(54) = 2.88, p < .01.\n\nUnclosed & unquoted\n\nResults\n\n\
         one\n\ntwo bold\n\ninner\n\nRain!\n\ntail end\n"
    );
    use BlockKind::*;
    assert_eq!(
        kinds(&m),
        [
            Heading(1),
            Heading(2),
            Paragraph,
            Paragraph,
            Heading(2),
            ListItem,
            ListItem,
            ListItem,
            Quote,
            Paragraph
        ]
    );
    let parts: Vec<Part> = m.blocks.iter().map(|b| b.part).collect();
    use Part::{Abstract, Body};
    assert_eq!(
        parts,
        [
            Body, Abstract, Abstract, Abstract, Body, Body, Body, Body, Body, Body
        ]
    );
}

#[test]
fn places_have_lines() {
    let m = page("<html>\n<p>One\ntwo, p = .03\n\n<p>three\n<table><tr>\n<td>4</table>");
    let line = |needle: &str| {
        let at = m.text.find(needle).expect("the text holds it");
        let block = m
            .blocks
            .iter()
            .find(|b| b.range.contains(&at))
            .expect("in a block");
        m.place(block, at..at + 1).line
    };
    assert_eq!(
        [line("One"), line("p ="), line("three"), line("4")],
        [Some(2), Some(3), Some(5), Some(7)]
    );
}

#[test]
fn the_title_of_the_file_serves_where_no_title_is_shown() {
    assert_eq!(text("<title>Plots &eacute;</title><p>x"), "Plots é\n\nx\n");
    assert_eq!(text("<title>Plots</title><h1>Diaries</h1><p>x"), "Diaries\n\nx\n");
}

#[test]
fn what_is_not_seen_is_not_read() {
    assert_eq!(
        text(
            "<p>a<span hidden>b</span><span style='color:red; display: none'>c</span><span aria-hidden=true>(seen)</span>\
             <template>e</template><noscript>f</noscript><button>g</button><select><option>h</select><textarea><p>i</textarea>\
             <svg><text>j</text></svg> <code>p &lt;- .05</code>k<span class='sr-only'>l</span></p>\
             <div style='visibility:hidden'><p>m<div>n</div></div>\
             <pre class='r'><code>t = 2</code></pre><pre>kept\nlines\n\nmore</pre><div hidden><table><tr><td>o</table></div>z"
        ),
        "a(seen) k\n\nkept lines\n\nmore\n\nz\n"
    );
}

#[test]
fn raised_and_lowered_text() {
    assert_eq!(
        text(
            "<p>χ<sup>2</sup>(1) = 4.10, η<sub><em>p</em></sub><sup>2</sup> = .07, F<sub>1,63</sub>, 10<sup>&minus;5</sup>, \
             p = .03<sup><a href='#fn1'>12</a></sup> 0.45<sup>***</sup>"
        ),
        "χ²(1) = 4.10, ηp² = .07, F₁,₆₃, 10⁻⁵, p = .03¹² 0.45***\n"
    );
}

#[test]
fn formulas_are_read_once_whatever_drew_them() {
    let mathml = "<math><semantics><mrow><mi>p</mi><mo>=</mo><mn>.048</mn></mrow><annotation encoding='application/x-tex'>p = .048</annotation></semantics></math>";
    let tex = "<script type=\"math/tex\">p = .048</script>";
    for formula in [
        "<span class=\"math inline\"><em>p</em> = .048</span>".to_string(),
        "<span class=\"math inline\">\\(p = .048\\)</span>".to_string(),
        "<span class='math'>$p = .048$</span>".to_string(),
        "\\(p = .048\\)".to_string(),
        "\\[p = .048\\]".to_string(),
        "$$p = .048$$".to_string(),
        mathml.to_string(),
        format!("<span class=\"katex\"><span class=\"katex-mathml\">{mathml}</span><span class=\"katex-html\" aria-hidden=\"true\"><span>p</span>=.048</span></span>"),
        "<span class=\"katex\"><span class=\"katex-html\" aria-hidden=\"true\"><span>p</span> = <span>.048</span></span></span>".to_string(),
        format!("<span class='MathJax_Preview'>p</span><span class='MathJax'><nobr aria-hidden='true'>p=.048</nobr><span class='MJX_Assistive_MathML'>{mathml}</span></span>{tex}"),
        format!("<span class='MathJax'><nobr>p=.0&thinsp;48</nobr></span>{tex}"),
        "<span class='MathJax' data-mathml='&lt;math&gt;&lt;mi&gt;p&lt;/mi&gt;&lt;mo&gt;=&lt;/mo&gt;&lt;mn&gt;.048&lt;/mn&gt;&lt;/math&gt;'><nobr>p=.048</nobr></span>".to_string(),
        format!("<mjx-container class='MathJax'><mjx-math aria-hidden='true'><mjx-c>p</mjx-c></mjx-math><mjx-assistive-mml>{mathml}</mjx-assistive-mml></mjx-container>"),
        format!("<span class='mwe-math-element'><span class='mwe-math-mathml-inline' style='display: none;'>{mathml}</span><img class='mwe-math-fallback-image-inline' alt='{{\\displaystyle p = .048}}'></span>"),
        "<img class='math inline' alt='p = .048'>".to_string(),
        tex.to_string(),
        mathml.replace('<', "<mml:").replace("<mml:/", "</mml:").replace("<mml:math", "<math").replace("</mml:math", "</math"),
    ] {
        assert_eq!(text(&format!("<p>a {formula}, b</p>")), "a p = .048, b\n", "{formula}");
    }
}

#[test]
fn marks_of_tex_without_their_other_half_are_text() {
    assert_eq!(
        text("<p>costs $$ 5 \\( and $3 or $4"),
        "costs $$ 5 \\( and $3 or $4\n"
    );
    assert_eq!(
        text("<p>a <span class=math>\\chi^2(1) = 4</span> b"),
        "a χ²(1) = 4 b\n"
    );
}

#[test]
fn a_formula_that_never_ends_ends_with_its_paragraph() {
    assert_eq!(text("<p>a <math><mi>p</mi><mo>=<p>b</p>"), "a p =\n\nb\n");
}

#[test]
fn tables_with_caption_header_and_notes() {
    let m = page(
        "<p>Before<table><caption>Table 2: <b>Litres</b></caption><colgroup><col></colgroup>\
         <thead><tr><td rowspan=2>Plot<td colspan=2>Litres<tr><th>M<th>SD</thead>\n<tbody>\
         <tr><th>North</th><td>3.1<sup>a</sup></td><td><p>0.45***</p></td></tr> <tr><td>South<br>side<td><td>&minus;1</tr></tbody>\
         <tfoot><tr><td colspan=3>*** p &lt; .001</td></tr></tfoot></table>after",
    );
    assert_eq!(
        m.text,
        "Before\n\nTable 2: Litres\n\nPlot\tLitres\nM\tSD\nNorth\t3.1ᵃ\t0.45***\nSouth side\t\t-1\n\n*** p < .001\n\nafter\n"
    );
    let table = &m.tables[0];
    assert_eq!(table.label.as_deref(), Some("Table 2"));
    let of = |blocks: &[usize]| -> Vec<String> {
        blocks
            .iter()
            .map(|b| m.block_text(&m.blocks[*b]).to_string())
            .collect()
    };
    assert_eq!(of(&table.captions), ["Table 2: Litres"]);
    assert_eq!(of(&table.notes), ["*** p < .001"]);
    let at: Vec<_> = table.cells.iter().map(|c| (c.row, c.column, c.header)).collect();
    assert_eq!(
        at,
        [
            (0, 0, true),
            (0, 1, true),
            (1, 1, true),
            (1, 2, true),
            (2, 0, true),
            (2, 1, false),
            (2, 2, false),
            (3, 0, false),
            (3, 1, false),
            (3, 2, false)
        ]
    );
}

#[test]
fn captions_beside_a_table_are_its_captions() {
    for html in [
        "<figure><table><tr><td>1</table><figcaption>Table S3. Plots</figcaption></figure>",
        "<p class=caption>Table S3. Plots</p><table><tr><td>1</table>",
    ] {
        let m = page(html);
        assert_eq!(m.tables[0].label.as_deref(), Some("Table S3"), "{html}");
        let caption = &m.blocks[m.tables[0].captions[0]];
        assert_eq!(m.block_text(caption), "Table S3. Plots");
    }
    let m = page("<table><tr><td>1</table><p class=table-note>Note. p < .05");
    assert_eq!(m.blocks[m.tables[0].notes[0]].kind, BlockKind::TableNote);
    let m = page("<figure><img><figcaption>Figure 1. Plots</figcaption></figure><table><tr><td>1</table>");
    assert_eq!(
        (m.tables[0].label.as_deref(), m.tables[0].captions.len()),
        (None, 0)
    );
}

#[test]
fn tables_that_arrange_the_page_are_no_tables() {
    let m = page(
        "<table><tr><td><h2>Results</h2><p>A.</p><p>B.</p></td><td>menu<table><tr><td>1<td>2</table></td></tr></table>\
         <table role=presentation><tr><td><p>C.</table>",
    );
    assert_eq!(m.text, "Results\n\nA.\n\nB.\n\nmenu\n\n1\t2\n\nC.\n");
    assert_eq!(m.tables.len(), 1);
}

#[test]
fn parts_are_known_by_heading_or_mark() {
    let m = page(
        "<h1 class=title>T</h1><section class=abstract><h2>Aim</h2><p>A.</p></section><p>Loose.</p>\
         <h2>1. Results</h2><p>B.</p><h2>Acknowledgements</h2><p>C.</p><h2>Appendix A</h2><p>D.</p>\
         <div id=refs class='references csl-bib-body'><div>Reed, p = .01</div></div>\
         <section class=footnotes role=doc-endnotes><hr><ol><li id=fn1><p>E, p = .02.\
         <a href=# class=footnote-back role=doc-backlink>↩</a></p></li></ol></section><h2 id=references>Literature cited</h2><p>F",
    );
    let of = |needle: &str| {
        let block = m.blocks.iter().find(|b| m.block_text(b).contains(needle));
        block.map(|b| (b.kind, b.part))
    };
    use BlockKind::{Footnote, Heading, Paragraph};
    assert_eq!(of("T"), Some((Heading(1), Part::Front)));
    assert_eq!(of("A."), Some((Paragraph, Part::Abstract)));
    assert_eq!(of("Loose"), Some((Paragraph, Part::Body)));
    assert_eq!(of("B."), Some((Paragraph, Part::Body)));
    assert_eq!(of("C."), Some((Paragraph, Part::Back)));
    assert_eq!(of("D."), Some((Paragraph, Part::Body)));
    assert_eq!(of("Reed"), Some((Paragraph, Part::References)));
    assert_eq!(of("E, p"), Some((Footnote, Part::Body)));
    assert_eq!(of("F"), Some((Paragraph, Part::References)));
    // A section ends with its element.
    let loose = m
        .blocks
        .iter()
        .find(|b| m.block_text(b) == "Loose.")
        .expect("it is there");
    assert_eq!(m.section_path(loose), ["T"]);
}

#[test]
fn crossed_and_missing_tags() {
    assert_eq!(
        text("<p>a <b>b <i>c</b> d</i> e</div></p></p>f"),
        "a b c d e\n\nf\n"
    );
    assert_eq!(
        text("<dl><dt>CI<dd>interval<dt>SD<dd>spread</dl>x"),
        "CI\n\ninterval\n\nSD\n\nspread\n\nx\n"
    );
    assert_eq!(text("<table><td>1<td>2<tr><td>3</table></td>4"), "1\t2\n3\n\n4\n");
    assert_eq!(text("<td>1</td><tr>2"), "1\n\n2\n");
    assert_eq!(
        text("<table><tr><td>a<table><tr><td>b</table>c<tr><td>d</table>").replace('\t', "|"),
        "a\n\nb\n\nc\n\nd\n"
    );
    assert_eq!(
        text("<h2>Title<h3>Sub</h3>x<p>y<h2>z"),
        "Title\n\nSub\n\nx\n\ny\n\nz\n"
    );
}

#[test]
fn anything_ends() {
    for piece in [
        "<div>",
        "<table><tr><td>",
        "<sup>",
        "<a b=\"",
        "<!--",
        "&#",
        "<math><msup>",
        "</p>",
        "<span class=katex>",
        "<span class=MathJax>x",
        "<pre>",
        "<script>",
        "\\(",
        "<p hidden>",
        "<table><caption>",
        "<ul><li>",
        "<section><h2>x",
        "<b></i>",
    ] {
        let long = piece.repeat(20_000);
        let m = page(&format!("start {long} end"));
        assert!(m.text.starts_with("start"), "{piece}");
    }
}

#[test]
fn a_heading_that_is_marked_itself_speaks_for_what_follows() {
    let m = read("<h1 id=references>References</h1><p>Reed, p = .5</p>").expect("it is readable");
    assert_eq!(m.blocks.last().map(|b| b.part), Some(Part::References));
}
