//! What is printed of an amount reads back as the same amount, and no text of a block brings the reader down.
#![expect(
    clippy::unwrap_used,
    clippy::expect_used,
    reason = "the library is embedded, and litres are a unit of volume"
)]

use ionfolio::block::{Attachments, Context, Defaults, Reading, SolutionError, Solutions, read};
use ionfolio::problem::{Composition, MadeUp, Problem, SolutionReference};
use ionfolio::quantity::{Decimal, Measured, Spread, Uncertainty, Unit, Volume};
use ionfolio::substance::Catalogue;
use proptest::prelude::*;
use std::sync::Arc;

#[derive(Debug)]
struct Nothing;

impl Solutions for Nothing {
    fn solution(&self, _: &SolutionReference) -> Result<Arc<Composition>, SolutionError> {
        Err(SolutionError::Unknown { labels: Vec::new() })
    }
}

impl Attachments for Nothing {
    fn read(&self, _: &str) -> Result<Vec<u8>, String> {
        Err("there is no such file".to_owned())
    }
}

fn reading(text: &str) -> Reading {
    read(
        text,
        &Context {
            catalogue: Catalogue::embedded().unwrap(),
            defaults: &Defaults::program(),
            solutions: &Nothing,
            attachments: &Nothing,
        },
    )
}

/// The volume that a block with this text after `volume:` states.
fn volume_of(text: &str) -> Option<Measured<Volume>> {
    let block = format!("label: a\ntask: speciation\nvolume: {text}\ncontents: water\n");
    match reading(&block).statement?.problem {
        Problem::Speciation(task) => match task.composition.made_up {
            MadeUp::To(volume) => Some(volume.measured),
            MadeUp::SumOfPortions | MadeUp::Unstated => None,
        },
        _ => None,
    }
}

/// Positive decimals whose value is from a nanolitre to a few thousand litres in any unit of volume.
fn decimals() -> impl Strategy<Value = Decimal> {
    (1_u128..1_000_000, -6_i32..0)
        .prop_map(|(digits, exponent)| Decimal::new(false, digits, exponent))
}

fn spreads() -> impl Strategy<Value = Spread> {
    prop_oneof![
        Just(Spread::Standard),
        Just(Spread::Triangular),
        Just(Spread::Rectangular),
        Just(Spread::Replicates),
        (1_u128..40).prop_map(|tenths| Spread::Expanded {
            k: Decimal::new(false, tenths, -1)
        }),
    ]
}

fn uncertainties() -> impl Strategy<Value = Uncertainty> {
    let figure = (0_u128..10_000, -8_i32..0);
    let dof = prop::option::of((1_u32..200).prop_map(Decimal::whole));
    (figure, any::<bool>(), spreads(), dof).prop_map(
        |((digits, exponent), relative, spread, degrees_of_freedom)| Uncertainty {
            stated: Decimal::new(false, digits, exponent),
            relative,
            spread,
            degrees_of_freedom,
        },
    )
}

fn volumes() -> impl Strategy<Value = Measured<Volume>> {
    let unit = prop::sample::select(vec![Unit::Litre, Unit::Millilitre, Unit::Microlitre]);
    (decimals(), unit, prop::option::of(uncertainties())).prop_map(
        |(decimal, unit, uncertainty)| {
            let measured = Measured::new(decimal, unit).expect("a unit of volume");
            match uncertainty {
                Some(uncertainty) => measured.with(uncertainty),
                None => measured,
            }
        },
    )
}

/// Other ways to write the same amount.
fn respelt(text: &str, style: u8) -> String {
    match style {
        0 => text.replace('±', "+/-"),
        1 => text.replace(" ± ", "±"),
        2 => text.replace('µ', "μ"),
        3 => text.replace("mL", "ml").replace("µL", "uL"),
        4 => format!("'{text}'"),
        5 => format!("{text}   # as on the flask"),
        _ => text.to_owned(),
    }
}

/// Lines and pieces of lines that blocks are put together from, right and wrong ones.
const PIECES: &[&str] = &[
    "label: a\n",
    "task: speciation\n",
    "task: titration\n",
    "task: preparation\n",
    "task: mixing\n",
    "task: adjustment\n",
    "contents:\n",
    "  NaCl: 0.1 mol/L\n",
    "  sodium ion: 1 mol/kg\n",
    "contents: water\n",
    "contents: [{substance: HCl, volume: 1 mL, concentration: '37 % w/w, 1.18 g/mL'}]\n",
    "volume: 1 L\n",
    "target: {pH: 7, volume: 1 L, concentration: 1 mol/L, ionic strength: 1 mol/L with NaCl}\n",
    "from: [tris, HCl]\n",
    "sample: {volume: 1 mL, contents: {HCl: 1 mol/L}}\n",
    "titrant: {solution: b}\n",
    "to: 5 mL\n",
    "fit: [titrant, pKa 9 of x]\n",
    "readings: r.csv\n",
    "portions: [{volume: 1 L, contents: water}]\n",
    "constants: [{substance: q, charge: 0, pKa: [{value: 4, source: s}]}]\n",
    "constants: x.yaml\n",
    "start: {volume: 1 L, contents: {tris: 1 mmol/L}}\n",
    "with: NaOH\n",
    "add: 1 g\n",
    "air: CO2 µ\n",
    "temperature: ± °C\n",
    "hand value: {pH: 1, by: x}\n",
    "measured: {pH: 7 ± (k=0), limit: 1 to ±}\n",
    "uncertainty: simulation, 9 draws, seed -1\n",
    "report: {pH: decimals}\n",
    "µ",
    "- ",
    ": ",
    "\t",
    "'",
    "[",
    "{",
    "}",
    "\u{feff}",
    "  ",
    "\r\n",
    "±",
    "(",
    ")",
    ",",
    "%",
    "e",
    "×10",
    "1",
    "0",
    "-",
    "ß",
];

proptest! {
    #![proptest_config(ProptestConfig { failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn a_printed_amount_reads_back(volume in volumes(), style in 0_u8..7) {
        let printed = respelt(&volume.to_string(), style);
        prop_assert_eq!(volume_of(&printed), Some(volume), "{}", printed);
    }

    #[test]
    fn any_text_for_an_amount_is_read_or_refused_in_its_place(value in "\\PC{0,24}") {
        let text = format!("label: a\ntask: speciation\nvolume: {value}\ncontents: water\n");
        let reading = reading(&text);
        prop_assert_eq!(reading.statement.is_none(), !reading.diagnostics.is_empty());
        for fault in &reading.diagnostics {
            prop_assert!(fault.labels().iter().all(|label| label.span.of(&text).is_some()), "{:?}", fault);
        }
    }

    #[test]
    fn any_block_is_read_or_refused_in_its_place(pieces in prop::collection::vec(prop::sample::select(PIECES), 0..24)) {
        let text = pieces.concat();
        let reading = reading(&text);
        prop_assert_eq!(reading.statement.is_none(), !reading.diagnostics.is_empty());
        for fault in &reading.diagnostics {
            prop_assert!(fault.labels().iter().all(|label| label.span.of(&text).is_some()), "{:?}", fault);
        }
    }
}
