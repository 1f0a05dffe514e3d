//! The loop of AN-1148 through the whole tool: stated in a part file, with the bank and the load of a small board.
//!
//! National Semiconductor AN-1148, Linear Regulators: Theory of Operation and Compensation: 5 V and 50 mA (100 Ω), 10 µF, a
//! load pole at 159 Hz, poles at about 1 kHz and 500 kHz, a gain of one at about 40 kHz; the gain of 80 dB that gives it is
//! fitted. The worked rows keep the load pole at 159 Hz whatever the ESR, while the tool takes the network as it is, whose
//! pole lies at `1 / (2 π (R + ESR) C)`: a load of 100 Ω less the ESR is the row's own loop.

use std::collections::BTreeMap;
use std::fmt::Write;
use std::fs;

use railworthy::board::{Board, Options};
use railworthy::facts::{Edge, Facts, PublishedMargin, Subject};
use railworthy::knowledge::Knowledge;
use railworthy::quantity::Quantity;
use railworthy::recognize::RegulatorId;
use railworthy::source::Source;

use crate::judge::{Rules, TODAY};
use crate::shared::shared_folder;
use crate::small_board::{Part, netlist};

/// The family whose loop it is, but for the loop.
const FAMILY: &str = r#"family = "QL5"
maker = "various"
names = ["QL5{V}"]
voltages = ["5 V"]
tolerance = "0 %"
kind = "series"
pass = "pnp"
rated_current = "0.5 A"
[packages."SOT-223"]
pins = { 1 = "input", 2 = "ground", 3 = "output" }
[[sources]]
id = "note"
title = "National Semiconductor AN-1148"
read = true
"#;

const LOOP: &str = "[loop]\ngain = \"80 dB\"\npoles = [\"1 kHz\", \"500 kHz\"]\n";

/// Rules with the family in a folder of its own.
fn rules(text: &str) -> Knowledge {
    let folder = tempfile::tempdir().unwrap();
    fs::create_dir(folder.path().join("parts")).unwrap();
    fs::write(folder.path().join("parts/ql5.toml"), text).unwrap();
    let (knowledge, problems) = Knowledge::load(&[folder.path().to_owned()]);
    assert!(problems.is_empty(), "{problems:?}");
    knowledge
}

/// A capacitor at the output: reference, value, farads as left, ohms.
type Capacitor = (&'static str, &'static str, String, String);

fn small(capacitors: &[Capacitor]) -> Vec<Part> {
    let symbol = ("Regulator_Linear", "QL5-5.0", "Low dropout regulator");
    let pins =
        vec![("1", "IN", "power_in", "VIN"), ("2", "GND", "power_in", "GND"), ("3", "OUT", "power_out", "OUT")];
    let mut parts = vec![Part { reference: "U1", value: "QL5-5.0".to_owned(), symbol, pins }];
    parts.extend(capacitors.iter().map(|(name, value, ..)| Part::two_ended(name, *value, ("OUT", "GND"))));
    parts
}

/// What is asked of the one regulator of a board with a load in ohms.
fn asked<T>(
    knowledge: &Knowledge,
    capacitors: &[Capacitor],
    (load, more): (f64, &str),
    ask: impl FnOnce(&Facts<'_>, Subject) -> T,
) -> T {
    let checks = Rules::built_in().checks;
    let mut board = format!(
        "[[supply]]\nnet = \"VIN\"\nvoltage = \"7 V\"\n[[load]]\nnet = \"OUT\"\ncurrent = \"{} A\"\n{more}\n",
        5.0 / load
    );
    for (name, _, farads, ohms) in capacitors {
        let _ = writeln!(board, "[[part]]\nref = \"{name}\"\neffective_capacitance = \"{farads}\"\nesr = \"{ohms}\"");
    }
    let (board, problems) = Board::read(&Source::new("small.railworthy.toml", board), Options::default());
    assert!(problems.is_empty(), "{problems:?}");
    let text = netlist(&small(capacitors));
    let found = railworthy::review::examine("small.net", text.as_bytes(), board, knowledge, &checks, TODAY).unwrap();
    assert!(found.problems.is_empty(), "{:?}", found.problems);
    let facts = Facts::new(&found.design, &found.board, knowledge);
    ask(&facts, Subject::Regulator(RegulatorId::first()))
}

fn margin(facts: &Facts<'_>, subject: Subject, margin: PublishedMargin) -> Quantity {
    let regulator = facts.regulator(subject).unwrap();
    facts.published_margin(regulator, margin).unwrap().figure().unwrap().clone()
}

fn edge(facts: &Facts<'_>, subject: Subject, edge: Edge, degrees: f64) -> Quantity {
    let regulator = facts.regulator(subject).unwrap();
    facts.published_edge(regulator, edge, degrees).unwrap().figure().unwrap().clone()
}

/// One ESR that is not scaled with temperature and age.
fn exactly(ohms: f64) -> String {
    format!("{ohms} .. {ohms} ohm")
}

fn bulk(ohms: f64) -> [Capacitor; 1] {
    [("C1", "10uF", "10 uF".to_owned(), exactly(ohms))]
}

/// The computed values of the rows whose names begin alike.
fn rows(prefix: &str) -> Option<BTreeMap<String, f64>> {
    let text = fs::read_to_string(shared_folder()?.join("facts/checkvalues.tsv")).unwrap();
    let fields = text.lines().skip(1).map(|line| line.split('\t').collect::<Vec<_>>());
    let own = fields.filter(|fields| fields[0].starts_with(prefix));
    Some(own.map(|fields| (fields[0].to_owned(), fields[5].parse().unwrap())).collect())
}

/// The rows are of one load. A load of constant current leaves the output's own resistance alone, the same at every load.
fn at_one_load<T>(ohms: f64, capacitors: &[Capacitor], ask: impl FnOnce(&Facts<'_>, Subject) -> T) -> T {
    let knowledge = rules(&format!("{FAMILY}{LOOP}output_resistance = \"{ohms} ohm\"\n"));
    asked(&knowledge, capacitors, (100.0, "kind = \"constant\""), ask)
}

fn phase_of(ohms: f64, capacitors: &[Capacitor]) -> f64 {
    at_one_load(ohms, capacitors, |facts, subject| margin(facts, subject, PublishedMargin::Phase)).nominal().unwrap()
}

#[test]
fn the_margins_of_the_worked_loop_are_found() {
    let Some(rows) = rows("STB-0") else { return };
    let wanted = |name: &str| rows[name];
    at_one_load(100.0, &bulk(0.0), |facts, subject| {
        // STB-01b and STB-01c: without ESR the gain is one at 39.82 kHz, with −182.9° of phase.
        let crossover = margin(facts, subject, PublishedMargin::Crossover).nominal().unwrap();
        assert!((crossover / wanted("STB-01b") - 1.0).abs() < 1e-3, "{crossover}");
        let phase = margin(facts, subject, PublishedMargin::Phase);
        assert!((phase.nominal().unwrap() - 180.0 - wanted("STB-01c")).abs() < 0.02, "{phase:?}");
        assert_eq!(phase.kind(), phase.worst(), "published, drawn and declared figures are facts");
        assert!(margin(facts, subject, PublishedMargin::Modulus).nominal().unwrap() < 0.1);
    });
    // STB-02b, STB-03 and STB-04: 1 Ω, 20 Ω and 50 mΩ.
    for (name, esr, hertz) in [("STB-02b", 1.0, 99.3e3), ("STB-03", 20.0, 0.94e6), ("STB-04", 0.05, 40.0e3)] {
        at_one_load(100.0 - esr, &bulk(esr), |facts, subject| {
            let phase = margin(facts, subject, PublishedMargin::Phase).nominal().unwrap();
            assert!((phase - wanted(name)).abs() < 0.02, "{name}: {phase}");
            // The crossovers stand in the rows' notes, to three digits.
            let crossover = margin(facts, subject, PublishedMargin::Crossover).nominal().unwrap();
            assert!((crossover / hertz - 1.0).abs() < 5e-3, "{name}: {crossover}");
        });
    }
}

#[test]
fn a_ceramic_beside_the_electrolytic_takes_the_margin_that_the_worked_rows_say() {
    let Some(rows) = rows("STB-07") else { return };
    // The rows write the network as three separate corners; a load of `R − ESR (C_e / C)²` makes the first the same, and
    // the pole of the two capacitors then lies within 1 % of theirs.
    for (name, electrolytic, esr, ceramic) in [
        ("STB-07-10+0.1", 10.0, 1.0, 0.1),
        ("STB-07-10+1", 10.0, 1.0, 1.0),
        ("STB-07-10+10", 10.0, 1.0, 10.0),
        ("STB-07-100+10", 100.0, 0.3, 10.0),
    ] {
        let share: f64 = electrolytic / (electrolytic + ceramic);
        let capacitors = [
            ("C1", "100uF", format!("{electrolytic} uF"), exactly(esr)),
            ("C2", "1uF", format!("{ceramic} uF"), exactly(0.0)),
        ];
        let phase = phase_of(100.0 - esr * share * share, &capacitors);
        assert!((phase - rows[name]).abs() < 0.2, "{name}: {phase} against {}", rows[name]);
    }
}

#[test]
fn the_windows_of_the_worked_loop_are_found() {
    let Some(rows) = rows("STB-05") else { return };
    // The upper edges stand in the rows' notes.
    for (name, degrees, high) in [("STB-05-30", 30.0, 17.341), ("STB-05-45", 45.0, 7.024), ("STB-05-60", 60.0, 3.204)]
    {
        for (end, wanted) in [(Edge::Low, rows[name]), (Edge::High, high)] {
            let found = at_one_load(100.0 - wanted, &bulk(1.0), |facts, subject| edge(facts, subject, end, degrees));
            let ohms = found.nominal().unwrap();
            assert!((ohms / wanted - 1.0).abs() < 1e-3, "{name}: {ohms} against {wanted}");
        }
    }
    // The figures of the check language are those for 45°.
    at_one_load(99.0, &bulk(1.0), |facts, subject| {
        let named = ["computed_esr_low", "computed_esr_high"].map(|name| facts.figure(subject, name).unwrap());
        assert_eq!(named, [Edge::Low, Edge::High].map(|end| edge(facts, subject, end, 45.0)));
        assert!(named[0].nominal().unwrap() < 0.4 && named[1].nominal().unwrap() > 6.9);
    });
}

#[test]
fn the_best_esr_within_a_range_is_found_between_its_ends() {
    // The same loop's best ESR is worked out as 1.20 Ω with 70.9°; 20 Ω leave 28.0°, 50 mΩ 4.2°.
    let capacitors = [("C1", "10uF", "10 uF".to_owned(), "0.05 .. 20 ohm".to_owned())];
    at_one_load(98.8, &capacitors, |facts, subject| {
        let phase = margin(facts, subject, PublishedMargin::Phase);
        assert!((phase.worst().high() - 70.9).abs() < 0.15, "{phase:?}");
        assert!((phase.worst().low() - 4.2).abs() < 0.15, "{phase:?}");
    });
}

/// The phase margin by arctangents alone, at the one frequency where the gain is one: `R` beside one capacitor.
fn by_hand(gain: f64, poles: [f64; 2], resistance: f64, (farads, esr): (f64, f64)) -> f64 {
    let corners = |hertz: f64| {
        let at = |ohms: f64| hertz * std::f64::consts::TAU * ohms * farads;
        ([at(esr)], [at(resistance + esr), hertz / poles[0], hertz / poles[1]])
    };
    let size = |hertz: f64| {
        let (zeros, poles) = corners(hertz);
        gain * zeros.iter().map(|x| x.hypot(1.0)).product::<f64>()
            / poles.iter().map(|x| x.hypot(1.0)).product::<f64>()
    };
    let (mut low, mut high) = (1.0_f64, 1e9_f64);
    for _ in 0..200 {
        let middle = (low * high).sqrt();
        *(if size(middle) > 1.0 { &mut low } else { &mut high }) = middle;
    }
    let (zeros, poles) = corners(low);
    let sum = |all: &[f64]| all.iter().map(|x| x.atan().to_degrees()).sum::<f64>();
    180.0 + sum(&zeros) - sum(&poles)
}

#[test]
fn the_margin_is_the_least_over_a_tenth_half_and_all_of_a_resistive_load() {
    let knowledge = rules(&format!("{FAMILY}{LOOP}"));
    for esr in [0.0, 0.2, 1.0, 8.0, 30.0] {
        let wanted = [0.1, 0.5, 1.0]
            .map(|share| by_hand(1e4, [1e3, 500e3], 100.0 / share, (10e-6, esr)))
            .into_iter()
            .fold(180.0, f64::min);
        let found = asked(&knowledge, &bulk(esr), (100.0, ""), |facts, subject| {
            margin(facts, subject, PublishedMargin::Phase)
        });
        assert!((found.nominal().unwrap() - wanted).abs() < 0.03, "{esr}: {found:?} against {wanted}");
    }
}

#[test]
fn ranges_of_gain_and_poles_widen_the_margin_and_one_board_overrules_the_sheet() {
    let text = "[loop]\ngain = \"74 / 80 / 86 dB\"\npoles = [\"1 kHz\", \"300 / 500 / 800 kHz\"]\n";
    let knowledge = rules(&format!("{FAMILY}{text}"));
    let phase = |facts: &Facts<'_>, subject: Subject| margin(facts, subject, PublishedMargin::Phase);
    let wide = asked(&knowledge, &bulk(1.0), (100.0, ""), phase);
    let narrow = asked(&rules(&format!("{FAMILY}{LOOP}")), &bulk(1.0), (100.0, ""), phase);
    assert_eq!(wide.nominal(), narrow.nominal());
    assert!(wide.worst().low() < narrow.worst().low() - 1.0 && wide.worst().high() > narrow.worst().high() + 1.0);
    assert_eq!(wide.kind(), wide.worst());
    let sources: Vec<&str> = wide.evidence().map(|evidence| evidence.what.as_str()).collect();
    for what in
        ["loop gain of U1", "pole 1 of the loop of U1", "pole 2 of the loop of U1", "ESR of C1", "load on OUT"]
    {
        assert!(sources.contains(&what), "{what}: {sources:?}");
    }
    let declared = "[[part]]\nref = \"U1\"\n[part.loop]\ngain = \"10000\"\npoles = [\"1 kHz\", \"500 kHz\"]\n";
    let own = asked(&knowledge, &bulk(1.0), (100.0, declared), phase);
    assert_eq!((own.nominal(), own.worst()), (narrow.nominal(), narrow.worst()));
}

#[test]
fn a_recalled_loop_is_a_guess_and_a_part_without_one_has_no_margin() {
    let phase = |facts: &Facts<'_>, subject: Subject| margin(facts, subject, PublishedMargin::Phase);
    let recalled = rules(&format!("{FAMILY}{LOOP}recalled = [\"poles\"]\n"));
    let found = asked(&recalled, &bulk(0.05), (100.0, ""), phase);
    assert!(found.worst().high() < 10.0, "{found:?}");
    assert_eq!((found.kind().low(), found.kind().high()), (180.0, -180.0), "no failure rests on it");
    let none = rules(FAMILY);
    asked(&none, &bulk(0.05), (100.0, ""), |facts, subject| {
        let regulator = facts.regulator(subject).unwrap();
        assert!(facts.published_margin(regulator, PublishedMargin::Phase).is_none());
        assert!(facts.figure(subject, "computed_esr_low").is_none());
    });
}

#[test]
fn the_bounds_over_all_ranges_are_those_of_a_dense_search_by_hand() {
    let text = "[loop]\ngain = \"74 / 80 / 86 dB\"\npoles = [\"0.5 / 1 / 2 kHz\", \"300 / 500 / 800 kHz\"]\n";
    let capacitors = [("C1", "10uF", "8 .. 12 uF".to_owned(), "0.1 .. 10 ohm".to_owned())];
    let found = asked(&rules(&format!("{FAMILY}{text}")), &capacitors, (100.0, ""), |facts, subject| {
        margin(facts, subject, PublishedMargin::Phase)
    });
    let ends = |low: f64, high: f64| [low, (low * high).sqrt(), high];
    let (mut least, mut most) = (180.0_f64, -180.0_f64);
    for gain in ends(10_f64.powf(3.7), 10_f64.powf(4.3)) {
        for pole in ends(500.0, 2e3) {
            for power in ends(300e3, 800e3) {
                for farads in ends(8e-6, 12e-6) {
                    for step in 0..=40 {
                        let bank = (farads, 0.1 * 100_f64.powf(f64::from(step) / 40.0));
                        let of = |share: f64| by_hand(gain, [pole, power], 100.0 / share, bank);
                        let worst = of(0.1).min(of(0.5)).min(of(1.0));
                        (least, most) = (least.min(worst), most.max(worst));
                    }
                }
            }
        }
    }
    assert!((found.worst().low() - least).abs() < 0.1, "{found:?} against {least}");
    assert!((found.worst().high() - most).abs() < 0.3, "{found:?} against {most}");
}
