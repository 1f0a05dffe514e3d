//! What no report on a netlist may leave unsaid.

use crate::circuit::DeviceKind;
use crate::review::Examination;

/// What a netlist cannot show, whatever the board.
const UNSEEN: &str = "Distance, copper and layout cannot be seen in a netlist.";
/// Who has the last word where a board can hurt somebody.
const LAST_WORD: &str = "the result is an aid to review; local codes and licensed practice decide.";

/// Most boards that are named.
const MOST_NAMES: usize = 5;

/// What a netlist cannot show; and, where a board can hurt somebody, who has the last word.
pub(super) fn caution(examination: &Examination) -> String {
    let mut text = UNSEEN.to_owned();
    let what: Vec<&str> =
        [("mains or a transformer", has_mains(examination)), ("a battery", has_battery(examination))]
            .into_iter()
            .filter(|(_, has)| *has)
            .map(|(what, _)| what)
            .collect();
    if !what.is_empty() {
        text.push_str(&format!(" This board has {}: {LAST_WORD}", what.join(" and ")));
    }
    text
}

/// The same of several boards, of which those named can hurt somebody; the names as they are to be shown.
pub(super) fn of_many(hazards: &[String]) -> String {
    let names: Vec<&str> = hazards.iter().take(MOST_NAMES).map(String::as_str).collect();
    let more = hazards.len() - names.len();
    let more = if more > 0 { format!(" and {more} more") } else { String::new() };
    let has = if hazards.len() == 1 { "has" } else { "have" };
    match names.join(", ") {
        names if names.is_empty() => UNSEEN.to_owned(),
        names => format!("{UNSEEN} {names}{more} {has} a battery, mains or a transformer: {LAST_WORD}"),
    }
}

/// Whether a board can hurt somebody.
pub(super) fn has_hazard(examination: &Examination) -> bool {
    has_mains(examination) || has_battery(examination)
}

fn has_mains(examination: &Examination) -> bool {
    let circuit = &examination.design.circuit;
    examination.board.supplies.iter().any(|supply| supply.ac.is_some())
        || circuit.devices().map(|id| circuit.device(id)).any(|device| device.kind == DeviceKind::Transformer)
}

fn has_battery(examination: &Examination) -> bool {
    let circuit = &examination.design.circuit;
    let told = |text: &str| {
        let text = text.to_lowercase();
        ["batt", "vbat", "cell", "lead-acid", "li-ion", "lithium"].iter().any(|word| text.contains(word))
    };
    let supplies = examination.board.supplies.iter();
    circuit.devices().map(|id| circuit.device(id)).any(|device| device.kind == DeviceKind::Battery)
        || circuit.nets().any(|net| told(&circuit.net(net).name))
        || supplies.filter_map(|supply| supply.standard.as_ref()).any(|standard| told(&standard.value.name))
}
