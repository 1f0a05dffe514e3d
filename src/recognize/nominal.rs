//! The nominal output voltage of a part, from its texts.

use crate::circuit::Device;
use crate::knowledge::{Family, FamilyKind, Knowledge, Sign};
use crate::quantity::Grade;

use super::family_match::{Code, reduced};
use super::identity::{Known, Place, names_part};
use super::model::Nominal;
use super::stated::Stated;
use super::voltage_code::{Arbiters, Chosen, Plainness, Reading, choose, read_name};
use super::words::TextSigns;

/// What the texts say of a part's output voltages, signs not applied.
#[derive(Debug, Clone, Default, PartialEq)]
pub(super) struct Told {
    /// The one output voltage, or that of all outputs.
    pub(super) volts: Option<Nominal>,
    /// Whether `volts` is only one of several readings of a code, or a code that may be none.
    pub(super) unsure: bool,
    /// Whether the digits may be no voltage at all.
    pub(super) faint: bool,
    /// The other readings.
    pub(super) others: Vec<f64>,
    /// The voltages of a part with two outputs, in order.
    pub(super) pair: Option<[Nominal; 2]>,
    /// The name or text says that the part is adjustable.
    pub(super) adjustable: bool,
    /// Worth a remark: name and description contradict each other.
    pub(super) remark: Option<String>,
}

/// The texts that may carry a voltage code, in order of trust, with where each stands and how far it is trusted.
fn texts<'a>(device: &'a Device, known: &'a Known) -> Vec<(&'a str, &'static str, Grade)> {
    let value = device.value.trim();
    let mut texts = Vec::new();
    if !value.is_empty() {
        texts.push((value, "value", Grade::Drawn));
    }
    if known.place == Place::Number {
        texts.push((known.identity.name.as_str(), "part number", Grade::Drawn));
    }
    // Another part number in the value means that the symbol's name is not that of the part.
    if known.symbol_agrees {
        texts.push((device.symbol(), "symbol", Grade::Described));
    } else if !known.value_names_part {
        texts.push((device.symbol(), "symbol", Grade::Inferred));
    }
    texts
}

/// Whether a name says that the part is adjustable. A lone `A` does where such a version can exist: `HT7333-A` is fixed.
fn says_adjustable(name: &str, family: Option<&Family>) -> bool {
    let name = reduced(name);
    let lone = || name.split(['-', ' ']).skip(1).any(|part| part == "A" || part == "AD");
    name.contains("ADJ") || family.is_none_or(|family| family.adjust.is_some()) && lone()
}

/// Reads what the texts say. `negative` is what is known of the sign.
pub(super) fn read(device: &Device, known: &Known, text: &TextSigns, knowledge: &Knowledge) -> Told {
    let family = known.identity.families.first().and_then(|index| knowledge.families.get(*index));
    let mut told = Told::default();
    // A description speaks of the symbol's part; under another part's number it says nothing.
    let described = known.symbol_agrees || !known.value_names_part;
    let described = described && !device.description_of_other;
    let stated: &[_] = if described { &text.volts } else { &[] };
    for (name, place, grade) in texts(device, known) {
        if says_adjustable(name, family) {
            told.adjustable = true;
            return told;
        }
        let code = known.hit.filter(|_| name == known.identity.name).and_then(|hit| hit.code);
        if code == Some(Code::Adjustable) {
            told.adjustable = true;
            return told;
        }
        let Some(chosen) = chosen(name, known, family, code, stated) else { continue };
        let grade = if chosen.sure { grade } else { grade.weaker(Grade::Inferred) };
        told.volts = Some(Nominal { volts: chosen.volts, grade, source: format!("{place} {name}") });
        told.unsure = !chosen.sure;
        told.faint = chosen.faint;
        told.others = chosen.others;
        if chosen.contradicted && described {
            told.remark = Some(format!("{name} is taken for {} V, its description says otherwise", chosen.volts));
        }
        break;
    }
    // Beside a part that is made adjustable only, the volts of a description are the most that it bears.
    let adjustable_only = family.is_some_and(|family| !family.fixed && family.adjust.is_some());
    if described && !adjustable_only {
        from_description(&mut told, device, known, text);
    }
    if told.volts.is_none()
        && let Some(family) = family
        && let [only] = family.voltages.as_slice()
        && family.adjust.is_none()
    {
        let source = format!("the only voltage of {}", family.name);
        told.volts = Some(Nominal { volts: *only, grade: known.identity.grade.weaker(Grade::Published), source });
    }
    told.adjustable |= told.volts.is_none() && (adjustable_only || text.adjustable && described);
    told
}

fn chosen(
    name: &str,
    known: &Known,
    family: Option<&Family>,
    code: Option<Code>,
    stated: &[Stated],
) -> Option<Chosen> {
    let made_for = family.map_or(&[][..], |family| family.voltages.as_slice());
    let own_name = name == known.identity.name;
    let base = known.hit.filter(|_| own_name).map_or(0, |hit| hit.base);
    let mut readings: Vec<Reading> = read_name(&reduced(name), base);
    // A voltage that is spelled out counts even where the family's list does not have it.
    let spelled =
        readings.iter().find(|reading| reading.plainness == Plainness::Spelled).map(|reading| reading.volts);
    let code = code.filter(|code| spelled.is_none_or(|volts| *code == Code::Volts(volts)));
    if let (Some(Code::Volts(volts)), Some(family)) = (code, family) {
        // Only where one code spells two voltages of the family the description may decide.
        let other = made_for.iter().find(|other| {
            let ratio = **other / volts;
            ((ratio - 10.0).abs() < 1e-6 || (ratio - 0.1).abs() < 1e-6) && family.codes.is_empty()
        });
        let says = |volts: f64| stated.iter().any(|each| (each.volts - volts).abs() < 1e-6);
        let volts =
            other.copied().filter(|other| says(*other) && !says(volts) && !name.contains('.')).unwrap_or(volts);
        let contradicted = !stated.is_empty() && !stated.iter().any(|each| (each.volts / volts - 1.0).abs() < 0.05);
        return Some(Chosen { volts, sure: true, contradicted, others: Vec::new(), faint: false });
    }
    // In free text digits are anything, and converters have numbers of any length; there only a spelled voltage is one.
    let converter = family.is_some_and(|family| family.kind == FamilyKind::Switching);
    if !names_part(name) || converter {
        readings.retain(|reading| reading.plainness == Plainness::Spelled);
    }
    let rounded = family.is_none_or(|family| matches!(family.kind, FamilyKind::Reference | FamilyKind::Shunt));
    choose(&readings, Arbiters { made_for, rounded, stated })
}

/// The description's own voltages: the only one, or the one that it calls the output, where the name says nothing; and
/// the two of a part with two outputs.
fn from_description(told: &mut Told, device: &Device, known: &Known, text: &TextSigns) {
    let grade = if known.symbol_agrees { Grade::Described } else { Grade::Inferred };
    let source = format!("description of symbol {}", device.symbol());
    let nominal = |volts: f64| Nominal { volts, grade, source: source.clone() };
    if let [first, second] = text.volts.as_slice() {
        told.pair = Some([nominal(first.volts), nominal(second.volts)]);
    }
    if told.volts.is_some() {
        return;
    }
    let mut distinct: Vec<f64> = Vec::new();
    let called_output = text.volts.iter().any(|each| each.output);
    for each in text.volts.iter().filter(|each| each.output || !called_output) {
        if !distinct.iter().any(|volts| (volts - each.volts).abs() < 1e-9) {
            distinct.push(each.volts);
        }
    }
    if let [only] = distinct.as_slice() {
        told.volts = Some(nominal(*only));
    }
}

/// Whether names or text say that the output is negative. `None` where nothing is said.
pub(super) fn sign(device: &Device, known: &Known, text: &TextSigns, family: Option<&Family>) -> Option<Sign> {
    if let Some(family) = family {
        return Some(family.polarity);
    }
    // The 79 series is negative by number: `L79L05`, `MC7912`, `79M08`.
    let name = reduced(&known.identity.name);
    let number = name.trim_start_matches(|each: char| each.is_ascii_alphabetic());
    let letters = name.len() - number.len();
    let behind =
        number.strip_prefix("79").map(|rest| rest.trim_start_matches(|each: char| each.is_ascii_alphabetic()));
    let code = behind.map(|rest| rest.chars().take_while(char::is_ascii_digit).collect::<String>());
    if letters <= 3
        && code.as_deref().is_some_and(|code| code.len() == 2 && code.parse::<u8>().is_ok_and(|code| code >= 5))
    {
        return Some(Sign::Negative);
    }
    let described = known.symbol_agrees || !known.value_names_part || !names_part(device.symbol());
    if !described {
        return None;
    }
    match (text.negative, text.positive) {
        (true, false) => Some(Sign::Negative),
        (false, true) => Some(Sign::Positive),
        _ if text.volts.iter().any(|each| each.negative && each.output) => Some(Sign::Negative),
        _ => None,
    }
}
