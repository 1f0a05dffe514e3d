//! The names that an expression may use, and where their values come from.

use crate::facts::{Subject, SubjectKind, Value, ValueKind};

/// The names that are defined, for typing.
pub trait Names {
    /// What a name of a kind of subject stands for.
    fn kind(&self, of: SubjectKind, name: &str) -> Option<ValueKind>;

    /// Every name of a kind of subject, in a stable order.
    fn known(&self, of: SubjectKind) -> Vec<&str>;
}

/// The values of the names, for evaluation.
pub trait Figures {
    /// What `name` stands for, for `subject`.
    fn value(&self, subject: Subject, name: &str) -> Value;

    /// How a message names a subject: its reference or net.
    fn label(&self, subject: Subject) -> String;

    /// What a member of a group is like, whatever the numbers of parts are: of members that do equally badly the first
    /// by this is told.
    fn likeness(&self, subject: Subject) -> String;
}

impl Names for &[(SubjectKind, &str, ValueKind)] {
    fn kind(&self, of: SubjectKind, name: &str) -> Option<ValueKind> {
        self.iter().find(|entry| entry.0 == of && entry.1 == name).map(|entry| entry.2)
    }

    fn known(&self, of: SubjectKind) -> Vec<&str> {
        self.iter().filter(|entry| entry.0 == of).map(|entry| entry.1).collect()
    }
}

/// Names from several tables, the first that knows a name wins.
impl Names for &[&dyn Names] {
    fn kind(&self, of: SubjectKind, name: &str) -> Option<ValueKind> {
        self.iter().find_map(|names| names.kind(of, name))
    }

    fn known(&self, of: SubjectKind) -> Vec<&str> {
        self.iter().flat_map(|names| names.known(of)).collect()
    }
}
