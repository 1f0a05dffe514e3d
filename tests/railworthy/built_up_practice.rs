//! Figures that the trade goes by for regulators from single parts (common practice, each phrase at its test), against
//! what the solver and the usual device models say.

use std::sync::Arc;

use railworthy::board::Board;
use railworthy::circuit::Circuit as Drawn;
use railworthy::facts::{Facts, Subject};
use railworthy::knowledge::{DeviceModel, Knowledge};
use railworthy::netlist;
use railworthy::recognize::recognize;
use railworthy::solve::{
    Bank, Capacitor, Circuit, CurrentSource, Device, DeviceId, Frequencies, GROUND, LoopGain, Node, OpAmp, Resistor,
    Transconductance, VoltageSource, dc, dc_from, dropout, from_model,
};

/// The nominal device of a family of `rules/devices/`.
fn usual(name: &str) -> Arc<dyn Device> {
    let family = Knowledge::shared().devices.iter().find(|family| family.name == name);
    let family = family.unwrap_or_else(|| panic!("no {name}"));
    from_model(&family.model(None), |_, range| range.nominal())
}

fn parameter(name: &str, parameter: &str) -> f64 {
    let family = Knowledge::shared().devices.iter().find(|family| family.name == name);
    family.unwrap_or_else(|| panic!("no {name}")).model(None).get(parameter).unwrap().nominal()
}

fn model(text: &str) -> Arc<dyn Device> {
    from_model(&DeviceModel::read(text).unwrap(), |_, range| range.nominal())
}

fn resistor(circuit: &mut Circuit, one: Node, other: Node, ohms: f64) {
    circuit.add("resistor", &[one, other], Resistor { ohms }).unwrap();
}

fn source(circuit: &mut Circuit, node: Node, volts: f64) -> DeviceId {
    circuit.add("source", &[node, GROUND], VoltageSource { volts }).unwrap()
}

/// The room that the op-amps of these tests keep to their upper rail, volts.
const TOP: f64 = 0.3;

/// The voltage across a follower from 9 V at 5 V and 100 mA that drops out, which an op-amp drives from the same input;
/// as one transistor, or as a Darlington.
fn follower_dropout(darlington: bool) -> f64 {
    let mut circuit = Circuit::new();
    let [input, output, drive, held, sensed] =
        ["input", "output", "drive", "held", "sensed"].map(|name| circuit.node(name));
    let supply = source(&mut circuit, input, 9.0);
    source(&mut circuit, held, 2.5);
    let amplifier = OpAmp { top: TOP, bottom: 0.05, output_resistance: 1.0, ..OpAmp::default() };
    circuit.add("amplifier", &[held, sensed, input, GROUND, drive], amplifier).unwrap();
    let base = if darlington { circuit.node("second base") } else { drive };
    circuit.add_shared("pass", &[input, base, output], usual("any NPN power transistor")).unwrap();
    if darlington {
        circuit.add_shared("driver", &[input, drive, base], usual("any small NPN transistor")).unwrap();
    }
    resistor(&mut circuit, output, sensed, 10e3);
    resistor(&mut circuit, sensed, GROUND, 10e3);
    resistor(&mut circuit, output, GROUND, 50.0);
    let start = dc_from(&circuit, &[(output, 5.0)]).unwrap();
    assert!((start.voltage(output) - 5.0).abs() < 0.05);
    dropout(&circuit, supply, output, Some(&start)).unwrap().across
}

/// "A follower behind an op-amp wants about 0.6 V for its base-emitter drop and about 0.3 V for the amplifier below its
/// rail, about 1 V in all"; "a Darlington 1 to 2 V", since it has two such drops.
#[test]
fn a_follower_wants_about_a_volt_and_a_darlington_doubles_its_part() {
    let (one, two) = (follower_dropout(false), follower_dropout(true));
    assert!((0.8..1.2).contains(&one), "{one}");
    assert!((1.0..2.0).contains(&two), "{two}");
    let part = (two - TOP) / (one - TOP);
    assert!((1.7..2.3).contains(&part), "{part}");
}

/// "The current gain of a power transistor is 20 to 50."
#[test]
fn the_usual_power_transistor_has_a_gain_of_twenty_to_fifty() {
    for name in ["any NPN power transistor", "any PNP power transistor"] {
        let gain = parameter(name, "BF");
        assert!((20.0..=50.0).contains(&gain), "{name}: {gain}");
        // Near a good part of its current as well.
        let mut circuit = Circuit::new();
        let sign = if name.contains("NPN") { 1.0 } else { -1.0 };
        let [collector, base] = ["collector", "base"].map(|name| circuit.node(name));
        let supply = source(&mut circuit, collector, sign * 5.0);
        circuit.add("drive", &[GROUND, base], CurrentSource { amperes: sign * 0.03 }).unwrap();
        circuit.add_shared("transistor", &[collector, base, GROUND], usual(name)).unwrap();
        let current = -sign * dc(&circuit).unwrap().current(supply).unwrap();
        assert!((20.0..=50.0).contains(&(current / 0.03)), "{name}: {current} A");
    }
}

/// The resistance that a node shows in ohms, by a small current into it.
fn shown(build: impl Fn(f64) -> (Circuit, Node)) -> f64 {
    let at = |amperes: f64| {
        let (circuit, node) = build(amperes);
        dc(&circuit).unwrap().voltage(node)
    };
    (at(1e-6) - at(-1e-6)) / 2e-6
}

/// "The output of a follower shows 1/gm": 26 mV over its current.
#[test]
fn a_follower_shows_the_inverse_of_its_transconductance() {
    for load in [1e-3, 5e-3, 20e-3] {
        let ohms = shown(|amperes| {
            let mut circuit = Circuit::new();
            let [input, base, output] = ["input", "base", "output"].map(|name| circuit.node(name));
            source(&mut circuit, input, 9.0);
            source(&mut circuit, base, 5.7);
            circuit.add("load", &[output, GROUND], CurrentSource { amperes: load }).unwrap();
            circuit.add("more", &[GROUND, output], CurrentSource { amperes }).unwrap();
            circuit.add_shared("follower", &[input, base, output], model("npn IS=1e-14 BF=200 VAF=80")).unwrap();
            (circuit, output)
        });
        let wanted = 26e-3 / load;
        assert!((ohms / wanted - 1.0).abs() < 0.03, "{ohms} against {wanted}");
    }
}

/// "A collector shows 20 to 50 kΩ", the Early voltage over the current, at a few milliamperes.
#[test]
fn a_collector_shows_tens_of_kilohms() {
    let name = "any small PNP transistor";
    let load = 2e-3;
    let ohms = shown(|amperes| {
        let mut circuit = Circuit::new();
        let [input, base, output] = ["input", "base", "output"].map(|name| circuit.node(name));
        source(&mut circuit, input, 9.0);
        circuit.add("drive", &[base, GROUND], CurrentSource { amperes: load / parameter(name, "BF") }).unwrap();
        // It holds the collector some volts below the input.
        let held = circuit.node("held");
        source(&mut circuit, held, 5.0);
        circuit.add_shared("transistor", &[output, base, input], usual(name)).unwrap();
        resistor(&mut circuit, output, held, 1e3);
        circuit.add("more", &[GROUND, output], CurrentSource { amperes }).unwrap();
        (circuit, output)
    });
    // Beside the resistor of 1 kΩ, which is known.
    let own = 1.0 / (1.0 / ohms - 1e-3);
    assert!((20e3..50e3).contains(&own), "{own}");
}

/// The phase margin in degrees of a common-emitter stage of 10 V and 100 mA with 10 µF without ESR, whose amplifier has
/// its own pole at a frequency in hertz.
fn common_emitter_margin(pole: f64) -> f64 {
    let mut circuit = Circuit::new();
    let [input, output, drive, base, held, inner] =
        ["input", "output", "drive", "base", "held", "inner"].map(|name| circuit.node(name));
    source(&mut circuit, input, 15.0);
    source(&mut circuit, held, 10.0);
    let (siemens, ohms) = (1e-3, 10e3);
    circuit.add("amplifier", &[GROUND, inner, held, output], Transconductance { siemens }).unwrap();
    resistor(&mut circuit, inner, GROUND, ohms);
    let farads = 1.0 / (std::f64::consts::TAU * pole * ohms);
    circuit.add("its pole", &[inner, GROUND], Capacitor { farads, esr: 0.0 }).unwrap();
    circuit.add("driver", &[drive, GROUND, inner, GROUND], Transconductance { siemens: 5e-3 }).unwrap();
    let at_break = circuit.add("break", &[drive, base], VoltageSource { volts: 0.0 }).unwrap();
    resistor(&mut circuit, base, input, 470.0);
    circuit.add_shared("pass", &[output, base, input], usual("any PNP power transistor")).unwrap();
    resistor(&mut circuit, output, GROUND, 100.0);
    let solution = dc_from(&circuit, &[(output, 10.0)]).unwrap();
    assert!((solution.voltage(output) - 10.0).abs() < 0.5, "{}", solution.voltage(output));
    let own = LoopGain::new(&circuit, &solution, at_break, output, &Frequencies::default()).unwrap();
    own.margins(&Bank { bulk: 10e-6, others: Vec::new() }.with_esr(1e-3)).phase.unwrap()
}

/// "Since a collector shows so much, its pole with the output capacitor is low, and has to be the dominant one": a fast
/// amplifier does with a capacitor without ESR, one with its pole at that of the load does not.
#[test]
fn a_common_emitter_stage_wants_its_dominant_pole_at_the_load() {
    let at_load = 1.0 / (std::f64::consts::TAU * 100.0 * 10e-6);
    let (fast, slow) = (common_emitter_margin(1e4 * at_load), common_emitter_margin(at_load));
    assert!(fast > 60.0 && slow < 20.0, "{fast}, {slow}");
}

/// "A P-channel pass transistor that holds 12 V wants its gate some 4 V below the input."
#[test]
fn a_p_channel_pass_transistor_wants_its_gate_some_volts_below_the_input() {
    let mut circuit = Circuit::new();
    let [input, output, gate, held] = ["input", "output", "gate", "held"].map(|name| circuit.node(name));
    source(&mut circuit, input, 16.0);
    source(&mut circuit, held, 12.0);
    let amplifier = OpAmp { bottom: 0.05, ..OpAmp::default() };
    circuit.add("amplifier", &[output, held, input, GROUND, gate], amplifier).unwrap();
    circuit.add_shared("pass", &[output, gate, input], usual("any power P-channel transistor")).unwrap();
    resistor(&mut circuit, output, GROUND, 12.0 / 2.0);
    let solution = dc_from(&circuit, &[(output, 12.0)]).unwrap();
    assert!((solution.voltage(output) - 12.0).abs() < 0.01);
    let below = 16.0 - solution.voltage(gate);
    assert!((3.2..4.8).contains(&below), "{below}");
}

/// "A reference of 2.5 V that hangs on the output begins to work when the output passes 2 V and some": below it is the
/// output itself, so that nothing is compared.
#[test]
fn a_reference_that_hangs_on_the_output_begins_to_work_above_two_volts() {
    let at = |volts: f64| {
        let mut circuit = Circuit::new();
        let [output, held] = ["output", "held"].map(|name| circuit.node(name));
        source(&mut circuit, output, volts);
        resistor(&mut circuit, output, held, 2.7e3);
        let shunt = model("shunt IS=1e-14 N=1 BV=2.5 IBV=1e-3 NBV=0.3 RS=0.3");
        circuit.add_shared("reference", &[GROUND, held], shunt).unwrap();
        dc(&circuit).unwrap().voltage(held)
    };
    let begins = (1..100).map(|step| 0.05 * f64::from(step)).find(|volts| at(*volts) < 0.99 * volts).unwrap();
    assert!((2.0..2.8).contains(&begins), "{begins}");
    assert!((at(1.9) / 1.9 - 1.0).abs() < 1e-3);
    for volts in [5.0, 7.5, 10.0] {
        assert!((at(volts) - 2.5).abs() < 0.03, "{} at {volts}", at(volts));
    }
}

/// "A pair on a plain tail resistor has a bias of (V_ref − 0.6 V) / R."
#[test]
fn the_bias_of_a_pair_is_told_by_its_tail_resistor() {
    for (reference, ohms) in [(5.1, 1.5e3), (2.5, 4.7e3), (6.2, 1.8e3)] {
        let mut circuit = Circuit::new();
        let [input, base, tail, collector] = ["input", "base", "tail", "collector"].map(|name| circuit.node(name));
        source(&mut circuit, input, 18.0);
        source(&mut circuit, base, reference);
        circuit.add_shared("one", &[collector, base, tail], usual("any small NPN transistor")).unwrap();
        circuit.add_shared("other", &[input, base, tail], usual("any small NPN transistor")).unwrap();
        resistor(&mut circuit, input, collector, 1e3);
        resistor(&mut circuit, tail, GROUND, ohms);
        let bias = dc(&circuit).unwrap().voltage(tail) / ohms;
        let wanted = (reference - 0.6) / ohms;
        assert!((bias / wanted - 1.0).abs() < 0.04, "{bias} against {wanted}");
    }
}

/// "The pass transistor turns all into heat": (V_in − V_out) I at the highest input and the continuous load, by its own
/// package; of a Darlington or a complementary pair what drives it has next to none.
#[test]
fn heat_is_that_of_the_pass_transistor() {
    let folder = std::path::Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/railworthy/built_up/nets");
    // Usual from junction to ambient: 62 K/W for TO-220, 80 K/W for SOT-223.
    for (case, load, theta) in [("darlington_op", 0.8, 62.0), ("sziklai_op", 0.5, 62.0), ("single_be", 0.15, 80.0)] {
        let netlist = folder.join(format!("{case}.net"));
        let (board, problems) = Board::open(Some(&netlist), None, false);
        assert!(problems.is_empty(), "{problems:?}");
        let circuit = netlist::read(case, &std::fs::read(&netlist).unwrap()).unwrap();
        let knowledge = Knowledge::shared();
        let design = recognize(Drawn::build(&circuit).0, &board, knowledge);
        let facts = Facts::new(&design, &board, knowledge);
        let (own, _) = facts.regulators().find(|(_, one)| one.is_built_up()).unwrap();
        let figure =
            |name: &str| facts.figure(Subject::Regulator(own), name).unwrap_or_else(|| panic!("{case}: no {name}"));
        let (heat, output) = (figure("dissipation").worst().high(), figure("set_point").worst().low());
        let wanted = (19.8 - output) * load;
        assert!((heat / wanted - 1.0).abs() < 0.01, "{case}: {heat} against {wanted}");
        assert_eq!(figure("thermal_resistance").nominal(), Some(theta), "{case}");
        let junction = figure("junction_temperature").likely().high();
        assert!((27.0..27.0 + wanted * theta + 1.0).contains(&junction), "{case}: {junction}");
    }
}
