//! Parts, their qualifiers and their schedules.

use super::{Builder, named};
use crate::expr::Expr;
use crate::parts::{
    Capacitor, Changeover, Control, Coupling, Diode, Inductor, Part, PartKind, Resistor, Source,
    Switch, Wire,
};
use crate::phrase::Edge;
use crate::schedule::{Action, Change, Passing, Trigger, TriggerKind};
use crate::span::Span;
use crate::spread::{Spread, SpreadKind, Value};

/// `at 1 ms`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// let built = Builder::new("").switch_open("fire", "a", "b").closes(at(seconds(1e-3)));
/// # assert_eq!(built.draft().parts.len(), 1);
/// ```
#[must_use]
pub fn at(time: impl Into<Expr>) -> Trigger {
    trigger(TriggerKind::At(time.into().into()))
}

/// `when SIGNAL falls below LEVEL`, and the other passings.
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// use pulsewright_circuit::schedule::Passing;
/// let low = when(voltage_across("bank"), Passing::FallsBelow, volts(700.0));
/// let built = Builder::new("").switch_closed("ne", "a", "b").opens([low, at(seconds(11e-3))]);
/// # assert_eq!(built.draft().parts.len(), 1);
/// ```
#[must_use]
pub fn when(signal: impl Into<Expr>, passing: Passing, level: impl Into<Expr>) -> Trigger {
    trigger(TriggerKind::When {
        signal: signal.into(),
        passing,
        level: level.into().into(),
    })
}

/// `0.5 ms after opening of other`; the delay may use earlier edges.
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// let second = after(opening_of("ne") - closing_of("ne"), closing_of("nw"));
/// let built = Builder::new("").switch_closed("nw", "a", "b").opens(second);
/// # assert_eq!(built.draft().parts.len(), 1);
/// ```
#[must_use]
pub fn after(delay: impl Into<Expr>, edge: Edge) -> Trigger {
    trigger(TriggerKind::Delay {
        delay: delay.into().into(),
        edge,
    })
}

/// `at zero current`, from the action's turn on.
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// let built = Builder::new("").switch_closed("vac", "a", "b").opens(at_zero_current());
/// # assert_eq!(built.draft().parts.len(), 1);
/// ```
#[must_use]
pub fn at_zero_current() -> Trigger {
    trigger(TriggerKind::ZeroCurrent { after: None })
}

/// `at zero current after TIME`: a time or an edge.
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// let trigger = at_zero_current_after(seconds(25e-3));
/// let built = Builder::new("").switch_closed("vac", "a", "b").opens(trigger);
/// # assert_eq!(built.draft().parts.len(), 1);
/// ```
#[must_use]
pub fn at_zero_current_after(time: impl Into<Expr>) -> Trigger {
    trigger(TriggerKind::ZeroCurrent {
        after: Some(time.into()),
    })
}

fn trigger(kind: TriggerKind) -> Trigger {
    Trigger {
        kind,
        span: Span::NONE,
    }
}

impl From<Trigger> for Vec<Trigger> {
    fn from(trigger: Trigger) -> Self {
        vec![trigger]
    }
}

impl Builder {
    fn part(mut self, name: &str, kind: PartKind) -> Self {
        self.draft.parts.push(Part {
            name: named(name),
            kind,
            span: Span::NONE,
        });
        self
    }

    /// `resistor NAME from NODE to NODE = VALUE`
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// let built = Builder::new("").resistor("chest", "pad", "ground", ohms(50.0));
    /// # assert_eq!(built.draft().parts.len(), 1);
    /// ```
    #[must_use]
    pub fn resistor(self, name: &str, from: &str, to: &str, value: impl Into<Expr>) -> Self {
        let (from, to, value) = (named(from), named(to), value.into().into());
        self.part(name, PartKind::Resistor(Resistor { from, to, value }))
    }

    /// `capacitor NAME from NODE to NODE = VALUE`
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// let built = Builder::new("")
    ///     .capacitor("bank", "top", "ground", farads(32e-6))
    ///     .charged_to(volts(4.7e3))
    ///     .series(ohms(0.1))
    ///     .leakage(ohms(2e6));
    /// # assert_eq!(built.draft().parts.len(), 1);
    /// ```
    #[must_use]
    pub fn capacitor(self, name: &str, from: &str, to: &str, value: impl Into<Expr>) -> Self {
        let (from, to, value) = (named(from), named(to), value.into().into());
        self.part(
            name,
            PartKind::Capacitor(Capacitor {
                from,
                to,
                value,
                charged: None,
                series: None,
                leakage: None,
            }),
        )
    }

    /// `inductor NAME from NODE to NODE = VALUE`
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// let built = Builder::new("").inductor("choke", "mid", "pad", henrys(25e-3)).winding(ohms(10.0));
    /// # assert_eq!(built.draft().parts.len(), 1);
    /// ```
    #[must_use]
    pub fn inductor(self, name: &str, from: &str, to: &str, value: impl Into<Expr>) -> Self {
        let (from, to, value) = (named(from), named(to), value.into().into());
        self.part(
            name,
            PartKind::Inductor(Inductor {
                from,
                to,
                value,
                carrying: None,
                winding: None,
            }),
        )
    }

    /// `coupling NAME between INDUCTOR and INDUCTOR = FACTOR`
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// let built = Builder::new("").coupling("core", "primary", "secondary", 0.98);
    /// # assert_eq!(built.draft().parts.len(), 1);
    /// ```
    #[must_use]
    pub fn coupling(self, name: &str, first: &str, second: &str, factor: impl Into<Expr>) -> Self {
        let (first, second, factor) = (named(first), named(second), factor.into().into());
        self.part(
            name,
            PartKind::Coupling(Coupling {
                first,
                second,
                factor,
            }),
        )
    }

    /// `wire NAME from NODE to NODE`
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// let built = Builder::new("").wire("tap", "a", "b");
    /// # assert_eq!(built.draft().parts.len(), 1);
    /// ```
    #[must_use]
    pub fn wire(self, name: &str, from: &str, to: &str) -> Self {
        self.part(
            name,
            PartKind::Wire(Wire {
                from: named(from),
                to: named(to),
            }),
        )
    }

    /// `voltage NAME from NODE to NODE = EXPRESSION`
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// let built = Builder::new("").voltage("amp", "out", "ground", 10.0 * voltage_at("sense"));
    /// # assert_eq!(built.draft().parts.len(), 1);
    /// ```
    #[must_use]
    pub fn voltage(self, name: &str, from: &str, to: &str, value: impl Into<Expr>) -> Self {
        let (from, to, value) = (named(from), named(to), value.into().into());
        self.part(name, PartKind::Voltage(Source { from, to, value }))
    }

    /// `current NAME from NODE to NODE = EXPRESSION`
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// let built = Builder::new("").current("gun", "ground", "x", amps(1e3));
    /// # assert_eq!(built.draft().parts.len(), 1);
    /// ```
    #[must_use]
    pub fn current(self, name: &str, from: &str, to: &str, value: impl Into<Expr>) -> Self {
        let (from, to, value) = (named(from), named(to), value.into().into());
        self.part(name, PartKind::Current(Source { from, to, value }))
    }

    /// `switch NAME from NODE to NODE : open`
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// let built = Builder::new("").switch_open("fire", "top", "mid").closes(at(seconds(1e-6)));
    /// # assert_eq!(built.draft().parts.len(), 1);
    /// ```
    #[must_use]
    pub fn switch_open(self, name: &str, from: &str, to: &str) -> Self {
        self.switch(
            name,
            from,
            to,
            Control::Schedule {
                closed: false,
                actions: Vec::new(),
            },
        )
    }

    /// `switch NAME from NODE to NODE : closed`
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// let built = Builder::new("").switch_closed("hold", "top", "mid").opens(at(seconds(1e-3)));
    /// # assert_eq!(built.draft().parts.len(), 1);
    /// ```
    #[must_use]
    pub fn switch_closed(self, name: &str, from: &str, to: &str) -> Self {
        self.switch(
            name,
            from,
            to,
            Control::Schedule {
                closed: true,
                actions: Vec::new(),
            },
        )
    }

    /// `switch NAME from NODE to NODE : ganged with OTHER`
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// let built = Builder::new("").switch_open("fire", "a", "b").switch_ganged("low", "c", "d", "fire");
    /// # assert_eq!(built.draft().parts.len(), 2);
    /// ```
    #[must_use]
    pub fn switch_ganged(self, name: &str, from: &str, to: &str, with: &str) -> Self {
        self.switch(name, from, to, Control::Ganged(named(with)))
    }

    fn switch(self, name: &str, from: &str, to: &str, control: Control) -> Self {
        let (from, to) = (named(from), named(to));
        self.part(
            name,
            PartKind::Switch(Switch {
                from,
                to,
                control,
                contact: None,
                insulation: None,
            }),
        )
    }

    /// `changeover NAME from COMMON to FIRST or SECOND : at FIRST`; it starts at the first.
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// let built = Builder::new("")
    ///     .changeover("relay", "top", "charger", "pad")
    ///     .moves_to("pad", at(seconds(1e-6)));
    /// # assert_eq!(built.draft().parts.len(), 1);
    /// ```
    #[must_use]
    pub fn changeover(self, name: &str, common: &str, first: &str, second: &str) -> Self {
        let (common, start) = (named(common), named(first));
        let (first, second) = (named(first), named(second));
        let actions = Vec::new();
        let kind = Changeover {
            common,
            first,
            second,
            start,
            actions,
            contact: None,
            insulation: None,
        };
        self.part(name, PartKind::Changeover(kind))
    }

    /// `diode NAME from NODE to NODE`
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// let built = Builder::new("").diode("steer", "a", "b").threshold(volts(0.7)).slope(ohms(0.01));
    /// # assert_eq!(built.draft().parts.len(), 1);
    /// ```
    #[must_use]
    pub fn diode(self, name: &str, from: &str, to: &str) -> Self {
        let (from, to) = (named(from), named(to));
        self.part(
            name,
            PartKind::Diode(Diode {
                from,
                to,
                threshold: None,
                slope: None,
            }),
        )
    }

    /// `closes TRIGGER`, of the switch before it; several triggers are joined by `or`.
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// let built = Builder::new("").switch_open("fire", "a", "b").closes(at(seconds(1e-3))).opens(at(seconds(2e-3)));
    /// # assert_eq!(built.draft().parts.len(), 1);
    /// ```
    #[must_use]
    pub fn closes(self, triggers: impl Into<Vec<Trigger>>) -> Self {
        self.action(Change::Closes, triggers.into())
    }

    /// `opens TRIGGER`, likewise.
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// let built = Builder::new("").switch_closed("fire", "a", "b").opens(at(seconds(1e-3)));
    /// # assert_eq!(built.draft().parts.len(), 1);
    /// ```
    #[must_use]
    pub fn opens(self, triggers: impl Into<Vec<Trigger>>) -> Self {
        self.action(Change::Opens, triggers.into())
    }

    /// `moves to NODE TRIGGER`, of the changeover before it.
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// let built = Builder::new("").changeover("relay", "top", "a", "b").moves_to("b", at(seconds(0.5)));
    /// # assert_eq!(built.draft().parts.len(), 1);
    /// ```
    #[must_use]
    pub fn moves_to(self, node: &str, triggers: impl Into<Vec<Trigger>>) -> Self {
        self.action(Change::MovesTo(named(node)), triggers.into())
    }

    fn action(mut self, change: Change, triggers: Vec<Trigger>) -> Self {
        let action = Action {
            change,
            triggers,
            span: Span::NONE,
        };
        match self.draft.parts.last_mut().map(|p| &mut p.kind) {
            Some(PartKind::Switch(Switch {
                control: Control::Schedule { actions, .. },
                ..
            })) => actions.push(action),
            Some(PartKind::Changeover(c)) => c.actions.push(action),
            _ => self.misplace("an action", "a switch or a changeover"),
        }
        self
    }

    /// `tolerance SHARE`, of the part's own value.
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// let built = Builder::new("").capacitor("bank", "a", "b", farads(32e-6)).tolerance(percent(5.0));
    /// # assert_eq!(built.draft().parts.len(), 1);
    /// ```
    #[must_use]
    pub fn tolerance(self, amount: impl Into<Expr>) -> Self {
        self.spread("tolerance", SpreadKind::Tolerance(amount.into()))
    }

    /// `tolerance LOW to HIGH`, of the part's own value.
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// let built = Builder::new("").capacitor("bank", "a", "b", farads(32e-6))
    ///     .tolerance_between(percent(-20.0), percent(50.0));
    /// # assert!(built.draft().parts.len() == 1);
    /// ```
    #[must_use]
    pub fn tolerance_between(self, low: impl Into<Expr>, high: impl Into<Expr>) -> Self {
        self.spread("tolerance", SpreadKind::Limits(low.into(), high.into()))
    }

    /// `standard deviation SHARE`, of the part's own value: normal, cut at three.
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// let built = Builder::new("").capacitor("bank", "a", "b", farads(32e-6)).standard_deviation(percent(2.0));
    /// # assert!(built.draft().parts.len() == 1);
    /// ```
    #[must_use]
    pub fn standard_deviation(self, amount: impl Into<Expr>) -> Self {
        self.spread("standard deviation", SpreadKind::Deviation(amount.into()))
    }

    /// `standard deviation SHARE lognormal`, of the part's own value.
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// let built = Builder::new("").resistor("body", "a", "b", ohms(75.0)).lognormal(percent(25.0));
    /// # assert!(built.draft().parts.len() == 1);
    /// ```
    #[must_use]
    pub fn lognormal(self, share: impl Into<Expr>) -> Self {
        self.spread("standard deviation", SpreadKind::Lognormal(share.into()))
    }

    fn spread(mut self, word: &'static str, kind: SpreadKind) -> Self {
        let spread = Spread {
            kind,
            span: Span::NONE,
        };
        match self
            .draft
            .parts
            .last_mut()
            .and_then(|p| own_value(&mut p.kind))
        {
            Some(value) => value.spread = Some(spread),
            None => self.misplace(word, "a part with a value"),
        }
        self
    }

    /// `charged to VOLTAGE`, of the capacitor before it.
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// let built = Builder::new("").capacitor("bank", "a", "ground", farads(1e-6)).charged_to(volts(1e3));
    /// # assert_eq!(built.draft().parts.len(), 1);
    /// ```
    #[must_use]
    pub fn charged_to(self, voltage: impl Into<Expr>) -> Self {
        self.qualify("charged to", "a capacitor", voltage.into(), |k| match k {
            PartKind::Capacitor(c) => Some(&mut c.charged),
            _ => None,
        })
    }

    /// `series RESISTANCE`, of the capacitor before it.
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// let built = Builder::new("").capacitor("bank", "a", "ground", farads(1e-6)).series(ohms(0.1));
    /// # assert_eq!(built.draft().parts.len(), 1);
    /// ```
    #[must_use]
    pub fn series(self, resistance: impl Into<Expr>) -> Self {
        self.qualify("series", "a capacitor", resistance.into(), |k| match k {
            PartKind::Capacitor(c) => Some(&mut c.series),
            _ => None,
        })
    }

    /// `leakage RESISTANCE`, of the capacitor before it.
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// let built = Builder::new("").capacitor("bank", "a", "ground", farads(1e-6)).leakage(ohms(2e6));
    /// # assert_eq!(built.draft().parts.len(), 1);
    /// ```
    #[must_use]
    pub fn leakage(self, resistance: impl Into<Expr>) -> Self {
        self.qualify("leakage", "a capacitor", resistance.into(), |k| match k {
            PartKind::Capacitor(c) => Some(&mut c.leakage),
            _ => None,
        })
    }

    /// `carrying CURRENT`, of the inductor before it.
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// let built = Builder::new("").inductor("choke", "a", "ground", henrys(1e-3)).carrying(amps(2.0));
    /// # assert_eq!(built.draft().parts.len(), 1);
    /// ```
    #[must_use]
    pub fn carrying(self, current: impl Into<Expr>) -> Self {
        self.qualify("carrying", "an inductor", current.into(), |k| match k {
            PartKind::Inductor(l) => Some(&mut l.carrying),
            _ => None,
        })
    }

    /// `winding RESISTANCE`, of the inductor before it.
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// let built = Builder::new("").inductor("choke", "a", "ground", henrys(1e-3)).winding(ohms(10.0));
    /// # assert_eq!(built.draft().parts.len(), 1);
    /// ```
    #[must_use]
    pub fn winding(self, resistance: impl Into<Expr>) -> Self {
        self.qualify("winding", "an inductor", resistance.into(), |k| match k {
            PartKind::Inductor(l) => Some(&mut l.winding),
            _ => None,
        })
    }

    /// `contact RESISTANCE`, of the switch or changeover before it.
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// let built = Builder::new("").switch_open("fire", "a", "b").contact(ohms(5e-3)).insulation(ohms(10e6));
    /// # assert_eq!(built.draft().parts.len(), 1);
    /// ```
    #[must_use]
    pub fn contact(self, resistance: impl Into<Expr>) -> Self {
        self.qualify(
            "contact",
            "a switch or a changeover",
            resistance.into(),
            |k| match k {
                PartKind::Switch(s) => Some(&mut s.contact),
                PartKind::Changeover(c) => Some(&mut c.contact),
                _ => None,
            },
        )
    }

    /// `insulation RESISTANCE`, of the switch or changeover before it.
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// let built = Builder::new("").switch_open("fire", "a", "b").insulation(ohms(10e6));
    /// # assert_eq!(built.draft().parts.len(), 1);
    /// ```
    #[must_use]
    pub fn insulation(self, resistance: impl Into<Expr>) -> Self {
        self.qualify(
            "insulation",
            "a switch or a changeover",
            resistance.into(),
            |k| match k {
                PartKind::Switch(s) => Some(&mut s.insulation),
                PartKind::Changeover(c) => Some(&mut c.insulation),
                _ => None,
            },
        )
    }

    /// `threshold VOLTAGE`, of the diode before it.
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// let built = Builder::new("").diode("steer", "a", "b").threshold(volts(0.7));
    /// # assert_eq!(built.draft().parts.len(), 1);
    /// ```
    #[must_use]
    pub fn threshold(self, voltage: impl Into<Expr>) -> Self {
        self.qualify("threshold", "a diode", voltage.into(), |k| match k {
            PartKind::Diode(d) => Some(&mut d.threshold),
            _ => None,
        })
    }

    /// `slope RESISTANCE`, of the diode before it.
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// let built = Builder::new("").diode("steer", "a", "b").slope(ohms(0.01));
    /// # assert_eq!(built.draft().parts.len(), 1);
    /// ```
    #[must_use]
    pub fn slope(self, resistance: impl Into<Expr>) -> Self {
        self.qualify("slope", "a diode", resistance.into(), |k| match k {
            PartKind::Diode(d) => Some(&mut d.slope),
            _ => None,
        })
    }

    fn qualify(
        mut self,
        qualifier: &'static str,
        follows: &'static str,
        value: Expr,
        slot: impl Fn(&mut PartKind) -> Option<&mut Option<Value>>,
    ) -> Self {
        match self.draft.parts.last_mut().and_then(|p| slot(&mut p.kind)) {
            Some(place) => *place = Some(value.into()),
            None => self.misplace(qualifier, follows),
        }
        self
    }
}

fn own_value(kind: &mut PartKind) -> Option<&mut Value> {
    match kind {
        PartKind::Resistor(p) => Some(&mut p.value),
        PartKind::Capacitor(p) => Some(&mut p.value),
        PartKind::Inductor(p) => Some(&mut p.value),
        PartKind::Coupling(p) => Some(&mut p.factor),
        PartKind::Voltage(p) | PartKind::Current(p) => Some(&mut p.value),
        _ => None,
    }
}
