//! Assembly variants of an export and second-source parts: each is judged, and a finding says for which it stands.

use railworthy::board::{Board, Options};
use railworthy::netlist;
use railworthy::review::{Examination, MOST_ASSEMBLIES, Reviewed, examine};
use railworthy::source::Source;

use crate::judge::{Rules, TODAY};
use crate::small_board::{Part, netlist as written};

const SUPPLY: &str = "[[supply]]\nnet = \"+5V\"\nvoltage = \"4.9 .. 5.1 V\"\n[[load]]\nnet = \"+3V3\"\n\
                      current = \"1 .. 50 mA\"\n[[part]]\nref = \"C2\"\ntechnology = \"tantalum\"\nesr = \"0.5 Ω\"\n";

/// A regulator with its capacitors; `extra` stands in the component of a reference.
fn export(extra: &[(&str, &str)]) -> String {
    let pins =
        vec![("1", "GND", "power_in", "GND"), ("2", "VO", "power_out", "+3V3"), ("3", "VI", "power_in", "+5V")];
    let symbol = ("Regulator_Linear", "LM1117MP-3.3", "800mA low-dropout linear regulator, 3.3V fixed output");
    let parts = [
        Part { reference: "U1", value: "LM1117MP-3.3".to_owned(), symbol, pins },
        Part::two_ended("C1", "10uF", ("+5V", "GND")),
        Part::two_ended("C2", "22uF", ("+3V3", "GND")),
    ];
    let mut text = written(&parts);
    for (reference, inside) in extra {
        let head = format!("(comp (ref \"{reference}\")");
        assert!(text.contains(&head));
        text = text.replace(&head, &format!("{head} {inside}"));
    }
    text
}

/// What version 10 of the editor writes for a part that is fitted otherwise in a variant.
fn variant(name: &str, inside: &str) -> String {
    format!("(variants (variant (name \"{name}\") {inside}))")
}

const LEFT_OUT: &str = "(property (name \"dnp\") (value \"1\"))";

fn judged(text: &str, board: &str) -> Examination {
    let rules = Rules::built_in();
    let (board, problems) = Board::read(&Source::new("small.railworthy.toml", board), Options::default());
    assert!(problems.is_empty(), "{problems:?}");
    examine("small.net", text.as_bytes(), board, &rules.knowledge, &rules.checks, TODAY).unwrap()
}

fn found<'a>(examination: &'a Examination, check: &str) -> Vec<&'a Reviewed> {
    examination.findings.iter().filter(|found| found.finding.check == check).collect()
}

#[test]
fn what_fails_in_one_variant_says_so_and_counts_once() {
    let plain = judged(&export(&[]), SUPPLY);
    assert!(found(&plain, "output-capacitor").is_empty());
    let examination = judged(&export(&[("C2", &variant("Lite", LEFT_OUT))]), SUPPLY);
    assert_eq!(examination.assemblies, ["as drawn", "in variant Lite"]);
    let [only] = found(&examination, "output-capacitor")[..] else { panic!("{:?}", examination.findings) };
    assert_eq!(only.variants, ["in variant Lite"]);
    assert!(only.finding.message.ends_with(", in variant Lite"), "{}", only.finding.message);
    let counts = examination.counts;
    assert_eq!(counts.fails, plain.counts.fails + 1);
    let broken = counts.fails + counts.doubtful + counts.tight + counts.unknown;
    assert_eq!(broken, examination.findings.len(), "{:?}", crate::judge::loud(&examination));
    assert_eq!(broken + counts.holds, counts.requirements);
    assert_eq!(examination.counts.requirements, plain.counts.requirements);
    // The part and its figures are told as drawn.
    assert_eq!(examination.design.regulators.len(), 1);
}

#[test]
fn what_fails_only_as_drawn_and_what_fails_in_all_are_told_apart() {
    let undone = "(property (name \"dnp\") (value \"0\"))";
    let base = format!("(property (name \"dnp\")) {}", variant("Full", undone));
    let only_drawn = judged(&export(&[("C2", &base)]), SUPPLY);
    let [only] = found(&only_drawn, "output-capacitor")[..] else { panic!("{:?}", only_drawn.findings) };
    assert_eq!(only.variants, ["as drawn"]);
    assert!(only.finding.message.ends_with(", only as drawn"), "{}", only.finding.message);
    let other = "(fields (field (name \"Value\") \"4.7uF\"))";
    let all = judged(&export(&[("C2", "(property (name \"dnp\"))"), ("C1", &variant("Other", other))]), SUPPLY);
    let [in_all] = found(&all, "output-capacitor")[..] else { panic!("{:?}", all.findings) };
    assert!(in_all.variants.is_empty());
    assert!(!in_all.finding.message.contains("variant"), "{}", in_all.finding.message);
}

#[test]
fn a_variant_gives_a_part_another_value() {
    let other = "(fields (field (name \"Value\") \"LM1117MP-5.0\"))";
    let examination = judged(&export(&[("U1", &variant("Five", other))]), SUPPLY);
    let [only] = found(&examination, "set-point")[..] else { panic!("{:?}", examination.findings) };
    assert_eq!(only.variants, ["in variant Five"]);
}

#[test]
fn a_variant_that_changes_nothing_about_the_circuit_is_not_judged() {
    let listed = "(property (name \"exclude_from_bom\") (value \"1\"))";
    assert!(judged(&export(&[("C2", &variant("Kit", listed))]), SUPPLY).assemblies.is_empty());
}

#[test]
fn second_sources_are_judged_in_place_of_the_part() {
    let declared = format!("{SUPPLY}[[part]]\nref = \"U1\"\nalternatives = [\"LM1117MP-5.0\", \"AMS1117-3.3\"]\n");
    let examination = judged(&export(&[]), &declared);
    let [only] = found(&examination, "set-point")[..] else { panic!("{:?}", examination.findings) };
    assert_eq!(only.variants, ["with U1 as LM1117MP-5.0"]);
    assert_eq!(only.parts.first().map(String::as_str), Some("U1"));
    let field = "(property (name \"Alternate MPN\") (value \"LM1117MP-5.0\"))";
    let by_field = judged(&export(&[("U1", field)]), SUPPLY);
    assert_eq!(by_field.assemblies, ["as drawn", "with U1 as LM1117MP-5.0"]);
    assert_eq!(found(&by_field, "set-point").len(), 1);
    // Of a capacitor such a number says nothing that could be judged.
    assert!(judged(&export(&[("C2", field)]), SUPPLY).assemblies.is_empty());
}

#[test]
fn an_acceptance_that_one_variant_needs_is_used() {
    let accepted = format!("{SUPPLY}[[accept]]\ncheck = \"output-capacitor\"\npart = \"U1\"\nreason = \"no load\"\n");
    let unused = judged(&export(&[]), &accepted);
    assert_eq!(found(&unused, "accept-unused").len(), 1);
    let used = judged(&export(&[("C2", &variant("Lite", LEFT_OUT))]), &accepted);
    assert!(found(&used, "accept-unused").is_empty());
    assert_eq!((used.accepted, used.counts.fails, used.review), (1, 0, 0));
}

#[test]
fn more_ways_than_are_judged_are_told() {
    let names: Vec<String> = (0..MOST_ASSEMBLIES + 4).map(|at| format!("\"QX{at}-3.3\"")).collect();
    let declared = format!("{SUPPLY}[[part]]\nref = \"U1\"\nalternatives = [{}]\n", names.join(", "));
    let examination = judged(&export(&[]), &declared);
    assert_eq!(examination.assemblies.len(), MOST_ASSEMBLIES + 1);
    let told: Vec<&str> = examination.problems.iter().map(|problem| problem.message()).collect();
    assert!(told.contains(&"4 more variants and second-source parts are not judged"), "{told:?}");
}

#[test]
fn both_forms_of_an_export_give_the_same_variants() {
    let inside = "(property (name \"dnp\") (value \"1\")) (fields (field (name \"Value\") \"1uF\"))";
    let listed = export(&[("C2", &variant("Lite", inside))]);
    let xml = "<?xml version=\"1.0\"?><export version=\"E\"><design/><components><comp ref=\"C2\"><value>22uF</value>\
               <variants><variant name=\"Lite\"><property name=\"dnp\" value=\"1\"/><fields><field name=\"Value\">1uF\
               </field></fields></variant></variants></comp></components><libparts/><nets/></export>";
    let of = |text: &str| {
        let read = netlist::read("x.net", text.as_bytes()).unwrap();
        read.components.into_iter().find(|one| one.reference == "C2").unwrap().variants
    };
    assert_eq!(of(&listed), of(xml));
    assert_eq!(of(xml).first().map(|variant| variant.changes.len()), Some(2));
}
