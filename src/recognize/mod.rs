//! Finds regulators and references, their dividers, feeds and capacitor banks.
//!
//! A device goes through these steps, each in a file of its own: its texts are matched against the families
//! (`identity`, `family_match`), its pins are read by name (`pin_name`), its text by sense (`words`), then it is decided
//! what it is (`kind`), which voltage it is made for (`nominal`, `voltage_code`), what each pin does (`roles`), how many
//! outputs it has (`outputs`), and what is wired around it (`divider`, `feed`, `bank`). Rules are general: names of
//! parts stand in family files, never here.

mod bank;
mod built_up;
mod declared;
mod device_match;
mod divider;
mod drawn;
mod family_match;
mod feed;
mod find;
mod identity;
mod in_place;
mod kind;
mod makers;
mod model;
mod named;
mod near_match;
mod nominal;
mod order;
mod outputs;
mod package;
mod pin_name;
mod programming;
mod rectifier;
mod roles;
mod sketch;
mod stated;
#[cfg(test)]
mod tests;
mod voltage_code;
mod walk;
mod words;
mod zener;

pub use bank::{Side, bank, bank_to};
pub use built_up::{
    Amplifier, AmplifierKind, BuiltUp, Duty, Junction, OpAmpUnit, Reference, ReferenceFeed, ReferenceKind,
    Transistor, op_amps, transistors,
};
pub use device_match::{DeviceMatch, device_match, device_match_as, kinds_of};
pub use drawn::{DrawnPin, drawn_pins};
pub use find::recognize;
pub use identity::holds_part_number;
pub use in_place::{InPlace, Overrides};
pub use model::{
    Bank, Branch, Design, Divider, EnablePin, Feed, Identity, Mode, Nominal, NotJudged, Regulator, RegulatorId,
    RegulatorKind, Roles,
};
pub use named::{Named, Overlap, families_of_name, overlaps};
pub use package::{family_package, package_of};
pub use programming::programming_pins;
pub use rectifier::{Rectified, anode, rectified};
pub use sketch::{NoSketch, Sketch, sketch};
pub use zener::zener_volts;
