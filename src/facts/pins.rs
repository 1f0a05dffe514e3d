//! Whether the pins of a symbol are those of the part in its package, and where its tab lies.

use std::collections::BTreeMap;

use super::identity::of;
use super::{Definition, Facts, Flag, RailOrigin, Subject, SubjectKind, Value, ValueKind};
use crate::circuit::{Device, NetId, Pin};
use crate::knowledge::{Family, Package, RoleName};
use crate::quantity::{Evidence, Grade, Settle, Table};
use crate::recognize::{Mode, Regulator, RegulatorKind, drawn_pins, family_package, package_of};

/// The key of the tab in a part file.
const TAB: &str = "tab";
/// What symbols number a tab by, where it is no pin of the package's own; with three leads, also `4`.
const TAB_NUMBERS: &[&str] = &["TAB", "EP", "PAD", "MP", "0"];

pub(super) const DEFINITIONS: &[Definition] = &[
    flag("pins_as_in_package", "each pin is drawn with the role that it has in the package", |facts, subject| {
        judged(facts, subject, |order| Value::Flag(Flag { holds: order.wrong.is_empty(), evidence: order.evidence }))
    }),
    word("package", "the package that the footprint tells", |facts, subject| {
        judged(facts, subject, |order| Value::word(order.package))
    }),
    word(
        "wrong_pins",
        "the pins that are drawn with other roles than they have, and what they are",
        |facts, subject| {
            judged(facts, subject, |order| match order.wrong.is_empty() {
                true => Value::inapplicable("no pin is drawn wrongly"),
                false => Value::word(order.wrong.join(", ")),
            })
        },
    ),
    word("pins_of", "the part family whose order of pins the package is held against", |facts, subject| {
        judged(facts, subject, |order| Value::word(order.family))
    }),
    flag("tab_on_own_net", "the tab lies on the net of the lead that it is joined to", |facts, subject| {
        tabbed(facts, subject, |tab| Value::Flag(Flag { holds: !tab.shorts, evidence: Some(tab.evidence) }))
    }),
    word("tab_pin", "the pin that is the tab", |facts, subject| tabbed(facts, subject, |tab| Value::word(tab.pin))),
    word("tab_role", "what the tab is inside the part", |facts, subject| {
        tabbed(facts, subject, |tab| Value::word(tab.role))
    }),
    word("tab_net", "the net of the tab", |facts, subject| tabbed(facts, subject, |tab| Value::word(tab.net))),
    word("tab_own_net", "the net of the lead that the tab is joined to", |facts, subject| {
        tabbed(facts, subject, |tab| Value::word(tab.own_net))
    }),
];

const fn flag(name: &'static str, meaning: &'static str, compute: fn(&Facts<'_>, Subject) -> Value) -> Definition {
    Definition { name, of: SubjectKind::Regulator, kind: ValueKind::Flag, meaning, defined_in: file!(), compute }
}

const fn word(name: &'static str, meaning: &'static str, compute: fn(&Facts<'_>, Subject) -> Value) -> Definition {
    let kind = ValueKind::Word(&[]);
    Definition { name, of: SubjectKind::Regulator, kind, meaning, defined_in: file!(), compute }
}

/// What each family that a part may be has in its package.
type Orders<'f> = Vec<(&'f Family, &'f Package)>;

/// The symbol's pins held against the package.
struct Order {
    package: String,
    family: String,
    /// `pin 1 (VI) is ground`, for each pin that is drawn with another role.
    wrong: Vec<String>,
    evidence: Option<Evidence>,
}

/// Where the tab lies.
struct Tab {
    pin: String,
    role: String,
    net: String,
    own_net: String,
    shorts: bool,
    evidence: Evidence,
}

fn judged(facts: &Facts<'_>, subject: Subject, compute: impl FnOnce(Order) -> Value) -> Value {
    of(facts, subject, |regulator| match facts.order_of_pins(regulator) {
        Ok(order) => compute(order),
        Err(reason) => Value::inapplicable(reason),
    })
}

fn tabbed(facts: &Facts<'_>, subject: Subject, compute: impl FnOnce(Tab) -> Value) -> Value {
    of(facts, subject, |regulator| {
        facts.tab(regulator).map_or_else(|| Value::inapplicable("no tab is drawn"), compute)
    })
}

impl Facts<'_> {
    /// The package of a part and what each family that it may be has in it; an error says why nothing is known.
    fn in_package<'r>(&'r self, regulator: &'r Regulator) -> Result<(String, Orders<'r>), String> {
        let declared = self.board().part(&self.part_of(regulator).reference).is_some_and(|part| part.pins.is_some());
        if declared {
            return Err("its pins are declared".to_owned());
        }
        let package = package_of(&self.part_of(regulator).footprint).ok_or("the footprint tells no package")?;
        let known = self.families(regulator).filter_map(|family| Some((family, family_package(family, &package)?)));
        let known: Vec<_> = known.filter(|(_, found)| !found.pins.is_empty()).collect();
        if known.is_empty() { Err(format!("no order of pins is known in {package}")) } else { Ok((package, known)) }
    }

    fn order_of_pins(&self, regulator: &Regulator) -> Result<Order, String> {
        if regulator.kind == RegulatorKind::Switching || regulator.output_index > 0 {
            return Err("its pins are not judged".to_owned());
        }
        let (package, known) = self.in_package(regulator)?;
        let device = self.part_of(regulator);
        let mut told: Vec<(&Family, &Package, Vec<String>)> = Vec::new();
        for (family, entry) in known {
            // One that the symbol fits is enough: it may be that one.
            let wrong =
                wrong_pins(device, regulator, entry).ok_or("the pins are not numbered as those of the package")?;
            if wrong.is_empty() {
                let evidence = None;
                return Ok(Order { package, family: family.name.clone(), wrong, evidence });
            }
            told.push((family, entry, wrong));
        }
        // What was read tells more than what was recalled.
        let all = self.families(regulator).count() == told.len();
        told.sort_by_key(|(_, entry, _)| entry.pins_from.recalled);
        let Some((family, entry, wrong)) = told.into_iter().next() else { return Err("no family".to_owned()) };
        let evidence = self.pins_evidence(regulator, entry, all);
        Ok(Order { package, family: family.name.clone(), wrong, evidence: Some(evidence) })
    }

    /// What an order of pins rests on: a guess where another family that the part may be has none that is known.
    fn pins_evidence(&self, regulator: &Regulator, entry: &Package, all: bool) -> Evidence {
        let what = self.about(regulator, "order of the pins");
        let evidence = self.cited(regulator, &entry.pins_from.source, entry.pins_from.recalled, what);
        let evidence = if all { evidence } else { evidence.at_most(Grade::Inferred) };
        if evidence.grade.is_fact() {
            return evidence;
        }
        let part = &self.part_of(regulator).reference;
        evidence.settled_by(Settle::new(
            Table::Part,
            part,
            "pins",
            "{ 1 = \"ground\", 2 = \"output\", 3 = \"input\" }",
        ))
    }

    /// The tab of a part as it is drawn and connected; every family that the part may be must have it joined alike.
    fn tab(&self, regulator: &Regulator) -> Option<Tab> {
        if regulator.kind == RegulatorKind::Switching || regulator.output_index > 0 {
            return None;
        }
        let (_, known) = self.in_package(regulator).ok()?;
        let device = self.part_of(regulator);
        let drawn = drawn_pins(device, regulator.kind);
        let (_, first) = known.first()?;
        let joined = first.pins.get(TAB)?;
        if known.iter().any(|(_, other)| other.pins.get(TAB) != Some(joined)) {
            return None;
        }
        let leads = first.pins.keys().filter(|number| number.as_str() != TAB && number.as_str() != "4").count();
        let is_tab = |pin: &Pin, named: bool| {
            let number = pin.number.to_ascii_uppercase();
            let free = !first.pins.contains_key(&pin.number) || pin.number == "4";
            free && (named || TAB_NUMBERS.contains(&number.as_str()) || leads == 3 && number == "4")
        };
        let (tab, net) = device
            .pins
            .iter()
            .zip(&drawn)
            .filter(|(pin, drawn)| is_tab(pin, drawn.tab))
            .find_map(|(pin, _)| Some((pin, pin.net?)))?;
        let own = device.pins.iter().filter(|pin| pin.number != tab.number && shares(first, &pin.number, joined));
        let own: Vec<NetId> = own.filter_map(|pin| pin.net).collect();
        let own_net = own.first()?;
        let all = self.families(regulator).count() == known.len();
        let evidence = known.iter().min_by_key(|(_, entry)| entry.pins_from.recalled);
        Some(Tab {
            pin: named(tab),
            role: role_name(joined, regulator.mode),
            net: self.circuit().net(net).name.clone(),
            own_net: self.circuit().net(*own_net).name.clone(),
            shorts: !own.contains(&net) && self.is_used(device, tab, net),
            evidence: self.pins_evidence(regulator, evidence.map_or(first, |(_, entry)| entry), all),
        })
    }

    /// Whether a tab's net is more than copper of its own: a ground, a supply, or a net of another pin of the part.
    fn is_used(&self, device: &Device, tab: &Pin, net: NetId) -> bool {
        self.circuit().net(net).ground
            || self.rail(net).origin != RailOrigin::Unknown
            || device.pins.iter().any(|pin| pin.number != tab.number && pin.net == Some(net))
    }
}

fn shares(package: &Package, number: &str, roles: &[RoleName]) -> bool {
    package.pins.get(number).is_some_and(|own| own.iter().any(|role| roles.contains(role)))
}

/// The pins that a symbol draws with another role than they have in a package; `None` where fewer than two can be
/// compared.
fn wrong_pins(device: &Device, regulator: &Regulator, package: &Package) -> Option<Vec<String>> {
    let drawn = drawn_pins(device, regulator.kind);
    // Where ground and adjust are never two pins, a fixed part's ground is an adjustable one's adjust pin.
    let pins: BTreeMap<&String, &Vec<RoleName>> = package.pins.iter().filter(|(number, _)| *number != TAB).collect();
    let apart = pins.values().any(|roles| roles.as_slice() == [RoleName::Ground])
        && pins.values().any(|roles| roles.contains(&RoleName::Adjust) && !roles.contains(&RoleName::Ground));
    let mut compared = 0;
    let mut wrong = Vec::new();
    for (pin, drawn) in device.pins.iter().zip(&drawn) {
        let Some(real) = pins.get(&pin.number) else { continue };
        if drawn.roles.is_empty() || real.is_empty() {
            continue;
        }
        compared += 1;
        if !fits(&drawn.roles, real, apart) {
            wrong.push(format!("{} is {}", named(pin), role_name(real, regulator.mode)));
        }
    }
    (compared >= 2).then_some(wrong)
}

/// Whether a pin that is drawn with some roles can be one that has others. Roles that cost nothing when exchanged, and
/// pins that only some versions have, are not held against a symbol.
fn fits(drawn: &[RoleName], real: &[RoleName], apart: bool) -> bool {
    const HARD: &[RoleName] = &[
        RoleName::Input,
        RoleName::Output,
        RoleName::Ground,
        RoleName::Adjust,
        RoleName::Enable,
        RoleName::Sense,
        RoleName::Bias,
        RoleName::Cathode,
        RoleName::Anode,
    ];
    let soft = |roles: &[RoleName]| roles.iter().any(|role| !HARD.contains(role));
    // An input or output on a pin that only ever is a flag or a filter is no matter of versions.
    let only_soft = matches!(real, [RoleName::PowerGood | RoleName::Bypass]);
    if only_soft && drawn.iter().all(|role| matches!(role, RoleName::Input | RoleName::Output)) {
        return false;
    }
    if soft(drawn) || soft(real) || drawn.iter().any(|role| real.contains(role)) {
        return true;
    }
    let either = |one: RoleName, other: RoleName| {
        drawn.contains(&one) && real.contains(&other) || drawn.contains(&other) && real.contains(&one)
    };
    either(RoleName::Output, RoleName::Sense)
        || either(RoleName::Adjust, RoleName::Sense)
        || either(RoleName::Input, RoleName::Bias)
        || !apart && either(RoleName::Ground, RoleName::Adjust)
}

/// `pin 4 (TAB)`.
pub(super) fn named(pin: &Pin) -> String {
    if pin.name.is_empty() || pin.name == pin.number {
        format!("pin {}", pin.number)
    } else {
        format!("pin {} ({})", pin.number, pin.name)
    }
}

/// The role in words; of ground and adjust the one that the part uses.
fn role_name(roles: &[RoleName], mode: Mode) -> String {
    let unused = if mode == Mode::Fixed { RoleName::Adjust } else { RoleName::Ground };
    let used: Vec<&str> =
        roles.iter().filter(|role| roles.len() < 2 || **role != unused).map(|role| role.name()).collect();
    used.join(" or ")
}
