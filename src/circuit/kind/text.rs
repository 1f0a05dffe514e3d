//! Kinds by a symbol's description and key words.

use super::super::model::DeviceKind;

use DeviceKind::{
    Battery, Bipolar, Bridge, Capacitor, Connector, Crystal, Diode, Ferrite, Fuse, Inductor, Integrated, Jfet, Led,
    Mechanical, Mosfet, OpAmp, Optocoupler, OtherSemiconductor, Potentiometer, Resistor, ResistorNetwork, Schottky,
    Switch, Thermistor, Transformer, Zener,
};

/// Phrases in lower case, the first that is found counts: what integrated parts say of themselves comes first, since
/// their descriptions name the discrete parts inside them.
const PHRASES: &[(&str, DeviceKind)] = &[
    ("voltage reference", Integrated),
    ("shunt regulator", Integrated),
    ("linear regulator", Integrated),
    ("low dropout", Integrated),
    ("low-dropout", Integrated),
    ("ldo", Integrated),
    ("dc-dc", Integrated),
    ("dc/dc", Integrated),
    ("converter", Integrated),
    ("controller", Integrated),
    ("driver", Integrated),
    ("transceiver", Integrated),
    ("microcontroller", Integrated),
    ("translator", Integrated),
    ("digital isolator", Integrated),
    ("operational amplifier", OpAmp),
    ("opamp", OpAmp),
    ("op-amp", OpAmp),
    ("op amp", OpAmp),
    ("comparator", OpAmp),
    ("optocoupler", Optocoupler),
    ("opto-coupler", Optocoupler),
    ("photocoupler", Optocoupler),
    ("optoisolator", Optocoupler),
    ("thyristor", OtherSemiconductor),
    ("triac", OtherSemiconductor),
    ("igbt", OtherSemiconductor),
    ("phototransistor", OtherSemiconductor),
    ("unijunction", OtherSemiconductor),
    ("solar cell", OtherSemiconductor),
    ("jfet", Jfet),
    ("mosfet", Mosfet),
    ("npn", Bipolar),
    ("pnp", Bipolar),
    ("bipolar transistor", Bipolar),
    ("darlington", Bipolar),
    ("bridge rectifier", Bridge),
    ("rectifier bridge", Bridge),
    ("diode bridge", Bridge),
    ("zener", Zener),
    ("transient voltage suppress", Zener),
    ("tvs", Zener),
    ("varistor", Zener),
    ("esd protection diode", Zener),
    ("schottky", Schottky),
    ("light emitting diode", Led),
    ("light-emitting diode", Led),
    ("led diode", Led),
    ("diode", Diode),
    ("rectifier", Diode),
    ("resettable fuse", Fuse),
    ("polyfuse", Fuse),
    ("fuse", Fuse),
    ("ferrite bead", Ferrite),
    ("potentiometer", Potentiometer),
    ("trimmer", Potentiometer),
    ("variable resistor", Potentiometer),
    ("resistor network", ResistorNetwork),
    ("resistor array", ResistorNetwork),
    ("resistor pack", ResistorNetwork),
    ("thermistor", Thermistor),
    ("photoresistor", Thermistor),
    ("resistor", Resistor),
    ("capacitor", Capacitor),
    ("transformer", Transformer),
    ("inductor", Inductor),
    ("choke", Inductor),
    ("crystal", Crystal),
    ("resonator", Crystal),
    ("test point", Mechanical),
    ("mounting hole", Mechanical),
    ("connector", Connector),
    ("header", Connector),
    ("socket", Connector),
    ("screw terminal", Connector),
    ("battery holder", Battery),
    ("coin cell", Battery),
    ("relay", Switch),
    ("switch", Switch),
    ("push button", Switch),
];

pub(super) fn kind(text: &str) -> Option<DeviceKind> {
    PHRASES.iter().find(|(phrase, _)| has_word(text, phrase)).map(|(_, kind)| *kind)
}

/// What sort of diode a description speaks of, where it says so.
pub(super) fn diode(text: &str) -> Option<DeviceKind> {
    const SORTS: &[(&str, DeviceKind)] = &[
        ("schottky", Schottky),
        ("zener", Zener),
        ("transient voltage suppress", Zener),
        ("tvs", Zener),
        ("transil", Zener),
        ("suppressor", Zener),
        ("esd protection", Zener),
        ("bridge", Bridge),
        ("light emitting", Led),
    ];
    SORTS.iter().find(|(phrase, _)| has_word(text, phrase)).map(|(_, kind)| *kind)
}

/// Whether a phrase begins at the start of a word: `ldo` is not in `buildout`.
fn has_word(text: &str, phrase: &str) -> bool {
    text.match_indices(phrase).any(|(at, _)| {
        text.get(..at).and_then(|before| before.chars().next_back()).is_none_or(|before| !before.is_alphanumeric())
    })
}
