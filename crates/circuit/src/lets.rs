//! The numbers of let-values, each after those that it uses, and the cases that vary them.

use std::collections::HashMap;

use crate::check::{Nominal, Types};
use crate::circuit::LetValue;
use crate::draft::{CaseValues, Cases, Draft};
use crate::expr::{Expr, ExprKind};
use crate::fault::{Fault, FaultKind, Given};
use crate::index::Index;
use crate::numbers::{Numbers, Setter};
use crate::span::Span;
use crate::spread::Value;
use crate::vary::Moves;

/// Let-values by name, in place of what is written.
pub(crate) type Set = Vec<(String, LetValue)>;

/// Evaluates every let-value whose type is known; a number that is not finite is a fault.
pub(crate) fn evaluate(
    draft: &Draft,
    index: &Index,
    types: &Types,
    overrides: &[(String, LetValue)],
    moves: &Moves,
    given: &Given,
) -> (Nominal, Vec<Fault>) {
    let mut values: Nominal = vec![None; draft.lets.len()];
    let mut faults = Vec::new();
    let set: HashMap<&str, LetValue> = overrides.iter().map(|(n, v)| (n.as_str(), *v)).collect();
    for i in &index.let_order {
        let Some(l) = draft.lets.get(*i) else {
            continue;
        };
        let Some(found) = types.lets.get(*i).copied().flatten() else {
            continue;
        };
        let value = match set.get(l.name.text.as_str()) {
            Some(value) => Some(*value),
            None => constant(draft, index, &values, &l.value.nominal).map(|v| {
                v.unwrap_or_else(|x| LetValue::Number {
                    value: x,
                    dimension: found.dimension,
                })
            }),
        };
        let value = match (value, moves.of(&l.value)) {
            (Some(LetValue::Number { value, dimension }), Some(p)) => {
                let numbers = &lookup(index, &values);
                let value = moved(draft, index, types, numbers, (&l.value, p), value);
                Some(LetValue::Number { value, dimension })
            }
            (value, _) => value,
        };
        let value = match value {
            Some(LetValue::Number { value, .. }) if !value.is_finite() => {
                let kind = FaultKind::NotFinite {
                    what: format!("`{}`", l.name),
                    given: given.clone(),
                };
                faults.push(kind.at(l.value.nominal.span));
                None
            }
            other => other,
        };
        if let Some(place) = values.get_mut(*i) {
            *place = value;
        }
    }
    (values, faults)
}

/// A let-value's number at a position within its spread.
fn moved(
    draft: &Draft,
    index: &Index,
    types: &Types,
    lookup: &dyn Fn(&str) -> Option<LetValue>,
    (value, p): (&Value, f64),
    x: f64,
) -> f64 {
    let setter = Setter::new(draft, index, types, lookup, Vec::new());
    value
        .spread
        .as_ref()
        .map_or(x, |s| setter.shift(&s.kind, p).of(x))
}

/// A circuit word, or the number of an expression of the let-values known so far.
fn constant(
    draft: &Draft,
    index: &Index,
    values: &Nominal,
    e: &Expr,
) -> Option<Result<LetValue, f64>> {
    match e.kind {
        ExprKind::OpenCircuit => return Some(Ok(LetValue::Open)),
        ExprKind::ShortCircuit => return Some(Ok(LetValue::Short)),
        _ => {}
    }
    let lookup = lookup(index, values);
    Numbers {
        draft,
        index,
        lookup: &lookup,
    }
    .number(e)
    .ok()
    .map(Err)
}

/// Finds let-values by name.
pub(crate) fn lookup<'a>(
    index: &'a Index,
    values: &'a Nominal,
) -> impl Fn(&str) -> Option<LetValue> + 'a {
    |name| {
        index
            .lets
            .get(name)
            .and_then(|i| values.get(*i))
            .copied()
            .flatten()
    }
}

/// One case of a statement: the let-values that it sets, and where the first stands.
pub(crate) struct Row {
    pub set: Set,
    pub span: Span,
}

/// The cases of one statement, at the let-values as written or held. `None` where a value has
/// no number.
pub(crate) fn rows(
    draft: &Draft,
    index: &Index,
    values: &Nominal,
    types: &Types,
    cases: &Cases,
) -> Option<Vec<Row>> {
    let dimension = |name: &str| {
        let i = index.lets.get(name)?;
        types.lets.get(*i).copied().flatten().map(|t| t.dimension)
    };
    let value = |name: &str, e: &Expr| {
        if let ExprKind::Name(other) = &e.kind
            && let Some(word @ (LetValue::Open | LetValue::Short)) = lookup(index, values)(other)
        {
            return Some(word);
        }
        let dimension = dimension(name)?;
        Some(
            constant(draft, index, values, e)?
                .unwrap_or_else(|value| LetValue::Number { value, dimension }),
        )
    };
    match &cases.values {
        CaseValues::Rows(rows) => rows
            .iter()
            .map(|row| {
                let pairs = cases.names.iter().zip(row);
                let set = pairs
                    .map(|(n, e)| Some((n.text.clone(), value(&n.text, e)?)))
                    .collect::<Option<_>>()?;
                Some(Row {
                    set,
                    span: row.first().map_or(cases.span, |e| e.span),
                })
            })
            .collect(),
        CaseValues::Range {
            from,
            to,
            count,
            by_ratio,
            ..
        } => {
            let name = &cases.names.first()?.text;
            let (
                LetValue::Number {
                    value: a,
                    dimension,
                },
                LetValue::Number { value: b, .. },
            ) = (value(name, from)?, value(name, to)?)
            else {
                return None;
            };
            let row = |x: f64| Row {
                set: vec![(
                    name.clone(),
                    LetValue::Number {
                        value: x,
                        dimension,
                    },
                )],
                span: from.span,
            };
            Some(
                steps(a, b, *count, *by_ratio)
                    .into_iter()
                    .map(row)
                    .collect(),
            )
        }
    }
}

/// `count` values from `a` to `b`, both ends exact, by equal difference or equal ratio.
fn steps(a: f64, b: f64, count: u32, by_ratio: bool) -> Vec<f64> {
    let last = count.saturating_sub(1);
    (0..count)
        .map(|i| match i {
            0 => a,
            i if i == last => b,
            i => {
                let part = f64::from(i) / f64::from(last);
                if by_ratio {
                    a * (b / a).powf(part)
                } else {
                    a + (b - a) * part
                }
            }
        })
        .collect()
}

/// The cases of a statement without the let-values that are held: the others still move, each
/// combination once.
pub(crate) fn without(rows: Vec<Row>, held: &[(String, LetValue)]) -> Vec<Set> {
    let is_held = |name: &str| held.iter().any(|(n, _)| n == name);
    let mut any_held = false;
    let mut sets: Vec<Set> = Vec::with_capacity(rows.len());
    for row in rows {
        let n = row.set.len();
        let set: Set = row
            .set
            .into_iter()
            .filter(|(name, _)| !is_held(name))
            .collect();
        any_held |= set.len() < n;
        if !(any_held && sets.contains(&set)) {
            sets.push(set);
        }
    }
    sets
}

/// A let-value as a case states it: `` `load` = 50 ohm ``.
pub(crate) fn words(name: &str, value: &LetValue) -> String {
    match value {
        LetValue::Number { value, dimension } => {
            format!("`{name}` = {}", crate::words::quantity(*value, *dimension))
        }
        LetValue::Open => format!("`{name}` = open circuit"),
        LetValue::Short => format!("`{name}` = short circuit"),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_range_has_both_ends_exactly() {
        assert_eq!(
            steps(25.0, 175.0, 7, false),
            [25.0, 50.0, 75.0, 100.0, 125.0, 150.0, 175.0]
        );
        let by_ratio = steps(0.1, 10.0, 5, true);
        assert_eq!((by_ratio[0], by_ratio[4]), (0.1, 10.0));
        assert!((by_ratio[2] - 1.0).abs() < 1e-15);
    }

    #[test]
    fn one_value_is_its_start() {
        assert_eq!(steps(3.0, 3.0, 1, false), [3.0]);
    }
}
