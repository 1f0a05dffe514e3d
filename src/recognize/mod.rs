//! Finds regulators and references, their dividers, feeds and capacitor banks.

mod model;

pub use model::{
    Bank, Branch, Design, Divider, EnablePin, Feed, Identity, Mode, Nominal, NotJudged, Regulator, RegulatorId,
    RegulatorKind, Roles,
};
