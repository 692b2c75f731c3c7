//! The machine form of an answer: nothing rounded, keys fixed by the documentation.

use crate::problem::Statement;
use crate::solution::answer::{
    Addition, Answer, Budget, ConstantsUsed, Fit, Outcome, ShortcutResult, State, TitrationOutcome,
};
use crate::substance::{Constant, Kind};
use serde_json::{Map, Value, json as value};

/// One result as the command line prints it: `page` as given, numbers unrounded, keys in a fixed order.
pub fn json(page: &str, statement: &Statement, answer: &Answer) -> Value {
    let state = &answer.state;
    let certificate = &state.certificate;
    let mut result = Map::new();
    let mut put = |key: &str, value: Value| {
        result.insert(key.to_owned(), value);
    };
    put("page", page.into());
    put("label", statement.label.as_str().into());
    put("model", model(answer));
    put("task", statement.problem.task().into());
    put("pH", state.ph.into());
    put("p_hydrogen", state.p_hydrogen.into());
    put("ionic_strength_mol_per_kg", state.ionic_strength.into());
    put("species", species(state));
    put("dissociation", dissociation(state));
    put("buffer_capacity_mol_per_L", state.buffer_capacity.into());
    put("uncertainty", uncertainty(answer));
    put(
        "shortcuts",
        answer.shortcuts.iter().map(shortcut).collect::<Value>(),
    );
    put("hand_value", hand_value(answer));
    put("measured", comparison(answer));
    put(
        "constants",
        constants(statement.conditions.pkw.as_ref(), &answer.constants),
    );
    put("assumptions", assumptions(answer));
    put(
        "cautions",
        answer
            .cautions
            .iter()
            .map(|caution| value!({"name": caution.name, "sentence": caution.sentence}))
            .collect::<Value>(),
    );
    put(
        "certificate",
        value!({
            "charge_balance_mol_per_kg": certificate.charge_balance,
            "relative_charge_balance": certificate.relative_charge_balance,
            "mass_balance": certificate.mass_balance,
            "ionic_strength": certificate.ionic_strength,
            "ph_bracket": certificate.ph_bracket,
        }),
    );
    outcome(&answer.outcome, &mut put);
    Value::Object(result)
}

fn model(answer: &Answer) -> Value {
    let model = &answer.model;
    value!({
        "activity": model.activity.name(),
        "A": model.debye_hueckel_a,
        "B": model.debye_hueckel_b,
        "pKw": model.pkw,
        "temperature_C": model.temperature_c,
        "density_kg_per_L": model.density,
        "permittivity": model.permittivity,
    })
}

fn species(state: &State) -> Value {
    state
        .species
        .iter()
        .map(|species| {
            value!({
                "name": species.name,
                "component": species.component,
                "charge": species.charge,
                "mol_per_L": species.concentration,
                "mol_per_kg": species.molality,
                "fraction": species.fraction,
                "activity_coefficient": species.activity_coefficient,
            })
        })
        .collect()
}

fn dissociation(state: &State) -> Value {
    state
        .dissociation
        .iter()
        .map(|step| value!({"ligand": step.ligand, "step": step.step, "degree": step.degree}))
        .collect()
}

fn uncertainty(answer: &Answer) -> Value {
    let Some(budget) = &answer.budget else {
        return Value::Null;
    };
    let mut uncertainty = value!({
        "standard": budget.standard,
        "expanded": budget.expanded,
        "k": budget.k,
        "effective_degrees_of_freedom": budget.effective_degrees_of_freedom,
        "budget": budget_lines(budget),
    });
    if let (Some(simulation), Some(fields)) = (&answer.simulation, uncertainty.as_object_mut()) {
        let found = value!({
            "draws": simulation.draws,
            "seed": simulation.seed,
            "mean": simulation.mean,
            "standard": simulation.standard,
            "interval": [simulation.interval.0, simulation.interval.1],
        });
        fields.insert("simulation".to_owned(), found);
    }
    uncertainty
}

fn budget_lines(budget: &Budget) -> Value {
    budget
        .lines
        .iter()
        .map(|line| {
            value!({
                "what": line.what,
                "input": line.input.as_ref().map(crate::problem::InputId::as_str),
                "value": line.value,
                "standard": line.standard,
                "unit": line.unit,
                "sensitivity": line.sensitivity,
                "share": line.share,
                "degrees_of_freedom": line.degrees_of_freedom,
                "origin": line.origin,
            })
        })
        .collect()
}

fn shortcut(shortcut: &ShortcutResult) -> Value {
    value!({
        "name": shortcut.shortcut.name(),
        "pH": shortcut.ph,
        "shift": shortcut.shift,
        "limit": shortcut.limit,
        "within_limit": shortcut.within_limit(),
        "condition": shortcut.condition,
    })
}

fn hand_value(answer: &Answer) -> Value {
    let Some(verdict) = &answer.hand_value else {
        return Value::Null;
    };
    value!({
        "recorded": verdict.recorded,
        "by": verdict.by.name(),
        "shortcut_gives": verdict.shortcut_gives,
        "shift": verdict.shift,
        "limit": verdict.limit,
        "stands": verdict.stands,
        "reason": verdict.reason,
    })
}

fn comparison(answer: &Answer) -> Value {
    let Some(comparison) = &answer.comparison else {
        return Value::Null;
    };
    let acceptance = comparison.acceptance.as_ref();
    value!({
        "reading": comparison.reading,
        "difference": comparison.difference,
        "expanded": comparison.expanded,
        "agrees": comparison.agrees,
        "limit": acceptance.map(|(_, limit)| limit),
        "within_limit": acceptance.map(|(within, _)| within),
        "remarks": comparison.remarks,
    })
}

fn constants(water: Option<&Constant>, used: &ConstantsUsed) -> Value {
    let water = water
        .iter()
        .map(|constant| one_constant("water", 0, constant, None));
    let steps = used.ligands.iter().flat_map(|ligand| {
        ligand.steps.iter().enumerate().map(|(index, step)| {
            let number = index + 1;
            let here = used
                .pk_at_temperature
                .iter()
                .find(|(name, at, _)| *name == ligand.name && *at == number)
                .map(|(_, _, pk)| *pk);
            one_constant(&ligand.name, number, &step.preferred, here)
        })
    });
    water.chain(steps).collect()
}

fn one_constant(substance: &str, step: usize, constant: &Constant, here: Option<f64>) -> Value {
    let ionic_strength = match &constant.kind {
        Kind::Conditional { ionic_strength, .. } => Some(ionic_strength.to_f64()),
        Kind::Thermodynamic | Kind::Unstated => None,
    };
    value!({
        "substance": substance,
        "step": step,
        "pK": constant.pk.to_f64(),
        "as_printed": constant.pk.to_string(),
        "pK_at_temperature": here,
        "uncertainty": constant.uncertainty.map(crate::quantity::Decimal::to_f64),
        "kind": constant.kind.word(),
        "ionic_strength_mol_per_kg": ionic_strength,
        "temperature_C": constant.temperature_c.to_f64(),
        "source": constant.source,
        "locator": constant.locator,
        "basis": constant.basis.word(),
    })
}

fn assumptions(answer: &Answer) -> Value {
    answer
        .assumptions
        .iter()
        .map(|assumption| {
            let alternative = assumption.alternative.as_ref();
            value!({
                "statement": assumption.statement,
                "alternative": alternative.map(|(name, _)| name),
                "pH": alternative.map(|(_, ph)| ph),
                "cost": assumption.cost,
            })
        })
        .collect()
}

fn outcome(outcome: &Outcome, put: &mut impl FnMut(&str, Value)) {
    match outcome {
        Outcome::Speciation => {}
        Outcome::Preparation(made) => {
            put("additions", additions(&made.additions));
            put("volume_L", made.volume.into());
            put("target_pH", made.target_ph.into());
            put("pH_at_preparation", made.ph_at_preparation.into());
            put("pH_at_use", made.ph_at_use.into());
            put("temperature_of_use_C", made.temperature_of_use_c.into());
            put("pH_per_K", made.ph_per_kelvin.into());
            put("pH_as_weighed", made.ph_as_weighed.into());
        }
        Outcome::Adjustment(adjusted) => {
            put("additions", additions(&adjusted.additions));
            put("pH_before", adjusted.ph_before.into());
            put("pH_after", adjusted.ph_after.into());
            put("mL_per_0.01_pH", adjusted.ml_per_hundredth.into());
            put("drops_per_0.01_pH", adjusted.drops_per_hundredth.into());
        }
        Outcome::Mixing(mixed) => {
            put("volume_L", mixed.volume.into());
            let series = mixed.series.iter().map(
                |state| value!({"pH": state.ph, "ionic_strength_mol_per_kg": state.ionic_strength}),
            );
            put("series", series.collect());
        }
        Outcome::Titration(titrated) => titration(titrated, put),
    }
}

fn additions(additions: &[Addition]) -> Value {
    additions
        .iter()
        .map(|addition| {
            value!({
                "substance": addition.substance,
                "amount": addition.amount,
                "unit": addition.unit,
                "rounded": addition.rounded,
                "pH_per_percent": addition.ph_per_percent,
            })
        })
        .collect()
}

fn titration(titrated: &TitrationOutcome, put: &mut impl FnMut(&str, Value)) {
    let points = titrated.points.iter();
    put(
        "points",
        points
            .map(|point| {
                value!({"volume_mL": point.volume_ml, "pH": point.ph, "slope_per_mL": point.slope})
            })
            .collect(),
    );
    let equivalence_points = titrated.equivalence_points.iter().map(|point| {
        value!({
            "volume_mL": point.volume_ml,
            "pH": point.ph,
            "slope_per_mL": point.slope,
            "what": point.what,
            "steepest_mL": point.steepest_ml,
        })
    });
    put("equivalence_points", equivalence_points.collect());
    let indicators = titrated.indicators.iter().map(|end_point| {
        value!({
            "indicator": end_point.indicator,
            "range": [end_point.range.0, end_point.range.1],
            "equivalence_point": end_point.equivalence_point,
            "error_percent": end_point.error_percent,
        })
    });
    put("indicators", indicators.collect());
    if let Some(fit) = &titrated.fit {
        fitted(fit, put);
    }
}

fn fitted(fit: &Fit, put: &mut impl FnMut(&str, Value)) {
    let quantities = fit.fitted.iter().map(|fitted| {
        value!({
            "quantity": fitted.quantity,
            "value": fitted.value,
            "unit": fitted.unit,
            "standard_error": fitted.standard_error,
        })
    });
    put("fitted", quantities.collect());
    put(
        "fit",
        value!({
            "correlation": fit.correlation,
            "residuals": fit.residuals,
            "residual_standard_deviation": fit.residual_standard_deviation,
            "degrees_of_freedom": fit.degrees_of_freedom,
            "runs_probability": fit.runs_probability,
            "outliers": fit.outliers,
            "end_points": fit.end_points.iter()
                .map(|(method, volume)| value!({"method": method, "volume_mL": volume}))
                .collect::<Value>(),
            "warnings": fit.warnings,
        }),
    );
}
