//! The figures of the program on boards whose circuits a simulator was run on.

use std::path::PathBuf;

use crate::rails_figures::{Row, all_facts, faults, rows};
use crate::shared::shared_folder;

fn nets() -> Option<PathBuf> {
    shared_folder().map(|shared| shared.join("oracle/nets"))
}

#[test]
fn every_figure_is_the_simulators() {
    let Some(nets) = nets() else { return };
    let rows = rows(&nets.join("expected.tsv"));
    assert!(rows.len() >= 50, "{}", rows.len());
    let faults = faults(&all_facts(&nets, &rows), &rows);
    assert!(faults.is_empty(), "{} of {}:\n{}", faults.len(), rows.len(), faults.join("\n"));
}

/// At the ESR of the boards themselves; edges of the window within 2 % of the bisected ones.
#[test]
fn figures_at_the_boards_own_esr_are_the_simulators() {
    let Some(nets) = nets() else { return };
    let all = rows(&nets.join("extra.tsv"));
    // The frequency is told at the load where the margin is least, which its row names.
    let least = |row: &Row| {
        let margin = all.iter().find(|other| other.case == row.case && other.fact == "phase_margin").unwrap();
        let share = margin.condition.split("found at ").nth(1).unwrap().split(" %").next().unwrap();
        row.condition.starts_with(&format!("load {share} %"))
    };
    let own = all.iter().filter(|row| row.fact != "unity_gain_frequency" || least(row)).cloned();
    let tight = own.map(|mut row| {
        if row.fact.starts_with("esr_window") {
            row.tolerance = 0.02 * row.number();
        }
        row
    });
    let rows: Vec<Row> = tight.collect();
    assert_eq!(rows.len(), all.len() - 5);
    let faults = faults(&all_facts(&nets, &rows), &rows);
    assert!(faults.is_empty(), "{} of {}:\n{}", faults.len(), rows.len(), faults.join("\n"));
}
