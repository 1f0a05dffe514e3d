//! The schemas of results.

use serde_json::{Value, json};

use super::node::{
    Key, Optional, Required, count, document, either, list, number, or_null, reference, table, table_of, text,
    with_pieces, word,
};
use crate::checks::{Level, Verdict};
use crate::quantity::Grade;
use crate::recognize::RegulatorKind;

pub(super) fn check() -> Value {
    let mut keys = board_head();
    keys.extend([
        Key("regulators", list("Every regulator and reference", table("", regulator())), Required),
        Key("not_judged", list("Recognized and not judged", not_judged()), Required),
        Key(
            "assemblies",
            list("The ways of fitting the board that were judged; none: as drawn only", text("")),
            Required,
        ),
        Key("findings", list("Every verdict but `holds`", finding()), Required),
        Key("counts", counts(), Required),
        Key("declare_first", list("What to declare first", declaration()), Required),
    ]);
    result("railworthy result", crate::report::json::SCHEMA, table("A board", keys))
}

pub(super) fn rails() -> Value {
    let mut one = regulator();
    let fact = or_null(either("A figure, an answer, a window", vec![reference("fact")]));
    one.push(Key("facts", table_of("Figures by name", fact.clone()), Required));
    let rail = table(
        "A supply net",
        vec![
            Key("net", text("The net"), Required),
            Key("voltage", fact.clone(), Required),
            Key("load", fact, Required),
            Key("origin", text("Where its voltage comes from"), Required),
            Key("from", or_null(text("The net that feeds it")), Required),
            Key("by", or_null(text("The part between")), Required),
        ],
    );
    let mut keys = board_head();
    keys.extend([
        Key("regulators", list("Every regulator and reference", table("", one)), Required),
        Key("rails", list("Every supply net", rail), Required),
    ]);
    result("railworthy rails", crate::report::json_rails::SCHEMA, table("A board", keys))
}

pub(super) fn result(title: &str, layout: &str, board: Value) -> Value {
    let root = table(
        title,
        vec![
            Key("schema", json!({ "const": layout }), Required),
            Key("tool_version", text("Of the program"), Required),
            Key("boards", list("In the order in which they were named", board), Required),
        ],
    );
    let pieces = vec![("position", position()), ("evidence", evidence()), ("fact", fact())];
    document(title, with_pieces(root, pieces))
}

pub(super) fn board_head() -> Vec<Key> {
    let problem = table(
        "What was lost or odd",
        vec![
            Key("severity", word("", ["error", "warning", "note"]), Required),
            Key("message", text("What"), Required),
            Key("help", or_null(text("What to do")), Required),
            Key("position", or_null(reference("position")), Required),
        ],
    );
    let size =
        table("", ["components", "nets", "nodes"].map(|key| Key(key, count(""), Required)).into_iter().collect());
    vec![
        Key("netlist", text("As it was named"), Required),
        Key("board_file", or_null(text("The board's own file")), Required),
        Key("house_file", or_null(text("The file for all boards")), Required),
        Key("format", or_null(word("Of the netlist", ["D", "E", "xml"])), Required),
        Key("complete", json!({ "type": "boolean" }), Required),
        Key("problems", list("What was lost or odd", problem), Required),
        Key("size", size, Required),
    ]
}

fn position() -> Value {
    table(
        "A place in a file",
        vec![
            Key("file", text("As it was named"), Required),
            Key("line", count("From 1"), Required),
            Key("column", count("In characters, from 1"), Required),
            Key("offset", count("In bytes"), Required),
            Key("length", count("In bytes"), Required),
        ],
    )
}

fn evidence() -> Value {
    table(
        "A fact or guess behind a figure",
        vec![
            Key("grade", grade(), Required),
            Key("source", text("What tells it"), Required),
            Key("what", text("What it is"), Required),
        ],
    )
}

pub(super) fn grade() -> Value {
    word("How well it is founded", Grade::ALL.iter().map(|grade| grade.name()))
}

pub(super) fn bounds() -> Vec<Key> {
    let mut keys: Vec<Key> =
        ["low", "nominal", "high"].map(|key| Key(key, or_null(number("Null: unknown or no bound")), Required)).into();
    keys.push(Key("unit", text("SI; °C for temperatures, deg for angles"), Required));
    keys
}

fn fact() -> Value {
    let evidences = || Key("evidence", list("Everything behind it", reference("evidence")), Required);
    let mut figure = bounds();
    figure.push(evidences());
    let flag = vec![Key("value", json!({ "type": "boolean" }), Required), evidences()];
    let kinds = ["none", "all", "lower", "upper", "two-sided", "split"];
    let window = vec![
        Key("kind", word("The kind of window", kinds), Required),
        Key("low", or_null(number("")), Required),
        Key("high", or_null(number("")), Required),
        Key("unit", text(""), Required),
        evidences(),
    ];
    either("", vec![table("A figure", figure), table("An answer", flag), table("A window", window)])
}

fn regulator() -> Vec<Key> {
    let kinds = [RegulatorKind::Series, RegulatorKind::Shunt, RegulatorKind::Reference, RegulatorKind::Switching];
    let pins = ["input", "output", "ground", "adjust", "enable"].map(|key| Key(key, list("", text("")), Required));
    let mut output = bounds();
    output.push(Key("grade", grade(), Optional));
    vec![
        Key("part", text("Reference"), Required),
        Key("output", count("Which output of the part, from 1"), Required),
        Key("value", text("As drawn"), Required),
        Key("sheet", text("Sheet path"), Required),
        Key("family", or_null(text("What it was taken for")), Required),
        Key("family_group", or_null(text("The group of look-alikes")), Required),
        Key("kind", word("", kinds.map(RegulatorKind::name)), Required),
        Key("polarity", word("", ["positive", "negative"]), Required),
        Key("mode", word("", ["fixed", "adjustable"]), Required),
        Key("pass", or_null(text("Pass element")), Required),
        Key("reference_feed", or_null(text("What feeds the reference of a built-up regulator")), Required),
        Key("pins", table("Numbers by role", pins.into_iter().collect()), Required),
        Key("input_net", or_null(text("")), Required),
        Key("output_net", or_null(text("")), Required),
        Key("ground_net", or_null(text("")), Required),
        Key("output_voltage", or_null(table("", output)), Required),
    ]
}

fn not_judged() -> Value {
    table("", vec![Key("part", text("Reference"), Required), Key("reason", text("Why"), Required)])
}

fn declaration() -> Value {
    table(
        "A declaration for the board file",
        vec![
            Key("declares", text("In words"), Required),
            Key("table", text("Of the board file"), Required),
            Key("target", text("Net or part"), Required),
            Key("key", text("In that table"), Required),
            Key("example", text("How it could be written"), Required),
            Key("decides", count("How many requirements hang on it"), Optional),
        ],
    )
}

fn slack() -> Value {
    table(
        "",
        vec![Key("value", or_null(number("Negative where it breaks")), Required), Key("unit", text(""), Required)],
    )
}

fn finding() -> Value {
    table("A finding", finding_keys())
}

pub(super) fn finding_keys() -> Vec<Key> {
    let verdicts = Verdict::ALL.iter().filter(|verdict| **verdict != Verdict::Holds).map(|verdict| verdict.name());
    let levels = [Level::Error, Level::Warning, Level::Note].map(Level::name);
    let mut quantity = vec![Key("name", text("As in the check language"), Required)];
    quantity.extend(bounds());
    quantity.push(Key("evidence", list("", reference("evidence")), Required));
    let accepted = table(
        "",
        vec![
            Key("reason", text("Why"), Required),
            Key("until", or_null(text("The last day")), Required),
            Key("position", or_null(reference("position")), Required),
        ],
    );
    let reopened =
        table("", vec![Key("slack", slack(), Required), Key("position", or_null(reference("position")), Required)]);
    vec![
        Key("check", text("Its check"), Required),
        Key("verdict", word("", verdicts), Required),
        Key("level", word("", levels), Required),
        Key("subject", text("Part or net"), Required),
        Key("sheet", text("Sheet path"), Required),
        Key("parts", list("References", text("")), Required),
        Key("nets", list("Names", text("")), Required),
        Key("variants", list("The ways of fitting the board for which it stands; none: all", text("")), Required),
        Key("message", text("What is wrong"), Required),
        Key("slack", or_null(slack()), Required),
        Key("quantities", list("The figures that decide", table("", quantity)), Required),
        Key("remedies", list("What to do", text("")), Required),
        Key("settle", list("What would settle it", text("")), Required),
        Key("declarations", list("The same for a board file", declaration()), Required),
        Key("fingerprint", text("Survives renumbering"), Required),
        Key("accepted", or_null(accepted), Required),
        Key("reopened", or_null(reopened), Required),
        Key("position", reference("position"), Required),
        Key("schematic", or_null(reference("position")), Required),
    ]
}

fn counts() -> Value {
    let keys = ["regulators", "requirements", "fails", "doubtful", "tight", "unknown", "holds", "accepted", "review"];
    table("", keys.map(|key| Key(key, count(""), Required)).into_iter().collect())
}
