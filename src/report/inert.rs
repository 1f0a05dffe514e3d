//! Texts from files, made harmless for terminals and for the machines that read logs.

use std::borrow::Cow;

/// What a run's log takes for a command wherever it stands in a line, in any case.
const COMMANDS: [&str; 3] = ["##[", "##vso[", "##teamcity["];

/// A text on one line that acts on nothing: every control character, and every character that is invisible or turns
/// the direction of reading, is shown as `\u{1b}`.
#[must_use]
pub fn inert(text: &str) -> Cow<'_, str> {
    if !text.contains(acts) {
        return Cow::Borrowed(text);
    }
    let mut shown = String::with_capacity(text.len() + 16);
    for sign in text.chars() {
        if acts(sign) {
            shown.extend(sign.escape_unicode());
        } else {
            shown.push(sign);
        }
    }
    Cow::Owned(shown)
}

/// A text as [`inert`] shows it, cut to `most` characters with `…` in place of the rest.
#[must_use]
pub fn inert_short(text: &str, most: usize) -> String {
    match text.char_indices().nth(most) {
        None => inert(text).into_owned(),
        Some(_) => {
            let kept: String = text.chars().take(most.saturating_sub(1)).collect();
            format!("{}…", inert(&kept))
        }
    }
}

/// One visible character in place of one that acts, so that columns stay where they are; a tab becomes a blank.
#[must_use]
pub(super) fn visible(sign: char) -> char {
    match sign {
        '\t' => ' ',
        '\u{0}'..='\u{1f}' => char::from_u32(0x2400 + u32::from(sign)).unwrap_or('\u{fffd}'),
        '\u{7f}' => '\u{2421}',
        _ if acts(sign) => '\u{fffd}',
        _ => sign,
    }
}

/// Whether a character acts on what shows it, or is not seen: controls, direction marks, invisible signs, line and
/// paragraph separators, characters that are none.
#[must_use]
pub fn acts(sign: char) -> bool {
    sign.is_control()
        || matches!(u32::from(sign),
            0xAD | 0x34F | 0x61C | 0x115F | 0x1160 | 0x17B4 | 0x17B5 | 0x180B..=0x180F
            | 0x200B..=0x200F | 0x2028..=0x202E | 0x2060..=0x206F
            | 0x3164 | 0xFE00..=0xFE0F | 0xFEFF | 0xFFA0 | 0xFFF0..=0xFFFB
            | 0xE000..=0xF8FF | 0xE0000..=0xE0FFF | 0x1D173..=0x1D17A)
        || u32::from(sign) & 0xFFFE == 0xFFFE
}

/// The last pass over a whole report: no line begins (after blanks and colours) with `::`, and nothing in it reads as a
/// command of a log. What stands for the broken signs is their escape, so that nothing is hidden.
#[must_use]
pub fn guarded(text: &str) -> String {
    let mut out = String::with_capacity(text.len());
    for line in text.split_inclusive('\n') {
        let start = begin(line);
        let (head, mut rest) = line.split_at(start);
        out.push_str(head);
        if let Some(behind) = rest.strip_prefix("::") {
            out.push_str("\\u{3a}:");
            rest = behind;
        }
        while let Some(at) = rest.find("##") {
            let (before, from) = rest.split_at(at);
            out.push_str(before);
            let is_command = COMMANDS
                .iter()
                .any(|command| from.get(..command.len()).is_some_and(|start| start.eq_ignore_ascii_case(command)));
            out.push_str(if is_command { "\\u{23}" } else { "#" });
            rest = from.get(1..).unwrap_or("");
        }
        out.push_str(rest);
    }
    out
}

/// Where a line begins behind blanks and colour sequences.
fn begin(line: &str) -> usize {
    let bytes = line.as_bytes();
    let mut at = 0;
    loop {
        match bytes.get(at) {
            Some(b' ' | b'\t' | b'\r' | 0x0b | 0x0c) => at += 1,
            Some(0x1b) if bytes.get(at + 1) == Some(&b'[') => {
                let end = line.get(at..).and_then(|rest| rest.find('m'));
                match end {
                    Some(length) => at += length + 1,
                    None => return at,
                }
            }
            _ => break,
        }
    }
    // Blanks beyond ASCII count too; nothing else of more than one byte is stepped over.
    let rest = line.get(at..).unwrap_or("");
    at + (rest.len() - rest.trim_start_matches(|sign: char| sign.is_whitespace() && sign != '\n').len())
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    #[test]
    fn terminal_sequences_are_shown_and_not_sent() {
        assert_eq!(
            inert("\x1b[2J\x1b[1;1HAll checks passed\x1b]0;owned\x07"),
            "\\u{1b}[2J\\u{1b}[1;1HAll checks passed\\u{1b}]0;owned\\u{7}"
        );
        assert_eq!(
            inert("\x1b]8;;https://e.example/\x1b\\GND\x1b]8;;\x1b\\"),
            "\\u{1b}]8;;https://e.example/\\u{1b}\\GND\\u{1b}]8;;\\u{1b}\\"
        );
    }

    #[test]
    fn controls_directions_and_invisible_signs_are_escaped() {
        assert_eq!(inert("\u{9b}31mX"), "\\u{9b}31mX");
        assert_eq!(inert("GND\u{202e}DNG\u{2066}"), "GND\\u{202e}DNG\\u{2066}");
        assert_eq!(inert("A\u{200b}B"), "A\\u{200b}B");
        assert_eq!(inert("\u{2028}line\u{fffe}\u{ffff}\u{7f}"), "\\u{2028}line\\u{fffe}\\u{ffff}\\u{7f}");
        assert_eq!(inert("a\nb.net:3:4: error: forged"), "a\\u{a}b.net:3:4: error: forged");
    }

    #[test]
    fn names_of_the_trade_stay_as_they_are() {
        for name in ["+3V3", "/Power/~{EN}", "4k7 ±1 %", "10 µF", "0,5 Ω", "é", "日本", "😀"] {
            assert!(matches!(inert(name), Cow::Borrowed(same) if same == name));
        }
    }

    #[test]
    fn a_line_does_not_begin_with_a_workflow_command() {
        for hostile in ["::error file=a::x\n", "  ::group::x", "\x1b[1m::add-mask::a", "\u{2003}::stop-commands::t"] {
            let text = guarded(&format!("first\n{hostile}"));
            assert!(text.contains("\\u{3a}:"), "{text}");
        }
        assert_eq!(guarded("C::x\n"), "C::x\n");
    }

    #[test]
    fn nothing_reads_as_a_command_anywhere_in_a_line() {
        for hostile in ["GND ##[error]forged", "###[error]", "a ##VSO[task.setvariable variable=A]b", "##teamcity[x]"]
        {
            let text = guarded(hostile);
            assert!(COMMANDS.iter().all(|command| !text.to_lowercase().contains(command)), "{text}");
        }
        assert_eq!(guarded("a ## b #[c]"), "a ## b #[c]");
    }

    #[test]
    fn a_visible_sign_stands_for_each_that_acts() {
        let shown: String = "a\x1b\t\u{7f}\u{9b}\u{202e}z".chars().map(visible).collect();
        assert_eq!(shown, "a␛ ␡\u{fffd}\u{fffd}z");
    }

    #[test]
    fn a_long_name_is_cut_before_it_is_escaped() {
        assert_eq!(inert_short("abcdef", 6), "abcdef");
        assert_eq!(inert_short("abc\x1bdef", 5), "abc\\u{1b}…");
    }

    proptest! {
        #[test]
        fn whatever_is_read_comes_out_inert(text in "\\PC*|.*") {
            let shown = inert(&text);
            prop_assert!(!shown.contains(acts));
            prop_assert!(!shown.contains('\n'));
        }

        #[test]
        fn a_guarded_text_holds_no_command(text in "[ #:a\\[\\nvsoteamciy]{0,60}") {
            let text = guarded(&text).to_lowercase();
            prop_assert!(text.lines().all(|line| !line.trim_start().starts_with("::")));
            prop_assert!(COMMANDS.iter().all(|command| !text.contains(command)));
        }
    }
}
