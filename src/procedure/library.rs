//! `constants`: the library, listed and shown.

use crate::procedure::Desk;
use crate::substance::{Constant, Form, Kind, NotFound};
use std::sync::Arc;

/// One substance in the list.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct LibraryLine {
    /// The name.
    pub name: String,
    /// Formula, or nothing.
    pub formula: String,
    /// CAS number, or nothing.
    pub cas: String,
    /// pK values, most acidic first, or nothing for salts and strong electrolytes.
    pub pk: String,
    /// `read`, `recalled`, `stated`, or both of the first.
    pub basis: String,
}

/// The substances whose name, synonym or formula contains a text; all of them for an empty one.
pub fn list(desk: &Desk, containing: &str) -> Vec<LibraryLine> {
    let wanted = containing.to_lowercase();
    desk.catalogue
        .forms()
        .filter(|form| form.charge == 0)
        .filter(|form| {
            let spellings = std::iter::once(&form.name).chain(&form.synonyms);
            let formula = form
                .formula
                .as_ref()
                .map(|formula| formula.text().to_lowercase())
                .unwrap_or_default();
            spellings
                .into_iter()
                .any(|spelling| spelling.to_lowercase().contains(&wanted))
                || formula.contains(&wanted)
        })
        .map(line)
        .collect()
}

fn line(form: &Arc<Form>) -> LibraryLine {
    let own = form.ligands().find(|ligand| ligand.name == form.name);
    let pk = own.map_or_else(String::new, |ligand| {
        let values: Vec<String> = ligand
            .steps
            .iter()
            .map(|step| step.preferred.pk.to_string())
            .collect();
        values.join(", ")
    });
    let mut bases: Vec<&str> = own.map_or_else(Vec::new, |ligand| {
        ligand
            .steps
            .iter()
            .map(|step| step.preferred.basis.word())
            .collect()
    });
    bases.sort_unstable();
    bases.dedup();
    LibraryLine {
        name: form.name.clone(),
        formula: form
            .formula
            .as_ref()
            .map(|formula| formula.text().to_owned())
            .unwrap_or_default(),
        cas: form.cas.clone().unwrap_or_default(),
        pk,
        basis: bases.join(", "),
    }
}

/// Everything that is known of a substance, in lines for people.
///
/// # Errors
/// [`NotFound`] with every known name.
pub fn show(desk: &Desk, query: &str) -> Result<Vec<String>, NotFound> {
    let form = desk.catalogue.find(query)?;
    let mut lines = vec![form.name.clone()];
    if !form.synonyms.is_empty() {
        lines.push(format!("  also     {}", form.synonyms.join("; ")));
    }
    if let Some(formula) = &form.formula {
        use crate::quantity::Dimension;
        lines.push(format!(
            "  formula  {}, {:.3} g/mol (CIAAW 2021, abridged weights)",
            formula.text(),
            formula.molar_mass().base()
        ));
    }
    if let Some(cas) = &form.cas {
        lines.push(format!("  CAS      {cas}"));
    }
    let contains: Vec<String> = form
        .contains
        .iter()
        .map(|(component, count)| format!("{count} × {}", component.name()))
        .collect();
    lines.push(format!(
        "  brings   {}, protons {:+}",
        contains.join(", "),
        form.protons()
    ));
    for hazard in form.all_hazards() {
        lines.push(format!("  caution  {}", hazard.sentence()));
    }
    for ligand in form.ligands() {
        for (number, step) in (1..).zip(&ligand.steps) {
            let from = ligand.states.get(number - 1).map_or("", String::as_str);
            let to = ligand.states.get(number).map_or("", String::as_str);
            lines.push(String::new());
            lines.push(format!("  step {number}   {from} → {to}"));
            lines.extend(constant_lines("used   ", &step.preferred));
            for other in &step.others {
                lines.extend(constant_lines("other  ", other));
            }
            if let Some(spread) = step.spread() {
                lines.push(format!(
                    "    spread of values at the same conditions: {spread:.3}"
                ));
            }
        }
    }
    Ok(lines)
}

fn constant_lines(word: &str, constant: &Constant) -> Vec<String> {
    let uncertainty = constant
        .uncertainty
        .map(|u| format!(" ± {u}"))
        .unwrap_or_default();
    let kind = match &constant.kind {
        Kind::Thermodynamic => "zero ionic strength".to_owned(),
        Kind::Conditional {
            ionic_strength,
            medium,
        } => {
            format!(
                "ionic strength {ionic_strength} mol/kg{}",
                medium
                    .as_ref()
                    .map(|m| format!(" in {m}"))
                    .unwrap_or_default()
            )
        }
        Kind::Unstated => "ionic strength not stated".to_owned(),
    };
    let locator = constant
        .locator
        .as_ref()
        .map(|locator| format!(", {locator}"))
        .unwrap_or_default();
    let mut lines = vec![
        format!(
            "    {word} pK {}{uncertainty} at {} °C, {kind}",
            constant.pk, constant.temperature_c
        ),
        format!(
            "            {}{locator} ({})",
            constant.source,
            constant.basis.word()
        ),
    ];
    lines.extend(temperature_lines(constant));
    lines
}

/// How a constant depends on temperature, as far as is known.
fn temperature_lines(constant: &Constant) -> Vec<String> {
    let mut lines = Vec::new();
    if let Some(thermal) = &constant.thermal {
        let capacity = thermal
            .heat_capacity
            .map(|c| format!(", ΔCp {c} J/(mol K)"))
            .unwrap_or_default();
        lines.push(format!(
            "            ΔH {} kJ/mol{capacity}; {} ({})",
            thermal.enthalpy,
            thermal.source,
            thermal.basis.word()
        ));
    }
    if let Some(equation) = &constant.equation {
        let coefficients: Vec<String> = equation
            .coefficients
            .iter()
            .map(ToString::to_string)
            .collect();
        lines.push(format!(
            "            pK(T) = {} with {}, {} to {} °C; {} ({})",
            equation.form.text(),
            coefficients.join("; "),
            equation.from_c,
            equation.to_c,
            equation.source,
            equation.basis.word()
        ));
    }
    lines
}
