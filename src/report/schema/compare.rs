//! The schema of the result of `compare`.

use serde_json::{Value, json};

use super::node::{Key, Optional, Required, count, either, flag, list, or_null, table, text, word};
use super::result::{board_head, bounds, finding_keys, grade, result};
use crate::review::compare::{State, Why};

pub(super) fn schema() -> Value {
    let side = || or_null(table("A board on its own", board_head()));
    let states = State::ALL.map(State::name);
    let mut found = finding_keys();
    found.extend([
        Key("state", or_null(word("What became of it; null: not compared", states)), Required),
        Key("was", or_null(table("The old finding, where it differs", finding_keys())), Required),
        Key("behind", or_null(text("The check whose finding stood before a new one")), Required),
    ]);
    let mut gone = finding_keys();
    gone.push(Key("why", word("Why it is gone", Why::ALL.map(Why::name)), Required));
    let keys = vec![
        Key("old", side(), Required),
        Key("new", side(), Required),
        Key("compared", flag("Whether both could be read"), Required),
        Key("complete", flag("Whether all of both was judged"), Required),
        Key("differs", or_null(flag("Whether anything does")), Required),
        Key("findings", list("Every finding of the new board", table("A finding", found)), Required),
        Key("gone", list("Findings of the old board only", table("A finding", gone)), Required),
        Key("regulators", list("Those that differ", regulator()), Required),
        Key("counts", counts(), Required),
    ];
    result("railworthy compare", crate::report::compare::SCHEMA, table("A board beside what it was", keys))
}

fn regulator() -> Value {
    let name = || {
        or_null(table(
            "",
            vec![
                Key("part", text("Reference"), Required),
                Key("output", count("Which output of the part, from 1"), Required),
                Key("value", text("As drawn"), Required),
                Key("input_net", or_null(text("")), Required),
                Key("output_net", or_null(text("")), Required),
            ],
        ))
    };
    let pair = |each: Value| {
        let keys = ["old", "new"].map(|key| Key(key, or_null(each.clone()), Required));
        table("", std::iter::once(Key("name", text("What"), Required)).chain(keys).collect())
    };
    let pin = vec![
        Key("pin", or_null(text("Its number; null: an end of the regulator")), Required),
        Key("name", text("Its name"), Required),
        Key("old_net", or_null(text("")), Required),
        Key("new_net", or_null(text("")), Required),
    ];
    let mut figure = bounds();
    figure.push(Key("grade", grade(), Optional));
    let value = either("", vec![table("A figure", figure), json!({ "type": ["boolean", "string"] })]);
    table(
        "",
        vec![
            Key("state", word("", ["added", "removed", "changed"]), Required),
            Key("old", name(), Required),
            Key("new", name(), Required),
            Key("identity", list("What it is now", pair(text(""))), Required),
            Key("pins", list("What lies on another net", table("", pin)), Required),
            Key("figures", list("Null: not known, or does not apply", pair(value)), Required),
        ],
    )
}

fn counts() -> Value {
    let keys = ["new", "worse", "better", "changed", "same", "gone", "regulators"];
    table("", keys.map(|key| Key(key, count(""), Required)).into_iter().collect())
}
