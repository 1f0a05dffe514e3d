//! Colours that tell parts and nets apart by what they are and by what lies around them.
//!
//! Each round gives a device a colour of its own colour and those of the nets at its pins, and a net one of those of the
//! devices on it, so that equal colours after `n` rounds mean equal surroundings `n` steps far (colour refinement).

use std::collections::HashMap;

use super::graph::{End, Graph};
use super::pairs::Pairs;

/// How far surroundings are looked at.
const ROUNDS: usize = 6;
/// A net with more pins than this is taken for a rail where names do not count: what one part on it is says nothing of
/// another.
const RAIL: usize = 12;

/// The colours of the devices of both boards after each round, the first the widest.
pub(super) type Rounds = Vec<[Vec<u32>; 2]>;

/// Gives out a small number for each key that it has not seen.
#[derive(Debug, Default)]
struct Numbers(HashMap<Vec<u32>, u32>);

impl Numbers {
    fn of(&mut self, key: Vec<u32>) -> u32 {
        let next = u32::try_from(self.0.len()).unwrap_or(u32::MAX);
        *self.0.entry(key).or_insert(next)
    }
}

/// What names a thing at the start.
#[derive(Debug, PartialEq, Eq, Hash)]
enum Start<'a> {
    /// It is in a pair already.
    Pair(usize),
    Device(&'a str, &'a str),
    Name(&'a str),
    /// A rail without a name that counts; whether it is a ground.
    Rail(bool),
    /// Any other net.
    Any,
}

/// One board being coloured.
struct Side<'g, 'a> {
    graph: &'g Graph<'a>,
    devices: Vec<u32>,
    nets: Vec<u32>,
    /// Whether a net keeps its colour, so that nothing is told through it.
    fixed: Vec<bool>,
}

/// The colours of the devices, the widest surroundings first. Where `names` count, a net with a name that people gave
/// is known by it; else by what lies around it, rails apart.
pub(super) fn rounds(old: &Graph<'_>, new: &Graph<'_>, devices: &Pairs, nets: &Pairs, names: bool) -> Rounds {
    let mut starts: HashMap<Start<'_>, u32> = HashMap::new();
    let paired_old = |place: usize| Some(place);
    let mut sides = [
        side(old, names, &mut starts, |at| devices.new_of(at).and(paired_old(at)), |at| nets.new_of(at).map(|_| at)),
        side(new, names, &mut starts, |at| devices.old_of(at), |at| nets.old_of(at)),
    ];
    let mut rounds: Rounds = Vec::with_capacity(ROUNDS);
    for _ in 0..ROUNDS {
        let (mut of_devices, mut of_nets) = (Numbers::default(), Numbers::default());
        for side in &mut sides {
            let devices: Vec<u32> = (0..side.graph.device_count())
                .map(|at| of_devices.of(key(&side.devices, at, side.graph.pins(at), &side.nets)))
                .collect();
            let nets: Vec<u32> = (0..side.graph.net_count())
                .map(|at| {
                    let own = side.nets.get(at).copied().unwrap_or(0);
                    if side.fixed.get(at).copied().unwrap_or(true) {
                        of_nets.of(vec![own])
                    } else {
                        of_nets.of(key(&side.nets, at, side.graph.nodes(at), &side.devices))
                    }
                })
                .collect();
            (side.devices, side.nets) = (devices, nets);
        }
        rounds.push([0, 1].map(|at: usize| sides.get(at).map(|side| side.devices.clone()).unwrap_or_default()));
    }
    rounds.reverse();
    rounds
}

/// The own colour, then those at the ends in order.
fn key(own: &[u32], at: usize, ends: &[End], others: &[u32]) -> Vec<u32> {
    let mut around: Vec<(u32, u32)> =
        ends.iter().map(|end| (end.label, others.get(end.at).copied().unwrap_or(0))).collect();
    around.sort_unstable();
    std::iter::once(own.get(at).copied().unwrap_or(0)).chain(around.into_iter().flat_map(|(a, b)| [a, b])).collect()
}

fn side<'g, 'a>(
    graph: &'g Graph<'a>,
    names: bool,
    starts: &mut HashMap<Start<'a>, u32>,
    device_pair: impl Fn(usize) -> Option<usize>,
    net_pair: impl Fn(usize) -> Option<usize>,
) -> Side<'g, 'a> {
    let mut number = |start: Start<'a>| {
        let next = u32::try_from(starts.len()).unwrap_or(u32::MAX);
        *starts.entry(start).or_insert(next)
    };
    let devices = (0..graph.device_count()).map(|at| {
        number(match (device_pair(at), graph.device(at)) {
            (Some(pair), _) => Start::Pair(pair),
            (None, Some(device)) => Start::Device(device.value.trim(), device.symbol()),
            (None, None) => Start::Any,
        })
    });
    let devices: Vec<u32> = devices.collect();
    let mut fixed = Vec::with_capacity(graph.net_count());
    let mut nets = Vec::with_capacity(graph.net_count());
    for at in 0..graph.net_count() {
        let name = graph.given_name(at).filter(|_| names);
        let start = match (net_pair(at), name) {
            (Some(pair), _) => Start::Pair(pair),
            (None, Some(name)) => Start::Name(name),
            (None, None) if graph.is_ground(at) || graph.nodes(at).len() > RAIL => Start::Rail(graph.is_ground(at)),
            (None, None) => Start::Any,
        };
        fixed.push(start != Start::Any);
        nets.push(number(start));
    }
    Side { graph, devices, nets, fixed }
}
