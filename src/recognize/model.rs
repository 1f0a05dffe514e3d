//! What was found on the board.

use super::built_up::BuiltUp;
use crate::circuit::{Circuit, DeviceId, NetId};
use crate::knowledge::{FamilyKind, Pass, Sign};
use crate::quantity::Grade;

/// A regulator or reference of the design, one for each output of a part.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct RegulatorId(pub(crate) usize);

impl RegulatorId {
    /// The first regulator of a design.
    #[must_use]
    pub fn first() -> Self {
        Self(0)
    }
}

/// What a regulator is.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum RegulatorKind {
    /// A series regulator.
    Series,
    /// A shunt reference.
    Shunt,
    /// A series voltage reference.
    Reference,
    /// A switching converter: its rail is used, it is not judged.
    Switching,
}

impl RegulatorKind {
    /// What a part of a family of this kind is; `None` for families of parts that are no regulators.
    #[must_use]
    pub fn of_family(kind: FamilyKind) -> Option<Self> {
        match kind {
            FamilyKind::Series => Some(Self::Series),
            FamilyKind::Shunt => Some(Self::Shunt),
            FamilyKind::Reference => Some(Self::Reference),
            FamilyKind::Switching => Some(Self::Switching),
            FamilyKind::Other => None,
        }
    }

    /// Its name in results and in the check language.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::Series => "series",
            Self::Shunt => "shunt",
            Self::Reference => "reference",
            Self::Switching => "switching",
        }
    }
}

/// Whether the output voltage is built in.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Mode {
    /// Built in.
    Fixed,
    /// Set by resistors.
    Adjustable,
}

/// What a part was taken for.
#[derive(Debug, Clone, PartialEq)]
pub struct Identity {
    /// Indices into `Knowledge::families`, the best first; several where the name fits several makers' versions.
    pub families: Vec<usize>,
    /// The text that told: the value, a manufacturer's number, the symbol's name.
    pub name: String,
    /// Where that text stands: `value`, `MPN field`, `symbol`, `board file`.
    pub told_by: String,
    /// How well the identification is founded; a family's figures are no stronger.
    pub grade: Grade,
    /// What was odd: the value against the symbol, a misspelling.
    pub remarks: Vec<String>,
}

/// A nominal output voltage, signed, in volts.
#[derive(Debug, Clone, PartialEq)]
pub struct Nominal {
    /// Volts; negative for negative parts.
    pub volts: f64,
    /// How well it is founded.
    pub grade: Grade,
    /// Where it comes from: `value LM1117-3.3`, `net name +3V3`.
    pub source: String,
}

/// An enable input.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct EnablePin {
    /// Index of the pin in its device.
    pub pin: usize,
    /// Whether the pin's name says that it is active low (`~{EN}`, `SHDN`, `INH`).
    pub active_low: bool,
}

/// Pins by role, as indices into `Device::pins`; stacked pins make several.
#[derive(Debug, Clone, Default, PartialEq, Eq)]
#[allow(missing_docs)] // each field is the trade's name of the role
pub struct Roles {
    pub input: Vec<usize>,
    pub output: Vec<usize>,
    pub ground: Vec<usize>,
    pub adjust: Vec<usize>,
    pub enable: Vec<EnablePin>,
    pub sense: Vec<usize>,
    pub bypass: Vec<usize>,
    pub bias: Vec<usize>,
    pub power_good: Vec<usize>,
    pub other: Vec<usize>,
}

/// The resistors that set an adjustable part.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Divider {
    /// From the output (or the net that is sensed) to the adjust pin: in series. Empty where the two are one net.
    pub upper: Vec<DeviceId>,
    /// Resistors in parallel with `upper` as a whole, each a branch of its own in series order.
    pub upper_parallel: Vec<Vec<DeviceId>>,
    /// From the adjust pin to ground: in series. Empty where the adjust pin lies on ground or has no lower resistor.
    pub lower: Vec<DeviceId>,
    /// Resistors in parallel with `lower`.
    pub lower_parallel: Vec<Vec<DeviceId>>,
    /// The net that the upper end senses.
    pub senses: Option<NetId>,
    /// The net that the lower end lies on.
    pub returns: Option<NetId>,
    /// Whether a potentiometer is among them.
    pub trimmed: bool,
}

/// What feeds a shunt reference.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Feed {
    /// Resistors in series from the supply to the cathode (anode for a negative one).
    pub resistors: Vec<DeviceId>,
    /// Further branches from the same supply, each in series order.
    pub parallel: Vec<Vec<DeviceId>>,
    /// The supply they come from.
    pub from: NetId,
}

/// A regulator or reference.
#[derive(Debug, Clone, PartialEq)]
pub struct Regulator {
    /// Its part.
    pub device: DeviceId,
    /// Which output of the part, from 0.
    pub output_index: usize,
    /// What it was taken for.
    pub identity: Identity,
    /// Series, shunt, reference, switching.
    pub kind: RegulatorKind,
    /// The sign of the output.
    pub polarity: Sign,
    /// Fixed or adjustable.
    pub mode: Mode,
    /// The pass element, where a family tells.
    pub pass: Option<Pass>,
    /// Nominal output where fixed and known; an adjustable part's follows from its divider, as a figure.
    pub nominal: Option<Nominal>,
    /// Pins by role.
    pub roles: Roles,
    /// Net of the input; a shunt's is the supply behind its feed.
    pub input_net: Option<NetId>,
    /// Net of the output; a shunt's cathode (anode for a negative one).
    pub output_net: Option<NetId>,
    /// Net of the ground pin; that of the lower divider end for three-pin adjustable parts.
    pub ground_net: Option<NetId>,
    /// The divider of an adjustable part.
    pub divider: Option<Divider>,
    /// The feed of a shunt.
    pub feed: Option<Feed>,
    /// How it is built up from transistors and amplifiers; of a packaged part, the transistor that takes over its current.
    pub built_up: Option<Box<BuiltUp>>,
}

impl Regulator {
    /// Whether it is built up from single parts: no data sheet speaks of it.
    #[must_use]
    pub fn is_built_up(&self) -> bool {
        self.built_up.as_ref().is_some_and(|built| !built.outboard)
    }

    /// The transistor that takes over the current of a packaged part.
    #[must_use]
    pub fn outboard(&self) -> Option<DeviceId> {
        let built = self.built_up.as_ref().filter(|built| built.outboard)?;
        built.pass.first().copied()
    }

    /// The net from which the load's current comes: that of the input, or the one ahead of an outboard transistor.
    #[must_use]
    pub fn source_net(&self) -> Option<NetId> {
        let outboard = self.built_up.as_ref().filter(|built| built.outboard);
        outboard.map(|built| built.input).or(self.input_net)
    }
}

/// A part that was recognized and is not judged, with the reason.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct NotJudged {
    /// The part.
    pub device: DeviceId,
    /// Why: `switching converter`, `ignored by the board file`.
    pub reason: String,
}

/// One capacitor of a bank, with what lies in series.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Branch {
    /// The capacitor.
    pub capacitor: DeviceId,
    /// Resistors in series with it, in either order.
    pub series: Vec<DeviceId>,
    /// Ferrites, small inductors and such between the bank's net and this branch.
    pub through: Vec<DeviceId>,
    /// Whether it lies ahead of a series diode, seen from the net (inputs only).
    pub behind_diode: bool,
}

/// The capacitors between a net and ground (or another given net).
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Bank {
    /// The net.
    pub net: NetId,
    /// Its capacitors, in order of reference.
    pub branches: Vec<Branch>,
    /// Capacitors on the net whose other end connects nothing.
    pub dangling: Vec<DeviceId>,
    /// Whether the net (or a net through ferrites) reaches a connector: capacitance may lie beyond.
    pub leaves_board: bool,
}

/// The board with what was found on it.
#[derive(Debug, Clone)]
pub struct Design {
    /// The board.
    pub circuit: Circuit,
    /// Regulators in natural order of reference, then output.
    pub regulators: Vec<Regulator>,
    /// Recognized and not judged, in natural order of reference.
    pub not_judged: Vec<NotJudged>,
}
