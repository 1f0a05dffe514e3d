//! A part file to be completed from a data sheet.

use std::fmt::Write;

use super::inert::{guarded, inert};
use super::layout::wrapped;
use crate::checks::{Check, Checks};
use crate::facts::{SHEET, SheetFigure};
use crate::knowledge::{Active, AdjustSide, Family, Pass, RoleName, Sign};
use crate::quantity::{Dimension, print_amount};
use crate::recognize::Sketch;

/// Widest line of a part file.
const WIDTH: usize = 118;

/// The part file of a sketch: what the drawing tells as it stands, every figure that the checks use as a comment.
#[must_use]
pub fn draft(sketch: &Sketch, netlist: &str, reference: &str, checks: &Checks) -> String {
    let family = &sketch.family;
    let mut text = head(sketch, netlist, reference);
    text.push_str(&identity(sketch));
    text.push_str(&plain_figures(family, checks));
    text.push_str(&dropout(family, checks));
    text.push_str(&capacitors(family, checks));
    text.push_str(&published_loop(family, checks));
    text.push_str(&enable(family));
    text.push_str(&packages(sketch));
    let _ = write!(
        text,
        "\n[[sources]]\nid    = \"sheet\"\ntitle = {}\nread  = false # true once the figures are taken from it: a fact \
         needs a source that was read\n",
        quoted(&format!("{} data sheet, revision and date", family.name))
    );
    guarded(&text)
}

/// The part file of a family that knows the part already, with what it is good for.
#[must_use]
pub fn known(reference: &str, name: &str, families: &[&Family], text: &str) -> String {
    let mut told = String::new();
    let Some(first) = families.first() else { return told };
    let mut lines = vec![format!(
        "{reference}, {name}, is known already: this is `{}`, built in as {}, as it stands. Saved under that name in a \
         folder of yours it takes the place of the built-in one; under another name give it another `family` and \
         `names` that say more.",
        first.name, first.file
    )];
    let others: Vec<String> = families.iter().skip(1).map(|family| format!("`{}`", family.name)).collect();
    if !others.is_empty() {
        lines.push(format!("The name also fits {}.", others.join(", ")));
    }
    for line in lines {
        told.push_str(&wrapped(&inert(&line), "# ", "# ", WIDTH));
    }
    guarded(&format!("{told}\n{text}"))
}

fn head(sketch: &Sketch, netlist: &str, reference: &str) -> String {
    let (name, file) = (&sketch.name, &sketch.family.file);
    let netlist = netlist.rsplit(['/', '\\']).next().unwrap_or(netlist);
    let lines = [
        format!(
            "{name}: {reference} of {netlist}, begun from its symbol. The name stands in the {}.",
            sketch.told_by
        ),
        "With the data sheet open, take the `#` from a line and put the sheet's figure in place of each `?`. Of two \
         values the first is typical, the second the worst over temperature. What stays a comment stays unknown, and \
         reports say so."
            .to_owned(),
        format!(
            "Save it as {file} in a folder DIR of your own: `railworthy vet DIR` tells what is wrong and what is still \
             lacking, `railworthy check --rules DIR BOARD.net` judges with it."
        ),
    ];
    lines.iter().map(|line| wrapped(&inert(line), "# ", "# ", WIDTH)).collect::<String>() + "\n"
}

fn identity(sketch: &Sketch) -> String {
    let family = &sketch.family;
    let mut rows = vec![format!("family = {}", quoted(&family.name))];
    if family.maker.is_empty() {
        rows.push("maker = \"not told\" # who makes it".to_owned());
        rows.push("# maker_words = [\"?\"] # how a manufacturer field may name the maker, lower case".to_owned());
    } else {
        rows.push(format!("maker = {}", quoted(&family.maker)));
        rows.push(format!("maker_words = [{}]", quoted(&family.maker.to_lowercase())));
    }
    let names: Vec<String> = family.names.iter().map(|name| quoted(name)).collect();
    rows.push(format!(
        "names = [{}] # what all order codes share: `{{V}}` the voltage code, `*` any run, `?` one character",
        names.join(", ")
    ));
    let volts: Vec<String> =
        family.voltages.iter().map(|volts| quoted(&print_amount(*volts, Dimension::VOLTAGE))).collect();
    if volts.is_empty() && family.fixed {
        for (volts, source) in &sketch.perhaps {
            let shown = print_amount(*volts, Dimension::VOLTAGE);
            rows.push(format!("# {shown} by the {}", inert(source)));
        }
        rows.push("# voltages = [\"? V\"] # the fixed output voltages that are made".to_owned());
        rows.push("fixed = true".to_owned());
    } else if !volts.is_empty() {
        rows.push(format!("voltages = [{}] # add the others that are made", volts.join(", ")));
    }
    if family.fixed {
        rows.push(
            "# codes = { \"?\" = \"? V\" } # voltage codes of order numbers that do not spell the voltage".to_owned(),
        );
    }
    rows.push(format!("kind = \"{}\"", family.kind.name()));
    rows.push(format!("polarity = \"{}\"", if family.polarity == Sign::Negative { "negative" } else { "positive" }));
    match family.adjust {
        Some(side) => {
            rows.push(format!("adjust = \"{}\" # where the reference lies: output or ground", side_name(side)))
        }
        None => {
            rows.push("# adjust = \"ground\" # if adjustable versions exist: where their reference lies".to_owned())
        }
    }
    if family.kind == crate::knowledge::FamilyKind::Series {
        let passes: Vec<&str> = Pass::ALL.iter().map(|(_, name)| *name).collect();
        rows.push("# pass = \"?\" # one of:".to_owned());
        rows.push(wrapped(&passes.join(", "), "#   ", "#   ", WIDTH).trim_end().to_owned());
    }
    rows.join("\n") + "\n"
}

fn side_name(side: AdjustSide) -> &'static str {
    match side {
        AdjustSide::Output => "output",
        AdjustSide::Ground => "ground",
        AdjustSide::SetCurrent => "set-current",
    }
}

/// The checks that ask for a figure of a sheet.
fn asked_by<'a>(entry: &SheetFigure, checks: &'a Checks) -> Vec<&'a str> {
    let asks = |check: &&Check| check.figures().iter().any(|figure| entry.decides(figure));
    checks.iter().filter(asks).map(|check| check.name.as_str()).collect()
}

/// Behind the meaning of a figure: which checks ask for it.
fn purpose(key: &str, checks: &Checks) -> String {
    let Some(entry) = SHEET.iter().find(|entry| entry.key == key) else { return String::new() };
    let names = asked_by(entry, checks);
    let asked = if names.is_empty() { String::new() } else { format!("; for {}", names.join(", ")) };
    format!("{}{asked}", entry.meaning)
}

fn plain_figures(family: &Family, checks: &Checks) -> String {
    let is_plain = |entry: &&SheetFigure| Family::FIGURES.iter().any(|(key, ..)| *key == entry.key);
    let all = SHEET.iter().filter(is_plain).filter(|entry| entry.concerns(family));
    let (asked, others): (Vec<&SheetFigure>, Vec<&SheetFigure>) =
        all.partition(|entry| !asked_by(entry, checks).is_empty());
    let mut text = String::new();
    for (list, about) in [(asked, ""), (others, "# Asked for by none of the checks at hand, but worth having:\n")] {
        if !list.is_empty() {
            let _ = write!(text, "\n{about}");
        }
        for entry in list {
            let places = if entry.key == "reference" { "? / ? / ?" } else { "?" };
            let _ = writeln!(text, "# {} = \"{places} {}\" # {}", entry.key, entry.unit, purpose(entry.key, checks));
        }
    }
    text
}

fn concerns(family: &Family, key: &str) -> bool {
    SHEET.iter().any(|entry| entry.key == key && entry.concerns(family))
}

fn dropout(family: &Family, checks: &Checks) -> String {
    if !concerns(family, "dropout") {
        return String::new();
    }
    format!(
        "\n# {}\n# [[dropout]]\n# at = \"? A\"\n# drop = \"? / ? V\"\n# defined = \"output ? mV below nominal\"\n",
        purpose("dropout", checks)
    )
}

fn capacitors(family: &Family, checks: &Checks) -> String {
    if !concerns(family, "output_capacitor") {
        return String::new();
    }
    let kinds = "required, recommended, recalled, optional (the part does without; then no minimum)";
    format!(
        "\n# [output_capacitor]\n# minimum = \"? uF\" # {}\n# kind = \"required\" # {kinds}\n\
         # basis = \"nominal\" # or effective: what must be left under bias, over temperature and tolerance\n\
         # esr = \"? .. ? ohm\" # {}\n# ceramic_allowed = true # if the sheet says that ceramics do\n\
         \n# [input_capacitor]\n# minimum = \"? uF\" # {}\n# kind = \"required\" # the same words\n\
         # if_far = true # if it is wanted only far from the supply's filter\n",
        purpose("output_capacitor", checks),
        purpose("output_capacitor.esr", checks),
        purpose("input_capacitor", checks)
    )
}

fn published_loop(family: &Family, checks: &Checks) -> String {
    if !concerns(family, "loop") {
        return String::new();
    }
    format!(
        "\n# {}\n# [loop]\n# gain = \"? dB\" # at low frequencies\n# poles = [\"? Hz\"] # inside the part: that of the \
         output is computed\n# zeros = []\n# output_resistance = \"? ohm\"\n",
        purpose("loop", checks)
    )
}

fn enable(family: &Family) -> String {
    let Some(enable) = &family.enable else { return String::new() };
    let active = if enable.active == Active::High { "high" } else { "low" };
    format!(
        "\n[enable]\nactive = \"{active}\" # by the pin's name: compare\nopen = \"unknown\" # on, off or undefined: what \
         an open pin does\n# on = \"? V\" # level at which the part is certainly on\n# off = \"? V\" # level at which it is \
         certainly off\n"
    )
}

fn packages(sketch: &Sketch) -> String {
    let mut text = String::new();
    for (name, package) in &sketch.family.packages {
        let role = |roles: &Vec<RoleName>| roles.iter().map(|role| role.name()).collect::<Vec<_>>().join(" or ");
        let pins: Vec<String> =
            package.pins.iter().map(|(number, roles)| format!("{} = \"{}\"", quoted(number), role(roles))).collect();
        let (name, pins) = (quoted(name), pins.join(", "));
        let _ = write!(text, "\n[packages.{name}]\npins = {{ {pins} }} # by the pins' names: compare\n");
        text.push_str("# junction_to_ambient = \"? C/W\" # junction to ambient on the sheet's board\n");
    }
    text
}

/// A text as a TOML string.
fn quoted(text: &str) -> String {
    format!("\"{}\"", inert(text).replace('\\', "\\\\").replace('"', "\\\""))
}
