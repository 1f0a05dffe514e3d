//! Devices, nets and pins.

use std::collections::HashMap;

use petgraph::graph::{NodeIndex, UnGraph};

use crate::netlist::Field;
use crate::source::Span;

/// A device of the board.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct DeviceId(pub(super) NodeIndex);

/// A net of the board.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct NetId(pub(super) NodeIndex);

/// What a device is, as far as its symbol, pins and reference tell. Integrated parts are told apart later.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum DeviceKind {
    /// A resistor, two pins.
    Resistor,
    /// A potentiometer or trimmer, or another resistor that can be set.
    Potentiometer,
    /// A resistor network or array.
    ResistorNetwork,
    /// A resistor that follows temperature or light.
    Thermistor,
    /// A capacitor, polarized or not.
    Capacitor,
    /// An inductor.
    Inductor,
    /// A ferrite bead.
    Ferrite,
    /// A fuse or polyfuse.
    Fuse,
    /// A diode without further distinction.
    Diode,
    /// A Schottky diode.
    Schottky,
    /// A zener diode, transient suppressor or varistor: a clamp.
    Zener,
    /// A light-emitting diode.
    Led,
    /// A bridge rectifier.
    Bridge,
    /// A bipolar transistor.
    Bipolar,
    /// A field-effect transistor.
    Mosfet,
    /// A junction field-effect transistor.
    Jfet,
    /// Another discrete semiconductor: thyristor, triac, IGBT, unijunction or photo transistor, solar cell.
    OtherSemiconductor,
    /// An operational amplifier or comparator.
    OpAmp,
    /// A connector or terminal.
    Connector,
    /// A battery or cell.
    Battery,
    /// A switch, jumper or relay contact.
    Switch,
    /// A solder jumper or net tie that is closed as drawn.
    NetTie,
    /// A transformer.
    Transformer,
    /// A crystal or oscillator.
    Crystal,
    /// An opto-coupler.
    Optocoupler,
    /// A test point, mounting hole, fiducial, logo: nothing electrical.
    Mechanical,
    /// An integrated circuit or module of any kind.
    Integrated,
    /// Not told by anything.
    Unknown,
}

/// The polarity of a transistor.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Polarity {
    /// NPN, or N channel.
    N,
    /// PNP, or P channel.
    P,
}

/// Whether a part is on the board.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Fitted {
    /// It is.
    Yes,
    /// It is not; the text that says so, as written (`dnp`, value `DNP`).
    No(String),
}

/// The electrical type of a pin, whatever the format calls it.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum PinType {
    /// `input`
    Input,
    /// `output`
    Output,
    /// `bidirectional`, `BiDi`
    Bidirectional,
    /// `tri_state`, `3state`
    TriState,
    /// `passive`
    Passive,
    /// `power_in`
    PowerIn,
    /// `power_out`
    PowerOut,
    /// `open_collector`, `openCol`
    OpenCollector,
    /// `open_emitter`, `openEm`
    OpenEmitter,
    /// `no_connect`, `NotConnected`
    NoConnect,
    /// `free`
    Free,
    /// `unspecified`, `unspc`, or nothing that is known.
    Unspecified,
}

/// A pin of a device.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Pin {
    /// Number as written (may be a word).
    pub number: String,
    /// Name without version 10's suffix; empty where there is none (`~`).
    pub name: String,
    /// Electrical type.
    pub kind: PinType,
    /// Whether the schematic marks it as left open on purpose.
    pub marked_open: bool,
    /// The net it is on; `None` where it is on no net or on one that connects nothing else and is named so.
    pub net: Option<NetId>,
    /// Its `(node …)`; empty where it is on no net.
    pub span: Span,
}

/// How a component value was read.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Reading {
    /// As engineers write it: as good as drawn.
    Plain,
    /// After a repair (`1OK`) or on an assumption about the unit (a bare `0.1`): a guess.
    Repaired,
}

/// What a component's value text says.
#[derive(Debug, Clone, PartialEq)]
pub struct ComponentValue {
    /// Ohms, farads or henries.
    pub amount: f64,
    /// How it was read.
    pub reading: Reading,
    /// Relative tolerance where the text states one (0.01 for 1 %).
    pub tolerance: Option<f64>,
    /// Rated voltage in volts where the text states one.
    pub rating: Option<f64>,
    /// Dielectric or technology word where the text states one, as written (`X7R`, `C0G`, `tant`).
    pub technology: Option<String>,
}

/// A placed part.
#[derive(Debug, Clone, PartialEq)]
pub struct Device {
    /// Reference designator.
    pub reference: String,
    /// Value as written.
    pub value: String,
    /// What it is.
    pub kind: DeviceKind,
    /// Transistors only, where told.
    pub polarity: Option<Polarity>,
    /// Capacitors only: whether the symbol is a polarized one.
    pub polarized: bool,
    /// Resistors, capacitors, inductors: what the value text says; `None` where it cannot be read.
    pub amount: Option<ComponentValue>,
    /// Whether it is on the board.
    pub fitted: Fitted,
    /// Symbol library.
    pub library: String,
    /// Symbol name in that library.
    pub part: String,
    /// Human-readable sheet path, such as `/Power/`, or empty.
    pub sheet: String,
    /// The symbol's description; that of the library part where the component has none.
    pub description: String,
    /// Whether that text was written for another symbol, of which this one is an alias: it tells what kind of part this
    /// is, but its figures are those of the other.
    pub description_of_other: bool,
    /// The symbol's key words, or empty.
    pub keywords: String,
    /// Footprint, `library:name` or empty.
    pub footprint: String,
    /// Fields and properties of the component as written; manufacturer's numbers stand here.
    pub fields: Vec<Field>,
    /// Pins in a stable order: as the library part lists them, then any that only nets name.
    pub pins: Vec<Pin>,
    /// Its place in `Netlist::components`; past the end for a part that only nets name.
    pub component: usize,
    /// The two nets of a part whose connected pins lie on exactly two.
    pub(super) ends: Option<[NetId; 2]>,
}

/// A net.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Net {
    /// Name as written; unnamed nets of old files get `net CODE`.
    pub name: String,
    /// Code as written.
    pub code: String,
    /// Whether it is a ground by name or by the symbols on it.
    pub ground: bool,
    /// Its `(net …)`.
    pub span: Span,
    /// Its name inside that.
    pub name_span: Span,
}

/// A node of the graph: devices and nets alternate.
#[derive(Debug, Clone)]
pub(super) enum Node {
    Device(Box<Device>),
    Net(Net),
}

/// The board: a graph of devices and nets whose edges are pins (an edge's weight is the index of the pin in its
/// device).
#[derive(Debug, Clone)]
pub struct Circuit {
    pub(super) graph: UnGraph<Node, usize>,
    pub(super) devices: Vec<DeviceId>,
    pub(super) nets: Vec<NetId>,
    pub(super) by_reference: HashMap<String, DeviceId>,
    pub(super) by_name: HashMap<String, Vec<NetId>>,
    pub(super) whole: bool,
}
