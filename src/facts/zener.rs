//! The voltage that a zener diode is made for.

pub(super) use crate::recognize::zener_volts;
