//! *TeX math* is the notation that LaTeX, Markdown, JATS and web pages share for formulas. Here it
//! becomes linear text: `\chi^2(1) = 9.33` is read as `χ²(1) = 9.33`.
//!
//! Reading is tolerant: an unknown macro leaves its arguments behind, a missing brace ends with
//! the formula. Each character is looked at a bounded number of times, so any input terminates.

use super::tex_symbols::{self, symbol};
use crate::manuscript::Builder;
use unicode_normalization::UnicodeNormalization;

/// Groups nested deeper than this are read without regard to raising and lowering.
const DEEPEST: usize = 40;

/// Part of a formula, as it goes to the builder.
#[derive(Clone, Debug, PartialEq)]
enum Piece {
    Text(String),
    Raised(String),
    Lowered(String),
}

/// Reads a formula (without its `$` or `\[` marks) as linear text into the open block of `b`.
pub fn push_math(b: &mut Builder, tex: &str) {
    for piece in pieces(tex) {
        match piece {
            Piece::Text(text) => b.text(&text),
            Piece::Raised(text) => b.superscript(&text),
            Piece::Lowered(text) => b.subscript(&text),
        }
    }
}

/// The formula as plain text on one line, without raising and lowering.
pub(super) fn flat(tex: &str) -> String {
    flatten(&pieces(tex))
}

/// A number as the siunitx package prints it: `1e-5` is `1 × 10` with `-5` raised. What follows
/// the number in `unit` is set behind it.
pub(super) fn push_number(b: &mut Builder, number: &str, unit: &str) {
    for (i, piece) in number_pieces(number, unit).into_iter().enumerate() {
        match piece {
            Piece::Text(text) if i == 0 => b.text(text.trim_start()),
            Piece::Text(text) => b.text(&text),
            Piece::Raised(text) => b.superscript(&text),
            Piece::Lowered(text) => b.subscript(&text),
        }
    }
}

fn pieces(tex: &str) -> Vec<Piece> {
    // Publishers wrap each formula in a document of its own.
    let tex = match tex.find("\\begin{document}") {
        Some(at) => &tex[at + "\\begin{document}".len()..],
        None => tex,
    };
    let tex = tex.split("\\end{document}").next().unwrap_or(tex);
    let mut reader = Reader {
        tex,
        at: 0,
        out: Vec::new(),
    };
    while reader.at < tex.len() {
        if reader.peek() == Some('}') {
            // A closing brace too many.
            reader.at += 1;
        } else {
            reader.item(0);
        }
    }
    reader.out
}

fn flatten(pieces: &[Piece]) -> String {
    let mut out = String::new();
    for piece in pieces {
        match piece {
            Piece::Text(t) | Piece::Raised(t) | Piece::Lowered(t) => out.push_str(t),
        }
    }
    out
}

fn number_pieces(number: &str, unit: &str) -> Vec<Piece> {
    let number: String = number
        .replace("\\pm", "+-")
        .replace(['{', '}', '$', '~', '\\'], "")
        .trim()
        .to_string();
    let mut out = Vec::new();
    let (mantissa, exponent) = match number.find(['e', 'E', 'd', 'D']) {
        Some(at) => (number[..at].trim(), Some(number[at + 1..].trim())),
        None => (number.as_str(), None),
    };
    let mut text = mantissa.replace("+-", " ± ").replace(" x ", " × ");
    if let Some(exponent) = exponent {
        text.push_str(if mantissa.is_empty() { "10" } else { " × 10" });
        out.push(Piece::Text(std::mem::take(&mut text)));
        out.push(Piece::Raised(exponent.trim_start_matches('+').to_string()));
    }
    let unit = tex_symbols::unit(unit);
    if !unit.is_empty() {
        if !unit.starts_with(['%', '°']) {
            text.push(' ');
        }
        text.push_str(&unit);
    }
    if !text.is_empty() {
        out.push(Piece::Text(text));
    }
    out
}

struct Reader<'a> {
    tex: &'a str,
    at: usize,
    out: Vec<Piece>,
}

impl<'a> Reader<'a> {
    fn peek(&self) -> Option<char> {
        self.tex[self.at..].chars().next()
    }

    fn push(&mut self, text: &str) {
        if let Some(Piece::Text(last)) = self.out.last_mut() {
            // Spaces do not add up, so that asking whether a piece is blank stays cheap.
            if text != " " || !last.ends_with(' ') {
                last.push_str(text);
            }
        } else if !text.is_empty() {
            self.out.push(Piece::Text(text.to_string()));
        }
    }

    fn skip_space(&mut self) {
        let rest = &self.tex[self.at..];
        self.at += rest.len() - rest.trim_start().len();
    }

    /// Reads one item of the formula; never called at a closing brace.
    fn item(&mut self, depth: usize) {
        let Some(c) = self.peek() else { return };
        match c {
            '\\' => self.control(depth),
            '{' => self.group(depth),
            '^' | '_' => {
                self.at += 1;
                let text = self.script(depth);
                let text = text.trim();
                // A raised ring is a degree sign, a raised prime a prime.
                if text == "∘" {
                    self.push("°");
                } else if !text.is_empty() {
                    self.out.push(if c == '_' {
                        Piece::Lowered(text.to_string())
                    } else if text.chars().all(|c| matches!(c, '\'' | '′' | '*')) {
                        Piece::Text(text.to_string())
                    } else {
                        Piece::Raised(text.to_string())
                    });
                }
            }
            '$' => self.at += 1,
            '&' | '~' => {
                self.at += 1;
                self.push(" ");
            }
            c if c.is_whitespace() => {
                self.skip_space();
                if !matches!(self.peek(), Some('^' | '_')) {
                    self.push(" ");
                }
            }
            _ => {
                let rest = &self.tex[self.at..];
                let plain = rest
                    .find(|c: char| c.is_whitespace() || "\\{}^_$&~".contains(c))
                    .unwrap_or(rest.len())
                    .max(c.len_utf8());
                self.at += plain;
                self.push(&rest[..plain]);
            }
        }
    }

    /// A group in braces, its contents read into the output.
    fn group(&mut self, depth: usize) {
        self.at += 1;
        if depth >= DEEPEST {
            let raw = self.raw_to_brace();
            let bare: String = raw.chars().filter(|c| !"{}\\^_$".contains(*c)).collect();
            self.push(&bare);
            return;
        }
        loop {
            match self.peek() {
                None => return,
                Some('}') => {
                    self.at += 1;
                    return;
                }
                Some(_) => self.item(depth + 1),
            }
        }
    }

    /// Everything up to the brace that closes the group just opened, and past it.
    fn raw_to_brace(&mut self) -> &'a str {
        let start = self.at;
        let mut open = 1usize;
        let bytes = self.tex.as_bytes();
        while self.at < bytes.len() {
            match bytes[self.at] {
                // An escaped brace does not count; the byte behind a backslash may start a
                // longer character, whose other bytes are none of those looked for here.
                b'\\' => self.at += 1,
                b'{' => open += 1,
                b'}' => {
                    open -= 1;
                    if open == 0 {
                        self.at += 1;
                        return &self.tex[start..self.at - 1];
                    }
                }
                _ => {}
            }
            self.at += 1;
        }
        self.at = self.tex.len();
        &self.tex[start..]
    }

    /// The argument of `^` or `_` as plain text.
    fn script(&mut self, depth: usize) -> String {
        self.skip_space();
        let minus = matches!(self.peek(), Some('-' | '\u{2212}'));
        if minus {
            // `10^-5` is wrong TeX, but what is meant is plain.
            let rest = &self.tex[self.at..];
            let sign = rest.chars().next().map_or(0, char::len_utf8);
            let digits = rest[sign..].bytes().take_while(u8::is_ascii_digit).count();
            self.at += sign + digits;
            return rest[..sign + digits].to_string();
        }
        flatten(&self.argument(depth))
    }

    /// One argument: a group, a macro with what belongs to it, or a single character.
    fn argument(&mut self, depth: usize) -> Vec<Piece> {
        let before = std::mem::take(&mut self.out);
        self.skip_space();
        match self.peek() {
            None | Some('}') => {}
            Some('{' | '\\') if depth >= DEEPEST => self.group_or_skip(),
            Some('{') => self.group(depth),
            Some('\\') => {
                let start = self.at;
                self.item(depth + 1);
                // `_\text{p}`: the macro by itself prints nothing, its argument is meant.
                let name = &self.tex[start..self.at];
                if self.out.is_empty()
                    && name.ends_with(|c: char| c.is_ascii_alphabetic())
                    && self.peek() == Some('{')
                {
                    self.group(depth + 1);
                }
            }
            Some(c) => {
                self.at += c.len_utf8();
                self.push(c.encode_utf8(&mut [0; 4]));
            }
        }
        std::mem::replace(&mut self.out, before)
    }

    /// Below the depth limit: contents of a group without structure, or a lone backslash.
    fn group_or_skip(&mut self) {
        if self.peek() == Some('{') {
            self.group(DEEPEST);
        } else {
            self.at += 1;
        }
    }

    /// The name or character behind a backslash, past both.
    fn name(&mut self) -> &'a str {
        let rest = &self.tex[self.at + 1..];
        let letters = rest.bytes().take_while(u8::is_ascii_alphabetic).count();
        let len = match letters {
            0 => rest.chars().next().map_or(0, char::len_utf8),
            n => n,
        };
        self.at += 1 + len;
        if letters > 0
            && self.tex[self.at..].starts_with('*')
            && matches!(&rest[..len], "operatorname" | "hspace")
        {
            self.at += 1;
        }
        &rest[..len]
    }

    fn control(&mut self, depth: usize) {
        let name = self.name();
        match name {
            "" | "-" | "/" | "!" | "(" | ")" | "[" | "]" | "'" | "`" | "^" | "\"" | "=" | "." => {}
            " " | "," | ";" | ":" | ">" | "~" | "\n" | "\t" | "\r" | "quad" | "qquad" | "enspace"
            | "space" | "thinspace" | "medspace" | "thickspace" | "nobreakspace" | "hfill" => self.push(" "),
            "{" | "}" | "%" | "$" | "&" | "#" | "_" | "|" => self.push(name),
            "\\" | "cr" | "newline" | "tabularnewline" => self.new_line(),
            "left" | "right" | "middle" => {
                self.skip_space();
                if self.peek() == Some('.') {
                    self.at += 1;
                }
            }
            "frac" | "dfrac" | "tfrac" | "nicefrac" | "sfrac" | "cfrac" | "flatfrac" => {
                let over = self.argument(depth);
                let under = self.argument(depth);
                self.operand(over);
                self.push("/");
                self.operand(under);
            }
            "binom" | "tbinom" | "dbinom" => {
                let over = self.argument(depth);
                let under = self.argument(depth);
                self.push("(");
                self.append(over);
                self.push(" over ");
                self.append(under);
                self.push(")");
            }
            "sqrt" => {
                if let Some(root) = self.option() {
                    self.out.push(Piece::Raised(flat_shallow(root)));
                }
                let of = self.argument(depth);
                self.push("√");
                self.operand(of);
            }
            "overset" | "underset" | "stackrel" => {
                self.argument(depth);
                let base = self.argument(depth);
                self.append(base);
            }
            "textcolor" | "colorbox" | "raisebox" | "href" => {
                self.argument(depth);
                let base = self.argument(depth);
                self.append(base);
            }
            "textsuperscript" => {
                let text = flatten(&self.argument(depth));
                self.out.push(Piece::Raised(text));
            }
            "textsubscript" => {
                let text = flatten(&self.argument(depth));
                self.out.push(Piece::Lowered(text));
            }
            "color" | "label" | "tag" | "ref" | "eqref" | "cite" | "phantom" | "hphantom" | "vphantom"
            | "vspace" | "fontsize" | "mathchoice" => {
                self.option();
                self.argument(depth);
            }
            "hspace" | "mspace" | "hskip" | "kern" | "mkern" => {
                self.argument(depth);
                self.push(" ");
            }
            "num" => {
                self.option();
                let number = self.raw_argument();
                self.out.extend(number_pieces(number, ""));
            }
            "SI" | "qty" => {
                self.option();
                let number = self.raw_argument();
                let unit = self.raw_argument();
                self.out.extend(number_pieces(number, unit));
            }
            "begin" => {
                let environment = self.raw_argument();
                self.option();
                if matches!(
                    environment,
                    "array" | "tabular" | "alignat" | "alignedat" | "alignat*"
                ) {
                    self.raw_argument();
                }
            }
            "end" => {
                self.raw_argument();
            }
            "not" => {
                let what = flatten(&self.argument(depth));
                let mut struck = String::new();
                for (i, c) in what.trim().chars().enumerate() {
                    struck.push(c);
                    if i == 0 {
                        struck.push('\u{338}');
                    }
                }
                let struck: String = struck.nfc().collect();
                self.push(&struck);
            }
            _ => {
                if let Some(text) = symbol(name) {
                    self.push(text);
                    // A space ends the name of a letter (`\Delta R`) and is not printed.
                    let rest = self.tex[self.at..].trim_start();
                    if text.ends_with(char::is_alphabetic)
                        && rest.starts_with(|c: char| c.is_alphabetic() || c == '(')
                    {
                        self.skip_space();
                    }
                } else if tex_symbols::is_function(name) {
                    self.push(name);
                }
            }
        }
    }

    /// A line end inside the formula: what follows is another statement.
    fn new_line(&mut self) {
        if self.tex[self.at..].starts_with('*') {
            self.at += 1;
        }
        self.option();
        let more = self.tex[self.at..].trim_start();
        let blank = self
            .out
            .iter()
            .all(|p| matches!(p, Piece::Text(t) if t.trim().is_empty()));
        if !more.is_empty() && !more.starts_with(['}', '$']) && !more.starts_with("\\end") && !blank {
            self.push("; ");
        }
    }

    /// An argument in brackets, if there is one close by.
    fn option(&mut self) -> Option<&'a str> {
        let rest = &self.tex[self.at..];
        let inner = rest.trim_start().strip_prefix('[')?;
        let start = self.tex.len() - inner.len();
        // Options are short; a bracket without its partner is part of the formula.
        let end = inner.bytes().take(400).position(|b| matches!(b, b']' | b'\n'))?;
        if inner.as_bytes()[end] != b']' {
            return None;
        }
        self.at = start + end + 1;
        Some(&inner[..end])
    }

    /// An argument in braces as it stands in the source.
    fn raw_argument(&mut self) -> &'a str {
        let rest = &self.tex[self.at..];
        let inner = rest.trim_start();
        if inner.starts_with('{') {
            self.at = self.tex.len() - inner.len() + 1;
            self.raw_to_brace().trim()
        } else {
            ""
        }
    }

    fn append(&mut self, pieces: Vec<Piece>) {
        for piece in pieces {
            match piece {
                Piece::Text(text) => self.push(&text),
                other => self.out.push(other),
            }
        }
    }

    /// Part of a fraction or root: in parentheses if it is a sum or the like.
    fn operand(&mut self, pieces: Vec<Piece>) {
        let compound = pieces.iter().enumerate().any(|(i, piece)| match piece {
            Piece::Text(t) => {
                let t = if i == 0 {
                    t.trim_start().trim_start_matches('-')
                } else {
                    t
                };
                t.contains(['+', '-', '\u{2212}', '/', '±', '=', '<', '>', '×', '·'])
            }
            _ => false,
        });
        if compound {
            self.push("(");
            self.append(pieces);
            self.push(")");
        } else {
            self.append(pieces);
        }
    }
}

/// An option such as the `3` of `\sqrt[3]{x}`, which holds no structure worth reading.
fn flat_shallow(tex: &str) -> String {
    tex.chars().filter(|c| !"{}\\".contains(*c)).collect()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::manuscript::Format;

    fn read(tex: &str) -> String {
        let mut b = Builder::new(Format::Text);
        push_math(&mut b, tex);
        b.finish().text.trim_end().to_string()
    }

    #[test]
    fn results_come_out_as_people_type_them() {
        for (tex, text) in [
            (r"\chi^2(1) = 9.33", "χ²(1) = 9.33"),
            (r"\chi^{2}_{17}=20.1", "χ²₁₇=20.1"),
            (r"F(2,66)=8.14,~p<.001", "F(2,66)=8.14, p<.001"),
            (r"F_{1,45} = 3.2, \ p \leq .05", "F₁,₄₅ = 3.2, p ≤ .05"),
            (r"\eta_p^2 = .14", "ηp² = .14"),
            (r"\eta^2_p = .14", "η²p = .14"),
            (r"\eta _{\text{p}} ^{2} = .14", "ηp² = .14"),
            (r"\hat{\eta}^2_G = .02", "η²G = .02"),
            (r"p = 3.4 \times 10^{-5}", "p = 3.4 × 10⁻⁵"),
            (r"p = 3.4\cdot10^-5", "p = 3.4·10⁻⁵"),
            (r"p \lt .05 \pm 1", "p < .05 ± 1"),
            (r"95\%\ \text{CI}\ [-0.14,\,0.05]", "95% CI [-0.14, 0.05]"),
            (
                r"95\% \mathrm{~CI} \left[ -0.14 ; 0.05 \right]",
                "95% CI [ -0.14 ; 0.05 ]",
            ),
            (r"p = 0{,}034", "p = 0,034"),
            (r"\Delta R^2 = .04", "ΔR² = .04"),
            (r"R^{2}_{\mathrm{adj}} = .21", "R²adj = .21"),
            (r"\textit{t}(28)=2.20\text{, }p=.036", "t(28)=2.20, p=.036"),
            (r"\mathit{MSE}=0.41", "MSE=0.41"),
            (r"M_\text{diff} = 1.1", "Mdiff = 1.1"),
            (r"\frac{SD}{\sqrt{n}} = \frac{a+b}{2}", "SD/√n = (a+b)/2"),
            (r"\bar{x} = 3.1 \quad s = 1.2", "x = 3.1 s = 1.2"),
            (r"\beta = -0.21^{***}", "β = -0.21***"),
            (r"\mathrm{BF}_{10} = 3.4 \approx \sim 4", "BF₁₀ = 3.4 ≈ ~ 4"),
            (r"p \ll 0.01 \not= 0 \neq 1", "p ≪ 0.01 ≠ 0 ≠ 1"),
            (r"21^\circ\mathrm{C}", "21°C"),
            (
                r"\num{1e-5} < \num{0.034}, \SI{3.2}{\milli\metre}",
                "1 × 10⁻⁵ < 0.034, 3.2 mm",
            ),
            (
                r"\begin{aligned} t(28) &= 2.20 \\ p &= .036 \\ \end{aligned}",
                "t(28) = 2.20 ; p = .036",
            ),
            (
                r"\documentclass[12pt]{minimal}\usepackage{amsmath}\begin{document}$$r = .38$$\end{document}",
                "r = .38",
            ),
            (r"\omega\rho\tau\kappa\phi\alpha\sigma\mu", "ωρτκφασμ"),
        ] {
            assert_eq!(read(tex), text, "{tex}");
        }
    }

    #[test]
    fn broken_and_hostile_formulas_end() {
        for tex in [
            "^", "_", "\\", "{", "}", "^{", "\\frac", "\\frac{", "\\sqrt[", "\\left", "\\begin{", "\\not",
            "\\é", "_\\", "^\\frac",
        ] {
            read(tex);
        }
        for unit in [
            "{",
            "^{",
            "\\frac{",
            "_\\text{",
            "\\sqrt",
            "^\\frac",
            "\\not\\not",
            "\\begin{array}{",
            "{\\",
        ] {
            // Taking time that grows with the square of this would be noticed by whoever waits for it.
            read(&unit.repeat(100_000));
        }
        assert_eq!(
            read(&format!("{}p = .03{}", "{".repeat(90), "}".repeat(90))),
            "p = .03"
        );
    }
}
