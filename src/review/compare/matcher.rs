//! Which part and net of one board is which of the other.
//!
//! In this order: symbols by their unique ids; then, where something is left, parts whose surroundings are alike, the
//! widest first, each pair making its neighbours known; then parts in the same place; then parts of the same reference.
//! Nets follow from the pins on them, at last from their names.

use std::collections::{BTreeMap, VecDeque};

use super::colours::{Rounds, rounds};
use super::graph::{Graph, PinLabels};
use super::pairs::{Group, Pairs};
use super::votes;
use crate::checks::natural;
use crate::circuit::{Circuit, DeviceKind};
use crate::netlist::{Component, Netlist};

/// How many parts that look alike are tried against one.
const MOST_TRIED: usize = 64;

/// Where the pins of a part lie: labels with the pairs of their nets.
type Lie = Vec<(u32, Option<usize>)>;

/// The pairs of two boards, as they are found.
#[derive(Debug)]
pub(super) struct Matcher<'a> {
    pub(super) old: Graph<'a>,
    pub(super) new: Graph<'a>,
    /// Devices by place.
    pub(super) devices: Pairs,
    /// Nets by place.
    pub(super) nets: Pairs,
    /// Nets of the old board whose pair has not been looked around from.
    fresh: VecDeque<usize>,
    /// Whether names of nets that people gave must agree.
    names: bool,
}

impl<'a> Matcher<'a> {
    /// Finds the pairs of two boards.
    pub(super) fn run(old: (&'a Netlist, &'a Circuit), new: (&'a Netlist, &'a Circuit)) -> Self {
        let mut labels = PinLabels::default();
        let (old, new) = (Graph::new(old.0, old.1, &mut labels), Graph::new(new.0, new.1, &mut labels));
        let devices = Pairs::new(old.device_count(), new.device_count());
        let nets = Pairs::new(old.net_count(), new.net_count());
        let mut matcher = Self { old, new, devices, nets, fresh: VecDeque::new(), names: true };
        matcher.by_ids();
        for names in [true, false] {
            if matcher.devices.is_open() {
                matcher.by_surroundings(names);
            }
        }
        if matcher.devices.is_open() {
            matcher.by_place();
            matcher.by_reference();
        }
        // Nets that were joined on the way only led to parts: which they are is told by all pins on them.
        matcher.nets = votes::nets(&matcher.old, &matcher.new, &matcher.devices, true);
        matcher
    }

    /// Symbols keep their ids whatever else changes. On a sheet that is used several times all copies have the same:
    /// there the sheet's name tells them apart.
    fn by_ids(&mut self) {
        self.by_one_to_one(|graph, at| {
            ids(graph, at).map(|ids| (ids, graph.device(at).map(|one| one.sheet.clone())))
        });
        self.by_one_to_one(ids);
        self.by_one_to_one(|graph, at| ids(graph, at)?.into_iter().next());
    }

    /// Joins what has a key that nothing else on its board has among what is left.
    fn by_one_to_one<K: Ord>(&mut self, key: impl Fn(&Graph<'a>, usize) -> Option<K>) {
        for (old, new) in self.groups(key) {
            if let ([old], [new]) = (&old[..], &new[..]) {
                self.devices.join(*old, *new);
            }
        }
    }

    /// What is left, in groups of one key, in the order in which the old board has them.
    fn groups<K: Ord>(&self, key: impl Fn(&Graph<'a>, usize) -> Option<K>) -> Vec<Group> {
        let mut groups: BTreeMap<K, Group> = BTreeMap::new();
        for at in self.devices.left_old() {
            if let Some(key) = key(&self.old, at) {
                groups.entry(key).or_default().0.push(at);
            }
        }
        for at in self.devices.left_new() {
            if let Some(group) = key(&self.new, at).and_then(|key| groups.get_mut(&key)) {
                group.1.push(at);
            }
        }
        let mut groups: Vec<_> = groups.into_values().filter(|(_, new)| !new.is_empty()).collect();
        groups.sort();
        groups
    }

    fn by_surroundings(&mut self, names: bool) {
        self.names = names;
        self.nets = votes::nets(&self.old, &self.new, &self.devices, names);
        let colours = rounds(&self.old, &self.new, &self.devices, &self.nets, names);
        self.fresh = (0..self.old.net_count()).filter(|net| self.nets.new_of(*net).is_some()).collect();
        let Some(widest) = colours.first() else { return };
        self.look_around(widest);
        // What stands alone first: it tells apart what looks alike.
        for alone in [true, false] {
            for round in 0..colours.len() {
                self.by_colour(&colours, round, alone);
            }
        }
    }

    fn by_colour(&mut self, colours: &Rounds, round: usize, alone: bool) {
        let Some(of) = colours.get(round) else { return };
        let groups = {
            let [old, new] = of;
            let mut groups: BTreeMap<u32, Group> = BTreeMap::new();
            for at in self.devices.left_old() {
                groups.entry(old.get(at).copied().unwrap_or(u32::MAX)).or_default().0.push(at);
            }
            for at in self.devices.left_new() {
                groups.entry(new.get(at).copied().unwrap_or(u32::MAX)).or_default().1.push(at);
            }
            groups
        };
        for (mut old, mut new) in groups.into_values() {
            if old.is_empty() || new.is_empty() || (alone && (old.len() > 1 || new.len() > 1)) {
                continue;
            }
            sort(&self.old, &mut old);
            sort(&self.new, &mut new);
            let by_reference: BTreeMap<&str, usize> = new.iter().map(|at| (self.new.reference(*at), *at)).collect();
            let mut left = VecDeque::from(new);
            for at in old {
                while left.front().is_some_and(|other| self.devices.old_of(*other).is_some()) {
                    left.pop_front();
                }
                let same = by_reference.get(self.old.reference(at)).copied();
                if self.devices.new_of(at).is_none()
                    && let Some(found) = self.alike(at, same.iter().chain(left.iter().take(MOST_TRIED)))
                {
                    self.join(at, found);
                    self.look_around(of);
                }
            }
        }
    }

    /// The first of some parts that is left and lies as this one does.
    fn alike<'l>(&self, at: usize, mut among: impl Iterator<Item = &'l usize>) -> Option<usize> {
        let lie = self.lie_old(at);
        among.find(|other| self.devices.old_of(**other).is_none() && self.lie_new(**other) == lie).copied()
    }

    /// Follows the pairs of nets that were found to the parts on them, and those parts to their other nets.
    fn look_around(&mut self, colours: &[Vec<u32>; 2]) {
        while let Some(net) = self.fresh.pop_front() {
            let Some(other) = self.nets.new_of(net) else { continue };
            let known: Vec<(usize, usize)> = self
                .old
                .nodes(net)
                .iter()
                .filter_map(|end| self.devices.new_of(end.at).map(|there| (end.at, there)))
                .collect();
            for (old, new) in known {
                self.follow(old, new);
            }
            for (mut old, mut new) in self.on_nets(net, other, colours) {
                sort(&self.old, &mut old);
                sort(&self.new, &mut new);
                self.join_in_order(&old, &new);
            }
        }
    }

    /// Parts that are left on a pair of nets, in groups that may be joined as they stand: of one each, or of parts
    /// whose nets are all known, which are in parallel.
    fn on_nets(&self, old: usize, new: usize, colours: &[Vec<u32>; 2]) -> Vec<Group> {
        let [of_old, of_new] = colours;
        let mut groups: BTreeMap<(u32, Lie), Group> = BTreeMap::new();
        for at in self.old.nodes(old).iter().map(|end| end.at).filter(|at| self.devices.new_of(*at).is_none()) {
            let key = (of_old.get(at).copied().unwrap_or(u32::MAX), self.lie_old(at));
            groups.entry(key).or_default().0.push(at);
        }
        for at in self.new.nodes(new).iter().map(|end| end.at).filter(|at| self.devices.old_of(*at).is_none()) {
            let key = (of_new.get(at).copied().unwrap_or(u32::MAX), self.lie_new(at));
            if let Some(group) = groups.get_mut(&key) {
                group.1.push(at);
            }
        }
        let each = groups.into_iter().map(|((_, lie), (mut old, mut new))| {
            old.dedup();
            new.dedup();
            (lie.iter().all(|(_, pair)| pair.is_some()), old, new)
        });
        let mut usable: Vec<_> = each
            .filter(|(known, old, new)| !new.is_empty() && (*known || (old.len() == 1 && new.len() == 1)))
            .map(|(_, old, new)| (old, new))
            .collect();
        usable.sort();
        usable
    }

    /// Joins lists that are alike: what has the same reference, then one after the other.
    fn join_in_order(&mut self, old: &[usize], new: &[usize]) {
        let by_reference: BTreeMap<&str, usize> = new.iter().map(|at| (self.new.reference(*at), *at)).collect();
        for at in old {
            if let Some(same) = by_reference.get(self.old.reference(*at)) {
                self.join(*at, *same);
            }
        }
        let rest: Vec<usize> = new.iter().copied().filter(|at| self.devices.old_of(*at).is_none()).collect();
        let left: Vec<usize> = old.iter().copied().filter(|at| self.devices.new_of(*at).is_none()).collect();
        for (old, new) in left.into_iter().zip(rest) {
            self.join(old, new);
        }
    }

    fn join(&mut self, old: usize, new: usize) {
        if self.devices.join(old, new) {
            self.follow(old, new);
        }
    }

    /// Joins the nets at pins of a pair that can only be each other.
    fn follow(&mut self, old: usize, new: usize) {
        let mut open: BTreeMap<u32, Group> = BTreeMap::new();
        for end in self.old.pins(old).iter().filter(|end| self.nets.new_of(end.at).is_none()) {
            open.entry(end.label).or_default().0.push(end.at);
        }
        for end in self.new.pins(new).iter().filter(|end| self.nets.old_of(end.at).is_none()) {
            open.entry(end.label).or_default().1.push(end.at);
        }
        for (mut old, mut new) in open.into_values() {
            old.dedup();
            new.dedup();
            if let ([old], [new]) = (&old[..], &new[..])
                && self.may_be_one(*old, *new)
                && self.nets.join(*old, *new)
            {
                self.fresh.push_back(*old);
            }
        }
    }

    fn may_be_one(&self, old: usize, new: usize) -> bool {
        !self.names || self.old.given_name(old) == self.new.given_name(new)
    }

    fn lie_old(&self, at: usize) -> Lie {
        let ends = self.old.pins(at).iter();
        sorted(ends.map(|end| (end.label, self.nets.new_of(end.at).map(|_| end.at))).collect())
    }

    fn lie_new(&self, at: usize) -> Lie {
        sorted(self.new.pins(at).iter().map(|end| (end.label, self.nets.old_of(end.at))).collect())
    }

    /// Parts of one kind that alone lie between the same nets, whatever their values.
    fn by_place(&mut self) {
        self.nets = votes::nets(&self.old, &self.new, &self.devices, true);
        let known = |lie: &Lie| !lie.is_empty() && lie.iter().all(|(_, pair)| pair.is_some());
        let mut groups: BTreeMap<(DeviceKind, Lie), Group> = BTreeMap::new();
        for at in self.devices.left_old() {
            if let Some(device) = self.old.device(at) {
                groups.entry((device.kind, self.lie_old(at))).or_default().0.push(at);
            }
        }
        for at in self.devices.left_new() {
            if let Some(device) = self.new.device(at) {
                groups.entry((device.kind, self.lie_new(at))).or_default().1.push(at);
            }
        }
        for ((_, lie), (old, new)) in groups {
            if let ([old], [new]) = (&old[..], &new[..])
                && known(&lie)
            {
                self.devices.join(*old, *new);
            }
        }
    }

    /// Parts of one kind and reference; those of the same symbol and value ahead of the others.
    fn by_reference(&mut self) {
        let text = |graph: &Graph<'a>, at: usize| graph.device(at).map(|one| (one.reference.clone(), one.kind));
        self.by_one_to_one(|graph, at| {
            let device = graph.device(at)?;
            Some((text(graph, at)?, device.value.trim().to_owned(), device.symbol().to_owned()))
        });
        self.by_one_to_one(text);
    }
}

fn sorted(mut lie: Lie) -> Lie {
    lie.sort_unstable();
    lie
}

fn component<'a>(graph: &Graph<'a>, at: usize) -> Option<&'a Component> {
    graph.netlist.components.get(graph.device(at)?.component)
}

/// The unique ids of a part's symbols, in order; `None` where it has none.
fn ids(graph: &Graph<'_>, at: usize) -> Option<Vec<String>> {
    let component = component(graph, at)?;
    let mut ids: Vec<String> = component.ids.iter().map(|id| id.trim().to_ascii_lowercase()).collect();
    ids.retain(|id| !id.is_empty());
    ids.sort();
    (!ids.is_empty()).then_some(ids)
}

fn sort(graph: &Graph<'_>, list: &mut [usize]) {
    list.sort_by(|one, other| natural(graph.reference(*one), graph.reference(*other)).then_with(|| one.cmp(other)));
}
