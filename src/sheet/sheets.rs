//! The sheets of one netlist.

use std::collections::{BTreeMap, BTreeSet};
use std::path::{Path, PathBuf};

use super::names::paths;
use super::symbols::{Symbols, key};
use crate::netlist::{Component, Netlist};
use crate::source::{Location, Source};

/// Most different names of sheets that are looked for.
const MOST_SHEETS: usize = 500;

/// Most folders that are looked in.
const MOST_FOLDERS: usize = 32;

/// The text of a sheet as it was found.
#[derive(Debug, Clone)]
pub(super) struct Text {
    pub(super) source: Source,
    /// Whether it was written well behind the netlist.
    pub(super) newer: bool,
}

/// Takes a path and gives the text that lies there, if that may be read.
pub(super) type Open<'a> = &'a mut dyn FnMut(&Path) -> Option<Text>;

/// A schematic sheet that parts of the netlist are drawn on.
#[derive(Debug)]
pub struct Sheet {
    source: Source,
    symbols: Symbols,
    newer: bool,
}

impl Sheet {
    /// Its text, under the path at which it lies.
    #[must_use]
    pub fn source(&self) -> &Source {
        &self.source
    }

    /// Whether the file was written well behind the netlist.
    #[must_use]
    pub fn is_newer(&self) -> bool {
        self.newer
    }

    fn holds(&self, component: &Component) -> bool {
        component.ids.iter().any(|id| self.symbols.place(id).is_some())
    }
}

/// The sheets of a netlist, as far as they lie beside it.
#[derive(Debug, Default)]
pub struct Sheets {
    sheets: Vec<Sheet>,
    /// The sheet of each name that the netlist uses.
    by_name: BTreeMap<String, usize>,
}

impl Sheets {
    /// Looks for every sheet that the netlist names in some folders, the first of them first.
    pub(super) fn gather(netlist: &Netlist, folders: &[PathBuf], open: Open<'_>) -> Self {
        let mut named: BTreeMap<&str, Vec<&Component>> = BTreeMap::new();
        for component in netlist.components.iter().filter(|component| !component.sheet_file.is_empty()) {
            named.entry(&component.sheet_file).or_default().push(component);
        }
        let mut search = Search { folders: folders.to_vec(), open, read: BTreeMap::new(), sheets: Vec::new() };
        if let Some((_, folder)) = search.first(&netlist.schematic, |_| true) {
            search.look_in(0, folder);
        }
        let mut by_name = BTreeMap::new();
        // A sheet inside a folder names those below it from there, so what is not found at first may be afterwards.
        for _ in 0..2 {
            for (name, components) in named.iter().take(MOST_SHEETS) {
                if by_name.contains_key(*name) {
                    continue;
                }
                // A file of the same name that has none of these parts is another board's.
                let fits = |sheet: &Sheet| components.iter().any(|component| sheet.holds(component));
                if let Some((sheet, folder)) = search.first(name, fits) {
                    by_name.insert((*name).to_owned(), sheet);
                    search.look_in(search.folders.len(), folder);
                }
            }
        }
        Self { sheets: search.sheets, by_name }
    }

    /// Where a component stands on its sheet.
    #[must_use]
    pub fn locate(&self, component: &Component) -> Option<Location> {
        let sheet = self.of(component)?;
        let place = component.ids.iter().find_map(|id| sheet.symbols.place(id))?;
        Some(Location::new(&sheet.source, place))
    }

    /// The sheet of a component.
    #[must_use]
    pub fn of(&self, component: &Component) -> Option<&Sheet> {
        self.sheets.get(*self.by_name.get(&component.sheet_file)?)
    }

    /// The sheets that parts of the netlist are drawn on, each once, in the order of their paths.
    #[must_use]
    pub fn used(&self) -> Vec<&Sheet> {
        let used: BTreeSet<usize> = self.by_name.values().copied().collect();
        let mut sheets: Vec<&Sheet> = used.into_iter().filter_map(|index| self.sheets.get(index)).collect();
        sheets.sort_by(|one, other| one.source.name().cmp(other.source.name()));
        sheets
    }

    /// The components of the netlist whose symbols are on none of the sheets, though their own was read to its end.
    #[must_use]
    pub fn without_symbol<'n>(&self, netlist: &'n Netlist) -> Vec<&'n Component> {
        let drawn: BTreeSet<&str> = self.used().into_iter().flat_map(|sheet| sheet.symbols.ids()).collect();
        let is_gone = |component: &&Component| {
            let whole = self.of(component).is_some_and(|sheet| sheet.symbols.is_whole());
            whole && !component.ids.is_empty() && !component.ids.iter().any(|id| drawn.contains(key(id).as_str()))
        };
        netlist.components.iter().filter(is_gone).collect()
    }
}

/// A search that reads each file once.
struct Search<'a> {
    folders: Vec<PathBuf>,
    open: Open<'a>,
    /// What lies at each path that was asked for.
    read: BTreeMap<PathBuf, Option<usize>>,
    sheets: Vec<Sheet>,
}

impl Search<'_> {
    /// The first file that a name may mean and that fits, and its folder.
    fn first(&mut self, name: &str, fits: impl Fn(&Sheet) -> bool) -> Option<(usize, PathBuf)> {
        let paths = paths(name);
        for folder in self.folders.clone() {
            for path in &paths {
                let path = folder.join(path);
                if let Some(index) = self.at(&path)
                    && self.sheets.get(index).is_some_and(&fits)
                {
                    return Some((index, path.parent().unwrap_or(Path::new("")).to_owned()));
                }
            }
        }
        None
    }

    fn at(&mut self, path: &Path) -> Option<usize> {
        if let Some(known) = self.read.get(path) {
            return *known;
        }
        let found = (self.open)(path).map(|Text { source, newer }| {
            let symbols = Symbols::read(source.text());
            self.sheets.push(Sheet { source, symbols, newer });
            self.sheets.len() - 1
        });
        self.read.insert(path.to_owned(), found);
        found
    }

    /// Looks in a folder too, at a place in the order.
    fn look_in(&mut self, place: usize, folder: PathBuf) {
        if self.folders.len() < MOST_FOLDERS && !self.folders.contains(&folder) {
            self.folders.insert(place.min(self.folders.len()), folder);
        }
    }
}
