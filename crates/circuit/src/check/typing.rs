//! Dimensions all the way through an expression, and what may stand in it.
//!
//! Each expression has a [`Type`], or none where something in it was reported: then nothing
//! that uses it is reported again, so that one cause gives one mistake.

use super::Checker;
use crate::dimension::Dimension;
use crate::expr::{Expr, ExprKind, Function, Operator};
use crate::fault::{FaultKind, NameSpace};
use crate::formula::Formula;
use crate::index::Item;
use crate::span::Span;
use crate::words::text_of;

/// The dimension of an expression, and whether it is a share (written with `%` or `ppm`).
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(crate) struct Type {
    pub dimension: Dimension,
    pub share: bool,
}

impl Type {
    pub const PLAIN: Type = Type::of(Dimension::NONE);

    pub const fn of(dimension: Dimension) -> Self {
        Type {
            dimension,
            share: false,
        }
    }
}

/// Where an expression stands, which decides what may stand in it.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(crate) enum Place {
    /// Numbers and let-values; in the words of the place (`a let-value`).
    Constant(&'static str),
    /// The same in a claim's `when`, where a let-value may be a circuit word.
    When,
    /// Let-values, signals and `t`.
    Source,
    /// The same.
    Signal,
    /// Let-values and edges.
    Delay,
    /// Let-values, readings, phrases and edges.
    Reading,
}

impl Place {
    const fn words(self) -> &'static str {
        match self {
            Place::Constant(words) => words,
            Place::When => "a condition of a claim",
            Place::Source => "a source",
            Place::Signal => "a signal",
            Place::Delay => "a delay",
            Place::Reading => "a reading",
        }
    }

    const fn takes_signals(self) -> bool {
        matches!(self, Place::Source | Place::Signal)
    }

    const fn takes_edges(self) -> bool {
        matches!(self, Place::Delay | Place::Reading)
    }

    const fn names(self) -> NameSpace {
        match self {
            Place::Constant(_) | Place::When | Place::Delay => NameSpace::Let,
            Place::Source | Place::Signal => NameSpace::LetOrSignal,
            Place::Reading => NameSpace::LetOrReading,
        }
    }
}

impl Checker<'_> {
    /// The type of an expression at a place; `None` where a mistake in it is reported.
    pub fn type_of(&mut self, e: &Expr, place: Place) -> Option<Type> {
        match &e.kind {
            ExprKind::Number {
                dimension, share, ..
            } => Some(Type {
                dimension: *dimension,
                share: *share,
            }),
            ExprKind::Pi => Some(Type::PLAIN),
            ExprKind::Time if place.takes_signals() => Some(Type::of(Dimension::SECOND)),
            ExprKind::Time => self.report(
                FaultKind::TimeHere {
                    place: place.words(),
                },
                e.span,
            ),
            ExprKind::Name(name) => self.named(name, e.span, place),
            ExprKind::Negative(a) => self.type_of(a, place),
            ExprKind::Binary {
                operator,
                at,
                left,
                right,
            } => {
                let at = if at.is_some() { *at } else { e.span };
                self.binary(*operator, at, (left, right), place)
            }
            ExprKind::Call {
                function,
                arguments,
            } => self.call(*function, arguments, e.span, place),
            ExprKind::Points { argument, knots } => self.points(argument, knots, place),
            ExprKind::Signal(s) if place.takes_signals() => self.signal(s).map(Type::of),
            ExprKind::Signal(s) if place == Place::Reading => self.report(
                FaultKind::BareSignal {
                    signal: s.to_string(),
                },
                e.span,
            ),
            ExprKind::Signal(s) => self.report(
                FaultKind::SignalHere {
                    signal: s.to_string(),
                    place: place.words(),
                },
                e.span,
            ),
            ExprKind::Reading(p) if place == Place::Reading => self.phrase(p).map(Type::of),
            ExprKind::Reading(p) => self.report(
                FaultKind::ReadingHere {
                    reading: p.to_string(),
                    place: place.words(),
                },
                e.span,
            ),
            ExprKind::Edge(edge) if place.takes_edges() => {
                self.edge(edge).then_some(Type::of(Dimension::SECOND))
            }
            ExprKind::Edge(edge) => self.report(
                FaultKind::EdgeHere {
                    edge: edge.to_string(),
                    place: place.words(),
                },
                e.span,
            ),
            ExprKind::OpenCircuit => self.report(
                FaultKind::CircuitWord {
                    word: "open circuit",
                },
                e.span,
            ),
            ExprKind::ShortCircuit => self.report(
                FaultKind::CircuitWord {
                    word: "short circuit",
                },
                e.span,
            ),
        }
    }

    fn named(&mut self, name: &str, span: Span, place: Place) -> Option<Type> {
        let not_here = |is| FaultKind::NotHere {
            name: name.to_owned(),
            is,
            place: place.words(),
        };
        match self.index.names.get(name).copied() {
            Some(Item::Let(i)) => {
                let circuit = self.types.circuit.get(i).copied().unwrap_or(false);
                if circuit && place != Place::When {
                    return self.report(
                        FaultKind::CircuitLet {
                            name: name.to_owned(),
                        },
                        span,
                    );
                }
                if place != Place::When {
                    self.used_as_number(i);
                }
                self.defined(self.types.lets.get(i).copied().flatten())
            }
            Some(Item::Signal(i)) if place.takes_signals() => {
                self.defined(self.types.signals.get(i).copied().flatten())
            }
            Some(Item::Signal(_)) if place == Place::Reading => self.report(
                FaultKind::BareSignal {
                    signal: name.to_owned(),
                },
                span,
            ),
            Some(Item::Signal(_)) => self.report(not_here(NameSpace::Signal), span),
            Some(Item::Reading(i)) if place == Place::Reading => {
                self.defined(self.types.readings.get(i).copied().flatten())
            }
            Some(Item::Reading(_)) => self.report(not_here(NameSpace::Reading), span),
            None => {
                self.unknown(name, place.names(), span);
                None
            }
        }
    }

    /// The type of a definition; one that has none was reported where it stands.
    pub fn defined(&mut self, found: Option<Type>) -> Option<Type> {
        self.blocked |= found.is_none();
        found
    }

    fn binary(
        &mut self,
        operator: Operator,
        at: Span,
        (left, right): (&Expr, &Expr),
        place: Place,
    ) -> Option<Type> {
        if operator == Operator::Power {
            return self.power(left, right, at, place);
        }
        let (a, b) = (self.type_of(left, place), self.type_of(right, place));
        let (a, b) = (a?, b?);
        let dimension = match operator {
            Operator::Multiply => a.dimension.times(b.dimension),
            Operator::Divide => a.dimension.over(b.dimension),
            _ if a.dimension == b.dimension => {
                return Some(Type {
                    share: a.share && b.share,
                    ..a
                });
            }
            _ => return self.unlike_sum(operator, at, (left, a), (right, b)),
        };
        let share = match operator {
            Operator::Multiply => a.share || b.share,
            _ => a.share && !b.share,
        };
        match dimension {
            Some(dimension) => Some(Type {
                dimension,
                share: share && dimension.is_none(),
            }),
            None => {
                let found = format!("{left} {} {right}", operator.sign());
                self.report(FaultKind::NoSuchUnit { found }, at)
            }
        }
    }

    fn unlike_sum(
        &mut self,
        operator: Operator,
        at: Span,
        (left, a): (&Expr, Type),
        (right, b): (&Expr, Type),
    ) -> Option<Type> {
        let write = if b.share {
            let factor = Expr::binary(operator, Expr::number(1.0, Dimension::NONE), right.clone());
            Some(Expr::binary(Operator::Multiply, left.clone(), factor).to_string())
        } else if b.dimension.is_none() {
            with_unit(right, a.dimension).map(|r| format!("{left} {} {r}", operator.sign()))
        } else {
            None
        };
        let (left, right) = (shown(left), shown(right));
        let kind = FaultKind::UnlikeSum {
            left,
            left_is: a.dimension,
            right,
            right_is: b.dimension,
            write,
        };
        self.report(kind, at)
    }

    fn power(&mut self, base: &Expr, exponent: &Expr, at: Span, place: Place) -> Option<Type> {
        let base_type = self.type_of(base, place);
        let exponent_type = self.type_of(exponent, place);
        let (b, e) = (base_type?, exponent_type?);
        if !e.dimension.is_none() {
            let kind = FaultKind::PlainArgument {
                function: "^",
                found: shown(exponent),
                is: e.dimension,
            };
            return self.report(kind, exponent.span);
        }
        if b.dimension.is_none() {
            return Some(Type::PLAIN);
        }
        match written_number(exponent) {
            None => {
                let (base, exponent) = (shown(base), shown(exponent));
                self.report(
                    FaultKind::PowerOfQuantity {
                        base,
                        base_is: b.dimension,
                        exponent,
                    },
                    at,
                )
            }
            Some(x) => match b.dimension.power(x) {
                Some(dimension) => Some(Type::of(dimension)),
                None => {
                    let found = format!("`({base})^{exponent}`");
                    self.report(FaultKind::NoSuchUnit { found }, at)
                }
            },
        }
    }

    fn call(
        &mut self,
        function: Function,
        arguments: &[Expr],
        span: Span,
        place: Place,
    ) -> Option<Type> {
        let several = matches!(function, Function::Min | Function::Max);
        if if several {
            arguments.len() < 2
        } else {
            arguments.len() != 1
        } {
            let (function, count) = (function.name(), arguments.len());
            return self.report(
                FaultKind::ArgumentCount {
                    function,
                    count,
                    several,
                },
                span,
            );
        }
        let types: Vec<Option<Type>> = arguments.iter().map(|a| self.type_of(a, place)).collect();
        let types: Vec<Type> = types.into_iter().collect::<Option<_>>()?;
        let first = types.first().copied()?;
        match function {
            Function::Sqrt => match first.dimension.power(0.5) {
                Some(dimension) => Some(Type::of(dimension)),
                None => {
                    let found = arguments
                        .first()
                        .map_or_else(String::new, |a| format!("`sqrt({a})`"));
                    self.report(FaultKind::NoSuchUnit { found }, span)
                }
            },
            Function::Abs | Function::Ramp => Some(first),
            Function::Sign | Function::Step => Some(Type::PLAIN),
            Function::Min | Function::Max => {
                let pairs = arguments.iter().zip(types);
                self.alike(&format!("`{}`", function.name()), pairs)
            }
            _ if first.dimension.is_none() => Some(Type::PLAIN),
            _ => {
                let (function, found) = (
                    function.name(),
                    arguments.first().map_or_else(String::new, shown),
                );
                let at = arguments.first().map_or(span, |a| a.span);
                self.report(
                    FaultKind::PlainArgument {
                        function,
                        found,
                        is: first.dimension,
                    },
                    at,
                )
            }
        }
    }

    /// The common type of things that must be alike; a fault at the first that is not.
    fn alike<'e>(
        &mut self,
        of: &str,
        mut all: impl Iterator<Item = (&'e Expr, Type)>,
    ) -> Option<Type> {
        let (e, mut first) = all.next()?;
        for (other, t) in all {
            if t.dimension != first.dimension {
                let (first_is, other_is) = (first.dimension, t.dimension);
                let (first, other_text) = (shown(e), shown(other));
                let of = of.to_owned();
                let kind = FaultKind::UnlikeArguments {
                    of,
                    first,
                    first_is,
                    other: other_text,
                    other_is,
                };
                return self.report(kind, other.span);
            }
            first.share &= t.share;
        }
        Some(first)
    }

    fn points(&mut self, argument: &Expr, knots: &[(Expr, Expr)], place: Place) -> Option<Type> {
        let of_signal = crate::walk::any(argument, &|e| match &e.kind {
            ExprKind::Signal(_) => true,
            ExprKind::Name(name) => matches!(self.index.names.get(name), Some(Item::Signal(_))),
            _ => false,
        });
        if of_signal && place.takes_signals() {
            let kind = FaultKind::PointsOfSignal {
                argument: shown(argument),
            };
            return self.report(kind, argument.span);
        }
        if knots.is_empty() {
            let kind = FaultKind::ArgumentCount {
                function: "points",
                count: 0,
                several: false,
            };
            return self.report(kind, argument.span);
        }
        let argument_type = self.type_of(argument, place);
        let (mut whole, mut ordinates) = (argument_type.is_some(), Vec::with_capacity(knots.len()));
        for (x, y) in knots {
            let at = Place::Constant("a knot of `points`");
            let (tx, ty) = (self.type_of(x, at), self.type_of(y, at));
            if let (Some(tx), Some(argument)) = (tx, argument_type) {
                whole &= self.wants(x, tx, "an abscissa of `points`", argument.dimension);
            }
            whole &= tx.is_some();
            match ty {
                Some(ty) => ordinates.push((y, ty)),
                None => whole = false,
            }
        }
        let common = self.alike("`points`", ordinates.into_iter());
        common.filter(|_| whole)
    }

    /// Whether a type is of the wanted dimension; a fault at the value where not.
    pub fn wants(&mut self, e: &Expr, found: Type, what: &str, wants: Dimension) -> bool {
        if found.dimension == wants {
            return true;
        }
        let (what, text) = (what.to_owned(), shown(e));
        let kind = if found.dimension.is_none() {
            let write = if found.share {
                None
            } else {
                with_unit(e, wants)
            };
            FaultKind::NeedsUnit {
                what,
                wants,
                found: text,
                write,
            }
        } else {
            FaultKind::WrongDimension {
                what,
                wants,
                found: text,
                is: found.dimension,
            }
        };
        self.fault(kind.at(e.span));
        false
    }

    /// An expression that must be of a dimension.
    pub fn of(&mut self, e: &Expr, place: Place, what: &str, wants: Dimension) -> Option<Type> {
        let found = self.type_of(e, place)?;
        self.wants(e, found, what, wants).then_some(found)
    }

    /// An expression that must be a share.
    pub fn share(&mut self, e: &Expr, what: &str) -> bool {
        let Some(found) = self.type_of(e, Place::Constant("a share")) else {
            return false;
        };
        if found.share {
            return true;
        }
        let what = what.to_owned();
        if found.dimension.is_none() {
            let write = literal(e).map(crate::words::share);
            self.fault(
                FaultKind::NeedsShare {
                    what,
                    found: shown(e),
                    write,
                }
                .at(e.span),
            );
        } else {
            self.wants(e, found, &what, Dimension::NONE);
        }
        false
    }
}

/// An expression in a message: a number as it is, all else in backticks.
pub(crate) fn shown(e: &Expr) -> String {
    if literal(e).is_some() {
        e.to_string()
    } else {
        format!("`{e}`")
    }
}

/// The value of a number with or without a sign.
pub(crate) fn literal(e: &Expr) -> Option<f64> {
    match &e.kind {
        ExprKind::Number { value, .. } => Some(*value),
        ExprKind::Negative(a) => match &a.kind {
            ExprKind::Number { value, .. } => Some(-value),
            _ => None,
        },
        _ => None,
    }
}

/// A plain number with the unit that it lacks: `50 ohm`.
fn with_unit(e: &Expr, wants: Dimension) -> Option<String> {
    let unit = wants.unit();
    let number = text_of(literal(e)?, Dimension::NONE, false);
    (!unit.starts_with('1')).then(|| format!("{number} {unit}"))
}

/// The number of an expression of numbers, signs, operators and brackets.
fn written_number(e: &Expr) -> Option<f64> {
    fn formula(e: &Expr) -> Option<Formula> {
        let boxed = |e: &Expr| formula(e).map(Box::new);
        Some(match &e.kind {
            ExprKind::Number { value, .. } => Formula::Number(*value),
            ExprKind::Negative(a) => Formula::Negative(boxed(a)?),
            ExprKind::Binary {
                operator,
                left,
                right,
                ..
            } => {
                let (a, b) = (boxed(left)?, boxed(right)?);
                match operator {
                    Operator::Add => Formula::Add(a, b),
                    Operator::Subtract => Formula::Subtract(a, b),
                    Operator::Multiply => Formula::Multiply(a, b),
                    Operator::Divide => Formula::Divide(a, b),
                    Operator::Power => Formula::Power(a, b),
                }
            }
            _ => return None,
        })
    }
    formula(e).map(|f| f.at(0.0)).filter(|x| x.is_finite())
}
