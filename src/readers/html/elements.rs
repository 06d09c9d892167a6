//! What each HTML element means for the reading.

/// The part an element plays. Elements not listed are transparent.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Element {
    Inline,
    /// Has no content.
    Void,
    Break,
    /// A picture.
    Image,
    /// A rule between blocks.
    Rule,
    /// Left out with everything in it.
    Hidden,
    /// Its content is not markup and is left out.
    Raw,
    Script,
    DocumentTitle,
    /// A block without a meaning of its own.
    Block,
    /// A block that headings inside it do not reach out of.
    Sectioning,
    Figure,
    Paragraph,
    Heading(u8),
    List,
    Item,
    Quote,
    Preformatted,
    Caption,
    Table,
    TableHead,
    TableBody,
    TableFoot,
    Row,
    Cell,
    Sup,
    Sub,
    Quotation,
    Math,
}

/// Finds the part of an element by its name in lower case.
pub(super) fn element(name: &str) -> Element {
    use Element::*;
    match name {
        "p" => Paragraph,
        "h1" => Heading(1),
        "h2" => Heading(2),
        "h3" => Heading(3),
        "h4" => Heading(4),
        "h5" => Heading(5),
        "h6" => Heading(6),
        "section" | "article" | "main" | "aside" => Sectioning,
        "figure" => Figure,
        "html" | "body" | "div" | "header" | "footer" | "address" | "form" | "fieldset" | "legend"
        | "details" | "summary" | "center" | "hgroup" | "dialog" | "search" => Block,
        "ul" | "ol" | "dl" | "menu" | "dir" => List,
        "li" | "dt" | "dd" => Item,
        "blockquote" => Quote,
        "pre" | "xmp" | "listing" => Preformatted,
        "figcaption" | "caption" => Caption,
        "table" => Table,
        "thead" => TableHead,
        "tbody" => TableBody,
        "tfoot" => TableFoot,
        "tr" => Row,
        "td" | "th" => Cell,
        "sup" => Sup,
        "sub" => Sub,
        "q" => Quotation,
        "math" => Math,
        "br" => Break,
        "hr" => Rule,
        "img" => Image,
        "area" | "base" | "basefont" | "bgsound" | "col" | "embed" | "frame" | "input" | "link" | "meta"
        | "param" | "source" | "track" | "wbr" | "keygen" => Void,
        "script" => Script,
        "style" | "textarea" | "iframe" | "noembed" | "noframes" => Raw,
        "title" => DocumentTitle,
        "noscript" | "template" | "nav" | "svg" | "button" | "select" | "datalist" | "optgroup"
        | "option" | "meter" | "progress" | "canvas" | "video" | "audio" | "object" | "map" | "del"
        | "code" | "kbd" | "rt" | "rp" | "mjx-math" | "colgroup" => Hidden,
        _ => Inline,
    }
}

impl Element {
    /// Begins on a line of its own, so that an open paragraph ends before it.
    pub(super) fn is_block(self) -> bool {
        use Element::*;
        matches!(
            self,
            Block
                | Sectioning
                | Figure
                | Paragraph
                | Heading(_)
                | List
                | Item
                | Quote
                | Preformatted
                | Caption
                | Table
                | Rule
        )
    }

    /// End tags inside this element do not reach out of it.
    pub(super) fn is_border(self) -> bool {
        matches!(self, Element::Table | Element::Cell | Element::Caption)
    }
}
