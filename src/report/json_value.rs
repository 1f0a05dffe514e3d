//! Figures and evidence as JSON.

use serde::Serialize;

use crate::quantity::{Dimension, Evidence, Quantity};

/// A figure's range; null where it is not known or has no bound.
#[derive(Debug, Serialize)]
pub(super) struct Bounds {
    pub(super) low: Option<f64>,
    pub(super) nominal: Option<f64>,
    pub(super) high: Option<f64>,
    pub(super) unit: String,
    #[serde(skip_serializing_if = "Option::is_none")]
    pub(super) grade: Option<&'static str>,
}

impl Bounds {
    /// The range over facts and guesses.
    pub(super) fn of(figure: &Quantity) -> Self {
        let worst = figure.worst();
        Self {
            low: finite(worst.low()),
            nominal: figure.nominal().and_then(finite),
            high: finite(worst.high()),
            unit: unit(figure.dimension()),
            grade: None,
        }
    }

    /// The range with its weakest grade; `None` where a figure behind it is missing.
    pub(super) fn graded(figure: &Quantity) -> Option<Self> {
        let grade = figure.grade().map(crate::quantity::Grade::name);
        (!figure.is_missing()).then(|| Self { grade, ..Self::of(figure) })
    }
}

/// One fact or guess behind a figure.
#[derive(Debug, Serialize)]
pub(super) struct EvidenceEntry {
    grade: &'static str,
    source: String,
    what: String,
}

impl EvidenceEntry {
    pub(super) fn of(evidence: &Evidence) -> Self {
        Self { grade: evidence.grade.name(), source: evidence.source.clone(), what: evidence.what.clone() }
    }
}

/// Everything behind a figure, in a stable order.
pub(super) fn evidence(figure: &Quantity) -> Vec<EvidenceEntry> {
    figure.evidence().map(EvidenceEntry::of).collect()
}

/// A number that JSON can hold, to twelve digits: what is beyond is noise of the computation. A bound that stands for
/// none at all is none here.
pub(super) fn finite(value: f64) -> Option<f64> {
    // A bound that was clipped to the largest number stands for none.
    let bounded = Some(value).filter(|value| value.abs() < 1e300)?;
    format!("{bounded:.11e}").parse().ok()
}

/// The unit's symbol; empty for a plain number.
pub(super) fn unit(dimension: Dimension) -> String {
    dimension.symbol().map_or_else(|| dimension.to_string(), str::to_owned)
}
