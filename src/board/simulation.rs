//! Device models in the simulation fields of a symbol.

use crate::circuit::{Device, DeviceKind};
use crate::quantity::Range;

use super::fields::field;
use crate::knowledge::{DeviceModel, ModelKind, SetError, model_words};
use crate::source::TextFault;

/// The model that `Sim.Device`, `Sim.Type` and `Sim.Params` carry; `None` where there is none, or one of a device or
/// type that is not modelled. Parameters that the models here do not have are passed over: a full SPICE model has
/// many that do not matter to an operating point or a loop.
pub(super) fn read_simulation(device: &Device) -> Result<Option<DeviceModel>, TextFault> {
    let Some(kind) = kind_of(device) else { return Ok(None) };
    let Some((_, text)) = field(device, "sim.params") else { return Ok(None) };
    let mut model = DeviceModel::new(kind);
    let (mut width, mut length) = (None, None);
    let mut found = false;
    for (at, word) in model_words(text) {
        let Some((name, value)) = word.split_once('=') else { continue };
        let modelled = kind.parameters().iter().any(|(own, _)| own.eq_ignore_ascii_case(name));
        let size = matches!(name.to_ascii_lowercase().as_str(), "w" | "l");
        if !modelled && !size {
            continue;
        }
        let place = at + name.len() + 1..at + word.len();
        let Some(number) = number(value.trim_matches('"')) else {
            let help = "write numbers with SI prefixes, as in 800p or 8e-10";
            return Err(TextFault::new(place, format!("`{value}` is no number"), "not a number", help));
        };
        if size {
            let slot = if name.eq_ignore_ascii_case("w") { &mut width } else { &mut length };
            *slot = Some(number);
            continue;
        }
        let set = model.set(name, Range::exactly(number));
        if let Err(SetError::Refused(allowed)) = set {
            let help = format!("it must be {}", allowed.words());
            return Err(TextFault::new(place, format!("`{name}` cannot be {value}"), "not possible", help));
        }
        found = true;
    }
    if matches!(kind, ModelKind::Nmos | ModelKind::Pmos) {
        apply_size(&mut model, width, length);
    }
    Ok(found.then_some(model))
}

/// Level 1 multiplies KP by W/L, both 100 µm where they are not given; the models here have it multiplied already.
fn apply_size(model: &mut DeviceModel, width: Option<f64>, length: Option<f64>) {
    let ratio = width.unwrap_or(1e-4) / length.unwrap_or(1e-4);
    if let Some(gain) = model.get("KP").filter(|_| ratio.is_finite() && ratio > 0.0) {
        model.replace("KP", gain.scaled(ratio));
    }
}

/// What the device is modelled as, where its type has the parameters that the models here have.
fn kind_of(device: &Device) -> Option<ModelKind> {
    let word = |name| field(device, name).map(|(_, text)| text.to_ascii_lowercase());
    let kind = word("sim.device")?;
    let of_type = word("sim.type").unwrap_or_default();
    let simple = |types: &[&str]| of_type.is_empty() || types.contains(&of_type.as_str());
    match kind.as_str() {
        "npn" if simple(&["gummelpoon"]) => Some(ModelKind::Npn),
        "pnp" if simple(&["gummelpoon"]) => Some(ModelKind::Pnp),
        "nmos" if simple(&["mos1", "vdmos"]) => Some(ModelKind::Nmos),
        "pmos" if simple(&["mos1", "vdmos"]) => Some(ModelKind::Pmos),
        "d" if device.kind == DeviceKind::Zener => Some(ModelKind::Zener),
        "d" => Some(ModelKind::Diode),
        _ => None,
    }
}

/// A number with an optional SI prefix. A bare `M` is refused: it is mega to one program and milli to another.
fn number(text: &str) -> Option<f64> {
    const PREFIXES: &[(&str, f64)] = &[
        ("meg", 1e6),
        ("f", 1e-15),
        ("p", 1e-12),
        ("n", 1e-9),
        ("u", 1e-6),
        ("µ", 1e-6),
        ("m", 1e-3),
        ("k", 1e3),
        ("K", 1e3),
        ("G", 1e9),
        ("T", 1e12),
    ];
    let plain = |digits: &str| {
        let known = digits.bytes().all(|byte| byte.is_ascii_digit() || b"+-.eE".contains(&byte));
        digits.parse::<f64>().ok().filter(|value| known && value.is_finite())
    };
    let suffixed = || {
        let (prefix, factor) = PREFIXES.iter().find(|(prefix, _)| text.ends_with(prefix))?;
        plain(text.strip_suffix(prefix)?).map(|value| value * factor)
    };
    plain(text).or_else(suffixed).filter(|value| value.is_finite())
}
