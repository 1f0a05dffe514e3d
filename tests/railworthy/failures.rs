//! Field failures that people told in public: the board as it failed is flagged, the one with the accepted cure is not.

use std::collections::BTreeSet;

use railworthy::checks::Level;

use crate::judge::{Rules, loud};
use crate::shared::shared_folder;

/// The failures that the built-in checks answer for.
const JUDGED: [&str; 12] = ["A02", "A09", "B03", "B05", "C01", "C06", "D02", "D10", "E02", "E07", "F01", "J04"];

struct Expectation {
    id: String,
    checks: BTreeSet<String>,
    parts: BTreeSet<String>,
}

fn expectations(folder: &std::path::Path) -> Vec<Expectation> {
    let table = std::fs::read_to_string(folder.join("expectations.tsv")).unwrap();
    let set = |text: &str| text.split('|').map(str::to_owned).collect();
    table
        .lines()
        .skip(1)
        .map(|line| line.split('\t').collect::<Vec<_>>())
        .filter(|row| JUDGED.contains(&row[0]))
        .map(|row| Expectation { id: row[0].to_owned(), checks: set(row[1]), parts: set(row[2]) })
        .collect()
}

#[test]
fn a_board_that_failed_in_the_field_is_flagged_and_the_cured_one_is_not() {
    let Some(folder) = shared_folder().map(|shared| shared.join("failures")) else { return };
    let rules = Rules::built_in();
    let expectations = expectations(&folder);
    assert_eq!(expectations.len(), JUDGED.len());
    let mut wrong = Vec::new();
    for Expectation { id, checks, parts } in expectations {
        let bad = rules.judge(&folder.join(format!("{id}-bad.net")));
        let flagged = bad.findings.iter().any(|reviewed| {
            reviewed.finding.level != Level::Note
                && checks.contains(&reviewed.finding.check)
                && reviewed.parts.iter().any(|part| parts.contains(part))
        });
        if !flagged {
            wrong.push(format!("{id}-bad is not flagged by {checks:?}; it says {:#?}", loud(&bad)));
        }
        let good = rules.judge(&folder.join(format!("{id}-good.net")));
        let false_alarm = good.findings.iter().any(|reviewed| {
            reviewed.finding.level == Level::Error
                || (reviewed.finding.level == Level::Warning && checks.contains(&reviewed.finding.check))
        });
        if false_alarm {
            wrong.push(format!("{id}-good is flagged: {:#?}", loud(&good)));
        }
    }
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}
