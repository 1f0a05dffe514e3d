//! Many boards at once: every one that is meant, judged on as many threads as there are, told in the order of the
//! arguments.

use std::path::PathBuf;
use std::time::Duration;

use indicatif::{ProgressBar, ProgressDrawTarget, ProgressStyle};
use rayon::ThreadPoolBuilder;
use rayon::prelude::*;

use super::input::{self, Rules};
use super::settings::shows_progress;
use super::walk::{self, Item};
use super::{Streams, args, guard};
use crate::report::{self, BoardResult};
use crate::source::Problem;

/// How often the progress is drawn anew while nothing is done.
const TICK: Duration = Duration::from_millis(200);

/// What boards are judged under, and how.
#[derive(Debug)]
pub(super) struct How<'a> {
    pub(super) input: &'a args::Input,
    pub(super) rules: &'a Rules,
    pub(super) today: &'a str,
    /// Most boards at once.
    pub(super) jobs: Option<u16>,
    /// Neither progress nor notes.
    pub(super) quiet: bool,
}

/// Judges every board that some arguments mean. What goes wrong with one costs nothing of the others.
pub(super) fn judge(named: &[PathBuf], how: &How<'_>, to: &mut Streams<'_>) -> Vec<BoardResult> {
    let meant = walk::meant(named);
    if !how.quiet {
        for note in &meant.notes {
            to.tell(&format!("note: {}\n", report::inert(note)));
        }
    }
    let bar = progress(meant.items.len(), how.quiet);
    let results = each(&meant.items, how.jobs, |item| {
        let result = one(item, how);
        bar.inc(1);
        result
    });
    bar.finish_and_clear();
    results
}

fn one(item: &Item, how: &How<'_>) -> BoardResult {
    match item {
        Item::Board(path) => guard::guarded(|| input::board(path, how.input, how.rules, how.today))
            .unwrap_or_else(|fault| input::not_judged(path, Problem::error(fault), how.rules)),
        Item::Refused(path, problem) => input::not_judged(path, problem.clone(), how.rules),
    }
}

/// Works on each of a list, on several threads where there are several to work on; the results keep the order.
fn each<T: Sync, R: Send>(list: &[T], jobs: Option<u16>, work: impl Fn(&T) -> R + Sync) -> Vec<R> {
    // 0 leaves the number of threads to rayon: what RAYON_NUM_THREADS says, else one for each processor.
    let threads = jobs.map_or(0, usize::from);
    let pool = (list.len() > 1 && threads != 1).then(|| ThreadPoolBuilder::new().num_threads(threads).build());
    match pool {
        Some(Ok(pool)) => pool.install(|| list.par_iter().map(&work).collect()),
        // Where threads cannot be had, the work is still done.
        Some(Err(_)) | None => list.iter().map(work).collect(),
    }
}

/// A bar on standard error, hidden where nobody would see it.
fn progress(count: usize, quiet: bool) -> ProgressBar {
    if count < 2 || quiet || !shows_progress() {
        return ProgressBar::with_draw_target(None, ProgressDrawTarget::hidden());
    }
    let bar = ProgressBar::with_draw_target(u64::try_from(count).ok(), ProgressDrawTarget::stderr());
    if let Ok(style) = ProgressStyle::with_template("{bar:30} {pos} of {len} boards") {
        bar.set_style(style);
    }
    bar.enable_steady_tick(TICK);
    bar
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn results_keep_the_order_of_the_list_whatever_the_threads() {
        let list: Vec<u64> = (0..200).collect();
        let work = |each: &u64| {
            std::thread::sleep(Duration::from_micros(200 - *each));
            each * 2
        };
        let wanted: Vec<u64> = list.iter().map(|each| each * 2).collect();
        for jobs in [None, Some(1), Some(7)] {
            assert_eq!(each(&list, jobs, work), wanted);
        }
    }

    #[test]
    fn what_panics_in_one_piece_of_work_costs_no_other() {
        let list = [1, 2, 3, 4];
        let work = |each: &i32| guard::guarded(|| if *each == 2 { panic!("no {each}") } else { *each }).ok();
        for jobs in [Some(1), Some(3)] {
            assert_eq!(super::each(&list, jobs, work), [Some(1), None, Some(3), Some(4)]);
        }
    }

    #[test]
    fn results_cross_threads() {
        fn crosses<T: Send + Sync>() {}
        crosses::<BoardResult>();
        crosses::<crate::review::Examination>();
        crosses::<Rules>();
    }
}
