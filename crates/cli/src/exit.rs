//! How a run ended, and the exit code of it.

use pulsewright::study::Verdict;

/// How a run ended, from good to bad; of several the greatest counts.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Ending {
    /// Done, and every claim that was to be judged holds.
    Done,
    /// Some claim is undecided and none fails.
    Undecided,
    /// Some claim fails.
    Fails,
    /// The input is at fault.
    Input,
    /// The run broke.
    Broke,
    /// A signal ended it: its number.
    Signal(u8),
}

impl Ending {
    /// The exit code.
    pub const fn code(self) -> u8 {
        match self {
            Ending::Done => 0,
            Ending::Fails => 1,
            Ending::Input => 2,
            Ending::Broke => 3,
            Ending::Undecided => 4,
            Ending::Signal(number) => 128_u8.saturating_add(number),
        }
    }

    /// What verdicts end a run with.
    pub fn of(verdicts: impl IntoIterator<Item = Verdict>) -> Self {
        let ending = |verdict| match verdict {
            Verdict::Holds | Verdict::DoesNotApply => Ending::Done,
            Verdict::Undecided => Ending::Undecided,
            Verdict::Fails => Ending::Fails,
        };
        verdicts
            .into_iter()
            .map(ending)
            .max()
            .unwrap_or(Ending::Done)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn where_several_apply_it_is_3_then_2_then_1_then_4() {
        let all = [
            Ending::Undecided,
            Ending::Broke,
            Ending::Fails,
            Ending::Done,
            Ending::Input,
        ];
        let mut sorted = all;
        sorted.sort();
        assert_eq!(sorted.map(Ending::code), [0, 4, 1, 2, 3]);
    }

    #[test]
    fn a_failing_claim_outweighs_an_undecided_one() {
        assert_eq!(
            Ending::of([Verdict::Undecided, Verdict::Fails, Verdict::Holds]),
            Ending::Fails
        );
        assert_eq!(
            Ending::of([Verdict::DoesNotApply, Verdict::Undecided]),
            Ending::Undecided
        );
        assert_eq!(Ending::of([]), Ending::Done);
    }

    #[test]
    fn a_signal_ends_with_128_and_its_number() {
        assert_eq!(
            [Ending::Signal(2).code(), Ending::Signal(15).code()],
            [130, 143]
        );
    }
}
