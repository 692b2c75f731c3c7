//! Units that are understood and not accepted, with the reason and what to write.

/// Why a unit is refused; `None` where it is not one of these. `symbol` in the normalised spelling of the table of units.
pub(super) fn reason(symbol: &str) -> Option<&'static str> {
    REFUSED
        .iter()
        .find(|(refused, _)| *refused == symbol)
        .map(|(_, reason)| *reason)
}

const NORMALITY: &str = "a normality has no single meaning for a polyprotic acid; state mol/L";

const REFUSED: [(&str, &str); 20] = [
    ("N", NORMALITY),
    ("mN", NORMALITY),
    ("eq/L", NORMALITY),
    ("meq/L", NORMALITY),
    ("val/L", NORMALITY),
    ("m", "m may mean molal or metre; state mol/kg"),
    ("molal", "state mol/kg"),
    ("molar", "state mol/L"),
    ("% w/v", "state g/L (1 % w/v is 10 g/L)"),
    ("%w/v", "state g/L (1 % w/v is 10 g/L)"),
    ("% (w/v)", "state g/L (1 % w/v is 10 g/L)"),
    ("g/100 mL", "state g/L (1 g/100 mL is 10 g/L)"),
    ("g/dL", "state g/L (1 g/dL is 10 g/L)"),
    ("mg/dL", "state mg/L (1 mg/dL is 10 mg/L)"),
    (
        "ppb",
        "ppb may mean a mass or a mole fraction; state a concentration",
    ),
    (
        "°dH",
        "a degree of hardness is no amount of one substance; state mol/L",
    ),
    ("mmHg", "state kPa (1 mmHg is 0.133322 kPa)"),
    (
        "% v/v",
        "a volume fraction needs densities of liquid and mixture; state a mass, or % w/w with the density",
    ),
    ("°F", "state °C"),
    ("drops", "a drop is no unit; state mL"),
];
