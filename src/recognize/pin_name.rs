//! What the name of a pin says.
//!
//! Libraries name the pins of the same part in many ways (`VI`, `IN`, `V_IN`, `INPUT`, `IN@1`), so a name is first
//! reduced: case, separators and overbars go, alternatives (`ADJ/GND`) are told apart, a trailing index (`VOUT2`) is
//! kept as a label. What remains is looked up in short lists of the trade's words. The electrical type is not looked
//! at here: many libraries draw every pin as passive.

/// What one word of a pin name means.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub(super) enum Word {
    /// The input of a regulator, without doubt.
    Input,
    /// A supply pin of any part, such as `VCC`: an input where nothing else is one.
    Supply,
    /// The output of a regulator.
    Output,
    /// A reference or internal supply: an output where nothing else is one.
    ReferenceOutput,
    Ground,
    /// The return of an isolated output: `-VOUT`.
    IsolatedReturn,
    Adjust,
    /// `REF`: the adjust pin of shunts.
    Reference,
    /// An enable; `true` where the part is on while the pin is low.
    Enable(bool),
    Sense,
    Bypass,
    Bias,
    PowerGood,
    /// A flag that power switches have more often than regulators.
    FaultFlag,
    NotConnected,
    Tab,
    Cathode,
    Anode,
    Plus,
    Minus,
    /// A pin that only switching converters have.
    Switching,
    /// A flying capacitor of a charge pump.
    Pump,
    /// A pin that no linear regulator has.
    Alien,
    /// Known and harmless: trim, temperature, delay, current limit.
    Auxiliary,
    /// A name that says nothing.
    Unknown,
    /// No name, or one that is only the pin's number.
    Unnamed,
}

/// A pin name as read.
#[derive(Debug, Clone, PartialEq, Eq)]
pub(super) struct PinName {
    /// Its alternatives in order, at least one.
    pub(super) words: Vec<Word>,
    /// Which output it belongs to, where the name says: `1`, `2`, `N`, `P`, `A`, `B`.
    pub(super) label: Option<char>,
    /// Whether the name is that of a separate input of the pass element beside a supply called `VIN`.
    pub(super) power_input: bool,
}

impl PinName {
    /// Whether any alternative is this word.
    pub(super) fn is(&self, word: Word) -> bool {
        self.words.contains(&word)
    }

    /// The enable polarity where it is an enable: whether it is active low.
    pub(super) fn enable(&self) -> Option<bool> {
        self.words.iter().find_map(|word| if let Word::Enable(low) = word { Some(*low) } else { None })
    }
}

/// Reads the name of a pin with the given number.
pub(super) fn read(name: &str, number: &str) -> PinName {
    let trimmed = name.trim();
    if trimmed.is_empty() || trimmed == "~" || trimmed == number || is_number(trimmed) {
        return PinName { words: vec![Word::Unnamed], label: None, power_input: false };
    }
    let mut words = Vec::new();
    let mut label = None;
    let mut power_input = false;
    for (text, barred) in alternatives(trimmed) {
        let (word, index) = word_of(&text, barred);
        power_input |= text.contains("LDOIN") || text == "VINLDO" || text == "PVIN";
        label = label.or(index);
        if !words.contains(&word) {
            words.push(word);
        }
    }
    // Of `EN/UV` or `GND/HS` the word that is known counts.
    if words.iter().any(|word| !matches!(word, Word::Unknown | Word::Unnamed)) {
        words.retain(|word| !matches!(word, Word::Unknown | Word::Unnamed));
    }
    // `ON/OFF` in any spelling is one enable, on as its first half says.
    let mut seen = false;
    words.retain(|word| !matches!(word, Word::Enable(_)) || !std::mem::replace(&mut seen, true));
    if words.is_empty() {
        words.push(Word::Unknown);
    }
    PinName { words, label, power_input }
}

fn is_number(text: &str) -> bool {
    text.chars().all(|each| each.is_ascii_digit())
        || (text.to_ascii_uppercase().strip_prefix("PIN").is_some_and(|rest| {
            let rest = rest.trim_start_matches('_');
            !rest.is_empty() && rest.chars().all(|each| each.is_ascii_digit())
        }))
}

/// Cuts a name into its alternatives, upper case without separators, each with whether it is barred.
fn alternatives(name: &str) -> Vec<(String, bool)> {
    let upper: Vec<char> = name.chars().flat_map(char::to_uppercase).collect();
    let mut found = Vec::new();
    let mut text = String::new();
    let mut barred = false;
    let mut depth = 0_usize;
    for (at, each) in upper.iter().copied().enumerate() {
        let next = upper.get(at + 1).copied();
        match each {
            '~' => barred = barred || text.is_empty() || next == Some('{'),
            '{' => depth += 1,
            '}' => depth = depth.saturating_sub(1),
            // One overbar style writes `E\N\`: a backslash behind every letter.
            '\\' => barred = true,
            // A leading slash is an old overbar; elsewhere it parts alternatives.
            '/' if text.is_empty() && found.is_empty() && !barred => barred = true,
            '/' | '(' | ')' | ',' | ';' | '|' if depth == 0 || each == '/' => {
                push(&mut found, &mut text, &mut barred);
            }
            '#' | '*' | '!' => barred = true,
            '_' | ' ' | '.' | ':' => {
                // `OUT_S` and `V_IN` are one word each, but an index behind a separator stays an index.
            }
            '@' => text.push('@'),
            'Μ' | 'µ' | 'μ' => text.push('U'),
            _ => text.push(each),
        }
    }
    push(&mut found, &mut text, &mut barred);
    if found.is_empty() {
        found.push((String::new(), false));
    }
    found
}

fn push(found: &mut Vec<(String, bool)>, text: &mut String, barred: &mut bool) {
    // Eagle-style `GND@2` marks copies of one pin: the mark is no index.
    let cut = text.split('@').next().unwrap_or("").to_owned();
    if !cut.is_empty() {
        found.push((cut, *barred));
    }
    text.clear();
    *barred = false;
}

/// The meaning of one reduced word and its index.
fn word_of(text: &str, barred: bool) -> (Word, Option<char>) {
    if let Some(word) = look_up(text, barred) {
        return (word, None);
    }
    // `VOUT2`, `2OUT`, `EN1`, `OUTP`: the same word with an index.
    let without_digits = text.trim_end_matches(|each: char| each.is_ascii_digit());
    let digits = text.get(without_digits.len()..).unwrap_or("");
    if !without_digits.is_empty() && digits.len() <= 2 && !digits.is_empty() {
        let stem = without_digits.trim_end_matches('-');
        if let Some(word) = look_up(stem, barred) {
            return (word, digits.chars().next());
        }
        if let Some((word, label)) = suffixed(stem, barred) {
            return (word, Some(label));
        }
    }
    if let Some((word, label)) = suffixed(text, barred) {
        return (word, Some(label));
    }
    // `OUT1S`, `SENSE1`: index inside.
    let squeezed: String = text.chars().filter(|each| !each.is_ascii_digit()).collect();
    if squeezed.len() < text.len()
        && squeezed.len() >= 3
        && let Some(word @ (Word::Output | Word::Sense | Word::Input)) = look_up(&squeezed, barred)
    {
        return (word, text.chars().find(char::is_ascii_digit));
    }
    // A logic word that is barred by a prefix: `NSHDN`, `-SHDN`.
    if let Some(rest) = text.strip_prefix(['N', '-'])
        && let Some(word @ (Word::Enable(_) | Word::PowerGood)) = look_up(rest, true)
    {
        return (word, None);
    }
    (fallback(text), None)
}

/// Words that carry a trailing letter as index: `INN`, `OUTP`, `ADJN`, `SHDNP`, `OUTA`.
fn suffixed(text: &str, barred: bool) -> Option<(Word, char)> {
    let label = text.chars().last().filter(|each| matches!(each, 'N' | 'P' | 'A' | 'B' | '+' | '-'))?;
    let stem = text.get(..text.len() - 1)?;
    let word = look_up(stem, barred)?;
    let label = match label {
        '+' => 'P',
        '-' => 'N',
        other => other,
    };
    match word {
        // `IN+` and `IN-` are the inputs of an amplifier.
        Word::Input if text.ends_with(['+', '-']) => (stem.starts_with('V')).then_some((word, label)),
        Word::Input | Word::Output | Word::Adjust | Word::Enable(_) | Word::Bypass | Word::Sense => {
            Some((word, label))
        }
        _ => None,
    }
}

/// Rules for whole groups of words.
fn fallback(text: &str) -> Word {
    let has = |part: &str| text.contains(part);
    if has("GND") {
        return Word::Ground;
    }
    if has("PAD") && !has("PADJ") {
        return Word::Tab;
    }
    if text.starts_with("VOUT") || text.ends_with("VOUT") {
        return Word::Output;
    }
    if text.ends_with("VIN") || text.starts_with("VIN") || text.ends_with("LDOIN") {
        return Word::Input;
    }
    if text.starts_with("SENSE") || text.ends_with("SENSE") {
        return Word::Sense;
    }
    Word::Unknown
}

#[rustfmt::skip]
const INPUT: &[&str] = &[
    "IN", "VIN", "VI", "INPUT", "VINPUT", "+VIN", "VIN+", "+IN/VIN", "UNREG", "VUNREG", "UIN", "UE", "LINE",
    "I", "VLDOIN", "LDOIN", "INLDO", "VINLDO", "PIN/IN", "PVIN", "AVIN", "VSUPPLY",
];
#[rustfmt::skip]
const SUPPLY: &[&str] = &[
    "VCC", "VDD", "VS", "V+", "VBAT", "VBATT", "BAT", "BATT", "VSUP", "SUPPLY", "VPWR", "VP", "+V", "VM",
    "AVDD", "AVCC", "+VS", "VS+", "VCC+", "+VCC", "VBUS", "PWR", "POWER", "VDDA",
];
#[rustfmt::skip]
const OUTPUT: &[&str] = &[
    "OUT", "VOUT", "VO", "OUTPUT", "VOUTPUT", "Q", "O", "REGOUT", "OUTF", "VOUTF", "OUTFORCE",
    "VOUTFORCE", "+VOUT", "VOUT+", "UOUT", "UA", "LDOOUT", "VLDO", "OUTLDO", "VOF", "OUT+", "+VO", "VO+",
];
#[rustfmt::skip]
const REFERENCE_OUTPUT: &[&str] = &[
    "VREF", "VREG", "REG", "REFOUT", "VREFOUT", "VREFF", "REFF", "VR",
];
#[rustfmt::skip]
const GROUND: &[&str] = &[
    "GND", "VSS", "VEE", "COM", "COMMON", "GROUND", "0V", "AGND", "PGND", "SGND", "DGND", "GNDS", "GNDF",
    "GNDA", "GNDP", "GNDD", "V-", "RTN", "RETURN", "G", "-VIN", "VIN-", "VSSA", "AVSS", "MASSE", "-V", "EARTH",
];
/// A separate return says that the output is isolated.
const ISOLATED: &[&str] = &["-VOUT", "VOUT-", "-VO", "VO-", "-OUT", "OUT-"];
#[rustfmt::skip]
const ADJUST: &[&str] = &[
    "ADJ", "ADJUST", "FB", "FEEDBACK", "SET", "VSET", "VADJ", "VFB", "VA", "FBK", "FDBK", "RSET", "SETV", "IFB",
    "OUTFB", "ADJV", "VOUTSET", "RADJ", "VOSET",
];
#[rustfmt::skip]
const ENABLE: &[&str] = &[
    "EN", "ENA", "ENABLE", "CE", "ON", "INH", "INHIBIT", "CTRL", "CONT", "CONTROL", "VEN", "ENBL", "VDIS",
    "CHIPENABLE", "ONOFF", "REMOTE", "ENUV", "ENUVLO", "RUN", "VCE", "ENLDO", "LDOEN",
];
#[rustfmt::skip]
const DISABLE: &[&str] = &[
    "SHDN", "SHUTDOWN", "SD", "SHTD", "SHDWN", "SHUTDN", "OFF", "DIS", "DISABLE", "STBY", "STANDBY", "SLEEP",
    "SLP", "SHD", "SHUT", "PD", "PDN", "POWERDOWN", "PWRDN", "OFFON",
];
#[rustfmt::skip]
const SENSE: &[&str] = &[
    "SENSE", "SNS", "VSENSE", "OUTS", "OUTSENSE", "VOSNS", "VOS", "KELVIN", "SENS", "VSNS", "VOUTS", "VOUTSNS",
    "VOUTSENSE", "S", "OUTSNS", "VREFS", "REFS", "VSENS", "+SENSE", "SENSE+", "VOSENSE", "KELVINSENSE",
];
#[rustfmt::skip]
const BYPASS: &[&str] = &[
    "BYP", "BYPASS", "BP", "NR", "CBYP", "CN", "NOISE", "NOISEREDUCTION", "SS", "SOFTSTART", "CNR", "CSS",
    "FILT", "FILTER", "COMP", "CC", "CREF", "CNOISE", "FC", "NP", "CAP", "BPS", "CBP", "REFBYP", "NRSS", "VCAP",
    "CP", "CB", "BYPS", "REFCAP", "FF", "CFF", "CNRSS",
];
#[rustfmt::skip]
const BIAS: &[&str] = &[
    "BIAS", "VBIAS", "VCONTROL", "VC", "VCNTL", "VCTRL", "CNTL", "VL", "VCONT", "VB", "VINBIAS",
];
#[rustfmt::skip]
const POWER_GOOD: &[&str] = &[
    "PG", "PGOOD", "POK", "PWRGD", "PWROK", "RESET", "RST", "ERROR", "ERR", "LBO", "RO", "VDET", "OK", "POR",
    "NPOR", "POWERGOOD", "PWRGOOD", "PGD", "RESOUT", "ERRFLAG", "PF", "POWEROK", "VOK", "DROPOUT", "PGO",
];
#[rustfmt::skip]
const FAULT_FLAG: &[&str] = &[
    "FLG", "FLAG", "FAULT", "FLT", "OC", "OCB", "FAUL", "STATUS", "DIAG", "FAULTB",
];
#[rustfmt::skip]
const NOT_CONNECTED: &[&str] = &[
    "NC", "DNC", "TP", "IC", "NU", "DNU", "RSVD", "RES", "NOCONNECT", "RFU", "N/C",
];
#[rustfmt::skip]
const TAB: &[&str] = &[
    "EP", "PAD", "TAB", "EPAD", "DAP", "TPAD", "PPAD", "THERMAL", "THERMALPAD", "HEATSINK", "HS", "EXP", "SLUG",
    "MP", "EXPOSEDPAD", "EPGND", "TH", "THPAD", "TABOUT", "MTAB", "SHIELD", "CASE", "EXPPAD",
];
#[rustfmt::skip]
const AUXILIARY: &[&str] = &[
    "TRIM", "TEMP", "TEMPER", "VTEMP", "DELAY", "CDELAY", "CT", "CD", "TIMEOUT", "D", "ILIM", "IMON", "VIOC",
    "PGFB", "TEST", "MR", "SEQ", "TAP", "VTAP", "LIMIT", "ILIMIT", "REFIN", "LBI", "VTC", "HOLD", "SSCTRL",
    "VMON", "CL", "CS", "CSEN", "VZ", "SI", "SO", "WD", "WI", "WDI", "RADJ", "DLY", "RR", "PGDLY", "CDLY",
    "MODE", "GS", "SEL",
];
#[rustfmt::skip]
const CATHODE: &[&str] = &[
    "K", "CATHODE", "CATH", "KATHODE", "C", "CAT",
];
#[rustfmt::skip]
const ANODE: &[&str] = &[
    "A", "ANODE", "AN", "ANOD",
];
#[rustfmt::skip]
const SWITCHING: &[&str] = &[
    "SW", "LX", "PH", "PHASE", "BST", "BOOT", "CBOOT", "VSW", "VLX", "SWN", "SWP", "LSW", "HDRV", "LDRV",
    "UGATE", "LGATE", "DRVH", "DRVL", "HSD", "LSD", "BSFB", "BSOUT", "SYNC", "RT", "FREQ", "FSW", "L",
    "INDUCTOR", "SWITCH", "SWC", "SWE", "DRC", "IPK", "FX", "CBST", "TG", "BG", "RON", "SWB", "COIL", "RTCLK",
];
#[rustfmt::skip]
const PUMP: &[&str] = &[
    "C+", "C-", "CAP+", "CAP-", "C1+", "C1-", "C2+", "C2-", "CP+", "CP-", "CPP", "CPN", "CFLY+", "CFLY-", "CF+",
    "CF-", "C1P", "C1N", "C2P", "C2N", "CFLYP", "CFLYN", "LV", "OSC", "CAPP", "CAPN", "C3+", "C3-", "FC+",
    "FC-",
];
#[rustfmt::skip]
const ALIEN: &[&str] = &[
    "+IN", "-IN", "IN+", "IN-", "+INA", "-INA", "+INB", "-INB", "INA+", "INA-", "INB+", "INB-", "SDA", "SCL",
    "MOSI", "MISO", "SCK", "SCLK", "CLK", "DATA", "TX", "RX", "TXD", "RXD", "D+", "D-", "DP", "DM", "CHG",
    "CHRG", "STAT", "PROG", "TS", "NTC", "ISET", "GATE", "DRAIN", "SOURCE", "QOD", "SDI", "SDO", "SCKI", "SDTI",
    "SDTO", "RXI", "TXO", "VIO", "CHGIN", "ISENSE", "THM", "TMR", "EOC", "ACPR", "RS+", "RS-", "VBST", "IREF",
    "CS+", "CS-", "XTAL", "XIN", "XOUT", "DOUT", "DIN", "DO", "DI", "ADDR", "A0", "A1", "SWCLK", "SWDIO", "TCK",
    "TDI", "TDO", "TMS", "INT", "IRQ", "DISCH", "THR", "THRES", "TRIG", "TR", "DISCHARGE", "CV", "E", "B",
    "COLLECTOR", "EMITTER", "BASE",
];

/// Looks a reduced word up; `barred` matters to logic words only.
fn look_up(text: &str, barred: bool) -> Option<Word> {
    // `+` and `-` alone are terminals of a two-pole part or inputs of an amplifier.
    match text {
        "+" => return Some(Word::Plus),
        "-" => return Some(Word::Minus),
        "REF" | "R" => return Some(Word::Reference),
        _ => {}
    }
    let table: &[(&[&str], Word)] = &[
        (INPUT, Word::Input),
        (OUTPUT, Word::Output),
        (GROUND, Word::Ground),
        (ISOLATED, Word::IsolatedReturn),
        (ADJUST, Word::Adjust),
        (ENABLE, Word::Enable(barred)),
        // A barred shutdown is on while high, so it is no active-low enable.
        (DISABLE, Word::Enable(!barred)),
        (SENSE, Word::Sense),
        (BYPASS, Word::Bypass),
        (BIAS, Word::Bias),
        (POWER_GOOD, Word::PowerGood),
        (FAULT_FLAG, Word::FaultFlag),
        (NOT_CONNECTED, Word::NotConnected),
        (TAB, Word::Tab),
        (REFERENCE_OUTPUT, Word::ReferenceOutput),
        (SUPPLY, Word::Supply),
        (CATHODE, Word::Cathode),
        (ANODE, Word::Anode),
        (SWITCHING, Word::Switching),
        (PUMP, Word::Pump),
        (ALIEN, Word::Alien),
        (AUXILIARY, Word::Auxiliary),
    ];
    table.iter().find(|(names, _)| names.contains(&text)).map(|(_, word)| *word)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn first(name: &str) -> Word {
        read(name, "99").words.first().copied().unwrap_or(Word::Unnamed)
    }

    #[test]
    fn common_spellings_of_input_output_and_ground_are_read() {
        for name in ["IN", "VIN", "VI", "Vin", "V_IN", "INPUT", "VIN1", "+VIN", "IN_2", "VIN@1"] {
            assert_eq!(first(name), Word::Input, "{name}");
        }
        for name in ["OUT", "VOUT", "VO", "Vout", "OUTPUT", "OUT_F", "VOUT2", "OUT__1", "VOUT@2", "Q"] {
            assert_eq!(first(name), Word::Output, "{name}");
        }
        for name in ["GND", "VSS", "GND/HS", "AGND", "GND_2", "GNDS", "COMMON", "PGND_LDO", "Vss", "GND/PAD"] {
            assert_eq!(first(name), Word::Ground, "{name}");
        }
    }

    #[test]
    fn enable_polarity_follows_word_and_bar() {
        for name in ["EN", "ENABLE", "CE", "~{SHDN}", "ON/~{OFF}", "~{SD}", "INH", "Vdis", "EN/UV", "~{OFF}(~{STBY})"]
        {
            assert_eq!(read(name, "3").enable(), Some(false), "{name}");
        }
        for name in ["~{EN}", "SHDN", "SHUTDOWN", "~EN", "/EN", "EN#", "nEN", "-EN", "E\\N\\", "~{EN1}"] {
            assert_eq!(read(name, "3").enable(), Some(true), "{name}");
        }
    }

    #[test]
    fn double_names_keep_both_meanings_and_indices_become_labels() {
        assert_eq!(read("ADJ/GND", "1").words, vec![Word::Adjust, Word::Ground]);
        assert_eq!(read("SENSE/ADJ", "1").words, vec![Word::Sense, Word::Adjust]);
        assert_eq!(read("VSENSE1/FB1", "21").words, vec![Word::Sense, Word::Adjust]);
        assert_eq!(read("VSENSE1/FB1", "21").label, Some('1'));
        assert_eq!(read("OUTP", "1").label, Some('P'));
        assert_eq!(read("OUT1_S", "1"), PinName { words: vec![Word::Sense], label: Some('1'), power_input: false });
    }

    #[test]
    fn numbers_and_tildes_are_no_names() {
        for name in ["", "~", "1", "3", "Pin_2"] {
            assert_eq!(first(name), Word::Unnamed, "{name}");
        }
    }
}
