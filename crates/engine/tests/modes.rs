//! Natural frequencies of small circuits, built by hand, against closed forms.

#![allow(clippy::unwrap_used, clippy::panic, reason = "a test may end by panic")]

use proptest::prelude::*;
use pulsewright_circuit::draft::Method;
use pulsewright_circuit::formula::{Formula, Probe};
use pulsewright_circuit::setup::{
    Element, Limits, Ohms, SetAction, SetControl, SetPart, SetTrigger, Setup,
};
use pulsewright_engine::equations::Equations;
use pulsewright_engine::modes::{Kind, NaturalMode, Passage, modes};
use pulsewright_engine::network::Network;
use pulsewright_engine::rates::rates;
use pulsewright_engine::{Mesh, Request, Shot, Stretch, fire};

/// Parts between nodes 0 (ground) to 4, followed for 1 ms.
fn setup(parts: Vec<(&str, Element)>) -> Setup {
    Setup {
        nodes: ["ground", "a", "b", "c", "d"].map(String::from).to_vec(),
        parts: parts
            .into_iter()
            .map(|(name, element)| SetPart {
                name: name.into(),
                element,
            })
            .collect(),
        span: 1e-3,
        steady: false,
        method: Method::Trapezoidal,
        error: 1e-6,
        step: None,
        limits: Limits::default(),
    }
}

fn passages(parts: Vec<(&str, Element)>) -> Vec<Passage> {
    let setup = setup(parts);
    let request = Request::new(Vec::new(), Mesh::Chosen { tolerance: 1e-3 });
    modes(&setup, &fire(&setup, &request).unwrap()).unwrap()
}

/// The modes of a circuit of one topology.
fn only(parts: Vec<(&str, Element)>) -> Vec<NaturalMode> {
    let [passage] = <[Passage; 1]>::try_from(passages(parts)).unwrap();
    assert_eq!((passage.from, passage.to), (0.0, 1e-3));
    passage.modes
}

fn resistor(a: usize, b: usize, ohms: f64) -> Element {
    Element::Resistor {
        a,
        b,
        ohms: Ohms::Finite(ohms),
    }
}

fn capacitor(a: usize, b: usize, farads: f64) -> Element {
    Element::Capacitor {
        a,
        b,
        farads,
        charged: Some(1.0),
        series: 0.0,
        leakage: None,
    }
}

fn inductor(a: usize, b: usize, henrys: f64) -> Element {
    Element::Inductor {
        a,
        b,
        henrys,
        carrying: None,
        winding: 0.0,
    }
}

fn close(got: f64, want: f64) {
    let scale = want.abs().max(f64::MIN_POSITIVE);
    assert!((got - want).abs() <= 1e-12 * scale, "{got} for {want}");
}

/// Where both eigenvalues are near each other, rounding moves them by its root.
fn close_to_double(got: f64, want: f64) {
    assert!((got - want).abs() <= 1e-7 * want.abs(), "{got} for {want}");
}

const L: f64 = 28e-3;
const C: f64 = 36e-6;

/// Series: α = R / 2L. Parallel: α = 1 / 2RC. Both: λ = -α ± √(α² - 1/LC), ζ = α √(LC).
fn check_resonance(parts: impl Fn(f64) -> Vec<(&'static str, Element)>, ohms: f64, alpha: f64) {
    let omega = 1.0 / (L * C).sqrt();
    let found = only(parts(ohms));
    let ratio = alpha / omega;
    if (ratio - 1.0).abs() < 1e-12 {
        let [double] = found.as_slice() else {
            panic!("{found:?}")
        };
        assert_eq!((double.kind, double.count), (Kind::CriticallyDamped, 2));
        assert_eq!((double.imaginary, double.damping_ratio), (0.0, Some(1.0)));
        close_to_double(double.real, -alpha);
    } else if ratio < 1.0 {
        let [pair] = found.as_slice() else {
            panic!("{found:?}")
        };
        assert_eq!((pair.kind, pair.count), (Kind::Underdamped, 2));
        close(pair.real, -alpha);
        close(pair.imaginary, (omega * omega - alpha * alpha).sqrt());
        close(pair.damping_ratio.unwrap(), ratio);
        close(pair.time_constant().unwrap(), 1.0 / alpha);
        // The energy of a ringing pair is half electric, half magnetic.
        close(pair.electric, 0.5);
    } else {
        let [slow, fast] = found.as_slice() else {
            panic!("{found:?}")
        };
        let root = (alpha * alpha - omega * omega).sqrt();
        // λ₁ λ₂ = 1/LC, without the cancellation of -α + √
        let want = -omega * omega / (alpha + root);
        // The matrix is rounded in units of its largest entry.
        let rounding = 16.0 * f64::EPSILON * fast.real.abs();
        assert!((slow.real - want).abs() <= rounding, "{slow:?} for {want}");
        close(fast.real, -alpha - root);
        for mode in [slow, fast] {
            assert_eq!((mode.kind, mode.count), (Kind::Overdamped, 1));
            assert!((mode.damping_ratio.unwrap() / ratio - 1.0).abs() < 1e-11);
            assert_eq!(mode.frequency(), None);
        }
    }
}

#[test]
fn series_resonance_in_three_regimes() {
    let critical = 2.0 * (L / C).sqrt();
    for ohms in [0.1, 9.0, critical, 60.0, 5e3] {
        let parts = |ohms| {
            vec![
                ("bank", capacitor(1, 0, C)),
                ("choke", inductor(1, 2, L)),
                ("chest", resistor(2, 0, ohms)),
            ]
        };
        check_resonance(parts, ohms, ohms / (2.0 * L));
    }
}

#[test]
fn parallel_resonance_in_three_regimes() {
    let critical = 0.5 * (L / C).sqrt();
    for ohms in [0.2, 10.0, critical, 50.0, 5e3] {
        let parts = |ohms| {
            vec![
                ("bank", capacitor(1, 0, C)),
                ("choke", inductor(1, 0, L)),
                ("chest", resistor(1, 0, ohms)),
            ]
        };
        check_resonance(parts, ohms, 1.0 / (2.0 * ohms * C));
    }
}

#[test]
fn nothing_damps_a_coil_on_a_capacitor() {
    let found = only(vec![
        ("bank", capacitor(1, 0, C)),
        ("choke", inductor(1, 0, L)),
    ]);
    assert_eq!(found.len(), 1);
    assert_eq!((found[0].kind, found[0].real), (Kind::Undamped, 0.0));
    assert_eq!(found[0].damping_ratio, Some(0.0));
    assert_eq!(found[0].time_constant(), None);
    close(found[0].imaginary, 1.0 / (L * C).sqrt());
}

#[test]
fn two_equal_decays_apart_are_no_critical_pair() {
    let found = only(vec![
        ("one", capacitor(1, 0, C)),
        ("load one", resistor(1, 0, 50.0)),
        ("two", capacitor(2, 0, C)),
        ("load two", resistor(2, 0, 50.0)),
    ]);
    assert_eq!(found.len(), 2);
    for mode in found {
        assert_eq!((mode.kind, mode.damping_ratio), (Kind::Decays, None));
        close(mode.real, -1.0 / (50.0 * C));
    }
}

#[test]
fn a_capacitor_and_a_coil_apart_are_no_pair() {
    let found = only(vec![
        ("bank", capacitor(1, 0, C)),
        ("chest", resistor(1, 0, 50.0)),
        ("choke", inductor(2, 0, L)),
        ("load", resistor(2, 0, 50.0)),
    ]);
    let kinds: Vec<Kind> = found.iter().map(|m| m.kind).collect();
    assert_eq!(kinds, [Kind::Decays, Kind::Decays]);
    close(found[0].real, -1.0 / (50.0 * C));
    close(found[1].real, -50.0 / L);
    assert_eq!(found[0].energy, [(0, 1.0)]);
    assert_eq!(found[1].energy, [(2, 1.0)]);
}

/// Two equal loops of L and C coupled by k: ω = 1 / √(LC (1 ± k)), each mode half in each loop.
#[test]
fn coupled_loops_part_into_two_frequencies() {
    let k = 0.3;
    let coupling = Element::Coupling {
        first: 1,
        second: 3,
        factor: k,
    };
    let found = only(vec![
        ("left", capacitor(1, 0, C)),
        ("first", inductor(1, 0, L)),
        ("right", capacitor(2, 0, C)),
        ("second", inductor(2, 0, L)),
        ("pair", coupling),
    ]);
    assert_eq!(found.len(), 2);
    close(found[0].imaginary, 1.0 / (L * C * (1.0 + k)).sqrt());
    close(found[1].imaginary, 1.0 / (L * C * (1.0 - k)).sqrt());
    for mode in &found {
        assert_eq!(mode.energy.len(), 4);
        mode.energy
            .iter()
            .for_each(|(_, share)| close(*share, 0.25));
    }
}

/// A winding shorted by another of coupling k shows its leakage L (1 - k²) to a capacitor, and a
/// shorted loop of no resistance holds its flux.
#[test]
fn a_shorted_winding_leaves_the_leakage() {
    let k = 0.98;
    let coupling = Element::Coupling {
        first: 1,
        second: 2,
        factor: k,
    };
    let found = only(vec![
        ("bank", capacitor(1, 0, C)),
        ("primary", inductor(1, 0, L)),
        ("secondary", inductor(2, 0, 1e-6)),
        ("short", Element::Wire { a: 2, b: 0 }),
        ("pair", coupling),
    ]);
    let kinds: Vec<Kind> = found.iter().map(|m| m.kind).collect();
    assert_eq!(kinds, [Kind::Holds, Kind::Undamped]);
    close(found[0].electric, 0.0);
    let leakage: f64 = L * (1.0 - k * k);
    assert!((found[1].imaginary * (leakage * C).sqrt() - 1.0).abs() < 1e-10);
    for mode in &found {
        close(mode.energy.iter().map(|e| e.1).sum(), 1.0);
    }
}

/// Before the switch closes the bank holds its charge and the choke has nowhere to carry a current;
/// afterwards they ring through the chest, and when it opens the bank holds what is left.
#[test]
fn a_switch_parts_two_topologies() {
    let action = |state, t| SetAction {
        state,
        triggers: vec![SetTrigger::At(t)],
    };
    let fire = Element::Switch {
        a: 1,
        b: 2,
        control: SetControl::Schedule {
            closed: false,
            actions: vec![action(1, 1e-4), action(0, 4e-4)],
        },
        contact: None,
        insulation: None,
    };
    let all = passages(vec![
        ("bank", capacitor(1, 0, C)),
        ("fire", fire),
        ("choke", inductor(2, 3, L)),
        ("chest", resistor(3, 0, 9.0)),
    ]);
    let times: Vec<(f64, f64)> = all.iter().map(|p| (p.from, p.to)).collect();
    assert_eq!(times, [(0.0, 1e-4), (1e-4, 4e-4), (4e-4, 1e-3)]);
    let [before, during, after] = <[Passage; 3]>::try_from(all).unwrap();
    assert_eq!(before.modes.len(), 1, "{:?}", before.modes);
    assert_eq!(before.modes[0].kind, Kind::Holds);
    assert_eq!(before.modes[0].energy, [(0, 1.0)]);
    assert_eq!(during.modes.len(), 1);
    assert_eq!(during.modes[0].kind, Kind::Underdamped);
    let alpha = 9.0 / (2.0 * L);
    close(during.modes[0].real, -alpha);
    close(
        during.modes[0].imaginary,
        (1.0 / (L * C) - alpha * alpha).sqrt(),
    );
    assert_eq!(after.modes, before.modes);
}

/// Two capacitors in parallel have one voltage, and so one mode.
#[test]
fn a_dependent_capacitor_brings_no_mode() {
    let found = only(vec![
        ("one", capacitor(1, 0, 1e-6)),
        ("two", capacitor(1, 0, 2e-6)),
        ("load", resistor(1, 0, 1e3)),
    ]);
    assert_eq!(found.len(), 1);
    close(found[0].real, -1.0 / 3e-3);
    close(found[0].energy[0].1, 1.0 / 3.0);
    close(found[0].energy[1].1, 2.0 / 3.0);
}

/// Two inductors in series carry one current.
#[test]
fn a_dependent_coil_brings_no_mode() {
    let found = only(vec![
        ("one", inductor(1, 2, 1e-3)),
        ("two", inductor(2, 3, 3e-3)),
        ("load", resistor(1, 3, 8.0)),
        ("earth", resistor(3, 0, 1.0)),
    ]);
    assert_eq!(found.len(), 1);
    assert_eq!(found[0].kind, Kind::Decays);
    close(found[0].real, -2000.0);
    close(found[0].energy[0].1, 0.25);
}

/// A bank that leaks through 1 GΩ beside a mode of 1 ns dies away, however slowly.
#[test]
fn a_slow_leak_beside_a_fast_mode_is_not_held() {
    let found = only(vec![
        ("bank", capacitor(1, 0, 36e-6)),
        ("leak", resistor(1, 0, 1e9)),
        ("stray", capacitor(2, 0, 1e-12)),
        ("damp", resistor(2, 0, 1e3)),
    ]);
    assert_eq!(found[0].kind, Kind::Decays);
    close(found[0].real, -1.0 / 36e3);
}

#[test]
fn charges_that_are_held_are_told_apart() {
    let found = only(vec![
        ("one", capacitor(1, 0, 1e-6)),
        ("two", capacitor(2, 0, 3e-6)),
        ("three", capacitor(3, 4, 5e-6)),
    ]);
    let mut parts: Vec<Vec<(usize, f64)>> = found.iter().map(|m| m.energy.clone()).collect();
    parts.sort_by_key(|p| p[0].0);
    assert_eq!(parts, [[(0, 1.0)], [(1, 1.0)], [(2, 1.0)]]);
    assert!(found.iter().all(|m| m.kind == Kind::Holds));
}

/// A source that gives back more than the resistor takes: C v' = -v/R + g v.
#[test]
fn a_controlled_source_may_make_a_mode_grow() {
    let source = Formula::Multiply(
        Box::new(Formula::Number(0.05)),
        Box::new(Formula::Probe(Probe::VoltageAcross(0))),
    );
    let found = only(vec![
        ("bank", capacitor(1, 0, 1e-3)),
        ("load", resistor(1, 0, 50.0)),
        ("pump", Element::Current { a: 0, b: 1, source }),
    ]);
    assert_eq!(found[0].kind, Kind::Grows);
    close(found[0].real, 30.0);
}

#[test]
fn a_circuit_that_stores_nothing_has_no_modes() {
    assert!(only(vec![("load", resistor(1, 0, 50.0))]).is_empty());
}

/// Parts whose values are too far apart for numbers are refused, not crashed on.
#[test]
fn values_beyond_numbers_are_refused() {
    let setup = setup(vec![
        ("bank", capacitor(1, 0, 1e-300)),
        ("load", resistor(1, 0, 1e-9)),
    ]);
    let shot = shot_of_one_topology(&setup);
    assert!(modes(&setup, &shot).is_err());
}

/// A shot of which nothing but its only topology is known.
fn shot_of_one_topology(setup: &Setup) -> Shot {
    let mut stretch = Stretch::default();
    stretch.times = vec![0.0, setup.span];
    stretch.states = vec![0; setup.parts.len()];
    Shot {
        stretches: vec![stretch],
        ..Shot::default()
    }
}

fn part() -> impl Strategy<Value = Element> {
    let nodes = (0..5_usize, 0..5_usize).prop_filter("apart", |(a, b)| a != b);
    let value = (-1.0..1.0_f64).prop_map(|x| 10_f64.powf(x));
    (0..3, nodes, value).prop_map(|(kind, (a, b), x)| match kind {
        0 => resistor(a, b, x),
        1 => capacitor(a, b, x),
        _ => inductor(a, b, x),
    })
}

proptest! {
    #![proptest_config(ProptestConfig { failure_persistence: None, ..ProptestConfig::with_cases(400) })]

    /// Against the eigenvalues of the matrix of all states, dependent ones included: those that are
    /// not zero are the same. Rounding parts a double one by its root.
    #[test]
    fn random_circuits_have_the_frequencies_of_the_whole_matrix(
        elements in prop::collection::vec(part(), 1..9)
    ) {
        let setup = setup(elements.into_iter().map(|e| ("part", e)).collect());
        let found = modes(&setup, &shot_of_one_topology(&setup)).unwrap().remove(0).modes;
        for mode in &found {
            let sum: f64 = mode.energy.iter().map(|e| e.1).sum();
            prop_assert!((sum - 1.0).abs() < 1e-8, "{mode:?}");
            prop_assert!(mode.real <= 0.0, "{mode:?}");
            prop_assert!(mode.imaginary == 0.0 || (mode.electric - 0.5).abs() < 1e-6, "{mode:?}");
        }
        let net = Network::new(&setup).unwrap();
        let mut equations = Equations::new(&net, &setup, &vec![0; setup.parts.len()], 0.0).unwrap();
        let whole = rates(&mut equations, &net, &setup).unwrap();
        let most = whole.iter().fold(1.0_f64, |a, b| a.max(*b));
        let mut whole: Vec<f64> = whole.iter().copied().filter(|r| *r > 1e-6 * most).collect();
        let mut own: Vec<f64> = found
            .iter()
            .filter(|m| m.kind != Kind::Holds)
            .flat_map(|m| vec![m.real.hypot(m.imaginary); m.count as usize])
            .filter(|r| *r > 1e-6 * most)
            .collect();
        whole.sort_by(f64::total_cmp);
        own.sort_by(f64::total_cmp);
        prop_assert_eq!(whole.len(), own.len());
        for (a, b) in whole.iter().zip(&own) {
            prop_assert!((a - b).abs() < 1e-6 * most, "{} for {}", b, a);
        }
    }
}
