//! Ranges with units and evidence.
