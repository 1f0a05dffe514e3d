//! The figure keys of knowledge files.

use super::{Family, Supply, Technology};
use crate::quantity::Dimension;

/// A figure key: its name in the file, what it measures, and its meaning.
pub type FigureKey = (&'static str, Dimension, &'static str);

const V: Dimension = Dimension::VOLTAGE;
const A: Dimension = Dimension::CURRENT;
const F: Dimension = Dimension::CAPACITANCE;
const ONE: Dimension = Dimension::ONE;
const OHM: Dimension = Dimension::RESISTANCE;
const TEMPERATURE: Dimension = Dimension::TEMPERATURE;
const TIME: Dimension = Dimension::TIME;

/// The figures without a unit that are parts of another figure, which people read as per cent.
const RELATIVE: &[&str] =
    &["tolerance", "tolerance_initial", "capacitance_life_change", "temperature_change", "ageing", "bias_error"];

/// Whether a figure without a unit is a part of another figure.
#[must_use]
pub fn is_relative(key: &str) -> bool {
    RELATIVE.contains(&key)
}

impl Family {
    /// The figure keys of a part file. Voltages are magnitudes: of a negative part, below ground. A figure of two values
    /// is typical and maximum.
    pub const FIGURES: &'static [FigureKey] = &[
        ("rated_current", A, "largest output current for which the sheet gives figures"),
        ("current_limit", A, "where the current limit may begin, its least value"),
        ("short_circuit_current", A, "output current into a short, or at the largest input by foldback"),
        ("input_max", V, "absolute maximum of the input against ground"),
        ("input_recommended_max", V, "largest input of the recommended operating range"),
        ("input_min", V, "least input at which the part works, whatever its output"),
        ("difference_max", V, "absolute maximum of input against output"),
        ("reverse_max", V, "how far the output may stand above the input"),
        ("reference", V, "reference voltage over temperature"),
        ("reference_initial", V, "reference voltage at 25 °C"),
        ("tolerance", ONE, "output voltage of fixed versions over temperature, relative"),
        ("tolerance_initial", ONE, "output voltage of fixed versions at 25 °C, relative"),
        ("minimum_load", A, "load below which an adjustable version loses regulation"),
        ("accuracy_load", A, "least load of the sheet's accuracy figures; no limit of operation"),
        ("adjust_current", A, "current of the adjust or feedback pin"),
        ("set_current", A, "current out of the set pin"),
        ("ground_current", A, "own current at light load"),
        ("ground_current_full", A, "own current at the rated current"),
        ("ground_current_dropout", A, "own current when the input is too low"),
        ("junction_max", TEMPERATURE, "largest junction temperature"),
        ("bias_min", A, "least cathode current of a shunt reference"),
        ("bias_max", A, "largest cathode current of a shunt reference"),
        ("output_min", V, "least output of an adjustable version"),
        ("output_max", V, "largest output of an adjustable version, or cathode voltage of a shunt"),
        ("reference_load", A, "largest current that a series reference gives"),
        ("unstable_capacitance", F, "capacitance across a shunt reference at which it may oscillate"),
        ("diode_above_capacitance", F, "output capacitance above which a diode from output to input is needed"),
        ("diode_above_output", V, "output voltage above which a diode from output to input is needed"),
        ("divider_current_min", A, "least current of the feedback divider"),
        ("bias_supply_min", V, "how far the bias supply must stand above the output"),
        ("start_time", TIME, "time from enable to the output"),
        ("output_impedance", OHM, "dynamic impedance of a shunt reference"),
    ];
}

impl Technology {
    /// The figure keys of a technology file.
    pub const FIGURES: &'static [FigureKey] = &[
        ("tolerance", ONE, "tolerance of the capacitance where none is drawn, relative"),
        ("esr", OHM, "ESR at 20 °C, new: low end, nominal, high end"),
        ("esr_product", TIME, "ESR times capacitance at 20 °C, new: low end, nominal, high end"),
        ("loss_frequency", Dimension::FREQUENCY, "frequency of the loss factors"),
        ("esr_cold_factor", ONE, "ESR at `esr_cold_temperature` over ESR at 25 °C"),
        ("esr_cold_temperature", TEMPERATURE, "where `esr_cold_factor` holds; between, the logarithm is linear"),
        ("esr_life_factor", ONE, "ESR at the end of life over new"),
        ("capacitance_life_change", ONE, "change of the capacitance at the end of life, relative"),
        ("capacitance_cold_factor", ONE, "capacitance at the cold end over that at 20 °C"),
        ("voltage_factor", ONE, "part of the rating that may be used"),
        ("bias_k", Dimension::VOLTAGE, "volts per root of cubic millimetres per microfarad at half capacitance"),
        ("bias_exponent", ONE, "exponent of the bias model"),
        ("bias_error", ONE, "error of the bias model, as a part of the capacitance"),
        ("ageing", ONE, "loss of capacitance per decade of hours"),
        ("ageing_decades", ONE, "decades of hours from the reference time to the end of life"),
        ("temperature_min", TEMPERATURE, "lowest temperature of use"),
        ("temperature_max", TEMPERATURE, "highest temperature of use"),
    ];

    /// The tables of a technology file: name, what a row's figure measures, meaning. A row's key is a case, a dielectric
    /// code or a rating.
    pub const TABLES: &'static [FigureKey] = &[
        ("temperature_change", ONE, "change of capacitance over the code's temperature range, by dielectric"),
        ("temperature_range", TEMPERATURE, "temperature range, by dielectric"),
        ("ageing", ONE, "loss of capacitance per decade of hours, by dielectric"),
        ("case_volume", ONE, "body volume in cubic millimetres, by case"),
        ("case_esr", OHM, "ESR at 20 °C, new, by case"),
        ("loss_factor", ONE, "limit of the loss factor tan δ at `loss_frequency`, by rated voltage in volts"),
        ("tolerance", ONE, "tolerance of the capacitance, by dielectric"),
    ];
}

impl Supply {
    /// The figure keys of a supply file.
    pub const FIGURES: &'static [FigureKey] = &[
        ("surge", V, "highest transient"),
        ("lowest", V, "lowest transient or cranking voltage"),
        ("current", A, "current that it gives"),
        ("resistance", OHM, "source resistance"),
    ];
}
