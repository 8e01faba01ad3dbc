//! ASCII names as people print them: primes, Greek letters, the infinity sign.
//!
//! Not here: the names themselves (`group`).

/// `2a2''` → `2a2″`, `3sigma_g` → `3σg`, `D∞h` from `Dinfh`; other text is left alone.
///
/// Works on names and labels, not on sentences.
#[must_use]
pub fn pretty(name: &str) -> String {
    // Longer words first: theta ends in eta.
    const GREEK: [(&str, &str); 28] = [
        ("Sigma", "Σ"),
        ("sigma", "σ"),
        ("Pi", "Π"),
        ("pi", "π"),
        ("Delta", "Δ"),
        ("delta", "δ"),
        ("Phi", "Φ"),
        ("phi", "φ"),
        ("Gamma", "Γ"),
        ("gamma", "γ"),
        ("Theta", "Θ"),
        ("theta", "θ"),
        ("Eta", "Η"),
        ("eta", "η"),
        ("Iota", "Ι"),
        ("iota", "ι"),
        ("Kappa", "Κ"),
        ("kappa", "κ"),
        ("Lambda", "Λ"),
        ("lambda", "λ"),
        ("Omicron", "Ο"),
        ("omicron", "ο"),
        ("Mu", "Μ"),
        ("mu", "μ"),
        ("Nu", "Ν"),
        ("nu", "ν"),
        ("inf", "∞"),
        ("''", "″"),
    ];
    let mut text = name.to_owned();
    for (ascii, sign) in GREEK {
        text = text.replace(ascii, sign);
    }
    text.replace('\'', "′").replace("_g", "g").replace("_u", "u").replace('_', "")
}

#[cfg(test)]
mod tests {
    use super::pretty;

    #[test]
    fn names_are_set_as_people_print_them() {
        for (ascii, printed) in [
            ("2a2''", "2a2″"),
            ("3sigma_g", "3σg"),
            ("Sigma_u-", "Σu-"),
            ("Dinfh", "D∞h"),
            ("E'", "E′"),
            ("t2g", "t2g"),
        ] {
            assert_eq!(pretty(ascii), printed);
        }
    }
}
