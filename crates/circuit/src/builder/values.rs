//! Values: numbers with their unit, names, signals, edges.

use super::named;
use crate::dimension::Dimension;
use crate::expr::{Expr, ExprKind, Function};
use crate::phrase::{Edge, EdgeKind, Ordinal, Signal};
use crate::span::Span;

macro_rules! quantities {
    ($($(#[$doc:meta])* $name:ident => $dimension:expr;)*) => {$(
        $(#[$doc])*
        #[must_use]
        pub fn $name(value: f64) -> Expr {
            Expr::number(value, $dimension)
        }
    )*};
}

quantities! {
    /// A number without a unit.
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// assert_eq!(number(0.98).to_string(), "0.98");
    /// ```
    number => Dimension::NONE;
    /// A voltage, V.
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// assert_eq!(volts(4.7e3).to_string(), "4.7 kV");
    /// ```
    volts => Dimension::VOLT;
    /// A current, A.
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// assert_eq!(amps(0.05).to_string(), "50 mA");
    /// ```
    amps => Dimension::AMPERE;
    /// A resistance, ohm.
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// assert_eq!(ohms(50.0).to_string(), "50 ohm");
    /// ```
    ohms => Dimension::OHM;
    /// A capacitance, F.
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// assert_eq!(farads(32e-6).to_string(), "32 uF");
    /// ```
    farads => Dimension::FARAD;
    /// An inductance, H.
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// assert_eq!(henrys(25e-3).to_string(), "25 mH");
    /// ```
    henrys => Dimension::HENRY;
    /// A time, s.
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// assert_eq!(seconds(1e-6).to_string(), "1 us");
    /// ```
    seconds => Dimension::SECOND;
    /// A frequency, Hz.
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// assert_eq!(hertz(50.0).to_string(), "50 Hz");
    /// ```
    hertz => Dimension::HERTZ;
    /// An energy, J.
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// assert_eq!(joules(300.0).to_string(), "300 J");
    /// ```
    joules => Dimension::JOULE;
    /// A power, W.
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// assert_eq!(watts(5.0).to_string(), "5 W");
    /// ```
    watts => Dimension::WATT;
    /// A charge, C.
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// assert_eq!(coulombs(0.15).to_string(), "150 mC");
    /// ```
    coulombs => Dimension::COULOMB;
    /// A flux, V s.
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// assert_eq!(webers(0.5).to_string(), "500 mV*s");
    /// ```
    webers => Dimension::WEBER;
    /// An action integral, A² s.
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// assert_eq!(action(3.0).to_string(), "3 A²*s");
    /// ```
    action => Dimension::ACTION;
}

/// A share in percent.
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(percent(5.0).to_string(), "5 %");
/// ```
#[must_use]
pub fn percent(value: f64) -> Expr {
    Expr::share(value / 100.0)
}

/// A share in millionths.
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(ppm(1.0).to_string(), "1 ppm");
/// ```
#[must_use]
pub fn ppm(value: f64) -> Expr {
    Expr::share(value / 1e6)
}

/// A let-value, a signal or a reading by its name.
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!((2.0 * name("load")).to_string(), "2 * load");
/// ```
#[must_use]
pub fn name(name: &str) -> Expr {
    Expr::name(name)
}

/// `t`, the time since the start.
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// use pulsewright_circuit::expr::Function;
/// let decay = volts(10.0) * call(Function::Exp, [-time() / seconds(2e-3)]);
/// assert_eq!(decay.to_string(), "10 V * exp(-t / 2 ms)");
/// ```
#[must_use]
pub fn time() -> Expr {
    Expr::new(ExprKind::Time, Span::NONE)
}

/// The number pi.
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!((2.0 * pi()).to_string(), "2 * pi");
/// ```
#[must_use]
pub fn pi() -> Expr {
    Expr::new(ExprKind::Pi, Span::NONE)
}

/// `open circuit`, a resistor's whole value or a let-value's.
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// let built = Builder::new("").resistor("load", "a", "ground", open_circuit());
/// assert_eq!(built.draft().parts.len(), 1);
/// ```
#[must_use]
pub fn open_circuit() -> Expr {
    Expr::new(ExprKind::OpenCircuit, Span::NONE)
}

/// `short circuit`, likewise.
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(short_circuit().to_string(), "short circuit");
/// ```
#[must_use]
pub fn short_circuit() -> Expr {
    Expr::new(ExprKind::ShortCircuit, Span::NONE)
}

/// A function of its arguments.
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// use pulsewright_circuit::expr::Function;
/// assert_eq!(call(Function::Max, [volts(1.0), name("v")]).to_string(), "max(1 V, v)");
/// ```
#[must_use]
pub fn call(function: Function, arguments: impl Into<Vec<Expr>>) -> Expr {
    Expr::new(
        ExprKind::Call {
            function,
            arguments: arguments.into(),
        },
        Span::NONE,
    )
}

/// `step(ARGUMENT)`: 0 before the argument reaches 0, 1 from then on.
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(step(time() - seconds(1e-3)).to_string(), "step(t - 1 ms)");
/// ```
#[must_use]
pub fn step(argument: impl Into<Expr>) -> Expr {
    call(Function::Step, [argument.into()])
}

/// `ramp(ARGUMENT)`: 0, then the argument.
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(ramp(time() - seconds(1e-3)).to_string(), "ramp(t - 1 ms)");
/// ```
#[must_use]
pub fn ramp(argument: impl Into<Expr>) -> Expr {
    call(Function::Ramp, [argument.into()])
}

/// `points(ARGUMENT; X: Y; …)`: piecewise linear, end values held, a repeated abscissa is a jump.
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// let drive = points(time(), [(seconds(0.0), volts(0.0)), (seconds(1e-3), volts(5.0))]);
/// assert_eq!(drive.to_string(), "points(t; 0 s: 0 V; 1 ms: 5 V)");
/// ```
#[must_use]
pub fn points(argument: impl Into<Expr>, knots: impl Into<Vec<(Expr, Expr)>>) -> Expr {
    Expr::new(
        ExprKind::Points {
            argument: Box::new(argument.into()),
            knots: knots.into(),
        },
        Span::NONE,
    )
}

/// `voltage across PART`, first node less second node.
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(voltage_across("chest").to_string(), "voltage across chest");
/// ```
#[must_use]
pub fn voltage_across(part: &str) -> Expr {
    Expr::signal(Signal::VoltageAcross(named(part)))
}

/// `voltage at NODE`, against ground.
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(voltage_at("pad").to_string(), "voltage at pad");
/// ```
#[must_use]
pub fn voltage_at(node: &str) -> Expr {
    Expr::signal(Signal::VoltageAt(named(node)))
}

/// `voltage from NODE to NODE`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(voltage_from("pad", "ground").to_string(), "voltage from pad to ground");
/// ```
#[must_use]
pub fn voltage_from(node: &str, to: &str) -> Expr {
    Expr::signal(Signal::VoltageFrom(named(node), named(to)))
}

/// `current through PART`, in at its first node.
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(current_through("choke").to_string(), "current through choke");
/// ```
#[must_use]
pub fn current_through(part: &str) -> Expr {
    Expr::signal(Signal::CurrentThrough(named(part)))
}

/// `power into PART`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(power_into("chest").to_string(), "power into chest");
/// ```
#[must_use]
pub fn power_into(part: &str) -> Expr {
    Expr::signal(Signal::PowerInto(named(part)))
}

/// `charge held by CAPACITOR`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(charge_held("bank").to_string(), "charge held by bank");
/// ```
#[must_use]
pub fn charge_held(capacitor: &str) -> Expr {
    Expr::signal(Signal::ChargeHeld(named(capacitor)))
}

/// `flux held by INDUCTOR`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(flux_held("choke").to_string(), "flux held by choke");
/// ```
#[must_use]
pub fn flux_held(inductor: &str) -> Expr {
    Expr::signal(Signal::FluxHeld(named(inductor)))
}

/// `energy held by PART`, or by a coupling.
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(energy_held("bank").to_string(), "energy held by bank");
/// ```
#[must_use]
pub fn energy_held(part: &str) -> Expr {
    Expr::signal(Signal::EnergyHeld(named(part)))
}

/// An edge of a part, for delays ([`after`](super::after)) and, as a time, for readings.
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// use pulsewright_circuit::phrase::{EdgeKind, Ordinal};
/// let edge = edge("fire", EdgeKind::Opening, Some(Ordinal::Last));
/// assert_eq!(edge.to_string(), "last opening of fire");
/// ```
#[must_use]
pub fn edge(part: &str, kind: EdgeKind, ordinal: Option<Ordinal>) -> Edge {
    Edge {
        part: named(part),
        kind,
        ordinal,
        span: Span::NONE,
    }
}

/// `closing of SWITCH`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(closing_of("fire").to_string(), "closing of fire");
/// ```
#[must_use]
pub fn closing_of(switch: &str) -> Edge {
    edge(switch, EdgeKind::Closing, None)
}

/// `opening of SWITCH`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// let length = opening_of("ne") - closing_of("ne");
/// assert_eq!(length.to_string(), "opening of ne - closing of ne");
/// ```
#[must_use]
pub fn opening_of(switch: &str) -> Edge {
    edge(switch, EdgeKind::Opening, None)
}

/// `moving of CHANGEOVER to NODE`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(moving_of("relay", "pad").to_string(), "moving of relay to pad");
/// ```
#[must_use]
pub fn moving_of(changeover: &str, node: &str) -> Edge {
    edge(changeover, EdgeKind::Moving(named(node)), None)
}
