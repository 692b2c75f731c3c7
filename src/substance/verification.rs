//! Checks over the whole embedded library.

use crate::substance::names::folded;
use crate::substance::{Basis, Catalogue, Component, StoredConstants, StoredPk, StoredSubstance};
use std::collections::BTreeMap;

fn library() -> &'static Catalogue {
    Catalogue::embedded().unwrap()
}

#[test]
fn library_has_its_substances() {
    assert!(library().ligands().count() >= 90);
    assert!(library().forms().count() >= 200);
}

#[test]
fn every_spelling_means_one_form() {
    let mut seen: BTreeMap<String, &str> = BTreeMap::new();
    for form in library().forms() {
        let spellings = std::iter::once(&form.name)
            .chain(&form.synonyms)
            .chain(form.cas.as_ref());
        for spelling in spellings {
            if let Some(other) = seen.insert(folded(spelling), &form.name) {
                assert_eq!(other, form.name, "{spelling} means two forms");
            }
        }
    }
}

#[test]
fn cas_numbers_have_their_check_digit() {
    for form in library().forms() {
        let Some(cas) = &form.cas else { continue };
        let digits: Vec<u32> = cas.chars().filter_map(|c| c.to_digit(10)).collect();
        let (check, rest) = digits.split_last().unwrap();
        let sum: u32 = rest
            .iter()
            .rev()
            .zip(1..)
            .map(|(digit, place)| digit * place)
            .sum();
        assert_eq!(sum % 10, *check, "{}: {cas}", form.name);
    }
}

#[test]
fn metals_and_halogens_are_as_many_as_the_components() {
    for form in library().forms() {
        let Some(formula) = &form.formula else {
            continue;
        };
        let mut metal: BTreeMap<&str, u32> = BTreeMap::new();
        for (component, count) in &form.contains {
            if let Component::Ion(ion) = component {
                let symbol: String = ion
                    .symbol
                    .chars()
                    .take_while(char::is_ascii_alphabetic)
                    .collect();
                if formula.atoms().contains_key(symbol.as_str()) && symbol.len() <= 2 {
                    *metal
                        .entry(match symbol.as_str() {
                            "Na" => "Na",
                            "K" => "K",
                            "Li" => "Li",
                            "Ca" => "Ca",
                            "Mg" => "Mg",
                            "Ba" => "Ba",
                            "Cl" => "Cl",
                            "Br" => "Br",
                            "I" => "I",
                            _ => continue,
                        })
                        .or_default() += u32::from(*count);
                }
            }
        }
        for (symbol, count) in metal {
            assert_eq!(
                formula.atoms().get(symbol),
                Some(&count),
                "{}: {symbol}",
                form.name
            );
        }
    }
}

#[test]
fn salts_are_their_acid_with_hydrogen_exchanged() {
    // For a salt of one ligand: formula of the neutral acid, less the hydrogen that metal ions replace, plus water and
    // hydrogen halide. Counted on carbon, nitrogen, phosphorus, sulfur and boron, which neither water nor counter-ions bring.
    for form in library().forms() {
        let Some(formula) = &form.formula else {
            continue;
        };
        for element in ["C", "P", "S", "B", "As"] {
            let mut expected = 0;
            let mut known = true;
            for (component, count) in &form.contains {
                match component {
                    Component::Ligand(ligand) => {
                        let acid = library().find(&ligand.name).unwrap();
                        let atoms = acid
                            .formula
                            .as_ref()
                            .map(|f| f.atoms().get(element).copied().unwrap_or(0));
                        expected += atoms.unwrap_or(0) * u32::from(*count);
                    }
                    Component::Ion(ion) => {
                        let single = !ion.symbol.contains(|c| ('₀'..='₉').contains(&c));
                        known &= single && ion.symbol.chars().filter(char::is_ascii).count() <= 2;
                    }
                }
            }
            if known {
                let found = formula.atoms().get(element).copied().unwrap_or(0);
                assert_eq!(found, expected, "{}: {element}", form.name);
            }
        }
    }
}

#[test]
fn proton_counts_follow_from_charges() {
    for (name, protons) in [
        ("phosphoric acid", 3),
        ("KH2PO4", 2),
        ("disodium hydrogen phosphate", 1),
        ("hydrochloric acid", 1),
        ("sodium hydroxide", -1),
        ("sulfuric acid", 2),
        ("borax", 2),
        ("ammonia", 0),
        ("ammonium chloride", 1),
        ("glycine", 1),
        ("PIPES", 2),
        ("EDTA disodium dihydrate", 2),
        ("carbon dioxide", 2),
    ] {
        assert_eq!(library().find(name).unwrap().protons(), protons, "{name}");
    }
}

#[test]
fn every_value_has_source_and_basis() {
    for ligand in library().ligands() {
        assert_eq!(
            ligand.states.len(),
            ligand.steps.len() + 1,
            "{}",
            ligand.name
        );
        for step in &ligand.steps {
            for constant in std::iter::once(&step.preferred).chain(&step.others) {
                assert!(constant.source.len() > 10, "{}", ligand.name);
                assert_ne!(constant.basis, Basis::Stated, "{}", ligand.name);
            }
        }
    }
}

#[test]
fn names_formulas_and_numbers_are_found() {
    for query in [
        "NaH2PO4·2H2O",
        "NaH₂PO₄·2H₂O",
        "13472-35-0",
        "Sodium dihydrogen phosphate dihydrate",
    ] {
        assert_eq!(
            library().find(query).unwrap().name,
            "sodium dihydrogen phosphate dihydrate",
            "{query}"
        );
    }
    assert!(library().find("unobtainium chloride").is_err());
}

#[test]
fn own_values_overlay_value_by_value() {
    let stored = StoredConstants {
        substances: vec![StoredSubstance {
            substance: "acetic acid".to_owned(),
            pka: vec![StoredPk {
                value: "4.7447".to_owned(),
                source: "report 11-204".to_owned(),
                ..StoredPk::default()
            }],
            ..StoredSubstance::default()
        }],
        ..StoredConstants::default()
    };
    let own = library().overlaid(&stored).unwrap();
    let salt = own.find("sodium acetate").unwrap();
    let ligand = salt.ligands().next().unwrap();
    let step = ligand.steps.first().unwrap();
    assert_eq!(step.preferred.pk.to_string(), "4.7447");
    assert_eq!(step.preferred.basis, Basis::Stated);
    assert!(
        step.others
            .iter()
            .any(|other| other.pk.to_string() == "4.756")
    );
}
