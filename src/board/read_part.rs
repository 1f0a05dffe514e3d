//! Reading `[[part]]`.

use crate::knowledge::{Basis, DropoutPoint, Family, FamilyKind, Pass, PublishedLoop, RoleName, Sign};
use crate::quantity::{Dimension, Range};
use crate::source::toml::{Table, Text, Value, nearest};

use super::declared::Declared;
use super::model::{Esr, PartEntry};
use super::reader::{Reader, span_of};
use super::texts::{is_single, plain_words, read_dropout, read_esr_window, read_part_figure, read_tolerance};
use crate::knowledge::Allowed::{Any, NotNegative, Positive};
use crate::knowledge::DeviceModel;
use crate::source::TextFault;

const KINDS: &[(FamilyKind, &str)] = &[
    (FamilyKind::Series, "series"),
    (FamilyKind::Shunt, "shunt"),
    (FamilyKind::Reference, "reference"),
    (FamilyKind::Switching, "switching"),
];
const SIGNS: &[(Sign, &str)] = &[(Sign::Positive, "positive"), (Sign::Negative, "negative")];
const BASES: &[(Basis, &str)] = &[(Basis::Nominal, "nominal"), (Basis::Effective, "effective")];
const ROLES: &[(bool, &str)] = &[(true, "ignore")];

impl<'a> Reader<'a> {
    /// Every `[[part]]` whose reference can be read.
    pub(super) fn parts(self, root: &mut Table<'a>) -> Vec<PartEntry> {
        let mut entries: Vec<PartEntry> = Vec::new();
        for mut table in root.tables("part") {
            let part = self.required(&mut table, "ref").map(PartEntry::new);
            // Read without a reference too, so that one reading tells every mistake.
            let mut entry =
                part.clone().unwrap_or_else(|| PartEntry::new(self.declared(String::new(), table.span())));
            self.passive(&mut table, &mut entry);
            self.identity(&mut table, &mut entry);
            self.in_place(&mut table, &mut entry);
            table.finish();
            if part.is_none() {
                continue;
            }
            match entries.iter().find(|known| known.reference.value == entry.reference.value) {
                Some(known) => self.twice("part", &entry.reference.value, &known.reference, &entry.reference),
                None => entries.push(entry),
            }
        }
        entries
    }

    /// Facts about capacitors, heat and power.
    fn passive(self, table: &mut Table<'a>, part: &mut PartEntry) {
        part.technology = self.name(table, "technology").map(|text| text.map(|text| plain_words(text)));
        part.esr = table.text("esr").and_then(|text| {
            let single = is_single(text.as_str());
            let figure = self.figure_of(text, Dimension::RESISTANCE, NotNegative)?;
            Some(figure.map(|range| Esr { range: *range, single: single && range.is_exact() }))
        });
        part.tolerance = self.parsed(table, "tolerance", read_tolerance);
        part.rating = self.single(table, "rating", Dimension::VOLTAGE, Positive);
        part.power = self.single(table, "power", Dimension::POWER, Positive);
        part.effective_capacitance = self.figure(table, "effective_capacitance", Dimension::CAPACITANCE, NotNegative);
        part.forward_drop = self.figure(table, "forward_drop", Dimension::VOLTAGE, NotNegative);
        part.resistance = self.figure(table, "resistance", Dimension::RESISTANCE, NotNegative);
        part.heatsink = self.figure(table, "heatsink", Dimension::THERMAL_RESISTANCE, NotNegative);
        part.junction_to_ambient = self.figure(table, "junction_to_ambient", Dimension::THERMAL_RESISTANCE, Positive);
        self.only_one(&[
            ("heatsink", span_of(part.heatsink.as_ref())),
            ("junction_to_ambient", span_of(part.junction_to_ambient.as_ref())),
        ]);
    }

    /// What the part is.
    fn identity(self, table: &mut Table<'a>, part: &mut PartEntry) {
        part.family = self.name(table, "family");
        part.alternatives = self.alternatives(table);
        part.ignore = self.word(table, "role", ROLES);
        part.kind = self.word(table, "kind", KINDS);
        part.polarity = self.word(table, "polarity", SIGNS);
        part.pass = self.word(table, "pass", Pass::ALL);
        self.only_one(&[("role", span_of(part.ignore.as_ref())), ("family", span_of(part.family.as_ref()))]);
        part.pins = table.table("pins").map(|mut pins| {
            let span = pins.span();
            let roles = pins.entries().into_iter().filter_map(|pin| Some((pin.key().to_owned(), self.roles(pin)?)));
            self.declared(roles.collect(), span)
        });
        part.model = table.text("model").and_then(|text| match DeviceModel::read(text.as_str()) {
            Ok(model) => Some(self.declared(model, text.span())),
            Err(faults) => {
                faults.into_iter().for_each(|fault| self.fault(text, fault));
                None
            }
        });
    }

    /// Other parts in its place, each named once and not empty.
    fn alternatives(self, table: &mut Table<'a>) -> Option<Declared<Vec<String>>> {
        let value = table.take("alternatives")?;
        let mut names: Vec<String> = Vec::new();
        for text in value.texts()? {
            let name = text.as_str().trim();
            if name.is_empty() {
                text.refuse("an alternative needs a name", "empty", "name the part that may be fitted instead");
            } else if !names.iter().any(|known| known == name) {
                names.push(name.to_owned());
            }
        }
        (!names.is_empty()).then(|| self.declared(names, value.span()))
    }

    /// `output` or `adjust or ground`.
    fn roles(self, pin: Value<'a>) -> Option<Vec<RoleName>> {
        let text = pin.text()?;
        let mut roles = Vec::new();
        for word in text.as_str().split(" or ").map(str::trim) {
            let found = RoleName::ALL.iter().find(|(_, name)| *name == word);
            let Some((role, _)) = found else {
                let names: Vec<&str> = RoleName::ALL.iter().map(|(_, name)| *name).collect();
                let help = match nearest(word, names.iter().copied()) {
                    Some(near) => format!("did you mean `{near}`?"),
                    None => format!("roles: {}", names.join(", ")),
                };
                text.refuse(format!("`{word}` is no role of a pin"), "not a role", help);
                return None;
            };
            roles.push(*role);
        }
        Some(roles)
    }

    /// Figures of a part that was not known, or known wrongly.
    fn in_place(self, table: &mut Table<'a>, part: &mut PartEntry) {
        part.output_voltage = self.figure(table, "output_voltage", Dimension::VOLTAGE, Any);
        part.dropout = self.dropout(table);
        part.esr_window = self.parsed(table, "esr_window", read_esr_window);
        let farads = |range: &Range| range.nominal();
        let minimum = |table: &mut Table<'a>, key| {
            self.single(table, key, Dimension::CAPACITANCE, NotNegative).map(|figure| figure.map(farads))
        };
        part.minimum_output_capacitance = minimum(table, "minimum_output_capacitance");
        part.minimum_input_capacitance = minimum(table, "minimum_input_capacitance");
        part.minimum_basis = self.word(table, "minimum_basis", BASES);
        part.published_loop = table.table("loop").and_then(|mut table| {
            let span = table.span();
            let found = PublishedLoop::read(&mut table, |_, text, range| self.declared(range, text.span()));
            table.finish();
            found.map(|found| self.declared(found, span))
        });
        for (key, dimension, _) in Family::FIGURES {
            // A part's tolerance has a key of its own, read with the passive facts.
            if *key == "tolerance" {
                continue;
            }
            if let Some(figure) = self.parsed(table, key, |text| read_part_figure(text, *dimension)) {
                part.figures.insert((*key).to_owned(), figure);
            }
        }
    }

    /// One point, or a list of points with rising load.
    fn dropout(self, table: &mut Table<'a>) -> Option<Declared<Vec<DropoutPoint>>> {
        let value = table.take("dropout")?;
        let texts = if value.is_list() { value.texts()? } else { vec![value.text()?] };
        let mut points: Vec<DropoutPoint> = Vec::new();
        for text in texts {
            match read_dropout(text.as_str()) {
                Ok(point) => points.push(point),
                Err(fault) => self.fault(text, fault),
            }
        }
        points.sort_by(|one, other| one.load.total_cmp(&other.load));
        (!points.is_empty()).then(|| self.declared(points, value.span()))
    }

    /// What `read` makes of the text under a key.
    fn parsed<T>(
        self,
        table: &mut Table<'a>,
        key: &'static str,
        read: impl Fn(&str) -> Result<T, TextFault>,
    ) -> Option<Declared<T>> {
        let text = table.text(key)?;
        match read(text.as_str()) {
            Ok(value) => Some(self.declared(value, text.span())),
            Err(fault) => {
                self.fault(text, fault);
                None
            }
        }
    }

    pub(super) fn fault(self, text: Text<'a>, fault: TextFault) {
        self.document.refuse(text.part(fault.place), fault.message, fault.label, fault.help);
    }
}
