//! The demo boards: they ask many checks, the draft breaks many of them, the release none.

use std::collections::BTreeSet;

use railworthy::checks::Verdict;
use railworthy::review::{Examination, review_check};

use crate::judge::Rules;
use crate::program::examples;

/// Checks that the release must be asked.
const ASKED: usize = 20;
/// The pass transistor of the regulator that is built up from single parts.
const BUILT_UP: &str = "Q2";
/// Checks that must find something on it in the draft, and hold in the release.
const OF_BUILT_UP: [&str; 3] = ["esr-window", "phase-margin", "reference-startup"];
/// Checks that must find something on the draft.
const BROKEN: usize = 12;

fn judged(board: &str) -> Examination {
    let found = Rules::built_in().judge(&examples().join(board));
    assert!(found.problems.is_empty(), "{:?}", found.problems);
    found
}

#[test]
fn the_release_is_asked_many_checks_and_holds_them_all_without_acceptances() {
    let release = judged("gauge-release.net");
    let asked: BTreeSet<&str> = release.told.iter().map(|told| told.check.as_str()).collect();
    assert!(asked.len() >= ASKED, "{asked:?}");
    let found: Vec<&str> = release.findings.iter().map(|found| found.finding.message.as_str()).collect();
    assert!(found.is_empty(), "{found:?}");
    assert_eq!((release.accepted, release.board.accepts.len()), (0, 0));
    assert_eq!(release.counts.holds, release.counts.requirements);
}

#[test]
fn the_draft_breaks_many_of_them() {
    let draft = judged("gauge-draft.net");
    let broken: BTreeSet<&str> = draft.findings.iter().map(|found| found.finding.check.as_str()).collect();
    let broken: BTreeSet<&str> = broken.into_iter().filter(|check| review_check(check).is_none()).collect();
    assert!(broken.len() >= BROKEN, "{broken:?}");
    let release = judged("gauge-release.net");
    for check in broken {
        assert!(release.told.iter().any(|told| told.check == check), "{check} is not asked of the release");
    }
}

#[test]
fn the_built_up_regulator_rings_and_may_not_start_in_the_draft_and_does_both_well_in_the_release() {
    let draft = judged("gauge-draft.net");
    let release = judged("gauge-release.net");
    for check in OF_BUILT_UP {
        let verdict = |board: &Examination| {
            let told = board.told.iter().find(|told| told.check == check && told.subject == BUILT_UP);
            told.map(|told| told.verdict)
        };
        assert_eq!(verdict(&draft), Some(Verdict::Doubtful), "{check} in the draft");
        assert_eq!(verdict(&release), Some(Verdict::Holds), "{check} in the release");
    }
}
