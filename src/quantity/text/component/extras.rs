//! Words beside the value: tolerance, rated voltage, technology.

use super::super::number::digits;
use super::ComponentKind;

/// `1%`, `±20%`: a relative tolerance.
pub(super) fn tolerance(word: &str) -> Option<f64> {
    let number = word.strip_suffix('%')?.trim_start_matches('±');
    plain(number).filter(|value| *value <= 100.0).map(|value| value / 100.0)
}

/// `16V`, `6V3`, `2kV`, `50v`, `25VDC`: a rated voltage.
pub(super) fn rating(word: &str) -> Option<f64> {
    let lower = word.to_lowercase();
    let number = lower.strip_suffix("vdc").or_else(|| lower.strip_suffix("vac")).or_else(|| lower.strip_suffix('v'));
    if let Some(number) = number {
        let (number, factor) = number.strip_suffix('k').map_or((number, 1.0), |number| (number, 1000.0));
        return plain(number).filter(|value| *value > 0.0).map(|value| value * factor);
    }
    let (whole, part) = lower.split_once('v')?;
    let both = !whole.is_empty() && digits(whole) == whole && digits(part) == part && (1..=2).contains(&part.len());
    if both { plain(&format!("{whole}.{part}")) } else { None }
}

fn plain(number: &str) -> Option<f64> {
    let only_digits = number.bytes().all(|byte| byte.is_ascii_digit() || byte == b'.');
    if only_digits { number.parse().ok() } else { None }
}

/// The tolerance that IEC 60062 letters stand for: `K` is 10 %. The inner `None` is for those that are not symmetrical.
/// Letters in picofarads apply below 10 pF. Resistors take only the letters that no prefix has.
pub(super) fn letter_tolerance(text: &str, amount: f64, kind: ComponentKind) -> Option<Option<f64>> {
    let capacitor = matches!(kind, ComponentKind::Capacitor | ComponentKind::PolarizedCapacitor);
    let small = amount > 0.0 && amount < 10e-12;
    Some(Some(match text {
        "F" => 0.01,
        "G" => 0.02,
        "J" => 0.05,
        "K" => 0.1,
        "M" => 0.2,
        "N" if capacitor => 0.3,
        "B" if capacitor && small => 0.1e-12 / amount,
        "C" if capacitor && small => 0.25e-12 / amount,
        "D" if capacitor && small => 0.5e-12 / amount,
        "T" | "P" | "Z" if capacitor => return Some(None),
        _ => return None,
    }))
}

/// Words for dielectrics and technologies, in lower case, beside the three-character ceramic codes.
const WORDS: &[&str] = &[
    "c0g",
    "cog",
    "np0",
    "npo",
    "u2j",
    "cer",
    "cerm",
    "ceramic",
    "mlcc",
    "tant",
    "ta",
    "tantal",
    "tantalum",
    "elko",
    "elco",
    "elec",
    "electro",
    "electrolytic",
    "elyt",
    "el",
    "alu",
    "al",
    "aluminum",
    "aluminium",
    "polymer",
    "polym",
    "poly",
    "film",
    "foil",
    "mica",
    "mkt",
    "mkp",
    "mks",
    "fkp",
    "pps",
    "pet",
    "pp",
    "polyester",
    "polypropylene",
    "polystyrene",
    "styroflex",
    "mylar",
    "os-con",
    "oscon",
    "sp-cap",
    "poscap",
    "supercap",
    "edlc",
    "bipolar",
    "wirewound",
    "carbon",
    "metal",
    "thin",
    "thick",
];

/// Whether a word names a dielectric or technology.
pub(super) fn is_technology(word: &str) -> bool {
    is_ceramic_code(word) || WORDS.contains(&word.to_lowercase().as_str())
}

/// EIA-198 codes of class 2 and 3 ceramics: lowest and highest temperature, change of capacitance (`X7R`).
fn is_ceramic_code(word: &str) -> bool {
    let mut letters = word.chars();
    let mut next = |set: &str| letters.next().is_some_and(|letter| set.contains(letter.to_ascii_uppercase()));
    next("XYZ") && next("2456789") && next("ABCDEFPRSTUV") && letters.next().is_none()
}
