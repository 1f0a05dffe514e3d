//! The guide of the README, command by command, and what a repository takes to be checked: the hook, the script.

use std::fs;
use std::path::{Path, PathBuf};
use std::process::{Command, Output, Stdio};

use roxmltree::Document;
use serde_json::Value;

use crate::program::examples;
use crate::project::{root, text};
use crate::shared::tell_skipped;

/// A command with the program on the path, a name for what git records, and no settings of who runs the test.
fn command(program: &str, folder: &Path) -> Command {
    let tools = Path::new(env!("CARGO_BIN_EXE_railworthy")).parent().unwrap().to_owned();
    let path = std::env::var_os("PATH").unwrap_or_default();
    let path = std::env::join_paths(std::iter::once(tools).chain(std::env::split_paths(&path))).unwrap();
    let mut command = Command::new(program);
    command.current_dir(folder).stdin(Stdio::null()).env("PATH", path).env("SOURCE_DATE_EPOCH", "1796083200");
    for name in ["NO_COLOR", "CLICOLOR_FORCE", "TERM", "COLUMNS", "RAILWORTHY", "GIT_DIR", "GIT_INDEX_FILE"] {
        command.env_remove(name);
    }
    let nothing = if cfg!(windows) { "NUL" } else { "/dev/null" };
    command.env("GIT_CONFIG_GLOBAL", nothing).env("GIT_CONFIG_SYSTEM", nothing);
    for name in ["GIT_AUTHOR", "GIT_COMMITTER"] {
        command.env(format!("{name}_NAME"), "Someone").env(format!("{name}_EMAIL"), "someone@example.org");
    }
    // The exporter of this machine, if any, has no part in this.
    command.env("KICAD_CLI", "no-exporter-here");
    command
}

/// Whether a program can be run here; a test that needs it says so and skips.
fn is_here(program: &str) -> bool {
    let here = Command::new(program).arg("--version").output().is_ok_and(|output| output.status.success());
    if !here {
        tell_skipped(&format!("{program} is not here"));
    }
    here
}

fn told(output: &Output) -> String {
    format!("{}{}", String::from_utf8_lossy(&output.stdout), String::from_utf8_lossy(&output.stderr))
}

/// The blocks of a section of the README, each with its language.
fn blocks(section: &str) -> Vec<(String, String)> {
    let readme = text("README.md");
    let (_, rest) = readme.split_once(&format!("\n## {section}\n")).unwrap();
    let section = rest.split("\n## ").next().unwrap();
    let fenced = section.split("\n```").skip(1).step_by(2);
    let of = |block: &str| block.split_once('\n').map(|(kind, text)| (kind.to_owned(), format!("{text}\n"))).unwrap();
    fenced.map(of).collect()
}

/// Runs a line of the guide in a shell; the folder that it ends in.
fn run_line(line: &str, folder: &Path) -> PathBuf {
    let place = tempfile::NamedTempFile::new().unwrap();
    let script = format!("{line}\nstatus=$?\npwd > \"$PLACE\"\nexit $status\n");
    let output = command("sh", folder).arg("-c").arg(script).env("PLACE", place.path()).output().unwrap();
    let wanted = match line.split_once("# exits with ") {
        Some((_, rest)) => rest[..1].parse().unwrap(),
        None => 0,
    };
    assert_eq!(output.status.code(), Some(wanted), "{line}\n{}", told(&output));
    PathBuf::from(fs::read_to_string(place.path()).unwrap().trim_end())
}

/// The board file with some tables taken up: each in place of the one of its heading and net that is commented out.
fn taken_up(file: &str, tables: &str) -> String {
    let mut lines: Vec<String> = file.lines().map(str::to_owned).collect();
    for table in tables.trim_end().split("\n\n") {
        let wanted: Vec<&str> = table.lines().collect();
        let names = |line: &&&str| line.starts_with('[') || line.starts_with("net ");
        let plain = |line: &str| line.split_whitespace().collect::<String>();
        let head: Vec<String> = wanted.iter().filter(names).map(|line| format!("#{}", plain(line))).collect();
        let is_it = |there: &[String]| there.iter().map(|line| plain(line)).eq(head.iter().cloned());
        let start = lines.windows(head.len()).position(is_it);
        let start = start.unwrap_or_else(|| panic!("{head:?} is not asked for in\n{file}"));
        let length =
            lines[start..].iter().take_while(|line| line.starts_with('#') && !line.starts_with("# ")).count();
        lines.splice(start..start + length, wanted.iter().map(|line| (*line).to_owned()));
    }
    lines.join("\n") + "\n"
}

#[test]
fn the_guide_leads_from_nothing_to_a_board_that_is_checked_at_each_commit() {
    if !is_here("git") {
        return;
    }
    let place = tempfile::tempdir().unwrap();
    // The guide begins in a clone: what it needs of one are the demo boards.
    let clone = place.path().join("railworthy");
    for folder in ["examples", "examples/ci"] {
        fs::create_dir_all(clone.join(folder)).unwrap();
        for entry in fs::read_dir(root().join(folder)).unwrap().map(|entry| entry.unwrap().path()) {
            if entry.is_file() {
                fs::copy(&entry, clone.join(folder).join(entry.file_name().unwrap())).unwrap();
            }
        }
    }
    let mut folder = clone;
    let (mut lines, mut edits) = (Vec::new(), 0);
    for (kind, block) in blocks("From nothing to a checked repository") {
        match kind.as_str() {
            "sh" => {
                for line in block.lines() {
                    folder = run_line(line, &folder);
                    lines.push(line.to_owned());
                }
            }
            "toml" => {
                let file = folder.join("gauge.railworthy.toml");
                fs::write(&file, taken_up(&fs::read_to_string(&file).unwrap(), &block)).unwrap();
                edits += 1;
            }
            _ => panic!("the guide has a block of the kind `{kind}`"),
        }
    }
    assert_eq!(edits, 2);
    let checks: Vec<bool> = lines
        .iter()
        .filter(|line| line.starts_with("railworthy check "))
        .map(|line| line.contains("# exits with 1"))
        .collect();
    assert_eq!(checks, [true, true, true, false]);
    for command in ["railworthy declare ", "railworthy accept ", "git commit ", "sh check-boards.sh"] {
        assert!(lines.iter().any(|line| line.starts_with(command)), "{command}");
    }
    for file in ["boards.sarif", "junit.xml", "boards.md"] {
        assert!(folder.join("results").join(file).is_file(), "{file}");
    }
    let committed = command("git", &folder).args(["ls-files"]).output().unwrap();
    assert!(told(&committed).contains("gauge.railworthy.toml"), "{}", told(&committed));
    // The hook holds: a fault that comes back is not committed.
    fs::copy(examples().join("gauge-draft.net"), folder.join("gauge.net")).unwrap();
    let refused = command("git", &folder).args(["commit", "--quiet", "--all", "--message", "Back"]).output().unwrap();
    assert_eq!(refused.status.code(), Some(1), "{}", told(&refused));
    assert!(told(&refused).contains("U4"), "{}", told(&refused));
}

/// A value of the hook's definition.
fn hook(key: &str) -> String {
    let definition = text(".pre-commit-hooks.yaml");
    let entries: Vec<(&str, &str)> = definition
        .lines()
        .filter(|line| !line.starts_with('#'))
        .map(|line| line.trim_start_matches(['-', ' ']).split_once(": ").unwrap())
        .collect();
    assert_eq!(definition.lines().filter(|line| line.starts_with("- ")).count(), 1);
    let mut found = entries.iter().filter(|(known, _)| *known == key);
    let (Some((_, value)), None) = (found.next(), found.next()) else { panic!("{key} in {entries:?}") };
    value.trim_matches('\'').to_owned()
}

#[test]
fn the_hook_judges_what_a_commit_changes() {
    for (key, value) in [("id", "railworthy"), ("language", "rust"), ("pass_filenames", "false")] {
        assert_eq!(hook(key), value);
    }
    let files = regex::Regex::new(&hook("files")).unwrap();
    for file in [
        "gauge.net",
        "hw/a b/gauge.xml",
        "hw/gauge.railworthy.toml",
        "railworthy.toml",
        "hw/railworthy.toml",
        "house/checks/one-microfarad/check.toml",
        "house/parts/qx10.toml",
        "supplies/solar.toml",
    ] {
        assert!(files.is_match(file), "{file}");
    }
    for file in ["Cargo.toml", "gauge.kicad_sch", "README.md", "gauge.network", "spare-parts/a.toml"] {
        assert!(!files.is_match(file), "{file}");
    }
    let entry = hook("entry");
    let mut words = entry.split(' ');
    let program = words.next().unwrap();
    let arguments: Vec<&str> = words.collect();
    for (name, status) in [("gauge-draft", 1), ("gauge-release", 0)] {
        let folder = tempfile::tempdir().unwrap();
        for file in [format!("{name}.net"), format!("{name}.railworthy.toml")] {
            fs::copy(examples().join(&file), folder.path().join(&file)).unwrap();
        }
        let output = command(program, folder.path()).args(&arguments).output().unwrap();
        assert_eq!(output.status.code(), Some(status), "{name}: {}", told(&output));
        // What passes in silence is shown by no hook.
        assert_eq!(output.stdout.is_empty() && output.stderr.is_empty(), status == 0, "{}", told(&output));
    }
}

/// A repository with a demo board in `hw`, under one name whichever board it is.
fn repository(folder: &Path, board: &str) {
    let hw = folder.join("hw");
    fs::create_dir_all(&hw).unwrap();
    for end in ["net", "railworthy.toml"] {
        fs::copy(examples().join(format!("{board}.{end}")), hw.join(format!("gauge.{end}"))).unwrap();
    }
}

fn check_boards(folder: &Path, arguments: &[&str]) -> Command {
    let mut script = command("sh", folder);
    script.arg(examples().join("ci/check-boards.sh")).args(arguments);
    script
}

/// Reads the results that the script left, and what a comment on the change says, if there is one.
fn results(folder: &Path) -> (Value, String, String, Option<String>) {
    let read = |name: &str| fs::read_to_string(folder.join(name));
    let sarif: Value = serde_json::from_str(&read("boards.sarif").unwrap()).unwrap();
    assert_eq!(sarif["version"], "2.1.0");
    (sarif, read("junit.xml").unwrap(), read("boards.md").unwrap(), read("changes.md").ok())
}

/// How many test cases fail.
fn failures(junit: &str) -> usize {
    let document = Document::parse(junit).unwrap();
    document.descendants().filter(|node| node.has_tag_name("failure")).count()
}

#[test]
fn the_script_leaves_a_file_for_each_reader_and_one_status() {
    let place = tempfile::tempdir().unwrap();
    let (base, change) = (place.path().join("base"), place.path().join("change"));
    repository(&base, "gauge-draft");
    repository(&change, "gauge-release");

    let output = check_boards(&base, &[]).output().unwrap();
    assert_eq!(output.status.code(), Some(1), "{}", told(&output));
    assert!(told(&output).contains("no-exporter-here is not here: the netlists are judged as they are"));
    let (sarif, junit, comment, changes) = results(&base.join("results"));
    assert!(!sarif["runs"][0]["results"].as_array().unwrap().is_empty());
    assert!(failures(&junit) > 0, "{junit}");
    assert!(comment.starts_with("### railworthy: ") && comment.contains("| error |"), "{comment}");
    assert_eq!(changes, None);

    let base = base.join("hw");
    let output = check_boards(&change, &["-o", "told", "-b", base.to_str().unwrap(), "hw"]).output().unwrap();
    assert_eq!(output.status.code(), Some(0), "{}", told(&output));
    let (sarif, junit, comment, changes) = results(&change.join("told"));
    assert_eq!(sarif["runs"][0]["results"], serde_json::json!([]));
    assert_eq!(failures(&junit), 0);
    assert!(comment.starts_with("### railworthy: everything asked holds"), "{comment}");
    assert!(changes.unwrap().contains("gone"));
}

#[test]
fn what_the_script_cannot_do_is_told_and_counts() {
    let folder = tempfile::tempdir().unwrap();
    let status = |arguments: &[&str]| {
        let output = check_boards(folder.path(), arguments).output().unwrap();
        (output.status.code(), told(&output))
    };
    assert_eq!(status(&["-x"]).0, Some(2));
    assert_eq!(status(&["a", "b"]).0, Some(2));
    assert!(status(&["no-such-folder"]).1.contains("no-such-folder is no folder"));
    let (code, told) = status(&[]);
    assert_eq!(code, Some(2), "{told}");
    assert!(told.contains("no netlist export lies below"), "{told}");
    repository(folder.path(), "gauge-release");
    assert_eq!(status(&[]).0, Some(0));
    let gone = check_boards(folder.path(), &[]).env("RAILWORTHY", "no-such-program").output().unwrap();
    assert_eq!(gone.status.code(), Some(2));
}

#[cfg(unix)]
#[test]
fn the_script_exports_each_schematic_root_where_it_can() {
    use std::os::unix::fs::PermissionsExt;

    let folder = tempfile::tempdir().unwrap();
    let hw = folder.path().join("hw/river gauge");
    fs::create_dir_all(&hw).unwrap();
    for file in ["logger.kicad_pro", "logger.kicad_sch", "inputs.kicad_sch"] {
        fs::write(hw.join(file), "").unwrap();
    }
    fs::copy(examples().join("gauge-release.railworthy.toml"), hw.join("logger.railworthy.toml")).unwrap();
    // Stands in for the editor's exporter: takes its arguments, writes what was drawn.
    let exporter = folder.path().join("exporter");
    let board = examples().join("gauge-release.net");
    let script = format!(
        "#!/bin/sh\n[ \"$1 $2 $3 $4\" = 'sch export netlist --output' ] && [ -f \"$6\" ] && cp '{}' \"$5\"\n",
        board.display()
    );
    let export = |script: &str| {
        fs::write(&exporter, script).unwrap();
        fs::set_permissions(&exporter, fs::Permissions::from_mode(0o755)).unwrap();
        check_boards(folder.path(), &[]).env("KICAD_CLI", &exporter).output().unwrap()
    };
    let output = export(&script);
    assert_eq!(output.status.code(), Some(0), "{}", told(&output));
    let nets: Vec<_> = fs::read_dir(&hw).unwrap().map(|entry| entry.unwrap().file_name()).collect();
    assert!(
        nets.iter().any(|name| name == "logger.net") && !nets.iter().any(|name| name == "inputs.net"),
        "{nets:?}"
    );
    let failed = export("#!/bin/sh\nexit 3\n");
    assert_eq!(failed.status.code(), Some(2), "{}", told(&failed));
    assert!(told(&failed).contains("logger.kicad_sch was not exported"), "{}", told(&failed));
}
