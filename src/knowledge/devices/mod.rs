//! Models of single parts: what a model is, and the families of parts that have one.

mod family;
mod model;
mod read;

pub use family::{DeviceFamily, StandsFor};
pub use model::{Allowed, DeviceModel, ModelKind, parameter_dimension, parameter_unit};
pub(crate) use model::{SetError, model_words};
pub(super) use read::device_of;
