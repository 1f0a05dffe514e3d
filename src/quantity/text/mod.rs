//! Engineering values as text: `4.7 µF`, `10.8 .. 14.4 V`, `3.3 V ± 5 %`.

mod component;
mod gain;
mod number;
mod print;
mod read;
mod unit;

pub use component::{ComponentKind, ComponentText, read_component};
pub use gain::read_gain;
pub use print::{print_amount, print_range};
pub use read::{ReadError, read_amount, read_range, read_typical_maximum};
