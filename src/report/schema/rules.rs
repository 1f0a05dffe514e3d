//! The schemas of a check, of a part file and of a device file.

use serde_json::{Value, json};

use super::node::{
    Key, Optional, Required, document, either, figure, flag, list, number, published_loop, table, table_of, text,
    word,
};
use crate::facts::SubjectKind;
use crate::knowledge::{Family, FamilyKind, ModelKind, Pass, StandsFor, parameter_unit};

pub(super) fn check() -> Value {
    let subjects = SubjectKind::ALL.iter().map(|(_, name)| *name);
    document(
        "railworthy check",
        table(
            "A requirement on every subject of a kind",
            vec![
                Key("name", text("That of its folder, kebab-case"), Required),
                Key("group", text("The heading of a catalog"), Optional),
                Key("about", word("The kind of subject", subjects), Required),
                Key("asks", text("The question, in one sentence"), Required),
                Key("when", text("Which subjects it is asked of"), Optional),
                Key("holds", text("The requirement"), Optional),
                Key("at_most", at_most(), Optional),
                Key("suppressed_by", list("Checks whose finding makes this one superfluous", text("")), Optional),
                Key("requires", list("Several requirements", requirement()), Optional),
                Key("settings", table_of("Named values, changed in a board file", either("", values())), Optional),
                Key("says", says(), Optional),
                Key("points", points(), Optional),
                Key("hints", table("What to do", vec![Key("lines", list("", text("")), Optional)]), Optional),
                Key("sources", list("What it rests on", check_source()), Required),
            ],
        ),
    )
}

fn values() -> Vec<Value> {
    vec![text("A figure or a word"), number(""), flag("")]
}

fn at_most() -> Value {
    word("The worst verdict that it gives", ["fails", "doubtful", "tight"])
}

fn says() -> Value {
    let line = |verdict| Key(verdict, text("{subject}, {figure}, {figure.high}, {missing} are filled in"), Optional);
    table("Sentences by verdict", ["fails", "doubtful", "tight", "unknown"].map(line).into_iter().collect())
}

fn requirement() -> Value {
    table(
        "One of several requirements",
        vec![
            Key("holds", text("The requirement"), Required),
            Key("when", text("When it is asked"), Optional),
            Key("at_most", at_most(), Optional),
            Key("says", either("Sentences of its own, by verdict or one", vec![text(""), says()]), Optional),
            Key("hints", list("What to do", text("")), Optional),
        ],
    )
}

fn points() -> Value {
    table(
        "What is underlined",
        vec![
            Key("primary", text("First"), Optional),
            Key("also", list("Besides", text("")), Optional),
            Key("figures", list("Figures that are listed first", text("")), Optional),
        ],
    )
}

fn check_source() -> Value {
    table(
        "A source",
        vec![
            Key("title", text("A standard, handbook or data sheet"), Optional),
            Key("note", text("What it says"), Optional),
            Key("common_practice", flag("A fact of the trade"), Optional),
        ],
    )
}

/// A figure of a part file: a text; steps by output voltage; or a table with its source.
fn part_figure(about: &str, unit: &str) -> Value {
    let steps = json!({
        "type": "array", "description": "[up to this output voltage, figure], the last for \"any\"",
        "items": { "type": "array", "items": { "type": "string" }, "minItems": 2, "maxItems": 2 },
    });
    let cited = json!({
        "type": "object", "description": "The figure with its source", "required": ["value"],
        "additionalProperties": false,
        "properties": { "value": {}, "source": { "type": "string" }, "recalled": { "type": "boolean" } },
    });
    either(&format!("{about}, in {unit}; two values are typical / maximum"), vec![text(""), number(""), steps, cited])
}

/// The keys by which a table says what its figures rest on.
fn cited(mut keys: Vec<Key>) -> Vec<Key> {
    let recalled = either("Not read but recalled: all, or these keys", vec![flag(""), list("", text(""))]);
    keys.push(Key("source", text("The id of the source that the figures of this table rest on"), Optional));
    keys.push(Key("recalled", recalled, Optional));
    keys
}

pub(super) fn part() -> Value {
    let mut keys = vec![
        Key("family", text("Unique; before the slash the group of look-alikes"), Required),
        Key("group", text("The group of look-alikes, where it is not told by `family`"), Optional),
        Key("maker", text("The maker; `various` for all without a file"), Required),
        Key("maker_words", list("How a manufacturer field may name it", text("")), Optional),
        Key("version_of", text("Sold under another family's names"), Optional),
        Key("names", list("Patterns: ? * {V}", text("")), Required),
        Key("voltages", list("Fixed versions", figure("", "3.3 V")), Optional),
        Key("codes", table_of("Voltages by a code in the name", text("A voltage, or `adjustable`")), Optional),
        Key("fixed", flag("Whether there are fixed versions"), Optional),
        Key("kind", word("What it is", FamilyKind::ALL.iter().map(|(_, name)| *name)), Required),
        Key("polarity", word("The sign of its output", ["positive", "negative"]), Optional),
        Key("pass", pass(), Optional),
        Key("adjust", word("Where the reference lies", ["output", "ground", "set-current"]), Optional),
        Key("note", text("What a reader of the file should know"), Optional),
        Key("dropout", list("Dropout against load", dropout()), Optional),
        Key("output_capacitor", capacitor("What the output asks for"), Optional),
        Key("input_capacitor", capacitor("What the input asks for"), Optional),
        Key("bypass_capacitor", capacitor("What the bypass pin asks for"), Optional),
        Key("enable", enable(), Optional),
        Key("loop", published_loop(cited(Vec::new())), Optional),
        Key("packages", table_of("By package", package()), Optional),
        Key("sources", list("What was read", source()), Required),
    ];
    let plain = Family::FIGURES.iter();
    keys.extend(plain.map(|(key, dimension, meaning)| {
        Key(key, part_figure(meaning, dimension.symbol().unwrap_or("no unit")), Optional)
    }));
    document("railworthy part file", table("A part family", cited(keys)))
}

pub(super) fn device() -> Value {
    let mut keys = vec![
        Key("device", text("Unique"), Required),
        Key("kind", word("What it is", ModelKind::ALL.iter().map(|(_, name)| *name)), Required),
        Key("names", list("Patterns: ? *", text("")), Optional),
        Key(
            "stands_for",
            word("The parts of unknown number that it stands for", StandsFor::ALL.iter().map(|(_, name)| *name)),
            Optional,
        ),
        Key("tolerance", part_figure("Tolerance of the voltage of a zener diode", "%"), Optional),
        Key("note", text("What a reader of the file should know"), Optional),
        Key("sources", list("What was read", source()), Required),
    ];
    let mut known: Vec<&str> = Vec::new();
    for (name, _) in ModelKind::ALL.iter().flat_map(|(kind, _)| kind.parameters()) {
        if !known.contains(name) {
            known.push(name);
            let kinds =
                ModelKind::ALL.iter().filter(|(kind, _)| kind.parameters().iter().any(|(own, _)| own == name));
            let kinds: Vec<&str> = kinds.map(|(_, name)| *name).collect();
            let unit = Some(parameter_unit(name).0).filter(|unit| !unit.is_empty()).unwrap_or("no unit");
            keys.push(Key(name, part_figure(&format!("Parameter of {}", kinds.join(", ")), unit), Optional));
        }
    }
    document("railworthy device file", table("Single parts that share a model", cited(keys)))
}

fn pass() -> Value {
    let names: Vec<&str> = Pass::ALL.iter().map(|(_, name)| *name).collect();
    either("The pass element", vec![word("", names), json!({ "type": "object" })])
}

fn dropout() -> Value {
    let keys = vec![
        Key("at", figure("The load", "0.5 A"), Required),
        Key("drop", figure("Typical / maximum over temperature", "0.40 / 0.60 V"), Required),
        Key("only_maximum", flag("The one value is the maximum"), Optional),
        Key("from_output", figure("For versions of this voltage and above", "2.5 V"), Optional),
        Key("defined", text("How the sheet defines it"), Optional),
    ];
    table("A point", cited(keys))
}

fn capacitor(about: &str) -> Value {
    let steps = json!({ "type": "array", "items": { "type": "array", "items": { "type": "string" } } });
    let kinds = ["required", "recommended", "recalled", "optional"];
    let keys = vec![
        Key("minimum", part_figure("Least capacitance", "F"), Optional),
        Key("minimum_electrolytic", part_figure("Least of an electrolytic capacitor", "F"), Optional),
        Key("by_output", steps, Optional),
        Key("maximum", part_figure("Largest capacitance", "F"), Optional),
        Key("with_bypass", part_figure("Least with a bypass capacitor", "F"), Optional),
        Key("kind", word("What kind of minimum", kinds), Required),
        Key("basis", word("What it speaks of", ["nominal", "effective"]), Optional),
        Key("esr", part_figure("ESR window", "Ω"), Optional),
        Key("esr_min", part_figure("Least ESR", "Ω"), Optional),
        Key("esr_max", part_figure("Largest ESR", "Ω"), Optional),
        Key("ceramic_only", flag("Nothing but ceramics"), Optional),
        Key("ceramic_allowed", flag("Ceramics are allowed"), Optional),
        Key("if_far", flag("Only if far from the filter"), Optional),
    ];
    table(about, cited(keys))
}

fn enable() -> Value {
    let keys = vec![
        Key("active", word("The level that switches on", ["high", "low"]), Required),
        Key("on", part_figure("Certainly on", "V"), Optional),
        Key("off", part_figure("Certainly off", "V"), Optional),
        Key("open", word("What an open pin does", ["on", "off", "undefined", "unknown"]), Required),
    ];
    table("The enable input", cited(keys))
}

fn package() -> Value {
    let keys = vec![
        Key("pins", table_of("Roles by pin number or `tab`", text("A role, or two with `or`")), Optional),
        Key("pins_from", text("Where the order of the pins was read"), Optional),
        Key("junction_to_ambient", part_figure("On the sheet's board", "K/W"), Optional),
    ];
    table("A package", cited(keys))
}

fn source() -> Value {
    table(
        "A source",
        vec![
            Key("id", text("What figures name it by"), Required),
            Key("title", text("Its title with revision"), Required),
            Key("section", text("Where in it"), Optional),
            Key("read", flag("Whether it was read; what was not is a guess"), Required),
        ],
    )
}
