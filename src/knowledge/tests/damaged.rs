//! Damaged files: what is said, and where.

use super::super::family::family_of;
use super::super::supply::supply_of;
use super::super::technology::technology_of;
use super::told;
use crate::source::Source;

const GOOD: &str = r#"family = "x / X1"
maker = "a maker"
names = ["X1{V}*"]
voltages = ["3.3 V"]
kind = "series"
rated_current = "0.5 A"

[[sources]]
id = "sheet"
title = "X1 data sheet"
read = true

[[dropout]]
at = "0.5 A"
drop = "0.2 / 0.4 V"

[output_capacitor]
minimum = "1 uF"
kind = "required"
"#;

/// What is said of the good file with one text changed.
fn of_part(from: &str, to: &str) -> String {
    let text = GOOD.replacen(from, to, 1);
    let source = Source::new("x1.toml", text);
    match family_of(&source, "parts/x1.toml") {
        Ok(_) => "nothing".to_owned(),
        Err(problems) => problems.iter().map(told).collect::<Vec<_>>().join("\n"),
    }
}

#[test]
fn the_good_file_is_good() {
    assert_eq!(of_part("", ""), "nothing");
}

#[test]
fn a_mistyped_key_is_told_with_the_right_one() {
    insta::assert_snapshot!(of_part("rated_current", "rated_curent"), @r#"x1.toml:6:1 unknown key `rated_curent` (not a key here); did you mean `rated_current`?"#);
}

#[test]
fn a_number_without_quotes_is_told() {
    insta::assert_snapshot!(of_part("\"0.5 A\"", "0.5"), @r#"x1.toml:6:17 `rated_current` must be a text (this is a number); write it in quotes, a figure with its unit: "3.3 V""#);
}

#[test]
fn a_wrong_unit_is_told_at_the_very_place() {
    insta::assert_snapshot!(of_part("\"0.5 A\"", "\"0.5 V\""), @r#"x1.toml:6:22 expected a current, but `V` is the unit of a voltage (not readable as a figure); write "1 A", "1 .. 2 A", "typical / maximum A" or three values"#);
}

#[test]
fn a_missing_unit_is_told() {
    insta::assert_snapshot!(of_part("\"1 uF\"", "\"1\""), @r#"x1.toml:18:13 expected a capacitance: the unit `F` is missing (not readable as a figure); write "1 F", "1 .. 2 F", "typical / maximum F" or three values"#);
}

#[test]
fn a_range_out_of_order_is_told() {
    insta::assert_snapshot!(of_part("0.2 / 0.4 V", "0.4 / 0.2 V"), @r#"x1.toml:15:9 the typical value lies above the maximum (not readable as a figure); write "1 V", "1 .. 2 V", "typical / maximum V" or three values"#);
}

#[test]
fn a_file_without_a_source_is_refused() {
    let sources = "[[sources]]\nid = \"sheet\"\ntitle = \"X1 data sheet\"\nread = true\n";
    insta::assert_snapshot!(of_part(sources, ""), @r#"x1.toml:1:1 the file lacks the key `sources` (`sources` belongs here); add `sources = …`"#);
}

#[test]
fn an_unknown_source_is_told_with_the_near_one() {
    let to = "rated_current = { value = \"0.5 A\", source = \"shet\" }";
    insta::assert_snapshot!(of_part("rated_current = \"0.5 A\"", to), @r#"x1.toml:6:45 no source is called `shet` (an unknown source); did you mean `sheet`?"#);
}

#[test]
fn a_recalled_minimum_cannot_bind() {
    insta::assert_snapshot!(of_part("kind = \"required\"", "kind = \"required\"\nrecalled = true"), @r#"x1.toml:19:8 a recalled minimum cannot bind (the figure is recalled); write kind = "recalled", or name a source that was read"#);
}

#[test]
fn a_word_of_a_list_is_told_with_the_near_one() {
    insta::assert_snapshot!(of_part("\"required\"", "\"requird\""), @r#"x1.toml:19:8 `requird` is no kind of minimum (not a kind of minimum); did you mean `required`?"#);
}

#[test]
fn a_pattern_that_fits_everything_is_refused() {
    insta::assert_snapshot!(of_part("X1{V}*", "*{V}*"), @r#"x1.toml:3:10 the pattern would match any name (in this pattern); write the letters and digits that all order codes share"#);
}

#[test]
fn a_strange_sign_in_a_pattern_is_told() {
    insta::assert_snapshot!(of_part("X1{V}*", "X1[0-9]*"), @r#"x1.toml:3:13 `[` cannot stand in a name pattern (not a pattern); use letters, digits, `-./+`, `?` for one character, `*` for any run, `{V}` for the voltage code"#);
}

#[test]
fn figures_that_contradict_each_other_are_told() {
    let to = "rated_current = \"0.5 A\"\ninput_max = \"5 V\"\ninput_recommended_max = \"6 V\"";
    insta::assert_snapshot!(of_part("rated_current = \"0.5 A\"", to), @r#"x1.toml:8:25 `input_recommended_max` is above `input_max` (6 in SI units); `input_max` is 5 in SI units"#);
}

#[test]
fn recalled_keys_must_be_figures() {
    insta::assert_snapshot!(of_part("kind = \"series\"", "kind = \"series\"\nrecalled = [\"rated\"]"), @r#"x1.toml:6:13 `rated` is no figure here (not a figure of this table); did you mean `rated_current`?"#);
}

#[test]
fn a_pin_without_a_role_is_told() {
    let text = "[packages.\"SOT-23\"]\npins = { 1 = \"in\" }\n\n[output_capacitor]";
    insta::assert_snapshot!(of_part("[output_capacitor]", text), @r#"x1.toml:18:14 `in` is no role of a pin (not a role); one or two (with `or`) of: input, output, ground, adjust, enable, sense, bypass, bias, power-good, cathode, anode, not-connected, other"#);
}

#[test]
fn what_is_wrong_with_a_loop_is_told_at_its_place() {
    let told = |text: &str| of_part("[output_capacitor]", &format!("[loop]\n{text}\n[output_capacitor]"));
    let all = [
        "gain = \"80 dB\"\npoles = [\"1 kHz\", \"500 kHz\"]\nzeros = [\"2 MHz\"]\noutput_resistance = \"9 ohm\"",
        "poles = [\"1 kHz\"]",
        "gain = \"80 dV\"\npoles = [\"1 kHz\"]",
        "gain = \"80 dB\"\npoles = [\"1 k\", \"0 Hz\"]",
        "gain = \"80 dB\"\npoles = [\"1 kHz\"]\nzeros = [\"2 kHz\"]",
        "gain = \"80 dB\"\npoles = [\"1 kHz\"]\nresistance = \"9 ohm\"",
        "gain = \"80 dB\"\npoles = [\"1 kHz\"]\nrecalled = [\"pole\"]",
        "gain = \">= 80 dB\"\npoles = [\"1 kHz\"]",
    ];
    insta::assert_snapshot!(all.map(told).join("\n\n"));
}

#[test]
fn several_problems_are_told_in_one_reading() {
    let text =
        GOOD.replace("maker", "makr").replace("\"0.5 A\"", "\"half\"").replace("kind = \"series\"", "kind = 1");
    let problems = family_of(&Source::new("x1.toml", text), "parts/x1.toml").unwrap_err();
    insta::assert_snapshot!(problems.iter().map(told).collect::<Vec<_>>().join("\n"), @r#"
    x1.toml:1:1 the file lacks the key `maker` (`maker` belongs here); add `maker = …`
    x1.toml:2:1 unknown key `makr` (not a key here); did you mean `maker`?
    x1.toml:5:8 `kind` must be a text (this is a number); write it in quotes, a figure with its unit: "3.3 V"
    x1.toml:6:18 expected a current (not readable as a figure); write "1 A", "1 .. 2 A", "typical / maximum A" or three values
    x1.toml:14:7 expected a current (not readable as a figure); write "1 A", "1 .. 2 A", "typical / maximum A" or three values
    "#);
}

#[test]
fn a_file_that_is_not_toml_is_told_at_its_place() {
    insta::assert_snapshot!(of_part("maker = \"a maker\"", "maker = a maker"), @r#"x1.toml:2:9 the file is not valid TOML (string values must be quoted, expected literal string);"#);
}

#[test]
fn an_unknown_technology_and_a_supply_without_a_voltage_are_told() {
    let sources = "[[sources]]\nid = \"a\"\ntitle = \"b\"\nread = true\n";
    let text = format!("technology = \"glass\"\nesr = \"1 F\"\n{sources}");
    let mut problems = technology_of(&Source::new("glass.toml", text), "technologies/glass.toml").unwrap_err();
    let text = format!("supply = \"mains\"\nvoltag = \"230 V\"\n{sources}");
    problems.extend(supply_of(&Source::new("mains.toml", text), "supplies/mains.toml").unwrap_err());
    insta::assert_snapshot!(problems.iter().map(told).collect::<Vec<_>>().join("\n"), @r#"
    glass.toml:1:14 `glass` is no technology (an unknown technology); one of: ceramic-1, ceramic-2, electrolytic, film, polymer, tantalum
    glass.toml:2:10 expected a resistance, but `F` is the unit of a capacitance (not readable as a figure); write "1 Ω", "1 .. 2 Ω", "typical / maximum Ω" or three values
    mains.toml:1:1 the file lacks the key `voltage` (`voltage` belongs here); add `voltage = …`
    mains.toml:2:1 unknown key `voltag` (not a key here); did you mean `voltage`?
    "#);
}

proptest::proptest! {
    #[test]
    fn no_damage_makes_the_reader_fail(at in 0..GOOD.len(), taken in 0..12_usize, put in "[\\PC\n\"=\\[\\]{}./±µ-]{0,6}") {
        let mut text = GOOD.to_owned();
        text.replace_range(at..(at + taken).min(GOOD.len()), &put);
        let source = Source::new("x1.toml", text);
        let found = family_of(&source, "parts/x1.toml");
        let places_lie_inside = |problems: &[crate::source::Problem]| {
            problems.iter().all(|problem| problem.place().is_some_and(|(source, span)| span.end() <= source.text().len()))
        };
        proptest::prop_assert!(found.err().is_none_or(|problems| !problems.is_empty() && places_lie_inside(&problems)));
    }
}
