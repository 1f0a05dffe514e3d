//! The order in which parts are listed.

/// A key that sorts references as people do: `U2` before `U10`.
pub(super) fn natural(reference: &str) -> Vec<(u8, u64, String)> {
    let mut key = Vec::new();
    let mut rest = reference;
    while let Some(first) = rest.chars().next() {
        let digits = first.is_ascii_digit();
        let end = rest.find(|each: char| each.is_ascii_digit() != digits).unwrap_or(rest.len());
        let (run, behind) = rest.split_at(end);
        // A run too long for a number is compared as text, behind all numbers.
        match run.parse::<u64>() {
            Ok(number) if digits => key.push((0, number, String::new())),
            _ => key.push((1, 0, run.to_owned())),
        }
        rest = behind;
    }
    key
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn numbers_inside_references_count_as_numbers() {
        let mut references = ["U10", "U2", "IC1", "U2A", "C100", "C99"];
        references.sort_by_key(|reference| natural(reference));
        assert_eq!(references, ["C99", "C100", "IC1", "U2", "U2A", "U10"]);
    }
}
