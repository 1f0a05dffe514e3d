//! The models' derivatives, by differences; and what cannot be.

use proptest::prelude::*;

use crate::solve::stamps::{At, Stamps};
use crate::solve::*;

/// A device with how many unknowns it has.
fn devices() -> Vec<(&'static str, Box<dyn Device>)> {
    let diode = Diode {
        saturation_current: 3e-9,
        emission: 1.8,
        series_resistance: 0.6,
        breakdown_voltage: 2.5,
        breakdown_current: 1e-3,
        breakdown_emission: 0.3,
        capacitance: 50e-12,
        transit_time: 5e-9,
    };
    let bipolar = |polarity| Bipolar {
        polarity,
        saturation_current: 2e-13,
        forward_gain: 120.0,
        reverse_gain: 5.0,
        early_voltage: 70.0,
        knee_current: 1.5,
        leakage_current: 2e-13,
        leakage_emission: 1.5,
        base_resistance: 4.0,
        collector_resistance: 0.15,
        emitter_resistance: 0.05,
        emitter_capacitance: 180e-12,
        collector_capacitance: 60e-12,
        forward_transit: 3e-9,
        reverse_transit: 300e-9,
    };
    let mosfet = |polarity, threshold| Mosfet {
        threshold,
        transconductance: 2.0,
        modulation: 0.01,
        drain_resistance: 0.1,
        source_resistance: 0.02,
        saturation_current: 1e-12,
        gate_source: 800e-12,
        gate_drain: 150e-12,
        drain_source: 200e-12,
        ..Mosfet::new(polarity)
    };
    let amplifier = OpAmp { offset: 1e-3, top: 1.3, bottom: 0.05, ..OpAmp::default() };
    let shunt = ProgrammableShunt {
        reference: 2.495,
        impedance: 0.2,
        least_current: 0.4e-3,
        sensitivity: 1.4e-3,
        bandwidth: 1e6,
        pin_current: 2e-6,
    };
    vec![
        ("programmable shunt", Box::new(shunt)),
        ("diode", Box::new(diode)),
        ("diode without resistance", Box::new(Diode { series_resistance: 0.0, ..diode })),
        ("npn", Box::new(bipolar(Polarity::N))),
        ("pnp", Box::new(bipolar(Polarity::P))),
        ("npn without resistances", {
            let plain = Bipolar { base_resistance: 0.0, emitter_resistance: 0.0, ..bipolar(Polarity::N) };
            Box::new(plain)
        }),
        ("nmos", Box::new(mosfet(Polarity::N, 2.0))),
        ("pmos", Box::new(mosfet(Polarity::P, -2.0))),
        ("amplifier", Box::new(amplifier)),
        ("resistor", Box::new(Resistor { ohms: 47.0 })),
        ("capacitor", Box::new(Capacitor { farads: 1e-6, esr: 0.3 })),
        ("winding", Box::new(Inductor { henries: 1e-3, ohms: 0.2 })),
        ("transconductance", Box::new(Transconductance { siemens: 2e-3 })),
    ]
}

/// What adds a device to a circuit.
type Adding = dyn Fn(&mut Circuit) -> Result<DeviceId, SolveError>;

/// Currents and charges by row, and both matrices.
type Values = (Vec<f64>, Vec<f64>, Vec<Vec<f64>>, Vec<Vec<f64>>);

fn values(device: &dyn Device, unknowns: &[f64]) -> Values {
    let count = unknowns.len();
    let mut last = vec![0.0; device.junctions()];
    let mut stamps = Stamps::default();
    device.stamp(&mut At { unknowns, last: &mut last, gmin: 1e-12, limits: false, moves: true }, &mut stamps);
    let (mut currents, mut charges) = (vec![0.0; count], vec![0.0; count]);
    let (mut slopes, mut capacitances) = (vec![vec![0.0; count]; count], vec![vec![0.0; count]; count]);
    stamps.currents.iter().for_each(|(row, value)| currents[*row] += value);
    stamps.charges.iter().for_each(|(row, value)| charges[*row] += value);
    stamps.slopes.iter().for_each(|entry| slopes[entry.row][entry.column] += entry.value);
    stamps.capacitances.iter().for_each(|entry| capacitances[entry.row][entry.column] += entry.value);
    (currents, charges, slopes, capacitances)
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(400))]

    #[test]
    fn derivatives_are_those_of_the_currents_and_charges(volts in prop::collection::vec(-3.0..3.0_f64, 8)) {
        for (name, device) in devices() {
            let count = device.terminals() + device.inner_nodes() + device.branches();
            // Inner nodes lie near their terminals, as they do in a circuit; junctions then see −0.9 to 0.9 V.
            let scale = if name == "amplifier" { 1.0 } else { 0.3 };
            let mut at: Vec<f64> = volts.iter().take(count).map(|volts| volts * scale).collect();
            if name == "amplifier" {
                // Rails where rails are, about the inner node.
                (at[2], at[3], at[5]) = (at[2] + 6.0, at[3] - 6.0, at[5] * 0.3);
            }
            if name == "programmable shunt" {
                // About its floor, its reference voltage, and the end of its current.
                at = vec![at[2] + 2.0 + 0.3 * at[0], at[2] + 2.495 + 0.01 * at[1], at[2], 1e-3 * at[3]];
            }
            let (currents, charges, slopes, capacitances) = values(&*device, &at);
            for column in 0..count {
                let step = 1e-7;
                let moved = |by: f64| {
                    let mut at = at.clone();
                    at[column] += by;
                    values(&*device, &at)
                };
                let (above, below) = (moved(step), moved(-step));
                for row in 0..count {
                    let check = |name: &str, value: f64, high: f64, low: f64, here: f64, one: f64| {
                        let difference = (high - low) / (2.0 * step);
                        // A kink, where the differences to both sides disagree, has no derivative.
                        let kink = (high - 2.0 * here + low).abs() / step;
                        // Far up an exponential a difference is coarse.
                        let coarse = if value.abs() > 1e3 * one { 1e-3 } else { 1e-5 };
                        let allowed = coarse * (value.abs() + difference.abs())
                            + kink
                            + 1e-8 * one
                            + 1e-15 * here.abs() / step;
                        prop_assert!((value - difference).abs() <= allowed,
                            "{name}, row {row}, column {column}: {value:e} against {difference:e}");
                        Ok(())
                    };
                    check(name, slopes[row][column], above.0[row], below.0[row], currents[row], 1.0)?;
                    check(name, capacitances[row][column], above.1[row], below.1[row], charges[row], 1e-9)?;
                }
            }
        }
    }

    #[test]
    fn currents_of_a_device_add_up(volts in prop::collection::vec(-3.0..3.0_f64, 8)) {
        // The inner nodes of amplifiers return their currents through ground; a winding's branch row is no node.
        let grounded = ["amplifier", "programmable shunt"];
        for (name, device) in devices().into_iter().filter(|(name, _)| !grounded.contains(name)) {
            let count = device.terminals() + device.inner_nodes() + device.branches();
            let at: Vec<f64> = volts.iter().take(count).map(|volts| volts * 0.3).collect();
            let (currents, charges, ..) = values(&*device, &at);
            let nodes = device.terminals() + device.inner_nodes();
            let size: f64 = currents.iter().map(|current| current.abs()).sum();
            prop_assert!(currents[..nodes].iter().sum::<f64>().abs() <= 1e-12 * size, "{name}");
            let size: f64 = charges.iter().map(|charge| charge.abs()).sum();
            prop_assert!(charges[..nodes].iter().sum::<f64>().abs() <= 1e-12 * size, "{name}");
        }
    }
}

#[test]
fn what_cannot_be_is_refused_with_its_device() {
    let mut circuit = Circuit::new();
    let node = circuit.node("out");
    let refused = circuit.add("R7", &[node, GROUND], Resistor { ohms: 0.0 }).unwrap_err();
    assert_eq!(refused.to_string(), "R7: a resistance must be more than zero");
    let refused = circuit.add("R7", &[node], Resistor { ohms: 1.0 }).unwrap_err();
    assert_eq!(refused.to_string(), "R7 lies between 2 nodes of the circuit and was given 1");
    let mut other = Circuit::new();
    let strange = (other.node("one"), other.node("two")).1;
    assert!(circuit.add("R7", &[node, strange], Resistor { ohms: 1.0 }).is_err());
    let wrong: Vec<Box<Adding>> = vec![
        Box::new(move |c| c.add("D1", &[node, GROUND], Diode { emission: 0.0, ..Diode::default() })),
        Box::new(move |c| c.add("D1", &[node, GROUND], Diode { capacitance: f64::NAN, ..Diode::default() })),
        Box::new(move |c| c.add("C1", &[node, GROUND], Capacitor { farads: -1.0, esr: 0.0 })),
        Box::new(move |c| c.add("L1", &[node, GROUND], Inductor { henries: f64::INFINITY, ohms: 0.0 })),
        Box::new(move |c| c.add("V1", &[node, GROUND], VoltageSource { volts: f64::NAN })),
        Box::new(move |c| {
            c.add("Q1", &[node, node, GROUND], Bipolar { forward_gain: 0.0, ..Bipolar::new(Polarity::N) })
        }),
        Box::new(move |c| {
            c.add("M1", &[node, node, GROUND], Mosfet { transconductance: -1.0, ..Mosfet::new(Polarity::N) })
        }),
        Box::new(move |c| {
            c.add("U1", &[node, node, node, GROUND, node], OpAmp { slew_rate: 0.0, ..OpAmp::default() })
        }),
    ];
    for wrong in wrong {
        assert!(matches!(wrong(&mut circuit), Err(SolveError::Parameter { .. })));
    }
    let resistor = circuit.add("R1", &[node, GROUND], Resistor { ohms: 1.0 }).unwrap();
    assert!(circuit.replace(resistor, Resistor { ohms: -1.0 }).is_err());
    assert!(circuit.replace(resistor, OpAmp::default()).is_err());
    assert_eq!(
        dropout(&circuit, resistor, node, None).unwrap_err(),
        SolveError::NoSource { device: "R1".to_owned() }
    );
}
