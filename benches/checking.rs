//! The whole check of a board: its cost should grow in step with its parts.

#![allow(clippy::unwrap_used, clippy::indexing_slicing, reason = "a bench that meets what it does not expect fails")]
#![allow(missing_docs, unreachable_pub, reason = "a program of its own")]

mod common;

use common::{Style, board};
use divan::counter::ItemsCount;
use divan::{Bencher, black_box};
use railworthy::board::Board;
use railworthy::checks::{Checks, DefinedNames};
use railworthy::knowledge::Knowledge;
use railworthy::{netlist, review};
use rayon::prelude::*;

const SIZES: [usize; 4] = [300, 1_000, 10_000, 100_000];

fn main() {
    divan::main();
}

/// Everything from the bytes to reviewed findings.
#[divan::bench(args = SIZES, sample_count = 5)]
fn whole_check(bencher: Bencher<'_, '_>, parts: usize) {
    let text = board(parts, Style::E);
    let knowledge = Knowledge::built_in();
    let (checks, problems) = Checks::load(&knowledge.checks, &DefinedNames);
    assert!(problems.is_empty());
    bencher.counter(ItemsCount::new(parts)).bench_local(|| {
        let examined =
            review::examine("bench.net", text.as_bytes(), Board::default(), &knowledge, &checks, "2026-06-01");
        assert_eq!(black_box(examined.unwrap()).design.regulators.len(), parts / 5);
    });
}

/// A repository of boards, one after the other and side by side: the ratio should be near the number of processors.
#[divan::bench(args = [false, true], sample_count = 5)]
fn many_boards(bencher: Bencher<'_, '_>, side_by_side: bool) {
    const BOARDS: usize = 24;
    let text = board(1_000, Style::E);
    let knowledge = Knowledge::built_in();
    let (checks, _) = Checks::load(&knowledge.checks, &DefinedNames);
    let one = |_| {
        let examined =
            review::examine("bench.net", text.as_bytes(), Board::default(), &knowledge, &checks, "2026-06-01");
        examined.unwrap().findings.len()
    };
    bencher.counter(ItemsCount::new(BOARDS)).bench_local(|| {
        let found: usize =
            if side_by_side { (0..BOARDS).into_par_iter().map(one).sum() } else { (0..BOARDS).map(one).sum() };
        assert!(black_box(found) > 0);
    });
}

/// Reading alone, for the share that it has.
#[divan::bench(args = SIZES, sample_count = 5)]
fn reading(bencher: Bencher<'_, '_>, parts: usize) {
    let text = board(parts, Style::D);
    bencher.counter(ItemsCount::new(parts)).bench_local(|| {
        drop(black_box(netlist::read("bench.net", black_box(&text).as_bytes())));
    });
}

/// What every start costs: part files, technologies, supplies and checks.
#[divan::bench]
fn loading_what_is_built_in() -> usize {
    let knowledge = Knowledge::built_in();
    let (checks, _) = Checks::load(&knowledge.checks, &DefinedNames);
    black_box(checks.len() + knowledge.families.len())
}
