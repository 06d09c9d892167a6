//! A *place* says where something stands, in the terms a person uses to find it.

use super::{Area, LineArea};

/// Where a piece of the text stands. Serialised as it is shown in JSON.
#[derive(Clone, Debug, Default, PartialEq, serde::Serialize)]
pub struct Place {
    /// From 1; formats without pages have none.
    pub page: Option<u32>,
    /// Title of the section.
    pub section: Option<String>,
    /// From 1, counting paragraphs, list items, notes and captions through the document.
    pub paragraph: Option<u32>,
    /// From 1: the line of the file for formats written by hand, the line on the page for PDF.
    pub line: Option<u32>,
    /// Label of the table as printed.
    pub table: Option<String>,
    /// Row and column of the cell in the grid, from 1.
    pub row: Option<u32>,
    pub column: Option<u32>,
    /// Range of characters (Unicode scalar values) in the text as read.
    pub start: usize,
    pub end: usize,
    /// What it covers of its page: left, top, right, bottom, in points from the upper left corner of
    /// the page as shown. Where it goes over several lines, of the first one.
    #[serde(rename = "box")]
    pub area: Option<Area>,
    /// What it covers on every line that it goes over; in JSON only where there are several.
    #[serde(rename = "boxes", skip_serializing_if = "is_one_line")]
    pub areas: Vec<LineArea>,
}

/// Whether nothing is to be said beyond the first line.
pub fn is_one_line(areas: &[LineArea]) -> bool {
    areas.len() < 2
}

impl std::fmt::Display for Place {
    /// The place in words, e.g. `page 4, line 12, section "Results"`.
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        let mut parts = Vec::new();
        if let Some(page) = self.page {
            parts.push(format!("page {page}"));
        }
        if let Some(line) = self.line {
            parts.push(format!("line {line}"));
        }
        if let Some(table) = &self.table {
            parts.push(table.clone());
            if let (Some(row), Some(column)) = (self.row, self.column) {
                parts.push(format!("row {row}, column {column}"));
            }
        } else if let Some(paragraph) = self.paragraph {
            parts.push(format!("paragraph {paragraph}"));
        }
        if let Some(section) = &self.section {
            parts.push(format!("section \"{section}\""));
        }
        f.write_str(&parts.join(", "))
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn reads_like_a_reference_a_person_would_give() {
        let place = Place {
            page: Some(4),
            line: Some(12),
            section: Some("Results".into()),
            paragraph: Some(9),
            ..Place::default()
        };
        assert_eq!(
            place.to_string(),
            "page 4, line 12, paragraph 9, section \"Results\""
        );
        let cell = Place {
            table: Some("Table 2".into()),
            row: Some(3),
            column: Some(5),
            paragraph: Some(9),
            ..Place::default()
        };
        assert_eq!(cell.to_string(), "Table 2, row 3, column 5");
    }
}
