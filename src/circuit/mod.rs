//! The board as a graph of devices and nets: what each device is and what its value says.

mod model;

pub use model::{
    Circuit, ComponentValue, Device, DeviceId, DeviceKind, Fitted, Net, NetId, Pin, PinType, Polarity, Reading,
};
