//! The models of parts: declared, from simulation fields, or known.

use super::super::Facts;
use crate::board::{Declared, DeviceModel, ModelKind};
use crate::circuit::DeviceId;
use crate::quantity::{Dimension, Evidence, Grade, Pair, Quantity, Range, Settle, Table};
use crate::recognize::{Regulator, Transistor, device_match_as, transistors};

/// A part's model with what stands behind it.
#[derive(Debug)]
pub(super) struct Modelled {
    pub(super) model: DeviceModel,
    /// That the part has this model, as an exact figure.
    pub(super) evidence: Quantity,
    /// Its parameters that are not exact.
    pub(super) open: Vec<(&'static str, Quantity)>,
}

/// Parameters that say nothing of a circuit at rest.
const DYNAMIC: &[&str] = &["CJE", "CJC", "TF", "TR", "CGS", "CGD", "CDS", "CJO", "TT", "GBW", "SR"];

/// Whether a parameter counts only where something moves.
pub(super) fn is_dynamic(name: &str) -> bool {
    DYNAMIC.contains(&name)
}

impl Facts<'_> {
    /// The model of a part that serves as a kind of device: declared for it, else that of its part number, else what is
    /// usual; `None` where nothing tells one. A shunt reference may lack its voltage, which its set point tells.
    pub(super) fn modelled(&self, device: DeviceId, kind: ModelKind) -> Option<Modelled> {
        let part = self.circuit().device(device);
        if let Some(declared) = self.declared_model(device, kind) {
            return Some(Modelled::new(&declared.value, &part.reference, |what| declared.evidence(what)));
        }
        let known = device_match_as(self.knowledge(), part, kind)?;
        let grade = match (known.assumed, known.recalled) {
            (true, _) => Grade::Assumed,
            (false, true) => Grade::Inferred,
            (false, false) => Grade::Published,
        };
        let source = match known.assumed {
            true => format!("usual: {}", known.family),
            false if known.recalled => format!("{}, recalled", known.family),
            false => format!("{}, {}", known.family, known.source),
        };
        Some(Modelled::new(&known.model, &part.reference, |what| Evidence::new(grade, what, source.clone())))
    }

    /// The model that is declared for a part, where it can stand for a kind of device.
    pub(super) fn declared_model(&self, device: DeviceId, kind: ModelKind) -> Option<&Declared<DeviceModel>> {
        let entry = self.board().part(&self.circuit().device(device).reference)?;
        entry.model.as_ref().filter(|model| fits(model.value.kind(), kind))
    }

    /// That a circuit does not settle, so that a figure of it cannot be had: a better model of its pass transistor may help.
    pub(super) fn not_solved(&self, regulator: &Regulator, noun: &str, why: String) -> Evidence {
        let evidence = Evidence::new(Grade::Assumed, self.about(regulator, noun), why);
        let pass = regulator.outboard().unwrap_or(regulator.device);
        let Some(transistor) = transistors(self.circuit(), pass).first().copied() else { return evidence };
        evidence.settled_by(settle(&self.circuit().device(pass).reference, model_kind(transistor)))
    }

    /// The error that a part has no model.
    pub(super) fn no_model(&self, device: DeviceId, kind: ModelKind) -> Evidence {
        let part = self.circuit().device(device);
        let what = format!("model of {}", part.reference);
        Evidence::new(Grade::Assumed, what, format!("nothing tells a model of {}", part.value))
            .settled_by(settle(&part.reference, kind))
    }
}

/// Whether a declared model can stand for a part of a kind.
fn fits(told: ModelKind, wanted: ModelKind) -> bool {
    let diode = |kind: ModelKind| matches!(kind, ModelKind::Diode | ModelKind::Zener | ModelKind::Shunt);
    told == wanted || (diode(told) && diode(wanted))
}

/// The kind of model that a transistor has.
pub(super) fn model_kind(one: Transistor) -> ModelKind {
    match (one.bipolar, one.n) {
        (true, true) => ModelKind::Npn,
        (true, false) => ModelKind::Pnp,
        (false, true) => ModelKind::Nmos,
        (false, false) => ModelKind::Pmos,
    }
}

/// How a model of a kind is declared.
pub(super) fn settle(reference: &str, kind: ModelKind) -> Settle {
    let example = match kind {
        ModelKind::Npn => "npn IS=1e-14 BF=40..160",
        ModelKind::Pnp => "pnp IS=1e-14 BF=40..160",
        ModelKind::Nmos => "nmos VTO=1..2 KP=2",
        ModelKind::Pmos => "pmos VTO=-2..-1 KP=2",
        ModelKind::Diode => "diode IS=1e-9 N=1.8",
        ModelKind::Zener => "zener BV=5.6",
        ModelKind::Shunt => "shunt BV=2.5",
        ModelKind::OpAmp => "opamp A0=1e5 GBW=1e6 VOS=-0.005..0.005 TOP=1.5",
    };
    Settle::new(Table::Part, reference, "model", example)
}

impl Modelled {
    fn new(model: &DeviceModel, reference: &str, evidence: impl Fn(String) -> Evidence) -> Self {
        let open = model.parameters().filter(|(_, range)| !range.is_exact()).map(|(name, range)| {
            let evidence = evidence(format!("{name} of {reference}"));
            let settled = evidence.grade.is_fact();
            let evidence = if settled { evidence } else { evidence.settled_by(settle(reference, model.kind())) };
            (name, Quantity::given(Dimension::ONE, range, Pair::ANY, evidence))
        });
        let mut whole = evidence(format!("model of {reference}"));
        if !whole.grade.is_fact() {
            whole = whole.settled_by(settle(reference, model.kind()));
        }
        Self {
            open: open.collect(),
            model: model.clone(),
            evidence: Quantity::fact(Dimension::ONE, Range::exactly(0.0), whole),
        }
    }
}
