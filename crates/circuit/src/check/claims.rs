//! Claims: limits of the reading's dimension, shares and amounts, the cases they apply to.

use super::Checker;
use super::typing::{Place, Type, shown};
use crate::Dimension;
use crate::draft::{Applies, Claim, Relation};
use crate::expr::Expr;
use crate::fault::{FaultKind, NameSpace};
use crate::index::Item;
use crate::span::Name;

impl Checker<'_> {
    /// Every claim; the dimension of each claim's reading, none where the claim is at fault.
    pub(super) fn claims(&mut self) -> Vec<Option<Dimension>> {
        let draft = self.draft;
        draft.claims.iter().map(|c| self.claim(c)).collect()
    }

    fn claim(&mut self, claim: &Claim) -> Option<Dimension> {
        let before = self.faults.len();
        let reading = self.type_of(&claim.reading, Place::Reading);
        let d = reading.map(|t| t.dimension);
        let what = format!("a limit of `{}`", claim.name);
        match &claim.relation {
            Relation::AtMost(x) | Relation::AtLeast(x) => self.limit(x, &what, d),
            Relation::Between(x, y) => {
                self.limit(x, &what, d);
                self.limit(y, &what, d);
            }
            Relation::Within {
                share,
                amount,
                points,
                of,
            } => {
                self.limit(of, &what, d);
                self.within(claim, [share.as_ref(), amount.as_ref()], points.as_ref(), d);
            }
        }
        if let Some(e) = &claim.allowing {
            let found = self.type_of(e, Place::Constant("an allowance"));
            if let (Some(found), Some(d)) = (found, d) {
                self.wants(e, found, &format!("what `{}` allows", claim.name), d);
            }
        }
        if let Some(e) = &claim.in_shots {
            self.share(e, &format!("the share of shots of `{}`", claim.name));
        }
        for condition in &claim.when {
            self.condition_of_claim(condition);
        }
        d.filter(|_| self.faults.len() == before)
    }

    fn limit(&mut self, e: &Expr, what: &str, d: Option<Dimension>) {
        let found = self.type_of(e, Place::Reading);
        if let (Some(found), Some(d)) = (found, d) {
            self.wants(e, found, what, d);
        }
    }

    /// What stands after `within`: one share, one amount, or percentage points.
    fn within(
        &mut self,
        claim: &Claim,
        given: [Option<&Expr>; 2],
        points: Option<&Expr>,
        d: Option<Dimension>,
    ) {
        let place = Place::Constant("what a claim is within");
        if let Some(e) = points {
            self.percentage_points(claim, e, d);
        }
        let typed: Vec<(&Expr, Option<Type>)> = given
            .into_iter()
            .flatten()
            .map(|e| (e, self.type_of(e, place)))
            .collect();
        let shares = typed
            .iter()
            .filter(|(_, t)| t.is_some_and(|t| t.share))
            .count();
        if typed.len() + usize::from(points.is_some()) == 0
            || shares > 1
            || (points.is_some() && !typed.is_empty())
        {
            self.fault(FaultKind::WithinTwice.at(claim.span));
            return;
        }
        let amounts: Vec<_> = typed
            .into_iter()
            .filter_map(|(e, t)| t.filter(|t| !t.share).map(|t| (e, t)))
            .collect();
        if amounts.len() > 1 {
            self.fault(FaultKind::WithinTwice.at(claim.span));
            return;
        }
        let what = format!("what `{}` is within", claim.name);
        for (e, found) in amounts {
            let Some(d) = d else { return };
            if d.is_none() && found.dimension.is_none() {
                let points = super::typing::literal(e).map(|_| format!("{e} percentage points"));
                self.fault(
                    FaultKind::UnitlessAmount {
                        found: shown(e),
                        points,
                    }
                    .at(e.span),
                );
            } else {
                self.wants(e, found, &what, d);
            }
        }
    }

    fn percentage_points(&mut self, claim: &Claim, e: &Expr, d: Option<Dimension>) {
        let what = format!("percentage points of `{}`", claim.name);
        if let Some(found) = self.of(
            e,
            Place::Constant("percentage points"),
            &what,
            Dimension::NONE,
        ) && found.share
        {
            self.fault(
                FaultKind::UnitlessAmount {
                    found: shown(e),
                    points: None,
                }
                .at(e.span),
            );
        }
        if let Some(is) = d.filter(|d| !d.is_none()) {
            let kind = FaultKind::PointsOfQuantity {
                reading: shown(&claim.reading),
                is,
            };
            self.fault(kind.at(e.span));
        }
    }

    /// The claims whose share and amount stand in each other's place.
    pub(super) fn swapped_claims(&mut self) -> Vec<usize> {
        let draft = self.draft;
        let mut found = Vec::new();
        for (i, claim) in draft.claims.iter().enumerate() {
            let Relation::Within { share, amount, .. } = &claim.relation else {
                continue;
            };
            let is_share = |e: &Option<Expr>| {
                let quiet = &mut Checker::quiet(self.draft, self.index, &self.types);
                e.as_ref()
                    .and_then(|e| quiet.type_of(e, Place::Constant("a share")))
                    .map(|t| t.share)
            };
            if is_share(share) == Some(false) || is_share(amount) == Some(true) {
                found.push(i);
            }
        }
        found
    }

    fn condition_of_claim(&mut self, condition: &Applies) {
        match condition {
            Applies::Compare { left, right, .. } => {
                let (a, b) = (
                    self.type_of(left, Place::When),
                    self.type_of(right, Place::When),
                );
                if let (Some(a), Some(b)) = (a, b) {
                    self.wants(right, b, &shown(left), a.dimension);
                }
            }
            Applies::Circuit { name, .. } => self.circuit_condition(name),
        }
    }

    fn circuit_condition(&mut self, name: &Name) {
        match self.index.names.get(&name.text) {
            Some(Item::Let(i)) => {
                let found = self.types.lets.get(*i).copied().flatten();
                if let Some(is) = found.map(|t| t.dimension).filter(|d| *d != Dimension::OHM) {
                    self.fault(
                        FaultKind::NeverCircuit {
                            name: name.text.clone(),
                            is,
                        }
                        .at(name.span),
                    );
                }
            }
            _ => self.unknown(&name.text, NameSpace::Let, name.span),
        }
    }
}
