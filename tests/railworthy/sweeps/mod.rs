//! Boards whose deciding value runs across an edge: the verdict turns where a formula worked out by hand says, once,
//! and in the right order.
//!
//! Each file sweeps the checks of one subject; the formula that gives an edge stands beside it, with its source.

mod capacitors;
mod power;
mod references;
mod set_points;
mod supply;

use railworthy::board::{Board, Options};
use railworthy::checks::Verdict;
use railworthy::review::examine;
use railworthy::source::Source;

use crate::judge::{Rules, TODAY};
use crate::small_board::{Part, netlist};

/// What the swept value is written for in the netlist and in the board file.
const PLACE: &str = "@";
/// How near to its edge a verdict must turn, relative: well within 1 %, so that edges 1 % apart can be told apart.
const NEAR: f64 = 0.004;
/// How many values are tried between two edges, and outside the first and the last.
const BETWEEN: u32 = 8;

/// A board of which one value is left open, and what is asked of it.
pub(crate) struct Sweep {
    rules: Rules,
    netlist: String,
    board: String,
    check: &'static str,
    subject: &'static str,
}

impl Sweep {
    /// Parts and a board file in which `@` stands for the value.
    pub(crate) fn new(parts: &[Part], board: &str, check: &'static str, subject: &'static str) -> Self {
        let netlist = netlist(parts);
        assert!(netlist.contains(PLACE) || board.contains(PLACE), "nothing to sweep");
        Self { rules: Rules::built_in(), netlist, board: board.to_owned(), check, subject }
    }

    /// The verdict with a value in its place.
    fn verdict(&self, value: f64) -> Verdict {
        let written = |text: &str| text.replace(PLACE, &format!("{value:.6}"));
        let board = Source::new("sweep.railworthy.toml", written(&self.board));
        let (board, problems) = Board::read(&board, Options::default());
        assert!(problems.is_empty(), "{problems:?}");
        let text = written(&self.netlist);
        let found =
            examine("sweep.net", text.as_bytes(), board, &self.rules.knowledge, &self.rules.checks, TODAY).unwrap();
        assert!(found.problems.is_empty(), "{:?}", found.problems);
        let told = found.told.iter().find(|told| told.check == self.check && told.subject == self.subject);
        // What is not asked is silent.
        told.map_or(Verdict::Holds, |told| told.verdict)
    }

    /// Asserts that the verdict is `first` from half the first edge on and turns at each of the rising edges, up to twice
    /// the last, and nowhere else.
    pub(crate) fn turns(&self, first: Verdict, edges: &[(f64, Verdict)]) {
        let mut low = edges[0].0 * 0.5;
        let mut verdict = first;
        for (index, (edge, next)) in edges.iter().enumerate() {
            assert!(*edge > low, "edges rise");
            self.stays(low, edge * (1.0 - NEAR), verdict);
            let end = edges.get(index + 1).map_or(edge * 2.0, |(next, _)| next * (1.0 - NEAR));
            self.stays(edge * (1.0 + NEAR), end, *next);
            (low, verdict) = (edge * (1.0 + NEAR), *next);
        }
    }

    fn stays(&self, low: f64, high: f64, verdict: Verdict) {
        for step in 0..=BETWEEN {
            let value = low + (high - low) * f64::from(step) / f64::from(BETWEEN);
            assert_eq!(self.verdict(value), verdict, "{} of {} at {value}", self.check, self.subject);
        }
    }
}
