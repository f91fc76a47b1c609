//! Signals, edges, windows and readings as phrases.
//!
//! A slot within a phrase takes a name, a value, a function or a phrase as it is; every other
//! expression stands in brackets there.

use std::fmt::{self, Display, Formatter};

use crate::expr::{Expr, ExprKind};
use crate::phrase::{
    Condition, Direction, Edge, EdgeKind, Extreme, Level, Measure, Ordinal, Phrase, Signal,
    StateWord, Which, Window,
};

/// An expression in a slot of a phrase.
pub(super) struct Slot<'a>(pub &'a Expr);

impl Display for Slot<'_> {
    fn fmt(&self, f: &mut Formatter<'_>) -> fmt::Result {
        if stands_alone(self.0) {
            write!(f, "{}", self.0)
        } else {
            write!(f, "({})", self.0)
        }
    }
}

fn stands_alone(e: &Expr) -> bool {
    match &e.kind {
        ExprKind::Number { .. }
        | ExprKind::Name(_)
        | ExprKind::Pi
        | ExprKind::Time
        | ExprKind::Call { .. }
        | ExprKind::Points { .. }
        | ExprKind::Signal(_)
        | ExprKind::Edge(_)
        | ExprKind::OpenCircuit
        | ExprKind::ShortCircuit => true,
        ExprKind::Reading(p) => !matches!(p.window, Some(Window::Between(..) | Window::While(_))),
        ExprKind::Negative(a) => matches!(&a.kind, ExprKind::Number { value, .. } if *value >= 0.0),
        ExprKind::Binary { .. } => false,
    }
}

impl Display for Signal {
    fn fmt(&self, f: &mut Formatter<'_>) -> fmt::Result {
        match self {
            Signal::VoltageAcross(p) => write!(f, "voltage across {p}"),
            Signal::VoltageAt(n) => write!(f, "voltage at {n}"),
            Signal::VoltageFrom(a, b) => write!(f, "voltage from {a} to {b}"),
            Signal::CurrentThrough(p) => write!(f, "current through {p}"),
            Signal::PowerInto(p) => write!(f, "power into {p}"),
            Signal::ChargeHeld(p) => write!(f, "charge held by {p}"),
            Signal::FluxHeld(p) => write!(f, "flux held by {p}"),
            Signal::EnergyHeld(p) => write!(f, "energy held by {p}"),
        }
    }
}

/// The words of ordinals, `first` to `tenth`.
pub const ORDINALS: &[&str] = &[
    "first", "second", "third", "fourth", "fifth", "sixth", "seventh", "eighth", "ninth", "tenth",
];

impl Display for Ordinal {
    fn fmt(&self, f: &mut Formatter<'_>) -> fmt::Result {
        match self {
            Ordinal::Last => f.write_str("last"),
            Ordinal::Nth(n) => match usize::from(*n).checked_sub(1).and_then(|i| ORDINALS.get(i)) {
                Some(word) => f.write_str(word),
                None => write!(f, "{n}th"),
            },
        }
    }
}

impl Display for Edge {
    fn fmt(&self, f: &mut Formatter<'_>) -> fmt::Result {
        if let Some(ordinal) = self.ordinal {
            write!(f, "{ordinal} ")?;
        }
        let part = &self.part;
        match &self.kind {
            EdgeKind::Closing => write!(f, "closing of {part}"),
            EdgeKind::Opening => write!(f, "opening of {part}"),
            EdgeKind::Moving(node) => write!(f, "moving of {part} to {node}"),
            EdgeKind::Conducting => write!(f, "conducting of {part}"),
            EdgeKind::Blocking => write!(f, "blocking of {part}"),
        }
    }
}

impl Display for Window {
    fn fmt(&self, f: &mut Formatter<'_>) -> fmt::Result {
        match self {
            Window::Between(a, b) => write!(f, "between {} and {}", Slot(a), Slot(b)),
            Window::After(a) => write!(f, "after {}", Slot(a)),
            Window::Before(a) => write!(f, "before {}", Slot(a)),
            Window::While(all) => {
                for (i, c) in all.iter().enumerate() {
                    write!(f, "{} {c}", if i == 0 { "while" } else { " and" })?;
                }
                Ok(())
            }
            Window::Phase { number, signal } => {
                write!(f, "during phase {number} of {}", Slot(signal))
            }
        }
    }
}

impl Display for Condition {
    fn fmt(&self, f: &mut Formatter<'_>) -> fmt::Result {
        match &self.state {
            StateWord::Closed => write!(f, "{} is closed", self.part),
            StateWord::Open => write!(f, "{} is open", self.part),
            StateWord::At(node) => write!(f, "{} is at {node}", self.part),
        }
    }
}

impl Display for Phrase {
    fn fmt(&self, f: &mut Formatter<'_>) -> fmt::Result {
        write!(f, "{}", self.measure)?;
        self.window.as_ref().map_or(Ok(()), |w| write!(f, " {w}"))
    }
}

impl Display for Measure {
    fn fmt(&self, f: &mut Formatter<'_>) -> fmt::Result {
        use Measure as M;
        match self {
            M::EnergyInto(p) => write!(f, "energy into {p}"),
            M::EnergyOutOf(p) => write!(f, "energy out of {p}"),
            M::Charge(p) => write!(f, "charge through {p}"),
            M::GrossCharge(p) => write!(f, "gross charge through {p}"),
            M::Action(p) => write!(f, "action of {p}"),
            M::Heat(p) => write!(f, "heat in {p}"),
            M::Area(s) => write!(f, "area of {}", Slot(s)),
            M::Highest(s) => write!(f, "highest {}", Slot(s)),
            M::Lowest(s) => write!(f, "lowest {}", Slot(s)),
            M::Largest(s) => write!(f, "largest {}", Slot(s)),
            M::PeakToPeak(s) => write!(f, "peak to peak {}", Slot(s)),
            M::Steepest {
                signal,
                between_jumps,
            } => {
                write!(
                    f,
                    "steepest {}{}",
                    Slot(signal),
                    if *between_jumps { " between jumps" } else { "" }
                )
            }
            M::Mean(s) => write!(f, "mean {}", Slot(s)),
            M::Rms(s) => write!(f, "rms {}", Slot(s)),
            M::At { signal, time } => write!(f, "{} at {}", Slot(signal), Slot(time)),
            M::JustBefore { signal, time } => {
                write!(f, "{} just before {}", Slot(signal), Slot(time))
            }
            M::Final(s) => write!(f, "final {}", Slot(s)),
            M::TimeOf { extreme, signal } => write!(f, "time of {extreme} {}", Slot(signal)),
            M::Crossing {
                signal,
                which,
                direction,
                level,
            } => {
                write!(
                    f,
                    "time {} {which} {direction} through {level}",
                    Slot(signal)
                )
            }
            M::TimeSpent {
                signal,
                above,
                level,
            } => {
                write!(
                    f,
                    "time {} is {} {level}",
                    Slot(signal),
                    if *above { "above" } else { "below" }
                )
            }
            _ => shape(f, self),
        }
    }
}

/// The readings of a pulse's shape and of the whole circuit.
fn shape(f: &mut Formatter<'_>, measure: &Measure) -> fmt::Result {
    use Measure as M;
    match measure {
        M::Rise { signal, from, to } => write!(
            f,
            "rise of {} from {} to {}",
            Slot(signal),
            Slot(from),
            Slot(to)
        ),
        M::Fall { signal, from, to } => write!(
            f,
            "fall of {} from {} to {}",
            Slot(signal),
            Slot(from),
            Slot(to)
        ),
        M::FrontTime { signal, from, to } => {
            write!(
                f,
                "front time of {} from {} to {}",
                Slot(signal),
                Slot(from),
                Slot(to)
            )
        }
        M::VirtualOrigin { signal, from, to } => {
            write!(
                f,
                "virtual origin of {} from {} to {}",
                Slot(signal),
                Slot(from),
                Slot(to)
            )
        }
        M::TimeToHalf { signal, from, to } => {
            write!(
                f,
                "time to half value of {} with front from {} to {}",
                Slot(signal),
                Slot(from),
                Slot(to)
            )
        }
        M::Width { signal, fraction } => {
            write!(f, "width of {} at {}", Slot(signal), Slot(fraction))
        }
        M::Undershoot(s) => write!(f, "undershoot of {}", Slot(s)),
        M::Overshoot { signal, over } => {
            write!(f, "overshoot of {} over {}", Slot(signal), Slot(over))
        }
        M::Tilt(s) => write!(f, "tilt of {}", Slot(s)),
        M::Settling { signal, to } => {
            write!(f, "settling time of {} to {}", Slot(signal), Slot(to))
        }
        M::Period(s) => write!(f, "period of {}", Slot(s)),
        M::StoredAt(t) => write!(f, "energy stored at {}", Slot(t)),
        M::StoredJustBefore(t) => write!(f, "energy stored just before {}", Slot(t)),
        M::Duration => f.write_str("duration"),
        _ => Ok(()),
    }
}

impl Display for Level {
    fn fmt(&self, f: &mut Formatter<'_>) -> fmt::Result {
        match self {
            Level::Value(e) => write!(f, "{}", Slot(e)),
            Level::OfLargest(e) => write!(f, "{} of largest", Slot(e)),
        }
    }
}

impl Display for Extreme {
    fn fmt(&self, f: &mut Formatter<'_>) -> fmt::Result {
        f.write_str(match self {
            Extreme::Highest => "highest",
            Extreme::Lowest => "lowest",
            Extreme::Largest => "largest",
        })
    }
}

impl Display for Which {
    fn fmt(&self, f: &mut Formatter<'_>) -> fmt::Result {
        f.write_str(match self {
            Which::First => "first",
            Which::Last => "last",
        })
    }
}

impl Display for Direction {
    fn fmt(&self, f: &mut Formatter<'_>) -> fmt::Result {
        f.write_str(match self {
            Direction::Rises => "rises",
            Direction::Falls => "falls",
        })
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::dimension::Dimension;
    use crate::expr::Operator;
    use crate::span::Span;

    fn across(part: &str) -> Expr {
        Expr::signal(Signal::VoltageAcross(part.into()))
    }

    fn seconds(x: f64) -> Expr {
        Expr::number(x, Dimension::SECOND)
    }

    fn check(measure: Measure, window: Option<Window>, text: &str) {
        assert_eq!(
            Phrase {
                measure,
                window,
                span: Span::NONE
            }
            .to_string(),
            text
        );
    }

    #[test]
    fn a_window_follows_its_phrase() {
        let tilt = Measure::Tilt(across("chest"));
        let window = Window::Between(seconds(1e-3), seconds(7e-3));
        check(
            tilt,
            Some(window),
            "tilt of voltage across chest between 1 ms and 7 ms",
        );
    }

    #[test]
    fn an_expression_in_a_slot_stands_in_brackets() {
        let off = Expr::binary(
            Operator::Subtract,
            across("c"),
            Expr::number(10.0, Dimension::VOLT),
        );
        check(Measure::Final(off), None, "final (voltage across c - 10 V)");
    }

    #[test]
    fn an_edge_names_its_ordinal_where_one_is_written() {
        let edge = |ordinal| Edge {
            part: "fire".into(),
            kind: EdgeKind::Opening,
            ordinal,
            span: Span::NONE,
        };
        assert_eq!(edge(None).to_string(), "opening of fire");
        assert_eq!(
            edge(Some(Ordinal::Nth(2))).to_string(),
            "second opening of fire"
        );
        assert_eq!(
            edge(Some(Ordinal::Last)).to_string(),
            "last opening of fire"
        );
    }

    #[test]
    fn conditions_are_joined_by_and() {
        let closed = |part: &str| Condition {
            part: part.into(),
            state: StateWord::Closed,
        };
        check(
            Measure::Duration,
            Some(Window::While(vec![closed("ne"), closed("se")])),
            "duration while ne is closed and se is closed",
        );
    }

    #[test]
    fn a_level_may_be_a_share_of_the_largest() {
        let measure = Measure::Crossing {
            signal: across("c"),
            which: Which::Last,
            direction: Direction::Falls,
            level: Level::OfLargest(Expr::share(0.5)),
        };
        check(
            measure,
            None,
            "time voltage across c last falls through 50 % of largest",
        );
    }
}
