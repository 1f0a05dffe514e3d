//! The files of a run, and places in them.

use std::collections::{BTreeMap, BTreeSet};

use sha2::{Digest, Sha256};

use super::log::{Artifact, ArtifactLocation, Location, PhysicalLocation, Region};
use super::names::{Folders, Name, names};
use super::places::Places;
use crate::board::Place;
use crate::report::board::BoardResult;
use crate::source::{Source, Span};

/// The files of a run.
#[derive(Debug)]
pub(super) struct Artifacts {
    /// Where each is listed, by the name under which its reader knows it.
    locations: BTreeMap<String, ArtifactLocation>,
    /// What was read, by the same name.
    places: BTreeMap<String, Places>,
    list: Vec<Artifact>,
    /// Absolute paths that messages may hold, longest first, with what stands in their place.
    absolute: Vec<(String, String)>,
}

impl Artifacts {
    /// The files that some boards were read from or point into.
    pub(super) fn of(boards: &[&BoardResult], folders: &Folders) -> Self {
        let targets: BTreeSet<&str> = boards.iter().map(|board| board.netlist.as_str()).collect();
        let sources: BTreeMap<&str, &Source> =
            boards.iter().flat_map(|board| sources(board)).map(|source| (source.name(), source)).collect();
        let settings =
            boards.iter().flat_map(|board| board.house_file.iter().chain(&board.board_file)).map(String::as_str);
        let files: BTreeSet<&str> = targets
            .iter()
            .copied()
            .chain(settings)
            .chain(sources.keys().copied())
            .filter(|name| !name.is_empty())
            .collect();
        let names = names(&files, folders);
        let places: BTreeMap<String, Places> =
            sources.values().map(|source| (source.name().to_owned(), Places::of(source))).collect();
        let mut listed: BTreeMap<&Name, &str> = BTreeMap::new();
        for (file, name) in &names {
            listed.entry(name).or_insert(file);
        }
        let order: BTreeMap<&Name, usize> = listed.keys().enumerate().map(|(index, name)| (*name, index)).collect();
        let location = |name: &Name| ArtifactLocation {
            uri: name.uri(),
            uri_base_id: name.base,
            index: order.get(name).copied().unwrap_or(0),
        };
        let list = listed
            .iter()
            .map(|(name, file)| artifact(location(name), file, targets.contains(file), places.get(*file)))
            .collect();
        let locations = names.iter().map(|(file, name)| ((*file).to_owned(), location(name))).collect();
        Self { locations, places, list, absolute: absolute(&names, folders) }
    }

    /// The list of the run.
    pub(super) fn into_list(self) -> Vec<Artifact> {
        self.list
    }

    /// A place in a file, with its region.
    pub(super) fn place(&self, source: &Source, span: Span) -> Option<PhysicalLocation> {
        let artifact_location = self.locations.get(source.name())?.clone();
        let region = self.places.get(source.name()).map(|places| places.region(span));
        Some(PhysicalLocation { artifact_location, region })
    }

    /// A file as a whole.
    pub(super) fn file(&self, name: &str) -> Option<PhysicalLocation> {
        let artifact_location = self.locations.get(name)?.clone();
        Some(PhysicalLocation { artifact_location, region: None })
    }

    /// A text without the paths of this machine.
    pub(super) fn without_machine(&self, text: &str) -> String {
        self.absolute.iter().fold(text.to_owned(), |text, (path, short)| text.replace(path.as_str(), short))
    }
}

impl Location {
    /// Where a place sorts: by file, line and column.
    pub(super) fn order(&self) -> (&str, Option<Region>) {
        let physical = self.physical_location.as_ref();
        (
            physical.map_or("", |physical| &physical.artifact_location.uri),
            physical.and_then(|physical| physical.region),
        )
    }
}

/// Every text that a result points into.
fn sources(board: &BoardResult) -> impl Iterator<Item = &Source> {
    let netlist = board.examination.iter().map(|examination| &examination.netlist.source);
    let problems = board.all_problems().filter_map(|problem| problem.place().map(|(source, _)| source));
    let found = board.findings().flat_map(|found| {
        let also = found.also.iter().map(|(place, _)| &place.source);
        let accepted = found.accepted.as_ref().and_then(|accepted| match &accepted.place {
            Place::File { source, .. } => Some(source),
            Place::Field { .. } => None,
        });
        [&found.best_place().source, &found.place.source].into_iter().chain(also).chain(accepted)
    });
    netlist.chain(problems).chain(found)
}

fn artifact(location: ArtifactLocation, file: &str, is_target: bool, places: Option<&Places>) -> Artifact {
    let is_toml = file.ends_with(".toml");
    let text = places.and_then(Places::exact_text);
    let role = match (is_target, is_toml) {
        (true, _) => "analysisTarget",
        (false, true) => "toolSpecifiedConfiguration",
        (false, false) => "resultFile",
    };
    let hash = |text: &str| Sha256::digest(text.as_bytes()).iter().map(|byte| format!("{byte:02x}")).collect();
    Artifact {
        location,
        roles: [role],
        mime_type: if is_toml { "application/toml" } else { "text/plain" },
        encoding: text.map(|_| "UTF-8"),
        length: text.map(str::len),
        hashes: text.map(|text| ("sha-256", hash(text))).into_iter().collect(),
    }
}

/// The absolute paths among the names, and the project's folder, with what people read in their place.
fn absolute(names: &BTreeMap<&str, Name>, folders: &Folders) -> Vec<(String, String)> {
    let is_absolute = |file: &&str| std::path::Path::new(file).is_absolute();
    let mut paths: Vec<(String, String)> = names
        .iter()
        .filter(|(file, _)| is_absolute(file))
        .map(|(file, name)| ((*file).to_owned(), name.shown()))
        .collect();
    let project = folders.project();
    if project.len() > 1 {
        paths.push((
            format!("{}{}", project.trim_end_matches(std::path::MAIN_SEPARATOR), std::path::MAIN_SEPARATOR),
            String::new(),
        ));
    }
    paths.sort_by(|(one, _), (other, _)| other.len().cmp(&one.len()).then_with(|| one.cmp(other)));
    paths
}
