//! Structures around regulators, on boards of a few parts.

#![allow(clippy::unwrap_used, clippy::indexing_slicing, reason = "a test that meets what it does not expect fails")]

use std::collections::BTreeMap;
use std::fmt::Write as _;

use super::*;
use crate::circuit::{Circuit, DeviceId, NetId};
use crate::knowledge::{Knowledge, Sign};
use crate::netlist;
use crate::quantity::Grade;

/// Writes an export from lines such as `U1 L7805 Reg "text" 1:IN:power_in=A 2:GND:power_in=GND`: reference, value,
/// symbol, then pins as number, name, type and net. A description follows `|`.
fn circuit(lines: &str) -> Circuit {
    let (mut components, mut parts) = (String::new(), String::new());
    let mut nets: BTreeMap<&str, String> = BTreeMap::new();
    for line in lines.lines().map(str::trim).filter(|line| !line.is_empty()) {
        let (line, description) = line.split_once('|').unwrap_or((line, ""));
        let mut words = line.split_whitespace();
        let (reference, value, symbol) = (words.next().unwrap(), words.next().unwrap(), words.next().unwrap());
        let description = description.trim();
        let _ = write!(
            components,
            r#"(comp (ref "{reference}") (value "{value}") (libsource (lib "l") (part "{symbol}") (description "{description}")))"#
        );
        let mut pins = String::new();
        for pin in words {
            let (pin, net) = pin.split_once('=').unwrap();
            let mut cells = pin.split(':');
            let number = cells.next().unwrap();
            let name = cells.next().unwrap_or("~");
            let kind = cells.next().unwrap_or("passive");
            let _ = write!(pins, r#"(pin (num "{number}") (name "{name}") (type "{kind}"))"#);
            if net != "-" {
                let node = format!(
                    r#"(node (ref "{reference}") (pin "{number}") (pinfunction "{name}") (pintype "{kind}"))"#
                );
                nets.entry(net).or_default().push_str(&node);
            }
        }
        if !parts.contains(&format!("\"{symbol}\"")) {
            let _ = write!(parts, r#"(libpart (lib "l") (part "{symbol}") (pins {pins}))"#);
        }
    }
    let mut text = format!(r#"(export (version "E") (components {components}) (libparts {parts}) (nets"#);
    for (code, (name, nodes)) in nets.iter().enumerate() {
        let _ = write!(text, r#"(net (code "{code}") (name "{name}") {nodes})"#);
    }
    text.push_str("))");
    Circuit::build(&netlist::read("board.net", text.as_bytes()).unwrap()).0
}

pub(super) fn design(lines: &str) -> Design {
    recognize(circuit(lines), &(), &Knowledge::default())
}

fn only(design: &Design) -> &Regulator {
    assert_eq!(design.regulators.len(), 1, "{:?}", design.not_judged);
    &design.regulators[0]
}

fn names(circuit: &Circuit, devices: &[DeviceId]) -> String {
    devices.iter().map(|id| circuit.device(*id).reference.as_str()).collect::<Vec<_>>().join(" ")
}

fn net(circuit: &Circuit, net: Option<NetId>) -> &str {
    net.map_or("", |net| circuit.net(net).name.as_str())
}

const ADJUSTABLE: &str =
    "U1 LM317 LM317 1:ADJ:input=adj 2:VO:power_out=OUT 3:VI:power_in=IN | adjustable linear regulator\n";

fn adjustable(rest: &str) -> Design {
    design(&format!("{ADJUSTABLE}{rest}"))
}

#[test]
fn a_divider_is_read_through_series_and_parallel_resistors() {
    let found = adjustable(
        "R1 240 R 1=OUT 2=adj
         R2 680 R 1=adj 2=mid
         R3 47 R 1=mid 2=GND
         R4 10k R 1=adj 2=GND
         C1 10u C 1=adj 2=GND",
    );
    let regulator = only(&found);
    let divider = regulator.divider.as_ref().unwrap();
    assert_eq!(regulator.mode, Mode::Adjustable);
    assert_eq!(names(&found.circuit, &divider.upper), "R1");
    assert_eq!(names(&found.circuit, &divider.lower), "R2 R3");
    assert_eq!(divider.lower_parallel.len(), 1);
    assert_eq!(names(&found.circuit, &divider.lower_parallel[0]), "R4");
    assert_eq!(net(&found.circuit, regulator.ground_net), "GND");
    assert!(!divider.trimmed);
}

#[test]
fn a_trimmer_belongs_to_the_divider_however_it_is_wired() {
    let rheostat = adjustable("R1 240 R 1=OUT 2=adj\nRV1 5k R_Potentiometer 1=GND 2=GND 3=adj");
    let divider = only(&rheostat).divider.clone().unwrap();
    assert!(divider.trimmed);
    assert_eq!(names(&rheostat.circuit, &divider.lower), "RV1");
    let wiper = adjustable("R1 240 R 1=OUT 2=top\nRV1 5k R_Potentiometer 1=top 2=adj 3=GND");
    let divider = only(&wiper).divider.clone().unwrap();
    assert!(divider.trimmed);
    assert_eq!(names(&wiper.circuit, &divider.upper), "RV1 R1");
    assert_eq!(names(&wiper.circuit, &divider.lower), "RV1");
}

#[test]
fn an_adjust_pin_may_lie_on_ground_or_on_the_output() {
    let grounded =
        design("U1 LM317 LM317 1:ADJ:input=GND 2:VO:power_out=OUT 3:VI:power_in=IN | adjustable linear regulator");
    let regulator = only(&grounded);
    assert_eq!(regulator.mode, Mode::Adjustable);
    let divider = regulator.divider.as_ref().unwrap();
    assert_eq!((divider.senses, net(&grounded.circuit, divider.returns)), (None, "GND"));
    let strapped = design(
        "U1 LT1763 LT1763 1:OUT:power_out=OUT 2:ADJ:input=OUT 4:GND:power_in=GND 8:IN:power_in=IN | adjustable LDO regulator",
    );
    let divider = only(&strapped).divider.clone().unwrap();
    assert_eq!(net(&strapped.circuit, divider.senses), "OUT");
    assert!(divider.upper.is_empty() && divider.lower.is_empty());
}

#[test]
fn a_three_pin_part_without_names_is_told_by_its_nets() {
    let found = design("U1 L7805 X 1=+12V 2=GND 3=+5V | Positive voltage regulator");
    let regulator = only(&found);
    assert_eq!(net(&found.circuit, regulator.input_net), "+12V");
    assert_eq!(net(&found.circuit, regulator.output_net), "+5V");
    assert_eq!(net(&found.circuit, regulator.ground_net), "GND");
}

#[test]
fn pins_without_names_take_their_roles_from_the_package_of_the_family() {
    let board = circuit("U1 LM1117-3.3 SOT-223 1=GND 2=B 3=A 4=B");
    let found = recognize(board, &(), &Knowledge::built_in());
    let regulator = only(&found);
    assert_eq!(net(&found.circuit, regulator.input_net), "A");
    assert_eq!(net(&found.circuit, regulator.output_net), "B");
    assert_eq!(regulator.roles.output, vec![1, 3]);
    assert_eq!(regulator.roles.ground, vec![0]);
    assert_eq!(regulator.nominal.as_ref().map(|nominal| nominal.volts), Some(3.3));
}

#[test]
fn a_reference_pin_is_no_adjust_pin_unless_a_divider_leads_to_it() {
    let bypassed = design(
        "U1 XX7150-3.3 XX 1:VIN=A 2:VREG=r 3:VOUT=B 4:GND=GND 5:REF=f 6:EN=A 7:BYP=y | Low noise LDO regulator
         C1 1u C 1=f 2=GND",
    );
    let regulator = only(&bypassed);
    assert!(regulator.roles.adjust.is_empty());
    assert_eq!((regulator.mode, regulator.roles.output.len()), (Mode::Fixed, 1));
    let set = design(
        "U1 L200 L200 1:VIN=A 2:LIMIT=B 3:GND=GND 4:REF=f 5:VOUT=o | Adjustable voltage regulator
         R1 1 R 1=o 2=B
         R2 2k R 1=B 2=f
         R3 820 R 1=f 2=GND",
    );
    let regulator = only(&set);
    assert_eq!(regulator.mode, Mode::Adjustable);
    assert_eq!(net(&set.circuit, regulator.divider.as_ref().unwrap().senses), "B");
}

#[test]
fn a_shunt_has_its_feed_and_a_negative_one_is_mirrored() {
    let found = design(
        "U1 LM4040 LM4040 1:K=REF 2:A=GND | 2.5V shunt voltage reference
         R1 1k R 1=+5V 2=m
         R2 1k R 1=m 2=REF
         R3 10k R 1=REF 2=SENSE",
    );
    let regulator = only(&found);
    let feed = regulator.feed.as_ref().unwrap();
    assert_eq!((regulator.kind, regulator.polarity), (RegulatorKind::Shunt, Sign::Positive));
    assert_eq!(names(&found.circuit, &feed.resistors), "R2 R1");
    assert_eq!(net(&found.circuit, regulator.input_net), "+5V");
    let mirrored = design("U1 LM4040 LM4040 1:K=GND 2:A=NREF | 2.5V shunt voltage reference\nR1 1k R 1=-5V 2=NREF");
    let regulator = only(&mirrored);
    assert_eq!((regulator.polarity, net(&mirrored.circuit, regulator.output_net)), (Sign::Negative, "NREF"));
    assert_eq!(regulator.nominal.as_ref().map(|nominal| nominal.volts), Some(-2.5));
    assert_eq!(net(&mirrored.circuit, regulator.input_net), "-5V");
}

#[test]
fn a_programmable_shunt_that_senses_another_net_is_not_judged() {
    let comparator = design(
        "U1 TL431 TL431 1:K=LED 2:REF=tap 3:A=GND
         R1 10k R 1=+12V 2=tap
         R2 10k R 1=tap 2=GND
         R3 1k R 1=+5V 2=LED",
    );
    assert!(comparator.regulators.is_empty());
    assert!(comparator.not_judged[0].reason.contains("+12V"));
    let regulator = design(
        "U1 TL431 TL431 1:K=VREF 2:REF=tap 3:A=GND
         R1 10k R 1=VREF 2=tap
         R2 10k R 1=tap 2=GND
         R3 1k R 1=+12V 2=VREF",
    );
    assert_eq!(only(&regulator).mode, Mode::Adjustable);
}

#[test]
fn the_value_is_trusted_before_the_symbol_and_a_differing_symbol_is_noted() {
    let found =
        design("U1 AP2114H-3.3 AP2112K-5.0 1:VIN:power_in=A 2:GND:power_in=GND 5:VOUT:power_out=B | LDO, 5V, fixed");
    let nominal = only(&found).nominal.clone().unwrap();
    assert_eq!((nominal.volts, nominal.grade), (3.3, Grade::Drawn));
    assert_eq!(only(&found).identity.remarks.len(), 1);
    let free = design("U1 LDO AP2112K-3.3 1:VIN:power_in=A 2:GND:power_in=GND 5:VOUT:power_out=B | LDO, 3.3V, fixed");
    assert_eq!(
        only(&free).nominal.as_ref().map(|nominal| (nominal.volts, nominal.grade)),
        Some((3.3, Grade::Inferred))
    );
}

#[test]
fn a_negative_rail_is_told_by_its_capacitors_where_nothing_else_tells() {
    let found = design(
        "U1 XX1234 XX 1:IN:power_in=A 2:GND:power_in=GND 3:OUT:power_out=B | linear regulator
         C1 10u CP 1=GND 2=B",
    );
    assert_eq!(only(&found).polarity, Sign::Negative);
}

fn listed(circuit: &Circuit, bank: &Bank) -> String {
    let one = |branch: &Branch| {
        let mut text = circuit.device(branch.capacitor).reference.clone();
        for device in &branch.series {
            let _ = write!(text, "+{}", circuit.device(*device).reference);
        }
        for device in &branch.through {
            let _ = write!(text, "@{}", circuit.device(*device).reference);
        }
        if branch.behind_diode {
            text.push('!');
        }
        text
    };
    bank.branches.iter().map(one).collect::<Vec<_>>().join(" ")
}

#[test]
fn a_bank_counts_capacitors_in_either_orientation_with_their_series_resistor() {
    let board = circuit(
        "C1 10u C 1=OUT 2=GND
         C2 100n C 1=GND 2=OUT
         C10 22u C 1=OUT 2=a
         R1 1 R 1=a 2=GND
         R2 2.2 R 1=OUT 2=b
         C3 47u C 1=b 2=GND
         R3 10k R 1=OUT 2=c
         C4 1u C 1=c 2=GND
         L1 1u L 1=OUT 2=d
         C5 1u C 1=d 2=GND
         C6 1u C 1=OUT 2=island
         C7 1u C 1=OUT 2=island
         J1 X Conn_01x02 1=d 2=GND",
    );
    let out = board.net_named("OUT").unwrap();
    let bank = bank(&board, out);
    assert_eq!(listed(&board, &bank), "C1 C2 C3+R2 C5@L1 C10+R1");
    assert_eq!(names(&board, &bank.dangling), "C6 C7");
    assert!(bank.leaves_board);
}

#[test]
fn an_input_bank_marks_what_lies_ahead_of_a_series_diode() {
    let board = circuit(
        "D1 1N4007 D 1:K=IN 2:A=RAW
         D2 1N4007 D 1:K=IN 2:A=OUT
         C1 100n C 1=IN 2=0
         C2 470u C 1=RAW 2=0",
    );
    let input = board.net_named("IN").unwrap();
    let ground = board.net_named("0").unwrap();
    assert_eq!(listed(&board, &bank_to(&board, input, &[ground], Side::Input)), "C1 C2@D1!");
    assert_eq!(listed(&board, &bank_to(&board, input, &[ground], Side::Output)), "C1");
}

#[test]
fn converters_are_known_by_their_pins_and_their_rail_is_found() {
    let found = design(
        "U1 XY1234 XY 1:VIN:power_in=A 2:GND:power_in=GND 3:SW:output=s 4:FB:input=f 5:EN:input=A
         L1 10u L 1=s 2=+3V3
         R1 10k R 1=+3V3 2=f
         R2 3k R 1=f 2=GND",
    );
    let regulator = only(&found);
    assert_eq!((regulator.kind, net(&found.circuit, regulator.output_net)), (RegulatorKind::Switching, "+3V3"));
    assert_eq!(found.not_judged.len(), 1);
}

#[test]
fn parts_with_a_few_pins_of_a_regulator_are_none() {
    let found = design(
        "U1 TMP36 TMP36 1:+VS:power_in=A 2:VOUT:output=S 3:GND:power_in=GND | temperature sensor
         U2 TPS22918 TPS22918 1:VIN:power_in=A 2:GND:power_in=GND 3:ON:input=E 4:CT=c 5:QOD=B 6:VOUT:power_out=B | load switch
         U3 LM358 LM358 1:~:output=O 2:-:input=O 3:+:input=A 4:V-:power_in=GND 8:V+:power_in=A | dual operational amplifier
         U4 TLP785 TLP785 1:A=A 2:K=GND 3:E=GND 4:C=O | opto-coupler
         U5 74LVC1G04 INV 2:IN:input=A 3:GND:power_in=GND 4:OUT:output=B 5:VCC:power_in=A
         D1 5V1 D_Zener 1:K=A 2:A=GND | Zener diode",
    );
    assert!(found.regulators.is_empty(), "{:?}", found.regulators);
}

#[test]
fn a_large_board_is_searched_in_linear_time() {
    let mut lines = String::new();
    for index in 0..20_000 {
        let _ = writeln!(lines, "R{index} 10k R 1=n{} 2=GND", index % 5000);
        let _ = writeln!(lines, "C{index} 100n C 1=+5V 2=GND");
    }
    lines.push_str("U1 L7805 L7805 1:IN:power_in=+12V 2:GND:power_in=GND 3:OUT:power_out=+5V | linear regulator\n");
    let board = circuit(&lines);
    let start = std::time::Instant::now();
    let found = recognize(board, &(), &Knowledge::default());
    let bank = bank(&found.circuit, found.regulators[0].output_net.unwrap());
    assert_eq!(bank.branches.len(), 20_000);
    assert!(start.elapsed().as_secs() < 5, "{:?}", start.elapsed());
}
