//! Findings that someone has looked at and accepted in the board file.

use super::Reviewed;
use crate::board::{Accept, Board};
use crate::checks::Finding;

/// The acceptance of a finding.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Accepted {
    /// Why, as the board file says.
    pub reason: String,
    /// The last day, as written.
    pub until: Option<String>,
}

/// How far a slack may worsen, as a part of what it was, before that counts: rounding of what was written down.
const ROUNDING: f64 = 1e-3;

/// The entry of the board file that accepts a finding on a day (`YYYY-MM-DD`), if one does: of its check, about it,
/// not run out, and the finding no worse than it was.
pub(super) fn accepted(board: &Board, reviewed: &Reviewed, today: &str) -> Option<Accepted> {
    board
        .accepts
        .iter()
        .find(|entry| {
            entry.check.value == reviewed.finding.check
                && is_about(entry, reviewed)
                && entry.until.as_ref().is_none_or(|until| until.value.to_string().as_str() >= today)
                && is_no_worse(entry, &reviewed.finding)
        })
        .map(|entry| Accepted {
            reason: entry.reason.value.clone(),
            until: entry.until.as_ref().map(|until| until.value.to_string()),
        })
}

fn is_about(entry: &Accept, reviewed: &Reviewed) -> bool {
    if let Some(wanted) = &entry.finding {
        return wanted.value == reviewed.fingerprint;
    }
    let part = entry.part.as_ref().map(|part| reviewed.parts.contains(&part.value));
    let net = entry.net.as_ref().map(|net| reviewed.nets.contains(&net.value));
    (part.is_some() || net.is_some()) && part.unwrap_or(true) && net.unwrap_or(true)
}

fn is_no_worse(entry: &Accept, finding: &Finding) -> bool {
    match (&entry.slack, finding.slack) {
        (Some(was), Some((now, _))) => now >= was.value.value - was.value.value.abs() * ROUNDING,
        _ => true,
    }
}
