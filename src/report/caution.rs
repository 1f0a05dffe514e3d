//! What no report on a netlist may leave unsaid.

use crate::circuit::DeviceKind;
use crate::review::Examination;

/// What a netlist cannot show; and, where a board can hurt somebody, who has the last word.
pub(super) fn caution(examination: &Examination) -> String {
    let mut text = "Distance, copper and layout cannot be seen in a netlist.".to_owned();
    let what: Vec<&str> =
        [("mains or a transformer", has_mains(examination)), ("a battery", has_battery(examination))]
            .into_iter()
            .filter(|(_, has)| *has)
            .map(|(what, _)| what)
            .collect();
    if !what.is_empty() {
        text.push_str(&format!(
            " This board has {}: the result is an aid to review; local codes and licensed practice decide.",
            what.join(" and ")
        ));
    }
    text
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
