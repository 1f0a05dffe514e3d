//! Markdown of limited length in which nothing from a file is markup.

use super::inert::{guarded, inert};

/// Most characters of a cell, escapes counted as they are written.
const CELL: usize = 400;

/// A page that grows by pieces of whole lines and never beyond its limit, counted in the units of UTF-16, which hosts count in.
#[derive(Debug)]
pub(super) struct Page {
    text: String,
    left: usize,
}

impl Page {
    pub(super) fn new(limit: usize) -> Self {
        Self { text: String::new(), left: limit }
    }

    /// Adds a piece where it fits whole.
    pub(super) fn add(&mut self, piece: &str) -> bool {
        self.add_within(piece, 0)
    }

    /// Adds a piece where it fits whole and `reserve` is left behind it.
    pub(super) fn add_within(&mut self, piece: &str, reserve: usize) -> bool {
        // Guarded before it is measured, for that adds to its length.
        let piece = guarded(piece);
        let length = length(&piece);
        let fits = length.saturating_add(reserve) <= self.left;
        if fits {
            self.text.push_str(&piece);
            self.left -= length;
        }
        fits
    }

    /// Adds pieces as long as they fit and leave `reserve`; how many.
    pub(super) fn add_each(&mut self, pieces: impl Iterator<Item = String>, reserve: usize) -> usize {
        pieces.take_while(|piece| self.add_within(piece, reserve)).count()
    }

    pub(super) fn text(self) -> String {
        self.text
    }
}

/// The length of a text as hosts count it.
pub(super) fn length(text: &str) -> usize {
    text.encode_utf16().count()
}

/// A row of a table.
pub(super) fn row(cells: &[String]) -> String {
    format!("| {} |\n", cells.join(" | "))
}

/// The head of a table.
pub(super) fn head(names: &[&str]) -> String {
    let rule: Vec<&str> = names.iter().map(|_| "---").collect();
    format!("| {} |\n| {} |\n", names.join(" | "), rule.join(" | "))
}

/// A text as a span of code, which no sign in it ends, in a cell of a table, which none ends either.
pub(super) fn code(text: &str) -> String {
    if text.is_empty() {
        return "–".to_owned();
    }
    let mut shown = String::new();
    let mut last = ' ';
    for (count, sign) in inert(text).chars().enumerate() {
        match sign {
            _ if count >= CELL => {
                shown.push('…');
                break;
            }
            // A bar behind a backslash is written as its escape: readers differ on which of the two is escaped.
            '|' if last == '\\' => shown.push_str("\\u{7c}"),
            '|' => shown.push_str("\\|"),
            _ => shown.push(sign),
        }
        last = sign;
    }
    let fence = "`".repeat(longest_run(&shown) + 1);
    // One blank at each end is taken off again; it keeps backticks of the text away from the fence.
    format!("{fence} {shown} {fence}")
}

/// Lines as a block of code that no line in it ends.
pub(super) fn block(lines: &str) -> String {
    let fence = "`".repeat((longest_run(lines) + 1).max(3));
    format!("{fence}text\n{}\n{fence}\n", lines.trim_end_matches('\n'))
}

/// The longest run of backticks.
fn longest_run(text: &str) -> usize {
    text.split(|sign| sign != '`').map(str::len).max().unwrap_or(0)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn code_stays_code_whatever_it_holds() {
        assert_eq!(code("+3V3"), "` +3V3 `");
        assert_eq!(code("`a`|b|``"), "``` `a`\\|b\\|`` ```");
        assert_eq!(code("a\\|b"), "` a\\\\u{7c}b `");
        assert_eq!(code("x\n| --- |"), "` x\\u{a}\\| --- \\| `");
        assert_eq!(code(""), "–");
        assert_eq!(block("a\n```\n</details>\n"), "````text\na\n```\n</details>\n````\n");
    }

    #[test]
    fn a_page_keeps_its_limit_on_whole_pieces() {
        let mut page = Page::new(10);
        assert!(page.add("12345") && !page.add("123456") && !page.add_within("123", 3));
        assert_eq!(page.add_each(["😀", "ab", "c", "d"].map(str::to_owned).into_iter(), 0), 3);
        assert_eq!(page.text(), "12345😀abc");
    }
}
