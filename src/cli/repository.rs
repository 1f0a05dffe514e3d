//! `railworthy schema`, `railworthy completions`, `railworthy manual`: what editors, shells and systems take.

use clap::CommandFactory;

use super::args::{Completions, Manual, Schema, Typed};
use super::{Status, Streams};
use crate::report;
use crate::source::toml::nearest;

pub(super) fn schema(typed: &Schema, to: &mut Streams<'_>) -> Status {
    let Some(name) = &typed.name else {
        let lines = report::schemas().map(|(name, about)| format!("{name:<8} {about}\n"));
        return to.result(&lines.collect::<String>());
    };
    match report::schema(name) {
        Some(text) => to.result(&text),
        None => {
            let names: Vec<&str> = report::schemas().map(|(name, _)| name).collect();
            let help = match nearest(name, names.iter().copied()) {
                Some(near) => format!("did you mean `{near}`?"),
                None => format!("there are {}", names.join(", ")),
            };
            to.broken(&format!("there is no schema `{name}`; {help}"))
        }
    }
}

pub(super) fn completions(typed: &Completions, to: &mut Streams<'_>) -> Status {
    let mut script = Vec::new();
    clap_complete::generate(typed.shell, &mut Typed::command(), "railworthy", &mut script);
    to.result(&String::from_utf8_lossy(&script))
}

pub(super) fn manual(typed: &Manual, to: &mut Streams<'_>) -> Status {
    let mut program = Typed::command();
    program.build();
    let page = match &typed.command {
        None => program,
        Some(name) => {
            let found = program.get_subcommands().find(|command| command.get_name() == name).cloned();
            let Some(command) = found else {
                let names = program.get_subcommands().map(clap::Command::get_name);
                let help = nearest(name, names).map_or_else(String::new, |near| format!("; did you mean `{near}`?"));
                return to.broken(&format!("there is no command `{name}`{help}"));
            };
            command.version(env!("CARGO_PKG_VERSION")).display_name(format!("railworthy-{name}"))
        }
    };
    let mut text = Vec::new();
    match clap_mangen::Man::new(page).render(&mut text) {
        Ok(()) => to.result(&String::from_utf8_lossy(&text)),
        Err(error) => to.broken(&format!("the manual page cannot be made: {error}")),
    }
}
