//! What could not be read, and what was odd, as notifications.

use std::collections::BTreeSet;

use super::artifacts::Artifacts;
use super::log::{Configuration, Descriptor, DescriptorReference, Help, Location, Notification, Text};
use super::message::sentence;
use super::rules::pascal;
use crate::report::board::BoardResult;
use crate::report::level_of;
use crate::source::{Problem, Span};

/// A kind of notification: its id, level, what it says, and what to do.
struct Kind {
    id: &'static str,
    level: &'static str,
    says: &'static str,
    help: &'static str,
}

const RULES: usize = 0;
const DECLARATIONS: usize = 1;
const INPUT: usize = 2;
const LEFT_OUT: usize = 3;

/// Every kind, in the order of the constants above.
const KINDS: [Kind; 4] = [
    Kind {
        id: "rule-problem",
        level: "error",
        says: "Something in a folder of rules is wrong or odd.",
        help: "Correct the file; `railworthy vet` lists all that is wrong in a folder.",
    },
    Kind {
        id: "declaration-problem",
        level: "error",
        says: "Something in a board file is wrong or odd.",
        help: "Correct the board file; what it says there was not used.",
    },
    Kind {
        id: "netlist-problem",
        level: "error",
        says: "Something of a netlist was not read, or is odd.",
        help: "Export the netlist again; what could be read of it was judged.",
    },
    Kind {
        id: "results-left-out",
        level: "warning",
        says: "There were more results than a run may hold.",
        help: "Check fewer boards in one call, or take the result as JSON, which holds all of them.",
    },
];

/// The kinds as descriptors.
pub(super) fn descriptors() -> Vec<Descriptor> {
    KINDS.iter().map(descriptor).collect()
}

fn descriptor(kind: &Kind) -> Descriptor {
    Descriptor {
        id: kind.id.to_owned(),
        name: pascal(kind.id),
        short_description: Text::new(kind.says.to_owned()),
        full_description: Text::new(kind.says.to_owned()),
        help: Help { text: kind.help.to_owned(), markdown: kind.help.to_owned() },
        default_configuration: Configuration { level: kind.level },
        properties: None,
    }
}

/// What tells problems apart: the message, its file and place, or the netlist that one without a place is about.
type Told<'a> = (&'a str, Option<(&'a str, Span)>, Option<&'a str>);

/// What is told of rules and board files, and what of the run itself; what boards share is told once.
pub(super) fn notices(
    boards: &[&BoardResult],
    artifacts: &Artifacts,
    left_out: usize,
) -> (Vec<Notification>, Vec<Notification>) {
    let (mut configuration, mut execution) = (Vec::new(), Vec::new());
    let mut told: BTreeSet<Told<'_>> = BTreeSet::new();
    for board in boards {
        let rules = board.rule_problems.iter().map(|problem| (problem, None));
        let others = board.problems.iter().map(|problem| (problem, Some(board.netlist.as_str())));
        for (problem, netlist) in rules.chain(others) {
            let place = problem.place().map(|(source, span)| (source.name(), span));
            // One without a place is about the netlist that it was met with.
            let about = netlist.filter(|_| place.is_none());
            if !told.insert((problem.message(), place, about)) {
                continue;
            }
            let kind = kind(netlist, place.map(|(name, _)| name));
            let list = if kind == INPUT { &mut execution } else { &mut configuration };
            list.extend(notice(kind, problem, about, artifacts));
        }
    }
    if left_out > 0 {
        let text = format!("{left_out} more results are left out, the least grave ones.");
        execution.extend(notification(LEFT_OUT, "warning", text, None));
    }
    (configuration, execution)
}

fn kind(netlist: Option<&str>, place: Option<&str>) -> usize {
    match (netlist, place) {
        (None, _) => RULES,
        (Some(netlist), Some(place)) if netlist != place => DECLARATIONS,
        (Some(_), _) => INPUT,
    }
}

fn notice(kind: usize, problem: &Problem, about: Option<&str>, artifacts: &Artifacts) -> Option<Notification> {
    let level = level_of(problem).name();
    let mut text = sentence(&artifacts.without_machine(problem.message()));
    if let Some(advice) = problem.advice() {
        text.push_str(&format!(" To do: {}", sentence(&artifacts.without_machine(advice))));
    }
    let place = match problem.place() {
        Some((source, span)) => artifacts.place(source, span),
        None => about.and_then(|name| artifacts.file(name)),
    };
    let location = place.map(|place| Location { physical_location: Some(place), ..Location::default() });
    notification(kind, level, text, location)
}

fn notification(kind: usize, level: &'static str, text: String, location: Option<Location>) -> Option<Notification> {
    let id = KINDS.get(kind)?.id;
    Some(Notification {
        descriptor: DescriptorReference { id, index: kind },
        level,
        message: Text::new(text),
        locations: location.into_iter().collect(),
    })
}
