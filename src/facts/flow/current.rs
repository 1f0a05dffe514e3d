//! The currents of supply nets, summed from the loads upwards.

use std::collections::HashSet;

use super::Link;
use super::seeds::supply_pin;
use crate::circuit::NetId;
use crate::facts::Facts;
use crate::facts::family_figure::Ask;
use crate::quantity::{Dimension, Evidence, Grade, Pair, Quantity, Range, Settle, Slope, Table};
use crate::recognize::{Regulator, RegulatorKind};

/// How many loads a sum names one by one; more are one figure.
const NAMED_LOADS: usize = 12;
/// What a switching converter gives of what it takes (common practice: low, nominal, high).
const EFFICIENCY: (f64, f64, f64) = (0.65, 0.85, 0.95);

/// Which current of a load is meant.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub(in crate::facts) enum Drawn {
    /// Idle to peak; the nominal is the peak.
    Peak,
    /// What flows for so long that it heats.
    Continuous,
}

/// The part of its rating that an undeclared load is taken to draw for long, and at most: more would make every part of
/// a board without declarations too hot.
const USUAL_CONTINUOUS: (f64, f64) = (0.1, 0.3);

/// A net on the way from a net whose current is asked to its loads.
struct Step {
    net: NetId,
    /// Whether nothing but series elements lie between.
    near: bool,
    /// What a load here counts upstream, behind converters.
    share: Option<Quantity>,
}

/// What hangs on a net.
#[derive(Default)]
struct Hanging<'a> {
    loads: Vec<Quantity>,
    /// Whether a load is declared on the net itself or behind series elements.
    declared: bool,
    /// Linear regulators that the net feeds directly or through series elements.
    near: Vec<&'a Regulator>,
    /// Those and the ones behind them.
    all: Vec<(&'a Regulator, Option<Quantity>)>,
}

impl Facts<'_> {
    /// What flows into a net: what is declared for it and behind it, else a guess by the ratings of the regulators
    /// that it feeds; with the regulators' own currents.
    #[must_use]
    pub fn draw(&self, net: NetId) -> Quantity {
        self.drawn(net, Drawn::Peak)
    }

    pub(super) fn drawn(&self, net: NetId, drawn: Drawn) -> Quantity {
        self.draw_once((net, drawn), || {
            let hanging = self.hanging(net, None, drawn);
            let loads: Vec<Quantity> = if hanging.declared {
                hanging.loads
            } else {
                hanging.near.iter().map(|regulator| self.load_of(regulator, drawn)).collect()
            };
            let sum = self.sum(&loads, net);
            let own = if hanging.declared {
                self.own_currents(&hanging.all, net)
            } else {
                let near: Vec<_> = hanging.near.iter().map(|regulator| (*regulator, None)).collect();
                self.own_currents(&near, net)
            };
            match own {
                Some(own) => sum.plus(&own),
                None => sum,
            }
        })
    }

    /// The declared loads on a net, on the nets behind its series elements, and behind the regulators that these feed.
    /// `None` where neither the net nor one behind a series element has a declared load. What hangs on `upstream` is
    /// not drawn from the net.
    pub(in crate::facts) fn declared_draw(
        &self,
        net: NetId,
        upstream: Option<NetId>,
        drawn: Drawn,
    ) -> Option<Quantity> {
        // Boards without declared loads need no walk at all.
        if self.declares_no_load() {
            return None;
        }
        let hanging = self.hanging(net, upstream, drawn);
        hanging.declared.then(|| {
            let sum = self.sum(&hanging.loads, net);
            match self.own_currents(&hanging.all, net) {
                Some(own) => sum.plus(&own),
                None => sum,
            }
        })
    }

    fn declares_no_load(&self) -> bool {
        self.board().loads.is_empty() && self.board().parts.iter().all(|part| part.load_current.is_none())
    }

    /// Walks from a net to everything that it feeds.
    fn hanging(&self, net: NetId, upstream: Option<NetId>, drawn: Drawn) -> Hanging<'_> {
        let nothing_declared = self.declares_no_load();
        let mut seen: HashSet<NetId> = upstream.into_iter().chain([net]).collect();
        let mut stack = vec![Step { net, near: true, share: None }];
        let mut hanging = Hanging::default();
        while let Some(step) = stack.pop() {
            for load in self.loads_on(step.net, drawn) {
                hanging.declared |= step.near;
                hanging.loads.push(shared(load, step.share.as_ref()));
            }
            for (link, to) in self.flow().fed(step.net) {
                let Some(regulator) = self.linked(link) else {
                    if seen.insert(to) {
                        stack.push(Step { net: to, near: step.near, share: step.share.clone() });
                    }
                    continue;
                };
                if regulator.kind == RegulatorKind::Series {
                    if step.near {
                        hanging.near.push(regulator);
                    }
                    hanging.all.push((regulator, step.share.clone()));
                }
                // Without declared loads nothing further down counts.
                if !nothing_declared && seen.insert(to) {
                    let share = self.share_behind(regulator, step.share.as_ref());
                    stack.push(Step { net: to, near: false, share });
                }
            }
        }
        hanging
    }

    fn load_of(&self, regulator: &Regulator, drawn: Drawn) -> Quantity {
        match drawn {
            Drawn::Peak => self.load(regulator),
            Drawn::Continuous => self.continuous_load(regulator),
        }
    }

    /// The load that heats a regulator: what is declared as continuous; between idle and peak where that is not
    /// declared; a guess from nothing to the rating where no load is.
    pub(in crate::facts) fn continuous_load(&self, regulator: &Regulator) -> Quantity {
        let net = regulator.output_net;
        let declared = net.and_then(|net| self.declared_draw(net, regulator.input_net, Drawn::Continuous));
        declared.unwrap_or_else(|| {
            let guessed = self.load(regulator);
            let Some(range) = guessed.shown() else { return guessed };
            let name = net.map_or("", |net| self.circuit().net(net).name.as_str());
            let evidence = Evidence::new(Grade::Assumed, format!("continuous load on {name}"), "no load declared")
                .settled_by(Settle::new(Table::Load, name, "continuous", "60 mA"));
            let range = Range::clamped(0.0, range.high() * USUAL_CONTINUOUS.0, range.high() * USUAL_CONTINUOUS.1);
            Quantity::given(Dimension::CURRENT, range, Pair::NOT_NEGATIVE, evidence)
        })
    }

    /// What a declared load draws for long: declared, else somewhere between its idle and its peak current.
    fn declared_continuous(&self, net: &str) -> Option<Quantity> {
        let load = self.board().load(net)?;
        let what = format!("continuous load on {net}");
        if let Some(continuous) = &load.continuous {
            return Some(continuous.quantity(Dimension::CURRENT, what));
        }
        let current = load.current.as_ref()?.value;
        if current.is_exact() {
            return self.declared_load(net);
        }
        let evidence = Evidence::new(Grade::Assumed, what, "between idle and peak, not declared")
            .settled_by(Settle::new(Table::Load, net, "continuous", "60 mA"));
        let middle = f64::midpoint(current.low(), current.high());
        let range = Range::clamped(current.low(), middle, current.high());
        Some(Quantity::given(Dimension::CURRENT, range, Pair::new(current.low(), current.high()), evidence))
    }

    fn linked(&self, link: Link) -> Option<&Regulator> {
        match link {
            Link::Series(_) => None,
            Link::Regulator(id) => self.design().regulators.get(id.0),
        }
    }

    /// What a load behind a regulator counts ahead of it: behind a switching converter the power is the same, less what
    /// is lost.
    fn share_behind(&self, regulator: &Regulator, share: Option<&Quantity>) -> Option<Quantity> {
        let volts = |net: Option<NetId>| net.map_or(0.0, |net| self.flow().about(net).abs());
        let (input, output) = (volts(regulator.input_net), volts(regulator.output_net));
        if regulator.kind != RegulatorKind::Switching || input <= 0.0 || output <= 0.0 {
            return share.cloned();
        }
        let reference = &self.part_of(regulator).reference;
        let (low, nominal, high) = EFFICIENCY;
        let name = regulator.input_net.map_or("", |net| self.circuit().net(net).name.as_str());
        let evidence =
            Evidence::new(Grade::Assumed, format!("efficiency of {reference}"), "usual for switching converters")
                .settled_by(Settle::new(Table::Load, name, "current", "2 .. 180 mA"));
        let efficiency =
            Quantity::given(Dimension::ONE, Range::clamped(low, nominal, high), Pair::new(0.0, 1.0), evidence);
        let ratio = Quantity::monotone(Dimension::ONE, &[(&efficiency, Slope::Falling)], |v| match v {
            [efficiency] if *efficiency > 0.0 => output / (input * efficiency),
            _ => f64::INFINITY,
        });
        Some(shared(ratio, share))
    }

    /// What is declared to be drawn from a net itself: in the board file, else by fields on its parts.
    fn loads_on(&self, net: NetId, drawn: Drawn) -> Vec<Quantity> {
        let name = &self.circuit().net(net).name;
        let declared = match drawn {
            Drawn::Peak => self.declared_load(name),
            Drawn::Continuous => self.declared_continuous(name),
        };
        if let Some(load) = declared {
            return vec![load];
        }
        self.field_loads().get(&net).cloned().unwrap_or_default()
    }

    /// What fields on parts say that these draw, by the net from which they do.
    pub(in crate::facts) fn loads_by_field(&self) -> std::collections::HashMap<NetId, Vec<Quantity>> {
        let mut loads: std::collections::HashMap<NetId, Vec<Quantity>> = std::collections::HashMap::new();
        for part in &self.board().parts {
            let Some(current) = &part.load_current else { continue };
            let Some(net) = supply_pin(self.circuit(), &part.reference.value) else { continue };
            let range = Range::clamped(current.value.low(), current.value.high(), current.value.high());
            let what = format!("load of {}", part.reference.value);
            loads.entry(net).or_default().push(Quantity::fact(Dimension::CURRENT, range, current.evidence(what)));
        }
        loads
    }

    /// The currents that linear regulators take for themselves, idle to full load, as one figure.
    fn own_currents(&self, regulators: &[(&Regulator, Option<Quantity>)], net: NetId) -> Option<Quantity> {
        let (mut low, mut nominal, mut high) = (0.0, 0.0, 0.0);
        let mut grade = Grade::Published;
        let mut named: Vec<&str> = Vec::new();
        for (regulator, share) in regulators {
            let Some(own) = self.own_current(regulator) else { continue };
            let share = share.as_ref().and_then(Quantity::nominal).unwrap_or(1.0);
            let Some(range) = own.shown() else { continue };
            low += range.low() * share;
            nominal += range.nominal() * share;
            high += range.high() * share;
            grade = own.grade().map_or(grade, |own| own.max(grade));
            named.push(&self.part_of(regulator).reference);
        }
        let name = match named.as_slice() {
            [] => return None,
            [only] => format!("own current of {only}"),
            several => format!("own current of {} regulators on {}", several.len(), self.circuit().net(net).name),
        };
        let evidence = Evidence::new(grade, name, "data sheet, idle to full load");
        let range = Range::clamped(low, nominal, high);
        Some(Quantity::given(Dimension::CURRENT, range, Pair::NOT_NEGATIVE, evidence))
    }

    /// What a regulator takes for itself, from light to full load.
    pub(in crate::facts) fn own_current(&self, regulator: &Regulator) -> Option<Quantity> {
        let ask = |key| {
            let noun = "ground current";
            let (dimension, limits) = (Dimension::CURRENT, Pair::NOT_NEGATIVE);
            self.family_figure(regulator, Ask { key, noun, dimension, limits }).map(|own| own.magnitude())
        };
        match (ask("ground_current"), ask("ground_current_full")) {
            (Some(light), Some(full)) => Some(light.hull(&full)),
            (light, full) => light.or(full),
        }
    }

    fn sum(&self, loads: &[Quantity], net: NetId) -> Quantity {
        if loads.len() <= NAMED_LOADS {
            let zero = Quantity::constant(Dimension::CURRENT, 0.0);
            return loads.iter().fold(zero, |sum, load| sum.plus(load));
        }
        let bounds = |pick: &dyn Fn(Range) -> f64| loads.iter().filter_map(Quantity::shown).map(pick).sum::<f64>();
        let range = Range::clamped(bounds(&Range::low), bounds(&Range::nominal), bounds(&Range::high));
        let grade = loads.iter().filter_map(Quantity::grade).max().unwrap_or(Grade::Assumed);
        let name = &self.circuit().net(net).name;
        let evidence = Evidence::new(grade, format!("load on {name}"), format!("{} loads", loads.len()))
            .settled_by(Settle::new(Table::Load, name, "current", "2 .. 180 mA"));
        Quantity::given(Dimension::CURRENT, range, Pair::NOT_NEGATIVE, evidence)
    }
}

fn shared(load: Quantity, share: Option<&Quantity>) -> Quantity {
    match share {
        Some(share) => load.times(share),
        None => load,
    }
}
