//! Reads an expression into its tree. Brackets nest to a fixed depth, so hostile text cannot exhaust the stack.

use super::lexer::{KEYWORDS, Token, tokens};
use super::refusal::Refusal;
use super::syntax::{Each, Function, Node, NodeKind, Operator, Sentence};
use crate::source::Span;
use crate::source::toml::nearest;

/// The deepest that an expression may nest.
pub const MAX_DEPTH: usize = 64;

/// Reads a condition, with or without `for each … in …:` before it.
///
/// # Errors
/// The first thing in the text that the language does not allow.
pub fn sentence(text: &str) -> Result<Sentence, Refusal> {
    let mut parser = Parser::new(text)?;
    let each = parser.each()?;
    let body = parser.node(0)?;
    parser.finish()?;
    Ok(Sentence { each, body })
}

/// Reads a condition or a figure without a loop.
///
/// # Errors
/// The first thing in the text that the language does not allow.
pub fn expression(text: &str) -> Result<Node, Refusal> {
    let mut parser = Parser::new(text)?;
    let node = parser.node(0)?;
    parser.finish()?;
    Ok(node)
}

/// A node above others that nest `below` deep.
fn made(kind: NodeKind, span: Span, below: usize) -> Result<Node, Refusal> {
    if below >= MAX_DEPTH {
        return Err(Refusal::new(span, format!("the expression nests deeper than {MAX_DEPTH}"), "too deep"));
    }
    Ok(Node { kind, span, depth: below + 1 })
}

struct Parser {
    tokens: Vec<(Token, Span)>,
    at: usize,
    end: Span,
    nesting: usize,
}

/// How tightly a comparison binds: above `and` and `or`, below sums.
const COMPARISON: u8 = 4;
/// How tightly `not` binds: above `and`, below comparisons.
const NOT: u8 = 3;
/// How tightly a sign before a figure binds.
const SIGN: u8 = 7;

fn operator(token: &Token) -> Option<(Operator, u8)> {
    let entry = match token {
        Token::Word(word) if word == "or" => (Operator::Or, 1),
        Token::Word(word) if word == "and" => (Operator::And, 2),
        Token::Sign("<") => (Operator::Below, COMPARISON),
        Token::Sign("<=") => (Operator::AtMost, COMPARISON),
        Token::Sign(">") => (Operator::Above, COMPARISON),
        Token::Sign(">=") => (Operator::AtLeast, COMPARISON),
        Token::Sign("==") => (Operator::Equal, COMPARISON),
        Token::Sign("!=") => (Operator::Unequal, COMPARISON),
        Token::Sign("+") => (Operator::Plus, 5),
        Token::Sign("-") => (Operator::Minus, 5),
        Token::Sign("*") => (Operator::Times, 6),
        Token::Sign("/") => (Operator::Over, 6),
        _ => return None,
    };
    Some(entry)
}

impl Parser {
    fn new(text: &str) -> Result<Self, Refusal> {
        let end = Span::new(text.trim_end().len(), text.trim_end().len());
        Ok(Self { tokens: tokens(text)?, at: 0, end, nesting: 0 })
    }

    fn peek(&self) -> Option<&Token> {
        self.tokens.get(self.at).map(|(token, _)| token)
    }

    fn span(&self) -> Span {
        self.tokens.get(self.at).map_or(self.end, |(_, span)| *span)
    }

    fn is_word(&self, word: &str) -> bool {
        matches!(self.peek(), Some(Token::Word(found)) if found == word)
    }

    fn take_word(&mut self, word: &str) -> bool {
        let found = self.is_word(word);
        self.at += usize::from(found);
        found
    }

    fn take_sign(&mut self, sign: &str) -> bool {
        let found = matches!(self.peek(), Some(Token::Sign(found)) if *found == sign);
        self.at += usize::from(found);
        found
    }

    fn expect_sign(&mut self, sign: &str, after: &str) -> Result<Span, Refusal> {
        let span = self.span();
        if self.take_sign(sign) { Ok(span) } else { Err(self.wrong(&format!("`{sign}` {after}"))) }
    }

    fn expect_word(&mut self, word: &str, after: &str) -> Result<Span, Refusal> {
        let span = self.span();
        if self.take_word(word) { Ok(span) } else { Err(self.wrong(&format!("`{word}` {after}"))) }
    }

    /// What stands here is not what is wanted.
    fn wrong(&self, wanted: &str) -> Refusal {
        match self.peek() {
            None => Refusal::new(self.span(), format!("the expression ends where {wanted} is missing"), "ends here"),
            Some(Token::Sign("=")) => Refusal::new(self.span(), "`=` is no comparison", "here")
                .help("write `==` for words, `>=` or `<=` for figures"),
            Some(Token::Sign("±")) => Refusal::new(self.span(), "`±` has no place in an expression", "here")
                .help("write the two ends: `x within a .. b`"),
            Some(token) => {
                let shown = match token {
                    Token::Number(text) | Token::Word(text) | Token::Quoted(text) => text.as_str(),
                    Token::Sign(sign) => sign,
                };
                Refusal::new(self.span(), format!("`{shown}` stands where {wanted} is missing"), "unexpected")
            }
        }
    }

    fn finish(&self) -> Result<(), Refusal> {
        let Some(token) = self.peek() else { return Ok(()) };
        if let Token::Word(word) = token {
            let joins = ["and", "or", "within", "is", "in"];
            if let Some(near) = nearest(word, joins).filter(|near| near != word) {
                return Err(self.wrong("an operator").help(format!("`{near}`?")));
            }
        }
        Err(self.wrong("an operator"))
    }

    fn each(&mut self) -> Result<Option<Each>, Refusal> {
        if !self.take_word("for") {
            return Ok(None);
        }
        self.expect_word("each", "after `for`")?;
        let (variable, variable_span) = self.name("a name after `for each`")?;
        self.expect_word("in", "after the name")?;
        let (group, group_span) = self.name("the name of a group after `in`")?;
        self.expect_sign(":", "after the group")?;
        Ok(Some(Each { variable, variable_span, group, group_span }))
    }

    fn name(&mut self, wanted: &str) -> Result<(String, Span), Refusal> {
        let span = self.span();
        match self.peek() {
            Some(Token::Word(word)) if !KEYWORDS.contains(&word.as_str()) => {
                let word = word.clone();
                self.at += 1;
                Ok((word, span))
            }
            _ => Err(self.wrong(wanted)),
        }
    }

    /// An expression whose operators bind at least as tightly as `least`.
    fn node(&mut self, least: u8) -> Result<Node, Refusal> {
        self.nesting += 1;
        if self.nesting > MAX_DEPTH {
            return Err(Refusal::new(
                self.span(),
                format!("the expression nests deeper than {MAX_DEPTH}"),
                "too deep",
            ));
        }
        let mut left = self.prefix()?;
        loop {
            left = if let Some((operator, binding)) = self.peek().and_then(operator).filter(|(_, b)| *b >= least) {
                self.at += 1;
                let right = self.node(binding + 1)?;
                self.chain(operator, &right)?;
                let span = Span::new(left.span.start(), right.span.end());
                let below = left.depth.max(right.depth);
                made(NodeKind::Binary(operator, Box::new(left), Box::new(right)), span, below)?
            } else if COMPARISON >= least && ["within", "is", "in"].iter().any(|word| self.is_word(word)) {
                self.suffix(left)?
            } else {
                break;
            };
        }
        self.nesting -= 1;
        Ok(left)
    }

    /// `a < b < c` reads as one thing to people and as another to most languages: it is refused.
    fn chain(&self, operator: Operator, right: &Node) -> Result<(), Refusal> {
        use Operator::{Above, AtLeast, AtMost, Below};
        let orders = [Below, AtMost, Above, AtLeast];
        let next = self.peek().and_then(self::operator).map(|(operator, _)| operator);
        if orders.contains(&operator) && next.is_some_and(|next| orders.contains(&next)) {
            let span = Span::new(right.span.start(), self.span().end());
            return Err(Refusal::new(span, "comparisons cannot be chained", "second comparison")
                .help("write `x within a .. b`, or join two comparisons by `and`"));
        }
        Ok(())
    }

    fn suffix(&mut self, left: Node) -> Result<Node, Refusal> {
        let start = left.span.start();
        if self.take_word("within") {
            let low = self.node(COMPARISON + 1)?;
            self.expect_sign("..", "between the two ends")?;
            let high = self.node(COMPARISON + 1)?;
            let span = Span::new(start, high.span.end());
            let below = left.depth.max(low.depth).max(high.depth);
            return made(NodeKind::Within(Box::new(left), Box::new(low), Box::new(high)), span, below);
        }
        let below = left.depth;
        if self.take_word("is") {
            let negated = self.take_word("not");
            let end = self.expect_word("known", "after `is`")?.end();
            let span = Span::new(start, end);
            let known = made(NodeKind::Known(Box::new(left)), span, below)?;
            return if negated { made(NodeKind::Not(Box::new(known)), span, below + 1) } else { Ok(known) };
        }
        self.expect_word("in", "before a set")?;
        self.expect_sign("{", "at the start of a set")?;
        let mut set = Vec::new();
        loop {
            let span = self.span();
            if let Some(Token::Quoted(text)) = self.peek() {
                set.push((text.clone(), span));
                self.at += 1;
            } else {
                set.push(self.name("a word of the set")?);
            }
            let end = self.span().end();
            if self.take_sign("}") {
                return made(NodeKind::In(Box::new(left), set), Span::new(start, end), below);
            }
            self.expect_sign(",", "between the words of a set")?;
        }
    }

    fn prefix(&mut self) -> Result<Node, Refusal> {
        let span = self.span();
        let Some(token) = self.peek().cloned() else { return Err(self.wrong("a figure or condition")) };
        match token {
            Token::Number(text) => {
                self.at += 1;
                made(NodeKind::Number(text), span, 0)
            }
            Token::Quoted(text) => {
                self.at += 1;
                made(NodeKind::Quoted(text), span, 0)
            }
            Token::Sign("(") => self.bracket(),
            Token::Sign("-") => {
                self.at += 1;
                let inner = self.node(SIGN)?;
                let (whole, below) = (Span::new(span.start(), inner.span.end()), inner.depth);
                made(NodeKind::Negated(Box::new(inner)), whole, below)
            }
            Token::Word(word) if word == "not" => {
                self.at += 1;
                let inner = self.node(NOT)?;
                let (whole, below) = (Span::new(span.start(), inner.span.end()), inner.depth);
                made(NodeKind::Not(Box::new(inner)), whole, below)
            }
            Token::Word(word) if word == "for" => Err(Refusal::new(
                span,
                "`for each` stands only at the start of a requirement and only once",
                "second loop",
            )),
            Token::Word(_) => {
                let (name, span) = self.name("a figure or condition")?;
                if matches!(self.peek(), Some(Token::Sign("("))) {
                    return self.call(&name, span);
                }
                made(NodeKind::Name(name), span, 0)
            }
            Token::Sign(_) => Err(self.wrong("a figure or condition")),
        }
    }

    fn bracket(&mut self) -> Result<Node, Refusal> {
        let start = self.span().start();
        self.at += 1;
        let mut inner = self.node(0)?;
        let end = self.expect_sign(")", "to close the bracket")?.end();
        inner.span = Span::new(start, end);
        Ok(inner)
    }

    fn call(&mut self, name: &str, span: Span) -> Result<Node, Refusal> {
        let function = match name {
            "min" => Function::Min,
            "max" => Function::Max,
            "abs" => Function::Abs,
            _ => {
                return Err(Refusal::new(span, format!("there is no function `{name}`"), "unknown function")
                    .help("the functions are `min`, `max` and `abs`"));
            }
        };
        self.at += 1;
        let mut arguments = vec![self.node(0)?];
        while self.take_sign(",") {
            arguments.push(self.node(0)?);
        }
        let end = self.expect_sign(")", "after the arguments")?.end();
        let span = Span::new(span.start(), end);
        if function == Function::Abs && arguments.len() != 1 {
            return Err(Refusal::new(span, "`abs` takes one figure", "more than one"));
        }
        let below = arguments.iter().map(|node| node.depth).max().unwrap_or(0);
        made(NodeKind::Call(function, arguments), span, below)
    }
}
