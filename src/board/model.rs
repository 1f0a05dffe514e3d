//! What a board file holds.

use std::collections::BTreeMap;
use std::path::PathBuf;

use crate::knowledge::{Basis, DropoutPoint, EsrWindow, FamilyKind, Pass, PublishedLoop, RoleName, Sign};
use crate::quantity::{Dimension, Range};
use crate::source::Source;

use super::declared::Declared;
use super::texts::read_slack;
use crate::knowledge::DeviceModel;
use crate::source::toml::Date;

/// What is declared about a board: the house file, the board's own file and the fields on its symbols, merged.
#[derive(Debug, Clone, Default)]
pub struct Board {
    /// The board's title.
    pub title: Option<Declared<String>>,
    /// Ambient temperature, °C.
    pub ambient: Option<Declared<Range>>,
    /// Nets that are grounds though their names do not tell.
    pub grounds: Vec<Declared<String>>,
    /// Where power comes in.
    pub supplies: Vec<SupplyEntry>,
    /// What is drawn from nets.
    pub loads: Vec<LoadEntry>,
    /// What rails are meant to be.
    pub rails: Vec<RailEntry>,
    /// Facts about placed parts.
    pub parts: Vec<PartEntry>,
    /// Findings that someone has looked at.
    pub accepts: Vec<Accept>,
    /// Folders of further rules, each relative to the working folder as its board file is.
    pub rule_folders: Vec<Declared<PathBuf>>,
    /// Settings by check and key; what a key may hold is the check's matter.
    pub settings: BTreeMap<String, BTreeMap<String, Declared<SettingValue>>>,
    /// Verdicts that a case of a check expects, by check and subject.
    pub expect: Option<BTreeMap<String, BTreeMap<String, Declared<String>>>>,
    /// The files that were read: the house file first.
    pub sources: Vec<Source>,
}

/// What a supply is connected to.
#[derive(Debug, Clone, PartialEq, Eq, PartialOrd, Ord)]
pub enum SupplyNodes {
    /// One net, against ground.
    Net(String),
    /// Two nets, as a transformer winding or a floating source.
    Between(String, String),
}

impl SupplyNodes {
    /// The nets, one or two.
    pub fn nets(&self) -> impl Iterator<Item = &str> {
        let (one, other) = match self {
            Self::Net(net) => (net, None),
            Self::Between(one, other) => (one, Some(other)),
        };
        std::iter::once(one.as_str()).chain(other.map(String::as_str))
    }

    /// Whether both are the same nets, in either order.
    #[must_use]
    pub fn same_as(&self, other: &Self) -> bool {
        match (self, other) {
            (Self::Net(one), Self::Net(two)) => one == two,
            (Self::Between(a, b), Self::Between(c, d)) => (a == c && b == d) || (a == d && b == c),
            _ => false,
        }
    }

    /// As a reader is told it: `VBAT`, `/AC1 and /AC2`.
    #[must_use]
    pub fn shown(&self) -> String {
        match self {
            Self::Net(net) => net.clone(),
            Self::Between(one, other) => format!("{one} and {other}"),
        }
    }
}

/// A standard supply that a board file names.
#[derive(Debug, Clone, PartialEq)]
pub struct Standard {
    /// Its name as written.
    pub name: String,
    /// Its voltage, once it has been looked up with [`Board::resolve`].
    pub found: Option<StandardVoltage>,
}

/// The voltage of a standard supply.
#[derive(Debug, Clone, PartialEq)]
pub struct StandardVoltage {
    /// Volts.
    pub range: Range,
    /// The standard it comes from.
    pub source: String,
    /// Whether it was recalled and not read: then it is a guess.
    pub recalled: bool,
}

/// `[[supply]]`: where power comes in.
#[derive(Debug, Clone)]
pub struct SupplyEntry {
    /// Its nets.
    pub nodes: Declared<SupplyNodes>,
    /// Volts, signed. Never with `standard` or `ac`.
    pub voltage: Option<Declared<Range>>,
    /// A standard supply instead of a voltage.
    pub standard: Option<Declared<Standard>>,
    /// Volts rms of an alternating supply.
    pub ac: Option<Declared<Range>>,
    /// Hertz of an alternating supply.
    pub frequency: Option<Declared<Range>>,
    /// Ohms of source and cable.
    pub resistance: Option<Declared<Range>>,
    /// Seconds in which it comes up.
    pub rise: Option<Declared<Range>>,
    /// Whether it is plugged in live.
    pub hot_plug: Option<Declared<bool>>,
    /// Metres of lead.
    pub lead_length: Option<Declared<Range>>,
    /// Whether it can be shorted or collapse while the outputs are charged.
    pub may_short: Option<Declared<bool>>,
    /// Volts of the highest transient.
    pub surge: Option<Declared<Range>>,
    /// Whether it can be connected the wrong way round.
    pub reverse: Option<Declared<bool>>,
}

/// How a load draws its current.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum LoadKind {
    /// The rail's nominal voltage over the current.
    Resistive,
    /// The same current at any voltage.
    Constant,
}

/// `[[load]]`: what is drawn from a net.
#[derive(Debug, Clone)]
pub struct LoadEntry {
    /// The net.
    pub net: Declared<String>,
    /// Amperes, idle to peak, the nominal being the peak; magnitudes on negative rails too.
    pub current: Option<Declared<Range>>,
    /// Amperes that count for heat.
    pub continuous: Option<Declared<Range>>,
    /// How it draws it; resistive where nothing is declared.
    pub kind: Option<Declared<LoadKind>>,
}

/// `[[rail]]`: what a rail is meant to be.
#[derive(Debug, Clone)]
pub struct RailEntry {
    /// The net.
    pub net: Declared<String>,
    /// Volts, signed.
    pub voltage: Option<Declared<Range>>,
    /// Whether it may fall to its lowest voltage with its input.
    pub may_sag: Option<Declared<bool>>,
    /// Farads beyond a connector.
    pub off_board_capacitance: Option<Declared<Range>>,
}

/// An ESR as declared. One value means 20 °C and new, and is scaled cold and old; a range is taken as it stands.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Esr {
    /// Ohms.
    pub range: Range,
    /// Whether it was written as one value.
    pub single: bool,
}

/// `[[part]]`: facts about one placed part, and those that its symbol's fields tell.
#[derive(Debug, Clone)]
pub struct PartEntry {
    /// Reference designator.
    pub reference: Declared<String>,
    /// Capacitor technology or dielectric: lower case, single spaces; the canonical name after [`Board::resolve`]
    /// stands in `technology_name`.
    pub technology: Option<Declared<String>>,
    /// The technology's own name (`ceramic-1` …), once it has been looked up.
    pub technology_name: Option<String>,
    /// Equivalent series resistance.
    pub esr: Option<Declared<Esr>>,
    /// Relative deviation from the drawn value: −0.2 to 0.2 for ±20 %, nominal 0.
    pub tolerance: Option<Declared<Range>>,
    /// Rated voltage, volts.
    pub rating: Option<Declared<Range>>,
    /// Farads that are left of a capacitor at the voltage across it, by its maker's curve.
    pub effective_capacitance: Option<Declared<Range>>,
    /// Volts that a diode or switch of a supply line drops at its load.
    pub forward_drop: Option<Declared<Range>>,
    /// Ohms of a ferrite, fuse or inductor of a supply line.
    pub resistance: Option<Declared<Range>>,
    /// Kelvins per watt of the heat sink, to ambient. Never with `junction_to_ambient`.
    pub heatsink: Option<Declared<Range>>,
    /// Kelvins per watt from junction to ambient.
    pub junction_to_ambient: Option<Declared<Range>>,
    /// Power rating, watts.
    pub power: Option<Declared<Range>>,
    /// Name of the part family that it is.
    pub family: Option<Declared<String>>,
    /// Values or part numbers of other parts that may be fitted in its place.
    pub alternatives: Option<Declared<Vec<String>>>,
    /// Whether the part is to be left out of all judgement (`role = "ignore"`).
    pub ignore: Option<Declared<bool>>,
    /// Series, shunt, reference or switching.
    pub kind: Option<Declared<FamilyKind>>,
    /// The sign of what it regulates.
    pub polarity: Option<Declared<Sign>>,
    /// Its pass element.
    pub pass: Option<Declared<Pass>>,
    /// Pin number to the roles that it may have.
    pub pins: Option<Declared<BTreeMap<String, Vec<RoleName>>>>,
    /// Fixed output voltage, volts, signed.
    pub output_voltage: Option<Declared<Range>>,
    /// Dropout against load, with rising load.
    pub dropout: Option<Declared<Vec<DropoutPoint>>>,
    /// ESR window of the output capacitor, ohms.
    pub esr_window: Option<Declared<EsrWindow>>,
    /// Least output capacitance, farads.
    pub minimum_output_capacitance: Option<Declared<f64>>,
    /// Least input capacitance, farads.
    pub minimum_input_capacitance: Option<Declared<f64>>,
    /// Which capacitance the two minima speak of; nominal where nothing is declared.
    pub minimum_basis: Option<Declared<Basis>>,
    /// Plain figures by their key in a part file, SI units.
    pub figures: BTreeMap<String, Declared<Range>>,
    /// The loop as its maker publishes it.
    pub published_loop: Option<Declared<PublishedLoop<Declared<Range>>>>,
    /// A device model.
    pub model: Option<Declared<DeviceModel>>,
    /// Amperes that the part draws, idle to peak, the nominal being the peak; told by symbol fields only.
    pub load_current: Option<Declared<Range>>,
    /// Volts that the part supplies (a connector, a battery); told by symbol fields only.
    pub supply_voltage: Option<Declared<Range>>,
}

impl PartEntry {
    /// A part of which nothing is declared.
    #[must_use]
    pub fn new(reference: Declared<String>) -> Self {
        Self {
            reference,
            technology: None,
            technology_name: None,
            esr: None,
            tolerance: None,
            rating: None,
            effective_capacitance: None,
            forward_drop: None,
            resistance: None,
            heatsink: None,
            junction_to_ambient: None,
            power: None,
            family: None,
            alternatives: None,
            ignore: None,
            kind: None,
            polarity: None,
            pass: None,
            pins: None,
            output_voltage: None,
            dropout: None,
            esr_window: None,
            minimum_output_capacitance: None,
            minimum_input_capacitance: None,
            minimum_basis: None,
            figures: BTreeMap::new(),
            published_loop: None,
            model: None,
            load_current: None,
            supply_voltage: None,
        }
    }
}

/// How far from the edge an accepted finding was.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Slack {
    /// In the requirement's unit, SI (degrees for a phase).
    pub value: f64,
    /// What it measures.
    pub dimension: Dimension,
}

impl Slack {
    /// A slack as a board file states it: one figure with its unit.
    #[must_use]
    pub fn read(text: &str) -> Option<Self> {
        read_slack(text).ok()
    }
}

/// `[[accept]]`: a finding that someone has looked at.
#[derive(Debug, Clone)]
pub struct Accept {
    /// The check.
    pub check: Declared<String>,
    /// The part that the finding is about.
    pub part: Option<Declared<String>>,
    /// The net that the finding is about.
    pub net: Option<Declared<String>>,
    /// Why it is accepted.
    pub reason: Declared<String>,
    /// The last day on which it is accepted.
    pub until: Option<Declared<Date>>,
    /// Fingerprint of the finding; survives renumbering of parts.
    pub finding: Option<Declared<String>>,
    /// As accepted: a worse slack opens it again.
    pub slack: Option<Declared<Slack>>,
}

/// A setting of a check, as written.
#[derive(Debug, Clone, PartialEq)]
pub enum SettingValue {
    /// A text, such as a figure with its unit or a word.
    Text(String),
    /// A plain number.
    Number(f64),
    /// `true` or `false`.
    Flag(bool),
    /// Several texts.
    Texts(Vec<String>),
}

/// Look-ups by name.
impl Board {
    /// The supply of a net: one that is declared against ground or between it and another.
    #[must_use]
    pub fn supply(&self, net: &str) -> Option<&SupplyEntry> {
        self.supplies.iter().find(|entry| entry.nodes.value.nets().any(|name| name == net))
    }

    /// The load on a net.
    #[must_use]
    pub fn load(&self, net: &str) -> Option<&LoadEntry> {
        self.loads.iter().find(|entry| entry.net.value == net)
    }

    /// What a net is meant to be.
    #[must_use]
    pub fn rail(&self, net: &str) -> Option<&RailEntry> {
        self.rails.iter().find(|entry| entry.net.value == net)
    }

    /// What is declared about a part.
    #[must_use]
    pub fn part(&self, reference: &str) -> Option<&PartEntry> {
        self.parts.iter().find(|entry| entry.reference.value == reference)
    }

    /// A setting of a check.
    #[must_use]
    pub fn setting(&self, check: &str, key: &str) -> Option<&Declared<SettingValue>> {
        self.settings.get(check)?.get(key)
    }
}
