//! Name patterns of part files.

use crate::source::toml::Text;

/// The place of the voltage code in a pattern.
pub const VOLTAGE_CODE: &str = "{V}";

/// Whether the text is a pattern: letters and digits, `-./+ ` as they are, `?` one character, `*` any run, at most one
/// `{V}`, and at least two literal characters so that it does not match everything. What is wrong is reported.
pub(super) fn check_pattern(text: &Text<'_>) -> bool {
    let pattern = text.as_str();
    let codes = pattern.matches(VOLTAGE_CODE).count();
    let rest = pattern.replace(VOLTAGE_CODE, "");
    let strange = rest.char_indices().find(|(_, sign)| !(sign.is_ascii_alphanumeric() || "?*-./+".contains(*sign)));
    if let Some((_, sign)) = strange {
        let at = pattern.find(sign).unwrap_or(0);
        text.document().refuse(
            text.part(at..at + sign.len_utf8()),
            format!("`{sign}` cannot stand in a name pattern"),
            "not a pattern",
            "use letters, digits, `-./+`, `?` for one character, `*` for any run, `{V}` for the voltage code",
        );
        return false;
    }
    let literal = rest.chars().filter(char::is_ascii_alphanumeric).count();
    if codes > 1 || literal < 2 {
        let message = if codes > 1 { "a pattern has one voltage code" } else { "the pattern would match any name" };
        text.refuse(message, "in this pattern", "write the letters and digits that all order codes share");
        return false;
    }
    true
}
