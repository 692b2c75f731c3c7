//! Constants written out in the stored form, so that an answer carries everything it was computed from.

use crate::quantity::Decimal;
use crate::substance::{
    Constant, Form, InertIon, Kind, Ligand, PkEquation, StoredEquation, StoredForm, StoredIon,
    StoredPk, StoredSubstance,
};
use serde::Serialize;
use std::sync::Arc;

/// The YAML text of ligands, ions and forms, ending in a line feed; it reads back as the same constants.
///
/// `water` is the user's own pKw, where there is one. Second opinions are left out: they were not used.
pub fn written(
    water: Option<&Constant>,
    ligands: &[Arc<Ligand>],
    ions: &[Arc<InertIon>],
    forms: &[Arc<Form>],
) -> String {
    let mut text = String::new();
    if let Some(constant) = water {
        push(
            &mut text,
            &StoredSubstance {
                substance: "water".to_owned(),
                pka: vec![stored_pk(constant)],
                ..StoredSubstance::default()
            },
        );
    }
    for ligand in ligands {
        push(&mut text, &stored_substance(ligand));
    }
    for ion in ions {
        push(
            &mut text,
            &StoredIon {
                ion: ion.name.clone(),
                symbol: ion.symbol.clone(),
                charge: ion.charge,
                ion_size: ion.ion_size.map(|size| size.to_string()),
            },
        );
    }
    for form in forms {
        push(&mut text, &stored_form(form));
    }
    text
}

fn push(text: &mut String, entry: &impl Serialize) {
    // Writing strings and small numbers to memory cannot fail.
    if let Ok(entry) = serde_yaml::to_string(&[entry]) {
        text.push_str(&entry);
    }
}

fn stored_substance(ligand: &Ligand) -> StoredSubstance {
    StoredSubstance {
        substance: ligand.name.clone(),
        charge: Some(ligand.charge),
        states: ligand.states.clone(),
        ion_sizes: if ligand.ion_sizes.iter().all(Option::is_none) {
            Vec::new()
        } else {
            let size =
                |size: &Option<Decimal>| size.map_or("-".to_owned(), |size| size.to_string());
            ligand.ion_sizes.iter().map(size).collect()
        },
        hazards: ligand
            .hazards
            .iter()
            .map(|hazard| hazard.word().to_owned())
            .collect(),
        pka: ligand
            .steps
            .iter()
            .map(|step| stored_pk(&step.preferred))
            .collect(),
        ..StoredSubstance::default()
    }
}

fn stored_form(form: &Form) -> StoredForm {
    StoredForm {
        form: form.name.clone(),
        synonyms: form.synonyms.clone(),
        cas: form.cas.clone(),
        formula: form
            .formula
            .as_ref()
            .map(|formula| formula.text().to_owned()),
        contains: form
            .contains
            .iter()
            .map(|(component, count)| (component.name().to_owned(), *count))
            .collect(),
        charge: form.charge,
        hazards: form
            .hazards
            .iter()
            .map(|hazard| hazard.word().to_owned())
            .collect(),
    }
}

fn stored_pk(constant: &Constant) -> StoredPk {
    let (ionic_strength, medium) = match &constant.kind {
        Kind::Conditional {
            ionic_strength,
            medium,
        } => (Some(ionic_strength.to_string()), medium.clone()),
        Kind::Thermodynamic | Kind::Unstated => (None, None),
    };
    let thermal = constant.thermal.as_ref();
    StoredPk {
        value: constant.pk.to_string(),
        uncertainty: constant.uncertainty.map(|figure| figure.to_string()),
        kind: Some(constant.kind.word().to_owned()),
        ionic_strength,
        medium,
        temperature: Some(constant.temperature_c.to_string()),
        enthalpy: thermal.map(|data| data.enthalpy.to_string()),
        heat_capacity: thermal
            .and_then(|data| data.heat_capacity)
            .map(|figure| figure.to_string()),
        thermal_source: thermal.map(|data| data.source.clone()),
        thermal_basis: thermal.map(|data| data.basis.word().to_owned()),
        equation: constant.equation.as_ref().map(stored_equation),
        source: constant.source.clone(),
        locator: constant.locator.clone(),
        basis: Some(constant.basis.word().to_owned()),
        note: constant.note.clone(),
        others: Vec::new(),
    }
}

fn stored_equation(equation: &PkEquation) -> StoredEquation {
    StoredEquation {
        form: equation.form.text().to_owned(),
        coefficients: equation
            .coefficients
            .iter()
            .map(Decimal::to_string)
            .collect(),
        from: equation.from_c.to_string(),
        to: equation.to_c.to_string(),
        source: equation.source.clone(),
        basis: Some(equation.basis.word().to_owned()),
    }
}
