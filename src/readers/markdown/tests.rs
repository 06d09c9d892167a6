use super::*;
use crate::readers::trial::into_blocks;
use BlockKind::{Caption, Footnote, Heading, ListItem, Paragraph, Quote, TableNote};

fn manuscript(source: &str) -> Manuscript {
    read(source).expect("Markdown is always read")
}

fn text(source: &str) -> String {
    manuscript(source).text.trim_end().to_string()
}

fn blocks(source: &str) -> Vec<(BlockKind, Part, String)> {
    into_blocks(manuscript(source))
}

#[test]
fn inline_results_become_linear_text() {
    for (markdown, want) in [
        ("*F*(2, 310) = 1.44, *p* = .24", "F(2, 310) = 1.44, p = .24"),
        ("_t_(28) = 2.20, __p__ < .05", "t(28) = 2.20, p < .05"),
        ("**p \\< .05**, p \\> .1", "p < .05, p > .1"),
        ("p < .05 and n<i and j>k", "p < .05 and n<i and j>k"),
        ("$\\chi^2(1) = 9.33$, $p<.001$", "χ²(1) = 9.33, p<.001"),
        ("$$t(28) = 2.20$$", "t(28) = 2.20"),
        ("it cost $5 and $6 then", "it cost $5 and $6 then"),
        ("$\\eta^2_p = .14$ and \\(p = .2\\)", "η²p = .14 and p = .2"),
        (
            "χ^2^(1) = 9.33, η~p~^2^ = .1, F~1,45~ = 3",
            "χ²(1) = 9.33, ηp² = .1, F₁,₄₅ = 3",
        ),
        (
            "χ<sup>2</sup>(1), <em>p</em> &lt; .05, H<sub>0</sub>",
            "χ²(1), p < .05, H₀",
        ),
        (
            "&eta;&sup2; = .1, b = &minus;0.3, 3 &plusmn; 1",
            "η² = .1, b = -0.3, 3 ± 1",
        ),
        ("0.45*** and 0.31* but .2**", "0.45*** and 0.31* but .2**"),
        ("0.45\\*\\*\\* **0.45***", "0.45*** 0.45*"),
        (
            "*Note.* *p < .05. **p < .01. ***p < .001.",
            "Note. *p < .05. **p < .01. ***p < .001.",
        ),
        ("r = .38^\\*\\*\\*^, 3.1^a^ 0.2^*^", "r = .38***, 3.1ᵃ 0.2*"),
        (
            "95% CI \\[-0.14, 0.05\\], [1.0, 1.4](see)",
            "95% CI [-0.14, 0.05], [1.0, 1.4](see)",
        ),
        ("95% CI [.1, .2] [@spade2014, p. 3] held", "95% CI [.1, .2] held"),
        ("@rake found more [see -@rake; @hoe]", "found more"),
        ("see @fig-plots and \\@ref(tab:one)", "see … and …"),
        ("we found `r apa(p)` and `lme4`", "we found … and …"),
        ("p = `r p`, t(`r df`) = 2", "p = …, t(…) = 2"),
        (
            "[the plots](http://x.org/a_b \"T\") and ![map](m.png) [x][y]",
            "the plots and map [x][y]",
        ),
        ("<!-- p = .9 -->p = .1<!-- no -->", "p = .1"),
        ("snake_case_name and 2*3*4", "snake_case_name and 234"),
        ("[p = .03]{.smallcaps} here", "p = .03 here"),
        ("y ~ x, ~5 and ~6, ~~gone~~", "y ~ x, ~5 and ~6, gone"),
        ("10^-5^ or 10^-6 or 3.4 x 10^-6", "10⁻⁵ or 10^-6 or 3.4 x 10^-6"),
        ("b = --0.3, 12--18, dry---wet", "b = -0.3, 12–18, dry—wet"),
        (
            "<https://x.org> a@b.org {{< video x >}}",
            "https://x.org a@b.org …",
        ),
        ("\\textit{t}(28) = 2, \\chi = 3 \\newpage", "t(28) = 2, χ = 3"),
        ("[F(1, 61) = 4.40, p = .040]", "[F(1, 61) = 4.40, p = .040]"),
        (
            "line one\\\nline two  \nline three",
            "line one line two line three",
        ),
        (
            "a note[^1] and another^[In place, p = .5.] here",
            "a note and another here\n\nIn place, p = .5.",
        ),
        ("a <span class=\"x\">p = .3</span><br>b", "a p = .3 b"),
    ] {
        assert_eq!(text(markdown), want, "{markdown}");
    }
}

#[test]
fn a_whole_paper() {
    let source = "---\ntitle: \"Mulch *and* water\"\nabstract: |\n  Mulch saved water, *p* = .03.\nbibliography: a.bib\n---\n\n\
```{r setup}\nx <- 1 # p = .9\n```\n\n# Results {#sec-results .unnumbered}\n\nPlots with mulch[^a] were\nwatered less, *t*(28) =\n2.20, *p* = .036.\n\
[^a]: Litres, *p* = .8,\n    per day.\n\n    Second paragraph.\n\nShade\n-----\n\n- First, *p* = .1,\n  as before.\n- Second.\n\n    More on it.\n\n\
1. One\n2. Two\n\n> A gardener said\n> *p* = .5.\n\n<!-- p = .7\n\np = .6 -->\n\n::: {.callout}\nInside, *p* = .4.\n:::\n\n\
![Yield by plot, *r* = .3.](a.png){width=50%}\n\n    x <- t.test(a, b)\n\n\\begin{equation}\nF(1, 38) = 4.4\n\\end{equation}\n\n***\n\n\
# References\n\n::: {#refs}\nSpade (2014), p = .2.\n:::\n\n# Appendix\n\nMore, *p* = .7.\n\n[x]: http://x.org\n";
    let want = [
        (Heading(1), Part::Front, "Mulch and water"),
        (Paragraph, Part::Abstract, "Mulch saved water, p = .03."),
        (Heading(1), Part::Body, "Results"),
        (
            Paragraph,
            Part::Body,
            "Plots with mulch were watered less, t(28) = 2.20, p = .036.",
        ),
        (Footnote, Part::Body, "Litres, p = .8, per day."),
        (Footnote, Part::Body, "Second paragraph."),
        (Heading(2), Part::Body, "Shade"),
        (ListItem, Part::Body, "First, p = .1, as before."),
        (ListItem, Part::Body, "Second."),
        (Paragraph, Part::Body, "More on it."),
        (ListItem, Part::Body, "One"),
        (ListItem, Part::Body, "Two"),
        (Quote, Part::Body, "A gardener said p = .5."),
        (Paragraph, Part::Body, "Inside, p = .4."),
        (Caption, Part::Body, "Yield by plot, r = .3."),
        (Paragraph, Part::Body, "F(1, 38) = 4.4"),
        (Heading(1), Part::References, "References"),
        (Paragraph, Part::References, "Spade (2014), p = .2."),
        (Heading(1), Part::Body, "Appendix"),
        (Paragraph, Part::Body, "More, p = .7."),
    ];
    assert_eq!(blocks(source), want.map(|(k, p, t)| (k, p, t.to_string())));
    let m = manuscript(source);
    for (needle, line) in [
        ("Mulch saved", 4),
        ("t(28)", 15),
        ("2.20", 16),
        ("Second.", 27),
        ("F(1, 38)", 50),
    ] {
        let at = m.text.find(needle).expect("the text holds it");
        let block = m
            .blocks
            .iter()
            .find(|b| b.range.contains(&at))
            .expect("in a block");
        assert_eq!(m.place(block, at..at + 2).line, Some(line), "{needle}");
    }
}

#[test]
fn tables_with_captions_and_notes() {
    let source = "**Table 2.** Litres by plot\n\n| Plot | *M* | *p* |\n|---|--:|:-:|\n| Mulch | 3.4\\*\\*\\* | <.001^a^ |\n| Bare | 5.2*** | $p = .04$ |\n\n\
*Note.* *p* values are two-sided.\n\nText.\n\n  Plot       M     SD\n------- ------ ------\n  Mulch    3.4    1.1\n\nTable: Yield {#tbl-yield}\n\n\
+------+-----+\n| Plot | *M* |\n+======+=====+\n| Bare | 5.2 |\n+------+-----+\n\n: Table 4. Drawn\n";
    let m = manuscript(source);
    assert_eq!(
        m.text,
        "Table 2. Litres by plot\n\nPlot\tM\tp\nMulch\t3.4***\t<.001ᵃ\nBare\t5.2***\tp = .04\n\nNote. p values are two-sided.\n\nText.\n\n\
         Plot\tM\tSD\nMulch\t3.4\t1.1\n\nYield\n\nPlot\tM\nBare\t5.2\n\nTable 4. Drawn\n"
    );
    let labels: Vec<Option<&str>> = m.tables.iter().map(|t| t.label.as_deref()).collect();
    assert_eq!(labels, [Some("Table 2"), None, Some("Table 4")]);
    let of = |indexes: &[usize]| {
        indexes
            .iter()
            .map(|i| m.block_text(&m.blocks[*i]))
            .collect::<Vec<_>>()
    };
    assert_eq!(of(&m.tables[0].captions), ["Table 2. Litres by plot"]);
    assert_eq!(of(&m.tables[0].notes), ["Note. p values are two-sided."]);
    assert_eq!(of(&m.tables[1].captions), ["Yield"]);
    assert_eq!(of(&m.tables[2].captions), ["Table 4. Drawn"]);
    assert_eq!(m.blocks[m.tables[0].notes[0]].kind, TableNote);
    let headers = |t: usize| m.tables[t].cells.iter().filter(|c| c.header).count();
    assert_eq!((headers(0), headers(1), headers(2)), (3, 3, 2));
    let cell = &m.tables[0].cells[8];
    let block = &m.blocks[cell.block];
    assert_eq!(m.place(block, block.range.clone()).line, Some(6));
}

#[test]
fn notes_stand_where_they_are_called_for() {
    let source = "# Results\n\nDry[^1] and wet[^b].\n\n# References\n\nSpade.\n\n[^1]: See[^b], p = .1.\n\n[^b]: Wet, p = .2.\n\n[^c]: Alone.\n";
    let want = [
        (Heading(1), Part::Body, "Results"),
        (Paragraph, Part::Body, "Dry and wet."),
        (Footnote, Part::Body, "See, p = .1."),
        (Footnote, Part::Body, "Wet, p = .2."),
        (Heading(1), Part::References, "References"),
        (Paragraph, Part::References, "Spade."),
        (Footnote, Part::References, "Alone."),
    ];
    assert_eq!(blocks(source), want.map(|(k, p, t)| (k, p, t.to_string())));
    let m = manuscript(source);
    let note = m
        .blocks
        .iter()
        .find(|b| b.kind == Footnote)
        .expect("there is one");
    let place = m.place(note, note.range.clone());
    assert_eq!((place.line, place.section.as_deref()), (Some(9), Some("Results")));
}

#[test]
fn things_that_only_look_like_something() {
    for (source, want) in [
        (
            "Plots differed, see\n2. t(28) = 2",
            "Plots differed, see 2. t(28) = 2",
        ),
        ("The value was\n> .05 in all", "The value was > .05 in all"),
        ("We found:\n- one\n- two", "We found:\n\none\n\ntwo"),
        ("M. Rake dug\n\np. 3 is torn", "M. Rake dug\n\np. 3 is torn"),
        ("Term\n:   Definition, p = .3", "Term : Definition, p = .3"),
        ("<div>\n<p>p = .3</p></div>", "p = .3"),
        ("#hashtag\n\n#1 of 2", "#hashtag\n\n#1 of 2"),
        ("---\n\nText", "Text"),
        ("a | b\nc | d", "a | b c | d"),
        ("~~~\np = .3", ""),
        (
            "\\begin{table}\\caption{Yield}\n\\begin{tabular}{l}a & b\\end{tabular}\\end{table}",
            "Table 1. Yield\n\na\tb",
        ),
        ("$$\nt(28) = 2\n$$ {#eq-a}\n\n$$\n\na\n\n", "t(28) = 2\n\n$$\n\na"),
    ] {
        assert_eq!(text(source), want, "{source}");
    }
}

#[test]
fn hostile_sources_end() {
    for unit in [
        "[",
        "]",
        "![",
        "[](",
        "*",
        "_ ",
        "*a ",
        "**a* ",
        "`",
        "``a`",
        "$",
        "$a ",
        "$$",
        "<",
        "<!--",
        "<a href=\"",
        "<sup>",
        "^",
        "^[",
        "~a",
        "\\(",
        "@a [",
        "{{<",
        "&",
        "> ",
        "- ",
        "|",
        "+--+\n|",
        "--- ---\n",
        "----------\n",
        "[^1]: ",
        "[a]: b.c\n",
        ":::",
        "```\n",
        "# ",
        "\n\n    ",
        "a\n===\n",
        "| a |\n|---|\n",
        ": a\n\n",
        "Table 1\n\n",
        "<script>",
        "\\begin{a}\n",
        "1. ",
        "a\n-\n",
    ] {
        let start = std::time::Instant::now();
        manuscript(&unit.repeat(20_000));
        manuscript(&format!("{}{}", "[".repeat(3000), "]".repeat(3000)));
        assert!(
            start.elapsed().as_secs() < 10,
            "{unit} took {:?}",
            start.elapsed()
        );
    }
}
