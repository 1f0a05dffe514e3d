//! The model of a single part: that of its part number, else what is usual of its kind and size.

use crate::circuit::{Device, DeviceKind, Polarity};
use crate::knowledge::{DeviceFamily, DeviceModel, Knowledge, ModelKind, StandsFor};
use crate::quantity::Range;

use super::family_match::{fit, reduced};
use super::identity::{NUMBER_FIELDS, names_part, same_part};
use super::package::package_of;
use super::zener::zener_volts;

/// The model that was found for a part.
#[derive(Debug, Clone, PartialEq)]
pub struct DeviceMatch<'k> {
    /// The model, with ranges. A zener diode has a `BV` where its texts tell its voltage, and only then; a shunt reference
    /// never has one.
    pub model: DeviceModel,
    /// The name of its family.
    pub family: &'k str,
    /// The title of the source that the model rests on.
    pub source: String,
    /// Which text of the part named the family, as written; `None` of what is assumed.
    pub told_by: Option<String>,
    /// Whether a figure of the model is recalled.
    pub recalled: bool,
    /// Whether the part number is not known and the model that of any part of its kind.
    pub assumed: bool,
}

/// Packages that carry more than about a watt, as [`package_of`] spells them.
const POWER: &[&str] = &[
    "TO-3", "TO-5", "TO-39", "TO-66", "TO-126", "TO-218", "TO-220", "TO-225", "TO-247", "TO-251", "TO-252", "TO-263",
    "TO-264", "TO-262", "TO-202", "SOT-223", "SOT-89", "SOT-32",
];
/// Packages that carry less.
const SMALL: &[&str] = &[
    "TO-92", "TO-18", "SOT-23", "SOT-323", "SOT-363", "SOT-416", "SOT-523", "SOT-563", "SOT-723", "SOT-883", "SC-70",
    "SC-75", "SC-89", "SC-59", "SC-101",
];

/// How the numbers of transistors with resistors inside begin.
const WITH_RESISTORS: &[&str] = &["DTA", "DTB", "DTC", "DTD", "PDTA", "PDTC", "MUN2", "MUN5"];

/// The model of a part as what it is drawn as; `None` for parts that have none, or of which nothing tells the polarity.
#[must_use]
pub fn device_match<'k>(knowledge: &'k Knowledge, device: &Device) -> Option<DeviceMatch<'k>> {
    let kinds = kinds_of(device);
    kinds
        .iter()
        .find_map(|kind| named(knowledge, device, *kind))
        .or_else(|| if let [kind] = kinds { usual(knowledge, device, *kind) } else { None })
}

/// The model of a part that serves as this kind of device: by its part number among those of the kind, else what is
/// usual.
#[must_use]
pub fn device_match_as<'k>(knowledge: &'k Knowledge, device: &Device, kind: ModelKind) -> Option<DeviceMatch<'k>> {
    named(knowledge, device, kind).or_else(|| usual(knowledge, device, kind))
}

/// The kinds of model that a part may have as it is drawn; several where that leaves it open, then only its part number
/// decides.
#[must_use]
pub fn kinds_of(device: &Device) -> &'static [ModelKind] {
    match (device.kind, device.polarity) {
        (DeviceKind::Bipolar, Some(Polarity::N)) => &[ModelKind::Npn],
        (DeviceKind::Bipolar, Some(Polarity::P)) => &[ModelKind::Pnp],
        (DeviceKind::Bipolar, None) => &[ModelKind::Npn, ModelKind::Pnp],
        (DeviceKind::Mosfet, Some(Polarity::N)) => &[ModelKind::Nmos],
        (DeviceKind::Mosfet, Some(Polarity::P)) => &[ModelKind::Pmos],
        (DeviceKind::Mosfet, None) => &[ModelKind::Nmos, ModelKind::Pmos],
        (DeviceKind::Diode | DeviceKind::Schottky | DeviceKind::Led, _) => &[ModelKind::Diode],
        (DeviceKind::Zener, _) => &[ModelKind::Zener],
        (DeviceKind::OpAmp, _) => &[ModelKind::OpAmp],
        (DeviceKind::Integrated | DeviceKind::Unknown, _) => &[ModelKind::OpAmp, ModelKind::Shunt],
        _ => &[],
    }
}

/// The texts that may name a part, the most trusted first. Where the value names another part than the symbol, the symbol
/// says nothing of it.
fn texts(device: &Device) -> impl Iterator<Item = &str> {
    let of_fields = device.fields.iter().filter(|field| {
        let name = field.name.trim();
        NUMBER_FIELDS.iter().any(|known| known.eq_ignore_ascii_case(name))
    });
    let fields = of_fields.map(|field| field.value.trim());
    let (value, symbol) = (device.value.trim(), device.symbol());
    let symbol = if names_device(value) && !same_part(value, symbol) { "" } else { symbol };
    let all = std::iter::once(value).chain(fields).chain([symbol]);
    all.filter(|text| !text.is_empty())
}

/// Whether a text looks like a part number, those that begin with a digit (`2N3904`, `1N4148`) among them.
fn names_device(text: &str) -> bool {
    names_part(text) || text.strip_prefix(['1', '2', '3']).is_some_and(names_part)
}

/// The family that a text of the part names: of several the one whose pattern has most letters and digits, then the one
/// of the user's own folder, then the first by file.
fn named<'k>(knowledge: &'k Knowledge, device: &Device, kind: ModelKind) -> Option<DeviceMatch<'k>> {
    let families: Vec<&DeviceFamily> = knowledge.devices.iter().filter(|family| family.kind == kind).collect();
    for text in texts(device) {
        let name = reduced(text);
        let mut best: Option<((usize, bool), &DeviceFamily)> = None;
        for family in &families {
            let Some(letters) = family.names.iter().filter_map(|pattern| fit(pattern, &name)).max() else { continue };
            let rank = (letters, family.of_user);
            if best.is_none_or(|(most, _)| rank > most) {
                best = Some((rank, *family));
            }
        }
        if let Some((_, family)) = best {
            return Some(matched(family, family.model(volts(device, kind)), Some(text)));
        }
    }
    None
}

/// What is usual of parts of this kind; where the package does not tell the size, over both.
fn usual<'k>(knowledge: &'k Knowledge, device: &Device, kind: ModelKind) -> Option<DeviceMatch<'k>> {
    let standing =
        |of: StandsFor| knowledge.devices.iter().find(|family| family.kind == kind && family.stands_for == Some(of));
    if is_special(device, kind) {
        return None;
    }
    let one = |of: StandsFor| standing(of).map(|family| matched(family, family.model(volts(device, kind)), None));
    match kind {
        ModelKind::Npn | ModelKind::Pnp if is_darlington(device) => one(StandsFor::Darlington),
        ModelKind::Npn | ModelKind::Pnp | ModelKind::Nmos | ModelKind::Pmos => match carries_power(device) {
            Some(true) => one(StandsFor::Power),
            Some(false) => one(StandsFor::Small),
            None => {
                let (power, small) = (standing(StandsFor::Power)?, standing(StandsFor::Small)?);
                let model = over_both(&power.model(None), &small.model(None));
                let mut found = matched(power, model, None);
                found.recalled |= small.is_recalled();
                Some(found)
            }
        },
        ModelKind::Diode => one(match device.kind {
            DeviceKind::Schottky => StandsFor::Schottky,
            DeviceKind::Led => StandsFor::Led,
            _ => StandsFor::Any,
        }),
        ModelKind::Zener | ModelKind::Shunt | ModelKind::OpAmp => one(StandsFor::Any),
    }
}

fn matched<'k>(family: &'k DeviceFamily, model: DeviceModel, told_by: Option<&str>) -> DeviceMatch<'k> {
    DeviceMatch {
        model,
        family: &family.name,
        source: family.sources.first().map(|source| source.title.clone()).unwrap_or_default(),
        told_by: told_by.map(str::to_owned),
        recalled: family.is_recalled(),
        assumed: family.stands_for.is_some(),
    }
}

/// The voltage that a zener diode is made for.
fn volts(device: &Device, kind: ModelKind) -> Option<f64> {
    if kind == ModelKind::Zener { zener_volts(device).map(|(volts, _)| volts) } else { None }
}

/// A model over the ranges of two, its nominals halfway on a scale of ratios where both have one sign.
fn over_both(one: &DeviceModel, other: &DeviceModel) -> DeviceModel {
    let mut both = one.clone();
    for (name, range) in other.parameters() {
        let Some(own) = one.get(name) else {
            both.put(name, range);
            continue;
        };
        let (first, second) = (own.nominal(), range.nominal());
        let nominal =
            if first * second > 0.0 { (first * second).sqrt().copysign(first) } else { (first + second) / 2.0 };
        both.put(name, Range::clamped(own.low().min(range.low()), nominal, own.high().max(range.high())));
    }
    both
}

/// Whether the part is of a sort of its own, of which nothing is usual: with resistors inside, conducting without drive, or
/// a clamp that is named by the voltage that it lets stand.
fn is_special(device: &Device, kind: ModelKind) -> bool {
    let words: &[&str] = match kind {
        ModelKind::Npn | ModelKind::Pnp => &["bias resistor", "biased", "prebias", "digital", "brt"],
        ModelKind::Nmos | ModelKind::Pmos => &["depletion"],
        ModelKind::Zener => &["tvs", "transient", "suppress", "varistor", "esd", "smaj", "smbj", "p6ke"],
        _ => &[],
    };
    let text = text_of(device);
    let name = reduced(if device.value.trim().is_empty() { device.symbol() } else { &device.value });
    let with_resistors = matches!(kind, ModelKind::Npn | ModelKind::Pnp)
        && WITH_RESISTORS.iter().any(|beginning| name.starts_with(beginning));
    with_resistors || words.iter().any(|word| text.contains(word))
}

/// Whether two transistors hide in one symbol.
fn is_darlington(device: &Device) -> bool {
    text_of(device).contains("darlington")
}

/// Everything that is said of a part, in lower case.
fn text_of(device: &Device) -> String {
    let text = format!("{} {} {} {}", device.part, device.value, device.description, device.keywords);
    text.to_ascii_lowercase()
}

/// Whether the package is one that carries power; `None` where the footprint tells no package that is known here.
fn carries_power(device: &Device) -> Option<bool> {
    let name = package_of(&device.footprint).unwrap_or_else(|| case_of(&device.footprint));
    // `SOT-23-5` and `TO-220-5` are sizes of `SOT-23` and `TO-220`.
    let is = |case: &str| name.strip_prefix(case).is_some_and(|rest| rest.is_empty() || rest.starts_with('-'));
    if POWER.iter().any(|case| is(case)) {
        return Some(true);
    }
    SMALL.iter().any(|case| is(case)).then_some(false)
}

/// The case in the name of a footprint whose order of pads may be any: letters, a dash and the number behind.
fn case_of(footprint: &str) -> String {
    let name = footprint.rsplit(':').next().unwrap_or("").to_ascii_uppercase().replace('_', "-");
    let case = ["TO", "SOT", "SC"].into_iter().find_map(|family| {
        let rest = name.strip_prefix(family)?;
        let digits: String = rest.trim_start_matches('-').chars().take_while(char::is_ascii_digit).collect();
        (!digits.is_empty()).then(|| format!("{family}-{digits}"))
    });
    case.unwrap_or_else(|| if name.contains("DPAK") { "TO-252".to_owned() } else { String::new() })
}
