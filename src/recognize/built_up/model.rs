//! What a built-up regulator consists of.

use crate::circuit::{DeviceId, NetId};

use super::super::model::{Divider, Regulator};

/// What compares the output with the reference.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum AmplifierKind {
    /// An operational amplifier.
    OpAmp,
    /// Two transistors with joined emitters or sources.
    Pair,
    /// One transistor, base against emitter.
    Transistor,
    /// A programmable shunt reference, which holds its reference too.
    Shunt,
}

impl AmplifierKind {
    /// Its name in the field's terms.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::OpAmp => "op-amp",
            Self::Pair => "transistor pair",
            Self::Transistor => "single transistor",
            Self::Shunt => "programmable shunt",
        }
    }
}

/// The error amplifier.
#[derive(Debug, Clone, PartialEq)]
pub struct Amplifier {
    /// What it is.
    pub kind: AmplifierKind,
    /// Its parts: one, or the two of a pair that lies in two packages.
    pub devices: Vec<DeviceId>,
    /// The net that it drives.
    pub output: NetId,
    /// The input that senses the output.
    pub sensing: NetId,
    /// The other input, which sees the reference or ground; the same net where a part has no other.
    pub comparing: NetId,
    /// What a single transistor's own junction does to the reference.
    pub junction: Junction,
    /// A programmable shunt, with its pins and family.
    pub shunt: Option<Box<Regulator>>,
}

/// What the base-emitter drop of a single transistor does to the reference that it compares with.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Junction {
    /// Nothing: two inputs of one kind are compared, or the drop is the reference itself.
    None,
    /// What is sensed settles a drop above the reference.
    Adds,
    /// What is sensed settles a drop below it.
    Takes,
}

/// What the output is compared with.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum ReferenceKind {
    /// A zener diode, alone or with diodes in series.
    Zener,
    /// Diodes in series.
    Diodes,
    /// A shunt reference.
    Shunt,
    /// A series reference.
    Series,
    /// The output of another regulator.
    Rail,
    /// The base-emitter drop of the amplifier itself.
    BaseEmitter,
    /// A packaged regulator, whose current the pass transistor takes over.
    Packaged,
}

impl ReferenceKind {
    /// Its name in the field's terms.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::Zener => "zener diode",
            Self::Diodes => "diodes",
            Self::Shunt => "shunt reference",
            Self::Series => "series reference",
            Self::Rail => "another regulator",
            Self::BaseEmitter => "base-emitter drop",
            Self::Packaged => "packaged regulator",
        }
    }
}

/// The reference.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Reference {
    /// What it is.
    pub kind: ReferenceKind,
    /// Its parts, from the net that it holds downwards; none where it is the amplifier's own base-emitter drop.
    pub devices: Vec<DeviceId>,
    /// The net that it holds.
    pub net: NetId,
    /// Whether the whole of it is compared: no resistors take a part of it.
    pub whole: bool,
    /// The resistors that take a part of it, from its net to the amplifier's input and from there to ground; without those to
    /// ground an inverting amplifier weighs it against the output. `None` where the whole of it is compared or more lies
    /// between than a divider and followers.
    pub divider: Option<Divider>,
    /// Whether it lies between the output and the sensing input, in place of the upper divider resistor.
    pub in_sense: bool,
}

/// The net that feeds the reference.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum ReferenceFeed {
    /// The regulator's input.
    Input,
    /// The regulator's own output.
    Output,
    /// Another supply net.
    Other(NetId),
    /// It lies inside a part that needs no feed of its own.
    Internal,
}

impl ReferenceFeed {
    /// Its name in results.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::Input => "input",
            Self::Output => "output",
            Self::Other(_) => "other",
            Self::Internal => "internal",
        }
    }
}

/// What a part of the cut-out does.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Duty {
    /// It carries the load current.
    Pass,
    /// It drives the pass transistor.
    Driver,
    /// It compares.
    Amplifier,
    /// It is the reference.
    Reference,
    /// It feeds the reference.
    Feed,
    /// It divides the output for the amplifier.
    Divider,
    /// Anything else that is connected inside: bias, compensation, limits.
    Network,
}

impl Duty {
    /// Its name in reports.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::Pass => "pass",
            Self::Driver => "driver",
            Self::Amplifier => "amplifier",
            Self::Reference => "reference",
            Self::Feed => "reference feed",
            Self::Divider => "divider",
            Self::Network => "network",
        }
    }
}

/// How a regulator is built up.
#[derive(Debug, Clone, PartialEq)]
pub struct BuiltUp {
    /// The pass transistors: those in parallel, then those that drive them as one with them (Darlington, complementary).
    pub pass: Vec<DeviceId>,
    /// Whether they take over the current of a packaged regulator, whose entry this stands in.
    pub outboard: bool,
    /// Whether the output follows the control terminal: an emitter or source follower.
    pub follower: bool,
    /// Base-emitter drops between the control net and the output.
    pub base_emitter_drops: usize,
    /// Gate-source drops there.
    pub gate_source_drops: usize,
    /// The supply net ahead of the pass transistor.
    pub input: NetId,
    /// The net behind it.
    pub output: NetId,
    /// The nets that are one with that but for small resistors, beads and links, the pass transistor's own among them.
    pub output_line: Vec<NetId>,
    /// What compares; `None` where the reference holds the control terminal itself.
    pub amplifier: Option<Amplifier>,
    /// The resistors that divide the output; `None` where it is sensed directly or not at all.
    pub divider: Option<Divider>,
    /// The reference.
    pub reference: Reference,
    /// What feeds it; `None` where nothing tells.
    pub feed: Option<ReferenceFeed>,
    /// Every part of the network with what it does, in order of the file within each duty.
    pub cut_out: Vec<(DeviceId, Duty)>,
    /// The nets at which it is cut out, in order of the file: supplies and grounds.
    pub boundary: Vec<NetId>,
}

impl Reference {
    /// A reference whose whole voltage is compared.
    pub(super) fn held(kind: ReferenceKind, devices: Vec<DeviceId>, net: NetId) -> Self {
        Self { kind, devices, net, whole: true, divider: None, in_sense: false }
    }
}

impl BuiltUp {
    /// The parts with one duty.
    pub fn with(&self, duty: Duty) -> impl Iterator<Item = DeviceId> + '_ {
        self.cut_out.iter().filter(move |(_, own)| *own == duty).map(|(device, _)| *device)
    }
}
