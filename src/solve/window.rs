//! Which ESR of the bulk capacitor keeps a loop stable at every load.

use super::bank::{Bank, Network};
use super::loop_gain::LoopGain;
use super::margins::Margins;

/// The loads at which a loop is looked at, as shares of the full one.
pub const LOAD_SHARES: [f64; 3] = [0.1, 0.5, 1.0];
/// The phase margin that a loop is usually given, in degrees (common practice).
pub const USUAL_PHASE: f64 = 45.0;
/// How closely an edge is bisected, of its value.
const EDGE_TOLERANCE: f64 = 1e-5;
/// Most halvings of one edge.
const MOST_HALVINGS: usize = 60;
/// The steps of the search for a window between the points of a grid.
const PEAK_STEPS: usize = 24;

/// The margins that a loop must have.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Goal {
    /// Phase margin in degrees.
    pub phase: f64,
    /// Modulus margin; zero for none.
    pub modulus: f64,
}

impl Goal {
    /// How far margins lie above the goal, as a share of it; below zero where they miss it.
    fn slack(&self, margins: &Margins) -> f64 {
        let by_phase = (margins.phase_or_all() - self.phase) / self.phase.abs().max(1.0);
        if self.modulus > 0.0 { by_phase.min((margins.modulus - self.modulus) / self.modulus) } else { by_phase }
    }
}

/// What the stable values of ESR look like within the range that was searched.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum WindowKind {
    /// No value will do.
    None,
    /// Every value will do.
    All,
    /// There is only a least value.
    Lower,
    /// There is only a largest value.
    Upper,
    /// There are both.
    TwoSided,
    /// There are several ranges.
    Split,
}

impl WindowKind {
    /// Every kind with its name in results.
    pub const NAMES: &'static [&'static str] = &["none", "all", "lower", "upper", "two-sided", "split"];

    /// Its name in results.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::None => "none",
            Self::All => "all",
            Self::Lower => "lower",
            Self::Upper => "upper",
            Self::TwoSided => "two-sided",
            Self::Split => "split",
        }
    }
}

/// The ESR that a loop is stable with, at every load.
#[derive(Debug, Clone, PartialEq)]
pub struct Window {
    /// What it looks like.
    pub kind: WindowKind,
    /// Its ranges in ohms, rising; ends of the range that was searched stand where it has no edge.
    pub spans: Vec<(f64, f64)>,
    /// The ESR in ohms of the largest margin among those that were looked at.
    pub best: f64,
    /// The margins there.
    pub best_margins: Margins,
}

impl Window {
    /// Its lower edge in ohms: of the widest range, where there are several; none where it has none.
    #[must_use]
    pub fn low(&self) -> Option<f64> {
        let has_edge = !matches!(self.kind, WindowKind::All | WindowKind::Upper);
        self.widest().filter(|_| has_edge).map(|(low, _)| low)
    }

    /// Its upper edge, likewise.
    #[must_use]
    pub fn high(&self) -> Option<f64> {
        let has_edge = !matches!(self.kind, WindowKind::All | WindowKind::Lower);
        self.widest().filter(|_| has_edge).map(|(_, high)| high)
    }

    fn widest(&self) -> Option<(f64, f64)> {
        let width = |span: &(f64, f64)| span.1 / span.0;
        self.spans.iter().copied().max_by(|one, other| width(one).total_cmp(&width(other)))
    }
}

/// The margins at each ESR in ohms, the worst of all loops.
#[must_use]
pub fn esr_scan(loops: &[LoopGain], bank: &Bank, esr: &[f64]) -> Vec<Margins> {
    esr.iter().map(|ohms| worst(loops, bank, *ohms)).collect()
}

/// Values of ESR evenly spaced by their logarithm, in ohms.
#[must_use]
pub fn esr_grid(least: f64, largest: f64, count: u32) -> Vec<f64> {
    let last = count.saturating_sub(1).max(1);
    (0..count).map(|number| least * (largest / least).powf(f64::from(number) / f64::from(last))).collect()
}

/// The worst margins of all loops with a network at the output.
#[must_use]
pub fn worst_margins(loops: &[LoopGain], network: &Network) -> Margins {
    loops.iter().map(|own| own.margins(network)).fold(Margins::BOUNDLESS, Margins::worse)
}

fn worst(loops: &[LoopGain], bank: &Bank, ohms: f64) -> Margins {
    worst_margins(loops, &bank.with_esr(ohms))
}

/// The values of ESR at which all loops, one for each load, meet a goal. The grid, rising, in ohms, is where it is looked
/// for; its edges are bisected, and a peak between the grid's points that alone meets the goal is found too.
#[must_use]
pub fn window(loops: &[LoopGain], bank: &Bank, esr: &[f64], goal: &Goal) -> Window {
    window_of(|ohms| worst(loops, bank, ohms), esr, goal)
}

/// The same for margins that are known as a function of the ESR in ohms.
#[must_use]
pub fn window_of(margins: impl Fn(f64) -> Margins, esr: &[f64], goal: &Goal) -> Window {
    let scanned: Vec<(f64, Margins)> = esr.iter().map(|ohms| (*ohms, margins(*ohms))).collect();
    let best = scanned.iter().max_by(|one, other| goal.slack(&one.1).total_cmp(&goal.slack(&other.1)));
    let Some((best, best_margins)) = best.copied() else {
        return Window {
            kind: WindowKind::None,
            spans: Vec::new(),
            best: f64::NAN,
            best_margins: Margins::BOUNDLESS,
        };
    };
    let meets = |ohms: f64| goal.slack(&margins(ohms)) >= 0.0;
    if goal.slack(&best_margins) < 0.0 {
        return peak(margins, &scanned, goal, best);
    }
    let mut spans: Vec<(f64, f64)> = Vec::new();
    let mut before: Option<(f64, bool)> = None;
    for (ohms, margins) in &scanned {
        let fine = goal.slack(margins) >= 0.0;
        match (before, spans.last_mut()) {
            (Some((_, true)), Some(span)) if fine => span.1 = *ohms,
            (Some((last, true)), Some(span)) => span.1 = edge(last, *ohms, meets),
            (Some((last, false)), _) if fine => spans.push((edge(*ohms, last, meets), *ohms)),
            (None, _) if fine => spans.push((*ohms, *ohms)),
            _ => {}
        }
        before = Some((*ohms, fine));
    }
    let fine_at = |end: Option<&(f64, Margins)>| end.is_some_and(|(_, margins)| goal.slack(margins) >= 0.0);
    let kind = match (spans.len(), fine_at(scanned.first()), fine_at(scanned.last())) {
        (0, ..) => WindowKind::None,
        (1, true, true) => WindowKind::All,
        (1, true, false) => WindowKind::Upper,
        (1, false, true) => WindowKind::Lower,
        (1, false, false) => WindowKind::TwoSided,
        _ => WindowKind::Split,
    };
    Window { kind, spans, best, best_margins }
}

/// The last value that meets the goal on the way from one that does to one that does not.
fn edge(mut fine: f64, mut wrong: f64, meets: impl Fn(f64) -> bool) -> f64 {
    for _ in 0..MOST_HALVINGS {
        if (fine / wrong).ln().abs() <= EDGE_TOLERANCE {
            break;
        }
        let middle = (fine * wrong).sqrt();
        *(if meets(middle) { &mut fine } else { &mut wrong }) = middle;
    }
    fine
}

/// Looks between the points of the grid beside the best one, where none of them meets the goal.
fn peak(margins: impl Fn(f64) -> Margins, scanned: &[(f64, Margins)], goal: &Goal, best: f64) -> Window {
    let below = scanned.iter().map(|(ohms, _)| *ohms).rfind(|ohms| *ohms < best).unwrap_or(best);
    let above = scanned.iter().map(|(ohms, _)| *ohms).find(|ohms| *ohms > best).unwrap_or(best);
    let slack = |ohms: f64| goal.slack(&margins(ohms));
    // Golden section over the logarithm (Press et al., Numerical Recipes, chapter 10).
    let golden = 0.5 * (5_f64.sqrt() - 1.0);
    let (mut low, mut high) = (below.ln(), above.ln());
    let mut found = best;
    for _ in 0..PEAK_STEPS {
        let (one, other) = (high - golden * (high - low), low + golden * (high - low));
        let (at_one, at_other) = (slack(one.exp()), slack(other.exp()));
        let (better, most) = if at_one > at_other { (one, at_one) } else { (other, at_other) };
        *(if at_one > at_other { &mut high } else { &mut low }) = if at_one > at_other { other } else { one };
        found = better.exp();
        if most >= 0.0 {
            break;
        }
    }
    let best_margins = margins(found);
    if goal.slack(&best_margins) < 0.0 {
        return Window { kind: WindowKind::None, spans: Vec::new(), best: found, best_margins };
    }
    let meets = |ohms: f64| slack(ohms) >= 0.0;
    let spans = vec![(edge(found, below, meets), edge(found, above, meets))];
    Window { kind: WindowKind::TwoSided, spans, best: found, best_margins }
}
