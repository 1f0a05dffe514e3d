//! What a figure measures.

use std::fmt;

/// A dimension as powers of volt, ampere, second, kelvin and degree of angle: enough for every unit of the trade, and
/// closed under multiplication and division.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct Dimension {
    volt: i8,
    ampere: i8,
    second: i8,
    kelvin: i8,
    angle: i8,
}

impl Dimension {
    const fn of(volt: i8, ampere: i8, second: i8, kelvin: i8) -> Self {
        Self { volt, ampere, second, kelvin, angle: 0 }
    }

    /// A plain number.
    pub const ONE: Self = Self::of(0, 0, 0, 0);
    /// Volts.
    pub const VOLTAGE: Self = Self::of(1, 0, 0, 0);
    /// Amperes.
    pub const CURRENT: Self = Self::of(0, 1, 0, 0);
    /// Ohms.
    pub const RESISTANCE: Self = Self::of(1, -1, 0, 0);
    /// Farads.
    pub const CAPACITANCE: Self = Self::of(-1, 1, 1, 0);
    /// Henries.
    pub const INDUCTANCE: Self = Self::of(1, -1, 1, 0);
    /// Watts.
    pub const POWER: Self = Self::of(1, 1, 0, 0);
    /// Seconds.
    pub const TIME: Self = Self::of(0, 0, 1, 0);
    /// Hertz.
    pub const FREQUENCY: Self = Self::of(0, 0, -1, 0);
    /// Degrees Celsius; differences in kelvins have the same dimension.
    pub const TEMPERATURE: Self = Self::of(0, 0, 0, 1);
    /// Kelvins (degrees Celsius) per watt.
    pub const THERMAL_RESISTANCE: Self = Self::of(-1, -1, 0, 1);
    /// Degrees of phase: a dimension of their own, so that no margin is compared with a plain number.
    pub const ANGLE: Self = Self { angle: 1, ..Self::ONE };
    /// Metres count as plain numbers: nothing is computed with them across units.
    pub const LENGTH: Self = Self::ONE;

    /// Every dimension whose unit has a name of its own, plain numbers first.
    pub const NAMED: &'static [Self] = &[
        Self::ONE,
        Self::VOLTAGE,
        Self::CURRENT,
        Self::RESISTANCE,
        Self::CAPACITANCE,
        Self::INDUCTANCE,
        Self::POWER,
        Self::TIME,
        Self::FREQUENCY,
        Self::TEMPERATURE,
        Self::THERMAL_RESISTANCE,
        Self::ANGLE,
    ];

    /// The dimension of a product.
    #[must_use]
    pub const fn times(self, other: Self) -> Self {
        Self {
            volt: self.volt.saturating_add(other.volt),
            ampere: self.ampere.saturating_add(other.ampere),
            second: self.second.saturating_add(other.second),
            kelvin: self.kelvin.saturating_add(other.kelvin),
            angle: self.angle.saturating_add(other.angle),
        }
    }

    /// The dimension of a quotient.
    #[must_use]
    pub const fn over(self, other: Self) -> Self {
        Self {
            volt: self.volt.saturating_sub(other.volt),
            ampere: self.ampere.saturating_sub(other.ampere),
            second: self.second.saturating_sub(other.second),
            kelvin: self.kelvin.saturating_sub(other.kelvin),
            angle: self.angle.saturating_sub(other.angle),
        }
    }

    /// The unit's symbol where it has a name of its own, such as `V`, `Ω`, `F`; empty for a plain number.
    #[must_use]
    pub fn symbol(self) -> Option<&'static str> {
        NAMES.iter().find(|(dimension, ..)| *dimension == self).map(|(_, symbol, _)| *symbol)
    }

    /// What it measures, as in a message: `a voltage`, `a resistance`.
    #[must_use]
    pub fn noun(self) -> String {
        NAMES
            .iter()
            .find(|(dimension, ..)| *dimension == self)
            .map_or_else(|| format!("a figure in {self}"), |(_, _, noun)| (*noun).to_owned())
    }

    /// The widest range that is physically possible: nothing below zero but voltages, currents, temperatures, angles
    /// and plain numbers.
    #[must_use]
    pub fn is_never_negative(self) -> bool {
        [Self::RESISTANCE, Self::CAPACITANCE, Self::INDUCTANCE, Self::TIME, Self::FREQUENCY].contains(&self)
            || self == Self::THERMAL_RESISTANCE
    }
}

const NAMES: &[(Dimension, &str, &str)] = &[
    (Dimension::ONE, "", "a plain number"),
    (Dimension::VOLTAGE, "V", "a voltage"),
    (Dimension::CURRENT, "A", "a current"),
    (Dimension::RESISTANCE, "Ω", "a resistance"),
    (Dimension::CAPACITANCE, "F", "a capacitance"),
    (Dimension::INDUCTANCE, "H", "an inductance"),
    (Dimension::POWER, "W", "a power"),
    (Dimension::TIME, "s", "a time"),
    (Dimension::FREQUENCY, "Hz", "a frequency"),
    (Dimension::TEMPERATURE, "°C", "a temperature"),
    (Dimension::THERMAL_RESISTANCE, "°C/W", "a thermal resistance"),
    (Dimension::ANGLE, "deg", "an angle"),
];

impl fmt::Display for Dimension {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        if let Some(symbol) = self.symbol() {
            return formatter.write_str(symbol);
        }
        let powers =
            [("V", self.volt), ("A", self.ampere), ("s", self.second), ("K", self.kelvin), ("deg", self.angle)];
        for (index, (symbol, power)) in powers.iter().filter(|(_, power)| *power != 0).enumerate() {
            let dot = if index > 0 { "·" } else { "" };
            match power {
                1 => write!(formatter, "{dot}{symbol}")?,
                power => write!(formatter, "{dot}{symbol}^{power}")?,
            }
        }
        Ok(())
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_dimension_with_a_name_is_listed_once_and_in_order() {
        assert_eq!(Dimension::NAMED, NAMES.iter().map(|(dimension, ..)| *dimension).collect::<Vec<_>>());
    }

    #[test]
    fn units_of_the_trade_follow_from_each_other() {
        assert_eq!(Dimension::VOLTAGE.over(Dimension::CURRENT), Dimension::RESISTANCE);
        assert_eq!(Dimension::RESISTANCE.times(Dimension::CAPACITANCE), Dimension::TIME);
        assert_eq!(Dimension::ONE.over(Dimension::TIME), Dimension::FREQUENCY);
        assert_eq!(Dimension::THERMAL_RESISTANCE.times(Dimension::POWER), Dimension::TEMPERATURE);
        assert_eq!(Dimension::INDUCTANCE.over(Dimension::TIME), Dimension::RESISTANCE);
        assert_eq!(Dimension::VOLTAGE.times(Dimension::VOLTAGE).to_string(), "V^2");
        assert_eq!(Dimension::ANGLE.over(Dimension::ANGLE), Dimension::ONE);
        assert_eq!(Dimension::ANGLE.times(Dimension::TIME).to_string(), "s·deg");
    }
}
