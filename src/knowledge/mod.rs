//! What the tool knows of parts, capacitors and supplies: files in `rules/`, built in and loadable.

mod model;

pub use model::{
    Active, AdjustSide, Basis, CapacitorDemand, Cited, Dropout, DropoutPoint, EnableSpec, EsrWindow, Family,
    FamilyKind, Knowledge, MinimumKind, OpenEnable, Package, Pass, RoleName, Sign, SourceNote, Supply, Technology,
};
