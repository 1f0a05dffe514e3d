//! Real exports, read whole. Files are named by their number only.

use std::fs;
use std::path::Path;

use railworthy::netlist::{self, Format, Netlist};
use railworthy::source::{Severity, Span};
use sexp::{Atom, Sexp};

use crate::reference_tokens::{Token, lists_at, tokens};
use crate::shared::shared_folder;

/// One line of the index.
struct Entry {
    file: String,
    version: String,
    counts: [usize; 3],
}

fn entries(corpus: &Path) -> Vec<Entry> {
    let index = fs::read_to_string(corpus.join("INDEX.tsv")).unwrap();
    let entries: Vec<Entry> = index
        .lines()
        .skip(1)
        .map(|line| {
            let cells: Vec<&str> = line.split('\t').collect();
            let count = |at: usize| cells[at].parse().unwrap();
            Entry { file: cells[0].into(), version: cells[4].into(), counts: [count(7), count(8), count(9)] }
        })
        .collect();
    assert_eq!(entries.len(), 99);
    entries
}

fn read(folder: &Path, file: &str) -> (Vec<u8>, Netlist) {
    let bytes = fs::read(folder.join(file)).unwrap();
    let netlist = netlist::read(file, &bytes).unwrap_or_else(|problems| panic!("{}: {problems:?}", &file[..3]));
    (bytes, netlist)
}

#[test]
fn every_real_export_is_read_whole_with_the_counts_of_the_index() {
    let Some(shared) = shared_folder() else { return };
    let corpus = shared.join("corpus");
    for entry in entries(&corpus) {
        let number = &entry.file[..3];
        let (_, netlist) = read(&corpus.join("files"), &entry.file);
        assert!(netlist.is_complete(), "{number}: {:?}", netlist.problems);
        let counts = [netlist.components.len(), netlist.nets.len(), netlist.node_count()];
        assert_eq!(counts, entry.counts, "{number}");
        assert_eq!(netlist.version, entry.version, "{number}");
        assert!(!netlist.parts.is_empty(), "{number}");
        assert!(netlist.tool.to_lowercase().contains("eeschema"), "{number}");
        let written_as_xml = netlist.source.text().trim_start_matches('\u{feff}').starts_with("<?xml");
        let expected = if written_as_xml { "xml" } else { entry.version.as_str() };
        assert_eq!(netlist.format.name(), expected, "{number}");
    }
}

#[test]
fn every_atom_comes_out_as_an_independent_reading_has_it() {
    let Some(shared) = shared_folder() else { return };
    let corpus = shared.join("corpus");
    let wanted = [(1, "version"), (1, "design"), (2, "comp"), (2, "libpart"), (2, "net")];
    let mut atoms = 0;
    for entry in entries(&corpus) {
        let text = fs::read_to_string(corpus.join("files").join(&entry.file)).unwrap();
        if text.trim_start_matches('\u{feff}').starts_with('<') {
            continue;
        }
        let expected = lists_at(&tokens(&text), &wanted);
        let found: Vec<(usize, Vec<Token>)> =
            netlist::islands(&text).into_iter().map(|(span, tree)| (span.start(), flatten(&tree))).collect();
        assert_eq!(found.len(), expected.len(), "{}", &entry.file[..3]);
        for ((at, found), (offset, expected)) in found.iter().zip(&expected) {
            assert_eq!(at, offset, "{}", &entry.file[..3]);
            let expected: Vec<Token> = expected.iter().cloned().map(without_offset).collect();
            assert_eq!(found, &expected, "{} at {offset}", &entry.file[..3]);
            atoms += expected.iter().filter(|token| matches!(token, Token::Text(_))).count();
        }
    }
    assert!(atoms > 100_000, "{atoms} atoms were compared");
}

fn without_offset(token: Token) -> Token {
    if matches!(token, Token::Open(_)) { Token::Open(0) } else { token }
}

fn flatten(tree: &Sexp) -> Vec<Token> {
    match tree {
        Sexp::Atom(Atom::S(text)) => vec![Token::Text(text.clone())],
        Sexp::Atom(other) => panic!("an atom was read as a number: {other:?}"),
        Sexp::List(items) => {
            let inside = items.iter().flat_map(flatten);
            std::iter::once(Token::Open(0)).chain(inside).chain([Token::Close]).collect()
        }
    }
}

/// What a span shows, as the reader means it.
fn shown(netlist: &Netlist, span: Span) -> String {
    let written = netlist.source.slice(span);
    if netlist.format == Format::Xml {
        let entities = [("&lt;", "<"), ("&gt;", ">"), ("&quot;", "\""), ("&apos;", "'"), ("&amp;", "&")];
        return entities.iter().fold(written.to_owned(), |text, (entity, sign)| text.replace(entity, sign));
    }
    match tokens(written).as_slice() {
        [Token::Text(text)] => text.clone(),
        other => panic!("a span shows {other:?}"),
    }
}

#[test]
fn spans_show_what_they_name() {
    let Some(shared) = shared_folder() else { return };
    let corpus = shared.join("corpus");
    for entry in entries(&corpus) {
        let (_, netlist) = read(&corpus.join("files"), &entry.file);
        let number = &entry.file[..3];
        for component in &netlist.components {
            assert_eq!(shown(&netlist, component.reference_span), component.reference, "{number}");
            let whole = netlist.source.slice(component.span);
            let bounds = ["(comp", "<comp"].iter().any(|head| whole.starts_with(head)) && whole.ends_with([')', '>']);
            assert!(bounds, "{number}: {whole}");
        }
        for net in &netlist.nets {
            assert_eq!(shown(&netlist, net.name_span), net.name, "{number}");
            for node in &net.nodes {
                let whole = netlist.source.slice(node.span);
                let holds = whole.contains(&node.reference) && whole.contains("node") && whole.ends_with([')', '>']);
                assert!(holds && whole.starts_with(['(', '<']), "{number}: {whole}");
                assert!(net.span.start() < node.span.start() && node.span.end() < net.span.end(), "{number}");
            }
        }
    }
}

#[test]
fn roles_can_be_looked_up_in_real_exports() {
    let Some(shared) = shared_folder() else { return };
    let corpus = shared.join("corpus");
    let (mut aliases, mut pins, mut fields, mut sheets) = (0, 0, 0, 0);
    for entry in entries(&corpus) {
        let (_, netlist) = read(&corpus.join("files"), &entry.file);
        for part in &netlist.parts {
            aliases += part.aliases.len();
            pins += part.pins.len();
        }
        for component in &netlist.components {
            assert!(!component.part.is_empty() && !component.sheet.is_empty() && !component.ids.is_empty());
            fields += component.fields.len();
            sheets += usize::from(!component.sheet_file.is_empty());
        }
    }
    // Counted by a separate script over the same files: 1111 + 168 aliases, 6831 + 1860 pins.
    assert_eq!((aliases, pins), (1279, 8691));
    assert!(fields > 1_500 && sheets > 200, "{fields} fields, {sheets} sheet files");
}

#[test]
fn what_is_no_netlist_is_refused_by_name_and_a_foreign_writer_is_read() {
    let Some(shared) = shared_folder() else { return };
    let folder = shared.join("corpus/not-netlists");
    for (file, what) in [
        ("legacy-acdc.net", "a netlist of a much older format"),
        ("legacy-alcohol.net", "a netlist of a much older format"),
        ("spice-schematic1.net", "a SPICE deck"),
    ] {
        let problems = netlist::read(file, &fs::read(folder.join(file)).unwrap()).unwrap_err();
        assert!(problems[0].message().contains(what), "{file}: {}", problems[0].message());
        assert!(problems[0].advice().unwrap().contains("export a netlist"), "{file}");
    }
    let (_, netlist) = read(&folder, "foreign-writer-step-motor.net");
    assert!(netlist.is_complete() && netlist.parts.is_empty() && !netlist.nets.is_empty(), "{:?}", netlist.problems);
    assert!(netlist.problems.iter().all(|problem| problem.severity() < Severity::Warning));
}

#[test]
fn boards_made_for_other_tests_are_read_whole() {
    let Some(shared) = shared_folder() else { return };
    let mut count = 0;
    for folder in ["failures", "oracle/nets"] {
        for file in fs::read_dir(shared.join(folder)).unwrap() {
            let path = file.unwrap().path();
            if path.extension().is_some_and(|extension| extension == "net") {
                let (_, netlist) = read(path.parent().unwrap(), path.file_name().unwrap().to_str().unwrap());
                assert!(netlist.is_complete(), "{}: {:?}", path.display(), netlist.problems);
                count += 1;
            }
        }
    }
    assert!(count > 30, "{count} boards");
}
