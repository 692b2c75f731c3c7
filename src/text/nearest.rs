//! The names nearest to a misspelt one.

/// Wrong letters allowed: one in three, so that `pH` suggests nothing far-fetched and a long name may be off by more.
const LETTERS_PER_ERROR: usize = 3;
/// More than three suggestions are a list to read, not a hint.
const MOST: usize = 3;

/// The candidates that `word` probably meant, the nearest first, at most three.
///
/// Upper and lower case are the same, and so are space, hyphen and underscore. A candidate is near if at most one
/// letter in three (at least one) is inserted, left out, changed or swapped with its neighbour, or if `word` is the
/// beginning of it and has three letters or more. Among equally near ones the given order stays.
pub fn nearest<'c>(word: &str, candidates: impl IntoIterator<Item = &'c str>) -> Vec<&'c str> {
    let word = folded(word);
    let letters = word.chars().count();
    if letters == 0 {
        return Vec::new();
    }
    let allowed = (letters / LETTERS_PER_ERROR).max(1);
    let mut near: Vec<(usize, &str)> = Vec::new();
    for candidate in candidates {
        let other = folded(candidate);
        let begins = letters >= LETTERS_PER_ERROR && other.starts_with(&word);
        if !begins && other.chars().count().abs_diff(letters) > allowed {
            continue;
        }
        let distance = strsim::osa_distance(&word, &other);
        // A single letter is changed into any other by one error: that is no likeness.
        let alike = distance <= allowed && distance < letters;
        let rank = if begins {
            distance.min(allowed)
        } else {
            distance
        };
        if (alike || begins) && !near.iter().any(|(_, seen)| *seen == candidate) {
            near.push((rank, candidate));
        }
    }
    near.sort_by_key(|(rank, _)| *rank);
    near.into_iter()
        .take(MOST)
        .map(|(_, candidate)| candidate)
        .collect()
}

/// What was probably meant, as half a sentence.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Suggestion(String);

impl Suggestion {
    /// "did you mean `a`?" or "did you mean `a`, `b` or `c`?" for the candidates nearest to `word`, if any is near.
    pub fn of<'c>(word: &str, candidates: impl IntoIterator<Item = &'c str>) -> Option<Self> {
        let near = nearest(word, candidates);
        let (last, others) = near.split_last()?;
        let sentence = if others.is_empty() {
            format!("did you mean `{last}`?")
        } else {
            format!("did you mean `{}` or `{last}`?", others.join("`, `"))
        };
        Some(Self(sentence))
    }
}

impl From<Suggestion> for String {
    fn from(suggestion: Suggestion) -> Self {
        suggestion.0
    }
}

fn folded(name: &str) -> String {
    name.trim()
        .chars()
        .flat_map(char::to_lowercase)
        .map(|c| if matches!(c, '-' | '_') { ' ' } else { c })
        .collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    const KEYS: [&str; 7] = [
        "label",
        "task",
        "temperature",
        "activity",
        "air",
        "hand value",
        "volume",
    ];

    #[test]
    fn a_misspelt_key_finds_its_name() {
        assert_eq!(nearest("temprature", KEYS), ["temperature"]);
        assert_eq!(nearest("Hand_Value", KEYS), ["hand value"]);
        assert_eq!(nearest("tsak", KEYS), ["task"]);
    }

    #[test]
    fn the_beginning_of_a_name_is_enough() {
        assert_eq!(nearest("temp", KEYS), ["temperature"]);
    }

    #[test]
    fn nothing_is_suggested_for_what_is_far_from_everything() {
        assert!(nearest("pipette", KEYS).is_empty());
        assert!(nearest("", KEYS).is_empty());
        assert!(nearest("x", ["y", "z"]).is_empty());
    }

    #[test]
    fn at_most_three_names_and_the_nearest_first() {
        let names = ["acid ab", "acid a", "acid b", "acid c", "acid d"];
        assert_eq!(nearest("acid b", names), ["acid b", "acid ab", "acid a"]);
    }

    #[test]
    fn a_suggestion_is_a_question() {
        let said = |word| Suggestion::of(word, ["mmol/L", "mol/L", "µmol/L"]).map(String::from);
        assert_eq!(
            said("mml/L").as_deref(),
            Some("did you mean `mmol/L` or `mol/L`?")
        );
        assert_eq!(said("bar"), None);
    }
}
