//! Folders of the user.

use std::fs;
use std::path::Path;

use super::super::{Knowledge, LARGEST_RULE_FILE, MOST_RULE_FILES};
use super::told;

fn write(folder: &Path, name: &str, text: &str) {
    let path = folder.join(name);
    fs::create_dir_all(path.parent().unwrap()).unwrap();
    fs::write(path, text).unwrap();
}

fn part(family: &str, names: &str) -> String {
    format!(
        "family = \"{family}\"\nmaker = \"house\"\nnames = [{names}]\nvoltages = [\"5 V\"]\nkind = \"series\"\n\
         rated_current = \"2 A\"\n[[sources]]\nid = \"a\"\ntitle = \"house sheet\"\nread = true\n"
    )
}

/// Problems without the folder's own path.
fn messages(folder: &Path, problems: &[crate::source::Problem]) -> Vec<String> {
    let path = folder.display().to_string();
    problems.iter().map(|problem| told(problem).replace(&path, "DIR").replace('\\', "/")).collect()
}

#[test]
fn a_later_file_of_the_same_name_takes_the_place_of_a_built_in_one_and_says_so() {
    let folder = tempfile::tempdir().unwrap();
    write(folder.path(), "parts/lp5907.toml", &part("LP5907 of the house", "\"LP5907*\""));
    let (knowledge, problems) = Knowledge::load(&[folder.path().to_owned()]);
    assert_eq!(
        messages(folder.path(), &problems),
        ["`DIR/parts/lp5907.toml` takes the place of `parts/lp5907.toml` (); "]
    );
    assert!(knowledge.family("LP5907").is_none() && knowledge.family("LP5907 of the house").is_some());
    assert_eq!(knowledge.replaced.len(), 1);
}

#[test]
fn loose_files_and_check_folders_are_taken_by_what_they_hold() {
    let folder = tempfile::tempdir().unwrap();
    write(folder.path(), "house.toml", &part("house", "\"HOUSE1*\""));
    write(folder.path(), "quiet/check.toml", "name = \"quiet\"\n");
    write(folder.path(), "quiet/good-1.net", "(export)");
    write(folder.path(), "readme.md", "not a rule");
    let (knowledge, problems) = Knowledge::load(&[folder.path().to_owned()]);
    assert_eq!(messages(folder.path(), &problems), Vec::<String>::new());
    assert!(knowledge.family("house").is_some());
    let check = knowledge.checks.get("quiet").unwrap();
    assert_eq!(check.keys().collect::<Vec<_>>(), ["check.toml", "good-1.net"]);
    assert!(knowledge.check_paths.get("quiet").unwrap().ends_with("quiet"));
}

#[test]
fn a_damaged_file_is_left_out_and_a_family_of_the_same_name_refused() {
    let folder = tempfile::tempdir().unwrap();
    write(folder.path(), "parts/a.toml", &part("LP5907", "\"HOUSE1*\""));
    write(folder.path(), "parts/b.toml", "family = \n");
    let version =
        part("c", "\"HOUSE2*\"").replace("kind", "version_of = \"LP5970\"\nmaker_words = [\"house\"]\nkind");
    write(folder.path(), "parts/c.toml", &version);
    let (knowledge, problems) = Knowledge::load(&[folder.path().to_owned()]);
    insta::assert_snapshot!(messages(folder.path(), &problems).join("\n"), @r#"
    DIR/parts/b.toml:1:10 the file is not valid TOML (string values must be quoted, expected literal string); 
    DIR/parts/a.toml:1:10 two families are called `LP5907` (the second); give it a name of its own; the first is in `parts/lp5907.toml`
    DIR/parts/c.toml:5:14 no family is called `LP5970` (an unknown family); did you mean `LP5907`?
    "#);
    assert!(knowledge.family("c").is_none());
}

#[test]
fn a_folder_that_is_missing_or_empty_is_told() {
    let folder = tempfile::tempdir().unwrap();
    let missing = folder.path().join("nowhere");
    let (_, problems) = Knowledge::load(&[missing, folder.path().to_owned()]);
    insta::assert_snapshot!(messages(folder.path(), &problems).join("\n"), @r#"
    the rules folder `DIR/nowhere` cannot be read (); name a folder that exists
    the rules folder `DIR` holds no rules (); put part files into `parts/`, checks into folders of `checks/`, supplies into `supplies/`, technologies into `technologies/`, device models into `devices/`
    "#);
}

#[test]
fn past_a_limit_rules_are_refused_and_told_once() {
    let folder = tempfile::tempdir().unwrap();
    let long = "#".repeat(usize::try_from(LARGEST_RULE_FILE).unwrap());
    write(folder.path(), "parts/0.toml", &format!("{long}#"));
    for number in 1..=18 {
        write(folder.path(), &format!("parts/{number:02}.toml"), &long);
    }
    let (_, problems) = Knowledge::load(&[folder.path().to_owned()]);
    let told = messages(folder.path(), &problems);
    let with = |words: &str| told.iter().filter(|message| message.contains(words)).count();
    assert_eq!(with("`DIR/parts/0.toml` is larger than 4 MiB"), 1, "{told:?}");
    assert_eq!(with("more than 64 MiB; `DIR/parts/17.toml` and what is behind it is not read"), 1, "{told:?}");
}

#[test]
fn a_folder_of_too_many_files_is_refused_whole() {
    let folder = tempfile::tempdir().unwrap();
    let parts = folder.path().join("parts");
    fs::create_dir(&parts).unwrap();
    for number in 0..=MOST_RULE_FILES {
        fs::File::create(parts.join(format!("{number}.txt"))).unwrap();
    }
    let (_, problems) = Knowledge::load(&[folder.path().to_owned()]);
    assert!(messages(folder.path(), &problems)[0].contains("`DIR/parts` has more than 4096 entries"));
}

#[cfg(unix)]
#[test]
fn links_and_pipes_in_a_rules_folder_are_refused_and_told() {
    use std::os::unix::fs::symlink;
    let (folder, outside) = (tempfile::tempdir().unwrap(), tempfile::tempdir().unwrap());
    write(outside.path(), "a.toml", &part("House A", "\"HOUSE-A\""));
    write(outside.path(), "check/check.toml", "");
    write(folder.path(), "parts/b.toml", &part("House B", "\"HOUSE-B\""));
    symlink(outside.path().join("a.toml"), folder.path().join("parts/a.toml")).unwrap();
    symlink(outside.path(), folder.path().join("checks")).unwrap();
    let made = std::process::Command::new("mkfifo").arg(folder.path().join("parts/p.toml")).status();
    let (knowledge, problems) = Knowledge::load(&[folder.path().to_owned()]);
    let told = messages(folder.path(), &problems);
    assert!(told.iter().any(|message| message.contains("`DIR/parts/a.toml` is a symbolic link, not a plain file")));
    assert!(told.iter().any(|message| message.contains("`DIR/checks` is a symbolic link, not a plain folder")));
    if made.is_ok_and(|status| status.success()) {
        assert!(told.iter().any(|message| message.contains("`DIR/parts/p.toml` is a device, pipe or socket")));
    }
    assert!(knowledge.family("House B").is_some() && knowledge.family("House A").is_none());
}
