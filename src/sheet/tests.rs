//! Behaviour of the whole room on small sheets.

use std::fs;
use std::path::{Path, PathBuf};
use std::time::{Duration, Instant, SystemTime};

use proptest::prelude::*;

use super::names::paths;
use super::sheets::{Sheets, Text};
use super::symbols::Symbols;
use crate::netlist::{self, Netlist};
use crate::source::Source;

/// A sheet of lists as version 8 writes it.
const QUOTED: &str = r#"(kicad_sch
	(version 20231120)
	(generator "eeschema")
	(uuid "11111111-aaaa-4aaa-8aaa-000000000000")
	(lib_symbols
		(symbol "Device:C"
			(uuid "library")
			(property "Reference" "C" (at 0 0 0))
			(symbol "C_0_1" (uuid "library"))))
	(symbol
		(lib_id "Device:C")
		(at 10.16 25.4 0)
		(unit 1)
		(uuid "AAAA-1")
		(property "Value" "10 \"u\" (X5R)" (at 0 0 0))
		(property "Reference" "C7" (at 0 0 0)
			(effects (font (size 1.27 1.27))))
		(pin "1" (uuid "pin"))
		(instances (project "x" (path "/1" (reference "C9") (unit 1)))))
	(symbol (lib_id "Device:R") (uuid "BBBB-2") (pin "1" (uuid "pin")))
	(sheet (uuid "sheet") (property "Sheetname" "Power")))
"#;

/// One as version 6 writes it.
const BARE: &str = "(kicad_sch (version 20211123) (generator eeschema)\n  (symbol (lib_id \"Device:C\") (at 1 2 0) (unit 1)\n    (in_bom yes) (on_board yes)\n    (uuid aaaa-1)\n    (property \"Reference\" \"C7\" (id 0) (at 1 2 0))\n  )\n)\n";

/// One of lines.
const LINES: &str = "EESchema Schematic File Version 4\nEELAYER 30 0\n$Sheet\nS 1 2 3 4\nU 5A1B2C3D\nF0 \"Power\" 50\n$EndSheet\n$Comp\nL Device:C C7\nU 1 1 5B2C3D4E\nP 4000 3000\nF 0 \"C7\" H 4100 3100 50  0000 L CNN\nF 1 \"10u\" H 4100 3000 50  0000 L CNN\n$EndComp\r\n$Comp\nL Device:R R1\nU 1 1 5B2C3D4F\n$EndComp\n$EndSCHEMATC\n";

fn located(text: &str, id: &str) -> Option<String> {
    Symbols::read(text).place(id).map(|span| Source::new("x", text).slice(span).to_owned())
}

#[test]
fn a_symbol_is_found_by_its_id_at_its_reference() {
    for text in [QUOTED, BARE] {
        assert_eq!(located(text, "aaaa-1").as_deref(), Some("\"C7\""));
        assert!(Symbols::read(text).is_whole());
    }
    assert_eq!(located(QUOTED, "/1111/AAAA-1").as_deref(), Some("\"C7\""), "behind the ids of its sheets");
    assert_eq!(located(QUOTED, "bbbb-2").as_deref(), Some("(symbol"), "without a reference: where it begins");
    assert_eq!(
        Symbols::read(QUOTED).ids().collect::<Vec<_>>(),
        ["aaaa-1", "bbbb-2"],
        "of library, pins and sheets none"
    );
    let marked = format!("\u{feff}{}", QUOTED.replace('\n', "\r\n"));
    assert_eq!(located(&marked, "aaaa-1").as_deref(), Some("\"C7\""));
}

#[test]
fn a_symbol_of_the_older_layout_is_found_too() {
    for text in [LINES.to_owned(), LINES.replace('\n', "\r\n"), format!("\u{feff}{LINES}")] {
        assert_eq!(located(&text, "5b2c3d4e").as_deref(), Some("\"C7\""));
        assert_eq!(located(&text, "5B2C3D4F").as_deref(), Some("$Comp"));
        assert_eq!(Symbols::read(&text).ids().count(), 2);
        assert!(Symbols::read(&text).is_whole());
    }
}

#[test]
fn what_is_broken_off_or_no_sheet_is_not_whole() {
    for text in ["", "(", ")", "(export (symbol (uuid \"a\")))", "kicad_sch", "(kicad_sch) )", "(kicad_sch \"x)"] {
        assert!(!Symbols::read(text).is_whole(), "{text}");
        assert_eq!(Symbols::read(text).ids().count(), 0, "{text}");
    }
    for (at, _) in QUOTED.trim_end().char_indices() {
        assert!(!Symbols::read(&QUOTED[..at]).is_whole(), "{at}");
    }
    let cut = &QUOTED[..QUOTED.find("(pin \"1\" (uuid \"pin\")))").unwrap()];
    assert_eq!(located(cut, "aaaa-1").as_deref(), Some("\"C7\""), "what stands ahead is found");
    assert!(!Symbols::read(&LINES[..LINES.len() - 4]).is_whole());
}

#[test]
fn depth_and_size_do_no_harm() {
    let deep = |count: usize| format!("(kicad_sch {}{})", "(symbol ".repeat(count), ")".repeat(count));
    let many = |count: usize| format!("(kicad_sch {})", "(symbol (uuid \"a\"))".repeat(count));
    let open = |count: usize| "(kicad_sch (symbol (uuid \"".repeat(count);
    for text in [deep(500_000), many(200_000), open(200_000), "\"\\".repeat(1_000_000), "F 0 ".repeat(1_000_000)] {
        let started = Instant::now();
        Symbols::read(&text);
        assert!(started.elapsed() < Duration::from_secs(10), "{:?}", started.elapsed());
    }
}

#[test]
fn a_name_means_only_plain_paths_inside_a_folder() {
    let shown = |name: &str| paths(name).iter().map(|path| path.to_str().unwrap().to_owned()).collect::<Vec<_>>();
    assert_eq!(shown("power.kicad_sch"), ["power.kicad_sch"]);
    assert_eq!(shown("sub/./power.sch"), ["sub/power.sch", "power.sch"]);
    assert_eq!(
        shown("/home/u/hw/a.kicad_sch"),
        ["home/u/hw/a.kicad_sch", "u/hw/a.kicad_sch", "hw/a.kicad_sch", "a.kicad_sch"]
    );
    assert_eq!(shown(r"C:\hw\a.sch"), ["hw/a.sch", "a.sch"]);
    assert_eq!(shown("../../lib/a.sch"), ["lib/a.sch", "a.sch"]);
    assert_eq!(shown("x/.git/a.sch"), ["a.sch"]);
    assert_eq!(shown("file:///etc/a.sch"), ["etc/a.sch", "a.sch"]);
    assert_eq!(shown("a.sch/"), ["a.sch"]);
    for none in [
        "",
        "/",
        "..",
        "../../etc/passwd",
        "/etc/shadow",
        "file:///etc/hostname",
        ".sch",
        "..sch",
        "a.sch\0",
        "a.net",
        "a.sch/..",
        "x/.kicad_sch",
        "C:a.sch",
        "a\n.sch",
    ] {
        assert_eq!(shown(none), [""; 0], "{none}");
    }
    assert_eq!(paths(&format!("{}a.sch", "x/".repeat(100_000))).len(), 9);
}

/// A netlist with a component on each of some sheets; the ids count from 1.
fn netlist_of(source: &str, sheets: &[&str]) -> Netlist {
    let components: String = (1..)
        .zip(sheets)
        .map(|(id, sheet)| {
            format!(
                "(comp (ref \"U{id}\") (property (name \"Sheetfile\") (value {sheet:?})) (tstamps \"id-{id}\"))\n"
            )
        })
        .collect();
    let text = format!("(export (version \"E\") (design (source {source:?})) (components {components}) (nets))");
    let netlist = netlist::read("x.net", text.as_bytes()).unwrap();
    assert_eq!(netlist.components.len(), sheets.len());
    netlist
}

/// A sheet with the symbols of some ids.
fn sheet(ids: &[usize]) -> String {
    let symbols: String = ids
        .iter()
        .map(|id| format!("\n  (symbol (uuid \"id-{id}\")\n    (property \"Reference\" \"U{id}\"))"))
        .collect();
    format!("(kicad_sch{symbols})\n")
}

/// What is found, as paths by reference; and what was asked for.
fn gathered(netlist: &Netlist, folders: &[&str], files: &[(&str, &str)]) -> (Vec<String>, Vec<PathBuf>) {
    let mut asked = Vec::new();
    let folders: Vec<PathBuf> = folders.iter().map(PathBuf::from).collect();
    let sheets = Sheets::gather(netlist, &folders, &mut |path: &Path| {
        asked.push(path.to_owned());
        let (name, text) = files.iter().find(|(name, _)| Path::new(name) == path)?;
        Some(Text { source: Source::new(*name, *text), newer: false })
    });
    let found = netlist.components.iter().map(|component| match sheets.locate(component) {
        Some(place) => format!("{}:{}", place.source.name(), place.position().line),
        None => "-".to_owned(),
    });
    (found.collect(), asked)
}

#[test]
fn names_that_lead_elsewhere_are_never_asked_for() {
    let names = [
        "../../../../etc/passwd",
        "/etc/shadow",
        "file:///etc/hostname",
        "/etc/x.kicad_sch",
        "../../../x.kicad_sch",
        r"..\..\x.sch",
        "//server/share/x.sch",
        "a/../../../x.sch",
        ".git/x.sch",
    ];
    let netlist = netlist_of("../../../../etc/passwd", &names);
    let (found, asked) = gathered(&netlist, &["hw"], &[("/etc/x.kicad_sch", &sheet(&[4]))]);
    assert_eq!(found, ["-"; 9]);
    assert!(!asked.is_empty());
    for path in asked {
        let plain = path.components().all(|part| matches!(part, std::path::Component::Normal(_)));
        assert!(plain && path.starts_with("hw") && !path.to_str().unwrap().contains(".git"), "{}", path.display());
    }
}

#[test]
fn sheets_are_found_beside_above_below_and_where_the_schematic_lies() {
    let netlist = netlist_of("/home/u/repo/hw/top.kicad_sch", &["top.kicad_sch", "sub/a.kicad_sch", "b.kicad_sch"]);
    let (one, two, three) = (sheet(&[1]), sheet(&[2]), sheet(&[9, 3]));
    let files: &[(&str, &str)] =
        &[("r/hw/top.kicad_sch", &one), ("r/hw/sub/a.kicad_sch", &two), ("r/hw/sub/b.kicad_sch", &three)];
    let places = ["r/hw/top.kicad_sch:3", "r/hw/sub/a.kicad_sch:3", "r/hw/sub/b.kicad_sch:5"];
    assert_eq!(gathered(&netlist, &["r/hw"], files).0, places, "beside");
    assert_eq!(gathered(&netlist, &["r/hw/out", "r/hw", "r"], files).0, places, "above");
    assert_eq!(gathered(&netlist, &["r/out", "r"], files).0, places, "beside the schematic that it names");
    let asked = gathered(&netlist, &["r/out", "r"], files).1;
    let mut once = asked.clone();
    once.sort();
    once.dedup();
    assert_eq!(once.len(), asked.len(), "no file is read twice");
}

#[test]
fn a_sheet_of_the_same_name_without_these_parts_is_another_boards() {
    let netlist = netlist_of("x.sch", &["a.kicad_sch", "a.kicad_sch", "a.kicad_sch"]);
    let (other, own) = (sheet(&[7, 8]), sheet(&[2, 3]));
    let both: &[(&str, &str)] = &[("a/a.kicad_sch", &other), ("b/a.kicad_sch", &own)];
    assert_eq!(gathered(&netlist, &["a", "b"], both).0, ["-", "b/a.kicad_sch:3", "b/a.kicad_sch:5"]);
    assert_eq!(gathered(&netlist, &["a", "b"], &both[..1]).0, ["-"; 3]);
}

#[test]
fn a_part_without_symbol_is_told_only_where_its_sheet_was_read_to_the_end() {
    let netlist = netlist_of("x.sch", &["a.kicad_sch", "a.kicad_sch", "b.kicad_sch", "b.kicad_sch", "c.kicad_sch"]);
    let gone = |a: &str, b: &str| {
        let files = [("a.kicad_sch", a.to_owned()), ("b.kicad_sch", b.to_owned())];
        let sheets = Sheets::gather(&netlist, &[PathBuf::new()], &mut |path: &Path| {
            let (name, text) = files.iter().find(|(name, _)| Path::new(name) == path)?;
            Some(Text { source: Source::new(*name, text.as_str()), newer: false })
        });
        sheets.without_symbol(&netlist).iter().map(|component| component.reference.clone()).collect::<Vec<_>>()
    };
    assert_eq!(gone(&sheet(&[1, 2]), &sheet(&[3, 4])), [""; 0]);
    assert_eq!(gone(&sheet(&[1]), &sheet(&[3, 4])), ["U2"]);
    assert_eq!(gone(&sheet(&[1, 4]), &sheet(&[3])), ["U2"], "U4 was moved to the other sheet");
    assert_eq!(gone(sheet(&[1]).trim_end().trim_end_matches(')'), &sheet(&[3, 4])), [""; 0], "cut off");
    assert_eq!(gone(&sheet(&[8]), &sheet(&[3])), ["U4"], "the first is another board's sheet");
}

/// A folder with a repository in which a netlist lies in a folder of its own.
fn repository() -> (tempfile::TempDir, PathBuf) {
    let root = tempfile::tempdir().unwrap();
    fs::create_dir_all(root.path().join("repo/.git")).unwrap();
    fs::create_dir_all(root.path().join("repo/hw")).unwrap();
    let netlist = root.path().join("repo/hw/x.net");
    fs::write(&netlist, "").unwrap();
    (root, netlist)
}

fn beside(netlist: &Path, name: &str) -> Option<PathBuf> {
    let read = netlist_of("x.kicad_sch", &[name]);
    let sheets = Sheets::beside(netlist, &read);
    sheets.locate(&read.components[0]).map(|place| PathBuf::from(place.source.name()))
}

#[test]
fn files_are_looked_for_up_to_the_folder_of_the_repository() {
    let (root, netlist) = repository();
    for (file, is_found) in
        [("repo/hw/a.sch", true), ("repo/b.sch", true), ("c.sch", false), ("repo/.git/d.sch", false)]
    {
        let path = root.path().join(file);
        fs::write(&path, sheet(&[1])).unwrap();
        let found = beside(&netlist, path.file_name().unwrap().to_str().unwrap());
        assert_eq!(found, is_found.then(|| path.clone()), "{file}");
        assert_eq!(beside(&netlist, path.to_str().unwrap()), found, "{file} by its whole path");
    }
    fs::remove_dir_all(root.path().join("repo/.git")).unwrap();
    assert_eq!(beside(&netlist, "b.sch"), None, "no repository: the netlist's own folder alone");
    assert!(beside(&netlist, "a.sch").is_some());
}

#[test]
fn only_plain_text_of_fair_size_is_read() {
    let (_root, netlist) = repository();
    let path = netlist.with_file_name("a.sch");
    fs::create_dir(&path).unwrap();
    assert_eq!(beside(&netlist, "a.sch"), None, "a folder");
    fs::remove_dir(&path).unwrap();
    fs::write(&path, [sheet(&[1]).as_bytes(), b"\xff"].concat()).unwrap();
    assert_eq!(beside(&netlist, "a.sch"), None, "not UTF-8");
    fs::write(&path, sheet(&[1])).unwrap();
    assert!(beside(&netlist, "a.sch").is_some());
    fs::File::options().write(true).open(&path).unwrap().set_len(super::LARGEST_SHEET + 1).unwrap();
    assert_eq!(beside(&netlist, "a.sch"), None, "too large");
}

#[cfg(unix)]
#[test]
fn no_link_leads_out() {
    use std::os::unix::fs::symlink;
    let (root, netlist) = repository();
    let folder = netlist.parent().unwrap();
    fs::create_dir(root.path().join("out")).unwrap();
    fs::write(root.path().join("out/a.sch"), sheet(&[1])).unwrap();
    fs::write(root.path().join("repo/b.sch"), sheet(&[1])).unwrap();
    symlink(root.path().join("out"), folder.join("far")).unwrap();
    symlink(root.path().join("out/a.sch"), folder.join("link.sch")).unwrap();
    symlink(root.path().join("repo"), folder.join("near")).unwrap();
    symlink("loop.sch", folder.join("loop.sch")).unwrap();
    for name in ["far/a.sch", "link.sch", "loop.sch"] {
        assert_eq!(beside(&netlist, name), None, "{name}");
    }
    assert!(beside(&netlist, "near/b.sch").is_some(), "a folder that is linked inside the repository");
}

#[test]
fn a_sheet_is_newer_only_by_more_than_what_a_clone_makes() {
    let (_root, netlist) = repository();
    let path = netlist.with_file_name("a.sch");
    fs::write(&path, sheet(&[1])).unwrap();
    let now = SystemTime::now();
    let read = netlist_of("a.sch", &["a.sch"]);
    for (behind, is_newer) in [(0, false), (30, false), (90, true), (86_400, true)] {
        let set = |path: &Path, to| fs::File::options().write(true).open(path).unwrap().set_modified(to).unwrap();
        set(&path, now);
        set(&netlist, now - Duration::from_secs(behind));
        let sheets = Sheets::beside(&netlist, &read);
        let newer: Vec<bool> = sheets.used().iter().map(|sheet| sheet.is_newer()).collect();
        assert_eq!(newer, [is_newer], "{behind} s");
        set(&path, now - Duration::from_secs(86_400));
        assert!(!Sheets::beside(&netlist, &read).used()[0].is_newer(), "older");
    }
}

proptest! {
    #[test]
    fn any_text_is_read_and_every_place_lies_in_it(
        text in "(\\(kicad_sch )?([()\"\\\\ \n]|uuid|symbol|property \"Reference\" |a|é){0,60}"
    ) {
        let symbols = Symbols::read(&text);
        for id in symbols.ids() {
            let span = symbols.place(id).unwrap();
            prop_assert!(text.get(span.start()..span.end()).is_some_and(|part| !part.is_empty()));
        }
    }

    #[test]
    fn any_lines_are_read_and_every_place_lies_in_them(
        lines in prop::collection::vec("(\\$Comp|\\$EndComp|U 1 1 [ab]|F 0 \"é?\"?|\r|L x y)", 0..20)
    ) {
        let text = format!("EESchema Schematic File\n{}", lines.join("\n"));
        let symbols = Symbols::read(&text);
        for id in symbols.ids() {
            let span = symbols.place(id).unwrap();
            prop_assert!(text.get(span.start()..span.end()).is_some_and(|part| !part.is_empty()));
        }
    }
}
