//! Expressions as written: numbers with dimensions, names, operators, functions, phrases.
//!
//! One kind of expression serves let-values, sources, signals, readings and claims; what may
//! stand in which of them is checked when a [`Draft`](crate::Draft) is.

use crate::dimension::Dimension;
use crate::phrase::{Edge, Phrase, Signal};
use crate::span::Span;

/// An expression and its place.
#[derive(Clone, Debug, PartialEq)]
pub struct Expr {
    /// What it is.
    pub kind: ExprKind,
    /// Where it stands, from its first to its last character.
    pub span: Span,
}

/// The forms of an expression.
#[derive(Clone, Debug, PartialEq)]
#[non_exhaustive]
pub enum ExprKind {
    /// A number in coherent SI units of its dimension (`5 kV` is 5000 with the dimension of
    /// volt). `share` is true where it was written with `%` or `ppm`, `plain` dimension then.
    Number {
        /// The value in coherent SI units.
        value: f64,
        /// Its dimension.
        dimension: Dimension,
        /// Written with `%` or `ppm`.
        share: bool,
    },
    /// A let-value, a signal or a reading by its name.
    Name(String),
    /// `t`, the time since the start.
    Time,
    /// The number pi.
    Pi,
    /// The negative.
    Negative(Box<Expr>),
    /// Two operands; `at` is the place of the operator.
    Binary {
        /// Which operation.
        operator: Operator,
        /// The operator's place.
        at: Span,
        /// Its left operand.
        left: Box<Expr>,
        /// Its right operand.
        right: Box<Expr>,
    },
    /// A function of one argument, or `min`, `max` of two or more.
    Call {
        /// Which function.
        function: Function,
        /// Its arguments.
        arguments: Vec<Expr>,
    },
    /// Piecewise linear through the knots, end values held; a repeated abscissa is a jump.
    Points {
        /// What the abscissas are compared with (`t`, or of let-values).
        argument: Box<Expr>,
        /// Abscissas and ordinates.
        knots: Vec<(Expr, Expr)>,
    },
    /// A phrase that is a signal (`voltage across bank`).
    Signal(Box<Signal>),
    /// A phrase that is a reading (`energy into chest`).
    Reading(Box<Phrase>),
    /// An edge, which is a time (`opening of fire`).
    Edge(Box<Edge>),
    /// `open circuit`, as a resistor's whole value or a let-value's.
    OpenCircuit,
    /// `short circuit`, likewise.
    ShortCircuit,
}

/// An operation between two operands.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Operator {
    /// `+`
    Add,
    /// `-`
    Subtract,
    /// `*`
    Multiply,
    /// `/`
    Divide,
    /// `^`
    Power,
}

impl Operator {
    /// The operator as written.
    #[must_use]
    pub const fn sign(self) -> &'static str {
        match self {
            Operator::Add => "+",
            Operator::Subtract => "-",
            Operator::Multiply => "*",
            Operator::Divide => "/",
            Operator::Power => "^",
        }
    }
}

/// The functions of the language.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
#[non_exhaustive]
#[allow(missing_docs, reason = "each is the mathematical function of its name")]
pub enum Function {
    Sqrt,
    Exp,
    Ln,
    Log10,
    Sin,
    Cos,
    Tan,
    Atan,
    Sinh,
    Tanh,
    Abs,
    Sign,
    Min,
    Max,
    /// 0 before the argument reaches 0, 1 from then on.
    Step,
    /// The integral of [`Function::Step`]: 0, then the argument.
    Ramp,
}

impl Function {
    /// Every function with its name.
    pub const ALL: &'static [(&'static str, Function)] = &[
        ("sqrt", Function::Sqrt),
        ("exp", Function::Exp),
        ("ln", Function::Ln),
        ("log10", Function::Log10),
        ("sin", Function::Sin),
        ("cos", Function::Cos),
        ("tan", Function::Tan),
        ("atan", Function::Atan),
        ("sinh", Function::Sinh),
        ("tanh", Function::Tanh),
        ("abs", Function::Abs),
        ("sign", Function::Sign),
        ("min", Function::Min),
        ("max", Function::Max),
        ("step", Function::Step),
        ("ramp", Function::Ramp),
    ];

    /// The function's name in the language.
    #[must_use]
    pub fn name(self) -> &'static str {
        Function::ALL
            .iter()
            .find(|(_, f)| *f == self)
            .map_or("", |(n, _)| n)
    }
}

impl Expr {
    /// An expression at a place.
    #[must_use]
    pub const fn new(kind: ExprKind, span: Span) -> Self {
        Expr { kind, span }
    }

    /// A number with a dimension, in coherent SI units, that stands in no text.
    #[must_use]
    pub const fn number(value: f64, dimension: Dimension) -> Self {
        Expr::new(
            ExprKind::Number {
                value,
                dimension,
                share: false,
            },
            Span::NONE,
        )
    }

    /// A share: 0.05 for 5 %.
    #[must_use]
    pub const fn share(value: f64) -> Self {
        Expr::new(
            ExprKind::Number {
                value,
                dimension: Dimension::NONE,
                share: true,
            },
            Span::NONE,
        )
    }

    /// A let-value, signal or reading by name.
    #[must_use]
    pub fn name(name: impl Into<String>) -> Self {
        Expr::new(ExprKind::Name(name.into()), Span::NONE)
    }

    /// A signal's phrase.
    #[must_use]
    pub fn signal(signal: Signal) -> Self {
        Expr::new(ExprKind::Signal(Box::new(signal)), Span::NONE)
    }

    /// A reading's phrase.
    #[must_use]
    pub fn reading(phrase: Phrase) -> Self {
        Expr::new(ExprKind::Reading(Box::new(phrase)), Span::NONE)
    }

    /// Two operands joined by an operator.
    #[must_use]
    pub fn binary(operator: Operator, left: Expr, right: Expr) -> Self {
        let span = left.span.to(right.span);
        Expr::new(
            ExprKind::Binary {
                operator,
                at: Span::NONE,
                left: Box::new(left),
                right: Box::new(right),
            },
            span,
        )
    }
}
