//! Kinds by well-known part numbers, for symbols that leave it open.

use super::super::model::{DeviceKind, Polarity};

/// Two- and three-terminal references and shunt regulators that are often drawn with a diode's pins.
const REFERENCES: &[&str] = &[
    "TL431", "TL432", "TLV431", "LM431", "LMV431", "KA431", "TS431", "TS432", "AZ431", "NCP431", "ZR431", "LM385",
    "LM285", "LM185", "LM336", "LM236", "LM136", "LM4040", "LM4041", "LM4050", "LM4051", "LM329", "LM399", "LM113",
    "LM313", "LT1004", "LT1009", "LT1029", "LT1034", "LT1389", "AD1580", "AD589", "ADR50", "ADR51", "ICL8069", "ZRA",
    "ZRB", "ZRC", "MAX6006", "MAX6007", "MAX6008", "MAX6009", "REF1004", "REF1112", "TS4040", "TS4041",
];

pub(super) fn integrated(symbol: &str) -> Option<DeviceKind> {
    REFERENCES.iter().any(|start| symbol.starts_with(start)).then_some(DeviceKind::Integrated)
}

const SCHOTTKY: &[&str] = &[
    "1N5817", "1N5818", "1N5819", "1N5820", "1N5821", "1N5822", "BAT4", "BAT5", "BAT6", "BAT8", "BAS40", "BAS70",
    "MBR", "SS12", "SS13", "SS14", "SS16", "SS22", "SS24", "SS26", "SS32", "SS34", "SS36", "SS54", "SS56", "SB1",
    "SB2", "SB3", "SB5", "SK1", "SK2", "SK3", "B5819", "B120", "B130", "B140", "B160", "B220", "B230", "B240",
    "B320", "B330", "B340", "B360", "PMEG", "STPS", "CUS08", "CUS10", "CRS0", "RB0", "RB1", "RB4", "RB5", "SD103",
    "DFLS", "MSS1", "NSR",
];
const ZENER: &[&str] = &[
    "BZX", "BZV", "BZT", "BZG", "BZY", "MMSZ", "MM3Z", "MM5Z", "1N47", "1N52", "1N53", "1N59", "1N746", "1N75",
    "1SMA59", "1SMB59", "SMAJ", "SMBJ", "SMCJ", "SMDJ", "P6KE", "P6SMB", "P4SMA", "1.5KE", "1V5KE", "SMF", "ESD",
    "PESD", "ZENER", "TVS", "ZMM", "ZPD", "DDZ", "UDZ",
];

/// The sort of diode that a value in upper case names: a number, or a zener voltage (`5V6`).
pub(super) fn diode(value: &str) -> Option<DeviceKind> {
    if value.starts_with("LED") {
        return Some(DeviceKind::Led);
    }
    if starts_with(value, SCHOTTKY) || value.starts_with("SCHOTTKY") {
        return Some(DeviceKind::Schottky);
    }
    (starts_with(value, ZENER) || is_zener_voltage(value)).then_some(DeviceKind::Zener)
}

fn is_zener_voltage(value: &str) -> bool {
    let Some((whole, part)) = value.split_once('V') else { return false };
    let digits = |text: &str| text.chars().all(|letter| letter.is_ascii_digit());
    !whole.is_empty() && whole.len() <= 2 && part.len() <= 1 && digits(whole) && digits(part)
}

const NPN: &[&str] = &[
    "2N2222",
    "2N3904",
    "2N5551",
    "2N3055",
    "2N4401",
    "2N3053",
    "MMBT3904",
    "MMBT2222",
    "MMBT4401",
    "BC54",
    "BC550",
    "BC337",
    "BC338",
    "BC817",
    "BC818",
    "BC846",
    "BC847",
    "BC848",
    "BC849",
    "BC850",
    "BC107",
    "BC108",
    "BC109",
    "BD135",
    "BD137",
    "BD139",
    "BD241",
    "TIP31",
    "TIP41",
    "TIP120",
    "TIP122",
    "TIP3055",
    "S8050",
    "SS8050",
    "BCP56",
    "BCX56",
    "FZT851",
    "ZTX450",
    "MJE3055",
    "2SC",
    "2SD",
    "2N7002",
    "BSS138",
    "BSS123",
    "AO3400",
    "AO3402",
    "AO3404",
    "SI2302",
    "IRLML2502",
    "IRLML6344",
    "IRF510",
    "IRF520",
    "IRF530",
    "IRF540",
    "IRF630",
    "IRF640",
    "IRF730",
    "IRF740",
    "IRF830",
    "IRF840",
    "IRF3205",
    "IRLZ",
    "IRLB",
    "IRFZ",
    "DMG2302",
    "2SK",
    "BS170",
];
const PNP: &[&str] = &[
    "2N2907",
    "2N3906",
    "2N5401",
    "2N2955",
    "2N4403",
    "2N4033",
    "MMBT3906",
    "MMBT2907",
    "MMBT4403",
    "BC556",
    "BC557",
    "BC558",
    "BC559",
    "BC560",
    "BC327",
    "BC328",
    "BC807",
    "BC808",
    "BC856",
    "BC857",
    "BC858",
    "BC859",
    "BC860",
    "BD136",
    "BD138",
    "BD140",
    "BD242",
    "TIP32",
    "TIP42",
    "TIP125",
    "TIP127",
    "TIP2955",
    "S8550",
    "SS8550",
    "BCP53",
    "BCX53",
    "FZT951",
    "ZTX550",
    "MJE2955",
    "2SA",
    "2SB",
    "BSS84",
    "AO3401",
    "AO3407",
    "SI2301",
    "SI2305",
    "IRLML6402",
    "IRLML6401",
    "IRLML2244",
    "IRLML5203",
    "IRF9",
    "DMG2305",
    "DMP",
    "2SJ",
    "BS250",
    "NTR4101",
    "AOD417",
];

/// The polarity of a transistor by its number, in upper case (recalled from makers' lists, not read).
pub(super) fn polarity(value: &str) -> Option<Polarity> {
    // P types first: `IRF9` is the more special pattern.
    if starts_with(value, PNP) {
        return Some(Polarity::P);
    }
    starts_with(value, NPN).then_some(Polarity::N)
}

fn starts_with(value: &str, starts: &[&str]) -> bool {
    starts.iter().any(|start| value.starts_with(start))
}
