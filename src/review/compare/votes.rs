//! Nets by the pins on them: each pair of pins speaks for the pair of nets that they lie on.

use std::cmp::Reverse;
use std::collections::HashMap;

use super::graph::Graph;
use super::pairs::Pairs;

/// What a pin says that has the same number on both boards.
const SAME_PIN: usize = 2;
/// What a pin says of a part that may have been turned round.
const EITHER_PIN: usize = 1;

/// Most pins of one number on one part that speak; of more, none could be told from another.
const MOST_ALIKE: usize = 4;

/// The nets for which most pins speak; where as many speak for two, those of the same name. What no pin speaks for is
/// known by its name, where `names` count and people gave it.
pub(super) fn nets(old: &Graph<'_>, new: &Graph<'_>, devices: &Pairs, names: bool) -> Pairs {
    let mut pairs = Pairs::new(old.net_count(), new.net_count());
    let mut all: Vec<((usize, usize), usize)> = count(old, new, devices).into_iter().collect();
    all.sort_by_key(|((was, is), votes)| (Reverse(*votes), old.given_name(*was) != new.given_name(*is), *was, *is));
    for ((was, is), _) in all {
        pairs.join(was, is);
    }
    if names {
        by_name(old, new, &mut pairs);
    }
    pairs
}

// Sorted before it is gone through.
fn count(old: &Graph<'_>, new: &Graph<'_>, devices: &Pairs) -> HashMap<(usize, usize), usize> {
    let mut votes: HashMap<(usize, usize), usize> = HashMap::new();
    let mut there: HashMap<u32, Vec<(u32, usize)>> = HashMap::new();
    for was in 0..old.device_count() {
        let Some(is) = devices.new_of(was) else { continue };
        there.clear();
        for end in new.pins(is) {
            let alike = there.entry(end.label).or_default();
            if alike.len() < MOST_ALIKE {
                alike.push((end.number, end.at));
            }
        }
        for end in old.pins(was) {
            for (number, net) in there.get(&end.label).into_iter().flatten() {
                let weight = if *number == end.number { SAME_PIN } else { EITHER_PIN };
                *votes.entry((end.at, *net)).or_default() += weight;
            }
        }
    }
    votes
}

fn by_name(old: &Graph<'_>, new: &Graph<'_>, pairs: &mut Pairs) {
    let mut by_name: HashMap<&str, Vec<usize>> = HashMap::new();
    for at in pairs.left_new() {
        if let Some(name) = new.given_name(at) {
            by_name.entry(name).or_default().push(at);
        }
    }
    let left: Vec<usize> = pairs.left_old().collect();
    for at in left {
        if let Some([only]) = old.given_name(at).and_then(|name| by_name.get(name)).map(Vec::as_slice) {
            pairs.join(at, *only);
        }
    }
}
