//! The names of the figures, for typing and for evaluation.

use super::language::{Figures, Names};
use crate::facts::{DEFINITIONS, Facts, Subject, SubjectKind, Value, ValueKind, definition};

/// Every name that the figures define.
#[derive(Debug, Clone, Copy, Default)]
pub struct DefinedNames;

impl Names for DefinedNames {
    fn kind(&self, of: SubjectKind, name: &str) -> Option<ValueKind> {
        definition(of, name).map(|entry| entry.kind)
    }

    fn known(&self, of: SubjectKind) -> Vec<&str> {
        DEFINITIONS
            .iter()
            .flat_map(|file| file.iter())
            .filter(|entry| entry.of == of)
            .map(|entry| entry.name)
            .collect()
    }
}

impl Figures for Facts<'_> {
    fn value(&self, subject: Subject, name: &str) -> Value {
        Facts::value(self, subject, name)
    }

    fn label(&self, subject: Subject) -> String {
        let circuit = self.circuit();
        match subject {
            Subject::Regulator(_) => {
                let Some(regulator) = self.regulator(subject) else { return String::new() };
                let reference = &self.part_of(regulator).reference;
                match regulator.output_index {
                    0 => reference.clone(),
                    index => format!("{reference} output {}", index + 1),
                }
            }
            Subject::Net(net) => circuit.net(net).name.clone(),
            Subject::Capacitor { device, .. } => circuit.device(device).reference.clone(),
            Subject::Board => String::new(),
        }
    }
    fn likeness(&self, subject: Subject) -> String {
        let circuit = self.circuit();
        match subject {
            Subject::Capacitor { device, net } => {
                let part = circuit.device(device);
                [part.value.as_str(), &part.part, &circuit.net(net).name].join("\n")
            }
            Subject::Regulator(_) | Subject::Net(_) | Subject::Board => String::new(),
        }
    }
}
