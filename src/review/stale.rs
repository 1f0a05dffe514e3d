//! A netlist that was exported before the schematic took its present form.

use super::notice::{Notice, ReviewCheck, Round};
use crate::source::Location;

/// Most names that a message lists.
const MOST_NAMES: usize = 3;

/// Whether the netlist is an export of the schematic beside it as that is now.
pub(super) const STALE: ReviewCheck = ReviewCheck {
    name: "stale-export",
    group: "review",
    asks: "Is the netlist an export of the schematic as it is now?",
    grounds: "A part of the netlist whose symbol is on none of the schematic sheets beside it has been deleted or \
              replaced since the export: what is judged is not what is drawn. Where every part is there, a sheet that \
              was written more than a minute behind the netlist may hold changes that the netlist lacks; a clone or an \
              unpacked archive writes both within seconds. Asked of sheets that hold parts of the netlist and were read \
              to their end.",
    may_be_accepted: true,
    find: stale,
};

fn stale(round: &Round<'_>) -> Vec<Notice> {
    without_symbol(round).or_else(|| newer(round)).into_iter().collect()
}

/// The parts that are no longer drawn: the export is certainly an old one.
fn without_symbol(round: &Round<'_>) -> Option<Notice> {
    let gone = round.sheets.without_symbol(round.netlist);
    let parts: Vec<String> = gone.iter().map(|component| component.reference.clone()).collect();
    let first = gone.first()?;
    let are = if parts.len() == 1 { "is" } else { "are" };
    Some(Notice {
        message: format!("the netlist is older than its schematic: {} {are} no longer drawn", listed(&parts)),
        about: format!("not on {}", round.sheets.of(first)?.source().name()),
        place: Location::new(&round.netlist.source, first.reference_span),
        parts,
        identity: gone.iter().filter_map(|component| component.ids.first().cloned()).collect(),
        ..notice(round)
    })
}

/// The sheets that were written well behind the netlist.
fn newer(round: &Round<'_>) -> Option<Notice> {
    let used = round.sheets.used();
    let names: Vec<String> =
        used.iter().filter(|sheet| sheet.is_newer()).map(|sheet| sheet.source().name().to_owned()).collect();
    // Where the board lies is not what is found.
    let file = |name: &String| name.rsplit(['/', '\\']).next().unwrap_or(name).to_owned();
    let identity = names.iter().map(file).collect();
    let were = if names.len() == 1 { "was" } else { "were" };
    let message = format!("the netlist may be older than its schematic: {} {were} written after it", listed(&names));
    (!names.is_empty()).then(|| Notice { message, identity, ..notice(round) })
}

/// What both have in common.
fn notice(round: &Round<'_>) -> Notice {
    Notice {
        message: String::new(),
        hints: vec!["export the netlist again from the schematic editor".to_owned()],
        place: Location::new(&round.netlist.source, round.netlist.schematic_span),
        about: "exported from here".to_owned(),
        subject: String::new(),
        parts: Vec::new(),
        nets: Vec::new(),
        identity: Vec::new(),
    }
}

/// `U3, C7, C8 and 2 more`.
fn listed(names: &[String]) -> String {
    let shown = names.iter().take(MOST_NAMES).map(String::as_str).collect::<Vec<_>>().join(", ");
    match names.len().saturating_sub(MOST_NAMES) {
        0 => shown,
        more => format!("{shown} and {more} more"),
    }
}
