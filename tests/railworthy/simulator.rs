//! The solver against a circuit simulator (ngspice) that runs its decks afresh, where it is installed.

use std::path::Path;
use std::process::{Command, Stdio};

use num_complex::Complex64;
use railworthy::solve::{Bank, SeriesRc, dc_sweep, esr_grid};

use crate::oracle_deck::Deck;
use crate::oracle_solver::{deck_text, loops};
use crate::shared::shared_folder;

/// Whether the simulator is installed; without it, says that a test skips.
pub(crate) fn is_installed() -> bool {
    let found = Command::new("ngspice").arg("--version").stdout(Stdio::null()).stderr(Stdio::null()).status().is_ok();
    if !found {
        #[allow(clippy::print_stderr, reason = "a test that skips says so")]
        {
            eprintln!("skipped: ngspice is not installed");
        }
    }
    found
}

fn run(shared: &Path, deck: &str) -> tempfile::TempDir {
    run_deck(&shared.join(format!("oracle/decks/{deck}.cir")))
}

/// Runs a deck in a folder of its own, which holds what it wrote.
pub(crate) fn run_deck(deck: &Path) -> tempfile::TempDir {
    let folder = tempfile::tempdir().unwrap();
    std::fs::create_dir(folder.path().join("out")).unwrap();
    let mut command = Command::new("ngspice");
    command.arg("-b").arg(deck).current_dir(folder.path());
    let status = command.stdout(Stdio::null()).stderr(Stdio::null()).status().unwrap();
    assert!(status.success(), "{}: {status}", deck.display());
    folder
}

/// The rows of numbers that a deck wrote under a name.
pub(crate) fn table(folder: &tempfile::TempDir, name: &str) -> Vec<Vec<f64>> {
    let text = std::fs::read_to_string(folder.path().join("out").join(name)).unwrap();
    text.lines().map(|line| line.split_whitespace().map(|word| word.parse().unwrap()).collect()).collect()
}

#[test]
fn sweeps_of_the_input_agree_with_a_fresh_run() {
    let Some(shared) = shared_folder() else { return };
    if !is_installed() {
        return;
    }
    let mut compared = 0;
    for (name, full_load) in [("c1_zener_follower", 49.0), ("c2a_op_npn", 25.0), ("c4_op_pmos", 33.3333)] {
        let folder = run(&shared, &format!("{name}_dc"));
        let mut deck = Deck::read(&deck_text(&shared, &format!("{name}_dc")), &[]);
        for share in [0.1, 0.5, 1.0] {
            deck.alter("rload", full_load / share);
            let rows = table(&folder, &format!("{name}_dc_l{share}_dn.dat"));
            // Below that no regulator regulates, and its reference hardly conducts.
            let rows: Vec<_> = rows.into_iter().filter(|row| row[0] >= 2.5).collect();
            let levels: Vec<f64> = rows.iter().map(|row| row[0]).collect();
            let solutions = dc_sweep(&deck.circuit, deck.device("Vin"), &levels, None).unwrap();
            for (row, solution) in rows.iter().zip(solutions) {
                let volts = solution.voltage(deck.node("out"));
                let allowed = f64::max(1e-4, 1e-4 * row[1].abs());
                assert!((volts - row[1]).abs() <= allowed, "{name} at {} V: {volts} against {}", row[0], row[1]);
                compared += 1;
            }
        }
    }
    assert_eq!(compared, 9 * 626);
}

#[test]
fn the_current_of_a_forced_node_agrees_with_a_fresh_run() {
    let Some(shared) = shared_folder() else { return };
    if !is_installed() {
        return;
    }
    let folder = run(&shared, "c5_boot_pmos_force");
    let mut compared = 0;
    for (case, offset, start_up) in [("nosu_vos-5mV", -5e-3, 1e12), ("su_vos+5mV", 5e-3, 22e3)] {
        let mut deck = Deck::read(&deck_text(&shared, "c5_boot_pmos_force"), &[]);
        deck.alter("rload", 333.333);
        deck.alter("vos", offset);
        deck.alter("rsu", start_up);
        let mut rows: Vec<Vec<f64>> = Vec::new();
        for part in 0..6 {
            rows.extend(table(&folder, &format!("c5_boot_pmos_force_{case}_l0.1_{part}.dat")));
        }
        let levels: Vec<f64> = rows.iter().map(|row| row[0]).collect();
        let force = deck.device("Vf");
        let solutions = dc_sweep(&deck.circuit, force, &levels, None).unwrap();
        for (row, solution) in rows.iter().zip(solutions) {
            let current = solution.current(force).unwrap();
            let allowed = 1e-9 + 1e-3 * row[1].abs();
            assert!((current - row[1]).abs() <= allowed, "{case} at {} V: {current} against {}", row[0], row[1]);
            compared += 1;
        }
    }
    assert!(compared > 2_500, "{compared}");
}

#[test]
fn loop_gains_agree_with_a_fresh_run() {
    let Some(shared) = shared_folder() else { return };
    if !is_installed() {
        return;
    }
    let folder = run(&shared, "c4_op_pmos_ac");
    let rows = table(&folder, "c4_op_pmos_ac.dat");
    let mut rows = rows.iter();
    let mut compared = 0;
    for own in loops(&shared, "c4_op_pmos_ac", "Vinj", 33.3333) {
        for bulk in [1e-6, 10e-6, 100e-6] {
            for farads in [1e-15, 100e-9, 1e-6] {
                for esr in esr_grid(1e-3, 30.0, 24) {
                    let network = Bank { bulk, others: vec![SeriesRc { farads, ohms: 5e-3 }] }.with_esr(esr);
                    for (hertz, gain) in own.gains(|hertz| network.admittance(hertz)) {
                        let row = rows.next().unwrap();
                        assert!((row[0] / hertz - 1.0).abs() < 1e-6, "{} Hz against {hertz}", row[0]);
                        let wanted = Complex64::new(row[1], row[2]);
                        // Near one is what margins are read from.
                        if (0.1..10.0).contains(&wanted.norm()) {
                            let off = (gain / wanted - 1.0).norm();
                            assert!(off < 1e-3, "{hertz} Hz, {bulk} F, {esr} ohm: {gain} against {wanted}");
                            compared += 1;
                        }
                    }
                }
            }
        }
    }
    assert!(rows.next().is_none());
    assert!(compared > 20_000, "{compared}");
}
