//! `railworthy catalog`

use super::args::{Catalog, Shelf};
use super::input::Rules;
use super::settings::Terminal;
use super::{Status, Streams, explain};
use crate::facts::DEFINITIONS;
use crate::report::catalog;
use crate::source::toml::nearest;

pub(super) fn run(typed: &Catalog, terminal: Terminal, to: &mut Streams<'_>) -> Status {
    let rules = Rules::load(&typed.rules);
    let status = rules.tell(terminal, to);
    let look = terminal.out;
    let Some(name) = &typed.name else {
        let text = match typed.what {
            Shelf::Checks => catalog::checks(&rules.checks, look),
            Shelf::Parts => catalog::parts(&rules.knowledge, look),
            Shelf::Supplies => catalog::supplies(&rules.knowledge, look),
            Shelf::Technologies => catalog::technologies(&rules.knowledge, look),
            Shelf::Devices => catalog::devices(&rules.knowledge, look),
            Shelf::Quantities => catalog::quantities(look),
        };
        return to.result(&text).max(status);
    };
    let found = match typed.what {
        Shelf::Checks => explain::explained(name, &rules, terminal),
        Shelf::Parts => catalog::part(&rules.knowledge, &rules.checks, name, look),
        Shelf::Supplies => catalog::supply(&rules.knowledge, name, look),
        Shelf::Technologies => catalog::technology(&rules.knowledge, name, look),
        Shelf::Devices => catalog::device(&rules.knowledge, name, look),
        Shelf::Quantities => catalog::quantity(name, look),
    };
    match found {
        Some(text) => to.result(&text).max(status),
        None => {
            let names = names(typed.what, &rules);
            let near = nearest(name, names.iter().map(String::as_str));
            let help = near.map_or_else(String::new, |near| format!("; did you mean `{near}`?"));
            to.broken(&format!("the catalog has no `{name}`{help}"))
        }
    }
}

/// Every name of a shelf.
fn names(shelf: Shelf, rules: &Rules) -> Vec<String> {
    let knowledge = &rules.knowledge;
    match shelf {
        Shelf::Checks => explain::check_names(rules).map(str::to_owned).collect(),
        Shelf::Parts => knowledge.families.iter().map(|family| family.name.clone()).collect(),
        Shelf::Supplies => knowledge.supplies.iter().map(|supply| supply.name.clone()).collect(),
        Shelf::Technologies => knowledge.technologies.iter().map(|technology| technology.name.clone()).collect(),
        Shelf::Devices => knowledge.devices.iter().map(|device| device.name.clone()).collect(),
        Shelf::Quantities => {
            DEFINITIONS.iter().flat_map(|file| file.iter()).map(|definition| definition.name.to_owned()).collect()
        }
    }
}
