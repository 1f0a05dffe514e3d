//! Figures of knowledge files as text: `20 V`, `1.10 / 1.20 V`, `1.238 / 1.250 / 1.262 V`, `0.3 .. 22 ohm`, `±4 %`.

use crate::quantity::{Dimension, Range, ReadError, read_range, read_typical_maximum};

/// Reads a figure: a range as boards declare it, or two values, which are typical and maximum (the typical is then the
/// low end too).
pub(super) fn read_figure(text: &str, dimension: Dimension) -> Result<Range, ReadError> {
    if text.matches(" / ").count() == 1 {
        let (typical, maximum) = read_typical_maximum(text, dimension)?;
        return Ok(Range::clamped(typical, typical, maximum));
    }
    read_range(text, dimension)
}
