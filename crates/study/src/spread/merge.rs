//! Tallies of slices joined to that of the whole.

use super::tally::Tally;

/// Why slices do not make a whole.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
#[non_exhaustive]
pub enum MergeError {
    /// Nothing to merge.
    #[error("there is no slice to merge")]
    Nothing,
    /// Slices of different studies.
    #[error("slice {slice} is of another study: its {what} differs from that of slice {first}")]
    Another {
        /// The slice.
        slice: u64,
        /// The one it is held against.
        first: u64,
        /// What differs.
        what: &'static str,
    },
    /// A slice that is given more than once.
    #[error("slice {slice} of {of} is given twice")]
    Twice {
        /// The slice.
        slice: u64,
        /// How many there are.
        of: u64,
    },
    /// A slice that is not given.
    #[error("slice {slice} of {of} is missing")]
    Missing {
        /// The slice.
        slice: u64,
        /// How many there are.
        of: u64,
    },
}

/// Joins the slices of one study, in any order.
///
/// # Errors
///
/// [`MergeError`] where they are not each slice of one study once.
pub fn merge(mut slices: Vec<Tally>) -> Result<Tally, MergeError> {
    slices.sort_by_key(|t| t.slice);
    let mut all = slices.iter();
    let Some(first) = all.next() else {
        return Err(MergeError::Nothing);
    };
    let [at, of] = first.slice;
    for other in all.clone() {
        if let Some(what) = differing(first, other) {
            return Err(MergeError::Another {
                slice: other.slice[0],
                first: at,
                what,
            });
        }
    }
    let given: Vec<u64> = slices.iter().map(|t| t.slice[0]).collect();
    if let Some(pair) = given.windows(2).find(|w| w.first() == w.last()) {
        let slice = pair.first().copied().unwrap_or(0);
        return Err(MergeError::Twice { slice, of });
    }
    let whole = given.iter().copied().chain([of.saturating_add(1)]);
    if let Some((slice, _)) = (1..=of).zip(whole).find(|(k, given)| k != given) {
        return Err(MergeError::Missing { slice, of });
    }
    let mut tally = first.clone();
    all.for_each(|other| tally.join(other));
    tally.slice = [1, 1];
    Ok(tally)
}

fn differing(a: &Tally, b: &Tally) -> Option<&'static str> {
    let shape = |t: &Tally| -> Vec<_> {
        let case = |c: &super::CaseTally| {
            let claims: Vec<_> = c
                .claims
                .iter()
                .map(|c| {
                    (
                        c.name.clone(),
                        c.relation.clone(),
                        c.asked.map(f64::to_bits),
                    )
                })
                .collect();
            let readings: Vec<_> = c
                .readings
                .iter()
                .map(|r| (r.name.clone(), r.text.clone(), r.nominal.map(f64::to_bits)))
                .collect();
            (claims, readings)
        };
        t.cases.iter().map(case).collect()
    };
    let sets = |t: &Tally| t.cases.iter().map(|c| c.set.clone()).collect::<Vec<_>>();
    let checks = [
        (a.shots == b.shots, "number of shots"),
        (a.seed == b.seed, "seed"),
        (a.slice[1] == b.slice[1], "number of slices"),
        (a.method == b.method && a.span == b.span, "run"),
        (a.varying == b.varying, "list of values that vary"),
        (sets(a) == sets(b), "list of cases"),
        (shape(a) == shape(b), "list of claims and readings"),
    ];
    checks
        .into_iter()
        .find(|(same, _)| !same)
        .map(|(_, what)| what)
}
