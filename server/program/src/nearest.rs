//! The known word nearest to a misspelt one.

/// The candidate at the least edit distance from `word`, if that is small
/// against its length: at most one change in three letters, and at least one.
/// Of equal ones the first.
pub(crate) fn nearest<'a>(word: &str, known: impl Iterator<Item = &'a str>) -> Option<&'a str> {
    let allowed = (word.chars().count() / 3).max(1);
    let mut best: Option<(usize, &str)> = None;
    for candidate in known {
        let distance = distance(word, candidate);
        if distance <= allowed && best.is_none_or(|(least, _)| distance < least) {
            best = Some((distance, candidate));
        }
    }
    best.map(|(_, candidate)| candidate)
}

/// Number of letters to insert, drop, change or swap with their neighbour.
fn distance(a: &str, b: &str) -> usize {
    let (a, b): (Vec<char>, Vec<char>) = (a.chars().collect(), b.chars().collect());
    if a.len().abs_diff(b.len()) > 3 {
        return usize::MAX; // too far to matter, and long names stay cheap
    }
    let mut rows = vec![vec![0; b.len() + 1]; a.len() + 1];
    rows[0] = (0..=b.len()).collect();
    for (i, row) in rows.iter_mut().enumerate() {
        row[0] = i;
    }
    for i in 1..=a.len() {
        for j in 1..=b.len() {
            let change = usize::from(a[i - 1] != b[j - 1]);
            let mut least = rows[i - 1][j - 1] + change;
            least = least.min(rows[i - 1][j] + 1).min(rows[i][j - 1] + 1);
            if i > 1 && j > 1 && a[i - 1] == b[j - 2] && a[i - 2] == b[j - 1] {
                least = least.min(rows[i - 2][j - 2] + 1);
            }
            rows[i][j] = least;
        }
    }
    rows[a.len()][b.len()]
}

#[cfg(test)]
mod tests {
    use super::nearest;

    #[test]
    fn near_words_are_found_and_far_ones_are_not() {
        let known = ["dense", "encodes", "equals", "clean"];
        for (word, expected) in [
            ("dens", Some("dense")),
            ("encoeds", Some("encodes")),
            ("equal", Some("equals")),
            ("claen", Some("clean")),
            ("matrix", None),
            ("x", None),
        ] {
            assert_eq!(nearest(word, known.into_iter()), expected, "{word}");
        }
    }
}
