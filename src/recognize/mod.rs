//! Finds regulators and references, their dividers, feeds and capacitor banks.

mod model;
mod pin_name;
mod voltage_code;

pub use model::{
    Bank, Branch, Design, Divider, EnablePin, Feed, Identity, Mode, Nominal, NotJudged, Regulator, RegulatorId,
    RegulatorKind, Roles,
};
