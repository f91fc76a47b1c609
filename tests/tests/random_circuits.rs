//! Random circuits of 2 to 6 states with a switch, against a matrix exponential in 128 bits that
//! shares no line with the program: is the true error of a reading inside the bound stated?
//!
//! Drawn: one to three nodes with a capacitor to ground, up to three coils with windings between
//! them, resistors between them, perhaps a source behind a resistor, and a resistor that a switch
//! brings in at one instant and takes out at another. Eight readings each, one of them a crossing.
//!
//! The promise: the true error is inside the bound in at least 999 of 1,000 readings, and the
//! bound is not absurd. `PULSEWRIGHT_SHOTS=200 cargo test --release -p pulsewright-tests --test
//! random_circuits -- --nocapture` draws 200 circuits (1,600 readings); the default is small.

use std::fmt::Write;

use pulsewright_study::Found;
use pulsewright_tests::exact::{Big, Matrix, big, dot, double, first_fall, highest, passage};
use pulsewright_tests::fire;
use pulsewright_tests::random::Random;

/// What a branch of resistance joins: nodes from 0 (ground), ohm.
#[derive(Clone, Copy, Debug)]
struct Joint {
    from: usize,
    to: usize,
    ohms: f64,
}

#[derive(Clone, Copy, Debug)]
struct Coil {
    from: usize,
    to: usize,
    henrys: f64,
    winding: f64,
    carrying: f64,
}

/// A circuit as drawn; node k + 1 has `stores[k]`: farads and volts.
#[derive(Clone, Debug)]
struct Drawn {
    stores: Vec<(f64, f64)>,
    coils: Vec<Coil>,
    joints: Vec<Joint>,
    /// Volts and ohms in front of node 1.
    source: Option<(f64, f64)>,
    switched: Joint,
    closes: f64,
    opens: f64,
    window: (f64, f64),
    span: f64,
}

fn draw(seed: u64) -> Drawn {
    let mut r = Random::new(seed);
    let nodes = 1 + r.below(3);
    let coils = if nodes == 1 {
        1 + r.below(3)
    } else {
        r.below(4)
    };
    let other = |r: &mut Random, node: usize| loop {
        let to = r.below(nodes + 1);
        if to != node {
            return to;
        }
    };
    let mut joints = vec![Joint {
        from: 1,
        to: 0,
        ohms: r.decade(5.0, 500.0),
    }];
    for node in 2..=nodes {
        joints.push(Joint {
            from: node,
            to: r.below(node),
            ohms: r.decade(5.0, 500.0),
        });
    }
    let stores = (0..nodes)
        .map(|_| (r.decade(2e-6, 50e-6), r.decade(1.0, 2000.0)))
        .collect();
    let coils = (0..coils)
        .map(|_| {
            let from = 1 + r.below(nodes);
            let (henrys, winding) = (r.decade(1e-3, 50e-3), r.decade(0.5, 50.0));
            Coil {
                from,
                to: other(&mut r, from),
                henrys,
                winding,
                carrying: r.decade(0.01, 5.0),
            }
        })
        .collect();
    let source = (r.below(2) == 0).then(|| (r.decade(10.0, 1000.0), r.decade(20.0, 500.0)));
    let from = 1 + r.below(nodes);
    let switched = Joint {
        from,
        to: other(&mut r, from),
        ohms: r.decade(5.0, 200.0),
    };
    let span = r.decade(1e-3, 20e-3);
    let mut instants = [0.0; 4];
    for t in &mut instants {
        *t = r.decade(0.02 * span, 0.98 * span);
    }
    let [a, b, c, d] = instants;
    Drawn {
        stores,
        coils,
        joints,
        source,
        switched,
        closes: a.min(b),
        opens: if a == b { 0.99 * span } else { a.max(b) },
        window: if c == d {
            (0.0, d)
        } else {
            (c.min(d), c.max(d))
        },
        span,
    }
}

fn node(k: usize) -> String {
    if k == 0 {
        "ground".to_owned()
    } else {
        format!("n{k}")
    }
}

impl Drawn {
    fn text(&self) -> String {
        let mut text = String::new();
        let mut line = |s: String| writeln!(text, "{s}").unwrap();
        for (k, (farads, volts)) in self.stores.iter().enumerate() {
            line(format!(
                "capacitor c{k} from {} to ground = {farads:e} F, charged to {volts:e} V",
                node(k + 1)
            ));
        }
        for (k, l) in self.coils.iter().enumerate() {
            let Coil {
                henrys,
                winding,
                carrying,
                ..
            } = l;
            let place = format!("from {} to {}", node(l.from), node(l.to));
            line(format!(
                "inductor l{k} {place} = {henrys:e} H, carrying {carrying:e} A, winding {winding:e} ohm"
            ));
        }
        for (k, j) in self.joints.iter().enumerate() {
            line(format!(
                "resistor r{k} from {} to {} = {:e} ohm",
                node(j.from),
                node(j.to),
                j.ohms
            ));
        }
        if let Some((volts, ohms)) = self.source {
            line(format!("voltage feed from rail to ground = {volts:e} V"));
            line(format!("resistor lead from rail to n1 = {ohms:e} ohm"));
        }
        let Joint { from, to, ohms } = self.switched;
        let (closes, opens) = (self.closes, self.opens);
        line(format!(
            "switch gate from {} to x : open, closes at {closes:e} s, opens at {opens:e} s",
            node(from)
        ));
        line(format!("resistor rs from x to {} = {ohms:e} ohm", node(to)));
        line(format!("span {:e} s", self.span));
        let (t1, t2) = self.window;
        line("reading dose = energy into r0".to_owned());
        line(format!(
            "reading part_j = energy into r0 between {t1:e} s and {t2:e} s"
        ));
        line("reading swept = charge through gate".to_owned());
        line("reading crest = highest voltage across c0".to_owned());
        line(format!("reading level = voltage across c0 at {t2:e} s"));
        line(format!(
            "reading fall_t = time voltage across c0 first falls through {:e} V",
            self.level()
        ));
        line(format!(
            "reading left_v = final voltage across c{}",
            self.stores.len() - 1
        ));
        match self.coils.len() {
            0 => line("reading left_i = final current through r0".to_owned()),
            n => line(format!("reading left_i = final current through l{}", n - 1)),
        }
        text
    }

    /// What the first capacitor falls through, V.
    fn level(&self) -> f64 {
        self.stores[0].1 / 2.0
    }

    fn states(&self) -> usize {
        self.stores.len() + self.coils.len()
    }

    /// What each state is measured in, so that A is well balanced: sqrt(C), sqrt(L), 1.
    fn scales(&self) -> Vec<Big> {
        let stores = self.stores.iter().map(|s| s.0.sqrt());
        stores
            .chain(self.coils.iter().map(|l| l.henrys.sqrt()))
            .chain([1.0])
            .map(big)
            .collect()
    }

    /// x' = A x in the scaled states: sqrt(C) v, sqrt(L) i, and 1 for the source.
    fn matrix(&self, closed: bool) -> Matrix {
        let (n, one) = (self.stores.len(), self.states());
        let mut rates = Matrix::zeros(one + 1);
        let farads = |k: usize| big(self.stores[k].0);
        let mut conduct = |a: usize, b: usize, siemens: &Big| {
            // current a -> b; nodes from 1, ground has no row
            for (here, there) in [(a, b), (b, a)] {
                if here > 0 {
                    let g = siemens / farads(here - 1);
                    rates.add(here - 1, here - 1, &-g.clone());
                    if there > 0 {
                        rates.add(here - 1, there - 1, &g);
                    }
                }
            }
        };
        for j in &self.joints {
            conduct(j.from, j.to, &(big(1.0) / big(j.ohms)));
        }
        if closed {
            conduct(
                self.switched.from,
                self.switched.to,
                &(big(1.0) / big(self.switched.ohms)),
            );
        }
        if let Some((volts, ohms)) = self.source {
            conduct(1, 0, &(big(1.0) / big(ohms)));
            rates.add(0, one, &(big(volts) / big(ohms) / farads(0)));
        }
        for (k, l) in self.coils.iter().enumerate() {
            let row = n + k;
            rates.add(row, row, &-(big(l.winding) / big(l.henrys)));
            for (at, sign) in [(l.from, 1.0), (l.to, -1.0)] {
                if at > 0 {
                    rates.add(row, at - 1, &(big(sign) / big(l.henrys)));
                    rates.add(at - 1, row, &-(big(sign) / farads(at - 1)));
                }
            }
        }
        let s = self.scales();
        let mut a = Matrix::zeros(one + 1);
        for i in 0..=one {
            for j in 0..=one {
                a.set(i, j, rates.at(i, j) * &s[i] / &s[j]);
            }
        }
        a
    }

    fn start(&self) -> Vec<Big> {
        let plain = self
            .stores
            .iter()
            .map(|s| s.1)
            .chain(self.coils.iter().map(|l| l.carrying))
            .chain([1.0]);
        plain.zip(self.scales()).map(|(x, s)| big(x) * s).collect()
    }

    /// The row that reads a state.
    fn row(&self, state: usize, factor: &Big) -> Vec<Big> {
        let mut row = vec![big(0.0); self.states() + 1];
        row[state] = factor / &self.scales()[state];
        row
    }

    /// Each reading exactly, with the size that rounding is allowed relative to.
    fn exact(&self) -> Vec<(&'static str, f64, f64)> {
        let (n, states) = (self.stores.len(), self.states());
        let volts = self.row(0, &big(1.0));
        let conductance = big(1.0) / big(self.joints[0].ohms);
        let heat = Matrix::square_of(&volts);
        let gate = {
            let g = big(1.0) / big(self.switched.ohms);
            let mut row = self.row(self.switched.from - 1, &g);
            if self.switched.to > 0 {
                let back = self.row(self.switched.to - 1, &g);
                row = row.iter().zip(&back).map(|(x, y)| x - y).collect();
            }
            row
        };
        let mut cuts = vec![
            0.0,
            self.closes,
            self.opens,
            self.window.0,
            self.window.1,
            self.span,
        ];
        cuts.sort_by(f64::total_cmp);
        cuts.dedup();
        let (open, closed) = (self.matrix(false), self.matrix(true));

        let mut x = self.start();
        let (mut dose, mut part, mut swept) = (big(0.0), big(0.0), big(0.0));
        let mut crest = f64::NEG_INFINITY;
        let mut level = 0.0;
        let mut fall: Option<(f64, f64)> = None;
        let mut most: f64 = 0.0;
        for cut in cuts.windows(2) {
            let is_closed = cut[0] >= self.closes && cut[0] < self.opens;
            let a = if is_closed { &closed } else { &open };
            let length = big(cut[1]) - big(cut[0]);
            let p = passage(a, &length, std::slice::from_ref(&heat));
            let joules = p.squares[0].form(&x) * &conductance;
            if cut[0] >= self.window.0 && cut[0] < self.window.1 {
                part += &joules;
            }
            dose += joules;
            if is_closed {
                swept += dot(&gate, &p.area.apply(&x));
            }
            if fall.is_none() {
                let after = first_fall(a, &length, &x, &volts, self.level());
                fall = after.map(|t| (cut[0] + t, cut[0].max(t)));
            }
            crest = crest.max(highest(a, &length, &x, &volts));
            most = most.max(double(&dot(&volts, &x)).abs());
            x = p.phi.apply(&x);
            if cut[1] == self.window.1 {
                level = double(&dot(&volts, &x));
            }
        }
        let left_v = double(&dot(&self.row(n - 1, &big(1.0)), &x));
        let left_i = if self.coils.is_empty() {
            double(&(dot(&volts, &x) * &conductance))
        } else {
            double(&dot(&self.row(states - 1, &big(1.0)), &x))
        };
        let (dose, part, swept) = (double(&dose), double(&part), double(&swept));
        let mut readings = vec![
            ("dose", dose, dose),
            ("part_j", part, part),
            ("swept", swept, swept.abs()),
            ("crest", crest, most),
            ("level", level, most),
            ("left_v", left_v, left_v.abs().max(self.stores[n - 1].1)),
            ("left_i", left_i, left_i.abs()),
        ];
        readings.extend(fall.map(|(t, scale)| ("fall_t", t, scale)));
        readings
    }
}

fn shots() -> u64 {
    std::env::var("PULSEWRIGHT_SHOTS")
        .ok()
        .and_then(|n| n.parse().ok())
        .unwrap_or(20)
}

/// What is asked of a method: what it may be off by beside its bound, and from what error on the
/// bound is compared with it, both over the scale.
struct Asked {
    method: &'static str,
    slack: f64,
    seen: f64,
}

fn ask(asked: &Asked) {
    let (mut readings, mut outside, mut ratios, mut loose) =
        (0_u32, Vec::new(), Vec::new(), Vec::new());
    for seed in 1..=shots() {
        let drawn = draw(seed);
        let text = format!("{}integrate by {}\n", drawn.text(), asked.method);
        let fired = fire(&text);
        for (name, exact, scale) in drawn.exact() {
            let answer = fired
                .readings
                .iter()
                .find(|r| r.name == name)
                .map(|r| &r.answer.found);
            let Some(Found::Value { value, bound }) = answer else {
                panic!("{name}: {answer:?}\n{text}")
            };
            readings += 1;
            let error = (value - exact).abs();
            if error > bound + asked.slack * scale {
                outside.push(format!("circuit {seed}, {name}: {value} for {exact}: off by {error:.2e}, stated {bound:.2e}"));
            }
            if error > asked.seen * scale {
                ratios.push(bound / error);
            }
            loose.push(bound / scale.max(f64::MIN_POSITIVE));
        }
        let opinion = fired.second_opinion.as_ref();
        assert!(
            opinion.is_some_and(|o| o.missing.is_none()),
            "{opinion:?}\n{text}"
        );
    }
    ratios.sort_by(f64::total_cmp);
    loose.sort_by(f64::total_cmp);
    let median = ratios.get(ratios.len() / 2).copied().unwrap_or(0.0);
    println!(
        "{}: {} of {readings} readings inside their bounds; bound over error: median {median:.1}; bound over scale: median {:.1e}",
        asked.method,
        readings as usize - outside.len(),
        loose[loose.len() / 2]
    );
    let allowed = readings as usize / 1000;
    assert!(
        outside.len() <= allowed,
        "{} of {readings} outside:\n{}",
        outside.len(),
        outside.join("\n")
    );
    assert!(
        median <= 20.0,
        "the median bound is {median} times the error"
    );
}

#[test]
fn the_true_error_of_the_trapezoidal_rule_is_inside_the_bound() {
    ask(&Asked {
        method: "trapezoidal rule",
        slack: 1e-11,
        seen: 1e-13,
    });
}

/// Bounds of a few units of rounding have nothing to be compared with; the others have.
#[test]
fn the_true_error_of_exact_propagation_is_inside_the_bound() {
    ask(&Asked {
        method: "exact propagation",
        slack: 1e-14,
        seen: 1e-14,
    });
}

/// The reference itself, on a circuit with a closed form: 10 uF at 100 V, 10 mH and 20 ohm of
/// winding in series, where the current is V / (w L) exp(-a t) sin w t.
#[test]
fn the_reference_knows_a_ringing_discharge() {
    let drawn = Drawn {
        stores: vec![(10e-6, 100.0)],
        coils: vec![Coil {
            from: 1,
            to: 0,
            henrys: 10e-3,
            winding: 20.0,
            carrying: 0.0,
        }],
        joints: vec![Joint {
            from: 1,
            to: 0,
            ohms: 1e15,
        }],
        source: None,
        switched: Joint {
            from: 1,
            to: 0,
            ohms: 1e15,
        },
        closes: 1e-3,
        opens: 2e-3,
        window: (0.0, 1e-3),
        span: 3e-3,
    };
    let (a, w) = (1000.0_f64, 3000.0_f64);
    let exact = 100.0 / (w * 10e-3) * (-a * 3e-3).exp() * (w * 3e-3).sin();
    let found = drawn.exact();
    let got = found.iter().find(|r| r.0 == "left_i").map(|r| r.1).unwrap();
    assert!(
        (got - exact).abs() < 1e-9 * exact.abs(),
        "{got} for {exact}"
    );
}
