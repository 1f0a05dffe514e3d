//! The board as a graph of devices and nets: what each device is and what its value says.

mod access;
mod build;
mod fitted;
mod ground;
mod kind;
mod model;
mod parts;
mod pins;
mod supply_name;
mod value;

pub use ground::is_made_up;
pub use model::{
    Circuit, ComponentValue, Device, DeviceId, DeviceKind, Fitted, Net, NetId, Pin, PinType, Polarity, Reading,
};
pub use supply_name::{SupplyName, supply_name};
