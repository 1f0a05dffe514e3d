//! Regulators from single parts, drawn for this: each is recognized, and its figures are those of a circuit simulator
//! (ngspice). `built_up/README.md` holds the conventions.

use std::path::{Path, PathBuf};
use std::sync::LazyLock;

use num_complex::Complex64;
use railworthy::knowledge::Knowledge;

use crate::built_up_regulators::told_of;
use crate::rails_figures::{Facts, Row, all_facts, faults, rows};
use crate::simulator::{is_installed, run_deck, table};

fn folder() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/railworthy/built_up")
}

fn expected() -> Vec<Row> {
    rows(&folder().join("expected.tsv"))
}

/// What the program says of every case.
static FACTS: LazyLock<Facts> = LazyLock::new(|| all_facts(&folder().join("nets"), &expected()));

#[test]
fn each_circuit_is_recognized() {
    let knowledge = Knowledge::built_in();
    let raw = "+18V_RAW>";
    let circuits = [
        ("darlington_op", format!("Q1+Q2 npn-follower-darlington {raw}+12V, op-amp, zener diode from input")),
        ("limit_op", format!("Q1 npn-follower {raw}+10V, op-amp, shunt reference from input")),
        ("sziklai_op", format!("Q1+Q2 npn-follower-complementary {raw}+9V, op-amp, shunt reference from input")),
        ("level_op", format!("Q1 pnp {raw}+10V, op-amp, shunt reference from input")),
        ("pair_pnp", format!("Q1 pnp {raw}+10V, transistor pair, zener diode from input")),
        ("pair_npn", format!("Q1+Q4 npn-follower-darlington {raw}+5V, transistor pair, shunt reference from input")),
        ("pair_mirror", format!("Q1 pnp {raw}+12V, transistor pair, zener diode from input")),
        ("single_zener", format!("Q1 npn-follower {raw}+12V, single transistor, zener diode from output")),
        ("single_be", format!("Q1 npn-follower {raw}+5V, single transistor, base-emitter drop from internal")),
        ("nmos_high", format!("Q1 nmos-follower {raw}+15V, op-amp, shunt reference from other")),
        ("neg_zener", "Q1 pnp-follower -18V_RAW>-12V, none, zener diode from input".to_owned()),
        ("neg_op", "Q1 pnp-follower -18V_RAW>-9V, op-amp, shunt reference from input".to_owned()),
        ("neg_weigh", "Q1 pnp-follower -18V_RAW>-12V, op-amp, shunt reference from other".to_owned()),
        ("neg_pair", "Q1 npn -18V_RAW>-10V, transistor pair, zener diode from input".to_owned()),
        ("buffer_op", format!("Q1 npn-follower {raw}+5V, op-amp, shunt reference from input")),
        ("shunt_npn", format!("Q1 npn-follower {raw}+12V, programmable shunt, shunt reference from input")),
        ("shunt_pmos", format!("Q1 pmos {raw}+15V, programmable shunt, shunt reference from input")),
        ("outboard", format!("Q1 npn-follower-darlington {raw}+5V, none, packaged regulator from internal")),
        ("boot_pair", format!("Q1 pnp {raw}+12V, transistor pair, zener diode from output")),
        ("boot_pair_su", format!("Q1 pnp {raw}+12V, transistor pair, zener diode from output")),
        ("boot_diodes", format!("Q1+Q4 pnp-darlington {raw}+5V, transistor pair, diodes from output")),
        ("boot_npn", format!("Q1 npn-follower {raw}+5V, op-amp, shunt reference from output")),
        ("boot_npn_su", format!("Q1 npn-follower {raw}+5V, op-amp, shunt reference from output")),
        ("high_room", format!("Q1 pmos {raw}+10V, op-amp, shunt reference from output")),
    ];
    for (name, told) in &circuits {
        assert_eq!(told_of(&folder().join("nets"), &format!("{name}.net"), &knowledge), [told.as_str()], "{name}");
    }
    let drawn = std::fs::read_dir(folder().join("nets")).unwrap().map(|entry| entry.unwrap().path());
    let drawn = drawn.filter(|path| path.extension().is_some_and(|extension| extension == "net")).count();
    assert_eq!(drawn, circuits.len());
}

/// What a circuit is set to is what the simulator found, but for drops of junctions and shifts of base currents.
#[test]
fn set_points_are_the_simulators_within_a_few_percent() {
    let expected = expected();
    let own = |row: &&Row| row.fact == "output_voltage" && !row.case.contains(".ref-") && !row.case.contains(".ref+");
    let mut compared = 0;
    for row in expected.iter().filter(own) {
        let set = FACTS[&row.key()]["set_point"]["nominal"]
            .as_f64()
            .unwrap_or_else(|| panic!("{}: no set point", row.case));
        assert!((set / row.number() - 1.0).abs() < 0.03, "{}: {set} against {}", row.case, row.value);
        compared += 1;
    }
    assert_eq!(compared, 24);
}

/// The voltage across the pass device where the output has fallen to 0.98 of what it is at the nominal input.
fn dropout(sweep: &[Vec<f64>], nominal: f64) -> f64 {
    let edge = 0.98 * at(sweep, nominal).abs();
    let below: Vec<_> = sweep.iter().filter(|row| row[0].abs() <= nominal.abs() + 1e-6).collect();
    let pair = below.windows(2).find(|pair| pair[0][1].abs() > edge && pair[1][1].abs() <= edge).unwrap();
    let share = (pair[0][1].abs() - edge) / (pair[0][1].abs() - pair[1][1].abs());
    pair[0][0].abs() + share * (pair[1][0].abs() - pair[0][0].abs()) - edge
}

fn at(sweep: &[Vec<f64>], input: f64) -> f64 {
    sweep.iter().find(|row| (row[0] - input).abs() < 1e-6).unwrap()[1]
}

/// The least phase margin in degrees over all crossings, with its frequency.
fn margin(gains: &[Vec<f64>]) -> (f64, f64) {
    let points: Vec<_> = gains.iter().map(|row| (row[0].ln(), Complex64::new(row[1], row[2]))).collect();
    let mut least = (f64::INFINITY, f64::NAN);
    for pair in points.windows(2) {
        let [(start, one), (end, two)] = [pair[0], pair[1]];
        let (high, low) = (one.norm().ln(), two.norm().ln());
        if (high > 0.0) != (low > 0.0) {
            let share = high / (high - low);
            let phase = 180.0 + (one.arg() + share * (two / one).arg()).to_degrees();
            let degrees = (phase + 180.0).rem_euclid(360.0) - 180.0;
            if degrees < least.0 {
                least = (degrees, (start + share * (end - start)).exp());
            }
        }
    }
    least
}

/// Every deck, run afresh: what is pinned is what it gives.
#[test]
fn the_decks_give_the_figures_that_are_pinned() {
    if !is_installed() {
        return;
    }
    let expected = expected();
    let mut compared = 0;
    let mut names: Vec<&str> = expected.iter().map(Row::name).collect();
    names.dedup();
    for name in names {
        let run = run_deck(&folder().join(format!("decks/{name}.cir")));
        let nominal = if name.starts_with("neg") { -18.0 } else { 18.0 };
        let [light, full] = ["0.1", "1"].map(|share| table(&run, &format!("{name}_dc_{share}.dat")));
        let loops = || {
            let all = ["0.1", "0.5", "1"].map(|share| margin(&table(&run, &format!("{name}_ac_{share}.dat"))));
            all.into_iter().min_by(|one, other| one.0.total_cmp(&other.0)).unwrap()
        };
        // Of several offsets the deck has none.
        let own = |row: &&Row| row.name() == name && (!row.case.contains(".ref") || row.case.ends_with(".ref0"));
        for row in expected.iter().filter(own) {
            let found = match row.fact.as_str() {
                "output_voltage" => at(&full, nominal),
                "dropout" => dropout(&full, nominal),
                "dropout_light" => dropout(&light, nominal),
                "line_change" => (at(&full, 1.1 * nominal) - at(&full, 0.9 * nominal)).abs(),
                "phase_margin" => loops().0,
                "unity_gain_frequency" => loops().1,
                _ => continue,
            };
            let wanted = row.number();
            let allowed = f64::max(1e-6, 1e-4 * wanted.abs());
            assert!((found - wanted).abs() <= allowed, "{} {}: {found} against {wanted}", row.case, row.fact);
            compared += 1;
        }
    }
    assert!(compared >= 110, "{compared}");
}

/// Every figure that is pinned.
#[test]
fn every_figure_is_the_simulators() {
    let rows = expected();
    assert!(rows.len() >= 220, "{}", rows.len());
    let faults = faults(&FACTS, &rows);
    assert!(faults.is_empty(), "{} of {}:\n{}", faults.len(), rows.len(), faults.join("\n"));
}
