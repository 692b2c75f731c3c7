//! How names, formulas and registry numbers are compared, and how states are named.

/// One spelling for comparison: lower case, plain digits and charges, one kind of hydrate dot, single spaces.
pub(super) fn folded(text: &str) -> String {
    let mut out = String::with_capacity(text.len());
    for c in text.trim().chars() {
        match c {
            '₀'..='₉' => out.push(digit(c, '₀')),
            '·' | '∙' | '•' | '*' | '⋅' => out.push('.'),
            '‐' | '‑' | '–' | '−' | '⁻' => out.push('-'),
            '⁺' => out.push('+'),
            '⁰' | '⁴'..='⁹' => out.push(digit(c, '⁰')),
            '¹' => out.push('1'),
            '²' => out.push('2'),
            '³' => out.push('3'),
            '^' => {}
            '’' => out.push('\''),
            c if c.is_whitespace() || c == '_' => {
                if !out.ends_with(' ') {
                    out.push(' ');
                }
            }
            c => out.extend(c.to_lowercase()),
        }
    }
    out.replace(" .", ".").replace(". ", ".")
}

/// A formula with plain digits and dots, without blanks; case is kept, since it tells `Co` from `CO`.
pub(super) fn folded_formula(text: &str) -> String {
    text.chars()
        .filter(|c| !c.is_whitespace())
        .map(|c| match c {
            '₀'..='₉' => digit(c, '₀'),
            '·' | '∙' | '•' | '*' | '⋅' => '.',
            other => other,
        })
        .collect()
}

fn digit(c: char, zero: char) -> char {
    char::from_digit(u32::from(c) - u32::from(zero), 10).unwrap_or(c)
}

/// A number as subscript: `₂`; nothing for 1.
pub(super) fn subscript(count: usize) -> String {
    if count == 1 {
        return String::new();
    }
    count.to_string().chars().map(|c| shifted(c, '₀')).collect()
}

fn shifted(c: char, zero: char) -> char {
    c.to_digit(10)
        .and_then(|value| char::from_u32(u32::from(zero) + value))
        .unwrap_or(c)
}

/// A charge as superscript: `²⁻`; nothing for 0.
pub(super) fn superscript_charge(charge: i8) -> String {
    let sign = match charge {
        0 => return String::new(),
        1.. => '⁺',
        _ => '⁻',
    };
    let size = charge.unsigned_abs();
    let mut text = String::new();
    if size > 1 {
        for c in size.to_string().chars() {
            text.push(match c {
                '1' => '¹',
                '2' => '²',
                '3' => '³',
                other => shifted(other, '⁰'),
            });
        }
    }
    text.push(sign);
    text
}

/// Names of the protonation states of an organic acid, most protonated first: `H₂(malonate)`, `H(malonate)⁻`, `malonate²⁻`.
pub(super) fn states(symbol: &str, charge: i8, steps: usize) -> Vec<String> {
    (0..=steps)
        .map(|lost| {
            let protons = steps - lost;
            let state = charge.saturating_sub(i8::try_from(lost).unwrap_or(i8::MAX));
            let sign = superscript_charge(state);
            if protons == 0 {
                format!("{symbol}{sign}")
            } else {
                format!("H{}({symbol}){sign}", subscript(protons))
            }
        })
        .collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn spellings_fold_to_one() {
        assert_eq!(folded("NaH₂PO₄ · 2 H₂O"), folded("nah2po4.2 h2o"));
        assert_eq!(folded("HPO₄²⁻"), folded("HPO4^2-"));
        assert_eq!(folded("  Sodium   Chloride "), "sodium chloride");
    }

    #[test]
    fn states_carry_protons_and_charge() {
        assert_eq!(
            states("malonate", 0, 2),
            ["H₂(malonate)", "H(malonate)⁻", "malonate²⁻"]
        );
        assert_eq!(states("tris", 1, 1), ["H(tris)⁺", "tris"]);
    }
}
