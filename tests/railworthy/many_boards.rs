//! Many boards in one run: folders, order, threads, what one bad board costs the others.

use std::fs;
use std::path::Path;

use serde_json::Value;

use super::program::{Run, examples, program, run};

/// A repository of boards with what lies among them.
fn repository() -> tempfile::TempDir {
    let folder = tempfile::tempdir().unwrap();
    let put = |name: &str, text: &str| {
        let path = folder.path().join(name);
        fs::create_dir_all(path.parent().unwrap()).unwrap();
        fs::write(path, text).unwrap();
    };
    let read = |name: &str| fs::read_to_string(examples().join(name)).unwrap();
    let (draft, release) = (read("gauge-draft.net"), read("gauge-release.net"));
    for place in ["hw/b/z.net", "hw/a/z.net", "hw/a-b/y.net"] {
        put(place, &release);
        put(&place.replace(".net", ".railworthy.toml"), &read("gauge-release.railworthy.toml"));
    }
    put("hw/draft.NET", &draft);
    put(
        "hw/empty.net",
        "(export (version \"E\") (components (comp (ref \"R1\"))) (nets (net (code \"1\") (name \"A\") (node (ref \"R1\") (pin \"1\")))))",
    );
    put("hw/deck.net", "* a deck\nR1 a b 1k\n.end\n");
    put("hw/project.xml", "<?xml version=\"1.0\"?><project/>");
    put("hw/other.txt", &draft);
    put(".git/objects/hidden.net", &draft);
    put("nothing/here.txt", "");
    folder
}

fn netlists(run: &Run) -> Vec<String> {
    let value: Value = serde_json::from_str(&run.out).unwrap();
    value["boards"].as_array().unwrap().iter().map(|board| board["netlist"].as_str().unwrap().to_owned()).collect()
}

fn json(folder: &Path, arguments: &[&str]) -> Run {
    run(folder, &[&["check", "--format", "json"], arguments].concat())
}

#[test]
fn every_export_below_a_folder_is_judged_in_the_order_of_paths() {
    let folder = repository();
    let found = json(folder.path(), &["hw"]);
    let wanted = ["hw/a/z.net", "hw/a-b/y.net", "hw/b/z.net", "hw/draft.NET", "hw/empty.net"];
    assert_eq!(netlists(&found), wanted);
    assert_eq!(found.status, Some(1));
    assert_eq!(
        found.err,
        "note: below hw: hw/deck.net, hw/project.xml are no netlist exports and were passed over\n"
    );
    assert_eq!(netlists(&json(folder.path(), &["."])), wanted, "without `./`, without what is hidden");
    assert_eq!(json(folder.path(), &["hw", "--quiet"]).err, "");
    assert_eq!(netlists(&json(folder.path(), &[".git"])).len(), 1, "but for what is named");
}

#[test]
fn a_board_that_is_named_twice_is_judged_once_in_the_first_place() {
    let folder = repository();
    let found = json(folder.path(), &["hw/b/z.net", "hw", "./hw/../hw/a/z.net"]);
    assert_eq!(netlists(&found), ["hw/b/z.net", "hw/a/z.net", "hw/a-b/y.net", "hw/draft.NET", "hw/empty.net"]);
}

#[test]
fn a_folder_without_boards_is_an_error_and_the_others_are_judged() {
    let folder = repository();
    let found = run(folder.path(), &["check", "nothing", "hw/a"]);
    assert_eq!(found.status, Some(2));
    let told = "no netlist export lies below nothing";
    assert!(found.out.contains(told) && found.out.contains("end in .net or .xml"), "{}", found.out);
    assert!(found.out.contains("2 boards: 1 not judged, 1 holds"), "{}", found.out);
    let decks = folder.path().join("decks");
    fs::create_dir(&decks).unwrap();
    fs::write(decks.join("one.net"), ".end\n").unwrap();
    let found = run(folder.path(), &["check", "decks"]);
    assert_eq!(found.status, Some(2));
    assert!(found.out.split_whitespace().collect::<Vec<_>>().join(" ").contains("one.net is no netlist export"));
}

#[test]
fn what_is_wrong_with_one_board_costs_no_other() {
    let folder = repository();
    fs::write(folder.path().join("hw/a/cut.net"), "(export (version \"E\") (comp").unwrap();
    fs::write(folder.path().join("hw/b/z.railworthy.toml"), "[[laod]]\n").unwrap();
    let found = json(folder.path(), &["hw", "no-such.net"]);
    assert_eq!(found.status, Some(2));
    let value: Value = serde_json::from_str(&found.out).unwrap();
    let complete: Vec<bool> =
        value["boards"].as_array().unwrap().iter().map(|board| board["complete"].as_bool().unwrap()).collect();
    assert_eq!(netlists(&found)[0], "hw/a/cut.net");
    assert_eq!(complete, [false, true, true, false, true, true, false]);
}

#[test]
fn the_bytes_are_the_same_whatever_the_threads() {
    let folder = repository();
    for format in ["text", "json"] {
        let with = |threads: &str, jobs: &[&str]| {
            let arguments = [&["check", "hw", "--format", format], jobs].concat();
            program(folder.path()).args(arguments).env("RAYON_NUM_THREADS", threads).output().unwrap().stdout
        };
        let one = with("1", &[]);
        assert!(one.len() > 1000);
        for jobs in [&[][..], &["--jobs", "1"], &["--jobs", "7"]] {
            assert!(with("5", jobs) == one, "{format} {jobs:?}");
        }
    }
}

#[test]
fn many_boards_are_summed_up_at_the_end() {
    let folder = repository();
    fs::remove_file(folder.path().join("hw/draft.NET")).unwrap();
    fs::copy(examples().join("gauge-draft.net"), folder.path().join("hw/a/gauge-draft.net")).unwrap();
    let board = "gauge-draft.railworthy.toml";
    fs::copy(examples().join(board), folder.path().join("hw/a").join(board)).unwrap();
    fs::write(folder.path().join("hw/b/bad.net"), "(export (").unwrap();
    let found = run(folder.path(), &["check", "hw", "--jobs", "2"]);
    let (_, end) = found.out.split_once("\n6 boards: ").unwrap();
    let mut lines = end.lines();
    assert_eq!(lines.next(), Some("1 not judged, 1 with errors, 3 hold, 1 with nothing to ask of"));
    let value: Value = serde_json::from_str(&json(folder.path(), &["hw"]).out).unwrap();
    let boards = value["boards"].as_array().unwrap();
    let states = ["error", "holds", "holds", "not judged", "holds", "nothing asked"];
    for (board, state) in boards.iter().zip(states) {
        let line = lines.next().unwrap();
        let told = match &board["counts"]["regulators"] {
            _ if board["complete"] == false => "nothing could be read".to_owned(),
            count => format!("{count} regulators"),
        };
        let name = board["netlist"].as_str().unwrap();
        let start = format!("  {state:13}  {name:20}  {told}");
        assert!(line.starts_with(&start), "{line} is not {start}");
    }
    let sum = |key: &str| boards.iter().map(|board| board["counts"][key].as_u64().unwrap()).sum::<u64>();
    let total =
        format!("{} regulators, {} requirements: {} fail", sum("regulators"), sum("requirements"), sum("fails"));
    assert!(end.contains(&format!("\n\n{total}, ")), "{total}: {end}");
    assert!(end.trim_end().ends_with("local codes and licensed practice decide."), "{end}");
    assert!(!found.out.contains("hw/a/z.net · "), "a clean board has no section: {}", found.out);
    assert_eq!(found.out.matches("Distance, copper").count(), 1);
    let quiet = run(folder.path(), &["check", "hw", "--quiet"]);
    assert!(!quiet.out.contains("6 boards") && quiet.out.contains("U5 never comes up"));
}

#[cfg(unix)]
#[test]
fn links_are_not_followed_and_a_folder_that_cannot_be_read_is_told() {
    use std::os::unix::fs::{PermissionsExt, symlink};
    let folder = repository();
    let hw = folder.path().join("hw");
    fs::create_dir(folder.path().join("outside")).unwrap();
    fs::copy(hw.join("a/z.net"), folder.path().join("outside/o.net")).unwrap();
    symlink("../outside", hw.join("away")).unwrap();
    symlink("../outside/o.net", hw.join("o.net")).unwrap();
    symlink("loop.net", hw.join("loop.net")).unwrap();
    let found = json(folder.path(), &["hw"]);
    assert_eq!(netlists(&found).len(), 5, "{}", found.out);
    assert!(found.err.contains("2 links or devices were not followed"), "{}", found.err);
    assert_eq!(netlists(&json(folder.path(), &["hw/away"])), ["hw/away/o.net"], "a link that is named is followed");

    fs::set_permissions(hw.join("b"), fs::Permissions::from_mode(0o000)).unwrap();
    let found = json(folder.path(), &["hw"]);
    let is_barred = fs::read_dir(hw.join("b")).is_err();
    fs::set_permissions(hw.join("b"), fs::Permissions::from_mode(0o755)).unwrap();
    // Whoever may read everything is not barred by that.
    assert_eq!(
        (found.status, found.out.contains("the folder hw/b cannot be read")),
        if is_barred { (Some(2), true) } else { (Some(1), false) }
    );
}

#[test]
fn nothing_of_the_progress_reaches_a_pipe() {
    let folder = repository();
    for name in ["CI", "NO_COLOR"] {
        let output = program(folder.path()).args(["check", "hw/a", "hw/b"]).env(name, "1").output().unwrap();
        assert_eq!((output.status.code(), output.stderr.len()), (Some(0), 0));
    }
}
