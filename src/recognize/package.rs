//! The package that the name of a footprint tells, by the names that part files use.
//!
//! Libraries spell one package in many ways (`SOT-223-3_TabPin2`, `SOT223`, `SOT230P700X180-4`), and one order of pads
//! has several names (`SOT-25`, `TSOP-5` and `TSOT-23-5` are all numbered as `SOT-23-5` is).

use std::sync::LazyLock;

use regex::Regex;

use super::voltage_code::regex;
use crate::knowledge::{Family, Package};

/// Orders of pads of its own that the name of a footprint spells: `TO92-CBE`, `SOT23_321`.
static REORDERED: LazyLock<Regex> = LazyLock::new(|| {
    regex(r"(?:^|[^A-Z0-9.])(?:132|213|231|312|321|[BCE]{3}|[GDS]{3}|[KAR]{3}|[IGO]{3}|[AIO]{3})(?:[^A-Z0-9.]|$)")
});
/// Words of three letters and more in the name of a footprint.
static WORDS: LazyLock<Regex> = LazyLock::new(|| regex(r"[A-Z]{3,}"));
/// Words that leave the order of the pads alone; any other may stand for an order of its own (`SOT23-SPECIAL`).
#[rustfmt::skip]
const HARMLESS: &[&str] = &[
    "SOT", "TSOT", "TSOP", "SOIC", "SOP", "SSOP", "TSSOP", "HTSSOP", "MSOP", "VSSOP", "HSOP", "HTSOP", "DIP", "PDIP",
    "DFN", "QFN", "TDFN", "UDFN", "WDFN", "XDFN", "VDFN", "VQFN", "WQFN", "SON", "WSON", "VSON", "USON", "XSON", "DPAK",
    "PAK", "DDPAK", "IPAK", "HANDSOLDER", "HANDSOLDERING", "HAND", "SOLDERING", "TABPIN", "TAB", "TABUP", "TABDOWN",
    "UP", "DOWN", "LEAD", "LEADS", "PIN", "PINS", "VERTICAL", "VERT", "HORIZONTAL", "HORIZ", "INLINE", "WIDE", "NARROW",
    "MOLDED", "RUGGED", "HOUSING", "THERMALVIAS", "THERMALVIASPAD", "VIAS", "THERMAL", "STAGGERODD", "STAGGEREVEN",
    "LARGEPADS", "LARGE", "LONG", "SHORT", "PADS", "PAD", "PITCH", "REFLOW", "WAVE", "NEUTRAL", "MASK", "PULLBACK",
    "TEXAS", "ANALOG", "DIODES", "ONSEMI", "MICROCHIP", "INFINEON", "ROHM", "STANDARD", "NORMAL", "MILL", "MAX", "NOM",
    "MIN", "LAYOUT", "SMD", "THT", "HEATSINK", "STRAIGHT", "RIGHT", "ANGLE", "ANGLED", "LAYING", "STANDING", "SMALL",
];
/// The name of a case and, behind it, the number of its leads.
static CASE: LazyLock<Regex> = LazyLock::new(|| {
    regex(
        r"(?x) (?:^|[^A-Z0-9])
        (?P<case> D2PAK | DDPAK | DPAK | IPAK | TO-?(?:220F[PM]?|\d{1,3}) | T?SOT-?\d{2,3} | SC-?\d{2}A? | TSOP
        | SOIC | H?T?M?V?SSOP | HT?SOP | MSOP | SOP | SO | P?DIP | [XUVWT]?[DQ]FN | [XUVW]?SON | X2SON )
        (?:-?(?P<leads>\d{1,2}))?N? (?:[^A-Z0-9.]|LEAD|$)",
    )
});
/// Names by pitch and size: `SOT95P280X145-5`.
static MEASURED: LazyLock<Regex> =
    LazyLock::new(|| regex(r"(?:^|[^A-Z0-9])SOT(?P<pitch>\d{2,3})P\d+X\d+-(?P<leads>\d)N?$"));

/// The package of a footprint, such as `SOT-223`; `None` where its name tells none, or pads in an order of their own.
#[must_use]
pub fn package_of(footprint: &str) -> Option<String> {
    let name = footprint.rsplit(':').next().unwrap_or("").trim().to_ascii_uppercase().replace(['_', ' '], "-");
    let strange = WORDS.find_iter(&name).any(|word| !HARMLESS.contains(&word.as_str()));
    if strange || REORDERED.is_match(&name) {
        return None;
    }
    if let Some(found) = MEASURED.captures(&name) {
        let leads = found.name("leads").map_or("", |leads| leads.as_str());
        return match found.name("pitch").map_or("", |pitch| pitch.as_str()) {
            "95" => Some(with_leads("SOT-23", leads)),
            "65" => Some(with_leads("SC-70", leads)),
            "230" => Some(with_leads("SOT-223", if leads == "4" { "" } else { leads })),
            _ => None,
        };
    }
    let found = CASE.captures(&name)?;
    let case = found.name("case").map_or("", |case| case.as_str());
    Some(canonical(case, found.name("leads").map_or("", |leads| leads.as_str())))
}

/// One name for every spelling of a case with a number of leads.
fn canonical(case: &str, leads: &str) -> String {
    let digits: String = case.chars().filter(char::is_ascii_digit).collect();
    match case {
        "D2PAK" | "DDPAK" => return with_leads("TO-263", leads),
        "DPAK" => return with_leads("TO-252", leads),
        "IPAK" => return with_leads("TO-251", leads),
        "TSOP" if matches!(leads, "5" | "6") => return with_leads("SOT-23", leads),
        "SOIC" | "SOP" | "SO" => return format!("SO-{leads}"),
        "PDIP" => return format!("DIP-{leads}"),
        _ => {}
    }
    if case.starts_with("TO") {
        return with_leads(&format!("TO-{digits}"), leads);
    }
    if case.contains("SOT") {
        return match digits.as_str() {
            "25" => "SOT-23-5".to_owned(),
            "26" => "SOT-23-6".to_owned(),
            "223" if leads == "4" => "SOT-223".to_owned(),
            "323" => "SC-70".to_owned(),
            "343" => "SC-70-4".to_owned(),
            "346" => "SOT-23".to_owned(),
            "353" => "SC-70-5".to_owned(),
            "363" => "SC-70-6".to_owned(),
            _ => with_leads(&format!("SOT-{digits}"), leads),
        };
    }
    if case.starts_with("SC") {
        return match digits.as_str() {
            "59" => with_leads("SOT-23", leads),
            "62" => with_leads("SOT-89", leads),
            "74" if case.ends_with('A') => "SOT-23-5".to_owned(),
            _ => with_leads(&format!("SC-{digits}"), leads),
        };
    }
    if leads.is_empty() { case.to_owned() } else { format!("{case}-{leads}") }
}

/// Cases with three leads go without their number; so do those whose middle lead is cut (`TO-252-2`).
fn with_leads(case: &str, leads: &str) -> String {
    let cut = case.starts_with("TO-2") && leads == "2";
    if leads.is_empty() || leads == "3" || cut { case.to_owned() } else { format!("{case}-{leads}") }
}

/// The entry of a family for a package in the spelling of [`package_of`]; one with an order of pins, where there is.
#[must_use]
pub fn family_package<'f>(family: &'f Family, package: &str) -> Option<&'f Package> {
    let mut fitting = family
        .packages
        .iter()
        .filter(|(name, _)| package_of(name).as_deref() == Some(package))
        .map(|(_, found)| found);
    let first = fitting.next()?;
    if first.pins.is_empty() { fitting.find(|other| !other.pins.is_empty()).or(Some(first)) } else { Some(first) }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_package_is_told_by_any_spelling_of_its_footprint() {
        for (footprint, package) in [
            ("Package_TO_SOT_SMD:SOT-223-3_TabPin2", "SOT-223"),
            ("TO_SOT_Packages_SMD:SOT-223-3Lead_TabPin2", "SOT-223"),
            ("SOT223", "SOT-223"),
            ("Package_TO_SOT_SMD:SOT-223", "SOT-223"),
            ("SOT230P700X180-4N", "SOT-223"),
            ("Package_TO_SOT_SMD:SOT-223-6", "SOT-223-6"),
            ("Package_TO_SOT_SMD:TO-252-2", "TO-252"),
            ("Package_TO_SOT_SMD:TO-252-3_TabPin2", "TO-252"),
            ("DPAK", "TO-252"),
            ("TO-263-5_TabPin3", "TO-263-5"),
            ("Package_TO_SOT_SMD:SOT-23", "SOT-23"),
            ("Package_TO_SOT_SMD:SOT-23-5_HandSoldering", "SOT-23-5"),
            ("SOT23-5", "SOT-23-5"),
            ("SOT95P280X145-5N", "SOT-23-5"),
            ("Package_TO_SOT_SMD:TSOT-23-5", "SOT-23-5"),
            ("TSOP-5_1.65x3.05mm_P0.95mm", "SOT-23-5"),
            ("Package_TO_SOT_SMD:SOT-89-3", "SOT-89"),
            ("TO_SOT_Packages_SMD:SOT89-3_Housing", "SOT-89"),
            ("Package_TO_SOT_SMD:SOT-353_SC-70-5", "SC-70-5"),
            ("Package_TO_SOT_THT:TO-92_Inline", "TO-92"),
            ("TO92-123", "TO-92"),
            ("Package_TO_SOT_THT:TO-220-3_Vertical", "TO-220"),
            ("TO_SOT_Packages_THT:TO-220_Neutral123_Vertical", "TO-220"),
            ("TO-220F-3_Vertical", "TO-220"),
            ("Package_TO_SOT_THT:TO-220-5_P3.4x3.7mm_StaggerOdd_Lead3.8mm_Vertical", "TO-220-5"),
            ("Package_SO:SOIC-8_3.9x4.9mm_P1.27mm", "SO-8"),
            ("Package_SO:MSOP-8_3x3mm_P0.65mm", "MSOP-8"),
            ("Package_SON:WSON-6-1EP_2x2mm_P0.65mm_EP1x1.6mm", "WSON-6"),
            ("Package_DIP:DIP-8_W7.62mm", "DIP-8"),
        ] {
            assert_eq!(package_of(footprint).as_deref(), Some(package), "{footprint}");
        }
    }

    #[test]
    fn pads_in_an_order_of_their_own_and_other_names_tell_nothing() {
        for footprint in [
            "TO92-CBE",
            "SOT23_EBC",
            "TO-92_321",
            "Resistor_SMD:R_0805",
            "",
            "Module:MYREG",
            "SOT23GDS",
            "SOT23-SPECIAL",
        ] {
            assert_eq!(package_of(footprint), None, "{footprint}");
        }
    }
}
