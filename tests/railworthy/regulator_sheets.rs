//! The part files against a collection of data-sheet figures.

use std::collections::BTreeMap;
use std::fs;

use railworthy::knowledge::{Cited, Family, Knowledge};
use railworthy::quantity::Range;

use crate::shared::shared_folder;

/// Rows of the collection (maker, first of the parts) with the family that they became.
const ROWS: &[(&str, &str, &str)] = &[
    ("TI/National LM1117", "LM1117", "1117 / LM1117"),
    ("TI TLV1117 (2014", "TLV1117", "1117 / TLV1117"),
    ("onsemi NCP1117", "NCP1117ST33", "1117 / NCP1117"),
    ("ST LD1117", "LD1117V33", "1117 / LD1117"),
    ("AMS (Advanced", "AMS1117-1.5", "1117 / AMS1117"),
    ("WPM", "AMS1117", "1117 / AMS1117 of WPM"),
    ("Taiwan Semi", "TS1117B", "1117 / TS1117B"),
    ("TI TLV1117LV", "TLV1117LV12", "1117LV / TLV1117LV"),
    ("Diodes AP1117", "AP1117", "1117 / AP1117"),
    ("AMS AMS1085", "AMS1085", "1085 / AMS1085"),
    ("TI LM2940", "LM2940-5.0", "LM2940"),
    ("TI LP2950/LP2951 (ex", "LP2950-30", "LP2950/LP2951 of TI"),
    ("TI LP2951 (new", "LP2951", "LP2951 of TI, new chip"),
    ("TI/National LP2950", "LP2950ACZ-5.0", "LP2950-N/LP2951-N"),
    ("TI LP2985", "LP2985-18", "LP2985"),
    ("Micrel/Microchip", "MIC5205-2.5", "MIC5205"),
    ("TI TPS737", "TPS73701", "TPS737"),
    ("onsemi NCP114", "NCP114AMX120", "NCP114"),
    ("TI TLV702", "TLV70212", "TLV702"),
    ("TI TLV755P", "TLV75509", "TLV755P"),
    ("TI LP5907", "LP5907-1.2", "LP5907"),
    ("Microchip", "MCP1703-1202", "MCP1703"),
    ("Microchip", "MCP1700-1202", "MCP1700"),
    ("Microchip", "MCP1754", "MCP1754"),
    ("Richtek", "RT9013-12", "RT9013"),
    ("Richtek", "RT9193-18", "RT9193"),
    ("Torex XC6206", "XC6206P332MR", "XC6206"),
    ("Diodes AP2127", "AP2127K-3.3", "AP2127"),
    ("ADI LT3045", "LT3045", "LT3045"),
    ("ADI LT3094", "LT3094", "LT3094"),
    ("Infineon TLE4275", "TLE4275D", "TLE4275"),
];

/// The leading number of a cell, without its sign; cells that speak of a transient or a recollection have none.
fn leading(cell: &str) -> Option<f64> {
    let digits = cell.trim_start_matches('-');
    let end = digits.find(|sign: char| !(sign.is_ascii_digit() || sign == '.')).unwrap_or(digits.len());
    digits.get(..end)?.parse().ok().filter(|_| !cell.contains("transient"))
}

fn close(one: f64, other: f64) -> bool {
    (one - other).abs() < 1e-6 * one.abs().max(1.0)
}

/// What differs between a row and a family.
fn differences(row: &BTreeMap<&str, &str>, family: &Family) -> Vec<String> {
    let mut found = Vec::new();
    let cell = |column: &str| row.get(column).and_then(|cell| leading(cell));
    let mut compare = |column: &str, figure: Option<f64>| {
        if let (Some(cell), Some(figure)) = (cell(column), figure)
            && !close(cell, figure)
        {
            found.push(format!("{}: {column} is {cell}, the file has {figure}", family.name));
        }
    };
    let of = |key: &str, pick: fn(Range) -> f64| family.figure(key).map(|Cited { value, .. }| pick(*value));
    compare("iout_A", of("rated_current", Range::high));
    compare("vin_abs_max_V", of("input_max", Range::low));
    compare("vin_rec_max_V", of("input_recommended_max", Range::high));
    compare("tol_temp_pct", of("tolerance", Range::low).map(|share| share * 100.0));
    let capacitor = family.output_capacitor.as_ref();
    let esr = capacitor.and_then(|demand| demand.esr.as_ref());
    compare("esr_min_ohm", esr.and_then(|window| window.value.low));
    compare("esr_max_ohm", esr.and_then(|window| window.value.high));
    if capacitor.is_some_and(|demand| demand.basis == railworthy::knowledge::Basis::Effective) {
        compare(
            "cout_eff_min_uF",
            capacitor.and_then(|demand| demand.minimum.as_ref()).map(|figure| figure.value * 1e6),
        );
    }
    if let Some(fields) = row.get("memory_fields") {
        for (column, key) in [("vin_abs_max_V", "input_max"), ("vin_rec_max_V", "input_recommended_max")] {
            let recalled = fields.split(',').any(|field| field == column) || fields.starts_with("all");
            if recalled && family.figure(key).is_some_and(|figure| !figure.recalled) {
                // The first page of one sheet was read later than the collection was made.
                if !(family.name == "LT3094" && key == "input_recommended_max") {
                    found.push(format!("{}: {key} was recalled, the file says it was read", family.name));
                }
            }
        }
    }
    found
}

#[test]
fn part_files_agree_with_the_collected_data_sheet_figures() {
    let Some(shared) = shared_folder() else { return };
    let text = fs::read_to_string(shared.join("facts/regulators.tsv")).unwrap();
    let mut lines = text.lines().map(|line| line.split('\t').collect::<Vec<_>>());
    let head = lines.next().unwrap();
    let rows: Vec<BTreeMap<&str, &str>> = lines.map(|cells| head.iter().copied().zip(cells).collect()).collect();
    let mut found = Vec::new();
    for (maker, part, name) in ROWS {
        let fits = |row: &&BTreeMap<&str, &str>| {
            row["maker"].starts_with(maker) && row["parts"].split(' ').next() == Some(part)
        };
        let row = rows.iter().find(fits).unwrap_or_else(|| panic!("no row of {maker} {part}"));
        let family = Knowledge::shared().family(name).unwrap_or_else(|| panic!("no family {name}"));
        found.extend(differences(row, family));
    }
    assert_eq!(found, Vec::<String>::new());
}
