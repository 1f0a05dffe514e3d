//! The resistors that set an adjustable part.

use crate::circuit::{Circuit, DeviceId, NetId};

use super::model::Divider;
use super::walk::{Chain, chains, is_tap};

/// Where a divider may end.
#[derive(Debug, Clone, Copy)]
pub(super) struct Ends<'a> {
    /// The part's output net (a shunt's cathode, or anode for a negative one).
    pub(super) output: Option<NetId>,
    /// The nets of its ground pins.
    pub(super) grounds: &'a [NetId],
    /// Whether the part has a ground pin at all; without one whatever is not the output is the lower end.
    pub(super) has_ground: bool,
}

/// Reads the divider around an adjust net.
pub(super) fn read(circuit: &Circuit, adjust: NetId, ends: Ends<'_>) -> Divider {
    let mut divider = Divider {
        upper: Vec::new(),
        upper_parallel: Vec::new(),
        lower: Vec::new(),
        lower_parallel: Vec::new(),
        senses: None,
        returns: None,
        trimmed: false,
    };
    let is_ground = |net: NetId| ends.grounds.contains(&net) || circuit.net(net).ground;
    if Some(adjust) == ends.output {
        divider.senses = Some(adjust);
        // The adjust pin strapped to the output may still see a set resistor to ground, as a load only.
        return divider;
    }
    if is_ground(adjust) {
        divider.returns = Some(adjust);
        return divider;
    }
    if !is_tap(circuit, adjust) {
        divider.senses = Some(adjust);
        return divider;
    }
    let mut stops: Vec<NetId> = ends.grounds.to_vec();
    stops.extend(ends.output);
    let (mut upper, mut lower, mut other) = (Vec::new(), Vec::new(), Vec::new());
    for chain in chains(circuit, adjust, &stops) {
        if Some(chain.end) == ends.output {
            upper.push(chain);
        } else if is_ground(chain.end) {
            lower.push(chain);
        } else if chain.end != adjust {
            other.push(chain);
        }
    }
    if upper.is_empty() && (ends.has_ground || !lower.is_empty()) {
        // What is sensed is another net: beyond a sense resistor or ferrite, or another rail altogether. Of several the
        // one with most pins is the rail.
        other.sort_by_key(|chain| std::cmp::Reverse(circuit.pin_count(chain.end)));
        let rail = other.first().map(|chain| chain.end);
        upper = other.into_iter().filter(|chain| Some(chain.end) == rail).collect();
    } else if lower.is_empty() && !ends.has_ground {
        other.sort_by_key(|chain| std::cmp::Reverse(circuit.pin_count(chain.end)));
        let bottom = other.first().map(|chain| chain.end);
        lower = other.into_iter().filter(|chain| Some(chain.end) == bottom).collect();
    }
    divider.trimmed = upper.iter().chain(&lower).any(|chain| chain.trimmed);
    divider.senses = upper.first().map(|chain| chain.end);
    divider.returns = lower.first().map(|chain| chain.end);
    (divider.upper, divider.upper_parallel) = first_and_rest(upper);
    (divider.lower, divider.lower_parallel) = first_and_rest(lower);
    divider
}

fn first_and_rest(chains: Vec<Chain>) -> (Vec<DeviceId>, Vec<Vec<DeviceId>>) {
    let mut chains = chains.into_iter().map(|chain| chain.devices);
    (chains.next().unwrap_or_default(), chains.collect())
}

/// Whether anything sets the part: resistors, or the pin tied to output or ground.
pub(super) fn has_resistors(divider: &Divider) -> bool {
    !divider.upper.is_empty() || !divider.lower.is_empty()
}
