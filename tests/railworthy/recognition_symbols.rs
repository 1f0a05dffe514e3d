//! Every regulator symbol of a public library, wired up by role, must be recognized for what it is, and none of the
//! symbols that merely look like one.

use std::collections::{BTreeMap, BTreeSet};
use std::path::Path;

use railworthy::circuit::{Circuit, Device};
use railworthy::knowledge::{Knowledge, Sign};
use railworthy::netlist;
use railworthy::recognize::{Design, Mode, Regulator, RegulatorKind, recognize};

use crate::archive::unpack;
use crate::shared::shared_folder;

/// The share of the circuits that must be recognized in full.
const WANTED: f64 = 0.98;

pub(crate) type Row = BTreeMap<String, String>;

pub(crate) fn rows(text: &str) -> Vec<Row> {
    let mut lines = text.lines();
    let head: Vec<&str> = lines.next().unwrap().split('\t').collect();
    let row =
        |line: &str| head.iter().zip(line.split('\t')).map(|(name, cell)| ((*name).into(), cell.into())).collect();
    lines.map(row).collect()
}

fn design(name: &str, bytes: &[u8], knowledge: &Knowledge) -> Design {
    let netlist = netlist::read(name, bytes).unwrap();
    recognize(Circuit::build(&netlist).0, &(), knowledge)
}

fn numbers(device: &Device, pins: impl IntoIterator<Item = usize>) -> BTreeSet<String> {
    pins.into_iter().map(|index| device.pins[index].number.clone()).collect()
}

fn wanted(row: &Row, column: &str) -> BTreeSet<String> {
    row[column].split_whitespace().map(str::to_owned).collect()
}

/// What is wrong about the regulators found at `U1`, if anything.
fn faults(row: &Row, design: &Design) -> Vec<String> {
    let circuit = &design.circuit;
    let found: Vec<&Regulator> =
        design.regulators.iter().filter(|each| circuit.device(each.device).reference == "U1").collect();
    let Some(first) = found.first() else { return vec!["not found".into()] };
    let device = circuit.device(first.device);
    let mut faults = Vec::new();
    let mut check = |what: &str, fine: bool, got: String| {
        if !fine {
            faults.push(format!("{what}: {got}"));
        }
    };
    let kind_fits = match row["kind"].as_str() {
        "shunt" => first.kind == RegulatorKind::Shunt,
        _ => matches!(first.kind, RegulatorKind::Series | RegulatorKind::Reference),
    };
    check("kind", kind_fits, format!("{:?}", first.kind));
    let mode_fits = match row["mode"].as_str() {
        "fixed" | "dual" => found.iter().all(|each| each.mode == Mode::Fixed),
        "adjustable" => found.iter().all(|each| each.mode == Mode::Adjustable),
        _ => true,
    };
    check("mode", mode_fits, format!("{:?}", first.mode));
    let sign = if row["polarity"] == "negative" { Sign::Negative } else { Sign::Positive };
    let signs: Vec<Sign> = found.iter().map(|each| each.polarity).collect();
    check("polarity", row["n_output_rails"] == "2" || signs == [sign], format!("{signs:?}"));
    check("outputs", row["n_output_rails"] == found.len().to_string(), found.len().to_string());
    roles(row, device, &found, &mut check);
    for (volts, each) in row["vout_nominal"].split('/').filter(|volts| !volts.is_empty()).zip(&found) {
        let volts: f64 = volts.parse().unwrap();
        let nominal = each.nominal.as_ref().map(|nominal| nominal.volts);
        check(
            "nominal",
            nominal.is_some_and(|found| (found - volts).abs() < 0.0015 * volts.abs()),
            format!("{nominal:?}"),
        );
    }
    let named = |ids: &[railworthy::circuit::DeviceId]| {
        ids.iter().map(|id| circuit.device(*id).reference.clone()).collect::<Vec<_>>().join("+")
    };
    for text in row["divider"].split("; ").filter(|text| text.contains('/')) {
        let (upper, lower) = text.split(':').next().unwrap().split_once('/').unwrap();
        let fits = |each: &&Regulator| {
            each.divider
                .as_ref()
                .is_some_and(|divider| named(&divider.upper) == upper && named(&divider.lower) == lower)
        };
        check(
            "divider",
            found.iter().any(fits),
            format!("{:?}", found.iter().map(|each| &each.divider).collect::<Vec<_>>()),
        );
    }
    if !row["series_resistor"].is_empty() {
        let feed = first.feed.as_ref().map(|feed| named(&feed.resistors));
        check("feed", feed.as_ref() == Some(&row["series_resistor"]), format!("{feed:?}"));
    }
    faults
}

fn roles(row: &Row, device: &Device, found: &[&Regulator], check: &mut impl FnMut(&str, bool, String)) {
    type Pins = fn(&Regulator) -> Vec<usize>;
    let tabs = wanted(row, "tab_pins");
    let pick: [(&str, Pins); 6] = [
        ("input_pins", |each| each.roles.input.clone()),
        ("output_pins", |each| each.roles.output.clone()),
        ("ground_pins", |each| each.roles.ground.clone()),
        ("adjust_pins", |each| each.roles.adjust.clone()),
        ("enable_pins", |each| each.roles.enable.iter().map(|enable| enable.pin).collect()),
        ("sense_pins", |each| each.roles.sense.clone()),
    ];
    for (column, pins) in pick {
        let got: BTreeSet<String> = numbers(device, found.iter().flat_map(|each| pins(each)));
        // A tab counts to whichever role its net has.
        let got: BTreeSet<String> = got.difference(&tabs).cloned().collect();
        let want: BTreeSet<String> = wanted(row, column).difference(&tabs).cloned().collect();
        check(column, got == want, format!("{got:?} for {want:?}"));
    }
    for wiring in row["enable_wiring"].split_whitespace() {
        // The circuits are wired to be on, so the wiring tells the polarity.
        let (name, net) = wiring.rsplit_once("->").unwrap();
        let enables = found.iter().flat_map(|each| &each.roles.enable);
        for enable in enables.filter(|enable| device.pins[enable.pin].name == name) {
            check("enable polarity", enable.active_low == (net == "GND"), format!("{name} {}", enable.active_low));
        }
    }
}

#[allow(clippy::print_stderr, reason = "what is not recognized is listed for the reader")]
fn judge(shared: &Path, folder: &str, knowledge: &Knowledge, change: fn(String) -> String) -> f64 {
    let files = unpack(&shared.join("symbols/circuits.tar.xz"));
    let find = |end: &str| files.iter().find(|(name, _)| name.ends_with(end)).map(|(_, bytes)| bytes);
    let index = rows(std::str::from_utf8(find("index.tsv").unwrap()).unwrap());
    let mut right = 0;
    for row in &index {
        let path = format!("{folder}/{}", row["file"]);
        let bytes = files.get(&path).or_else(|| find(&format!("/{path}"))).unwrap();
        let text = change(String::from_utf8(bytes.clone()).unwrap());
        let described = !text.contains("(description \"\")");
        let faults = faults(row, &design(&path, text.as_bytes(), knowledge));
        // Without a description nothing in such a circuit may tell the sign.
        let wrong_sign = described && faults.iter().any(|fault| fault.starts_with("polarity"));
        assert!(!wrong_sign, "{path}: {}", faults.join("; "));
        if faults.is_empty() {
            right += 1;
        } else {
            eprintln!("{path}: {}", faults.join("; "));
        }
    }
    eprintln!("{folder}: {right} of {}", index.len());
    f64::from(right) / index.len() as f64
}

#[test]
fn regulator_symbols_are_recognized_in_both_formats() {
    let Some(shared) = shared_folder() else { return };
    for folder in ["E", "D"] {
        let share = judge(&shared, folder, &Knowledge::built_in(), |text| text);
        assert!(share >= WANTED, "{folder}: {share}");
    }
}

/// What the families know must not be needed to tell what a part is.
#[test]
fn regulator_symbols_are_recognized_without_any_family() {
    let Some(shared) = shared_folder() else { return };
    let share = judge(&shared, "E", &Knowledge::default(), |text| text);
    assert!(share >= WANTED, "{share}");
}

#[test]
fn lookalikes_are_not_taken_for_linear_regulators() {
    let Some(shared) = shared_folder() else { return };
    let mut judged = 0;
    for (name, bytes) in unpack(&shared.join("symbols/lookalikes.tar.xz")) {
        if !name.ends_with(".net") {
            continue;
        }
        let design = design(&name, &bytes, &Knowledge::built_in());
        let linear = |each: &&Regulator| each.kind != RegulatorKind::Switching;
        let taken: Vec<RegulatorKind> = design.regulators.iter().filter(linear).map(|each| each.kind).collect();
        assert!(taken.is_empty(), "{name}: {taken:?}");
        judged += 1;
    }
    assert!(judged >= 40, "{judged}");
}

/// Replaces what stands between `start` and the next quote.
fn replace_quoted(text: &str, start: &str, change: impl Fn(&str) -> String) -> String {
    let mut changed = String::with_capacity(text.len());
    let mut rest = text;
    while let Some((before, behind)) = rest.split_once(start) {
        let (inside, after) = behind.split_once('"').unwrap();
        changed.push_str(before);
        changed.push_str(start);
        changed.push_str(&change(inside));
        changed.push('"');
        rest = after;
    }
    changed.push_str(rest);
    changed
}

/// The same part as another library draws it: other words for the pins, all of them passive, no description.
fn foreign(text: String) -> String {
    let text = replace_quoted(&text, "(description \"", |_| String::new());
    let text = text.replace("\"Regulator_Linear\"", "\"mine\"").replace("\"Reference_Voltage\"", "\"mine\"");
    let word = |name: &str| match name {
        "IN" | "VI" | "I" => "VIN".into(),
        "VIN" | "Vin" => "INPUT".into(),
        "OUT" | "VO" | "Q" => "VOUT".into(),
        "VOUT" | "Vout" => "OUTPUT".into(),
        "GND" => "VSS".into(),
        "EN" => "CE".into(),
        "BP" | "BYP" => "NR".into(),
        "ADJ" => "FB".into(),
        other => other.to_owned(),
    };
    let text = replace_quoted(&text, "(pinfunction \"", word);
    let pins = regex::Regex::new(r#"(\(num "[^"]*"\) \(name ")([^"]*)"#).unwrap();
    let text = pins
        .replace_all(&text, |found: &regex::Captures<'_>| format!("{}{}", &found[1], word(&found[2])))
        .into_owned();
    let passive = |kind: &str| if kind.contains("no_connect") { kind.to_owned() } else { "passive".to_owned() };
    replace_quoted(&replace_quoted(&text, "(pintype \"", passive), "(type \"", passive)
}

/// What a part does must be told from its pins and nets where the symbol says nothing.
#[test]
fn parts_drawn_by_another_library_without_a_word_are_recognized() {
    let Some(shared) = shared_folder() else { return };
    let share = judge(&shared, "E", &Knowledge::built_in(), foreign);
    assert!(share >= 0.83, "{share}");
}

/// A symbol of a table alone on a board, every pin on a net of its own, grounds on ground.
pub(crate) fn alone(row: &Row) -> String {
    let (mut pins, mut nets) = (String::new(), String::new());
    for (code, pin) in row["pins"].split(' ').enumerate() {
        let (number, rest) = pin.split_once(':').unwrap();
        let (name, kind) = rest.rsplit_once(':').unwrap();
        pins += &format!("(pin (num \"{number}\") (name \"{name}\") (type \"{kind}\"))");
        let net = if name.contains("GND") { "GND".into() } else { format!("n{code}") };
        nets += &format!(
            "(net (code \"{code}\") (name \"{net}\") (node (ref \"U1\") (pin \"{number}\") (pintype \"{kind}\")))"
        );
    }
    let (library, part, description) = (&row["library"], &row["symbol"], row["description"].replace('"', ""));
    format!(
        "(export (version \"E\") (components (comp (ref \"U1\") (value \"{part}\") (libsource (lib \"{library}\") \
         (part \"{part}\") (description \"{description}\")))) (libparts (libpart (lib \"{library}\") (part \"{part}\") \
         (pins {pins}))) (nets {nets}))"
    )
}

#[test]
fn symbols_with_the_pins_of_a_regulator_that_are_none_are_told_by_their_text_and_pins() {
    let Some(shared) = shared_folder() else { return };
    let table = std::fs::read_to_string(shared.join("symbols/lookalikes.tsv")).unwrap();
    let mut taken = Vec::new();
    for row in rows(&table) {
        let design = design(&row["symbol"], alone(&row).as_bytes(), &Knowledge::built_in());
        let linear = design.regulators.iter().any(|each| each.kind != RegulatorKind::Switching);
        if linear {
            taken.push(row["symbol"].clone());
        }
    }
    assert!(taken.is_empty(), "{taken:?}");
}
