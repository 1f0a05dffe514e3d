//! What figures are computed from, and the memory of those that were.

use std::cell::{OnceCell, RefCell};
use std::collections::btree_map::Entry;
use std::collections::{BTreeMap, BTreeSet, HashMap};
use std::ops::Deref;
use std::rc::Rc;

use super::flow::{self, Drawn, Flow, Rail, Rails};
use super::solved::{Recipe, Start};
use super::{Subject, SubjectKind, Value, definition};
use crate::board::Board;
use crate::circuit::{Circuit, Device, DeviceId, NetId};
use crate::knowledge::{Family, Knowledge};
use crate::quantity::{Dimension, Evidence, Grade, Quantity, Range};
use crate::recognize::{Bank, Design, Regulator, RegulatorId, Side, bank_to};
use crate::solve::SolveError;

/// Where no ambient is declared (°C).
const AMBIENT: (f64, f64) = (-10.0, 50.0);
/// The temperature at which sheets state their typical figures (°C).
const ROOM: f64 = 25.0;

/// A bank: net, returns, side.
type BankKey = (NetId, Option<NetId>, Side);

/// The circuit of a built-up regulator, or what is missing for it.
type KnownRecipe = Rc<Result<Recipe, Box<Evidence>>>;

/// A bank's total: net, returns, side, whether only ceramics count, whether as drawn.
pub(super) type TotalKey = (NetId, Option<NetId>, Side, bool, bool);

/// The figures of a board, each computed once, on demand.
#[derive(Debug)]
pub struct Facts<'a> {
    design: &'a Design,
    board: &'a Board,
    knowledge: &'a Knowledge,
    flow: OnceCell<Flow>,
    rails: OnceCell<Rails>,
    loads: OnceCell<HashMap<NetId, Vec<Quantity>>>,
    draws: RefCell<HashMap<(NetId, Drawn), Quantity>>,
    cycles: OnceCell<Vec<Vec<RegulatorId>>>,
    pub(super) clamps: RefCell<HashMap<NetId, Option<DeviceId>>>,
    // Never gone through in order: only looked up.
    values: RefCell<HashMap<(Subject, &'static str), Value>>,
    banks: RefCell<HashMap<BankKey, Rc<KnownBank>>>,
    totals: RefCell<HashMap<TotalKey, Quantity>>,
    recipes: RefCell<HashMap<DeviceId, KnownRecipe>>,
    starts: RefCell<HashMap<DeviceId, Result<Rc<Start>, SolveError>>>,
    index: OnceCell<Index>,
}

/// A bank with what is asked of it again and again: many regulators share an input.
#[derive(Debug)]
pub(super) struct KnownBank {
    pub(super) bank: Bank,
    /// Whether a capacitor lies behind no series diode.
    pub(super) near: bool,
    /// Whether a capacitor lies behind one.
    pub(super) behind_diode: bool,
}

impl KnownBank {
    fn new(bank: Bank) -> Self {
        let near = bank.branches.iter().any(|branch| !branch.behind_diode);
        let behind_diode = bank.branches.iter().any(|branch| branch.behind_diode);
        Self { bank, near, behind_diode }
    }
}

impl Deref for KnownBank {
    type Target = Bank;

    fn deref(&self) -> &Bank {
        &self.bank
    }
}

/// Regulators by where they lie; looked up, never gone through in order.
#[derive(Debug, Default)]
struct Index {
    by_input: HashMap<NetId, Vec<usize>>,
    by_output: HashMap<NetId, Vec<usize>>,
    by_device: HashMap<DeviceId, Vec<usize>>,
}

impl<'a> Facts<'a> {
    /// Figures of a design under what is declared and known.
    #[must_use]
    pub fn new(design: &'a Design, board: &'a Board, knowledge: &'a Knowledge) -> Self {
        Self {
            design,
            board,
            knowledge,
            flow: OnceCell::new(),
            rails: OnceCell::new(),
            loads: OnceCell::new(),
            draws: RefCell::new(HashMap::new()),
            cycles: OnceCell::new(),
            clamps: RefCell::new(HashMap::new()),
            values: RefCell::new(HashMap::new()),
            banks: RefCell::new(HashMap::new()),
            totals: RefCell::new(HashMap::new()),
            recipes: RefCell::new(HashMap::new()),
            starts: RefCell::new(HashMap::new()),
            index: OnceCell::new(),
        }
    }

    /// The design.
    #[must_use]
    pub fn design(&self) -> &'a Design {
        self.design
    }

    /// What is declared.
    #[must_use]
    pub fn board(&self) -> &'a Board {
        self.board
    }

    /// What is known.
    #[must_use]
    pub fn knowledge(&self) -> &'a Knowledge {
        self.knowledge
    }

    /// The circuit.
    #[must_use]
    pub fn circuit(&self) -> &'a Circuit {
        &self.design.circuit
    }

    /// Every regulator as a subject, in order.
    pub fn regulators(&self) -> impl Iterator<Item = (RegulatorId, &'a Regulator)> + use<'a> {
        self.design.regulators.iter().enumerate().map(|(index, regulator)| (RegulatorId(index), regulator))
    }

    /// The regulator that a subject is.
    #[must_use]
    pub fn regulator(&self, subject: Subject) -> Option<&'a Regulator> {
        match subject {
            Subject::Regulator(id) => self.design.regulators.get(id.0),
            _ => None,
        }
    }

    /// The part of a regulator.
    #[must_use]
    pub fn part_of(&self, regulator: &Regulator) -> &'a Device {
        self.circuit().device(regulator.device)
    }

    /// The families that a regulator may be, the best first.
    pub fn families<'r>(&'r self, regulator: &'r Regulator) -> impl Iterator<Item = &'a Family> + 'r {
        let knowledge = self.knowledge;
        regulator.identity.families.iter().filter_map(move |index| knowledge.families.get(*index))
    }

    /// What a name stands for, for one subject; names that are not defined do not apply.
    #[must_use]
    pub fn value(&self, subject: Subject, name: &str) -> Value {
        let Some(definition) = definition(subject.kind(), name) else {
            return Value::inapplicable(format!("{name} is not defined for a {}", subject.kind().name()));
        };
        if let Some(value) = self.values.borrow().get(&(subject, definition.name)) {
            return value.clone();
        }
        let value = (definition.compute)(self, subject);
        self.values.borrow_mut().insert((subject, definition.name), value.clone());
        value
    }

    /// A figure by name; `None` where it does not apply.
    #[must_use]
    pub fn figure(&self, subject: Subject, name: &str) -> Option<Quantity> {
        match self.value(subject, name) {
            Value::Figure(quantity) => Some(quantity),
            _ => None,
        }
    }

    /// Which supply net feeds which.
    #[must_use]
    pub fn flow(&self) -> &Flow {
        self.flow.get_or_init(|| Flow::of(self))
    }

    /// What fields on parts say that these draw, by net.
    pub(super) fn field_loads(&self) -> &HashMap<NetId, Vec<Quantity>> {
        self.loads.get_or_init(|| self.loads_by_field())
    }

    /// What is drawn from a net, summed once.
    pub(super) fn draw_once(&self, key: (NetId, Drawn), sum: impl FnOnce() -> Quantity) -> Quantity {
        if let Some(known) = self.draws.borrow().get(&key) {
            return known.clone();
        }
        let drawn = sum();
        self.draws.borrow_mut().insert(key, drawn.clone());
        drawn
    }

    /// Circles of regulators that wait for each other.
    pub(super) fn start_cycles(&self) -> &[Vec<RegulatorId>] {
        self.cycles.get_or_init(|| self.find_start_cycles())
    }

    /// The voltages of the supply nets.
    pub(super) fn rails(&self) -> &Rails {
        self.rails.get_or_init(|| flow::propagate(self))
    }

    /// The voltage of a net against ground, with where it comes from.
    #[must_use]
    pub fn rail(&self, net: NetId) -> Rail {
        self.rails().rail(self, net)
    }

    /// The nets whose voltage is declared, regulated, named or carried on from such a net, in order of the file.
    #[must_use]
    pub fn supply_nets(&self) -> Vec<NetId> {
        self.circuit().nets().filter(|net| self.rails().is_known(*net)).collect()
    }

    /// Everything on the board that checks about a kind of subject are asked of.
    #[must_use]
    pub fn subjects(&self, kind: SubjectKind) -> Vec<Subject> {
        match kind {
            SubjectKind::Regulator => self.regulators().map(|(id, _)| Subject::Regulator(id)).collect(),
            SubjectKind::Net => self.supply_nets().into_iter().map(Subject::Net).collect(),
            SubjectKind::Capacitor => self.banked().into_iter().collect(),
            SubjectKind::Board => vec![Subject::Board],
        }
    }

    /// The capacitors at inputs and outputs of regulators, each once: in the bank of the net that it lies on itself, or
    /// of the first that it is in.
    fn banked(&self) -> BTreeSet<Subject> {
        let ends = |regulator: &Regulator| {
            let sides = [(regulator.input_net, Side::Input), (regulator.output_net, Side::Output)];
            sides.map(|(net, side)| net.map(|net| (net, regulator.ground_net, side)))
        };
        let banks: BTreeSet<_> = self.design.regulators.iter().flat_map(ends).flatten().collect();
        let each = banks.into_iter().map(|(net, returns, side)| self.bank_at(net, returns, side));
        let capacitors = each.flat_map(|bank| {
            let net = bank.net;
            let devices: Vec<DeviceId> = bank.branches.iter().map(|branch| branch.capacitor).collect();
            devices.into_iter().map(move |device| (device, net))
        });
        let mut found: BTreeMap<DeviceId, NetId> = BTreeMap::new();
        for (device, net) in capacitors {
            let own = self.circuit().other_end(device, net).is_some();
            match found.entry(device) {
                Entry::Vacant(free) => _ = free.insert(net),
                Entry::Occupied(mut known) if own => _ = known.insert(net),
                Entry::Occupied(_) => {}
            }
        }
        found.into_iter().map(|(device, net)| Subject::Capacitor { device, net }).collect()
    }

    fn index(&self) -> &Index {
        self.index.get_or_init(|| {
            let mut index = Index::default();
            for (id, regulator) in self.regulators() {
                index.by_device.entry(regulator.device).or_default().push(id.0);
                if let Some(input) = regulator.input_net {
                    index.by_input.entry(input).or_default().push(id.0);
                }
                if let Some(output) = regulator.output_net {
                    index.by_output.entry(output).or_default().push(id.0);
                }
            }
            index
        })
    }

    /// The regulators whose input lies on a net, in order.
    pub(super) fn fed_by(&self, net: NetId) -> impl Iterator<Item = &'a Regulator> + use<'_, 'a> {
        let found = self.index().by_input.get(&net).map_or(&[][..], Vec::as_slice);
        found.iter().filter_map(|at| self.design.regulators.get(*at))
    }

    /// The regulators whose output lies on a net, in order.
    pub(super) fn feeding(&self, net: NetId) -> impl Iterator<Item = &'a Regulator> + use<'_, 'a> {
        self.feeding_ids(net).map(|(_, regulator)| regulator)
    }

    /// The same, with their ids.
    pub(super) fn feeding_ids(&self, net: NetId) -> impl Iterator<Item = (RegulatorId, &'a Regulator)> + use<'_, 'a> {
        let found = self.index().by_output.get(&net).map_or(&[][..], Vec::as_slice);
        found.iter().filter_map(|at| Some((RegulatorId(*at), self.design.regulators.get(*at)?)))
    }

    /// The regulators in a part, one for each output.
    pub(super) fn in_part(&self, device: DeviceId) -> impl Iterator<Item = &'a Regulator> + use<'_, 'a> {
        let found = self.index().by_device.get(&device).map_or(&[][..], Vec::as_slice);
        found.iter().filter_map(|at| self.design.regulators.get(*at))
    }

    /// The same as ids.
    pub(super) fn ids_in_part(&self, device: DeviceId) -> impl Iterator<Item = RegulatorId> + use<'_, 'a> {
        self.index().by_device.get(&device).map_or(&[][..], Vec::as_slice).iter().map(|at| RegulatorId(*at))
    }

    /// The capacitors at a regulator's input or output, to ground or to the net of its ground pin.
    pub(super) fn bank_of(&self, regulator: &Regulator, side: Side) -> Option<Rc<KnownBank>> {
        let net = match side {
            Side::Input => regulator.input_net,
            Side::Output => regulator.output_net,
        };
        net.map(|net| self.bank_at(net, regulator.ground_net, side))
    }

    /// The capacitors between a net and ground, or `returns`.
    pub(super) fn bank_at(&self, net: NetId, returns: Option<NetId>, side: Side) -> Rc<KnownBank> {
        let returns = returns.filter(|returns| !self.circuit().net(*returns).ground);
        if let Some(known) = self.banks.borrow().get(&(net, returns, side)) {
            return Rc::clone(known);
        }
        let found = Rc::new(KnownBank::new(bank_to(self.circuit(), net, returns.as_slice(), side)));
        self.banks.borrow_mut().insert((net, returns, side), Rc::clone(&found));
        found
    }

    /// The total capacitance of a bank, summed once.
    pub(super) fn total_once(&self, key: TotalKey, sum: impl FnOnce() -> Quantity) -> Quantity {
        if let Some(known) = self.totals.borrow().get(&key) {
            return known.clone();
        }
        let total = sum();
        self.totals.borrow_mut().insert(key, total.clone());
        total
    }

    /// The circuit of a built-up regulator, made once.
    pub(super) fn recipe_once(
        &self,
        device: DeviceId,
        make: impl FnOnce() -> Result<Recipe, Box<Evidence>>,
    ) -> KnownRecipe {
        if let Some(known) = self.recipes.borrow().get(&device) {
            return Rc::clone(known);
        }
        let made = Rc::new(make());
        self.recipes.borrow_mut().insert(device, Rc::clone(&made));
        made
    }

    /// What was found about a start, once.
    pub(super) fn start_once(
        &self,
        device: DeviceId,
        find: impl FnOnce() -> Result<Start, SolveError>,
    ) -> Result<Rc<Start>, SolveError> {
        if let Some(known) = self.starts.borrow().get(&device) {
            return known.clone();
        }
        let found = find().map(Rc::new);
        self.starts.borrow_mut().insert(device, found.clone());
        found
    }

    /// Ambient temperature, °C; a guess where none is declared.
    #[must_use]
    pub fn ambient(&self) -> Quantity {
        match &self.board.ambient {
            Some(declared) => declared.quantity(Dimension::TEMPERATURE, "ambient"),
            None => {
                let evidence = Evidence::new(Grade::Assumed, "ambient", "no ambient declared").settled_by(
                    crate::quantity::Settle::new(crate::quantity::Table::Board, "", "ambient", "-20 .. 55 °C"),
                );
                let range = Range::clamped(AMBIENT.0, ROOM, AMBIENT.1);
                Quantity::fact(Dimension::TEMPERATURE, range, evidence)
            }
        }
    }
}
