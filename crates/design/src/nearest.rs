//! The word that somebody meant.

/// The known word nearest to one that isn't known, if it is near enough to be meant.
///
/// Near: a third of its letters wrong, missing or swapped, or one word beginning with the other.
pub(crate) fn nearest<'a>(word: &str, known: impl Iterator<Item = &'a str>) -> Option<String> {
    // A long word is nobody's slip, and comparing it would take long.
    if word.len() > 100 {
        return None;
    }
    let lower = word.to_lowercase();
    let distance = |candidate: &str| {
        let begins = lower.len() >= 3 && candidate.len() >= 3;
        if begins && (candidate.starts_with(&lower) || lower.starts_with(candidate)) {
            return Some(1);
        }
        let distance = strsim::damerau_levenshtein(&lower, candidate);
        (distance * 3 <= candidate.chars().count().max(lower.chars().count())).then_some(distance)
    };
    let near =
        known.filter_map(|candidate| Some((distance(&candidate.to_lowercase())?, candidate)));
    near.min().map(|(_, candidate)| candidate.to_owned())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn slips_find_their_word_and_other_words_do_not() {
        let known = ["frequency_hz", "lateral_waves", "phase_deg", "table"];
        let find = |word| nearest(word, known.into_iter());
        assert_eq!(find("freqency_hz").as_deref(), Some("frequency_hz"));
        assert_eq!(find("frequency").as_deref(), Some("frequency_hz"));
        assert_eq!(find("Phase_Deg").as_deref(), Some("phase_deg"));
        assert_eq!(find("colour"), None);
        assert_eq!(find(&"x".repeat(100_000)), None);
    }
}
