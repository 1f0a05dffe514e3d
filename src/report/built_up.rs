//! How a built-up regulator is put together, in a few lines.

use super::inert::inert;
use crate::circuit::DeviceId;
use crate::facts::Facts;
use crate::recognize::{Duty, ReferenceFeed, Regulator};

/// The lines about the parts of a built-up regulator: the structure, what each part does, where it is cut out.
pub(super) fn parts(facts: &Facts<'_>, regulator: &Regulator) -> Vec<String> {
    let Some(built) = &regulator.built_up else { return Vec::new() };
    let circuit = facts.circuit();
    let net = |id| inert(&circuit.net(id).name).into_owned();
    let name = |device: DeviceId| inert(&circuit.device(device).reference).into_owned();
    let names = |devices: Vec<DeviceId>| devices.into_iter().map(name).collect::<Vec<_>>().join(", ");
    let pass = names(built.pass.clone());
    if built.outboard {
        let carried = format!("{pass} takes over the current, from {} to {}", net(built.input), net(built.output));
        return vec![carried];
    }
    let style = regulator.pass.map_or("", crate::knowledge::Pass::name);
    let amplifier = built.amplifier.as_ref().map_or_else(
        || "no amplifier".to_owned(),
        |one| format!("{} {} as amplifier", one.kind.name(), names(one.devices.clone())),
    );
    let by = names(built.reference.devices.clone());
    let fed = match built.feed {
        Some(ReferenceFeed::Input) => " fed from the input".to_owned(),
        Some(ReferenceFeed::Output) => " fed from the output".to_owned(),
        Some(ReferenceFeed::Other(other)) => format!(" fed from {}", net(other)),
        Some(ReferenceFeed::Internal) | None => String::new(),
    };
    let reference = format!("{} {by}", built.reference.kind.name());
    let structure = format!("built up: {pass} as {style}, {amplifier}, {}{fed} as reference", reference.trim_end());
    let duties = [Duty::Driver, Duty::Divider, Duty::Feed, Duty::Network].into_iter().filter_map(|duty| {
        let own = names(built.with(duty).collect());
        (!own.is_empty()).then(|| format!("{}: {own}", duty.name()))
    });
    let cut = built.boundary.iter().map(|id| net(*id)).collect::<Vec<_>>().join(", ");
    let rest: Vec<String> = duties.chain([format!("cut out at {cut}")]).collect();
    vec![structure, rest.join("; ")]
}
