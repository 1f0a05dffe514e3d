//! What vetting rules found, as text.

use super::look::Look;
use super::problem::problems;
use crate::checks::Level;
use crate::checks::cases::FolderReport;
use crate::source::Problem;

/// What is wrong in rules, then what their cases came to: by check.
#[must_use]
pub fn vetted(rules: &[Problem], checks: &[(String, FolderReport)], look: Look) -> String {
    let mut text = problems(rules, look);
    for (check, report) in checks {
        let wrong = report.cases.iter().filter(|case| !case.problems.is_empty()).count();
        let count = report.cases.len();
        let verdict = if report.is_clean() {
            format!("{count} cases as expected")
        } else {
            look.level(Level::Error, &format!("{wrong} of {count} cases not as expected"))
        };
        text.push_str(&format!("{}: {verdict}\n", super::inert(check)));
        text.push_str(&problems(&report.problems, look));
        for case in report.cases.iter().filter(|case| !case.problems.is_empty()) {
            text.push_str(&format!("{} {}\n", look.bold("case"), super::inert(&case.case)));
            text.push_str(&problems(&case.problems, look));
        }
    }
    super::guarded(&text)
}
