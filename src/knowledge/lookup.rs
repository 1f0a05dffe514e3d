//! Looking figures up.

use super::{Cited, DropoutPoint, Family, Knowledge, Supply, Technology};
use crate::quantity::Range;

/// Dropout at a load, interpolated.
#[derive(Debug, Clone, PartialEq)]
pub struct DropoutAt {
    /// Typical dropout in volts.
    pub typical: f64,
    /// Maximum over temperature in volts; `None` where the sheet gives none at one of the points used.
    pub maximum: Option<f64>,
    /// Whether the load lies above the highest point of the sheet: then the figure is too low.
    pub beyond: bool,
}

impl Family {
    /// A figure by its key, see [`Family::FIGURES`]; one that depends on the output voltage as the hull of all versions.
    #[must_use]
    pub fn figure(&self, key: &str) -> Option<&Cited<Range>> {
        self.figures.get(key)
    }

    /// A figure by its key for a version of this output voltage (volts, any sign).
    #[must_use]
    pub fn figure_at(&self, key: &str, output: Option<f64>) -> Option<&Cited<Range>> {
        if let (Some(output), Some(steps)) = (output, self.by_output.get(key)) {
            return of_step(steps, output);
        }
        self.figure(key)
    }

    /// Dropout in volts at a load in amperes for a version of this output voltage: linear between the points of the
    /// sheet, flat outside them, so never scaled down to zero.
    #[must_use]
    pub fn dropout_at(&self, load: f64, output: Option<f64>) -> Option<Cited<DropoutAt>> {
        let all = &self.dropout.as_ref()?.points;
        let lowest = all.first()?.value.from_output;
        let output = output.map_or(lowest, f64::abs).max(lowest);
        // A version just below a step by rounding still belongs to it.
        let from = all
            .iter()
            .map(|point| point.value.from_output)
            .filter(|from| *from <= output * 1.001)
            .fold(0.0, f64::max);
        let points: Vec<&Cited<DropoutPoint>> =
            all.iter().filter(|point| point.value.from_output.total_cmp(&from).is_eq()).collect();
        let load = load.abs();
        let below = points.iter().rev().find(|point| point.value.load <= load).or(points.first())?;
        let above = points.iter().find(|point| point.value.load >= load).or(points.last())?;
        let share = if above.value.load > below.value.load {
            (load - below.value.load) / (above.value.load - below.value.load)
        } else {
            0.0
        };
        let between = |low: f64, high: f64| low + (high - low) * share.clamp(0.0, 1.0);
        let maximum = below.value.maximum.zip(above.value.maximum).map(|(low, high)| between(low, high));
        let found = DropoutAt {
            typical: between(below.value.typical, above.value.typical),
            maximum,
            beyond: points.last().is_some_and(|last| load > last.value.load * 1.001),
        };
        let weaker = if below.recalled { below } else { above };
        Some(Cited { value: found, source: weaker.source.clone(), recalled: weaker.recalled })
    }

    /// Whether its figures are all recalled.
    #[must_use]
    pub fn is_recalled(&self) -> bool {
        self.sources.iter().all(|source| !source.read)
    }
}

/// The entry of a step list for an output voltage of any sign.
fn of_step<T>(steps: &[(f64, T)], output: f64) -> Option<&T> {
    let output = output.abs() * 0.999;
    steps.iter().find(|(limit, _)| output <= *limit).or(steps.last()).map(|(_, figure)| figure)
}

impl super::CapacitorDemand {
    /// Minimum capacitance in farads for an output voltage (any sign); without one the largest of all versions.
    #[must_use]
    pub fn minimum_at(&self, output: Option<f64>) -> Option<f64> {
        if self.by_output.is_empty() {
            return self.minimum.as_ref().map(|figure| figure.value);
        }
        match output {
            Some(output) => of_step(&self.by_output, output).copied(),
            None => self.by_output.iter().map(|(_, farads)| *farads).reduce(f64::max),
        }
    }
}

impl Technology {
    /// A figure by its key, see [`Technology::FIGURES`].
    #[must_use]
    pub fn figure(&self, key: &str) -> Option<&Cited<Range>> {
        self.figures.get(key)
    }

    /// A figure of a table, see [`Technology::TABLES`]; rows are found in any case.
    #[must_use]
    pub fn row(&self, table: &str, row: &str) -> Option<&Cited<Range>> {
        let table = self.tables.get(table)?;
        table
            .get(row)
            .or_else(|| table.iter().find(|(name, _)| name.eq_ignore_ascii_case(row)).map(|(_, found)| found))
    }
}

impl Supply {
    /// A figure by its key, see [`Supply::FIGURES`].
    #[must_use]
    pub fn figure(&self, key: &str) -> Option<&Cited<Range>> {
        self.figures.get(key)
    }
}

impl Knowledge {
    /// A family by its name, in any case.
    #[must_use]
    pub fn family(&self, name: &str) -> Option<&Family> {
        self.families.iter().find(|family| family.name.eq_ignore_ascii_case(name.trim()))
    }

    /// A technology by its name or one of its words, in any case.
    #[must_use]
    pub fn technology(&self, name: &str) -> Option<&Technology> {
        let name = name.trim().to_lowercase();
        let by_name = self.technologies.iter().find(|technology| technology.name == name);
        by_name.or_else(|| self.technologies.iter().find(|technology| technology.words.contains(&name)))
    }

    /// A supply by its name or one of its words, in any case.
    #[must_use]
    pub fn supply(&self, name: &str) -> Option<&Supply> {
        let name = name.trim().to_lowercase();
        self.supplies.iter().find(|supply| supply.name.to_lowercase() == name || supply.words.contains(&name))
    }

    /// The families that are looked alike under a group name.
    pub fn group<'a>(&'a self, group: &'a str) -> impl Iterator<Item = &'a Family> {
        self.families.iter().filter(move |family| family.group == group)
    }
}
