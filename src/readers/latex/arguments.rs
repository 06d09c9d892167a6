//! Where a macro's *arguments* begin and end: the partners of all braces, found once, and the
//! lists of macros whose arguments are not text.

/// The partner of every brace of a source that has one.
pub(super) struct Braces {
    /// Positions of opening braces, in order, with those of their closing ones.
    pairs: Vec<(usize, usize)>,
}

impl Braces {
    pub(super) fn of(source: &str) -> Braces {
        let bytes = source.as_bytes();
        let mut pairs: Vec<(usize, usize)> = Vec::new();
        let mut open: Vec<usize> = Vec::new();
        let mut at = 0;
        while at < bytes.len() {
            match bytes[at] {
                b'\\' => at += 1,
                // A comment's braces do not count.
                b'%' => at += memchr::memchr(b'\n', &bytes[at..]).unwrap_or(bytes.len() - at),
                b'{' => {
                    open.push(pairs.len());
                    pairs.push((at, usize::MAX));
                }
                b'}' => {
                    if let Some(index) = open.pop() {
                        pairs[index].1 = at;
                    }
                }
                _ => {}
            }
            at += 1;
        }
        pairs.retain(|(_, close)| *close != usize::MAX);
        Braces { pairs }
    }

    /// The closing brace that belongs to the opening one at `at`.
    pub(super) fn close(&self, at: usize) -> Option<usize> {
        let index = self.pairs.binary_search_by_key(&at, |(open, _)| *open).ok()?;
        Some(self.pairs[index].1)
    }
}

/// The name or character behind the backslash at `at`.
pub(super) fn name_at(source: &str, at: usize) -> &str {
    let rest = &source[at + 1..];
    let letters = rest
        .bytes()
        .take_while(|b| b.is_ascii_alphabetic() || *b == b'@')
        .count();
    match letters {
        0 => &rest[..rest.chars().next().map_or(0, char::len_utf8)],
        n => &rest[..n],
    }
}

/// The end of an optional argument that opens at `at` with a bracket: the position of the closing
/// one. Brackets inside braces do not count.
pub(super) fn bracket_end(source: &str, braces: &Braces, at: usize) -> Option<usize> {
    let bytes = source.as_bytes();
    let end = bytes.len().min(at + 2000);
    let mut i = at + 1;
    let mut depth = 1;
    while i < end {
        match bytes[i] {
            b'\\' => i += 1,
            b'{' => i = braces.close(i)?,
            b'[' => depth += 1,
            b']' => {
                depth -= 1;
                if depth == 0 {
                    return Some(i);
                }
            }
            // An empty line ends any argument of this kind.
            b'\n' if source[i + 1..].trim_start_matches([' ', '\t']).starts_with('\n') => return None,
            _ => {}
        }
        i += 1;
    }
    None
}

/// The first position at or after `at` that is not white space, unless a paragraph ends first.
pub(super) fn skip_space(source: &str, at: usize) -> usize {
    let mut newlines = 0;
    for (i, b) in source.bytes().enumerate().skip(at) {
        match b {
            b'\n' => {
                newlines += 1;
                if newlines == 2 {
                    return at;
                }
            }
            b' ' | b'\t' | b'\r' => {}
            _ => return i,
        }
    }
    source.len()
}

/// The contents of the braces at or after `at`, and the position behind them.
pub(super) fn braced<'a>(source: &'a str, braces: &Braces, at: usize) -> Option<(&'a str, usize)> {
    let open = skip_space(source, at);
    if !source[open..].starts_with('{') {
        return None;
    }
    let close = braces.close(open)?;
    Some((&source[open + 1..close], close + 1))
}

/// A needed argument: a group, a macro's name or a single character.
pub(super) fn needed<'a>(source: &'a str, braces: &Braces, at: usize) -> (&'a str, usize) {
    if let Some(found) = braced(source, braces, at) {
        return found;
    }
    let start = skip_space(source, at);
    let length = match source[start..].chars().next() {
        Some('\\') => 1 + name_at(source, start).len(),
        Some('}') | None => 0,
        Some(c) => c.len_utf8(),
    };
    (&source[start..start + length], start + length)
}

/// The name in `{\name}` or `\name`.
pub(super) fn macro_name<'a>(source: &'a str, braces: &Braces, at: usize) -> Option<(&'a str, usize)> {
    if let Some((inner, end)) = braced(source, braces, at) {
        return Some((inner.trim().strip_prefix('\\')?, end));
    }
    let at = skip_space(source, at);
    source[at..].starts_with('\\').then(|| {
        let name = name_at(source, at);
        (name, at + 1 + name.len())
    })
}

/// The name in `\input{name}` or `\input name`.
pub(super) fn file_name<'a>(source: &'a str, braces: &Braces, at: usize) -> Option<(&'a str, usize)> {
    if let Some(found) = braced(source, braces, at) {
        return Some(found);
    }
    let bare = source[at..].strip_prefix(' ')?.trim_start_matches(' ');
    let start = source.len() - bare.len();
    let length = bare
        .find(|c: char| c.is_whitespace() || matches!(c, '\\' | '{' | '}' | '%'))
        .unwrap_or(bare.len());
    (length > 0).then(|| (&bare[..length], start + length))
}

/// How many arguments in braces of a macro are settings rather than text. Brackets among them are
/// settings too.
pub(super) fn settings(name: &str) -> usize {
    match name {
        "label"
        | "index"
        | "hspace"
        | "fitfigure"
        | "fitbitmap"
        | "vspace"
        | "vskip"
        | "includegraphics"
        | "usepackage"
        | "RequirePackage"
        | "pagestyle"
        | "thispagestyle"
        | "pagenumbering"
        | "bibliographystyle"
        | "bibliography"
        | "addbibresource"
        | "nocite"
        | "hypersetup"
        | "color"
        | "cellcolor"
        | "rowcolor"
        | "columncolor"
        | "linespread"
        | "graphicspath"
        | "phantom"
        | "hphantom"
        | "vphantom"
        | "scalebox"
        | "raisebox"
        | "parbox"
        | "colorbox"
        | "textcolor"
        | "href"
        | "hypertarget"
        | "hyperlink"
        | "url"
        | "path"
        | "todo"
        | "cline"
        | "pdfbookmark"
        | "geometry"
        | "captionsetup"
        | "sisetup"
        | "documentclass"
        | "newcounter"
        | "stepcounter"
        | "refstepcounter"
        | "usetikzlibrary"
        | "theoremstyle"
        | "selectlanguage"
        | "foreignlanguage"
        | "affil"
        | "affiliation"
        | "author"
        | "authors"
        | "authorsnames"
        | "authorsaffiliations"
        | "institute"
        | "address"
        | "email"
        | "date"
        | "keywords"
        | "keyword"
        | "shorttitle"
        | "shortauthors"
        | "leftheader"
        | "rightheader"
        | "authorrunning"
        | "titlerunning"
        | "journal"
        | "volume"
        | "orcid"
        | "orcidID"
        | "corresp"
        | "inst"
        | "fnm"
        | "sur"
        | "authornote"
        | "course"
        | "professor"
        | "duedate"
        | "pacs"
        | "doi"
        | "externaldocument"
        | "lstset"
        | "tikzset"
        | "pgfplotsset"
        | "setstretch"
        | "hyphenation"
        | "excludecomment"
        | "includecomment"
        | "marginpar"
        | "marginnote"
        | "fontfamily"
        | "fontseries"
        | "fontshape"
        | "cmidrule"
        | "setmainfont"
        | "setsansfont"
        | "setmonofont"
        | "ead"
        | "cortext"
        | "fntext"
        | "tnotetext"
        | "tnoteref"
        | "fnref"
        | "corref"
        | "Xhline"
        | "newlength"
        | "setcitestyle" => 1,
        "setlength" | "addtolength" | "setcounter" | "addtocounter" | "markboth" | "fontsize" | "rule"
        | "resizebox" | "numberwithin" | "settowidth" | "DeclareSIUnit" | "newtheorem" | "addtocontents"
        | "colorlet" => 2,
        "addcontentsline" | "crefname" | "Crefname" | "specialrule" | "rowcolors" | "definecolor"
        | "newenvironment" | "renewenvironment" => 3,
        "titlespacing" => 4,
        "titleformat" => 5,
        _ => 0,
    }
}

/// Whether the macro cites.
pub(super) fn is_citation(name: &str) -> bool {
    let lower = name.to_ascii_lowercase();
    lower.contains("cite") && !matches!(name, "citestyle")
}

/// Whether the macro prints the number of something labelled elsewhere.
pub(super) fn is_reference(name: &str) -> bool {
    matches!(
        name,
        "ref"
            | "autoref"
            | "cref"
            | "Cref"
            | "eqref"
            | "pageref"
            | "nameref"
            | "vref"
            | "fullref"
            | "subref"
            | "labelcref"
            | "crefrange"
            | "Crefrange"
            | "autopageref"
            | "cpageref"
            | "figref"
            | "tabref"
    )
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_brace_finds_its_partner() {
        let source = r"a{b{c}\{d}e}{";
        let braces = Braces::of(source);
        assert_eq!(braces.close(1), Some(9));
        assert_eq!(braces.close(3), Some(5));
        assert_eq!(braces.close(12), None);
        assert_eq!(Braces::of("{{a}").close(1), Some(3));
    }

    #[test]
    fn brackets_may_hold_braces() {
        let source = "[a{]}b]c";
        assert_eq!(bracket_end(source, &Braces::of(source), 0), Some(6));
        let open = "[a\n\nb]";
        assert_eq!(bracket_end(open, &Braces::of(open), 0), None);
    }

    #[test]
    fn names_and_space() {
        assert_eq!(name_at(r"\textit{a}", 0), "textit");
        assert_eq!(name_at(r"\%a", 0), "%");
        assert_eq!(name_at(r"\é", 0), "é");
        assert_eq!(name_at("\\", 0), "");
        assert_eq!(skip_space("a \n b", 1), 4);
        assert_eq!(skip_space("a \n\n b", 1), 1);
    }
}
