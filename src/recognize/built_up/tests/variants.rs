//! Further forms of regulators from single parts, each drawn as textbooks do.

use super::*;

const SENSE: &str = "R3 10k R 1=OUT 2=M\nR4 10k R 1=M 2=GND\n";
const ZENER: &str = "R1 3k3 R 1=VIN 2=P\nD1 2V5 D_Zener 1:K=P 2:A=GND\n";
const PAIR: &str = "Q2 Q Q_NPN_BCE 1:B=P 2:C=d 3:E=tail\nQ3 Q Q_NPN_BCE 1:B=M 2:C=VIN 3:E=tail\n";

#[test]
fn a_pair_drives_a_common_stage_with_a_resistor_or_a_current_source_as_tail() {
    let pass = "Q1 Q Q_PNP_BCE 1:B=d 2:C=OUT 3:E=VIN\nR2 1k R 1=VIN 2=d\n";
    let expected = "Q1: pnp + VIN>OUT, transistor pair Q2 Q3, zener diode D1 input divider R3/R4";
    assert_eq!(only(&format!("{pass}{PAIR}{SENSE}{ZENER}R5 1k R 1=tail 2=GND")), expected);
    let source =
        "Q4 Q Q_NPN_BCE 1:B=s 2:C=tail 3:E=e\nR6 470 R 1=e 2=GND\nR7 10k R 1=VIN 2=s\nD2 red LED 1:K=GND 2:A=s\n";
    assert_eq!(only(&format!("{pass}{PAIR}{SENSE}{ZENER}{source}")), expected);
    let pass = "Q1 Q Q_PMOS_GDS 1:G=d 2:D=OUT 3:S=VIN\nR2 2k2 R 1=VIN 2=d\n";
    let told = only(&format!("{pass}{PAIR}{SENSE}{ZENER}R5 1k R 1=tail 2=GND"));
    assert_eq!(told, "Q1: pmos + VIN>OUT, transistor pair Q2 Q3, zener diode D1 input divider R3/R4");
}

#[test]
fn a_pair_drives_through_a_second_stage() {
    // The pair's PNP driver pulls up the base of a Darlington follower.
    let told = only(&format!(
        "Q1 Q Q_NPN_BCE 1:B=b 2:C=VIN 3:E=OUT
         Q4 Q Q_PNP_BCE 1:B=d 2:C=b 3:E=VIN
         R2 1k R 1=VIN 2=d
         R6 4k7 R 1=b 2=OUT
         R5 1k R 1=tail 2=GND
         {PAIR}{SENSE}{ZENER}"
    ));
    assert_eq!(told, "Q1: npn-follower + VIN>OUT, transistor pair Q2 Q3, zener diode D1 input divider R3/R4");
    // A PNP pair at the input drives an NPN transistor that pulls the pass transistor's base down.
    let told = only(&format!(
        "Q1 Q Q_PNP_BCE 1:B=b 2:C=OUT 3:E=VIN
         Q4 Q Q_NPN_BCE 1:B=d 2:C=b 3:E=GND
         R2 1k R 1=VIN 2=b
         R6 4k7 R 1=d 2=GND
         R5 1k R 1=VIN 2=tail
         Q2 Q Q_PNP_BCE 1:B=M 2:C=d 3:E=tail
         Q3 Q Q_PNP_BCE 1:B=P 2:C=GND 3:E=tail
         {SENSE}{ZENER}"
    ));
    assert_eq!(told, "Q1: pnp + VIN>OUT, transistor pair Q2 Q3, zener diode D1 input divider R3/R4");
}

#[test]
fn a_single_transistor_drives_a_common_stage_from_its_emitter() {
    // The emitter senses the output through a zener diode's string; the base lies on the divided output.
    let told = only(&format!(
        "Q1 Q Q_PNP_BCE 1:B=b 2:C=OUT 3:E=VIN
         Q2 Q Q_NPN_BCE 1:B=P 2:C=b 3:E=M
         R2 1k R 1=VIN 2=b
         {SENSE}{ZENER}"
    ));
    assert_eq!(told, "Q1: pnp + VIN>OUT, single transistor Q2, zener diode D1 input divider R3/R4");
}

#[test]
fn a_pair_in_one_package_whose_pins_are_named_alike_is_told_by_its_layout() {
    let rest =
        format!("Q1 Q Q_PNP_BCE 1:B=d 2:C=OUT 3:E=VIN\nR2 1k R 1=VIN 2=d\nR5 1k R 1=tail 2=GND\n{SENSE}{ZENER}");
    let expected = "Q1: pnp + VIN>OUT, transistor pair Q2, zener diode D1 input divider R3/R4";
    // SOT-363: 1, 2 and 6 are one transistor.
    let told = only(&format!("{rest}Q2 pair Q_NPN_Dual 1:E=tail 2:B=P 3:C=VIN 4:E=tail 5:B=M 6:C=d"));
    assert_eq!(told, expected);
    // A metal can: the first three are one.
    let told = only(&format!("{rest}Q2 pair Q_NPN_Dual 1:C=d 2:B=P 3:E=tail 4:E=tail 5:B=M 6:C=VIN"));
    assert_eq!(told, expected);
    // A layout that is not known tells nothing.
    none(&format!("{rest}Q2 pair Q_NPN_Dual 1:C=d 2:E=tail 3:B=P 4:B=M 5:E=tail 6:C=VIN"));
}

#[test]
fn resistors_that_take_a_part_of_the_reference_are_told() {
    let rest =
        format!("Q1 Q Q_NPN_BCE 1:B=o 2:C=VIN 3:E=OUT\n{SENSE}R1 3k3 R 1=VIN 2=r\nD1 5V1 D_Zener 1:K=r 2:A=GND\n");
    let parts = |lines: &str| {
        let (design, told) = built(&format!("{OP_AMP}{rest}{lines}"));
        assert_eq!(told, ["Q1: npn-follower + VIN>OUT, op-amp U1, zener diode D1 input divider R3/R4"]);
        let reference = design.regulators[0].built_up.as_ref().unwrap().reference.clone();
        let names = |devices: &[DeviceId]| {
            devices.iter().map(|id| design.circuit.device(*id).reference.clone()).collect::<Vec<_>>()
        };
        (reference.whole, reference.divider.map(|divider| (names(&divider.upper), names(&divider.lower))))
    };
    let names = |names: &[&str]| names.iter().map(|name| (*name).to_owned()).collect::<Vec<_>>();
    let divided = parts("R5 10k R 1=r 2=P\nR6 4k7 R 1=P 2=x\nR7 470 R 1=x 2=GND");
    assert_eq!(divided, (false, Some((names(&["R5"]), names(&["R6", "R7"])))));
    assert_eq!(parts("R5 10k R 1=r 2=P"), (true, None));
    // Hysteresis or a bias from the output takes its part in what is compared.
    assert_eq!(parts("R5 10k R 1=r 2=P\nR6 10k R 1=P 2=GND\nR7 1M R 1=OUT 2=P"), (false, None));
}

#[test]
fn followers_pass_a_reference_on_and_dividers_behind_them_count() {
    let buffer = "U2 OPA OPAMP 1:OUT:output=f 2:V-:power_in=GND 3:+:input=q 4:-:input=f 5:V+:power_in=VIN\n";
    let rest = format!("{OP_AMP}{buffer}Q1 Q Q_NPN_BCE 1:B=o 2:C=VIN 3:E=OUT\n{SENSE}R1 3k3 R 1=VIN 2=q\n");
    let reference = |lines: &str| {
        let (design, told) = built(&format!("{rest}{lines}"));
        assert_eq!(told, ["Q1: npn-follower + VIN>OUT, op-amp U1, zener diode D1 input divider R3/R4"]);
        let built = design.regulators[0].built_up.as_ref().unwrap();
        let inside = |name: &str| built.cut_out.iter().any(|(id, _)| design.circuit.device(*id).reference == name);
        assert!(["R5", "U2"].into_iter().all(inside), "{:?}", built.cut_out);
        (built.reference.whole, built.reference.divider.is_some())
    };
    // The load at the follower's output takes nothing of what it gives.
    let held = "D1 2V5 D_Zener 1:K=q 2:A=GND\nR6 1k R 1=f 2=GND\n";
    assert_eq!(reference(&format!("{held}R5 10k R 1=f 2=P")), (true, false));
    assert_eq!(reference(&format!("{held}R5 10k R 1=f 2=P\nR7 10k R 1=P 2=GND")), (false, true));
}

#[test]
fn the_junction_of_a_single_transistor_adds_to_its_reference_or_takes_from_it() {
    let junction = |lines: &str| {
        let (design, told) = built(lines);
        assert_eq!(told.len(), 1, "{told:?}");
        design.regulators[0].built_up.as_ref().unwrap().amplifier.as_ref().unwrap().junction
    };
    let follower = "Q1 Q Q_NPN_BCE 1:B=d 2:C=VIN 3:E=OUT\nR5 2k2 R 1=VIN 2=d\nR1 3k3 R 1=OUT 2=z\nD1 5V6 D_Zener 1:K=z 2:A=GND\n";
    let at_base = junction(&format!("{follower}{SENSE}Q2 Q Q_NPN_BCE 1:B=M 2:C=d 3:E=z"));
    assert_eq!(at_base, Junction::Adds);
    let common = "Q1 Q Q_PNP_BCE 1:B=b 2:C=OUT 3:E=VIN\nR2 1k R 1=VIN 2=b\n";
    assert_eq!(junction(&format!("{common}{SENSE}{ZENER}Q2 Q Q_NPN_BCE 1:B=P 2:C=b 3:E=M")), Junction::Takes);
    let own = "Q2 Q Q_NPN_BCE 1:B=M 2:C=d 3:E=GND\nQ1 Q Q_NPN_BCE 1:B=d 2:C=VIN 3:E=OUT\nR5 2k2 R 1=VIN 2=d\n";
    assert_eq!(junction(&format!("{own}{SENSE}")), Junction::None);
}
