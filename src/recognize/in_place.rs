//! What a board file says of a part in place of a family.

use std::collections::BTreeMap;

use super::model::RegulatorKind;
use crate::circuit::Device;
use crate::knowledge::{Pass, RoleName, Sign};

/// What the board file says about single parts.
pub trait Overrides {
    /// The name of the family that a part is declared to be of.
    fn family(&self, reference: &str) -> Option<&str>;
    /// Whether a part is to be left out.
    fn ignored(&self, reference: &str) -> bool;
    /// The output voltage that is declared for a net, in volts.
    fn output_voltage(&self, net: &str) -> Option<f64>;
    /// What is declared of a part in place of a family; nothing where not overridden.
    fn in_place(&self, reference: &str) -> InPlace<'_> {
        let _ = reference;
        InPlace::default()
    }
}

/// What a board file says of a part itself: it wins over all that the schematic tells.
#[derive(Debug, Clone, Copy, Default)]
pub struct InPlace<'b> {
    /// What the part is.
    pub kind: Option<RegulatorKind>,
    /// The sign of its output.
    pub polarity: Option<Sign>,
    /// Its pass element.
    pub pass: Option<Pass>,
    /// Pin number to the roles that the pin may have.
    pub pins: Option<&'b BTreeMap<String, Vec<RoleName>>>,
    /// Its fixed output in volts, signed.
    pub volts: Option<f64>,
}

impl InPlace<'_> {
    /// Whether it tells what the part is or what its pins are.
    pub(super) fn says_anything(&self) -> bool {
        self.kind.is_some() || self.pins.is_some()
    }

    /// Puts the declared role in place of each pin's own; of several, the one that the pin seemed to have.
    pub(super) fn assign(&self, device: &Device, roles: &mut [RoleName]) {
        for (pin, role) in device.pins.iter().zip(roles) {
            let told = self.pins.and_then(|pins| pins.get(&pin.number));
            if let Some(told) = told.filter(|told| !told.contains(role)) {
                *role = told.first().copied().unwrap_or(*role);
            }
        }
    }
}

/// Nothing is declared.
impl Overrides for () {
    fn family(&self, _: &str) -> Option<&str> {
        None
    }

    fn ignored(&self, _: &str) -> bool {
        false
    }

    fn output_voltage(&self, _: &str) -> Option<f64> {
        None
    }
}
