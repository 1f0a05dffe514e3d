//! The voltage that a zener diode is made for, by its value or number.

use crate::circuit::Device;

/// The voltages of 1N4728 and those that follow it by number (JEDEC registration, recalled).
const FROM_1N4728: &[f64] = &[
    3.3, 3.6, 3.9, 4.3, 4.7, 5.1, 5.6, 6.2, 6.8, 7.5, 8.2, 9.1, 10.0, 11.0, 12.0, 13.0, 15.0, 16.0, 18.0, 20.0, 22.0,
    24.0, 27.0, 30.0, 33.0, 36.0, 39.0, 43.0, 47.0, 51.0, 56.0, 62.0, 68.0, 75.0, 82.0, 91.0, 100.0,
];
/// The voltages of 1N5221 and those that follow it by number, which surface-mount series took over (JEDEC registration,
/// recalled).
const FROM_1N5221: &[f64] = &[
    2.4, 2.5, 2.7, 2.8, 3.0, 3.3, 3.6, 3.9, 4.3, 4.7, 5.1, 5.6, 6.0, 6.2, 6.8, 7.5, 8.2, 8.7, 9.1, 10.0, 11.0, 12.0,
    13.0, 14.0, 15.0, 16.0, 17.0, 18.0, 19.0, 20.0, 22.0, 24.0, 25.0, 27.0, 28.0, 30.0, 33.0, 36.0, 39.0, 43.0, 47.0,
];
/// Zener diodes are made for these.
const SENSIBLE: std::ops::RangeInclusive<f64> = 1.0..=200.0;

/// The nominal voltage of a zener diode with the text that tells it.
#[must_use]
pub fn zener_volts(part: &Device) -> Option<(f64, String)> {
    let texts = [part.value.as_str(), part.field("MPN").unwrap_or_default(), part.symbol()];
    texts.into_iter().find_map(|text| Some((volts(text)?, format!("read from {text}"))))
}

fn volts(text: &str) -> Option<f64> {
    let text = text.trim().to_ascii_uppercase().replace(',', ".");
    let found = numbered(&text).or_else(|| written(&text)).or_else(|| coded(&text))?;
    SENSIBLE.contains(&found).then_some(found)
}

/// `1N4733A`, `MMSZ5231B`.
fn numbered(text: &str) -> Option<f64> {
    let of =
        |from: usize, table: &[f64], number: usize| number.checked_sub(from).and_then(|at| table.get(at).copied());
    runs(text).find_map(|(_, digits, _)| {
        let number: usize = digits.parse().ok().filter(|_| digits.len() == 4)?;
        of(4728, FROM_1N4728, number).or_else(|| of(5221, FROM_1N5221, number))
    })
}

/// `5V6`, `BZT52C5V6`, `5.6V`, `12 V`, `12V 1W`.
fn written(text: &str) -> Option<f64> {
    runs(text).find_map(|(_, digits, behind)| {
        let behind = behind.trim_start().strip_prefix('V')?;
        let decimals: String = behind.chars().take_while(char::is_ascii_digit).take(2).collect();
        match digits.contains('.') || decimals.is_empty() {
            true => digits.parse().ok(),
            false => format!("{digits}.{decimals}").parse().ok(),
        }
    })
}

/// `BZX84C12`, `BZX55-B15`: whole volts behind the letter of the tolerance.
fn coded(text: &str) -> Option<f64> {
    let is_coded = text.starts_with("BZ") || text.starts_with("MM") || text.starts_with("PZ");
    let coded = |(before, digits, behind): (&str, &str, &str)| {
        let class = before.ends_with(['B', 'C']) && before.len() > 2;
        (class && !behind.starts_with(|sign: char| sign.is_ascii_alphabetic())).then(|| digits.parse().ok())?
    };
    runs(text).filter(|_| is_coded).find_map(coded)
}

/// The runs of digits and points in a text, with what stands before and behind each.
fn runs(text: &str) -> impl Iterator<Item = (&str, &str, &str)> {
    let part = |sign: char| sign.is_ascii_digit() || sign == '.';
    let mut at = 0;
    std::iter::from_fn(move || {
        let start = at + text.get(at..)?.find(|sign: char| sign.is_ascii_digit())?;
        let rest = text.get(start..)?;
        let end = start + rest.find(|sign: char| !part(sign)).unwrap_or(rest.len());
        at = end;
        Some((text.get(..start)?, text.get(start..end)?.trim_end_matches('.'), text.get(end..)?))
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn zener_voltages_are_read_from_values_and_numbers() {
        for (text, expected) in [
            ("5V6", 5.6),
            ("5.6V", 5.6),
            ("12 V", 12.0),
            ("12V 1W", 12.0),
            ("BZT52C5V6", 5.6),
            ("BZX84C5V6", 5.6),
            ("BZX84C12", 12.0),
            ("BZX55-B15", 15.0),
            ("1N4733A", 5.1),
            ("1N4742", 12.0),
            ("MMSZ5231B", 5.1),
            ("1N5242B", 12.0),
            ("BZX84-C3V3", 3.3),
        ] {
            assert_eq!(volts(text), Some(expected), "{text}");
        }
        for text in ["", "D_Zener", "1N4148", "SMAJ", "BZX84", "é5", "V", "1N9999"] {
            assert_eq!(volts(text), None, "{text}");
        }
    }
}
