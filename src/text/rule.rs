//! The rules that pages, blocks and settings are held to: one table.
//!
//! Longer than other files because it is that table. A new rule is one more entry in it.

/// Makes the enum and its look-ups from the table, so that a rule cannot be left out of one of them.
macro_rules! rules {
    ($($variant:ident $name:literal: $sentence:literal; $remedy:literal)+) => {
        /// A rule by which something in a page, a block or a settings file can be wrong. The name is stable: people
        /// search for it, machines filter by it, `explain` prints its sentence and remedy.
        #[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
        pub enum Rule {
            $(#[doc = $sentence] $variant,)+
        }

        impl Rule {
            /// Every rule, in the order of the table.
            pub const ALL: &'static [Self] = &[$(Self::$variant),+];

            /// The rule's name: lower-case words with hyphens.
            pub const fn name(self) -> &'static str {
                match self { $(Self::$variant => $name,)+ }
            }

            /// What the rule means, in a sentence or two.
            pub const fn sentence(self) -> &'static str {
                match self { $(Self::$variant => $sentence,)+ }
            }

            /// What to do about it.
            pub const fn remedy(self) -> &'static str {
                match self { $(Self::$variant => $remedy,)+ }
            }
        }
    };
}

rules! {
    // the page
    NotUtf8 "not-utf8":
        "A page is text in UTF-8; this file holds bytes that are not.";
        "Save the page as UTF-8 in the editor; a file in an older encoding has to be converted once."
    PageTooLarge "page-too-large":
        "The page is larger than the program reads.";
        "Divide the page; keep readings in files of their own and name them with `readings`."
    LoneCarriageReturn "lone-carriage-return":
        "A carriage return without a line feed stands in the page; Markdown readers differ in whether it ends a line.";
        "Save the page with LF or CR LF as line ending throughout."
    UnclosedFence "unclosed-fence":
        "A fenced block is opened and never closed, so that the rest of the page or list item belongs to it.";
        "Close the fence with a line of as many backticks or tildes as opened it, with the same list or quotation prefix."
    FenceName "fence-name":
        "The first word after the fence is almost `equilibrium`, so the block is not read.";
        "Write the word exactly, in lower case; if the fence is meant for something else, leave it."
    TooManyBlocks "too-many-blocks":
        "The page holds more equilibrium blocks than the program reads.";
        "Divide the page."
    // results in the page
    ResultComment "result-comment":
        "A comment begins like one of a result but is not of the form that results have.";
        "Restore the comment as it was written, from a copy or from version control; do not write such comments by hand."
    ResultMisplaced "result-misplaced":
        "A result's comment stands in a list, a quotation, another comment or not at the start of its line.";
        "Move the whole result to the start of the line, after the list or quotation that holds the block."
    ResultUnpaired "result-unpaired":
        "One of the two comments between which a result stands is missing.";
        "Restore the missing comment from a copy or from version control; what lies between must stay as it was."
    ResultNested "result-nested":
        "A result stands inside another result.";
        "Move the inner result out to where it was; a result ends before the next begins."
    ResultDuplicate "result-duplicate":
        "Two results of the page have the same label and neither is marked as superseded.";
        "Remove the copy; for a change of a sealed result use `amend`."
    ResultForm "result-form":
        "A result's record or acts do not stand as they are written: answer, empty line, record, acts, nothing else.";
        "Restore the result from a copy or from version control; notes belong outside the two comments."
    // YAML
    YamlSyntax "yaml-syntax":
        "The block is not YAML that can be read.";
        "Write each key, a colon, a space and the value; indent with spaces; put a value with `: `, ` #` or a leading special character in quotation marks."
    YamlTab "yaml-tab":
        "A tab is used for indentation; YAML allows spaces only.";
        "Replace the tab by spaces."
    YamlTag "yaml-tag":
        "A value carries a YAML tag (`!`); blocks have no tags.";
        "Remove the tag; if the value itself begins with `!`, put it in quotation marks."
    YamlAnchor "yaml-anchor":
        "A value carries a YAML anchor (`&`); blocks have no anchors.";
        "Remove the anchor and write the value where it is used; if the value itself begins with `&`, put it in quotation marks."
    YamlAlias "yaml-alias":
        "A value is a YAML alias (`*`); blocks have no aliases, so that each shows its own values.";
        "Write the value itself; if it begins with `*`, put it in quotation marks."
    YamlMerge "yaml-merge":
        "A YAML merge key (`<<`) is used; blocks have none.";
        "Write the keys themselves."
    SecondDocument "second-document":
        "A second YAML document begins; a block holds one mapping.";
        "Remove the line with `---` or `...`, or put what follows into a block of its own."
    DuplicateKey "duplicate-key":
        "A key stands twice in the same mapping.";
        "Remove one of the two."
    NestingTooDeep "nesting-too-deep":
        "Lists and mappings lie deeper in each other than any block needs.";
        "Check the indentation and the brackets."
    TooManyKeys "too-many-keys":
        "The text holds more keys and values than the program reads.";
        "Divide the block; keep readings in a file and name it with `readings`."
    // keys and kinds
    NotAMapping "not-a-mapping":
        "A block is one mapping of keys to values; this is something else.";
        "Write lines of the form `key: value`, with a space after the colon."
    UnknownKey "unknown-key":
        "The key has no meaning here.";
        "Correct the spelling; check that the key is indented under the right parent; free text goes under `notes`."
    MissingKey "missing-key":
        "A key that is needed is absent.";
        "Add the key with its value."
    MissingValue "missing-value":
        "A key has no value.";
        "Write the value after the colon, or remove the key."
    WrongKind "wrong-kind":
        "A value is of another kind than is needed here: text, list or mapping.";
        "Write the value in the form that the message names."
    EmptyList "empty-list":
        "A list that must hold something is empty.";
        "Add an item or remove the key."
    ConflictingKeys "conflicting-keys":
        "Two keys are given that exclude each other.";
        "Keep the one that was measured or is meant and remove the other."
    UnknownChoice "unknown-choice":
        "The value is not one of those that the key can have.";
        "Use one of the values that the message lists."
    // numbers and units
    BadNumber "bad-number":
        "What stands here is not a number.";
        "Write digits with a decimal point, and a power of ten as `1.8e-5` or `1.8 × 10^-5`."
    DecimalComma "decimal-comma":
        "A number is written with a comma, which could be a decimal sign or a separator of thousands.";
        "Write a decimal point; write large numbers without separators."
    MissingUnit "missing-unit":
        "A number stands without its unit; a unit is never guessed.";
        "Add the unit after the number, with a space between."
    UnknownUnit "unknown-unit":
        "The unit is not known.";
        "Use a unit that the message names; units are case-sensitive (`mM`, `mm` and `MM` differ)."
    WrongUnit "wrong-unit":
        "The unit is known but measures something else than is asked here.";
        "Use a unit of the quantity that the message names."
    RefusedUnit "refused-unit":
        "The unit has no single meaning: normality and equivalents depend on the reaction that is meant.";
        "Give the amount-of-substance concentration in mol/L, which states the substance."
    UnexpectedUnit "unexpected-unit":
        "A unit stands where a plain number is needed.";
        "Remove the unit; pH, pK, factors and numbers of draws have none."
    BadUncertainty "bad-uncertainty":
        "The uncertainty after `±` cannot be read or does not say what it is.";
        "Write `value ± uncertainty unit` followed by `(k=2)`, `(tolerance)` or another form that the message names."
    OutOfRange "out-of-range":
        "The number lies outside what is possible or what the program's models cover.";
        "Check the number and its unit."
    BadTemperature "bad-temperature":
        "The temperature cannot be read or lies outside the range in which constants are known.";
        "Write degrees Celsius or kelvins, as in `25 °C` or `298.15 K`."
    // the block's own keys
    BadLabel "bad-label":
        "A label has lower-case letters a to z, digits and hyphens, begins with a letter or digit, and is not too long.";
        "Change the label; it names the block in records for good."
    MissingLabel "missing-label":
        "The block has no label, so its result could not be told from another.";
        "Add `label:` with a name that is unique in the page."
    DuplicateLabel "duplicate-label":
        "Two blocks of the page have the same label.";
        "Give each its own label."
    UnknownTask "unknown-task":
        "The task is not one that the program does.";
        "Use `speciation`, `preparation`, `adjustment`, `mixing` or `titration`."
    UnknownModel "unknown-model":
        "The activity model is not known.";
        "Use one of the models that the message lists."
    BadAir "bad-air":
        "What `air` says cannot be read.";
        "Write `closed`, or the carbon dioxide of the air as in `CO2 420 ppm` or `CO2 0.05 atm`."
    Solvent "solvent":
        "In another solvent than water pK and pH mean something else, so no answer is given.";
        "Compute the aqueous part before the other solvent is mixed in, and say so in the notes."
    BadReport "bad-report":
        "What `report` asks for is not a quantity of the answer or not a number of figures.";
        "Name a quantity of the answer and its decimals or significant figures."
    BadMeasured "bad-measured":
        "The measured reading or its calibration cannot be read.";
        "Write the reading as `7.18 ± 0.02 (k=2)` and list the calibration's standards with their pH."
    BadHandValue "bad-hand-value":
        "The recorded hand value is not complete or its shortcut is not one that the program works out.";
        "Give the value, `by:` with the shortcut that was used, and `limit:`."
    // substances, constants, contents
    UnknownSubstance "unknown-substance":
        "No substance of this name, formula or CAS number is in the library or the laboratory's constants.";
        "Correct the name, or give the substance under `constants` with charge, pKa and source."
    AmbiguousSubstance "ambiguous-substance":
        "The name fits more than one substance or form.";
        "Name the form that was weighed or the CAS number from the bottle."
    BadFormula "bad-formula":
        "The formula cannot be read, or it holds an element that is not known.";
        "Write it as on the bottle, as in `NaH2PO4·2H2O`, with a charge as in `SO4^2-`."
    UnbalancedIon "unbalanced-ion":
        "Ions were given alone and leave a charge; a solution has none, and the program adds no silent partner.";
        "Name the salt that was weighed, or give the partner ion too."
    MissingSource "missing-source":
        "A constant is given without its source.";
        "Add `source:` with the publication, report or certificate from which the value was taken."
    BadConstants "bad-constants":
        "Constants are given in a form that cannot be used.";
        "Give substance, charge of the fully protonated form, pKa in ascending order, and source."
    DuplicateSubstance "duplicate-substance":
        "A substance is given twice where once is meant.";
        "Add the amounts, or remove one of the two."
    EmptyContents "empty-contents":
        "A solution has no contents.";
        "Name what it contains; pure water is written `contents: water`."
    AmountNeeded "amount-needed":
        "An item does not say how much of the substance there is, or not enough to work it out.";
        "Give a concentration, a mass or an amount of substance, or the volume and concentration of a stock."
    TooManyAmounts "too-many-amounts":
        "An item says more than once how much there is, and the program does not choose.";
        "Keep the measured amount and remove the others."
    VolumeNeeded "volume-needed":
        "Masses or volumes are given without the volume to which the solution was made up.";
        "Add `volume:` with the final volume."
    DensityNeeded "density-needed":
        "A mass fraction turns into a concentration only with the density of the solution.";
        "Add the density from the certificate, as in `85 % w/w, 1.685 g/mL`."
    NotASolid "not-a-solid":
        "The substance is not sold or weighed in the form that is asked.";
        "Name the stock solution with its concentration or mass fraction and density."
    // solutions of other blocks, files
    UnknownSolution "unknown-solution":
        "No block has the label that the solution is taken from.";
        "Correct the label; for a block of another page write `folder/page.md#label`."
    CircularSolution "circular-solution":
        "A solution is made from itself, by way of other blocks.";
        "Give one of them by its contents."
    SolutionNotUsable "solution-not-usable":
        "The block that the solution is taken from has errors or no composition of its own.";
        "Correct that block first."
    BadPath "bad-path":
        "The path leaves the notebook, is absolute, passes a symbolic link or is not written with `/`.";
        "Keep the file in the notebook and write its path from the page's folder or the notebook's, with `/`."
    MissingAttachment "missing-attachment":
        "The file that is named is not there or cannot be read.";
        "Correct the path, or put the file in its place."
    BadAttachment "bad-attachment":
        "The attached file cannot be read as the table that is needed.";
        "Give a header line with the columns that the message names, and a number in each cell."
    AttachmentTooLarge "attachment-too-large":
        "The attached file is larger than the program reads.";
        "Export the readings alone, or fewer of them."
    MissingConstantsFile "missing-constants-file":
        "The file of constants that is named is not there or cannot be read.";
        "Correct the name, or put the file in its place."
    // tasks
    BadTarget "bad-target":
        "The target is not complete or asks for contrary things.";
        "Give the target's pH, volume and concentration once each."
    UnreachableTarget "unreachable-target":
        "What is named cannot give the target.";
        "Choose a target in the range that the message names, or other substances to make it from."
    BadPair "bad-pair":
        "The substances under `from` are not two forms of one buffer, nor an acid or base with a titrant.";
        "Name two neighbouring forms of one acid, or one form and a strong acid or base."
    BadTitration "bad-titration":
        "Sample, titrant or range of the titration cannot be used.";
        "Give the sample's volume and contents, the titrant's contents, and the volume up to which it is added."
    BadFit "bad-fit":
        "What is to be fitted is not a quantity of this titration, or the readings are too few for it.";
        "Name a substance of the sample or titrant, or one of its pKa; give more readings than unknowns."
    Unsolvable "unsolvable":
        "No certified answer was found for the question as it stands.";
        "Check amounts and constants; the message says which balance could not be met."
    ModelRange "model-range":
        "The ionic strength or temperature lies outside the range for which the activity model is made.";
        "Use a model made for it, or dilute; the answer says what the choice costs."
    // cautions
    Hazard "hazard":
        "What is asked can hurt: strong acids and bases, gases that acids set free, substances that must not meet.";
        "Follow the safety data sheet, local rules and qualified staff; the program's cautions do not replace them."
    HiddenCharacter "hidden-character":
        "Invisible or direction-changing characters make the text look different from what is signed.";
        "Remove the characters; type the line again if they cannot be found."
    // settings
    BadSetting "bad-setting":
        "A setting of the notebook cannot be used.";
        "Correct the setting in `ionfolio.yaml`."
    BadTimeZone "bad-time-zone":
        "The time zone cannot be read.";
        "Write an offset from UTC, as in `+01:00`."
    BadTemplate "bad-template":
        "A template of the laboratory cannot be read or names something that results do not have.";
        "Correct the template; the message names its line."
}

impl Rule {
    /// The rule of that name.
    pub fn find(name: &str) -> Option<Self> {
        Self::ALL.iter().copied().find(|rule| rule.name() == name)
    }
}

impl std::fmt::Display for Rule {
    fn fmt(&self, formatter: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        formatter.write_str(self.name())
    }
}

impl serde::Serialize for Rule {
    fn serialize<S: serde::Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        serializer.serialize_str(self.name())
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_name_is_its_own_and_finds_its_rule() {
        for rule in Rule::ALL {
            assert_eq!(Rule::find(rule.name()), Some(*rule), "{rule}");
            let plain = rule
                .name()
                .chars()
                .all(|c| c.is_ascii_lowercase() || c.is_ascii_digit() || c == '-');
            assert!(plain, "{rule}");
        }
        assert_eq!(Rule::find("no-such-rule"), None);
    }

    #[test]
    fn a_name_is_the_variant_in_kebab_case() {
        for rule in Rule::ALL {
            let variant = format!("{rule:?}").to_lowercase();
            assert_eq!(rule.name().replace('-', ""), variant);
        }
    }

    #[test]
    fn every_sentence_and_remedy_ends_with_a_full_stop() {
        for rule in Rule::ALL {
            assert!(
                rule.sentence().ends_with('.') && rule.remedy().ends_with('.'),
                "{rule}"
            );
        }
    }
}
