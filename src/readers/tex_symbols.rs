//! The *symbols* of TeX: which macro stands for which character, in formulas and in running text,
//! and the units of the siunitx package.

/// The character or word that a symbol macro prints.
pub(super) fn symbol(name: &str) -> Option<&'static str> {
    Some(match name {
        "alpha" => "α",
        "beta" => "β",
        "gamma" => "γ",
        "delta" => "δ",
        "epsilon" | "varepsilon" => "ε",
        "zeta" => "ζ",
        "eta" => "η",
        "theta" | "vartheta" => "θ",
        "iota" => "ι",
        "kappa" | "varkappa" => "κ",
        "lambda" => "λ",
        "mu" | "textmu" | "upmu" | "micro" => "μ",
        "nu" => "ν",
        "xi" => "ξ",
        "omicron" => "ο",
        "pi" | "varpi" => "π",
        "rho" | "varrho" => "ρ",
        "sigma" => "σ",
        "varsigma" => "ς",
        "tau" => "τ",
        "upsilon" => "υ",
        "phi" | "varphi" => "φ",
        "chi" => "χ",
        "psi" => "ψ",
        "omega" => "ω",
        "Gamma" | "varGamma" => "Γ",
        "Delta" | "varDelta" => "Δ",
        "Theta" | "varTheta" => "Θ",
        "Lambda" | "varLambda" => "Λ",
        "Xi" => "Ξ",
        "Pi" => "Π",
        "Sigma" | "varSigma" => "Σ",
        "Upsilon" => "Υ",
        "Phi" | "varPhi" => "Φ",
        "Chi" => "Χ",
        "Psi" => "Ψ",
        "Omega" | "varOmega" => "Ω",
        "times" | "texttimes" => "×",
        "div" => "÷",
        "pm" | "textpm" => "±",
        "mp" => "∓",
        "cdot" | "textperiodcentered" | "centerdot" => "·",
        "ast" | "star" | "textasteriskcentered" => "*",
        "leq" | "le" | "leqslant" | "leqq" | "lesssim" => "≤",
        "geq" | "ge" | "geqslant" | "geqq" | "gtrsim" => "≥",
        "lt" | "textless" => "<",
        "gt" | "textgreater" => ">",
        "ll" => "≪",
        "gg" => "≫",
        "lll" => "⋘",
        "ggg" => "⋙",
        "neq" | "ne" => "≠",
        "equiv" => "≡",
        "approx" | "approxeq" | "simeq" | "cong" => "≈",
        "sim" | "textasciitilde" | "thicksim" => "~",
        "propto" => "∝",
        "nless" => "≮",
        "ngtr" => "≯",
        "infty" => "∞",
        "partial" => "∂",
        "nabla" => "∇",
        "sum" => "∑",
        "prod" => "∏",
        "int" => "∫",
        "in" => "∈",
        "notin" => "∉",
        "subset" => "⊂",
        "subseteq" => "⊆",
        "cup" => "∪",
        "cap" => "∩",
        "emptyset" | "varnothing" => "∅",
        "forall" => "∀",
        "exists" => "∃",
        "neg" | "lnot" => "¬",
        "land" | "wedge" => "∧",
        "lor" | "vee" => "∨",
        "to" | "rightarrow" | "longrightarrow" | "textrightarrow" => "→",
        "leftarrow" | "gets" | "longleftarrow" | "textleftarrow" => "←",
        "leftrightarrow" => "↔",
        "uparrow" | "textuparrow" => "↑",
        "downarrow" | "textdownarrow" => "↓",
        "Rightarrow" | "implies" => "⇒",
        "Leftrightarrow" | "iff" => "⇔",
        "mapsto" => "↦",
        "perp" | "bot" => "⊥",
        "mid" | "vert" | "lvert" | "rvert" | "textbar" | "parallel" => "|",
        "Vert" | "lVert" | "rVert" => "‖",
        "langle" => "⟨",
        "rangle" => "⟩",
        "lbrace" | "textbraceleft" => "{",
        "rbrace" | "textbraceright" => "}",
        "lbrack" => "[",
        "rbrack" => "]",
        "lfloor" => "⌊",
        "rfloor" => "⌋",
        "lceil" => "⌈",
        "rceil" => "⌉",
        "ldots" | "dots" | "cdots" | "dotsc" | "dotsb" | "textellipsis" | "vdots" | "ddots" => "…",
        "prime" => "′",
        "circ" => "∘",
        "degree" | "textdegree" | "degreeCelsius" => "°",
        "celsius" => "°C",
        "bullet" | "textbullet" => "•",
        "dagger" | "dag" | "textdagger" => "†",
        "ddagger" | "ddag" | "textdaggerdbl" => "‡",
        "S" | "textsection" => "§",
        "P" | "textparagraph" => "¶",
        "ell" => "ℓ",
        "hbar" => "ħ",
        "Re" => "ℜ",
        "Im" => "ℑ",
        "aleph" => "ℵ",
        "angle" => "∠",
        "triangle" => "△",
        "oplus" => "⊕",
        "otimes" => "⊗",
        "setminus" => "∖",
        "backslash" | "textbackslash" => "\\",
        "percent" => "%",
        "textunderscore" => "_",
        "textasciicircum" => "^",
        "textendash" => "–",
        "textemdash" => "—",
        "textminus" => "-",
        "textquoteleft" | "textquoteright" | "textquotesingle" => "'",
        "textquotedblleft" | "textquotedblright" | "textquotedbl" => "\"",
        "colon" => ":",
        "textonehalf" => "½",
        "copyright" | "textcopyright" => "©",
        "textregistered" => "®",
        "texttrademark" => "™",
        "pounds" | "textsterling" => "£",
        "euro" | "texteuro" => "€",
        "textsuperscripttwo" | "texttwosuperior" => "²",
        "ss" => "ß",
        "ae" => "æ",
        "AE" => "Æ",
        "oe" => "œ",
        "OE" => "Œ",
        "o" => "ø",
        "O" => "Ø",
        "aa" => "å",
        "AA" => "Å",
        "l" => "ł",
        "L" => "Ł",
        "i" | "imath" => "ı",
        "j" | "jmath" => "ȷ",
        "dh" => "ð",
        "th" => "þ",
        "LaTeX" => "LaTeX",
        "TeX" => "TeX",
        _ => return None,
    })
}

/// Macros that print their own name.
pub(super) fn is_function(name: &str) -> bool {
    matches!(
        name,
        "log"
            | "ln"
            | "lg"
            | "exp"
            | "sin"
            | "cos"
            | "tan"
            | "min"
            | "max"
            | "sup"
            | "inf"
            | "lim"
            | "det"
            | "Pr"
            | "arg"
            | "deg"
            | "dim"
            | "gcd"
            | "ker"
            | "arcsin"
            | "arccos"
            | "arctan"
            | "sinh"
            | "cosh"
            | "tanh"
            | "mod"
            | "bmod"
    )
}

/// A unit as siunitx prints it: `\milli\metre` is `mm`, `mm` stays.
pub(super) fn unit(tex: &str) -> String {
    let mut out = String::new();
    let mut rest = tex;
    while let Some(c) = rest.chars().next() {
        rest = &rest[c.len_utf8()..];
        if c != '\\' {
            if !matches!(c, '{' | '}' | '$' | '^') {
                out.push(if matches!(c, '~' | '.') { ' ' } else { c });
            }
            continue;
        }
        let len = rest.bytes().take_while(u8::is_ascii_alphabetic).count();
        if len == 0 {
            // `\%` and spacing macros.
            if let Some(c) = rest.chars().next() {
                rest = &rest[c.len_utf8()..];
                out.push_str(match c {
                    '%' => "%",
                    ',' | ' ' => " ",
                    _ => "",
                });
            }
            continue;
        }
        out.push_str(unit_macro(&rest[..len]));
        rest = rest[len..].trim_start();
    }
    out.trim().to_string()
}

fn unit_macro(name: &str) -> &str {
    match name {
        "milli" => "m",
        "micro" => "μ",
        "nano" => "n",
        "centi" => "c",
        "deci" => "d",
        "kilo" => "k",
        "mega" => "M",
        "giga" => "G",
        "hecto" => "h",
        "metre" | "meter" => "m",
        "gram" | "g" => "g",
        "kilogram" => "kg",
        "second" => "s",
        "minute" => "min",
        "hour" => "h",
        "day" => "d",
        "litre" | "liter" => "L",
        "mole" => "mol",
        "molar" => "M",
        "kelvin" => "K",
        "ampere" => "A",
        "volt" => "V",
        "watt" => "W",
        "joule" => "J",
        "newton" => "N",
        "pascal" => "Pa",
        "hertz" => "Hz",
        "hectare" => "ha",
        "dalton" => "Da",
        "byte" => "B",
        "celsius" | "degreeCelsius" => "°C",
        "degree" => "°",
        "percent" => "%",
        "per" => "/",
        "square" | "squared" => "²",
        "cubic" | "cubed" => "³",
        // Abbreviations such as `\mm`, `\kHz` print their own name.
        other => other,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn units_read_as_printed() {
        assert_eq!(unit(r"\milli\metre"), "mm");
        assert_eq!(unit(r"\litre\per\metre\squared"), "L/m²");
        assert_eq!(unit(r"\percent"), "%");
        assert_eq!(unit(r"\%"), "%");
        assert_eq!(unit("mm"), "mm");
        assert_eq!(unit("m\\"), "m");
    }
}
