//! The role of every pin.
//!
//! Names come first, then electrical types, then the family's pin table, then the nets that the pins lie on. Names
//! with two meanings (`ADJ/GND`, `SENSE/FB`) are settled by what the part is known to be and by their net.

use crate::circuit::{Circuit, Device, DeviceId, DeviceKind, NetId, PinType, supply_name};
use crate::knowledge::{Family, Package, RoleName};

use super::model::RegulatorKind;
use super::package::{family_package, package_of};
use super::pin_name::{PinName, Word};
use super::walk::{Chain, SAMPLE, chains, is_tap};

/// What is known of the part before its pins are settled.
#[derive(Debug, Clone, Copy)]
pub(super) struct Hints<'a> {
    pub(super) kind: RegulatorKind,
    /// The name or text says that the output is built in.
    pub(super) fixed: bool,
    /// The name or text says that it is set by resistors.
    pub(super) adjustable: bool,
    /// The best family.
    pub(super) family: Option<&'a Family>,
    /// Whether the family's pin table, where it has one, is that of the part in the value: then the pin names of a
    /// foreign symbol are still preferred, but unnamed pins are filled from it.
    pub(super) nominal: Option<f64>,
}

/// Assigns a role to each pin, in order of `Device::pins`.
pub(super) fn assign(circuit: &Circuit, id: DeviceId, names: &[PinName], hints: Hints<'_>) -> Vec<RoleName> {
    let device = circuit.device(id);
    let mut assignment = Assignment { circuit, device, names, hints, roles: vec![None; names.len()] };
    if hints.kind == RegulatorKind::Shunt {
        assignment.shunt();
    } else {
        assignment.series();
    }
    assignment.fill_by_family();
    assignment.ground_of_a_fixed_symbol();
    if hints.kind != RegulatorKind::Shunt {
        assignment.fill_by_type();
        assignment.fill_by_net();
    }
    assignment.double_names();
    if hints.kind != RegulatorKind::Shunt {
        assignment.feedback();
    }
    assignment.tabs();
    assignment.roles.into_iter().map(|role| role.unwrap_or(RoleName::Other)).collect()
}

struct Assignment<'a> {
    circuit: &'a Circuit,
    device: &'a Device,
    names: &'a [PinName],
    hints: Hints<'a>,
    roles: Vec<Option<RoleName>>,
}

impl Assignment<'_> {
    fn has(&self, role: RoleName) -> bool {
        self.roles.contains(&Some(role))
    }

    fn set(&mut self, index: usize, role: RoleName) {
        if let Some(slot) = self.roles.get_mut(index) {
            *slot = Some(role);
        }
    }

    fn open(&self, index: usize) -> bool {
        self.roles.get(index).is_some_and(Option::is_none)
    }

    fn net(&self, index: usize) -> Option<NetId> {
        self.device.pins.get(index).and_then(|pin| pin.net)
    }

    fn pin_kind(&self, index: usize) -> PinType {
        self.device.pins.get(index).map_or(PinType::Unspecified, |pin| pin.kind)
    }

    fn nets_of(&self, role: RoleName) -> Vec<NetId> {
        let with_role = self.roles.iter().enumerate().filter(|(_, each)| **each == Some(role));
        with_role.filter_map(|(index, _)| self.net(index)).collect()
    }

    fn shunt(&mut self) {
        for index in 0..self.names.len() {
            let Some(name) = self.names.get(index) else { continue };
            let role = match name.words.first() {
                Some(Word::Cathode | Word::Plus | Word::Output | Word::Input) => Some(RoleName::Cathode),
                Some(Word::Anode | Word::Minus | Word::Ground) => Some(RoleName::Anode),
                Some(Word::Reference | Word::Adjust | Word::ReferenceOutput) => Some(RoleName::Adjust),
                Some(Word::NotConnected) => Some(RoleName::NotConnected),
                _ => None,
            };
            if let Some(role) = role {
                self.set(index, role);
            }
        }
    }

    fn series(&mut self) {
        let any = |word: Word| self.names.iter().any(|name| name.words.first() == Some(&word));
        let has_input = any(Word::Input);
        let has_output = any(Word::Output);
        let has_adjust = any(Word::Adjust);
        let has_ground = any(Word::Ground);
        let separate_supply = self.names.iter().any(|name| name.power_input);
        for index in 0..self.names.len() {
            let Some(name) = self.names.get(index) else { continue };
            if self.pin_kind(index) == PinType::NoConnect || name.is(Word::NotConnected) && name.words.len() == 1 {
                self.set(index, RoleName::NotConnected);
                continue;
            }
            // Names with two meanings wait until the rest is known.
            if name.words.len() > 1 {
                continue;
            }
            let role = match name.words.first() {
                // With an input for the pass element alone, the plain supply feeds the control part.
                Some(Word::Input) if separate_supply && !name.power_input => Some(RoleName::Bias),
                Some(Word::Input) => Some(RoleName::Input),
                Some(Word::Supply) if !has_input => Some(RoleName::Input),
                Some(Word::Supply) => Some(RoleName::Bias),
                Some(Word::Output) => Some(RoleName::Output),
                Some(Word::ReferenceOutput) if !has_output => Some(RoleName::Output),
                Some(Word::Ground | Word::IsolatedReturn) => Some(RoleName::Ground),
                Some(Word::Minus) if !has_ground && !has_adjust => Some(RoleName::Ground),
                Some(Word::Adjust) => Some(RoleName::Adjust),
                // `REF` in the middle of a divider is what the part adjusts by; else it is its reference, bypassed.
                Some(Word::Reference) if !has_adjust && self.net(index).is_some_and(|net| self.in_divider(net)) => {
                    Some(RoleName::Adjust)
                }
                Some(Word::Enable(_)) => Some(RoleName::Enable),
                Some(Word::Sense) => Some(RoleName::Sense),
                Some(Word::Bypass) => Some(RoleName::Bypass),
                Some(Word::Bias) => Some(RoleName::Bias),
                Some(Word::PowerGood | Word::FaultFlag) => Some(RoleName::PowerGood),
                Some(Word::Unknown | Word::Unnamed | Word::Tab) | None => None,
                Some(_) => Some(RoleName::Other),
            };
            if let Some(role) = role {
                self.set(index, role);
            }
        }
    }

    /// The family's pins in the package that the footprint or the symbol names, or in any where all agree.
    fn package(&self) -> Option<&Package> {
        let family = self.hints.family?;
        let footprint = normal(&self.device.footprint);
        let symbol = normal(&self.device.part);
        let named = |name: &str| {
            let name = normal(name);
            footprint.contains(&name) || symbol.contains(&name)
        };
        // The footprint's package first; else the longest name that fits, for `SOT-23` is part of `SOT-23-5`.
        let fitting = package_of(&self.device.footprint)
            .and_then(|package| family_package(family, &package))
            .filter(|package| !package.pins.is_empty())
            .or_else(|| {
                let fitting = family.packages.iter().filter(|(name, _)| named(name));
                fitting.max_by_key(|(name, _)| name.len()).map(|(_, package)| package)
            });
        // Where all packages agree on the pins it does not matter which it is.
        let only = || {
            let mut packages = family.packages.values();
            let first = packages.next()?;
            packages.all(|other| other.pins == first.pins).then_some(first)
        };
        fitting.or_else(only)
    }

    /// The adjustable version under the symbol of a fixed one: the pin that the symbol calls ground is the adjust pin.
    fn ground_of_a_fixed_symbol(&mut self) {
        if self.hints.fixed || !self.hints.adjustable || self.has(RoleName::Adjust) {
            return;
        }
        let both = |roles: &Vec<RoleName>| roles.contains(&RoleName::Adjust) && roles.contains(&RoleName::Ground);
        let shared = self
            .device
            .pins
            .iter()
            .position(|pin| self.package().and_then(|package| package.pins.get(&pin.number)).is_some_and(both));
        let Some(index) = shared else { return };
        if self.roles.get(index).copied().flatten() == Some(RoleName::Ground) {
            self.set(index, RoleName::Adjust);
        }
    }

    /// Pins whose names say nothing get the role of the family's pin table, by package.
    fn fill_by_family(&mut self) {
        let Some(package) = self.package().cloned() else { return };
        for index in 0..self.names.len() {
            let Some(number) = self.device.pins.get(index).map(|pin| pin.number.as_str()) else { continue };
            if !self.open(index) || self.names.get(index).is_some_and(|name| name.words.len() > 1) {
                continue;
            }
            let Some(roles) = package.pins.get(number) else { continue };
            let adjust = roles.contains(&RoleName::Adjust);
            let role = match roles.as_slice() {
                [only] => Some(*only),
                _ if adjust && roles.contains(&RoleName::Ground) && self.hints.fixed => Some(RoleName::Ground),
                _ if adjust && roles.contains(&RoleName::Ground) => Some(RoleName::Adjust),
                _ => roles.first().copied(),
            };
            if let Some(role) = role {
                self.set(index, role);
            }
        }
    }

    /// Electrical types, for pins that are still open.
    fn fill_by_type(&mut self) {
        let lacks_output = !self.has(RoleName::Output);
        let lacks_input = !self.has(RoleName::Input);
        for index in 0..self.names.len() {
            let tab = self.names.get(index).is_some_and(|name| name.is(Word::Tab) || name.words.len() > 1);
            if !self.open(index) || tab {
                continue;
            }
            let grounded = self.net(index).is_some_and(|net| self.circuit.net(net).ground);
            match self.pin_kind(index) {
                PinType::PowerOut if lacks_output => self.set(index, RoleName::Output),
                PinType::PowerIn if grounded && !self.has(RoleName::Ground) => self.set(index, RoleName::Ground),
                PinType::PowerIn if lacks_input && !grounded => self.set(index, RoleName::Input),
                _ => {}
            }
        }
    }

    /// Nets, for the pins of small parts whose names and types say nothing: the pin on ground is the ground, a supply of
    /// the part's own voltage is the output, the other supply the input.
    fn fill_by_net(&mut self) {
        let open: Vec<usize> =
            (0..self.names.len()).filter(|index| self.open(*index) && !self.is_double(*index)).collect();
        if open.is_empty() || self.names.len() > 6 || self.has(RoleName::Input) && self.has(RoleName::Output) {
            return;
        }
        for index in &open {
            let grounded = self.net(*index).is_some_and(|net| self.circuit.net(net).ground);
            if grounded && !self.has(RoleName::Ground) && !self.has(RoleName::Adjust) {
                self.set(*index, RoleName::Ground);
            }
        }
        let volts = |this: &Self, index: usize| {
            this.net(index).and_then(|net| supply_name(&this.circuit.net(net).name)).map(|name| name.volts.abs())
        };
        let open: Vec<usize> = open.into_iter().filter(|index| self.open(*index)).collect();
        if !self.has(RoleName::Output) {
            let own = |index: &&usize| {
                let nominal = self.hints.nominal.map(f64::abs);
                nominal.zip(volts(self, **index)).is_some_and(|(nominal, net)| (net / nominal - 1.0).abs() < 0.05)
            };
            // Of two supplies the lower one is the output of a series part.
            let lower = || {
                let mut known: Vec<(f64, usize)> =
                    open.iter().filter_map(|index| Some((volts(self, *index)?, *index))).collect();
                known.sort_by(|one, other| one.0.total_cmp(&other.0));
                (known.len() >= 2).then(|| known.first().map(|(_, index)| *index)).flatten()
            };
            if let Some(index) = open.iter().find(own).copied().or_else(lower) {
                self.set(index, RoleName::Output);
            }
        }
        let left: Vec<usize> = open.into_iter().filter(|index| self.open(*index)).collect();
        if let [index] = left.as_slice() {
            if !self.has(RoleName::Input) && self.has(RoleName::Output) {
                self.set(*index, RoleName::Input);
            } else if !self.has(RoleName::Output) && self.has(RoleName::Input) {
                self.set(*index, RoleName::Output);
            }
        }
    }

    fn is_double(&self, index: usize) -> bool {
        self.names.get(index).is_some_and(|name| name.words.len() > 1)
    }

    /// Names with two meanings, by what else is known.
    fn double_names(&mut self) {
        let outputs = self.nets_of(RoleName::Output);
        for index in 0..self.names.len() {
            if !self.open(index) {
                continue;
            }
            let Some(name) = self.names.get(index).filter(|name| name.words.len() > 1) else { continue };
            let Some(role) = self.settle(name, index, &outputs) else { continue };
            self.set(index, role);
        }
    }

    fn settle(&self, name: &PinName, index: usize, outputs: &[NetId]) -> Option<RoleName> {
        let net = self.net(index);
        let grounded = net.is_some_and(|net| self.circuit.net(net).ground);
        let on_output = net.is_some_and(|net| outputs.contains(&net));
        let adjust = name.is(Word::Adjust) || name.is(Word::Reference);
        if adjust && name.is(Word::Ground) {
            // Resistors on the pin say that it is used for adjusting, whatever the name says.
            let adjusted =
                !self.hints.fixed && (self.hints.adjustable || !grounded) || !grounded && self.has_resistors(net);
            return Some(if adjusted { RoleName::Adjust } else { RoleName::Ground });
        }
        if adjust && name.is(Word::Sense) {
            let sensing = on_output && !self.hints.adjustable || self.hints.fixed && !self.has_resistors(net);
            return Some(if sensing { RoleName::Sense } else { RoleName::Adjust });
        }
        if adjust && (name.is(Word::Bypass) || name.is(Word::NotConnected)) {
            let adjusted = self.has_resistors(net) || on_output || self.hints.adjustable && net.is_some();
            let other = if name.is(Word::Bypass) { RoleName::Bypass } else { RoleName::NotConnected };
            return Some(if adjusted { RoleName::Adjust } else { other });
        }
        if adjust && name.is(Word::PowerGood) {
            let adjusted = net.is_some_and(|net| self.in_divider(net));
            return Some(if adjusted { RoleName::Adjust } else { RoleName::PowerGood });
        }
        let first =
            name.words.iter().find(|word| !matches!(word, Word::Tab | Word::Auxiliary | Word::NotConnected))?;
        Some(match first {
            Word::Input | Word::Supply => RoleName::Input,
            Word::Output | Word::ReferenceOutput => RoleName::Output,
            Word::Ground => RoleName::Ground,
            Word::Adjust | Word::Reference => RoleName::Adjust,
            Word::Enable(_) => RoleName::Enable,
            Word::Sense => RoleName::Sense,
            Word::Bypass => RoleName::Bypass,
            Word::Bias => RoleName::Bias,
            Word::PowerGood | Word::FaultFlag => RoleName::PowerGood,
            _ => return None,
        })
    }

    fn has_resistors(&self, net: Option<NetId>) -> bool {
        net.is_some_and(|net| {
            self.circuit.fitted_on(net).take(SAMPLE).any(|(device, _)| {
                matches!(self.circuit.device(device).kind, DeviceKind::Resistor | DeviceKind::Potentiometer)
            })
        })
    }

    /// Sense and feedback pins are called by each other's names: a fixed part's feedback on its own output is its sense,
    /// and the sense pin of an adjustable part in the middle of a divider is its adjust pin.
    fn feedback(&mut self) {
        let outputs = self.nets_of(RoleName::Output);
        let adjustable = self.has(RoleName::Adjust);
        for index in 0..self.roles.len() {
            let Some(net) = self.net(index) else { continue };
            let on_output = outputs.contains(&net);
            match self.roles.get(index).copied().flatten() {
                Some(RoleName::Adjust) if on_output && self.hints.fixed => self.set(index, RoleName::Sense),
                Some(RoleName::Sense) if !adjustable && !on_output && self.in_divider(net) => {
                    self.set(index, RoleName::Adjust);
                }
                _ => {}
            }
        }
    }

    /// Resistors lead from the net to ground and elsewhere.
    fn in_divider(&self, net: NetId) -> bool {
        let grounds = self.nets_of(RoleName::Ground);
        let chains = if is_tap(self.circuit, net) { chains(self.circuit, net, &grounds) } else { Vec::new() };
        let down = |chain: &Chain| grounds.contains(&chain.end) || self.circuit.net(chain.end).ground;
        chains.iter().any(down) && chains.iter().any(|chain| !down(chain))
    }

    /// A tab takes the role of the net it lies on; a tab alone on its net is nothing.
    fn tabs(&mut self) {
        for index in 0..self.names.len() {
            if !self.open(index) || !self.names.get(index).is_some_and(|name| name.is(Word::Tab)) {
                continue;
            }
            let Some(net) = self.net(index) else { continue };
            let shared = [RoleName::Ground, RoleName::Output, RoleName::Input, RoleName::Anode, RoleName::Cathode];
            let role = shared.into_iter().find(|role| self.nets_of(*role).contains(&net));
            let role = role.or_else(|| self.circuit.net(net).ground.then_some(RoleName::Ground));
            if let Some(role) = role {
                self.set(index, role);
            }
        }
    }
}

/// Letters and digits only, upper case: `SOT-223` is `SOT223`.
fn normal(text: &str) -> String {
    text.chars().filter(char::is_ascii_alphanumeric).map(|each| each.to_ascii_uppercase()).collect()
}
