//! The nearest right name.

/// The candidate that a mistyped name most likely meant, or `None` where nothing is near. The first of equals wins.
#[must_use]
pub fn nearest<'a>(name: &str, candidates: impl IntoIterator<Item = &'a str>) -> Option<&'a str> {
    let plain = |text: &str| text.to_lowercase().replace(['-', ' '], "_");
    let name = plain(name);
    let mut best: Option<(f64, &str)> = None;
    for candidate in candidates {
        let candidate_name = plain(candidate);
        let mut likeness = strsim::jaro_winkler(&name, &candidate_name);
        // In a short name two letters that changed places already look foreign to the measure above.
        if name.chars().count() >= 3 && strsim::osa_distance(&name, &candidate_name) == 1 {
            likeness = likeness.max(0.8);
        }
        if best.is_none_or(|(most, _)| likeness > most) {
            best = Some((likeness, candidate));
        }
    }
    best.filter(|(likeness, _)| *likeness >= 0.8).map(|(_, candidate)| candidate)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_nearest_name_is_found_and_a_foreign_one_has_none() {
        let keys = ["rated_current", "input_max", "reference"];
        assert_eq!(nearest("rated-curent", keys), Some("rated_current"));
        assert_eq!(nearest("input_maximum", keys), Some("input_max"));
        assert_eq!(nearest("colour", keys), None);
        assert_eq!(nearest("GWB", ["SR", "GBW"]), Some("GBW"));
    }
}
