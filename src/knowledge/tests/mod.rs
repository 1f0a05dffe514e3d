//! Checks on the built-in files, on damaged ones and on folders of the user.

mod built_in;
mod damaged;
mod devices;
mod folders;

use crate::source::Problem;

/// A problem as `file:line:column message (label); help`.
fn told(problem: &Problem) -> String {
    let place = problem.place().map_or(String::new(), |(source, span)| {
        let at = source.position(span.start());
        format!("{}:{}:{} ", source.name(), at.line, at.column)
    });
    let (label, help) = (problem.label().unwrap_or(""), problem.advice().unwrap_or(""));
    format!("{place}{} ({label}); {help}", problem.message())
}
