//! Results as SARIF 2.1.0, the OASIS standard that code hosts and editors read.
//!
//! One run holds all boards. Nothing in it depends on the machine, the time, or the folder that the program runs in.

mod artifacts;
mod log;
mod message;
mod names;
mod notices;
mod places;
mod results;
mod rules;

pub use names::Folders;

use std::collections::BTreeMap;

use self::artifacts::Artifacts;
use self::log::{Base, Driver, Invocation, Log, Run, Text, Tool};
use self::rules::Rules;
use super::board::BoardResult;
use super::json_text;
use crate::review::Reviewed;

/// Most results of a run; hosts refuse more.
const MOST_RESULTS: usize = 25_000;

/// The base that paths within the project are relative to.
const PROJECT: &str = "SRCROOT";
/// The base of what lies outside.
const OUTSIDE: &str = "OUTSIDE";

/// Where one learns more: the home page, where the package names one; else what to type.
const INFORMATION: &str = if env!("CARGO_PKG_HOMEPAGE").is_empty() {
    "data:text/plain,railworthy%20--help"
} else {
    env!("CARGO_PKG_HOMEPAGE")
};

/// The result of some boards; files are named from the folders.
#[must_use]
pub fn check(boards: &[BoardResult], folders: &Folders) -> String {
    let told = boards.iter().flat_map(|board| board.findings().map(move |found| Told { board, found, state: None }));
    let told = told.collect();
    written(&boards.iter().collect::<Vec<_>>(), told, folders)
}

/// A finding as a result.
#[derive(Debug, Clone, Copy)]
pub(super) struct Told<'a> {
    /// Its board.
    pub(super) board: &'a BoardResult,
    /// The finding.
    pub(super) found: &'a Reviewed,
    /// What it is beside an earlier run, by the words of the standard; of all results of a run or of none.
    pub(super) state: Option<&'static str>,
}

/// A run that judged some boards and tells some findings.
pub(super) fn written(boards: &[&BoardResult], told: Vec<Told<'_>>, folders: &Folders) -> String {
    json_text::text(&log(boards, told, folders))
}

fn log(boards: &[&BoardResult], told: Vec<Told<'_>>, folders: &Folders) -> Log {
    let artifacts = Artifacts::of(boards, folders);
    let rules = Rules::of(boards);
    let (results, left_out) = results::results(told, &artifacts, &rules, MOST_RESULTS);
    let driver = Driver {
        name: env!("CARGO_PKG_NAME"),
        version: env!("CARGO_PKG_VERSION"),
        semantic_version: env!("CARGO_PKG_VERSION"),
        information_uri: INFORMATION,
        short_description: Text::new(format!("{}.", env!("CARGO_PKG_DESCRIPTION"))),
        language: "en-GB",
        rules: rules.into_descriptors(),
        notifications: notices::descriptors(),
    };
    let (configuration, execution) = notices::notices(boards, &artifacts, left_out);
    let invocation = Invocation {
        execution_successful: boards.iter().all(|board| board.is_complete()),
        tool_configuration_notifications: configuration,
        tool_execution_notifications: execution,
    };
    let run = Run {
        tool: Tool { driver },
        invocations: vec![invocation],
        original_uri_base_ids: bases(),
        artifacts: artifacts.into_list(),
        column_kind: "unicodeCodePoints",
        newline_sequences: ["\r\n", "\n"],
        language: "en-GB",
        results,
    };
    Log { schema: log::SCHEMA, version: log::VERSION, runs: vec![run] }
}

/// What the bases of the paths are; where they lie on this machine concerns nobody.
fn bases() -> BTreeMap<&'static str, Base> {
    let base = |text: &str| Base { description: Text::new(text.to_owned()) };
    BTreeMap::from([
        (PROJECT, base("The folder that holds the project's version control, else the folder that the tool ran in.")),
        (OUTSIDE, base("What lies outside the project, by as much of its path as tells it from the others.")),
    ])
}
