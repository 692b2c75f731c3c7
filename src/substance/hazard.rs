//! The usual cautions of substances and of what is done with them.
//!
//! These sentences are common practice and no substitute: the safety data sheet, local rules and qualified staff decide.

/// A gas that is set free on acidifying.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct ReleasedGas {
    /// The gas.
    pub name: &'static str,
    /// Whether it is acutely toxic.
    pub toxic: bool,
}

/// A caution of one substance.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
#[expect(
    missing_docs,
    reason = "each variant is named as the hazard; its sentence says the rest"
)]
pub enum Hazard {
    StrongAcid,
    CorrosiveAcid,
    StrongBase,
    HydrofluoricAcid,
    Cyanide,
    Sulfide,
    Azide,
    Hypochlorite,
    Sulfite,
    Carbonate,
    Nitrite,
    Chromate,
    Peroxide,
    Perchlorate,
    Arsenic,
    Phenol,
    Ammonia,
    Amine,
    Borate,
    Barium,
    Hydroxylamine,
    Toxic,
    Harmful,
}

impl Hazard {
    /// Every hazard with the word that a file uses for it.
    pub const WORDS: [(&'static str, Self); 23] = [
        ("strong acid", Self::StrongAcid),
        ("corrosive acid", Self::CorrosiveAcid),
        ("strong base", Self::StrongBase),
        ("hydrofluoric acid", Self::HydrofluoricAcid),
        ("cyanide", Self::Cyanide),
        ("sulfide", Self::Sulfide),
        ("azide", Self::Azide),
        ("hypochlorite", Self::Hypochlorite),
        ("sulfite", Self::Sulfite),
        ("carbonate", Self::Carbonate),
        ("nitrite", Self::Nitrite),
        ("chromate", Self::Chromate),
        ("peroxide", Self::Peroxide),
        ("perchlorate", Self::Perchlorate),
        ("arsenic", Self::Arsenic),
        ("phenol", Self::Phenol),
        ("ammonia", Self::Ammonia),
        ("amine", Self::Amine),
        ("borate", Self::Borate),
        ("barium", Self::Barium),
        ("hydroxylamine", Self::Hydroxylamine),
        ("toxic", Self::Toxic),
        ("harmful", Self::Harmful),
    ];

    /// The word that a file uses.
    pub fn word(self) -> &'static str {
        Self::WORDS
            .iter()
            .find(|(_, hazard)| *hazard == self)
            .map_or("", |(word, _)| word)
    }

    /// The caution in a sentence.
    pub fn sentence(self) -> &'static str {
        match self {
            Self::StrongAcid => {
                "Corrosive when concentrated; add the acid to the water, slowly, never the reverse."
            }
            Self::CorrosiveAcid => {
                "The concentrated acid burns skin and eyes and its vapour irritates; use a fume hood, add the acid to the water."
            }
            Self::StrongBase => {
                "Corrosive; dissolving and diluting give off heat. Protect the eyes; add to water in portions."
            }
            Self::HydrofluoricAcid => {
                "Fluoride below about pH 5 holds hydrofluoric acid: burns deep and poisons through the skin, pain may come late. Only with \
                 trained staff and calcium gluconate gel at hand; no glass."
            }
            Self::Cyanide => {
                "Cyanide: highly toxic. Never acidify; hydrogen cyanide gas is set free below about pH 10.5."
            }
            Self::Sulfide => {
                "Sulfide: never acidify outside a fume hood; hydrogen sulfide gas is toxic and dulls the sense of smell."
            }
            Self::Azide => {
                "Azide: toxic; acidifying sets free hydrazoic acid; forms explosive azides with copper, lead and silver, drains included."
            }
            Self::Hypochlorite => {
                "Hypochlorite: acidifying sets free chlorine; never mix with acids, ammonia or amines."
            }
            Self::Sulfite => {
                "Sulfite: acidifying sets free sulfur dioxide, an irritant gas; work in a fume hood."
            }
            Self::Carbonate => {
                "Carbonate: acidifying sets free carbon dioxide; add acid slowly, keep vessels vented."
            }
            Self::Nitrite => "Nitrite: toxic; acidifying sets free nitrogen oxides.",
            Self::Chromate => {
                "Chromium(VI): carcinogenic and toxic; avoid dust and skin contact, collect the waste."
            }
            Self::Peroxide => {
                "Hydrogen peroxide: oxidiser; keep from organic matter and metals, vent the vessel."
            }
            Self::Perchlorate => {
                "Perchloric acid and perchlorates: strong oxidisers; keep from organic matter, never evaporate to dryness."
            }
            Self::Arsenic => "Arsenic compounds: toxic and carcinogenic; collect the waste.",
            Self::Phenol => "Phenol: toxic and corrosive through the skin.",
            Self::Ammonia => "Ammonia: corrosive, its gas irritates; never mix with hypochlorite.",
            Self::Amine => "Amine: corrosive or irritant when concentrated; use a fume hood.",
            Self::Borate => "Borates: may harm fertility; avoid dust.",
            Self::Barium => "Soluble barium compounds are toxic.",
            Self::Hydroxylamine => {
                "Hydroxylamine and its salts: toxic, may explode when heated or dry with metal ions; keep cool and clean."
            }
            Self::Toxic => "Toxic; avoid skin contact and dust or vapour.",
            Self::Harmful => "Harmful if swallowed or on the skin; avoid dust.",
        }
    }

    /// Hazard statements of the Globally Harmonized System that commonly stand on the label of the concentrated or solid substance.
    ///
    /// From memory; strength and supplier change them, so the safety data sheet decides.
    pub fn statements(self) -> &'static [&'static str] {
        match self {
            Self::StrongAcid | Self::StrongBase | Self::CorrosiveAcid => &["H290", "H314"],
            Self::HydrofluoricAcid => &["H300", "H310", "H330", "H314"],
            Self::Cyanide | Self::Azide => &["H300", "H310", "H330", "H410"],
            Self::Sulfide => &["H301", "H314", "H400"],
            Self::Hypochlorite => &["H314", "H410"],
            Self::Sulfite => &["H302", "H318"],
            Self::Carbonate => &["H319"],
            Self::Nitrite => &["H272", "H301", "H319", "H400"],
            Self::Chromate => &["H317", "H340", "H350", "H410"],
            Self::Peroxide => &["H271", "H302", "H314", "H332"],
            Self::Perchlorate => &["H271"],
            Self::Arsenic => &["H301", "H331", "H350", "H410"],
            Self::Phenol => &["H301", "H311", "H331", "H314", "H341"],
            Self::Ammonia => &["H314", "H335", "H400"],
            Self::Amine => &["H302", "H314", "H335"],
            Self::Borate => &["H360FD"],
            Self::Barium => &["H301", "H332"],
            Self::Hydroxylamine => &["H290", "H302", "H312", "H317", "H351", "H400"],
            Self::Toxic => &["H301"],
            Self::Harmful => &["H302", "H312"],
        }
    }

    /// Whether salts of the substance carry the caution too: sodium acetate is no corrosive acid, sodium cyanide is a cyanide.
    pub(super) fn clings_to_salts(self) -> bool {
        !matches!(
            self,
            Self::StrongAcid | Self::CorrosiveAcid | Self::StrongBase | Self::Amine | Self::Phenol
        )
    }

    /// The gas that acidifying sets free, if any.
    pub fn released_gas(self) -> Option<ReleasedGas> {
        let (name, toxic) = match self {
            Self::Cyanide => ("hydrogen cyanide", true),
            Self::Sulfide => ("hydrogen sulfide", true),
            Self::Azide => ("hydrazoic acid", true),
            Self::Hypochlorite => ("chlorine", true),
            Self::Sulfite => ("sulfur dioxide", true),
            Self::Nitrite => ("nitrogen oxides", true),
            Self::Carbonate => ("carbon dioxide", false),
            _ => return None,
        };
        Some(ReleasedGas { name, toxic })
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn words_sentences_and_statements_are_whole() {
        for (word, hazard) in Hazard::WORDS {
            assert_eq!(hazard.word(), word);
            assert!(hazard.sentence().ends_with('.'), "{word}");
            assert!(
                hazard.statements().iter().all(|code| code.starts_with('H')),
                "{word}"
            );
            assert!(!hazard.statements().is_empty(), "{word}");
        }
    }
}
