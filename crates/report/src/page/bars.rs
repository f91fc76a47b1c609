//! The balance as a picture: a staircase of bars from what was stored and supplied to what is left.
//!
//! ```text
//! stored at the start  ████████████████████  348 J
//! heat in choke                       █████   92 J
//! heat in chest        ███████████████       256 J
//! stored at the end    ▏                       0 J
//! ```
//!
//! Each bar begins where the one before it ended, so that the way of the joules can be followed.

use crate::number::Scale;
use crate::plot::{escaped, short};
use crate::table::{entries, least};
use pulsewright_study::outcome::BalanceResult;

const WIDTH: f64 = 760.0;
const LEFT: f64 = 190.0;
const RIGHT: f64 = 650.0;
const ROW: f64 = 26.0;

/// A row of the balance: its words, joules as shown.
pub(super) type Row = (String, String);

/// The rows of a balance, all in one prefix.
pub(super) fn rows(balance: &BalanceResult) -> Vec<Row> {
    let scale = Scale::of("J", entries(balance).map(|(_, joules)| joules));
    let bound = least(balance);
    entries(balance)
        .map(|(words, joules)| (words, scale.show(joules, Some(bound))))
        .collect()
}

/// The staircase as SVG; `id` is unique in its page.
pub(super) fn bars(balance: &BalanceResult, id: &str, name: &str) -> String {
    let words = rows(balance);
    let joules: Vec<f64> = entries(balance).map(|(_, joules)| joules).collect();
    let sources = 1 + balance.supplied.len();
    let stairs = stairs(&joules, sources);
    let (low, high) = stairs.iter().fold((0.0f64, 0.0f64), |(l, h), (a, b)| {
        (l.min(*a).min(*b), h.max(*a).max(*b))
    });
    let place = |joules: f64| {
        let share = if high > low {
            (joules - low) / (high - low)
        } else {
            0.0
        };
        LEFT + (RIGHT - LEFT) * if share.is_finite() { share } else { 0.0 }
    };
    let height = ROW * words.len() as f64 + 8.0;
    let said: Vec<String> = words
        .iter()
        .map(|(what, how)| format!("{what}: {how}"))
        .collect();
    let mut out = format!(
        "<svg xmlns=\"http://www.w3.org/2000/svg\" class=\"pulse-plot\" role=\"img\" \
         aria-labelledby=\"{id}-title {id}-desc\" viewBox=\"0 0 {WIDTH} {height}\" width=\"{WIDTH}\" height=\"{height}\">\n\
         <title id=\"{id}-title\">{}</title>\n<desc id=\"{id}-desc\">{}.</desc>\n\
         <rect class=\"paper\" width=\"{WIDTH}\" height=\"{height}\"/>\n",
        escaped(name),
        escaped(&said.join(". "))
    );
    for (k, (what, how)) in words.iter().enumerate() {
        let top = 4.0 + ROW * k as f64;
        let (from, to) = stairs.get(k).copied().unwrap_or_default();
        let (a, b) = (place(from.min(to)), place(from.max(to)));
        let look = if k < sources {
            "in"
        } else if k + 1 == words.len() {
            "rest"
        } else if k + 2 == words.len() {
            "lost"
        } else {
            "heat"
        };
        let base = top + 16.0;
        let what = short(what, 28);
        out.push_str(&format!(
            "<text class=\"end\" x=\"{:.1}\" y=\"{base:.1}\">{}</text>\n\
             <rect class=\"joule {look}\" x=\"{a:.2}\" y=\"{:.1}\" width=\"{:.2}\" height=\"16\"/>\n\
             <text x=\"{:.2}\" y=\"{base:.1}\">{}</text>\n",
            LEFT - 8.0,
            escaped(&what),
            top + 4.0,
            (b - a).max(1.0),
            b.max(a + 1.0) + 6.0,
            escaped(how)
        ));
        if k + 1 < words.len() {
            let x = place(to);
            out.push_str(&format!(
                "<line class=\"tick\" x1=\"{x:.2}\" y1=\"{:.1}\" x2=\"{x:.2}\" y2=\"{:.1}\"/>\n",
                top + 20.0,
                top + 4.0 + ROW
            ));
        }
    }
    out.push_str("</svg>\n");
    out
}

/// Where each bar begins and ends, J: what comes in goes up, what goes out comes down again, and
/// what is left stands on the ground.
fn stairs(joules: &[f64], sources: usize) -> Vec<(f64, f64)> {
    let mut level = 0.0;
    let last = joules.len().saturating_sub(1);
    let mut made = Vec::new();
    for (k, joules) in joules.iter().enumerate() {
        let to = match k {
            k if k < sources => level + joules,
            k if k == last => 0.0,
            _ => level - joules,
        };
        let from = if k == last { *joules } else { level };
        made.push((from, to));
        level = to;
    }
    made
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn each_bar_begins_where_the_last_ended() {
        let stairs = stairs(&[300.0, 50.0, 90.0, 200.0, 10.0, 50.0], 2);
        assert_eq!(
            stairs,
            [
                (0.0, 300.0),
                (300.0, 350.0),
                (350.0, 260.0),
                (260.0, 60.0),
                (60.0, 50.0),
                (50.0, 0.0)
            ]
        );
    }
}
