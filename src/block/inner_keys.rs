//! The keys of the mappings inside a block, in one table beside that of the block's own keys; a test holds the readers to it.

/// One key of a mapping inside a block.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct InnerKey {
    /// The key as it is written.
    pub key: &'static str,
    /// What it means.
    pub meaning: &'static str,
    /// An example of its value.
    pub example: &'static str,
}

const fn inner(key: &'static str, meaning: &'static str, example: &'static str) -> InnerKey {
    InnerKey {
        key,
        meaning,
        example,
    }
}

/// Every mapping inside a block with its keys.
pub const INNER_KEYS: [(&str, &[InnerKey]); 18] = [
    (
        "an item of `contents`",
        &[
            inner(
                "substance",
                "name, synonym, formula or CAS number",
                "citric acid monohydrate",
            ),
            inner(
                "solution",
                "another block's solution, by its label",
                "stocks/2026-10.md#naoh-01",
            ),
            inner(
                "mass",
                "mass weighed, or taken of a stock in % w/w",
                "3.9003 ± 0.0002 g (rectangular)",
            ),
            inner(
                "volume",
                "volume taken of a stock or solution",
                "10.00 ± 0.02 mL (tolerance)",
            ),
            inner("amount", "amount of substance put in", "2.50 mmol"),
            inner(
                "concentration",
                "in the final solution; with `volume` or `mass`, the strength of the stock",
                "0.1000 mol/L",
            ),
            inner("density", "density of a stock in % w/w", "1.685 g/mL"),
            inner(
                "purity",
                "mass of the substance by mass of the solid",
                "99.5 ± 0.2 % (k=2)",
            ),
            inner("assay", "the same as `purity`", "99.5 %"),
            inner(
                "water",
                "moisture or loss on drying, taken off before the purity",
                "0.3 %",
            ),
            inner("factor", "titre: true by nominal concentration", "1.0023"),
            inner(
                "replicates",
                "several readings in place of one",
                "[19.21 g, 19.22 g]",
            ),
            inner("lot", "lot or batch", "K-2291"),
            inner("expiry", "expiry, as written", "2028-01"),
        ],
    ),
    (
        "an item of `from`, and `with`",
        &[
            inner("substance", "name, synonym, formula or CAS number", "tris"),
            inner(
                "solution",
                "another block's solution, by its label",
                "naoh-01",
            ),
            inner(
                "concentration",
                "strength of a stock; absent for a solid",
                "85 % w/w, 1.685 g/mL",
            ),
            inner("density", "density of a stock in % w/w", "1.685 g/mL"),
            inner(
                "purity",
                "mass of the substance by mass of the solid",
                "99.2 %",
            ),
            inner("assay", "the same as `purity`", "99.2 %"),
            inner(
                "water",
                "moisture or loss on drying, taken off before the purity",
                "0.3 %",
            ),
            inner("factor", "titre: true by nominal concentration", "1.0023"),
            inner("lot", "lot or batch", "K-2304"),
            inner("expiry", "expiry, as written", "2028-01"),
        ],
    ),
    (
        "`target` of a preparation",
        &[
            inner("pH", "pH at the temperature of use", "7.20"),
            inner("volume", "final volume", "2.000 L"),
            inner(
                "concentration",
                "total of the buffering family that `from` names",
                "50.0 mmol/L",
            ),
            inner(
                "ionic strength",
                "ionic strength and the inert salt that sets it",
                "0.150 mol/L with sodium chloride",
            ),
            inner(
                "temperature",
                "temperature of use, where it is another",
                "4 °C",
            ),
        ],
    ),
    (
        "`target` of an adjustment",
        &[inner("pH", "pH to be reached", "7.40")],
    ),
    (
        "`start`",
        &[
            inner("volume", "how much there is", "500 mL"),
            inner("contents", "what it is made of", "{tris: 50 mmol/L}"),
            inner(
                "solution",
                "another block's solution in place of `contents`",
                "naoh-01",
            ),
            inner("measured pH", "pH that was read at the start", "8.31"),
        ],
    ),
    (
        "`sample`",
        &[
            inner("volume", "how much there is", "25.00 mL"),
            inner(
                "contents",
                "what it is made of",
                "{phosphoric acid: 0.0320 mol/L}",
            ),
            inner(
                "solution",
                "another block's solution in place of `contents`",
                "wash-3",
            ),
        ],
    ),
    (
        "`titrant`",
        &[
            inner(
                "volume",
                "volume it was made up to, where masses are stated",
                "1.000 L",
            ),
            inner(
                "contents",
                "what it is made of",
                "{sodium hydroxide: 0.1000 mol/L}",
            ),
            inner(
                "solution",
                "another block's solution in place of `contents`",
                "naoh-01",
            ),
        ],
    ),
    (
        "a portion of `portions`",
        &[
            inner("volume", "how much is taken", "100.0 mL"),
            inner("contents", "what it is made of, or `water`", "water"),
            inner(
                "solution",
                "another block's solution in place of `contents`",
                "naoh-01",
            ),
        ],
    ),
    (
        "`dilution`",
        &[
            inner("take", "volume carried over at each step", "10 mL"),
            inner(
                "made up to",
                "volume to which it is filled up with water",
                "100 mL",
            ),
            inner("steps", "number of steps; absent, 1", "3"),
        ],
    ),
    (
        "`calibration`",
        &[
            inner("mV at pH 7", "voltage at pH 7", "2.1"),
            inner("slope", "slope by that of Nernst's equation", "98.9 %"),
        ],
    ),
    (
        "`measured`",
        &[
            inner("pH", "the reading", "7.18 ± 0.02 (k=2)"),
            inner("temperature", "temperature at the reading", "24.6 °C"),
            inner(
                "calibration",
                "standards and slope, as written",
                "[phthalate 4.005, slope 99.1 %]",
            ),
            inner("limit", "acceptance limit", "7.20 ± 0.05"),
        ],
    ),
    (
        "`hand value`",
        &[
            inner("pH", "the value worked by hand", "2.15"),
            inner("by", "the shortcut", "x neglected"),
            inner(
                "limit",
                "largest accepted shift in pH; absent, 0.02",
                "0.02",
            ),
        ],
    ),
    (
        "`report`",
        &[
            inner("pH", "decimals of pH", "2 decimals"),
            inner("amounts", "significant figures of amounts", "4 figures"),
        ],
    ),
    (
        "`uncertainty`",
        &[
            inner("draws", "number of draws of a simulation", "100000"),
            inner("seed", "seed of its random generator", "1"),
        ],
    ),
    (
        "`constants`, a substance",
        &[
            inner("substance", "name of its neutral form", "acid A"),
            inner("charge", "charge of the fully protonated form", "0"),
            inner(
                "pKa",
                "one value a step, most acidic first; numbers or mappings",
                "[2.15, 7.20, 12.35]",
            ),
            inner(
                "source",
                "publication, report or certificate",
                "report 11-204",
            ),
            inner(
                "formula",
                "formula of the neutral form, for masses",
                "C4H6O5",
            ),
            inner("synonyms", "other names", "[acid of route 3]"),
            inner("cas", "CAS registry number", "6915-15-7"),
            inner("symbol", "what the fully deprotonated form is called", "A"),
            inner(
                "states",
                "names of the states, most protonated first",
                "[H₂A, HA⁻, A²⁻]",
            ),
            inner("ion sizes", "ion sizes in nm by state", "['-', 0.4, 0.5]"),
            inner("hazards", "cautions", "[strong acid]"),
        ],
    ),
    (
        "`constants`, a value of `pKa`",
        &[
            inner("value", "the pK as printed", "7.198"),
            inner("uncertainty", "its standard uncertainty", "0.002"),
            inner(
                "kind",
                "`thermodynamic`, `conditional` or `unstated`",
                "thermodynamic",
            ),
            inner("ionic strength", "of a conditional value", "0.1 mol/kg"),
            inner("medium", "of a conditional value", "sodium chloride"),
            inner("temperature", "absent, 25 °C", "20 °C"),
            inner("enthalpy", "enthalpy of dissociation", "3.6 kJ/mol"),
            inner(
                "heat capacity",
                "change of heat capacity on dissociation",
                "-230 J/(mol K)",
            ),
            inner(
                "thermal source",
                "source of enthalpy and heat capacity, where another",
                "report 11-205",
            ),
            inner(
                "thermal basis",
                "whether that was opened: `read`, `recalled` or `stated`",
                "read",
            ),
            inner(
                "equation",
                "pK(T) with form, coefficients, range and source",
                "{form: a/T + b + c T, ...}",
            ),
            inner("source", "where another than the entry's", "report 11-206"),
            inner("locator", "place in the source", "table 3"),
            inner(
                "basis",
                "whether the source was opened: `read`, `recalled` or `stated`",
                "read",
            ),
            inner("note", "remark", "mean of two"),
        ],
    ),
    (
        "`constants`, an ion",
        &[
            inner("ion", "its name", "choline ion"),
            inner("charge", "its charge", "1"),
            inner("symbol", "as printed", "Ch⁺"),
            inner("ion size", "in nm", "0.4"),
        ],
    ),
    (
        "`constants`, a form",
        &[
            inner("form", "its name", "choline chloride"),
            inner(
                "contains",
                "components and how many of each",
                "{choline ion: 1, chloride ion: 1}",
            ),
            inner("charge", "absent, 0", "0"),
            inner("formula", "for its molar mass", "C5H14ClNO"),
            inner("synonyms", "other names", "[ChCl]"),
            inner("cas", "CAS registry number", "67-48-1"),
            inner("hazards", "cautions", "[amine]"),
        ],
    ),
];

#[cfg(test)]
mod tests {
    use super::*;
    use crate::block::trial::faults;
    use crate::text::Rule;
    use std::collections::BTreeSet;

    /// For each mapping a task and keys with `x!`, which is no key, inside it.
    const BLOCKS: [(&str, &str); 18] = [
        ("speciation", "contents: [{substance: NaCl, x!: 1}]\n"),
        ("preparation", "from: [tris, {substance: HCl, x!: 1}]\n"),
        ("preparation", "target: {x!: 1}\n"),
        ("adjustment", "target: {x!: 1}\n"),
        ("adjustment", "start: {x!: 1}\n"),
        ("titration", "sample: {x!: 1}\n"),
        ("titration", "titrant: {x!: 1}\n"),
        ("mixing", "portions: [{x!: 1}]\n"),
        ("mixing", "dilution: {x!: 1}\n"),
        ("titration", "calibration: {x!: 1}\n"),
        ("speciation", "measured: {x!: 1}\n"),
        ("speciation", "hand value: {x!: 1}\n"),
        ("speciation", "report: {x!: 1}\n"),
        ("speciation", "uncertainty: {x!: 1}\n"),
        ("speciation", "constants: [{substance: a, x!: 1}]\n"),
        (
            "speciation",
            "constants: [{substance: a, pKa: [{x!: 1}]}]\n",
        ),
        ("speciation", "constants: [{ion: a, x!: 1}]\n"),
        ("speciation", "constants: [{form: a, x!: 1}]\n"),
    ];

    #[test]
    fn the_readers_know_the_keys_of_the_table_and_no_others() {
        for ((within, table), (task, keys)) in INNER_KEYS.iter().zip(BLOCKS) {
            let found = faults(task, keys);
            let (_, _, expected) = found
                .iter()
                .find(|(rule, place, _)| *rule == Rule::UnknownKey && place == "x!")
                .unwrap();
            let read: BTreeSet<&str> = expected.split('`').skip(1).step_by(2).collect();
            let table: BTreeSet<&str> = table.iter().map(|entry| entry.key).collect();
            assert_eq!(read, table, "{within}");
        }
    }
}
