//! Waveforms as CSV: a column of time and one for each channel.
//!
//! ```text
//! time (s),voltage across chest (V)
//! 1e-6,0.0
//! 1e-6,3916.666666666667            an event: two rows with the same time
//! ```
//!
//! RFC 4180 quoting, UTF-8, one header row with units, line feeds, coherent SI units, the
//! shortest digits that read back to the same number. Between the run's own steps a channel is
//! the cubic Hermite interpolant of its values and slopes, the same that readings are taken
//! from.

use pulsewright_study::outcome::Channel;
use std::io::{self, Write};

/// The most rows that are written on a raster.
pub const MOST_ROWS: f64 = 1e8;

/// Why a raster cannot be written.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Raster {
    /// The interval is not above 0 s.
    NotPositive(f64),
    /// It would make more than [`MOST_ROWS`] rows.
    TooFine(f64),
}

/// Writes the channels at the run's own steps, each event in two rows.
///
/// # Errors
///
/// Those of `out`.
pub fn at_steps(channels: &[Channel], out: impl Write) -> io::Result<()> {
    let mut sheet = Sheet::open(channels, out)?;
    for row in rows(channels) {
        sheet.row(row, channels)?;
    }
    sheet.close()
}

/// Writes the channels every `interval` seconds from 0 s to the end; an event that falls on
/// the raster stands in two rows.
///
/// # Errors
///
/// Those of `out`.
pub fn every(channels: &[Channel], interval: f64, out: impl Write) -> io::Result<()> {
    let mut sheet = Sheet::open(channels, out)?;
    let end = channels
        .iter()
        .filter_map(|c| c.times.last())
        .copied()
        .fold(0.0, f64::max);
    let mut k = 0.0;
    while k * interval <= end * (1.0 + 1e-12) {
        let time = (k * interval).min(end);
        let twice = channels.iter().any(|c| lies_on_jump(c, time));
        if twice {
            sheet.row((time, Side::Before), channels)?;
        }
        sheet.row((time, Side::After), channels)?;
        k += 1.0;
    }
    sheet.close()
}

/// Checks an interval for [`every`] against a span, both in seconds.
///
/// # Errors
///
/// [`Raster`] where it is not above 0 s or makes too many rows.
pub fn check_interval(interval: f64, span: f64) -> Result<(), Raster> {
    if interval.is_nan() || interval <= 0.0 {
        return Err(Raster::NotPositive(interval));
    }
    if span / interval > MOST_ROWS {
        Err(Raster::TooFine(interval))
    } else {
        Ok(())
    }
}

/// Which side of a jump.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Side {
    Before,
    After,
}

/// The instants of all channels, each once, an event twice.
fn rows(channels: &[Channel]) -> Vec<(f64, Side)> {
    let mut times: Vec<f64> = channels
        .iter()
        .flat_map(|c| c.times.iter().copied())
        .collect();
    times.sort_by(f64::total_cmp);
    times.dedup();
    let jumps = |time: f64| channels.iter().any(|c| lies_on_jump(c, time));
    let sides = |time: f64| {
        if jumps(time) {
            vec![Side::Before, Side::After]
        } else {
            vec![Side::After]
        }
    };
    times
        .into_iter()
        .flat_map(|t| sides(t).into_iter().map(move |s| (t, s)))
        .collect()
}

/// Whether an instant stands twice in a channel.
fn lies_on_jump(channel: &Channel, time: f64) -> bool {
    let k = channel.times.partition_point(|t| *t < time);
    matches!((channel.times.get(k), channel.times.get(k + 1)), (Some(a), Some(b)) if *a == time && *b == time)
}

/// The value of a channel at an instant, on one side of a jump; `None` where there is none.
fn value(channel: &Channel, time: f64, side: Side) -> Option<f64> {
    let k = match side {
        Side::Before => channel.times.partition_point(|t| *t < time),
        Side::After => channel
            .times
            .partition_point(|t| *t <= time)
            .saturating_sub(1),
    };
    if channel.times.get(k).is_some_and(|t| *t == time) {
        return channel.values.get(k).copied();
    }
    let left = channel
        .times
        .partition_point(|t| *t <= time)
        .saturating_sub(1);
    hermite(channel, left, time)
}

/// The Hermite interpolant over the step that begins at point `k`; end values held.
fn hermite(channel: &Channel, k: usize, time: f64) -> Option<f64> {
    let at = |k: usize| {
        Some((
            *channel.times.get(k)?,
            *channel.values.get(k)?,
            channel.slopes.get(k).copied(),
        ))
    };
    let (t0, y0, d0) = at(k)?;
    let Some((t1, y1, d1)) = at(k + 1).filter(|_| time > t0) else {
        return Some(y0);
    };
    let (h, s) = (t1 - t0, (time - t0) / (t1 - t0));
    let chord = y1 - y0;
    let (m0, m1) = (d0.map_or(chord, |d| d * h), d1.map_or(chord, |d| d * h));
    Some(y0 + s * (m0 + s * (3.0 * chord - 2.0 * m0 - m1 + s * (m0 + m1 - 2.0 * chord))))
}

/// The file in the making.
struct Sheet<W: Write> {
    writer: csv::Writer<W>,
}

impl<W: Write> Sheet<W> {
    fn open(channels: &[Channel], out: W) -> io::Result<Self> {
        let mut writer = csv::WriterBuilder::new().from_writer(out);
        let head = channels.iter().map(|c| titled(&c.text, &c.unit));
        writer.write_record(std::iter::once("time (s)".to_owned()).chain(head))?;
        Ok(Sheet { writer })
    }

    fn row(&mut self, (time, side): (f64, Side), channels: &[Channel]) -> io::Result<()> {
        let cells = channels
            .iter()
            .map(|c| value(c, time, side).map_or_else(String::new, digits));
        Ok(self
            .writer
            .write_record(std::iter::once(digits(time)).chain(cells))?)
    }

    fn close(mut self) -> io::Result<()> {
        self.writer.flush()
    }
}

pub(crate) fn titled(text: &str, unit: &str) -> String {
    if unit.is_empty() {
        text.to_owned()
    } else {
        format!("{text} ({unit})")
    }
}

/// The digits of a record; nothing for what is not finite.
pub(crate) fn digits(x: f64) -> String {
    serde_json::Number::from_f64(x + 0.0).map_or_else(String::new, |n| n.to_string())
}

#[cfg(test)]
mod tests {
    use super::*;

    fn stepped() -> Channel {
        Channel {
            text: "voltage across chest".to_owned(),
            unit: "V".to_owned(),
            times: vec![0.0, 1e-6, 1e-6, 3e-6],
            values: vec![0.0, 0.0, 4.0, 0.0],
            slopes: vec![0.0, 0.0, -4e6, 0.0],
            ..Channel::default()
        }
    }

    fn written(every_s: Option<f64>, channel: Channel) -> String {
        let mut out = Vec::new();
        match every_s {
            None => at_steps(&[channel], &mut out).unwrap(),
            Some(h) => every(&[channel], h, &mut out).unwrap(),
        }
        String::from_utf8(out).unwrap()
    }

    #[test]
    fn an_event_gives_two_rows() {
        let text = written(None, stepped());
        assert_eq!(
            text,
            "time (s),voltage across chest (V)\n0.0,0.0\n1e-6,0.0\n1e-6,4.0\n3e-6,0.0\n"
        );
    }

    #[test]
    fn a_raster_reads_between_the_steps() {
        // On the last step y = 4 - 8 s + 4 s^2 with s from 0 to 1: 1 in its middle.
        let text = written(Some(1e-6), stepped());
        let rows: Vec<&str> = text.lines().skip(1).collect();
        assert_eq!(rows.len(), 5);
        assert_eq!(&rows[..3], ["0.0,0.0", "1e-6,0.0", "1e-6,4.0"]);
        let middle: f64 = rows[3].split_once(',').unwrap().1.parse().unwrap();
        assert!((middle - 1.0).abs() < 1e-12, "{middle}");
        assert!(rows[4].ends_with(",0.0"));
    }

    #[test]
    fn a_comma_in_a_title_is_quoted() {
        let text = written(
            None,
            Channel {
                text: "max(a, b)".to_owned(),
                ..stepped()
            },
        );
        assert!(text.starts_with("time (s),\"max(a, b) (V)\"\n"));
    }

    #[test]
    fn an_interval_must_be_above_zero_and_not_too_fine() {
        assert_eq!(check_interval(0.0, 1.0), Err(Raster::NotPositive(0.0)));
        assert_eq!(check_interval(1e-12, 1.0), Err(Raster::TooFine(1e-12)));
        assert_eq!(check_interval(1e-6, 0.03), Ok(()));
    }
}
