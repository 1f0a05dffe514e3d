//! What every built-in file must hold, and published values.

use super::super::*;
use super::told;

fn family(name: &str) -> &'static Family {
    Knowledge::shared().family(name).unwrap_or_else(|| panic!("no family {name}"))
}

fn close(one: f64, other: f64) -> bool {
    (one - other).abs() <= 1e-9 * one.abs().max(other.abs())
}

#[test]
fn every_built_in_file_loads_without_a_problem() {
    let (knowledge, problems) = Knowledge::load(&[]);
    assert_eq!(problems.iter().map(told).collect::<Vec<_>>(), Vec::<String>::new());
    assert!(knowledge.families.len() >= 150);
    assert!(knowledge.technologies.len() == 6 && knowledge.supplies.len() >= 25);
    assert!(knowledge.devices.len() >= 100);
    assert_eq!(knowledge.families.len(), Knowledge::built_in().families.len());
}

#[test]
fn every_file_names_its_sources_and_every_figure_one_of_them() {
    let knowledge = Knowledge::shared();
    for family in &knowledge.families {
        assert!(!family.sources.is_empty(), "{}", family.file);
        let titles: Vec<&str> = family.sources.iter().map(|source| source.title.as_str()).collect();
        for (key, figure) in &family.figures {
            assert!(titles.contains(&figure.source.as_str()), "{} {key}", family.file);
            let read = family.sources.iter().any(|source| source.read && source.title == figure.source);
            assert!(figure.recalled || read, "{} {key} is no recalled figure but was not read", family.file);
        }
    }
    for technology in &knowledge.technologies {
        assert!(!technology.sources.is_empty() && !technology.figures.is_empty(), "{}", technology.file);
    }
    assert!(knowledge.supplies.iter().all(|supply| !supply.sources.is_empty()));
}

#[test]
fn an_order_of_pins_names_where_it_was_read_or_is_recalled_and_its_tab_is_one_of_its_leads() {
    for family in &Knowledge::shared().families {
        for (name, package) in family.packages.iter().filter(|(_, package)| !package.pins.is_empty()) {
            let from = &package.pins_from;
            let read = family.sources.iter().any(|source| source.read && source.title == from.source);
            let told = from.recalled || read || from.source.starts_with("KiCad symbol library");
            assert!(told, "{} {name}: {:?}", family.file, package.pins_from);
            assert!(package.pins.values().all(|roles| !roles.is_empty()), "{} {name}", family.file);
            let Some(tab) = package.pins.get("tab") else { continue };
            let leads = package.pins.iter().filter(|(number, _)| *number != "tab");
            assert!(leads.map(|(_, roles)| roles).any(|roles| roles == tab), "{} {name}", family.file);
        }
    }
    // TO-92 and SOT-23 of one part differ, as do positive and negative parts in TO-220.
    let order = |name: &str, package: &str| -> Vec<RoleName> {
        family(name).packages[package]
            .pins
            .iter()
            .filter(|(number, _)| *number != "tab")
            .map(|(_, roles)| roles[0])
            .collect()
    };
    assert_eq!(order("MCP1700", "TO-92"), [RoleName::Ground, RoleName::Input, RoleName::Output]);
    assert_eq!(order("MCP1700", "SOT-23"), [RoleName::Ground, RoleName::Output, RoleName::Input]);
    assert_eq!(order("78xx / L78xx", "TO-220"), [RoleName::Input, RoleName::Ground, RoleName::Output]);
    assert_eq!(order("79xx / L79xx", "TO-220"), [RoleName::Ground, RoleName::Input, RoleName::Output]);
}

#[test]
fn figures_are_in_order_and_of_a_size_that_exists() {
    for family in &Knowledge::shared().families {
        for (key, dimension, _) in Family::FIGURES {
            let Some(figure) = family.figure(key) else { continue };
            let range = figure.value;
            assert!(range.low() <= range.nominal() && range.nominal() <= range.high(), "{} {key}", family.file);
            assert!(range.high().is_finite() && range.low() >= 0.0, "{} {key}", family.file);
            let most = match *dimension {
                dimension if dimension == crate::quantity::Dimension::VOLTAGE => 80.0,
                dimension if dimension == crate::quantity::Dimension::CURRENT => 10.0,
                dimension if dimension == crate::quantity::Dimension::CAPACITANCE => 0.01,
                dimension if dimension == crate::quantity::Dimension::ONE => 0.2,
                _ => 1000.0,
            };
            assert!(range.high() <= most, "{} {key} is {range:?}", family.file);
        }
        for point in family.dropout.iter().flat_map(|dropout| &dropout.points) {
            let DropoutPoint { typical, maximum, load, .. } = point.value;
            assert!((0.0..=10.0).contains(&load) && (0.0..=3.5).contains(&typical), "{}", family.file);
            assert!(maximum.is_none_or(|maximum| maximum >= typical), "{}", family.file);
        }
    }
}

#[test]
fn a_series_regulator_has_a_rating_and_says_what_it_asks_of_its_output_capacitor() {
    let silent: Vec<&str> = Knowledge::shared()
        .families
        .iter()
        .filter(|family| family.kind == FamilyKind::Series)
        .filter(|family| family.figure("rated_current").is_none() || family.output_capacitor.is_none())
        .map(|family| family.file.as_str())
        .collect();
    assert_eq!(silent, Vec::<&str>::new());
}

#[test]
fn an_adjustable_family_tells_its_reference() {
    let silent: Vec<&str> = Knowledge::shared()
        .families
        .iter()
        .filter(|family| matches!(family.adjust, Some(AdjustSide::Output)))
        .filter(|family| family.figure("reference").or(family.figure("reference_initial")).is_none())
        .map(|family| family.file.as_str())
        .collect();
    assert_eq!(silent, Vec::<&str>::new());
}

#[test]
fn dropout_is_interpolated_between_the_points_and_flat_outside() {
    // TI SNOS412N, 6.5: LM1117 1.10 / 1.20 V at 0.1 A, 1.15 / 1.25 V at 0.5 A, 1.20 / 1.30 V at 0.8 A.
    let part = family("1117 / LM1117");
    let at = |load: f64| part.dropout_at(load, Some(3.3)).unwrap().value;
    assert!(close(at(0.5).typical, 1.15) && close(at(0.5).maximum.unwrap(), 1.25));
    assert!(close(at(0.3).typical, 1.125) && close(at(0.3).maximum.unwrap(), 1.225));
    assert!(close(at(0.0).typical, 1.10) && close(at(0.0).maximum.unwrap(), 1.20));
    assert!(close(at(1.0).typical, 1.20) && at(1.0).beyond && !at(0.8).beyond);
}

#[test]
fn dropout_follows_the_output_voltage_where_the_sheet_does() {
    // Microchip DS22049D: MCP1703 at 0.25 A 0.330 / 0.650 V for 5 V, 0.525 / 0.725 V for 3.3 V, 0.750 / 1.100 V for 2.5 V.
    let part = family("MCP1703");
    let at = |output: Option<f64>| part.dropout_at(0.25, output).unwrap().value;
    assert!(close(at(Some(5.0)).typical, 0.330) && close(at(Some(5.0)).maximum.unwrap(), 0.650));
    assert!(close(at(Some(3.3)).typical, 0.525));
    assert!(close(at(Some(3.0)).typical, 0.625), "between two versions the lower one's, which is the worse");
    assert!(close(at(Some(1.8)).typical, 0.750) && close(at(None).typical, 0.750));
}

#[test]
fn figures_and_minima_follow_the_output_voltage() {
    // ST L7800 Rev 12: input 35 V for 5 to 18 V, 40 V for 20 and 24 V.
    let part = family("78xx / L78xx");
    assert!(close(part.figure_at("input_max", Some(5.0)).unwrap().value.low(), 35.0));
    assert!(close(part.figure_at("input_max", Some(24.0)).unwrap().value.low(), 40.0));
    assert!(close(part.figure("input_max").unwrap().value.low(), 35.0));
    // TI SNVS764O: 1 uF at 5 V and above, 2.2 uF at 3.0 and 3.3 V, 3.3 uF at low outputs.
    let capacitor = family("LP2950-N/LP2951-N").output_capacitor.clone().unwrap();
    assert!(close(capacitor.minimum_at(Some(5.0)).unwrap(), 1e-6));
    assert!(close(capacitor.minimum_at(Some(3.3)).unwrap(), 2.2e-6));
    assert!(close(capacitor.minimum_at(Some(-1.235)).unwrap(), 3.3e-6));
    assert!(close(capacitor.minimum_at(None).unwrap(), 3.3e-6));
}

#[test]
fn recalled_figures_are_told_apart_from_read_ones() {
    // The upper ESR bound of LT3042 was recalled, the minimum read (3042fb p1).
    let capacitor = family("LT3042").output_capacitor.clone().unwrap();
    assert!(capacitor.esr.unwrap().recalled && !capacitor.minimum.unwrap().recalled);
    assert!(capacitor.ceramic_only);
    assert!(family("AP2112").is_recalled() && !family("LP5907").is_recalled());
    assert_eq!(family("AP2112").output_capacitor.as_ref().unwrap().kind, MinimumKind::Recalled);
    assert_eq!(family("LP5907").enable.as_ref().unwrap().open.value, OpenEnable::Off);
}

#[test]
fn one_name_of_several_makers_has_one_family_and_versions() {
    let versions: Vec<&str> = Knowledge::shared()
        .families
        .iter()
        .filter(|family| family.version_of.as_deref() == Some("1117 / AMS1117"))
        .map(|family| family.name.as_str())
        .collect();
    assert_eq!(versions, ["1117 / AMS1117 Ver2.2", "1117 / AMS1117 of WPM"]);
    assert!(Knowledge::shared().group("1117").count() >= 10);
}

#[test]
fn technologies_are_found_by_their_words_and_hold_the_models_constants() {
    let knowledge = Knowledge::shared();
    for (word, name) in [
        ("MLCC", "ceramic-2"),
        ("X7R", "ceramic-2"),
        ("np0", "ceramic-1"),
        ("Elko", "electrolytic"),
        ("aluminium electrolytic", "electrolytic"),
        ("tantal", "tantalum"),
        ("polymer", "polymer"),
        ("MKT", "film"),
    ] {
        assert_eq!(knowledge.technology(word).map(|found| found.name.as_str()), Some(name), "{word}");
    }
    let ceramic = knowledge.technology("ceramic-2").unwrap();
    assert!(close(ceramic.figure("bias_k").unwrap().value.nominal(), 10.0));
    assert!(close(ceramic.row("case_volume", "0805").unwrap().value.nominal(), 3.125));
    // Holy Stone p53: Y5V +22 / -82 %.
    assert!(close(ceramic.row("temperature_change", "y5v").unwrap().value.low(), -0.82));
    // Pressman: ESR times capacitance of ordinary aluminium electrolytics is 65 us.
    let electrolytic = knowledge.technology("electrolytic").unwrap();
    assert!(close(electrolytic.figure("esr_product").unwrap().value.nominal(), 65e-6));
}

#[test]
fn a_usb_bus_is_found_by_net_and_name() {
    let usb = Knowledge::shared().supply("usb bus").unwrap();
    assert!(close(usb.voltage.value.low(), 4.4) && close(usb.voltage.value.high(), 5.5));
    assert!(usb.nets.iter().any(|net| net == "VBUS") && !usb.voltage.recalled);
    assert!(Knowledge::shared().supply("lead-acid 12 V").unwrap().voltage.recalled);
}
