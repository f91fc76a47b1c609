//! Numbers as written and in each case: ranges, schedules, windows, limits, couplings.
//!
//! First at the values as written; then, for each value of each `cases` statement with the
//! others as written, whatever uses a let-value. Combinations of several statements are held
//! against the same ranges when they are set up.

use super::{Checker, Nominal, Types};
use crate::circuit::LetValue;
use crate::dimension::Dimension;
use crate::draft::{CaseValues, Cases};
use crate::expr::{Expr, ExprKind};
use crate::fault::{Bound, FaultKind, Given};
use crate::lets::{self, Row};
use crate::numbers::Setter;
use crate::parts::{Control, Part, PartKind};
use crate::schedule::TriggerKind;
use crate::slots::slots;
use crate::vary::Moves;

/// How many parts, readings and claims are evaluated in all for single cases.
const MOST: usize = 5_000_000;

/// What is at fault already, so that its numbers are not looked at.
pub(super) struct Bad {
    pub parts: Vec<bool>,
    pub readings: Vec<bool>,
    /// The dimension of each sound claim's reading.
    pub claims: Vec<Option<Dimension>>,
    pub cases: Vec<bool>,
    pub adjust: bool,
}

impl Checker<'_> {
    /// Every number as written, then in each case; gives the let-values as written.
    pub(super) fn numeric(&mut self, bad: &Bad) -> Nominal {
        let (draft, index) = (self.draft, self.index);
        // Taken out while numbers are put in, which reads it and writes faults.
        let types = std::mem::take(&mut self.types);
        let (nominal, faults) = lets::evaluate(
            draft,
            index,
            &types,
            &[],
            &Moves::default(),
            &Given::default(),
        );
        let sound_lets = faults.is_empty();
        self.faults.extend(faults);
        let lookup = lets::lookup(index, &nominal);
        let mut setter = Setter::new(draft, index, &types, &lookup, Vec::new());
        let mut later = Later::default();
        for (i, part) in draft.parts.iter().enumerate() {
            let before = setter.faults.len();
            if is(&bad.parts, i) {
                continue;
            }
            setter.look_at(i);
            if setter.faults.len() == before && uses_lets(part) {
                later.parts.push(i);
            }
        }
        setter.couplings(&|i| is(&bad.parts, i));
        self.readings_and_claims(&mut setter, bad, &mut later);
        setter.run();
        for l in &draft.lets {
            let found = index
                .lets
                .get(&l.name.text)
                .and_then(|i| types.lets.get(*i))
                .copied()
                .flatten();
            if let (Some(found), Some(_)) = (found, &l.value.spread) {
                setter.value(
                    &l.value,
                    &format!("`{}`", l.name),
                    found.dimension,
                    Bound::Any,
                );
            }
            setter.knots(&l.value.nominal);
        }
        for signal in &draft.signals {
            setter.knots(&signal.value);
        }
        for e in draft.run.channels.iter().flatten() {
            setter.knots(e);
        }
        let (faults, remarks) = (setter.faults, setter.remarks);
        self.faults.extend(faults);
        self.remarks.extend(remarks);
        if sound_lets {
            self.each_case(&types, &nominal, bad, &later);
            if !bad.adjust {
                self.adjust_ends(&types, &nominal, &later);
            }
        }
        drop(lookup);
        self.types = types;
        nominal
    }

    fn readings_and_claims(&self, setter: &mut Setter<'_>, bad: &Bad, later: &mut Later) {
        for (i, reading) in self.draft.readings.iter().enumerate() {
            let before = setter.faults.len();
            if is(&bad.readings, i) {
                continue;
            }
            setter.reading(&reading.value);
            if setter.faults.len() == before && uses_names(&reading.value) {
                later.readings.push(i);
            }
        }
        for (i, claim) in self.draft.claims.iter().enumerate() {
            let before = setter.faults.len();
            let Some(dimension) = bad.claims.get(i).copied().flatten() else {
                continue;
            };
            setter.claim(claim, dimension);
            if setter.faults.len() == before {
                later.claims.push((i, dimension));
            }
        }
    }

    fn each_case(&mut self, types: &Types, nominal: &Nominal, bad: &Bad, later: &Later) {
        let mut left = MOST;
        for (k, cases) in self.draft.cases.iter().enumerate() {
            if is(&bad.cases, k) || !self.range(types, nominal, cases) {
                continue;
            }
            let Some(rows) = lets::rows(self.draft, self.index, nominal, types, cases) else {
                continue;
            };
            for row in rows {
                let Some(rest) = left.checked_sub(later.count()) else {
                    return;
                };
                left = rest;
                self.case(types, row, later);
            }
        }
    }

    /// The ends of the adjusted let-value: ascending, and each fit to be set up as a case is.
    fn adjust_ends(&mut self, types: &Types, nominal: &Nominal, later: &Later) {
        let Some(adjust) = &self.draft.adjust else {
            return;
        };
        let lookup = lets::lookup(self.index, nominal);
        let mut setter = Setter::new(self.draft, self.index, types, &lookup, Vec::new());
        setter.faults.clear();
        setter.reading(&adjust.reading);
        setter.finite(&adjust.value, "what the reading of `adjust` is to reach");
        let what = "an end of `adjust`";
        let ends = [&adjust.from, &adjust.to].map(|e| setter.finite(e, what));
        let mut faults = setter.faults;
        let name = &adjust.name.text;
        let found = self.index.lets.get(name).and_then(|i| types.lets.get(*i));
        let dimension = found.copied().flatten().map(|t| t.dimension);
        let ([Some(low), Some(high)], Some(dimension)) = (ends, dimension) else {
            self.faults.extend(faults);
            return;
        };
        if low >= high {
            let kind = FaultKind::AdjustOrder {
                low,
                high,
                dimension,
                given: Given::default(),
            };
            faults.push(kind.at(adjust.from.span.to(adjust.to.span)));
        }
        let is_sound = faults.is_empty();
        self.faults.extend(faults);
        if !is_sound {
            return;
        }
        for (value, e) in [(low, &adjust.from), (high, &adjust.to)] {
            let end = LetValue::Number { value, dimension };
            let row = Row {
                set: vec![(name.clone(), end)],
                span: e.span,
            };
            self.case(types, row, later);
        }
    }

    /// Whether the numbers of a range make sense.
    fn range(&mut self, types: &Types, nominal: &Nominal, cases: &Cases) -> bool {
        let CaseValues::Range {
            from,
            to,
            count,
            by_ratio,
            count_span,
        } = &cases.values
        else {
            return true;
        };
        let lookup = lets::lookup(self.index, nominal);
        let mut setter = Setter::new(self.draft, self.index, types, &lookup, Vec::new());
        setter.faults.clear();
        let (a, b) = (setter.finite(from, "a case"), setter.finite(to, "a case"));
        let mut faults = setter.faults;
        if let (Some(a), Some(b)) = (a, b) {
            if *count == 1 && a != b {
                faults.push(FaultKind::CaseCount { count: 1 }.at(*count_span));
            }
            if *by_ratio && a * b <= 0.0 {
                let name = cases
                    .names
                    .first()
                    .and_then(|n| self.index.lets.get(&n.text));
                let found = name.and_then(|i| types.lets.get(*i)).copied().flatten();
                let dimension = found.map_or(Dimension::NONE, |t| t.dimension);
                faults.push(
                    FaultKind::CaseRatio {
                        from: a,
                        to: b,
                        dimension,
                    }
                    .at(from.span.to(to.span)),
                );
            }
        }
        let sound = faults.is_empty() && a.is_some() && b.is_some();
        self.faults.extend(faults);
        sound
    }

    /// One case: at its first fault that is not there as written, one mistake at its value.
    fn case(&mut self, types: &Types, row: Row, later: &Later) {
        let (draft, index) = (self.draft, self.index);
        let case: Vec<String> = row.set.iter().map(|(n, v)| lets::words(n, v)).collect();
        let given = Given {
            case: case.clone(),
            spread: false,
        };
        let (values, mut faults) =
            lets::evaluate(draft, index, types, &row.set, &Moves::default(), &given);
        let lookup = lets::lookup(index, &values);
        let mut setter = Setter::new(draft, index, types, &lookup, case);
        // What the span, the step and the allowed error are as written was said already.
        let written = setter.faults.len();
        faults.extend(
            setter
                .faults
                .drain(..written)
                .filter(|_| uses_some(draft.run.span.as_ref())),
        );
        later.each(&mut setter, draft);
        faults.append(&mut setter.faults);
        if let Some(mut first) = faults.into_iter().next() {
            first.span = row.span;
            self.faults.push(first);
        }
    }
}

/// What a case can change: all that uses a let-value and is sound as written.
#[derive(Default)]
struct Later {
    parts: Vec<usize>,
    readings: Vec<usize>,
    claims: Vec<(usize, Dimension)>,
}

impl Later {
    fn count(&self) -> usize {
        1 + self.parts.len() + self.readings.len() + self.claims.len()
    }

    fn each(&self, setter: &mut Setter<'_>, draft: &crate::Draft) {
        for i in &self.parts {
            setter.look_at(*i);
            if !setter.faults.is_empty() {
                return;
            }
        }
        for e in self.readings.iter().filter_map(|i| draft.readings.get(*i)) {
            setter.reading(&e.value);
        }
        for (i, dimension) in &self.claims {
            if let Some(claim) = draft.claims.get(*i) {
                setter.claim(claim, *dimension);
            }
        }
        if setter.faults.is_empty() && draft.parts.iter().any(is_coupling_of_lets) {
            setter.couplings(&|_| false);
        }
    }
}

fn is(list: &[bool], i: usize) -> bool {
    list.get(i).copied().unwrap_or(false)
}

fn uses_some(e: Option<&Expr>) -> bool {
    e.is_some_and(uses_names)
}

fn uses_names(e: &Expr) -> bool {
    crate::walk::any(e, &|e| matches!(e.kind, ExprKind::Name(_)))
}

fn is_coupling_of_lets(part: &Part) -> bool {
    matches!(&part.kind, PartKind::Coupling(c) if uses_names(&c.factor.nominal))
}

/// Whether any of a part's values uses a name.
fn uses_lets(part: &Part) -> bool {
    let in_slots = slots(&part.kind)
        .iter()
        .any(|s| uses_names(&s.value.nominal));
    let actions = match &part.kind {
        PartKind::Switch(s) => match &s.control {
            Control::Schedule { actions, .. } => actions.as_slice(),
            Control::Ganged(_) => &[],
        },
        PartKind::Changeover(c) => c.actions.as_slice(),
        _ => &[],
    };
    in_slots
        || actions
            .iter()
            .flat_map(|a| &a.triggers)
            .any(|t| match &t.kind {
                TriggerKind::At(v)
                | TriggerKind::When { level: v, .. }
                | TriggerKind::Delay { delay: v, .. } => uses_names(&v.nominal),
                TriggerKind::ZeroCurrent { after } => uses_some(after.as_ref()),
            })
}
