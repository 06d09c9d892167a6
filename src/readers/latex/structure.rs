//! The *structure* macros of LaTeX: environments, headings, floats, lists, tables.

use super::tables::{self, Tabular};
use super::walk::{Float, Walker};
use crate::manuscript::{BlockKind, Description, Part};
use crate::readers::headings::known;

/// Environments that hold a formula.
const FORMULAS: &[&str] = &[
    "equation",
    "align",
    "gather",
    "multline",
    "eqnarray",
    "displaymath",
    "math",
    "alignat",
    "flalign",
    "dmath",
    "aligned",
    "gathered",
    "split",
    "cases",
    "subequations",
];

/// The end of a formula or table is looked for this far.
const FURTHEST_END: usize = 1 << 20;

impl Walker<'_> {
    /// Reads a macro that makes structure and returns the position behind it; none if `name` is
    /// not such a macro.
    pub(super) fn structure(&mut self, at: usize, name: &str, after: usize, to: usize) -> Option<usize> {
        Some(match name {
            "begin" => match self.group(after) {
                Some((from, until, end)) => self.begin(from, until, end, to),
                None => after,
            },
            "end" => match self.group(after) {
                Some((from, until, end)) => {
                    self.end(at, from, until);
                    end
                }
                None => after,
            },
            "part" | "chapter" | "section" => self.title(1, None, after),
            "subsection" => self.title(2, None, after),
            "subsubsection" => self.title(3, None, after),
            "paragraph" => self.title(4, None, after),
            "subparagraph" => self.title(5, None, after),
            "title" => self.title(1, Some(Part::Front), after),
            "abstract" => {
                let (from, until, end) = self.group(after)?;
                if self.inline || self.parts.current() == Part::Abstract {
                    return Some(from);
                }
                self.end_paragraph();
                self.parts.enter(Part::Abstract);
                self.range(from, until);
                self.end_paragraph();
                self.parts.enter(Part::Body);
                end
            }
            "appendix" | "appendices" => {
                self.end_paragraph();
                self.parts.enter(Part::Body);
                after
            }
            "bibliography" | "printbibliography" => {
                self.end_paragraph();
                self.parts.enter(Part::Body);
                self.skip(after, usize::from(name == "bibliography"))
            }
            "bibitem" => {
                self.end_paragraph();
                self.skip(after, 1)
            }
            "par" | "newpage" | "clearpage" | "maketitle" | "bigskip" | "medskip" | "smallskip" => {
                self.end_paragraph();
                after
            }
            "footnote" | "footnotetext" | "thanks" | "endnote" | "sidenote" | "tablefootnote" => {
                self.footnote(after)
            }
            "caption" | "captionof" | "captionsof" | "subcaption" => self.caption(name, after),
            "tablenote" | "figurenote" | "tablenotetext" | "floatfoot" | "figurenotes" => {
                let (from, until, end) = self.group(after)?;
                if self.tabular.is_none() && !self.inline {
                    self.end_paragraph();
                    self.open(BlockKind::TableNote, from);
                    self.inside(from, until);
                    self.end_paragraph();
                    end
                } else {
                    from
                }
            }
            "item" => self.item(after),
            "multicolumn" => self.multicolumn(after),
            "multirow" | "Block" => self.multirow(after),
            "tabularnewline" | "cr" => {
                self.line_end(at);
                after
            }
            "newline" | "quad" | "qquad" | "hfill" | "enspace" | "thinspace" | "space" | "linewidth" => {
                self.b.text(" ");
                after
            }
            "makecell" | "shortstack" | "thead" | "specialcell" | "stackanchor" => self.stacked(after),
            "cmidrule" => {
                let text = self.text;
                let after = match text[after..].strip_prefix('(') {
                    Some(rest) => after + rest.find(')').map_or(1, |n| n + 2),
                    None => after,
                };
                self.skip(after, 1)
            }
            "endfirsthead" => self.repeated_head(after, to),
            "toprule" | "midrule" | "bottomrule" | "addlinespace" | "pagebreak" | "nopagebreak"
            | "nolinebreak" | "linebreak" => {
                self.b.text(" ");
                self.skip_option(after)
            }
            "textsuperscript" | "tnote" | "tabfnm" => self.shifted(at, true, after),
            "textsubscript" => self.shifted(at, false, after),
            "num" | "SI" | "qty" | "SIrange" | "numrange" | "qtyrange" | "ang" | "numlist" | "tablenum" => {
                self.numbers(at, name, after)
            }
            "si" | "unit" => {
                let (from, until, end) = self.group(self.skip_option(after))?;
                let unit = crate::readers::tex_symbols::unit(&self.text[from..until]);
                self.push(at, &unit);
                end
            }
            "ensuremath" => {
                let (from, until, end) = self.group(after)?;
                self.math(from, until);
                end
            }
            "enquote" | "textquote" | "blockquote" => {
                let (from, until, end) = self.group(self.skip_option(after))?;
                self.push(at, "\"");
                self.inside(from, until);
                self.push(until, "\"");
                end
            }
            "frac" | "sqrt" | "nicefrac" | "sfrac" => {
                // Legal in formulas only, but what is meant is plain.
                let (_, _, first) = self.group(after)?;
                let end = match self.group(first) {
                    Some((_, _, second)) if name != "sqrt" => second,
                    _ => first,
                };
                self.math(at, end);
                end
            }
            "ce" => self.math_group(at, after)?,
            _ => return None,
        })
    }

    fn math_group(&mut self, at: usize, after: usize) -> Option<usize> {
        let (from, until, end) = self.group(after)?;
        self.push(at, &self.text[from..until]);
        Some(end)
    }

    fn begin(&mut self, from: usize, until: usize, end: usize, to: usize) -> usize {
        let text = self.text;
        let name = text[from..until].trim();
        let bare = name.trim_end_matches('*');
        if FORMULAS.contains(&bare) {
            let close = format!("\\end{{{name}}}");
            let Some(stop) = self.find(&close, end, to, FURTHEST_END) else {
                return end;
            };
            let start = if bare == "alignat" { self.skip(end, 1) } else { end };
            self.b.text(" ");
            self.math(start.min(stop), stop);
            self.b.text(" ");
            return stop + close.len();
        }
        if is_tabular(bare) {
            return self.begin_tabular(bare, name, end, to);
        }
        if self.tabular.is_some() || self.inline {
            // No block can begin here.
            return self.skip(end, environment_settings(bare));
        }
        match bare {
            "table" | "sidewaystable" | "wraptable" | "threeparttable" | "ThreePartTable" | "figure"
            | "SCfigure" | "wrapfigure" | "sidewaysfigure" | "SCtable" | "margintable" | "marginfigure"
            | "talltblr" => {
                self.end_paragraph();
                // A table within a float shares its caption.
                if self.floats.is_empty() || !bare.eq_ignore_ascii_case("threeparttable") {
                    let is_table = bare.contains("table") || bare.contains("Table");
                    let mut float = Float::new(is_table);
                    float.own = bare.eq_ignore_ascii_case("threeparttable");
                    self.floats.push(float);
                    if self.parts.current() == Part::References {
                        self.parts.enter(Part::Body);
                    }
                }
            }
            "appendices" | "appendix" => {
                self.end_paragraph();
                self.parts.enter(Part::Body);
            }
            "quote" | "quotation" | "displayquote" | "verse" | "quoting" => {
                self.end_paragraph();
                self.kinds.push((bare.to_string(), BlockKind::Quote));
            }
            "itemize" | "enumerate" | "description" | "compactitem" | "compactenum" | "inparaenum"
            | "easylist" | "tablenotes" | "TableNotes" | "tightenumerate" | "tightitemize" => {
                if bare != "inparaenum" {
                    self.end_paragraph();
                }
                let kind = if bare.ends_with("otes") {
                    BlockKind::TableNote
                } else {
                    BlockKind::ListItem
                };
                self.kinds.push((bare.to_string(), kind));
            }
            _ => {
                self.end_paragraph();
                if let Some(part) = part_of(bare)
                    && part != self.parts.current()
                {
                    self.parts.enter(part);
                    if bare == "thebibliography" {
                        self.b.part(part);
                        self.b.heading(1, "References");
                    }
                }
            }
        }
        self.skip(end, environment_settings(bare))
    }

    fn end(&mut self, at: usize, from: usize, until: usize) {
        let text = self.text;
        let name = text[from..until].trim().trim_end_matches('*');
        if is_tabular(name) {
            match &mut self.tabular {
                Some(tabular) if tabular.nested > 0 => tabular.nested -= 1,
                _ => self.end_tabular(at),
            }
            return;
        }
        if self.tabular.is_some() || self.inline {
            return;
        }
        self.end_paragraph();
        match name {
            _ if part_of(name).is_some() => self.parts.enter(Part::Body),
            "table" | "sidewaystable" | "wraptable" | "figure" | "SCfigure" | "wrapfigure"
            | "sidewaysfigure" | "SCtable" | "margintable" | "marginfigure" | "talltblr" => self.end_float(),
            "threeparttable" | "ThreePartTable" if self.floats.last().is_some_and(|f| f.own) => {
                self.end_float()
            }
            _ => {
                if self.kinds.last().is_some_and(|(open, _)| open == name) {
                    self.kinds.pop();
                }
            }
        }
    }

    fn end_float(&mut self) {
        if let Some(float) = self.floats.pop() {
            for table in float.tables {
                self.b.describe(table, &float.about);
            }
        }
    }

    fn begin_tabular(&mut self, bare: &str, name: &str, end: usize, to: usize) -> usize {
        let widths = usize::from(
            matches!(
                bare,
                "tabular" | "tabularx" | "tabulary" | "ltabulary" | "tabularew"
            ) && name != "tabular",
        );
        let mut start = self.skip_option(end);
        for _ in 0..widths {
            if let Some((_, _, behind)) = self.group(start) {
                start = self.skip_option(behind);
            }
        }
        if bare.ends_with("tabu") {
            // `to \linewidth` or `spread 2cm` before the columns.
            let head = &self.text[start..to.min(start + 60)];
            start += head.find('{').unwrap_or(0);
        }
        if let Some((_, _, behind)) = self.group(start) {
            start = behind;
        }
        if let Some(tabular) = &mut self.tabular {
            tabular.nested += 1;
            return start;
        }
        if self.inline {
            return start;
        }
        self.end_paragraph();
        if self.floats.is_empty() {
            let mut float = Float::new(true);
            float.bare = true;
            self.floats.push(float);
        }
        let close = format!("\\end{{{name}}}");
        let head = match self.find(&close, start, to, FURTHEST_END) {
            Some(stop) => start + tables::head_end(&self.text[start..stop]),
            None => start,
        };
        let table = self.b.table_count();
        if let Some(float) = self.floats.last_mut() {
            float.tables.push(table);
        }
        self.b.part(self.parts.current());
        self.tabular = Some(Tabular::open(&mut self.b, head));
        start
    }

    /// Closes the table that is open, if any.
    pub(super) fn end_tabular(&mut self, at: usize) {
        if let Some(mut tabular) = self.tabular.take() {
            tabular.end_row(&mut self.b, at);
            self.b.close_table();
            if self.floats.last().is_some_and(|f| f.bare) {
                self.end_float();
            }
        }
    }

    /// Header rows that a long table repeats on its next pages.
    fn repeated_head(&mut self, after: usize, to: usize) -> usize {
        match self.find("\\endhead", after, to, FURTHEST_END) {
            Some(stop) if !self.text[after..stop].contains("\\end{") => stop + "\\endhead".len(),
            _ => after,
        }
    }

    fn caption(&mut self, name: &str, after: usize) -> usize {
        let mut after = after;
        let mut kind = None;
        if name == "captionof"
            && let Some((from, until, end)) = self.group(after)
        {
            kind = Some(self.text[from..until].contains("table"));
            after = end;
        }
        let starred = self.text[..after].ends_with('*');
        let after = self.skip_option(after);
        let Some((from, until, end)) = self.group(after) else {
            return after;
        };
        if self.inline || self.tabular.as_ref().is_some_and(Tabular::in_cell) {
            return from;
        }
        let is_table = kind.unwrap_or_else(|| self.floats.last().is_some_and(|f| f.is_table));
        let count = if is_table {
            &mut self.tables
        } else {
            &mut self.figures
        };
        let label = (!starred && name != "subcaption").then(|| {
            *count += 1;
            format!("{} {count}", if is_table { "Table" } else { "Figure" })
        });
        // Captions of long tables stand among the rows.
        let tabular = self.tabular.take();
        if tabular.is_none() {
            self.end_paragraph();
        }
        self.open(BlockKind::Caption, from);
        let index = self.b.next_block();
        if let Some(label) = &label {
            // As it will be printed.
            self.b.text(&format!("{label}. "));
        }
        self.inside(from, until);
        self.b.close();
        self.tabular = tabular;
        if self.tabular.is_none() {
            self.end_paragraph();
        }
        if let Some(float) = self.floats.last_mut() {
            float.about.captions.push(index);
            if label.is_some() {
                float.about.label = label;
            }
        }
        end
    }

    fn item(&mut self, after: usize) -> usize {
        if self.inline || self.tabular.is_some() {
            self.b.text(" ");
            return after;
        }
        self.end_paragraph();
        let kind = self.kinds.last().map_or(BlockKind::ListItem, |(_, kind)| *kind);
        self.open(kind, after);
        let option = self.skip_option(after);
        if option > after {
            let open = super::arguments::skip_space(self.text, after);
            self.inside(open + 1, option - 1);
            self.b.text(" ");
        }
        option
    }

    fn multicolumn(&mut self, after: usize) -> usize {
        let Some((from, until, end)) = self.group(after) else {
            return after;
        };
        let count: u32 = self.text[from..until].trim().parse().unwrap_or(1);
        if let Some(tabular) = &mut self.tabular
            && tabular.nested == 0
        {
            tabular.span(count, 1);
        }
        self.group(end).map_or(end, |(_, _, end)| end)
    }

    /// `\multirow[pos]{rows}[struts]{width}[shift]{text}`
    fn multirow(&mut self, after: usize) -> usize {
        let after = self.skip_option(after);
        let Some((from, until, end)) = self.group(after) else {
            return after;
        };
        let count: i64 = self.text[from..until]
            .trim()
            .trim_start_matches('=')
            .parse()
            .unwrap_or(1);
        if let Some(tabular) = &mut self.tabular
            && tabular.nested == 0
        {
            tabular.span(1, u32::try_from(count).unwrap_or(1));
        }
        let end = self.skip_option(end);
        let end = match self.group(end) {
            Some((_, _, end)) => end,
            // `\multirow{2}*{text}`
            None => end + usize::from(self.text[end..].starts_with('*')),
        };
        self.skip_option(end)
    }

    /// Lines on top of each other within a cell.
    fn stacked(&mut self, after: usize) -> usize {
        let after = self.skip_option(after);
        let Some((from, until, end)) = self.group(after) else {
            return after;
        };
        self.ensure(from);
        if let Some(tabular) = &mut self.tabular {
            tabular.nested += 1;
        }
        self.inside(from, until);
        if let Some(tabular) = &mut self.tabular {
            tabular.nested = tabular.nested.saturating_sub(1);
        }
        end
    }
}

impl Float {
    fn new(is_table: bool) -> Float {
        Float {
            is_table,
            own: false,
            bare: false,
            about: Description::default(),
            tables: Vec::new(),
        }
    }
}

/// The part that an environment holds: one of the usual names, or that of a section.
fn part_of(environment: &str) -> Option<Part> {
    match environment {
        "thebibliography" | "CSLReferences" => Some(Part::References),
        "acks" => Some(Part::Back),
        "keyword" => Some(Part::Front),
        name => known(name).map(|k| k.part).filter(|p| *p != Part::Body),
    }
}

fn is_tabular(bare: &str) -> bool {
    matches!(
        bare,
        "tabular"
            | "tabularx"
            | "tabulary"
            | "tabu"
            | "longtable"
            | "longtabu"
            | "supertabular"
            | "xtabular"
            | "tblr"
            | "longtblr"
            | "NiceTabular"
            | "ltabulary"
            | "mpsupertabular"
            | "tabularew"
            | "lltable"
            | "xltabular"
            | "longtable*"
            | "array"
    )
}

/// How many groups behind `\begin{…}` are settings.
fn environment_settings(bare: &str) -> usize {
    match bare {
        "minipage" | "multicols" | "spacing" | "adjustbox" | "thebibliography" | "column" | "turn"
        | "rotate" | "paracol" => 1,
        "wraptable" | "wrapfigure" | "adjustwidth" | "CSLReferences" | "list" => 2,
        _ => 0,
    }
}
