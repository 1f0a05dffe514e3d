//! Findings as diagnostics: what, where, the figures that decide, what to do, what would settle it.

use super::excerpt::{Excerpt, Mark};
use super::figures::figures;
use super::inert::inert;
use super::layout::wrapped;
use super::look::Look;
use super::problem::Told;
use super::settle;
use crate::checks::{Point, Verdict};
use crate::review::{Examination, Reviewed};

/// Most places that are marked besides the subject.
const MOST_MARKS: usize = 2;

/// A finding with all that belongs to it.
pub(super) fn whole(examination: &Examination, found: &Reviewed, look: Look) -> String {
    let finding = &found.finding;
    let at = found.best_place();
    let main = Mark { span: at.span, label: found.about.clone() };
    let also = parts_marked(examination, found);
    let marks: Vec<Mark> = std::iter::once(main).chain(also).collect();
    let told =
        Told::new(finding.level, &finding.message).line(&place(found)).excerpt(Excerpt::new(&at.source, &marks));
    told.render(look) + &grounds(found, look)
}

/// The figures that decide, what to do, and what would settle it.
pub(super) fn grounds(found: &Reviewed, look: Look) -> String {
    let finding = &found.finding;
    let mut text = figures(&finding.quantities, "    ", look.width());
    for hint in &finding.hints {
        text.push_str(&wrapped(&inert(hint), "  help: ", "        ", look.width()));
    }
    text.push_str(&to_settle(found, look));
    text
}

/// The parts that are marked besides the subject, as far as they stand in the same file. Nets are named in the second
/// line already; where they stand in the netlist helps nobody.
fn parts_marked<'a>(examination: &'a Examination, found: &'a Reviewed) -> impl Iterator<Item = Mark> + 'a {
    let circuit = &examination.design.circuit;
    let is_marked = |point: &&Point| match point {
        Point::Subject(_) => true,
        Point::Named { name, .. } => circuit.net_named(name).is_some(),
    };
    let points = found.finding.also.iter().filter(is_marked);
    points
        .zip(&found.also)
        .filter(|(point, (place, _))| {
            matches!(point, Point::Subject(_)) && place.source.is(&found.best_place().source)
        })
        .take(MOST_MARKS)
        .map(|(_, (place, label))| Mark { span: place.span, label: label.clone() })
}

/// `headroom · /Power/ · U2 · +5V → +3V3`: the check, the sheet, the parts, the nets.
pub(super) fn place(found: &Reviewed) -> String {
    let mut words = vec![found.finding.check.clone()];
    if !found.sheet.is_empty() && found.sheet != "/" {
        words.push(format!("sheet {}", found.sheet));
    }
    words.extend(Some(found.parts.join(", ")).filter(|parts| !parts.is_empty()));
    words.extend(Some(found.nets.join(" → ")).filter(|nets| !nets.is_empty()));
    words.join(" · ")
}

/// The declaration that would settle a finding, as lines for a board file; others are named.
fn to_settle(found: &Reviewed, look: Look) -> String {
    let Some((first, others)) = found.finding.settle.split_first() else { return String::new() };
    if found.finding.verdict == Verdict::Fails {
        return String::new();
    }
    let mut sentence = format!("declare {}", settle::phrase(first));
    if !others.is_empty() {
        let others: Vec<String> = others.iter().map(settle::phrase).collect();
        sentence.push_str(&format!(", then {}", others.join(", ")));
    }
    let mut text = wrapped(&sentence, "  to settle: ", "             ", look.width());
    for line in settle::lines(first) {
        text.push_str(&look.faint(&format!("    {line}")));
        text.push('\n');
    }
    text
}
