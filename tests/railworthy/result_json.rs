//! The layouts that other programs read: every key of the contract with its type.

use serde_json::Value;

use super::program::{examples, run};

fn result(arguments: &[&str]) -> Value {
    let run = run(&examples(), arguments);
    serde_json::from_str(&run.out).unwrap()
}

/// Whether a value is of a type: `text`, `number`, `count`, `flag`, `list`, `object`; `?` behind allows null.
fn is(value: &Value, kind: &str) -> bool {
    if let Some(kind) = kind.strip_suffix('?') {
        return value.is_null() || is(value, kind);
    }
    match kind {
        "text" => value.is_string(),
        "number" => value.is_number(),
        "count" => value.is_u64(),
        "flag" => value.is_boolean(),
        "list" => value.is_array(),
        "object" => value.is_object(),
        other => panic!("no such kind: {other}"),
    }
}

fn assert_keys(value: &Value, keys: &[(&str, &str)]) {
    for (key, kind) in keys {
        let found = value.get(key).unwrap_or_else(|| panic!("`{key}` is missing in {value}"));
        assert!(is(found, kind), "`{key}` is no {kind}: {found}");
    }
}

const REGULATOR: &[(&str, &str)] = &[
    ("part", "text"),
    ("family", "text?"),
    ("kind", "text"),
    ("polarity", "text"),
    ("mode", "text"),
    ("pass", "text?"),
    ("reference_feed", "text?"),
    ("pins", "object"),
    ("input_net", "text?"),
    ("output_net", "text?"),
    ("ground_net", "text?"),
    ("output_voltage", "object?"),
];

fn assert_regulator(regulator: &Value) {
    assert_keys(regulator, REGULATOR);
    for role in ["input", "output", "ground", "adjust", "enable"] {
        assert!(regulator["pins"][role].as_array().unwrap().iter().all(Value::is_string));
    }
    if !regulator["output_voltage"].is_null() {
        let bounds =
            [("low", "number?"), ("nominal", "number?"), ("high", "number?"), ("unit", "text"), ("grade", "text")];
        assert_keys(&regulator["output_voltage"], &bounds);
    }
    let is_one = |key: &str, words: &[&str]| words.contains(&regulator[key].as_str().unwrap());
    assert!(is_one("kind", &["series", "shunt", "reference", "switching"]));
    assert!(is_one("polarity", &["positive", "negative"]) && is_one("mode", &["fixed", "adjustable"]));
}

const POSITION: &[(&str, &str)] =
    &[("file", "text"), ("line", "count"), ("column", "count"), ("offset", "count"), ("length", "count")];

#[test]
fn a_result_has_every_key_of_its_layout() {
    let result = result(&["check", "gauge-draft.net", "gauge-release.net", "--format", "json"]);
    assert_eq!(result["schema"], "railworthy-result/1");
    assert_eq!(result["tool_version"], env!("CARGO_PKG_VERSION"));
    let boards = result["boards"].as_array().unwrap();
    assert_eq!(boards.len(), 2);
    for board in boards {
        assert_keys(
            board,
            &[
                ("netlist", "text"),
                ("board_file", "text?"),
                ("format", "text"),
                ("complete", "flag"),
                ("problems", "list"),
                ("size", "object"),
                ("regulators", "list"),
                ("findings", "list"),
                ("counts", "object"),
            ],
        );
        assert_keys(&board["size"], &[("components", "count"), ("nets", "count"), ("nodes", "count")]);
        board["regulators"].as_array().unwrap().iter().for_each(assert_regulator);
        board["findings"].as_array().unwrap().iter().for_each(assert_finding);
        assert_counts(board);
    }
    assert_eq!(boards[0]["board_file"], "gauge-draft.railworthy.toml");
    assert_eq!(boards[0]["complete"], true);
}

fn assert_finding(finding: &Value) {
    assert_keys(
        finding,
        &[
            ("check", "text"),
            ("verdict", "text"),
            ("level", "text"),
            ("subject", "text"),
            ("parts", "list"),
            ("nets", "list"),
            ("message", "text"),
            ("slack", "object?"),
            ("quantities", "list"),
            ("remedies", "list"),
            ("settle", "list"),
            ("fingerprint", "text"),
            ("accepted", "object?"),
            ("position", "object"),
        ],
    );
    assert_keys(&finding["position"], POSITION);
    let level = match finding["verdict"].as_str().unwrap() {
        "fails" => "error",
        "doubtful" => "warning",
        "tight" | "unknown" => "note",
        other => panic!("no finding is {other}"),
    };
    assert_eq!(finding["level"], level);
    if !finding["slack"].is_null() {
        assert_keys(&finding["slack"], &[("value", "number?"), ("unit", "text")]);
    }
    for quantity in finding["quantities"].as_array().unwrap() {
        let keys =
            [("name", "text"), ("low", "number?"), ("nominal", "number?"), ("high", "number?"), ("unit", "text")];
        assert_keys(quantity, &keys);
        for evidence in quantity["evidence"].as_array().unwrap() {
            assert_keys(evidence, &[("grade", "text"), ("source", "text")]);
        }
    }
    for key in ["parts", "nets", "remedies", "settle"] {
        assert!(finding[key].as_array().unwrap().iter().all(Value::is_string), "{key}");
    }
}

fn assert_counts(board: &Value) {
    let counts = &board["counts"];
    let names = ["requirements", "fails", "doubtful", "tight", "unknown", "holds", "accepted"];
    for name in names.iter().chain(&["regulators"]) {
        assert!(counts[name].is_u64(), "{name}");
    }
    let count = |name: &str| counts[name].as_u64().unwrap();
    assert_eq!(count("regulators"), board["regulators"].as_array().unwrap().len() as u64);
    let sum: u64 = names[1..].iter().map(|name| count(name)).sum();
    assert_eq!(sum, count("requirements"), "every requirement is counted once");
}

#[test]
fn the_place_of_a_finding_is_that_of_its_part_in_the_file() {
    let text = std::fs::read_to_string(examples().join("gauge-draft.net")).unwrap();
    let result = result(&["check", "gauge-draft.net", "--format", "json"]);
    for finding in result["boards"][0]["findings"].as_array().unwrap() {
        let number = |key: &str| usize::try_from(finding["position"][key].as_u64().unwrap()).unwrap();
        let (offset, length) = (number("offset"), number("length"));
        assert_eq!(text[offset..offset + length].trim_matches('"'), finding["subject"].as_str().unwrap());
        let before = &text[..offset];
        assert_eq!(number("line"), before.matches('\n').count() + 1);
        assert_eq!(number("column"), before.rsplit('\n').next().unwrap().chars().count() + 1);
    }
}

/// The figures that a program may rely on.
const FACTS: &str = "input_voltage output_voltage set_point load headroom dropout dropout_light line_change \
    input_capacitance output_capacitance bulk_esr bank_esr esr_window phase_margin modulus_margin \
    unity_gain_frequency operating_points starts reference_bias enable_voltage dissipation junction_temperature";

#[test]
fn rails_have_every_figure_that_programs_may_rely_on() {
    let result = result(&["rails", "gauge-draft.net", "--format", "json"]);
    let board = &result["boards"][0];
    let regulators = board["regulators"].as_array().unwrap();
    assert!(!regulators.is_empty());
    for regulator in regulators {
        assert_regulator(regulator);
        for name in FACTS.split_whitespace() {
            let fact = regulator["facts"].get(name).unwrap_or_else(|| panic!("{name} is missing"));
            match fact {
                Value::Null => {}
                fact if fact.get("value").is_some() => assert_keys(fact, &[("value", "flag"), ("evidence", "list")]),
                fact if name == "esr_window" => {
                    assert_keys(fact, &[("kind", "text"), ("low", "number?"), ("high", "number?")]);
                }
                fact => assert_keys(
                    fact,
                    &[
                        ("low", "number?"),
                        ("nominal", "number?"),
                        ("high", "number?"),
                        ("unit", "text"),
                        ("evidence", "list"),
                    ],
                ),
            }
        }
    }
    let window = |part: &str| {
        let regulator = regulators.iter().find(|one| one["part"] == part).unwrap();
        regulator["facts"]["esr_window"].clone()
    };
    assert_eq!(window("U3")["kind"], "two-sided");
    let rails = board["rails"].as_array().unwrap();
    let rail = |net: &str| rails.iter().find(|rail| rail["net"] == net).unwrap();
    assert!((rail("+5V")["voltage"]["nominal"].as_f64().unwrap() - 5.0).abs() < 1e-9);
    assert_eq!(rail("+5V")["by"], "U2");
    assert!(rail("+5V")["load"]["high"].as_f64().unwrap() > 0.1);
}
