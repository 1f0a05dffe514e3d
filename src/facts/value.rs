//! What a name in a check can stand for.

use crate::circuit::{DeviceId, NetId};
use crate::quantity::{Evidence, Quantity};
use crate::recognize::RegulatorId;

/// What a figure or a check is about.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Subject {
    /// A regulator or reference.
    Regulator(RegulatorId),
    /// A net.
    Net(NetId),
    /// A capacitor as it stands in a bank of a net.
    Capacitor {
        /// The capacitor.
        device: DeviceId,
        /// The net whose bank it is in.
        net: NetId,
    },
    /// The board as a whole.
    Board,
}

/// The kinds of subject, as check files name them in `about`.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum SubjectKind {
    /// `regulator`: series regulators, series references, shunt references, switching converters.
    Regulator,
    /// `net`
    Net,
    /// `capacitor`
    Capacitor,
    /// The board as a whole: what is said of its files; no check file is about it.
    Board,
}

impl SubjectKind {
    /// Every kind that a check file can be about, with its name there.
    pub const ALL: &'static [(Self, &'static str)] =
        &[(Self::Regulator, "regulator"), (Self::Net, "net"), (Self::Capacitor, "capacitor")];

    /// Its name in check files.
    #[must_use]
    pub fn name(self) -> &'static str {
        Self::ALL.iter().find(|(kind, _)| *kind == self).map_or("", |(_, name)| name)
    }
}

impl Subject {
    /// Its kind.
    #[must_use]
    pub fn kind(self) -> SubjectKind {
        match self {
            Self::Regulator(_) => SubjectKind::Regulator,
            Self::Net(_) => SubjectKind::Net,
            Self::Capacitor { .. } => SubjectKind::Capacitor,
            Self::Board => SubjectKind::Board,
        }
    }
}

/// A word out of a fixed set, such as the kind of a regulator.
#[derive(Debug, Clone, PartialEq)]
pub struct Word {
    /// The word, one of those that its definition lists, or a name for free words.
    pub word: String,
    /// What tells it.
    pub evidence: Option<Evidence>,
}

/// Yes or no.
#[derive(Debug, Clone, PartialEq)]
pub struct Flag {
    /// Whether it is so.
    pub holds: bool,
    /// What tells it.
    pub evidence: Option<Evidence>,
}

/// What a name stands for, for one subject.
#[derive(Debug, Clone, PartialEq)]
pub enum Value {
    /// A figure; one that nothing tells is a missing `Quantity`.
    Figure(Quantity),
    /// A word.
    Word(Word),
    /// Yes or no.
    Flag(Flag),
    /// Other subjects, to go through one by one.
    Group(Vec<Subject>),
    /// The name does not apply to this subject (the ESR of no capacitor), with the reason. A requirement on it is
    /// not asked.
    Inapplicable(String),
}

impl Value {
    /// A word.
    #[must_use]
    pub fn word(word: impl Into<String>) -> Self {
        Self::Word(Word { word: word.into(), evidence: None })
    }

    /// Yes or no, without evidence of its own.
    #[must_use]
    pub fn flag(holds: bool) -> Self {
        Self::Flag(Flag { holds, evidence: None })
    }

    /// It does not apply.
    #[must_use]
    pub fn inapplicable(reason: impl Into<String>) -> Self {
        Self::Inapplicable(reason.into())
    }

    /// The figure, where it is one.
    #[must_use]
    pub fn figure(&self) -> Option<&Quantity> {
        match self {
            Self::Figure(quantity) => Some(quantity),
            _ => None,
        }
    }
}
