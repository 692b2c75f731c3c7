//! Polyborates, which belong to every activity model and matter above about 0.02 mol/L of boron.
//!
//! Source: Mesmer, Baes and Sweeton (1972), Inorg. Chem. 11, 537: n B(OH)₃ + m OH⁻, `lg K = p1/T + p2 + p3 lg T`; recalled.

use crate::equilibrium::{Species, SystemBuilder, Water, elementary};
use crate::solution::assembly::{Part, PkRow};

/// One polyborate.
#[derive(Clone, Copy, Debug)]
pub(super) struct Polyborate {
    /// Name as printed.
    pub(super) name: &'static str,
    /// Boron atoms.
    pub(super) boron: u8,
    /// Hydroxide ions in its equation; minus its charge.
    hydroxide: u8,
    /// Charge in elementary charges.
    pub(super) charge: i8,
    coefficients: [f64; 3],
    /// Place of boric acid among the parts.
    pub(super) part: usize,
}

/// The source, as printed in a result.
pub(super) const SOURCE: &str =
    "polyborates: Mesmer, Baes and Sweeton, Inorg. Chem. 11, 537 (1972); recalled";

/// The ligand whose species these are.
pub(super) const BORIC_ACID: &str = "boric acid";

const POLYBORATES: [Polyborate; 3] = [
    Polyborate {
        name: "B₂O(OH)₅⁻",
        boron: 2,
        hydroxide: 1,
        charge: -1,
        coefficients: [2756.1, -18.966, 5.835],
        part: 0,
    },
    Polyborate {
        name: "B₃O₃(OH)₄⁻",
        boron: 3,
        hydroxide: 1,
        charge: -1,
        coefficients: [3339.5, -8.084, 1.497],
        part: 0,
    },
    Polyborate {
        name: "B₄O₅(OH)₄²⁻",
        boron: 4,
        hydroxide: 2,
        charge: -2,
        coefficients: [12820.0, -134.56, 42.105],
        part: 0,
    },
];

impl Polyborate {
    /// Protons above the component B(OH)₄⁻: one for each boron, less one for each hydroxide.
    pub(super) fn protons(self) -> i8 {
        i8::try_from(self.boron).unwrap_or(0) - i8::try_from(self.hydroxide).unwrap_or(0)
    }

    /// How often pKw is in its lg beta.
    pub(super) fn pkw_multiple(self) -> f64 {
        -f64::from(self.hydroxide)
    }

    /// lg beta from B(OH)₄⁻ and H⁺ with the pK of boric acid, dimensionless.
    fn lg_beta(self, pk: f64, water: &Water) -> f64 {
        let [inverse, constant, logarithm] = self.coefficients;
        let t = water.temperature;
        let lg_k = inverse / t + constant + logarithm * elementary::log10(t);
        f64::from(self.boron) * pk + lg_k - f64::from(self.hydroxide) * water.pkw
    }
}

/// Adds the polyborates where there is boric acid from the library.
pub(super) fn add(
    builder: &mut SystemBuilder,
    parts: &[Part],
    pks: &[PkRow],
    water: &Water,
) -> Vec<Polyborate> {
    let place = parts
        .iter()
        .position(|part| part.component.name() == BORIC_ACID);
    let pk = pks.iter().find(|pk| pk.ligand.name == BORIC_ACID);
    let (Some(place), Some(pk)) = (place, pk) else {
        return Vec::new();
    };
    let Some(part) = parts.get(place).filter(|_| pk.ligand.steps.len() == 1) else {
        return Vec::new();
    };
    POLYBORATES
        .into_iter()
        .map(|polyborate| {
            let lg_beta = polyborate.lg_beta(pk.found.value, water);
            let species = Species::new(polyborate.charge, polyborate.protons(), lg_beta);
            builder.polynuclear(species, &[(part.index, polyborate.boron)]);
            Polyborate {
                part: place,
                ..polyborate
            }
        })
        .collect()
}
