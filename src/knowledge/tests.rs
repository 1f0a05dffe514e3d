//! Checks on the built-in files and on damaged ones.

use super::*;
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

#[test]
fn every_built_in_file_loads_without_a_problem() {
    let (knowledge, problems) = Knowledge::load(&[]);
    assert_eq!(problems.iter().map(told).collect::<Vec<_>>(), Vec::<String>::new());
    assert!(knowledge.families.len() >= 150);
    assert!(knowledge.technologies.len() == 6 && knowledge.supplies.len() >= 25);
    assert_eq!(knowledge.families.len(), Knowledge::built_in().families.len());
}
