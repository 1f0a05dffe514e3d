//! Assembly variants: what version 10 of the editor writes with a component that is fitted otherwise in some of them.

use std::collections::BTreeSet;

use super::form::{Form, Misshapen};
use super::model::{Component, ComponentVariant, Field, Netlist};

/// Attributes that change nothing about the circuit.
const WITHOUT_EFFECT: &[&str] =
    &["exclude_from_bom", "exclude_from_sim", "exclude_from_pos_files", "Datasheet", "Description"];

/// The variants that a component lists. Properties and fields are kept alike, in order of the file.
pub(super) fn variants(form: Form) -> Result<Vec<ComponentVariant>, Misshapen> {
    let mut found = Vec::new();
    for variant in form.lists().filter(|inner| inner.head == "variant") {
        let mut read = ComponentVariant::default();
        for inner in variant.lists() {
            match inner.head.as_str() {
                "name" => read.name = inner.value()?,
                "property" => read.changes.push(field(inner)?),
                "fields" => {
                    for entry in inner.lists().filter(|entry| entry.head == "field") {
                        read.changes.push(field(entry)?);
                    }
                }
                _ => {}
            }
        }
        read.changes.retain(|change| !WITHOUT_EFFECT.contains(&change.name.as_str()));
        if !read.name.is_empty() && !read.changes.is_empty() {
            found.push(read);
        }
    }
    Ok(found)
}

fn field(form: Form) -> Result<Field, Misshapen> {
    form.field().map(|(name, value)| Field { name, value })
}

impl Netlist {
    /// The names of the assembly variants that change something about the circuit, in order.
    #[must_use]
    pub fn variant_names(&self) -> BTreeSet<&str> {
        self.components.iter().flat_map(|part| &part.variants).map(|variant| variant.name.as_str()).collect()
    }

    /// The netlist of an assembly variant: the same with what the variant changes on each component.
    #[must_use]
    pub fn as_variant(&self, name: &str) -> Self {
        let mut netlist = self.clone();
        for component in &mut netlist.components {
            let changes: Vec<Field> = component
                .variants
                .iter()
                .filter(|variant| variant.name == name)
                .flat_map(|variant| variant.changes.iter().cloned())
                .collect();
            changes.into_iter().for_each(|change| component.change(change));
        }
        netlist
    }
}

impl Component {
    /// Takes the text of a field in place of its own; `Value` and `Footprint` are those of the component.
    fn change(&mut self, change: Field) {
        match change.name.as_str() {
            "Value" => self.value.clone_from(&change.value),
            "Footprint" => self.footprint.clone_from(&change.value),
            _ => {}
        }
        match self.fields.iter_mut().find(|known| known.name == change.name) {
            Some(known) => known.value = change.value,
            None => self.fields.push(change),
        }
    }
}
