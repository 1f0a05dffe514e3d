//! What the board file overrides.

use super::find::Overrides;
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
}
