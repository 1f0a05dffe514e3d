//! Darlington transistors under one symbol: the model of the whole taken apart into its two.

use super::models::is_dynamic;
use super::place::Draft;
use super::recipe::{At, Kind, Slot};
use crate::board::ModelKind;
use crate::circuit::DeviceId;
use crate::quantity::{Dimension, Evidence, Quantity, Range, Slope};

/// The current gain of the output transistor (common practice: 20 to 100 at a power transistor's currents).
const OUTPUT_GAIN: f64 = 50.0;
/// The current in amperes at which the two junctions have the forward voltage of the whole.
const MATCHED_AT: f64 = 1.0;

impl Draft<'_, '_> {
    /// Adds both transistors: of nearly the same die, the driver's collector on the output's, which therefore saturates a
    /// junction above its emitter.
    pub(super) fn add_darlington(
        &mut self,
        device: DeviceId,
        kind: ModelKind,
        [collector, base, emitter]: [At; 3],
    ) -> Result<(), Box<Evidence>> {
        let name = self.facts.circuit().device(device).reference.clone();
        let none = || Box::new(self.facts.no_model(device, kind));
        let modelled = self.facts.modelled(device, kind).ok_or_else(none)?;
        self.recipe.rests.push(modelled.evidence);
        let inner = Some(self.node(&format!("the inner base of {name}")));
        let mut driver = modelled.model.clone();
        // Exact parameters are taken apart here, the others by their slots.
        if let Some(whole) = driver.get("IS") {
            driver.put("IS", Range::exactly(of_each(whole.nominal())));
        }
        if let Some(whole) = driver.get("BF") {
            driver.put("BF", Range::exactly(whole.nominal() / OUTPUT_GAIN));
        }
        let mut output = driver.clone();
        output.put("BF", Range::exactly(OUTPUT_GAIN));
        let mut slots: Vec<(&'static str, Slot)> = Vec::new();
        let mut gain = None;
        for (parameter, quantity) in modelled.open {
            match parameter {
                "BF" => gain = Some(self.recipe.slot(quantity.scaled(1.0 / OUTPUT_GAIN), false)),
                "IS" => slots.push((parameter, self.recipe.slot(each_saturation(&quantity), false))),
                _ => slots.push((parameter, self.recipe.slot(quantity, is_dynamic(parameter)))),
            }
        }
        let mut driver_slots = slots.clone();
        driver_slots.extend(gain.map(|slot| ("BF", slot)));
        let driver = Kind::Model { model: driver, slots: driver_slots };
        self.add(&name, vec![collector, base, inner], driver);
        self.add(&name, vec![collector, inner, emitter], Kind::Model { model: output, slots });
        Ok(())
    }
}

/// The saturation current of each of the two, in amperes: at the matched current I,
/// `2 ln(I / IS) − ln β = ln(I / IS of the whole)`.
fn of_each(whole: f64) -> f64 {
    (MATCHED_AT * whole.max(0.0) / OUTPUT_GAIN).sqrt()
}

fn each_saturation(whole: &Quantity) -> Quantity {
    Quantity::monotone(Dimension::ONE, &[(whole, Slope::Rising)], |v| match v {
        [whole] => of_each(*whole),
        _ => f64::NAN,
    })
}
