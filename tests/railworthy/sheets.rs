//! Findings of a board whose schematic sheets lie beside its netlist.

use std::collections::BTreeMap;
use std::fmt::Write;
use std::fs;
use std::path::Path;

use railworthy::netlist::{self, Component};
use serde_json::Value;

use crate::program::{examples, run};

/// How a sheet is laid out.
#[derive(Clone, Copy, PartialEq)]
enum Layout {
    Lists,
    Lines,
}

/// A symbol as the schematic editor writes it; `reference` is what stands on the sheet.
fn symbol(component: &Component, reference: &str, layout: Layout) -> String {
    let (library, part, value, id) = (&component.library, &component.part, &component.value, &component.ids[0]);
    match layout {
        Layout::Lists => format!(
            "\t(symbol\n\t\t(lib_id \"{library}:{part}\")\n\t\t(at 101.6 88.9 0)\n\t\t(unit 1)\n\t\t(exclude_from_sim no)\n\
             \t\t(in_bom yes)\n\t\t(on_board yes)\n\t\t(dnp no)\n\t\t(uuid \"{id}\")\n\t\t(property \"Reference\" \
             \"{reference}\"\n\t\t\t(at 104.14 85.09 0)\n\t\t\t(effects\n\t\t\t\t(font\n\t\t\t\t\t(size 1.27 1.27)\n\
             \t\t\t\t)\n\t\t\t)\n\t\t)\n\t\t(property \"Value\" \"{value}\"\n\t\t\t(at 104.14 87.63 0)\n\t\t)\n\t)\n"
        ),
        Layout::Lines => format!(
            "$Comp\nL {library}:{part} {reference}\nU 1 1 {id}\nP 4000 3500\nF 0 \"{reference}\" H 4100 3350 50  0000 C \
             CNN\nF 1 \"{value}\" H 4100 3450 50  0000 C CNN\n\t1    4000 3500\n\t1    0    0    -1  \n$EndComp\n"
        ),
    }
}

/// Writes the sheets that a netlist names into a folder, each symbol under the reference that it is given there.
fn draw(netlist: &str, folder: &Path, layout: Layout, reference: impl Fn(&str) -> Option<String>) {
    let netlist = netlist::read("gauge.net", netlist.as_bytes()).unwrap();
    let mut sheets: BTreeMap<&str, String> = BTreeMap::new();
    for component in &netlist.components {
        let sheet = sheets.entry(&component.sheet_file).or_default();
        if let Some(reference) = reference(&component.reference) {
            let _ = write!(sheet, "{}", symbol(component, &reference, layout));
        }
    }
    assert_eq!(sheets.len(), 3);
    for (name, symbols) in sheets {
        let text = match layout {
            Layout::Lists => format!(
                "(kicad_sch\n\t(version 20231120)\n\t(generator \"eeschema\")\n\t(paper \"A4\")\n{symbols}\t(sheet_instances\n\
                 \t\t(path \"/\"\n\t\t\t(page \"1\")\n\t\t)\n\t)\n)\n"
            ),
            Layout::Lines => {
                format!("EESchema Schematic File Version 4\nEELAYER 30 0\nEELAYER END\n{symbols}$EndSCHEMATC\n")
            }
        };
        fs::write(folder.join(name), text).unwrap();
    }
}

fn as_drawn(reference: &str) -> Option<String> {
    Some(reference.to_owned())
}

/// The demo board in a folder of its own, with its board file; without its sheets.
fn board(folder: &Path) -> String {
    let text = fs::read_to_string(examples().join("gauge-draft.net")).unwrap();
    fs::write(folder.join("gauge.net"), &text).unwrap();
    let declared = examples().join("gauge-draft.railworthy.toml");
    fs::copy(declared, folder.join("gauge.railworthy.toml")).unwrap();
    text
}

/// The demo board beside its sheets, as `gauge.net`.
pub(crate) fn drawn_board(folder: &Path) {
    draw(&board(folder), folder, Layout::Lists, as_drawn);
}

fn result(folder: &Path, netlist: &str) -> Value {
    let run = run(folder, &["check", netlist, "--format", "json"]);
    assert_eq!(run.status, Some(1), "{}{}", run.out, run.err);
    serde_json::from_str(&run.out).unwrap()
}

/// The findings of a result: subject, and the schematic's file with the text at the place that is named.
fn schematics(folder: &Path, result: &Value) -> Vec<(String, Option<(String, String)>)> {
    let findings = result["boards"][0]["findings"].as_array().unwrap();
    assert!(findings.len() >= 5);
    let of = |finding: &Value| {
        let place = finding["schematic"].as_object()?;
        let file = place["file"].as_str().unwrap().to_owned();
        let text = fs::read_to_string(folder.join(&file)).unwrap();
        let (line, column) = (place["line"].as_u64().unwrap() as usize, place["column"].as_u64().unwrap() as usize);
        let (offset, length) =
            (place["offset"].as_u64().unwrap() as usize, place["length"].as_u64().unwrap() as usize);
        let at = text[offset..offset + length].to_owned();
        let in_line: String = text.lines().nth(line - 1).unwrap().chars().skip(column - 1).collect();
        assert!(in_line.starts_with(&at), "{in_line}");
        Some((file, at))
    };
    findings.iter().map(|finding| (finding["subject"].as_str().unwrap().to_owned(), of(finding))).collect()
}

/// What the text report tells of one check's finding.
fn told(folder: &Path, check: &str) -> String {
    let text = run(folder, &["check", "gauge.net"]).out;
    let found: Vec<&str> = text.split("\n\n").filter(|part| part.contains(&format!("│ {check} ·"))).collect();
    assert_eq!(found.len(), 1, "{text}");
    found[0].to_owned()
}

/// A result without its places in schematics.
fn without_schematics(mut result: Value) -> Value {
    for finding in result["boards"][0]["findings"].as_array_mut().unwrap() {
        finding["schematic"] = Value::Null;
    }
    result
}

#[test]
fn findings_point_into_the_sheets_and_are_the_same_as_without_them() {
    let (bare, drawn) = (tempfile::tempdir().unwrap(), tempfile::tempdir().unwrap());
    board(bare.path());
    let netlist = board(drawn.path());
    draw(&netlist, drawn.path(), Layout::Lists, as_drawn);
    let (without, with) = (result(bare.path(), "gauge.net"), result(drawn.path(), "gauge.net"));
    assert!(schematics(bare.path(), &without).iter().all(|(_, place)| place.is_none()));
    let places = schematics(drawn.path(), &with);
    let files: Vec<&str> = places.iter().filter_map(|(_, place)| Some(place.as_ref()?.0.as_str())).collect();
    assert!(files.contains(&"power.kicad_sch") && files.contains(&"logic.kicad_sch"), "{files:?}");
    for (subject, place) in &places {
        // Every finding of this board is about a part.
        assert_eq!(place.as_ref().unwrap().1, format!("\"{subject}\""));
    }
    assert_eq!(without_schematics(with), without);
}

#[test]
fn the_text_report_shows_the_lines_of_the_sheets() {
    let folder = tempfile::tempdir().unwrap();
    let netlist = board(folder.path());
    draw(&netlist, folder.path(), Layout::Lists, as_drawn);
    insta::assert_snapshot!(told(folder.path(), "enable-level"));
}

#[test]
fn a_part_is_found_by_its_id_whatever_it_is_called_on_the_sheet() {
    let own = regex::Regex::new(r#"\(property \(name "Sheetfile"\) \(value "[^"]*"\)\)"#).unwrap();
    for layout in [Layout::Lists, Layout::Lines] {
        let folder = tempfile::tempdir().unwrap();
        let mut netlist = board(folder.path());
        if layout == Layout::Lines {
            // An export of that time names the files with the sheets alone.
            netlist = own.replace_all(&netlist, "").replace(".kicad_sch", ".sch");
            fs::write(folder.path().join("gauge.net"), &netlist).unwrap();
        }
        draw(&netlist, folder.path(), layout, |reference| Some(format!("{reference}99")));
        for (subject, place) in schematics(folder.path(), &result(folder.path(), "gauge.net")) {
            assert_eq!(place.unwrap().1, format!("\"{subject}99\""));
        }
    }
}

#[test]
fn a_sheet_that_is_missing_or_damaged_leaves_the_findings_in_the_netlist() {
    let folder = tempfile::tempdir().unwrap();
    let netlist = board(folder.path());
    draw(&netlist, folder.path(), Layout::Lists, as_drawn);
    fs::remove_file(folder.path().join("logic.kicad_sch")).unwrap();
    fs::write(folder.path().join("power.kicad_sch"), "(kicad_sch (symbol (uuid \"\u{1b}[2J").unwrap();
    let found = run(folder.path(), &["check", "gauge.net"]);
    assert_eq!((found.status, found.err.as_str()), (Some(1), ""));
    assert!(found.out.contains("╭─[gauge.net:") && !found.out.contains("[power.kicad_sch"), "{}", found.out);
    let places = schematics(folder.path(), &result(folder.path(), "gauge.net"));
    assert!(places.iter().flat_map(|(_, place)| place).all(|(file, _)| file == "sensor.kicad_sch"), "{places:?}");
}

#[test]
fn standard_input_has_nothing_beside_it() {
    let folder = tempfile::tempdir().unwrap();
    let netlist = board(folder.path());
    draw(&netlist, folder.path(), Layout::Lists, as_drawn);
    let found = crate::program::run_with(folder.path(), &["check", "-", "--format", "json"], netlist.as_bytes());
    let result: Value = serde_json::from_str(&found.out).unwrap();
    assert!(schematics(folder.path(), &result).iter().all(|(_, place)| place.is_none()));
}

/// What is found of the export, with its level.
fn stale(result: &Value) -> Vec<(&str, &str)> {
    let findings = result["boards"][0]["findings"].as_array().unwrap().iter();
    let text = |finding: &'_ Value, key: &str| finding[key].as_str().unwrap().to_owned();
    let stale = findings.filter(|finding| text(finding, "check") == "stale-export");
    stale.map(|finding| (finding["level"].as_str().unwrap(), finding["message"].as_str().unwrap())).collect()
}

#[test]
fn a_part_that_is_no_longer_drawn_shows_that_the_export_is_old() {
    let folder = tempfile::tempdir().unwrap();
    let netlist = board(folder.path());
    let gone = |names: &'static [&str]| {
        draw(&netlist, folder.path(), Layout::Lists, |reference| {
            (!names.contains(&reference)).then(|| reference.to_owned())
        });
        result(folder.path(), "gauge.net")
    };
    let whole = gone(&[]);
    assert_eq!(stale(&whole), []);
    let one = gone(&["U3"]);
    let message = "the netlist is older than its schematic: U3 is no longer drawn";
    assert_eq!(stale(&one), [("warning", message)]);
    let message = "the netlist is older than its schematic: C10, C11, U3 and 1 more are no longer drawn";
    assert_eq!(stale(&gone(&["C10", "C11", "U3", "U4"])), [("warning", message)]);
    assert_eq!(whole["boards"][0]["counts"]["review"], 0);
    assert_eq!(one["boards"][0]["counts"]["review"], 1);
    assert_eq!(whole["boards"][0]["counts"]["fails"], one["boards"][0]["counts"]["fails"]);
    gone(&["U3"]);
    insta::assert_snapshot!(told(folder.path(), "stale-export"));
}

#[test]
fn a_sheet_that_was_written_well_after_the_netlist_is_told_and_can_be_accepted() {
    let folder = tempfile::tempdir().unwrap();
    let netlist = board(folder.path());
    draw(&netlist, folder.path(), Layout::Lists, as_drawn);
    let set_back = |file: &str, seconds: u64| {
        let time = std::time::SystemTime::now() - std::time::Duration::from_secs(seconds);
        fs::File::options().write(true).open(folder.path().join(file)).unwrap().set_modified(time).unwrap();
    };
    set_back("gauge.net", 30);
    assert_eq!(stale(&result(folder.path(), "gauge.net")), []);
    set_back("gauge.net", 3600);
    set_back("logic.kicad_sch", 7200);
    let found = result(folder.path(), "gauge.net");
    let message =
        "the netlist may be older than its schematic: power.kicad_sch, sensor.kicad_sch were written after it";
    assert_eq!(stale(&found), [("warning", message)]);
    let findings = found["boards"][0]["findings"].as_array().unwrap();
    let finding = findings.iter().find(|finding| finding["check"] == "stale-export").unwrap();
    assert_eq!(finding["position"]["file"], "gauge.net");
    let offset = finding["position"]["offset"].as_u64().unwrap() as usize;
    assert!(netlist[offset..].starts_with("\"gauge.kicad_sch\""));
    let declared = folder.path().join("gauge.railworthy.toml");
    let fingerprint = finding["fingerprint"].as_str().unwrap();
    let accept = format!("[[accept]]\ncheck = \"stale-export\"\nfinding = \"{fingerprint}\"\nreason = \"a test\"\n");
    fs::write(&declared, fs::read_to_string(&declared).unwrap() + &accept).unwrap();
    let found = result(folder.path(), "gauge.net");
    assert_eq!((&found["boards"][0]["counts"]["review"], stale(&found).len()), (&Value::from(0), 1));
}
