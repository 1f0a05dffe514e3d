//! Pass stages: transistors that bridge two supply lines, with those that drive them as one with them.

use crate::circuit::{NetId, supply_name};
use crate::knowledge::Pass;

use super::network::Network;
use super::sense::Ends;
use super::supply::{carries_power, line};
use super::transistor::Transistor;

/// A pass transistor seen one way round.
#[derive(Debug, Clone)]
pub(super) struct Stage {
    /// The pass transistor, then those that drive it as one with it.
    pub(super) transistors: Vec<Transistor>,
    /// Whether the output follows the control terminal.
    pub(super) follower: bool,
    /// The net that controls the whole.
    pub(super) control: NetId,
    pub(super) pass: Pass,
    /// Junctions between the control net and the output, of followers.
    pub(super) base_emitter_drops: usize,
    pub(super) gate_source_drops: usize,
    /// The nets at its power terminals.
    pub(super) input: NetId,
    pub(super) output: NetId,
}

/// A transistor as a pass stage, both ways round: a follower whose emitter is the output, and a common-emitter or
/// common-source stage whose collector or drain is.
pub(super) fn stages(network: &Network<'_>, pass: &Transistor) -> Vec<(Stage, Ends)> {
    let ground = |net: NetId| network.circuit.net(net).ground;
    let apart = pass.collector != pass.emitter && pass.control != pass.collector && pass.control != pass.emitter;
    if !apart || ground(pass.collector) || ground(pass.emitter) || ground(pass.control) {
        return Vec::new();
    }
    [true, false].into_iter().filter_map(|follower| stage(network, pass, follower)).collect()
}

fn stage(network: &Network<'_>, pass: &Transistor, follower: bool) -> Option<(Stage, Ends)> {
    let circuit = network.circuit;
    let (input, output) = if follower { (pass.collector, pass.emitter) } else { (pass.emitter, pass.collector) };
    let positive = pass.n == follower;
    let line = |net: NetId| line(circuit, net, pass.control);
    let ends = Ends { input: line(input), output: line(output), positive };
    let bridged = ends.input.iter().all(|net| !ends.output.contains(net));
    let powered = |nets: &[NetId]| nets.iter().any(|net| carries_power(circuit, *net));
    let of_other_sign =
        |net: &NetId| supply_name(&circuit.net(*net).name).is_some_and(|name| (name.volts > 0.0) != positive);
    if !bridged || !powered(&ends.input) || !powered(&ends.output) {
        return None;
    }
    if ends.output.iter().any(of_other_sign) {
        return None;
    }
    let mut stage = Stage {
        transistors: vec![*pass],
        follower,
        control: pass.control,
        pass: single(pass, follower),
        base_emitter_drops: if pass.darlington { 2 } else { usize::from(pass.bipolar) },
        gate_source_drops: usize::from(!pass.bipolar),
        input,
        output,
    };
    compound(network, &mut stage, &ends);
    Some((stage, ends))
}

fn single(pass: &Transistor, follower: bool) -> Pass {
    match (pass.bipolar, pass.n, follower, pass.darlington) {
        (true, true, true, false) => Pass::NpnFollower,
        (true, true, true, true) => Pass::NpnFollowerDarlington,
        (true, true, false, false) => Pass::Npn,
        (true, true, false, true) => Pass::NpnDarlington,
        (true, false, true, false) => Pass::PnpFollower,
        (true, false, true, true) => Pass::PnpFollowerDarlington,
        (true, false, false, false) => Pass::Pnp,
        (true, false, false, true) => Pass::PnpDarlington,
        (false, true, true, _) => Pass::NmosFollower,
        (false, true, false, _) => Pass::Nmos,
        (false, false, true, _) => Pass::PmosFollower,
        (false, false, false, _) => Pass::Pmos,
    }
}

/// Takes in transistors that drive the pass transistor as one with it: a Darlington pair, or a complementary one, whose
/// second emitter lies on the output.
fn compound(network: &Network<'_>, stage: &mut Stage, ends: &Ends) {
    for _ in 0..2 {
        let Some(first) = stage.transistors.last().copied().filter(|first| first.bipolar) else { return };
        let foreign = |one: &&Transistor| one.bipolar && !stage.transistors.contains(*one);
        let follows = |one: &&Transistor| one.n == first.n && !ends.output.contains(&one.emitter);
        let darlington = network.emitters(first.control).filter(foreign).find(follows).copied();
        if let Some(driver) = darlington {
            stage.base_emitter_drops += 1;
            stage.pass = match stage.pass {
                Pass::NpnFollower => Pass::NpnFollowerDarlington,
                Pass::PnpFollower => Pass::PnpFollowerDarlington,
                Pass::Npn => Pass::NpnDarlington,
                Pass::Pnp => Pass::PnpDarlington,
                other => other,
            };
            stage.control = driver.control;
            stage.transistors.push(driver);
            continue;
        }
        let closes = |one: &&Transistor| one.n != first.n && ends.output.contains(&one.emitter);
        let complementary = network.collectors(first.control).filter(foreign).find(closes).copied();
        let Some(driver) = complementary.filter(|_| !stage.follower) else { return };
        stage.base_emitter_drops = 1;
        stage.follower = true;
        stage.pass = if driver.n { Pass::NpnFollowerComplementary } else { Pass::PnpFollowerComplementary };
        stage.control = driver.control;
        stage.transistors.push(driver);
    }
}
