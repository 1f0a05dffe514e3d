//! Order codes as makers write them, with the family and the voltage that they mean.

use railworthy::circuit::Circuit;
use railworthy::knowledge::Knowledge;
use railworthy::netlist;
use railworthy::quantity::Grade;
use railworthy::recognize::{Design, Mode, Regulator, recognize};

use crate::recognition_symbols::{alone, rows};
use crate::shared::shared_folder;
use crate::small_board::{Part, netlist as board};

/// Code, family, volts; 0 where resistors set the output.
const CODES: &[(&str, &str, f64)] = &[
    ("LM1117MPX-3.3/NOPB", "1117 / LM1117", 3.3),
    ("LM1117T-ADJ/NOPB", "1117 / LM1117", 0.0),
    ("LD1117S33CTR", "1117 / LD1117", 3.3),
    ("LD1117V50", "1117 / LD1117", 5.0),
    ("LD1117DT18TR", "1117 / LD1117", 1.8),
    ("NCP1117ST33T3G", "1117 / NCP1117", 3.3),
    ("NCP1117DTARKG", "1117 / NCP1117", 0.0),
    ("AZ1117CH-3.3TRG1", "1117 / AZ1117", 3.3),
    ("TLV1117-33CDCYR", "1117 / TLV1117", 3.3),
    ("TLV1117LV33DCYR", "1117LV / TLV1117LV", 3.3),
    ("AMS1117-5.0", "1117 / AMS1117", 5.0),
    ("AP1117E33G-13", "1117 / AP1117", 3.3),
    ("L7805CV", "78xx / L78xx", 5.0),
    ("L7812CD2T-TR", "78xx / L78xx", 12.0),
    ("LM7805CT/NOPB", "78xx / LM78xx", 5.0),
    ("MC7805BDTRKG", "78xx / second sources", 5.0),
    ("UA7805CKCS", "78xx / second sources", 5.0),
    ("L78L05ACUTR", "78Lxx / L78Lxx", 5.0),
    ("LM78L05ACMX/NOPB", "78Lxx / LM78Lxx", 5.0),
    ("MC78L05ACDR2G", "78Lxx / second sources", 5.0),
    ("UA78L05ACPK", "78Lxx / second sources", 5.0),
    ("MC78M05CDTRKG", "78Mxx / MC78Mxx", 5.0),
    ("L78M12CDT-TR", "78Mxx / L78Mxx", 12.0),
    ("L7905CV", "79xx / L79xx", -5.0),
    ("LM7912CT/NOPB", "79xx / LM79xx", -12.0),
    ("MC79L05ACPG", "79Lxx / 79L05", -5.0),
    ("LM2940CT-5.0/NOPB", "LM2940", 5.0),
    ("LM2940S-12", "LM2940", 12.0),
    ("LM2941CT/NOPB", "LM2941", 0.0),
    ("LT1964ES5-5", "LT1964", -5.0),
    ("LT1964ES5-SD", "LT1964", 0.0),
    ("REG113NA-3/3K", "REG113", 3.0),
    ("REG113NA-3.3/3K", "REG113", 3.3),
    ("MCP1824T-0802E/OT", "MCP1824", 0.8),
    ("NCP167AMX330TBG", "NCP167", 3.3),
    ("AP2210N-3.3TRG1", "AP2210", 3.3),
    ("LM2990SX-5.0/NOPB", "LM2990", -5.0),
    ("LP2985-33DBVR", "LP2985", 3.3),
    ("LP2985AIM5-3.3/NOPB", "LP2985", 3.3),
    ("LP2981-50DBVR", "LP2981", 5.0),
    ("LP5907MFX-3.3/NOPB", "LP5907", 3.3),
    ("LP5912-3.3DRVR", "LP5912", 3.3),
    ("LP38693MP-3.3/NOPB", "LP38691/LP38693", 3.3),
    ("MIC5205-3.3YM5-TR", "MIC5205", 3.3),
    ("MIC5219-3.3YM5-TR", "MIC5219", 3.3),
    ("MIC29150-3.3WU-TR", "MIC29150", 3.3),
    ("MCP1700T-3302E/TT", "MCP1700", 3.3),
    ("MCP1700-5002E/TO", "MCP1700", 5.0),
    ("MCP1702T-3302E/CB", "MCP1702", 3.3),
    ("MCP1703T-5002E/DB", "MCP1703", 5.0),
    ("MCP1725-3302E/SN", "MCP1725", 3.3),
    ("MCP1727T-1802E/MF", "MCP1727", 1.8),
    ("MCP1754ST-3302E/MB", "MCP1754", 3.3),
    ("MCP1827S-5002E/AB", "MCP1827", 5.0),
    ("TC1185-3.3VCT713", "TC1185/TC1186", 3.3),
    ("TC1055-5.0VCT713", "TC1015/TC1055", 5.0),
    ("TPS73633DBVR", "TPS736", 3.3),
    ("TPS73601DBVT", "TPS736", 0.0),
    ("TPS79333DBVR", "TPS793", 3.3),
    ("TPS7A4901DGNR", "TPS7A49", 0.0),
    ("TPS7A2033PDBVR", "TPS7A20", 3.3),
    ("TPS7A0218DBVR", "TPS7A02", 1.8),
    ("TPS76333DBVR", "TPS763", 3.3),
    ("TPS76301DBVR", "TPS763", 0.0),
    ("TPS71533DCKR", "TPS715", 3.3),
    ("TPS715345DCKR", "TPS715", 3.45),
    ("TLV70233DBVR", "TLV702", 3.3),
    ("TLV70018DDCR", "TLV700", 1.8),
    ("TLV75533PDBVR", "TLV755P", 3.3),
    ("TLV75733PDBVR", "TLV757P", 3.3),
    ("TLV73310PDBVR", "TLV733P", 1.0),
    ("XC6206P332MR", "XC6206", 3.3),
    ("XC6220B331MR-G", "XC6220", 3.3),
    ("AP2112K-3.3TRG1", "AP2112", 3.3),
    ("AP2114H-3.3TRG1", "AP2114", 3.3),
    ("AP2127K-3.3TRG1", "AP2127", 3.3),
    ("AP2204K-3.3TRG1", "AP2204", 3.3),
    ("RT9013-33GB", "RT9013", 3.3),
    ("RT9193-33PB", "RT9193", 3.3),
    ("HT7333-A", "HT73xx-A", 3.3),
    ("HT7550-1", "HT75xx-1", 5.0),
    ("ME6211C33M5G-N", "ME6211", 3.3),
    ("NCP114ASN330T1G", "NCP114", 3.3),
    ("NCP163AFCS330T2G", "NCP163", 3.3),
    ("NCP718ASN330T1G", "NCP718", 3.3),
    ("NCP170AMX330TCG", "NCP170", 3.3),
    ("LT1761ES5-3.3#TRMPBF", "LT1761", 3.3),
    ("LT1763CS8-3.3#PBF", "LT1763", 3.3),
    ("LT1763xS8-3.3", "LT1763", 3.3),
    ("LT1963AEST-3.3#PBF", "LT1963A", 3.3),
    ("LT1129CST-5#PBF", "LT1129", 5.0),
    ("LT3080EDD#PBF", "LT3080", 0.0),
    ("ADP150AUJZ-3.3-R7", "ADP150", 3.3),
    ("ADP3338AKCZ-3.3-RL7", "ADP3338", 3.3),
    ("ADP3335ARMZ-3.3-RL", "ADP3335", 3.3),
    ("ADP7142ARDZ-5.0-R7", "ADP7142", 5.0),
    ("SPX3819M5-L-3-3/TR", "SPX3819", 3.3),
    ("LD3985M33R", "LD3985", 3.3),
    ("LD3985G122R", "LD3985", 1.22),
    ("LDK130M33R", "LDK130", 3.3),
    ("LDK320AM50R", "LDK320", 5.0),
    ("LF33CDT-TR", "LFxx", 3.3),
    ("LF50ABV", "LFxx", 5.0),
    ("LF120CV", "LFxx", 12.0),
    ("TCR2EE33", "TCR2EE/TCR2EF", 3.3),
    ("TLE4264G", "TLE4264", 5.0),
    ("LM317T", "317 / LM317", 0.0),
    ("LM337IMP/NOPB", "337 / LM337", 0.0),
];

/// The same for references: series ones.
const REFERENCES: &[(&str, &str, f64)] = &[
    ("REF3033AIDBZT", "REF30xx", 3.3),
    ("REF5025AIDR", "REF50xx", 2.5),
    ("REF02CP", "REF02", 5.0),
    ("REF102CU", "REF102", 10.0),
    ("REF195GSZ", "REF19x", 5.0),
    ("REF198FSZ", "REF19x", 4.096),
    ("ADR4525BRZ", "ADR45xx", 2.5),
    ("ADR421BRZ-REEL7", "ADR42x", 2.5),
    ("ADR444ARMZ", "ADR44x", 4.096),
    ("MCP1541T-I/TT", "MCP1525/MCP1541", 4.096),
    ("MCP1501T-25E/CHY", "MCP1501", 2.5),
    ("MCP1501-40E/SN", "MCP1501", 4.096),
    ("LT1790AIS6-2.5#TRMPBF", "LT1790", 2.5),
    ("LT1461CCS8-2.5#PBF", "LT1461", 2.5),
    ("LT1460HCS3-3.3#TRMPBF", "LT1460", 3.3),
];

/// The same for shunts.
const SHUNTS: &[(&str, &str, f64)] = &[
    ("LM4040AIM3-2.5/NOPB", "LM4040", 2.5),
    ("LM4040DIZ-4.1/NOPB", "LM4040", 4.096),
    ("LM385Z-2.5/NOPB", "LM385-2.5", 2.5),
    ("LM385BLP-2-5", "LM385-2.5", 2.5),
    ("LM385LP-1-2", "LM385-1.2", 1.235),
    ("LM285D-1.2", "LM385-1.2", 1.235),
    ("LM336BZ-5.0", "LM336-5.0", 5.0),
    ("TL431AIDBZR", "431 / TL431A", 0.0),
    ("TL431BQDBZR", "431 / TL431B", 0.0),
    ("LM385M-ADJ", "LM385-ADJ", 0.0),
];

fn design(text: &str) -> Design {
    let netlist = netlist::read("codes.net", text.as_bytes()).unwrap();
    recognize(Circuit::build(&netlist).0, &(), Knowledge::shared())
}

/// A part alone, drawn without a word, so that only its value tells.
fn drawn(code: &str, pins: &[(&'static str, &'static str, &'static str, &'static str)]) -> Design {
    let part = Part { reference: "U1", value: code.to_owned(), symbol: ("mine", "IC", ""), pins: pins.to_vec() };
    design(&board(&[part]))
}

fn series(code: &str) -> Design {
    drawn(code, &[("1", "VIN", "power_in", "A"), ("2", "GND", "power_in", "GND"), ("3", "VOUT", "power_out", "B")])
}

fn shunt(code: &str) -> Design {
    drawn(code, &[("1", "K", "passive", "A"), ("2", "A", "passive", "GND"), ("3", "REF", "passive", "B")])
}

fn names(regulator: &Regulator) -> Vec<&'static str> {
    let families = &Knowledge::shared().families;
    regulator.identity.families.iter().map(|index| families[*index].name.as_str()).collect()
}

fn wrong(code: &str, family: &str, volts: f64, design: &Design) -> Option<String> {
    let Some(found) = design.regulators.first() else { return Some(format!("{code}: nothing")) };
    let nominal = found.nominal.as_ref().map_or(0.0, |nominal| nominal.volts);
    let fits = names(found).first() == Some(&family) && (nominal - volts).abs() < 1e-6;
    (!fits).then(|| format!("{code}: {:?} {nominal}", names(found)))
}

#[test]
fn order_codes_of_all_makers_are_told_with_their_voltages() {
    let mut found: Vec<String> = Vec::new();
    found.extend(CODES.iter().filter_map(|(code, family, volts)| wrong(code, family, *volts, &series(code))));
    found.extend(REFERENCES.iter().filter_map(|(code, family, volts)| wrong(code, family, *volts, &series(code))));
    found.extend(SHUNTS.iter().filter_map(|(code, family, volts)| wrong(code, family, *volts, &shunt(code))));
    assert!(CODES.len() + REFERENCES.len() + SHUNTS.len() >= 120);
    assert_eq!(found, Vec::<String>::new());
}

#[test]
fn symbols_of_a_public_library_have_the_voltage_of_their_family() {
    let Some(shared) = shared_folder() else { return };
    let table = std::fs::read_to_string(shared.join("symbols/regulators.tsv")).unwrap();
    let (mut seen, mut known, mut found) = (0, 0, Vec::new());
    for row in rows(&table) {
        let design = design(&alone(&row));
        let Some(regulator) = design.regulators.first() else { continue };
        seen += 1;
        known += usize::from(!regulator.identity.families.is_empty());
        let Ok(volts) = row["vout_nominal"].parse::<f64>() else { continue };
        if regulator.identity.families.is_empty() {
            continue;
        }
        let nominal = regulator.nominal.as_ref().map_or(0.0, |nominal| nominal.volts);
        if (nominal.abs() / volts.abs() - 1.0).abs() > 0.0015 {
            found.push(format!("{} {:?} {nominal}", row["symbol"], names(regulator)));
        }
    }
    assert!(seen >= 1350 && known >= 1030, "{known} of {seen}");
    assert_eq!(found, Vec::<String>::new());
}

#[test]
fn a_number_of_an_unknown_maker_is_a_guess_over_the_makers_that_are_known() {
    for (code, group, volts) in [
        ("XX1117-3.3", "1117", 3.3),
        ("GM1117-3.3", "1117", 3.3),
        ("BL1117-33CX", "1117", 3.3),
        ("CJ78L05", "78Lxx", 5.0),
        ("WS78L05", "78Lxx", 5.0),
        ("CJ7812", "78xx", 12.0),
        ("7805", "78xx", 5.0),
    ] {
        let design = series(code);
        let found = design.regulators.first().unwrap_or_else(|| panic!("{code}"));
        let families = &Knowledge::shared().families;
        let groups: Vec<&str> = found.identity.families.iter().map(|index| families[*index].group.as_str()).collect();
        assert!(groups.len() >= 3 && groups.iter().all(|name| *name == group), "{code} {groups:?}");
        assert_eq!(found.nominal.as_ref().map(|nominal| nominal.volts), Some(volts), "{code}");
    }
    let design = series("CJ78L05");
    let found = design.regulators.first().unwrap();
    assert_eq!(found.identity.grade, Grade::Inferred);
    assert!(found.identity.remarks.iter().any(|remark| remark.contains("maker of CJ78L05")), "{found:?}");
    // A converter that replaces a 78xx is none.
    let design = series("K7805-500R3");
    assert!(design.regulators.iter().all(|each| each.kind == railworthy::recognize::RegulatorKind::Switching));
}

#[test]
fn a_misspelt_name_is_a_guess_that_says_so() {
    for (code, family, volts) in [("AMS1171-3.3", "1117 / AMS1117", 3.3), ("LP2590-33", "LP2950/LP2951 of TI", 3.3)] {
        let design = series(code);
        let found = design.regulators.first().unwrap_or_else(|| panic!("{code}"));
        assert_eq!(names(found).first(), Some(&family), "{code}");
        assert_eq!(found.identity.grade, Grade::Inferred, "{code}");
        assert_eq!(found.nominal.as_ref().map(|nominal| nominal.volts), Some(volts), "{code}");
        assert!(found.identity.remarks.iter().any(|remark| remark.contains("misspelling")), "{code}");
    }
    // Pins that are no regulator's leave a name as it is.
    let logic = [("1", "D0", "input", "A"), ("2", "GND", "power_in", "GND"), ("3", "Q0", "output", "B")];
    assert!(drawn("AMS1171-3.3", &logic).regulators.is_empty());
}

#[test]
fn an_adjustable_part_is_not_made_for_the_most_that_its_description_names() {
    let part = Part {
        reference: "U1",
        value: "LM317_TO-220".to_owned(),
        symbol: ("Regulator_Linear", "LM317_TO-220", "1.5A 35V Adjustable Linear Regulator, TO-220"),
        pins: vec![("1", "ADJ", "input", "n1"), ("2", "VO", "power_out", "n2"), ("3", "VI", "power_in", "n3")],
    };
    let design = design(&board(&[part]));
    let found = design.regulators.first().unwrap();
    assert_eq!((found.mode, found.nominal.clone()), (Mode::Adjustable, None));
}
