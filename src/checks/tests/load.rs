//! What a check file can have wrong, each with the place at which it is told.

use super::fake::NAMES;
use crate::checks::read;
use crate::source::Source;

/// The problems of a file, each with its line, what it points at and what to do.
fn told(text: &str) -> String {
    let (check, problems) = read("sample", &Source::new("check.toml", text), &NAMES);
    assert_eq!(check.is_some(), problems.is_empty(), "a check with a problem is not used");
    let lines = problems.iter().map(|problem| {
        let (source, span) = problem.place().expect("every problem has a place");
        let at = source.position(span.start());
        let shown = source.slice(span).replace('\n', "⏎");
        let (label, help) = (problem.label().unwrap_or(""), problem.advice().unwrap_or("-"));
        format!("{}:{} `{shown}` {label}\n  {}\n  help: {help}", at.line, at.column, problem.message())
    });
    lines.collect::<Vec<_>>().join("\n")
}

/// A file whose requirement is `holds`.
fn holding(holds: &str) -> String {
    format!(
        "name = 'sample'\nabout = 'regulator'\nasks = '?'\nholds = '{holds}'\nsays = {{ fails = 'x' }}\n\
         sources = [{{ common_practice = true }}]\n[settings]\nspare = '0 V'\n"
    )
}

/// Every requirement with what is told about it.
fn told_of(all: &[&str]) -> String {
    all.iter().map(|holds| format!("{holds}\n{}\n", told(&holding(holds)))).collect::<Vec<_>>().join("\n")
}

#[test]
fn names_and_dimensions_are_checked_where_they_stand() {
    insta::assert_snapshot!(told_of(&[
        "headroom >= dropout + spare",
        "hedroom >= dropout",
        "headroom >= load",
        "headroom + load >= dropout",
        "headroom >= 2",
        "headroom >= 2 Vlt",
        "phase_margin >= 45 deg",
        "phase_margin >= 45",
        "phase_margin >= 45 °C",
        "headroom >= dropout-spare",
        "headroom == dropout",
        "headroom",
        "kind >= 2 V",
        "kind == serial",
        "kind in {series, refernce}",
        "mode == 2 V",
        "has_input_capacitor == high",
        "headroom within 1 V .. 2 A",
        "min(headroom, load) >= 1 V",
        "headroom / 0 >= 1 V",
        "(headroom >= 1 V) + 2 V >= 1 V",
        "2 V is known",
        "for each c in headroom: c.esr <= 5 ohm",
        "for each c in output_capacitor: c.esr <= 5 ohm",
        "for each c in output_capacitors: c.ers <= 5 ohm",
        "for each dropout in output_capacitors: dropout.esr <= 5 ohm",
        "for each c in output_capacitors: d.esr <= 5 ohm",
    ]));
}

#[test]
fn the_grammar_is_checked_where_it_breaks() {
    let deep = format!("{}headroom >= 1 V{}", "(".repeat(100), ")".repeat(100));
    let long = vec!["headroom >= 1 V"; 200].join(" and ");
    insta::assert_snapshot!(
        told_of(&[
            "",
            "headroom >=",
            "headroom = dropout",
            "headroom >= dropout dropout",
            "headroom >= dropout adn kind == series",
            "1 V <= headroom <= 2 V",
            "headroom >= (dropout",
            "headroom within 1 V 2 V",
            "headroom is knwon",
            "kind in {}",
            "kind in {series; shunt}",
            "sqrt(headroom) >= 1 V",
            "abs(headroom, dropout) >= 1 V",
            "headroom >= 5 V ± 5 %",
            "headroom ~ dropout",
            "for each c in output_capacitors: for each d in output_capacitors: d.esr <= 5 ohm",
            "for c in output_capacitors: c.esr <= 5 ohm",
            &deep,
            &long,
        ])
        .replace(&deep, "(deep)")
        .replace(&long, "(long)")
    );
}

#[test]
fn keys_are_checked_where_they_stand() {
    insta::assert_snapshot!("empty", told(""));
    insta::assert_snapshot!("no_toml", told("name = \n"));
    let wrong = r#"
name  = "Sample_1"
abuot = "regulator"
about = "diode"
asks  = 3
at_most = "unknown"
"#;
    insta::assert_snapshot!("wrong_keys", told(wrong));
    let wrong = r#"
name  = "other"
about = "regulator"
asks  = "?"
when  = "kind == serie"
[[requires]]
hold = "headroom >= dropout"
[[requires]]
holds = "headroom >= dropout"
at_most = "holds"
says = { fails = "{dropot}", doubt = "" }
[settings]
Spare = "0 V"
dropout = "0 V"
margin = "much"
[points]
primary = "input_nte"
also = ["headroom", "subject"]
[hints]
line = []
[[sources]]
url = "x"
"#;
    insta::assert_snapshot!("wrong_tables", told(wrong));
    let both = "name = 'sample'\nabout = 'regulator'\nasks = '?'\nholds = 'headroom >= dropout'\n[[requires]]\nholds = 'headroom >= dropout'\n";
    insta::assert_snapshot!("holds_twice", told(both));
}

#[test]
fn sentences_are_checked_where_they_stand() {
    let all = [
        "{subject} {missing} {dropout} {dropout.high} {output_net} {{x}} {abs(dropout.low) + spare}",
        "{dropout.hgih}",
        "{dropout + spare}",
        "{dropout.high + load.high}",
        "{dropout.high",
        "dropout}",
        "{has_input_capacitor}",
        "{kind.low}",
        "{dropout.high >= spare}",
        "{}",
        "{2 V + 'a'}",
    ];
    let text = |says: &str| holding("headroom >= dropout").replace("fails = 'x'", &format!("fails = \"{says}\""));
    let lines: Vec<String> = all.iter().map(|says| format!("{says}\n{}\n", told(&text(says)))).collect();
    insta::assert_snapshot!(lines.join("\n"));
}

#[test]
fn an_escape_never_moves_a_place_to_another_line() {
    let text = "name = 'sample'\nabout = 'regulator'\nasks = '?'\nholds = \"headroom \\u003e= dropot\"\n\
                says = { fails = 'x' }\nsources = [{ common_practice = true }]\n";
    insta::assert_snapshot!(told(text));
}
