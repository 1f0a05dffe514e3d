//! Tests of the whole room.

mod fields;
mod merging;
mod mistakes;
mod reading;

use crate::circuit::Circuit;
use crate::netlist::Netlist;
use crate::source::{Problem, Source};

use super::{Board, Options};

/// Reads a board's own file.
fn read(text: &str) -> (Board, Vec<Problem>) {
    Board::read(&Source::new("gauge.railworthy.toml", text), Options::default())
}

/// Reads a board's own file that has no mistake.
fn good(text: &str) -> Board {
    let (board, problems) = read(text);
    assert_eq!(told(&problems), "", "{text}");
    board
}

/// Reads a house file that has no mistake.
fn house(text: &str) -> Board {
    let options = Options { shared: true, ..Options::default() };
    let (board, problems) = Board::read(&Source::new("railworthy.toml", text), options);
    assert_eq!(told(&problems), "", "{text}");
    board
}

/// Problems as text: severity, place, message, label, help.
fn told(problems: &[Problem]) -> String {
    let mut text = String::new();
    for problem in problems {
        let place = problem.place().map_or_else(String::new, |(source, span)| {
            let at = source.position(span.start());
            format!(
                "{}:{}:{} `{}`",
                source.name(),
                at.line,
                at.column,
                source.slice(span).lines().next().unwrap_or("")
            )
        });
        let severity = format!("{:?}", problem.severity()).to_lowercase();
        text.push_str(&format!("{severity}: {}\n  at {place}\n", problem.message()));
        if let Some(label) = problem.label() {
            text.push_str(&format!("  label: {label}\n"));
        }
        if let Some(help) = problem.advice() {
            text.push_str(&format!("  help: {help}\n"));
        }
    }
    text
}

/// A small board: a battery connector, a regulator with its capacitors, and fields as a test wants them.
fn circuit_of(fields: &str) -> (Netlist, Circuit) {
    let component = |reference: &str, value: &str, part: &str| {
        let fields = if fields.starts_with(&format!("{reference}:")) { &fields[reference.len() + 1..] } else { "" };
        format!(
            "(comp (ref \"{reference}\") (value \"{value}\") {fields} (libsource (lib \"Device\") (part \"{part}\") \
             (description \"\")))"
        )
    };
    let parts = [
        ("J1", "Battery", "Conn_01x02"),
        ("C1", "10uF", "C"),
        ("R1", "10k", "R"),
        ("D1", "5V1", "D_Zener"),
        ("Q1", "IRF", "Q_PMOS_GSD"),
        ("U1", "LM1117-3.3", "LM1117-3.3"),
    ];
    let components: Vec<String> = parts.iter().map(|(r, v, p)| component(r, v, p)).collect();
    let text = format!(
        "(export (version \"E\") (components {}) (nets \
         (net (code \"1\") (name \"VBAT\") (node (ref \"J1\") (pin \"1\")) (node (ref \"U1\") (pin \"3\"))) \
         (net (code \"2\") (name \"+3V3\") (node (ref \"U1\") (pin \"2\")) (node (ref \"C1\") (pin \"1\"))) \
         (net (code \"3\") (name \"GND\") (node (ref \"U1\") (pin \"1\")) (node (ref \"C1\") (pin \"2\")) \
         (node (ref \"J1\") (pin \"2\")))))",
        components.join(" ")
    );
    let netlist = crate::netlist::read("gauge.net", text.as_bytes()).expect("the board of the tests is whole");
    let (circuit, _) = Circuit::build(&netlist);
    (netlist, circuit)
}
