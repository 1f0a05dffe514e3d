//! Device files: every model builds, its figures name their sources, and parts find theirs.

use std::fs;

use railworthy::circuit::{Circuit, Device};
use railworthy::knowledge::{DeviceFamily, DeviceModel, Knowledge, ModelKind, StandsFor};
use railworthy::netlist;
use railworthy::quantity::Range;
use railworthy::recognize::{DeviceMatch, device_match, device_match_as};
use railworthy::solve::from_model;

use crate::program::run;
use crate::project::root;

/// A symbol with its pins as a netlist has them.
fn part(symbol: &str, description: &str, value: &str, footprint: &str) -> Device {
    let names: &[&str] = match symbol {
        name if name.starts_with("Device:Q_N") && name.contains("MOS") => &["G", "D", "S"],
        name if name.starts_with("Device:Q_PMOS") => &["G", "D", "S"],
        name if name.starts_with("Device:Q_") || name.starts_with("Transistor_BJT") => &["B", "C", "E"],
        name if name.starts_with("Transistor_FET") => &["G", "D", "S"],
        name if name.starts_with("Amplifier") => &["~", "-", "+", "V-", "V+"],
        _ => &["K", "A"],
    };
    let (library, name) = symbol.split_once(':').unwrap();
    let pins = names.iter().enumerate().map(|(at, name)| {
        let kind = if *name == "~" { "output" } else { "passive" };
        format!("(pin (num \"{}\") (name \"{name}\") (type \"{kind}\"))", at + 1)
    });
    let nets = names.iter().enumerate().map(|(at, _)| {
        let pin = at + 1;
        format!("(net (code \"{pin}\") (name \"N{pin}\") (node (ref \"X1\") (pin \"{pin}\")))")
    });
    let text = format!(
        "(export (version \"E\") (components (comp (ref \"X1\") (value \"{value}\") (footprint \"{footprint}\") \
         (libsource (lib \"{library}\") (part \"{name}\") (description \"{description}\")))) (libparts (libpart \
         (lib \"{library}\") (part \"{name}\") (description \"{description}\") (pins {}))) (nets {}))",
        pins.collect::<String>(),
        nets.collect::<String>()
    );
    let netlist = netlist::read("part.net", text.as_bytes()).unwrap();
    let circuit = Circuit::build(&netlist).0;
    let id = circuit.devices().next().unwrap();
    circuit.device(id).clone()
}

fn found(device: &Device) -> Option<DeviceMatch<'static>> {
    device_match(Knowledge::shared(), device)
}

fn family(name: &str) -> &'static DeviceFamily {
    Knowledge::shared().devices.iter().find(|family| family.name == name).unwrap_or_else(|| panic!("no {name}"))
}

/// The voltages for which a model is tried: those of its steps, or none.
fn voltages(family: &DeviceFamily) -> Vec<Option<f64>> {
    match family.kind {
        ModelKind::Zener => [2.4, 3.3, 4.7, 5.1, 5.6, 6.8, 12.0, 24.0, 33.0, 75.0].map(Some).to_vec(),
        _ => vec![None],
    }
}

#[test]
fn every_model_builds_at_both_ends_and_the_middle() {
    for family in &Knowledge::shared().devices {
        for volts in voltages(family) {
            let model = family.model(volts);
            for pick in [Range::low, Range::nominal, Range::high] {
                let device = from_model(&model, |_, range| pick(range));
                assert_eq!(device.check(), Ok(()), "{} {volts:?}", family.file);
            }
            for (name, range) in model.parameters() {
                assert!(range.low().is_finite() && range.high().is_finite(), "{} {name}", family.file);
            }
        }
    }
}

#[test]
fn every_model_has_the_figures_that_a_loop_turns_on() {
    for family in &Knowledge::shared().devices {
        let needed: &[&str] = match family.kind {
            ModelKind::Npn | ModelKind::Pnp => &["IS", "BF", "VAF", "IKF", "RB", "RC", "RE", "CJE", "CJC", "TF"],
            ModelKind::Nmos | ModelKind::Pmos => &["VTO", "KP", "LAMBDA", "RD", "RS", "CGS", "CGD", "CDS"],
            ModelKind::Diode => &["IS", "N", "RS", "CJO"],
            ModelKind::Zener | ModelKind::Shunt => &["IS", "N", "RS", "IBV", "NBV"],
            ModelKind::OpAmp => &["A0", "GBW", "SR", "VOS", "TOP", "BOTTOM", "RO"],
        };
        for name in needed {
            assert!(family.parameters.contains_key(name), "{} lacks {name}", family.file);
        }
        assert!(!family.parameters.contains_key("BV"), "{}: its voltage is that of the part", family.file);
        if family.kind == ModelKind::OpAmp {
            let offset = family.parameters["VOS"].value;
            assert!((offset.low() + offset.high()).abs() < 1e-12 && offset.high() > 0.0, "{}", family.file);
        }
        if family.kind == ModelKind::Pmos {
            assert!(family.parameters["VTO"].value.high() < 0.0, "{}: it enhances", family.file);
        }
    }
}

#[test]
fn every_figure_names_a_source_of_its_file_and_is_recalled_unless_it_was_read() {
    let knowledge = Knowledge::shared();
    assert!(knowledge.devices.len() >= 100, "{}", knowledge.devices.len());
    for family in &knowledge.devices {
        for (name, figure) in &family.parameters {
            let source = family.sources.iter().find(|source| source.title == figure.source).unwrap();
            assert_eq!(figure.recalled, !source.read, "{} {name}", family.file);
            assert!(figure.value.low() <= figure.value.nominal() && figure.value.nominal() <= figure.value.high());
        }
        let usual = family.sources[0].title.starts_with("common practice: ");
        assert_eq!(usual, family.stands_for.is_some(), "{}: {}", family.file, family.sources[0].title);
    }
}

#[test]
fn each_kind_has_what_stands_for_its_unknown_parts() {
    for (kind, name) in ModelKind::ALL {
        for of in StandsFor::of(*kind) {
            let standing = |family: &&DeviceFamily| family.kind == *kind && family.stands_for == Some(*of);
            assert_eq!(Knowledge::shared().devices.iter().filter(standing).count(), 1, "{name} {}", of.name());
        }
    }
}

#[test]
fn what_stands_for_unknown_parts_is_as_wide_as_the_known_ones() {
    let holds = |wide: &DeviceModel, name: &str, value: f64| {
        wide.get(name).is_some_and(|range| range.low() <= value && value <= range.high())
    };
    for family in Knowledge::shared().devices.iter().filter(|family| family.stands_for.is_none()) {
        let all = Knowledge::shared().devices.iter();
        let wide: Vec<DeviceModel> = all
            .filter(|one| one.kind == family.kind && one.stands_for.is_some())
            .map(|one| one.model(None))
            .collect();
        for (name, figure) in &family.parameters {
            let nominal = figure.value.nominal();
            assert!(wide.iter().any(|wide| holds(wide, name, nominal)), "{} {name}: {nominal:e}", family.file);
        }
    }
}

#[test]
fn parts_that_people_use_are_found_by_value_symbol_and_number() {
    let npn = ("Device:Q_NPN_BCE", "NPN transistor, base/collector/emitter");
    let pnp = ("Device:Q_PNP_BCE", "PNP transistor, base/collector/emitter");
    let nmos = ("Device:Q_NMOS_GDS", "N-MOSFET transistor, gate/drain/source");
    let pmos = ("Device:Q_PMOS_GDS", "P-MOSFET transistor, gate/drain/source");
    let (diode, zener) = (("Device:D", "Diode"), ("Device:D_Zener", "Zener diode"));
    let op_amp = ("Amplifier_Operational:ANY", "Operational amplifier");
    for ((symbol, about), value, name) in [
        (npn, "BD139", "BD139"),
        (npn, "BD139-16", "BD139-16"),
        (npn, "BC847B", "BC847B"),
        (npn, "BC847BLT1G", "BC847B"),
        (npn, "bc847", "BC847"),
        (npn, "2N3904", "2N3904"),
        (npn, "MMBT3904LT1G", "2N3904"),
        (npn, "onsemi MMBT3904", "2N3904"),
        (npn, "BC337-40", "BC817-40"),
        (npn, "BC817-25", "BC817-25"),
        (npn, "TIP31C", "TIP31"),
        (npn, "TIP122", "TIP122"),
        (npn, "2N3055", "2N3055"),
        (npn, "MJD44H11T4G", "D44H11"),
        (pnp, "BC557B", "BC857B"),
        (pnp, "BCP53-16", "BCP53-16"),
        (pnp, "MJE2955T", "MJ2955"),
        (nmos, "2N7002", "2N7000"),
        (nmos, "AO3400A", "AO3400"),
        (nmos, "IRF540NPBF", "IRF540"),
        (nmos, "IRLZ44N", "IRLZ44"),
        (pmos, "IRF9540N", "IRF9540"),
        (pmos, "AO3401A", "AO3401"),
        (pmos, "BSS84", "BSS84"),
        (diode, "1N4148W", "1N4148"),
        (diode, "1N4007", "1N4007"),
        (diode, "SS14", "1N5819"),
        (diode, "BAT54", "BAT54"),
        (zener, "BZX84C5V6", "BZX84C"),
        (zener, "BZX84-B5V1", "BZX84B"),
        (zener, "1N4733A", "1N4728"),
        (zener, "MMSZ5231B", "1N5221"),
        (op_amp, "LM358", "LM358"),
        (op_amp, "LM324DR", "LM358"),
        (op_amp, "TL072CP", "TL072"),
        (op_amp, "MCP6002-I/SN", "MCP6001"),
        (op_amp, "LMV321", "LMV358"),
        (op_amp, "NE5532", "NE5532"),
    ] {
        let found = found(&part(symbol, about, value, "")).unwrap_or_else(|| panic!("{value} has no model"));
        assert_eq!((found.family, found.assumed), (name, false), "{value}");
        assert_eq!(found.told_by.as_deref(), Some(value));
        assert!(!found.source.is_empty());
    }
    let by_symbol = found(&part("Transistor_BJT:BD140", "1.5 A PNP transistor", "", "")).unwrap();
    assert_eq!(by_symbol.family, "BD140");
    let mut numbered = part(npn.0, npn.1, "driver", "");
    numbered.fields.push(railworthy::netlist::Field { name: "MPN".to_owned(), value: "BD139-10".to_owned() });
    assert_eq!(found(&numbered).unwrap().family, "BD139-10");
}

#[test]
fn a_zener_diode_has_its_voltage_and_the_figures_of_that_voltage() {
    // Nexperia BZX84 and JEDEC 1N4728 series: 5.6 V ± 5 % at 5 mA, 40 ohm or less; 5.1 V at 49 mA.
    let model = |value: &str| found(&part("Device:D_Zener", "Zener diode", value, "")).unwrap().model;
    let small = model("BZX84C5V6");
    let volts = small.get("BV").unwrap();
    assert!((volts.low() - 5.32).abs() < 1e-9 && (volts.high() - 5.88).abs() < 1e-9);
    assert!((small.get("IBV").unwrap().nominal() - 5e-3).abs() < 1e-12);
    let big = model("1N4733A");
    assert!((big.get("BV").unwrap().nominal() - 5.1).abs() < 1e-9);
    assert!((big.get("IBV").unwrap().nominal() - 49e-3).abs() < 1e-12);
    // Without a known number, its voltage within more; without a voltage, none.
    let usual = found(&part("Device:D_Zener", "Zener diode", "12V", "")).unwrap();
    assert!(usual.assumed && (usual.model.get("BV").unwrap().high() - 12.96).abs() < 1e-9);
    assert!(model("zener").get("BV").is_none());
}

#[test]
fn an_unknown_part_gets_what_is_usual_of_its_kind_polarity_and_size() {
    let npn = |value: &str, about: &str, footprint: &str| found(&part("Device:Q_NPN_BCE", about, value, footprint));
    let about = "NPN transistor, base/collector/emitter";
    for (footprint, name) in [
        ("Package_TO_SOT_THT:TO-220-3_Vertical", "any NPN power transistor"),
        ("Package_TO_SOT_THT:TO-126-3_Vertical", "any NPN power transistor"),
        ("Package_TO_SOT_SMD:SOT-223-3_TabPin2", "any NPN power transistor"),
        ("Package_TO_SOT_SMD:TO-252-2", "any NPN power transistor"),
        ("Package_TO_SOT_SMD:SOT-23", "any small NPN transistor"),
        ("Package_TO_SOT_THT:TO-92_Inline", "any small NPN transistor"),
        ("mine:TO-92_CBE", "any small NPN transistor"),
        ("Package_TO_SOT_SMD:SOT-323_SC-70", "any small NPN transistor"),
    ] {
        let found = npn("ZZ1234", about, footprint).unwrap();
        assert_eq!((found.family, found.assumed, found.recalled), (name, true, true), "{footprint}");
        assert_eq!(found.told_by, None);
    }
    let darlington = npn("ZZ1234", "NPN Darlington transistor", "").unwrap();
    assert!(darlington.model.get("BF").unwrap().low() >= 500.0);
    let unknown = npn("ZZ1234", about, "").unwrap().model;
    for size in ["any NPN power transistor", "any small NPN transistor"] {
        for (name, range) in family(size).model(None).parameters() {
            let wide = unknown.get(name).unwrap();
            assert!(wide.low() <= range.low() && range.high() <= wide.high(), "{size} {name}");
        }
    }
    // Halfway on a scale of ratios: between 40 and 200.
    assert!((unknown.get("BF").unwrap().nominal() - 8000.0_f64.sqrt()).abs() < 1e-6);
    let pmos = found(&part("Device:Q_PMOS_GDS", "P-MOSFET transistor", "ZZ", "TO-220-3")).unwrap();
    assert_eq!(pmos.family, "any power P-channel transistor");
    let led = found(&part("Device:LED", "Light emitting diode", "red", "")).unwrap();
    assert_eq!(led.family, "any light-emitting diode");
    let op_amp = found(&part("Amplifier_Operational:ZZ", "Operational amplifier", "ZZ9", "")).unwrap();
    assert_eq!((op_amp.family, op_amp.assumed), ("any operational amplifier", true));
    assert!(found(&part("Device:R", "Resistor", "2N3904", "")).is_none());
}

#[test]
fn a_number_of_the_other_polarity_is_not_taken() {
    let device = part("Device:Q_PNP_BCE", "PNP transistor", "2N3904", "Package_TO_SOT_THT:TO-92_Inline");
    let found = found(&device).unwrap();
    assert_eq!((found.family, found.model.kind()), ("any small PNP transistor", ModelKind::Pnp));
    let as_npn = device_match_as(Knowledge::shared(), &device, ModelKind::Npn).unwrap();
    assert_eq!((as_npn.family, as_npn.model.kind()), ("2N3904", ModelKind::Npn));
    let shunt = device_match_as(Knowledge::shared(), &device, ModelKind::Shunt).unwrap();
    assert!(shunt.assumed && shunt.model.get("BV").is_none());
}

#[test]
fn a_symbol_says_nothing_of_another_part_that_the_value_names() {
    let found = found(&part("Transistor_BJT:BD139", "1.5 A NPN transistor", "2SC9999", "")).unwrap();
    assert!(found.assumed, "{}", found.family);
}

#[test]
fn parts_of_their_own_sort_have_no_usual_model() {
    for (symbol, about, value) in [
        ("Device:Q_NPN_BCE", "NPN transistor", "DTC143E"),
        ("Device:Q_NMOS_GDS", "N-channel depletion mode MOSFET", "ZZ129"),
        ("Device:D_Zener", "Transient suppressor", "SMAJ5.0A"),
    ] {
        assert!(found(&part(symbol, about, value, "")).is_none(), "{value}");
    }
}

#[test]
fn each_pattern_finds_its_own_family() {
    for family in &Knowledge::shared().devices {
        let (symbol, about) = match family.kind {
            ModelKind::Npn => ("Device:Q_NPN_BCE", "NPN transistor"),
            ModelKind::Pnp => ("Device:Q_PNP_BCE", "PNP transistor"),
            ModelKind::Nmos => ("Device:Q_NMOS_GDS", "N-MOSFET transistor"),
            ModelKind::Pmos => ("Device:Q_PMOS_GDS", "P-MOSFET transistor"),
            ModelKind::OpAmp => ("Amplifier_Operational:ANY", "Operational amplifier"),
            ModelKind::Diode => ("Device:D", "Diode"),
            ModelKind::Zener => ("Device:D_Zener", "Zener diode"),
            ModelKind::Shunt => ("Device:D", "Diode"),
        };
        for pattern in &family.names {
            let name = pattern.replace('?', "3").replace('*', "");
            let device = part(symbol, about, &name, "");
            let found = device_match_as(Knowledge::shared(), &device, family.kind).unwrap();
            assert_eq!(found.family, family.name, "{name}");
        }
    }
}

#[test]
fn a_file_of_the_user_takes_the_place_of_a_built_in_one_or_adds_a_part() {
    let folder = tempfile::tempdir().unwrap();
    fs::create_dir(folder.path().join("devices")).unwrap();
    let source = "[[sources]]\nid = \"sheet\"\ntitle = \"house sheet\"\nread = true\n";
    let own = |name: &str, gain: &str| {
        format!("device = \"{name}\"\nkind = \"npn\"\nnames = [\"{name}*\"]\nBF = \"{gain}\"\n\n{source}")
    };
    fs::write(folder.path().join("devices/bd139.toml"), own("BD139", "90 / 100 / 110")).unwrap();
    fs::write(folder.path().join("devices/house.toml"), own("QZ77", "50")).unwrap();
    // The name is that of a built-in file's pattern too: the user's own is meant.
    let rival = own("house TIP31", "60").replace("house TIP31*", "TIP31*");
    fs::write(folder.path().join("devices/zz.toml"), rival).unwrap();
    let (knowledge, problems) = Knowledge::load(&[folder.path().to_owned()]);
    assert!(problems.iter().all(|problem| problem.message().contains("takes the place of")), "{problems:?}");
    for (value, name, gain) in [("BD139", "BD139", 100.0), ("QZ77", "QZ77", 50.0), ("TIP31C", "house TIP31", 60.0)] {
        let device = part("Device:Q_NPN_BCE", "NPN transistor", value, "");
        let found = device_match(&knowledge, &device).unwrap();
        assert_eq!((found.family, found.recalled, found.source.as_str()), (name, false, "house sheet"));
        assert!((found.model.get("BF").unwrap().nominal() - gain).abs() < 1e-9);
    }
    let list = run(root(), &["catalog", "devices", "--rules", &folder.path().display().to_string()]);
    assert!(list.out.contains("QZ77"), "{}", list.out);
}

#[test]
fn vetting_tells_what_is_wrong_in_a_device_file() {
    let folder = tempfile::tempdir().unwrap();
    let text = "device = \"QZ77\"\nkind = \"npn\"\nnames = [\"QZ77*\"]\nBFF = \"50\"\n";
    fs::write(folder.path().join("house.toml"), text).unwrap();
    let vetted = run(root(), &["vet", &folder.path().display().to_string()]);
    assert_eq!(vetted.status, Some(2), "{}", vetted.out);
    assert!(vetted.out.contains("unknown key `BFF`") && vetted.out.contains("did you mean `BF`?"), "{}", vetted.out);
}

#[test]
fn the_catalog_shows_a_device_with_its_figures_and_sources() {
    let shown = run(root(), &["catalog", "devices", "BD139"]);
    assert_eq!(shown.status, Some(0), "{}", shown.err);
    assert!(shown.out.contains("40 / 100 / 250") && shown.out.contains("SPICE model of the BD139"), "{}", shown.out);
    let list = run(root(), &["catalog", "devices"]).out;
    assert!(list.contains("any operational amplifier") && list.contains("LM358"), "{list}");
}
