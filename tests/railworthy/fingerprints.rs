//! Fingerprints of findings: they stay whatever the order and the numbers of things are, and tell like parts apart.

use std::collections::{BTreeMap, BTreeSet};

use proptest::prelude::*;
use railworthy::board::Board;
use railworthy::netlist::{Component, NetEntry, NetNode, Netlist, read};
use railworthy::review::{Reviewed, examine_netlist};

use super::judge::{Rules, TODAY};
use super::program::examples;
use super::shared::shared_folder;

fn gauge() -> Netlist {
    let bytes = std::fs::read(examples().join("gauge-draft.net")).unwrap();
    read("gauge.net", &bytes).unwrap()
}

/// The findings without a board file: most of what can be found.
fn findings(netlist: Netlist, rules: &Rules) -> Vec<Reviewed> {
    let found = examine_netlist(netlist, Board::default(), &rules.knowledge, &rules.checks, TODAY).findings;
    let merged: Vec<Reviewed> = found.iter().flat_map(|each| each.merged.clone()).collect();
    found.into_iter().chain(merged).collect()
}

/// Check and fingerprint of every finding.
fn prints(netlist: Netlist, rules: &Rules) -> BTreeSet<(String, String)> {
    let found = findings(netlist, rules);
    let count = found.len();
    let prints: BTreeSet<_> = found.into_iter().map(|each| (each.finding.check, each.fingerprint)).collect();
    assert_eq!(prints.len(), count, "each finding has its own");
    prints
}

/// A shuffle that a seed makes.
struct Shuffle(u64);

impl Shuffle {
    fn below(&mut self, count: usize) -> usize {
        // Knuth's linear congruence of 64 bits (The Art of Computer Programming, volume 2, section 3.3.4); its high bits
        // are the better ones.
        self.0 = self.0.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
        usize::try_from(self.0 >> 33).unwrap() % count
    }

    fn mix<T>(&mut self, list: &mut [T]) {
        for last in (1..list.len()).rev() {
            list.swap(last, self.below(last + 1));
        }
    }
}

fn letters(reference: &str) -> &str {
    reference.trim_end_matches(|sign: char| sign.is_ascii_digit())
}

/// The same board with everything in another order, other numbers at all references, other net codes.
fn redrawn(mut netlist: Netlist, seed: u64) -> Netlist {
    let mut shuffle = Shuffle(seed);
    let mut groups: BTreeMap<String, Vec<String>> = BTreeMap::new();
    for component in &netlist.components {
        groups.entry(letters(&component.reference).to_owned()).or_default().push(component.reference.clone());
    }
    let mut renamed: BTreeMap<String, String> = BTreeMap::new();
    for old in groups.values() {
        let mut new = old.clone();
        shuffle.mix(&mut new);
        renamed.extend(old.iter().cloned().zip(new));
    }
    let rename = |reference: &str| renamed.get(reference).cloned().unwrap_or_else(|| reference.to_owned());
    for component in &mut netlist.components {
        component.reference = rename(&component.reference);
        component.ids.reverse();
    }
    shuffle.mix(&mut netlist.components);
    for (code, net) in netlist.nets.iter_mut().enumerate() {
        net.code = (code * 7 + 1000).to_string();
        net.name = remade(&net.name, rename);
        for node in &mut net.nodes {
            node.reference = rename(&node.reference);
        }
        shuffle.mix(&mut net.nodes);
    }
    shuffle.mix(&mut netlist.nets);
    netlist
}

/// `Net-(U2-ADJ)` with the part's new number.
fn remade(name: &str, rename: impl Fn(&str) -> String) -> String {
    for start in ["Net-(", "unconnected-("] {
        if let Some((reference, rest)) = name.strip_prefix(start).and_then(|rest| rest.split_once('-')) {
            return format!("{start}{}-{rest}", rename(reference));
        }
    }
    name.to_owned()
}

fn without_ids(mut netlist: Netlist) -> Netlist {
    for component in &mut netlist.components {
        component.ids.clear();
        component.sheet_ids.clear();
    }
    netlist
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(12))]
    #[test]
    fn order_numbers_and_codes_change_no_fingerprint(seed in any::<u64>()) {
        let rules = Rules::built_in();
        let drawn = prints(gauge(), &rules);
        prop_assert!(drawn.len() > 8);
        prop_assert_eq!(&prints(redrawn(gauge(), seed), &rules), &drawn);
        let drawn = prints(without_ids(gauge()), &rules);
        prop_assert_eq!(&prints(without_ids(redrawn(gauge(), seed)), &rules), &drawn);
    }
}

#[test]
fn order_numbers_and_codes_change_no_fingerprint_of_real_boards() {
    let Some(folder) = shared_folder().map(|shared| shared.join("corpus/files")) else { return };
    let rules = Rules::built_in();
    let mut count = 0;
    let mut files: Vec<_> = std::fs::read_dir(folder).unwrap().map(|entry| entry.unwrap().path()).collect();
    files.sort();
    for file in files {
        let Ok(netlist) = read("board.net", &std::fs::read(&file).unwrap()) else { continue };
        if !netlist.is_complete() || netlist.components.len() > 300 {
            continue;
        }
        let drawn = prints(netlist.clone(), &rules);
        count += drawn.len();
        assert_eq!(prints(redrawn(netlist, count as u64), &rules), drawn, "{}", file.display());
    }
    assert!(count > 50, "{count}");
}

/// Adds a copy of U2, number `number`, from the same input to an output of its own that nobody named, with a capacitor
/// of a value.
fn twin(netlist: &mut Netlist, number: usize, capacitor: &str) {
    let copy = |reference: &str, new: String| Component {
        reference: new,
        ids: vec![format!("{number:08}-{reference}")],
        ..netlist.components.iter().find(|component| component.reference == reference).unwrap().clone()
    };
    let (part, output) = (format!("U{number}"), format!("C{number}"));
    let added = [copy("U2", part.clone()), Component { value: capacitor.to_owned(), ..copy("C8", output.clone()) }];
    let node = |net: &NetEntry, old: &str, new: &str| {
        let node = net.nodes.iter().find(|node| node.reference == old)?;
        Some(NetNode { reference: new.to_owned(), ..node.clone() })
    };
    let mut own = NetEntry { code: number.to_string(), name: format!("Net-({output}-Pad1)"), ..NetEntry::default() };
    for net in &mut netlist.nets {
        let nodes = [node(net, "U2", &part), node(net, "C8", &output)].into_iter().flatten();
        let to = if net.name == "+5V" { &mut own.nodes } else { &mut net.nodes };
        to.extend(nodes.collect::<Vec<_>>());
    }
    assert_eq!(own.nodes.len(), 2, "{own:?}");
    netlist.components.extend(added);
    netlist.nets.push(own);
}

/// Check and fingerprint of each finding about a part.
fn about(found: &[Reviewed], part: &str) -> BTreeSet<(String, String)> {
    let these = found.iter().filter(|each| each.subject == part);
    these.map(|each| (each.finding.check.clone(), each.fingerprint.clone())).collect()
}

fn without(mut netlist: Netlist, number: usize) -> Netlist {
    let gone = [format!("U{number}"), format!("C{number}")];
    netlist.components.retain(|component| !gone.contains(&component.reference));
    netlist.nets.iter_mut().for_each(|net| net.nodes.retain(|node| !gone.contains(&node.reference)));
    netlist.nets.retain(|net| !net.nodes.is_empty());
    netlist
}

#[test]
fn one_of_two_like_parts_keeps_its_fingerprints_when_the_other_goes() {
    let rules = Rules::built_in();
    let mut both = gauge();
    twin(&mut both, 81, "1u");
    twin(&mut both, 82, "1u");
    let found = findings(both.clone(), &rules);
    let (first, second) = (about(&found, "U81"), about(&found, "U82"));
    assert!(first.len() > 1 && first.len() == second.len(), "{first:?} {second:?}");
    assert!(first.is_disjoint(&second));
    for (gone, left, part) in [(81, &second, "U82"), (82, &first, "U81")] {
        assert_eq!(&about(&findings(without(both.clone(), gone), &rules), part), left);
    }
}

#[test]
fn without_ids_like_parts_are_told_apart_by_what_is_around_them() {
    let rules = Rules::built_in();
    let mut both = gauge();
    twin(&mut both, 81, "1u");
    twin(&mut both, 82, "1u5");
    let both = without_ids(both);
    let found = findings(both.clone(), &rules);
    let (first, second) = (about(&found, "U81"), about(&found, "U82"));
    assert!(!first.is_empty() && first.is_disjoint(&second), "{first:?} {second:?}");
    assert_eq!(about(&findings(without(both.clone(), 81), &rules), "U82"), second);
    assert_eq!(about(&findings(without(both, 82), &rules), "U81"), first);
}

#[test]
fn a_sheet_that_is_used_twice_has_findings_of_its_own_for_each_use() {
    let rules = Rules::built_in();
    let mut both = gauge();
    twin(&mut both, 81, "1u");
    twin(&mut both, 82, "1u");
    for component in &mut both.components {
        let used = component.reference.ends_with("82");
        if used || component.reference.ends_with("81") {
            component.ids = vec!["5a7e4d11".to_owned()];
            component.sheet_ids = if used { "/11110001/".to_owned() } else { "/11110002/".to_owned() };
        }
    }
    let second = about(&findings(both.clone(), &rules), "U82");
    assert_eq!(about(&findings(without(both.clone(), 81), &rules), "U82"), second);
    assert!(about(&findings(without(both, 82), &rules), "U81").is_disjoint(&second));
}

#[test]
fn the_ids_of_a_sheet_and_its_symbols_are_read_from_each_format() {
    let s = b"(export (version D) (components (comp (ref R1) (value 1k) (sheetpath (names /P/) (tstamps /AB/)) \
              (tstamp CD))) (nets))";
    let xml = b"<?xml version=\"1.0\"?><export version=\"D\"><components><comp ref=\"R1\"><value>1k</value>\
                <sheetpath names=\"/P/\" tstamps=\"/AB/\"/><tstamp>CD</tstamp></comp></components><nets/></export>";
    for bytes in [&s[..], &xml[..]] {
        let netlist = read("x.net", bytes).unwrap();
        let component = &netlist.components[0];
        assert_eq!((component.sheet_ids.as_str(), component.ids.as_slice()), ("/AB/", &["CD".to_owned()][..]));
    }
}
