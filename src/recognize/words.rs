//! What the text of a symbol says: its description, key words and library name.
//!
//! The words of the trade are few and stable, so a short list of phrases per sense is enough. They are weighed by
//! what else is known (pins, nets); no phrase alone makes a part a regulator.

use std::sync::LazyLock;

use regex::RegexSet;

use super::stated::{self, Stated};

/// The senses that the text carries.
#[derive(Debug, Clone, Default, PartialEq)]
pub(super) struct TextSigns {
    /// It speaks of a linear regulator.
    pub(super) linear: bool,
    /// It speaks of a regulator, of whatever kind.
    pub(super) regulator: bool,
    /// It speaks of a voltage reference.
    pub(super) reference: bool,
    /// It speaks of a shunt part.
    pub(super) shunt: bool,
    /// It speaks of a switching converter.
    pub(super) switching: bool,
    /// It speaks of something that is no regulator.
    pub(super) foreign: bool,
    pub(super) negative: bool,
    pub(super) positive: bool,
    pub(super) adjustable: bool,
    pub(super) fixed: bool,
    /// Voltages that it states.
    pub(super) volts: Vec<Stated>,
}

const LINEAR: &[&str] = &[
    r"\bldos?\b",
    r"\blow[ -]?drop",
    r"\blinear (?:voltage )?regulator",
    r"\blinear\b.*\bregulator",
    r"regulator_linear",
    r"\btermination regulator",
    r"\bvirtual ground",
    r"\bseries regulator",
    r"\bpositive regulator",
    r"\bnegative regulator",
    r"\bcap-?less regulator",
];
const REGULATOR: &[&str] = &[
    r"\bvoltage[ _-]regulat",
    r"\bregulators?\b",
    r"\bregul\b",
    r"\bvreg\b",
    r"\b3-?terminal\b",
    r"\bspannungsregler",
];
const REFERENCE: &[&str] = &[
    r"\bvoltage references?\b",
    r"\breferences?, \d",
    r"\bprecision references?\b",
    r"\breference_voltage",
    r"\breference diode",
    r"\bbandgap\b",
    r"\bseries reference",
    r"\bshunt reference",
    r"\bmicropower reference",
    r"\bv(?:oltage )?ref\b.*\bprecision",
    r"\bv reference\b",
    r"\bbuffered reference",
];
const SHUNT: &[&str] = &[
    r"\bshunt (?:voltage )?(?:regulator|reference)",
    r"\bshunt\b.*\b(?:reference|regulator)\b",
    r"\b(?:adjustable|programmable|precision) (?:zener|shunt)",
    r"\breference diode",
    r"\btwo[- ]terminal\b.*\breference",
    r"\bzener shunt",
    r"\b(?:reference|regulator)\b.*\bshunt",
];
const SWITCHING: &[&str] = &[
    r"\bswitching\b",
    r"\bswitch(?:ed)?[- ]mode",
    r"\bswitcher\b",
    r"\bstep[- ]?(?:up|down)",
    r"\bbuck\b",
    r"\bboost\b",
    r"\bdc[-/ ]?dc\b",
    r"\bcharge[- ]pump",
    r"\bswitched[- ]?cap",
    r"\bflyback",
    r"\bsepic\b",
    r"\bsmps\b",
    r"\bpwm\b",
    r"regulator_switch",
    r"converter_dcdc",
    r"\binverting (?:converter|regulator)",
    r"\bpower module\b",
    r"\bvoltage (?:converter|inverter)",
    r"\bsimple switcher",
    r"\bsynchronous (?:rectif|step|buck)",
    r"\bisolated\b.*\bconverter",
    r"\b78xx replacement",
    r"\bdcdc\b",
    r"\binductor\b.*\b[mµu]hz\b",
];
const FOREIGN: &[&str] = &[
    r"\bload[- ]?switch",
    r"\bpower[- ](?:distribution )?switch",
    r"\bdistribution switch",
    r"\bhigh[- ]side (?:switch|power)",
    r"\bcharger",
    r"\bcharging\b",
    r"\bsupervis(?:or|ory)\b",
    r"\breset (?:ic|generator|circuit|controller|monitor)",
    r"\bvoltage (?:detector|monitor)",
    r"\bcurrent[- ](?:sense|sensor|monitor|shunt|mirror|source)",
    r"\bshunt monitor",
    r"\bpower monitor",
    r"\bamplifier",
    r"\bop-?amps?\b",
    r"\boperational\b",
    r"\bcomparator",
    r"\bdrivers?\b",
    r"\btransceiver",
    r"\btranslat",
    r"\blevel[- ]?shift",
    r"\bisolator",
    r"\bopto-?coupler",
    r"\bphoto-?coupler",
    r"\bopto-?isolator",
    r"\bsensor",
    r"\bthermometer",
    r"\bmicrocontroller",
    r"\bmcu\b",
    r"\bmemory\b",
    r"\beeprom\b",
    r"\bflash\b",
    r"\badc\b",
    r"\bdac\b",
    r"\ba/d\b",
    r"\bd/a\b",
    r"\bcodec\b",
    r"\boscillator",
    r"\bcrystal\b",
    r"\bclock\b",
    r"\bnand\b",
    r"\bnor gate",
    r"\bflip-?flop",
    r"\binverter gate",
    r"\bschmitt",
    r"\bhot[- ]?swap",
    r"\be-?fuse\b",
    r"\bideal diode",
    r"\boring\b",
    r"\bsurge stopper",
    r"\bprotector",
    r"\bemi filter",
    r"\bfilter array",
    r"\bsaw filter",
    r"\busb hub",
    r"\bmotor\b",
    r"\brelay\b",
    r"\btimer\b",
    r"\btransistor",
    r"\bmosfet\b",
    r"\bthyristor",
    r"\btriac\b",
    r"\bscr\b",
    r"\bled\b",
    r"\bphotodiode",
    r"\breceiver",
    r"\btransmitter",
    r"\bmicrophone",
    r"\bhall\b",
    r"\bmultiplexer",
    r"\bmux\b",
    r"\bencoder",
    r"\bpotentiometer",
    r"\bfuel gauge",
    r"\bpower manage(?:r|ment unit)",
    r"\bpmic\b",
    r"\bbattery (?:management|protect)",
    r"\bpower mux",
    r"\bwi-?fi\b",
    r"\bbluetooth",
    r"\bidentification",
    r"\baccelerometer",
    r"\bgyro",
    r"\bkeypad\b",
    r"\bdisplay\b",
    r"\bbuzzer",
    r"\bgate driver",
    r"\bbuffer gate",
    r"\blogic\b",
];
const NEGATIVE: &[&str] = &[
    r"\bnegative\b",
    r"[-\u{2212}]\d+(?:\.\d+)?m?a\b.*\bregulator",
    r"\bfixed output [-\u{2212}]\d",
    r"\bneg\. ?regul",
];
const POSITIVE: &[&str] = &[r"\bpositive\b"];
const ADJUSTABLE: &[&str] =
    &[r"\badj(?:ustable)?\b", r"\bprogrammable\b", r"\bvariable\b", r"\bresistor[- ]programm"];
const FIXED: &[&str] = &[r"\bfixed\b"];

/// All phrases in one set with where each list ends, so that a text is scanned once.
static PHRASES: LazyLock<(RegexSet, [usize; 10])> = LazyLock::new(|| {
    let lists = [LINEAR, REGULATOR, REFERENCE, SHUNT, SWITCHING, FOREIGN, NEGATIVE, POSITIVE, ADJUSTABLE, FIXED];
    let mut ends = [0; 10];
    let mut total = 0;
    for (end, list) in ends.iter_mut().zip(lists) {
        total += list.len();
        *end = total;
    }
    let patterns = lists.iter().flat_map(|list| list.iter());
    #[allow(clippy::expect_used)] // constant patterns, compiled in the tests
    let set = RegexSet::new(patterns).expect("constant patterns");
    (set, ends)
});

/// Reads the text of a symbol.
pub(super) fn read(description: &str, keywords: &str, library: &str) -> TextSigns {
    // A library named after a kind of part tells it; one named after a project or a maker does not.
    let library = library.to_lowercase();
    let telling =
        ["regul", "reference", "converter", "dcdc", "dc-dc", "ldo"].iter().any(|word| library.contains(word));
    let library =
        if telling && !library.ends_with("-cache") && !library.contains("rescue") { library } else { String::new() };
    let text = format!("{description} ; {keywords} ; {library}").to_lowercase();
    let (set, ends) = &*PHRASES;
    let mut senses = [false; 10];
    for hit in &set.matches(&text) {
        let sense = ends.partition_point(|end| *end <= hit);
        if let Some(sense) = senses.get_mut(sense) {
            *sense = true;
        }
    }
    let [linear, regulator, reference, shunt, switching, foreign, negative, positive, adjustable, fixed] = senses;
    let mut volts = stated::read_description(description);
    if volts.is_empty() {
        volts = stated::read_description(keywords);
    }
    TextSigns {
        linear,
        regulator,
        reference,
        shunt,
        switching,
        foreign,
        negative,
        positive,
        adjustable,
        fixed,
        volts,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_description_tells_kind_and_sign() {
        let ldo = read("100mA Low Dropout Voltage Regulator, 3.3V positive fixed output", "", "Regulator_Linear");
        assert!(ldo.linear && ldo.positive && ldo.fixed && !ldo.switching && !ldo.foreign);
        let shunt = read("4.096V Precision Micropower Shunt Voltage Reference", "diode device", "");
        assert!(shunt.shunt && shunt.reference);
        let module =
            read("1A Step-Down DC/DC-Regulator, 7-42V input, 5V fixed Output Voltage, LM78xx replacement", "", "");
        assert!(module.switching && !module.linear);
        let negative = read("-200mA, Ultralow Noise RF Negative Linear Regulator", "", "");
        assert!(negative.negative && negative.linear);
        let switch = read("Current limited power switch, single channel", "", "Power_Management");
        assert!(switch.foreign && !switch.linear && !switch.regulator);
    }
}
