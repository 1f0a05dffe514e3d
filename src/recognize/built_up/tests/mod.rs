//! Regulators from single parts, and what only looks like one, on boards of a few parts.

#![allow(clippy::unwrap_used, clippy::indexing_slicing, reason = "a test that meets what it does not expect fails")]

use super::super::model::{Design, Regulator};
use super::super::tests::design;
use super::*;
use crate::circuit::DeviceId;

mod variants;

/// A supply and a load, so that the nets at both ends are supplies.
const ENDS: &str = "J1 in Conn 1:A=VIN 2:B=GND
    J2 out Conn 1:A=OUT 2:B=GND
    C1 100u C 1=OUT 2=GND\n";

fn built(lines: &str) -> (Design, Vec<String>) {
    let design = design(&format!("{ENDS}{lines}"));
    let told = design.regulators.iter().filter(|one| one.built_up.is_some()).map(|one| told(&design, one)).collect();
    (design, told)
}

/// `Q1 pnp positive VIN>OUT op-amp U1, zener diode D1 input, divider R1 R2`.
fn told(design: &Design, one: &Regulator) -> String {
    let circuit = &design.circuit;
    let built = one.built_up.as_ref().unwrap();
    let names = |devices: &[DeviceId]| {
        devices.iter().map(|id| circuit.device(*id).reference.as_str()).collect::<Vec<_>>().join(" ")
    };
    let net = |net| circuit.net(net).name.as_str();
    let amplifier = built.amplifier.as_ref().map_or_else(
        || "none".to_owned(),
        |amplifier| format!("{} {}", amplifier.kind.name(), names(&amplifier.devices)),
    );
    let feed = match built.feed {
        Some(ReferenceFeed::Other(other)) => format!("other {}", net(other)),
        Some(feed) => feed.name().to_owned(),
        None => "?".to_owned(),
    };
    let divider = built
        .divider
        .as_ref()
        .map_or_else(String::new, |divider| format!(" divider {}/{}", names(&divider.upper), names(&divider.lower)));
    format!(
        "{}: {} {} {}>{}, {amplifier}, {} {} {feed}{divider}",
        names(&built.pass),
        one.pass.map_or("?", crate::knowledge::Pass::name),
        if one.polarity == crate::knowledge::Sign::Positive { "+" } else { "-" },
        net(built.input),
        net(built.output),
        built.reference.kind.name(),
        names(&built.reference.devices),
    )
}

fn only(lines: &str) -> String {
    let (_, told) = built(lines);
    assert_eq!(told.len(), 1, "{told:?}");
    told[0].clone()
}

fn none(lines: &str) {
    assert_eq!(built(lines).1, Vec::<String>::new());
}

const OP_AMP: &str = "U1 OPA OPAMP 1:OUT:output=o 2:V-:power_in=GND 3:+:input=P 4:-:input=M 5:V+:power_in=VIN\n";

#[test]
fn a_zener_diode_holds_the_base_of_a_follower() {
    let told = only(
        "Q1 Q Q_NPN_BCE 1:B=b 2:C=VIN 3:E=OUT
         R1 390 R 1=VIN 2=b
         D1 5V6 D_Zener 1:K=b 2:A=GND",
    );
    assert_eq!(told, "Q1: npn-follower + VIN>OUT, none, zener diode D1 input");
}

#[test]
fn darlington_followers_are_told_and_their_own_zener_string_is_followed() {
    let told = only(
        "Q1 Q Q_NPN_BCE 1:B=e2 2:C=VIN 3:E=OUT
         Q2 Q Q_NPN_BCE 1:B=b 2:C=VIN 3:E=e2
         R1 390 R 1=VIN 2=b
         D1 11V D_Zener 1:K=b 2:A=m
         D2 1N4148 D 1:K=GND 2:A=m",
    );
    assert_eq!(told, "Q1 Q2: npn-follower-darlington + VIN>OUT, none, zener diode D1 D2 input");
}

#[test]
fn a_source_follower_and_one_packaged_as_a_darlington_pair_are_passes_too() {
    let rest = "R1 390 R 1=VIN 2=b\nD1 5V6 D_Zener 1:K=b 2:A=GND";
    let told = only(&format!("Q1 Q Q_NMOS_GDS 1:G=b 2:D=VIN 3:S=OUT\n{rest}"));
    assert_eq!(told, "Q1: nmos-follower + VIN>OUT, none, zener diode D1 input");
    let told = only(&format!("Q1 Q Q_NPN_Darlington_BCE 1:B=b 2:C=VIN 3:E=OUT\n{rest}"));
    assert_eq!(told, "Q1: npn-follower-darlington + VIN>OUT, none, zener diode D1 input");
}

#[test]
fn an_op_amp_drives_a_follower_or_a_common_stage_of_the_sign_that_counteracts() {
    let rest = "R2 47 R 1=o 2=b
        R3 10k R 1=OUT 2=M
        R4 10k R 1=M 2=GND
        R1 3k3 R 1=VIN 2=P
        D1 2V5 D_Zener 1:K=P 2:A=GND";
    let told = only(&format!("{OP_AMP}Q1 Q Q_NPN_BCE 1:B=b 2:C=VIN 3:E=OUT\n{rest}"));
    assert_eq!(told, "Q1: npn-follower + VIN>OUT, op-amp U1, zener diode D1 input divider R3/R4");
    // The same inputs around a stage that inverts latch.
    none(&format!("{OP_AMP}Q1 Q Q_PMOS_GDS 1:G=b 2:D=OUT 3:S=VIN\n{rest}"));
    let exchanged = OP_AMP.replace("=P", "=x").replace("=M", "=P").replace("=x", "=M");
    let told = only(&format!("{exchanged}Q1 Q Q_PMOS_GDS 1:G=b 2:D=OUT 3:S=VIN\n{rest}"));
    assert_eq!(told, "Q1: pmos + VIN>OUT, op-amp U1, zener diode D1 input divider R3/R4");
}

#[test]
fn a_reference_fed_from_the_output_or_from_another_rail_is_told() {
    let rest = "Q1 Q Q_NPN_BCE 1:B=o 2:C=VIN 3:E=OUT
        R3 10k R 1=OUT 2=M
        R4 10k R 1=M 2=GND
        D1 2V5 D_Zener 1:K=P 2:A=GND\n";
    let told = only(&format!("{OP_AMP}{rest}R1 3k3 R 1=OUT 2=P\nR5 220k R 1=VIN 2=P"));
    assert!(told.contains("zener diode D1 output"), "{told}");
    let told = only(&format!("{OP_AMP}{rest}R1 3k3 R 1=+15V 2=P"));
    assert!(told.contains("zener diode D1 other +15V"), "{told}");
}

#[test]
fn a_complementary_pair_follows_and_a_driver_between_amplifier_and_pass_turns_the_sign() {
    let rest = "R3 10k R 1=OUT 2=M
        R4 10k R 1=M 2=GND
        R1 3k3 R 1=VIN 2=P
        D1 2V5 D_Zener 1:K=P 2:A=GND\n";
    let told = only(&format!(
        "{OP_AMP}{rest}Q1 Q Q_PNP_BCE 1:B=c 2:C=OUT 3:E=VIN
         Q2 Q Q_NPN_BCE 1:B=o 2:C=c 3:E=OUT
         R5 1k R 1=VIN 2=c"
    ));
    assert_eq!(told, "Q1 Q2: npn-follower-complementary + VIN>OUT, op-amp U1, zener diode D1 input divider R3/R4");
    let told = only(&format!(
        "{OP_AMP}{rest}Q1 Q Q_PNP_BCE 1:B=c 2:C=OUT 3:E=VIN
         Q2 Q Q_NPN_BCE 1:B=b 2:C=c 3:E=GND
         R6 1k R 1=o 2=b
         R5 1k R 1=VIN 2=c"
    ));
    assert_eq!(told, "Q1: pnp + VIN>OUT, op-amp U1, zener diode D1 input divider R3/R4");
}

#[test]
fn a_pnp_darlington_drives_as_one() {
    let exchanged = OP_AMP.replace("=P", "=x").replace("=M", "=P").replace("=x", "=M");
    let told = only(&format!(
        "{exchanged}Q1 Q Q_PNP_BCE 1:B=b1 2:C=OUT 3:E=VIN
         Q2 Q Q_PNP_BCE 1:B=b2 2:C=GND 3:E=b1
         R2 18k R 1=o 2=b2
         R3 10k R 1=OUT 2=M
         R4 10k R 1=M 2=GND
         R1 3k3 R 1=VIN 2=r
         R7 10k R 1=r 2=P
         D1 2V5 D_Zener 1:K=r 2:A=GND"
    ));
    assert_eq!(told, "Q1 Q2: pnp-darlington + VIN>OUT, op-amp U1, zener diode D1 input divider R3/R4");
}

#[test]
fn a_transistor_pair_with_a_mirror_compares() {
    let told = only(
        "Q1 Q Q_NPN_BCE 1:B=d 2:C=VIN 3:E=OUT
         Q2 Q Q_NPN_BCE 1:B=M 2:C=d 3:E=tail
         Q3 Q Q_NPN_BCE 1:B=P 2:C=m 3:E=tail
         Q4 Q Q_PNP_BCE 1:B=m 2:C=d 3:E=VIN
         Q5 Q Q_PNP_BCE 1:B=m 2:C=m 3:E=VIN
         R5 1k R 1=tail 2=GND
         R3 10k R 1=OUT 2=M
         R4 10k R 1=M 2=GND
         R1 3k3 R 1=OUT 2=P
         D1 2V5 D_Zener 1:K=P 2:A=GND",
    );
    assert_eq!(told, "Q1: npn-follower + VIN>OUT, transistor pair Q2 Q3, zener diode D1 output divider R3/R4");
}

#[test]
fn a_single_transistor_compares_base_with_emitter() {
    let told = only(
        "Q1 Q Q_NPN_BCE 1:B=d 2:C=VIN 3:E=OUT
         Q2 Q Q_NPN_BCE 1:B=M 2:C=d 3:E=z
         R5 2k2 R 1=VIN 2=d
         R3 10k R 1=OUT 2=M
         R4 10k R 1=M 2=GND
         R1 3k3 R 1=OUT 2=z
         D1 5V6 D_Zener 1:K=z 2:A=GND",
    );
    assert_eq!(told, "Q1: npn-follower + VIN>OUT, single transistor Q2, zener diode D1 output divider R3/R4");
    let told = only(
        "Q1 Q Q_NPN_BCE 1:B=d 2:C=VIN 3:E=OUT
         Q2 Q Q_NPN_BCE 1:B=M 2:C=d 3:E=GND
         R5 2k2 R 1=VIN 2=d
         D1 5V6 D_Zener 1:K=OUT 2:A=M
         R4 10k R 1=M 2=GND",
    );
    assert_eq!(told, "Q1: npn-follower + VIN>OUT, single transistor Q2, zener diode D1 output");
}

#[test]
fn a_programmable_shunt_is_amplifier_and_reference_of_a_follower() {
    let (design, told) = built(
        "Q1 Q Q_NPN_BCE 1:B=k 2:C=VIN 3:E=OUT
         R5 1k R 1=VIN 2=k
         U2 TL431 TL431 1:K=k 2:A=GND 3:REF=M | adjustable shunt voltage reference
         R3 10k R 1=OUT 2=M
         R4 10k R 1=M 2=GND",
    );
    assert_eq!(told, ["Q1: npn-follower + VIN>OUT, programmable shunt U2, shunt reference U2 input divider R3/R4"]);
    assert!(design.not_judged.is_empty(), "{:?}", design.not_judged);
}

#[test]
fn negative_regulators_mirror_the_positive_ones() {
    let ends = "J1 in Conn 1:A=-15V 2:B=GND\nC2 10u C 1=-12V 2=GND\n";
    let told = only(&format!(
        "{ends}Q1 Q Q_PNP_BCE 1:B=b 2:C=-15V 3:E=-12V
         R1 390 R 1=-15V 2=b
         D1 12V D_Zener 1:K=GND 2:A=b"
    ));
    assert_eq!(told, "Q1: pnp-follower - -15V>-12V, none, zener diode D1 input");
    let told = only(&format!(
        "{ends}U1 OPA OPAMP 1:OUT:output=o 2:V-:power_in=-15V 3:+:input=GND 4:-:input=M 5:V+:power_in=VIN
         Q1 Q Q_PNP_BCE 1:B=o 2:C=-15V 3:E=-12V
         R1 10k R 1=-12V 2=M
         R2 10k R 1=ref 2=M
         R3 1k R 1=VIN 2=ref
         D1 5V6 D_Zener 1:K=ref 2:A=GND"
    ));
    assert_eq!(told, "Q1: pnp-follower - -15V>-12V, op-amp U1, zener diode D1 other VIN divider R1/");
}

#[test]
fn a_transistor_beside_a_packaged_regulator_takes_over_its_current() {
    let (design, told) = built(
        "U1 L7805 L7805 1:IN:power_in=i 2:GND:power_in=GND 3:OUT:power_out=OUT | 5V positive voltage regulator
         Q1 Q Q_PNP_BCE 1:B=i 2:C=OUT 3:E=VIN
         R1 3R3 R 1=VIN 2=i",
    );
    assert_eq!(told.len(), 1, "{told:?}");
    assert!(told[0].starts_with("Q1: "), "{told:?}");
    assert_eq!(design.regulators.len(), 1);
    let built = design.regulators[0].built_up.as_ref().unwrap();
    assert!(built.outboard && built.reference.kind == ReferenceKind::Packaged);
    assert!(!design.regulators[0].is_built_up());
}

#[test]
fn the_cut_out_ends_at_supplies_and_tells_what_each_part_does() {
    let (design, _) = built(&format!(
        "{OP_AMP}Q1 Q Q_NPN_BCE 1:B=b 2:C=VIN 3:E=OUT
         R2 47 R 1=o 2=b
         C3 1n C 1=o 2=M
         R3 10k R 1=OUT 2=M
         R4 10k R 1=M 2=GND
         R1 3k3 R 1=VIN 2=P
         D1 2V5 D_Zener 1:K=P 2:A=GND
         R9 1k R 1=OUT 2=GND"
    ));
    let built = design.regulators[0].built_up.as_ref().unwrap();
    let told: Vec<String> = built
        .cut_out
        .iter()
        .map(|(id, duty)| format!("{} {}", design.circuit.device(*id).reference, duty.name()))
        .collect();
    assert_eq!(
        told,
        [
            "Q1 pass",
            "U1 amplifier",
            "D1 reference",
            "R1 reference feed",
            "R3 divider",
            "R4 divider",
            "R2 network",
            "C3 network",
        ]
    );
    let mut cut: Vec<&str> = built.boundary.iter().map(|id| design.circuit.net(*id).name.as_str()).collect();
    cut.sort_unstable();
    assert_eq!(cut, ["GND", "OUT", "VIN"]);
}

#[test]
fn transistors_in_parallel_are_one_regulator() {
    let told = only(
        "Q1 Q Q_NPN_BCE 1:B=b 2:C=VIN 3:E=e1
         Q2 Q Q_NPN_BCE 1:B=b 2:C=VIN 3:E=e2
         R7 0R1 R 1=e1 2=OUT
         R8 0R1 R 1=e2 2=OUT
         R1 390 R 1=VIN 2=b
         D1 5V6 D_Zener 1:K=b 2:A=GND",
    );
    assert_eq!(told, "Q1 Q2: npn-follower + VIN>OUT, none, zener diode D1 input");
}

#[test]
fn switches_protections_and_latches_are_no_regulators() {
    // A load switch with its driver; a protection against a reversed supply with a zener at the gate.
    let switch = "Q1 Q Q_PMOS_GDS 1:G=g 2:D=OUT 3:S=VIN\nR1 100k R 1=VIN 2=g\n";
    none(&format!("{switch}Q2 Q Q_NPN_BCE 1:B=b 2:C=g 3:E=GND\nR2 10k R 1=EN 2=b\nR3 10k R 1=b 2=GND"));
    none("Q1 Q Q_PMOS_GDS 1:G=g 2:D=VIN 3:S=OUT\nR1 100k R 1=g 2=GND\nD1 12V D_Zener 1:K=OUT 2:A=g");
    // One that holds itself on from its own output, and one that two transistors in a row switch.
    none(&format!("{switch}Q2 Q Q_NPN_BCE 1:B=b 2:C=g 3:E=GND\nR2 10k R 1=OUT 2=b\nR3 10k R 1=b 2=GND"));
    none(&format!(
        "{switch}Q2 Q Q_NPN_BCE 1:B=b 2:C=g 3:E=GND\nR4 10k R 1=VIN 2=b
         Q3 Q Q_NPN_BCE 1:B=b3 2:C=b 3:E=GND\nR2 10k R 1=OUT 2=b3\nR3 10k R 1=b3 2=GND"
    ));
    // A comparator that switches the output off.
    none(&format!(
        "{switch}U1 LM393 Comp 1:OUT:output=g 2:V-:power_in=GND 3:+:input=P 4:-:input=M 5:V+:power_in=VIN | comparator
         R3 10k R 1=OUT 2=P\nR4 10k R 1=P 2=GND\nD1 2V5 D_Zener 1:K=M 2:A=GND\nR5 1k R 1=VIN 2=M"
    ));
}

#[test]
fn level_shifters_drivers_and_bridges_are_no_regulators() {
    none("Q1 BSS138 Q_NMOS_GSD 1:G=+3V3 2:S=SDA 3:D=SDA5\nR1 10k R 1=+3V3 2=SDA\nR2 10k R 1=+5V 2=SDA5");
    // A constant current for light-emitting diodes, by a zener diode or by an op-amp.
    none(
        "Q1 Q Q_NPN_BCE 1:B=b 2:C=led 3:E=s\nD1 3V3 D_Zener 1:K=b 2:A=GND\nR1 1k R 1=VIN 2=b
          R2 10 R 1=s 2=GND\nD2 red LED 1:K=led 2:A=VIN",
    );
    none(&format!(
        "{OP_AMP}Q1 Q Q_NMOS_GDS 1:G=o 2:D=OUT 3:S=M\nR2 0R1 R 1=M 2=GND\nC7 10n C 1=M 2=GND
          D1 2V5 D_Zener 1:K=P 2:A=GND\nR1 1k R 1=VIN 2=P"
    ));
    none(
        "Q1 Q Q_NPN_BCE 1:B=b 2:C=relay 3:E=GND\nK1 relay Relay 1:A1=VIN 2:A2=relay
          D1 1N4148 D 1:K=VIN 2:A=relay\nR1 1k R 1=io 2=b",
    );
    // A half bridge, and a charger's pass transistor, each driven by an integrated part.
    none(
        "Q1 Q Q_NMOS_GDS 1:G=h 2:D=VIN 3:S=OUT\nQ2 Q Q_NMOS_GDS 1:G=l 2:D=OUT 3:S=GND
          U3 DRV DRV 1:HO:output=h 2:LO:output=l 3:VCC:power_in=VIN 4:COM:power_in=GND",
    );
    none(
        "Q1 Q Q_PMOS_GDS 1:G=g 2:D=OUT 3:S=VIN\nR1 100k R 1=VIN 2=g
          U3 CHG CHG 1:DRV:output=g 2:BAT:input=OUT 3:VCC:power_in=VIN 4:VSS:power_in=GND",
    );
    // A limit of the current alone.
    none(
        "Q1 Q Q_NPN_BCE 1:B=b 2:C=VIN 3:E=s\nR3 1 R 1=s 2=OUT\nQ2 Q Q_NPN_BCE 1:B=s 2:C=b 3:E=OUT\nR1 1k R 1=VIN 2=b",
    );
}
