//! Faults in words: code, message, label, and what to write instead.

use crate::dimension::Dimension;
use crate::fault::kind::{FaultKind, NameSpace};
use crate::words::{quantity, share};

impl FaultKind {
    /// Its code.
    #[must_use]
    pub const fn code(&self) -> &'static str {
        use FaultKind as K;
        match self {
            K::NeedsUnit { .. } => "P0107",
            K::WrongDimension { .. } => "P0150",
            K::UnlikeSum { .. } => "P0151",
            K::NeedsShare { .. } => "P0152",
            K::UnlikeArguments { .. } => "P0153",
            K::PowerOfQuantity { .. } => "P0154",
            K::PlainArgument { .. } => "P0155",
            K::NoSuchUnit { .. } => "P0156",
            K::NotFinite { .. } => "P0157",
            K::OutOfRange { .. } => "P0158",
            K::CircuitWord { .. } => "P0159",
            K::CircuitLet { .. } => "P0160",
            K::KnotOrder { .. } => "P0161",
            K::TooDeep { .. } => "P0162",
            K::PointsOfSignal { .. } => "P0163",
            K::SpreadOrder { .. } => "P0164",
            K::ArgumentCount { .. } => "P0165",
            K::BadName { .. } => "P0250",
            K::Reserved { .. } => "P0251",
            K::Twice { .. } => "P0252",
            K::Unknown {
                space: NameSpace::Part,
                ..
            } => "P0253",
            K::Unknown {
                space: NameSpace::Node,
                ..
            } => "P0254",
            K::Unknown { .. } => "P0255",
            K::NotHere { .. } => "P0256",
            K::Circle { .. } => "P0257",
            K::NotOverridable { .. } => "P0258",
            K::PartKind { .. } => "P0350",
            K::AcrossChangeover { .. } => "P0351",
            K::TimeHere { .. } => "P0352",
            K::SignalHere { .. } => "P0353",
            K::ReadingHere { .. } => "P0354",
            K::EdgeHere { .. } => "P0355",
            K::BareSignal { .. } => "P0356",
            K::ConstantSignal { .. } => "P0357",
            K::CoupledToItself { .. } => "P0358",
            K::CoupledTwice { .. } => "P0359",
            K::NotPositiveDefinite { .. } => "P0360",
            K::NotItsNode { .. } => "P0361",
            K::SameContacts { .. } => "P0362",
            K::NotLinear { .. } => "P0363",
            K::OutsideSpan { .. } => "P0364",
            K::WindowOrder { .. } => "P0365",
            K::NeedsWindow { .. } => "P0366",
            K::NoWindow { .. } => "P0367",
            K::PhaseNumber => "P0368",
            K::FractionOrder { .. } => "P0369",
            K::TooLarge { .. } => "P0370",
            K::NeverCircuit { .. } => "P0371",
            K::Misplaced { .. } => "P0372",
            K::InstantOrder { .. } => "P0450",
            K::TwoInstants => "P0451",
            K::WrongAction { .. } => "P0452",
            K::NoTrigger { .. } => "P0453",
            K::NoSpan => "P0550",
            K::LimitOrder { .. } => "P0551",
            K::UnitlessAmount { .. } => "P0552",
            K::PointsOfQuantity { .. } => "P0553",
            K::WithinTwice => "P0554",
            K::CasesTwice { .. } => "P0555",
            K::CaseCount { .. } => "P0556",
            K::CaseWidth { .. } => "P0557",
            K::CaseRatio { .. } => "P0558",
            K::TooManyCases { .. } => "P0559",
            K::CaseUsesVaried { .. } => "P0560",
            K::ZeroLimit { .. } => "P0561",
            K::TooManyParts { .. } => "P0562",
            K::AdjustVaried { .. } => "P0563",
            K::AdjustOrder { .. } => "P0564",
            K::NoGround { .. } => "P0701",
            K::PartlyWindowed { .. } => "R0350",
            K::PastSpan { .. } => "R0450",
            K::OneNode { .. } => "R0701",
            K::LonelyNode { .. } => "R0702",
        }
    }

    pub(super) fn message(&self) -> String {
        self.value_message()
            .or_else(|| self.name_message())
            .or_else(|| self.phrase_message())
            .or_else(|| self.run_message())
            .unwrap_or_default()
    }

    fn value_message(&self) -> Option<String> {
        use FaultKind as K;
        Some(match self {
            K::NeedsUnit {
                what, wants, found, ..
            } => format!("{what} needs {}, and {found} has no unit", thing(*wants)),
            K::WrongDimension {
                what,
                wants,
                found,
                is,
            } => {
                format!(
                    "{what} needs {}, and {found} is {}",
                    thing(*wants),
                    thing(*is)
                )
            }
            K::UnlikeSum {
                left,
                left_is,
                right,
                right_is,
                ..
            } => {
                let (l, r) = (thing(*left_is), thing(*right_is));
                format!("a sum needs like things, and {left} is {l}, {right} is {r}")
            }
            K::UnlikeArguments {
                of,
                first,
                first_is,
                other,
                other_is,
            } => {
                format!(
                    "{of} needs like things, and {first} is {}, {other} is {}",
                    thing(*first_is),
                    thing(*other_is)
                )
            }
            K::NeedsShare { what, found, .. } => {
                format!("{what} needs a share, and {found} is written without `%` or `ppm`")
            }
            K::PowerOfQuantity {
                base,
                base_is,
                exponent,
            } => format!(
                "a quantity with a unit is raised only to written numbers, and {base} is {}, {exponent} no written number",
                thing(*base_is)
            ),
            K::PlainArgument {
                function,
                found,
                is,
            } => {
                format!(
                    "`{function}` takes a number without a unit, and {found} is {}",
                    thing(*is)
                )
            }
            K::NoSuchUnit { found } => {
                format!("{found} has a unit with exponents that are not kept")
            }
            K::NotFinite { what, given } => format!("{what} is no finite number{given}"),
            K::OutOfRange {
                what,
                bound,
                value,
                dimension,
                share: is_share,
                given,
            } => {
                let is = if *is_share {
                    share(*value)
                } else {
                    quantity(*value, *dimension)
                };
                let wants = if *is_share {
                    "a share"
                } else {
                    thing_or_number(*dimension)
                };
                format!(
                    "{what} needs {wants} {}, and it is {is}{given}",
                    bound.words(*dimension, *is_share)
                )
            }
            K::CircuitWord { word } => {
                format!("`{word}` is only a resistor's whole value, or a let-value's")
            }
            K::CircuitLet { name } => {
                format!(
                    "`{name}` can be an open or a short circuit, so that it stands only as a resistor's whole value"
                )
            }
            K::KnotOrder {
                before,
                after,
                dimension,
            } => format!(
                "the abscissas of `points` ascend, each at most twice, and {} is followed by {}",
                quantity(*before, *dimension),
                quantity(*after, *dimension)
            ),
            K::ArgumentCount {
                function: "points", ..
            } => "`points` takes one knot or more, and this has none".to_owned(),
            K::ArgumentCount {
                function,
                count,
                several,
            } => {
                let wants = if *several {
                    "two or more values"
                } else {
                    "one value"
                };
                format!("`{function}` takes {wants}, and this has {count}")
            }
            K::TooDeep { deepest } => format!("the expression is nested more than {deepest} deep"),
            K::PointsOfSignal { argument } => {
                format!("`points` takes `t` or let-values, and {argument} is a signal")
            }
            K::SpreadOrder { low, high } => {
                format!("a tolerance's limits ascend, and {low} is not below {high}")
            }
            _ => return None,
        })
    }

    fn name_message(&self) -> Option<String> {
        use FaultKind as K;
        Some(match self {
            K::BadName { name } => {
                format!("`{name}` is no name: an ASCII letter, then letters, digits and `_`")
            }
            K::Reserved { name, space, .. } => {
                format!(
                    "a {} cannot be called `{name}`, which the language needs for itself",
                    space.word()
                )
            }
            K::Twice {
                name,
                first,
                second,
            } if first == second => format!("there are two {first}s called `{name}`"),
            K::Twice {
                name,
                first,
                second,
            } => format!("`{name}` is the name of a {first} and of a {second}"),
            K::Unknown {
                name,
                space,
                also: Some(also),
                ..
            } => {
                format!(
                    "there is no {} called `{name}`; that is a {also}",
                    space.word()
                )
            }
            K::Unknown { name, space, .. } => {
                format!("there is no {} called `{name}`", space.word())
            }
            K::NotHere { name, is, place } => {
                format!("`{name}` is a {}, and {place} uses none", is.word())
            }
            K::Circle { path, verb } => circle(path, verb),
            K::NotOverridable { name } => {
                format!(
                    "`{name}` is used as a number, so that it cannot be an open or a short circuit"
                )
            }
            _ => return None,
        })
    }

    fn phrase_message(&self) -> Option<String> {
        use FaultKind as K;
        Some(match self {
            K::PartKind {
                phrase,
                wants,
                part,
                is,
            } => {
                format!(
                    "`{phrase}` takes {wants}, and `{part}` is {}",
                    with_article(is)
                )
            }
            K::AcrossChangeover { part, .. } => {
                format!("`{part}` is a changeover, which has no one voltage across it")
            }
            K::TimeHere { place } => {
                format!("`t` stands in sources and signals, and {place} does not change with time")
            }
            K::SignalHere { signal, place } => {
                format!("`{signal}` is a signal, and {place} uses none")
            }
            K::ReadingHere { reading, place } => {
                format!("`{reading}` is a reading, and {place} uses none")
            }
            K::EdgeHere { edge, place } => format!("`{edge}` is an edge, and {place} uses none"),
            K::BareSignal { signal } => {
                format!("`{signal}` is a signal, and a reading is one number of it")
            }
            K::ConstantSignal { found } => format!("a signal is needed, and {found} is a constant"),
            K::CoupledToItself { part } => format!("`{part}` is coupled to itself"),
            K::CoupledTwice {
                first,
                second,
                earlier,
            } => {
                format!("`{first}` and `{second}` are coupled already, by `{earlier}`")
            }
            K::NotPositiveDefinite { windings } => format!(
                "the couplings of {} contradict each other: their inductances are not positive definite",
                listed(windings)
            ),
            K::NotItsNode {
                part,
                node,
                first,
                second,
            } => {
                format!("`{part}` rests at `{first}` or `{second}`, and `{node}` is neither")
            }
            K::SameContacts { part, node } => format!("both contacts of `{part}` are on `{node}`"),
            K::NotLinear {
                what,
                found,
                changes: true,
            } => {
                format!(
                    "{what} is to be linear in its signals, and the factor before {found} changes with time"
                )
            }
            K::NotLinear { what, found, .. } => {
                format!("{what} is to be linear in its signals, and {found} is not")
            }
            K::OutsideSpan { time, span } => format!(
                "a time lies between 0 s and the span of {}, and this is {}",
                quantity(*span, Dimension::SECOND),
                quantity(*time, Dimension::SECOND)
            ),
            K::WindowOrder { start, end } => format!(
                "a window ends after its start, and {} is not after {}",
                quantity(*end, Dimension::SECOND),
                quantity(*start, Dimension::SECOND)
            ),
            K::NeedsWindow { phrase } => format!("`{phrase}` needs a window"),
            K::NoWindow { phrase } => format!("`{phrase}` takes no window"),
            K::PhaseNumber => "phases are counted from 1".to_owned(),
            K::FractionOrder {
                phrase,
                from,
                to,
                rising,
            } => {
                let way = if *rising {
                    "a lower to a higher"
                } else {
                    "a higher to a lower"
                };
                format!(
                    "`{phrase}` goes from {way} fraction, and this is from {} to {}",
                    share(*from),
                    share(*to)
                )
            }
            K::TooLarge { name } => format!("`{name}` grows too large with all that it uses"),
            K::NeverCircuit { name, is } => format!(
                "`{name}` is {}, and never an open or a short circuit",
                thing(*is)
            ),
            K::Misplaced {
                qualifier,
                follows,
                part: Some(part),
            } => {
                format!("`{qualifier}` follows {follows}, and this follows `{part}`")
            }
            K::Misplaced {
                qualifier, follows, ..
            } => format!("`{qualifier}` follows {follows}, and there is none"),
            K::PartlyWindowed { with, without } => {
                format!("`{with}` has a window, and `{without}` in the same sum has none")
            }
            _ => return None,
        })
    }

    fn run_message(&self) -> Option<String> {
        use FaultKind as K;
        let time = |t: f64| quantity(t, Dimension::SECOND);
        Some(match self {
            K::InstantOrder { earlier, later } => {
                format!(
                    "the instants of a schedule rise, and {} follows {}",
                    time(*later),
                    time(*earlier)
                )
            }
            K::TwoInstants => {
                "an action takes one `at` among its triggers, and this is the second".to_owned()
            }
            K::WrongAction { part, is, action } => {
                format!("`{part}` is {}, and never {action}", with_article(is))
            }
            K::NoTrigger { part } => format!("an action of `{part}` has nothing that sets it off"),
            K::PastSpan {
                part,
                time: t,
                span,
            } => {
                format!(
                    "`{part}` would act at {}, after the span of {}",
                    time(*t),
                    time(*span)
                )
            }
            K::NoSpan => "the circuit states no `span`: how long the shot is followed".to_owned(),
            K::LimitOrder {
                low,
                high,
                dimension,
                given,
            } => format!(
                "`between` needs ascending limits, and {} is not below {}{given}",
                quantity(*low, *dimension),
                quantity(*high, *dimension)
            ),
            K::UnitlessAmount { found, .. } => {
                format!(
                    "the reading has no unit, so that {found} could be a share of the target or an amount"
                )
            }
            K::PointsOfQuantity { reading, is } => {
                format!(
                    "percentage points are of a reading without a unit, and {reading} is {}",
                    thing(*is)
                )
            }
            K::WithinTwice => "`within` takes one share and one amount".to_owned(),
            K::CasesTwice { name } => format!("`{name}` is varied by two `cases` statements"),
            K::CaseCount { count: 0 } => "a range needs at least one value".to_owned(),
            K::CaseCount { count } => {
                format!("a range with different ends needs more values than {count}")
            }
            K::CaseWidth { names, values } => format!(
                "each case needs {}, and this has {values}",
                counted(*names, "value")
            ),
            K::CaseRatio {
                from,
                to,
                dimension,
            } => format!(
                "an equal ratio needs ends of one sign, not 0, and these are {} and {}",
                quantity(*from, *dimension),
                quantity(*to, *dimension)
            ),
            K::TooManyCases { count, most } => format!("there are {count} cases, more than {most}"),
            K::CaseUsesVaried { name, varied } => {
                format!("the cases of `{name}` use `{varied}`, which is varied as well")
            }
            K::AdjustVaried { name, by } => {
                format!("`{name}` is adjusted, and {by} gives it a value as well")
            }
            K::AdjustOrder {
                low,
                high,
                dimension,
                given,
            } => format!(
                "`adjust` needs ascending ends, and {} is not below {}{given}",
                quantity(*low, *dimension),
                quantity(*high, *dimension)
            ),
            K::ZeroLimit { limit } => format!("a limit of 0 {limit} lets nothing run"),
            K::TooManyParts { count, limit } => {
                format!("there are {count} parts, more than the limit of {limit}")
            }
            K::NoGround { .. } => {
                "the circuit never touches `ground`, the reference node".to_owned()
            }
            K::OneNode { part, node } => format!("both ends of `{part}` are on `{node}`"),
            K::LonelyNode { node, part, .. } => format!("only `{part}` touches `{node}`"),
            _ => return None,
        })
    }

    pub(super) fn label(&self) -> Option<String> {
        use FaultKind as K;
        Some(match self {
            K::WrongDimension { wants, .. } if !wants.is_none() => {
                format!("a value in {}", wants.unit())
            }
            K::Unknown {
                near: Some(near), ..
            } => format!("`{near}` is near"),
            K::NoGround { near: Some(near) } => {
                format!("if `{near}` is the reference, it is to be called `ground`")
            }
            K::BareSignal { signal } => {
                format!("`final {signal}`, `highest {signal}` or `{signal} at 1 ms`")
            }
            K::ConstantSignal { .. } => "a signal, or a constant by its name".to_owned(),
            K::Twice { .. } => "given a second time here".to_owned(),
            K::Circle { .. } => "the circle starts here".to_owned(),
            K::LonelyNode {
                near: Some(near), ..
            } => format!("is `{near}` meant?"),
            K::PartlyWindowed { .. } => "a window belongs to the one phrase before it".to_owned(),
            _ => return None,
        })
    }

    pub(super) fn write(&self) -> Option<String> {
        use FaultKind as K;
        match self {
            K::NeedsUnit { write, .. }
            | K::NeedsShare { write, .. }
            | K::UnlikeSum { write, .. } => write.clone(),
            K::UnitlessAmount { points, .. } => points.clone(),
            K::Reserved { offer, .. } => Some(offer.clone()),
            K::Unknown { near, .. } => near.clone(),
            K::BareSignal { signal } => Some(format!("final {signal}")),
            K::AcrossChangeover { common, .. } => Some(format!("voltage at {common}")),
            K::NoSpan => Some("span 10 ms".to_owned()),
            K::TooManyParts { count, .. } => Some(format!("limit parts {count}")),
            _ => None,
        }
    }
}

/// A quantity with its article, else its unit: `a resistance`, `a value in V/s`.
fn thing(d: Dimension) -> String {
    d.quantity()
        .map_or_else(|| format!("a value in {}", d.unit()), str::to_owned)
}

fn thing_or_number(d: Dimension) -> &'static str {
    if d.is_none() {
        "a number"
    } else {
        d.quantity().unwrap_or("a value")
    }
}

/// A noun with `a` or `an`.
fn with_article(noun: &str) -> String {
    let article = if noun.starts_with(['a', 'e', 'i', 'o']) {
        "an"
    } else {
        "a"
    };
    format!("{article} {noun}")
}

fn counted(n: usize, noun: &str) -> String {
    format!("{n} {noun}{}", if n == 1 { "" } else { "s" })
}

fn listed(names: &[String]) -> String {
    let shown: Vec<String> = names.iter().take(6).map(|n| format!("`{n}`")).collect();
    let more = if names.len() > shown.len() {
        ", …"
    } else {
        ""
    };
    format!("{}{more}", shown.join(", "))
}

/// `` `a` is in a circle: `a` uses `b`, `b` uses `a` ``
fn circle(path: &[String], verb: &str) -> String {
    let first = path.first().map_or("", String::as_str);
    let next = path.iter().skip(1).chain(path.first());
    let steps: Vec<String> = path
        .iter()
        .zip(next)
        .take(6)
        .map(|(a, b)| format!("`{a}` {verb} `{b}`"))
        .collect();
    let more = if path.len() > steps.len() {
        ", …"
    } else {
        ""
    };
    format!("`{first}` is in a circle: {}{more}", steps.join(", "))
}
