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
}

impl Hazard {
    /// Every hazard with the word that a file uses for it.
    pub const WORDS: [(&'static str, Self); 19] = [
        ("strong acid", Self::StrongAcid),
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
        }
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
