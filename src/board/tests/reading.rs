//! Reading what is right.

use std::path::{Path, PathBuf};

use super::{good, told};
use crate::board::{Board, Links, LoadKind, ModelKind, Options, SettingValue, StandardVoltage, SupplyNodes};
use crate::knowledge::{Basis, FamilyKind, Pass, RoleName, Sign};
use crate::quantity::{Dimension, Grade, Range};

/// Every key that a board file may have.
const EVERY_KEY: &str = r#"
[board]
title   = "Weather mast supply"
ambient = "-20 .. 55 °C"
ground  = ["GND", "AGND"]

[[supply]]
net         = "VBAT"
voltage     = "10.8 .. 14.4 V"
resistance  = "50 .. 200 mΩ"
rise        = "1 .. 100 ms"
hot_plug    = true
lead_length = "1.5 m"
may_short   = true
surge       = "36 V"
reverse     = true

[[supply]]
between   = ["/AC1", "/AC2"]
ac        = "8.1 .. 9.9 V"
frequency = "50 Hz"

[[supply]]
net      = "VUSB"
standard = "USB 2.0 bus"

[[load]]
net        = "+3V3"
current    = "2 .. 180 mA"
continuous = "60 mA"
kind       = "constant"

[[rail]]
net     = "+3V3"
voltage = "3.3 V ± 5 %"
may_sag = true
off_board_capacitance = "0 .. 470 uF"

[[part]]
ref        = "C7"
technology = "Aluminium  Electrolytic"
esr        = "20 .. 60 mΩ"
tolerance  = "±20 %"
rating     = "16 V"

[[part]]
ref = "C8"
esr = "0.3 Ω"

[[part]]
ref      = "U1"
heatsink = "3 °C/W"

[[part]]
ref                 = "U2"
junction_to_ambient = "62 °C/W"
family              = "1117 / LM1117"

[[part]]
ref        = "U7"
kind       = "series"
polarity   = "positive"
pass       = "pnp"
output_voltage = "3.3 V"
dropout    = ["1.3 V at 0.5 A", "1.0 .. 1.1 V at 100 mA"]
esr_window = "0.3 .. 22 ohm"
minimum_output_capacitance = "10 uF"
minimum_input_capacitance  = "1 uF"
minimum_basis = "effective"
rated_current = "0.8 A"
input_max     = "20 V"
minimum_load  = "5 mA"
tolerance_initial = "±1 %"
pins = { 1 = "adjust or ground", 2 = "output", 3 = "input", tab = "output" }
loop = { gain = "60 / 80 / 90 dB", poles = ["1 kHz", "400 .. 600 kHz"], zeros = ["2 MHz"], output_resistance = "20 ohm" }

[[part]]
ref  = "U9"
role = "ignore"

[[part]]
ref   = "R1"
power = "250 mW"

[[part]]
ref   = "Q1"
model = "pmos VTO=-2.4..-1.2 KP=2 LAMBDA=0.01 CGS=800e-12 CGD=150e-12"

[[part]]
ref   = "U4"
model = "opamp A0=1e5 GBW=1e6 SR=0.5e6 VOS=-0.005..0.005 TOP=1.5 BOTTOM=0.05 RO=100"

[[accept]]
check   = "esr-window"
part    = "U3"
net     = "+3V3"
reason  = "58° measured at -20 °C on build 2"
until   = 2027-06-30
finding = "9f3a"
slack   = "-0.2 V"

[rules]
folders = ["hw/rules", "../house"]

[check.headroom]
spare  = "0.2 V"
strict = true
factor = 1.5
nets   = ["a", "b"]
"#;

fn near(range: Range, low: f64, nominal: f64, high: f64) -> bool {
    let close = |a: f64, b: f64| (a - b).abs() <= 1e-9 * b.abs().max(1e-12);
    close(range.low(), low) && close(range.nominal(), nominal) && close(range.high(), high)
}

#[test]
fn tables_about_the_board_and_its_nets_are_read() {
    let board = good(EVERY_KEY);
    assert_eq!(board.title.as_ref().unwrap().value, "Weather mast supply");
    assert!(near(board.ambient.as_ref().unwrap().value, -20.0, 17.5, 55.0));
    assert_eq!(board.grounds.len(), 2);
    let supply = board.supply("VBAT").unwrap();
    assert!(near(supply.voltage.as_ref().unwrap().value, 10.8, 12.6, 14.4));
    assert!(near(supply.resistance.as_ref().unwrap().value, 0.05, 0.125, 0.2));
    assert!(near(supply.rise.as_ref().unwrap().value, 1e-3, 50.5e-3, 0.1));
    assert!(near(supply.lead_length.as_ref().unwrap().value, 1.5, 1.5, 1.5));
    assert!(near(supply.surge.as_ref().unwrap().value, 36.0, 36.0, 36.0));
    for flag in [&supply.hot_plug, &supply.may_short, &supply.reverse] {
        assert!(flag.as_ref().unwrap().value);
    }
    let winding = board.supply("/AC2").unwrap();
    assert_eq!(winding.nodes.value, SupplyNodes::Between("/AC1".into(), "/AC2".into()));
    assert!(near(winding.ac.as_ref().unwrap().value, 8.1, 9.0, 9.9));
    assert!(near(winding.frequency.as_ref().unwrap().value, 50.0, 50.0, 50.0));
    assert_eq!(board.supply("VUSB").unwrap().standard.as_ref().unwrap().value.name, "USB 2.0 bus");
    let load = board.load("+3V3").unwrap();
    assert!(near(load.current.as_ref().unwrap().value, 2e-3, 0.18, 0.18), "a load's nominal is its peak");
    assert!(near(load.continuous.as_ref().unwrap().value, 0.06, 0.06, 0.06));
    assert_eq!(load.kind.as_ref().unwrap().value, LoadKind::Constant);
    let rail = board.rail("+3V3").unwrap();
    assert!(near(rail.voltage.as_ref().unwrap().value, 3.135, 3.3, 3.465) && rail.may_sag.as_ref().unwrap().value);
    assert!(near(rail.off_board_capacitance.as_ref().unwrap().value, 0.0, 235e-6, 470e-6));
}

#[test]
fn facts_about_parts_are_read() {
    let board = good(EVERY_KEY);
    let capacitor = board.part("C7").unwrap();
    assert_eq!(capacitor.technology.as_ref().unwrap().value, "aluminium electrolytic");
    let esr = capacitor.esr.as_ref().unwrap().value;
    assert!(near(esr.range, 0.02, 0.04, 0.06) && !esr.single);
    assert!(near(capacitor.tolerance.as_ref().unwrap().value, -0.2, 0.0, 0.2));
    assert!(near(capacitor.rating.as_ref().unwrap().value, 16.0, 16.0, 16.0));
    assert!(board.part("C8").unwrap().esr.as_ref().unwrap().value.single);
    assert!(near(board.part("U1").unwrap().heatsink.as_ref().unwrap().value, 3.0, 3.0, 3.0));
    assert!(near(board.part("U2").unwrap().junction_to_ambient.as_ref().unwrap().value, 62.0, 62.0, 62.0));
    assert_eq!(board.part("U2").unwrap().family.as_ref().unwrap().value, "1117 / LM1117");
    assert!(board.part("U9").unwrap().ignore.is_some());
    assert!(near(board.part("R1").unwrap().power.as_ref().unwrap().value, 0.25, 0.25, 0.25));
    let model = board.part("U4").unwrap().model.as_ref().unwrap();
    assert_eq!(model.value.kind(), ModelKind::OpAmp);
    assert_eq!(model.value.parameters().count(), 7);
}

#[test]
fn figures_in_place_are_read() {
    let board = good(EVERY_KEY);
    let part = board.part("U7").unwrap();
    assert_eq!(part.kind.as_ref().unwrap().value, FamilyKind::Series);
    assert_eq!(part.polarity.as_ref().unwrap().value, Sign::Positive);
    assert_eq!(part.pass.as_ref().unwrap().value, Pass::Pnp);
    assert!(near(part.output_voltage.as_ref().unwrap().value, 3.3, 3.3, 3.3));
    let points = &part.dropout.as_ref().unwrap().value;
    let told: Vec<(f64, f64, Option<f64>)> = points.iter().map(|p| (p.load, p.typical, p.maximum)).collect();
    assert_eq!(told, [(0.1, 1.0, Some(1.1)), (0.5, 1.3, Some(1.3))]);
    let window = part.esr_window.as_ref().unwrap().value;
    assert_eq!((window.low, window.high), (Some(0.3), Some(22.0)));
    assert!((part.minimum_output_capacitance.as_ref().unwrap().value - 10e-6).abs() < 1e-15);
    assert!((part.minimum_input_capacitance.as_ref().unwrap().value - 1e-6).abs() < 1e-15);
    assert_eq!(part.minimum_basis.as_ref().unwrap().value, Basis::Effective);
    assert!(near(part.figures["rated_current"].value, 0.8, 0.8, 0.8));
    assert!(near(part.figures["tolerance_initial"].value, 0.01, 0.01, 0.01));
    let pins = &part.pins.as_ref().unwrap().value;
    assert_eq!(pins["1"], [RoleName::Adjust, RoleName::Ground]);
    assert_eq!(pins["tab"], [RoleName::Output]);
    let found: Vec<(&str, usize, [f64; 3])> = part
        .published_loop
        .iter()
        .flat_map(|published| published.value.figures())
        .map(|(key, number, range)| (key, number, [range.value.low(), range.value.nominal(), range.value.high()]))
        .collect();
    let gain = found[0].2;
    assert!((gain[0] - 1e3).abs() < 1e-6 && (gain[1] - 1e4).abs() < 1e-6, "{gain:?}");
    let poles = [("poles", 0, [1e3; 3]), ("poles", 1, [400e3, 500e3, 600e3])];
    assert_eq!(found[1..3], poles);
    assert_eq!(found[3..], [("zeros", 0, [2e6; 3]), ("output_resistance", 0, [20.0; 3])]);
}

#[test]
fn acceptances_rules_and_settings_are_read() {
    let board = good(EVERY_KEY);
    let accept = &board.accepts[0];
    assert_eq!(accept.until.as_ref().unwrap().value.to_string(), "2027-06-30");
    let slack = accept.slack.as_ref().unwrap().value;
    assert!((slack.value + 0.2).abs() < 1e-12 && slack.dimension == Dimension::VOLTAGE);
    assert_eq!(accept.finding.as_ref().unwrap().value, "9f3a");
    let folders: Vec<&Path> = board.rule_folders.iter().map(|folder| folder.value.as_path()).collect();
    assert_eq!(folders, [Path::new("hw/rules"), Path::new("../house")]);
    let setting = |key| &board.setting("headroom", key).unwrap().value;
    assert_eq!(*setting("spare"), SettingValue::Text("0.2 V".into()));
    assert_eq!(*setting("strict"), SettingValue::Flag(true));
    assert_eq!(*setting("factor"), SettingValue::Number(1.5));
    assert_eq!(*setting("nets"), SettingValue::Texts(vec!["a".into(), "b".into()]));
}

#[test]
fn rule_folders_are_relative_to_their_file() {
    let source = crate::source::Source::new("hw/psu/x.railworthy.toml", "[rules]\nfolders = [\"rules\"]\n");
    let (board, problems) = Board::read(&source, Options::default());
    assert_eq!(told(&problems), "");
    assert_eq!(board.rule_folders[0].value, Path::new("hw/psu/rules"));
}

#[test]
fn a_date_in_quotes_and_a_slack_of_any_unit_are_read() {
    for (slack, value, dimension) in [
        ("-3°", -3.0, Dimension::ANGLE),
        ("12 deg", 12.0, Dimension::ANGLE),
        ("-20 mA", -0.02, Dimension::CURRENT),
        ("4 °C", 4.0, Dimension::TEMPERATURE),
        ("-2 uF", -2e-6, Dimension::CAPACITANCE),
    ] {
        let board = good(&format!(
            "[[accept]]\ncheck = \"x\"\nnet = \"a\"\nreason = \"r\"\nuntil = \"2028-02-29\"\nslack = \"{slack}\"\n"
        ));
        let read = board.accepts[0].slack.as_ref().unwrap().value;
        assert!((read.value - value).abs() < 1e-9 && read.dimension == dimension, "{slack}: {read:?}");
        assert_eq!(board.accepts[0].until.as_ref().unwrap().value.to_string(), "2028-02-29");
    }
}

#[test]
fn an_esr_window_may_be_open_at_one_end() {
    for (text, low, high) in [
        ("0.3 ohm ..", Some(0.3), None),
        (".. 5 ohm", None, Some(5.0)),
        ("..500 mΩ", None, Some(0.5)),
        ("10 mΩ .. 1 Ω", Some(0.01), Some(1.0)),
    ] {
        let board = good(&format!("[[part]]\nref = \"U1\"\nesr_window = \"{text}\"\n"));
        let window = board.part("U1").unwrap().esr_window.as_ref().unwrap().value;
        assert_eq!((window.low, window.high), (low, high), "{text}");
    }
}

#[test]
fn tolerances_are_read_as_deviations() {
    for (text, low, high) in [
        ("±20 %", -0.2, 0.2),
        ("+/-10%", -0.1, 0.1),
        ("5%", -0.05, 0.05),
        ("±0 %", 0.0, 0.0),
        ("-20 .. +80 %", -0.2, 0.8),
    ] {
        let board = good(&format!("[[part]]\nref = \"C1\"\ntolerance = \"{text}\"\n"));
        let range = board.part("C1").unwrap().tolerance.as_ref().unwrap().value;
        assert!((range.low() - low).abs() < 1e-12 && (range.high() - high).abs() < 1e-12, "{text}");
        assert!(range.nominal() == 0.0);
    }
}

#[test]
fn a_range_of_one_value_is_no_single_value() {
    let board = good("[[part]]\nref = \"C2\"\nesr = \"0.3 .. 0.3 Ω\"\n[[load]]\nnet = \"a\"\ncurrent = \"5 mA\"\n");
    let esr = board.part("C2").unwrap().esr.as_ref().unwrap().value;
    assert!(esr.range.is_exact() && !esr.single);
    assert!(board.load("a").unwrap().current.as_ref().unwrap().value.is_exact());
}

#[test]
fn a_figure_is_declared_by_its_file_and_line() {
    let board = good(EVERY_KEY);
    let voltage = board.supply("VBAT").unwrap().voltage_quantity("voltage of VBAT").unwrap();
    let evidence = voltage.evidence().next().unwrap();
    assert_eq!((evidence.grade, evidence.source.as_str()), (Grade::Declared, "gauge.railworthy.toml:9"));
    assert_eq!(evidence.key.as_str(), "voltage of VBAT");
    assert!((voltage.kind().low() - 10.8).abs() < 1e-12, "a declaration is a fact");
}

#[test]
fn a_standard_supply_has_its_voltage_once_it_is_looked_up() {
    for (recalled, grade) in [(false, Grade::Declared), (true, Grade::Inferred)] {
        let mut board = good(EVERY_KEY);
        assert!(board.supply("VUSB").unwrap().voltage_quantity("v").is_none());
        let range = Range::between(4.4, 5.5);
        let found = StandardVoltage { range, source: "bus standard".into(), recalled };
        let problems = board.resolve_standards(|name| (name == "USB 2.0 bus").then(|| found.clone()), []);
        assert_eq!(told(&problems), "");
        let voltage = board.supply("VUSB").unwrap().voltage_quantity("v").unwrap();
        let evidence = voltage.evidence().next().unwrap();
        assert_eq!(evidence.grade, grade);
        assert_eq!(evidence.source, "USB 2.0 bus (bus standard), gauge.railworthy.toml:25");
    }
}

/// Every board file below a folder.
fn board_files(folder: &Path) -> Vec<PathBuf> {
    let entries = std::fs::read_dir(folder).unwrap().map(|entry| entry.unwrap().path());
    let mut files: Vec<PathBuf> = entries.filter(|path| path.extension().is_some_and(|end| end == "toml")).collect();
    files.sort();
    files
}

#[test]
#[allow(clippy::print_stderr)] // a skipped test says so
fn every_shared_board_file_is_read_without_a_problem_and_fits_its_netlist() {
    let Some(shared) = std::env::var_os("RAILWORTHY_SHARED").map(PathBuf::from) else {
        eprintln!("skipped: RAILWORTHY_SHARED is not set");
        return;
    };
    let mut count = 0;
    for path in ["failures", "oracle/nets"].iter().flat_map(|folder| board_files(&shared.join(folder))) {
        let source = super::super::read_source(&path, Links::Refuse).unwrap();
        let (mut board, mut problems) = Board::read(&source, Options::default());
        problems.extend(board.resolve(crate::knowledge::Knowledge::shared()));
        assert_eq!(told(&problems), "", "{}", path.display());
        let netlist = path.display().to_string().replace(".railworthy.toml", ".net");
        if let Ok(bytes) = std::fs::read(&netlist) {
            let netlist = crate::netlist::read(&netlist, &bytes).unwrap();
            let (circuit, _) = crate::circuit::Circuit::build(&netlist);
            assert_eq!(told(&board.check_against(&circuit)), "", "{}", path.display());
        }
        count += 1;
    }
    assert!(count > 50, "{count} board files");
}

#[test]
fn both_files_of_a_netlist_are_read_and_one_that_is_named_replaces_its_own() {
    let root = tempfile::tempdir().unwrap();
    let write = |name: &str, text: &str| std::fs::write(root.path().join(name), text).unwrap();
    std::fs::create_dir(root.path().join(".git")).unwrap();
    write("railworthy.toml", "[board]\ntitle = \"house\"\nambient = \"0 .. 40 °C\"\n");
    write("gauge.railworthy.toml", "[board]\ntitle = \"own\"\n");
    write("other.toml", "[board]\ntitle = \"other\"\n");
    let netlist = root.path().join("gauge.net");
    let (board, problems) = Board::open(Some(&netlist), None, false);
    assert_eq!(told(&problems), "");
    assert!(board.title.as_ref().unwrap().value == "own" && board.ambient.unwrap().place.is_shared());
    let (board, _) = Board::open(Some(&netlist), Some(&root.path().join("other.toml")), false);
    assert_eq!(board.title.unwrap().value, "other");
    let (_, problems) = Board::open(Some(&netlist), Some(&root.path().join("absent.toml")), false);
    assert!(told(&problems).contains("cannot be read"));
}

#[test]
fn names_are_looked_up_in_knowledge() {
    use crate::knowledge::{Cited, Knowledge, Supply};
    let mut knowledge = Knowledge::default();
    knowledge.supplies.push(Supply {
        name: "USB 2.0 bus".into(),
        words: vec!["usb".into()],
        voltage: Cited { value: Range::between(4.4, 5.5), source: "bus standard".into(), recalled: false },
        nets: Vec::new(),
        figures: std::collections::BTreeMap::new(),
        sources: Vec::new(),
        file: String::new(),
    });
    let mut board = good("[[supply]]\nnet = \"VUSB\"\nstandard = \"USB\"\n");
    assert_eq!(told(&board.resolve(&knowledge)), "");
    assert!(board.supply("VUSB").unwrap().voltage_quantity("v").is_some());
    let mut board = good("[[supply]]\nnet = \"VUSB\"\nstandard = \"USB 2 bus\"\n");
    assert!(told(&board.resolve(&knowledge)).contains("did you mean `USB 2.0 bus`?"));
}

/// Every board file of the package, below a folder.
fn packaged(folder: &Path) -> Vec<PathBuf> {
    let mut files = Vec::new();
    let mut open = vec![folder.to_owned()];
    while let Some(folder) = open.pop() {
        for entry in std::fs::read_dir(folder).unwrap() {
            let path = entry.unwrap().path();
            if path.is_dir() {
                open.push(path);
            } else if path.to_string_lossy().ends_with("railworthy.toml") {
                files.push(path);
            }
        }
    }
    files.sort();
    files
}

#[test]
fn every_board_file_of_the_package_is_read_without_a_problem_and_fits_its_netlist() {
    let package = Path::new(env!("CARGO_MANIFEST_DIR"));
    let mut count = 0;
    for path in ["rules", "examples"].iter().flat_map(|folder| packaged(&package.join(folder))) {
        let shared = path.ends_with("railworthy.toml");
        let source = super::super::read_source(&path, Links::Refuse).unwrap();
        let (mut board, mut problems) = Board::read(&source, Options { case: !shared, shared });
        problems.extend(board.resolve(crate::knowledge::Knowledge::shared()));
        assert_eq!(told(&problems), "", "{}", path.display());
        let netlist = path.display().to_string().replace(".railworthy.toml", ".net");
        if let Ok(bytes) = std::fs::read(&netlist) {
            let netlist = crate::netlist::read(&netlist, &bytes).unwrap();
            let (circuit, _) = crate::circuit::Circuit::build(&netlist);
            assert_eq!(told(&board.check_against(&circuit)), "", "{}", path.display());
            count += 1;
        }
    }
    assert!(count > 0);
}
