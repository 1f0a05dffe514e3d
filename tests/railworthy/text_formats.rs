//! The formats for other readers than people at a terminal: lines, Markdown.

use std::fmt::Write as _;
use std::fs;
use std::io::Write;
use std::process::{Command, Stdio};

use railworthy::report::LONGEST_PAGE;
use serde_json::Value;

use super::cli::{board, folder_with};
use super::program::{examples, run};

fn findings(folder: &std::path::Path, netlist: &str) -> Vec<Value> {
    let json = run(folder, &["check", netlist, "--format", "json"]).out;
    let value: Value = serde_json::from_str(&json).unwrap();
    value["boards"][0]["findings"].as_array().unwrap().clone()
}

#[test]
fn each_finding_is_a_line_with_its_place() {
    let lines = run(&examples(), &["check", "gauge-draft.net", "--format", "line"]);
    let wanted: Vec<String> = findings(&examples(), "gauge-draft.net")
        .iter()
        .map(|found| {
            let (at, text) = (&found["position"], |key: &str| found[key].as_str().unwrap().to_owned());
            let place = format!("{}:{}:{}", at["file"].as_str().unwrap(), at["line"], at["column"]);
            format!("{place}: {}: {} [{}]", text("level"), text("message"), text("check"))
        })
        .collect();
    assert!(wanted.len() > 5);
    assert_eq!(lines.out.lines().collect::<Vec<_>>(), wanted);
    assert_eq!(lines.status, Some(1));
    assert!(lines.err.starts_with("8 regulators, ") && lines.err.contains(" requirements: "), "{}", lines.err);
    assert!(lines.err.contains("cannot be seen in a netlist"), "{}", lines.err);
    let quiet = run(&examples(), &["check", "gauge-draft.net", "--format", "line", "--quiet"]);
    assert_eq!((quiet.out, quiet.err), (lines.out, String::new()));
}

#[test]
fn problems_are_lines_too_and_accepted_findings_are_none() {
    let accept = "[[accept]]\ncheck = \"input-capacitor\"\npart = \"U1\"\nreason = \"seen\"\n";
    let folder = folder_with("a.net", &board("+12V"));
    let lines = |text: &str| {
        fs::write(folder.path().join("a.railworthy.toml"), text).unwrap();
        run(folder.path(), &["check", "a.net", "no-such.net", "--format", "line"])
    };
    let open = lines("");
    assert_eq!(open.status, Some(2));
    assert!(open.out.contains("[input-capacitor]\n"), "{}", open.out);
    assert!(open.out.contains("no-such.net: error: no-such.net cannot be read: "), "{}", open.out);
    let accepted = lines(accept);
    assert!(!accepted.out.contains("[input-capacitor]") && accepted.err.contains("1 accepted"), "{}", accepted.err);
    assert!(lines("[[laod]]\n").out.contains("a.railworthy.toml:1:3: error: "));
}

#[test]
fn a_file_name_forges_no_line() {
    if cfg!(not(unix)) {
        return;
    }
    let name = "a\nb.net:3:4: error: forged %0A";
    let folder = folder_with(name, &board("+12V"));
    let out = run(folder.path(), &["check", name, "--format", "line"]).out;
    assert!(out.lines().count() > 1);
    for line in out.lines() {
        assert!(line.starts_with("a\\u{a}b.net\\u{3a}3\\u{3a}4\\u{3a} error\\u{3a} forged %0A:1:"), "{line}");
    }
}

#[test]
fn a_comment_has_the_verdict_a_row_for_each_finding_and_the_figures_folded() {
    let found = findings(&examples(), "gauge-draft.net");
    let page = run(&examples(), &["check", "gauge-draft.net", "--format", "markdown"]).out;
    let count = |level: &str| found.iter().filter(|found| found["level"] == level).count();
    let (errors, warnings) = (count("error"), count("warning"));
    assert!(errors > 1 && warnings > 1);
    assert!(page.starts_with(&format!("### railworthy: {errors} errors, {warnings} warnings, ")), "{page}");
    let rows: Vec<&str> = page.lines().filter(|line| line.starts_with("| ")).skip(2).collect();
    let wanted = found.iter().map(|found| {
        let text = |key: &str| found[key].as_str().unwrap();
        let [part, message, check] = ["subject", "message", "check"].map(|key| format!("` {} `", text(key)));
        format!("| {} | {part} | {message} | {check} |", text("level"))
    });
    assert_eq!(rows, wanted.collect::<Vec<_>>());
    let folded = page.split("<details><summary>Figures and remedies</summary>\n").nth(1).unwrap();
    assert_eq!(folded.matches("```text\n").count(), errors + warnings);
    for found in found.iter().filter(|found| found["level"] != "note") {
        let told = format!("```text\n{}: {}\n", found["level"].as_str().unwrap(), found["message"].as_str().unwrap());
        assert!(folded.contains(&told), "{told} is not in {folded}");
    }
    assert!(folded.contains("\n  help: ") && folded.contains("\n  to settle: declare "), "{folded}");
    let clean = run(&examples(), &["check", "gauge-release.net", "--format", "markdown"]);
    assert!(clean.out.starts_with("### railworthy: everything asked holds\n"), "{}", clean.out);
    assert!(clean.out.contains("local codes and licensed practice decide"));
    let lost = run(&examples(), &["check", "no-such.net", "--format", "markdown"]);
    assert!(lost.out.starts_with("### railworthy: not wholly judged\n"), "{}", lost.out);
    assert!(lost.out.contains("| error | – | ` no-such.net cannot be read: "), "{}", lost.out);
}

#[test]
fn a_comment_on_several_boards_names_them_and_what_was_accepted() {
    let folder = folder_with("a.net", &board("+12V"));
    let accept = "[[accept]]\ncheck = \"input-capacitor\"\npart = \"U1\"\nreason = \"seen | on build 2\"\n";
    fs::write(folder.path().join("a.railworthy.toml"), accept).unwrap();
    fs::write(folder.path().join("b.net"), board("VBAT")).unwrap();
    let page = run(folder.path(), &["check", ".", "--format", "markdown"]).out;
    assert!(page.contains("<details><summary>1 accepted</summary>"), "{page}");
    assert!(page.contains("| ` a.net ` |") && page.contains("` seen \\| on build 2 `"), "{page}");
    assert!(page.contains("| ` b.net ` | 1 regulator: "), "{page}");
    assert!(page.contains("` b.net ` has a battery, mains or a transformer: "), "{page}");
    assert_eq!(page.matches("<details>").count(), page.matches("\n</details>\n").count());
}

#[test]
fn a_comment_stays_within_its_limit_on_whole_rows_and_tells_what_is_left_out() {
    // The blocks of one regulator each have findings of their own; the names cost more than they seem to.
    let name = "\u{202e}##[x]|`".repeat(60);
    let folder = tempfile::tempdir().unwrap();
    for place in 0..300 {
        fs::write(folder.path().join(format!("{place:03}.net")), board(&format!("{name}{place}"))).unwrap();
    }
    let page = run(folder.path(), &["check", ".", "--format", "markdown"]).out;
    assert!(page.encode_utf16().count() <= LONGEST_PAGE, "{}", page.len());
    assert!(page.encode_utf16().count() > LONGEST_PAGE / 2, "{}", page.len());
    assert!(page.contains(" more findings left out to keep this short"), "{page}");
    assert!(page.trim_end().ends_with("cannot be seen in a netlist."), "the caution is kept");
    for line in page.lines().filter(|line| line.starts_with('|')) {
        assert!(line.ends_with(" |"), "{line}");
    }
    assert_eq!(page.matches("<details>").count(), page.matches("\n</details>\n").count());
}

/// Names that are markup, as others hide them in a netlist.
pub(crate) const MARKUP: &[&str] = &[
    "](javascript:alert(1))",
    "![x](https://e.example/p)",
    "`a`|b|``",
    "a\\|b\\\\|c",
    "\\",
    "`",
    "@org/team #1",
    "<!--",
    "</details></table>",
    "| --- |\n# H",
    "</script><script>alert(1)</script>",
    "\" onload=alert(1) x=\"",
    "'><img src=x onerror=alert(1)>",
    "https://e.example www.e.example a@e.example",
    "&#x3c;b&#x3e;",
    "~~~\n```\n# H",
    "$a$",
];

/// A page as an independent reader turns it into HTML; `None` where that reader is not here.
fn html(page: &str) -> Option<String> {
    let mut command = Command::new("cmark-gfm");
    command.args(["-e", "table", "-e", "autolink", "-e", "strikethrough", "--unsafe"]);
    let child = command.stdin(Stdio::piped()).stdout(Stdio::piped()).spawn();
    let Ok(mut child) = child else {
        #[allow(clippy::print_stderr, reason = "a test that skips says so")]
        {
            eprintln!("skipped: cmark-gfm is not here");
        }
        return None;
    };
    child.stdin.take().unwrap().write_all(page.as_bytes()).unwrap();
    Some(String::from_utf8(child.wait_with_output().unwrap().stdout).unwrap())
}

#[test]
fn names_are_no_markup_in_a_comment() {
    let mut rows = 0;
    for name in MARKUP {
        let folder = folder_with("a.net", &board(name));
        let found = findings(folder.path(), "a.net");
        let page = run(folder.path(), &["check", "a.net", "--format", "markdown"]).out;
        let mut bare = String::new();
        let mut fence = "";
        for line in page.lines() {
            let marks = line.len() - line.trim_start_matches('`').len();
            if fence.is_empty() && marks >= 3 && line.ends_with("text") {
                fence = &line[..marks];
            } else if !fence.is_empty() {
                fence = if line == fence { "" } else { fence };
            } else {
                let _ = writeln!(bare, "{line}");
            }
        }
        assert_eq!(fence, "", "every block ends: {page}");
        assert_eq!(bare.lines().filter(|line| line.starts_with('|')).count(), found.len() + 2, "{page}");
        let Some(html) = html(&page) else { continue };
        for tag in ["<a ", "<img", "<h1", "<script", "<del", "<!--", "javascript:alert(1))\""] {
            assert!(!html.contains(tag), "{name}: {tag} in {html}");
        }
        assert_eq!(html.matches("<h3").count(), 1, "{html}");
        assert_eq!(html.matches("<tr>").count(), found.len() + 1, "{name}: {html}");
        let cells = html.matches("<td>").count();
        assert_eq!(cells, found.len() * 4, "{name}: {html}");
        assert_eq!(html.matches("<details>").count(), 1, "{html}");
        assert!(html.trim_end().ends_with("cannot be seen in a netlist.</p>"), "{html}");
        rows += found.len();
    }
    assert!(rows > MARKUP.len() || html("").is_none());
}
