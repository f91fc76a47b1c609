//! A source's formula as a sum of polynomials times exponentials and sines.
//!
//! Every term is `Re p(τ) exp((a + i ω) τ)` with a complex polynomial `p` and `τ` the time since an
//! origin within the stretch, so that a front late in a shot neither overflows nor cancels. What is
//! piecewise (`step`, `ramp`, `points`, …) is resolved at an instant inside the stretch, whose ends
//! are its corners.

use pulsewright_circuit::Formula;
use pulsewright_circuit::expr::Function;
use pulsewright_circuit::formula::power;

/// Highest whole power that is multiplied out, and highest degree that is kept.
const DEGREE: usize = 16;
/// Most terms of one source.
const TERMS: usize = 32;

/// A complex number.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub(super) struct Complex {
    pub re: f64,
    pub im: f64,
}

impl Complex {
    pub(super) const fn new(re: f64, im: f64) -> Self {
        Complex { re, im }
    }

    pub(super) fn plus(self, b: Complex) -> Complex {
        Complex::new(self.re + b.re, self.im + b.im)
    }

    pub(super) fn times(self, b: Complex) -> Complex {
        Complex::new(
            self.re * b.re - self.im * b.im,
            self.re * b.im + self.im * b.re,
        )
    }

    fn scaled(self, k: f64) -> Complex {
        Complex::new(k * self.re, k * self.im)
    }

    fn conjugate(self) -> Complex {
        Complex::new(self.re, -self.im)
    }
}

/// `Re p(τ) exp((a + i ω) τ)`.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Term {
    /// a, 1/s.
    pub rate: f64,
    /// ω, rad/s, 0 or more.
    pub turn: f64,
    /// Coefficients of p, lowest power first.
    pub poly: Vec<Complex>,
}

impl Term {
    fn real(poly: Vec<f64>) -> Term {
        Term {
            rate: 0.0,
            turn: 0.0,
            poly: poly.into_iter().map(|c| Complex::new(c, 0.0)).collect(),
        }
    }

    fn is_real(&self) -> bool {
        self.turn == 0.0
    }

    /// The constant that it is.
    pub(super) fn constant(&self) -> Option<f64> {
        match self.poly.as_slice() {
            [c] if self.rate == 0.0 && self.turn == 0.0 => Some(c.re),
            _ => None,
        }
    }

    /// p and its derivatives at `τ`, times the exponential: the states of the term.
    pub(super) fn states(&self, tau: f64) -> Vec<Complex> {
        let size = (self.rate * tau).exp();
        let (sin, cos) = (self.turn * tau).sin_cos();
        let turned = Complex::new(size * cos, size * sin);
        let mut poly = self.poly.clone();
        let mut found = Vec::with_capacity(poly.len());
        while !poly.is_empty() {
            let value = poly
                .iter()
                .rev()
                .fold(Complex::default(), |v, c| v.scaled(tau).plus(*c));
            found.push(value.times(turned));
            poly = (1..poly.len())
                .filter_map(|k| Some(poly.get(k)?.scaled(k as f64)))
                .collect();
        }
        found
    }
}

/// The formula between the corners round the instant `inside`, with `τ = t - origin`; `None`
/// where it is of another form.
pub(super) fn decompose(f: &Formula, origin: f64, inside: f64) -> Option<Vec<Term>> {
    let split = |f: &Formula| decompose(f, origin, inside);
    if f.is_constant() {
        return Some(vec![Term::real(vec![f.at(0.0)])]);
    }
    let all = match f {
        Formula::Time => vec![Term::real(vec![origin, 1.0])],
        Formula::Negative(a) => scaled(split(a)?, -1.0),
        Formula::Add(a, b) => [split(a)?, split(b)?].concat(),
        Formula::Subtract(a, b) => [split(a)?, scaled(split(b)?, -1.0)].concat(),
        Formula::Multiply(a, b) => product(&split(a)?, &split(b)?),
        Formula::Divide(a, b) => product(&split(a)?, &inverse(&split(b)?)?),
        Formula::Power(a, b) => raised(&split(a)?, &split(b)?)?,
        Formula::Call(function, arguments) => called(*function, arguments, origin, inside)?,
        Formula::Points(argument, knots) => {
            let x = argument.at(inside);
            let k = knots.partition_point(|knot| knot.0 <= x);
            match (k.checked_sub(1).and_then(|k| knots.get(k)), knots.get(k)) {
                (Some(a), Some(b)) => {
                    let slope = (b.1 - a.1) / (b.0 - a.0);
                    let mut all = scaled(split(argument)?, slope);
                    all.push(Term::real(vec![a.1 - slope * a.0]));
                    all
                }
                (Some(only), None) | (None, Some(only)) => vec![Term::real(vec![only.1])],
                (None, None) => return None,
            }
        }
        _ => return None,
    };
    let all = gathered(all);
    let fits = all.len() <= TERMS
        && all.iter().all(|t| {
            t.poly.len() <= DEGREE + 1
                && t.poly.iter().all(|c| c.re.is_finite() && c.im.is_finite())
        });
    fits.then_some(all)
}

fn called(
    function: Function,
    arguments: &[Formula],
    origin: f64,
    inside: f64,
) -> Option<Vec<Term>> {
    let argument = arguments.first()?;
    let split = |f: &Formula| decompose(f, origin, inside);
    let nothing = || vec![Term::real(vec![0.0])];
    let value = argument.at(inside);
    let pick = |better: &dyn Fn(f64, f64) -> bool| {
        let mut best = argument;
        for a in arguments {
            if better(a.at(inside), best.at(inside)) {
                best = a;
            }
        }
        split(best)
    };
    match function {
        Function::Exp => {
            let (p0, p1) = affine(&split(argument)?)?;
            Some(vec![Term {
                rate: p1,
                turn: 0.0,
                poly: vec![Complex::new(p0.exp(), 0.0)],
            }])
        }
        Function::Sin | Function::Cos => {
            let (p0, p1) = affine(&split(argument)?)?;
            let (sin, cos) = p0.sin_cos();
            // sin x = Re(-i exp(i x)), cos x = Re exp(i x).
            let at = if function == Function::Sin {
                Complex::new(sin, -cos)
            } else {
                Complex::new(cos, sin)
            };
            Some(vec![Term {
                rate: 0.0,
                turn: p1.abs(),
                poly: vec![if p1 < 0.0 { at.conjugate() } else { at }],
            }])
        }
        Function::Sinh => {
            let (p0, p1) = affine(&split(argument)?)?;
            let half = |p0: f64, p1: f64, k: f64| Term {
                rate: p1,
                turn: 0.0,
                poly: vec![Complex::new(k * p0.exp(), 0.0)],
            };
            Some(vec![half(p0, p1, 0.5), half(-p0, -p1, -0.5)])
        }
        Function::Step => Some(vec![Term::real(vec![f64::from(u8::from(value > 0.0))])]),
        Function::Sign => Some(vec![Term::real(vec![value.signum()])]),
        Function::Ramp => {
            if value > 0.0 {
                split(argument)
            } else {
                Some(nothing())
            }
        }
        Function::Abs => Some(scaled(split(argument)?, value.signum())),
        Function::Min => pick(&|a, b| a < b),
        Function::Max => pick(&|a, b| a > b),
        _ => None,
    }
}

fn scaled(mut all: Vec<Term>, k: f64) -> Vec<Term> {
    for t in &mut all {
        t.poly.iter_mut().for_each(|c| *c = c.scaled(k));
    }
    all
}

/// `(p0, p1)` of `p0 + p1 τ`.
fn affine(all: &[Term]) -> Option<(f64, f64)> {
    let mut found = (0.0, 0.0);
    for t in all {
        if t.rate != 0.0 || t.turn != 0.0 || t.poly.len() > 2 {
            return None;
        }
        found.0 += t.poly.first().map_or(0.0, |c| c.re);
        found.1 += t.poly.get(1).map_or(0.0, |c| c.re);
    }
    Some(found)
}

fn convolved(a: &[Complex], b: &[Complex], conjugate: bool) -> Vec<Complex> {
    let mut all = vec![Complex::default(); (a.len() + b.len()).saturating_sub(1)];
    for (i, x) in a.iter().enumerate() {
        for (j, y) in b.iter().enumerate() {
            let y = if conjugate { y.conjugate() } else { *y };
            if let Some(c) = all.get_mut(i + j) {
                *c = c.plus(x.times(y));
            }
        }
    }
    all
}

/// Re A · Re B = Re (A B + A B*) / 2, and A B where one of them is real.
fn product(a: &[Term], b: &[Term]) -> Vec<Term> {
    let mut all = Vec::new();
    for x in a {
        for y in b {
            let rate = x.rate + y.rate;
            if x.is_real() || y.is_real() {
                all.push(Term {
                    rate,
                    turn: x.turn + y.turn,
                    poly: convolved(&x.poly, &y.poly, false),
                });
                continue;
            }
            let (fast, slow) = if x.turn >= y.turn { (x, y) } else { (y, x) };
            for conjugate in [false, true] {
                let poly = convolved(&fast.poly, &slow.poly, conjugate);
                let turn = if conjugate {
                    fast.turn - slow.turn
                } else {
                    fast.turn + slow.turn
                };
                // At no frequency only the real part is left, and a real term is what it is.
                let poly = poly.into_iter().map(|c| {
                    let half = c.scaled(0.5);
                    if turn == 0.0 {
                        Complex::new(half.re, 0.0)
                    } else {
                        half
                    }
                });
                all.push(Term {
                    rate,
                    turn,
                    poly: poly.collect(),
                });
            }
        }
    }
    gathered(all)
}

/// The inverse of a constant or of one exponential.
fn inverse(all: &[Term]) -> Option<Vec<Term>> {
    match all {
        [only] if only.is_real() && only.poly.len() == 1 => {
            let c = only.poly.first()?.re;
            Some(vec![Term {
                rate: -only.rate,
                turn: 0.0,
                poly: vec![Complex::new(1.0 / c, 0.0)],
            }])
        }
        _ => None,
    }
}

fn raised(base: &[Term], exponent: &[Term]) -> Option<Vec<Term>> {
    let (p0, p1) = affine(exponent)?;
    if p1 == 0.0 {
        if let [only] = base
            && let Some(c) = only.constant()
        {
            return Some(vec![Term::real(vec![power(c, p0)])]);
        }
        if p0.fract() != 0.0 || p0.abs() > DEGREE as f64 {
            return None;
        }
        let base = if p0 < 0.0 {
            inverse(base)?
        } else {
            base.to_vec()
        };
        let mut all = vec![Term::real(vec![1.0])];
        let mut left = p0.abs();
        while left > 0.0 {
            all = product(&all, &base);
            left -= 1.0;
        }
        return Some(all);
    }
    // c^(p0 + p1 τ)
    let [only] = base else { return None };
    let c = only.constant().filter(|c| *c > 0.0)?;
    Some(vec![Term {
        rate: p1 * c.ln(),
        turn: 0.0,
        poly: vec![Complex::new(power(c, p0), 0.0)],
    }])
}

/// Adds up terms of one exponential, and leaves out what is zero.
fn gathered(all: Vec<Term>) -> Vec<Term> {
    let mut found: Vec<Term> = Vec::new();
    for t in all {
        let like = found
            .iter_mut()
            .find(|f| f.rate == t.rate && f.turn == t.turn);
        match like {
            Some(f) => {
                if f.poly.len() < t.poly.len() {
                    f.poly.resize(t.poly.len(), Complex::default());
                }
                for (a, b) in f.poly.iter_mut().zip(&t.poly) {
                    *a = a.plus(*b);
                }
            }
            None => found.push(t),
        }
    }
    for t in &mut found {
        while t.poly.len() > 1 && t.poly.last() == Some(&Complex::default()) {
            t.poly.pop();
        }
    }
    found
}

#[cfg(test)]
mod tests {
    use super::*;
    use pulsewright_circuit::formula::Formula as F;

    fn number(x: f64) -> Box<F> {
        Box::new(F::Number(x))
    }

    fn late(by: f64) -> Box<F> {
        Box::new(F::Subtract(Box::new(F::Time), number(by)))
    }

    fn value(all: &[Term], tau: f64) -> f64 {
        all.iter().map(|t| t.states(tau)[0].re).sum()
    }

    #[test]
    fn a_late_damped_sine_is_the_product_of_its_factors() {
        let exp = F::Call(
            Function::Exp,
            vec![F::Divide(Box::new(F::Negative(late(1e-3))), number(1e-6))],
        );
        let sin = F::Call(Function::Sin, vec![F::Multiply(number(-3e6), late(1e-3))]);
        let f = F::Multiply(Box::new(exp), Box::new(sin));
        let all = decompose(&f, 1e-3, 1.5e-3).unwrap();
        assert_eq!(all.len(), 1);
        for tau in [0.0, 1e-7, 2e-6] {
            assert!((value(&all, tau) - f.at(1e-3 + tau)).abs() < 1e-9, "{tau}");
        }
    }

    #[test]
    fn powers_and_products_of_sines_multiply_out() {
        let sin = F::Call(
            Function::Sin,
            vec![F::Multiply(number(2.0), Box::new(F::Time))],
        );
        let cubed = F::Power(Box::new(sin.clone()), number(3.0));
        let f = F::Multiply(
            Box::new(F::Power(Box::new(F::Time), number(2.0))),
            Box::new(F::Add(Box::new(cubed), Box::new(sin))),
        );
        let all = decompose(&f, 0.25, 0.5).unwrap();
        for tau in [0.0, 0.3, 1.7] {
            assert!((value(&all, tau) - f.at(0.25 + tau)).abs() < 1e-13, "{tau}");
        }
    }

    #[test]
    fn piecewise_functions_are_taken_inside() {
        let f = F::Points(Box::new(F::Time), vec![(0.0, 0.0), (1.0, 5.0), (2.0, 1.0)]);
        let all = decompose(&f, 1.0, 1.5).unwrap();
        assert!((value(&all, 0.25) - 4.0).abs() < 1e-14);
        let f = F::Call(Function::Ramp, vec![*late(1.0)]);
        assert_eq!(value(&decompose(&f, 0.0, 0.5).unwrap(), 0.2), 0.0);
        assert_eq!(value(&decompose(&f, 1.0, 1.5).unwrap(), 0.25), 0.25);
    }

    #[test]
    fn another_form_is_refused() {
        let f = F::Call(Function::Tanh, vec![F::Time]);
        assert_eq!(decompose(&f, 0.0, 1.0), None);
        let f = F::Divide(number(1.0), Box::new(F::Time));
        assert_eq!(decompose(&f, 0.0, 1.0), None);
    }
}
