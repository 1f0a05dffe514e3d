//! Validators from outside over what the program writes. They lie in the folder that `RAILWORTHY_FORMAT_TOOLS` names:
//! `venv` with the Python packages, `npm` with the Node.js ones; the scripts that run them are shared test data.

use std::fs;
use std::path::{Path, PathBuf};
use std::process::Command;

use super::program::{examples, run};
use super::sarif::{hostile_board, tripping_boards};
use super::shared::shared_folder;
use super::sheets::drawn_board;

/// The validators and the scripts; without them, says that a test skips.
fn gates() -> Option<(PathBuf, PathBuf)> {
    let tools = std::env::var_os("RAILWORTHY_FORMAT_TOOLS").map(PathBuf::from);
    if tools.is_none() {
        #[allow(clippy::print_stderr, reason = "a test that skips says so")]
        {
            eprintln!("skipped: RAILWORTHY_FORMAT_TOOLS is not set");
        }
    }
    Some((tools?, shared_folder()?.join("formats")))
}

/// Boards of every kind, each with the arguments that judge it.
fn boards(folder: &Path) -> Vec<(&'static str, Vec<String>)> {
    let draft = fs::read_to_string(examples().join("gauge-draft.net")).unwrap();
    let release = fs::read_to_string(examples().join("gauge-release.net")).unwrap();
    let settings = fs::read_to_string(examples().join("gauge-draft.railworthy.toml")).unwrap();
    let accept = "[[accept]]\ncheck = \"set-point\"\npart = \"U1\"\nreason = \"trimmed {0} [by](1) <hand>\"\n\
        [[accept]]\ncheck = \"headroom\"\npart = \"U2\"\nreason = \"nothing of the kind is found\"\n";
    let cut = draft[..draft.find("(net (code \"5\")").unwrap() + 40].to_owned();
    let files = [
        ("accepted.net", draft.clone()),
        ("accepted.railworthy.toml", settings.clone() + accept),
        ("damaged.net", cut),
        ("damaged.railworthy.toml", settings.replace("[[rail]]", "[[rali]]")),
        ("clean.net", release),
        ("clean.railworthy.toml", fs::read_to_string(examples().join("gauge-release.railworthy.toml")).unwrap()),
        ("mark and line ends.net", format!("\u{feff}{}", draft.replace('\n', "\r\n"))),
        ("[x](0) {1} #ä%.net", hostile_board()),
        ("no-netlist.net", "\u{feff}<html>\r\n".to_owned()),
    ];
    for (name, text) in files {
        fs::write(folder.join(name), text).unwrap();
    }
    fs::create_dir(folder.join("drawn")).unwrap();
    drawn_board(&folder.join("drawn"));
    fs::write(folder.join("bytes.net"), b"(export\n (nets (net (name \"\xc3\x28\xff\"))))").unwrap();
    let one = |name: &str| vec![name.to_owned()];
    vec![
        ("every-kind", tripping_boards(folder)),
        ("accepted", one("accepted.net")),
        ("damaged", one("damaged.net")),
        ("clean", one("clean.net")),
        ("line-ends", one("mark and line ends.net")),
        ("drawn", one("drawn/gauge.net")),
        ("hostile", one("[x](0) {1} #ä%.net")),
        ("unreadable", ["gone.net", "no-netlist.net", "bytes.net", "no folder/"].map(str::to_owned).to_vec()),
    ]
}

/// Writes the result of each kind of board in a format; the files' names.
fn written(folder: &Path, format: &str) -> Vec<String> {
    let mut files: Vec<String> = boards(folder)
        .into_iter()
        .map(|(name, boards)| {
            let file = format!("{name}.{format}");
            let mut arguments = vec!["check", "--format", format, "--fail-on", "note", "--output", &file];
            arguments.extend(boards.iter().map(String::as_str));
            let wanted = match name {
                "clean" => Some(0),
                "damaged" | "unreadable" => Some(2),
                _ => Some(1),
            };
            let run = run(folder, &arguments);
            assert_eq!(run.status, wanted, "{name}: {}", run.err);
            file
        })
        .collect();
    for (name, old, wanted) in [("compared", "clean.net", 1), ("not-compared", "bytes.net", 2)] {
        let file = format!("{name}.{format}");
        let run = run(folder, &["compare", old, "accepted.net", "--format", format, "--output", &file]);
        assert_eq!(run.status, Some(wanted), "{name}: {}", run.err);
        files.push(file);
    }
    files
}

/// Runs a validator over files; whether they pass, and what it says.
fn verdict(tools: &Path, folder: &Path, script: &Path, arguments: &[&Path], files: &[String]) -> (bool, String) {
    let multitool = tools.join("npm/node_modules/@microsoft/sarif-multitool-linux/Sarif.Multitool");
    let mut command = Command::new(tools.join("venv/bin/python"));
    command.arg(script).args(arguments).args(files).current_dir(folder).env("SARIF_MULTITOOL", multitool);
    let output = command.output().unwrap();
    let said = [output.stdout, output.stderr].map(|bytes| String::from_utf8_lossy(&bytes).into_owned()).concat();
    (output.status.success(), said)
}

#[test]
fn sarif_passes_schema_validator_and_semantics() {
    let Some((tools, scripts)) = gates() else { return };
    let folder = tempfile::tempdir().unwrap();
    let files = written(folder.path(), "sarif");
    let gate = scripts.join("gate_sarif.py");
    let (passes, said) = verdict(&tools, folder.path(), &gate, &[Path::new(".")], &files);
    assert!(passes && said.matches("OK ").count() == files.len(), "{said}");
    // One fault for each of the three, so that none of them is known to wave everything through.
    let good = fs::read_to_string(folder.path().join("accepted.sarif")).unwrap();
    let faults = [
        ("schema", "\"kind\": \"fail\"", "\"sort\": \"fail\""),
        ("multitool", "\"ruleIndex\": 0", "\"ruleIndex\": 99"),
        ("semantics", "\"startColumn\": 1", "\"startColumn\": 2"),
    ];
    for (by, from, to) in faults {
        let index = good.find("\"ruleIndex\": ").unwrap();
        let digits: String = good[index + 13..].chars().take_while(char::is_ascii_digit).collect();
        let from = if by == "multitool" { format!("\"ruleIndex\": {digits}") } else { from.to_owned() };
        let bad = good.replacen(&from, to, 1);
        assert_ne!(bad, good, "{by}");
        fs::write(folder.path().join("bad.sarif"), bad).unwrap();
        let (passes, said) = verdict(&tools, folder.path(), &gate, &[Path::new(".")], &["bad.sarif".to_owned()]);
        assert!(!passes && said.contains(by), "{by}: {said}");
    }
}

#[test]
fn junit_passes_its_schema_and_counts() {
    let Some((tools, scripts)) = gates() else { return };
    let folder = tempfile::tempdir().unwrap();
    let files = written(folder.path(), "junit");
    let (script, schema) = (scripts.join("validate_junit.py"), scripts.join("xsd/junit-10.xsd"));
    let (passes, said) = verdict(&tools, folder.path(), &script, &[&schema], &files);
    assert!(passes && said.matches("OK ").count() == files.len(), "{said}");
    let good = fs::read_to_string(folder.path().join("accepted.junit")).unwrap();
    for (from, to) in [("skipped=\"1\"", "skipped=\"7\""), ("<skipped ", "<waived "), ("<testcase", "<!DOCTYPE")] {
        let bad = good.replacen(from, to, 1);
        assert_ne!(bad, good, "{from}");
        fs::write(folder.path().join("bad.junit"), bad).unwrap();
        let (passes, said) = verdict(&tools, folder.path(), &script, &[&schema], &["bad.junit".to_owned()]);
        assert!(!passes, "{from}: {said}");
    }
}
