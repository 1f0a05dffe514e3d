//! Judging one board with everything that is built in.

use std::path::Path;

use railworthy::board::Board;
use railworthy::checks::{Checks, DefinedNames};
use railworthy::knowledge::Knowledge;
use railworthy::review::{Examination, examine};

/// The day that tests live on.
pub(crate) const TODAY: &str = "2026-06-01";

/// Everything that is built in, loaded once for many boards.
pub(crate) struct Rules {
    pub(crate) knowledge: Knowledge,
    pub(crate) checks: Checks,
}

impl Rules {
    pub(crate) fn built_in() -> Self {
        let knowledge = Knowledge::built_in();
        let (checks, problems) = Checks::load(&knowledge.checks, &DefinedNames);
        assert!(problems.is_empty(), "{problems:?}");
        Self { knowledge, checks }
    }

    /// Judges a netlist file with the board file beside it.
    pub(crate) fn judge(&self, netlist: &Path) -> Examination {
        let (board, problems) = Board::open(Some(netlist), None, false);
        assert!(problems.is_empty(), "{}: {problems:?}", netlist.display());
        let bytes = std::fs::read(netlist).unwrap();
        examine(&netlist.display().to_string(), &bytes, board, &self.knowledge, &self.checks, TODAY)
            .unwrap_or_else(|problems| panic!("{}: {problems:?}", netlist.display()))
    }
}

/// The findings at warning or error, one line each.
pub(crate) fn loud(examination: &Examination) -> Vec<String> {
    use railworthy::checks::Level;
    examination
        .findings
        .iter()
        .filter(|reviewed| reviewed.finding.level != Level::Note)
        .map(|reviewed| {
            let finding = &reviewed.finding;
            format!("{} {} {}: {}", finding.level, finding.check, reviewed.parts.join(" "), finding.message)
        })
        .collect()
}
