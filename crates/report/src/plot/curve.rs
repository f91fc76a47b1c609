//! A channel as a curve: read between its points, and thinned to what can be seen.
//!
//! Between two points a channel is the cubic of their values and slopes. A picture of `n` columns
//! shows of each column where the curve comes in, its lowest and highest point and where it goes
//! out; of those, points are left out as long as the line through the ones kept passes within a
//! fraction of a pixel of them. A jump keeps both its ends.

use pulsewright_study::outcome::Channel;

/// A curve in places of a picture: `x` to the right and `y` up, both from 0 to 1.
pub type Trace = Vec<(f64, f64)>;

/// The value of a channel at an instant, s; at a jump that after it. `None` outside the shot.
#[must_use]
pub fn value_at(channel: &Channel, time: f64) -> Option<f64> {
    let (first, last) = (channel.times.first()?, channel.times.last()?);
    if time < *first || time > *last {
        return None;
    }
    let after = channel.times.partition_point(|t| *t <= time);
    let k = after
        .saturating_sub(1)
        .min(channel.times.len().saturating_sub(2));
    Some(piece(channel, k)?.value(time))
}

/// One cubic: ends, values and slopes.
#[derive(Clone, Copy)]
struct Piece {
    t: [f64; 2],
    v: [f64; 2],
    s: [f64; 2],
}

impl Piece {
    fn value(&self, time: f64) -> f64 {
        let h = self.t[1] - self.t[0];
        if h <= 0.0 {
            return self.v[1];
        }
        let x = ((time - self.t[0]) / h).clamp(0.0, 1.0);
        let y = 1.0 - x;
        self.v[0] * y * y * (1.0 + 2.0 * x)
            + self.v[1] * x * x * (3.0 - 2.0 * x)
            + h * x * y * (self.s[0] * y - self.s[1] * x)
    }
}

fn piece(channel: &Channel, k: usize) -> Option<Piece> {
    let two = |list: &[f64]| Some([*list.get(k)?, *list.get(k + 1)?]);
    Some(Piece {
        t: two(&channel.times)?,
        v: two(&channel.values)?,
        s: two(&channel.slopes)?,
    })
}

/// How many places a cubic is looked at.
const LOOKS: u32 = 8;

/// The points of a channel from one instant to another, its cubics looked at in a few places each:
/// instants in s, values in the channel's unit.
pub(super) fn points(channel: &Channel, from: f64, to: f64, columns: usize) -> Vec<(f64, f64)> {
    let column = (to - from) / (columns.max(1) as f64);
    let first = channel
        .times
        .partition_point(|t| *t < from)
        .saturating_sub(1);
    let mut found: Vec<(f64, f64)> = Vec::new();
    for k in first..channel.times.len().saturating_sub(1) {
        let Some(piece) = piece(channel, k) else {
            break;
        };
        let (start, end) = (piece.t[0].max(from), piece.t[1].min(to));
        if piece.t[0] > to {
            break;
        }
        if end < start {
            continue;
        }
        if piece.t[0] == piece.t[1] {
            found.push((piece.t[1], piece.v[1]));
            continue;
        }
        if found.is_empty() {
            found.push((start, piece.value(start)));
        }
        let wanted = ((end - start) / column * 2.0).ceil().clamp(1.0, 1e6);
        let looks = (wanted.max(f64::from(LOOKS).min(wanted * 4.0))) as u32;
        for n in 1..=looks {
            let share = f64::from(n) / f64::from(looks);
            let time = if n == looks {
                end
            } else {
                start + (end - start) * share
            };
            found.push((time, piece.value(time)));
        }
    }
    found.retain(|(t, v)| t.is_finite() && v.is_finite());
    found
}

/// The fewest points of a channel between which its cubics stay within `tolerance` of all of its
/// points, in the channel's unit: their places in it, in order. Both ends of every jump are kept.
#[must_use]
pub fn knots(channel: &Channel, tolerance: f64) -> Vec<usize> {
    let n = channel.times.len();
    let mut kept = Vec::new();
    let mut start = 0;
    while start < n {
        kept.push(start);
        let (mut reach, mut stride) = (start + 1, 1);
        // Doubling strides, then halving ones: a cubic that fits far mostly fits nearer too.
        while stride > 0 {
            if reach + stride < n && fits(channel, start, reach + stride, tolerance) {
                reach += stride;
                stride *= 2;
            } else {
                stride /= 2;
            }
        }
        start = reach;
    }
    kept
}

/// Whether the cubic between two points stays near those between them.
fn fits(channel: &Channel, first: usize, last: usize, tolerance: f64) -> bool {
    let two = |list: &[f64]| Some([*list.get(first)?, *list.get(last)?]);
    let whole = (
        two(&channel.times),
        two(&channel.values),
        two(&channel.slopes),
    );
    let (Some(t), Some(v), Some(s)) = whole else {
        return false;
    };
    let whole = Piece { t, v, s };
    (first..last).all(|k| {
        piece(channel, k).is_some_and(|p| {
            let middle = f64::midpoint(p.t[0], p.t[1]);
            p.t[1] > p.t[0]
                && (whole.value(p.t[1]) - p.v[1]).abs() <= tolerance
                && (whole.value(middle) - p.value(middle)).abs() <= tolerance
        })
    })
}

/// Keeps of each of `columns` columns the first, lowest, highest and last point, in order, and of
/// those the ones that a line needs to pass within `tolerance` of all.
#[must_use]
pub fn thinned(trace: &[(f64, f64)], columns: usize, tolerance: f64) -> Trace {
    let mut kept: Trace = Vec::new();
    let mut start = 0;
    while start < trace.len() {
        let column = column_of(trace.get(start), columns);
        let mut end = start;
        while end < trace.len() && column_of(trace.get(end), columns) == column {
            end += 1;
        }
        kept.extend(extremes(trace.get(start..end).unwrap_or_default()));
        start = end.max(start + 1);
    }
    straight(&kept, tolerance)
}

fn column_of(point: Option<&(f64, f64)>, columns: usize) -> i64 {
    point.map_or(-1, |(x, _)| (x * columns as f64).floor() as i64)
}

/// First, lowest, highest and last of a column's points, each once, in order.
fn extremes(column: &[(f64, f64)]) -> Trace {
    if column.len() <= 4 {
        return column.to_vec();
    }
    let by = |a: &(usize, &(f64, f64)), b: &(usize, &(f64, f64))| a.1.1.total_cmp(&b.1.1);
    let low = column.iter().enumerate().min_by(by).map_or(0, |p| p.0);
    let high = column.iter().enumerate().max_by(by).map_or(0, |p| p.0);
    let mut picks = [0, low, high, column.len() - 1];
    picks.sort_unstable();
    let mut last = None;
    let mut found = Trace::new();
    for k in picks {
        if last != Some(k) {
            found.extend(column.get(k));
        }
        last = Some(k);
    }
    found
}

/// Leaves out points as long as the chord passes them within `tolerance`: from each point kept, a
/// cone of directions shrinks with every point passed.
fn straight(trace: &[(f64, f64)], tolerance: f64) -> Trace {
    let Some(first) = trace.first() else {
        return Trace::new();
    };
    let mut kept = vec![*first];
    let mut anchor = *first;
    let (mut low, mut high) = (f64::NEG_INFINITY, f64::INFINITY);
    let mut last = *first;
    for point in trace.iter().skip(1) {
        let run = point.0 - anchor.0;
        let slope = (point.1 - anchor.1) / run;
        let fits = run > 0.0 && slope >= low && slope <= high;
        if !fits && last != anchor {
            kept.push(last);
            anchor = last;
            (low, high) = (f64::NEG_INFINITY, f64::INFINITY);
        }
        let run = point.0 - anchor.0;
        if run > 0.0 {
            low = low.max((point.1 - tolerance - anchor.1) / run);
            high = high.min((point.1 + tolerance - anchor.1) / run);
        } else if *point != anchor {
            kept.push(*point);
            anchor = *point;
            (low, high) = (f64::NEG_INFINITY, f64::INFINITY);
        }
        last = *point;
    }
    if kept.last() != Some(&last) {
        kept.push(last);
    }
    kept
}

#[cfg(test)]
mod tests {
    use super::*;

    fn jump() -> Channel {
        Channel {
            times: vec![0.0, 0.5, 0.5, 1.0],
            values: vec![0.0, 0.0, 4.0, 0.0],
            slopes: vec![0.0, 0.0, -8.0, -8.0],
            ..Channel::default()
        }
    }

    #[test]
    fn a_jump_is_read_after_and_keeps_both_ends() {
        assert_eq!(value_at(&jump(), 0.5), Some(4.0));
        assert_eq!(value_at(&jump(), 1.5), None);
        let curve = thinned(&points(&jump(), 0.0, 1.0, 100), 100, 1e-3);
        assert_eq!(curve, [(0.0, 0.0), (0.5, 0.0), (0.5, 4.0), (1.0, 0.0)]);
    }

    #[test]
    fn knots_are_few_and_keep_jumps() {
        assert_eq!(knots(&jump(), 1e-9), [0, 1, 2, 3]);
        let times: Vec<f64> = (0..=5000).map(|k| f64::from(k) / 5000.0).collect();
        let wave = Channel {
            values: times.iter().map(|t| (20.0 * t).sin()).collect(),
            slopes: times.iter().map(|t| 20.0 * (20.0 * t).cos()).collect(),
            times,
            ..Channel::default()
        };
        let kept = knots(&wave, 1e-6);
        assert!((20..200).contains(&kept.len()), "{}", kept.len());
        let pick = |list: &[f64]| kept.iter().map(|k| list[*k]).collect::<Vec<f64>>();
        let thin = Channel {
            times: pick(&wave.times),
            values: pick(&wave.values),
            slopes: pick(&wave.slopes),
            ..Channel::default()
        };
        for t in &wave.times {
            let (a, b) = (value_at(&thin, *t).unwrap(), (20.0 * t).sin());
            assert!((a - b).abs() < 2e-6, "{t}: {a} {b}");
        }
    }

    #[test]
    fn a_part_begins_and_ends_where_it_is_cut() {
        let cut = points(&jump(), 0.75, 1.0, 10);
        assert_eq!(cut.first(), Some(&(0.75, 2.0)));
        assert_eq!(cut.last().map(|p| p.0), Some(1.0));
    }

    #[test]
    fn a_spike_survives_thinning() {
        let many = 100_000;
        let trace: Trace = (0..many)
            .map(|k| {
                (
                    f64::from(k) / f64::from(many),
                    if k == 777 { 1.0 } else { 0.0 },
                )
            })
            .collect();
        let thin = thinned(&trace, 400, 1e-4);
        assert!(thin.iter().any(|p| p.1 == 1.0));
        assert!(thin.len() < 10, "{}", thin.len());
    }

    #[test]
    fn thinning_stays_within_its_tolerance_and_two_points_a_column() {
        let trace: Trace = (0..20_000)
            .map(|k| f64::from(k) / 20_000.0)
            .map(|x| (x, (40.0 * x).sin()))
            .collect();
        let thin = thinned(&trace, 700, 1e-3);
        assert!(thin.len() < 1400, "{}", thin.len());
        for (x, y) in &trace {
            let k = thin.partition_point(|p| p.0 <= *x).clamp(1, thin.len() - 1);
            let (a, b) = (thin[k - 1], thin[k]);
            let chord = a.1 + (b.1 - a.1) * (x - a.0) / (b.0 - a.0);
            assert!((chord - y).abs() < 4e-3, "{x}: {chord} {y}");
        }
    }
}
