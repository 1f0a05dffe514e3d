//! Part files: names that say which family is meant, what checks ask of them, what the catalog tells.

use std::fs;
use std::path::Path;

use railworthy::facts::{DEFINITIONS, SHEET};
use railworthy::knowledge::{Family, Knowledge};
use railworthy::recognize::{Overlap, families_of_name, overlaps};

use crate::program::{examples, run};
use crate::project::{files, text};
use crate::shared::shared_folder;

fn told(knowledge: &Knowledge, found: &[Overlap]) -> Vec<String> {
    let names = |overlap: &Overlap| {
        overlap.families.iter().map(|index| knowledge.families[*index].name.as_str()).collect::<Vec<_>>().join(" | ")
    };
    found.iter().map(|overlap| format!("{} [{}]: {}", overlap.name, overlap.maker, names(overlap))).collect()
}

#[test]
fn no_name_fits_two_built_in_families_alike() {
    let knowledge = Knowledge::built_in();
    let families: Vec<&Family> = knowledge.families.iter().collect();
    let symbols = shared_folder().map(|folder| fs::read_to_string(folder.join("symbols/regulators.tsv")).unwrap());
    let symbols: Vec<&str> = symbols.iter().flat_map(|text| text.lines().skip(1)).collect();
    let names = symbols.iter().filter_map(|line| line.split('\t').nth(1));
    let found = overlaps(&knowledge, &families, names);
    assert_eq!(told(&knowledge, &found), Vec::<String>::new());
}

#[test]
fn a_shunt_of_the_b_grade_is_the_one_of_its_voltage() {
    let knowledge = Knowledge::built_in();
    for (name, family) in [
        ("LM336B-5", "LM336-5.0"),
        ("LM336BZ-5.0", "LM336-5.0"),
        ("LM336BZ-2.5", "LM336B-2.5"),
        ("LM336B", "LM336B-2.5"),
        ("LM336Z-5.0", "LM336-5.0"),
    ] {
        let found: Vec<&str> = families_of_name(name, &knowledge)
            .iter()
            .map(|named| knowledge.families[named.family].name.as_str())
            .collect();
        assert_eq!(found, [family], "{name}");
    }
}

const PART: &str = r#"family = "NAME"
maker = "a maker"
names = [NAMES]
voltages = ["3.3 V"]
kind = "series"
rated_current = "0.5 A"

[[sources]]
id = "sheet"
title = "NAME data sheet"
read = true
"#;

fn folder_of(parts: &[(&str, &str)]) -> tempfile::TempDir {
    let folder = tempfile::tempdir().unwrap();
    fs::create_dir(folder.path().join("parts")).unwrap();
    for (name, names) in parts {
        let file = format!("parts/{}.toml", name.to_lowercase());
        fs::write(folder.path().join(file), PART.replace("NAMES", names).replace("NAME", name)).unwrap();
    }
    folder
}

fn vet(folder: &Path) -> crate::program::Run {
    run(folder, &["vet", "."])
}

#[test]
fn vetting_tells_of_two_families_that_share_a_name() {
    let own = folder_of(&[("QX1", "\"QX1?-{V}*\""), ("QX1A", "\"QX?1-{V}*\"")]);
    let shared = vet(own.path());
    assert_eq!(shared.status, Some(1), "{}", shared.out);
    assert!(shared.out.contains("fits `QX1` (parts/qx1.toml) and `QX1A` (parts/qx1a.toml) alike"), "{}", shared.out);
    assert!(shared.out.contains("a pattern that says more"), "{}", shared.out);
    let with_built_in = vet(folder_of(&[("MYREG", "\"LM1117*{V}*\"")]).path());
    assert!(with_built_in.out.contains("`1117 / LM1117`"), "{}", with_built_in.out);
    // One that says more is meant.
    let clear = vet(folder_of(&[("QX1", "\"QX1?-{V}*\""), ("QX1A", "\"QX1A-{V}*\"")]).path());
    assert_eq!(clear.status, Some(0), "{}", clear.out);
    assert!(!clear.out.contains("alike"), "{}", clear.out);
}

#[test]
fn vetting_lists_what_part_files_lack_by_check() {
    let run_own = vet(folder_of(&[("QX1", "\"QX1-{V}*\"")]).path());
    assert_eq!(run_own.status, Some(0), "what is lacking is no error: {}", run_own.out);
    for text in [
        "1 of 1 part files lack",
        "QX1  ",
        "headroom: input_min, tolerance, dropout",
        "output-capacitor: output_capacitor",
    ] {
        let told = run_own.out.split_whitespace().collect::<Vec<_>>().join(" ");
        assert!(told.contains(text.trim_end()), "{text}: {}", run_own.out);
    }
    let built_in = run(&examples(), &["vet"]);
    assert!(built_in.status == Some(0) && !built_in.out.contains("part files lack"), "{}", built_in.out);
    let listed = run(&examples(), &["vet", "--lacks"]);
    assert!(listed.status == Some(0) && listed.out.contains("part files lack figures that checks ask for"));
    assert!(!listed.out.contains("enable-level: reference"), "the word of a kind is no figure: {}", listed.out);
}

#[test]
fn figures_that_contradict_each_other_are_refused() {
    for (more, message) in [
        (
            "[output_capacitor]\nkind = \"optional\"\nesr_min = \"2 ohm\"\nesr_max = \"1 ohm\"\n",
            "`esr_min` is above `esr_max`",
        ),
        (
            "[[dropout]]\nat = \"1 A\"\ndrop = \"1 V\"\n[[dropout]]\nat = \"1 A\"\ndrop = \"2 V\"\n",
            "two dropout points are for one load",
        ),
        ("[input_capacitor]\nkind = \"required\"\nminimum = \"0 uF\"\n", "a capacitance is above zero"),
        (
            "[enable]\nactive = \"high\"\nopen = \"on\"\non = \"0.4 V\"\noff = \"2 V\"\n",
            "`on` and `off` contradict `active`",
        ),
    ] {
        let folder = tempfile::tempdir().unwrap();
        let part = PART.replace("NAMES", "\"QX1*\"").replace("NAME", "QX1");
        fs::write(folder.path().join("qx1.toml"), format!("{part}\n{more}")).unwrap();
        let run = vet(folder.path());
        assert_eq!(run.status, Some(2), "{more}: {}", run.out);
        assert!(run.out.contains(message), "{more}: {}", run.out);
    }
}

#[test]
fn every_key_that_figures_read_is_listed_with_the_figures_that_rest_on_it() {
    let names: Vec<&str> = DEFINITIONS.iter().flat_map(|file| file.iter()).map(|entry| entry.name).collect();
    for entry in SHEET {
        assert!(!entry.meaning.is_empty(), "{} is no key of a part file", entry.key);
        for figure in entry.used_by {
            assert!(names.contains(figure), "{}: `{figure}` is no figure", entry.key);
        }
    }
    let key = regex::Regex::new("\\bkey: \"([a-z_]+)\"").unwrap();
    // Stands in for another key where that is not stated.
    let instead = ["tolerance_initial"];
    for file in files("src/facts").iter().filter(|file| !file.ends_with("sheet.rs")) {
        for found in key.captures_iter(&text(file)).filter(|found| !instead.contains(&&found[1])) {
            let listed = SHEET.iter().any(|entry| entry.key == &found[1] && !entry.used_by.is_empty());
            let is_plain = Family::FIGURES.iter().any(|(known, ..)| *known == &found[1]);
            assert!(
                listed || !is_plain,
                "{file} reads `{}`: say in src/facts/sheet.rs which figures rest on it",
                &found[1]
            );
        }
    }
}

fn catalog(name: &str) -> String {
    let run = run(&examples(), &["catalog", "parts", name]);
    assert_eq!(run.status, Some(0), "{}", run.err);
    run.out
}

#[test]
fn a_family_is_shown_with_grades_kinds_pins_and_percentages() {
    let lm1117 = catalog("1117 / LM1117");
    // TI SNOS412N.
    for text in [
        "tolerance                                  2 .. 3 %",
        "recalled: TI LM1117 data sheet",
        "typically 1.2 V, at most 1.3 V at 800 mA",
        "output 100 mV below its value at 1.5 V more input than output",
        "10 µF or more as marked, required",
        "output capacitor, ESR                      0.3 .. 22 Ω",
        "1 adjust or ground, 2 output, 3 input",
        "61.6 °C/W",
    ] {
        assert!(lm1117.contains(text), "{text}:\n{lm1117}");
    }
    let lp2985 = catalog("LP2985");
    assert!(lp2985.contains("active high") && lp2985.contains("must not be left open"), "{lp2985}");
    // Torex XC6206: 60 mA at 1.2 V, 200 mA above.
    assert!(catalog("XC6206").contains("60 mA for outputs to 1.2 V, 200 mA above"));
    assert!(
        catalog("TLV702").contains("  lacks: ") || catalog("LP2981").contains("  lacks: "),
        "what is lacking is told"
    );
}

#[test]
fn a_family_is_found_by_the_name_of_a_part() {
    let ams = catalog("AMS1117-3.3");
    assert!(ams.starts_with("AMS1117-3.3 fits\n"), "{ams}");
    assert!(ams.lines().nth(1).unwrap().contains("1117 / AMS1117") && ams.lines().nth(1).unwrap().contains("3.3 V"));
    assert!(ams.contains("where a field names the maker: "), "{ams}");
    assert!(catalog("lm1117t-adj").contains("adjustable"));
    assert!(catalog("LP5907MFX-1.8/NOPB").contains("1.8 V"));
    let absent = run(&examples(), &["catalog", "parts", "ZZ99"]);
    assert_eq!(absent.status, Some(2));
}
