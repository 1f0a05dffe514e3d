//! Families of single parts that share a model.

use std::collections::BTreeMap;

use super::model::{DeviceModel, ModelKind};
use crate::knowledge::{Cited, SourceNote};
use crate::quantity::Range;

/// The parts of unknown number that a family stands for.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum StandsFor {
    /// Every part of its kind.
    Any,
    /// Transistors in packages that carry little power.
    Small,
    /// Transistors in packages that carry power.
    Power,
    /// Two bipolar transistors in one.
    Darlington,
    /// Schottky diodes.
    Schottky,
    /// Light-emitting diodes.
    Led,
}

impl StandsFor {
    /// Each with its word in device files.
    pub const ALL: &'static [(Self, &'static str)] = &[
        (Self::Any, "any"),
        (Self::Small, "small"),
        (Self::Power, "power"),
        (Self::Darlington, "darlington"),
        (Self::Schottky, "schottky"),
        (Self::Led, "led"),
    ];

    /// Its word in device files.
    #[must_use]
    pub fn name(self) -> &'static str {
        Self::ALL.iter().find(|(known, _)| *known == self).map_or("", |(_, name)| name)
    }

    /// Those that there are of a kind of device.
    #[must_use]
    pub fn of(kind: ModelKind) -> &'static [Self] {
        match kind {
            ModelKind::Npn | ModelKind::Pnp => &[Self::Small, Self::Power, Self::Darlington],
            ModelKind::Nmos | ModelKind::Pmos => &[Self::Small, Self::Power],
            ModelKind::Diode => &[Self::Any, Self::Schottky, Self::Led],
            ModelKind::Zener | ModelKind::Shunt | ModelKind::OpAmp => &[Self::Any],
        }
    }
}

/// Parts that share a model.
#[derive(Debug, Clone, PartialEq)]
pub struct DeviceFamily {
    /// Its name, unique.
    pub name: String,
    /// What it is.
    pub kind: ModelKind,
    /// Name patterns, as in part files, without a voltage code; none in a family that `stands_for` others.
    pub names: Vec<String>,
    /// The parts of unknown number that it stands for: its figures are then assumed.
    pub stands_for: Option<StandsFor>,
    /// Parameters by their names, SI units, see [`ModelKind::parameters`]; of one that depends on the voltage, the hull.
    pub parameters: BTreeMap<&'static str, Cited<Range>>,
    /// Parameters that depend on the voltage that the part is made for: `(up to this many volts, figure)`, rising, the
    /// last holds above.
    pub by_voltage: BTreeMap<&'static str, Vec<(f64, Cited<Range>)>>,
    /// Tolerance of that voltage, relative.
    pub tolerance: Option<Cited<Range>>,
    /// What a reader should know that no figure holds.
    pub note: Option<String>,
    /// Its sources.
    pub sources: Vec<SourceNote>,
    /// The file it comes from, as a path below `rules/`.
    pub file: String,
    /// Whether that file lies in a folder of the user.
    pub of_user: bool,
}

impl DeviceFamily {
    /// A parameter with what it rests on, for a part made for this many volts; without them, the hull of all.
    #[must_use]
    pub fn parameter(&self, name: &str, volts: Option<f64>) -> Option<&Cited<Range>> {
        if let (Some(volts), Some(steps)) = (volts, self.by_voltage.get(name)) {
            return steps.iter().find(|(limit, _)| volts <= *limit).or(steps.last()).map(|(_, figure)| figure);
        }
        self.parameters.get(name)
    }

    /// Its model for a part made for this many volts, which then are its `BV` within the tolerance.
    #[must_use]
    pub fn model(&self, volts: Option<f64>) -> DeviceModel {
        let mut model = DeviceModel::new(self.kind);
        for name in self.parameters.keys() {
            if let Some(figure) = self.parameter(name, volts) {
                model.put(name, figure.value);
            }
        }
        if let (Some(volts), Some(tolerance)) = (volts, &self.tolerance) {
            model.put("BV", Range::with_tolerance(volts, tolerance.value.high()));
        }
        model
    }

    /// Whether a figure of it is recalled.
    #[must_use]
    pub fn is_recalled(&self) -> bool {
        self.parameters.values().chain(&self.tolerance).any(|figure| figure.recalled)
    }
}
