//! A figure of a part out of its family files, graded by how well the part is identified.

use super::Facts;
use crate::knowledge::{Cited, Family};
use crate::quantity::{Dimension, Evidence, Grade, Pair, Quantity, Range, Settle, Table};
use crate::recognize::Regulator;

/// What is asked of a family: names the figure for its evidence.
#[derive(Debug, Clone, Copy)]
pub(super) struct Ask<'k> {
    /// Key in board and part files.
    pub(super) key: &'k str,
    /// The figure in words: `dropout`, `reference voltage`.
    pub(super) noun: &'k str,
    /// What it measures.
    pub(super) dimension: Dimension,
    /// What is physically possible.
    pub(super) limits: Pair,
}

impl Facts<'_> {
    /// A plain figure of a part: declared for the part, else from its families. `None` where nobody tells it.
    pub(super) fn family_figure(&self, regulator: &Regulator, ask: Ask<'_>) -> Option<Quantity> {
        let what = self.about(regulator, ask.noun);
        let declared =
            self.board().part(&self.part_of(regulator).reference).and_then(|part| part.figures.get(ask.key));
        if let Some(declared) = declared {
            return Some(declared.quantity(ask.dimension, what));
        }
        let output = regulator.nominal.as_ref().map(|nominal| nominal.volts);
        let told: Vec<&Cited<Range>> =
            self.families(regulator).filter_map(|family| family.figure_at(ask.key, output)).collect();
        let (range, evidence) = self.agreed(regulator, &told, what)?;
        Some(Quantity::given(ask.dimension, range, ask.limits, evidence))
    }

    /// One range out of those of several makers' versions, with its evidence: where they differ it is a guess over
    /// all of them, and the first, the likeliest, gives the nominal.
    pub(super) fn agreed(
        &self,
        regulator: &Regulator,
        told: &[&Cited<Range>],
        what: String,
    ) -> Option<(Range, Evidence)> {
        let first = told.first()?;
        let differ = told.iter().any(|other| other.value != first.value);
        let range = told.iter().fold(first.value, |range, other| range.union(other.value));
        let recalled = if differ { told.iter().all(|cited| cited.recalled) } else { first.recalled };
        let evidence = self.cited(regulator, &first.source, recalled, what);
        Some((range, if differ { self.by_version(regulator, evidence, &first.source) } else { evidence }))
    }

    /// Evidence of a figure that the makers' versions which a name can mean have different: a guess that the maker's
    /// own version settles.
    pub(super) fn by_version(&self, regulator: &Regulator, evidence: Evidence, source: &str) -> Evidence {
        /// More families than these are counted.
        const NAMED: usize = 3;
        let names: Vec<&str> = self.families(regulator).map(|family| family.name.as_str()).collect();
        let named = names.iter().take(NAMED).copied().collect::<Vec<_>>().join(", ");
        let others = names.len().saturating_sub(NAMED);
        let more = if others > 0 { format!(" and {others} more") } else { String::new() };
        let mut evidence = evidence.at_most(Grade::Inferred).settled_by(self.which_family(regulator));
        evidence.source = format!("{source} and other makers' versions of the name ({named}{more})");
        evidence
    }

    /// The evidence of a family's figure: no stronger than the identification, a guess where it was recalled.
    pub(super) fn cited(&self, regulator: &Regulator, source: &str, recalled: bool, what: String) -> Evidence {
        let grade = if recalled { Grade::Inferred } else { Grade::Published };
        let shown = if recalled { format!("{source}, recalled") } else { source.to_owned() };
        let mut evidence = Evidence::new(grade, what, shown).at_most(regulator.identity.grade);
        if !regulator.identity.grade.is_fact()
            && let Some(remark) = regulator.identity.remarks.first()
        {
            evidence.source = format!("{}; {remark}", evidence.source);
        }
        if !evidence.grade.is_fact() {
            evidence = evidence.settled_by(self.which_family(regulator));
        }
        evidence
    }

    /// The declaration that would settle which family a part is.
    pub(super) fn which_family(&self, regulator: &Regulator) -> Settle {
        Settle::new(Table::Part, &self.part_of(regulator).reference, "family", "1117 / LM1117")
    }

    /// Why a figure is missing, in words that end in what to do.
    pub(super) fn no_sheet(&self, regulator: &Regulator) -> &'static str {
        if regulator.is_built_up() {
            "built up from single parts, of which no sheet speaks"
        } else if self.families(regulator).next().is_none() {
            "part not known: declare its family or draft a part file"
        } else {
            "its part file does not say"
        }
    }

    /// `dropout of U2`; the outputs of a part with several are told apart.
    pub(super) fn about(&self, regulator: &Regulator, noun: &str) -> String {
        let reference = &self.part_of(regulator).reference;
        match regulator.output_index {
            0 => format!("{noun} of {reference}"),
            index => format!("{noun} of {reference}, output {}", index + 1),
        }
    }

    /// The first family that has something.
    pub(super) fn first_family<'r, T>(
        &'r self,
        regulator: &'r Regulator,
        pick: impl Fn(&'r Family) -> Option<T>,
    ) -> Option<(&'r Family, T)> {
        self.families(regulator).find_map(|family| pick(family).map(|found| (family, found)))
    }
}
