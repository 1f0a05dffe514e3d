//! What a data sheet must tell for a figure to be known: the keys of a part file, and the figures that rest on each.

use crate::knowledge::{AdjustSide, Family, FamilyKind, OpenEnable, RoleName};

/// A key of a part file that figures rest on.
#[derive(Debug)]
pub struct SheetFigure {
    /// The key: one of [`Family::FIGURES`], or that of a table, or `table.key`.
    pub key: &'static str,
    /// Its unit in a part file, or the words that it takes.
    pub unit: &'static str,
    /// What it is, in one line.
    pub meaning: &'static str,
    /// The figures of the check language that rest on it.
    pub used_by: &'static [&'static str],
    /// The families that it makes sense for.
    about: About,
}

#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum About {
    Series,
    Shunt,
    Reference,
    NoShunt,
    Fixed,
    Adjusted,
    SetByCurrent,
    Enabled,
    Any,
}

const OUTPUT: &[&str] =
    &["set_point", "output_voltage", "output_magnitude", "held_output", "headroom", "highest_headroom"];
const MINIMUM: &[&str] = &["minimum_capacitance", "minimum_kind", "minimum_basis", "drawn_equals_minimum"];
const INPUT_MINIMUM: &[&str] = &["minimum_input_capacitance", "input_capacitor_kind", "input_minimum_basis"];

/// Every key of a part file that figures rest on, or that a data sheet should be asked for.
pub const SHEET: &[SheetFigure] = &[
    plain("rated_current", "A", About::NoShunt, &["rated_current", "load", "dropout"]),
    plain("input_max", "V", About::NoShunt, &["input_limit"]),
    plain("difference_max", "V", About::NoShunt, &["difference_limit"]),
    plain("input_min", "V", About::NoShunt, &["lowest_input"]),
    plain("tolerance", "%", About::Fixed, OUTPUT),
    plain("reference", "V", About::Adjusted, &["reference", "set_point", "set_point_nominal", "output_voltage"]),
    plain(
        "adjust_current",
        "A",
        About::Adjusted,
        &["set_point", "set_point_nominal", "output_voltage", "adjust_error"],
    ),
    plain("set_current", "A", About::SetByCurrent, &["set_point", "set_point_nominal", "output_voltage"]),
    plain("minimum_load", "A", About::Adjusted, &["minimum_load", "typical_minimum_load"]),
    plain("reference_load", "A", About::Reference, &["reference_load_limit"]),
    plain("ground_current", "A", About::NoShunt, &["dissipation"]),
    plain("junction_max", "°C", About::NoShunt, &["junction_limit"]),
    plain("short_circuit_current", "A", About::Series, &["start_current"]),
    plain("diode_above_output", "V", About::Series, &["harmless_output"]),
    plain("diode_above_capacitance", "F", About::Series, &["harmless_capacitance"]),
    plain("unstable_capacitance", "F", About::Shunt, &["unstable_low", "unstable_high"]),
    plain("divider_current_min", "A", About::Adjusted, &["divider_current_minimum"]),
    plain("bias_min", "A", About::Shunt, &["bias_minimum"]),
    plain("bias_max", "A", About::Shunt, &["bias_maximum"]),
    SheetFigure {
        key: "dropout",
        unit: "V",
        meaning: "typical / maximum over temperature, for as many loads as the sheet gives",
        used_by: &["dropout", "dropout_light"],
        about: About::NoShunt,
    },
    SheetFigure {
        key: "output_capacitor",
        unit: "F",
        meaning: "least capacitance at the output",
        used_by: MINIMUM,
        about: About::Series,
    },
    SheetFigure {
        key: "output_capacitor.esr",
        unit: "Ω",
        meaning: "ESR window of the output capacitor; esr_min or esr_max alone where the sheet gives one end",
        used_by: &["esr_low", "esr_high", "ceramic_allowed"],
        about: About::Series,
    },
    SheetFigure {
        key: "loop",
        unit: "dB, Hz, Ω",
        meaning: "gain, poles and zeros inside the part, output resistance, where the maker publishes them",
        used_by: &[
            "has_published_loop",
            "computed_esr_low",
            "computed_esr_high",
            "phase_margin",
            "modulus_margin",
            "unity_gain_frequency",
        ],
        about: About::Series,
    },
    SheetFigure {
        key: "input_capacitor",
        unit: "F",
        meaning: "least capacitance at the input",
        used_by: INPUT_MINIMUM,
        about: About::Series,
    },
    SheetFigure {
        key: "enable.on",
        unit: "V",
        meaning: "level at which the part is certainly on",
        used_by: &["enable_on"],
        about: About::Enabled,
    },
    SheetFigure {
        key: "enable.off",
        unit: "V",
        meaning: "level at which the part is certainly off",
        used_by: &["enable_off"],
        about: About::Enabled,
    },
    SheetFigure {
        key: "enable.open",
        unit: "on, off, undefined",
        meaning: "what an open pin does",
        used_by: &["enable_when_open"],
        about: About::Enabled,
    },
    SheetFigure {
        key: "junction_to_ambient",
        unit: "C/W",
        meaning: "junction to ambient on the sheet's board",
        used_by: &["thermal_resistance", "junction_temperature"],
        about: About::Any,
    },
];

const fn plain(key: &'static str, unit: &'static str, about: About, used_by: &'static [&'static str]) -> SheetFigure {
    SheetFigure { key, unit, meaning: meaning(key), used_by, about }
}

/// The meaning of a plain figure, from the one list of them.
const fn meaning(key: &str) -> &'static str {
    let mut index = 0;
    while index < Family::FIGURES.len() {
        #[allow(clippy::indexing_slicing, reason = "below the length, and computed when compiled")]
        let (known, _, meaning) = Family::FIGURES[index];
        if same(known.as_bytes(), key.as_bytes()) {
            return meaning;
        }
        index += 1;
    }
    ""
}

const fn same(one: &[u8], other: &[u8]) -> bool {
    if one.len() != other.len() {
        return false;
    }
    let mut index = 0;
    while index < one.len() {
        #[allow(clippy::indexing_slicing, reason = "below both lengths, and computed when compiled")]
        if one[index] != other[index] {
            return false;
        }
        index += 1;
    }
    true
}

impl SheetFigure {
    /// Whether a family of this kind has such a figure.
    #[must_use]
    pub fn concerns(&self, family: &Family) -> bool {
        let kind = family.kind;
        let enabled = family.enable.is_some() || has_pin(family, RoleName::Enable);
        let judged = matches!(kind, FamilyKind::Series | FamilyKind::Shunt | FamilyKind::Reference);
        judged
            && match self.about {
                About::Series => kind == FamilyKind::Series,
                About::Shunt => kind == FamilyKind::Shunt,
                About::Reference => kind == FamilyKind::Reference,
                About::NoShunt => kind != FamilyKind::Shunt,
                About::Fixed => family.fixed,
                About::Adjusted => matches!(family.adjust, Some(AdjustSide::Output | AdjustSide::Ground)),
                About::SetByCurrent => family.adjust == Some(AdjustSide::SetCurrent),
                About::Enabled => enabled,
                About::Any => true,
            }
    }

    /// Whether a family states it, be it recalled.
    #[must_use]
    pub fn is_stated(&self, family: &Family) -> bool {
        let enable = family.enable.as_ref();
        let output = family.output_capacitor.as_ref();
        match self.key {
            "dropout" => family.dropout.is_some(),
            "output_capacitor" => output.is_some(),
            "output_capacitor.esr" => output.is_some_and(|demand| demand.esr.is_some() || demand.ceramic_allowed),
            "loop" => family.published_loop.is_some(),
            "input_capacitor" => family.input_capacitor.is_some(),
            "enable.on" => enable.is_some_and(|enable| enable.on.is_some()),
            "enable.off" => enable.is_some_and(|enable| enable.off.is_some()),
            "enable.open" => enable.is_some_and(|enable| enable.open.value != OpenEnable::Unknown),
            "junction_to_ambient" => family.packages.values().any(|package| package.junction_to_ambient.is_some()),
            "tolerance" => ["tolerance", "tolerance_initial"].iter().any(|key| family.figure(key).is_some()),
            key => family.figure(key).is_some(),
        }
    }

    /// Whether a figure of the check language rests on it.
    #[must_use]
    pub fn decides(&self, figure: &str) -> bool {
        self.used_by.contains(&figure)
    }
}

fn has_pin(family: &Family, role: RoleName) -> bool {
    family.packages.values().flat_map(|package| package.pins.values()).any(|roles| roles.contains(&role))
}

/// What a family does not state and a check that uses these figures would ask for.
pub fn lacking<'a>(family: &'a Family, figures: &'a [String]) -> impl Iterator<Item = &'static SheetFigure> + 'a {
    SHEET.iter().filter(move |entry| {
        figures.iter().any(|figure| entry.decides(figure)) && entry.concerns(family) && !entry.is_stated(family)
    })
}
