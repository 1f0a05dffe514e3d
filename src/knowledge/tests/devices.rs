//! Device files: what is read, what is refused, and where.

use std::fs;

use super::super::devices::device_of;
use super::super::{DeviceFamily, Knowledge, ModelKind, StandsFor};
use super::told;
use crate::source::Source;

const GOOD: &str = r#"device = "QT12"
kind = "npn"
names = ["QT12*"]
IS = { value = "80 / 240 / 720 fA", source = "model" }
BF = "40 / 100 / 250"
VAF = "50 .. 150 V"
TF = "1 ns"

[[sources]]
id = "sheet"
title = "QT12 data sheet"
read = false

[[sources]]
id = "model"
title = "QT12 model"
read = true
"#;

const DIODE: &str = r#"device = "QZ"
kind = "zener"
names = ["QZ*"]
tolerance = "5 %"
RS = [["5.1 V", "20 / 40 ohm"], ["any", "10 ohm"]]
IBV = "5 mA"

[[sources]]
id = "sheet"
title = "QZ data sheet"
read = true
"#;

fn read(text: &str) -> Result<DeviceFamily, String> {
    let source = Source::new("qt12.toml", text);
    device_of(&source, "devices/qt12.toml")
        .map_err(|problems| problems.iter().map(told).collect::<Vec<_>>().join("\n"))
}

/// What is said of a file with one text changed.
fn changed(text: &str, from: &str, to: &str) -> String {
    assert!(text.contains(from), "{from}");
    read(&text.replacen(from, to, 1)).err().unwrap_or_else(|| "nothing".to_owned())
}

#[test]
fn a_device_is_read_with_its_ranges_and_sources() {
    let device = read(GOOD).unwrap();
    assert_eq!((device.name.as_str(), device.kind, device.stands_for), ("QT12", ModelKind::Npn, None));
    let model = device.model(None);
    let gain = model.get("BF").unwrap();
    assert_eq!((gain.low(), gain.nominal(), gain.high()), (40.0, 100.0, 250.0));
    assert!((model.get("IS").unwrap().nominal() - 240e-15).abs() < 1e-24);
    assert!((model.get("VAF").unwrap().nominal() - 100.0).abs() < 1e-9);
    assert_eq!(model.to_string(), "npn BF=4e1..2.5e2 IS=8e-14..7.2e-13 TF=1e-9 VAF=5e1..1.5e2");
    // A figure with a source of its own that was read is no recalled one, whatever the first source is.
    assert!(!device.parameters["IS"].recalled && device.parameters["BF"].recalled && device.is_recalled());
    assert_eq!(device.parameters["IS"].source, "QT12 model");
}

#[test]
fn what_depends_on_the_voltage_is_taken_at_it() {
    let diode = read(DIODE).unwrap();
    let ohms = |volts: Option<f64>| diode.model(volts).get("RS").unwrap();
    assert!((ohms(Some(5.1)).high() - 40.0).abs() < 1e-9 && (ohms(Some(5.6)).high() - 10.0).abs() < 1e-9);
    assert!((ohms(None).low() - 10.0).abs() < 1e-9 && (ohms(None).high() - 40.0).abs() < 1e-9);
    let volts = diode.model(Some(12.0)).get("BV").unwrap();
    assert!((volts.low() - 11.4).abs() < 1e-9 && (volts.nominal() - 12.0).abs() < 1e-9);
    assert!(diode.model(None).get("BV").is_none());
}

#[test]
fn a_parameter_that_the_kind_lacks_names_the_nearest() {
    insta::assert_snapshot!(changed(GOOD, "BF =", "BFF ="), @r#"qt12.toml:5:1 unknown key `BFF` (not a key here); did you mean `BF`?"#);
    insta::assert_snapshot!(changed(GOOD, "VAF = \"50 .. 150 V\"", "VTO = \"2 V\""), @r#"qt12.toml:6:1 unknown key `VTO` (not a key here); keys here: sources, device, kind, note, stands_for, names, source, recalled, IS, BF, BR, VAF, IKF, ISE, NE, RB, RC, RE, CJE, CJC, TF, TR"#);
    insta::assert_snapshot!(changed(GOOD, "kind = \"npn\"", "kind = \"nnp\""), @r#"qt12.toml:2:8 `nnp` is no kind of device (not a kind of device); did you mean `npn`?"#);
}

#[test]
fn ranges_that_cannot_be_are_told_at_their_place() {
    insta::assert_snapshot!(changed(GOOD, "40 / 100 / 250", "100 / 40 / 250"), @r#"qt12.toml:5:7 the values are not in order: the lowest comes first (not readable as a figure); write a number or a percentage: "2 %""#);
    insta::assert_snapshot!(changed(GOOD, "50 .. 150 V", "50 .. 150 A"), @r#"qt12.toml:6:18 expected a voltage, but `A` is the unit of a current (not readable as a figure); write "1 V", "1 .. 2 V", "typical / maximum V" or three values"#);
    insta::assert_snapshot!(changed(GOOD, "50 .. 150 V", "0 V"), @r#"qt12.toml:6:7 `VAF` cannot be this (not possible); it must be more than zero"#);
    insta::assert_snapshot!(changed(GOOD, "50 .. 150 V", ">= 50 V"), @r#"qt12.toml:6:7 `VAF` has no bound (not finite); write both ends of the range"#);
    insta::assert_snapshot!(changed(DIODE, "5 %", "500 %"), @r#"qt12.toml:4:13 no part has such a tolerance (not from 0 to 100 %); write "5 %""#);
}

#[test]
fn names_and_unknown_parts_are_held_apart() {
    insta::assert_snapshot!(changed(GOOD, "names = [\"QT12*\"]", ""), @r#"qt12.toml:1:1 the device has no name pattern (`names` is missing); add the order codes' common part, or say with `stands_for` for which unknown parts it stands"#);
    insta::assert_snapshot!(changed(GOOD, "kind = \"npn\"", "kind = \"npn\"\nstands_for = \"small\""), @r#"qt12.toml:4:9 what stands for unknown parts has no names (beside `stands_for`); leave one of the two out"#);
    insta::assert_snapshot!(changed(GOOD, "names = [\"QT12*\"]", "stands_for = \"led\""), @r#"qt12.toml:3:14 `led` is no sort of npn (not a sort of npn); one of: small, power, darlington"#);
    insta::assert_snapshot!(changed(GOOD, "QT12*\"]", "QT{V}*\"]"), @r#"qt12.toml:3:13 a device has no voltage code (not in device files); write `*` in its place: the voltage is read from the part's own text"#);
    let standing = read(&GOOD.replacen("names = [\"QT12*\"]", "stands_for = \"small\"", 1)).unwrap();
    assert_eq!(standing.stands_for, Some(StandsFor::Small));
}

#[test]
fn a_second_device_of_a_name_or_for_the_same_parts_is_refused() {
    let folder = tempfile::tempdir().unwrap();
    fs::create_dir(folder.path().join("devices")).unwrap();
    let small = GOOD.replacen("names = [\"QT12*\"]", "stands_for = \"small\"", 1);
    fs::write(folder.path().join("devices/a.toml"), GOOD.replace("QT12", "BD139")).unwrap();
    fs::write(folder.path().join("devices/b.toml"), small).unwrap();
    let (knowledge, problems) = Knowledge::load(&[folder.path().to_owned()]);
    let path = folder.path().display().to_string();
    let problems: Vec<String> = problems.iter().map(|problem| told(problem).replace(&path, "DIR")).collect();
    insta::assert_snapshot!(problems.join("\n"), @r#"
    DIR/devices/a.toml:1:10 two devices are called `BD139` (the second); give it a name of its own; the first is in `devices/bd139.toml`
    DIR/devices/b.toml:3:14 two devices stand for `small` parts of kind `npn` (the second); name the file as the first, `devices/any-npn-small.toml`, to take its place
    "#);
    assert!(knowledge.devices.iter().all(|device| device.name != "QT12"));
}

proptest::proptest! {
    #[test]
    fn no_damage_makes_the_reader_fail(at in 0..GOOD.len(), taken in 0..12_usize, put in "[\\PC\n\"=\\[\\]{}./±µ-]{0,6}") {
        let mut text = GOOD.to_owned();
        text.replace_range(at..(at + taken).min(GOOD.len()), &put);
        let found = device_of(&Source::new("qt12.toml", text), "devices/qt12.toml");
        let inside = |problems: &[crate::source::Problem]| {
            problems.iter().all(|problem| problem.place().is_some_and(|(source, span)| span.end() <= source.text().len()))
        };
        proptest::prop_assert!(found.err().is_none_or(|problems| !problems.is_empty() && inside(&problems)));
    }
}
