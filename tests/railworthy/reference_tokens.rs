//! A second reading of netlist texts, written without a look at the first: characters, one list of tokens.

/// A bracket or a text.
#[derive(Debug, Clone, PartialEq, Eq)]
pub(crate) enum Token {
    Open(usize),
    Close,
    Text(String),
}

/// All tokens of an S-expression text.
pub(crate) fn tokens(text: &str) -> Vec<Token> {
    let mut all = Vec::new();
    let mut characters = text.trim_start_matches('\u{feff}').char_indices().peekable();
    let mark = text.len() - text.trim_start_matches('\u{feff}').len();
    while let Some((at, character)) = characters.next() {
        match character {
            ' ' | '\t' | '\r' | '\n' => {}
            '(' => all.push(Token::Open(at + mark)),
            ')' => all.push(Token::Close),
            '"' => {
                let mut atom = String::new();
                while let Some((_, inside)) = characters.next() {
                    match inside {
                        '"' => break,
                        '\\' => match characters.next().unwrap().1 {
                            'n' => atom.push('\n'),
                            'r' => atom.push('\r'),
                            escaped @ ('"' | '\\') => atom.push(escaped),
                            other => atom.extend(['\\', other]),
                        },
                        plain => atom.push(plain),
                    }
                }
                all.push(Token::Text(atom));
            }
            first => {
                let mut atom = String::from(first);
                while let Some((_, next)) = characters.next_if(|(_, next)| !" \t\r\n()".contains(*next)) {
                    atom.push(next);
                }
                all.push(Token::Text(atom));
            }
        }
    }
    all
}

/// The tokens of each list with one of these heads that stands `depth` lists deep, with the offset of its bracket.
pub(crate) fn lists_at(tokens: &[Token], wanted: &[(usize, &str)]) -> Vec<(usize, Vec<Token>)> {
    let (mut found, mut depth, mut at) = (Vec::new(), 0, 0);
    while at < tokens.len() {
        match &tokens[at] {
            Token::Open(offset) => {
                let head = match tokens.get(at + 1) {
                    Some(Token::Text(head)) => head.as_str(),
                    _ => "",
                };
                if wanted.contains(&(depth, head)) {
                    let length = length_of_list(&tokens[at..]);
                    found.push((*offset, tokens[at..at + length].to_vec()));
                    at += length;
                    continue;
                }
                depth += 1;
            }
            Token::Close => depth -= 1,
            Token::Text(_) => {}
        }
        at += 1;
    }
    found
}

fn length_of_list(tokens: &[Token]) -> usize {
    let mut depth = 0;
    for (at, token) in tokens.iter().enumerate() {
        match token {
            Token::Open(_) => depth += 1,
            Token::Close => depth -= 1,
            Token::Text(_) => {}
        }
        if depth == 0 {
            return at + 1;
        }
    }
    panic!("a list is not closed");
}
