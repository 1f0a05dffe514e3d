//! What a capacitor is made of, and in which case, as far as the board file, its value, symbol and footprint tell.

use super::Facts;
use crate::circuit::{Device, DeviceId};
use crate::knowledge::Technology;
use crate::quantity::{Evidence, Grade};

/// A technology with what tells it.
#[derive(Debug, Clone)]
pub(super) struct Told<'k> {
    pub(super) technology: &'k Technology,
    pub(super) evidence: Evidence,
}

/// Ceramics below this many farads are taken for class 1 where nothing tells (common practice).
const CLASS_1_BELOW: f64 = 1e-9;
/// Unpolarized leaded capacitors up to this many farads may be film.
const FILM_UP_TO: f64 = 10e-6;

/// Chip cases by their code in inches of a hundredth.
const CHIP_CASES: &[&str] = &["0201", "0402", "0603", "0805", "1206", "1210", "1812", "2220"];
/// Tantalum cases by the metric code of the trade (EIA-535).
const TANTALUM_CASES: &[(&str, &str)] = &[
    ("3216-18", "A"),
    ("3216-10", "S"),
    ("3216-12", "S"),
    ("3528-21", "B"),
    ("3528-12", "T"),
    ("6032-28", "C"),
    ("6032-15", "W"),
    ("7343-31", "D"),
    ("7343-43", "E"),
    ("7343-20", "V"),
];

impl<'a> Facts<'a> {
    /// The technology of a capacitor: declared, in its value, or guessed from symbol and footprint.
    pub(super) fn technology(&self, device: DeviceId) -> Option<Told<'a>> {
        let part = self.circuit().device(device);
        let what = format!("technology of {}", part.reference);
        let entry = self.board().part(&part.reference);
        if let Some(declared) = entry.and_then(|entry| entry.technology.as_ref()) {
            let name = entry.and_then(|entry| entry.technology_name.as_deref()).unwrap_or(&declared.value);
            if let Some(technology) = self.technology_called(name) {
                return Some(Told { technology, evidence: declared.evidence(what) });
            }
        }
        let word = part.amount.as_ref().and_then(|amount| amount.technology.as_deref());
        if let Some(technology) = word.and_then(|word| self.technology_called(word)) {
            let evidence = Evidence::new(Grade::Drawn, what, format!("value {}", part.value));
            return Some(Told { technology, evidence });
        }
        let (name, grade, source) = guessed(part)?;
        let technology = self.technology_called(name)?;
        Some(Told { technology, evidence: Evidence::new(grade, what, source) })
    }

    fn technology_called(&self, word: &str) -> Option<&'a Technology> {
        let word = word.trim().to_lowercase();
        self.knowledge()
            .technologies
            .iter()
            .find(|technology| technology.name == word || technology.words.contains(&word))
    }

    /// The dielectric code, upper case: of the `Dielectric` field, the declared technology or the value.
    pub(super) fn dielectric(&self, device: DeviceId) -> Option<String> {
        let part = self.circuit().device(device);
        let entry = self.board().part(&part.reference);
        let code = part
            .field("Dielectric")
            .or_else(|| entry.and_then(|entry| entry.technology.as_ref()).map(|declared| declared.value.as_str()))
            .or_else(|| part.amount.as_ref().and_then(|amount| amount.technology.as_deref()))?;
        Some(code.trim().to_uppercase())
    }

    /// The case of a capacitor as its footprint names it: `0805`, `B`.
    pub(super) fn case(&self, device: DeviceId) -> Option<String> {
        let footprint = &self.circuit().device(device).footprint;
        let tantalum = TANTALUM_CASES.iter().find(|(code, _)| footprint.contains(code)).map(|(_, case)| *case);
        let chip = || {
            let name = footprint.rsplit(':').next().unwrap_or(footprint);
            let words = name.split(|c: char| !c.is_ascii_alphanumeric());
            let bare = words.map(|word| word.trim_start_matches(|c: char| c.is_ascii_alphabetic()));
            bare.into_iter().find_map(|word| CHIP_CASES.iter().copied().find(|case| *case == word))
        };
        tantalum.or_else(chip).map(str::to_owned)
    }
}

/// A guess from symbol and footprint: technology, grade and what tells it.
fn guessed(part: &Device) -> Option<(&'static str, Grade, String)> {
    let footprint = part.footprint.to_lowercase();
    let text = format!("{} {}", part.part, part.description).to_lowercase();
    let shown = format!("footprint {}", part.footprint);
    let has = |words: &[&str]| words.iter().any(|word| footprint.contains(word));
    if has(&["tantal"]) || TANTALUM_CASES.iter().any(|(code, _)| footprint.contains(code)) || text.contains("tantal")
    {
        return Some(("tantalum", Grade::Inferred, shown));
    }
    if has(&["cp_elec", "c_elec", "cp_radial", "cp_axial", "elko"]) || text.contains("electrolytic") {
        return Some(("electrolytic", Grade::Inferred, shown));
    }
    if part.polarized {
        return Some(("electrolytic", Grade::Inferred, "polarized symbol".to_owned()));
    }
    let farads = part.amount.as_ref().map(|amount| amount.amount)?;
    let chip = CHIP_CASES.iter().any(|case| footprint.contains(case));
    if chip || has(&["c_disc"]) {
        let class = if farads < CLASS_1_BELOW { "ceramic-1" } else { "ceramic-2" };
        return Some((class, Grade::Inferred, shown));
    }
    if has(&["c_rect", "c_axial", "film", "mks", "wima"]) && farads <= FILM_UP_TO {
        return Some(("film", Grade::Inferred, shown));
    }
    let class = if farads < CLASS_1_BELOW { "ceramic-1" } else { "ceramic-2" };
    Some((class, Grade::Assumed, "unpolarized symbol".to_owned()))
}
