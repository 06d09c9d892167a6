use super::*;
use crate::manuscript::{BlockKind, Part};
use crate::readers::trial::into_blocks;

fn manuscript(source: &str) -> Manuscript {
    read(source, None).expect("LaTeX is always read")
}

fn text(source: &str) -> String {
    manuscript(source).text.trim_end().to_string()
}

fn blocks(source: &str) -> Vec<(BlockKind, Part, String)> {
    into_blocks(manuscript(source))
}

#[test]
fn inline_results_become_linear_text() {
    for (tex, want) in [
        (r"$\chi^2(1) = 9.33$", "χ²(1) = 9.33"),
        (r"$F(2,66)=8.14,~p<.001$", "F(2,66)=8.14, p<.001"),
        (
            r"\textit{t}(1,150) = 3.92, \textit{p} \textless{} .001",
            "t(1,150) = 3.92, p < .001",
        ),
        (r"p $<$ 0,001", "p < 0,001"),
        (r"\(p = .217\)", "p = .217"),
        (r"p = \num{0.034} and \num{1e-5}", "p = 0.034 and 1 × 10⁻⁵"),
        (r"t\textsubscript{28} = 2.20", "t₂₈ = 2.20"),
        (r"R\textsuperscript{2} = 0{,}23", "R² = 0,23"),
        (r"$p = 0{,}034$", "p = 0,034"),
        (r"p = \Sexpr{round(p, 3)}, \verb|p = .2|.", "p = …, …."),
        (r"\emph{M} = 3.12, {\it SD} = 1.07", "M = 3.12, SD = 1.07"),
        (r"$M_{\text{dry}} = 3.1$ vs.\ $M = 2$", "Mdry = 3.1 vs. M = 2"),
        (r"95\% CI [$-$0.14, 0.05]", "95% CI [-0.14, 0.05]"),
        (r"95\,\% CI $[-0.14,\,0.05]$", "95 % CI [-0.14, 0.05]"),
        (
            r"\SI{3.2}{mm}, \qty{21}{\celsius}, \SIrange{1}{2}{\litre}",
            "3.2 mm, 21°C, 1 L to 2 L",
        ),
        (
            r"$p \leq .05$; $p\,=\,.03$; $3.71 \pm 0.94$",
            "p ≤ .05; p = .03; 3.71 ± 0.94",
        ),
        (
            r"\[ t(28) = 2.20 \] and $$p = .036$$",
            "t(28) = 2.20 and p = .036",
        ),
        (
            r"\begin{align*} t(28) &= 2.20 \label{a} \\ p &= .036 \end{align*}",
            "t(28) = 2.20 ; p = .036",
        ),
        (
            r#"na\"ive Stra{\ss}e \'el\`eve \v{s} \c{c} M\"{u}ller \o{}re"#,
            "naïve Straße élève š ç Müller øre",
        ),
        (
            "``dry'' plots---all 12--18 of them",
            "\"dry\" plots—all 12–18 of them",
        ),
        (
            r"see \citet[p.~3]{spade2014}, Table~\ref{tab:one} \citep{rake}",
            "see , Table …",
        ),
        (
            r"{\small \textbf{Plots} \textcolor{red}{differed}}, \href{http://x.org}{here}",
            "Plots differed, here",
        ),
        (r"r = $-.31^{***}$", "r = -.31***"),
        (
            r"\unknown{kept} \noindent[F(1, 61) = 4.40]",
            "kept [F(1, 61) = 4.40]",
        ),
        (
            r"cost \$5 \& more \_ \# \{x\} 5\% a\-b",
            "cost $5 & more _ # {x} 5% ab",
        ),
        (r"\enquote{dry} H\textsubscript{2}O \ce{CO2}", "\"dry\" H₂O CO2"),
        (
            r"$\eta^2_p = .14$, $\hat\eta^2_G = .1$, $\omega^2=.02$",
            "η²p = .14, η²G = .1, ω²=.02",
        ),
        (
            r"\textit{F}\textsubscript{1,63} = 7.25, \textit{p} = .01",
            "F₁,₆₃ = 7.25, p = .01",
        ),
        (
            r"$b = 0.23$, $\mathit{SE} = 0.08$, $t_{120} = 2.9$",
            "b = 0.23, SE = 0.08, t₁₂₀ = 2.9",
        ),
        (r"\textit{z} = --2.31, \textit{p} = .021", "z = -2.31, p = .021"),
        (r"only $5 of them", "only 5 of them"),
    ] {
        assert_eq!(text(tex), want, "{tex}");
    }
}

#[test]
fn a_whole_paper() {
    let source = r"\documentclass[man]{apa7}
\usepackage{siunitx} % units
\title{Mulch and \emph{water}}
\author{A. Spade\thanks{Plot 4}}
\newcommand{\pv}[1]{\textit{p} = #1}
\abstract{Mulch saved water, \pv{.03}.}
\begin{document}
\maketitle

\section{Results}\label{sec:results}
Plots with mulch were watered
less\footnote{Litres per day, \pv{.9}. Second} than
others, $t(28) = 2.20$, \pv{.036}.

\subsection*{Shade}
\begin{itemize}
\item First, \pv{.1}.
\item[(b)] Second.
\end{itemize}
\begin{quote}A gardener said $p = .5$.\end{quote}
\begin{verbatim}
p = .04
\end{verbatim}
\section*{References}
Spade (2014), p = .2.
\appendix
\section{More}
More, \pv{.7}.
\begin{thebibliography}{9}
\bibitem{a} Rake, p = .3.
\end{thebibliography}
\end{document}
p = .99
";
    use BlockKind::{Footnote, Heading, ListItem, Paragraph, Quote};
    let want = [
        (Heading(1), Part::Front, "Mulch and water"),
        (Paragraph, Part::Abstract, "Mulch saved water, p = .03."),
        (Heading(1), Part::Body, "Results"),
        (
            Paragraph,
            Part::Body,
            "Plots with mulch were watered less than others, t(28) = 2.20, p = .036.",
        ),
        (Footnote, Part::Body, "Litres per day, p = .9. Second"),
        (Heading(2), Part::Body, "Shade"),
        (ListItem, Part::Body, "First, p = .1."),
        (ListItem, Part::Body, "(b) Second."),
        (Quote, Part::Body, "A gardener said p = .5."),
        (Heading(1), Part::References, "References"),
        (Paragraph, Part::References, "Spade (2014), p = .2."),
        (Heading(1), Part::Body, "More"),
        (Paragraph, Part::Body, "More, p = .7."),
        (Heading(1), Part::References, "References"),
        (Paragraph, Part::References, "Rake, p = .3."),
    ];
    assert_eq!(blocks(source), want.map(|(k, p, t)| (k, p, t.to_string())));
    let m = manuscript(source);
    for (needle, line) in [
        ("t(28)", 13),
        ("Plots with", 11),
        ("p = .036", 13),
        ("Litres", 12),
        ("p = .7", 28),
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
fn tables_become_grids() {
    let source = r"\begin{table}[htb]
\caption{Litres by plot\label{tab:a}}
\begin{tabular*}{\textwidth}{@{}l*{3}{S[table-format=1.2]}@{}}
\toprule
 & \multicolumn{2}{c}{Litres} & \\
\cmidrule(lr){2-3}
Plot & $M$ & {\itshape SD} & \multicolumn{1}{c}{$p$} \\ \midrule
\multirow{2}{*}{Mulch} & 3.4 & 1.1 & $<$.001\textsuperscript{a} \\[2pt]
 & 5.2$^{***}$ & \makecell{(1.3)\\ {[.1, .2]}} & --- \\
\addlinespace[2pt] \hspace{3mm}Bare\tnote{b} & & \num{0.45} & [.012, .148] \\
\bottomrule
\end{tabular*}
\begin{tablenotes}
\item \textit{Note.} SD = standard deviation.
\end{tablenotes}
\end{table}
Text after.
";
    let m = manuscript(source);
    assert_eq!(
        m.text,
        "Table 1. Litres by plot\n\n\tLitres\t\nPlot\tM\tSD\tp\nMulch\t3.4\t1.1\t<.001ᵃ\n5.2***\t(1.3) [.1, .2]\t—\n\
         Bareᵇ\t\t0.45\t[.012, .148]\n\nNote. SD = standard deviation.\n\nText after.\n"
    );
    let table = &m.tables[0];
    assert_eq!(
        (table.label.as_deref(), table.rows, table.columns),
        (Some("Table 1"), 5, 4)
    );
    let cells: Vec<(u32, u32, u32, u32, bool, &str)> = table
        .cells
        .iter()
        .map(|c| {
            (
                c.row,
                c.column,
                c.rowspan,
                c.colspan,
                c.header,
                m.block_text(&m.blocks[c.block]),
            )
        })
        .collect();
    assert_eq!(cells[1], (0, 1, 1, 2, true, "Litres"));
    assert_eq!(cells[6], (1, 3, 1, 1, true, "p"));
    assert_eq!(cells[7], (2, 0, 2, 1, false, "Mulch"));
    assert_eq!(cells[11], (3, 1, 1, 1, false, "5.2***"));
    assert_eq!(cells[12], (3, 2, 1, 1, false, "(1.3) [.1, .2]"));
    assert_eq!(cells[15], (4, 1, 1, 1, false, ""));
    assert_eq!(
        m.block_text(&m.blocks[table.captions[0]]),
        "Table 1. Litres by plot"
    );
    assert_eq!(
        m.block_text(&m.blocks[table.notes[0]]),
        "Note. SD = standard deviation."
    );
    assert_eq!(m.blocks[table.notes[0]].kind, BlockKind::TableNote);
}

#[test]
fn long_and_nested_tables() {
    let source = r"\begin{longtable}[]{@{}lr@{}}
\caption{Yield} \\
\hline
Plot & kg \\ \hline
\endfirsthead
\hline Plot & kg \\ \hline
\endhead
\begin{tabular}[c]{@{}l@{}}North\\ bed\end{tabular} & 12\footnote{Wet.} \\
South & 7 \\
\end{longtable}
\begin{figure}\includegraphics[width=3cm]{a.png}\caption[Short]{Yield, $r = .3$.}\end{figure}
\begin{tabularx}{\textwidth}{lX}a & b\end{tabularx}
";
    assert_eq!(
        text(source),
        "Table 1. Yield\n\nPlot\tkg\nNorth bed\t12\nSouth\t7\n\nWet.\n\nFigure 1. Yield, r = .3.\n\na\tb"
    );
    let m = manuscript(source);
    assert_eq!(m.tables[0].label.as_deref(), Some("Table 1"));
    assert!(m.tables[0].cells[0].header && !m.tables[0].cells[2].header);
    assert_eq!(m.tables[1].label, None);
}

#[test]
fn a_missing_file_is_told() {
    let m =
        read("\\input{results}\np = .03", Some(Path::new("/nowhere/at/all"))).expect("LaTeX is always read");
    assert_eq!(
        m.remarks,
        ["\\input{results} cannot be followed without a folder; its text is missing"]
    );
}

#[test]
fn hostile_sources_end() {
    for unit in [
        "{",
        "}",
        "$",
        "\\(",
        "\\[",
        "\\footnote{",
        "\\caption{",
        "\\begin{tabular}{l}",
        "\\begin{equation}",
        "\\item[",
        "\\\\[",
        "\\section{",
        "\\multicolumn{2}{c}{",
        "\\makecell{",
        "\\begin{table}",
        "\\end{table}",
        "&",
        "\\textsuperscript{",
        "\\num{",
        "\\newcommand{\\a}",
        "\\iffalse",
        "\\input{",
        "%",
        "\n\n",
        "\\verb|",
        "\\begin{verbatim}",
        "\\'",
        "\\begin{itemize}\\item ",
        "\\enquote{",
        "\\footnote{\\(}",
        "\\abstract{",
        "\\end{longtable}\\endfirsthead",
        "\\multirow{-2}{*}{x}&",
    ] {
        let start = std::time::Instant::now();
        manuscript(&unit.repeat(6_000));
        manuscript(&format!("{}{}", unit.repeat(3000), "}".repeat(3000)));
        assert!(
            start.elapsed().as_secs() < 10,
            "{unit} took {:?}",
            start.elapsed()
        );
    }
}
