//! Channels: signals read off the reported shot for plots and tables.
//!
//! They stand at the shot's own mesh points, thinned where a stretch has more than some two
//! thousand; with the slopes a reader can draw the cubics between them. Both ends of every
//! stretch are kept, so that an event stands twice.

use crate::outcome::Channel;
use crate::plan::Plan;
use crate::readings::Reader;
use crate::waveform::Track;

/// Points of a stretch that are kept.
const POINTS: usize = 2000;

/// The channels of a plan.
#[must_use]
pub fn channels(plan: &Plan<'_>, reader: &Reader<'_>) -> Vec<Channel> {
    let read = |expr| {
        let signal = reader.signal(expr).ok()?;
        let mut channel = Channel {
            text: signal.text.clone(),
            unit: signal.dimension.unit(),
            ..Channel::default()
        };
        signal.wave.tracks.iter().for_each(|t| add(&mut channel, t));
        Some(channel)
    };
    plan.channels.iter().filter_map(read).collect()
}

fn add(channel: &mut Channel, track: &Track<'_>) {
    let n = track.times.len();
    let every = n.div_ceil(POINTS).max(1);
    let points = track
        .times
        .iter()
        .zip(track.values.iter())
        .zip(track.slopes.iter());
    for (k, ((t, v), s)) in points.enumerate() {
        if k % every == 0 || k + 1 == n {
            channel.times.push(*t);
            channel.values.push(*v);
            channel.slopes.push(*s);
        }
    }
}
