//! The known word that a misspelt one most likely stands for.

/// The nearest of `known`, when it is near enough to be meant: a third of the word's
/// letters may differ (at least one), counted by insertions, deletions, exchanges of one
/// letter and swaps of two neighbours; capitals count nothing. The first of equals wins.
pub fn nearest<'a>(word: &str, known: impl IntoIterator<Item = &'a str>) -> Option<&'a str> {
    let letters: Vec<char> = word.to_lowercase().chars().take(64).collect();
    known
        .into_iter()
        .filter_map(|candidate| {
            let other: Vec<char> = candidate.to_lowercase().chars().collect();
            let allowed = (letters.len().max(other.len()) / 3).max(1);
            let apart = letters.len().abs_diff(other.len());
            let all_new = letters.len().min(other.len()) <= 1 && letters != other;
            if apart > allowed || all_new {
                return None;
            }
            let distance = distance(&letters, &other);
            (distance <= allowed).then_some((distance, candidate))
        })
        .min_by_key(|(distance, _)| *distance)
        .map(|(_, candidate)| candidate)
}

/// Optimal string alignment distance (Damerau 1964, restricted to disjoint swaps).
fn distance(a: &[char], b: &[char]) -> usize {
    let width = b.len() + 1;
    let mut table = vec![0; (a.len() + 1) * width];
    for i in 0..=a.len() {
        for j in 0..=b.len() {
            table[i * width + j] = if i == 0 || j == 0 {
                i + j
            } else {
                let exchange = table[(i - 1) * width + j - 1] + usize::from(a[i - 1] != b[j - 1]);
                let mut best =
                    exchange.min(table[(i - 1) * width + j] + 1).min(table[i * width + j - 1] + 1);
                if i > 1 && j > 1 && a[i - 1] == b[j - 2] && a[i - 2] == b[j - 1] {
                    best = best.min(table[(i - 2) * width + j - 2] + 1);
                }
                best
            };
        }
    }
    table[a.len() * width + b.len()]
}

#[cfg(test)]
mod tests {
    use super::nearest;

    #[test]
    fn finds_the_word_that_was_meant() {
        let known = ["deposit", "seal", "etch", "polish"];
        assert_eq!(nearest("depsoit", known), Some("deposit"));
        assert_eq!(nearest("Etch", known), Some("etch"));
        assert_eq!(nearest("etsch", known), Some("etch"));
        assert_eq!(nearest("implant", known), None);
        assert_eq!(nearest("", known), None);
    }

    #[test]
    fn one_letter_is_no_misspelling_of_another() {
        assert_eq!(nearest("x", ["A", "C"]), None);
    }
}
