//! Where the loop is broken for its gain: at the amplifier's output, through which all of it passes.

use super::place::Draft;
use super::recipe::{At, Element, Kind};
use crate::circuit::{DeviceId, NetId};
use crate::recognize::{AmplifierKind, Duty, Transistor, transistors};

/// Where a transistor's control terminal stands among its nodes.
const CONTROL: usize = 1;
/// The output of an operational amplifier.
const OUTPUT: usize = 4;

impl Draft<'_, '_> {
    /// Breaks the loop, where there is one.
    pub(super) fn break_loop(&mut self) {
        let Some(amplifier) = self.built.amplifier.clone() else { return };
        let Some(at) = self.place(amplifier.output) else { return };
        let names: Vec<String> = amplifier.devices.iter().map(|device| self.name(*device)).collect();
        let driver = self.node("the amplifier's output");
        let moved = match amplifier.kind {
            AmplifierKind::OpAmp => self.move_ends(at, driver, |element, place| {
                place == OUTPUT && element.nodes.len() > OUTPUT && names.contains(&element.name)
            }),
            AmplifierKind::Shunt => self.move_ends(at, driver, |element, _| names.contains(&element.name)),
            AmplifierKind::Transistor | AmplifierKind::Pair => {
                return self.break_behind(amplifier.output, at, driver);
            }
        };
        if moved {
            self.add("the break", vec![Some(driver), Some(at)], Kind::Break);
        }
    }

    fn name(&self, device: DeviceId) -> String {
        self.facts.circuit().device(device).reference.clone()
    }

    /// Moves terminals from one node to another.
    fn move_ends(&mut self, from: usize, to: usize, picks: impl Fn(&Element, usize) -> bool) -> bool {
        let mut moved = false;
        for element in &mut self.recipe.elements {
            let places: Vec<usize> = (0..element.nodes.len()).collect();
            for place in places {
                let own = element.nodes.get(place).copied() == Some(Some(from));
                if own && picks(element, place) {
                    if let Some(node) = element.nodes.get_mut(place) {
                        *node = Some(to);
                    }
                    moved = true;
                }
            }
        }
        moved
    }

    /// Breaks the way from the amplifier's output to the next stage's control terminal, or to a resistor that leads there.
    fn break_behind(&mut self, net: NetId, at: usize, receiver: usize) {
        let stages: Vec<Transistor> = self.stages();
        let names: Vec<String> = stages.iter().map(|one| self.name(one.device)).collect();
        let direct = |element: &Element, place: usize| {
            place == CONTROL && element.nodes.len() == 3 && names.contains(&element.name)
        };
        let mut moved = self.move_ends(at, receiver, direct);
        if !moved {
            let controls: Vec<NetId> = stages.iter().map(|one| one.control).filter(|own| *own != net).collect();
            let far: Vec<At> = controls.iter().map(|own| self.place(*own)).collect();
            let leading = |element: &Element, _: usize| {
                matches!(element.kind, Kind::Resistor(_))
                    && element.nodes.iter().any(|node| node.is_some() && far.contains(node))
            };
            moved = self.move_ends(at, receiver, leading);
        }
        if moved {
            self.add("the break", vec![Some(at), Some(receiver)], Kind::Break);
        }
    }

    /// The transistors behind the amplifier.
    fn stages(&self) -> Vec<Transistor> {
        let circuit = self.facts.circuit();
        let devices = self.built.with(Duty::Pass).chain(self.built.with(Duty::Driver));
        devices.flat_map(|device| transistors(circuit, device)).collect()
    }
}
