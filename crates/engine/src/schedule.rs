//! Follows the schedules: which action's turn it is, and what it waits for.
//!
//! Each switch or changeover with a schedule has a program: a counter into its actions, and for
//! the action whose turn it is a *watch* for each trigger. Instants are known beforehand, delays
//! once their edge has been; levels and zeros of a current are conditions that the run watches.

use pulsewright_circuit::formula::{Formula, Leaves};
use pulsewright_circuit::phrase::Ordinal;
use pulsewright_circuit::schedule::Passing;
use pulsewright_circuit::setup::{Element, SetAction, SetControl, SetEdge, SetTrigger, Setup};

use crate::shot::{Event, Notice};

/// What an action waits for.
#[derive(Clone, Debug)]
pub enum Watch {
    /// Nothing any more.
    Gone,
    /// A known instant, s, and whether it hangs on one that was found.
    At(f64, bool),
    /// An edge, then a delay.
    Edge(SetEdge, Formula),
    /// A level; `fresh` until its first look.
    Level {
        /// The signal.
        signal: Formula,
        /// How it is met.
        passing: Passing,
        /// The level.
        level: f64,
        /// Not looked at since the action's turn came.
        fresh: bool,
    },
    /// The first zero of the part's current from an instant on; `None` while that is unknown.
    Zero {
        /// From when on, s.
        from: Option<f64>,
        /// What gives that instant.
        after: Option<Formula>,
    },
}

/// One schedule as it runs.
#[derive(Clone, Debug)]
pub struct Program {
    /// The part.
    pub part: usize,
    actions: Vec<SetAction>,
    next: usize,
    /// When the turn of the action waited for came, s.
    turn: f64,
    /// Its watches, one a trigger.
    pub watches: Vec<Watch>,
}

/// All schedules, and who follows whom.
#[derive(Clone, Debug, Default)]
pub struct Schedules {
    /// The programs.
    pub programs: Vec<Program>,
    /// Parts ganged with each part.
    pub gangs: std::collections::BTreeMap<usize, Vec<usize>>,
}

impl Schedules {
    /// The schedules of a setup; nothing is armed yet.
    #[must_use]
    pub fn new(setup: &Setup) -> Schedules {
        let mut all = Schedules::default();
        for (part, p) in setup.parts.iter().enumerate() {
            match &p.element {
                Element::Switch {
                    control: SetControl::Schedule { actions, .. },
                    ..
                }
                | Element::Changeover { actions, .. } => {
                    all.programs.push(Program {
                        part,
                        actions: actions.clone(),
                        next: 0,
                        turn: 0.0,
                        watches: Vec::new(),
                    });
                }
                Element::Switch {
                    control: SetControl::Ganged(_),
                    ..
                } => {
                    all.gangs.entry(leader(setup, part)).or_default().push(part);
                }
                _ => {}
            }
        }
        all
    }

    /// The next known instant after `t`, s.
    #[must_use]
    pub fn next_instant(&self, t: f64) -> Option<f64> {
        let watches = self.programs.iter().flat_map(|p| p.watches.iter());
        watches
            .filter_map(|w| match w {
                Watch::At(x, _) | Watch::Zero { from: Some(x), .. } => Some(*x),
                _ => None,
            })
            .filter(|x| *x > t)
            .min_by(f64::total_cmp)
    }

    /// Whether any watch waits for an edge or an instant that must be worked out.
    #[must_use]
    pub fn wait_for_edges(&self) -> bool {
        let mut watches = self.programs.iter().flat_map(|p| &p.watches);
        watches.any(|w| matches!(w, Watch::Edge(..) | Watch::Zero { from: None, .. }))
    }

    /// Turns edges that have been into instants.
    pub fn resolve(&mut self, events: &[Event], leaves: &dyn Leaves) {
        for p in &mut self.programs {
            let turn = p.turn;
            for w in &mut p.watches {
                match w {
                    Watch::Edge(edge, delay) => {
                        if let Some(t) = crate::schedule::edge(events, *edge, turn) {
                            let d = delay
                                .jet(t, pulsewright_circuit::formula::Side::After, leaves)
                                .value;
                            *w = if d.is_finite() {
                                Watch::At(t + d, true)
                            } else {
                                Watch::Gone
                            };
                        }
                    }
                    Watch::Zero {
                        from: from @ None,
                        after,
                    } => {
                        let t = match after {
                            None => turn,
                            Some(Formula::Edge(e)) => {
                                crate::schedule::edge(events, *e, turn).unwrap_or(f64::NAN)
                            }
                            Some(f) => {
                                f.jet(turn, pulsewright_circuit::formula::Side::After, leaves)
                                    .value
                            }
                        };
                        if t.is_finite() {
                            *from = Some(t.max(turn));
                        }
                    }
                    _ => {}
                }
            }
        }
    }
}

impl Program {
    /// Whether a known instant of the action whose turn it is has come.
    #[must_use]
    pub fn is_due(&self, t: f64) -> bool {
        self.watches
            .iter()
            .any(|w| matches!(w, Watch::At(x, _) if *x <= t))
    }

    /// The state that the action whose turn it is brings.
    #[must_use]
    pub fn state(&self) -> Option<u8> {
        self.actions
            .get(self.next)
            .and_then(|a| u8::try_from(a.state).ok())
    }

    /// Gives the turn to the first action, at 0 s.
    pub fn begin(&mut self, notices: &mut Vec<Notice>) {
        self.arm(0.0, true, notices);
    }

    /// Takes the action whose turn it is as done at `t`, and arms the next.
    pub fn advance(&mut self, t: f64, notices: &mut Vec<Notice>) {
        self.next += 1;
        self.arm(t, false, notices);
    }

    fn arm(&mut self, t: f64, start: bool, notices: &mut Vec<Notice>) {
        self.turn = t;
        loop {
            let Some(action) = self.actions.get(self.next) else {
                self.watches.clear();
                return;
            };
            self.watches = action.triggers.iter().map(|x| watch(x, t, start)).collect();
            if !self.watches.iter().all(|w| matches!(w, Watch::Gone)) {
                return;
            }
            notices.push(Notice::ActionPassedOver {
                part: self.part,
                time: t,
            });
            self.next += 1;
        }
    }

    /// Passes the action over where nothing is left that it waits for.
    pub fn pass_over_if_gone(&mut self, t: f64, notices: &mut Vec<Notice>) {
        // A delay that ends before the action's turn is an instant already gone.
        let turn = self.turn;
        for w in &mut self.watches {
            if matches!(w, Watch::At(x, _) if *x < turn) {
                *w = Watch::Gone;
            }
        }
        if !self.watches.is_empty() && self.watches.iter().all(|w| matches!(w, Watch::Gone)) {
            notices.push(Notice::ActionPassedOver {
                part: self.part,
                time: t,
            });
            self.next += 1;
            self.arm(t, false, notices);
        }
    }
}

fn watch(trigger: &SetTrigger, t: f64, start: bool) -> Watch {
    match trigger {
        SetTrigger::At(x) if *x > t || (start && *x >= t) => Watch::At(*x, false),
        SetTrigger::When {
            signal,
            passing,
            level,
        } => Watch::Level {
            signal: signal.clone(),
            passing: *passing,
            level: *level,
            fresh: true,
        },
        SetTrigger::Delay { delay, edge } => Watch::Edge(*edge, delay.clone()),
        SetTrigger::ZeroCurrent { after } => Watch::Zero {
            from: None,
            after: after.clone(),
        },
        _ => Watch::Gone,
    }
}

fn leader(setup: &Setup, part: usize) -> usize {
    let mut at = part;
    for _ in 0..setup.parts.len() {
        match setup.parts.get(at).map(|p| &p.element) {
            Some(Element::Switch {
                control: SetControl::Ganged(other),
                ..
            }) => at = *other,
            _ => break,
        }
    }
    at
}

/// The instant of an edge in the log: with an ordinal counted from the shot's start, without one
/// the first at or after `from`, s.
#[must_use]
pub fn edge(events: &[Event], edge: SetEdge, from: f64) -> Option<f64> {
    let mut all = events
        .iter()
        .filter(|e| e.part == edge.part && usize::from(e.state) == edge.state)
        .map(|e| e.time);
    match edge.ordinal {
        Some(Ordinal::Nth(n)) => all.nth(usize::from(n).saturating_sub(1)),
        Some(Ordinal::Last) => all.next_back(),
        None => all.find(|t| *t >= from),
    }
}
