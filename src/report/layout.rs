//! Wrapped lines and aligned columns.

use unicode_width::UnicodeWidthStr;

/// A text in lines of at most `width` columns, broken at blanks; the first begins with `first`, each other with
/// `other`. A word that is too long for a line stands alone.
pub(super) fn wrapped(text: &str, first: &str, other: &str, width: usize) -> String {
    let mut out = String::from(first);
    let mut column = first.width();
    let mut bare = true;
    for word in text.split_whitespace() {
        let needed = word.width() + usize::from(!bare);
        if !bare && column + needed > width {
            out.push('\n');
            out.push_str(other);
            column = other.width();
            bare = true;
        }
        if !bare {
            out.push(' ');
            column += 1;
        }
        out.push_str(word);
        column += word.width();
        bare = false;
    }
    out.push('\n');
    out
}

/// A text filled up with blanks to a width.
pub(super) fn padded(text: &str, width: usize) -> String {
    let blanks = width.saturating_sub(text.width());
    format!("{text}{:blanks$}", "")
}

/// The width of the widest of some texts.
pub(super) fn widest<'a>(texts: impl IntoIterator<Item = &'a str>) -> usize {
    texts.into_iter().map(UnicodeWidthStr::width).max().unwrap_or(0)
}

/// Rows in columns with two blanks between; the last column is wrapped. Columns that are empty throughout fall away.
pub(super) fn table(rows: &[Vec<String>], indent: &str, width: usize) -> String {
    let columns = rows.iter().map(Vec::len).max().unwrap_or(0);
    let widths: Vec<usize> = (0..columns)
        .map(|column| widest(rows.iter().filter_map(|row| row.get(column)).map(String::as_str)))
        .collect();
    let mut out = String::new();
    for row in rows {
        let mut head = String::from(indent);
        let last = row.len().saturating_sub(1);
        for (cell, width) in row.iter().zip(&widths).take(last) {
            if *width > 0 {
                head.push_str(&padded(cell, *width));
                head.push_str("  ");
            }
        }
        let text = row.last().map_or("", String::as_str);
        let rest = " ".repeat(head.width());
        // A table in a narrow column is worse than a long line.
        let limit = width.max(head.width() + 30);
        out.push_str(wrapped(text, &head, &rest, limit).trim_end());
        out.push('\n');
    }
    out
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn lines_are_broken_at_blanks_and_long_words_stand_alone() {
        let text = wrapped("one two  three threehundredandthirtythree end", "- ", "  ", 12);
        assert_eq!(text, "- one two\n  three\n  threehundredandthirtythree\n  end\n");
    }

    #[test]
    fn columns_are_aligned_and_empty_ones_fall_away() {
        let row = |cells: &[&str]| cells.iter().map(|cell| (*cell).to_owned()).collect();
        let rows = [row(&["a", "", "µF", "x y"]), row(&["long", "", "Ω", ""])];
        assert_eq!(table(&rows, " ", 80), " a     µF  x y\n long  Ω\n");
    }
}
