//! Small PDFs for the tests, written object by object: text at given places in the two standard
//! fonts that every reader knows.

/// Text at a place, in points from the lower left corner.
#[derive(Clone, Copy)]
pub struct At<'a> {
    pub x: f32,
    pub y: f32,
    pub size: f32,
    pub bold: bool,
    pub text: &'a str,
}

pub fn at(x: f32, y: f32, text: &str) -> At<'_> {
    sized(x, y, 10.0, text)
}

pub fn sized(x: f32, y: f32, size: f32, text: &str) -> At<'_> {
    At {
        x,
        y,
        size,
        bold: false,
        text,
    }
}

pub fn bold(x: f32, y: f32, size: f32, text: &str) -> At<'_> {
    At {
        bold: true,
        ..sized(x, y, size, text)
    }
}

/// The content stream that shows the texts.
pub fn content(texts: &[At]) -> String {
    let mut out = String::from("BT\n");
    for t in texts {
        let shown = t
            .text
            .replace('\\', "\\\\")
            .replace('(', "\\(")
            .replace(')', "\\)");
        let font = if t.bold { "B" } else { "R" };
        out.push_str(&format!(
            "/{font} {} Tf 1 0 0 1 {} {} Tm ({shown}) Tj\n",
            t.size, t.x, t.y
        ));
    }
    out.push_str("ET\n");
    out
}

/// A PDF of these content streams, one page each, of 600 by 800 points; `extra` is added to each
/// page's dictionary.
pub fn pdf(contents: &[String], extra: &str) -> Vec<u8> {
    let pages = contents.len();
    let mut objects = vec!["<< /Type /Catalog /Pages 2 0 R >>".to_string()];
    let kids: Vec<String> = (0..pages).map(|i| format!("{} 0 R", 5 + 2 * i)).collect();
    objects.push(format!(
        "<< /Type /Pages /Count {pages} /Kids [{}] >>",
        kids.join(" ")
    ));
    for name in ["Times-Roman", "Times-Bold"] {
        objects.push(format!(
            "<< /Type /Font /Subtype /Type1 /BaseFont /{name} /Encoding /WinAnsiEncoding >>"
        ));
    }
    for (i, content) in contents.iter().enumerate() {
        objects.push(format!(
            "<< /Type /Page /Parent 2 0 R /MediaBox [0 0 600 800] /Contents {} 0 R {extra} \
             /Resources << /Font << /R 3 0 R /B 4 0 R >> >> >>",
            6 + 2 * i
        ));
        objects.push(format!(
            "<< /Length {} >>\nstream\n{content}endstream",
            content.len()
        ));
    }
    let mut out = b"%PDF-1.4\n".to_vec();
    let mut places = Vec::new();
    for (i, object) in objects.iter().enumerate() {
        places.push(out.len());
        out.extend(format!("{} 0 obj\n{object}\nendobj\n", i + 1).bytes());
    }
    let start = out.len();
    out.extend(format!("xref\n0 {}\n0000000000 65535 f \n", objects.len() + 1).bytes());
    for place in places {
        out.extend(format!("{place:010} 00000 n \n").bytes());
    }
    out.extend(
        format!(
            "trailer\n<< /Size {} /Root 1 0 R >>\nstartxref\n{start}\n%%EOF\n",
            objects.len() + 1
        )
        .bytes(),
    );
    out
}
