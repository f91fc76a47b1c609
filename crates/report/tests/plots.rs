//! Pictures of a small shot: what must be in them, that they are whole, and that nothing in a
//! result can break them.

#![allow(clippy::unwrap_used, reason = "a test that cannot go on panics")]

#[allow(dead_code, reason = "one sample for several files")]
mod sample;

use pulsewright_report::Look;
use pulsewright_report::plot::{Ink, Plot, svg, terminal};
use pulsewright_study::outcome::{Channel, Extreme, Fired, Gate, WindowResult};

/// A half sine over 30 ms on a channel, with a limit and a window.
fn fired() -> Fired {
    let w = std::f64::consts::PI / 30e-3;
    let times: Vec<f64> = (0..=60).map(|k| f64::from(k) * 0.5e-3).collect();
    let crest = Extreme {
        value: 2000.0,
        bound: 0.0,
        time: 15e-3,
    };
    let channel = Channel {
        text: "voltage across chest".to_owned(),
        unit: "V".to_owned(),
        values: times.iter().map(|t| 2000.0 * (w * t).sin()).collect(),
        slopes: times.iter().map(|t| 2000.0 * w * (w * t).cos()).collect(),
        times,
        crest: Some(crest),
        gates: vec![Gate {
            claim: "dose".to_owned(),
            level: 2500.0,
            above: true,
            every: true,
            intervals: vec![(0.0, 30e-3)],
            extreme: crest,
        }],
    };
    let current = Channel {
        text: "current through <choke> & co".to_owned(),
        unit: "A".to_owned(),
        gates: Vec::new(),
        ..channel.clone()
    };
    Fired {
        channels: vec![channel, current],
        windows: vec![WindowResult {
            name: "tail".to_owned(),
            intervals: vec![(10e-3, 20e-3)],
        }],
        ..sample::fired()
    }
}

/// Checks that every element that opens is closed, in order, and returns how many there are.
fn elements(svg: &str) -> usize {
    let (mut open, mut count) = (Vec::new(), 0);
    let mut rest = svg;
    while let Some(start) = rest.find('<') {
        let end = start + rest[start..].find('>').unwrap();
        let tag = &rest[start + 1..end];
        rest = &rest[end + 1..];
        let name = tag.split([' ', '/']).find(|w| !w.is_empty()).unwrap_or("");
        if tag.starts_with('/') {
            assert_eq!(open.pop(), Some(name), "{tag}");
        } else {
            count += 1;
            if !tag.ends_with('/') {
                open.push(name);
            }
        }
    }
    assert!(open.is_empty(), "{open:?}");
    count
}

#[test]
fn a_picture_says_what_it_shows() {
    let svg = svg(&Plot::whole(&fired()), "Field unit");
    assert!(elements(&svg) > 50);
    for part in [
        "<title id=\"plot-title\">Field unit</title>",
        "role=\"img\"",
        ">voltage (kV)<",
        ">time (ms)<",
        ">voltage across chest<",
        ">current through &lt;choke&gt; &amp; co<",
        ">2 kV at 15 ms<",
        ">fire closes<",
        ">fire opens<",
        ">tail<",
        "url(#plot-hatch)",
        ">dose: is within 15 % or 3 J of 300 J<",
        "prefers-color-scheme:dark",
    ] {
        assert!(svg.contains(part), "{part}\n{svg}");
    }
}

#[test]
fn the_same_plot_gives_the_same_bytes() {
    let shot = fired();
    assert_eq!(svg(&Plot::whole(&shot), "a"), svg(&Plot::whole(&shot), "a"));
}

#[test]
fn a_part_of_the_span_shows_only_what_is_in_it() {
    let shot = fired();
    let plot = Plot::between(&shot, 20e-3, 30e-3).unwrap();
    let svg = svg(&plot, "");
    assert!(svg.contains(">fire opens<") && !svg.contains(">fire closes<"));
    assert!(!svg.contains("2 kV at 15 ms<"));
    for (from, to) in [(0.0, 0.0), (-1.0, 1e-3), (0.0, 1.0), (f64::NAN, 1e-3)] {
        assert!(Plot::between(&shot, from, to).is_none(), "{from} {to}");
    }
}

#[test]
fn a_curve_has_at_most_two_points_a_column() {
    let mut shot = fired();
    let n = 100_000_u32;
    let times: Vec<f64> = (0..=n)
        .map(|k| 30e-3 * f64::from(k) / f64::from(n))
        .collect();
    let wave = |t: &f64| 1e3 * (1e5 * t).sin();
    shot.channels.truncate(1);
    shot.channels[0].values = times.iter().map(wave).collect();
    shot.channels[0].slopes = times.iter().map(|t| 1e8 * (1e5 * t).cos()).collect();
    shot.channels[0].times = times;
    let svg = svg(&Plot::whole(&shot), "");
    let path = svg.split("<path class=\"curve").nth(1).unwrap();
    let points = path.split('"').nth(2).unwrap().matches('L').count();
    assert!(points < 4 * 678, "{points}");
    assert!(svg.len() < 60_000, "{}", svg.len());
}

#[test]
fn no_result_breaks_a_picture() {
    let mut odd = vec![0.0, -0.0, f64::NAN, f64::INFINITY, f64::NEG_INFINITY];
    odd.extend([f64::MAX, -f64::MAX, f64::MIN_POSITIVE, 1e-320, 1.0]);
    for a in &odd {
        for b in &odd {
            let mut shot = fired();
            shot.channels[0].values[3] = *a;
            shot.channels[1].slopes[5] = *b;
            shot.channels[0].gates[0].level = *b;
            shot.channels[1].crest = Some(Extreme {
                value: *a,
                bound: 0.0,
                time: *b,
            });
            shot.windows[0].intervals[0] = (*a, *b);
            let svg = svg(&Plot::whole(&shot), "odd");
            elements(&svg);
            assert!(
                !svg.contains("NaN") && !svg.contains("inf"),
                "{a} {b}\n{svg}"
            );
        }
    }
    let mut empty = fired();
    empty.channels.clear();
    assert!(svg(&Plot::whole(&empty), "").contains("no channel has a value"));
}

fn in_terminal(width: usize, colour: bool, ink: Ink) -> String {
    terminal(&Plot::whole(&fired()), Look { width, colour }, ink)
}

#[test]
fn a_plot_in_signs_is_plain_ascii() {
    insta::assert_snapshot!(in_terminal(60, false, Ink::Signs).replace('µ', "u"));
}

#[test]
fn a_plot_in_a_terminal_fits_its_width() {
    for width in [40, 60, 80, 133, 200] {
        for ink in [Ink::Dots, Ink::Signs] {
            let text = in_terminal(width, false, ink);
            assert!(text.lines().count() > 20);
            for line in text.lines() {
                assert!(line.chars().count() <= width, "{width}: {line}");
            }
            if ink == Ink::Signs {
                assert!(text.is_ascii(), "{text}");
            }
        }
    }
}

#[test]
fn colour_adds_nothing_to_a_plot_but_colour() {
    let coloured = in_terminal(80, true, Ink::Dots);
    let mut plain = String::new();
    for (k, piece) in coloured.split('\u{1b}').enumerate() {
        plain.push_str(if k == 0 {
            piece
        } else {
            piece.split_once('m').unwrap().1
        });
    }
    assert_eq!(plain, in_terminal(80, false, Ink::Dots));
}
