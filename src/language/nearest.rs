//! The nearest known word to a misspelt one.

/// Names longer than this are not compared, nor more than so many of them for one misspelling, nor more than so many in
/// one file: help must not cost more than reading.
const MOST_LENGTH: usize = 64;
const MOST_CANDIDATES: usize = 2_000;
const MOST_COMPARISONS: usize = 200_000;

/// Finds nearest words, and stops when a file asks for too many.
#[derive(Debug, Default)]
pub(super) struct Nearest {
    compared: usize,
}

impl Nearest {
    /// The candidate nearest to `word`, the first of equals; `None` where none is near enough to have been meant.
    pub(super) fn find<'c>(
        &mut self,
        word: &str,
        candidates: impl Iterator<Item = &'c str>,
    ) -> Option<&'c str> {
        let length = word.chars().count();
        if length > MOST_LENGTH {
            return None;
        }
        // One slip in a short word, two in a longer one, three in a long one.
        let most = match length {
            0..=2 => 1,
            3..=5 => 2,
            _ => 3,
        };
        let mut best: Option<(usize, &str)> = None;
        for candidate in candidates.take(MOST_CANDIDATES) {
            if self.compared >= MOST_COMPARISONS {
                break;
            }
            if candidate.len() > 4 * MOST_LENGTH || candidate == word {
                continue;
            }
            self.compared += 1;
            let far = strsim::osa_distance(word, candidate);
            // A word of which nothing is left was not meant.
            if far <= most && far < length.max(2) && best.is_none_or(|(least, _)| far < least) {
                best = Some((far, candidate));
            }
        }
        best.map(|(_, candidate)| candidate)
    }
}
