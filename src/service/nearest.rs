//! The known words nearest to a word that is not known.

/// How many are named.
const MOST: usize = 5;

/// The known words nearest to `word`, nearest first: by Jaro–Winkler similarity, words that contain one another first.
#[must_use]
pub fn nearest<'a>(word: &str, known: impl Iterator<Item = &'a str>) -> Vec<&'a str> {
    // Only so much of a long word is looked at: similarity costs its length squared.
    let word: String = word.chars().take(64).collect::<String>().to_lowercase().replace(['_', ' '], "-");
    let mut ranked: Vec<(f64, &str)> = known
        .map(|candidate| {
            let contained = word.len() > 2 && (candidate.contains(&word) || word.contains(candidate));
            let similarity = strsim::jaro_winkler(&word, candidate);
            (if contained { 1.0 + similarity } else { similarity }, candidate)
        })
        .collect();
    ranked.sort_by(|a, b| b.0.total_cmp(&a.0).then(a.1.cmp(b.1)));
    ranked.into_iter().take(MOST).map(|(_, candidate)| candidate).collect()
}

/// A caller's word in quotation marks for a message, made harmless and short.
#[must_use]
pub fn quoted(word: &str) -> String {
    let mut shown: String = word.chars().take(40).flat_map(char::escape_debug).collect();
    if word.chars().nth(40).is_some() {
        shown.push('…');
    }
    format!("\"{shown}\"")
}

#[cfg(test)]
mod tests {
    use super::{nearest, quoted};

    #[test]
    fn a_slip_of_the_finger_and_a_part_of_the_word() {
        let known =
            ["water", "sea-water", "sucrose-solution", "olive-oil", "sunflower-oil", "rapeseed-oil", "milk"];
        assert_eq!(nearest("watr", known.into_iter())[0], "water");
        assert_eq!(nearest("sucrose", known.into_iter())[0], "sucrose-solution");
        assert_eq!(nearest("Olive_Oil", known.into_iter())[0], "olive-oil");
        assert_eq!(quoted("a\"b\n"), "\"a\\\"b\\n\"");
        assert!(quoted(&"x".repeat(1_000_000)).len() < 60);
        assert_eq!(nearest(&"x".repeat(1_000_000), known.into_iter()).len(), 5);
    }
}
