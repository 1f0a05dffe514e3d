//! What the tool knows of parts, capacitors and supplies: files in `rules/`, built in and loadable.

mod amount;
mod cite;
mod demand;
mod devices;
mod disk;
mod family;
mod files;
mod keys;
mod load;
mod lookup;
mod model;
mod names;
mod published_loop;
mod supply;
mod technology;
#[cfg(test)]
mod tests;

pub use devices::{Allowed, DeviceFamily, DeviceModel, ModelKind, StandsFor, parameter_dimension, parameter_unit};
pub(crate) use devices::{SetError, model_words};
pub use disk::{LARGEST_RULE_FILE, LARGEST_RULES, MOST_RULE_FILES};
pub use files::built_in_part;
pub use keys::{FigureKey, is_relative};
pub use lookup::DropoutAt;
pub use model::{
    Active, AdjustSide, Basis, CapacitorDemand, Cited, Dropout, DropoutPoint, EnableSpec, EsrWindow, Family,
    FamilyKind, Knowledge, MinimumKind, OpenEnable, Package, Pass, RoleName, Sign, SourceNote, Supply, Technology,
};
pub use names::VOLTAGE_CODE;
pub use published_loop::{MOST_CORNERS, PublishedLoop};
pub use technology::TECHNOLOGIES;
