//! Findings of the review itself: about the acceptances, the files, the run, and not about a circuit.

use std::collections::BTreeMap;

use super::Reviewed;
use super::accept::Entries;
use super::entries;
use super::fingerprint::digest;
use super::stale;
use crate::checks::{Finding, Level, Outcome, Verdict};
use crate::facts::Subject;
use crate::netlist::Netlist;
use crate::sheet::Sheets;
use crate::source::Location;

/// A check of the review.
#[derive(Debug, Clone, Copy)]
pub struct ReviewCheck {
    /// Its name, kebab-case; no check folder may have it.
    pub name: &'static str,
    /// The group under which a catalog lists it.
    pub group: &'static str,
    /// The question it asks.
    pub asks: &'static str,
    /// When it finds something, and what that rests on.
    pub grounds: &'static str,
    /// Whether an `[[accept]]` entry may accept what it finds.
    pub may_be_accepted: bool,
    pub(super) find: fn(&Round<'_>) -> Vec<Notice>,
}

/// Every check of the review, in the order in which they are asked: what finds fault with acceptances comes last, for
/// the findings of the others can be accepted.
pub const REVIEW_CHECKS: &[ReviewCheck] = &[stale::STALE, entries::EXPIRED, entries::UNUSED];

/// The check of the review that has a name.
#[must_use]
pub fn review_check(name: &str) -> Option<&'static ReviewCheck> {
    REVIEW_CHECKS.iter().find(|check| check.name == name)
}

/// What the checks of the review look at.
#[derive(Debug, Clone, Copy)]
pub(super) struct Round<'a> {
    /// The netlist.
    pub(super) netlist: &'a Netlist,
    /// The schematic sheets beside it.
    pub(super) sheets: &'a Sheets,
    /// The acceptances of the board file.
    pub(super) entries: &'a Entries<'a>,
    /// Whether the whole netlist was read.
    pub(super) whole: bool,
    /// Every requirement that was asked.
    pub(super) outcomes: &'a [Outcome],
    /// What was found of the design, accepted findings too, each requirement apart.
    pub(super) findings: &'a [Reviewed],
    /// Findings that others make superfluous.
    pub(super) suppressed: &'a [Reviewed],
    /// What the checks of the review ahead of this one found.
    pub(super) notices: &'a [Reviewed],
}

/// Something that a check of the review found; a warning.
#[derive(Debug)]
pub(super) struct Notice {
    /// What is wrong, in one line.
    pub(super) message: String,
    /// What to do.
    pub(super) hints: Vec<String>,
    /// What to underline.
    pub(super) place: Location,
    /// A few words about what stands there.
    pub(super) about: String,
    /// The part or net that it is about, or empty.
    pub(super) subject: String,
    /// References of the parts concerned.
    pub(super) parts: Vec<String>,
    /// Names of the nets concerned.
    pub(super) nets: Vec<String>,
    /// What it is known by besides its check; nothing that moves with lines or numbers.
    pub(super) identity: Vec<String>,
}

/// Asks every check of the review.
pub(super) fn notices(round: &Round<'_>) -> Vec<Reviewed> {
    let mut all: Vec<Reviewed> = Vec::new();
    for check in REVIEW_CHECKS {
        let mut alike: BTreeMap<String, usize> = BTreeMap::new();
        for notice in (check.find)(&Round { notices: &all, ..*round }) {
            let mut words = vec![check.name.to_owned()];
            words.extend(notice.identity.iter().cloned());
            let earlier = alike.entry(digest(&words)).or_default();
            if *earlier > 0 {
                words.push(earlier.to_string());
            }
            *earlier += 1;
            let mut found = reviewed(check, notice, digest(&words));
            if check.may_be_accepted {
                round.entries.apply(&mut found);
            }
            all.push(found);
        }
    }
    all
}

fn reviewed(check: &ReviewCheck, notice: Notice, fingerprint: String) -> Reviewed {
    let finding = Finding {
        check: check.name.to_owned(),
        verdict: Verdict::Doubtful,
        level: Level::Warning,
        subject: Subject::Board,
        member: None,
        requirement: 0,
        message: notice.message,
        hints: notice.hints,
        slack: None,
        quantities: Vec::new(),
        settle: Vec::new(),
        missing: Vec::new(),
        primary: Vec::new(),
        also: Vec::new(),
        merged: Vec::new(),
        suppresses: Vec::new(),
    };
    Reviewed {
        finding,
        subject: notice.subject,
        about: notice.about,
        fingerprint,
        accepted: None,
        reopened: None,
        variants: Vec::new(),
        merged: Vec::new(),
        parts: notice.parts,
        nets: notice.nets,
        sheet: String::new(),
        place: notice.place,
        schematic: None,
        also: Vec::new(),
    }
}
