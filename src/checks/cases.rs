//! The cases of a check: boards in its folder that must and must not trip it.
//!
//! `bad-NAME.net` trips the check, `good-NAME.net` is a near miss on which it stays silent. The board file of the same
//! stem says in `[expect]` what each subject comes to: `headroom = { U2 = "fails" }`. What it does not name is silent.

use std::collections::BTreeMap;

use super::finding::Outcome;
use super::language::Figures;
use super::verdict::Verdict;
use crate::source::toml::{Document, Spanned, nearest};
use crate::source::{Problem, Source, Span};

/// The end of a board file's name.
const BOARD_FILE: &str = ".railworthy.toml";

/// A board of a check's folder.
#[derive(Debug, Clone)]
pub struct Case {
    /// The check whose folder holds it.
    pub check: String,
    /// The name of the board: `bad-low-input`.
    pub name: String,
    /// Whether it must trip the check.
    pub bad: bool,
    /// The netlist.
    pub netlist: Source,
    /// The board file, where there is one.
    pub board: Option<Source>,
}

/// What a requirement came to on the board of a case.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Told {
    /// The check.
    pub check: String,
    /// The subject, as findings name it.
    pub subject: String,
    /// What it came to; what another finding makes superfluous holds its peace.
    pub verdict: Verdict,
}

/// A case that was run.
#[derive(Debug, Clone)]
pub struct CaseReport {
    /// The check.
    pub check: String,
    /// The board.
    pub case: String,
    /// What is not as expected; empty where all is.
    pub problems: Vec<Problem>,
}

/// A check's folder with its cases, run.
#[derive(Debug, Clone, Default)]
pub struct FolderReport {
    /// What the folder lacks.
    pub problems: Vec<Problem>,
    /// Its cases, by name.
    pub cases: Vec<CaseReport>,
}

impl FolderReport {
    /// Whether nothing is wrong.
    #[must_use]
    pub fn is_clean(&self) -> bool {
        self.problems.is_empty() && self.cases.iter().all(|case| case.problems.is_empty())
    }
}

impl Told {
    /// What the outcomes of a run come to, each under the name of its subject.
    #[must_use]
    pub fn of(outcomes: &[Outcome], figures: &dyn Figures) -> Vec<Self> {
        let told = |outcome: &Outcome| Self {
            check: outcome.check.clone(),
            subject: figures.label(outcome.subject),
            verdict: if outcome.suppressed_by.is_some() { Verdict::Holds } else { outcome.verdict },
        };
        outcomes.iter().map(told).collect()
    }
}

/// Runs the cases of a check's folder: `judge` reads a board and judges it by every check.
pub fn run(
    check: &str,
    files: &BTreeMap<String, String>,
    mut judge: impl FnMut(&Case) -> Result<Vec<Told>, Vec<Problem>>,
) -> FolderReport {
    let (cases, problems) = find(check, files);
    let mut report = FolderReport { problems, cases: Vec::new() };
    for case in &cases {
        let problems = match judge(case) {
            Ok(told) => compare(case, &told),
            Err(problems) => problems,
        };
        report.cases.push(CaseReport { check: check.to_owned(), case: case.name.clone(), problems });
    }
    report
}

/// The cases of a check's folder, by name, and what the folder lacks.
#[must_use]
pub fn find(check: &str, files: &BTreeMap<String, String>) -> (Vec<Case>, Vec<Problem>) {
    let (mut cases, mut problems) = (Vec::new(), Vec::new());
    let source = |file: &str, text: &str| Source::new(format!("checks/{check}/{file}"), text);
    for (file, text) in files {
        if let Some(stem) = file.strip_suffix(BOARD_FILE)
            && !files.contains_key(&format!("{stem}.net"))
        {
            let problem = Problem::error(format!("the board file `{file}` has no netlist beside it"));
            problems.push(problem.help(format!("add `{stem}.net`, or remove the board file")));
        }
        let Some(name) = file.strip_suffix(".net") else { continue };
        if !name.starts_with("bad-") && !name.starts_with("good-") {
            let problem = Problem::error(format!("the netlist `{file}` is neither a bad case nor a good one"));
            problems.push(problem.help(format!("name it `bad-{file}` or `good-{file}`")));
            continue;
        }
        let board_file = format!("{name}{BOARD_FILE}");
        let board = files.get(&board_file).map(|text| source(&board_file, text));
        let (check, name, bad) = (check.to_owned(), name.to_owned(), name.starts_with("bad-"));
        cases.push(Case { check, name, bad, netlist: source(file, text), board });
    }
    for (kind, bad, what) in [("bad", true, "trips"), ("good", false, "does not trip")] {
        if !cases.iter().any(|case| case.bad == bad) {
            let problem = Problem::error(format!("the check `{check}` has no {kind} case"));
            problems
                .push(problem.help(format!("add `{kind}-NAME.net`, a board that {what} it, with its board file")));
        }
    }
    (cases, problems)
}

/// An expected verdict with its place.
struct Expected {
    check: String,
    subject: String,
    verdict: Spanned<Verdict>,
}

/// Sets what a run told against what the case expects.
#[must_use]
pub fn compare(case: &Case, told: &[Told]) -> Vec<Problem> {
    let (expected, mut problems) = match &case.board {
        Some(board) => expectations(board),
        None => (Vec::new(), Vec::new()),
    };
    let own = |one: &&Expected| one.check == case.check;
    if problems.is_empty() && case.bad && !expected.iter().any(|one| own(&one) && one.verdict.value != Verdict::Holds)
    {
        let problem = Problem::error(format!("the bad case `{}` expects no finding of `{}`", case.name, case.check));
        problems.push(
            problem.help(format!("add to its board file: [expect] with {} = {{ U1 = \"fails\" }}", case.check)),
        );
    }
    let Some(board) = &case.board else {
        problems.extend(unexpected(case, &expected, told));
        return problems;
    };
    for one in &expected {
        let at = |problem: Problem| problem.at(board, one.verdict.span, "expected here");
        if !case.bad && one.check == case.check && one.verdict.value <= Verdict::Doubtful {
            let message =
                format!("the good case `{}` expects `{}` to be {}", case.name, one.check, word(one.verdict.value));
            problems.push(at(Problem::error(message)).help("make it a bad case"));
        }
        let found = told.iter().find(|told| told.check == one.check && told.subject == one.subject);
        match found {
            Some(found) if found.verdict == one.verdict.value => {}
            Some(found) => {
                let message = format!("`{}` of {} is {}", one.check, one.subject, word(found.verdict));
                problems.push(at(Problem::error(message)).help(format!("expected: {}", one.verdict.value)));
            }
            None => {
                let message = format!("`{}` is not asked of {}", one.check, one.subject);
                let subjects = told.iter().map(|told| told.subject.as_str());
                let help = match nearest(&one.subject, subjects).filter(|near| *near != one.subject) {
                    Some(near) => format!("did you mean `{near}`?"),
                    None => format!("expected: {}", one.verdict.value),
                };
                problems.push(at(Problem::error(message)).help(help));
            }
        }
    }
    problems.extend(unexpected(case, &expected, told));
    problems
}

/// Findings of the case's own check that are not expected.
fn unexpected(case: &Case, expected: &[Expected], told: &[Told]) -> Vec<Problem> {
    let known = |told: &Told| expected.iter().any(|one| one.check == told.check && one.subject == told.subject);
    told.iter()
        .filter(|told| told.check == case.check && told.verdict != Verdict::Holds && !known(told))
        .map(|told| {
            let message =
                format!("`{}` of {} is {} in the case `{}`", told.check, told.subject, word(told.verdict), case.name);
            Problem::error(message).help("expect it in the board file's `[expect]`, or change the board or the check")
        })
        .collect()
}

/// The verdict as it follows `is`.
fn word(verdict: Verdict) -> &'static str {
    match verdict {
        Verdict::Fails => "failing",
        Verdict::Holds => "holding",
        other => other.name(),
    }
}

/// The `[expect]` table of a board file.
fn expectations(board: &Source) -> (Vec<Expected>, Vec<Problem>) {
    let document = match Document::parse(board) {
        Ok(document) => document,
        Err(problem) => return (Vec::new(), vec![*problem]),
    };
    let mut expected = Vec::new();
    let checks = document.root().table("expect").map(|mut table| table.entries()).unwrap_or_default();
    for check in checks {
        let subjects = check.table().map(|mut table| table.entries()).unwrap_or_default();
        for subject in subjects {
            let Some(text) = subject.text() else { continue };
            let Some(verdict) = Verdict::of_name(text.as_str()) else {
                let names = Verdict::ALL.map(Verdict::name).join(", ");
                text.refuse(
                    format!("`{}` is no verdict", text.as_str()),
                    "unknown verdict",
                    format!("verdicts: {names}"),
                );
                continue;
            };
            let span: Span = text.span();
            let (check, subject) = (check.key().to_owned(), subject.key().to_owned());
            expected.push(Expected { check, subject, verdict: Spanned { value: verdict, span } });
        }
    }
    (expected, document.into_problems())
}

#[cfg(test)]
mod tests {
    use super::*;

    fn files(names: &[(&str, &str)]) -> BTreeMap<String, String> {
        names.iter().map(|(name, text)| ((*name).to_owned(), (*text).to_owned())).collect()
    }

    fn told(subject: &str, verdict: Verdict) -> Told {
        Told { check: "headroom".to_owned(), subject: subject.to_owned(), verdict }
    }

    /// Every problem of a run, with the case.
    fn problems(files: &BTreeMap<String, String>, verdicts: &[(&str, Verdict)]) -> Vec<String> {
        let report = run("headroom", files, |_| Ok(verdicts.iter().map(|(name, v)| told(name, *v)).collect()));
        let cases = report.cases.iter().flat_map(|case| &case.problems);
        report.problems.iter().chain(cases).map(|problem| problem.message().to_owned()).collect()
    }

    #[test]
    fn a_folder_needs_a_bad_and_a_good_case() {
        let bare = files(&[("check.toml", ""), ("odd.net", ""), ("bad-x.railworthy.toml", "")]);
        assert_eq!(
            problems(&bare, &[]),
            [
                "the board file `bad-x.railworthy.toml` has no netlist beside it",
                "the netlist `odd.net` is neither a bad case nor a good one",
                "the check `headroom` has no bad case",
                "the check `headroom` has no good case",
            ]
        );
    }

    #[test]
    fn a_case_that_comes_out_as_expected_is_clean() {
        let expect = "[expect]\nheadroom = { U1 = \"fails\" }\n";
        let both = files(&[("bad-a.net", ""), ("bad-a.railworthy.toml", expect), ("good-b.net", "")]);
        let report = run("headroom", &both, |case| {
            Ok(vec![told("U1", if case.bad { Verdict::Fails } else { Verdict::Holds }), told("U2", Verdict::Holds)])
        });
        assert!(report.is_clean(), "{report:?}");
        assert_eq!(report.cases.len(), 2);
    }

    #[test]
    fn every_difference_is_told() {
        let bad = "[expect]\nheadroom = { U1 = \"fails\", U9 = \"holds\", U3 = \"broken\" }\n";
        let good = "[expect]\nheadroom = { U1 = \"doubtful\" }\n";
        let all = files(&[
            ("bad-a.net", ""),
            ("bad-a.railworthy.toml", bad),
            ("bad-b.net", ""),
            ("good-c.net", ""),
            ("good-c.railworthy.toml", good),
        ]);
        assert_eq!(
            problems(&all, &[("U1", Verdict::Tight)]),
            [
                "`broken` is no verdict",
                "`headroom` of U1 is tight",
                "`headroom` is not asked of U9",
                "the bad case `bad-b` expects no finding of `headroom`",
                "`headroom` of U1 is tight in the case `bad-b`",
                "the good case `good-c` expects `headroom` to be doubtful",
                "`headroom` of U1 is tight",
            ]
        );
    }
}
