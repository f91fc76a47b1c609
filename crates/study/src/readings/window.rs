//! Windows: the part of the span in which a reading is taken.
//!
//! A window is a row of intervals, each holding its start and not its end. A time in it that is
//! computed may lie outside the span or in the wrong order; then the reading is absent. Ends
//! within rounding of a jump are that jump.

use pulsewright_circuit::expr::ExprKind;
use pulsewright_circuit::phrase::{Condition, StateWord, Window};
use pulsewright_circuit::setup::Element;
use pulsewright_circuit::{Expr, Name};

use super::{Lack, Reader, absent, said_time};
use crate::waveform::{Interval, Run};

/// A window in one shot.
#[derive(Clone, Debug, PartialEq)]
pub struct Extent {
    /// Its intervals in order of time; none where it is empty.
    pub intervals: Vec<Interval>,
    /// Its end in words: `the span`, or `the window, at 7 ms`.
    pub end_words: String,
}

impl Extent {
    /// Its length, s.
    #[must_use]
    pub fn length(&self) -> f64 {
        self.intervals.iter().fold(0.0, |sum, i| sum + i.length())
    }

    /// Its last instant, s.
    #[must_use]
    pub fn end(&self) -> f64 {
        self.intervals.last().map_or(0.0, |i| i.end)
    }

    /// The one interval of an unbroken window.
    ///
    /// # Errors
    ///
    /// [`Lack::Absent`] where it is empty or in several stretches.
    pub fn unbroken(&self) -> Result<Interval, Lack> {
        match self.intervals.as_slice() {
            [] => absent("its window is empty in this shot"),
            [one] => Ok(*one),
            many => absent(format!(
                "its window is broken into {} stretches",
                many.len()
            )),
        }
    }

    /// The window itself where it is not empty.
    ///
    /// # Errors
    ///
    /// [`Lack::Absent`] where it is.
    pub fn filled(self) -> Result<Extent, Lack> {
        if self.intervals.is_empty() {
            absent("its window is empty in this shot")
        } else {
            Ok(self)
        }
    }
}

impl Reader<'_> {
    /// The window of a reading; `None` is the whole span.
    pub(crate) fn extent(&self, window: Option<&Window>) -> Result<Extent, Lack> {
        let end = self.record.end();
        match window {
            None => Ok(self.over(0.0, end)),
            Some(Window::Between(from, to)) => {
                let start = self.time(from)?;
                let end = self.end_time(to, start)?;
                self.ordered(start, end)
            }
            Some(Window::After(from)) => {
                let start = self.time(from)?;
                if start < end {
                    Ok(self.over(start, end))
                } else {
                    Ok(self.made(Vec::new()))
                }
            }
            Some(Window::Before(to)) => {
                let end = self.end_time(to, 0.0)?;
                self.ordered(0.0, end)
            }
            Some(Window::While(conditions)) => self.while_all(conditions),
            Some(Window::Phase { number, signal }) => self.phase(*number, signal),
            Some(_) => absent("its window is not measured by this version"),
        }
    }

    /// The window, which must not be empty.
    pub(super) fn filled(&self, window: Option<&Window>) -> Result<Extent, Lack> {
        self.extent(window)?.filled()
    }

    fn ordered(&self, start: f64, end: f64) -> Result<Extent, Lack> {
        if end > start {
            return Ok(self.over(start, end));
        }
        absent(format!(
            "its window would end at {}, not after its start at {}",
            said_time(end),
            said_time(start)
        ))
    }

    fn over(&self, start: f64, end: f64) -> Extent {
        self.made(vec![Interval { start, end }])
    }

    fn made(&self, intervals: Vec<Interval>) -> Extent {
        let end = intervals.last().map_or(0.0, |i| i.end);
        let end_words = if end >= self.record.end() {
            "the span".to_owned()
        } else {
            format!("the window, at {}", said_time(end))
        };
        Extent {
            intervals,
            end_words,
        }
    }

    /// A time in the span, s.
    pub(super) fn time(&self, expr: &Expr) -> Result<f64, Lack> {
        self.inside(self.value(expr)?.value)
    }

    /// A time as a window's end; a bare edge is the next one after the window's start.
    fn end_time(&self, expr: &Expr, start: f64) -> Result<f64, Lack> {
        match &expr.kind {
            ExprKind::Edge(edge) => self.inside(self.edge_after(edge, start)?.value),
            _ => self.time(expr),
        }
    }

    fn inside(&self, t: f64) -> Result<f64, Lack> {
        let (t, end) = (self.record.snap(t), self.record.end());
        if t < 0.0 {
            return absent(format!("{} lies before 0 s", said_time(t)));
        }
        if t > end {
            return absent(format!(
                "{} lies past the span of {}",
                said_time(t),
                said_time(end)
            ));
        }
        Ok(t)
    }

    /// All stretches in which every condition holds, joined where they meet.
    fn while_all(&self, conditions: &[Condition]) -> Result<Extent, Lack> {
        let wanted: Vec<(usize, u8)> = conditions
            .iter()
            .map(|c| self.wanted(c))
            .collect::<Result<_, _>>()?;
        let mut intervals: Vec<Interval> = Vec::new();
        for stretch in &self.shot().stretches {
            let holds = wanted
                .iter()
                .all(|(part, state)| stretch.states.get(*part) == Some(state));
            let (Some(start), Some(end)) = (stretch.times.first(), stretch.times.last()) else {
                continue;
            };
            match intervals.last_mut() {
                _ if !holds => {}
                Some(last) if last.end == *start => last.end = *end,
                _ => intervals.push(Interval {
                    start: *start,
                    end: *end,
                }),
            }
        }
        Ok(self.made(intervals))
    }

    fn wanted(&self, condition: &Condition) -> Result<(usize, u8), Lack> {
        let part = self.part(&condition.part)?;
        let state = match &condition.state {
            StateWord::Closed => Some(1),
            StateWord::Open => Some(0),
            StateWord::At(node) => self.contact(part, node),
        };
        match state {
            Some(state) => Ok((part, state)),
            None => absent(format!("`{}` is never in that state", condition.part)),
        }
    }

    fn contact(&self, part: usize, node: &Name) -> Option<u8> {
        let node = self.case.circuit.node_index(&node.text)?;
        match &self.case.setup.parts.get(part)?.element {
            Element::Changeover { contacts, .. } => contacts
                .iter()
                .position(|n| *n == node)
                .and_then(|n| u8::try_from(n).ok()),
            _ => None,
        }
    }

    /// The index of a part by name.
    pub(super) fn part(&self, name: &Name) -> Result<usize, Lack> {
        match self.case.circuit.part_index(&name.text) {
            Some(part) => Ok(part),
            None => absent(format!("there is no part `{name}`")),
        }
    }

    /// The run of one sign with that number, counting those whose crest is at least 1 % of the
    /// largest; empty where there are fewer.
    fn phase(&self, number: u32, signal: &Expr) -> Result<Extent, Lack> {
        let all = [Interval {
            start: 0.0,
            end: self.record.end(),
        }];
        let signal = self.signal(signal)?;
        signal.grounded(&all)?;
        let least = 0.01 * signal.wave.largest();
        let crest = |run: &Run| {
            let over = [Interval {
                start: run.start,
                end: run.end,
            }];
            signal.wave.largest_in(&over).map_or(0.0, |e| e.value.abs())
        };
        let counted = |run: &Run| run.sign != 0 && run.end > run.start && crest(run) >= least;
        let runs = signal.wave.runs(&all, 1.0, 0.0);
        let n = usize::try_from(number)
            .unwrap_or(usize::MAX)
            .saturating_sub(1);
        let found = runs.into_iter().filter(counted).nth(n);
        Ok(self.made(
            found
                .map(|r| Interval {
                    start: r.start,
                    end: r.end,
                })
                .into_iter()
                .collect(),
        ))
    }
}
