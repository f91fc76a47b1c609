//! Solves for the adjusted let-value of a case: where a reading reaches a value.
//!
//! With every value nominal the reading is taken at evenly spaced places from end to end. Where
//! it passes the value between two neighbours, the root is narrowed by the ITP method (interpolate,
//! truncate, project: no slower than bisection, superlinear where the reading is smooth), until
//! the reading is within a part of its own bound. A jump past the value is no root.
//!
//! The bound of the root is that of the reading there, with what is left of the difference, over
//! the slope of the reading.

use pulsewright_circuit::{Adjusting, Circuit, Dimension, LetValue};

use crate::error::StudyError;
use crate::fire::{aim, settings};
use crate::ladder::Turn;
use crate::options::Options;
use crate::outcome::{Adjusted, Found, Remark, SetValue};
use crate::readings::said;

/// Into how many stretches the way from end to end is cut.
const STRETCHES: u32 = 16;
/// How near to the value the reading is brought, over its bound.
const NEAR: f64 = 0.1;
/// How far from the value a reading may be that counts as reaching it, over its bound.
const REACHED: f64 = 2.0;
/// How much more than its bounds a reading must change for a slope.
const STEEP: f64 = 10.0;
/// Rounding of a number, over its size.
const ROUNDING: f64 = 4.0 * f64::EPSILON;

type CaseSet = Vec<(String, LetValue)>;

/// A case with its adjusted let-value solved for.
#[derive(Clone, Debug, Default)]
pub(crate) struct Settled {
    /// The let-values of the case, without the adjusted one.
    pub stated: CaseSet,
    /// The same with it.
    pub set: CaseSet,
    /// What was solved for.
    pub adjusted: Vec<Adjusted>,
    /// What was noticed.
    pub remarks: Vec<Remark>,
}

/// Solves for what a case adjusts, with every value nominal.
pub(crate) fn settle(
    circuit: &Circuit,
    stated: &CaseSet,
    options: &Options<'_>,
    turn: Turn,
) -> Result<Settled, StudyError> {
    let mut settled = Settled {
        stated: stated.clone(),
        set: stated.clone(),
        ..Settled::default()
    };
    if let Some(wanted) = circuit.adjusting(stated)? {
        let mut search = Search {
            circuit,
            stated,
            options,
            turn,
            wanted,
            points: Vec::new(),
        };
        let root = search.root()?;
        settled.remarks.extend(search.remark(&root));
        settled.set.push(search.setting(root.x));
        settled.adjusted.push(Adjusted {
            name: search.wanted.adjust.name.text.clone(),
            value: root.x,
            unit: search.wanted.dimension.unit(),
            bound: root.bound,
        });
    }
    Ok(settled)
}

/// The reading at one place: its distance from the value that it is to reach, and its bound.
#[derive(Clone, Copy, Debug, PartialEq)]
struct Point {
    x: f64,
    off: f64,
    bound: f64,
}

struct Root {
    x: f64,
    bound: f64,
    /// How many stretches the reading passes the value in.
    n_crossings: usize,
}

struct Search<'a> {
    circuit: &'a Circuit,
    stated: &'a CaseSet,
    options: &'a Options<'a>,
    turn: Turn,
    wanted: Adjusting<'a>,
    /// Where the reading was taken and has a number.
    points: Vec<Point>,
}

impl Search<'_> {
    fn root(&mut self) -> Result<Root, StudyError> {
        let mut lack = None;
        let mut scan: Vec<Option<Point>> = Vec::new();
        for x in self.places() {
            match self.take(x)? {
                Ok(point) => scan.push(Some(point)),
                Err(why) => {
                    lack.get_or_insert(why);
                    scan.push(None);
                }
            }
        }
        let stretches = self.crossings(&scan);
        for (low, high) in &stretches {
            match self.narrow(*low, *high)? {
                Ok(found) => {
                    return Ok(Root {
                        x: found.x,
                        bound: self.bound(found),
                        n_crossings: stretches.len(),
                    });
                }
                Err(why) => lack = Some(why),
            }
        }
        Err(self.none(&scan, lack))
    }

    /// Evenly spaced, both ends exact.
    fn places(&self) -> Vec<f64> {
        let (from, to) = (self.wanted.from, self.wanted.to);
        (0..=STRETCHES)
            .map(|i| match i {
                STRETCHES => to,
                i => from + (to - from) * (f64::from(i) / f64::from(STRETCHES)),
            })
            .collect()
    }

    /// The reading at a place, or why it has no number.
    fn take(&mut self, x: f64) -> Result<Result<Point, String>, StudyError> {
        let mut set = self.stated.clone();
        set.push(self.setting(x));
        let reading = &self.wanted.adjust.reading;
        Ok(
            match aim(self.circuit, &set, self.options, self.turn, reading)? {
                Found::Value { value, bound } => {
                    let off = value - self.wanted.value;
                    let point = Point { x, off, bound };
                    self.points.push(point);
                    Ok(point)
                }
                Found::Absent(why) | Found::Unbounded(why) | Found::Floating(why) => Err(why),
            },
        )
    }

    fn setting(&self, value: f64) -> (String, LetValue) {
        let dimension = self.wanted.dimension;
        let name = self.wanted.adjust.name.text.clone();
        (name, LetValue::Number { value, dimension })
    }

    /// The stretches in which the reading passes the value, lowest first; a place where it has
    /// the value is one by itself.
    fn crossings(&self, scan: &[Option<Point>]) -> Vec<(Point, Point)> {
        let mut found = Vec::new();
        let mut before: Option<Point> = None;
        for point in scan {
            if let Some(point) = point {
                if self.is_near(*point) {
                    found.push((*point, *point));
                } else if let Some(low) = before.filter(|b| !self.is_near(*b))
                    && (low.off < 0.0) != (point.off < 0.0)
                {
                    found.push((low, *point));
                }
            }
            before = *point;
        }
        found
    }

    fn is_near(&self, point: Point) -> bool {
        point.off.abs() <= (NEAR * point.bound).max(self.rounding())
    }

    /// The rounding of the value that is to be reached.
    fn rounding(&self) -> f64 {
        ROUNDING * self.wanted.value.abs()
    }

    /// The root between two places on either side of the value, or why there is none.
    fn narrow(
        &mut self,
        mut low: Point,
        mut high: Point,
    ) -> Result<Result<Point, String>, StudyError> {
        if low == high {
            return Ok(Ok(low));
        }
        let whole = high.x - low.x;
        let least = ROUNDING * low.x.abs().max(high.x.abs()).max(whole);
        let mut reach = least * (whole / (2.0 * least)).log2().ceil().exp2();
        let mut best = if low.off.abs() < high.off.abs() {
            low
        } else {
            high
        };
        while high.x - low.x > 2.0 * least {
            let x = between(low, high, whole, reach);
            reach *= 0.5;
            let point = match self.take(x)? {
                Ok(point) => point,
                Err(why) => return Ok(Err(format!("{}: {why}", self.at(x)))),
            };
            if point.off.abs() < best.off.abs() {
                best = point;
            }
            if self.is_near(point) {
                return Ok(Ok(point));
            }
            if (point.off < 0.0) == (low.off < 0.0) {
                low = point;
            } else {
                high = point;
            }
        }
        if best.off.abs() <= (REACHED * best.bound).max(self.rounding()) {
            return Ok(Ok(best));
        }
        Ok(Err(format!(
            "{} {} jumps past {}",
            self.at(best.x),
            self.wanted.adjust.reading,
            self.in_words(self.wanted.value)
        )))
    }

    /// The bound of a root: by the lesser slope of those to the nearest places on either side
    /// that tell one.
    fn bound(&self, root: Point) -> f64 {
        let steep =
            |p: &&Point| p.x != root.x && (p.off - root.off).abs() > STEEP * (p.bound + root.bound);
        let near = |a: &&Point, b: &&Point| (a.x - root.x).abs().total_cmp(&(b.x - root.x).abs());
        let side = |is_above: bool| {
            let all = self.points.iter().filter(steep);
            all.filter(|p| (p.x > root.x) == is_above).min_by(near)
        };
        let slopes = [side(false), side(true)].into_iter().flatten();
        let least = slopes
            .map(|p| ((p.off - root.off) / (p.x - root.x)).abs())
            .fold(f64::INFINITY, f64::min);
        let rounding = ROUNDING * root.x.abs();
        if least.is_finite() {
            (root.off.abs() + root.bound) / least + rounding
        } else {
            self.wanted.to - self.wanted.from
        }
    }

    fn in_words(&self, value: f64) -> String {
        said(value, self.circuit.dimension(&self.wanted.adjust.reading))
    }

    fn at(&self, x: f64) -> String {
        said_at(x, self.wanted.dimension)
    }

    /// Why there is no root.
    fn none(&self, scan: &[Option<Point>], lack: Option<String>) -> StudyError {
        let adjust = self.wanted.adjust;
        let [from, to] = [self.wanted.from, self.wanted.to].map(|x| said(x, self.wanted.dimension));
        let offs: Vec<f64> = scan.iter().flatten().map(|p| p.off).collect();
        let least = offs.iter().copied().fold(f64::INFINITY, f64::min);
        let most = offs.iter().copied().fold(f64::NEG_INFINITY, f64::max);
        let value = self.wanted.value;
        let reach = if offs.is_empty() {
            format!("{} has no number", adjust.reading)
        } else {
            format!(
                "{} is found from {} to {}, and nowhere is it {}",
                adjust.reading,
                self.in_words(value + least),
                self.in_words(value + most),
                self.in_words(value)
            )
        };
        let lack = lack.map_or_else(String::new, |why| format!(" ({why})"));
        StudyError::NotAdjusted {
            name: adjust.name.text.clone(),
            case: self.case(),
            why: format!("from {from} to {to} {reach}{lack}"),
        }
    }

    /// ` with load = 25 ohm`
    fn case(&self) -> String {
        let one = |(name, value): &(String, SetValue)| match value {
            SetValue::Circuit(words) => format!("{name} = {words}"),
            SetValue::Number { value, .. } => {
                let stated = self.stated.iter().find(|(n, _)| n == name);
                let dimension = match stated {
                    Some((_, LetValue::Number { dimension, .. })) => *dimension,
                    _ => Dimension::NONE,
                };
                format!("{name} = {}", said(*value, dimension))
            }
        };
        let all: Vec<String> = settings(self.stated).iter().map(one).collect();
        if all.is_empty() {
            String::new()
        } else {
            format!(" with {}", all.join(", "))
        }
    }

    fn remark(&self, root: &Root) -> Option<Remark> {
        let adjust = self.wanted.adjust;
        (root.n_crossings > 1).then(|| Remark {
            code: "R0808".to_owned(),
            text: format!(
                "{} reaches {} in {} places between {} and {}{}; `{}` is the lowest, {}",
                adjust.reading,
                self.in_words(self.wanted.value),
                root.n_crossings,
                said(self.wanted.from, self.wanted.dimension),
                said(self.wanted.to, self.wanted.dimension),
                self.case(),
                adjust.name,
                said(root.x, self.wanted.dimension),
            ),
            span: adjust.span,
        })
    }
}

fn said_at(x: f64, dimension: Dimension) -> String {
    format!("at {}", said(x, dimension))
}

/// Where to look next: the false position, moved towards the middle, and no farther from it than
/// `reach` leaves after half the stretch.
fn between(low: Point, high: Point, whole: f64, reach: f64) -> f64 {
    let width = high.x - low.x;
    let middle = low.x + 0.5 * width;
    let falsi = low.x + width * (low.off / (low.off - high.off));
    let towards = (middle - falsi).signum();
    let truncated = 0.2 * width * (width / whole);
    let tried = if truncated <= (middle - falsi).abs() {
        falsi + towards * truncated
    } else {
        middle
    };
    let slack = (2.0 * reach - 0.5 * width).max(0.0);
    if (tried - middle).abs() <= slack {
        tried
    } else {
        middle - towards * slack
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Narrows to rounding, and counts.
    fn steps(f: &dyn Fn(f64) -> f64, a: f64, b: f64) -> (f64, u32) {
        let point = |x| Point {
            x,
            off: f(x),
            bound: 0.0,
        };
        let (mut low, mut high, whole) = (point(a), point(b), b - a);
        let least = ROUNDING * b;
        let mut reach = least * (whole / (2.0 * least)).log2().ceil().exp2();
        let mut n = 0;
        while high.x - low.x > 2.0 * least {
            let p = point(between(low, high, whole, reach));
            (reach, n) = (reach * 0.5, n + 1);
            if p.off.abs() < 1e-14 {
                return (p.x, n);
            }
            if (p.off < 0.0) == (low.off < 0.0) {
                low = p;
            } else {
                high = p;
            }
        }
        (low.x, n)
    }

    #[test]
    fn a_smooth_root_takes_few_steps() {
        let (x, n) = steps(&|x| x * x - 2.0, 1.0, 2.0);
        assert!(
            (x - 2.0_f64.sqrt()).abs() < 1e-14 && n < 12,
            "{x} after {n}"
        );
    }

    #[test]
    fn a_jump_takes_no_more_than_bisection_and_one() {
        let (x, n) = steps(&|x| if x < 1.3 { -1e-9 } else { 1.0 }, 1.0, 2.0);
        assert!((x - 1.3).abs() < 1e-14 && n < 53, "{x} after {n}");
    }
}
