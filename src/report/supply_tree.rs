//! The supply as a tree: source nets first, below each net what leads on from it, below that the net it feeds.

use std::collections::{BTreeMap, BTreeSet};

use super::figures::{gist, range};
use super::inert::{inert, inert_short};
use super::layout::{padded, widest, wrapped};
use super::look::Look;
use crate::circuit::{DeviceId, NetId};
use crate::facts::{Facts, Link, Rail, RailOrigin, Subject};
use crate::quantity::Grade;
use crate::recognize::{RegulatorId, RegulatorKind};

/// How deep a branch is drawn; what lies deeper begins a tree of its own, so that lines stay on a page.
const DEEPEST: usize = 12;
/// Most further feeds of a net that are named.
const MOST_FEEDS: usize = 3;
/// Least columns for the words behind the figures.
const WORDS: usize = 15;
/// Most characters of what a named source rests on.
const SOURCE: usize = 60;

/// The supply nets of a board as a tree.
pub(super) fn supply_tree(facts: &Facts<'_>, look: Look) -> String {
    let mut tree = Tree::of(facts);
    tree.grow();
    if tree.rows.is_empty() {
        return "No supply net is known.\n".to_owned();
    }
    let mut text = look.bold("Supply tree\n");
    text.push_str(&drawn(&tree.rows, look.width()));
    for circle in facts.flow().circles() {
        let names: Vec<_> = circle.iter().map(|net| tree.name(*net)).collect();
        text.push_str(&wrapped(&format!("{} feed each other", names.join(", ")), "  circle: ", "    ", look.width()));
    }
    text
}

/// A line of the tree.
#[derive(Debug)]
struct Row {
    /// The branches before the name.
    stem: String,
    /// The same on the lines below, where the row needs more than one.
    hang: String,
    name: String,
    range: String,
    load: String,
    words: String,
}

/// What is still to be drawn.
#[derive(Debug, Clone, Copy)]
enum Step {
    Net(NetId),
    /// A link that leads from a net to another.
    Link(Link, NetId),
    /// A regulator whose input lies on nothing, and its output.
    Unfed(RegulatorId, NetId),
}

#[derive(Debug)]
struct Tree<'f, 'a> {
    facts: &'f Facts<'a>,
    /// What feeds a net, in the order in which it was found.
    feeds: BTreeMap<NetId, Vec<(Link, NetId)>>,
    nets: BTreeSet<NetId>,
    shown: BTreeSet<NetId>,
    /// What lies too deep to be drawn where it hangs.
    later: Vec<Step>,
    rows: Vec<Row>,
}

impl<'f, 'a> Tree<'f, 'a> {
    fn of(facts: &'f Facts<'a>) -> Self {
        let ends = facts.regulators().flat_map(|(_, one)| [one.input_net, one.output_net]).flatten();
        let mut nets: BTreeSet<NetId> = facts.supply_nets().into_iter().chain(ends).collect();
        nets.retain(|net| !facts.circuit().net(*net).ground);
        let mut feeds: BTreeMap<NetId, Vec<(Link, NetId)>> = BTreeMap::new();
        for net in &nets {
            for (link, to) in facts.flow().fed(*net) {
                feeds.entry(to).or_default().push((link, *net));
            }
        }
        Self { facts, feeds, nets, shown: BTreeSet::new(), later: Vec::new(), rows: Vec::new() }
    }

    fn name(&self, net: NetId) -> String {
        inert(&self.facts.circuit().net(net).name).into_owned()
    }

    fn grow(&mut self) {
        let fed = |net: &NetId| self.feeds.contains_key(net);
        let told =
            |net: &NetId| !matches!(self.facts.rail(*net).origin, RailOrigin::Unknown | RailOrigin::Regulator(_));
        let (mut known, unknown): (Vec<NetId>, Vec<NetId>) =
            self.nets.iter().copied().filter(|net| !fed(net)).partition(told);
        known.sort_by_key(|net| rank(self.facts.rail(*net).origin));
        for net in known {
            self.root(Step::Net(net));
        }
        self.draw_unknown(&unknown);
        // Nets that feed each other in a circle hang on no source.
        let all: Vec<NetId> = self.nets.iter().copied().collect();
        for net in all {
            if !self.shown.contains(&net) {
                self.root(Step::Net(net));
            }
        }
    }

    /// Draws a tree, and what lay too deep in it behind it.
    fn root(&mut self, step: Step) {
        self.draw(vec![(step, String::new())]);
        let mut next = 0;
        while let Some(step) = self.later.get(next).copied() {
            self.draw(vec![(step, String::new())]);
            next += 1;
        }
        self.later.clear();
    }

    /// Nets of which nothing tells what feeds them, and outputs of regulators whose input is open.
    fn draw_unknown(&mut self, nets: &[NetId]) {
        if nets.is_empty() {
            return;
        }
        self.rows.push(Row::of_name(String::new(), "unknown source".to_owned()));
        let steps = nets.iter().map(|net| match self.facts.rail(*net).origin {
            RailOrigin::Regulator(id) => Step::Unfed(id, *net),
            _ => Step::Net(*net),
        });
        let steps: Vec<Step> = steps.collect();
        let mut stack = Vec::new();
        branch(&mut stack, "", &steps);
        self.draw(stack);
    }

    /// Draws steps from the last to the first, with all that hangs on them.
    fn draw(&mut self, mut stack: Vec<(Step, String)>) {
        while let Some((step, stem)) = stack.pop() {
            match step {
                Step::Link(link, net) => {
                    self.rows.push(Row::of_name(stem.clone(), self.link_name(link)));
                    stack.push((Step::Net(net), below(&stem)));
                }
                Step::Unfed(id, net) => {
                    let name = format!("{}, fed by nothing known", self.link_name(Link::Regulator(id)));
                    self.rows.push(Row::of_name(stem.clone(), name));
                    stack.push((Step::Net(net), below(&stem)));
                }
                Step::Net(net) => self.net(net, &stem, &mut stack),
            }
        }
    }

    fn net(&mut self, net: NetId, stem: &str, stack: &mut Vec<(Step, String)>) {
        if !self.shown.insert(net) {
            let row = Row::of_name(stem.to_owned(), self.name(net));
            self.rows.push(Row { words: "see above".to_owned(), ..row });
            return;
        }
        let fed: Vec<Step> = self.facts.flow().fed(net).map(|(link, to)| Step::Link(link, to)).collect();
        let inner = below(stem);
        let too_deep = inner.chars().count() >= DEEPEST * BRANCH && !fed.is_empty();
        let mut row = self.net_row(net, stem);
        if too_deep {
            row.words.push_str("; continued below");
            self.later.extend(&fed);
        }
        if !fed.is_empty() && !too_deep {
            row.hang = format!("{inner}│");
        }
        self.rows.push(row);
        if !too_deep {
            branch(stack, &inner, &fed);
        }
    }

    fn net_row(&self, net: NetId, stem: &str) -> Row {
        let rail = self.facts.rail(net);
        let load = self.facts.draw(net);
        let load = if load.evidence().next().is_some() { format!("load {}", range(&load)) } else { String::new() };
        let mut words = self.knowledge(&rail);
        words.push_str(&self.further_feeds(net));
        let row = Row::of_name(stem.to_owned(), self.name(net));
        Row { range: range(&rail.voltage), load, words, ..row }
    }

    /// Where the voltage of a net is known from.
    fn knowledge(&self, rail: &Rail) -> String {
        match rail.origin {
            RailOrigin::Unknown => "nothing tells what feeds it".to_owned(),
            RailOrigin::Named => {
                let found = rail.voltage.evidence().find(|evidence| evidence.grade == Grade::Inferred);
                found.map_or_else(
                    || gist(&rail.voltage),
                    |found| format!("guess: {}", inert_short(&found.source, SOURCE)),
                )
            }
            RailOrigin::Rectified(Some(device)) => {
                format!("rectified by {}; {}", self.part(device), gist(&rail.voltage))
            }
            _ => gist(&rail.voltage),
        }
    }

    /// The feeds of a net besides the one under which it is drawn.
    fn further_feeds(&self, net: NetId) -> String {
        let further = self.feeds.get(&net).map(Vec::as_slice).unwrap_or_default();
        let all: Vec<String> = further
            .iter()
            .map(|(link, from)| format!("{} from {}", self.link_name(*link), self.name(*from)))
            .collect();
        if all.len() < 2 {
            return String::new();
        }
        let shown = all.get(..MOST_FEEDS.min(all.len())).unwrap_or_default().join(", ");
        let more = all.len().saturating_sub(MOST_FEEDS);
        let more = if more > 0 { format!(" and {more} more") } else { String::new() };
        format!("; {} feeds: {shown}{more}", all.len())
    }

    fn part(&self, device: DeviceId) -> String {
        let device = self.facts.circuit().device(device);
        format!("{} {}", inert(&device.reference), inert(&device.value)).trim_end().to_owned()
    }

    /// The part of a link with its value, and what kind of regulator it is where that is not a series regulator.
    fn link_name(&self, link: Link) -> String {
        match link {
            Link::Series(device) => self.part(device),
            Link::Regulator(id) => {
                self.facts.regulator(Subject::Regulator(id)).map_or_else(String::new, |one| match one.kind {
                    RegulatorKind::Series => self.part(one.device),
                    kind => format!("{}, {}", self.part(one.device), kind.name()),
                })
            }
        }
    }
}

impl Row {
    fn of_name(stem: String, name: String) -> Self {
        let hang = below(&stem);
        Self { stem, hang, name, range: String::new(), load: String::new(), words: String::new() }
    }
}

/// Columns of a branch.
const BRANCH: usize = 3;

/// Declared sources first, those that only a name tells last.
fn rank(origin: RailOrigin) -> u8 {
    match origin {
        RailOrigin::Declared => 0,
        RailOrigin::Rectified(_) => 1,
        RailOrigin::Named => 2,
        _ => 3,
    }
}

/// Puts the branches below a net on the stack, the first on top.
fn branch(stack: &mut Vec<(Step, String)>, stem: &str, steps: &[Step]) {
    for (index, step) in steps.iter().enumerate().rev() {
        let sign = if index + 1 == steps.len() { "└─ " } else { "├─ " };
        stack.push((*step, format!("{stem}{sign}")));
    }
}

/// The branches on the line below one.
fn below(stem: &str) -> String {
    stem.replace("├─", "│ ").replace("└─", "  ")
}

/// Rows with their figures in columns; what does not fit is wrapped beside the branches.
fn drawn(rows: &[Row], width: usize) -> String {
    let heads: Vec<String> = rows.iter().map(|row| format!("  {}{}", row.stem, row.name)).collect();
    let with_figures = heads.iter().zip(rows).filter(|(_, row)| !(row.range.is_empty() && row.words.is_empty()));
    let first = widest(with_figures.map(|(head, _)| head.as_str())).min(width * 2 / 5);
    let (ranges, loads) =
        (widest(rows.iter().map(|row| row.range.as_str())), widest(rows.iter().map(|row| row.load.as_str())));
    let apart = first + ranges + loads + 6 + 2 * WORDS <= width;
    let mut out = String::new();
    for (head, row) in heads.iter().zip(rows) {
        let hang = format!("  {}", row.hang);
        if row.range.is_empty() && row.words.is_empty() {
            out.push_str(head.trim_end());
            out.push('\n');
            continue;
        }
        let mut lead = padded(head, first);
        if widest([head.as_str()]) > first {
            out.push_str(head);
            out.push('\n');
            lead = padded(&hang, first);
        }
        let mut lead = format!("{lead}  {}  ", padded(&row.range, ranges));
        let mut words = row.words.clone();
        if apart {
            lead.push_str(&padded(&row.load, loads));
            lead.push_str("  ");
        } else if !row.load.is_empty() {
            words = format!("{}; {words}", row.load);
        }
        let columns = widest([lead.as_str()]);
        let limit = width.max(columns + WORDS);
        let text = wrapped(&words, &lead, &padded(&hang, columns), limit);
        for line in text.lines() {
            out.push_str(line.trim_end());
            out.push('\n');
        }
    }
    out
}
