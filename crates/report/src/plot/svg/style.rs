//! Colours, dashes and markers of a picture.
//!
//! Okabe and Ito's palette without yellow, told apart with any colour vision; each channel also has
//! its own dashes and its own marker, which remain in black and white. In dark surroundings the
//! lighter colours come first.

/// How many channels look different.
pub(super) const LOOKS: usize = 6;

/// The style sheet of every picture: everything under `.pulse-plot`, so that it may stand in a page.
pub const SHEET: &str = "\
.pulse-plot{--paper:#fff;--ink:#1b1b1b;--soft:#5a5a5a;--grid:#e4e4e4;--fine:#f3f3f3;--bad:#a3281b;--shade:#5a7fa8;\
--c0:#0072b2;--c1:#d55e00;--c2:#009e73;--c3:#b4578c;--c4:#b87a00;--c5:#3a8fc4;\
font-family:\"Segoe UI\",\"Helvetica Neue\",Arial,\"Liberation Sans\",\"DejaVu Sans\",sans-serif;font-size:11px}
.pulse-plot .paper{fill:var(--paper)}
.pulse-plot text{fill:var(--ink);font-variant-numeric:tabular-nums}
.pulse-plot .head{font-size:14px;font-weight:600}
.pulse-plot .soft{fill:var(--soft)}
.pulse-plot .mid{text-anchor:middle}
.pulse-plot .end{text-anchor:end}
.pulse-plot .halo{paint-order:stroke;stroke:var(--paper);stroke-width:3.5px;stroke-linejoin:round}
.pulse-plot .grid{stroke:var(--grid);stroke-width:1}
.pulse-plot .fine{stroke:var(--fine);stroke-width:1}
.pulse-plot .zero{stroke:var(--soft);stroke-width:1}
.pulse-plot .frame{fill:none;stroke:var(--soft);stroke-width:1}
.pulse-plot .tick{stroke:var(--soft);stroke-width:1}
.pulse-plot .event{stroke:var(--soft);stroke-width:1;stroke-dasharray:2 3}
.pulse-plot .lead{stroke:var(--soft);stroke-width:.7;fill:none}
.pulse-plot .shade{fill:var(--shade);fill-opacity:.09}
.pulse-plot .bar{stroke:var(--shade);stroke-width:2;fill:none}
.pulse-plot .gate{stroke:var(--bad);stroke-width:1.3;fill:none}
.pulse-plot .hatch{stroke:var(--bad);stroke-width:.8}
.pulse-plot .no{fill:var(--bad)}
.pulse-plot .curve{fill:none;stroke-width:1.7;stroke-linejoin:round;stroke-linecap:butt}
.pulse-plot .mark{stroke-width:1.5;fill:var(--paper)}
.pulse-plot .k0{stroke:var(--c0)}.pulse-plot .k1{stroke:var(--c1)}.pulse-plot .k2{stroke:var(--c2)}\
.pulse-plot .k3{stroke:var(--c3)}.pulse-plot .k4{stroke:var(--c4)}.pulse-plot .k5{stroke:var(--c5)}
.pulse-plot .curve.k1{stroke-dasharray:8 3}.pulse-plot .curve.k2{stroke-dasharray:2.5 2.5}\
.pulse-plot .curve.k3{stroke-dasharray:9 3 2 3}.pulse-plot .curve.k4{stroke-dasharray:14 4}\
.pulse-plot .curve.k5{stroke-dasharray:6 2 1.5 2 1.5 2}
@media (prefers-color-scheme:dark){.pulse-plot{--paper:#16181b;--ink:#e8e8e8;--soft:#a5a9ad;--grid:#33373c;--fine:#212429;\
--bad:#ff9a86;--shade:#8fb4dd;--c0:#56b4e9;--c1:#f0a54a;--c2:#35c79a;--c3:#e29bc4;--c4:#e6c15a;--c5:#9ecdf0}}
@media print{.pulse-plot{--paper:#fff;--ink:#000;--soft:#444;--grid:#ddd;--fine:#f1f1f1;--bad:#8a1a10;--shade:#5a7fa8;\
--c0:#005d92;--c1:#b54e00;--c2:#007a58;--c3:#93406f;--c4:#8f5f00;--c5:#2a74a3}}";

/// The marker of a channel, around the origin: a circle, a square, a triangle, a diamond, …
pub(super) const fn marker(index: usize) -> &'static str {
    match index % LOOKS {
        0 => "<circle r=\"3.2\"/>",
        1 => "<path d=\"M-3-3H3V3H-3Z\"/>",
        2 => "<path d=\"M0-4L3.8 3H-3.8Z\"/>",
        3 => "<path d=\"M0-4.3L4 0 0 4.3-4 0Z\"/>",
        4 => "<path d=\"M-3.8-3H3.8L0 4Z\"/>",
        _ => "<path d=\"M-3.2 0H3.2M0-3.2V3.2\"/>",
    }
}

/// The classes that colour and dash a channel.
pub(super) fn look(index: usize) -> String {
    format!("k{}", index % LOOKS)
}
