//! Cutting a value text into words.

/// What stands in place of a character that some program before could not read: of the prefixes, only a micro sign.
pub(super) const LOST: char = '\u{fffd}';

/// The words of a value text, with one spelling for each sign, numbers joined with units that stand apart, and decimal
/// commas as points.
pub(super) fn words(text: &str) -> Vec<String> {
    let plain = text
        .replace("+/-", "±")
        .replace("+-", "±")
        .replace("Âµ", "µ")
        .replace(['\u{3bc}', LOST], "µ")
        .replace('\u{2126}', "Ω");
    joined(&cut(&plain))
}

/// Cuts at blanks and marks; blanks are remembered, since only they may lie between a number and its unit.
fn cut(text: &str) -> Vec<(String, bool)> {
    let letters: Vec<char> = text.chars().collect();
    let mut words: Vec<(String, bool)> = Vec::new();
    let mut word = String::new();
    let mut after_blank = true;
    for (at, letter) in letters.iter().copied().enumerate() {
        let before = at.checked_sub(1).and_then(|at| letters.get(at)).copied();
        let behind = letters.get(at + 1).copied();
        let comma = (letter == ',').then(|| comma(&letters, at)).flatten();
        if let Some(written) = comma {
            word.push(written);
        } else if is_cut(letter, before, behind) {
            if !word.is_empty() {
                words.push((std::mem::take(&mut word), after_blank));
                after_blank = true;
            }
            after_blank &= letter.is_whitespace();
        } else {
            word.push(letter);
        }
    }
    if !word.is_empty() {
        words.push((word, after_blank));
    }
    words
}

fn is_cut(letter: char, before: Option<char>, behind: Option<char>) -> bool {
    let digit = |letter: Option<char>| letter.is_some_and(|letter| letter.is_ascii_digit());
    match letter {
        '/' | ',' | '_' | '(' | ')' | '[' | ']' | ';' | '|' | '@' | '"' | '\'' => true,
        // `22uF-16V` is two words, `12-22pF` a range.
        '-' => !(digit(before) && digit(behind)),
        letter => letter.is_whitespace(),
    }
}

/// What a comma inside a number is: a decimal point, or, where it may part thousands, itself, so that the number cannot
/// be read as something that it is not. `None` for one that parts words.
fn comma(letters: &[char], at: usize) -> Option<char> {
    let count = |run: &mut dyn Iterator<Item = &char>| run.take_while(|letter| letter.is_ascii_digit()).count();
    let before = count(&mut letters.get(..at).unwrap_or_default().iter().rev());
    let behind = count(&mut letters.get(at + 1..).unwrap_or_default().iter());
    let preceding = at.checked_sub(before + 1).and_then(|at| letters.get(at));
    let following = letters.get(at + 1 + behind);
    let whole = preceding.is_none_or(|letter| !letter.is_alphanumeric());
    // `10,16V`: the second number has a unit of its own kind.
    let rating = following.is_some_and(|letter| matches!(letter, 'V' | 'v'));
    if behind == 0 || !whole || rating {
        return None;
    }
    let of_thousands = behind == 3 && before > 0 && letters.get(at - before) != Some(&'0');
    Some(if of_thousands || following == Some(&',') { ',' } else { '.' })
}

/// Joins a bare number with a unit that stands behind blanks: `100 nF`, `50 V`, `1 %`, `10 k`.
fn joined(words: &[(String, bool)]) -> Vec<String> {
    let mut joined: Vec<String> = Vec::new();
    for (word, after_blank) in words {
        match joined.last_mut() {
            Some(last) if *after_blank && is_number(last) && is_unit(word) => last.push_str(word),
            _ => joined.push(word.clone()),
        }
    }
    joined
}

fn is_number(word: &str) -> bool {
    let digits = word.trim_start_matches(['±', '>', '<', '~', '≥', '≤', '+']);
    digits.bytes().any(|byte| byte.is_ascii_digit())
        && digits.bytes().all(|byte| byte.is_ascii_digit() || byte == b'.')
}

fn is_unit(word: &str) -> bool {
    const UNITS: &[&str] = &["", "f", "farad", "h", "henry", "ohm", "ohms", "ω", "r", "v", "vdc", "vac", "%", "fd"];
    const WHOLE: &[&str] = &["%", "V", "v", "R", "F", "H", "mfd", "MFD"];
    let prefixed = ["p", "n", "u", "µ", "m", "k", "K", "M", "P", "N", "U", "Meg", "meg", "G"];
    let lower = |unit: &str| UNITS.contains(&unit.to_lowercase().as_str());
    WHOLE.contains(&word) || lower(word) || prefixed.iter().any(|prefix| word.strip_prefix(prefix).is_some_and(lower))
}

/// The word with letters `O` that stand beside digits as zeros; `None` where there is none.
pub(super) fn with_zeros(word: &str) -> Option<String> {
    let letters: Vec<char> = word.chars().collect();
    let near = |at: usize| {
        letters.get(at).is_some_and(|letter| letter.is_ascii_digit() || matches!(letter, '.' | 'O' | 'o'))
    };
    let mut changed = false;
    let mut zeros = String::with_capacity(word.len());
    for (at, letter) in letters.iter().enumerate() {
        let is_ohm = letters.get(at + 1).is_some_and(|next| matches!(next, 'h' | 'H'));
        let beside = near(at + 1) || at.checked_sub(1).is_some_and(near);
        if matches!(letter, 'O' | 'o') && beside && !is_ohm {
            zeros.push('0');
            changed = true;
        } else {
            zeros.push(*letter);
        }
    }
    changed.then_some(zeros)
}
