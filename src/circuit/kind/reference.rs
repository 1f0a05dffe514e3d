//! Kinds by the letters that a reference begins with.

use super::super::model::DeviceKind;

use DeviceKind::{
    Battery, Bipolar, Bridge, Capacitor, Connector, Crystal, Diode, Ferrite, Fuse, Inductor, Integrated, Led,
    Mechanical, NetTie, Optocoupler, Potentiometer, Resistor, ResistorNetwork, Switch, Thermistor, Transformer,
    Zener,
};

const LETTERS: &[(&str, DeviceKind)] = &[
    ("R", Resistor),
    ("RS", Resistor),
    ("RV", Potentiometer),
    ("VR", Potentiometer),
    ("POT", Potentiometer),
    ("RP", ResistorNetwork),
    ("RN", ResistorNetwork),
    ("RM", ResistorNetwork),
    ("TH", Thermistor),
    ("NTC", Thermistor),
    ("C", Capacitor),
    ("L", Inductor),
    ("FB", Ferrite),
    ("FL", Ferrite),
    ("F", Fuse),
    ("D", Diode),
    ("CR", Diode),
    ("DZ", Zener),
    ("Z", Zener),
    ("ZD", Zener),
    ("TVS", Zener),
    ("LED", Led),
    ("BR", Bridge),
    ("Q", Bipolar),
    ("TR", Bipolar),
    ("U", Integrated),
    ("IC", Integrated),
    ("J", Connector),
    ("P", Connector),
    ("CN", Connector),
    ("CON", Connector),
    ("X", Connector),
    ("TB", Connector),
    ("BT", Battery),
    ("BAT", Battery),
    ("SW", Switch),
    ("S", Switch),
    ("K", Switch),
    ("JP", Switch),
    ("SJ", Switch),
    ("NT", NetTie),
    ("TP", Mechanical),
    ("MH", Mechanical),
    ("H", Mechanical),
    ("FID", Mechanical),
    ("Y", Crystal),
    ("XTAL", Crystal),
    ("T", Transformer),
    ("OK", Optocoupler),
    ("OC", Optocoupler),
];

/// The kind that a reference's letters stand for, where digits and nothing else follow them. `alone` says that there is
/// no symbol: then a unit's letter or free words behind are passed over, since nothing else tells.
pub(super) fn kind(reference: &str, alone: bool) -> Option<DeviceKind> {
    let digits = reference.find(|letter: char| letter.is_ascii_digit() || letter == '?')?;
    let (letters, rest) = (reference.get(..digits)?, reference.get(digits..)?);
    if !alone && !rest.chars().all(|letter| letter.is_ascii_digit() || letter == '?') {
        return None;
    }
    LETTERS.iter().find(|(known, _)| letters.eq_ignore_ascii_case(known)).map(|(_, kind)| *kind)
}
