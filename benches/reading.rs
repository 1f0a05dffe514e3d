//! Reading a netlist against the bare parser over the same bytes: the reader should take at most one and a half times
//! as long, at any size. With `RAILWORTHY_SHARED` set, over the real exports there too.

#![allow(clippy::unwrap_used, clippy::indexing_slicing, reason = "a bench that meets what it does not expect fails")]
#![allow(missing_docs, unreachable_pub, reason = "a program of its own")]

mod common;

use common::{Style, board};
use divan::counter::BytesCount;
use divan::{Bencher, black_box};
use railworthy::netlist;

const SIZES: [usize; 4] = [300, 1_000, 10_000, 100_000];

fn main() {
    divan::main();
}

fn reader(bencher: Bencher<'_, '_>, texts: &[String]) {
    for text in texts {
        assert!(netlist::read("bench.net", text.as_bytes()).unwrap().is_complete());
    }
    let bytes: usize = texts.iter().map(String::len).sum();
    bencher.counter(BytesCount::new(bytes)).bench_local(|| {
        for text in texts {
            drop(black_box(netlist::read("bench.net", black_box(text).as_bytes())));
        }
    });
}

fn parser(bencher: Bencher<'_, '_>, texts: &[String]) {
    let bytes: usize = texts.iter().map(String::len).sum();
    bencher.counter(BytesCount::new(bytes)).bench_local(|| {
        for text in texts {
            drop(black_box(sexp::parse(black_box(text))));
        }
    });
}

#[divan::bench(args = SIZES, sample_count = 20)]
fn d_reader(bencher: Bencher<'_, '_>, parts: usize) {
    reader(bencher, &[board(parts, Style::D)]);
}

#[divan::bench(args = SIZES, sample_count = 20)]
fn d_parser_alone(bencher: Bencher<'_, '_>, parts: usize) {
    parser(bencher, &[board(parts, Style::D)]);
}

#[divan::bench(args = SIZES, sample_count = 20)]
fn e_reader(bencher: Bencher<'_, '_>, parts: usize) {
    reader(bencher, &[board(parts, Style::E)]);
}

#[divan::bench(args = SIZES, sample_count = 20)]
fn e_parser_alone(bencher: Bencher<'_, '_>, parts: usize) {
    parser(bencher, &[board(parts, Style::E)]);
}

/// The real exports that are S-expressions; none without the shared folder.
fn real_exports() -> Vec<String> {
    let Some(shared) = std::env::var_os("RAILWORTHY_SHARED") else { return Vec::new() };
    let folder = std::path::Path::new(&shared).join("corpus/files");
    let mut paths: Vec<_> = std::fs::read_dir(folder).unwrap().map(|entry| entry.unwrap().path()).collect();
    paths.sort();
    let texts = paths.into_iter().map(|path| std::fs::read_to_string(path).unwrap());
    texts.filter(|text| text.starts_with('(')).collect()
}

#[divan::bench(sample_count = 20)]
fn real_reader(bencher: Bencher<'_, '_>) {
    reader(bencher, &real_exports());
}

#[divan::bench(sample_count = 20)]
fn real_parser_alone(bencher: Bencher<'_, '_>) {
    parser(bencher, &real_exports());
}
