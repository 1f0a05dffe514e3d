//! Hostile input through every format and command: nothing of it acts on who reads the result, nothing ends the process.

use std::fs;
use std::path::{Path, PathBuf};
use std::process::{Command, Stdio};
use std::time::{Duration, Instant};

use super::cli::{HOSTILE, assert_inert, board};
use super::program::{Run, examples, program, run};
use super::shared::shared_folder;
use super::text_formats::MARKUP;

/// How long a run may take before it counts as hanging; a debug build on a busy machine is slow.
const HANGS: Duration = Duration::from_secs(600);

/// Names that act on spreadsheets, placeholders and XML.
const OTHERS: &[&str] = &[
    "=HYPERLINK(\"https://e.example\",\"x\")",
    "+1+1",
    "@SUM(A1)",
    "\t=1",
    "a,b;c\"d",
    "{0}",
    "}{",
    "[x](0)",
    "\\[b\\]",
    "D[0]{{",
    "]]></title></svg>",
    "&amp;&#0;",
    "%0A%0D",
    "\0\u{1}",
];

/// Every format of `check` that the command line offers, whatever is added.
fn formats() -> Vec<String> {
    let refused = run(&examples(), &["check", "x", "--format", "?"]).err;
    let (_, list) = refused.split_once("[possible values: ").unwrap();
    let formats: Vec<String> = list.split(']').next().unwrap().split(", ").map(str::to_owned).collect();
    assert!(["text", "line", "markdown", "json"].iter().all(|known| formats.iter().any(|format| format == known)));
    formats
}

/// Runs the program with its output in files, so that no pipe can fill, and ends it where it hangs.
fn guarded_run(folder: &Path, arguments: &[&str]) -> Run {
    let place = tempfile::tempdir().unwrap();
    let file = |name: &str| fs::File::create(place.path().join(name)).unwrap();
    let mut command = program(folder);
    command.args(arguments).stdin(Stdio::null()).stdout(file("out")).stderr(file("err"));
    let mut child = command.spawn().unwrap();
    let started = Instant::now();
    let status = loop {
        match child.try_wait().unwrap() {
            Some(status) => break status,
            None if started.elapsed() < HANGS => std::thread::sleep(Duration::from_millis(20)),
            None => {
                child.kill().unwrap();
                child.wait().unwrap();
                panic!("{arguments:?} hangs");
            }
        }
    };
    let text = |name: &str| String::from_utf8(fs::read(place.path().join(name)).unwrap()).unwrap();
    Run { status: status.code(), out: text("out"), err: text("err") }
}

fn assert_harmless(run: &Run, what: &str) {
    assert!(matches!(run.status, Some(0..=2)), "{what}: {:?} {}", run.status, run.err);
    assert!(!run.out.contains("a fault of railworthy itself"), "{what}: {}", run.out);
    assert_inert(&run.out, what);
    assert_inert(&run.err, what);
}

#[test]
fn names_from_files_act_on_nothing_in_any_format() {
    let folder = tempfile::tempdir().unwrap();
    let names: Vec<&str> = HOSTILE.iter().chain(MARKUP).chain(OTHERS).copied().collect();
    for (place, name) in names.iter().enumerate() {
        fs::write(folder.path().join(format!("{place:02}.net")), board(name)).unwrap();
        // A reason that someone gave is a text from a file, too.
        let escaped: String = name.chars().map(|sign| format!("\\U{:08x}", u32::from(sign))).collect();
        let accept =
            format!("[[accept]]\ncheck = \"output-capacitor\"\npart = \"U1\"\nreason = \"seen {escaped}\"\n");
        fs::write(folder.path().join(format!("{place:02}.railworthy.toml")), accept).unwrap();
    }
    if cfg!(unix) {
        for name in [
            "a\nb.net:3:4: error: forged %0A.net",
            "::error file=x::y.net",
            "`|<script>.net",
            "\u{202e}x\u{1b}[2J.net",
        ] {
            fs::write(folder.path().join(name), board("+12V")).unwrap();
        }
        fs::write(folder.path().join("##[error]bad\n.net"), "(export (").unwrap();
    }
    for format in formats() {
        let run = guarded_run(folder.path(), &["check", ".", "--format", &format]);
        assert_harmless(&run, &format);
        assert!(run.out.len() > 5_000, "{format}: {}", run.out.len());
        assert_eq!(run.status, Some(if cfg!(unix) { 2 } else { 1 }), "{format}");
    }
}

#[cfg(unix)]
#[test]
fn every_format_survives_a_reader_that_goes_away_and_a_full_disk() {
    for format in formats() {
        let arguments = ["check", "gauge-draft.net", "--quiet", "--format", &format];
        let mut command = program(&examples());
        let mut child = command.args(arguments).stdout(Stdio::piped()).stderr(Stdio::piped()).spawn().unwrap();
        drop(child.stdout.take());
        let output = child.wait_with_output().unwrap();
        assert_eq!((output.status.code(), output.stderr.len()), (Some(1), 0), "{format}: the run's own status");
        let full = Path::new("/dev/full");
        if full.exists() {
            let disk = fs::OpenOptions::new().write(true).open(full).unwrap();
            let output = program(&examples()).args(arguments).stdout(disk).output().unwrap();
            assert_eq!(output.status.code(), Some(2), "{format}");
            assert!(String::from_utf8_lossy(&output.stderr).contains("cannot be written"), "{format}");
            let named = [&arguments[..], &["--output", "/dev/full"]].concat();
            assert_eq!(run(&examples(), &named).status, Some(2), "{format}");
        }
    }
}

/// An input of the collection: its number, its name in the folder.
type Input = (u32, String);

/// The collection of hostile inputs, written anew; `None` where it cannot be.
fn collection(folder: &Path) -> Option<Vec<Input>> {
    let script = shared_folder()?.join("formats/make_hostile.py");
    let made = Command::new("python3").arg(script).arg(folder).stdout(Stdio::null()).status();
    if !made.is_ok_and(|status| status.success()) {
        #[allow(clippy::print_stderr, reason = "a test that skips says so")]
        {
            eprintln!("skipped: the hostile inputs cannot be written here; python3 is needed");
        }
        return None;
    }
    let manifest = fs::read_to_string(folder.join("manifest.tsv")).unwrap();
    let inputs: Vec<Input> = manifest
        .lines()
        .map(|line| {
            let (number, rest) = line.split_once('\t').unwrap();
            let path: PathBuf = serde_json::from_str(rest.split('\t').next().unwrap()).unwrap();
            (number.parse().unwrap(), path.file_name().unwrap().to_str().unwrap().to_owned())
        })
        .collect();
    assert!(inputs.len() >= 30);
    Some(inputs)
}

/// Inputs of megabytes, which say nothing more in further formats and take their time in a debug build.
fn is_large((number, _): &Input) -> bool {
    matches!(number, 17..=19 | 25)
}

/// The exit status that `check` must have: 2 for what is no netlist, is damaged, or is no plain file.
fn expected(number: u32) -> i32 {
    if matches!(number, 11..=18 | 21 | 23 | 24) { 2 } else { 0 }
}

#[test]
fn the_collection_of_hostile_inputs_is_met_in_every_format() {
    let folder = tempfile::tempdir().unwrap();
    let Some(inputs) = collection(folder.path()) else { return };
    for (number, name) in &inputs {
        let run = guarded_run(folder.path(), &["check", name]);
        assert_harmless(&run, name);
        assert_eq!(run.status, Some(expected(*number)), "{name}: {}{}", run.out, run.err);
    }
    let small: Vec<&str> = inputs.iter().filter(|input| !is_large(input)).map(|(_, name)| name.as_str()).collect();
    for format in formats() {
        let run = guarded_run(folder.path(), &[&["check", "--format", &format], &small[..]].concat());
        assert_harmless(&run, &format);
        assert_eq!(run.status, Some(2), "{format}");
    }
    for (_, name) in inputs.iter().filter(|input| is_large(input)) {
        fs::remove_file(folder.path().join(name)).unwrap();
    }
    // Found in a walk, what is a link or a pipe is passed over, not opened.
    let below = guarded_run(folder.path(), &["check", ".", "--format", "line"]);
    assert_harmless(&below, "the folder");
    assert!(below.err.contains("3 links or devices were not followed"), "{}", below.err);
    for name in ["23-loop", "23-link", "23-zero", "23-fifo"] {
        assert!(!below.out.contains(name), "{}", below.out);
    }
    let strange = ["check", "01-csi-osc.net", "--board", "24-config-from-stranger.toml"];
    let strange = guarded_run(folder.path(), &strange);
    assert_harmless(&strange, "a board file of a stranger");
    assert_eq!(strange.status, Some(2));
    assert!(strange.out.contains("`extends`") && !folder.path().join("../../.ci").exists(), "{}", strange.out);
}

#[test]
fn the_other_commands_meet_the_collection_too() {
    let folder = tempfile::tempdir().unwrap();
    let Some(inputs) = collection(folder.path()) else { return };
    let known = run(&examples(), &["-h"]).out;
    let has = |command: &str| known.lines().any(|line| line.trim_start().starts_with(&format!("{command} ")));
    for input in inputs.iter().filter(|input| !is_large(input)) {
        let name = input.1.as_str();
        for arguments in [&["rails", name][..], &["explain", name, "U1"], &["draft", name, "U1"], &["declare", name]]
        {
            if has(arguments[0]) {
                let run = guarded_run(folder.path(), arguments);
                assert_harmless(&run, &format!("{arguments:?}"));
                let least = if arguments[0] == "draft" { 2 } else { expected(input.0) };
                assert!(run.status >= Some(least), "{arguments:?}: {:?} {}", run.status, run.err);
            }
        }
    }
}
