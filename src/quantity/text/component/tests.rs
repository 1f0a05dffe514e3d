use super::*;
use ComponentKind::{Capacitor, Inductor, PolarizedCapacitor, Resistor};

fn amount(text: &str, kind: ComponentKind) -> Option<f64> {
    read_component(text, kind).map(|read| read.amount)
}

fn check(kind: ComponentKind, repaired: bool, texts: &[(&str, f64)]) {
    for (text, expected) in texts {
        let read = read_component(text, kind);
        let right = read
            .as_ref()
            .is_some_and(|read| (read.amount - expected).abs() <= 1e-9 * expected && read.repaired == repaired);
        assert!(right, "{text}: {read:?}, not {expected}");
    }
}

#[test]
fn published_examples_of_value_codes_are_read() {
    // IEC 60062:2016 clause 3, examples as quoted by makers' marking guides: R47, 4R7, 470R, 4K7, 47K, 47K3, 470K, 4M7;
    // capacitor codes p47, 4p7, 470p, 2n2, 4u7.
    check(
        Resistor,
        false,
        &[
            ("R47", 0.47),
            ("4R7", 4.7),
            ("470R", 470.0),
            ("4K7", 4.7e3),
            ("47K", 47e3),
            ("47K3", 47.3e3),
            ("470K", 470e3),
            ("4M7", 4.7e6),
        ],
    );
    check(
        Capacitor,
        false,
        &[
            ("p47", 0.47e-12),
            ("4p7", 4.7e-12),
            ("470p", 470e-12),
            ("2n2", 2.2e-9),
            ("4u7", 4.7e-6),
            ("4µ7", 4.7e-6),
            ("1m0", 1e-3),
        ],
    );
    check(Capacitor, true, &[("4R7", 4.7e-12), ("103", 10e-9), ("472", 4.7e-9), ("475", 4.7e-6), ("229", 2.2e-12)]);
}

#[test]
fn capacitors_are_read_as_real_boards_write_them() {
    check(
        Capacitor,
        false,
        &[
            ("100n", 100e-9),
            ("0.1uF", 0.1e-6),
            ("10uF", 10e-6),
            ("4u7", 4.7e-6),
            ("2µ2", 2.2e-6),
            ("1\u{b5}5", 1.5e-6),
            ("1\u{3bc}5", 1.5e-6),
            (".1uF", 0.1e-6),
            ("0,33uF", 0.33e-6),
            ("0.1uF ", 0.1e-6),
            ("100 nF", 100e-9),
            ("100\u{a0}nF", 100e-9),
            ("1uf", 1e-6),
            ("250uf", 250e-6),
            ("C0.3uF", 0.3e-6),
            ("10uF,X5R", 10e-6),
            ("2.2n foil", 2.2e-9),
            ("1000p / Mica", 1e-9),
            ("1n option A", 1e-9),
            ("100u/35V", 100e-6),
            ("4n7 2kV", 4.7e-9),
            ("10uF/16V", 10e-6),
            ("100n 50V X7R", 100e-9),
            ("22µF", 22e-6),
            ("47uF_25V_ELKO", 47e-6),
            ("10000uF", 0.01),
            ("100NF", 100e-9),
            ("10UF", 10e-6),
            ("22PF", 22e-12),
            ("47u16V", 47e-6),
            ("10uF16V", 10e-6),
            ("1F", 1.0),
            ("0.47F 5.5V", 0.47),
            ("DNP 10n", 10e-9),
            ("16V 10u", 10e-6),
            ("22uF-16V", 22e-6),
            ("100n,50V", 100e-9),
            ("5.3n", 5.3e-9),
            ("1µ", 1e-6),
            ("0.001u", 1e-9),
            ("\"0.1uF\"", 0.1e-6),
            ("10 uF", 10e-6),
            ("100 n 50 V", 100e-9),
        ],
    );
    check(
        Capacitor,
        true,
        &[
            ("0.1", 0.1e-6),
            ("22", 22e-12),
            ("220", 220e-12),
            ("104", 100e-9),
            ("104K", 100e-9),
            (">2200uF", 2200e-6),
            ("1OOn", 100e-9),
            ("10\u{fffd}F", 10e-6),
            ("0.1mfd", 0.1e-6),
        ],
    );
    check(PolarizedCapacitor, true, &[("1000", 1000e-6), ("4.7", 4.7e-6), ("10/16V", 10e-6)]);
}

#[test]
fn placeholders_and_free_texts_are_no_value() {
    for text in
        ["C", "CP", "R", "?", "C_Small", "CP_Small", "Ct", "Co", "Cfilter", "C1", "C10", "", "DNP", "~", "*", "TBD"]
    {
        assert_eq!(amount(text, Capacitor), None, "{text}");
    }
    for text in ["R", "?", "Rsc", "ISET", "R_sense", "R1", "R2", "CHOOSE_A_VAL", "POT", "DNP", "R_US", "x", "1.2.3k"]
    {
        assert_eq!(amount(text, Resistor), None, "{text}");
    }
    for text in
        ["100M", "220K", "10K", "4.7", "1", "0", "2x10uF", "1,000pF", "10,000pF", "16V", "5%", "X7R", "10uH", "600R"]
    {
        assert_eq!(amount(text, Capacitor), None, "{text}");
    }
    for text in ["L", "L_Small", "600R@100MHz", "10", "FB"] {
        assert_eq!(amount(text, Inductor), None, "{text}");
    }
}

#[test]
fn resistors_are_read_as_real_boards_write_them() {
    check(
        Resistor,
        false,
        &[
            ("4.99k 1%", 4.99e3),
            ("49R9", 49.9),
            ("0R01", 0.01),
            ("R750", 0.75),
            ("10kR", 10e3),
            ("62mOhm", 0.062),
            ("100k(0.1%)", 100e3),
            ("1,5k", 1.5e3),
            ("2K2", 2.2e3),
            ("R047", 0.047),
            ("1M", 1e6),
            ("10k 1%", 10e3),
            ("10", 10.0),
            ("0", 0.0),
            ("0.08", 0.08),
            ("475", 475.0),
            ("200mR", 0.2),
            ("8mR", 0.008),
            ("10m", 0.01),
            ("5k49", 5.49e3),
            ("56K2", 56.2e3),
            ("100R", 100.0),
            ("100E", 100.0),
            ("4k7/0.25W", 4.7e3),
            ("10 k", 10e3),
            ("10 kΩ", 10e3),
            ("22Ω", 22.0),
            ("22 ohm", 22.0),
            ("1Meg", 1e6),
            ("DNP 10k", 10e3),
            ("10k DNP", 10e3),
            ("100 1%", 100.0),
            ("0603 10k", 10e3),
            ("B10K", 10e3),
            ("10KJ", 10e3),
            ("10kF", 10e3),
            ("2 M", 2e6),
        ],
    );
    check(Resistor, true, &[("1OK", 10e3), ("1Ok", 10e3)]);
}

#[test]
fn inductors_are_read_as_real_boards_write_them() {
    check(
        Inductor,
        false,
        &[
            ("10uH", 10e-6),
            ("2u2", 2.2e-6),
            ("2µ2", 2.2e-6),
            ("9n1", 9.1e-9),
            ("1.3u", 1.3e-6),
            ("91nH", 91e-9),
            ("1mH", 1e-3),
            ("22uH 3A", 22e-6),
            ("4R7", 4.7e-6),
        ],
    );
}

#[test]
fn what_stands_beside_the_value_is_kept() {
    let read = |text, kind| read_component(text, kind).map(|read| (read.tolerance, read.rating, read.technology));
    let word = |text: &str| Some(text.to_owned());
    assert_eq!(read("100n 50V X7R", Capacitor), Some((None, Some(50.0), word("X7R"))));
    assert_eq!(read("10uF,X5R", Capacitor), Some((None, None, word("X5R"))));
    assert_eq!(read("47uF_25V_ELKO", PolarizedCapacitor), Some((None, Some(25.0), word("ELKO"))));
    assert_eq!(read("4n7 2kV", Capacitor), Some((None, Some(2000.0), None)));
    assert_eq!(read("10uF/6V3 tant", Capacitor), Some((None, Some(6.3), word("tant"))));
    assert_eq!(read("1000p / Mica", Capacitor), Some((None, None, word("Mica"))));
    assert_eq!(read("100k(0.1%)", Resistor), Some((Some(0.001), None, None)));
    assert_eq!(read("4.99k 1%", Resistor), Some((Some(0.01), None, None)));
    assert_eq!(read("10uF ±20% 16V", Capacitor), Some((Some(0.2), Some(16.0), None)));
    assert_eq!(read("10uF +/-10 %", Capacitor), Some((Some(0.1), None, None)));
    assert_eq!(read("100nK", Capacitor), Some((Some(0.1), None, None)));
    assert_eq!(read("104J", Capacitor), Some((Some(0.05), None, None)));
    assert_eq!(read("4u7M", Capacitor), Some((Some(0.2), None, None)));
    assert_eq!(read("100nZ", Capacitor), Some((None, None, None)));
    assert_eq!(read("47u16V", Capacitor), Some((None, Some(16.0), None)));
    assert_eq!(read("10uF16V", Capacitor), Some((None, Some(16.0), None)));
    let small = read_component("4p7C", Capacitor).and_then(|read| read.tolerance).unwrap_or_default();
    assert!((small - 0.25 / 4.7).abs() < 1e-9);
}

#[test]
fn a_trimmer_is_the_middle_of_its_range() {
    let trimmer = read_component("12-22pF", Capacitor).unwrap();
    assert!((trimmer.amount - 17e-12).abs() < 1e-18 && !trimmer.repaired);
    assert!((trimmer.tolerance.unwrap() - 5.0 / 17.0).abs() < 1e-9);
    assert!((amount("8-40p", Capacitor).unwrap() - 24e-12).abs() < 1e-18);
}

mod hostile {
    use super::*;
    use proptest::prelude::*;

    proptest! {
        #[test]
        fn no_text_gives_a_value_that_no_part_can_have(text in "[0-9OoRCkKMmunpµΩF.,/_%()V -]{0,14}") {
            for kind in [Resistor, Capacitor, PolarizedCapacitor, Inductor] {
                if let Some(read) = read_component(&text, kind) {
                    prop_assert!(read.amount.is_finite() && read.amount >= 0.0);
                    prop_assert!(read.tolerance.is_none_or(|tolerance| (0.0..=1.0).contains(&tolerance)), "{:?}", read);
                }
            }
        }

        #[test]
        fn free_texts_never_panic(text in "\\PC{0,20}") {
            let read = read_component(&text, Capacitor);
            prop_assert!(read.is_none_or(|read| read.amount >= 0.0));
        }
    }
}
