//! The figures of `rails --format json` beside those of a table: case, regulator, fact, value, unit, tolerance,
//! condition.

use std::path::Path;

use serde_json::Value;

use crate::program::run;

/// One figure of a table.
#[derive(Debug, Clone)]
pub(crate) struct Row {
    pub(crate) case: String,
    pub(crate) regulator: String,
    pub(crate) fact: String,
    pub(crate) value: String,
    pub(crate) unit: String,
}

/// The rows of a table.
pub(crate) fn rows(path: &Path) -> Vec<Row> {
    let text = std::fs::read_to_string(path).unwrap();
    text.lines()
        .skip(1)
        .map(|line| {
            let fields: Vec<&str> = line.split('\t').collect();
            let [case, regulator, fact, value, unit] = [0, 1, 2, 3, 4].map(|place| fields[place].to_owned());
            Row { case, regulator, fact, value, unit }
        })
        .collect()
}

impl Row {
    /// The circuit, without the variant of its board file.
    pub(crate) fn name(&self) -> &str {
        self.case.split('.').next().unwrap()
    }

    fn factor(&self) -> f64 {
        if self.unit == "mV" { 1e-3 } else { 1.0 }
    }

    /// The value in SI units.
    pub(crate) fn number(&self) -> f64 {
        self.value.parse::<f64>().unwrap() * self.factor()
    }
}

/// The facts of a regulator of a case in a folder of netlists and board files.
pub(crate) fn facts(folder: &Path, case: &str, regulator: &str) -> Value {
    let name = case.split('.').next().unwrap();
    let (netlist, board) = (format!("{name}.net"), format!("{case}.railworthy.toml"));
    let ran = run(folder, &["rails", &netlist, "--format", "json", "--board", &board]);
    assert_eq!(ran.status, Some(0), "{case}: {}", ran.err);
    let result: Value = serde_json::from_str(&ran.out).unwrap();
    let regulators = result["boards"][0]["regulators"].as_array().unwrap();
    let own =
        regulators.iter().find(|one| one["part"] == regulator).unwrap_or_else(|| panic!("{case}: no {regulator}"));
    own["facts"].clone()
}
