//! Facts in fields on symbols: the same as in `[[part]]`, where the board file does not tell.

use std::sync::Arc;

use crate::circuit::{Circuit, Device, DeviceKind};
use crate::netlist::Netlist;
use crate::quantity::{Dimension, Range, read_amount};
use crate::source::Problem;

use super::declared::{Declared, Place};
use super::model::{Board, Esr, PartEntry};
use super::read_entries::peak_is_nominal;
use super::simulation::read_simulation;
use super::texts::{is_single, plain_words, read_figure, read_tolerance};
use crate::knowledge::Allowed::{Any, NotNegative, Positive};
use crate::source::TextFault;

impl Board {
    /// Adds what the fields on the board's symbols tell; the board file wins, fact by fact. Field names are read in
    /// any case, with blanks or underscores.
    ///
    /// Capacitors: `ESR`, `Technology` or `Dielectric`, `Rating` or `Voltage` (the rated voltage), `Tolerance`.
    /// Resistors: `Tolerance`, `Power` or `Rating` (watts). Connectors, batteries and transformers: `Supply voltage`.
    /// All parts: `Load current` (what the part draws), `Heatsink`, `Tolerance`, and `Sim.Device`, `Sim.Params`.
    /// On other parts a field of the same name may mean anything and is left alone.
    ///
    /// Gives a warning for each text that cannot be read: fields are free text.
    #[must_use]
    pub fn with_symbol_fields(&mut self, netlist: &Netlist, circuit: &Circuit) -> Vec<Problem> {
        let mut problems = Vec::new();
        for device in circuit.devices().map(|id| circuit.device(id)) {
            let mut told = Fields::new(device);
            told.read();
            for (field, fault) in told.faults {
                let message = format!("the field {field} of {} cannot be read: {}", device.reference, fault.message);
                let problem = Problem::warning(message).help(fault.help);
                let span = netlist.components.get(device.component).map(|component| component.span);
                problems.push(match span {
                    Some(span) => problem.at(&netlist.source, span, format!("{field} stands here")),
                    None => problem,
                });
            }
            if told.found {
                self.add_part(told.part);
            }
        }
        problems
    }

    fn add_part(&mut self, told: PartEntry) {
        let known = self.parts.iter_mut().find(|part| part.reference.value == told.reference.value);
        match known {
            Some(part) => *part = part.clone().over(told),
            None => self.parts.push(told),
        }
    }
}

/// The fields of one symbol, being read.
struct Fields<'a> {
    device: &'a Device,
    part: PartEntry,
    found: bool,
    faults: Vec<(String, TextFault)>,
}

impl<'a> Fields<'a> {
    fn new(device: &'a Device) -> Self {
        let place = Place::Field { field: Arc::from("Reference"), reference: Arc::from(device.reference.as_str()) };
        let part = PartEntry::new(Declared::new(device.reference.clone(), place));
        Self { device, part, found: false, faults: Vec::new() }
    }

    fn read(&mut self) {
        use DeviceKind::{Battery, Capacitor, Connector, Mechanical, Potentiometer, Resistor, Transformer, Unknown};
        let kind = self.device.kind;
        if kind == Capacitor {
            self.capacitor();
        }
        if matches!(kind, Resistor | Potentiometer) {
            self.part.power = self.first(&["power", "rating"], read_power);
        }
        if matches!(kind, Battery | Connector | Mechanical | Transformer | Unknown) {
            self.part.supply_voltage =
                self.first(&["supply voltage"], |text| read_figure(text, Dimension::VOLTAGE, Any));
        }
        let device = self.device;
        self.part.tolerance = self.first(&["tolerance"], |text| read_any_tolerance(text, device));
        self.part.load_current = self
            .first(&["load current"], |text| read_figure(text, Dimension::CURRENT, NotNegative).map(peak_is_nominal));
        self.part.heatsink = self
            .first(&["heatsink", "heat sink"], |text| read_figure(text, Dimension::THERMAL_RESISTANCE, NotNegative));
        match read_simulation(device) {
            Ok(None) => {}
            Ok(Some(model)) => {
                self.found = true;
                self.part.model = Some(self.declared(model, "Sim.Params"));
            }
            Err(fault) => self.faults.push(("Sim.Params".to_owned(), fault)),
        }
    }

    fn capacitor(&mut self) {
        self.part.esr = self.first(&["esr"], |text| {
            let range = read_figure(text, Dimension::RESISTANCE, NotNegative)?;
            Ok(Esr { range, single: is_single(text) })
        });
        self.part.technology = self.first(&["technology", "dielectric"], |text| Ok(plain_words(text)));
        self.part.rating = self.first(&["rating", "voltage", "voltage rating", "rated voltage"], |text| {
            // A rating that is written as a range is met by its lowest value.
            read_figure(text, Dimension::VOLTAGE, Positive).map(|range| Range::exactly(range.low()))
        });
    }

    /// What `read` makes of the first of these fields that holds a text.
    fn first<T>(&mut self, names: &[&str], read: impl Fn(&str) -> Result<T, TextFault>) -> Option<Declared<T>> {
        let fields = names.iter().filter_map(|name| field(self.device, name));
        let (name, text) = fields.into_iter().next()?;
        match read(text) {
            Ok(value) => {
                self.found = true;
                Some(self.declared(value, name))
            }
            Err(fault) => {
                self.faults.push((name.to_owned(), fault));
                None
            }
        }
    }

    fn declared<T>(&self, value: T, field: &str) -> Declared<T> {
        let reference = Arc::from(self.device.reference.as_str());
        Declared::new(value, Place::Field { field: Arc::from(field), reference })
    }
}

/// A field by its plain name, as it is spelled, with its text; `None` where it holds nothing.
pub(super) fn field<'a>(device: &'a Device, name: &str) -> Option<(&'a str, &'a str)> {
    let found = device.fields.iter().find(|field| plain_words(&field.name.replace('_', " ")) == name)?;
    let text = found.value.trim();
    let empty = ["", "~", "-", "?", "n/a", "na", "tbd"].iter().any(|word| text.eq_ignore_ascii_case(word));
    (!empty).then_some((found.name.as_str(), text))
}

/// `0.25 W`, `1/4W`.
fn read_power(text: &str) -> Result<Range, TextFault> {
    let parts = text.trim().strip_suffix(['W', 'w']).and_then(|number| number.trim().split_once('/'));
    if let Some((above, below)) = parts
        && let (Ok(above), Ok(below)) = (above.trim().parse::<u16>(), below.trim().parse::<u16>())
        && above > 0
        && below > 0
    {
        return Ok(Range::exactly(f64::from(above) / f64::from(below)));
    }
    read_figure(text, Dimension::POWER, Positive)
}

/// A relative tolerance, or an absolute one (`±0.25 pF`) of a value that is known.
fn read_any_tolerance(text: &str, device: &Device) -> Result<Range, TextFault> {
    let fault = match read_tolerance(text) {
        Ok(range) => return Ok(range),
        Err(fault) => fault,
    };
    let dimension = match device.kind {
        DeviceKind::Capacitor => Dimension::CAPACITANCE,
        DeviceKind::Resistor => Dimension::RESISTANCE,
        DeviceKind::Inductor => Dimension::INDUCTANCE,
        _ => return Err(fault),
    };
    let amount = device.amount.as_ref().map(|value| value.amount);
    let amount = amount.or_else(|| read_amount(&device.value, dimension).ok());
    let Some(amount) = amount.filter(|amount| *amount > 0.0) else { return Err(fault) };
    let plain = text.trim().trim_start_matches(['±', '+', '/', '-']);
    let Ok(width) = read_figure(plain, dimension, NotNegative) else { return Err(fault) };
    let relative = (width.high() / amount).min(1.0);
    Ok(Range::clamped(-relative, 0.0, relative))
}
