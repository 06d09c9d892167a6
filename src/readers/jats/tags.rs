//! What each JATS element means for the reading.

/// The part an element plays. Elements not listed are transparent: their text is read where it
/// stands.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Tag {
    Inline,
    /// Left out with everything in it.
    Skip,
    /// A letter or answer about the article: left out, with a remark.
    Letter,
    Article,
    /// Metadata, of which only titles and abstracts are read.
    Front,
    /// Metadata on the way to a title or abstract.
    Meta,
    ArticleTitle,
    Abstract,
    Body,
    Back,
    /// Acknowledgements and the like, wherever they stand.
    BackMatter,
    NoteGroup,
    Appendix,
    Section,
    Title,
    Label,
    Paragraph,
    List,
    ListItem,
    DefItem,
    Term,
    Def,
    Quote,
    /// A block that belongs to the argument: a theorem, a speech.
    Set,
    /// A block with its own place on the page: a figure, a box.
    Float,
    TableWrap,
    TableFoot,
    Caption,
    Attrib,
    Note,
    Table,
    TableHead,
    Row,
    DataCell,
    HeaderCell,
    Break,
    Sup,
    Sub,
    Xref,
    Graphic,
    Alternatives,
    InlineFormula,
    DisplayFormula,
    Math,
    Tex,
    TextualForm,
}

/// Finds the part of an element by its local name.
pub(super) fn tag(name: &str) -> Tag {
    use Tag::*;
    match name {
        "xref" => Xref,
        "italic" | "bold" | "named-content" | "ext-link" | "underline" => Inline,
        "td" => DataCell,
        "sub" => Sub,
        "sup" => Sup,
        "p" => Paragraph,
        "tr" => Row,
        "title" => Title,
        "label" => Label,
        "sec" => Section,
        "math" => Math,
        "inline-formula" | "chem-struct" => InlineFormula,
        "disp-formula" => DisplayFormula,
        "alternatives" => Alternatives,
        "graphic" | "inline-graphic" | "media" | "inline-media" => Graphic,
        "th" => HeaderCell,
        "caption" => Caption,
        "fn" => Note,
        "list-item" => ListItem,
        "list" | "def-list" => List,
        "tex-math" => Tex,
        "textual-form" => TextualForm,
        "table-wrap" => TableWrap,
        "table-wrap-foot" => TableFoot,
        "table" | "array" => Table,
        "thead" => TableHead,
        "fig" | "fig-group" | "table-wrap-group" | "supplementary-material" | "boxed-text" => Float,
        "break" => Break,
        "disp-quote" | "verse-group" => Quote,
        "statement" | "speech" | "chem-struct-wrap" | "disp-formula-group" | "question" | "answer"
        | "explanation" => Set,
        "attrib" | "verse-line" | "speaker" => Attrib,
        "def-item" => DefItem,
        "term" => Term,
        "def" => Def,
        "article" => Article,
        "front" | "front-stub" | "book-meta" | "collection-meta" | "book-part-meta" => Front,
        "article-meta" | "title-group" | "book-title-group" => Meta,
        "article-title" | "subtitle" | "book-title" => ArticleTitle,
        "abstract" | "trans-abstract" => Abstract,
        "body" | "floats-group" | "floats-wrap" | "named-book-part-body" => Body,
        "back" | "book-back" => Back,
        "ack" | "glossary" | "bio" | "notes" => BackMatter,
        "fn-group" => NoteGroup,
        "app" | "app-group" => Appendix,
        "sub-article" | "response" => Letter,
        // References, metadata, programs, and what only describes a picture.
        "ref-list"
        | "ref"
        | "element-citation"
        | "nlm-citation"
        | "citation-alternatives"
        | "object-id"
        | "alt-text"
        | "long-desc"
        | "permissions"
        | "copyright-statement"
        | "license"
        | "sec-meta"
        | "kwd-group"
        | "contrib-group"
        | "author-notes"
        | "history"
        | "counts"
        | "code"
        | "preformat"
        | "private-char"
        | "rp"
        | "rt"
        | "index-term"
        | "toc"
        | "related-object"
        | "processing-meta"
        | "journal-meta"
        | "custom-meta-group"
        | "custom-meta-wrap"
        | "colgroup"
        | "col" => Skip,
        _ => Inline,
    }
}

/// Kinds of footnote that say something about the authors, not about the study.
pub(super) fn is_about_authors(note_type: &str) -> bool {
    matches!(
        note_type,
        "con"
            | "conflict"
            | "coi-statement"
            | "financial-disclosure"
            | "supported-by"
            | "corresp"
            | "equal"
            | "current-aff"
            | "present-address"
            | "previously-at"
            | "presented-at"
            | "presented-by"
            | "participating-researchers"
            | "study-group-members"
            | "deceased"
            | "on-leave"
            | "edited-by"
            | "com"
            | "abbr"
    )
}
