//! The plot of work against precision, from one small result.

#[allow(dead_code, reason = "other tests use the rest of it")]
mod sample;

use pulsewright_report::work_precision::work_precision;
use pulsewright_study::Methods;

fn plot(methods: &Methods) -> String {
    work_precision(methods, &sample::origin())
}

/// How often a piece of text occurs.
fn count(svg: &str, piece: &str) -> usize {
    svg.matches(piece).count()
}

#[test]
fn each_reading_with_an_error_to_be_seen_has_a_panel() {
    let svg = plot(&sample::methods());
    assert!(svg.contains(">crest: largest current through chest</text>"));
    assert!(svg.contains(">dose: energy into chest</text>"));
    assert_eq!(count(&svg, ">error / scale</text>"), 2);
    assert!(svg.contains(">no error to be seen: tiny</text>"));
    assert!(!svg.contains(">brief"));
}

/// Three runs by each of two methods in two panels, and one of each in the legend.
#[test]
fn each_method_has_a_marker_and_a_colour() {
    let svg = plot(&sample::methods());
    let marks = |piece: &str| {
        let lines = svg.lines().filter(|l| l.contains("stroke-width=\"1.4\""));
        lines.filter(|l| l.contains(piece)).count()
    };
    assert_eq!(marks("stroke=\"#0072B2\""), 7);
    assert_eq!(marks("stroke=\"#D55E00\""), 7);
    assert_eq!(marks("fill=\"#fff\" stroke=\"#D55E00\""), 3);
    assert!(svg.contains(">order 1.00</text>") && svg.contains(">order 2.00</text>"));
}

#[test]
fn nothing_stands_outside_the_picture() {
    let svg = plot(&sample::methods());
    for (axis, most) in [(" x=\"", 760.0), (" y=\"", 400.0)] {
        for piece in svg.split(axis).skip(1) {
            let number: f64 = piece
                .split('"')
                .next()
                .unwrap_or("")
                .parse()
                .unwrap_or(-1.0);
            assert!((0.0..=most).contains(&number), "{axis}{piece}");
        }
    }
    assert_eq!(count(&svg, "NaN") + count(&svg, "inf"), 0);
}

#[test]
fn a_plot_says_what_it_shows() {
    let svg = plot(&sample::methods());
    assert!(svg.contains("role=\"img\""));
    assert!(
        svg.contains("<title>Field unit, damped-sine output stage: error against steps</title>")
    );
    assert!(svg.contains("crest: backward Euler order 1.00, 8.0e-2 with 300 steps"));
}

#[test]
fn nothing_to_draw_is_still_a_picture() {
    let mut methods = sample::methods();
    methods.readings.clear();
    let svg = plot(&methods);
    assert!(svg.starts_with("<svg") && svg.ends_with("</svg>\n"));
    assert!(!svg.contains("NaN") && !svg.contains("inf"));
}
