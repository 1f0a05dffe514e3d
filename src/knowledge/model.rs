//! Part families, capacitor technologies and standard supplies.

use std::collections::BTreeMap;

use super::PublishedLoop;
use super::devices::DeviceFamily;
use crate::quantity::Range;

/// A source: what was read, or recalled.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct SourceNote {
    /// Short name by which figures of the file refer to it.
    pub id: String,
    /// Title with revision and section.
    pub title: String,
    /// Whether it was read; a figure from a source that was not read is recalled.
    pub read: bool,
}

/// A figure with where it comes from.
#[derive(Debug, Clone, PartialEq)]
pub struct Cited<T> {
    /// The figure, SI units.
    pub value: T,
    /// Title of the source; of a recalled figure, what it was recalled from.
    pub source: String,
    /// Whether it was recalled and not read: then it is a guess.
    pub recalled: bool,
}

/// What kind of part a family is.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum FamilyKind {
    /// A series regulator.
    Series,
    /// A shunt reference or shunt regulator.
    Shunt,
    /// A series voltage reference.
    Reference,
    /// A switching converter or module: recognized, its rail used, not judged.
    Switching,
    /// Something that looks like a regulator and is none.
    Other,
}

impl FamilyKind {
    /// Every kind with its name in part files and results.
    pub const ALL: &'static [(Self, &'static str)] = &[
        (Self::Series, "series"),
        (Self::Shunt, "shunt"),
        (Self::Reference, "reference"),
        (Self::Switching, "switching"),
        (Self::Other, "other"),
    ];

    /// Its name in part files and results.
    #[must_use]
    pub fn name(self) -> &'static str {
        Self::ALL.iter().find(|(kind, _)| *kind == self).map_or("", |(_, name)| name)
    }
}

/// The sign of the voltage that a part regulates.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Sign {
    /// Above ground.
    Positive,
    /// Below ground.
    Negative,
}

/// The pass element of a regulator.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
#[allow(missing_docs)] // each variant is the trade's name of the element, as `Pass::name` spells it
pub enum Pass {
    NpnFollower,
    NpnFollowerDarlington,
    NpnFollowerComplementary,
    PnpFollower,
    PnpFollowerDarlington,
    PnpFollowerComplementary,
    NmosFollower,
    PmosFollower,
    Pnp,
    PnpDarlington,
    Npn,
    NpnDarlington,
    Pmos,
    Nmos,
}

impl Pass {
    /// Every pass element with its name in part files and results.
    pub const ALL: &'static [(Self, &'static str)] = &[
        (Self::NpnFollower, "npn-follower"),
        (Self::NpnFollowerDarlington, "npn-follower-darlington"),
        (Self::NpnFollowerComplementary, "npn-follower-complementary"),
        (Self::PnpFollower, "pnp-follower"),
        (Self::PnpFollowerDarlington, "pnp-follower-darlington"),
        (Self::PnpFollowerComplementary, "pnp-follower-complementary"),
        (Self::NmosFollower, "nmos-follower"),
        (Self::PmosFollower, "pmos-follower"),
        (Self::Pnp, "pnp"),
        (Self::PnpDarlington, "pnp-darlington"),
        (Self::Npn, "npn"),
        (Self::NpnDarlington, "npn-darlington"),
        (Self::Pmos, "pmos"),
        (Self::Nmos, "nmos"),
    ];

    /// Its name in part files and results.
    #[must_use]
    pub fn name(self) -> &'static str {
        Self::ALL.iter().find(|(pass, _)| *pass == self).map_or("", |(_, name)| name)
    }
}

/// How binding a minimum is.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum MinimumKind {
    /// The sheet requires it: a fact.
    Required,
    /// The sheet recommends it, or gives a value that covers all cases.
    Recommended,
    /// It was recalled and not read.
    Recalled,
    /// The part does without.
    Optional,
}

/// Which capacitance a minimum speaks of.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Basis {
    /// The marked value.
    Nominal,
    /// What is left under bias, over temperature and tolerance.
    Effective,
}

/// An ESR window of the output capacitor, in ohms; `None` is no bound.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct EsrWindow {
    /// The lower bound.
    pub low: Option<f64>,
    /// The upper bound.
    pub high: Option<f64>,
}

/// What a family asks of an input or output capacitor.
#[derive(Debug, Clone, PartialEq)]
pub struct CapacitorDemand {
    /// Minimum capacitance in farads; `None` where the sheet names none.
    pub minimum: Option<Cited<f64>>,
    /// Minimum in farads where the capacitor is an aluminium electrolytic, where the sheet asks for more then.
    pub minimum_electrolytic: Option<Cited<f64>>,
    /// How binding it is.
    pub kind: MinimumKind,
    /// Which capacitance it speaks of.
    pub basis: Basis,
    /// The minimum depends on the output voltage: `(up to this magnitude in volts, farads)`, rising; the last entry
    /// holds above. Empty where it does not.
    pub by_output: Vec<(f64, f64)>,
    /// ESR window in ohms; `None` where the sheet is silent on ESR.
    pub esr: Option<Cited<EsrWindow>>,
    /// Whether capacitors above the upper ESR bound do not count (the sheet admits ceramics only).
    pub ceramic_only: bool,
    /// Whether the sheet says itself that it is stable with ceramics (then a ceramic is never worse than tight).
    pub ceramic_allowed: bool,
    /// Input capacitor: wanted only when the supply's filter capacitor is far.
    pub if_far: bool,
    /// Largest capacitance in farads that the sheet allows.
    pub maximum: Option<Cited<f64>>,
    /// Minimum in farads with a capacitor at the adjust or bypass pin, where the sheet then asks for more.
    pub with_bypass: Option<Cited<f64>>,
}

/// A dropout point: at this load the typical and the maximum dropout.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct DropoutPoint {
    /// The point holds for versions of this output voltage (a magnitude in volts) and above, up to the next such
    /// voltage of the family; 0 where the sheet makes no difference.
    pub from_output: f64,
    /// Load in amperes.
    pub load: f64,
    /// Typical dropout in volts; equal to the maximum where the sheet gives only one.
    pub typical: f64,
    /// Maximum dropout in volts over temperature; `None` where the sheet gives only a typical one.
    pub maximum: Option<f64>,
}

/// Dropout against load.
#[derive(Debug, Clone, PartialEq)]
pub struct Dropout {
    /// Points with rising `from_output`, then rising load.
    pub points: Vec<Cited<DropoutPoint>>,
    /// How the sheet defines dropout: `output 100 mV below nominal`.
    pub defined: String,
}

/// At which level an enable input switches the part on.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Active {
    /// On when high.
    High,
    /// On when low.
    Low,
}

/// What an open enable input does.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum OpenEnable {
    /// The part is on.
    On,
    /// The part is off.
    Off,
    /// The sheet says that it must not be left open.
    Undefined,
    /// The sheet does not say, in what was read.
    Unknown,
}

/// Enable input of a family.
#[derive(Debug, Clone, PartialEq)]
pub struct EnableSpec {
    /// Level that switches on.
    pub active: Active,
    /// Volts at or beyond which the part is certainly on.
    pub on: Option<Cited<f64>>,
    /// Volts at or beyond which it is certainly off.
    pub off: Option<Cited<f64>>,
    /// What an open pin does.
    pub open: Cited<OpenEnable>,
}

/// Between which pins an adjustable part holds its reference voltage.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum AdjustSide {
    /// Between output and adjust pin (LM317 and 1117 kinds).
    Output,
    /// Between adjust (feedback) pin and ground.
    Ground,
    /// A current out of the pin into one resistor sets the output (LT304x kinds).
    SetCurrent,
}

/// A role of a pin.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
#[allow(missing_docs)] // each variant is the trade's name of the role, as `RoleName::name` spells it
pub enum RoleName {
    Input,
    Output,
    Ground,
    Adjust,
    Enable,
    Sense,
    Bypass,
    Bias,
    PowerGood,
    Cathode,
    Anode,
    NotConnected,
    Other,
}

impl RoleName {
    /// Every role with its name in part files.
    pub const ALL: &'static [(Self, &'static str)] = &[
        (Self::Input, "input"),
        (Self::Output, "output"),
        (Self::Ground, "ground"),
        (Self::Adjust, "adjust"),
        (Self::Enable, "enable"),
        (Self::Sense, "sense"),
        (Self::Bypass, "bypass"),
        (Self::Bias, "bias"),
        (Self::PowerGood, "power-good"),
        (Self::Cathode, "cathode"),
        (Self::Anode, "anode"),
        (Self::NotConnected, "not-connected"),
        (Self::Other, "other"),
    ];

    /// Its name in part files.
    #[must_use]
    pub fn name(self) -> &'static str {
        Self::ALL.iter().find(|(role, _)| *role == self).map_or("", |(_, name)| name)
    }
}

/// A package of a family.
#[derive(Debug, Clone, PartialEq)]
pub struct Package {
    /// Pin number (or `tab`) to the roles it may have (`adjust or ground` gives two).
    pub pins: BTreeMap<String, Vec<RoleName>>,
    /// Where the order of the pins was read, and whether it was recalled.
    pub pins_from: Cited<()>,
    /// Junction to ambient in kelvins per watt, on the sheet's board.
    pub junction_to_ambient: Option<Cited<f64>>,
}

/// A part family: one maker's version of a part, or several that do not differ.
#[derive(Debug, Clone, PartialEq)]
pub struct Family {
    /// Unique name: `1117 / LM1117`.
    pub name: String,
    /// The group of look-alikes that it belongs to, such as `1117`.
    pub group: String,
    /// The maker; `various` stands for all that have no file, and the known ones of the group then count as well.
    pub maker: String,
    /// Words, lower case, by which a manufacturer field names the maker.
    pub maker_words: Vec<String>,
    /// The family under whose names this maker sells a version of its own. Such a name means both, so that their
    /// figures are guesses where they differ, until the schematic names the maker or the board file the family.
    pub version_of: Option<String>,
    /// Name patterns: letters, digits and `-./+` as they are, in any case; `?` one character; `*` any run, also none;
    /// `{V}` a voltage code with the separators around it (`-3.3`, `33`, `3V3`, `05`, `-ADJ`), which must be there: one
    /// of `codes`, or one that spells a voltage of `voltages` (`33`, `330`, `3.3` and `3V3` for 3.3 V), or `ADJ`. Of
    /// several patterns that fit, the one with a voltage code is meant, then the one with most literal characters.
    pub names: Vec<String>,
    /// Output voltages (magnitudes, volts) that are made in fixed versions; settles what a voltage code means.
    pub voltages: Vec<f64>,
    /// Voltage codes that do not spell their voltage, upper case, to volts.
    pub codes: BTreeMap<String, f64>,
    /// Codes in the place of a voltage code that mean an adjustable version, upper case, beside `ADJ`.
    pub adjust_codes: Vec<String>,
    /// Series, shunt, reference …
    pub kind: FamilyKind,
    /// The sign of its output.
    pub polarity: Sign,
    /// Its pass element, where known.
    pub pass: Option<Cited<Pass>>,
    /// Whether fixed versions exist.
    pub fixed: bool,
    /// Adjustable versions: where the reference lies.
    pub adjust: Option<AdjustSide>,
    /// Plain figures by their key in the file, each a range in SI units: see [`Family::FIGURES`].
    pub figures: BTreeMap<String, Cited<Range>>,
    /// Figures that depend on the output voltage: `(up to this magnitude in volts, figure)`, rising, the last holds
    /// above. `figures` then holds the hull of them.
    pub by_output: BTreeMap<String, Vec<(f64, Cited<Range>)>>,
    /// Dropout.
    pub dropout: Option<Dropout>,
    /// Input capacitor.
    pub input_capacitor: Option<CapacitorDemand>,
    /// Output capacitor.
    pub output_capacitor: Option<CapacitorDemand>,
    /// Capacitor at the bypass, noise or adjust pin.
    pub bypass_capacitor: Option<CapacitorDemand>,
    /// Enable input.
    pub enable: Option<EnableSpec>,
    /// The loop, where the maker publishes it.
    pub published_loop: Option<PublishedLoop<Cited<Range>>>,
    /// Packages by name.
    pub packages: BTreeMap<String, Package>,
    /// What a reader should know that no figure holds.
    pub note: Option<String>,
    /// Its sources.
    pub sources: Vec<SourceNote>,
    /// The file it comes from, as a path below `rules/`.
    pub file: String,
}

/// A capacitor technology.
#[derive(Debug, Clone, PartialEq)]
pub struct Technology {
    /// `ceramic-1`, `ceramic-2`, `electrolytic`, `tantalum`, `polymer`, `film`.
    pub name: String,
    /// Other words for it, lower case: `mlcc`, `x7r`, `aluminium electrolytic`.
    pub words: Vec<String>,
    /// Plain figures by their key in the file, see [`Technology::FIGURES`].
    pub figures: BTreeMap<String, Cited<Range>>,
    /// Per-dielectric or per-case figures: table name to row name to figure.
    pub tables: BTreeMap<String, BTreeMap<String, Cited<Range>>>,
    /// Its sources.
    pub sources: Vec<SourceNote>,
    /// The file it comes from.
    pub file: String,
}

/// A standard supply.
#[derive(Debug, Clone, PartialEq)]
pub struct Supply {
    /// `USB 2.0 bus`, `lead-acid 12 V`.
    pub name: String,
    /// Other names for it, lower case.
    pub words: Vec<String>,
    /// Voltage, volts.
    pub voltage: Cited<Range>,
    /// Net names, as patterns, that are taken for this supply.
    pub nets: Vec<String>,
    /// Plain figures by their key in the file, see [`Supply::FIGURES`].
    pub figures: BTreeMap<String, Cited<Range>>,
    /// Its sources.
    pub sources: Vec<SourceNote>,
    /// The file it comes from.
    pub file: String,
}

/// Everything known.
#[derive(Debug, Clone, Default)]
pub struct Knowledge {
    /// Families in order of their file names.
    pub families: Vec<Family>,
    /// Technologies in order of their file names.
    pub technologies: Vec<Technology>,
    /// Supplies in order of their file names.
    pub supplies: Vec<Supply>,
    /// Models of single parts in order of their file names.
    pub devices: Vec<DeviceFamily>,
    /// Check folders as text: folder name to file name to text; typed later.
    pub checks: BTreeMap<String, BTreeMap<String, String>>,
    /// Where each check folder is, for messages.
    pub check_paths: BTreeMap<String, String>,
    /// Files of an extra folder that took the place of one of the same name: `parts/1117-lm.toml`, and from where.
    pub replaced: Vec<(String, String)>,
}
