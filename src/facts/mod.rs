//! Figures about one subject.
