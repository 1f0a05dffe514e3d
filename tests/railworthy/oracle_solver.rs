//! The solver against the results of a circuit simulator, for every circuit, load and case of theirs.

use std::collections::BTreeMap;
use std::path::Path;

use railworthy::solve::{
    Bank, Dropout, Frequencies, Goal, LoopGain, Ramp, Search, SeriesRc, Solution, Window, WindowKind, dc, dropout,
    esr_grid, esr_scan, line_change, operating_points, ramp, window,
};

use crate::oracle_deck::Deck;
use crate::shared::shared_folder;

/// One line of the results: circuit, quantity, conditions, value.
pub(crate) struct Results(Vec<[String; 4]>);

impl Results {
    fn read(folder: &Path) -> Self {
        let text = std::fs::read_to_string(folder.join("oracle/results.tsv")).unwrap();
        let lines = text.lines().skip(1).map(|line| {
            let fields: Vec<&str> = line.split('\t').collect();
            [0, 1, 2, 3].map(|place| fields[place].to_owned())
        });
        Self(lines.collect())
    }

    /// Conditions and values of one quantity of a circuit.
    fn of<'a>(&'a self, circuit: &'a str, quantity: &'a str) -> impl Iterator<Item = (&'a str, &'a str)> {
        let own = self.0.iter().filter(move |[own, what, ..]| own == circuit && what == quantity);
        own.map(|[_, _, conditions, value]| (conditions.as_str(), value.as_str()))
    }

    fn text(&self, circuit: &str, quantity: &str, conditions: &str) -> Option<&str> {
        let row = self.0.iter().find(|row| row[..3] == [circuit, quantity, conditions]);
        row.map(|[_, _, _, value]| value.as_str())
    }

    fn number(&self, circuit: &str, quantity: &str, conditions: &str) -> f64 {
        let text = self.text(circuit, quantity, conditions);
        text.unwrap_or_else(|| panic!("no {quantity} of {circuit} at {conditions}")).parse().unwrap()
    }
}

pub(crate) fn deck_text(folder: &Path, name: &str) -> String {
    std::fs::read_to_string(folder.join(format!("oracle/decks/{name}.cir"))).unwrap()
}

/// The circuits, each with the resistor of its full load and the name of its nominal rows' conditions.
const CIRCUITS: [(&str, f64, &str); 4] = [
    ("c1_zener_follower", 49.0, ""),
    ("c2a_op_npn", 25.0, ""),
    ("c4_op_pmos", 33.3333, ""),
    ("c5_boot_pmos", 33.3333, "falling su_vos+0mV "),
];
const LOADS: [f64; 3] = [0.1, 0.5, 1.0];
const INPUT: f64 = 12.0;

fn load_name(share: f64) -> String {
    format!("load={share}")
}

/// A number with a unit's prefix, as in `-90uV`, `640k`, `1M2`.
fn engineering(text: &str) -> f64 {
    let text = text.trim_end_matches('V');
    let place = text.find(|letter: char| letter.is_ascii_alphabetic());
    let Some(place) = place else { return text.parse().unwrap() };
    let factor = match &text[place..=place] {
        "u" => 1e-6,
        "m" => 1e-3,
        "k" => 1e3,
        "M" => 1e6,
        other => panic!("prefix {other}"),
    };
    let (whole, rest) = (&text[..place], &text[place + 1..]);
    let digits = if rest.is_empty() { whole.to_owned() } else { format!("{whole}.{rest}") };
    digits.parse::<f64>().unwrap() * factor
}

/// The circuit whose reference hangs on its own output, in one of its cases: `nosu_vos-5mV`, `vos-5mV_leak640k`.
fn bootstrapped(folder: &Path, case: &str, load: f64) -> Deck {
    let mut deck = Deck::read(&deck_text(folder, "c5_boot_pmos_dc"), &[]);
    deck.alter("rload", load);
    for part in case.split('_') {
        match part {
            "nosu" => {}
            "su" => deck.alter("rsu", 22e3),
            "leak" => deck.alter("rleak", 12e6),
            _ => {
                let begins = part.find(|letter: char| "+-".contains(letter) || letter.is_ascii_digit()).unwrap();
                let name = match &part[..begins] {
                    "leak" => "rleak",
                    other => other,
                };
                deck.alter(name, engineering(&part[begins..]));
            }
        }
    }
    deck
}

#[test]
fn voltages_dropout_and_line_change_are_the_simulators() {
    let Some(folder) = shared_folder() else { return };
    let results = Results::read(&folder);
    let mut compared = 0;
    for (name, full_load, conditions) in CIRCUITS {
        let mut deck = Deck::read(&deck_text(&folder, &format!("{name}_dc")), &[]);
        if name.starts_with("c5") {
            deck.alter("rsu", 22e3);
        }
        for share in LOADS {
            deck.alter("rload", full_load / share);
            let case = format!("{conditions}{}", load_name(share));
            let wanted = |quantity: &str| results.number(name, quantity, &case);
            let (input, output) = (deck.device("Vin"), deck.node("out"));
            let solution = dc(&deck.circuit).unwrap();
            let volts = solution.voltage(output);
            assert!((volts - wanted("vout_nominal")).abs() <= 1e-4 * volts, "{name} {case}: {volts}");
            let found = dropout(&deck.circuit, input, output, Some(&solution)).unwrap();
            let Dropout { input: at, across, .. } = found;
            let allowed = f64::max(1e-3, 0.01 * wanted("dropout"));
            assert!((across - wanted("dropout")).abs() <= allowed, "{name} {case}: {found:?}");
            assert!((at - wanted("vin_at_2pct_drop")).abs() <= allowed, "{name} {case}: {found:?}");
            let change = line_change(&deck.circuit, input, output, Some(&solution)).unwrap();
            let line = wanted("line_reg_10.8_13.2") * 1e-3;
            assert!((change - line).abs() <= 1e-6, "{name} {case}: {change} against {line}");
            compared += 4;
        }
    }
    assert_eq!(compared, 48);
}

/// The loops of a circuit, one for each load, broken where a deck breaks it; without the output's capacitors.
pub(crate) fn loops(folder: &Path, deck: &str, probe: &str, full_load: f64) -> Vec<LoopGain> {
    let mut deck_read = Deck::read(&deck_text(folder, deck), &["Cout", "Resr", "Ccer", "Rcer"]);
    if deck.starts_with("c5") {
        deck_read.alter("rsu", 22e3);
    }
    let frequencies = Frequencies::default();
    let of_load = |share: f64| {
        deck_read.alter("rload", full_load / share);
        let solution: Solution = dc(&deck_read.circuit).unwrap();
        let (at_break, output) = (deck_read.device(probe), deck_read.node("out"));
        LoopGain::new(&deck_read.circuit, &solution, at_break, output, &frequencies).unwrap()
    };
    LOADS.map(of_load).into()
}

/// Circuit, deck, probe, the name of the break, full load.
const LOOPS: [(&str, &str, &str, &str, f64); 4] = [
    ("c2a_op_npn", "c2a_op_npn_ac", "Vinj", "fb", 25.0),
    ("c4_op_pmos", "c4_op_pmos_ac", "Vinj", "fb", 33.3333),
    ("c5_boot_pmos", "c5_boot_pmos_ac", "Vinj", "fb", 33.3333),
    ("c5_boot_pmos", "c5_boot_pmos_ac_brk2", "Vinj2", "od", 33.3333),
];

/// The banks of the simulator's runs, with their names there.
fn banks() -> Vec<(String, Bank)> {
    let mut banks = Vec::new();
    for (bulk_name, bulk) in [("1u", 1e-6), ("10u", 10e-6), ("100u", 100e-6)] {
        for (ceramic_name, farads) in [("none", 1e-15), ("100n", 100e-9), ("1000n", 1e-6)] {
            let others = vec![SeriesRc { farads, ohms: 5e-3 }];
            banks.push((format!("C={bulk_name} cer={ceramic_name}"), Bank { bulk, others }));
        }
    }
    banks
}

fn grid() -> Vec<f64> {
    esr_grid(1e-3, 30.0, 24)
}

#[test]
fn phase_margins_and_crossovers_are_the_simulators() {
    let Some(folder) = shared_folder() else { return };
    let results = Results::read(&folder);
    let mut compared = 0;
    for (circuit, deck, probe, name, full_load) in LOOPS {
        let loops = loops(&folder, deck, probe, full_load);
        for ((share, own), (bank_name, bank)) in
            LOADS.iter().zip(&loops).flat_map(|own| banks().into_iter().map(move |bank| (own, bank)))
        {
            let prefix = format!("break={name} {} {bank_name} ESR=", load_name(*share));
            for esr in grid() {
                let margins = own.margins(&bank.with_esr(esr));
                let of = |quantity: &str| {
                    let row = results.of(circuit, quantity).find(|(conditions, _)| {
                        let printed = conditions.strip_prefix(&prefix).and_then(|esr| esr.parse::<f64>().ok());
                        printed.is_some_and(|printed| (printed / esr - 1.0).abs() < 1e-3)
                    });
                    row.map(|(_, value)| value.parse::<f64>().unwrap())
                };
                if let Some(wanted) = of("pm") {
                    let phase = margins.phase.unwrap();
                    assert!((phase - wanted).abs() <= 0.01, "{circuit} {prefix}{esr}: {phase} against {wanted}");
                    let (crossover, wanted) = (margins.crossover.unwrap(), of("fu").unwrap());
                    assert!((crossover / wanted - 1.0).abs() <= 1e-3, "{circuit} {prefix}{esr}: {crossover}");
                    compared += 1;
                }
            }
        }
    }
    assert_eq!(compared, 4 * 216);
}

/// Where a margin crosses a goal on the grid, by straight lines over the logarithm of ESR, as the simulator's rows have
/// it; the ends of the grid where it does not.
fn interpolated(loops: &[LoopGain], bank: &Bank, goal: f64) -> (f64, f64) {
    let grid = grid();
    let phases: Vec<f64> =
        esr_scan(loops, bank, &grid).iter().map(|margins| margins.phase.unwrap_or(999.0)).collect();
    let fine = |phase: &f64| *phase >= goal;
    let (first, last) = (phases.iter().position(fine).unwrap(), phases.iter().rposition(fine).unwrap());
    let between = |inside: usize, outside: usize| {
        let share = (goal - phases[inside]) / (phases[outside] - phases[inside]);
        grid[inside] * (grid[outside] / grid[inside]).powf(share)
    };
    let low = if first == 0 { grid[0] } else { between(first, first - 1) };
    let high = if last + 1 == grid.len() { grid[last] } else { between(last, last + 1) };
    (low, high)
}

#[test]
fn windows_are_the_simulators_in_kind_and_edges() {
    let Some(folder) = shared_folder() else { return };
    let results = Results::read(&folder);
    let goal = Goal { phase: 45.0, modulus: 0.0 };
    let (mut kinds, mut edges) = (0, 0);
    for (circuit, deck, probe, name, full_load) in LOOPS {
        let loops = loops(&folder, deck, probe, full_load);
        let edge = |value: f64, wanted: f64, case: &str, edges: &mut usize| {
            assert!((value / wanted - 1.0).abs() <= 2e-3, "{circuit} {case}: {value} against {wanted}");
            *edges += 1;
        };
        for (bank_name, bank) in banks() {
            for (share, own) in LOADS.iter().zip(loops.chunks(1)) {
                let case = format!("break={name} {} {bank_name}", load_name(*share));
                let found = window(own, &bank, &grid(), &goal);
                assert_eq!(found.kind.name(), results.text(circuit, "esr_window_kind", &case).unwrap(), "{case}");
                kinds += 1;
                if found.kind != WindowKind::None {
                    let (low, high) = interpolated(own, &bank, 45.0);
                    edge(low, results.number(circuit, "esr_window_lo", &case), &case, &mut edges);
                    edge(high, results.number(circuit, "esr_window_hi", &case), &case, &mut edges);
                }
            }
            let case = format!("break={name} all loads {bank_name}");
            let found = window(&loops, &bank, &grid(), &goal);
            let wanted = results.text(circuit, "esr_window_all_loads", &case).unwrap();
            let (kind, range) = wanted.split_once(' ').unwrap();
            assert_eq!(found.kind.name(), kind, "{circuit} {case}");
            kinds += 1;
            if let Some((low, high)) = range.split_once('-') {
                let own = interpolated(&loops, &bank, 45.0);
                edge(own.0, low.parse().unwrap(), &case, &mut edges);
                edge(own.1, high.parse().unwrap(), &case, &mut edges);
            }
            // Where every phase margin is positive: stable at all.
            let stable = window(&loops, &bank, &grid(), &Goal { phase: 0.0, modulus: 0.0 });
            let wanted = results.text(circuit, "esr_stable_all_loads", &case).unwrap();
            assert_eq!(stable.kind.name(), wanted.split_once(' ').unwrap().0, "{circuit} {case}");
            kinds += 1;
        }
    }
    assert_eq!(kinds, 4 * (27 + 18));
    assert!(edges > 150, "{edges}");
}

/// The figures at exactly 0.3 Ω and the edges that were bisected, by case.
fn bisected(folder: &Path) -> BTreeMap<String, Vec<(String, f64, String)>> {
    let text = std::fs::read_to_string(folder.join("oracle/nets/extra.tsv")).unwrap();
    let mut by_case: BTreeMap<String, Vec<(String, f64, String)>> = BTreeMap::new();
    for line in text.lines().skip(1) {
        let fields: Vec<&str> = line.split('\t').collect();
        let row = (fields[2].to_owned(), fields[3].parse().unwrap(), fields[6].to_owned());
        by_case.entry(fields[0].to_owned()).or_default().push(row);
    }
    by_case
}

#[test]
fn bisected_edges_and_margins_at_one_esr_are_the_simulators() {
    let Some(folder) = shared_folder() else { return };
    let mut compared = 0;
    for (case, rows) in bisected(&folder) {
        let (deck, probe, full_load) = match case.split(['+', '_']).next().unwrap() {
            "c2a" => ("c2a_op_npn_ac", "Vinj", 25.0),
            "c4" => ("c4_op_pmos_ac", "Vinj", 33.3333),
            "c5" => ("c5_boot_pmos_ac_brk2", "Vinj2", 33.3333),
            other => panic!("case {other}"),
        };
        let loops = loops(&folder, deck, probe, full_load);
        let others = if case.contains("+cer") { vec![SeriesRc { farads: 1e-6, ohms: 5e-3 }] } else { Vec::new() };
        let bank = Bank { bulk: 10e-6, others };
        let found: Window = window(&loops, &bank, &grid(), &Goal { phase: 45.0, modulus: 0.0 });
        let at = |own: &[LoopGain]| esr_scan(own, &bank, &[0.3])[0];
        for (fact, wanted, condition) in rows {
            let (value, allowed) = match fact.as_str() {
                "esr_window_low" => (found.low().unwrap(), 0.002 * wanted),
                "esr_window_high" => (found.high().unwrap(), 0.002 * wanted),
                "phase_margin" => (at(&loops).phase.unwrap(), 0.01),
                "unity_gain_frequency" if condition.contains("100 %") => {
                    (at(&loops[2..]).crossover.unwrap(), 1e-3 * wanted)
                }
                "unity_gain_frequency" => (at(&loops[..1]).crossover.unwrap(), 1e-3 * wanted),
                other => panic!("fact {other}"),
            };
            assert!((value - wanted).abs() <= allowed, "{case} {fact}: {value} against {wanted}");
            compared += 1;
        }
    }
    assert_eq!(compared, 24);
}

#[test]
fn operating_points_and_their_stability_are_the_simulators() {
    let Some(folder) = shared_folder() else { return };
    let results = Results::read(&folder);
    let (mut cases, mut points) = (0, 0);
    for (case, count) in results.of("c5_boot_pmos", "op_count") {
        let (name, load) = case.split_once(" load=").unwrap();
        let deck = bootstrapped(&folder, name, 33.3333 / load.parse::<f64>().unwrap());
        let search = Search { node: deck.node("ref"), from: -2e-3, to: 2.6 };
        let found = operating_points(&deck.circuit, &search).unwrap();
        assert_eq!((found.points.len(), found.jumps), (count.parse().unwrap(), 0), "{case}");
        cases += 1;
        for (number, point) in found.points.iter().enumerate() {
            let wanted = |what: &str| results.number("c5_boot_pmos", &format!("op{}_{what}", number + 1), case);
            let close = |value: f64, wanted: f64| (value - wanted).abs() <= 1e-9 + 1e-4 * wanted.abs();
            assert!(close(point.volts, wanted("node")), "{case}: {} against {}", point.volts, wanted("node"));
            let output = point.solution.voltage(deck.node("out"));
            assert!(close(output, wanted("vout")), "{case}: {output} against {}", wanted("vout"));
            assert_eq!(point.is_stable(), wanted("slope") > 0.0, "{case}: {}", point.slope);
            // The simulator's slopes are differences over a step of the sweep, coarse at the top.
            assert!((point.slope / wanted("slope") - 1.0).abs() < 0.04, "{case}: {}", point.slope);
            points += 1;
        }
    }
    assert_eq!((cases, points), (28, 46));
}

#[test]
fn starts_are_the_simulators_for_every_circuit_offset_and_ramp() {
    let Some(folder) = shared_folder() else { return };
    let results = Results::read(&folder);
    let mut verdicts = [0, 0];
    for (name, full_load, _) in CIRCUITS {
        for (case, starts) in results.of(name, "tr_comes_up") {
            let load =
                full_load / case.split("load=").nth(1).unwrap().split(' ').next().unwrap().parse::<f64>().unwrap();
            let mut deck = if name.starts_with("c5") {
                bootstrapped(&folder, case.split(' ').next().unwrap(), load)
            } else {
                Deck::read(&deck_text(&folder, &format!("{name}_dc")), &[])
            };
            deck.alter("rload", load);
            deck.alter("vin", INPUT);
            let (rise, until) = if case.ends_with("ramp=1ms") { (1e-3, 40e-3) } else { (0.1, 0.4) };
            let source = deck.device("Vin");
            let trace = ramp(&deck.circuit, &Ramp { source, rise, until }, deck.node("out")).unwrap();
            let nominal = if name.starts_with("c1") || name.starts_with("c2") { 5.0 } else { 10.0 };
            let is_up = trace.end() > 0.9 * nominal;
            assert_eq!(is_up, starts == "yes", "{name} {case}: {}", trace.end());
            verdicts[usize::from(is_up)] += 1;
            let end = results.number(name, "tr_vout_end", case);
            assert!((trace.end() - end).abs() <= 1e-9 + 1e-4 * end.abs(), "{name} {case}: {} {end}", trace.end());
            if let Some(most) = results.text(name, "tr_vout_max", case) {
                let most: f64 = most.parse().unwrap();
                assert!((trace.peak() - most).abs() <= 1e-3, "{name} {case}: {} {most}", trace.peak());
            }
        }
    }
    assert_eq!(verdicts, [10, 34]);
}

#[test]
fn the_slowest_ramp_that_starts_is_the_simulators() {
    let Some(folder) = shared_folder() else { return };
    let results = Results::read(&folder);
    let mut compared = 0;
    for (quantity, starts) in [("ramp_slowest_that_starts", true), ("ramp_fastest_that_fails", false)] {
        for (case, milliseconds) in results.of("c5_boot_pmos", quantity) {
            let offset = case.split("vos=").nth(1).unwrap().split(' ').next().unwrap();
            let mut deck = bootstrapped(&folder, "nosu", 333.333);
            deck.alter("vos", engineering(offset));
            let rise = milliseconds.parse::<f64>().unwrap() * 1e-3;
            let source = deck.device("Vin");
            let trace = ramp(&deck.circuit, &Ramp { source, rise, until: 20e-3 }, deck.node("out")).unwrap();
            assert_eq!(trace.end() > 9.0, starts, "{case}, {milliseconds} ms: {}", trace.end());
            compared += 1;
        }
    }
    assert_eq!(compared, 8);
}
