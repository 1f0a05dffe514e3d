//! Single texts of an S-expression, rewritten for the parser.

/// Whether a byte ends a bare atom. Blanks beyond these four are part of an atom.
pub(super) fn separates(byte: u8) -> bool {
    matches!(byte, b' ' | b'\t' | b'\r' | b'\n' | b'(' | b')')
}

/// Copies a quoted atom with `\n` and `\r` resolved; the parser resolves `\\` and `\"`, and any other backslash
/// stands for itself.
pub(super) fn resolve_line_ends(atom: &str, into: &mut String) {
    let mut characters = atom.chars();
    while let Some(character) = characters.next() {
        if character != '\\' {
            into.push(character);
            continue;
        }
        match characters.next() {
            Some('n') => into.push('\n'),
            Some('r') => into.push('\r'),
            Some(other) => {
                into.push('\\');
                into.push(other);
            }
            None => into.push('\\'),
        }
    }
}

/// Copies a bare atom in quotes, so that the parser takes it for neither a number nor a comment. `plain`: it holds
/// nothing that would have to be escaped.
pub(super) fn quote(atom: &str, plain: bool, into: &mut String) {
    into.reserve(atom.len() + 2);
    into.push('"');
    if plain {
        into.push_str(atom);
    } else {
        for character in atom.chars() {
            if matches!(character, '"' | '\\') {
                into.push('\\');
            }
            into.push(character);
        }
    }
    into.push('"');
}
