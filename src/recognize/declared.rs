//! What the board file overrides.

use super::in_place::{InPlace, Overrides};
use super::model::RegulatorKind;
use crate::board::Board;

impl Overrides for Board {
    fn family(&self, reference: &str) -> Option<&str> {
        self.part(reference)?.family.as_ref().map(|family| family.value.as_str())
    }

    fn ignored(&self, reference: &str) -> bool {
        self.part(reference).and_then(|part| part.ignore.as_ref()).is_some_and(|ignore| ignore.value)
    }

    fn output_voltage(&self, net: &str) -> Option<f64> {
        self.rail(net)?.voltage.as_ref().map(|voltage| voltage.value.nominal())
    }

    fn in_place(&self, reference: &str) -> InPlace<'_> {
        let Some(part) = self.part(reference) else { return InPlace::default() };
        let kind = part.kind.as_ref().and_then(|kind| RegulatorKind::of_family(kind.value));
        InPlace {
            kind,
            polarity: part.polarity.as_ref().map(|polarity| polarity.value),
            pass: part.pass.as_ref().map(|pass| pass.value),
            pins: part.pins.as_ref().map(|pins| &pins.value),
            volts: part.output_voltage.as_ref().map(|volts| volts.value.nominal()),
        }
    }
}
