//! The *YAML header* of a Markdown file, of which only title and abstract are read.

use super::inline::Source;

/// What the header says.
pub(super) struct Header {
    /// Lines it takes, with the dashes around it.
    pub lines: usize,
    pub title: Option<Source>,
    pub abstract_paragraphs: Vec<Source>,
}

/// Reads the header, if the file begins with one.
pub(super) fn header(lines: &[&str]) -> Option<Header> {
    let first = lines.first()?.trim_start_matches('\u{feff}').trim_end();
    if first != "---" {
        return None;
    }
    let end = lines
        .iter()
        .take(2000)
        .skip(1)
        .position(|line| matches!(line.trim_end(), "---" | "..."))?
        + 1;
    // A rule, then prose: no header.
    if !lines[1..end].iter().any(|line| key(line).is_some()) && end > 1 {
        return None;
    }
    let mut header = Header {
        lines: end + 1,
        title: None,
        abstract_paragraphs: Vec::new(),
    };
    let mut at = 1;
    while at < end {
        let Some((name, value)) = key(lines[at]) else {
            at += 1;
            continue;
        };
        let start = at;
        at += 1;
        // Lines further in belong to the value.
        while at < end && (lines[at].trim().is_empty() || lines[at].starts_with([' ', '\t'])) {
            at += 1;
        }
        if matches!(name, "title" | "abstract") {
            let paragraphs = scalar(value, &lines[start + 1..at], start as u32 + 1);
            if name == "title" {
                header.title = paragraphs.into_iter().next();
            } else {
                header.abstract_paragraphs = paragraphs;
            }
        }
    }
    Some(header)
}

/// `name: value` at the left margin.
fn key(line: &str) -> Option<(&str, &str)> {
    let (name, value) = line.split_once(':')?;
    let plain = !name.is_empty()
        && name
            .bytes()
            .all(|b| b.is_ascii_alphanumeric() || b"-_".contains(&b));
    (plain && (value.is_empty() || value.starts_with(' '))).then_some((name, value.trim()))
}

/// A string, plain, quoted or as a block of lines. `line` is that of its key.
fn scalar(value: &str, more: &[&str], line: u32) -> Vec<Source> {
    let block = value.starts_with(['|', '>']);
    let quote = value.chars().next().filter(|c| matches!(c, '"' | '\''));
    let mut paragraphs: Vec<Source> = vec![Source::default()];
    let mut push = |text: &str, line: u32| {
        if text.is_empty() {
            if paragraphs.last().is_some_and(|p| !p.is_empty()) {
                paragraphs.push(Source::default());
            }
        } else if let Some(last) = paragraphs.last_mut() {
            last.push(text, line);
        }
    };
    let first = if block { "" } else { value };
    let lines: Vec<(&str, u32)> = std::iter::once((first, line))
        .chain(
            more.iter()
                .enumerate()
                .map(|(i, l)| (l.trim(), line + 1 + i as u32)),
        )
        .collect();
    let last_full = lines.iter().rposition(|(l, _)| !l.is_empty()).unwrap_or(0);
    for (i, (text, number)) in lines.iter().enumerate() {
        let mut text = text.to_string();
        if let Some(quote) = quote {
            if i == 0 {
                text.remove(0);
            }
            if i == last_full && text.ends_with(quote) {
                text.pop();
            }
            text = match quote {
                '"' => text.replace("\\\"", "\"").replace("\\\\", "\\"),
                _ => text.replace("''", "'"),
            };
        }
        push(&text, *number);
    }
    paragraphs.retain(|p| !p.is_empty());
    paragraphs
}

#[cfg(test)]
mod tests {
    use super::*;

    fn texts(paragraphs: &[Source]) -> Vec<&str> {
        paragraphs.iter().map(|p| p.text.as_str()).collect()
    }

    #[test]
    fn title_and_abstract_in_their_shapes() {
        let lines: Vec<&str> =
            "---\ntitle: \"The \\\"dry\\\" plots\"\nauthor:\n  - name: Rake\n    abstract: no\nabstract: |\n  One,\n  two.\n\n  Three.\noutput: pdf\n---\nText"
                .lines()
                .collect();
        let header = header(&lines).expect("it is a header");
        assert_eq!(header.lines, 12);
        assert_eq!(header.title.map(|t| t.text).as_deref(), Some("The \"dry\" plots"));
        assert_eq!(texts(&header.abstract_paragraphs), ["One,\ntwo.", "Three."]);
        assert_eq!(header.abstract_paragraphs[0].lines, [7, 8]);
    }

    #[test]
    fn plain_values_go_on_below() {
        let lines: Vec<&str> = "---\ntitle: 'It''s dry'\nabstract: We asked\n  40 gardeners.\n...\n"
            .lines()
            .collect();
        let header = header(&lines).expect("it is a header");
        assert_eq!(header.title.map(|t| t.text).as_deref(), Some("It's dry"));
        assert_eq!(texts(&header.abstract_paragraphs), ["We asked\n40 gardeners."]);
    }

    #[test]
    fn rules_are_no_headers() {
        assert!(header(&["---", "Plots differed.", "---"]).is_none());
        assert!(header(&["---", "a: b"]).is_none());
        assert!(header(&["Text"]).is_none());
    }
}
