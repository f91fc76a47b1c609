//! A value and a bound on its error, from the same reading on meshes whose steps are halved.
//!
//! With `F_0 … F_m` on meshes of step `h, h/2, h/4, …` and a method of order `p`,
//!
//! ```text
//! D_k = F_k - F_(k-1)            D_(k-1) / D_k -> 2^p
//! R_k = F_k + D_k / (2^p - 1)    Richardson's value
//! E_k = R_k - R_(k-1)            E_(k-1) / E_k -> 2^4 on smooth stretches, never below 4 when all is well
//! ```
//!
//! | what is seen | value | bound |
//! | --- | --- | --- |
//! | both fit, the second 10 to 24 twice | `R_m` | 0.6 `E_m`, not less than `E_(m-2)` / 250 |
//! | both fit, the second up to 24 | `R_m` | `E_m`, not less than `E_(m-1)` / 14 |
//! | both fit, the second beyond, or alternating | `R_m` | `E_m`, not less than `E_(m-1)` / 3 |
//! | only the first fits | `R_m` | 1.5 `D_m` / (2^p - 1), or 8 times the largest `E` if that is less |
//! | `F` itself shrinks 10 to 24 times, twice | `F_m` | 0.6 `D_m`, not less than `D_(m-2)` / 250 |
//! | `F` shrinks faster than its order otherwise | `F_m` | `D_m`, not less than `D_(m-1)` / 4 |
//! | neither | `F_m` | 3 times the larger of the last two differences, and more meshes are asked for |
//!
//! to which rounding is added: `4 eps sqrt(steps) size + 8 eps |F|`, and twice what the energy
//! balance of the run shows of it, since that adds up to rounding on every mesh. A single small difference
//! is never trusted by itself: it may be an accident of two errors that cross, which is why the
//! differences before it put a floor under the bound. Exact propagation, whose only errors are
//! rounding and the cubic's `h⁴`, which is checked in every step, needs two meshes and takes a third
//! of their difference, of which a fifteenth should be left. Backward Euler goes through one column
//! more, first with `2^p = 2`, then with 4. No factor alone is a bound; with the ratio test none
//! of 1,000 random circuits failed.

/// The ratio that a column's differences should stand in, least and most, and the power of two.
#[derive(Clone, Copy, Debug, PartialEq)]
struct Column {
    least: f64,
    most: f64,
    power: f64,
}

const SECOND_ORDER: Column = Column {
    least: 3.0,
    most: 5.5,
    power: 4.0,
};
const FIRST_ORDER: Column = Column {
    least: 1.5,
    most: 3.0,
    power: 2.0,
};

/// The columns of the extrapolation, by the method's order.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Order {
    /// Backward Euler.
    First,
    /// The trapezoidal rule, and whatever converges faster.
    Second,
    /// Exact propagation, whose cubics between exact points err by the fourth power.
    Fourth,
}

impl Order {
    fn columns(self) -> &'static [Column] {
        match self {
            Order::First => &[FIRST_ORDER, SECOND_ORDER],
            Order::Second => &[SECOND_ORDER],
            Order::Fourth => &[],
        }
    }

    /// The extrapolated value of the last meshes, whatever their ratios: the same linear
    /// combination for every quantity, so that what adds up on each mesh still adds up.
    #[must_use]
    pub fn combine(self, values: &[f64]) -> f64 {
        let mut column = values.to_vec();
        for c in self.columns() {
            if column.len() > 1 {
                column = next_column(&column, *c);
            }
        }
        column.last().copied().unwrap_or(f64::NAN)
    }
}

/// A value with its bound.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Estimate {
    /// The value.
    pub value: f64,
    /// The bound on its error; infinite where a single mesh says nothing.
    pub bound: f64,
    /// Whether the meshes behaved as the method's order predicts, or are at rounding.
    pub regular: bool,
}

/// How rounding grows in a run.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Precision {
    /// Steps of the finest mesh.
    pub steps: u64,
    /// What did not add up in the energy balance, relative to what was turned over: on every mesh
    /// that is rounding alone, and grows with how ill-conditioned the equations are.
    pub noise: f64,
}

impl Precision {
    /// The rounding of a value: `size` is what rounding is relative to.
    #[must_use]
    pub fn rounding(self, value: f64, size: f64) -> f64 {
        if size == 0.0 {
            return 0.0;
        }
        #[allow(clippy::cast_precision_loss, reason = "a count of steps")]
        let n = self.steps.max(1) as f64;
        f64::EPSILON * (4.0 * n.sqrt() * size + 8.0 * value.abs()) + 2.0 * self.noise * size
    }
}

/// The value and its bound from the same reading on meshes of halved steps.
///
/// `values` are finite, coarsest first; `rounding` is absolute, 0 or more.
#[must_use]
pub fn estimate(values: &[f64], order: Order, rounding: f64) -> Estimate {
    let found = match values {
        // Points that are exact, and cubics that were checked between them, leave a fifteenth.
        [before, last] if order == Order::Fourth => Estimate {
            value: *last,
            bound: (last - before).abs() / 3.0,
            regular: true,
        },
        _ => column(values, order.columns(), rounding),
    };
    let bound = if found.bound.is_nan() {
        f64::INFINITY
    } else {
        found.bound + rounding
    };
    Estimate { bound, ..found }
}

fn column(f: &[f64], columns: &[Column], rounding: f64) -> Estimate {
    let Some((&value, before)) = f.split_last() else {
        return Estimate {
            value: f64::NAN,
            bound: f64::INFINITY,
            regular: false,
        };
    };
    let Some(&previous) = before.last() else {
        return Estimate {
            value,
            bound: f64::INFINITY,
            regular: false,
        };
    };
    let d = value - previous;
    let difference = |w: &[f64]| match w {
        [a, b] => b - a,
        _ => 0.0,
    };
    let earlier: Vec<f64> = before.windows(2).rev().map(difference).collect();
    let Some(&d1) = earlier.first() else {
        return Estimate {
            value,
            bound: 3.0 * d.abs(),
            regular: d.abs() <= rounding,
        };
    };
    if d.abs() <= rounding && d1.abs() <= 4.0 * rounding {
        return Estimate {
            value,
            bound: d.abs(),
            regular: true,
        };
    }
    let Some((first, rest)) = columns.split_first() else {
        return last_column(value, d, &earlier, rounding);
    };
    let fits = |ratio: f64| ratio >= first.least && ratio <= first.most;
    let before_too = earlier.get(1).is_none_or(|d2| fits(d2 / d1));
    if fits(d1 / d) && before_too {
        let next = next_column(f, *first);
        let finer = column(&next, rest, 2.0 * rounding);
        if finer.regular && f.len() > 3 {
            return finer;
        }
        let value = next.last().copied().unwrap_or(value);
        return Estimate {
            value,
            bound: (1.5 * d.abs() / (first.power - 1.0)).min(erratic(&next)),
            regular: true,
        };
    }
    if fourth(d1 / d) && earlier.get(1).is_some_and(|d2| fourth(d2 / d1)) {
        return last_column(value, d, &earlier, rounding);
    }
    if (d1 / d).abs() > first.most {
        return Estimate {
            value,
            bound: d.abs().max(d1.abs() / 4.0),
            regular: true,
        };
    }
    Estimate {
        value,
        bound: 3.0 * d.abs().max(d1.abs()),
        regular: false,
    }
}

/// A bound on a column that does not shrink as it should: 8 times the largest of its last three
/// differences, an older one counting a quarter; infinite where there are fewer.
fn erratic(column: &[f64]) -> f64 {
    match column {
        [.., a, b, c, d] => 8.0 * (d - c).abs().max((c - b).abs()).max((b - a).abs() / 4.0),
        _ => f64::INFINITY,
    }
}

/// A column whose order is not known beforehand, but which has to shrink by 4 at least: `e` its
/// last difference, `earlier` those before it, the latest first.
fn last_column(value: f64, e: f64, earlier: &[f64], rounding: f64) -> Estimate {
    let at = |k: usize| earlier.get(k).copied().unwrap_or(0.0);
    let (e1, e2) = (at(0), at(1));
    let ratio = e1 / e;
    if e.abs() > rounding && ratio.abs() < 4.0 {
        return Estimate {
            value,
            bound: 3.0 * e.abs().max(e1.abs()),
            regular: false,
        };
    }
    let bound = if fourth(ratio) && fourth(e2 / e1) {
        (0.6 * e.abs()).max(e2.abs() / 250.0)
    } else {
        let floor = if (4.0..=24.0).contains(&ratio) {
            14.0
        } else {
            3.0
        };
        e.abs().max(e1.abs() / floor).max(e2.abs() / 100.0)
    };
    Estimate {
        value,
        bound,
        regular: true,
    }
}

/// Whether two differences stand in the ratio of order 4.
fn fourth(ratio: f64) -> bool {
    (10.0..=24.0).contains(&ratio)
}

fn next_column(f: &[f64], c: Column) -> Vec<f64> {
    let step = |w: &[f64]| match w {
        [a, b] => b + (b - a) / (c.power - 1.0),
        _ => f64::NAN,
    };
    f.windows(2).map(step).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Values on halved meshes of a reading with error `Σ c_k h^k`, h from 0.2 on.
    fn ladder(exact: f64, terms: &[(f64, i32)], n: i32) -> Vec<f64> {
        let h = |k: i32| 0.2 * 0.5_f64.powi(k);
        (0..n)
            .map(|k| exact + terms.iter().map(|(c, p)| c * h(k).powi(*p)).sum::<f64>())
            .collect()
    }

    fn check(values: &[f64], order: Order, exact: f64, tight: f64) {
        let e = estimate(values, order, 1e-15);
        let error = (e.value - exact).abs();
        assert!(error <= e.bound, "error {error:.3e} beyond {e:?}");
        assert!(
            e.bound <= tight * error.max(1e-15),
            "bound {:.3e} for an error of {error:.3e}",
            e.bound
        );
    }

    #[test]
    fn an_even_expansion_gains_four_orders() {
        check(
            &ladder(1.0, &[(1.0, 2), (3.0, 4), (-5.0, 6)], 4),
            Order::Second,
            1.0,
            20.0,
        );
        let e = estimate(&ladder(1.0, &[(1.0, 2), (3.0, 4)], 6), Order::Second, 1e-15);
        assert!(e.bound < 3e-7 && e.regular);
    }

    #[test]
    fn an_odd_term_is_allowed_for() {
        for c in [-0.9, -0.2, 0.3, 1.0] {
            check(
                &ladder(2.0, &[(1.0, 2), (c, 3)], 5),
                Order::Second,
                2.0,
                60.0,
            );
        }
    }

    #[test]
    fn first_order_is_extrapolated_twice() {
        let values = ladder(1.0, &[(1.0, 1), (0.7, 2), (0.4, 3)], 6);
        check(&values, Order::First, 1.0, 30.0);
        assert!(estimate(&values, Order::First, 1e-15).bound < 1e-4);
    }

    #[test]
    fn faster_than_its_order_is_taken_as_it_is() {
        check(&ladder(1.0, &[(1.0, 4)], 4), Order::Second, 1.0, 30.0);
    }

    #[test]
    fn erratic_values_are_not_trusted() {
        let e = estimate(&[1.0, 1.1, 1.02, 1.07], Order::Second, 1e-15);
        assert!(!e.regular && e.bound >= 0.2);
    }

    #[test]
    fn the_same_on_every_mesh_leaves_rounding() {
        let e = estimate(&[3.0; 4], Order::Second, 1e-15);
        assert_eq!((e.value, e.bound), (3.0, 1e-15));
    }

    /// Errors of random expansions, with an odd term as from half steps and an erratic one at order
    /// 4 as from extremes between mesh points: at most 1 in 1,000 may lie outside its bound.
    #[test]
    fn the_bound_is_honest() {
        let mut state = 12345_u64;
        let mut random = || {
            state = state
                .wrapping_mul(6364136223846793005)
                .wrapping_add(1442695040888963407);
            f64::from(u32::try_from(state >> 33).unwrap()) / f64::from(u32::MAX >> 1) * 2.0 - 1.0
        };
        let (mut outside, mut ratios) = (0, Vec::new());
        let n = 20_000;
        for _ in 0..n {
            let (a, b, c, d, o) = (
                random(),
                3.0 * random(),
                20.0 * random(),
                random(),
                0.3 * random(),
            );
            let values: Vec<f64> = (0..5)
                .map(|k| {
                    let h = 0.2 * 0.5_f64.powi(k);
                    1.0 + a * h.powi(2)
                        + o * h.powi(3)
                        + (b + d * random()) * h.powi(4)
                        + c * h.powi(6)
                })
                .collect();
            let e = estimate(&values, Order::Second, 1e-14);
            let error = (e.value - 1.0).abs();
            outside += i32::from(error > e.bound);
            ratios.push(e.bound / error.max(1e-16));
        }
        ratios.sort_by(f64::total_cmp);
        assert!(
            f64::from(outside) <= 1e-3 * f64::from(n),
            "{outside} of {n} outside"
        );
        assert!(
            ratios[ratios.len() / 2] < 20.0,
            "median {}",
            ratios[ratios.len() / 2]
        );
    }
}
