//! The figures of `rails --format json` beside those of a table: case, regulator, fact, value, unit, tolerance,
//! condition.

use std::collections::BTreeMap;
use std::path::Path;

use rayon::prelude::*;
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
    /// In the row's unit; 0 where the value is a word or a count.
    pub(crate) tolerance: f64,
    pub(crate) condition: String,
}

/// The rows of a table.
pub(crate) fn rows(path: &Path) -> Vec<Row> {
    let text = std::fs::read_to_string(path).unwrap();
    text.lines()
        .skip(1)
        .map(|line| {
            let fields: Vec<&str> = line.split('\t').collect();
            let [case, regulator, fact, value, unit] = [0, 1, 2, 3, 4].map(|place| fields[place].to_owned());
            let (tolerance, condition) = (fields[5].parse().unwrap(), fields[6].to_owned());
            Row { case, regulator, fact, value, unit, tolerance, condition }
        })
        .collect()
}

impl Row {
    /// The circuit, without the variant of its board file.
    pub(crate) fn name(&self) -> &str {
        self.case.split('.').next().unwrap()
    }

    /// The case and the regulator.
    pub(crate) fn key(&self) -> (String, String) {
        (self.case.clone(), self.regulator.clone())
    }

    fn factor(&self) -> f64 {
        if self.unit == "mV" { 1e-3 } else { 1.0 }
    }

    /// The value in SI units.
    pub(crate) fn number(&self) -> f64 {
        self.value.parse::<f64>().unwrap() * self.factor()
    }

    /// What is wrong with the figures of a regulator, where something is.
    pub(crate) fn fault(&self, facts: &Value) -> Option<String> {
        let window = &facts["esr_window"];
        let (found, holds) = match self.fact.as_str() {
            "starts" => {
                let found = &facts["starts"]["value"];
                (found, found.as_bool() == Some(self.value == "yes"))
            }
            "esr_window_kind" => (&window["kind"], window["kind"] == self.value.as_str()),
            "esr_window_low" | "esr_window_high" => {
                let edge = &window[if self.fact == "esr_window_low" { "low" } else { "high" }];
                match self.value.as_str() {
                    "unbounded" => (edge, !window.is_null() && window["kind"] != "none" && edge.is_null()),
                    "none" => (&window["kind"], window["kind"] == "none"),
                    _ => (edge, self.is_near(edge)),
                }
            }
            name => {
                let nominal = &facts[name]["nominal"];
                (nominal, self.is_near(nominal))
            }
        };
        (!holds).then(|| format!("{} {}: {found} against {} {}", self.case, self.fact, self.value, self.unit))
    }

    fn is_near(&self, found: &Value) -> bool {
        let allowed = f64::max(self.tolerance * self.factor(), 1e-12);
        found.as_f64().is_some_and(|found| (found - self.number()).abs() <= allowed)
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

/// The facts of every case and regulator of a table.
pub(crate) type Facts = BTreeMap<(String, String), Value>;

/// Runs the program on every case of a table, side by side.
pub(crate) fn all_facts(folder: &Path, rows: &[Row]) -> Facts {
    let mut cases: Vec<(String, String)> = rows.iter().map(Row::key).collect();
    cases.sort_unstable();
    cases.dedup();
    cases.into_par_iter().map(|key| (key.clone(), facts(folder, &key.0, &key.1))).collect()
}

/// What is wrong with the figures of a table.
pub(crate) fn faults(facts: &Facts, rows: &[Row]) -> Vec<String> {
    rows.iter().filter_map(|row| row.fault(&facts[&row.key()])).collect()
}
