//! Device models as texts: `pmos VTO=-2.4..-1.2 KP=2`.

use std::collections::BTreeMap;
use std::fmt;
use std::ops::Range as Bytes;

use crate::quantity::{Dimension, Range};
use crate::source::TextFault;
use crate::source::toml::nearest;

/// What a model stands for.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum ModelKind {
    /// NPN transistor, Gummel–Poon core.
    Npn,
    /// PNP transistor.
    Pnp,
    /// N-channel field-effect transistor, level 1.
    Nmos,
    /// P-channel field-effect transistor.
    Pmos,
    /// Diode.
    Diode,
    /// Zener diode.
    Zener,
    /// Shunt reference, as a diode with a sharp breakdown.
    Shunt,
    /// Operational amplifier.
    OpAmp,
}

impl ModelKind {
    /// Every kind with its word.
    pub const ALL: &'static [(Self, &'static str)] = &[
        (Self::Npn, "npn"),
        (Self::Pnp, "pnp"),
        (Self::Nmos, "nmos"),
        (Self::Pmos, "pmos"),
        (Self::Diode, "diode"),
        (Self::Zener, "zener"),
        (Self::Shunt, "shunt"),
        (Self::OpAmp, "opamp"),
    ];

    /// Its word.
    #[must_use]
    pub fn name(self) -> &'static str {
        Self::ALL.iter().find(|(kind, _)| *kind == self).map_or("", |(_, name)| name)
    }

    /// The names of its parameters, which are SPICE's; all in SI units.
    ///
    /// Not SPICE's: a MOSFET's `CGS CGD CDS` are linear capacitances between its terminals, outside RD and RS, and
    /// `KP` is already multiplied by W/L. Op-amps: `A0` gain, `GBW` hertz, `SR` volts per second, `VOS` volts in
    /// series with the + input (output = A0 · (v(+) + VOS − v(−))), `TOP` and `BOTTOM` volts of room that the output
    /// keeps to each rail, `RO` ohms.
    #[must_use]
    pub fn parameters(self) -> &'static [(&'static str, Allowed)] {
        use Allowed::{Any, NotNegative, Positive};
        match self {
            Self::Npn | Self::Pnp => &[
                ("IS", Positive),
                ("BF", Positive),
                ("BR", Positive),
                ("VAF", Positive),
                ("IKF", Positive),
                ("ISE", NotNegative),
                ("NE", Positive),
                ("RB", NotNegative),
                ("RC", NotNegative),
                ("RE", NotNegative),
                ("CJE", NotNegative),
                ("CJC", NotNegative),
                ("TF", NotNegative),
                ("TR", NotNegative),
            ],
            Self::Nmos | Self::Pmos => &[
                ("VTO", Any),
                ("KP", Positive),
                ("LAMBDA", NotNegative),
                ("RD", NotNegative),
                ("RS", NotNegative),
                ("IS", Positive),
                ("CGS", NotNegative),
                ("CGD", NotNegative),
                ("CDS", NotNegative),
            ],
            Self::Diode | Self::Zener | Self::Shunt => &[
                ("IS", Positive),
                ("N", Positive),
                ("RS", NotNegative),
                ("BV", Positive),
                ("IBV", Positive),
                ("NBV", Positive),
                ("CJO", NotNegative),
                ("TT", NotNegative),
            ],
            Self::OpAmp => &[
                ("A0", Positive),
                ("GBW", Positive),
                ("SR", Positive),
                ("VOS", Any),
                ("TOP", NotNegative),
                ("BOTTOM", NotNegative),
                ("RO", NotNegative),
            ],
        }
    }
}

/// What a parameter of a device model measures; of one name in all kinds. `LAMBDA` counts as a plain number per volt, and
/// so do the gains and emission coefficients.
#[must_use]
pub fn parameter_dimension(name: &str) -> Dimension {
    match name {
        "IS" | "IKF" | "ISE" | "IBV" => Dimension::CURRENT,
        "VAF" | "VTO" | "BV" | "VOS" | "TOP" | "BOTTOM" => Dimension::VOLTAGE,
        "RB" | "RC" | "RE" | "RD" | "RS" | "RO" => Dimension::RESISTANCE,
        "CJE" | "CJC" | "CGS" | "CGD" | "CDS" | "CJO" => Dimension::CAPACITANCE,
        "TF" | "TR" | "TT" => Dimension::TIME,
        "KP" => Dimension::CURRENT.over(Dimension::VOLTAGE).over(Dimension::VOLTAGE),
        "GBW" => Dimension::FREQUENCY,
        "SR" => Dimension::VOLTAGE.over(Dimension::TIME),
        _ => Dimension::ONE,
    }
}

/// The unit of a parameter as device files write it, empty for a plain number, and what one of it is in SI units.
#[must_use]
pub fn parameter_unit(name: &str) -> (&'static str, f64) {
    match name {
        "KP" => ("A/V/V", 1.0),
        "SR" => ("V/us", 1e6),
        _ => (parameter_dimension(name).symbol().unwrap_or(""), 1.0),
    }
}

/// Which values a parameter may have.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Allowed {
    /// Any finite number.
    Any,
    /// Zero or more.
    NotNegative,
    /// More than zero.
    Positive,
}

impl Allowed {
    /// Whether a parameter may have this lowest value.
    #[must_use]
    pub fn admits(self, low: f64) -> bool {
        match self {
            Self::Any => true,
            Self::NotNegative => low >= 0.0,
            Self::Positive => low > 0.0,
        }
    }

    pub(crate) fn words(self) -> &'static str {
        match self {
            Self::Any => "any number",
            Self::NotNegative => "zero or more",
            Self::Positive => "more than zero",
        }
    }
}

/// A device model: its kind, and those of its parameters that are given, each with its range.
#[derive(Debug, Clone, PartialEq)]
pub struct DeviceModel {
    kind: ModelKind,
    parameters: BTreeMap<&'static str, Range>,
}

impl DeviceModel {
    /// A model without parameters.
    #[must_use]
    pub fn new(kind: ModelKind) -> Self {
        Self { kind, parameters: BTreeMap::new() }
    }

    /// The model that a text describes: a kind, then `NAME=number` or `NAME=low..high`, separated by blanks, in SI
    /// units without suffixes, names in any case. A range's nominal is its middle.
    ///
    /// # Errors
    /// Every unknown kind or name, number that cannot be read, range out of order and value that cannot be.
    pub fn read(text: &str) -> Result<Self, Vec<TextFault>> {
        let mut words = model_words(text);
        let Some((at, word)) = words.next() else {
            return Err(vec![fault(0..text.len(), "the model is empty", "nothing stands here", &kinds_help(""))]);
        };
        let Some(kind) = ModelKind::ALL.iter().find(|(_, name)| name.eq_ignore_ascii_case(word)) else {
            let message = format!("`{word}` is no kind of device model");
            return Err(vec![fault(at..at + word.len(), &message, "the kind stands here", &kinds_help(word))]);
        };
        let mut model = Self::new(kind.0);
        let faults: Vec<TextFault> = words.filter_map(|(at, word)| model.read_parameter(at, word).err()).collect();
        if faults.is_empty() { Ok(model) } else { Err(faults) }
    }

    fn read_parameter(&mut self, at: usize, word: &str) -> Result<(), TextFault> {
        let whole = at..at + word.len();
        let Some((name, value)) = word.split_once('=') else {
            let message = format!("`{word}` is no parameter");
            return Err(fault(
                whole,
                &message,
                "not NAME=value",
                "write NAME=value or NAME=low..high, without blanks",
            ));
        };
        let behind = at + name.len() + 1..at + word.len();
        let range = read_number_or_range(value).map_err(|message| {
            let help = "write numbers in SI units without suffixes, as in 800e-12, and ranges as low..high";
            fault(behind.clone(), &message, "the value stands here", help)
        })?;
        self.set(name, range).map_err(|error| match error {
            SetError::Unknown(help) => {
                let message = format!("`{name}` is no parameter of {}", article(self.kind));
                fault(at..at + name.len(), &message, "not a parameter", &help)
            }
            SetError::Twice => fault(whole, &format!("`{name}` is given twice"), "given here again", "give it once"),
            SetError::Refused(allowed) => {
                let help = format!("it must be {}", allowed.words());
                fault(behind, &format!("`{name}` cannot be {value}"), "not possible", &help)
            }
        })
    }

    /// Sets a parameter.
    pub(crate) fn set(&mut self, name: &str, range: Range) -> Result<(), SetError> {
        let known = self.kind.parameters();
        let Some((own, allowed)) = known.iter().find(|(own, _)| own.eq_ignore_ascii_case(name)) else {
            let names: Vec<&str> = known.iter().map(|(own, _)| *own).collect();
            let help = match nearest(name, names.iter().copied()) {
                Some(near) => format!("did you mean `{near}`?"),
                None => format!("its parameters: {}", names.join(", ")),
            };
            return Err(SetError::Unknown(help));
        };
        if !allowed.admits(range.low()) {
            return Err(SetError::Refused(*allowed));
        }
        match self.parameters.insert(own, range) {
            None => Ok(()),
            Some(_) => Err(SetError::Twice),
        }
    }

    /// Sets a parameter that was checked before, or gives it another value; one that the kind lacks is passed over.
    pub(crate) fn put(&mut self, name: &str, range: Range) {
        if let Some((own, _)) = self.kind.parameters().iter().find(|(own, _)| *own == name) {
            self.parameters.insert(own, range);
        }
    }

    /// Gives a parameter that is there another value.
    pub(crate) fn replace(&mut self, name: &str, range: Range) {
        if let Some(known) = self.parameters.get_mut(name) {
            *known = range;
        }
    }

    /// What it stands for.
    #[must_use]
    pub fn kind(&self) -> ModelKind {
        self.kind
    }

    /// A parameter, where it is given. Names are upper case.
    #[must_use]
    pub fn get(&self, name: &str) -> Option<Range> {
        self.parameters.get(name).copied()
    }

    /// Every parameter that is given, by name.
    pub fn parameters(&self) -> impl Iterator<Item = (&'static str, Range)> {
        self.parameters.iter().map(|(name, range)| (*name, *range))
    }
}

impl fmt::Display for DeviceModel {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        formatter.write_str(self.kind.name())?;
        for (name, range) in self.parameters() {
            write!(formatter, " {name}={:e}", range.low())?;
            if !range.is_exact() {
                write!(formatter, "..{:e}", range.high())?;
            }
        }
        Ok(())
    }
}

/// Why a parameter cannot be set.
#[derive(Debug)]
pub(crate) enum SetError {
    Unknown(String),
    Twice,
    Refused(Allowed),
}

fn fault(place: Bytes<usize>, message: &str, label: &str, help: &str) -> TextFault {
    TextFault::new(place, message, label, help)
}

fn kinds_help(word: &str) -> String {
    let names = || ModelKind::ALL.iter().map(|(_, name)| *name);
    match nearest(word, names()) {
        Some(near) if !word.is_empty() => format!("did you mean `{near}`?"),
        _ => format!("begin with one of {}", names().collect::<Vec<_>>().join(", ")),
    }
}

fn article(kind: ModelKind) -> String {
    let name = kind.name();
    let vowel_sound = matches!(kind, ModelKind::Npn | ModelKind::Nmos | ModelKind::OpAmp);
    format!("{} {name}", if vowel_sound { "an" } else { "a" })
}

/// The words of a text with the byte at which each begins.
pub(crate) fn model_words(text: &str) -> impl Iterator<Item = (usize, &str)> {
    // A word's address less the text's is its place.
    text.split_whitespace().map(|word| (word.as_ptr() as usize - text.as_ptr() as usize, word))
}

/// `1e-3`, or `1e-3..2e-3` in order; every number finite.
fn read_number_or_range(text: &str) -> Result<Range, String> {
    let number = |part: &str| {
        // The words for infinity and no number that the parser takes are not figures.
        let digits = part.bytes().all(|byte| byte.is_ascii_digit() || b"+-.eE".contains(&byte));
        match part.parse::<f64>() {
            Ok(value) if digits && value.is_finite() => Ok(value),
            Ok(_) if digits => Err(format!("`{part}` is too large a number")),
            _ => Err(format!("`{part}` is no number")),
        }
    };
    let Some((low, high)) = text.split_once("..") else {
        return number(text).map(Range::exactly);
    };
    let (low, high) = (number(low)?, number(high)?);
    if low > high {
        return Err(format!("the range `{text}` begins above its end"));
    }
    Ok(Range::between(low, high))
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    #[test]
    fn a_model_is_read_with_its_ranges() {
        let model = DeviceModel::read("pmos VTO=-2.4..-1.2 kp=2 CGS=800e-12").unwrap();
        assert_eq!(model.kind(), ModelKind::Pmos);
        let threshold = model.get("VTO").unwrap();
        assert_eq!((threshold.low(), threshold.high()), (-2.4, -1.2));
        assert!((threshold.nominal() + 1.8).abs() < 1e-12);
        assert!(model.get("KP").unwrap().is_exact());
        assert_eq!(model.to_string(), "pmos CGS=8e-10 KP=2e0 VTO=-2.4e0..-1.2e0");
    }

    #[test]
    fn every_fault_of_a_model_is_told_with_its_place() {
        let text = "opamp GWB=1e6 A0=-1 RO=100ohm VOS=5e-3..-5e-3 SR=1e400 TOP=1 TOP=2 BOTTOM";
        let faults = DeviceModel::read(text).unwrap_err();
        let told: Vec<String> =
            faults.iter().map(|one| format!("{}: {}; {}", &text[one.place.clone()], one.message, one.help)).collect();
        let numbers = "write numbers in SI units without suffixes, as in 800e-12, and ranges as low..high";
        assert_eq!(
            told,
            [
                "GWB: `GWB` is no parameter of an opamp; did you mean `GBW`?".to_owned(),
                "-1: `A0` cannot be -1; it must be more than zero".to_owned(),
                format!("100ohm: `100ohm` is no number; {numbers}"),
                format!("5e-3..-5e-3: the range `5e-3..-5e-3` begins above its end; {numbers}"),
                format!("1e400: `1e400` is too large a number; {numbers}"),
                "TOP=2: `TOP` is given twice; give it once".to_owned(),
                "BOTTOM: `BOTTOM` is no parameter; write NAME=value or NAME=low..high, without blanks".to_owned(),
            ]
        );
    }

    #[test]
    fn an_unknown_kind_names_the_nearest_and_an_empty_text_names_all() {
        let faults = DeviceModel::read("  pnpn BF=1").unwrap_err();
        assert_eq!((faults[0].place.clone(), faults[0].help.as_str()), (2..6, "did you mean `pnp`?"));
        let faults = DeviceModel::read(" ").unwrap_err();
        assert!(faults[0].help.starts_with("begin with one of npn, pnp"));
    }

    proptest! {
        #[test]
        fn any_text_is_read_or_refused_with_places_inside_it(text in "\\PC{0,60}|(npn|opamp)( [A-Z]{1,3}=[-0-9.eµ]{0,9}){0,4}") {
            if let Err(faults) = DeviceModel::read(&text) {
                prop_assert!(!faults.is_empty());
                for one in faults {
                    prop_assert!(text.get(one.place.clone()).is_some(), "{:?} in {:?}", one.place, text);
                }
            }
        }

        #[test]
        fn what_a_model_prints_it_reads_back(low in -1e6..1e6f64, width in 0.0..1e3f64, gain in 1e-9..1e9f64) {
            let mut model = DeviceModel::new(ModelKind::OpAmp);
            prop_assert!(model.set("VOS", Range::between(low, low + width)).is_ok());
            prop_assert!(model.set("A0", Range::exactly(gain)).is_ok());
            prop_assert_eq!(DeviceModel::read(&model.to_string()).unwrap(), model);
        }
    }
}
