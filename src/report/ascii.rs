//! Text for terminals that show ASCII only: every sign spelled out, columns kept where there is room.
//!
//! Not here: when that is the case (`cli::terminal`); names as people print them (`report::unicode`).

/// The text in ASCII: `3σg` → `3sigma_g`, `cm⁻¹` → `cm^-1`, `2a2″` → `2a2''`. Signs nobody foresaw become `?`.
///
/// A sign that takes more room eats blanks of the next gap, of which at least one stays, so that columns mostly hold.
#[must_use]
pub fn ascii(text: &str) -> String {
    let lines: Vec<String> = text.split('\n').map(line).collect();
    lines.join("\n")
}

fn line(line: &str) -> String {
    let signs: Vec<char> = line.chars().collect();
    let mut out = String::with_capacity(line.len());
    // Columns taken too many, and the power begun.
    let (mut debt, mut raised) = (0, false);
    for (at, &sign) in signs.iter().enumerate() {
        let next = signs.get(at + 1).copied().unwrap_or(' ');
        if sign == ' ' && debt > 0 && next == ' ' {
            debt -= 1;
            continue;
        }
        let before = out.len();
        let power = superscript(sign);
        if let Some(power) = power {
            if !raised {
                out.push('^');
            }
            out.push(power);
        } else if sign.is_ascii() {
            out.push(sign);
        } else {
            out.push_str(spelled(sign));
            if is_greek(sign) && matches!(next, 'g' | 'u') {
                out.push('_');
            }
        }
        raised = power.is_some();
        debt += (out.len() - before).saturating_sub(1);
    }
    out
}

fn superscript(sign: char) -> Option<char> {
    let digits = "⁰¹²³⁴⁵⁶⁷⁸⁹".chars().position(|digit| digit == sign);
    match (digits, sign) {
        (Some(digit), _) => char::from_digit(u32::try_from(digit).ok()?, 10),
        (None, '⁻') => Some('-'),
        (None, '⁺') => Some('+'),
        (None, 'ᵀ') => Some('T'),
        _ => None,
    }
}

fn is_greek(sign: char) -> bool {
    ('Α'..='ω').contains(&sign)
}

fn spelled(sign: char) -> &'static str {
    match sign {
        '→' => "->",
        '↔' => "<->",
        '·' | '—' | '–' | '−' | '‐' => "-",
        '“' | '”' => "\"",
        '‘' | '’' | '′' => "'",
        '″' => "''",
        '×' => "x",
        '°' => "deg",
        'Å' => "A",
        '≈' => "~",
        '≥' => ">=",
        '≤' => "<=",
        '±' => "+-",
        '…' => "...",
        '⟨' => "<",
        '⟩' => ">",
        '√' => "sqrt",
        '∇' => "grad ",
        '∞' => "inf",
        'é' | 'è' => "e",
        'ä' => "ae",
        'ö' => "oe",
        'ü' => "ue",
        '₀' => "0",
        '₁' => "1",
        '₂' => "2",
        '₃' => "3",
        '₄' => "4",
        'Γ' => "Gamma",
        'γ' => "gamma",
        'α' => "alpha",
        'β' => "beta",
        'δ' => "delta",
        'Δ' => "Delta",
        'Σ' => "Sigma",
        'σ' => "sigma",
        'Π' => "Pi",
        'π' => "pi",
        'Φ' => "Phi",
        'φ' => "phi",
        'Θ' => "Theta",
        'θ' => "theta",
        'Η' => "Eta",
        'η' => "eta",
        'Ι' => "Iota",
        'ι' => "iota",
        'Κ' => "Kappa",
        'κ' => "kappa",
        'Λ' => "Lambda",
        'λ' => "lambda",
        'Μ' => "Mu",
        'μ' => "mu",
        'Ν' => "Nu",
        'ν' => "nu",
        'Ο' => "Omicron",
        'ο' => "omicron",
        'χ' => "chi",
        'Ω' => "Omega",
        'ω' => "omega",
        _ => "?",
    }
}

#[cfg(test)]
mod tests {
    use super::ascii;

    #[test]
    fn signs_are_spelled_and_columns_hold() {
        for (printed, plain) in [
            ("3σg → 1πu", "3sigma_g -> 1pi_u"),
            ("62355 cm⁻¹", "62355 cm^-1"),
            ("2a2″ 0.01 Å", "2a2'' 0.01 A"),
            ("E1g² {A2g}", "E1g^2 {A2g}"),
            (" 3σg     HOMO", " 3sigma_g HOMO"),
            ("ジ", "?"),
        ] {
            assert_eq!(ascii(printed), plain);
        }
    }

    #[test]
    fn what_is_ascii_stays() {
        let text = "Point group   C2v  (order 4)\n\n label  eV\n";
        assert_eq!(ascii(text), text);
    }
}
