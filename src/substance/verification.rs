//! Checks over the whole embedded library.

use crate::substance::names::folded;
use crate::substance::{
    Basis, Catalogue, Component, Formula, Hazard, Kind, StoredConstants, StoredPk, StoredSubstance,
};
use std::collections::BTreeMap;

fn library() -> &'static Catalogue {
    Catalogue::embedded().unwrap()
}

#[test]
fn library_has_its_substances() {
    assert!(library().ligands().count() >= 110);
    assert!(library().forms().count() >= 300);
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
fn elements_are_balanced() {
    // Parts of a form, its protons and whole water molecules: every element must come out as in its formula.
    let mut checked = 0;
    for form in library().forms() {
        let Some(formula) = &form.formula else {
            continue;
        };
        let mut left = atoms(formula);
        for (component, times) in &form.contains {
            add(&mut left, &parts(component), -i32::from(*times));
        }
        add(&mut left, &BTreeMap::from([("H", 1)]), -form.protons());
        let water = left.get("O").copied().unwrap_or(0);
        add(&mut left, &BTreeMap::from([("O", 1), ("H", 2)]), -water);
        left.retain(|_, count| *count != 0);
        assert!(left.is_empty(), "{}: {left:?} left over", form.name);
        checked += 1;
    }
    assert!(checked >= 270, "{checked}");
}

/// Element counts of a component: of an ion by its symbol, of a ligand by the formula of its neutral form less the protons.
fn parts(component: &Component) -> BTreeMap<&'static str, i32> {
    match component {
        Component::Ion(ion) => {
            let symbol = ion.symbol.trim_end_matches(['⁺', '⁻', '²', '³']);
            atoms(&Formula::parse(symbol).unwrap())
        }
        Component::Ligand(ligand) => {
            let neutral = library().find(&ligand.name).unwrap();
            let mut parts = atoms(neutral.formula.as_ref().unwrap());
            add(&mut parts, &BTreeMap::from([("H", 1)]), -neutral.protons());
            parts
        }
    }
}

fn atoms(formula: &Formula) -> BTreeMap<&'static str, i32> {
    let count = |count: u32| i32::try_from(count).unwrap();
    let counts = formula.atoms().iter();
    counts.map(|(symbol, n)| (*symbol, count(*n))).collect()
}

fn add(to: &mut BTreeMap<&'static str, i32>, atoms: &BTreeMap<&'static str, i32>, times: i32) {
    for (symbol, count) in atoms {
        *to.entry(symbol).or_default() += count * times;
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
    assert_eq!(step.preferred.kind, Kind::Unstated);
    assert!(
        step.others
            .iter()
            .any(|other| other.pk.to_string() == "4.756")
    );
}

#[test]
fn a_formula_of_several_substances_means_none() {
    for (query, names) in [
        ("C4H4O4", &["fumaric acid", "maleic acid"][..]),
        ("C6H8O7", &["citric acid", "isocitric acid"]),
    ] {
        let error = library().find(query).unwrap_err();
        assert!(error.ambiguous, "{query}");
        assert_eq!(error.names, names, "{query}");
    }
    assert_eq!(
        library().find("C6H8O7·H2O").unwrap().name,
        "citric acid monohydrate"
    );
}

#[test]
fn ions_are_found_by_their_symbol() {
    for (query, name) in [
        ("Na+", "sodium ion"),
        ("HPO₄²⁻", "hydrogen phosphate ion"),
        ("H2PO4-", "dihydrogen phosphate ion"),
        ("SO4^2-", "sulfate ion"),
        ("NH4+", "ammonium ion"),
    ] {
        assert_eq!(library().find(query).unwrap().name, name, "{query}");
    }
}

#[test]
fn salts_do_not_carry_the_cautions_of_the_acid_alone() {
    let has = |name: &str, hazard| {
        library()
            .find(name)
            .unwrap()
            .all_hazards()
            .contains(&hazard)
    };
    assert!(has("phosphoric acid", Hazard::StrongAcid));
    assert!(!has("KH2PO4", Hazard::StrongAcid));
    assert!(!has("sodium sulfate", Hazard::StrongAcid));
    assert!(has("sodium cyanide", Hazard::Cyanide));
    assert!(has("acetic acid", Hazard::CorrosiveAcid));
}
