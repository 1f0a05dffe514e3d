//! Batteries on a net: what their values and symbols tell of the voltage.

use super::Facts;
use crate::circuit::{Device, DeviceKind, NetId};
use crate::knowledge::Supply;
use crate::quantity::Range;

/// A lithium cell in volts: empty, nominal, full.
const LITHIUM_CELL: (f64, f64, f64) = (3.0, 3.7, 4.2);
/// No battery of a board has more cells of one kind in series.
const MOST_CELLS: u32 = 40;

/// The voltage of a battery on the net, or of a net with a battery's name beside a lithium charger, with its source.
pub(super) fn battery(facts: &Facts<'_>, net: NetId, name: &str) -> Option<(Range, String)> {
    let circuit = facts.circuit();
    let battery_name = name.to_ascii_uppercase().contains("BAT");
    let mut found = None;
    for (device, pin) in circuit.fitted_on(net) {
        let part = circuit.device(device);
        let positive = || part.pins.get(pin).is_some_and(|pin| pin.name.contains('+') || pin.number == "1");
        if part.kind == DeviceKind::Battery && positive() {
            found = by_value(facts, part).or_else(|| lone_cell(part)).or(found);
        } else if battery_name && is_lithium_charger(part) {
            found = Some(lithium(&format!("the charger {}", part.reference)));
        }
    }
    found
}

fn lithium(source: &str) -> (Range, String) {
    let (low, nominal, high) = LITHIUM_CELL;
    (Range::clamped(low, nominal, high), format!("{source}, taken as one lithium cell"))
}

fn texts(part: &Device) -> String {
    format!("{} {} {}", part.part, part.description, part.keywords).to_ascii_lowercase()
}

fn is_lithium_charger(part: &Device) -> bool {
    let text = texts(part);
    let charger = text.contains("charge") && text.contains("li") && !text.contains("charge pump");
    part.kind == DeviceKind::Integrated && charger
}

/// The symbol of one cell, whose value says neither what it is nor that there are more.
fn lone_cell(part: &Device) -> Option<(Range, String)> {
    let text = texts(part);
    let one = text.contains("cell") && !text.contains("multiple") && !text.contains("cells");
    (one && counted(&part.value).0 == 1).then(|| lithium(&format!("the cell {}", part.reference)))
}

/// The chemistry that a battery's value names, times the number before it: `CR2032`, `4xNiMH`, `LiPo 2S`.
fn by_value(facts: &Facts<'_>, part: &Device) -> Option<(Range, String)> {
    let (count, kind) = counted(&part.value);
    let words = kind.split(|each: char| !each.is_alphanumeric() && each != '-').filter(|word| !word.is_empty());
    // Of several kinds the one with most cells is meant: `LiPo 2S`.
    let higher =
        |one: &&Supply, other: &&Supply| one.voltage.value.nominal().total_cmp(&other.voltage.value.nominal());
    let supply = facts
        .knowledge()
        .supply(kind)
        .or_else(|| words.filter_map(|word| facts.knowledge().supply(word)).max_by(higher))?;
    let source = match count {
        1 => format!("value of {}, taken as {}", part.reference, supply.name),
        count => format!("value of {}, taken as {count} times {}", part.reference, supply.name),
    };
    Some((supply.voltage.value.scaled(f64::from(count)), source))
}

/// The number of cells that a value begins with, as in `4xNiMH`, and what follows it.
fn counted(value: &str) -> (u32, &str) {
    let value = value.trim();
    let digits = value.bytes().take_while(u8::is_ascii_digit).count();
    let count = value.get(..digits).and_then(|digits| digits.parse().ok());
    let rest = value.get(digits..).unwrap_or("").trim_start().strip_prefix(['x', 'X', '×', '*']);
    match (count, rest) {
        (Some(count @ 1..=MOST_CELLS), Some(rest)) => (count, rest.trim()),
        _ => (1, value),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_value_may_begin_with_the_number_of_cells() {
        assert_eq!(counted("4xNiMH"), (4, "NiMH"));
        assert_eq!(counted("3 x AA"), (3, "AA"));
        assert_eq!(counted("CR2032"), (1, "CR2032"));
        assert_eq!(counted("18650"), (1, "18650"));
        assert_eq!(counted("0xAA"), (1, "0xAA"));
        assert_eq!(counted("99999999999x"), (1, "99999999999x"));
        assert_eq!(counted(""), (1, ""));
    }
}
