//! What a heading starts: which [`Part`] of a manuscript its title opens, and how long that part
//! lasts. Every reader of a format without marked-up parts asks here, so that "References" ends
//! the results in a Word file exactly as it does in a text file.
//!
//! ```
//! use tieout::manuscript::Part;
//! use tieout::readers::headings::Parts;
//! let mut parts = Parts::new();
//! assert_eq!(parts.heading(1, "Abstract"), Part::Abstract);
//! assert_eq!(parts.paragraph("Forty gardeners kept diaries."), Part::Abstract);
//! assert_eq!(parts.paragraph("Keywords: allotments, water"), Part::Front);
//! assert_eq!(parts.heading(1, "3. Results"), Part::Body);
//! assert_eq!(parts.heading(1, "References"), Part::References);
//! assert_eq!(parts.heading(1, "Appendix A"), Part::Body);
//! ```

use crate::manuscript::Part;

/// A title known by name.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Known {
    /// The part it opens.
    pub part: Part,
    /// The level such a section usually has, 1 being the highest.
    pub level: u8,
}

/// Titles by the part they open, as [`plain`] leaves them: English first, then German, Spanish,
/// French, Portuguese, Italian, Dutch, Polish.
#[rustfmt::skip]
const ABSTRACT: &[&str] = &[
    "abstract", "summary", "structured abstract", "executive summary", "zusammenfassung", "kurzfassung",
    "resumen", "résumé", "resumo", "riassunto", "sommario", "samenvatting", "streszczenie", "abstrakt",
];
#[rustfmt::skip]
const REFERENCES: &[&str] = &[
    "references", "reference", "reference list", "list of references", "references and notes",
    "references cited", "bibliography", "literature", "literature cited", "works cited", "cited literature",
    "literatur", "literaturverzeichnis", "quellenverzeichnis", "referenzen", "referencias",
    "referencias bibliográficas", "bibliografía", "références", "références bibliographiques",
    "bibliographie", "referências", "referências bibliográficas", "bibliografia",
    "riferimenti bibliografici", "referenties", "literatuur", "literatuurlijst", "piśmiennictwo",
    "literatura", "computational details and references",
];
#[rustfmt::skip]
const BACK: &[&str] = &[
    "acknowledgements", "acknowledgments", "acknowledgement", "acknowledgment", "acknowledgements and funding",
    "funding", "funding statement", "funding information", "financial support", "financial disclosure",
    "author note", "author notes", "authors note", "authors' note", "author's note", "author contributions",
    "author contribution", "authors' contributions", "authors contributions", "author contribution statement",
    "credit authorship contribution statement", "credit author statement", "contributions", "contributors", "author information",
    "conflict of interest", "conflicts of interest", "conflict of interest statement",
    "declaration of conflicting interests", "declaration of interest", "declaration of interests",
    "declaration of competing interest", "declaration of competing interests", "competing interests",
    "competing interest", "disclosure", "disclosures", "disclosure statement", "declarations",
    "data availability", "data availability statement", "availability of data and materials",
    "data accessibility", "data and code availability", "code availability", "open practices",
    "open practices statement", "open practices disclosure", "ethics statement", "ethics approval",
    "ethical approval", "ethics approval and consent to participate", "consent for publication",
    "about the author", "about the authors", "biographical note", "orcid", "danksagung", "finanzierung",
    "interessenkonflikt", "interessenkonflikte", "interessenskonflikt", "agradecimientos", "financiación",
    "conflicto de intereses", "conflictos de intereses", "remerciements", "financement",
    "conflit d'intérêts", "conflits d'intérêts", "liens d'intérêts", "agradecimentos", "financiamento",
    "conflito de interesses", "ringraziamenti", "finanziamento", "conflitto di interessi", "dankwoord",
    "podziękowania", "finansowanie", "konflikt interesów",
];
#[rustfmt::skip]
const FRONT: &[&str] = &[
    "keywords", "key words", "index terms", "contents", "table of contents", "highlights", "list of abbreviations",
    "abbreviations", "inhaltsverzeichnis", "inhalt", "schlüsselwörter", "índice", "palabras clave",
    "table des matières", "mots-clés", "sumário", "palavras-chave", "indice", "parole chiave",
    "inhoudsopgave", "spis treści", "słowa kluczowe",
];
/// Sections of the first level that belong to the body.
#[rustfmt::skip]
const MAIN: &[&str] = &[
    "introduction", "background", "method", "methods", "methodology", "materials and methods",
    "material and methods", "methods and materials", "patients and methods", "subjects and methods",
    "participants and methods", "experimental procedures", "results", "result", "findings",
    "results and discussion", "discussion", "general discussion", "overall discussion",
    "discussion and conclusion", "discussion and conclusions", "conclusion", "conclusions",
    "concluding remarks", "present study", "the present study", "current study", "the current study",
    "footnotes", "notes", "endnotes", "tables", "figures", "tables and figures", "figure captions",
    "figure legends", "list of tables", "list of figures", "appendix", "appendices", "supplement",
    "supplements", "supplementary material", "supplementary materials", "supplementary information",
    "supplemental material", "supplemental materials", "supporting information", "einleitung", "methode",
    "methoden", "material und methoden", "ergebnisse", "diskussion", "schlussfolgerung",
    "schlussfolgerungen", "fazit", "anhang", "tabellen", "abbildungen", "introducción", "método", "métodos",
    "material y métodos", "materiales y métodos", "resultados", "discusión", "conclusión", "conclusiones",
    "anexo", "anexos", "apéndice", "méthode", "méthodes", "matériel et méthodes", "résultats", "annexe",
    "annexes", "introdução", "materiais e métodos", "discussão", "conclusão", "conclusões", "apêndice",
    "introduzione", "metodo", "metodi", "materiali e metodi", "risultati", "discussione", "conclusione",
    "conclusioni", "inleiding", "resultaten", "discussie", "conclusie", "wstęp", "wprowadzenie", "metoda",
    "metody", "materiał i metody", "wyniki", "dyskusja", "wnioski", "aneks",
];
/// Sections of the second level, believed only where the paragraph is set like a heading.
#[rustfmt::skip]
const MINOR: &[&str] = &[
    "participants", "participants and design", "participants and procedure", "subjects", "patients",
    "procedure", "procedures", "measures", "measurements", "materials", "material",
    "materials and procedure", "design", "design and procedure", "design and participants", "study design",
    "instruments", "apparatus", "apparatus and materials", "stimuli", "stimuli and apparatus", "sample",
    "sample size", "sampling", "power analysis", "outcomes", "outcome measures", "data analysis",
    "data analyses", "statistical analysis", "statistical analyses", "statistics", "analysis",
    "analysis plan", "analytic strategy", "analytical strategy", "preregistration", "pre-registration",
    "experiment", "exclusions", "manipulation check", "manipulation checks", "preliminary analyses", "preliminary analysis",
    "descriptive statistics", "main analyses", "main analysis", "primary analysis", "primary analyses",
    "primary outcome", "secondary outcomes", "secondary analyses", "exploratory analyses",
    "exploratory analysis", "additional analyses", "supplementary analyses", "sensitivity analysis",
    "sensitivity analyses", "robustness checks", "hypotheses", "limitations", "limitations and future directions",
    "future directions", "implications", "strengths and limitations", "stichprobe", "versuchspersonen",
    "teilnehmer", "ablauf", "statistische auswertung", "participantes", "procedimiento", "instrumentos",
    "análisis estadístico", "análisis de datos", "análise estatística", "procédure", "analyses statistiques",
];
/// Titles inside a structured abstract.
#[rustfmt::skip]
const STRUCTURED: &[&str] = &[
    "background", "objective", "objectives", "aim", "aims", "purpose", "importance", "context", "introduction",
    "rationale", "hypothesis", "design", "setting", "participants", "patients", "interventions",
    "intervention", "exposures", "exposure", "main outcome measures", "main outcomes and measures",
    "measures", "measurements", "method", "methods", "materials and methods", "methods and findings",
    "design, setting, and participants", "results", "findings", "principal findings", "main results",
    "discussion", "interpretation", "conclusion", "conclusions", "conclusions and relevance",
    "significance", "limitations", "trial registration", "hintergrund", "ziel", "methode", "methoden",
    "ergebnisse", "schlussfolgerung", "schlussfolgerungen", "objetivo", "objetivos", "método", "métodos",
    "resultados", "conclusiones", "conclusões", "contexte", "objectif", "objectifs", "méthode", "méthodes",
    "résultats",
];
/// Words that begin a numbered first-level title: `Study 2`, `Experiment 1b: Hoses`, `Appendix A`.
#[rustfmt::skip]
const NUMBERED: &[&str] = &[
    "study", "studies", "experiment", "experiments", "pilot study", "survey", "trial", "appendix", "supplement",
    "studie", "untersuchung", "anhang", "estudio", "experimento", "étude", "expérience", "estudo", "annexe",
    "anexo", "badanie", "eksperyment",
];

/// What the first word of a title says that stands behind the text, even behind the references.
#[rustfmt::skip]
const APPENDED: &[&str] = &[
    "appendix", "appendices", "supplement", "supplements", "supplementary", "supplemental", "anhang",
    "supporting information", "online resource", "tables", "figures", "figure captions", "figure legends",
    "list of tables", "list of figures",
];

/// The title in lower case, without its number (or a line number from the margin before it), final
/// punctuation and letter spacing: `2.1. METHODS:`, `205 Methods` and `M E T H O D S` are all `methods`.
pub fn plain(title: &str) -> String {
    let mut words: Vec<String> = title
        .split_whitespace()
        .map(|w| w.to_lowercase().replace('’', "'"))
        .collect();
    if words.len() > 3 && words.iter().all(|w| w.chars().count() == 1) {
        words = vec![words.concat()];
    }
    // A number of the line, taken in from the margin, may stand before that of the section.
    for _ in 0..2 {
        if words.len() > 1 && is_section_number(&words[0]) {
            words.remove(0);
        }
    }
    let joined = words.join(" ");
    let bare = joined.trim_matches(|c: char| {
        c.is_whitespace() || matches!(c, '.' | ':' | ';' | ',' | '*' | '#' | '_' | '-' | '–' | '—' | '|')
    });
    // `1.Introduction`: the number stuck to the word.
    let word = bare.trim_start_matches(|c: char| c.is_ascii_digit() || c == '.');
    if word.len() < bare.len() && bare.contains('.') && word.chars().next().is_some_and(char::is_alphabetic) {
        return word.to_string();
    }
    bare.to_string()
}

/// `2`, `2.1.`, `IV.`, `(3)`, `A.`
fn is_section_number(word: &str) -> bool {
    let bare = word.trim_matches(|c| matches!(c, '.' | '(' | ')' | ':'));
    let digits = !bare.is_empty() && bare.chars().all(|c| c.is_ascii_digit() || c == '.');
    let roman = !bare.is_empty() && bare.chars().all(|c| matches!(c, 'i' | 'v' | 'x'));
    let letter = bare.len() == 1 && bare != word && bare.chars().all(char::is_alphabetic);
    digits || roman || letter
}

/// What a title opens, if it is known by name.
pub fn known(title: &str) -> Option<Known> {
    // No title known by name is longer; running text is not worth looking up.
    if title.len() > 200 {
        return None;
    }
    let plain = plain(title);
    let name = plain.as_str();
    // `205References`: a line number of the margin stuck to the word.
    by_name(name).or_else(|| {
        let word = name.trim_start_matches(|c: char| c.is_ascii_digit());
        if word.len() < name.len() {
            by_name(word)
        } else {
            None
        }
    })
}

fn by_name(name: &str) -> Option<Known> {
    let part = |part, level| Some(Known { part, level });
    if ABSTRACT.contains(&name) {
        return part(Part::Abstract, 1);
    }
    if REFERENCES.contains(&name) || name.starts_with("references (") || name.starts_with("references for ") {
        return part(Part::References, 1);
    }
    if BACK.contains(&name) {
        return part(Part::Back, 1);
    }
    if FRONT.contains(&name) {
        return part(Part::Front, 1);
    }
    if MAIN.contains(&name) || is_numbered(name) {
        return part(Part::Body, 1);
    }
    MINOR.contains(&name).then_some(Known {
        part: Part::Body,
        level: 2,
    })
}

/// Whether a title opens one study of several: `Study 2`, `Experiment 1b: Hoses`. The sections below
/// it (`Method`, `Results` …) belong to it even where the file gives them no level.
pub fn is_study(title: &str) -> bool {
    let name = plain(title);
    let appended = ["appendix", "supplement", "anhang", "annexe", "anexo"];
    title.len() <= 200 && is_numbered(&name) && !appended.iter().any(|a| name.starts_with(a))
}

/// Whether a title names an appendix, a supplement, or the tables and figures behind the text:
/// `Appendix B Diary form`, `Supplementary Methods`.
pub fn is_appended(title: &str) -> bool {
    title.len() <= 200 && {
        let name = plain(title);
        APPENDED.iter().any(|word| {
            name.strip_prefix(word)
                .is_some_and(|rest| !rest.starts_with(char::is_alphabetic))
        })
    }
}

/// `study 2`, `experiment 1b`, `appendix a`, alone, or followed by a short title after a colon or
/// dash. `study 2 showed that` is running text.
fn is_numbered(name: &str) -> bool {
    for word in NUMBERED {
        let Some(rest) = name.strip_prefix(word).and_then(|r| r.strip_prefix(' ')) else {
            continue;
        };
        let (number, title) = match rest.find([' ', ':', '.', '–', '—']) {
            Some(at) => rest.split_at(at),
            None => (rest, ""),
        };
        let short = number.chars().count() <= 3;
        let numbered = number.chars().next().is_some_and(|c| c.is_ascii_digit())
            || number.chars().count() == 1
            || (!number.is_empty() && number.chars().all(|c| matches!(c, 'i' | 'v' | 'x')));
        let title = title.trim_start();
        let titled = title.starts_with([':', '.', '–', '—', '-']) && title.chars().count() < 120;
        let section = matches!(
            title,
            "method" | "methods" | "results" | "discussion" | "introduction" | "results and discussion"
        );
        if short && numbered && (title.is_empty() || titled || section) {
            return true;
        }
    }
    false
}

/// Whether a paragraph lists the keywords or counts the words, which belongs to the title page.
pub fn is_keyword_line(text: &str) -> bool {
    #[rustfmt::skip]
    const STARTS: &[&str] = &[
        "keywords", "key words", "keyword:", "index terms", "word count", "schlüsselwörter", "schlagwörter",
        "palabras clave", "palabras-clave", "mots-clés", "mots clés", "palavras-chave", "palavras chave",
        "parole chiave", "trefwoorden", "sleutelwoorden", "słowa kluczowe",
    ];
    let start: String = text
        .trim_start()
        .chars()
        .take(24)
        .collect::<String>()
        .to_lowercase();
    STARTS.iter().any(|s| start.starts_with(s)) && text.len() < 600
}

/// The part of a paragraph that carries its own title in its first words: `Abstract. We …`,
/// `ABSTRACT We …`, `Funding: None.`
pub fn run_in(text: &str) -> Option<Part> {
    let first = text.split_whitespace().next()?;
    let shouted = first.len() > 3 && first.chars().all(char::is_uppercase) && text.len() > first.len() + 40;
    if shouted && known(first).is_some_and(|k| k.part == Part::Abstract) {
        return Some(Part::Abstract);
    }
    let end = text
        .char_indices()
        .take(60)
        .find(|(at, c)| matches!(c, '.' | ':' | '—' | '–') || text[*at..].starts_with(" - "))?
        .0;
    if end + 2 > text.trim_end().len() {
        return None;
    }
    known(&text[..end])
        .map(|k| k.part)
        .filter(|p| matches!(p, Part::Abstract | Part::Back))
}

/// Follows the headings of a document and says which part each block belongs to.
#[derive(Debug)]
pub struct Parts {
    part: Part,
    /// Level of the heading that opened the part.
    level: u8,
    /// A paragraph has been seen since that heading.
    filled: bool,
    /// Titles seen inside a structured abstract.
    seen: Vec<String>,
}

impl Default for Parts {
    fn default() -> Self {
        Parts::new()
    }
}

impl Parts {
    /// At the beginning of a document, which is body until a heading says otherwise.
    pub fn new() -> Parts {
        Parts {
            part: Part::Body,
            level: 1,
            filled: false,
            seen: Vec::new(),
        }
    }

    /// The part the document is in.
    pub fn current(&self) -> Part {
        self.part
    }

    /// Enters a part without a heading, e.g. because the file marks it.
    pub fn enter(&mut self, part: Part) {
        self.part = part;
        self.level = 1;
        self.filled = false;
        self.seen.clear();
    }

    /// The part that a heading and what follows it belong to.
    pub fn heading(&mut self, level: u8, title: &str) -> Part {
        let known = known(title);
        let opens = known.map_or(Part::Body, |k| k.part);
        let stays = match (self.part, opens) {
            (Part::Abstract, Part::Body) => self.stays_in_abstract(level, title, known),
            (Part::References, Part::Body) => known.is_none() && !is_appended(title) && level > self.level,
            (Part::Back, Part::Body) => level > self.level,
            _ => false,
        };
        if stays {
            return self.part;
        }
        self.part = opens;
        self.level = level;
        self.filled = false;
        self.seen.clear();
        self.part
    }

    /// A structured abstract has no text before its first title, and no title twice.
    fn stays_in_abstract(&mut self, level: u8, title: &str, known: Option<Known>) -> bool {
        // The titles inside an abstract have no numbers.
        if level < self.level || title.trim_start().starts_with(|c: char| c.is_ascii_digit()) {
            return false;
        }
        let name = plain(title);
        let structured = !self.filled || !self.seen.is_empty();
        if structured && STRUCTURED.contains(&name.as_str()) && !self.seen.contains(&name) {
            // A second way of saying how it began is the beginning of the paper itself.
            let begins = name == "introduction" && !self.seen.is_empty();
            self.seen.push(name);
            return !begins;
        }
        level > self.level && known.is_none()
    }

    /// The part that a paragraph belongs to.
    pub fn paragraph(&mut self, text: &str) -> Part {
        if matches!(self.part, Part::Abstract | Part::Body | Part::Front) && is_keyword_line(text) {
            if self.part == Part::Abstract {
                self.enter(Part::Body);
            }
            return Part::Front;
        }
        if !text.trim().is_empty() {
            self.filled = true;
        }
        if self.part == Part::Body
            && let Some(part) = run_in(text)
        {
            return part;
        }
        self.part
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn titles_are_known_by_name_whatever_their_dress() {
        for (title, part, level) in [
            ("ABSTRACT", Part::Abstract, 1),
            ("A B S T R A C T", Part::Abstract, 1),
            ("2. Method", Part::Body, 1),
            ("1.Introduction", Part::Body, 1),
            ("IV. Results:", Part::Body, 1),
            ("3.2 Participants", Part::Body, 2),
            ("Study 2", Part::Body, 1),
            ("Experiment 1b: Hoses and cans", Part::Body, 1),
            ("Study 1 Results", Part::Body, 1),
            ("Literature Cited", Part::References, 1),
            ("Literaturverzeichnis", Part::References, 1),
            ("Acknowledgments", Part::Back, 1),
            ("Authors’ contributions", Part::Back, 1),
            ("205 References", Part::References, 1),
            ("205References", Part::References, 1),
            ("118 3. Results", Part::Body, 1),
            ("Appendix A", Part::Body, 1),
            ("Table of Contents", Part::Front, 1),
        ] {
            assert_eq!(known(title), Some(Known { part, level }), "{title}");
        }
        for title in [
            "Watering and yield",
            "Study 2 showed that mulch helped",
            "Results differed between plots.",
            "",
        ] {
            assert_eq!(known(title), None, "{title}");
        }
    }

    #[test]
    fn references_last_until_a_section_of_their_level_or_a_known_one() {
        let mut parts = Parts::new();
        assert_eq!(parts.heading(2, "References"), Part::References);
        assert_eq!(parts.heading(3, "Websites"), Part::References);
        assert_eq!(parts.paragraph("Spade, A. (2014). Water."), Part::References);
        assert_eq!(parts.heading(3, "Appendix B"), Part::Body);
        parts.heading(1, "References");
        assert_eq!(parts.heading(1, "Plot maps"), Part::Body);
        parts.heading(1, "References");
        assert_eq!(parts.heading(2, "Appendix B Diary form"), Part::Body);
        assert!(is_appended("Supplementary Methods") && !is_appended("Figuresque beds"));
    }

    #[test]
    fn a_structured_abstract_keeps_its_titles() {
        let mut parts = Parts::new();
        parts.heading(1, "Abstract");
        for title in ["Background", "Methods", "Results", "Conclusions"] {
            assert_eq!(parts.heading(1, title), Part::Abstract, "{title}");
            assert_eq!(parts.paragraph("Some text."), Part::Abstract);
        }
        assert_eq!(parts.heading(1, "Background"), Part::Body);
        assert_eq!(parts.heading(1, "Methods"), Part::Body);
        parts.enter(Part::Abstract);
        assert_eq!(parts.heading(1, "1. Introduction"), Part::Body);
    }

    #[test]
    fn an_abstract_with_text_ends_at_the_next_heading() {
        let mut parts = Parts::new();
        parts.heading(1, "Abstract");
        parts.paragraph("We asked 40 gardeners.");
        assert_eq!(parts.heading(2, "Methods"), Part::Body);
    }

    #[test]
    fn back_matter_ends_at_the_next_section() {
        let mut parts = Parts::new();
        assert_eq!(parts.heading(1, "Declarations"), Part::Back);
        assert_eq!(parts.heading(2, "Who dug what"), Part::Back);
        assert_eq!(parts.heading(1, "Study 3"), Part::Body);
    }

    #[test]
    fn paragraphs_with_their_title_inside() {
        let mut parts = Parts::new();
        assert_eq!(
            parts.paragraph("Abstract: We asked 40 gardeners."),
            Part::Abstract
        );
        for text in [
            "Abstract—We asked them.",
            "ABSTRACT We asked 40 gardeners to keep a diary of water.",
        ] {
            assert_eq!(run_in(text), Some(Part::Abstract), "{text}");
        }
        assert_eq!(run_in("Abstract thinking helps: it does."), None);
        assert_eq!(
            parts.paragraph("Funding. None of the plots was paid."),
            Part::Back
        );
        assert_eq!(parts.paragraph("Results: t(28) = 2.20"), Part::Body);
        assert_eq!(parts.paragraph("Key words: plots"), Part::Front);
        assert_eq!(parts.paragraph("The water table was low."), Part::Body);
    }
}
