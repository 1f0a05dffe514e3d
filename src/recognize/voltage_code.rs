//! Nominal voltages as part names and descriptions spell them.
//!
//! Makers write the same voltage as `-3.3`, `33`, `330`, `3302`, `3V3`, `-3-3`; the same digits mean 12 V or 1.2 V. So a
//! name is not decoded to one voltage: every reading is collected with how plain it is, and what is known beside the
//! name (voltages that the family is made for, the symbol's description) chooses among the readings, never beyond.

use std::sync::LazyLock;

use regex::Regex;

use super::stated::Stated;

/// How plain a reading is, plainest first.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub(super) enum Plainness {
    /// Spelled with a point or a `V`, or the 78/79 scheme.
    Spelled,
    /// Digits behind a dash, or behind the known base of the family.
    Coded,
    /// Digits glued to letters.
    Glued,
    /// The only digits of a name, two of them: `LF47`.
    Short,
    /// The last digits of a long number.
    Tail,
    /// Digits that are more likely the part's number; they count only where something else confirms them.
    Faint,
}

/// One reading of a name, a magnitude in volts.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Reading {
    pub(super) volts: f64,
    /// How many decimals the code resolves: a reference of 4.096 V may be called 4 or 41.
    pub(super) decimals: i32,
    pub(super) plainness: Plainness,
}

/// Largest and smallest magnitude that a fixed regulator or reference is made for, in volts.
pub(super) const SENSIBLE: std::ops::RangeInclusive<f64> = 0.5..=48.0;

pub(super) fn regex(pattern: &str) -> Regex {
    #[allow(clippy::expect_used)] // constant patterns, each compiled in the tests
    Regex::new(pattern).expect("constant pattern")
}

/// Package names, and rests such as `/NOPB`: their digits say nothing of a voltage.
static PACKAGE: LazyLock<Regex> = LazyLock::new(|| {
    regex(
        r"(?x) (?:^|[_\-/\x20(])
        (?: SOT-?\d{2,3}(?:-\d{1,2}L?)? | TSOT-?\d{2}(?:-\d)? | TO-?\d{2,3}(?:-\d{1,2})?(?:AB|AA|F|FP)? | SO-?\d{1,2} | SOIC-?\d{0,2}
          | DIP-?\d{0,2} | PDIP-?\d{0,2} | H?T?S?SOP-?\d{0,2}J? | [VMH]?SSOP-?\d{0,2} | [HTM]+SOP-?\d{0,2} | [WVUXTHD]*[DQ]FN-?\d{0,2} | SON-?\d{0,2}
          | [WVUX]+SON-?\d{0,2} | SC-?\d{2}(?:-\d)? | DPAK-?\d? | D2PAK-?\d? | DDPAK-?\d? | BGA-?\d* | WLCSP-?\d* | SIP-?\d* | VQFN-?\d*
          | \d{1,2}PINPACKAGE | NOPB | TR | T[12]G | TRG\d | HF-\d )
        (?: $ | [_\-/\x20)] )",
    )
});
static SPELLED_V: LazyLock<Regex> =
    LazyLock::new(|| regex(r"(?:^|[^0-9])(?:(\d{1,2})V(\d{1,3})|(\d{1,2})P(\d{1,2})(?:V|$|[^A-Z0-9]))"));
static POINT: LazyLock<Regex> = LazyLock::new(|| regex(r"(\d{1,4})\.(\d{1,3})"));
static VOLTS: LazyLock<Regex> = LazyLock::new(|| regex(r"(?:^|[^0-9.])(\d{1,2})V(?:DC)?(?:$|[^A-Z0-9])"));
static SEVENTY: LazyLock<Regex> =
    LazyLock::new(|| regex(r"(?:^|[^0-9])7([89])([A-Z]{0,2})-?(\d{2})(\.\d)?(?:$|[^0-9.])"));
static DASHES: LazyLock<Regex> = LazyLock::new(|| regex(r"-(\d)-(\d)(?:$|[^0-9])"));
static DASHED: LazyLock<Regex> = LazyLock::new(|| regex(r"[\-_\x20](\d{1,4})([A-Z/\-_\x20]|$)"));
static GLUED: LazyLock<Regex> = LazyLock::new(|| regex(r"([A-Z])(\d{2,4})"));
static RUN: LazyLock<Regex> = LazyLock::new(|| regex(r"\d+"));

/// The voltages after 78 or 79: above 27 the code is in tenths, and a few below are too.
fn seventy_code(code: &str) -> Option<f64> {
    let number: f64 = code.parse().ok()?;
    match number {
        // Switching drop-in replacements have versions of 3.3 V that are called 7803.
        3.0 => Some(3.3),
        5.0..=12.0 | 15.0 | 16.0 | 17.0 | 18.0 | 20.0 | 24.0 | 27.0 => Some(number),
        25.0 | 26.0 | 28.0..=90.0 => Some(number / 10.0),
        _ => None,
    }
}

/// Every reading of a part name, plainest first. `base` is how many bytes of the upper-case name are known to be the
/// family's own number.
pub(super) fn read_name(name: &str, base: usize) -> Vec<Reading> {
    let mut upper = name.to_uppercase().replace(',', ".").replace(['µ', 'Μ', 'μ'], "U");
    // Packages overlap in their separators, so they are cut out until none is left.
    while let Some(found) = PACKAGE.find(&upper) {
        if found.start() < base {
            break;
        }
        let range = found.range();
        upper.replace_range(range, "_");
    }
    let mut readings = Vec::new();
    // The digits of the family's own number begin no voltage (`LD1117V33`), and one may follow them (`AMS11173V3`).
    let behind = upper.get(base.min(upper.len())..).unwrap_or("");
    spelled(behind, &mut readings);
    let seventy = SEVENTY.captures(&upper).and_then(|found| seventy_reading(&found));
    let is_seventy = seventy.is_some();
    readings.extend(seventy);
    let has_spelled = !readings.is_empty();
    if base > 0 {
        behind_base(behind, &mut readings);
    }
    if !is_seventy {
        coded(&upper, &mut readings);
    }
    readings.retain(|reading| SENSIBLE.contains(&reading.volts));
    // A spelled voltage settles the name; what other digits could mean no longer matters.
    if has_spelled && readings.iter().any(|reading| reading.plainness == Plainness::Spelled) {
        readings.retain(|reading| reading.plainness == Plainness::Spelled);
    }
    readings.sort_by_key(|reading| reading.plainness);
    let mut seen: Vec<Reading> = Vec::new();
    for reading in readings {
        if !seen.iter().any(|other| (other.volts - reading.volts).abs() < 1e-9) {
            seen.push(reading);
        }
    }
    seen
}

fn group<'a>(found: &regex::Captures<'a>, index: usize) -> &'a str {
    found.get(index).map_or("", |group| group.as_str())
}

fn spelled(upper: &str, readings: &mut Vec<Reading>) {
    for found in SPELLED_V.captures_iter(upper) {
        let (whole, part) = if found.get(1).is_some() { (1, 2) } else { (3, 4) };
        push(readings, &format!("{}.{}", group(&found, whole), group(&found, part)), Plainness::Spelled);
    }
    for found in POINT.captures_iter(upper) {
        let (whole, part) = (group(&found, 1), group(&found, 2));
        // `MC7905.2` is left to the 78/79 scheme, and `TC2014.5`-like runs are no voltages.
        if whole.len() <= 2 {
            push(readings, &format!("{whole}.{part}"), Plainness::Spelled);
        }
    }
    for found in VOLTS.captures_iter(upper) {
        push(readings, group(&found, 1), Plainness::Spelled);
    }
}

fn seventy_reading(found: &regex::Captures<'_>) -> Option<Reading> {
    let mut volts = seventy_code(group(found, 3))?;
    let mut decimals = i32::from(volts.fract() > 0.0);
    if let Ok(part) = group(found, 4).parse::<f64>() {
        volts += part;
        decimals = 1;
    }
    Some(Reading { volts, decimals, plainness: Plainness::Spelled })
}

fn push(readings: &mut Vec<Reading>, text: &str, plainness: Plainness) {
    if let Ok(volts) = text.parse::<f64>() {
        let decimals = text.split_once('.').map_or(0, |(_, part)| i32::try_from(part.len()).unwrap_or(0));
        readings.push(Reading { volts, decimals, plainness });
    }
}

/// What a bare run of digits can mean, the likelier first.
fn digits(code: &str, plainness: Plainness, readings: &mut Vec<Reading>) {
    let Ok(number) = code.parse::<f64>() else { return };
    let mut add = |volts: f64, decimals: i32| readings.push(Reading { volts, decimals, plainness });
    match code.len() {
        1 => add(number, 0),
        2 => {
            // Whole volts come first only where nothing is made for the tenths.
            if matches!(code, "05" | "06") {
                add(number, 0);
                add(number / 10.0, 1);
            } else {
                add(number / 10.0, 1);
                add(number, 0);
            }
        }
        3 => {
            add(number / 100.0, 2);
            // `331`: tenths, then the tolerance class.
            if let Ok(tenths) = code.get(..2).unwrap_or("").parse::<f64>()
                && code.ends_with(['1', '2'])
            {
                add(tenths / 10.0, 1);
            }
            // `120` for 12 V among parts that count in tenths.
            add(number / 10.0, 1);
        }
        4 => {
            // `3302`: tenths and the tolerance class.
            if let Ok(tenths) = code.get(..2).unwrap_or("").parse::<f64>()
                && code.get(2..3) == Some("0")
            {
                add(tenths / 10.0, 1);
            }
            // `2925`; but `-1000` is more likely a rating in milliamperes.
            if !code.ends_with("00") {
                add(number / 1000.0, 3);
            }
        }
        _ => {}
    }
}

/// Digits right behind the family's own number, through a few letters.
fn behind_base(rest: &str, readings: &mut Vec<Reading>) {
    let Some(run) = RUN.find(rest) else { return };
    // A lone digit amid letters is a package or a grade.
    let detached =
        rest.get(..run.start()).is_some_and(|between| between.is_empty() || between.ends_with(['-', ' ', '_']));
    if run.start() <= 6 && run.len() <= 4 && (run.len() >= 2 || detached) {
        // Letters between that number and the digits make it less plain.
        let plainness = if rest.get(..run.start()).is_some_and(|between| between.len() <= 1) {
            Plainness::Coded
        } else {
            Plainness::Glued
        };
        digits(run.as_str(), plainness, readings);
    }
}

/// Digits behind dashes, glued to letters, and at the end of long numbers.
fn coded(upper: &str, readings: &mut Vec<Reading>) {
    for found in DASHES.captures_iter(upper) {
        push(readings, &format!("{}.{}", group(&found, 1), group(&found, 2)), Plainness::Coded);
    }
    let first_run = RUN.find(upper).map_or(0..0, |run| run.range());
    for found in DASHED.captures_iter(upper) {
        let at = found.get(1).map_or(0, |group| group.start());
        // The first number of `R-78` or `LD-1117` is the part's.
        if at > first_run.start || group(&found, 1).len() <= 2 && first_run.len() > 2 {
            digits(group(&found, 1), Plainness::Coded, readings);
        }
    }
    for found in GLUED.captures_iter(upper) {
        let Some(run) = found.get(2) else { continue };
        let ends = upper.as_bytes().get(run.end()).is_none_or(|next| !next.is_ascii_digit() && *next != b'.');
        if !ends {
            continue;
        }
        // `LF33` has no number but its voltage; it counts like the tail of a long one.
        let plainness = match run.start() > first_run.start {
            true => Plainness::Glued,
            false if run.len() == 2 => Plainness::Short,
            false => Plainness::Faint,
        };
        digits(run.as_str(), plainness, readings);
    }
    tail(upper.get(first_run).unwrap_or(""), readings);
}

/// The last digits of the part's own number: `TLV70233`, `TPS715345`, `REF3033`.
fn tail(run: &str, readings: &mut Vec<Reading>) {
    if run.len() < 4 {
        return;
    }
    let plainness = if run.len() >= 5 { Plainness::Tail } else { Plainness::Faint };
    let mut add = |length: usize, decimals: i32, plainness: Plainness| {
        let code = run.len().checked_sub(length).and_then(|at| run.get(at..)).unwrap_or("");
        if let Ok(number) = code.parse::<f64>() {
            readings.push(Reading { volts: number / 10_f64.powi(decimals), decimals, plainness });
        }
    };
    // Three digits of voltage leave at least three for the part.
    if run.len() >= 6 {
        add(3, 2, plainness);
    }
    add(2, 1, plainness);
    add(2, 0, Plainness::Faint);
}

/// Whether a code that resolves so many decimals can stand for a voltage: it is the voltage, rounded or cut off.
pub(super) fn stands_for(reading: &Reading, volts: f64) -> bool {
    let scale = 10_f64.powi(reading.decimals);
    let near = |value: f64| (value - reading.volts).abs() < 1e-6;
    near(volts) || near((volts * scale).round() / scale) || near((volts * scale + 1e-9).floor() / scale)
}

/// What settles which reading of a name is meant.
#[derive(Debug, Clone, Copy, Default)]
pub(super) struct Arbiters<'a> {
    /// Voltages that the family is made for; empty where unknown, and seldom all of them.
    pub(super) made_for: &'a [f64],
    /// Whether codes round the voltage, as those of references do.
    pub(super) rounded: bool,
    /// What the description states.
    pub(super) stated: &'a [Stated],
}

/// A chosen voltage.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Chosen {
    /// Magnitude in volts.
    pub(super) volts: f64,
    /// Whether the name alone or together with the family says so; else the reading is a guess.
    pub(super) sure: bool,
    /// Whether the description says something else.
    pub(super) contradicted: bool,
    /// Other readings that are as good, where the choice is not sure.
    pub(super) others: Vec<f64>,
    /// The digits may be part of the part's number and no voltage at all.
    pub(super) faint: bool,
}

impl Chosen {
    fn sure(volts: f64, contradicted: bool) -> Self {
        Self { volts, sure: true, contradicted, others: Vec::new(), faint: false }
    }
}

/// Codes that a reader takes for a voltage without being told.
fn typical(volts: f64) -> bool {
    [1.2, 1.25, 1.5, 1.8, 2.5, 2.8, 2.85, 3.0, 3.3, 5.0, 12.0, 15.0].iter().any(|each| (each - volts).abs() < 1e-9)
}

/// Chooses among the readings of a name. `None` where the name says nothing that can be relied on.
pub(super) fn choose(readings: &[Reading], arbiters: Arbiters<'_>) -> Option<Chosen> {
    let version = |reading: &Reading| {
        let equal = |volts: &&f64| (**volts - reading.volts).abs() < 1e-6;
        let near = |volts: &&f64| arbiters.rounded && stands_for(reading, **volts);
        arbiters.made_for.iter().find(equal).or_else(|| arbiters.made_for.iter().find(near)).copied()
    };
    let made = |reading: &&Reading| version(reading).is_some();
    let exact = |reading: &Reading| version(reading).unwrap_or(reading.volts);
    let stated =
        |reading: &Reading| arbiters.stated.iter().map(|each| each.volts).find(|volts| stands_for(reading, *volts));
    // Which of two readings that the family is made for (12 V, 1.2 V) the description decides.
    let family: Vec<&Reading> =
        readings.iter().filter(|reading| reading.plainness < Plainness::Faint).filter(made).collect();
    if let Some(reading) = family.iter().find(|reading| stated(reading).is_some()).or(family.first()) {
        let contradicted = stated(reading).is_none() && !arbiters.stated.is_empty();
        return Some(Chosen::sure(exact(reading), contradicted));
    }
    // The plainest reading that the description confirms; a more precise statement is the better figure.
    if let Some((reading, volts)) = readings.iter().find_map(|reading| stated(reading).map(|volts| (reading, volts)))
    {
        let spelled = readings.iter().any(|other| other.plainness == Plainness::Spelled);
        if !spelled || reading.plainness == Plainness::Spelled {
            return Some(Chosen::sure(volts, false));
        }
    }
    let contradicted = !arbiters.stated.is_empty();
    let best = *readings.first()?;
    match best.plainness {
        Plainness::Spelled => Some(Chosen::sure(best.volts, contradicted)),
        Plainness::Coded => Some(coded_choice(readings, best, contradicted)),
        Plainness::Glued => {
            let group = || readings.iter().filter(|reading| reading.plainness == Plainness::Glued);
            let common = || group().find(|each| typical(each.volts)).copied();
            // Digits that are no common voltage and far from what is described are something else.
            match nearest(group(), arbiters.stated).or_else(common) {
                Some(reading) => Some(coded_choice(readings, reading, contradicted)),
                None if contradicted => None,
                None => Some(unsure(best.volts, readings)),
            }
        }
        // The part's own number: only a reading close to what is described can be a voltage at all.
        Plainness::Short | Plainness::Tail if contradicted => {
            let group = readings.iter().filter(|reading| reading.plainness == best.plainness);
            nearest(group, arbiters.stated).map(|reading| Chosen::sure(reading.volts, true))
        }
        Plainness::Tail => {
            let mut group = readings.iter().filter(|reading| reading.plainness == Plainness::Tail);
            let reading = group.find(|each| typical(each.volts))?;
            Some(Chosen { faint: true, ..unsure(reading.volts, readings) })
        }
        // `REF02` counts models, not volts.
        Plainness::Short => {
            (best.decimals == 1 && best.volts >= 1.0).then(|| Chosen { faint: true, ..unsure(best.volts, readings) })
        }
        Plainness::Faint => None,
    }
}

fn unsure(volts: f64, readings: &[Reading]) -> Chosen {
    let others = readings.iter().map(|reading| reading.volts).filter(|other| (other - volts).abs() > 1e-9).collect();
    Chosen { volts, sure: false, contradicted: false, others, faint: false }
}

/// `-12` is 12 V in about as many names as it is 1.2 V; so are other whole voltages that are in use.
fn coded_choice(readings: &[Reading], best: Reading, contradicted: bool) -> Chosen {
    let whole = |volts: f64| [9.0, 10.0, 12.0, 15.0, 18.0, 20.0, 24.0].iter().any(|each| (each - volts).abs() < 1e-9);
    let ambiguous = readings.iter().any(|other| {
        other.plainness == best.plainness && whole(other.volts) && (other.volts / best.volts - 10.0).abs() < 1e-6
    });
    if ambiguous && !contradicted { unsure(best.volts, readings) } else { Chosen::sure(best.volts, contradicted) }
}

/// The reading nearest to what is stated, within a tenth.
fn nearest<'a>(readings: impl Iterator<Item = &'a Reading>, stated: &[Stated]) -> Option<Reading> {
    let distance = |reading: &Reading| {
        stated.iter().map(|each| (each.volts / reading.volts - 1.0).abs()).fold(f64::INFINITY, f64::min)
    };
    readings
        .copied()
        .filter(|reading| distance(reading) < 0.1)
        .min_by(|one, other| distance(one).total_cmp(&distance(other)))
}

#[cfg(test)]
mod tests {
    use super::super::stated::read_description;
    use super::*;

    fn alone(name: &str) -> Option<f64> {
        choose(&read_name(name, 0), Arbiters::default()).map(|chosen| chosen.volts)
    }

    fn with(name: &str, description: &str) -> Option<f64> {
        choose(&read_name(name, 0), Arbiters { made_for: &[], rounded: true, stated: &read_description(description) })
            .map(|chosen| chosen.volts)
    }

    #[test]
    fn spelled_and_dashed_codes_are_read_without_help() {
        for (name, volts) in [
            ("LM1117-3.3", 3.3),
            ("MIC5205-2.85YM5", 2.85),
            ("LP5907MFX-3.3/NOPB", 3.3),
            ("AMS1117-3V3", 3.3),
            ("TLV1117-33", 3.3),
            ("MCP1700T-3302E/TT", 3.3),
            ("MCP1703A-500xxDB", 5.0),
            ("SPX3819M5-L-3-3", 3.3),
            ("L7805", 5.0),
            ("78L05", 5.0),
            ("L7885", 8.5),
            ("MC7905.2", 5.2),
            ("L78L33_SO8", 3.3),
            ("uA7812", 12.0),
            ("LD1117S33TR_SOT223", 3.3),
            ("LF33_TO220", 3.3),
            ("NCP1117ST33T3G", 3.3),
            ("LD39150DT18", 1.8),
            ("IFX25401TBV50", 5.0),
            ("LM336Z2.5", 2.5),
            ("LM4040DBZ-2.5", 2.5),
            ("ME6211C33M5G", 3.3),
            ("RT9193-33GB", 3.3),
            ("LM2940CT-12", 1.2),
            ("LM7805_TO220", 5.0),
            ("XC6220B331MR", 3.3),
            ("LD1117V33", 3.3),
            ("LD1117V50C", 5.0),
            ("AP2127K-4.75", 4.75),
        ] {
            assert_eq!(alone(name), Some(volts), "{name}");
        }
    }

    #[test]
    fn model_numbers_are_no_voltages() {
        for name in
            ["LM1117", "MCP1702", "ADP3335", "NCP4620", "LM317T", "REF192", "MAX603", "TL431", "LT3080", "LM4128"]
        {
            assert_eq!(alone(name), None, "{name}");
        }
    }

    #[test]
    fn a_description_chooses_among_the_readings_and_never_beyond_them() {
        for (name, description, volts) in [
            ("LM1085-12", "3A 27V Linear Regulator, Fixed Output 12V, TO-220/TO-263", 12.0),
            ("APE8865N-12-HF-3", "300mA Low Dropout Voltage Regulator, Fixed Output 1.2V", 1.2),
            ("LD1086D2T12TR", "Linear Regulator, Fixed Output 12V", 12.0),
            ("LM4040DBZ-4.1", "4.096V Precision Micropower Shunt Voltage Reference, SOT-23", 4.096),
            ("MAX6241", "1ppm/°C Low-Noise Precision +4.096V Voltage Reference, SO-8/DIP-8", 4.096),
            ("LD3985M29R_SOT23", "150mA Low Dropout Voltage Regulator, Fixed Output 2.8V, SOT-23-5", 2.9),
            ("TLV713185PDBV", "150mA Low Dropout Voltage Regulator, Fixed Output 1.8V, SOT-23-5", 1.85),
            ("TPS76329", "Low power 150mA LDO 2.8V fixed output voltage, SOT-23-5", 2.9),
            ("NCP163BFCT180T2G", "250mA low-noise LDO, 2.2V-5.5V input, 2.925V output, WLCSP-4", 1.8),
            ("TPS7148", "500mA Low Drop-out Voltage Regulator, Fixed Output 4.85V, SO-8/DIP-8", 4.85),
            ("L79L12_SOT89", "Negative 100mA -30V Linear Regulator, Fixed Output -5V, SOT-89", 12.0),
            ("MCP1501-12xCH", "1.25V, 0.1%, 20mA, Precision Voltage Reference, SOT-23-6", 1.25),
        ] {
            assert_eq!(with(name, description), Some(volts), "{name}");
        }
    }

    #[test]
    fn the_number_of_the_part_is_no_part_of_a_spelled_voltage() {
        for (name, base, volts) in [("LD1117V33", 6, 3.3), ("LD1117V50", 6, 5.0), ("AMS11173V3", 7, 3.3)] {
            let readings = read_name(name, base);
            let chosen = choose(&readings, Arbiters { made_for: &[1.8, 3.3, 5.0], rounded: false, stated: &[] });
            assert_eq!(chosen, Some(Chosen::sure(volts, false)), "{name}");
        }
    }

    #[test]
    fn the_family_settles_ambiguous_codes() {
        let readings = read_name("TLV70233DBVR", 6);
        let chosen = choose(&readings, Arbiters { made_for: &[1.2, 1.8, 3.3], rounded: false, stated: &[] });
        assert_eq!(chosen, Some(Chosen::sure(3.3, false)));
        let twelve = read_name("LM2940CT-12", 6);
        let chosen =
            choose(&twelve, Arbiters { made_for: &[5.0, 8.0, 9.0, 10.0, 12.0, 15.0], rounded: false, stated: &[] });
        assert_eq!(chosen.map(|chosen| chosen.volts), Some(12.0));
    }
}
