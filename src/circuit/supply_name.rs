//! The nominal voltage that a net's name states.
//!
//! Rules, on the last part of a sheet path; names made from a pin (`Net-(U1-5V)`) state nothing:
//!
//! - A number is `5V`, `3.3V`, `0_9V` (an underscore as a decimal point), `3V3`, `12V0`, or, with a sign before it,
//!   plain or with a letter behind: `+12`, `+5P`, `-15N`. `P3V3` and `N12V0` have their sign as a letter, and
//!   `V3.3v` says "volt" twice.
//! - Before it only words for a supply (`VCC_`, `VDD_`, `V`, `ISO_`) or for a part of a board that is fed (`CAM_`).
//!   Anything else may be a signal about a supply: `CURR_AMP_5V` is the output of an amplifier.
//! - Behind it, attached, only the endings of supplies (`A`, `DC`, `REF`), and, set off, any words but those that make
//!   it a signal (`SENSE`, `EN`, `FB`) or a scale (`1V-Oct`).
//! - A single 1 or 2 behind a `V` numbers supplies of one voltage from 5 V up: `12V1` and `12V2` are 12 V.
//! - Alternating voltages and mains are no supplies of this kind, nor is 0 V.

use super::ground::is_made_up;

/// What a net's name states about its voltage.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct SupplyName {
    /// Nominal voltage, signed.
    pub volts: f64,
    /// The name says that it is not regulated, so the number is only an order of size.
    pub unregulated: bool,
    /// The name says that it is a reference.
    pub reference: bool,
}

/// Words that may stand before the number, without digits at their end.
const BEFORE: &[&str] = &[
    "V", "VCC", "VDD", "AVCC", "AVDD", "DVCC", "DVDD", "VCCA", "VDDA", "VCCD", "VDDD", "VCCIO", "VDDIO", "IOVDD",
    "VIO", "VCORE", "VOUT", "VIN", "VS", "VSYS", "VREG", "VREF", "VSUP", "VSUPPLY", "VAUX", "VEXT", "VP", "VPP",
    "VUSB", "VBUS", "VLDO", "VMOT", "VM", "VANA", "VDIG", "VBAT", "VBATT", "BAT", "BATT", "BATTERY", "VEE", "VNEG",
    "NEG", "POS", "PLUS", "MINUS", "SUPPLY", "PWR", "POWER", "RAIL", "REG", "LDO", "DCDC", "BUCK", "BOOST", "MAIN",
    "SYS", "OUT", "IN", "EXT", "INT", "AUX", "ISO", "ANA", "DIG", "ANALOG", "DIGITAL", "A", "D", "REF", "STBY",
    "STANDBY", "RTC", "USB", "CORE", "IO", "MCU", "CPU", "SOC", "FPGA", "PLL", "DDR", "RAM", "FLASH", "RF", "RADIO",
    "WIFI", "BLE", "GPS", "GNSS", "LTE", "GSM", "CAM", "CAN", "LCD", "OLED", "DISP", "DISPLAY", "AUDIO", "SD", "ETH",
    "PHY", "HDMI", "MOT", "MOTOR", "SERVO", "FAN", "RELAY", "SENSOR", "SENSORS", "IMU", "ESP", "RPI", "PI", "STM",
    "ARDUINO", "PCIE", "DC", "FUSED", "FILT", "FILTERED", "SWITCHED", "RAW", "UNREG", "PYRO", "FC",
];

/// Of these, those that need nothing between them and the number.
const ATTACHED_BEFORE: &[&str] =
    &["V", "VCC", "VDD", "AVCC", "AVDD", "DVCC", "DVDD", "VCCA", "VDDA", "VOUT", "VIN", "VREF"];

/// Endings that may be attached to the number.
const ATTACHED_BEHIND: &[&str] = &[
    "A", "D", "P", "N", "S", "C", "L", "F", "LF", "R", "X", "DC", "REF", "ADC", "DAC", "ANA", "DIG", "AUX", "SB",
    "IN", "OUT", "IO", "USB", "RF", "ISO", "MAIN", "SW", "FILT", "VA", "DD", "CC", "EXT",
];

/// Words set off behind the number that make the name a signal or a scale.
const NEVER_BEHIND: &[&str] = &[
    "SENSE", "SENSED", "SNS", "SEN", "EN", "ENA", "ENABLE", "NEN", "FB", "FEEDBACK", "PG", "PGOOD", "GOOD", "OK",
    "MON", "MONITOR", "MEAS", "DIV", "DET", "DETECT", "ADC", "TX", "RX", "SDA", "SCL", "CLK", "RST", "RESET", "FLAG",
    "FAULT", "ALERT", "INT", "CTRL", "CTL", "SEL", "GATE", "SHDN", "OCT", "OCTAVE", "AC", "LED", "DIM", "PWM",
    "TRIG", "LEVEL", "LX", "BST", "BOOT", "I", "CURRENT", "CURR", "RET", "RETURN", "RTN", "GND",
];

/// The voltage that a net's name states, by the rules of this file.
#[must_use]
pub fn supply_name(name: &str) -> Option<SupplyName> {
    let made = is_made_up(name);
    let own = name.rsplit('/').find(|part| !part.is_empty())?.trim().to_uppercase();
    if made || own.contains('{') || !own.is_ascii() {
        return None;
    }
    own.char_indices().find_map(|(at, _)| read_at(&own, at))
}

/// Reads a number that begins at a byte, where all before and behind it is as the rules say.
fn read_at(name: &str, at: usize) -> Option<SupplyName> {
    let (before, rest) = name.split_at_checked(at)?;
    let begins_word = before.is_empty() || before.ends_with(is_separator);
    let sign = match rest.chars().next()? {
        '+' => Some(1.0),
        '-' if before.is_empty() => Some(-1.0),
        'P' if begins_word => Some(1.0),
        'N' if begins_word => Some(-1.0),
        _ => None,
    };
    let number =
        Number { text: if sign.is_some() { rest.get(1..)? } else { rest }, signed: sign.is_some(), begins_word };
    let (volts, behind) = number.read()?;
    let before_words = words_before(before)?;
    let (_, behind_words) = words_behind(behind)?;
    let is = |words: &[&str]| before_words.iter().chain(&behind_words).any(|word| words.contains(word));
    let negative = is(&["NEG", "MINUS", "VEE", "VNEG"]);
    let volts = sign.unwrap_or(if negative { -1.0 } else { 1.0 }) * volts;
    const MAINS: &[f64] = &[110.0, 115.0, 120.0, 220.0, 230.0, 240.0];
    let credible =
        (0.3..=400.0).contains(&volts.abs()) && !MAINS.iter().any(|mains| (mains - volts.abs()).abs() < 0.5);
    credible.then(|| SupplyName {
        volts,
        unregulated: is(&["UNREG", "UNREGULATED", "RAW"]),
        reference: is(&["REF", "VREF"]),
    })
}

struct Number<'a> {
    text: &'a str,
    signed: bool,
    /// Nothing but a separator before it: an underscore inside can be a decimal point.
    begins_word: bool,
}

impl<'a> Number<'a> {
    /// Volts and what stands behind.
    fn read(&self) -> Option<(f64, &'a str)> {
        let (whole, rest) = digits(self.text);
        if whole.is_empty() || whole.len() > 3 {
            return None;
        }
        if let Some(found) = self.with_point(whole, rest) {
            return Some(found);
        }
        if let Some(behind) = rest.strip_prefix('V') {
            let (part, after) = digits(behind);
            if part.is_empty() || part.len() > 2 {
                return Some((whole.parse().ok()?, behind));
            }
            let units: f64 = whole.parse().ok()?;
            let numbered = units >= 5.0 && matches!(part, "1" | "2");
            return Some((if numbered { units } else { format!("{whole}.{part}").parse().ok()? }, after));
        }
        // Without a `V` only a sign tells that it is a voltage, and below 1.8 it would rather be a count.
        let volts: f64 = whole.parse().ok()?;
        (self.signed && volts >= 1.8 && !rest.starts_with(['.', ','])).then_some((volts, rest))
    }

    fn with_point(&self, whole: &str, rest: &'a str) -> Option<(f64, &'a str)> {
        let underscore = rest.starts_with('_');
        let (part, after) = digits(rest.strip_prefix(['.', ',', '_'])?);
        if part.is_empty() || part.len() > 3 || (underscore && !self.begins_word && !self.signed) {
            return None;
        }
        let volts: f64 = format!("{whole}.{part}").parse().ok()?;
        match after.strip_prefix('V') {
            // `1_3V3` is 3.3 V behind a 1.
            Some(behind) if underscore && behind.starts_with(|next: char| next.is_ascii_digit()) => None,
            Some(behind) => Some((volts, behind)),
            None if !underscore && (self.signed || !self.begins_word) => Some((volts, after)),
            None => None,
        }
    }
}

fn digits(text: &str) -> (&str, &str) {
    let end = text.find(|letter: char| !letter.is_ascii_digit()).unwrap_or(text.len());
    text.split_at_checked(end).unwrap_or((text, ""))
}

fn is_separator(letter: char) -> bool {
    matches!(letter, '_' | '-' | ' ' | '.')
}

fn without_digits(word: &str) -> &str {
    word.trim_end_matches(|letter: char| letter.is_ascii_digit())
}

/// The words before the number, where all are words for supplies.
fn words_before(before: &str) -> Option<Vec<&str>> {
    let words: Vec<&str> = before.split(is_separator).filter(|word| !word.is_empty()).map(without_digits).collect();
    if !words.iter().all(|word| BEFORE.contains(word)) {
        return None;
    }
    let attached = !before.is_empty() && !before.ends_with(is_separator);
    let may_be_attached =
        words.last().is_some_and(|word| ATTACHED_BEFORE.contains(word)) && before.ends_with(char::is_alphabetic);
    (!attached || may_be_attached).then_some(words)
}

/// The ending attached to the number and the words behind, where none makes it a signal.
fn words_behind(behind: &str) -> Option<(&str, Vec<&str>)> {
    let behind = behind.strip_suffix('+').unwrap_or(behind);
    if behind.ends_with('-') {
        return None;
    }
    let end = behind.find(is_separator).unwrap_or(behind.len());
    let (attached, rest) = behind.split_at_checked(end)?;
    let ending = without_digits(attached);
    if !ending.is_empty() && !ATTACHED_BEHIND.contains(&ending) {
        return None;
    }
    let words = rest.split(is_separator).filter(|word| !word.is_empty());
    let words: Vec<&str> = std::iter::once(ending).chain(words.map(without_digits)).collect();
    (!words.iter().skip(1).any(|word| NEVER_BEHIND.contains(word))).then_some((attached, words))
}

#[cfg(test)]
mod tests {
    use super::*;

    fn volts(name: &str) -> Option<f64> {
        supply_name(name).map(|supply| supply.volts)
    }

    #[test]
    fn supplies_state_their_voltage() {
        let supplies = [
            ("+5V", 5.0),
            ("+12V", 12.0),
            ("+3V3", 3.3),
            ("3v3", 3.3),
            ("+3.3V", 3.3),
            ("V3.3v", 3.3),
            ("/V5v", 5.0),
            ("1v8", 1.8),
            ("-5V", -5.0),
            ("/0_9V", 0.9),
            ("/2_5V", 2.5),
            ("/-5V_unreg", -5.0),
            ("-5VRef", -5.0),
            ("+5P", 5.0),
            ("P3V3", 3.3),
            ("+12VDC", 12.0),
            ("/5v_CAM", 5.0),
            ("N12V0A", -12.0),
            ("P5V0A", 5.0),
            ("VDD_3V3", 3.3),
            ("VCC_5V", 5.0),
            ("VCC3V3", 3.3),
            ("+5VA", 5.0),
            ("5V0", 5.0),
            ("+1V8_IO", 1.8),
            ("3.3V_OUT", 3.3),
            ("+15P", 15.0),
            ("-15N", -15.0),
            ("/3v3_BASE", 3.3),
            ("+5V-B", 5.0),
            ("+12C", 12.0),
            ("/+12V-Digital", 12.0),
            ("/3v_ISO", 3.0),
            ("-7.2V", -7.2),
            ("+3.3VADC", 3.3),
            ("+1V35", 1.35),
            ("12V1", 12.0),
            ("/Power/5V_USB", 5.0),
            ("+12", 12.0),
            ("VEE_12V", -12.0),
            ("VCC1_3V3", 3.3),
            ("CAM_5V", 5.0),
        ];
        for (name, expected) in supplies {
            assert!(volts(name).is_some_and(|read| (read - expected).abs() < 1e-9), "{name}: {:?}", volts(name));
        }
    }

    #[test]
    fn signals_and_plain_names_state_none() {
        let others = [
            "1V-Oct",
            "1V/OCT",
            "CURR_AMP_5V",
            "/Power/CURR_AMP_12V",
            "ADC_5V_SENSE",
            "VBUS",
            "VCC",
            "+BATT",
            "BUS_EN_5V",
            "/Power/Sensed_5V",
            "5V_EN",
            "3V3_PG",
            "Net-(U1-5V)",
            "unconnected-(J1-5V-Pad2)",
            "12VAC",
            "230V",
            "0V",
            "GND",
            "D5",
            "PA10",
            "GPIO3",
            "I2C1",
            "+1",
            "V5",
            "12V-",
            "",
            "/",
            "SDA_3V3",
            "+5VBAT",
            "ÅV5",
            "10MHZ",
            "5V{slash}x",
        ];
        for name in others {
            assert_eq!(volts(name), None, "{name}");
        }
    }

    #[test]
    fn a_name_says_what_else_it_is() {
        assert!(supply_name("/-5V_unreg").is_some_and(|supply| supply.unregulated && !supply.reference));
        assert!(supply_name("-5VRef").is_some_and(|supply| supply.reference));
        assert!(supply_name("VREF_2V5").is_some_and(|supply| supply.reference));
    }
}
