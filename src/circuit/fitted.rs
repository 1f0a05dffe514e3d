//! Whether a part is on the board.

use crate::netlist::Field;

use super::model::{Device, DeviceKind, Fitted};

/// Names of fields that say "not on the board" when they are set; compared without case, blanks and marks.
const LEFT_OUT: &[&str] = &[
    "dnp",
    "dnf",
    "dnm",
    "dni",
    "donotplace",
    "donoplace",
    "donotpopulate",
    "donotfit",
    "donotmount",
    "donotassemble",
    "nofit",
    "notfitted",
    "nopop",
    "nomount",
    "nostuff",
    "dontplace",
    "dontpopulate",
    "dontfit",
];

/// Names of fields that say "on the board" when they are set.
const PUT_ON: &[&str] = &["fit", "fitted", "populate", "populated", "place", "mount", "mounted", "assemble", "stuff"];

/// Values that mean "no" in a field of either kind.
const NO: &[&str] = &["0", "no", "n", "false", "off"];

/// Words that say "not on the board" wherever they stand in a value (`DNP 10k`). `NF` and `NM` are not among them:
/// they are nanofarads and newton metres too, so they must be the whole value.
const WORDS: &[&str] =
    &["dnp", "dnf", "dnm", "dni", "nofit", "nopop", "nomount", "nostuff", "unpopulated", "unfitted"];

/// Phrases that say so, in a value whose marks are made blanks.
const PHRASES: &[&str] = &[
    "do not place",
    "do not populate",
    "do not fit",
    "do not mount",
    "do not assemble",
    "do not stuff",
    "don t place",
    "don t populate",
    "don t fit",
    "not placed",
    "not populated",
    "not fitted",
    "not mounted",
    "no fit",
    "no pop",
    "no mount",
    "no stuff",
    "no place",
];

/// Whether a device is on the board, from its fields, attributes and value.
///
/// `exclude_from_bom` alone does not take a part off the board: it is what copper antennas, net ties, parts that the
/// fabricator supplies and customer-fitted parts carry, all of which conduct.
pub(super) fn fitted(device: &Device) -> Fitted {
    let by_field = device.fields.iter().find(|field| says_left_out(field)).map(field_text);
    let by_value = || value_says_left_out(&device.value, device.kind).then(|| device.value.trim().to_owned());
    let by_board = || {
        // Off the board by attribute: what is only drawn for a simulation. What is wired to the board instead is there.
        let excluded = device.fields.iter().any(|field| field.name == "exclude_from_board" && !is_no(&field.value));
        (excluded && !stands_beside_the_board(device.kind)).then(|| "exclude_from_board".to_owned())
    };
    match by_field.or_else(by_value).or_else(by_board) {
        Some(text) => Fitted::No(text),
        None => Fitted::Yes,
    }
}

fn says_left_out(field: &Field) -> bool {
    let name = letters(&field.name);
    let value = field.value.trim();
    if LEFT_OUT.contains(&name.as_str()) {
        // The editor's own attribute has no text; of any other spelling an empty text is an unused column.
        return if value.is_empty() { field.name == "dnp" } else { !is_no(value) };
    }
    let word = letters(value);
    PUT_ON.contains(&name.as_str())
        && (is_no(value)
            || LEFT_OUT.contains(&word.as_str())
            || ["nf", "nm", "not", "never"].contains(&word.as_str()))
}

fn field_text(field: &Field) -> String {
    match field.value.trim() {
        "" => field.name.clone(),
        value => format!("{} {value}", field.name),
    }
}

fn value_says_left_out(value: &str, kind: DeviceKind) -> bool {
    let value = value.trim();
    if ["NF", "NM", "N/F", "N/M", "N.F.", "N.M."].contains(&value) {
        return true;
    }
    // "Not connected" on a passive part; a switch or a relay is normally closed.
    if (kind.has_amount() || kind == DeviceKind::Ferrite) && ["NC", "N/C", "N.C."].contains(&value) {
        return true;
    }
    let plain: String = value.chars().map(|letter| if letter.is_alphanumeric() { letter } else { ' ' }).collect();
    let plain = plain.to_lowercase();
    let words: Vec<&str> = plain.split_whitespace().collect();
    let joined = words.join(" ");
    words.iter().any(|word| WORDS.contains(word)) || PHRASES.iter().any(|phrase| has_phrase(&joined, phrase))
}

fn has_phrase(text: &str, phrase: &str) -> bool {
    text.match_indices(phrase).any(|(at, _)| {
        let before = text.get(..at).is_none_or(|before| before.is_empty() || before.ends_with(' '));
        let after = text.get(at + phrase.len()..).is_none_or(|after| after.is_empty() || after.starts_with(' '));
        before && after
    })
}

fn stands_beside_the_board(kind: DeviceKind) -> bool {
    use DeviceKind::{Battery, Connector, Fuse, Led, Potentiometer, Switch, Transformer};
    matches!(kind, Battery | Connector | Fuse | Led | Potentiometer | Switch | Transformer)
}

fn is_no(value: &str) -> bool {
    NO.iter().any(|no| value.trim().eq_ignore_ascii_case(no))
}

fn letters(text: &str) -> String {
    text.chars().filter(|letter| letter.is_alphanumeric()).flat_map(char::to_lowercase).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    fn field(name: &str, value: &str) -> Field {
        Field { name: name.to_owned(), value: value.to_owned() }
    }

    #[test]
    fn fields_say_what_is_left_out() {
        let out = [("dnp", ""), ("DNP", "1"), ("dnp", "true"), ("DoNoPlace", "yes"), ("Do not populate", "x")];
        let out = out.iter().chain(&[("Fit", "NOFIT"), ("Populate", "0"), ("Fitted", "no"), ("Place", "DNP")]);
        for (name, value) in out {
            assert!(says_left_out(&field(name, value)), "{name}={value}");
        }
        let on = [("DNP", ""), ("dnp", "0"), ("DNP", "no"), ("Fit", "yes"), ("Fit", ""), ("exclude_from_bom", "")];
        for (name, value) in on {
            assert!(!says_left_out(&field(name, value)), "{name}={value}");
        }
    }

    #[test]
    fn values_say_what_is_left_out() {
        let out =
            ["DNP", "dnf", "DNP 10k", "10k DNP", "10k (DNP)", "10k_DNP", "NF", "NM", "Do not place", "not fitted"];
        for value in out {
            assert!(value_says_left_out(value, DeviceKind::Resistor), "{value}");
        }
        for value in ["10k", "100 NF", "nF", "NMOS", "DNPX", "cannot fitted", ""] {
            assert!(!value_says_left_out(value, DeviceKind::Capacitor), "{value}");
        }
        assert!(value_says_left_out("NC", DeviceKind::Capacitor));
        assert!(!value_says_left_out("NC", DeviceKind::Switch));
    }
}
