//! The figures about one subject, each computed once, on demand.
//!
//! A figure is one [`Definition`] in the file that computes it, and that file one line in [`DEFINITIONS`].

mod battery;
mod built_up;
mod bypass;
mod capacitance;
mod capacitor;
mod circuit_values;
mod context;
mod definition;
mod demand;
mod dropout;
mod enable;
mod esr;
mod family_figure;
mod feedback;
mod flow;
mod headroom;
mod heat;
mod identity;
mod impedance;
mod least_load;
mod load;
mod net;
mod open_pins;
mod output;
mod pins;
mod programmed;
mod protection;
mod published_loop;
mod ratings;
mod reference_load;
mod sequence;
mod sheet;
mod shunt;
mod solved;
mod startup;
mod stress;
mod target;
mod technology;
mod tied;
mod value;
mod zener;

pub use context::Facts;
pub use definition::{Definition, ValueKind};
pub use flow::{Flow, Link, Rail, RailOrigin, Reservoir};
pub use published_loop::{Edge, PublishedMargin};
pub use ratings::overshoot;
pub use sheet::{SHEET, SheetFigure, lacking};
pub use value::{Flag, Subject, SubjectKind, Value, Word};

/// Every name of the check language, by the file that computes it.
pub const DEFINITIONS: &[&[Definition]] = &[
    identity::DEFINITIONS,
    output::DEFINITIONS,
    target::DEFINITIONS,
    load::DEFINITIONS,
    headroom::DEFINITIONS,
    dropout::DEFINITIONS,
    capacitance::DEFINITIONS,
    demand::DEFINITIONS,
    esr::DEFINITIONS,
    published_loop::DEFINITIONS,
    impedance::DEFINITIONS,
    capacitor::DEFINITIONS,
    stress::DEFINITIONS,
    net::DEFINITIONS,
    enable::DEFINITIONS,
    shunt::DEFINITIONS,
    startup::DEFINITIONS,
    pins::DEFINITIONS,
    open_pins::DEFINITIONS,
    heat::DEFINITIONS,
    ratings::DEFINITIONS,
    protection::DEFINITIONS,
    sequence::DEFINITIONS,
    bypass::DEFINITIONS,
    reference_load::DEFINITIONS,
    feedback::DEFINITIONS,
    least_load::DEFINITIONS,
    tied::DEFINITIONS,
    solved::DEFINITIONS,
];

/// The definition of a name for a kind of subject.
#[must_use]
pub fn definition(of: SubjectKind, name: &str) -> Option<&'static Definition> {
    DEFINITIONS.iter().flat_map(|file| file.iter()).find(|entry| entry.of == of && entry.name == name)
}
