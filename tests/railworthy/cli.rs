//! The command line: exit status, streams, files, hostile names.

use std::fs;
use std::path::Path;
use std::process::Stdio;

use super::program::{examples, program, run, run_with};

/// A board of one regulator with a net of this name at its input.
pub(crate) fn board(net: &str) -> String {
    let quoted = net.replace('\\', "\\\\").replace('"', "\\\"");
    format!(
        "(export (version \"E\") (components \
         (comp (ref \"U1\") (value \"LM7805\") (libsource (lib \"Regulator_Linear\") (part \"LM7805_TO220\") \
         (description \"\"))) (comp (ref \"C1\") (value \"100n\") (libsource (lib \"Device\") (part \"C\") \
         (description \"\")))) (libparts (libpart (lib \"Regulator_Linear\") (part \"LM7805_TO220\") \
         (pins (pin (num \"1\") (name \"IN\") (type \"power_in\")) (pin (num \"2\") (name \"GND\") (type \"power_in\")) \
         (pin (num \"3\") (name \"OUT\") (type \"power_out\"))))) (nets \
         (net (code \"1\") (name \"{quoted}\") (node (ref \"U1\") (pin \"1\"))) \
         (net (code \"2\") (name \"GND\") (node (ref \"U1\") (pin \"2\")) (node (ref \"C1\") (pin \"2\"))) \
         (net (code \"3\") (name \"+5V\") (node (ref \"U1\") (pin \"3\")) (node (ref \"C1\") (pin \"1\")))))\n"
    )
}

pub(crate) fn folder_with(name: &str, text: &str) -> tempfile::TempDir {
    let folder = tempfile::tempdir().unwrap();
    fs::write(folder.path().join(name), text).unwrap();
    folder
}

#[test]
fn the_exit_status_tells_findings_by_the_fail_level() {
    let folder = examples();
    let status = |arguments: &[&str]| run(&folder, arguments).status;
    assert_eq!(status(&["check", "gauge-draft.net"]), Some(1));
    assert_eq!(status(&["check", "gauge-draft.net", "--fail-on", "error"]), Some(1));
    assert_eq!(status(&["check", "gauge-draft.net", "--fail-on", "never"]), Some(0));
    assert_eq!(status(&["check", "gauge-release.net"]), Some(0));
    assert_eq!(status(&["check", "gauge-release.net", "gauge-draft.net"]), Some(1));
}

#[test]
fn what_cannot_be_done_is_told_and_wins_over_findings() {
    let folder = examples();
    let absent = run(&folder, &["check", "no-such.net", "gauge-draft.net"]);
    assert_eq!(absent.status, Some(2));
    assert!(absent.out.contains("no-such.net cannot be read"), "{}", absent.out);
    assert!(absent.out.contains("U5 never comes up"), "what can be judged is judged");
    for arguments in [
        &["check"][..],
        &["judge"],
        &["check", "gauge-draft.net", "--fail-on", "sometimes"],
        &["check", "gauge-draft.net", "--format", "csv"],
        &["check", "gauge-draft.net", "--board", "no-such.toml"],
        &["check", "gauge-draft.net", "--rules", "no-such-folder"],
        &["check", ".", "--jobs", "0"],
        &["rails", "."],
        &["explain", "no-such-check"],
        &["explain", "gauge-draft.net", "U99"],
        &["catalog", "parts", "no such part"],
    ] {
        let run = run(&folder, arguments);
        assert_eq!(run.status, Some(2), "{arguments:?}");
        assert!(!run.err.is_empty() || run.out.contains("error:"), "{arguments:?} says why");
    }
}

#[test]
fn help_and_version_are_no_errors() {
    for arguments in [&["--help"][..], &["--version"], &["check", "--help"]] {
        let run = run(&examples(), arguments);
        assert_eq!((run.status, run.err.as_str()), (Some(0), ""), "{arguments:?}");
        assert!(run.out.contains("railworthy"));
    }
}

#[test]
fn a_damaged_board_is_judged_as_far_as_it_goes_and_marked_incomplete() {
    let text = fs::read_to_string(examples().join("gauge-draft.net")).unwrap();
    let cut = &text[..text.len() * 9 / 10];
    let folder = folder_with("cut.net", cut);
    let text = run(folder.path(), &["check", "cut.net"]);
    assert_eq!(text.status, Some(2));
    assert!(text.out.contains("incomplete"), "{}", text.out);
    let json = run(folder.path(), &["check", "cut.net", "--format", "json", "--fail-on", "never"]);
    let value: serde_json::Value = serde_json::from_str(&json.out).unwrap();
    assert_eq!(json.status, Some(2));
    assert_eq!(value["boards"][0]["complete"], false);
    assert!(!value["boards"][0]["problems"].as_array().unwrap().is_empty());
}

#[test]
fn a_board_comes_from_standard_input_without_a_board_file() {
    let bytes = fs::read(examples().join("gauge-draft.net")).unwrap();
    let run = run_with(&examples(), &["check", "-", "--format", "json", "--fail-on", "never"], &bytes);
    let value: serde_json::Value = serde_json::from_str(&run.out).unwrap();
    assert_eq!(run.status, Some(0));
    assert_eq!(value["boards"][0]["netlist"], "<stdin>");
    assert_eq!(value["boards"][0]["board_file"], serde_json::Value::Null);
    let named = run_with(
        &examples(),
        &["check", "-", "--board", "gauge-draft.railworthy.toml", "--fail-on", "never"],
        &bytes,
    );
    assert!(named.out.contains("board file gauge-draft.railworthy.toml"), "{}", named.out);
}

#[test]
fn a_broken_board_file_is_told_with_its_place_and_the_rest_is_judged() {
    let folder = folder_with("a.net", &board("+12V"));
    fs::write(folder.path().join("a.railworthy.toml"), "[[laod]]\nnet = \"+5V\"\n").unwrap();
    let run = run(folder.path(), &["check", "a.net"]);
    assert_eq!(run.status, Some(2));
    assert!(run.out.contains("a.railworthy.toml:1:3"), "{}", run.out);
    assert!(run.out.contains("did you mean `load`?"), "{}", run.out);
    assert!(run.out.contains("1 regulator"), "{}", run.out);
}

#[test]
fn the_house_file_is_found_and_overlaid() {
    let folder = folder_with("railworthy.toml", "[board]\nambient = \"0 .. 40 °C\"\ntitle = \"House\"\n");
    fs::create_dir(folder.path().join("hw")).unwrap();
    fs::write(folder.path().join("hw/a.net"), board("+12V")).unwrap();
    let run = run(folder.path(), &["check", "hw/a.net"]);
    assert!(run.out.contains("House") && run.out.contains("railworthy.toml"), "{}", run.out);
}

#[test]
fn colour_is_given_where_it_is_asked_for_and_never_in_a_pipe() {
    let folder = examples();
    assert!(!run(&folder, &["check", "gauge-draft.net"]).out.contains('\u{1b}'));
    assert!(run(&folder, &["check", "gauge-draft.net", "--color", "always"]).out.contains("\u{1b}["));
    assert!(!run(&folder, &["check", "gauge-draft.net", "--color", "never"]).out.contains('\u{1b}'));
    let bare = program(&folder).args(["check", "gauge-draft.net"]).env("NO_COLOR", "1").output().unwrap();
    assert!(!bare.stdout.contains(&0x1b));
}

#[test]
fn quiet_leaves_the_findings_alone() {
    let loud = run(&examples(), &["check", "gauge-draft.net"]).out;
    let quiet = run(&examples(), &["check", "gauge-draft.net", "--quiet"]).out;
    assert!(quiet.contains("U5 never comes up") && !quiet.contains("regulators,") && !quiet.contains("copper"));
    assert!(loud.contains("regulators,") && loud.contains("Distance, copper and layout cannot be seen"));
}

#[test]
fn an_output_file_is_written_whole_or_not_at_all() {
    let folder = tempfile::tempdir().unwrap();
    let file = folder.path().join("result.json");
    let name = file.to_str().unwrap();
    let arguments = ["check", "gauge-draft.net", "--format", "json", "--output", name];
    let written = run(&examples(), &arguments);
    assert_eq!((written.status, written.out.as_str()), (Some(1), ""));
    assert!(serde_json::from_str::<serde_json::Value>(&fs::read_to_string(&file).unwrap()).is_ok());
    assert_eq!(fs::read_dir(folder.path()).unwrap().count(), 1, "nothing is left beside it");
    let nowhere = folder.path().join("no/such/result.json");
    let refused = run(&examples(), &["check", "gauge-draft.net", "--output", nowhere.to_str().unwrap()]);
    assert_eq!(refused.status, Some(2));
    assert!(refused.err.contains("cannot be written"), "{}", refused.err);
}

#[test]
fn the_same_inputs_give_the_same_bytes() {
    for format in ["text", "json"] {
        let arguments = ["check", "gauge-draft.net", "gauge-release.net", "--format", format];
        assert_eq!(run(&examples(), &arguments).out, run(&examples(), &arguments).out);
    }
}

#[test]
fn a_result_never_replaces_what_was_read() {
    let folder = folder_with("a.net", &board("+12V"));
    fs::write(folder.path().join("a.railworthy.toml"), "[board]\ntitle = \"A\"\n").unwrap();
    fs::write(folder.path().join("rule.toml"), "").unwrap();
    fs::write(folder.path().join("other.net"), board("VIN")).unwrap();
    fs::create_dir(folder.path().join("b")).unwrap();
    let bytes = |name: &str| fs::read(folder.path().join(name)).unwrap();
    for file in ["a.net", "b/../a.net", "a.railworthy.toml", "rule.toml", "other.net"] {
        let before = bytes(file);
        let refused = run(folder.path(), &["check", "a.net", "--output", file]);
        assert_eq!((refused.status, bytes(file) == before), (Some(2), true), "{file}");
        assert!(refused.err.contains("is not replaced, for it"), "{}", refused.err);
    }
    let before = bytes("a.net");
    let refused = run(folder.path(), &["draft", "a.net", "U1", "--output", "a.net"]);
    assert_eq!((refused.status, bytes("a.net") == before), (Some(2), true), "{}", refused.err);
    for _ in 0..2 {
        let written = run(folder.path(), &["check", "a.net", "--output", "a.txt", "--fail-on", "never"]);
        assert_eq!((written.status, written.err.as_str()), (Some(0), ""), "a result replaces an earlier one");
    }
}

/// Names that act on terminals and logs, as others hide them in a netlist.
pub(crate) const HOSTILE: &[&str] = &[
    "\u{1b}[2J\u{1b}[1;1HAll checks passed\u{1b}]0;owned\u{7}",
    "\u{1b}]8;;https://e.example/\u{1b}\\GND\u{1b}]8;;\u{1b}\\",
    "\u{1b}]52;c;ZWNobyBoaQ==\u{7}",
    "\u{9b}31mX",
    "GND\u{202e}DNG\u{2066}",
    "A\u{200b}B",
    "\u{2028}line",
    "x\n::error file=a,line=1::forged",
    "::stop-commands::tok",
    "\r::add-mask::a",
    "::group::x",
    "GND ##[error]forged",
    "##vso[task.setvariable variable=A]b",
    "##teamcity[buildProblem]",
    "\u{7f}\u{fffe}\u{ffff}",
];

pub(crate) fn assert_inert(text: &str, what: &str) {
    let acting = text.chars().find(|sign| *sign != '\n' && railworthy::report::acts(*sign));
    assert_eq!(acting, None, "{what}");
    assert!(text.lines().all(|line| !line.trim_start().starts_with("::")), "{what}: {text}");
    for command in ["##[", "##vso[", "##teamcity["] {
        assert!(!text.contains(command), "{what}: {text}");
    }
}

#[test]
fn names_from_a_file_act_on_nothing() {
    for name in HOSTILE {
        let folder = folder_with("a.net", &board(name));
        // What every format of `check` makes of them: `hostile_formats`.
        for arguments in [
            &["rails", "a.net"][..],
            &["rails", "a.net", "--format", "json"],
            &["explain", "a.net", "U1"],
            &["declare", "a.net"],
        ] {
            let run = run(folder.path(), arguments);
            assert_inert(&run.out, &format!("{name:?} {arguments:?}"));
            assert_inert(&run.err, &format!("{name:?} {arguments:?}"));
            assert!(run.out.len() > 100, "{name:?} {arguments:?}: {}", run.err);
        }
    }
}

#[test]
fn names_in_a_board_file_and_in_arguments_act_on_nothing() {
    for name in HOSTILE.iter().filter(|name| !name.contains('\n')) {
        let folder = folder_with("a.net", &board("+12V"));
        let escaped: String = name.chars().map(|sign| format!("\\U{:08x}", u32::from(sign))).collect();
        let text = format!("[board]\ntitle = \"{escaped}\"\n[[load]]\nnet = \"{escaped}\"\ncurrent = \"1 A\"\n");
        fs::write(folder.path().join("a.railworthy.toml"), text).unwrap();
        let declared = run(folder.path(), &["check", "a.net"]);
        assert_inert(&declared.out, name);
        let argument = run(folder.path(), &["check", name]);
        assert_eq!(argument.status, Some(2));
        assert_inert(&(argument.out + &argument.err), name);
        let option = run(folder.path(), &["explain", name]);
        assert_inert(&(option.out + &option.err), name);
    }
}

#[cfg(unix)]
#[test]
fn a_file_name_stays_on_one_line() {
    let name = "a\nb.net:3:4: error: forged %0A";
    let folder = folder_with(name, &board("+12V"));
    let run = run(folder.path(), &["check", name]);
    assert!(run.out.starts_with("a\\u{a}b.net:3:4"), "{}", run.out);
}

#[cfg(unix)]
#[test]
fn a_reader_that_goes_away_is_no_error_and_a_full_disk_is() {
    use std::os::unix::process::ExitStatusExt;
    let mut child = program(&examples())
        .args(["check", "gauge-draft.net"])
        .stdout(Stdio::piped())
        .stderr(Stdio::piped())
        .spawn()
        .unwrap();
    drop(child.stdout.take());
    let output = child.wait_with_output().unwrap();
    assert_eq!(output.status.signal(), None);
    assert_eq!((output.status.code(), output.stderr.len()), (Some(1), 0), "the run's own status");
    let full = Path::new("/dev/full");
    if full.exists() {
        let disk = fs::OpenOptions::new().write(true).open(full).unwrap();
        let output = program(&examples()).args(["check", "gauge-draft.net"]).stdout(disk).output().unwrap();
        assert_eq!(output.status.code(), Some(2));
        assert!(String::from_utf8_lossy(&output.stderr).contains("cannot be written"));
    }
}

#[cfg(unix)]
#[test]
fn what_is_no_plain_file_is_refused_at_once() {
    let folder = tempfile::tempdir().unwrap();
    std::os::unix::fs::symlink("/dev/zero", folder.path().join("zero.net")).unwrap();
    std::os::unix::fs::symlink("loop.net", folder.path().join("loop.net")).unwrap();
    let made = std::process::Command::new("mkfifo").arg(folder.path().join("fifo.net")).status();
    let mut names = vec!["zero.net", "loop.net"];
    names.extend(made.is_ok_and(|status| status.success()).then_some("fifo.net"));
    for name in names {
        let run = run(folder.path(), &["check", name]);
        assert_eq!(run.status, Some(2), "{name}");
        assert!(run.out.contains("not judged"), "{}", run.out);
    }
}

#[test]
fn rules_are_vetted_with_their_cases() {
    let folder = tempfile::tempdir().unwrap();
    let check = folder.path().join("checks/own-check");
    fs::create_dir_all(&check).unwrap();
    let rule = "name = \"own-check\"\nabout = \"regulator\"\nasks = \"Is it high?\"\nholds = \"input_voltage > 20 V\"\n\
                [says]\nfails = \"{subject} is low\"\n[[sources]]\ncommon_practice = true\n";
    fs::write(check.join("check.toml"), rule).unwrap();
    let name = folder.path().to_str().unwrap();
    let lacking = run(&examples(), &["vet", name]);
    assert_eq!(lacking.status, Some(1), "{}", lacking.out);
    assert!(lacking.out.contains("has no bad case"), "{}", lacking.out);
    fs::write(check.join("bad-low.net"), board("VIN")).unwrap();
    fs::write(check.join("good-high.net"), board("VIN")).unwrap();
    let supply = |voltage: &str| format!("[[supply]]\nnet = \"VIN\"\nvoltage = \"{voltage}\"\n");
    let expect = "[expect]\nown-check = { U1 = \"fails\" }\n";
    fs::write(check.join("bad-low.railworthy.toml"), supply("9 .. 12 V") + expect).unwrap();
    fs::write(check.join("good-high.railworthy.toml"), supply("24 .. 25 V")).unwrap();
    let clean = run(&examples(), &["vet", name]);
    assert_eq!((clean.status, clean.out.as_str()), (Some(0), "own-check: 2 cases as expected\n"));
    fs::write(check.join("check.toml"), rule.replace("20 V", "20 A")).unwrap();
    let broken = run(&examples(), &["vet", name]);
    assert_eq!(broken.status, Some(2), "{}", broken.out);
    assert!(broken.out.contains("check.toml:4"), "{}", broken.out);
}

#[test]
fn the_built_in_checks_come_out_as_their_cases_expect() {
    let run = run(&examples(), &["vet"]);
    assert_eq!(run.status, Some(0), "{}", run.out);
    assert!(run.out.lines().count() >= 8, "{}", run.out);
}

#[test]
fn checks_are_explained_and_known_things_listed() {
    let text = |arguments: &[&str]| {
        let run = run(&examples(), arguments);
        assert_eq!(run.status, Some(0), "{arguments:?} {}", run.err);
        run.out
    };
    let explained = text(&["explain", "headroom"]);
    assert!(explained.contains("headroom >= dropout + spare") && explained.contains("spare"), "{explained}");
    assert!(text(&["explain", "gauge-draft.net", "U3"]).contains("Requirements"));
    for (what, name) in [
        ("checks", "headroom"),
        ("parts", "317 / LM317"),
        ("supplies", "9 V block"),
        ("technologies", "tantalum"),
        ("devices", "LM358"),
        ("quantities", "dropout"),
    ] {
        let list = text(&["catalog", what]);
        assert!(list.contains(name), "{what}: {list}");
        assert!(text(&["catalog", what, name]).lines().count() >= 1);
    }
}

#[test]
fn a_damaged_file_claims_no_failure_for_what_may_be_in_the_lost_part() {
    let folder = tempfile::tempdir().unwrap();
    let whole = std::fs::read_to_string(examples().join("gauge-draft.net")).unwrap();
    let cut = whole.find("(name \"VREF\")").unwrap();
    std::fs::write(folder.path().join("cut.net"), &whole[..cut]).unwrap();
    let run = run(folder.path(), &["check", "cut.net"]);
    assert_eq!(run.status, Some(2));
    assert!(run.out.contains("incomplete"), "{}", run.out);
    let after = run.out.split("incomplete").nth(1).unwrap();
    assert!(!after.contains("  error:"), "{after}");
}
