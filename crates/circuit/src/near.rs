//! The name that was probably meant: the nearest by edits.
//!
//! The distance counts inserted, left out and replaced characters, and two neighbours swapped
//! (Damerau 1964, in the restricted form that never edits a place twice); a letter in the other
//! case counts a half. A name is near where at most a third of the word has to change.

/// The nearest of the candidates, where one is near enough; the first of equals.
///
/// ```
/// use pulsewright_circuit::near::nearest;
/// assert_eq!(nearest("chset", ["choke", "chest", "bank"]), Some("chest"));
/// assert_eq!(nearest("bank", ["fire"]), None);
/// ```
#[must_use]
pub fn nearest<'a>(word: &str, candidates: impl IntoIterator<Item = &'a str>) -> Option<&'a str> {
    let wanted: Vec<char> = word.chars().take(64).collect();
    let most = 2 * (wanted.len() / 3).max(1);
    let mut best: Option<(usize, &str)> = None;
    for candidate in candidates {
        let allowed = best.map_or(most, |(d, _)| d.saturating_sub(1));
        if candidate == word || candidate.len().abs_diff(word.len()) * 2 > allowed {
            continue;
        }
        let d = distance(&wanted, candidate);
        if d <= allowed {
            best = Some((d, candidate));
        }
    }
    best.map(|(_, name)| name)
}

/// Twice the number of edits from one word to the other.
fn distance(a: &[char], other: &str) -> usize {
    let b: Vec<char> = other.chars().take(64).collect();
    let mut before: Vec<usize> = Vec::new();
    let mut above: Vec<usize> = (0..=b.len()).map(|j| 2 * j).collect();
    let at = |row: &[usize], j: usize| row.get(j).copied().unwrap_or(usize::MAX / 2);
    for (i, x) in a.iter().enumerate() {
        let mut row = vec![2 * (i + 1)];
        for (j, y) in b.iter().enumerate() {
            let replaced = at(&above, j) + unlike(*x, *y);
            let edited = (at(&above, j + 1) + 2).min(at(&row, j) + 2);
            let mut least = replaced.min(edited);
            if i > 0 && j > 0 && a.get(i - 1) == Some(y) && b.get(j - 1) == Some(x) {
                least = least.min(at(&before, j - 1) + 2);
            }
            row.push(least);
        }
        before = std::mem::replace(&mut above, row);
    }
    at(&above, b.len())
}

fn unlike(x: char, y: char) -> usize {
    if x == y {
        0
    } else if x.eq_ignore_ascii_case(&y) {
        1
    } else {
        2
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_letter_left_out_is_near() {
        assert_eq!(
            nearest("capacitr", ["capacitor", "inductor"]),
            Some("capacitor")
        );
    }

    #[test]
    fn the_other_case_is_nearer_than_another_letter() {
        assert_eq!(nearest("Bank", ["tank", "bank"]), Some("bank"));
    }

    #[test]
    fn a_short_name_has_near_names_too() {
        assert_eq!(nearest("rr", ["r"]), Some("r"));
    }

    #[test]
    fn what_is_far_is_not_offered() {
        assert_eq!(nearest("chest", ["ground", "a"]), None);
    }
}
