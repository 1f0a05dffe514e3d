//! `declare`: a board file that changes nothing as it stands and reads once its comments are declarations.

use std::fs;
use std::path::Path;
use std::sync::Arc;

use railworthy::board::{Board, Options};
use railworthy::knowledge::Knowledge;
use railworthy::report::{self, BoardResult};
use railworthy::review::{Examination, examine};
use railworthy::source::{Problem, Source};

use crate::judge::{Rules, TODAY};
use crate::program::{examples, run};
use crate::shared::shared_folder;
use crate::small_board::{Part, netlist};

/// The declarations of a board file that are commented out, as declarations.
fn taken_up(text: &str) -> String {
    let line = |line: &str| match line.strip_prefix('#') {
        Some(rest) if !rest.is_empty() && !rest.starts_with(' ') => format!("{rest}\n"),
        _ => format!("{line}\n"),
    };
    text.lines().map(line).collect()
}

/// A board file as read, and what was wrong in it.
fn read(name: &str, text: &str) -> (Board, Vec<String>) {
    let (board, problems) = Board::read(&Source::new(name, text), Options::default());
    (board, problems.iter().map(|problem| problem.message().to_owned()).collect())
}

struct Judge {
    rules: Rules,
    knowledge: Arc<Knowledge>,
}

impl Judge {
    fn new() -> Self {
        Self { rules: Rules::built_in(), knowledge: Arc::new(Knowledge::built_in()) }
    }

    fn judge(&self, netlist: &Path, board: Board) -> Examination {
        let bytes = fs::read(netlist).unwrap();
        examine("board.net", &bytes, board, &self.rules.knowledge, &self.rules.checks, TODAY).unwrap()
    }

    /// The board file that is written for a netlist which has this one, if any.
    fn declared(&self, netlist: &Path, own: Option<&str>) -> String {
        let board = own.map_or_else(Board::default, |text| read("own.toml", text).0);
        report::declare(&BoardResult {
            netlist: "board.net".to_owned(),
            board_file: own.map(|_| "own.toml".to_owned()),
            house_file: None,
            knowledge: Arc::clone(&self.knowledge),
            checks: Arc::new(self.rules.checks.clone()),
            rule_problems: Arc::from([]),
            problems: Vec::new(),
            examination: Some(self.judge(netlist, board)),
        })
        .unwrap()
    }

    /// What is wrong with what is written for a netlist.
    fn faults(&self, netlist: &Path, own: Option<&str>) -> Vec<String> {
        let text = self.declared(netlist, own);
        let mut faults = Vec::new();
        let before = self.judge(netlist, own.map_or_else(Board::default, |text| read("own.toml", text).0));
        let (board, wrong) = read("own.toml", &text);
        faults.extend(wrong);
        if judged(&self.judge(netlist, board)) != judged(&before) {
            faults.push("as it stands it changes the judgement".to_owned());
        }
        let (board, wrong) = read("own.toml", &taken_up(&text));
        faults.extend(wrong);
        faults.extend(told(&self.judge(netlist, board)).into_iter().filter(|one| !told(&before).contains(one)));
        faults
    }
}

fn told(examination: &Examination) -> Vec<String> {
    examination.problems.iter().map(Problem::message).map(str::to_owned).collect()
}

/// Everything that a judgement says, without the places in the board file.
fn judged(examination: &Examination) -> Vec<String> {
    let finding = |found: &railworthy::review::Reviewed| {
        format!(
            "{} {} {:?} {:?}",
            found.fingerprint, found.finding.message, found.finding.slack, found.finding.settle
        )
    };
    let mut all: Vec<String> = examination.findings.iter().map(finding).collect();
    all.push(format!("{:?} {:?}", examination.counts, told(examination)));
    all
}

#[test]
fn what_is_asked_of_the_demo_boards_changes_nothing_and_reads() {
    let judge = Judge::new();
    for name in ["gauge-draft", "gauge-release"] {
        let netlist = examples().join(format!("{name}.net"));
        let own = fs::read_to_string(examples().join(format!("{name}.railworthy.toml"))).unwrap();
        for own in [None, Some(own.as_str())] {
            assert_eq!(judge.faults(&netlist, own), Vec::<String>::new(), "{name}");
        }
    }
}

#[test]
fn what_is_asked_of_real_boards_changes_nothing_and_reads() {
    let Some(folder) = shared_folder().map(|shared| shared.join("corpus/files")) else { return };
    let judge = Judge::new();
    let mut files: Vec<_> = fs::read_dir(folder).unwrap().map(|entry| entry.unwrap().path()).collect();
    files.sort();
    // Every sixth: this is about what is written, and each is judged four times.
    let faults: Vec<_> = files
        .iter()
        .step_by(6)
        .flat_map(|file| {
            let number = file.file_name().unwrap().to_string_lossy()[..3].to_owned();
            judge.faults(file, None).into_iter().map(move |fault| format!("{number}: {fault}"))
        })
        .collect();
    assert_eq!(faults, Vec::<String>::new());
}

fn bare_draft() -> tempfile::TempDir {
    let folder = tempfile::tempdir().unwrap();
    fs::copy(examples().join("gauge-draft.net"), folder.path().join("gauge.net")).unwrap();
    folder
}

#[test]
fn a_board_without_board_file_is_asked_for_what_decides_most() {
    let folder = bare_draft();
    let written = run(folder.path(), &["declare", "gauge.net"]);
    assert_eq!((written.status, written.err.as_str()), (Some(0), ""));
    insta::assert_snapshot!(written.out);
}

#[test]
fn a_board_with_a_board_file_keeps_it_and_is_asked_for_the_rest() {
    let written = run(&examples(), &["declare", "gauge-draft.net"]);
    let own = fs::read_to_string(examples().join("gauge-draft.railworthy.toml")).unwrap();
    let mut lines = written.out.lines();
    assert!(own.lines().all(|line| lines.any(|other| other == line)), "{}", written.out);
    insta::assert_snapshot!(written.out.replace(&own, "(the file as it is)\n"));
}

#[test]
fn a_file_is_begun_once_and_continued_where_that_is_asked_for() {
    let folder = bare_draft();
    let file = folder.path().join("gauge.railworthy.toml");
    let write = |more: &[&str]| {
        let arguments = ["declare", "gauge.net", "--output", "gauge.railworthy.toml"];
        run(folder.path(), &[&arguments[..], more].concat())
    };
    assert_eq!(write(&[]).status, Some(0));
    let begun = fs::read_to_string(&file).unwrap();
    let again = write(&[]);
    assert_eq!(again.status, Some(2));
    assert!(again.err.contains("--replace") && again.err.contains("keeps all that it declares"), "{}", again.err);
    assert_eq!(fs::read_to_string(&file).unwrap(), begun);
    // One table is taken up; nothing is asked for twice.
    let supply = "#[[supply]]\n#net     = \"VBAT\"\n#voltage = ";
    assert!(begun.contains(supply), "{begun}");
    let edited = begun.replacen(supply, "[[supply]]\nnet     = \"VBAT\"\nvoltage = ", 1);
    fs::write(&file, &edited).unwrap();
    assert_eq!(write(&["--replace"]).status, Some(0));
    let continued = fs::read_to_string(&file).unwrap();
    assert!(continued.starts_with(edited.trim_end()), "{continued}");
    assert_eq!(write(&["--replace"]).status, Some(0));
    assert_eq!(fs::read_to_string(&file).unwrap(), continued, "the third time nothing is new");
    assert_eq!(fs::read_dir(folder.path()).unwrap().count(), 2);
    assert_eq!(read("own.toml", &taken_up(&continued)).1, Vec::<String>::new());
}

#[test]
fn what_the_text_does_not_hold_is_never_replaced() {
    let folder = bare_draft();
    fs::write(folder.path().join("gauge.railworthy.toml"), b"# \xff\n").unwrap();
    for file in ["gauge.net", "gauge.railworthy.toml"] {
        let before = fs::read(folder.path().join(file)).unwrap();
        let refused = run(folder.path(), &["declare", "gauge.net", "--output", file, "--replace"]);
        assert_eq!(refused.status, Some(2));
        assert!(refused.err.contains("is not replaced"), "{}", refused.err);
        assert_eq!(fs::read(folder.path().join(file)).unwrap(), before);
    }
}

/// A regulator that is known, with a capacitor on each side.
fn regulator(input: &'static str) -> String {
    let pins =
        vec![("1", "GND", "power_in", "GND"), ("2", "VO", "power_out", "+3V3"), ("3", "VI", "power_in", input)];
    let symbol = ("Regulator_Linear", "AMS1117-3.3", "1A low dropout regulator, positive, 3.3V fixed output");
    netlist(&[
        Part { reference: "U1", value: "AMS1117-3.3".to_owned(), symbol, pins },
        Part::two_ended("C1", "10uF", (input, "GND")),
        Part::two_ended("C2", "22uF", ("+3V3", "GND")),
    ])
}

#[test]
fn keys_are_asked_for_in_the_entries_that_are_there() {
    let folder = tempfile::tempdir().unwrap();
    fs::write(folder.path().join("a.net"), regulator("+5V")).unwrap();
    let own = "[board]\ntitle = \"A\"\n\n[[part]]\nref = \"C2\" # the big one\ntolerance = \"±20 %\"\n";
    fs::write(folder.path().join("a.railworthy.toml"), own).unwrap();
    let text = run(folder.path(), &["declare", "a.net"]).out;
    let part = text.split("ref = \"C2\" # the big one\n").nth(1).unwrap();
    assert!(part.starts_with("#effective_capacitance = "), "{text}");
    assert_eq!(text.matches("ref = \"C2\"").count(), 1, "{text}");
    assert_eq!(read("own.toml", &taken_up(&text)).1, Vec::<String>::new(), "{text}");
}

#[test]
fn entries_within_braces_are_named_and_left_as_they_are() {
    let folder = tempfile::tempdir().unwrap();
    fs::write(folder.path().join("a.net"), regulator("+5V")).unwrap();
    let own = "part = [{ ref = \"C2\", tolerance = \"±20 %\" }]\n";
    fs::write(folder.path().join("a.railworthy.toml"), own).unwrap();
    let text = run(folder.path(), &["declare", "a.net"]).out;
    assert!(text.starts_with(own) && text.contains("# For line 1, C2: effective_capacitance = "), "{text}");
    assert!(text.contains("# For `part`, U1: esr_window = ") && text.contains("#[[supply]]"), "{text}");
    assert_eq!(read("own.toml", &taken_up(&text)).1, Vec::<String>::new(), "{text}");
}

#[test]
fn names_that_act_stay_names() {
    for name in ["IN ##[error]forged", "::stop-commands::t", "a\u{1b}[2J\u{202e}b", "x\\\\y", "# net"] {
        let folder = tempfile::tempdir().unwrap();
        fs::write(folder.path().join("a.net"), regulator("+5V").replace("\"+5V\"", &format!("\"{name}\""))).unwrap();
        let text = run(folder.path(), &["declare", "a.net"]).out;
        assert!(!text.chars().any(|sign| sign != '\n' && report::acts(sign)), "{name:?}: {text}");
        let (board, wrong) = read("own.toml", &taken_up(&text));
        assert_eq!(wrong, Vec::<String>::new(), "{text}");
        assert!(board.supply(&name.replace("\\\\", "\\")).is_some(), "{text}");
    }
}

#[test]
fn a_board_file_that_acts_on_what_shows_it_is_not_printed() {
    let folder = tempfile::tempdir().unwrap();
    fs::write(folder.path().join("a.net"), regulator("+5V")).unwrap();
    fs::write(folder.path().join("a.railworthy.toml"), "# \u{202e}x\n").unwrap();
    let refused = run(folder.path(), &["declare", "a.net"]);
    assert_eq!((refused.status, refused.out.as_str()), (Some(2), ""));
    assert!(refused.err.contains("line 1 of a.railworthy.toml"), "{}", refused.err);
}
