//! The schema of a board file.

use serde_json::{Value, json};

use super::node::{
    Key, Optional, Required, document, either, figure, flag, list, number, published_loop, table, table_of, text,
    word,
};
use crate::board::ModelKind;
use crate::knowledge::{Family, Pass, RoleName, TECHNOLOGIES};

pub(super) fn schema() -> Value {
    document(
        "railworthy board file",
        table(
            "What a netlist cannot hold",
            vec![
                Key("board", board(), Optional),
                Key("supply", list("Where power comes in", supply()), Optional),
                Key("load", list("What is drawn from a net", load()), Optional),
                Key("rail", list("What a net is meant to be", rail()), Optional),
                Key("part", list("Facts about one placed part", part()), Optional),
                Key("accept", list("A finding that someone has looked at", accept()), Optional),
                Key("rules", rules(), Optional),
                Key("check", table_of("Settings of a check, by its name", table_of("", setting())), Optional),
                Key("expect", table_of("Cases of checks only: expected verdicts", table_of("", text(""))), Optional),
            ],
        ),
    )
}

fn board() -> Value {
    table(
        "The board as a whole",
        vec![
            Key("title", text("Its title"), Optional),
            Key("ambient", figure("Ambient temperature", "-20 .. 55 °C"), Optional),
            Key("ground", list("Nets that are grounds though their names do not tell", text("A net")), Optional),
        ],
    )
}

fn supply() -> Value {
    let between = json!({
        "type": "array", "items": { "type": "string" }, "minItems": 2, "maxItems": 2,
        "description": "Two nets: a transformer winding, a floating source",
    });
    table(
        "Where power comes in",
        vec![
            Key("net", text("The net, against ground"), Optional),
            Key("between", between, Optional),
            Key("voltage", figure("Its range, signed", "10.8 .. 14.4 V"), Optional),
            Key("standard", figure("A standard supply instead of a voltage", "lead-acid 12 V"), Optional),
            Key("ac", figure("Volts rms of an alternating supply", "8.1 .. 9.9 V"), Optional),
            Key("frequency", figure("Of an alternating supply", "50 Hz"), Optional),
            Key("resistance", figure("Of source and cable", "50 .. 200 mΩ"), Optional),
            Key("rise", figure("How fast it comes up", "1 .. 100 ms"), Optional),
            Key("surge", figure("Highest transient", "36 V"), Optional),
            Key("lead_length", figure("Length of the lead", "1.5 m"), Optional),
            Key("hot_plug", flag("Plugged in live"), Optional),
            Key("may_short", flag("Can be shorted, or collapse, while the outputs are charged"), Optional),
            Key("reverse", flag("Can be connected the wrong way round"), Optional),
        ],
    )
}

fn load() -> Value {
    table(
        "What is drawn from a net",
        vec![
            Key("net", text("The net"), Required),
            Key("current", figure("Idle to peak", "2 .. 180 mA"), Optional),
            Key("continuous", figure("What flows for long: for heat", "60 mA"), Optional),
            Key("kind", word("How it draws: resistive where not stated", ["resistive", "constant"]), Optional),
        ],
    )
}

fn rail() -> Value {
    table(
        "What a net is meant to be",
        vec![
            Key("net", text("The net"), Required),
            Key("voltage", figure("Its range, or one value", "3.3 V ± 5 %"), Optional),
            Key("may_sag", flag("It may fall to its low end with its input"), Optional),
            Key("off_board_capacitance", figure("Beyond a connector", "0 .. 470 uF"), Optional),
        ],
    )
}

fn part() -> Value {
    let kinds: Vec<&str> = ModelKind::ALL.iter().map(|(_, name)| *name).collect();
    let model = format!("A device model: {}, then parameters in SI units", kinds.join(", "));
    let roles: Vec<&str> = RoleName::ALL.iter().map(|(_, name)| *name).collect();
    let pins = table_of("Roles by pin number", text(&format!("{}; two with `or`", roles.join(", "))));
    let technologies = format!("{}, or a dielectric or common name", TECHNOLOGIES.join(", "));
    let mut keys = vec![
        Key("ref", text("Reference designator"), Required),
        Key("technology", figure(&technologies, "X7R"), Optional),
        Key("esr", figure("One value: new and at 20 °C; a range is taken as it stands", "20 .. 60 mΩ"), Optional),
        Key("tolerance", figure("Of the value", "±20 %"), Optional),
        Key("rating", figure("Rated voltage", "16 V"), Optional),
        Key("power", figure("Rated power", "0.25 W"), Optional),
        Key("effective_capacitance", figure("What bias leaves, by the maker's curve", "3 .. 5 uF"), Optional),
        Key("forward_drop", figure("Of a diode or switch in a supply line", "0.3 .. 0.5 V"), Optional),
        Key("resistance", figure("Of a ferrite, fuse or inductor in a supply line", "20 .. 50 mΩ"), Optional),
        Key("heatsink", figure("Heat sink to ambient", "3 °C/W"), Optional),
        Key("junction_to_ambient", figure("The whole way", "62 °C/W"), Optional),
        Key("family", figure("The part family that it is", "1117 / LM1117"), Optional),
        Key(
            "alternatives",
            list("Second sources: each is judged in its place", text("A value or part number")),
            Optional,
        ),
        Key("role", word("Leaves the part out of all judgement", ["ignore"]), Optional),
        Key("kind", word("What it is", ["series", "shunt", "reference", "switching"]), Optional),
        Key("polarity", word("The sign of its output", ["positive", "negative"]), Optional),
        Key("pass", word("Its pass element", Pass::ALL.iter().map(|(_, name)| *name)), Optional),
        Key("pins", pins, Optional),
        Key("output_voltage", figure("Fixed output, signed", "3.3 V ± 2 %"), Optional),
        Key("dropout", figure("Typical / maximum, at loads", "0.25 / 0.4 V at 0.3 A"), Optional),
        Key("esr_window", figure("Of the output capacitor", "0.3 .. 22 ohm"), Optional),
        Key("minimum_output_capacitance", figure("Least output capacitance", "1 uF"), Optional),
        Key("minimum_input_capacitance", figure("Least input capacitance", "1 uF"), Optional),
        Key("minimum_basis", word("What the minima speak of", ["nominal", "effective"]), Optional),
        Key("loop", published_loop(Vec::new()), Optional),
        Key("model", figure(&model, "pmos VTO=-2.4..-1.2 KP=2"), Optional),
    ];
    let plain = Family::FIGURES.iter().filter(|(key, ..)| *key != "tolerance");
    keys.extend(plain.map(|(key, dimension, meaning)| {
        let about = format!("{meaning}, in {}", dimension.symbol().unwrap_or("no unit"));
        Key(key, text(&about), Optional)
    }));
    table("Facts about one placed part", keys)
}

fn accept() -> Value {
    let day = json!({ "description": "The last day, YYYY-MM-DD" });
    table(
        "A finding that someone has looked at",
        vec![
            Key("check", text("The check"), Required),
            Key("reason", text("Why it is accepted"), Required),
            Key("finding", text("Its fingerprint: survives renumbering"), Optional),
            Key("part", text("The part that it is about"), Optional),
            Key("net", text("The net that it is about"), Optional),
            Key("until", day, Optional),
            Key("slack", figure("As accepted: worse opens it again", "-0.2 V"), Optional),
        ],
    )
}

fn rules() -> Value {
    table(
        "Rules of your own",
        vec![Key("folders", list("Folders, relative to the file", text("A folder")), Optional)],
    )
}

fn setting() -> Value {
    either("A setting", vec![text(""), number(""), flag(""), list("", text(""))])
}
