//! A board file that asks for what is not declared.

use std::collections::BTreeMap;
use std::path::Path;

use super::board::BoardResult;
use super::figures::title;
use super::inert::{guarded, inert, inert_short};
use super::layout::{padded, widest, wrapped};
use super::settle::{header, target_key, text, value};
use crate::board::{Board, Outline, Place};
use crate::facts::{Facts, RailOrigin, Subject};
use crate::quantity::{Table, print_amount, print_range};
use crate::review::{Ask, AskedKey, Asks, Examination, Hanging, asks};
use crate::source::Source;

/// Widest line of prose.
const WIDTH: usize = 100;
/// Most characters of a reason behind a value.
const REASON: usize = 60;
/// Most subjects of one check that are named.
const MOST_SUBJECTS: usize = 8;

/// A board file for a board: what its own file declares as it stands there, and as comments all that is worth
/// declaring, the most decisive first. As it stands it changes nothing.
///
/// # Errors
/// When the board's own file cannot be given as it stands, with the reason; or nothing of the netlist was read.
pub fn declare(board: &BoardResult) -> Result<String, String> {
    let Some(examination) = &board.examination else { return Err("nothing of the netlist could be read".to_owned()) };
    let facts = Facts::new(&examination.design, &examination.board, &board.knowledge);
    let asks = asks(&facts, &examination.findings);
    let own = examination.board.sources.iter().find(|source| Some(source.name()) == board.board_file.as_deref());
    match own {
        Some(own) => continued(own, &facts, &examination.board, &asks),
        None => Ok(guarded(&begun(board, examination, &facts, &asks))),
    }
}

/// A new board file.
fn begun(board: &BoardResult, examination: &Examination, facts: &Facts<'_>, asks: &Asks) -> String {
    let mut out = head(board);
    let board_table = asks.tables.iter().find(|ask| ask.table == Table::Board);
    out.push_str(&board_block(board, examination, facts, board_table));
    let others: Vec<&Ask> = asks.tables.iter().filter(|ask| ask.table != Table::Board).collect();
    let (decisive, quiet): (Vec<&Ask>, Vec<&Ask>) = others.into_iter().partition(|ask| ask.weight > 0);
    out.push_str(&sections(facts, &decisive, &quiet));
    if asks.left_out > 0 {
        let line = format!(
            "{} more guess{} behind the figures, and no verdict hangs on {} now; `railworthy explain BOARD.net PART` \
             shows them.",
            asks.left_out,
            if asks.left_out == 1 { " stands" } else { "es stand" },
            if asks.left_out == 1 { "it" } else { "them" }
        );
        out.push('\n');
        out.push_str(&prose(&line));
    }
    out
}

fn head(board: &BoardResult) -> String {
    let netlist = inert(&board.netlist);
    let save = stem(&board.netlist)
        .map_or_else(String::new, |stem| format!(" Save it as {}.railworthy.toml beside it.", inert(&stem)));
    let house = board.house_file.as_ref().map_or_else(String::new, |file| {
        format!(" What {} declares for all boards counts as long as this file does not say otherwise.", inert(file))
    });
    let lines = [
        format!("Board file of {netlist}: what a netlist cannot hold.{save}{house}"),
        "A line with no blank behind its `#` is a declaration that could be made. To make it, take the `#` from the \
         lines of its table and write what is true in place of what stands there: a guess is what is taken now, an \
         example shows no more than the form. A range holds everything that occurs, from the lowest to the highest, \
         with its unit. As it stands, this file changes nothing."
            .to_owned(),
    ];
    lines.map(|line| prose(&line)).join("#\n")
}

/// The netlist's name without folder and ending.
fn stem(netlist: &str) -> Option<String> {
    let name = Path::new(netlist).file_stem()?.to_string_lossy().into_owned();
    (!netlist.starts_with('<')).then_some(name)
}

/// `[board]`, with the grounds that were found.
fn board_block(board: &BoardResult, examination: &Examination, facts: &Facts<'_>, ask: Option<&Ask>) -> String {
    let circuit = facts.circuit();
    let mut grounds: Vec<&str> = circuit.grounds().map(|net| circuit.net(net).name.as_str()).collect();
    grounds.sort_unstable();
    let grounds: Vec<String> = grounds.into_iter().take(MOST_SUBJECTS).map(|name| inert(name).into_owned()).collect();
    let told = match grounds.is_empty() {
        true => "No net is known as a ground".to_owned(),
        false => format!("Known as ground: {}", grounds.join(", ")),
    };
    let mut lines = format!("\n{}", prose(&format!("{told}; `ground = [\"NET\"]` names others.{}", hanging(ask))));
    let mut rows = Vec::new();
    if examination.board.title.is_none() {
        let name = stem(&board.netlist).unwrap_or_else(|| "board".to_owned());
        rows.push(("title", text(&name), "what reports call the board".to_owned()));
    }
    rows.extend(ask.into_iter().flat_map(|ask| &ask.keys).map(row));
    if examination.board.ambient.is_none() && rows.iter().all(|(key, ..)| *key != "ambient") {
        let now = facts.ambient();
        let range = now.shown().map_or_else(String::new, |range| print_range(range, now.dimension()));
        rows.push(("ambient", text(&range), "guess; the air around the board".to_owned()));
    }
    if rows.is_empty() {
        return String::new();
    }
    lines.push_str(&entry(Table::Board, "", &rows));
    lines
}

/// The board's own file as it stands, with what is not asked for in it yet: keys of its entries behind their names,
/// new entries at its end.
fn continued(own: &Source, facts: &Facts<'_>, board: &Board, asks: &Asks) -> Result<String, String> {
    harmless(own)?;
    let outline = Outline::of(own);
    let mut inserted: BTreeMap<usize, String> = BTreeMap::new();
    let (mut decisive, mut quiet, mut apart) = (Vec::new(), Vec::new(), String::new());
    for ask in &asks.tables {
        let (table, target) = (ask.table.name(), ask.target.as_str());
        let keys: Vec<AskedKey> = ask.keys.iter().filter(|key| !is_told(&outline, ask, key)).cloned().collect();
        if keys.is_empty() {
            continue;
        }
        let rows: Vec<Row> = keys.iter().map(row).collect();
        let line = line_in(own, board, ask);
        if let Some(line) = outline.line_of(table, target) {
            inserted.entry(line).or_default().push_str(&keyed(&rows, 0));
        } else if line.is_some() || outline.is_closed(table) {
            let place = line.map_or_else(|| format!("For `{table}`"), |line| format!("For line {line}"));
            let named = rows.iter().map(|(key, value, why)| format!("{key} = {value} ({why})"));
            let named = named.collect::<Vec<_>>().join(", ");
            apart.push_str(&prose(&format!("{place}, {}: {named}", inert(&called(ask)))));
        } else if ask.weight > 0 {
            decisive.push(Ask { keys, ..ask.clone() });
        } else {
            quiet.push(Ask { keys, ..ask.clone() });
        }
    }
    let mut out = String::new();
    for (number, line) in own.text().split_inclusive('\n').enumerate() {
        out.push_str(line);
        if let Some(more) = inserted.remove(&number) {
            out.push_str(if line.ends_with('\n') { "" } else { "\n" });
            out.push_str(&guarded(&more));
        }
    }
    let tail = sections(facts, &decisive.iter().collect::<Vec<_>>(), &quiet.iter().collect::<Vec<_>>());
    if !(tail.is_empty() && apart.is_empty()) {
        out.push_str(if out.is_empty() || out.ends_with('\n') { "\n" } else { "\n\n" });
        out.push_str(&prose(
            "Asked for by `railworthy declare`: take the `#` from a whole table and write what is true.",
        ));
        out.push_str(&guarded(&apart));
        out.push_str(&guarded(&tail));
    }
    Ok(out)
}

/// Whether the file is one that can be printed as it stands.
fn harmless(own: &Source) -> Result<(), String> {
    for (number, line) in own.text().lines().enumerate() {
        let acts = line.chars().any(|sign| super::acts(sign) && !matches!(sign, '\t' | '\r'));
        if acts || guarded(line) != line {
            return Err(format!(
                "line {} of {} holds signs that act on what shows them, and cannot be given as it stands; write them as \
                 escapes",
                number + 1,
                own.name()
            ));
        }
    }
    Ok(())
}

/// Whether a key is declared or asked for in the file, or another is there that excludes it.
fn is_told(outline: &Outline, ask: &Ask, key: &AskedKey) -> bool {
    let has = |key| outline.has(ask.table.name(), &ask.target, key);
    let excluded = (ask.table, key.settle.key) == (Table::Supply, "voltage") && (has("standard") || has("ac"));
    excluded || has(key.settle.key)
}

/// The line, from 1, on which the file has an entry about a target.
fn line_in(own: &Source, board: &Board, ask: &Ask) -> Option<usize> {
    let target = ask.target.as_str();
    let place: Option<&Place> = match ask.table {
        Table::Board => board.title.as_ref().map(|title| &title.place).filter(|place| !place.is_shared()),
        Table::Supply => board.supply(target).map(|entry| &entry.nodes.place),
        Table::Load => board.load(target).map(|entry| &entry.net.place),
        Table::Rail => board.rail(target).map(|entry| &entry.net.place),
        Table::Part => board.part(target).map(|entry| &entry.reference.place),
    };
    place.filter(|place| place.file() == Some(own.name()))?.line()
}

/// What decides, then what does not.
fn sections(facts: &Facts<'_>, decisive: &[&Ask], quiet: &[&Ask]) -> String {
    let mut out: String = decisive.iter().map(|ask| block(facts, ask)).collect();
    if !quiet.is_empty() {
        out.push('\n');
        out.push_str(&prose("No verdict hangs on these as long as what is taken holds:"));
        out.extend(quiet.iter().map(|ask| block(facts, ask)));
    }
    out
}

/// A key, its value as TOML, and where that comes from.
type Row = (&'static str, String, String);

/// An entry with a line about it.
fn block(facts: &Facts<'_>, ask: &Ask) -> String {
    let rows: Vec<Row> = ask.keys.iter().map(row).collect();
    let line = format!("{}{}{}", inert(&called(ask)), fed(facts, ask), hanging(Some(ask)));
    format!("\n{}{}", prose(&line), entry(ask.table, &ask.target, &rows))
}

fn called(ask: &Ask) -> String {
    match ask.table {
        Table::Board => "Board".to_owned(),
        Table::Supply => format!("Supply {}", ask.target),
        Table::Load => format!("Load on {}", ask.target),
        Table::Rail => format!("Rail {}", ask.target),
        Table::Part => ask.target.clone(),
    }
}

/// What feeds a net whose voltage is asked for, or what a part is.
fn fed(facts: &Facts<'_>, ask: &Ask) -> String {
    let circuit = facts.circuit();
    if ask.table == Table::Part {
        let part = circuit.device_named(&ask.target).map(|device| circuit.device(device).value.as_str());
        return part.map_or_else(String::new, |value| format!(", {}", inert_short(value, REASON)));
    }
    if ask.table != Table::Supply {
        return String::new();
    }
    let Some(net) = circuit.net_named(&ask.target) else { return String::new() };
    match facts.rail(net).origin {
        RailOrigin::Through { device, from } => {
            let (device, from) = (&circuit.device(device).reference, &circuit.net(from).name);
            format!(", behind {} from {}", inert(device), inert(from))
        }
        RailOrigin::Regulator(id) => facts
            .regulator(Subject::Regulator(id))
            .map_or_else(String::new, |made| format!(", made by {}", inert(&facts.part_of(made).reference))),
        _ => String::new(),
    }
}

/// What hangs on an entry.
fn hanging(ask: Option<&Ask>) -> String {
    let Some(ask) = ask else { return String::new() };
    let list = |hanging: &[Hanging]| {
        let each = hanging.iter().map(|one| {
            let more = one.subjects.len().saturating_sub(MOST_SUBJECTS);
            let more = if more > 0 { format!(" and {more} more") } else { String::new() };
            let shown: Vec<&str> = one.subjects.iter().take(MOST_SUBJECTS).map(String::as_str).collect();
            format!("{} of {}{more} ({})", inert(&one.check), inert(&shown.join(", ")), one.verdict.name())
        });
        each.collect::<Vec<_>>().join(", ")
    };
    let mut out = String::new();
    if !ask.decides.is_empty() {
        out.push_str(&format!("; decides {}", list(&ask.decides)));
    }
    if !ask.concerns.is_empty() {
        out.push_str(&format!("; plays into {}", list(&ask.concerns)));
    }
    out
}

/// A key as it would be declared.
fn row(key: &AskedKey) -> Row {
    let source = inert_short(&title(&key.source), REASON);
    let because = |word: &str| if source.is_empty() { word.to_owned() } else { format!("{word}; {source}") };
    if let Some(word) = &key.word {
        return (key.settle.key, text(word), because("taken for this now"));
    }
    match taken(key) {
        Some(now) => (key.settle.key, text(&now), because("guess")),
        None => (key.settle.key, value(key.settle.example), because("example")),
    }
}

/// What is taken now as a board file reads it; `None` where it is open at an end.
fn taken(key: &AskedKey) -> Option<String> {
    let (range, dimension) = key.taken?;
    let bounded = range.low().abs() < f64::MAX / 2.0 && range.high().abs() < f64::MAX / 2.0;
    let single = key.settle.key.starts_with("minimum_");
    bounded.then(|| if single { print_amount(range.nominal(), dimension) } else { print_range(range, dimension) })
}

/// The commented lines of an entry.
fn entry(table: Table, target: &str, rows: &[Row]) -> String {
    let name = target_key(table);
    let width = name.map_or(0, str::len);
    let width = rows.iter().map(|(key, ..)| key.len()).chain([width]).max().unwrap_or(0);
    let mut out = format!("#{}\n", header(table));
    out.extend(name.map(|key| format!("#{} = {}\n", padded(key, width), text(target))));
    out + &keyed(rows, width)
}

/// Commented keys, aligned, with their reasons.
fn keyed(rows: &[Row], width: usize) -> String {
    let values = widest(rows.iter().map(|(_, value, _)| value.as_str()));
    let line = |(key, value, why): &Row| format!("#{} = {}  # {why}\n", padded(key, width), padded(value, values));
    rows.iter().map(line).collect()
}

fn prose(line: &str) -> String {
    wrapped(line, "# ", "# ", WIDTH)
}
