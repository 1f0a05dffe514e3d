//! The solver beside a circuit simulator (ngspice) at the same work, each on one core: the ratio should stay above 50.

#![allow(clippy::unwrap_used, clippy::indexing_slicing, reason = "a bench that meets what it does not expect fails")]
#![allow(clippy::print_stdout, reason = "a bench prints what it measured")]
#![allow(missing_docs, unreachable_pub, dead_code, reason = "a program of its own")]

#[path = "../tests/railworthy/oracle_deck.rs"]
mod oracle_deck;

use std::hint::black_box;
use std::path::{Path, PathBuf};
use std::process::{Command, Stdio};
use std::time::Instant;

use oracle_deck::Deck;
use railworthy::solve::{
    Bank, Frequencies, LoopGain, Ramp, Search, SeriesRc, dc, esr_grid, esr_scan, operating_points, ramp,
};

const RUNS: usize = 20;
const SIMULATOR_RUNS: usize = 3;
const LOADS: [f64; 3] = [333.333, 66.6667, 33.3333];

/// The shortest of several runs, in seconds: other programs only lengthen one.
fn shortest(runs: usize, mut work: impl FnMut()) -> f64 {
    let timed = (0..runs).map(|_| {
        let start = Instant::now();
        work();
        start.elapsed().as_secs_f64()
    });
    timed.fold(f64::INFINITY, f64::min)
}

/// The time that the simulator takes for a deck, where it is installed.
fn simulator(shared: &Path, deck: &str) -> Option<f64> {
    let folder = tempfile::tempdir().unwrap();
    std::fs::create_dir(folder.path().join("out")).unwrap();
    Command::new("ngspice").arg("--version").stdout(Stdio::null()).stderr(Stdio::null()).status().ok()?;
    Some(shortest(SIMULATOR_RUNS, || {
        let mut command = Command::new("ngspice");
        command.arg("-b").arg(shared.join(format!("oracle/decks/{deck}.cir"))).current_dir(folder.path());
        command.env("OMP_NUM_THREADS", "1").stdout(Stdio::null()).stderr(Stdio::null());
        assert!(command.status().unwrap().success());
    }))
}

fn deck(shared: &Path, name: &str, without: &[&str]) -> Deck {
    Deck::read(&std::fs::read_to_string(shared.join(format!("oracle/decks/{name}.cir"))).unwrap(), without)
}

/// 24 ESR × 3 capacitances × 3 ceramics × 3 loads × 281 frequencies, operating points and factors included.
fn full_scan(circuit: &mut Deck) {
    let frequencies = Frequencies::default();
    let loops = LOADS.map(|ohms| {
        circuit.alter("rload", ohms);
        let solution = dc(&circuit.circuit).unwrap();
        let (at_break, output) = (circuit.device("Vinj"), circuit.node("out"));
        LoopGain::new(&circuit.circuit, &solution, at_break, output, &frequencies).unwrap()
    });
    let esr = esr_grid(1e-3, 30.0, 24);
    for bulk in [1e-6, 10e-6, 100e-6] {
        for farads in [1e-15, 100e-9, 1e-6] {
            let bank = Bank { bulk, others: vec![SeriesRc { farads, ohms: 5e-3 }] };
            black_box(esr_scan(&loops, &bank, &esr));
        }
    }
}

/// The fourteen cases that the deck forces: offsets and loads, with and without start-up, and a leak.
fn all_points(circuit: &mut Deck) {
    let offsets = [5e-3, 0.0, -5e-3];
    let cases = offsets.map(|offset| (offset, 1e12, 1e12)).into_iter();
    let cases = cases.chain(offsets.map(|offset| (offset, 22e3, 1e12))).chain([(-5e-3, 1e12, 12e6)]);
    for (offset, start_up, leak) in cases {
        for ohms in [333.333, 33.3333] {
            for (name, value) in [("vos", offset), ("rsu", start_up), ("rleak", leak), ("rload", ohms)] {
                circuit.alter(name, value);
            }
            let search = Search { node: circuit.node("ref"), from: -2e-3, to: 2.6 };
            black_box(operating_points(&circuit.circuit, &search).unwrap());
        }
    }
}

fn report(what: &str, own: f64, simulator: Option<f64>) {
    let own_ms = own * 1e3;
    match simulator {
        Some(other) => println!("{what:32} {own_ms:8.3} ms   ngspice {:8.1} ms   {:6.0} ×", other * 1e3, other / own),
        None => println!("{what:32} {own_ms:8.3} ms   ngspice is not installed"),
    }
}

fn main() {
    let Some(shared) = std::env::var_os("RAILWORTHY_SHARED").map(PathBuf::from) else {
        println!("skipped: RAILWORTHY_SHARED is not set");
        return;
    };
    let mut scanned = deck(&shared, "c4_op_pmos_ac", &["Cout", "Resr", "Ccer", "Rcer"]);
    let own = shortest(RUNS, || full_scan(&mut scanned));
    report("full ESR scan", own, simulator(&shared, "c4_op_pmos_ac"));
    let mut forced = deck(&shared, "c5_boot_pmos_dc", &[]);
    let own = shortest(RUNS, || all_points(&mut forced));
    report("all operating points, 14 cases", own, simulator(&shared, "c5_boot_pmos_force"));
    let mut rising = deck(&shared, "c4_op_pmos_tr", &[]);
    rising.alter("vin", 12.0);
    let own = shortest(RUNS, || {
        for ohms in [333.333, 33.3333] {
            rising.alter("rload", ohms);
            for (rise, until) in [(1e-3, 40e-3), (0.1, 0.4)] {
                let ramp_up = Ramp { source: rising.device("Vin"), rise, until };
                black_box(ramp(&rising.circuit, &ramp_up, rising.node("out")).unwrap());
            }
        }
    });
    report("four ramps", own, simulator(&shared, "c4_op_pmos_tr"));
}
