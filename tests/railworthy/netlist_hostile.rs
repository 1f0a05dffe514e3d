//! Inputs meant to do harm.
