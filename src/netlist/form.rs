//! Taking parsed lists apart.

use sexp::{Atom, Sexp};

/// The text of an atom; none for a list.
#[inline]
pub(super) fn text(item: Sexp) -> Option<String> {
    match item {
        Sexp::Atom(Atom::S(text)) => Some(text),
        // Every atom is handed over quoted, so these do not occur.
        Sexp::Atom(Atom::I(number)) => Some(number.to_string()),
        Sexp::Atom(Atom::F(number)) => Some(number.to_string()),
        Sexp::List(_) => None,
    }
}

/// A list with its head taken off.
pub(super) struct Form {
    pub(super) head: String,
    pub(super) rest: std::vec::IntoIter<Sexp>,
}

impl Form {
    /// The list as a form; none for an atom, for an empty list and for a list that begins with a list.
    #[inline]
    pub(super) fn of(item: Sexp) -> Option<Self> {
        let Sexp::List(items) = item else { return None };
        let mut rest = items.into_iter();
        let head = text(rest.next()?)?;
        Some(Self { head, rest })
    }

    /// The one text behind the head, empty where there is none; an error for a list or a second text.
    #[inline]
    pub(super) fn value(mut self) -> Result<String, Misshapen> {
        let Some(first) = self.rest.next() else { return Ok(String::new()) };
        if self.rest.next().is_some() {
            return Err(Misshapen(self.head));
        }
        text(first).ok_or(Misshapen(self.head))
    }

    /// All texts behind the head, each cut at blanks.
    pub(super) fn words_into(self, words: &mut Vec<String>) {
        for item in self.rest.filter_map(text) {
            if item.is_empty() || item.contains(|each: char| each.is_ascii_whitespace()) {
                words.extend(item.split_ascii_whitespace().map(str::to_owned));
            } else {
                words.push(item);
            }
        }
    }

    /// The lists behind the head.
    #[inline]
    pub(super) fn lists(self) -> impl Iterator<Item = Form> {
        self.rest.filter_map(Form::of)
    }

    /// The name, and the text that stands either beside it or in a `value`, of a field, property or the like.
    pub(super) fn field(self) -> Result<(String, String), Misshapen> {
        let (mut name, mut value) = (None, String::new());
        let head = self.head;
        for item in self.rest {
            match item {
                Sexp::Atom(_) => value = text(item).unwrap_or_default(),
                Sexp::List(_) => match Form::of(item) {
                    Some(form) if form.head == "name" => name = Some(form.value()?),
                    Some(form) if form.head == "value" => value = form.value()?,
                    _ => {}
                },
            }
        }
        name.map(|name| (name, value)).ok_or(Misshapen(head))
    }
}

/// A list that does not hold what its head promises; the head.
#[derive(Debug)]
pub(super) struct Misshapen(pub(super) String);
