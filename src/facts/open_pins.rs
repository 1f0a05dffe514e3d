//! Pins of a regulator that nothing is connected to.

use super::identity::of;
use super::pins::named;
use super::{Definition, Facts, Subject, SubjectKind, Value, ValueKind};
use crate::circuit::{Pin, PinType};
use crate::recognize::{Mode, Regulator, RegulatorKind, drawn_pins};

pub(super) const DEFINITIONS: &[Definition] = &[
    flag("input_open", "nothing is connected to the input", |facts, subject| {
        group(facts, subject, Group::Input, open)
    }),
    word("input_pins", "the pins of the input", |facts, subject| group(facts, subject, Group::Input, names)),
    flag("output_open", "nothing is connected to the output", |facts, subject| {
        group(facts, subject, Group::Output, open)
    }),
    word("output_pins", "the pins of the output", |facts, subject| group(facts, subject, Group::Output, names)),
    flag("ground_open", "nothing is connected to the ground", |facts, subject| {
        group(facts, subject, Group::Ground, open)
    }),
    word("ground_pins", "the pins of the ground", |facts, subject| group(facts, subject, Group::Ground, names)),
    flag("adjust_open", "nothing is connected to the pin that sets the output", |facts, subject| {
        group(facts, subject, Group::Adjust, open)
    }),
    word("adjust_pins", "the pins that set the output", |facts, subject| group(facts, subject, Group::Adjust, names)),
    flag("sense_open", "nothing is connected to the sense pin that the part needs", |facts, subject| {
        group(facts, subject, Group::Sense, open)
    }),
    word("sense_pins", "the sense pins", |facts, subject| group(facts, subject, Group::Sense, names)),
    flag("bias_open", "nothing is connected to the bias supply pin", |facts, subject| {
        group(facts, subject, Group::Bias, open)
    }),
    word("bias_pins", "the bias supply pins", |facts, subject| group(facts, subject, Group::Bias, names)),
    flag("twin_open", "a pin is open beside others of its role that are connected", |facts, subject| {
        twins(facts, subject, |open| Value::flag(!open.is_empty()))
    }),
    word("open_twins", "the pins that are open beside others of their role", |facts, subject| {
        twins(facts, subject, |open| Value::word(listed(open)))
    }),
    flag("several_outputs", "the part has more outputs than one", |facts, subject| {
        of(facts, subject, |regulator| Value::flag(facts.in_part(regulator.device).count() > 1))
    }),
];

const fn flag(name: &'static str, meaning: &'static str, compute: fn(&Facts<'_>, Subject) -> Value) -> Definition {
    Definition { name, of: SubjectKind::Regulator, kind: ValueKind::Flag, meaning, defined_in: file!(), compute }
}

const fn word(name: &'static str, meaning: &'static str, compute: fn(&Facts<'_>, Subject) -> Value) -> Definition {
    let kind = ValueKind::Word(&[]);
    Definition { name, of: SubjectKind::Regulator, kind, meaning, defined_in: file!(), compute }
}

/// Why nothing is said of pins on a damaged board.
const LOST: &str = "what was lost of the netlist may connect it";

/// Pins of one role.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum Group {
    Input,
    Output,
    Ground,
    Adjust,
    Sense,
    Bias,
}

impl Group {
    const ALL: [Self; 6] = [Self::Input, Self::Output, Self::Ground, Self::Adjust, Self::Sense, Self::Bias];

    fn pins(self, regulator: &Regulator) -> &[usize] {
        let roles = &regulator.roles;
        match self {
            Self::Input => &roles.input,
            Self::Output => &roles.output,
            Self::Ground => &roles.ground,
            Self::Adjust => &roles.adjust,
            Self::Sense => &roles.sense,
            Self::Bias => &roles.bias,
        }
    }

    /// Whether a part with such a pin needs it.
    fn is_needed(self, regulator: &Regulator) -> bool {
        match self {
            // A shunt is fed through its output; a fixed part may do without its adjust pin, unless that is its ground.
            Self::Input => regulator.kind != RegulatorKind::Shunt,
            Self::Adjust => regulator.mode == Mode::Adjustable || regulator.roles.ground.is_empty(),
            // Parts that can be either sense by the divider when they are adjusted.
            Self::Sense => regulator.mode == Mode::Fixed,
            Self::Output | Self::Ground | Self::Bias => true,
        }
    }

    /// Whether the wires must lead to another part: a supply pin on another pin of the same part is not fed.
    fn leads_away(self) -> bool {
        matches!(self, Self::Input | Self::Output | Self::Ground)
    }
}

fn group(
    facts: &Facts<'_>,
    subject: Subject,
    group: Group,
    compute: fn(&Facts<'_>, &Regulator, Group) -> Value,
) -> Value {
    of(facts, subject, |regulator| {
        if regulator.kind == RegulatorKind::Switching || group.pins(regulator).is_empty() {
            return Value::inapplicable("it has no such pin");
        }
        if !facts.circuit().is_whole() {
            return Value::inapplicable(LOST);
        }
        if !group.is_needed(regulator) {
            return Value::inapplicable("the part does without this pin");
        }
        compute(facts, regulator, group)
    })
}

fn twins(facts: &Facts<'_>, subject: Subject, compute: fn(&[&Pin]) -> Value) -> Value {
    of(facts, subject, |regulator| {
        if regulator.kind == RegulatorKind::Switching || !facts.circuit().is_whole() {
            return Value::inapplicable(LOST);
        }
        compute(&facts.open_twins(regulator))
    })
}

fn open(facts: &Facts<'_>, regulator: &Regulator, group: Group) -> Value {
    Value::flag(group.pins(regulator).iter().all(|pin| facts.is_open(regulator, *pin, group)))
}

fn names(facts: &Facts<'_>, regulator: &Regulator, group: Group) -> Value {
    let pins = &facts.part_of(regulator).pins;
    Value::word(listed(&group.pins(regulator).iter().filter_map(|index| pins.get(*index)).collect::<Vec<_>>()))
}

/// `pin 3 (VI)`, `pin 3 (VI), pin 4 (VI)`.
pub(super) fn listed(pins: &[&Pin]) -> String {
    pins.iter().map(|pin| named(pin)).collect::<Vec<_>>().join(", ")
}

impl Facts<'_> {
    /// Whether no other pin that is fitted lies on the net of a pin.
    fn is_open(&self, regulator: &Regulator, pin: usize, group: Group) -> bool {
        let Some(net) = self.circuit().net_of(regulator.device, pin) else { return true };
        !self.circuit().fitted_on(net).any(|(device, other)| {
            device != regulator.device || !group.leads_away() && !group.pins(regulator).contains(&other)
        })
    }

    /// Pins that are open beside others of their role that are not. Stacked copies, which symbols draw as passive, and
    /// pins that the schematic marks as left open are meant so.
    fn open_twins(&self, regulator: &Regulator) -> Vec<&Pin> {
        let pins = &self.part_of(regulator).pins;
        let drawn = drawn_pins(self.part_of(regulator), regulator.kind);
        // A tab may have copper of its own.
        let tab = |index: &usize| drawn.get(*index).is_some_and(|pin| pin.tab);
        let meant = |pin: &&Pin| {
            let copy =
                matches!(pin.kind, PinType::Passive | PinType::NoConnect | PinType::Free | PinType::Unspecified);
            copy || pin.marked_open
        };
        let mut found = Vec::new();
        for group in Group::ALL.into_iter().filter(|group| group.is_needed(regulator)) {
            let (open, joined): (Vec<usize>, Vec<usize>) =
                group.pins(regulator).iter().partition(|pin| self.is_open(regulator, **pin, group));
            if !joined.is_empty() {
                let open = open.into_iter().filter(|index| !tab(index)).filter_map(|index| pins.get(index));
                found.extend(open.filter(|pin| !meant(pin)));
            }
        }
        found
    }
}
