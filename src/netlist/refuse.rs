//! Files that are no netlist, told by what they look like.

use crate::source::{Problem, Source, Span};

const EXPORT: &str = "export a netlist: in the schematic editor File > Export > Netlist, format KiCad, or \
                      `kicad-cli sch export netlist -o BOARD.net BOARD.kicad_sch`";

/// How much of a file is looked at to tell what it is.
const LOOK: usize = 64 * 1024;

/// How much of a file [`begins_export`] has to see.
pub const FIRST_BYTES: usize = 4096;

/// Whether the first bytes of a file are those of a netlist export, damaged or not.
#[must_use]
pub fn begins_export(bytes: &[u8]) -> bool {
    // What is cut at the end, or is no text further on, does not matter here.
    let end = std::str::from_utf8(bytes).map_or_else(|error| error.valid_up_to(), str::len);
    let text = bytes.get(..end).and_then(|start| std::str::from_utf8(start).ok()).unwrap_or_default();
    let text = text.trim_start_matches('\u{feff}').trim_start();
    if text.starts_with('(') {
        lists(text).is_none()
    } else {
        text.starts_with('<') && root_name(text).eq_ignore_ascii_case("export")
    }
}

/// What a file is, if it can be seen from its bytes to be no text at all.
pub(super) fn not_text(name: &str, bytes: &[u8]) -> Option<Problem> {
    const MAGIC: [(&[u8], &str); 9] = [
        (b"\x89PNG", "a PNG image"),
        (b"\xff\xd8\xff", "a JPEG image"),
        (b"GIF8", "a GIF image"),
        (b"PK\x03\x04", "a ZIP archive"),
        (b"%PDF", "a PDF document"),
        (b"\x1f\x8b", "a gzip archive"),
        (b"7z\xbc\xaf", "a 7z archive"),
        (b"\x7fELF", "a program"),
        (b"\xd0\xcf\x11\xe0", "an office document or a binary design file"),
    ];
    if bytes.iter().all(u8::is_ascii_whitespace) {
        return Some(Problem::error("the file is empty").help(EXPORT));
    }
    if let Some((_, what)) = MAGIC.iter().find(|(magic, _)| bytes.starts_with(magic)) {
        return Some(looks_like(what));
    }
    if bytes.starts_with(b"\xff\xfe") || bytes.starts_with(b"\xfe\xff") || has_utf16_start(bytes) {
        let problem = Problem::error("the text is UTF-16, not UTF-8").help(format!("save it as UTF-8, or {EXPORT}"));
        return Some(problem.at(&lossy(name, bytes), 0..1, "byte 0"));
    }
    let look = bytes.get(..bytes.len().min(LOOK)).unwrap_or(bytes);
    let begins_as_text = matches!(look.trim_ascii_start().first(), Some(b'(' | b'<' | 0xEF));
    (look.contains(&0) && !begins_as_text).then(|| looks_like("binary data"))
}

/// The bracket or angle bracket that begins a netlist, as UTF-16 without a mark.
fn has_utf16_start(bytes: &[u8]) -> bool {
    matches!(bytes, [b'(' | b'<', 0, ..] | [0, b'(' | b'<', ..])
}

fn lossy(name: &str, bytes: &[u8]) -> Source {
    Source::new(name, String::from_utf8_lossy(bytes).into_owned())
}

/// The text of a file, or where it stops being UTF-8.
pub(super) fn text<'a>(name: &str, bytes: &'a [u8]) -> Result<&'a str, Vec<Problem>> {
    std::str::from_utf8(bytes).map_err(|error| {
        let at = error.valid_up_to();
        // Up to the first bad byte the replaced text is the same as the file.
        let problem = Problem::error(format!("the text is not UTF-8 at byte {at}"))
            .at(&lossy(name, bytes), at..at + '\u{fffd}'.len_utf8(), "this byte begins no character")
            .help(format!("save it as UTF-8, or {EXPORT}"));
        vec![problem]
    })
}

/// What a text is, if it is no netlist.
pub(super) fn not_a_netlist(source: &Source) -> Option<Problem> {
    let text = source.text().trim_start_matches('\u{feff}');
    let start = source.text().len() - text.trim_start().len();
    let text = text.trim_start();
    let what = if text.starts_with('(') {
        lists(text)?
    } else if text.starts_with('<') {
        markup(text)?
    } else {
        plain(text)
    };
    let end =
        start + text.lines().next().map_or(0, |line| line.trim_end().chars().take(60).map(char::len_utf8).sum());
    Some(looks_like(&what).at(source, Span::new(start, end), "its first line"))
}

fn looks_like(what: &str) -> Problem {
    Problem::error(format!("this is {what}, not a netlist export")).help(EXPORT)
}

/// What a bracketed text is; none for an export.
fn lists(text: &str) -> Option<String> {
    let rest = text.get(1..).unwrap_or("").trim_start();
    let head: String =
        rest.chars().take_while(|character| !character.is_whitespace() && !"()\"".contains(*character)).collect();
    Some(match head.as_str() {
        "export" => return None,
        "kicad_pcb" => "a board layout".into(),
        "kicad_sch" => "a schematic".into(),
        "kicad_symbol_lib" => "a symbol library".into(),
        "footprint" | "module" => "a footprint".into(),
        "kicad_wks" => "a drawing sheet".into(),
        _ if rest.starts_with('{') || rest.starts_with('(') => "an old netlist of another format".into(),
        _ => "a bracketed text of another kind".into(),
    })
}

/// What a text in angle brackets is; none for an export.
fn markup(text: &str) -> Option<String> {
    let root = root_name(text);
    let lower = root.to_ascii_lowercase();
    match lower.as_str() {
        "export" => None,
        "html" | "head" | "body" | "!doctype html" => Some("an HTML page".into()),
        "svg" => Some("an SVG drawing".into()),
        "eagle" => Some("a design file of another editor".into()),
        // The reader refuses a document type by itself, with its place.
        _ if lower.starts_with('!') => None,
        _ => Some("XML of another kind".into()),
    }
}

/// The name of the first element, or `!doctype NAME` for a document type of that name.
fn root_name(text: &str) -> String {
    let mut rest = text;
    loop {
        rest = rest.trim_start();
        let skipped = match rest {
            _ if rest.starts_with("<?") => rest.find("?>").and_then(|at| rest.get(at + 2..)),
            _ if rest.starts_with("<!--") => rest.find("-->").and_then(|at| rest.get(at + 3..)),
            _ => None,
        };
        match skipped {
            Some(behind) => rest = behind,
            None => break,
        }
    }
    let rest = rest.strip_prefix('<').unwrap_or("");
    if rest.get(..8).is_some_and(|word| word.eq_ignore_ascii_case("!doctype")) {
        let html = rest
            .get(8..)
            .is_some_and(|name| name.trim_start().get(..4).is_some_and(|word| word.eq_ignore_ascii_case("html")));
        return if html { "!doctype html".into() } else { "!doctype".into() };
    }
    rest.chars()
        .take_while(|character| character.is_alphanumeric() || "_:-.!".contains(*character))
        .take(40)
        .collect()
}

/// What any other text is.
fn plain(text: &str) -> String {
    const STARTS: [(&str, &str); 7] = [
        ("# EESchema Netlist Version", "a netlist of a much older format"),
        ("EESchema Schematic File", "a schematic of an older format"),
        ("EESchema-LIBRARY", "a symbol library of an older format"),
        ("PCBNEW-BOARD", "a board layout of an older format"),
        ("{", "JSON"),
        ("[", "JSON or a settings file"),
        ("*PADS", "a netlist of another format"),
    ];
    if let Some((_, what)) = STARTS.iter().find(|(start, _)| text.starts_with(start)) {
        return (*what).into();
    }
    if is_spice(text) { "a SPICE deck".into() } else { "text of another kind".into() }
}

/// A deck begins with a comment, or has a command that only decks have.
fn is_spice(text: &str) -> bool {
    const COMMANDS: [&str; 9] =
        [".title", ".subckt", ".model", ".include", ".lib", ".tran", ".op", ".end", ".control"];
    text.starts_with('*')
        || text.lines().take(2_000).any(|line| {
            let word = line.split_ascii_whitespace().next().unwrap_or("");
            COMMANDS.iter().any(|command| word.eq_ignore_ascii_case(command))
        })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn an_export_is_told_by_its_first_bytes() {
        let exports: [&[u8]; 5] = [
            b"(export (version D)",
            b"\xef\xbb\xbf\r\n( export\n",
            b"(export (components (comp (value \"4\xc2",
            b"<?xml version=\"1.0\" encoding=\"utf-8\"?>\n<!-- x -->\n<export version=\"E\">",
            b"(export (nets (net (name \"\xff\"",
        ];
        for bytes in exports {
            assert!(begins_export(bytes), "{}", String::from_utf8_lossy(bytes));
        }
        let others: [&[u8]; 8] = [
            b"",
            b"* a deck\n.end\n",
            b"(exported)",
            b"(kicad_pcb (version 1))",
            b"<?xml version=\"1.0\"?><project/>",
            b"<!DOCTYPE export [<!ENTITY a \"b\">]><export/>",
            b"\xff\xfe(\0e\0",
            b"\x89PNG(export",
        ];
        for bytes in others {
            assert!(!begins_export(bytes), "{}", String::from_utf8_lossy(bytes));
        }
    }
}
