//! Symbols and lists as they stand in print, for sentences that people read.

/// A symbol as it is written in print: `χ²` for `chi2`.
pub fn in_print(symbol: &str) -> &str {
    match symbol {
        "chi2" => "χ²",
        "G2" => "G²",
        "rho" => "ρ",
        "tau" => "τ",
        "beta" => "β",
        "eta2" => "η²",
        "eta2p" => "ηp²",
        "eta2G" => "generalised η²",
        "omega2" => "ω²",
        "epsilon2" => "ε²",
        "f2" => "f²",
        "R2" => "R²",
        "R2adj" => "adjusted R²",
        "dR2" => "ΔR²",
        "phi" => "φ",
        "alpha" => "α",
        "kappa" => "κ",
        "I2" => "I²",
        "BF10" => "BF₁₀",
        "BF01" => "BF₀₁",
        "Mdiff" => "mean difference",
        "CI_low" => "lower end of the CI",
        "CI_high" => "upper end of the CI",
        "CI_level" => "level of the CI",
        "percent" => "percentage",
        "est" => "estimate",
        other => other,
    }
}

/// A list as in a sentence: `a`, `a and b`, `a, b and c`.
pub fn list(items: &[String]) -> String {
    match items {
        [] => String::new(),
        [one] => one.clone(),
        [most @ .., last] => format!("{} and {last}", most.join(", ")),
    }
}
