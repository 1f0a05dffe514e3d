//! Folders of the user.

use std::fs;
use std::path::Path;

use super::super::Knowledge;
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
    the rules folder `DIR` holds no rules (); put part files into `parts/`, checks into folders of `checks/`, supplies into `supplies/`, technologies into `technologies/`
    "#);
}
