//! What device models come to in the solver, against limits of data sheets (recalled), at their nominal figures; and how
//! many parts of a public symbol library find one.

use std::sync::Arc;

use railworthy::knowledge::{DeviceModel, Knowledge, ModelKind, StandsFor};
use railworthy::quantity::Range;
use railworthy::solve::{Circuit, CurrentSource, Device, GROUND, VoltageSource, dc, from_model};

fn model(name: &str, volts: Option<f64>) -> DeviceModel {
    let family = Knowledge::shared().devices.iter().find(|family| family.name == name);
    family.unwrap_or_else(|| panic!("no {name}")).model(volts)
}

fn nominal(model: &DeviceModel) -> Arc<dyn Device> {
    from_model(model, |_, range| range.nominal())
}

/// The sign of an N or P channel or of its bipolar like.
fn sign(model: &DeviceModel) -> f64 {
    if matches!(model.kind(), ModelKind::Npn | ModelKind::Nmos) { 1.0 } else { -1.0 }
}

/// Collector or drain current, and base current, at these voltages of a device whose emitter or source is at ground.
fn currents(device: Arc<dyn Device>, sign: f64, control: f64, across: f64) -> (f64, f64) {
    let mut circuit = Circuit::new();
    let (top, base) = (circuit.node("top"), circuit.node("base"));
    let supply = circuit.add("supply", &[top, GROUND], VoltageSource { volts: sign * across }).unwrap();
    let drive = circuit.add("drive", &[base, GROUND], VoltageSource { volts: sign * control }).unwrap();
    circuit.add_shared("device", &[top, base, GROUND], device).unwrap();
    let solution = dc(&circuit).unwrap();
    (-sign * solution.current(supply).unwrap(), -sign * solution.current(drive).unwrap())
}

/// The voltage across a saturated transistor that is driven by this base current, at this collector current.
fn saturation(model: &DeviceModel, collector: f64, base: f64) -> f64 {
    let mut circuit = Circuit::new();
    let (top, control) = (circuit.node("top"), circuit.node("base"));
    let sign = sign(model);
    circuit.add("load", &[GROUND, top], CurrentSource { amperes: sign * collector }).unwrap();
    circuit.add("drive", &[GROUND, control], CurrentSource { amperes: sign * base }).unwrap();
    circuit.add_shared("device", &[top, control, GROUND], nominal(model)).unwrap();
    sign * dc(&circuit).unwrap().voltage(top)
}

/// The voltage from anode to cathode at a current through a diode.
fn across(device: Arc<dyn Device>, amperes: f64) -> f64 {
    let mut circuit = Circuit::new();
    let anode = circuit.node("anode");
    circuit.add("feed", &[GROUND, anode], CurrentSource { amperes }).unwrap();
    circuit.add_shared("diode", &[anode, GROUND], device).unwrap();
    dc(&circuit).unwrap().voltage(anode)
}

#[test]
fn base_emitter_voltages_and_gains_lie_within_the_sheets() {
    // Name, least and largest VBE, at collector current and VCE; least and largest hFE there.
    for (name, low, high, amperes, volts, least, most) in [
        ("2N3904", 0.60, 0.85, 10e-3, 1.0, 100.0, 300.0),
        ("2N3906", 0.60, 0.85, 10e-3, 1.0, 100.0, 300.0),
        ("BC847B", 0.58, 0.70, 2e-3, 5.0, 200.0, 450.0),
        ("BC857B", 0.58, 0.75, 2e-3, 5.0, 200.0, 475.0),
        ("BC817-25", 0.60, 1.2, 0.1, 1.0, 160.0, 400.0),
        ("BD139", 0.60, 1.0, 0.15, 2.0, 40.0, 250.0),
        ("BD139", 0.60, 1.0, 0.5, 2.0, 25.0, 250.0),
        ("BD140", 0.60, 1.0, 0.5, 2.0, 25.0, 250.0),
        ("TIP31", 0.60, 1.8, 1.0, 4.0, 25.0, 200.0),
        ("TIP31", 0.60, 1.8, 3.0, 4.0, 10.0, 50.0),
        ("TIP41", 0.60, 2.0, 3.0, 4.0, 15.0, 75.0),
        ("2N3055", 0.60, 1.5, 4.0, 4.0, 20.0, 70.0),
        ("D44H11", 0.60, 1.5, 2.0, 1.0, 60.0, 400.0),
        ("TIP122", 1.0, 2.5, 3.0, 3.0, 1000.0, 20000.0),
    ] {
        let model = model(name, None);
        let at = |control: f64| currents(nominal(&model), sign(&model), control, volts);
        assert!(at(low).0 < amperes, "{name} at {low} V: {:?}", at(low));
        assert!(at(high).0 > amperes, "{name} at {high} V: {:?}", at(high));
        // The voltage at which it carries the current, then its gain there.
        let (mut below, mut above) = (low, high);
        for _ in 0..50 {
            let middle = f64::midpoint(below, above);
            if at(middle).0 < amperes { below = middle } else { above = middle }
        }
        let (collector, base) = at(above);
        let gain = collector / base;
        assert!((least..=most).contains(&gain), "{name} at {amperes} A: {gain}");
    }
}

#[test]
fn saturated_transistors_drop_no_more_than_the_sheets_allow() {
    for (name, collector, base, most) in [
        ("2N3904", 10e-3, 1e-3, 0.2),
        ("2N3906", 10e-3, 1e-3, 0.25),
        ("BC847B", 10e-3, 0.5e-3, 0.25),
        ("BC857B", 10e-3, 0.5e-3, 0.3),
        ("BD139", 0.5, 50e-3, 0.5),
        ("BD140", 0.5, 50e-3, 0.5),
        ("BCP53", 0.5, 50e-3, 0.5),
        ("TIP31", 3.0, 0.375, 1.2),
        ("TIP42", 3.0, 0.3, 1.5),
        ("2N3055", 4.0, 0.4, 1.1),
        ("D45H11", 8.0, 0.4, 1.0),
    ] {
        let drop = saturation(&model(name, None), collector, base);
        assert!(drop > 0.0 && drop <= most, "{name}: {drop} V at {collector} A");
    }
}

#[test]
fn field_effect_transistors_have_the_resistance_of_their_sheets() {
    for (name, gate, amperes, most) in [
        ("2N7000", 10.0, 0.2, 5.0),
        ("BSS138", 10.0, 0.2, 3.5),
        ("AO3400", 4.5, 4.0, 33e-3),
        ("SI2302", 4.5, 3.0, 60e-3),
        ("IRF540", 10.0, 16.0, 77e-3),
        ("IRFZ44", 10.0, 20.0, 28e-3),
        ("IRLZ44", 5.0, 15.0, 35e-3),
        ("BSS84", 10.0, 0.1, 10.0),
        ("AO3401", 4.5, 3.0, 60e-3),
        ("SI2301", 4.5, 2.5, 0.13),
        ("IRF9540", 10.0, 10.0, 0.2),
        ("IRF9530", 10.0, 6.0, 0.3),
        ("IRF9Z34", 10.0, 10.0, 0.14),
        ("IRF4905", 10.0, 30.0, 25e-3),
    ] {
        let model = model(name, None);
        let flowing = currents(nominal(&model), sign(&model), gate, amperes * most).0;
        assert!(flowing >= amperes, "{name} carries {flowing} A at {} V", amperes * most);
        assert!(flowing <= amperes * 5.0, "{name} carries {flowing} A, which is too good");
        // Below the least threshold of the sheet nothing flows, whatever the figures.
        let least = model.get("VTO").unwrap();
        let least = least.low().abs().min(least.high().abs());
        for pick in [Range::low, Range::high] {
            let device = from_model(&model, |_, range| pick(range));
            assert!(currents(device, sign(&model), least * 0.99, 5.0).0 < 1e-6, "{name}");
        }
    }
}

#[test]
fn diodes_drop_what_the_sheets_say() {
    let usual = |of: StandsFor| {
        let all = &Knowledge::shared().devices;
        let family = all.iter().find(|one| one.kind == ModelKind::Diode && one.stands_for == Some(of)).unwrap();
        family.model(None)
    };
    for (model, amperes, low, high) in [
        (model("1N4148", None), 5e-3, 0.62, 0.75),
        (model("1N4148", None), 10e-3, 0.6, 1.0),
        (model("1N4007", None), 1.0, 0.8, 1.1),
        (model("1N5408", None), 3.0, 0.7, 1.2),
        (model("1N5819", None), 1.0, 0.3, 0.6),
        (model("BAT54", None), 1e-3, 0.18, 0.32),
        (model("BAT54", None), 10e-3, 0.25, 0.4),
        (usual(StandsFor::Any), 10e-3, 0.6, 0.85),
        (usual(StandsFor::Schottky), 10e-3, 0.15, 0.45),
        (usual(StandsFor::Led), 10e-3, 1.6, 2.4),
    ] {
        let volts = across(nominal(&model), amperes);
        assert!((low..=high).contains(&volts), "{model}: {volts} V at {amperes} A");
    }
    let led = usual(StandsFor::Led);
    let corner = |current: fn(Range) -> f64, emission: fn(Range) -> f64| {
        let device = from_model(&led, |name, range| if name == "IS" { current(range) } else { emission(range) });
        across(device, 10e-3)
    };
    let (red, blue) = (corner(Range::high, Range::low), corner(Range::low, Range::high));
    assert!((1.2..1.7).contains(&red) && (3.0..4.3).contains(&blue), "{red} .. {blue}");
}

#[test]
fn zener_diodes_hold_their_voltage_and_their_impedance_and_drive_nothing_at_zero_volts() {
    for (name, volts, amperes, most) in [
        ("BZX84C", 3.3, 5e-3, 95.0),
        ("BZX84C", 4.7, 5e-3, 80.0),
        ("BZX84C", 5.6, 5e-3, 40.0),
        ("BZX84C", 6.8, 5e-3, 15.0),
        ("BZX84C", 12.0, 5e-3, 25.0),
        ("1N4728", 3.3, 76e-3, 10.0),
        ("1N4728", 5.1, 49e-3, 7.0),
        ("1N4728", 12.0, 21e-3, 9.0),
        ("1N5221", 5.1, 20e-3, 17.0),
        ("1N5221", 12.0, 20e-3, 30.0),
    ] {
        let model = model(name, Some(volts));
        let held = |amperes: f64| -across(nominal(&model), -amperes);
        // The nominal breakdown lies inside; what the series resistance adds is within a tenth.
        assert!((held(amperes) - volts).abs() < 0.1 * volts, "{name} {volts} V: {}", held(amperes));
        let impedance = (held(amperes * 1.05) - held(amperes * 0.95)) / (0.1 * amperes);
        assert!(impedance > 0.1 * most && impedance <= most, "{name} {volts} V: {impedance} ohm");
    }
    let zeners = Knowledge::shared().devices.iter().filter(|family| family.kind == ModelKind::Zener);
    for family in zeners {
        for volts in [2.4, 2.7, 3.0, 3.3, 3.9, 4.7, 5.1, 5.6, 6.2, 12.0, 33.0] {
            let model = family.model(Some(volts));
            let (knee, width) = (model.get("IBV").unwrap().high(), model.get("NBV").unwrap().high() * 0.02585);
            let leak = knee * (-model.get("BV").unwrap().low() / width).exp();
            assert!(leak < 2e-4 * knee, "{} {volts} V drives {leak} A", family.file);
        }
    }
}
