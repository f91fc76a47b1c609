//! A hand-made result with one of everything, so that pages and records need no run.

use pulsewright_circuit::{Dimension, Span, Stand};
use pulsewright_engine::modes::{Kind, NaturalMode};
use pulsewright_engine::{Event, Shot};
use pulsewright_report::Origin;
use pulsewright_study::outcome::{
    Adjusted, Answer, BalanceResult, Channel, ClaimResult, ClaimSummary, Difference, Extreme,
    Fired, Found, Hazard, Judged, ReadingResult, Remark, SecondOpinion, Set, SetValue, Stress,
    Verdict, Worst,
};
use pulsewright_study::spread::{
    Bins, CaseTally, ClaimTally, ReadingTally, Spread, Sum, Tally, merge,
};
use pulsewright_study::{
    Compared, MethodErrors, MethodWork, Methods, Modes, RunError, TopologyModes, Work,
};

/// The text that the remark's span is in.
pub const TEXT: &str = "title \"Field unit\"\nlet load = 50 ohm\n";

/// Where the sample comes from.
pub fn origin() -> Origin<'static> {
    Origin {
        title: Some("Field unit, damped-sine output stage"),
        sha256: "e3b0c44298fc1c149afbf4c8996fb92427ae41e4649b934ca495991b7852b855",
        text: TEXT,
        set: Vec::new(),
    }
}

fn answer(found: Found, dimension: Dimension) -> Answer {
    Answer {
        found,
        dimension,
        unit: dimension.unit(),
    }
}

fn reading(name: &str, text: &str, found: Found, dimension: Dimension) -> ReadingResult {
    ReadingResult {
        name: name.to_owned(),
        text: text.to_owned(),
        answer: answer(found, dimension),
    }
}

fn value(value: f64, bound: f64) -> Found {
    Found::Value { value, bound }
}

fn readings() -> Vec<ReadingResult> {
    vec![
        reading(
            "yield",
            "energy into chest / energy held by bank just before 0 s",
            value(0.882_352_941_2, 1.21e-8),
            Dimension::NONE,
        ),
        reading(
            "linked",
            "highest flux held by choke",
            value(1.5, 1.2e-7),
            Dimension::WEBER,
        ),
        reading(
            "specific",
            "action of chest",
            value(6.237_2, 4e-7),
            Dimension::ACTION,
        ),
        reading(
            "brief",
            "width of voltage across chest at 10 %",
            Found::Absent(
                "voltage across chest is still above 48 V at the end of the span".to_owned(),
            ),
            Dimension::SECOND,
        ),
        reading(
            "rush",
            "highest current through fire",
            Found::Unbounded("an impulse at 1 us".to_owned()),
            Dimension::AMPERE,
        ),
    ]
}

/// The claim on the dose, with a value.
fn dose(joules: f64, verdict: Verdict) -> ClaimResult {
    ClaimResult {
        name: "dose".to_owned(),
        text: "energy into chest".to_owned(),
        answer: answer(value(joules, 1.2e-5), Dimension::JOULE),
        relation: "is within 15 % or 3 J of 300 J".to_owned(),
        least: Some(255.0),
        most: Some(345.0),
        margin: Some((345.0 - joules).min(joules - 255.0)),
        verdict,
        reason: None,
        answers: vec!["REQ-12".to_owned()],
    }
}

fn brief() -> ClaimResult {
    ClaimResult {
        name: "brief".to_owned(),
        text: "width of voltage across chest at 10 %".to_owned(),
        answer: answer(
            Found::Absent("voltage across chest is still above 48 V at the end".to_owned()),
            Dimension::SECOND,
        ),
        relation: "is at most 15 ms".to_owned(),
        least: None,
        most: Some(15e-3),
        margin: None,
        verdict: Verdict::Fails,
        reason: None,
        answers: Vec::new(),
    }
}

fn load(ohms: f64) -> Set {
    vec![(
        "load".to_owned(),
        SetValue::Number {
            value: ohms,
            unit: "ohm".to_owned(),
        },
    )]
}

fn bank() -> Stress {
    Stress {
        part: "bank".to_owned(),
        voltage: Some(Extreme {
            value: 4700.0,
            bound: 0.0,
            time: 0.0,
        }),
        current: Some(Extreme {
            value: 60.225_4,
            bound: 1e-6,
            time: 1.301e-3,
        }),
        power: Some(Extreme {
            value: -210_300.0,
            bound: 0.1,
            time: 0.9e-3,
        }),
        energy: Some((-353.44, 1e-5)),
        action: Some((6.237_2, 4e-7)),
    }
}

fn contact() -> Stress {
    let rush = Extreme {
        value: f64::INFINITY,
        bound: f64::INFINITY,
        time: 1e-6,
    };
    Stress {
        part: "fire".to_owned(),
        current: Some(rush),
        energy: Some((12e-6, 1e-12)),
        ..Stress::default()
    }
}

/// One shot.
pub fn fired() -> Fired {
    let event = |time, state, loss, found| Event {
        time,
        part: 1,
        state,
        charge: 0.0,
        flux: 0.0,
        loss,
        found,
    };
    Fired {
        set: load(50.0),
        adjusted: Vec::new(),
        stands: Vec::new(),
        readings: readings(),
        claims: vec![dose(311.86, Verdict::Holds), brief()],
        events: vec![
            (event(1e-6, 1, 0.0, false), 0.0),
            (event(25.312_4e-3, 0, 12e-6, true), 3.1e-9),
        ],
        balance: BalanceResult {
            stored_start: 353.44,
            stored_end: 0.000_12,
            supplied: vec![("feed".to_owned(), 0.0)],
            dissipated: vec![("choke".to_owned(), 41.57), ("chest".to_owned(), 311.86)],
            lost_at_events: 12e-6,
            residual: -1.2e-10,
            bound: 3.01e-9,
        },
        stress: vec![bank(), contact()],
        second_opinion: Some(SecondOpinion {
            method: "exact propagation".to_owned(),
            missing: None,
            largest: Some(Difference {
                reading: "dose".to_owned(),
                share: 0.0312,
            }),
        }),
        hazards: vec![Hazard {
            part: "bank".to_owned(),
            voltage: 4700.0,
            energy: 353.44,
            at_most_60_v_from: Some(0.0213),
            estimated: false,
        }],
        remarks: vec![Remark {
            code: "R0203".to_owned(),
            text: "node `tpo` is touched by one part only; did you mean `top`?".to_owned(),
            span: Span::new(23, 27),
        }],
        defaults: vec!["start at rest".to_owned(), "error at most 1 ppm".to_owned()],
        method: "trapezoidal rule".to_owned(),
        span: 30e-3,
        shot: Shot {
            steps: 1234,
            smallest_step: 12e-9,
            largest_step: 34e-6,
            ..Shot::default()
        },
        channels: vec![Channel {
            text: "voltage across chest".to_owned(),
            unit: "V".to_owned(),
            ..Channel::default()
        }],
        windows: Vec::new(),
        parts: vec!["bank".to_owned(), "fire".to_owned()],
        changes: vec!["closes".to_owned(), "opens".to_owned()],
    }
}

fn mode(real: f64, imaginary: f64, kind: Kind, energy: &[(usize, f64)]) -> NaturalMode {
    let pair = imaginary > 0.0;
    NaturalMode {
        real,
        imaginary,
        count: if pair { 2 } else { 1 },
        damping_ratio: pair.then(|| -real / real.hypot(imaginary)),
        kind,
        energy: energy.to_vec(),
        electric: energy.iter().filter(|e| e.0 == 0).map(|e| e.1).sum(),
    }
}

/// A bank that is held, rings, and is held again, with a slow leak and five parts in one mode.
pub fn modes() -> Modes {
    let open = |from, to| TopologyModes {
        from,
        to,
        states: vec![("fire".to_owned(), "open".to_owned())],
        modes: vec![mode(0.0, 0.0, Kind::Holds, &[(0, 0.75), (1, 0.25)])],
    };
    let many = [
        (0, 0.5),
        (1, 0.2),
        (2, 0.15),
        (3, 0.1),
        (4, 0.049),
        (5, 0.001),
    ];
    let closed = TopologyModes {
        from: 1e-6,
        to: 25.312_4e-3,
        states: vec![("fire".to_owned(), "closed".to_owned())],
        modes: vec![
            mode(0.0, 0.0, Kind::Holds, &[(2, 1.0)]),
            mode(-312.5, 0.0, Kind::Decays, &[(1, 1.0)]),
            mode(-600.0, 800.0, Kind::Underdamped, &many),
            mode(0.0, 6e6, Kind::Undamped, &[(0, 0.5), (2, 0.5)]),
        ],
    };
    Modes {
        set: load(50.0),
        topologies: vec![open(0.0, 1e-6), closed, open(25.312_4e-3, 30e-3)],
        parts: ["bank", "snub", "choke", "stray", "cable", "probe"]
            .map(str::to_owned)
            .to_vec(),
        defaults: vec!["start at rest".to_owned()],
        method: "trapezoidal rule".to_owned(),
        span: 30e-3,
        steps: 1234,
        smallest_step: 12e-9,
        largest_step: 34e-6,
    }
}

/// Errors of an order over three steps, those below 1e-9 not told.
fn errors(method: &str, order: i32, reference: f64, first: f64) -> MethodErrors {
    let run = |k: i32| {
        let error = first * 0.5_f64.powi(order * k);
        RunError {
            value: Some(reference + error),
            error: Some(error),
            resolved: error > 1e-9,
        }
    };
    MethodErrors {
        method: method.to_owned(),
        order: (first > 1e-9).then(|| f64::from(order)),
        runs: (0..3).map(run).collect(),
    }
}

fn compared(name: &str, text: &str, found: Found, dimension: Dimension) -> Compared {
    let methods = match &found {
        Found::Value { value, .. } => vec![
            errors("backward Euler", 1, *value, 0.08 * value),
            errors("trapezoidal rule", 2, *value, 1e-3 * value),
        ],
        _ => ["backward Euler", "trapezoidal rule"]
            .map(|method| MethodErrors {
                method: method.to_owned(),
                order: None,
                runs: vec![RunError::default(); 3],
            })
            .to_vec(),
    };
    let scale = match found {
        Found::Value { value, .. } => value,
        _ => 0.0,
    };
    Compared {
        name: name.to_owned(),
        text: text.to_owned(),
        reference: answer(found, dimension),
        reference_by: "trapezoidal rule, finest meshes extrapolated".to_owned(),
        scale,
        methods,
    }
}

/// Two methods on four readings: one seen, one too small to see, one in both, one absent.
pub fn methods() -> Methods {
    let work = |method: &str, seconds: Option<f64>| MethodWork {
        method: method.to_owned(),
        runs: (0..3)
            .map(|k| Work {
                step: 1e-4 * 0.5_f64.powi(k),
                steps: 300 * 2_u64.pow(k.unsigned_abs()),
                factorisations: 5,
                seconds,
            })
            .collect(),
        ended: None,
    };
    let tiny = compared(
        "tiny",
        "final voltage across bank",
        value(2e-9, 1e-9),
        Dimension::VOLT,
    );
    let mut dose = compared(
        "dose",
        "energy into chest",
        value(300.0, 1e-9),
        Dimension::JOULE,
    );
    if let Some(trapezoidal) = dose.methods.get_mut(1) {
        *trapezoidal = errors("trapezoidal rule", 2, 300.0, 1e-12);
    }
    Methods {
        set: load(50.0),
        span: 30e-3,
        defaults: vec!["start at rest".to_owned()],
        readings: vec![
            compared(
                "crest",
                "largest current through chest",
                value(50.0, 1e-9),
                Dimension::AMPERE,
            ),
            dose,
            tiny,
            compared(
                "brief",
                "width of voltage across chest at 10 %",
                Found::Absent("it is not over at the end of the span".to_owned()),
                Dimension::SECOND,
            ),
        ],
        work: vec![
            work("backward Euler", Some(1.5e-3)),
            work("trapezoidal rule", Some(2.5e-3)),
        ],
    }
}

/// The same two cases, each with an adjusted charge.
pub fn adjusted() -> Judged {
    let mut judged = judged();
    for case in &mut judged.cases {
        case.adjusted = vec![Adjusted {
            name: "bank_v".to_owned(),
            value: 3.5e3,
            unit: "V".to_owned(),
            bound: 11.2e-6,
        }];
    }
    judged
}

/// Two cases.
pub fn judged() -> Judged {
    let case = |ohms, joules, verdict| Fired {
        set: load(ohms),
        claims: vec![dose(joules, verdict), brief()],
        ..fired()
    };
    Judged {
        cases: vec![
            case(25.0, 263.314_285_7, Verdict::Holds),
            case(150.0, 345.597_879_6, Verdict::Fails),
        ],
        worst: Vec::new(),
        claims: vec![
            ClaimSummary {
                name: "dose".to_owned(),
                verdict: Verdict::Fails,
                nominal: Verdict::Fails,
                worst: Some(1),
            },
            ClaimSummary {
                name: "brief".to_owned(),
                verdict: Verdict::Fails,
                nominal: Verdict::Fails,
                worst: Some(0),
            },
        ],
    }
}

/// The same with the dose at its worst corner, where it fails in the first case too.
pub fn judged_at_corners() -> Judged {
    let corner = |joules, farads| {
        Some(Worst {
            claim: dose(joules, Verdict::Fails),
            positions: [-1.0, 1.0].into_iter().collect(),
            corner: vec![
                stand("bank", farads, Dimension::FARAD),
                stand("choke winding", 10.5, Dimension::OHM),
            ],
        })
    };
    let mut judged = judged();
    judged.worst = vec![
        vec![corner(210.5, 30.4e-6), None],
        vec![corner(390.25, 33.6e-6), None],
    ];
    judged.claims[0].nominal = Verdict::Holds;
    judged
}

fn stand(name: &str, value: f64, dimension: Dimension) -> Stand {
    Stand::new(name, value, dimension)
}

/// Forty draws of a stage in two cases, counted by hand: a claim on every shot, one on a share.
pub fn tally(slice: [u64; 2]) -> Tally {
    let claim = |name: &str, asked, holds, undecided| ClaimTally {
        name: name.to_owned(),
        text: "energy into chest".to_owned(),
        relation: "is within 15 % of 300 J".to_owned(),
        answers: vec!["REQ-12".to_owned()],
        asked,
        holds,
        fails: 20 - holds - undecided,
        undecided,
    };
    let mut reading = ReadingTally {
        name: "dose".to_owned(),
        text: "energy into chest".to_owned(),
        unit: "J".to_owned(),
        nominal: Some(300.0),
        of: 0,
        missing: 1,
        bound: Some(0.0),
        least: None,
        most: None,
        sum: Sum::default(),
        squares: Sum::default(),
        bins: Bins::default(),
        against: vec![<[Sum; 3]>::default(); 2],
    };
    for draw in 1..20_u32 {
        let p = f64::from(draw) / 10.0 - 1.0;
        let found = value(300.0 + 40.0 * p, 1e-3);
        reading.add(&found, draw.into(), &[Some(p), Some(p * p - 0.3)]);
    }
    let case = |ohms| CaseTally {
        set: load(ohms),
        claims: vec![
            claim("dose", None, 18, 1),
            claim("mostly", Some(0.5), 19, 0),
        ],
        readings: vec![reading.clone()],
        hazards: fired().hazards,
    };
    Tally {
        shots: 40,
        seed: 1,
        slice,
        method: "trapezoidal rule".to_owned(),
        span: 0.03,
        defaults: vec!["start at rest".to_owned()],
        steps: 1234,
        smallest_step: Some(1e-9),
        largest_step: Some(1e-4),
        varying: vec!["bank".to_owned(), "choke winding".to_owned()],
        cases: vec![case(25.0), case(50.0)],
    }
}

/// The same as the whole that two slices make.
pub fn spread() -> Spread {
    let slices = vec![tally([1, 2]), tally([2, 2])];
    Spread::from(merge(slices).unwrap_or_else(|_| tally([1, 1])))
}
