//! What a drawing tells of a part that no family knows, as a family to be completed from its data sheet.

use std::collections::BTreeMap;

use crate::circuit::{Device, DeviceKind, Fitted};
use crate::knowledge::{
    Active, AdjustSide, Cited, EnableSpec, Family, FamilyKind, Knowledge, OpenEnable, Package, RoleName, Sign,
    VOLTAGE_CODE,
};

use super::family_match::{reduced, spellings};
use super::identity::{NUMBER_FIELDS, names_part};
use super::model::{Design, Mode, Regulator, RegulatorKind};

/// A family begun from a drawing.
#[derive(Debug, Clone)]
pub struct Sketch {
    /// The family: names, voltages, kind, polarity, pins and enable level; no figures.
    pub family: Family,
    /// The text that names the part.
    pub name: String,
    /// Where it stands: `value`, `MPN field`, `symbol`.
    pub told_by: String,
    /// Voltages that something tells, but not the part's own name, with what tells them.
    pub perhaps: Vec<(f64, String)>,
    /// The package as the footprint names it, or `as drawn`.
    pub package: String,
}

/// Why there is no sketch of a part.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum NoSketch {
    /// No part has the reference.
    NoPart,
    /// It is not on the board; the text that says so.
    NotFitted(String),
    /// It was recognized and is not judged, for this reason.
    NotJudged(String),
    /// It is no regulator, but was taken for this.
    NoRegulator(String),
    /// These families know it already, as indices into `Knowledge::families`, the best first; the text that told.
    Known(Vec<usize>, String),
    /// Nothing on it is a part number; the value.
    Nameless(String),
}

/// Sketches the family of a part.
///
/// # Errors
/// Why there is nothing to sketch.
pub fn sketch(design: &Design, knowledge: &Knowledge, reference: &str) -> Result<Sketch, NoSketch> {
    let circuit = &design.circuit;
    let id = circuit.device_named(reference).ok_or(NoSketch::NoPart)?;
    let device = circuit.device(id);
    if let Fitted::No(text) = &device.fitted {
        return Err(NoSketch::NotFitted(text.clone()));
    }
    if let Some(found) = design.not_judged.iter().find(|found| found.device == id) {
        return Err(NoSketch::NotJudged(found.reason.clone()));
    }
    let outputs: Vec<&Regulator> = design.regulators.iter().filter(|regulator| regulator.device == id).collect();
    let Some(regulator) = outputs.first().copied() else {
        return Err(NoSketch::NoRegulator(taken_for(device.kind).to_owned()));
    };
    if !regulator.identity.families.is_empty() {
        return Err(NoSketch::Known(regulator.identity.families.clone(), regulator.identity.name.clone()));
    }
    let (name, told_by) = number(device).ok_or_else(|| NoSketch::Nameless(device.value.clone()))?;
    Ok(begun(device, regulator, &outputs, knowledge, (name, told_by)))
}

/// The text that is a part number, with where it stands: the value, a field, else the symbol's name.
fn number(device: &Device) -> Option<(String, String)> {
    let word = |text: &str| text.split([' ', '(', ';']).next().unwrap_or("").to_owned();
    if names_part(&device.value) {
        return Some((word(device.value.trim()), "value".to_owned()));
    }
    let fields = device.fields.iter().filter(|field| {
        NUMBER_FIELDS.iter().any(|known| known.eq_ignore_ascii_case(field.name.trim())) && names_part(&field.value)
    });
    let field = fields.map(|field| (word(field.value.trim()), format!("{} field", field.name.trim()))).next();
    field.or_else(|| names_part(device.symbol()).then(|| (word(device.symbol()), "symbol".to_owned())))
}

fn begun(
    device: &Device,
    first: &Regulator,
    outputs: &[&Regulator],
    knowledge: &Knowledge,
    (name, told_by): (String, String),
) -> Sketch {
    let kind = match first.kind {
        RegulatorKind::Series => FamilyKind::Series,
        RegulatorKind::Shunt => FamilyKind::Shunt,
        RegulatorKind::Reference => FamilyKind::Reference,
        RegulatorKind::Switching => FamilyKind::Switching,
    };
    let fixed = first.mode == Mode::Fixed;
    // A voltage that the part's own name does not spell is no fact of the part.
    let told = first.nominal.as_ref().filter(|_| fixed);
    let spelled = told.and_then(|nominal| pattern(&name, nominal.volts.abs()));
    let own = |source: &str| source.contains(name.as_str()) && !source.starts_with("net name");
    let volts = told.filter(|nominal| own(&nominal.source)).map(|nominal| nominal.volts.abs());
    let (base, names) = match spelled {
        Some((base, pattern)) if volts.is_some() => (base, vec![pattern]),
        _ => plain_pattern(&name),
    };
    let mut title = base.clone();
    while knowledge.family(&title).is_some() {
        title.push_str(" of another maker");
    }
    let mut family = Family::unknown(&title, kind, &format!("parts/{}.toml", file_stem(&base)));
    family.names = names;
    family.voltages = volts.into_iter().collect();
    family.fixed = fixed;
    family.polarity = first.polarity;
    family.maker = super::identity::maker_as_written(device).to_owned();
    if !fixed {
        let three_pins = first.roles.ground.is_empty() && kind != FamilyKind::Shunt;
        family.adjust = Some(if three_pins { AdjustSide::Output } else { AdjustSide::Ground });
    }
    family.enable = outputs.iter().find_map(|regulator| enable(regulator));
    let package = package_name(&device.footprint);
    let pins = pins(device, outputs);
    let pins_from = Cited { value: (), source: "the symbol as drawn".to_owned(), recalled: true };
    family.packages.insert(package.clone(), Package { pins, pins_from, junction_to_ambient: None });
    let perhaps = told.filter(|_| volts.is_none()).map(|nominal| (nominal.volts.abs(), nominal.source.clone()));
    Sketch { family, name, told_by, perhaps: perhaps.into_iter().collect(), package }
}

fn enable(regulator: &Regulator) -> Option<EnableSpec> {
    let pin = regulator.roles.enable.first()?;
    let active = if pin.active_low { Active::Low } else { Active::High };
    let open = Cited { value: OpenEnable::Unknown, source: String::new(), recalled: true };
    Some(EnableSpec { active, on: None, off: None, open })
}

/// Pin numbers with the roles that were recognized.
fn pins(device: &Device, outputs: &[&Regulator]) -> BTreeMap<String, Vec<RoleName>> {
    let mut roles: BTreeMap<usize, RoleName> = BTreeMap::new();
    for regulator in outputs {
        let shunt = regulator.kind == RegulatorKind::Shunt;
        let negative = regulator.polarity == Sign::Negative;
        let (hot, cold) = match (shunt, negative) {
            (false, _) => (RoleName::Output, RoleName::Ground),
            (true, false) => (RoleName::Cathode, RoleName::Anode),
            (true, true) => (RoleName::Anode, RoleName::Cathode),
        };
        let found = &regulator.roles;
        let enable: Vec<usize> = found.enable.iter().map(|enable| enable.pin).collect();
        for (list, role) in [
            (&found.other, RoleName::Other),
            (&found.power_good, RoleName::PowerGood),
            (&found.bypass, RoleName::Bypass),
            (&found.sense, RoleName::Sense),
            (&found.bias, RoleName::Bias),
            (&enable, RoleName::Enable),
            (&found.adjust, RoleName::Adjust),
            (&found.ground, cold),
            (&found.input, RoleName::Input),
            (&found.output, hot),
        ] {
            roles.extend(list.iter().map(|pin| (*pin, role)));
        }
    }
    let role = |index: usize| roles.get(&index).copied().unwrap_or(RoleName::NotConnected);
    device.pins.iter().enumerate().map(|(index, pin)| (pin.number.clone(), vec![role(index)])).collect()
}

/// The pattern of a name whose voltage code is cut out, with what stands before it.
fn pattern(name: &str, volts: f64) -> Option<(String, String)> {
    let text = clean(name);
    let mut codes = spellings(volts, false);
    // The longest spelling is meant: `3.3` and not `3`.
    codes.sort_by_key(|code| std::cmp::Reverse(code.len()));
    for code in codes {
        let Some(at) = text.rfind(&code) else { continue };
        let (before, behind) = (text.get(..at)?, text.get(at + code.len()..)?);
        let digit = |sign: Option<char>| sign.is_some_and(|sign| sign.is_ascii_digit());
        let alone = code.len() > 1 || before.ends_with(['-', '.', '/']);
        let numbered = before.chars().any(|sign| sign.is_ascii_digit());
        if digit(behind.chars().next()) || !alone || !numbered {
            continue;
        }
        let base = before.trim_end_matches(['-', '.', '/']).to_owned();
        return Some((base, format!("{before}{VOLTAGE_CODE}*")));
    }
    None
}

/// The pattern of a name in which nothing is known to be a voltage code.
fn plain_pattern(name: &str) -> (String, Vec<String>) {
    let text = clean(name);
    let base = text.split(['-', '/']).next().filter(|base| names_part(base)).unwrap_or(&text).to_owned();
    let adjustable = text.find("ADJ").and_then(|at| text.get(..at)).filter(|before| names_part(before));
    match adjustable {
        Some(before) => (base, vec![format!("{before}{VOLTAGE_CODE}*")]),
        None => (base, vec![format!("{text}*")]),
    }
}

/// A name with nothing in it that cannot stand in a pattern.
fn clean(name: &str) -> String {
    let allowed = |sign: char| if sign.is_ascii_alphanumeric() || "-./+".contains(sign) { sign } else { '?' };
    reduced(name).chars().map(allowed).collect()
}

fn file_stem(base: &str) -> String {
    let stem: String =
        base.chars().map(|sign| if sign.is_ascii_alphanumeric() { sign.to_ascii_lowercase() } else { '-' }).collect();
    stem.trim_matches('-').to_owned()
}

/// `SOT-223-3` of `Package_TO_SOT_SMD:SOT-223-3_TabPin2`: the first piece of the name that has letters and digits.
fn package_name(footprint: &str) -> String {
    let name = footprint.rsplit(':').next().unwrap_or(footprint);
    let fits = |piece: &&str| {
        piece.chars().any(|sign| sign.is_ascii_digit()) && piece.chars().any(|sign| sign.is_ascii_alphabetic())
    };
    name.split('_').find(fits).unwrap_or("as drawn").to_owned()
}

/// What a device was taken for, in words.
fn taken_for(kind: DeviceKind) -> &'static str {
    match kind {
        DeviceKind::Resistor => "a resistor",
        DeviceKind::Potentiometer => "a potentiometer",
        DeviceKind::ResistorNetwork => "a resistor network",
        DeviceKind::Thermistor => "a thermistor",
        DeviceKind::Capacitor => "a capacitor",
        DeviceKind::Inductor => "an inductor",
        DeviceKind::Ferrite => "a ferrite",
        DeviceKind::Fuse => "a fuse",
        DeviceKind::Diode | DeviceKind::Schottky => "a diode",
        DeviceKind::Zener => "a zener diode or clamp",
        DeviceKind::Led => "an LED",
        DeviceKind::Bridge => "a rectifier bridge",
        DeviceKind::Bipolar | DeviceKind::Mosfet | DeviceKind::Jfet => "a transistor",
        DeviceKind::OtherSemiconductor => "a discrete semiconductor",
        DeviceKind::OpAmp => "an op-amp or comparator",
        DeviceKind::Connector => "a connector",
        DeviceKind::Battery => "a battery",
        DeviceKind::Switch => "a switch or jumper",
        DeviceKind::NetTie => "a net tie",
        DeviceKind::Transformer => "a transformer",
        DeviceKind::Crystal => "a crystal or oscillator",
        DeviceKind::Optocoupler => "an opto-coupler",
        DeviceKind::Mechanical => "a mechanical part",
        DeviceKind::Integrated => "an integrated circuit without the pins or the text of a regulator",
        DeviceKind::Unknown => "nothing that is known",
    }
}
