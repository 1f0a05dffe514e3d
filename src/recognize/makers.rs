//! Which makers' versions of a part a name can mean.

use crate::knowledge::{Family, Knowledge};

use super::family_match::{Hit, rank};

/// What a name can mean.
#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub(super) struct Meant {
    /// Indices of families, the likeliest first; several where no field settles whose version it is.
    pub(super) families: Vec<usize>,
    /// Whether a field names a maker that none of them is of.
    pub(super) foreign: bool,
}

/// The families that are meant, best first. Where a field names the maker of one, that one is meant alone. Else all
/// versions that are sold under the name are; and a family that stands for various makers is followed by those of its
/// group that are known.
pub(super) fn meant(hits: &[Hit], maker: &str, knowledge: &Knowledge) -> Meant {
    let Some(best) = hits.first() else { return Meant::default() };
    let family = |index: usize| knowledge.families.get(index);
    let mut found = sold_under(hits, rank(best), knowledge);
    let own: Vec<usize> =
        found.iter().copied().filter(|index| family(*index).is_some_and(|family| is_of(family, maker))).collect();
    if !own.is_empty() {
        return Meant { families: own, foreign: false };
    }
    let listed = |index: &usize| family(*index).is_some_and(|family| !family.maker_words.is_empty());
    let foreign = !maker.is_empty() && found.iter().all(listed);
    if let Some(first) = found.first().and_then(|index| family(*index))
        && found.len() == 1
        && first.maker == VARIOUS
    {
        found.extend(group(first, knowledge).filter(|index| family(*index).is_none_or(|one| one.name != first.name)));
    }
    Meant { families: found, foreign }
}

/// The families whose patterns fit as well as the best, then the versions that are sold under their names.
fn sold_under(hits: &[Hit], best: (bool, usize), knowledge: &Knowledge) -> Vec<usize> {
    let family = |index: usize| knowledge.families.get(index);
    // A more telling pattern is meant alone: TL431B is no TL431 of the wide grade, LM1117 no 1117 of an unknown maker.
    let mut found: Vec<usize> = hits.iter().filter(|hit| rank(hit) == best).map(|hit| hit.family).collect();
    let named: Vec<&str> = found.iter().filter_map(|index| Some(family(*index)?.name.as_str())).collect();
    let versions: Vec<usize> = (0..knowledge.families.len())
        .filter(|index| {
            let parent = family(*index).and_then(|family| family.version_of.as_deref());
            parent.is_some_and(|parent| named.contains(&parent)) && !found.contains(index)
        })
        .collect();
    found.extend(versions);
    // A stable sort keeps the most telling pattern, and the name's first owner, first.
    found.sort_by_key(|index| family(*index).is_some_and(|family| family.version_of.is_some()));
    found
}

/// The families that own a name, without the versions that others sell under it.
pub(super) fn owners(hits: &[Hit], knowledge: &Knowledge) -> Vec<usize> {
    let is_version = |index: &usize| knowledge.families.get(*index).is_some_and(|one| one.version_of.is_some());
    let best = hits.first().map(rank);
    let alike = hits.iter().filter(|hit| Some(rank(hit)) == best).map(|hit| hit.family);
    alike.filter(|index| !is_version(index)).collect()
}

/// The families of a name that nothing tells apart: several owners, or several versions of one maker. Each group with
/// the maker that must be named for it.
pub(super) fn rivals(hits: &[Hit], knowledge: &Knowledge) -> Vec<(String, Vec<usize>)> {
    let Some(best) = hits.first() else { return Vec::new() };
    let family = |index: &usize| knowledge.families.get(*index);
    let found = sold_under(hits, rank(best), knowledge);
    let mut groups = vec![(String::new(), owners(hits, knowledge))];
    let versions = found.iter().filter_map(family).filter(|family| family.version_of.is_some());
    for word in versions.flat_map(|version| &version.maker_words) {
        let of_maker = |index: &usize| family(index).is_some_and(|one| is_of(one, word));
        groups.push((word.clone(), found.iter().copied().filter(of_maker).collect()));
    }
    for (_, group) in &mut groups {
        group.sort_unstable();
    }
    groups.retain(|(_, group)| group.len() > 1);
    groups
}

/// The maker of a family that stands for those that have no file.
const VARIOUS: &str = "various";

/// The families of the same group that do the same.
fn group<'a>(first: &'a Family, knowledge: &'a Knowledge) -> impl Iterator<Item = usize> + 'a {
    let alike = move |other: &Family| {
        other.group == first.group
            && other.kind == first.kind
            && other.polarity == first.polarity
            && other.adjust == first.adjust
    };
    knowledge.families.iter().enumerate().filter(move |(_, other)| alike(other)).map(|(index, _)| index)
}

/// Whether a field that names the maker (lower case) names that of a family. Words begin where words of the field do
/// (`national` is not in `international`), and short ones end there too: `ti` begins many names.
fn is_of(family: &Family, maker: &str) -> bool {
    const SHORT: usize = 3;
    let parts = || maker.match_indices(|_: char| true).map(|(at, _)| at);
    let begins = |at: usize| maker.get(..at).is_none_or(|before| !before.ends_with(char::is_alphanumeric));
    family.maker_words.iter().filter(|word| !word.is_empty()).any(|word| {
        let here = |at: usize| {
            let rest = maker.get(at..).and_then(|rest| rest.strip_prefix(word.as_str()));
            rest.is_some_and(|rest| word.len() > SHORT || !rest.starts_with(char::is_alphanumeric))
        };
        parts().any(|at| begins(at) && here(at))
    })
}

#[cfg(test)]
mod tests {
    use super::super::family_match::{Matcher, reduced};
    use super::*;

    fn names(value: &str, maker: &str) -> (Vec<String>, bool) {
        let knowledge = Knowledge::built_in();
        let hits = Matcher::new(&knowledge.families).hits(&reduced(value));
        let meant = meant(&hits, maker, &knowledge);
        (meant.families.iter().map(|index| knowledge.families[*index].name.clone()).collect(), meant.foreign)
    }

    #[test]
    fn a_name_that_several_makers_sell_means_all_of_them_until_a_field_names_one() {
        let (found, foreign) = names("AMS1117-3.3", "");
        assert_eq!(found, ["1117 / AMS1117", "1117 / AMS1117 Ver2.2", "1117 / AMS1117 of WPM"]);
        assert!(!foreign);
        assert_eq!(names("AMS1117-3.3", "advanced monolithic systems").0, ["1117 / AMS1117"]);
        assert_eq!(names("AMS1117-3.3", "ams").0, ["1117 / AMS1117"]);
        assert!(names("AMS1117-3.3", "umw").1);
        let (found, _) = names("LP2951", "");
        assert_eq!(found.first().map(String::as_str), Some("LP2950/LP2951 of TI"));
        assert!(found.len() == 2 && names("TL431", "").0.len() == 2, "{found:?}");
    }

    #[test]
    fn a_number_of_no_maker_is_followed_by_the_known_makers_of_its_group() {
        let (found, foreign) = names("7805", "");
        assert!(found.len() >= 3 && found[0].contains("second") || found[0].contains("other"), "{found:?}");
        assert!(!foreign);
        assert!(names("1117-3.3", "").0.len() >= 8);
    }

    #[test]
    fn short_words_of_makers_stand_alone() {
        let knowledge = Knowledge::built_in();
        let ti = knowledge.family("1117 / LM1117").unwrap();
        assert!(is_of(ti, "ti") && is_of(ti, "texas instruments inc.") && !is_of(ti, "international rectifier"));
    }
}
