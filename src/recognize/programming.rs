//! Pins by which the output voltage is programmed: each is called by the voltage that it adds when it lies on ground.

use crate::circuit::Device;

/// So many pins that are called by a voltage program the output; fewer are something else.
const FEWEST: usize = 3;

/// The programming pins of a part, by index, with the volts that each adds; empty where it has none.
#[must_use]
pub fn programming_pins(part: &Device) -> Vec<(usize, f64)> {
    let pins = part.pins.iter().enumerate();
    let steps: Vec<(usize, f64)> = pins.filter_map(|(index, pin)| Some((index, step(&pin.name)?))).collect();
    if steps.len() < FEWEST { Vec::new() } else { steps }
}

/// The voltage that a pin is called by: `0P1V`, `6P4V2`, `1.6V`, `50mV`.
fn step(name: &str) -> Option<f64> {
    let upper = name.trim().to_ascii_uppercase();
    let whole = upper.find(|each: char| !each.is_ascii_digit()).filter(|at| *at > 0)?;
    let (number, rest) = upper.split_at(whole);
    if rest == "MV" {
        return number.parse::<f64>().ok().map(|millivolts| millivolts / 1000.0);
    }
    let (decimals, index) = match rest.strip_prefix(['P', '.']) {
        Some(rest) => rest.split_once('V')?,
        None => ("0", rest.strip_prefix('V')?),
    };
    // Two pins of one voltage are told apart by a digit.
    let digits = |text: &str| text.bytes().all(|each| each.is_ascii_digit());
    if decimals.is_empty() || !digits(decimals) || !digits(index) || index.len() > 1 {
        return None;
    }
    format!("{number}.{decimals}").parse().ok()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn pins_that_are_called_by_a_voltage_are_read() {
        for (name, volts) in
            [("0P1V", 0.1), ("6P4V2", 6.4), ("3P2V", 3.2), ("1.6V", 1.6), ("50mV", 0.05), ("2V", 2.0)]
        {
            assert_eq!(step(name), Some(volts), "{name}");
        }
        for name in ["", "V", "EN", "NR", "P1V", "0PV", "IN", "VOUT", "1", "3P2V15", "5VIN", "é", "12é"] {
            assert_eq!(step(name), None, "{name}");
        }
    }
}
