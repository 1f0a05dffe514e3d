//! What of the old board is what of the new one.

use super::matcher::Matcher;
use super::pairs::Pairs;
use super::regulators;
use crate::facts::Subject;
use crate::recognize::RegulatorId;
use crate::review::Examination;

/// The pairs of two boards.
#[derive(Debug)]
pub(super) struct Matching<'a> {
    /// Parts and nets.
    pub(super) matcher: Matcher<'a>,
    /// Regulators, by their places in the designs.
    pub(super) regulators: Pairs,
}

impl<'a> Matching<'a> {
    pub(super) fn new(old: &'a Examination, new: &'a Examination) -> Self {
        let board = |side: &'a Examination| (&side.netlist, &side.design.circuit);
        let matcher = Matcher::run(board(old), board(new));
        let regulators = regulators::pairs(&matcher, &old.design, &new.design);
        Self { matcher, regulators }
    }

    /// What a subject of the old board is on the new one.
    pub(super) fn subject(&self, subject: Subject) -> Option<Subject> {
        let matcher = &self.matcher;
        let net = |net| matcher.new.net_id(matcher.nets.new_of(matcher.old.net_place(net)?)?);
        match subject {
            Subject::Regulator(id) => {
                self.regulators.new_of(id.0).map(|place| Subject::Regulator(RegulatorId(place)))
            }
            Subject::Net(id) => net(id).map(Subject::Net),
            Subject::Capacitor { device, net: at } => {
                let device = matcher.devices.new_of(matcher.old.device_place(device)?)?;
                Some(Subject::Capacitor { device: matcher.new.device_id(device)?, net: net(at)? })
            }
            Subject::Board => Some(Subject::Board),
        }
    }

    /// Names of parts or nets of the old board as the new one has them; what it has not keeps its name.
    pub(super) fn names(&self, names: &[String]) -> Vec<String> {
        names.iter().map(|name| self.name(name).unwrap_or_else(|| name.clone())).collect()
    }

    fn name(&self, name: &str) -> Option<String> {
        let matcher = &self.matcher;
        let (old, new) = (matcher.old.circuit, matcher.new.circuit);
        if let Some(device) = old.device_named(name) {
            let place = matcher.devices.new_of(matcher.old.device_place(device)?)?;
            return Some(new.device(matcher.new.device_id(place)?).reference.clone());
        }
        let net = old.net_named(name)?;
        let place = matcher.nets.new_of(matcher.old.net_place(net)?)?;
        Some(new.net(matcher.new.net_id(place)?).name.clone())
    }
}
