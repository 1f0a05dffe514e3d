//! Texts as messages of the format, in which braces and some brackets have a meaning.

use crate::report::inert::inert;

/// A text in which nothing is a placeholder or a link: braces are doubled, and the bracket that would make a link of
/// two names is shown as its escape.
pub(super) fn plain(text: &str) -> String {
    inert(text).replace("](", "]\\u{28}").replace('{', "{{").replace('}', "}}")
}

/// A plain text with the full stop that a message of the format ends with.
pub(super) fn sentence(text: &str) -> String {
    let mut sentence = plain(text.trim());
    if !sentence.ends_with(['.', '?', '!']) {
        sentence.push('.');
    }
    sentence
}

/// A plain text whose every sign stands for itself in Markdown.
pub(super) fn markdown(text: &str) -> String {
    let mut escaped = String::with_capacity(text.len());
    for sign in plain(text).chars() {
        // Braces would no longer be doubled with a stroke between them; neither they nor the others mean anything.
        if sign.is_ascii_punctuation() && !"{},;'\"?%".contains(sign) {
            escaped.push('\\');
        }
        escaped.push(sign);
    }
    escaped
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn braces_are_doubled_and_no_link_is_made() {
        assert_eq!(plain("{0} }{ D[0]{{"), "{{0}} }}{{ D[0]{{{{");
        assert_eq!(plain("[a](https://e.example) [x](0)"), "[a]\\u{{28}}https://e.example) [x]\\u{{28}}0)");
        assert_eq!(plain("a\u{1b}[2Jb"), "a\\u{{1b}}[2Jb");
    }

    #[test]
    fn a_sentence_ends_once() {
        assert_eq!(sentence("nothing feeds U1 "), "nothing feeds U1.");
        assert_eq!(sentence("Is it fed?"), "Is it fed?");
    }

    #[test]
    fn no_sign_acts_in_markdown() {
        assert_eq!(markdown("<b> [x](y) `a`|*_{0}"), "\\<b\\> \\[x\\]\\\\u{{28}}y\\) \\`a\\`\\|\\*\\_{{0}}");
    }
}
