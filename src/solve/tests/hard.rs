//! Circuits with several operating points or none, and ones that are hard to reach.

use proptest::prelude::*;

use crate::solve::*;

use super::close;

fn npn() -> Bipolar {
    Bipolar { saturation_current: 1e-14, forward_gain: 100.0, early_voltage: 80.0, ..Bipolar::new(Polarity::N) }
}

/// Two transistors that hold each other off, on 5 V.
fn latch(ohms: [f64; 2]) -> (Circuit, [Node; 2]) {
    let mut circuit = Circuit::new();
    let [supply, one, other, base_one, base_other] =
        ["supply", "one", "other", "base one", "base other"].map(|name| circuit.node(name));
    circuit.add("V1", &[supply, GROUND], VoltageSource { volts: 5.0 }).unwrap();
    circuit.add("R1", &[supply, one], Resistor { ohms: ohms[0] }).unwrap();
    circuit.add("R2", &[supply, other], Resistor { ohms: ohms[1] }).unwrap();
    circuit.add("R3", &[other, base_one], Resistor { ohms: 10e3 }).unwrap();
    circuit.add("R4", &[one, base_other], Resistor { ohms: 10e3 }).unwrap();
    circuit.add("Q1", &[one, base_one, GROUND], npn()).unwrap();
    circuit.add("Q2", &[other, base_other, GROUND], npn()).unwrap();
    (circuit, [one, other])
}

#[test]
fn a_latch_has_two_stable_points_and_an_unstable_one_between() {
    // Eccles, Jordan, A trigger relay utilizing three-electrode thermionic vacuum tubes, The Radio Review 1 (1919): two
    // states; by index theory the point between them is unstable (Strogatz, Nonlinear Dynamics and Chaos, section 6.8).
    let (circuit, [one, other]) = latch([1e3, 1e3]);
    let search = Search { node: one, from: -0.01, to: 5.5 };
    let found = operating_points(&circuit, &search).unwrap();
    let stable: Vec<bool> = found.points.iter().map(OperatingPoint::is_stable).collect();
    assert_eq!(stable, [true, false, true], "{:?}", found.points);
    // Both sides are the same, so that the outer points mirror each other and the middle one is even.
    let volts: Vec<[f64; 2]> =
        found.points.iter().map(|point| [point.solution.voltage(one), point.solution.voltage(other)]).collect();
    close(volts[0][0], volts[2][1], 1e-6);
    close(volts[0][1], volts[2][0], 1e-6);
    close(volts[1][0], volts[1][1], 1e-6);
    // Forced at the other side, the same points are found.
    let again = operating_points(&circuit, &Search { node: other, ..search }).unwrap();
    assert_eq!(again.points.len(), 3);
    // Each is a solution: from there the unforced circuit does not move.
    for point in &found.points {
        let near = dc_near(&circuit, &point.solution).unwrap();
        assert!((near.voltage(one) - point.volts).abs() < 1e-6);
    }
}

#[test]
fn a_circuit_without_feedback_has_one_point() {
    let (circuit, [one, _]) = latch([1e3, 1e3]);
    let mut open = circuit.clone();
    let base = open.node("elsewhere");
    open.add("R9", &[base, GROUND], Resistor { ohms: 1.0 }).unwrap();
    let found = operating_points(&single(), &Search { node: one, from: -0.01, to: 5.5 }).unwrap();
    assert_eq!((found.points.len(), found.jumps), (1, 0));
    assert!(found.points[0].is_stable());
}

/// One transistor with its base held.
fn single() -> Circuit {
    let mut circuit = Circuit::new();
    let [supply, collector, base] = ["supply", "collector", "base"].map(|name| circuit.node(name));
    circuit.add("V1", &[supply, GROUND], VoltageSource { volts: 5.0 }).unwrap();
    circuit.add("R1", &[supply, collector], Resistor { ohms: 1e3 }).unwrap();
    circuit.add("V2", &[base, GROUND], VoltageSource { volts: 0.65 }).unwrap();
    circuit.add("Q1", &[collector, base, GROUND], npn()).unwrap();
    circuit
}

#[test]
fn searches_out_of_order_are_refused() {
    let (circuit, [one, _]) = latch([1e3, 1e3]);
    for (node, from, to) in [(one, 1.0, 0.0), (one, f64::NAN, 1.0), (one, 1.0, 1.0 + 1e-12)] {
        assert_eq!(operating_points(&circuit, &Search { node, from, to }), Err(SolveError::Limits));
    }
    let search = Search { node: GROUND, from: 0.0, to: 1.0 };
    assert_eq!(operating_points(&circuit, &search), Err(SolveError::UnknownNode));
}

/// A regulator of two transistors, its reference in the emitter of the amplifier, on a supply.
fn two_transistors(supply: f64) -> (Circuit, Node) {
    let mut circuit = Circuit::new();
    let [input, base, output, emitter, sense] =
        ["in", "base", "out", "emitter", "sense"].map(|name| circuit.node(name));
    circuit.add("V1", &[input, GROUND], VoltageSource { volts: supply }).unwrap();
    circuit.add("R1", &[input, base], Resistor { ohms: 2.2e3 }).unwrap();
    let pass = Bipolar { base_resistance: 4.0, collector_resistance: 0.15, emitter_resistance: 0.05, ..npn() };
    circuit.add("Q1", &[input, base, output], pass).unwrap();
    circuit.add("Q2", &[base, sense, emitter], npn()).unwrap();
    let zener = Diode { breakdown_voltage: 5.6, breakdown_current: 5e-3, series_resistance: 4.0, ..Diode::default() };
    circuit.add("D1", &[GROUND, emitter], zener).unwrap();
    circuit.add("R2", &[output, emitter], Resistor { ohms: 1e3 }).unwrap();
    circuit.add("R3", &[output, sense], Resistor { ohms: 3.3e3 }).unwrap();
    circuit.add("R4", &[sense, GROUND], Resistor { ohms: 6.8e3 }).unwrap();
    circuit.add("R5", &[output, GROUND], Resistor { ohms: 100.0 }).unwrap();
    (circuit, output)
}

#[test]
fn a_regulator_of_two_transistors_holds_its_output() {
    // Vout = (VZ + VBE)(1 + R3/R4) and the base current of the amplifier through R3 (Horowitz, Hill, The Art of
    // Electronics, chapter 9: discrete series regulators).
    let (circuit, output) = two_transistors(15.0);
    let volts = dc(&circuit).unwrap().voltage(output);
    assert!((volts - 9.3).abs() < 0.2, "{volts}");
    let input = DeviceId::at(0);
    let change = line_change(&circuit, input, output, None).unwrap();
    assert!(change > 0.0 && change < 0.3, "{change}");
    let dropped = dropout(&circuit, input, output, None).unwrap();
    close(dropped.output, 0.98 * volts, 1e-6);
    close(dropped.across, dropped.input - dropped.output, 1e-9);
    assert!(dropped.across > 0.7 && dropped.across < 3.5, "{dropped:?}");
}

#[test]
fn an_output_that_does_not_hang_on_the_input_never_drops_out() {
    let mut circuit = single();
    let other = circuit.node("other");
    let source = circuit.add("V3", &[other, GROUND], VoltageSource { volts: 3.0 }).unwrap();
    let spare = circuit.node("spare");
    circuit.add("V4", &[spare, GROUND], VoltageSource { volts: 1.0 }).unwrap();
    assert_eq!(dropout(&circuit, source, spare, None), Err(SolveError::NoDropout));
}

#[test]
fn contradictions_name_what_is_not_determined() {
    let mut circuit = Circuit::new();
    let node = circuit.node("rail");
    circuit.add("V1", &[node, GROUND], VoltageSource { volts: 5.0 }).unwrap();
    circuit.add("V2", &[node, GROUND], VoltageSource { volts: 3.0 }).unwrap();
    let error = dc(&circuit).unwrap_err();
    assert!(matches!(&error, SolveError::Singular { place } if place.contains("current of V")), "{error}");
}

#[test]
fn what_has_no_operating_point_is_told_with_its_worst_node() {
    // A current into a node that nothing but a diode the other way leaves has only the least conductances to go.
    let mut circuit = Circuit::new();
    let node = circuit.node("stuck");
    circuit.add("I1", &[GROUND, node], CurrentSource { amperes: 1e300 }).unwrap();
    circuit.add("D1", &[node, GROUND], Diode::default()).unwrap();
    let error = dc(&circuit).unwrap_err();
    assert!(error.to_string().contains("stuck"), "{error}");
}

#[test]
fn a_circuit_of_sixty_unknowns_is_solved_and_a_larger_one_refused() {
    let ladder = |count: usize| {
        let mut circuit = Circuit::new();
        let mut before = circuit.node("in");
        circuit.add("V1", &[before, GROUND], VoltageSource { volts: 12.0 }).unwrap();
        for number in 0..count {
            let node = circuit.node(&format!("n{number}"));
            circuit.add(&format!("R{number}"), &[before, node], Resistor { ohms: 100.0 }).unwrap();
            circuit.add(&format!("D{number}"), &[node, GROUND], Diode::default()).unwrap();
            before = node;
        }
        (circuit, before)
    };
    let (circuit, last) = ladder(60);
    let volts = dc(&circuit).unwrap().voltage(last);
    assert!(volts > 0.3 && volts < 0.7, "{volts}");
    let (circuit, _) = ladder(LARGEST);
    assert_eq!(dc(&circuit).unwrap_err(), SolveError::TooLarge { count: LARGEST + 2 });
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(100))]

    #[test]
    fn networks_of_junctions_are_solved_whatever_their_values(
        parts in prop::collection::vec((0..5_usize, 0..5_usize, 0..5_usize, 0..5_usize, 1.0..1e5_f64), 1..12),
        supply in 1.0..30.0_f64,
    ) {
        let mut circuit = Circuit::new();
        let mut nodes = vec![GROUND];
        nodes.extend((0..4).map(|number| circuit.node(&format!("n{number}"))));
        circuit.add("V1", &[nodes[4], GROUND], VoltageSource { volts: supply }).unwrap();
        for (number, (kind, one, two, three, ohms)) in parts.iter().enumerate() {
            let (one, two, three) = (nodes[*one], nodes[*two], nodes[*three]);
            let name = format!("X{number}");
            // Without resistance a junction across the supply would take more than any number of amperes.
            let [transistor, pnp] = [npn(), Bipolar::new(Polarity::P)].map(|plain| Bipolar {
                base_resistance: 10.0,
                collector_resistance: 1.0,
                emitter_resistance: 1.0,
                ..plain
            });
            let mosfet = Mosfet {
                threshold: 2.0,
                transconductance: 0.1,
                drain_resistance: 1.0,
                source_resistance: 0.1,
                ..Mosfet::new(Polarity::N)
            };
            let zener = Diode { breakdown_voltage: 5.6, series_resistance: 1.0, ..Diode::default() };
            match kind {
                0 => circuit.add(&name, &[one, two, three], transistor),
                1 => circuit.add(&name, &[one, two, three], pnp),
                2 => circuit.add(&name, &[one, two], zener),
                3 => circuit.add(&name, &[one, two, three], mosfet),
                _ => circuit.add(&name, &[one, two], Resistor { ohms: *ohms }),
            }.unwrap();
            circuit.add(&format!("R{number}"), &[one, two], Resistor { ohms: *ohms }).unwrap();
        }
        let solution = dc(&circuit).unwrap();
        // No node of such a network lies beyond its supply by more than rounding.
        for node in &nodes {
            let volts = solution.voltage(*node);
            prop_assert!((-1e-3..=supply + 1e-3).contains(&volts), "{volts}");
        }
    }
}
