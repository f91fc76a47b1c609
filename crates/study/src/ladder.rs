//! The ladder of meshes: one shot on a chosen mesh, then with every step halved, again and again.
//!
//! The shots themselves are not kept, only the first (whose mesh is halved) and the finest; of
//! each the readings, the balance, the event log and the stress are. Four meshes are always run:
//! fewer give no ratio of ratios. Then refinement goes on until every reading is within its
//! allowed error and every claim decided, and ends at the limit of steps, at what fits into
//! memory, or where more meshes narrow nothing.

use pulsewright_circuit::Probe;
use pulsewright_circuit::draft::Method;
use pulsewright_engine::{Failure, Mesh, Request, Shot, fire};

use crate::balance::Ledger;
use crate::bounds::{Order, Precision};
use crate::error::StudyError;
use crate::events::Log;
use crate::options::{Options, Progress};
use crate::plan::Plan;
use crate::readings::Reader;
use crate::series::{Rules, Series};
use crate::stress::Loads;

/// How often the first mesh is halved at least and at most.
const LEAST: u32 = 3;
/// The same by exact propagation.
const LEAST_EXACT: u32 = 1;
const MOST: u32 = 12;
/// How many numbers a shot may record (8 bytes each) before refinement beyond the least ends.
const NUMBERS: u64 = 40_000_000;

/// What the meshes brought.
pub struct Ladder {
    /// One series for each reading of the plan.
    pub readings: Vec<Series>,
    /// The balance on each mesh.
    pub ledger: Ledger,
    /// The event log on each mesh.
    pub log: Log,
    /// What the parts had to stand on each mesh.
    pub loads: Loads,
    /// The shot that is reported: the finest, or the first where steps are fixed.
    pub shot: Shot,
    /// A shot that recorded what hazards are read off, where the reported one did not.
    pub stores: Option<Shot>,
    /// How its numbers are read.
    pub rules: Rules,
}

/// Where a case stands among all, counted from 1.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Turn {
    /// This case.
    pub case: usize,
    /// How many there are.
    pub of: usize,
}

impl Turn {
    /// The only case.
    pub const ONLY: Turn = Turn { case: 1, of: 1 };
}

struct Climb<'p, 'a, 'o> {
    plan: &'p Plan<'a>,
    options: &'o Options<'o>,
    turn: Turn,
    readings: Vec<Series>,
    ledger: Ledger,
    log: Log,
    loads: Loads,
    precision: Precision,
}

impl Ladder {
    /// Fires a case on as many meshes as it takes; `decided` says whether every claim is decided,
    /// or cannot be.
    ///
    /// # Errors
    ///
    /// What the engine fails with on any of the first four meshes.
    pub fn climb(
        plan: &Plan<'_>,
        options: &Options<'_>,
        turn: Turn,
        decided: &dyn Fn(&[Series], Rules) -> bool,
    ) -> Result<Ladder, StudyError> {
        let mut climb = Climb::new(plan, options, turn);
        let fixed = plan.case.setup.step;
        let mesh = fixed.map_or(
            Mesh::Chosen {
                tolerance: plan.tolerance,
            },
            Mesh::Fixed,
        );
        let least = if plan.case.setup.method == Method::Exact {
            LEAST_EXACT
        } else {
            LEAST
        };
        let first = climb.shoot(mesh, 0)?;
        climb.take(&first);
        let mut finest = None;
        for times in 1..=MOST {
            let more = times > least;
            if more && (fixed.is_some() || climb.is_enough(decided) || climb.is_too_much()) {
                break;
            }
            let shot = match climb.shoot(Mesh::Halved { of: &first, times }, times) {
                Err(StudyError::Engine(Failure::Limit { .. })) if more || fixed.is_some() => break,
                other => other?,
            };
            climb.take(&shot);
            finest = Some(shot);
        }
        let shot = if fixed.is_some() {
            first
        } else {
            finest.unwrap_or(first)
        };
        let stores = if plan.stores_apart {
            Some(climb.stores(mesh)?)
        } else {
            None
        };
        Ok(climb.finish(shot, stores))
    }
}

impl<'p, 'a, 'o> Climb<'p, 'a, 'o> {
    fn new(plan: &'p Plan<'a>, options: &'o Options<'o>, turn: Turn) -> Self {
        Climb {
            plan,
            options,
            turn,
            readings: vec![Series::default(); plan.readings.len()],
            ledger: Ledger::default(),
            log: Log::default(),
            loads: Loads::default(),
            precision: Precision::default(),
        }
    }

    fn shoot(&self, mesh: Mesh<'_>, halvings: u32) -> Result<Shot, StudyError> {
        self.shoot_for(self.plan.probes.clone(), mesh, halvings)
    }

    /// A shot that records what hazards are read off.
    fn stores(&self, mesh: Mesh<'_>) -> Result<Shot, StudyError> {
        let probes = self
            .plan
            .store_probes()
            .chain([Probe::EnergyStored])
            .collect();
        self.shoot_for(probes, mesh, 0)
    }

    fn shoot_for(
        &self,
        probes: Vec<Probe>,
        mesh: Mesh<'_>,
        halvings: u32,
    ) -> Result<Shot, StudyError> {
        let span = self.plan.case.setup.span;
        let told = |time: f64| {
            let Turn { case, of } = self.turn;
            self.options.hook.is_none_or(|hook| {
                hook(Progress {
                    case,
                    of,
                    halvings,
                    time,
                    span,
                })
            })
        };
        let mut request = Request::new(probes, mesh);
        request.landings = self.plan.landings.clone();
        request.hook = Some(&told);
        Ok(fire(self.plan.case.setup, &request)?)
    }

    fn take(&mut self, shot: &Shot) {
        let reader = Reader::new(self.plan.case, shot);
        for (series, expr) in self.readings.iter_mut().zip(&self.plan.readings) {
            series.push(reader.value(expr));
        }
        if self.plan.stress {
            self.loads.push(&reader, self.plan.case.setup);
        }
        self.ledger.push(&shot.balance);
        self.log.push(&shot.events);
        let damped = shot.stretches.iter().any(|s| !s.damped.is_empty());
        let adds_up = self.plan.case.setup.method == Method::Trapezoidal && !damped;
        self.precision = Precision {
            steps: shot.steps,
            noise: if adds_up || shot.exact {
                self.ledger.noise() + shot.rounding
            } else {
                0.0
            },
        };
    }

    fn rules(&self) -> Rules {
        let setup = self.plan.case.setup;
        let order = match setup.method {
            Method::BackwardEuler => Order::First,
            Method::Exact => Order::Fourth,
            _ => Order::Second,
        };
        Rules {
            order,
            precision: self.precision,
            fixed: setup.step.is_some(),
        }
    }

    fn is_enough(&self, decided: &dyn Fn(&[Series], Rules) -> bool) -> bool {
        let (rules, error) = (self.rules(), self.plan.case.setup.error);
        !self.readings.iter().any(|s| s.wants_more(error, rules)) && decided(&self.readings, rules)
    }

    fn is_too_much(&self) -> bool {
        let steps = self.precision.steps.saturating_mul(2);
        let numbers = steps.saturating_mul(2 * self.plan.probes.len() as u64);
        steps > self.plan.case.setup.limits.steps || numbers > NUMBERS
    }

    fn finish(self, shot: Shot, stores: Option<Shot>) -> Ladder {
        let rules = self.rules();
        Ladder {
            readings: self.readings,
            ledger: self.ledger,
            log: self.log,
            loads: self.loads,
            shot,
            stores,
            rules,
        }
    }
}
