//! The loop of a part as its maker publishes it: `[loop]` of a part file, and of a `[[part]]` in a board file.

use super::cite::{Cite, read_range};
use super::{Cited, Family};
use crate::quantity::{Dimension, Range, read_gain};
use crate::source::toml::{Table, Text};

/// Most poles, and most zeros, of a published loop.
pub const MOST_CORNERS: usize = 12;
/// What a loop may have: gains as ratios, corners in hertz, ohms. Beyond lies a slip of a unit.
const GAINS: (f64, f64) = (1e-3, 1e10);
const CORNERS: (f64, f64) = (1e-6, 1e10);
const OHMS: (f64, f64) = (1e-6, 1e9);

/// A loop `T(s) = gain × Π (1 + s / zero) / Π (1 + s / pole) × Z(s) / Z(0)`, where Z is what lies at the output: the
/// output resistance, the load and the capacitors with their ESR in parallel. `F` is a figure with what it rests on.
#[derive(Debug, Clone, PartialEq)]
pub struct PublishedLoop<F> {
    /// The gain at low frequencies, a ratio.
    pub gain: F,
    /// The poles inside the part in hertz, without that of the output.
    pub poles: Vec<F>,
    /// The zeros inside the part in hertz, without that of the ESR; fewer than the poles.
    pub zeros: Vec<F>,
    /// The resistance of the part's output in ohms, without the loop; `None` where the load alone counts.
    pub output_resistance: Option<F>,
}

impl PublishedLoop<()> {
    /// The keys of the table.
    pub const KEYS: &'static [&'static str] = &["gain", "poles", "zeros", "output_resistance"];
}

impl<F> PublishedLoop<F> {
    /// Reads the keys of a `[loop]` table; `keep` makes what is kept of the figure under a key.
    pub(crate) fn read<'a>(table: &mut Table<'a>, keep: impl Fn(&'static str, Text<'a>, Range) -> F) -> Option<Self> {
        let gain = table.require("gain").and_then(|value| value.text());
        let gain = gain.and_then(|text| Some(keep("gain", text, gain_of(text)?)));
        let corners = |key: &'static str, texts: Vec<Text<'a>>| {
            if let Some(text) = texts.get(MOST_CORNERS) {
                text.refuse(
                    format!("more than {MOST_CORNERS} {key}"),
                    "one too many",
                    "keep those below a gain of one",
                );
            }
            let corner = |text: Text<'a>| Some(keep(key, text, bounded(text, Dimension::FREQUENCY, CORNERS)?));
            texts.into_iter().filter_map(corner).collect::<Vec<F>>()
        };
        let listed = table.require("poles");
        let poles = listed.and_then(|value| value.texts()).unwrap_or_default();
        let zeros = table.texts("zeros");
        let count = (poles.len(), zeros.len());
        let (poles, zeros) = (corners("poles", poles), corners("zeros", zeros));
        let resistance = table.text("output_resistance");
        let output_resistance = resistance
            .and_then(|text| Some(keep("output_resistance", text, bounded(text, Dimension::RESISTANCE, OHMS)?)));
        if let Some(listed) = listed
            && count.1 >= count.0
        {
            listed.refuse(
                "a loop needs more poles than zeros",
                format!("poles: {}, zeros: {}", count.0, count.1),
                "name the poles inside the part; that of the output is computed",
            );
        }
        Some(Self { gain: gain?, poles, zeros, output_resistance })
    }

    /// The same loop with something made of each figure, its key and its place in the list under it.
    #[must_use]
    pub fn map<G>(&self, make: impl Fn(&'static str, usize, &F) -> G) -> PublishedLoop<G> {
        let each = |key: &'static str, list: &[F]| {
            list.iter().enumerate().map(|(number, figure)| make(key, number, figure)).collect()
        };
        PublishedLoop {
            gain: make("gain", 0, &self.gain),
            poles: each("poles", &self.poles),
            zeros: each("zeros", &self.zeros),
            output_resistance: self.output_resistance.as_ref().map(|figure| make("output_resistance", 0, figure)),
        }
    }

    /// Its figures in this order: gain, poles, zeros, output resistance.
    pub fn into_figures(self) -> impl Iterator<Item = F> {
        let lists = self.poles.into_iter().chain(self.zeros);
        std::iter::once(self.gain).chain(lists).chain(self.output_resistance)
    }

    /// Each figure with its key and its place in the list under it.
    pub fn figures(&self) -> impl Iterator<Item = (&'static str, usize, &F)> {
        let under = |key| move |(index, figure)| (key, index, figure);
        let poles = self.poles.iter().enumerate().map(under("poles"));
        let zeros = self.zeros.iter().enumerate().map(under("zeros"));
        let resistance = self.output_resistance.iter().map(|figure| ("output_resistance", 0, figure));
        std::iter::once(("gain", 0, &self.gain)).chain(poles).chain(zeros).chain(resistance)
    }
}

/// Reads `[loop]` of a part file.
pub(super) fn read_loop(root: &mut Table<'_>, cite: &Cite<'_>) -> Option<PublishedLoop<Cited<Range>>> {
    let mut table = root.table("loop")?;
    let cite = cite.within(&mut table);
    let found = PublishedLoop::read(&mut table, |key, _, range| cite.cite(key, range));
    Cite::check_keys(&mut table, PublishedLoop::KEYS);
    table.finish();
    found
}

impl Family {
    /// Whether two families state the same loop.
    #[must_use]
    pub fn has_the_loop_of(&self, other: &Self) -> bool {
        let ranges = |family: &Self| -> Vec<(&'static str, Range)> {
            let figures = family.published_loop.iter().flat_map(PublishedLoop::figures);
            figures.map(|(key, _, cited)| (key, cited.value)).collect()
        };
        ranges(self) == ranges(other)
    }
}

fn gain_of(text: Text<'_>) -> Option<Range> {
    match read_gain(text.as_str()) {
        Ok(range) => within(text, range, GAINS),
        Err(error) => {
            let span = text.part(error.span().start()..error.span().end());
            let help = "write decibels or a ratio: \"80 dB\", \"75 / 80 / 85 dB\", \"10000\"";
            text.document().refuse(span, error.message(), "not a gain", help);
            None
        }
    }
}

fn bounded(text: Text<'_>, dimension: Dimension, limits: (f64, f64)) -> Option<Range> {
    within(text, read_range(&text, dimension)?, limits)
}

fn within(text: Text<'_>, range: Range, limits: (f64, f64)) -> Option<Range> {
    if range.low() >= limits.0 && range.high() <= limits.1 {
        return Some(range);
    }
    text.refuse(
        format!("`{}` is not possible here", text.as_str().trim()),
        format!("not within {:e} and {:e}", limits.0, limits.1),
        "write a magnitude above zero with its unit, closed at both ends",
    );
    None
}
