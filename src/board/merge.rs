//! Laying a board's own file over the house file, key by key.

use std::collections::BTreeMap;

use super::model::{Board, LoadEntry, PartEntry, RailEntry, SupplyEntry};

impl Board {
    /// The house file with the board's own file laid over it: the own file wins key by key, in entries about the same
    /// net or part too. Where it gives one of several keys that exclude each other (`voltage`, `standard`, `ac`;
    /// `heatsink`, `junction_to_ambient`; `role`, `family`), the house's others fall. Acceptances, rule folders and
    /// grounds add up, the house's first.
    #[must_use]
    pub fn merge(house: Self, own: Self) -> Self {
        let mut settings = house.settings;
        for (check, keys) in own.settings {
            settings.entry(check).or_default().extend(keys);
        }
        Self {
            title: own.title.or(house.title),
            ambient: own.ambient.or(house.ambient),
            grounds: joined(house.grounds, own.grounds),
            supplies: overlaid(
                house.supplies,
                own.supplies,
                |one, other| one.nodes.value.same_as(&other.nodes.value),
                SupplyEntry::over,
            ),
            loads: overlaid(house.loads, own.loads, |one, other| one.net.value == other.net.value, LoadEntry::over),
            rails: overlaid(house.rails, own.rails, |one, other| one.net.value == other.net.value, RailEntry::over),
            parts: overlaid(
                house.parts,
                own.parts,
                |one, other| one.reference.value == other.reference.value,
                PartEntry::over,
            ),
            accepts: joined(house.accepts, own.accepts),
            rule_folders: joined(house.rule_folders, own.rule_folders),
            settings,
            expect: own.expect.or(house.expect),
            sources: joined(house.sources, own.sources),
        }
    }
}

fn joined<T>(mut first: Vec<T>, second: Vec<T>) -> Vec<T> {
    first.extend(second);
    first
}

/// The house's entries, each with the own one about the same thing laid over it, then the own file's others.
fn overlaid<T>(house: Vec<T>, own: Vec<T>, same: impl Fn(&T, &T) -> bool, over: impl Fn(T, T) -> T) -> Vec<T> {
    let mut own: Vec<Option<T>> = own.into_iter().map(Some).collect();
    let mut merged: Vec<T> = Vec::new();
    for below in house {
        let found = own.iter_mut().find(|slot| slot.as_ref().is_some_and(|entry| same(entry, &below)));
        match found.and_then(Option::take) {
            Some(above) => merged.push(over(above, below)),
            None => merged.push(below),
        }
    }
    merged.extend(own.into_iter().flatten());
    merged
}

impl SupplyEntry {
    /// This entry where it says something, else the other.
    #[must_use]
    fn over(self, below: Self) -> Self {
        let states_voltage = self.voltage.is_some() || self.standard.is_some() || self.ac.is_some();
        let below = if states_voltage { Self { voltage: None, standard: None, ac: None, ..below } } else { below };
        Self {
            nodes: self.nodes,
            voltage: self.voltage.or(below.voltage),
            standard: self.standard.or(below.standard),
            ac: self.ac.or(below.ac),
            frequency: self.frequency.or(below.frequency),
            resistance: self.resistance.or(below.resistance),
            rise: self.rise.or(below.rise),
            hot_plug: self.hot_plug.or(below.hot_plug),
            lead_length: self.lead_length.or(below.lead_length),
            may_short: self.may_short.or(below.may_short),
            surge: self.surge.or(below.surge),
            reverse: self.reverse.or(below.reverse),
        }
    }
}

impl LoadEntry {
    fn over(self, below: Self) -> Self {
        Self {
            net: self.net,
            current: self.current.or(below.current),
            continuous: self.continuous.or(below.continuous),
            kind: self.kind.or(below.kind),
        }
    }
}

impl RailEntry {
    fn over(self, below: Self) -> Self {
        Self {
            net: self.net,
            voltage: self.voltage.or(below.voltage),
            may_sag: self.may_sag.or(below.may_sag),
            off_board_capacitance: self.off_board_capacitance.or(below.off_board_capacitance),
        }
    }
}

impl PartEntry {
    /// This entry where it says something, else the other.
    pub(super) fn over(self, mut below: Self) -> Self {
        if self.heatsink.is_some() || self.junction_to_ambient.is_some() {
            (below.heatsink, below.junction_to_ambient) = (None, None);
        }
        if self.ignore.is_some() || self.family.is_some() {
            (below.ignore, below.family) = (None, None);
        }
        let technology_name = if self.technology.is_some() { self.technology_name } else { below.technology_name };
        let mut figures: BTreeMap<_, _> = below.figures;
        figures.extend(self.figures);
        Self {
            reference: self.reference,
            technology: self.technology.or(below.technology),
            technology_name,
            esr: self.esr.or(below.esr),
            tolerance: self.tolerance.or(below.tolerance),
            rating: self.rating.or(below.rating),
            effective_capacitance: self.effective_capacitance.or(below.effective_capacitance),
            forward_drop: self.forward_drop.or(below.forward_drop),
            resistance: self.resistance.or(below.resistance),
            heatsink: self.heatsink.or(below.heatsink),
            junction_to_ambient: self.junction_to_ambient.or(below.junction_to_ambient),
            power: self.power.or(below.power),
            alternatives: self.alternatives.or(below.alternatives),
            family: self.family.or(below.family),
            ignore: self.ignore.or(below.ignore),
            kind: self.kind.or(below.kind),
            polarity: self.polarity.or(below.polarity),
            pass: self.pass.or(below.pass),
            pins: self.pins.or(below.pins),
            output_voltage: self.output_voltage.or(below.output_voltage),
            dropout: self.dropout.or(below.dropout),
            esr_window: self.esr_window.or(below.esr_window),
            minimum_output_capacitance: self.minimum_output_capacitance.or(below.minimum_output_capacitance),
            minimum_input_capacitance: self.minimum_input_capacitance.or(below.minimum_input_capacitance),
            minimum_basis: self.minimum_basis.or(below.minimum_basis),
            published_loop: self.published_loop.or(below.published_loop),
            figures,
            model: self.model.or(below.model),
            load_current: self.load_current.or(below.load_current),
            supply_voltage: self.supply_voltage.or(below.supply_voltage),
        }
    }
}
