//! Abridged standard atomic weights.
//!
//! Source: CIAAW, standard atomic weights 2021; Prohaska et al., Pure Appl. Chem. 94, 573 (2022), Table 1, abridged to five figures; read.

/// One abridged standard atomic weight.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct AtomicWeight {
    /// The element's symbol.
    pub(super) symbol: &'static str,
    /// Weight, dimensionless; numerically the molar mass in g/mol.
    pub(super) value: f64,
    /// Stated uncertainty, a half width.
    pub(super) uncertainty: f64,
}

/// The abridged weight of an element.
pub(super) fn weight(symbol: &str) -> Option<&'static AtomicWeight> {
    WEIGHTS.iter().find(|weight| weight.symbol == symbol)
}

const fn of(symbol: &'static str, value: f64, uncertainty: f64) -> AtomicWeight {
    AtomicWeight {
        symbol,
        value,
        uncertainty,
    }
}

const WEIGHTS: [AtomicWeight; 84] = [
    of("H", 1.0080, 0.0002),
    of("He", 4.0026, 0.0001),
    of("Li", 6.94, 0.06),
    of("Be", 9.0122, 0.00001),
    of("B", 10.81, 0.02),
    of("C", 12.011, 0.002),
    of("N", 14.007, 0.001),
    of("O", 15.999, 0.001),
    of("F", 18.998, 0.001),
    of("Ne", 20.180, 0.001),
    of("Na", 22.990, 0.001),
    of("Mg", 24.305, 0.002),
    of("Al", 26.982, 0.001),
    of("Si", 28.085, 0.001),
    of("P", 30.974, 0.001),
    of("S", 32.06, 0.02),
    of("Cl", 35.45, 0.01),
    of("Ar", 39.95, 0.16),
    of("K", 39.098, 0.001),
    of("Ca", 40.078, 0.004),
    of("Sc", 44.956, 0.001),
    of("Ti", 47.867, 0.001),
    of("V", 50.942, 0.001),
    of("Cr", 51.996, 0.001),
    of("Mn", 54.938, 0.001),
    of("Fe", 55.845, 0.002),
    of("Co", 58.933, 0.001),
    of("Ni", 58.693, 0.001),
    of("Cu", 63.546, 0.003),
    of("Zn", 65.38, 0.02),
    of("Ga", 69.723, 0.001),
    of("Ge", 72.630, 0.008),
    of("As", 74.922, 0.001),
    of("Se", 78.971, 0.008),
    of("Br", 79.904, 0.003),
    of("Kr", 83.798, 0.002),
    of("Rb", 85.468, 0.001),
    of("Sr", 87.62, 0.01),
    of("Y", 88.906, 0.001),
    of("Zr", 91.224, 0.002),
    of("Nb", 92.906, 0.001),
    of("Mo", 95.95, 0.01),
    of("Ru", 101.07, 0.02),
    of("Rh", 102.91, 0.01),
    of("Pd", 106.42, 0.01),
    of("Ag", 107.87, 0.01),
    of("Cd", 112.41, 0.01),
    of("In", 114.82, 0.01),
    of("Sn", 118.71, 0.01),
    of("Sb", 121.76, 0.01),
    of("Te", 127.60, 0.03),
    of("I", 126.90, 0.01),
    of("Xe", 131.29, 0.01),
    of("Cs", 132.91, 0.01),
    of("Ba", 137.33, 0.01),
    of("La", 138.91, 0.01),
    of("Ce", 140.12, 0.01),
    of("Pr", 140.91, 0.01),
    of("Nd", 144.24, 0.01),
    of("Sm", 150.36, 0.02),
    of("Eu", 151.96, 0.01),
    of("Gd", 157.25, 0.03),
    of("Tb", 158.93, 0.01),
    of("Dy", 162.50, 0.01),
    of("Ho", 164.93, 0.01),
    of("Er", 167.26, 0.01),
    of("Tm", 168.93, 0.01),
    of("Yb", 173.05, 0.02),
    of("Lu", 174.97, 0.01),
    of("Hf", 178.49, 0.01),
    of("Ta", 180.95, 0.01),
    of("W", 183.84, 0.01),
    of("Re", 186.21, 0.01),
    of("Os", 190.23, 0.03),
    of("Ir", 192.22, 0.01),
    of("Pt", 195.08, 0.02),
    of("Au", 196.97, 0.01),
    of("Hg", 200.59, 0.01),
    of("Tl", 204.38, 0.01),
    of("Pb", 207.2, 1.1),
    of("Bi", 208.98, 0.01),
    of("Th", 232.04, 0.01),
    of("Pa", 231.04, 0.01),
    of("U", 238.03, 0.01),
];
