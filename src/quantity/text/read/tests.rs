use super::*;

fn close(one: f64, other: f64) -> bool {
    (one - other).abs() <= 1e-12 * one.abs().max(other.abs())
}

#[test]
fn amounts_are_read_as_engineers_type_them() {
    let amounts = [
        ("180 mA", Dimension::CURRENT, 0.18),
        ("4.7uF", Dimension::CAPACITANCE, 4.7e-6),
        ("4u7", Dimension::CAPACITANCE, 4.7e-6),
        ("4u7F", Dimension::CAPACITANCE, 4.7e-6),
        ("62 °C/W", Dimension::THERMAL_RESISTANCE, 62.0),
        ("62 C/W", Dimension::THERMAL_RESISTANCE, 62.0),
        ("62 K/W", Dimension::THERMAL_RESISTANCE, 62.0),
        ("0.3 ohm", Dimension::RESISTANCE, 0.3),
        ("22 Ω", Dimension::RESISTANCE, 22.0),
        ("1k5", Dimension::RESISTANCE, 1500.0),
        ("10k", Dimension::RESISTANCE, 1e4),
        ("2 kΩ", Dimension::RESISTANCE, 2e3),
        ("10 uF", Dimension::CAPACITANCE, 1e-5),
        ("10 \u{b5}F", Dimension::CAPACITANCE, 1e-5),
        ("10 \u{3bc}F", Dimension::CAPACITANCE, 1e-5),
        ("1e-6 F", Dimension::CAPACITANCE, 1e-6),
        ("5 %", Dimension::ONE, 0.05),
        ("2.5MHz", Dimension::FREQUENCY, 2.5e6),
        ("-20 C", Dimension::TEMPERATURE, -20.0),
        ("55 °C", Dimension::TEMPERATURE, 55.0),
        ("1.5 m", Dimension::LENGTH, 1.5),
        ("45 deg", Dimension::ANGLE, 45.0),
        ("45°", Dimension::ANGLE, 45.0),
        ("45 °C", Dimension::TEMPERATURE, 45.0),
        ("45°C", Dimension::TEMPERATURE, 45.0),
        ("3V3", Dimension::VOLTAGE, 3.3),
        (" 0,5 V ", Dimension::VOLTAGE, 0.5),
        ("\u{2212}12 V", Dimension::VOLTAGE, -12.0),
        ("0.25", Dimension::ONE, 0.25),
        ("100 µs", Dimension::TIME, 1e-4),
        ("0.5 V/us", Dimension::VOLTAGE.over(Dimension::TIME), 0.5e6),
        ("4R7", Dimension::RESISTANCE, 4.7),
        ("200 mR", Dimension::RESISTANCE, 0.2),
        ("1 kHz", Dimension::FREQUENCY, 1e3),
        ("0.5 W", Dimension::POWER, 0.5),
        ("10uH", Dimension::INDUCTANCE, 1e-5),
        ("50 ppm", Dimension::ONE, 50e-6),
    ];
    for (text, dimension, expected) in amounts {
        match read_amount(text, dimension) {
            Ok(read) => assert!(close(read, expected), "{text}: {read}"),
            Err(error) => panic!("{text}: {error}"),
        }
    }
}

#[test]
fn what_is_wrong_is_said_at_its_place() {
    let wrong = |text: &str, dimension| {
        let error = read_amount(text, dimension).unwrap_err();
        (error.message().to_owned(), error.span().start()..error.span().end())
    };
    assert_eq!(
        wrong("3 mA", Dimension::VOLTAGE),
        ("expected a voltage, but `mA` is the unit of a current".to_owned(), 2..4)
    );
    let angle = "expected a plain number, but `°` is the unit of an angle".to_owned();
    assert_eq!(wrong("45°", Dimension::ONE), (angle, 2..4));
    assert_eq!(wrong("45", Dimension::ANGLE), ("expected an angle: the unit `deg` is missing".to_owned(), 2..2));
    let angle = "expected a temperature, but `°` is the unit of an angle".to_owned();
    assert_eq!(wrong("45°", Dimension::TEMPERATURE), (angle, 2..4));
    assert!(read_amount("45 mdeg", Dimension::ANGLE).is_err());
    assert_eq!(wrong("3.3", Dimension::VOLTAGE), ("expected a voltage: the unit `V` is missing".to_owned(), 3..3));
    assert_eq!(wrong("", Dimension::CURRENT), ("expected a current".to_owned(), 0..0));
    assert_eq!(wrong("five V", Dimension::VOLTAGE), ("expected a voltage".to_owned(), 0..6));
    assert_eq!(wrong("3 V or so", Dimension::VOLTAGE), ("`or so` does not belong to a voltage".to_owned(), 4..9));
    assert!(read_amount("10 k", Dimension::VOLTAGE).is_err());
    assert!(read_amount("5 %", Dimension::VOLTAGE).is_err());
    assert!(read_amount("1e999 V", Dimension::VOLTAGE).is_err());
    assert!(read_amount("1 Ux", Dimension::VOLTAGE).is_err());
}

fn range(text: &str, dimension: Dimension) -> (f64, f64, f64) {
    match read_range(text, dimension) {
        Ok(range) => (range.low(), range.nominal(), range.high()),
        Err(error) => panic!("{text}: {error}"),
    }
}

#[test]
fn ranges_are_read_in_every_form() {
    let ranges = [
        ("10.8 .. 14.4 V", Dimension::VOLTAGE, (10.8, 12.6, 14.4)),
        ("2 .. 180 mA", Dimension::CURRENT, (0.002, 0.091, 0.18)),
        ("50..200 mΩ", Dimension::RESISTANCE, (0.05, 0.125, 0.2)),
        ("500 mA .. 1 A", Dimension::CURRENT, (0.5, 0.75, 1.0)),
        ("3.3 V ± 5 %", Dimension::VOLTAGE, (3.135, 3.3, 3.465)),
        ("3.3V+/-5%", Dimension::VOLTAGE, (3.135, 3.3, 3.465)),
        ("3.3 V ± 0.1 V", Dimension::VOLTAGE, (3.2, 3.3, 3.4)),
        ("3.3 ± 0.1 V", Dimension::VOLTAGE, (3.2, 3.3, 3.4)),
        ("±20 %", Dimension::ONE, (-0.2, 0.0, 0.2)),
        ("-20 .. 80 %", Dimension::ONE, (-0.2, 0.3, 0.8)),
        ("1.238 / 1.250 / 1.262 V", Dimension::VOLTAGE, (1.238, 1.25, 1.262)),
        ("1.238V/1.250V/1.262V", Dimension::VOLTAGE, (1.238, 1.25, 1.262)),
        ("60 / 62 / 65 K/W", Dimension::THERMAL_RESISTANCE, (60.0, 62.0, 65.0)),
        ("-14 .. -13.2 V", Dimension::VOLTAGE, (-14.0, -13.6, -13.2)),
        ("-12 V ± 5 %", Dimension::VOLTAGE, (-12.6, -12.0, -11.4)),
        ("30 .. 60°", Dimension::ANGLE, (30.0, 45.0, 60.0)),
        ("45 deg ± 5 deg", Dimension::ANGLE, (40.0, 45.0, 50.0)),
        ("-20 .. 55 °C", Dimension::TEMPERATURE, (-20.0, 17.5, 55.0)),
        ("0 .. 470 uF", Dimension::CAPACITANCE, (0.0, 235e-6, 470e-6)),
        ("5 V", Dimension::VOLTAGE, (5.0, 5.0, 5.0)),
        ("1 to 2 V", Dimension::VOLTAGE, (1.0, 1.5, 2.0)),
        (">= 3 V", Dimension::VOLTAGE, (3.0, 3.0, f64::INFINITY)),
        ("≤ 5 V", Dimension::VOLTAGE, (f64::NEG_INFINITY, 5.0, 5.0)),
    ];
    for (text, dimension, (low, nominal, high)) in ranges {
        let read = range(text, dimension);
        let same = |one: f64, other: f64| {
            one.to_bits() == other.to_bits() || close(one, other) || (one - other).abs() < 1e-15
        };
        assert!(same(read.0, low) && same(read.1, nominal) && same(read.2, high), "{text}: {read:?}");
    }
}

#[test]
fn a_range_out_of_order_or_of_two_values_is_refused() {
    for text in ["5 .. 3 V", "1.2 / 1.3 V", "3 .. 5", "3 .. V", "1 V .. 2 A", "..", "± V", "1 / 2 / 3 / 4 V"] {
        assert!(read_range(text, Dimension::VOLTAGE).is_err(), "{text}");
    }
}

#[test]
fn a_typical_value_comes_before_the_maximum() {
    assert_eq!(read_typical_maximum("1.20 / 1.30 V", Dimension::VOLTAGE), Ok((1.2, 1.3)));
    assert_eq!(read_typical_maximum("400mV", Dimension::VOLTAGE), Ok((0.4, 0.4)));
    assert!(read_typical_maximum("1.3 / 1.2 V", Dimension::VOLTAGE).is_err());
    assert!(read_typical_maximum("1.2 / 1.3", Dimension::VOLTAGE).is_err());
}
