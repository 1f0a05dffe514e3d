//! Engineering values as text: `4.7 µF`, `10.8 .. 14.4 V`, `3.3 V ± 5 %`.

mod number;
mod read;
mod unit;

pub use read::{ReadError, read_amount, read_range, read_typical_maximum};
