//! What a device is: told by its library, then its symbol's name, its symbol's text, its pins, its reference.
//!
//! Each source of clues is a file of its own that gives an answer or none. An answer that the pins speak against is
//! dropped: a `CP2102` is no polarized capacitor.

mod library;
mod numbers;
mod pins;
mod polarity;
mod reference;
mod symbol;
mod text;

use super::model::{DeviceKind, Pin, Polarity};

/// What is known of a device before its kind is.
pub(super) struct Clues<'a> {
    pub(super) library: &'a str,
    pub(super) part: &'a str,
    pub(super) description: &'a str,
    pub(super) keywords: &'a str,
    pub(super) pins: &'a [Pin],
    pub(super) reference: &'a str,
    pub(super) value: &'a str,
}

/// What a device turned out to be.
pub(super) struct Nature {
    pub(super) kind: DeviceKind,
    pub(super) polarity: Option<Polarity>,
    pub(super) polarized: bool,
}

pub(super) fn nature(clues: &Clues<'_>) -> Nature {
    let symbol = symbol_name(clues.library, clues.part).to_uppercase();
    let text = format!("{} {}", clues.description, clues.keywords).to_lowercase();
    let kind = refined(kind(clues, &symbol, &text), clues, &text);
    let polarity = match kind {
        DeviceKind::Bipolar | DeviceKind::Mosfet | DeviceKind::Jfet => {
            polarity::polarity(&symbol, &text).unwrap_or_else(|| numbers::polarity(&clues.value.to_uppercase()))
        }
        _ => None,
    };
    let polarized = kind == DeviceKind::Capacitor && symbol::is_polarized(&symbol, &text, clues.pins);
    Nature { kind, polarity, polarized }
}

fn kind(clues: &Clues<'_>, symbol: &str, text: &str) -> DeviceKind {
    let library = library_name(clues.library).to_lowercase();
    let fits = |kind: &DeviceKind| pins::fits(*kind, clues.pins);
    library::kind(&library, symbol, text)
        .filter(fits)
        .or_else(|| numbers::integrated(symbol))
        .or_else(|| symbol::kind(symbol).filter(fits))
        .or_else(|| text::kind(text).filter(fits))
        .or_else(|| pins::kind(clues.pins))
        .or_else(|| reference::kind(clues.reference, clues.part.is_empty()).filter(fits))
        .unwrap_or(if clues.pins.len() > 3 { DeviceKind::Integrated } else { DeviceKind::Unknown })
}

/// A plain diode or transistor symbol with a number as its value is what the number says.
fn refined(kind: DeviceKind, clues: &Clues<'_>, text: &str) -> DeviceKind {
    if kind != DeviceKind::Diode {
        return kind;
    }
    let value = clues.value.trim().to_uppercase();
    numbers::diode(&value).or_else(|| text::diode(text)).unwrap_or(DeviceKind::Diode)
}

/// A library's name without what rescuing or caching added: `gps-rescue`, `TOAD-cache` hold parts of any library.
fn library_name(library: &str) -> &str {
    if is_rescue(library) || library.to_lowercase().ends_with("-cache") { "" } else { library }
}

fn is_rescue(library: &str) -> bool {
    library.to_lowercase().ends_with("-rescue")
}

/// A symbol's name without what rescuing it added: `INA180` for `INA180-canhw-gps-rescue`, `LED` for
/// `LED-RESCUE-board`, and without a library before a colon.
pub(super) fn symbol_name<'a>(library: &str, part: &'a str) -> &'a str {
    let name = part.rsplit_once(':').map_or(part, |(_, name)| name);
    if let Some((name, _)) = name.split_once("-RESCUE-") {
        return name;
    }
    if !is_rescue(library) {
        return name;
    }
    let project = library.get(..library.len().saturating_sub("-rescue".len())).unwrap_or_default();
    let cut = name.find("-rescue").and_then(|at| name.get(..at)).unwrap_or(name);
    let cut = strip_word(cut, project).unwrap_or(cut);
    // What is left ends in the nickname of the library that the symbol came from, a cache's with the project's name.
    let cut = cut.rsplit_once('-').map_or(cut, |(name, _)| name);
    strip_word(cut, project).unwrap_or(cut)
}

fn strip_word<'a>(name: &'a str, word: &str) -> Option<&'a str> {
    name.strip_suffix(word)?.strip_suffix('-').filter(|rest| !word.is_empty() && !rest.is_empty())
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::circuit::model::PinType;
    use crate::source::Span;

    fn pins(list: &[(&str, PinType)]) -> Vec<Pin> {
        let pin = |(index, (name, kind)): (usize, &(&str, PinType))| Pin {
            number: (index + 1).to_string(),
            name: (*name).to_owned(),
            kind: *kind,
            marked_open: false,
            net: None,
            span: Span::default(),
        };
        list.iter().enumerate().map(pin).collect()
    }

    fn passive(names: &[&str]) -> Vec<Pin> {
        pins(&names.iter().map(|name| (*name, PinType::Passive)).collect::<Vec<_>>())
    }

    fn kind_of(
        library: &str,
        part: &str,
        description: &str,
        pins: &[Pin],
        reference: &str,
        value: &str,
    ) -> DeviceKind {
        nature(&Clues { library, part, description, keywords: "", pins, reference, value }).kind
    }

    #[test]
    fn rescued_symbols_lose_what_rescuing_added() {
        assert_eq!(symbol_name("sensors-rescue", "INA180-canhw-sensors-rescue-sensors-rescue"), "INA180");
        assert_eq!(symbol_name("sensors-rescue", "MIC5365-1.8-canhw-sensors-rescue"), "MIC5365-1.8");
        assert_eq!(symbol_name("fill_sensing-rescue", "INA180-canhw"), "INA180");
        assert_eq!(symbol_name("recovery_CAN-rescue", "A1101ELHL-Sensor_Magnetic"), "A1101ELHL");
        assert_eq!(symbol_name("recovery_CAN-rescue", "Raven4-recovery_CAN-cache"), "Raven4");
        assert_eq!(symbol_name("HaRTK-rescue", "7805-RESCUE-HaRTK"), "7805");
        assert_eq!(symbol_name("Device", "R"), "R");
        assert_eq!(symbol_name("", "Device:R_US"), "R_US");
        assert_eq!(symbol_name("-rescue", "-rescue"), "");
    }

    #[test]
    fn plain_symbols_are_known_from_any_library() {
        let two = passive(&["", ""]);
        assert_eq!(kind_of("agg-kicad", "R", "", &two, "R7", "10k"), DeviceKind::Resistor);
        assert_eq!(kind_of("device", "CP1_Small", "", &two, "C7", "10u"), DeviceKind::Capacitor);
        assert_eq!(kind_of("device", "INDUCTOR", "", &two, "x", "47u"), DeviceKind::Inductor);
        assert_eq!(kind_of("x-rescue", "LED-RESCUE-x", "", &passive(&["K", "A"]), "D1", "red"), DeviceKind::Led);
        assert_eq!(kind_of("agg-kicad", "PFET_GDS", "", &passive(&["D", "G", "S"]), "Q1", ""), DeviceKind::Mosfet);
        assert_eq!(kind_of("conn", "CONN_5X2", "", &passive(&["", "", "", ""]), "P1", ""), DeviceKind::Connector);
    }

    #[test]
    fn a_name_that_the_pins_speak_against_does_not_count() {
        let bridge = pins(&[
            ("VDD", PinType::PowerIn),
            ("GND", PinType::PowerIn),
            ("TXD", PinType::Output),
            ("RXD", PinType::Input),
            ("RST", PinType::Input),
        ]);
        assert_eq!(kind_of("mine", "CP2102", "USB bridge", &bridge, "U1", "CP2102"), DeviceKind::Integrated);
        let regulator = pins(&[("GND", PinType::Input), ("VO", PinType::PowerOut), ("VI", PinType::Input)]);
        assert_eq!(kind_of("flem", "AMS117", "", &regulator, "U1", "AMS117"), DeviceKind::Integrated);
    }

    #[test]
    fn a_shunt_reference_is_no_diode() {
        let pins = passive(&["K", "A"]);
        assert_eq!(kind_of("mine", "LM4040DIM3-2.5", "", &pins, "D1", ""), DeviceKind::Integrated);
        assert_eq!(kind_of("Reference_Voltage", "LM385Z-1.2", "", &pins, "U1", ""), DeviceKind::Integrated);
        assert_eq!(kind_of("Device", "D", "Diode", &pins, "D1", "1N4148"), DeviceKind::Diode);
    }

    #[test]
    fn a_number_tells_a_plain_diode_symbol_apart() {
        let pins = passive(&["K", "A"]);
        assert_eq!(kind_of("device", "D", "Diode", &pins, "D1", "1N5819"), DeviceKind::Schottky);
        assert_eq!(kind_of("device", "D", "Diode", &pins, "D1", "BZX84C5V6"), DeviceKind::Zener);
    }

    #[test]
    fn without_a_library_the_reference_tells() {
        assert_eq!(kind_of("", "", "", &passive(&["", ""]), "FB3", "600R"), DeviceKind::Ferrite);
        assert_eq!(kind_of("", "", "", &passive(&["", "", ""]), "Q1", "BC547"), DeviceKind::Bipolar);
        assert_eq!(kind_of("", "", "", &passive(&["", "", ""]), "U1", "OKI-78SR-5"), DeviceKind::Integrated);
        assert_eq!(kind_of("", "", "", &passive(&["", ""]), "82p1", "82p"), DeviceKind::Unknown);
    }
}
